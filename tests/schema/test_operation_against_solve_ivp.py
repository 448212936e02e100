"""Current, voltage and temperature against scipy's solve_ivp on the full equations.

200 made-up motors × cycles: brushed and sinusoidal, geared both ways, vertical axes, cycles short
and long against the thermal time constants, up to 0.8 of the current of thermal runaway. An
ordinary run takes each ninth; MOTORFOLIO_FULL_PROOF=1 takes them all. The magnets have the
winding's temperature on both sides.
"""

from __future__ import annotations

import os

import numpy as np
import pytest

from motorfolio.schema.operation import (
    Cycle,
    Demand,
    Gearing,
    Machines,
    Surroundings,
    Utilisations,
    judge,
)

from .simulated_machine import Plant

CASES = 200
FULL = os.environ.get("MOTORFOLIO_FULL_PROOF") == "1"


def judged(plant: Plant, scale: float = 1.0, *, time_constants: bool = True) -> Utilisations:
    """The package's answer; `scale` multiplies both thermal resistances."""
    nan = np.nan
    motor = Machines.of(
        torque_constant=plant.Km,
        armature_resistance=plant.Ra,
        armature_inductance=plant.La,
        rotor_inertia=plant.J,
        coulomb_torque=plant.Tc,
        viscous_damping=plant.b,
        pole_pairs=plant.p,
        commutation=2 if plant.sinusoidal else 0,
        magnet_coefficient=plant.beta,
        thermal_resistance_winding_housing=plant.Rth1 * scale,
        thermal_resistance_housing_ambient=plant.Rth2 * scale,
        thermal_time_constant_winding=plant.tau_w if time_constants else nan,
        thermal_time_constant_housing=plant.tau_h if time_constants else nan,
        maximum_winding_temperature=155.0,
    )
    demand = Demand(
        Cycle.from_rows(plant.time, plant.speed, plant.torque),
        Gearing(plant.JL, plant.eta, plant.Jg),
        surroundings=Surroundings(plant.ambient),
    )
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


@pytest.mark.parametrize("number", range(0, CASES, 1 if FULL else 9))
def test_simulation_agrees(number: int) -> None:
    found = deviations(number)
    for name, deviation in found.items():
        assert abs(deviation) < 0.01, (name, found)
