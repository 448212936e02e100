"""A motor's torque–speed plane: what it can do at a supply, and what a cycle asks of it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from ..curves import Plane
from . import style as s

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_LINES = {
    "continuous": {"color": s.ACCENT, "linewidth": 2.2, "linestyle": "-"},
    "peak": {"color": s.INK, "linewidth": 1.6, "linestyle": (0, (7, 2))},
    "voltage cold": {"color": s.MUTED, "linewidth": 1.3, "linestyle": (0, (1, 1.2))},
    "voltage hot": {"color": s.INK, "linewidth": 1.3, "linestyle": (0, (5, 1.5, 1, 1.5))},
}


def draw_plane(
    found: Plane, claim: str, below: str, rated: tuple[float, float] | None = None
) -> Figure:
    """The plane with its limits; `claim` and `below` are the title and what it rests on, `rated`
    the published nominal speed and torque in SI."""
    made, axes = s.figure(7.2, 5.2)
    top, bottom = _span(found, rated)
    factor, unit = s.torque_unit(top)
    rpm = found.speed * s.RPM
    for limit in found.limits:
        label = f"{limit.kind.split()[0]} limit: {limit.note}"
        if limit.kind == "continuous":
            speed, torque = found.lasting()
            axes.fill_between(
                speed * s.RPM, 0, torque * factor, color=s.ACCENT, alpha=0.10, linewidth=0
            )
        axes.plot(rpm, limit.torque * factor, label=label, **_LINES[limit.kind])
        if bottom < 0 and limit.kind in ("continuous", "peak"):
            # the same current brakes harder: friction, which the limit has taken off, helps
            axes.plot(rpm, -(limit.torque + 2 * found.friction) * factor, **_LINES[limit.kind])
    if not np.isnan(found.maximum_speed) and found.maximum_speed <= found.speed[-1]:
        axes.axvline(found.maximum_speed * s.RPM, color=s.INK, linewidth=0.9)
        axes.text(
            found.maximum_speed * s.RPM, top * factor, " permissible speed ", rotation=90,
            ha="right", va="top", fontsize=8,
        )  # fmt: skip
    for number, (speed, torque) in enumerate(found.cycle):
        held = np.allclose(speed, speed[0]) and np.allclose(torque, torque[0])
        axes.plot(
            speed * s.RPM, torque * factor, color=s.ALARM, linewidth=1.4,
            marker="o" if held else ".", markersize=6 if held else 4, markevery=[0, -1],
            label="the cycle at the motor's shaft" if number == 0 else None, zorder=4,
        )  # fmt: skip
    if found.rms is not None and len(found.cycle) > 1:
        axes.plot(
            found.rms[0] * s.RPM, found.rms[1] * factor, marker="D", markersize=7, color=s.INK,
            markerfacecolor="white", linestyle="none", label="its root mean square", zorder=5,
        )  # fmt: skip
    if rated is not None:
        axes.plot(
            rated[0] * s.RPM, rated[1] * factor, marker="s", markersize=6, color=s.ACCENT,
            markerfacecolor="white", linestyle="none", label="nominal point, as published",
            zorder=3,
        )  # fmt: skip
    axes.axhline(0, color=s.INK, linewidth=0.8)
    axes.set_xlim(0, rpm[-1])
    axes.set_ylim(bottom * factor, top * factor)
    axes.set_xlabel("Speed of the motor's shaft in rpm")
    braking = " (negative: braking)" if bottom < 0 else ""
    axes.set_ylabel(f"Torque of the shaft in {unit}{braking}")
    s.title(made, axes, claim, below)
    axes.legend(loc="upper left", bbox_to_anchor=(0, -0.13), ncols=2)
    return made


def _span(found: Plane, rated: tuple[float, float] | None) -> tuple[float, float]:
    """Largest and smallest torque shown: what lasts, peaks and the cycle; a stall torque far
    above them is cut off."""
    asked = [float(line[1].max()) for line in found.cycle]
    least = min((float(line[1].min()) for line in found.cycle), default=0.0)
    by_kind = {limit.kind: float(np.nanmax(limit.torque)) for limit in found.limits}
    wanted = [*asked, by_kind.get("peak", 0.0), rated[1] if rated else 0.0]
    if "continuous" in by_kind:
        wanted.append(3.0 * by_kind["continuous"] if "peak" not in by_kind else 0.0)
    stall = max((v for k, v in by_kind.items() if k.startswith("voltage")), default=np.inf)
    top = min(max(wanted, default=0.0), max(stall, *asked, 0.0) if asked else stall)
    if not top > 0:
        top = stall if np.isfinite(stall) else 1.0
    return 1.3 * top, 1.3 * least if least < -1e-9 * top else 0.0
