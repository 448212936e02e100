"""XLSX and XLSM: cells as shown, with merged ranges and what is hidden, read as a stream.

Written on lxml rather than on a workbook library, because one pass must give the number
format, the stored result and the lack of one, hidden rows and columns, and raised digits.
Element and attribute names: ECMA-376 Part 1, sections 18.2 to 18.4.
"""

import posixpath
import re
from collections.abc import Iterator
from dataclasses import dataclass, field

from lxml import etree

from . import numberformat
from .archive import FAULTS, Archive, safe_stream
from .cells import (
    CHUNK_ROWS,
    HEAD_ROWS,
    MOST_CELLS,
    clean,
    column_name,
    listing,
    some,
    sparse,
    subscript,
    superscript,
)
from .grid import Grid, Stored, TableError

_MOST_ROWS, _MOST_COLUMNS = 1_048_576, 16_384
_SHORT = re.compile(r"-?(?:0|[1-9]\d*)(?:\.\d*[1-9])?")
_MERGED = re.compile(rb'<(?:\w+:)?mergeCell\s[^>]*?ref="([A-Z]+)(\d+):([A-Z]+)(\d+)"')
_DATA_END = re.compile(rb"</(?:\w+:)?sheetData\s*>|<(?:\w+:)?sheetData\s*/>")
_ESCAPED = re.compile(r"_x([0-9A-Fa-f]{4})_")
_RELATIONSHIP = "{http://schemas.openxmlformats.org/officeDocument/2006/relationships}id"
_STRICT = "{http://purl.oclc.org/ooxml/officeDocument/relationships}id"

Range = tuple[int, int, int, int]


@dataclass(frozen=True, slots=True)
class Sheet:
    """A sheet by name, where its cells are, and whether it is shown."""

    name: str
    member: str
    hidden: bool


@dataclass(slots=True)
class _Notes:
    """Cells that are not what they seem, by kind."""

    dates: list[str] = field(default_factory=list)
    unsolved: list[str] = field(default_factory=list)
    formats: list[str] = field(default_factory=list)

    def remarks(self) -> list[str]:
        out = []
        if self.dates:
            out.append(
                f"dates in {some(self.dates)}: a spreadsheet may have made them of a figure "
                "such as 6-12; they are no numbers"
            )
        if self.unsolved:
            out.append(
                f"formulas without a stored result in {some(self.unsolved)}: open the workbook "
                "in a spreadsheet and save it"
            )
        out += self.formats[:8]
        if len(self.formats) > 8:
            out.append(f"{len(self.formats) - 8} more cells whose number format hides the number")
        return out


def _local(tag: object) -> str:
    return tag.rpartition("}")[2] if isinstance(tag, str) else ""


def _number_of(letters: str) -> int:
    number = 0
    for letter in letters:
        number = number * 26 + ord(letter) - 64
    return number


