"""Operating points laid out as a matrix: the points down (or across), the figures across (or down)."""

from .blocks import Block
from .cells import is_figure
from .heads import HeadCell, head_field
from .label import parse_label
from .model import Table
from .phrase import section_of


def points_table(block: Block) -> Table | None:
    """One motor's points as a table of fields, if the block is such a matrix; else None."""
    rows = block.rows
    if len(rows) > 40 or len(rows) < 3 or block.width > 40:
        return None
    for r in range(min(3, len(rows) - 2)):
        head = rows[r]
        generics = [
            c
            for c in range(1, block.width)
            if any(p.generic and not p.section for p in parse_label(head[c]).names)
        ]
        down = [i for i in range(r + 1, len(rows)) if section_of(rows[i][0])]
        body = [i for i in range(r + 1, len(rows)) if any(is_figure(t) for t in rows[i][1:])]
        if len(generics) >= 2 and len(down) >= 2 and len(down) >= 0.7 * len(body):
            return _matrix(block, r, generics, down)
    return None


def _matrix(block: Block, head: int, columns: list[int], points: list[int]) -> Table:
    table = Table("rows", [], [block.row_numbers[points[0]]])
    rows = block.rows
    table.titles = [" ".join(t for t in row if t) for row in rows[:head]]
    between = range(head + 1, points[0])
    for i in points:
        for c in range(1, block.width):
            if not rows[i][c] or not rows[head][c]:
                continue
            cells: list[HeadCell] = [("caption", rows[i][0]), ("name", rows[head][c])]
            cells += [("unit", rows[k][c]) for k in between if rows[k][c]]
            field = head_field(
                cells, [rows[i][c]], block.row_numbers[i], block.column_numbers[c], joins=False
            )
            field.places = [block.row_numbers[i]]
            field.source = c
            table.fields.append(field)
    table.notes = [" ".join(t for t in row if t) for row in rows[points[-1] + 1 :]]
    return table
