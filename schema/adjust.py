"""Weighted least squares over many motors at once: Gauss-Newton in logarithms.

The normal matrix of the linear rows is one matrix product over all motors of a chunk; the few
nonlinear rows are added to it. Missing figures have weight zero, and a weak prior keeps every
system regular, so that one incomplete motor can't stop the batch.
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .batch import Floats
from .model import (
    FAMILY_ROWS,
    INDEX,
    LAW_SCATTER,
    UNPUBLISHED_I0,
    UNPUBLISHED_I0_SERVO,
    F,
    P,
    Readings,
    family_matrix,
    linear_matrix,
    nonlinear_rows,
    ridge,
)

CHUNK = 4096
ITERATIONS = 5
LAWS = len(LAW_SCATTER) + 1


@dataclass(slots=True)
class Problem:
    """n motors to adjust.

    y (n, F) logarithms of the figures, brought to the DC motor at the reference temperature (0
    where absent); present (n, F); digits and scatter (n, F) standard deviations of y from the
    printed digits and from custom; servo (n,) true for sinusoidal motors; family (n, 4) what the
    motor's family shares (logarithms), family_sd its standard deviation (inf: no family).
    """

    y: Floats
    present: NDArray[np.bool_]
    digits: Floats
    scatter: Floats
    servo: NDArray[np.bool_]
    family: Floats
    family_sd: Floats
    readings: Readings
    scale: float = 1.0

    def __len__(self) -> int:
        return len(self.y)

    def take(self, which: NDArray[np.integer] | slice) -> "Problem":
        """The same for these motors (repeats allowed)."""
        return Problem(
            self.y[which], self.present[which], self.digits[which], self.scatter[which],
            self.servo[which], self.family[which], self.family_sd[which], self.readings,
            self.scale,
        )  # fmt: skip

    def without(self, figures: NDArray[np.integer]) -> "Problem":
        """The same with one figure left out a motor: figures (n,) indices."""
        other = self.take(slice(None))
        other.present = self.present.copy()
        other.present[np.arange(len(self)), figures] = False
        return other

    def sd(self) -> Floats:
        """Standard deviation of every figure's row, shape (n, F)."""
        return np.sqrt(self.digits**2 + (self.scale * self.scatter) ** 2)

    def weights(self) -> Floats:
        """1/variance of every figure's row, 0 where absent."""
        return np.where(self.present, 1.0 / self.sd() ** 2, 0.0)

    def law_weights(self) -> Floats:
        """1/variance of the laws and of the prior on an unpublished no-load current."""
        laws = np.empty((len(self), LAWS))
        scatter = np.array(list(LAW_SCATTER.values()))
        laws[:, :-1] = 1.0 / np.maximum(self.scale * scatter, 1e-3) ** 2
        unpublished = ~self.present[:, INDEX["no_load_current"]]
        prior = np.where(self.servo, UNPUBLISHED_I0_SERVO[1], UNPUBLISHED_I0[1]) ** -2.0
        laws[:, -1] = np.where(unpublished, prior, 0.0)
        return laws


@dataclass(slots=True)
class Fit:
    """The adjusted unknowns (n, P), their covariance (n, P, P) and the sum of squares (n,)."""

    x: Floats
    covariance: Floats
    chi2: Floats

    def combination(self, row: Floats) -> tuple[Floats, Floats]:
        """Value and standard deviation of a linear combination of the unknowns."""
        variance = np.einsum("p,npq,q->n", row, self.covariance, row, optimize=True)
        return self.x @ row, np.sqrt(np.maximum(variance, 0.0))


def fit(problem: Problem, robust: bool = False) -> Fit:
    """Adjust all motors of a problem; with ``robust`` gross errors are weighed down."""
    n = len(problem)
    out = Fit(np.empty((n, P)), np.empty((n, P, P)), np.empty(n))
    for start in range(0, n, CHUNK):
        part = slice(start, min(start + CHUNK, n))
        chunk = _fit_chunk(problem.take(part), robust)
        out.x[part], out.covariance[part], out.chi2[part] = chunk.x, chunk.covariance, chunk.chi2
    return out


