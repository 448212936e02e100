"""Weights, bounds and priors of the observation rows, each by hand or by a plain loop.

The laws of the DC motor: Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., section 7.7
(from memory). Customary scatter and what stands for a figure that isn't published: common practice,
no source.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.model import (
    FIGURES,
    INDEX,
    UNKNOWNS,
    F,
    P,
    Readings,
    family_matrix,
    linear_matrix,
    nonlinear_rows,
    ridge,
)
from motorfolio.schema.reconcile.observed import custom, observe, printed_sd, usable
from motorfolio.schema.reconcile.problem import Problem, bound_laws
from motorfolio.schema.vocabulary import quantity

from .simulated_sheets import put, single

K, R, J, L, U, I0, N0, TS, IN, TN, NN, TF, B, ICS, IPK = range(len(UNKNOWNS))
LAWS = ("no_load_speed", "stall_torque", "nominal_torque", "nominal_speed", "friction_torque")
SD = dict(zip(LAWS, (0.025, 0.02, 0.07, 0.025, 0.10), strict=True))


def problem(*figures: str, servo: bool = False, scale: float = 1.0, n: int = 1) -> Problem:
    """Of motors that publish these figures, all 1, known to 1 % by digits and 2 % by custom."""
    present = np.zeros((n, F), dtype=bool)
    present[:, [INDEX[key] for key in figures]] = True
    return Problem(
        np.zeros((n, F)), present, np.full((n, F), 0.01), np.full((n, F), 0.02),
        np.full(n, servo), np.full((n, 4), np.nan), np.full((n, 4), np.inf), Readings(),
        bound_laws(present), np.array([scale]),
    )  # fmt: skip


# ---- weights


def test_a_row_has_the_variance_of_its_digits_and_of_custom() -> None:
    """The table's scale is of custom alone: digits are what they are."""
    p = problem("torque_constant", scale=0.5)
    assert p.sd() == pytest.approx(np.full((1, F), math.hypot(0.01, 0.5 * 0.02)))
    weights = p.weights()
    assert weights[0, INDEX["torque_constant"]] == pytest.approx(1 / (0.01**2 + 0.01**2))
    assert np.count_nonzero(weights) == 1
    p = problem("torque_constant", n=2)
    p.scale = np.array([1.0, 3.0])
    assert p.sd()[:, 0] == pytest.approx([math.hypot(0.01, 0.02), math.hypot(0.01, 0.06)])


@pytest.mark.parametrize("figure", FIGURES)
def test_a_figure_binds_the_laws_that_it_tells_of(figure: str) -> None:
    """A rated power or efficiency is of both T_N and n_N, a greatest power of n0 and Ts; damping
    tells of friction. Currents and constants bind no law."""
    tells = {
        "maximum_power": {"no_load_speed", "stall_torque"},
        "rated_power": {"nominal_torque", "nominal_speed"},
        "rated_efficiency": {"nominal_torque", "nominal_speed"},
        "viscous_damping": {"friction_torque"},
    }.get(figure, {figure} & set(LAWS))
    p = problem(figure)
    assert {law for law, bound in zip(LAWS, p.bound[0], strict=True) if bound} == tells
    for scale in (1.0, 0.5):
        p.scale = np.array([scale])
        weights = p.law_weights()[0]
        assert weights.shape == (8,)
        for law, weight in zip(LAWS, weights[:5], strict=True):
            assert weight == pytest.approx((law in tells) / (scale * SD[law]) ** 2)


@pytest.mark.parametrize("servo", [False, True])
def test_what_stands_for_unpublished_figures(servo: bool) -> None:
    """I0 within a factor e (a servo's within 2); a rated current where a rated point is told of
    (e^0.6; brushed and block); a servo's rated speed where it is (√e)."""
    idle = 1 / math.log(2) ** 2 if servo else 1.0
    rated = 0.0 if servo else 1 / 0.6**2
    speed = 1 / 0.5**2 if servo else 0.0

    def weights(*figures: str) -> list[float]:
        return problem(*figures, servo=servo).law_weights()[0, 5:].tolist()

    assert weights("torque_constant") == pytest.approx([idle, 0, 0])
    assert weights("no_load_current") == [0, 0, 0]
    assert weights("nominal_torque") == pytest.approx([idle, rated, 0])
    assert weights("nominal_torque", "nominal_current") == pytest.approx([idle, 0, 0])
    assert weights("nominal_torque", "no_load_current") == pytest.approx([0, rated, 0])
    assert weights("nominal_speed") == pytest.approx([idle, rated, 0])
    assert weights("rated_power") == pytest.approx([idle, rated, speed])
    assert weights("rated_power", "nominal_speed") == pytest.approx([idle, rated, 0])
    assert weights("rated_power", "nominal_current") == pytest.approx([idle, 0, speed])


