"""Files to grids of text cells: one reader a format, no understanding of motors.

``read_tables`` is the way in; what it returns is described in ``grid``.
"""

import dataclasses
from pathlib import Path
from typing import TYPE_CHECKING

from .grid import Grid, Span, TableError, TableFile

if TYPE_CHECKING:
    from .source import Source

__all__ = ["FORMATS", "Grid", "Span", "TableError", "TableFile", "read_tables"]

FORMATS = ("csv", "tsv", "text", "json", "toml", "html")
"""Formats that standard input may have, and that a file can be told to have."""

_MOST = {"text": 8_000_000, "json": 64_000_000, "toml": 8_000_000, "html": 50_000_000}


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
    skipped: list[str] = []
    if kind == "workbook":
        from .workbook import read_workbook

        kind, grids, skipped = read_workbook(source, sheet)
        sheet = None
    elif kind == "pdf":
        from .pdf import read_pdf

        grids, skipped = read_pdf(source)
    else:
        kind, grids, skipped = _read_text_file(source, format)
    if sheet is not None:
        grids = [_named(source.name, grids, sheet)]
    grids = [grid for grid in grids if any(any(row) for row in grid.rows)]
    if not grids:
        raise TableError(f"{source.name}: holds no table")
    return TableFile(source.name, source.survey.sha256, kind, grids, skipped)


def _read_text_file(source: Source, format: str | None) -> tuple[str, list[Grid], list[str]]:
    from . import delimited, detect, encoding

    survey = source.survey
    found = encoding.detect(source)
    wide = found.codec.startswith(("utf-16", "utf-32"))
    if survey.has_nul and not wide:
        raise TableError(
            f"{source.name}: has NUL bytes, so it is no text; give a table as CSV, workbook, "
            "PDF, page or text"
        )
    sample = survey.head.decode(found.codec, "replace")
    if survey.size > len(survey.head):
        sample = sample[: max(sample.rfind("\n"), sample.rfind("\r")) + 1] or sample
    if not sample.strip("\ufeff \t\r\n"):
        with source.open() as file:
            if not file.read(1 << 20).decode(found.codec, "replace").strip("\ufeff \t\r\n"):
                raise TableError(f"{source.name}: is empty but for blanks")
    _refuse_binary(source.name, sample)
    dialect = None
    if format is None:
        kind, dialect = detect.text_kind(sample, source.suffix)
    elif format == "tsv":
        sniffed = delimited.sniff(sample)
        quoted = sniffed.quoted if sniffed and sniffed.delimiter == "\t" else True
        kind, dialect = "delimited", delimited.Dialect("\t", quoted, 1.0)
    elif format == "csv":
        kind = "delimited"
        dialect = delimited.sniff(sample) or delimited.Dialect(",", True, 0.0)
    else:
        kind = format
    if kind == "delimited":
        assert dialect is not None
        grid = delimited.read_delimited(source, found, dialect)
        return ("tsv" if dialect.delimiter == "\t" else "csv"), [grid], []
    if kind == "text" and survey.longest_line > 1 << 20:
        raise TableError(
            f"{source.name}: has a line of {survey.longest_line / 1e6:.0f} MB; a table has one "
            "line a row"
        )
    raw = source.read(_MOST[kind], f"{kind} file")
    remarks = [found.remark] if found.remark else []
    if kind == "html":
        raw_codec = _declared_codec(raw, found.codec if survey.valid_utf8 or wide else None)
        if raw_codec:
            found, remarks = dataclasses.replace(found, codec=raw_codec), []
    text = raw.decode(found.codec, found.errors).removeprefix("\ufeff")
    skipped: list[str] = []
    if kind == "html":
        from .markup import read_html

        grids, skipped = read_html(text, source.name)
    elif kind == "json":
        from .structured import read_json

        grids = read_json(text, source.name)
    elif kind == "toml":
        from .structured import read_toml

        grids = read_toml(text, source.name)
    else:
        from .text import read_text

        grids = read_text(text)
    for grid in grids:
        grid.remarks[:0] = remarks
    return kind, grids, skipped


def _declared_codec(raw: bytes, known: str | None) -> str | None:
    """The encoding that a page declares, where its bytes do not prove another."""
    import codecs
    import re

    if known is not None:
        return None
    match = re.search(rb"<meta[^>]+charset\s*=\s*[\"']?([\w-]+)", raw[:4096], re.IGNORECASE)
    if not match:
        return None
    try:
        codec = codecs.lookup(match[1].decode("ascii")).name
    except (LookupError, UnicodeDecodeError):
        return None
    # The WHATWG Encoding Standard reads these names as the wider encodings of Windows.
    wider = {"iso8859-1": "cp1252", "ascii": "cp1252", "shift_jis": "cp932", "gb2312": "gb18030",
             "gbk": "gb18030"}  # fmt: skip
    codec = wider.get(codec, codec)
    return None if codec.startswith("utf") else codec


def _refuse_binary(name: str, sample: str) -> None:
    controls = sum(sign < " " and sign not in "\t\r\n\f\x0b" for sign in sample)
    broken = sample.count("\N{REPLACEMENT CHARACTER}")
    if controls > 0.02 * len(sample) or broken > 0.2 * len(sample):
        raise TableError(
            f"{name}: is no text and no known table format; give a table as CSV, workbook, "
            "PDF, page or text"
        )


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
