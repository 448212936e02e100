"""A phrase → the quantities that it names, words on conventions and sections set aside."""

import re
from dataclasses import dataclass, field, replace
from functools import lru_cache

from rapidfuzz import fuzz, process
from rapidfuzz.distance import OSA, Postfix

from ....schema.figure.signs import plain
from .lexicon import canonical, is_cjk, lexicon, squeeze, tokens, without_fillers

EXACT, SHORTENED, TYPO = 1.0, 0.96, 0.85

COMPOSED: dict[tuple[str, str], str] = {
    ("no_load", "speed"): "no_load_speed",
    ("no_load", "current"): "no_load_current",
    ("no_load", "voltage"): "nominal_voltage",
    ("stall", "torque"): "stall_torque",
    ("stall", "current"): "stall_current",
    ("continuous_stall", "torque"): "continuous_stall_torque",
    ("continuous_stall", "current"): "continuous_stall_current",
    ("rated", "speed"): "nominal_speed",
    ("rated", "torque"): "nominal_torque",
    ("rated", "current"): "nominal_current",
    ("rated", "power"): "rated_power",
    ("rated", "voltage"): "nominal_voltage",
    ("rated", "efficiency"): "rated_efficiency",
    ("peak", "torque"): "peak_torque",
    ("peak", "current"): "peak_current",
    ("peak", "speed"): "maximum_speed",
    ("peak", "power"): "maximum_power",
    ("peak", "efficiency"): "maximum_efficiency",
    ("maximum_efficiency", "efficiency"): "maximum_efficiency",
    ("maximum_power", "power"): "maximum_power",
}
"""Section and generic name → quantity; what a point gives beyond these stays with the point."""

_POINT_FIGURES = {
    "speed": "nominal_speed", "torque": "nominal_torque", "current": "nominal_current",
    "power": "rated_power", "efficiency": "rated_efficiency", "voltage": "nominal_voltage",
}  # fmt: skip


def point_key(section: str, generic: str) -> str | None:
    """The figure key under which an operating point keeps a figure; its name tells the point."""
    if section in ("no_load", "stall", "maximum_efficiency", "maximum_power"):
        return COMPOSED.get((section, generic)) or _POINT_FIGURES.get(generic)
    return _POINT_FIGURES.get(generic)


POINTS = ("no_load", "stall", "rated", "maximum_efficiency", "maximum_power")

_CONVENTION_FIELDS: dict[str, dict[str, str]] = {
    "lines": {"between": "lines"},
    "phase": {"between": "phase"},
    "star": {"connection": "star"},
    "delta": {"connection": "delta"},
    "rms": {"current": "rms", "voltage": "rms"},
    "peak": {"current": "peak", "voltage": "peak"},
    "dc": {"current": "dc", "voltage": "dc"},
    "trapezoidal": {"shape": "trapezoidal"},
}


@dataclass(frozen=True, slots=True)
class Phrase:
    """What a phrase names: ``keys`` with one score, or a ``generic`` figure of a ``section``.

    ``conventions`` are words of the phrase about conventions; ``rest`` are words that nothing
    explains; ``other`` a word that makes it something else.
    """

    text: str
    keys: tuple[str, ...] = ()
    score: float = 0.0
    generic: str | None = None
    section: str | None = None
    conventions: tuple[tuple[str, str], ...] = ()
    variant: str | None = None
    rest: tuple[str, ...] = ()
    other: str | None = None
    how: str = ""
    bracketed: bool = False


@dataclass(slots=True)
class _Found:
    """One modifying phrase inside the words: what it is and the words it takes."""

    kind: str
    value: str
    words: range = field(default_factory=lambda: range(0))


@lru_cache(maxsize=8192)
def conventions_of(text: str, whole: bool) -> dict[str, str]:
    """The conventions that a text states; with ``whole`` only if it says nothing else."""
    form = canonical(tokens(text))
    found, used = _scan(form, ("conventions",)), set()
    changes: dict[str, str] = {}
    for item in found:
        used.update(item.words)
        if item.value == "peak_to_peak":
            continue
        changes.update(_CONVENTION_FIELDS.get(item.value, {}))
    left = without_fillers(tuple(t for i, t in enumerate(form) if i not in used))
    if whole and (left or not form):
        rest = cjk_conventions(text) if is_cjk(text) else {}
        return rest if rest and not left else {}
    if is_cjk(text):
        changes = {**cjk_conventions(text), **changes}
    return changes


