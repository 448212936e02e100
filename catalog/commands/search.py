"""motorfolio search: which motors do what a machine asks."""

from pathlib import Path
from typing import Any

import click

from .common import catalog_option, json_option, print_json, say
from .requirement_options import requirement_of, requirement_options


@requirement_options
@click.command(
    epilog='Example: motorfolio search --torque "0.1 N·m" --speed "3000 rpm" --supply "24 V" '
    '--current "10 A" --ambient "40 °C" --reserve "20 %"'
)
@click.option("--explain", is_flag=True, help="Print the requirement as understood; no search.")
@click.option(
    "--save-requirement",
    type=click.Path(path_type=Path, dir_okay=False),
    metavar="FILE",
    help="Write the requirement as TOML, too.",
)
@catalog_option
@json_option
def command(catalog: Path, as_json: bool, **options: Any) -> int:
    """Find the motors that do what a machine asks, ranked, and what would admit the near misses.

    Every quantity is text with its unit; ratio, efficiency, duty and reserve are pure numbers or
    per cent. Positive torque is what the motor must give in the direction of positive speed.
    """
    requirement = requirement_of(options)
    if options["save_requirement"] is not None:
        from ..requirement.file import saved

        options["save_requirement"].write_text(saved(requirement), encoding="utf-8")
    if options["explain"]:
        from ..search.documents import requirement_document

        document = requirement_document(requirement)
        if as_json:
            print_json(document)
        else:
            from ..report.candidates import print_requirement
            from ..report.screen import paged

            paged(lambda out: print_requirement(document, out))
        return 0
    from ..search.documents import search_document
    from ..search.near_misses import near_misses
    from ..search.run import search
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        found = search(opened, requirement)
        document = search_document(found, near_misses(found, opened), opened)
    if as_json:
        print_json(document)
    elif document["counts"]["considered"]:
        from ..report.candidates import print_search
        from ..report.screen import paged

        paged(lambda out: print_search(document, out))
    if not document["candidates"]:
        from ..report.candidates import why_none

        say(why_none(document))
    return 0 if document["candidates"] else 1
