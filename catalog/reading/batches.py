"""One table → its batch: headings assigned, units and conventions settled, cells read."""

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
    Heading,
    PlacedFigure,
    Point,
    Source,
    TextColumn,
    empty_figures,
)
from ...schema.convention import Commutation, Convention, default_convention
from ...schema.figure import NumberStyle, number_style
from ...schema.signs import plain
from ...schema.units import Unit, UnitError, read_unit
from ...schema.vocabulary import Quantity, quantities, quantity
from ..tables.grid import TableFile
from .cells import is_ditto, missing
from .figures import Values, as_column, read_values
from .join import id_field, ids_of
from .kind import (
    ASSUMED,
    INFERRED,
    STATED,
    TOLD,
    Notes,
    commutation_in,
    in_words,
    magnet_in,
    note_conventions,
    note_temperature,
    note_tolerance,
    notes_of,
    signature,
)
from .label import parse_label
from .layout import inherit
from .lexicon import squeeze, symbol_form, tokens
from .match import Match, Matcher
from .model import Field, ReadOptions, Table, Unread
from .phrase import conventions_of, point_key

CHUNK = 20_000
_STYLE_ROWS = 2000


_EXPORTED_FACT = re.compile(r"\((inferred|assumed)\)$")
"""What an export says of a fact that no sheet states: it is known as before, and no text."""


