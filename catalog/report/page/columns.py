"""The figures that the page's table shows of every motor, each in a unit that reads well."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .cards import rounded

Array = NDArray[np.float64]

_RPM = 60 / (2 * np.pi)
_UNITS: dict[str, tuple[tuple[str, float], ...]] = {
    # unit and what an SI value is multiplied by; the first in which the median is 1 or more
    "N·m": (("N·m", 1.0), ("mN·m", 1e3)),
    "N·m/A": (("N·m/A", 1.0), ("mN·m/A", 1e3)),
    "N·m/√W": (("N·m/√W", 1.0), ("mN·m/√W", 1e3)),
    "Ω": (("Ω", 1.0), ("mΩ", 1e3)),
    "H": (("H", 1.0), ("mH", 1e3), ("µH", 1e6)),
    "kg·m²": (("kg·cm²", 1e4), ("g·cm²", 1e7)),
    "kg": (("kg", 1.0), ("g", 1e3)),
    "m": (("mm", 1e3),),
    "rad/s": (("rpm", _RPM),),
    "A": (("A", 1.0),),
    "V": (("V", 1.0),),
    "W": (("W", 1.0),),
}

#: Columns of the catalog's arrays: name there, what it is called, its SI unit.
FIGURES: tuple[tuple[str, str, str], ...] = (
    ("mass", "Mass", "kg"),
    ("diameter", "Diameter", "m"),
    ("nominal_voltage", "Nominal voltage", "V"),
    ("nominal_torque", "Nominal torque", "N·m"),
    ("nominal_speed", "Nominal speed", "rad/s"),
    ("rated_power", "Rated power", "W"),
    ("peak_torque", "Peak torque", "N·m"),
    ("motor_constant", "Motor constant", "N·m/√W"),
    ("torque_constant", "Torque constant", "N·m/A"),
    ("armature_resistance", "Resistance", "Ω"),
    ("armature_inductance", "Inductance", "H"),
    ("rotor_inertia", "Rotor inertia", "kg·m²"),
)
DETAILS = frozenset({
    "diameter", "rated_power", "peak_torque", "armature_resistance", "armature_inductance",
    "rotor_inertia",
})  # fmt: skip
"""Columns that make room for the card beside the table."""
BESIDE_A_SEARCH = ("mass", "diameter", "motor_constant")
"""The few that stand in the table of a search, beside what it worked out."""


def number_column(
    key: str, label: str, unit: str, values: Array, alike: Array
) -> dict[str, Any] | None:
    """A column of numbers, None where no motor has one. Its unit reads well for those that are
    ``alike``: the columns of one dimension have one prefix."""
    if not np.isfinite(values).any():
        return None
    median = float(np.median(np.abs(alike[np.isfinite(alike)])))
    choices = _UNITS.get(unit, ((unit, 1.0),))
    shown, scale = next((c for c in choices if median * c[1] >= 1), choices[-1])
    return {
        "key": key,
        "label": label,
        "unit": shown,
        "scale": scale,
        "number": True,
        "detail": key in DETAILS,
        "values": [rounded(float(v)) for v in values],
    }


def text_column(key: str, label: str, values: Sequence[str]) -> dict[str, Any]:
    """A column of texts."""
    return {"key": key, "label": label, "number": False, "values": list(values)}
