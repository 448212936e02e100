"""A printed number → its value, the interval of its digits, and all that was printed with it.

Nothing here knows units: what follows a number is handed on as text, and whoever takes the value
must read that text too. A cell that can be read in two ways is refused with both ways named.
"""

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from functools import cache

import numpy as np

from .grammar import CellReader, Figure, FigureError, half_digit, mark_cores, undecided
from .numerals import COMMA, POINT, NumberStyle, number_style, readings
from .signs import plain

__all__ = [
    "COMMA",
    "POINT",
    "ColumnFigures",
    "Figure",
    "FigureError",
    "NumberStyle",
    "is_missing",
    "number_style",
    "read_column",
    "read_figure",
]


@dataclass(slots=True)
class ColumnFigures:
    """A column of figures as arrays, NaN where nothing was read.

    ``figures`` holds the cells that carry more than a plain number (a qualifier, a unit, a mark,
    a second figure …), by index; ``failures`` the cells that were refused. A cell that is NaN
    and in neither says that the figure is missing. ``doubtful`` lists the cells that only the
    table's decimal sign decides ("1,234"): their other reading is 1000 times more or less.
    """

    value: np.ndarray
    low: np.ndarray
    high: np.ndarray
    figures: dict[int, Figure] = field(default_factory=dict)
    failures: dict[int, FigureError] = field(default_factory=dict)
    doubtful: list[int] = field(default_factory=list)


_MISSING = re.compile(
    r"[-_/*.…?ー―–—∞]?|-{2,}|\*{2,}|\.{2,3}|_{2,}|n\.?\s?/?\s?[ad]\.?|n\.?\s?[vs]\.|k\.?\s?a\.?"
    r"|keine angabe|nicht (?:spezifiziert|angegeben)|non (?:sp[ée]cifi[ée]|disponib(?:le|ile))"
    r"|not (?:specified|available|applicable)|unspecified|no data|none|null|s/d|sin datos"
    r"|tb[dac]|t\.b\.d\.|on request|auf anfrage|sur demande|なし|無し|未定|无|無|不适用|暂无",
    re.IGNORECASE,
)
_SURE_MARK = re.compile(
    r"(?:\^\(?(?:\d{1,2}|[a-z])\)|(?<=\s)(?:\d{1,2}|[a-z])\)|[*†‡§#]+\)?)[,;]?$"
)


def is_missing(text: str) -> bool:
    """Whether the whole cell is a sign for "not given": blank, a dash, "n/a", "k. A.", "TBD" …"""
    return _MISSING.fullmatch(plain(text)) is not None


def read_figure(
    text: str, style: NumberStyle, *, note_marks: frozenset[str] = frozenset()
) -> Figure | None:
    """The figure printed in a cell; None where the cell says that there is none.

    ``note_marks`` are the marks that the table's notes explain ("1", "a", "*"): a mark that could
    be part of the number is taken off only if it stands there. Raises FigureError, with the values
    it may have meant, for whatever is not one number.
    """
    if len(text) > _LONGEST:
        raise FigureError(text, "longer than any figure")
    if is_missing(text):
        return None
    rest, marks = _without_marks(plain(text), note_marks)
    figure = CellReader(text, style, note_marks).read(rest)
    for part in (figure, figure.also):
        if part is not None and any(map(math.isinf, (part.value, part.low, part.high))):
            raise FigureError(text, "too large for a number")
    return replace(figure, marks=(*figure.marks, *marks)) if marks else figure


def read_column(
    texts: Sequence[str], style: NumberStyle, *, note_marks: frozenset[str] = frozenset()
) -> ColumnFigures:
    """A column of cells at once: plain numbers by a short way, the others by ``read_figure``."""
    column = ColumnFigures(np.empty(0), np.empty(0), np.empty(0))
    decimal = style.decimal
    sign = decimal or "."
    value, half = [math.nan] * len(texts), [math.nan] * len(texts)
    others: dict[int, Figure] = {}
    for i, text in enumerate(texts):
        if not text:
            continue
        if len(text) < len(_HALF) and text.isascii():
            whole, dot, fraction = text.partition(sign)
            if not dot:
                if text.isdigit() and (text[0] != "0" or len(text) == 1):
                    value[i] = float(text)
                    half[i] = 0.5 if len(text) < 4 or text[-1] != "0" else half_digit(text)
                    continue
            elif decimal and fraction.isdigit() and whole.isdigit():
                places = len(fraction)
                if whole[0] != "0" or len(whole) == 1:
                    if places == 3 and len(whole) < 4 and whole != "0":
                        if style.conflicts:
                            column.failures[i] = undecided(text, readings(text))
                            continue
                        column.doubtful.append(i)
                    value[i] = float(text if sign == "." else f"{whole}.{fraction}")
                    half[i] = _HALF[places]
                    continue
        try:
            figure = read_figure(text, style, note_marks=note_marks)
        except FigureError as error:
            column.failures[i] = error
            continue
        if figure is None:
            continue
        others[i] = figure
        if figure.other is not None:
            column.doubtful.append(i)
        if figure.qualifier or figure.unit or figure.also or figure.marks or figure.condition:
            column.figures[i] = figure
    column.value = np.array(value)
    column.low, column.high = column.value - half, column.value + half
    for i, figure in others.items():
        column.value[i], column.low[i], column.high[i] = figure.value, figure.low, figure.high
    return column


_HALF = [float(f"5e-{places + 1}") for places in range(16)]
_LONGEST = 200


@cache
def _named_mark(note_marks: frozenset[str]) -> re.Pattern[str] | None:
    """The marks that the notes name, at the end of a cell: "(1)", "1)", and letters as "24a"."""
    cores = sorted(mark_cores(note_marks))
    if not cores:
        return None
    every = "|".join(map(re.escape, cores))
    letters = "|".join(re.escape(c) for c in cores if not c.isdigit()) or r"\b\B"
    return re.compile(
        rf"(?:\s*[(\[](?:{every})[)\]]|(?:(?<=\d)|\s)(?:{every})\)|(?:(?<=[\d.])|\s)(?:{letters}))$"
    )


def _without_marks(rest: str, note_marks: frozenset[str]) -> tuple[str, list[str]]:
    """Footnote marks off the ends of a cell: the unmistakable ones, and those the notes name."""
    marks: list[str] = []
    named = _named_mark(note_marks)
    leading = re.match(r"[*†‡§#]+\s*(?=[\d+.,-])", rest)
    if leading:
        marks.append(leading.group().strip())
        rest = rest[leading.end() :]
    while True:
        found = _SURE_MARK.search(rest) or (named.search(rest) if named else None)
        if not found or not re.search(r"\d", rest[: found.start()]):
            return rest, marks
        if found.group().endswith(")") and "(" not in found.group():
            head = rest[: found.start()]
            if head.count("(") > head.count(")"):  # the bracket belongs to "(30 A*)"
                return rest, marks
        marks.insert(0, found.group().strip())
        rest = rest[: found.start()].rstrip()
