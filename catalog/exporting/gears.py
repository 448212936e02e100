"""The catalog's gears as a table that ``motorfolio gears`` reads again."""

import csv
import io
import re
from collections.abc import Iterable
from dataclasses import fields

from ...schema.gear import UNITS, Gear
from .delimited import inert


def gears_as_csv(gears: Iterable[Gear]) -> str:
    """A CSV table, one gear a row, in SI units; a price has a column a currency."""
    gears = list(gears)
    currencies = sorted({gear.currency for gear in gears if gear.currency})
    keys = [f.name for f in fields(Gear) if f.name not in ("price", "currency")]
    out = io.StringIO()
    table = csv.writer(out, lineterminator="\n")
    table.writerow([*map(_heading, keys), *(f"price [{currency}]" for currency in currencies)])
    for gear in gears:
        prices = [gear.price if gear.currency == currency else None for currency in currencies]
        table.writerow(map(_cell, [*(getattr(gear, key) for key in keys), *prices]))
    return out.getvalue()


def _cell(value: str | float | None) -> str:
    if isinstance(value, float):
        text = repr(value)
        # three decimals alone could be thousands
        return f"{text}0" if re.fullmatch(r"-?\d+\.\d{3}", text) else text
    return "" if value is None else inert(str(value))


def _heading(key: str) -> str:
    unit = UNITS.get(key, "1")
    name = key.replace("_", " ")
    return name if unit == "1" else f"{name} [{unit}]"
