"""Layouts with one motor a column."""

from __future__ import annotations

from dataclasses import replace

from .cells import can_span, heading, value_cell
from .page import Cell, Grid, Page
from .rows import give_dual
from .sheet import Column, Sheet, print_number


def one_a_column(sheet: Sheet, page: Page, *, style: str, captions: bool, unit_column: bool,
             symbol_column: bool, with_unit: bool = False) -> None:  # fmt: skip
    recipe = sheet.recipe
    rng = recipe.random("columns")
    order = ["electrical", "mechanical", "thermal"]
    if captions:
        sheet.columns.sort(key=lambda c: order.index(c.quantity.caption))
    first = rng.choice([sheet.part_label, sheet.word("parameter") if not captions else ""])
    first = sheet.part_label if len(sheet.parts) == 1 else first
    head: list[Cell | None] = [Cell(first)]
    if symbol_column:
        head.append(Cell(sheet.word("symbol")))
    if unit_column:
        head.append(Cell(sheet.word("unit")))
    head += [Cell(part) for part in sheet.parts]
    grid: Grid = [head]
    caption = ""
    for number, column in enumerate(sheet.columns, start=1):
        if captions and column.quantity.caption != caption:
            caption = column.quantity.caption
            row: list[Cell | None] = [Cell(sheet.word(caption))]
            if can_span(recipe):
                row = [Cell(sheet.word(caption), 1, len(head)), *[None] * (len(head) - 1)]
            grid.append(row + [Cell() for _ in range(len(head) - len(row))])
        label = column.label if unit_column or with_unit else heading(sheet, column, style)
        if recipe.has("numbered") and captions:
            label = f"{number} {label}"
        row = [Cell(label)]
        if symbol_column:
            row.append(Cell(column.symbol))
        if unit_column:
            row.append(Cell(column.unit_text))
        row += [value_cell(sheet, column, i, with_unit) for i in range(len(sheet.parts))]
        grid.append(row)
    for label, texts in sheet.others:
        blank: list[Cell | None] = [Cell() for _ in range(len(head) - 1 - len(texts))]
        grid.append([Cell(label), *blank, *[Cell(t) for t in texts]])
    page.grids.append(grid)
    page.expect_sheet(sheet)


def columns_shared(sheet: Sheet, page: Page) -> None:
    """A frame figure printed once: over all windings where cells can span, else in the first."""
    if len(sheet.parts) < 2 or any(
        c.quantity.shared and any(x is None for x in c.cells) for c in sheet.columns
    ):
        one_a_column(sheet, page, style="", captions=True, unit_column=True, symbol_column=False)
        return
    one_a_column(sheet, page, style="", captions=True, unit_column=True, symbol_column=False)
    shared = {c.label for c in sheet.columns if c.quantity.shared}
    keys = {c.key for c in sheet.columns if c.quantity.shared}
    count = len(sheet.parts)
    for row in page.grids[0]:
        label = row[0].text if row[0] else ""
        if not any(label.endswith(x) for x in shared):
            continue
        text = row[2].text if row[2] else ""
        if can_span(sheet.recipe):
            row[2:] = [Cell(text, 1, count), *[None] * (count - 1)]
        else:
            row[3:] = [Cell() for _ in range(count - 1)]
    if not can_span(sheet.recipe):
        for part in sheet.parts[1:]:
            for key in keys & set(page.figures[part]):
                page.figures[part][key].optional = True


def columns_two_temperatures(sheet: Sheet, page: Page) -> None:
    """The same labels in two blocks, for a cold and for a hot winding."""
    recipe = sheet.recipe
    twice = [c for c in sheet.columns if c.key in ("terminal_resistance", "nominal_current",
             "nominal_torque", "torque_constant", "back_emf_constant")]  # fmt: skip
    if not twice:
        one_a_column(sheet, page, style="", captions=False, unit_column=True, symbol_column=False)
        return
    common = [c for c in sheet.columns if c not in twice]
    factors = {"terminal_resistance": 1.34, "torque_constant": 0.93, "back_emf_constant": 0.93}
    hot = [
        replace(
            c,
            cells=[
                print_number(recipe, c.key, i, c.unit, t[c.key] * factors.get(c.key, 0.8))
                for i, t in enumerate(sheet.truths)
            ],
        )
        for c in twice
    ]
    width = 2 + len(sheet.parts)
    grid: Grid = [[Cell(sheet.part_label), Cell(sheet.word("unit")),
                   *[Cell(p) for p in sheet.parts]]]  # fmt: skip
    captions = {"en": "Winding at {} °C", "de": "Wicklung bei {} °C"}
    caption = captions.get(recipe.language, "{} °C")

    def add(columns: list[Column]) -> None:
        for column in columns:
            values = [value_cell(sheet, column, i) for i in range(len(sheet.parts))]
            grid.append([Cell(column.label), Cell(column.unit_text), *values])

    add(common)
    for block, temperature in ((twice, 25), (hot, 125)):
        grid.append([Cell(caption.format(temperature)), *[Cell() for _ in range(width - 1)]])
        add(block)
    page.grids.append(grid)
    page.expect_sheet(sheet)
    for place, part in enumerate(sheet.parts):
        for cold, warm in zip(twice, hot, strict=True):
            a, b = cold.cells[place], warm.cells[place]
            page.figures[part].pop(cold.key, None)
            if a and b:
                page.conditioned.setdefault(part, {})[cold.key] = [a.value, b.value]
            elif a or b:
                page.allowed.add(cold.key)


def columns_dual(sheet: Sheet, page: Page) -> None:
    give_dual(sheet)
    one_a_column(sheet, page, style="", captions=False, unit_column=True, symbol_column=False)
