"""Tables whose first heading names another part (encoder, brake, drive) and no motor."""

from ..headings.label import names_part
from ..headings.phrase import part_of
from ..model import Table

_OF_MOTORS = {
    "torque_constant", "back_emf_constant", "speed_constant", "terminal_resistance",
    "terminal_inductance", "no_load_speed", "no_load_current", "motor_constant", "pole_pairs",
}  # fmt: skip
"""Figures that none of the parts has: with them a table is one of motors whatever heads it."""


def mark_other_parts(table: Table, head: str) -> None:
    """Under a heading "Encoder" or "Brake type" over the names all figures are that part's."""
    part = part_of(head)
    if part is None or any(names_part(f.label) for f in table.fields):
        return
    keys = {k for f in table.fields for p in f.label.names if p.score >= 0.85 for k in p.keys}
    if keys & _OF_MOTORS:
        return
    for f in table.fields:
        f.part = part
