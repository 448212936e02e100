"""The cells under one heading → a column of figures in SI, and the cells that are not read."""

import re
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import TypeVar

import numpy as np

from ....schema.batch import FigureColumn, Floats, Ints
from ....schema.figure.read import POINT, ColumnFigures, Figure, NumberStyle, read_column
from ....schema.figure.signs import plain
from ....schema.units.read import Unit, UnitError, read_unit, unit_of
from ....schema.vocabulary import Quantity
from ...tables.grid import Stored
from ..cells import mark_last, missing

BRACKETED = frozenset({"rotor_inertia", "mass", "length"})
"""Figures whose second value in brackets, without a unit, is that with a brake."""


Number = TypeVar("Number", float, Floats)


@dataclass(slots=True)
class Failure:
    """A cell that was not read: the motor's index, and why."""

    motor: int
    text: str
    reason: str
    guesses: tuple[str, ...] = ()


@dataclass(slots=True)
class Values:
    """One heading's cells in SI; NaN where nothing was read. ``second`` are the figures that
    stood behind the first in the same cell: in another unit, or with a brake. ``temperatures``
    in °C are those that single cells hold at."""

    value: Floats
    low: Floats
    high: Floats
    qualifiers: dict[int, str] = field(default_factory=dict)
    failures: list[Failure] = field(default_factory=list)
    second: "Values | None" = None
    second_is_variant: bool = False
    remarks: list[str] = field(default_factory=list)
    marks: dict[int, tuple[str, ...]] = field(default_factory=dict)
    cell_units: dict[int, Unit] = field(default_factory=dict)
    temperatures: dict[int, float] = field(default_factory=dict)


def _in_si(x: Number, factor: float, offset: float) -> Number:
    """The value in SI: 118 g are 0.118 kg to the last digit, for which a prefix divides."""
    inverse = round(1 / factor) if 0 < factor < 1 else 0
    if offset == 0 and inverse and 1 / inverse == factor:
        return x / inverse
    return x * factor + offset


def read_values(
    texts: list[str],
    q: Quantity,
    units: Sequence[Unit],
    style: NumberStyle,
    note_marks: frozenset[str] = frozenset(),
    tolerance: float | None = None,
) -> Values:
    """Read a column of cells as figures of q; ``units`` are the heading's, the second for a
    second figure in the cell. Cells may carry units of their own, which then count."""
    column = _read(texts, style, note_marks)
    n = len(texts)
    unit = units[0] if units else None
    factor = unit.factor if unit else 1.0
    offset = unit.offset if unit else 0.0
    out = Values(
        _in_si(column.value, factor, offset),
        _in_si(column.low, factor, offset),
        _in_si(column.high, factor, offset),
    )
    for i, error in column.failures.items():
        if not missing(texts[i]):
            guesses = tuple(f"{g:.12g}" for g in error.guesses)
            out.failures.append(Failure(i, texts[i], error.reason, guesses))
    per_cent = unit is not None and q.unit == "1" and not unit.text and "efficiency" in q.key
    if per_cent and n and np.nanmax(np.where(np.isnan(column.value), 0, column.value)) > 1.5:
        out.value, out.low, out.high = out.value / 100, out.low / 100, out.high / 100
        out.remarks.append("taken as per cent, since an efficiency is at most 1")
    _cells_with_more(out, column, texts, q, units)
    if unit is None:
        bare = ~np.isnan(column.value)
        for i in column.figures:
            if column.figures[i].unit:
                bare[i] = False
        for i in np.flatnonzero(bare).tolist():
            _refuse(out, i, texts[i], "no unit is given")
    _impossible(out, texts, q)
    _wrong_by_thousand(out, column, texts, q)
    if tolerance:
        for i in np.flatnonzero(~np.isnan(out.value)).tolist():
            if int(i) not in out.qualifiers:
                out.qualifiers[int(i)] = "tolerance"
                spread = abs(out.value[i]) * tolerance
                out.low[i], out.high[i] = out.value[i] - spread, out.value[i] + spread
    return out


