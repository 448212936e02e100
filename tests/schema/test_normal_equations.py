"""The adjustment's sums of squares, gradients and steps, against plain loops and numpy.

Cauchy's loss: Holland and Welsch 1977 (from memory): c²·log(1 + (r/c)²), weight 1/(1 + (r/c)²).
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile import adjust
from motorfolio.schema.reconcile.adjust import Fit, fit, misfit, relinearised
from motorfolio.schema.reconcile.equations import Equations, product
from motorfolio.schema.reconcile.model import FIGURES, INDEX, UNKNOWNS, P, Readings, ridge
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.problem import Problem

from .simulated_sheets import FULL, SERVO, make, put, single, spoil

BRUSHED, SINE = Commutation.BRUSHED, Commutation.SINUSOIDAL
MORE = (*FULL, "maximum_power", "rated_power", "rated_efficiency", "friction_torque")


def sheet(kind: Commutation = BRUSHED, n: int = 3, seed: int = 4) -> Problem:
    return observe(make(np.random.default_rng(seed), n, kind, SERVO if kind is SINE else MORE,
                        scatter=0.5).batch)  # fmt: skip


def standardised(p: Problem, m: int, x: np.ndarray) -> np.ndarray:
    """Residuals over their standard deviations of one motor, law by law in plain values (the DC
    motor: Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., section 7.7, from memory)."""
    v = dict(zip(UNKNOWNS, np.exp(x), strict=True))
    k, r, j, la, u, i0, n0, ts, i_n, tn, nn, tf, b, ics, ipk = v.values()
    figures = {
        "torque_constant": k, "back_emf_constant": k, "speed_constant": 1 / k,
        "terminal_resistance": r, "terminal_inductance": la, "rotor_inertia": j,
        "nominal_voltage": u, "no_load_current": i0, "no_load_speed": n0, "stall_torque": ts,
        "stall_current": u / r, "nominal_current": i_n, "nominal_torque": tn,
        "nominal_speed": nn, "rated_power": tn * nn, "rated_efficiency": tn * nn / (u * i_n),
        "speed_torque_gradient": r / k**2, "motor_constant": k / r**0.5,
        "mechanical_time_constant": j * r / k**2, "electrical_time_constant": la / r,
        "friction_torque": tf, "viscous_damping": b, "continuous_stall_current": ics,
        "continuous_stall_torque": k * ics, "peak_current": ipk, "maximum_power": n0 * ts / 4,
        "maximum_efficiency": (1 - (i0 * r / u) ** 0.5) ** 2,
    }  # fmt: skip
    have = {key: bool(p.present[m, INDEX[key]]) for key in FIGURES}
    out = []
    for key, value in figures.items():
        if have[key]:
            i = INDEX[key]
            sd = math.hypot(p.digits[m, i], p.scale[0] * p.scatter[m, i])
            out.append((p.y[m, i] - math.log(value)) / sd)
    if have["peak_torque"]:
        i = INDEX["peak_torque"]
        gap = p.y[m, i] - math.log(k * ipk)
        beyond = gap - min(max(gap, math.log(0.5)), math.log(1.05))
        out.append(beyond / math.hypot(p.digits[m, i], p.scale[0] * p.scatter[m, i]))
    damping = b * n0 if have["viscous_damping"] else 0.0
    laws = [
        (math.log((u - r * i0) / k / n0), 0.025),
        (math.log(k * (u / r - i0) / ts), 0.02),
        (math.log(k * (i_n - i0) / tn), 0.07),
        (math.log(k * i0 / (tf + damping)), 0.1),
    ]
    for which, (residual, sd) in zip((0, 1, 2, 4), laws, strict=True):
        if p.bound[m, which]:
            out.append(residual / (p.scale[0] * sd))
    if p.bound[m, 3]:
        speed = u / k if p.servo[m] else (u - r * i_n) / k
        residual = math.log(speed / nn)
        if not p.servo[m] or residual < 0:
            out.append(residual / (p.scale[0] * 0.025))
    if not have["no_load_current"]:
        sinusoidal = math.log(0.025 * i_n / i0) / math.log(2)
        out.append(sinusoidal if p.servo[m] else math.log(0.015 * u / r / i0))
    return np.array(out)


def squares(p: Problem, m: int, x: np.ndarray, cut: float | None = None) -> float:
    square = standardised(p, m, x) ** 2
    return float((square if cut is None else cut**2 * np.log1p(square / cut**2)).sum())


def pulled(p: Problem, m: int, x: np.ndarray, cut: float | None = None) -> float:
    """With the weak prior on every unknown."""
    mean, weight = ridge()
    return squares(p, m, x, cut) + float((weight * (x - mean) ** 2).sum())


def away(p: Problem) -> np.ndarray:
    """Unknowns (P, n) some per cent from the fit, none of the laws at a bound."""
    return (fit(p).x + np.random.default_rng(0).normal(0, 0.03, (len(p), P))).T


# ---- sums of squares


@pytest.mark.parametrize("kind", [BRUSHED, SINE])
@pytest.mark.parametrize("cut", [None, 3.0])
def test_the_sum_of_squares_is_that_of_all_laws(kind: Commutation, cut: float | None) -> None:
    p = sheet(kind)
    p.scale = np.array([0.8])
    x = away(p)
    found = Equations(p).chi2(x, cut)
    assert found == pytest.approx([squares(p, m, x[:, m], cut) for m in range(len(p))])
    assert (found > 5).all()


@pytest.mark.parametrize("kind", [BRUSHED, SINE])
@pytest.mark.parametrize("cut", [None, 3.0])
def test_the_right_side_is_the_slope_of_that_sum(kind: Commutation, cut: float | None) -> None:
    """Half of it, downhill, by central differences; the unknowns that no row touches apart."""
    p = sheet(kind)
    x, equations = away(p), Equations(sheet(kind))
    right = equations.gradient(x, cut)
    assert right.shape == (equations.active.size, len(p))
    h = 1e-5
    for m in range(len(p)):
        for row, unknown in enumerate(equations.active.tolist()):
            step = np.zeros(P)
            step[unknown] = h
            up, down = (pulled(p, m, x[:, m] + s, cut) for s in (step, -step))
            assert right[row, m] == pytest.approx(-(up - down) / (4 * h), rel=2e-4, abs=1e-3)


def test_the_normal_matrix_is_that_of_the_slopes() -> None:
    """JᵀJ by differences of the standardised residuals, and the prior on the diagonal."""
    p = sheet()
    x, equations = away(p), Equations(sheet())
    factors, right = equations.normal(x)
    assert right == pytest.approx(equations.gradient(x))
    inverse = factors.inverse()
    _, prior = ridge()
    h = 1e-6
    for m in range(len(p)):
        slopes = []
        for unknown in equations.active.tolist():
            step = np.zeros(P)
            step[unknown] = h
            up, down = (standardised(p, m, x[:, m] + s) for s in (step, -step))
            slopes.append((up - down) / (2 * h))
        jacobian = np.array(slopes).T
        wanted = jacobian.T @ jacobian + np.diag(prior[equations.active])
        assert np.linalg.inv(inverse[:, :, m]) == pytest.approx(wanted, rel=1e-3, abs=1.0)


def test_what_the_family_shares_is_four_more_rows() -> None:
    """Km/√Ra, J, La/Ra and Km·I0 known to so much; an unknown one says nothing."""
    p, plain = sheet(), Equations(sheet())
    x = away(p)
    p.family[0], p.family_sd[0] = [-3.0, -11.0, -7.0, -6.0], [0.02, 0.03, 0.04, 0.05]
    p.family[1, 1], p.family_sd[1, 1] = -11.0, 0.03
    extra = Equations(p).chi2(x) - plain.chi2(x)
    v = dict(zip(UNKNOWNS, x, strict=True))
    shared = np.array([
        v["torque_constant"] - v["resistance"] / 2, v["inertia"],
        v["inductance"] - v["resistance"], v["torque_constant"] + v["no_load_current"],
    ])  # fmt: skip
    by_hand = ((p.family[0] - shared[:, 0]) / p.family_sd[0]) ** 2
    assert extra[0] == pytest.approx(by_hand.sum())
    assert extra[1] == pytest.approx(((-11.0 - shared[1, 1]) / 0.03) ** 2)
    assert extra[2] == pytest.approx(0.0, abs=1e-6)


def test_a_product_of_many_columns_is_one_product() -> None:
    rng = np.random.default_rng(0)
    a = rng.normal(size=(3, 5))
    for n in (1, 95, 96, 97, 192, 193, 300):
        b = rng.normal(size=(5, n))
        assert product(a, b) == pytest.approx(np.einsum("ij,jn->in", a, b))


# ---- covariances


@pytest.mark.parametrize("kind", [BRUSHED, SINE])
def test_the_covariance_is_the_inverse_and_the_prior_of_the_rest(kind: Commutation) -> None:
    p = sheet(kind)
    equations = Equations(p)
    factors, _ = equations.normal(away(p))
    found = equations.covariance(factors)
    inverse = factors.inverse()
    rest = sorted(set(range(P)) - set(equations.active.tolist()))
    assert rest
    _, prior = ridge()
    for m in range(len(p)):
        assert found[m][np.ix_(equations.active, equations.active)] == pytest.approx(
            inverse[:, :, m]
        )
        assert found[m] == pytest.approx(found[m].T)
        for i in rest:
            assert found[m, i, i] == pytest.approx(1 / prior[i])
            assert np.flatnonzero(found[m, i]).tolist() == [i]
        determinant = np.linalg.slogdet(found[m])[1]
        assert equations.log_covariance(factors)[m] == pytest.approx(determinant)


def test_only_unknowns_that_a_row_touches_are_adjusted() -> None:
    """Of Ra, J and I0 alone; I0's stand-in brings U, and I_N for a servo."""
    batch = single()
    for key in ("terminal_resistance", "rotor_inertia"):
        put(batch, key, 0, 1.0)
    active = [UNKNOWNS[i] for i in Equations(observe(batch)).active]
    assert active == ["resistance", "inertia", "voltage", "no_load_current", "nominal_current"]
    put(batch, "no_load_current", 0, 1.0)
    active = [UNKNOWNS[i] for i in Equations(observe(batch)).active]
    assert active == ["resistance", "inertia", "no_load_current"]


