"""The parts of reconciling one by one: rows and their slopes, families, points, portions."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from motorfolio.schema.batch import Point, TextColumn
from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile import run
from motorfolio.schema.reconcile.families import majority
from motorfolio.schema.reconcile.merge import exchanged_neighbours, shared_causes, shared_faults
from motorfolio.schema.reconcile.model import (
    FIGURES,
    INDEX,
    PEAK_BAND,
    UNKNOWNS,
    F,
    P,
    Readings,
    linear_matrix,
    nonlinear_rows,
)
from motorfolio.schema.reconcile.observed import copper, printed_sd, to_model
from motorfolio.schema.reconcile.operating_points import fit_points
from motorfolio.schema.reconcile.portion import portion
from motorfolio.schema.reconcile.run import reconcile
from motorfolio.schema.reconcile.suspects import Suspicion
from motorfolio.schema.reconcile.table import sample

from .simulated_sheets import FULL, SERVO, make, put, restate, single, spoil

K, R, J, L, U, I0, N0, TS, IN, TN, NN, TF, B, ICS, IPK = range(len(UNKNOWNS))


def a_motor(n: int, seed: int = 0) -> np.ndarray:
    """Unknowns (n, P) of motors that run: Ra·I0 and Ra·I_N below U, all of it in logarithms."""
    rng = np.random.default_rng(seed)
    x = rng.normal(0, 0.3, (n, P))
    x[:, U], x[:, K] = math.log(24), x[:, K] + math.log(0.03)
    x[:, I0], x[:, IN] = x[:, I0] + math.log(0.5), x[:, IN] + math.log(5)
    x[:, N0] += math.log(700)
    x[:, NN], x[:, TF] = x[:, NN] + math.log(500), x[:, TF] + math.log(0.01)
    x[:, B] += math.log(1e-5)
    return x


def rows(x: np.ndarray, y: np.ndarray, servo: np.ndarray, readings: Readings):
    weights, laws = np.ones((len(x), F)), np.ones((len(x), 8))
    return list(nonlinear_rows(x, y, weights, laws, servo, readings))


@pytest.mark.parametrize("net", [True, False])
@pytest.mark.parametrize("hot", [True, False])
def test_slopes_are_derivatives(net: bool, hot: bool) -> None:
    """Each slope against a central difference of its residual, whatever the row."""
    n = 12
    x, servo = a_motor(n), np.arange(n) % 3 == 0
    y = np.random.default_rng(1).normal(0, 0.3, (n, F)) - 0.3
    y[:, INDEX["peak_torque"]] = x[:, K] + x[:, IPK] + np.linspace(-1.5, 1.0, n)
    readings = Readings(stall_torque_net=net, nominal_speed_hot=hot)
    base = rows(x, y, servo, readings)
    assert len(base) == 10
    h = 1e-6
    for unknown in range(P):
        up, down = x.copy(), x.copy()
        up[:, unknown] += h
        down[:, unknown] -= h
        moved = zip(base, rows(up, y, servo, readings), rows(down, y, servo, readings), strict=True)
        for (_, weight, slopes), above, below in moved:
            told = np.zeros(n)
            for which, slope in slopes:
                if which == unknown:
                    told = told + slope
            # residual = observed − model
            found = -(above[0] - below[0]) / (2 * h)
            counts = weight > 0
            assert found[counts] == pytest.approx(told[counts], rel=1e-5, abs=1e-7)


def test_rows_are_the_relations_of_the_motor() -> None:
    """Residuals against the circuit equation and the torque balance, written out in plain values
    (Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., section 7.7, from memory)."""
    n = 9
    x = a_motor(n, 3)
    v = np.exp(x)
    servo = np.zeros(n, bool)
    y = np.zeros((n, F))
    y[:, INDEX["maximum_efficiency"]] = math.log(0.7)
    y[:, INDEX["peak_torque"]] = x[:, K] + x[:, IPK] + np.linspace(-1.2, 0.5, n)
    found = [residual for residual, _, _ in rows(x, y, servo, Readings())]
    idle = v[:, U] - v[:, R] * v[:, I0]
    expected = [
        np.log(idle / v[:, K] / v[:, N0]),
        np.log(v[:, K] * (v[:, U] / v[:, R] - v[:, I0]) / v[:, TS]),
        np.log(v[:, K] * (v[:, IN] - v[:, I0]) / v[:, TN]),
        np.log((v[:, U] - v[:, R] * v[:, IN]) / v[:, K] / v[:, NN]),
        np.log(v[:, K] * v[:, I0] / (v[:, TF] + v[:, B] * v[:, N0])),
    ]
    for got, want in zip(found, expected, strict=False):
        assert got == pytest.approx(want, rel=1e-9, abs=1e-12)
    eta = (1 - np.sqrt(v[:, I0] * v[:, R] / v[:, U])) ** 2
    assert found[8] == pytest.approx(np.log(0.7 / eta))
    gap = np.linspace(-1.2, 0.5, n)
    low, high = PEAK_BAND
    beyond = np.where(gap > high, gap - high, np.where(gap < low, gap - low, 0.0))
    assert found[9] == pytest.approx(beyond, abs=1e-12)
    assert (low, high) == pytest.approx((math.log(0.5), math.log(1.05)))
    gross = rows(x, y, servo, Readings(stall_torque_net=False))[1][0]
    assert gross == pytest.approx(np.log(v[:, K] * v[:, U] / v[:, R] / v[:, TS]))


def test_a_servo_s_nominal_speed_is_bounded_only() -> None:
    """n_N at most U/Km: below it the row has no weight."""
    x = a_motor(4, 5)
    x[:, NN] = x[:, U] - x[:, K] + np.array([-0.5, -0.01, 0.01, 0.5])
    residual, weight, _ = rows(x, np.zeros((4, F)), np.ones(4, bool), Readings())[3]
    assert residual == pytest.approx([0.5, 0.01, -0.01, -0.5])
    assert (weight > 0).tolist() == [False, False, True, True]


def test_linear_rows_are_products_of_powers() -> None:
    """Definitions: gradient Ra/Km², motor constant Km/√Ra, τm = J·Ra/Km², τe = La/Ra, P_max =
    n0·Ts/4 or U²/(4·Ra), P_N = T_N·n_N, I_s = U/Ra, η_N = T_N·n_N/(U·I_N)."""
    x = a_motor(5, 7)
    v = np.exp(x).T
    expected = {
        "torque_constant": v[K], "back_emf_constant": v[K], "speed_constant": 1 / v[K],
        "terminal_resistance": v[R], "terminal_inductance": v[L], "rotor_inertia": v[J],
        "stall_current": v[U] / v[R], "rated_power": v[TN] * v[NN],
        "rated_efficiency": v[TN] * v[NN] / (v[U] * v[IN]),
        "speed_torque_gradient": v[R] / v[K] ** 2, "motor_constant": v[K] / np.sqrt(v[R]),
        "mechanical_time_constant": v[J] * v[R] / v[K] ** 2,
        "electrical_time_constant": v[L] / v[R], "maximum_power": v[N0] * v[TS] / 4,
        "continuous_stall_torque": v[K] * v[ICS], "viscous_damping": v[B],
    }  # fmt: skip
    matrix, constant = linear_matrix(Readings())
    for key, value in expected.items():
        i = INDEX[key]
        assert np.exp(x @ matrix[i] + constant[i]) == pytest.approx(value, rel=1e-12), key
    other, shift = linear_matrix(Readings(maximum_power_electrical=True))
    i = INDEX["maximum_power"]
    assert np.exp(x @ other[i] + shift[i]) == pytest.approx(v[U] ** 2 / (4 * v[R]))


# ---- digits and temperatures


def test_digits_leave_a_rectangular_uncertainty() -> None:
    """An interval of width w has the standard uncertainty w/√12 (JCGM 100:2008, 4.3.7)."""
    batch = single(n=2)
    put(batch, "torque_constant", 0, 0.0302, 3)
    put(batch, "torque_constant", 1, 0.0302, 4)
    sd = printed_sd("torque_constant", batch.figures["torque_constant"])
    assert sd == pytest.approx([0.1 / 30.2 / math.sqrt(12), 0.01 / 30.2 / math.sqrt(12)], rel=1e-3)


def test_a_figure_stated_hot_is_brought_to_the_reference() -> None:
    """Copper by 234.5 + T (Langsdorf, ex. 1-15), ferrite −0.20 %/K (Modelica Standard Library,
    hard magnetic materials)."""
    assert copper(75.0, 20.0) == pytest.approx(309.5 / 254.5)
    batch = single(n=1)
    batch.reference_temperature[:] = 20.0
    batch.magnet = ["ferrite"]
    for key in ("terminal_resistance", "torque_constant", "speed_constant", "back_emf_constant"):
        put(batch, key, 0, 1.0)
        restate(batch, key, temperature=80.0)
    to = {key: float(np.exp(to_model(key, column, batch)[0]))
          for key, column in batch.figures.items()}  # fmt: skip
    assert to["terminal_resistance"] == pytest.approx(254.5 / 314.5)
    assert to["torque_constant"] == pytest.approx(1 / (1 - 0.002 * 60))
    assert to["back_emf_constant"] == pytest.approx(to["torque_constant"])


# ---- families


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 10_000))
def test_majority_by_its_definition(seed: int) -> None:
    """Median of each group of three or more of which 60 % lie about it; two of three suffice."""
    rng = np.random.default_rng(seed)
    n, tolerance = 40, 0.05
    group = rng.integers(0, 8, n)
    value = np.where(rng.random(n) < 0.6, rng.normal(0, 0.02, n), rng.normal(0, 1, n))
    value[rng.random(n) < 0.2] = np.nan
    found = majority(value, group, tolerance)
    for g in range(int(group.max()) + 1):
        mine = value[(group == g) & np.isfinite(value)]
        if mine.size < 3:
            assert np.isnan(found.median[g])
            continue
        middle = np.median(mine)
        near = mine[np.abs(mine - middle) < math.log(1 + tolerance)]
        least = 2 if mine.size == 3 else 3
        if near.size >= 0.6 * mine.size and near.size >= least:
            assert found.median[g] == pytest.approx(middle)
            assert found.count[g] == near.size
            spread = math.sqrt(((near - middle) ** 2).sum() / max(near.size - 1, 1))
            assert found.spread[g] == pytest.approx(spread)
        else:
            assert np.isnan(found.median[g])


# ---- operating points


def points(*figures: dict[str, float]):
    batch = single()
    put(batch, "nominal_voltage", 0, 24.0)
    batch.points = {0: [Point(str(i), f) for i, f in enumerate(figures)]}
    return batch


KM, RA, IDLE = 0.03, 1.2, 0.12


def at(current: float, voltage: float = 24.0, names=("torque", "current", "speed")):
    values = (KM * (current - IDLE), current, (voltage - RA * current) / KM)
    return dict(zip(names, values, strict=True))


@pytest.mark.parametrize(
    "given_points",
    [
        (at(1.0), at(3.0), at(6.0)),
        (at(1.0, names=("nominal_torque", "nominal_current", "nominal_speed")), at(9.0)),
        # at no load and at stall some figures need no saying
        ({"no_load_speed": (24 - RA * IDLE) / KM, "no_load_current": IDLE}, at(5.0)),
        ({"stall_torque": KM * (20 - IDLE), "stall_current": 20.0}, at(5.0), at(2.0)),
        (at(1.0) | {"nominal_voltage": 24.0}, at(4.0, 12.0) | {"nominal_voltage": 12.0}, at(3.0)),
        (at(1.0), {"torque": 1.0}, {"current": 5.0, "speed": 3.0}, at(6.0)),
    ],
)
def test_points_on_the_motor_s_lines(given_points) -> None:
    """T = Km·(I − I0), U = Ra·I + Km·ω: exact points give the motor back."""
    found = fit_points(points(*given_points), 0)
    assert found is not None
    assert found.torque_constant == pytest.approx(KM, rel=1e-6)
    assert found.resistance == pytest.approx(RA, rel=1e-6)
    assert found.no_load_current == pytest.approx(IDLE, rel=1e-6)
    assert found.misfit == pytest.approx(0, abs=1e-9)
    assert all(sd > 0 for sd in found.sd)


@pytest.mark.parametrize(
    "given_points",
    [
        (at(1.0),),
        (at(1.0), {"torque": 0.3, "current": 9.0}),
        (at(5.0), at(5.05)),
        (at(1.0), at(6.0) | {"torque": -0.3}),
        (at(1.0), at(6.0) | {"speed": 2000.0}),
        (at(1.0) | {"speed": 100.0}, at(6.0) | {"speed": 700.0}),
    ],
)
def test_points_that_tell_no_motor(given_points) -> None:
    """One point, two that are one, torque that falls with the current, a
    resistance and a voltage constant below zero."""
    assert fit_points(points(*given_points), 0) is None
    assert fit_points(single(), 0) is None


def test_a_misfit_is_the_largest_departure() -> None:
    off = at(3.0)
    off["speed"] *= 1.05
    found = fit_points(points(at(1.0), off, at(6.0)), 0)
    assert found is not None
    assert 0.01 < found.misfit < 0.05


# ---- portions


def test_a_portion_is_a_table_of_its_own() -> None:
    sheet = make(np.random.default_rng(3), 5, Commutation.SINUSOIDAL, SERVO)
    batch = sheet.batch
    batch.series = ["A", "B", "C", "D", "E"]
    batch.figures["mass"].qualifiers = {0: "about", 1: "at most", 3: "typical", 4: "at least"}
    batch.repeats = {"mass": [batch.figures["mass"].take(range(5))]}
    batch.texts = {"protection": TextColumn(list("abcde"), np.arange(5), np.arange(5))}
    batch.points = {0: [], 2: [Point("p", {})], 4: []}
    assert portion(batch, 0, 5) is batch
    part = portion(batch, 1, 4)
    assert len(part) == 3
    assert part.part_number == ["X1", "X2", "X3"]
    assert part.series == ["B", "C", "D"]
    for key, column in batch.figures.items():
        assert part.figures[key].value.tolist() == column.value[1:4].tolist()
        assert part.figures[key].row.tolist() == [3, 4, 5]
    assert part.figures["mass"].qualifiers == {0: "at most", 2: "typical"}
    assert part.repeats["mass"][0].text == batch.figures["mass"].text[1:4]
    assert part.texts["protection"].text == ["b", "c", "d"]
    assert list(part.points) == [1]
    assert len(portion(batch, 0, 3)) == 3
    assert len(portion(batch, 3, 9)) == 2


def test_portions_are_joined(monkeypatch: pytest.MonkeyPatch) -> None:
    """Families apart from one another: cut between them, nothing changes."""
    rng = np.random.default_rng(21)
    sheet = make(rng, 12, Commutation.BRUSHED, FULL)
    sheet.batch.series = ["A"] * 6 + ["B"] * 6
    spoil(sheet.batch, "torque_constant", 8, 10.0)
    whole = reconcile(sheet.batch)
    monkeypatch.setattr(run, "PORTION", 6)
    parts = reconcile(sheet.batch)
    for result in (whole, parts):
        places = zip(result.findings, result.finding_motor, strict=True)
        alarms = [(f.suspect, m) for f, m in places if f.severity != "note"]
        assert alarms == [("torque_constant", 8)]
    for key, column in whole.constants.items():
        other = parts.constants[key]
        for name in ("value", "low", "high"):
            assert getattr(other, name) == pytest.approx(
                getattr(column, name), rel=1e-6, nan_ok=True
            )
        for i in range(12):
            assert other.sources[other.source[i]] == column.sources[column.source[i]]


@given(st.integers(1, 5000), st.integers(1, 300))
def test_a_sample_is_spread_over_the_table(n: int, size: int) -> None:
    found = sample(n, size)
    assert found[0] == 0
    assert found.size == min(n, size)
    assert found[-1] == (n - 1 if size > 1 or n == 1 else 0)
    steps = np.diff(found)
    assert steps.size == 0 or steps.max() - steps.min() <= 1


# ---- what suspicions have in common


def suspicion(motor: int, key: str, ratio: float, causes=("unexplained",), **more) -> Suspicion:
    given_ = {"rivals": (), "implied_sd": 0.01, "sd": 0.01, "saved": 100.0, **more}
    return Suspicion(motor, INDEX[key], log_ratio=math.log(ratio), causes=causes, **given_)


def test_neighbours_that_have_each_other_s_value() -> None:
    batch = single(n=4)
    batch.series = ["A", "A", "A", "B"]
    for row, current in enumerate((1.0, 2.0, 1.5, 3.0)):
        put(batch, "stall_current", row, current)
    first = suspicion(0, "stall_current", 0.5)
    second = suspicion(1, "stall_current", 2.0, ("digits-transposed", "power-of-ten"))
    exchanged_neighbours(batch, [first, second])
    assert first.causes == ("neighbouring-column",)
    assert second.causes == ("neighbouring-column", "digits-transposed", "power-of-ten")
    for others in (
        [suspicion(0, "stall_current", 0.5), suspicion(1, "stall_current", 2.2)],
        [suspicion(0, "stall_current", 0.45), suspicion(1, "stall_current", 2.0)],
        [suspicion(0, "stall_current", 0.5), suspicion(1, "nominal_current", 2.0)],
        [suspicion(0, "stall_current", 0.5, partner=3), suspicion(1, "stall_current", 2.0)],
        [suspicion(0, "stall_current", 0.5), suspicion(2, "stall_current", 2.0)],
        [suspicion(2, "stall_current", 0.5), suspicion(3, "stall_current", 2.0)],
    ):
        exchanged_neighbours(batch, others)
        assert all(s.causes == ("unexplained",) for s in others)


def test_one_mistake_in_several_figures_of_a_motor() -> None:
    """Stall torque and current that both are the continuous ones; torques of a gear's shaft."""
    both = ("power-of-ten", "continuous-stall", "unexplained")
    stall = [suspicion(3, "stall_torque", 0.2, both), suspicion(3, "stall_current", 0.2, both)]
    shared_causes(stall)
    assert [s.causes for s in stall] == [("continuous-stall", "power-of-ten")] * 2
    apart = [suspicion(3, "stall_torque", 0.2, both), suspicion(4, "stall_current", 0.2, both)]
    shared_causes(apart)
    assert [s.causes for s in apart] == [both] * 2
    geared = [suspicion(1, "nominal_torque", 25.0), suspicion(1, "stall_torque", 25.3),
              suspicion(1, "peak_torque", 25.1, ("power-of-ten",))]  # fmt: skip
    shared_causes(geared)
    assert [s.causes[0] for s in geared] == ["gear-output-side"] * 2 + ["power-of-ten"]
    unlike = [suspicion(1, "nominal_torque", 25.0), suspicion(1, "stall_torque", 29.0)]
    small = [suspicion(1, "nominal_torque", 2.0), suspicion(1, "stall_torque", 2.0)]
    for several in (unlike, small):
        shared_causes(several)
        assert [s.causes[0] for s in several] == ["unexplained"] * 2


def test_one_factor_in_most_of_a_column() -> None:
    batch = single(n=5)
    for row in range(5):
        put(batch, "stall_torque", row, 1.0)
    ten = [suspicion(m, "stall_torque", 10.0 * (1 + 0.001 * m), ("digits-transposed",
           "power-of-ten"), saved=100.0 + m, rivals=(1, 2, m + 5)) for m in range(4)]  # fmt: skip
    other = suspicion(4, "stall_torque", 2.0)
    mass = suspicion(0, "nominal_torque", 10.0)
    ((fault, motors),), left = shared_faults(batch, [*ten, other, mass])
    assert FIGURES[fault.figure] == "stall_torque"
    assert motors.tolist() == [0, 1, 2, 3]
    assert fault.rivals == (1, 2)
    assert fault.causes == ("power-of-ten",)
    assert math.exp(fault.log_ratio) == pytest.approx(10.0, rel=0.003)
    assert left == [other, mass]
    # three of five are no column
    merged, left = shared_faults(batch, ten[:3])
    assert merged == []
    assert len(left) == 3
