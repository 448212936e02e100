"""motorfolio readings: readings of headings that were kept for a maker."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json, say


@click.command(epilog='Example: motorfolio readings --maker Examplar --remove "Kt"')
@click.option("--maker", metavar="NAME", default="", help="The maker of the reading to remove.")
@click.option("--remove", metavar="HEADING", help="Forget the reading kept for this heading.")
@catalog_option
@json_option
def command(maker: str, remove: str | None, catalog: Path, as_json: bool) -> int:
    """List the readings of headings kept by import --keep, or remove one."""
    from ..store import Catalog

    with Catalog.open(catalog, write=remove is not None) as opened:
        if remove is not None:
            opened.forget_reading(maker, remove)
            say(f'The reading of "{remove}" is no longer kept.')
        kept = opened.kept_readings()
    if as_json:
        keys = ("maker", "heading", "reading")
        rows = [dict(zip(keys, row, strict=True)) for row in kept]
        print_json({"readings": [{**row, "maker": row["maker"] or None} for row in rows]})
    elif kept:
        from ..report import terminal

        terminal.print_rows(("Maker", "Heading", "Read as"), kept)
    elif remove is None:
        say("No readings are kept.")
    return 0
