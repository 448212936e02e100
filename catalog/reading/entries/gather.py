"""Where the figures of one batch of motors go: to the motor, a condition, or a point."""

from dataclasses import dataclass, field

import numpy as np

from ....schema.batch import (
    Batch,
    Condition,
    FigureColumn,
    Floats,
    Ints,
    PlacedFigure,
    Point,
    empty_figures,
)
from ....schema.convention import Convention
from ..headings.phrase import point_key
from ..matching.match import Match
from ..model import Table, Unread
from .figures import Failure, Values


@dataclass(slots=True)
class Column:
    """The cells of the motors under one heading, with their places in the file."""

    match: Match
    texts: list[str]
    rows: Ints
    columns: Ints


@dataclass(slots=True)
class Listing:
    """Lists cells that were not read, each with its motor, heading and place."""

    table: Table
    names: list[str]
    unread: list[Unread]

    def add(self, column: Column, failure: Failure) -> None:
        """One cell of a column, and why it was not read."""
        m, i = column.match, failure.motor
        self.unread.append(
            Unread(
                self.names[i], m.field.heading, self.table.sheet, self.table.page,
                int(column.rows[i]), int(column.columns[i]), failure.text, failure.reason,
                failure.guesses or ((m.key,) if m.key else ()),
            )
        )  # fmt: skip


def read_motors(values: Floats) -> list[int]:
    """The motors for which a figure was read."""
    return np.flatnonzero(~np.isnan(values)).tolist()


def place(batch: Batch, column: Column, figure: FigureColumn) -> None:
    """A motor's first figure of a quantity stands, every further one checks it."""
    key = column.match.key
    assert key is not None
    if column.match.role == "figure" and key not in batch.figures:
        batch.figures[key] = figure
        return
    fill_gaps(batch, key, figure)
    if not np.isnan(figure.value).all():
        batch.repeats.setdefault(key, []).append(figure)


def fill_gaps(batch: Batch, key: str, figure: FigureColumn) -> None:
    """Let motors that lack the figure have this one, and take it out of ``figure``."""
    first = batch.figures.setdefault(key, empty_figures(len(batch)))
    gaps = np.isnan(first.value) & ~np.isnan(figure.value)
    if gaps.any():
        _fill(first, figure, gaps)
        figure.value = np.where(gaps, np.nan, figure.value)


def _fill(first: FigureColumn, other: FigureColumn, where: np.ndarray) -> None:
    for name in ("value", "low", "high", "heading", "row", "column"):
        getattr(first, name)[where] = getattr(other, name)[where]
    base = len(first.conventions)
    first.conventions = [*first.conventions, *other.conventions]
    first.convention[where] = other.convention[where] + base
    for k in np.flatnonzero(where).tolist():
        first.text[k] = other.text[k]
        if k in other.qualifiers:
            first.qualifiers[k] = other.qualifiers[k]


@dataclass(slots=True)
class Conditions:
    """The figures that motors have under further conditions, by the condition's text."""

    found: dict[str, Condition] = field(default_factory=dict)

    def add(self, column: Column, values: Values, convention: Convention, when: str) -> None:
        """The read cells of a column, under a condition; a first figure stands."""
        condition = self.found.setdefault(when, Condition(when))
        m = column.match
        assert m.key is not None
        for k in read_motors(values.value):
            condition.figures.setdefault(k, {}).setdefault(m.key, PlacedFigure(
                float(values.value[k]), float(values.low[k]), float(values.high[k]),
                column.texts[k], m.units[0].text if m.units else "", convention,
                values.qualifiers.get(k), int(column.rows[k]), int(column.columns[k]),
            ))  # fmt: skip

    def list_twice(self, column: Column, values: Values, when: str, listing: Listing) -> None:
        """List the figures that a condition has already, with another value."""
        key = column.match.key
        assert key is not None
        for k in read_motors(values.value):
            first = self.found[when].figures[k][key]
            if first.value != values.value[k]:
                reason = f'"{when}" has this figure already: {first.text}'
                listing.add(column, Failure(k, column.texts[k], reason))


@dataclass(slots=True)
class Points:
    """The operating points of motors, by motor and section."""

    found: dict[int, dict[str, Point]] = field(default_factory=dict)

    def add(self, column: Column, values: Values, point: tuple[str, str]) -> None:
        """The read cells of a column as figures of the point (section, generic name)."""
        section, generic = point
        key = point_key(section, generic)
        if key is None:
            return
        for i in read_motors(values.value):
            mine = self.found.setdefault(i, {})
            name = section.replace("_", " ")
            home = mine.setdefault(section, Point(name, {}, int(column.rows[i])))
            home.figures.setdefault(key, float(values.value[i]))

    def add_too(self, column: Column, values: Values) -> None:
        """A motor's figure that belongs to an operating point stands there as well."""
        m = column.match
        for phrase in m.field.label.names:
            section = phrase.section or m.field.section
            if phrase.generic and section and m.role == "figure":
                self.add(column, values, (section, phrase.generic))
                return

    def by_motor(self) -> dict[int, list[Point]]:
        """Every motor's points in the order of the sheet."""
        return {i: list(points.values()) for i, points in self.found.items()}
