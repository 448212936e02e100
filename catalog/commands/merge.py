"""motorfolio merge: say that two motors are one."""

from pathlib import Path

import click

from .common import catalog_option, say


@click.command(epilog="Example: motorfolio merge EX-24-100 EX24100")
@click.argument("part")
@click.argument("others", nargs=-1, required=True, metavar="OTHER...")
@catalog_option
def command(part: str, others: tuple[str, ...], catalog: Path) -> int:
    """Say that the motors OTHER are PART, as another sheet has them.

    PART stands for them in searches and lists, and show names all their sheets. Their figures are
    kept, and undo parts them again.
    """
    from ..store import Catalog

    with Catalog.open(catalog, write=True) as opened:
        for other in others:
            into, aside = opened.merge(part, other)
            say(f"{aside.name} is now a further sheet of {into.name}.")
    return 0
