"""CSV and its kin: the delimiter by evidence, long files in chunks from disk."""

import csv
import io
import re
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import islice

from .cells import CHUNK_ROWS, CONTROL, HEAD_ROWS
from .encoding import Encoding
from .grid import Grid, TableError
from .source import Source

DELIMITERS = ",;\t|"
_NAMES = {",": "comma", ";": "semicolon", "\t": "tab", "|": "bar"}
_SNIFFED_ROWS = 300
_BATCH_ROWS = 500  # so few that the cells stay in the processor's cache while they are stripped
_LONGEST_LINE = 2 << 20
_LONGEST_QUOTE = 200
_NUMBER = re.compile(r"[+\-−]?[\d][\d.,'’ ]*(?:[eE][+-]?\d+)?\s*%?$")
_WIDE_BLANK = re.compile(r"\S {3,}\S")
_STATED = re.compile(r"sep=(.)\r?\n?$", re.IGNORECASE)
_RULE_CELL = re.compile(r":?[-=─━+]{3,}:?$")


@dataclass(frozen=True, slots=True)
class Dialect:
    """A delimiter, whether quotation marks enclose cells, and how well both fit (0 … 1)."""

    delimiter: str
    quoted: bool
    fit: float


def sniff(sample: str) -> Dialect | None:
    """The delimiter whose cells make the most even table of a file's first lines.

    None where no delimiter gives at least two columns. Lines before the table, a unit row
    and line breaks inside quoted cells do not matter; decimal commas count against the comma,
    because they leave other delimiters inside the cells.
    """
    lines = sample.splitlines(keepends=True)
    if lines and (stated := _STATED.match(lines[0])):
        return Dialect(stated[1], True, 1.0)
    best: Dialect | None = None
    for delimiter in DELIMITERS:
        if delimiter not in sample:
            continue
        either = '"' in sample and not _quotes_cells(sample, delimiter)
        for quoted in (True, False) if either else (True,):
            fit = _fit(lines, delimiter, quoted)
            # Quotation marks mean quoting unless the table is plainly more even without it.
            if fit and (best is None or fit > best.fit + (0.05 if not quoted else 1e-9)):
                best = Dialect(delimiter, quoted, fit)
    return best


def _quotes_cells(sample: str, delimiter: str) -> bool:
    """Whether all quotation marks enclose cells, some of which hold the delimiter.

    A mark with the delimiter behind it encloses nothing: it is a ditto mark.
    """
    mark = re.escape(delimiter)
    cell = re.compile(
        rf'(?:(?<={mark})|^)"(?!{mark}|\s*\n)(?P<text>(?:[^"]|"")*)"(?={mark}|\r?$)', re.M
    )
    inside = any(delimiter in found["text"] for found in cell.finditer(sample))
    return inside and '"' not in cell.sub("", sample)


def _fit(lines: list[str], delimiter: str, quoted: bool) -> float:
    try:
        rows = list(islice(_reader(lines, delimiter, quoted), _SNIFFED_ROWS))
    except csv.Error:
        return 0.0
    rows = [row for row in rows if any(cell.strip() for cell in row)]
    counts: dict[int, int] = {}
    for row in rows:
        if len(row) > 1:
            counts[len(row)] = counts.get(len(row), 0) + 1
    if not counts:
        return 0.0
    width = max(counts, key=lambda n: (counts[n], n))
    even = counts[width] / len(rows)
    cells = [cell.strip() for row in rows if len(row) == width for cell in row]
    filled = [cell for cell in cells if cell]
    if not filled:
        return 0.0
    foreign = sum(
        _WIDE_BLANK.search(cell) is not None
        or (not quoted and '"' in cell)
        or any(sign in cell for sign in ";\t|" if sign != delimiter)
        or (quoted and "\n" in cell and delimiter in cell)
        for cell in filled
    )
    numbers = sum(_NUMBER.match(cell) is not None for cell in filled)
    return even * (1 - foreign / len(filled)) * (0.8 + 0.2 * numbers / len(filled))


def _reader(lines: Iterator[str] | list[str], delimiter: str, quoted: bool) -> Iterator[list[str]]:
    quoting = csv.QUOTE_MINIMAL if quoted else csv.QUOTE_NONE
    return csv.reader(lines, delimiter=delimiter, quoting=quoting)


