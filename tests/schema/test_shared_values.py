"""What is kept and handed out again, from caches and tables, can't be changed by who gets it."""

from __future__ import annotations

from dataclasses import FrozenInstanceError, fields

import pytest

from motorfolio.schema.batch import Heading, Source
from motorfolio.schema.convention import Convention
from motorfolio.schema.figure.numerals import POINT
from motorfolio.schema.motor import Amount, Cell, Finding
from motorfolio.schema.operation.axis import Axis
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Drive, Gearing, Supply, Surroundings
from motorfolio.schema.reconcile.relations import RELATIONS
from motorfolio.schema.units.read import read_unit
from motorfolio.schema.vocabulary import quantities, quantity, words

CYCLE = Cycle.from_points([(1.0, 1.0, 1.0)])
FINDING = Finding(part_number=None, severity="note", relation="r", figures=(), message="m")


@pytest.mark.parametrize(
    "value",
    [Source("a.csv"), Heading("Kt", None), Convention(), POINT, Amount(1.0, "V"), Cell(row=1),
     Axis(), CYCLE, CYCLE.pieces(), Demand(CYCLE), Drive(), Gearing(), Supply(), Surroundings(),
     FINDING, RELATIONS[0], read_unit("mNm", ("N·m",)),
    quantity("mass"), words()],
    ids=lambda value: type(value).__name__,
)  # fmt: skip
def test_shared_values_stay(value) -> None:
    name = fields(value)[0].name
    with pytest.raises(FrozenInstanceError):
        setattr(value, name, None)


def test_shared_tables_stay() -> None:
    with pytest.raises(TypeError):
        quantities()["mass"] = None  # pyright: ignore[reportIndexIssue]
    with pytest.raises(TypeError):
        words().names["mass"] = ()  # pyright: ignore[reportIndexIssue]
