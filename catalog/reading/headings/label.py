"""The text of one heading → its names, symbols, units, conventions and conditions, kept apart."""

import re
from dataclasses import dataclass, field, replace
from functools import lru_cache

from ....schema.convention import Convention
from ....schema.figure.signs import plain
from ....schema.units.read import unit_of
from ....schema.vocabulary import quantities
from .conditions import (
    A_SPEED,
    CONDITION,
    CONDITION_ONLY,
    LEVER,
    ONLY_VOLTS,
    RISE,
    TEMPERATURE,
    TOLERANCE,
    WITH_SOME,
)
from .lexicon import find_symbol, lexicon, tokens
from .phrase import Phrase, conventions_of, match_phrase, variant_of
from .pieces import bracketed_apart, may_be_unit, unit_pair, ways_to_divide

_NUMBERING = re.compile(r"\(?\d{1,2}[.)]?\s+(?=[^\W\d_]{2})|\(\d{1,2}\)\s*")
_MARKS = re.compile(
    r"(?:\s*(?:[*†‡§]+\)?|\^\(?(?:\d{1,2}|[a-z])\)|\^\(?[1456789a-z]\)?|注\s?\d|(?<=\w)\s+\d\)|(?<=[^\W\d])\d{1,2}\)))+$"
)
_QUALIFIERS = {
    "max": "at most",
    "maximum": "at most",
    "min": "at least",
    "typ": "typical",
    "typical": "typical",
}
_JOINERS = re.compile(r"\s+/\s+|\s*\|\s*|\n|\s*[;；]\s*|、")
_POWER_OF_TEN = re.compile(r"\s*[×x*·]\s*10\s*\^?\s*(?P<p>[+-]?\d{1,2})$")
_BRAKE_PAIR = re.compile(
    r"[,;]?\s*\(?\b(?:without|w/o|ohne|sans|senza|sin)\s*[(/]\s*(?:with|mit|avec|con)\)?\s+"
    r"(?:holding )?(?:brake|Bremse|Haltebremse|frein|freno)\)?",
    re.IGNORECASE,
)
_INNER_MARK = re.compile(r"\s*\^(\d{1,2}|[a-z])\)(?=[\s,;:])")
_INFERRED = re.compile(r", inferred(?=[,)])")
_TWO_SCRIPTS = re.compile(
    r"([^A-Za-z]*[\u3040-\u30ff\u3400-\u9fff][^A-Za-z]*?)\s+([A-Za-z][A-Za-z].*)$", re.S
)


_AND_SIGN = re.compile(
    r"(?P<name>[^,]{6,})(?:,\s*|\s+)(?P<sign>[A-ZηωτΘΔ][A-Za-z0-9]{0,3}|[a-z][A-Z0-9]?)"
)
"""A name with a maker's own sign behind it: "Max. continuous torque, Me"."""


@dataclass(frozen=True, slots=True)
class Label:
    """A heading taken apart.

    ``names`` are the phrases that may name a quantity (one a language), ``symbols`` the symbols
    beside them, ``units`` unit texts in order of trust. ``conditions`` are texts that say when
    the figure holds. ``other`` is the word by which the heading is none of our quantities.
    """

    text: str
    names: tuple[Phrase, ...] = ()
    symbols: tuple[str, ...] = ()
    units: tuple[str, ...] = ()
    convention: Convention = field(default_factory=Convention)
    forced: str | None = None
    conditions: tuple[str, ...] = ()
    variant: str | None = None
    temperature: float | None = None
    tolerance: float | None = None
    qualifier: str | None = None
    marks: tuple[str, ...] = ()
    other: str | None = None
    factor: str = ""

    @property
    def inferred(self) -> bool:
        """Whether an export says that its conventions stand on no sheet: figures showed them."""
        return self.forced is not None and _INFERRED.search(self.text) is not None

    @property
    def strength(self) -> float:
        """How surely this is a heading at all: 1 for a name, less for a symbol."""
        best = max((p.score for p in self.names), default=0.0)
        if self.forced:
            return 1.0
        if best < 0.6 and self.symbols:
            return 0.2 if any(p.rest for p in self.names) else 0.55
        return best if best >= 0.6 else 0.0


