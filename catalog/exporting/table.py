"""The published figures as a table: a row a motor, a column a quantity under one convention."""

import math
import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from decimal import Decimal
from typing import Any, NamedTuple

from ...schema.convention import Commutation, to_dc
from ...schema.figure.grammar import half_digit
from ...schema.vocabulary import quantities
from ..documents import Document
from .units import Units, convention_of

IDENTITY = ("part_number", "maker", "series")
"""The columns that stand first."""

Motors = Callable[[], Iterator[Document]]
"""The motors, as often as they are asked for."""

_PLAIN_NUMBER = re.compile(
    r"[-+−]?[\d.,'’\s\u00a0\u202f]*\d[\d.,'’\s\u00a0\u202f]*([eE×x*·^10⁰¹²³⁴⁵⁶⁷⁸⁹⁻+-]+\d*)?"
)


@dataclass(frozen=True, slots=True)
class Column:
    """A quantity under one convention (and condition), in its nth repeat."""

    key: str
    heading: str
    repeat: int


class Cell(NamedTuple):
    """A figure as a table has it: the text tells its precision; a text quantity has no value.

    ``rank`` is 0 for the figure that stands, more for those that check it.
    """

    text: str
    value: float | None
    rank: int


def cells(motor: Document, units: Units) -> Iterator[tuple[Column, Cell]]:
    """The motor's figures, each with the column that it stands in."""
    taken: dict[str, int] = {}
    given: dict[str, int] = {}
    for key, figure, when in _figures(motor):
        heading, text, value = _cell(key, figure, when, motor, units)
        repeat = taken[heading] = taken.get(heading, -1) + 1
        rank = given[key] = given.get(key, -1) + 1
        yield Column(key, heading, repeat), Cell(text, value, rank)


def in_order(ranks: Mapping[Column, int]) -> list[Column]:
    """Columns as the vocabulary has their quantities; of one quantity those that only check
    another one follow it, since a reader takes the first."""
    order = {key: i for i, key in enumerate(quantities())}
    return sorted(ranks, key=lambda c: (order[c.key], ranks[c], c.heading, c.repeat))


def _figures(motor: Document) -> Iterator[tuple[str, Document, str]]:
    figures = dict(motor["figures"])
    for key in ("commutation", "magnet"):
        fact = motor["model"][key]
        if key not in figures and fact["value"] != "unknown":
            # no text of the sheet, so its basis goes with it
            figures[key] = {"value": f"{fact['value']} ({fact['basis']})"}
    for key, figure in figures.items():
        yield key, figure, ""
    for key, repeats in motor.get("repeats", {}).items():
        for figure in repeats:
            yield key, figure, ""
    for condition in motor.get("conditions", ()):
        for key, figure in condition["figures"].items():
            yield key, figure, condition["when"]


def _cell(
    key: str, figure: Document, when: str, motor: Document, units: Units
) -> tuple[str, str, float | None]:
    """(heading, text, value): "torque_constant [N·m/A] (rms, lines)", "0.0302", 0.0302."""
    if isinstance(figure["value"], str):
        return (f"{key} ({when})" if when else key), figure["value"], None
    unit_text, factor, offset = figure["unit"], 1.0, 0.0
    convention = figure.get("convention")
    chosen = units.get(key)
    if chosen is not None:
        unit_text, factor, offset = chosen.unit.text, chosen.unit.factor, chosen.unit.offset
        wanted = chosen.in_convention(convention)
        if wanted is not None:
            kind = Commutation[motor["model"]["commutation"]["value"].upper()]
            factor *= to_dc(key, wanted, kind) / to_dc(key, convention_of(convention), kind)
            convention = wanted.as_json()
    heading = key if unit_text in ("", "1") else f"{key} [{unit_text}]"
    if words := _convention_words(convention):
        heading += f" ({words})"
    if when:
        heading += f" ({when})"
    value, low, high = (
        None if figure[part] is None else (figure[part] - offset) / factor
        for part in ("value", "low", "high")
    )
    return heading, _number_text(figure, value, low, high), value


def _number_text(
    figure: Document, value: float | None, low: float | None, high: float | None
) -> str:
    """The number, to all digits; a printed limit, range or tolerance stays one."""
    if value is None:
        return ""
    sign = {"at most": "≤ ", "at least": "≥ "}.get(figure.get("qualifier", ""), "")
    shown = _digits(value)
    if sign or low is None or high is None or low == high:
        return sign + shown
    if _PLAIN_NUMBER.fullmatch((figure["text"] or "").strip()):
        return _as_precise(value, (high - low) / 2)
    if not re.search(r"[±%]|\+\s*/?\s*-", figure["text"] or "±"):
        return f"{_digits(low)}…{_digits(high)}"
    if abs((low + high) / 2 - value) <= 1e-9 * abs(value):
        return f"{shown} ± {_digits(float(f'{(high - low) / 2:.6g}'))}"
    return (
        f"{shown} +{_digits(float(f'{high - value:.6g}'))}/-{_digits(float(f'{value - low:.6g}'))}"
    )


def _as_precise(value: float, half: float) -> str:
    """The number with the digits whose interval is ± ``half``, or with that as a tolerance."""
    text = f"{value:.{min(max(round(-math.log10(2 * half)), 0), 15)}f}"
    same = abs(float(text) - value) <= 1e-9 * abs(value)
    if same and abs(half_digit(text.lstrip("-")) - half) <= 1e-6 * half:
        return text if abs(value) >= 1e-4 else f"{Decimal(text):e}"
    return f"{_digits(value)} ± {_digits(float(f'{half:.6g}'))}"


def _digits(value: float) -> str:
    """Twelve significant digits."""
    return f"{value:.12g}"


def _convention_words(found: dict[str, Any] | None) -> str:
    """What a heading says; what was merely assumed is assumed again by whoever reads it."""
    if not found:
        return ""
    kinds = ("current", "voltage", "between", "connection", "shape")
    basis = found.get("basis")
    words = {} if basis == "assumed" else dict.fromkeys(found[k] for k in kinds if k in found)
    if words and basis == "inferred":
        words["inferred"] = None
    # a temperature is never assumed: it stands there because the sheet says it
    if "temperature" in found:
        words[f"{found['temperature']:g} °C"] = None
    return ", ".join(words)
