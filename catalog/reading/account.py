"""The last look at a grid: a cell with a figure that no table took up is listed, never lost."""

from collections import defaultdict

from ...schema.figure.signs import plain
from ..tables.grid import Grid
from .cells import is_figure, is_unit, missing, strength
from .headings.label import parse_label
from .layout.columns import figure_behind
from .layout.lines import text_of
from .model import Table, Unread

_SHORT = 8
"""A text as short as this may stand in a title or note by chance."""

REASON = "it stands in no table that was understood"


class _Taken:
    """The places of the cells that are figures of tables, and the texts that stand about them."""

    def __init__(self, tables: list[Table], columns: list[int]) -> None:
        self.down: dict[int, set[int]] = defaultdict(set)
        self.across: dict[int, set[int]] = defaultdict(set)
        self.texts: set[str] = set()
        whole: set[str] = set()
        for table in tables:
            for f in table.fields:
                places = f.places or table.places
                if (f.layout or table.layout) == "rows":
                    self.down[f.column].update(places)
                else:
                    self.across[f.row].update(places)
                self.texts.update((f.label.text, *f.units, *f.captions, *f.when, *f.label.units))
                self.texts.update(f.label.symbols)
                self.texts.update(f.label.text.split("\n"))
                whole.update((f.heading, *f.captions))
            self.texts.update(t for t in table.part_numbers if t)
            self.texts.update(t for row in table.head for t in row)
            for text in (*table.titles, *table.notes):
                self.texts.update((text, *text.split("\n")))
            whole.update((*table.titles, *table.notes, *table.remarks))
        # Most rows are motors of one table whose fields stand side by side: they need no look.
        self.rows = max(self.down.values(), key=len, default=set[int]())
        self.free = [i for i, c in enumerate(columns) if self.down.get(c) != self.rows]
        self.texts = {plain(t) for t in self.texts}
        self.about = "\n".join(plain(t) for t in whole)

    def has(self, row: int, column: int) -> bool:
        return row in self.down.get(column, ()) or column in self.across.get(row, ())


def unaccounted(grid: Grid, tables: list[Table]) -> list[Unread]:
    """The cells of a grid with a figure that is in no field, heading, title or note of its tables.

    Of a grid without tables only those beside or under the name of something measured.
    """
    taken = _Taken(tables, grid.column_numbers)
    out: list[Unread] = []
    above = [""] * len(grid.column_numbers)  # the nearest name over each column
    for number, row in zip(grid.row_numbers, grid.rows, strict=False):
        if number in taken.rows and not any(row[c] for c in taken.free):
            continue
        over = list(above)
        line = plain(text_of(row))
        noted = len(line) > _SHORT and line in taken.about
        # A merged cell repeats its text, and so does what holds under several conditions.
        repeats = bool(grid.spans) or number in taken.across
        read = {row[c] for c, at in enumerate(grid.column_numbers) if taken.has(number, at)}
        for c, at in enumerate(grid.column_numbers):
            text = row[c]
            if not text or taken.has(number, at):
                continue
            if not _tells(text):
                if not is_figure(text) and (_measured(text) or not _measured(above[c])):
                    above[c] = text
                continue
            if repeats and text in read:
                continue
            clean = plain(text)
            said = len(clean) > _SHORT and clean in taken.about
            if noted or said or clean in taken.texts or _counts_rows(row, c):
                continue
            heading = _heading(row, c, over[c])
            if not tables and not _measured(heading):
                continue
            out.append(
                Unread(None, heading, grid.sheet, grid.page, number, at, text, REASON,
                       _keys(heading)[:3])
            )  # fmt: skip
    return out


def _tells(text: str) -> bool:
    """Whether a cell holds a figure, alone or behind its name."""
    if is_figure(text):
        return not missing(text) and not is_unit(text)
    return figure_behind(text) is not None


def _counts_rows(row: list[str], c: int) -> bool:
    """Whether a cell is but the number of its line: first of all, with a name behind it."""
    behind = next((t for t in row[c + 1 :] if t), "")
    first = not any(row[:c])
    return first and row[c].strip(" .)(").isdigit() and bool(behind) and not is_figure(behind)


def _heading(row: list[str], c: int, above: str) -> str:
    """The name that a cell has, in its row or else above it ('' if there is none)."""
    pair = figure_behind(row[c])
    if pair is not None:
        return pair[0]
    names = [*(t for t in reversed(row[:c]) if t and not is_figure(t)), above]
    return next((t for t in names if _measured(t)), names[0] if names else "")


def _keys(heading: str) -> tuple[str, ...]:
    return tuple(dict.fromkeys(k for p in parse_label(heading).names for k in p.keys))


def _measured(heading: str) -> bool:
    return strength(heading) >= 0.85 and bool(_keys(heading))
