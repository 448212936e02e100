"""The winding's temperature in a steady rhythm, against the same balance integrated finely."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from scipy.linalg import expm

from motorfolio.schema.operation import thermal
from motorfolio.schema.operation.thermal import (
    COPPER_COEFFICIENT,
    TwoBody,
    _between,
    _one_period,
    periodic_peak,
    steady_temperature,
)

from .runge_kutta import step

AMBIENT = 30.0
Rates = Callable[[np.ndarray, int, float], np.ndarray]


def over_a_period(rates: Rates, state: np.ndarray, duration, steps: int):
    """State after a period and its highest first part, by Runge–Kutta of the fourth order."""
    highest = state[0].copy()
    for p, length in enumerate(duration):
        h = length / steps
        for n in range(steps):
            state = step(rates, state, p, n / steps, 1 / steps, h)
            highest = np.maximum(highest, state[0])
    return state, highest


def reference(body: TwoBody, duration, current, ripple, friction, R, magnet, steps: int = 60):
    """Highest temperature of the periodic state, found by Newton's steps on what a period does.

    C1·T1' = R·(1 + α·θ)·(I²/(1 + β·θ)² + ripple) − (T1 − T2)/Rth1, C2·T2' the rest of the heat
    and what friction adds (two bodies, as in the Modelica Standard Library's thermal ports).
    """
    K = len(R)

    def rates(T: np.ndarray, p: int, s: float) -> np.ndarray:
        amperes = current[:, p, 0] + (current[:, p, 1] - current[:, p, 0]) * s
        rub = friction[:, p, 0] + (friction[:, p, 1] - friction[:, p, 0]) * s
        flux = 1 + magnet * (T[0] - 25)
        loss = R * (234.5 + T[0]) / 259.5 * (amperes**2 / flux**2 + ripple[:, p])
        across = (T[0] - T[1]) / body.to_housing
        shell = across - (T[1] - AMBIENT) / body.to_ambient + rub[:, 0] * rub[:, 1]
        return np.stack([(loss - across) / body.winding_capacity, shell / body.housing_capacity])

    state = np.full((2, 1, K), 60.0)
    for _ in range(3):
        three = state + 0.1 * np.array([[[0], [1], [0]], [[0], [0], [1]]])
        after, _ = over_a_period(rates, three, duration, steps)
        gap = after[:, 0] - three[:, 0]
        slope = (after[:, 1:] - after[:, :1]) / 0.1  # (into, from, motor)
        matrix = np.moveaxis(np.eye(2)[:, :, None] - slope, 2, 0)
        state = state + np.linalg.solve(matrix, gap.T[..., None])[..., 0].T[:, None]
    return over_a_period(rates, state[:, 0], duration, steps * 2)[1]


def made(scale: float, magnet: float, K: int = 2):
    """Ramps, a reversal, a rest, ripple and friction, with time constants of 4 s and 9 s."""
    rng = np.random.default_rng(int(10 * scale) + 1)
    to_housing, to_ambient = rng.uniform(0.5, 1.5, K), rng.uniform(0.5, 1.5, K)
    body = TwoBody(to_housing, to_ambient, 4.0 / to_housing, 9.0 / to_ambient)
    duration = scale * np.array([1.0, 2.0, 0.7])
    current = rng.uniform(3, 9, (K, 3, 2)) * np.sign(rng.uniform(-1, 1, (K, 3, 1)))
    current[:, 2] *= 0.2
    current[0, 0, 1] *= -1
    ripple, friction = rng.uniform(0, 9, (K, 3)), rng.uniform(-2, 4, (K, 3, 2, 2))
    return body, duration, current, ripple, friction, rng.uniform(0.3, 0.6, K), np.full(K, magnet)


@pytest.mark.parametrize(("scale", "steps", "within"),
                         [(0.02, 2, 2e-3), (0.3, 6, 3e-3), (1.0, 6, 5e-3), (3.0, 10, 2e-2),
                          (8.0, 16, 1e-2)])  # fmt: skip
@pytest.mark.parametrize("magnet", [0.0, -0.001])
def test_a_rhythm_of_any_length(scale: float, steps: int, within: float, magnet: float) -> None:
    given = made(scale, magnet)
    found, lost = periodic_peak(given[0], AMBIENT, *given[1:], np.full(2, 60.0))
    assert not lost.any()
    assert found == pytest.approx(reference(*given, steps), abs=within)


def one_period(magnet: float, theta: float):
    """Two motors in three cuts; the winding is taken to be `theta` above 25 °C all along."""
    rng = np.random.default_rng(5)
    K, N = 2, 3
    body = TwoBody(*rng.uniform(0.5, 2, (2, K)), np.array([3.0, 1.0]), np.array([5.0, 9.0]))
    h = np.array([0.4, 1.5, 0.9])
    loss, rubbing = rng.uniform(-2, 8, (3, K, N)), rng.uniform(-1, 3, (3, K, N))
    ripple, beta = rng.uniform(0, 4, (K, N)), np.full((K, 1), magnet)
    return body, 12.0, h, loss, ripple, rubbing, beta, np.full((K, N + 1), theta)


@pytest.mark.parametrize(("magnet", "theta"), [(0.0, 0.0), (0.0, 80.0), (-0.002, 60.0),
                                               (-0.001, -20.0)])  # fmt: skip
def test_a_period_of_linear_bodies(magnet: float, theta: float) -> None:
    """x' = A·x + f(t) by the exponential of the whole matrix (C. Van Loan, Computing integrals
    involving the matrix exponential, 1978; from memory). The loss's dependence on the temperature
    is its tangent g(θ) + g'(θ)·(T − θ), g = (1 + α·θ)/(1 + β·θ)², in the mean of the cut."""
    body, ambient, h, loss, ripple, rubbing, beta, nodes = one_period(magnet, theta)
    found, sound, _ = _one_period(body, ambient, h, loss, ripple, rubbing, beta, nodes)
    assert sound.all()
    flux = 1 + magnet * theta
    gain = (1 + COPPER_COEFFICIENT * theta) / flux**2
    e = 1e-4
    ends = [(1 + COPPER_COEFFICIENT * t) / (1 + magnet * t) ** 2 for t in (theta - e, theta + e)]
    tangent = (ends[1] - ends[0]) / (2 * e)
    for k in range(2):
        R1, R2, C1, C2 = (column[k] for column in
                          (body.to_housing, body.to_ambient, body.winding_capacity,
                           body.housing_capacity))  # fmt: skip
        maps = []
        for n in range(3):
            heat = loss[:, k, n] + np.array([ripple[k, n] * flux**2, 0, 0])
            mean = heat @ [1, 1 / 2, 1 / 3]
            winding, shell = heat * gain / C1, rubbing[:, k, n] / C2
            winding[0] -= mean * tangent * theta / C1
            shell[0] += ambient / (R2 * C2)
            matrix = np.zeros((5, 5))  # winding, housing, 1, s, s²
            matrix[0, :2] = (mean * tangent - 1 / R1) / C1, 1 / (R1 * C1)
            matrix[1, :2] = 1 / (R1 * C2), -1 / (R1 * C2) - 1 / (R2 * C2)
            matrix[0, 2:], matrix[1, 2:] = winding, shell
            matrix[3, 2], matrix[4, 3] = 1 / h[n], 2 / h[n]
            maps.append(expm(matrix * h[n]))
        # s starts anew in each cut: only 1 is handed on
        steps = [(m[:2, :2], m[:2, 2]) for m in maps]
        whole, rest = np.eye(2), np.zeros(2)
        for A, b in steps:
            whole, rest = A @ whole, A @ rest + b
        state = np.linalg.solve(np.eye(2) - whole, rest)
        expected = [state[0]]
        for A, b in steps:
            state = A @ state + b
            expected.append(state[0])
        assert found[k] == pytest.approx(expected, rel=1e-7)


