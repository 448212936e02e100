"""From figures as published to constants and findings: the call that the rest relies on."""

import math

import numpy as np

from .adjust import fit
from .batch import Batch
from .constants import constants
from .evidence import Evidence
from .explain import Narrator
from .judge import Suspicion, judge
from .model import FIGURES
from .motor import Reconciled
from .observed import observe
from .suspects import doubtful


def reconcile(batch: Batch) -> Reconciled:
    """Bring a batch to constants and find what contradicts itself.

    One motor or a million: everything is computed on arrays over the motors, in chunks.
    """
    problem = observe(batch)
    base = fit(problem)
    who = np.flatnonzero(doubtful(problem, base))
    suspicions, removed = judge(Evidence(batch, problem, base), who)
    again = np.flatnonzero(removed.any(axis=1))
    if again.size:
        part = problem.take(again)
        part.present = part.present & ~removed[again]
        refit = fit(part)
        base.x[again], base.covariance[again] = refit.x, refit.covariance
        problem.present &= ~removed
    out = Reconciled(batch, constants(batch, problem, base))
    narrator = Narrator(batch)
    doubted: dict[int, set[str]] = {}
    for s in suspicions:
        doubted.setdefault(s.motor, set()).add(FIGURES[s.figure])
    for s in suspicions:
        out.findings.append(narrator.finding(s, severity(s), frozenset(doubted[s.motor])))
        out.finding_motor.append(s.motor)
    return out


def severity(suspicion: Suspicion) -> str:
    """An error where a known cause explains the ratio, or where it departs by more than 15 % and
    five standard deviations; else a warning."""
    if suspicion.causes[0] != "unexplained":
        return "error"
    departure = abs(math.expm1(abs(suspicion.log_ratio)))
    return "error" if departure > max(0.15, 5.0 * suspicion.sd) else "warning"
