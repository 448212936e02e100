"""Current, voltage and temperature against scipy's solve_ivp on the full equations.

200 made-up motors × cycles: brushed and sinusoidal, geared both ways, vertical axes, cycles short
and long against the thermal time constants, up to 0.8 of the current of thermal runaway. An
ordinary run takes each 19th; MOTORFOLIO_FULL_PROOF=1 takes them all. The magnets have the
winding's temperature on both sides.
"""

from __future__ import annotations

import os
from dataclasses import replace

import numpy as np
import pytest

from motorfolio.schema.operation.judge import (
    Cycle,
    Demand,
    Gearing,
    Machines,
    Supply,
    Surroundings,
    Utilisations,
    judge,
)
from motorfolio.schema.operation.ratios import feasible_ratios

from .simulated_machine import Plant

CASES = 200
FULL = os.environ.get("MOTORFOLIO_FULL_PROOF") == "1"
#: Geared cases, brushed and sinusoidal, for the edges of the feasible ratios.
GEARED = [number for number in range(40) if number % 4 >= 2 and number % 6 != 0]


def posed(plant: Plant, limit: float = 155.0, supply: float | None = None, **given):
    """The plant as the package sees it: a motor and what is asked of it."""
    columns = {
        "torque_constant": plant.Km,
        "armature_resistance": plant.Ra,
        "armature_inductance": plant.La,
        "rotor_inertia": plant.J,
        "coulomb_torque": plant.Tc,
        "viscous_damping": plant.b,
        "pole_pairs": plant.p,
        "commutation": 2 if plant.sinusoidal else 0,
        "magnet_coefficient": plant.beta,
        "thermal_resistance_winding_housing": plant.Rth1,
        "thermal_resistance_housing_ambient": plant.Rth2,
        "thermal_time_constant_winding": plant.tau_w,
        "thermal_time_constant_housing": plant.tau_h,
        "maximum_winding_temperature": limit,
    }
    demand = Demand(
        Cycle.from_rows(plant.time, plant.speed, plant.torque),
        Gearing(plant.JL, plant.eta, plant.Jg),
        Supply(supply),
        surroundings=Surroundings(plant.ambient),
    )
    return Machines.of(**{**columns, **given}), demand


def judged(plant: Plant, scale: float = 1.0, *, time_constants: bool = True) -> Utilisations:
    """The package's answer; `scale` multiplies both thermal resistances."""
    scaled = {
        "thermal_resistance_winding_housing": plant.Rth1 * scale,
        "thermal_resistance_housing_ambient": plant.Rth2 * scale,
    }
    if not time_constants:
        scaled |= dict.fromkeys(
            ("thermal_time_constant_winding", "thermal_time_constant_housing"), np.nan
        )
    motor, demand = posed(plant, **scaled)
    return judge(motor, demand, plant.ratio)


