"""Invented motors from true constants: an independent statement of the physics, in SI.

Nothing here comes from the program that reads the sheets. Every motor is a permanent-magnet motor
reduced to a DC machine at its terminals: torque Km·I, back-EMF Km·ω, copper loss Ra·I².
"""

from __future__ import annotations

import math
from dataclasses import dataclass

COPPER = 234.5  # K below 0 °C at which copper's resistance extrapolates to zero (IEC 60034-1)
MAGNET = {"NdFeB": -0.0011, "ferrite": -0.0020, "SmCo": -0.0004}  # 1/K, common practice
RPM = math.pi / 30  # rad/s
STATED = 25.0  # °C, the temperature of the true constants


@dataclass(frozen=True)
class Frame:
    """One motor size; what all of its windings share. SI units, °C."""

    series: str
    motor_constant: float  # Km/√Ra at 25 °C
    rotor_inertia: float
    electrical_time_constant: float
    friction: float  # Coulomb friction torque
    mass: float
    diameter: float
    length: float
    maximum_winding_temperature: float
    magnet: str = "NdFeB"
    damping: float = 0.0
    rth1: float = 0.0  # winding to housing
    rth2: float = 0.0  # housing to ambient
    tau_winding: float = 0.0
    tau_housing: float = 0.0
    pole_pairs: int = 1
    maximum_speed: float = 0.0
    peak_over_nominal: float = 4.0  # current
    stall_torque: float = 0.0  # continuous, at standstill (servo sheets)
    description: str = ""


@dataclass(frozen=True)
class Winding:
    """A winding of a frame, by the voltage and the speed it is wound for."""

    part: str
    voltage: float
    speed: float  # rpm: no load (brushed, block) or rated (sinusoidal)
    price: float = 0.0


@dataclass(frozen=True)
class Motor:
    """True constants at 25 °C, terminal values of the equivalent DC motor."""

    frame: Frame
    winding: Winding
    commutation: str
    Km: float
    Ra: float

    @property
    def La(self) -> float:  # noqa: N802
        return self.Ra * self.frame.electrical_time_constant

    def at(self, temperature: float) -> tuple[float, float]:
        """Km and Ra with winding and magnets at `temperature` (°C)."""
        beta = MAGNET[self.frame.magnet]
        Km = self.Km * (1 + beta * (temperature - STATED))
        Ra = self.Ra * (COPPER + temperature) / (COPPER + STATED)
        return Km, Ra

    def no_load(self, temperature: float = STATED) -> tuple[float, float]:
        """Current and speed (A, rad/s): Km·I0 = Tc + b·n0, n0 = (U − Ra·I0)/Km."""
        Km, Ra = self.at(temperature)
        f = self.frame
        n0 = (self.winding.voltage / Km - Ra * f.friction / Km**2) / (1 + Ra * f.damping / Km**2)
        return (f.friction + f.damping * n0) / Km, n0

    def constants(self) -> dict[str, float]:
        """The true constants at 25 °C under the keys that the catalog uses."""
        return {
            "torque_constant": self.Km,
            "armature_resistance": self.Ra,
            "armature_inductance": self.La,
            "rotor_inertia": self.frame.rotor_inertia,
            "no_load_current": self.no_load()[0],
            "viscous_damping": self.frame.damping,
            "motor_constant": self.frame.motor_constant,
        }


def make_motor(frame: Frame, winding: Winding, commutation: str) -> Motor:
    """Choose Km for the voltage and speed asked for; Ra follows from the frame's motor constant."""
    share = 0.72 if commutation == "sinusoidal" else 0.985  # of the voltage left for back-EMF
    Km = float(f"{share * winding.voltage / (winding.speed * RPM):.4g}")
    return Motor(frame, winding, commutation, Km, (Km / frame.motor_constant) ** 2)


def _frame_figures(frame: Frame) -> dict[str, float]:
    return {
        "rotor_inertia": frame.rotor_inertia,
        "mass": frame.mass,
        "diameter": frame.diameter,
        "length": frame.length,
        "maximum_winding_temperature": frame.maximum_winding_temperature,
        "thermal_resistance_winding_housing": frame.rth1,
        "thermal_resistance_housing_ambient": frame.rth2,
        "thermal_resistance": frame.rth1 + frame.rth2,
        "thermal_time_constant_winding": frame.tau_winding,
        "thermal_time_constant_housing": frame.tau_housing,
        "pole_pairs": frame.pole_pairs,
        "poles": 2 * frame.pole_pairs,
        "maximum_speed": frame.maximum_speed,
        "friction_torque": frame.friction,
        "viscous_damping": frame.damping,
    }


