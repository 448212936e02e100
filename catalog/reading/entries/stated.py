"""Figures that lines above a table state for all its motors: "Nominal voltage: 24 V"."""

import re
from collections.abc import Sequence

from ....schema.figure.read import FigureError, NumberStyle, read_figure
from ....schema.figure.signs import plain
from ....schema.units.read import UnitError, read_unit
from ....schema.vocabulary import quantity
from ..headings.label import parse_label
from ..layout.columns import figure_behind
from ..matching.match import Match
from ..model import Field, Table

_LINE = re.compile(r"(?P<heading>[^\d:=：][^:=：]{1,40}?)\s*[:=：]\s*(?P<figure>[<>≤≥~]?\s?\d.*)")

_PIECES = re.compile(r"[,;]\s+(?=[^\W\d])")
"""Where on one line the next of several figures begins: "Voltage 24 V, weight 0.3 kg"."""


def stated_figures(table: Table, matches: Sequence[Match], style: NumberStyle) -> list[Match]:
    """The figures of lines about the table, of quantities that the table itself does not give."""
    known = {m.key for m in matches}
    found: list[Match] = []
    about = [(text, True) for text in table.titles] + [(text, False) for text in table.notes]
    lines = ((plain(line), above) for text, above in about for line in text.split("\n"))
    for piece, above in ((piece, above) for line, above in lines for piece in _PIECES.split(line)):
        at = _LINE.fullmatch(piece)
        pair = (at["heading"], at["figure"]) if at else figure_behind(piece) if above else None
        if pair is None:
            continue
        heading, text = pair
        label = parse_label(heading)
        keys = {k for p in label.names if p.score >= 0.96 for k in p.keys}
        if len(keys) != 1 or label.other or keys & known or quantity(min(keys)).text:
            continue
        q = quantity(keys.pop())
        try:
            figure = read_figure(text, style)
            own = figure.unit if figure is not None else ""
            unit = read_unit(own or (label.units[0] if label.units else ""), q.accepts)
        except (FigureError, UnitError):
            continue
        known.add(q.key)
        field = Field(heading, label, [text] * table.count, 0, 0)
        field.places, field.layout = [0] * table.count, "rows"
        reason = "a line about the table states it for all its motors"
        found.append(Match(field, "figure", q.key, 0.9, [unit], reason))
    return found
