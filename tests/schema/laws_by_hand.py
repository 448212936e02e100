"""The laws of the DC motor in plain values, one motor at a time: what the adjustment is held to.

Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., section 7.7 (from memory).
"""

import math

import numpy as np

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.adjust import fit
from motorfolio.schema.reconcile.model import FIGURES, INDEX, UNKNOWNS, P, ridge
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.problem import Problem

from .simulated_sheets import FULL, SERVO, make

BRUSHED, SINE = Commutation.BRUSHED, Commutation.SINUSOIDAL
MORE = (*FULL, "maximum_power", "rated_power", "rated_efficiency", "friction_torque")


def sheet(kind: Commutation = BRUSHED, n: int = 3, seed: int = 4) -> Problem:
    return observe(make(np.random.default_rng(seed), n, kind, SERVO if kind is SINE else MORE,
                        scatter=0.5).batch)  # fmt: skip


def standardised(p: Problem, m: int, x: np.ndarray) -> np.ndarray:
    """Residuals over their standard deviations of one motor, law by law in plain values (the DC
    motor: Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., section 7.7, from memory)."""
    v = dict(zip(UNKNOWNS, np.exp(x), strict=True))
    k, r, j, la, u, i0, n0, ts, i_n, tn, nn, tf, b, ics, ipk = v.values()
    figures = {
        "torque_constant": k, "back_emf_constant": k, "speed_constant": 1 / k,
        "terminal_resistance": r, "terminal_inductance": la, "rotor_inertia": j,
        "nominal_voltage": u, "no_load_current": i0, "no_load_speed": n0, "stall_torque": ts,
        "stall_current": u / r, "nominal_current": i_n, "nominal_torque": tn,
        "nominal_speed": nn, "rated_power": tn * nn, "rated_efficiency": tn * nn / (u * i_n),
        "speed_torque_gradient": r / k**2, "motor_constant": k / r**0.5,
        "mechanical_time_constant": j * r / k**2, "electrical_time_constant": la / r,
        "friction_torque": tf, "viscous_damping": b, "continuous_stall_current": ics,
        "continuous_stall_torque": k * ics, "peak_current": ipk, "maximum_power": n0 * ts / 4,
        "maximum_efficiency": (1 - (i0 * r / u) ** 0.5) ** 2,
    }  # fmt: skip
    have = {key: bool(p.present[m, INDEX[key]]) for key in FIGURES}
    out = []
    for key, value in figures.items():
        if have[key]:
            i = INDEX[key]
            sd = math.hypot(p.digits[m, i], p.scale[0] * p.scatter[m, i])
            out.append((p.y[m, i] - math.log(value)) / sd)
    if have["peak_torque"]:
        i = INDEX["peak_torque"]
        gap = p.y[m, i] - math.log(k * ipk)
        beyond = gap - min(max(gap, math.log(0.5)), math.log(1.05))
        out.append(beyond / math.hypot(p.digits[m, i], p.scale[0] * p.scatter[m, i]))
    damping = b * n0 if have["viscous_damping"] else 0.0
    laws = [
        (math.log((u - r * i0) / k / n0), 0.025),
        (math.log(k * (u / r - i0) / ts), 0.02),
        (math.log(k * (i_n - i0) / tn), 0.07),
        (math.log(k * i0 / (tf + damping)), 0.1),
    ]
    for which, (residual, sd) in zip((0, 1, 2, 4), laws, strict=True):
        if p.bound[m, which]:
            out.append(residual / (p.scale[0] * sd))
    if p.bound[m, 3]:
        speed = u / k if p.servo[m] else (u - r * i_n) / k
        residual = math.log(speed / nn)
        if not p.servo[m] or residual < 0:
            out.append(residual / (p.scale[0] * 0.025))
    if not have["no_load_current"]:
        sinusoidal = math.log(0.025 * i_n / i0) / math.log(2)
        out.append(sinusoidal if p.servo[m] else math.log(0.015 * u / r / i0))
    return np.array(out)


def squares(p: Problem, m: int, x: np.ndarray, cut: float | None = None) -> float:
    square = standardised(p, m, x) ** 2
    return float((square if cut is None else cut**2 * np.log1p(square / cut**2)).sum())


def pulled(p: Problem, m: int, x: np.ndarray, cut: float | None = None) -> float:
    """With the weak prior on every unknown."""
    mean, weight = ridge()
    return squares(p, m, x, cut) + float((weight * (x - mean) ** 2).sum())


def away(p: Problem) -> np.ndarray:
    """Unknowns (P, n) some per cent from the fit, none of the laws at a bound."""
    return (fit(p).x + np.random.default_rng(0).normal(0, 0.03, (len(p), P))).T
