"""Made-up motors and cycles for tests, drawn from a seed."""

from __future__ import annotations

import numpy as np

from motorfolio.schema.operation.judge import (
    Cycle,
    Demand,
    Drive,
    Gearing,
    Machines,
    Supply,
    Surroundings,
)


def motors(count: int, seed: int = 0, **given) -> Machines:
    """Motors of 10 W to 1 kW, brushed, block and sinusoidal, all of their figures known."""
    rng = np.random.default_rng(seed)

    def between(low: float, high: float) -> np.ndarray:
        return np.exp(rng.uniform(np.log(low), np.log(high), count))

    Km, Ra = between(0.01, 0.5), between(0.1, 5)
    rated = Km * np.sqrt(30 / Ra)
    columns = {
        "torque_constant": Km,
        "armature_resistance": Ra,
        "armature_inductance": Ra * between(1e-4, 3e-3),
        "rotor_inertia": rated * between(1e-5, 1e-3),
        "coulomb_torque": rated * between(0.01, 0.1),
        "viscous_damping": rated * between(1e-6, 1e-4),
        "pole_pairs": rng.integers(1, 9, count),
        "commutation": rng.integers(0, 3, count),
        "magnet_coefficient": rng.choice([0, -0.0004, -0.0011, -0.002], count),
        "thermal_resistance_winding_housing": between(0.3, 2),
        "thermal_resistance_housing_ambient": between(1, 6),
        "maximum_winding_temperature": rng.choice([100.0, 125.0, 155.0], count),
        "peak_torque": rated * between(2, 10),
        "maximum_speed": between(300, 3000),
    }
    return Machines.of(**{**columns, **given})


def moving(seed: int = 0, period: float = 6.0) -> Cycle:
    """A cycle there and back with a dwell, changing torques and one step of torque."""
    rng = np.random.default_rng(seed)
    speed = 10 * np.array([0, 1, 1, 1, 0.3, 0, 0, -1, -0.6, 0])
    torque = rng.uniform(-1, 2, 10)
    time = np.array([0, 1, 2, 2, 3.2, 4, 5, 6.5, 8, 9.0]) * period / 9
    return Cycle.from_rows(time, speed, torque)


def demand(seed: int = 0, **given) -> Demand:
    """A geared load on 48 V and 20 A."""
    parts = {
        "cycle": moving(seed),
        "gearing": Gearing(0.05, 0.8, 1e-6),
        "supply": Supply(48.0),
        "drive": Drive(20.0),
        "surroundings": Surroundings(30.0),
    }
    return Demand(**{**parts, **given})


def as_plain(machines: Machines, index: int) -> dict:
    """One motor as the dict of floats of `plain_motor`."""
    motor = {name: float(column[index]) for name, column in machines.columns().items()}
    motor["sinusoidal"] = machines.commutation[index] == 2
    return motor


def demand_plain(asked: Demand) -> dict:
    """A demand as the dict of `plain_motor`."""
    return {
        "load_inertia": asked.gearing.load_inertia,
        "efficiency": asked.gearing.efficiency,
        "gear_inertia": asked.gearing.inertia,
        "supply": asked.supply.available,
        "ambient": asked.surroundings.ambient,
        "drive_peak": asked.drive.peak_current,
    }


def segments(cycle: Cycle) -> list[tuple[float, ...]]:
    """A cycle as the segments of `plain_motor`."""
    return list(
        zip(
            cycle.duration.tolist(),
            cycle.speed_start.tolist(),
            cycle.speed_end.tolist(),
            cycle.torque_start.tolist(),
            cycle.torque_end.tolist(),
            strict=True,
        )
    )
