"""Small sheets as text, read in one call: "|" parts cells, a line is a row."""

import math
from dataclasses import dataclass

from motorfolio.catalog.reading import Reading, ReadOptions, read
from motorfolio.catalog.tables.grid import Grid, Span, TableFile
from motorfolio.schema.batch import Batch

RPM = math.pi / 30


@dataclass
class Sheet:
    """What a sheet was read as, with short ways to its figures."""

    reading: Reading
    batches: list[Batch]

    @property
    def batch(self) -> Batch:
        assert len(self.batches) == 1
        return self.batches[0]

    def motors(self) -> dict[str, dict[str, float]]:
        """part number → figure key → SI value, of all motors."""
        out: dict[str, dict[str, float]] = {}
        for batch in self.batches:
            for i, part in enumerate(batch.part_number):
                figures = {k: float(c.value[i]) for k, c in batch.figures.items()}
                out[part] = {k: v for k, v in figures.items() if not math.isnan(v)}
        return out

    def convention(self, key: str, motor: int = 0):
        column = self.batch.figures[key]
        return column.conventions[column.convention[motor]]

    @property
    def unread(self) -> set[str]:
        """The texts of cells and headings that were not read."""
        return {u.heading for u in self.reading.unread} | {u.text for u in self.reading.unread}


def grid(text: str, spans: list[Span] | None = None) -> Grid:
    lines = text.strip("\n").split("\n")
    rows = [[c.strip().replace("\\n", "\n") for c in line.split("|")] for line in lines]
    width = max(map(len, rows))
    rows = [row + [""] * (width - len(row)) for row in rows]
    return Grid(rows, list(range(1, len(rows) + 1)), list(range(1, width + 1)), spans=spans or [])


def sheet(text: str, spans: list[Span] | None = None, **options) -> Sheet:
    file = TableFile("plate.csv", "0" * 64, "csv", [grid(text, spans)])
    reading = read(file, ReadOptions(**options))
    batches = list(reading.batches)
    reading.batches = batches
    return Sheet(reading, batches)
