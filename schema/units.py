"""Unit text of a sheet → factor to SI, dimension, and the convention words that rode in it.

Which quantity is expected decides what a text means: "oz-in" is a torque, "oz-in²" an inertia of
mass, "oz-in-s²" an inertia of force; "min⁻¹" is a speed, and "s⁻¹" is refused as one, since it
may be rad/s or rev/s. What is taken for something else than its plain meaning says so in ``remark``.
"""

import difflib
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import NamedTuple

from .errors import MotorfolioError
from .figure import POINT, read_figure
from .signs import plain
from .unit_table import Product, evaluate, table
from .unit_text import NotAUnitError, bare, read_products, split_marks

GD2_TO_INERTIA = 0.25
"""A flywheel effect GD² (weight times diameter squared) is four times the inertia: J = GD²/4."""


class UnitError(MotorfolioError):
    """A unit text that is not understood, or not for this quantity; ``guesses`` are spellings
    of what it may mean."""

    def __init__(self, text: str, reason: str, guesses: Sequence[str] = ()) -> None:
        self.text = text
        self.reason = reason
        self.guesses = tuple(guesses)
        hint = f"; it may mean {' or '.join(self.guesses)}" if guesses else ""
        super().__init__(f'unit "{text}": {reason}{hint}')


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit as written, and how to reach SI: ``SI = value · factor + offset``.

    ``si`` is spelled as in the program's output ("N·m/A"); the offset is not zero only for an
    absolute temperature. ``dimension`` is pint's dimensionality as one text, the radian among
    the base dimensions. ``marks`` are convention words that stood in the unit, a subset of
    {"rms", "peak", "peak-to-peak", "dc", "ac", "lines", "phase"}.
    """

    text: str
    si: str
    factor: float
    offset: float
    dimension: str
    marks: frozenset[str] = frozenset()
    remark: str = ""


class Converted(NamedTuple):
    """A value in the unit that was asked for; ``remark`` says how its text was taken, if not
    by its plain meaning."""

    value: float
    unit: str
    remark: str


# Where a million is absurd for a motor, an upper-case M is a thousandth.
_NEVER_MEGA = {"A", "H", "N·m", "N·m/A", "V·s/rad", "N·m/√W", "rad/(s·N·m)", "s", "m"}
_FORCE_OF = {
    "kilogram": "kilogram_force",
    "pound": "pound_force",
    "ounce": "ounce_force",
}
_TRADE_NAME = {"kilogram": "kgf", "pound": "lbf", "ounce": "ozf"}
_RAD_NOT_WRITTEN = {"V·s/rad", "N·m·s/rad"}
_CASE_REMARK = "read without regard to upper and lower case"


def read_unit(text: str, accepts: tuple[str, ...]) -> Unit:
    """The unit `text` as a unit of one of the SI units in `accepts`, such as ("N·m/A", "V·s/rad").

    "currency" in `accepts` stands for any currency. Raises UnitError.
    """
    found = _read(text, tuple(accepts))
    if isinstance(found, UnitError):
        raise found
    return found


@lru_cache(maxsize=8192)
def _read(text: str, accepts: tuple[str, ...]) -> Unit | UnitError:
    for si in accepts:
        if si != "currency" and si not in table().targets and si not in _currency_codes():
            raise ValueError(f"{si!r} is not under [targets] in units.txt")
    if not text.strip():
        if "1" in accepts:
            return Unit(text, "1", 1.0, 0.0, "1")
        return UnitError(text, f"no unit is given; {_or(accepts)} would do")
    money = _currency(text, accepts)
    if money is not None:
        return money
    clean, marks = split_marks(bare(text))
    for spelling, (meanings, asked) in table().unsure.items():
        if asked and asked[0] in accepts and bare(spelling) in (bare(text), clean):
            return UnitError(text, "it can be read in more than one way", meanings)
    named = _whole_text(text, clean, marks, accepts)
    if named is not None:
        return named
    fitting, strange = _fitting(text, clean, marks, accepts)
    if fitting:
        return fitting[0] if len(fitting) == 1 else _ambiguous(text, fitting)
    return _refusal(text, clean, accepts, strange)


def _currency_codes() -> set[str]:
    return set(table().currencies.values())


def _currency(text: str, accepts: tuple[str, ...]) -> Unit | UnitError | None:
    word = re.sub(r"\s*(?:/|per\s)\s*(?:pc|pcs|piece|unit|each|Stk|Stück|St)\.?$", "", bare(text))
    code = table().currencies.get(word) or table().currencies.get(text.strip())
    if code is None or not ("currency" in accepts or code in accepts):
        return None
    remark = "$ taken as US dollars" if word == "$" else ""
    return Unit(text, code, 1.0, 0.0, f"[currency {code}]", remark=remark)


def _whole_text(
    text: str, clean: str, marks: frozenset[str], accepts: tuple[str, ...]
) -> Unit | None:
    """A text that the table names as a whole, for the quantity that is expected."""
    spaced = re.sub(r"[-* ]", "·", clean).replace("^", "")
    for spelling, entries in table().texts.items():
        known = bare(spelling)
        if known != clean and re.sub(r"[-* ]", "·", known).replace("^", "").lower() != spaced.lower():
            continue
        if known.lower() == known.upper() or known == clean or len(known) > 5:
            for meaning, wanted, remark in entries:
                if accepts_some := [si for si in accepts if not wanted or si in wanted]:
                    unit = _read(meaning, tuple(accepts_some)) if meaning != "1" else None
                    if isinstance(unit, Unit):
                        return Unit(
                            text, unit.si, unit.factor, unit.offset, unit.dimension,
                            unit.marks | marks, remark,
                        )  # fmt: skip
                    if meaning == "1":
                        return Unit(text, "1", 1.0, 0.0, "1")
    return None


def variants(product: Product) -> Iterator[tuple[Product, str]]:
    """The product as written, then what the trade may mean by it, each with its remark."""
    yield product, ""
    weights = [(product, "")]
    for mass, force in _FORCE_OF.items():
        if product.power_of(mass):
            name = _TRADE_NAME[mass]
            weights.append((product.replaced(mass, force), f"the weight is taken as a force, {name}"))
        if product.power_of(force):
            name = _TRADE_NAME[mass]
            weights.append((product.replaced(force, mass), f"the force {name} is taken as a mass"))
    yield from weights[1:]
    if product.power_of("minute"):
        for weight, remark in weights:
            yield weight.replaced("minute", "rpm", -1), remark


def _fitting(
    text: str, clean: str, marks: frozenset[str], accepts: tuple[str, ...]
) -> tuple[list[Unit], NotAUnitError | None]:
    """The first way of reading that gives a unit of the quantity; several units if it is unsure."""
    strange = None
    for fold in (False, True):
        for grouped in (True, False):
            try:
                products = read_products(clean, grouped, fold)
            except NotAUnitError as error:
                strange = strange or error
                continue
            units = [u for p in products for u in _units_of(text, p, marks, accepts, fold)[:1]]
            if units:
                return list({u.factor: u for u in units}.values()), None
    return [], strange


def _units_of(
    text: str, product: Product, marks: frozenset[str], accepts: tuple[str, ...], folded: bool
) -> list[Unit]:
    found = []
    for variant, remark in variants(product):
        for si in accepts:
            if si == "currency" or si in _currency_codes():
                continue
            unit = _as_target(text, variant, si, marks, [remark] if remark else [])
            if unit is not None:
                found.append(unit)
    return found


def _as_target(
    text: str, product: Product, si: str, marks: frozenset[str], remarks: list[str]
) -> Unit | None:
    """The product as a unit of `si`, or None where it is none."""
    (target,) = read_products(si)
    names = {name for name, _ in product.powers}
    if (si == "Hz" and "minute" in names) or (si == "N·m" and names & {"joule", "watt"}):
        return None
    factor, dimension = evaluate(product)
    wanted = evaluate(target)[1]
    if dimension != wanted:
        per_radian = product.times(Product((("radian", -1),)))  # type: ignore[arg-type]
        if si in _RAD_NOT_WRITTEN and "hertz" not in names and evaluate(per_radian)[1] == wanted:
            return Unit(
                text, si, factor, 0.0, wanted, marks,
                "; ".join([*remarks, "taken per radian, which is not written"]),
            )  # fmt: skip
        return None
    offset = 0.0
    if si == "°C":
        if "kelvin" in names and not names & {"celsius", "fahrenheit"}:
            offset = -273.15
            remarks = [*remarks, "an absolute temperature in kelvin"]
        elif "fahrenheit" in names:
            offset = -160 / 9
    if product.tens >= 6 and si in _NEVER_MEGA and re.search(r"M", text):
        factor, remarks = factor / 1e9, [*remarks, "M taken as milli: mega is out of the question"]
    if si == "kg·m²" and re.search(r"10\^?\d|[×x]\s*10+(?!\d|\^?[-+])", bare(text)):
        remarks = [*remarks, "a power of ten above 1: some sheets mean that the figure was multiplied"]
    if si == "V·s/rad" and re.fullmatch(r"V/\(?(?:min\^?-1|rpm|1/min|r/min)\)?", bare(text)):
        remarks = [*remarks, "as written; some sheets mean V per 1000 rpm"]
    return Unit(text, si, factor, offset, wanted, marks, "; ".join(remarks))


def _ambiguous(text: str, units: list[Unit]) -> UnitError:
    return UnitError(
        text,
        "upper and lower case are lost, so it can be read in more than one way",
        [f"{unit.factor:g} {unit.si}" for unit in units],
    )


def _or(accepts: Sequence[str]) -> str:
    return " or ".join("a currency such as EUR" if si == "currency" else si for si in accepts)


def _refusal(
    text: str, clean: str, accepts: tuple[str, ...], strange: NotAUnitError | None
) -> UnitError:
    """Why the text can't be a unit of this quantity, and what may have been meant."""
    try:
        products = read_products(clean)
    except NotAUnitError:
        reason = str(strange)
        part = strange.part if strange else ""
        words = [*table().words, *table().compounds]
        near = difflib.get_close_matches(part, words, n=3, cutoff=0.6) if len(part) > 1 else []
        return UnitError(text, reason, [clean.replace(part, word) for word in near])
    for product in products:
        for si in accepts:
            if "rad" not in si or product.power_of("radian"):
                continue
            (target,) = read_products(si)
            with_angle = product.times(target, 0).times(
                Product(tuple((n, e) for n, e in target.powers if n == "radian"))
            )
            if evaluate(with_angle)[1] == evaluate(target)[1]:
                turns = si.replace("rad", "rev")
                return UnitError(text, "it does not say whether radians or turns", [si, turns])
    other = unit_of(text)
    what = f"it is a unit of {other.si}" if other else "it is a unit of another quantity"
    return UnitError(text, f"{what}; {_or(accepts)} would do")