class TableReader:
    """Reads one table: decides on all headings once, then turns rows into batches."""

    def __init__(
        self, table: Table, file: TableFile, options: ReadOptions, stem: str, position: int | None
    ) -> None:
        self.table = table
        self.options = options
        self.stem = stem if position is None else f"{stem} {position + 1}"
        self.source = Source(file.name, file.sha256, table.sheet, table.page, table.layout)
        self.unread: list[Unread] = []
        self.remarks: list[str] = list(table.remarks)
        self.notes: Notes = notes_of([*table.titles, *table.notes])
        self._ditto()
        self.id_field = None if table.part_numbers else self._told_ids() or id_field(table)
        self.style = self._style()
        self.matches = self._match()
        self._share_frame()
        self._stated_voltage()
        self.why_not: list[str] = []
        figures = [m for m in self.matches if m.role in ("figure", "point")]
        known = [m for m in self.matches if m.score >= 0.85 and m.guesses]
        self.worthwhile = table.count > 0 and (bool(figures) or len(known) > 1)
        if not self.worthwhile:
            first = plain(table.fields[0].heading) if table.fields else ""
            self.why_not = [f'a table with "{first}" gives no figure of a motor, passed over']
        self.commutation, self.commutation_basis = self._commutation()
        self.magnet, self.magnet_basis = self._magnet()
        self.reference, self.reference_basis = self._reference()
        self.conventions = [self._convention(m) for m in self.matches]
        self.headings = self._headings()
        self._unread_headings()

    def _ids(self) -> list[str | None]:
        if self.table.part_numbers or self.id_field is None:
            return ids_of(self.table)
        return [t or None for t in self.id_field.texts]

    def _told_ids(self) -> Field | None:
        """The field that the user names as the part numbers."""
        for f in self.table.fields:
            match = self._override(f)
            if match is not None and match.key == "part_number":
                return f
        return None

    # --- preparation ----------------------------------------------------------------------------

    def _ditto(self) -> None:
        """Cells that say "as above" or "as left" take that text; frame figures too where blank."""
        for f in self.table.fields:
            if any(is_ditto(t) for t in set(f.texts[:_STYLE_ROWS]) if not t[:1].isdigit()):
                f.texts = inherit(f.texts, ditto_only=True)

    def _stated_voltage(self) -> None:
        """The voltage of the whole table, where only a title or a note gives it: "at 12 V"."""
        if any(m.key in ("nominal_voltage", "mains_voltage") for m in self.matches):
            return
        found: dict[str, str] = {}
        for text in (*self.table.titles, *self.table.notes):
            for at in re.finditer(
                r"(?:\bat|\bbei|\bà|@)\s*(\d+(?:[.,]\d+)?\s*V)(?:\s*DC)?(?![\w/])", plain(text)
            ):
                found[at[1].replace(" ", "")] = text
        if len(found) != 1:
            return
        (voltage, text), *_ = found.items()
        n = self.table.count
        field = Field(plain(text), parse_label("Nominal voltage [V]"), [voltage[:-1]] * n, 0, 0)
        field.places, field.layout = [0] * n, "rows"
        reason = "the voltage that the table is stated for, by its title or a note"
        unit = read_unit("V", ("V",))
        self.matches.append(Match(field, "figure", "nominal_voltage", 0.9, [unit], reason))

    def _share_frame(self) -> None:
        """A figure of the frame that stands once, at the first of its motors, holds for all.

        Where a column names the frame (a model printed once, its windings below), it holds
        down to the next model; without one only if no other motor has the figure.
        """
        groups = self._frame_groups()
        for m in self.matches:
            if m.role != "figure" or m.key is None or not quantity(m.key).frame:
                continue
            f = m.field
            shared = False
            texts = list(f.texts)
            places = list(f.places or self.table.places)
            for group in groups:
                if len(group) > 1 and texts[group[0]] and not any(texts[k] for k in group[1:]):
                    for k in group[1:]:
                        texts[k], places[k] = texts[group[0]], places[group[0]]
                    shared = True
            if shared:
                f.texts, f.places = texts, places
                m.reason += "; printed once for the motors of a frame"

    def _frame_groups(self) -> list[list[int]]:
        n = self.table.count
        for m in self.matches:
            if m.key in ("series", "part_number") and m.field is not self.id_field:
                texts = m.field.texts
                if texts and texts[0] and not all(texts):
                    return _runs(texts)
                if m.key == "series" and all(texts):
                    return _runs(
                        [t if k == 0 or t != texts[k - 1] else "" for k, t in enumerate(texts)]
                    )
        if self.table.layout == "rows" or not 1 < n <= 200:
            return []
        once = [
            m
            for m in self.matches
            if m.role == "figure" and m.field.texts[0] and not any(m.field.texts[1:])
        ]
        frames = [m for m in once if m.key and quantity(m.key).frame]
        # One lone figure may be a gap in the others; two of the frame are a habit of the sheet.
        sure = len(frames) == len(once) and (len(frames) > 1 or n > 3)
        return [list(range(n))] if sure else []

    def _style(self) -> NumberStyle:
        texts = [
            t
            for f in self.table.fields
            if f is not self.id_field
            for t in f.texts[:_STYLE_ROWS]
            if t
        ]
        style = number_style(texts)
        if style.conflicts:
            cells = ", ".join(f'"{texts[i]}"' for i in style.conflicts[:5])
            self.remarks.append(
                f"decimal sign {style.decimal or 'undecided'} by {style.evidence}; against it: {cells}"
            )
        return style

    def _match(self) -> list[Match]:
        fields = self.table.fields
        plain_fields = [f for f in fields if f is not self.id_field]
        overridden: dict[int, Match] = {}
        for i, f in enumerate(plain_fields):
            match = self._override(f)
            if match is not None:
                overridden[i] = match
        rest = [f for i, f in enumerate(plain_fields) if i not in overridden]
        taken = {m.key for m in overridden.values()}
        matcher = Matcher(rest, self.style, frozenset(k for k in taken if k))
        self.family = matcher.family
        found = iter(matcher.assign())
        matches = [
            overridden[i] if i in overridden else next(found) for i in range(len(plain_fields))
        ]
        if self.id_field is not None:
            told = self._override(self.id_field)
            reason = told.reason if told is not None else "the part numbers"
            own = Match(self.id_field, "text", "part_number", 1.0, [], reason)
            matches.insert(fields.index(self.id_field), own)
        self._matched = matches
        for m in matches:
            self._repair(m, matcher)
        return matches

    def _override(self, f: Field) -> Match | None:
        names = {squeeze(tokens(t)) for t in (f.heading, f.label.text, *f.label.symbols) if t}
        for table, said in (
            (self.options.overrides, "set by --set"),
            (self.options.kept, "kept for this maker"),
        ):
            for heading, meaning in table.items():
                if squeeze(tokens(heading)) not in names and plain(heading) != plain(f.heading):
                    continue
                key, _, rest = meaning.partition(":")
                unit_text, _, words_ = rest.partition(":")
                q = quantities().get(key.strip())
                if q is None:
                    return None
                if q.text:
                    return Match(f, "text", q.key, 1.0, [], said)
                texts = [unit_text] if unit_text else list(f.units)
                units: list[Unit] = []
                for text in texts:
                    try:
                        units.append(read_unit(text, q.accepts))
                    except UnitError as error:
                        if unit_text:
                            return Match(
                                f, "unread", None, 0.0, [], f"{said}, but {error}", (q.key,)
                            )
                if not units and "1" in q.accepts:
                    units = [Unit("", "1", 1.0, 0.0, "1")]
                forced = tuple(w.strip() for w in words_.split("+") if w.strip())
                return Match(f, "figure", q.key, 1.0, units, said, forced_convention=forced)
        return None

    def _repair(self, m: Match, matcher: Matcher) -> None:
        """Units of which some sheets mean something else: decided by size, else not read."""
        if m.role not in ("figure", "repeat", "condition") or not m.units or m.key is None:
            return
        unit = m.units[0]
        if not re.search(r"\bmay\b", unit.remark):  # the unit's own doubt about its meaning
            if unit.remark:
                m.reason += f"; {unit.remark}"
            return
        q = quantity(m.key)
        values = [v for v in matcher.sampled(m.field) if v]
        if not values:
            return
        size = float(np.median(np.abs(values))) * unit.factor
        lo, hi = q.plausible
        volts = [v for o in self._matched for v in _voltage_of(o, matcher)]
        absurd = m.key == "back_emf_constant" and volts and max(volts) / size < 10  # rad/s
        if lo / 3 <= size <= hi * 3 and not absurd:
            m.reason += "; as written, of a plausible size"
            return
        if m.key == "rotor_inertia":
            base = _without_power(unit.text, q)
            if base is not None:
                inverse = base.factor**2 / unit.factor
                if lo / 3 <= size / unit.factor * inverse <= hi * 3:
                    m.units[0] = replace(unit, factor=inverse)
                    m.reason += "; the power of ten is taken as multiplied into the figures, since they are else of an impossible size"
                    return
        m.role, m.reason = (
            "unread",
            f"{m.key} in {unit.text} would be of an impossible size: {unit.remark}",
        )
        m.guesses = (m.key,)

    # --- what kind of motors --------------------------------------------------------------------

    def _texts_about(self) -> list[str]:
        captions = {c for f in self.table.fields for c in f.captions}
        return [*self.table.titles, *self.table.notes, *captions]

    def _commutation(self) -> tuple[Commutation, int]:
        if self.options.commutation:
            return Commutation[self.options.commutation.upper()], TOLD
        stated = commutation_in(self._texts_about())
        if stated is not None:
            return stated, STATED
        betrayed = signature(self.matches, self.family)
        if betrayed is not None:
            return betrayed, INFERRED
        return Commutation.BRUSHED, ASSUMED

    def _magnet(self) -> tuple[str, int]:
        stated = magnet_in(self._texts_about())
        return (stated, STATED) if stated in MAGNETS else ("unknown", ASSUMED)

    def _reference(self) -> tuple[float, int]:
        if self.notes.temperature is not None:
            return self.notes.temperature, STATED
        for key in ("terminal_resistance", "torque_constant", "back_emf_constant"):
            for m in self.matches:
                if m.key == key and m.role == "figure":
                    t = _temperature_of(m)
                    if t is not None:
                        return t, STATED
        return 25.0, ASSUMED

    # --- conventions ----------------------------------------------------------------------------

    def _convention(self, m: Match) -> Convention | None:
        if m.key is None or m.role not in ("figure", "repeat", "condition"):
            return None
        q = quantity(m.key)
        if not q.carries:
            return None
        base = default_convention(m.key, q.carries, self.commutation)
        said: dict[str, str | float] = {}
        for subject, stated in self.notes.conventions:
            if subject is None or subject in _subjects_of(m.key):
                said.update(stated)
        for mark in m.field.label.marks:
            if mark in self.notes.marked:
                said.update(note_conventions(self.notes.marked[mark]))
        phrases = dict(
            pair for p in m.field.label.names if p.keys or p.generic for pair in p.conventions
        )
        said.update(phrases)
        label = m.field.label.convention
        for kind in ("current", "voltage", "between", "connection", "shape"):
            value = getattr(label, kind)
            if value is not None:
                said[kind] = value
        for symbol in m.field.label.symbols:
            said.update(_symbol_conventions(symbol, m.key))
        for unit in m.units[:1]:
            said.update(_mark_conventions(unit, m.key))
        for word in m.forced_convention:
            said.update(conventions_of(word, whole=False))
        peak = m.key.startswith("peak_") or m.key.startswith("maximum_")
        explicit = label.current or (m.units and m.units[0].marks & {"rms", "peak", "dc"})
        if peak and said.get("current") == "peak" and not explicit and not m.forced_convention:
            said.pop("current")
        kept = {
            k: v
            for k, v in said.items()
            if k in q.carries or (k == "shape" and "voltage" in q.carries)
        }
        if (
            m.key == "nominal_voltage"
            and kept.get("voltage") in ("rms", "peak")
            and not (m.units and m.units[0].marks & {"rms", "peak"})
        ):
            kept.pop("voltage")
        convention = base.with_(**kept, basis="stated") if kept else base
        if "temperature" in q.carries:
            t = _temperature_of(m)
            for mark in m.field.label.marks:
                if t is None and mark in self.notes.marked:
                    t = note_temperature(self.notes.marked[mark])
            if t is None and m.role != "condition":
                t = self.notes.temperature
            if t is not None:
                convention = convention.with_(temperature=t)
        return convention

    def _headings(self) -> list[Heading]:
        out = []
        for m, c in zip(self.matches, self.conventions, strict=True):
            unit = m.units[0] if m.units else None
            out.append(
                Heading(
                    m.field.heading,
                    m.key if m.role != "unread" else None,
                    unit.text if unit else "",
                    c,
                    round(max(0.0, min(m.score, 1.0)), 3),
                    m.reason,
                    unit.factor if unit else 1.0,
                    unit.offset if unit else 0.0,
                )
            )
        return out

    # --- unread ---------------------------------------------------------------------------------

    def _unread_headings(self) -> None:
        for m in self.matches:
            if m.role != "unread":
                continue
            f = m.field
            first = next((k for k, t in enumerate(f.texts) if t and not missing(t)), None)
            if first is None:
                continue
            row, column = self.table.place(f, first)
            self.unread.append(
                Unread(
                    None, f.heading, self.table.sheet, self.table.page, row, column,
                    f.texts[first], m.reason, m.guesses,
                )
            )  # fmt: skip

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

    # --- batches --------------------------------------------------------------------------------

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
                self._to_condition(conditions, m, values, column, rows, columns, convention)
                continue
            figure = as_column(values, column, index, rows, columns)
            figure.conventions = [convention]
            self._cell_conventions(figure, values, q, convention)
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
        batch.conditions = list(conditions.values())
        batch.points = {i: list(p.values()) for i, p in points.items()}
        return batch

    def _places(self, f: Field, lines: list[int]) -> tuple[list[int], list[int]]:
        n = len(lines)
        rows = (f.layout or self.table.layout) == "rows"
        return (lines, [f.column] * n) if rows else ([f.row] * n, lines)

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
        """What a title line says of all motors: "Maker: …", "Series: …"."""
        for title in self.table.titles:
            for line in title.split("\n"):
                heading, colon, text = plain(line).partition(":")
                if not colon or len(heading) > 40 or not text.strip():
                    continue
                if any(key in p.keys for p in parse_label(heading).names):
                    return text.strip()
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

    def _cell_conventions(
        self, figure: FigureColumn, values: Values, q: Quantity, base: Convention
    ) -> None:
        """Conventions that single cells state, by their own unit or by a footnote mark."""
        said: dict[int, dict[str, str]] = {}
        if not q.carries:
            return
        for i, unit in values.cell_units.items():
            marks = _mark_conventions(unit, q.key)
            if marks:
                said.setdefault(i, {}).update(marks)
        for i, marks in values.marks.items():
            for mark in marks:
                note = self.notes.marked.get(re.sub(r"[()^\s]", "", mark))
                if note:
                    said.setdefault(i, {}).update(note_conventions(note))
        for i, changes in said.items():
            kept = {k: v for k, v in changes.items() if k in q.carries}
            if not kept:
                continue
            convention = base.with_(**kept, basis="stated")
            if convention not in figure.conventions:
                figure.conventions.append(convention)
            figure.convention[i] = figure.conventions.index(convention)

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
                for i in np.flatnonzero(~np.isnan(column.value)):
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
        texts: Sequence[str], rows: Sequence[int], columns: Sequence[int], convention: Convention,
    ) -> None:  # fmt: skip
        condition = conditions.setdefault(m.when, Condition(m.when))
        assert m.key is not None
        for i in np.flatnonzero(~np.isnan(values.value)):
            k = int(i)
            condition.figures.setdefault(k, {})[m.key] = PlacedFigure(
                float(values.value[k]), float(values.low[k]), float(values.high[k]), texts[k],
                m.units[0].text if m.units else "", convention, values.qualifiers.get(k),
                int(rows[k]), int(columns[k]),
            )  # fmt: skip

    def _to_points(
        self, points: dict[int, dict[str, Point]], m: Match, texts: Sequence[str],
        rows: Sequence[int], marks: frozenset[str], unread: list[Unread], names: list[str],
        columns: Sequence[int],
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
        for i in np.flatnonzero(~np.isnan(values.value)):
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
        self, points: dict[int, dict[str, Point]], m: Match, values: Values, rows: Sequence[int]
    ) -> None:
        """A figure that belongs to an operating point stands there as well."""
        for phrase in m.field.label.names:
            section = phrase.section or m.field.section
            if phrase.generic and section and m.role == "figure":
                for i in np.flatnonzero(~np.isnan(values.value)):
                    self._add_point(
                        points,
                        int(i),
                        section,
                        phrase.generic,
                        float(values.value[i]),
                        int(rows[i]),
                    )
                return


