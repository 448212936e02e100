"""motorfolio revisions: imports, and what became of a motor."""

from dataclasses import asdict
from itertools import pairwise
from pathlib import Path

import click

from .common import catalog_option, json_option, print_json, say


@click.command(epilog="Example: motorfolio revisions EX-24-100")
@click.argument("part", required=False)
@catalog_option
@json_option
def command(part: str | None, catalog: Path, as_json: bool) -> int:
    """List the imports, or the revisions of one motor and what changed from each to the next."""
    from ..differences import between
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        if part is None:
            imports = opened.imports()
            documents = []
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
