"""Motors in a line each, and pairs of them that may be one."""

import shlex
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

from rich.console import Console
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from ..documents import Document
from . import plain as p
from .screen import paged
from .terminal import SEVERITIES, table, whole

if TYPE_CHECKING:
    from ..same_motors import Pair

_SHORT = {"torque_constant": "Km", "armature_resistance": "Ra", "rotor_inertia": "J"}
_COLUMNS = {
    "nominal_voltage": "U",
    "torque_constant": "Km",
    "armature_resistance": "Ra",
    "rotor_inertia": "J",
    "mass": "mass",
}


def print_motors(motors: Sequence[Document]) -> None:
    """The motors by maker, with their constants and how many findings they have."""

    def draw(out: Console) -> None:
        makers: dict[str, list[Document]] = {}
        for motor in motors:
            makers.setdefault(motor["maker"] or "", []).append(motor)
        for maker, group in makers.items():
            out.print(Text(p.plain(maker) or "maker unknown", style="bold"))
            out.print(_table(group))
        out.print(p.many(len(motors), "motor") + ".")

    paged(draw)


def _table(motors: Iterable[Document]) -> Table:
    shown = table("Motor", *_COLUMNS.values(), "Findings", right=tuple(_COLUMNS.values()))
    whole(shown, *range(len(_COLUMNS) + 2))
    for motor in motors:
        figures = [p.quantity(motor[k]["value"], motor[k]["unit"], 3) for k in _COLUMNS]
        said = [p.many(n, severity) for severity in SEVERITIES
                if severity != "note" and (n := motor["findings"].get(severity, 0))]  # fmt: skip
        shown.add_row(Text(p.plain(motor["part_number"])), *figures, ", ".join(said))
    return shown


def print_pairs(pairs: Sequence["Pair"], most: int | None = None) -> None:
    """Both names with their sheets, what agrees, and the command that makes them one."""

    def draw(out: Console) -> None:
        for pair in pairs[:most]:
            _print_pair(out, pair)
        if most is not None and len(pairs) > most:
            out.print(f"… and {p.many(len(pairs) - most, 'pair')} more (motorfolio same)")

    paged(draw)


def _print_pair(out: Console, pair: "Pair") -> None:
    """A pair in three lines; the last one can be copied."""
    known = [entry.known for entry in (pair.first, pair.second)]
    agreeing = ", ".join(
        f"{_SHORT[key]} {p.percent(ratio - 1, 1, signed=True)}"
        for key, ratio in pair.agreeing.items()
    )
    parts = [k.part_number for k in known]
    out.print(Text(p.plain(f"{parts[0]} and {parts[1]} may be one motor: {agreeing} apart")))
    for entry in (pair.first, pair.second):
        said = f"{entry.known.name} in {entry.file}"
        out.print(Padding(Text(p.plain(said)), (0, 0, 0, 4)))
    names = parts if parts[0] != parts[1] else [k.name for k in known]
    command = f"    motorfolio merge {' '.join(map(shlex.quote, names))}"
    out.print(Text(p.plain(command)), soft_wrap=True)
