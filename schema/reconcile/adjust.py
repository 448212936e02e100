"""Weighted least squares over many motors at once: Gauss-Newton in logarithms.

The normal matrix of the linear rows is one matrix product over all motors of a chunk; the few
nonlinear rows are added to it. Missing figures have weight zero, and a weak prior keeps every
system regular, so that one incomplete motor can't stop the batch.
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from ..batch import Floats
from .cholesky import Factor
from .equations import Equations
from .model import P
from .problem import Problem

CHUNK = 2048
"""Motors whose normal matrices are built at a time: what fits a processor's cache."""

ITERATIONS = 6
KEPT = 3
REST = 1e-4
LONGEST = 3.0
"""Steps of the adjustment: at most so many, with the first matrix kept for so many; at rest below
this change of any logarithm; none longer than this."""

ROBUST_CUTS = (30.0, 10.0, 5.0, 3.0, 3.0, 3.0, 3.0)
"""The cut of the robust fit, step by step, in standard deviations."""


@dataclass(slots=True)
class Fit:
    """The adjusted unknowns (n, P), their covariance (n, P, P) and the sum of squares (n,)."""

    x: Floats
    covariance: Floats
    chi2: Floats

    def covariance_with(self, row: Floats) -> Floats:
        """Covariance (P, n) of every unknown with a linear combination of the unknowns."""
        out = np.zeros((P, len(self.x)))
        for a in np.flatnonzero(row):
            out += row[a] * self.covariance[:, a].T
        return out

    def combination(self, row: Floats) -> tuple[Floats, Floats]:
        """Value and standard deviation of a linear combination of the unknowns."""
        used = np.flatnonzero(row)
        value, variance = np.zeros(len(self.x)), np.zeros(len(self.x))
        for a in used:
            value += row[a] * self.x[:, a]
            for b in used:
                variance += row[a] * row[b] * self.covariance[:, a, b]
        return value, np.sqrt(np.maximum(variance, 0.0))


def fit(problem: Problem, robust: bool = False) -> Fit:
    """Adjust all motors of a problem; with ``robust`` gross errors are weighed down.

    Starts from the log-linear solution, in which the small corrections take typical values.
    """
    n = len(problem)
    out = Fit(np.empty((n, P)), np.empty((n, P, P)), np.empty(n))
    for part, chunk, equations in _chunks(problem):
        x, normal, chi2 = (_robust if robust else _plain)(chunk, equations)
        out.x[part], out.covariance[part], out.chi2[part] = (
            x.T, equations.covariance(normal), chi2
        )  # fmt: skip
    return out


def misfit(problem: Problem, robust: bool = False) -> tuple[Floats, Floats]:
    """What of the same adjustment tells how well it fits: χ² (n,), and the logarithm (n,) of the
    covariance's determinant."""
    n = len(problem)
    chi2, log_covariance = np.empty(n), np.empty(n)
    for part, chunk, equations in _chunks(problem):
        _, normal, chi2[part] = (_robust if robust else _plain)(chunk, equations)
        log_covariance[part] = equations.log_covariance(normal)
    return chi2, log_covariance


def relinearised(problem: Problem, at: Fit) -> Fit:
    """The ordinary adjustment with all rows linearised at another fit: one step, its χ² as of the
    linearised rows."""
    n = len(problem)
    out = Fit(np.empty((n, P)), np.empty((n, P, P)), np.empty(n))
    for part, _, equations in _chunks(problem):
        x = at.x[part].T.copy()
        normal, right = equations.normal(x)
        step = normal.solve(right)
        out.chi2[part] = equations.chi2(x) - (right * step).sum(axis=0)
        x[equations.active] += step
        out.x[part], out.covariance[part] = x.T, equations.covariance(normal)
    return out


def _chunks(problem: Problem) -> Iterator[tuple[slice, Problem, Equations]]:
    for start in range(0, len(problem), CHUNK):
        part = slice(start, min(start + CHUNK, len(problem)))
        chunk = problem.take(part)
        yield part, chunk, Equations(chunk)


def _loglinear(equations: Equations) -> tuple[Floats, Factor]:
    x = equations.start()
    normal, right = equations.normal(x, typical=True)
    x[equations.active] += normal.solve(right)
    return x, normal


def _step(normal: Factor, right: Floats) -> Floats:
    return np.clip(normal.solve(right), -LONGEST, LONGEST)


def _plain(problem: Problem, equations: Equations) -> tuple[Floats, Factor, Floats]:
    """Gauss-Newton with the matrix of the first step kept; the few motors that this doesn't bring
    to rest are iterated further with their own."""
    x, _ = _loglinear(equations)
    active = equations.active
    normal, right = equations.normal(x)
    step = _step(normal, right)
    x[active] += step
    size = np.abs(step).max(axis=0)
    far = size > 0.2
    for _ in range(KEPT):
        step = _step(normal, equations.gradient(x))
        x[active] += step
        size = np.abs(step).max(axis=0)
        if size.max(initial=0.0) < REST:
            break
    chi2 = equations.chi2(x)
    who = np.flatnonzero(far | (size > REST))
    if who.size:
        x[:, who], own, chi2[who] = _further(problem.take(who), equations, x[:, who])
        normal.replace(who, own)
    return x, normal, chi2


def _further(problem: Problem, whole: Equations, x: Floats) -> tuple[Floats, Factor, Floats]:
    """More Gauss-Newton steps for some motors of a chunk, with the chunk's active unknowns."""
    equations = Equations(problem, whole.active)
    steps = 0
    while True:
        normal, right = equations.normal(x)
        step = _step(normal, right)
        x[equations.active] += step
        steps += 1
        if steps == ITERATIONS or np.abs(step).max(initial=0.0) < REST:
            break
    return x, normal, equations.chi2(x)


def _robust(_: Problem, equations: Equations) -> tuple[Floats, Factor, Floats]:
    x, normal = _loglinear(equations)
    for cut in ROBUST_CUTS:
        normal, right = equations.normal(x, cut)
        x[equations.active] += _step(normal, right)
    return x, normal, equations.chi2(x, ROBUST_CUTS[-1])
