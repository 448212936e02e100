"""One table → its batches: the cells of every heading read, and put where they belong."""

import re
from collections.abc import Iterator, Sequence
from dataclasses import replace

import numpy as np

from ...schema.batch import (
    MAGNETS,
    MODEL_BASES,
    Batch,
    Condition,
    FigureColumn,
    Ints,
    PlacedFigure,
    Point,
    TextColumn,
    empty_figures,
)
from ...schema.convention import Commutation, Convention, default_convention
from ...schema.figure.signs import plain
from ...schema.vocabulary import Quantity, quantity
from .cells import missing
from .decide import REFERENCE_FIGURES, UNSTATED_REFERENCE, Decisions
from .figures import Values, as_column, read_values
from .kind import ASSUMED, STATED, TOLD, in_words, note_tolerance
from .label import parse_label
from .match import Match
from .model import Field, Unread
from .phrase import point_key
from .said import cell_conventions

_EXPORTED_FACT = re.compile(r"\((told|stated|inferred|assumed)\)$")
"""What an export says of a fact that no text figure gives: known as before, and no figure."""

_SENTENCE_END = re.compile(r"[;；。]|(?:(?<=[a-z]{4})|(?<=\)))\.\s+(?=\w)")
"""Where a name in a title line ends; "Co." and "Corp." end none."""

CHUNK = 20_000
"""Motors in one batch of a long table."""


_NO_CONDITION = re.compile(r"-?[\d.]+ °C|otherwise")
"""A temperature is a convention of the figure: where a motor has it at that one alone, it is its
figure; else the others are those of a condition."""


def _fill_gaps(batch: Batch, key: str, figure: FigureColumn, values: Values) -> None:
    """Let motors that lack the figure have this one, and take it out of ``values``."""
    first = batch.figures.setdefault(key, empty_figures(len(batch)))
    gaps = np.isnan(first.value) & ~np.isnan(figure.value)
    if gaps.any():
        _fill(first, figure, gaps)
        values.value = np.where(gaps, np.nan, values.value)


