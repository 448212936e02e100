"""Winding temperature, ripple and voltage over a cycle against plain integration in small steps."""

from __future__ import annotations

import numpy as np
import pytest

from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Gearing, Supply, Surroundings
from motorfolio.schema.operation.inner_peak import largest_square
from motorfolio.schema.operation.judge import judge
from motorfolio.schema.operation.machines import Machines
from motorfolio.schema.operation.pwm import space_vector_mean_square, two_level_ripple
from motorfolio.schema.operation.thermal import TwoBody, copper_factor, periodic_peak

from .made_up_motors import motors
from .runge_kutta import step

AMBIENT = 30.0


def highest_by_steps(
    body: TwoBody, duration, current, ripple, friction, R, magnet, periods: int, steps: int
) -> np.ndarray:
    """Highest winding temperature of a period after many, by Runge–Kutta of the fourth order.

    C1·T1' = R·(1 + α·θ)·(I²/(1 + β·θ)² + ripple) − (T1 − T2)/Rth1, C2·T2' the rest of the heat
    and what friction adds (the two-body model of the Modelica Standard Library's thermal ports:
    armature and housing); copper by 234.5 + T (Langsdorf, ex. 1-15).
    """
    K, P = current.shape[:2]
    T = np.full((2, K), AMBIENT)
    highest = np.full(K, -np.inf)

    def rates(T: np.ndarray, p: int, s: float) -> np.ndarray:
        amperes = current[:, p, 0] + (current[:, p, 1] - current[:, p, 0]) * s
        rub = friction[:, p, 0] + (friction[:, p, 1] - friction[:, p, 0]) * s
        flux = 1 + magnet * (T[0] - 25)
        loss = R * (234.5 + T[0]) / 259.5 * (amperes**2 / flux**2 + ripple[:, p])
        across = (T[0] - T[1]) / body.to_housing
        out = (T[1] - AMBIENT) / body.to_ambient
        shell = across - out + rub[:, 0] * rub[:, 1]
        return np.stack([(loss - across) / body.winding_capacity, shell / body.housing_capacity])

    for period in range(periods):
        steps = 80 if period == periods - 1 else steps
        for p in range(P):
            h = duration[p] / steps
            for n in range(steps):
                T = step(rates, T, p, n / steps, 1 / steps, h)
                if period == periods - 1:
                    highest = np.maximum(highest, T[0])
    return highest


@pytest.mark.parametrize(("scale", "periods", "steps", "within"),
                         [(0.1, 300, 1, 0.06), (1.0, 30, 4, 0.06), (6.0, 6, 24, 0.06)])  # fmt: skip
@pytest.mark.parametrize("magnet", [0.0, -0.0015])
def test_periodic_peak(scale, periods, steps, within, magnet) -> None:
    """Cycles much shorter than, like and much longer than the winding's time constant of 4 s, with
    ramps, rests, ripple and friction: within hundredths of a kelvin."""
    rng = np.random.default_rng(8)
    K = 6
    to_housing, to_ambient = rng.uniform(0.5, 1.5, K), rng.uniform(0.5, 1.5, K)
    body = TwoBody(to_housing, to_ambient, 4.0 / to_housing, 9.0 / to_ambient)
    duration = scale * np.array([1.0, 2.5, 0.7, 1.3])
    current = rng.uniform(-9, 9, (K, 4, 2))
    current[:, 2] = 0.0
    current[:3, 1, 1] = current[:3, 1, 0]
    ripple = rng.uniform(0, 3, (K, 4))
    friction = rng.uniform(0, 3, (K, 4, 2, 2))
    R = rng.uniform(0.3, 1.0, K)
    given = (duration, current, ripple, friction, R, np.full(K, magnet))
    found, lost = periodic_peak(body, AMBIENT, *given, np.full(K, 60.0))
    assert not lost.any()
    assert found == pytest.approx(highest_by_steps(body, *given, periods, steps), abs=within)
    assert found.max() - AMBIENT > 20


def test_no_periodic_state_is_runaway() -> None:
    """Copper alone runs away where α·Rth·R25·I² reaches 1 (slope of the heat balance)."""
    one = np.ones(2)
    body = TwoBody(2 * one, 3 * one, 2 * one, 30 * one)
    critical = np.sqrt(259.5 / 5.0)
    current = np.array([0.99, 1.01])[:, None, None] * critical * np.ones((2, 3, 2))
    current[:, 1] *= 1.0 + 1e-9
    _, lost = periodic_peak(
        body, 25.0, np.ones(3), current, np.zeros((2, 3)), np.zeros((2, 3, 2, 2)), one,
        np.array([0.0, np.nan]), np.full(2, 100.0),
    )  # fmt: skip
    assert lost.tolist() == [False, True]