def cjk_conventions(text: str) -> dict[str, str]:
    """Conventions inside a run of Chinese or Japanese signs."""
    lex = lexicon()
    changes: dict[str, str] = {}
    for run in re.findall(r"[\u3040-\u30ff\u3400-\u9fff々ー]+", plain(text)):
        words_ = [w for w in lex.conventions if len(w) > 1 and is_cjk(w) and w in run]
        for word in sorted(words_, key=len, reverse=True):
            if word in run:
                run = run.replace(word, " ")
                changes.update(_CONVENTION_FIELDS.get(lex.conventions[word], {}))
        if re.search(r"相(?!数|對|对|対)", run) and "between" not in changes:
            changes["between"] = "phase"
        elif re.match(r"[线線](?!圈|路)", run) and "between" not in changes:
            changes["between"] = "lines"
    return changes


def variant_of(text: str) -> str | None:
    """The variant (with brake, water cooled …) that a text names as a whole."""
    form = canonical(tokens(text))
    return lexicon().variants.get(squeeze(form)) or lexicon().variants.get(
        squeeze(without_fillers(form))
    )


_BESIDE_A_PART = frozenset(tokens(
    "option optional Optionen options optionnel opzionale opcional data Daten Werte values "
    "specification specifications characteristics parameters unit section type typ built "
    "integrated données dati datos caractéristiques características caratteristiche"
))  # fmt: skip
"""Words of a caption that say nothing beside the part that it names."""


def part_of(text: str) -> str | None:
    """The part built onto the motor (brake, gearbox, encoder) that a caption names, and nothing
    else; None of any other text."""
    clean = re.sub(r"[(（\[【].*?[)）\]】]|^\s*\d{1,2}[.)]?(?=\s)|[:：].*$", " ", plain(text))
    clean = re.sub(r"(?<=[^\W\d_]{3}\s)(?=\S*\d)[A-Z\d][\w./-]*$", "", clean.strip())  # its type
    form = tuple(t for t in canonical(tokens(clean)) if t not in _BESIDE_A_PART)
    if is_cjk(clean):
        run = re.sub(r"(?:部|部分|参数|參數|数据|特性|仕様|規格|规格|参数表)$", "", squeeze(form))
        return clean.strip() if run in lexicon().parts else None
    core = without_fillers(form)
    if squeeze(form) in lexicon().captions:
        return None  # "Gear motor" is a motor
    return clean.strip() if core and squeeze(core) in lexicon().parts else None


def section_of(text: str) -> str | None:
    """The section or operating point that a text names as a whole."""
    form = canonical(tokens(text))
    lex = lexicon()
    return lex.sections.get(squeeze(form)) or lex.sections.get(squeeze(without_fillers(form)))


def _scan(form: tuple[str, ...], kinds: tuple[str, ...]) -> list[_Found]:
    """Modifying phrases in the words, the longest first, none overlapping another."""
    lex = lexicon()
    found: list[_Found] = []
    taken: set[int] = set()
    for n in range(min(5, len(form)), 0, -1):
        for i in range(len(form) - n + 1):
            span = range(i, i + n)
            if taken.intersection(span):
                continue
            key = squeeze(form[i : i + n])
            for kind in kinds:
                value = getattr(lex, kind).get(key)
                if value is not None and not (n == 1 and len(key) == 1 and not is_cjk(key)):
                    found.append(_Found(kind, value, span))
                    taken.update(span)
                    break
    return found


def _exact(form: tuple[str, ...]) -> tuple[tuple[str, ...], str | None, float]:
    """Keys and generic name that the words spell, with the score."""
    lex = lexicon()
    key = squeeze(form)
    if not key:
        return (), None, 0.0
    names = lex.names.get(key)
    generic = lex.generic.get(key)
    if names or generic:
        return tuple(sorted(names or ())), generic, EXACT
    core = without_fillers(form)
    if key in lex.others:
        return (), None, 0.0  # "vitesse de charge" is none en charge
    if core and core != form:
        short = squeeze(core)
        names = lex.names.get(short) or lex.short.get(short)
        generic = lex.generic.get(short)
        if names or generic:
            return tuple(sorted(names or ())), generic, SHORTENED
    names = lex.short.get(key)
    if names:
        return tuple(sorted(names)), None, SHORTENED
    return (), None, 0.0


