"""Where the figures of a table stand: what all its motors share, kept once.

In a table of one motor a row, a figure's row is its motor's and its column is its heading's; in
one motor a column it is the other way round. Motors whose figures were read under the same
headings and conventions share one pattern.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ...schema.batch import Batch, Ints
from ...schema.convention import Convention


@dataclass(frozen=True, slots=True)
class Place:
    """A quantity under a pattern: heading (index), conventions, and the fixed row or column."""

    quantity: str
    heading: int | None
    read_as: Convention | None
    convention: Convention | None
    row: int
    column: int


Pattern = tuple[Place, ...]


def usual_places(batch: Batch) -> tuple[Ints, Ints]:
    """The row and the column of each motor, shape (N,): 0 where it isn't the motor's own.

    With one motor a row the row is the motor's (the median over its figures, since a merged cell
    stands in another row); with one motor a column the column.
    """
    n = len(batch)
    zero = np.zeros(n, dtype=np.int32)
    by_rows = batch.source.layout != "columns"
    columns = [f.row if by_rows else f.column for f in batch.figures.values()]
    columns += [t.row if by_rows else t.column for t in batch.texts.values()]
    if not columns:
        return zero, zero.copy()
    own = _typical(np.stack(columns))
    return (own, zero) if by_rows else (zero, own)


def _typical(places: Ints) -> Ints:
    """The commonest non-zero place down each column of (K, N); 0 if there is none."""
    known = places > 0
    low = np.where(known, places, np.iinfo(np.int32).max).min(axis=0)
    high = places.max(axis=0)
    typical = np.where(high > 0, high, 0).astype(np.int32)
    for i in np.flatnonzero((high > 0) & (low != high)).tolist():
        numbers, counts = np.unique(places[known[:, i], i], return_counts=True)
        typical[i] = numbers[np.argmax(counts)]
    return typical


def places_of(
    published: Batch, batch: Batch, row: Ints, column: Ints
) -> tuple[Ints, list[Pattern]]:
    """Pattern index of each motor, shape (N,), and the patterns.

    ``published`` is the batch as read, ``batch`` the same with conventions as inferred.
    """
    keys = list(batch.figures)
    n = len(batch)
    facets: list[Ints] = []
    for key in keys:
        f, read = batch.figures[key], published.figures[key]
        given = ~np.isnan(f.value)
        facets += [_filled(x, given) for x in (f.heading, f.convention, read.convention)]
    if not facets or n == 0:
        return np.zeros(n, dtype=np.int32), [tuple(_texts(batch, np.arange(n)))]
    table = np.ascontiguousarray(np.stack(facets, axis=1).astype(np.int32))
    if (table == table[0]).all():
        first, pattern_of = np.zeros(1, dtype=np.intp), np.zeros(n, dtype=np.int32)
    else:
        rows = table.view(np.dtype((np.void, table.itemsize * table.shape[1]))).ravel()
        _, first, pattern_of = np.unique(rows, return_index=True, return_inverse=True)
    patterns: list[Pattern] = []
    for number, i in enumerate(first.tolist()):
        members = np.flatnonzero(pattern_of == number)
        places = []
        for key in keys:
            f, read = batch.figures[key], published.figures[key]
            given = members[~np.isnan(f.value[members])]
            entry = int(given[0]) if len(given) else i
            heading = int(f.heading[entry])
            places.append(
                Place(
                    key,
                    heading if 0 <= heading < len(batch.headings) else None,
                    read.conventions[read.convention[entry]],
                    f.conventions[f.convention[entry]],
                    *_fixed(batch, f.row[given], f.column[given]),
                )
            )
        patterns.append((*places, *_texts(batch, members)))
    return pattern_of.astype(np.int32).ravel(), patterns


def _filled(numbers: Ints, given: np.ndarray) -> Ints:
    """The numbers with gaps filled by the first given one, so that a gap makes no pattern."""
    if given.all():
        return numbers
    where = np.flatnonzero(given)
    fill = numbers[where[0]] if len(where) else 0
    return np.where(given, numbers, fill).astype(np.int32)


def _fixed(batch: Batch, rows: Ints, columns: Ints) -> tuple[int, int]:
    """The row and column all figures of a heading share; 0 for the one that is the motor's."""
    if batch.source.layout == "columns":
        return _commonest(rows), 0
    return 0, _commonest(columns)


def _commonest(places: Ints) -> int:
    known = places[places > 0]
    if not len(known):
        return 0
    if (known == known[0]).all():
        return int(known[0])
    numbers, counts = np.unique(known, return_counts=True)
    return int(numbers[np.argmax(counts)])


def _texts(batch: Batch, members: NDArray[np.integer]) -> list[Place]:
    found = []
    for key, text in batch.texts.items():
        heading = next((i for i, h in enumerate(batch.headings) if h.quantity == key), None)
        row, column = _fixed(batch, text.row[members], text.column[members])
        found.append(Place(key, heading, None, None, row, column))
    return found
