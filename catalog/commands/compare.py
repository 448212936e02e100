"""motorfolio compare: motors side by side."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json


@click.command(epilog="Example: motorfolio compare EX-24-100 EX-24-200")
@click.argument("parts", nargs=-1, required=True, metavar="PART PART...")
@catalog_option
@json_option
def command(parts: tuple[str, ...], catalog: Path, as_json: bool) -> int:
    """Put motors side by side: constants and figures in SI."""
    from ..store import Catalog

    if len(parts) < 2:
        raise click.UsageError("name at least two motors to compare")
    with Catalog.open(catalog) as opened, opened.at_once():
        documents = list(opened.motors(parts))
    if as_json:
        print_json(documents)
    else:
        from ..report.comparison import print_comparison
        from ..report.screen import paged

        paged(lambda out: print_comparison(documents, out))
    return 0
