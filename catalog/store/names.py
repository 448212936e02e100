"""Names of columns, and whether a file has all of those that this program wants.

Apart from layout.py, so that writing into a catalog loads no more than it needs.
"""

import re
import sqlite3

from ...schema.motor import CANONICAL
from ...schema.vocabulary import quantities
from .database import VERSION, layout_version

IDENTITY = ("part_number", "maker", "series")
"""Text quantities that stand in `motor` itself."""

_SUFFIXES = {
    "Ω": "ohm",
    "N·m": "Nm",
    "N·m/A": "Nm_per_A",
    "V·s/rad": "Vs_per_rad",
    "rad/s": "rad_per_s",
    "rad/(s·V)": "rad_per_s_V",
    "rad/(s·N·m)": "rad_per_s_Nm",
    "N·m/√W": "Nm_per_sqrtW",
    "N·m·s/rad": "Nms_per_rad",
    "kg·m²": "kgm2",
    "K/W": "K_per_W",
    "°C": "degC",
    "1": "",
    "currency": "",
}


def with_unit(key: str, unit: str) -> str:
    """A column name that says the unit: torque_constant_Nm_per_A."""
    suffix = _SUFFIXES.get(unit, re.sub(r"\W+", "_", unit, flags=re.ASCII).strip("_"))
    return f"{key}_{suffix}" if suffix else key


def figure_keys() -> list[str]:
    """Quantities that are numbers, in the vocabulary's order."""
    return [key for key, q in quantities().items() if not q.text]


def text_keys() -> list[str]:
    """Quantities that are text, but for those that stand in `motor`."""
    return [key for key, q in quantities().items() if q.text and key not in IDENTITY]


def wanted_quantities() -> list[tuple[str, str, str]]:
    """(kind, key, unit) of all that has a column: figures, texts, constants."""
    return [
        *(("figure", key, quantities()[key].unit) for key in figure_keys()),
        *(("text", key, "") for key in text_keys()),
        *(("constant", key, unit) for key, unit in CANONICAL.items()),
    ]


def is_up_to_date(connection: sqlite3.Connection) -> bool:
    """Whether the file has this program's layout and a column for every quantity."""
    if layout_version(connection) < VERSION:
        return False
    stored = set(connection.execute("SELECT kind, key, unit FROM quantities"))
    return stored.issuperset(wanted_quantities())
