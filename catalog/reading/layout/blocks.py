"""A grid → its blocks: merged cells filled, parted at blank lines, laid out by evidence."""

import re
from dataclasses import dataclass, field
from itertools import pairwise

from ....schema.figure.signs import plain
from ....schema.vocabulary import quantity
from ...tables.grid import Grid
from ..cells import is_figure, is_unit, strength
from ..headings.label import parse_label

_CONDITION = re.compile(
    r"(?:at |bei |à |@ ?)?\d{1,3}(?:[.,]\d+)?\s*(?:V ?AC|V ?DC|VAC|VDC|V|K|°C)(?: ?(?:AC|DC))?"
)
_ROWS_TRIED, _COLUMNS_TRIED = 80, 40
HEADINGS = 2.9
"""So many headings in a row below figures begin another table."""


@dataclass(slots=True)
class Block:
    """A rectangle of a grid: rows of cells, and the place of each row and column in the file."""

    rows: list[list[str]]
    row_numbers: list[int]
    column_numbers: list[int]
    kind: str = "text"
    line: int = 0
    filled: set[tuple[int, int]] = field(default_factory=set)
    """(row, column) indices of cells that a merged cell gave its text to."""

    @property
    def width(self) -> int:
        """Columns."""
        return len(self.column_numbers)


def blocks_of(grid: Grid) -> list[Block]:
    """The blocks of a grid in order, each laid out as "rows", "columns" or "text"."""
    rows = [list(row) for row in grid.rows] if grid.spans else grid.rows
    filled: set[tuple[int, int]] = set()
    for span in grid.spans:
        text = rows[span.row][span.column]
        for r in range(span.row, min(span.row + span.rows, len(rows))):
            for c in range(span.column, min(span.column + span.columns, len(rows[r]))):
                if not rows[r][c]:
                    rows[r][c] = text
                    filled.add((r, c))
    blocks = []
    start = None
    for i in range(len(rows) + 1):
        blank = i == len(rows) or not any(rows[i])
        if not blank and start is None:
            start = i
        elif blank and start is not None:
            part = Block(
                rows[start:i],
                grid.row_numbers[start:i],
                grid.column_numbers,
                filled={(r - start, c) for r, c in filled if start <= r < i},
            )
            blocks += [side for piece in _stacked(part) for side in _side_by_side(piece)]
            start = None
    for block in blocks:
        block.kind, block.line = orientation(block)
    return _merged(blocks)


def _stacked(block: Block) -> list[Block]:
    """The blocks that stand on one another: a new row of headings begins one."""
    scores = row_scores(block)
    cuts: list[int] = []
    seen_figures = False
    for r in range(1, len(block.rows)):
        row = block.rows[r]
        if r >= len(scores) and any(t[:1].isdigit() for t in row):
            seen_figures = seen_figures or is_data(row)
            continue  # far down no row of headings has a cell that begins with a digit
        score = scores[r] if r < len(scores) else row_score(row)
        if score >= HEADINGS and seen_figures and not is_data(row):
            cut = r
            above = {t for t in block.rows[r - 1] if t}
            if (
                len(above) >= 2
                and not is_data(block.rows[r - 1])
                and cut - 1 > (cuts[-1] if cuts else 0)
            ):
                cut -= 1
            cuts.append(cut)
            seen_figures = False
        elif not seen_figures and is_data(row):
            seen_figures = True
    borders = [0, *cuts, len(block.rows)]
    return [
        Block(
            block.rows[a:b],
            block.row_numbers[a:b],
            block.column_numbers,
            filled={(r - a, c) for r, c in block.filled if a <= r < b},
        )
        for a, b in pairwise(borders)
    ]


def _names_measured(text: str) -> bool:
    """Whether a cell is the heading of something that is measured."""
    return strength(text) >= 0.9 and any(
        not quantity(k).text for p in parse_label(text).names for k in p.keys
    )


def is_data(row: list[str]) -> bool:
    """Whether a row holds figures, as a motor's row does."""
    filled = [t for t in row if t]
    found = [t for t in filled if is_figure(t) and not is_unit(t)]
    figures = len(found)
    conditions = all(_CONDITION.fullmatch(plain(t)) for t in found)
    if found and conditions and not any(map(_names_measured, filled)):
        return False  # captions: "230 VAC", "ΔT = 100 K"
    if not figures or sum(map(is_unit, filled)) > 0.5 * len(filled):
        return False
    return figures >= 2 or figures / len(filled) >= 0.3


def _side_by_side(block: Block) -> list[Block]:
    """The blocks that blank columns part, where each side is a table of its own."""
    if len(block.rows) > 400 or block.width < 3:
        return [block]
    used = [any(row[c] for row in block.rows) for c in range(block.width)]
    ranges: list[tuple[int, int]] = []
    start = None
    for c in range(block.width + 1):
        on = c < block.width and used[c]
        if on and start is None:
            start = c
        elif not on and start is not None:
            ranges.append((start, c))
            start = None
    if len(ranges) < 2:
        return _beside_labels(block)
    parts = [_cut(block, a, b) for a, b in ranges]
    kinds = [orientation(p)[0] for p in parts]
    strong = all(
        kind != "text" and _score(part, kind) >= 1.9
        for kind, part in zip(kinds, parts, strict=True)
    )
    return [side for part in parts for side in _beside_labels(part)] if strong else [block]


