"""What speaks for a cause beyond the ratio: printed digits, units, neighbours, temperatures."""

import itertools
import math
import re
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from ..batch import Batch, Floats
from ..vocabulary import quantity
from .adjust import Fit
from .causes import CAUSES, CODE, leaves, log_normal, shape, static_scores
from .model import FIGURES, I0, IN, INDEX, R, U
from .observed import copper, magnet_slope
from .problem import Problem
from .suspects import LeftOut

SLACK = 0.7
"""Allowance on the plausible ranges, in logarithms."""

SHARED = frozenset({
    "rotor_inertia", "motor_constant", "mechanical_time_constant", "electrical_time_constant",
    "friction_torque", "viscous_damping", "nominal_voltage", "maximum_efficiency",
})  # fmt: skip
"""Figures that windings of one size share or nearly share: an equal neighbour tells nothing."""

_NUMBER = re.compile(r"\d+(?:[.,]\d+)?")


def transpositions(text: str) -> list[float]:
    """Logarithms of the printed number over each number with two adjacent digits exchanged."""
    match = _NUMBER.search(text.replace(" ", "").replace("'", ""))
    if match is None:
        return []
    number = match.group()
    places = [i for i, c in enumerate(number) if c.isdigit()]
    out: list[float] = []
    printed = float(number.replace(",", "."))
    for a, b in itertools.pairwise(places):
        if number[a] == number[b]:
            continue
        digits = list(number)
        digits[a], digits[b] = digits[b], digits[a]
        other = float("".join(digits).replace(",", "."))
        out.append(math.log(printed / other))
    return out


@dataclass
class TableEvidence:
    """A batch and its adjustment problem, asked about what was printed and about columns."""

    batch: Batch
    problem: Problem

    @cached_property
    def printed(self) -> Floats:
        """Logarithms of the numbers as printed, in their printed units, shape (N, F)."""
        out = np.full(self.problem.y.shape, np.nan)
        headings = self.batch.headings
        factors = np.array([h.factor for h in headings]) if headings else np.ones(1)
        for i, key in enumerate(FIGURES):
            column = self.batch.figures.get(key)
            if column is not None:
                with np.errstate(invalid="ignore", divide="ignore"):
                    number = column.value / factors[np.minimum(column.heading, factors.size - 1)]
                    out[:, i] = np.where(number > 0, np.log(number), np.nan)
        return out

    @cached_property
    def plausible(self) -> tuple[Floats, Floats]:
        """Logarithms of the plausible range of every figure, of the DC motor: two (F,)."""
        bounds = np.log([quantity(key).plausible for key in FIGURES])
        return bounds[:, 0], bounds[:, 1]

    def implausible(self, part: Problem, left: LeftOut) -> Floats:
        """How many values beyond any motor's each suspect would leave, shape (n, F)."""
        low, high = self.plausible
        with np.errstate(invalid="ignore"):
            printed = part.present & ((part.y < low - SLACK) | (part.y > high + SLACK))
            implied = part.y - left.log_ratio
            beyond = part.present & ((implied < low - SLACK) | (implied > high + SLACK))
        others = printed.sum(axis=1, keepdims=True) - printed
        return (beyond + others).astype(float)

    def unit(self, motor: int, figure: int) -> str:
        """The unit a figure is printed in."""
        column = self.batch.figures.get(FIGURES[figure])
        if column is None or not self.batch.headings:
            return ""
        return self.batch.headings[int(column.heading[motor])].unit

    def place(self, motor: int, figure: int) -> tuple[int, int]:
        """Row and column of a figure in the file."""
        column = self.batch.figures[FIGURES[figure]]
        return int(column.row[motor]), int(column.column[motor])

    def text(self, motor: int, figure: int) -> str:
        """The printed text of a figure."""
        column = self.batch.figures.get(FIGURES[figure])
        return "" if column is None else column.text[motor] or ""

    def column_scores(self, figure: int, motors: np.ndarray, log_ratio: float, sd: float) -> Floats:
        """Log of prior times density of every cause of a factor that a whole column shares, shape
        (causes,)."""
        first = int(motors[0])
        form = shape(FIGURES[figure], int(self.batch.commutation[first]), self.unit(first, figure))
        return static_scores(form, np.array([log_ratio]), np.array([sd]))[0]


