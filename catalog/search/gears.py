"""Gears in a search: those that a requirement allows, judged by their own limits."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ...schema.gear import Gear
from ..requirement.fields import RequirementError

if TYPE_CHECKING:
    from ..requirement.read import Requirement
    from ..store import Catalog

Array = NDArray[np.float64]


def load_gears(catalog: Catalog, requirement: Requirement) -> list[Gear]:
    """The gears whose ratio the requirement allows; RequirementError where there is none."""
    gears = catalog.gears()
    if not gears:
        raise RequirementError(
            "The catalog has no gears; read a table of them first: motorfolio gears FILE."
        )
    ratios = requirement.ratios
    if ratios.is_range:
        assert ratios.low is not None
        assert ratios.high is not None
        gears = [gear for gear in gears if ratios.low <= gear.ratio <= ratios.high]
    elif ratios.values:
        gears = [g for g in gears if any(abs(g.ratio - r) <= 1e-6 * r for r in ratios.values)]
    if not gears:
        raise RequirementError(
            f"The catalog has no gear with a ratio of {ratios.text}; allow other ratios."
        )
    return gears


def gear_utilisations(gears: Sequence[Gear], requirement: Requirement) -> dict[str, Array]:
    """What the cycle takes of each gear's own limits (G,), NaN where a gear states none.

    `gear_torque`: the rms of the output torque over the continuous one (common practice, no
    source), `gear_peak_torque` its largest magnitude over the peak torque, `gear_speed` the
    largest motor speed over the largest input speed. A gear without a peak torque is held to its
    continuous one.
    """
    # Losses aside, the output sees the load: its torque and what accelerates its inertia.
    cycle = requirement.demand.cycle
    acceleration = (cycle.speed_end - cycle.speed_start) / cycle.duration
    inertia = requirement.demand.gearing.load_inertia
    t0 = cycle.torque_start + inertia * acceleration
    t1 = cycle.torque_end + inertia * acceleration
    rms = np.sqrt(((t0 * t0 + t0 * t1 + t1 * t1) / 3 @ cycle.duration) / cycle.period)
    peak = max(np.abs(t0).max(), np.abs(t1).max())
    speed = max(np.abs(cycle.speed_start).max(), np.abs(cycle.speed_end).max())

    def column(name: str) -> Array:
        return np.array([np.nan if (v := getattr(g, name)) is None else v for g in gears])

    lasting, most = column("continuous_torque"), column("peak_torque")
    return {
        "gear_torque": rms / lasting,
        "gear_peak_torque": peak / np.where(np.isnan(most), lasting, most),
        "gear_speed": speed * column("ratio") / column("maximum_input_speed"),
    }
