"""Workbooks: which sheets are read, and the older binary kinds."""

import io
import json
import subprocess
import sys
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from .archive import Archive
from .binary import OLE_MAGIC, check_xls, check_xlsb
from .cells import clean, column_name, even, some
from .grid import Grid, Span, Stored, TableError
from .numberformat import plain
from .source import Source

_MOST_OLE = 100_000_000
_MOST_ZIP = 200_000_000
_MOST_SECONDS = 30
_BINARY_REMARK = (
    "of this kind of workbook only stored values are read: units in number formats, hidden rows "
    "and columns, and errors in formulas can't be seen; XLSX tells them"
)


@dataclass(frozen=True, slots=True)
class _Sheet:
    """A sheet of a binary workbook: merged ranges as (top, left), (bottom, right) from 0."""

    name: str
    hidden: bool
    merged: list[tuple[tuple[int, int], tuple[int, int]]]
    rows: list[list[Any]]


def read_workbook(source: Source, sheet: str | None) -> tuple[str, list[Grid], list[str]]:
    """(format, grids, sheets passed over) of an XLSX, XLSM, XLSB, ODS or XLS file."""
    if source.survey.head.startswith(OLE_MAGIC):
        return "xls", *_read_xls(source, sheet)
    # In memory: a long sheet is still being read when this function has returned.
    archive = Archive(io.BytesIO(source.read(_MOST_ZIP, "workbook")), source.name)
    if "xl/workbook.bin" in archive:
        archive.prove()
        check_xlsb(archive)
        return "xlsb", *_read_binary(source, sheet)
    if "xl/workbook.xml" in archive:
        return "xlsx", *_read_xlsx(archive, sheet)
    if "content.xml" in archive and _is_spreadsheet(archive):
        return "ods", *_read_ods(archive, sheet)
    raise TableError(
        f"{source.name}: is a zip archive but no workbook; unpack it and name the files in it"
    )


def _is_spreadsheet(archive: Archive) -> bool:
    if "mimetype" not in archive:
        return True
    return b"spreadsheet" in archive.read("mimetype", 1000)


def choose(
    name: str, sheets: list[tuple[str, bool]], wanted: str | None
) -> tuple[list[int], list[str]]:
    """Which of the sheets (name, hidden) to read, and a line for each hidden one passed over.

    A sheet that is asked for by name is read even when hidden.
    """
    if wanted is not None:
        exact = [i for i, (title, _) in enumerate(sheets) if title == wanted]
        folded = wanted.strip().casefold()
        found = exact or [
            i for i, (title, _) in enumerate(sheets) if title.strip().casefold() == folded
        ]
        if not found:
            titles = some([f"“{title}”" for title, _ in sheets], 30) or "none"
            raise TableError(f"{name}: has no sheet “{wanted}”; its sheets are {titles}")
        return found[:1], []
    shown = [i for i, (_, hidden) in enumerate(sheets) if not hidden]
    return shown, [f"sheet “{title}”: is hidden" for title, hidden in sheets if hidden]


def _collect(
    name: str,
    sheets: list[tuple[str, bool]],
    wanted: str | None,
    read: Callable[[int], Grid],
) -> tuple[list[Grid], list[str]]:
    chosen, skipped = choose(name, sheets, wanted)
    grids: list[Grid] = []
    for i in chosen:
        grid = read(i)
        if not grid.rows:
            skipped.append(f"sheet “{sheets[i][0]}”: is empty")
            continue
        if sheets[i][1]:
            grid.remarks.append("this sheet is hidden; it is read because it was asked for")
        grids.append(grid)
    if not grids:
        raise TableError(f"{name}: has no sheet with visible cells ({'; '.join(skipped[:5])})")
    return grids, skipped


def _read_xlsx(archive: Archive, wanted: str | None) -> tuple[list[Grid], list[str]]:
    from .xlsx import Workbook

    book = Workbook(archive)
    sheets = [(sheet.name, sheet.hidden) for sheet in book.sheets]
    grids, skipped = _collect(archive.name, sheets, wanted, lambda i: book.grid(book.sheets[i]))
    return grids, skipped + book.passed


def _read_ods(archive: Archive, wanted: str | None) -> tuple[list[Grid], list[str]]:
    from .ods import Document

    document = Document(archive)
    sheets = [(sheet.name, sheet.hidden) for sheet in document.sheets]
    return _collect(archive.name, sheets, wanted, lambda i: document.grid(document.sheets[i]))


def _read_xls(source: Source, wanted: str | None) -> tuple[list[Grid], list[str]]:
    data = source.read(_MOST_OLE, "workbook of the old kind")
    check_xls(data, source.name)
    return _read_binary(source, wanted)


def _read_binary(source: Source, wanted: str | None) -> tuple[list[Grid], list[str]]:
    data = source.read(_MOST_OLE, "workbook of this kind")
    try:
        child = subprocess.run(
            [sys.executable, "-P", str(Path(__file__).with_name("binary_child.py"))],
            input=data,
            capture_output=True,
            timeout=_MOST_SECONDS,
            check=False,
        )
    except subprocess.TimeoutExpired:
        raise TableError(
            f"{source.name}: takes more than {_MOST_SECONDS} s to open; save it as XLSX"
        ) from None
    sheets: list[_Sheet] = []
    complete = child.returncode == 0
    try:
        lines = map(json.loads, child.stdout.splitlines())
        for head in lines:
            if isinstance(head, dict):
                raise _unreadable(source.name, head["error"])
            sheets.append(_Sheet(head[0], head[1], head[2], list(iter(lines.__next__, None))))
    except (ValueError, StopIteration):
        complete = False
    if not complete:
        raise _unreadable(source.name, "")
    named = [(sheet.name, sheet.hidden) for sheet in sheets]
    return _collect(source.name, named, wanted, lambda i: _of_values(sheets[i]))


def _unreadable(name: str, reason: str) -> TableError:
    if "password" in reason.lower() or "encrypt" in reason.lower():
        return TableError(f"{name}: is protected by a password; save it without one")
    first = reason.split("\n")[0][:120]
    return TableError(
        f"{name}: the workbook is damaged{f' ({first})' if first else ''}; save it again as XLSX"
    )


def _of_values(sheet: _Sheet) -> Grid:
    dates: list[str] = []
    rows = [
        [_text(value, i, j, dates) for j, value in enumerate(row, 1)]
        for i, row in enumerate(sheet.rows, 1)
    ]
    spans = [
        Span(top, left, bottom - top + 1, right - left + 1)
        for (top, left), (bottom, right) in sheet.merged
    ]
    remarks = [_BINARY_REMARK]
    if dates:
        remarks.append(
            f"dates in {some(dates)}: a spreadsheet may have made them of a figure such as 6-12; "
            "they are no numbers"
        )
    return even(rows, sheet=sheet.name, spans=spans, remarks=remarks)


def _text(value: Any, row: int, column: int, dates: list[str]) -> str:
    if isinstance(value, str):
        return clean(value)
    if isinstance(value, bool):
        return str(value).upper()
    if isinstance(value, list):
        dates.append(f"{column_name(column)}{row}")
        return f"{value[0]} {value[1]}".removesuffix(" 00:00:00")
    return Stored(plain(float(value)))
