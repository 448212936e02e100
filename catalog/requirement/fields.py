"""What a requirement may say: one table of sections, keys, kinds and bounds.

Reading, checking, the JSON Schema and the documentation all come from `SECTIONS`.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from ...schema.errors import MotorfolioError, excerpt
from ...schema.figure.read import POINT, read_figure
from ...schema.spelling import nearest
from ...schema.units.read import quantity, read_unit
from ...schema.written import percent


class RequirementError(MotorfolioError):
    """A requirement that can't be used; the text names the option or key and what would do."""


@dataclass(frozen=True, slots=True)
class Field:
    """One key: `kind` quantity, share (a pure number or per cent), number, current, ratio, text,
    choice, texts, flag or tolerance; for a quantity `accepts` holds SI units, for a choice its
    words. Values lie above `over`, from `least` to `most`."""

    kind: str
    doc: str
    accepts: tuple[str, ...] = ()
    over: float | None = None
    least: float | None = None
    most: float | None = None


def _q(unit: str, doc: str, **bounds: float) -> Field:
    return Field("quantity", doc, tuple(unit.split("|")), **bounds)


ORDERS = (
    "size",
    "copper-loss",
    "mass",
    "price",
    "diameter",
    "winding-temperature",
    "utilisation",
)
KINDS = ("rotary", "belt", "pinion", "drum", "screw")
PROFILES = ("thirds", "trapezoidal", "triangular", "s-curve")

SECTIONS: dict[str, dict[str, Field]] = {
    "load": {
        "kind": Field("choice", "what the shaft drives", KINDS),
        "inertia": _q("kg·m²", "what turns with the load's shaft (rotary)", least=0),
        "friction_torque": _q("N·m", "opposes motion (rotary)", least=0),
        "torque": _q("N·m", "always pulls against positive speed (rotary)"),
        "pulley_radius": _q("m", "belt", over=0),
        "pulley_inertia": _q("kg·m²", "belt: all pulleys, at the driven one", least=0),
        "pinion_radius": _q("m", "rack and pinion: pitch radius", over=0),
        "pinion_inertia": _q("kg·m²", "rack and pinion", least=0),
        "drum_radius": _q("m", "drum, winch: to the middle of the rope", over=0),
        "drum_inertia": _q("kg·m²", "drum, winch", least=0),
        "lead": _q("m", "screw: travel a turn", over=0),
        "screw_inertia": _q("kg·m²", "screw", least=0),
        "efficiency": Field("share", "screw, belt, rack or drum", over=0, most=1),
        "moving_mass": _q("kg", "linear axis", least=0),
        "counterweight": _q("kg", "linear axis: hangs on a rope", least=0),
        "friction_force": _q("N", "opposes motion (linear axis)", least=0),
        "friction_coefficient": Field(
            "number", "of the moving mass on its guide, beside any friction_force", least=0
        ),
        "force": _q("N", "always pulls against positive speed (linear axis)"),
        "slope": _q("rad", "to the horizontal; 90 deg lifts (linear axis)"),
    },
    "supply": {
        "voltage": _q("V", "of the dc bus", over=0),
        "lowest_voltage": _q("V", "that the bus sags to", over=0),
        "current_limit": _q("A", "that the supply gives", over=0),
        "power_limit": _q("W", "that the supply gives", over=0),
        "bridge_drop": _q("V", "lost in the bridge", least=0),
        "max_duty": Field("share", "largest duty cycle of the bridge", over=0, most=1),
    },
    "drive": {
        "peak_current": Field("current", "peak current: A, A rms or A peak", ("A",), over=0),
        "continuous_current": Field("current", "lasting current", ("A",), over=0),
        "current_convention": Field(
            "choice", "of currents that don't say it themselves", ("dc", "peak", "rms")
        ),
        "pwm_frequency": _q("Hz", "counts the current ripple's heat", over=0),
    },
    "gear": {
        "ratio": Field("ratio", "motor speed/load speed: 5, 3..20 or 3, 5, 8", over=0),
        "efficiency": Field("share", "of the gear", over=0, most=1),
        "inertia": _q("kg·m²", "of the gear, at the motor's shaft", least=0),
        "use": Field("choice", "real gears out of the catalog", ("catalog",)),
    },
    "ambient": {
        "temperature": _q("°C", "of the surroundings", least=-90, most=200),
        "altitude": _q("m", "above the sea", least=-500, most=4000),
    },
    "mounting": {
        "thermal_resistance": _q("K/W", "housing to ambient as mounted", least=0),
    },
    "wanted": {
        "reserve": Field("share", "left over of every limit", least=0, most=0.99),
        "largest_inertia_ratio": Field("number", "load to rotor inertia", over=0),
        "worst_case": Field("tolerance", "a share of Km and Ra, or printed"),
        "where": Field("texts", 'limits on stored figures: "mass < 500 g"'),
        "order_by": Field("choice", "rank", ORDERS),
        "limit": Field("count", "candidates shown", least=1),
    },
}

