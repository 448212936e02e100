"""A unit text as makers write it → the products of units it may mean, and its convention words.

Rules of the trade that no algebra has: a hyphen between letters is a product ("oz-in"); what stands
behind a slash goes together up to the next slash ("rpm/mN·m"); "r/min" and "1/min" are one unit
("V/1000 r/min"); "W½" and "√W" are powers; "Arms" is an ampere with a word about it.
"""

import re
from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

from ..figure.signs import plain
from .table import Product, table


class NotAUnitError(ValueError):
    """The text has a part that is no unit; ``part`` is that part, ``guesses`` what may be meant."""

    def __init__(self, part: str, reason: str = "", guesses: tuple[str, ...] = ()) -> None:
        self.part = part
        self.guesses = guesses
        self.reason = reason or f'"{part}" is no unit known here'
        super().__init__(self.reason)


# Convention words, in this order. A word may be glued to A or V, else it stands on its own.
_BEFORE = r"(?:(?<![^\W\d_])|(?<=[AVav]))"
_AFTER = r"(?![^\W\d_])"
_LINE = r"(?:l(?:ine)?s?|ph(?:ase|\.)?s?|fase|fasi|phase)"
_MARKS: list[tuple[str, re.Pattern[str]]] = [
    (mark, re.compile(pattern, re.IGNORECASE))
    for mark, pattern in [
        ("peak-to-peak", _BEFORE + r"(?:peak|pk|p)\s*(?:-|to|-to-|/)\s*(?:peak|pk|p)" + _AFTER),
        ("peak-to-peak", r"(?<=[AV])_?pp" + _AFTER),
        ("peak", _BEFORE + r"(?:0\s*-\s*)(?:peak|pk|p)" + _AFTER),
        (
            "peak",
            _BEFORE + r"(?:(?:peak|pk)(?:\s+(?:of\s+)?(?:the\s+)?sine(?:\s?wave)?)?"
            r"|crest|crête|Spitze|Scheitel|pico|picco|amplitude)" + _AFTER,
        ),
        ("peak", r"(?<=[AV])_?p" + _AFTER + "|峰值|ピーク"),
        ("rms", _BEFORE + r"(?:r\.?m\.?s\.?|eff(?:ective|ektiv|icaces?)?\.?)" + _AFTER),
        ("rms", r"(?<=[AV])_?ef" + _AFTER + "|有效值|実効値"),
        ("lines", _BEFORE + rf"(?:{_LINE}\s*(?:-|to|-to-|/)\s*{_LINE}|LL)" + _AFTER),
        ("lines", _BEFORE + r"lines?" + _AFTER + "|線間|线间|相間|相间"),
        ("phase", _BEFORE + r"(?:L-?N|ph-n)" + _AFTER),
        (
            "phase",
            r"\s*(?:/|\bper\s)?\s*" + _BEFORE + r"(?:ph(?:ase)?\.?|fase|Strang)" + _AFTER + "|/相",
        ),
        ("dc", _BEFORE + r"d\.?c\.?" + _AFTER + r"|(?<=[AV])\s?c\.?c\.?" + _AFTER + "|⎓|直流"),
        (
            "ac",
            _BEFORE
            + r"a\.?c\.?"
            + _AFTER
            + r"|(?<=[AV])\s?c\.?a\.?"
            + _AFTER
            + "|(?<=[AV])\\s?~|交流",
        ),
    ]
]


def split_marks(text: str) -> tuple[str, frozenset[str]]:
    """A unit text without its convention words, and these: "Vrms (L-L)/krpm" → "V/krpm"."""
    marks = set()
    for mark, pattern in _MARKS:
        text, n = pattern.subn(" ", text)
        if n:
            marks.add(mark)
    if marks:
        text = re.sub(r"[(\[{][\s,;/_-]*[)\]}]", " ", text)
        text = re.sub(r"[\s,;_]+(?=[/)\]]|$)|[\s,;_-]+$|^[\s,;_-]+|(?<=[(/])\s+", "", text)
        text = re.sub(r"[,;_]", " ", text)
    return text.strip(), frozenset(marks)


