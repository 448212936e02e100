"""What one table says as a whole: how it reads where two readings are customary, and how much of
the customary scatter it shows."""

from dataclasses import replace

import numpy as np

from ..batch import Floats
from .adjust import misfit
from .model import INDEX, LAW_BINDS, LAW_SCATTER, Readings
from .problem import Problem

SAMPLE = 240
"""Motors of a table that decide what concerns the whole table."""

CAP, CLEARLY = 5.0, 2.0
"""What one motor says at most for a reading, and what another reading must be better by."""

SCALES = np.array([0.2, 0.35, 0.5, 0.7, 0.85, 1.0, 1.2, 1.45])

CAUCHY_MEAN = 0.8741
"""Mean Cauchy loss, cut at 3, of a standard normal deviate (by quadrature): what the robust loss
of clean figures falls short of their sum of squares."""

SCALE_PRIOR = 0.3
"""Standard deviation of the logarithm of the scale before the figures are seen."""


def sample(n: int, size: int = SAMPLE) -> np.ndarray:
    """Indices of motors spread evenly over a table of n."""
    return np.unique(np.linspace(0, n - 1, min(n, size)).astype(np.int64))


def readings(problem: Problem) -> Readings:
    """The reading of stall torque, nominal speed and maximum power that fits the table.

    One reading per table: the one with the smaller robust loss, of which no motor counts for
    much; the customary one unless another fits clearly better.
    """
    plain = problem.take(np.flatnonzero(~problem.servo))
    chosen = problem.readings
    trials: list[tuple[tuple[str, ...], str]] = [
        (("stall_torque",), "stall_torque_net"),
        (("maximum_power",), "maximum_power_electrical"),
        (LAW_BINDS["nominal_speed"], "nominal_speed_hot"),
    ]
    losses: Floats | None = None
    for figures, field in trials:
        given = plain.present[:, [INDEX[key] for key in figures]].any(axis=1)
        who = np.flatnonzero(given)
        if not who.size:
            continue
        if losses is None:
            losses, _ = misfit(plain, robust=True)
        part = plain.take(who)
        part.readings = replace(chosen, **{field: not getattr(chosen, field)})
        other, _ = misfit(part, robust=True)
        if np.clip(losses[who] - other, -CAP, CAP).sum() > CLEARLY:
            chosen, losses[who] = part.readings, other
    return chosen


def scale(problem: Problem) -> float:
    """How much of the customary scatter the motors of a table show (1: all of it).

    The mean of its square under the marginal likelihood of the robust residuals over ``SCALES``,
    with a weak prior at 1: a sheet computed from its constants holds to its printed digits, and
    its many figures that agree say so.
    """
    n = len(problem)
    count = SCALES.size
    stacked = problem.take(np.tile(np.arange(n), count))
    stacked.scale = np.repeat(SCALES, n)
    stacked.present = stacked.present.copy()
    stacked.present[:, INDEX["peak_torque"]] = False  # inside its band it tells nothing
    chi2, log_covariance = misfit(stacked, robust=True)
    variance = np.where(stacked.present, 2.0 * np.log(stacked.sd()), 0.0).sum(axis=1)
    laws = stacked.bound.copy()
    laws[:, list(LAW_SCATTER).index("nominal_speed")] &= ~stacked.servo
    variance += (laws * 2.0 * np.log(stacked.scale)[:, None]).sum(axis=1)
    cost = chi2 / CAUCHY_MEAN + variance - log_covariance
    total = cost.reshape(count, n).sum(axis=1) + (np.log(SCALES) / SCALE_PRIOR) ** 2
    share = np.exp(-0.5 * (total - total.min()))
    return float(np.sqrt((share * SCALES**2).sum() / share.sum()))
