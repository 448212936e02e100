"""The entries of one table as columns: what is published, in SI, with the place of every figure.

A batch of one motor and a batch of a hundred thousand are the same thing; the numeric parts of
the program work on these arrays. Single entries as documents are in entry.py and motor.py.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from .convention import Commutation, Convention

Floats = NDArray[np.float64]
Ints = NDArray[np.int32]

MODEL_BASES = ("told", "stated", "inferred", "assumed")
"""How a fact about the motor's kind is known; arrays hold the index."""

MAGNETS: dict[str, float] = {
    # reversible temperature coefficient of remanence, 1/K: see physics documentation
    "unknown": 0.0,
    "ferrite": -0.0020,
    "ndfeb": -0.0011,
    "smco": -0.0004,
    "alnico": -0.0002,
}


@dataclass(frozen=True, slots=True)
class Source:
    """The table a batch was read from."""

    file: str
    sha256: str = ""
    sheet: str | None = None
    page: int | None = None
    layout: str = "rows"


@dataclass(frozen=True, slots=True)
class Heading:
    """How one heading was read: the text, what it is, in which unit and convention, and why."""

    text: str
    quantity: str | None
    unit: str = ""
    convention: Convention | None = None
    score: float = 1.0
    reason: str = ""
    factor: float = 1.0
    offset: float = 0.0


@dataclass(slots=True)
class FigureColumn:
    """One quantity over the N entries of a batch, as published, in SI (NaN: not given).

    low and high are the interval of the printed digits, or the printed ± or range. conventions
    is a palette that the index array ``convention`` points into; ``heading`` points into
    ``Batch.headings``. row and column are places in the file, from 1 (0: unknown).
    """

    value: Floats
    low: Floats
    high: Floats
    text: list[str | None]
    conventions: list[Convention]
    convention: Ints
    heading: Ints
    row: Ints
    column: Ints
    qualifiers: dict[int, str] = field(default_factory=dict)

    def take(self, entries: Ints | Sequence[int]) -> "FigureColumn":
        """The same column for these entries only."""
        where = np.asarray(entries)
        position = {int(old): new for new, old in enumerate(where)}
        return FigureColumn(
            self.value[where],
            self.low[where],
            self.high[where],
            [self.text[i] for i in where],
            list(self.conventions),
            self.convention[where],
            self.heading[where],
            self.row[where],
            self.column[where],
            {position[i]: q for i, q in self.qualifiers.items() if i in position},
        )


def empty_figures(n: int) -> FigureColumn:
    """A column of n gaps."""
    nan = np.full(n, np.nan)
    zeros = np.zeros(n, dtype=np.int32)
    return FigureColumn(
        nan, nan.copy(), nan.copy(), [None] * n, [Convention()],
        zeros, zeros.copy(), zeros.copy(), zeros.copy(),
    )  # fmt: skip


@dataclass(slots=True)
class TextColumn:
    """One text figure over the entries (connection, magnet, protection, description …)."""

    text: list[str | None]
    row: Ints
    column: Ints


@dataclass(slots=True)
class Point:
    """One published operating point of a motor: figure keys to SI values, with a name."""

    name: str
    figures: dict[str, float]
    row: int = 0


@dataclass(slots=True)
class Condition:
    """The figures a sheet gives once more under another condition (voltage, cooling, duty …)."""

    when: str
    figures: dict[int, dict[str, "PlacedFigure"]] = field(default_factory=dict)


@dataclass(slots=True)
class PlacedFigure:
    """A single figure with its place, for the few that don't stand in columns."""

    value: float
    low: float
    high: float
    text: str
    unit: str = ""
    convention: Convention = field(default_factory=Convention)
    qualifier: str | None = None
    row: int = 0
    column: int = 0


@dataclass(slots=True)
class Batch:
    """N entries of one table as published.

    commutation holds ``Commutation`` codes, magnet names of ``MAGNETS``, reference_temperature
    °C; the ``*_basis`` arrays hold indices into ``MODEL_BASES``. figures has one column a
    quantity; repeats the further columns that give a quantity again under the same condition
    (a second unit, a second place), which check the first. family groups windings of one motor
    size (−1: none known). notes are the table's remarks that set conventions.
    """

    source: Source
    part_number: list[str]
    maker: list[str]
    series: list[str | None]
    headings: list[Heading]
    figures: dict[str, FigureColumn]
    commutation: NDArray[np.int8]
    commutation_basis: NDArray[np.int8]
    magnet: list[str]
    magnet_basis: NDArray[np.int8]
    reference_temperature: Floats
    reference_temperature_basis: NDArray[np.int8]
    repeats: dict[str, list[FigureColumn]] = field(default_factory=dict)
    texts: dict[str, TextColumn] = field(default_factory=dict)
    conditions: list[Condition] = field(default_factory=list)
    points: dict[int, list[Point]] = field(default_factory=dict)
    notes: list[str] = field(default_factory=list)

    def __len__(self) -> int:
        return len(self.part_number)

    def value(self, key: str) -> Floats:
        """The published values of a quantity, SI, shape (N,); NaN where not given."""
        column = self.figures.get(key)
        return np.full(len(self), np.nan) if column is None else column.value


def blank_batch(
    part_numbers: Sequence[str],
    *,
    maker: str = "",
    source: Source | None = None,
    commutation: Commutation = Commutation.BRUSHED,
) -> Batch:
    """A batch with no figures yet, everything about the motors' kind assumed."""
    n = len(part_numbers)
    assumed = np.full(n, MODEL_BASES.index("assumed"), dtype=np.int8)
    return Batch(
        source=source or Source("(none)"),
        part_number=list(part_numbers),
        maker=[maker] * n,
        series=[None] * n,
        headings=[],
        figures={},
        commutation=np.full(n, int(commutation), dtype=np.int8),
        commutation_basis=assumed,
        magnet=["unknown"] * n,
        magnet_basis=assumed.copy(),
        reference_temperature=np.full(n, 25.0),
        reference_temperature_basis=assumed.copy(),
    )
