"""motorfolio show: one motor."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json


@click.command(epilog="Example: motorfolio show EX-24-100")
@click.argument("part")
@catalog_option
@json_option
def command(part: str, catalog: Path, as_json: bool) -> int:
    """Show a motor: its constants in SI, its figures as published, findings, and where all of it
    came from.

    PART is a part number, or MAKER/PART where two makers share one.
    """
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        document = opened.motor(part)
        also = opened.also(part)
    if also:
        document["also"] = [
            {key: other[key] for key in ("part_number", "maker", "source")} for other in also
        ]
    if as_json:
        print_json(document)
    else:
        from ..report.card import print_card
        from ..report.screen import paged

        paged(lambda out: print_card(document, out))
    return 0
