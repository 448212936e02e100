"""motorfolio convert: a figure in another unit."""

import click

from .common import json_option, print_json, say


@click.command(
    context_settings={"ignore_unknown_options": True},
    epilog='Example: motorfolio convert "4.3 V/krpm" "N·m/A"',
)
@click.argument("figure")
@click.argument("unit")
@json_option
def command(figure: str, unit: str, as_json: bool) -> int:
    """Convert FIGURE, a number with its unit, to UNIT.

    A torque constant and a back-EMF constant are the same number in SI and convert to each other;
    a speed constant is their reciprocal.
    """
    from ...schema.units.read import convert

    value, shown, remark = convert(figure, unit)
    from ...schema.written import number

    if as_json:
        print_json({"value": value, "unit": shown})
    else:
        click.echo(f"{number(value, 6)} {shown}")
    if remark:
        say(remark)
    return 0
