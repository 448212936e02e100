"""Motors out of the catalog: JSON and TOML with all that is known, CSV and Parquet as a table."""

import csv
import io
import json
import math
import re
import tomllib
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path
from typing import Any, TextIO

from ..schema.convention import Commutation, Convention, to_dc
from ..schema.errors import MotorfolioError
from ..schema.figure.grammar import half_digit
from ..schema.units.read import Unit, read_unit
from ..schema.vocabulary import quantities
from .documents import Document
from .store import Catalog

_PLAIN_NUMBER = re.compile(
    r"[-+−]?[\d.,'’\s\u00a0\u202f]*\d[\d.,'’\s\u00a0\u202f]*([eE×x*·^10⁰¹²³⁴⁵⁶⁷⁸⁹⁻+-]+\d*)?"
)
_RISKY = ("=", "+", "-", "@", "\t", "\r")


@dataclass(frozen=True, slots=True)
class ChosenUnit:
    """How a quantity is to be written: a unit, with convention words that may have been in it."""

    unit: Unit

    def in_convention(self, convention: dict[str, Any] | None) -> Convention | None:
        """The convention to convert to, or None where the unit names none."""
        marks = self.unit.marks
        if not marks:
            return None
        old = _convention(convention)
        kind = next((k for k in ("rms", "peak", "dc") if k in marks), None)
        changes: dict[str, str | float | None] = {}
        if kind and old.current is not None:
            changes["current"] = kind
        if kind and old.voltage is not None and old.current is None:
            changes["voltage"] = kind
        if "lines" in marks or "phase" in marks:
            changes["between"] = "lines" if "lines" in marks else "phase"
        return old.with_(**changes)


Units = dict[str, ChosenUnit]


def read_units(path: Path) -> Units:
    """A TOML file of quantity = unit, such as ``torque_constant = "mN·m/A rms"``."""
    try:
        chosen = tomllib.loads(path.read_text(encoding="utf-8-sig"))
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise MotorfolioError(
            f'{path}: no TOML file of units, such as torque_constant = "mN·m/A" ({error}).'
        ) from None
    units: Units = {}
    for key, text in chosen.items():
        quantity = quantities().get(key)
        if quantity is None or quantity.text or not isinstance(text, str):
            raise MotorfolioError(
                f'{path}: "{key}" is no quantity with a unit; write lines such as '
                'torque_constant = "mN·m/A".'
            )
        try:
            units[key] = ChosenUnit(read_unit(text, quantity.accepts))
        except MotorfolioError as error:
            raise MotorfolioError(f"{path}: {key}: {error}") from None
    return units


def export(catalog: Catalog, format: str, out: TextIO, units: Units | None = None) -> int:
    """Write all motors as "csv", "json" or "toml"; returns how many.

    units: CSV in these units instead of SI; a quantity that isn't among them stays in SI.
    """
    writers: dict[str, Callable[[], int]] = {
        "json": lambda: _write_json(catalog.motors(), out),
        "toml": lambda: _write_toml(catalog.motors(), out),
        "csv": lambda: _write_csv(catalog.motors, out, units or {}),
    }
    return writers[format]()


def export_parquet(catalog: Catalog, path: Path) -> int:
    """Write the wide view of motors in SI as Parquet (extra ``parquet``); returns how many."""
    try:
        import pyarrow  # pyright: ignore[reportMissingImports]
        import pyarrow.parquet  # pyright: ignore[reportMissingImports]
    except ImportError:
        raise MotorfolioError(
            "Parquet needs the extra: pip install 'motorfolio[parquet]'."
        ) from None
    cursor = catalog.connection.execute("SELECT * FROM motors ORDER BY id")
    names = [column[0] for column in cursor.description]
    rows = cursor.fetchall()
    columns = {name: [row[i] for row in rows] for i, name in enumerate(names)}
    pyarrow.parquet.write_table(pyarrow.table(columns), path)
    return len(rows)


