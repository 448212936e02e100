"""Which figure is wrong: every figure left out in turn, with a full refit each time.

The published method of gross-error detection in data reconciliation (measurement test and
generalised likelihood ratio: Narasimhan and Jordache, Data Reconciliation and Gross Error
Detection, 2000, chapters 7 and 8, from memory), here with the refits not linearised.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats
from .adjust import Fit, fit, relinearised
from .equations import product
from .model import I0, IN, INDEX, IPK, NN, PEAK_BAND, F, K, R, U, linear_matrix
from .problem import Problem

GAIN = 12.0
"""χ² that leaving a figure out must save before it counts as a contradiction."""

DEPARTURE = 0.05
"""What the ratio must differ from 1, beyond twice the implied value's standard deviation."""

WITHIN, PART, KEEP = 40.0, 0.1, 3
"""A figure is refitted when its linearised χ² is this close to the best, or closer than this part
of what the best saves; the best few always."""

NOMINAL = [INDEX[k] for k in ("nominal_torque", "nominal_speed", "nominal_current")]
"""The nominal point, whose laws bend most: if one is worth a refit, all are."""

CURVED = (INDEX["maximum_efficiency"], INDEX["peak_torque"])
"""Figures whose rows aren't sums of logarithms."""

NEARLY = 0.8
"""The part of ``GAIN`` at which the linearised test hands a motor on to the refits."""

Bools = NDArray[np.bool_]


