"""What kind of motors a table holds: commutation, magnets, reference temperature, and the
conventions that its notes set; each with the basis on which it is known."""

import re
from collections.abc import Sequence
from dataclasses import dataclass, field

from ....schema.batch import MODEL_BASES
from ....schema.convention import Commutation
from ....schema.figure.signs import plain
from ....schema.vocabulary import words
from ..headings.lexicon import canonical, find_symbol, is_cjk, squeeze, tokens
from ..headings.phrase import conventions_of, match_phrase
from ..matching.match import Match
from .asides import without_asides

TOLD, STATED, INFERRED, ASSUMED = (
    MODEL_BASES.index(b) for b in ("told", "stated", "inferred", "assumed")
)

_AMBIENT = re.compile(r"ambient|umgebung|ambiant|周囲|环境", re.IGNORECASE)
_WINDING = re.compile(
    r"winding|wicklung|bobinage|avvolgimento|devanado|巻線|绕组|all (?:values|data|figures)|alle "
    r"(?:werte|angaben|daten)|toutes|tutti|todos|all(?:e|es)?\b|resist|widerstand|値|数据|参数",
    re.IGNORECASE,
)


@dataclass(slots=True)
class Notes:
    """What the notes of a table set for all its figures, and for those with a mark."""

    texts: list[str] = field(default_factory=list)
    conventions: list[tuple[str | None, dict[str, str]]] = field(default_factory=list)
    temperature: float | None = None
    tolerance: float | None = None
    marked: dict[str, str] = field(default_factory=dict)


_MARK = re.compile(
    r"(?P<m>[*†‡§]+|\^?\(?\d{1,2}\)|\(\d{1,2}\)|\^\(?\d{1,2}\)?|\(?[a-z]\)|※\d?|注\s?\d)\s*[:：]?\s*(?P<t>.+)",
    re.S,
)


_NEXT_MARK = re.compile(r"(?<=[.;。；])\s+(?=(?:[*†‡§]{1,3}|\^?\(?\d{1,2}\)|\(?[a-z]\))\s*[^\W\d])")
"""Where on one line the next footnote begins."""


def _lines(text: str) -> list[str]:
    """The notes of a text: its lines, where a new mark begins."""
    clean = _NEXT_MARK.sub("\n", plain(text))
    parts = re.split(r"\n(?=\s*(?:[*†‡§]|\^?\(?\d{1,2}\)|\(\d|\^\(?\d))", clean)
    return [
        q for p in parts for q in (p.split("\n") if len(parts) > 1 or p.count("\n") < 6 else [p])
    ]


def note_temperature(text: str) -> float | None:
    """The temperature of the winding that a note states."""
    found = re.search(r"(-?\d{1,3}(?:[.,]\d)?)\s*(?:°\s*C|℃)", text)
    if found and (not _AMBIENT.search(text) or _WINDING.search(text)):
        return float(found[1].replace(",", "."))
    return None


def note_tolerance(text: str) -> float | None:
    """The tolerance that a note states, as a fraction."""
    found = re.search(r"(?:±|\+/-)\s*(\d+(?:[.,]\d+)?)\s*%", text)
    if found and not re.search(r"voltage|spannung|tension|supply", text, re.IGNORECASE):
        return float(found[1].replace(",", ".")) / 100
    return None


def is_marked(text: str) -> bool:
    """Whether a note begins with a footnote mark."""
    return _MARK.match(plain(text)) is not None


def notes_of(texts: Sequence[str]) -> Notes:
    """The conventions, temperature and tolerance that notes state."""
    notes = Notes()
    for text in (line for t in texts for line in _lines(t)):
        clean = plain(text).replace("\n", " ")
        if not clean:
            continue
        notes.texts.append(clean)
        mark = _MARK.match(clean)
        if mark:
            core = re.sub(r"[()^注\s]", "", mark["m"])
            notes.marked[core] = mark["t"]
            continue
        notes.conventions += clauses_of(clean)
        temperature, tolerance = note_temperature(clean), note_tolerance(clean)
        notes.temperature = notes.temperature if temperature is None else temperature
        notes.tolerance = notes.tolerance if tolerance is None else tolerance
    return notes


_SUBJECTS = {
    "current": r"current|strom|ströme|courant|corrent|corrient|intensit|電流|电流|amp[eè]re"
    r"|torque constant|momentenkonstante|drehmomentkonst",
    "voltage": r"volt|emf|spannung|tension|tensi[oó]n|emk|f\.?c\.?[eé]\.?m"
    r"|電圧|电压|电势|电动势|起電力",
    "winding": r"resist|résist|widerst|induct|indukt|indutt|抵抗|インダクタンス|电阻|电感",
}


