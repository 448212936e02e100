"""From figures as published to constants and findings: the call that the rest relies on.

The order: conventions the sheet doesn't state; how the table reads; how much scatter it shows;
columns that share one mistake; then, in portions, every motor's adjustment, its family, its
suspects and its constants; last the direct checks.
"""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..batch import Batch
from ..motor import CONSTANT_BASES, ConstantColumn, Finding, Reconciled
from . import checks
from .adjust import Fit, fit
from .columns import ColumnFault, column_faults
from .constants import constants, joined
from .evidence import Evidence, TableEvidence
from .explain import Narrator
from .families import groups, observe_families, stands_off
from .inference import Inferred, infer
from .kin import told_by_family
from .merge import exchanged_neighbours, shared_causes, shared_faults
from .model import FIGURES, Readings
from .observed import observe
from .operating_points import fit_points
from .portion import portion
from .problem import Problem
from .suspects import Suspicion, doubtful
from .table import readings, sample, scale
from .verdicts import judge

PORTION = 20_000
"""Motors adjusted at a time: what bounds the memory."""


@dataclass(slots=True)
class _Table:
    """What holds for the whole table."""

    readings: Readings
    scale: float
    faults: list[ColumnFault]
    inferred: list[Inferred]


def reconcile(batch: Batch) -> Reconciled:
    """Bring a batch to constants and find what contradicts itself.

    One motor or a million: everything is computed on arrays over the motors, in portions. The
    batch of the result carries the conventions as inferred; nothing published is changed.
    Constants are the adjusted values with 95 % intervals, suspects left out. Data reconciliation
    with gross-error tests: Narasimhan and Jordache, Data Reconciliation and Gross Error
    Detection, 2000 (from memory).
    """
    if not len(batch):
        return Reconciled(batch, constants(batch, observe(batch), fit(observe(batch))))
    batch, table = _whole(batch)
    parts: list[dict[str, ConstantColumn]] = []
    out = Reconciled(batch, {})
    narrator = Narrator(batch)
    for inferred in table.inferred:
        _add(out, int(inferred.entries[0]), narrator.inference(inferred))
    suspicions: list[Suspicion] = []
    families: list[NDArray[np.bool_]] = []
    for start in range(0, len(batch), PORTION):
        part = portion(batch, start, start + PORTION)
        found, columns, of_family = _portion(part, table)
        parts.append(columns)
        families.append(of_family)
        for s in found:
            s.motor += start
        suspicions += found
    out.constants = joined(parts)
    _points(out)
    _report(out, narrator, table, suspicions, np.concatenate(families))
    return out


def _whole(batch: Batch) -> tuple[Batch, _Table]:
    """Conventions, readings, scatter and shared mistakes of a table, from a sample of it."""
    chosen = sample(len(batch))
    whole = portion(batch, 0, len(batch))
    problem = observe(whole)
    batch, inferred = infer(batch, problem)
    if inferred:
        problem = observe(batch)
    some = problem.take(chosen)
    some.readings = problem.readings = readings(some)
    some.scale = problem.scale = np.array([scale(some)])
    faults = column_faults(TableEvidence(batch, problem), chosen)
    if faults:
        some.present = some.present.copy()
        some.present[:, [f.figure for f in faults]] = False
        some.readings = problem.readings = readings(some)
        some.scale = np.array([scale(some)])
    return batch, _Table(problem.readings, float(some.scale[0]), faults, inferred)


def _portion(
    batch: Batch, table: _Table
) -> tuple[list[Suspicion], dict[str, ConstantColumn], NDArray[np.bool_]]:
    problem = observe(batch, table.readings)
    problem.scale = np.array([table.scale])
    for fault in table.faults:
        problem.present[:, fault.figure] = False
    base = fit(problem)
    unsure = doubtful(problem, base)
    named = np.array([name is not None for name in batch.series])
    family = observe_families(problem, base, unsure, groups(batch), named)
    judged, unsure = _with_family(problem, base, unsure)
    suspicions, removed = judge(Evidence(batch, problem, judged), np.flatnonzero(unsure))
    _refit(problem, base, removed)
    told_by_family(suspicions, problem, family)
    return suspicions, constants(batch, problem, base), family


