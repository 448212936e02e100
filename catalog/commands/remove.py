"""motorfolio remove: motors and gears out of the catalog."""

from pathlib import Path

import click

from .common import catalog_option, say


@click.command(epilog="Example: motorfolio remove EX-24-100, and motorfolio undo brings it back.")
@click.argument("parts", nargs=-1, required=True, metavar="PART...")
@catalog_option
def command(parts: tuple[str, ...], catalog: Path) -> int:
    """Take motors or gears out of the catalog. Their figures stay, and undo brings them back."""
    from ..store import Catalog

    with Catalog.open(catalog, write=True) as opened:
        removed = opened.remove(parts)
    say(f"Removed: {', '.join(known.name for known in removed)}.")
    return 0
