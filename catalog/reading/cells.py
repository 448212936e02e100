"""Quick questions about one cell: is it a figure, a unit, a heading?"""

import re
from contextvars import ContextVar
from functools import lru_cache

from ...schema.figure.read import is_missing
from ...schema.figure.signs import plain
from ...schema.units.read import is_unit_like
from ...schema.vocabulary import words
from .headings.label import parse_label, roles_of
from .headings.lexicon import canonical, find_symbol, lexicon, squeeze, tokens

_FIGURE = re.compile(r"[<>≤≥~≈±+-]?\s*(?:(?:max|min|ca|typ|approx)\.?\s*)?[<>≤≥]?\s*[.,]?\d")
_LETTER = re.compile(r"[^\W\d_]|[Ø%]")


@lru_cache(maxsize=65536)
def is_figure(text: str) -> bool:
    """Whether a cell could hold a figure: a number first, or a sign for a missing one."""
    clean = plain(text)
    if not clean:
        return False
    if _FIGURE.match(clean):
        if re.fullmatch(r"(?:10\^|1/|×).*", clean) and is_unit_like(clean):
            return False
        return len(clean) < 60
    return missing(text)


@lru_cache(maxsize=4096)
def missing(text: str) -> bool:
    """Whether a cell says in any language that there is no figure."""
    return is_missing(text) or squeeze(tokens(text)) in _missing_words()


@lru_cache(maxsize=1)
def _missing_words() -> frozenset[str]:
    return frozenset(k for w in words().signs.get("missing", ()) if (k := squeeze(tokens(w))))


@lru_cache(maxsize=1)
def _ditto_words() -> frozenset[str]:
    return frozenset(k for w in words().signs.get("ditto", ()) if (k := squeeze(tokens(w))))


@lru_cache(maxsize=4096)
def is_ditto(text: str) -> bool:
    """Whether a cell says "as above"."""
    clean = plain(text)
    return clean in ('"', "''", "→", "↓", "〃", "々", '" "', '-"-', '-" -', ",,") or (
        bool(clean) and squeeze(tokens(text)) in _ditto_words()
    )


TOLD: ContextVar[frozenset[str]] = ContextVar("told headings", default=frozenset())
"""Headings that the user, or a kept reading, explains; squeezed."""


def strength(text: str) -> float:
    """How surely a cell is the heading of a quantity: 0 … 1."""
    told = TOLD.get()
    return 1.0 if told and squeeze(tokens(text)) in told else _strength(text)


@lru_cache(maxsize=32768)
def _strength(text: str) -> float:
    clean = plain(text)
    if not clean or len(clean) > 120 or not _LETTER.search(clean):
        return 0.0
    if re.match(r"[+<>≤≥±]?[.,]?\d", clean) and not re.match(
        r"\d{1,2}[.)]?\s+[^\W\d_]{2}|2p", clean
    ):
        return 0.0
    numbered = re.match(r"\d{1,2}\s+(?P<rest>.+)", clean)
    if numbered and is_unit_like(numbered["rest"]):
        return 0.0  # "3 Volt" is no third line
    label = parse_label(text)
    # "V" or "A" alone is a unit rather than a symbol.
    if label.symbols and not label.names and not label.units and is_unit_like(clean):
        return 0.1
    if any(p.keys or p.generic for p in label.names) and is_unit_like(clean):
        return 0.2
    return label.strength


@lru_cache(maxsize=8192)
def is_unit(text: str) -> bool:
    """Whether a cell of a unit row or column could be a unit."""
    clean = plain(text)
    if not clean or len(clean) > 40:
        return False
    if clean in ("-", "–", "—", "1", "[-]", "(-)"):
        return False
    return is_unit_like(clean) or is_unit_like(clean.strip("[](){}"))


@lru_cache(maxsize=64)
def _mark_inside(marks: frozenset[str]) -> re.Pattern[str]:
    numbered = "|".join(re.escape(m) for m in marks if m.isalnum()) or r"\b\B"
    signs = "|".join(re.escape(m) for m in marks if not m.isalnum()) or r"\b\B"
    mark = rf"\^?\(?(?:{numbered})\)|{signs}"
    return re.compile(rf"(?<=\d)\s*(?P<mark>{mark})(?=\s*(?:[^\W\d_]|[°%Ω]|1/))")


def mark_last(text: str, marks: frozenset[str]) -> str:
    """A cell whose footnote mark stands between figure and unit, with the mark at its end."""
    if not marks or not any(mark in text for mark in marks):
        return text
    clean = plain(text)
    found = _mark_inside(marks).search(clean)
    if found is None:
        return text
    return f"{clean[: found.start()]}{clean[found.end() :]} {found['mark']}"


@lru_cache(maxsize=8192)
def is_symbol(text: str) -> bool:
    """Whether a cell could be a symbol."""
    return find_symbol(text) is not None


def is_role(text: str, role: str) -> bool:
    """Whether a heading says that its column holds units, symbols, labels, remarks …"""
    return role in roles_of(text)


def is_caption(text: str) -> bool:
    """Whether a text is a title of a group that says nothing about the figures below."""
    return squeeze(canonical(tokens(text))) in lexicon().captions