@pytest.mark.parametrize(("loss", "sound"), [(0.9, True), (1.1, False)])
@pytest.mark.parametrize("capacities", [(3.0, 9.0), (9.0, 3.0), (1.0, 1e3)])
def test_no_periodic_state_beyond_the_critical_loss(loss: float, sound: bool, capacities) -> None:
    """α·(Rth1 + Rth2)·R·I² = 1: the heat rises as fast as it can leave."""
    critical = loss / (COPPER_COEFFICIENT * 3.0)
    body = TwoBody(*(np.array([x]) for x in (1.0, 2.0, *capacities)))
    heat = np.zeros((3, 1, 2))
    heat[0] = critical
    nothing = np.zeros((3, 1, 2))
    h = np.array([0.5, 1.0])
    _, found, _ = _one_period(body, 5.0, h, heat, nothing[0], nothing, np.zeros((1, 1)),
                              np.zeros((1, 3)))  # fmt: skip
    assert found.tolist() == [sound]


def test_magnets_that_are_gone_end_the_search() -> None:
    """Under a twentieth of the flux: 950 K with −0.1 %/K."""
    for heat, sound in ((900.0, True), (980.0, False)):
        body = TwoBody(*(np.array([x]) for x in (1.0, 1.0, 4.0, 9.0)))
        rubbing = np.zeros((3, 1, 2))
        rubbing[0] = heat
        nothing = np.zeros((3, 1, 2))
        found, well, _ = _one_period(body, 0.0, np.ones(2), nothing, nothing[0], rubbing,
                                     np.full((1, 1), -0.001), np.zeros((1, 3)))  # fmt: skip
        assert found[0] == pytest.approx([heat] * 3)
        assert well.tolist() == [sound]