_SUBJECT_SYMBOL = re.compile(
    r"(R|L|I|K[TtEeMm])(?:_?\w{1,3})?(?:\s+(?:and|und|et|e|y|is|are|ist)\b|\s*[:=])"
)
_OF_SYMBOL = {"R": "winding", "L": "winding", "I": "current", "KT": "current", "KM": "current",
              "KE": "voltage"}  # fmt: skip


_AND = re.compile(r",\s|、|\s(?:and|und|et|e|y)\s(?!(?:the |le |il |el )?neutr)")


def clauses_of(text: str) -> list[tuple[str | None, dict[str, str]]]:
    """(subject, conventions) for each clause of a note; subject None: of all its figures.

    Single words that sheets use otherwise too ("3-phase motor", "peak current for 2 s",
    "brushed DC motor") state nothing here.
    """
    found: list[tuple[str | None, dict[str, str]]] = []
    for sentence in re.split(r"[;；。]|\.\s", without_asides(text)):
        if _explains_symbol(sentence):
            continue
        subjects: list[str] = []
        said = False
        for clause in _AND.split(sentence):
            named = [s for s, w in _SUBJECTS.items() if re.search(w, clause, re.IGNORECASE)]
            if not named and (symbol := _SUBJECT_SYMBOL.match(clause.strip())):
                named = [_OF_SYMBOL[symbol[1].upper()]]
            stated = note_conventions(clause)
            # "Resistance and inductance per phase" speaks of both; "currents rms, voltage peak"
            # begins anew with the second.
            subjects = [*(subjects if not (said and named) else []), *named]
            if stated:
                found += [(s, stated) for s in dict.fromkeys(subjects)] or [(None, stated)]
                said = True
    return found


_TO_NEUTRAL = re.compile(
    r"(?:\b(?:to|gegen|zum?|gegenüber|et|e|y|à|al?|vers)\s|[-–/])\s*(?:the |dem |le |il |el )?"
    r"(?:point |punto )?(?:neutr|sternpunkt|star[ -]?point|cent(?:re|er)[ -]tap|centro stella)"
    r"|(?:neutr\w*|sternpunkt|star[ -]?point|cent(?:re|er)[ -]tap)\s(?:to|zu|et|e|y|und|and)\s"
    r"|[相线線].{0,3}中性点|中性点.{0,3}[相线線]",
    re.IGNORECASE,
)
"""Phase to neutral, however it is put."""

_LEGEND = re.compile(r"[\"']?\s*(?P<symbol>\S{1,10})\s*[:=：]\s*(?P<name>.+)")


def _explains_symbol(sentence: str) -> bool:
    """Whether a clause tells what a symbol means ("Imax: peak current"), not how others hold."""
    found = _LEGEND.match(plain(sentence).strip())
    if found is None or not find_symbol(found["symbol"]):
        return False
    languages = re.split(r"\s/\s", found["name"])
    return any(match_phrase(name).keys for name in (found["name"], *languages))


def note_conventions(text: str) -> dict[str, str]:
    """Conventions in a clause of a note: rms, peak, line to line, per phase, star, delta."""
    text = without_asides(plain(text))
    stated = dict(conventions_of(text, whole=False))
    low = plain(text).casefold()
    whole = conventions_of(text, whole=True)
    if not whole:
        if stated.get("current") == "dc":
            stated = {k: v for k, v in stated.items() if v != "dc"}
        if _TO_NEUTRAL.search(low):
            stated["between"] = "phase"
        elif stated.get("between") == "phase" and not re.search(
            r"per phase|phase (?:value|resist|induct|quant)|l-n|phase gegen|pro phase|je phase|"
            r"相电阻|相電阻|相抵抗|相电感|相電感|strang|par phase|per fase|por fase|"
            r"valeurs? (?:de|par) phase"
            r"|每相|相あたり|相当り|相值|相値|of one phase",
            low,
        ):
            stated.pop("between")
        if stated.get("current") == "peak" and not re.search(
            r"peak[- ]values?|amplitude|scheitel|spitzenwert|crête|crest|cresta|"
            r"valor(?:es|i)? d[ei] picc?o|a\s?(?:pk|peak)|v\s?(?:pk|peak)|波高値|峰值|ピーク値|"
            r"(?:0|zero)[- ](?:to[- ])?peak|peak of|are peak|is peak|in peak|peak line|peak, ",
            low,
        ):
            stated = {k: v for k, v in stated.items() if v != "peak"}
    if re.search(
        r"(?<![a-z])rms(?![a-z])|[av]rms|effektiv|efficace|eficaz|effic\.|有效值|実効値", low
    ):
        if stated.get("current") == "peak":
            return {k: v for k, v in stated.items() if v != "peak"}  # both: it tells neither
        stated = {**stated, "current": "rms", "voltage": "rms"}
    return stated