@lru_cache(maxsize=8192)
def unit_of(text: str) -> Unit | None:
    """The unit without an expected quantity; None if it is not understood or could be several.

    Used to decide what a column may be. Nothing is repaired here ("W" is a watt), and words are
    read without regard to case only if they have more than one letter.
    """
    if not text.strip():
        return None
    money = _currency(text, ("currency",))
    if isinstance(money, Unit):
        return money
    clean, marks = split_marks(bare(text))
    for spelling, entries in table().texts.items():
        for meaning, wanted, _ in entries:
            if not wanted and bare(spelling) == clean:
                return unit_of(meaning)
    ways = [(True, False), (False, False)]
    if len(clean) > 1:
        ways += [(True, True), (False, True)]
    for grouped, fold in ways:
        try:
            products = read_products(clean, grouped, fold)
        except NotAUnitError:
            continue
        found: dict[str, Unit] = {}
        for product in products:
            for variant, remark in variants(product):
                units = [
                    unit
                    for si in _targets_of(variant)
                    if (unit := _as_target(text, variant, si, marks, [remark] if remark else []))
                ]
                if units:
                    for unit in units[:1]:
                        found.setdefault(f"{unit.dimension} {unit.factor}", unit)
                    break
        if found:
            return next(iter(found.values())) if len(found) == 1 else None
    return None


