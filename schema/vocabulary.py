"""The quantities a motor's sheet may give: keys, SI units, what is plausible and customary."""

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib import resources
from types import MappingProxyType


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
    text = resources.files("motorfolio.schema").joinpath("vocabulary.toml").read_text(encoding="utf-8")
    return MappingProxyType({key: _quantity(key, f) for key, f in tomllib.loads(text).items()})


def quantity(key: str) -> Quantity:
    """The quantity of that key; KeyError if there is none."""
    return quantities()[key]
