"""Direct checks that need no adjustment: order of figures, poles, frame figures, figures given
twice, the thermal rating, and the note on scatter."""

import math
from collections.abc import Callable, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..batch import FigureColumn, Floats
from ..convention import Commutation
from ..motor import Amount, Finding
from ..vocabulary import quantity
from .causes import causes_of, shape, static_scores
from .explain import ROLES, Narrator, capital, name, number
from .families import DIRECT, groups, majority
from .model import FIGURES, LAW_SCATTER
from .observed import copper, printed_sd, to_model
from .relations import (
    BOUNDS,
    CONSTANT_FIGURES,
    FAMILY,
    GIVEN_TWICE,
    POLES,
    RELATIONS,
    THERMAL,
    WITHIN_SCATTER,
    Relation,
)
from .suspects import DEPARTURE, Bools

Found = list[tuple[int, Finding]]
Doubted = dict[int, set[str]]

OFF, WIDE = 0.05, 2.0
"""A note on scatter wants a departure of so much, and of so many customary standard deviations,
beyond the printed digits: at less a table of notes would tell nothing."""


def _motor(narrator: Narrator, motor: int, severity: str, **fields: Any) -> Finding:
    return Finding(part_number=narrator.batch.part_number[motor], severity=severity, **fields)


def bounds(narrator: Narrator, doubted: Doubted) -> Found:
    """Order of figures: n_N < n0, T_N < T_s, I0 < I_N < I_s, an efficiency below 1."""
    batch, out = narrator.batch, []
    for relation, small, great in BOUNDS:
        if small not in batch.figures or great not in batch.figures:
            continue
        low, high = batch.figures[small], batch.figures[great]
        a = low.value * np.exp(to_model(small, low, batch))
        b = high.value * np.exp(to_model(great, high, batch))
        with np.errstate(invalid="ignore", divide="ignore"):
            wrong = np.flatnonzero(a / b > 1.0 + DEPARTURE)
        for m in wrong.tolist():
            if doubted.get(m, set()) & {small, great}:
                continue
            text = (
                f"{capital(name(small))} {narrator.printed(small, m)}"
                f"{narrator.place(m, small)} is greater than {name(great)} "
                f"{narrator.printed(great, m)}{narrator.place(m, great)}; one of them is wrong."
            )
            out.append((m, _motor(narrator, m, "warning", relation=relation,
                                  figures=(small, great), ratio=float(a[m] / b[m]),
                                  cell=narrator.cell(m, small), message=text)))  # fmt: skip
    for key in ("maximum_efficiency", "rated_efficiency"):
        column = batch.figures.get(key)
        if column is None:
            continue
        with np.errstate(invalid="ignore"):
            wrong = np.flatnonzero(column.value > 1.0)
        for m in wrong.tolist():
            if key not in doubted.get(m, set()):
                text = f"{capital(name(key))} {narrator.printed(key, m)}" \
                    f"{narrator.place(m, key)} is above 100 %."  # fmt: skip
                out.append((m, _motor(narrator, m, "error", relation="efficiency-below-one",
                                      figures=(key,), suspect=key, ratio=None,
                                      cell=narrator.cell(m, key), message=text)))  # fmt: skip
    return out


def poles(narrator: Narrator) -> Found:
    """Poles are twice the pole pairs, where a sheet gives both."""
    batch = narrator.batch
    if not {"poles", "pole_pairs"} <= set(batch.figures):
        return []
    ratio = batch.value("poles") / (2.0 * batch.value("pole_pairs"))
    wrong = np.flatnonzero(np.isfinite(ratio) & (np.abs(ratio - 1.0) > 1e-6))
    out: Found = []
    for m in wrong.tolist():
        cause = "poles-vs-pole-pairs" if ratio[m] in (0.5, 2.0) else "unexplained"
        text = (
            f"Poles {narrator.printed('poles', m)}{narrator.place(m, 'poles')} are not twice the "
            f"pole pairs {narrator.printed('pole_pairs', m)}; either may be wrong."
        )
        out.append((m, _motor(narrator, m, "error", relation=POLES,
                              figures=("poles", "pole_pairs"), ratio=float(ratio[m]), cause=cause,
                              cell=narrator.cell(m, "poles"), message=text)))  # fmt: skip
    return out


