"""The options of a requirement for the commands that take one, made from their table."""

from pathlib import Path
from typing import Any

import click

from ..requirement.options import OPTIONS, Option, requirement_of, says_the_load

__all__ = ["requirement_of", "requirement_options", "says_the_load"]


def requirement_options(command: click.Command) -> click.Command:
    """The command with the options of a requirement before its own."""
    command.params = [
        *(p for p in command.params if isinstance(p, click.Argument)),
        *map(_option, OPTIONS),
        *(p for p in command.params if not isinstance(p, click.Argument)),
    ]
    return command


def _option(option: Option) -> click.Option:
    more: dict[str, Any] = {}
    match option.kind:
        case "many":
            more = {"multiple": True}
        case "flag":
            more = {"is_flag": True}
        case "maybe":
            more = {"is_flag": False, "flag_value": option.given}
    if option.name == "requirement":
        more["type"] = click.Path(path_type=Path)
    if option.sign:
        more["metavar"] = option.sign
    return click.Option([option.flag, option.name], help=option.help, **more)
