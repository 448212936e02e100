"""motorfolio export: motors out of the catalog."""

import sys
from pathlib import Path

import click

from .common import catalog_option, replacing, say


@click.command(epilog="Example: motorfolio export --format csv --output motors.csv")
@click.option(
    "--format", "format_", type=click.Choice(["csv", "json", "toml", "parquet"]), default="csv",
    show_default=True, help="JSON and TOML hold all that is known; Parquet needs an extra.",
)  # fmt: skip
@click.option(
    "--units", default="si", show_default=True, metavar="si|FILE",
    help='For CSV and Parquet: SI, or a TOML file of lines such as torque_constant = "mN·m/A rms".',
)  # fmt: skip
@click.option(
    "--output", type=click.Path(path_type=Path), metavar="FILE", help="Instead of standard output."
)
@catalog_option
def command(format_: str, units: str, output: Path | None, catalog: Path) -> int:
    """Write all motors, in a form that motorfolio import reads back.

    CSV has the published figures, a column for each quantity and convention, and with a figure
    whose digits don't tell it its precision: 857.65 ± 0.52. JSON and TOML also have the printed
    texts, constants, findings and places. Parquet has the columns of CSV as numbers, and beside a
    column whose numbers don't tell their precision one of the same name, "as written".
    """
    from ..exporting import export, export_parquet, read_units
    from ..store import Catalog

    if units != "si" and format_ not in ("csv", "parquet"):
        raise click.UsageError(f"--units is for CSV and Parquet; {format_} is always in SI")
    if format_ == "parquet" and output is None:
        raise click.UsageError("Parquet is written to a file: give --output FILE")
    chosen = None if units == "si" else read_units(Path(units))
    with Catalog.open(catalog) as opened, opened.at_once():
        if output is None:
            export(opened, format_, sys.stdout, chosen)
            return 0
        with replacing(output) as (path, out):
            if format_ == "parquet":
                n = export_parquet(opened, path, chosen)
            else:
                n = export(opened, format_, out, chosen)
    say(f"{n} motors written to {output}.")
    return 0
