"""The grammar of one printed figure: number, tolerance, range, second figure, unit."""

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cache

from ..errors import MotorfolioError, excerpt
from .numerals import DIGITS, EXPONENT, NumberStyle, readings
from .pairs import PLUS_MINUS, share_power
from .signs import plain


class FigureError(MotorfolioError):
    """A cell that is no single number; ``guesses`` are the values it may have meant."""

    def __init__(self, text: str, reason: str, guesses: Sequence[float] = ()) -> None:
        self.text = text
        self.reason = reason
        self.guesses = tuple(dict.fromkeys(g for g in guesses if math.isfinite(g)))
        may_mean = " or ".join(f"{g:.12g}" for g in self.guesses[:4])
        hint = f"; it may mean {may_mean}" if may_mean else ""
        super().__init__(f'"{excerpt(text)}": {reason}{hint}')


@dataclass(frozen=True, slots=True)
class Figure:
    """One printed number, in the unit of its column or of its own cell.

    ``low`` and ``high`` bound the value: half a unit of the last printed digit, or the printed
    ± or range; NaN on the open side of "≤ 45". ``unit`` is the text beside the number ('' if
    none); it may be any text, and the value is worth nothing until that text has been read.
    ``tolerance`` holds the printed deviations (lower, upper) in the figure's own unit.
    ``other`` is the value under the other decimal sign, where the digits alone allow it.
    ``also`` is a second figure of the same cell: "0.28 (39.6)", "24 V (28 V)".
    ``condition`` is the text of what the value holds under: "0.9 A @ 10 V", "85 A/60 s".
    """

    text: str
    value: float
    low: float
    high: float
    qualifier: str | None = None
    unit: str = ""
    also: "Figure | None" = None
    marks: tuple[str, ...] = ()
    tolerance: tuple[float, float] | None = None
    other: float | None = None
    condition: str = ""


_QUALIFIERS = {
    "at most": "≤|<=|<|maximum|maximal|maxi|max|máx|massimo|bis zu|up to|jusqu'à|最大",
    "at least": "≥|>=|>|minimum|minimal|mini|min|mín|mindestens|at least|最小",
    "about": "~|≈|≒|circa|ca|approximately|approx|about|aprox|environ|env|etwa|ref"
    "|約|约|参考値|参考值|参考",
    "typical": "typical|typisch|typique|typ|標準|典型值|典型",
}
_PREFIX = [
    (name, re.compile(rf"(?:{words})(?![^\W\d_])(?P<dot>(?<=[^\W\d_])\.)?\s*[:=]?\s*", re.I))
    for name, words in _QUALIFIERS.items()
]
# Of these a point may be the end; behind any other word ("约.55") it begins the number.
_ABBREVIATED = re.compile(r"(?:max|máx|mín|min|ca|approx|aprox|env|ref|typ)\.$", re.I)
# "min" behind a number is a minute, so "at least" has fewer words here.
_SUFFIX = [
    (name, re.compile(rf"\s*(?:(?<![^\W\d_])(?:{words})\.?|[(\[](?:{words})\.?[)\]])$", re.I))
    for name, words in {
        "at most": r"maximum|maxi|max|máx|以下|未満|以内",
        "at least": r"minimum|mini|以上|(?<=[(\[])min",
        "about": r"approx|aprox|ref|参考値|参考值",
        "typical": r"typical|typisch|typ",
    }.items()
]
_CJK_SUFFIX = re.compile(r"\s*(?P<most>以下|未満|以内)$|\s*(?P<least>以上)$")
_NUMBER = re.compile(r"(?P<sign>[+-]?)(?P<digits>" + DIGITS + ")" + EXPONENT.format("") + "?")
_UNEQUAL = re.compile(
    r"(?P<open>[(\[])?\s*\+\s*(?P<up>[\d.,]+)\s*(?P<p1>%?)\s*[/ ,]?"
    r"\s*-\s*(?P<down>[\d.,]+)\s*(?P<p2>%?)\s*(?(open)[)\]])"
)
_RANGE = re.compile(
    r"\s*(?:\.{2,3}|~|÷)\s*|\s+(?:to|bis|à|a|al|do)\s+|\s+-\s+|(?<![\s^])-(?=[\d.,])|\s*(?:至|から)\s*"
)
_BRACKET = re.compile(r"\s*(?:\((?P<a>[^()]*)\)|\[(?P<b>[^\[\]]*)\]|\{(?P<c>[^{}]*)\})\s*")
# "@ 10 V", "(at 3000 rpm)", "/60 s": another amount, in another unit, behind the figure. A bare
# "/" also divides units (V/1000 rpm), so only what no unit has stands behind it.
_CONDITION = re.compile(
    r"\s*(?P<open>\()?\s*(?:(?P<at>@|(?<![^\W\d_])(?:at|bei)(?=[\s\d]))|(?P<for>(?<![^\W\d_])"
    r"(?:à|a|con|for|für|pour|per|during|während|sous)(?=\s))|[/,])\s*"
    rf"(?P<amount>[+-]?{DIGITS})\s*(?P<unit>(?(at)[^\d\s()]|(?(for)[^\d\s()]|(?:V(?:\s?[AD]C)?|s|sec)$))"
    r"[^\d()]*(?:\^?-1)?|1/min)(?(open)\))$"
)
# Digits that belong to a unit: powers, "V/1000 rpm", "10^-4 kgm2", "1/min".
_UNIT_DIGITS = re.compile(
    r"(?<=[/(×x* ])1[., ']?000(?!\d)|(?:(?<=[/(×x*· ])|^)10\^?[+-]?\d\b"
    r"|(?<=[^\W\d_°)])\^?-?[1234](?!\d)|\^[({]?[+-]?[\d./]+[)}]?|(?:(?<=[/(\s*·])|^)1(?=/)|0-p"
)


