"""Weighted least squares over many motors at once: Gauss-Newton in logarithms.

The normal matrix of the linear rows is one matrix product over all motors of a chunk; the few
nonlinear rows are added to it. Missing figures have weight zero, and a weak prior keeps every
system regular, so that one incomplete motor can't stop the batch.
"""

from collections.abc import Iterator
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from .batch import Floats
from .model import (
    INDEX,
    LAW_BINDS,
    LAW_SCATTER,
    UNPUBLISHED_I0,
    UNPUBLISHED_I0_SERVO,
    P,
    Readings,
    Slopes,
    family_matrix,
    linear_matrix,
    nonlinear_rows,
    ridge,
)

Rows = Iterator[tuple[Floats, Floats, Slopes]]

CHUNK = 4096
ITERATIONS = 5
LAWS = len(LAW_SCATTER) + 1


@dataclass(slots=True)
class Problem:
    """n motors to adjust.

    y (n, F) logarithms of the figures, brought to the DC motor at the reference temperature (0
    where absent); present (n, F); digits and scatter (n, F) standard deviations of y from the
    printed digits and from custom; servo (n,) true for sinusoidal motors; family (n, 4) what the
    motor's family shares (logarithms), family_sd its standard deviation (inf: no family);
    bound (n, laws) which laws say anything about a motor's published figures (as published:
    leaving a figure out doesn't unbind what implies it); scale (n,) or (1,) how much of the customary scatter the table shows.
    """

    y: Floats
    present: NDArray[np.bool_]
    digits: Floats
    scatter: Floats
    servo: NDArray[np.bool_]
    family: Floats
    family_sd: Floats
    readings: Readings
    bound: NDArray[np.bool_]
    scale: Floats = field(default_factory=lambda: np.ones(1))

    def __len__(self) -> int:
        return len(self.y)

    def take(self, which: NDArray[np.integer] | slice) -> "Problem":
        """The same for these motors (repeats allowed)."""
        return Problem(
            self.y[which], self.present[which], self.digits[which], self.scatter[which],
            self.servo[which], self.family[which], self.family_sd[which], self.readings, self.bound[which],
            self.scale if len(self.scale) == 1 else self.scale[which],
        )  # fmt: skip

    def without(self, figures: NDArray[np.integer]) -> "Problem":
        """The same with one figure left out a motor: figures (n,) indices."""
        other = self.take(slice(None))
        other.present = self.present.copy()
        other.present[np.arange(len(self)), figures] = False
        return other

    def sd(self) -> Floats:
        """Standard deviation of every figure's row, shape (n, F)."""
        return np.sqrt(self.digits**2 + (self.scale[:, None] * self.scatter) ** 2)

    def weights(self) -> Floats:
        """1/variance of every figure's row, 0 where absent."""
        return np.where(self.present, 1.0 / self.sd() ** 2, 0.0)

    def law_weights(self) -> Floats:
        """1/variance of the laws and of the prior on an unpublished no-load current."""
        laws = np.empty((len(self), LAWS))
        scatter = np.array(list(LAW_SCATTER.values()))
        laws[:, :-1] = self.bound / (self.scale[:, None] * scatter) ** 2
        unpublished = ~self.present[:, INDEX["no_load_current"]]
        prior = np.where(self.servo, UNPUBLISHED_I0_SERVO[1], UNPUBLISHED_I0[1]) ** -2.0
        laws[:, -1] = np.where(unpublished, prior, 0.0)
        return laws


