"""Where the adjustment settles and how it gets there, against steps by numpy."""

from __future__ import annotations

import numpy as np
import pytest

from motorfolio.schema.reconcile import adjust
from motorfolio.schema.reconcile.adjust import Fit, fit, misfit, relinearised
from motorfolio.schema.reconcile.equations import Equations
from motorfolio.schema.reconcile.model import P
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.problem import Problem

from .laws_by_hand import BRUSHED, away, sheet, squares
from .simulated_sheets import FULL, make, spoil


@pytest.mark.parametrize("factor", [1.0, 1e3, 0.05])
def test_a_fit_is_at_the_least_sum_of_squares(factor: float) -> None:
    """Of a clean motor, and of one with a mistake that bends the laws."""
    s = make(np.random.default_rng(4), 2, BRUSHED, FULL, scatter=0.3)
    spoil(s.batch, "torque_constant", 1, factor)
    p = observe(s.batch)
    found = fit(p)
    chi2, log_covariance = misfit(p)
    assert chi2.tolist() == found.chi2.tolist()
    for m in range(2):
        assert found.chi2[m] == pytest.approx(squares(p, m, found.x[m]))
        slope = Equations(p.take(np.array([m]))).gradient(found.x[m][:, None])
        sd = np.sqrt(np.diag(found.covariance[m])[Equations(p).active])
        assert np.abs(slope[:, 0] * sd).max() < 0.05  # of a standard deviation
        assert log_covariance[m] == pytest.approx(np.linalg.slogdet(found.covariance[m])[1])


def test_chunks_change_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    p = sheet(n=3)
    whole, robust = fit(p), fit(p, robust=True)
    monkeypatch.setattr(adjust, "CHUNK", 2)
    for found, wanted in ((fit(p), whole), (fit(p, robust=True), robust)):
        assert found.x == pytest.approx(wanted.x, abs=1e-4)  # at rest
        assert found.chi2 == pytest.approx(wanted.chi2, rel=1e-4)
        assert found.covariance == pytest.approx(wanted.covariance, rel=1e-3, abs=1e-6)
    assert misfit(p)[0] == pytest.approx(whole.chi2, rel=1e-4)
    step = relinearised(p, robust)
    monkeypatch.undo()
    assert step.x == pytest.approx(relinearised(p, robust).x, abs=1e-6)


def test_a_robust_fit_hardly_minds_a_gross_error() -> None:
    """Where the ordinary one goes astray."""
    clean = make(np.random.default_rng(4), 1, BRUSHED, FULL, scatter=0.3)
    true = fit(observe(clean.batch))
    for key, factor in (("torque_constant", 10.0), ("terminal_resistance", 0.1)):
        s = make(np.random.default_rng(4), 1, BRUSHED, FULL, scatter=0.3)
        spoil(s.batch, key, 0, factor)
        p = observe(s.batch)
        plain, robust = fit(p), fit(p, robust=True)
        sd = np.sqrt(np.diag(true.covariance[0]))
        active = sd < 0.2
        off, hardly = (np.abs(f.x[0] - true.x[0]) / sd for f in (plain, robust))
        assert off[active].max() > 10
        assert hardly[active].max() < 1.5
        assert robust.chi2[0] == pytest.approx(squares(p, 0, robust.x[0], 3.0))
        assert misfit(p, robust=True)[0][0] == robust.chi2[0]
        slope = Equations(p).gradient(robust.x[0][:, None], 3.0)[:, 0]
        assert np.abs(slope * sd[Equations(p).active]).max() < 0.3


def test_one_step_from_another_fit() -> None:
    """The minimum of the sum of squares made straight there: its step and what it saves."""
    s = make(np.random.default_rng(4), 2, BRUSHED, FULL, scatter=0.3)
    spoil(s.batch, "torque_constant", 1, 1.3)
    p = observe(s.batch)
    at = fit(p, robust=True)
    found = relinearised(p, at)
    equations = Equations(p)
    x = at.x.T
    factors, right = equations.normal(x)
    inverse = factors.inverse()
    for m in range(2):
        step = inverse[:, :, m] @ right[:, m]
        wanted = at.x[m].copy()
        wanted[equations.active] += step
        assert found.x[m] == pytest.approx(wanted)
        saved = right[:, m] @ inverse[:, :, m] @ right[:, m]
        assert found.chi2[m] == pytest.approx(squares(p, m, at.x[m]) - saved)
        assert found.covariance[m] == pytest.approx(equations.covariance(factors)[m])
    assert np.abs(found.x - at.x).max() > 0.01