@lru_cache(maxsize=16384)
def parse_label(text: str) -> Label:
    """Take a heading apart; nothing is decided about which quantity it is."""
    label = Label(text)
    clean = plain(text)
    clean = re.sub(r"-\n\s*(?=[a-zà-ÿ])", "", clean)
    clean = _BRAKE_PAIR.sub("", clean)
    if not clean:
        return label
    forced = re.match(r"([a-z][a-z_]+)(?=$|\s*[\[(])", clean)
    rest = clean
    if forced and forced.group(1) in quantities():
        label = replace(label, forced=forced.group(1))
        rest = _INFERRED.sub("", clean[forced.end() :]).strip()
    else:
        numbering = _NUMBERING.match(rest)
        if numbering and not may_be_unit(rest):
            rest = rest[numbering.end() :]
    marks = _MARKS.search(rest)
    if marks and _balanced(rest, marks.start()) and marks.start() > 0 and not may_be_unit(rest):
        label = replace(label, marks=tuple(re.findall(r"[*†‡§]+|\d{1,2}|[a-z]", marks.group())))
        rest = rest[: marks.start()]
    inner = [m for m in _INNER_MARK.finditer(rest) if _balanced(rest, m.start())]
    for m in reversed(inner):
        label = replace(label, marks=(*label.marks, m[1]))
        rest = rest[: m.start()] + rest[m.end() :]
    for pattern in (LEVER, RISE):
        found = pattern.search(rest)
        if found and _balanced(rest, found.start()) and found.start() > 0:
            label = replace(label, conditions=(*label.conditions, found["at"]))
            rest = rest[: found.start()] + rest[found.end() :]
    core, inside = bracketed_apart(rest)
    name, symbol, unit = _apart(core)
    for content in inside:
        whole = match_phrase(f"{name} {content}") if not may_be_unit(content) else Phrase("")
        if whole.keys and whole.score >= 0.96 and whole.keys != match_phrase(name).keys:
            core = " ".join(filter(None, (f"{name} {content}", unit)))
            label = replace(label, symbols=(*label.symbols, symbol)) if symbol else label
        else:
            label = _bracket(label, content)
    bracketed = len(label.units)
    return _at_speed(_in_order(_core(label, core), bracketed, core))


def _at_speed(label: Label) -> Label:
    """A voltage at a speed is a back-EMF: "EMF at 1000 rpm [V]" is in V/1000 rpm."""
    speed = next((c for c in label.conditions if A_SPEED.match(c)), None)
    if speed is None:
        return label
    keys = {key for name in label.names for key in name.keys}
    if "nominal_voltage" in keys:
        return replace(label, names=(), other=label.other or speed)
    if "back_emf_constant" not in keys:
        return label
    units = (f"{u}/{speed}" if ONLY_VOLTS.fullmatch(u) else u for u in label.units)
    return replace(label, units=tuple(units))


def _apart(core: str) -> tuple[str, str, str]:
    """(name, symbol, unit) of a name with either or both behind it; else the text as it is."""
    name, symbol, unit = core, "", ""
    head, _, tail = core.rpartition(" ")
    if may_be_unit(tail) and not match_phrase(core).keys:
        name, unit = head, tail
        head, _, tail = head.rpartition(" ")
    if find_symbol(tail) and not match_phrase(name).keys:
        name, symbol = head, tail
    return (name, symbol, unit) if match_phrase(name).keys else (core, "", "")


def _in_order(label: Label, bracketed: int, core: str) -> Label:
    """Of "N·m (oz-in)" the unit outside the brackets, which stands first, is that of the cells'
    first figure."""
    inside, outside = label.units[:bracketed], label.units[bracketed:]
    if len(inside) != 1 or len(outside) != 1:
        return label
    symbol = find_symbol(outside[0].replace(" ", "_"))
    apart = re.search(rf"[\s,:]{re.escape(outside[0])}[\s,:]*$", core)
    if not apart or (symbol and symbol.surety > 0.85):
        return label  # M_N (mN·m) is a symbol and a unit
    if not _one_dimension(outside[0], inside[0]):
        return label
    return replace(label, units=(*outside, *inside))


def _one_dimension(first: str, second: str) -> bool:
    one, two = unit_of(first), unit_of(second)
    return one is not None and two is not None and one.si == two.si and one.si != "1"


def _balanced(text: str, end: int) -> bool:
    """Whether every bracket opened before `end` is closed there."""
    return text.count("(", 0, end) == text.count(")", 0, end)


def _with_convention(label: Label, changes: dict[str, str]) -> Label:
    if not changes:
        return label
    return replace(label, convention=label.convention.with_(**changes, basis="stated"))


