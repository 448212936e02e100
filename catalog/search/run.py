"""Search: a requirement held against all motors of a catalog; candidates in order of rank."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ...schema.gear import Gear
from ...schema.operation.limits import LIMITS, Verdict
from ...schema.operation.machines import Machines
from ...schema.operation.ratios import feasible_ratios
from ..requirement.read import Requirement, RequirementError
from ..requirement.where import Passed, apply_where
from .choice import Judge, Judged, best_of, choose, choose_gears
from .fleet import Fleet, load_fleet
from .gears import gear_utilisations, load_gears

if TYPE_CHECKING:
    from ..store import Catalog

Array = NDArray[np.float64]
Index = NDArray[np.intp]

#: Ties at the cut are broken by name among no more than this many motors.
_TIES = 1000


@dataclass(frozen=True)
class Name:
    maker: str
    part_number: str


@dataclass
class Shown:
    """A motor that is shown: its index, verdict's figures (one row), feasible ratio intervals, and
    which other gears of the catalog fit it."""

    motor: int
    name: Name
    judged: Judged
    intervals: list[tuple[float, float]] | None
    gear: Gear | None = None
    other_gears: list[str] = field(default_factory=list)


@dataclass
class Found:
    """What a search found. `counts` as in the interface; `lacking` counts the unknown motors by
    what they lack. `judged` holds all motors, `order` the feasible ones by rank."""

    requirement: Requirement
    fleet: Fleet
    judged: Judged
    passed: Passed
    order: Index
    candidates: list[Shown]
    considered: int
    feasible: int
    unknown: int
    rejected: dict[str, int]
    lacking: dict[str, int]
    gears: list[Gear]
    judge: Judge


def search(catalog: Catalog, requirement: Requirement) -> Found:
    """Hold the requirement against the catalog. Raises RequirementError where it can't be used."""
    fleet = load_fleet(catalog, requirement)
    _refuse_heat(fleet.machines, requirement)
    judge = Judge(requirement, _tolerance(fleet, requirement))
    gears: list[Gear] = []
    fits = None
    if requirement.use_gears:
        gears = load_gears(catalog, requirement)
        limits = gear_utilisations(gears, requirement)
        rank = _pair_order(fleet, gears, requirement)
        judged, fits = choose_gears(judge, fleet.machines, gears, limits, rank)
    else:
        judged = choose(judge, fleet.machines)
    passed = apply_where(requirement.where, fleet.columns, catalog)
    verdict = judged.verdict
    feasible = (verdict == Verdict.FEASIBLE) & ~passed.rejected & ~passed.unknown
    rejected = (verdict == Verdict.REJECTED) | passed.rejected
    unknown = ~feasible & ~rejected
    order = _ranked(fleet, judged, gears, requirement, np.flatnonzero(feasible), catalog)
    found = Found(
        requirement=requirement,
        fleet=fleet,
        judged=judged,
        passed=passed,
        order=order,
        candidates=[],
        considered=len(fleet),
        feasible=int(feasible.sum()),
        unknown=int(unknown.sum()),
        rejected=_rejected(judged, passed, rejected),
        lacking=_lacking(judged, passed, unknown, requirement),
        gears=gears,
        judge=judge,
    )
    top = order[: requirement.limit]
    found.candidates = show(found, top, catalog)
    if fits is not None:
        for shown in found.candidates:
            shown.other_gears = [
                gears[g].part_number
                for g in np.flatnonzero(fits[shown.motor])
                if g != shown.judged.gear[0]
            ]
    return found


def _refuse_heat(machines: Machines, requirement: Requirement) -> None:
    limits = machines.maximum_winding_temperature
    ambient = requirement.demand.surroundings.ambient
    known = ~np.isnan(limits)
    if known.any() and known.all() and ambient >= limits.max():
        raise RequirementError(
            f"The ambient of {ambient:g} °C is at or above every motor's largest winding "
            f"temperature (at most {limits.max():g} °C in this catalog); give a cooler one."
        )


