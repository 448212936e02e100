"""One table → what is decided once for all its motors: headings, units, kind, conventions."""

import re
from dataclasses import replace

import numpy as np

from ....schema.batch import MAGNETS, Heading, Ints, Source
from ....schema.convention import Commutation
from ....schema.figure.read import NumberStyle, number_style
from ....schema.figure.signs import plain
from ....schema.units.read import Unit, UnitError, read_unit
from ....schema.vocabulary import Quantity, quantities, quantity
from ...tables.grid import Stored, TableFile
from ..cells import missing
from ..headings.label import parse_label
from ..headings.lexicon import squeeze, tokens
from ..layout.join import id_field, ids_of
from ..matching.match import Match, Matcher
from ..matching.purpose import (
    beside_gears,
    is_of_gears,
    set_outputs_aside,
    tells_of_a_motor,
)
from ..model import Field, ReadOptions, Table, Unread
from .frame import share_frame, take_up_dittos
from .identity import by_frame_and_winding, by_voltage, first_codes
from .kind import (
    ASSUMED,
    INFERRED,
    STATED,
    TOLD,
    Notes,
    commutation_in,
    magnet_in,
    notes_of,
    signature,
)
from .said import convention_of, temperature_of
from .stated import stated_figures
from .summaries import take_out_summaries
from .usual import set_ends_aside

REFERENCE_FIGURES = ("terminal_resistance", "torque_constant", "back_emf_constant")
"""Figures whose temperature is the one that a motor's figures hold for."""

UNSTATED_REFERENCE = 25.0

STYLE_ROWS = 2000
"""Rows that are looked at to find the table's decimal sign."""


