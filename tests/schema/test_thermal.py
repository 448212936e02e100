"""Heating and chopper ripple against published examples and against brute force."""

from __future__ import annotations

import numpy as np
import pytest

from motorfolio.schema.operation.pwm import space_vector_mean_square, two_level_ripple
from motorfolio.schema.operation.thermal import (
    COPPER_COEFFICIENT,
    TwoBody,
    copper_factor,
    periodic_peak,
    steady_temperature,
)


def first_order_peak(time_constant: float, phases: list[tuple[float, float]]) -> float:
    """Peak rise of one body under phases of (duration, steady rise), by the two-body solution:
    all of the heat enters the housing, the winding follows it at once."""
    duration = np.array([phase[0] for phase in phases])
    heat = np.array([phase[1] for phase in phases])
    P = len(phases)
    body = TwoBody(np.array([1e-3]), np.array([1.0]), np.array([1e-3]), np.array([time_constant]))
    rubbing = np.ones((1, P, 2, 2))
    rubbing[..., 0] = heat[None, :, None]
    peak, runaway = periodic_peak(
        body,
        0.0,
        duration,
        np.zeros((1, P, 2)),
        np.zeros((1, P)),
        rubbing,
        np.ones(1),
        np.zeros(1),
        np.zeros(1),
    )
    assert not runaway[0]
    return float(peak[0])


def test_heating_between_load_and_idle() -> None:
    """Dubey, Fundamentals of Electrical Drives, ex. 4.1 p. 47: time constant 60, 10 on, 20 off
    (idle rise 15), lowest rise 40: highest 49.9 for a steady rise of 104.4."""
    assert first_order_peak(60.0, [(10.0, 104.424), (20.0, 15.0)]) == pytest.approx(49.89, abs=0.01)


@pytest.mark.parametrize(
    ("minutes", "time_constant", "constant_loss", "overload"),
    [(30, 80, 0.49, 100 / 48.366), (30, 90, 0.9, 60.222 / 25)],
)
def test_short_time_rating(
    minutes: float, time_constant: float, constant_loss: float, overload: float
) -> None:
    """Dubey ex. 4.5: 100 kW for 30 min, τ = 80 min, constant loss 0.49 of the copper loss: the
    frame of a 48.37 kW motor. Pillai, ch. 7, ex. 7.3: 25 kW, τ = 1.5 h, 0.9: 60.22 kW for 0.5 h.
    The short-time overload just reaches the continuous rating's rise (companions)."""
    heat = constant_loss + overload**2
    peak = first_order_peak(time_constant, [(minutes, heat), (50 * time_constant, 0.0)])
    assert peak == pytest.approx(1 + constant_loss, rel=2e-4)


def test_copper_resistance_rule() -> None:
    """Kulshreshtha, Basic Electrical Engineering, ex. 2.18 p. 32: 3.42 Ω at 20 °C become 4.22 Ω
    at a rise of 59.59 K (its own coefficient; 59.532 K by the 234.5 rule)."""
    assert 3.42 * copper_factor(79.532) / copper_factor(20.0) == pytest.approx(4.22, abs=1e-4)
    assert pytest.approx(0.00385426, rel=3e-4) == COPPER_COEFFICIENT


@pytest.mark.parametrize("beta", [0.0, -0.0011, -0.002])
def test_steady_temperature_is_the_lowest_root(beta: float) -> None:
    """By tracking from cold: the plain iteration climbs to the same temperature, or away."""
    rise = np.geomspace(1, 400, 60)
    found, runaway = steady_temperature(40.0, rise, 0.1 * rise, 5.0, COPPER_COEFFICIENT, beta)
    T = np.full(60, 40.0)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
        for _ in range(20000):
            flux = 1 + beta * (T - 25)
            T = 45 + copper_factor(T) * (rise / flux**2 + 0.1 * rise)
            T = np.where((T > 1e4) | (1 + beta * (T - 25) < 0), np.inf, T)
    assert runaway.any()
    assert not runaway.all()
    assert (np.isinf(T) | np.isnan(T)).tolist() == runaway.tolist()
    assert found[~runaway] == pytest.approx(T[~runaway], rel=1e-6)


def test_magnets_bring_runaway_sooner() -> None:
    """With NdFeB runaway comes at about a quarter of the I² of copper alone (one case tried)."""
    rise = np.linspace(1, 300, 3000)
    sizes = []
    for beta in (0.0, -0.0011):
        _, runaway = steady_temperature(25.0, rise, 0.0, 0.0, COPPER_COEFFICIENT, beta)
        sizes.append(rise[runaway.argmax()])
    assert sizes[0] == pytest.approx(259.5, abs=0.2)
    assert 0.15 < sizes[1] / sizes[0] < 0.5


