"""The command `motorfolio`: a group whose commands are imported when they are called.

Help must come fast, so nothing here imports more than click; each command's module does what it
needs. Whatever goes wrong for a user ends as one sentence on standard error and a status.
"""

import importlib
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TextIO

import click

from ..schema.errors import MotorfolioError

COMMANDS: dict[str, tuple[str, str]] = {
    # name: (module in commands, what it does)
    "import": ("import_", "Read datasheet tables into the catalog."),
    "check": ("check", "Say which published figures contradict each other, and why."),
    "list": ("list_", "List the motors, or find those that words name."),
    "show": ("show", "Show a motor: constants, figures as published, findings."),
    "search": ("search", "Find the motors that do what a machine asks."),
    "operate": ("operate", "Show a motor at work, under voltage or current control."),
    "gears": ("gears", "Read tables of gears, or list those of the catalog."),
    "compare": ("compare", "Put motors side by side."),
    "plot": ("plot", "Draw a motor, its figures or a search as SVG or PNG."),
    "page": ("page", "Write one HTML file of a catalog or a search that opens offline."),
    "export": ("export", "Write the catalog as CSV, JSON, TOML or Parquet."),
    "convert": ("convert", "Convert a figure from one unit to another."),
    "schema": ("schema", "Print the JSON Schema of a document."),
    "correct": ("correct", "Put a correction in place of a published figure, or revoke it."),
    "readings": ("readings", "List or remove the readings kept for a maker's headings."),
    "same": ("same", "List motors that may be one, in two sheets."),
    "merge": ("merge", "Say that two motors are one."),
    "revisions": ("revisions", "List imports, or the earlier revisions of a motor or gear."),
    "diff": ("diff", "Show what an import changed."),
    "undo": ("undo", "Take an import back."),
    "remove": ("remove", "Take motors or gears out of the catalog."),
}


class LazyGroup(click.Group):
    """Knows its commands by name and one line of help; imports one when it is called."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """The names, in the order of a day's work."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """The command, imported now."""
        if cmd_name not in COMMANDS:
            return None
        module = importlib.import_module(f".commands.{COMMANDS[cmd_name][0]}", __package__)
        return module.command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """As click does; for an unknown name the nearest are offered."""
        if args and args[0] not in COMMANDS and not args[0].startswith("-"):
            from ..schema.spelling import nearest

            near = nearest(args[0].lower(), COMMANDS, most=2)
            hint = f" Did you mean {' or '.join(near)}?" if near else ""
            raise click.UsageError(f'There is no command "{args[0]}".{hint}', ctx)
        return super().resolve_command(ctx, args)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """The list of commands in --help, without importing any."""
        with formatter.section("Commands"):
            formatter.write_dl([(name, text) for name, (_, text) in COMMANDS.items()])


@click.group(
    cls=LazyGroup,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    epilog="Example: motorfolio import sheets/*.csv, then motorfolio check.",
)
@click.option("--catalog", type=click.Path(path_type=Path), metavar="FILE", help="The catalog.")
@click.version_option(package_name="motorfolio", message="motorfolio %(version)s")
def group(catalog: Path | None) -> None:
    """Read electric motors' datasheet tables, bring them to the same SI constants, catch what
    contradicts itself, and find the motor that does the job.

    The catalog is the file given by --catalog, else by the environment variable
    MOTORFOLIO_CATALOG, else motorfolio.sqlite in the working folder.
    """


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command; returns its status: 0 done, 1 what was asked does not hold, 2 unusable."""
    for stream in (sys.stdout, sys.stderr):
        _never_fail_on_a_sign(stream)
    try:
        status = group.main(
            args=None if arguments is None else list(arguments),
            prog_name="motorfolio",
            standalone_mode=False,
        )
        sys.stdout.flush()
    except click.exceptions.NoArgsIsHelpError as error:
        click.echo(error.format_message())
        return 0
    except click.ClickException as error:
        return _refuse(error.format_message())
    except MotorfolioError as error:
        return _refuse(str(error))
    except (click.Abort, KeyboardInterrupt):
        return _refuse("stopped; nothing was changed", status=130)
    except BrokenPipeError:
        # whoever read the output has seen enough; keep Python from complaining at its exit
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except OSError as error:
        where = f" {error.filename}" if error.filename else ""
        return _refuse(f"reading or writing{where} failed: {error.strerror or error}")
    except MemoryError:
        return _refuse("not enough memory; nothing was stored")
    return status if isinstance(status, int) else 0


def _refuse(sentence: str, status: int = 2) -> int:
    from .report.plain import plain

    click.echo(f"motorfolio: {plain(sentence)}", err=True)
    return status


def _never_fail_on_a_sign(stream: TextIO) -> None:
    """A terminal that can't show Ω gets an escape instead of an error."""
    if hasattr(stream, "reconfigure"):
        stream.reconfigure(errors="backslashreplace")  # pyright: ignore[reportAttributeAccessIssue]
