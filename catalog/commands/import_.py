"""motorfolio import: files into the catalog."""

import sys
import threading
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

import click

from .common import catalog_option, json_option, print_json, say

if TYPE_CHECKING:
    from ..importing.result import ImportResult
    from ..importing.run import Progress

FORMATS = ("csv", "tsv", "text", "json", "toml", "html")
SHOW_PROGRESS_AFTER = 1.0
MOST_PAIRS = 5
MOST_COMPARED = 5000
"""With more motors, or ten times as many in the catalog, motorfolio same is left to be called."""


def _overrides(
    ctx: click.Context, parameter: click.Parameter, values: Sequence[str]
) -> dict[str, str]:
    found: dict[str, str] = {}
    for value in values:
        heading, equals, reading = value.rpartition("=")
        if not equals or not heading.strip() or not reading.strip():
            raise click.BadParameter(
                f'"{value}" should read HEADING=quantity[:unit[:convention]], such as '
                '"Kt=torque_constant:mN·m/A:rms"'
            )
        found[heading.strip()] = reading.strip()
    return found


@click.command(
    "import",
    epilog="Example: motorfolio import --maker Examplar --dry-run windings.csv shows how every "
    "cell of the table would be read, and stores nothing.",
)
@click.argument("files", nargs=-1, required=True, metavar="FILE...")
@click.option("--maker", metavar="NAME", help="The maker, where the tables don't say.")
@click.option("--series", metavar="NAME", help="The series that the motors belong to.")
@click.option("--sheet", metavar="NAME", help="Read only this sheet of a workbook.")
@click.option(
    "--format", "format_", type=click.Choice(FORMATS), help="The format, for standard input (-)."
)
@click.option(
    "--set", "overrides", multiple=True, callback=_overrides,
    metavar='"HEADING=quantity[:unit[:convention]]"',
    help="Read this heading so; a convention is words joined by +, such as rms+lines.",
)  # fmt: skip
@click.option("--keep", is_flag=True, help="Use what --set says for the maker's further files too.")
@click.option(
    "--commutation",
    type=click.Choice(["brushed", "block", "sinusoidal"]),
    help="How the motors are commutated.",
)
@click.option("--dry-run", is_flag=True, help="Show the table as it would be read; store nothing.")
@click.option(
    "--strict", is_flag=True, help="Store nothing if a cell can't be read or a figure is in error."
)
@catalog_option
@json_option
def command(
    files: tuple[str, ...],
    maker: str | None,
    series: str | None,
    sheet: str | None,
    format_: str | None,
    overrides: dict[str, str],
    keep: bool,
    commutation: str | None,
    dry_run: bool,
    strict: bool,
    catalog: Path,
    as_json: bool,
) -> int:
    """Read datasheet tables and store their motors.

    A FILE is CSV, TSV, text, a workbook, PDF, HTML, JSON, TOML or Parquet; - is standard input.
    Headings and units are recognised, with one motor a row or one a column; what can't be read is
    listed. All files of a call are stored, or none.
    """
    from ..importing.run import Options, import_files
    from ..report.imported import print_import

    if "-" in files and format_ is None:
        raise click.UsageError(f"standard input needs --format, one of {', '.join(FORMATS)}")
    if keep and not overrides:
        raise click.UsageError("--keep keeps what --set says; give --set too")
    options = Options(
        maker=maker, series=series, sheet=sheet, format=format_, commutation=commutation,
        overrides=overrides, keep=keep, strict=strict, dry_run=dry_run,
    )  # fmt: skip
    with _progress() as progress:
        result = import_files(
            catalog, files, options, with_documents=as_json or dry_run,
            standard_input=lambda: sys.stdin.buffer.read(), progress=progress,
        )  # fmt: skip
    if as_json:
        print_json(result.as_json())
    else:
        print_import(result, catalog, dry_run=dry_run)
        if any(file.stored for file in result.files):
            _print_same(catalog, result)
    if result.refused:
        say("Nothing was stored: --strict, and something could not be read or is in error.")
        return 1
    return 0


def _print_same(catalog: Path, result: "ImportResult") -> None:
    """Motors of this import that another sheet seems to have too."""
    from ..report.lists import print_pairs
    from ..same_motors import pairs
    from ..store import Catalog

    if sum(file.stored for file in result.files) > MOST_COMPARED:
        return
    with Catalog.open(catalog) as opened:
        if len(opened) > 10 * MOST_COMPARED:
            return
        last = opened.imports()[-1].id
        print_pairs(pairs(opened, opened.motors_of(last)), MOST_PAIRS)


@contextmanager
def _progress() -> "Iterator[Progress | None]":
    """A bar on standard error for whatever takes longer than a second; on a terminal only."""
    if not sys.stderr.isatty():
        yield None
        return
    from rich.console import Console
    from rich.progress import Progress as Bar
    from rich.progress import SpinnerColumn, TextColumn, TimeElapsedColumn

    columns = (SpinnerColumn(), TextColumn("{task.description}", markup=False), TimeElapsedColumn())
    bar = Bar(*columns, console=Console(stderr=True), transient=True)
    task = bar.add_task("")
    # from a thread of its own: reading a long file may say nothing for a while
    start = threading.Timer(SHOW_PROGRESS_AFTER, bar.start)
    start.start()

    def report(file: str, motors: int) -> None:
        bar.update(task, description=f"{file}: {motors} motors" if motors else f"{file}: reading")

    try:
        yield report
    finally:
        start.cancel()
        start.join()
        bar.stop()
