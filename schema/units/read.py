"""Unit text of a sheet → factor to SI, dimension, and the convention words that rode in it.

Which quantity is expected decides what a text means: "oz-in" is a torque, "oz-in²" an inertia of
mass, "oz-in-s²" an inertia of force; "min⁻¹" is a speed, and "s⁻¹" is refused as one, since it
may be rad/s or rev/s. What is taken for something else than it says is told in ``remark``.
"""

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from functools import lru_cache

from ..errors import MotorfolioError, excerpt
from ..figure.read import POINT, FigureError, read_figure
from ..figure.signs import plain
from ..spelling import nearest
from .factors import evaluate
from .table import Product, table
from .text import NotAUnitError, bare, read_products, split_marks, variants

GD2_TO_INERTIA = 0.25
"""A flywheel effect GD² (weight times diameter squared) is four times the inertia: J = GD²/4."""


class UnitError(MotorfolioError):
    """A unit text that is not understood, or not for this quantity; ``guesses`` are spellings
    of what it may mean."""

    def __init__(self, text: str, reason: str, guesses: Sequence[str] = ()) -> None:
        self.text = text
        self.reason = reason
        self.guesses = tuple(guesses)
        hint = f"; it may mean {' or '.join(map(excerpt, self.guesses))}" if guesses else ""
        super().__init__(f'unit "{excerpt(text)}": {excerpt(reason, 160)}{hint}')


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


_LONGEST = 100
_NO_COMMA = "write the number without a comma; the decimal sign is a point"
# Where a million is absurd for a motor, an upper-case M is a thousandth.
_NEVER_MEGA = {"V", "A", "H", "N·m", "N·m/A", "V·s/rad", "N·m/√W", "rad/(s·N·m)", "s", "m"}


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
    known = {"currency", *table().targets, *table().currencies.values()}
    if strange := set(accepts) - known:
        raise ValueError(f"{sorted(strange)} is not under [targets] in units.txt")
    if not text.strip():
        if "1" in accepts:
            return Unit(text, "1", 1.0, 0.0, "1")
        return UnitError(text, f"no unit is given; {spelt_out(accepts)} would do")
    if len(text) > _LONGEST:
        return UnitError(text, f"longer than any unit; {spelt_out(accepts)} would do")
    if accepts == ("m",) and re.match(r"[×xX*]\s*1000", bare(text)):
        return UnitError(text, "it may be a factor or a second dimension; write one length")
    if (money := _currency(text, accepts)) is not None:
        return money
    clean, marks = split_marks(bare(text))
    if (named := _whole_text(text, clean, marks, accepts)) is not None:
        return named
    units, strange_part = _fitting(text, clean, marks, accepts)
    if len(units) > 1:
        guesses = [f"{unit.factor:g} {unit.si}" for unit in units]
        return UnitError(text, "upper and lower case are lost, and with them the meaning", guesses)
    return units[0] if units else _refusal(text, clean, accepts, strange_part)


def _currency(text: str, accepts: tuple[str, ...]) -> Unit | None:
    word = re.sub(r"\s*(?:/|per\s)\s*(?:pcs?|piece|unit|each|Stk|Stück|St)\.?$", "", text.strip())
    code = table().currencies.get(word)
    if code is None or not ("currency" in accepts or code in accepts):
        return None
    remark = "$ taken as US dollars" if word == "$" else ""
    return Unit(text, code, 1.0, 0.0, f"[currency {code}]", remark=remark)


def _whole_text(
    text: str, clean: str, marks: frozenset[str], accepts: tuple[str, ...]
) -> Unit | UnitError | None:
    """A text that the table names as a whole, for the quantity that is expected."""
    spellings = dict.fromkeys(
        form.replace("^", "") for t in (bare(text), clean) for form in (t, re.sub("[*· ]", "-", t))
    )
    for si in accepts:
        for spelling in (bare(text), *spellings):
            if (spelling, si) in table().unsure:
                meanings = table().unsure[spelling, si]
                return UnitError(text, "it does not say which unit it is", meanings)
            if (spelling, si) in table().texts:
                meaning, remark = table().texts[spelling, si]
                if meaning == "1":
                    return Unit(text, "1", 1.0, 0.0, "1")
                unit = read_unit(meaning, (si,))
                return replace(unit, text=text, marks=unit.marks | marks, remark=remark)
    return None


