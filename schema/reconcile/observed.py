"""From the entries as published to the observations of the model: one DC motor, one temperature."""

import math
from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from ..batch import MAGNETS, Batch, FigureColumn, Floats
from ..convention import Commutation, Convention, to_dc
from ..vocabulary import quantity
from .model import FAMILY_ROWS, FIGURES, POINT_FIGURES, F, Readings
from .problem import Problem, bound_laws

EXACT = 1e-3
"""Relative standard deviation of a figure that counts as exact: the voltage of the sheet."""

UNRESOLVED = 0.005
"""The same for a figure whose printed digits are not known."""

RANGE_OF_VOLTAGE = 0.15
"""A voltage whose printed interval is wider than this is a range, not the sheet's voltage."""

COPPER_ZERO = 234.5
"""Copper's resistance is proportional to 234.5 + T in °C (IEEE practice; Langsdorf, Theory of
Alternating-Current Machinery, ex. 1-15)."""


def copper(to: Floats | float, at: Floats | float) -> Floats:
    """Resistance of copper at one temperature over that at another, °C."""
    return (COPPER_ZERO + np.asarray(to)) / (COPPER_ZERO + np.asarray(at))


def magnet_slope(batch: Batch) -> Floats:
    """Relative change of Km with temperature, 1/K, shape (N,)."""
    names = {name: MAGNETS.get(name, 0.0) for name in set(batch.magnet)}
    return np.array([names[name] for name in batch.magnet])


def to_model(
    key: str, column: FigureColumn, batch: Batch, conventions: list[Convention] | None = None
) -> Floats:
    """Logarithm of the factor from a published figure to the DC motor at the reference
    temperature, shape (N,); conventions stand in for the column's palette."""
    palette = column.conventions if conventions is None else conventions
    table = np.array(
        [[math.log(to_dc(key, c, kind)) for kind in Commutation] for c in palette], dtype=float
    )
    log_factor = table[column.convention, batch.commutation]
    if "temperature" not in quantity(key).carries:
        return log_factor
    temperatures = np.array(
        [math.nan if c.temperature is None else c.temperature for c in palette]
    )[column.convention]
    known = np.isfinite(temperatures)
    if not known.any():
        return log_factor
    reference = batch.reference_temperature
    at = np.where(known, temperatures, reference)
    if key == "terminal_resistance":
        return log_factor + np.log(copper(reference, at))
    return log_factor - np.log1p(magnet_slope(batch) * (at - reference))


def printed_sd(key: str, column: FigureColumn) -> Floats:
    """Relative standard deviation that the printed digits (or ±, or range) leave, shape (N,)."""
    with np.errstate(invalid="ignore", divide="ignore"):
        width = (column.high - column.low) / np.abs(column.value)
    if key == "nominal_voltage":
        return np.where(width > RANGE_OF_VOLTAGE, width / math.sqrt(12.0), EXACT)
    return np.where(np.isfinite(width), np.maximum(width / math.sqrt(12.0), 1e-5), UNRESOLVED)


def custom(key: str, value: Floats) -> Floats:
    """Customary relative scatter of a figure about the model, shape (N,)."""
    about = quantity(key)
    if key in POINT_FIGURES:
        return np.zeros_like(value)
    if about.scatter_points:
        return about.scatter_points / value
    return np.full_like(value, about.scatter)


def usable(key: str, column: FigureColumn) -> NDArray[np.bool_]:
    """Figures that measure something: given, positive, and not a mere bound."""
    present = np.isfinite(column.value) & (column.value > 0.0)
    for i, qualifier in column.qualifiers.items():
        if qualifier in ("at most", "at least"):
            present[i] = False
    return present


def observe(
    batch: Batch,
    readings: Readings | None = None,
    conventions: Mapping[str, list[Convention]] | None = None,
) -> Problem:
    """The adjustment problem of a batch; conventions replaces palettes by key."""
    n = len(batch)
    y, present = np.zeros((n, F)), np.zeros((n, F), dtype=bool)
    digits, scatter = np.ones((n, F)), np.zeros((n, F))
    servo = batch.commutation == int(Commutation.SINUSOIDAL)
    for i, key in enumerate(FIGURES):
        column = batch.figures.get(key)
        if column is None:
            continue
        have = usable(key, column)
        if key == "rated_efficiency":
            have &= ~servo
        value = np.where(have, column.value, 0.5)
        palette = None if conventions is None else conventions.get(key)
        y[:, i] = np.where(have, np.log(value) + to_model(key, column, batch, palette), 0.0)
        digits[:, i] = np.where(have, printed_sd(key, column), 1.0)
        scatter[:, i] = custom(key, value)
        present[:, i] = have
    rows = len(FAMILY_ROWS)
    return Problem(
        y, present, digits, scatter, servo, np.full((n, rows), np.nan),
        np.full((n, rows), np.inf), readings or Readings(), bound_laws(present),
    )  # fmt: skip