def _bracket(label: Label, content: str) -> Label:
    """What one pair of brackets says."""
    content = content.strip()
    if re.fullmatch(r"\^?\(?\d{1,2}\)?|[*†‡]+", content):
        return replace(label, marks=(*label.marks, content.strip("^()")))
    low = content.rstrip(".").casefold()
    if low in _QUALIFIERS:
        label = replace(label, qualifier=_QUALIFIERS[low])
        return replace(label, units=(*label.units, content)) if low == "min" else label
    if CONDITION_ONLY.fullmatch(content) and not TEMPERATURE.fullmatch(content):
        return replace(label, conditions=(*label.conditions, content))
    if len(pair := unit_pair(content)) == 2 and _one_dimension(*pair):
        return replace(label, units=(*label.units, *pair))
    if unit_of(content) is not None:
        return replace(label, units=(*label.units, content))
    whole = conventions_of(content, whole=True)
    if whole:
        return _with_convention(label, whole)
    spread = TOLERANCE.search(content)
    if spread and (of := content[: spread.start()].strip(" ,;")) and unit_of(of) is not None:
        label = replace(label, tolerance=float(spread["tol"].replace(",", ".")) / 100)
        return replace(label, units=(*label.units, of))
    if may_be_unit(content):
        return replace(label, units=(*label.units, content))
    for piece in (
        re.split(r"[,;、]\s*|\s+[/|]\s+", content) if re.search(r"[,;、|/]", content) else [content]
    ):
        label = _piece(label, piece.strip(), alone=piece.strip() == content)
    return label


def _piece(label: Label, piece: str, alone: bool) -> Label:
    """One piece of a bracket or of a heading's end: unit, convention, condition, symbol or name."""
    if not piece:
        return label
    found = conventions_of(piece, whole=True)
    if found:
        return _with_convention(label, found)
    if may_be_unit(piece):
        return replace(label, units=(*label.units, piece))
    if (t := TEMPERATURE.fullmatch(piece)) is not None:
        return replace(label, temperature=float(t["t"].replace(",", ".")))
    if (t := TOLERANCE.fullmatch(piece)) is not None:
        return replace(label, tolerance=float(t["tol"].replace(",", ".")) / 100)
    if variant_of(piece):
        return replace(label, variant=variant_of(piece))
    symbol = find_symbol(piece)
    phrase = match_phrase(piece)
    if phrase.score >= 0.9 and phrase.keys and not _is_rather_symbol(piece, phrase):
        return replace(label, names=(*label.names, replace(phrase, bracketed=True)))
    if symbol and symbol.surety > 0.85:
        return replace(label, symbols=(*label.symbols, piece))
    if phrase.section and not phrase.rest:
        return replace(label, names=(*label.names, replace(phrase, bracketed=True)))
    loose = conventions_of(piece, whole=False)
    temperature = TEMPERATURE.search(piece)
    tolerance = TOLERANCE.search(piece)
    if temperature:
        label = replace(label, temperature=float(temperature["t"].replace(",", ".")))
    if tolerance:
        label = replace(label, tolerance=float(tolerance["tol"].replace(",", ".")) / 100)
    if phrase.other and not loose and not WITH_SOME.match(piece):
        label = replace(label, other=label.other or phrase.other)
    unit = re.match(r"(.+?)[\s,]+(?=\S+$)", piece)
    if loose and unit and may_be_unit(unit.group(1)):
        label = replace(label, units=(*label.units, unit.group(1)))
    label = _with_convention(label, loose)
    return replace(label, conditions=(*label.conditions, piece))


def _core(label: Label, core: str) -> Label:
    """The text outside of brackets."""
    core = core.strip(" ,:;=")
    marks = _MARKS.search(core)
    if marks and marks.start() > 0 and not may_be_unit(core):
        found = re.findall(r"[*†‡§]+|\d{1,2}|[a-z]", marks.group())
        label = replace(label, marks=(*label.marks, *found))
        core = core[: marks.start()].strip(" ,:;=")
    power = _POWER_OF_TEN.search(core)
    if power and power.start() > 0:
        label = replace(label, factor=f"10^{power['p']} ")
        core = core[: power.start()].strip(" ,:;=")
    if not core:
        return label
    whole = match_phrase(core)
    if whole.score >= 0.99 and not label.forced and not _is_rather_symbol(core, whole):
        return replace(label, names=(whole, *label.names), other=label.other or whole.other)
    if (found := conventions_of(core, whole=True)) and label.forced:
        return _with_convention(label, found)
    for pattern, name in ((TEMPERATURE, "temperature"), (TOLERANCE, "tolerance")):
        at = pattern.search(core)
        if at and (name == "tolerance" or at.start() > 0 or at.end() == len(core)):
            number = float(
                (at.groupdict().get("t") or at.groupdict().get("tol") or "0").replace(",", ".")
            )
            value = number if name == "temperature" else number / 100
            label = replace(label, **{name: value})
            core = (core[: at.start()] + " " + core[at.end() :]).strip(" ,;@")
    at = CONDITION.search(core)
    if at and at.start() > 0 and not find_symbol(core):
        label = replace(label, conditions=(*label.conditions, at["c"] or at["speed"]))
        core = (core[: at.start()] + " " + core[at.end() :]).strip(" ,;@")
    if re.search(r"\s/\s", core):  # the slash parts the languages, not the line break
        core = re.sub(r"\s*\n\s*", " ", core)
    signed = _AND_SIGN.fullmatch(core)
    if signed and not may_be_unit(signed["sign"]) and not find_symbol(signed["sign"]):
        phrase = match_phrase(signed["name"])
        whole = match_phrase(core)
        if phrase.keys and phrase.score >= 0.96 and whole.score < 0.9 and not whole.other:
            core = signed["name"]
    if "\n" in core:
        # A name broken over lines is one name; names in two languages on two lines are two.
        joined = _named(label, re.sub(r"\s*\n\s*", " ", core))
        if any(p.score >= 0.95 for p in joined.names[len(label.names) :]):
            return joined
    named = _named(label, core)
    if any(p.keys and p.score >= 0.95 and "/" in p.text for p in named.names[len(label.names) :]):
        return named  # "Speed / torque gradient rpm/mNm"
    parts = [p.strip(" ,:=") for p in _JOINERS.split(core) if p.strip(" ,:=")]
    if len(parts) > 1 and match_phrase(core).score < 0.95:
        for part in parts:
            if CONDITION_ONLY.fullmatch(part):
                label = replace(label, conditions=(*label.conditions, part))
            elif may_be_unit(part) and not (part == parts[0] and find_symbol(part)):
                label = replace(label, units=(*label.units, part))
            else:
                label = _named(label, part)
        return label
    return _named(label, core)


