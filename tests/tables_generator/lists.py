"""Lists of pairs, records and stored numbers."""

from __future__ import annotations

from decimal import Decimal

from .cells import heading, value_cell
from .page import Cell, Grid, Page
from .rows import head_row
from .sheet import Sheet


def flat_list(sheet: Sheet, page: Page) -> None:
    """Objects from heading to text or number."""
    bare = sheet.recipe.random("stored").random() < 0.5
    for place, part in enumerate(sheet.parts):
        record: dict[str, object] = {sheet.part_label: part}
        for column in sheet.columns:
            printed = column.cells[place]
            if printed is None:
                continue
            stored = bare and printed.plain and printed.text[-1].isdigit()
            if stored:
                page.stored.add(printed.text)
            record[heading(sheet, column)] = _as_number(printed.number) if stored else printed.text
        record |= {label: texts[place] for label, texts in sheet.others}
        page.records.append(record)
    page.expect_sheet(sheet)


def _as_number(number: Decimal) -> int | float:
    return int(number) if number == number.to_integral_value() else float(number)


def number_formats(sheet: Sheet, page: Page) -> None:
    """A workbook that stores numbers; their formats show units and per cent."""
    rng = sheet.recipe.random("formats")
    style = rng.choice(["unit in format", "unit in heading"])
    head = head_row(sheet, unit="" if style == "unit in format" else None)
    grid: Grid = [head]
    for place, part in enumerate(sheet.parts):
        row: list[Cell | None] = [Cell(part)]
        for column in sheet.columns:
            printed = column.cells[place]
            if printed is None or not printed.plain or "²" in column.unit_text:
                row.append(value_cell(sheet, column, place, style == "unit in format"))
                continue
            page.stored.add(printed.text)
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


def key_value(sheet: Sheet, page: Page) -> None:
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
