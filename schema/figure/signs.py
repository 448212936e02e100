"""One spelling for the many signs that print alike, with powers kept apart from digits.

NFKC alone would turn "10⁻⁵" into "10-5" and "3000¹" into "30001"; here a run of superscripts
becomes "^" and its digits first, so that neither a power nor a footnote mark melts into a number.
"""

import re
import unicodedata
from functools import lru_cache

_SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁽⁾¯ᵃᵇᶜᵈᵉ", "0123456789+-()-abcde")
_SUPERSCRIPT_RUN = re.compile(r"[⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁽⁾¯ᵃᵇᶜᵈᵉ]+")
_CIRCLED = re.compile(r"[①-⑳]|※\s?(\d)")
# What NFKC would spoil or leave apart, each with the sign that stands for all of them here.
_SIGNS = str.maketrans(
    {
        **dict.fromkeys("\u2010\u2011\u2012\u2013\u2014\u2015\u2212\ufe58\ufe63\uff0d", "-"),
        **dict.fromkeys("\u00b7\u22c5\u30fb\u2022\u2219\u2027\uff65\u2024", "·"),
        **dict.fromkeys("✕✖⨯", "×"),
        **dict.fromkeys("〜∼", "~"),
        **dict.fromkeys("≦⩽", "≤"),
        **dict.fromkeys("≧⩾", "≥"),
        **dict.fromkeys("’‘´ʼ`′", "'"),
        **dict.fromkeys("″“”", '"'),
        **dict.fromkeys("º˚", "°"),
        **dict.fromkeys("⌀∅", "Ø"),
        "\u2044": "/",
        "\u2215": "/",
    }
)


@lru_cache(maxsize=16384)
def plain(text: str) -> str:
    """`text` with one sign for each meaning: "min⁻¹" → "min^-1", "−5 µH" → "-5 μH".

    Invisible characters go; every kind of blank but the line break becomes a space, and none is
    left at the ends. Letters keep their case.
    """
    if text.isascii():
        visible = text
    else:
        visible = "".join(c for c in text if unicodedata.category(c) != "Cf")
        visible = visible.translate(_SIGNS)
        visible = _SUPERSCRIPT_RUN.sub(
            lambda run: "^" + run.group().translate(_SUPERSCRIPTS), visible
        )
        # Circled numbers mark footnotes; NFKC would leave a bare digit.
        visible = _CIRCLED.sub(
            lambda m: f"^{m[1] or unicodedata.normalize('NFKC', m[0])})", visible
        )
        # "½" and its kin would lose the blank that parts them from a whole number.
        visible = re.sub("[¼½¾⅓⅔]", lambda m: " " + m.group(), visible)
        visible = unicodedata.normalize("NFKC", visible).translate(_SIGNS)
    visible = re.sub(r"\r\n?", "\n", visible)
    return re.sub(r"[^\S\n]+", " ", visible).strip()