def test_sums_of_unknowns_have_a_value_and_a_variance() -> None:
    """aᵀx and aᵀCa; a variance that rounding leaves below naught is none."""
    rng = np.random.default_rng(1)
    root = rng.normal(size=(3, P, P))
    fitted = Fit(rng.normal(size=(3, P)), root @ root.transpose(0, 2, 1), np.zeros(3))
    row = np.zeros(P)
    row[[0, 1, 5]] = [1.0, -0.5, 3.0]
    value, sd = fitted.combination(row)
    assert value == pytest.approx(fitted.x @ row)
    assert sd**2 == pytest.approx([row @ c @ row for c in fitted.covariance])
    assert fitted.covariance_with(row) == pytest.approx((fitted.covariance @ row).T)
    fitted.covariance[0] *= -1
    assert fitted.combination(row)[1][0] == 0.0


def test_a_step_is_bounded() -> None:
    """No logarithm moves by more than 3 (a factor of 20) at a time."""
    p = sheet(n=1)
    equations = Equations(p)
    x = away(p) + 8.0
    factors, right = equations.normal(x)
    step = adjust._step(factors, right)
    free = factors.solve(right)
    assert np.abs(free).max() > 3.0
    assert step == pytest.approx(np.clip(free, -3.0, 3.0))


def stepped(p: Problem, x: np.ndarray, most: int) -> tuple[np.ndarray, np.ndarray]:
    """Gauss-Newton by numpy until no logarithm moves by 1e-4; the last inverse."""
    equations = Equations(p)
    x = x.copy()
    inverse = np.empty(0)
    for _ in range(most):
        factors, right = equations.normal(x)
        inverse = factors.inverse()
        step = np.clip(np.einsum("ijn,jn->in", inverse, right), -3.0, 3.0)
        x[equations.active] += step
        if np.abs(step).max() < 1e-4:
            break
    return x, inverse


@pytest.mark.parametrize("off", [1e-7, 0.01, 0.3, 3.0, 9.0])
def test_further_steps_are_six_at_most_or_until_rest(off: float) -> None:
    p = sheet(n=2)
    start = fit(p).x.T
    start[Equations(p).active] += off
    x, factors, chi2 = adjust._further(p, Equations(p), start.copy())
    wanted, inverse = stepped(p, start, 6)
    assert x == pytest.approx(wanted, abs=1e-10)
    assert factors.inverse() == pytest.approx(inverse, rel=1e-6, abs=1e-12)
    assert chi2 == pytest.approx(Equations(p).chi2(wanted), rel=1e-9)


def test_a_quiet_motor_keeps_its_first_matrix_and_one_that_moves_gets_its_own() -> None:
    """By a fifth of any logarithm in the first step from the log-linear start."""
    s = make(np.random.default_rng(4), 2, BRUSHED, FULL, scatter=0.1)
    s.batch.series = ["A", "B"]
    for key, factor in (("torque_constant", 1e3), ("no_load_current", 0.05)):
        spoil(s.batch, key, 1, factor)
    p = observe(s.batch)
    equations = Equations(p)
    start, _ = adjust._loglinear(equations)
    first, right = equations.normal(start)
    moved = np.abs(first.solve(right)).max(axis=0)
    assert moved[0] < 0.2 < moved[1]
    found = fit(p)
    before = equations.covariance(first)
    after = equations.covariance(equations.normal(found.x.T)[0])
    assert found.covariance[0] == pytest.approx(before[0], rel=1e-9, abs=1e-15)
    assert found.covariance[1] == pytest.approx(after[1], rel=1e-2, abs=1e-6)
    for m, other in ((0, after), (1, before)):
        gap = np.abs(found.covariance[m] / np.where(other[m] == 0, np.inf, other[m]) - 1)
        assert gap[other[m] != 0].max() > 1e-5


@pytest.mark.parametrize(("scatter", "factor"), [(0.0, 1.0), (1.0, 1.0), (1.0, 1.15), (0.3, 10.0)])
def test_three_steps_with_the_first_matrix_or_until_rest(scatter: float, factor: float) -> None:
    """Then those further that aren't at rest, or began with a step over a fifth; by numpy."""
    s = make(np.random.default_rng(4), 2, BRUSHED, FULL, scatter=scatter)
    spoil(s.batch, "terminal_resistance", 1, factor)
    p = observe(s.batch)
    equations = Equations(p)
    x, _ = adjust._loglinear(equations)
    factors, right = equations.normal(x)
    inverse = factors.inverse()
    step = np.einsum("ijn,jn->in", inverse, right)
    x[equations.active] += step
    far = np.abs(step).max(axis=0) > 0.2
    for _ in range(3):
        step = np.einsum("ijn,jn->in", inverse, equations.gradient(x))
        x[equations.active] += step
        if np.abs(step).max() < 1e-4:
            break
    who = np.flatnonzero(far | (np.abs(step).max(axis=0) > 1e-4))
    if who.size:
        x[:, who], _ = stepped(p.take(who), x[:, who], 6)
    found = fit(p)
    assert found.x == pytest.approx(x.T, abs=1e-9)
    assert found.chi2 == pytest.approx(Equations(p).chi2(x), rel=1e-7)
