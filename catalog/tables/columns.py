"""Columns from positions: pieces of text on lines, told apart by where they stand."""

import re
from dataclasses import dataclass

from .grid import Span


@dataclass(slots=True)
class Piece:
    """A run of text from x0 to x1 on one line (points on a page, characters in a text)."""

    x0: float
    x1: float
    text: str


Interval = tuple[float, float]


@dataclass(slots=True)
class Table:
    """Rows of cells, the merged ones among them, and how many pieces had to share a cell."""

    rows: list[list[str]]
    spans: list[Span]
    clashes: int


def find_columns(lines: list[list[Piece]]) -> list[Interval]:
    """The x-intervals of the columns of a table, from its fuller lines.

    Where no line (or only one in ten) has text, there is a gap between two columns. Lines with
    few pieces (titles, captions, group headings) are left out, since their text runs over gaps.
    """
    most = max((len(line) for line in lines), default=0)
    if most < 2:
        pieces = [piece for line in lines for piece in line]
        return [(min(p.x0 for p in pieces), max(p.x1 for p in pieces))] if pieces else []
    full = [line for line in lines if len(line) >= max(2, 0.6 * most)]
    tolerated = len(full) // 10
    edges = sorted(
        edge for line in full for piece in line for edge in ((piece.x0, 1), (piece.x1, -1))
    )
    columns: list[Interval] = []
    cover, start = 0, 0.0
    for x, step in edges:
        before, cover = cover, cover + step
        if before <= tolerated < cover:
            start = x
        elif cover <= tolerated < before:
            columns.append((start, x))
    for line in full:
        for piece in line:
            if not _touched(piece, columns):
                columns.append((piece.x0, piece.x1))
                columns.sort()
    return columns


def _touched(piece: Piece, columns: list[Interval]) -> list[int]:
    """The columns under a piece; a slight overlap beside a main one does not count."""
    overlaps = [min(piece.x1, right) - max(piece.x0, left) for left, right in columns]
    best = max(overlaps, default=0.0)
    if best <= 0:
        return []
    return [
        i
        for i, (overlap, (left, right)) in enumerate(zip(overlaps, columns, strict=True))
        if overlap == best or overlap > 0.5 * (right - left)
    ]


def arrange(lines: list[list[Piece]], columns: list[Interval]) -> Table:
    """Every piece in its column; one over several columns becomes a span from its first."""
    columns = list(columns)
    for line in lines:
        for piece in line:
            if not _touched(piece, columns):
                columns.append((piece.x0, piece.x1))
                columns.sort()
                columns = _joined(columns)
    table = Table([], [], 0)
    for i, line in enumerate(lines):
        row = [""] * len(columns)
        taken: set[int] = set()
        touched = [_touched(piece, columns) for piece in line]
        for j, piece in enumerate(line):
            others = {c for k, cs in enumerate(touched) if k != j for c in cs[:1]}
            mine = touched[j]
            if mine[0] in taken and len(mine) > 1:
                mine = [c for c in mine if c not in taken] or mine[:1]
            end = 1
            while end < len(mine) and mine[end] not in others:
                end += 1
            first = mine[0]
            if row[first]:
                row[first] += " " + piece.text
                table.clashes += 1
            else:
                row[first] = piece.text
            taken.update(mine[:end])
            if end > 1:
                table.spans.append(Span(i, first, 1, mine[end - 1] - first + 1))
        table.rows.append(row)
    return table


def _joined(columns: list[Interval]) -> list[Interval]:
    out: list[Interval] = []
    for left, right in columns:
        if out and left < out[-1][1]:
            out[-1] = (out[-1][0], max(right, out[-1][1]))
        else:
            out.append((left, right))
    return out


def fits(columns: list[Interval], other: list[Interval]) -> bool:
    """Whether two tables have the same columns: as many, each overlapping its partner only."""
    if len(columns) != len(other) or len(columns) < 2:
        return False
    for i, (left, right) in enumerate(columns):
        under = [j for j, (a, b) in enumerate(other) if min(right, b) > max(left, a)]
        if under != [i]:
            return False
    return True


def lies_in(columns: list[Interval], other: list[Interval]) -> bool:
    """Whether every column overlaps one column of another table, and no two the same one."""
    found: list[int] = []
    for left, right in columns:
        under = [j for j, (a, b) in enumerate(other) if min(right, b) > max(left, a)]
        if len(under) != 1 or under[0] in found:
            return False
        found += under
    return True


_NOTED = re.compile(r"[(\[]\d{1,2}[)\]]\s*\S")
"""A footnote behind its mark."""


def join_split_labels(
    rows: list[list[str]], numbers: list[int], spans: list[Span]
) -> tuple[list[list[str]], list[int], list[Span]]:
    """Put labels together that were broken over two lines.

    A lone label that ends in a hyphen, or is followed by one in lower case or in brackets,
    goes on in the row below ("Drehmoment-" + "konstante"); the values stand in either row.
    Tables whose labels all begin in lower case are left alone but for hyphens.
    """
    by_case = _begin_high([row for row in rows if row and row[0]]) or _begin_high(
        [row for row in rows if row and row[0] and any(row[1:])]
    )
    out_rows: list[list[str]] = []
    out_numbers: list[int] = []
    moved: list[int] = []
    for row, number in zip(rows, numbers, strict=True):
        if out_rows and row and row[0] and out_rows[-1] and out_rows[-1][0]:
            above = out_rows[-1]
            label, rest = above[0], row[0]
            lone = not any(above[1:]) or not any(row[1:])
            valued = any(above[1:]) or any(row[1:])
            hyphen = len(label) > 2 and label[-1] in "-\xad" and label[-2].isalpha()
            goes_on = rest[0].islower() or rest[0] in "(["
            starts_on = by_case and goes_on and not _NOTED.match(rest)
            if lone and valued and ((hyphen and rest[0].islower()) or starts_on):
                joined = label[:-1] + rest if hyphen else f"{label} {rest}"
                values = row[1:] if any(row[1:]) else above[1:]
                out_rows[-1] = [joined, *values]
                moved.append(len(out_rows) - 1)
                continue
        out_rows.append(row)
        out_numbers.append(number)
        moved.append(len(out_rows) - 1)
    kept = [Span(moved[s.row], s.column, s.rows, s.columns) for s in spans]
    # A label that ran over the columns beside it no longer does once values stand there.
    kept = [
        s
        for s in kept
        if not any(out_rows[s.row][c] for c in range(s.column + 1, s.column + s.columns))
    ]
    return out_rows, out_numbers, kept


def _begin_high(rows: list[list[str]]) -> bool:
    """Whether few labels begin in lower case."""
    return sum(row[0][0].islower() for row in rows) <= 0.3 * len(rows)