def _beside_labels(block: Block) -> list[Block]:
    """The blocks that labels right of figures begin: "voltage | V | 12 | inertia | gcm² | 11"."""
    if orientation(block)[0] != "columns":
        return [block]
    borders = [0]
    labels = figures = False
    for c, score in enumerate(column_scores(block)):
        texts = [row[c] for row in block.rows if row[c]]
        numbers = sum(map(is_figure, texts))
        if score >= 1.9 and numbers < 0.35 * len(texts):
            if figures and _figures_right(block, c):
                borders.append(c)
            labels, figures = True, False
        elif labels and numbers > 0.5 * len(texts):
            figures = True
    return [_cut(block, a, b) for a, b in pairwise([*borders, block.width])]


def _figures_right(block: Block, column: int) -> bool:
    labelled = [row for row in block.rows if row[column]]
    return sum(any(map(is_figure, row[column + 1 :])) for row in labelled) > 0.5 * len(labelled)


def _cut(block: Block, a: int, b: int) -> Block:
    keep = [i for i, row in enumerate(block.rows) if any(row[a:b])]
    first, last = (keep[0], keep[-1] + 1) if keep else (0, 0)
    return Block(
        [row[a:b] for row in block.rows[first:last]],
        block.row_numbers[first:last],
        block.column_numbers[a:b],
        filled={(r - first, c - a) for r, c in block.filled if a <= c < b and first <= r < last},
    )


def _score(block: Block, kind: str) -> float:
    scores = row_scores(block) if kind == "rows" else column_scores(block)
    return max(scores, default=0.0)


def _worth(cell: str) -> float:
    sure = strength(cell)
    return sure if sure >= 0.4 else 0.0


def row_scores(block: Block) -> list[float]:
    """For each of the first rows, how many headings it holds."""
    return [row_score(row) for row in block.rows[:_ROWS_TRIED]]


def row_score(row: list[str]) -> float:
    """How many headings a row holds; what a merged cell repeats counts once."""
    total, previous = 0.0, ""
    for cell in row[:300]:
        if cell and cell != previous:
            total += _worth(cell)
        previous = cell
    return total


def column_scores(block: Block) -> list[float]:
    """For each of the first columns, how many different headings it holds."""
    scores = []
    for c in range(min(block.width, _COLUMNS_TRIED)):
        total, filled = 0.0, 0
        seen: set[str] = set()
        for row in block.rows[:400]:
            cell = row[c]
            if cell and cell not in seen:
                seen.add(cell)
                total += _worth(cell)
                filled += 1
            if filled > 40 and total < 0.15 * filled:
                break
        scores.append(total if total >= 0.2 * filled else min(total, 1.0))
    return scores


def orientation(block: Block) -> tuple[str, int]:
    """("rows", heading row), ("columns", label column) or ("text", 0): where headings are."""
    if all(len({t for t in row if t}) < 2 for row in block.rows[:50]):
        return "text", 0
    rows, columns = row_scores(block), column_scores(block)
    best_row, best_column = max(rows, default=0.0), max(columns, default=0.0)
    if max(best_row, best_column) < 0.5:
        return "text", 0
    r = next(i for i, s in enumerate(rows) if s >= best_row - 1e-9)
    c = next(i for i, s in enumerate(columns) if s >= best_column - 1e-9)
    if len(block.rows) == 1:
        single = sum(1 for x in block.rows[0] if x)
        return (
            ("text", 0) if single < 2 or not any(map(is_figure, block.rows[0])) else ("columns", c)
        )
    if not any(is_figure(x) for row in block.rows[:200] for x in row):
        few = len([x for row in block.rows for x in row if x])
        if few > 400 or max(best_row, best_column) < 2:
            return "text", 0
    if best_row > best_column + 1e-9:
        return "rows", r
    if best_column > best_row + 1e-9:
        return "columns", c
    across = sum(1 for x in block.rows[r] if x)
    down = sum(1 for row in block.rows if row[c])
    return ("rows", r) if best_row / across >= best_column / down else ("columns", c)


def _merged(blocks: list[Block]) -> list[Block]:
    """Sections of one table that blank rows part, put together again."""
    merged: list[Block] = []
    for block in blocks:
        last = merged[-1] if merged else None
        if (
            last is not None
            and last.kind == "columns"
            and block.kind in ("columns", "text")
            and block.column_numbers == last.column_numbers
            and _goes_on(last, block)
        ):
            offset = len(last.rows)
            last.rows = last.rows + block.rows
            last.row_numbers = last.row_numbers + block.row_numbers
            last.filled |= {(r + offset, c) for r, c in block.filled}
            continue
        merged.append(block)
    return merged


def _goes_on(last: Block, block: Block) -> bool:
    """Whether a block continues a label column: same column, figures right of it, no new head."""
    if block.kind == "text":
        return False
    if block.line != last.line:
        return False
    for row in block.rows:
        texts = [x for x in row[block.line + 1 :] if x]
        label = row[block.line]
        if strength(label) >= 0.5 and plain(label):
            names = parse_label(label).names
            if any("part_number" in p.keys for p in names) and texts:
                return False
            return bool(texts) and any(is_figure(x) for x in texts)
        if texts and not label and not any(is_figure(x) for x in texts):
            return False
        if texts and label and not any(is_figure(x) for x in texts):
            return False
    return False
