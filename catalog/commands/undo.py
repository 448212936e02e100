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

    Its motors and gears leave the catalog; the revisions that they replaced come back.
    """
    from ..report.plain import many
    from ..store import Catalog

    with Catalog.open(catalog, write=True) as opened:
        if sys.stdin.isatty() and not yes:
            say(_what_goes(opened, number))
            click.confirm("Take it back?", abort=True, err=True)
        done = opened.undo(number)
    said = f"{many(done.gears_removed, 'gear')} removed, {done.gears_restored} restored"
    of_gears = done.gears_removed or done.gears_restored
    if done.removed or done.restored or not of_gears:
        motors = f"{many(done.removed, 'motor')} removed, {done.restored} restored"
        said = f"{motors}; {said}" if of_gears else motors
    say(f"Taken back: {said}.")
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
    come = [(found.replaced, "motor"), (found.gears_replaced, "gear")]
    back = " and ".join(many(n, word) for n, word in come if n)
    back = f"; {back} would come back" if back else ""
    return f"Number {found.id} of {when(found.at)}: {said}{back}."
