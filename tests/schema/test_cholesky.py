"""Cholesky's method over many motors against numpy's one matrix at a time."""

import numpy as np
import pytest

from motorfolio.schema.reconcile.cholesky import Factor, factor

SIZE, COUNT = 7, 40


def _packed(matrices: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """The upper triangles (elements, n) of matrices (n, A, A), and where each element stands."""
    i, j = np.triu_indices(matrices.shape[1])
    place = np.empty(matrices.shape[1:], dtype=np.int64)
    place[i, j] = place[j, i] = np.arange(i.size)
    return np.ascontiguousarray(matrices[:, i, j].T), place


@pytest.fixture
def matrices() -> np.ndarray:
    """Normal matrices of rows whose weights span many powers of ten, with a weak prior."""
    rng = np.random.default_rng(5)
    rows = rng.normal(size=(COUNT, 20, SIZE))
    weights = 10.0 ** rng.uniform(0, 6, (COUNT, 20, 1))
    return np.swapaxes(rows, 1, 2) @ (weights * rows) + 0.01 * np.eye(SIZE)


@pytest.fixture
def factors(matrices: np.ndarray) -> Factor:
    return factor(*_packed(matrices), np.full(SIZE, 0.01))


def test_solutions_are_those_of_numpy(matrices: np.ndarray, factors: Factor) -> None:
    right = np.random.default_rng(6).normal(size=(SIZE, COUNT))
    expected = np.linalg.solve(matrices, right.T[:, :, None])[:, :, 0].T
    np.testing.assert_allclose(factors.solve(right), expected, rtol=1e-6)


def test_inverses_are_those_of_numpy(matrices: np.ndarray, factors: Factor) -> None:
    inverse = np.moveaxis(factors.inverse(), 2, 0)
    np.testing.assert_allclose(inverse @ matrices, np.tile(np.eye(SIZE), (COUNT, 1, 1)), atol=1e-6)
    np.testing.assert_array_equal(inverse, np.swapaxes(inverse, 1, 2))


def test_determinants_are_those_of_numpy(matrices: np.ndarray, factors: Factor) -> None:
    _, expected = np.linalg.slogdet(np.linalg.inv(matrices))
    np.testing.assert_allclose(factors.log_determinant(), expected, rtol=1e-9)


def test_some_factors_are_replaced(matrices: np.ndarray, factors: Factor) -> None:
    who = np.array([3, 8])
    factors.replace(who, factor(*_packed(4.0 * matrices[who]), np.full(SIZE, 0.01)))
    right = np.ones((SIZE, COUNT))
    scale = np.where(np.isin(np.arange(COUNT), who), 4.0, 1.0)
    expected = np.linalg.solve(matrices, right.T[:, :, None])[:, :, 0].T / scale
    np.testing.assert_allclose(factors.solve(right), expected, rtol=1e-6)


def test_rounding_below_the_prior_does_no_harm() -> None:
    """Two equal rows of great weight leave a pivot of nothing but rounding and prior."""
    matrix = np.full((1, 2, 2), 1e20) + 0.25 * np.eye(2)  # the prior is lost in rounding
    solution = factor(*_packed(matrix), np.full(2, 0.25)).solve(np.ones((2, 1)))
    assert np.isfinite(solution).all()
