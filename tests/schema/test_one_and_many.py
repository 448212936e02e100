"""One motor and many are the same: every numeric part alone, in columns, in any order and chunk.

A number and an array of one must not differ either. What is compared is the program with itself,
in two ways of being called; that the numbers are right is held elsewhere.
"""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from motorfolio.schema.convention import Commutation
from motorfolio.schema.operation import drive, heating
from motorfolio.schema.operation import judge as judging
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Drive, Supply, Surroundings
from motorfolio.schema.operation.energy import draw
from motorfolio.schema.operation.judge import judge, judge_cases, judge_worst
from motorfolio.schema.operation.machines import (
    Machines,
    armature_amperes,
    coulomb_torque,
)
from motorfolio.schema.operation.pwm import space_vector_mean_square, two_level_ripple
from motorfolio.schema.operation.ratios import feasible_ratios
from motorfolio.schema.operation.thermal import (
    TwoBody,
    copper_factor,
    magnet_factor,
    periodic_peak,
    steady_temperature,
)
from motorfolio.schema.reconcile.adjust import fit
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.units.read import quantity, read_unit

from .made_up_motors import demand, motors
from .simulated_sheets import make

some = settings(max_examples=30, deadline=None)
RATIOS = np.array([1.5, 8.0, 30.0])
HEATED = {"thermal_time_constant_winding": 4.0, "thermal_time_constant_housing": 90.0}


def mixed(seed: int) -> Machines:
    """Every kind of motor, with gaps: no time constants, no resistances, no inductance."""
    m = motors(12, seed, **HEATED)
    m.thermal_time_constant_winding[2:4] = np.nan
    m.thermal_resistance_winding_housing[4:6] = np.nan
    m.thermal_resistance_housing_ambient[5:7] = np.nan
    m.thermal_resistance[6] = 5.0
    m.nominal_current[4:8] = 3.0
    m.continuous_stall_current[5:7] = 3.5
    m.nominal_speed[5:7] = 300.0
    m.armature_inductance[8] = np.nan
    m.coulomb_torque[9] = np.nan
    m.peak_torque[10] = np.nan
    return m


def asked(seed: int) -> Demand:
    return replace(
        demand(seed),
        supply=Supply(48.0, 0.95, 0.5, 20e3),
        drive=Drive(20.0, 8.0, "peak", "rms"),
        surroundings=Surroundings(35.0),
    )


def columns(found) -> dict[str, np.ndarray]:
    return {f.name: getattr(found, f.name) for f in fields(found) if f.name != "needed"}


def agree(first, second, rel: float = 1e-10) -> None:
    a, b = columns(first), columns(second)
    for name, column in a.items():
        assert column.shape == b[name].shape, name
        assert column == pytest.approx(b[name], rel=rel, abs=1e-12, nan_ok=True), name


@pytest.mark.parametrize("seed", range(2))
def test_a_motor_is_judged_alone_as_among_others(seed: int) -> None:
    m, d = mixed(seed), asked(seed)
    # With time constants how finely the cycle is cut follows the quickest motor of a chunk.
    many = judge(m, d, RATIOS, periodic=False)
    for k in range(len(m)):
        one = judge(m.take(np.array([k])), d, RATIOS, periodic=False)
        agree(one, many.take(slice(k, k + 1)))
        r = k % 3
        scalar = judge(m.take(slice(k, k + 1)), d, float(RATIOS[r]), periodic=False)
        agree(scalar.reshape(1), many.take((slice(k, k + 1), r)))
    peaks = judge(m, d, RATIOS)
    alone = [judge(m.take(np.array([k])), d, RATIOS) for k in range(len(m))]
    agree(type(peaks).joined(alone), peaks, rel=2e-3)


def test_order_repetition_and_chunks_change_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    m, d = mixed(7), asked(7)
    many = judge(m, d, RATIOS)
    order = np.random.default_rng(0).permutation(len(m))
    agree(judge(m.take(order), d, RATIOS), many.take(order))
    # One ratio each, as flat cases, some of them twice.
    which = np.array([3, 0, 3, 8, 11, 9])
    flat = judge_cases(m, d, which, RATIOS[[0, 1, 0, 2, 1, 2]], periodic=False)
    agree(flat, judge(m, d, RATIOS, periodic=False).take((which, [0, 1, 0, 2, 1, 2])))
    by_row = judge(m, d, np.broadcast_to(RATIOS, (len(m), 3)))
    agree(by_row, many)
    with pytest.raises(ValueError, match="one row of ratios"):
        judge(m, d, np.ones((3, 2)))
    monkeypatch.setattr(judging, "_CHUNK", 1)
    monkeypatch.setattr(heating, "_CHUNK", 1 << 8)
    agree(judge(m, d, np.tile(RATIOS, 8)).take((slice(None), slice(3))), many, rel=2e-3)


