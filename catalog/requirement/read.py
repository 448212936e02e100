"""A requirement: from a document of texts (options or a TOML file) to what motors are judged by."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from ...schema.operation.axis import GRAVITY, Axis
from ...schema.operation.cycle import Cycle, CycleError
from ...schema.operation.demand import Demand, Drive, Gearing, Supply, Surroundings
from ...schema.operation.moves import MoveError, move, one_after_the_other, rest
from . import cycle_table
from .fields import (
    LISTS,
    SECTIONS,
    Ratios,
    Reader,
    RequirementError,
    quoted,
    unknown,
)
from .where import Where, read_where

Document = dict[str, Any]

#: The permissible temperature rise falls by 1 % for each 100 m above 1000 m, up to 4000 m: IEC
#: 60034-1, temperature-rise limits corrected for altitude (from memory).
_ALTITUDE_FREE = 1000.0
_ALTITUDE_SHARE = 0.01 / 100.0

_LINEAR = {
    "belt": ("pulley_radius", "pulley_inertia"),
    "pinion": ("pinion_radius", "pinion_inertia"),
    "drum": ("drum_radius", "drum_inertia"),
    "screw": ("lead", "screw_inertia"),
}
_LINEAR_ONLY = (
    "moving_mass", "counterweight", "friction_force", "friction_coefficient", "force", "slope",
    "efficiency",
)  # fmt: skip
_ROTARY_ONLY = ("inertia", "friction_torque", "torque")


@dataclass(frozen=True)
class Requirement:
    """What a machine asks, in SI.

    `demand` is what physics judges; `cycle` in it is that of the load's shaft and `axis` how the
    load hangs on it. `load_inertia` is all that moves, at the load's shaft (kg·m²). `rest_effort`
    is the torque that one more dwell would hold, None where the cycle has no standstill.
    """

    demand: Demand
    axis: Axis
    ratios: Ratios
    load_inertia: float
    use_gears: bool = False
    nominal_voltage: float | None = None
    lowest_voltage: float | None = None
    current_limit: float | None = None
    power_limit: float | None = None
    altitude: float = 0.0
    largest_inertia_ratio: float | None = None
    reserve: float = 0.0
    tolerance: float | str = 0.0
    where: tuple[Where, ...] = ()
    order_by: str = "size"
    limit: int = 20
    title: str = ""
    rest_effort: float | None = None
    document: Document = field(default_factory=dict)

    @property
    def allowed(self) -> float:
        """The largest utilisation that is allowed."""
        return 1 - self.reserve

    def with_supply(self, voltage: float) -> Requirement:
        """The same on another supply: the lowest voltage moved, the nominal one with it."""
        assert self.lowest_voltage is not None
        assert self.nominal_voltage is not None
        nominal = self.nominal_voltage * voltage / self.lowest_voltage
        supply = self.demand.supply
        drop = supply.bridge_drop - supply.max_duty * (self.nominal_voltage - self.lowest_voltage)
        new = _supply(nominal, voltage, supply.max_duty, drop, supply.pwm_frequency)
        return replace(
            self,
            demand=replace(self.demand, supply=new),
            nominal_voltage=nominal,
            lowest_voltage=voltage,
        )

    def with_demand(self, **parts: Any) -> Requirement:
        """The same with other parts of the demand."""
        return replace(self, demand=replace(self.demand, **parts))

    def with_more_rest(self, seconds: float) -> Requirement:
        """The same with a longer standstill at the end of the cycle."""
        assert self.rest_effort is not None
        cycle = self.demand.cycle
        longer = one_after_the_other([cycle, rest(seconds, self.rest_effort)])
        return self.with_demand(cycle=longer)


def read_requirement(
    document: Mapping[str, Any],
    origin: Mapping[tuple[str, str], str] | None = None,
    folder: Path = Path(),
) -> Requirement:
    """The requirement of a document, see `requirement_fields.SECTIONS`.

    `origin` names the option that a (section, key) came from; a cycle's file is looked for in
    `folder`. Raises RequirementError.
    """
    reader = Reader(origin or {})
    for key in document:
        if key not in {*SECTIONS, *LISTS, "cycle", "title"}:
            raise RequirementError(
                unknown("file", key, {**SECTIONS, **LISTS, "cycle": 0, "title": 0})
            )
    values = {section: reader.section(document, section) for section in SECTIONS}
    axis = _axis(values["load"], reader)
    try:
        on_axis, rests = _cycle(document, axis, reader, folder)
        cycle = axis.at_shaft(on_axis)
    except CycleError as error:
        raise RequirementError(str(error)) from error
    supply_in, drive_in, gear, ambient, wanted = (
        values[name] for name in ("supply", "drive", "gear", "ambient", "wanted")
    )
    nominal, lowest, supply = _read_supply(supply_in, drive_in.get("pwm_frequency"), reader)
    ratios = gear.get("ratio", Ratios((1.0,)))
    use_gears = "use" in gear
    if use_gears and (clash := [key for key in ("efficiency", "inertia") if key in gear]):
        raise RequirementError(
            f"{reader.name('gear', 'use')}: real gears bring their own {clash[0]}; leave out "
            f"{reader.name('gear', clash[0])}."
        )
    gearing = Gearing(axis.separate_inertia, gear.get("efficiency", 1.0), gear.get("inertia", 0.0))
    altitude = ambient.get("altitude", 0.0)
    surroundings = Surroundings(
        ambient.get("temperature", 25.0),
        values["mounting"].get("thermal_resistance"),
        1 - max(altitude - _ALTITUDE_FREE, 0.0) * _ALTITUDE_SHARE,
    )
    return Requirement(
        demand=Demand(cycle, gearing, supply, _drive(drive_in, reader), surroundings),
        axis=axis,
        ratios=Ratios() if use_gears and "ratio" not in gear else ratios,
        load_inertia=axis.reflected_inertia,
        use_gears=use_gears,
        nominal_voltage=nominal,
        lowest_voltage=lowest,
        current_limit=supply_in.get("current_limit"),
        power_limit=supply_in.get("power_limit"),
        altitude=altitude,
        largest_inertia_ratio=wanted.get("largest_inertia_ratio"),
        reserve=wanted.get("reserve", 0.0),
        tolerance=wanted.get("worst_case", 0.0),
        where=tuple(read_where(text) for text in wanted.get("where", ())),
        order_by=wanted.get("order_by", "size"),
        limit=wanted.get("limit", 20),
        title=_title(document.get("title", "")),
        rest_effort=axis.holding * axis.lever if rests else None,
        document=_plain(document),
    )


def _title(given: Any) -> str:
    if not isinstance(given, str):
        raise RequirementError(f"title: {quoted(given)} is no text; write it in quotes.")
    return given


def _plain(document: Mapping[str, Any]) -> Document:
    """A copy without empty tables."""
    return {key: value for key, value in document.items() if value not in ({}, [], "")}


def _axis(load: Mapping[str, Any], reader: Reader) -> Axis:
    kind = load.get("kind", "rotary")

    def refuse(keys: Sequence[str], what: str) -> None:
        for key in keys:
            if key in load:
                raise RequirementError(
                    f"{reader.name('load', key)} belongs to {what}; the load's kind is {kind}."
                )

    if kind == "rotary":
        refuse(
            (*_LINEAR_ONLY, *(key for keys in _LINEAR.values() for key in keys)), "a linear axis"
        )
        return Axis(
            inertia=load.get("inertia", 0.0),
            friction=load.get("friction_torque", 0.0),
            steady=load.get("torque", 0.0),
        )
    refuse(_ROTARY_ONLY, "a rotary load")
    for other, keys in _LINEAR.items():
        if other != kind:
            refuse(keys, f"a {other}")
    travel, inertia = _LINEAR[kind]
    if travel not in load:
        raise RequirementError(f"[load] of kind {kind} needs {travel}; give it with a unit.")
    mass, slope = load.get("moving_mass", 0.0), load.get("slope", 0.0)
    # a guide carries the weight's share across the slope (dry friction, F = µ·N)
    pressed = abs(math.cos(slope)) * GRAVITY * mass
    return Axis(
        travel=load[travel] / (2 * math.pi) if kind == "screw" else load[travel],
        inertia=load.get(inertia, 0.0),
        friction=load.get("friction_force", 0.0) + load.get("friction_coefficient", 0.0) * pressed,
        steady=load.get("force", 0.0),
        mass=mass,
        counterweight=load.get("counterweight", 0.0),
        slope=slope,
        efficiency=load.get("efficiency", 1.0),
    )


def _cycle(
    document: Mapping[str, Any], axis: Axis, reader: Reader, folder: Path
) -> tuple[Cycle, bool]:
    """The axis's own cycle, and whether it may stand still for longer at its end."""
    given = [name for name in ("point", "move", "cycle") if document.get(name)]
    if len(given) > 1:
        names = [
            {
                "point": reader.name("point", "torque"),
                "move": "[[move]]",
                "cycle": reader.name("", "cycle"),
            }[name]
            .replace("point.torque", "[[point]]")
            .removeprefix(".")
            for name in given
        ]
        raise RequirementError(
            f"{' and '.join(names)} say what the load does, each in its way; leave one of them."
        )
    if not given:
        raise RequirementError(
            "The requirement does not say what the load does; give --torque and --speed, --cycle "
            "FILE.csv, or a --requirement file with points or moves."
        )
    linear = axis.travel is not None
    if given == ["cycle"]:
        cycle = document["cycle"]
        rows = (
            cycle_table.from_file(folder / cycle, linear)
            if isinstance(cycle, str)
            else cycle_table.from_rows(cycle, linear)
        )
        made = cycle_table.as_cycle(rows)
        return made, made.speed_start[0] == 0
    items = document[given[0]]
    if not isinstance(items, list):
        raise RequirementError(f"{given[0]} must be written as [[{given[0]}]].")
    tables = [reader.table(item, given[0], _of_kind(given[0], linear)) for item in items]
    if given == ["point"]:
        # one point without a duration lasts for ever: there is no cycle to rest in
        return _points(tables, linear, reader), "duration" in tables[0]
    return _moves(tables, linear), True


