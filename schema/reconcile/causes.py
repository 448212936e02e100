"""Why a figure may be wrong: the usual mistakes, each with its ratio, compared on one scale.

A cause is a factor between the printed and the implied value. Each has a prior weight (how common
the mistake is, for this figure and this printed unit; common practice, no source) and a density
at the ratio found; their product ranks the causes and tells which figure is the likelier suspect.
Factors of units: NIST SP 811 (2008), appendix B.8. Factors of conventions: convention.py.
"""

import math
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats
from ..convention import Commutation

CAUSES = (
    "power-of-ten", "rpm-vs-rad-per-second", "rev-per-second", "ounce-inch-vs-millinewton-metre",
    "pound-inch-vs-newton-metre", "kilogram-force-vs-newton", "peak-vs-rms", "line-vs-phase",
    "sinusoidal-current-convention", "hot-vs-cold", "digits-transposed", "figures-swapped",
    "neighbouring-column", "inertia-convention", "horsepower-vs-watt", "poles-vs-pole-pairs",
    "peak-to-peak", "input-vs-output-power", "gear-output-side", "friction-ignored",
    "continuous-stall", "unexplained",
)  # fmt: skip
"""All causes by name; arrays hold the index."""

CODE = {name: i for i, name in enumerate(CAUSES)}

TORQUES = frozenset({
    "nominal_torque", "stall_torque", "peak_torque", "continuous_stall_torque", "friction_torque",
})  # fmt: skip
PER_TORQUE = frozenset({"torque_constant", "motor_constant", "viscous_damping"})
SPEEDS = frozenset({"no_load_speed", "nominal_speed", "speed_constant", "maximum_speed"})
PER_SPEED = frozenset({"back_emf_constant", "viscous_damping"})
CURRENTS = frozenset({
    "no_load_current", "nominal_current", "stall_current", "continuous_stall_current",
    "peak_current",
})  # fmt: skip
POWERS = frozenset({"rated_power", "maximum_power"})

OUNCE_INCH = 7.06155181422604  # mN·m
POUND_INCH = 0.112984829027617  # N·m
KILOGRAM_FORCE = 9.80665
RPM = 30.0 / math.pi
OUNCE_INCH_SECONDS = 386.088582677165  # standard gravity over an inch
HORSEPOWER, METRIC_HORSEPOWER = 745.69987158227, 735.49875

