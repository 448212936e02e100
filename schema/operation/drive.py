"""One motor under voltage or current control: speeds, torques, times, ripple, braking.

SI units; positive torque is what the shaft gives in the direction of positive speed, so that a
load which is driven counts positive at positive speed. Friction opposes motion.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..convention import Commutation
from ..errors import MotorfolioError
from .machines import Machines
from .pwm import two_level_ripple
from .thermal import copper_factor, magnet_factor

#: Below this switching frequency in Hz a bridge is heard and its current chops: common practice,
#: no source.
AUDIBLE_FREQUENCY = 1000.0
#: The share of the continuous current to which the ripple is wanted to fall.
RIPPLE_SHARE = 0.1


class DriveError(MotorfolioError):
    """What was asked of a motor under control has no answer; the text says why."""


@dataclass(frozen=True)
class Motor:
    """Constants of one motor at a winding temperature, SI; NaN where one is unknown."""

    torque_constant: float
    armature_resistance: float
    armature_inductance: float
    rotor_inertia: float
    coulomb_torque: float
    viscous_damping: float
    pole_pairs: float
    commutation: Commutation

    @classmethod
    def of(cls, machines: Machines, index: int, temperature: float = 25.0) -> Motor:
        """A motor out of the columns, its copper and magnets at a temperature in °C."""
        one = machines.take(np.array([index]))
        return cls(
            float(one.torque_constant[0] * magnet_factor(temperature, one.magnet_coefficient)[0]),
            float(one.armature_resistance[0] * copper_factor(temperature)),
            float(one.armature_inductance[0]),
            float(one.rotor_inertia[0]),
            float(np.nan_to_num(one.coulomb_torque[0])),
            float(np.nan_to_num(one.viscous_damping[0])),
            float(one.pole_pairs[0]),
            Commutation(int(one.commutation[0])),
        )

    def friction(self, speed: float) -> float:
        """Friction torque at a speed, against it; 0 at standstill, where it takes what it must."""
        return self.coulomb_torque * _sign(speed) + self.viscous_damping * speed


@dataclass(frozen=True)
class OperatingPoint:
    """A steady point: current in armature amperes, terminal voltage (its magnitude for sinusoidal
    currents, signed otherwise), electrical power at the terminals (negative: returned)."""

    speed: float
    torque: float
    current: float
    voltage: float
    mechanical_power: float
    electrical_power: float
    copper_loss: float


def operating_point(motor: Motor, speed: float, torque: float) -> OperatingPoint:
    """Current, voltage and powers at a speed and shaft torque: Ia = (T + T_f)/Km,
    U = Ra·Ia + Km·ω, with p·ω·La·Ia at a right angle for sinusoidal currents."""
    current = (torque + motor.friction(speed)) / motor.torque_constant
    voltage = motor.armature_resistance * current + motor.torque_constant * speed
    loss = motor.armature_resistance * current**2
    power = loss + motor.torque_constant * speed * current
    if motor.commutation == Commutation.SINUSOIDAL and speed != 0:
        across = motor.pole_pairs * speed * motor.armature_inductance * current
        voltage = math.hypot(voltage, across)
    return OperatingPoint(speed, torque, current, voltage, torque * speed, power, loss)


def bridge_share(
    motor: Motor, speed: float, torque: float, supply_voltage: float, bridge_drop: float = 0.0
) -> float:
    """Average bridge voltage as a share of the supply (the duty cycle) at a point; above 1 the
    supply does not suffice."""
    return (abs(operating_point(motor, speed, torque).voltage) + bridge_drop) / supply_voltage


def speed_at_voltage(motor: Motor, voltage: float, torque: float = 0.0) -> float:
    """Steady speed at a terminal voltage (duty cycle times supply, less the bridge's drop) and a
    shaft torque; 0 where friction holds the shaft.

    ω = (U − Ra·(T + T_c·σ)/Km)/(Km + Ra·b/Km), σ the sign of the speed. With sinusoidal currents
    the lowest speed at which U² = (Ra·Ia + Km·ω)² + (p·ω·La·Ia)².
    """
    K, R = motor.torque_constant, motor.armature_resistance
    for direction in (1.0, -1.0):
        free = voltage - R * (torque + motor.coulomb_torque * direction) / K
        speed = free / (K + R * motor.viscous_damping / K)
        if speed * direction > 0:
            break
    else:
        return 0.0
    if motor.commutation != Commutation.SINUSOIDAL:
        return speed
    X = motor.pole_pairs * motor.armature_inductance / K
    if math.isnan(X):
        raise DriveError(
            "The inductance or the number of pole pairs is unknown, on which the speed of a motor "
            "with sinusoidal currents depends; give both."
        )
    load = torque + motor.coulomb_torque * direction
    along = np.polynomial.Polynomial([R * load / K, K + R * motor.viscous_damping / K])
    across = np.polynomial.Polynomial([0.0, X * load, X * motor.viscous_damping])
    roots = (along**2 + across**2 - voltage**2).roots()
    real = roots[np.abs(roots.imag) < 1e-9 * (1 + np.abs(roots))].real * direction
    ahead = real[real > 0]
    return float(ahead.min()) * direction if ahead.size else 0.0


def no_load_speed(motor: Motor, voltage: float) -> float:
    """The speed that nothing but friction holds back."""
    return speed_at_voltage(motor, voltage)


def torque_at_current(motor: Motor, current: float, speed: float = 0.0) -> float:
    """Shaft torque at an armature current; at standstill what a shaft about to turn has left, 0
    where friction holds it."""
    inner = motor.torque_constant * current
    if speed == 0:
        return _sign(inner) * max(0.0, abs(inner) - motor.coulomb_torque)
    return inner - motor.friction(speed)


def acceleration_at_current(
    motor: Motor,
    current: float,
    speed: float = 0.0,
    load_torque: float = 0.0,
    load_inertia: float = 0.0,
) -> float:
    """Acceleration of rotor and load (both at the motor shaft) at an armature current; 0 where
    friction holds a standing shaft."""
    inertia = motor.rotor_inertia + load_inertia
    net = motor.torque_constant * current - load_torque
    if speed == 0:
        net = _sign(net) * max(0.0, abs(net) - motor.coulomb_torque)
    else:
        net -= motor.friction(speed)
    return net / inertia


def time_at_current(
    motor: Motor,
    current: float,
    speed: float,
    start: float = 0.0,
    load_torque: float = 0.0,
    load_inertia: float = 0.0,
) -> float:
    """Time from one speed up to another, both ≥ 0, at constant current; infinite if it is never
    reached. J·dω/dt = Km·Ia − T − T_c − b·ω."""
    _rising(start, speed)
    inertia = motor.rotor_inertia + load_inertia
    net = motor.torque_constant * current - load_torque - motor.coulomb_torque
    b = motor.viscous_damping
    at_start, at_end = net - b * start, net - b * speed
    if at_start <= 0 or at_end <= 0:
        return 0.0 if speed == start else math.inf
    if b * (speed - start) < 1e-9 * at_start:
        return inertia * (speed - start) / at_start
    return inertia / b * math.log(at_start / at_end)


def time_at_voltage(
    motor: Motor,
    voltage: float,
    speed: float,
    start: float = 0.0,
    load_torque: float = 0.0,
    load_inertia: float = 0.0,
    *,
    with_inductance: bool = False,
) -> float:
    """Time from one speed up to another, both ≥ 0, at constant voltage; infinite if it is never
    reached.

    Without inductance −τ·ln(1 − (ω − ω0)/(ω∞ − ω0)), τ = J·Ra/(Km² + Ra·b). With it the exact
    solution of the two states current and speed; from rest the current first rises until it
    overcomes friction and load, which do not turn the shaft back. Raises DriveError for sinusoidal
    currents, which are controlled by current.
    """
    _rising(start, speed)
    if motor.commutation == Commutation.SINUSOIDAL:
        raise DriveError(
            "A motor with sinusoidal currents is not run up at constant voltage; ask for the time "
            "at a current."
        )
    K, R, b = motor.torque_constant, motor.armature_resistance, motor.viscous_damping
    inertia = motor.rotor_inertia + load_inertia
    held = load_torque + motor.coulomb_torque
    final = (voltage - R * held / K) / (K + R * b / K)
    if speed == start:
        return 0.0
    if not with_inductance:
        if final <= speed:
            return math.inf
        tau = inertia * R / (K**2 + R * b)
        return -tau * math.log1p(-(speed - start) / (final - start))
    if math.isnan(motor.armature_inductance):
        raise DriveError("The inductance is unknown; ask for the time without it.")
    return _second_order_time(motor, voltage, speed, start, held, inertia, final)


def run_up_time(
    motor: Motor,
    voltage: float,
    current: float,
    speed: float,
    load_torque: float = 0.0,
    load_inertia: float = 0.0,
) -> float:
    """Time from rest to a speed with a drive that holds a current limit until its voltage is used
    up, and that voltage from there on (no inductance)."""
    corner = (voltage - motor.armature_resistance * current) / motor.torque_constant
    if motor.commutation == Commutation.SINUSOIDAL or corner >= speed:
        if operating_point(motor, speed, load_torque).voltage > voltage:
            return math.inf
        if corner < speed:
            raise DriveError(
                "The voltage is used up before that speed at that current; ask for less current."
            )
        return time_at_current(motor, current, speed, 0.0, load_torque, load_inertia)
    corner = max(corner, 0.0)
    first = time_at_current(motor, current, corner, 0.0, load_torque, load_inertia)
    return first + time_at_voltage(motor, voltage, speed, corner, load_torque, load_inertia)


@dataclass(frozen=True)
class Braking:
    """A braking point: current (negative against positive speed), terminal voltage, power that
    comes back to the supply (0 if the motor has to be fed to brake that hard), and the current
    that flows if the terminals are shorted instead."""

    current: float
    voltage: float
    returned_power: float
    short_circuit_current: float


def braking(
    motor: Motor,
    speed: float,
    deceleration: float,
    load_torque: float = 0.0,
    load_inertia: float = 0.0,
) -> Braking:
    """Current, voltage and power while slowing down at a rate (rad/s², above 0) from a speed."""
    inertia = motor.rotor_inertia + load_inertia
    torque = load_torque - _sign(speed) * deceleration * inertia
    point = operating_point(motor, speed, torque)
    short = -motor.torque_constant * speed / motor.armature_resistance
    if motor.commutation == Commutation.SINUSOIDAL:
        reactance = motor.pole_pairs * speed * motor.armature_inductance
        short = -motor.torque_constant * speed / math.hypot(motor.armature_resistance, reactance)
    return Braking(point.current, point.voltage, max(0.0, -point.electrical_power), short)


def ripple_at(motor: Motor, supply_voltage: float, frequency: float, duty: float = 0.5) -> float:
    """Peak-to-peak current ripple of two-level switching, largest at a duty cycle of one half."""
    _two_level(motor)
    return float(
        two_level_ripple(
            duty, supply_voltage, motor.armature_resistance, motor.armature_inductance, frequency
        )[0]
    )


def quiet_frequency(motor: Motor, supply_voltage: float, continuous_current: float) -> float:
    """Switching frequency in Hz at which the largest ripple falls to a tenth of the continuous
    current; 0 if it never exceeds it.

    At a duty cycle of one half ΔI = (U_bus/Ra)·tanh(Ra/(4·f·La)).
    """
    _two_level(motor)
    share = RIPPLE_SHARE * continuous_current * motor.armature_resistance / supply_voltage
    if share >= 1:
        return 0.0
    return motor.armature_resistance / (4 * motor.armature_inductance * math.atanh(share))


def frequency_note(frequency: float) -> str | None:
    """What to know about a low switching frequency, if it is one."""
    if frequency >= AUDIBLE_FREQUENCY:
        return None
    return (
        f"{frequency:g} Hz is below {AUDIBLE_FREQUENCY:g} Hz: the bridge is heard and the current "
        "may fall to nothing between pulses (common practice, no source)."
    )


def _two_level(motor: Motor) -> None:
    if motor.commutation == Commutation.SINUSOIDAL:
        raise DriveError(
            "The peak-to-peak ripple is that of a brushed or block-commutated motor; for "
            "sinusoidal currents the judgement gives its rms value."
        )
    if math.isnan(motor.armature_inductance):
        raise DriveError("The inductance is unknown, without which there is no ripple to state.")


def _rising(start: float, speed: float) -> None:
    if start < 0 or speed < start:
        raise DriveError("A run-up goes from a speed of 0 or more to a higher one.")


def _sign(value: float) -> float:
    return math.copysign(1.0, value) if value else 0.0


def _second_order_time(
    motor: Motor,
    voltage: float,
    speed: float,
    start: float,
    held: float,
    inertia: float,
    final: float,
) -> float:
    """First time at which the exact solution of current and speed reaches a speed.

    x' = A·(x − x∞), A = [[−Ra/La, −Km/La], [Km/J, −b/J]]; e^(At) = e^(ht)·(cosh(st)·1 +
    sinh(st)/s·(A − h·1)) with h half the trace and s² = h² − det A, imaginary if it oscillates.
    """
    K, R, L = motor.torque_constant, motor.armature_resistance, motor.armature_inductance
    b = motor.viscous_damping
    delay, current = 0.0, 0.0
    needed = (held + b * start) / K
    if start == 0 and needed > 0:
        if voltage <= R * needed:
            return math.inf
        delay, current = -L / R * math.log1p(-R * needed / voltage), needed
    h = -(R / L + b / inertia) / 2
    s = np.emath.sqrt(h**2 - (R * b + K**2) / (L * inertia))
    off_current = current - (held + b * final) / K
    off_speed = start - final
    slope = K / inertia * off_current + (-b / inertia - h) * off_speed

    def at(t: float) -> float:
        if abs(s * t) < 1e-6:
            return final + math.exp(h * t) * (off_speed + slope * t)
        # Exponentials are joined first, so that a long time overflows in none of them.
        grow, fall = np.exp((h + s) * t), np.exp((h - s) * t)
        part = (grow + fall) / 2 * off_speed + (grow - fall) / (2 * s) * slope
        return final + float(np.real(part))

    if np.imag(s):
        end = math.pi / float(np.imag(s))  # from rest the first, largest peak
        if at(end) < speed:
            return math.inf
    else:
        if final <= speed:
            return math.inf
        end = -1 / float(np.real(h + s))
        while at(end) < speed:
            end *= 2
    begin = 0.0
    for _ in range(200):
        middle = (begin + end) / 2
        if middle in (begin, end):
            break
        begin, end = (begin, middle) if at(middle) >= speed else (middle, end)
    return delay + end