def _of_kind(name: str, linear: bool) -> dict[str, Any]:
    """The fields of points or moves of a rotary load or a linear axis."""
    fields = dict(LISTS[name])
    for key in ("torque", "angle") if linear else ("force", "distance"):
        fields.pop(key, None)
    for key, f in fields.items():
        if len(f.accepts) == 2 and f.kind == "quantity":
            fields[key] = replace(f, accepts=(f.accepts[1 if linear else 0],))
    return fields


def _points(tables: Sequence[Mapping[str, float]], linear: bool, reader: Reader) -> Cycle:
    effort = "force" if linear else "torque"
    points = []
    for number, table in enumerate(tables, start=1):
        for key in (effort, "speed"):
            if key not in table:
                raise RequirementError(
                    f"Point {number} has no {key}; give {reader.name('point', key)} with a unit."
                )
        if "duration" not in table and len(tables) > 1:
            raise RequirementError(
                f"Point {number} has no duration; of several points each needs one, so give "
                f"{reader.name('point', 'duration')}."
            )
        points.append((table[effort], table["speed"], table.get("duration", 1.0)))
    return Cycle.from_points(points)


def _moves(tables: Sequence[Mapping[str, Any]], linear: bool) -> Cycle:
    way, effort = ("distance", "force") if linear else ("angle", "torque")
    parts: list[Cycle] = []
    for number, table in enumerate(tables, start=1):
        dwell = [rest(table["dwell"])] if "dwell" in table else []
        if way not in table:
            if not dwell or len(table) > 1:
                raise RequirementError(f"Move {number} has no {way}; give it, or a dwell alone.")
            parts += dwell
            continue
        if table[way] == 0:
            raise RequirementError(f"Move {number} goes nowhere; give a {way}, or a dwell alone.")
        told = {key: table.get(key) for key in ("time", "top_speed", "acceleration")}
        try:
            there, back = (
                move(
                    sign * table[way],
                    profile=table.get("profile", "thirds"),
                    effort=table.get(effort, 0.0),
                    unit="m" if linear else "rad",
                    **told,
                )
                for sign in (1, -1)
            )
        except MoveError as error:
            raise RequirementError(f"Move {number}: {error}.") from error
        parts += [there, *dwell]
        if table.get("there_and_back"):
            parts += [back, *dwell]
    return one_after_the_other(parts)


