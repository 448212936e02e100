"""What a motor draws and gives back, and how it runs up, short cases in numbers worked by hand."""

from __future__ import annotations

import math
from dataclasses import FrozenInstanceError

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.operation import drive
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Gearing
from motorfolio.schema.operation.drive import DriveError, Motor
from motorfolio.schema.operation.energy import draw
from motorfolio.schema.operation.machines import Machines

WARM = np.array([25.0])


def machines(**given) -> Machines:
    known = {"torque_constant": 0.5, "armature_resistance": 2.0, "rotor_inertia": 0.0}
    return Machines.of(**{**known, **given})


def drawn(cycle: Cycle, ratio: float = 1.0, gearing: Gearing | None = None, drop: float = 0.0,
          T: float = 25.0, **given) -> dict[str, float]:  # fmt: skip
    demand = Demand(cycle, gearing or Gearing())
    found = draw(machines(**given), demand, np.array([ratio]), np.array([T]), drop)
    return {name: float(value[0]) for name, value in vars(found).items()}


def test_braking_at_one_current() -> None:
    """−1 A while 16 rad/s go to nought in 4 s: 2 W − 0.5·ω, so −6 W to 2 W, nought after 3 s."""
    found = drawn(Cycle([4.0], [16.0], [0.0], [-0.5], [-0.5]))
    assert found == pytest.approx({"peak": 2.0, "peak_returned": 6.0, "mean": -2.0, "drawn": 1.0,
                                   "returned": 9.0, "stretch": 9.0})  # fmt: skip
    back = drawn(Cycle([4.0], [0.0], [-16.0], [0.5], [0.5]))
    assert back == pytest.approx(found)


def test_a_current_through_nought() -> None:
    """3 A to −1 A in 8 s at 8 rad/s with a volt of the bridge: 2·i² + 4·i + |i|, so 2·i² + 5·i down
    to nought at 6 s, 2·i² + 3·i below."""
    found = drawn(Cycle([8.0], [8.0], [8.0], [1.5], [-0.5]), drop=1.0)
    # ∫ over the current, dt = 2 s/A: 0..3 A, then −1..0 A
    up = 2 * (2 * 27 / 3 + 5 * 9 / 2)
    down = 2 * (2 / 3 - 3 / 2)
    expected = {"peak": 33.0, "peak_returned": 9 / 8, "drawn": up, "returned": -down,
                "mean": (up + down) / 8, "stretch": -down}  # fmt: skip
    assert found == pytest.approx(expected)


def test_warm_copper_and_weak_magnets() -> None:
    """At 75 °C: 2 Ω·309.5/259.5, and 0.9 of 0.5 N·m/A with −0.2 %/K: 1 N·m at 10 rad/s."""
    found = drawn(Cycle.from_points([(1.0, 10.0, 3.0)]), T=75.0, magnet_coefficient=-0.002)
    amperes = 1 / 0.45
    watts = 2 * 309.5 / 259.5 * amperes**2 + 10.0
    assert found["peak"] == pytest.approx(watts)
    assert found["drawn"] == pytest.approx(3 * watts)
    assert (found["returned"], found["peak_returned"], found["stretch"]) == (0, 0, 0)


CYCLES = [
    Cycle.from_rows([0, 1, 2, 3.5, 4, 5], [0, 30, 30, -20, -20, 0],
                    [0.4, -0.6, 0.5, 0.3, -0.4, 0.1]),
    Cycle([2, 1, 2], [3, 3, -1], [3, -1, 3], [-2, 1, 4], [-4, -1, -3]),
    Cycle([1, 4, 1], [0, 0.4, 0.4], [0.4, 0.4, 0], [0.1, -3, 0.1], [0.2, 0.2, -0.1]),
]  # fmt: skip