def test_nobody_is_judged_too() -> None:
    m = motors(3).take(slice(0, 0))
    assert judge(m, asked(0), RATIOS).voltage.shape == (0, 3)


def test_worst_corners_alone_and_together() -> None:
    m, d = mixed(4), asked(4)
    spread = np.random.default_rng(4).uniform(0.02, 0.2, (4, len(m)))
    factors = (1 - spread[0], 1 + spread[1], 1 - spread[2], 1 + spread[3])
    many, corners = judge_worst(m, d, 8.0, tolerance=factors, periodic=False)
    for k in range(0, len(m), 3):
        given = tuple(f[k : k + 1] for f in factors)
        one, corner = judge_worst(m.take(np.array([k])), d, 8.0, tolerance=given, periodic=False)
        agree(one, many.take(slice(k, k + 1)))
        assert corner[0] == corners[k]
    same, _ = judge_worst(m, d, 8.0, tolerance=0.1)
    ten = (0.9, 1.1, 0.9, 1.1)
    agree(same, judge_worst(m, d, 8.0, tolerance=ten)[0])


def test_ratios_alone_and_together() -> None:
    m, d = motors(8, 3), demand(3)
    many = feasible_ratios(m, d, 1.0, 100.0, 0.1)
    assert many.motor.size > 2
    for k in range(0, len(m), 2):
        one = feasible_ratios(m.take(np.array([k])), d, 1.0, 100.0, 0.1)
        assert np.ravel(one.of(0)) == pytest.approx(np.ravel(many.of(k)), rel=1e-6)
        assert one.best[0] == pytest.approx(many.best[k], rel=1e-3, nan_ok=True)
    fixed = feasible_ratios(m, d, 8.0, 8.0, 0.1)
    largest = judge(m, d, 8.0).largest[:, 0]
    assert set(fixed.motor) == set(np.flatnonzero(largest <= 0.9))


def test_one_motor_under_control_as_in_columns() -> None:
    """The plain floats of one operating point against the columns of a held one."""
    m = motors(9, 11)
    for k in range(len(m)):
        one = drive.Motor.of(m, k, 25.0)
        for speed, torque in ((0.0, 0.02), (120.0, 0.03), (-120.0, -0.03), (90.0, -0.05)):
            point = drive.operating_point(one, speed, torque)
            case = Demand(Cycle.from_points([(torque, speed, 1.0)]))
            cold = judge(replace_thermal(m.take(np.array([k]))), case, 1.0, periodic=False)
            assert abs(point.voltage) == pytest.approx(cold.peak_voltage[0, 0], rel=1e-12)
            assert abs(point.current) == pytest.approx(cold.peak_current_value[0, 0], rel=1e-12)
            assert point.copper_loss == pytest.approx(cold.copper_loss[0, 0], rel=1e-12)
            power = draw(m.take(np.array([k])), case, np.ones(1), np.full(1, 25.0))
            assert max(point.electrical_power, 0) == pytest.approx(power.peak[0], abs=1e-12)
            assert max(-point.electrical_power, 0) == pytest.approx(
                power.peak_returned[0], abs=1e-12
            )


def replace_thermal(m: Machines) -> Machines:
    """The same without thermal figures: such a motor is judged at the ambient."""
    unknown = np.full(len(m), np.nan)
    names = ("winding_housing", "housing_ambient")
    return Machines(
        **{
            **m.columns(),
            **{f"thermal_resistance_{name}": unknown for name in names},
            "thermal_resistance": unknown,
        }
    )