def _targets_of(product: Product) -> list[str]:
    names = {name for name, _ in product.powers}
    if names == {"kelvin"}:
        return ["K"]
    if names in ({"celsius"}, {"fahrenheit"}):
        return ["°C"]
    return table().targets


def is_unit_like(text: str) -> bool:
    """Whether the text could be a unit ("mNm/A", "min⁻¹", "%", "Hz"): to find unit rows."""
    stripped = plain(text)
    if not stripped or len(stripped) > 40 or re.fullmatch(r"[\d.,' +-]*", stripped):
        return False
    if unit_of(text) is not None:
        return True
    try:
        read_products(split_marks(bare(text))[0])
    except NotAUnitError:
        return False
    return True


def quantity(text: str, accepts: tuple[str, ...]) -> float:
    """A number with its unit, typed by a person, in SI: "0.3 N*m" → 0.3.

    The decimal sign is a point. A bare number is refused unless "1" is accepted. Raises
    FigureError or UnitError.
    """
    value, unit = _number_and_unit(text)
    if not unit and "1" not in accepts:
        raise UnitError(text, f"a number without a unit; {_or(accepts)} would do")
    read = read_unit(unit, accepts)
    return value * read.factor + read.offset


def convert(text: str, target: str) -> Converted:
    """A number with its unit in another unit: ("4.3 V/krpm", "N·m/A") → 0.0411 N·m/A.

    A torque constant and a back-EMF constant are the same SI number and convert to each other.
    Raises FigureError or UnitError.
    """
    wanted = unit_of(target)
    if wanted is None:
        raise UnitError(target, "not understood as a unit to convert to")
    accepts = ("N·m/A", "V·s/rad") if wanted.si in ("N·m/A", "V·s/rad") else (wanted.si,)
    into = read_unit(target, accepts)
    value, unit = _number_and_unit(text)
    if not unit and accepts != ("1",):
        raise UnitError(text, f"a number without a unit; {_or(accepts)} would do")
    source = read_unit(unit, accepts)
    si = value * source.factor + source.offset
    remark = "; ".join(r for r in (source.remark, into.remark) if r)
    return Converted((si - into.offset) / into.factor, target, remark)


def _number_and_unit(text: str) -> tuple[float, str]:
    figure = read_figure(text, POINT)
    if figure is None:
        raise UnitError(text, "a number with a unit is wanted")
    if figure.qualifier or figure.also or figure.marks:
        raise UnitError(text, "one plain number with a unit is wanted")
    if figure.other is not None and "," in text:
        raise UnitError(text, "write the number without a comma; the decimal sign is a point")
    return figure.value, figure.unit
