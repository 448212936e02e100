"""Motors in SI as columns, and what was found about their figures.

The documents that other programs get are in entry.py.
"""

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from .batch import Batch, Floats
from .canonical import CANONICAL, CONSTANT_BASES

__all__ = [
    "CANONICAL",
    "CONSTANT_BASES",
    "Amount",
    "Cell",
    "ConstantColumn",
    "Finding",
    "Reconciled",
]


@dataclass(slots=True)
class ConstantColumn:
    """One constant over N motors: value and 95 % interval in SI, at 25 °C.

    basis holds indices into ``CONSTANT_BASES`` (−1 where there is no value); sources is a
    palette of tuples of figure keys that the index array ``source`` points into.
    """

    value: Floats
    low: Floats
    high: Floats
    basis: NDArray[np.int8]
    sources: list[tuple[str, ...]]
    source: NDArray[np.int32]


@dataclass(frozen=True, slots=True)
class Amount:
    """A value with its SI unit."""

    value: float | None
    unit: str


@dataclass(frozen=True, slots=True)
class Cell:
    """A place in the file: sheet or page where there is one, row and column from 1."""

    sheet: str | None = None
    page: int | None = None
    row: int | None = None
    column: int | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """One contradiction, or one thing worth knowing, among the published figures; fields as in
    the document of the same name."""

    part_number: str | None
    scope: str = "motor"
    part_numbers: tuple[str, ...] = ()
    severity: str
    relation: str
    figures: tuple[str, ...]
    suspect: str | None = None
    ratio: float | None = None
    cause: str = "unexplained"
    other_causes: tuple[str, ...] = ()
    implied: Amount | None = None
    cell: Cell | None = None
    message: str


@dataclass(slots=True)
class Reconciled:
    """A batch brought to constants: the batch (with conventions as inferred), its constants by
    canonical key, and the findings; ``finding_motor`` gives each finding's entry index (the
    first one for a whole column)."""

    batch: Batch
    constants: dict[str, ConstantColumn]
    findings: list[Finding] = field(default_factory=list)
    finding_motor: list[int] = field(default_factory=list)
