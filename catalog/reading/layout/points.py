"""Operating points as a matrix of points and figures, and as lists of measured loads."""

from dataclasses import replace

from ..cells import is_figure
from ..headings.label import parse_label
from ..headings.phrase import section_of
from ..model import Table
from .blocks import Block
from .heads import HeadCell, head_field

_ON_THE_CURVE = ("no_load", "maximum_efficiency", "maximum_power")


def points_table(block: Block) -> Table | None:
    """One motor's points as a table of fields, if the block is such a matrix; else None."""
    if len(block.rows) > 40 or len(block.rows) < 3 or block.width > 40:
        return None
    for layout, rows in (
        ("rows", block.rows),
        ("columns", [list(c) for c in zip(*block.rows, strict=True)]),
    ):
        for r in range(min(3, len(rows) - 1)):
            head = rows[r]
            named = {
                c: found
                for c in range(1, len(head))
                if (found := {p.generic for p in parse_label(head[c]).names
                              if p.generic and not p.section})
            }  # fmt: skip
            generics = list(named)
            down = [
                i
                for i in range(r + 1, len(rows))
                if section_of(
                    rows[i][generics[0] - 1] if layout == "columns" and generics else rows[i][0]
                )
            ]
            body = [i for i in range(r + 1, len(rows)) if any(is_figure(t) for t in rows[i][1:])]
            different = len(set().union(*named.values()))  # "Speed" over "rpm" is one
            if different >= 2 and len(down) >= 2 and len(down) >= 0.7 * len(body):
                return _matrix(block, layout, rows, r, generics, down)
    return None


def _matrix(
    block: Block,
    layout: str,
    rows: list[list[str]],
    head: int,
    columns: list[int],
    points: list[int],
) -> Table:
    """The fields of a matrix whose points stand in `rows`, the block's rows or its columns."""
    across = layout == "columns"
    lines = block.column_numbers if across else block.row_numbers
    others = block.row_numbers if across else block.column_numbers
    table = Table(layout, [], [lines[points[0]]])
    name_at = columns[0] - 1 if across else 0
    between = [k for k in range(head + 1, points[0]) if not section_of(rows[k][name_at])]
    loaded = any(section_of(rows[i][name_at]) in _ON_THE_CURVE for i in points)
    for i in points:
        for c in range(name_at + 1, len(rows[head])):
            if not rows[i][c] or not rows[head][c]:
                continue
            cells: list[HeadCell] = [("caption", rows[i][name_at]), ("name", rows[head][c])]
            cells += [("unit", rows[k][c]) for k in between if rows[k][c]]
            place = (others[c], lines[head]) if across else (lines[head], others[c])
            field = head_field(cells, [rows[i][c]], *place, joins=False)
            field.places = [lines[i]]
            if field.section == "continuous_stall" and loaded:
                field.section = "stall"  # the end of the curve that begins at no load
            field.source = c
            table.fields.append(field)
    if across:
        table.titles = [_text(row) for row in block.rows[:name_at]]
        return table
    table.titles = [_text(row) for row in rows[:head]]
    table.notes = [_text(row) for row in rows[points[-1] + 1 :]]
    return table


def _text(row: list[str]) -> str:
    return " ".join(t for t in row if t)


def is_load_table(table: Table) -> bool:
    """Whether a table lists measured points: speed, torque, current … and no motor's name."""
    fields = [f for f in table.fields if any(f.texts)]
    if table.layout != "rows" or table.part_numbers or not 2 <= table.count <= 200:
        return False
    generic = [f for f in fields if any(p.generic for p in f.label.names) and f.section is None]
    return len(generic) >= 3 and len(generic) >= 0.8 * len(fields)


def load_points(table: Table, home: Table | None) -> Table | None:
    """The points of a load table as fields of the motor before it (None then), or of a new one."""
    one = home is not None and home.count == 1
    target = home if one and home is not None else Table("rows", [], [table.places[0]])
    if not one:
        target.titles, target.notes = table.titles, table.notes
        target.sheet, target.page = table.sheet, table.page
    else:
        target.notes += [*table.titles, *table.notes]
    for k, line in enumerate(table.places):
        for f in table.fields:
            if f.texts[k]:
                target.fields.append(
                    replace(
                        f, texts=[f.texts[k]], section=f"load {k + 1}", places=[line], layout="rows"
                    )
                )
    return None if one else target
