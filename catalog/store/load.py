"""Reading motors and findings back as documents, in chunks, with nothing but sqlite3."""

import json
import sqlite3
from collections import defaultdict
from collections.abc import Iterable, Iterator, Sequence
from itertools import islice
from typing import NamedTuple

from ...schema.convention import Convention
from .. import documents as doc
from ..documents import Document
from .database import CatalogError

CHUNK = 400


class Known(NamedTuple):
    """A motor as `find` gives it."""

    id: int
    maker: str
    part_number: str

    @property
    def name(self) -> str:
        """MAKER/PART, or PART where no maker is known."""
        return f"{self.maker}/{self.part_number}" if self.maker else self.part_number


def find(connection: sqlite3.Connection, part: str) -> Known:
    """The motor of that part number, or of MAKER/PART; CatalogError if there is none or several."""
    found = [Known(*row) for row in connection.execute(
        "SELECT id, maker, part_number FROM motor WHERE part_number = ? AND replaced_by IS NULL",
        (part,),
    )]  # fmt: skip
    if not found and "/" in part:
        # a part number may itself hold a slash: try every place
        for at in (i for i, sign in enumerate(part) if sign == "/"):
            found += [Known(*row) for row in connection.execute(
                "SELECT id, maker, part_number FROM motor WHERE part_number = ? AND maker = ? "
                "AND replaced_by IS NULL", (part[at + 1 :], part[:at]),
            )]  # fmt: skip
    if len(found) == 1:
        return found[0]
    if found:
        names = ", ".join(known.name for known in found)
        raise CatalogError(f"More than one motor is called {part}: say which of {names}.")
    raise CatalogError(f"The catalog has no motor {part}{_similar(connection, part)}.")


def _similar(connection: sqlite3.Connection, part: str) -> str:
    number = part.rsplit("/", 1)[-1]
    pattern = f"%{number.replace('%', '').replace('_', '')[:5]}%"
    rows = connection.execute(
        "SELECT part_number FROM motor WHERE replaced_by IS NULL AND (part_number LIKE ? "
        "OR part_number = upper(?)) ORDER BY abs(length(part_number) - ?), part_number LIMIT 3",
        (pattern, number, len(number)),
    ).fetchall()
    return f" (it has {', '.join(row[0] for row in rows)})" if rows and len(number) > 1 else ""


def current_ids(connection: sqlite3.Connection) -> list[int]:
    """The ids of all motors, in the order in which they were read."""
    return [
        row[0]
        for row in connection.execute("SELECT id FROM motor WHERE replaced_by IS NULL ORDER BY id")
    ]


def motors(connection: sqlite3.Connection, ids: Iterable[int]) -> Iterator[Document]:
    """The documents of these motors, earlier revisions too, in this order."""
    loader = _Loader(connection)
    pending = iter(ids)
    while chunk := list(islice(pending, CHUNK)):
        yield from loader.load(chunk)


