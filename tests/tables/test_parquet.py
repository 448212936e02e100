"""Parquet files that other programs write, damaged ones, and what is said without the extra."""

import datetime
import decimal
import random
import sys
import time
from pathlib import Path
from typing import Any

import pytest

from motorfolio.catalog.tables import TableError, read_tables
from motorfolio.catalog.tables.grid import Stored

from .files import check

pa: Any = pytest.importorskip("pyarrow", reason="Parquet needs the extra 'parquet' (pyarrow)")
pq: Any = pytest.importorskip("pyarrow.parquet")


@pytest.fixture
def file(tmp_path: Path) -> Path:
    return tmp_path / "motors.parquet"


def write(path: Path, columns: dict[str, Any], **options: Any) -> None:
    pq.write_table(pa.table(columns), path, **options)


def test_cells_of_every_plain_kind(file: Path) -> None:
    write(file, {
        "part": ["A", "B"],
        "double": [0.1, float("nan")],
        "single": pa.array([0.1, None], pa.float32()),
        "whole": pa.array([12, -3], pa.int64()),
        "decimal": [decimal.Decimal("30.20"), None],
        "kind": pa.array(["block", "block"]).dictionary_encode(),
        "brake": [True, False],
        "day": [datetime.date(2024, 1, 2), None],
        "nothing": pa.nulls(2),
        "huge": [1e300, float("inf")],
    })  # fmt: skip
    (grid,) = read_tables(file).grids
    check(grid)
    assert grid.rows == [
        ["part", "double", "single", "whole", "decimal", "kind", "brake", "day", "nothing", "huge"],
        ["A", "0.1", "0.1", "12", "30.20", "block", "true", "date 2024-01-02", "", "1E+300"],
        ["B", "", "", "-3", "", "block", "false", "", "", "inf"],
    ]
    assert [isinstance(text, Stored) for text in grid.rows[1][:6]] == [
        False, True, True, True, True, False
    ]  # fmt: skip


def test_columns_that_are_no_table_are_named(file: Path) -> None:
    write(file, {"part": ["A"], "points": [[1, 2]], "raw": [b"x"], "at": [{"a": 1}]})
    (grid,) = read_tables(file).grids
    assert grid.rows == [["part"], ["A"]]
    (remark,) = grid.remarks
    assert all(name in remark for name in ("“points”", "“raw”", "“at”"))


def test_a_long_table_comes_in_chunks(file: Path) -> None:
    n = 30_000
    write(file, {"part": [f"M{i}" for i in range(n)], "mass [kg]": [i / 10 for i in range(n)]})
    (grid,) = read_tables(file).grids
    assert grid.continuation is not None
    rows, numbers = list(grid.rows), list(grid.row_numbers)
    for more_numbers, more in grid.continuation:
        numbers += more_numbers
        rows += more
    assert numbers == list(range(1, n + 2))
    assert rows[-1] == [f"M{n - 1}", "2999.9"]


def test_what_was_written_beside_a_number_stands_while_it_says_the_same(file: Path) -> None:
    """A number that a person changed is not undone by the text that it had before."""
    write(file, {
        "part_number": ["A", "B", "C", "D"],
        "mass [kg]": [30.2, 19.0, 45.0, 0.5],
        "mass [kg], as written": ["30.20", "10…28", "≤ 45", "0.40"],
    })  # fmt: skip
    (grid,) = read_tables(file).grids
    assert [row[1] for row in grid.rows] == ["mass [kg]", "30.20", "10…28", "≤ 45", "0.5"]
    assert "numbers that were changed" in grid.remarks[0]
    assert "“mass [kg]”" in grid.remarks[0]


@pytest.mark.parametrize("packing", ["snappy", "zstd", "gzip", "none"])
def test_any_packing(file: Path, packing: str) -> None:
    write(file, {"part": ["A"], "mass [kg]": [0.5]}, compression=packing)
    assert read_tables(file).grids[0].rows[1] == ["A", "0.5"]


def refused(path: Path) -> str:
    start = time.process_time()
    with pytest.raises(TableError) as caught:
        read_tables(path)
    sentence = str(caught.value)
    assert sentence.startswith(str(path))
    assert sentence.isprintable()
    assert time.process_time() - start < 5
    return sentence


@pytest.mark.parametrize("kept", [4, 20, 0.5, 0.95])
def test_a_file_cut_short(file: Path, kept: float) -> None:
    write(file, {"part": ["A"] * 100, "mass [kg]": [0.5] * 100})
    whole = file.read_bytes()
    file.write_bytes(whole[: int(kept if kept > 1 else kept * len(whole))])
    assert "damaged" in refused(file)


def test_more_cells_than_such_a_file_can_hold(file: Path) -> None:
    """A run of one value takes a few bytes, however long."""
    write(file, {f"c{i}": pa.nulls(3_000_000, pa.float64()) for i in range(4)}, compression="zstd")
    assert file.stat().st_size < 30_000
    assert "12000000 cells" in refused(file)


def test_an_endless_text(file: Path) -> None:
    write(file, {"part": ["A" * 200_000] * 1000})
    assert "a text of 200000 characters" in refused(file)


def test_an_encrypted_file(file: Path) -> None:
    file.write_bytes(b"PARE" + bytes(200) + b"PARE")
    assert "encrypted" in refused(file)


def test_random_damage_is_an_error_or_a_table(
    file: Path, capfd: pytest.CaptureFixture[str]
) -> None:
    write(file, {"part": [f"A{i}" for i in range(50)], "mass [kg]": [0.5 * i for i in range(50)]})
    whole, draw = file.read_bytes(), random.Random(7)
    sentences = []
    for _ in range(12):
        content = bytearray(whole)
        for _ in range(draw.randrange(1, 12)):
            content[draw.randrange(4, len(content) - 4)] = draw.randrange(256)
        file.write_bytes(content)
        try:
            check(read_tables(file).grids[0])
        except TableError as error:
            sentences.append(str(error))
    assert sentences
    assert all(sentence.isprintable() for sentence in sentences)
    assert capfd.readouterr() == ("", "")


def test_without_the_extra_one_sentence_names_it(
    file: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    write(file, {"part": ["A"]})
    monkeypatch.setitem(sys.modules, "pyarrow", None)
    assert "pip install 'motorfolio[parquet]'" in refused(file)
