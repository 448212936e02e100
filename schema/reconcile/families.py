"""Windings of one motor size: what they share, by majority, and the figures that stand off.

Rows of one series are a family when most of them agree. Motor constant, rotor inertia, La/Ra and
friction torque enter the adjustment as further observations of each motor; printed figures of the
frame that no relation reaches (mass, thermal resistances) are compared directly.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..batch import Batch, Floats
from .adjust import Fit, fit
from .model import family_matrix
from .problem import Problem

TOLERANCE = np.array([0.05, 0.05, 0.05, 0.10])
"""Agreement of a family about its median: motor constant, inertia, La/Ra, friction torque."""

MAJORITY = 0.6

UNNAMED = 0.8
"""The same where no series name makes the rows a family, of at least four rows."""

MATTERS = 4.0
"""Sum of squared standardised gaps below which a family can't bring a contradiction to light."""

LEAST = 3
"""Windings that make a family."""

DIRECT = ("mass", "thermal_resistance_winding_housing", "thermal_resistance_housing_ambient",
          "thermal_resistance")  # fmt: skip
"""Frame figures compared directly: within 5 % of the family's median."""


def groups(batch: Batch, rows: slice = slice(None)) -> NDArray[np.int64]:
    """The series of every motor as an index; motors of no series are one group of the table."""
    names, kinds = batch.series[rows], batch.commutation[rows].tolist()
    index: dict[tuple[str | None, int], int] = {}
    both = zip(names, kinds, strict=True)
    out = [index.setdefault(pair, len(index)) for pair in both]
    return np.array(out, dtype=np.int64)


@dataclass(slots=True)
class Shared:
    """Median of each group, NaN where there is no majority; the majority's spread; the number."""

    median: Floats
    spread: Floats
    count: NDArray[np.int64]


def majority(
    value: Floats, group: NDArray[np.int64], tolerance: float, part: Floats | float = MAJORITY
) -> Shared:
    """The median (n_groups,) of logarithms by group, where most of at least three agree; part
    (n_groups,) how many."""
    n = int(group.max(initial=-1)) + 1
    known = np.isfinite(value)
    v, g = value[known], group[known]
    order = np.lexsort((v, g))
    v, g = v[order], g[order]
    count = np.bincount(g, minlength=n)
    start = np.concatenate([[0], np.cumsum(count)[:-1]])
    median = np.full(n, np.nan)
    have = count > 0
    low, high = start + (count - 1) // 2, start + count // 2
    median[have] = (v[low[have]] + v[high[have]]) / 2.0
    near = np.abs(value - median[group]) < np.log1p(tolerance)
    agree = np.bincount(group[near], minlength=n)
    family = (agree >= part * count) & (agree >= LEAST - (count == LEAST)) & (count >= LEAST)
    square = np.where(near, (value - median[group]) ** 2, 0.0)
    spread = np.sqrt(np.bincount(group, square, minlength=n) / np.maximum(agree - 1, 1))
    return Shared(np.where(family, median, np.nan), spread, agree)


def observe_families(
    problem: Problem,
    base: Fit,
    unsure: NDArray[np.bool_],
    group: NDArray[np.int64],
    named: NDArray[np.bool_],
) -> NDArray[np.bool_]:
    """Fill in what each motor's family shares, from the adjusted motors (robustly where unsure).

    Returns true for the motors that are of a family, (n,).
    """
    size = np.bincount(group)
    has_name = np.zeros(size.size, dtype=bool)
    has_name[group[named]] = True
    part = np.where(has_name, MAJORITY, np.where(size >= LEAST + 1, UNNAMED, 2.0))
    if size.max(initial=0) < LEAST:
        return np.zeros(len(group), dtype=bool)
    x, covariance = base.x, base.covariance
    who = np.flatnonzero(unsure & (size[group] >= LEAST))
    if who.size:
        better = fit(problem.take(who), robust=True)
        x, covariance = x.copy(), covariance.copy()
        x[who], covariance[who] = better.x, better.covariance
    robust = Fit(x, covariance, base.chi2)
    for i, row in enumerate(family_matrix()):
        value, sd = robust.combination(row)
        tolerance = float(TOLERANCE[i])
        usable = np.where(sd < tolerance, value, np.nan)
        shared = majority(usable, group, tolerance, part)
        least = 0.3 * tolerance
        spread = np.clip(1.2 * shared.spread, least, 0.6 * tolerance)
        spread = spread * np.sqrt(1.0 + 1.5 / np.maximum(shared.count, 1))
        problem.family[:, i] = shared.median[group]
        known = np.isfinite(problem.family[:, i])
        problem.family_sd[:, i] = np.where(known, spread[group], np.inf)
    # unlike motors that happen to share one thing are no family
    apart = ~np.isfinite(problem.family[:, 0])
    problem.family[apart] = np.nan
    problem.family_sd[apart] = np.inf
    return ~apart


def stands_off(problem: Problem, fitted: Fit) -> NDArray[np.bool_]:
    """Motors whose constants depart from their family's enough to matter."""
    total = np.zeros(len(problem))
    for i, row in enumerate(family_matrix()):
        value, sd = fitted.combination(row)
        gap = np.nan_to_num(problem.family[:, i] - value)
        total += gap**2 / (sd**2 + problem.family_sd[:, i] ** 2)
    return total > MATTERS