SINUSOIDAL_RATIOS = (
    math.sqrt(3), math.sqrt(1.5), 1.5 * math.sqrt(2), 3.0, math.sqrt(3) / 2, 1.5, 3 / math.pi,
    3 * math.sqrt(2) / math.pi, 1.1695452, 1.6539867,
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class Shape:
    """The factors of one figure as arrays: cause code, log factor, the power of ten that slipped
    besides, log prior weight; and the broad causes as (code, lower, upper log ratio, log prior)."""

    code: np.ndarray
    log_factor: Floats
    power: np.ndarray
    log_prior: Floats
    broad: tuple[tuple[int, float, float, float], ...]


NEAR_ONE = math.log(1.25)
"""A unit taken for another and a slipped decimal point that nearly make up for one another (9.549
over 10) are no explanation of a ratio near 1: each alone would have been seen."""

FITS, MOST = 3.0, 0.5
"""A cause may be off the ratio by so many standard deviations, and leave over so much of the
departure where that is more than one of them: one that leaves more explains nothing."""

OTHERS = 3
"""So many further causes are named at most."""

UNEXPLAINED_PRIOR = 0.10
UNEXPLAINED_SCALE = 0.7
"""The density of an unexplained ratio: Cauchy in its logarithm."""


def unexplained(log_ratio: Floats) -> Floats:
    """Logarithm of prior weight and density of an unexplained ratio."""
    scale = UNEXPLAINED_SCALE
    density = scale / (np.pi * (log_ratio**2 + scale**2))
    return np.log(UNEXPLAINED_PRIOR * density)


class _Collector:
    def __init__(self) -> None:
        self.rows: list[tuple[int, float, int, float]] = []
        self.broad: list[tuple[int, float, float, float]] = []

    def add(
        self, cause: str, factor: float, prior: float, *, slips: bool = False, power: int = 0
    ) -> None:
        """A factor and its inverse, with a power of ten; with ``slips`` also with others."""
        powers = {power: 1.0}
        if slips:
            powers |= {3: 0.08, -3: 0.08, 1: 0.02, -1: 0.02, 2: 0.02, -2: 0.02}
        for power, share in powers.items():
            log_factor = math.log(factor) + power * math.log(10.0)
            if power and abs(log_factor) < NEAR_ONE:
                continue
            for sign in (1, -1):
                self.rows.append((CODE[cause], sign * log_factor, sign * power, prior * share / 2))

    def between(self, cause: str, low: float, high: float, prior: float) -> None:
        self.broad.append((CODE[cause], math.log(low), math.log(high), math.log(prior)))


def _unit_evidence(unit: str) -> dict[str, float]:
    """How much likelier a printed unit makes each cause."""
    text = unit.lower()
    odds: dict[str, float] = {}
    if "oz" in text:
        odds["ounce-inch-vs-millinewton-metre"] = 3.0
        odds["inertia-convention"] = 3.0
    if "lb" in text:
        odds["pound-inch-vs-newton-metre"] = 4.0
    if "kg" in text or "gf" in text or "kp" in text or text.startswith("g"):
        odds["kilogram-force-vs-newton"] = 3.0
    if "hp" in text or "ps" in text:
        odds["horsepower-vs-watt"] = 4.0
    if "rad" in text:
        odds["rpm-vs-rad-per-second"] = 2.0
    if "rms" in text or "pk" in text or "peak" in text:
        odds["peak-vs-rms"] = 2.0
    return odds


def _may_be_weight(unit: str) -> bool:
    """Whether an inertia in this unit may be one in kgf·m·s²: not if it is in cm² or in inches."""
    text = unit.lower()
    return not any(sign in text for sign in ("cm", "mm", "in", "oz", "lb"))


@cache
def shape(figure: str, commutation: int, unit: str) -> Shape:
    """The causes that apply to a figure of such a motor printed in such a unit."""
    c = _Collector()
    for power, prior in ((1, 0.30), (2, 0.15), (3, 0.30), (4, 0.02), (5, 0.02), (6, 0.04)):
        c.add("power-of-ten", 10.0**power, prior)
    brushless = commutation != Commutation.BRUSHED
    torque = figure in TORQUES or figure in PER_TORQUE or figure == "speed_torque_gradient"
    if figure in SPEEDS or figure in PER_SPEED or figure == "speed_torque_gradient":
        c.add("rpm-vs-rad-per-second", RPM, 0.30, slips=True)
        c.add("rev-per-second", 60.0, 0.06, slips=True)
        c.add("rev-per-second", 2 * math.pi, 0.06, slips=True)
    if torque:
        c.add("ounce-inch-vs-millinewton-metre", OUNCE_INCH, 0.15, slips=True)
        c.add("pound-inch-vs-newton-metre", POUND_INCH, 0.10, slips=True)
    if torque or figure == "mass" or (figure == "rotor_inertia" and _may_be_weight(unit)):
        c.add("kilogram-force-vs-newton", KILOGRAM_FORCE, 0.08, slips=True)
        for power in (4, 5):
            for slip in (power, -power):
                c.add("kilogram-force-vs-newton", KILOGRAM_FORCE, 0.004, power=slip)
    if figure == "rotor_inertia":
        c.add("inertia-convention", OUNCE_INCH_SECONDS, 0.10, slips=True)
        c.add("inertia-convention", 4.0, 0.12, slips=True)
        c.add("inertia-convention", 2.0, 0.02)
        c.add("inertia-convention", KILOGRAM_FORCE * 100.0, 0.02, slips=True)
    if figure in POWERS:
        c.add("horsepower-vs-watt", HORSEPOWER, 0.12, slips=True)
        c.add("horsepower-vs-watt", METRIC_HORSEPOWER, 0.06, slips=True)
        c.between("input-vs-output-power", 1.05, 3.0, 0.10)
    emf = figure in ("back_emf_constant", "speed_constant")
    amperes = figure in CURRENTS or figure == "torque_constant"
    if emf or amperes:
        c.add("peak-vs-rms", math.sqrt(2), 0.25 if brushless else 0.01)
    if brushless and amperes:
        for ratio in SINUSOIDAL_RATIOS:
            c.add("sinusoidal-current-convention", ratio, 0.03)
    if emf:
        c.add("peak-to-peak", 2.0, 0.06 if brushless else 0.01)
        c.add("poles-vs-pole-pairs", 2.0, 0.04 if brushless else 0.004)
        if brushless:
            c.add("line-vs-phase", math.sqrt(3), 0.25)
            for ratio in SINUSOIDAL_RATIOS:
                c.add("sinusoidal-current-convention", ratio, 0.01)
    if figure in CURRENTS:
        c.add("peak-to-peak", 2.0, 0.01)
    if figure == "nominal_voltage":
        c.add("peak-vs-rms", math.sqrt(2), 0.05)
        c.add("line-vs-phase", math.sqrt(3), 0.03)
    if figure in ("no_load_speed", "nominal_speed", "maximum_speed"):
        c.add("poles-vs-pole-pairs", 2.0, 0.08 if brushless else 0.003)
    if figure in ("terminal_resistance", "terminal_inductance") and brushless:
        c.add("line-vs-phase", 2.0, 0.30)
        c.add("line-vs-phase", 1.5, 0.15)
        c.add("line-vs-phase", 3.0, 0.02)
    if figure in ("electrical_time_constant", "mechanical_time_constant") and brushless:
        c.add("line-vs-phase", 2.0, 0.03)
        c.add("line-vs-phase", 1.5, 0.03)
    _temperature(c, figure)
    if figure in TORQUES:
        c.between("gear-output-side", 2.5, 500.0, 0.10)
    if figure == "torque_constant":
        c.between("gear-output-side", 2.5, 500.0, 0.01)
    if figure in ("stall_torque", "stall_current"):
        c.between("continuous-stall", 0.01, 0.75, 0.12)
    odds = _unit_evidence(unit)
    rows = c.rows
    return Shape(
        code=np.array([r[0] for r in rows]),
        log_factor=np.array([r[1] for r in rows]),
        power=np.array([r[2] for r in rows]),
        log_prior=np.log([r[3] * odds.get(CAUSES[r[0]], 1.0) for r in rows]),
        broad=tuple(c.broad),
    )


def _temperature(c: _Collector, figure: str) -> None:
    """Hot for cold where no temperature is printed: copper 1.2 to 1.5, magnets 3 to 20 %."""
    if figure == "terminal_resistance":
        c.between("hot-vs-cold", 1.15, 1.55, 0.15)
        c.between("hot-vs-cold", 1 / 1.55, 1 / 1.15, 0.05)
    elif figure in ("torque_constant", "back_emf_constant", "motor_constant"):
        c.between("hot-vs-cold", 0.78, 0.97, 0.05)
    elif figure == "speed_constant":
        c.between("hot-vs-cold", 1.03, 1.28, 0.05)
    elif figure in ("speed_torque_gradient", "mechanical_time_constant"):
        c.between("hot-vs-cold", 1.15, 2.0, 0.03)
    elif figure in ("stall_current", "stall_torque"):
        c.between("hot-vs-cold", 1 / 1.8, 1 / 1.15, 0.03)


def log_normal(distance: Floats | float, sd: Floats | float) -> Floats:
    """Logarithm of the normal density."""
    return -0.5 * (np.asarray(distance) / sd) ** 2 - np.log(sd) - 0.9189385332


def static_scores(form: Shape, log_ratio: Floats, sd: Floats) -> Floats:
    """Log of prior times density of every cause, shape (n, number of causes); −inf where none.

    log_ratio (n,) of printed to implied; sd (n,) its standard deviation.
    """
    out = np.full((len(log_ratio), len(CAUSES)), -np.inf)
    rows = _row_scores(form, log_ratio, sd)
    for code in np.unique(form.code):
        out[:, code] = rows[:, form.code == code].max(axis=1)
    for code, low, high, log_prior in form.broad:
        beyond = np.maximum(np.maximum(low - log_ratio, log_ratio - high), 0.0)
        value = log_prior - math.log(high - low) - 0.5 * (beyond / sd) ** 2
        out[:, code] = np.maximum(out[:, code], value)
    out[:, CODE["unexplained"]] = np.maximum(out[:, CODE["unexplained"]], unexplained(log_ratio))
    return out


def _row_scores(form: Shape, log_ratio: Floats, sd: Floats) -> Floats:
    """The same for every single factor, shape (n, number of factors)."""
    gap = log_ratio[:, None] - form.log_factor
    rows = form.log_prior + log_normal(gap, sd[:, None])
    return np.where(leaves(gap, log_ratio[:, None], sd[:, None]), -np.inf, rows)


def leaves(gap: Floats | float, log_ratio: Floats | float, sd: Floats | float) -> NDArray[np.bool_]:
    """Whether a factor that is off the ratio by gap explains too little of it: beyond what the
    figures are known to, and most of the departure is left."""
    gap = np.abs(gap)
    return (gap > FITS * np.asarray(sd)) | ((gap > sd) & (gap > MOST * np.abs(log_ratio)))


def slipped_power(form: Shape, cause: str, log_ratio: float, sd: float) -> int:
    """The power of ten that slipped besides a cause, where it is a factor; else 0."""
    rows = _row_scores(form, np.array([log_ratio]), np.array([sd]))[0]
    rows = np.where(form.code == CODE[cause], rows, -np.inf)
    if not rows.size or not np.isfinite(rows.max()):
        return 0
    return int(form.power[rows.argmax()])


def causes_of(scores: Floats, within: float = 4.6) -> tuple[str, ...]:
    """The causes by likelihood, at most ``OTHERS`` beside the first: all that are within a factor
    of 100 of the likeliest. "unexplained" is the first or none."""
    order = np.argsort(-scores).tolist()
    best, unknown = scores[order[0]], CODE["unexplained"]
    near = [c for c in order[1:] if scores[c] > best - within and c != unknown]
    return tuple(CAUSES[c] for c in [order[0], *near[:OTHERS]])
