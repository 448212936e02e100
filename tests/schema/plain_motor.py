"""One motor at one ratio in plain Python floats: the same physics written a second time.

Steady temperature by plain iteration, voltage peaks by fine sampling, no arrays: what the
package's columns are compared with, and timed against.
"""

from __future__ import annotations

import itertools
import math

SAMPLES = 400


def pieces(
    cycle, load_inertia: float, ratio: float, eta: float, inertia: float, Tc: float, b: float
):
    """(duration, motor speeds, motor torques with friction, shaft torques, friction powers)."""
    for dt, w0, w1, m0, m1 in cycle:
        a = (w1 - w0) / dt
        t0, t1 = m0 + load_inertia * a, m1 + load_inertia * a
        cuts = {0.0, 1.0}
        if w0 * w1 < 0:
            cuts.add(w0 / (w0 - w1))
        if t0 * t1 < 0:
            cuts.add(t0 / (t0 - t1))
        marks = sorted(cuts)
        for s, e in itertools.pairwise(marks):
            middle = (s + e) / 2
            wm, tm = w0 + (w1 - w0) * middle, t0 + (t1 - t0) * middle
            sign = (wm > 0) - (wm < 0)
            through = 1 / eta if wm * tm > 0 else eta if wm * tm < 0 else 1.0
            speeds, torques, shafts, rubs = [], [], [], []
            for x in (s, e):
                w = ratio * (w0 + (w1 - w0) * x)
                shaft = (t0 + (t1 - t0) * x) * through / ratio + inertia * ratio * a
                friction = Tc * sign + b * w
                speeds.append(w)
                shafts.append(shaft)
                torques.append(shaft + friction)
                rubs.append(friction * w)
            yield (e - s) * dt, speeds, torques, shafts, rubs, Tc * sign


def judge_plain(motor: dict, cycle, ratio: float, demand: dict, samples: int = SAMPLES) -> dict:
    """Utilisations of one motor, a dict of figures as in `Machines`, from segments (duration,
    speeds, torques at start and end) and a dict of load_inertia, efficiency, gear_inertia,
    supply, ambient, drive_peak."""
    Km25, Ra25 = motor["torque_constant"], motor["armature_resistance"]
    beta, Tc, b = motor["magnet_coefficient"], motor["coulomb_torque"], motor["viscous_damping"]
    ambient = demand["ambient"]
    parts = list(
        pieces(
            cycle,
            demand["load_inertia"],
            ratio,
            demand["efficiency"],
            motor["rotor_inertia"] + demand["gear_inertia"],
            Tc,
            b,
        )
    )
    period = sum(part[0] for part in parts)
    square = sum(d * (t[0] ** 2 + t[0] * t[1] + t[1] ** 2) / 3 for d, _, t, *_ in parts) / period
    rub = (
        sum(
            d * (abs(c * (w[0] + w[1]) / 2) + b * (w[0] ** 2 + w[0] * w[1] + w[1] ** 2) / 3)
            for d, w, _, _, _, c in parts
        )
        / period
    )
    Rth1, Rth2 = (
        motor["thermal_resistance_winding_housing"],
        motor["thermal_resistance_housing_ambient"],
    )
    T, runaway = ambient + Rth2 * rub, False
    for _ in range(100000):
        flux = 1 + beta * (T - 25)
        if flux <= 0.02 or T > 1e5:
            runaway = True
            break
        now = ambient + Rth2 * rub
        now += (Rth1 + Rth2) * square / (Km25 * flux) ** 2 * Ra25 * (234.5 + T) / 259.5
        if abs(now - T) < 1e-10:
            break
        T = now
    peaks = {"voltage": 0.0, "current": 0.0}
    for temperature in (ambient, ambient if runaway else T):
        Km = Km25 * (1 + beta * (temperature - 25))
        Ra = Ra25 * (234.5 + temperature) / 259.5
        X = motor["pole_pairs"] * motor["armature_inductance"] if motor["sinusoidal"] else 0.0
        for _, w, t, *_ in parts:
            for k in range(samples + 1) if X and w[0] != w[1] else (0, samples):
                s = k / samples
                speed, i = w[0] + (w[1] - w[0]) * s, (t[0] + (t[1] - t[0]) * s) / Km
                u = math.hypot(Ra * i + Km * speed, X * speed * i)
                peaks["voltage"] = max(peaks["voltage"], u)
                peaks["current"] = max(peaks["current"], abs(i))
    limit = motor["maximum_winding_temperature"]
    return {
        "voltage": peaks["voltage"] / demand["supply"],
        "peak_current": peaks["current"] / demand["drive_peak"],
        "thermal": math.inf if runaway else (T - ambient) / (limit - ambient),
        "peak_torque": max(abs(x) for part in parts for x in part[3]) / motor["peak_torque"],
        "speed": max(abs(x) for part in parts for x in part[1]) / motor["maximum_speed"],
        "winding_temperature": math.nan if runaway else T,
    }


def largest(result: dict) -> float:
    """Largest utilisation."""
    return max(result[k] for k in ("voltage", "peak_current", "thermal", "peak_torque", "speed"))
