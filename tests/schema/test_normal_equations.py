"""Sums of squares, gradients and normal matrices of the adjustment, against plain loops and numpy.

Cauchy's loss: Holland and Welsch 1977 (from memory): c²·log(1 + (r/c)²), weight 1/(1 + (r/c)²).
"""

from __future__ import annotations

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.equations import Equations, product
from motorfolio.schema.reconcile.model import INDEX, UNKNOWNS, P, Readings, ridge
from motorfolio.schema.reconcile.observed import observe

from .laws_by_hand import BRUSHED, SINE, away, pulled, sheet, squares, standardised
from .simulated_sheets import put, single

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
