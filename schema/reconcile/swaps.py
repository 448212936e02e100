"""Two cells of a motor exchanged: tested by refitting with the two printed numbers exchanged.

Not the ratio of either tells: a swap of Kt and Kn leaves Kt·Kn intact, and only the other figures
show it. Every pair is tried where several figures are out, else those pairs whose exchange puts
the suspect right.
"""

import itertools
import math
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats
from ..vocabulary import quantity
from .adjust import fit, misfit
from .evidence import Evidence
from .model import FIGURES
from .problem import Problem
from .suspects import Suspicion, predicted

FAULT = -4.0
"""Log prior that a given figure is wrong."""

SWAP = -5.0
"""Log prior that some two cells of a motor are exchanged."""

BESIDE = math.log(4.0)
"""How much likelier cells next to each other are exchanged, in log."""

UNLIKE = -2.0
"""The same for cells of unlike quantities, which a hand seldom exchanges."""

PAIRS = 4000
"""Exchanges refitted at a time."""


def find_swaps(
    evidence: Evidence,
    motors: NDArray[np.integer],
    part: Problem,
    chi2: Floats,
    found: dict[int, list[Suspicion]],
) -> dict[int, list[Suspicion]]:
    """Verdicts of motors better explained by an exchange of two cells, by index into motors.

    part has the suspects of ``found`` left out and chi2 the sum of squares of the rest.
    """
    trials = [
        (local, a, b)
        for local, suspicions in found.items()
        if suspicions
        for a, b in _candidates(evidence, part, local, int(motors[local]), suspicions)
    ]
    best: dict[int, tuple[float, int, int]] = {}
    for start in range(0, len(trials), PAIRS):
        some = trials[start : start + PAIRS]
        for (local, a, b), cost in zip(some, _costs(evidence, motors, some), strict=True):
            cost -= 2.0 * _prior(evidence, part, local, int(motors[local]), a, b)
            cost += 2.0 * sum(math.log(s.sd) + 0.919 for s in found[local])
            if local not in best or cost < best[local][0]:
                best[local] = (cost, a, b)
    out: dict[int, list[Suspicion]] = {}
    for local, (cost, a, b) in best.items():
        suspicions = found[local]
        alone = float(chi2[local]) - 2.0 * sum(s.odds + FAULT for s in suspicions)
        if cost < alone:
            out[local] = [_verdict(evidence, int(motors[local]), a, b, suspicions)]
    return out


def _candidates(
    evidence: Evidence, part: Problem, local: int, motor: int, suspicions: list[Suspicion]
) -> list[tuple[int, int]]:
    printed = evidence.printed[motor]
    present = np.flatnonzero(evidence.problem.present[motor] & np.isfinite(printed)).tolist()
    if len(suspicions) > 1:
        pairs = itertools.combinations(present, 2)
        return [(a, b) for a, b in pairs if abs(printed[a] - printed[b]) > 0.01]
    suspect = suspicions[0]
    s, reach = suspect.figure, 4.0 * suspect.sd + 0.01
    wanted = printed[s] - suspect.log_ratio
    return [(s, b) for b in present if b != s and abs(printed[b] - wanted) < reach]


def _costs(
    evidence: Evidence, motors: NDArray[np.integer], trials: list[tuple[int, int, int]]
) -> list[float]:
    """χ² of each motor with the two printed numbers exchanged and nothing left out."""
    local, a, b = (np.array(v) for v in zip(*trials, strict=True))
    who = motors[local]
    part = evidence.problem.take(who)
    part.y = part.y.copy()
    i = np.arange(len(trials))
    gap = evidence.printed[who, b] - evidence.printed[who, a]
    part.y[i, a] += gap
    part.y[i, b] -= gap
    return misfit(part)[0].tolist()


def _prior(evidence: Evidence, part: Problem, local: int, motor: int, a: int, b: int) -> float:
    n = int(evidence.problem.present[motor].sum())
    places = [evidence.place(motor, f) for f in (a, b)]
    beside = abs(places[0][0] - places[1][0]) + abs(places[0][1] - places[1][1]) == 1
    alike = quantity(FIGURES[a]).unit == quantity(FIGURES[b]).unit or {FIGURES[a], FIGURES[b]} in (
        {"torque_constant", "speed_constant"}, {"terminal_resistance", "terminal_inductance"},
    )  # fmt: skip
    closeness = (BESIDE if beside else 0.0) + (BESIDE if alike else UNLIKE)
    return SWAP - math.log(n * (n - 1) / 2) + closeness


def _verdict(
    evidence: Evidence, motor: int, a: int, b: int, suspicions: list[Suspicion]
) -> Suspicion:
    """The exchange as one suspicion: of the figure that was suspect, or that moves the more."""
    known = {s.figure: s for s in suspicions}
    if b in known and a not in known:
        a, b = b, a
    part = evidence.problem.take(np.array([motor]))
    part.present = part.present.copy()
    part.present[0, [a, b]] = False
    fitted = fit(part)
    value, sd = predicted(part, fitted, np.array([a]))
    ratio = float(part.y[0, a] - value[0])
    model = known.get(a, suspicions[0])
    unsaid = ("figures-swapped", "unexplained")
    others = tuple(c for c in model.causes if c not in unsaid) if a in known else ()
    return replace(
        model,
        figure=a,
        rivals=(),
        log_ratio=ratio,
        implied_sd=float(sd[0]),
        saved=sum(s.saved for s in suspicions),
        causes=("figures-swapped", *others),
        partner=b,
    )