def test_a_figure_left_out_still_binds_its_law() -> None:
    p = problem("nominal_torque", "nominal_current", n=2)
    other = p.without(np.array([INDEX["nominal_torque"], INDEX["nominal_current"]]))
    assert other.present.sum(axis=1).tolist() == [1, 1]
    assert not other.present[0, INDEX["nominal_torque"]]
    assert not other.present[1, INDEX["nominal_current"]]
    assert p.present.sum() == 4
    assert other.bound.tolist() == p.bound.tolist()
    assert other.law_weights()[0, 2] > 0


def test_motors_taken_from_a_problem() -> None:
    p = problem("torque_constant", n=3)
    p.y[:, 0] = [1.0, 2.0, 3.0]
    p.digits[:, 0] = [0.1, 0.2, 0.3]
    p.scatter[:, 0] = [0.4, 0.5, 0.6]
    p.servo[:] = [True, False, True]
    p.family[:, 1], p.family_sd[:, 1] = [7.0, 8.0, 9.0], [0.7, 0.8, 0.9]
    p.bound[:, 2] = [True, False, False]
    p.readings = Readings(nominal_speed_hot=True)
    for scale in (np.array([0.5]), np.array([0.5, 0.6, 0.7])):
        p.scale = scale
        part = p.take(np.array([2, 0, 2]))
        assert len(part) == 3
        for name in ("y", "present", "digits", "scatter", "servo", "family", "family_sd", "bound"):
            assert np.array_equal(getattr(part, name), getattr(p, name)[[2, 0, 2]], equal_nan=True)
        assert part.scale.tolist() == ([0.5] if scale.size == 1 else [0.7, 0.5, 0.7])
        assert part.readings is p.readings


# ---- rows


def test_what_the_family_shares_and_its_rows() -> None:
    """Km/√Ra, J, La/Ra, Km·I0."""
    x = np.arange(1.0, P + 1)
    assert family_matrix() @ x == pytest.approx([x[K] - x[R] / 2, x[J], x[L] - x[R], x[K] + x[I0]])


def test_every_unknown_has_the_middle_of_its_range() -> None:
    """With its width as standard deviation, in the logarithm."""
    keys = ("torque_constant", "terminal_resistance", "rotor_inertia", "terminal_inductance",
            "nominal_voltage", *UNKNOWNS[5:])  # fmt: skip
    mean, weight = ridge()
    for i, key in enumerate(keys):
        low, high = quantity(key).plausible
        assert mean[i] == pytest.approx(math.log(math.sqrt(low * high)))
        assert weight[i] == pytest.approx(1 / math.log(high / low) ** 2)


def test_a_peak_torque_has_no_straight_row() -> None:
    matrix, constant = linear_matrix(Readings())
    assert not matrix[INDEX["peak_torque"]].any()
    assert not matrix[INDEX["maximum_efficiency"]].any()
    assert constant[INDEX["maximum_power"]] == pytest.approx(-math.log(4))
    assert np.flatnonzero(constant).tolist() == [INDEX["maximum_power"]]
    for electrical in (False, True):
        matrix, constant = linear_matrix(Readings(maximum_power_electrical=electrical))
        row = {i: v for i, v in enumerate(matrix[INDEX["maximum_power"]]) if v}
        assert row == ({U: 2.0, R: -1.0} if electrical else {N0: 1.0, TS: 1.0})
        assert constant[INDEX["maximum_power"]] == pytest.approx(-math.log(4))


ROWS = ("n0", "Ts", "T_N", "n_N", "friction", "I0", "I_N", "servo n_N", "efficiency", "peak")


