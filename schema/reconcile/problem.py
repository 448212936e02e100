"""What the adjustment is asked: n motors' figures as logarithms, and how far each is trusted."""

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from ..batch import Floats
from .model import (
    INDEX,
    LAW_BINDS,
    LAW_SCATTER,
    UNPUBLISHED_I0,
    UNPUBLISHED_I0_SERVO,
    UNPUBLISHED_IN,
    UNPUBLISHED_NN_SERVO,
    Readings,
)

LAWS = len(LAW_SCATTER) + 3


@dataclass(slots=True)
class Problem:
    """n motors to adjust.

    y (n, F) logarithms of the figures, brought to the DC motor at the reference temperature (0
    where absent); present (n, F); digits and scatter (n, F) standard deviations of y from the
    printed digits and from custom; servo (n,) true for sinusoidal motors; family (n, 4) what the
    motor's family shares (logarithms), family_sd its standard deviation (inf: no family);
    bound (n, laws) which laws say anything about a motor's published figures (as published:
    leaving a figure out doesn't unbind what implies it); scale (n,) or (1,) how much of the
    customary scatter the table shows.
    """

    y: Floats
    present: NDArray[np.bool_]
    digits: Floats
    scatter: Floats
    servo: NDArray[np.bool_]
    family: Floats
    family_sd: Floats
    readings: Readings
    bound: NDArray[np.bool_]
    scale: Floats = field(default_factory=lambda: np.ones(1))

    def __len__(self) -> int:
        return len(self.y)

    def take(self, which: NDArray[np.integer] | slice) -> "Problem":
        """The same for these motors (repeats allowed)."""
        return Problem(
            self.y[which], self.present[which], self.digits[which], self.scatter[which],
            self.servo[which], self.family[which], self.family_sd[which], self.readings,
            self.bound[which],
            self.scale if len(self.scale) == 1 else self.scale[which],
        )  # fmt: skip

    def without(self, figures: NDArray[np.integer]) -> "Problem":
        """The same with one figure left out a motor: figures (n,) indices."""
        other = self.take(slice(None))
        other.present = self.present.copy()
        other.present[np.arange(len(self)), figures] = False
        return other

    def sd(self) -> Floats:
        """Standard deviation of every figure's row, shape (n, F)."""
        return np.sqrt(self.digits**2 + (self.scale[:, None] * self.scatter) ** 2)

    def weights(self) -> Floats:
        """1/variance of every figure's row, 0 where absent."""
        return np.where(self.present, 1.0 / self.sd() ** 2, 0.0)

    def law_weights(self) -> Floats:
        """1/variance of the laws and of the priors on what isn't published: I0, I_N, n_N."""
        laws = np.empty((len(self), LAWS))
        scatter = np.array(list(LAW_SCATTER.values()))
        laws[:, :-3] = self.bound / (self.scale[:, None] * scatter) ** 2
        missing = ~self.present
        prior = np.where(self.servo, UNPUBLISHED_I0_SERVO[1], UNPUBLISHED_I0[1]) ** -2.0
        laws[:, -3] = missing[:, INDEX["no_load_current"]] * prior
        rated = self.bound[:, 2] | self.bound[:, 3]
        who = missing[:, INDEX["nominal_current"]] & rated & ~self.servo
        laws[:, -2] = who * UNPUBLISHED_IN[1] ** -2.0
        who = missing[:, INDEX["nominal_speed"]] & self.bound[:, 3] & self.servo
        laws[:, -1] = who * UNPUBLISHED_NN_SERVO[1] ** -2.0
        return laws


def bound_laws(present: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Which laws say anything about the published figures, (n, number of laws)."""
    out = np.empty((len(present), len(LAW_SCATTER)), dtype=bool)
    for i, law in enumerate(LAW_SCATTER):
        out[:, i] = present[:, [INDEX[key] for key in LAW_BINDS[law]]].any(axis=1)
    return out
