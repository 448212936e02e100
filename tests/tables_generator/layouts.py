"""The layouts: a sheet of motors → a page. Shapes as in the trade's catalogues (no source)."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from . import columns, lists, rows
from .page import Page
from .quantities import ANCHORS
from .recipe import Recipe
from .sheet import Sheet, build_sheet
from .words import OTHERS

CURRENT_KEYS = ("nominal_current", "peak_current", "continuous_stall_current")


def build_page(recipe: Recipe) -> Page:
    """The page of a recipe, with its expectation."""
    sheet = build_sheet(recipe)
    page = Page(recipe)
    _state_conventions(sheet, page)
    _lose_cells(sheet)
    _add_distractors(sheet)
    _BUILDERS[recipe.layout](sheet, page)
    page.settle(sheet)
    return page


def _state_conventions(sheet: Sheet, page: Page) -> None:
    recipe = sheet.recipe
    rng = recipe.random("conventions")
    if recipe.layout == "flat list":
        return  # it has no place for notes
    if sheet.title:
        page.before.append(sheet.title)
    if recipe.has("note temperature"):
        temperature = rng.choice([20, 25])
        page.after.append(sheet.word("at_25").format(t=temperature) + rng.choice(["", "."]))
        page.reference_temperature = float(temperature)
    if recipe.has("note rms") and sheet.kind == "servo":
        page.after.append(sheet.word("rms") + rng.choice(["", "."]))
        for column in sheet.columns:
            if column.key in CURRENT_KEYS:
                column.convention["current"] = "rms"
    columns = {c.key: c for c in sheet.columns}
    symbols_only = recipe.layout.endswith("symbols")
    if recipe.has("between") and sheet.kind != "brushed" and not symbols_only:
        between = rng.choice(["lines", "phase"])
        for key in ("terminal_resistance", "terminal_inductance"):
            if key in columns:
                columns[key].label += f" ({sheet.word(between)})"
                columns[key].convention["between"] = between
                columns[key].symbol = columns[key].symbol[:1]  # R_tt would say "lines"
    mark = rng.choice(["1)", "¹⁾", "*"])
    if recipe.has("footnote label") and "terminal_resistance" in columns:
        columns["terminal_resistance"].label += rng.choice(["", " "]) + mark
        page.after.append(f"{mark} {sheet.word('typical')}")
    if recipe.has("footnote cell"):
        key = next((k for k in ("no_load_speed", "nominal_speed") if k in columns), "")
        cell = columns[key].cells[-1] if key else None
        if cell and cell.plain:
            mark = rng.choice(["²⁾", " 2)", "†"])
            columns[key].cells[-1] = replace(cell, text=cell.text + mark)
            page.after.append(f"{mark.strip()} {sheet.word('typical')}")


def _lose_cells(sheet: Sheet) -> None:
    if not sheet.recipe.has("missing") or sheet.recipe.layout == "rows, ditto":
        return
    for column in sheet.columns:
        for place in range(len(sheet.parts)):
            rng = sheet.recipe.random(f"missing {column.key} {place}")
            if rng.random() < 0.12 and column.key not in ANCHORS[sheet.kind]:
                column.cells[place] = None
        first, *rest = column.cells
        if column.quantity.shared and first and not any(rest):
            column.cells = [first] * len(column.cells)  # else it would read as shared by all


def _add_distractors(sheet: Sheet) -> None:
    if sheet.recipe.has("distractor"):
        rng = sheet.recipe.random("distractor")
        names = rng.choice(OTHERS)
        unit, low, high = {"Insulation resistance": (" [MΩ]", 50, 500)}.get(
            names["en"], ("", 5, 13)
        )
        label = names[sheet.recipe.language] + unit
        sheet.others.append((label, [str(rng.randint(low, high)) for _ in sheet.parts]))


def _plain_columns(**choice: bool) -> Callable[[Sheet, Page], None]:
    options = {"captions": False, "unit_column": True, "symbol_column": False} | choice
    style = "symbol" if options.pop("symbols", False) else ""
    return lambda sheet, page: columns.one_a_column(sheet, page, style=style, **options)


_BUILDERS: dict[str, Callable[[Sheet, Page], None]] = {
    "rows": rows.rows,
    "rows, unit row": rows.rows_unit_row,
    "rows, symbol and unit rows": rows.rows_symbol_row,
    "rows, grouped": rows.rows_grouped,
    "rows, operating points": rows.rows_points,
    "rows, repeated heading": rows.rows_repeated,
    "rows, split blocks": rows.rows_split,
    "rows, two voltages": rows.rows_two_voltages,
    "rows, ditto": rows.rows_ditto,
    "rows, unit in cell": rows.rows_unit_in_cell,
    "rows, symbols": rows.rows_symbols,
    "rows, dual units": rows.rows_dual,
    "rows, two unit systems": rows.rows_two_systems,
    "rows, two sheets": rows.rows_two_sheets,
    "columns": _plain_columns(symbol_column=True),
    "columns, captions": _plain_columns(captions=True),
    "columns, unit in label": _plain_columns(unit_column=False),
    "columns, unit in cell": _plain_columns(unit_column=False, with_unit=True),
    "columns, symbols": _plain_columns(unit_column=False, symbols=True),
    "columns, dual units": columns.columns_dual,
    "columns, shared cells": columns.columns_shared,
    "columns, two temperatures": columns.columns_two_temperatures,
    "key-value text": lists.key_value,
    "flat list": lists.flat_list,
    "number formats": lists.number_formats,
}
