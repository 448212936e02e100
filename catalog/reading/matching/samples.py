"""A look at the first cells under a heading: their units and the size of their numbers."""

from ....schema.figure.read import POINT, FigureError, NumberStyle, read_figure
from ...tables.grid import Stored
from ..cells import mark_last


def in_cell_units(
    texts: list[str], style: NumberStyle, marks: frozenset[str] = frozenset()
) -> list[str]:
    """Unit texts that stand in the cells themselves, of the first cells with figures."""
    units: list[str] = []
    seen = 0
    for text in texts[:200]:
        if not text:
            continue
        typed = POINT if isinstance(text, Stored) else style
        try:
            figure = read_figure(mark_last(text, marks), typed, note_marks=marks)
        except FigureError:
            continue
        if figure is None:
            continue
        seen += 1
        if figure.unit and figure.unit not in units:
            units.append(figure.unit)
        if seen > 20:
            break
    return units


def sample_values(texts: list[str], style: NumberStyle, most: int = 25) -> list[float]:
    """The numbers of the first cells that have one, for a look at their size."""
    values: list[float] = []
    for text in texts[:200]:
        if not text:
            continue
        try:
            figure = read_figure(text, POINT if isinstance(text, Stored) else style)
        except FigureError:
            continue
        if figure is not None:
            values.append(figure.value)
        if len(values) >= most:
            break
    return values


def why_unreadable(texts: list[str], style: NumberStyle) -> str:
    """Why the first cells under a heading are no figures, where none of them is ('' elsewhere)."""
    reason = ""
    for text in texts[:200]:
        try:
            if text and read_figure(text, POINT if isinstance(text, Stored) else style):
                return ""
        except FigureError as error:
            reason = reason or error.reason
    return reason
