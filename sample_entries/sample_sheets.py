"""From true figures to printed cells, and from cells to the layouts of the invented makers."""

from __future__ import annotations

import csv
import html
import io
import random
from collections.abc import Callable
from dataclasses import dataclass, field

from sample_motors import FRAME_KEYS, Motor

# Largest departure, in per cent, of a printed figure from the true one, before it is rounded to
# catalogue digits. Customary measured scatter, kept small; figures not listed are computed exactly.
SCATTER = {
    "no_load_speed": 0.8,
    "no_load_current": 1.0,
    "nominal_speed": 0.6,
    "nominal_torque": 0.6,
    "nominal_current": 0.4,
    "continuous_stall_torque": 0.6,
    "continuous_stall_current": 0.4,
    "stall_torque": 0.5,
    "stall_current": 0.3,
    "terminal_resistance": 0.5,
    "terminal_inductance": 1.0,
    "rotor_inertia": 0.8,
    "torque_constant": 0.3,
    "back_emf_constant": 0.3,
    "speed_constant": 0.3,
    "motor_constant": 0.3,
    "mechanical_time_constant": 0.5,
    "electrical_time_constant": 0.5,
    "friction_torque": 1.0,
    "viscous_damping": 1.0,
}


@dataclass(frozen=True)
class Column:
    """One printed quantity: heading, unit text, key, SI value of one unit, significant digits.

    `digits` 0: the maker's choice or a count, printed exactly and without scatter.
    """

    label: str
    unit: str
    key: str
    factor: float = 1.0
    digits: int = 3
    group: str = ""


@dataclass(frozen=True)
class Sheet:
    """One file: an invented maker's table."""

    file: str
    maker: str
    commutation: str
    columns: list[Column]
    motors: list[Motor]
    figures: Callable[[Motor], dict[str, float]]
    render: Callable[[Sheet, dict[str, dict[str, str]]], str]
    reference: float = 25.0
    decimal: str = "."
    thousands: str = ""
    above: list[str] = field(default_factory=list)
    below: list[str] = field(default_factory=list)


@dataclass(frozen=True)
class Plant:
    """A planted contradiction.

    `how`: a factor, ("neighbour", part), ("swap", key) or "transpose".
    """

    part: str
    figure: str
    cause: str
    how: float | str | tuple[str, str]
    story: str


def significant(value: float, digits: int) -> str:
    """Round to significant digits, in plain decimal notation: 24837 to 3 digits is "24800"."""
    mantissa, exponent = f"{value:.{digits - 1}e}".split("e")
    return f"{float(mantissa + 'e' + exponent):.{max(0, digits - 1 - int(exponent))}f}"


def _number(motor: Motor, column: Column, value: float, factor: float = 1.0) -> str:
    if column.unit == "EUR":
        return f"{value:.2f}"
    if column.digits == 0:
        return f"{in_unit(column, value) * factor:.7g}"
    scattered = _scattered(motor, column.key, value)
    return significant(in_unit(column, scattered) * factor, column.digits)


def in_unit(column: Column, value: float) -> float:
    """The number that is printed for an SI value (temperatures stand in °C)."""
    if column.unit == "°F":
        return value * 9 / 5 + 32
    return value / column.factor


def from_unit(column: Column, number: float) -> float:
    """The SI value of a printed number."""
    if column.unit == "°F":
        return (number - 32) * 5 / 9
    return number * column.factor


def _scattered(motor: Motor, key: str, value: float) -> float:
    # seeded by name: adding a motor or a column never changes what the others print
    owner = motor.frame.series if key in FRAME_KEYS else motor.winding.part
    limit = SCATTER.get(key, 0.0) / 100
    return value * (1 + random.Random(f"motorfolio samples 1/{owner}/{key}").uniform(-limit, limit))


def _transposed(text: str) -> str:
    for i in range(len(text) - 1):
        a, b = text[i], text[i + 1]
        if a.isdigit() and b.isdigit() and a != b and b != "0":
            return text[:i] + b + a + text[i + 2 :]
    raise ValueError(f"no digits to transpose in {text}")


def cells(sheet: Sheet, plants: list[Plant]) -> tuple[dict[str, dict[str, str]], list[dict]]:
    """Printed numbers (decimal point) by part and key, and a record of what was planted."""
    columns = {c.key: c for c in sheet.columns}
    truth = {m.winding.part: sheet.figures(m) for m in sheet.motors}
    clean: dict[str, dict[str, str]] = {}
    for motor in sheet.motors:
        part = motor.winding.part
        clean[part] = {
            c.key: _number(motor, c, truth[part][c.key])
            for c in sheet.columns
            if c.key in truth[part]
        }
    printed = {part: dict(row) for part, row in clean.items()}
    records = []
    for plant in plants:
        if plant.part not in printed:
            continue
        column, row = columns[plant.figure], printed[plant.part]
        keys = [plant.figure]
        match plant.how:
            case ("neighbour", other):
                row[plant.figure] = clean[other][plant.figure]
            case ("swap", other):
                row[plant.figure], row[other] = row[other], row[plant.figure]
                keys.append(other)
            case "transpose":
                row[plant.figure] = _transposed(row[plant.figure])
            case float() as factor:
                motor = next(m for m in sheet.motors if m.winding.part == plant.part)
                true = truth[plant.part][plant.figure]
                row[plant.figure] = _number(motor, column, true, factor)
        for key in keys:
            text = row[key]
            records.append(
                {
                    "file": sheet.file,
                    "part_number": plant.part,
                    "figure": key,
                    "cause": plant.cause,
                    "printed": {
                        "text": localise(sheet, text),
                        "value": short(from_unit(columns[key], float(text))),
                    },
                    "true_value": short(truth[plant.part][key]),
                    "story": plant.story,
                }
            )
    for row in printed.values():
        for key, text in row.items():
            row[key] = localise(sheet, text)
    return printed, records


