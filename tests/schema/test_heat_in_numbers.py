"""The way of the heat by what a sheet prints, short cases in numbers worked by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Supply, Surroundings
from motorfolio.schema.operation.heating import continuous_current
from motorfolio.schema.operation.judge import judge
from motorfolio.schema.operation.machines import Machines
from motorfolio.schema.operation.pwm import space_vector_mean_square, two_level_ripple

NAN = math.nan
HELD = Cycle.from_points([(1.0, 100.0, 1.0)])


def warm(rise: float, ambient: float = 25.0, fixed: float = 0.0) -> float:
    """T = T_amb + fixed + rise·(234.5 + T)/259.5, solved for T."""
    return (ambient + fixed + rise * 234.5 / 259.5) / (1 - rise / 259.5)


def heated(surroundings: Surroundings | None = None, cycle: Cycle = HELD, **given):
    """1 N·m at 1 N·m/A is 1 A; with 4 Ω 4 W."""
    columns = {"torque_constant": 1.0, "armature_resistance": 4.0, **given}
    return judge(Machines.of(**columns), Demand(cycle, surroundings=surroundings or Surroundings()))


@pytest.mark.parametrize(
    ("inner", "outer", "total", "sum_", "path"),
    [
        (2.0, 3.0, NAN, 5.0, 3.0), (2.0, 3.0, 9.0, 5.0, 3.0), (2.0, NAN, 9.0, 9.0, 7.0),
        (NAN, 3.0, 9.0, 9.0, 3.0), (NAN, NAN, 9.0, 9.0, 9.0), (9.5, NAN, 9.0, 9.0, 9.0),
        (9.0, NAN, 9.0, 9.0, 9.0), (2.0, NAN, NAN, NAN, NAN), (8.5, NAN, 9.0, 9.0, 0.5),
    ],
)  # fmt: skip
def test_which_resistances_carry_which_heat(inner, outer, total, sum_, path) -> None:
    """Copper's heat goes all the way, friction's from the housing on: the outer part if printed,
    else what the inner leaves of the total, else all. 0.02 N·m at 100 rad/s rub 2 W; the motor's
    torque is 1 N·m with them."""
    found = heated(
        cycle=Cycle.from_points([(0.98, 100.0, 1.0)]), coulomb_torque=0.02,
        thermal_resistance_winding_housing=inner, thermal_resistance_housing_ambient=outer,
        thermal_resistance=total, maximum_winding_temperature=125.0,
    )  # fmt: skip
    T = warm(4 * sum_, 25.0, 2 * path)
    assert found.winding_temperature[0, 0] == pytest.approx(T, rel=1e-9, nan_ok=True)
    assert found.thermal[0, 0] == pytest.approx((T - 25) / 100, rel=1e-9, nan_ok=True)


def test_another_mounting_takes_the_place_of_the_sheets() -> None:
    """A plate of 1 K/W: its own resistance counts, a printed total to the ambient no more, and of
    the sheet's continuous current nothing is left."""
    plate = Surroundings(25.0, 1.0)
    both = heated(plate, thermal_resistance_winding_housing=2.0, thermal_resistance=9.0,
                  thermal_resistance_housing_ambient=3.0)  # fmt: skip
    assert both.winding_temperature[0, 0] == pytest.approx(warm(4 * 3.0), rel=1e-9)
    total = heated(plate, thermal_resistance=9.0, maximum_winding_temperature=100.0)
    assert np.isnan(total.winding_temperature[0, 0])
    assert np.isnan(heated(plate, nominal_current=2.0).thermal[0, 0])
    assert heated(nominal_current=2.0).thermal[0, 0] == pytest.approx(0.25)


