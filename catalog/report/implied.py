"""Every published figure against the value that a motor's other figures imply for it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from ...schema.reconcile.adjust import fit
from ...schema.reconcile.inference import infer
from ...schema.reconcile.model import FIGURES, INDEX
from ...schema.reconcile.observed import observe
from ...schema.reconcile.problem import Problem
from ...schema.reconcile.relations import FAMILY
from ...schema.reconcile.suspects import leave_out, own_sd, predicted
from ...schema.reconcile.table import readings, sample, scale
from ...schema.vocabulary import quantities, quantity
from ..documents import Document

if TYPE_CHECKING:
    from ...schema.batch import Batch, FigureColumn
    from ..store import Catalog

ORDER = {key: i for i, key in enumerate(quantities())}

LEAST_SCATTER = 0.02
"""What is customary at least where the ratio is that of a finding."""

VAGUE = 0.35
"""A figure whose implied value is known no better than this (one standard deviation of its
logarithm) has nothing to be held against."""

BOUNDS = frozenset({"peak_current", "peak_torque"})
SERVO_BOUNDS = frozenset({"nominal_voltage", "nominal_speed"})
"""Figures that the others only bound: saturation lowers a peak torque, and on a servo sheet the
rated speed is the maker's choice. They stand for comparison only where a finding doubts them."""


@dataclass(frozen=True)
class Implied:
    """One figure: printed/implied, the ends of the printed interval over the implied value, and
    the standard deviation of the ratio's logarithm that is customary (digits, scatter, and what
    is known of the implied value); by_family where the other windings of its size imply it."""

    key: str
    ratio: float
    low: float
    high: float
    sd: float
    severity: str | None
    by_family: bool = False


@dataclass(frozen=True)
class Doubt:
    """What a finding says of a figure: its severity, whether it is named as wrong, its ratio of
    printed to implied where the finding gives that, and whether its family tells."""

    severity: str
    wrong: bool
    ratio: float | None
    by_family: bool


def implied_figures(catalog: Catalog, motors: Mapping[int, Document]) -> dict[int, list[Implied]]:
    """By motor's id, its figures in the order of the vocabulary; ``motors`` are documents by id.

    Each figure is left out of the adjustment once; figures that a finding names as wrong stay out
    of the adjustment for all others, so that they alone stand apart. A figure that the motor's
    own others do not imply has the ratio of its finding.
    """
    members: dict[int, list[int]] = {}
    for number, source in catalog.connection.execute("SELECT id, source FROM motor ORDER BY id"):
        members.setdefault(source, []).append(number)
    found: dict[int, list[Implied]] = {}
    for source, numbers in members.items():
        entries = np.array([i for i, number in enumerate(numbers) if number in motors], np.intp)
        if not entries.size:
            continue
        doubts = [_doubts(motors[numbers[i]]) for i in entries]
        of_entries = _of_batch(catalog.batch(source), entries, doubts)
        for entry, figures in zip(entries, of_entries, strict=True):
            found[numbers[entry]] = figures
    return found


def _doubts(motor: Document) -> dict[str, Doubt]:
    """The doubted figures of a motor, by the worst finding of each."""
    doubts: dict[str, Doubt] = {}
    for f in motor["findings"]:
        if f["severity"] == "note":
            continue
        swapped = f["cause"] == "figures-swapped"
        named = f["figures"][:2] if swapped else [f["suspect"]] if f["suspect"] else []
        family = f["relation"].startswith(FAMILY)
        for i, key in enumerate(named or f["figures"][:2]):
            ratio = None if i else f["ratio"]
            doubts.setdefault(key, Doubt(f["severity"], key in named, ratio, family))
    return doubts


def doubted(motor: Document) -> list[str]:
    """The figures that the warnings and errors of a motor doubt."""
    return list(_doubts(motor))


def _problem(batch: Batch) -> Problem:
    """The table's adjustment as reconciling it does: conventions, readings and scatter first."""
    batch, _ = infer(batch, observe(batch))
    problem = observe(batch)
    some = problem.take(sample(len(batch)))
    some.readings = problem.readings = readings(some)
    problem.scale = np.array([scale(some)])
    return problem


def _of_batch(
    batch: Batch, entries: np.ndarray, doubts: Sequence[dict[str, Doubt]]
) -> list[list[Implied]]:
    problem = _problem(batch).take(entries)
    present = problem.present.copy()
    named = np.zeros_like(present)
    for i, mine in enumerate(doubts):
        for key, doubt in mine.items():
            if doubt.wrong and key in INDEX:
                named[i, INDEX[key]] = present[i, INDEX[key]]
    problem.present = present & ~named
    left = leave_out(problem)
    motor, figure = np.nonzero(named)
    if motor.size:
        rest = problem.take(motor)
        value, sd = predicted(rest, fit(rest), figure)
        left.log_ratio[motor, figure] = problem.y[motor, figure] - value
        left.implied_sd[motor, figure] = sd
    spread = own_sd(problem, left)
    result: list[list[Implied]] = []
    for i, entry in enumerate(entries):
        mine, told = [], dict(doubts[i])
        for f, key in enumerate(FIGURES):
            if not present[i, f] or not spread[i, f] < VAGUE:
                continue
            doubt = doubts[i].get(key)
            if doubt is not None and doubt.by_family:
                continue
            severity = None if doubt is None else doubt.severity
            told.pop(key, None)
            bound = key in BOUNDS or (problem.servo[i] and key in SERVO_BOUNDS)
            if bound and severity is None:
                continue
            ratio = float(np.exp(left.log_ratio[i, f]))
            ends = _ends(batch.figures[key], entry, ratio)
            mine.append(Implied(key, ratio, *ends, float(spread[i, f]), severity))
        for key, doubt in told.items():
            column = batch.figures.get(key)
            if doubt.ratio is None or column is None or not np.isfinite(column.value[entry]):
                continue
            ends = _ends(column, entry, doubt.ratio)
            sd = max(quantity(key).scatter, LEAST_SCATTER)
            mine.append(Implied(key, doubt.ratio, *ends, sd, doubt.severity, doubt.by_family))
        result.append(sorted(mine, key=lambda row: ORDER[row.key]))
    return result


def _ends(column: FigureColumn, entry: int, ratio: float) -> tuple[float, float]:
    """The ends of a printed interval over the implied value."""
    low, high = (
        ratio if np.isnan(end) else ratio * float(end / column.value[entry])
        for end in (column.low[entry], column.high[entry])
    )
    return low, high
