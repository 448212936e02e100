"""Conventions that a sheet doesn't state, from what makes all its figures agree.

Every set of conventions that a sheet may mean is tried on a sample of its motors; a robust loss
decides. Signatures Kt/Ke as in MathWorks' documentation of the surface-mount PMSM (flux from Ke
and from Kt) and NEMA's divisor 13.662 of sine back-EMF with sine current; see convention.py.
"""

import itertools
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ..batch import Batch, FigureColumn
from ..convention import Commutation, Convention
from .adjust import misfit
from .causes import CURRENTS
from .model import FIGURES
from .observed import to_model, usable
from .problem import Problem
from .table import sample

SURE = 9.0
"""−2 × log odds beyond which a rival is out."""

CAP = 25.0
"""What one motor may say against a set of conventions."""

MOTORS = 60

AMPERES = ("torque_constant", *sorted(CURRENTS))
EMF = ("back_emf_constant", "speed_constant")
WINDING = ("terminal_resistance", "terminal_inductance")

Changes = dict[str, str | None]


@dataclass(frozen=True, slots=True)
class Option:
    """One meaning of a group of figures, in words, and how common it is (−2 × log prior)."""

    words: str
    changes: tuple[tuple[str, str | None], ...]
    cost: float


def _option(words: str, cost: float, **changes: str | None) -> Option:
    return Option(words, tuple(changes.items()), cost)


_WINDINGS = (
    _option("resistance and inductance line-to-line", 0.0, between="lines", connection=None),
    _option("resistance and inductance of a star's phase", 3.0, between="phase",
            connection="star"),
    _option("resistance and inductance of a delta's winding", 6.0, between="phase",
            connection="delta"),
)  # fmt: skip

OPTIONS: dict[Commutation, tuple[tuple[tuple[str, ...], tuple[Option, ...]], ...]] = {
    Commutation.SINUSOIDAL: (
        (AMPERES, (_option("currents rms", 0.0, current="rms"),
                   _option("currents peak", 3.0, current="peak"),
                   _option("currents dc, through two phases", 5.0, current="dc"))),
        (EMF, (_option("back-EMF line-to-line rms", 0.0, voltage="rms", between="lines"),
               _option("back-EMF line-to-line peak", 2.5, voltage="peak", between="lines"),
               _option("back-EMF of a phase, peak", 4.0, voltage="peak", between="phase"),
               _option("back-EMF of a phase, rms", 4.5, voltage="rms", between="phase"))),
        (WINDING, _WINDINGS),
    ),
    Commutation.BLOCK: (
        (AMPERES, (_option("currents dc", 0.0, current="dc"),
                   _option("currents rms", 4.0, current="rms"))),
        (EMF, (_option("back-EMF dc", 0.0, voltage="dc"),
               _option("back-EMF line-to-line peak of a sine", 3.0, voltage="peak",
                       between="lines"),
               _option("back-EMF line-to-line rms of a sine", 4.0, voltage="rms",
                       between="lines"))),
        (WINDING, _WINDINGS),
    ),
}  # fmt: skip
"""The meanings tried, the default first (common practice, no source)."""


@dataclass(slots=True)
class Inferred:
    """What was found for the motors of one kind: figures concerned, the words of the meaning, of
    its rivals, whether it is the default, the loss of the default beyond the best, and the
    number of motors looked at, all of them, and what is told besides."""

    kind: Commutation
    figures: tuple[str, ...]
    words: tuple[str, ...]
    rivals: tuple[str, ...]
    departs: tuple[str, ...]
    against: float
    motors: int
    entries: np.ndarray
    signature: str


def infer(batch: Batch, problem: Problem) -> tuple[Batch, list[Inferred]]:
    """The batch with the conventions that its figures show, and what was inferred.

    Only conventions with basis "assumed" are touched, and only where the figures tell.
    """
    found: list[Inferred] = []
    for kind in OPTIONS:
        members = np.flatnonzero(batch.commutation == int(kind))
        if members.size:
            batch, inferred = _infer_kind(batch, problem, kind, members)
            found += inferred
    return batch, found


def _assumed(column: FigureColumn, members: np.ndarray) -> bool:
    used = np.unique(column.convention[members])
    return any(column.conventions[i].basis == "assumed" for i in used.tolist())


def _inferred(column: FigureColumn, option: Option, members: np.ndarray) -> FigureColumn:
    """The column with what these motors' figures mean; those of other motors mean what they did."""
    changed = _changed(column, option, "inferred")
    if members.size == column.convention.size:
        return replace(column, conventions=changed)
    index = column.convention.copy()
    index[members] += len(column.conventions)
    return replace(column, conventions=[*column.conventions, *changed], convention=index)


