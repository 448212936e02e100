"""Reading motors and findings back as documents, in chunks, with nothing but sqlite3."""

import json
import sqlite3
from collections import defaultdict
from collections.abc import Iterable, Iterator, Sequence
from itertools import islice
from typing import Any

from .. import documents as doc
from ..documents import Document
from . import gears
from .chunk import Chunk, Palettes, rows
from .database import CatalogError
from .known import Known
from .same import stands_for

CHUNK = 400
MOST_SIMILAR, LEAST_SIMILAR = 3, 60
"""So many part numbers are offered in place of an unknown one, and how alike in percent."""


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
    if not found:
        found = [
            Known(*row)
            for name in stands_for(connection, part)
            for row in connection.execute(
                "SELECT id, maker, part_number FROM motor WHERE maker = ? AND part_number = ? "
                "AND replaced_by IS NULL",
                name,
            )
        ]
    if len(found) == 1:
        return found[0]
    if found:
        names = ", ".join(known.name for known in found)
        raise CatalogError(f"More than one motor is called {part}: say which of {names}.")
    if gears.named(connection, part):
        raise CatalogError(f"{part} is a gear, not a motor; motorfolio gears lists it.")
    raise CatalogError(f"The catalog has no motor {part}{_similar(connection, part)}")


def _similar(connection: sqlite3.Connection, part: str) -> str:
    """The part numbers that may have been meant; case, hyphens and blanks count for nothing."""
    from ...schema.spelling import nearest

    known: dict[str, list[str]] = defaultdict(list)
    for (number,) in connection.execute(
        "SELECT DISTINCT part_number FROM motor WHERE replaced_by IS NULL ORDER BY part_number"
    ):
        known[_folded(number)].append(number)
    for text in (part, part.rpartition("/")[2]):
        near = nearest(_folded(text), known, most=MOST_SIMILAR, least=LEAST_SIMILAR)
        if _folded(text) in known:
            near = [_folded(text)]
        if near:
            meant = [number for fold in near for number in known[fold]][:MOST_SIMILAR]
            return (
                f"; did you mean {' or '.join(filter(None, [', '.join(meant[:-1]), meant[-1]]))}?"
            )
    return "."


def _folded(text: str) -> str:
    return "".join(filter(str.isalnum, text.casefold()))


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
        self.palettes = Palettes(connection)

    def load(self, ids: Sequence[int]) -> Iterator[Document]:
        """The documents of up to CHUNK motors."""
        chunk = Chunk(self.connection, self.palettes, ids)
        further = self._further(ids, chunk.heads)
        points = self._points(ids)
        findings = self._findings(ids)
        for i in ids:
            head = chunk.heads[i]
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
                figures=chunk.figures(i),
                constants=chunk.constants(i),
                findings=[doc.with_motor(f, head["part_number"]) for f in findings[i]],
                repeats=repeats,
                conditions=conditions,
                points=points[i],
                source={"file": head["file"], "sheet": head["sheet"], "page": head["page"]},
            )

    def _further(
        self, ids: Sequence[int], heads: dict[int, dict[str, Any]]
    ) -> dict[int, tuple[dict[str, list[Document]], dict[str, dict[str, Document]]]]:
        found: dict[int, tuple[dict[str, list[Document]], dict[str, dict[str, Document]]]] = {
            i: ({}, {}) for i in ids
        }
        for r in rows(
            self.connection,
            "SELECT f.*, h.text AS heading_text, h.unit AS heading_unit FROM further_figures f "
            "LEFT JOIN headings h ON h.id = f.heading WHERE f.motor IN ({ids}) ORDER BY f.id",
            ids,
        ):
            key, printed = r["quantity"], r["unit"] or r["heading_unit"]
            unit = self.palettes.figures[key]
            head = heads[r["motor"]]
            document = doc.figure(
                r["text"], r["value"], (printed or unit) if unit == "currency" else unit,
                r["low"], r["high"], self.palettes.conventions.get(r["convention"]),
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
        for r in rows(
            self.connection,
            "SELECT * FROM points WHERE motor IN ({ids}) ORDER BY motor, number",
            ids,
        ):
            blank = {"name": r["name"], "figures": {}, "row": r["row"]}
            point = found[r["motor"]].setdefault(r["number"], blank)
            point["figures"][r["quantity"]] = doc.amount(
                r["value"], self.palettes.figures.get(r["quantity"], "")
            )
        return {i: list(points.values()) for i, points in found.items()}

    def _findings(self, ids: Sequence[int]) -> dict[int, list[Document]]:
        found: dict[int, list[Document]] = {i: [] for i in ids}
        pairs = rows(
            self.connection,
            "SELECT motor, id FROM findings WHERE scope = 'motor' AND motor IN ({ids}) "
            "UNION ALL SELECT m.id, f.finding FROM motor m CROSS JOIN finding_motors f "
            "ON m.id BETWEEN f.first AND f.last WHERE m.id IN ({ids}) ORDER BY 2",
            ids,
        )
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
            "(SELECT f.finding FROM motor o CROSS JOIN finding_motors f "
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


def lines(stored: str | None) -> list[str]:
    """A list of texts as kept in one column."""
    return json.loads(stored) if stored else []