def half_digit(numeral: str, exponent: int = 0) -> float:
    """Half a unit of the last significant digit of "24800" or "1.50" (times ten to `exponent`).

    Trailing zeros of a whole number beyond its third digit are not significant.
    """
    whole, dot, fraction = numeral.partition(".")
    if dot:
        return float(f"5e{exponent - len(fraction) - 1}")
    zeros = min(len(whole) - len(whole.rstrip("0")), max(len(whole) - 3, 0))
    return float(f"5e{exponent + zeros - 1}")


@cache
def mark_cores(note_marks: frozenset[str]) -> set[str]:
    """Footnote marks without brackets and raising: "¹⁾" → "1"."""
    return {re.sub(r"[()\[\]^\s]", "", plain(mark)) for mark in note_marks} - {""}


def undecided(text: str, found: dict[str | None, str], exponent: int = 0) -> FigureError:
    return FigureError(
        text,
        "the table does not tell whether the sign is a decimal or a thousands sign",
        sorted(float(f"{numeral}e{exponent}") for numeral in found.values()),
    )


class CellReader:
    """Reads one cell; holds what every step needs for a message."""

    def __init__(self, text: str, style: NumberStyle, note_marks: frozenset[str]) -> None:
        self.text = text
        self.style = style
        self.note_marks = note_marks

    def fail(self, reason: str, guesses: Sequence[float] = ()) -> FigureError:
        return FigureError(self.text, reason, guesses)

    def read(self, rest: str) -> Figure:
        lines = [line.strip() for line in rest.split("\n") if line.strip()]
        if len(lines) == 2 and all(re.match(r"[+-]?[.,]?\d", line) for line in lines):
            return replace(self.read(lines[0]), also=self.read(lines[1]))
        rest = " ".join(lines)
        before, qualifier, rest = self._prefix(rest)
        shared = share_power(rest)
        if shared is None:
            raise self.fail("the power of ten may belong to both numbers or to the second alone")
        rest = shared
        number = self._number(rest)
        if number is None:
            raise self.fail("no number at its beginning")
        figure, end = number
        figure = self._tail(figure, rest[end:])
        if before:
            if figure.unit:
                before = f"{before} {figure.unit}"
            figure = replace(figure, unit=before)
        return self._qualified(figure, qualifier)

    def _prefix(self, rest: str) -> tuple[str, str | None, str]:
        """What stands before the number: a diameter sign, a currency or DC/AC, a qualifier."""
        if rest[:1].isdigit():
            return "", None, rest
        rest = re.sub(r"^[Øø]\s*(?=[\d.,])", "", rest)
        qualifier = None
        for name, pattern in _PREFIX:
            found = pattern.match(rest)
            if found:
                qualifier = name
                glued = found.group("dot") and found.end() == found.end("dot")
                rest = self._behind_point(rest, found.end()) if glued else rest[found.end() :]
                break
        found = re.match(r"(?:[$€£¥]|(?:EUR|USD|CHF|GBP|JPY|CNY|DC|AC)(?=[\s\d]))\s*", rest)
        if found:
            return found.group().strip(), qualifier, rest[found.end() :]
        return "", qualifier, rest

    def _behind_point(self, rest: str, end: int) -> str:
        """The number behind a word and a point without a blank: "max.45", "约.55".

        The point ends an abbreviation or is the decimal sign; in a table of the decimal comma
        only the former, in any other "max.45" may be both.
        """
        numeral = re.match(DIGITS, rest[end - 1 :])
        if numeral is None or not numeral.group().startswith("."):
            return rest[end:]
        whole, fraction = readings(numeral.group()[1:]), readings(numeral.group())
        if not _ABBREVIATED.search(rest[:end]) or not whole:
            return rest[end - 1 :]
        if not fraction or (self.style.decimal == "," and not self.style.conflicts):
            return rest[end:]
        guesses = [float(n) for n in (*whole.values(), *fraction.values())]
        raise self.fail("the point may end the word or begin the number", guesses)

    def _number(self, rest: str) -> tuple[Figure, int] | None:
        """The number at the beginning of `rest` with its digits' interval, and where it ends."""
        found = _NUMBER.match(rest)
        if not found:
            return None
        groups = found.groupdict()
        end = found.end()
        lost = groups["lost"]
        power = groups["e"] or groups["p"] or groups["q"] or groups["s"]
        exponent = int(power) if power else 0
        digits = groups["digits"]
        marks: tuple[str, ...] = ()
        raised = re.match(r"\^(?P<core>[+-]?\d{1,2}|[a-z])(?P<bracket>\)?)", rest[end:])
        if raised and power is None and not lost:
            core = raised.group("core")
            named = mark_cores(self.note_marks)
            if digits == "10" and core[0] in "+-" and not raised.group("bracket"):
                digits, exponent = "1", int(core)
            elif raised.group("bracket") or core in named:
                marks = (raised.group(),)
            else:
                guesses = self._values(digits)
                if core.isdigit() and digits == "10":
                    guesses.append(10.0 ** int(core))
                raise self.fail("a raised sign that no note explains", guesses)
            end += raised.end()
        possible = readings(digits, power is not None)
        if not possible:
            raise self.fail("its digits and separators form no number", self._values(digits))
        if lost:
            values = [float(f"{n}e{s}{lost}") for n in possible.values() for s in ("-", "")]
            raise self.fail("a power of ten that lost its superscript", values)
        numeral, other = self._choose(possible, exponent)
        sign = "-" if groups["sign"] == "-" else ""
        value = float(f"{sign}{numeral}e{exponent}")
        if value == 0 and float(numeral) != 0:
            raise self.fail("too small for a number")
        half = half_digit(numeral, exponent)
        alternative = float(f"{sign}{other}e{exponent}") if other else None
        figure = Figure(
            self.text, value, value - half, value + half, marks=marks, other=alternative
        )
        return figure, end

    def _choose(self, possible: dict[str | None, str], exponent: int) -> tuple[str, str | None]:
        """The reading that the table's decimal sign asks for, and the one it rules out."""
        if None in possible:
            return possible[None], None
        decimal = self.style.decimal
        if len(possible) == 2:
            if decimal is None or self.style.conflicts:
                raise undecided(self.text, possible, exponent)
            return possible[decimal], possible["," if decimal == "." else "."]
        (sign, numeral), *_ = possible.items()
        if decimal is not None and sign != decimal:
            raise self.fail(
                f'it does not fit the decimal sign "{decimal}" of the table '
                f"({self.style.evidence})",
                [float(f"{numeral}e{exponent}")],
            )
        return numeral, None

    def _values(self, digits: str) -> list[float]:
        return [float(numeral) for numeral in readings(digits).values()]

    def _tail(self, figure: Figure, tail: str) -> Figure:
        """What follows the first number: tolerance, second end of a range, second figure, unit."""
        if re.match(r"_|[xX][\dA-Fa-f]|(?![AV]_(?:rms|eff|pk|peak)\b)[^\W\d_]*\d*_", tail):
            raise self.fail("not written as a decimal number")
        found = self._under_condition(figure, tail)
        if found is not None:
            return found
        for step in (self._with_tolerance, self._with_unequal, self._with_range, self._with_second):
            found = step(figure, tail)
            if found is not None:
                return found
        qualifier = None
        for name, pattern in _SUFFIX:
            end = pattern.search(tail)
            if end:
                qualifier, tail = name, tail[: end.start()]
                break
        else:
            end = _CJK_SUFFIX.search(tail)
            if end:
                qualifier = "at most" if end.group("most") else "at least"
                tail = tail[: end.start()]
        figure = replace(figure, unit=self._unit(figure, tail))
        return self._qualified(figure, qualifier)

    def _under_condition(self, figure: Figure, tail: str) -> Figure | None:
        """A figure behind which another amount says when it holds."""
        at = _CONDITION.search(tail)
        if at is None:
            return None
        own, unit = tail[: at.start()].strip(), at["unit"].strip()
        if own.endswith(unit) or (at["at"] is None and not re.search(r"[^\W\d_]", own)):
            return None  # "24 V/36 V", "12 a 24 V": two of one kind
        found = self._tail(figure, own)
        return replace(found, condition=f"{at['amount']} {unit}")

    def _unit(self, figure: Figure, tail: str) -> str:
        """The unit text behind a number; refuses further numbers, which it would hide."""
        unit = tail.strip().rstrip(",;")
        if unit == ":1":  # a gear ratio
            return unit
        if re.search(r"\d", _UNIT_DIGITS.sub("", unit)) or re.match(r"[/.,:'+-]\s*\d", unit):
            found = re.finditer(rf"(?P<minus>(?<![\w.,)])-)?(?P<d>{DIGITS})", plain(self.text))
            numbers = [-v if n["minus"] else v for n in found for v in self._values(n["d"])]
            raise self.fail("more than one number", list(dict.fromkeys(numbers)))
        if any(unit.count(a) != unit.count(b) for a, b in ("()", "[]", "{}")):
            raise self.fail("a bracket that has no partner", [figure.value])
        if re.match(r"[.,'+]|-(?![^\W\d_])", unit):
            raise self.fail("a sign that ends no number", [figure.value])
        return unit

    def _with_tolerance(self, figure: Figure, tail: str) -> Figure | None:
        at = PLUS_MINUS.search(tail)
        if not at:
            return None
        found = self._number(tail[at.end() :])
        if found is None:
            raise self.fail("a ± without a number")
        deviation, end = found[0].value, found[1]
        after = tail[at.end() + end :].lstrip()
        share = after.startswith("%")
        after = after[1:].lstrip() if share else after
        if at.group("open"):
            if after[:1] not in (")", "]"):
                raise self.fail("a bracket that is not closed")
            after = after[1:].lstrip()
        unit = self._one_unit(figure, tail[: at.start()], after)
        if share:
            deviation *= abs(figure.value) / 100
        return self._within(figure, unit, -abs(deviation), abs(deviation))

    def _with_unequal(self, figure: Figure, tail: str) -> Figure | None:
        at = _UNEQUAL.search(tail)
        if not at:
            return None
        ends = []
        for text in (at.group("up"), at.group("down")):
            found = self._number(text)
            if found is None or found[1] != len(text):
                raise self.fail("a tolerance that is no number")
            ends.append(found[0].value)
        if at.group("p1") and not at.group("p2"):
            raise self.fail("a tolerance of which only one side is in per cent")
        scale = abs(figure.value) / 100 if at.group("p2") else 1.0
        unit = self._one_unit(figure, tail[: at.start()], tail[at.end() :])
        return self._within(figure, unit, -ends[1] * scale, ends[0] * scale)

    def _within(self, figure: Figure, unit: str, down: float, up: float) -> Figure:
        return replace(
            figure,
            unit=unit,
            low=figure.value + down,
            high=figure.value + up,
            qualifier="tolerance",
            tolerance=(down, up),
        )

    def _with_range(self, figure: Figure, tail: str) -> Figure | None:
        for at in _RANGE.finditer(tail):
            found = self._number(tail[at.end() :])
            if found is None:
                continue
            if at.start() and not re.match(r"[^\W\d_°%Ω\"]|[°%Ω\"/ ]", tail):
                continue
            upper, end = found
            first, after = tail[: at.start()].strip(), tail[at.end() + end :]
            power = _UNIT_DIGITS.match(tail, at.start()) and first != after.strip()  # "min-1"
            if power or re.search(r"[\d/(]", first):
                continue
            if re.match(r"\s*(?:-|\.)\s*\d|/\d", after):
                raise self.fail("a date, not a number")
            low, high = figure.value, upper.value
            if not low < high:
                raise self.fail("a range whose ends are not in order", [low, high])
            unit = self._one_unit(figure, first, after)
            other = None
            if figure.other is not None and upper.other is not None:
                other = (figure.other + upper.other) / 2
            middle = (low + high) / 2
            return Figure(self.text, middle, low, high, "range", unit, other=other)
        return None

    def _one_unit(self, figure: Figure, first: str, second: str) -> str:
        """The unit of two numbers that share it, or that both carry it."""
        one, two = self._unit(figure, first), self._unit(figure, second)
        if one and two and one != two:
            raise self.fail(f'two units, "{one}" and "{two}"', [figure.value])
        return one or two

    def _with_second(self, figure: Figure, tail: str) -> Figure | None:
        """A second figure in brackets: another unit, or another variant."""
        at = _BRACKET.search(tail)
        if not at or tail[: at.start()].rstrip().endswith("/"):
            return None
        inner = next(g for g in at.groups() if g is not None).strip()
        if not re.match(r"[+-]?[.,]?\d", inner):
            return None
        found = self._number(inner)
        assert found is not None
        second = self._tail(found[0], inner[found[1] :])
        unit = self._one_unit(figure, tail[: at.start()], tail[at.end() :])
        return replace(figure, unit=unit, also=second)

    def _qualified(self, figure: Figure, qualifier: str | None) -> Figure:
        if qualifier is None:
            return figure
        if figure.qualifier in (None, qualifier):
            low = math.nan if qualifier == "at most" else figure.low
            high = math.nan if qualifier == "at least" else figure.high
            if qualifier == "at most":
                high = figure.value
            elif qualifier == "at least":
                low = figure.value
            return replace(figure, qualifier=qualifier, low=low, high=high)
        if qualifier in ("about", "typical") and figure.qualifier in ("range", "tolerance"):
            return figure  # the printed ends say more than the word
        raise self.fail(f'both "{qualifier}" and "{figure.qualifier}"', [figure.value])