@pytest.mark.parametrize("cycle", CYCLES)
@pytest.mark.parametrize(("ratio", "drop"), [(1.0, 0.0), (4.0, 0.7)])
def test_a_cycle_in_fine_steps(cycle: Cycle, ratio: float, drop: float) -> None:
    """P = Ra·Ia² + Km·ω·Ia + U_drop·|Ia| at every instant, with the inertia of rotor and gear and
    both frictions; the gear has η = 0.8 towards the side that is driven."""
    given = {"rotor_inertia": 0.01, "coulomb_torque": 0.03, "viscous_damping": 0.002}
    found = drawn(cycle, ratio, Gearing(0.02, 0.8, 0.005), drop, **given)
    n = 40_000
    s = (np.arange(n) + 0.5) / n
    energies, powers = [], []
    for p in range(cycle.duration.size):
        w = cycle.speed_start[p] + (cycle.speed_end[p] - cycle.speed_start[p]) * s
        a = (cycle.speed_end[p] - cycle.speed_start[p]) / cycle.duration[p]
        load = cycle.torque_start[p] + (cycle.torque_end[p] - cycle.torque_start[p]) * s + 0.02 * a
        load = load * np.where(load * w > 0, 1 / 0.8, np.where(load * w < 0, 0.8, 1.0))
        torque = load / ratio + 0.015 * ratio * a + 0.03 * np.sign(w) + 0.002 * ratio * w
        i = torque / 0.5
        P = 2 * i**2 + 0.5 * ratio * w * i + drop * np.abs(i)
        powers.append(P)
        energies.append(P * cycle.duration[p] / n)
    power, energy = np.concatenate(powers), np.concatenate(energies)
    close = {"rel": 1e-3, "abs": 1e-3}
    assert found["peak"] == pytest.approx(max(power.max(), 0), **close)
    assert found["peak_returned"] == pytest.approx(max(-power.min(), 0), **close)
    assert found["drawn"] == pytest.approx(energy[energy > 0].sum(), rel=1e-5)
    assert found["returned"] == pytest.approx(-energy[energy < 0].sum(), rel=1e-5, abs=1e-9)
    assert found["mean"] == pytest.approx(energy.sum() / cycle.period, rel=1e-5)
    twice = np.concatenate([energy, energy])
    edge = np.flatnonzero(np.diff(np.sign(twice))) + 1
    parts = [part.sum() for part in np.split(twice, edge)]
    assert found["stretch"] == pytest.approx(max(0.0, -min(parts)), rel=1e-5, abs=1e-9)


def test_giving_back_all_the_time_and_across_the_end() -> None:
    """A cycle that only gives back does so for one cycle in one go; one that gives back at its end
    and its beginning does it in one go, too."""
    always = drawn(Cycle.from_points([(-1.0, 20.0, 2.0), (-0.5, 20.0, 3.0)]))
    assert always["returned"] == pytest.approx((20 - 8) * 2 + (10 - 2) * 3)
    assert always["stretch"] == pytest.approx(always["returned"])
    around = drawn(Cycle.from_points([(-1.0, 20.0, 2.0), (1.0, 20.0, 1.0), (-0.5, 20.0, 3.0),
                                      (1.0, 20.0, 1.0), (-0.5, 20.0, 1.0)]))  # fmt: skip
    assert around["stretch"] == pytest.approx(24 + 8)
    assert around["returned"] == pytest.approx(24 + 24 + 8)


def test_only_what_accelerates_needs_an_inertia_here_too() -> None:
    slow = Cycle([8.0, 8.0], [0.0, 4.0], [4.0, 0.0], [0.0, 0.0], [0.0, 0.0])  # 0.5 rad/s²
    found = drawn(slow, rotor_inertia=0.2)
    assert found["peak"] == pytest.approx(2 * 0.2**2 + 0.5 * 4 * 0.2)
    steady = drawn(Cycle.from_points([(1.0, 10.0, 1.0)]), rotor_inertia=math.nan)
    assert steady["peak"] == pytest.approx(18.0)


# ---- one motor under control


def motor(**given) -> Motor:
    known = {"torque_constant": 0.5, "armature_resistance": 2.0, "armature_inductance": 0.01,
             "rotor_inertia": 0.004, "coulomb_torque": 0.1, "viscous_damping": 0.0,
             "pole_pairs": 2.0, "commutation": Commutation.BRUSHED}  # fmt: skip
    return Motor(**{**known, **given})


def test_no_load_and_no_inertia_unless_told() -> None:
    """Every way to ask takes nought where nothing is said."""
    m = motor()
    pairs = [
        (drive.time_at_current(m, 2.0, 50.0), drive.time_at_current(m, 2.0, 50.0, 0.0, 0.0, 0.0)),
        (drive.time_at_voltage(m, 48.0, 50.0), drive.time_at_voltage(m, 48.0, 50.0, 0, 0, 0)),
        (drive.run_up_time(m, 48.0, 4.0, 50.0), drive.run_up_time(m, 48.0, 4.0, 50.0, 0.0, 0.0)),
        (drive.acceleration_at_current(m, 2.0), drive.acceleration_at_current(m, 2.0, 0, 0, 0)),
        (drive.braking(m, 50.0, 100.0), drive.braking(m, 50.0, 100.0, 0.0, 0.0)),
        (drive.speed_at_voltage(m, 24.0), drive.speed_at_voltage(m, 24.0, 0.0)),
        (drive.torque_at_current(m, 2.0), drive.torque_at_current(m, 2.0, 0.0)),
        (drive.bridge_share(m, 9.0, 0.1, 24.0), drive.bridge_share(m, 9.0, 0.1, 24.0, 0.0)),
        (drive.ripple_at(m, 24.0, 9e3), drive.ripple_at(m, 24.0, 9e3, 0.5)),
    ]
    for bare, told in pairs:
        assert bare == told
    # 2 A are 1 N·m, 0.1 of it friction, on 0.004 kg·m²
    assert drive.acceleration_at_current(m, 2.0) == pytest.approx(225.0)
    assert drive.acceleration_at_current(m, 2.0, 0.0, 0.4, 0.001) == pytest.approx(100.0)
    assert drive.time_at_current(m, 2.0, 45.0) == pytest.approx(0.2)
    assert drive.time_at_current(m, 2.0, 45.0, 22.5, 0.4, 0.001) == pytest.approx(0.225)


