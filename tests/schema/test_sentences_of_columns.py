"""What a finding of a whole column says: a shared mistake, conventions taken, points of no motor.

24 V and 1.2 Ω make a stall current of 20 A (Is = U/Ra); 40 A are printed.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.batch import Batch, Heading
from motorfolio.schema.convention import Commutation
from motorfolio.schema.motor import Cell
from motorfolio.schema.reconcile.columns import ColumnFault
from motorfolio.schema.reconcile.explain import Narrator
from motorfolio.schema.reconcile.inference import Inferred
from motorfolio.schema.reconcile.model import INDEX

from .simulated_sheets import sheet as printed

BRUSHED, SINE = Commutation.BRUSHED, Commutation.SINUSOIDAL
SHEET = {"nominal_voltage": 24.0, "terminal_resistance": 1.2, "torque_constant": 0.03,
         "stall_current": 40.0}  # fmt: skip
NO_CAUSE = "None of the usual mistakes explains the ratio."
STALL = "Is = U/Ra: 24.00 V/(1.200 Ω) gives 20 A, printed is 40.00 A"


def sheet(kind: Commutation = BRUSHED, n: int = 1, **figures: float) -> Batch:
    return printed(n, kind, **(figures or SHEET))


# ---- a column


def column(batch: Batch, motors: list[int] | None, key: str = "stall_current", ratio: float = 2.0,
           rivals: tuple[str, ...] = (), causes=("unexplained",)):  # fmt: skip
    fault = ColumnFault(INDEX[key], tuple(INDEX[k] for k in rivals), math.log(ratio), 0.01, 0.02,
                        causes)  # fmt: skip
    which = None if motors is None else np.array(motors)
    return Narrator(batch).column(fault, which, "error")


def test_a_column_that_shares_a_mistake() -> None:
    first, found = column(sheet(n=4), [1, 3])
    assert first == 1
    assert found.message == (
        'Stall current under the heading "stall_current" is 2 times what the other figures imply, '
        "alike for 2 motors: X1 has 40.00 A (row 3, column 4), implied is 20 A "
        f"({STALL}). One mistake in the heading rather than one in every cell. {NO_CAUSE}"
    )
    assert (found.scope, found.part_number, found.part_numbers) == ("column", None, ("X1", "X3"))
    assert found.figures == ("stall_current", "nominal_voltage", "terminal_resistance")
    assert (found.suspect, found.relation) == ("stall_current", "stall-current")
    assert found.implied is not None
    assert (found.implied.value, found.implied.unit) == (pytest.approx(20.0), "A")
    assert found.cell == Cell(row=3, column=4)
    assert found.ratio == pytest.approx(2.0)


def test_a_column_of_all_that_print_the_figure() -> None:
    batch = sheet(n=4)
    batch.figures["stall_current"].value[[0, 2]] = math.nan
    first, found = column(batch, None, causes=("peak-to-peak", "power-of-ten"))
    assert (first, found.part_numbers) == (1, ("X1", "X3"))
    assert (found.cause, found.other_causes) == ("peak-to-peak", ("power-of-ten",))


def test_columns_that_contradict_one_another() -> None:
    _, found = column(sheet(n=3), [0, 1, 2], rivals=("terminal_resistance", "nominal_voltage"))
    assert found.message.endswith(
        "every cell. Nothing else in the table tells which is wrong: stall current, terminal "
        "resistance, nominal voltage. The constants are worked out without stall current. "
        f"{NO_CAUSE}"
    )
    assert found.suspect is None
    assert found.figures == ("stall_current", "terminal_resistance", "nominal_voltage")


def test_a_column_without_a_relation_or_a_heading() -> None:
    batch = sheet(n=3, rotor_inertia=1e-5)
    batch.headings[0] = Heading("", "rotor_inertia", "g·cm²", factor=1e-7)
    _, found = column(batch, [0, 1, 2], "rotor_inertia", 4.0)
    assert found.message == (
        "Rotor inertia is 4 times what the other figures imply, alike for 3 motors: X0 has "
        "100.0 g·cm² (row 2, column 1), implied is 25 g·cm². One mistake in the heading rather "
        f"than one in every cell. {NO_CAUSE}"
    )
    assert (found.figures, found.relation) == (("rotor_inertia",), "mechanical-time-constant")
    batch.headings.clear()
    assert column(batch, [0, 1, 2], "rotor_inertia", 4.0)[1].message.startswith("Rotor inertia is")


# ---- conventions and points


def inferred(motors: int = 3, **more) -> Inferred:
    given = {"words": ("A rms", "V peak"), "rivals": (), "departs": (), "signature": "", **more}
    return Inferred(SINE, ("torque_constant", "back_emf_constant"), against=20.0, motors=motors,
                    entries=np.array([1, 2]), **given)  # fmt: skip


def test_what_conventions_the_figures_show() -> None:
    says = Narrator(sheet(SINE, 3, torque_constant=0.05, back_emf_constant=0.03))
    found = says.inference(inferred(rivals=("A dc", "B"), departs=("A rms", "V"), signature="1.7"))
    assert found.message == (
        "The sheet doesn't state all conventions of its sinusoidal motors; taken as A rms, V peak, "
        "with which the figures of 3 motors agree (1.7). The customary reading would not fit "
        "(A rms, V). Fits as well: A dc; B."
    )
    assert (found.scope, found.severity, found.relation) == ("column", "note", "convention")
    assert (found.part_number, found.part_numbers) == (None, ("X1", "X2"))
    assert found.figures == ("torque_constant", "back_emf_constant")
    assert found.cell == Cell(row=3, column=1)
    assert says.inference(inferred(1)).message.endswith("the figures of 1 motor agree.")


@pytest.mark.parametrize(
    ("departs", "cause"),
    [((), "unexplained"), (("rms amperes",), "unexplained"), (("peak amperes",), "peak-vs-rms"),
     (("rms", "phase volts"), "line-vs-phase"), (("dc amperes",), "sinusoidal-current-convention"),
     (("peak phase",), "line-vs-phase")],
)  # fmt: skip
def test_the_cause_of_a_departing_convention(departs, cause) -> None:
    says = Narrator(sheet(SINE, 3, torque_constant=0.05))
    assert says.inference(inferred(departs=departs)).cause == cause


def test_points_of_no_one_motor() -> None:
    found = Narrator(sheet(n=2)).points(1, 0.9649)
    assert (found.part_number, found.severity, found.relation) == ("X1", "warning",
                                                                   "operating-points")  # fmt: skip
    assert found.message == (
        "The published operating points don't lie on the straight lines of one motor: the worst is "
        "off by 96 %."
    )
