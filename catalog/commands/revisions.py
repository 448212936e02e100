"""motorfolio revisions: imports, and what became of a motor."""

from dataclasses import asdict
from itertools import pairwise
from pathlib import Path
from typing import TYPE_CHECKING

import click

from .common import catalog_option, json_option, print_json, say

if TYPE_CHECKING:
    from ...schema.gear import Gear


@click.command(epilog="Example: motorfolio revisions EX-24-100")
@click.argument("part", required=False)
@catalog_option
@json_option
def command(part: str | None, catalog: Path, as_json: bool) -> int:
    """List the imports, or the revisions of one motor or gear and what changed from each to the
    next."""
    from ..differences import between
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        if part is None:
            imports = opened.imports()
            documents = []
        elif of_gear := opened.gear_revisions(part):
            return _print_gear(part, of_gear, as_json)
        else:
            imports = []
            documents = opened.revisions(part)
    changes = [between(a, b) for a, b in pairwise(documents)]
    if as_json:
        print_json(
            {"imports": [asdict(i) for i in imports]}
            if part is None
            else {"revisions": documents, "changes": changes}
        )
        return 0
    from ..report import terminal

    if part is None:
        terminal.print_imports(imports)
    elif not changes:
        say(f"{part} has one revision, from {documents[0]['source']['file']}.")
    else:
        terminal.print_changes(changes)
    return 0


def _print_gear(part: str, found: "list[tuple[str | None, Gear]]", as_json: bool) -> int:
    from ..differences import gears_between
    from ..documents import gear as document
    from ..report import terminal

    changes = [gears_between(a, b) for (_, a), (_, b) in pairwise(found)]
    if as_json:
        documents = [{**document(gear), "source": {"file": file}} for file, gear in found]
        print_json({"revisions": documents, "changes": changes})
    elif not changes:
        of_file = f", from {found[0][0]}" if found[0][0] else ""
        say(f"{part} has one revision{of_file}.")
    else:
        terminal.print_changes(changes)
    return 0