@dataclass(slots=True)
class Suspicion:
    """One fault of one motor.

    figure is the likeliest one; rivals the others that might be it just as well (none: it is
    named); log_ratio of printed to implied with the implied value's sd; saved is the χ² that
    leaving it out saves; causes the likeliest first; partner the other figure of a swap;
    by_family where only the other windings of the motor's size tell.
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
    odds: float = 0.0
    by_family: bool = False


@dataclass(slots=True)
class LeftOut:
    """Every figure of n motors left out in turn, all arrays (n, F), NaN where absent.

    chi2 of the rest; log_ratio of printed to implied; implied_sd of the implied value's
    logarithm.
    """

    chi2: Floats
    log_ratio: Floats
    implied_sd: Floats


def predicted(problem: Problem, fitted: Fit, figure: NDArray[np.integer]) -> tuple[Floats, Floats]:
    """What a fit implies for one figure a motor: logarithm and its standard deviation."""
    matrix, constant = linear_matrix(problem.readings)
    rows = matrix[figure]
    value = (fitted.x * rows).sum(axis=1) + constant[figure]
    efficiency = figure == INDEX["maximum_efficiency"]
    if efficiency.any():
        x = fitted.x[efficiency]
        root = np.minimum(np.exp((x[:, I0] + x[:, R] - x[:, U]) / 2.0), 0.95)
        slope = -root / (1.0 - root)
        value[efficiency] = 2.0 * np.log1p(-root)
        for unknown, sign in ((I0, 1.0), (R, 1.0), (U, -1.0)):
            rows[efficiency, unknown] = sign * slope
    peak = figure == INDEX["peak_torque"]
    middle = sum(PEAK_BAND) / 2.0
    if peak.any():
        value[peak] = fitted.x[peak, K] + fitted.x[peak, IPK] + middle
        rows[np.ix_(peak, [K, IPK])] = 1.0
    variance = (np.einsum("npq,nq->np", fitted.covariance, rows) * rows).sum(axis=1)
    variance[peak] += (PEAK_BAND[1] - middle) ** 2 / 3.0
    return value, np.sqrt(np.maximum(variance, 0.0))


def leave_out(problem: Problem, which: Bools | None = None, pairs: int = 20_000) -> LeftOut:
    """Refit without each figure in turn (of ``which`` where given, (n, F)); at most about
    ``pairs`` fits are held at a time."""
    n = len(problem)
    out = LeftOut(*(np.full((n, F), np.nan) for _ in range(3)))
    motors, figures = np.nonzero(problem.present if which is None else which & problem.present)
    for start in range(0, len(motors), pairs):
        motor, figure = motors[start : start + pairs], figures[start : start + pairs]
        part = problem.take(motor).without(figure)
        fitted = fit(part)
        value, sd = predicted(part, fitted, figure)
        out.chi2[motor, figure] = fitted.chi2
        out.log_ratio[motor, figure] = problem.y[motor, figure] - value
        out.implied_sd[motor, figure] = sd
    return out


def shortlist(problem: Problem) -> Bools:
    """The figures worth a refit, (n, F): linearised at the robust fit, leaving them out does
    nearly as well as leaving out the best one.

    At the robust fit a gross error hardly moves the slopes, so that the linearised saving is
    close to the true one; the refits then decide.
    """
    robust = fit(problem, robust=True)
    linear = relinearised(problem, robust)
    matrix, constant = linear_matrix(problem.readings)
    rest = np.full(problem.present.shape, np.inf)
    weight = problem.weights()
    gap = problem.y - constant - product(matrix, linear.x.T).T
    spread = ((matrix @ linear.covariance) * matrix).sum(axis=2)
    for figure in CURVED:
        if problem.present[:, figure].any():
            value, sd = predicted(problem, robust, np.full(len(problem), figure))
            gap[:, figure], spread[:, figure] = problem.y[:, figure] - value, sd**2
    free = np.clip(1.0 - weight * spread, 1e-6, 1.0)
    rest = np.where(problem.present, linear.chi2[:, None] - weight * gap**2 / free, np.inf)
    best = np.sort(rest, axis=1)[:, [0, KEEP - 1]]
    within = WITHIN + PART * np.maximum(linear.chi2[:, None] - best[:, :1], 0.0)
    worth = (rest <= best[:, :1] + within) | (rest <= best[:, 1:])
    worth[:, NOMINAL] |= worth[:, NOMINAL].any(axis=1, keepdims=True)
    return worth | _steep(problem, robust)[:, None]


def _steep(problem: Problem, fitted: Fit) -> Bools:
    """Motors whose laws are far from linear where they stand, or at a bound: all figures count."""
    x = fitted.x
    with np.errstate(over="ignore"):
        brake = x[:, R] + x[:, I0] - x[:, U] > np.log(0.2)
        idle = (x[:, I0] - x[:, IN] > np.log(0.4)) & problem.bound[:, 2]
        drop = (x[:, R] + x[:, IN] - x[:, U] > np.log(0.5)) & problem.bound[:, 3]
    beyond = problem.servo & problem.bound[:, 3] & (x[:, NN] > x[:, U] - x[:, K])
    return brake | idle | np.where(problem.servo, beyond, drop)


def doubtful(problem: Problem, fitted: Fit) -> Bools:
    """Motors worth the refits, by the linearised test: a single figure could save almost enough
    and departs almost enough, or the whole fits too badly for a linearised test."""
    out = fitted.chi2 > GAIN
    matrix, constant = linear_matrix(problem.readings)
    who = np.flatnonzero(out)
    for start in range(0, who.size, 2048):
        part = who[start : start + 2048]
        sub = problem.take(part)
        variance = sub.sd() ** 2
        own = Fit(fitted.x[part], fitted.covariance[part], fitted.chi2[part])
        residual = sub.y - constant - product(matrix, own.x.T).T
        spread = ((matrix @ own.covariance) * matrix).sum(axis=2)
        for figure in CURVED:
            if sub.present[:, figure].any():
                value, sd = predicted(sub, own, np.full(part.size, figure))
                residual[:, figure], spread[:, figure] = sub.y[:, figure] - value, sd**2
        peak = INDEX["peak_torque"]
        beyond = np.abs(residual[:, peak]) - (PEAK_BAND[1] - PEAK_BAND[0]) / 2.0
        residual[:, peak] = np.maximum(beyond, 0.0)
        # a figure's own row may hold it entirely: then it can't be told from here
        free = np.clip(1.0 - spread / variance, 1e-9, 1.0)
        saved = np.where(sub.present, residual**2 / (variance * free), 0.0)
        ratio = np.abs(residual) / free
        implied_sd = np.sqrt(spread / free)
        far = np.expm1(np.minimum(ratio, 10.0)) > NEARLY * (DEPARTURE + 2.0 * implied_sd)
        near = saved > NEARLY * GAIN
        freedom = sub.present.sum(axis=1)
        out[part] = (near & far).any(axis=1) | (own.chi2 > 2.0 * freedom)
    return out


def contradicts(chi2: Floats, left: LeftOut) -> Bools:
    """Figures whose leaving-out saves enough and whose ratio departs enough, shape (n, F)."""
    with np.errstate(invalid="ignore", over="ignore"):
        departs = np.abs(np.expm1(np.abs(left.log_ratio))) > DEPARTURE + 2.0 * left.implied_sd
        return (chi2[:, None] - left.chi2 > GAIN) & departs


def own_sd(problem: Problem, left: LeftOut) -> Floats:
    """Standard deviation of the logarithm of the ratio of printed to implied, (n, F)."""
    return np.sqrt(left.implied_sd**2 + problem.sd() ** 2)
