"""The normal equations of a chunk of motors, laid out motor by motor in memory's fastest axis."""

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats
from .cholesky import Factor, factor
from .model import P, Slopes, family_matrix, linear_matrix, nonlinear_rows, ridge
from .problem import Problem

Rows = Iterator[tuple[Floats, Floats, Slopes]]


BLOCK = 96
"""Columns of a product done at a time: small enough that BLAS starts no threads, which cost more
than they give at these sizes and stall a busy machine."""


def product(a: Floats, b: Floats) -> Floats:
    """a @ b for a small a and a b of many columns."""
    if b.shape[1] <= BLOCK:
        return a @ b
    out = np.empty((len(a), b.shape[1]))
    for start in range(0, b.shape[1], BLOCK):
        np.matmul(a, b[:, start : start + BLOCK], out=out[:, start : start + BLOCK])
    return out


class Equations:
    """The rows of one chunk, ready to be evaluated at any x of shape (P, n).

    Only the unknowns that some row of the chunk touches (``active``, A of them) enter the normal
    matrix; the others keep their prior. The upper triangle of the symmetric normal matrix is held
    as (A·(A+1)/2, n): a nonlinear row then adds whole contiguous vectors.
    """

    def __init__(self, problem: Problem, active: NDArray[np.int64] | None = None) -> None:
        self.problem = problem
        self.all_weights = problem.weights()
        self.laws = problem.law_weights()
        matrix, constant = linear_matrix(problem.readings)
        self.rows = np.flatnonzero(problem.present.any(axis=0) & matrix.any(axis=1))
        self.matrix = matrix[self.rows]
        self.weight = np.ascontiguousarray(self.all_weights[:, self.rows].T)
        self.y = np.ascontiguousarray((problem.y[:, self.rows] - constant[self.rows]).T)
        self.prior_mean, self.prior_weight = ridge()
        if np.isfinite(problem.family_sd).any():
            self._append_family()
        n = len(problem)
        touched = np.asarray(self.matrix.any(axis=0))
        for _, _, slopes in self.nonlinear(np.tile(self.prior_mean[:, None], n), typical=True):
            touched[[unknown for unknown, _ in slopes]] = True
        self.active = np.flatnonzero(touched) if active is None else active
        size = self.active.size
        self.position = np.full(P, -1)
        self.position[self.active] = np.arange(size)
        i, j = np.triu_indices(size)
        self.place = np.empty((size, size), dtype=np.int64)
        self.place[i, j] = self.place[j, i] = np.arange(i.size)
        rows = self.matrix[:, self.active]
        self.rows_active = np.ascontiguousarray(rows.T)
        self.squares = np.ascontiguousarray((rows[:, i] * rows[:, j]).T)

    def _append_family(self) -> None:
        """What the family shares as further linear rows."""
        problem = self.problem
        with np.errstate(divide="ignore"):
            weight = np.where(np.isfinite(problem.family_sd), problem.family_sd**-2.0, 0.0)
        self.matrix = np.concatenate([self.matrix, family_matrix()])
        self.weight = np.concatenate([self.weight, weight.T])
        self.y = np.concatenate([self.y, np.nan_to_num(problem.family).T])

    def start(self) -> Floats:
        """The prior means, shape (P, n)."""
        return np.tile(self.prior_mean[:, None], len(self.problem))

    def gradient(
        self, x: Floats, cut: float | None = None, upper: Floats | None = None,
        typical: bool = False,
    ) -> Floats:  # fmt: skip
        """Right-hand side (A, n) at x; adds the normal matrix into ``upper`` where given.

        With ``cut`` residuals beyond so many standard deviations lose weight (Cauchy).
        """
        weight = self.weight
        gap = self.y - product(self.matrix, x)
        if cut is not None:
            weight = weight / (1.0 + weight * (gap / cut) ** 2)
        right = product(self.rows_active, weight * gap)
        prior = self.prior_weight[self.active, None]
        right += prior * (self.prior_mean[self.active, None] - x[self.active])
        if upper is not None:
            upper[:] = product(self.squares, weight)
            upper[np.diagonal(self.place)] += prior
        for residual, w, slopes in self.nonlinear(x, typical):
            damped = w if cut is None else w / (1.0 + w * (residual / cut) ** 2)
            for k, (a, slope_a) in enumerate(slopes):
                weighed = damped * slope_a
                i = self.position[a]
                right[i] += weighed * residual
                if upper is not None:
                    for b, slope_b in slopes[k:]:
                        upper[self.place[i, self.position[b]]] += weighed * slope_b
        return right

    def normal(
        self, x: Floats, cut: float | None = None, typical: bool = False
    ) -> tuple[Factor, Floats]:
        """Factors of the normal matrices and right-hand side (A, n) of the active unknowns at x."""
        upper = np.empty((len(self.squares), x.shape[1]))
        right = self.gradient(x, cut, upper, typical)
        return factor(upper, self.place, self.prior_weight[self.active]), right

    def nonlinear(self, x: Floats, typical: bool = False) -> Rows:
        """The rows that aren't sums of logarithms, at x."""
        return nonlinear_rows(
            x.T, self.problem.y, self.all_weights, self.laws, self.problem.servo,
            self.problem.readings, typical,
        )  # fmt: skip

    def chi2(self, x: Floats, cut: float | None = None) -> Floats:
        """Weighted sum of squares (n,) of all rows but the weak prior; with ``cut`` of the Cauchy
        loss, which grows as the logarithm."""

        def loss(square: Floats) -> Floats:
            return square if cut is None else cut**2 * np.log1p(square / cut**2)

        total = loss(self.weight * (self.y - product(self.matrix, x)) ** 2).sum(axis=0)
        for residual, w, _ in self.nonlinear(x):
            total += loss(w * residual**2)
        return total

    def covariance(self, normal: Factor) -> Floats:
        """Covariance (n, P, P) of all unknowns from the factors of the normal matrices."""
        inverse = normal.inverse()
        out = np.zeros((inverse.shape[2], P, P))
        rest = np.setdiff1d(np.arange(P), self.active)
        out[:, rest, rest] = 1.0 / self.prior_weight[rest]
        for i, row in zip(self.active.tolist(), inverse, strict=True):
            out[:, i, self.active] = row.T
        return out

    def log_covariance(self, normal: Factor) -> Floats:
        """Logarithm of the determinant (n,) of that covariance."""
        rest = np.setdiff1d(np.arange(P), self.active)
        return normal.log_determinant() - np.log(self.prior_weight[rest]).sum()
