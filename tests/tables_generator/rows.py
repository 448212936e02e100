"""Layouts with one motor a row."""

from __future__ import annotations

from dataclasses import replace

from .cells import can_span, group_row, heading, value_cell
from .page import Cell, Grid, Page
from .quantities import ANCHORS, SHEETS
from .sheet import Column, Printed, Sheet, build_sheet, choose_unit, print_number

VOLTAGES = ("230 VAC", "400 VAC")


def body_rows(sheet: Sheet, with_unit: bool = False, columns: list[Column] | None = None) -> Grid:
    columns = sheet.columns if columns is None else columns
    rows: Grid = []
    for place, part in enumerate(sheet.parts):
        row: list[Cell | None] = [Cell(part)]
        row += [value_cell(sheet, c, place, with_unit) for c in columns]
        row += [Cell(texts[place]) for _, texts in sheet.others]
        rows.append(row)
    return rows


def head_row(sheet: Sheet, style: str = "", unit: str | None = None) -> list[Cell | None]:
    row: list[Cell | None] = [Cell(sheet.part_label)]
    row += [Cell(heading(sheet, c, style, unit)) for c in sheet.columns]
    return row + [Cell(label) for label, _ in sheet.others]


def rows(sheet: Sheet, page: Page) -> None:
    page.grids.append([head_row(sheet), *body_rows(sheet)])
    page.expect_sheet(sheet)


def rows_symbols(sheet: Sheet, page: Page) -> None:
    page.grids.append([head_row(sheet, "symbol"), *body_rows(sheet)])
    legend = [f"{c.symbol}: {c.label}" for c in sheet.columns if c.symbol]
    if sheet.recipe.random("legend").random() < 0.4:
        page.after.append("; ".join(legend))
    page.expect_sheet(sheet)


def unit_cells(sheet: Sheet) -> list[Cell | None]:
    dual = sheet.recipe.layout.endswith("dual units")
    choices = ["{}"] if dual else ["{}", "{}", "[{}]", "({})"]
    brackets = sheet.recipe.random("unit row").choice(choices)
    row: list[Cell | None] = [Cell()]
    row += [Cell(brackets.format(c.unit_text) if c.unit_text else "") for c in sheet.columns]
    return row + [Cell() for _ in sheet.others]


def rows_unit_row(sheet: Sheet, page: Page) -> None:
    page.grids.append([head_row(sheet, unit=""), unit_cells(sheet), *body_rows(sheet)])
    page.expect_sheet(sheet)


def rows_symbol_row(sheet: Sheet, page: Page) -> None:
    symbols: list[Cell | None] = [Cell(), *[Cell(c.symbol) for c in sheet.columns]]
    symbols += [Cell() for _ in sheet.others]
    page.grids.append([head_row(sheet, unit=""), symbols, unit_cells(sheet), *body_rows(sheet)])
    page.expect_sheet(sheet)


def _generic(sheet: Sheet, key: str) -> str:
    kind = next(k for k in ("speed", "torque", "current") if k in key)
    return sheet.word(kind)


def _grouped(sheet: Sheet) -> tuple[list[str], list[str]]:
    """Group and sub-heading of every column; columns of one group are brought together."""
    order = ["", "no_load", "rated", "stall", "constants"]
    group = {
        c.key: c.quantity.group
        if any(w in c.key for w in ("speed", "torque", "current")) or
        c.quantity.group == "constants" else ""
        for c in sheet.columns
    }  # fmt: skip
    sheet.columns.sort(key=lambda c: order.index(group[c.key]))
    groups = [group[c.key] for c in sheet.columns]
    subs = [
        _generic(sheet, c.key) if g not in ("", "constants") else c.label
        for c, g in zip(sheet.columns, groups, strict=True)
    ]
    words = {"stall": "standstill"} if sheet.kind == "servo" else {}
    return [sheet.word(words.get(g, g)) if g else "" for g in groups], subs


