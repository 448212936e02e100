"""The table as a Parquet file: numbers as numbers, with their precision beside them."""

from collections.abc import Iterator
from itertools import islice
from pathlib import Path
from typing import Any

from ...schema.errors import MotorfolioError
from ..documents import Document
from ..tables.numberformat import plain
from ..tables.parquet import AS_WRITTEN, NEEDS_EXTRA
from .table import IDENTITY, Cell, Column, Motors, cells, in_order
from .units import Units

_CHUNK = 20_000
"""Motors in a row group."""


def write_parquet(motors: Motors, path: Path, units: Units) -> int:
    """Write one row a motor, and return how many; the motors are read twice, first to know the
    columns.

    A quantity's numbers are a column of doubles. Where a double doesn't tell a figure's precision,
    range or qualifier ("0.0300", "10…28", "≤ 45"), a second column, "…, as written", has its text.
    """
    try:
        import pyarrow as pa
        import pyarrow.parquet as pq
    except ImportError:
        raise MotorfolioError(f"{path}: {NEEDS_EXTRA}.") from None
    ranks: dict[Column, int] = {}
    numeric: dict[Column, bool] = {}
    written: set[Column] = set()
    for motor in motors():
        for column, cell in cells(motor, units):
            ranks[column] = max(ranks.get(column, 0), cell.rank)
            numeric[column] = numeric.get(column, True) and cell.value is not None
            if cell.value is not None and cell.text != _shown(cell.value):
                written.add(column)
    ordered = in_order(ranks)
    fields = [pa.field(key, pa.string()) for key in IDENTITY]
    names = _unique([column.heading for column in ordered])
    for column, name in zip(ordered, names, strict=True):
        fields.append(pa.field(name, pa.float64() if numeric[column] else pa.string()))
        if numeric[column] and column in written:
            fields.append(pa.field(name + AS_WRITTEN, pa.string()))
    schema = pa.schema(fields)
    n = 0
    with pq.ParquetWriter(path, schema) as writer:
        for chunk in _chunks(motors()):
            found = [dict(cells(motor, units)) for motor in chunk]
            arrays: list[list[Any]] = [[motor[key] for motor in chunk] for key in IDENTITY]
            for column in ordered:
                in_column = [row.get(column) for row in found]
                if not numeric[column]:
                    arrays.append([cell and cell.text for cell in in_column])
                    continue
                arrays.append([None if c is None else _double(c) for c in in_column])
                if column in written:
                    arrays.append([c and _beside(c) for c in in_column])
            writer.write_table(pa.table(arrays, schema=schema))
            n += len(chunk)
    return n


def _chunks(motors: Iterator[Document]) -> Iterator[list[Document]]:
    while chunk := list(islice(motors, _CHUNK)):
        yield chunk


def _double(cell: Cell) -> float | None:
    """The number as it is read back: to twelve digits, as CSV has it."""
    return None if cell.value is None else float(_shown(cell.value))


def _beside(cell: Cell) -> str | None:
    """The text, where the number alone doesn't say as much."""
    return None if cell.value is None or cell.text == _shown(cell.value) else cell.text


def _shown(value: float) -> str:
    return plain(float(f"{value:.12g}"))


def _unique(headings: list[str]) -> list[str]:
    """Names of columns, none twice, as most programs ask: blanks tell a repeated one apart, and
    are nothing to a reader of headings."""
    names: list[str] = []
    for heading in headings:
        name = heading
        while name in names:
            name += " "
        names.append(name)
    return names