def rows(
    values: dict[int, float], y: dict[str, float] | None = None, servo: bool = False,
    typical: bool = False, readings: Readings | None = None, weight: float = 1.0,
):  # fmt: skip
    """Of one motor whose unknowns are 1 where not given: residual, weight and slopes by row."""
    x, figures = np.zeros((1, P)), np.zeros((1, F))
    for unknown, value in values.items():
        x[0, unknown] = math.log(value)
    for key, value in (y or {}).items():
        figures[0, INDEX[key]] = math.log(value)
    found = nonlinear_rows(x, figures, np.full((1, F), weight), np.full((1, 8), weight),
                           np.array([servo]), readings or Readings(), typical)  # fmt: skip
    return {
        name: (float(r[0]), float(w[0]), {u: float(np.ravel(s)[0]) for u, s in slopes})
        for name, (r, w, slopes) in zip(ROWS, found, strict=True)
    }


MOTOR = {U: 24.0, R: 1.2, K: 0.03, I0: 0.5, IN: 5.0}


def test_typical_corrections_of_the_log_linear_start() -> None:
    """Ra·I0 1.5 % of U, I0 5 % of I_N, Ra·I_N 15 % of U, whatever the figures; friction is all
    Coulomb's; a servo's rated speed is its own."""
    for values in ({}, MOTOR):
        v = {i: values.get(i, 1.0) for i in range(P)}
        found = rows(values, typical=True)
        assert found["n0"][0] == pytest.approx(math.log(v[U] * 0.985 / v[K]))
        assert found["Ts"][0] == pytest.approx(math.log(v[K] * v[U] / v[R] * 0.985))
        assert found["T_N"][0] == pytest.approx(math.log(v[K] * v[IN] * 0.95))
        assert found["n_N"][0] == pytest.approx(math.log(v[U] * 0.85 / v[K]))
        assert found["friction"][0] == pytest.approx(math.log(v[K] * v[I0]))
        assert found["friction"][2] == pytest.approx({TF: 1, B: 0, N0: 0, K: -1, I0: -1})
        eta = 2 * math.log(1 - math.sqrt(0.015))
        assert found["efficiency"][0] == pytest.approx(-eta)
        steep = 0.015 / 0.985
        assert found["n0"][2] == pytest.approx({N0: 1, U: -1 - steep, K: 1, R: steep, I0: steep})
    servo = rows(MOTOR, servo=True, typical=True)
    assert servo["n_N"][:2] == (pytest.approx(math.log(24 / 0.03)), 0.0)


def test_what_is_taken_for_an_unpublished_figure() -> None:
    """I0·Ra/U 1.5 %, a servo's I0/I_N 2.5 %; Ra·I_N/U 13 %; a servo's Km·n_N/U 65 %."""
    found = rows(MOTOR)
    assert found["I0"][0] == pytest.approx(math.log(0.015 * 24 / 1.2 / 0.5))
    assert found["I0"][2] == {I0: 1.0, R: 1.0, U: -1.0, IN: 0.0}
    assert found["I_N"][0] == pytest.approx(math.log(0.13 * 24 / 1.2 / 5.0))
    assert found["I_N"][2] == {R: 1.0, IN: 1.0, U: -1.0}
    assert found["servo n_N"][0] == pytest.approx(math.log(0.65 * 24 / 0.03))
    assert found["servo n_N"][2] == {NN: 1.0, K: 1.0, U: -1.0}
    servo = rows(MOTOR, servo=True)
    assert servo["I0"][0] == pytest.approx(math.log(0.025 * 5.0 / 0.5))
    assert servo["I0"][2] == {I0: 1.0, R: 0.0, U: 0.0, IN: -1.0}


@pytest.mark.parametrize("values", [{**MOTOR, I0: 19.5}, {**MOTOR, I0: 40.0}])
def test_an_idle_current_near_the_stall_current_is_held(values: dict[int, float]) -> None:
    """At 0.9 of U (of I_N), so that a logarithm is left."""
    found = rows(values)
    assert found["n0"][0] == pytest.approx(math.log(24 * 0.1 / 0.03))
    assert found["Ts"][0] == pytest.approx(math.log(0.03 * 20 * 0.1))
    assert found["T_N"][0] == pytest.approx(math.log(0.03 * 5 * 0.1))
    assert found["n0"][2][R] == pytest.approx(0.9 / 0.1)
    assert found["T_N"][2] == pytest.approx({TN: 1, K: -1, IN: -10, I0: 9})
    assert found["efficiency"][0] == pytest.approx(-2 * math.log(1 - math.sqrt(0.9)))


