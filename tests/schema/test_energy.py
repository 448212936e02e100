"""What a motor draws and gives back, against the power balance on a fine grid of time."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.operation import energy
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Gearing
from motorfolio.schema.operation.energy import draw
from motorfolio.schema.operation.machines import Machines

from .made_up_motors import motors, moving

STEPS = 20_000
BRAKING = Cycle.from_rows(
    [0, 1, 3, 4, 5, 5, 6, 7.5, 9], [0, 20, 20, 0, 0, 0, -20, 20, 0],
    [1, 3, -2, 1, 1, 0.5, -1, 2, 1],
)  # fmt: skip


def on_a_grid(m: Machines, k: int, demand: Demand, N: float, T: float, drop: float) -> np.ndarray:
    """Power in W of motor k in the middle of each time step, by the equations of motion.

    U·I = Ra·I² + Km·ω·I at the terminals (power balance of the DC motor), the bridge's drop on
    top; copper by (234.5 + T) (Langsdorf, Theory of Alternating-Current Machinery, ex. 1-15).
    """
    c, gear = demand.cycle, demand.gearing
    s = (np.arange(STEPS) + 0.5) / STEPS
    powers = []
    for n in range(c.duration.size):
        acceleration = (c.speed_end[n] - c.speed_start[n]) / c.duration[n]
        speed = c.speed_start[n] + (c.speed_end[n] - c.speed_start[n]) * s
        load = c.torque_start[n] + (c.torque_end[n] - c.torque_start[n]) * s
        load = load + gear.load_inertia * acceleration
        through = np.where(load * speed > 0, 1 / gear.efficiency, gear.efficiency)
        through = np.where(load * speed == 0, 1.0, through)
        torque = load * through / N + (m.rotor_inertia[k] + gear.inertia) * N * acceleration
        torque = torque + m.coulomb_torque[k] * np.sign(speed) + m.viscous_damping[k] * N * speed
        Km = m.torque_constant[k] * (1 + m.magnet_coefficient[k] * (T - 25))
        Ra = m.armature_resistance[k] * (234.5 + T) / (234.5 + 25)
        current = torque / Km
        powers.append(Ra * current**2 + Km * N * speed * current + drop * np.abs(current))
    return np.stack(powers)


def longest_return(power: np.ndarray, step: np.ndarray) -> float:
    """Largest energy given back without a draw between, the cycle run through twice."""
    best = run = 0.0
    for value in np.tile((power * step[:, None]).ravel(), 2):
        run = 0.0 if value > 0 else run - value
        best = max(best, run)
    return best


@pytest.mark.parametrize("drop", [0.0, 1.4])
@pytest.mark.parametrize("cycle", [BRAKING, moving(4)], ids=["braking", "there and back"])
def test_powers_and_energies(cycle: Cycle, drop: float) -> None:
    m = motors(6, 3)
    demand = Demand(cycle, Gearing(0.05, 0.8, 1e-6))
    ratio = np.array([1.0, 3.0, 8.0, 15.0, 30.0, 60.0])
    temperature = np.array([25.0, 60.0, 110.0, 25.0, -20.0, 80.0])
    found = draw(m, demand, ratio, temperature, drop)
    for k in range(6):
        power = on_a_grid(m, k, demand, ratio[k], temperature[k], drop)
        step = cycle.duration / STEPS
        scale = np.abs(power).max()
        assert found.peak[k] == pytest.approx(max(power.max(), 0), abs=1e-3 * scale)
        assert found.peak_returned[k] == pytest.approx(max(-power.min(), 0), abs=1e-3 * scale)
        energies = power * step[:, None]
        whole = np.abs(energies).sum()
        assert found.drawn[k] == pytest.approx(np.maximum(energies, 0).sum(), abs=1e-4 * whole)
        assert found.returned[k] == pytest.approx(np.maximum(-energies, 0).sum(), abs=1e-4 * whole)
        assert found.mean[k] == pytest.approx(energies.sum() / cycle.period, rel=1e-3)
        assert found.stretch[k] == pytest.approx(longest_return(power, step), abs=1e-3 * whole)
    assert (found.returned > 0).any()
    assert (found.stretch <= found.returned * (1 + 1e-12) + 1e-9).any()


def test_a_hoist_at_constant_speed() -> None:
    """Up 20 N·m at 100 rad/s, down again, by hand: I = ±… of one motor with Km 0.5 and 0.4 Ω:
    40 A, 640 W of copper beside 2000 W; down 640 − 2000 W."""
    m = Machines.of(torque_constant=0.5, armature_resistance=0.4)
    cycle = Cycle.from_points([(20, 100, 2), (20, 0, 1), (20, -100, 3)])
    found = draw(m, Demand(cycle), np.ones(1), np.array([25.0]))
    assert found.peak.tolist() == pytest.approx([2640])
    assert found.peak_returned.tolist() == pytest.approx([1360])
    assert found.drawn.tolist() == pytest.approx([2640 * 2 + 640 * 1])
    assert found.returned.tolist() == pytest.approx([1360 * 3])
    assert found.stretch.tolist() == pytest.approx([1360 * 3])
    assert found.mean.tolist() == pytest.approx([(2640 * 2 + 640 - 1360 * 3) / 6])


def test_what_is_always_driven_only_gives_back() -> None:
    """All of a cycle's energy is then one stretch, however often it repeats; and a motor that only
    drives has none."""
    m = Machines.of(torque_constant=0.5, armature_resistance=0.1)
    for torque, sign in ((-20.0, -1), (20.0, 1)):
        found = draw(
            m,
            Demand(Cycle.from_points([(torque, 100, 2), (torque, 50, 1)])),
            np.ones(1),
            np.full(1, 25.0),
        )
        energy_ = 20 * 100 * 2 + 20 * 50 + sign * 0.1 * 40**2 * 3
        assert [found.drawn[0], found.returned[0]] == pytest.approx(
            [energy_, 0] if sign > 0 else [0, energy_]
        )
        assert found.stretch[0] == pytest.approx(0 if sign > 0 else energy_)
        assert (found.peak[0] == 0) == (sign < 0)
        assert (found.peak_returned[0] == 0) == (sign > 0)


def test_the_return_that_bridges_the_cycles_end_is_one() -> None:
    """Braking at the end and at the beginning: one stretch over both."""
    m = Machines.of(torque_constant=1.0, armature_resistance=1e-9)
    cycle = Cycle.from_points([(-1, 10, 1), (1, 10, 5), (-1, 10, 2)])
    found = draw(m, Demand(cycle), np.ones(1), np.full(1, 25.0))
    assert found.stretch[0] == pytest.approx(30)
    assert found.returned[0] == pytest.approx(30)
    assert found.drawn[0] == pytest.approx(50)


def test_chunks_are_joined(monkeypatch: pytest.MonkeyPatch) -> None:
    m = motors(7, 1)
    given = (Demand(moving(1), Gearing(0.05, 0.8)), np.full(7, 9.0), np.full(7, 60.0))
    whole = draw(m, *given)
    monkeypatch.setattr(energy, "_CHUNK", 1)
    for name in ("peak", "peak_returned", "mean", "drawn", "returned", "stretch"):
        assert getattr(draw(m, *given), name) == pytest.approx(getattr(whole, name), rel=1e-12)
    assert math.isfinite(whole.peak.sum())
