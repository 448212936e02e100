"""The search for feasible ratios on curves whose edges are known in closed form."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand
from motorfolio.schema.operation.machines import Machines
from motorfolio.schema.operation.ratios import GRID, feasible_ratios, least, ratio_grid, reach

IDLE = Demand(Cycle.from_points([(1.0, 1.0, 1.0)]))
STEP = math.log(100.0) / (GRID - 1)
"""Between two ratios of the grid from 1 to 100, in logarithms."""


def searched(*curves, loss=None, low: float = 1.0, high: float = 100.0, reserve: float = 0.0):
    """Intervals of motors, each with its own curve over the logarithm of the ratio."""

    def cases(motor, ratio):
        x = np.log(ratio)
        excess = np.array([curves[m](at) for m, at in zip(motor, x, strict=True)], float)
        return excess, x if loss is None else loss(motor, x)

    machines = Machines.of(torque_constant=np.ones(len(curves)))
    return feasible_ratios(machines, IDLE, low, high, reserve, cases=cases)


def within(middle: float, half: float):
    """Feasible nearer to `middle` than `half`."""
    return lambda x: abs(x - middle) - half


def edges(found, motor: int = 0) -> list[tuple[float, float]]:
    return [(math.log(low), math.log(high)) for low, high in found.of(motor)]


@pytest.mark.parametrize(
    ("begin", "end"),
    [
        (0.3, 1.7), (0.5 * STEP, 2.0), (1.5 * STEP, 3.4 * STEP), (2.0, 59.5 * STEP),
        (58.4 * STEP, 59.6 * STEP), (0.5 * STEP, 59.5 * STEP), (20.2 * STEP, 21.3 * STEP),
    ],
)  # fmt: skip
def test_both_edges(begin: float, end: float) -> None:
    """To 1e-7 of the range, in the first and the last step of the grid, too."""
    found = searched(within((begin + end) / 2, (end - begin) / 2))
    assert edges(found) == [pytest.approx((begin, end), abs=1e-6)]


def test_the_ends_of_the_range_are_exact() -> None:
    assert searched(lambda x: -1.0).of(0) == [(1.0, 100.0)]
    first = searched(lambda x: x - 1.5).of(0)
    assert first == [(1.0, pytest.approx(math.exp(1.5), rel=1e-6))]
    last = searched(lambda x: 1.5 - x, low=3.0, high=70.0).of(0)
    assert last == [(pytest.approx(math.exp(1.5), rel=1e-6), 70.0)]
    assert searched(lambda x: 0.0).of(0) == [(1.0, 100.0)]  # at the limit is within it
    for nothing in (lambda x: 1.0, lambda x: math.inf, lambda x: 1e-3 + (x - 2) ** 2):
        found = searched(nothing)
        assert (found.motor.size, found.of(0)) == (0, [])
        assert np.isnan(found.best[0])


@pytest.mark.parametrize("middle", [0.4, 1.5, 30.5, 58.7, 59.6])
@pytest.mark.parametrize("width", [0.02, 0.3])
def test_an_interval_between_two_ratios_of_the_grid(middle: float, width: float) -> None:
    middle, half = middle * STEP, width * STEP / 2
    found = searched(within(middle, half))
    assert edges(found) == [pytest.approx((middle - half, middle + half), abs=1e-6)]
    gap = searched(lambda x: half - abs(x - middle))
    assert edges(gap) == [
        pytest.approx((0, middle - half), abs=1e-6),
        pytest.approx((middle + half, 60 * STEP), abs=1e-6),
    ]


def test_every_motor_has_as_many_intervals_as_it_has() -> None:
    """None, one, two of them and several hidden between grid points, side by side."""
    near = [within(k * STEP, 0.1 * STEP) for k in (10.5, 25.4, 40.6)]
    found = searched(
        lambda x: 1.0,
        within(2.0, 0.5),
        lambda x: min(within(1.0, 0.2)(x), within(3.0, 0.4)(x)),
        lambda x: min(curve(x) for curve in near),
        lambda x: -1.0,
    )
    assert found.motor.tolist() == [1, 2, 2, 3, 3, 3, 4]
    assert edges(found, 1) == [pytest.approx((1.5, 2.5), abs=1e-6)]
    assert edges(found, 2) == [pytest.approx((0.8, 1.2), abs=1e-6),
                               pytest.approx((2.6, 3.4), abs=1e-6)]  # fmt: skip
    assert np.array(edges(found, 3)) / STEP == pytest.approx(
        np.array([(10.4, 10.6), (25.3, 25.5), (40.5, 40.7)]), abs=1e-4
    )
    assert found.of(4) == [(1.0, 100.0)]


def test_a_hidden_interval_is_looked_for_as_far_as_heat_can_fall() -> None:
    """From one ratio of the grid to the next by the cube of their step at most, less with a
    reserve."""
    deep = reach(math.exp(STEP)) - 1
    assert deep == pytest.approx(math.exp(3 * STEP) - 1)
    for share, size in ((0.95, 1), (1.2, 0)):

        def curve(x: float, share=share) -> float:
            return min(1.0, 2 * share * deep * (abs(x - 20.5 * STEP) / STEP) ** 2 * 2 - 1e-4)

        assert searched(curve).motor.size == size
        assert searched(curve, reserve=0.5).motor.size == 0


@pytest.mark.parametrize(
    ("middle", "best"), [(1.3, 1.3), (0.2, 0.5), (4.0, 2.5), (0.5, 0.5), (2.4999, 2.4999)]
)
def test_the_ratio_of_least_loss(middle: float, best: float) -> None:
    """Inside the interval to 1e-5 of it; at its end exactly there."""
    found = searched(within(1.5, 1.0), loss=lambda motor, x: 2 + (x - middle) ** 2)
    assert math.log(found.best[0]) == pytest.approx(best, abs=2e-4)
    if middle < 0.5:
        assert found.best[0] == found.low[0]
    if middle > 2.5:
        assert found.best[0] == found.high[0]


def test_the_better_of_two_intervals() -> None:
    def curve(x: float) -> float:
        return min(within(1.0, 0.2)(x), within(3.0, 0.4)(x))

    towards = np.array([0.9, 3.1, 2.2, 1.8])
    found = searched(*[curve] * 4, loss=lambda motor, x: (x - towards[motor]) ** 2)
    assert np.log(found.best) == pytest.approx([0.9, 3.1, 2.6, 1.2], abs=1e-4)
    assert found.motor.tolist() == [0, 0, 1, 1, 2, 2, 3, 3]
    ends = searched(lambda x: -1.0, loss=lambda motor, x: -x)
    assert ends.best[0] == 100.0
    assert searched(lambda x: -1.0, loss=lambda motor, x: x).best[0] == 1.0


def test_one_ratio_only() -> None:
    """A range without width is its own interval where the motor does it."""
    found = searched(lambda x: -1.0, lambda x: 0.0, lambda x: 1e-9, low=7.0, high=7.0)
    assert found.motor.tolist() == [0, 1]
    assert (found.low.tolist(), found.high.tolist()) == ([7.0, 7.0], [7.0, 7.0])
    assert found.best[:2].tolist() == [7.0, 7.0]
    assert np.isnan(found.best[2])
    assert ratio_grid(7.0, 7.0).tolist() == [7.0]


def test_steps_of_the_grid() -> None:
    grid = ratio_grid(2.0, 50.0)
    assert (grid[0], grid[-1]) == (2.0, 50.0)
    assert np.diff(np.log(grid)) == pytest.approx(math.log(25) / (grid.size - 1))


@pytest.mark.parametrize("at", [0.0, 0.013, 0.3, 0.5, 0.77, 0.999, 1.0])
def test_a_minimum_by_golden_section(at: float) -> None:
    """Wherever it lies between two ends, for several at once; flat and mirrored alike."""
    low, high = np.array([0.0, -5.0, 100.0]), np.array([1.0, 5.0, 103.0])
    true = low + at * (high - low)
    for curve in (np.abs, np.square):
        x, y = least(lambda x, curve=curve: curve(x - true) + 4.0, low, high)
        assert np.abs(x - true).max() <= 2e-4 * (high - low).max()
        assert y == pytest.approx(curve(x - true) + 4.0, rel=1e-12)
        assert ((low <= x) & (x <= high)).all()
    assert low.tolist() == [0.0, -5.0, 100.0]


def test_an_unknown_limit_leaves_no_ratio() -> None:
    """Without a thermal figure no ratio is feasible; with one, those that copper allows: 3 N·m on
    the load are 3/N A, 1 Ω and 1 K/W, half of a rise of 1 K is
    granted."""
    columns = {"torque_constant": 1.0, "armature_resistance": 1.0}
    m = Machines.of(**columns, thermal_resistance=[1.0, np.nan], maximum_winding_temperature=26.0)
    still = Demand(Cycle.from_points([(3.0, 0.0, 1.0)]))
    found = feasible_ratios(m, still, 1.0, 50.0, 0.5)
    assert found.motor.tolist() == [0]
    # I²·(1 + α·0.5 K) is half of what the limit allows
    assert found.low[0] == pytest.approx(3 * math.sqrt(2 * 260 / 259.5), rel=1e-6)
    assert (found.high[0], found.best[0]) == (50.0, 50.0)
    fixed = feasible_ratios(m, still, 4.0, 4.0)
    assert (fixed.motor.tolist(), fixed.best.tolist()[:1]) == ([0], [4.0])


def test_the_peak_of_a_slow_rhythm_counts_unless_the_mean_is_asked_for() -> None:
    """3 A for half of an hour heat as if they stayed, 27 K and more; on average half of that."""
    m = Machines.of(
        torque_constant=1.0, armature_resistance=1.0, thermal_resistance_winding_housing=1.0,
        thermal_resistance_housing_ambient=2.0, thermal_time_constant_winding=5.0,
        thermal_time_constant_housing=60.0, maximum_winding_temperature=45.0,
    )  # fmt: skip
    slow = Demand(Cycle.from_points([(3.0, 0.0, 1800.0), (0.0, 0.0, 1800.0)]))
    assert feasible_ratios(m, slow, 1.0, 1.0).motor.size == 0
    assert feasible_ratios(m, slow, 1.0, 1.0, periodic=False).motor.size == 1
