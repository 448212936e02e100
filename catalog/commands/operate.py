"""motorfolio operate: a chosen motor under voltage or current control."""

from pathlib import Path
from typing import Any

import click

from .common import catalog_option, json_option, print_json

# option → SI units; speeds and angles as everywhere
_ACCEPTS: dict[str, tuple[str, ...]] = {
    "supply": ("V",),
    "duty": ("1",),
    "drop": ("V",),
    "torque": ("N·m",),
    "current": ("A",),
    "speed": ("rad/s",),
    "load_inertia": ("kg·m²",),
    "deceleration": ("rad/s²",),
    "pwm_frequency": ("Hz",),
}
_NOT_NEGATIVE = {"supply", "drop", "speed", "load_inertia", "deceleration", "pwm_frequency"}


@click.command(
    epilog='Example: motorfolio operate EX-24-100 --supply "24 V" --duty "60 %" --torque "20 mN·m" '
    '--current "5 A" --speed "2000 rpm"'
)
@click.argument("part")
@click.option("--supply", metavar="Q", help="Voltage of the dc bus: voltage control.")
@click.option("--duty", metavar="N", help="Duty cycle of the bridge.  [default: 1]")
@click.option("--bridge-drop", "drop", metavar="Q", help="Voltage lost in the bridge.")
@click.option("--torque", metavar="Q", help="Load torque at the shaft.  [default: 0]")
@click.option("--current", metavar="Q", help="Armature current: current control.")
@click.option("--speed", metavar="Q", help="Speed to reach, or to brake from.")
@click.option("--load-inertia", metavar="Q", help="Load inertia at the motor's shaft.")
@click.option("--deceleration", metavar="Q", help="Braking, in rad/s² or rpm/s.")
@click.option("--pwm-frequency", metavar="Q", help="Switching frequency of the bridge.")
@click.option("--temperature", metavar="Q", help="Of the winding.  [default: 25 °C]")
@catalog_option
@json_option
def command(
    part: str, catalog: Path, as_json: bool, temperature: str | None, **options: Any
) -> int:
    """Show a motor at work: speed at a voltage and load, torque and acceleration at a current,
    times, the share the bridge gives, current ripple, braking.

    PART is a part number, or MAKER/PART where two makers share one.
    """
    from ...schema.errors import MotorfolioError
    from ...schema.units.read import quantity
    from ..at_work import OperateError, at_work
    from ..store import Catalog

    asked: dict[str, float | None] = {}
    for name, text in (*options.items(), ("temperature", temperature)):
        option = "--bridge-drop" if name == "drop" else f"--{name.replace('_', '-')}"
        try:
            accepts = _ACCEPTS.get(name, ("°C",))
            asked[name] = None if text is None else quantity(text, accepts)
        except MotorfolioError as error:
            raise OperateError(f"{option}: {error}") from error
        value = asked[name]
        if value is not None and name in _NOT_NEGATIVE and value < 0:
            raise OperateError(f"{option}: {text} is below 0; give 0 or more.")
    duty = asked["duty"]
    if duty is not None and not 0 <= duty <= 1:
        raise OperateError(f"--duty: {options['duty']} is no duty cycle; give 0 to 100 %.")
    degrees = asked.pop("temperature")
    with Catalog.open(catalog) as opened, opened.at_once():
        document = at_work(opened, part, asked, 25.0 if degrees is None else degrees)
    if as_json:
        print_json(document)
        return 0 if document["holds"] else 1
    from ..report.at_work import lines
    from ..report.safety import SAFETY

    for line in lines(document):
        click.echo(line)
    click.echo(SAFETY)
    return 0 if document["holds"] else 1