def signature(matches: list[Match], style_family: str | None) -> Commutation | None:
    """The commutation that the figures themselves betray; None if they betray nothing."""
    keys = {m.key for m in matches if m.key}
    rms = any(
        "rms" in u.marks
        for m in matches
        if m.role in ("figure", "repeat", "condition")
        for u in m.units
    ) or any(
        m.field.label.convention.current == "rms"
        for m in matches
        if m.role == "figure"
        and m.key
        and (m.key.endswith("current") or m.key == "torque_constant")
    )
    rms_current = any(
        ("rms" in u.marks and m.key != "mains_voltage")
        for m in matches
        if m.key
        in (
            "nominal_current",
            "peak_current",
            "torque_constant",
            "continuous_stall_current",
            "stall_current",
            "no_load_current",
            "back_emf_constant",
        )
        for u in m.units
    )
    feedback = any(
        re.search(
            r"resolver|encoder|feedback|geber|codeur|编码器|エンコーダ", m.field.heading, re.I
        )
        for m in matches
    )
    stall = "continuous_stall_torque" in keys or "continuous_stall_current" in keys
    if rms_current or (rms and stall) or (stall and (feedback or "peak_torque" in keys)):
        return Commutation.SINUSOIDAL
    if style_family == "servo" and stall:
        return Commutation.SINUSOIDAL
    if keys & {"phases", "pole_pairs", "poles"}:
        return Commutation.BLOCK
    return None


_ENDING = re.compile(r"(?<=\w{5})(?:e[nrsm]|[ao]s|[aeinos])$")
"""What words take on in a sentence: bürstenbehaftet*e* Gleichstrommotor*en*, motor*i*."""

_BRUSH = re.compile(
    r"brush|burst|balai|spazzol|escobill|刷|ブラシ|mech|mecan|meccan|graphi|edelmet|precious|metaux"
)
"""A name of the brushed commutation that says so; "DC motor" is said of brushless ones too."""


def _stems(words_: tuple[str, ...]) -> tuple[str, ...]:
    return tuple(_ENDING.sub("", word) for word in words_)


def in_words(text: str, table: str) -> str | None:
    """The value (of magnets, commutations or connections) that a text names; None if it names
    none, or brushed and brushless motors alike."""
    form = _stems(canonical(tokens(text)))
    key = squeeze(form)
    if not key:
        return None
    found: list[tuple[int, str, str]] = []
    for value, names in getattr(words(), table).items():
        for name in names:
            spelled = _stems(canonical(tokens(name)))
            squeezed = squeeze(spelled)
            if not squeezed:
                continue
            inside = (
                squeezed in key
                if is_cjk(name) and len(squeezed) > 1
                else (f" {' '.join(spelled)} " in f" {' '.join(form)} ")
            )
            if squeezed == key or (inside and len(squeezed) > 2):
                found.append((len(squeezed), squeezed, value))
    if table == "commutations" and len({value for *_, value in found}) > 1:
        outer = [f for f in found if not any(f[1] in o[1] and f[1] != o[1] for o in found)]
        brushed = [f for f in outer if f[2] == "brushed" and _BRUSH.search(f[1])]
        found = [f for f in outer if f[2] != "brushed"]
        if brushed:
            return None if found else "brushed"
    return max(found, key=lambda f: f[0])[2] if found else None


def commutation_in(texts: Sequence[str]) -> Commutation | None:
    """The commutation that titles, notes or captions state, if they state only one."""
    found = {value for t in texts if (value := in_words(t, "commutations"))}
    return Commutation[found.pop().upper()] if len(found) == 1 else None


def magnet_in(texts: Sequence[str]) -> str | None:
    """The magnet material that texts state, if they state only one."""
    found = {value for t in texts if (value := in_words(t, "magnets"))}
    return found.pop() if len(found) == 1 else None