def _changed(column: FigureColumn, option: Option, basis: str) -> list[Convention]:
    return [
        c.with_(**dict(option.changes), basis=basis) if c.basis == "assumed" else c
        for c in column.conventions
    ]


def _infer_kind(
    batch: Batch, problem: Problem, kind: Commutation, members: np.ndarray
) -> tuple[Batch, list[Inferred]]:
    chosen = members[sample(members.size, MOTORS)]
    dimensions: list[tuple[tuple[str, ...], tuple[Option, ...]]] = []
    for keys, options in OPTIONS[kind]:
        given = tuple(
            k for k in keys
            if k in batch.figures and _assumed(batch.figures[k], members)
            and usable(k, batch.figures[k])[chosen].any()
        )  # fmt: skip
        if given:
            dimensions.append((given, options))
    if not dimensions:
        return batch, []
    combos = list(itertools.product(*(range(len(o)) for _, o in dimensions)))
    stacked = problem.take(np.tile(chosen, len(combos)))
    stacked.y += np.concatenate([_shift(batch, chosen, dimensions, combo) for combo in combos])
    loss = misfit(stacked, robust=True)[0].reshape(len(combos), chosen.size)
    cost = np.minimum(loss - loss.min(axis=0), CAP).sum(axis=1)
    prior = np.array([sum(o[c].cost for c, (_, o) in zip(combo, dimensions, strict=True))
                      for combo in combos])  # fmt: skip
    total = cost + prior
    best = int(np.argmin(total))
    if total[0] - total[best] < SURE:
        best = 0
    # rivals fit as well and are as common; those that the figures can't tell apart at all don't
    # count where nothing speaks against the default
    near = [i for i in np.argsort(total).tolist() if i != best and total[i] - total[best] < SURE]
    figures, repeats = dict(batch.figures), dict(batch.repeats)
    touched: list[str] = []
    words: list[str] = []
    departs: list[str] = []
    for d, (keys, options) in enumerate(dimensions):
        own = combos[best][d]
        others = [total[i] for i, combo in enumerate(combos) if combo[d] != own]
        sure = min(others) - total[best] >= SURE
        if not sure and own == 0:
            continue
        words.append(options[own].words)
        touched += keys
        if own:
            departs.append(options[own].words)
        for key in keys:
            figures[key] = _inferred(figures[key], options[own], members)
            if key in repeats:  # the same figure in other units means the same
                repeats[key] = [_inferred(c, options[own], members) for c in repeats[key]]
    if not words:
        return batch, []
    rivals = tuple(_words(dimensions, combos[i], combos[best]) for i in near[:3])
    inferred = Inferred(kind, tuple(touched), tuple(words), rivals, tuple(departs),
                        float(cost[0] - cost[best]), int(chosen.size), members,
                        _signature(batch, chosen))  # fmt: skip
    return replace(batch, figures=figures, repeats=repeats), [inferred]


def _words(
    dimensions: Sequence[tuple[tuple[str, ...], tuple[Option, ...]]],
    combo: tuple[int, ...],
    best: tuple[int, ...],
) -> str:
    return " with ".join(
        options[c].words
        for c, b, (_, options) in zip(combo, best, dimensions, strict=True)
        if c != b
    )


def _shift(
    batch: Batch,
    chosen: np.ndarray,
    dimensions: Sequence[tuple[tuple[str, ...], tuple[Option, ...]]],
    combo: tuple[int, ...],
) -> np.ndarray:
    """Change of the logarithms (n, F) when the figures mean this instead of what is assumed."""
    out = np.zeros((chosen.size, len(FIGURES)))
    for choice, (keys, options) in zip(combo, dimensions, strict=True):
        for key in keys:
            column = batch.figures[key]
            now = to_model(key, column, batch)
            then = to_model(key, column, batch, _changed(column, options[choice], "assumed"))
            out[:, FIGURES.index(key)] = (then - now)[chosen]
    return out


def _signature(batch: Batch, chosen: np.ndarray) -> str:
    """Kt/Ke as printed, in SI, where both are."""
    with np.errstate(invalid="ignore"):
        ratio = (batch.value("torque_constant") / batch.value("back_emf_constant"))[chosen]
    known = ratio[np.isfinite(ratio)]
    return f"Kt/Ke in SI as printed is {np.median(known):.3f}" if known.size else ""
