"""Constants from published operating points, where a sheet gives points and no constants.

T = Km·(I − I0) makes the current a straight line over torque, and U = Ra·I + Km·ω the rest of the
voltage a straight line over current: two ordinary least-squares fits (relations 8 of the DC
motor; Fitzgerald, Kingsley, Umans, section 7.7, chapter number from memory).
"""

from dataclasses import dataclass

import numpy as np

from ..batch import Batch

SCATTER = 0.05
"""Relative scatter of the current of a published point (common practice, no source)."""


@dataclass(frozen=True, slots=True)
class PointFit:
    """Constants of one motor with their standard deviations, and the largest misfit of a point's
    current and speed, relative."""

    torque_constant: float
    resistance: float
    no_load_current: float
    sd: tuple[float, float, float]
    misfit: float


def fit_points(batch: Batch, motor: int) -> PointFit | None:
    """The constants that a motor's points imply; None where fewer than two tell."""
    voltage = float(batch.value("nominal_voltage")[motor])
    rows: list[tuple[float, float, float, float]] = []
    for point in batch.points.get(motor, []):
        f = point.figures
        torque = f.get("nominal_torque", f.get("torque", f.get("stall_torque")))
        current = f.get("nominal_current", f.get("current", f.get("stall_current")))
        speed = f.get("nominal_speed", f.get("speed", f.get("no_load_speed")))
        if torque is None and "no_load_speed" in f:
            torque, current = 0.0, f.get("no_load_current", current)
        if speed is None and "stall_torque" in f:
            speed = 0.0
        u = f.get("nominal_voltage", voltage)
        if torque is None or current is None or speed is None or not np.isfinite(u):
            continue
        rows.append((torque, current, speed, u))
    if len(rows) < 2:
        return None
    torque, current, speed, u = np.array(rows).T
    if np.ptp(torque) < 0.05 * torque.max():
        return None
    design = np.stack([torque, np.ones_like(torque)], axis=1)
    (slope, i0), covariance = _least_squares(design, current, SCATTER * current.mean())
    if slope <= 0.0:
        return None
    km = 1.0 / slope
    design = np.stack([current, speed], axis=1)
    (ra, km_voltage), second = _least_squares(design, u, 0.02 * u.mean())
    if ra <= 0.0 or km_voltage <= 0.0:
        return None
    misfit = max(
        float(np.abs((slope * torque + i0) / current - 1.0).max()),
        float(np.abs((u - ra * current) / km_voltage - speed).max() / speed.max()),
    )
    both = np.array([km, km_voltage])
    spread = np.array([km**2 * covariance[0, 0] ** 0.5, second[1, 1] ** 0.5])
    weight = 1.0 / np.maximum(spread, 1e-4 * both) ** 2
    mean = float((both * weight).sum() / weight.sum())
    sd = (float(weight.sum() ** -0.5), float(second[0, 0] ** 0.5), float(covariance[1, 1] ** 0.5))
    return PointFit(mean, float(ra), float(max(i0, 0.0)), sd, misfit)


def _least_squares(
    design: np.ndarray, target: np.ndarray, sd: float
) -> tuple[np.ndarray, np.ndarray]:
    """Solution and covariance; the scatter is at least sd."""
    solution, *_ = np.linalg.lstsq(design, target, rcond=None)
    freedom = len(target) - design.shape[1]
    residual = target - design @ solution
    variance = max(
        float(residual @ residual) / max(freedom, 1) if freedom else 0.0, (0.2 * sd) ** 2
    )
    return solution, variance * np.linalg.pinv(design.T @ design)
