"""Utilisations of a motor's limits against the gear ratio, with the ratios that do."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ..plain import number, percent, words
from . import style as s

if TYPE_CHECKING:
    from matplotlib.figure import Figure

Array = NDArray[np.float64]

_STYLES = (
    ("-", 2.0), ((0, (6, 2)), 1.6), ((0, (1, 1.2)), 1.8), ((0, (6, 2, 1, 2)), 1.6),
    ((0, (3, 1, 1, 1, 1, 1)), 1.6), ((0, (10, 3)), 1.0), ((0, (2, 4)), 1.6), ("-", 0.9),
)  # fmt: skip
_GREYS = (s.INK, s.ACCENT, "#444444", s.ALARM, "#5a5a5a", "#7a7a7a", s.INK, s.MUTED)
_HIGHEST = 2.0


def draw_ratios(
    ratio: Array,
    utilisation: Mapping[str, Array],
    intervals: Sequence[tuple[float, float]],
    chosen: float | None,
    allowed: float,
    claim: str,
    below: str,
    runaway: NDArray[np.bool_],
) -> Figure:
    """Each limit's utilisation (ratio's shape) over the ratio; `intervals` hold the ratios that
    do, `chosen` the one with the least copper loss among them; where `runaway` tells of thermal
    runaway there is nothing to draw, and that is said."""
    made, axes = s.figure()
    for nth, (low, high) in enumerate(intervals):
        axes.axvspan(
            low, high, facecolor="#ececec", edgecolor="#b5b5b5", hatch="///", linewidth=0,
            zorder=0, label="ratios that do" if nth == 0 else None,
        )  # fmt: skip
    for run, (low, high) in enumerate(_runs(ratio, runaway)):
        axes.axvspan(low, high, facecolor="none", edgecolor="#d9b8ac", hatch="xxx", linewidth=0,
                     zorder=0, label="" if run else "thermal runaway")  # fmt: skip
        axes.text(
            np.sqrt(low * high), 0.97, "thermal runaway", fontsize=8, color=s.ALARM, rotation=90,
            ha="center", va="top", transform=axes.get_xaxis_transform(), clip_on=True,
            bbox={"facecolor": "white", "edgecolor": "none", "alpha": 0.8, "pad": 1},
        )  # fmt: skip
    shown = {name: u for name, u in utilisation.items() if np.isfinite(u).any()}
    for nth, (name, u) in enumerate(shown.items()):
        style, width = _STYLES[nth % len(_STYLES)]
        axes.plot(
            ratio, u, label=words(name), linestyle=style, linewidth=width,
            color=_GREYS[nth % len(_GREYS)],
        )  # fmt: skip
    axes.axhline(allowed, color=s.INK, linewidth=1.0)
    axes.text(
        0.995, allowed, f"allowed {percent(allowed)}", ha="right", va="bottom",
        fontsize=8, transform=axes.get_yaxis_transform(),
    )  # fmt: skip
    if chosen is not None:
        axes.axvline(chosen, color=s.ALARM, linewidth=1.4, linestyle=(0, (4, 2)))
        left = chosen > np.sqrt(ratio[0] * ratio[-1])
        axes.text(
            chosen, 0.02, f" {number(chosen, 3)}: least copper loss ", fontsize=8, color=s.ALARM,
            ha="right" if left else "left", transform=axes.get_xaxis_transform(),
            bbox={"facecolor": "white", "edgecolor": "none", "alpha": 0.8, "pad": 1},
        )  # fmt: skip
    tallest = max((float(np.nanmax(u)) for u in shown.values()), default=1.0)
    axes.set_ylim(0, min(max(1.15, 1.1 * tallest), _HIGHEST))
    axes.set_xlim(ratio[0], ratio[-1])
    if ratio[-1] > 3 * ratio[0]:
        axes.set_xscale("log")
        ticks = _ticks(ratio[0], ratio[-1])
        axes.set_xticks(ticks, [number(t) for t in ticks])
        axes.minorticks_off()
    axes.yaxis.set_major_formatter(lambda value, _: percent(value))
    axes.set_xlabel("Gear ratio: motor speed over load speed")
    axes.set_ylabel("Utilisation: required over available")
    s.title(made, axes, claim, below)
    made.legend(loc="outside right upper")
    return made


def _runs(ratio: Array, where: NDArray[np.bool_]) -> list[tuple[float, float]]:
    """The ratios from and to which something holds without a break."""
    edges = np.flatnonzero(np.diff(where, prepend=False, append=False))
    return [(float(ratio[a]), float(ratio[b - 1])) for a, b in edges.reshape(-1, 2)]


def _ticks(low: float, high: float) -> list[float]:
    """1, 2, 5 in each decade, or finer where they are too few."""
    decades = range(int(np.floor(np.log10(low))), int(np.ceil(np.log10(high))) + 1)
    for mantissas in ((1, 2, 5), (1, 1.5, 2, 3, 4, 5, 6, 8)):
        ticks = [m * 10.0**d for d in decades for m in mantissas if low <= m * 10.0**d <= high]
        if len(ticks) >= 4:
            break
    return ticks
