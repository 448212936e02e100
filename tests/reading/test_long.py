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
