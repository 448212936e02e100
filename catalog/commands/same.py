"""motorfolio same: motors that may be one, in two sheets."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json, say


@click.command(epilog="Example: motorfolio same, then motorfolio merge EX-24-100 EX24100")
@catalog_option
@json_option
def command(catalog: Path, as_json: bool) -> int:
    """List motors that may be one: they stand in two sheets, their part numbers differ in spelling
    only, and their constants agree. Nothing is changed; merge makes them one.
    """
    from ..same_motors import pairs
    from ..store import Catalog

    with Catalog.open(catalog) as opened:
        found = pairs(opened)
    if as_json:
        print_json({"pairs": [pair.as_json() for pair in found]})
    elif found:
        from ..report.lists import print_pairs

        print_pairs(found)
    else:
        say("No two motors of the catalog seem to be one.")
    return 0