def made_up(number: int) -> tuple[Plant, bool]:
    """Case `number`: the plant, and whether its thermal time constants are published."""
    rng = np.random.default_rng(7000 + number)
    sinusoidal = number % 2 == 1
    geared = number % 4 >= 2
    vertical = number % 3 == 0
    # Period over the winding's time constant, from a flicker to a day.
    swing = (3e-4, 0.02, 0.3, 1.0, 4.0, 40.0)[number % 6]
    fraction = (0.2, 0.4, 0.6, 0.8)[(number // 6) % 4]
    Km = np.exp(rng.uniform(np.log(0.01), np.log(1.0)))
    Ra = np.exp(rng.uniform(np.log(0.1), np.log(10.0)))
    ratio = rng.uniform(3, 40) if geared else 1.0
    rated = Km * np.sqrt(30.0 / Ra)  # torque of 30 W copper loss
    top = rng.uniform(0.3, 1.0) * 0.6 * 24 / Km / ratio
    ramps = rng.uniform(0.3, 1.0, 8)
    time = np.concatenate([[0.0], np.cumsum(ramps)])
    back = -rng.uniform(0.3, 1.0)
    speed = top * np.array([0, 1, 1, 0.4, 0, 0, back, back, 0])
    torque = ratio * rated * rng.uniform(-0.5, 1.0, 9)
    if vertical:  # gravity pulls one way; the load drives on the way down
        torque = np.full(9, ratio * rated * rng.uniform(0.3, 0.9))
    else:  # a step in the constant stretch
        time, speed, torque = (
            np.insert(column, 3, value)
            for column, value in ((time, time[2]), (speed, speed[2]), (torque, -0.3 * torque[2]))
        )
    period = time[-1]
    J = rated * rng.uniform(0.05, 0.3) / (top * ratio / ramps[0])
    plant = Plant(
        Km=Km,
        Ra=Ra,
        La=Ra * rng.uniform(1e-4, 1e-3),
        J=J,
        Tc=rated * rng.uniform(0.0, 0.1),
        b=rated * rng.uniform(0.0, 0.1) / (top * ratio),
        p=int(rng.integers(1, 8)),
        sinusoidal=sinusoidal,
        beta=(0.0, -0.0004, -0.0011, -0.002)[number % 4 if number % 5 else 3],
        Rth1=1.0,
        Rth2=rng.uniform(1.0, 6.0),
        tau_w=period / swing,
        tau_h=period / swing * rng.uniform(10, 60),
        ratio=ratio,
        JL=J * ratio**2 * rng.uniform(0.2, 2.0),
        eta=rng.uniform(0.6, 0.95) if geared else 1.0,
        Jg=0.1 * J if geared else 0.0,
        ambient=rng.uniform(-10, 45),
        time=time,
        speed=speed,
        torque=torque,
    )
    # The thermal resistances at which this duty runs away; heat goes with the current's square.
    low, high = 1e-6, 1e6
    for _ in range(60):
        middle = np.sqrt(low * high)
        low, high = (low, middle) if judged(plant, middle).runaway.item() else (middle, high)
    scale = low * fraction**2
    hot = judged(plant, scale).winding_temperature.item()
    assert hot > plant.ambient
    return Plant(**{**vars(plant), "Rth1": scale, "Rth2": plant.Rth2 * scale}), swing < 1e-3


def deviations(number: int) -> dict[str, float]:
    """Relative deviation of each figure from the simulation; temperatures by their rise."""
    plant, unpublished = made_up(number)
    own = judged(plant, time_constants=not unpublished)
    Tw = own.winding_temperature.item()
    outer = plant.Rth2 / (plant.Rth1 + plant.Rth2)
    seen = plant.steady(Tw, plant.ambient + outer * (Tw - plant.ambient))
    hot, cold = plant.at(seen["temperature"]), plant.at(plant.ambient)
    return {
        "peak current": own.peak_current_value.item() / max(hot["current"], cold["current"]) - 1,
        "rms current": own.rms_current.item() / max(hot["rms"], cold["rms"]) - 1,
        "voltage": own.peak_voltage.item() / max(hot["voltage"], cold["voltage"]) - 1,
        "temperature": (Tw - plant.ambient) / (seen["temperature"] - plant.ambient) - 1,
    }


@pytest.mark.parametrize("number", range(0, CASES, 1 if FULL else 19))
def test_simulation_agrees(number: int) -> None:
    found = deviations(number)
    for name, deviation in found.items():
        assert abs(deviation) < 0.01, (name, found)


def simulated_utilisation(plant: Plant, ratio: float, limit: float, supply: float) -> float:
    """The larger of voltage and temperature over their limits, at another gear ratio."""
    other = replace(plant, ratio=ratio)
    own = judged(other).winding_temperature.item()
    outer = other.Rth2 / (other.Rth1 + other.Rth2)
    seen = other.steady(own, other.ambient + outer * (own - other.ambient))
    hot, cold = other.at(seen["temperature"]), other.at(other.ambient)
    return max(
        max(hot["voltage"], cold["voltage"]) / supply,
        (seen["temperature"] - other.ambient) / (limit - other.ambient),
    )


@pytest.mark.parametrize("number", GEARED if FULL else GEARED[:3])
def test_ratio_edges_within_half_a_per_cent(number: int) -> None:
    """Half a per cent inside an edge the simulated motor holds every limit, outside it does not."""
    plant, _ = made_up(number)
    own = judged(plant)
    limit = plant.ambient + 1.2 * (own.winding_temperature.item() - plant.ambient)
    supply = 1.2 * own.peak_voltage.item()
    motor, demand = posed(plant, limit, supply)
    low, high = plant.ratio / 4, plant.ratio * 4
    found = feasible_ratios(motor, demand, low, high)
    assert found.motor.size > 0
    tried = 0
    for inner, outer in [(a, a / 1.005) for a in found.low] + [(b, b * 1.005) for b in found.high]:
        if not low * 1.006 < inner < high / 1.006:
            continue
        assert simulated_utilisation(plant, inner**2 / outer, limit, supply) < 1
        assert simulated_utilisation(plant, outer, limit, supply) > 1
        tried += 1
    assert tried > 0
