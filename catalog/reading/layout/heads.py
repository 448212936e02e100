"""The cells that head one line of figures → one Field: names joined, units, symbols, captions."""

import re
from dataclasses import replace

from ....schema.figure.signs import plain
from ..cells import is_caption, is_symbol, is_unit, strength
from ..headings.label import Label, parse_label
from ..headings.phrase import match_phrase, part_of, section_of
from ..headings.pieces import unit_pair
from ..model import Field

HeadCell = tuple[str, str]
"""(kind, text): kind is "unit", "symbol", "caption" or "name"."""


def head_field(
    cells: list[HeadCell], texts: list[str], row: int, column: int, *, joins: bool = True
) -> Field:
    """The field that these heading cells, from the outermost to the nearest, describe."""
    units = tuple(t for kind, t in cells if kind == "unit" and plain(t))
    symbols = tuple(t for kind, t in cells if kind == "symbol" and plain(t))
    captions = [t for kind, t in cells if kind == "caption" and plain(t)]
    names = [t for kind, t in cells if kind == "name" and plain(t)]
    if not names and captions and not symbols:
        names = [captions.pop()]
    captions, names = _parted(captions, names, joins)
    text = "\n".join(names)
    label = parse_label(_joined(names)) if names else Label("")
    if symbols:
        found = tuple(s for s in symbols if s not in label.symbols)
        label = replace(label, symbols=(*label.symbols, *found))
    section, when, temperature, variant = context_of(captions)
    telling = [c for c in captions if not is_caption(c)]
    shown = " › ".join(map(_shown, (*telling, text)))
    heading = shown.strip(" ›") or (symbols[0] if symbols else units[0] if units else "")
    extra = [s for s in symbols if s not in heading]
    if extra:
        heading = f"{heading} {' '.join(extra)}".strip()
    if units:
        heading = f"{heading} [{_shown(units[0])}]" if _shown(units[0]) not in heading else heading
    printed = (*(_unit_text(u) for u in units), *label.units)
    return Field(
        heading, label, texts, row, column,
        units=tuple(f"{label.factor}{u}" for text in printed for u in unit_pair(text)),
        captions=tuple(captions), section=section, when=when,
        temperature=temperature, variant=variant,
        part=next((part for c in reversed(captions) if (part := part_of(c))), None),
    )  # fmt: skip


def _shown(text: str) -> str:
    return re.sub(r"\s+", " ", text).strip()


def _unit_text(text: str) -> str:
    clean = plain(text)
    return clean[1:-1] if re.fullmatch(r"[\[({][^\[\](){}]*[\])}]", clean) else clean


def _joined(names: list[str]) -> str:
    """Pieces of one name that stood on several lines."""
    if len(names) == 1:
        return names[0]
    one = " ".join(names)
    hyphen = "".join(n[:-1] if n.rstrip().endswith("-") else n + " " for n in names).strip()
    for text in (one, hyphen):
        if match_phrase(text).score >= 0.9:
            return text
    return "\n".join(names)


def _parted(captions: list[str], names: list[str], joins: bool) -> tuple[list[str], list[str]]:
    """Which of several names is a caption over the next, and which continue one name.

    "Torque" over "constant" is one name; "Stall" over "Torque" is a section and its figure.
    """
    if captions and names and joins:
        last, first = captions[-1], names[0]
        whole = match_phrase(f"{last} {first}".replace("-\n", ""))
        hyphened = (
            last.rstrip().endswith("-") and match_phrase(last.rstrip()[:-1] + first).score >= 0.9
        )
        alone = parse_label(first)
        if hyphened and strength(first) < 0.9:
            return captions[:-1], [last.rstrip()[:-1] + first, *names[1:]]
        if (
            whole.score >= 0.96
            and whole.keys
            and not (section_of(last) and any(p.generic for p in alone.names))
            and alone.strength < 0.96
        ):
            return captions[:-1], [f"{last} {first}", *names[1:]]
    if len(names) > 1:
        if match_phrase(" ".join(names)).score >= 0.96:
            return captions, names
        kept: list[str] = []
        for i, name in enumerate(names):
            later = names[i + 1 :]
            if later and strength(name) < 0.9 and any(strength(x) >= 0.9 for x in later):
                captions = [*captions, name]
            else:
                kept.append(name)
        names = kept
    return captions, names


def context_of(
    captions: list[str],
) -> tuple[str | None, tuple[str, ...], float | None, str | None]:
    """(section, conditions, temperature, variant) that captions say."""
    section: str | None = None
    when: list[str] = []
    temperature: float | None = None
    variant: str | None = None
    for caption in captions:
        if is_caption(caption):
            section = None
            continue
        label = parse_label(caption)
        named = section_of(caption) or next((p.section for p in label.names if p.section), None)
        if named is None:
            named = _section_inside(caption)
        section = named or section
        temperature = label.temperature if label.temperature is not None else temperature
        phrase = match_phrase(caption)
        variant = label.variant or phrase.variant or variant
        says = label.temperature is not None or label.conditions or variant
        if says or re.search(r"\d", caption) or (not named and not is_caption(caption)):
            when.append(plain(caption).replace("\n", " "))
    return section, tuple(when), temperature, variant


def _section_inside(caption: str) -> str | None:
    """A section's name with something behind it: "Rated values at 24 V"."""
    clean = re.sub(
        r"[@(\[].*$|\b\d.*$|\s+(?:at|bei|à|a|con)\s+(?=\d).*$", "", plain(caption)
    ).strip(" ,:-")
    clean = re.sub(r"\s+(?:at|bei|à|a|alla|con|@)$", "", clean)
    return section_of(clean) if clean and clean != plain(caption) else None


def classify(text: str, kind_of_line: str) -> HeadCell:
    """One heading cell with its kind, given what its line mostly holds."""
    if kind_of_line == "unit" and (is_unit(text) or strength(text) < 0.5):
        return ("unit", text)
    if kind_of_line == "symbol" and is_symbol(text):
        return ("symbol", text)
    if kind_of_line == "caption":
        return ("caption", text)
    return ("name", text)
