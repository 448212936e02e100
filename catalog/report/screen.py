"""The terminal: a console that never lies about colour, and a pager where a list is long."""

import sys
from collections.abc import Callable

import click
from rich.console import Console

NARROWEST = 80


def console() -> Console:
    """Standard output, at least 80 columns wide; no colour without a terminal or with NO_COLOR.

    Nothing that is printed is taken as markup, an emoji code or something to highlight.
    """
    out = Console(markup=False, highlight=False, emoji=False)
    if out.width < NARROWEST:
        out.width = NARROWEST
    return out


def paged(draw: Callable[[Console], None]) -> None:
    """Draw on standard output; on a terminal that it overflows, through the user's pager."""
    out = console()
    if not (out.is_terminal and sys.stdout.isatty()):
        draw(out)
        return
    with out.capture() as captured:
        draw(out)
    text = captured.get()
    if text.count("\n") < out.height:
        click.echo(text, nl=False)
    else:
        click.echo_via_pager(text)
