"""Text from a datasheet as it may go to a terminal, and numbers as a person reads them."""

import re

from ...schema.written import departure, in_words, number, percent, quantity, scale

__all__ = [
    "cell",
    "convention",
    "departure",
    "interval",
    "many",
    "number",
    "percent",
    "place",
    "plain",
    "printed",
    "quantity",
    "scale",
    "when",
    "words",
]

words = in_words

# C0 and C1 controls, and the marks that turn the direction of writing
_UNSAFE = re.compile("[\x00-\x1f\x7f-\x9f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff]")


def plain(text: str) -> str:
    """The text with control characters made visible, so that a sheet can't steer the terminal."""
    return _UNSAFE.sub(lambda sign: " " if sign[0] in "\n\t\r" else f"\\x{ord(sign[0]):02x}", text)


_UNIT_OF_ITS_OWN = re.compile(
    r"\d[\d.,'’\s]*(?:[eE][+-]?\d+)?\s*(?!(?:maxi?|mini?|typ|ca|approx)\b|[eE][+-]?\d)[^\W\d_Ø×]"
    r"|\d\s*[%°\"]"
)


def printed(figure: dict) -> str:
    """A figure as the sheet has it, with its heading's unit where the cell has none of its own."""
    text, unit = figure.get("text") or "", figure.get("printed_unit")
    if not unit or _UNIT_OF_ITS_OWN.search(text):
        return plain(text)
    return plain(f"{text} {unit}".strip())


def interval(low: float | None, high: float | None, digits: int = 4) -> str:
    """'30.15 … 30.25', '≤ 45', '≥ 3', or nothing."""
    if low is None and high is None:
        return ""
    if low is None:
        return f"≤ {number(high, digits)}"
    if high is None:
        return f"≥ {number(low, digits)}"
    return "exact" if low == high else f"{number(low, digits)} … {number(high, digits)}"


def convention(found: dict | None) -> str:
    """The convention of a figure in a few words: 'rms, lines (assumed)'."""
    if not found:
        return ""
    said = [
        str(found[k])
        for k in ("current", "voltage", "between", "connection", "shape")
        if k in found
    ]
    if "temperature" in found:
        said.append(f"at {number(found['temperature'])} °C")
    basis = found.get("basis")
    return ", ".join(said) + (f" ({basis})" if basis and said and basis != "stated" else "")


def many(n: int, noun: str) -> str:
    """ "1 motor", "3 motors"."""
    return f"{n} {noun}{'s' * (n != 1)}"


def when(at: str) -> str:
    """A stored time (UTC) to the minute: "2026-12-01 09:45"."""
    return at[:16].replace("T", " ")


def place(figure: dict) -> str:
    """Row and column of a figure in short: R10 C3."""
    cell = figure.get("cell") or {}
    return " ".join(
        f"{sign}{cell[key]}" for sign, key in (("R", "row"), ("C", "column")) if cell.get(key)
    )


def cell(found: dict | None) -> str:
    """A place in a file: 'Sheet1 row 3, column 5'."""
    if not found:
        return ""
    parts = []
    if found.get("row"):
        parts.append(f"row {found['row']}")
    if found.get("column"):
        parts.append(f"column {found['column']}")
    where = [
        found[k] if k == "sheet" else f"page {found[k]}" for k in ("sheet", "page") if found.get(k)
    ]
    return " ".join([*map(str, where), ", ".join(parts)]).strip()
