"""A block whose headings stand in a column → a Table: one motor a column."""

import re

from ....schema.figure.signs import plain
from ....schema.vocabulary import quantity
from ..cells import is_caption, is_figure, is_role, is_symbol, strength
from ..headings.label import parse_label
from ..headings.phrase import match_phrase, part_of, section_of
from ..model import Table
from .blocks import Block
from .columns_head import (
    header_rows,
    heads_quantity,
    joined_ids,
    one_motor_in_two_systems,
    roles_of_columns,
    spread_conditions,
    usual_columns,
)
from .conditions import fold_conditions
from .heads import HeadCell, head_field
from .lines import text_of
from .parts import mark_other_parts

_LABEL_AND_FIGURE = re.compile(r"([^\d:]{3,60}?)(?:\s*[:=]\s*|\s+)([<>≤≥~]?\s?\d[\d.,]*\s?\S.*)$")

_BARE = re.compile(r"[\d.,\s]+")
"""A figure under "Tolerance" or "Remark" that says nothing of the heading: it is listed."""


def lay_out_columns(block: Block) -> Table:
    """The table of a block whose headings stand in a column."""
    label_column = block.line
    roles = one_motor_in_two_systems(block, roles_of_columns(block, label_column))
    rows = block.rows
    values = [c for c, role in enumerate(roles) if role == "value"]
    first = next((i for i, row in enumerate(rows) if heads_quantity(row, label_column, values)), 0)
    part = _part_above(rows[:first])
    first = first if part is None else part + 1
    values = [c for c in values if any(row[c] for row in rows[first:])]
    ends = usual_columns(rows, first, values)
    values = values if ends is None else ends[2]
    id_row, condition_row = header_rows(rows, first, label_column, values)
    if ends is not None:
        id_row, condition_row = ends[0], None
    if part is not None:
        id_row = condition_row = None
    between = None if id_row is None else _between(rows, id_row, values)
    values = [c for c in values if c != between]
    conditions = [rows[condition_row][c] for c in values] if condition_row is not None else None
    joined = None
    if id_row is not None and conditions is None:
        joined = joined_ids(rows, first, id_row, label_column, values)
    if id_row is not None and conditions is None and joined is None:
        condition_row, conditions = spread_conditions(rows, first, id_row, values)
    table = Table("columns", [], [block.column_numbers[c] for c in values])
    table.titles = [
        text_of(row)
        for i, row in enumerate(rows[:first])
        if i not in (id_row, condition_row) and not (joined and i == joined[1])
    ]
    if ends is not None:
        table.remarks.append("of smallest, usual and largest figures the usual ones are read")
    if joined is not None:
        table.remarks.append("the part numbers are joined from two rows, type and winding")
    caption = [] if part is None else [text_of(rows[part])]
    captioned = -2
    for i, row in enumerate(rows):
        if i in (id_row, condition_row):
            if i == id_row:
                table.part_numbers = list(joined[0]) if joined else [row[c] or None for c in values]
            continue
        if i < first and not (row[label_column] and any(is_figure(row[c]) for c in values)):
            if (
                id_row is not None
                and i > id_row
                and row[label_column]
                and not any(row[c] for c in values)
            ):
                caption, captioned = [row[label_column]], i
            continue
        shared = "" if between is None else row[between]
        texts = [shared or row[c] for c in values]
        label = row[label_column]
        pair = figure_behind(label) if len(values) == 1 and not any(texts) else None
        if pair is not None:
            label, texts = pair[0], [pair[1]]
            row = [*row[:label_column], label, *row[label_column + 1 :]]
        groups = [row[c] for c, role in enumerate(roles) if role == "group" and row[c]]
        spanning = len({t for t in row if t}) == 1 and sum(1 for t in row if t) > 1
        if (spanning or not any(texts)) and label:
            if _is_note(label, i, rows, label_column, values):
                table.notes.append(text_of(row))
                continue
            units = [row[c] for c, role in enumerate(roles) if role == "unit" and row[c]]
            if strength(label) >= 0.9 and units and not spanning:
                continue  # a quantity with no figure for any motor
            keys = {k for p in parse_label(label).names for k in p.keys}
            measured = any(not quantity(k).text for k in keys)
            bare = not re.search(r"\d", label)  # "Mains voltage 400 VAC" heads what it holds for
            if measured and bare and not (spanning or section_of(label) or is_caption(label)):
                continue
            caption, captioned = [label], i
            continue
        if not any(texts):
            if any(row):  # a text beside the labels
                table.notes.append(text_of(row))
            continue
        cells: list[HeadCell] = [("caption", c) for c in [*caption, *groups]]
        for c, role in enumerate(roles):
            if role in ("unit", "symbol", "label") and row[c]:
                kind = {"unit": "unit", "symbol": "symbol", "label": "name"}[role]
                if kind == "symbol" and not is_symbol(row[c]) and strength(row[c]) > 0.8:
                    kind = "name"
                cells.append((kind, row[c]))
            elif role == "remark" and row[c] and not _BARE.fullmatch(plain(row[c])):
                cells.append(("caption", row[c]))
        cells.sort(key=lambda cell: cell[0] != "caption")
        if not label and not [k for k, _ in cells if k in ("name", "symbol")]:
            cells.append(("name", ""))
        field = head_field(
            cells,
            texts,
            block.row_numbers[i],
            block.column_numbers[label_column],
            joins=captioned == i - 1,
        )
        if caption and caption[0] not in field.captions:
            caption = []  # it was the first line of this very name
        field.source = i
        if shared and between is not None:
            field.places = [block.column_numbers[between]] * len(values)
        table.fields.append(field)
    if id_row is None and len(values) == 1 and (code := _corner(rows[:first], label_column)):
        table.part_numbers = [code]
    if id_row is not None:
        mark_other_parts(table, rows[id_row][label_column])
    if conditions is not None:
        table.part_numbers = table.part_numbers or [None] * len(values)
        fold_conditions(table, conditions)
    return table


