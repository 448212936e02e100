"""Files of text: encoding, format and size checked, then given to the reader of the format."""

import codecs
import dataclasses
import re

from . import delimited, detect, encoding
from .grid import Grid, TableError
from .source import Source

_MOST = {"text": 8_000_000, "json": 64_000_000, "toml": 8_000_000, "html": 50_000_000}


def read_text_file(source: Source, format: str | None) -> tuple[str, list[Grid], list[str]]:
    """(format, grids, what was passed over) of a file of text; the format by content if None."""
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
    if controls > 8 + 0.02 * len(sample) or broken > 0.2 * len(sample):
        raise TableError(
            f"{name}: is no text and no known table format; give a table as CSV, workbook, "
            "PDF, page or text"
        )
