"""motorfolio convert: a figure in another unit."""

import click

from .common import json_option, print_json, say


@click.command(
    context_settings={"ignore_unknown_options": True},
    epilog='Example: motorfolio convert "4.3 V/krpm" "N·m/A"',
)
@click.argument("figure")
@click.argument("unit")
@click.option(
    "--commutation", type=click.Choice(["sinusoidal", "block"]), help="Between dc and rms or peak."
)
@click.option("--connection", type=click.Choice(["star", "delta"]), help="Between phase and lines.")
@json_option
def command(
    figure: str, unit: str, commutation: str | None, connection: str | None, as_json: bool
) -> int:
    """Convert FIGURE, a number with its unit, to UNIT.

    A torque constant and a back-EMF constant are the same number in SI and convert to each other;
    a speed constant is their reciprocal. Words such as rms, peak, dc, lines and phase in the units
    are conventions and converted too. Degrees Celsius and kelvin are temperatures, not differences.
    """
    from ...schema.units.convert import convert
    from ...schema.written import number

    value, shown, remark = convert(figure, unit, commutation=commutation, connection=connection)
    if as_json:
        print_json({"value": value, "unit": shown})
    else:
        click.echo(f"{number(value, 6)} {shown}")
    if remark:
        say(remark)
    return 0
