"""motorfolio diff: what an import changed."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json, say


@click.command(epilog="Example: motorfolio diff shows what the last import changed.")
@click.argument("number", type=int, required=False, metavar="[IMPORT]")
@catalog_option
@json_option
def command(number: int | None, catalog: Path, as_json: bool) -> int:
    """Show what the last import changed, or that of this number from motorfolio revisions:
    motors that came, went or changed, figure by figure, and findings that came or went. Motors of
    an earlier file of the same name that the newer one lacks are told; they stay."""
    from ..differences import of_import
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        changes = of_import(opened, number)
        left = opened.left_behind(opened.imports()[-1].id if number is None else number)
    if as_json:
        not_in = [
            {"part_number": known.part_number, "maker": known.maker or None, "file": file}
            for file, motors in left
            for known in motors
        ]
        print_json({"changes": changes, "left_behind": not_in})
    elif not changes and not left:
        say("Nothing changed.")
    else:
        from ..report import terminal
        from ..report.imported import left as left_in_words

        terminal.print_changes(changes)
        for file, motors in left:
            say(f"Remark: {left_in_words(file, [known.name for known in motors])}")
    return 0