def _with_family(
    problem: Problem, base: Fit, unsure: NDArray[np.bool_]
) -> tuple[Fit, NDArray[np.bool_]]:
    """The fit that counts what the family shares, where that matters, and who is in doubt then."""
    who = np.flatnonzero(unsure | stands_off(problem, base))
    if not who.size or not np.isfinite(problem.family_sd).any():
        return base, unsure
    again = fit(problem.take(who))
    judged = Fit(base.x.copy(), base.covariance.copy(), base.chi2.copy())
    judged.x[who], judged.covariance[who], judged.chi2[who] = again.x, again.covariance, again.chi2
    out = np.zeros_like(unsure)
    out[who] = doubtful(problem.take(who), again)
    return judged, out


def _refit(problem: Problem, base: Fit, removed: np.ndarray) -> None:
    """Adjust the motors that have suspects again without them, in place."""
    again = np.flatnonzero(removed.any(axis=1))
    problem.present = problem.present & ~removed
    if again.size:
        refit = fit(problem.take(again))
        base.x[again], base.covariance[again] = refit.x, refit.covariance
    problem.family_sd = np.full_like(problem.family_sd, np.inf)


def _points(out: Reconciled) -> None:
    """Constants of motors that publish operating points only."""
    keys = ("torque_constant", "armature_resistance", "no_load_current")
    for motor in out.batch.points:
        fitted = fit_points(out.batch, motor)
        if fitted is None:
            continue
        values = (fitted.torque_constant, fitted.resistance, fitted.no_load_current)
        for key, value, sd in zip(keys, values, fitted.sd, strict=True):
            column = out.constants[key]
            if math.isfinite(column.value[motor]) or value <= 0.0:
                continue
            column.value[motor] = value
            column.low[motor], column.high[motor] = max(value - 2 * sd, 0.0), value + 2 * sd
            column.basis[motor] = CONSTANT_BASES.index("derived")
            column.sources.append(("nominal_torque", "nominal_speed", "nominal_current"))
            column.source[motor] = len(column.sources) - 1
        if fitted.misfit > 0.1:
            _add(out, motor, Narrator(out.batch).points(motor, fitted.misfit))


def _add(out: Reconciled, motor: int, finding: Finding) -> None:
    out.findings.append(finding)
    out.finding_motor.append(motor)


def severity(log_ratio: float, sd: float, cause: str) -> str:
    """An error where a known cause explains the ratio, or where it departs by more than 15 % and
    five standard deviations; else a warning."""
    if cause != "unexplained":
        return "error"
    return "error" if abs(math.expm1(abs(log_ratio))) > max(0.15, 5.0 * sd) else "warning"


def _report(
    out: Reconciled,
    narrator: Narrator,
    table: _Table,
    suspicions: list[Suspicion],
    family: NDArray[np.bool_],
) -> None:
    exchanged_neighbours(out.batch, suspicions)
    shared_causes(suspicions)
    merged, suspicions = shared_faults(out.batch, suspicions)
    doubted: dict[int, set[str]] = {}
    for s in suspicions:
        figures = (s.figure, *s.rivals) + (() if s.partner is None else (s.partner,))
        doubted.setdefault(s.motor, set()).update(FIGURES[f] for f in figures)
    for fault, motors in [(f, None) for f in table.faults] + merged:
        level = severity(fault.log_ratio, fault.sd, fault.causes[0])
        first, finding = narrator.column(fault, motors, level)
        _add(out, first, finding)
    suspects: dict[int, set[str]] = {}
    for s in suspicions:
        suspects.setdefault(s.motor, set()).add(FIGURES[s.figure])
    for s in suspicions:
        level = severity(s.log_ratio, s.sd, s.causes[0])
        _add(out, s.motor, narrator.finding(s, level, frozenset(suspects[s.motor])))
    shared = {FIGURES[f.figure] for f in table.faults}
    for fault, motors in merged:
        for m in motors.tolist():
            doubted.setdefault(m, set()).add(FIGURES[fault.figure])
    everyone = doubted
    if shared:
        everyone = {m: doubted.get(m, set()) | shared for m in range(len(out.batch))}
    for motor, finding in (
        checks.bounds(narrator, everyone)
        + checks.poles(narrator)
        + checks.frames(narrator, family)
        + checks.repeats(narrator)
        + checks.thermal(narrator, everyone)
        + checks.scatter(narrator, lambda m: bool(shared) or m in doubted)
    ):
        _add(out, motor, finding)