def between(ends, shells, loss, h: float) -> float:
    """The package's highest temperature in a single cut of a winding of τ = 4 s, its loss as it is
    at 25 °C."""
    body = TwoBody(*(np.array([x]) for x in (2.0, 1.0, 2.0, 9.0)))
    heat = np.array(loss, float)[:, None, None]
    found = _between(body, np.array([h]), heat, np.ones_like, np.array([ends]), np.array([shells]))
    return float(found[0])


@pytest.mark.parametrize(
    ("ends", "shells", "loss", "h"),
    [
        ((20.0, 21.0), (5.0, 6.0), (30.0, -20.0, -9.0), 2.0),
        ((20.0, 20.0), (5.0, 5.0), (14.0, -13.0, 0.5), 1.0),
        ((22.0, 20.0), (5.0, 8.0), (20.0, 10.0, -28.0), 3.0),
        ((20.0, 26.0), (15.0, 18.0), (9.0, 3.0, -10.0), 6.0),
        ((2.0, 1.5), (1.0, 1.4), (3.0, -3.0, 0.0), 0.5),
    ],
)
def test_highest_inside_a_cut(ends, shells, loss, h: float) -> None:
    """The cubic by both ends and slopes in Hermite's form, on a fine grid; slopes from the heat
    balance C1·T' = P − (T − T_housing)/Rth1."""
    first = h * (loss[0] - (ends[0] - shells[0]) / 2.0) / 2.0
    last = h * (sum(loss) - (ends[1] - shells[1]) / 2.0) / 2.0
    s = np.linspace(0, 1, 20_001)
    cubic = (1 + 2 * s) * (1 - s) ** 2 * ends[0] + s * (1 - s) ** 2 * first
    cubic += s**2 * (3 - 2 * s) * ends[1] + s**2 * (s - 1) * last
    assert first > 0 > last
    assert between(ends, shells, loss, h) == pytest.approx(cubic.max(), rel=1e-7)