def frames(narrator: Narrator, family: Bools) -> Found:
    """Frame figures that stand off the majority of their family; family (N,) who is in one."""
    batch, out = narrator.batch, []
    if not family.any():
        return out
    group = groups(batch)
    for key in DIRECT:
        column = batch.figures.get(key)
        if column is None:
            continue
        with np.errstate(invalid="ignore", divide="ignore"):
            value = np.log(np.where(family & (column.value > 0), column.value, np.nan))
        custom = max(quantity(key).scatter, 0.02)
        median = majority(value, group, max(DEPARTURE, 1.5 * custom)).median[group]
        gap = value - median
        sd = np.hypot(printed_sd(key, column), 1.2 * custom)  # with that of the median
        with np.errstate(invalid="ignore"):
            off = np.flatnonzero(np.abs(np.expm1(np.abs(gap))) > DEPARTURE + 3.5 * sd)
        for m in off.tolist():
            scores = static_scores(
                shape(key, int(batch.commutation[m]), narrator.unit(key, m)[0]),
                gap[m : m + 1], sd[m : m + 1],
            )[0]  # fmt: skip
            causes = causes_of(scores)
            cause, *others = causes
            implied = math.exp(median[m])
            departure = abs(math.expm1(abs(float(gap[m]))))
            severe = cause != "unexplained" or departure > max(0.15, 5.0 * float(sd[m]))
            text = (
                f"{capital(name(key))} {narrator.printed(key, m)}{narrator.place(m, key)} is "
                f"{number(math.exp(gap[m]))} times that of the other windings of this size "
                f"({narrator.amount(key, m, implied)}). "
                f"{narrator.because(m, key, causes, float(gap[m]), float(sd[m]))}"
            )
            out.append((m, _motor(
                narrator, m, "error" if severe else "warning",
                relation=FAMILY + key.replace("_", "-"), figures=(key,), suspect=key,
                ratio=math.exp(gap[m]), cause=cause,
                other_causes=tuple(others),
                implied=Amount(value=implied, unit=quantity(key).unit),
                cell=narrator.cell(m, key), message=text,
            )))  # fmt: skip
    return out


def repeats(narrator: Narrator) -> Found:
    """A figure given twice under one condition: the second checks the first."""
    batch, out = narrator.batch, []
    for key, columns in batch.repeats.items():
        first = batch.figures.get(key)
        if first is None or quantity(key).text:
            continue
        for second in columns:
            with np.errstate(invalid="ignore", divide="ignore"):
                a = np.log(first.value) + to_model(key, first, batch)
                b = np.log(second.value) + to_model(key, second, batch)
            sd = np.sqrt(_digits(key, first) ** 2 + _digits(key, second) ** 2)
            gap = a - b
            with np.errstate(invalid="ignore"):
                off = np.flatnonzero(np.abs(np.expm1(np.abs(gap))) > 0.02 + 3.0 * sd)
            for m in off.tolist():
                unit = narrator.unit(key, m)[0]
                spread = np.hypot(sd[m : m + 1], 0.005)
                scores = static_scores(
                    shape(key, int(batch.commutation[m]), unit), gap[m : m + 1], spread
                )[0]
                causes = causes_of(scores)
                cause, *others = causes
                text = (
                    f"{capital(name(key))} is given twice: {narrator.printed(key, m)}"
                    f"{narrator.place(m, key)} and {second.text[m]} (row {second.row[m]}, column "
                    f"{second.column[m]}), a ratio of {number(math.exp(gap[m]))}; the first "
                    f"stands. {narrator.because(m, key, causes, float(gap[m]), float(spread[0]))}"
                )
                large = abs(math.expm1(abs(float(gap[m])))) > DEPARTURE
                out.append((m, _motor(
                    narrator, m, "error" if large and cause != "unexplained" else "warning",
                    relation=GIVEN_TWICE, figures=(key,), ratio=math.exp(gap[m]), cause=cause,
                    other_causes=tuple(others),
                    implied=Amount(value=float(second.value[m]), unit=quantity(key).unit),
                    cell=narrator.cell(m, key), message=text,
                )))  # fmt: skip
    return out


def _digits(key: str, column: FigureColumn) -> Floats:
    return np.where(np.isfinite(column.value), printed_sd(key, column), 0.0)


HOT_RATING = (
    "More than permitted: the rating may hold on a cooling plate or with forced air, for which the "
    "printed resistances are not."
)
COOL_RATING = (
    "Less than permitted: the rating may be a cautious one, for a hotter ambient, or leave room "
    "for the heat of friction."
)
LISTED = 12
"""So many motors are listed each with its own numbers; of more, the two ends."""


def thermal(narrator: Narrator, doubted: Doubted) -> Found:
    """T_max − T_amb = (Rth1 + Rth2)·I_N²·Ra(T_max): a note where the rating isn't of this kind and
    no finding doubts a figure that tells so."""
    batch = narrator.batch
    needed = ("nominal_current", "terminal_resistance", "maximum_winding_temperature")
    if not set(needed) <= set(batch.figures):
        return []
    total = batch.value("thermal_resistance_winding_housing") + batch.value(
        "thermal_resistance_housing_ambient"
    )
    total = np.where(np.isfinite(total), total, batch.value("thermal_resistance"))
    column = batch.figures["terminal_resistance"]
    resistance = column.value * np.exp(to_model("terminal_resistance", column, batch))
    column = batch.figures["nominal_current"]
    current = column.value * np.exp(to_model("nominal_current", column, batch))
    hottest = batch.value("maximum_winding_temperature")
    ambient = batch.value("ambient_temperature")
    ambient = np.where(np.isfinite(ambient), ambient, 25.0)
    hot = resistance * copper(hottest, batch.reference_temperature)
    ratio = total * current**2 * hot / (hottest - ambient)
    with np.errstate(invalid="ignore"):
        off = np.flatnonzero((ratio > 1.5) | (ratio < 1 / 1.5))
    figures = tuple(k for k in (
        "nominal_current", "thermal_resistance_winding_housing",
        "thermal_resistance_housing_ambient", "thermal_resistance", "terminal_resistance",
        "maximum_winding_temperature") if k in batch.figures)  # fmt: skip
    off = off[[not doubted.get(i, set()) & {*figures} for i in off.tolist()]]
    rise = hottest - ambient
    out: Found = []
    for some, why in ((off[ratio[off] > 1.0], HOT_RATING), (off[ratio[off] < 1.0], COOL_RATING)):
        if not some.size:
            continue
        m, alone = int(some[0]), some.size == 1
        text = (
            "The rated current does not follow from the thermal resistances: (Rth1 + Rth2)·I_N²·"
            f"Ra(T_max) is a rise of {_rises(batch.part_number, some, ratio * rise, rise)}. {why}"
        )
        out.append((m, Finding(
            part_number=batch.part_number[m] if alone else None,
            scope="motor" if alone else "column",
            part_numbers=() if alone else tuple(batch.part_number[i] for i in some),
            severity="note", relation=THERMAL, figures=figures, ratio=float(ratio[m]),
            cell=narrator.cell(m, "nominal_current"), message=text,
        )))  # fmt: skip
    return out