def _read_supply(
    supply: Mapping[str, float], pwm: float | None, reader: Reader
) -> tuple[float | None, float | None, Supply]:
    nominal, lowest = supply.get("voltage"), supply.get("lowest_voltage")
    nominal, lowest = nominal or lowest, lowest or nominal
    if nominal is None or lowest is None:
        for key in ("current_limit", "power_limit", "bridge_drop", "max_duty"):
            if key in supply:
                raise RequirementError(
                    f"{reader.name('supply', key)} needs the voltage of the supply; give "
                    f"{reader.name('supply', 'voltage')}."
                )
        if pwm is not None:
            raise RequirementError(
                f"{reader.name('drive', 'pwm_frequency')} needs the voltage of the supply; give "
                f"{reader.name('supply', 'voltage')}."
            )
        return None, None, Supply()
    if lowest > nominal:
        raise RequirementError(
            f"{reader.name('supply', 'lowest_voltage')} ({lowest:g} V) is above "
            f"{reader.name('supply', 'voltage')} ({nominal:g} V); exchange them."
        )
    duty, drop = supply.get("max_duty", 1.0), supply.get("bridge_drop", 0.0)
    if duty * lowest <= drop:
        raise RequirementError(
            f"{reader.name('supply', 'bridge_drop')} ({drop:g} V) leaves nothing of the "
            f"supply's {lowest:g} V; give a higher voltage."
        )
    return nominal, lowest, _supply(nominal, lowest, duty, drop, pwm)


