"""motorfolio gears: read tables of gears, or list those of the catalog."""

from dataclasses import asdict
from pathlib import Path
from typing import Any

import click

from .common import catalog_option, json_option, print_json, say


@click.command(epilog="Example: motorfolio gears gears.csv, then motorfolio search --gears …")
@click.argument("files", nargs=-1, type=click.Path(path_type=Path), metavar="[FILE]...")
@click.option("--maker", metavar="NAME", help="Maker of the gears.")
@click.option("--sheet", metavar="NAME", help="Sheet of a workbook.")
@catalog_option
@json_option
def command(
    files: tuple[Path, ...], maker: str | None, sheet: str | None, catalog: Path, as_json: bool
) -> int:
    """Read tables of gears, one a row with units in the headings (part number, ratio, stages,
    efficiency, inertia, torques, input speed, backlash, mass, diameter, price) into the catalog;
    without a FILE list the catalog's gears. All files of a call are stored, or none.
    """
    from ..search.gears import all_gears, read_gears, store_gears
    from ..store import Catalog

    if not files:
        with Catalog.open(catalog) as opened, opened.at_once():
            gears = all_gears(opened)
        _show(gears, [], as_json)
        return 0
    from ..search.gears import GearError
    from ..tables import read_tables

    found, readings = [], []
    for path in files:
        table_file = read_tables(path, sheet=sheet)
        tables, refused = [], None
        for grid in table_file.grids:
            try:
                tables.append(read_gears(grid, maker))
            except GearError as error:
                refused = error
        if not tables:
            raise GearError(f"{path}: {refused or 'it holds no table'}.")
        for table in tables:
            found += table.gears
            readings.append((path, table))
            for row, heading, text, reason in table.unread:
                say(f"{path}, row {row}: {heading} “{text}” is unread: {reason}")
            for reading in table.reading:
                if reading.key is None and reading.heading.strip():
                    say(f"{path}: the heading “{reading.heading}” is unread")
    with Catalog.open(catalog, create=True) as opened:
        stored = store_gears(opened, found)
    _show(found, readings, as_json)
    if not as_json:
        click.echo(f"{stored} gears stored in {catalog}")
    return 0


def _show(gears: list[Any], readings: list[Any], as_json: bool) -> None:
    from ..documents import amount

    units = {
        "inertia": "kg·m²", "mass": "kg", "continuous_torque": "N·m", "peak_torque": "N·m",
        "maximum_input_speed": "rad/s", "backlash": "rad", "diameter": "m", "length": "m",
    }  # fmt: skip
    if as_json:
        documents = []
        for gear in gears:
            values = asdict(gear)
            currency = values.pop("currency")
            document = {k: amount(v, units[k]) if k in units else v for k, v in values.items()}
            if gear.price is not None:
                document["price"] = amount(gear.price, currency or "currency")
            documents.append(document)
        reading = [
            {"file": str(path), "heading": r.heading, "quantity": r.key, "unit": r.unit}
            for path, table in readings
            for r in table.reading
        ]
        print_json({"reading": reading, "gears": documents})
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
