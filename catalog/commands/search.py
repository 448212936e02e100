"""motorfolio search: which motors do what a machine asks."""

from pathlib import Path
from typing import Any

import click

from .common import catalog_option, json_option, print_json, say

# option → section and key of a requirement file
_KEYS = {
    "load_inertia": ("load", "inertia"),
    "friction_torque": ("load", "friction_torque"),
    "ratio": ("gear", "ratio"),
    "gear_efficiency": ("gear", "efficiency"),
    "gear_inertia": ("gear", "inertia"),
    "supply": ("supply", "voltage"),
    "lowest_supply": ("supply", "lowest_voltage"),
    "supply_current": ("supply", "current_limit"),
    "supply_power": ("supply", "power_limit"),
    "max_duty": ("supply", "max_duty"),
    "bridge_drop": ("supply", "bridge_drop"),
    "current": ("drive", "peak_current"),
    "continuous_current": ("drive", "continuous_current"),
    "current_convention": ("drive", "current_convention"),
    "pwm_frequency": ("drive", "pwm_frequency"),
    "ambient": ("ambient", "temperature"),
    "altitude": ("ambient", "altitude"),
    "mounting": ("mounting", "thermal_resistance"),
    "inertia_ratio": ("wanted", "largest_inertia_ratio"),
    "reserve": ("wanted", "reserve"),
    "worst_case": ("wanted", "worst_case"),
    "order_by": ("wanted", "order_by"),
    "limit": ("wanted", "limit"),
}


@click.command(
    epilog='Example: motorfolio search --torque "0.1 N·m" --speed "3000 rpm" --supply "24 V" '
    '--current "10 A" --ambient "40 °C" --reserve "20 %"'
)
@click.option("--torque", multiple=True, metavar="Q", help="Load torque of a point (repeatable).")
@click.option("--speed", multiple=True, metavar="Q", help="Load speed of a point (repeatable).")
@click.option("--duration", multiple=True, metavar="Q", help="Duration of a point (repeatable).")
@click.option("--cycle", metavar="FILE", help="CSV with time, speed and torque, units in heading.")
@click.option(
    "--requirement",
    type=click.Path(path_type=Path),
    metavar="FILE",
    help="All of it in a TOML file; options add to it.",
)
@click.option("--load-inertia", metavar="Q", help="Inertia of the load at its shaft.")
@click.option("--friction-torque", metavar="Q", help="Torque that opposes the load's motion.")
@click.option("--ratio", metavar="N|N..N|N,N", help="Motor speed over load speed.  [default: 1]")
@click.option("--gear-efficiency", metavar="N", help="Efficiency of the gear.  [default: 1]")
@click.option("--gear-inertia", metavar="Q", help="Inertia of the gear at the motor's shaft.")
@click.option("--gears", is_flag=True, help="Real gears out of the catalog.")
@click.option("--supply", metavar="Q", help="Voltage of the dc bus.")
@click.option("--lowest-supply", metavar="Q", help="Voltage that the bus sags to.")
@click.option("--supply-current", metavar="Q", help="Current that the supply gives.")
@click.option("--supply-power", metavar="Q", help="Power that the supply gives.")
@click.option("--max-duty", metavar="N", help="Largest duty cycle of the bridge.  [default: 1]")
@click.option("--bridge-drop", metavar="Q", help="Voltage lost in the bridge.  [default: 0 V]")
@click.option("--current", metavar="Q", help="Peak current of the drive.")
@click.option("--continuous-current", metavar="Q", help="Continuous current of the drive.")
@click.option(
    "--current-convention",
    metavar="dc|peak|rms",
    help="Of the drive's currents: armature, or peak or rms of a phase.  [default: dc]",
)
@click.option("--pwm-frequency", metavar="Q", help="Counts the current ripple's heat.")
@click.option("--ambient", metavar="Q", help="Ambient temperature.  [default: 25 °C]")
@click.option("--altitude", metavar="Q", help="Above the sea: thin air cools less.")
@click.option("--mounting", metavar="Q", help="Thermal resistance housing to ambient as mounted.")
@click.option("--inertia-ratio", metavar="N", help="Largest load to rotor inertia.")
@click.option("--reserve", metavar="N", help="Left over of every limit.  [default: 0]")
@click.option(
    "--worst-case",
    is_flag=False,
    flag_value="10 %",
    metavar="[N|printed]",
    help="Worst corner of a tolerance of Km and Ra.  [10 % if not said]",
)
@click.option("--where", multiple=True, metavar="LIMIT", help='On any figure: "mass < 500 g".')
@click.option(
    "--order-by",
    metavar="KEY",
    help="size, copper-loss, mass, price, diameter, winding-temperature or utilisation.  "
    "[default: size]",
)
@click.option("--limit", metavar="N", help="Candidates shown.  [default: 20]")
@click.option("--explain", is_flag=True, help="Print the requirement as understood; no search.")
@click.option(
    "--save-requirement",
    type=click.Path(path_type=Path, dir_okay=False),
    metavar="FILE",
    help="Write the requirement as TOML, too.",
)
@catalog_option
@json_option
def command(catalog: Path, as_json: bool, **options: Any) -> int:
    """Find the motors that do what a machine asks, ranked, and what would admit the near misses.

    Every quantity is text with its unit; ratio, efficiency, duty and reserve are pure numbers or
    per cent. Positive torque is what the motor must give in the direction of positive speed.
    """
    requirement = _requirement(options)
    if options["save_requirement"] is not None:
        from ..requirement.file import saved

        options["save_requirement"].write_text(saved(requirement), encoding="utf-8")
    if options["explain"]:
        from ..search.documents import requirement_document

        document = requirement_document(requirement)
        if as_json:
            print_json(document)
        else:
            from ..report.candidates import print_requirement
            from ..report.screen import paged

            paged(lambda out: print_requirement(document, out))
        return 0
    from ..search.documents import search_document
    from ..search.near_misses import near_misses
    from ..search.run import search
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        found = search(opened, requirement)
        document = search_document(found, near_misses(found, opened), opened)
    if as_json:
        print_json(document)
    else:
        from ..report.candidates import print_search
        from ..report.screen import paged

        paged(lambda out: print_search(document, out))
    if not document["candidates"]:
        say(_why_none(document))
    return 0 if document["candidates"] else 1


