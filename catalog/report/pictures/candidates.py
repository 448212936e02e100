"""All motors that a search looked at: size against the utilisation that limits each."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ....schema.operation.limits import Verdict
from ..plain import number, percent
from . import style as s

if TYPE_CHECKING:
    from matplotlib.figure import Figure

Array = NDArray[np.float64]

HIGHEST = 3.0
"""Motors beyond this utilisation stand on the upper edge."""
LABELLED = 6
_GROUPS = (
    # verdict, what it means, marker, colour, size, face
    (Verdict.REJECTED, "does not", "x", s.MUTED, 22, s.MUTED),
    (Verdict.UNKNOWN, "not known", "s", s.MUTED, 22, "none"),
    (Verdict.FEASIBLE, "does it", "o", s.ACCENT, 34, s.ACCENT),
)


def draw_candidates(
    size: Array,
    size_label: str,
    utilisation: Array,
    verdict: NDArray[np.int8],
    names: Sequence[tuple[int, str]],
    allowed: float,
    claim: str,
    below: str,
) -> Figure:
    """One mark a motor; `names` are the indices and names of the candidates by rank."""
    made, axes = s.figure()
    height = np.minimum(np.nan_to_num(utilisation, posinf=HIGHEST), HIGHEST)
    known = np.isfinite(size)
    for code, meaning, marker, colour, area, face in _GROUPS:
        group = (verdict == code) & known
        if group.any():
            axes.scatter(
                size[group], height[group], s=area, marker=marker,
                color=colour if marker == "x" else None,
                facecolors=None if marker == "x" else face,
                edgecolors=None if marker == "x" else colour, linewidths=1.1,
                label=f"{meaning}: {group.sum()}", zorder=3,
            )  # fmt: skip
    axes.axhspan(0, allowed, facecolor="#f1f1f1", zorder=0)
    axes.axhline(allowed, color=s.INK, linewidth=1.0)
    axes.text(
        0.995, allowed, f"allowed {percent(allowed)}", ha="right", va="bottom",
        fontsize=8, transform=axes.get_yaxis_transform(),
    )  # fmt: skip
    shown = sorted(((size[i], i, name) for i, name in names[:LABELLED] if known[i]), reverse=True)
    for nth, (x, i, name) in enumerate(shown):
        # a ladder of labels in the free space below the marks
        at = (x, allowed * (0.08 + 0.105 * nth))
        axes.annotate(
            s.literal(name), (x, height[i]), xytext=at, fontsize=8, ha="right", va="center",
            arrowprops={"arrowstyle": "-", "color": s.MUTED, "linewidth": 0.6, "shrinkB": 3,
                        "relpos": (1, 0.5)},
        )  # fmt: skip
    if known.any() and np.nanmax(size) > 3 * np.nanmin(size[known]):
        axes.set_xscale("log")
        axes.xaxis.set_major_formatter(lambda value, _: number(value))
    over = int(((utilisation > HIGHEST) & known).sum())
    axes.set_ylim(
        0, HIGHEST + 0.1 if over else max(1.15, 1.1 * float(height[known].max(initial=1)))
    )
    axes.yaxis.set_major_formatter(lambda value, _: percent(value))
    axes.set_xlabel(size_label)
    axes.set_ylabel("Utilisation of the limiting limit")
    edge = f"on the upper edge: {over} beyond {percent(HIGHEST)}" if over else ""
    s.title(made, axes, claim, "; ".join(filter(None, (below, edge))))
    made.legend(loc="outside lower left", ncols=len(_GROUPS))
    return made
