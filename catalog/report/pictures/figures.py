"""Published figures of a motor over what its other figures imply, so that an outlier is seen."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

from ..implied import Implied
from ..plain import departure, number, words
from . import style as s

if TYPE_CHECKING:
    from matplotlib.figure import Figure

FINE = 0.02
"""Below this natural logarithm of the ratio the axis is nearly linear, above it logarithmic: both
a per cent and a factor of a thousand are seen."""

_TICKS = (1.02, 1.05, 1.1, 1.2, 1.5, 2, 5, 10, 100, 1e3, 1e4, 1e6)


def draw_figures(figures: Sequence[Implied], claim: str, below: str) -> Figure:
    """One row a figure: a grey bar for what is customary (95 %), a mark with its printed interval
    for what is printed, and the ratio in numbers."""
    made, axes = s.figure(7.2, 1.5 + 0.26 * len(figures))
    order = list(reversed(figures))
    reach = max([0.06] + [1.2 * max(abs(math.log(f.ratio)), 2 * f.sd) for f in order])
    for row, f in enumerate(order):
        axes.barh(
            row, 2 * _place(2 * f.sd), left=-_place(2 * f.sd), height=0.62, color="#dcdcdc",
            zorder=1,
        )  # fmt: skip
        wrong = f.severity is not None
        ends = [_place(math.log(end)) for end in (f.low, f.high)]
        axes.plot(ends, [row, row], color=s.INK, linewidth=2, zorder=3)
        axes.plot(
            _place(math.log(f.ratio)), row, marker="X" if wrong else "o",
            markersize=9 if wrong else 5,
            color=s.ALARM if wrong else s.INK, zorder=4, linestyle="none",
        )  # fmt: skip
        axes.text(
            1.01, row, departure(f.ratio), transform=axes.get_yaxis_transform(), va="center",
            fontsize=8, fontweight="bold" if wrong else "normal",
        )  # fmt: skip
    axes.axvline(0, color=s.INK, linewidth=0.9, zorder=2)
    axes.set_xlim(-_place(reach), _place(reach))
    near: list[float] = []
    for tick in reversed(_TICKS):
        at = math.log(tick)
        last = _place(math.log(near[-1])) if near else math.inf
        if at <= reach and last - _place(at) > 0.17 * _place(reach):
            near.append(tick)
    near.reverse()
    ticks = [-math.log(t) for t in reversed(near)] + [0.0] + [math.log(t) for t in near]
    axes.set_xticks([_place(t) for t in ticks], [_tick(t) for t in ticks])
    axes.set_yticks(
        range(len(order)),
        [words(f.key) + _label(f) for f in order],
    )
    axes.grid(False, axis="y")
    axes.set_ylim(-0.7, len(order) - 0.3)
    axes.set_xlabel("Printed value over the value that the motor's other figures imply")
    s.title(made, axes, claim, below)
    return made


def _label(f: Implied) -> str:
    if f.severity is None:
        return ""
    return f" ({f.severity}{', by its family' if f.by_family else ''})"


def _place(log_ratio: float) -> float:
    return math.asinh(log_ratio / FINE)


def _tick(log_ratio: float) -> str:
    ratio = math.exp(abs(log_ratio))
    return "equal" if log_ratio == 0 else f"{'×' if log_ratio > 0 else '÷'}{number(ratio)}"
