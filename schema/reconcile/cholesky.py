"""Cholesky's method for the normal matrices of many motors at once.

The same elimination goes over all motors together, one motor beside the other in memory: at a
dozen unknowns that is several times faster than one library call a motor.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats


@dataclass(slots=True)
class Factor:
    """Lower triangles (A, A, n) of symmetric positive definite matrices, the diagonals held as
    their reciprocals."""

    lower: Floats

    def solve(self, right: Floats) -> Floats:
        """The solutions (A, n) of right-hand sides (A, n)."""
        lower, x = self.lower, right.copy()
        for i in range(len(x)):
            x[i] -= np.einsum("kn,kn->n", lower[i, :i], x[:i])
            x[i] *= lower[i, i]
        for i in reversed(range(len(x))):
            x[i] -= np.einsum("kn,kn->n", lower[i + 1 :, i], x[i + 1 :])
            x[i] *= lower[i, i]
        return x

    def inverse(self) -> Floats:
        """The inverses of the matrices, (A, A, n): that of the triangle, times itself."""
        size, lower = len(self.lower), self.lower
        triangle, out = np.zeros_like(lower), np.empty_like(lower)
        for i in range(size):
            done = np.einsum("kn,kjn->jn", lower[i, :i], triangle[:i, :i])
            triangle[i, :i] = -lower[i, i] * done
            triangle[i, i] = lower[i, i]
        for i in range(size):
            out[i, : i + 1] = np.einsum("kn,kjn->jn", triangle[i:, i], triangle[i:, : i + 1])
            out[:i, i] = out[i, :i]
        return out

    def log_determinant(self) -> Floats:
        """Logarithm of the determinant of the inverses, (n,)."""
        return 2.0 * np.log(np.einsum("iin->in", self.lower)).sum(axis=0)

    def replace(self, who: NDArray[np.integer], other: "Factor") -> None:
        """Put other factors in the place of those of some motors."""
        self.lower[:, :, who] = other.lower


def factor(packed: Floats, place: NDArray[np.integer], least: Floats) -> Factor:
    """Factors of matrices whose triangle is held as vectors over the motors.

    packed (A·(A+1)/2, n) with place (A, A) of every element in it; least (A,) what no pivot can
    fall below: what stands on the diagonal beside sums of squares. Rounding that brings one lower
    is put right by it.
    """
    size = len(place)
    lower = np.empty((size, size, packed.shape[1]))
    for k in range(size):
        column = packed[place[k:, k]]
        column -= np.einsum("ikn,kn->in", lower[k:, :k], lower[k, :k])
        lower[k, k] = 1.0 / np.sqrt(np.maximum(column[0], least[k]))
        np.multiply(column[1:], lower[k, k], out=lower[k + 1 :, k])
    return Factor(lower)