class TableReader(Decisions):
    """Reads one table: decides on all headings once, then turns rows into batches."""

    def _unread_cell(
        self, out: list[Unread], part: str | None, m: Match, place: tuple[int, int],
        text: str, reason: str, guesses: tuple[str, ...],
    ) -> None:  # fmt: skip
        out.append(
            Unread(
                part, m.field.heading, self.table.sheet, self.table.page, place[0], place[1],
                text, reason, guesses or ((m.key,) if m.key else ()),
            )
        )  # fmt: skip

    def batch(self) -> Batch:
        """The table as one batch."""
        ids = self._ids()
        texts = [m.field.texts for m in self.matches]
        places = [m.field.places or self.table.places for m in self.matches]
        return self._build(ids, texts, places, self.unread)

    def lazily(
        self, continuation: Iterator[tuple[list[int], list[list[str]]]] | None, unread: list[Unread]
    ) -> Iterator[Batch]:
        """Batches of the head and of every chunk that follows; the headings are decided."""
        unread += self.unread
        ids = self._ids()
        sources = [m.field.source for m in self.matches]
        id_source = self.id_field.source if self.id_field is not None else None
        head = self.table.head
        heads = {tuple(r) for r in head}
        fields = [m.field.texts for m in self.matches]
        places = list(self.table.places)
        for start in range(0, len(places), CHUNK):
            piece = slice(start, start + CHUNK)
            yield self._build(
                ids[piece], [t[piece] for t in fields], [places[piece]] * len(fields), unread
            )
        self.table.places = []
        for m in self.matches:
            m.field.texts = []
        for numbers, rows in continuation or ():
            keep = [
                k
                for k, row in enumerate(rows)
                if len(row) - row.count("") > 1 and tuple(row) not in heads
            ]
            if len(keep) < len(rows):
                kept = set(keep)
                for k, row in enumerate(rows):
                    if k not in kept and any(row) and tuple(row) not in heads:
                        unread.append(
                            Unread(None, "", self.table.sheet, self.table.page, numbers[k], 1,
                                   " ".join(t for t in row if t), "a row with a single cell")
                        )  # fmt: skip
                rows, numbers = [rows[k] for k in keep], [numbers[k] for k in keep]
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
        n = len(ids)
        maker = self.options.maker or self._titled("maker") or ""
        series = self.options.series or self._titled("series")
        names = self._names(ids, places[0] if places else [], unread)
        batch = Batch(
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
        self._text_columns(batch, texts, places)
        self._stated_connection(batch)
        marks = frozenset(self.notes.marked)
        points: dict[int, dict[str, Point]] = {}
        wants_points = any(m.role == "point" for m in self.matches)
        conditions: dict[str, Condition] = {}
        for index, m in enumerate(self.matches):
            if m.role in ("unread", "text"):
                continue
            column = texts[index]
            rows, columns = self._places(m.field, places[index])
            if m.role == "point":
                self._to_points(points, m, column, rows, marks, unread, names, columns)
                continue
            assert m.key is not None
            q = quantity(m.key)
            marked = [self.notes.marked[x] for x in m.field.label.marks if x in self.notes.marked]
            own = m.field.label.tolerance or next(
                (t for n in marked if (t := note_tolerance(n))), None
            )
            tolerance = own or self.notes.tolerance
            if q.key in (
                "nominal_voltage",
                "mains_voltage",
                "mass",
                "price",
                "poles",
                "pole_pairs",
                "phases",
            ):
                tolerance = own
            values = read_values(column, q, m.units, self.style, marks, tolerance)
            if q.key in ("nominal_voltage", "mains_voltage"):
                plainly = [i for i in range(n) if i not in values.qualifiers]
                values.low[plainly] = values.high[plainly] = values.value[plainly]
            for failure in values.failures:
                place = (int(rows[failure.motor]), int(columns[failure.motor]))
                self._unread_cell(
                    unread,
                    names[failure.motor],
                    m,
                    place,
                    failure.text,
                    failure.reason,
                    failure.guesses,
                )
            self.remarks += [
                f"{m.field.heading}: {r}"
                for r in values.remarks
                if f"{m.field.heading}: {r}" not in self.remarks
            ]
            convention = self.conventions[index] or Convention()
            if m.role == "condition":
                if _NO_CONDITION.fullmatch(m.when):
                    figure = as_column(values, column, index, rows, columns)
                    figure.conventions = [convention]
                    cell_conventions(figure, values, q, convention, self.notes)
                    _fill_gaps(batch, q.key, figure, values)
                self._to_condition(conditions, m, values, column, rows, columns, convention)
                self._twice(conditions[m.when], m, values, column, rows, columns, unread, names)
                continue
            figure = as_column(values, column, index, rows, columns)
            figure.conventions = [convention]
            cell_conventions(figure, values, q, convention, self.notes)
            self._place(batch, q, figure, m)
            if values.second is not None:
                if values.second_is_variant:
                    extra = replace(m, when="with brake")
                    self._to_condition(
                        conditions, extra, values.second, column, rows, columns, convention
                    )
                else:
                    again = as_column(values.second, column, index, rows, columns)
                    again.conventions = [convention]
                    batch.repeats.setdefault(q.key, []).append(again)
            if wants_points:
                self._point_too(points, m, values, rows)
        self._connections(batch)
        self._own_references(batch)
        batch.conditions = list(conditions.values())
        batch.points = {i: list(p.values()) for i, p in points.items()}
        return batch

    def _own_references(self, batch: Batch) -> None:
        """Where some motors' figures are stated at a temperature and others' are not (an export of
        several sheets), each motor has its own reference temperature."""
        if self.notes.temperature is not None:
            return
        stated, differ = np.full(len(batch), np.nan), False
        for key in REFERENCE_FIGURES:
            column = batch.figures.get(key)
            if column is None:
                continue
            at = np.array([np.nan if c.temperature is None else c.temperature
                           for c in column.conventions])[column.convention]  # fmt: skip
            given = ~np.isnan(column.value)
            differ |= len(np.unique(at[given])) > 1
            stated = np.where(np.isnan(stated) & given, at, stated)
        if not differ:
            return
        known = np.isfinite(stated)
        batch.reference_temperature = np.where(known, stated, UNSTATED_REFERENCE)
        batch.reference_temperature_basis = np.where(known, STATED, ASSUMED).astype(np.int8)

    def _places(self, f: Field, lines: list[int]) -> tuple[Ints, Ints]:
        """Rows and columns of the motors' cells under a heading."""
        along = np.asarray(lines, dtype=np.int32)
        if (f.layout or self.table.layout) == "rows":
            return along, np.full(len(lines), f.column, dtype=np.int32)
        return np.full(len(lines), f.row, dtype=np.int32), along

    def _names(
        self, ids: Sequence[str | None], places: Sequence[int], unread: list[Unread]
    ) -> list[str]:
        if all(ids):
            return [plain(t) if not t.isascii() else t.strip() for t in ids if t]
        if len(ids) == 1:
            title = self._title_name()
            name = title or self.stem
            self.remarks.append(
                f'the sheet has no part number; "{name}" is taken from '
                + ("its title" if title else "the file's name")
            )
            return [name]
        out: list[str] = []
        where = "row" if self.table.layout == "rows" else "column"
        for k, text in enumerate(ids):
            if text:
                out.append(plain(text))
                continue
            name = f"{self.stem} {where} {places[k]}" if k < len(places) else f"{self.stem} {k + 1}"
            out.append(name)
            unread.append(
                Unread(name, "part number", self.table.sheet, self.table.page,
                       places[k] if where == "row" and k < len(places) else None,
                       places[k] if where == "column" and k < len(places) else None,
                       "", f'no part number; "{name}" stands for it', ("part_number",))
            )  # fmt: skip
        return out

    def _titled(self, key: str) -> str | None:
        """What a line about the table says of all motors: "Maker: …", "Series: …"."""
        for title in (*self.table.titles, *self.table.notes):
            for line in title.split("\n"):
                heading, colon, text = plain(line).partition(":")
                if not colon or len(heading) > 40 or not text.strip():
                    continue
                if any(key in p.keys for p in parse_label(heading).names):
                    return _SENTENCE_END.split(text.strip())[0].strip()
        return None

    def _title_name(self) -> str | None:
        """A part number in the titles: "Motor AX-12", "Type: AX-12"."""
        for title in self.table.titles:
            found = re.search(
                r"(?:part\s*(?:no|number)|model|type|typ|modell|bestell\S*|motor|型[号番式])\.?\s*[:#]\s*(\S.*)$",
                plain(title), re.IGNORECASE,
            )  # fmt: skip
            if found:
                return found[1].strip()
        return None

    def _text_columns(self, batch: Batch, texts: list[list[str]], places: list[list[int]]) -> None:
        n = len(batch)
        for index, m in enumerate(self.matches):
            if m.role != "text" or m.key in (None, "part_number"):
                continue
            column = [
                None if not t or missing(t) else plain(t).replace("\n", " ") for t in texts[index]
            ]
            if m.key == "maker":
                batch.maker = [t or d for t, d in zip(column, batch.maker, strict=True)]
                continue
            if m.key == "series":
                batch.series = [t or d for t, d in zip(column, batch.series, strict=True)]
                continue
            rows, columns = self._places(m.field, places[index])
            assert m.key is not None
            batch.texts[m.key] = TextColumn(
                column, np.asarray(rows, dtype=np.int32), np.asarray(columns, dtype=np.int32)
            )
        for key, table in (
            ("magnet", "magnets"),
            ("commutation", "commutations"),
            ("description", "commutations"),
        ):
            found = batch.texts.get(key)
            if found is None:
                continue
            known: dict[str, str | None] = {}
            for i in range(n):
                text = found.text[i]
                if not text:
                    continue
                if text not in known:
                    known[text] = in_words(text, table)
                value = known[text]
                if value is None:
                    continue
                basis = STATED
                if exported := _EXPORTED_FACT.search(text):
                    basis = MODEL_BASES.index(exported[1])
                    found.text[i] = None
                if key == "magnet" and value in MAGNETS:
                    batch.magnet[i] = value
                    batch.magnet_basis[i] = basis
                elif key != "magnet" and self.commutation_basis != TOLD:
                    batch.commutation[i] = int(Commutation[value.upper()])
                    batch.commutation_basis[i] = basis
            if all(text is None for text in found.text):
                del batch.texts[key]

    def _stated_connection(self, batch: Batch) -> None:
        """Star or delta, where a title or note says it of all windings."""
        found = batch.texts.get("connection")
        if found is not None:
            found.text = [(in_words(t, "connections") or t) if t else None for t in found.text]
            return
        about = re.compile(
            r"wind|connect|phase|schaltung|wickl|coupl|collega|conexi|結線|接", re.IGNORECASE
        )
        said = {
            word
            for t in self._texts_about()
            if about.search(t) and (word := in_words(t, "connections"))
        }
        if len(said) == 1:
            n = len(batch)
            zeros = np.zeros(n, dtype=np.int32)
            batch.texts["connection"] = TextColumn([said.pop()] * n, zeros, zeros.copy())

    def _connections(self, batch: Batch) -> None:
        """A stated connection of the windings goes into the conventions that it concerns, and
        a motor whose own cell states another commutation gets the defaults of that."""
        texts = batch.texts.get("connection")
        if texts is None and (batch.commutation == int(self.commutation)).all():
            return
        for key in (*batch.figures, *batch.repeats):
            q = quantity(key)
            if not q.carries:
                continue
            found = [batch.figures[key]] if key in batch.figures else []
            for column in [*found, *batch.repeats.get(key, [])]:
                for i in np.flatnonzero(~np.isnan(column.value)).tolist():
                    old = column.conventions[column.convention[i]]
                    new = old
                    own = Commutation(int(batch.commutation[i]))
                    if own is not self.commutation:
                        was = default_convention(key, q.carries, self.commutation)
                        now = default_convention(key, q.carries, own)
                        changes = {
                            k: getattr(now, k)
                            for k in ("current", "voltage", "between")
                            if getattr(old, k) == getattr(was, k) and old.basis == "assumed"
                        }
                        new = new.with_(**changes)
                    if texts is not None and texts.text[i] and "connection" in q.carries:
                        word = in_words(texts.text[i] or "", "connections")
                        if word and new.connection is None:
                            new = new.with_(connection=word)
                    if new != old:
                        if new not in column.conventions:
                            column.conventions.append(new)
                        column.convention[i] = column.conventions.index(new)

    def _place(self, batch: Batch, q: Quantity, figure: FigureColumn, m: Match) -> None:
        if m.role == "figure" and q.key not in batch.figures:
            batch.figures[q.key] = figure
            return
        first = batch.figures.setdefault(q.key, empty_figures(len(batch)))
        gaps = np.isnan(first.value) & ~np.isnan(figure.value)
        if gaps.any():
            _fill(first, figure, gaps)
            figure.value = np.where(gaps, np.nan, figure.value)
        if not np.isnan(figure.value).all():
            batch.repeats.setdefault(q.key, []).append(figure)

    def _to_condition(
        self, conditions: dict[str, Condition], m: Match, values: Values,
        texts: Sequence[str], rows: Ints, columns: Ints, convention: Convention,
    ) -> None:  # fmt: skip
        condition = conditions.setdefault(m.when, Condition(m.when))
        assert m.key is not None
        for i in np.flatnonzero(~np.isnan(values.value)).tolist():
            k = int(i)
            condition.figures.setdefault(k, {}).setdefault(m.key, PlacedFigure(
                float(values.value[k]), float(values.low[k]), float(values.high[k]), texts[k],
                m.units[0].text if m.units else "", convention, values.qualifiers.get(k),
                int(rows[k]), int(columns[k]),
            ))  # fmt: skip

    def _twice(
        self, condition: Condition, m: Match, values: Values, texts: Sequence[str],
        rows: Ints, columns: Ints, unread: list[Unread], names: list[str],
    ) -> None:  # fmt: skip
        """List the figures that a condition has already, with another value: the first stands."""
        assert m.key is not None
        for i in np.flatnonzero(~np.isnan(values.value)).tolist():
            k = int(i)
            first = condition.figures[k][m.key]
            if first.value != values.value[k]:
                reason = f'"{condition.when}" has this figure already: {first.text}'
                place = (int(rows[k]), int(columns[k]))
                self._unread_cell(unread, names[k], m, place, texts[k], reason, ())

    def _to_points(
        self, points: dict[int, dict[str, Point]], m: Match, texts: list[str],
        rows: Ints, marks: frozenset[str], unread: list[Unread], names: list[str],
        columns: Ints,
    ) -> None:  # fmt: skip
        assert m.point is not None
        section, generic = m.point
        q = Quantity(generic, unit=m.units[0].si, zero=True)
        values = read_values(texts, q, m.units, self.style, marks)
        for failure in values.failures:
            place = (int(rows[failure.motor]), int(columns[failure.motor]))
            self._unread_cell(
                unread,
                names[failure.motor],
                m,
                place,
                failure.text,
                failure.reason,
                failure.guesses,
            )
        for i in np.flatnonzero(~np.isnan(values.value)).tolist():
            self._add_point(points, int(i), section, generic, float(values.value[i]), int(rows[i]))

    def _add_point(
        self, points: dict[int, dict[str, Point]], i: int, section: str, generic: str,
        value: float, row: int,
    ) -> None:  # fmt: skip
        key = point_key(section, generic)
        if key is not None:
            mine = points.setdefault(i, {})
            point = mine.setdefault(section, Point(section.replace("_", " "), {}, row))
            point.figures.setdefault(key, value)

    def _point_too(
        self, points: dict[int, dict[str, Point]], m: Match, values: Values, rows: Ints
    ) -> None:
        """A figure that belongs to an operating point stands there as well."""
        for phrase in m.field.label.names:
            section = phrase.section or m.field.section
            if phrase.generic and section and m.role == "figure":
                for i in np.flatnonzero(~np.isnan(values.value)).tolist():
                    self._add_point(
                        points,
                        int(i),
                        section,
                        phrase.generic,
                        float(values.value[i]),
                        int(rows[i]),
                    )
                return


def _fill(first: FigureColumn, other: FigureColumn, where: np.ndarray) -> None:
    for name in ("value", "low", "high", "heading", "row", "column"):
        getattr(first, name)[where] = getattr(other, name)[where]
    base = len(first.conventions)
    first.conventions = [*first.conventions, *other.conventions]
    first.convention[where] = other.convention[where] + base
    for i in np.flatnonzero(where).tolist():
        k = int(i)
        first.text[k] = other.text[k]
        if k in other.qualifiers:
            first.qualifiers[k] = other.qualifiers[k]
