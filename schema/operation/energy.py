"""What a motor at work draws from the supply and gives back, over a cycle.

Electrical power P = Ra·Ia² + Km·ω·Ia + U_drop·|Ia|, Ia = τ/Km: the power balance of the DC motor at
its terminals, and what the bridge takes. Torque and speed are linear in a piece, so that P is a
quadratic in time between the zeros of the current; the ripple's own loss is left out.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .demand import Demand
from .machines import Machines
from .thermal import copper_factor, magnet_factor

Array = NDArray[np.float64]

#: Numbers that each temporary holds.
_CHUNK = 1 << 18


@dataclass
class Draw:
    """Of n motors at a ratio each: powers in W and energies in J, arrays (n,).

    `peak` and `peak_returned` are the largest power drawn and given back, `mean` the difference
    of both over the cycle, `drawn` and `returned` the energies of one cycle, `stretch` the most
    that is given back in one go.
    """

    peak: Array
    peak_returned: Array
    mean: Array
    drawn: Array
    returned: Array
    stretch: Array


def draw(
    machines: Machines, demand: Demand, ratio: Array, temperature: Array, bridge_drop: float = 0.0
) -> Draw:
    """The power balance of n motors at a ratio and a winding temperature (°C) each."""
    pieces = demand.cycle.pieces(demand.gearing.load_inertia, demand.gearing.efficiency)
    width = max(1, _CHUNK // (6 * len(pieces.duration)))
    parts = []
    for begin in range(0, max(len(ratio), 1), width):
        span = slice(begin, begin + width)
        with np.errstate(all="ignore"):
            parts.append(
                _draw(
                    machines.take(span), demand, ratio[span], temperature[span], bridge_drop, pieces
                )
            )
    return Draw(*(np.concatenate(column) for column in zip(*parts, strict=True)))


def _draw(m, demand, ratio, temperature, bridge_drop, pieces):
    moves = pieces.gram[1, 1] > 0
    inertia = m.rotor_inertia + demand.gearing.inertia if moves else np.zeros(len(ratio))
    weights = np.stack(
        [
            1 / ratio,
            inertia * ratio,
            np.nan_to_num(m.coulomb_torque),
            np.nan_to_num(m.viscous_damping) * ratio,
        ]
    )
    flux = magnet_factor(temperature, m.magnet_coefficient)
    Km = (m.torque_constant * flux)[:, None]
    Ra = (m.armature_resistance * copper_factor(temperature))[:, None]
    current = np.einsum("pek,kn->enp", pieces.basis, weights) / Km  # (2, n, P)
    speed = pieces.basis[:, :, 3].T[:, None, :] * ratio[:, None]
    i0, i1 = current
    turn = np.where(i0 * i1 < 0, i0 / np.where(i0 * i1 < 0, i0 - i1, 1.0), 1.0)
    # Two halves of each piece, before and after the current's zero; the second mostly empty.
    begin = np.stack([np.zeros_like(turn), turn], axis=-1)
    end = np.stack([turn, np.ones_like(turn)], axis=-1)
    share = np.stack([begin, (begin + end) / 2, end])  # (3, n, P, 2)
    i = i0[..., None] + (i1 - i0)[..., None] * share
    w = speed[0][..., None] + (speed[1] - speed[0])[..., None] * share
    sign = np.sign(i[1])
    p0, pm, p1 = Ra[..., None] * i**2 + Km[..., None] * w * i + bridge_drop * sign * i
    a, b = 2 * (p0 + p1 - 2 * pm), 4 * pm - 3 * p0 - p1
    duration = (end - begin) * pieces.duration[:, None]
    at = np.clip(np.nan_to_num(-b / (2 * a), posinf=0.0, neginf=0.0), 0.0, 1.0)
    inner = p0 + at * (b + at * a)
    highest = np.fmax(np.fmax(p0, p1), inner)
    lowest = np.fmin(np.fmin(p0, p1), inner)
    # Cuts where the power is zero, then the energy between neighbouring cuts.
    root = np.sqrt(np.maximum(b * b - 4 * a * p0, 0.0))
    straight = np.abs(a) < 1e-12 * (np.abs(b) + np.abs(p0))
    first = np.where(straight, -p0 / b, (-b - root) / (2 * a))
    second = np.where(straight, 0.0, (-b + root) / (2 * a))
    cuts = np.sort(
        np.clip(np.nan_to_num(np.stack([first, second]), posinf=0.0, neginf=0.0), 0.0, 1.0), axis=0
    )
    edges = np.stack([np.zeros_like(p0), cuts[0], cuts[1], np.ones_like(p0)])
    primitive = edges * (p0 + edges * (b / 2 + edges * a / 3))
    energy = np.diff(primitive, axis=0) * duration  # (3, n, P, 2)
    n, P = len(ratio), len(pieces.duration)
    energy = np.moveaxis(energy, 0, -1).reshape(n, 6 * P)  # in the order of time
    drawn = np.maximum(energy, 0).sum(axis=1)
    returned = np.maximum(-energy, 0).sum(axis=1)
    flat = (n, 2 * P)
    return (
        np.maximum(highest.reshape(flat).max(axis=1), 0),
        np.maximum(-lowest.reshape(flat).min(axis=1), 0),
        (drawn - returned) / pieces.period,
        drawn,
        returned,
        _stretch(energy),
    )


def _stretch(energy: Array) -> Array:
    """The most that is given back with nothing drawn in between, the cycle repeating."""
    best = np.zeros(len(energy))
    run = np.zeros(len(energy))
    always = (energy <= 0).all(axis=1)
    for column in np.hstack([energy, energy]).T:
        run = np.where(column > 0, 0.0, run - column)
        best = np.maximum(best, run)
    return np.where(always, -energy.sum(axis=1), best)