class _Equations:
    """The rows of one chunk, ready to be evaluated at any x."""

    def __init__(self, problem: Problem) -> None:
        self.problem = problem
        self.weight = problem.weights()
        self.laws = problem.law_weights()
        matrix, self.constant = linear_matrix(problem.readings)
        self.rows = np.flatnonzero(problem.present.any(axis=0) & matrix.any(axis=1))
        self.matrix = matrix[self.rows]
        self.y = problem.y[:, self.rows] - self.constant[self.rows]
        self.family = family_matrix()
        with np.errstate(divide="ignore"):
            self.family_weight = np.where(
                np.isfinite(problem.family_sd), problem.family_sd**-2.0, 0.0
            )
        self.prior_mean, self.prior_weight = ridge()

    def normal(self, x: Floats, typical: bool, damp: Floats | None) -> tuple[Floats, Floats]:
        """Normal matrix (n, P, P) and right-hand side (n, P) at x."""
        weight = self.weight[:, self.rows]
        if damp is not None:
            weight = weight * damp
        left = self.matrix[:, :, None] * self.matrix[:, None, :]
        matrix = (weight @ left.reshape(len(self.rows), -1)).reshape(-1, P, P)
        right = (weight * (self.y - x @ self.matrix.T)) @ self.matrix
        if self.family_weight.any():
            left = self.family[:, :, None] * self.family[:, None, :]
            matrix += (self.family_weight @ left.reshape(len(FAMILY_ROWS), -1)).reshape(-1, P, P)
            gap = np.nan_to_num(self.problem.family) - x @ self.family.T
            right += (self.family_weight * gap) @ self.family
        index = np.arange(P)
        matrix[:, index, index] += self.prior_weight
        right += self.prior_weight * (self.prior_mean - x)
        for residual, w, slopes in self.nonlinear(x, typical):
            for a, slope_a in slopes:
                weighed = w * slope_a
                right[:, a] += weighed * residual
                for b, slope_b in slopes:
                    matrix[:, a, b] += weighed * slope_b
        return matrix, right

    def nonlinear(self, x: Floats, typical: bool = False):
        """The nonlinear rows at x."""
        return nonlinear_rows(
            x, self.problem.y, self.weight, self.laws, self.problem.servo,
            self.problem.readings, typical,
        )  # fmt: skip

    def chi2(self, x: Floats) -> Floats:
        """Weighted sum of squares of all rows but the weak prior."""
        weight = self.weight[:, self.rows]
        total = (weight * (self.y - x @ self.matrix.T) ** 2).sum(axis=1)
        gap = np.nan_to_num(self.problem.family) - x @ self.family.T
        total += (self.family_weight * gap**2).sum(axis=1)
        for residual, w, _ in self.nonlinear(x):
            total += w * residual**2
        return total


def _fit_chunk(problem: Problem, robust: bool) -> Fit:
    equations = _Equations(problem)
    x = np.broadcast_to(equations.prior_mean, (len(problem), P)).copy()
    damp = None
    matrix, right = equations.normal(x, True, None)
    x += np.linalg.solve(matrix, right[..., None])[..., 0]
    for _ in range(ITERATIONS):
        matrix, right = equations.normal(x, False, damp)
        step = np.linalg.solve(matrix, right[..., None])[..., 0]
        x += np.clip(step, -3.0, 3.0)
        if np.abs(step).max(initial=0.0) < 1e-6:
            break
    covariance = np.asarray(np.linalg.inv(matrix), dtype=np.float64)
    return Fit(x, covariance, equations.chi2(x))


def leave_one_out(problem: Problem) -> Iterator[tuple[int, NDArray[np.integer], Fit]]:
    """For each figure: its index, the motors that have it, and their fit without it."""
    for figure in range(F):
        who = np.flatnonzero(problem.present[:, figure])
        if who.size:
            part = problem.take(who)
            yield figure, who, fit(part.without(np.full(who.size, figure)))