class Workbook:
    """An open XLSX archive: its sheets in order, its shared strings and number formats."""

    def __init__(self, archive: Archive) -> None:
        self._archive = archive
        book = archive.xml("xl/workbook.xml")
        targets = {
            item.get("Id"): (item.get("Type", ""), item.get("Target", ""))
            for item in archive.xml("xl/_rels/workbook.xml.rels")
        }
        self._since_1904 = any(
            _local(item.tag) == "workbookPr" and item.get("date1904") in {"1", "true"}
            for item in book
        )
        self.sheets: list[Sheet] = []
        self.passed: list[str] = []
        for item in book.iter():
            if _local(item.tag) != "sheet":
                continue
            name = item.get("name") or f"sheet {len(self.sheets) + 1}"
            kind, target = targets.get(item.get(_RELATIONSHIP) or item.get(_STRICT), ("", ""))
            if not kind.endswith("/worksheet"):
                self.passed.append(f"sheet “{name}”: holds no cells (a chart or a macro)")
                continue
            member = posixpath.normpath(posixpath.join("xl", target)).lstrip("/")
            if target.startswith("/"):
                member = posixpath.normpath(target).lstrip("/")
            hidden = item.get("state", "visible") != "visible"
            self.sheets.append(Sheet(name, member, hidden))
        parts = {kind.rpartition("/")[2]: target for kind, target in targets.values()}
        self._codes = self._formats(parts.get("styles", "styles.xml"))
        self._general = {str(i) for i, code in enumerate(self._codes) if code in {"General", "@"}}
        self._is_date = [numberformat.is_date(code) for code in self._codes]
        self._strings = self._shared(parts.get("sharedStrings", "sharedStrings.xml"))

    def _part(self, target: str) -> str:
        return target.lstrip("/") if target.startswith("/") else posixpath.join("xl", target)

    def _formats(self, target: str) -> list[str]:
        member = self._part(target)
        if member not in self._archive:
            return ["General"]
        root = self._archive.xml(member)
        custom: dict[int, str] = {}
        codes: list[str] = []
        for group in root:
            if _local(group.tag) == "numFmts":
                for item in group:
                    custom[int(item.get("numFmtId", "0"))] = item.get("formatCode", "General")
            elif _local(group.tag) == "cellXfs":
                for item in group:
                    identifier = int(item.get("numFmtId", "0"))
                    codes.append(numberformat.format_code(identifier, custom))
        return codes or ["General"]

    def _shared(self, target: str) -> list[str]:
        member = self._part(target)
        if member not in self._archive:
            return []
        strings: list[str] = []
        with self._archive.open(member) as stream:
            try:
                for item in safe_stream(stream, "{*}si"):
                    strings.append(_rich_text(item))
                    _forget(item)
            except FAULTS as error:
                raise self._archive.damaged(error) from None
        return strings

    def grid(self, sheet: Sheet) -> Grid:
        """The cells of a sheet as shown; a long sheet goes on in the grid's continuation."""
        reader = _SheetReader(self, sheet)
        chunks = reader.chunks()
        cells = next(chunks, {})
        more = len(cells) >= HEAD_ROWS
        notes = reader.notes
        grid = sparse(
            cells,
            hidden_rows=reader.hidden_rows,
            hidden_columns=reader.hidden_columns,
            merged=self._merged(sheet),
            sheet=sheet.name,
        )
        if reader.hidden_rows:
            grid.remarks.append(f"hidden rows are skipped: {listing(reader.hidden_rows)}")
        used = {column for row in cells.values() for column in row}
        if gone := sorted(reader.hidden_columns & used):
            names = some([column_name(column) for column in gone])
            grid.remarks.append(f"hidden columns are skipped: {names}")
        grid.remarks += notes.remarks()
        if more:
            grid.continuation = _rest(chunks, reader, grid)
        return grid

    def _merged(self, sheet: Sheet) -> list[Range]:
        """Merged ranges stand behind the cells: look there without parsing the cells."""
        tail = b""
        found = False
        with self._archive.open(sheet.member) as stream:
            try:
                while chunk := stream.read(1 << 20):
                    tail += chunk
                    if not found:
                        end = _DATA_END.search(tail) if b"sheetData" in tail else None
                        found = end is not None
                        tail = tail[end.end() :] if end else tail[-64:]
                    if len(tail) > 20_000_000:
                        break
            except FAULTS as error:
                raise self._archive.damaged(error) from None
        return [
            (int(m[2]), _number_of(m[1].decode()), int(m[4]), _number_of(m[3].decode()))
            for m in _MERGED.finditer(tail)
        ]

    def simple_text(self, kind: str | None, style: str | None, value: str | None) -> str | None:
        """The text of a cell that has but a value, where its format changes nothing; else None."""
        if value and (style is None or style in self._general):
            if kind == "s" and value.isdecimal() and int(value) < len(self._strings):
                return self._strings[int(value)]
            if (kind is None or kind == "n") and len(value) < 15 and _SHORT.fullmatch(value):
                return Stored(value)
        return None

    def cell_text(self, cell: etree._Element, place: str, notes: _Notes) -> str:
        """The text of a <c> element as a person sees it."""
        kind = cell.get("t", "n")
        value: str | None = None
        formula = False
        for part in cell:
            tag = _local(part.tag)
            if tag == "v":
                value = part.text
            elif tag == "f":
                formula = True
            elif tag == "is":
                value = _rich_text(part)
        if value is None or (value == "" and kind != "str"):
            if formula and kind != "str":
                notes.unsolved.append(place)
                return "formula without a stored result"
            return ""
        try:
            style = int(cell.get("s", "0"))
            code = self._codes[style]
        except (IndexError, ValueError):
            style, code = -1, "General"
        if kind == "s":
            try:
                text = self._strings[int(value)]
            except (IndexError, ValueError):
                raise TableError(
                    f"{self._archive.name}: the workbook is damaged: cell {place} names a text "
                    "that is missing"
                ) from None
            return numberformat.text_shown(text, code) if "@" in code and code != "@" else text
        if kind in {"str", "inlineStr"}:
            return clean(_unescaped(value))
        if kind == "b":
            return "TRUE" if value.strip() in {"1", "true"} else "FALSE"
        if kind == "e":
            return clean(value)
        if kind == "d":
            notes.dates.append(place)
            return "date " + clean(value).replace("T00:00:00", "")
        try:
            number = float(value)
        except ValueError:
            return clean(value)
        if code in {"General", "@"}:
            return Stored(numberformat.plain(number))
        if style >= 0 and self._is_date[style]:
            notes.dates.append(place)
            return numberformat.date_text(number, since_1904=self._since_1904)
        text, remark = numberformat.shown(number, code)
        if remark:
            notes.formats.append(f"{place}: {remark}")
        return Stored(text)