CYCLE = Cycle.from_rows(
    [0, 1, 2, 3.5, 4, 5, 6], [0, 30, 30, -20, -20, 10, 0], [0.4, -0.2, 0.5, 0.3, -0.4, 0.1, 0.2]
)


def instants(m: Machines, k: int, N: float, n: int = 4000):
    """Armature current, motor speed and share of the period in the middle of fine steps."""
    s = (np.arange(n) + 0.5) / n
    for p in range(CYCLE.duration.size):
        speed = N * (CYCLE.speed_start[p] + (CYCLE.speed_end[p] - CYCLE.speed_start[p]) * s)
        load = CYCLE.torque_start[p] + (CYCLE.torque_end[p] - CYCLE.torque_start[p]) * s
        a = N * (CYCLE.speed_end[p] - CYCLE.speed_start[p]) / CYCLE.duration[p]
        torque = load / N + m.rotor_inertia[k] * a + m.coulomb_torque[k] * np.sign(speed)
        torque = torque + m.viscous_damping[k] * speed
        yield torque / m.torque_constant[k], speed, CYCLE.duration[p] / CYCLE.period


@pytest.mark.parametrize("ambient", [25.0, 55.0])
def test_ripple_over_a_cycle(ambient: float) -> None:
    """Mean square of the ripple and its largest swing, from the voltage at every instant. Warm
    copper takes more of the voltage, warm magnets less; unknown heat leaves both at the ambient."""
    m = motors(12, 6, magnet_coefficient=-0.001, viscous_damping=1e-5,
               thermal_resistance_winding_housing=np.nan,
               thermal_resistance_housing_ambient=np.nan)  # fmt: skip
    m.armature_inductance[11] = np.nan
    bus, frequency, N = 300.0, 8e3, 12.0
    demand = Demand(CYCLE, supply=Supply(bus, 1.0, 0.0, frequency),
                    surroundings=Surroundings(ambient))  # fmt: skip
    found = judge(m, demand, N)
    plain = judge(m, Demand(CYCLE, surroundings=Surroundings(ambient)), N)
    flux = 1 - 0.001 * (ambient - 25)
    seen = set()
    for k in range(11):
        R, L = m.armature_resistance[k] * copper_factor(ambient), m.armature_inductance[k]
        Km = m.torque_constant[k] * flux
        mean, largest = 0.0, 0.0
        for current, speed, share in instants(m, k, N):
            weak = current / flux
            if m.commutation[k] == 2:
                U = np.hypot(R * weak + Km * speed, m.pole_pairs[k] * speed * L * weak)
                mean += share * space_vector_mean_square(U, bus, L, frequency).mean()
            else:
                U = R * weak + Km * speed
                swing, square = two_level_ripple(np.abs(U) / bus, bus, R, L, frequency)
                mean += share * square.mean()
                largest = max(largest, swing.max())
        seen.add(int(m.commutation[k]))
        assert found.ripple_current[k, 0] == pytest.approx(np.sqrt(mean), rel=2e-3)
        if m.commutation[k] == 2:
            assert np.isnan(found.ripple_peak_to_peak[k, 0])
        else:
            assert found.ripple_peak_to_peak[k, 0] == pytest.approx(largest, rel=1e-3)
        whole = np.hypot(plain.rms_current[k, 0], found.ripple_current[k, 0])
        assert found.rms_current[k, 0] == pytest.approx(whole, rel=1e-9)
    assert len(seen) >= 2
    assert 2 in seen
    assert found.ripple_unknown[:, 0].tolist() == [False] * 11 + [True]
    assert found.ripple_current[11, 0] == 0
    assert found.rms_current[11, 0] == plain.rms_current[11, 0]
    assert not plain.ripple_unknown.any()
    assert (plain.ripple_current == 0).all()


