"""What the other windings of a size print, in words; and a run of entries as a table of its own."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.batch import Batch, Point, TextColumn
from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.kin import Kin, told_by_family
from motorfolio.schema.reconcile.model import INDEX
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.portion import portion
from motorfolio.schema.reconcile.suspects import Suspicion

from .simulated_sheets import put, single


def table(values: list[float], key: str = "rotor_inertia", series: str = "A") -> Batch:
    """Inertias in g·cm², one a winding."""
    batch = single(n=len(values))
    batch.series = list(series * len(values) if len(series) == 1 else series)
    for row, value in enumerate(values):
        put(batch, key, row, value * 1e-7)
    return batch


def words(batch: Batch, motor: int = 0, implied: float = 7.2e-7) -> str:
    return Kin(batch).words(motor, "rotor_inertia", implied, 1e-7, "gcm2")


# ---- words


def test_windings_of_one_series_and_kind_are_kin() -> None:
    batch = table([1.0] * 6, series="ABAABA")
    batch.commutation[3] = int(Commutation.BLOCK)
    kin = Kin(batch)
    others = [kin.others(m).tolist() for m in range(6)]
    assert others == [[2, 5], [4], [0, 5], [], [1], [0, 2]]


def test_what_the_others_print_alike() -> None:
    assert words(table([0.72, 7.2, 7.2, 7.2])) == (
        "three other windings of this size print 7.20 gcm2"
    )
    assert words(table([0.72, 7.2])) == "one other winding of this size prints 7.20 gcm2"
    batch = table([0.72, 7.2, 7.2])
    batch.figures["rotor_inertia"].text[1:] = ["7.20 gcm2", " 7.20 gcm2 "]
    assert words(batch) == "two other windings of this size print 7.20 gcm2"


@pytest.mark.parametrize(
    ("n", "said"), [(8, "eight"), (9, "nine"), (10, "ten"), (11, "11"), (14, "14")]
)
def test_up_to_ten_in_words(n: int, said: str) -> None:
    assert words(table([0.72] + [7.2] * n)).startswith(f"{said} other windings ")


def test_what_the_others_print_nearly_alike() -> None:
    """From the least to the greatest, within 5 % of what is implied; others are passed over."""
    batch = table([0.72, 7.1, 7.3, 7.2, 12.0, 7.2 * 1.045, 7.2 * 1.06, 7.2 / 1.06])
    assert words(batch) == "four other windings of this size print 7.1 to 7.52 gcm2"
    batch = table([0.72, 7.1, 7.3])
    batch.figures["rotor_inertia"].value[1:] = [7.1234e-7, 7.3456e-7]
    assert words(batch) == "two other windings of this size print 7.12 to 7.35 gcm2"
    assert words(table([0.72, 7.1, 7.3]), motor=1) == (
        "one other winding of this size prints 7.30 gcm2"
    )


def test_without_a_text_the_value_is_said() -> None:
    batch = table([0.72, 7.2, 7.2])
    batch.figures["rotor_inertia"].text[1:] = [None, ""]
    assert words(batch) == "two other windings of this size print 7.2 gcm2"


def test_what_is_not_printed_alike_is_shared() -> None:
    """Of an inertia nobody prints near, or a figure that every winding has its own of."""
    shared = "the other windings of this size agree in "
    assert words(table([0.72, 9.0, 9.1])) == f"{shared}the motor constant Km/√Ra"
    for key, said in (("terminal_inductance", "La/Ra"),
                      ("no_load_current", "the friction torque Km·I0"),
                      ("viscous_damping", "the friction torque Km·I0"),
                      ("torque_constant", "the motor constant Km/√Ra")):  # fmt: skip
        batch = table([0.72, 7.2, 7.2])
        batch.figures[key] = batch.figures["rotor_inertia"]
        assert Kin(batch).words(0, key, 7.2e-7, 1e-7, "x") == shared + said
    for key in ("motor_constant", "friction_torque"):
        batch.figures[key] = batch.figures["rotor_inertia"]
        assert "two other windings" in Kin(batch).words(0, key, 7.2e-7, 1e-7, "x")


# ---- by the family


def suspicion(motor: int, key: str, partner: int | None = None) -> Suspicion:
    return Suspicion(motor, INDEX[key], (), 1.0, 0.01, 0.01, 50.0, ("unexplained",), partner)


def test_only_what_a_motor_s_own_figures_cannot_tell_is_by_family() -> None:
    """An inertia without a time constant; a resistance that Is = U/Ra tells is its own."""
    batch = single(n=3)
    for row in range(3):
        put(batch, "rotor_inertia", row, 1e-5)
        put(batch, "nominal_voltage", row, 24.0)
        put(batch, "stall_current", row, 20.0)
        put(batch, "terminal_resistance", row, 1.2)
    problem = observe(batch)
    for key in ("rotor_inertia", "terminal_resistance"):
        problem.present[1:, INDEX[key]] = False
    found = [suspicion(1, "rotor_inertia"), suspicion(1, "terminal_resistance"),
             suspicion(2, "rotor_inertia"), suspicion(1, "rotor_inertia", partner=3)]  # fmt: skip
    told_by_family(found, problem, np.array([True, True, False]))
    assert [s.by_family for s in found] == [True, False, False, False]
    none = [suspicion(2, "rotor_inertia")]
    told_by_family(none, problem, np.zeros(3, dtype=bool))
    assert not none[0].by_family
    told_by_family([], problem, np.ones(3, dtype=bool))


# ---- portions


def test_a_whole_table_is_its_own_portion() -> None:
    batch = table([1.0] * 300)
    assert portion(batch, 0, 300) is batch
    assert portion(batch, 0, 301) is batch
    assert len(portion(batch, 0, 299)) == 299
    assert len(portion(batch, 1, 300)) == 299


def test_a_portion_of_many() -> None:
    """Entries 260 to 290 of 300: what is in front and behind stays out."""
    n, start, stop = 300, 260, 290
    batch = table([1.0 + i for i in range(n)])
    inertia = batch.figures["rotor_inertia"]
    batch.part_number = [f"P{i}" for i in range(n)]
    batch.maker = [f"M{i}" for i in range(n)]
    batch.series = [f"S{i}" for i in range(n)]
    batch.magnet = [f"G{i}" for i in range(n)]
    for name in ("commutation", "commutation_basis", "magnet_basis",
                 "reference_temperature_basis"):  # fmt: skip
        setattr(batch, name, (np.arange(n) % 100).astype(np.int8))
    batch.reference_temperature = np.arange(n, dtype=float)
    marks = (0, start - 1, start, start + 5, stop - 1, stop, n - 1)
    inertia.qualifiers = {i: f"q{i}" for i in marks}
    inertia.convention[:] = np.arange(n)
    inertia.column[:] = np.arange(n)
    inertia.heading[:] = np.arange(n)
    batch.repeats = {"mass": [inertia.take(range(n)), inertia.take(range(n))]}
    batch.texts = {"magnet": TextColumn([f"t{i}" for i in range(n)], np.arange(n), np.arange(n))}
    batch.points = {i: [Point(str(i), {})] for i in marks}
    part = portion(batch, start, stop)
    inside = [i for i in marks if start <= i < stop]
    assert len(part) == stop - start
    for name in ("part_number", "maker", "series", "magnet"):
        assert getattr(part, name) == getattr(batch, name)[start:stop]
    for name in ("commutation", "commutation_basis", "magnet_basis", "reference_temperature",
                 "reference_temperature_basis"):  # fmt: skip
        assert getattr(part, name).tolist() == getattr(batch, name)[start:stop].tolist()
    for column in (part.figures["rotor_inertia"], *part.repeats["mass"]):
        for name in ("value", "low", "high", "convention", "heading", "row", "column"):
            assert getattr(column, name).tolist() == getattr(inertia, name)[start:stop].tolist()
        assert column.text == inertia.text[start:stop]
        assert column.qualifiers == {i - start: f"q{i}" for i in inside}
    assert len(part.repeats["mass"]) == 2
    assert part.texts["magnet"].text == [f"t{i}" for i in range(start, stop)]
    assert part.texts["magnet"].row.tolist() == list(range(start, stop))
    assert part.texts["magnet"].column.tolist() == list(range(start, stop))
    assert {i: p[0].name for i, p in part.points.items()} == {i - start: str(i) for i in inside}
    assert part.headings is batch.headings
    assert math.isclose(part.figures["rotor_inertia"].value[0], 261e-7)
