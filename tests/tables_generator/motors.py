"""Invented motors: a frame and its windings, every figure from one set of true constants.

Relations: T = K·(I − I0), U = R·I + K·ω (the permanent-magnet motor; any textbook on electric
machines), for sinusoidal currents Kt per ampere rms = √3 · Ke rms line-to-line.
"""

from __future__ import annotations

import math
from random import Random

MAKER_CODES = ("VX", "QR", "DK-", "Z", "MB ", "TL-", "KU", "H", "BX-S", "N")


def _spread(rng: Random, low: float, high: float) -> float:
    return math.exp(rng.uniform(math.log(low), math.log(high)))


def draw_motors(rng: Random, kind: str, windings: int) -> list[dict[str, float]]:
    """The true figures of a family, SI: one dictionary a winding."""
    return _servos(rng, windings) if kind == "servo" else _micros(rng, windings)


def _micros(rng: Random, windings: int) -> list[dict[str, float]]:
    power = _spread(rng, 2, 400)
    speed = rng.uniform(4000, 12000) * math.pi / 30
    tau_m = _spread(rng, 4e-3, 15e-3)
    tau_e = _spread(rng, 0.06e-3, 0.9e-3)
    loss = rng.uniform(0.006, 0.025)
    mass = 0.015 * power**0.75
    diameter = 0.012 * power**0.28
    frame = {
        "mass": mass,
        "diameter": diameter,
        "length": diameter * rng.uniform(1.4, 2.2),
        "maximum_speed": speed * rng.uniform(1.3, 1.8),
        "thermal_resistance_winding_housing": 12 / power**0.45,
        "thermal_resistance_housing_ambient": 45 / power**0.5,
        "thermal_time_constant_winding": 4 * power**0.35,
        "thermal_time_constant_housing": 150 * power**0.3,
        "maximum_winding_temperature": rng.choice([85.0, 100.0, 125.0, 155.0]),
        "pole_pairs": float(rng.choice([1, 2, 4, 7])),
        "phases": 3.0,
    }
    frame["poles"] = 2 * frame["pole_pairs"]
    volts = rng.sample([3, 4.5, 6, 9, 12, 15, 18, 24, 30, 36, 42, 48], windings)
    load = rng.uniform(0.12, 0.3)
    inertia = tau_m * (power * 4 / speed**2)
    motors = []
    for voltage in sorted(volts):
        resistance = voltage**2 / (4 * power)
        stall_current = voltage / resistance
        idle = loss * stall_current
        constant = (voltage - resistance * idle) / (speed * rng.uniform(0.94, 1.06))
        no_load = (voltage - resistance * idle) / constant
        current = load * stall_current
        nominal = (voltage - resistance * current) / constant
        torque = constant * (current - idle)
        motors.append(
            {
                **frame,
                "nominal_voltage": float(voltage),
                "no_load_speed": no_load,
                "no_load_current": idle,
                "nominal_speed": nominal,
                "nominal_torque": torque,
                "nominal_current": current,
                "stall_torque": constant * (stall_current - idle),
                "stall_current": stall_current,
                "maximum_efficiency": (1 - math.sqrt(idle / stall_current)) ** 2,
                "maximum_power": no_load * constant * (stall_current - idle) / 4,
                "rated_power": nominal * torque,
                "terminal_resistance": resistance,
                "terminal_inductance": tau_e * resistance,
                "torque_constant": constant,
                "speed_constant": 1 / constant,
                "back_emf_constant": constant,
                "speed_torque_gradient": resistance / constant**2,
                "motor_constant": constant / math.sqrt(resistance),
                "mechanical_time_constant": inertia * resistance / constant**2,
                "electrical_time_constant": tau_e,
                "friction_torque": constant * idle,
                "rotor_inertia": inertia,
            }
        )
    return motors


def _servos(rng: Random, windings: int) -> list[dict[str, float]]:
    standstill = _spread(rng, 0.8, 60)
    frame = {
        "continuous_stall_torque": standstill,
        "peak_torque": standstill * rng.uniform(3, 4),
        "rotor_inertia": 1.2e-4 * standstill**1.2,
        "mass": 1.2 + 0.6 * standstill,
        "diameter": 0.055 * standstill**0.3,
        "maximum_speed": rng.choice([6000, 7500, 9000]) * math.pi / 30,
        "thermal_resistance_housing_ambient": 1.5 / standstill**0.6,
        "thermal_time_constant_housing": 60.0 * round(20 + 5 * math.sqrt(standstill)),
        "pole_pairs": float(rng.choice([3, 4, 5])),
        "phases": 3.0,
        "motor_constant": 0.25 * standstill**0.75,
    }
    frame["poles"] = 2 * frame["pole_pairs"]
    tau_e = _spread(rng, 4e-3, 15e-3)
    motors = []
    for rpm in sorted(rng.sample([1500, 2000, 2500, 3000, 4000, 4500, 5000, 6000], windings)):
        speed = rpm * math.pi / 30
        constant = 400 / (speed * 1.2) * math.sqrt(3) * 0.6
        torque = standstill * (1 - 0.06 * rpm / 1000)
        armature = constant / math.sqrt(1.5)
        resistance = (armature / frame["motor_constant"]) ** 2
        motors.append(
            {
                **frame,
                "nominal_speed": speed,
                "nominal_torque": torque,
                "nominal_current": torque / constant * 1.03,
                "continuous_stall_current": standstill / constant,
                "rated_power": torque * speed,
                "peak_current": frame["peak_torque"] / constant * 1.15,
                "torque_constant": constant,
                "back_emf_constant": constant / math.sqrt(3),
                "terminal_resistance": resistance,
                "terminal_inductance": tau_e * resistance,
                "electrical_time_constant": tau_e,
            }
        )
    return motors


def draw_part_numbers(rng: Random, count: int, plain_digits: bool) -> list[str]:
    """Invented part numbers; ``plain_digits`` allows order numbers that look like a count."""
    if plain_digits and rng.random() < 0.5:
        start = rng.randrange(110_000, 880_000)
        return [str(start + 7 * i) for i in range(count)]
    code = rng.choice(MAKER_CODES)
    size = rng.choice([16, 22, 28, 32, 40, 55, 70, 90])
    pattern = rng.choice(
        ["{c}{s}{l}{v:03d}", "{c}{s}-{v:03d}{l}", "{c}{s}{l}-{v}", "{c}{s}/{v}{l}"]
    )
    letter = rng.choice("SGBK")
    return [pattern.format(c=code, s=size, l=letter, v=6 + 3 * i) for i in range(count)]
