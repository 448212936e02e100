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
    if len(accelerated) == 0:
        return square
    table = np.stack(weights)
    first, second = accelerated[:, 0], accelerated[:, 1]
    speed0, speed1 = first[:, 3:], second[:, 3:]
    torque0, torque1 = first @ table, second @ table
    u0, u1 = (t * drop + w * emf for t, w in ((torque0, speed0), (torque1, speed1)))
    # The straight part of U² is largest at an end; its crosswise part, the product of speed and
    # torque, there or where its slope, itself a combination of the four weights, changes sign.
    # Only where the two together could exceed what is known does a piece deserve a closer look.
    slope0 = (speed0 * second + (speed1 - 2 * speed0) * first) @ table
    slope1 = ((2 * speed1 - speed0) * second - speed1 * first) @ table
    turns = slope0 * slope1 < 0
    bend = np.where(turns, slope1 - slope0, 1.0)
    across = np.maximum(np.abs(torque0 * speed0), np.abs(torque1 * speed1))
    inside = np.abs(torque0 * speed0 - slope0**2 / (2 * bend))
    across = np.where(turns, np.maximum(across, inside), across) * reactance
    bound = np.maximum(u0**2, u1**2) + across**2
    piece, which = np.nonzero(bound > square * (1 + 1e-12))
    if piece.size == 0:
        return square
    u0, u1, torque0, torque1 = (a[piece, which] for a in (u0, u1, torque0, torque1))
    w0, w1 = speed0[piece, 0], speed1[piece, 0]
    peak = _peak(u0, u1 - u0, torque0, torque1 - torque0, w0, w1 - w0, reactance[which])
    np.maximum.at(square, which, peak)
    return square


def _peak(
    u0: Array, du: Array, t0: Array, dt: Array, w0: Array, dw: Array, reactance: Array
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
