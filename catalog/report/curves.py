"""The numbers behind a motor's torque–speed plane and its utilisations over the gear ratio.

SI units; speeds are magnitudes, torques are those of the shaft in the direction of motion
(negative: braking). What limits the shaft's torque is found with the same functions that judge a
requirement, so that a point inside every limit is a point that the search passes.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ...schema.convention import Commutation
from ...schema.operation.cycle import Cycle
from ...schema.operation.demand import Demand
from ...schema.operation.heating import Load, heating
from ...schema.operation.judge import judge
from ...schema.operation.machines import Machines, armature_amperes
from ...schema.operation.thermal import copper_factor, magnet_factor
from .plain import number

Array = NDArray[np.float64]

SPEEDS = 121
_HALVINGS = 40


@dataclass
class Limit:
    """A limit of the shaft's torque (N·m) over the plane's speeds, NaN where there is none."""

    kind: str
    torque: Array
    note: str


@dataclass
class Plane:
    """A motor's torque–speed plane: speeds (rad/s), limits, friction torque (N·m) over the speeds,
    and what its sheet lacks for more.

    `cycle` holds, if there is a requirement, lines (2, n) of speed and torque at the motor's shaft,
    one a stretch of the cycle; `rms` its root mean square speed and torque; `maximum_speed` in
    rad/s, NaN if not published.
    """

    speed: Array
    limits: list[Limit]
    friction: Array
    missing: list[str]
    maximum_speed: float
    cycle: list[Array]
    rms: tuple[float, float] | None

    def lasting(self) -> tuple[Array, Array]:
        """The edge of what may last, speeds and torques from 0: within the continuous limit, the
        voltage (cold and hot) and the permissible speed, at which it ends."""
        curves = [c.torque for c in self.limits if c.kind.split()[0] in ("continuous", "voltage")]
        if not any(c.kind == "continuous" for c in self.limits):
            return np.empty(0), np.empty(0)
        torque = np.min(np.clip(np.nan_to_num(curves), 0, None), axis=0)
        top = self.maximum_speed
        if np.isnan(top) or top >= self.speed[-1]:
            return self.speed, torque
        inside = self.speed < top
        return np.append(self.speed[inside], top), np.append(
            torque[inside], np.interp(top, self.speed, torque)
        )


def plane(machine: Machines, demand: Demand, ratio: float | None = None) -> Plane:
    """The plane of one motor (columns of length 1) at the demand's supply, drive and ambient.

    With a ratio the demand's cycle is drawn into it and the hot voltage limit is that of the
    winding temperature that the cycle leads to; else that of the permissible one.
    """
    ambient, available = demand.surroundings.ambient, demand.supply.available
    lines: list[Array] = []
    hot = float(machine.maximum_winding_temperature[0])
    rms = None
    if ratio is not None:
        use = judge(machine, demand, ratio)
        at_work = float(use.winding_temperature[0, 0])
        hot = hot if np.isnan(at_work) else at_work
        lines, rms = cycle_at_motor(machine, demand, ratio)
    speed = np.linspace(0.0, _fastest(machine, demand, lines), SPEEDS)
    missing: list[str] = []
    limits = []
    continuous = continuous_torque(machine, speed, demand)
    if np.isnan(continuous).all():
        missing.append("thermal figures for the continuous limit")
    else:
        limits.append(Limit("continuous", continuous, f"ambient {number(ambient, 3)} °C"))
    peak, note = peak_torque(machine, speed, demand, ambient if np.isnan(hot) else hot)
    if np.isnan(peak).all():
        missing.append("a peak current or torque")
    else:
        limits.append(Limit("peak", peak, note))
    if available is not None:
        if not voltage_is_whole(machine):
            missing.append("inductance or pole pairs: the voltage limit is an upper bound")
        for kind, temperature in (("voltage cold", ambient), ("voltage hot", hot)):
            if not np.isnan(temperature):
                torque = voltage_torque(machine, speed, available, temperature)
                note = f"{number(available)} V, winding at {number(temperature, 3)} °C"
                limits.append(Limit(kind, torque, note))
    return Plane(
        speed,
        limits,
        friction(machine, speed),
        missing,
        float(machine.maximum_speed[0]),
        lines,
        rms,
    )


def _fastest(machine: Machines, demand: Demand, lines: list[Array]) -> float:
    """The plane's right edge: a little more than the no-load speed, and than the cycle's."""
    available = demand.supply.available
    top = max((float(line[0].max()) for line in lines), default=0.0)
    if available is not None:
        top = max(top, available / float(machine.torque_constant[0]))
    elif not np.isnan(machine.maximum_speed[0]):
        top = max(top, float(machine.maximum_speed[0]))
    return 1.05 * top if top > 0 else 1.0


def friction(machine: Machines, speed: Array) -> Array:
    """Friction torque against the motion; what is unknown counts as 0."""
    b = float(np.nan_to_num(machine.viscous_damping[0]))
    return float(np.nan_to_num(machine.coulomb_torque[0])) + b * speed


def continuous_torque(machine: Machines, speed: Array, demand: Demand) -> Array:
    """The largest torque that may last, NaN where the sheet does not tell it or nothing may.

    By halving, of the steady winding temperature that `heating` works out.
    """
    n = len(speed)
    cases = machine.take(np.zeros(n, np.intp))
    pieces = Cycle.from_points([(1.0, 1.0, 1.0)]).pieces()
    rubbing = friction(machine, speed)
    still = replace(demand, supply=replace(demand.supply, pwm_frequency=None))
    nothing = [np.zeros(n)] * 4

    def passes(torque: Array) -> NDArray[np.bool_]:
        load = Load(pieces, speed, nothing, (torque + rubbing) ** 2, rubbing * speed)
        with np.errstate(all="ignore"):
            return heating(cases, load, still, periodic=False).utilisation <= 1

    low = np.zeros(n)
    possible = passes(low)
    if not possible.any():
        return np.full(n, np.nan)
    high = np.full(n, float(machine.torque_constant[0]) * 0.01)
    for _ in range(60):
        more = passes(high)
        if not more.any():
            break
        high = np.where(more, high * 2, high)
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        good = passes(middle)
        low, high = np.where(good, middle, low), np.where(good, high, middle)
    return np.where(possible, low, np.nan)


def peak_torque(
    machine: Machines, speed: Array, demand: Demand, temperature: float
) -> tuple[Array, str]:
    """What the lesser of drive and motor peak current gives (magnets at a temperature), no more
    than the published peak torque; NaN where none of them is known. And which of them it is."""
    current, note = float(machine.peak_current[0]), "the motor's peak current"
    if demand.drive.peak_current is not None:
        drive = armature_amperes(
            demand.drive.peak_current, demand.drive.convention, machine.commutation
        )
        if np.isnan(current) or drive[0] < current:
            current, note = float(drive[0]), "the drive's peak current"
    coefficient = machine.magnet_coefficient[0]
    flux = min(
        float(magnet_factor(T, coefficient))
        for T in (temperature, demand.surroundings.ambient)
    )  # fmt: skip
    torque = float(machine.torque_constant[0]) * flux * current - friction(machine, speed)
    published = float(machine.peak_torque[0])
    if np.isnan(current) or published < torque[0]:
        return np.fmin(torque, published), "the motor's peak torque"
    return np.fmin(torque, published), f"{note}, {number(current, 3)} A (armature)"


def voltage_is_whole(machine: Machines) -> bool:
    """Whether the voltage is known with its inductive share, which sinusoidal currents have."""
    reactance = machine.pole_pairs[0] * machine.armature_inductance[0]
    return machine.commutation[0] != Commutation.SINUSOIDAL or not np.isnan(reactance)


def voltage_torque(machine: Machines, speed: Array, voltage: float, temperature: float) -> Array:
    """The torque at which a voltage is used up with the winding at a temperature (°C).

    U² = (Ra·Ia + Km·ω)² + (p·ω·La·Ia)², solved for the larger Ia; the last term for sinusoidal
    currents only. NaN beyond the speed at which no current is left to solve for.
    """
    Ra = float(machine.armature_resistance[0] * copper_factor(temperature))
    Km = float(
        machine.torque_constant[0] * magnet_factor(temperature, machine.magnet_coefficient)[0]
    )
    X = np.zeros_like(speed)
    if machine.commutation[0] == Commutation.SINUSOIDAL and voltage_is_whole(machine):
        X = float(machine.pole_pairs[0] * machine.armature_inductance[0]) * speed
    emf = Km * speed
    a, b, c = Ra**2 + X**2, Ra * emf, emf**2 - voltage**2
    with np.errstate(invalid="ignore"):
        current = (np.sqrt(b * b - a * c) - b) / a
    return Km * current - friction(machine, speed)


def cycle_at_motor(
    machine: Machines, demand: Demand, ratio: float
) -> tuple[list[Array], tuple[float, float]]:
    """The cycle at the motor's shaft: a line (2, n) of speed and torque for each of its stretches,
    and its rms values."""
    pieces = demand.cycle.pieces(demand.gearing.load_inertia, demand.gearing.efficiency)
    inertia = float(machine.rotor_inertia[0]) + demand.gearing.inertia
    accelerates = pieces.gram[1, 1] > 0
    swing = inertia * ratio if accelerates else 0.0
    torque = pieces.basis[:, :, 0] / ratio + np.where(accelerates, pieces.basis[:, :, 1], 0) * swing
    speed = pieces.basis[:, :, 3] * ratio
    sign = np.where(pieces.basis[:, :, 2] < 0, -1.0, 1.0)
    ends = np.stack([np.abs(speed), torque * sign], axis=1)
    cuts = np.flatnonzero(np.diff(pieces.stretch)) + 1
    lines = [np.concatenate([*piece], axis=1) for piece in np.split(ends, cuts)]

    def rms(values: Array) -> float:
        a, b = values.T
        return float(np.sqrt(pieces.duration @ (a * a + a * b + b * b) / 3 / pieces.period))

    return lines, (rms(speed), rms(torque))