def _voltage_of(m: Match, matcher: Matcher) -> list[float]:
    if m.key != "nominal_voltage" or m.role != "figure" or not m.units:
        return []
    return [v * m.units[0].factor for v in matcher.sampled(m.field)]


def _runs(texts: Sequence[str]) -> list[list[int]]:
    """Indices in groups, a new one at every text."""
    groups: list[list[int]] = []
    for k, text in enumerate(texts):
        if text or not groups:
            groups.append([k])
        else:
            groups[-1].append(k)
    return groups


def _subjects_of(key: str) -> tuple[str, ...]:
    """What a note may call a quantity."""
    if key in ("back_emf_constant", "speed_constant") or key.endswith("voltage"):
        return ("voltage",)
    if key in ("terminal_resistance", "terminal_inductance"):
        return ("winding",)
    return ("current",)


def _fill(first: FigureColumn, other: FigureColumn, where: np.ndarray) -> None:
    for name in ("value", "low", "high", "heading", "row", "column"):
        getattr(first, name)[where] = getattr(other, name)[where]
    base = len(first.conventions)
    first.conventions = [*first.conventions, *other.conventions]
    first.convention[where] = other.convention[where] + base
    for i in np.flatnonzero(where):
        k = int(i)
        first.text[k] = other.text[k]
        if k in other.qualifiers:
            first.qualifiers[k] = other.qualifiers[k]


