"""What kind of motors a table holds: commutation, magnets, reference temperature, and the
conventions that its notes set; each with the basis on which it is known."""

import re
from collections.abc import Sequence
from dataclasses import dataclass, field

from ...schema.batch import MODEL_BASES
from ...schema.convention import Commutation
from ...schema.signs import plain
from ...schema.vocabulary import words
from .label import parse_label
from .lexicon import canonical, is_cjk, squeeze, tokens
from .match import Match
from .phrase import conventions_of

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
    conventions: dict[str, str] = field(default_factory=dict)
    temperature: float | None = None
    tolerance: float | None = None
    marked: dict[str, str] = field(default_factory=dict)


_MARK = re.compile(
    r"(?P<m>[*†‡§]+|\^?\(?\d{1,2}\)|\(\d{1,2}\)|\^\(?\d{1,2}\)?|\(?[a-z]\)|※\d?)\s*:?\s*(?P<t>.+)",
    re.S,
)


def notes_of(texts: Sequence[str]) -> Notes:
    """The conventions, temperature and tolerance that notes state."""
    notes = Notes()
    for text in texts:
        clean = plain(text).replace("\n", " ")
        if not clean:
            continue
        notes.texts.append(clean)
        mark = _MARK.match(clean)
        if mark:
            core = re.sub(r"[()^]", "", mark["m"])
            notes.marked[core] = mark["t"]
            continue
        stated = note_conventions(clean)
        notes.conventions.update(stated)
        label = parse_label(clean)
        found = re.search(r"(-?\d{1,3}(?:[.,]\d)?)\s*(?:°\s*C|℃)", clean)
        if found and (not _AMBIENT.search(clean) or _WINDING.search(clean)):
            notes.temperature = float(found[1].replace(",", "."))
        tolerance = re.search(r"(?:±|\+/-)\s*(\d+(?:[.,]\d+)?)\s*%", clean)
        if tolerance and not re.search(r"voltage|spannung|tension|supply", clean, re.I):
            notes.tolerance = float(tolerance[1].replace(",", ".")) / 100
        del label
    return notes


def note_conventions(text: str) -> dict[str, str]:
    """Conventions in a sentence of a note: rms, peak, line to line, per phase, star, delta."""
    stated = conventions_of(text, whole=False)
    low = plain(text).casefold()
    if re.search(r"\brms\b|effektiv|effizien|efficace|eficaz|有效值|実効値", low):
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


def in_words(text: str, table: str) -> str | None:
    """The value (of magnets, commutations or connections) that a text names."""
    form = canonical(tokens(text))
    key = squeeze(form)
    if not key:
        return None
    best: tuple[int, str] | None = None
    for value, names in getattr(words(), table).items():
        for name in names:
            spelled = canonical(tokens(name))
            squeezed = squeeze(spelled)
            if not squeezed:
                continue
            inside = (
                squeezed in key
                if is_cjk(name) and len(squeezed) > 1
                else (f" {' '.join(spelled)} " in f" {' '.join(form)} ")
            )
            if (squeezed == key or (inside and len(squeezed) > 2)) and (
                best is None or len(squeezed) > best[0]
            ):
                best = (len(squeezed), value)
    return best[1] if best else None


def commutation_in(texts: Sequence[str]) -> Commutation | None:
    """The commutation that titles, notes or captions state, if they state only one."""
    found = {value for t in texts if (value := in_words(t, "commutations"))}
    return Commutation[found.pop().upper()] if len(found) == 1 else None


def magnet_in(texts: Sequence[str]) -> str | None:
    """The magnet material that texts state, if they state only one."""
    found = {value for t in texts if (value := in_words(t, "magnets"))}
    return found.pop() if len(found) == 1 else None
