"""motorfolio gears: read tables of gears, or list those of the catalog."""

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import click

from .common import catalog_option, json_option, print_json, replacing, say

if TYPE_CHECKING:
    from ...schema.gear import Gear
    from ..importing.gears import GearFile


@click.command(epilog="Example: motorfolio gears gears.csv, then motorfolio search --gears …")
@click.argument("files", nargs=-1, type=click.Path(path_type=Path), metavar="[FILE]...")
@click.option("--maker", metavar="NAME", help="Maker of the gears.")
@click.option("--sheet", metavar="NAME", help="Sheet of a workbook.")
@click.option(
    "--output",
    type=click.Path(path_type=Path),
    metavar="FILE",
    help="Write the catalog's gears as CSV, which this command reads again.",
)
@catalog_option
@json_option
def command(
    files: tuple[Path, ...],
    maker: str | None,
    sheet: str | None,
    output: Path | None,
    catalog: Path,
    as_json: bool,
) -> int:
    """Read tables of gears, one a row or one a column (part number, ratio, stages, efficiency,
    inertia, torques, input speed, backlash, mass, diameter, price), into the catalog; without a
    FILE list the catalog's gears. All files of a call are stored, or none.

    That is an import: motorfolio undo takes it back, revisions, diff and remove know gears.
    """
    from ..store import Catalog

    if files and output is not None:
        raise click.UsageError("--output writes the catalog's gears; give no FILE to read")
    if not files:
        with Catalog.open(catalog) as opened, opened.at_once():
            gears = opened.gears()
        if output is None:
            _show(gears, [], as_json)
            return 0
        from ..exporting.gears import gears_as_csv
        from ..report.plain import many

        with replacing(output) as (_, out):
            out.write(gears_as_csv(gears))
        say(f"{many(len(gears), 'gear')} written to {output}.")
        return 0
    from ..importing.gears import import_gears
    from ..report.plain import many

    found = import_gears(catalog, files, maker=maker, sheet=sheet)
    for file in found:
        _print_unread(file)
    _show([gear for file in found for gear in file.gears], found, as_json)
    if not as_json:
        stored, replaced = (sum(getattr(f, n) for f in found) for n in ("stored", "replaced"))
        also = f", {replaced} of them replaced" if replaced else ""
        same = sum(len(file.gears) for file in found) - stored
        kept = f"; {same} in it already, with these figures" if same else ""
        click.echo(f"{many(stored, 'gear')} stored in {catalog}{also}{kept}")
    return 0


def _print_unread(file: "GearFile") -> None:
    for table in file.tables:
        for cell in table.unread:
            heading = f"{cell.heading} " if cell.heading else ""
            say(f"{file.file}, row {cell.row}, column {cell.column}: {heading}“{cell.text}” is "
                f"unread: {cell.reason}")  # fmt: skip
        for reading in table.reading:
            if reading.key is None:
                say(f"{file.file}: the heading “{reading.heading}” is unread")


def _show(gears: "Sequence[Gear]", files: "Sequence[GearFile]", as_json: bool) -> None:
    from ..documents import gear as gear_document

    if as_json:
        reading = [
            {"file": file.file, "heading": r.heading, "quantity": r.key, "unit": r.unit}
            for file in files
            for table in file.tables
            for r in table.reading
        ]
        print_json({"reading": reading, "gears": [gear_document(gear) for gear in gears]})
        return
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

    from ..report.plain import number, plain

    table = Table(box=None, pad_edge=False, padding=(0, 1), header_style="bold")
    for heading in ("gear", "ratio", "η", "torque N·m", "peak N·m", "input rpm", "mass kg"):
        table.add_column(heading, justify="left" if heading == "gear" else "right")
    for gear in gears:
        rpm = (
            None
            if gear.maximum_input_speed is None
            else gear.maximum_input_speed * 9.549296585513721
        )
        table.add_row(
            Text(plain(gear.part_number)),
            number(gear.ratio),
            number(gear.efficiency, 3),
            number(gear.continuous_torque, 3),
            number(gear.peak_torque, 3),
            number(rpm),
            number(gear.mass, 3),
        )
    Console(highlight=False).print(table)
