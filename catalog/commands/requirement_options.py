"""The options of a requirement, as `search` has them, for the other commands that take one."""

from typing import TYPE_CHECKING, Any

import click

from . import search

if TYPE_CHECKING:
    from ..requirement.read import Requirement

_OWN = ("catalog", "as_json", "explain", "save_requirement")
_LOAD = ("torque", "speed", "cycle", "requirement")


def requirement_options(command: click.Command) -> click.Command:
    """The command with the options of a requirement before its own."""
    command.params = [
        *(p for p in command.params if isinstance(p, click.Argument)),
        *(p for p in search.command.params if p.name not in _OWN),
        *(p for p in command.params if not isinstance(p, click.Argument)),
    ]
    return command


def says_the_load(options: dict[str, Any]) -> bool:
    """Whether the options say what the load does."""
    return any(options[name] for name in _LOAD)


def requirement_of(options: dict[str, Any], *, load: bool = True) -> "Requirement":
    """The requirement; without ``load`` that of a shaft of which nothing is asked."""
    if not load:
        options = options | {"torque": ("0 N·m",), "speed": ("0 rad/s",)}
    return search._requirement(options)