def test_a_speed_that_is_never_reached() -> None:
    """1 N·m less friction of 0.1 and 0.01·ω: 90 rad/s is the end; the way there is logarithmic."""
    m = motor(viscous_damping=0.01)
    assert drive.time_at_current(m, 2.0, 90.0) == math.inf
    assert drive.time_at_current(m, 2.0, 100.0) == math.inf
    assert drive.time_at_current(m, 0.1, 10.0) == math.inf
    assert drive.time_at_current(m, 0.1, 0.0) == 0
    assert drive.time_at_current(m, 2.0, 100.0, 100.0) == 0
    assert drive.time_at_current(m, 2.0, 45.0) == pytest.approx(0.4 * math.log(2))
    # at a voltage: 48 V, (48 − 0.4)/(0.5 + 0.04) rad/s
    final = 47.6 / 0.54
    assert drive.time_at_voltage(m, 48.0, final) == math.inf
    tau = 0.004 * 2 / (0.25 + 0.02)
    assert drive.time_at_voltage(m, 48.0, final / 2) == pytest.approx(tau * math.log(2))
    for wrong in ((-1.0, 5.0), (5.0, 4.0)):
        with pytest.raises(DriveError, match="run-up"):
            drive.time_at_current(m, 2.0, wrong[1], wrong[0])


@pytest.mark.parametrize("start", [0.0, 10.0])
@pytest.mark.parametrize("L", [0.002, 0.2])
@pytest.mark.parametrize("b", [0.0, 0.01])
def test_time_with_inductance_in_small_steps(start: float, L: float, b: float) -> None:
    """Current and speed by Runge–Kutta; from rest the shaft waits until the torque suffices."""
    m = motor(armature_inductance=L, viscous_damping=b)
    K, R, J, held = 0.5, 2.0, 0.004, 0.1 + 0.2
    goal = 40.0
    found = drive.time_at_voltage(m, 48.0, goal, start, 0.2, 0.0, with_inductance=True)

    def rates(i: float, w: float) -> tuple[float, float]:
        pull = K * i - held - b * w
        if w <= 0 and pull < 0:
            pull = 0.0
        return (48.0 - R * i - K * w) / L, pull / J

    i, w, t, h = 0.0, start, 0.0, found / 2000
    while w < goal and t < 2 * found:
        a = rates(i, w)
        c = rates(i + h / 2 * a[0], w + h / 2 * a[1])
        d = rates(i + h / 2 * c[0], w + h / 2 * c[1])
        e = rates(i + h * d[0], w + h * d[1])
        before = w
        i += h / 6 * (a[0] + 2 * c[0] + 2 * d[0] + e[0])
        w += h / 6 * (a[1] + 2 * c[1] + 2 * d[1] + e[1])
        t += h
    t -= h * (w - goal) / (w - before)
    assert found == pytest.approx(t, rel=2e-4)


def test_a_voltage_that_does_not_turn_the_shaft() -> None:
    """0.3 N·m are 0.6 A, 1.2 V: not above it, the shaft stands."""
    m = motor()
    for volts, ever in ((1.2, False), (1.0, False), (1.3, True)):
        found = drive.time_at_voltage(m, volts, 0.05, 0.0, 0.2, 0.0, with_inductance=True)
        assert math.isfinite(found) == ever
        assert drive.time_at_voltage(m, volts, 0.0, 0.0, 0.2, with_inductance=True) == 0
    with pytest.raises(DriveError, match="inductance is unknown"):
        drive.time_at_voltage(motor(armature_inductance=math.nan), 9.0, 1.0, with_inductance=True)


def test_values_of_one_motor_stay() -> None:
    for value in (motor(), drive.operating_point(motor(), 10.0, 0.1),
                  drive.braking(motor(), 10.0, 5.0)):  # fmt: skip
        with pytest.raises(FrozenInstanceError):
            setattr(value, next(iter(value.__dataclass_fields__)), 0.0)
