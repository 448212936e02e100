"""Near misses: rejected motors that one change of the requirement would admit, and which change.

Every change is worked out for the motor at hand and tried: what is printed is what was judged
feasible, rounded towards the safe side first.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ...schema.operation.limits import Verdict
from ...schema.operation.machines import Machines, armature_amperes
from ...schema.operation.ratios import ratio_grid
from ...schema.written import percent
from ..requirement.read import Requirement
from .choice import Judge, Judged, behind
from .gears import gear_utilisations
from .run import Found, Shown, show

if TYPE_CHECKING:
    from ..store import Catalog

Array = NDArray[np.float64]

#: Near misses shown, and how many of the nearest rejected motors are looked at for them.
SHOWN = 5
_POOL = 8
#: Farthest change that is still worth saying.
_COLDEST = 0.0
_LONGEST_REST = 100.0  # times the cycle's period
_WIDEST = 4.0  # times the range of ratios, and of turns of a winding
_STEPS, _BITS = 12, 4  # halvings of a search, and how many of them at once


@dataclass(frozen=True)
class Change:
    """One change that admits the motor: what, from and to (SI), their unit, and in words."""

    change: str
    before: float | None
    after: float | None
    unit: str
    text: str
    also: dict[str, tuple[float, str]]


@dataclass
class Miss:
    """A rejected motor and the changes of which each alone admits it, cheapest to say first."""

    shown: Shown
    changes: list[Change]

    @property
    def sentence(self) -> str:
        """What would admit it, as one sentence."""
        texts = [change.text for change in self.changes]
        said = texts[0] if len(texts) == 1 else ", or ".join(["; ".join(texts[:-1]), texts[-1]])
        return f"It would do with {said}."


def near_misses(found: Found, catalog: Catalog) -> list[Miss]:
    """The nearest rejected motors that one change would admit, nearest first."""
    largest = found.judged.largest
    rejected = found.judged.verdict == Verdict.REJECTED
    rejected &= ~found.passed.rejected & ~found.passed.unknown & np.isfinite(largest)
    pool = np.flatnonzero(rejected)
    pool = pool[np.argsort(largest[pool], kind="stable")][:_POOL]
    misses: list[Miss] = []
    for shown in show(found, pool, catalog):
        if len(misses) == min(SHOWN, found.requirement.limit):
            break
        if shown.intervals:  # the exact look found a ratio after all
            continue
        changes = list(_Motor.of(found, shown).changes())
        if changes:
            misses.append(Miss(shown, changes))
    return misses


def _digits(value: float, up: bool) -> float:
    """Rounded to three digits, upward or downward."""
    if value == 0 or not math.isfinite(value):
        return value
    step = 10.0 ** (math.floor(math.log10(abs(value))) - 2)
    whole = math.ceil(value / step - 1e-9) if up else math.floor(value / step + 1e-9)
    return float(f"{whole * step:.6g}")


@dataclass
class _Motor:
    """One rejected motor in its requirement (with its gear, if any) at all ratios it may have."""

    requirement: Requirement
    machines: Machines
    ratios: Array
    tolerance: float | tuple[Array, Array, Array, Array] | None
    gear_limits: dict[str, float]
    gear_name: str | None
    judged: Judged

    @classmethod
    def of(cls, found: Found, shown: Shown) -> _Motor:
        requirement, at = found.requirement, np.array([shown.motor])
        limits: dict[str, float] = {}
        if shown.gear is not None:
            limits = {
                name: float(column[0])
                for name, column in gear_utilisations([shown.gear], requirement).items()
            }
            requirement = behind(requirement, shown.gear)
        ratios = requirement.ratios
        grid = (
            ratio_grid(ratios.low, ratios.high)
            if ratios.low is not None and ratios.high is not None
            else np.array(ratios.values)
        )
        tolerance = found.judge.tolerance
        if isinstance(tolerance, tuple):
            low, high, small, large = (factor[at] for factor in tolerance)
            tolerance = (low, high, small, large)
        motor = cls(
            requirement,
            found.fleet.machines.take(at),
            np.unique(np.append(grid, shown.judged.ratio)),
            tolerance,
            limits,
            shown.gear.part_number if shown.gear else None,
            shown.judged,
        )
        motor.judged = motor.judge(requirement)
        return motor

    def judge(
        self,
        requirement: Requirement,
        machines: Machines | None = None,
        ratios: Array | None = None,
    ) -> Judged:
        """The motor (or others in its place) at all its ratios."""
        machines = self.machines if machines is None else machines
        ratios = self.ratios if ratios is None else ratios
        tolerance = self.tolerance
        if isinstance(tolerance, tuple):
            low, high, small, large = (np.repeat(factor, len(machines)) for factor in tolerance)
            tolerance = (low, high, small, large)
        judge = Judge(requirement, tolerance)
        result = judge.cases(machines, ratios, slice(None), True)
        for name, value in self.gear_limits.items():
            result.extra[name] = np.full(len(result), value)
            if value > requirement.allowed:
                result.verdict[:] = Verdict.REJECTED
        return result

    def admits(self, requirement: Requirement, ratios: Array | None = None) -> bool:
        return bool((self.judge(requirement, ratios=ratios).verdict == Verdict.FEASIBLE).any())

    def others_pass(self, *names: str) -> NDArray[np.bool_]:
        """At which ratios every limit but the named ones holds, and these don't."""
        judged, allowed = self.judged, self.requirement.allowed
        result = ~judged.use.runaway
        for name in judged.names():
            if name in names:
                continue
            value = judged.utilisation(name)
            result &= ~(value > allowed)
            if name in judged.needed(self.requirement):
                result &= ~np.isnan(value)
        return result

    def changes(self) -> Iterator[Change]:
        """All single changes that admit the motor."""
        for kind in (
            self.supply,
            self.reserve,
            self.peak_current,
            self.continuous_current,
            self.supply_limits,
            self.ambient,
            self.more_rest,
            self.inertia_ratio,
            self.wider_ratio,
            self.winding,
        ):
            change = kind()
            if change is not None:
                yield change

    def _least(self, values: Array, mask: NDArray[np.bool_]) -> float | None:
        values = values[mask & np.isfinite(values)]
        return float(values.min()) if values.size else None

    def supply(self) -> Change | None:
        requirement, supply = self.requirement, self.requirement.demand.supply
        if requirement.lowest_voltage is None or requirement.nominal_voltage is None:
            return None
        before = requirement.lowest_voltage
        sag = supply.max_duty * (requirement.nominal_voltage - before)
        needed = self.judged.use.peak_voltage / requirement.allowed + supply.bridge_drop - sag
        least = self._least(needed / supply.max_duty, self.others_pass("voltage"))
        if least is None or least <= before:
            return None
        for extra in (1.0, 1.02, 1.05, 1.1):  # more voltage may mean more ripple
            after = _digits(least * extra, up=True)
            if self.admits(requirement.with_supply(after)):
                what = "a supply" if before == requirement.nominal_voltage else "a lowest supply"
                return _change(
                    "supply.lowest_voltage", before, after, "V",
                    f"{what} of {after:g} V instead of {before:g} V",
                )  # fmt: skip
        return None

    def reserve(self) -> Change | None:
        requirement = self.requirement
        least = self._least(self.judged.largest, self.judged.verdict == Verdict.REJECTED)
        if least is None or least > 1 or requirement.reserve == 0:
            return None
        after = math.floor((1 - least) * 1000) / 1000
        if not self.admits(replace(requirement, reserve=after)):
            return None
        return _change(
            "wanted.reserve", requirement.reserve, after, "1",
            f"a reserve of {percent(after, 1)} instead of {percent(requirement.reserve, 1)}",
        )  # fmt: skip

    def peak_current(self) -> Change | None:
        drive = self.requirement.demand.drive
        if drive.peak_current is None:
            return None
        factor = float(armature_amperes(1.0, drive.convention, self.machines.commutation)[0])
        needed = self.judged.use.peak_current_value / self.requirement.allowed
        mask = self.others_pass("peak_current") & ~(needed > self.machines.peak_current[0])
        return self._drive(
            "peak_current", drive.peak_current, drive.convention, needed / factor, mask
        )

    def continuous_current(self) -> Change | None:
        drive = self.requirement.demand.drive
        if drive.continuous_current is None:
            return None
        convention = drive.continuous_convention or drive.convention
        factor = float(armature_amperes(1.0, convention, self.machines.commutation)[0])
        needed = self.judged.use.rms_current / self.requirement.allowed / factor
        mask = self.others_pass("continuous_current")
        return self._drive("continuous_current", drive.continuous_current, convention, needed, mask)

    def _drive(
        self, key: str, before: float, convention: str, needed: Array, mask: NDArray[np.bool_]
    ) -> Change | None:
        least = self._least(needed, mask)
        if least is None or least <= before:
            return None
        after = _digits(least, up=True)
        drive = replace(self.requirement.demand.drive, **{key: after})
        if not self.admits(self.requirement.with_demand(drive=drive)):
            return None
        unit = "A" if convention == "dc" else f"A {convention}"
        words = "a drive with" if key == "peak_current" else "a drive with a lasting"
        peak = " peak" if key == "peak_current" and convention != "peak" else ""
        return _change(
            f"drive.{key}", before, after, "A",
            f"{words} {after:g} {unit}{peak} instead of {before:g} {unit}",
        )  # fmt: skip

    def supply_limits(self) -> Change | None:
        requirement = self.requirement
        for key, name, unit in (
            ("current_limit", "supply_current", "A"),
            ("power_limit", "supply_power", "W"),
        ):
            before = getattr(requirement, key)
            if before is None:
                continue
            needed = self.judged.utilisation(name) * before / requirement.allowed
            least = self._least(needed, self.others_pass(name))
            if least is None or least <= before:
                continue
            after = _digits(least, up=True)
            if self.admits(replace(requirement, **{key: after})):
                return _change(
                    f"supply.{key}", before, after, unit,
                    f"a supply that gives {after:g} {unit} instead of {before:g} {unit}",
                )  # fmt: skip
        return None

    def ambient(self) -> Change | None:
        requirement, around = self.requirement, self.requirement.demand.surroundings

        def at(temperature: float) -> bool:
            cooler = replace(around, ambient=temperature)
            return self.admits(requirement.with_demand(surroundings=cooler))

        if not self._heat_alone() or not at(_COLDEST):
            return None
        after = _bisect(at, _COLDEST, around.ambient, _STEPS)
        after = math.floor(after)
        if not at(after):
            return None
        return _change(
            "ambient.temperature", around.ambient, float(after), "°C",
            f"an ambient of {after:g} °C instead of {around.ambient:g} °C",
        )  # fmt: skip

    def _heat_alone(self) -> bool:
        """Whether heat (and what goes with it) is all that some ratio fails by: a cooler winding
        also takes less voltage and current."""
        judged, allowed = self.judged, self.requirement.allowed
        hot = (judged.use.thermal > allowed) | judged.use.runaway
        largest = np.zeros(len(judged))
        for name in judged.names():
            if name not in ("thermal", "continuous_current"):
                largest = np.fmax(largest, judged.utilisation(name))
        return bool((hot & (largest <= 1.3 * allowed)).any() or (largest <= 1.3 * allowed).any())

    def more_rest(self) -> Change | None:
        requirement = self.requirement
        if requirement.rest_effort is None or not self._heat_alone():
            return None
        period = requirement.demand.cycle.period

        def with_(seconds: float) -> bool:
            return self.admits(requirement.with_more_rest(seconds))

        most = period * _LONGEST_REST
        if not with_(most):
            return None
        while most > period / 100 and with_(most / 3):
            most /= 3
        seconds = _digits(
            _bisect(with_, most, most / 3 if most > period / 100 else 0.0, _STEPS), up=True
        )
        if not with_(seconds):
            return None
        return _change("dwell", 0.0, seconds, "s", f"{seconds:g} s more standstill in each cycle")

    def inertia_ratio(self) -> Change | None:
        requirement = self.requirement
        before = requirement.largest_inertia_ratio
        if before is None:
            return None
        needed = self.judged.utilisation("inertia_ratio") * before / requirement.allowed
        least = self._least(needed, self.others_pass("inertia_ratio"))
        if least is None or least <= before:
            return None
        after = _digits(least, up=True)
        if not self.admits(replace(requirement, largest_inertia_ratio=after)):
            return None
        return _change(
            "wanted.largest_inertia_ratio", before, after, "1",
            f"an inertia ratio of {after:g} allowed instead of {before:g}",
        )  # fmt: skip

    def wider_ratio(self) -> Change | None:
        if self.gear_name is not None:
            return None
        low, high = float(self.ratios.min()), float(self.ratios.max())
        outside = np.concatenate(
            [
                np.geomspace(low / _WIDEST, low, 49)[:-1],
                np.geomspace(high, high * _WIDEST, 49)[1:],
            ]
        )

        def feasible(ratios: Array) -> NDArray[np.bool_]:
            return self.judge(self.requirement, ratios=ratios).verdict == Verdict.FEASIBLE

        good = outside[feasible(outside)]
        if not good.size:
            return None
        near = float(good[np.argmin(np.minimum(abs(np.log(good / low)), abs(np.log(good / high))))])
        edge = _section(feasible, near, low if near < low else high)
        after = _digits(edge, up=edge > high)
        if not feasible(np.array([after])).any():
            after = near
        span = self.requirement.ratios.text
        return _change(
            "gear.ratio", low if after < low else high, after, "1",
            f"a gear ratio of {after:.4g} instead of {span}",
        )  # fmt: skip

    def winding(self) -> Change | None:
        """Another number of turns, k times: Km and Ra's root grow with it, currents shrink."""
        turns = np.geomspace(1 / _WIDEST, _WIDEST, 65)
        ratios = self.ratios
        if ratios.size > 21:
            ratios = np.geomspace(ratios[0], ratios[-1], 21)

        def feasible(k: Array) -> NDArray[np.bool_]:
            wound = _wound(self.machines.take(np.zeros(k.size, np.intp)), k)
            verdict = self.judge(self.requirement, wound, ratios).verdict
            return (verdict.reshape(k.size, -1) == Verdict.FEASIBLE).any(axis=1)

        good = turns[feasible(turns)]
        if not good.size:
            return None
        near = float(good[np.argmin(np.abs(np.log(good)))])
        closer = np.linspace(1.0, near, 18)[1:]
        passing = closer[feasible(closer)]
        k = float(passing[np.argmin(np.abs(passing - 1))]) if passing.size else near
        Km = float(self.machines.torque_constant[0]) * k
        Ra = float(self.machines.armature_resistance[0]) * k**2
        return Change(
            "winding", 1.0, k, "1",
            f"a winding of {k:.3g} times the turns (Km {Km:.3g} N·m/A, Ra {Ra:.3g} Ω)",
            {"torque_constant": (Km, "N·m/A"), "armature_resistance": (Ra, "Ω")},
        )  # fmt: skip


