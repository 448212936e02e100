"""The vocabulary in a form that texts can be looked up in: names, symbols, modifying words.

Names are compared without blanks, hyphens, accents and case, after abbreviations were replaced;
symbols keep their case, since n and N, m and M are different things there.
"""

import re
import unicodedata
from collections.abc import Iterable
from dataclasses import dataclass, field
from functools import cache, lru_cache

from ....schema.figure.signs import plain
from ....schema.vocabulary import quantities, words

_TOKEN = re.compile(
    r"[a-z]+|\d+|[α-ωϑΩω]+|[\u3040-\u30ff\u31f0-\u31ff\u3400-\u9fff\uf900-\ufaff々ー]+|[#%√Δ/ø]"
)
_CJK = re.compile(r"[\u3040-\u30ff\u3400-\u9fff\uf900-\ufaff]")
_UMLAUTS = str.maketrans({"ä": "ae", "ö": "oe", "ü": "ue", "Ä": "Ae", "Ö": "Oe", "Ü": "Ue"})


def is_cjk(text: str) -> bool:
    """Whether a text has Chinese or Japanese signs, which are written without blanks."""
    return _CJK.search(text) is not None


def _unaccented(text: str) -> str:
    if text.isascii():
        return text
    return "".join(
        unicodedata.normalize("NFD", c)[0] if ord(c) < 0x250 or 0x1E00 <= ord(c) < 0x1F00 else c
        for c in text
    )


@lru_cache(maxsize=32768)
def tokens(text: str) -> tuple[str, ...]:
    """The words of a text, in lower case, without accents and punctuation."""
    lowered = _unaccented(plain(text).casefold())
    return tuple(t for t in _TOKEN.findall(lowered) if t != "/")


def canonical(words_: Iterable[str]) -> tuple[str, ...]:
    """The words with abbreviations and spellings brought to one form."""
    same = _lexicon().same
    return tuple(same.get(word, word) for word in words_)


def squeeze(words_: Iterable[str]) -> str:
    """One key for all spellings with and without blanks and hyphens."""
    return "".join(words_)


GENERIC_SYMBOLS = {
    "n": "speed", "N": "speed", "ω": "speed", "M": "torque", "T": "torque", "C": "torque",
    "I": "current", "P": "power", "P2": "power", "η": "efficiency", "U": "voltage",
    "P1": "input_power",
}  # fmt: skip
"""Symbols that only a section makes precise."""

_SYMBOL_DROPS = re.compile(r"[\s_{}(),.\\$^;:]|(?<=.)\*$")


@lru_cache(maxsize=16384)
def symbol_form(text: str) -> str:
    """A symbol without underscores, brackets and blanks; case is kept: "K_{T}" → "KT"."""
    return _SYMBOL_DROPS.sub("", plain(text).replace("∆", "Δ").replace("ϑ", "θ").replace("ε", "ε"))


def _loose(form: str) -> str:
    """A symbol as character recognition may leave it: zero and oh, I, l and 1 made one."""
    head, tail = form[:1], form[1:]
    return ("I" if head in "Il1" else head) + tail.replace("O", "0").replace("o", "0")


@dataclass(slots=True)
class Lexicon:
    """All look-up tables; built once."""

    same: dict[str, str] = field(default_factory=dict)
    names: dict[str, set[str]] = field(default_factory=dict)
    short: dict[str, set[str]] = field(default_factory=dict)
    phrases: dict[str, tuple[str, ...]] = field(default_factory=dict)
    generic: dict[str, str] = field(default_factory=dict)
    sections: dict[str, str] = field(default_factory=dict)
    at_load: dict[str, str] = field(default_factory=dict)
    conventions: dict[str, str] = field(default_factory=dict)
    variants: dict[str, str] = field(default_factory=dict)
    roles: dict[str, set[str]] = field(default_factory=dict)
    captions: set[str] = field(default_factory=set)
    others: set[str] = field(default_factory=set)
    parts: set[str] = field(default_factory=set)
    fillers: frozenset[str] = frozenset()
    known: set[str] = field(default_factory=set)
    symbols: dict[str, list[str]] = field(default_factory=dict)
    loose_symbols: dict[str, list[str]] = field(default_factory=dict)
    folded_symbols: dict[str, list[str]] = field(default_factory=dict)


