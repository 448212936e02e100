"""All motors that a search looked at: size against the largest utilisation of each."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ....schema.operation.limits import Verdict
from ..plain import number, percent
from . import style as s

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

Array = NDArray[np.float64]

HIGHEST = 3.0
"""Motors beyond this utilisation stand on the upper edge."""
LABELLED = 6
_NOT_ASKED = -1
_GROUPS = (
    # verdict, what it means, marker, colour, size, face
    (_NOT_ASKED, "refused by --where", "+", "#a9a9a9", 18, "#a9a9a9"),
    (Verdict.REJECTED, "does not", "x", s.MUTED, 22, s.MUTED),
    (Verdict.UNKNOWN, "not known, as far as told", "s", s.MUTED, 22, "none"),
    (Verdict.FEASIBLE, "does it", "o", s.ACCENT, 34, s.ACCENT),
)
_PLACES = tuple(
    (across, up) for up in (0, 12, -12, 24, -24, 36, -36, 50, -50, 64, 78) for across in (1, -1)
)
"""Where a label is tried: right or left of its mark, then farther above and below, in points."""


def draw_candidates(
    size: Array,
    size_label: str,
    utilisation: Array,
    verdict: NDArray[np.int8],
    refused: NDArray[np.bool_],
    names: Sequence[tuple[int, str]],
    allowed: float,
    claim: str,
    below: str,
) -> Figure:
    """One mark a motor of known size and utilisation; `refused` are those that no limit on stored
    figures lets through, `names` the indices and names of the candidates by rank."""
    made, axes = s.figure()
    height = np.minimum(np.nan_to_num(utilisation, posinf=HIGHEST), HIGHEST)
    known = np.isfinite(size) & ~np.isnan(utilisation)
    groups = np.where(refused, _NOT_ASKED, verdict)
    for code, meaning, marker, colour, area, face in _GROUPS:
        group = (groups == code) & known
        if group.any():
            line = marker in "x+"
            axes.scatter(
                size[group], height[group], s=area, marker=marker,
                color=colour if line else None, facecolors=None if line else face,
                edgecolors=None if line else colour, linewidths=1.1,
                label=f"{meaning}: {group.sum()}", zorder=3,
            )  # fmt: skip
    axes.axhspan(0, allowed, facecolor="#f1f1f1", zorder=0)
    axes.axhline(allowed, color=s.INK, linewidth=1.0)
    axes.text(
        0.995, allowed, f"allowed {percent(allowed)}", ha="right", va="bottom",
        fontsize=8, transform=axes.get_yaxis_transform(),
    )  # fmt: skip
    if known.any() and np.max(size[known]) > 3 * np.min(size[known]):
        axes.set_xscale("log")
        axes.xaxis.set_major_formatter(lambda value, _: number(value))
    over = int(((utilisation > HIGHEST) & known).sum())
    axes.set_ylim(
        0, HIGHEST + 0.1 if over else max(1.15, 1.1 * float(height[known].max(initial=1)))
    )
    axes.yaxis.set_major_formatter(lambda value, _: percent(value))
    axes.set_xlabel(size_label)
    axes.set_ylabel("Utilisation, the largest of any limit")
    edge = f"on the upper edge: {over} beyond {percent(HIGHEST)}" if over else ""
    s.title(made, axes, claim, "; ".join(filter(None, (below, edge))))
    if known.any():
        made.legend(loc="outside lower left", ncols=2)
    named = [(i, name) for i, name in names[:LABELLED] if known[i]]
    marks = np.column_stack([size[known], height[known]])
    _label(made, axes, marks, allowed, [(size[i], height[i], name) for i, name in named])
    return made


def _label(
    made: Figure,
    axes: Axes,
    marks: Array,
    line: float,
    names: Sequence[tuple[float, float, str]],
) -> None:
    """Names beside their marks, each at the first place where it covers no mark (n, 2), no other
    name and not the line; a thin line leads to one that stands apart."""
    if not names:
        return
    made.draw_without_rendering()  # places are known once everything else has its own
    point = made.dpi / 72
    level = axes.transData.transform((marks[0, 0], line))[1]
    marks = axes.transData.transform(marks)
    frame = axes.get_window_extent()
    taken: list[tuple[float, float, float, float]] = []
    for left, at, name in names:
        mark = axes.transData.transform((left, at))
        wide, high = (5.2 * len(name) * point, 9.5 * point)
        for across, up in _PLACES:
            middle = mark[1] + up * point
            begin = mark[0] + (6 * point if across > 0 else -6 * point - wide)
            box = (begin, middle - high / 2, begin + wide, middle + high / 2)
            inside = (
                frame.x0 <= box[0] and box[2] <= frame.x1
                and frame.y0 <= box[1] and box[3] <= frame.y1
            )  # fmt: skip
            covers = (
                (marks[:, 0] > box[0] - 3 * point) & (marks[:, 0] < box[2] + 3 * point)
                & (marks[:, 1] > box[1] - 3 * point) & (marks[:, 1] < box[3] + 3 * point)
            ).any() or box[1] < level < box[3]  # fmt: skip
            if inside and not covers and not any(_meet(box, other) for other in taken):
                break
        else:
            continue  # no room: the table of the search has the name
        taken.append(box)
        axes.annotate(
            s.literal(name), (left, at), xytext=(6 * across, up), textcoords="offset points",
            fontsize=8, ha="left" if across > 0 else "right", va="center", zorder=4,
            arrowprops=None if not up else
            {"arrowstyle": "-", "color": s.MUTED, "linewidth": 0.6, "shrinkB": 3, "shrinkA": 0},
        )  # fmt: skip


def _meet(a: tuple[float, float, float, float], b: tuple[float, float, float, float]) -> bool:
    return a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]