@pytest.mark.parametrize("current", [18.5, 25.0, 300.0])
def test_a_rated_current_near_the_stall_current_is_held(current: float) -> None:
    found = rows({**MOTOR, IN: current})
    assert found["n_N"][0] == pytest.approx(math.log(24 * 0.1 / 0.03))
    assert found["n_N"][2][IN] == pytest.approx(9.0)


def test_a_nominal_speed_of_a_hot_winding() -> None:
    """Copper 1 + 0.00385·75 K; how hot is known to 8 %, which the drop hands on."""
    hot = Readings(nominal_speed_hot=True)
    drop = 1.2 * 1.28875 * 5.0 / 24
    residual, weight, slopes = rows(MOTOR, readings=hot, weight=1600.0)["n_N"]
    assert residual == pytest.approx(math.log(24 * (1 - drop) / 0.03))
    steep = drop / (1 - drop)
    assert slopes == pytest.approx({NN: 1, U: -1 - steep, K: 1, R: steep, IN: steep})
    assert 1 / weight == pytest.approx(1 / 1600 + (0.08 * steep) ** 2)
    _, cold, _ = rows(MOTOR, weight=1600.0)["n_N"]
    assert cold == 1600.0


def test_damping_counts_where_it_is_published() -> None:
    """Km·I0 = T_c + b·n0."""
    values = {**MOTOR, TF: 0.01, B: 1e-5, N0: 790.0}
    residual, _, slopes = rows(values)["friction"]
    total = 0.01 + 1e-5 * 790
    assert residual == pytest.approx(math.log(0.03 * 0.5 / total))
    share = 1e-5 * 790 / total
    assert slopes == pytest.approx({TF: 1 - share, B: share, N0: share, K: -1, I0: -1})
    x = np.zeros((1, P))
    for unknown, value in values.items():
        x[0, unknown] = math.log(value)
    ((residual, _, slopes),) = nonlinear_rows(
        x, np.zeros((1, F)), np.zeros((1, F)), np.eye(8)[4:5], np.array([False]), Readings()
    )
    assert residual[0] == pytest.approx(math.log(0.03 * 0.5 / 0.01))
    assert {u: float(np.ravel(s)[0]) for u, s in slopes} == {TF: 1, B: 0, N0: 0, K: -1, I0: -1}


@pytest.mark.parametrize(
    ("ratio", "residual", "counts"),
    [(1.0, 0.0, False), (0.51, 0.0, False), (1.04, 0.0, False), (1.05 * 1.2, math.log(1.2), True),
     (0.25, math.log(0.5), True)],
)  # fmt: skip
def test_a_peak_torque_has_a_band(ratio: float, residual: float, counts: bool) -> None:
    """Half to 1.05 of Km·I_pk: inside, the row says nothing."""
    values = {**MOTOR, IPK: 30.0}
    found = rows(values, {"peak_torque": ratio * 0.03 * 30}, weight=7.0)["peak"]
    assert found[0] == pytest.approx(residual, abs=1e-12)
    assert found[1] == 7.0 * counts
    assert found[2] == {K: 1.0, IPK: 1.0}


def test_rows_that_say_nothing_are_left_out() -> None:
    for law in range(8):
        laws = np.zeros((2, 8))
        laws[1, law] = 3.0
        found = list(nonlinear_rows(np.zeros((2, P)), np.zeros((2, F)), np.zeros((2, F)), laws,
                                    np.zeros(2, dtype=bool), Readings()))  # fmt: skip
        assert len(found) == 1
        assert found[0][1].tolist() == [0.0, 3.0]
    for key in ("maximum_efficiency", "peak_torque"):
        weight = np.zeros((2, F))
        weight[1, INDEX[key]] = 3.0
        y = np.full((2, F), -5.0)
        found = list(nonlinear_rows(np.zeros((2, P)), y, weight, np.zeros((2, 8)),
                                    np.zeros(2, dtype=bool), Readings()))  # fmt: skip
        assert [w.tolist() for _, w, _ in found] == [[0.0, 3.0]]