def _temperature_of(m: Match) -> float | None:
    label = m.field.label
    if label.temperature is not None:
        return label.temperature
    for symbol in label.symbols:
        found = re.fullmatch(r"[Rr](20|25|40|100|120)", symbol_form(symbol))
        if found:
            return float(found[1])
    return m.field.temperature


def _mark_conventions(unit: Unit, key: str) -> dict[str, str]:
    """The conventions that stand in a unit: A rms, V pk, V (L-L)."""
    said: dict[str, str] = {}
    for mark in unit.marks:
        if mark in ("rms", "peak", "dc"):
            said["voltage" if "V" in unit.text or "emf" in key else "current"] = mark
            if key == "torque_constant":
                said["current"] = mark
        elif mark in ("lines", "phase"):
            said["between"] = mark
    return said


def _symbol_conventions(symbol: str, key: str) -> dict[str, str]:
    form = symbol_form(symbol)
    said: dict[str, str] = {}
    if key in ("terminal_resistance", "terminal_inductance"):
        if re.fullmatch(r"[RL](?:ph|PH|Ph|s)\d*", form):
            said["between"] = "phase"
        elif re.fullmatch(r"[RL](?:LL|ll|pp|PP|tt|TT|12|uv|UV|u-v|U-V|mt)\d*", form):
            said["between"] = "lines"
    if re.search(r"(?i)rms$|eff$", form) and key != "mains_voltage":
        said["current"] = said["voltage"] = "rms"
    return said


def _without_power(text: str, q: Quantity) -> Unit | None:
    bare = re.sub(r"[×x*·]?\s*10\s*\^?\s*[+-]?\d+\s*[×x*·]?\s*", "", plain(text)).strip()
    try:
        return read_unit(bare, q.accepts)
    except UnitError:
        return None
