"""Which character encoding a text file has, by the evidence of its bytes."""

import codecs
import re
from dataclasses import dataclass

from .source import Source

# Signs that European datasheets use above ASCII; what else Windows-1252 has is rare in them.
_WESTERN = frozenset(
    "äöüÄÖÜßéèêëàâçîïôùûñáíóúÉÈÀÇÊåæøÅÆØìòãõÁÍÓÚÑ°²³¹µ±·×÷Ø½¼¾«»®©§€–—…‘’“”„‰™√\xa0\xad"
)
_UTF8_SEQUENCE = re.compile(
    rb"[\xc2-\xdf][\x80-\xbf]|[\xe0-\xef][\x80-\xbf]{2}|[\xf0-\xf4][\x80-\xbf]{3}"
)
_NAMES = {"cp932": "Shift-JIS", "gb18030": "GB18030", "cp1252": "Windows-1252"}


@dataclass(frozen=True, slots=True)
class Encoding:
    """A Python codec, how it treats broken bytes, and a remark where it is not UTF-8."""

    codec: str
    errors: str = "strict"
    remark: str | None = None


def detect(source: Source) -> Encoding:
    """The encoding of a text file; UTF-8 wherever the whole file is valid UTF-8."""
    survey = source.survey
    head = survey.head
    for bom, codec, name in (
        (codecs.BOM_UTF32_LE, "utf-32", "UTF-32"),
        (codecs.BOM_UTF32_BE, "utf-32", "UTF-32"),
        (codecs.BOM_UTF16_LE, "utf-16", "UTF-16"),
        (codecs.BOM_UTF16_BE, "utf-16", "UTF-16"),
    ):
        if head.startswith(bom):
            return Encoding(codec, "replace", f"read as {name}, as its byte order mark says")
    if survey.has_nul and (codec := _utf16_without_mark(head)):
        return Encoding(codec, "replace", "read as UTF-16 without a byte order mark")
    if survey.valid_utf8:
        return Encoding("utf-8-sig" if head.startswith(codecs.BOM_UTF8) else "utf-8")
    sample = survey.high_lines
    sequences = len(_UTF8_SEQUENCE.findall(sample))
    stray = sum(b > 127 for b in _UTF8_SEQUENCE.sub(b"", sample))
    if sequences > 4 * stray:
        return Encoding(
            "utf-8-sig",
            "replace",
            "read as UTF-8, though some bytes are not: they show as \N{REPLACEMENT CHARACTER}",
        )
    codec = max(("cp1252", "cp932", "gb18030"), key=lambda name: _score(sample, name))
    if codec == "cp1252" and survey.undefined_1252:
        return Encoding("latin-1", "replace", "not UTF-8: read as Latin-1")
    return Encoding(codec, "replace", f"not UTF-8: read as {_NAMES[codec]}")


def _utf16_without_mark(head: bytes) -> str | None:
    """UTF-16 of mostly Western text has a NUL in every other byte, always on one side."""
    even, odd = head[0::2].count(0), head[1::2].count(0)
    half = len(head) / 2
    if odd > 0.4 * half and even < 0.02 * half:
        return "utf-16-le"
    if even > 0.4 * half and odd < 0.02 * half:
        return "utf-16-be"
    return None


def _score(sample: bytes, codec: str) -> float:
    """Share of the high bytes that make usual signs of the encoding's own languages."""
    text = sample.decode(codec, "replace")
    good = total = 0.0
    previous_high = False
    for sign in text:
        if sign < "\x80":
            previous_high = False
            continue
        width = 1 if codec == "cp1252" else 2
        total += width
        good += width * _usual(sign, codec, previous_high)
        previous_high = True
    return good / total if total else 0.0


def _usual(sign: str, codec: str, after_high: bool) -> float:
    """1 for a usual sign, 0 for one that only chance makes, below 0 for a broken one."""
    if sign == "\N{REPLACEMENT CHARACTER}":
        return -1.0
    if codec == "cp1252":
        # European words seldom have two accented letters in a row, double bytes always do.
        return (0.5 if after_high else 1.0) if sign in _WESTERN else -0.5
    if codec == "cp932":
        if "\uff61" <= sign <= "\uff9f":  # half-width katakana: what °, µ, ² look like here
            return 0.6 if after_high else -0.5
        raw = sign.encode("cp932", "ignore")
        return 1.0 if len(raw) == 2 and 0x81 <= raw[0] <= 0x97 and raw[0] != 0x85 else 0.1
    raw = sign.encode("gb18030", "ignore")
    if len(raw) != 2 or raw[1] < 0xA1:  # outside GB 2312: an accented letter before a plain one
        return 0.0
    return 1.0 if 0xB0 <= raw[0] <= 0xD7 or raw[0] in (0xA1, 0xA2, 0xA3, 0xA6) else 0.2
