"""Smallest, usual and largest figure of one quantity under headings of their own, motors in rows:
the usual one is the figure, the others are listed; without it both ends are a range."""

import re
from collections import defaultdict
from dataclasses import replace

from ....schema.figure.signs import plain
from ....schema.vocabulary import quantity
from ..headings.ends import end_of
from ..headings.label import parse_label
from ..headings.lexicon import find_symbol, tokens
from ..headings.pieces import may_be_unit
from ..model import Field, Table

_WEAK = ("nominal", "nom", "value", "nenn", "wert", "nennwert")
"""Words that say "usual" only beside a smallest figure: nominal torque has its largest, too."""


def set_ends_aside(table: Table) -> None:
    """Mark the smallest and largest figures that stand beside the usual ones as no figures."""
    groups: dict[tuple[str, ...], list[tuple[str, bool, Field]]] = defaultdict(list)
    for f in table.fields:
        base, end, sure = _divided(f)
        groups[base].append((end, sure, f))
    for base, members in groups.items():
        ends = {end for end, _, _ in members}
        keys = _keys(" ".join(base))
        if len(members) < 2 or not ends & {"least", "most"} or not keys:
            continue
        usual = [f for end, _, f in members if end == "usual"]
        usual = usual or [f for end, _, f in members if not end]
        if usual and "least" in ends:
            _set_aside([f for end, _, f in members if end in ("least", "most")], usual[0])
        elif any(end == "usual" and sure for end, sure, _ in members):
            most = [f for end, _, f in members if end == "most"]
            # The largest torque at stall is a quantity of its own.
            _set_aside([f for f in most if keys & _names_of(f) or not _names_of(f)], usual[0])
        elif not usual and len(members) == 2 and ends == {"least", "most"}:
            low, high = (next(f for e, _, f in members if e == end) for end in ("least", "most"))
            _as_range(table, low, high, " ".join(base))


def _set_aside(fields: list[Field], usual: Field) -> None:
    for f in fields:
        f.aside = f'the usual figure under "{plain(usual.heading)}" is taken'.replace("\n", " ")


def _as_range(table: Table, low: Field, high: Field, base: str) -> None:
    if table.continuation is not None:
        return  # its further rows are read column by column
    low.texts = [
        f"{a}…{b}" if a and b else f"≥ {a}" if a else f"≤ {b}" if b else ""
        for a, b in zip(low.texts, high.texts, strict=True)
    ]
    low.label = replace(parse_label(base), marks=low.label.marks, units=low.label.units)
    low.units = tuple(u for u in low.units if not end_of(u)) or high.units
    low.heading = f"{plain(low.heading)} … {plain(high.heading)}".replace("\n", " ")
    table.fields = [f for f in table.fields if f is not high]


def _divided(f: Field) -> tuple[tuple[str, ...], str, bool]:
    """(words of the heading without the end, the end or "", whether the word says only that)."""
    text = " \n ".join((*f.captions, f.label.text))
    text = re.sub(r"[\[(]([^\[\]()]*)[\])]", _not_a_unit, plain(text))
    words = tokens(text)
    if _in_minutes(f):
        return words, "", False
    for at in (len(words) - 1, 0):
        end = end_of(words[at]) if len(words) > 1 else None
        weak = end is not None and words[at] in _WEAK
        if end and not (weak and at == 0):
            return words[:at] + words[at + 1 :], end, not weak
    return words, "", False


def _in_minutes(f: Field) -> bool:
    """Whether "min" is the unit of a time: a thermal time constant [min]."""
    keys = {f.label.forced} if f.label.forced else _names_of(f)
    return f.label.units[:1] == ("min",) and any(k and "s" in quantity(k).accepts for k in keys)


def _not_a_unit(bracket: re.Match[str]) -> str:
    content = bracket[1].strip()
    return f" {content} " if end_of(content) or not may_be_unit(content) else " "


def _keys(text: str) -> set[str]:
    label = parse_label(text)
    keys = {k for p in label.names for k in p.keys}
    hits = [find_symbol(s) for s in label.symbols]
    return keys | {k for hit in hits if hit is not None for k in hit.keys}


def _names_of(f: Field) -> set[str]:
    return {k for p in f.label.names for k in p.keys}
