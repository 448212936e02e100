"""Suspicions and figures left out with numbers put in by hand, to see what is decided on them."""

from __future__ import annotations

import math

import numpy as np

from motorfolio.schema.batch import Batch
from motorfolio.schema.reconcile.model import INDEX, LAW_SCATTER, F, Readings
from motorfolio.schema.reconcile.problem import Problem
from motorfolio.schema.reconcile.suspects import LeftOut, Suspicion

from .simulated_sheets import put, single

FAMILY = 4
"""What the windings of one size share: motor constant, inertia, La/Ra, friction torque."""


def suspicion(motor: int, key: str, ratio: float, causes=("unexplained",), **more) -> Suspicion:
    given = {"rivals": (), "implied_sd": 0.01, "sd": 0.01, "saved": 100.0, **more}
    return Suspicion(motor, INDEX[key], log_ratio=math.log(ratio), causes=causes, **given)


def printed(key: str, *values: float) -> Batch:
    """Motors of one series that print one figure."""
    batch = single(n=len(values))
    batch.series = ["A"] * len(values)
    for row, value in enumerate(values):
        put(batch, key, row, value, 5)
    return batch


def problem(n: int, *keys: str, sd: float = 0.02) -> Problem:
    """n brushed motors with these figures, all 1 in SI, no law bound."""
    present = np.zeros((n, F), dtype=bool)
    present[:, [INDEX[key] for key in keys]] = True
    return Problem(
        np.zeros((n, F)), present, np.full((n, F), sd), np.zeros((n, F)), np.zeros(n, bool),
        np.full((n, FAMILY), np.nan), np.full((n, FAMILY), np.inf), Readings(),
        np.zeros((n, len(LAW_SCATTER)), bool),
    )  # fmt: skip


def left_out(n: int, **figures: tuple) -> LeftOut:
    """What is left of χ², printed over implied, and the implied value's deviation, by figure."""
    out = LeftOut(*(np.full((n, F), np.nan) for _ in range(3)))
    for key, (chi2, ratio, sd) in figures.items():
        i = INDEX[key]
        out.chi2[:, i], out.log_ratio[:, i], out.implied_sd[:, i] = chi2, np.log(ratio), sd
    return out
