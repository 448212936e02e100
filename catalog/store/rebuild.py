"""The batch of a table as it was read, rebuilt from its rows, so that it can be judged anew."""

import sqlite3
from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

from ...schema.batch import (
    MODEL_BASES,
    Batch,
    Condition,
    FigureColumn,
    Heading,
    Ints,
    PlacedFigure,
    Point,
    Source,
    TextColumn,
    empty_figures,
)
from ...schema.convention import Commutation, Convention
from .intervals import half_digit
from .load import lines
from .names import figure_keys, text_keys


def batch_of_source(connection: sqlite3.Connection, source_id: int) -> tuple[Batch, int]:
    """The batch of one source as published (no correction applied), and its first motor's id.

    Motors that a later sheet replaced are among them: they are evidence about their table.
    """
    rebuilder = _Rebuilder(connection, source_id)
    return rebuilder.batch(), rebuilder.first


class _Rebuilder:
    def __init__(self, connection: sqlite3.Connection, source_id: int) -> None:
        self.connection = connection
        self.source_id = source_id
        self.source = self._dicts(
            "SELECT s.*, f.file AS name, f.sha256 FROM sources s JOIN files f ON f.id = s.file "
            f"WHERE s.id = {source_id}"
        )[0]
        self.first: int = self.source["first_motor"]
        self.n: int = self.source["motors"]
        self.range = f"BETWEEN {self.first} AND {self.first + self.n - 1}"
        self.conventions = {
            row[0]: Convention(*row[1:]) for row in connection.execute("SELECT * FROM conventions")
        }
        self.motors = self._dicts(
            "SELECT m.*, k.commutation, k.commutation_basis, k.magnet, k.magnet_basis, "
            "k.reference_temperature, k.reference_temperature_basis FROM motor m "
            f"JOIN kinds k ON k.id = m.kind WHERE m.id {self.range} ORDER BY m.id"
        )
        stored = self._dicts(f"SELECT * FROM headings WHERE source = {source_id} ORDER BY id")
        self.heading_base: int = stored[0]["id"] if stored else 0
        self.headings = [self._heading(row) for row in stored]
        numbers = sorted({motor["pattern"] for motor in self.motors})
        self.patterns: dict[tuple[int, str], dict] = {
            (row["pattern"], row["quantity"]): row
            for row in self._dicts(
                f"SELECT * FROM patterns WHERE pattern IN ({','.join(map(str, numbers))})"
            )
        }
        self.pattern_numbers = numbers
        self.pattern_of = np.searchsorted(numbers, [motor["pattern"] for motor in self.motors])
        self.places = {
            (row["motor"], row["quantity"]): (row["row"], row["column"])
            for row in self._dicts(f"SELECT * FROM figure_places WHERE motor {self.range}")
        }
        self.row = _ints(motor["row"] for motor in self.motors)
        self.column = _ints(motor["column"] for motor in self.motors)

    def _dicts(self, sql: str) -> list[dict]:
        cursor = self.connection.execute(sql)
        names = [column[0] for column in cursor.description]
        return [dict(zip(names, row, strict=True)) for row in cursor]

    def _heading(self, row: dict) -> Heading:
        return Heading(
            row["text"], row["quantity"], row["unit"] or "",
            self.conventions.get(row["convention"]), row["score"], row["reason"] or "",
            row["factor"], row["offset"],
        )  # fmt: skip

    def batch(self) -> Batch:
        source, motors = self.source, self.motors
        figures = self._figures()
        self._restore_published(figures)
        texts = self._texts()
        repeats, conditions = self._further()
        return Batch(
            source=Source(
                source["name"], source["sha256"], source["sheet"], source["page"],
                source["layout"] or "rows",
            ),
            part_number=[m["part_number"] for m in motors],
            maker=[m["maker"] for m in motors],
            series=[m["series"] for m in motors],
            headings=self.headings,
            figures=figures,
            commutation=_bytes(Commutation[m["commutation"].upper()] for m in motors),
            commutation_basis=_bytes(MODEL_BASES.index(m["commutation_basis"]) for m in motors),
            magnet=[m["magnet"] for m in motors],
            magnet_basis=_bytes(MODEL_BASES.index(m["magnet_basis"]) for m in motors),
            reference_temperature=np.array([m["reference_temperature"] for m in motors], float),
            reference_temperature_basis=_bytes(
                MODEL_BASES.index(m["reference_temperature_basis"]) for m in motors
            ),
            repeats=repeats,
            texts=texts,
            conditions=conditions,
            points=self._points(),
            notes=lines(source["notes"]),
        )  # fmt: skip

    def _figures(self) -> dict[str, FigureColumn]:
        keys = figure_keys()
        names = ", ".join(f'"{key}"' for key in keys)
        tables: dict[str, list[tuple]] = {
            part: self.connection.execute(
                f"SELECT {names} FROM figure_{part} WHERE id {self.range} ORDER BY id"
            ).fetchall()
            for part in ("text", "value", "digit")
        }
        values, digits = (
            np.array(tables[part], dtype=np.float64).reshape(self.n, len(keys))
            for part in ("value", "digit")
        )
        factors = np.array([heading.factor for heading in self.headings] or [1.0])
        intervals: dict[str, list[dict]] = {}
        for row in self._dicts(f"SELECT * FROM figure_intervals WHERE motor {self.range}"):
            intervals.setdefault(row["quantity"], []).append(row)
        qualifiers: dict[str, dict[int, str]] = {}
        for row in self._dicts(f"SELECT * FROM figure_qualifiers WHERE motor {self.range}"):
            qualifiers.setdefault(row["quantity"], {})[row["motor"] - self.first] = row["qualifier"]
        figures: dict[str, FigureColumn] = {}
        for i, key in enumerate(keys):
            if np.isnan(values[:, i]).all():
                continue
            value, heading = values[:, i].copy(), self._heading_of(key)
            half = half_digit(digits[:, i], factors[heading.clip(0, len(factors) - 1)])
            half = np.where(np.isnan(half), 0.0, half)
            low, high = value - half, value + half
            for row in intervals.get(key, ()):
                entry = row["motor"] - self.first
                low[entry], high[entry] = _number(row["low"]), _number(row["high"])
            palette, which = self._read_as(key)
            row, column = self._place(key)
            figures[key] = FigureColumn(
                value, low, high, [row[i] for row in tables["text"]], palette, which, heading,
                row, column, qualifiers.get(key, {}),
            )  # fmt: skip
        return figures

    def _places(self, key: str) -> list[dict | None]:
        return [self.patterns.get((number, key)) for number in self.pattern_numbers]

    def _read_as(self, key: str) -> tuple[list[Convention], Ints]:
        palette: list[Convention] = []
        which = []
        for place in self._places(key):
            convention = self.conventions.get(place["read_as"] if place else None, Convention())
            if convention not in palette:
                palette.append(convention)
            which.append(palette.index(convention))
        return palette, _ints(which)[self.pattern_of]

    def _heading_of(self, key: str) -> Ints:
        numbers = _ints(
            place["heading"] - self.heading_base if place and place["heading"] is not None else -1
            for place in self._places(key)
        )
        return numbers[self.pattern_of]

    def _place(self, key: str) -> tuple[Ints, Ints]:
        fixed = self._places(key)
        row = _ints(place["row"] if place else 0 for place in fixed)[self.pattern_of]
        column = _ints(place["column"] if place else 0 for place in fixed)[self.pattern_of]
        row = np.where(row > 0, row, self.row).astype(np.int32)
        column = np.where(column > 0, column, self.column).astype(np.int32)
        for (motor, quantity), (r, c) in self.places.items():
            if quantity == key:
                row[motor - self.first], column[motor - self.first] = r, c
        return row, column

    def _restore_published(self, figures: dict[str, FigureColumn]) -> None:
        for row in self._dicts(f"SELECT * FROM applied_corrections WHERE motor {self.range}"):
            column, i = figures[row["quantity"]], row["motor"] - self.first
            for part in ("value", "low", "high"):
                published = row[f"published_{part}"]
                getattr(column, part)[i] = np.nan if published is None else published

    def _texts(self) -> dict[str, TextColumn]:
        keys = text_keys()
        names = ", ".join(f'"{key}"' for key in keys)
        rows = self.connection.execute(
            f"SELECT {names} FROM figure_text WHERE id {self.range} ORDER BY id"
        ).fetchall()
        texts: dict[str, TextColumn] = {}
        for i, key in enumerate(keys):
            column = [row[i] for row in rows]
            if any(text is not None for text in column):
                texts[key] = TextColumn(column, *self._place(key))
        return texts

    def _further(self) -> tuple[dict[str, list[FigureColumn]], list[Condition]]:
        repeats: dict[str, list[FigureColumn]] = {}
        conditions: dict[str, Condition] = {}
        taken: dict[tuple[str, int], int] = {}
        for row in self._dicts(
            f"SELECT * FROM further_figures WHERE motor {self.range} ORDER BY id"
        ):
            key, i = row["quantity"], row["motor"] - self.first
            convention = self.conventions.get(row["convention"], Convention())
            value, low, high = (_number(row[part]) for part in ("value", "low", "high"))
            if row["condition"] is not None:
                condition = conditions.setdefault(row["condition"], Condition(row["condition"]))
                condition.figures.setdefault(i, {})[key] = PlacedFigure(
                    value, low, high, row["text"], row["unit"] or "", convention, row["qualifier"],
                    row["row"] or 0, row["column"] or 0,
                )  # fmt: skip
                continue
            number = taken[(key, i)] = taken.get((key, i), -1) + 1
            columns = repeats.setdefault(key, [])
            if number == len(columns):
                columns.append(empty_figures(self.n))
            self._set(columns[number], i, (value, low, high), row, convention)
        return repeats, list(conditions.values())

    def _set(
        self,
        f: FigureColumn,
        i: int,
        numbers: tuple[float, float, float],
        row: dict,
        convention: Convention,
    ) -> None:
        f.value[i], f.low[i], f.high[i] = numbers
        f.text[i] = row["text"]
        if convention not in f.conventions:
            f.conventions.append(convention)
        f.convention[i] = f.conventions.index(convention)
        f.heading[i] = -1 if row["heading"] is None else row["heading"] - self.heading_base
        f.row[i], f.column[i] = row["row"] or 0, row["column"] or 0
        if row["qualifier"]:
            f.qualifiers[i] = row["qualifier"]

    def _points(self) -> dict[int, list[Point]]:
        found: dict[int, dict[int, Point]] = {}
        for row in self._dicts(
            f"SELECT * FROM points WHERE motor {self.range} ORDER BY motor, number"
        ):
            points = found.setdefault(row["motor"] - self.first, {})
            point = points.setdefault(row["number"], Point(row["name"] or "", {}, row["row"] or 0))
            point.figures[row["quantity"]] = _number(row["value"])
        return {i: list(points.values()) for i, points in found.items()}


def _number(value: float | None) -> float:
    return np.nan if value is None else value


def _ints(numbers: Iterable[int | None]) -> Ints:
    return np.array([number or 0 for number in numbers], dtype=np.int32)


def _bytes(numbers: Iterable[int]) -> NDArray[np.int8]:
    return np.array(list(numbers), dtype=np.int8)