def _tolerance(
    fleet: Fleet, requirement: Requirement
) -> float | tuple[Array, Array, Array, Array] | None:
    if requirement.tolerance == 0:
        return None
    if requirement.tolerance != "printed":
        return float(requirement.tolerance)
    factors = []
    for key in ("torque_constant", "armature_resistance"):
        for end in ("low", "high"):
            factor = fleet.columns[f"{key}_{end}"] / fleet.columns[key]
            factors.append(np.where(np.isnan(factor), 1.0, factor))
    return factors[0], factors[1], factors[2], factors[3]


# ---- order


def rank_key(fleet: Fleet, judged: Judged, order_by: str) -> Array:
    """What motors are ordered by, the least first, NaN where it is not known."""
    match order_by:
        case "copper-loss":
            return judged.use.copper_loss
        case "winding-temperature":
            return judged.use.winding_temperature
        case "utilisation":
            return judged.largest
        case "size" | "mass":
            return fleet.columns["mass"]
    return fleet.columns[order_by]


def _with_gear(key: Array, gears: list[Gear], gear: Index, order_by: str) -> Array:
    """Mass and price are those of motor and gear together; a gear's diameter counts if larger."""
    name = "mass" if order_by == "size" else order_by
    if not gears or name not in ("mass", "price", "diameter"):
        return key
    own = np.array([getattr(g, name) if getattr(g, name) is not None else np.nan for g in gears])
    if name == "diameter":
        return np.maximum(key, own[gear])
    return key + own[gear]


def pair_key(fleet: Fleet, judged: Judged, gears: list[Gear], order_by: str) -> Array:
    """The same for motors behind their gears."""
    return _with_gear(rank_key(fleet, judged, order_by), gears, judged.gear, order_by)


def _pair_order(fleet: Fleet, gears: list[Gear], requirement: Requirement) -> Iterator[Array]:
    """What decides between a motor's gears: its pair's mass (price, diameter) by gear."""
    name = requirement.order_by
    name = name if name in ("price", "diameter") else "mass"
    for number in range(len(gears)):
        which = np.full(len(fleet), number, np.intp)
        # a motor whose own mass is unknown still has a lightest gear
        key = np.nan_to_num(fleet.columns[name], nan=0.0)
        yield np.nan_to_num(_with_gear(key, gears, which, name), nan=np.finfo(float).max)


def _ranked(
    fleet: Fleet,
    judged: Judged,
    gears: list[Gear],
    requirement: Requirement,
    feasible: Index,
    catalog: Catalog,
) -> Index:
    """The feasible motors by rank; equal ones by motor constant, maker and part number."""
    key = pair_key(fleet, judged, gears, requirement.order_by)[feasible]
    second = fleet.columns["motor_constant"][feasible]
    key, second = (np.where(np.isnan(k), np.inf, k) for k in (key, second))
    if requirement.order_by == "size":
        primary, tie = key, np.where(np.isinf(key), second, 0.0)
    else:
        primary, tie = key, second
    order = np.lexsort((feasible, tie, primary))
    cut = order[: requirement.limit]
    if cut.size == 0:
        return feasible[order]
    last = cut[-1]
    end = int(np.searchsorted(primary[order], primary[last], side="right"))
    end = min(end, requirement.limit + _TIES)
    head = order[:end]
    names = names_of(catalog, fleet.ids[feasible[head]])
    by_name = sorted(
        range(len(head)),
        key=lambda i: (
            primary[head[i]],
            tie[head[i]],
            names[i].maker,
            names[i].part_number,
        ),
    )
    return feasible[np.concatenate([head[by_name], order[end:]])]


def names_of(catalog: Catalog, ids: NDArray[np.int64]) -> list[Name]:
    """Maker and part number of motors by id."""
    found: dict[int, Name] = {}
    numbers = ids.tolist()
    for begin in range(0, len(numbers), 500):
        some = numbers[begin : begin + 500]
        for number, maker, part in catalog.connection.execute(
            f"SELECT id, maker, part_number FROM motor WHERE id IN ({','.join(map(str, some))})"
        ):
            found[number] = Name(maker or "", part)
    return [found[number] for number in numbers]


