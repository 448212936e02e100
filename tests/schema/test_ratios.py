"""Feasible gear ratios against bracketed roots of a second, plain evaluation of one motor."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from motorfolio.schema.operation.judge import (
    Cycle,
    Demand,
    Gearing,
    Machines,
    Verdict,
    judge,
)
from motorfolio.schema.operation.ratios import feasible_ratios, ratio_grid

from .made_up_motors import as_plain, demand, demand_plain, motors, segments
from .plain_motor import judge_plain, largest


@pytest.mark.parametrize("seed", range(3))
def test_plain_evaluation_agrees(seed: int) -> None:
    """Each utilisation of 40 motors at three ratios, columns against plain floats."""
    machines, asked = motors(40, seed), demand(seed)
    ratios = [2.0, 9.0, 40.0]
    result = judge(machines, asked, ratios)
    cycle, plain = segments(asked.cycle), demand_plain(asked)
    for i in range(len(machines)):
        for r, ratio in enumerate(ratios):
            expected = judge_plain(as_plain(machines, i), cycle, ratio, plain)
            assert result.runaway[i, r] == np.isinf(expected["thermal"])
            for name in ("voltage", "peak_current", "peak_torque", "speed"):
                found = getattr(result, name)[i, r]
                # The plain one samples the inner peaks of the voltage.
                assert found == pytest.approx(expected[name], rel=2e-5), (name, i, ratio)
            if not result.runaway[i, r]:
                assert result.thermal[i, r] == pytest.approx(expected["thermal"], rel=1e-6)


@pytest.mark.parametrize("seed", range(3))
def test_edges_are_roots(seed: int) -> None:
    """Edges of the feasible set within 1e-5 of scipy's brentq; none outside, none missing."""
    machines, asked = motors(24, 100 + seed), demand(seed)
    found = feasible_ratios(machines, asked, 1.0, 100.0, reserve=0.1)
    cycle, plain = segments(asked.cycle), demand_plain(asked)
    tried = np.geomspace(1, 100, 120)
    edges = 0
    for i in range(len(machines)):
        motor = as_plain(machines, i)

        def excess(ratio: float, motor=motor) -> float:
            return min(largest(judge_plain(motor, cycle, ratio, plain, 60)), 1e3) - 0.9

        values = [excess(ratio) for ratio in tried]
        mine = found.of(i)
        for ratio, value in zip(tried, values, strict=True):
            if abs(value) > 1e-3:
                assert any(low <= ratio <= high for low, high in mine) == (value < 0), (i, ratio)
        expected = [
            brentq(excess, a, b, rtol=1e-9)
            for a, b, x, y in zip(tried, tried[1:], values, values[1:], strict=False)
            if x * y < 0
        ]
        own = [edge for interval in mine for edge in interval if 1.0 < edge < 100.0]
        if len(own) == len(expected):
            assert own == pytest.approx(expected, rel=2e-4)
            edges += len(own)
        if mine:
            assert any(low <= found.best[i] <= high for low, high in mine)
        else:
            assert np.isnan(found.best[i])
    assert edges > 12


def test_interval_between_two_grid_ratios_is_found() -> None:
    """A motor whose feasible ratios all lie between two of the grid is found all the same."""
    machines, asked = motors(16, 5), demand(1)
    grid = ratio_grid(1.0, 100.0)
    finest = np.geomspace(1, 100, 601)
    result = judge(machines, asked, finest)
    least = result.largest.min(axis=1)
    at = finest[result.largest.argmin(axis=1)]
    inside = (at > 1) & (at < 100) & np.isfinite(least)
    assert inside.sum() > 5
    for i in np.flatnonzero(inside):
        coarse = judge(machines.take(np.array([i])), asked, grid).largest.min()
        if coarse <= least[i] * (1 + 1e-6):
            continue
        # A reserve between the two: no ratio of the grid will do.
        reserve = 1 - (coarse + least[i]) / 2
        one = machines.take(np.array([i]))
        found = feasible_ratios(one, asked, 1.0, 100.0, reserve)
        assert found.motor.size == 1
        assert found.low[0] <= at[i] <= found.high[0]


def test_best_ratio_matches_inertias() -> None:
    """With inertia only the least current is at N = √(J_L/J), the matched inertia (Lynch & Park,
    Modern Robotics, §8.9, the title checked only; derived from T = (J·N + J_L/N)·a)."""
    motor = Machines.of(
        torque_constant=0.1,
        armature_resistance=1.0,
        rotor_inertia=1e-3,
        thermal_resistance=1.0,
        maximum_winding_temperature=155.0,
    )
    cycle = Cycle.from_rows([0, 1, 2], [0, 1, 0], [0, 0, 0])
    found = feasible_ratios(motor, Demand(cycle, Gearing(0.05)), 1.0, 100.0)
    assert found.best[0] == pytest.approx(np.sqrt(50), rel=1e-4)
    # One way only, against 3 N·m: N = TL/Tm + √((TL/Tm)² + JL/J) makes the largest acceleration
    # with Tm = 1, 10.681146 (derived, a grid search agrees): there T_m just suffices.
    ratio = 10.681146
    a = (1 - 3 / ratio) / (1e-3 * ratio + 0.05 / ratio)
    up = Demand(Cycle([1, 1], [0, a], [a, 0], [3, 3], [3, 3]), Gearing(0.05))
    torque = minimize_scalar(
        lambda N: judge(motor, up, N).peak_torque_value.item(), bounds=(2, 50), method="bounded"
    )
    assert torque.x == pytest.approx(ratio, rel=1e-3)
    assert torque.fun == pytest.approx(1.0, rel=1e-6)


def test_fixed_ratio_is_an_interval_of_one() -> None:
    machines, asked = motors(50, 3), demand(0)
    found = feasible_ratios(machines, asked, 8.0, 8.0)
    good = judge(machines, asked, 8.0).verdict()[:, 0] == Verdict.FEASIBLE
    assert 0 < good.sum() < 50
    assert found.motor.tolist() == np.flatnonzero(good).tolist()
    assert np.isnan(found.best).tolist() == (~good).tolist()
