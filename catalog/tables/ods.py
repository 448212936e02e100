"""OpenDocument spreadsheets: the displayed text of every cell, hidden parts left out.

Element and attribute names: OpenDocument v1.3 (OASIS), part 3, chapters 5, 6 and 9.
"""

import re
from collections.abc import Iterator
from dataclasses import dataclass, field

from lxml import etree

from .archive import Archive
from .cells import clean, column_name, listing, some, sparse, subscript, superscript
from .grid import Grid, Stored, TableError
from .numberformat import plain

_TABLE = "{urn:oasis:names:tc:opendocument:xmlns:table:1.0}"
_OFFICE = "{urn:oasis:names:tc:opendocument:xmlns:office:1.0}"
_TEXT = "{urn:oasis:names:tc:opendocument:xmlns:text:1.0}"
_STYLE = "{urn:oasis:names:tc:opendocument:xmlns:style:1.0}"
_MOST_ROWS, _MOST_COLUMNS = 1_048_576, 16_384
_MOST_CONTENT = 50_000_000
_FIGURE = re.compile(r"[+\-−]?\d(?:[\d.,'’ \xa0\u202f]*\d)?(?:[eE][+\-]?\d+)?|[+\-−]?[.,]\d+")
# Put together once: every cell is asked for them.
_CELL, _COVERED = _TABLE + "table-cell", _TABLE + "covered-table-cell"
_COLUMNS_REPEATED, _ROWS_REPEATED = (
    _TABLE + "number-columns-repeated",
    _TABLE + "number-rows-repeated",
)
_COLUMNS_SPANNED, _ROWS_SPANNED = (
    _TABLE + "number-columns-spanned",
    _TABLE + "number-rows-spanned",
)
_FORMULA, _PARAGRAPH = _TABLE + "formula", _TEXT + "p"
_VALUE, _VALUE_TYPE = _OFFICE + "value", _OFFICE + "value-type"
_NOT_SHOWN = {_OFFICE + "annotation", _TEXT + "ruby-text", _TEXT + "note-body"}

Range = tuple[int, int, int, int]


@dataclass(slots=True)
class _Found:
    """What one sheet holds."""

    cells: dict[int, dict[int, str]] = field(default_factory=dict)
    hidden_rows: set[int] = field(default_factory=set)
    hidden_columns: set[int] = field(default_factory=set)
    merged: list[Range] = field(default_factory=list)
    dates: list[str] = field(default_factory=list)
    unsolved: list[str] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class Sheet:
    """A sheet by name, whether it is shown, and its element."""

    name: str
    hidden: bool
    element: etree._Element


