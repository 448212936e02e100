"""Options are given by name, values as they stand: so that a new one may be put anywhere."""

from __future__ import annotations

import inspect

import pytest

from motorfolio.schema.figure.read import read_column, read_figure
from motorfolio.schema.operation.axis import _cut
from motorfolio.schema.operation.drive import time_at_voltage
from motorfolio.schema.operation.heating import heating
from motorfolio.schema.operation.judge import judge, judge_cases, judge_worst
from motorfolio.schema.operation.moves import move, ramps
from motorfolio.schema.operation.ratios import feasible_ratios
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
