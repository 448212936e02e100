"""A stored number as its number format shows it, so that a unit in the format is read.

Format codes follow ECMA-376 Part 1 (SpreadsheetML), section 18.8.30 and 18.8.31. Thousands
marks, and any decimal mark but the point, are left out on purpose, since both depend on the
reader's locale while the number is known; a zero always stands before the point.
"""

import math
import re
from dataclasses import dataclass
from datetime import datetime, timedelta
from functools import lru_cache

# ECMA-376 Part 1, 18.8.30: identifiers that stand for a format without naming it.
BUILT_IN = {
    0: "General", 1: "0", 2: "0.00", 3: "#,##0", 4: "#,##0.00", 9: "0%", 10: "0.00%",
    11: "0.00E+00", 12: "# ?/?", 13: "# ??/??", 14: "mm-dd-yy", 15: "d-mmm-yy", 16: "d-mmm",
    17: "mmm-yy", 18: "h:mm AM/PM", 19: "h:mm:ss AM/PM", 20: "h:mm", 21: "h:mm:ss",
    22: "m/d/yy h:mm", 37: "#,##0 ;(#,##0)", 38: "#,##0 ;[Red](#,##0)",
    39: "#,##0.00;(#,##0.00)", 40: "#,##0.00;[Red](#,##0.00)", 45: "mm:ss", 46: "[h]:mm:ss",
    47: "mmss.0", 48: "##0.0E+0", 49: "@",
}  # fmt: skip
_LOCAL_DATES = frozenset([*range(27, 37), *range(50, 59)])  # East Asian date formats

_TOKEN = re.compile(
    r'"(?P<quoted>[^"]*)"?|\\(?P<escaped>.)|_.|\*.|\[\$(?P<currency>[^\]\-]*)[^\]]*\]'
    r"|\[(?P<bracket>[^\]]*)\]|(?P<general>General)|(?P<ampm>AM/PM|A/P)"
    r"|(?P<exponent>[Ee][+\-])|(?P<digits>[0#?.,]+)|(?P<percent>%)|(?P<at>@)"
    r"|(?P<date>[ymdhsegb]+)|(?P<other>.)",
    re.IGNORECASE | re.DOTALL,
)
_CONDITION = re.compile(r"([<>=]+)\s*(-?[\d.]+)$")


@dataclass(frozen=True, slots=True)
class Section:
    """One of the up to four parts of a format code."""

    kind: str  # "number", "general", "date", "text"
    before: str = ""
    after: str = ""
    decimals: int = 0
    optional_decimals: int = 0
    integers: int = 0
    places: int = 0
    exponent: int = 0
    percent: int = 0
    thousandfold: int = 0
    fraction: bool = False
    condition: tuple[str, float] | None = None


@lru_cache(maxsize=2048)
def sections(code: str) -> tuple[Section, ...]:
    """The sections of a format code, divided at ';' outside quotation marks."""
    parts, start = [], 0
    for match in _TOKEN.finditer(code):
        if match["other"] == ";":
            parts.append(code[start : match.start()])
            start = match.end()
    parts.append(code[start:])
    return tuple(_section(part) for part in parts[:4])


def _section(code: str) -> Section:
    before = after = digits = ""
    kind, percent, exponent, fraction = "literal", 0, 0, False
    condition: tuple[str, float] | None = None
    seen = False
    for match in _TOKEN.finditer(code):
        literal = ""
        if (bracket := match["bracket"]) is not None:
            if found := _CONDITION.match(bracket):
                condition = (found[1], float(found[2]))
            elif re.fullmatch(r"[hms]+", bracket, re.IGNORECASE):
                kind = "date"
        elif match["general"]:
            kind, seen = "general", True
        elif match["ampm"] or match["date"]:
            kind = "date"
        elif match["exponent"]:
            exponent = 1
        elif match["digits"]:
            if exponent:
                exponent = len(match["digits"])
            elif seen and after.strip() == "/":
                fraction = True
            else:
                digits += match["digits"]
            if kind == "literal":
                kind = "number"
            seen = True
        elif match["percent"]:
            percent += 1
            literal = " %" if seen else "% "
        elif match["at"]:
            kind, seen = "text", True
        else:
            literal = match["quoted"] or match["escaped"] or match["currency"] or match["other"]
            literal = literal or (" " if match[0].startswith("_") else "")
        if seen:
            after += literal
        else:
            before += literal
    if "/" in after and re.search(r"[?#0]\s*/", code):
        fraction = True
    whole, _, part = digits.partition(".")
    scale = len(digits) - len(digits.rstrip(","))
    return Section(
        kind, before, after, len(part.replace(",", "")), part.count("#") + part.count("?"),
        whole.count("0"), len(whole.replace(",", "")), exponent, percent, scale, fraction,
        condition,
    )  # fmt: skip


