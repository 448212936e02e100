"""The JSON document of a search: requirement, counts, candidates, near misses."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from ...schema.convention import Commutation
from ...schema.operation.cycle import Cycle
from ...schema.operation.energy import draw
from ...schema.operation.limits import Verdict
from ...schema.operation.machines import Machines
from ..documents import amount, number
from ..requirement.read import Requirement
from .choice import Judge, behind, true_drop
from .near_misses import Miss
from .rating import beyond_rating
from .run import Found, Shown

if TYPE_CHECKING:
    from ..store import Catalog

Document = dict[str, Any]

#: A bus may rise by this share above its nominal voltage while a motor brakes (common practice,
#: no source): what the capacitance and the brake resistor are worked out for.
BUS_RISE = 0.2
_CORNERS = (
    "Km low, Ra low",
    "Km low, Ra high",
    "Km high, Ra low",
    "Km high, Ra high",
)
#: A rated speed this far above what the nominal voltage gives tells of a weakened field.
_FIELD_WEAKENED = 1.1


def search_document(found: Found, misses: Sequence[Miss], catalog: Catalog) -> Document:
    """All that a search found, as the interface has it."""
    return {
        "requirement": requirement_document(found.requirement),
        "counts": {
            "considered": found.considered,
            "pass_where": found.passed.passes,
            "feasible": found.feasible,
            "unknown": found.unknown,
            "rejected": found.rejected,
            "lacking": found.lacking,
        },
        "where": [
            {
                "limit": held.limit.text,
                "passes": held.passes,
                "unknown": held.unknown,
                "did_you_mean": list(held.near),
            }
            for held in found.passed.held
        ],
        "candidates": [candidate_document(shown, found, catalog) for shown in found.candidates],
        "near_misses": [
            {
                **candidate_document(miss.shown, found, catalog),
                "needs": miss.sentence,
                "changes": [_change(change) for change in miss.changes],
            }
            for miss in misses
        ],
    }


def _change(change: Any) -> Document:
    def side(value: float | None) -> Any:
        return number(value) if change.unit == "1" else amount(value, change.unit)

    return {
        "change": change.change,
        "from": side(change.before),
        "to": side(change.after),
        "text": change.text,
        **{key: amount(value, unit) for key, (value, unit) in change.also.items()},
    }


def candidate_document(shown: Shown, found: Found, catalog: Catalog) -> Document:
    """One motor: verdict, ratio, utilisations, what it draws, remarks."""
    judged, use = shown.judged, shown.judged.use
    requirement = found.requirement
    if shown.gear is not None:
        requirement = behind(requirement, shown.gear)
    machine = found.fleet.machines.take(np.array([shown.motor]))
    column = {key: float(c[shown.motor]) for key, c in found.fleet.columns.items()}
    ratio = float(judged.ratio[0])
    runaway = bool(use.runaway[0])
    names = judged.names()
    limiting = int(judged.limiting()[0])
    document: Document = {
        "part_number": shown.name.part_number,
        "maker": shown.name.maker or None,
        "feasible": bool(judged.verdict[0] == Verdict.FEASIBLE),
        "ratio": ratio,
        "ratio_interval": _holding(shown.intervals, ratio),
        "ratio_intervals": [list(pair) for pair in shown.intervals or []],
        "utilisation": {name: number(float(judged.utilisation(name)[0])) for name in names},
        "limiting": names[limiting] if limiting >= 0 else None,
        "peak_current": amount(float(use.peak_current_value[0]), "A"),
        "rms_current": amount(float(use.rms_current[0]), "A"),
        "peak_voltage": amount(float(use.peak_voltage[0]), "V"),
        "peak_speed": amount(float(use.peak_speed[0]), "rad/s"),
        "peak_torque": amount(float(use.peak_torque_value[0]), "N·m"),
        "winding_temperature": amount(float(use.winding_temperature[0]), "°C"),
        "copper_loss": amount(float(use.copper_loss[0]), "W"),
        "mass": amount(column["mass"], "kg"),
        "diameter": amount(column["diameter"], "m"),
        "inertia_ratio": number(float(Judge(requirement).inertia_ratio(machine, judged.ratio)[0])),
        "runaway": runaway,
    }
    if requirement.demand.supply.pwm_frequency is not None:
        document["ripple_current"] = amount(float(use.ripple_current[0]), "A")
        document["ripple_peak_to_peak"] = amount(float(use.ripple_peak_to_peak[0]), "A")
    if judged.corner[0] >= 0:
        document["worst_corner"] = _CORNERS[int(judged.corner[0])]
    currency = "currency"
    if not np.isnan(column["price"]):
        currency = _currency(shown, found, catalog)
        document["price"] = amount(column["price"], currency)
    document["ranked_by"] = amount(*_ranked_by(shown, column, requirement.order_by, currency))
    if shown.gear is not None:
        document["gear"] = gear_document(shown)
        pair = column["mass"] + (np.nan if shown.gear.mass is None else shown.gear.mass)
        document["pair_mass"] = amount(pair, "kg")
    if not runaway:
        document |= _supply(machine, shown, requirement)
    document["remarks"] = _remarks(machine, shown, requirement, column, catalog, found)
    return document


def _ranked_by(
    shown: Shown, column: Mapping[str, float], order_by: str, currency: str
) -> tuple[float, str]:
    """The figure by which the candidates are ordered, that of motor and gear together."""
    judged = shown.judged
    match order_by:
        case "copper-loss":
            return float(judged.use.copper_loss[0]), "W"
        case "winding-temperature":
            return float(judged.use.winding_temperature[0]), "°C"
        case "utilisation":
            return float(judged.largest[0]), "1"
    name = "mass" if order_by == "size" else order_by
    unit = {"mass": "kg", "diameter": "m"}.get(name, currency)
    if shown.gear is None:
        return column[name], unit
    own = getattr(shown.gear, name)
    own = np.nan if own is None else own
    both = np.maximum if name == "diameter" else np.add
    return float(both(column[name], own)), unit


def _holding(intervals: list[tuple[float, float]] | None, ratio: float) -> list[float] | None:
    for low, high in intervals or ():
        if low * (1 - 1e-6) <= ratio <= high * (1 + 1e-6):
            return [low, high]
    return None


def gear_document(shown: Shown) -> Document:
    """The gear of a candidate, and the others that fit."""
    gear = shown.gear
    assert gear is not None
    return {
        "part_number": gear.part_number,
        "maker": gear.maker or None,
        "ratio": gear.ratio,
        "stages": gear.stages,
        "efficiency": gear.efficiency,
        "mass": amount(gear.mass, "kg"),
        "others_that_fit": shown.other_gears,
    }


def _currency(shown: Shown, found: Found, catalog: Catalog) -> str:
    row = catalog.connection.execute(
        "SELECT h.unit FROM motor m "
        "JOIN patterns p ON p.pattern = m.pattern AND p.quantity = 'price' "
        "JOIN headings h ON h.id = p.heading WHERE m.id = ?",
        (int(found.fleet.ids[shown.motor]),),
    ).fetchone()
    return row[0] if row and row[0] else "currency"


def _supply(machine: Machines, shown: Shown, requirement: Requirement) -> Document:
    """What the motor takes from the supply and gives back; PWM ripple's loss is left out."""
    use = shown.judged.use
    ambient = requirement.demand.surroundings.ambient
    hot = np.where(np.isnan(use.winding_temperature), ambient, use.winding_temperature)
    d = draw(machine, requirement.demand, shown.judged.ratio, hot, true_drop(requirement))
    peak, mean, back = float(d.peak[0]), float(d.mean[0]), float(d.returned[0])
    document: Document = {
        "supply": {
            "peak_power": amount(peak, "W"),
            "mean_power": amount(mean, "W"),
            "energy_per_cycle": amount(float(d.drawn[0]), "J"),
            "energy_returned": amount(back, "J"),
        }
    }
    supply = document["supply"]
    low, nominal = requirement.lowest_voltage, requirement.nominal_voltage
    if low is not None and nominal is not None:
        supply["peak_current"] = amount(peak / low, "A")
        supply["mean_current"] = amount(mean / nominal, "A")
        if back > 1e-9 * float(d.drawn[0]):
            top = nominal * (1 + BUS_RISE)
            supply["bus_capacitance"] = amount(2 * float(d.stretch[0]) / (top**2 - nominal**2), "F")
            supply["brake_resistor"] = amount(top**2 / float(d.peak_returned[0]), "Ω")
            supply["brake_power"] = amount(back / requirement.demand.cycle.period, "W")
            supply["bus_rise"] = BUS_RISE
    return document