@lru_cache(maxsize=16384)
def match_phrase(text: str) -> Phrase:
    """The quantities that a phrase names."""
    form = canonical(tokens(text))
    if not form or not any(t.isalpha() for t in form) or len(form) > 14:
        return Phrase(text, rest=form)
    keys, generic, score = _exact(form)
    conventions = {
        k: v for k, v in conventions_of(text, whole=False).items() if k in ("between", "connection")
    }
    if keys or generic:
        if form[:1] == ("line",) and {"terminal_resistance", "terminal_inductance"} & {*keys}:
            conventions["between"] = "lines"
        return Phrase(
            text, keys, score, generic,
            conventions=tuple(conventions.items()), how=f'"{text}" is a name of it',
        )  # fmt: skip
    section = section_of(text)
    if section:
        return Phrase(text, (), 0.0, section=section)
    if squeeze(form) in lexicon().others:
        return Phrase(text, rest=form, other=text)  # "load torque" is no torque under load
    stripped = _stripped(text, form) or _turned(text)
    if stripped is not None:
        return stripped
    other = _other(text, form)
    near, near_score = _near(form) if not other else ((), 0.0)
    if near and near_score >= TYPO - 1e-9:
        return Phrase(
            text, near, TYPO, conventions=tuple(conventions.items()),
            how=f'"{text}" is spelled like a name of it',
        )  # fmt: skip
    return Phrase(text, (), 0.0, rest=form, other=other)


def _turned(text: str) -> Phrase | None:
    """The phrase of a name whose adjective stands behind it: "Friction torque, static"."""
    name, comma, adjective = text.rpartition(",")
    if not comma or not name.strip() or not adjective.strip():
        return None
    found = match_phrase(f"{adjective.strip()} {name.strip()}")
    if not found.keys or found.score < SHORTENED or "," in name:
        return None
    return replace(found, text=text, score=0.97 * found.score, how=f'"{text}" is a name of it')


def _stripped(text: str, form: tuple[str, ...]) -> Phrase | None:
    """The phrase once words on conventions, variants and sections are taken off."""
    found = _scan(form, ("conventions", "variants", "sections"))
    cjk = _cjk_stripped(text) if is_cjk(text) else None
    if cjk is not None:
        return cjk
    if not found or len(found) > 5:
        return None
    choices = sorted(range(1, 1 << len(found)), key=lambda mask: mask.bit_count())
    for mask in choices:
        chosen = [f for i, f in enumerate(found) if mask >> i & 1]
        used = {i for f in chosen for i in f.words}
        left = tuple(t for i, t in enumerate(form) if i not in used)
        keys, generic, score = _exact(left)
        sections = [f.value for f in chosen if f.kind == "sections"]
        if sections and not generic:
            continue
        if not keys and not generic:
            continue
        changes: dict[str, str] = {}
        for f in chosen:
            if f.kind == "conventions":
                changes.update(_CONVENTION_FIELDS.get(f.value, {}))
        between = conventions_of(text, whole=False)
        changes.update({k: v for k, v in between.items() if k in ("between", "connection")})
        section = sections[0] if sections else None
        if section and generic:
            composed = COMPOSED.get((section, generic))
            keys = (composed,) if composed else ()
        variant = next((f.value for f in chosen if f.kind == "variants"), None)
        return Phrase(
            text, keys, score * 0.98, generic if section or not keys else None, section,
            tuple(changes.items()), variant, how=f'"{text}" names it',
        )  # fmt: skip
    return None


def _cjk_stripped(text: str) -> Phrase | None:
    """The same for words that are written without blanks between them."""
    lex = lexicon()
    run = squeeze(canonical(tokens(text)))
    candidates: list[tuple[int, str, str, str]] = []
    for kind in ("conventions", "variants", "sections"):
        table = getattr(lex, kind)
        candidates += [(len(w), w, kind, v) for w, v in table.items() if len(w) > 1 and w in run]
    fillers = sorted((f for f in lex.fillers if is_cjk(f)), key=len, reverse=True)
    for _, word, kind, value in sorted(candidates, reverse=True):
        left = run.replace(word, "", 1)
        for attempt in (left, *(left.replace(f, "") for f in fillers if f in left)):
            keys = tuple(sorted(lex.names.get(attempt, ())))
            generic = lex.generic.get(attempt)
            if kind == "sections":
                if not generic:
                    continue
                composed = COMPOSED.get((value, generic))
                keys = (composed,) if composed else ()
                return Phrase(text, keys, 0.97, generic, value, how=f'"{text}" names it')
            if keys or generic:
                changes = cjk_conventions(text)
                changes.update(_CONVENTION_FIELDS.get(value, {}) if kind == "conventions" else {})
                return Phrase(
                    text, keys, 0.97, None if keys else generic, None, tuple(changes.items()),
                    value if kind == "variants" else None, how=f'"{text}" names it',
                )  # fmt: skip
    for f in fillers:
        attempt = run.replace(f, "")
        if attempt != run and (attempt in lex.names or attempt in lex.generic):
            return Phrase(
                text, tuple(sorted(lex.names.get(attempt, ()))), SHORTENED,
                lex.generic.get(attempt),
                conventions=tuple(cjk_conventions(text).items()), how=f'"{text}" names it',
            )  # fmt: skip
    return None


