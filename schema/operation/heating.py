"""The winding temperature that a cycle asks for, by whichever route a motor's sheet allows."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..convention import Commutation
from .cycle import Pieces
from .demand import Demand
from .machines import Machines
from .pwm import space_vector_mean_square, two_level_ripple
from .thermal import (
    COPPER_COEFFICIENT,
    REFERENCE_TEMPERATURE,
    SHORT_CYCLE,
    TwoBody,
    copper_factor,
    magnet_factor,
    periodic_peak,
    steady_temperature,
)

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

#: Numbers in each temporary of the periodic state.
_CHUNK = 1 << 14
#: Nodes and weights of Gauss's rule on 0..1, for means of the ripple over a piece.
_RULE = np.polynomial.legendre.leggauss(5)
_NODES, _WEIGHTS = (_RULE[0] + 1) / 2, _RULE[1] / 2
#: The ripple depends on the temperature so little that two corrections settle it.
_RIPPLE_ROUNDS = 3


@dataclass
class Heating:
    """Winding temperature (°C, NaN unknown) of n cases, each a motor at one ratio.

    `runaway` where there is none; `utilisation` of the permissible rise, NaN unknown;
    `ripple_cold` and `ripple_hot` the mean square of the ripple current (A²) at the ambient and
    at the winding temperature, `ripple_swing` its largest peak-to-peak value (A, NaN for
    sinusoidal currents), `ripple_unknown` where the inductance it needs is unknown.
    """

    temperature: Array
    runaway: Mask
    utilisation: Array
    ripple_cold: Array
    ripple_hot: Array
    ripple_swing: Array
    ripple_unknown: Mask


@dataclass
class Load:
    """What the cycle asks of n cases: `weights` of the four time functions of `pieces` (each
    (n,)), gear ratio, mean square torque (N²·m²) and mean friction power (W)."""

    pieces: Pieces
    ratio: Array
    weights: list[Array]
    mean_square_torque: Array
    friction_power: Array


def heating(m: Machines, load: Load, demand: Demand, *, periodic: bool) -> Heating:
    """Steady or periodic winding temperature and what of its permissible rise that takes.

    With thermal resistances from the heat balance, else from the continuous current that the
    sheet grants, else unknown.
    """
    ambient = demand.surroundings.ambient
    own = demand.surroundings.thermal_resistance_housing_ambient
    inner = m.thermal_resistance_winding_housing
    outer = m.thermal_resistance_housing_ambient if own is None else np.full(len(m), own)
    total = inner + outer
    if own is None:
        total = np.where(np.isnan(total), m.thermal_resistance, total)
    rest = np.where(total - inner > 0, total - inner, total)
    friction_path = np.where(np.isnan(outer), rest, outer)
    balance = ~np.isnan(total)
    rated_ambient = np.where(np.isnan(m.rating_ambient), REFERENCE_TEMPERATURE, m.rating_ambient)
    limit = np.where(
        np.isnan(m.maximum_winding_temperature) & balance,
        rated_ambient + m.rated_temperature_rise,
        m.maximum_winding_temperature,
    )
    # Another mounting than the sheet's plate says nothing about the sheet's continuous current.
    continuous = np.full(len(m), np.nan)
    if own is None:
        continuous = continuous_current(m, load.pieces.gram[3, 3] * load.ratio**2)
    allowed = np.where(limit > rated_ambient, limit - rated_ambient, np.nan)
    per_square = np.where(
        balance, total * m.armature_resistance, allowed / continuous**2
    )  # rise in K for one A², copper at 25 °C or as the rating has it
    squared = load.mean_square_torque / m.torque_constant**2
    alpha = np.where(balance, COPPER_COEFFICIENT, 0.0)
    beta = np.nan_to_num(m.magnet_coefficient)
    fixed = np.where(balance, friction_path * load.friction_power, 0.0)

    def solve(ripple: Array) -> tuple[Array, Mask]:
        return steady_temperature(
            ambient, per_square * squared, per_square * ripple, fixed, alpha, beta
        )

    still = np.full(len(m), ambient)
    zero = np.zeros(len(m))
    if demand.supply.pwm_frequency is None or demand.supply.voltage is None:
        cold, hot, swing, missing = zero, zero, zero, np.zeros(len(m), bool)
        temperature, runaway = solve(zero)
        in_pieces = None
    else:
        missing = np.isnan(m.armature_inductance)
        in_pieces, swing = _ripple(m, load, demand, still)
        share = load.pieces.duration / load.pieces.period
        cold = hot = in_pieces @ share
        temperature, runaway = solve(hot)
        for _ in range(_RIPPLE_ROUNDS - 1):
            in_pieces, swing = _ripple(
                m, load, demand, np.where(np.isnan(temperature), ambient, temperature)
            )
            hot = in_pieces @ share
            temperature, runaway = solve(hot)
    if periodic and not load.pieces.is_constant:
        own_outer = m.thermal_resistance_housing_ambient
        swings = load.pieces.period > SHORT_CYCLE * m.thermal_time_constant_winding
        swings &= np.isfinite(temperature + inner + outer + own_outer)
        which = np.flatnonzero(swings & np.isfinite(m.thermal_time_constant_housing))
        # Like with like: how finely the cycle is cut follows the shortest time constant.
        which = which[np.argsort(m.thermal_time_constant_winding[which])]
        width = max(1, _CHUNK // (4 * len(load.pieces.duration)))
        for begin in range(0, len(which), width):
            some = which[begin : begin + width]
            body = TwoBody(
                inner[some],
                outer[some],
                m.thermal_time_constant_winding[some] / inner[some],
                m.thermal_time_constant_housing[some] / own_outer[some],
            )
            peak, lost = _periodic(m, load, body, ambient, some, in_pieces, temperature[some])
            temperature[some] = peak
            runaway[some] = lost
    rise = demand.surroundings.permissible_rise
    granted = (limit - ambient) * rise
    use = np.where(granted > 0, (temperature - ambient) / granted, np.inf)
    use[np.isnan(limit) | runaway] = np.nan
    # No temperatures at all: the sheet's current in the sheet's ambient, or a cooler one.
    plain = ~balance & np.isnan(limit) & (ambient <= rated_ambient)
    flux = magnet_factor(ambient, beta)
    use = np.where(plain, (squared / flux**2 + cold) / continuous**2 / rise, use)
    return Heating(temperature, runaway, use, cold, hot, swing, missing)


def continuous_current(m: Machines, mean_square: Array) -> Array:
    """Continuous current at a mean square speed ((rad/s)², per motor), armature amperes.

    Of nominal and continuous stall current the one published; of both, the line between them over
    speed, which above the nominal speed goes on falling but never rises.
    """
    nominal, stall = m.nominal_current, m.continuous_stall_current
    line = stall + (nominal - stall) * np.sqrt(mean_square) / m.nominal_speed
    line = np.clip(line, 0.0, np.maximum(nominal, stall))
    line = np.where(np.isnan(line), np.fmin(nominal, stall), line)
    return np.where(np.isnan(nominal) | np.isnan(stall), np.fmax(nominal, stall), line)


def _ripple(m: Machines, load: Load, demand: Demand, temperature: Array) -> tuple[Array, Array]:
    """Mean square of the ripple current in each piece (n, P) and its largest swing (n,).

    0 where the inductance is unknown; the swing NaN for sinusoidal currents.
    """
    bus, frequency = demand.supply.voltage, demand.supply.pwm_frequency
    assert bus is not None
    assert frequency is not None
    resistance = m.armature_resistance * copper_factor(temperature)
    Km = m.torque_constant * magnet_factor(temperature, m.magnet_coefficient)
    table = np.stack(load.weights)
    alternating = m.commutation == Commutation.SINUSOIDAL
    known = ~np.isnan(m.armature_inductance)
    P = len(load.pieces.duration)
    square = np.zeros((len(m), P))
    swing = np.where(alternating, np.nan, 0.0)

    two = np.flatnonzero(~alternating & known)
    if two.size:
        R, L = resistance[two], m.armature_inductance[two]

        def switched(voltage: Array) -> Array:
            return two_level_ripple(np.abs(voltage) / bus, bus, R, L, frequency)[1]

        for p, ends in enumerate(load.pieces.basis):
            torque = ends @ table[:, two]
            u0, u1 = torque / Km[two] * R + ends[:, 3:] * load.ratio[two] * Km[two]
            low = np.where(u0 * u1 < 0, 0.0, np.minimum(np.abs(u0), np.abs(u1)))
            nearest = np.clip(bus / 2, low, np.maximum(np.abs(u0), np.abs(u1)))
            largest = two_level_ripple(nearest / bus, bus, R, L, frequency)[0]
            swing[two] = np.maximum(swing[two], largest)
            if (ends[0] == ends[1]).all():
                square[two, p] = switched(u0)
                continue
            zero = np.where(u0 * u1 < 0, u0 / (u0 - u1), 0.0)  # |U| has a kink there
            for node, weight in zip(_NODES, _WEIGHTS, strict=True):
                before, after = zero * node, zero + (1 - zero) * node
                square[two, p] += weight * (
                    zero * switched(u0 + (u1 - u0) * before)
                    + (1 - zero) * switched(u0 + (u1 - u0) * after)
                )
    waves = np.flatnonzero(alternating & known)
    if waves.size:
        R, L, K = resistance[waves], m.armature_inductance[waves], Km[waves]
        reactance = np.nan_to_num(m.pole_pairs[waves]) * L * load.ratio[waves]
        for p, ends in enumerate(load.pieces.basis):
            i0, i1 = ends @ table[:, waves] / K
            for node, weight in zip(_NODES, _WEIGHTS, strict=True):
                current = i0 + (i1 - i0) * node
                speed = ends[0, 3] + (ends[1, 3] - ends[0, 3]) * node
                voltage = np.hypot(
                    R * current + K * load.ratio[waves] * speed, reactance * speed * current
                )
                square[waves, p] += weight * space_vector_mean_square(voltage, bus, L, frequency)
    square[np.isnan(square)] = 0.0  # what makes the voltage unknown makes the verdict unknown
    return square, swing


def _periodic(
    m: Machines,
    load: Load,
    body: TwoBody,
    ambient: float,
    some: NDArray[np.intp],
    ripple: Array | None,
    start: Array,
) -> tuple[Array, Mask]:
    """Peak temperatures of the cases `some`, and where there is no periodic state."""
    table = np.stack(load.weights)[:, some]
    basis = load.pieces.basis
    current = np.einsum("pek,kn->npe", basis, table) / m.torque_constant[some, None, None]
    rubbing = np.einsum("pek,kn->npe", basis[:, :, 2:], table[2:])
    speed = basis[None, :, :, 3] * load.ratio[some, None, None]
    P = len(load.pieces.duration)
    return periodic_peak(
        body,
        ambient,
        load.pieces.duration,
        current,
        np.zeros((len(some), P)) if ripple is None else ripple[some],
        np.stack([rubbing, speed], axis=-1),
        m.armature_resistance[some],
        m.magnet_coefficient[some],
        start,
    )