def _requirement(options: dict[str, Any]) -> Any:
    """The requirement of file and options together."""
    from ..requirement.file import merged, read_file
    from ..requirement.read import read_requirement

    given, origin = _document(options)
    path = options["requirement"]
    if path is None:
        return read_requirement(given, origin)
    # what no option gave stands in the file, under the file's name for it
    origin = {(section, key): option for (section, key), option in origin.items()
              if key in (given.get(section) or {}) or (section == "point" and given.get(section))
              or (not section and key in given)}  # fmt: skip
    return read_requirement(merged(read_file(path), given, path.parent), origin, path.parent)


def _document(options: dict[str, Any]) -> tuple[dict[str, Any], dict[tuple[str, str], str]]:
    """The options as a requirement's document, and which option each key came from."""
    document: dict[str, Any] = {}
    origin = {("point", key): f"--{key}" for key in ("torque", "speed", "duration")} | {
        ("", "cycle"): "--cycle",
        ("gear", "use"): "--gears",
        ("wanted", "where"): "--where",
    }
    points = _points(options)
    if points:
        document["point"] = points
    if options["cycle"] is not None:
        document["cycle"] = str(Path(options["cycle"]).absolute())
    for name, (section, key) in _KEYS.items():
        origin[(section, key)] = f"--{name.replace('_', '-')}"
        if options[name] is not None:
            document.setdefault(section, {})[key] = options[name]
    if options["gears"]:
        document.setdefault("gear", {})["use"] = "catalog"
    if options["where"]:
        document.setdefault("wanted", {})["where"] = list(options["where"])
    return document, origin


def _points(options: dict[str, Any]) -> list[dict[str, str]]:
    from ..requirement.fields import RequirementError

    torques, speeds, durations = (options[key] for key in ("torque", "speed", "duration"))
    if len(torques) != len(speeds):
        raise RequirementError(
            f"There are {len(torques)} --torque and {len(speeds)} --speed; a point needs both."
        )
    if durations and len(durations) != len(torques):
        raise RequirementError(
            f"There are {len(torques)} points and {len(durations)} --duration; give one for each."
        )
    points = [{"torque": t, "speed": n} for t, n in zip(torques, speeds, strict=True)]
    for point, duration in zip(points, durations, strict=False):
        point["duration"] = duration
    return points


def _why_none(document: dict[str, Any]) -> str:
    """Why no motor was found, and what would do."""
    from ...schema.written import in_words

    counts = document["counts"]
    if not counts["considered"]:
        return "The catalog has no motors; read a table first: motorfolio import FILE."
    if counts["lacking"]:
        most = max(counts["lacking"], key=counts["lacking"].get)
        figures = {
            "thermal": "thermal resistances, or a continuous current, with a winding temperature",
            "voltage": "inductance and pole pairs of sinusoidal motors",
            "inertia_ratio": "the rotor's inertia",
            "where": "the figures that --where asks for",
            "gear": "efficiency, inertia and torque of the gears",
        }.get(most, in_words(most))
        return (
            f"No motor is known to do it; {counts['unknown']} are unknown, most for lack of "
            f"{figures}."
        )
    return "No motor of the catalog does it; see the near misses for what would admit one."