def _supply(nominal: float, lowest: float, duty: float, drop: float, pwm: float | None) -> Supply:
    """The bus that switches at its nominal voltage and drives at its lowest: ripple is that of
    the first, d·U_nom − (drop + d·(U_nom − U_low)) is what the second leaves."""
    return Supply(nominal, duty, drop + duty * (nominal - lowest), pwm)


def _drive(drive: Mapping[str, Any], reader: Reader) -> Drive:
    said = drive.get("current_convention")
    conventions: dict[str, str] = {}
    amperes: dict[str, float] = {}
    for key in ("peak_current", "continuous_current"):
        if key in drive:
            amperes[key], own = drive[key]
            if own and said and own != said:
                raise RequirementError(
                    f"{reader.name('drive', key)} says {own} and "
                    f"{reader.name('drive', 'current_convention')} {said}; leave one of them."
                )
            conventions[key] = own or said or "dc"
    peak, lasting = amperes.get("peak_current"), amperes.get("continuous_current")
    same = len(set(conventions.values())) < 2
    if peak is not None and lasting is not None and same and lasting > peak:
        raise RequirementError(
            f"{reader.name('drive', 'continuous_current')} is above "
            f"{reader.name('drive', 'peak_current')}; exchange them."
        )
    return Drive(
        peak,
        lasting,
        conventions.get("peak_current", said or "dc"),
        conventions.get("continuous_current"),
    )