def is_date(code: str) -> bool:
    return any(section.kind == "date" for section in sections(code))


def plain(value: float) -> str:
    """A number without a format: as many digits as were typed (15 are stored truly)."""
    return f"{value:.15g}".replace("e", "E")


def shown(value: float, code: str) -> tuple[str, str | None]:
    """The text of a number under a format, and a remark where the format hides the number."""
    parts = sections(code)
    section, number = _choose(parts, value)
    if section.kind == "general":
        return f"{section.before}{plain(number)}{section.after}".strip(), None
    if section.kind == "text":
        return plain(value), None
    if section.kind == "literal":
        text = (section.before + section.after).strip()
        return text, f"the number format shows “{text}” for {plain(value)}"
    if section.fraction:
        return plain(value), None
    scaled = number * 100**section.percent / 1000**section.thousandfold
    if section.exponent:
        # With several places before the point the exponent goes in steps of as many.
        step = max(1, section.places)
        power = math.floor(math.log10(abs(scaled))) // step * step if scaled else 0
        mantissa = f"{scaled / 10.0**power:.{section.decimals}f}"
        sign = "-" if power < 0 else "+"
        digits = f"{mantissa}E{sign}{abs(power):0{section.exponent}d}"
    else:
        digits = f"{scaled:.{section.decimals}f}"
        for _ in range(section.optional_decimals):
            if digits[-1] != "0" or "." not in digits:
                break
            digits = digits[:-1]
        digits = digits.removesuffix(".")
        sign = "-" if digits.startswith("-") else ""
        digits = sign + digits.lstrip("-").zfill(
            section.integers + (len(digits.partition(".")[2]) + 1 if "." in digits else 0)
        )
    remark = None
    if abs(float(digits) - scaled) > 0.02 * abs(scaled):
        remark = f"the number format shows {digits} for {plain(scaled)}, which is taken"
        digits = plain(scaled)
    elif section.thousandfold:
        remark = f"the number format shows {plain(value)} in thousands"
    text = f"{section.before}{digits}{section.after}"
    return re.sub(r"^\s+|\s+$", "", text), remark


def _choose(parts: tuple[Section, ...], value: float) -> tuple[Section, float]:
    """The section that holds for a number, and the number with the sign it still shows."""
    for section in parts:
        if section.condition and _holds(section.condition, value):
            return section, value
    numeric = [s for s in parts[:3] if s.kind != "text" and s.condition is None] or [parts[0]]
    if value < 0 and len(numeric) > 1:
        section = numeric[1]
        # A format that brackets a negative number says so without a minus.
        if "(" in section.before:
            return section, -value
        return (section, -value) if "-" in section.before else (section, value)
    if value == 0 and len(numeric) > 2:
        return numeric[2], value
    return numeric[0], value


def _holds(condition: tuple[str, float], value: float) -> bool:
    sign, limit = condition
    return {
        "<": value < limit, ">": value > limit, "=": value == limit,
        "<=": value <= limit, ">=": value >= limit, "<>": value != limit,
    }.get(sign, False)  # fmt: skip


def text_shown(text: str, code: str) -> str:
    """A text under a format with a text section ('@" V"')."""
    parts = sections(code)
    if parts[-1].kind == "text" and (len(parts) in (1, 4)):
        return f"{parts[-1].before}{text}{parts[-1].after}".strip()
    return text


def date_text(value: float, *, since_1904: bool = False) -> str:
    """A date serial as a text that no one takes for a figure: 'date 2026-12-06'."""
    start = datetime(1904, 1, 1) if since_1904 else datetime(1899, 12, 30)
    if not since_1904 and value < 60:
        start += timedelta(days=1)  # the calendar has a 29 February 1900 that never was
    try:
        moment = start + timedelta(seconds=round(value * 86400))
    except OverflowError:
        return "date out of range"
    if 0 <= value < 1:
        return f"time {moment:%H:%M:%S}".removesuffix(":00")
    return f"date {moment:%Y-%m-%d}" + (f" {moment:%H:%M}" if value % 1 else "")


def format_code(identifier: int, custom: dict[int, str]) -> str:
    if identifier in custom:
        return custom[identifier]
    return "yyyy-mm-dd" if identifier in _LOCAL_DATES else BUILT_IN.get(identifier, "General")
