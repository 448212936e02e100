"""The canonical constants of every motor, from its adjustment, at 25 °C."""

import numpy as np
from numpy.typing import NDArray

from ..batch import Batch, Floats
from ..motor import CANONICAL, CONSTANT_BASES, ConstantColumn
from .adjust import Fit
from .equations import product
from .model import FIGURES, I0, B, J, K, L, P, R, linear_matrix
from .observed import copper, magnet_slope
from .problem import Problem

ROWS: dict[str, dict[int, float]] = {
    "torque_constant": {K: 1.0},
    "armature_resistance": {R: 1.0},
    "armature_inductance": {L: 1.0},
    "rotor_inertia": {J: 1.0},
    "no_load_current": {I0: 1.0},
    "viscous_damping": {B: 1.0},
    "motor_constant": {K: 1.0, R: -0.5},
}

DETERMINED = 0.35
"""A constant whose logarithm is known no better than this isn't given."""

NAMESAKE = {
    "torque_constant": ("torque_constant", "back_emf_constant", "speed_constant"),
    "armature_resistance": ("terminal_resistance",),
    "armature_inductance": ("terminal_inductance",),
    "rotor_inertia": ("rotor_inertia",),
    "no_load_current": ("no_load_current",),
    "viscous_damping": ("viscous_damping",),
    "motor_constant": ("motor_constant",),
}
"""The figures that publish a constant outright."""

INFLUENCE = 0.03
"""A figure counts as a source when a change of it moves the constant by this share of it."""

Z95 = 2.04
"""Deviations of a 95 % interval: Student's t of 30 degrees of freedom, which is about what a table
of a few motors has to estimate its scatter from."""


def constants(batch: Batch, problem: Problem, fitted: Fit) -> dict[str, ConstantColumn]:
    """Constant columns by canonical key: value, 95 % interval, basis and sources.

    Intervals are symmetric in the logarithm. Resistance follows copper and Km the magnet from
    the reference temperature to 25 °C.
    """
    reference = batch.reference_temperature
    to_25_r = np.log(copper(25.0, reference))
    to_25_k = np.log1p(magnet_slope(batch) * (25.0 - reference))
    shift = {"torque_constant": to_25_k, "armature_resistance": to_25_r,
             "motor_constant": to_25_k - to_25_r / 2.0}  # fmt: skip
    matrix, _ = linear_matrix(problem.readings)
    weights = problem.weights()
    out: dict[str, ConstantColumn] = {}
    for key in CANONICAL:
        row = np.zeros(P)
        for unknown, exponent in ROWS[key].items():
            row[unknown] = exponent
        log_value, sd = fitted.combination(row)
        gain = np.abs(product(matrix, fitted.covariance_with(row))).T * weights
        used = (gain > INFLUENCE) & problem.present
        known = (sd < DETERMINED) & used.any(axis=1)
        log_value = log_value + shift.get(key, 0.0)
        half = Z95 * sd
        basis, sources, source = _origin(key, used)
        out[key] = ConstantColumn(
            value=_where(known, np.exp(log_value)),
            low=_where(known, np.exp(log_value - half)),
            high=_where(known, np.exp(log_value + half)),
            basis=np.where(known, basis, -1).astype(np.int8),
            sources=sources,
            source=source,
        )
    return out


def _where(known: NDArray[np.bool_], value: Floats) -> Floats:
    return np.where(known, value, np.nan)


def _origin(
    key: str, used: NDArray[np.bool_]
) -> tuple[NDArray[np.int8], list[tuple[str, ...]], NDArray[np.int32]]:
    """Basis, palette of sources and index into it, from which figures moved the constant."""
    bits = used @ (1 << np.arange(used.shape[1], dtype=np.int64))
    patterns, source = np.unique(bits, return_inverse=True)
    sources, basis = [], []
    for pattern in patterns:
        keys = tuple(f for i, f in enumerate(FIGURES) if int(pattern) >> i & 1)
        sources.append(keys)
        if any(k in NAMESAKE[key] for k in keys):
            name = "published" if len(keys) == 1 else "reconciled"
        else:
            name = "derived"
        basis.append(CONSTANT_BASES.index(name))
    return np.array(basis, dtype=np.int8)[source], sources, source.astype(np.int32)


def joined(parts: list[dict[str, ConstantColumn]]) -> dict[str, ConstantColumn]:
    """Constant columns of consecutive batches as one, with one palette of sources each."""
    if len(parts) == 1:
        return parts[0]
    out: dict[str, ConstantColumn] = {}
    for key in CANONICAL:
        columns = [part[key] for part in parts]
        index: dict[tuple[str, ...], int] = {}
        source = [
            np.array([index.setdefault(keys, len(index)) for keys in c.sources], dtype=np.int32)[
                c.source
            ]
            for c in columns
        ]
        out[key] = ConstantColumn(
            value=np.concatenate([c.value for c in columns]),
            low=np.concatenate([c.low for c in columns]),
            high=np.concatenate([c.high for c in columns]),
            basis=np.concatenate([c.basis for c in columns]),
            sources=list(index),
            source=np.concatenate(source),
        )
    return out
