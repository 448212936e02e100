"""motorfolio undo: take an import back."""

from pathlib import Path

import click

from .common import catalog_option, say


@click.command(epilog="Example: motorfolio undo takes back the last import.")
@click.argument("number", type=int, required=False, metavar="[IMPORT]")
@catalog_option
def command(number: int | None, catalog: Path) -> int:
    """Take the last import (or removal) back, or that of this number from motorfolio revisions.

    Its motors leave the catalog; the revisions that they replaced come back.
    """
    from ..store import Catalog

    with Catalog.open(catalog, write=True) as opened:
        done = opened.undo(number)
    say(f"Taken back: {done.removed} motors removed, {done.restored} restored.")
    return 0
