"""Two numbers of one figure with a power of ten behind the second: "1.017 ± 0.001 ×10^-6"."""

import re

from .numerals import DIGITS, readings

PLUS_MINUS = re.compile(r"(?P<open>[(\[])?\s*(?:±|\+/-|\+-)\s*")
_LATE_POWER = re.compile(
    rf"[+-]?(?P<first>{DIGITS})"
    r"(?P<sign>\s*(?:±|\+/-|\+-|\.{2,3}|~|÷|-|\bto\b|\bbis\b|至|から)\s*)"
    rf"(?P<second>{DIGITS})"
    r"(?P<power>[eE](?P<e>[+-]?\d{1,3})(?!\w)"
    r"|(?:\s*[×xX*·]\s*|\s+)10(?:\^?(?P<up>[+-]\d{1,2})|\^(?P<raised>\d{1,2}))(?!\d))"
)


def share_power(text: str) -> str | None:
    """`text` with the power behind both numbers where it belongs to both; None if it is unsure.

    It belongs to the second alone where that gives a possible pair and sharing it does not:
    "7500 - 1×10^4".
    """
    found = _LATE_POWER.match(text)
    if found is None:
        return text
    first, sign, second, power = found.group("first", "sign", "second", "power")
    exponent = found.group("up") or found.group("raised") or found.group("e")
    plausible = _deviates if PLUS_MINUS.fullmatch(sign) else _in_order
    as_fraction = [float(n) for n in readings(first, True).values()]
    as_written = [float(n) for n in readings(first).values()]
    ends = [float(n) for n in readings(second, True).values()]
    scaled = [float(f"{n}e{exponent}") for n in readings(second, True).values()]
    if not any(plausible(a, b) for a in as_fraction for b in ends):
        return text
    if any(plausible(a, b) for a in as_written for b in scaled):
        return None
    return f"{text[: found.end('first')]}{power}{sign}{second}{power}{text[found.end() :]}"


def _deviates(value: float, deviation: float) -> bool:
    """Whether a printed ± can be that of the value: from 1/10 000 of it to all of it."""
    return 1e-4 * value <= deviation <= value


def _in_order(low: float, high: float) -> bool:
    """Whether two numbers can be the ends of one range: the upper up to 100 times the lower."""
    return low < high <= 100 * low