def _is_rather_symbol(text: str, phrase: Phrase) -> bool:
    """Whether a short text is a symbol (P_N) and only by chance the name of a text (p/n)."""
    hit = find_symbol(text)
    return (
        hit is not None
        and hit.surety > 0.95
        and bool(phrase.keys)
        and all(quantities()[k].text for k in phrase.keys)
    )


def _symbol_and_unit(text: str) -> bool:
    symbol, _, unit = text.partition(" ")
    hit = find_symbol(symbol)
    return hit is not None and hit.surety > 0.95 and may_be_unit(unit.strip())


def _named(label: Label, core: str) -> Label:
    """A name with, perhaps, a symbol and a unit beside it."""
    if not core:
        return label
    phrase = match_phrase(core)
    if phrase.score >= 0.99 and not _is_rather_symbol(core, phrase):
        return replace(label, names=(*label.names, phrase), other=label.other or phrase.other)
    best: tuple[float, Phrase, str, str] | None = None
    for name, symbol, unit in ways_to_divide(core):
        if name and symbol and not unit and may_be_unit(name):
            continue  # "n0 rpm" is a symbol and its unit
        only = symbol and name and conventions_of(name, whole=True)
        p = match_phrase(name) if name else Phrase(name)
        if name and _is_rather_symbol(name, p):
            p = Phrase("")
        if (
            name
            and unit == symbol == ""
            and _symbol_and_unit(core)
            and p.keys
            and all(quantities()[k].text for k in p.keys)
        ):
            p = Phrase("")  # "Ip A" is a current, no IP
        score = p.score if name else 0.0
        if symbol and (not name or only):
            hit = find_symbol(symbol)
            score = 0.9 * hit.surety if hit else 0.0
        if p.generic and not p.keys:
            score -= 0.05
        if unit:
            score += 0.001 * len(unit) + 0.02
        if symbol:
            score -= 0.01
        if best is None or score > best[0] + 1e-9:
            best = (score, p, symbol, unit)
    assert best is not None
    score, phrase, symbol, unit = best
    two = _TWO_SCRIPTS.match(core)
    if score < 0.95 and two:
        for part in (two[1], two[2]):
            label = _named(label, part.strip())
        return label
    if score < 0.5 and "_" in core:
        return _named(label, core.replace("_", " "))
    if symbol and phrase.text and (stated := conventions_of(phrase.text, whole=True)):
        label, phrase = _with_convention(label, stated), Phrase("")
    if symbol:
        label = replace(label, symbols=(*label.symbols, symbol))
    if unit:
        label = replace(label, units=(*label.units, unit))
    if phrase.text:
        label = replace(label, names=(*label.names, phrase), other=label.other or phrase.other)
    return label


def names_part(label: Label) -> bool:
    """Whether a heading names the motors themselves, and nothing that is measured."""
    keys = {k for p in label.names for k in p.keys}
    return "part_number" in keys and all(quantities()[k].text for k in keys)


def roles_of(text: str) -> set[str]:
    """The roles a column may have by its heading: unit, symbol, label, remark, number, value."""
    return lexicon().roles.get("".join(tokens(text)), set())