class _Loader:
    def __init__(self, connection: sqlite3.Connection) -> None:
        self.connection = connection
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

    def _rows(self, sql: str, ids: Sequence[int]) -> sqlite3.Cursor:
        cursor = self.connection.execute(sql.format(ids=",".join(map(str, ids))))
        cursor.row_factory = sqlite3.Row
        return cursor

    def _by_id(self, table: str, ids: Sequence[int]) -> dict[int, sqlite3.Row]:
        return {r["id"]: r for r in self._rows(f"SELECT * FROM {table} WHERE id IN ({{ids}})", ids)}

    def load(self, ids: Sequence[int]) -> Iterator[Document]:
        """The documents of up to CHUNK motors."""
        heads = {
            r["id"]: r
            for r in self._rows(
                "SELECT m.*, k.commutation, k.commutation_basis, k.magnet, k.magnet_basis, "
                "k.reference_temperature, k.reference_temperature_basis, f.file, f.sha256, "
                "s.sheet, s.page FROM motor m JOIN kinds k ON k.id = m.kind "
                "JOIN sources s ON s.id = m.source JOIN files f ON f.id = s.file "
                "WHERE m.id IN ({ids})",
                ids,
            )
        }
        parts = {part: self._by_id(f"figure_{part}", ids) for part in ("text", "value", "digit")}
        intervals = {
            (r["motor"], r["quantity"]): (r["low"], r["high"])
            for r in self._rows("SELECT * FROM figure_intervals WHERE motor IN ({ids})", ids)
        }
        constants = self._by_id("constants", ids)
        patterns = self._patterns(heads.values())
        places = {
            (r["motor"], r["quantity"]): (r["row"], r["column"])
            for r in self._rows("SELECT * FROM figure_places WHERE motor IN ({ids})", ids)
        }
        qualifiers = {
            (r["motor"], r["quantity"]): r["qualifier"]
            for r in self._rows("SELECT * FROM figure_qualifiers WHERE motor IN ({ids})", ids)
        }
        corrections = {
            (r["motor"], r["quantity"]): r
            for r in self._rows(
                "SELECT a.*, k.text, k.reason FROM applied_corrections a "
                "JOIN corrections k ON k.id = a.correction WHERE a.motor IN ({ids})",
                ids,
            )
        }
        further = self._further(ids, heads)
        points = self._points(ids)
        findings = self._findings(ids)
        for i in ids:
            head = heads[i]
            figures: dict[str, Document] = {}
            texts, values = parts["text"][i], parts["value"][i]
            for key in self.figures:
                if values[key] is None:
                    continue
                place = patterns[head["pattern"]].get(key)
                row, column = places.get((i, key), (None, None))
                low, high = intervals.get((i, key)) or _interval(
                    values[key], parts["digit"][i][key], place
                )
                figure = doc.figure(
                    texts[key], values[key], self._unit(key, place), low, high,
                    self.conventions.get(place["convention"]) if place else None,
                    qualifier=qualifiers.get((i, key)),
                    heading=place["text"] if place else None,
                    printed_unit=place["unit"] if place else None,
                    place=_cell(head, place, row, column),
                )  # fmt: skip
                if (i, key) in corrections:
                    c = corrections[(i, key)]
                    published = {
                        part: doc.number(c[f"published_{part}"])
                        for part in ("value", "low", "high")
                    }
                    figure = doc.correction(figure, published, c["text"], c["reason"])
                figures[key] = figure
            for key in self.texts:
                if texts[key] is not None:
                    place = patterns[head["pattern"]].get(key)
                    row, column = places.get((i, key), (None, None))
                    figures[key] = doc.text_figure(
                        texts[key],
                        place["text"] if place else None,
                        _cell(head, place, row, column),
                    )
            repeats, conditions = further[i]
            yield doc.motor(
                part_number=head["part_number"],
                maker=head["maker"],
                series=head["series"],
                kind=doc.model(
                    doc.fact(head["commutation"], head["commutation_basis"]),
                    doc.fact(head["magnet"], head["magnet_basis"]),
                    head["reference_temperature"],
                    head["reference_temperature_basis"],
                ),
                figures=figures,
                constants=self._constants(constants[i]),
                findings=[doc.with_motor(f, head["part_number"]) for f in findings[i]],
                repeats=repeats,
                conditions=conditions,
                points=points[i],
                source={"file": head["file"], "sheet": head["sheet"], "page": head["page"]},
            )

    def _unit(self, key: str, place: sqlite3.Row | None) -> str:
        unit = self.figures.get(key, "")
        if unit == "currency" and place is not None and place["unit"]:
            return place["unit"]
        return unit

    def _patterns(self, heads: Iterable[sqlite3.Row]) -> dict[int, dict[str, sqlite3.Row]]:
        numbers = sorted({head["pattern"] for head in heads})
        found: dict[int, dict[str, sqlite3.Row]] = {number: {} for number in numbers}
        for r in self._rows(
            "SELECT p.*, h.text, h.unit, h.factor FROM patterns p "
            "LEFT JOIN headings h ON h.id = p.heading "
            "WHERE p.pattern IN ({ids})",
            numbers,
        ):
            found[r["pattern"]][r["quantity"]] = r
        return found

    def _constants(self, row: sqlite3.Row) -> dict[str, Document]:
        found: dict[str, Document] = {}
        for key, unit in self.constants.items():
            if row[key] is not None:
                basis, sources = self.derivations[row[f"{key}_by"]]
                found[key] = doc.constant(
                    row[key], unit, row[f"{key}_low"], row[f"{key}_high"], basis, sources
                )
        return found

    def _further(
        self, ids: Sequence[int], heads: dict[int, sqlite3.Row]
    ) -> dict[int, tuple[dict[str, list[Document]], dict[str, dict[str, Document]]]]:
        found: dict[int, tuple[dict[str, list[Document]], dict[str, dict[str, Document]]]] = {
            i: ({}, {}) for i in ids
        }
        for r in self._rows(
            "SELECT f.*, h.text AS heading_text, h.unit AS heading_unit FROM further_figures f "
            "LEFT JOIN headings h ON h.id = f.heading WHERE f.motor IN ({ids}) ORDER BY f.id",
            ids,
        ):
            key, printed = r["quantity"], r["unit"] or r["heading_unit"]
            unit = self.figures[key]
            head = heads[r["motor"]]
            document = doc.figure(
                r["text"], r["value"], (printed or unit) if unit == "currency" else unit,
                r["low"], r["high"], self.conventions.get(r["convention"]),
                qualifier=r["qualifier"], heading=r["heading_text"], printed_unit=printed,
                place=doc.cell(head["sheet"], head["page"], r["row"], r["column"]),
            )  # fmt: skip
            repeats, conditions = found[r["motor"]]
            if r["condition"] is None:
                repeats.setdefault(key, []).append(document)
            else:
                conditions.setdefault(r["condition"], {})[key] = document
        return found

    def _points(self, ids: Sequence[int]) -> dict[int, list[Document]]:
        found: dict[int, dict[int, Document]] = {i: {} for i in ids}
        for r in self._rows(
            "SELECT * FROM points WHERE motor IN ({ids}) ORDER BY motor, number", ids
        ):
            blank = {"name": r["name"], "figures": {}, "row": r["row"]}
            point = found[r["motor"]].setdefault(r["number"], blank)
            point["figures"][r["quantity"]] = doc.amount(
                r["value"], self.figures.get(r["quantity"], "")
            )
        return {i: list(points.values()) for i, points in found.items()}

    def _findings(self, ids: Sequence[int]) -> dict[int, list[Document]]:
        found: dict[int, list[Document]] = {i: [] for i in ids}
        pairs = self._rows(
            "SELECT motor, id FROM findings WHERE scope = 'motor' AND motor IN ({ids}) "
            "UNION ALL SELECT m.id, f.finding FROM finding_motors f JOIN motor m "
            "ON m.id BETWEEN f.first AND f.last WHERE m.id IN ({ids}) ORDER BY 2",
            ids,
        ).fetchall()
        documents = dict(findings(self.connection, sorted({pair["id"] for pair in pairs})))
        for pair in pairs:
            found[pair["motor"]].append(documents[pair["id"]])
        return found