def rows_grouped(sheet: Sheet, page: Page) -> None:
    recipe = sheet.recipe
    names, subs = _grouped(sheet)
    centred = recipe.random("anchor").random() < 0.3 and not can_span(recipe)
    top = [Cell(), *group_row(names, can_span(recipe), centred)]
    top += [Cell() for _ in sheet.others]
    second: list[Cell | None] = [Cell(sheet.part_label)]
    for column, sub in zip(sheet.columns, subs, strict=True):
        column.group_label = sub
        second.append(Cell(f"{sub} [{column.unit_text}]" if column.unit_text else sub))
    second += [Cell(label) for label, _ in sheet.others]
    grid: Grid = [top, second]
    if recipe.random("unit row grouped").random() < 0.5:
        grid[1] = [Cell(sheet.part_label), *[Cell(s) for s in subs]]
        grid[1] += [Cell(label) for label, _ in sheet.others]
        grid.append(unit_cells(sheet))
    page.grids.append([*grid, *body_rows(sheet)])
    page.expect_sheet(sheet)
    for column in sheet.columns:
        page.labels[column.key].append(column.group_label)
        if centred and column.group_label != column.label:  # where a group begins is open
            for part in sheet.parts:
                if column.key in page.figures[part]:
                    page.figures[part][column.key].doubtful = True


def rows_points(sheet: Sheet, page: Page) -> None:
    """No load, maximum efficiency, stall: the middle point is no rated point."""
    sheet.columns = [c for c in sheet.columns if c.quantity.group != "rated" or
                     c.key == "nominal_voltage"]  # fmt: skip
    names, subs = _grouped(sheet)
    recipe = sheet.recipe
    middle: list[tuple[str, str, list[str]]] = []
    for kind, key in (("speed", "nominal_speed"), ("torque", "nominal_torque")):
        quantity = SHEETS[sheet.kind][key]
        values = [t[key] * (1.06 if kind == "speed" else 0.7) for t in sheet.truths]
        unit = choose_unit(recipe, quantity, values, recipe.system)
        texts = [print_number(recipe, f"middle {key}", i, unit, v) for i, v in enumerate(values)]
        middle.append((sheet.word(kind), unit.spellings[0], [t.text for t in texts]))
    at = next((i for i, c in enumerate(sheet.columns) if c.quantity.group == "stall"), len(names))
    names[at:at] = [sheet.word("max_efficiency")] * 2
    heads = [f"{s} [{c.unit_text}]" if c.unit_text else s
             for c, s in zip(sheet.columns, subs, strict=True)]  # fmt: skip
    heads[at:at] = [f"{word} [{unit}]" for word, unit, _ in middle]
    top: list[Cell | None] = [Cell(), *group_row(names, can_span(recipe), False)]
    grid: Grid = [top, [Cell(sheet.part_label), *[Cell(h) for h in heads]]]
    sheet.others.clear()
    for place, row in enumerate(body_rows(sheet)):
        row[at + 1 : at + 1] = [Cell(texts[place]) for _, _, texts in middle]
        grid.append(row)
    page.grids.append(grid)
    page.expect_sheet(sheet)
    page.other_numbers = True
    for column, sub in zip(sheet.columns, subs, strict=True):
        page.labels[column.key].append(sub)


def rows_repeated(sheet: Sheet, page: Page) -> None:
    body, head = body_rows(sheet), head_row(sheet)
    step = sheet.recipe.random("step").choice([2, 3, 4])
    grid: Grid = []
    for place, row in enumerate(body):
        if place % step == 0:
            grid.append([Cell(c.text) if c else c for c in head])
        grid.append(row)
    page.grids.append(grid)
    page.expect_sheet(sheet)


