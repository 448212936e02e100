"""Files to grids of text cells: one reader a format, no understanding of motors.

``read_tables`` is the way in; what it returns is described in ``grid``.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from .grid import Grid, Span, TableError, TableFile

if TYPE_CHECKING:
    from .source import Source

__all__ = ["FORMATS", "Grid", "Span", "TableError", "TableFile", "read_tables"]

FORMATS = ("csv", "tsv", "text", "json", "toml", "html")
"""Formats that standard input may have, and that a file can be told to have."""


def read_tables(
    path: Path | None,
    data: bytes | None = None,
    *,
    format: str | None = None,
    sheet: str | None = None,
) -> TableFile:
    """All tables of a file; of standard input, when ``path`` is None and ``data`` its bytes.

    ``format`` (one of FORMATS) is needed for standard input and else overrides what the
    content and the name's extension tell. ``sheet`` picks one sheet of a workbook, or one
    titled table of a page, by name whatever its case.

    Raises TableError, with one sentence that names the file, for whatever can't be read.
    """
    from . import detect
    from .source import open_source

    if format is not None and format not in FORMATS:
        raise TableError(f"format “{format}” is not known; one of {', '.join(FORMATS)} would do")
    if path is None and format is None:
        raise TableError(
            f"standard input: name its format ({', '.join(FORMATS)}), as nothing else tells it"
        )
    source = open_source(path, data)
    kind = detect.binary_kind(source)
    if kind and format:
        raise TableError(f"{source.name}: is a {kind}, not {format}; save it as a file")
    try:
        kind, grids, skipped = _read(source, kind, format, sheet)
    except TableError as error:
        if str(error).startswith(source.name):
            raise
        raise TableError(f"{source.name}: {error}") from None
    return TableFile(source.name, source.survey.sha256, kind, grids, skipped)


def _read(
    source: Source, kind: str | None, format: str | None, sheet: str | None
) -> tuple[str, list[Grid], list[str]]:
    """(format, grids, what was passed over); ``kind`` is that of a binary file, else None."""
    skipped: list[str] = []
    if kind == "workbook":
        from .workbook import read_workbook

        kind, grids, skipped = read_workbook(source, sheet)
        sheet = None
    elif kind == "pdf":
        from .pdf import read_pdf

        grids, skipped = read_pdf(source)
    elif kind == "parquet":
        from .parquet import read_parquet

        grids = read_parquet(source)
    else:
        from .plaintext import read_text_file

        kind, grids, skipped = read_text_file(source, format)
    if sheet is not None:
        grids = [_named(source.name, grids, sheet)]
    grids = [grid for grid in grids if any(any(row) for row in grid.rows)]
    if not grids:
        raise TableError(f"{source.name}: holds no table")
    return kind, grids, skipped


def _named(name: str, grids: list[Grid], sheet: str) -> Grid:
    folded = sheet.strip().casefold()
    for grid in grids:
        if grid.sheet is not None and grid.sheet.casefold() == folded:
            return grid
    titles = ", ".join(f"“{grid.sheet}”" for grid in grids if grid.sheet)
    raise TableError(
        f"{name}: has no sheet “{sheet}”; "
        + (f"its tables are {titles}" if titles else "a file of this kind has no named sheets")
    )