def _write_json(motors: Iterable[Document], out: TextIO) -> int:
    out.write('{"motors": [')
    n = 0
    for n, motor in enumerate(motors, 1):
        out.write(",\n" if n > 1 else "\n")
        json.dump(motor, out, ensure_ascii=False, allow_nan=False)
    out.write("\n]}\n")
    return n


# ---- TOML


def _write_toml(motors: Iterable[Document], out: TextIO) -> int:
    n = 0
    for n, motor in enumerate(motors, 1):
        out.write("\n[[motors]]\n" if n > 1 else "[[motors]]\n")
        tables = {}
        for key, value in motor.items():
            if key in ("figures", "constants", "model", "source"):
                tables[key] = value
            elif value is not None and value != []:
                out.write(f"{key} = {_toml(value)}\n")
        for key, table in tables.items():
            out.write(f"\n[motors.{key}]\n")
            for name, value in table.items():
                if value is not None:
                    out.write(f"{name} = {_toml(value)}\n")
    return n


def _toml(value: Any) -> str:
    if isinstance(value, dict):
        inside = ", ".join(
            f"{_toml_key(k)} = {_toml(v)}" for k, v in value.items() if v is not None
        )
        return f"{{ {inside} }}" if inside else "{}"
    if isinstance(value, list | tuple):
        return f"[{', '.join(_toml(item) for item in value if item is not None)}]"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int | float):
        return repr(value)
    # a JSON string is a TOML string, but for DEL
    return json.dumps(value, ensure_ascii=False).replace("\x7f", "\\u007f")


def _toml_key(key: str) -> str:
    return key if re.fullmatch(r"[\w-]+", key, re.ASCII) else _toml(key)


# ---- CSV


@dataclass(frozen=True, slots=True)
class _Column:
    """A column of the CSV: a quantity under one convention (and condition); nth repeat."""

    key: str
    heading: str
    repeat: int


def _write_csv(motors: Callable[[], Iterator[Document]], out: TextIO, units: Units) -> int:
    """One row a motor; the motors are read twice, first to know the columns."""
    identity = ("part_number", "maker", "series")
    columns: dict[_Column, None] = {}
    for motor in motors():
        columns.update(dict.fromkeys(column for column, _ in _cells(motor, units)))
    order = {key: i for i, key in enumerate(quantities())}
    ordered = sorted(columns, key=lambda c: (order[c.key], c.heading, c.repeat))
    position = {column: i for i, column in enumerate(ordered, len(identity))}
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow([*identity, *(inert(column.heading) for column in ordered)])
    n = 0
    for motor in motors():
        n += 1
        row = [""] * (len(identity) + len(ordered))
        row[: len(identity)] = [inert(motor[key] or "") for key in identity]
        for column, text in _cells(motor, units):
            row[position[column]] = inert(text)
        writer.writerow(row)
    return n


def inert(text: str) -> str:
    """The text with an apostrophe in front where a spreadsheet would run it as a formula."""
    if text.startswith(_RISKY):
        try:
            float(text)
        except ValueError:
            return f"'{text}"
    return text


def _cells(motor: Document, units: Units) -> Iterator[tuple[_Column, str]]:
    taken: dict[str, int] = {}
    for key, figure, when in _figures(motor):
        heading, text = _cell(key, figure, when, motor, units)
        repeat = taken[heading] = taken.get(heading, -1) + 1
        yield _Column(key, heading, repeat), text


def _figures(motor: Document) -> Iterator[tuple[str, Document, str]]:
    figures = dict(motor["figures"])
    for key in ("commutation", "magnet"):
        fact = motor["model"][key]
        if key not in figures and fact["value"] != "unknown":
            # no text of the sheet, so its basis goes with it
            figures[key] = {"value": f"{fact['value']} ({fact['basis']})"}
    for key, figure in figures.items():
        yield key, figure, ""
    for key, repeats in motor.get("repeats", {}).items():
        for figure in repeats:
            yield key, figure, ""
    for condition in motor.get("conditions", ()):
        for key, figure in condition["figures"].items():
            yield key, figure, condition["when"]