def bound_laws(present: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Which laws say anything about the published figures, (n, number of laws)."""
    out = np.empty((len(present), len(LAW_SCATTER)), dtype=bool)
    for i, law in enumerate(LAW_SCATTER):
        out[:, i] = present[:, [INDEX[key] for key in LAW_BINDS[law]]].any(axis=1)
    return out


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
        self.prior_mean, self.prior_weight = ridge()
        self.family = family_matrix()
        self.family_value = np.nan_to_num(problem.family)
        with np.errstate(divide="ignore"):
            self.family_weight = np.where(
                np.isfinite(problem.family_sd), problem.family_sd**-2.0, 0.0
            )
        self.has_family = bool(self.family_weight.any())
        # unknowns that no row of this chunk touches keep their prior and stay out of the matrix
        touched = np.asarray(self.matrix.any(axis=0))
        if self.has_family:
            touched |= (self.family != 0).any(axis=0)
        start = np.broadcast_to(self.prior_mean, (len(problem), P))
        for _, _, slopes in self.nonlinear(start, typical=True):
            touched[[unknown for unknown, _ in slopes]] = True
        self.active = np.flatnonzero(touched)
        self.position = {unknown: i for i, unknown in enumerate(self.active.tolist())}
        self.squares = _outer(self.matrix[:, self.active])
        self.family_squares = _outer(self.family[:, self.active])

    def normal(
        self, x: Floats, typical: bool = False, cut: float | None = None
    ) -> tuple[Floats, Floats]:
        """Normal matrix (n, A, A) and right-hand side (n, A) of the active unknowns at x.

        With ``cut`` residuals beyond so many standard deviations lose weight (Cauchy).
        """
        active, at = self.active, self.position
        size = active.size
        weight = self.weight[:, self.rows]
        gap = self.y - x @ self.matrix.T
        if cut is not None:
            weight = weight / (1.0 + weight * (gap / cut) ** 2)
        matrix = (weight @ self.squares).reshape(-1, size, size)
        right = (weight * gap) @ self.matrix[:, active]
        if self.has_family:
            weight, gap = self.family_weight, self.family_value - x @ self.family.T
            if cut is not None:
                weight = weight / (1.0 + weight * (gap / cut) ** 2)
            matrix += (weight @ self.family_squares).reshape(-1, size, size)
            right += (weight * gap) @ self.family[:, active]
        index = np.arange(size)
        matrix[:, index, index] += self.prior_weight[active]
        right += self.prior_weight[active] * (self.prior_mean - x)[:, active]
        for residual, w, slopes in self.nonlinear(x, typical):
            damped = w if cut is None else w / (1.0 + w * (residual / cut) ** 2)
            for a, slope_a in slopes:
                weighed = damped * slope_a
                right[:, at[a]] += weighed * residual
                for b, slope_b in slopes:
                    matrix[:, at[a], at[b]] += weighed * slope_b
        return matrix, right

    def covariance(self, matrix: Floats) -> Floats:
        """Covariance (n, P, P) of all unknowns from a normal matrix of the active ones."""
        out = np.zeros((len(matrix), P, P))
        rest = np.setdiff1d(np.arange(P), self.active)
        out[:, rest, rest] = 1.0 / self.prior_weight[rest]
        out[:, self.active[:, None], self.active[None, :]] = np.linalg.inv(matrix)
        return out

    def nonlinear(self, x: Floats, typical: bool = False) -> Rows:
        """The nonlinear rows at x."""
        return nonlinear_rows(
            x, self.problem.y, self.weight, self.laws, self.problem.servo,
            self.problem.readings, typical,
        )  # fmt: skip

    def chi2(self, x: Floats, cut: float | None = None) -> Floats:
        """Weighted sum of squares of all rows but the weak prior; with ``cut`` of the Cauchy
        loss, which grows as the logarithm."""

        def loss(square: Floats) -> Floats:
            return square if cut is None else cut**2 * np.log1p(square / cut**2)

        weight = self.weight[:, self.rows]
        total = loss(weight * (self.y - x @ self.matrix.T) ** 2).sum(axis=1)
        if self.has_family:
            gap = self.family_value - x @ self.family.T
            total += loss(self.family_weight * gap**2).sum(axis=1)
        for residual, w, _ in self.nonlinear(x):
            total += loss(w * residual**2)
        return total


def _outer(rows: Floats) -> Floats:
    """The outer product of every row with itself, flat: shape (m, P·P)."""
    return (rows[:, :, None] * rows[:, None, :]).reshape(len(rows), -1)


ROBUST_CUTS = (30.0, 10.0, 5.0, 3.0, 3.0, 3.0, 3.0)
"""The cut of the robust fit, step by step, in standard deviations."""


def _fit_chunk(problem: Problem, robust: bool) -> Fit:
    equations = _Equations(problem)
    x = np.broadcast_to(equations.prior_mean, (len(problem), P)).copy()
    active = equations.active
    matrix, right = equations.normal(x, typical=True)
    x[:, active] += np.linalg.solve(matrix, right[..., None])[..., 0]
    cuts = ROBUST_CUTS if robust else (None,) * ITERATIONS
    for cut in cuts:
        matrix, right = equations.normal(x, cut=cut)
        step = np.linalg.solve(matrix, right[..., None])[..., 0]
        x[:, active] += np.clip(step, -3.0, 3.0)
        if not robust and np.abs(step).max(initial=0.0) < 1e-5:
            break
    return Fit(x, equations.covariance(matrix), equations.chi2(x, cuts[-1]))
