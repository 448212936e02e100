"""A cycle from a table: columns time, speed and torque (or force), with units in the heading."""

from __future__ import annotations

import csv
import math
import re
from collections.abc import Sequence
from pathlib import Path

from ...schema.errors import MotorfolioError
from ...schema.operation.cycle import Cycle
from ...schema.units.read import quantity, read_unit
from .fields import RequirementError, quoted

_NAMES = {
    "time": "time",
    "t": "time",
    "speed": "speed",
    "n": "speed",
    "v": "speed",
    "ω": "speed",
    "velocity": "speed",
    "angular velocity": "speed",
    "torque": "effort",
    "m": "effort",
    "load torque": "effort",
    "force": "effort",
    "f": "effort",
}
_HEADING = re.compile(r"^(?P<name>.*?)\s*(?:\[(?P<a>.*)\]|\((?P<b>.*)\)|\s+in\s+(?P<c>.+))\s*$")


def axis_units(linear: bool) -> dict[str, tuple[str, ...]]:
    """SI units of time, speed and effort of a rotary load or a linear axis."""
    if linear:
        return {"time": ("s",), "speed": ("m/s",), "effort": ("N",)}
    return {"time": ("s",), "speed": ("rad/s",), "effort": ("N·m",)}


def from_file(path: Path, linear: bool) -> list[tuple[float, float, float]]:
    """Rows of (time, speed, torque or force) in SI; RequirementError names file, row and column."""
    try:
        text = path.read_text(encoding="utf-8-sig")
    except IsADirectoryError:
        raise RequirementError(f"The cycle {path} is a folder; name a CSV file.") from None
    except FileNotFoundError:
        raise RequirementError(f"There is no cycle file {path}; name a CSV file.") from None
    except UnicodeDecodeError:
        raise RequirementError(f"The cycle {path} is no UTF-8 text; save it as CSV.") from None
    except OSError as error:
        raise RequirementError(f"The cycle {path} can't be read: {error.strerror}.") from None
    except ValueError:  # a zero byte in the name
        raise RequirementError(f"The cycle {path} is no file; name a CSV file.") from None
    delimiter = max(";\t,", key=text.partition("\n")[0].count)
    try:
        rows = list(csv.reader(text.splitlines(), delimiter=delimiter))
    except csv.Error as error:
        raise RequirementError(f"The cycle {path} is no CSV: {error}.") from None
    if not any(any(cell.strip() for cell in row) for row in rows):
        raise RequirementError(f"The cycle {path} is empty; give columns time, speed and torque.")
    columns = _columns(rows[0], axis_units(linear), path)
    result = []
    for number, row in enumerate(rows[1:], start=2):
        if any(cell.strip() for cell in row):
            result.append(
                tuple(
                    _cell(row, *columns[kind], delimiter, f"{path}, row {number}")
                    for kind in ("time", "speed", "effort")
                )
            )
    return result


def _columns(
    headings: Sequence[str], units: dict[str, tuple[str, ...]], path: Path
) -> dict[str, tuple[int, float]]:
    """Column number and factor to SI of time, speed and effort."""
    found: dict[str, tuple[int, float]] = {}
    for at, heading in enumerate(headings):
        match = _HEADING.match(heading.strip()[:200])
        name = (match["name"] if match else heading).strip().lower()
        kind = _NAMES.get(name)
        if kind is None:
            continue
        if kind in found:
            raise RequirementError(f"The cycle {path} has two columns of {kind}; leave one.")
        unit = next((match[g] for g in "abc" if match[g]), "") if match else ""
        wanted = units[kind]
        if not unit:
            raise RequirementError(
                f'The cycle {path}: the heading "{heading.strip()}" has no unit; write it behind '
                f'the name, such as "{name} [{wanted[0]}]".'
            )
        try:
            found[kind] = (at, read_unit(unit, wanted).factor)
        except MotorfolioError as error:
            raise RequirementError(
                f'The cycle {path}, heading "{heading.strip()}": {error}.'
            ) from error
    missing = [kind for kind in units if kind not in found]
    if missing:
        effort = "force" if units["effort"] == ("N",) else "torque"
        words = [effort if kind == "effort" else kind for kind in missing]
        raise RequirementError(
            f"The cycle {path} has no column {' and no column '.join(words)}; its first row must "
            f"name time, speed and {effort}, each with its unit in brackets."
        )
    return found


def _cell(row: Sequence[str], at: int, factor: float, delimiter: str, where: str) -> float:
    text = row[at].strip() if at < len(row) else ""
    plain = text.replace("−", "-")
    if delimiter != ",":
        plain = plain.replace(",", ".")
    try:
        number = float(plain) * factor
    except ValueError:
        number = math.nan
    if not math.isfinite(number) or "_" in plain:
        raise RequirementError(f"The cycle {where}: {quoted(text)} is no number; give one.")
    return number


def from_rows(rows: Sequence[Sequence[str]], linear: bool) -> list[tuple[float, float, float]]:
    """The same from rows of text with units, as a requirement file may hold them."""
    if not isinstance(rows, list | tuple):
        raise RequirementError("cycle: give a CSV file, or rows of [time, speed, torque].")
    units = axis_units(linear)
    result = []
    for number, row in enumerate(rows, start=1):
        if not isinstance(row, list | tuple) or len(row) != 3:
            raise RequirementError(f"cycle, row {number}: give time, speed and torque.")
        values = []
        for kind, text in zip(units, row, strict=True):
            try:
                values.append(quantity(str(text), units[kind]))
            except MotorfolioError as error:
                raise RequirementError(f"cycle, row {number}: {error}.") from error
        result.append(tuple(values))
    return result


def as_cycle(rows: Sequence[tuple[float, float, float]]) -> Cycle:
    """Rows linear in between, see `Cycle.from_rows`."""
    time, speed, effort = zip(*rows, strict=True) if rows else ((), (), ())
    return Cycle.from_rows(time, speed, effort)