def _fitting(
    text: str, clean: str, marks: frozenset[str], accepts: tuple[str, ...]
) -> tuple[list[Unit], NotAUnitError | None]:
    """The first way of reading that gives a unit of the quantity; several units if it is unsure.

    Words are taken as written before their case is given up, and "r/min", "rad/s" as one unit
    before they are taken apart.
    """
    strange = None
    milli = all(si in _NEVER_MEGA for si in accepts)
    for fold in (False, True):
        for grouped in (True, False):
            try:
                products = read_products(clean, grouped, fold, milli)
            except NotAUnitError as error:
                strange = strange or error
                continue
            remarks = ["read without regard to upper and lower case"] if fold else []
            if milli and products != read_products(clean, grouped, fold):
                remarks.append("M read as milli, as mega is out of the question")
            found = [_first_target(text, p, accepts, marks, remarks) for p in products]
            units = {unit.factor: unit for unit in found if unit is not None}
            if units:
                return list(units.values()), None
    return [], strange


def _first_target(
    text: str,
    product: Product,
    accepts: Sequence[str],
    marks: frozenset[str],
    remarks: list[str],
) -> Unit | None:
    """The product, or what the trade means by it, as a unit of the first SI unit that it fits."""
    for variant, remark in variants(product):
        for si in accepts:
            if si in table().targets:
                said = [remark, *remarks] if remark else remarks
                unit = _as_target(text, variant, si, marks, said)
                if unit is not None:
                    return unit
    return None


def _as_target(
    text: str, product: Product, si: str, marks: frozenset[str], remarks: list[str]
) -> Unit | None:
    """The product as a unit of `si`, or None where it is none."""
    if not _same_kind(product, si):
        return None
    (target,) = read_products(si)
    factor, dimension = evaluate(product)
    wanted = evaluate(target)[1]
    if dimension != wanted:
        if not _radian_not_written(product, si, wanted):
            return None
        remarks = [*remarks, "taken per radian, which is not written"]
    offset = 0.0
    if si == "°C" and product.power_of("fahrenheit"):
        offset = -160 / 9
    elif si == "°C" and product.power_of("kelvin"):
        offset = -273.15
        remarks = [*remarks, "an absolute temperature in kelvin"]
    signs = bare(text)
    if si == "kg·m²" and re.search(r"10\^\d|(?:^|[×x]\s*)10+(?![\d^-])", signs):
        remarks = [*remarks, "the power of ten may also say that the figure was multiplied by it"]
    if si == "V·s/rad" and re.fullmatch(r"V/\(?(?:min\^?-1|rpm|1/min|[rU]/min)\)?", signs):
        remarks = [*remarks, "as written; V per 1000 rpm may be meant"]
    return Unit(text, si, factor, offset, wanted, marks, "; ".join(remarks))


def _same_kind(product: Product, si: str) -> bool:
    """Whether a unit of one dimension with `si` is also one of its kind.

    Weber is V·s is N·m/A, and a joule a newton metre: the dimension alone lets "mV·min" pass for
    a torque constant, 6.28 times wrong.
    """
    names = {name for name, _ in product.powers}
    match si:
        case "N·m":
            return not names & {"joule", "watt"}
        case "J":
            return bool(names & {"joule", "watt"})
        case "N·m/A":
            return "volt" not in names
        case "Hz":
            return "minute" not in names
        case "°C" | "K":
            return names in ({"celsius"}, {"fahrenheit"}, {"kelvin"})
        case _:
            return True


def _radian_not_written(product: Product, si: str, wanted: str) -> bool:
    """ "V·s" for V·s/rad and "N·m·s" for N·m·s/rad: only with seconds, which no turn counts in."""
    names = {name for name, _ in product.powers}
    if product.power_of("second") != 1 or names & {"minute", "hertz", "hour"}:
        return False
    if (si == "V·s/rad" and "volt" not in names) or si not in ("V·s/rad", "N·m·s/rad"):
        return False
    return evaluate(product.times(_RADIAN, -1))[1] == wanted


_RADIAN = Product((("radian", Fraction(1)),))


def spelt_out(accepts: Sequence[str]) -> str:
    """The units as a refusal lists them."""
    return " or ".join("a currency such as EUR" if si == "currency" else si for si in accepts)