def _read(texts: list[str], style: NumberStyle, note_marks: frozenset[str]) -> ColumnFigures:
    """The cells as numbers: typed ones in the table's style, stored ones with their point."""
    if note_marks:
        texts = [mark_last(text, note_marks) for text in texts]
    stored = [i for i, text in enumerate(texts) if isinstance(text, Stored)]
    if not stored or (style.decimal == "." and not style.conflicts):
        return read_column(texts, style, note_marks=note_marks)
    typed: list[str] = list(texts)
    for i in stored:
        typed[i] = ""
    column = read_column(typed, style, note_marks=note_marks)
    found = read_column([texts[i] for i in stored], POINT, note_marks=note_marks)
    for name in ("value", "low", "high"):
        getattr(column, name)[stored] = getattr(found, name)
    column.figures |= {stored[k]: figure for k, figure in found.figures.items()}
    column.failures |= {stored[k]: error for k, error in found.failures.items()}
    return column


def _refuse(out: Values, i: int, text: str, reason: str, guesses: tuple[str, ...] = ()) -> None:
    out.value[i] = out.low[i] = out.high[i] = np.nan
    out.qualifiers.pop(i, None)
    out.failures.append(Failure(i, text, reason, guesses))


def _impossible(out: Values, texts: list[str], q: Quantity) -> None:
    """Zero and negative figures where there can be none."""
    if not q.zero:
        for i in np.flatnonzero(out.value == 0).tolist():
            _refuse(
                out, int(i), texts[i], f"zero is no {q.key.replace('_', ' ')}: perhaps not given"
            )
    if q.unit != "°C":
        for i in np.flatnonzero(out.value < 0).tolist():
            _refuse(out, i, texts[i], "negative")
    if q.unit == "1" and "efficiency" in q.key:
        for i in np.flatnonzero(out.value > 1).tolist():
            _refuse(out, i, texts[i], "an efficiency above 1")
    if q.key in ("poles", "pole_pairs", "phases"):
        whole = np.isnan(out.value) | (out.value == np.round(out.value))
        for i in np.flatnonzero(~whole).tolist():
            _refuse(out, i, texts[i], "not a whole number")


def _wrong_by_thousand(out: Values, column: ColumnFigures, texts: list[str], q: Quantity) -> None:
    """Cells that only the table's decimal sign decides ("1,250") and that would be of an
    impossible size by it, but of a plausible one by the other sign."""
    lo, hi = q.plausible
    for i in column.doubtful:
        value = out.value[i]
        if np.isnan(value) or lo / 3 <= value <= hi * 3:
            continue
        others = [x for x in (value / 1000, value * 1000) if lo <= x <= hi]
        if others:
            printed = column.value[i]
            factor = others[0] / value
            _refuse(
                out, i, texts[i],
                "of an impossible size by the table's decimal sign, not so by the other",
                (f"{printed:.12g}", f"{printed * factor:.12g}"),
            )  # fmt: skip


