"""A mistake that a whole column shares: one factor for all motors, found and reported once."""

import math
from dataclasses import dataclass

import numpy as np

from ..batch import Floats
from .adjust import misfit
from .causes import causes_of
from .evidence import TableEvidence
from .model import F
from .problem import Problem
from .suspects import DEPARTURE, GAIN, leave_out, own_sd
from .verdicts import CLEAR_ALL, CLEAR_FIT, IMPLAUSIBLE

LEAST = 3
"""Motors that make a column."""

SHARE = 0.7
"""The part of a column's motors that must share the factor."""

COMMON = 0.012
"""What a whole table may be off alike without a mistake: rounding of factors, gross for net."""

CAP = 40.0
"""What one motor counts at most: a motor with a fault of its own decides nothing."""


@dataclass(slots=True)
class ColumnFault:
    """One column that departs by one factor; fields as in ``Suspicion``, motors those that do."""

    figure: int
    rivals: tuple[int, ...]
    log_ratio: float
    implied_sd: float
    sd: float
    causes: tuple[str, ...]


def _capped(chi2: Floats) -> Floats:
    return np.minimum(chi2, CAP) + np.log1p(np.maximum(chi2 - CAP, 0.0))


def column_faults(evidence: TableEvidence, motors: np.ndarray) -> list[ColumnFault]:
    """The columns that share a mistake, judged by these motors; the worst first."""
    part = evidence.problem.take(motors)
    part.present = part.present.copy()
    out: list[ColumnFault] = []
    while len(out) < max(1, int(part.present.any(axis=0).sum()) // 3):
        found = _worst(evidence, motors, part)
        if found is None:
            break
        out.append(found)
        part.present[:, found.figure] = False
    return out


def _worst(evidence: TableEvidence, motors: np.ndarray, part: Problem) -> ColumnFault | None:
    chi2, _ = misfit(part)
    if np.median(chi2) < 0.5 * GAIN and len(motors) < 30:
        return None
    if (chi2 > GAIN).mean() < SHARE / 2.0:
        return None
    left = leave_out(part)
    sd = own_sd(part, left)
    odd = IMPLAUSIBLE * evidence.implausible(part, left)
    before = float(_capped(chi2).sum())
    fits, totals = np.full(F, np.inf), np.full(F, np.inf)
    shifts, spreads, faulty = np.zeros(F), np.zeros(F), np.zeros(F, dtype=bool)
    scores: dict[int, Floats] = {}
    for f in np.flatnonzero(part.present.any(axis=0)).tolist():
        known = np.isfinite(left.log_ratio[:, f]) & (sd[:, f] < 0.4)
        if known.sum() < LEAST:
            continue
        ratio, spread = left.log_ratio[known, f], sd[known, f]
        shift = float(np.median(ratio))
        share = (np.abs(ratio - shift) < 3.0 * spread + 0.02).mean()
        rest = chi2.copy()
        rest[known] = left.chi2[known, f] + ((ratio - shift) / spread) ** 2
        fits[f] = float(_capped(rest).sum()) + float(odd[known, f].sum())
        shifts[f] = shift
        spreads[f] = float(np.median(spread)) / np.sqrt(known.sum()) + 0.002
        departs = abs(np.expm1(abs(shift))) > DEPARTURE + 2.0 * np.median(left.implied_sd[known, f])
        saves = before - fits[f] > GAIN + 0.3 * GAIN * known.sum()
        faulty[f] = share >= SHARE and departs and saves
        scores[f] = evidence.column_scores(f, motors[known], shift, math.hypot(spreads[f], COMMON))
        totals[f] = fits[f] - 2.0 * float(np.logaddexp.reduce(scores[f]))
    if not faulty.any():
        return None
    best = int(np.argmin(np.where(faulty, totals, np.inf)))
    rival = (totals - totals[best] < CLEAR_ALL) | (fits - fits[best] < CLEAR_FIT)
    rival &= faulty
    rival[best] = False
    return ColumnFault(
        best,
        tuple(sorted(np.flatnonzero(rival).tolist(), key=lambda f: totals[f])),
        float(shifts[best]),
        float(np.nanmedian(left.implied_sd[:, best])),
        math.hypot(float(spreads[best]), COMMON),
        causes_of(scores[best]),
    )