def _remarks(
    machine: Machines,
    shown: Shown,
    requirement: Requirement,
    column: dict[str, float],
    catalog: Catalog,
    found: Found,
) -> list[str]:
    """What the model leaves out or had to assume about this motor."""
    said = []
    use = shown.judged.use
    if use.friction_assumed[0]:
        said.append("its sheet gives no friction: taken as 0")
    if use.ripple_unknown[0]:
        said.append("its inductance is unknown: current ripple left out")
    if np.isnan(machine.magnet_coefficient[0]) or machine.magnet_coefficient[0] == 0:
        said.append("its magnets are unknown: taken as keeping their flux when hot")
    torque = catalog.connection.execute(
        "SELECT nominal_torque FROM figure_value WHERE id = ?",
        (int(found.fleet.ids[shown.motor]),),
    ).fetchone()[0]
    rated = beyond_rating(
        machine,
        shown.judged,
        requirement.demand.cycle,
        requirement.demand.surroundings.thermal_resistance_housing_ambient is not None,
        np.nan if torque is None else torque,
    )
    if rated is not None:
        said.append(rated)
    nominal = column["nominal_voltage"]
    if requirement.lowest_voltage is not None and requirement.lowest_voltage > 2 * nominal:
        said.append(
            f"the supply is far above its nominal voltage of {nominal:g} V: ask the maker whether "
            "the winding's insulation bears it"
        )
    if machine.commutation[0] == Commutation.SINUSOIDAL:
        rated = machine.nominal_speed[0] * machine.torque_constant[0]
        if rated > _FIELD_WEAKENED * nominal:
            said.append(
                "its rated speed is beyond what its voltage gives (field weakening), which is "
                "outside the model"
            )
        inductances = catalog.connection.execute(
            "SELECT count(DISTINCT value) FROM (SELECT value FROM further_figures "
            "WHERE motor = :id AND quantity = 'terminal_inductance' AND \"condition\" IS NULL "
            "UNION ALL SELECT terminal_inductance FROM figure_value WHERE id = :id)",
            {"id": int(found.fleet.ids[shown.motor])},
        ).fetchone()[0]
        if inductances > 1:
            said.append(
                "its sheet gives more than one inductance (salient poles?): reluctance torque is "
                "outside the model"
            )
    return said