def _refusal(
    text: str, clean: str, accepts: tuple[str, ...], strange: NotAUnitError | None
) -> UnitError:
    """Why the text can't be a unit of this quantity, and what may have been meant."""
    try:
        products = read_products(clean)
    except NotAUnitError as error:
        strange = strange or error
        words = [*table().words, *table().compounds]
        near = nearest(strange.part, words, most=3)
        if len(strange.part) < 2 or (strange.part == clean and " " in clean):
            near = []
        guesses = strange.guesses or tuple(clean.replace(strange.part, word) for word in near)
        return UnitError(text, str(strange), guesses)
    for si in accepts:
        (target,) = read_products(si) if si in table().targets else (Product(),)
        angle = target.power_of("radian")
        if angle and any(
            not p.power_of("radian") and evaluate(p.times(_RADIAN, angle))[1] == evaluate(target)[1]
            for p in products
        ):
            guesses = (si, si.replace("rad", "rev"))
            return UnitError(text, "it does not say whether it counts radians or turns", guesses)
    other = unit_of(text)
    what = "it is a unit of another quantity"
    if other is not None and other.si != text.strip():
        what = f"it is a unit of {other.si}"
    return UnitError(text, f"{what}; {spelt_out(accepts)} would do")


@lru_cache(maxsize=8192)
def unit_of(text: str) -> Unit | None:
    """The unit without an expected quantity; None if it is not understood or could be several.

    Used to decide what a column may be. Nothing is repaired here ("W" is a watt), and the case of
    a single letter always counts.
    """
    if not text.strip() or len(text) > _LONGEST:
        return None
    if (money := _currency(text, ("currency",))) is not None:
        return money
    clean, marks = split_marks(bare(text))
    if clean in _RATES_ONLY:
        return None
    ways = [(g, f) for f in (False, True) for g in (True, False) if not f or len(clean) > 1]
    for grouped, fold in ways:
        try:
            products = read_products(clean, grouped, fold)
        except NotAUnitError:
            continue
        found = {_kind(text, product, marks) for product in products} - {None}
        if found:
            (si, *others) = found
            unit = _read(text, (si,)) if si and not others else None
            return unit if isinstance(unit, Unit) else None
    named = [si for spelling, si in table().texts if spelling == clean and len(clean) > 2]
    unit = _read(text, (named[0],)) if len(named) == 1 else None
    return unit if isinstance(unit, Unit) else None


# Letters that mean a revolution only in "r/min" and its like.
_RATES_ONLY = {"r", "U", "tr", "об", "转", "轉"}


def _kind(text: str, product: Product, marks: frozenset[str]) -> str | None:
    """The SI unit that a product is a unit of."""
    names = {name for name, _ in product.powers}
    targets = ["°C"] if names & {"celsius", "fahrenheit"} and len(names) == 1 else table().targets
    targets = [si for si in targets if si != "°C" or len(targets) == 1]
    unit = _first_target(text, product, targets, marks, [])
    return unit.si if unit else None


def is_unit_like(text: str) -> bool:
    """Whether the text could be a unit ("mNm/A", "min⁻¹", "%", "Hz"): to find unit rows."""
    stripped = plain(text)
    if not stripped or len(stripped) > 40 or re.fullmatch(r"[\d.,' +-]*", stripped):
        return False
    if unit_of(text) is not None:
        return True
    clean = split_marks(bare(text))[0]
    if clean in _RATES_ONLY:
        return False
    try:
        read_products(clean)
    except NotAUnitError:
        return any(spelling in (clean, bare(text)) for spelling, _ in table().texts)
    return True


def quantity(text: str, accepts: tuple[str, ...]) -> float:
    """A number with its unit, typed by a person, in SI: "0.3 N*m" → 0.3.

    The decimal sign is a point. A bare number is refused unless "1" is accepted. Raises
    FigureError or UnitError.
    """
    value, unit = number_and_unit(text)
    if not unit and "1" not in accepts:
        raise UnitError(text, f"a number without a unit; {spelt_out(accepts)} would do")
    read = read_unit(unit, accepts)
    return finite(value * read.factor + read.offset, text)


def finite(value: float, text: str) -> float:
    """The value; UnitError where it is too large for a number."""
    if not math.isfinite(value):
        raise UnitError(text, "the quantity is too large for a number")
    return value


def number_and_unit(text: str) -> tuple[float, str]:
    """A typed number and the text of its unit, unread. Raises FigureError or UnitError."""
    try:
        figure = read_figure(text, POINT)
    except FigureError:
        if re.search(r"\d,\d", text):
            raise UnitError(text, _NO_COMMA) from None
        raise
    if figure is None:
        raise UnitError(text, "a number with a unit is wanted")
    if figure.qualifier or figure.also or figure.marks:
        raise UnitError(text, "one plain number with a unit is wanted")
    if figure.other is not None and "," in text:
        raise UnitError(text, _NO_COMMA)
    return figure.value, figure.unit