def rows_split(sheet: Sheet, page: Page) -> None:
    """The columns go on in a second block that repeats the model column, rows in other order."""
    cut = max(2, len(sheet.columns) // 2)
    head, body = head_row(sheet), body_rows(sheet)
    width = len(head)
    first: Grid = [row[: cut + 1] for row in [head, *body]]
    order = list(body)
    sheet.recipe.random("order").shuffle(order)
    second: Grid = [[row[0], *row[cut + 1 : width]] for row in [head, *order]]
    second = [[Cell(c.text) if c else c for c in row] for row in second]
    page.grids += [first, second]
    page.expect_sheet(sheet)


def rows_two_voltages(sheet: Sheet, page: Page) -> None:
    """The rated point once for each mains voltage."""
    recipe = sheet.recipe
    rated = [c for c in sheet.columns if c.key in
             ("nominal_speed", "nominal_torque", "nominal_current", "rated_power")]  # fmt: skip
    common = [c for c in sheet.columns if c not in rated]
    sheet.columns = common + rated
    low = []
    for column in rated:
        scale = {"nominal_speed": 0.6, "rated_power": 0.63}.get(column.key, 1.04)
        cells: list[Printed | None] = [
            print_number(recipe, column.key, i, column.unit, t[column.key] * scale)
            for i, t in enumerate(sheet.truths)
        ]
        low.append(replace(column, cells=cells))
    top: list[Cell | None] = [Cell() for _ in range(len(common) + 1)]
    names = [VOLTAGES[0]] * len(low) + [VOLTAGES[1]] * len(rated)
    top += group_row(names, can_span(recipe), False)
    sheet.others.clear()
    head = head_row(sheet)
    head += [Cell(c.text) if c else c for c in head[len(common) + 1 :]]
    body = body_rows(sheet, columns=common + low + rated)
    page.grids.append([top, head, *body])
    page.expect_sheet(sheet)
    for part_place, part in enumerate(sheet.parts):
        for first, second in zip(low, rated, strict=True):
            a, b = first.cells[part_place], second.cells[part_place]
            page.figures[part].pop(second.key, None)
            if a and b:
                values = page.conditioned.setdefault(part, {})
                values[second.key] = [a.value, b.value]
            elif a or b:
                page.allowed.add(second.key)


def rows_ditto(sheet: Sheet, page: Page) -> None:
    """A sign instead of a repeated figure, where the figure is the same as above."""
    rng = sheet.recipe.random("ditto")
    sign = rng.choice(["″", '"', "→", sheet.word("ditto")])
    body = body_rows(sheet)
    for at, column in enumerate(sheet.columns, start=1):
        if column.quantity.shared and rng.random() < 0.8:
            for row in body[1:]:
                row[at] = Cell(sign)
    page.grids.append([head_row(sheet), *body])
    page.expect_sheet(sheet)


def rows_unit_in_cell(sheet: Sheet, page: Page) -> None:
    page.grids.append([head_row(sheet, unit=""), *body_rows(sheet, with_unit=True)])
    page.expect_sheet(sheet)


def second_units(sheet: Sheet) -> list[tuple[Column, Column]]:
    """The columns that can be given in a second system as well."""
    pairs = []
    for column in sheet.columns:
        values = [truth[column.key] for truth in sheet.truths]
        other = "metric" if column.unit.system != "metric" else "imperial"
        units = [x for x in column.quantity.units if x.system == other and not x.says]
        if not units or column.unit.says or any(c is None for c in column.cells):
            continue
        unit = choose_unit(
            sheet.recipe, replace(column.quantity, units=tuple(units)), values, other
        )
        cells: list[Printed | None] = [
            print_number(sheet.recipe, column.key, i, unit, v) for i, v in enumerate(values)
        ]
        second = replace(column, unit=unit, unit_text=unit.spellings[0], cells=cells)
        pairs.append((column, second))
    return pairs


def give_dual(sheet: Sheet) -> None:
    brackets = sheet.recipe.random("dual").choice(["({})", "({})", "{{{}}}", "[{}]"])
    for column, second in second_units(sheet):
        column.unit_text = f"{column.unit_text} {brackets.format(second.unit_text)}"
        for place, (a, b) in enumerate(zip(column.cells, second.cells, strict=True)):
            if a and b and a.plain and b.plain:
                text = f"{a.text} {brackets.format(b.text)}"
                column.cells[place] = replace(a, text=text)
            elif a and b:
                column.cells[place] = replace(a, doubtful=True)


def rows_dual(sheet: Sheet, page: Page) -> None:
    give_dual(sheet)
    page.grids.append([head_row(sheet, unit=""), unit_cells(sheet), *body_rows(sheet)])
    page.expect_sheet(sheet)


def rows_two_systems(sheet: Sheet, page: Page) -> None:
    """The same quantity in two neighbouring columns, each with its unit."""
    second = {a.key: b for a, b in second_units(sheet)}
    columns = []
    for column in sheet.columns:
        columns.append(column)
        if column.key in second:
            columns.append(second[column.key])
    sheet.columns = columns
    page.grids.append([head_row(sheet), *body_rows(sheet)])
    page.expect_sheet(sheet)


def rows_two_sheets(sheet: Sheet, page: Page) -> None:
    """A table of small DC motors and a table of servo motors in one file."""
    rows(sheet, page)
    kind = "servo" if sheet.kind != "servo" else "brushed"
    pool = [k for k in SHEETS[kind] if k not in ANCHORS[kind]]
    keys = (*ANCHORS[kind], *sheet.recipe.random("second").sample(pool, 6))
    other = build_sheet(sheet.recipe, kind, keys)
    other.parts = [f"{part}-2" if part in sheet.parts else part for part in other.parts]
    page.grids.append([head_row(other), *body_rows(other)])
    page.expect_sheet(other)