@dataclass
class Evidence(TableEvidence):
    """The same with the first fit, asked about single figures."""

    base: Fit

    @cached_property
    def slope(self) -> Floats:
        """Magnet temperature coefficients, 1/K."""
        return magnet_slope(self.batch)

    @cached_property
    def hottest(self) -> Floats:
        """Printed permissible winding temperature, °C; NaN where not given."""
        return self.batch.value("maximum_winding_temperature")

    def scores(
        self, motors: np.ndarray, figures: np.ndarray, log_ratio: Floats, sd: Floats
    ) -> Floats:
        """Log of prior times density of every cause, shape (n, causes)."""
        out = np.full((len(motors), len(CAUSES)), -np.inf)
        groups: dict[tuple[int, int, int], list[int]] = {}
        headings = {f: self.batch.figures[FIGURES[f]].heading for f in np.unique(figures).tolist()}
        for i, (m, f) in enumerate(zip(motors.tolist(), figures.tolist(), strict=True)):
            kind = int(self.batch.commutation[m])
            groups.setdefault((f, kind, int(headings[f][m])), []).append(i)
        for (f, kind, _), members in groups.items():
            which = np.array(members)
            form = shape(FIGURES[f], kind, self.unit(int(motors[which[0]]), f))
            out[which] = static_scores(form, log_ratio[which], sd[which])
        for i, (m, f) in enumerate(zip(motors.tolist(), figures.tolist(), strict=True)):
            self._particular(out[i], m, f, float(log_ratio[i]), float(sd[i]))
        return out

    def _particular(self, row: Floats, m: int, f: int, log_ratio: float, sd: float) -> None:
        """Causes whose factor depends on this motor's own text, neighbours and figures."""
        key = FIGURES[f]

        def offer(cause: str, factor: float, prior: float, extra: float = 0.0) -> None:
            gap, spread = log_ratio - factor, math.hypot(sd, extra)
            if leaves(gap, log_ratio, spread):
                return
            value = math.log(prior) + float(log_normal(gap, spread))
            row[CODE[cause]] = max(row[CODE[cause]], value)

        swaps = transpositions(self.text(m, f))
        for factor in swaps:
            offer("digits-transposed", factor, 0.08 / len(swaps))
        if key not in SHARED:
            self._neighbour(row, m, f)
        x = self.base.x[m]
        if key in ("torque_constant", "nominal_torque"):
            idle = math.exp(min(self._idle(m), -0.02))
            factor = math.log1p(-idle)
            offer("friction-ignored", factor if key == "torque_constant" else -factor, 0.10, 0.01)
        elif key == "stall_torque":
            idle = math.exp(min(x[I0] + x[R] - x[U], -0.02))
            offer("friction-ignored", -math.log1p(-idle), 0.08, 0.005)
        elif key == "rated_power":
            have = self.problem.present[m]
            if have[INDEX["nominal_voltage"]] and have[INDEX["nominal_current"]]:
                implied = self.problem.y[m, f] - log_ratio
                offer("input-vs-output-power", x[U] + x[IN] - implied, 0.25, 0.02)
        if key in ("terminal_resistance", "torque_constant", "back_emf_constant"):
            hot = float(self.hottest[m])
            if math.isfinite(hot):
                reference = float(self.batch.reference_temperature[m])
                if key == "terminal_resistance":
                    factor = math.log(copper(hot, reference))
                else:
                    factor = math.log1p(float(self.slope[m]) * (hot - reference))
                if abs(factor) > 0.02:
                    offer("hot-vs-cold", factor, 0.15, 0.02)

    def _idle(self, m: int) -> float:
        """Logarithm of I0/I_N, as printed where both are: a wrong Kt does not move that."""
        current, idle = INDEX["nominal_current"], INDEX["no_load_current"]
        if self.problem.present[m, current] and self.problem.present[m, idle]:
            return float(self.problem.y[m, idle] - self.problem.y[m, current])
        return float(self.base.x[m, I0] - self.base.x[m, IN])

    def _neighbour(self, row: Floats, m: int, f: int) -> None:
        """The value of the next winding: printed alike, though the motors are not."""
        y, have = self.problem.y[:, f], self.problem.present[:, f]
        series = self.batch.series
        for other in (m - 1, m + 1):
            if 0 <= other < len(y) and have[other] and series[other] == series[m]:
                sd = max(float(self.problem.digits[m, f]) / 3.0, 3e-4)
                value = math.log(0.06) + float(log_normal(float(y[m] - y[other]), sd))
                code = CODE["neighbouring-column"]
                row[code] = max(row[code], value)
