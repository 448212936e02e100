"""The largest voltage of a sinusoidal motor inside a piece in which its speed changes.

U² = (Ra·Ia + Km·ω)² + (p·ω·La·Ia)² is a quartic in time with a positive leading coefficient:
beside its ends it can peak once inside.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_SAMPLES = np.linspace(0.0, 1.0, 17)


def largest_square(
    square: Array,
    accelerated: Array,
    weights: list[Array],
    drop: Array,
    emf: Array,
    reactance: Array,
) -> Array:
    """`square` (n,), U² at the ends of all pieces, raised by what lies higher inside a piece.

    `accelerated` (Q, 2, 4) are the pieces with changing speed as in `cycle.Pieces.basis`, with the
    motor's torque as their combination by four `weights` (n,); per unit of that torque and of load
    speed U has the parts `drop` = Ra/Km, `emf` = Km·N, `reactance` = p·N·La/Km, all (n,).
    """
    table = np.stack(weights)
    for start, end in accelerated:
        torque0, torque1 = start @ table, end @ table
        speed0, speed1 = start[3], end[3]
        rise, gain = torque1 - torque0, speed1 - speed0
        # The crosswise part peaks inside where its slope vanishes; only if that could exceed what
        # the ends show is the quartic looked at.
        curvature = 2 * rise * gain
        slope = speed0 * rise + torque0 * gain
        at = np.where(curvature != 0, -slope / np.where(curvature != 0, curvature, 1.0), 0.0)
        inside = (at > 0) & (at < 1)
        across = (torque0 + rise * at) * (speed0 + gain * at) * reactance
        along = np.maximum(
            np.abs(torque0 * drop + speed0 * emf), np.abs(torque1 * drop + speed1 * emf)
        )
        which = np.flatnonzero(inside & (along**2 + across**2 > square))
        if which.size:
            u0 = torque0[which] * drop[which] + speed0 * emf[which]
            du = rise[which] * drop[which] + gain * emf[which]
            peak = _peak(u0, du, torque0[which], rise[which], speed0, gain, reactance[which])
            square[which] = np.maximum(square[which], peak)
    return square


def _peak(
    u0: Array, du: Array, t0: Array, dt: Array, w0: float, dw: float, reactance: Array
) -> Array:
    """Largest value on 0..1 of (u0 + du·s)² + (reactance·(t0 + dt·s)·(w0 + dw·s))²."""
    y0, y1, y2 = (reactance * y for y in (t0 * w0, t0 * dw + dt * w0, dt * dw))
    quartic = (
        u0**2 + y0**2,
        2 * (u0 * du + y0 * y1),
        du**2 + y1**2 + 2 * y0 * y2,
        2 * y1 * y2,
        y2**2,
    )

    def value(s: Array) -> Array:
        c0, c1, c2, c3, c4 = quartic
        return c0 + s * (c1 + s * (c2 + s * (c3 + s * c4)))

    sampled = np.stack([value(np.full_like(u0, s)) for s in _SAMPLES])
    s = _SAMPLES[sampled.argmax(axis=0)]
    best = sampled.max(axis=0)
    _, c1, c2, c3, c4 = quartic
    for _ in range(4):  # Newton's steps on the slope from within 1/16 of the peak
        slope = c1 + s * (2 * c2 + s * (3 * c3 + s * 4 * c4))
        curvature = 2 * c2 + s * (6 * c3 + s * 12 * c4)
        s = np.clip(s - np.where(curvature < 0, slope / curvature, 0.0), 0.0, 1.0)
        best = np.maximum(best, value(s))
    return best
