"""motorfolio page: one HTML file of a catalog or of a search."""

from pathlib import Path
from typing import Any

import click

from .common import catalog_option, say
from .requirement_options import requirement_of, requirement_options, says_the_load


@requirement_options
@click.command(
    epilog="Example: motorfolio page -o motors.html writes the whole catalog; with --torque and "
    "--speed, --cycle or --requirement it is the page of that search."
)
@click.option(
    "--output", "-o", type=click.Path(path_type=Path, dir_okay=False), required=True,
    metavar="FILE", help="The HTML file to write.",
)  # fmt: skip
@click.option("--title", metavar="TEXT", help="The page's title.")
@catalog_option
def command(output: Path, title: str | None, catalog: Path, **options: Any) -> None:
    """Write one HTML file that opens offline: a table to sort and filter, every motor's card,
    charts, and for a search fields that judge its motors anew.

    The page holds all it needs and asks nothing of any network.
    """
    from ..report.page.write import catalog_page, search_page
    from ..report.safety import SAFETY
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        if says_the_load(options):
            requirement = requirement_of(options)
            text = search_page(opened, requirement, title or requirement.title or "Motor search")
        else:
            text = catalog_page(opened, title or "Motor catalog")
    output.write_text(text, encoding="utf-8")
    say(f"Written: {output} ({len(text.encode()) / 1e6:.1f} MB)")
    say(SAFETY)
