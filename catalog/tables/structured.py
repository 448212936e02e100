"""JSON and TOML: lists of flat objects, and the documents that ``export`` writes."""

import json
import re
import tomllib
from collections.abc import Sequence
from typing import Any

from .cells import clean, even
from .grid import Grid, Stored, TableError
from .numberformat import plain

_MOST_VALUES = 4_000_000
_FIGURE_KEYS = {
    "text",
    "value",
    "unit",
    "low",
    "high",
    "convention",
    "printed_unit",
    "cell",
    "corrected",
}
_FIRST = ("part_number", "maker", "series")
# A printed text whose marks mean the same in every locale: digits and a decimal point that
# can't be a thousands mark.
_AMBIGUOUS = re.compile(r"\d,|,\d|\d['’ \xa0\u202f]\d|(?<![\d.])[1-9]\d{0,2}\.\d{3}(?!\d)")


class _Object(list[tuple[str, Any]]):
    """A JSON object as its pairs in order, so that a key given twice keeps both values."""

    def get(self, key: str, otherwise: Any = None) -> Any:
        return next((value for name, value in self if name == key), otherwise)

    def __contains__(self, key: object) -> bool:
        return any(name == key for name, _ in self)


def read_json(text: str, name: str) -> list[Grid]:
    """The motors of a JSON document; TableError where it has another shape."""
    if text.count(",") > _MOST_VALUES:
        raise TableError(
            f"{name}: has more than {_MOST_VALUES / 1e6:.0f} million values; use CSV for so many"
        )
    try:
        document = json.loads(
            text,
            object_pairs_hook=_Object,
            parse_float=Stored,
            parse_int=Stored,
            parse_constant=Stored,
        )
    except json.JSONDecodeError as error:
        raise TableError(
            f"{name}: is no valid JSON: {error.msg} in line {error.lineno}, column {error.colno}"
        ) from None
    except RecursionError:
        raise TableError(
            f"{name}: the JSON is nested too deep; give a list of flat objects"
        ) from None
    return [_grid(_motors(document, name, "JSON"), name)]


def read_toml(text: str, name: str) -> list[Grid]:
    """The motors of a TOML document: one table, or an array of tables."""
    try:
        document = _as_object(tomllib.loads(text, parse_float=Stored))
    except tomllib.TOMLDecodeError as error:
        raise TableError(f"{name}: is no valid TOML: {str(error)[:200]}") from None
    except (RecursionError, ValueError):
        raise TableError(
            f"{name}: the TOML can't be read: nested too deep, or a number too long"
        ) from None
    return [_grid(_motors(document, name, "TOML"), name)]


def _as_object(value: Any) -> Any:
    if isinstance(value, dict):
        return _Object((key, _as_object(item)) for key, item in value.items())
    if isinstance(value, list):
        return [_as_object(item) for item in value]
    if isinstance(value, bool | str | Stored):
        return value
    if isinstance(value, int):
        return Stored(value)
    return f"date {value}"  # a TOML date or time is no figure


def _motors(document: Any, name: str, kind: str) -> list[_Object]:
    """The list of objects in a document, with what stands beside the list given to each."""
    shared = _Object()
    if isinstance(document, _Object):
        if {key for key, _ in document} & {"load", "supply", "drive"} and any(
            key in ("point", "move", "cycle") for key, _ in document
        ):
            raise TableError(
                f"{name}: a machine's requirement, not motors; it goes to: "
                f"motorfolio search --requirement {name}"
            )
        lists = [(key, value) for key, value in document if _is_objects(value)]
        if len(lists) == 1:
            shared = _Object((k, v) for k, v in document if k != lists[0][0])
            document = lists[0][1]
        elif not lists and "figures" not in document and len(document) == 1:
            # One table under a name: [motor] in TOML, {"motor": {…}} in JSON.
            only = document[0][1]
            if isinstance(only, _Object) and not _is_figure(only):
                document = [only]
    if isinstance(document, _Object):
        document = [document]
    if not _is_objects(document):
        raise TableError(
            f"{name}: the {kind} has another shape: give a list of flat objects from heading to "
            'text or number, such as [{"Part number": "A1", "Voltage (V)": 24}]'
        )
    bad = [key for key, value in shared if isinstance(value, _Object | list)]
    if bad:
        raise TableError(
            f"{name}: beside the list of motors stands “{bad[0]}”, which is no text or number"
        )
    return [_Object([*shared, *motor]) if shared else motor for motor in document]


def _is_objects(value: Any) -> bool:
    return (
        isinstance(value, list)
        and not isinstance(value, _Object)
        and bool(value)
        and all(isinstance(item, _Object) for item in value)
    )


def _grid(motors: Sequence[_Object], name: str) -> Grid:
    """One row a motor below a row of headings, in the order in which headings first come.

    Rows are counted with the headings as row 1, since neither format has lines that matter.
    """
    columns: dict[tuple[str, int], int] = {}
    lines: list[dict[int, str]] = []
    remarks: list[str] = []
    for key in _FIRST:
        if any("figures" in motor for motor in motors):
            columns[key, 0] = len(columns)
    for number, motor in enumerate(motors, 1):
        line: dict[int, str] = {}
        given: dict[str, int] = {}
        is_export = isinstance(motor.get("figures"), _Object)
        pairs = _exported(motor, number, remarks) if is_export else _flat(motor, number, name)
        for heading, text in pairs:
            again = given.get(heading, 0)
            given[heading] = again + 1
            column = columns.setdefault((heading, again), len(columns))
            line[column] = text
        lines.append(line)
    width = len(columns)
    rows = [[clean(heading) for heading, _ in columns]]
    rows += [[line.get(column, "") for column in range(width)] for line in lines]
    return even(rows, remarks=remarks)


