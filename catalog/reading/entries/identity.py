"""Rows with one part number that are other motors: frame and winding, winding and voltage."""

import re
from collections import defaultdict
from collections.abc import Sequence

import numpy as np

from ....schema.figure.read import NumberStyle
from ....schema.figure.signs import plain
from ..cells import is_figure
from ..matching.match import Match
from ..matching.samples import sample_values
from ..model import Field, Table

_WINDING = ("terminal_resistance", "torque_constant", "back_emf_constant", "terminal_inductance")
"""What differs from winding to winding and not from condition to condition."""

_APART = 1.1
"""So far apart two figures are of two windings: a warm winding's resistance is named as such."""


_CODE = re.compile(r"(?=.*\d)(?=.*[^\W\d_]).{2,40}")


_LETTERED = re.compile(r"\d{3,}[A-Z]{1,3}\d*")
"""2232S: a number with a letter that is no unit of what a first column could hold."""


def first_codes(table: Table) -> Field | None:
    """The first column where its texts are unlike codes and no heading says "part number"."""
    if table.layout != "rows" or table.part_numbers or table.count < 2 or not table.fields:
        return None
    first = min(table.fields, key=lambda f: f.source)
    keys = {k for p in first.label.names for k in p.keys}
    if keys - {"series"} or first.units or first.part or first.label.other:
        return None
    if not _distinct(first.texts) or not all(first.texts):
        return None
    codes = sum(
        1
        for t in first.texts
        if _CODE.fullmatch(plain(t)) and (_LETTERED.fullmatch(plain(t)) or not is_figure(t))
    )
    if codes < 0.9 * table.count:
        return None
    table.remarks.append(
        f'"{plain(first.heading)}" is taken for the part numbers: the first column, a code a motor'
    )
    return first


def by_frame_and_winding(table: Table, ids: Field) -> None:
    """Where a part number stands under several frames ("012" of two types), join both names."""
    mine = _filled_down(ids.texts)
    letters = all(len(t) <= 2 for t in mine) and len(mine) > 1  # windings A, B, C of one frame
    if table.layout != "rows" or table.continuation is not None:
        return
    if _distinct(mine) and not letters:
        return
    for other in table.fields:
        keys = {k for p in other.label.names for k in p.keys}
        if other is ids or other.units or other.part or not keys & {"part_number", "series"}:
            continue
        frames = _filled_down(other.texts)
        pair = (frames, mine) if other.source < ids.source else (mine, frames)
        joined = [f"{a} {b}".strip() for a, b in zip(*pair, strict=True)]
        if all(mine) and all(frames) and _distinct(joined) and joined != mine:
            ids.texts = joined
            table.remarks.append(
                f'the part numbers are joined from "{plain(other.heading)}" and '
                f'"{plain(ids.heading)}", since neither tells the motors apart'
            )
            return


def by_voltage(
    table: Table, matches: Sequence[Match], ids: Field | None, style: NumberStyle
) -> None:
    """Where rows of one part number have other winding constants, the voltage tells them apart."""
    if ids is None or table.layout != "rows" or table.continuation is not None:
        return
    volts = next((m for m in matches if m.key == "nominal_voltage" and m.role == "figure"), None)
    if volts is None or _distinct(ids.texts):
        return
    makers = next((m.field.texts for m in matches if m.key == "maker"), [""] * len(ids.texts))
    groups: dict[tuple[str, str], list[int]] = defaultdict(list)
    for k, text in enumerate(ids.texts):
        if text:
            groups[makers[k], text].append(k)
    windings = [m.field for m in matches if m.role == "figure" and m.key in _WINDING]
    unit = volts.units[0].text or "V"
    for (_, name), rows in groups.items():
        voltages = [volts.field.texts[k] for k in rows]
        if len(rows) < 2 or not all(voltages) or not _distinct(voltages):
            continue
        if any(_apart([f.texts[k] for k in rows], style) for f in windings):
            for k, voltage in zip(rows, voltages, strict=True):
                own = plain(voltage)
                ids.texts[k] = f"{name} {own}" if own[-1:].isalpha() else f"{name} {own} {unit}"
            table.remarks.append(
                f'"{name}" stands on {len(rows)} rows with other winding constants: each is a '
                "motor, told apart by its voltage"
            )


def _apart(texts: list[str], style: NumberStyle) -> bool:
    values = [v for v in sample_values(texts, style) if v > 0]
    return len(values) == len(texts) and float(np.max(values)) > _APART * float(np.min(values))


def _distinct(texts: Sequence[str]) -> bool:
    filled = [t for t in texts if t]
    return len(set(filled)) == len(filled)


def _filled_down(texts: Sequence[str]) -> list[str]:
    out: list[str] = []
    for text in texts:
        out.append(text or (out[-1] if out else ""))
    return out
