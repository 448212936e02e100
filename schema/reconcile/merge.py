"""What several suspicions have in common: neighbours exchanged, one cause, one column."""

import numpy as np

from ..batch import Batch
from .causes import TORQUES
from .columns import SHARE, ColumnFault
from .model import FIGURES, INDEX
from .suspects import Suspicion

CHANCE = {"unexplained", "digits-transposed", "continuous-stall", "neighbouring-column"}
"""Causes that one ratio in two torque figures makes unlikely."""

GEARED = 0.8
"""The least logarithm of a gear's ratio."""

OF_A_CELL = {"digits-transposed", "neighbouring-column", "figures-swapped"}
"""Mistakes in one cell: no reason for a whole column that is wrong by one factor."""

Merged = list[tuple[ColumnFault, np.ndarray]]


def exchanged_neighbours(batch: Batch, suspicions: list[Suspicion]) -> None:
    """Two neighbours whose one figure is wrong, each having the other's value."""
    by_place = {(s.motor, s.figure): s for s in suspicions if s.partner is None}
    for (motor, figure), a in by_place.items():
        b = by_place.get((motor + 1, figure))
        if b is None or batch.series[motor] != batch.series[motor + 1]:
            continue
        value = batch.value(FIGURES[figure])
        step = float(np.log(value[motor] / value[motor + 1]))
        # what one prints is what the other should read
        sd = max(a.sd, b.sd)
        if abs(a.log_ratio - step) < 2.5 * sd and abs(b.log_ratio + step) < 2.5 * sd:
            for s in (a, b):
                _lead(s, "neighbouring-column")


def shared_causes(suspicions: list[Suspicion]) -> None:
    """Several figures of one motor that one mistake explains: continuous stall, a gear."""
    by_motor: dict[int, list[Suspicion]] = {}
    for s in suspicions:
        by_motor.setdefault(s.motor, []).append(s)
    for several in by_motor.values():
        if len(several) < 2:
            continue
        stall = [s for s in several
                 if s.figure in (INDEX["stall_torque"], INDEX["stall_current"])]  # fmt: skip
        if len(stall) == 2 and all("continuous-stall" in s.causes for s in stall):
            for s in stall:
                _lead(s, "continuous-stall")
        geared = [s for s in several if FIGURES[s.figure] in TORQUES and s.log_ratio > GEARED]
        ratios = [s.log_ratio for s in geared]
        if len(geared) >= 2 and np.ptp(ratios) < 3.0 * max(s.sd for s in geared) + 0.02:
            for s in geared:
                if s.causes[0] in CHANCE:
                    _lead(s, "gear-output-side")


def _lead(s: Suspicion, cause: str) -> None:
    s.causes = (cause, *(c for c in s.causes if c not in (cause, "unexplained")))


def shared_faults(batch: Batch, suspicions: list[Suspicion]) -> tuple[Merged, list[Suspicion]]:
    """Suspicions of one figure that most motors share with one ratio, as one of the column."""
    by_figure: dict[int, list[Suspicion]] = {}
    for s in suspicions:
        if s.partner is None:
            by_figure.setdefault(s.figure, []).append(s)
    merged: Merged = []
    gone: set[int] = set()
    for figure, several in by_figure.items():
        given = int(np.isfinite(batch.value(FIGURES[figure])).sum())
        ratio = float(np.median([s.log_ratio for s in several]))
        alike = [s for s in several if abs(s.log_ratio - ratio) < 3.0 * s.sd + 0.01]
        if len(alike) < 2 or len(alike) < SHARE * given:
            continue
        rivals = set.intersection(*(set(s.rivals) for s in alike))
        best = max(alike, key=lambda s: s.saved)
        sd = float(np.median([s.sd for s in alike]))
        implied_sd = float(np.median([s.implied_sd for s in alike]))
        causes = tuple(c for c in best.causes if c not in OF_A_CELL) or ("unexplained",)
        fault = ColumnFault(figure, tuple(sorted(rivals)), ratio, implied_sd, sd, causes)
        merged.append((fault, np.array(sorted(s.motor for s in alike))))
        gone.update(id(s) for s in alike)
    return merged, [s for s in suspicions if id(s) not in gone]
