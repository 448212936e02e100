"""motorfolio list: the motors of a catalog, or those that words name."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json, say


@click.command("list", epilog="Example: motorfolio list brushless examplar")
@click.argument("words", nargs=-1, metavar="[WORD]...")
@catalog_option
@json_option
def command(words: tuple[str, ...], catalog: Path, as_json: bool) -> int:
    """List the motors with their constants; with WORDs those in whose part number, maker, series,
    description, file name or commutation every word stands.

    Case, accents and hyphens make no difference: ex24 finds EX-24-100.
    """
    from ..listing import listed
    from ..store import Catalog

    with Catalog.open(catalog) as opened:
        motors = listed(opened, words)
    if as_json:
        print_json({"motors": motors})
    elif motors:
        from ..report.lists import print_motors

        print_motors(motors)
    elif words:
        say(f"No motor of the catalog has {' and '.join(words)} in its names.")
    else:
        say("The catalog has no motors; read a table first: motorfolio import FILE.")
    return 0 if motors else 1
