"""Names of quantities and numbers as an engineer writes them: the one place that spells them."""

import math

_SPELLINGS = (
    ("no load", "no-load"),
    ("back emf", "back-EMF"),
    ("speed torque", "speed/torque"),
    ("winding housing", "winding to housing"),
    ("housing ambient", "housing to ambient"),
    ("pwm", "PWM"),
)
_SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")
_SMALLEST_PLAIN, _LARGEST_PLAIN = -4, 7
_VANISHING = 1e-100
"""No figure of a motor is as small: what is left of a difference."""


def in_words(key: str) -> str:
    """The display name of a key: "no_load_speed" → "no-load speed"."""
    text = key.replace("_", " ")
    for plain, written in _SPELLINGS:
        text = text.replace(plain, written)
    return text


def number(value: float | None, digits: int = 4) -> str:
    """A number to so many significant digits: plain decimals where they can be read, else with a
    power of ten that is a multiple of three; "–" where there is none."""
    if value is None or not math.isfinite(value):
        return "–"
    rounded = float(f"{value:.{digits - 1}e}")
    if abs(rounded) < _VANISHING:
        return "0"
    size = math.floor(math.log10(abs(rounded)))
    if _SMALLEST_PLAIN < size < _LARGEST_PLAIN:
        text = f"{rounded:.{max(0, digits - 1 - size)}f}"
        return text.rstrip("0").rstrip(".") if "." in text else text
    exponent = 3 * (size // 3)
    return f"{number(rounded / 10.0**exponent, digits)}×10{str(exponent).translate(_SUPERSCRIPTS)}"


def percent(share: float | None, decimals: int = 0, *, signed: bool = False) -> str:
    """A share in per cent: 0.615 → "62 %"; never "-0 %"; "–" where there is none."""
    if share is None or math.isnan(share):
        return "–"
    if math.isinf(share):
        return "∞" if share > 0 else "-∞"
    value = round(100 * share, decimals) + 0.0
    return f"{value:{'+' if signed and value else ''}.{decimals}f} %"


def departure(ratio: float) -> str:
    """How far a ratio is from one: "+0.4 %", from 1.35 on "×7.18", "÷2.28"."""
    if abs(math.log(ratio)) > math.log(_FAR):
        return f"×{number(ratio, 3)}" if ratio > 1 else f"÷{number(1 / ratio, 3)}"
    return percent(ratio - 1, 1, signed=True)


_FAR = 1.35
_PREFIXES = ((1e6, "M"), (1e3, "k"), (1.0, ""), (1e-3, "m"), (1e-6, "µ"), (1e-9, "n"))
_PREFIXED = frozenset({
    "A", "V", "Ω", "H", "N·m", "N·m/A", "V·s/rad", "N·m/√W", "N·m·s/rad", "s", "W", "m", "J",
    "Hz", "F",
})  # fmt: skip
_FROM, _BELOW = 0.1, 1e4
"""Between these a unit goes without a prefix: 0.152 Ω, 1500 W."""


def scale(value: float | None, unit: str) -> tuple[float, str]:
    """What to divide a figure by, and the unit with the prefix that it then has."""
    if value is None or not math.isfinite(value) or value == 0 or _FROM <= abs(value) < _BELOW:
        return 1.0, unit
    if unit == "kg" and abs(value) < _FROM:
        return (1e-3, "g") if abs(value) >= 1e-3 else (1e-6, "mg")
    if unit not in _PREFIXED:
        return 1.0, unit
    if unit in ("m", "s") and abs(value) >= 1:
        return 1.0, unit
    factor, prefix = next((p for p in _PREFIXES if abs(value) >= p[0]), _PREFIXES[-1])
    return factor, prefix + unit


def quantity(value: float | None, unit: str, digits: int = 4) -> str:
    """A number with its unit, prefixed where that makes it readable; a pure number stands bare."""
    factor, prefixed = scale(value, unit)
    shown = number(None if value is None else value / factor, digits)
    return shown if unit in ("1", "") or shown == "–" else f"{shown} {prefixed}"


RULES = {
    "spellings": _SPELLINGS,
    "smallest_plain": _SMALLEST_PLAIN,
    "largest_plain": _LARGEST_PLAIN,
    "vanishing": _VANISHING,
    "far": _FAR,
    "prefixes": _PREFIXES,
    "prefixed": sorted(_PREFIXED),
    "prefix_from": _FROM,
    "prefix_below": _BELOW,
}
"""What the page's scripts must know to spell names and numbers as this module does."""