@cache
def _lexicon() -> Lexicon:
    w = words()
    lex = Lexicon()
    for word, spellings in w.same.items():
        for spelling in spellings:
            for token in tokens(spelling)[:1]:
                lex.same[token] = word
    lex.fillers = frozenset(t for f in w.fillers for t in tokens(f))
    return lex


def _forms(text: str) -> set[tuple[str, ...]]:
    both = {text, text.translate(_UMLAUTS)}
    return {canonical(tokens(t)) for t in both}


@cache
def lexicon() -> Lexicon:
    """The look-up tables of all languages."""
    lex = _lexicon()
    w = words()
    for key, names in w.names.items():
        for name in names:
            for form in _forms(name):
                lex.names.setdefault(squeeze(form), set()).add(key)
                lex.known.update(form)
                lex.phrases.setdefault(squeeze(form), form)
                core = without_fillers(form)
                if len(core) < len(form) and (len(core) > 1 or is_cjk(squeeze(core))):
                    lex.short.setdefault(squeeze(core), set()).add(key)
    for group, table in (
        ("generic", lex.generic),
        ("sections", lex.sections),
        ("at_load", lex.at_load),
        ("conventions", lex.conventions),
        ("variants", lex.variants),
    ):
        for meaning, names in getattr(w, group).items():
            for name in names:
                for form in _forms(name):
                    table.setdefault(squeeze(form), meaning)
                    lex.known.update(form)
    for meaning, names in w.roles.items():
        for name in names:
            for form in _forms(name):
                lex.roles.setdefault(squeeze(form), set()).add(meaning)
    lex.captions = {squeeze(form) for c in w.captions for form in _forms(c)}
    forms = [form for part in w.parts for form in _forms(part)]
    lex.parts = {squeeze(f) for form in forms for f in (form, without_fillers(form))} - {""}
    for other in w.others:
        for form in _forms(other):
            lex.others.add(squeeze(form))
            lex.known.update(form)
    for key, quantity in quantities().items():
        for symbol in quantity.symbols:
            form = symbol_form(symbol)
            for table, spelling in (
                (lex.symbols, form),
                (lex.loose_symbols, _loose(form)),
                (lex.folded_symbols, _loose(form).casefold()),
            ):
                keys = table.setdefault(spelling, [])
                if key not in keys:
                    keys.append(key)
    return lex


def without_fillers(form: tuple[str, ...]) -> tuple[str, ...]:
    """The words that carry the meaning ("of the motor" goes)."""
    fillers = _lexicon().fillers
    return tuple(t for t in form if t not in fillers)


_GREEK = {"tau": "τ", "omega": "ω", "eta": "η"}
_GREEK_WORD = re.compile(r"(tau|omega|eta)(?=$|[\s_{(]|[A-Z])")
_NOMINAL = re.compile(r"(?<=^[A-Za-z])[\s_]?(?:nom|rated)$")


def _spelled_out(text: str) -> str:
    """The form of a symbol whose Greek letter or index is a word: "tau_m", "n nom"."""
    clean = _GREEK_WORD.sub(lambda word: _GREEK[word[1]], plain(text).strip(), count=1)
    return symbol_form(_NOMINAL.sub("_N", clean))


@dataclass(frozen=True, slots=True)
class SymbolHit:
    """The quantities that a symbol may stand for; surety 1.0 as written … 0.7 without its case."""

    keys: tuple[str, ...]
    surety: float
    generic: str | None = None


@lru_cache(maxsize=16384)
def find_symbol(text: str) -> SymbolHit | None:
    """What a text means if it is a symbol; None if it is none."""
    form = _spelled_out(text)
    if not form or len(form) > 8:
        return None
    lex = lexicon()
    generic = GENERIC_SYMBOLS.get(form)
    if form in lex.symbols or generic:
        keys = lex.symbols.get(form, [])
        if "o" in form[1:].casefold():  # Io is I0 as well, whichever of them a sheet means
            keys = [*keys, *(k for k in lex.loose_symbols.get(_loose(form), ()) if k not in keys)]
        return SymbolHit(tuple(keys), 1.0, generic)
    if _loose(form) in lex.loose_symbols:
        return SymbolHit(tuple(lex.loose_symbols[_loose(form)]), 0.9)
    if len(form) > 1 and _loose(form).casefold() in lex.folded_symbols:
        return SymbolHit(tuple(lex.folded_symbols[_loose(form).casefold()]), 0.8)
    return None
