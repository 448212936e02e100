"""What every reader does with cell texts: clean them, and build a grid of even rows."""

import re
from collections.abc import Iterable, Mapping

from .grid import Grid, Span, TableError

HEAD_ROWS = 5_000
"""A grid holds this many rows; what follows comes from its continuation."""
CHUNK_ROWS = 20_000
MOST_CELLS = 4_000_000
"""A grid spread wider than this is no table: most of it would be empty cells."""
_BLANK_RUN = 2

CONTROL = re.compile(r"[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x84\x86-\x9f\ufeff\ufffe\uffff]")
_LINE_END = re.compile("\r\n?|[\x85\u2028\u2029]")

_SUPER = dict(zip("0123456789+-−–=()ni", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁻⁻⁼⁽⁾ⁿⁱ", strict=True))
_SUB = dict(zip("0123456789+-−=()", "₀₁₂₃₄₅₆₇₈₉₊₋₋₌₍₎", strict=True))


def clean(text: str) -> str:
    """The text without control characters and outer blanks; line ends become '\\n'."""
    if text.isprintable():
        return text.strip()
    return CONTROL.sub("", _LINE_END.sub("\n", text)).strip()


def superscript(text: str) -> str:
    """'2' → '²', '-4' → '⁻⁴'; what has no raised sign stands after '^'."""
    bare = text.strip()
    if not bare:
        return text
    if all(sign in _SUPER for sign in bare):
        return "".join(_SUPER[sign] for sign in bare)
    return bare if _raised_already(bare) else "^" + bare


def subscript(text: str) -> str:
    """'2' → '₂'; what has no lowered sign stands after '_' ('K' and 'T' → 'K_T')."""
    bare = text.strip()
    if not bare:
        return text
    if all(sign in _SUB for sign in bare):
        return "".join(_SUB[sign] for sign in bare)
    return "_" + bare


def _raised_already(text: str) -> bool:
    return all(sign in "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁽⁾ⁿ*†‡°®™'\"′″’”" for sign in text)


def column_name(number: int) -> str:
    """1 → 'A', 28 → 'AB'."""
    name = ""
    while number:
        number, rest = divmod(number - 1, 26)
        name = chr(65 + rest) + name
    return name


def listing(numbers: Iterable[int], most: int = 12) -> str:
    """[2, 3, 4, 9] → '2–4, 9', cut after ``most`` runs."""
    runs: list[list[int]] = []
    for number in sorted(set(numbers)):
        if runs and number == runs[-1][1] + 1:
            runs[-1][1] = number
        else:
            runs.append([number, number])
    parts = [str(a) if a == b else f"{a}–{b}" for a, b in runs[:most]]
    if len(runs) > most:
        parts.append(f"… ({sum(b - a + 1 for a, b in runs)} in all)")
    return ", ".join(parts)


def some(texts: list[str], most: int = 8) -> str:
    """The first few of a list, with the number of all where it was cut."""
    shown = ", ".join(texts[:most])
    return shown if len(texts) <= most else f"{shown}, … ({len(texts)} in all)"


def even(
    rows: list[list[str]],
    row_numbers: list[int] | None = None,
    *,
    sheet: str | None = None,
    page: int | None = None,
    spans: list[Span] | None = None,
    remarks: list[str] | None = None,
) -> Grid:
    """A grid of rows as read: all padded to one length, empty rows and columns at the end cut.

    Columns are numbered from 1; without ``row_numbers`` rows are, too.
    """
    width = 0
    for row in rows:
        last = len(row)
        while last > width and not row[last - 1]:
            last -= 1
        width = max(width, last)
    height = len(rows)
    while height and not any(rows[height - 1]):
        height -= 1
    if height * width > MOST_CELLS:
        raise TableError(
            f"{height} rows by {width} columns is too much for one table; "
            "cut the part with the motors out of it"
        )
    return Grid(
        [row[:width] + [""] * (width - len(row)) for row in rows[:height]],
        (row_numbers or list(range(1, len(rows) + 1)))[:height],
        list(range(1, width + 1)),
        sheet=sheet,
        page=page,
        spans=clipped(spans or [], height, width),
        remarks=remarks or [],
    )


def clipped(spans: Iterable[Span], height: int, width: int) -> list[Span]:
    """The spans cut to the size of a grid; those of a single cell fall away."""
    inside = []
    for span in spans:
        rows = min(span.rows, height - span.row)
        columns = min(span.columns, width - span.column)
        if rows > 0 and columns > 0 and rows * columns > 1:
            inside.append(Span(span.row, span.column, rows, columns))
    return inside


def thinned(numbers: Iterable[int], also: Iterable[int] = ()) -> list[int]:
    """Rows or columns that a sparse sheet needs: the used ones and up to two empty between.

    An empty row parts two tables; a thousand of them part them no better.
    ``also`` are the numbers to leave out (hidden ones).
    """
    out: list[int] = []
    hidden = set(also)
    previous = 0
    for number in sorted(set(numbers)):
        gap = range(previous + 1, min(number, previous + 1 + _BLANK_RUN + len(hidden)))
        out.extend([blank for blank in gap if blank not in hidden][:_BLANK_RUN])
        if number not in hidden:
            out.append(number)
        previous = number
    return out


def sparse(
    cells: Mapping[int, Mapping[int, str]],
    *,
    hidden_rows: Iterable[int] = (),
    hidden_columns: Iterable[int] = (),
    merged: Iterable[tuple[int, int, int, int]] = (),
    sheet: str | None = None,
    remarks: list[str] | None = None,
) -> Grid:
    """A grid of a sheet's filled cells {row: {column: text}}, all numbers from 1.

    ``merged`` are ranges (top, left, bottom, right). A merged cell whose corner is hidden
    shows its text in its first visible cell, as a spreadsheet does.
    """
    gone_rows, gone_columns = set(hidden_rows), set(hidden_columns)
    used_rows = [r for r, row in cells.items() if any(row.values())]
    used_columns = {c for row in cells.values() for c, text in row.items() if text}
    row_numbers = thinned(used_rows, gone_rows)
    column_numbers = thinned(used_columns, gone_columns)
    if len(row_numbers) * len(column_numbers) > MOST_CELLS:
        where = f"sheet “{sheet}”" if sheet else "the sheet"
        raise TableError(
            f"{where} spreads its cells over {len(row_numbers)} rows by {len(column_numbers)} "
            "columns, too much for one table; cut the part with the motors out of it"
        )
    row_at = {number: i for i, number in enumerate(row_numbers)}
    column_at = {number: i for i, number in enumerate(column_numbers)}
    rows = [[""] * len(column_numbers) for _ in row_numbers]
    for number, row in cells.items():
        at = row_at.get(number)
        if at is None:
            continue
        line = rows[at]
        for column, text in row.items():
            place = column_at.get(column)
            if place is not None:
                line[place] = text
    spans = []
    for top, left, bottom, right in merged:
        inside_rows = [row_at[n] for n in _within(row_numbers, top, bottom)]
        inside_columns = [column_at[n] for n in _within(column_numbers, left, right)]
        if not inside_rows or not inside_columns:
            continue
        row, column = inside_rows[0], inside_columns[0]
        if not rows[row][column]:
            rows[row][column] = cells.get(top, {}).get(left, "")
        spans.append(Span(row, column, len(inside_rows), len(inside_columns)))
    while rows and not any(rows[-1]):
        rows.pop()
        row_numbers.pop()
    return Grid(
        rows,
        row_numbers,
        column_numbers,
        sheet=sheet,
        spans=clipped(spans, len(rows), len(column_numbers)),
        remarks=remarks or [],
    )


def _within(numbers: list[int], low: int, high: int) -> list[int]:
    from bisect import bisect_left, bisect_right

    return numbers[bisect_left(numbers, low) : bisect_right(numbers, high)]