# ---- what is observed


def test_the_voltage_of_a_sheet_is_exact_and_a_range_is_none() -> None:
    """JCGM 100:2008, 4.3.7: a width over √12."""
    batch = single(n=4)
    put(batch, "nominal_voltage", 0, 24.0)
    column = batch.figures["nominal_voltage"]
    column.value[:], column.low[:], column.high[:] = 24.0, 23.5, 24.5
    column.low[1:3], column.high[1:3] = [22.3, 22.1], [25.8, 25.9]  # 14.6 and 15.8 %
    column.low[3], column.high[3] = np.nan, np.nan
    sd = printed_sd("nominal_voltage", column)
    assert sd == pytest.approx([1e-3, 1e-3, 3.8 / 24 / math.sqrt(12), 1e-3])
    other = printed_sd("torque_constant", column)
    assert other == pytest.approx(
        [1 / 24 / math.sqrt(12), 3.5 / 24 / math.sqrt(12), 3.8 / 24 / math.sqrt(12), 0.005]
    )
    column.low[0] = column.high[0] = 24.0
    assert printed_sd("torque_constant", column)[0] == 1e-5
    column.value[:] *= -1
    assert printed_sd("torque_constant", column)[1] > 0


def test_custom_of_a_figure() -> None:
    """Points of the characteristic hold to their digits, efficiencies scatter in points."""
    value = np.array([0.5, 0.8])
    for key in ("no_load_speed", "stall_torque", "nominal_current", "nominal_torque",
                "nominal_speed", "friction_torque", "nominal_voltage"):  # fmt: skip
        assert custom(key, value).tolist() == [0.0, 0.0]
    assert custom("maximum_efficiency", value) == pytest.approx([0.04, 0.025])
    assert custom("rated_efficiency", value) == pytest.approx([0.04, 0.025])
    assert custom("torque_constant", value).tolist() == [0.01, 0.01]
    assert custom("stall_current", value).tolist() == [0.02, 0.02]


def test_bounds_and_figures_below_naught_measure_nothing() -> None:
    batch = single(n=7)
    for row in range(7):
        put(batch, "torque_constant", row, 0.03)
    column = batch.figures["torque_constant"]
    column.value[:3] = [np.nan, 0.0, -0.03]
    column.qualifiers = {3: "at most", 4: "about", 5: "at least"}
    assert usable("torque_constant", column).tolist() == [False] * 4 + [True, False, True]


@pytest.mark.parametrize("kind", list(Commutation))
def test_what_is_asked_of_the_adjustment(kind: Commutation) -> None:
    """Logarithms on the DC motor, naught where absent; a servo's efficiency at its rating is no
    T·n/(U·I)."""
    batch = single(kind, n=2)
    put(batch, "torque_constant", 1, 0.03, 4)
    put(batch, "rated_efficiency", 1, 0.8, 3)
    found = observe(batch)
    km, eta = INDEX["torque_constant"], INDEX["rated_efficiency"]
    servo = kind is Commutation.SINUSOIDAL
    assert found.servo.tolist() == [servo] * 2
    assert np.argwhere(found.present).tolist() == [[1, km]] + [[1, eta]] * (not servo)
    dc = math.sqrt(1.5) if servo else 1.0
    assert found.y[1, km] == pytest.approx(math.log(0.03 / dc))
    assert found.y[0].tolist() == [0.0] * F
    assert found.digits[1, km] == pytest.approx(0.01 / 30 / math.sqrt(12))
    assert found.digits[0].tolist() == [1.0] * F
    assert found.scatter[1, km] == 0.01
    assert np.isnan(found.family).all()
    assert np.isinf(found.family_sd).all()
    assert found.bound.tolist() == bound_laws(found.present).tolist()
    assert found.readings == Readings()
    hot = Readings(nominal_speed_hot=True)
    assert observe(batch, hot).readings is hot
    other = batch.figures["torque_constant"].conventions[0].with_(current="peak")
    changed = observe(batch, conventions={"torque_constant": [other]})
    peak = math.sqrt(0.75) if servo else 1.0
    assert changed.y[1, km] == pytest.approx(math.log(0.03 / peak))
