"""A motor at work as lines of text."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from .plain import number, percent, plain, quantity, words

Document = Mapping[str, Any]

_RPM = 60 / (2 * 3.141592653589793)
_TITLES = {
    "voltage_control": "Voltage control",
    "current_control": "Current control",
    "braking": "Braking",
}

_NAMES = {
    "stall_torque": "torque at this current, standing",
    "torque_at_speed": "torque at this current and speed",
    "acceleration": "acceleration from standstill",
    "time_to_speed": "time to this speed",
    "time_with_voltage_limit": "time to it within the supply",
    "duty_for_speed": "duty cycle for that speed",
    "voltage_for_speed": "voltage for that speed",
    "speed": "speed under this load",
    "current": "armature current",
    "frequency_of_tenth_ripple": "PWM frequency for 10 % ripple",
    "ripple_peak_to_peak": "current ripple, peak to peak",
    "largest_ripple": "largest ripple, at 50 % duty",
    "returned_power": "power returned",
    "voltage": "terminal voltage",
}
"""What a key is called here, where its own words would not say it."""


def lines(document: Document) -> Iterator[str]:
    """Heading, then a block for each kind of control, then notes."""
    temperature = number(document["winding_temperature"]["value"])
    maker = f" ({plain(document['maker'])})" if document["maker"] else ""
    yield f"{plain(document['part_number'])}{maker}, winding at {temperature} °C"
    for key, title in _TITLES.items():
        if key in document:
            yield f"{title}:"
            for name, found in document[key].items():
                yield f"  {_NAMES.get(name) or words(name):<32} {_value(found)}"
    for note in document["notes"]:
        yield f"Note: {note}."


def _value(found: Any) -> str:
    if not isinstance(found, Mapping):
        return percent(found, 1)
    value, unit = found["value"], found["unit"]
    if value is None:
        return "never"
    if unit == "rad/s":
        return f"{number(value)} rad/s ({number(value * _RPM)} rpm)"
    return quantity(value, unit)