#: Tables of which a requirement holds several, in order.
LISTS: dict[str, dict[str, Field]] = {
    "point": {
        "torque": _q("N·m", "rotary load"),
        "force": _q("N", "linear axis"),
        "speed": _q("rad/s|m/s", "held all the time"),
        "duration": _q("s", "of the point", over=0),
    },
    "move": {
        "angle": _q("rad", "rotary load; the sign is the direction"),
        "distance": _q("m", "linear axis; the sign is the direction"),
        "time": _q("s", "from standstill to standstill", over=0),
        "top_speed": _q("rad/s|m/s", "reached in between", over=0),
        "acceleration": _q("rad/s²|m/s²", "the mean one of a ramp", over=0),
        "profile": Field("choice", "thirds if not said", PROFILES),
        "torque": _q("N·m", "process torque that opposes the move (rotary load)"),
        "force": _q("N", "process force that opposes the move (linear axis)"),
        "dwell": _q("s", "standstill after the move, or alone", over=0),
        "there_and_back": Field("flag", "the way back follows, with its dwell"),
    },
}


@dataclass
class Reader:
    """Reads values by their field; `origin` names the option that a key came from, if any."""

    origin: Mapping[tuple[str, str], str]

    def name(self, section: str, key: str) -> str:
        """How the person wrote it: --torque, or supply.voltage in a file."""
        return self.origin.get((section, key), f"{section}.{key}")

    def section(self, document: Mapping[str, Any], section: str) -> dict[str, Any]:
        """The values of one table in SI."""
        table = document.get(section, {})
        if not isinstance(table, Mapping):
            raise RequirementError(f"[{section}] must be a table of keys, such as [{section}].")
        return self.table(table, section, SECTIONS[section])

    def table(
        self, table: Mapping[str, Any], section: str, fields: Mapping[str, Field]
    ) -> dict[str, Any]:
        """The values of a table in SI; RequirementError names an unknown key."""
        if not isinstance(table, Mapping):
            raise RequirementError(
                f"{section}: {quoted(table)} is no table of keys; write it as [[{section}]]."
            )
        values = {}
        for key, given in table.items():
            if key not in fields:
                raise RequirementError(unknown(f"[{section}]", key, fields))
            values[key] = self.value(given, fields[key], self.name(section, key))
        return values

    def value(self, given: Any, field: Field, name: str) -> Any:
        """One value in SI; a current as (amperes, convention or None)."""
        match field.kind:
            case "quantity":
                return _bounded(_quantity(given, field.accepts, name), field, name, given)
            case "share":
                return _bounded(share(given, name), field, name, given)
            case "number":
                return _bounded(_number(given, name), field, name, given)
            case "count":
                count = _number(given, name)
                if count != int(count):
                    raise RequirementError(f"{name}: {quoted(given)} is no whole number; give one.")
                return int(_bounded(count, field, name, given))
            case "current":
                return _current(given, field, name)
            case "ratio":
                return read_ratio(given, name)
            case "texts":
                return texts(given, name)
            case "flag":
                if not isinstance(given, bool):
                    raise RequirementError(f"{name}: {quoted(given)} is neither true nor false.")
                return given
            case "tolerance":
                return _tolerance(given, name)
        if given not in field.accepts:
            raise RequirementError(
                f"{name}: {quoted(given)} is not known; {_or(field.accepts)} would do."
            )
        return given


def quoted(given: Any) -> str:
    """What was given, as a message shows it."""
    return excerpt(repr(given) if isinstance(given, str | list | dict) else str(given))


def texts(given: Any, name: str) -> list[str]:
    """One text or a list of them."""
    every = given if isinstance(given, list | tuple) else [given]
    for text in every:
        if not isinstance(text, str):
            raise RequirementError(f"{name}: {quoted(text)} is no text; write it in quotes.")
    return list(every)


def unknown(where: str, key: str, known: Mapping[str, Any]) -> str:
    """A sentence about a key that is not known."""
    near = nearest(key[:80], known)
    hint = f"did you mean {near[0]}?" if near else f"known are {excerpt(', '.join(known), 180)}."
    return f"The requirement's {where} has no {quoted(key)}; {hint}"


def _or(words: tuple[str, ...]) -> str:
    return " or ".join([", ".join(words[:-1]), words[-1]] if len(words) > 1 else words)


def _bounded(value: float, field: Field, name: str, given: Any) -> float:
    if field.over is not None and not value > field.over:
        raise RequirementError(
            f"{name}: {quoted(given)} is too small; give more than {field.over:g}."
        )
    if field.least is not None and not value >= field.least:
        raise RequirementError(
            f"{name}: {quoted(given)} is too small; give {field.least:g} or more."
        )
    if field.most is not None and not value <= field.most:
        most = f"{field.most:g}"
        if field.kind == "share":
            most = percent(field.most)
            plain = str(given).strip()
            if value <= 100 * field.most and "%" not in plain:
                most += f'; for per cent write the sign, too: "{plain} %"'
        raise RequirementError(f"{name}: {quoted(given)} is too large; give at most {most}.")
    return value


