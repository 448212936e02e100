"""The options of a requirement: one table of them, and what they say as a requirement.

The command line makes its options from `OPTIONS`. A new key is one row in `fields.SECTIONS` and,
if it gets an option, one row here. Nothing heavy is loaded, for the sake of help.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .read import Document, Requirement


@dataclass(frozen=True, slots=True)
class Option:
    """One option: what it sets of a requirement file (section and key, "" for a key at the top),
    the sign of its value and its help. `kind` is one (a text), many (texts), flag (sets the
    text `given`), or maybe (a text, `given` if the option stands bare)."""

    name: str
    section: str
    key: str
    sign: str
    help: str
    kind: str = "one"
    given: str = ""

    @property
    def flag(self) -> str:
        """As it is typed: --load-inertia."""
        return f"--{self.name.replace('_', '-')}"


_POINT, _LOAD, _GEAR, _SUPPLY, _DRIVE = "point", "load", "gear", "supply", "drive"
OPTIONS: tuple[Option, ...] = (
    Option("torque", _POINT, "torque", "Q", "Load torque of a point (repeatable).", "many"),
    Option("speed", _POINT, "speed", "Q", "Load speed of a point (repeatable).", "many"),
    Option("duration", _POINT, "duration", "Q", "Duration of a point (repeatable).", "many"),
    Option("cycle", "", "cycle", "FILE", "CSV with time, speed and torque, units in heading."),
    Option("requirement", "", "", "FILE", "All of it in a TOML file; options add to it."),
    Option("load_inertia", _LOAD, "inertia", "Q", "Inertia of the load at its shaft."),
    Option("friction_torque", _LOAD, "friction_torque", "Q",
           "Torque that opposes the load's motion."),
    Option("ratio", _GEAR, "ratio", "N|N..N|N,N", "Motor speed over load speed.  [default: 1]"),
    Option("gear_efficiency", _GEAR, "efficiency", "N", "Efficiency of the gear.  [default: 1]"),
    Option("gear_inertia", _GEAR, "inertia", "Q", "Inertia of the gear at the motor's shaft."),
    Option("gears", _GEAR, "use", "", "Real gears out of the catalog.", "flag", "catalog"),
    Option("supply", _SUPPLY, "voltage", "Q", "Voltage of the dc bus."),
    Option("lowest_supply", _SUPPLY, "lowest_voltage", "Q", "Voltage that the bus sags to."),
    Option("supply_current", _SUPPLY, "current_limit", "Q", "Current that the supply gives."),
    Option("supply_power", _SUPPLY, "power_limit", "Q", "Power that the supply gives."),
    Option("max_duty", _SUPPLY, "max_duty", "N", "Largest duty cycle of the bridge.  [default: 1]"),
    Option("bridge_drop", _SUPPLY, "bridge_drop", "Q",
           "Voltage lost in the bridge.  [default: 0 V]"),
    Option("current", _DRIVE, "peak_current", "Q", "Peak current of the drive."),
    Option("continuous_current", _DRIVE, "continuous_current", "Q",
           "Continuous current of the drive."),
    Option("current_convention", _DRIVE, "current_convention", "dc|peak|rms",
           "Of the drive's currents: armature, or peak or rms of a phase.  [default: dc]"),
    Option("pwm_frequency", _DRIVE, "pwm_frequency", "Q", "Counts the current ripple's heat."),
    Option("ambient", "ambient", "temperature", "Q", "Ambient temperature.  [default: 25 °C]"),
    Option("altitude", "ambient", "altitude", "Q", "Above the sea: thin air cools less."),
    Option("mounting", "mounting", "thermal_resistance", "Q",
           "Thermal resistance housing to ambient as mounted."),
    Option("inertia_ratio", "wanted", "largest_inertia_ratio", "N",
           "Largest load to rotor inertia."),
    Option("reserve", "wanted", "reserve", "N", "Left over of every limit.  [default: 0]"),
    Option("worst_case", "wanted", "worst_case", "[N|printed]",
           "Worst corner of a tolerance of Km and Ra.  [10 % if not said]", "maybe", "10 %"),
    Option("where", "wanted", "where", "LIMIT", 'On any figure: "mass < 500 g".', "many"),
    Option("order_by", "wanted", "order_by", "KEY",
           "size, copper-loss, mass, price, diameter, winding-temperature or utilisation.  "
           "[default: size]"),
    Option("limit", "wanted", "limit", "N", "Candidates shown.  [default: 20]"),
)  # fmt: skip

_LOADS = ("torque", "speed", "cycle", "requirement")


def says_the_load(options: Mapping[str, Any]) -> bool:
    """Whether the options say what the load does."""
    return any(options[name] for name in _LOADS)


def requirement_of(options: Mapping[str, Any], *, load: bool = True) -> Requirement:
    """The requirement that options (by name; None or empty where not given) and the file that
    they name say together; without ``load`` that of a shaft of which nothing is asked. Raises
    RequirementError."""
    from .file import merged, read_file
    from .read import read_requirement

    if not load:
        options = {**options, "torque": ("0 N·m",), "speed": ("0 rad/s",)}
    given = document_of(options)
    named = {(option.section, option.key): option.flag for option in OPTIONS if option.key}
    path = options["requirement"]
    if path is None:
        return read_requirement(given, named)
    # what no option gave stands in the file, under the file's name for it
    origin = {
        (section, key): flag
        for (section, key), flag in named.items()
        if key in (given.get(section) or {})
        or (section == _POINT and given.get(section))
        or (not section and key in given)
    }
    return read_requirement(merged(read_file(path), given, path.parent), origin, path.parent)


def document_of(options: Mapping[str, Any]) -> Document:
    """The options as the document of a requirement file."""
    document: dict[str, Any] = {}
    if points := _points(options):
        document[_POINT] = points
    for option in OPTIONS:
        value = options[option.name]
        if option.section == _POINT or not option.key or (not value and value != ""):
            continue
        if option.kind == "flag":
            value = option.given
        elif option.kind == "many":
            value = list(value)
        elif option.name == "cycle":
            value = str(Path(value).absolute())
        elif option.name == "limit":
            value = _whole(value)
        if option.section:
            document.setdefault(option.section, {})[option.key] = value
        else:
            document[option.key] = value
    return document


def _whole(text: str) -> int | str:
    """A count as a number, as a file has it; another text is refused with the option's name."""
    try:
        return int(text)
    except ValueError:
        return text


def _points(options: Mapping[str, Any]) -> list[dict[str, str]]:
    from .fields import RequirementError

    torques, speeds, durations = (options[key] for key in ("torque", "speed", "duration"))
    if len(torques) != len(speeds):
        if not torques or not speeds:
            there, lacks = ("--torque", "--speed") if torques else ("--speed", "--torque")
            said = f"A point needs torque and speed: {there} is given, {lacks} is not"
        else:
            said = (
                f"A point needs torque and speed: --torque is given {_times(len(torques))}, "
                f"--speed {_times(len(speeds))}"
            )
        raise RequirementError(f"{said}; give both for each point.")
    if durations and len(durations) != len(torques):
        points = f"{len(torques)} point{'s' * (len(torques) != 1)}"
        raise RequirementError(
            f"--duration is given {_times(len(durations))} for {points}; give one for each point."
        )
    points = [{"torque": t, "speed": n} for t, n in zip(torques, speeds, strict=True)]
    for point, duration in zip(points, durations, strict=False):
        point["duration"] = duration
    return points


def _times(count: int) -> str:
    return {1: "once", 2: "twice"}.get(count, f"{count} times")