def _other(text: str, form: tuple[str, ...]) -> str | None:
    """The word that makes the heading something else than one of our quantities."""
    lex = lexicon()
    for n in range(min(4, len(form)), 0, -1):
        for i in range(len(form) - n + 1):
            if squeeze(form[i : i + n]) in lex.others:
                return " ".join(form[i : i + n])
    if is_cjk(text):
        run = re.sub(r"[無无](?:負荷|负载|負載)", "", squeeze(form))  # no load is no load's figure
        hits = [w for w in lex.others if is_cjk(w) and w in run]
        return max(hits, key=len) if hits else None
    return None


@lru_cache(maxsize=1)
def _aliases() -> tuple[list[str], list[tuple[tuple[str, ...], str]]]:
    """Every name as squeezed core words, and beside it (core words, key into lexicon().names)."""
    entries = [(without_fillers(form) or form, key) for key, form in lexicon().phrases.items()]
    return [squeeze(core) for core, _ in entries], entries


def _near(form: tuple[str, ...]) -> tuple[tuple[str, ...], float]:
    """Names that the words are a misspelling of: every word must be the same, or an unknown word
    that is spelled much alike. Known words are never taken for one another (thermal, terminal)."""
    lex = lexicon()
    core = without_fillers(form) or form
    if not any(t not in lex.known for t in core):
        return (), 0.0
    squeezed, entries = _aliases()
    best: dict[str, float] = {}
    hits = process.extract(
        squeeze(core), squeezed, scorer=fuzz.ratio, score_cutoff=78, limit=None, processor=None
    )
    for _, _, index in hits:
        alias, key = entries[index]
        if len(alias) != len(core):
            continue
        worst = 1.0
        for mine, theirs in zip(core, alias, strict=True):
            if mine == theirs:
                continue
            if mine in lex.known or len(theirs) < 4:
                worst = 0.0
                break
            worst = min(worst, _misspelt(mine, theirs))
            if not worst:
                break
        if worst:
            for name in lex.names[key]:
                best[name] = max(best.get(name, 0.0), worst)
    if not best:
        return (), 0.0
    top = max(best.values())
    return tuple(sorted(k for k, v in best.items() if v >= top - 0.05)), TYPO


_FIRST_PART = 6
"""Letters in which the first parts of two compounds differ that are no slip of the pen."""


def _misspelt(word: str, name: str) -> float:
    """How like a word is to a name that it may be a slip of the pen for; 0 where it is none.

    A slip is one wrong, missing or doubled letter, two in a long word, two neighbours changed
    over. Another first letter, or another first part of a compound (Last-, Rastdrehmoment), is
    another word; so are two slips there (Netz-, Nennmoment), and the name of another part
    (Lager-, Läuferträgheitsmoment).
    """
    slips = OSA.distance(word, name)
    likeness = fuzz.ratio(word, name) / 100
    if len(word) >= 8 and name.startswith(word):
        return likeness if likeness >= 0.8 else 0.0  # cut short: Drehmomentkonst.
    if word[0] != name[0] or slips > (2 if len(name) >= 9 and not is_cjk(word) else 1):
        return 0.0
    same = Postfix.similarity(word, name)
    if slips == 2 and same >= 5 and max(len(word), len(name)) - same <= _FIRST_PART:
        return 0.0
    if any(word.startswith(o) != name.startswith(o) for o in lexicon().others if len(o) >= 4):
        return 0.0
    return likeness if likeness >= (0.85 if len(name) <= 5 or is_cjk(word) else 0.8) else 0.0


@lru_cache(maxsize=4096)
def guesses_for(text: str) -> tuple[str, ...]:
    """Quantities whose names come near, for a heading that is not read."""
    lex = lexicon()
    form = canonical(tokens(text))
    mine = " ".join(without_fillers(form) or form)
    scored: dict[str, float] = {}
    for alias, key in _aliases()[1]:
        likeness = fuzz.token_sort_ratio(mine, " ".join(alias), score_cutoff=60)
        if likeness:
            for name in lex.names[key]:
                scored[name] = max(scored.get(name, 0.0), likeness)
    return tuple(sorted(scored, key=lambda k: -scored[k])[:3])
