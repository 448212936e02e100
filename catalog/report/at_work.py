"""A motor at work as lines of text."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from .plain import number, plain, words

Document = Mapping[str, Any]

_RPM = 60 / (2 * 3.141592653589793)
_TITLES = {
    "voltage_control": "Voltage control",
    "current_control": "Current control",
    "braking": "Braking",
}


def lines(document: Document) -> Iterator[str]:
    """Heading, then a block for each kind of control, then notes."""
    temperature = number(document["winding_temperature"]["value"])
    maker = f" ({plain(document['maker'])})" if document["maker"] else ""
    yield f"{plain(document['part_number'])}{maker}, winding at {temperature} °C"
    for key, title in _TITLES.items():
        if key in document:
            yield f"{title}:"
            for name, found in document[key].items():
                yield f"  {words(name):<26} {_value(found)}"
    for note in document["notes"]:
        yield f"Note: {note}."


def _value(found: Any) -> str:
    if not isinstance(found, Mapping):
        return f"{found:.1%}"
    value, unit = found["value"], found["unit"]
    if value is None:
        return "never"
    if unit == "rad/s":
        return f"{number(value)} rad/s ({number(value * _RPM)} rpm)"
    shown = f"{value:.0f}" if 1e4 <= abs(value) < 1e7 else number(value + 0.0)
    return f"{shown} {unit}"