class Document:
    """An ODS archive whose content is parsed once."""

    def __init__(self, archive: Archive) -> None:
        self._name = archive.name
        if "META-INF/manifest.xml" in archive and b"encryption-data" in archive.read(
            "META-INF/manifest.xml"
        ):
            raise TableError(f"{archive.name}: is protected by a password; save it without one")
        content = archive.members.get("content.xml")
        if content and content.file_size > _MOST_CONTENT:
            raise TableError(
                f"{archive.name}: holds {content.file_size / 1e6:.0f} MB of cells, more than an "
                "ODS file may have here; save it as CSV or XLSX"
            )
        root = archive.xml("content.xml")
        unseen: set[str] = set()
        self._raised: dict[str, str] = {}
        for style in root.iter(_STYLE + "style"):
            name = style.get(_STYLE + "name", "")
            for item in style:
                if item.get(_TABLE + "display") == "false":
                    unseen.add(name)
                position = item.get(_STYLE + "text-position", "")
                if position.startswith(("super", "sub")):
                    self._raised[name] = position[:3]
                elif re.match(r"-?[1-9]", position):
                    self._raised[name] = "sub" if position.startswith("-") else "sup"
        self.sheets = [
            Sheet(
                table.get(_TABLE + "name") or f"sheet {i}",
                table.get(_TABLE + "style-name", "") in unseen,
                table,
            )
            for i, table in enumerate(root.iter(_TABLE + "table"), 1)
            if table.getparent() is not None and (table.getparent()).tag == _OFFICE + "spreadsheet"  # type: ignore[union-attr]
        ]

    def grid(self, sheet: Sheet) -> Grid:
        """The visible cells of a sheet as displayed, numbers with a decimal point."""
        found = _Found()
        try:
            self._read(sheet.element, found)
        except ValueError as error:
            raise TableError(f"{self._name}: the workbook is damaged ({error})") from None
        grid = sparse(
            found.cells,
            hidden_rows=found.hidden_rows,
            hidden_columns=found.hidden_columns,
            merged=found.merged,
            sheet=sheet.name,
        )
        if found.hidden_rows:
            grid.remarks.append(f"hidden rows are skipped: {listing(found.hidden_rows)}")
        used = {column for row in found.cells.values() for column in row}
        if gone := sorted(found.hidden_columns & used):
            names = some([column_name(column) for column in gone])
            grid.remarks.append(f"hidden columns are skipped: {names}")
        if found.dates:
            grid.remarks.append(
                f"dates in {some(found.dates)}: a spreadsheet may have made them of a figure "
                "such as 6-12; they are no numbers"
            )
        if found.unsolved:
            grid.remarks.append(
                f"formulas without a stored result in {some(found.unsolved)}: open the workbook "
                "in a spreadsheet and save it"
            )
        return grid

    def _read(self, table: etree._Element, found: _Found) -> None:
        column = 1
        for item in table.iter(_TABLE + "table-column"):
            repeated = _count(item, _COLUMNS_REPEATED, _MOST_COLUMNS)
            if _hidden(item) or _in_hidden_group(item, table):
                found.hidden_columns.update(
                    range(column, min(column + repeated, _MOST_COLUMNS + 1))
                )
            column += repeated
        number = 1
        for item in _rows(table):
            repeated = _count(item, _ROWS_REPEATED, _MOST_ROWS)
            row = self._row(item, number, found)
            if row:
                if repeated * len(row) > 200_000:
                    raise ValueError(f"row {number} is repeated {repeated} times")
                hidden = _hidden(item) or _in_hidden_group(item, table)
                for at in range(number, number + repeated):
                    found.cells[at] = row
                    if hidden:
                        found.hidden_rows.add(at)
            number += repeated
            if number > _MOST_ROWS + 1:
                break

    def _row(self, item: etree._Element, number: int, found: _Found) -> dict[int, str]:
        row: dict[int, str] = {}
        column = 1
        for cell in item:
            if cell.tag not in (_CELL, _COVERED):
                continue
            repeated = _count(cell, _COLUMNS_REPEATED, _MOST_COLUMNS)
            text = ""
            if cell.tag == _CELL:
                text = self._text(cell, number, column, found)
                rows = _count(cell, _ROWS_SPANNED, _MOST_ROWS)
                columns = _count(cell, _COLUMNS_SPANNED, _MOST_COLUMNS)
                if rows * columns > 1:
                    found.merged.append((number, column, number + rows - 1, column + columns - 1))
            if text:
                for at in range(column, min(column + repeated, _MOST_COLUMNS + 1)):
                    row[at] = text
            column += repeated
        return row

    def _text(self, cell: etree._Element, row: int, column: int, found: _Found) -> str:
        lines = [
            self._inline(item) if len(item) else item.text or ""
            for item in cell
            if item.tag == _PARAGRAPH
        ]
        text = clean("\n".join(lines))
        kind = cell.get(_VALUE_TYPE)
        if kind in {"float", "percentage", "currency"}:
            value = cell.get(_VALUE, "")
            if text == value:
                return Stored(text)
            shown = _with_point if kind != "percentage" else _percent
            return Stored(shown(text, value))
        if kind in {"date", "time"}:
            found.dates.append(f"{column_name(column)}{row}")
            return f"{kind} {cell.get(_OFFICE + f'{kind}-value') or text}"
        if kind is None and not text and cell.get(_FORMULA):
            found.unsolved.append(f"{column_name(column)}{row}")
            return "formula without a stored result"
        return text

    def _inline(self, item: etree._Element) -> str:
        out = [item.text or ""]
        for part in item:
            if isinstance(part.tag, str) and part.tag not in _NOT_SHOWN:
                if part.tag == _TEXT + "s":
                    out.append(" " * min(100, int(part.get(_TEXT + "c", "1"))))
                elif part.tag == _TEXT + "tab":
                    out.append(" ")
                elif part.tag == _TEXT + "line-break":
                    out.append("\n")
                else:
                    inner = self._inline(part)
                    place = self._raised.get(part.get(_TEXT + "style-name", ""))
                    if place == "sup":
                        inner = superscript(inner)
                    elif place == "sub":
                        inner = subscript(inner)
                    out.append(inner)
            out.append(part.tail or "")
        return "".join(out)


def _rows(table: etree._Element) -> Iterator[etree._Element]:
    """The rows of a sheet in order, also those in groups, but none of a table in a cell."""
    groups = (_TABLE + "table-rows", _TABLE + "table-header-rows", _TABLE + "table-row-group")
    stack = [iter(table)]
    while stack:
        for item in stack[-1]:
            if item.tag == _TABLE + "table-row":
                yield item
            elif item.tag in groups:
                stack.append(iter(item))
                break
        else:
            stack.pop()


def _hidden(item: etree._Element) -> bool:
    return item.get(_TABLE + "visibility", "visible") != "visible"


def _in_hidden_group(item: etree._Element, table: etree._Element) -> bool:
    parent = item.getparent()
    while parent is not None and parent is not table:
        if parent.get(_TABLE + "display") == "false":
            return True
        parent = parent.getparent()
    return False


def _count(item: etree._Element, name: str, most: int) -> int:
    text = item.get(name)
    if text is None:
        return 1
    if not text.isdigit() or len(text) > 9:
        raise ValueError(f"{name.rpartition('}')[2]} is “{text[:20]}”")
    return max(1, min(int(text), most))


def _with_point(text: str, value: str) -> str:
    """The displayed text with its figure written with a decimal point and no thousands marks.

    The marks depend on the locale of the one who saved the file; the stored value tells which
    is which. Where text and value do not agree (a hidden rounding), the value is taken.
    """
    try:
        number = float(value)
    except ValueError:
        return text
    match = _FIGURE.search(text)
    if not match:
        return text or plain(number)
    for digits in _readings(match[0]):
        if abs(float(digits) - number) <= 0.02 * abs(number):
            return text[: match.start()] + digits + text[match.end() :]
    return text[: match.start()] + plain(number) + text[match.end() :]


def _percent(text: str, value: str) -> str:
    bare = text.replace("%", "").strip()
    try:
        return _with_point(bare, repr(float(value) * 100)) + " %"
    except ValueError:
        return text


def _readings(figure: str) -> Iterator[str]:
    """What a displayed figure may mean, by which of its marks is the decimal mark."""
    bare = re.sub(r"['’ \xa0\u202f]", "", figure).replace("−", "-")
    for mark, thousands in ((".", ","), (",", ".")):
        digits = bare.replace(thousands, "").replace(mark, ".")
        if digits.count(".") <= 1:
            yield digits
