"""What the program is held against: the same work by the plain way with general libraries."""

from __future__ import annotations

import csv
import math
from pathlib import Path

import numpy as np

from .sheets import COLUMNS, RPM


def pint_a_cell(path: Path, rows: int) -> int:
    """Convert every cell of the first rows through pint's own parser: how many cells."""
    import pint

    ureg = pint.UnitRegistry()
    spelled = {"mNm": "mN*m", "mNm/A": "mN*m/A", "rpm/mNm": "rpm/(mN*m)", "gcm²": "g*cm**2",
               "%": "percent", "Ω": "ohm", "°C": "degC"}  # fmt: skip
    si = {"N·m": "N*m", "N·m/A": "N*m/A", "rad/(s·V)": "rad/s/V", "rad/(s·N·m)": "rad/s/(N*m)",
          "kg·m²": "kg*m**2", "1": "dimensionless", "Ω": "ohm", "°C": "degC"}  # fmt: skip
    units = [(spelled.get(u, u), si.get(s, s)) for _, u, s, _ in COLUMNS]
    count = 0
    with path.open(encoding="utf-8", newline="") as file:
        table = csv.reader(file)
        next(table)
        for row, _ in zip(table, range(rows), strict=False):
            for text, (unit, target) in zip(row[1:], units, strict=True):
                if unit == "degC":  # "125 degC" is refused by some versions
                    ureg.Quantity(float(text), unit).to(target)
                else:
                    ureg(f"{text} {unit}").to(target)
                count += 1
    return count


def insert_texts(path: Path, database: Path) -> None:
    """The raw text cells into a wide table, a row a motor, by sqlite-utils."""
    import sqlite_utils

    db = sqlite_utils.Database(database)
    with path.open(encoding="utf-8", newline="") as file:
        db.table("motors").insert_all(csv.DictReader(file))  # pyright: ignore[reportArgumentType]
    db.close()


# ---- least squares, a motor at a time

FIGURES = (
    # heading, key, and the factor to SI
    ("Nominal voltage", "U", 1.0), ("No-load speed", "n0", RPM), ("No-load current", "I0", 1e-3),
    ("Nominal speed", "n", RPM), ("Nominal torque", "T", 1e-3), ("Nominal current", "I", 1.0),
    ("Stall torque", "TH", 1e-3), ("Stall current", "IA", 1.0), ("Maximum efficiency", "eta", 0.01),
    ("Terminal resistance", "R", 1.0), ("Terminal inductance", "L", 1e-3),
    ("Torque constant", "K", 1e-3), ("Speed constant", "kn", RPM),
    ("Speed/torque gradient", "slope", RPM * 1e3), ("Mechanical time constant", "tau", 1e-3),
    ("Rotor inertia", "J", 1e-7),
)  # fmt: skip
UNKNOWNS = ("K", "R", "J", "L", "I0", "n0", "TH", "I", "T", "n")
SD, LAW_SD = 0.01, 0.03
"""Relative scatter of a figure and of a law (no-load and stall point, nominal point)."""


def _observed(x: np.ndarray, U: float) -> list[float]:
    """The figures, in the order of FIGURES without U, that the unknowns give."""
    K, R, J, L, I0, n0, stall_torque, current, torque, n = np.exp(x)
    efficiency = (1 - math.sqrt(min(I0 * R / U, 1))) ** 2
    return [n0, I0, n, torque, current, stall_torque, U / R, efficiency, R, L, K, 1 / K,
            R / K**2, R * J / K**2, J]  # fmt: skip


def _laws(x: np.ndarray, U: float) -> list[float]:
    """The logarithms by which the unknowns miss the laws of the DC motor."""
    K, R, _, _, I0, n0, stall_torque, current, torque, n = np.exp(x)
    given = (n0, stall_torque, torque, n)
    due = ((U - R * I0) / K, K * (U / R - I0), K * (current - I0), (U - R * current) / K)
    return [math.log(g / max(d, 1e-30)) for g, d in zip(given, due, strict=True)]


def fit_a_motor_at_a_time(columns: list[np.ndarray], motors: int) -> int:
    """scipy's robust least squares for each motor, with the unknowns and rows that the program
    adjusts; one that does not fit is fitted again without each of its figures in turn. How many
    had a figure without which all agrees."""
    from scipy.optimize import least_squares

    of = {heading: values for (heading, *_), values in zip(COLUMNS, columns, strict=True)}
    table = {key: of[heading] * factor for heading, key, factor in FIGURES}
    suspects = 0
    for i in range(motors):
        figures = {key: float(values[i]) for key, values in table.items()}
        U = figures.pop("U")
        printed = np.log(list(figures.values()))
        start = np.log([figures[key] for key in UNKNOWNS])

        def residual(x: np.ndarray, out: int = -1, U: float = U, y: np.ndarray = printed):
            r = (np.log(np.maximum(_observed(x, U), 1e-30)) - y) / SD
            if out >= 0:
                r[out] = 0
            return np.concatenate([r, np.array(_laws(x, U)) / LAW_SD])

        whole = least_squares(residual, start, loss="soft_l1")
        if 2 * whole.cost > 30:
            costs = [
                least_squares(residual, start, kwargs={"out": k}).cost for k in range(len(printed))
            ]
            suspects += 2 * min(costs) < 20
    return suspects