def short(value: float) -> float:
    """Six significant digits, so that the JSON files are the same on every machine."""
    return float(f"{value:.6g}")


def localise(sheet: Sheet, text: str) -> str:
    """Decimal and thousands signs of the sheet; four-digit integers are grouped too."""
    whole, _, fraction = text.partition(".")
    if sheet.thousands and len(whole) > 3:
        whole = f"{int(whole):,}".replace(",", sheet.thousands)
    return whole + (sheet.decimal + fraction if fraction else "")


def _text(rows: list[list[str]], delimiter: str) -> str:
    out = io.StringIO()
    csv.writer(out, delimiter=delimiter, lineterminator="\n").writerows(rows)
    return out.getvalue()


def _row_values(sheet: Sheet, motor: Motor, row: dict[str, str]) -> list[str]:
    words = {
        "part_number": motor.winding.part,
        "series": motor.frame.series,
        "description": motor.frame.description,
    }
    return [words.get(c.key) or row[c.key] for c in sheet.columns]


def parameters_down(sheet: Sheet, printed: dict[str, dict[str, str]]) -> str:
    """Catalogue block: numbered parameters down, windings across, captions, a unit column.

    Figures of the frame stand once, in the first winding's column.
    """
    parts = [m.winding.part for m in sheet.motors]
    rows = [[line] for line in sheet.above] + [[]]
    rows.append(["Parameter", "Unit", *parts])
    caption = ""
    for number, column in enumerate(sheet.columns, start=1):
        if column.group != caption:
            caption = column.group
            rows.append([caption.upper(), *[""] * (len(parts) + 1)])
        values = [printed[p][column.key] for p in parts]
        if column.key in FRAME_KEYS:
            values[1:] = [""] * (len(parts) - 1)
        rows.append([f"{number} {column.label}", column.unit, *values])
    return _text(rows + [[]] + [[line] for line in sheet.below], ",")


def units_in_headings(sheet: Sheet, printed: dict[str, dict[str, str]]) -> str:
    """One motor a row, the unit in brackets behind each heading, semicolons."""
    bracket = "[]" if sheet.above[0].startswith("Hersteller") else "()"
    head = [
        f"{c.label} {bracket[0]}{c.unit}{bracket[1]}" if c.unit else c.label for c in sheet.columns
    ]
    body = [_row_values(sheet, m, printed[m.winding.part]) for m in sheet.motors]
    return _text([[x] for x in sheet.above] + [head, *body] + [[x] for x in sheet.below], ";")


def unit_row(sheet: Sheet, printed: dict[str, dict[str, str]]) -> str:
    """One motor a row, tabs, a row of units under the headings."""
    head = [c.label for c in sheet.columns]
    units = [c.unit for c in sheet.columns]
    body = [_row_values(sheet, m, printed[m.winding.part]) for m in sheet.motors]
    rows = [[x] for x in sheet.above] + [head, units, *body] + [[x] for x in sheet.below]
    return _text(rows, "\t")


def two_row_headings(sheet: Sheet, printed: dict[str, dict[str, str]]) -> str:
    """One motor a row; a row of groups, each named once, above a row of names with units."""
    groups, last = [], None
    for c in sheet.columns:
        groups.append(c.group if c.group != last else "")
        last = c.group
    head = [f"{c.label} [{c.unit}]" if c.unit else c.label for c in sheet.columns]
    body = [_row_values(sheet, m, printed[m.winding.part]) for m in sheet.motors]
    rows = [[x] for x in sheet.above] + [groups, head, *body] + [[x] for x in sheet.below]
    return _text(rows, ",")


def html_page(sheet: Sheet, printed: dict[str, dict[str, str]]) -> str:
    """A web page: one motor a column, captions and shared cells spanning columns, <sup> marks."""
    motors, n = sheet.motors, len(sheet.motors)
    series = motors[0].frame.series
    out = [
        "<!DOCTYPE html>",
        '<html lang="ja">',
        "<head>",
        '<meta charset="utf-8">',
        f"<title>{html.escape(sheet.maker)}</title>",
        "</head>",
        "<body>",
        *(f"<p>{html.escape(line)}</p>" for line in sheet.above),
        "<table>",
        '<tr><th rowspan="2">項目<br>Parameter</th><th rowspan="2">単位<br>Unit</th>'
        f'<th colspan="{n}">シリーズ Series {series}</th></tr>',
        "<tr>" + "".join(f"<th>{m.winding.part}</th>" for m in motors) + "</tr>",
    ]
    caption = ""
    for c in sheet.columns:
        if c.group != caption:
            caption = c.group
            out.append(f'<tr><th colspan="{n + 2}">{caption}</th></tr>')
        values = [printed[m.winding.part][c.key] for m in motors]
        # a shared figure is printed once over all columns
        if c.key in FRAME_KEYS:
            body = f'<td colspan="{n}">{values[0]}</td>'
        else:
            body = "".join(f"<td>{v}</td>" for v in values)
        out.append(f"<tr><th>{c.label}</th><td>{c.unit}</td>{body}</tr>")
    out += ["</table>", *(f"<p>{line}</p>" for line in sheet.below), "</body>", "</html>"]
    return "\n".join(out) + "\n"
