"""What the other windings of a motor's size say of a figure that only they tell about."""

import numpy as np

from ..batch import Batch, Floats
from ..written import number
from .adjust import fit
from .families import groups
from .problem import Problem
from .suspects import Bools, Suspicion, predicted

UNTOLD = 0.35
"""Standard deviation of a logarithm beyond which a motor's own figures don't tell a value."""

PRINTED_ALIKE = frozenset({"rotor_inertia", "motor_constant", "friction_torque"})
"""Figures that the windings of one size print alike; of others they share a combination."""

ALIKE = 0.05
"""Windings agree that print the figure within so much."""

SHARED = {
    "terminal_inductance": "La/Ra",
    "no_load_current": "the friction torque Km·I0",
    "viscous_damping": "the friction torque Km·I0",
}
"""What a figure that isn't printed alike is known from; the motor constant where not listed."""

MANY = ("no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten")


def told_by_family(suspicions: list[Suspicion], problem: Problem, family: Bools) -> None:
    """Mark the suspicions that a motor's own figures alone could not raise.

    problem (n motors) is without the suspects and without what families share; family (n,) is
    true for the motors that are of one.
    """
    some = [s for s in suspicions if s.partner is None and family[s.motor]]
    if not some:
        return
    motor = np.array([s.motor for s in some])
    own = problem.take(motor)
    _, sd = predicted(own, fit(own), np.array([s.figure for s in some]))
    for s, untold in zip(some, (sd > UNTOLD).tolist(), strict=True):
        s.by_family = untold


class Kin:
    """The families of a batch, asked for what the others of one print."""

    def __init__(self, batch: Batch) -> None:
        self.batch = batch
        self._group = groups(batch)
        self._order = np.argsort(self._group, kind="stable")
        self._start = np.searchsorted(self._group[self._order], np.arange(self._group.max() + 2))

    def others(self, motor: int) -> np.ndarray:
        """The other motors of its family."""
        group = self._group[motor]
        members = self._order[self._start[group] : self._start[group + 1]]
        return members[members != motor]

    def words(self, motor: int, figure: str, implied: float, factor: float, unit: str) -> str:
        """ "six other windings of this size print 7.20 gcm2", or what they share; implied is
        the value in SI by their majority, factor that of the printed unit."""
        column = self.batch.figures[figure]
        others = self.others(motor)
        near = np.abs(np.log(column.value[others] / implied)) < np.log1p(ALIKE)
        others = others[near]
        if figure not in PRINTED_ALIKE or not others.size:
            shared = SHARED.get(figure, "the motor constant Km/√Ra")
            return f"the other windings of this size agree in {shared}"
        many = MANY[others.size] if others.size < len(MANY) else str(others.size)
        values: Floats = column.value[others] / factor
        texts = {(column.text[m] or "").strip() for m in others.tolist()}
        if len(texts) == 1 and (text := texts.pop()):
            said = text
        else:
            least, most = (number(float(v), 3) for v in (values.min(), values.max()))
            said = least if least == most else f"{least} to {most}"
        unit = "" if unit in said else f" {unit}"
        plural = "windings" if others.size > 1 else "winding"
        verb = "print" if others.size > 1 else "prints"
        return f"{many} other {plural} of this size {verb} {said}{unit}"
