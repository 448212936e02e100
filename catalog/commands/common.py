"""What commands share: the options --catalog and --json, printing a document, writing a file."""

import json
import os
import sys
import tempfile
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any, TextIO

import click

from ...schema.errors import MotorfolioError

Function = Callable[..., Any]


def _before_the_command(context: click.Context, parameter: click.Parameter, value: Path) -> Path:
    """--catalog may also stand before the command's name: motorfolio --catalog FILE check."""
    given = context.get_parameter_source(parameter.name or "")
    if given is click.core.ParameterSource.COMMANDLINE:
        return value
    return context.find_root().params.get("catalog") or value


def catalog_option(function: Function) -> Function:
    """Adds --catalog; the command gets a Path."""
    return click.option(
        "--catalog",
        type=click.Path(path_type=Path),
        envvar="MOTORFOLIO_CATALOG",
        default=Path("motorfolio.sqlite"),
        show_default="MOTORFOLIO_CATALOG, else motorfolio.sqlite",
        metavar="FILE",
        callback=_before_the_command,
        help="The catalog.",
    )(function)


def json_option(function: Function) -> Function:
    """Adds --json; the command gets ``as_json``."""
    return click.option(
        "--json", "as_json", is_flag=True, help="Print one JSON document and nothing else."
    )(function)


def print_json(document: Any) -> None:
    """Print a document; laid out for a person where a person sees it."""
    indent = 2 if sys.stdout.isatty() else None
    json.dump(document, sys.stdout, ensure_ascii=False, indent=indent, allow_nan=False)
    sys.stdout.write("\n")


def say(message: str) -> None:
    """A message to the person, on standard error."""
    from ..report.plain import plain

    click.echo(plain(message), err=True)


@contextmanager
def replacing(output: Path) -> Iterator[tuple[Path, TextIO]]:
    """A file beside the output that takes its place when all is written."""
    if not output.parent.is_dir():
        raise MotorfolioError(f"There is no folder {output.parent} to write {output.name} into.")
    handle, name = tempfile.mkstemp(prefix=f".{output.name}.", dir=output.parent)
    path = Path(name)
    try:
        with open(handle, "w", encoding="utf-8", newline="") as out:
            yield path, out
        path.chmod(0o666 & ~_umask())
        path.replace(output)
    except BaseException:
        path.unlink(missing_ok=True)
        raise


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
