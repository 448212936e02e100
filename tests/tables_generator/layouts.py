"""The layouts: a sheet of motors → a page. Shapes as in the trade's catalogues (no source)."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from decimal import Decimal

from .page import Cell, Grid, Page
from .quantities import ANCHORS, SHEETS
from .recipe import Recipe
from .sheet import MISSING, Column, Printed, Sheet, build_sheet, choose_unit, print_number
from .words import CAPTIONS, OTHERS

CURRENT_KEYS = ("nominal_current", "peak_current", "continuous_stall_current")
VOLTAGES = ("230 VAC", "400 VAC")


def build_page(recipe: Recipe) -> Page:
    """The page of a recipe, with its expectation."""
    sheet = build_sheet(recipe)
    page = Page(recipe)
    _state_conventions(sheet, page)
    _lose_cells(sheet)
    _add_distractors(sheet)
    _BUILDERS[recipe.layout](sheet, page)
    page.settle(sheet, stored=recipe.layout == "number formats")
    return page


def _state_conventions(sheet: Sheet, page: Page) -> None:
    recipe = sheet.recipe
    rng = recipe.random("conventions")
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


def _add_distractors(sheet: Sheet) -> None:
    if sheet.recipe.has("distractor"):
        rng = sheet.recipe.random("distractor")
        names = rng.choice(OTHERS)
        unit, low, high = {"Insulation resistance": (" [MΩ]", 50, 500)}.get(
            names["en"], ("", 5, 13)
        )
        label = names[sheet.recipe.language] + unit
        sheet.others.append((label, [str(rng.randint(low, high)) for _ in sheet.parts]))


# ---- headings and cells


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


def _group_row(names: list[str], spanned: bool, centred: bool) -> list[Cell | None]:
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


def _can_span(recipe: Recipe) -> bool:
    return recipe.format in ("html", "xlsx", "ods")


# ---- one motor a row


def _body(sheet: Sheet, with_unit: bool = False, columns: list[Column] | None = None) -> Grid:
    columns = sheet.columns if columns is None else columns
    rows: Grid = []
    for place, part in enumerate(sheet.parts):
        row: list[Cell | None] = [Cell(part)]
        row += [value_cell(sheet, c, place, with_unit) for c in columns]
        row += [Cell(texts[place]) for _, texts in sheet.others]
        rows.append(row)
    return rows


def _head(sheet: Sheet, style: str = "", unit: str | None = None) -> list[Cell | None]:
    row: list[Cell | None] = [Cell(sheet.part_label)]
    row += [Cell(heading(sheet, c, style, unit)) for c in sheet.columns]
    return row + [Cell(label) for label, _ in sheet.others]


def _rows(sheet: Sheet, page: Page) -> None:
    page.grids.append([_head(sheet), *_body(sheet)])
    page.expect_sheet(sheet)


def _rows_symbols(sheet: Sheet, page: Page) -> None:
    page.grids.append([_head(sheet, "symbol"), *_body(sheet)])
    legend = [f"{c.symbol}: {c.label}" for c in sheet.columns if c.symbol]
    if sheet.recipe.random("legend").random() < 0.4:
        page.after.append("; ".join(legend))
    page.expect_sheet(sheet)


def _unit_row(sheet: Sheet) -> list[Cell | None]:
    dual = sheet.recipe.layout.endswith("dual units")
    choices = ["{}"] if dual else ["{}", "{}", "[{}]", "({})"]
    brackets = sheet.recipe.random("unit row").choice(choices)
    row: list[Cell | None] = [Cell()]
    row += [Cell(brackets.format(c.unit_text) if c.unit_text else "") for c in sheet.columns]
    return row + [Cell() for _ in sheet.others]


def _rows_unit_row(sheet: Sheet, page: Page) -> None:
    page.grids.append([_head(sheet, unit=""), _unit_row(sheet), *_body(sheet)])
    page.expect_sheet(sheet)


def _rows_symbol_row(sheet: Sheet, page: Page) -> None:
    symbols: list[Cell | None] = [Cell(), *[Cell(c.symbol) for c in sheet.columns]]
    symbols += [Cell() for _ in sheet.others]
    page.grids.append([_head(sheet, unit=""), symbols, _unit_row(sheet), *_body(sheet)])
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


def _rows_grouped(sheet: Sheet, page: Page) -> None:
    recipe = sheet.recipe
    names, subs = _grouped(sheet)
    centred = recipe.random("anchor").random() < 0.3 and not _can_span(recipe)
    top = [Cell(), *_group_row(names, _can_span(recipe), centred)]
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
        grid.append(_unit_row(sheet))
    page.grids.append([*grid, *_body(sheet)])
    page.expect_sheet(sheet)
    for column in sheet.columns:
        page.labels[column.key].append(column.group_label)


def _rows_points(sheet: Sheet, page: Page) -> None:
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
    top: list[Cell | None] = [Cell(), *_group_row(names, _can_span(recipe), False)]
    grid: Grid = [top, [Cell(sheet.part_label), *[Cell(h) for h in heads]]]
    sheet.others.clear()
    for place, row in enumerate(_body(sheet)):
        row[at + 1 : at + 1] = [Cell(texts[place]) for _, _, texts in middle]
        grid.append(row)
    page.grids.append(grid)
    page.expect_sheet(sheet)
    page.other_numbers = True
    for column, sub in zip(sheet.columns, subs, strict=True):
        page.labels[column.key].append(sub)


def _rows_repeated(sheet: Sheet, page: Page) -> None:
    body, head = _body(sheet), _head(sheet)
    step = sheet.recipe.random("step").choice([2, 3, 4])
    grid: Grid = []
    for place, row in enumerate(body):
        if place % step == 0:
            grid.append([Cell(c.text) if c else c for c in head])
        grid.append(row)
    page.grids.append(grid)
    page.expect_sheet(sheet)


def _rows_split(sheet: Sheet, page: Page) -> None:
    """The columns go on in a second block that repeats the model column, rows in other order."""
    cut = max(2, len(sheet.columns) // 2)
    head, body = _head(sheet), _body(sheet)
    width = len(head)
    first: Grid = [row[: cut + 1] for row in [head, *body]]
    order = list(body)
    sheet.recipe.random("order").shuffle(order)
    second: Grid = [[row[0], *row[cut + 1 : width]] for row in [head, *order]]
    second = [[Cell(c.text) if c else c for c in row] for row in second]
    page.grids += [first, second]
    page.expect_sheet(sheet)


def _rows_two_voltages(sheet: Sheet, page: Page) -> None:
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
    top += _group_row(names, _can_span(recipe), False)
    sheet.others.clear()
    head = _head(sheet)
    head += [Cell(c.text) if c else c for c in head[len(common) + 1 :]]
    body = _body(sheet, columns=common + low + rated)
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


def _rows_ditto(sheet: Sheet, page: Page) -> None:
    """A sign instead of a repeated figure, where the figure is the same as above."""
    rng = sheet.recipe.random("ditto")
    sign = rng.choice(["″", '"', "→", sheet.word("ditto")])
    body = _body(sheet)
    for at, column in enumerate(sheet.columns, start=1):
        if column.quantity.shared and rng.random() < 0.8:
            for row in body[1:]:
                row[at] = Cell(sign)
    page.grids.append([_head(sheet), *body])
    page.expect_sheet(sheet)


def _rows_unit_in_cell(sheet: Sheet, page: Page) -> None:
    page.grids.append([_head(sheet, unit=""), *_body(sheet, with_unit=True)])
    page.expect_sheet(sheet)


def _second_units(sheet: Sheet) -> list[tuple[Column, Column]]:
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


def _give_dual(sheet: Sheet) -> None:
    brackets = sheet.recipe.random("dual").choice(["({})", "({})", "{{{}}}", "[{}]"])
    for column, second in _second_units(sheet):
        column.unit_text = f"{column.unit_text} {brackets.format(second.unit_text)}"
        for place, (a, b) in enumerate(zip(column.cells, second.cells, strict=True)):
            if a and b and a.plain and b.plain:
                text = f"{a.text} {brackets.format(b.text)}"
                column.cells[place] = replace(a, text=text)
            elif a and b:
                column.cells[place] = replace(a, doubtful=True)


def _rows_dual(sheet: Sheet, page: Page) -> None:
    _give_dual(sheet)
    page.grids.append([_head(sheet, unit=""), _unit_row(sheet), *_body(sheet)])
    page.expect_sheet(sheet)


def _rows_two_systems(sheet: Sheet, page: Page) -> None:
    """The same quantity in two neighbouring columns, each with its unit."""
    second = {a.key: b for a, b in _second_units(sheet)}
    columns = []
    for column in sheet.columns:
        columns.append(column)
        if column.key in second:
            columns.append(second[column.key])
    sheet.columns = columns
    page.grids.append([_head(sheet), *_body(sheet)])
    page.expect_sheet(sheet)


def _rows_two_sheets(sheet: Sheet, page: Page) -> None:
    """A table of small DC motors and a table of servo motors in one file."""
    _rows(sheet, page)
    kind = "servo" if sheet.kind != "servo" else "brushed"
    pool = [k for k in SHEETS[kind] if k not in ANCHORS[kind]]
    keys = (*ANCHORS[kind], *sheet.recipe.random("second").sample(pool, 6))
    other = build_sheet(sheet.recipe, kind, keys)
    other.parts = [f"{part}-2" if part in sheet.parts else part for part in other.parts]
    page.grids.append([_head(other), *_body(other)])
    page.expect_sheet(other)


def _flat_list(sheet: Sheet, page: Page) -> None:
    """Objects from heading to text or number."""
    bare = sheet.recipe.random("stored").random() < 0.5
    for place, part in enumerate(sheet.parts):
        record: dict[str, object] = {sheet.part_label: part}
        for column in sheet.columns:
            printed = column.cells[place]
            if printed is None:
                continue
            stored = bare and printed.plain and printed.text[-1].isdigit()
            record[heading(sheet, column)] = _as_number(printed.number) if stored else printed.text
        record |= {label: texts[place] for label, texts in sheet.others}
        page.records.append(record)
    page.expect_sheet(sheet)


def _as_number(number: Decimal) -> int | float:
    return int(number) if number == number.to_integral_value() else float(number)


def _number_formats(sheet: Sheet, page: Page) -> None:
    """A workbook that stores numbers; their formats show units and per cent."""
    rng = sheet.recipe.random("formats")
    style = rng.choice(["unit in format", "unit in heading"])
    head = _head(sheet, unit="" if style == "unit in format" else None)
    grid: Grid = [head]
    for place, part in enumerate(sheet.parts):
        row: list[Cell | None] = [Cell(part)]
        for column in sheet.columns:
            printed = column.cells[place]
            if printed is None or not printed.plain or "²" in column.unit_text:
                row.append(value_cell(sheet, column, place, style == "unit in format"))
                continue
            decimals = max(0, -int(printed.number.as_tuple().exponent))
            shape = "0." + "0" * decimals if decimals else "0"
            stored = float(printed.number)
            if column.unit.name == "%":
                shape, stored = shape + "%", float(printed.number / 100)
            elif style == "unit in format" and column.unit_text:
                shape += f'" {column.unit_text}"'
            row.append(Cell("", stored=stored, number_format=shape))
        row += [Cell(texts[place]) for _, texts in sheet.others]
        grid.append(row)
    page.grids.append(grid)
    page.expect_sheet(sheet)


# ---- one motor a column


def _columns(sheet: Sheet, page: Page, *, style: str, captions: bool, unit_column: bool,
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
            if _can_span(recipe):
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


def _columns_shared(sheet: Sheet, page: Page) -> None:
    """A frame figure printed once: over all windings where cells can span, else in the first."""
    if len(sheet.parts) < 2 or any(
        c.quantity.shared and any(x is None for x in c.cells) for c in sheet.columns
    ):
        _columns(sheet, page, style="", captions=True, unit_column=True, symbol_column=False)
        return
    _columns(sheet, page, style="", captions=True, unit_column=True, symbol_column=False)
    shared = {c.label for c in sheet.columns if c.quantity.shared}
    keys = {c.key for c in sheet.columns if c.quantity.shared}
    count = len(sheet.parts)
    for row in page.grids[0]:
        label = row[0].text if row[0] else ""
        if not any(label.endswith(x) for x in shared):
            continue
        text = row[2].text if row[2] else ""
        if _can_span(sheet.recipe):
            row[2:] = [Cell(text, 1, count), *[None] * (count - 1)]
        else:
            row[3:] = [Cell() for _ in range(count - 1)]
    if not _can_span(sheet.recipe):
        for part in sheet.parts[1:]:
            for key in keys & set(page.figures[part]):
                page.figures[part][key].optional = True


def _columns_two_temperatures(sheet: Sheet, page: Page) -> None:
    """The same labels in two blocks, for a cold and for a hot winding."""
    recipe = sheet.recipe
    twice = [c for c in sheet.columns if c.key in ("terminal_resistance", "nominal_current",
             "nominal_torque", "torque_constant", "back_emf_constant")]  # fmt: skip
    if not twice:
        _columns(sheet, page, style="", captions=False, unit_column=True, symbol_column=False)
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


def _columns_dual(sheet: Sheet, page: Page) -> None:
    _give_dual(sheet)
    _columns(sheet, page, style="", captions=False, unit_column=True, symbol_column=False)


def _key_value(sheet: Sheet, page: Page) -> None:
    """A paragraph a motor: 'Rated voltage: 24 V; No-load speed: 4000 rpm'."""
    rng = sheet.recipe.random("key value")
    between = rng.choice(["; ", "\n", " | "])
    glue = rng.choice([" ", " ", ""])
    colon = rng.choice([": ", ": ", " : ", " = "])
    for place, part in enumerate(sheet.parts):
        pairs = [f"{sheet.part_label}{colon}{part}"]
        for column in sheet.columns:
            printed = column.cells[place]
            if printed is not None:
                unit = column.unit_text
                space = " " if glue or unit[:1] in "1×kg" else ""
                pairs.append(f"{column.label}{colon}{printed.text}{space}{unit}".rstrip())
        page.paragraphs.append(between.join(pairs))
    page.expect_sheet(sheet)


def _plain_columns(**choice: bool) -> Callable[[Sheet, Page], None]:
    options = {"captions": False, "unit_column": True, "symbol_column": False} | choice
    style = "symbol" if options.pop("symbols", False) else ""
    return lambda sheet, page: _columns(sheet, page, style=style, **options)


_BUILDERS: dict[str, Callable[[Sheet, Page], None]] = {
    "rows": _rows,
    "rows, unit row": _rows_unit_row,
    "rows, symbol and unit rows": _rows_symbol_row,
    "rows, grouped": _rows_grouped,
    "rows, operating points": _rows_points,
    "rows, repeated heading": _rows_repeated,
    "rows, split blocks": _rows_split,
    "rows, two voltages": _rows_two_voltages,
    "rows, ditto": _rows_ditto,
    "rows, unit in cell": _rows_unit_in_cell,
    "rows, symbols": _rows_symbols,
    "rows, dual units": _rows_dual,
    "rows, two unit systems": _rows_two_systems,
    "rows, two sheets": _rows_two_sheets,
    "columns": _plain_columns(symbol_column=True),
    "columns, captions": _plain_columns(captions=True),
    "columns, unit in label": _plain_columns(unit_column=False),
    "columns, unit in cell": _plain_columns(unit_column=False, with_unit=True),
    "columns, symbols": _plain_columns(unit_column=False, symbols=True),
    "columns, dual units": _columns_dual,
    "columns, shared cells": _columns_shared,
    "columns, two temperatures": _columns_two_temperatures,
    "key-value text": _key_value,
    "flat list": _flat_list,
    "number formats": _number_formats,
}
