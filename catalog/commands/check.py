"""motorfolio check: findings of the catalog."""

from pathlib import Path

import click

from .common import catalog_option, json_option, print_json


@click.command(
    epilog="Example: motorfolio check EX-24-100 lists what that motor's figures contradict."
)
@click.argument("parts", nargs=-1, metavar="[PART]...")
@catalog_option
@json_option
def command(parts: tuple[str, ...], catalog: Path, as_json: bool) -> int:
    """Say which published figures contradict each other, which one is wrong, and why.

    For the named motors, or for the whole catalog. The exit status is 1 if there is an error.
    """
    from ..store import Catalog

    with Catalog.open(catalog) as opened, opened.at_once():
        findings = opened.findings(parts or None)
        motors = len(set(parts)) if parts else len(opened)
    if as_json:
        print_json({"motors": motors, "findings": findings})
    else:
        from ..report import terminal

        terminal.print_findings(findings, motors)
    return 1 if any(finding["severity"] == "error" for finding in findings) else 0