def _wound(m: Machines, k: Array) -> Machines:
    """The same frames with k times the turns, the copper's cross-section staying what it is."""
    columns = dict(m.columns())
    columns["torque_constant"] = m.torque_constant * k
    columns["armature_resistance"] = m.armature_resistance * k**2
    columns["armature_inductance"] = m.armature_inductance * k**2
    for name in ("nominal_current", "continuous_stall_current", "peak_current"):
        columns[name] = columns[name] / k
    return Machines(**columns)


def _bisect(passes: Callable[[float], bool], good: float, bad: float, steps: int) -> float:
    """The passing value nearest to one that fails."""
    for _ in range(steps):
        middle = (good + bad) / 2
        if passes(middle):
            good = middle
        else:
            bad = middle
    return good


def _section(passes: Callable[[Array], NDArray[np.bool_]], good: float, bad: float) -> float:
    """The same as `_bisect` where many values are judged as fast as one: as exact in few looks."""
    parts = 1 << _BITS
    for _ in range(_STEPS // _BITS):
        values = good + (bad - good) * np.arange(parts + 1) / parts
        fails = np.append(~passes(values[1:-1]), True)
        first = int(fails.argmax())
        good, bad = float(values[first]), float(values[first + 1])
    return good


def _change(change: str, before: float, after: float, unit: str, text: str) -> Change:
    return Change(change, before, after, unit, text, {})