@some
@given(st.integers(0, 10_000))
def test_numbers_and_arrays_of_the_small_formulas(seed: int) -> None:
    rng = np.random.default_rng(seed)
    n = 7
    duty, U = rng.uniform(0, 1, n), rng.uniform(5, 400, n)
    R, L = rng.uniform(0.1, 10, n), 10 ** rng.uniform(-6, -1, n)
    T, beta = rng.uniform(-40, 180, n), rng.choice([0, -0.002, np.nan], n)
    swing, square = two_level_ripple(duty, U, R, L, 20e3)
    waves = space_vector_mean_square(duty * U, U, L, 20e3)
    warm, flux = copper_factor(T), magnet_factor(T, beta)
    steady, lost = steady_temperature(T, U, R, 1.0, 0.0039, beta)
    friction = rng.choice([np.nan, 0.01], n)
    b = rng.choice([np.nan, 0.0, 1e-4], n)
    rubbing = coulomb_torque(friction, L, duty, b, R, U)
    codes = rng.integers(0, 3, n).astype(np.int8)
    for k in range(n):
        one = two_level_ripple(float(duty[k]), float(U[k]), float(R[k]), float(L[k]), 20e3)
        assert [float(x) for x in one] == pytest.approx([swing[k], square[k]], rel=1e-12)
        wave = space_vector_mean_square(float(duty[k] * U[k]), float(U[k]), float(L[k]), 20e3)
        assert float(wave) == pytest.approx(waves[k], rel=1e-12)
        assert float(copper_factor(float(T[k]))) == warm[k]
        assert float(magnet_factor(float(T[k]), float(beta[k]))) == flux[k]
        own, runaway = steady_temperature(
            float(T[k]), float(U[k]), float(R[k]), 1.0, 0.0039, float(beta[k])
        )
        assert float(own) == pytest.approx(steady[k], rel=1e-12, nan_ok=True)
        assert bool(runaway) == lost[k]
        mine = coulomb_torque(*(float(x[k]) for x in (friction, L, duty, b, R, U)))
        assert float(mine) == pytest.approx(rubbing[k], rel=1e-12)
        for convention in ("dc", "peak", "rms"):
            amperes = armature_amperes(2.5, convention, codes)
            assert armature_amperes(2.5, convention, codes[k : k + 1])[0] == amperes[k]
            assert armature_amperes(2.5, convention, codes[k])[()] == amperes[k]


def test_periodic_peaks_alone_and_together() -> None:
    """Bodies of like time constants, so that the cycle is cut alike for each of them."""
    rng = np.random.default_rng(2)
    K, P = 9, 4
    to_housing, to_ambient = rng.uniform(0.5, 2, K), rng.uniform(1, 4, K)
    body = TwoBody(to_housing, to_ambient, 5.0 / to_housing, 80.0 / to_ambient)
    duration = np.array([1.0, 2.0, 0.5, 3.0])
    current, ripple = rng.uniform(-4, 4, (K, P, 2)), rng.uniform(0, 0.5, (K, P))
    friction, R = rng.uniform(0, 2, (K, P, 2, 2)), rng.uniform(0.2, 1.5, K)
    magnet, start = np.full(K, -0.001), np.full(K, 60.0)
    peak, lost = periodic_peak(body, 30.0, duration, current, ripple, friction, R, magnet, start)
    assert np.isfinite(peak).any()
    for k in range(K):
        s = slice(k, k + 1)
        own, runaway = periodic_peak(
            body.take(np.array([k])), 30.0, duration, current[s], ripple[s], friction[s], R[s],
            magnet[s], start[s],
        )  # fmt: skip
        assert own[0] == pytest.approx(peak[k], rel=1e-6, nan_ok=True)
        assert runaway[0] == lost[k]


@pytest.mark.parametrize("kind", list(Commutation))
def test_a_motor_is_adjusted_alone_as_among_others(kind: Commutation) -> None:
    """The adjustment at a given scatter of the table: every motor stands for itself, to what the
    last step leaves."""
    problem = observe(make(np.random.default_rng(5), 7, kind, scatter=0.7).batch)
    many = fit(problem)
    for k in range(7):
        one = fit(problem.take(np.array([k])))
        assert one.x[0] == pytest.approx(many.x[k], rel=1e-6, abs=1e-6, nan_ok=True)
    some_ = fit(problem.take(np.array([5, 1, 5])))
    assert some_.x == pytest.approx(many.x[[5, 1, 5]], rel=1e-6, abs=1e-6, nan_ok=True)


@some
@given(st.lists(st.floats(-1e6, 1e6), min_size=1, max_size=6))
def test_a_unit_takes_a_number_and_a_column_alike(values: list[float]) -> None:
    for text, accepts in (("mNm/A", ("N·m/A",)), ("°F", ("°C",)), ("rpm", ("rad/s",)),
                          ("oz-in", ("N·m",)), ("kg·cm²", ("kg·m²",))):  # fmt: skip
        unit = read_unit(text, accepts)
        column = np.array(values) * unit.factor + unit.offset
        for k, value in enumerate(values):
            assert float(value) * unit.factor + unit.offset == column[k]
            if value > 0:
                assert quantity(f"{value!r} {text}", accepts) == pytest.approx(
                    column[k], rel=1e-12, abs=1e-12
                )