FRAME_KEYS = frozenset(_frame_figures(Frame("", 1, 1, 1, 1, 1, 1, 1, 1)))


def dc_figures(motor: Motor, reference: float, gross_stall: bool) -> dict[str, float]:
    """Figures of a brushed or block-commutated sheet at its reference temperature, in SI.

    The nominal point is the thermal limit: Ra(Tmax)·I²·(Rth1+Rth2) = Tmax − Tamb, with the ambient
    at the reference temperature. `gross_stall`: stall torque printed as Km·Is, friction left out.
    """
    f, U = motor.frame, motor.winding.voltage
    Km, Ra = motor.at(reference)
    I0, n0 = motor.no_load(reference)
    hot = motor.at(f.maximum_winding_temperature)[1]
    rise = f.maximum_winding_temperature - reference
    IN = math.sqrt(rise / (hot * (f.rth1 + f.rth2)))
    TN, nN = Km * (IN - I0), (U - Ra * IN) / Km
    Is = U / Ra
    Ts = Km * Is if gross_stall else Km * (Is - I0)
    return _frame_figures(f) | {
        "nominal_voltage": U,
        "no_load_speed": n0,
        "no_load_current": I0,
        "nominal_speed": nN,
        "nominal_torque": TN,
        "nominal_current": IN,
        "rated_power": TN * nN,
        "rated_efficiency": TN * nN / (U * IN),
        "stall_torque": Ts,
        "stall_current": Is,
        "maximum_power": n0 * Ts / 4,
        "maximum_efficiency": (1 - math.sqrt(I0 / Is)) ** 2,
        "peak_current": f.peak_over_nominal * IN,
        "peak_torque": 0.95 * Km * f.peak_over_nominal * IN,
        "terminal_resistance": Ra,
        "terminal_inductance": motor.La,
        "torque_constant": Km,
        "back_emf_constant": Km,
        "speed_constant": 1 / Km,
        "speed_torque_gradient": Ra / Km**2,
        "motor_constant": Km / math.sqrt(Ra),
        "mechanical_time_constant": f.rotor_inertia * Ra / Km**2,
        "electrical_time_constant": motor.La / Ra,
        "price": motor.winding.price,
    }


def servo_figures(motor: Motor) -> dict[str, float]:
    """Figures of a sinusoidal servo sheet: A rms, V rms line-to-line, at 25 °C, in SI.

    Ia = √(3/2)·I_rms; torque constant √(3/2)·Km per A rms; back-EMF Km/√2 rms line-to-line.
    Iron loss takes up to 15 % of the standstill torque at 6000 rpm; saturation 8 % of the peak.
    """
    f, w = motor.frame, motor.winding
    Km, Ra = motor.at(STATED)
    rms = 1 / math.sqrt(1.5)
    drag = f.friction / Km  # armature amperes
    T0, TN = f.stall_torque, f.stall_torque * (1 - 0.15 * w.speed / 6000)
    I0, IN = rms * (T0 / Km + drag), rms * (TN / Km + drag)
    peak = f.peak_over_nominal * I0
    return _frame_figures(f) | {
        "nominal_voltage": w.voltage,
        "continuous_stall_torque": T0,
        "continuous_stall_current": I0,
        "nominal_speed": w.speed * RPM,
        "nominal_torque": TN,
        "nominal_current": IN,
        "rated_power": TN * w.speed * RPM,
        "peak_torque": 0.92 * Km / rms * peak,
        "peak_current": peak,
        "torque_constant": Km / rms,
        "back_emf_constant": Km / math.sqrt(2),
        "terminal_resistance": Ra,
        "terminal_inductance": motor.La,
        "motor_constant": Km / math.sqrt(Ra),
        "electrical_time_constant": motor.La / Ra,
        "mechanical_time_constant": f.rotor_inertia * Ra / Km**2,
        "price": w.price,
    }
