"""The units and spellings of ``units.txt``, as tables; and products of units."""

from dataclasses import dataclass, field
from fractions import Fraction
from functools import cache
from importlib.resources import files
from typing import NamedTuple

_LETTERS = {"n": -9, "μ": -6, "u": -6, "m": -3, "c": -2, "d": -1, "k": 3, "M": 6}
_NAMES = {"n": "nano", "μ": "micro", "m": "milli", "c": "centi", "k": "kilo", "M": "mega"}


Powers = tuple[tuple[str, Fraction], ...]


class Product(NamedTuple):
    """A product of powers of units, times a power of ten: mN·m/A is N¹ m¹ A⁻¹ · 10⁻³."""

    powers: Powers = ()
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
    """What stands in ``units.txt``; the meanings of compounds and whole texts still as text.

    ``texts`` and ``unsure`` are keyed by (spelling, SI unit that is expected).
    """

    definitions: dict[str, str] = field(default_factory=dict)
    words: dict[str, Product] = field(default_factory=dict)
    compounds: dict[str, tuple[str, int]] = field(default_factory=dict)
    mega: set[str] = field(default_factory=set)  # spellings with the prefix M
    texts: dict[tuple[str, str], tuple[str, str]] = field(default_factory=dict)
    unsure: dict[tuple[str, str], tuple[str, ...]] = field(default_factory=dict)
    targets: list[str] = field(default_factory=list)
    currencies: dict[str, str] = field(default_factory=dict)
    often: list[str] = field(default_factory=list)
    folded: dict[str, list[str]] = field(default_factory=dict)


def _fields(line: str, n: int) -> list[str]:
    parts = [part.strip() for part in line.split(" ;")]
    return (parts + [""] * n)[:n]


def _spellings(words: str, prefixes: str, mega: set[str]) -> list[tuple[str, int]]:
    """Every spelling with every prefix and the power of ten that it stands for."""
    found = []
    for word in words.split():
        found.append((word, 0))
        for letter in prefixes:
            found.append((letter + word, _LETTERS[letter]))
            if letter == "M":
                mega.add(letter + word)
            if letter in _NAMES and len(word) > 2:
                found.append((_NAMES[letter] + word, _LETTERS[letter]))
    return found


@cache
def table() -> Table:
    """``units.txt``, read once."""
    result = Table()
    scaled: dict[str, Product] = {}
    section = ""
    text = files("motorfolio.schema.units").joinpath("units.txt").read_text(encoding="utf-8")
    for line in text.splitlines():
        if not line.strip() or line.startswith("#"):
            continue
        if line.startswith("["):
            section = line.strip("[] ")
        elif section == "units":
            head, prefixes, words = _fields(line, 3)
            name, definition = (part.strip() for part in head.split(" = "))
            unit = Product(((name, Fraction(1)),))
            if definition.startswith("e"):
                power, _, base = definition[1:].partition(" ")
                unit = scaled[base] if base else Product()
                unit = unit.times(Product((), Fraction(int(power))))
            else:
                result.definitions[name] = definition
            scaled[name] = unit
            for spelling, tens in _spellings(words, prefixes, result.mega):
                result.words.setdefault(spelling, unit.times(Product((), Fraction(tens))))
        elif section == "compounds":
            meaning, prefixes, words = _fields(line, 3)
            for spelling, tens in _spellings(words, prefixes, result.mega):
                result.compounds.setdefault(spelling, (meaning, tens))
        elif section == "texts":
            head, accepts, remark = _fields(line, 3)
            spelling, meaning = (part.strip() for part in head.rsplit(" = ", 1))
            result.texts[spelling, accepts] = (meaning, remark)
        elif section == "unsure":
            head, accepts = _fields(line, 2)
            spelling, meanings = (part.strip() for part in head.split(" = "))
            result.unsure[spelling, accepts] = tuple(meanings.split(", "))
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