# ---- counts


def _rejected(judged: Judged, passed: Passed, rejected: NDArray[np.bool_]) -> dict[str, int]:
    """Rejected motors by limit, each once."""
    counts: dict[str, int] = {}
    if passed.rejected.any():
        counts["where"] = int(passed.rejected.sum())
    others = rejected & ~passed.rejected
    codes = np.bincount(judged.limiting()[others], minlength=len(judged.names()))
    by_limit = zip(judged.names(), codes.tolist(), strict=True)
    return counts | {name: count for name, count in by_limit if count}


def _lacking(
    judged: Judged, passed: Passed, unknown: NDArray[np.bool_], requirement: Requirement
) -> dict[str, int]:
    counts = {}
    if (passed.unknown & unknown).any():
        counts["where"] = int((passed.unknown & unknown).sum())
    if (judged.unsure & unknown).any():
        counts["gear"] = int((judged.unsure & unknown).sum())
    for name in judged.needed(requirement):
        count = int((np.isnan(judged.utilisation(name)) & unknown).sum())
        if count:
            counts[name] = count
    return counts


# ---- candidates


def show(found: Found, motors: Index, catalog: Catalog) -> list[Shown]:
    """The motors with exact ratio intervals, at the exact ratio of least copper loss."""
    requirement = found.requirement
    judged = found.judged.take(motors)
    intervals: list[list[tuple[float, float]] | None] = [None] * len(motors)
    ratios = requirement.ratios
    if ratios.is_range and not requirement.use_gears and len(motors):
        intervals = [*_exact(found, motors, judged)]
    names = names_of(catalog, found.fleet.ids[motors])
    return [
        Shown(
            int(motor),
            names[i],
            judged.take(np.array([i])),
            intervals[i],
            found.gears[judged.gear[i]] if judged.gear[i] >= 0 else None,
        )
        for i, motor in enumerate(motors)
    ]


def _exact(found: Found, motors: Index, judged: Judged) -> list[list[tuple[float, float]]]:
    """The feasible intervals of these motors; `judged` is put at the best ratio in them."""
    requirement, machines = found.requirement, found.fleet.machines.take(motors)
    tolerance = found.judge.tolerance
    judge = found.judge
    if isinstance(tolerance, tuple):
        low, high, small, large = (factor[motors] for factor in tolerance)
        judge = Judge(requirement, (low, high, small, large))

    def cases(which: Index, ratio: Array) -> tuple[Array, Array]:
        some = judge.cases(machines.take(which), ratio[:, None], which, True)
        excess = np.nan_to_num(some.largest, nan=0.0, posinf=np.inf) - requirement.allowed
        return np.where(some.verdict == Verdict.UNKNOWN, np.inf, excess), some.use.copper_loss

    assert requirement.ratios.low is not None
    assert requirement.ratios.high is not None
    ranges = feasible_ratios(
        machines,
        requirement.demand,
        requirement.ratios.low,
        requirement.ratios.high,
        requirement.reserve,
        cases=cases,
    )
    has = np.flatnonzero(np.isfinite(ranges.best))
    if has.size:
        own = judge if not isinstance(judge.tolerance, tuple) else _some(judge, has)
        judged.put(has, best_of(own, machines.take(has), ranges.best[has, None], periodic=True))
    return [ranges.of(i) for i in range(len(motors))]


def _some(judge: Judge, rows: Index) -> Judge:
    assert isinstance(judge.tolerance, tuple)
    low, high, small, large = (factor[rows] for factor in judge.tolerance)
    return Judge(judge.requirement, (low, high, small, large))


__all__ = ["LIMITS", "Found", "Name", "Shown", "names_of", "pair_key", "search", "show"]