def _cells_with_more(
    out: Values, column: ColumnFigures, texts: list[str], q: Quantity, units: Sequence[Unit]
) -> None:
    """Cells that carry a qualifier, a unit of their own, a mark or a second figure."""
    second: dict[int, tuple[float, float, float]] = {}
    variant: dict[int, tuple[float, float, float]] = {}
    unit = units[0] if units else None
    for i, figure in column.figures.items():
        own = unit
        if figure.unit:
            try:
                own = read_unit(figure.unit, q.accepts)
            except UnitError as error:
                if (
                    q.unit == "1"
                    and re.fullmatch(r"[^\W\d_]+\.?", figure.unit)
                    and unit_of(figure.unit) is None
                ):
                    own = unit or Unit("", "1", 1.0, 0.0, "1")
                else:
                    _refuse(out, i, texts[i], error.reason, error.guesses)
                    continue
            assert own is not None
            out.cell_units[i] = own
            out.value[i], out.low[i], out.high[i] = (
                _in_si(x, own.factor, own.offset) for x in (figure.value, figure.low, figure.high)
            )
        if figure.qualifier:
            out.qualifiers[i] = figure.qualifier
        if figure.marks:
            out.marks[i] = figure.marks
        also = figure.also
        if figure.condition:
            _put_condition(out, i, texts[i], q, figure.condition)
        if also is None:
            continue
        if condition := _of_another_kind(also, q):
            _put_condition(out, i, texts[i], q, condition)
            continue
        other = units[1] if len(units) > 1 else None
        if also.unit:
            try:
                other = read_unit(also.unit, q.accepts)
            except UnitError as error:
                out.failures.append(
                    Failure(i, texts[i], f"its second figure: {error.reason}", error.guesses)
                )
                continue
        if other is None:
            if q.key in BRACKETED and own is not None:
                variant[i] = tuple(x * own.factor for x in (also.value, also.low, also.high))  # type: ignore[assignment]
            else:
                out.failures.append(
                    Failure(i, texts[i], "its second figure has no unit that tells what it is")
                )
            continue
        amount = tuple(x * other.factor + other.offset for x in (also.value, also.low, also.high))
        if (
            unit
            and not figure.unit
            and not also.unit
            and _swapped(figure.value, also.value, unit, other)
        ):
            out.remarks.append(f'"{plain(texts[i])}": its two units stand in the other order')
            out.value[i], out.low[i], out.high[i] = (
                x * other.factor + other.offset for x in (figure.value, figure.low, figure.high)
            )
            amount = tuple(x * unit.factor + unit.offset for x in (also.value, also.low, also.high))
        second[i] = amount  # type: ignore[assignment]
    for found in (second, variant):
        if found:
            nan = np.full(len(texts), np.nan)
            out.second = Values(nan, nan.copy(), nan.copy())
            out.second_is_variant = found is variant
            for i, (value, low, high) in found.items():
                out.second.value[i], out.second.low[i], out.second.high[i] = value, low, high
            break


_CONDITIONS = ("V", "s", "°C", "K", "rad/s")
"""Units of what a figure may hold under."""


def _of_another_kind(also: Figure, q: Quantity) -> str:
    """The second amount of "0.42 A (24 V)" as the condition that it is."""
    unit = unit_of(also.unit) if also.unit else None
    if unit is None or unit.si in q.accepts or unit.si not in _CONDITIONS:
        return ""
    return f"{also.value:.12g} {also.unit}"


def _put_condition(out: Values, i: int, text: str, q: Quantity, condition: str) -> None:
    """What a cell's figure holds under: a temperature is kept as such, all else is told."""
    amount, _, unit_text = condition.partition(" ")
    unit = unit_of(unit_text)
    if unit is not None and unit.si in q.accepts:
        _refuse(out, i, text, "two figures of one kind")
    elif unit is not None and unit.si == "°C" and "temperature" in q.carries:
        out.temperatures[i] = _in_si(float(amount.replace(",", ".")), unit.factor, unit.offset)
    else:
        out.remarks.append(f'"{plain(text)}": its condition "{condition}" is not used')


def _swapped(first: float, second: float, one: Unit, two: Unit) -> bool:
    """Whether the figures agree only if the first is in the second unit."""
    as_printed = first * one.factor, second * two.factor
    other_way = first * two.factor, second * one.factor

    def apart(pair: tuple[float, float]) -> float:
        a, b = pair
        return abs(a - b) / max(abs(a), abs(b), 1e-300)

    return apart(as_printed) > 0.2 and apart(other_way) < 0.03


def as_column(
    values: Values, texts: Sequence[str], heading: int, rows: Ints, columns: Ints
) -> FigureColumn:
    """A figure column without conventions yet."""
    n = len(texts)
    printed: list[str | None] = list(texts)
    for i in np.flatnonzero(np.isnan(values.value)).tolist():
        printed[i] = None
    return FigureColumn(
        values.value,
        values.low,
        values.high,
        printed,
        [],
        np.zeros(n, dtype=np.int32),
        np.full(n, heading, dtype=np.int32),
        rows,
        columns,
        dict(values.qualifiers),
    )
