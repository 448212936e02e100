"""The table as CSV, inert in a spreadsheet."""

import csv
from typing import TextIO

from .table import IDENTITY, Column, Motors, cells, in_order
from .units import Units

_RISKY = ("=", "+", "-", "@", "\t", "\r")


def write_csv(motors: Motors, out: TextIO, units: Units) -> int:
    """Write one row a motor, and return how many; the motors are read twice, first to know the
    columns."""
    ranks: dict[Column, int] = {}
    for motor in motors():
        for column, cell in cells(motor, units):
            ranks[column] = max(ranks.get(column, 0), cell.rank)
    ordered = in_order(ranks)
    position = {column: i for i, column in enumerate(ordered, len(IDENTITY))}
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow([*IDENTITY, *(inert(column.heading) for column in ordered)])
    n = 0
    for motor in motors():
        n += 1
        row = [""] * (len(IDENTITY) + len(ordered))
        row[: len(IDENTITY)] = [inert(motor[key] or "") for key in IDENTITY]
        for column, cell in cells(motor, units):
            row[position[column]] = inert(cell.text)
        writer.writerow(row)
    return n


def inert(text: str) -> str:
    """The text with an apostrophe in front where a spreadsheet would run it as a formula."""
    if text.startswith(_RISKY):
        try:
            float(text)
        except ValueError:
            return f"'{text}"
    return text
