"""Winding temperature: the steady state with warm copper and weak magnets, and its periodic peak.

Temperatures in °C, thermal resistances in K/W, heats in W. The copper's resistance and the
magnets' flux both follow the winding temperature: with θ = T − 25 °C the copper loss of a given
torque is proportional to (1 + α·θ)/(1 + β·θ)², β ≤ 0.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

#: The temperature in °C at which canonical constants stand.
REFERENCE_TEMPERATURE = 25.0
#: Copper's temperature coefficient at 25 °C in 1/K: R2/R1 = (234.5 + T2)/(234.5 + T1)
#: (Langsdorf, Theory of Alternating-Current Machinery, ex. 1-15).
COPPER_COEFFICIENT = 1 / (234.5 + REFERENCE_TEMPERATURE)

#: A cycle shorter than this share of the winding's time constant swings its temperature by less
#: than the same share of the rise: its mean loss tells all.
SHORT_CYCLE = 1e-3


def copper_factor(temperature: ArrayLike) -> Array:
    """Ra(T)/Ra(25 °C)."""
    return 1 + COPPER_COEFFICIENT * (np.asarray(temperature, float) - REFERENCE_TEMPERATURE)


def magnet_factor(temperature: ArrayLike, coefficient: ArrayLike) -> Array:
    """Km(T)/Km(25 °C); an unknown (NaN) coefficient counts as 0."""
    beta = np.nan_to_num(np.asarray(coefficient, float))
    return 1 + beta * (np.asarray(temperature, float) - REFERENCE_TEMPERATURE)


def steady_temperature(
    ambient: ArrayLike,
    current_rise: ArrayLike,
    ripple_rise: ArrayLike,
    fixed_rise: ArrayLike,
    copper: ArrayLike,
    magnet: ArrayLike,
) -> tuple[Array, Mask]:
    """Steady winding temperature in °C and where there is none (thermal runaway).

    Solves T − T_amb − fixed = (1 + α·θ)·(current_rise/(1 + β·θ)² + ripple_rise), θ = T − 25 °C,
    for its lowest root, the stable one: current_rise is Rth·Ra·I² with all of them at 25 °C,
    ripple_rise the like of a current that does not grow as the magnets weaken, fixed_rise what
    friction adds. The residual is concave in T, so Newton's steps from below approach the lowest
    root from below, and a slope that is no longer positive before it proves that none exists.
    Where anything is unknown the temperature is NaN, and no runaway.
    """
    start, h, r, fixed, alpha, beta = np.broadcast_arrays(
        *(
            np.asarray(value, float)
            for value in (ambient, current_rise, ripple_rise, fixed_rise, copper, magnet)
        )
    )
    floor = np.ravel(start + fixed - REFERENCE_TEMPERATURE)
    h, r, alpha, beta = (np.ravel(value) for value in (h, r, alpha, beta))
    theta = floor.copy()
    runaway = np.zeros(theta.shape, bool)
    active = np.flatnonzero(np.isfinite(theta + h + r + beta + alpha))
    theta[~np.isfinite(theta + h + r + beta + alpha)] = np.nan
    everywhere = active.size == theta.size
    for _ in range(80):
        if everywhere:
            t, hh, rr, a, b, f = theta, h, r, alpha, beta, floor
        else:
            t, hh, rr, a, b, f = (v[active] for v in (theta, h, r, alpha, beta, floor))
        flux = 1 + b * t
        warm = 1 + a * t
        heat = hh / (flux * flux)
        residual = t - f - warm * (heat + rr)
        slope = 1 - a * (heat + rr) + 2 * b * warm * heat / flux
        lost = (residual < 0) & ((slope <= 0) | (flux <= 0)) | (flux <= 0)
        step = -residual / np.where(lost, 1.0, slope)
        settled = np.abs(step) <= 1e-9 * (1 + np.abs(t))
        theta[active] = np.where(lost, np.nan, t + np.where(lost, 0.0, step))
        runaway[active[lost]] = True
        going = ~(lost | settled)
        if not going.any():
            break
        active = active[going]
        everywhere = active.size == theta.size
    shape = start.shape
    return theta.reshape(shape) + REFERENCE_TEMPERATURE, runaway.reshape(shape)


@dataclass(frozen=True)
class TwoBody:
    """Winding and housing of K motors, shape (K,): C1 = τ_w/Rth1, C2 = τ_h/Rth2.

    `housing_capacity` is stated apart from `to_ambient`, since another mounting changes the
    latter only.
    """

    to_housing: Array
    to_ambient: Array
    winding_capacity: Array
    housing_capacity: Array

    def take(self, index: NDArray[np.intp]) -> TwoBody:
        return TwoBody(*(getattr(self, field.name)[index] for field in fields(self)))


#: Into how many cuts a piece goes, by its duration over the winding's time constant.
_CUT_COUNTS = ((0.05, 1), (0.5, 2), (2.0, 4), (8.0, 8), (np.inf, 16))
#: Cuts shorter than this share of the time constant may peak inside; in longer ones the winding
#: has settled, and their ends tell all.
_SHORT_CUT = 2.0


def periodic_peak(
    body: TwoBody,
    ambient: float,
    duration: Array,
    current: Array,
    ripple: Array,
    friction: Array,
    resistance: Array,
    magnet: Array,
    start: Array,
) -> tuple[Array, Mask]:
    """Peak winding temperature (°C) of the periodic steady state, and where there is none.

    K motors in a cycle of P pieces: `duration` (P,), `current` (K, P, 2) armature amperes at
    25 °C magnets at the start and end of each piece, linear between, `ripple` (K, P) mean square
    of the ripple current, `friction` (K, P, 2, 2) the friction torque and speed whose product
    heats the housing, `resistance` Ra at 25 °C, `magnet` β, `start` the temperature of the mean
    balance, all (K,).

    Each piece is cut in up to 16, in which the loss is a quadratic in time and depends on the
    temperature by its chord between both ends: a linear system of two states with a quadratic
    input, solved exactly by its eigenvalues. The chord's ends are iterated.
    """
    time_constant = body.winding_capacity * body.to_housing
    piece, begin, end = _cuts(duration / time_constant.min())
    h = duration[piece] * (end - begin)  # (N,) durations of the cuts

    def at_cuts(ends: Array) -> tuple[Array, Array]:
        """Values (K, P, 2) at the ends of pieces → (K, N) at the start of cuts, rise over them."""
        rise = (ends[..., 1] - ends[..., 0])[:, piece]
        return ends[:, piece, 0] + rise * begin, rise * (end - begin)

    i0, di = at_cuts(current)
    torque = at_cuts(friction[..., 0])
    speed = at_cuts(friction[..., 1])
    cut_ripple = ripple[:, piece]
    K, N = i0.shape
    Ra = resistance[:, None]
    # Winding loss per unit of (1+αθ)/(1+βθ)², and housing heat: c0 + c1·s + c2·s² with s in 0..1.
    loss = np.stack([Ra * i0**2, 2 * Ra * i0 * di, Ra * di**2])
    rubbing = np.stack(
        [
            torque[0] * speed[0],
            torque[0] * speed[1] + torque[1] * speed[0],
            torque[1] * speed[1],
        ]
    )
    beta = np.nan_to_num(magnet)[:, None]
    nodes = np.repeat(start[:, None], N + 1, axis=1) - REFERENCE_TEMPERATURE
    peak = np.full(K, np.nan)
    runaway = np.zeros(K, bool)
    active = np.arange(K)
    for _ in range(40):
        found, sound, highest = _one_period(
            body.take(active),
            ambient - REFERENCE_TEMPERATURE,
            h,
            loss[:, active],
            (Ra * cut_ripple)[active],
            rubbing[:, active],
            beta[active],
            nodes[active],
        )
        runaway[active[~sound]] = True
        change = np.abs(found - nodes[active]).max(axis=1)
        settled = sound & (change <= 1e-5 * (1 + np.abs(found).max(axis=1)))
        nodes[active] = found
        peak[active[settled]] = highest[settled] + REFERENCE_TEMPERATURE
        active = active[sound & ~settled]
        if active.size == 0:
            break
    runaway[active] = True  # no periodic state was found: the temperatures kept climbing
    return peak, runaway


def _cuts(duration: Array) -> tuple[NDArray[np.intp], Array, Array]:
    """Piece of each cut and where in it (0..1) the cut begins and ends.

    `duration` (P,) in time constants. Cuts lie close after a piece's start, where the winding
    moves fastest.
    """
    piece, begin, end = [], [], []
    for index, length in enumerate(duration):
        count = next(count for limit, count in _CUT_COUNTS if length <= limit)
        nodes = (np.arange(count + 1) / count) ** 2
        piece.append(np.full(count, index))
        begin.append(nodes[:-1])
        end.append(nodes[1:])
    return np.concatenate(piece), np.concatenate(begin), np.concatenate(end)


def _one_period(
    body: TwoBody,
    ambient: float,
    h: Array,
    loss: Array,
    ripple: Array,
    rubbing: Array,
    beta: Array,
    nodes: Array,
) -> tuple[Array, Mask, Array]:
    """The periodic state from assumed winding temperatures (K, N + 1) above 25 °C at the cuts.

    Returns those found, where there is a periodic state, and the highest temperature, between the
    cuts, too.
    """
    alpha = COPPER_COEFFICIENT
    low, high = nodes[:, :-1], nodes[:, 1:]
    middle = (low + high) / 2

    def gain(theta: Array) -> Array:
        return (1 + alpha * theta) / (1 + beta * theta) ** 2

    flux = 1 + beta * middle
    tangent = (alpha * flux - 2 * beta * (1 + alpha * middle)) / flux**3
    gap = high - low
    chord = np.where(
        np.abs(gap) > 1e-3, (gain(high) - gain(low)) / np.where(gap == 0, 1.0, gap), tangent
    )
    at_middle = np.where(np.abs(gap) > 1e-3, (gain(low) + gain(high)) / 2, gain(middle))
    # The ripple's heat follows the copper only; written as part of the current's loss.
    base = loss.copy()
    base[0] += ripple * flux**2
    mean_loss = base[0] + base[1] / 2 + base[2] / 3
    C1, C2 = body.winding_capacity[:, None], body.housing_capacity[:, None]
    a11 = (mean_loss * chord - 1 / body.to_housing[:, None]) / C1
    a12 = 1 / (body.to_housing[:, None] * C1)
    a21 = 1 / (body.to_housing[:, None] * C2)
    a22 = -a21 - 1 / (body.to_ambient[:, None] * C2)
    # Heat rates, winding and housing: input polynomials in s = t/h.
    winding = base * at_middle / C1
    winding[0] -= mean_loss * chord * middle / C1
    # Second order, where the winding moves evenly through the cut: the loss grows as the
    # temperature does, and the chord runs above the curve by `sag` in the middle.
    even = h < _SHORT_CUT * C1 * body.to_housing[:, None]
    sag = np.where(even, mean_loss * (at_middle - gain(middle)) / C1, 0.0)
    along = np.where(even, (base[1] + base[2]) * chord * gap / C1, 0.0)
    winding += np.stack([along / 4, -along - 4 * sag, along + 4 * sag])
    housing = rubbing / C2
    housing[0] += ambient / (body.to_ambient[:, None] * C2)

    half = (a11 + a22) / 2
    spread = np.sqrt(((a11 - a22) / 2) ** 2 + a12 * a21)
    transition = []
    forced = np.zeros((2, *a11.shape))
    for sign in (1.0, -1.0):
        root = half + sign * spread
        # Projector on the eigenvector: (A − λ'·1)/(λ − λ').
        p11 = (a11 - half + sign * spread) / (2 * sign * spread)
        p12 = a12 / (2 * sign * spread)
        p21 = a21 / (2 * sign * spread)
        p22 = (a22 - half + sign * spread) / (2 * sign * spread)
        phi = _phi(root * h)
        transition.append((phi[0] * p11, phi[0] * p12, phi[0] * p21, phi[0] * p22))
        w = h * (phi[1] * winding[0] + phi[2] * winding[1] + 2 * phi[3] * winding[2])
        g = h * (phi[1] * housing[0] + phi[2] * housing[1] + 2 * phi[3] * housing[2])
        forced[0] += p11 * w + p12 * g
        forced[1] += p21 * w + p22 * g
    e11, e12, e21, e22 = (first + second for first, second in zip(*transition, strict=True))

    # The whole period is an affine map; its fixed point is the state at the start.
    K, N = a11.shape
    m11, m12, m21, m22 = np.ones(K), np.zeros(K), np.zeros(K), np.ones(K)
    u, v = np.zeros(K), np.zeros(K)
    for n in range(N):
        b11, b12, b21, b22 = e11[:, n], e12[:, n], e21[:, n], e22[:, n]
        m11, m21 = b11 * m11 + b12 * m21, b21 * m11 + b22 * m21
        m12, m22 = b11 * m12 + b12 * m22, b21 * m12 + b22 * m22
        u, v = b11 * u + b12 * v + forced[0, :, n], b21 * u + b22 * v + forced[1, :, n]
    determinant = (1 - m11) * (1 - m22) - m12 * m21
    # A positive matrix has its largest eigenvalue below 1 exactly when both of these hold.
    sound = (determinant > 0) & (m11 < 1) & (m22 < 1)
    safe = np.where(sound, determinant, 1.0)
    winding_now = ((1 - m22) * u + m12 * v) / safe
    housing_now = (m21 * u + (1 - m11) * v) / safe
    found, shell = np.empty((K, N + 1)), np.empty((K, N + 1))
    found[:, 0], shell[:, 0] = winding_now, housing_now
    for n in range(N):
        winding_now, housing_now = (
            e11[:, n] * winding_now + e12[:, n] * housing_now + forced[0, :, n],
            e21[:, n] * winding_now + e22[:, n] * housing_now + forced[1, :, n],
        )
        found[:, n + 1], shell[:, n + 1] = winding_now, housing_now
    # Where the magnets would be gone there is nothing to iterate.
    sound &= np.isfinite(found).all(axis=1) & (1 + beta * found > 0.05).all(axis=1)
    return found, sound, np.maximum(found.max(axis=1), _between(body, h, base, gain, found, shell))


def _between(
    body: TwoBody,
    h: Array,
    loss: Array,
    gain: Callable[[Array], Array],
    found: Array,
    shell: Array,
) -> Array:
    """Highest winding temperature inside a cut, by the cubic through its ends and slopes."""
    C1, to_housing = body.winding_capacity[:, None], body.to_housing[:, None]

    def slope(loss: Array, winding: Array, housing: Array) -> Array:
        return h * (loss * gain(winding) - (winding - housing) / to_housing) / C1

    low, high = found[:, :-1], found[:, 1:]
    rising = slope(loss[0], low, shell[:, :-1])
    falling = slope(loss.sum(axis=0), high, shell[:, 1:])
    inside = (rising > 0) & (falling < 0) & (h < _SHORT_CUT * C1 * to_housing)
    # low + rising·s + square·s² + cube·s³, highest where its slope falls through zero.
    square = 3 * (high - low) - 2 * rising - falling
    cube = rising + falling - 2 * (high - low)
    root = np.sqrt(np.where(inside, square**2 - 3 * cube * rising, 0.0))
    s = np.where(inside, rising / np.where(inside, root - square, 1.0), 0.0)
    cubic = low + s * (rising + s * (square + s * cube))
    return np.where(inside, cubic, low).max(axis=1)


def _phi(z: Array) -> tuple[Array, Array, Array, Array]:
    """φ0 = e^z, φ1 = (e^z − 1)/z, φ2 = (φ1 − 1)/z, φ3 = (φ2 − 1/2)/z."""
    small = np.abs(z) < 0.1
    third = 1 / 6 + z * (1 / 24 + z * (1 / 120 + z * (1 / 720 + z * (1 / 5040 + z / 40320))))
    second = 0.5 + z * third
    first = 1 + z * second
    if not small.all():
        safe = np.where(small, 1.0, z)
        closed1 = np.expm1(safe) / safe
        closed2 = (closed1 - 1) / safe
        first = np.where(small, first, closed1)
        second = np.where(small, second, closed2)
        third = np.where(small, third, (closed2 - 0.5) / safe)
    return 1 + z * first, first, second, third
