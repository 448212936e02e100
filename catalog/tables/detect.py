"""Which format a file has: by its first bytes, then by its structure, then by its name."""

import re
import tomllib

from .delimited import Dialect, sniff
from .grid import TableError
from .source import Source
from .text import is_pairs

_MAGIC = {
    b"\x89PNG": "a picture (PNG)",
    b"\xff\xd8\xff": "a picture (JPEG)",
    b"GIF8": "a picture (GIF)",
    b"II*\0": "a picture (TIFF)",
    b"MM\0*": "a picture (TIFF)",
    b"\x1f\x8b": "a gzip archive",
    b"7z\xbc\xaf": "a 7z archive",
    b"Rar!": "a RAR archive",
    b"BZh": "a bzip2 archive",
    b"\xfd7zXZ": "an xz archive",
    b"\x7fELF": "a program",
    b"MZ": "a program",
    b"{\\rtf": "a rich text document",
    b"SQLite format 3": "an SQLite database",
    b"PARE": "an encrypted Parquet file",
}
_HTML = re.compile(r"<(?:!doctype\s+html|html|table|body|dl|div|head|meta)\b", re.IGNORECASE)
_JSON = re.compile(r'\{\s*(?:"|\}|$)|\[\s*(?:[\[{\]"\d-]|$|true|false|null)')
_TOML_LINE = re.compile(r"""(?:\[{1,2}[\w .'"-]+\]{1,2}|(?:[\w-]+|"[^"]+"|'[^']+')\s*=\s*\S)""")


def binary_kind(source: Source) -> str | None:
    """'pdf', 'workbook' or 'parquet' by the first bytes; TableError for what holds no table."""
    head = source.survey.head
    if b"%PDF-" in head[:1024]:
        return "pdf"
    if head.startswith((b"PK\x03\x04", b"PK\x05\x06", bytes.fromhex("D0CF11E0A1B11AE1"))):
        return "workbook"
    if head.startswith(b"PAR1"):
        return "parquet"
    for magic, what in _MAGIC.items():
        if head.startswith(magic) and (len(magic) > 2 or not source.survey.valid_utf8):
            raise TableError(
                f"{source.name}: is {what}; give a table as CSV, workbook, PDF, page or text"
            )
    return None


def text_kind(sample: str, suffix: str) -> tuple[str, Dialect | None]:
    """('html' | 'json' | 'toml' | 'delimited' | 'text', dialect) of a decoded file's beginning.

    The content decides where it is clear; the name's extension where it is not.
    """
    start = sample.lstrip("\ufeff \t\r\n")
    if start.startswith("<") and _HTML.search(start[:20_000]):
        return "html", None
    if _JSON.match(start) and not _is_toml(start):
        return "json", None
    if _is_toml(start):
        return "toml", None
    named = {".html": "html", ".htm": "html", ".json": "json", ".toml": "toml"}.get(suffix)
    dialect = sniff(sample)
    if is_pairs(sample):
        return "text", None
    if dialect and dialect.fit >= 0.5:
        return "delimited", dialect
    if named:
        return named, None
    if suffix in {".csv", ".tsv", ".tab"}:
        return "delimited", dialect or Dialect("\t" if suffix != ".csv" else ",", True, 0.0)
    if _HTML.search(sample[:20_000]):
        return "html", None
    return "text", None


def _is_toml(start: str) -> bool:
    """Whether a text is TOML by structure: most lines are keys or tables, and it parses."""
    lines = [line.strip() for line in start[:20_000].splitlines()]
    lines = [line for line in lines if line and not line.startswith("#")]
    if not lines or not _TOML_LINE.match(lines[0]):
        return False
    good = sum(_TOML_LINE.match(line) is not None for line in lines[:-1])
    if good < 0.7 * (len(lines) - 1):
        return False
    if len(start) > 20_000:
        return True
    try:
        tomllib.loads(start.replace("\r\n", "\n"))
    except (tomllib.TOMLDecodeError, RecursionError, ValueError):
        return False
    return True