def _cell(key: str, figure: Document, when: str, motor: Document, units: Units) -> tuple[str, str]:
    """(heading, text): "torque_constant [N·m/A] (rms, lines)", "0.0302"."""
    if isinstance(figure["value"], str):
        return (f"{key} ({when})" if when else key), figure["value"]
    unit_text, factor, offset = figure["unit"], 1.0, 0.0
    convention = figure.get("convention")
    chosen = units.get(key)
    if chosen is not None:
        unit_text, factor, offset = chosen.unit.text, chosen.unit.factor, chosen.unit.offset
        wanted = chosen.in_convention(convention)
        if wanted is not None:
            kind = Commutation[motor["model"]["commutation"]["value"].upper()]
            factor *= to_dc(key, wanted, kind) / to_dc(key, _convention(convention), kind)
            convention = wanted.as_json()
    heading = key if unit_text in ("", "1") else f"{key} [{unit_text}]"
    if words := _convention_words(convention):
        heading += f" ({words})"
    if when:
        heading += f" ({when})"
    value, low, high = (
        None if figure[part] is None else (figure[part] - offset) / factor
        for part in ("value", "low", "high")
    )
    return heading, _number_text(figure, value, low, high)


def _number_text(
    figure: Document, value: float | None, low: float | None, high: float | None
) -> str:
    """The number, to all digits; a printed limit, range or tolerance stays one."""
    if value is None:
        return ""
    sign = {"at most": "≤ ", "at least": "≥ "}.get(figure.get("qualifier", ""), "")
    shown = _digits(value)
    if sign or low is None or high is None or low == high:
        return sign + shown
    if _PLAIN_NUMBER.fullmatch((figure["text"] or "").strip()):
        return _as_precise(value, (high - low) / 2)
    if not re.search(r"[±%]|\+\s*/?\s*-", figure["text"] or "±"):
        return f"{_digits(low)}…{_digits(high)}"
    if abs((low + high) / 2 - value) <= 1e-9 * abs(value):
        return f"{shown} ± {_digits(float(f'{(high - low) / 2:.6g}'))}"
    return (
        f"{shown} +{_digits(float(f'{high - value:.6g}'))}/-{_digits(float(f'{value - low:.6g}'))}"
    )


def _as_precise(value: float, half: float) -> str:
    """The number with the digits whose interval is ± ``half``, or with that as a tolerance."""
    text = f"{value:.{min(max(round(-math.log10(2 * half)), 0), 15)}f}"
    same = abs(float(text) - value) <= 1e-9 * abs(value)
    if same and abs(half_digit(text.lstrip("-")) - half) <= 1e-6 * half:
        return text if abs(value) >= 1e-4 else f"{Decimal(text):e}"
    return f"{_digits(value)} ± {_digits(float(f'{half:.6g}'))}"


def _digits(value: float) -> str:
    """Twelve significant digits."""
    return f"{value:.12g}"


def _convention(found: dict[str, Any] | None) -> Convention:
    return Convention(**(found or {}))


def _convention_words(found: dict[str, Any] | None) -> str:
    """What a heading says; what was merely assumed is assumed again by whoever reads it."""
    if not found:
        return ""
    kinds = ("current", "voltage", "between", "connection")
    assumed = found.get("basis") == "assumed"
    words = {} if assumed else dict.fromkeys(found[key] for key in kinds if key in found)
    # a temperature is never assumed: it stands there because the sheet says it
    if "temperature" in found:
        words[f"{found['temperature']:g} °C"] = None
    return ", ".join(words)


def as_text(catalog: Catalog, format: str, units: Units | None = None) -> str:
    """The export as one text."""
    out = io.StringIO()
    export(catalog, format, out, units)
    return out.getvalue()
