"""At which ratio, and behind which gear, each motor does best, by the limits of physics and others.

Beside the limits of a motor at work there may be limits on the ratio of inertias, on the supply's
current and power, and those of a gear; they are utilisations like the others.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ...schema.operation.demand import Gearing
from ...schema.operation.energy import draw
from ...schema.operation.judge import judge, judge_worst
from ...schema.operation.limits import LIMITS, Utilisations, Verdict
from ...schema.operation.machines import Machines
from ...schema.operation.ratios import GRID, least, ratio_grid, reach
from ..requirement.fields import Ratios
from ..requirement.read import Requirement

if TYPE_CHECKING:
    from ...schema.gear import Gear

Array = NDArray[np.float64]

#: Step and largest number of ratios in the first, coarse look at a range over many motors, and
#: how many are tried around each motor's best one.
_STEP = 1.25
_MOST = 33
_AROUND = 9
#: Cases that the periodic winding temperature is worth at once; beyond, only where it may decide.
_FEW = 60_000
#: Motors above this utilisation at the coarse grid's best ratio have none that does between.
_HOPELESS = 2.0
#: Cases judged at once.
_CASES = 1 << 17


@dataclass
class Judged:
    """M motors at a ratio each: utilisations (M,), further ones by name, verdict codes, the index
    of a gear (−1: none), the corner of the tolerances that decides (−1: not asked), and whether
    the gear lacks what it takes to know."""

    ratio: Array
    use: Utilisations
    extra: dict[str, Array]
    verdict: NDArray[np.int8]
    gear: NDArray[np.intp]
    corner: NDArray[np.int8]
    unsure: NDArray[np.bool_]

    def __len__(self) -> int:
        return len(self.ratio)

    @property
    def largest(self) -> Array:
        """Largest known utilisation of all."""
        result = self.use.largest
        for column in self.extra.values():
            result = np.fmax(result, column)
        return result

    def names(self) -> tuple[str, ...]:
        return (*LIMITS, *self.extra)

    def limiting(self) -> NDArray[np.int8]:
        """Index in `names` of the largest known utilisation, −1 for none."""
        result = self.use.limiting
        most = np.nan_to_num(self.use.largest, nan=-np.inf)
        for index, column in enumerate(self.extra.values(), start=len(LIMITS)):
            above = column > most
            result = np.where(above, index, result).astype(np.int8)
            most = np.where(above, column, most)
        return result

    def utilisation(self, name: str) -> Array:
        return self.extra[name] if name in self.extra else getattr(self.use, name)

    def needed(self, requirement: Requirement) -> tuple[str, ...]:
        return (*self.use.needed, *(name for name in self.extra if name in _NEEDED))

    def take(self, index: NDArray[np.intp]) -> Judged:
        extra = {name: column[index] for name, column in self.extra.items()}
        return Judged(
            self.ratio[index],
            self.use.take(index),
            extra,
            self.verdict[index],
            self.gear[index],
            self.corner[index],
            self.unsure[index],
        )

    def put(self, index: NDArray[np.intp], other: Judged) -> None:
        """Replace the motors at `index`."""
        for name in ("ratio", "verdict", "gear", "corner", "unsure"):
            getattr(self, name)[index] = getattr(other, name)
        self.use.put(index, other.use)
        for name, array in self.extra.items():
            array[index] = other.extra[name]


_NEEDED = ("inertia_ratio", "supply_current", "supply_power", "gear_torque")


@dataclass
class Judge:
    """Judges motors in a requirement; `tolerance` holds the factors of the worst case, if asked."""

    requirement: Requirement
    tolerance: float | tuple[Array, Array, Array, Array] | None = None

    def cases(
        self, machines: Machines, ratios: Array, rows: slice | NDArray[np.intp], periodic: bool
    ) -> Judged:
        """All of M motors × R ratios (R,) or (M, R), flat (M·R,); `rows` tells which motors of
        the whole they are, for the tolerances."""
        requirement, corner = self.requirement, None
        if self.tolerance is None:
            use = judge(machines, requirement.demand, ratios, periodic=periodic)
        else:
            some = self.tolerance
            if isinstance(some, tuple):
                some = (some[0][rows], some[1][rows], some[2][rows], some[3][rows])
            use, corner = judge_worst(
                machines, requirement.demand, ratios, tolerance=some, periodic=periodic
            )
        M, R = use.voltage.shape
        ratio = np.array(np.broadcast_to(ratios, (M, R))).ravel()
        flat = use.reshape(-1)
        extra = self._further(machines, ratio, R, flat)
        judged = Judged(
            ratio,
            flat,
            extra,
            flat.verdict(requirement.reserve),
            np.full(M * R, -1, np.intp),
            np.full(M * R, -1, np.int8) if corner is None else corner.ravel(),
            np.zeros(M * R, bool),
        )
        return self._decided(judged)

    def _decided(self, judged: Judged) -> Judged:
        """The verdict with the further limits in it."""
        for name, column in judged.extra.items():
            if name in _NEEDED:
                lacking = np.isnan(column) & (judged.verdict == Verdict.FEASIBLE)
                judged.verdict[lacking] = Verdict.UNKNOWN
            judged.verdict[column > self.requirement.allowed] = Verdict.REJECTED
        return judged

    def _further(
        self, machines: Machines, ratio: Array, R: int, use: Utilisations
    ) -> dict[str, Array]:
        requirement = self.requirement
        result: dict[str, Array] = {}
        if requirement.largest_inertia_ratio is not None:
            result["inertia_ratio"] = (
                self.inertia_ratio(machines, ratio, R) / requirement.largest_inertia_ratio
            )
        if requirement.power_limit is not None or requirement.current_limit is not None:
            ambient = requirement.demand.surroundings.ambient
            hot = np.where(np.isnan(use.winding_temperature), ambient, use.winding_temperature)
            hot = np.where(use.runaway, np.nan, hot)
            some = machines if R == 1 else machines.take(np.repeat(np.arange(len(machines)), R))
            peak = draw(some, requirement.demand, ratio, hot, true_drop(requirement)).peak
            if requirement.current_limit is not None:
                assert requirement.lowest_voltage is not None
                result["supply_current"] = (
                    peak / requirement.lowest_voltage / requirement.current_limit
                )
            if requirement.power_limit is not None:
                result["supply_power"] = peak / requirement.power_limit
        return result

    def inertia_ratio(self, machines: Machines, ratio: Array, R: int = 1) -> Array:
        """Inertia of load and gear at the motor's shaft over the rotor's own."""
        own = machines.rotor_inertia if R == 1 else np.repeat(machines.rotor_inertia, R)
        gear = self.requirement.demand.gearing.inertia
        return (self.requirement.load_inertia / ratio**2 + gear) / own


def true_drop(requirement: Requirement) -> float:
    """The bridge's own drop in V, without the sag of the supply that the demand counts with it."""
    supply = requirement.demand.supply
    if requirement.nominal_voltage is None or requirement.lowest_voltage is None:
        return 0.0
    return supply.bridge_drop - supply.max_duty * (
        requirement.nominal_voltage - requirement.lowest_voltage
    )


