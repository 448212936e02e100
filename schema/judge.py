"""From refits to verdicts: the suspects of every motor, their rivals, and the likeliest causes."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .adjust import Problem
from .batch import Floats
from .causes import CAUSES
from .evidence import Evidence
from .model import F
from .suspects import Bools, LeftOut, contradicts, leave_out, own_sd

NEAR = 16.0
"""Figures whose leaving-out is worse than the best by more than this aren't considered rivals."""

CLEAR_FIT, CLEAR_ALL = 2.5, 6.0
"""A suspect is named when every rival is worse by this much in χ², and by this much when the
causes are counted in (−2 × log odds)."""

FAULT = -4.0
"""Log prior that a given figure is wrong."""

SWAP = -5.0
"""Log prior that some two cells of a motor are exchanged."""

FITS = 2.0
"""A cause fits within so many standard deviations of its ratio: half the square of it, in log."""


@dataclass(slots=True)
class Suspicion:
    """One fault of one motor.

    figure is the likeliest one; rivals the others that might be it just as well (none: it is
    named); log_ratio of printed to implied with the implied value's sd; saved is the χ² that
    leaving it out saves; causes the likeliest first; partner the other figure of a swap.
    """

    motor: int
    figure: int
    rivals: tuple[int, ...]
    log_ratio: float
    implied_sd: float
    sd: float
    saved: float
    causes: tuple[str, ...]
    partner: int | None = None


@dataclass(slots=True)
class _Ranking:
    """Candidates of n motors, arrays (n, F): total evidence against and each one's causes."""

    total: Floats
    scores: dict[tuple[int, int], Floats]


def _rank(
    evidence: Evidence, motors: NDArray[np.integer], part: Problem, left: LeftOut
) -> _Ranking:
    best = np.nanmin(left.chi2, axis=1, keepdims=True)
    with np.errstate(invalid="ignore"):
        row, figure = np.nonzero(left.chi2 <= best + NEAR)
    sd = own_sd(part, left)
    scores = evidence.scores(motors[row], figure, left.log_ratio[row, figure], sd[row, figure])
    top = scores.max(axis=1)
    odds = top + np.log(np.exp(scores - top[:, None]).sum(axis=1))
    total = np.full((len(motors), F), np.inf)
    total[row, figure] = left.chi2[row, figure] - 2.0 * odds
    pairs = zip(row.tolist(), figure.tolist(), strict=True)
    return _Ranking(total, dict(zip(pairs, scores, strict=True)))


def judge(evidence: Evidence, motors: NDArray[np.integer]) -> tuple[list[Suspicion], Bools]:
    """The suspicions of these motors, and the mask (N, F) of figures left out for it."""
    removed = np.zeros_like(evidence.problem.present)
    out: list[Suspicion] = []
    step = 1000
    for start in range(0, len(motors), step):
        out += _judge_some(evidence, motors[start : start + step], removed)
    return out, removed


def _judge_some(evidence: Evidence, motors: NDArray[np.integer], removed: Bools) -> list[Suspicion]:
    part = evidence.problem.take(motors)
    part.present = part.present.copy()
    limit = np.maximum(part.present.sum(axis=1) // 3, 1)
    chi2 = evidence.base.chi2[motors].copy()
    active = np.arange(len(motors))
    found: dict[int, list[Suspicion]] = {}
    for turn in range(int(limit.max(initial=0))):
        active = active[turn < limit[active]]
        if not active.size:
            break
        sub = part.take(active)
        left = leave_out(sub)
        bad = contradicts(chi2[active], left)
        go = bad.any(axis=1)
        if not go.any():
            break
        sub, active = sub.take(np.flatnonzero(go)), active[go]
        left = LeftOut(left.chi2[go], left.log_ratio[go], left.implied_sd[go])
        ranking = _rank(evidence, motors[active], sub, left)
        for i, local in enumerate(active.tolist()):
            total = np.where(bad[go][i], ranking.total[i], np.inf)
            if not np.isfinite(total).any():  # the best fits don't depart enough to tell
                total = np.where(bad[go][i], left.chi2[i] + 1e3, np.inf)
                ranking.total[i] = np.minimum(ranking.total[i], total)
            figure = int(np.argmin(total))
            suspicion = _suspicion(evidence, int(motors[local]), i, figure, float(chi2[local]), sub, left,
                                   ranking)  # fmt: skip
            found.setdefault(local, []).append(suspicion)
            chi2[local] = left.chi2[i, figure]
            part.present[local, figure] = False
    out: list[Suspicion] = []
    for local, suspicions in found.items():
        m = int(motors[local])
        for s in suspicions:
            removed[m, s.figure] = True
        out += suspicions
    return out


def _suspicion(
    evidence: Evidence, motor: int, i: int, figure: int, before: float, sub: Problem,
    left: LeftOut, ranking: _Ranking,
) -> Suspicion:  # fmt: skip
    total, chi2 = ranking.total[i], left.chi2[i]
    with np.errstate(invalid="ignore"):
        rival = (total - total[figure] < CLEAR_ALL) | (chi2 - chi2[figure] < CLEAR_FIT)
    rival &= np.isfinite(total)
    rival[figure] = False
    order = sorted(np.flatnonzero(rival).tolist(), key=lambda f: total[f])
    scores = ranking.scores.get((i, figure))
    sd = float(own_sd(sub.take(slice(i, i + 1)), LeftOut(chi2[None], left.log_ratio[i][None],
               left.implied_sd[i][None]))[0, figure])  # fmt: skip
    return Suspicion(
        motor, figure, tuple(order), float(left.log_ratio[i, figure]),
        float(left.implied_sd[i, figure]), sd, float(before - chi2[figure]),
        causes_of(scores),
    )  # fmt: skip


def causes_of(scores: Floats | None, within: float = 4.6) -> tuple[str, ...]:
    """The causes by likelihood: all that are within a factor of 100 of the likeliest."""
    if scores is None:
        return ("unexplained",)
    order = np.argsort(-scores)
    best = scores[order[0]]
    names = tuple(CAUSES[c] for c in order.tolist() if scores[c] > best - within)
    if names[0] != "unexplained" and "unexplained" in names:
        names = (*(n for n in names if n != "unexplained"), "unexplained")
    return names
