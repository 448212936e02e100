"""From a catalog, a motor and a requirement to a picture that says what it claims."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ....schema.errors import MotorfolioError
from ....schema.operation.limits import Verdict
from ....schema.operation.machines import Machines
from ....schema.operation.ratios import ratio_grid
from ...search.choice import Judge, behind
from ...search.fleet import load_fleet
from ...search.run import Found, Shown, search, show
from ..curves import Plane, plane
from ..implied import doubted, implied_figures
from ..plain import number, percent, words
from .candidates import draw_candidates
from .figures import draw_figures
from .plane import draw_plane
from .ratios import draw_ratios

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from ...requirement.read import Requirement
    from ...store import Catalog

Array = NDArray[np.float64]


def plane_of(catalog: Catalog, part: str, requirement: Requirement, *, cycle: bool) -> Figure:
    """The torque–speed plane of a motor at a requirement's supply, drive and ambient; with
    ``cycle`` what the requirement asks is drawn into it, at the ratio the search would take."""
    known = catalog.find(part)
    if not cycle:
        fleet = load_fleet(catalog)
        at = np.flatnonzero(fleet.ids == known.id)
        found = plane(fleet.machines.take(at), requirement.demand)
        claim = f"{known.part_number}{_supply(requirement)}: what its shaft can give"
        return draw_plane(found, claim, _missing(found.missing), _rated(catalog, part, found))
    chosen = _chosen(catalog, part, requirement)
    found = plane(chosen.machine, chosen.requirement.demand, chosen.ratio)
    claim = f"{known.part_number}{_supply(requirement)}: {_verdict(chosen.shown, 'the cycle')}"
    ratio = f"gear ratio {number(chosen.ratio, 3)}"
    below = "; ".join(filter(None, (ratio, _missing(found.missing))))
    return draw_plane(found, claim, below, _rated(catalog, part, found))


def _rated(catalog: Catalog, part: str, found: Plane) -> tuple[float, float] | None:
    """Nominal speed and torque as published, if both are and the plane reaches that far."""
    figures = catalog.motor(part)["figures"]
    speed, torque = (
        figures.get(key, {}).get("value") for key in ("nominal_speed", "nominal_torque")
    )
    return (speed, torque) if speed and torque and speed <= found.speed[-1] else None


def candidates_of(catalog: Catalog, requirement: Requirement) -> Figure:
    """Size against limiting utilisation of all motors that a search looks at."""
    found = search(catalog, requirement)
    if not found.considered:
        raise MotorfolioError(
            f"{catalog.path} has no motors; read a table first: motorfolio import FILE."
        )
    verdict = found.judged.verdict.copy()
    verdict[found.passed.unknown & (verdict == Verdict.FEASIBLE)] = Verdict.UNKNOWN
    mass = found.fleet.columns["mass"]
    size, label = mass * 1e3, "Mass in g"
    lacking = np.isnan(mass)
    if lacking.mean() > 0.5:
        size = found.fleet.columns["motor_constant"] * 1e3
        label, lacking = "Motor constant in mN·m/√W", np.isnan(size)
    elif np.nanmedian(mass) > 1.0:
        size, label = mass, "Mass in kg"
    claim = f"{found.feasible} of {found.considered} motors do it"
    if found.candidates:
        claim += f"; by {requirement.order_by} {found.candidates[0].name.part_number} comes first"
    blank = np.isnan(found.judged.largest) & ~lacking
    without = "; ".join(
        f"{int(these.sum())} {why}"
        for these, why in (
            (lacking, "without that figure are not shown"),
            (blank, "of which no limit is known are not shown"),
        )
        if these.any()
    )
    return draw_candidates(
        size, label, found.judged.largest, verdict, found.passed.rejected,
        [(c.motor, c.name.part_number) for c in found.candidates],
        requirement.allowed, claim, without,
    )  # fmt: skip


def ratios_of(catalog: Catalog, part: str, requirement: Requirement) -> Figure:
    """Utilisations of a motor against the gear ratio, over the requirement's range."""
    span = requirement.ratios
    if span.low is None or span.high is None or requirement.use_gears or span.high <= span.low:
        raise MotorfolioError(
            "Utilisations over the gear ratio need a range of ratios; give --ratio LOW..HIGH."
        )
    chosen = _chosen(catalog, part, requirement)
    grid = np.unique(np.concatenate([ratio_grid(span.low, span.high),
                                     np.geomspace(span.low, span.high, 181)]))  # fmt: skip
    judge = Judge(requirement, chosen.tolerance)
    judged = judge.cases(chosen.machine, grid, slice(None), True)
    intervals = chosen.shown.intervals or []
    if intervals:
        said = " and ".join(f"{number(low, 3)} to {number(high, 3)}" for low, high in intervals)
        claim = f"{chosen.shown.name.part_number}: gear ratios from {said} do it"
    else:
        claim = f"{chosen.shown.name.part_number}: no gear ratio does it"
    utilisation = {
        name: np.where(judged.use.runaway, np.nan, judged.utilisation(name))
        for name in judged.names()
    }
    below = "at each ratio the worse of cold and hot"
    if judged.use.runaway.any():
        below = "the worse of cold and hot; hatched: thermal runaway, no working point"
    return draw_ratios(
        grid, utilisation, intervals, chosen.ratio if intervals else None, requirement.allowed,
        claim, below, judged.use.runaway,
    )  # fmt: skip


