"""What a maker warrants for good, against what a motor is asked to carry by its heat balance."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ...schema.operation.cycle import Cycle
from ...schema.operation.heating import continuous_current
from ...schema.operation.machines import Machines
from ...schema.written import number

if TYPE_CHECKING:
    from .choice import Judged

BEYOND = 1.05
"""What a motor carries beyond its rating without a word: printed ratings are round to about so much
(common practice, no source)."""


def beyond_rating(
    machine: Machines, judged: Judged, cycle: Cycle, mounted: bool, rated_torque: float
) -> str | None:
    """The remark on one motor whose thermal resistances grant it more than its printed continuous
    rating at the cycle's rms speed does; None where they don't, or no rating is printed.

    ``mounted``: the resistance to the ambient is the requirement's own; rated_torque in N·m, NaN
    where not printed.
    """
    total = machine.thermal_resistance_winding_housing + machine.thermal_resistance_housing_ambient
    balance = mounted or np.isfinite(total[0]) or np.isfinite(machine.thermal_resistance[0])
    if not balance or not judged.utilisation("thermal")[0] <= 1.0:
        return None
    ratio = float(judged.ratio[0])
    w0, w1 = cycle.speed_start, cycle.speed_end
    square = float((w0 * w0 + w0 * w1 + w1 * w1) @ cycle.duration) / (3.0 * cycle.period)
    granted = float(continuous_current(machine, np.array([square * ratio**2]))[0])
    if np.isnan(granted):
        granted = rated_torque / float(machine.torque_constant[0])
    times = float(judged.use.rms_current[0]) / granted
    if not times > BEYOND:
        return None
    rating = f"rated current of {number(granted)} A in the armature"
    if np.isfinite(rated_torque):
        rating = f"rated current (rated torque {number(rated_torque)} N·m)"
    grants = "the sheet's thermal resistances allow it, perhaps on a cooling plate"
    if mounted:
        grants = "the mounting that was given allows it"
    return f"it carries {number(times, 2)} times its {rating}: {grants}; ask the maker"
