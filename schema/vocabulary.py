"""The quantities a motor's sheet may give: keys, SI units, what is plausible and customary."""

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib import resources
from types import MappingProxyType
from typing import Any


@dataclass(frozen=True, slots=True)
class Quantity:
    """One quantity of vocabulary.toml, whose head explains the fields."""

    key: str
    unit: str = ""
    accepts: tuple[str, ...] = ()
    plausible: tuple[float, float] = (0.0, float("inf"))
    scatter: float = 0.0
    scatter_points: float = 0.0
    carries: frozenset[str] = frozenset()
    symbols: tuple[str, ...] = ()
    zero: bool = False
    frame: bool = False
    text: bool = False


def _quantity(key: str, fields: dict) -> Quantity:
    unit = fields.get("unit", "")
    lo, hi = fields.get("plausible", (0.0, float("inf")))
    return Quantity(
        key,
        unit=unit,
        accepts=tuple(fields.get("accepts", (unit,))),
        plausible=(float(lo), float(hi)),
        scatter=fields.get("scatter", 0.0),
        scatter_points=fields.get("scatter_points", 0.0),
        carries=frozenset(fields.get("carries", ())),
        symbols=tuple(fields.get("symbols", ())),
        zero=fields.get("zero", False),
        frame=fields.get("frame", False),
        text=fields.get("text", False),
    )


@cache
def quantities() -> Mapping[str, Quantity]:
    """All quantities by key, in the order of vocabulary.toml."""
    file = resources.files("motorfolio.schema").joinpath("vocabulary.toml")
    text = file.read_text(encoding="utf-8")
    return MappingProxyType({key: _quantity(key, f) for key, f in tomllib.loads(text).items()})


def quantity(key: str) -> Quantity:
    """The quantity of that key; KeyError if there is none."""
    return quantities()[key]


@dataclass(frozen=True, slots=True)
class Words:
    """The words of all languages together; words/en.toml explains the groups."""

    names: Mapping[str, tuple[str, ...]]
    generic: Mapping[str, tuple[str, ...]]
    sections: Mapping[str, tuple[str, ...]]
    at_load: Mapping[str, tuple[str, ...]]
    conventions: Mapping[str, tuple[str, ...]]
    variants: Mapping[str, tuple[str, ...]]
    roles: Mapping[str, tuple[str, ...]]
    magnets: Mapping[str, tuple[str, ...]]
    commutations: Mapping[str, tuple[str, ...]]
    connections: Mapping[str, tuple[str, ...]]
    signs: Mapping[str, tuple[str, ...]]
    same: Mapping[str, tuple[str, ...]]
    fillers: tuple[str, ...]
    captions: tuple[str, ...]
    others: tuple[str, ...]
    parts: tuple[str, ...]


_LISTS = ("fillers", "captions", "others", "parts")


@cache
def words() -> Words:
    """The words of every file in words/, merged: a language is added as one more file there."""
    merged: dict[str, dict[str, list[str]]] = {}
    folder = resources.files("motorfolio.schema").joinpath("words")
    for file in sorted(folder.iterdir(), key=lambda f: f.name):
        if not file.name.endswith(".toml"):
            continue
        for group, entries in tomllib.loads(file.read_text(encoding="utf-8")).items():
            for key, texts in entries.items():
                merged.setdefault(group, {}).setdefault(key, []).extend(texts)
    groups = {g: {k: tuple(t) for k, t in entries.items()} for g, entries in merged.items()}
    fields: dict[str, Any] = {g: groups.pop(g, {}).get("words", ()) for g in _LISTS}
    fields |= {g: MappingProxyType(e) for g, e in groups.items()}
    return Words(**fields)
