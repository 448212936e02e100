"""How numbers are printed: decimal sign, thousands marks, powers of ten; and what is decidable."""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import Decimal

THIN, NARROW, NBSP = "\u2009", "\u202f", "\u00a0"
SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


@dataclass(frozen=True)
class NumberStyle:
    """The decimal sign, the mark between thousands ('' for none), and how powers are written."""

    decimal: str = "."
    thousands: str = ""
    power: str = "E"
    leading_zero: bool = True

    def write(self, number: Decimal) -> str:
        """The number with all its digits, '1234.50' → '1.234,50'."""
        sign, digits = ("-", str(-number)) if number < 0 else ("", f"{number:f}")
        whole, _, fraction = digits.partition(".")
        if self.thousands and len(whole) > 3:
            groups = [whole[max(0, i - 3) : i] for i in range(len(whole), 0, -3)]
            whole = self.thousands.join(reversed(groups))
        if whole == "0" and fraction and not self.leading_zero:
            whole = ""
        return sign + whole + (self.decimal + fraction if fraction else "")

    def write_scientific(self, number: Decimal, digits: int) -> tuple[str, Decimal]:
        """With a power of ten, and the value that is then printed: '4,18·10⁻⁶'."""
        mantissa, _, exponent = f"{number:.{digits - 1}E}".partition("E")
        power = int(exponent)
        printed = Decimal(mantissa).scaleb(power)
        mantissa = mantissa.replace(".", self.decimal)
        if self.power in ("E", "e"):
            return f"{mantissa}{self.power}{power:+03d}", printed
        if self.power.endswith("^"):
            return f"{mantissa}{self.power}{power}", printed
        return f"{mantissa}{self.power}{str(power).translate(SUPERSCRIPTS)}", printed


STYLES = {
    "point": NumberStyle("."),
    "comma": NumberStyle(",", power="·10"),
    "point, comma marks": NumberStyle(".", ",", "×10"),
    "comma, point marks": NumberStyle(",", ".", "e"),
    "point, blank marks": NumberStyle(".", " ", " x 10^"),
    "comma, blank marks": NumberStyle(",", NBSP, "*10^"),
    "point, thin marks": NumberStyle(".", THIN, "·10"),
    "comma, narrow marks": NumberStyle(",", NARROW, "×10"),
    "point, apostrophe marks": NumberStyle(".", "'", "E"),
    "point, raised apostrophe marks": NumberStyle(".", "’", " × 10"),
    "comma, apostrophe marks": NumberStyle(",", "'", "E"),
    "point, no leading zero": NumberStyle(".", leading_zero=False),
}

_AMBIGUOUS = re.compile(r"(?<![\d.,])[1-9]\d{0,2}[.,]\d{3}(?![\d.,])")
_SINGLE = re.compile(r"(?<![\d.,])(\d*)([.,])(\d+)(?![\d.,])")


def is_ambiguous(text: str) -> bool:
    """Whether the digits alone allow two readings: '1,234'."""
    return _AMBIGUOUS.search(text) is not None


def tells_decimal_sign(text: str, style: NumberStyle) -> bool:
    """Whether this number shows which sign is the decimal one."""
    if text.count(".") + text.count(",") > 1:
        return True
    found = _SINGLE.search(text)
    if found is None or found[2] != style.decimal:
        return False
    return len(found[3]) != 3 or found[1] in ("", "0") or len(found[1]) > 3
