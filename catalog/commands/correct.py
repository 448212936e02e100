"""motorfolio correct: corrections of published figures."""

from dataclasses import asdict
from pathlib import Path
from typing import TYPE_CHECKING

import click

from .common import catalog_option, json_option, print_json, say

if TYPE_CHECKING:
    from ..store import Catalog


@click.command(
    epilog="Example: motorfolio correct EX-24-100 torque_constant implied --reason "
    '"printed per peak ampere; the maker confirmed"'
)
@click.argument("part", required=False)
@click.argument("quantity", required=False)
@click.argument("value", required=False)
@click.option("--reason", metavar="TEXT", default="", help="Why; shown wherever the figure is.")
@click.option("--revoke", "revoking", is_flag=True, help="End the correction of this figure.")
@catalog_option
@json_option
def command(
    part: str | None,
    quantity: str | None,
    value: str | None,
    reason: str,
    revoking: bool,
    catalog: Path,
    as_json: bool,
) -> int:
    """Put a correction in place of a published figure, or list the corrections that stand.

    VALUE is a number with its unit, in the convention that the figure is published in, or the
    word "implied" for what the motor's other figures imply. The published text stays beside it.
    A correction is kept when the sheet is imported again, as long as it prints the same text.
    """
    from ..store import Catalog

    if part is None:
        with Catalog.open(catalog) as opened, opened.at_once():
            _print_list(opened, as_json)
        return 0
    if quantity is None or (value is None) is not revoking:
        raise click.UsageError(
            "give PART, QUANTITY and VALUE (or --revoke instead of a value), such as "
            'EX-24-100 torque_constant "30.2 mN·m/A"'
        )
    from ..correcting import correct, revoke

    with Catalog.open(catalog, write=True) as opened:
        if value is None:
            motor = revoke(opened, part, quantity)
        else:
            motor = correct(opened, part, quantity, value, reason)
    if as_json:
        print_json(motor)
        return 0
    from ...schema.written import in_words

    figure, name = motor["figures"][quantity], in_words(quantity)
    if value is None:
        say(f"{part}: {name} is again {figure['text']} as published.")
    else:
        say(f"{part}: {name} now counts as {figure['corrected']['text']}; the sheet prints "
            f"{figure['text']}.")  # fmt: skip
    return 0


def _print_list(opened: "Catalog", as_json: bool) -> None:
    found = [(correction, opened.not_applied(correction)) for correction in opened.corrections()]
    if as_json:
        documents = [
            {**asdict(c), "maker": c.maker or None, "not_applied": why or None} for c, why in found
        ]
        print_json({"corrections": documents})
    elif found:
        from ..report import terminal

        terminal.print_corrections(found)
    else:
        say("No corrections stand.")