# ---- the adjustment


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


def test_readings_change_their_rows_only() -> None:
    """Gross stall torque and electrical greatest power: Km·U/Ra, U²/(4·Ra)."""
    p = sheet(n=2)
    x = away(p)
    plain = Equations(p).chi2(x)
    v = {name: np.exp(row) for name, row in zip(UNKNOWNS, x, strict=True)}
    i = INDEX["maximum_power"]
    p.readings = Readings(maximum_power_electrical=True)
    sd = np.hypot(p.digits[:, i], p.scatter[:, i])
    mechanical = np.log(v["no_load_speed"] * v["stall_torque"] / 4)
    electrical = np.log(v["voltage"] ** 2 / v["resistance"] / 4)
    gap = ((p.y[:, i] - electrical) ** 2 - (p.y[:, i] - mechanical) ** 2) / sd**2
    assert Equations(p).chi2(x) - plain == pytest.approx(gap, rel=1e-6)
    p.readings = Readings(stall_torque_net=False)
    gross = v["torque_constant"] * v["voltage"] / v["resistance"]
    net = v["torque_constant"] * (v["voltage"] / v["resistance"] - v["no_load_current"])
    gap = np.log(gross / v["stall_torque"]) ** 2 - np.log(net / v["stall_torque"]) ** 2
    assert Equations(p).chi2(x) - plain == pytest.approx(gap / 0.02**2, rel=1e-6)


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
    assert found.x.T == pytest.approx(x, abs=1e-9)
    assert found.chi2 == pytest.approx(Equations(p).chi2(x), rel=1e-7)