def test_where_nothing_peaks_inside_a_cut() -> None:
    """Only a cut that begins rising and ends falling has its peak inside; in one of more than two
    time constants the winding follows the loss, and the ends tell all."""
    assert between((20.0, 25.0), (5.0, 5.0), (30.0, 0.0, 0.0), 1.0) == 20.0
    assert between((25.0, 20.0), (5.0, 5.0), (3.0, 0.0, 0.0), 1.0) == 25.0
    peaked = ((20.0, 20.0), (5.0, 5.0), (30.0, -40.0, 0.0))
    assert between(*peaked, 7.0) > 20.0
    assert between(*peaked, 9.0) == 20.0


@pytest.mark.parametrize("rises", [(30.0, 10.0, 5.0), (0.0, 60.0, -8.0), (120.0, 0.0, 0.0)])
@pytest.mark.parametrize("ambient", [-20.0, 25.0, 60.0])
def test_steady_temperature_of_copper_alone(rises, ambient: float) -> None:
    """Without magnets a line: θ = (θ_amb + fixed + h + r)/(1 − α·(h + r))."""
    current, ripple, fixed = rises
    found, lost = steady_temperature(ambient, current, ripple, fixed, COPPER_COEFFICIENT, 0.0)
    both = current + ripple
    theta = (ambient - 25 + fixed + both) / (1 - COPPER_COEFFICIENT * both)
    assert found == pytest.approx(25 + theta, rel=1e-9)
    assert not lost


def test_steady_temperatures_side_by_side() -> None:
    """Each alone as among others: settled at once, after many steps, unknown, lost."""
    columns = np.array([
        [25.0, 0.0, 0.0, 0.0, 0.004, -0.001], [40.0, 20.0, 3.0, 2.0, 0.004, -0.002],
        [30.0, np.nan, 0.0, 0.0, 0.004, 0.0], [30.0, 400.0, 0.0, 0.0, 0.004, 0.0],
        [30.0, 20.0, 0.0, 0.0, 0.004, np.nan], [20.0, 60.0, 0.0, 1.0, 0.0, -0.001],
        [30.0, 90.0, 0.0, 0.0, 0.0039, -0.0011], [25.0, 300.0, 150.0, 0.0, 0.004, 0.0],
    ])  # fmt: skip
    many, lost = steady_temperature(*columns.T)
    assert np.isnan(many).tolist() == [False, False, True, True, True, False, True, True]
    assert np.flatnonzero(lost).tolist() == [3, 6, 7]
    for k, (ambient, h, r, fixed, alpha, beta) in enumerate(columns):
        one, runaway = steady_temperature(ambient, h, r, fixed, alpha, beta)
        assert float(one) == pytest.approx(many[k], rel=1e-12, nan_ok=True)
        assert bool(runaway) == lost[k]
        if np.isfinite(one):
            theta = one - 25
            balance = ambient + fixed
            balance += (1 + alpha * theta) * (h / (1 + beta * theta) ** 2 + r)
            assert float(one) == pytest.approx(balance, rel=1e-9)
    # without loss even magnets that would be gone are no runaway before they are
    assert not steady_temperature(500.0, 0.0, 0.0, 0.0, 0.004, -0.001)[1]
    assert steady_temperature(1100.0, 0.0, 0.0, 0.0, 0.004, -0.001)[1]


def test_temperatures_that_keep_climbing_are_runaway(monkeypatch: pytest.MonkeyPatch) -> None:
    """A search that comes to no end has no peak to tell."""

    def climbing(body, ambient, h, loss, ripple, rubbing, beta, nodes):
        return nodes + 1.0, np.array([True] * len(nodes)), nodes.max(axis=1)

    monkeypatch.setattr(thermal, "_one_period", climbing)
    peak, lost = periodic_peak(*made(1.0, 0.0)[:1], AMBIENT, *made(1.0, 0.0)[1:], np.full(2, 60.0))
    assert np.isnan(peak).all()
    assert lost.all()
