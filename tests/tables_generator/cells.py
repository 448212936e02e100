"""Headings and cells: label, symbol and unit as makers write them."""

from __future__ import annotations

from .page import Cell
from .recipe import Recipe
from .sheet import MISSING, Column, Sheet
from .words import CAPTIONS


def heading(sheet: Sheet, column: Column, style: str = "", unit: str | None = None) -> str:
    """Label, symbol and unit in one of the ways makers write them."""
    style = style or sheet.recipe.label
    unit = column.unit_text if unit is None else unit
    label, symbol = column.label, column.symbol
    if not unit:
        return label if style != "symbol" else symbol or label
    crowded = "/" in label + unit or "×" in unit or label[-1] in ")*"
    if style == "label / unit" and crowded:
        style = "label [unit]"
    if style == "label in unit" and (sheet.recipe.language not in ("en", "de", "it") or crowded):
        style = "label, unit"
    if style == "label, unit" and ("," in label or crowded):
        style = "label (unit)"
    if not symbol:
        style = style.replace(", symbol", "").replace(" (symbol)", "").replace(" symbol", "")
    if "symbol" in style and style != "symbol" and label[-1] in ")*":
        style = "label [unit]"
    brackets = "({})" if "(unit)" in style or (style == "symbol" and len(unit) % 2) else "[{}]"
    return {
        "label, unit": f"{label}, {unit}",
        "label / unit": f"{label} / {unit}",
        "label in unit": f"{label} in {unit}",
        "label symbol [unit]": f"{label} {symbol} [{unit}]",
        "label, symbol [unit]": f"{label}, {symbol} [{unit}]",
        "label, symbol (unit)": f"{label}, {symbol} ({unit})",
        "label (symbol) [unit]": f"{label} ({symbol}) [{unit}]",
        "symbol": f"{symbol or label} {brackets.format(unit)}",
    }.get(style, f"{label} {brackets.format(unit)}")


def missing_text(sheet: Sheet) -> str:
    """The sign for a missing figure that this sheet uses."""
    rng = sheet.recipe.random("missing sign")
    signs = MISSING[1:] if sheet.recipe.format in ("text", "pdf") else MISSING
    return rng.choice([*signs, CAPTIONS["missing"][sheet.recipe.language]])


def value_cell(sheet: Sheet, column: Column, place: int, with_unit: bool = False) -> Cell:
    """The cell of one figure."""
    printed = column.cells[place]
    if printed is None:
        return Cell(missing_text(sheet))
    unit = f" {column.unit_text}" if with_unit and column.unit_text else ""
    return Cell(printed.text + unit)


def group_row(names: list[str], spanned: bool, centred: bool) -> list[Cell | None]:
    """Neighbouring equal names become one cell over all of them."""
    row: list[Cell | None] = [Cell() for _ in names]
    start = 0
    while start < len(names):
        end = start
        while end + 1 < len(names) and names[end + 1] == names[start]:
            end += 1
        width = end - start + 1
        if names[start] and spanned:
            row[start : end + 1] = [Cell(names[start], 1, width), *[None] * (width - 1)]
        elif names[start]:
            row[start + (width // 2 if centred and width > 2 else 0)] = Cell(names[start])
        start = end + 1
    return row


def can_span(recipe: Recipe) -> bool:
    return recipe.format in ("html", "xlsx", "ods")
