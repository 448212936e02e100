"""Gears as parts: read from tables like motors, kept in the catalog, judged by their own limits."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, fields
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ...schema.errors import MotorfolioError
from ...schema.figure.read import POINT, read_figure
from ...schema.units.read import read_unit
from ..requirement.fields import Ratios, RequirementError

if TYPE_CHECKING:
    from ..requirement.read import Requirement
    from ..store import Catalog
    from ..tables.grid import Grid

Array = NDArray[np.float64]


class GearError(MotorfolioError):
    """A table that holds no gear this program can read."""


@dataclass(frozen=True, slots=True)
class Gear:
    """One gear in SI; None where its sheet gives no figure. Inertia is that at the motor's shaft,
    torques those at the output, backlash in rad, the largest input speed in rad/s."""

    part_number: str
    maker: str
    series: str | None
    ratio: float
    stages: int | None = None
    efficiency: float | None = None
    inertia: float | None = None
    mass: float | None = None
    continuous_torque: float | None = None
    peak_torque: float | None = None
    maximum_input_speed: float | None = None
    backlash: float | None = None
    diameter: float | None = None
    length: float | None = None
    price: float | None = None
    currency: str | None = None

    @property
    def ratios(self) -> Ratios:
        return Ratios((self.ratio,))


#: Key → SI unit and the words of its heading, one pattern each.
_COLUMNS: dict[str, tuple[str, str]] = {
    "part_number": ("", r"part( no\.?| number)?|type|model|order (no\.?|number)|article|gear"),
    "maker": ("", r"maker|manufacturer|brand"),
    "series": ("", r"series|size|frame"),
    "ratio": ("1", r"(gear |reduction )?ratio|i|reduction"),
    "stages": ("1", r"(number of )?stages?"),
    "efficiency": ("1", r"(max\.? |maximum )?efficiency|η"),
    "inertia": (
        "kg·m²",
        r"(mass |rotational )?(moment of )?inertia( at (the )?(input|motor)( shaft)?)?",
    ),
    "mass": ("kg", r"mass|weight"),
    "continuous_torque": (
        "N·m",
        r"(max\.? |maximum )?(continuous|nominal|rated) (output )?torque( continuous)?",
    ),
    "peak_torque": (
        "N·m",
        r"(max\.? |maximum )?(peak|intermittent(ly permissible)?|acceleration) (output )?torque",
    ),
    "maximum_input_speed": (
        "rad/s",
        r"(max\.?|maximum|largest|permissible)( continuous)? input speed|input speed( max\.?)?",
    ),
    "backlash": ("rad", r"(max\.? |maximum )?backlash"),
    "diameter": ("m", r"(outer )?diameter"),
    "length": ("m", r"length"),
    "price": ("currency", r"price"),
}
_HEADING = re.compile(
    r"^(?P<name>.*?)\s*"
    r"(?:\[(?P<a>.*)\]|\((?P<b>[^()]*)\)|,\s*(?P<c>\S+)|\s+in\s+(?P<d>\S+))?$"
)
#: Figures without which a gear can't be judged at all.
_NEEDED = ("part_number", "ratio")


@dataclass(frozen=True, slots=True)
class Reading:
    """How one heading of a gear table was read: key and unit, or None for one that was not."""

    heading: str
    key: str | None
    unit: str


@dataclass(slots=True)
class GearTable:
    """The gears of a table, how its headings were read, and cells that were not: (row, heading,
    text, reason)."""

    gears: list[Gear]
    reading: list[Reading]
    unread: list[tuple[int, str, str, str]]


def read_gears(grid: Grid, maker: str | None = None) -> GearTable:
    """The gears of a table with one gear a row and units in its headings.

    The heading row is the first that names a part number and a ratio; a line "Maker: …" above it
    names the maker. Raises GearError where there is no such row.
    """
    head = next((n for n, row in enumerate(grid.rows) if _is_heading(row)), None)
    if head is None:
        raise GearError(
            "no table of gears: a row of headings must name a part number and a ratio, such as "
            "Part number, Ratio, Efficiency [%]"
        )
    for row in grid.rows[:head]:
        said = next((cell for cell in row if cell.strip()), "")
        if maker is None and (match := re.match(r"(?:maker|manufacturer)\s*:\s*(.+)", said, re.I)):
            maker = match[1].split(";")[0].strip()
    columns = [_column(cell) for cell in grid.rows[head]]
    unread: list[tuple[int, str, str, str]] = []
    gears = []
    for number, row in zip(grid.row_numbers[head + 1 :], grid.rows[head + 1 :], strict=True):
        values: dict[str, object] = {}
        for (reading, factor, unit), text in zip(columns, row, strict=False):
            if reading.key is None or not text.strip():
                continue
            if factor is None:
                values[reading.key] = text.strip()
                continue
            value = _number(text)
            if value is None:
                unread.append((number, reading.heading, text, "no plain number"))
                continue
            values[reading.key] = value * factor
            if reading.key == "price":
                values["currency"] = unit
        gear = _gear(values, maker or "", number, unread)
        if gear is not None:
            gears.append(gear)
    if not gears:
        raise GearError("the table names its columns but holds no gear with part number and ratio")
    return GearTable(gears, [reading for reading, _, _ in columns], unread)


def _gear(
    values: dict[str, object], maker: str, row: int, unread: list[tuple[int, str, str, str]]
) -> Gear | None:
    if not values:
        return None
    if any(key not in values for key in _NEEDED):
        part = str(values.get("part_number", ""))
        unread.append((row, "", part, "a gear needs a part number and a ratio"))
        return None
    for key in ("ratio", "efficiency", "mass", "continuous_torque", "peak_torque"):
        value = values.get(key)
        above = key == "efficiency" and isinstance(value, float) and value > 1
        if isinstance(value, float) and (value <= 0 or above):
            unread.append((row, key, f"{value:g}", "no possible value"))
            if key == "ratio":
                return None
            del values[key]
    if "stages" in values:
        values["stages"] = int(values["stages"])  # type: ignore[call-overload]
    values.setdefault("maker", maker)
    values.setdefault("series", None)
    return Gear(**values)  # type: ignore[arg-type]


def _is_heading(row: Sequence[str]) -> bool:
    keys = {reading.key for reading, _, _ in map(_column, row)}
    return keys >= set(_NEEDED)


def _column(heading: str) -> tuple[Reading, float | None, str]:
    """How a heading reads, its factor to SI (None for text) and its unit."""
    match = _HEADING.match(heading.strip())
    name = (match["name"] if match else heading).strip().lower()
    unit = next((match[g] for g in "abcd" if match[g]), "") if match else ""
    for key, (si, pattern) in _COLUMNS.items():
        if re.fullmatch(pattern, name) is None:
            continue
        if not si:
            return Reading(heading, key, ""), None, ""
        try:
            read = read_unit(unit, (si,))
        except MotorfolioError:
            break
        return Reading(heading, key, read.si), read.factor, read.si
    return Reading(heading, None, unit), None, ""


def _number(text: str) -> float | None:
    try:
        figure = read_figure(text, POINT)
    except MotorfolioError:
        return None
    plain = figure is not None and not (figure.unit or figure.qualifier or figure.other)
    return figure.value if figure is not None and plain else None


# ---- in the catalog

_FIELDS = tuple(f.name for f in fields(Gear))


def store_gears(catalog: Catalog, gears: Iterable[Gear]) -> int:
    """Keep the gears, those of the same maker and part number replaced; how many."""
    rows = [tuple(getattr(gear, name) for name in _FIELDS) for gear in gears]
    marks = ",".join("?" * len(_FIELDS))
    with catalog.changing() as connection:
        connection.executemany(
            f"INSERT OR REPLACE INTO gears({','.join(_FIELDS)}) VALUES ({marks})", rows
        )
    return len(rows)


def all_gears(catalog: Catalog) -> list[Gear]:
    """The catalog's gears by maker and part number."""
    rows = catalog.connection.execute(
        f"SELECT {','.join(_FIELDS)} FROM gears ORDER BY maker, part_number"
    )
    return [Gear(*row) for row in rows]


def load_gears(catalog: Catalog, requirement: Requirement) -> list[Gear]:
    """The gears whose ratio the requirement allows; RequirementError where there is none."""
    gears = all_gears(catalog)
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