def test_heat_of_the_mean_loss() -> None:
    """Mean copper loss, with the ripple's, and the friction's heat on the way from the housing, in
    a balance iterated by hand; and of all of it the share of the permissible rise."""
    m = motors(8, 2, thermal_resistance_winding_housing=0.6, maximum_winding_temperature=400.0,
               thermal_resistance_housing_ambient=1.5)  # fmt: skip
    N, bus = 6.0, 300.0
    surroundings = Surroundings(40.0, None, 0.8)
    demand = Demand(CYCLE, supply=Supply(bus, 1.0, 0.0, 10e3), surroundings=surroundings)
    found = judge(m, demand, N, periodic=False)
    other = judge(m, Demand(CYCLE, surroundings=Surroundings(40.0, 0.5)), N, periodic=False)
    for k in range(8):
        square = sum(share * (i**2).mean() for i, _, share in instants(m, k, N))
        rubbing = 0.0
        for _, speed, share in instants(m, k, N):
            torque = m.coulomb_torque[k] * np.sign(speed) + m.viscous_damping[k] * speed
            rubbing += share * (torque * speed).mean()
        for result, path, ripple in ((found, 1.5, found.ripple_current[k, 0] ** 2),
                                     (other, 0.5, 0.0)):  # fmt: skip
            T = 40.0
            for _ in range(300):
                flux = 1 + m.magnet_coefficient[k] * (T - 25)
                loss = m.armature_resistance[k] * copper_factor(T) * (square / flux**2 + ripple)
                T = min(40 + (0.6 + path) * loss + path * rubbing, 1e4)
            if T > 1000:
                assert result.runaway[k, 0]
                continue
            assert result.winding_temperature[k, 0] == pytest.approx(T, rel=1e-4)
            if result is found:
                assert result.thermal[k, 0] == pytest.approx((T - 40) / (360 * 0.8), rel=1e-4)
            warm = m.armature_resistance[k] * copper_factor(T)
            mean = result.rms_current[k, 0] ** 2 * warm
            assert result.copper_loss[k, 0] == pytest.approx(mean, rel=1e-4)
            assert mean >= loss * (1 - 1e-4)
    assert (~found.runaway).sum() > 3


def test_a_rating_by_rise_and_a_total_resistance() -> None:
    """Where only the total to the ambient is printed the friction's path is all of it; a rated
    rise above the rating's ambient stands in for the limit (definitions)."""
    m = Machines.of(
        torque_constant=0.5, armature_resistance=1.0, thermal_resistance=2.0, coulomb_torque=0.1,
        rated_temperature_rise=100.0, rating_ambient=[40.0, np.nan], magnet_coefficient=0.0,
    )  # fmt: skip
    found = judge(m, Demand(Cycle.from_points([(0.4, 50.0, 1.0)]), Gearing(0.0)))
    T = 25.0
    for _ in range(200):
        T = 25 + 2.0 * (1.0 * copper_factor(T) * 1.0**2) + 2.0 * 0.1 * 50
    assert found.winding_temperature[:, 0] == pytest.approx([T, T], rel=1e-8)
    assert found.thermal[:, 0] == pytest.approx([(T - 25) / 115, (T - 25) / 100], rel=1e-8)


def test_voltage_inside_ramps() -> None:
    """U² = (Ra·Ia + Km·ω)² + (p·ω·La·Ia)² on a fine grid of every ramp, many motors at once."""
    rng = np.random.default_rng(3)
    n, Q = 40, 5
    pieces = rng.uniform(-0.3, 0.3, (Q, 2, 4))
    pieces[:3] = (
        np.array([[0.05, 0.02, 0.0, 1.0], [1.0, 0.5, 0.3, 0.0]])
        * rng.uniform(0.5, 1, 3)[:, None, None]
    )  # speed falls while torque rises
    weights = list(rng.uniform(0, 1, (4, n)))
    drop, emf, reactance = rng.uniform(0, 1, n), rng.uniform(0, 1, n), rng.uniform(0, 40, n)
    s = np.linspace(0, 1, 4001)
    square = np.zeros(n)
    best = np.zeros(n)
    for first, second in pieces:
        basis = first + (second - first) * s[:, None]
        # A combination of four linear functions is linear, so is the speed; by definition.
        torque, speed = basis @ np.stack(weights), basis[:, 3:]
        U2 = (torque * drop + speed * emf) ** 2 + (torque * speed * reactance) ** 2
        square = np.maximum(square, np.maximum(U2[0], U2[-1]))
        best = np.maximum(best, U2.max(axis=0))
    found = largest_square(square.copy(), pieces, weights, drop, emf, reactance)
    assert found == pytest.approx(best, rel=1e-5)
    assert (best > square * 1.001).sum() >= 3
    assert largest_square(square.copy(), pieces[:0], weights, drop, emf, reactance) == (
        pytest.approx(square)
    )
