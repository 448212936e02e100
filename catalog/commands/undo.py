"""motorfolio undo: take an import back."""

import sys
from pathlib import Path
from typing import TYPE_CHECKING

import click

from .common import catalog_option, say

if TYPE_CHECKING:
    from ..store import Catalog


@click.command(epilog="Example: motorfolio undo takes back the last import.")
@click.argument("number", type=int, required=False, metavar="[IMPORT]")
@click.option("--yes", is_flag=True, help="Do not ask.")
@catalog_option
def command(number: int | None, catalog: Path, yes: bool) -> int:
    """Take the last import (or removal) back, or that of this number from motorfolio revisions.

    Its motors leave the catalog; the revisions that they replaced come back.
    """
    from ..report.plain import many
    from ..store import Catalog

    with Catalog.open(catalog, write=True) as opened:
        if sys.stdin.isatty() and not yes:
            say(_what_goes(opened, number))
            click.confirm("Take it back?", abort=True, err=True)
        done = opened.undo(number)
    say(f"Taken back: {many(done.removed, 'motor')} removed, {done.restored} restored.")
    return 0


def _what_goes(opened: "Catalog", number: int | None) -> str:
    """The import that would be taken back, in words."""
    from ..report.plain import many, when
    from ..report.terminal import deed

    imports = {found.id: found for found in opened.imports()}
    found = imports.get(max(imports, default=0) if number is None else number)
    if found is None:
        return "There is no such import."
    did, concerned = deed(found)
    said = ": ".join(filter(None, (did, ", ".join(concerned))))
    back = f"; {many(found.replaced, 'motor')} would come back" if found.replaced else ""
    return f"Number {found.id} of {when(found.at)}: {said}{back}."
