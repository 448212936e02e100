"""Options are given by name, values as they stand: so that a new one may be put anywhere."""

from __future__ import annotations

import inspect
from dataclasses import FrozenInstanceError, fields

import numpy as np
import pytest

from motorfolio.schema.batch import Heading, Source
from motorfolio.schema.figure.numerals import NumberStyle
from motorfolio.schema.figure.read import Figure, read_column, read_figure
from motorfolio.schema.gear import UNITS, Gear
from motorfolio.schema.motor import Amount, Cell, Finding
from motorfolio.schema.operation.axis import _cut
from motorfolio.schema.operation.cycle import Cycle, Pieces
from motorfolio.schema.operation.drive import time_at_voltage
from motorfolio.schema.operation.heating import heating
from motorfolio.schema.operation.judge import judge, judge_cases, judge_worst
from motorfolio.schema.operation.limits import LIMITS, Utilisations
from motorfolio.schema.operation.moves import Ramps, move, ramps
from motorfolio.schema.operation.ratios import feasible_ratios
from motorfolio.schema.operation.thermal import TwoBody
from motorfolio.schema.reconcile.causes import Shape
from motorfolio.schema.reconcile.inference import Option
from motorfolio.schema.reconcile.model import Readings
from motorfolio.schema.reconcile.operating_points import PointFit
from motorfolio.schema.reconcile.relations import Relation
from motorfolio.schema.units.convert import convert
from motorfolio.schema.written import percent


@pytest.mark.parametrize(
    ("function", "options"),
    [
        (read_figure, "note_marks"), (read_column, "note_marks"), (_cut, "apart"),
        (time_at_voltage, "with_inductance"), (heating, "periodic"), (judge, "periodic"),
        (judge_cases, "periodic"), (judge_worst, "tolerance periodic"), (percent, "signed"),
        (move, "profile time top_speed acceleration effort unit"),
        (ramps, "profile time top_speed acceleration unit"),
        (feasible_ratios, "periodic cases"), (convert, "commutation connection"),
    ],
    ids=lambda value: getattr(value, "__name__", None),
)  # fmt: skip
def test_options_are_given_by_name_only(function, options: str) -> None:
    kinds = inspect.signature(function).parameters
    by_name = [name for name, p in kinds.items() if p.kind is inspect.Parameter.KEYWORD_ONLY]
    assert by_name == options.split()
    others = {p.kind for name, p in kinds.items() if name not in by_name}
    assert others == {inspect.Parameter.POSITIONAL_OR_KEYWORD}


VALUES = [Heading, Source, NumberStyle, Figure, Gear, Amount, Cell, Finding, Cycle, Pieces, Ramps,
          TwoBody, Shape, Option, Readings, PointFit, Relation]  # fmt: skip


@pytest.mark.parametrize("kind", VALUES, ids=lambda kind: kind.__name__)
def test_values_are_shared_and_nobody_may_change_them(kind: type) -> None:
    value = object.__new__(kind)
    for field in fields(kind):
        with pytest.raises(FrozenInstanceError):
            setattr(value, field.name, None)


def test_a_gear_of_which_only_the_ratio_is_known() -> None:
    bare = Gear("G", "Muster", None, 4.0)
    unsaid = {field.name for field in fields(Gear)} - {"part_number", "maker", "series", "ratio"}
    assert all(getattr(bare, name) is None for name in unsaid)
    assert unsaid | {"ratio"} == {*UNITS, "currency"}


def test_nothing_known_limits_nothing() -> None:
    """Counted as −1, which is no place in LIMITS; the first of several alike counts."""
    n = 3
    names = [name for name in Utilisations.__dataclass_fields__ if name != "needed"]
    flags = ("runaway", "ripple_unknown", "friction_assumed")
    columns = {name: np.zeros(n, bool) if name in flags else np.full(n, np.nan) for name in names}
    columns["speed"] = np.array([np.nan, 0.5, 0.0])
    columns["thermal"] = np.array([np.nan, 0.5, -0.1])
    found = Utilisations(**columns, needed=())
    assert found.limiting.tolist() == [-1, LIMITS.index("speed"), LIMITS.index("speed")]
    assert found.verdict().tolist() == [0, 0, 0]
