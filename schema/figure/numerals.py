"""Digits and their separators: what a printed numeral can mean, and the decimal sign of a table."""

import re
from collections.abc import Iterable
from dataclasses import dataclass

from .signs import plain

# A separator counts only between digits; a blank only before a group of exactly three.
DIGITS = r"(?:[.,]?\d(?:\d|[.,](?=\d)|[' ](?=\d{3}(?!\d)))*)"
# The power of ten: "e-5", "×10^-5", "x10-7", "·10^4", " 10^-6". In the last group stands what
# follows a 10 without ^ or sign: a superscript that was lost ("×104"). "×1000" is none: it is
# left to the unit ("×1000 rpm").
EXPONENT = (
    r"(?:(?<=\d)[eE](?P<{0}e>[+-]?\d+)(?![\w])"
    r"|\s*[×xX*·]\s*10\^?(?P<{0}p>[+-]\d{{1,2}})(?!\d)"
    r"|\s*[×xX*·]\s*10\^(?P<{0}q>\d{{1,2}})(?!\d)"
    r"|\s+10\^(?P<{0}s>[+-]?\d{{1,2}})(?!\d)"
    r"|\s*[×xX*·]\s*10(?P<{0}lost>(?!00(?!\d))\d+)(?!\d))"
)
_BLANK_GROUPS = re.compile(r"\d{1,3}(?:[' ]\d{3})+")
_TOKEN = re.compile(
    r"(?<![\w.,^/])(?<![^\W\d_]-)" + DIGITS + r"(?P<exponent>" + EXPONENT.format("x") + r")?"
)


@dataclass(frozen=True, slots=True)
class NumberStyle:
    """The decimal sign of one table, the cell that shows it, and the cells that speak against it.

    ``decimal`` is None where nothing decides; ``conflicts`` are indices into the texts given.
    In a table with conflicts "1,234" stays undecided, whatever the majority.
    """

    decimal: str | None
    evidence: str = ""
    conflicts: tuple[int, ...] = ()


POINT = NumberStyle(".", "set by the caller")
COMMA = NumberStyle(",", "set by the caller")


def readings(digits: str, has_exponent: bool = False) -> dict[str | None, str]:
    """What the numeral can mean: decimal sign → the numeral as Python writes it.

    "1,234" → {".": "1234", ",": "1.234"}; "12,5" → {",": "12.5"}; "1.234,5" → {",": "1234.5"};
    "1234" → {None: "1234"}; {} for what is no numeral ("12.05.2024", "1,23,4", "007").
    A power of ten follows a decimal fraction, never a group of thousands.
    """
    grouped = _BLANK_GROUPS.match(digits)
    if grouped:
        if len({c for c in grouped.group() if not c.isdigit()}) != 1:
            return {}
        digits = re.sub("[' ]", "", grouped.group()) + digits[grouped.end() :]
    if not re.fullmatch(r"[\d.,]+", digits):
        return {}
    point, comma = digits.count("."), digits.count(",")
    if not point and not comma:
        return {None: digits} if digits[0] != "0" or len(digits) == 1 else {}
    if point and comma:
        decimal = "." if digits.rfind(".") > digits.rfind(",") else ","
        whole, _, fraction = digits.rpartition(decimal)
        thousands = "," if decimal == "." else "."
        if grouped or not re.fullmatch(rf"[1-9]\d{{0,2}}(?:\{thousands}\d{{3}})+", whole):
            return {}
        return {decimal: f"{whole.replace(thousands, '')}.{fraction}"}
    sign, other = (".", ",") if point else (",", ".")
    groups = re.fullmatch(rf"[1-9]\d{{0,2}}(?:\{sign}\d{{3}})+", digits) and not grouped
    if point + comma > 1:
        return {other: digits.replace(sign, "")} if groups else {}
    whole, _, fraction = digits.partition(sign)
    if len(whole) > 1 and whole[0] == "0":
        return {}
    found: dict[str | None, str] = {sign: f"{whole or '0'}.{fraction}"}
    if groups and not has_exponent:
        found[other] = whole + fraction
    return found


def number_style(texts: Iterable[str]) -> NumberStyle:
    """The decimal sign of a table, from every numeral in its cells that has only one reading.

    Cells that could be either ("1,234", "5.700") are no evidence. Where cells contradict each
    other the greater number wins and the others are listed as conflicts; at a draw nothing wins.
    """
    votes: dict[str, list[int]] = {".": [], ",": []}
    first: dict[str, str] = {}
    for index, text in enumerate(texts):
        if "." not in text and "," not in text and text.isascii():
            continue
        for sign in _signs_shown(text):
            votes[sign].append(index)
            first.setdefault(sign, text.strip())
    point, comma = len(votes["."]), len(votes[","])
    if not point and not comma:
        return NumberStyle(None)
    if point == comma:
        return NumberStyle(None, f'"{first["."]}" and "{first[","]}"', tuple(sorted(votes["."])))
    decimal, minority = (".", ",") if point > comma else (",", ".")
    return NumberStyle(decimal, f'"{first[decimal]}"', tuple(dict.fromkeys(votes[minority])))


def _signs_shown(text: str) -> set[str]:
    sign = "." if "." in text else ","
    whole, _, fraction = text.partition(sign)
    if fraction.isdigit() and whole.isdigit() and text.isascii():  # most cells of most tables
        if len(whole) > 1 and whole[0] == "0":
            return set()
        return {sign} if len(fraction) != 3 or len(whole) > 3 or whole == "0" else set()
    shown: set[str] = set()
    for token in _TOKEN.finditer(plain(text)):
        found = readings(
            token.group()[: token.start("exponent") - token.start()]
            if token.group("exponent")
            else token.group(),
            bool(token.group("exponent")),
        )
        if len(found) == 1 and None not in found:
            shown.update(sign for sign in found if sign is not None)
    return shown
