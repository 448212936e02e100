"""One table → its batches: the cells of every heading read, and put where they belong."""

import re
from collections.abc import Iterator, Sequence

import numpy as np

from ....schema.batch import Batch
from ....schema.convention import Convention
from ....schema.vocabulary import Quantity, quantity
from ..model import Unread
from .decide import Decisions
from .facts import apply_connections, own_references, put_connection, put_texts
from .figures import Values, as_column, read_values
from .further import FurtherRows
from .gather import Column, Conditions, Listing, Points, fill_gaps, place
from .kind import note_tolerance
from .naming import motor_names, titled
from .said import cell_conventions

CHUNK = 20_000
"""Motors in one batch of a long table."""

_NO_CONDITION = re.compile(r"-?[\d.]+ °C|otherwise")
"""A temperature is a convention of the figure: where a motor has it at that one alone, it is its
figure; else the others are those of a condition."""

_EXACT = frozenset(
    {"nominal_voltage", "mains_voltage", "mass", "price", "poles", "pole_pairs", "phases"}
)
"""Quantities for which a table's tolerance ("all values ±10 %") does not hold."""


class TableReader(Decisions):
    """Reads one table: decides on all headings once, then turns rows into batches."""

    def batch(self) -> Batch:
        """The table as one batch."""
        ids = self.ids()
        texts = [m.field.texts for m in self.matches]
        places = [m.field.places or self.table.places for m in self.matches]
        return self._build(ids, texts, places, self.unread)

    def lazily(self, unread: list[Unread]) -> Iterator[Batch]:
        """Batches of the head and of every chunk that follows; the headings are decided."""
        unread += self.unread
        ids = self.ids()
        sources = [m.field.source for m in self.matches]
        id_source = self.id_field.source if self.id_field is not None else None
        fields = [m.field.texts for m in self.matches]
        places = list(self.table.places)
        for start in range(0, len(places), CHUNK):
            piece = slice(start, start + CHUNK)
            yield self._build(
                ids[piece], [t[piece] for t in fields], [places[piece]] * len(fields), unread
            )
        further = FurtherRows(self.table, self.matches, unread)
        self.table.places = []
        for m in self.matches:
            m.field.texts = []
        for numbers, rows in self.table.continuation or ():
            numbers, rows = further.motors(numbers, rows)
            for start in range(0, len(rows), CHUNK):
                some = rows[start : start + CHUNK]
                columns = list(map(list, zip(*some, strict=False)))
                blank = [""] * len(some)
                texts = [columns[s] if s < len(columns) else blank for s in sources]
                part = columns[id_source] if id_source is not None else blank
                numbered = numbers[start : start + CHUNK]
                yield self._build([t or None for t in part], texts, [numbered] * len(texts), unread)

    def _build(
        self,
        ids: Sequence[str | None],
        texts: list[list[str]],
        places: list[list[int]],
        unread: list[Unread],
    ) -> Batch:
        batch = self._bare(ids, places[0] if places else [], unread)
        put_texts(self, batch, texts, places)
        put_connection(self, batch)
        listing = Listing(self.table, batch.part_number, unread)
        points, conditions = Points(), Conditions()
        wants_points = any(m.role == "point" for m in self.matches)
        for index, m in enumerate(self.matches):
            if m.role in ("unread", "text"):
                continue
            column = Column(m, texts[index], *self.places_of(m.field, places[index]))
            if m.point is not None:
                q = Quantity(m.point[1], unit=m.units[0].si, zero=True)
                points.add(column, self._values(column, q, None, listing), m.point)
                continue
            assert m.key is not None
            q = quantity(m.key)
            values = self._values(column, q, self._tolerance(column), listing)
            convention = self.conventions[index] or Convention()
            figure = as_column(values, column.texts, index, column.rows, column.columns)
            figure.conventions = [convention]
            cell_conventions(figure, values, q, convention, self.notes)
            if m.role == "condition":
                if _NO_CONDITION.fullmatch(m.when):
                    fill_gaps(batch, q.key, figure)
                    values.value = figure.value
                conditions.add(column, values, convention, m.when)
                conditions.list_twice(column, values, m.when, listing)
                continue
            place(batch, column, figure)
            if values.second is not None:
                if values.second_is_variant:
                    conditions.add(column, values.second, convention, "with brake")
                else:
                    again = as_column(
                        values.second, column.texts, index, column.rows, column.columns
                    )
                    again.conventions = [convention]
                    batch.repeats.setdefault(q.key, []).append(again)
            if wants_points:
                points.add_too(column, values)
        apply_connections(self, batch)
        own_references(self, batch)
        batch.conditions = list(conditions.found.values())
        batch.points = points.by_motor()
        return batch

    def _bare(
        self, ids: Sequence[str | None], places: Sequence[int], unread: list[Unread]
    ) -> Batch:
        """The motors of a batch without figures."""
        n = len(ids)
        maker = self.options.maker or titled(self.table, "maker") or ""
        series = self.options.series or titled(self.table, "series")
        names = motor_names(self.table, self.stem, ids, places, unread, self.remarks)
        return Batch(
            source=self.source,
            part_number=names,
            maker=[maker] * n,
            series=[series] * n,
            headings=self.headings,
            figures={},
            commutation=np.full(n, int(self.commutation), dtype=np.int8),
            commutation_basis=np.full(n, self.commutation_basis, dtype=np.int8),
            magnet=[self.magnet] * n,
            magnet_basis=np.full(n, self.magnet_basis, dtype=np.int8),
            reference_temperature=np.full(n, self.reference),
            reference_temperature_basis=np.full(n, self.reference_basis, dtype=np.int8),
            notes=list(self.notes.texts),
        )

    def _tolerance(self, column: Column) -> float | None:
        """The tolerance that a heading, its footnote or a note states, as a fraction."""
        label, marked = column.match.field.label, self.notes.marked
        notes = [marked[x] for x in label.marks if x in marked]
        own = label.tolerance or next((t for n in notes if (t := note_tolerance(n))), None)
        return own if column.match.key in _EXACT else own or self.notes.tolerance

    def _values(
        self, column: Column, q: Quantity, tolerance: float | None, listing: Listing
    ) -> Values:
        """The cells of a column in SI; those that are not read are listed."""
        m = column.match
        marks = frozenset(self.notes.marked)
        values = read_values(column.texts, q, m.units, self.style_of(m), marks, tolerance)
        if q.key in ("nominal_voltage", "mains_voltage"):
            plainly = [i for i in range(len(column.texts)) if i not in values.qualifiers]
            values.low[plainly] = values.high[plainly] = values.value[plainly]
        for failure in values.failures:
            listing.add(column, failure)
        said = [f"{m.field.heading}: {remark}" for remark in values.remarks]
        self.remarks += [remark for remark in said if remark not in self.remarks]
        return values