_BARE = [
    (re.compile(pattern), by)
    for pattern, by in [
        (r"(?<=[^\W\d_])\^?\(?-1/2\)?(?![\d/])", "^-0.5"),
        (r"½|\^?\(?1/2\)?(?![\d/])(?<=[^\s]1/2|1/2\))", "^0.5"),
        (r"°\s+(?=[CF]\b)", "°"),
        (r"(?i)\bdeg(?:ree)?s?\.?\s*(?=[CF](?:elsius|ahrenheit)?\b)", "°"),
        (r"°Celsius\b", "°C"),
        (r"°Fahrenheit\b", "°F"),
        (r"(?<![^\W\d_])[xX*·](?=\s*10)|(?<=\s)[xX](?=\s)", "×"),
        (r"(?<=[^\W\d_])x(?=\s*10)", "×"),
        (r"(?i)\br\.?p\.?m\.?(?![^\W\d_])", "rpm"),
        (r"(?i)(?<![^\W\d_])per(?![^\W\d_])", "/"),
        (r"k(?=min\^?-1)", "1000 "),
        (r"(?<![\d.,^])1\s*/\s*(?=min(?![^\W\d_]))|^/\s*(?=min)", " per "),
        (r" per (min)", r" \1^-1"),
        (r"(?i)sqrt\s*(?=[(^\W\d_])|sqrt\s+|sqrt(?=[wW])", "√"),
        (r"\*\*", "^"),
        (r"(?<=[^\W\d_])\.(?=[^\W\d_])", "·"),
        (r"(?<=[^\W\d_])\.", ""),
    ]
]
_OUTER = re.compile(r"\((?P<a>[^()]*)\)|\[(?P<b>[^\[\]]*)\]|\{(?P<c>[^{}]*)\}")


@lru_cache(maxsize=4096)
def bare(text: str) -> str:
    """A unit text in plain signs, without the brackets around all of it."""
    text = plain(text.replace("⁻½", "^-0.5").replace("½", "^0.5")).replace("\n", " ").strip()
    while (outer := _OUTER.fullmatch(text)) is not None:
        text = next(g for g in outer.groups() if g is not None).strip()
    return re.sub(r"^in\s+(?=[\d×])", "", text)


_TOKEN = re.compile(
    r"\s*(?:(?P<ten>(?:10?[eE]|10\^?(?=[+-])|10\^)(?P<power>\(?[+-]?\d+\)?))(?!\d)"
    r"|(?P<number>1[., ']000(?!\d)|\d+)"
    r"|(?P<word>°[CF]?(?![^\W\d_])|°|[^\W\d_]+|[%‰\"'])"
    r"|(?P<sign>[×·*/()\[\]{}√-]))"
)
_EXPONENT = r"[+-]?(?:\d+/\d+|\d+(?:[.,]\d+)?|\.\d+)"
_POWER = re.compile(
    rf"\^(?P<raised>{_EXPONENT})|\^[({{](?P<inner>{_EXPONENT})[)}}]"
    r"|(?P<low>-?[1-4])(?!\d)|(?P<half>0[.,]5)"
)


# No unit of a sheet goes beyond these; what does would have no finite factor.
_MOST_TENS, _MOST, _MOST_ROOT = 40, 20, 8


def _products(some: list[Product], others: list[Product], power: int = 1) -> list[Product]:
    """Each of some times each of the others, once: a text of many letters with two meanings each
    has few products, though many ways to them."""
    return list(dict.fromkeys(a.times(b, power) for a in some for b in others))