def _quantity(given: Any, accepts: tuple[str, ...], name: str) -> float:
    if not isinstance(given, str):
        raise RequirementError(
            f"{name}: {quoted(given)} is a number without a unit; give text such as "
            f'"{quoted(given)} {accepts[0]}".'
        )
    text = given.strip()
    if name.rpartition(".")[2] == "lead":  # a lead may be written per turn
        for turn in ("/rev", "/turn", " per turn", " per rev"):
            text = text.removesuffix(turn)
    if text.lower() in ("vertical", "horizontal") and accepts == ("rad",):
        text = "90 deg" if text.lower() == "vertical" else "0 deg"
    try:
        return quantity(text, accepts)
    except MotorfolioError as error:
        raise RequirementError(f"{name}: {_sentence(error)}") from error


def _sentence(error: MotorfolioError) -> str:
    text = str(error)
    return text if text.endswith(".") else f"{text}."


def share(given: Any, name: str) -> float:
    """A pure number or per cent: 0.2, "0.2", "20 %"."""
    if isinstance(given, bool):
        raise RequirementError(f"{name}: {given} is no number; give one such as 20 %.")
    if isinstance(given, int | float):
        return _number(given, name)
    return _quantity(given, ("1",), name)


def _number(given: Any, name: str) -> float:
    if isinstance(given, bool):
        raise RequirementError(f"{name}: {given} is no number.")
    try:
        number = float(given)
    except (TypeError, ValueError, OverflowError):
        number = math.nan
    if not math.isfinite(number):
        raise RequirementError(f"{name}: {quoted(given)} is no number.")
    return number


def _current(given: Any, field: Field, name: str) -> tuple[float, str | None]:
    """Amperes and the convention that stands in the unit: "10 A rms", "10 Arms", "14 A peak"."""
    value = _bounded(_quantity(given, ("A",), name), field, name, given)
    figure = read_figure(given, POINT)
    marks = read_unit(figure.unit, ("A",)).marks if figure else frozenset()
    words = [word for word in ("rms", "peak", "dc") if word in marks]
    if len(words) > 1:
        raise RequirementError(f"{name}: {quoted(given)} names two conventions; name one.")
    return value, words[0] if words else None


def _tolerance(given: Any, name: str) -> float | str:
    if given == "printed":
        return "printed"
    if isinstance(given, bool):
        return 0.1 if given else 0.0
    value = share(given, name)
    if not 0 <= value < 1:
        raise RequirementError(f"{name}: {quoted(given)} is no tolerance; give one such as 10 %.")
    return value


@dataclass(frozen=True)
class Ratios:
    """Gear ratios that may be chosen: a list of `values`, or all from `low` to `high`."""

    values: tuple[float, ...] = ()
    low: float | None = None
    high: float | None = None

    @property
    def is_range(self) -> bool:
        return self.low is not None

    @property
    def text(self) -> str:
        if self.is_range:
            return f"{self.low:g}..{self.high:g}"
        return ", ".join(f"{value:g}" for value in self.values)


def read_ratio(given: Any, name: str) -> Ratios:
    """A ratio, a list of them, or a range: 5, "3..20", "3, 5, 8", [3, 5, 8]."""
    if isinstance(given, str) and ".." in given:
        low, high = (_ratio(part, name) for part in given.split("..", 1))
        if low > high:
            raise RequirementError(
                f"{name}: the range {quoted(given)} begins above its end; write {high:g}..{low:g}."
            )
        return Ratios((low,)) if low == high else Ratios(low=low, high=high)
    parts = given.split(",") if isinstance(given, str) else given
    parts = parts if isinstance(parts, list) else [parts]
    values = tuple(sorted({_ratio(part, name) for part in parts}))
    if not values:
        raise RequirementError(f"{name}: the list is empty; give at least one ratio.")
    return Ratios(values)


def _ratio(text: Any, name: str) -> float:
    if isinstance(text, str) and text.count(":") == 1:  # 5:1
        top, bottom = text.split(":")
        value = _ratio_number(top, name) / (_ratio_number(bottom, name) or float("nan"))
    else:
        value = _ratio_number(text, name)
    if not 0 < value < float("inf"):
        raise RequirementError(f"{name}: {quoted(text)} is no gear ratio; give a number above 0.")
    return value


def _ratio_number(text: Any, name: str) -> float:
    try:
        return float(text)
    except (TypeError, ValueError, OverflowError):
        raise RequirementError(
            f"{name}: {quoted(str(text).strip())} is no gear ratio; give a number (5), "
            "a range (3..20) or a list (3,5,8)."
        ) from None