class _SheetReader:
    """One pass over a sheet: rows as {row: {column: text}} in chunks, and what is hidden."""

    def __init__(self, book: Workbook, sheet: Sheet) -> None:
        self._book = book
        self._sheet = sheet
        self.hidden_rows: set[int] = set()
        self.hidden_columns: set[int] = set()
        self.notes = _Notes()
        self._letters: dict[str, int] = {}

    def chunks(self) -> Iterator[dict[int, dict[int, str]]]:
        archive = self._book._archive
        size = HEAD_ROWS
        cells: dict[int, dict[int, str]] = {}
        filled = number = 0
        with archive.open(self._sheet.member) as stream:
            try:
                for item in safe_stream(stream, "{*}row", "{*}col"):
                    if _local(item.tag) == "col":
                        self._column(item)
                    else:
                        number = _within(item.get("r"), number + 1, _MOST_ROWS)
                        row = self._row(item, number)
                        if row:
                            cells[number] = row
                            filled += len(row)
                        if len(cells) >= size or filled > MOST_CELLS:
                            yield cells
                            cells, filled, size = {}, 0, CHUNK_ROWS
                    _forget(item)
            except FAULTS as error:
                raise archive.damaged(error) from None
        if cells:
            yield cells

    def _number(self, letters: str) -> int:
        if not letters.isascii() or not letters.isupper() or len(letters) > 3:
            raise ValueError(f"a cell has the reference {letters[:20]}")
        number = self._letters[letters] = _number_of(letters)
        return number

    def _column(self, item: etree._Element) -> None:
        if item.get("hidden") in {"1", "true"} or item.get("width") == "0":
            low = _within(item.get("min"), 1, _MOST_COLUMNS)
            high = _within(item.get("max"), low, _MOST_COLUMNS)
            self.hidden_columns.update(range(low, high + 1))

    def _row(self, item: etree._Element, number: int) -> dict[int, str]:
        row: dict[int, str] = {}
        column = 0
        plain_value = item.tag[:-3] + "v"
        book = self._book
        for cell in item:
            letters = (cell.get("r") or "").rstrip("0123456789")
            column = (
                (self._letters.get(letters) or self._number(letters)) if letters else column + 1
            )
            count = len(cell)
            if not count or column > _MOST_COLUMNS:
                continue
            text = None
            if count == 1 and cell[0].tag == plain_value:  # most cells: spares the long way
                text = book.simple_text(cell.get("t"), cell.get("s"), cell[0].text)
            if text is None:
                text = book.cell_text(cell, f"{column_name(column)}{number}", self.notes)
            if text:
                row[column] = text
        if row and (item.get("hidden") in {"1", "true"} or item.get("ht") == "0"):
            self.hidden_rows.add(number)
        return row


def _rest(
    chunks: Iterator[dict[int, dict[int, str]]], reader: _SheetReader, grid: Grid
) -> Iterator[tuple[list[int], list[list[str]]]]:
    at = {column: i for i, column in enumerate(grid.column_numbers)}
    for cells in chunks:
        numbers: list[int] = []
        rows: list[list[str]] = []
        for number, row in cells.items():
            if number in reader.hidden_rows:
                continue
            line = [""] * len(at)
            for column, text in row.items():
                if column in at:
                    line[at[column]] = text
                elif column not in reader.hidden_columns:
                    line.append(text)
            numbers.append(number)
            rows.append(line)
        if rows:
            yield numbers, rows


def _within(text: str | None, otherwise: int, most: int) -> int:
    number = int(text) if text and text.isdigit() and len(text) < 10 else otherwise
    if not 0 < number <= most:
        raise ValueError(f"row or column {number} is outside a sheet")
    return number


def _forget(item: etree._Element) -> None:
    """Free a parsed element and those before it: memory stays flat over a long sheet."""
    item.clear()
    parent = item.getparent()
    if parent is not None:
        while item.getprevious() is not None:
            del parent[0]


def _rich_text(item: etree._Element) -> str:
    """The text of a string item: raised and lowered runs kept, readings in kana left out."""
    out: list[str] = []
    for part in item:
        tag = _local(part.tag)
        if tag == "t":
            out.append(part.text or "")
        elif tag == "r":
            text, place = "", ""
            for inner in part:
                if _local(inner.tag) == "t":
                    text += inner.text or ""
                elif _local(inner.tag) == "rPr":
                    for style in inner:
                        if _local(style.tag) == "vertAlign":
                            place = style.get("val", "")
            if place == "superscript":
                text = superscript(text)
            elif place == "subscript":
                text = subscript(text)
            out.append(text)
    return clean(_unescaped("".join(out)))


def _unescaped(text: str) -> str:
    """'_x000D_' is how the format writes signs that XML can't hold."""
    if "_x" not in text:
        return text
    return _ESCAPED.sub(lambda match: chr(int(match[1], 16)), text)