def _rises(parts: Sequence[str], motors: NDArray[np.intp], got: Floats, given: Floats) -> str:
    """ "62.2 K of 100 K permitted (A-1), 48 K of 100 K (A-2)"; of many the least and the
    largest share."""
    order = motors.tolist()
    if len(order) > LISTED:
        order.sort(key=lambda i: float(got[i] / given[i]))
        order = [order[0], order[-1]]
    said = [f"{number(float(got[i]))} K of {number(float(given[i]))} K" for i in order]
    if motors.size == 1:
        return f"{said[0]} permitted"
    said = [f"{text} ({parts[i]})" for text, i in zip(said, order, strict=True)]
    said[0] = said[0].replace(" (", " permitted (", 1)
    return f"{said[0]} to {said[1]}" if motors.size > LISTED else ", ".join(said)


def _customary(relation: Relation) -> float:
    """Customary scatter of a relation: that of its law, or of its figures together."""
    if relation.left in LAW_SCATTER:
        return LAW_SCATTER[relation.left]
    square = 0.0
    for figure in relation.figures:
        about = quantity(ROLES.get(figure, (figure,))[0])
        square += (about.scatter or about.scatter_points) ** 2
    return math.sqrt(square)


def scatter(narrator: Narrator, skip: Callable[[int], bool]) -> Found:
    """One note a motor at most: its worst relation, beyond the digits though within custom."""
    batch = narrator.batch
    n = len(batch)
    values: dict[str, Floats] = {}
    width: dict[str, Floats] = {}
    for key in FIGURES:
        column = batch.figures.get(key)
        if column is not None:
            with np.errstate(invalid="ignore"):
                values[key] = column.value * np.exp(to_model(key, column, batch))
            width[key] = math.sqrt(3.0) * printed_sd(key, column)
    nan = np.full(n, np.nan)
    values["R"] = values.get("terminal_resistance", nan)
    width["R"] = width.get("terminal_resistance", nan)
    values["K"], width["K"] = nan.copy(), nan.copy()
    for key in CONSTANT_FIGURES:
        if key in values:
            gap = np.isnan(values["K"])
            k = 1.0 / values[key] if key == "speed_constant" else values[key]
            values["K"] = np.where(gap, k, values["K"])
            width["K"] = np.where(gap, width[key], width["K"])
    worst, which = np.zeros(n), np.full(n, -1)
    servo = batch.commutation == int(Commutation.SINUSOIDAL)
    for i, relation in enumerate(RELATIONS):
        if not all(f in values for f in relation.figures) or "≈" in relation.formula:
            continue
        if relation.left in ("peak_torque", "friction_torque"):
            continue
        with np.errstate(all="ignore"):
            gap = np.abs(np.log(values[relation.left] / relation.right(values)))
            gap = gap - sum((width[f] for f in relation.figures), np.zeros(n))
            gap = gap - max(OFF, WIDE * _customary(relation))
        gap = np.where(servo & (relation.left == "nominal_speed"), np.nan, gap)
        better = gap > worst
        worst = np.where(better, gap, worst)
        which = np.where(better, i, which)
    out: Found = []
    for m in np.flatnonzero(which >= 0).tolist():
        if skip(m):
            continue
        relation = RELATIONS[which[m]]
        roles: dict[str, str] = {}
        for role in relation.others:
            options = ROLES.get(role, (role,))
            roles[role] = next(k for k in options if math.isfinite(narrator.dc(k, m)))
        equation, ratio = narrator.equation(m, relation, roles)
        figures = tuple(dict.fromkeys((relation.left, *roles.values())))
        text = f"Consistent within customary scatter; the widest: {equation}."
        out.append((m, _motor(narrator, m, "note", relation=WITHIN_SCATTER, figures=figures,
                              ratio=ratio, cell=narrator.cell(m, relation.left),
                              message=text)))  # fmt: skip
    return out