def findings(connection: sqlite3.Connection, ids: Sequence[int]) -> Iterator[tuple[int, Document]]:
    """The findings of these ids, as (id, document)."""
    for start in range(0, len(ids), CHUNK):
        marks = ",".join(map(str, ids[start : start + CHUNK]))
        parts: dict[int, list[str]] = defaultdict(list)
        for number, part in connection.execute(
            "SELECT n.finding, m.part_number FROM finding_motors n JOIN motor m "
            f"ON m.id BETWEEN n.first AND n.last WHERE n.finding IN ({marks}) "
            "ORDER BY n.finding, m.id"
        ):
            parts[number].append(part)
        cursor = connection.execute(
            "SELECT n.*, m.part_number, s.sheet, s.page FROM findings n "
            "JOIN motor m ON m.id = n.motor "
            f"JOIN sources s ON s.id = n.source WHERE n.id IN ({marks}) ORDER BY n.id"
        )
        cursor.row_factory = sqlite3.Row
        for r in cursor:
            placed = r["row"] is not None or r["column"] is not None
            yield (
                r["id"],
                {
                    "part_number": r["part_number"],
                    "scope": r["scope"],
                    "part_numbers": parts[r["id"]],
                    "severity": r["severity"],
                    "relation": r["relation"],
                    "figures": r["figures"].split(),
                    "suspect": r["suspect"],
                    "ratio": r["ratio"],
                    "cause": r["cause"],
                    "other_causes": r["other_causes"].split(),
                    "implied": None if r["unit"] is None else doc.amount(r["implied"], r["unit"]),
                    "cell": doc.cell(r["sheet"], r["page"], r["row"], r["column"])
                    if placed
                    else None,
                    "message": r["message"],
                },
            )


def finding_ids(connection: sqlite3.Connection, motors: Sequence[int] | None = None) -> list[int]:
    """Findings of these motors, or of all that are current; worst first."""
    where = (
        "(m.replaced_by IS NULL OR EXISTS (SELECT 1 FROM finding_motors f JOIN motor o "
        "ON o.id BETWEEN f.first AND f.last WHERE f.finding = n.id AND o.replaced_by IS NULL))"
    )
    if motors is not None:
        marks = ",".join(map(str, motors))
        where = (
            f"(n.scope = 'motor' AND n.motor IN ({marks}) OR n.id IN "
            "(SELECT f.finding FROM finding_motors f JOIN motor o "
            f"ON o.id BETWEEN f.first AND f.last WHERE o.id IN ({marks})))"
        )
    rank = "CASE n.severity WHEN 'error' THEN 0 WHEN 'warning' THEN 1 ELSE 2 END"
    return [
        row[0]
        for row in connection.execute(
            f"SELECT n.id FROM findings n JOIN motor m ON m.id = n.motor WHERE {where} "
            f"ORDER BY {rank}, n.id"
        )
    ]


def _cell(
    head: sqlite3.Row, place: sqlite3.Row | None, row: int | None, column: int | None
) -> Document:
    row = row or (place["row"] if place else None) or head["row"]
    column = column or (place["column"] if place else None) or head["column"]
    return doc.cell(head["sheet"], head["page"], row, column)


def _interval(value: float, digit: int | None, place: sqlite3.Row | None) -> tuple[float, float]:
    """Half of the last printed digit on either side; see intervals.py."""
    if digit is None:
        return value, value
    factor = place["factor"] if place is not None else None
    half = 0.5 * 10.0**digit * abs(1.0 if factor is None else factor)
    return value - half, value + half


def lines(stored: str | None) -> list[str]:
    """A list of texts as kept in one column."""
    return json.loads(stored) if stored else []