def test_chopper_ripple_of_a_motor() -> None:
    """Gupta & Singhal, Fundamentals of Electric Drives and Control, ex. 4.6 p. 141: 200 V, 4 Ω,
    6 mH, D = 0.5, 1 kHz: 29.13 and 20.87 A, largest ripple 8.33 A (linear), rms 25.11 A."""
    swing, square = two_level_ripple(0.5, 200.0, 4.0, 6e-3, 1000.0)
    assert swing == pytest.approx(29.13 - 20.87, abs=0.005)
    assert np.sqrt(25.0**2 + square) == pytest.approx(25.11, abs=0.005)
    linear = two_level_ripple(0.5, 200.0, 4e-3, 6e-3, 1000.0)[0]
    assert linear == pytest.approx(8.3333, abs=5e-4)


def test_chopper_ripple_of_a_load() -> None:
    """Bimbhra, Power Electronics, ex. 7.15 p. 414: 220 V, 10 Ω, 15 mH, 1250 Hz, D = 0.5: 12.458 to
    9.54 A, ripple 2.92 A about 11.00 A (its printed rms of 13.94 A contradicts them; 11.032 A)."""
    swing, square = two_level_ripple(0.5, 220.0, 10.0, 15e-3, 1250.0)
    assert swing == pytest.approx(12.458 - 9.54, abs=0.005)
    assert np.sqrt(11.0**2 + square) == pytest.approx(11.032, abs=5e-4)


@pytest.mark.parametrize("x", [1e-4, 9e-4, 1.1e-3, 0.1, 1.0, 20.0])
@pytest.mark.parametrize("duty", [0.0, 0.03, 0.5, 0.8, 1.0])
def test_two_level_mean_square_by_integration(x: float, duty: float) -> None:
    """Closed form against the integral of the exponentials themselves (1 V, 1 Ω, 1 Hz)."""
    swing, square = two_level_ripple(duty, 1.0, 1.0, 1 / x, 1.0)
    nodes, weights = np.polynomial.legendre.leggauss(60)
    nodes, weights = (nodes + 1) / 2, weights / 2
    top = -np.expm1(-duty * x) / -np.expm1(-x)  # the current at the end of the pulse
    bottom = top * np.exp(-(1 - duty) * x)
    rising = 1 + (bottom - 1) * np.exp(-duty * x * nodes) - duty
    falling = top * np.exp(-(1 - duty) * x * nodes) - duty
    mean_square = weights @ (duty * rising**2 + (1 - duty) * falling**2)
    assert square == pytest.approx(mean_square, rel=1e-5, abs=1e-15)
    assert swing == pytest.approx(top - bottom, rel=1e-9, abs=1e-15)


@pytest.mark.parametrize("modulation", [0.1, 0.5, 0.9, 2 / np.sqrt(3)])
def test_space_vector_ripple_by_simulation(modulation: float) -> None:
    """Three phases, centred space-vector modulation, ripple of each phase current integrated.

    Armature mean square: copper loss Ra·Ia² with Ra = 2·R_phase, so half the phases' sum.
    """
    bus, L, f = 1.0, 2.0, 1.0  # La = 2, so 1 H a phase; the phase's ripple is ∫(v − v̄) dt
    angles = (np.arange(720) + 0.5) * 2 * np.pi / 720
    waves = modulation * bus / 2 * np.cos(angles[:, None] - np.array([0, 2, 4]) * np.pi / 3)
    common = (waves.max(axis=1) + waves.min(axis=1)) / 2
    duty = (waves - common[:, None]) / bus + 0.5
    time = (np.arange(2000) + 0.5) / 2000
    switched = np.abs(time[None, :, None] - 0.5) < duty[:, None, :] / 2
    volts = bus * (switched - switched.mean(axis=2, keepdims=True))
    ripple = np.cumsum(volts - volts.mean(axis=1, keepdims=True), axis=1) / 2000
    ripple -= ripple.mean(axis=1, keepdims=True)
    simulated = (ripple**2).sum(axis=2).mean() / 2
    voltage = modulation * np.sqrt(3) / 2 * bus
    assert space_vector_mean_square(voltage, bus, L, f) == pytest.approx(simulated, rel=5e-3)