def figures_of(catalog: Catalog, part: str) -> Figure:
    """Published against implied figures of a motor."""
    known = catalog.find(part)
    motor = catalog.motor(part)
    found = implied_figures(catalog, {known.id: motor})[known.id]
    if not found:
        raise MotorfolioError(
            f"{known.name} has no figure that its other figures imply: there is nothing to compare."
        )
    wrong = doubted(motor)
    if wrong:
        said = " and ".join(map(words, wrong))
        claim = f"{known.part_number}: the printed {said} disagrees with the rest"
        claim = claim.replace("disagrees", "disagree") if len(wrong) > 1 else claim
    elif any(f["severity"] != "note" for f in motor["findings"]):
        claim = f"{known.part_number}: a finding doubts its operating points"
    else:
        claim = f"{known.part_number}: its printed figures agree with one another"
    return draw_figures(
        found, claim, "mark: as printed, with the interval of its digits; bar: where 95 % lie"
    )


@dataclass
class _Chosen:
    """A motor in a requirement: its columns, the requirement (behind its gear), and the verdict."""

    machine: Machines
    requirement: Requirement
    shown: Shown
    ratio: float
    tolerance: float | tuple[Array, Array, Array, Array] | None


def _chosen(catalog: Catalog, part: str, requirement: Requirement) -> _Chosen:
    known = catalog.find(part)
    found: Found = search(catalog, requirement)
    at = np.flatnonzero(found.fleet.ids == known.id)
    shown = show(found, at, catalog)[0]
    tolerance = found.judge.tolerance
    if isinstance(tolerance, tuple):
        low, high, small, large = (factor[at] for factor in tolerance)
        tolerance = (low, high, small, large)
    own = behind(requirement, shown.gear) if shown.gear is not None else requirement
    machine = found.fleet.machines.take(at)
    return _Chosen(machine, own, shown, float(shown.judged.ratio[0]), tolerance)


def _verdict(shown: Shown, what: str) -> str:
    judged = shown.judged
    verdict = Verdict(int(judged.verdict[0]))
    if verdict == Verdict.FEASIBLE:
        return f"{what} stays inside every limit"
    if verdict == Verdict.UNKNOWN:
        return f"whether {what} stays inside every limit is not known"
    name = words(judged.names()[int(judged.limiting()[0])])
    largest = float(judged.largest[0])
    if not np.isfinite(largest):
        return f"{what} leads to thermal runaway"
    return f"{what} takes {percent(largest)} of the {name} limit"


def _supply(requirement: Requirement) -> str:
    voltage = requirement.lowest_voltage
    return "" if voltage is None else f" at {number(voltage)} V"


def _missing(missing: list[str]) -> str:
    return f"its sheet lacks {'; '.join(missing)}" if missing else ""


__all__ = ["candidates_of", "figures_of", "plane_of", "ratios_of"]