# ---- the requirement as understood


def requirement_document(requirement: Requirement) -> Document:
    """The requirement in SI, and as it was given."""
    demand = requirement.demand
    ratios = requirement.ratios
    ratio: Any = [ratios.low, ratios.high] if ratios.is_range else list(ratios.values)
    document: Document = {
        "title": requirement.title or None,
        "cycle": list(cycle_rows(demand.cycle, demand.gearing.load_inertia)),
        "load_inertia": amount(requirement.load_inertia, "kg·m²"),
        "ratio_range" if ratios.is_range else "ratios": ratio,
        "gears": "catalog" if requirement.use_gears else None,
        "gear_efficiency": demand.gearing.efficiency,
        "gear_inertia": amount(demand.gearing.inertia, "kg·m²"),
        "supply": amount(requirement.nominal_voltage, "V"),
        "lowest_supply": amount(requirement.lowest_voltage, "V"),
        "available_voltage": amount(demand.supply.available, "V"),
        "current_limit": amount(requirement.current_limit, "A"),
        "power_limit": amount(requirement.power_limit, "W"),
        "pwm_frequency": amount(demand.supply.pwm_frequency, "Hz"),
        "peak_current": amount(demand.drive.peak_current, "A"),
        "continuous_current": amount(demand.drive.continuous_current, "A"),
        "current_convention": demand.drive.convention,
        "continuous_current_convention": demand.drive.continuous_convention
        or demand.drive.convention,
        "ambient": amount(demand.surroundings.ambient, "°C"),
        "altitude": amount(requirement.altitude, "m"),
        "permissible_rise": demand.surroundings.permissible_rise,
        "mounting": amount(demand.surroundings.thermal_resistance_housing_ambient, "K/W"),
        "largest_inertia_ratio": requirement.largest_inertia_ratio,
        "reserve": requirement.reserve,
        "worst_case": requirement.tolerance,
        "where": [limit.text for limit in requirement.where],
        "order_by": requirement.order_by,
        "limit": requirement.limit,
        "load": load_summary(demand.cycle, demand.gearing.load_inertia),
        "as_given": requirement.document,
    }
    return document


def cycle_rows(cycle: Cycle, load_inertia: float) -> list[Document]:
    """The cycle at the load's shaft: torque with what accelerates the load's inertia. Rows of one
    `stretch` are the pieces in which a bent ramp is judged."""
    begin = np.concatenate([[0.0], np.cumsum(cycle.duration)[:-1]])
    extra = load_inertia * (cycle.speed_end - cycle.speed_start) / cycle.duration
    rows = []
    for i in range(cycle.duration.size):
        t0, t1 = float(cycle.torque_start[i] + extra[i]), float(cycle.torque_end[i] + extra[i])
        w0, w1 = float(cycle.speed_start[i]), float(cycle.speed_end[i])
        rows.append(
            {
                "stretch": int(cycle.stretches[i]),
                "time": amount(float(begin[i]), "s"),
                "duration": amount(float(cycle.duration[i]), "s"),
                "speed": [amount(w0, "rad/s"), amount(w1, "rad/s")],
                "torque": [amount(t0, "N·m"), amount(t1, "N·m")],
                "power": [amount(t0 * w0, "W"), amount(t1 * w1, "W")],
            }
        )
    return rows


def load_summary(cycle: Cycle, load_inertia: float) -> Document:
    """Peaks and rms values of the load over the cycle."""
    extra = load_inertia * (cycle.speed_end - cycle.speed_start) / cycle.duration
    t0, t1 = cycle.torque_start + extra, cycle.torque_end + extra
    w0, w1 = cycle.speed_start, cycle.speed_end

    def rms(a: Any, b: Any) -> float:
        return float(np.sqrt(((a * a + a * b + b * b) / 3 @ cycle.duration) / cycle.period))

    power = np.abs(np.concatenate([t0 * w0, t1 * w1]))
    return {
        "period": amount(cycle.period, "s"),
        "peak_torque": amount(float(max(np.abs(t0).max(), np.abs(t1).max())), "N·m"),
        "rms_torque": amount(rms(t0, t1), "N·m"),
        "peak_speed": amount(float(max(np.abs(w0).max(), np.abs(w1).max())), "rad/s"),
        "rms_speed": amount(rms(w0, w1), "rad/s"),
        "peak_power": amount(float(power.max()), "W"),
    }