@pytest.mark.parametrize(
    ("limit", "rise", "rated", "ambient", "share", "most"),
    [
        (125.0, NAN, NAN, 25.0, 1.0, 100.0), (NAN, 100.0, 40.0, 25.0, 1.0, 115.0),
        (NAN, 100.0, NAN, 25.0, 1.0, 100.0), (125.0, 60.0, 40.0, 45.0, 0.5, 40.0),
        (NAN, NAN, 40.0, 25.0, 1.0, NAN),
    ],
)  # fmt: skip
def test_how_warm_it_may_get(limit, rise, rated, ambient, share, most) -> None:
    """The winding's limit, else the rated rise above the rating's ambient; of what lies between
    that and the ambient the permissible share."""
    found = heated(Surroundings(ambient, None, share), thermal_resistance=5.0,
                   maximum_winding_temperature=limit, rated_temperature_rise=rise,
                   rating_ambient=rated)  # fmt: skip
    T = warm(20.0, ambient)
    assert found.winding_temperature[0, 0] == pytest.approx(T, rel=1e-9)
    assert found.thermal[0, 0] == pytest.approx((T - ambient) / most, rel=1e-9, nan_ok=True)


def test_where_no_rise_is_left() -> None:
    """An ambient at the limit, or above it, is beyond any use; below the rating's ambient plain
    currents tell, above it nothing does."""
    for ambient in (100.0, 120.0):
        found = heated(Surroundings(ambient), thermal_resistance=5.0,
                       maximum_winding_temperature=100.0)  # fmt: skip
        assert found.thermal[0, 0] == np.inf
    for ambient, use in ((40.0, 0.25), (30.0, 0.25), (40.5, NAN)):
        found = heated(Surroundings(ambient), nominal_current=2.0, rating_ambient=40.0)
        assert found.thermal[0, 0] == pytest.approx(use, nan_ok=True)
        assert np.isnan(found.winding_temperature[0, 0])
    thin = heated(Surroundings(25.0, None, 0.5), nominal_current=2.0)
    assert thin.thermal[0, 0] == pytest.approx(0.5)


def test_a_rating_below_its_own_ambient_says_nothing() -> None:
    """A limit of 40 °C in an ambient of 40 °C allows no current of which a share could be taken."""
    found = heated(nominal_current=2.0, rating_ambient=40.0, maximum_winding_temperature=40.0)
    assert np.isnan(found.winding_temperature[0, 0])
    known = heated(nominal_current=2.0, rating_ambient=40.0, maximum_winding_temperature=90.0)
    assert known.winding_temperature[0, 0] == pytest.approx(25 + 50 / 4)
    assert known.thermal[0, 0] == pytest.approx(12.5 / 65)


def test_weak_magnets_take_more_of_a_plain_current() -> None:
    """Magnets 35 K warmer than at 25 °C give (1 − 0.002·35) of the torque constant."""
    found = heated(Surroundings(60.0), nominal_current=2.0, rating_ambient=60.0,
                   magnet_coefficient=-0.002)  # fmt: skip
    assert found.thermal[0, 0] == pytest.approx(0.25 / 0.93**2)


@pytest.mark.parametrize(
    ("nominal", "stall", "speed", "at", "current"),
    [
        (2.0, 3.0, 100.0, 0.0, 3.0), (2.0, 3.0, 100.0, 50.0, 2.5), (2.0, 3.0, 100.0, 150.0, 1.5),
        (2.0, 3.0, 100.0, 400.0, 0.0), (3.0, 2.0, 100.0, 50.0, 2.5), (3.0, 2.0, 100.0, 200.0, 3.0),
        (2.0, 3.0, NAN, 50.0, 2.0), (3.0, 2.0, NAN, 50.0, 2.0), (2.0, NAN, 100.0, 50.0, 2.0),
        (NAN, 3.0, 100.0, 50.0, 3.0), (NAN, NAN, 100.0, 50.0, NAN),
    ],
)  # fmt: skip
def test_continuous_current_over_speed(nominal, stall, speed, at, current) -> None:
    """The line from stall to nominal, falling on behind it, never below nought and never above the
    larger of the two; the smaller where the line's speed is unknown; else the only one."""
    m = Machines.of(torque_constant=1.0, nominal_current=nominal, continuous_stall_current=stall,
                    nominal_speed=speed)  # fmt: skip
    found = continuous_current(m, np.array([at**2]))
    assert found == pytest.approx([current], nan_ok=True)


