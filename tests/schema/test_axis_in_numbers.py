"""Loads on shafts and axes, short cases in numbers worked by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.operation.axis import GRAVITY, Axis
from motorfolio.schema.operation.cycle import Cycle, CycleError


def rows(cycle: Cycle) -> list[tuple[float, ...]]:
    columns = (cycle.duration, cycle.speed_start, cycle.speed_end, cycle.torque_start,
               cycle.torque_end)  # fmt: skip
    return [tuple(round(float(x), 9) for x in row) for row in zip(*columns, strict=True)]


def test_a_reversal_is_cut_where_it_stands_still() -> None:
    """From 3 to −1 rad/s in 4 s: standstill after 3 s, where a force that runs from 2 to 10 N·m is
    8; friction of 0.5 N·m turns round there."""
    cycle = Cycle([4.0, 1.0], [3.0, -1.0], [-1.0, -1.0], [2.0, 5.0], [10.0, 5.0])
    shaft = Axis(friction=0.5).at_shaft(cycle)
    assert rows(shaft) == [(3, 3, 0, 2.5, 8.5), (1, 0, -1, 7.5, 9.5), (1, -1, -1, 4.5, 4.5)]
    assert shaft.stretches.tolist() == [0, 1, 2]


def test_a_screw_drives_and_brakes() -> None:
    """η = 1/2 on a lever of 0.1 m at 2 m/s: 30 N driving are 60, 30 N braking 15, and a force that
    runs from −20 to 60 N changes side after a quarter of the time, within the same stretch."""
    axis = Axis(travel=0.1, efficiency=0.5)
    cycle = Cycle([1, 1, 4, 1], [2, 2, 2, 2], [2, 2, 2, 2], [30, -30, -20, 30], [30, -30, 60, 30])
    shaft = axis.at_shaft(cycle)
    assert rows(shaft) == [
        (1, 20, 20, 6, 6), (1, 20, 20, -1.5, -1.5), (1, 20, 20, -1, 0), (3, 20, 20, 0, 12),
        (1, 20, 20, 6, 6),
    ]  # fmt: skip
    assert shaft.stretches.tolist() == [0, 1, 2, 2, 3]
    back = axis.at_shaft(Cycle([1, 1], [-2, 0], [-2, 0], [-30, -30], [-30, -30]))
    assert rows(back) == [(1, -20, -20, -6, -6), (1, 0, 0, -3, -3)]  # held: nothing passes


def test_without_losses_nothing_more_is_cut() -> None:
    """A force that changes its sign leaves a lossless axis in one piece."""
    cycle = Cycle([4.0], [2.0], [2.0], [-20.0], [60.0])
    assert rows(Axis(travel=0.1).at_shaft(cycle)) == [(4, 20, 20, -2, 6)]
    assert rows(Axis(friction=1.0).at_shaft(cycle)) == [(4, 2, 2, -19, 61)]


def test_a_screw_carries_what_speeds_the_mass_up() -> None:
    """3 kg and a counterweight of 1 kg from 0 to 4 m/s in 2 s: 8 N beside the weight of 2 kg; at
    η = 0.8 on a lever of 0.5 m."""
    axis = Axis(travel=0.5, mass=3, counterweight=1, slope=math.pi / 2, efficiency=0.8)
    shaft = axis.at_shaft(Cycle([2.0, 2.0], [0.0, 4.0], [4.0, 0.0], [0.0, 0.0], [0.0, 0.0]))
    up, down = 2 * GRAVITY + 8, 2 * GRAVITY - 8
    assert rows(shaft) == [
        (2, 0, 8, round(up / 0.8 * 0.5, 9), round(up / 0.8 * 0.5, 9)),
        (2, 8, 0, round(down / 0.8 * 0.5, 9), round(down / 0.8 * 0.5, 9)),
    ]
    assert axis.separate_inertia == 0.0
    assert Axis(travel=0.5, mass=3, inertia=0.25, efficiency=0.8).separate_inertia == 0.25
    assert Axis(travel=0.5, mass=3, counterweight=1, inertia=0.25).separate_inertia == 1.25


def test_an_axis_at_rest_holds_its_weight() -> None:
    axis = Axis(travel=0.2, mass=5, slope=math.pi / 6, friction=100.0, steady=1.5, inertia=3.0)
    assert axis.gravity == pytest.approx(5 * GRAVITY / 2)
    assert axis.holding == pytest.approx(5 * GRAVITY / 2 + 1.5)
    still = axis.at_shaft(Cycle.from_points([(2.0, 0.0, 1.0)]))
    assert still.torque_start[0] == pytest.approx((2 + 1.5 + 2.5 * GRAVITY) * 0.2)
    assert axis.reflected_inertia == pytest.approx(3 + 5 * 0.04)


def test_bends_of_one_stretch_stay_one_when_the_force_turns() -> None:
    """Two segments of one stretch; the force turns in the second: still one stretch."""
    cycle = Cycle([1, 2, 1], [0, 1, 3], [1, 3, 3], [-1, -1, 3], [-1, 3, 3], np.array([4, 4, 9]))
    shaft = Axis(travel=1.0, efficiency=0.5).at_shaft(cycle)
    assert shaft.duration.tolist() == [1, 0.5, 1.5, 1]
    assert shaft.stretches.tolist() == [0, 0, 0, 1]
    assert shaft.torque_start.tolist() == [-0.5, -0.5, 0, 6]
    assert shaft.speed_end.tolist() == [1, 1.5, 3, 3]
    # speed turns in the second segment of the stretch, and then it is another
    turning = Cycle([1, 2], [2, 1], [1, -1], [0, 0], [0, 0], np.array([4, 4]))
    assert Axis(friction=1.0).at_shaft(turning).stretches.tolist() == [0, 0, 1]


def test_a_table_of_one_row_is_no_cycle() -> None:
    for rows_given in ([], [0.0]):
        with pytest.raises(CycleError, match="fewer than two rows"):
            Cycle.from_rows(rows_given, rows_given, rows_given)
    assert Cycle.from_rows([0, 2], [1, 1], [3, 5]).torque_end.tolist() == [5]
