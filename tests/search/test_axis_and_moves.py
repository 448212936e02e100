"""Loads and moves against worked examples and kinematics."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from motorfolio.catalog.search.documents import load_summary
from motorfolio.schema.operation.axis import GRAVITY, Axis
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.moves import MoveError, move, one_after_the_other, ramps, rest

RPM = 2 * math.pi / 60


def test_hoisted_mass_through_a_transmission() -> None:
    """G.K. Dubey, Fundamentals of Electrical Drives, ex. 2.1: 1000 kg lifted at 1.5 m/s by a motor
    at 1420 rpm through 85 %, beside 10 N·m through a gear of 0.1 and 90 %, inertias 0.2 and
    10 kg·m²: J = 0.40175 kg·m², T = 117.53 N·m (as recomputed by a companion)."""
    hoist = Axis(travel=1.5 / (1420 * RPM), mass=1000, slope=math.pi / 2, efficiency=0.85)
    shaft = hoist.at_shaft(Cycle.from_points([(0.0, 1.5, 1.0)]))
    assert 0.2 + 0.1**2 * 10 + hoist.reflected_inertia == pytest.approx(0.40175, abs=5e-6)
    torque = 0.1 * 10 / 0.9 + shaft.torque_start[0]
    # the book has 9.81 m/s²
    assert torque == pytest.approx(117.53, rel=1e-3)
    assert shaft.speed_start[0] == pytest.approx(1420 * RPM)


def test_reversing_duty_cycle() -> None:
    """Dubey, ex. 4.2: 10⁴ kg·m² at 200 rpm, 25 kN·m for 10 s, 20 kN·m for 15 s, reversed in 5 s:
    rms torque 45 975 N·m, 83 776 N·m while it turns round (companion; its answer differs from
    the book's)."""
    n = 200 * RPM
    time = [0, 10, 10, 11, 16, 17, 17, 32, 32, 33, 38, 39]
    speed = [n, n, n, n, -n, -n, -n, -n, -n, -n, n, n]
    torque = [25e3, 25e3, 0, 0, 0, 0, -20e3, -20e3, 0, 0, 0, 0]
    summary = load_summary(Cycle.from_rows(time, speed, torque), 1e4)
    assert summary["rms_torque"]["value"] == pytest.approx(45974.87, rel=1e-6)
    assert summary["peak_torque"]["value"] == pytest.approx(83775.8, rel=1e-6)


def test_rms_of_a_ramp() -> None:
    """Dubey, ex. 4.3: 0 to 400 kW in 5 min, 500 kW for 5, −400 kW for 4, rest 2: 367 kW (at
    constant speed torque goes as power)."""
    cycle = Cycle.from_rows(
        [0, 300, 300, 600, 600, 840, 840, 960],
        [1.0] * 8,
        [0, 400e3, 500e3, 500e3, -400e3, -400e3, 0, 0],
    )
    assert load_summary(cycle, 0.0)["rms_torque"]["value"] == pytest.approx(367.14e3, rel=1e-5)


def test_thirds_and_triangle() -> None:
    """s = (2/3)·v·t and s = v·t/2 (kinematics of constant acceleration)."""
    thirds = ramps(0.6, profile="thirds", time=1.2)
    assert thirds.top == pytest.approx(0.75)
    assert (thirds.ramp, thirds.cruise) == pytest.approx((0.4, 0.4))
    triangle = ramps(0.6, profile="triangular", time=1.2)
    assert triangle.top == pytest.approx(1.0)
    assert triangle.cruise == pytest.approx(0.0, abs=1e-12)


@settings(max_examples=200, deadline=None)
@given(
    distance=st.floats(1e-3, 1e3),
    time=st.floats(1e-2, 1e2),
    share=st.floats(0.02, 0.5),
    profile=st.sampled_from(["trapezoidal", "s-curve"]),
    told=st.sampled_from(
        [("time", "top_speed"), ("time", "acceleration"), ("top_speed", "acceleration")]
    ),
    way=st.sampled_from([1, -1]),
)
def test_a_move_goes_its_distance(distance, time, share, profile, told, way) -> None:
    """Whatever two of three are told, the speed integrates to the distance and ends at rest."""
    top = distance / (time * (1 - share))
    all_told = {"time": time, "top_speed": top, "acceleration": top / (share * time)}
    cycle = move(way * distance, profile=profile, **{key: all_told[key] for key in told})
    travelled = ((cycle.speed_start + cycle.speed_end) / 2 @ cycle.duration).item()
    assert travelled == pytest.approx(way * distance, rel=1e-6)
    assert cycle.period == pytest.approx(time, rel=1e-6)
    assert abs(cycle.speed_start[0]) + abs(cycle.speed_end[-1]) < 1e-9 * top
    assert np.abs(cycle.speed_end).max() == pytest.approx(top, rel=1e-6)


def test_s_curve_peak_and_rms_acceleration() -> None:
    """With a quarter of each ramp to rise and a quarter to fall the acceleration peaks at 4/3 of
    the mean, and its rms over the ramp is √(2/3) of the peak (integral of a trapezium)."""
    cycle = move(1.0, profile="s-curve", time=3.0)
    acceleration = (cycle.speed_end - cycle.speed_start) / cycle.duration
    mean = 0.5 / 1.0  # v = 1/(3·(2/3)) over a ramp of a second
    assert np.abs(acceleration).max() == pytest.approx(4 / 3 * mean, rel=1e-9)
    up = acceleration > 1e-9
    square = (acceleration[up] ** 2 @ cycle.duration[up]) / cycle.duration[up].sum()
    assert math.sqrt(square) == pytest.approx(math.sqrt(2 / 3) * 4 / 3 * mean, rel=0.01)


@pytest.mark.parametrize(
    ("profile", "told"),
    [
        ("trapezoidal", {"time": 1.0}),
        ("thirds", {"time": 1.0, "top_speed": 3.0}),
        ("trapezoidal", {"time": 1.0, "top_speed": 0.9}),
        ("trapezoidal", {"time": 1.0, "top_speed": 2.1}),
        ("trapezoidal", {"time": 1.0, "acceleration": 3.9}),
    ],
)
def test_moves_that_cannot_be(profile, told) -> None:
    with pytest.raises(MoveError):
        ramps(1.0, profile=profile, **told)


def test_vertical_axis_with_counterweight() -> None:
    """Up, down and holding: weight always pulls down, friction opposes, none at standstill."""
    axis = Axis(travel=0.02, mass=12, counterweight=4, friction=15, slope=math.pi / 2)
    cycle = one_after_the_other([move(0.6, time=1.2), rest(1.0), move(-0.6, time=1.2)])
    shaft = axis.at_shaft(cycle)
    weight = 8 * GRAVITY
    up, held, down = shaft.torque_start[1], shaft.torque_start[3], shaft.torque_start[5]
    assert (up, held, down) == pytest.approx(
        ((weight + 15) * 0.02, weight * 0.02, (weight - 15) * 0.02)
    )
    assert axis.reflected_inertia == pytest.approx(16 * 0.02**2)
    assert axis.separate_inertia == axis.reflected_inertia


def test_a_screw_loses_both_ways() -> None:
    """Through a screw of 50 %: lifting costs twice the torque, lowering gives back half."""
    axis = Axis(travel=0.005 / (2 * math.pi), mass=100, slope=math.pi / 2, efficiency=0.5)
    shaft = axis.at_shaft(Cycle.from_points([(0, 0.1, 1), (0, -0.1, 1), (0, 0, 1)]))
    ideal = 100 * GRAVITY * 0.005 / (2 * math.pi)
    assert shaft.torque_start == pytest.approx([2 * ideal, ideal / 2, ideal])
    assert axis.separate_inertia == 0
    # the mass's acceleration passes the screw, and turns the power round where it must
    ramp = axis.at_shaft(Cycle.from_rows([0, 0.1, 0.2], [0, 0.1, 0], [0, 0, 0]))
    pushed = 100 * (GRAVITY + 1.0) * 0.005 / (2 * math.pi)
    assert ramp.torque_start[0] == pytest.approx(2 * pushed)


def test_friction_turns_with_the_motion() -> None:
    """A segment that passes zero speed is cut there."""
    axis = Axis(friction=2.0)
    shaft = axis.at_shaft(Cycle.from_rows([0, 1, 2], [1, -1, 1], [0, 0, 0]))
    assert shaft.torque_start.tolist() == [2, -2, -2, 2]
    assert shaft.period == pytest.approx(2)