def test_continuous_current_at_the_motors_speed() -> None:
    """A load at 20 rad/s over a ratio of 5 is a motor at 100: two thirds of the way from 3 A at
    standstill to 1.5 A at 150 rad/s; 1 N·m of the load is 0.2 A."""
    m = Machines.of(torque_constant=1.0, nominal_current=1.5, continuous_stall_current=3.0,
                    nominal_speed=150.0)  # fmt: skip
    found = judge(m, Demand(Cycle.from_points([(1.0, 20.0, 1.0)])), 5.0)
    assert found.thermal[0, 0] == pytest.approx((0.2 / 2.0) ** 2)


# ---- ripple


def rippling(**given):
    columns = {"torque_constant": 0.5, "armature_resistance": 2.0, "armature_inductance": 1e-3,
               "thermal_resistance": 3.0, "maximum_winding_temperature": 125.0}  # fmt: skip
    return Machines.of(**{**columns, **given})


def supplied(cycle: Cycle, ambient: float = 25.0, frequency: float | None = 5e3) -> Demand:
    return Demand(cycle, supply=Supply(100.0, 1.0, 0.0, frequency),
                  surroundings=Surroundings(ambient))  # fmt: skip


def test_ripple_at_one_voltage() -> None:
    """1 N·m at 100 rad/s: 2 A on 2 Ω and 50 V; its heat raises the resistance, and so the voltage:
    the settled state of both, iterated by hand."""
    found = judge(rippling(), supplied(HELD))
    T = 25.0
    for _ in range(60):
        R = 2.0 * (234.5 + T) / 259.5
        swing, square = (float(x) for x in
                         two_level_ripple((50 + 2 * R) / 100, 100.0, R, 1e-3, 5e3))  # fmt: skip
        T = 25 + 3.0 * R * (4.0 + square)
    assert found.winding_temperature[0, 0] == pytest.approx(T, rel=1e-8)
    assert found.ripple_current[0, 0] == pytest.approx(math.sqrt(square), rel=1e-7)
    assert found.ripple_peak_to_peak[0, 0] == pytest.approx(swing, rel=1e-7)
    cold = float(two_level_ripple(0.54, 100.0, 2.0, 1e-3, 5e3)[1])  # the worse of cold and warm
    assert cold > square
    assert found.rms_current[0, 0] == pytest.approx(math.sqrt(4 + cold), rel=1e-7)
    dead = judge(rippling(), supplied(HELD, frequency=None))
    assert (dead.ripple_current[0, 0], dead.ripple_peak_to_peak[0, 0]) == (0, 0)
    assert not dead.ripple_unknown[0, 0]


@pytest.mark.parametrize("speeds", [
    (20.0, 120.0), (-150.0, 150.0), (30.0, -130.0), (-90.0, 20.0), (40.0, 60.0), (120.0, 180.0),
    (-120.0, -180.0), (-160.0, -110.0), (-30.0, -80.0),
])  # fmt: skip
def test_largest_swing_is_nearest_to_half_the_supply(speeds) -> None:
    """On a ramp of voltage the duty cycle nearest to one half; through standstill from nought."""
    cycle = Cycle([0.01, 0.01], speeds, speeds[::-1], [0, 0], [0, 0])
    m = rippling(thermal_resistance=NAN, armature_resistance=0.01, rotor_inertia=0.0)
    found = judge(m, supplied(cycle))
    volts = 0.5 * np.linspace(*speeds, 4001)
    swing, square = two_level_ripple(np.abs(volts) / 100, 100.0, 0.01, 1e-3, 5e3)
    assert found.ripple_peak_to_peak[0, 0] == pytest.approx(swing.max(), rel=1e-6)
    mean = (square[1:] + square[:-1]).mean() / 2
    assert found.ripple_current[0, 0] ** 2 == pytest.approx(mean, rel=1e-6)
    slow = [x / 2 for x in speeds]
    geared = judge(m, supplied(Cycle([0.01, 0.01], slow, slow[::-1], [0, 0], [0, 0])), 2.0)
    assert geared.ripple_peak_to_peak[0, 0] == pytest.approx(swing.max(), rel=1e-6)
    assert geared.ripple_current[0, 0] == pytest.approx(found.ripple_current[0, 0], rel=1e-12)
    still = judge(m, supplied(Cycle.from_points([(0.0, 0.0, 1.0)])))
    assert still.ripple_peak_to_peak[0, 0] == 0


