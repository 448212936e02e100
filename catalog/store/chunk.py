"""The rows of some motors, fetched table by table, and their published figures as documents."""

import sqlite3
from collections.abc import Iterable, Sequence
from typing import Any, NamedTuple

from ...schema.convention import Convention
from .. import documents as doc
from ..documents import Document


class Place(NamedTuple):
    """What a pattern says of a quantity: heading, its unit and factor, convention, fixed place."""

    heading: str | None
    unit: str | None
    factor: float | None
    convention: int | None
    row: int | None
    column: int | None


NOWHERE = Place(None, None, None, None, None, None)


class Palettes:
    """The small tables that rows point into, and the quantities with their units."""

    def __init__(self, connection: sqlite3.Connection) -> None:
        kinds: dict[str, dict[str, str]] = {"figure": {}, "text": {}, "constant": {}}
        for kind, key, unit in connection.execute(
            "SELECT kind, key, unit FROM quantities ORDER BY position"
        ):
            kinds[kind][key] = unit
        self.figures, self.texts, self.constants = kinds["figure"], kinds["text"], kinds["constant"]
        self.conventions = {
            row[0]: Convention(*row[1:]) for row in connection.execute("SELECT * FROM conventions")
        }
        self.derivations = {
            number: (basis, figures.split())
            for number, basis, figures in connection.execute("SELECT * FROM derivations")
        }


def rows(connection: sqlite3.Connection, sql: str, ids: Sequence[int]) -> list[dict[str, Any]]:
    """The rows of a query whose ``{ids}`` are these numbers."""
    cursor = connection.execute(sql.format(ids=_marks(ids)))
    names = [column[0] for column in cursor.description]
    return [dict(zip(names, row, strict=True)) for row in cursor]


def _marks(ids: Sequence[int]) -> str:
    return ",".join(map(str, ids))


class Chunk:
    """Motors by id: who they are (``heads``), their constants and their figures."""

    def __init__(
        self, connection: sqlite3.Connection, palettes: Palettes, ids: Sequence[int]
    ) -> None:
        self.connection = connection
        self.palettes = palettes
        self.ids = ids
        self.heads: dict[int, dict[str, Any]] = {
            row["id"]: row
            for row in rows(
                connection,
                "SELECT m.*, k.commutation, k.commutation_basis, k.magnet, k.magnet_basis, "
                "k.reference_temperature, k.reference_temperature_basis, f.file, s.sheet, s.page "
                "FROM motor m JOIN kinds k ON k.id = m.kind JOIN sources s ON s.id = m.source "
                "JOIN files f ON f.id = s.file WHERE m.id IN ({ids})",
                ids,
            )
        }
        figures, texts = palettes.figures, palettes.texts
        self.texts = self._by_id("figure_text", [*figures, *texts])
        self.values = self._by_id("figure_value", figures)
        self.digits = self._by_id("figure_digit", figures)
        ends = ("", "_low", "_high", "_by")
        names = [f"{key}{end}" for key in palettes.constants for end in ends]
        self.constant_rows = self._by_id("constants", names)
        self.patterns = self._patterns()
        self.places = self._marked("figure_places")
        self.intervals = self._marked("figure_intervals")
        self.qualifiers = self._marked("figure_qualifiers")
        self.corrections = {
            (row["motor"], row["quantity"]): row
            for row in rows(
                connection,
                "SELECT a.*, k.text, k.reason FROM applied_corrections a "
                "JOIN corrections k ON k.id = a.correction WHERE a.motor IN ({ids})",
                ids,
            )
        }

    def _by_id(self, table: str, keys: Iterable[str]) -> dict[int, dict[str, Any]]:
        """What each row holds, gaps left out, in the order of the keys."""
        names = list(keys)
        quoted = "".join(f', "{name}"' for name in names)
        cursor = self.connection.execute(
            f"SELECT id{quoted} FROM {table} WHERE id IN ({_marks(self.ids)})"
        )
        return {
            row[0]: {k: v for k, v in zip(names, row[1:], strict=True) if v is not None}
            for row in cursor
        }

    def _patterns(self) -> dict[int, dict[str, Place]]:
        numbers = sorted({head["pattern"] for head in self.heads.values()})
        found: dict[int, dict[str, Place]] = {number: {} for number in numbers}
        for pattern, quantity, *place in self.connection.execute(
            'SELECT p.pattern, p.quantity, h.text, h.unit, h.factor, p.convention, p."row", '
            'p."column" FROM patterns p LEFT JOIN headings h ON h.id = p.heading '
            f"WHERE p.pattern IN ({_marks(numbers)})"
        ):
            found[pattern][quantity] = Place(*place)
        return found

    def _marked(self, table: str) -> dict[tuple[int, str], tuple]:
        """(motor, quantity) → the further columns of a table that few figures stand in."""
        return {
            (motor, quantity): tuple(rest)
            for motor, quantity, *rest in self.connection.execute(
                f"SELECT * FROM {table} WHERE motor IN ({_marks(self.ids)})"
            )
        }

    def constants(self, i: int) -> dict[str, Document]:
        """The constants of a motor."""
        row = self.constant_rows[i]
        found: dict[str, Document] = {}
        for key, unit in self.palettes.constants.items():
            if key in row:
                basis, sources = self.palettes.derivations[row[f"{key}_by"]]
                found[key] = doc.constant(
                    row[key], unit, row.get(f"{key}_low"), row.get(f"{key}_high"), basis, sources
                )
        return found

    def figures(self, i: int) -> dict[str, Document]:
        """The published figures of a motor, numbers first."""
        texts = self.texts[i]
        pattern = self.patterns[self.heads[i]["pattern"]]
        found: dict[str, Document] = {}
        for key, value in self.values[i].items():
            place = pattern.get(key, NOWHERE)
            low, high = self.intervals.get((i, key)) or _interval(
                value, self.digits[i].get(key), place.factor
            )
            unit = self.palettes.figures[key]
            figure = doc.figure(
                texts.get(key), value, (place.unit or unit) if unit == "currency" else unit,
                low, high, self.palettes.conventions.get(place.convention or 0),
                qualifier=self.qualifiers.get((i, key), (None,))[0],
                heading=place.heading, printed_unit=place.unit, place=self._cell(i, key, place),
            )  # fmt: skip
            if (i, key) in self.corrections:
                c = self.corrections[(i, key)]
                published = {
                    part: doc.number(c[f"published_{part}"]) for part in ("value", "low", "high")
                }
                figure = doc.correction(figure, published, c["text"], c["reason"])
            found[key] = figure
        for key in self.palettes.texts:
            if key in texts:
                place = pattern.get(key, NOWHERE)
                found[key] = doc.text_figure(texts[key], place.heading, self._cell(i, key, place))
        return found

    def _cell(self, i: int, key: str, place: Place) -> Document:
        head = self.heads[i]
        row, column = self.places.get((i, key), (None, None))
        return doc.cell(
            head["sheet"],
            head["page"],
            row or place.row or head["row"],
            column or place.column or head["column"],
        )


def _interval(value: float, digit: int | None, factor: float | None) -> tuple[float, float]:
    """Half of the last printed digit on either side; see intervals.py."""
    if digit is None:
        return value, value
    half = 0.5 * 10.0**digit * abs(1.0 if factor is None else factor)
    return value - half, value + half
