"""A block whose headings stand in rows → a Table: one motor a row."""

import re

from ....schema.figure.signs import plain
from ..cells import is_figure, is_symbol, is_unit, strength
from ..headings.label import parse_label
from ..model import Table
from .blocks import Block, is_data
from .captions import settle_sections
from .heads import HeadCell, classify, head_field
from .lines import left_of, share, text_of
from .parts import mark_other_parts

_MOST_HEAD_ROWS = 7


def lay_out_rows(block: Block) -> Table:
    """The table of a block whose headings stand in rows."""
    head = block.line
    rows = block.rows
    start = head + 1
    while start < len(rows) and start - head < _MOST_HEAD_ROWS and not is_data(rows[start]):
        start += 1
    if start >= len(rows) or start - head >= _MOST_HEAD_ROWS:
        start = head + 1
        while start < len(rows) and _kind_of_line(rows[start]) in ("unit", "symbol"):
            start += 1
    top = head
    while top > 0 and _is_caption_row(rows[top - 1], block.width):
        top -= 1
    titles = [text_of(row) for row in rows[:top]]
    kinds = []
    for r in range(top, start):
        kind = _kind_of_line([t for t in rows[r] if t]) if r != head else "name"
        kinds.append("caption" if r < head and kind == "name" else kind)
    head_rows = [
        _spread(rows[r], block, r) if kind == "caption" else rows[r]
        for r, kind in zip(range(top, start), kinds, strict=True)
    ]
    body, numbers, notes, end_sections = _body(block, start, head_rows)
    table = Table("rows", [], numbers, titles=titles, notes=notes, head=head_rows)
    table.columns = block.column_numbers
    columns: list[list[str]] = [list(c) for c in zip(*body, strict=False)] if body else []
    for c in range(block.width):
        cells: list[HeadCell] = []
        row_of = block.row_numbers[min(head, len(block.row_numbers) - 1)]
        named_at = head - top
        own = any(rows[r][c] for r in range(top, head + 1))
        for r, kind in enumerate(kinds):
            text = head_rows[r][c] if c < len(head_rows[r]) else ""
            if r == named_at and not own and any(h[c] for h in head_rows[r + 1 :]):
                text = left_of(head_rows[r], c)
            if text and not (cells and cells[-1][1] == text):
                cells.append(classify(text, kind))
        texts = columns[c] if c < len(columns) else []
        if not any(texts) and all(kind == "caption" for kind, _ in cells):
            continue
        field = head_field(cells, texts, row_of, block.column_numbers[c])
        field.source = c
        table.fields.append(field)
    settle_sections(table)
    if table.fields and not any(map(is_figure, table.fields[0].texts[:20])):
        mark_other_parts(table, table.fields[0].heading)
    if end_sections:
        table.remarks += end_sections
    return table


def _kind_of_line(texts: list[str]) -> str:
    """What a line of heading cells mostly holds: units, symbols or names."""
    units = share(texts, lambda t: is_unit(t) or plain(t) in ("-", "–", "—", "1"))
    real = share(texts, is_unit)
    if units >= 0.6 and real > 0.3 and share(texts, lambda t: strength(t) >= 0.9) < 0.4:
        return "unit"
    if share(texts, is_symbol) >= 0.6 and share(texts, lambda t: strength(t) >= 0.9) < 0.4:
        return "symbol"
    return "name"


def _is_caption_row(row: list[str], width: int) -> bool:
    """Whether a row above the headings holds captions over groups of them."""
    filled = [(i, t) for i, t in enumerate(row) if t]
    if not filled or any(is_figure(t) and not re.search(r"[^\W\d_]", t) for _, t in filled):
        return False
    distinct = {t for _, t in filled}
    if len(distinct) >= 2:
        return True
    return filled[0][0] > 0 and width > 2


def _spread(row: list[str], block: Block, r: int) -> list[str]:
    """Captions over the blank cells to their right, unless merged cells say how far they go."""
    spanned = any(fr == r for fr, _ in block.filled)
    if spanned:
        return row
    spread: list[str] = []
    current = ""
    for c, text in enumerate(row):
        below = r + 1 < len(block.rows) and block.rows[r + 1][c]
        if text and not below and _names_quantity(text):
            current = ""
            spread.append(text)
            continue
        current = text or current
        spread.append(text or current)
    return spread


def _names_quantity(text: str) -> bool:
    """Whether a caption is rather the heading of its own column."""
    return strength(text) >= 0.9 and any(p.keys for p in parse_label(text).names)


def is_short_figure(text: str) -> bool:
    """Whether a lone cell is a figure rather than a note that begins with a number."""
    return is_figure(text) and len(text) < 20 and not re.match(r"\S{1,4}\)", plain(text))


def _body(block: Block, start: int, head_rows: list[list[str]]):
    """The motors' rows, their places, and the texts that stand between and below."""
    heads = {tuple(r) for r in head_rows} | {
        tuple(r) for r in block.rows[max(0, start - len(head_rows)) : start]
    }
    body: list[list[str]] = []
    numbers: list[int] = []
    notes: list[str] = []
    remarks: list[str] = []
    for r in range(start, len(block.rows)):
        row = block.rows[r]
        filled = len(row) - row.count("")
        if filled <= 2 or not row[0]:
            texts = {t for t in row if t}
            if not texts:
                continue
            if len(texts) == 1 and block.width > 1 and not is_short_figure(*texts):
                notes.append(text_of(row))
                continue
        if tuple(row) in heads:
            remarks.append(f"row {block.row_numbers[r]}: the heading again, passed over")
            continue
        if len({t for t in row if t}) == 1 and filled > 2:
            notes.append(text_of(row))
            continue
        body.append(row)
        numbers.append(block.row_numbers[r])
    return body, numbers, notes, remarks