def test_ripple_of_sinusoidal_currents_at_one_voltage() -> None:
    """U² = (Ra·Ia + Km·ω)² + (p·ω·La·Ia)² at 2 A and 100 rad/s, the voltage's share of a bus of
    100 V; without pole pairs the part at a right angle is left out."""
    for pairs, across in ((4.0, 4 * 100 * 5e-3 * 2), (NAN, 0.0)):
        m = rippling(commutation=2, pole_pairs=pairs, thermal_resistance=NAN,
                     armature_inductance=5e-3, armature_resistance=3.0)  # fmt: skip
        found = judge(m, supplied(HELD))
        U = math.hypot(56.0, across)
        expected = float(space_vector_mean_square(U, 100.0, 5e-3, 5e3))
        assert found.ripple_current[0, 0] == pytest.approx(math.sqrt(expected), rel=1e-9)
        assert np.isnan(found.ripple_peak_to_peak[0, 0])


def test_a_plain_current_counts_its_ripple() -> None:
    """Without any temperature: (I² + ripple²)/I_cont², the ripple that of the cold motor."""
    m = rippling(thermal_resistance=NAN, maximum_winding_temperature=NAN, nominal_current=4.0)
    found = judge(m, supplied(HELD))
    square = float(two_level_ripple(0.54, 100.0, 2.0, 1e-3, 5e3)[1])
    assert square > 0.1
    assert found.thermal[0, 0] == pytest.approx((4 + square) / 16, rel=1e-9)


# ---- slow and fast rhythms


def test_a_slow_rhythm_swings_and_a_fast_one_does_not() -> None:
    """4 A for half of the time. In hours the winding comes to the steady state of the load, in
    milliseconds it stays at that of the mean; without time constants nothing tells but the mean."""

    def peak(period: float, periodic: bool = True, **given) -> float:
        columns = {
            "thermal_resistance_winding_housing": 1.0,
            "thermal_resistance_housing_ambient": 2.0,
            "thermal_time_constant_winding": 10.0,
            "thermal_time_constant_housing": 200.0,
        }
        on = Cycle.from_points([(4.0, 0.0, period / 2), (0.0, 0.0, period / 2)])
        m = Machines.of(torque_constant=1.0, armature_resistance=1.0, **{**columns, **given})
        return float(judge(m, Demand(on), periodic=periodic).winding_temperature[0, 0])

    steady, mean = warm(48.0), warm(24.0)
    assert peak(1e5) == pytest.approx(steady, rel=1e-4)
    assert peak(1e-3) == pytest.approx(mean, rel=1e-9)
    assert mean * 1.0001 < peak(5.0) < steady
    assert peak(1e5, periodic=False) == pytest.approx(mean, rel=1e-9)
    for name in ("winding", "housing"):
        assert peak(1e5, **{f"thermal_time_constant_{name}": NAN}) == pytest.approx(mean, rel=1e-9)
    only_total = {"thermal_resistance_winding_housing": NAN, "thermal_resistance": 3.0}
    assert peak(1e5, **only_total) == pytest.approx(mean, rel=1e-9)


def test_time_constants_belong_to_the_sheets_mounting() -> None:
    """C = τ/Rth of the sheet's own resistances; a better plate makes the housing faster. Within a
    rhythm much shorter than the winding's the swing is that of its heat capacity alone."""
    R1, R2, own, period, amperes = 1.6, 2.0, 0.5, 0.4, 3.0
    on = Cycle.from_points([(amperes, 0.0, period / 2), (0.0, 0.0, period / 2)])
    m = Machines.of(
        torque_constant=1.0,
        armature_resistance=1.0,
        thermal_resistance_winding_housing=R1,
        thermal_resistance_housing_ambient=R2,
        thermal_time_constant_winding=10.0,
        thermal_time_constant_housing=200.0,
    )
    for plate, outer in ((None, R2), (own, own)):
        found = judge(m, Demand(on, surroundings=Surroundings(25.0, plate)))
        mean = warm(amperes**2 / 2 * (R1 + outer))
        loss = amperes**2 * (234.5 + mean) / 259.5
        half_swing = loss / 2 * (period / 2) / (10.0 / R1) / 2
        assert found.winding_temperature[0, 0] == pytest.approx(mean + half_swing, abs=0.003)
        assert half_swing > 0.03