def read_delimited(source: Source, encoding: Encoding, dialect: Dialect) -> Grid:
    """The table of a delimited file: a head of rows, and the rest as its continuation.

    Rows count the file's records, as a spreadsheet that opens the file shows them.
    """
    survey = source.survey
    if survey.longest_line > _LONGEST_LINE:
        raise TableError(
            f"{source.name}: has a line of {survey.longest_line / 1e6:.0f} MB; "
            "a table has one line a row"
        )
    remarks = [encoding.remark] if encoding.remark else []
    if not dialect.quoted:
        remarks.append("quotation marks are read as signs, since they do not enclose cells")
    records = _records(source, encoding, dialect, remarks)
    numbers: list[int] = []
    rows: list[list[str]] = []
    for some_numbers, some_rows in records:
        numbers += some_numbers
        rows += some_rows
        if len(rows) >= HEAD_ROWS:
            break
    more = len(rows) >= HEAD_ROWS
    width = 0
    for row in rows:
        last = len(row)
        while last > width and not row[last - 1]:
            last -= 1
        width = max(width, last)
    for i, row in enumerate(rows):
        if len(row) != width:
            rows[i] = row[:width] + [""] * (width - len(row))
    return Grid(
        rows,
        numbers,
        list(range(1, width + 1)),
        remarks=remarks,
        continuation=_rest(records, width) if more else None,
    )


def _rest(
    records: Iterator[tuple[list[int], list[list[str]]]], width: int
) -> Iterator[tuple[list[int], list[list[str]]]]:
    for numbers, rows in records:
        for i, row in enumerate(rows):
            excess = len(row) - width
            if excess < 0:
                rows[i] = row + [""] * -excess
            elif excess:
                last = len(row)
                while last > width and not row[last - 1]:
                    last -= 1
                rows[i] = row[:last]
        yield numbers, rows


def _records(
    source: Source, encoding: Encoding, dialect: Dialect, remarks: list[str]
) -> Iterator[tuple[list[int], list[list[str]]]]:
    """Chunks of (row numbers, stripped rows), the first of HEAD_ROWS; no empty rows at the end."""
    survey = source.survey
    with (
        source.open() as binary,
        io.TextIOWrapper(binary, encoding.codec, encoding.errors, newline="") as stream,
    ):
        lines: Iterator[str] = iter(stream)
        if survey.has_controls or encoding.codec.startswith(("utf-16", "utf-32", "latin")):
            lines = (CONTROL.sub("", line) for line in stream)
        reader = csv.reader(
            lines,
            delimiter=dialect.delimiter,
            quoting=csv.QUOTE_MINIMAL if dialect.quoted else csv.QUOTE_NONE,
        )
        number, size, held = 0, HEAD_ROWS, []
        while True:
            before = reader.line_num
            rows = held
            first = number + 1 - len(held)
            try:
                while len(rows) < size and (some := list(islice(reader, _BATCH_ROWS))):
                    rows += [list(map(str.strip, row)) for row in some]
            except csv.Error as error:
                raise TableError(
                    f"{source.name}: line {reader.line_num} can't be read ({error}); "
                    "perhaps a quotation mark is not closed"
                ) from None
            new = first + len(rows) - 1 - number
            if not new:
                return
            number += new
            if reader.line_num - before > new:
                _unify_line_breaks(source, rows, first)
            if survey.has_inert:
                rows = [[_live(cell) for cell in row] for row in rows]
            numbers = list(range(first, first + len(rows)))
            if first == 1:
                _drop_furniture(numbers, rows, dialect, remarks)
            end = len(rows)
            while end and not any(rows[end - 1]):
                end -= 1
            held = rows[end:]
            if end:
                yield numbers[:end], rows[:end]
            size = CHUNK_ROWS


def _unify_line_breaks(source: Source, rows: list[list[str]], first: int) -> None:
    """Cells of several lines: every break becomes '\\n', an endless cell an error."""
    for i, row in enumerate(rows):
        for j, cell in enumerate(row):
            if "\r" in cell:
                cell = row[j] = cell.replace("\r\n", "\n").replace("\r", "\n")
            if cell.count("\n") > _LONGEST_QUOTE:
                raise TableError(
                    f"{source.name}: row {first + i}: a quotation mark is opened and not closed "
                    f"within {_LONGEST_QUOTE} lines"
                )


def _live(cell: str) -> str:
    """Take off the apostrophe that keeps a spreadsheet from running a text as a formula."""
    return cell[1:] if cell[:1] == "'" and cell[1:2] in {"=", "+", "-", "@"} else cell


def _drop_furniture(
    numbers: list[int], rows: list[list[str]], dialect: Dialect, remarks: list[str]
) -> None:
    """Leave out what is no row: the line that states the delimiter, ruled lines of a bar table."""
    if rows and rows[0] and rows[0][0].lower().startswith("sep=") and not any(rows[0][1:]):
        del numbers[0], rows[0]
        remarks.append(f"line 1 states the delimiter ({_NAMES.get(dialect.delimiter, 'other')})")
    if dialect.delimiter != "|":
        return
    kept = [i for i, row in enumerate(rows) if not _is_rule(row)]
    numbers[:] = [numbers[i] for i in kept]
    rows[:] = [rows[i] for i in kept]
    if all(not row[0] for row in rows if len(row) > 2):
        rows[:] = [row[1:] if row and not row[0] else row for row in rows]


def _is_rule(row: list[str]) -> bool:
    filled = [cell for cell in row if cell]
    return bool(filled) and all(_RULE_CELL.match(cell) for cell in filled)
