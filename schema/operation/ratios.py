"""Which gear ratios of a range let a motor do it: intervals with exact edges, and the best ratio.

A ratio is feasible where every known utilisation is at most 1 − reserve. Over the ratio the
largest utilisation is continuous, falls, lies low and rises, mostly once; `GRID` ratios in
geometric steps find where, and whatever stands between two of them (an interval narrower than a
step, a gap in one) is looked for around the grid's local extremes. All of it is done for all motors
at once.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .demand import Demand
from .judge import judge_cases
from .limits import Utilisations
from .machines import Machines

Array = NDArray[np.float64]
Index = NDArray[np.intp]
Cases = Callable[[Index, Array], tuple[Array, Array]]

#: Ratios in the grid over a range.
GRID = 61
#: Halvings of a grid step: an edge is found to 1e-7 of the range's logarithm.
_HALVINGS = 20
_GOLDEN = (np.sqrt(5) - 1) / 2
#: Steps of the golden section: a minimum is found to 1e-5 of a grid step.
_SECTIONS = 24
#: A best ratio as near to an end of its interval is the end.
_AT_END = 1e-9
#: Cases of a grid that are held at once.
_CASES = 1 << 18


def ratio_grid(low: float, high: float) -> Array:
    """The ratios between two ends, both included, in geometric steps."""
    return np.geomspace(low, high, GRID) if high > low else np.array([low])


def reach(step: float) -> float:
    """How far a utilisation can fall, as a factor, from one ratio of the grid to the next: the
    heat goes with the square of a torque that goes with the ratio or its inverse, and a little
    further where warm copper and magnets take part."""
    return step**3


@dataclass
class RatioRange:
    """Feasible ratios of M motors: interval k belongs to the motor `motor[k]`.

    Intervals stand in the order of motors and, inside one, of ratios. `best` (M,) is the feasible
    ratio with the least copper loss, NaN for a motor without an interval.
    """

    motor: Index
    low: Array
    high: Array
    best: Array

    def of(self, motor: int) -> list[tuple[float, float]]:
        """The intervals of one motor."""
        mine = self.motor == motor
        return list(zip(self.low[mine].tolist(), self.high[mine].tolist(), strict=True))


def feasible_ratios(
    machines: Machines,
    demand: Demand,
    low: float,
    high: float,
    reserve: float = 0.0,
    *,
    periodic: bool = True,
    cases: Cases | None = None,
) -> RatioRange:
    """All feasible ratios between two ends, and the one with the least copper loss.

    A motor of which a needed limit is unknown has none. `cases` judges in place of `demand`
    where there are further limits: motors (n,) at a ratio each → what the largest utilisation
    exceeds the allowed one by (infinite where unknown), and the copper loss.
    """
    search = _Search(machines, demand, reserve, periodic, cases)
    M = len(machines)
    if not high > low:
        excess = search.excess(np.arange(M), np.full(M, low))
        motor = np.flatnonzero(excess <= 0)
        ends = np.full(motor.size, low)
        return RatioRange(motor, ends, ends, np.where(excess <= 0, low, np.nan))
    grid = np.log(ratio_grid(low, high))
    which = np.repeat(np.arange(M), grid.size)
    excess = search.excess(which, np.exp(np.tile(grid, M))).reshape(M, -1)
    points, values = search.with_extremes(grid, excess)

    # Runs of feasible points, then their edges between the last point in and the first one out.
    order = np.argsort(points, axis=1, kind="stable")
    points = np.take_along_axis(points, order, axis=1)
    values = np.take_along_axis(values, order, axis=1)
    good = values <= 0
    begins = good & ~np.pad(good, ((0, 0), (1, 0)))[:, :-1]
    ends = good & ~np.pad(good, ((0, 0), (0, 1)))[:, 1:]
    motor, first = np.nonzero(begins)
    _, last = np.nonzero(ends)
    left, right = points[motor, first], points[motor, last]
    inner = np.flatnonzero(first > 0)
    left[inner] = search.edge(motor[inner], left[inner], points[motor[inner], first[inner] - 1])
    inner = np.flatnonzero(last < points.shape[1] - 1)
    right[inner] = search.edge(motor[inner], right[inner], points[motor[inner], last[inner] + 1])
    lows = np.where(left <= grid[0], low, np.exp(left))
    highs = np.where(right >= grid[-1], high, np.exp(right))
    best = search.least_loss(M, motor, lows, highs)
    return RatioRange(motor, lows, highs, best)


@dataclass
class _Search:
    machines: Machines
    demand: Demand
    reserve: float
    periodic: bool
    cases: Cases | None = None

    def _judge(self, which: Index, ratio: Array) -> Utilisations:
        return judge_cases(self.machines, self.demand, which, ratio, periodic=self.periodic)

    def excess(self, which: Index, ratio: Array) -> Array:
        """Largest utilisation over what is allowed, infinite in runaway or where it is unknown."""
        found = np.empty(len(which))
        for begin in range(0, len(which), _CASES):
            span = slice(begin, begin + _CASES)
            if self.cases is not None:
                found[span] = self.cases(which[span], ratio[span])[0]
                continue
            result = self._judge(which[span], ratio[span])
            largest = np.nan_to_num(result.largest, nan=0.0, posinf=np.inf)
            found[span] = np.where(result.lacking, np.inf, largest - (1 - self.reserve))
        return found

    def with_extremes(self, grid: Array, excess: Array) -> tuple[Array, Array]:
        """Grid points, what they exceed by, and the like of the extremes between them.

        Both (M, G + n), n the largest number of a motor's local extremes that could cross the
        limit between grid points; a motor with fewer has its first grid point again.
        """
        M = len(excess)
        points = [np.tile(grid, (M, 1))]
        values = [excess]
        for sign in (1.0, -1.0):
            h = sign * excess
            padded = np.pad(h, ((0, 0), (1, 1)), constant_values=np.inf)
            local = (h > 0) & np.isfinite(h) if sign > 0 else (h >= 0) & np.isfinite(h)
            local &= (h <= padded[:, :-2]) & (h <= padded[:, 2:])
            change = reach(float(np.exp(grid[1] - grid[0]))) - 1
            local &= np.abs(excess) <= (1 - self.reserve) * change
            motor, at = np.nonzero(local)
            if motor.size == 0:
                continue
            low, high = grid[np.maximum(at - 1, 0)], grid[np.minimum(at + 1, grid.size - 1)]
            x, y = least(
                lambda x, motor=motor, sign=sign: sign * self.excess(motor, np.exp(x)), low, high
            )
            rank = np.arange(motor.size) - np.searchsorted(motor, motor)
            extra = np.tile(grid[:1], (M, rank.max() + 1))
            found = np.tile(excess[:, :1], (1, rank.max() + 1))
            extra[motor, rank], found[motor, rank] = x, sign * y
            points.append(extra)
            values.append(found)
        return np.hstack(points), np.hstack(values)

    def edge(self, motor: Index, inside: Array, outside: Array) -> Array:
        """The last feasible ratio (its logarithm) between a feasible one and one that is not."""
        inside, outside = inside.copy(), outside.copy()
        for _ in range(_HALVINGS if motor.size else 0):
            middle = (inside + outside) / 2
            good = self.excess(motor, np.exp(middle)) <= 0
            inside = np.where(good, middle, inside)
            outside = np.where(good, outside, middle)
        return inside

    def least_loss(self, M: int, motor: Index, low: Array, high: Array) -> Array:
        """The ratio with the least copper loss among the intervals of each motor."""
        best = np.full(M, np.nan)
        if motor.size == 0:
            return best

        def loss(x: Array) -> Array:
            if self.cases is not None:
                return self.cases(motor, np.exp(x))[1]
            return self._judge(motor, np.exp(x)).copper_loss

        ends = np.log(low), np.log(high)
        x, y = least(loss, *ends)
        for end in ends:
            at_end = loss(end)
            x, y = np.where(at_end < y, end, x), np.fmin(at_end, y)
        order = np.lexsort((y, motor))
        first = order[np.unique(motor[order], return_index=True)[1]]
        # an end of the interval is that end, not what is left of it after exp(log(…))
        ratio = np.clip(np.exp(x), low, high)
        for end in (low, high):
            ratio = np.where(np.isclose(ratio, end, rtol=_AT_END, atol=0), end, ratio)
        best[motor[first]] = ratio[first]
        return best


def least(function: Callable[[Array], Array], low: Array, high: Array) -> tuple[Array, Array]:
    """Minimum between `low` and `high` by golden section, elementwise: where, and how low."""
    a, b = low.copy(), high.copy()
    c, d = b - _GOLDEN * (b - a), a + _GOLDEN * (b - a)
    at_c, at_d = function(c), function(d)
    for _ in range(_SECTIONS):
        left = at_c < at_d
        a, b = np.where(left, a, c), np.where(left, d, b)
        probe = np.where(left, b - _GOLDEN * (b - a), a + _GOLDEN * (b - a))
        value = function(probe)
        c, d = np.where(left, probe, d), np.where(left, c, probe)
        at_c, at_d = np.where(left, value, at_d), np.where(left, at_c, value)
    better = at_c < at_d
    return np.where(better, c, d), np.where(better, at_c, at_d)
