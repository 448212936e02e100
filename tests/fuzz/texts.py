"""Random texts against the functions that read numbers, units, headings, requirements, cycles."""

from __future__ import annotations

import math
from random import Random

from motorfolio.catalog.requirement.cycle_table import from_rows
from motorfolio.catalog.requirement.fields import RequirementError
from motorfolio.catalog.requirement.read import read_requirement
from motorfolio.schema.figure.numerals import NumberStyle
from motorfolio.schema.figure.read import FigureError, read_figure
from motorfolio.schema.units.read import UnitError, quantity, read_unit

NUMBER_PARTS = [
    *"0123456789.,-+−–—±×·^()[]{}<>≤≥~'’ \u00a0\u2009\u202f*/|%eE°½²³⁴⁻¹⁾†#=:;\"″",
    *"１２３．，", "\u200b", "\u200e", "\ufeff", "\x00", "\n", "\r", "\t", "٣", "①", "Ⅻ", "〇", "½",
    "12", "1.5", "0,25", "1.234", "1,234", "1e3", "E-6", "×10", "10^-3", "10⁻⁷", "e999", "1E-400",
    "max.", "ca. ", "typ.", "±10 %", "+5/−20 %", "...", "…", "n/a", "inf", "nan", "∞", "−", "k. A.",
    "9" * 400, "1/2", "3-4", "0x1F", "1_000", "$", "=1+1", "V", "mNm", "rpm", "以下", "約",
]  # fmt: skip
UNIT_PARTS = [
    *"VAΩΩµμmkKgsNWHhz/·*.-⋅・•^²³⁻¹√()[] \u00a0\u200b°℃%1023456789,;=×x'\"\x00\n",
    "Nm", "mNm", "oz", "in", "lb", "ft", "rpm", "min", "krpm", "rad", "sqrt", "rms", "pk", "gf",
    "kgf", "cm", "kg", "gcm²", "10⁻⁴", "10^-7", "×1000", "U/min", "tr/min", "giri", "転", "分",
    "/A", "/V", "per", "(L-L)", "peak", "dc", "VDC", "PS", "hp", "CV", "°C", "°F", "K/W", "inf",
    "nan", "__import__", "**", "//", "1e999", "9" * 50, "milli", "µ", "kilo", "degree", "e", "pi",
]  # fmt: skip
ACCEPTS = [
    ("N·m",), ("N·m/A", "V·s/rad"), ("rad/s",), ("kg·m²",), ("rad/(s·V)",), ("Ω",), ("H",), ("A",),
    ("V",), ("W",), ("s",), ("K/W",), ("°C",), ("K",), ("kg",), ("m",), ("1",), ("N·m/√W",),
    ("rad/(s·N·m)",), ("N·m·s/rad",), ("N",), ("currency",),
]  # fmt: skip
STYLES = [NumberStyle("."), NumberStyle(","), NumberStyle(None)]
OPTIONS = ["torque", "speed", "duration", "load-inertia", "ratio", "gear-efficiency", "supply",
           "current", "ambient", "reserve", "where", "order-by", "limit", "max-duty", "cycle",
           "points", "point", "load", "gear", "drive", "motor", "requirement"]  # fmt: skip


def random_text(rng: Random, parts: list[str], most: int = 8) -> str:
    """A text of a few parts, now and then of many or of any characters."""
    if rng.random() < 0.03:
        ranges = [(0, 128), (0, 0x3000), (0x10000, 0x1F000)]
        return "".join(chr(rng.randrange(*rng.choice(ranges))) for _ in range(rng.randrange(30)))
    text = "".join(rng.choice(parts) for _ in range(rng.randint(1, most)))
    return text * rng.choice([50, 500]) if rng.random() < 0.002 else text


def try_text(seed: int) -> str:
    """One random text; what is wrong, '' if it was read or refused as documented."""
    rng = Random(seed)
    return _TRIES[seed % len(_TRIES)](rng)


def _number(rng: Random) -> str:
    text = random_text(rng, NUMBER_PARTS)
    try:
        figure = read_figure(text, rng.choice(STYLES))
    except FigureError as error:
        return _bad_sentence(text, error)
    if figure is not None and not math.isfinite(figure.value):
        return f"not finite: {text!r} became {figure.value}"
    if figure is not None and not (
        math.isnan(figure.low) or math.isnan(figure.high) or figure.low <= figure.high
    ):
        return f"interval: {text!r} became {figure.low} … {figure.high}"
    return ""


def _unit(rng: Random) -> str:
    text = random_text(rng, UNIT_PARTS, 6)
    try:
        unit = read_unit(text, rng.choice(ACCEPTS))
    except UnitError as error:
        return _bad_sentence(text, error)
    return (
        "" if math.isfinite(unit.factor) and unit.factor else f"factor: {text!r} is {unit.factor}"
    )


def _quantity(rng: Random) -> str:
    text = random_text(rng, NUMBER_PARTS, 3) + " " + random_text(rng, UNIT_PARTS, 3)
    try:
        value = quantity(text, rng.choice(ACCEPTS))
    except (FigureError, UnitError) as error:
        return _bad_sentence(text, error)
    return "" if math.isfinite(value) else f"not finite: {text!r} became {value}"


def _requirement(rng: Random) -> str:
    def value(depth: int) -> object:
        kind = rng.randrange(8 if depth else 6)
        if kind < 3:
            return random_text(rng, NUMBER_PARTS, 2) + " " + random_text(rng, UNIT_PARTS, 2)
        if kind == 3:
            return rng.choice([None, True, 0, -1, 1e308, math.nan, math.inf, 10**30, 0.5])
        if kind == 4:
            return rng.choice(["0.3 N·m", "3000 rpm", "24 V", "2..5", "1,2,3", "20 %", "size"])
        if kind == 5:
            return rng.choice(OPTIONS)
        if kind == 6:
            return [value(depth - 1) for _ in range(rng.randrange(4))]
        return {rng.choice(OPTIONS): value(depth - 1) for _ in range(rng.randrange(4))}

    document = {rng.choice(OPTIONS): value(3) for _ in range(rng.randint(1, 5))}
    try:
        read_requirement(document)
    except RequirementError as error:
        return _bad_sentence(str(document), error)
    return ""


def _cycle(rng: Random) -> str:
    heads = ["time", "speed", "torque", "time [s]", "speed [rpm]", "torque [N·m]", "Zeit", ""]
    rows = [[rng.choice(heads) if rng.random() < 0.9 else random_text(rng, UNIT_PARTS)
             for _ in range(rng.randint(1, 4))]]  # fmt: skip
    cells = ["0", "1", "2.5", "-3", "0.1 s", "90°"]
    rows += [
        [rng.choice([*cells, random_text(rng, NUMBER_PARTS, 4)]) for _ in range(rng.randint(1, 4))]
        for _ in range(rng.randrange(5))
    ]
    try:
        from_rows(rows, rng.random() < 0.5)
    except RequirementError as error:
        return _bad_sentence(str(rows), error)
    return ""


def _bad_sentence(text: str, error: Exception) -> str:
    message = str(error)
    if not message.strip() or "\n" in message:
        return f"message: {text!r}: {message!r}"
    return f"long message: {text[:80]!r}: {len(message)}" if len(message) > 1000 else ""


_TRIES = [
    _number,
    _unit,
    _quantity,
    _number,
    _unit,
    _quantity,
    _number,
    _unit,
    _requirement,
    _cycle,
]
