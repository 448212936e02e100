"""One look for all pictures: greys first, line styles and markers that differ without colour."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

from ....schema.errors import MotorfolioError

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

RPM = 60 / (2 * 3.141592653589793)

INK, MUTED, ACCENT, ALARM = "#1b1b1b", "#6f6f6f", "#0b6e8a", "#b3401a"
"""Text and lines, secondary lines, what is chosen, what is wrong: apart in grey, too, and never
the only difference."""

CAUTION = "verify against the maker's current datasheet"

SUFFIXES = (".svg", ".png")


def figure(width: float = 7.2, height: float = 4.6) -> tuple[Figure, Axes]:
    """A new figure of a size in inches, with one pair of axes."""
    try:
        from matplotlib import rcParams
        from matplotlib.figure import Figure
    except ImportError:
        raise MotorfolioError(
            "Pictures need matplotlib; install it with: pip install 'motorfolio[plot]'."
        ) from None
    rcParams.update(
        {
            "font.family": ["DejaVu Sans", "sans-serif"],
            "font.size": 9,
            "axes.titlesize": 10.5,
            "axes.titlelocation": "left",
            "axes.titleweight": "bold",
            "axes.spines.top": False,
            "axes.spines.right": False,
            "axes.edgecolor": MUTED,
            "axes.labelcolor": INK,
            "xtick.color": INK,
            "ytick.color": INK,
            "grid.color": "#d9d9d9",
            "grid.linewidth": 0.6,
            "legend.edgecolor": "white",
            "legend.framealpha": 0.9,
            "legend.fontsize": 8,
            "hatch.linewidth": 0.5,
            # the same drawing gives the same bytes
            "svg.hashsalt": "motorfolio",
        }
    )
    made = Figure(figsize=(width, height), layout="constrained")
    axes = made.add_subplot()
    axes.grid(True)
    axes.set_axisbelow(True)
    return made, axes


def title(made: Figure, axes: Axes, claim: str, below: str = "") -> None:
    """What the picture claims, in smaller type what it rests on, and the caution at the foot."""
    made.supxlabel(f"A screening aid: {CAUTION}", fontsize=7, color=MUTED, x=0.99, ha="right")
    axes.set_title(literal(claim) + ("\n" if below else ""), wrap=True)
    if below:
        axes.text(
            0, 1.015, literal(below), transform=axes.transAxes, fontsize=8, color=MUTED,
            va="bottom",
        )  # fmt: skip


def literal(text: str) -> str:
    """Text of a sheet as it stands: no formula, no control character."""
    from ..plain import plain

    return plain(text).replace("$", r"\$")


def torque_unit(largest: float) -> tuple[float, str]:
    """A factor and a unit in which a torque reads well."""
    return (1e3, "mN·m") if largest < 1.0 else (1.0, "N·m")


def save(made: Figure, path: Path) -> None:
    """Write the picture; the suffix says whether as SVG or PNG. Raises MotorfolioError."""
    suffix = path.suffix.lower()
    if suffix not in SUFFIXES:
        raise MotorfolioError(
            f"{path}: pictures are written as SVG or PNG; let the name end in .svg or .png."
        )
    metadata: dict[str, Any] = {"Date": None, "Creator": "motorfolio"}
    if suffix == ".png":
        metadata = {"Software": "motorfolio"}
    made.savefig(path, dpi=160, metadata=metadata)
