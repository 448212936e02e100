"""A printed page (titles, grids of cells, notes) and what a careful reader takes from it."""

from __future__ import annotations

from dataclasses import dataclass, field

from .numbers import is_ambiguous, tells_decimal_sign
from .recipe import Recipe
from .sheet import Column, Printed, Sheet


@dataclass
class Cell:
    """One cell; a span covers further cells, which stand as None in the grid."""

    text: str = ""
    rows: int = 1
    columns: int = 1
    stored: float | None = None
    number_format: str = ""


Grid = list[list[Cell | None]]


@dataclass
class Wanted:
    """One figure as it must be read. ``optional``: may be absent; ``doubtful``: may be unread."""

    value: float
    text: str
    low: float | None = None
    high: float | None = None
    convention: dict[str, object] = field(default_factory=dict)
    optional: bool = False
    doubtful: bool = False


@dataclass
class Page:
    """What is printed, and the expectation: part number -> key -> figure.

    ``conditioned`` holds figures that stand under several named conditions: part -> key -> all
    values. ``labels`` are the headings under which a key stands, to know it in the unread list.
    """

    recipe: Recipe
    before: list[str] = field(default_factory=list)
    grids: list[Grid] = field(default_factory=list)
    after: list[str] = field(default_factory=list)
    paragraphs: list[str] = field(default_factory=list)
    records: list[dict[str, object]] = field(default_factory=list)
    figures: dict[str, dict[str, Wanted]] = field(default_factory=dict)
    conditioned: dict[str, dict[str, list[float]]] = field(default_factory=dict)
    labels: dict[str, list[str]] = field(default_factory=dict)
    numbers: list[str] = field(default_factory=list)
    stored: set[str] = field(default_factory=set)
    allowed: set[str] = field(default_factory=set)
    other_numbers: bool = False
    reference_temperature: float | None = None
    hidden_columns: list[int] = field(default_factory=list)

    def expect(self, part: str, column: Column, printed: Printed) -> None:
        """Adds a figure; a second one under the same key only checks the first."""
        figures = self.figures.setdefault(part, {})
        figures.setdefault(
            column.key,
            Wanted(
                printed.value,
                printed.text,
                None if column.key == "nominal_voltage" else printed.low,
                None if column.key == "nominal_voltage" else printed.high,
                dict(column.convention),
                printed.optional,
                printed.doubtful,
            ),
        )

    def expect_sheet(self, sheet: Sheet) -> None:
        """Adds every printed cell of a sheet."""
        for column in sheet.columns:
            self.labels.setdefault(column.key, []).extend(
                [column.label, *([column.symbol] if column.symbol else [])]
            )
            for part, cell in zip(sheet.parts, column.cells, strict=True):
                self.figures.setdefault(part, {})
                if cell is not None:
                    self.expect(part, column, cell)
                    self.numbers.append(cell.text)

    def settle(self, sheet: Sheet) -> None:
        """Marks as doubtful what no reader can decide: '1,234' in a table without evidence.

        Numbers that are stored as such ("stored") are certain, and are no evidence for texts.
        """
        texts = [text for text in self.numbers if text not in self.stored]
        if any(tells_decimal_sign(text, sheet.style) for text in texts):
            return
        for figures in self.figures.values():
            for wanted in figures.values():
                if is_ambiguous(wanted.text) and wanted.text not in self.stored:
                    wanted.doubtful = True