def _flat(motor: _Object, number: int, name: str) -> list[tuple[str, str]]:
    pairs: list[tuple[str, str]] = []
    for key, value in motor:
        if _is_figure(value):
            pairs.append(_figure(key, value, ""))
        elif isinstance(value, _Object | list):
            what = "an object" if isinstance(value, _Object) else "a list"
            raise TableError(
                f"{name}: object {number}: “{key}” holds {what} where a text or number belongs"
            )
        else:
            pairs.append((key, _scalar(value)))
    return pairs


def _scalar(value: Any) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "true" if value else "false"
    text = clean(str(value))
    return Stored(text) if isinstance(value, Stored) else text


def _is_figure(value: Any) -> bool:
    """An object such as {"value": 0.03, "unit": "N·m/A"} stands for one figure."""
    return (
        isinstance(value, _Object)
        and ("text" in value or "value" in value)
        and all(key in _FIGURE_KEYS or not isinstance(item, _Object) for key, item in value)
    )


# --- documents of ``export`` ------------------------------------------------------------------


def _exported(motor: _Object, number: int, remarks: list[str]) -> list[tuple[str, str]]:
    """A motor as ``export`` and ``show`` write it: its published figures as headed cells."""
    pairs = [(key, _scalar(motor.get(key))) for key in _FIRST]
    figures = motor.get("figures")
    pairs += [_figure(key, value, "") for key, value in figures if _is_figure(value)]
    pairs += [(key, _scalar(value)) for key, value in figures if isinstance(value, str)]
    pairs = [pair for i, pair in enumerate(pairs) if i < len(_FIRST) or pair[0] not in _FIRST]
    model = motor.get("model")
    if isinstance(model, _Object):
        for key in ("commutation", "magnet"):
            told = model.get(key)
            basis = told.get("basis") if isinstance(told, _Object) else None
            if key not in figures and isinstance(told, _Object) and told.get("value") != "unknown":
                # no text of the sheet, so its basis goes with it
                pairs.append((key, f"{_scalar(told.get('value'))} ({_scalar(basis)})"))
    repeats = motor.get("repeats")
    for key, again in repeats if isinstance(repeats, _Object) else ():
        pairs += [_figure(key, value, "") for value in again or () if _is_figure(value)]
    for condition in motor.get("conditions") or []:
        if isinstance(condition, _Object) and isinstance(condition.get("figures"), _Object):
            when = _scalar(condition.get("when"))
            pairs += [
                _figure(key, value, when)
                for key, value in condition.get("figures")
                if _is_figure(value)
            ]
    if motor.get("points"):
        part = _scalar(motor.get("part_number")) or f"motor {number}"
        remarks.append(f"{part}: its operating points are not read from this kind of file")
    return [(heading, text) for heading, text in pairs if text or heading in _FIRST]


def _figure(key: str, figure: _Object, when: str) -> tuple[str, str]:
    """(heading, text) of a published figure: 'torque_constant [mNm/A] (rms, lines)', '30.2'.

    The printed text stands where its unit is known and its marks mean the same everywhere;
    else the SI value, with the interval of its printed digits as a tolerance.
    """
    text = _scalar(figure.get("text"))
    printed_unit, unit = figure.get("printed_unit"), figure.get("unit")
    value = figure.get("value")
    as_it_is = text and not isinstance(value, Stored)
    if printed_unit is None and unit == "1" and _number(text) == _number(value):
        as_it_is, printed_unit = True, unit  # a count
    if as_it_is or (text and printed_unit is not None and not _AMBIGUOUS.search(text)):
        shown_unit = _scalar(printed_unit)
    else:
        text, shown_unit = Stored(_si_text(figure)), _scalar(unit)
    heading = clean(key)
    if shown_unit and shown_unit != "1":
        heading += f" [{shown_unit}]"
    if words := _convention_words(figure.get("convention")):
        heading += f" ({words})"
    if when:
        heading += f" ({when})"
    return heading, text


def _si_text(figure: _Object) -> str:
    value, low, high = (_number(figure.get(key)) for key in ("value", "low", "high"))
    if value is None:
        return ""
    printed = _scalar(figure.get("value"))
    qualifier = _scalar(figure.get("qualifier"))
    sign = {"at most": "≤ ", "at least": "≥ "}.get(qualifier)
    if sign:
        return sign + printed
    if low is None or high is None or not low < high:
        return printed
    if abs((low + high) / 2 - value) <= 1e-9 * abs(value):
        return f"{printed} ± {plain(float(f'{(high - low) / 2:.6g}'))}"
    return f"{printed} +{plain(float(f'{high - value:.6g}'))}/-{plain(float(f'{value - low:.6g}'))}"


def _number(value: Any) -> float | None:
    try:
        return float(value)
    except (TypeError, ValueError):
        return None


def _convention_words(convention: Any) -> str:
    """'rms, lines, star, 25 °C': what a heading says; what was merely assumed is left out."""
    if not isinstance(convention, _Object):
        return ""
    words: list[str] = []
    if convention.get("basis") != "assumed":
        for key in ("current", "voltage", "between", "connection", "shape"):
            word = convention.get(key)
            if isinstance(word, str) and word not in words:
                words.append(word)
    if words and convention.get("basis") == "inferred":
        words.append("inferred")
    # a temperature is never assumed: it stands there because the sheet says it
    temperature = convention.get("temperature")
    if temperature is not None:
        words.append(f"{_scalar(temperature)} °C")
    return ", ".join(words)