def _best(judged: Judged, M: int, R: int) -> NDArray[np.intp]:
    """Of R flat cases of each of M motors the best one: feasible with the least copper loss, else
    undecided, else rejected, with the smallest largest utilisation."""
    verdict = judged.verdict.reshape(M, R)
    largest = np.nan_to_num(judged.largest.reshape(M, R), nan=0.0)
    within = np.where(verdict == Verdict.FEASIBLE, judged.use.copper_loss.reshape(M, R), largest)
    within = np.nan_to_num(within, nan=np.finfo(float).max, posinf=np.finfo(float).max)
    first = verdict.min(axis=1, keepdims=True)
    return np.arange(M) * R + np.where(verdict == first, within, np.inf).argmin(axis=1)


def best_of(judge_: Judge, machines: Machines, ratios: Array, *, periodic: bool) -> Judged:
    """Every motor at the best of some ratios, (R,) or (M, R)."""
    R = ratios.shape[-1]
    size = max(1, _CASES // R)
    whole = None
    for begin in range(0, max(len(machines), 1), size):
        span = slice(begin, begin + size)
        some = machines.take(span)
        own = ratios[span] if ratios.ndim == 2 else ratios
        flat = judge_.cases(some, own, span, periodic)
        part = flat.take(_best(flat, len(some), R)) if R > 1 else flat
        if whole is None:
            if len(some) == len(machines):
                return part
            # filled in place: the parts beside their joint copy would take twice the memory
            whole = part.take(np.zeros(len(machines), np.intp))
        whole.put(np.arange(begin, begin + len(some)), part)
    assert whole is not None
    return whole


def choose(judge_: Judge, machines: Machines) -> Judged:
    """Every motor at its best ratio of those the requirement allows.

    Over a range few motors are judged on the fine grid of `schema.ratios`, many on a coarse one,
    with a closer look around the best ratio of each that is near. The periodic winding
    temperature, which costs most, is worked out for many motors only where the mean loss passes.
    """
    ratios = judge_.requirement.ratios
    if not ratios.is_range:
        grid = np.array(ratios.values)
        return _on_grid(judge_, machines, grid)
    assert ratios.low is not None
    assert ratios.high is not None
    if len(machines) * GRID <= _FEW:
        grid = ratio_grid(ratios.low, ratios.high)
        found = best_of(judge_, machines, grid, periodic=True)
        _look_between(judge_, machines, found, grid, periodic=True)
        return found
    steps = int(np.ceil(np.log(ratios.high / ratios.low) / np.log(_STEP)))
    grid = np.geomspace(ratios.low, ratios.high, min(max(steps, 2), _MOST - 1) + 1)
    found = best_of(judge_, machines, grid, periodic=False)
    largest = found.largest
    near = np.flatnonzero((found.verdict != Verdict.FEASIBLE) & (largest < _HOPELESS))
    if near.size:
        step = grid[1] / grid[0]
        around = np.clip(
            found.ratio[near, None] * step ** np.linspace(-1, 1, _AROUND), ratios.low, ratios.high
        )
        closer = best_of(_rows(judge_, near), machines.take(near), around, periodic=False)
        better = np.flatnonzero(
            (closer.verdict < found.verdict[near])
            | (closer.verdict == found.verdict[near]) & (closer.largest < largest[near])
        )
        found.put(near[better], closer.take(better))
    _look_between(judge_, machines, found, grid, periodic=False)
    return _with_swings(judge_, machines, found, grid)


def _look_between(
    judge_: Judge, machines: Machines, found: Judged, grid: Array, *, periodic: bool
) -> None:
    """Put motors that no ratio of the grid admits, but one between two of them does, at that one.

    They are few: the largest utilisation of the grid's best ratio is within one step's reach of
    what is allowed.
    """
    if grid.size < 2:
        return
    step = grid[1] / grid[0]
    allowed = judge_.requirement.allowed
    near = np.flatnonzero(
        (found.verdict == Verdict.REJECTED) & (found.largest <= allowed * reach(step))
    )
    if near.size == 0:
        return
    some, own, at = machines.take(near), _rows(judge_, near), found.ratio[near]

    def largest(x: Array) -> Array:
        judged = own.cases(some, np.exp(x)[:, None], slice(None), periodic)
        return np.nan_to_num(judged.largest, nan=0.0, posinf=np.finfo(float).max)

    ends = np.maximum(at / step, grid[0]), np.minimum(at * step, grid[-1])
    x, most = least(largest, np.log(ends[0]), np.log(ends[1]))
    good = np.flatnonzero(most <= allowed)
    if good.size:
        rows = near[good]
        ratio = np.exp(x[good])[:, None]
        exact = best_of(_rows(judge_, rows), machines.take(rows), ratio, periodic=periodic)
        found.put(rows, exact)


def _on_grid(judge_: Judge, machines: Machines, grid: Array) -> Judged:
    if len(machines) * grid.size <= _FEW or judge_.requirement.demand.cycle.duration.size == 1:
        return best_of(judge_, machines, grid, periodic=True)
    found = best_of(judge_, machines, grid, periodic=False)
    return _with_swings(judge_, machines, found, grid)


def _with_swings(judge_: Judge, machines: Machines, found: Judged, grid: Array) -> Judged:
    """`found` with the periodic winding temperature where the mean loss does not yet reject."""
    open_ = np.flatnonzero(found.verdict != Verdict.REJECTED)
    if open_.size == 0:
        return found
    some = machines.take(open_)
    exact = best_of(_rows(judge_, open_), some, found.ratio[open_, None], periodic=True)
    lost = np.flatnonzero(exact.verdict == Verdict.REJECTED)
    if lost.size and grid.size > 1:
        # The peak may still pass at another ratio: a few neighbours tell.
        at = np.searchsorted(grid, exact.ratio[lost])
        neighbours = grid[np.clip(at[:, None] + np.arange(-2, 3), 0, grid.size - 1)]
        again = best_of(_rows(judge_, open_[lost]), some.take(lost), neighbours, periodic=True)
        saved = np.flatnonzero(again.verdict < Verdict.REJECTED)
        exact.put(lost[saved], again.take(saved))
    found.put(open_, exact)
    return found


def _rows(judge_: Judge, rows: NDArray[np.intp]) -> Judge:
    """The judge for some of the motors."""
    tolerance = judge_.tolerance
    if isinstance(tolerance, tuple):
        low, high, small, large = (factor[rows] for factor in tolerance)
        return Judge(judge_.requirement, (low, high, small, large))
    return judge_


def behind(requirement: Requirement, gear: Gear) -> Requirement:
    """The requirement with a real gear between motor and load."""
    gearing = Gearing(
        requirement.demand.gearing.load_inertia, gear.efficiency or 1.0, gear.inertia or 0.0
    )
    return replace(requirement.with_demand(gearing=gearing), ratios=Ratios((gear.ratio,)))


def choose_gears(
    judge_: Judge,
    machines: Machines,
    gears: list[Gear],
    gear_limits: Mapping[str, Array],
    rank: Iterator[Array],
) -> tuple[Judged, NDArray[np.bool_]]:
    """Every motor behind the gear that suits it best, and which others would do, (M, G).

    `gear_limits` holds the gears' own utilisations (G,); `rank` yields for each gear what the
    pair is ordered by (M,), the least first.
    """
    best: Judged | None = None
    key = np.full(len(machines), np.inf)
    fits = np.zeros((len(machines), len(gears)), bool)
    for number, (gear, pair) in enumerate(zip(gears, rank, strict=True)):
        own = Judge(behind(judge_.requirement, gear), judge_.tolerance)
        found = _on_grid(own, machines, np.array([gear.ratio]))
        for name, column in gear_limits.items():
            found.extra[name] = np.full(len(machines), column[number])
        found = own._decided(found)
        # Without its efficiency, and its inertia where the load is accelerated, nothing is known.
        moves = (
            judge_.requirement.demand.cycle.speed_start != judge_.requirement.demand.cycle.speed_end
        ).any()
        if gear.efficiency is None or (gear.inertia is None and moves):
            found.verdict[found.verdict == Verdict.FEASIBLE] = Verdict.UNKNOWN
            found.unsure[:] = True
        found.gear[:] = number
        fits[:, number] = found.verdict == Verdict.FEASIBLE
        largest = np.nan_to_num(found.largest, nan=0.0, posinf=np.finfo(float).max)
        order = np.where(fits[:, number], pair, largest)
        if best is None:
            best, key = found, order
            continue
        better = np.flatnonzero(
            (found.verdict < best.verdict) | (found.verdict == best.verdict) & (order < key)
        )
        best.put(better, found.take(better))
        key[better] = order[better]
    assert best is not None
    return best, fits
