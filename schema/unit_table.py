"""The units and spellings of ``units.txt``, and what pint makes of a product of units.

pint sees only names that stand in that file, never a maker's text, and is imported when a product
is met for the first time that is not in ``unit_factors.txt``.
"""

from dataclasses import dataclass, field
from fractions import Fraction
from functools import cache, lru_cache
from importlib.resources import files
from typing import NamedTuple

_LETTERS = {"n": -9, "μ": -6, "u": -6, "m": -3, "c": -2, "k": 3, "M": 6}
_NAMES = {"n": "nano", "μ": "micro", "m": "milli", "c": "centi", "k": "kilo", "M": "mega"}


class Product(NamedTuple):
    """A product of powers of units, times a power of ten: mN·m/A is N¹ m¹ A⁻¹ · 10⁻³."""

    powers: tuple[tuple[str, Fraction], ...] = ()
    tens: Fraction = Fraction(0)

    def times(self, other: "Product", power: Fraction | int = 1) -> "Product":
        total = dict(self.powers)
        for name, exponent in other.powers:
            total[name] = total.get(name, Fraction(0)) + exponent * power
        powers = tuple(sorted((n, e) for n, e in total.items() if e))
        return Product(powers, self.tens + other.tens * power)

    def power_of(self, name: str) -> Fraction:
        return next((e for n, e in self.powers if n == name), Fraction(0))

    def replaced(self, name: str, by: str, sign: int = 1) -> "Product":
        """With every `name` put as `by` (sign −1: as 1/`by`)."""
        e = self.power_of(name)
        return self.times(Product(((name, -e), (by, e * sign)))) if e else self


@dataclass(slots=True)
class Table:
    """What stands in ``units.txt``; ``compounds`` and ``texts`` still as text."""

    definitions: dict[str, str] = field(default_factory=dict)
    words: dict[str, Product] = field(default_factory=dict)
    compounds: dict[str, tuple[str, int]] = field(default_factory=dict)
    texts: dict[str, list[tuple[str, tuple[str, ...], str]]] = field(default_factory=dict)
    unsure: dict[str, tuple[tuple[str, ...], tuple[str, ...]]] = field(default_factory=dict)
    targets: list[str] = field(default_factory=list)
    currencies: dict[str, str] = field(default_factory=dict)
    often: list[str] = field(default_factory=list)
    folded: dict[str, list[str]] = field(default_factory=dict)


def _fields(line: str, n: int) -> list[str]:
    parts = [part.strip() for part in line.split(" ;")]
    return (parts + [""] * n)[:n]


def _spellings(words: str, prefixes: str) -> list[tuple[str, int]]:
    """Every spelling with every prefix and the power of ten that it stands for."""
    found = []
    for word in words.split():
        found.append((word, 0))
        for letter in prefixes:
            found.append((letter + word, _LETTERS[letter]))
            if letter in _NAMES and len(word) > 2:
                found.append((_NAMES[letter] + word, _LETTERS[letter]))
    return found