class Decisions:
    """Everything about one table that does not differ from motor to motor."""

    def __init__(
        self, table: Table, file: TableFile, options: ReadOptions, stem: str, position: int | None
    ) -> None:
        self.table = table
        self.options = options
        self.stem = stem if position is None else f"{stem} {position + 1}"
        self.source = Source(file.name, file.sha256, table.sheet, table.page, table.layout)
        self.unread: list[Unread] = []
        self.remarks = table.remarks
        self.notes: Notes = notes_of([*table.titles, *table.notes])
        with_dittos = take_up_dittos(table)
        self.id_field = (
            None
            if table.part_numbers
            else self._told_ids() or id_field(table) or first_codes(table)
        )
        take_out_summaries(table, self.id_field, self.unread)
        set_ends_aside(table)
        if self.id_field is not None:
            by_frame_and_winding(table, self.id_field)
        self.style = self._style()
        self._styles: dict[int, NumberStyle] = {}
        self.matches = self._match()
        by_voltage(table, self.matches, self.id_field, self.style)
        share_frame(table, self.matches, self.id_field, with_dittos)
        self._stated_voltage()
        if position is None:
            self.matches += stated_figures(table, self.matches, self.style)
        self.why_not: list[str] = []
        figures = [m for m in self.matches if tells_of_a_motor(m)]
        known = [m for m in self.matches if m.score >= 0.85 and m.guesses]
        self.of_gears = is_of_gears(self.matches)
        self.worthwhile = (
            table.count > 0 and not self.of_gears and (bool(figures) or len(known) > 1)
        )
        if self.worthwhile and beside_gears(self.matches, self._titles()):
            self.remarks.append(
                "a gear stands beside the motors: speeds and torques are read as the motor's; "
                "check that they are not those of its output"
            )
        if self.of_gears:
            self.why_not = ["a table of gears, passed over: motorfolio gears reads it"]
        elif not self.worthwhile:
            first = plain(table.fields[0].heading) if table.fields else ""
            self.why_not = [f'a table with "{first}" gives no figure of a motor, passed over']
        self.commutation, self.commutation_basis = self._commutation()
        self.magnet, self.magnet_basis = self._magnet()
        self.reference, self.reference_basis = self._reference()
        self.conventions = [convention_of(m, self.commutation, self.notes) for m in self.matches]
        self.headings = self._headings()
        self._unread_headings()

    def ids(self) -> list[str | None]:
        """The part numbers, None where there is none."""
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

    def _style(self) -> NumberStyle:
        texts = [
            t
            for f in self.table.fields
            if f is not self.id_field
            for t in f.texts[:STYLE_ROWS]
            if t and not isinstance(t, Stored)
        ]
        style = number_style(texts)
        if style.conflicts:
            cells = ", ".join(f'"{texts[i]}"' for i in style.conflicts[:5])
            self.remarks.append(
                f"decimal sign {style.decimal or 'undecided'} by {style.evidence}; "
                f"against it: {cells}"
            )
        return style

    def style_of(self, m: Match) -> NumberStyle:
        """The decimal sign of one column: its own where the table's columns differ and it tells."""
        if not self.style.conflicts:
            return self.style
        if id(m) not in self._styles:
            texts = [t for t in m.field.texts[:STYLE_ROWS] if t and not isinstance(t, Stored)]
            own = number_style(texts)
            sure = own.decimal is not None and not own.conflicts
            self._styles[id(m)] = own if sure else self.style
        return self._styles[id(m)]

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
        told = frozenset(k for k in taken if k)
        matcher = Matcher(rest, self.style, told, frozenset(self.notes.marked))
        self.family = matcher.family
        found = iter(matcher.assign())
        matches = [
            overridden[i] if i in overridden else next(found) for i in range(len(plain_fields))
        ]
        set_outputs_aside([m for i, m in enumerate(matches) if i not in overridden], plain_fields)
        if self.id_field is not None:
            told = self._override(self.id_field)
            reason = told.reason if told is not None else "the part numbers"
            own = Match(self.id_field, "text", "part_number", 1.0, [], reason)
            matches.insert(fields.index(self.id_field), own)
        self._matched = matches
        for m in matches:
            self._repair(m, matcher)
        return matches

    def places_of(self, f: Field, lines: list[int]) -> tuple[Ints, Ints]:
        """Rows and columns of the cells under a heading, of the motors at these lines."""
        along = np.asarray(lines, dtype=np.int32)
        if (f.layout or self.table.layout) == "rows":
            return along, np.full(len(lines), f.column, dtype=np.int32)
        return np.full(len(lines), f.row, dtype=np.int32), along

    def _override(self, f: Field) -> Match | None:
        spelled = (*f.label.symbols, *(p.text for p in f.label.names))
        names = {squeeze(tokens(t)) for t in (f.heading, f.label.text, *spelled) if t}
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
                    m.reason += (
                        "; the power of ten is taken as multiplied into the figures, "
                        "since they are else of an impossible size"
                    )
                    return
        m.role, m.reason = (
            "unread",
            f"{m.key} in {unit.text} would be of an impossible size: {unit.remark}",
        )
        m.guesses = (m.key,)

    def _titles(self) -> list[str]:
        return [*self.table.titles, *self.table.notes]

    def texts_about(self) -> list[str]:
        """Titles, notes and captions."""
        captions = {c for f in self.table.fields for c in f.captions}
        return [*self.table.titles, *self.table.notes, *captions]

    def _commutation(self) -> tuple[Commutation, int]:
        if self.options.commutation:
            return Commutation[self.options.commutation.upper()], TOLD
        stated = commutation_in(self.texts_about())
        if stated is not None:
            return stated, STATED
        betrayed = signature(self.matches, self.family)
        if betrayed is not None:
            return betrayed, INFERRED
        return Commutation.BRUSHED, ASSUMED

    def _magnet(self) -> tuple[str, int]:
        stated = magnet_in(self.texts_about())
        return (stated, STATED) if stated in MAGNETS else ("unknown", ASSUMED)

    def _reference(self) -> tuple[float, int]:
        if self.notes.temperature is not None:
            return self.notes.temperature, STATED
        for key in REFERENCE_FIGURES:
            for m in self.matches:
                if m.key == key and m.role == "figure":
                    t = temperature_of(m)
                    if t is not None:
                        return t, STATED
        return UNSTATED_REFERENCE, ASSUMED

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


def _voltage_of(m: Match, matcher: Matcher) -> list[float]:
    if m.key != "nominal_voltage" or m.role != "figure" or not m.units:
        return []
    return [v * m.units[0].factor for v in matcher.sampled(m.field)]


def _without_power(text: str, q: Quantity) -> Unit | None:
    bare = re.sub(r"[×x*·]?\s*10\s*\^?\s*[+-]?\d+\s*[×x*·]?\s*", "", plain(text)).strip()
    try:
        return read_unit(bare, q.accepts)
    except UnitError:
        return None