@dataclass(slots=True)
class _Parser:
    text: str
    grouped: bool  # "r/min" and "rad/s" are one unit where they stand behind a slash
    fold: bool  # read words without regard to upper and lower case
    milli: bool  # read the prefix M as milli
    at: int = 0

    def peek(self) -> re.Match[str] | None:
        return _TOKEN.match(self.text, self.at)

    def sign(self) -> str:
        token = self.peek()
        return (token.group("sign") or "") if token else ""

    def take(self) -> re.Match[str]:
        token = self.peek()
        if token is None:
            raise NotAUnitError(self.text[self.at :].strip() or self.text)
        self.at = token.end()
        return token

    def all(self) -> list[Product]:
        products = self.quotient()
        if self.text[self.at :].strip():
            raise NotAUnitError(self.text[self.at :].strip())
        for product in products:
            powers = [e for _, e in product.powers]
            if (
                abs(product.tens) > _MOST_TENS
                or sum(map(abs, powers)) > _MOST
                or any(e.denominator > _MOST_ROOT for e in powers)  # pint 0.26 rounds them away
            ):
                raise NotAUnitError(self.text, f'the powers in "{self.text}" are beyond any unit')
        return products

    def quotient(self) -> list[Product]:
        scale: list[Product] = [Product()]
        result = self.product(scale, below=False)
        while self.sign() == "/":
            self.take()
            below = self.product(scale, below=True)
            result = _products(result, below, -1)
        return [a.times(scale[0]) for a in result]

    def product(self, scale: list[Product], below: bool) -> list[Product]:
        result = [Product()]
        first = True
        while (token := self.peek()) is not None:
            sign = token.group("sign")
            if sign in ("/", ")", "]", "}"):
                break
            if sign in ("×", "·", "*", "-"):
                self.take()
                token = self.peek()
                if token is None or (sign == "-" and token.group("number")):
                    raise NotAUnitError(self.text)
                if sign == "-" and first:
                    raise NotAUnitError(self.text)
            number = token.group("number") or token.group("ten")
            if number and below and not first:
                tens = self.number()
                if tens.tens > 0:
                    reason = f'in "{self.text}" the {number} may stand above or below the line'
                    raise NotAUnitError(self.text, reason)
                scale[0] = scale[0].times(tens)
            else:
                factor = self.factor(below)
                result = _products(result, factor)
            first = False
        if first:
            raise NotAUnitError(self.text)
        return result

    def factor(self, below: bool) -> list[Product]:
        token = self.peek()
        if token is None:
            raise NotAUnitError(self.text[self.at :].strip() or self.text)
        if token.group("sign") == "√":
            self.take()
            return [Product().times(p, Fraction(1, 2)) for p in self.factor(below)]
        if token.group("sign") in ("(", "[", "{"):
            self.take()
            inner = self.quotient()
            if self.sign() not in (")", "]", "}"):
                raise NotAUnitError(self.text, f'a bracket in "{self.text}" is not closed')
            self.take()
            power = self.power()
            return [Product().times(p, power) for p in inner]
        if token.group("number") or token.group("ten"):
            result = [self.number()]
            rate = token.group("number") in ("1", "1000") or bool(token.group("ten"))
        elif token.group("word"):
            result = self.word(self.take().group("word"))
            rate = any(
                p.power_of("turn") or p.power_of("radian") or p.power_of("degree") for p in result
            )
        else:
            raise NotAUnitError(self.text)
        if rate and below and self.grouped and self.sign() == "/":
            start = self.at
            self.take()
            token = self.peek()
            word = token.group("word") if token else None
            unit = table().words.get(word or "")
            if word and unit and (unit.power_of("minute") or unit.power_of("second")):
                below_it = self.word(self.take().group("word"))
                return [a.times(b, -1) for a in result for b in below_it]
            self.at = start
        return result

    def number(self) -> Product:
        token = self.take()
        if token.group("ten"):
            power = int(token.group("power").strip("()"))
            if token.group("ten")[:3].lower() == "10e":
                reason = f'"{token.group().strip()}" may be 10^{power} or 10^{power + 1}'
                guesses = tuple(
                    f"10^{p} {self.text[self.at :].strip()}" for p in (power, power + 1)
                )
                raise NotAUnitError(self.text, reason, guesses)
            return Product((), Fraction(power))
        digits = re.sub(r"\D", "", token.group("number"))
        if not re.fullmatch("10*", digits):
            reason = f'the number {digits} in "{self.text}" is no power of ten'
            guesses: tuple[str, ...] = ()
            if re.fullmatch(r"10\d", digits):
                reason += ": a superscript and its sign may be lost"
                rest = self.text[self.at :].strip()
                guesses = (f"10^{digits[2]} {rest}", f"10^-{digits[2]} {rest}")
            raise NotAUnitError(self.text, reason, guesses)
        return Product((), Fraction(len(digits) - 1))

    def power(self) -> Fraction:
        found = _POWER.match(self.text, self.at)
        if not found:
            return Fraction(1)
        self.at = found.end()
        if found.group("half"):
            return Fraction(1, 2)
        digits = found.group("raised") or found.group("inner") or found.group("low")
        top, _, bottom = digits.replace(",", ".").partition("/")
        if bottom and not int(bottom):
            raise NotAUnitError(self.text, f'a power in "{self.text}" is divided by zero')
        return Fraction(top) / int(bottom or 1)

    def word(self, word: str) -> list[Product]:
        meanings = self.meanings(word)
        power = self.power()
        return [
            Product().times(head, power if power < 0 else 1).times(last, power)
            for head, last in meanings
        ]

    def meanings(self, word: str) -> list[tuple[Product, Product]]:
        """(all but the last part, last part) for each meaning of a word."""
        t = table()
        spellings = [word]
        if self.fold:
            # An upper-case M may be milli or mega in an export, a lower-case m is never mega.
            spellings = [
                s for s in t.folded.get(word.lower(), []) if word[0] == "M" or s not in t.mega
            ]
        found = []
        for spelling in spellings:
            if self.milli and spelling in t.mega:
                spelling = "m" + spelling[1:]
            if spelling in t.words:
                found.append((Product(), t.words[spelling]))
            elif spelling in t.compounds:
                meaning, tens = t.compounds[spelling]
                parts = meaning.split("·")
                head = Product((), Fraction(tens))
                for part in parts[:-1]:
                    head = head.times(t.words[part])
                found.append((head, t.words[parts[-1]]))
        if not found:
            raise NotAUnitError(word)
        return list(dict.fromkeys(found))