@cache
def table() -> Table:
    """``units.txt``, read once."""
    result = Table()
    scaled: dict[str, Product] = {}
    section = ""
    text = files(__package__).joinpath("units.txt").read_text(encoding="utf-8")
    for line in text.splitlines():
        if not line.strip() or line.startswith("#"):
            continue
        if line.startswith("["):
            section = line.strip("[] ")
        elif section == "units":
            head, prefixes, words = _fields(line, 3)
            name, definition = (part.strip() for part in head.split(" = "))
            if definition.startswith("e"):
                power, _, base = definition[1:].partition(" ")
                unit = Product((), Fraction(int(power)))
                unit = unit.times(scaled.get(base, Product(((base, Fraction(1)),)))) if base else unit
                if name in ("celsius", "fahrenheit"):
                    unit = Product(((name, Fraction(1)),))
                    result.definitions[name] = base
            else:
                result.definitions[name] = definition
                unit = Product(((name, Fraction(1)),))
            scaled[name] = unit
            for spelling, tens in _spellings(words, prefixes):
                result.words.setdefault(spelling, unit.times(Product((), Fraction(tens))))
        elif section == "compounds":
            meaning, prefixes, words = _fields(line, 3)
            for spelling, tens in _spellings(words, prefixes):
                result.compounds.setdefault(spelling, (meaning, tens))
        elif section == "texts":
            head, accepts, remark = _fields(line, 3)
            spelling, meaning = (part.strip() for part in head.rsplit(" = ", 1))
            entry = (meaning, tuple(accepts.split()), remark)
            result.texts.setdefault(spelling, []).append(entry)
        elif section == "unsure":
            head, accepts = _fields(line, 2)
            spelling, meanings = (part.strip() for part in head.split(" = "))
            result.unsure[spelling] = (tuple(meanings.split(", ")), tuple(accepts.split()))
        elif section == "targets":
            result.targets.append(line.strip())
        elif section == "currencies":
            code, words = _fields(line, 2)
            result.currencies.update(dict.fromkeys(words.split(), code))
        elif section == "often":
            result.often.append(line.strip())
    for spelling in (*result.words, *result.compounds):
        result.folded.setdefault(spelling.lower(), []).append(spelling)
    return result


@cache
def _registry():
    import pint

    registry = pint.UnitRegistry(None)
    for name, definition in table().definitions.items():
        registry.define(f"{name} = {definition}")
    return registry


def _key(powers: tuple[tuple[str, Fraction], ...]) -> str:
    return " ".join(f"{name}^{exponent}" for name, exponent in powers) or "1"


def _by_pint(powers: tuple[tuple[str, Fraction], ...]) -> tuple[float, str]:
    registry = _registry()
    unit = registry.Unit("")
    for name, exponent in powers:
        unit = unit * registry.Unit(name) ** (
            int(exponent) if exponent.denominator == 1 else float(exponent)
        )
    base = registry.Quantity(1.0, unit).to_base_units()
    dimensions = sorted((name, exponent) for name, exponent in unit.dimensionality.items())
    return float(base.magnitude), " ".join(f"{n}^{e:g}" for n, e in dimensions) or "1"


@cache
def _frozen() -> dict[str, tuple[float, str]]:
    text = files(__package__).joinpath("unit_factors.txt").read_text(encoding="utf-8")
    rows = (line.split("\t") for line in text.splitlines() if line and not line.startswith("#"))
    return {key: (float(factor), dimension) for key, factor, dimension in rows}


@lru_cache(maxsize=4096)
def evaluate(product: Product) -> tuple[float, str]:
    """Factor to coherent SI units, and the dimension in one canonical text.

    The power of ten is kept as a whole number until the end, so that g·cm² is 1e-07 exactly.
    """
    found = _frozen().get(_key(product.powers)) or _by_pint(product.powers)
    factor, dimension = found
    if product.tens.denominator != 1:
        return factor * 10.0 ** float(product.tens), dimension
    ten = float(f"1e{int(product.tens)}")
    return (ten if factor == 1.0 else factor * ten), dimension


def frozen_lines() -> list[str]:
    """The lines of ``unit_factors.txt`` for the units under [often] and [targets], by pint."""
    from .unit_text import read_products

    keys = {}
    for text in (*table().targets, *table().often):
        for product in read_products(text):
            for powers in (product.powers, *_as_forces(product)):
                keys[_key(powers)] = powers
    return [
        f"{key}\t{factor!r}\t{dimension}"
        for key, powers in sorted(keys.items())
        for factor, dimension in [_by_pint(powers)]
    ]


def _as_forces(product: Product) -> list[tuple[tuple[str, Fraction], ...]]:
    from .units import variants

    return [variant.powers for variant, _ in variants(product)]


if __name__ == "__main__":
    print("# Factors to SI of the units under [often] and [targets] in units.txt, as pint gives them.")
    print("\n".join(frozen_lines()))
