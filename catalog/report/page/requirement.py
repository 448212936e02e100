"""A requirement and its motors as the numbers from which the page judges anew."""

from __future__ import annotations

from typing import Any

import numpy as np

from ....schema.operation.demand import Demand, Gearing
from ....schema.operation.limits import LIMITS, Verdict
from ...requirement.read import Requirement
from ...search.choice import _NEEDED, Judged, true_drop
from ...search.run import Found, Shown
from .. import plain as p

VERDICTS = {Verdict.FEASIBLE: "yes", Verdict.UNKNOWN: "unknown", Verdict.REJECTED: "no"}
MOVED = ("inertia_ratio", "supply_current", "supply_power")
"""Limits beside those of physics that the page works out itself."""

NOTHING_ASKED: dict[str, Any] = {
    "pieces": [], "supply": None, "ambient": 25.0, "reserve": 0.0, "mounting": None,
    "permissible_rise": 1.0, "pwm_frequency": None, "nominal_over_lowest": 1.0, "max_duty": 1.0,
    "bridge_drop": 0.0, "peak_current": None, "current_convention": "dc",
    "continuous_current": None, "continuous_convention": "dc", "largest_inertia_ratio": None,
    "load_inertia": 0.0, "current_limit": None, "power_limit": None, "fixed_needed": [],
    "ratio_range": None,
}  # fmt: skip


def demand_numbers(requirement: Requirement, shown: list[Shown]) -> dict[str, Any]:
    """What is asked, in SI; `pieces` once for every gear efficiency."""
    demand, ratios = requirement.demand, requirement.ratios
    supply, drive, around = demand.supply, demand.drive, demand.surroundings
    low, nominal = requirement.lowest_voltage, requirement.nominal_voltage
    extra = shown[0].judged.extra if shown else {}
    return NOTHING_ASKED | {
        "pieces": [_pieces(demand, gearing) for gearing in gearings(requirement, shown)],
        "supply": low,
        "ambient": around.ambient,
        "reserve": requirement.reserve,
        "mounting": around.thermal_resistance_housing_ambient,
        "permissible_rise": around.permissible_rise,
        "pwm_frequency": supply.pwm_frequency,
        "nominal_over_lowest": nominal / low if nominal is not None and low is not None else 1.0,
        "max_duty": supply.max_duty,
        "bridge_drop": true_drop(requirement),
        "peak_current": drive.peak_current,
        "current_convention": drive.convention,
        "continuous_current": drive.continuous_current,
        "continuous_convention": drive.continuous_convention or drive.convention,
        "largest_inertia_ratio": requirement.largest_inertia_ratio,
        "load_inertia": requirement.load_inertia,
        "current_limit": requirement.current_limit,
        "power_limit": requirement.power_limit,
        "fixed_needed": [name for name in extra if name in _NEEDED and name not in MOVED],
        "ratio_range": [ratios.low, ratios.high]
        if ratios.is_range and ratios.low != ratios.high and not requirement.use_gears
        else None,
    }


def _pieces(demand: Demand, gearing: Gearing) -> dict[str, Any]:
    found = demand.cycle.pieces(gearing.load_inertia, gearing.efficiency)
    return {
        "duration": found.duration.tolist(),
        "basis": found.basis.tolist(),
        "stretch": found.stretch.tolist(),
    }


def _gearing(requirement: Requirement, shown: Shown) -> Gearing:
    own = requirement.demand.gearing
    if shown.gear is None:
        return own
    return Gearing(own.load_inertia, shown.gear.efficiency or 1.0, shown.gear.inertia or 0.0)


def gearings(requirement: Requirement, shown: list[Shown]) -> list[Gearing]:
    """One gearing for every efficiency among the motors' gears, in the order of appearance."""
    first: dict[float, Gearing] = {}
    for one in shown:
        gearing = _gearing(requirement, one)
        first.setdefault(gearing.efficiency, gearing)
    return list(first.values())


def judged_numbers(found: Found, shown: list[Shown], ranks: int) -> dict[str, Any]:
    """Of each motor shown its ratio, gear and verdict; the first `ranks` are the candidates."""
    requirement = found.requirement
    efficiencies = [g.efficiency for g in gearings(requirement, shown)]
    gears = [_gearing(requirement, one) for one in shown]
    names = shown[0].judged.names() if shown else LIMITS
    known = [name for name in names if any(_known(one.judged, name) for one in shown)]
    tolerance = found.judge.tolerance
    corners = None
    if tolerance is not None:
        at = np.array([one.motor for one in shown], np.intp)
        if isinstance(tolerance, tuple):
            corners = np.stack([factor[at] for factor in tolerance], axis=1).tolist()
        else:
            pair = [1 - tolerance, 1 + tolerance]
            corners = [[*pair, *pair] for _ in shown]
    return {
        "ratio": [float(one.judged.ratio[0]) for one in shown],
        "pieces": [efficiencies.index(gearing.efficiency) for gearing in gears],
        "gear_inertia": [gearing.inertia for gearing in gears],
        "corners": corners,
        "fixed": [_fixed(one.judged) for one in shown],
        "verdict": [VERDICTS[Verdict(int(one.judged.verdict[0]))] for one in shown],
        "rank": [number + 1 if number < ranks else None for number in range(len(shown))],
        "limits": known,
    }


def _known(judged: Judged, name: str) -> bool:
    return bool(np.isfinite(judged.utilisation(name)[0]))


def _fixed(judged: Judged) -> dict[str, float | None]:
    """What the page's settings do not move: the gear's own utilisations."""
    found = {name: float(c[0]) for name, c in judged.extra.items() if name not in MOVED}
    return {name: None if np.isnan(value) else value for name, value in found.items()}


def in_words(document: dict[str, Any]) -> list[list[str]]:
    """A requirement's document as terms and what they are, for a list."""
    rpm = 60 / (2 * np.pi)
    load = document["load"]
    said = [
        ["At the load", f"peak torque {_si(load['peak_torque'])}, rms {_si(load['rms_torque'])}; "
         f"peak speed {p.number(load['peak_speed']['value'] * rpm)} rpm; period "
         f"{_si(load['period'])}"],
    ]  # fmt: skip
    if "ratio_range" in document:
        low, high = document["ratio_range"]
        ratio = f"{p.number(low)} to {p.number(high)}, "
        ratio += f"efficiency {p.percent(document['gear_efficiency'])}"
    elif document["gears"]:
        ratio = "the catalog's gears"
    else:
        ratio = ", ".join(p.number(r) for r in document["ratios"])
        ratio += f", efficiency {p.percent(document['gear_efficiency'])}"
    said.append(["Gear ratio", ratio])
    for name, term in (
        ("load_inertia", "Load inertia"), ("peak_current", "Drive, peak"),
        ("continuous_current", "Drive, continuous"), ("current_limit", "Supply current"),
        ("power_limit", "Supply power"),
        ("mounting", "Mounting"),
    ):  # fmt: skip
        if document[name]["value"]:
            said.append([term, _si(document[name])])
    if document["pwm_frequency"]["value"]:
        said.append(["PWM frequency", _si(document["pwm_frequency"])])
    if document["worst_case"]:
        said.append(["Worst case of", str(document["worst_case"])])
    said += [["Where", p.plain(text)] for text in document["where"]]
    return said


def _si(amount: dict[str, Any]) -> str:
    return p.quantity(amount["value"], amount["unit"])
