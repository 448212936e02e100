"""motorfolio diff: what an import changed."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json, say


@click.command(epilog="Example: motorfolio diff shows what the last import changed.")
@click.argument("number", type=int, required=False, metavar="[IMPORT]")
@catalog_option
@json_option
def command(number: int | None, catalog: Path, as_json: bool) -> int:
    """Show what the last import changed, or that of this number from motorfolio revisions:
    motors that came, went or changed, figure by figure, and findings that came or went."""
    from ..differences import of_import
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        changes = of_import(opened, number)
    if as_json:
        print_json({"changes": changes})
    elif not changes:
        say("Nothing changed.")
    else:
        from ..report import terminal

        terminal.print_changes(changes)
    return 0
