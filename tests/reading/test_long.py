"""A table that goes on in chunks: decided on its head, read to its end."""

from motorfolio.catalog.reading import ReadOptions, read
from motorfolio.catalog.tables.grid import Grid, TableFile

HEAD = ["Part number", "Nominal voltage [V]", "Torque constant [mNm/A]", "Remark"]


def row(i: int) -> list[str]:
    return [f"LT-{i}", "24", f"{20 + i / 100:.2f}", "n" if i % 2 else ""]


def test_chunks_are_read_with_the_heads_layout_and_lazily():
    taken = []

    def rest():
        for start in range(50, 170, 40):
            taken.append(start)
            rows = [row(i) for i in range(start, start + 40)]
            if start == 90:
                rows[3] = HEAD  # the heading again
                rows[5] = ["LT-95", "0", "x", ""]
            yield list(range(start + 2, start + 42)), rows

    grid = Grid([HEAD, *(row(i) for i in range(50))], list(range(1, 52)), [1, 2, 3, 4])
    grid.continuation = rest()
    reading = read(TableFile("long.csv", "0" * 64, "csv", [grid]), ReadOptions())
    assert not taken
    batches = list(reading.batches)
    parts = [p for b in batches for p in b.part_number]
    assert len(parts) == 169
    assert parts[:2] == ["LT-0", "LT-1"]
    assert parts[-1] == "LT-169"
    last = batches[-1].figures["torque_constant"]
    assert (int(last.row[-1]), int(last.column[-1]), last.text[-1]) == (171, 3, "21.69")
    assert [(u.heading, u.text) for u in reading.unread] == [
        ("Remark", "n"),
        ("Nominal voltage [V]", "0"),
        ("Torque constant [mNm/A]", "x"),
    ]


def chunked(rows: list[list[str]], head: int, sheet: str | None = None) -> Grid:
    """A grid of the first rows, the others in chunks of 30 behind it."""
    numbers = list(range(1, len(rows) + 1))
    grid = Grid(rows[:head], numbers[:head], list(range(1, len(rows[0]) + 1)), sheet=sheet)
    grid.continuation = (
        (numbers[i : i + 30], rows[i : i + 30]) for i in range(head, len(rows), 30)
    )
    return grid


def parts_of(*grids: Grid) -> tuple[dict[str, float], list[tuple[int | None, int | None, str]]]:
    """Torque constants by part number, and (row, column, text) of what is listed."""
    reading = read(TableFile("long.csv", "0" * 64, "csv", list(grids)), ReadOptions())
    found: dict[str, float] = {}
    for batch in reading.batches:
        column = batch.figures.get("torque_constant")
        for i, part in enumerate(batch.part_number):
            found[part] = float(column.value[i]) if column is not None else float("nan")
    return found, [(u.row, u.column, u.text) for u in reading.unread]


def test_cells_that_no_heading_covers_are_listed_at_the_end_of_a_long_table_too():
    """A surplus cell, a cell in a column without a heading, one under a heading not read."""
    head = [*HEAD[:3], "", "Frobnication"]
    rows = [head, *([*row(i)[:3], "", ""] for i in range(200))]
    rows[150].append("17.5")
    rows[160][3] = "3.25"
    rows[170][4] = "9"
    rows[171][4] = "10"
    found, listed = parts_of(chunked(rows, 60))
    assert len(found) == 200
    assert sorted(listed) == [(151, 6, "17.5"), (161, 4, "3.25"), (171, 5, "9")]


def test_rows_under_other_headings_far_down_are_never_read_under_the_first():
    other = ["Part number", "Torque constant [mNm/A]", "Nominal voltage [V]", "Mass [g]"]
    rows = [HEAD, *map(row, range(150)), other]
    rows += [[f"OT-{i}", "31.5", "12", "90"] for i in range(40)] + [HEAD, row(150), row(151)]
    found, listed = parts_of(chunked(rows, 60))
    assert list(found) == [f"LT-{i}" for i in range(152)]
    assert [text for _, _, text in listed if text.startswith("OT-")] == [
        f"OT-{i} 31.5 12 90" for i in range(40)
    ]


def test_a_second_table_below_row_eighty_is_a_table_of_its_own():
    other = ["Part number", "Torque constant [mNm/A]", "Nominal voltage [V]", "Mass [g]"]
    rows = [
        HEAD,
        *map(row, range(150)),
        other,
        *([f"OT-{i}", "31.5", "12", "90"] for i in range(5)),
    ]
    found, _ = parts_of(Grid(rows, list(range(1, len(rows) + 1)), [1, 2, 3, 4]))
    assert len(found) == 155
    assert found["OT-4"] == 0.0315
    # The same where the head of a long table has both, and its rest only the second.
    found, _ = parts_of(chunked(rows, 153))
    assert len(found) == 155
    assert found["OT-4"] == 0.0315


def test_every_long_sheet_goes_on_with_its_own_rows():
    second = [[f"S{r[0]}", *r[1:]] for r in map(row, range(90))]
    found, _ = parts_of(
        chunked(
            [["Notes", "", "", ""], *([f"remark {i}", "", "", ""] for i in range(90))], 50, "A"
        ),
        chunked([HEAD, *map(row, range(90))], 50, "B"),
        chunked([HEAD, *second], 40, "C"),
    )
    assert list(found) == [f"LT-{i}" for i in range(90)] + [f"SLT-{i}" for i in range(90)]


def test_a_motor_in_two_long_sheets_is_one():
    more = [["Part number", "Terminal resistance [Ohm]", "Mass [g]"]]
    more += [[f"LT-{i}", "1.5", "90"] for i in range(90)]
    found, _ = parts_of(chunked([HEAD, *map(row, range(90))], 50, "A"), chunked(more, 50, "B"))
    assert list(found) == [f"LT-{i}" for i in range(90)]
