"""Writing a reconciled table into the catalog: rows by ``executemany``, columns made by numpy.

Everything here runs inside the caller's transaction.
"""

import json
import sqlite3
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

import numpy as np

from ...schema.batch import MODEL_BASES, Batch, FigureColumn, Heading, Ints
from ...schema.convention import Commutation, Convention
from ...schema.motor import Reconciled
from .intervals import encode
from .names import figure_keys, text_keys
from .patterns import Pattern, places_of, usual_places
from .write_results import ResultWriter, row_id


@dataclass(frozen=True, slots=True)
class AppliedCorrection:
    """A figure of entry ``entry`` that stands corrected in a batch, and what was published."""

    entry: int
    quantity: str
    correction: int
    text: str | None
    value: float
    low: float
    high: float


@dataclass(slots=True)
class Stored:
    """What one table did to the catalog."""

    motors: int = 0
    new: int = 0
    again: int = 0
    touched_sources: set[int] = field(default_factory=set)


class Writer(ResultWriter):
    """Writes the tables of one import; holds the small palettes that rows point into."""

    def __init__(self, connection: sqlite3.Connection, import_id: int = 0) -> None:
        super().__init__(connection)
        self.import_id = import_id
        self._conventions: dict[Convention, int] = {}
        self._kinds: dict[tuple, int] = {}
        for row in connection.execute("SELECT * FROM conventions"):
            self._conventions[Convention(*row[1:])] = row[0]
        for row in connection.execute("SELECT * FROM kinds"):
            self._kinds[tuple(row[1:])] = row[0]

    def add_file(
        self,
        *,
        file: str,
        sha256: str,
        format: str,
        layout: str,
        options: str,
        remarks: Sequence[str],
    ) -> int:
        """One row for a file of this import; the number other rows point to."""
        cursor = self.connection.execute(
            'INSERT INTO files("import", file, sha256, format, layout, options, remarks) '
            "VALUES (?,?,?,?,?,?,?)",
            (self.import_id, file, sha256, format, layout, options, _lines(remarks)),
        )
        return row_id(cursor)

    def add_table(
        self,
        file_id: int,
        chunk: int,
        published: Batch,
        reconciled: Reconciled,
        applied: Sequence[AppliedCorrection] = (),
    ) -> Stored:
        """Store N motors of one table.

        ``published`` is the batch as it was read (its conventions are kept beside the inferred
        ones); ``reconciled`` holds the same entries with corrections applied. A motor that the
        catalog has is replaced, its earlier rows are kept.
        """
        batch = reconciled.batch
        n = len(batch)
        first = self.next_id("motor")
        source_id = self._add_source(file_id, chunk, batch, first)
        heading_base = self._add_headings(source_id, batch.headings)
        row, column = usual_places(batch)
        pattern_of, patterns = places_of(published, batch, row, column)
        pattern_base = self.next_id("patterns", "pattern")
        self._add_patterns(patterns, pattern_base, heading_base)

        identity = list(zip(batch.part_number, batch.maker, strict=True))
        touched, again = self._replace(identity)
        ids = range(first, first + n)
        self.connection.executemany(
            "INSERT INTO motor(id, maker, part_number, series, source, pattern, kind, "
            '"row", "column") VALUES (?,?,?,?,?,?,?,?,?)',
            zip(
                ids, batch.maker, batch.part_number, batch.series, [source_id] * n,
                (pattern_of + pattern_base).tolist(), self._kind_ids(batch),
                _places(row), _places(column), strict=True,
            ),
        )  # fmt: skip
        self._add_texts(first, batch, applied)
        self._add_numbers(first, batch, applied)
        self._add_exceptions(first, batch, row, column, pattern_of, patterns)
        self._add_further(first, batch, heading_base)
        self.add_constants(first, reconciled)
        self.add_findings(source_id, first, reconciled)
        replaced = sum(touched.values())
        return Stored(n, n - replaced, again, set(touched) | {source_id})

    def rewrite_table(
        self,
        source_id: int,
        first: int,
        published: Batch,
        reconciled: Reconciled,
        applied: Sequence[AppliedCorrection],
    ) -> None:
        """Write anew what follows from a stored table's figures and the corrections to them."""
        batch = reconciled.batch
        last = first + len(batch) - 1
        for table, column in (
            ("figure_value", "id"), ("figure_digit", "id"), ("constants", "id"),
            ("figure_intervals", "motor"), ("applied_corrections", "motor"),
            ("finding_motors", "first"),
        ):  # fmt: skip
            self.connection.execute(
                f"DELETE FROM {table} WHERE {column} BETWEEN ? AND ?", (first, last)
            )
        self.connection.execute("DELETE FROM findings WHERE source = ?", (source_id,))
        old = "SELECT pattern FROM motor WHERE id BETWEEN ? AND ?"
        self.connection.execute(f"DELETE FROM patterns WHERE pattern IN ({old})", (first, last))
        row = self.connection.execute(
            "SELECT min(id) FROM headings WHERE source = ?", (source_id,)
        ).fetchone()
        pattern_of, patterns = places_of(published, batch, *usual_places(batch))
        base = self.next_id("patterns", "pattern")
        self._add_patterns(patterns, base, row[0] or 0)
        self.connection.executemany(
            "UPDATE motor SET pattern = ? WHERE id = ?",
            zip((pattern_of + base).tolist(), range(first, last + 1), strict=True),
        )
        self._add_numbers(first, batch, applied)
        self.add_constants(first, reconciled)
        self.add_findings(source_id, first, reconciled)

    # ---- who and where

    def _add_source(self, file_id: int, chunk: int, batch: Batch, first: int) -> int:
        source = batch.source
        cursor = self.connection.execute(
            "INSERT INTO sources(file, chunk, sheet, page, layout, notes, first_motor, motors) "
            "VALUES (?,?,?,?,?,?,?,?)",
            (file_id, chunk, source.sheet, source.page, source.layout, _lines(batch.notes),
             first, len(batch)),
        )  # fmt: skip
        return row_id(cursor)

    def _add_headings(self, source_id: int, headings: Sequence[Heading]) -> int:
        base = self.next_id("headings")
        self.connection.executemany(
            "INSERT INTO headings VALUES (?,?,?,?,?,?,?,?,?,?)",
            [
                (base + i, source_id, h.text, h.quantity, h.unit,
                 None if h.convention is None else self._convention(h.convention),
                 h.score, h.reason, h.factor, h.offset)
                for i, h in enumerate(headings)
            ],
        )  # fmt: skip
        return base

    def _add_patterns(self, patterns: Sequence[Pattern], base: int, headings: int) -> None:
        self.connection.executemany(
            "INSERT INTO patterns VALUES (?,?,?,?,?,?,?)",
            [
                (base + number, place.quantity,
                 None if place.heading is None else headings + place.heading,
                 None if place.read_as is None else self._convention(place.read_as),
                 None if place.convention is None else self._convention(place.convention),
                 place.row or None, place.column or None)
                for number, pattern in enumerate(patterns)
                for place in pattern
            ],
        )  # fmt: skip

    def _convention(self, convention: Convention) -> int:
        number = self._conventions.get(convention)
        if number is None:
            c = convention
            cursor = self.connection.execute(
                'INSERT INTO conventions("current", voltage, "between", connection, temperature, '
                "shape, basis) VALUES (?,?,?,?,?,?,?)",
                (c.current, c.voltage, c.between, c.connection, c.temperature, c.shape, c.basis),
            )
            number = self._conventions[convention] = row_id(cursor)
        return number

    def _kind_ids(self, batch: Batch) -> list[int]:
        kinds = zip(
            batch.commutation.tolist(), batch.commutation_basis.tolist(), batch.magnet,
            batch.magnet_basis.tolist(), batch.reference_temperature.tolist(),
            batch.reference_temperature_basis.tolist(), strict=True,
        )  # fmt: skip
        seen: dict[tuple, int] = {}
        return [seen.get(kind) or seen.setdefault(kind, self._kind(*kind)) for kind in kinds]

    def _kind(self, commutation: int, c: int, magnet: str, m: int, reference: float, r: int) -> int:
        word = Commutation(commutation).word
        key = (word, MODEL_BASES[c], magnet, MODEL_BASES[m], reference, MODEL_BASES[r])
        if key not in self._kinds:
            cursor = self.connection.execute(
                "INSERT INTO kinds(commutation, commutation_basis, magnet, magnet_basis, "
                "reference_temperature, reference_temperature_basis) VALUES (?,?,?,?,?,?)",
                key,
            )
            self._kinds[key] = row_id(cursor)
        return self._kinds[key]

    def _replace(self, identity: Sequence[tuple[str, str]]) -> tuple[dict[int, int], int]:
        """Mark the motors that the catalog has as replaced: source → how many of its motors, and
        how many of them this very import had stored."""
        touched: dict[int, int] = {}
        if not self.connection.execute("SELECT EXISTS (SELECT 1 FROM motor)").fetchone()[0]:
            return touched, 0
        where = "part_number = ? AND maker = ? AND replaced_by IS NULL"
        for who in identity:
            row = self.connection.execute(
                f"SELECT id, source FROM motor WHERE {where}", who
            ).fetchone()
            if row is not None:
                touched[row[1]] = touched.get(row[1], 0) + 1
        if touched:
            self.connection.executemany(
                f"UPDATE motor SET replaced_by = {self.import_id} WHERE {where}", identity
            )
        sources = ",".join(map(str, touched))
        own = self.connection.execute(
            "SELECT s.id FROM sources s JOIN files f ON f.id = s.file "
            f'WHERE f."import" = ? AND s.id IN ({sources})',
            (self.import_id,),
        ).fetchall()
        return touched, sum(touched[source] for (source,) in own)

    # ---- figures

    def _add_texts(self, first: int, batch: Batch, applied: Sequence[AppliedCorrection]) -> None:
        ids = range(first, first + len(batch))
        texts = {key: batch.figures[key].text for key in figure_keys() if key in batch.figures}
        for a in applied:
            # the text stays what was published
            texts[a.quantity] = list(texts[a.quantity])
            texts[a.quantity][a.entry] = a.text
        for key in text_keys():
            if key in batch.texts:
                texts[key] = batch.texts[key].text
        self.insert("figure_text", list(texts), ids, list(texts.values()))

    def _add_numbers(self, first: int, batch: Batch, applied: Sequence[AppliedCorrection]) -> None:
        """Values in use and their intervals; what a correction replaced stands beside it."""
        ids = range(first, first + len(batch))
        numbers = [key for key in figure_keys() if key in batch.figures]
        # SQLite keeps a NaN as NULL
        values = [batch.figures[key].value.tolist() for key in numbers]
        self.insert("figure_value", numbers, ids, values)
        factors = np.array([h.factor for h in batch.headings] or [1.0])
        digits = []
        for key in numbers:
            f = batch.figures[key]
            digit, others = encode(f, factors[f.heading.clip(0, len(factors) - 1)])
            digits.append(digit)
            self.connection.executemany(
                "INSERT INTO figure_intervals VALUES (?,?,?,?)",
                [(first + i, key, low, high) for i, low, high in others],
            )
        self.insert("figure_digit", numbers, ids, digits)
        self.connection.executemany(
            "INSERT INTO applied_corrections VALUES (?,?,?,?,?,?)",
            [(first + a.entry, a.quantity, a.correction, a.value, a.low, a.high) for a in applied],
        )

    def _add_exceptions(
        self,
        first: int,
        batch: Batch,
        row: Ints,
        column: Ints,
        pattern_of: Ints,
        patterns: Sequence[Pattern],
    ) -> None:
        """Places that don't follow from motor and pattern, and qualifiers."""
        columns: dict[str, tuple[Ints, Ints, np.ndarray]] = {
            key: (f.row, f.column, ~np.isnan(f.value)) for key, f in batch.figures.items()
        }
        for key, text in batch.texts.items():
            present = np.array([t is not None for t in text.text], dtype=bool)
            columns[key] = (text.row, text.column, present)
        for key, (rows, places, present) in columns.items():
            fixed = [{place.quantity: place for place in pattern}.get(key) for pattern in patterns]
            fixed_row = np.array([p.row if p else 0 for p in fixed])[pattern_of]
            fixed_column = np.array([p.column if p else 0 for p in fixed])[pattern_of]
            usual_row = np.where(fixed_row > 0, fixed_row, row)
            usual_column = np.where(fixed_column > 0, fixed_column, column)
            odd = np.flatnonzero(present & ((rows != usual_row) | (places != usual_column)))
            self.connection.executemany(
                "INSERT INTO figure_places VALUES (?,?,?,?)",
                [(first + i, key, rows[i].item(), places[i].item()) for i in odd.tolist()],
            )
        self.connection.executemany(
            "INSERT INTO figure_qualifiers VALUES (?,?,?)",
            [
                (first + i, key, qualifier)
                for key, figures in batch.figures.items()
                for i, qualifier in figures.qualifiers.items()
            ],
        )

    def _add_further(self, first: int, batch: Batch, headings: int) -> None:
        self.connection.executemany(
            'INSERT INTO further_figures(motor, "condition", quantity, heading, convention, text, '
            'value, low, high, unit, qualifier, "row", "column") '
            "VALUES (?,?,?,?,?,?,?,?,?,?,?,?,?)",
            [*self._repeat_rows(first, batch, headings), *self._condition_rows(first, batch)],
        )
        self.connection.executemany(
            "INSERT INTO points VALUES (?,?,?,?,?,?)",
            [
                (first + entry, number, point.name, point.row or None, key, value)
                for entry, points in batch.points.items()
                for number, point in enumerate(points)
                for key, value in point.figures.items()
            ],
        )

    def _repeat_rows(self, first: int, batch: Batch, headings: int) -> Iterator[tuple]:
        for key, columns in batch.repeats.items():
            for f in columns:
                for i in np.flatnonzero(~np.isnan(f.value)).tolist():
                    yield (
                        first + i, None, key, _heading(f, i, batch, headings),
                        self._convention(f.conventions[f.convention[i]]), f.text[i],
                        f.value[i].item(), f.low[i].item(), f.high[i].item(), None,
                        f.qualifiers.get(i), f.row[i].item() or None, f.column[i].item() or None,
                    )  # fmt: skip

    def _condition_rows(self, first: int, batch: Batch) -> Iterator[tuple]:
        for condition in batch.conditions:
            for entry, figures in condition.figures.items():
                for key, p in figures.items():
                    yield (
                        first + entry, condition.when, key, None, self._convention(p.convention),
                        p.text, p.value, p.low, p.high, p.unit or None, p.qualifier,
                        p.row or None, p.column or None,
                    )  # fmt: skip


def _heading(figures: FigureColumn, entry: int, batch: Batch, base: int) -> int | None:
    number = int(figures.heading[entry])
    return base + number if 0 <= number < len(batch.headings) else None


def _places(numbers: Ints) -> list[int | None]:
    return [number or None for number in numbers.tolist()]


def _lines(texts: Sequence[str]) -> str | None:
    return json.dumps(list(texts), ensure_ascii=False) if texts else None