@lru_cache(maxsize=4096)
def read_products(
    text: str, grouped: bool = True, fold: bool = False, milli: bool = False
) -> tuple[Product, ...]:
    """The products of units that a text without convention words can be.

    One, unless `fold` lets upper and lower case run together ("MNM": mN·m or MN·m; with `milli`
    only the former). Raises NotAUnitError.
    """
    text = bare(text)
    for pattern, by in _BARE:
        text = pattern.sub(by, text)
    if not text.strip():
        raise NotAUnitError(text, "no unit is given")
    return tuple(dict.fromkeys(_Parser(text.strip(), grouped, fold, milli).all()))


_FORCE_OF = {
    "kilogram": ("kilogram_force", "kgf"),
    "pound": ("pound_force", "lbf"),
    "ounce": ("ounce_force", "ozf"),
}


def variants(product: Product) -> Iterator[tuple[Product, str]]:
    """The product as written, then what the trade may mean by it, each with its remark.

    A weight may be a force ("oz-in") or the reverse ("kgf·m²"), and a minute without an angle
    a revolution's ("min⁻¹", "mV·min"). Which of them is meant the dimension tells.
    """
    yield product, ""
    weights = [(product, "")]
    for mass, (force, name) in _FORCE_OF.items():
        if product.power_of(mass):
            weights.append(
                (product.replaced(mass, force), f"the weight is taken as a force, {name}")
            )
        if product.power_of(force):
            weights.append((product.replaced(force, mass), f"the force {name} is taken as a mass"))
    yield from weights[1:]
    if product.power_of("minute"):
        for weight, remark in weights:
            yield weight.replaced("minute", "rpm", -1), remark