def _between(rows: list[list[str]], id_row: int, values: list[int]) -> int | None:
    """The column without a motor that holds what is printed once, centred under all motors."""
    lone = [c for c in values if not rows[id_row][c]]
    if len(lone) != 1 or lone[0] in (values[0], values[-1]):
        return None
    beside = [row[c] for row in rows if row[lone[0]] for c in values if c != lone[0]]
    return None if any(beside) else lone[0]


_CODE = re.compile(r"(?=\S*\d)(?=\S*[^\W\d_])[\w./+-]{3,30}")


def _corner(head: list[list[str]], label_column: int) -> str | None:
    """The part number that stands where the heading of the names would: "QX-22, Value, Unit"."""
    for row in head:
        corner = plain(row[label_column])
        roles = all(any(is_role(t, r) for r in ("value", "unit")) for t in row if t and t != corner)
        if _CODE.fullmatch(corner) and roles and strength(corner) < 0.5:
            return corner
    return None


def _part_above(rows: list[list[str]]) -> int | None:
    """The row above all figures that says they are another part's ("Encoder EN-5"), or None."""
    lone = [i for i, row in enumerate(rows) if len({t for t in row if t}) == 1]
    return lone[-1] if lone and part_of(text_of(rows[lone[-1]])) else None


def figure_behind(text: str) -> tuple[str, str] | None:
    """The name of something measured and the figure behind it in one cell, or None: "Winding at
    125 °C" has none."""
    pair = _LABEL_AND_FIGURE.match(plain(text))
    if pair is None:
        return None
    phrase = match_phrase(pair[1])
    measured = phrase.score >= 0.95 and any(not quantity(k).text for k in phrase.keys)
    return (pair[1], pair[2]) if measured else None


def _is_note(
    label: str, i: int, rows: list[list[str]], label_column: int, values: list[int]
) -> bool:
    """Whether a text without figures is a note: long, marked, or with nothing behind it."""
    clean = plain(label)
    below = any(any(r[c] for c in values) and r[label_column] for r in rows[i + 1 :])
    if not below:
        return True
    return bool(re.match(r"(?:[*†‡]|\^?\(?\d{1,2}\)|note|hinweis|注|※)", clean, re.IGNORECASE)) or (
        len(clean) > 70
    )
