"""From refits to verdicts: the suspects of every motor, their rivals, and the likeliest causes."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats
from .adjust import misfit
from .causes import causes_of
from .evidence import Evidence
from .problem import Problem
from .suspects import (
    GAIN,
    Bools,
    LeftOut,
    Suspicion,
    contradicts,
    leave_out,
    own_sd,
    shortlist,
)
from .swaps import find_swaps

NEAR = 16.0
"""Figures whose leaving-out is worse than the best by more than this aren't considered rivals."""

CLEAR_FIT, CLEAR_ALL = 2.5, 6.0
"""A suspect is named when every rival is worse by this much in χ², and by this much when the
causes are counted in (−2 × log odds)."""

IMPLAUSIBLE = 6.0
"""What it costs, in χ², when a suspect's implied value or another figure that then stays right lies
beyond what motors of any size have."""

BETTER = 2.0
"""How much likelier another suspect must be to take the place of the first found."""

STEP = 1000
"""Motors judged at a time."""


@dataclass(slots=True)
class _Ranking:
    """Candidates of n motors, arrays (n, F): χ² and total evidence against each (inf: none), sd of
    its ratio, and the log odds of its causes."""

    chi2: Floats
    total: Floats
    sd: Floats
    scores: dict[tuple[int, int], Floats]


def _rank(
    evidence: Evidence, motors: NDArray[np.integer], part: Problem, left: LeftOut, bad: Bools
) -> _Ranking:
    best = np.nanmin(np.where(bad, left.chi2, np.inf), axis=1, keepdims=True)
    with np.errstate(invalid="ignore"):
        row, figure = np.nonzero(left.chi2 <= best + NEAR)
    sd = own_sd(part, left)
    scores = evidence.scores(motors[row], figure, left.log_ratio[row, figure], sd[row, figure])
    chi2, total = np.full(left.chi2.shape, np.inf), np.full(left.chi2.shape, np.inf)
    chi2[row, figure] = left.chi2[row, figure]
    chi2 += IMPLAUSIBLE * evidence.implausible(part, left)
    total[row, figure] = chi2[row, figure] - 2.0 * np.logaddexp.reduce(scores, axis=1)
    pairs = zip(row.tolist(), figure.tolist(), strict=True)
    return _Ranking(chi2, total, sd, dict(zip(pairs, scores, strict=True)))


def judge(evidence: Evidence, motors: NDArray[np.integer]) -> tuple[list[Suspicion], Bools]:
    """The suspicions of these motors, and the mask (N, F) of figures left out for it."""
    removed = np.zeros_like(evidence.problem.present)
    out: list[Suspicion] = []
    for start in range(0, len(motors), STEP):
        out += _judge_some(evidence, motors[start : start + STEP])
    for s in out:
        removed[s.motor, s.figure] = True
        if s.partner is not None:
            removed[s.motor, s.partner] = True
    return out, removed


def _judge_some(evidence: Evidence, motors: NDArray[np.integer]) -> list[Suspicion]:
    part = evidence.problem.take(motors)
    part.present = part.present.copy()
    limit = np.maximum(part.present.sum(axis=1) // 3, 1)
    chi2 = evidence.base.chi2[motors].copy()
    active = np.arange(len(motors))
    found: dict[int, list[Suspicion]] = {}
    for turn in range(int(limit.max(initial=0))):
        # what is left of χ² is the most that leaving out one more could save
        active = active[(turn < limit[active]) & (chi2[active] > GAIN)]
        if not active.size:
            break
        active = _one_turn(evidence, motors, part, chi2, active, found)
    _reconsider(evidence, motors, part, found)
    swaps = find_swaps(evidence, motors, part, chi2, found)
    out: list[Suspicion] = []
    for local, suspicions in found.items():
        out += swaps.get(local, suspicions)
    return out


def _one_turn(
    evidence: Evidence, motors: NDArray[np.integer], part: Problem, chi2: Floats,
    active: NDArray[np.integer], found: dict[int, list[Suspicion]],
) -> NDArray[np.integer]:  # fmt: skip
    """Take the likeliest suspect out of every motor that still contradicts itself; those motors."""
    sub = part.take(active)
    left = leave_out(sub, shortlist(sub))
    bad = contradicts(chi2[active], left)
    go = np.flatnonzero(bad.any(axis=1))
    if not go.size:
        return active[:0]
    sub, active, bad = sub.take(go), active[go], bad[go]
    left = LeftOut(left.chi2[go], left.log_ratio[go], left.implied_sd[go])
    ranking = _rank(evidence, motors[active], sub, left, bad)
    for i, local in enumerate(active.tolist()):
        figure = int(np.argmin(np.where(bad[i], ranking.total[i], np.inf)))
        verdict = _suspicion(int(motors[local]), i, figure, float(chi2[local]), left, ranking)
        found.setdefault(local, []).append(verdict)
        chi2[local] = left.chi2[i, figure]
        part.present[local, figure] = False
    return active


def _reconsider(
    evidence: Evidence, motors: NDArray[np.integer], part: Problem,
    found: dict[int, list[Suspicion]],
) -> None:  # fmt: skip
    """Where several figures are out, put each back and see who its rivals are without the rest."""
    pairs = [(local, s) for local, ss in found.items() if len(ss) > 1 for s in ss]
    if not pairs:
        return
    locals_ = np.array([local for local, _ in pairs])
    sub = part.take(locals_)
    sub.present = sub.present.copy()
    sub.present[np.arange(len(pairs)), [s.figure for _, s in pairs]] = True
    before, _ = misfit(sub)
    worth = shortlist(sub)
    worth[np.arange(len(pairs)), [s.figure for _, s in pairs]] = True
    left = leave_out(sub, worth)
    bad = contradicts(before, left)
    ranking = _rank(evidence, motors[locals_], sub, left, bad)
    for local in {local for local, _ in pairs}:
        found[local] = []
        part.present[local] |= evidence.problem.present[motors[local]]
    for i, (local, old) in enumerate(pairs):
        if not bad[i].any():
            continue
        figure = old.figure
        total = np.where(bad[i], ranking.total[i], np.inf)
        best = int(np.argmin(total))
        if not bad[i, figure] or total[best] < total[figure] - BETTER:
            figure = best  # the first look was misled by the other faults
        if part.present[local, figure]:
            part.present[local, figure] = False
            verdict = _suspicion(old.motor, i, figure, float(before[i]), left, ranking)
            found[local].append(verdict)


def _suspicion(
    motor: int, i: int, figure: int, before: float, left: LeftOut, ranking: _Ranking
) -> Suspicion:
    total, chi2 = ranking.total[i], ranking.chi2[i]
    with np.errstate(invalid="ignore"):
        rival = (total - total[figure] < CLEAR_ALL) | (chi2 - chi2[figure] < CLEAR_FIT)
    rival &= np.isfinite(total)
    rival[figure] = False
    order = sorted(np.flatnonzero(rival).tolist(), key=lambda f: total[f])
    scores = ranking.scores[(i, figure)]
    return Suspicion(
        motor, figure, tuple(order), float(left.log_ratio[i, figure]),
        float(left.implied_sd[i, figure]), float(ranking.sd[i, figure]),
        float(before - left.chi2[i, figure]), causes_of(scores),
        odds=float(np.logaddexp.reduce(scores)),
    )  # fmt: skip
