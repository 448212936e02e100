"""What a motor can do in a requirement: utilisations over motors × segments × gear ratios.

The motor's torque is a linear combination of four time functions of the load (see
`cycle.Pieces`) with coefficients that depend on motor and ratio only:

    τ = c(t)/N + (J + J_g)·N·a(t) + T_c·σ(t) + b·N·ω(t),    Ia = τ/Km

c the load torque after the gear, a the load's acceleration, σ the sign of motion, ω the load's
speed. Mean squares are a quadratic form in the four coefficients, peaks lie at the pieces' ends.
The inductive voltage of a sinusoidal motor alone peaks inside a piece, too. All of it is
evaluated on flat cases, one motor at one ratio each, in chunks that fit the processor's cache.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..convention import Commutation
from .cycle import Cycle, Pieces
from .demand import Demand, Drive, Gearing, Supply, Surroundings
from .heating import Load, heating
from .inner_peak import largest_square
from .limits import LIMITS, Utilisations, Verdict
from .machines import Machines, armature_amperes, coulomb_torque
from .thermal import copper_factor, magnet_factor

__all__ = [
    "LIMITS",
    "Commutation",
    "Cycle",
    "Demand",
    "Drive",
    "Gearing",
    "Machines",
    "Supply",
    "Surroundings",
    "Utilisations",
    "Verdict",
    "coulomb_torque",
    "judge",
    "judge_cases",
    "judge_worst",
]

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

#: Numbers (cases × corners of the cycle) that one chunk holds in each of its temporaries.
_CHUNK = 1 << 17


def judge(
    machines: Machines, demand: Demand, ratios: ArrayLike = 1.0, *, periodic: bool = True
) -> Utilisations:
    """Utilisations of M motors at R gear ratios (motor speed/load speed), arrays (M, R).

    `ratios` has shape (), (R,) or (M, R). Without `periodic` the winding temperature is that of
    the mean loss only, a lower bound of the peak that costs a fraction.
    """
    ratio = np.asarray(ratios, float)
    if (ratio <= 0).any():
        raise ValueError("gear ratios are above 0")
    if ratio.ndim == 2 and len(ratio) != len(machines):
        raise ValueError("one row of ratios for each motor")
    R = 1 if ratio.ndim == 0 else ratio.shape[-1]
    grid = np.broadcast_to(ratio, (len(machines), R))
    which = np.arange(len(machines))
    if R > 1:
        which = np.repeat(which, R)
    return judge_cases(machines, demand, which, grid.ravel(), periodic=periodic).reshape(-1, R)


def judge_cases(
    machines: Machines,
    demand: Demand,
    which: NDArray[np.intp],
    ratio: Array,
    *,
    periodic: bool = True,
) -> Utilisations:
    """Utilisations of the motors `which` at a `ratio` each, all of shape (n,)."""
    plan = _Plan.of(demand)
    size = plan.chunk
    in_order = len(which) == len(machines) and bool((which == np.arange(len(which))).all())
    parts = []
    for begin in range(0, max(len(which), 1), size):
        span = slice(begin, begin + size)
        cases = machines.take(span if in_order else which[span])
        with np.errstate(all="ignore"):
            parts.append(_judge_chunk(cases, ratio[span], demand, plan, periodic))
    return parts[0] if len(parts) == 1 else Utilisations.joined(parts)


def judge_worst(
    machines: Machines,
    demand: Demand,
    ratios: ArrayLike = 1.0,
    *,
    tolerance: float | tuple[ArrayLike, ArrayLike, ArrayLike, ArrayLike] = 0.1,
    periodic: bool = True,
) -> tuple[Utilisations, NDArray[np.int8]]:
    """The worst of the four corners of torque constant and resistance, and which corner it is.

    `tolerance` is one relative tolerance of both, or four factors (M,): Km low, Km high, Ra low,
    Ra high. Each figure is the worst of its own corner: current and heat that of Km low and Ra
    high, voltage any. Corner codes (M, R), those of the largest utilisation: 0 Km low, Ra low;
    1 Km low, Ra high; 2 Km high, Ra low; 3 Km high, Ra high.
    """
    if isinstance(tolerance, tuple):
        low, high, small, large = (np.asarray(factor, float) for factor in tolerance)
    else:
        low, high, small, large = (np.array(1 + s * tolerance) for s in (-1, 1, -1, 1))
    corners = [
        judge(machines.scaled(k, r), demand, ratios, periodic=periodic)
        for k in (low, high)
        for r in (small, large)
    ]
    # Of corners equally bad the one that is worst for current and heat.
    order = np.array([1, 0, 2, 3], np.int8)
    most = np.stack([np.nan_to_num(corners[c].largest, nan=-np.inf) for c in order])
    return Utilisations.worst(corners), order[most.argmax(axis=0)]


@dataclass(frozen=True)
class _Plan:
    """What of a demand is the same for every motor, worked out once."""

    pieces: Pieces
    gram: Array
    corners: Array
    accelerated: Array
    chunk: int

    @classmethod
    def of(cls, demand: Demand) -> _Plan:
        pieces = demand.cycle.pieces(demand.gearing.load_inertia, demand.gearing.efficiency)
        corners = pieces.corners
        width = max(8, len(corners), len(pieces.duration))
        return cls(pieces, pieces.gram, corners, pieces.accelerated, max(256, _CHUNK // width))


def _combine(rows: Array, weights: list[Array]) -> Array:
    """Linear combinations rows (E, 4) × four weights (n,) → (E, n)."""
    return rows @ np.stack(weights)


def _judge_chunk(
    m: Machines, ratio: Array, demand: Demand, plan: _Plan, periodic: bool
) -> Utilisations:
    n = len(ratio)
    Km = m.torque_constant
    moves = plan.gram[3, 3] > 0
    # A figure that the cycle has no use for must not leave the rest unknown.
    inertia = m.rotor_inertia + demand.gearing.inertia if plan.gram[1, 1] > 0 else np.zeros(n)
    weights = [
        1 / ratio,
        inertia * ratio,
        np.nan_to_num(m.coulomb_torque),
        np.nan_to_num(m.viscous_damping) * ratio,
    ]
    torque = _combine(plan.corners, weights)
    peak_torque = np.abs(torque).max(axis=0)
    mean_square = np.zeros(n)
    for i in range(4):
        for j in range(i, 4):
            product = plan.gram[i, j] * (1 if i == j else 2)
            if product:
                mean_square += product * weights[i] * weights[j]
    mean_square = np.maximum(mean_square, 0.0)
    friction = ratio * (weights[2] * plan.pieces.mean_speed + weights[3] * plan.gram[3, 3])

    load = Load(plan.pieces, ratio, weights, mean_square, friction)
    heat = heating(m, load, demand, periodic=periodic)

    # Hot and cold, the worse of both.
    ambient = demand.surroundings.ambient
    hot = np.where(np.isnan(heat.temperature), ambient, heat.temperature)
    flux_cold, flux_hot = (magnet_factor(T, m.magnet_coefficient) for T in (ambient, hot))
    rms = np.sqrt(
        np.maximum(
            mean_square / (Km * flux_cold) ** 2 + heat.ripple_cold,
            mean_square / (Km * flux_hot) ** 2 + heat.ripple_hot,
        )
    )
    peak = peak_torque / (Km * np.minimum(flux_cold, flux_hot))
    resistance = m.armature_resistance
    voltage = np.zeros(n)
    for T, flux in ((ambient, flux_cold), (hot, flux_hot)):
        worst = _peak_voltage(m, ratio, plan, weights, torque, resistance * copper_factor(T), flux)
        voltage = np.maximum(voltage, worst)
    speed = np.abs(plan.corners[:, 3]).max() * ratio
    shaft = _combine(plan.corners[:, :2], weights[:2])
    shaft_torque = np.abs(shaft).max(axis=0)

    drive, available = demand.drive, demand.supply.available
    unknown = np.full(n, np.nan)
    limit = m.peak_current
    if drive.peak_current is not None:
        limit = np.fmin(
            limit, armature_amperes(drive.peak_current, drive.convention, m.commutation)
        )
    continuous = unknown
    if drive.continuous_current is not None:
        continuous = rms / armature_amperes(
            drive.continuous_current,
            drive.continuous_convention or drive.convention,
            m.commutation,
        )
    voltage_use = unknown
    if available is not None:
        voltage_use = voltage / available if available > 0 else np.full(n, np.inf)
        if moves:
            known = _voltage_known(m)
            # Without the inductive share the voltage is a lower bound: it may only reject.
            voltage_use = np.where(known | (voltage_use > 1), voltage_use, np.nan)
            voltage = np.where(known, voltage, np.nan)
    elif moves:
        voltage = np.where(_voltage_known(m), voltage, np.nan)
    needed = [
        name
        for name, given in (
            ("voltage", available),
            ("peak_current", drive.peak_current),
            ("continuous_current", drive.continuous_current),
        )
        if given is not None
    ]
    return Utilisations(
        voltage=voltage_use,
        speed=speed / m.maximum_speed,
        peak_current=peak / limit,
        continuous_current=continuous,
        thermal=heat.utilisation,
        peak_torque=shaft_torque / m.peak_torque,
        runaway=heat.runaway,
        peak_current_value=peak,
        rms_current=rms,
        ripple_current=np.sqrt(heat.ripple_hot),
        ripple_peak_to_peak=heat.ripple_swing,
        peak_voltage=voltage,
        peak_speed=speed,
        peak_torque_value=shaft_torque,
        winding_temperature=heat.temperature,
        copper_loss=rms**2 * resistance * copper_factor(hot),
        ripple_unknown=heat.ripple_unknown,
        friction_assumed=np.isnan(m.coulomb_torque),
        needed=(*needed, "thermal"),
    )


def _voltage_known(m: Machines) -> Mask:
    reactance = m.pole_pairs * m.armature_inductance
    return (m.commutation != Commutation.SINUSOIDAL) | ~np.isnan(reactance)


def _peak_voltage(
    m: Machines,
    ratio: Array,
    plan: _Plan,
    weights: list[Array],
    torque: Array,
    resistance: Array,
    flux: Array,
) -> Array:
    """Largest |U| (n,) at one temperature: U = Ra·Ia + Km·ω, with p·ω·La·Ia at a right angle."""
    Km = m.torque_constant * flux
    drop = resistance / Km
    emf = Km * ratio
    voltage = torque * drop + plan.corners[:, 3:] * emf
    largest = np.abs(voltage).max(axis=0)
    alternating = np.flatnonzero(
        (m.commutation == Commutation.SINUSOIDAL) & ~np.isnan(m.pole_pairs * m.armature_inductance)
    )
    if alternating.size == 0 or not plan.corners[:, 3].any():
        return largest
    reactance = (m.pole_pairs * m.armature_inductance * ratio / Km)[alternating]
    across = torque[:, alternating] * plan.corners[:, 3:] * reactance
    square = (voltage[:, alternating] ** 2 + across**2).max(axis=0)
    largest[alternating] = np.sqrt(
        largest_square(
            square,
            plan.accelerated,
            [weight[alternating] for weight in weights],
            drop[alternating],
            emf[alternating],
            reactance,
        )
    )
    return largest
