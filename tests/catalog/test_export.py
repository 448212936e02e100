"""Exports: read back by import without loss, inert in a spreadsheet."""

import csv
import io
import json
import sys
from pathlib import Path

import pytest

from motorfolio.catalog.exporting import inert
from motorfolio.catalog.exporting.units import ChosenUnit
from motorfolio.schema.units.read import read_unit

from .conftest import TABLE

SERVO = """\
Part number,Rated voltage [V],Continuous stall torque [N·m],Continuous stall current [A rms],\
Peak current [A rms],Torque constant [N·m/A rms],Voltage constant line-to-line [V rms/krpm],\
Resistance line-to-line [Ω],Inductance line-to-line [mH],Pole pairs,Ambient temperature [°C]
WALRUS-1,320,2.20,2.10,8.4,1.05,63.5,7.40,18.9,4,-10…40
"""


@pytest.fixture
def both(run, sheet, tmp_path):
    servo = tmp_path / "walrus.csv"
    servo.write_text(SERVO, encoding="utf-8")
    assert run("import", sheet, servo, "--maker", "Puffinworks")[0] == 0


def motors(run, *arguments):
    return {
        m["part_number"]: m
        for m in json.loads(run("export", "--format", "json", *arguments)[1])["motors"]
    }


def same(got, had, *, intervals=True):
    assert got.keys() == had.keys()
    for part, motor in had.items():
        assert got[part]["figures"].keys() == motor["figures"].keys(), part
        for key, figure in motor["figures"].items():
            other = got[part]["figures"][key]
            if isinstance(figure["value"], str):
                assert other["value"] == figure["value"], (part, key)
                continue
            assert other["unit"] == figure["unit"], (part, key)
            assert other["value"] == pytest.approx(figure["value"], rel=1e-9), (part, key)
            if intervals:
                assert other["low"] == pytest.approx(figure["low"], rel=1e-7), (part, key)
                assert other["high"] == pytest.approx(figure["high"], rel=1e-7), (part, key)
            a, b = (dict(f["convention"] or {}) for f in (other, figure))
            a.pop("basis", None)
            b.pop("basis", None)
            assert a == b, (part, key)
        assert got[part]["model"]["commutation"]["value"] == motor["model"]["commutation"]["value"]


@pytest.mark.parametrize("format_", ["json", "toml", "csv"])
def test_an_export_is_read_back(run, both, tmp_path, format_):
    had = motors(run)
    path = tmp_path / f"export.{format_}"
    assert run("export", "--format", format_, "--output", path)[0] == 0
    status, _, err = run("import", path, "--catalog", tmp_path / "again.sqlite")
    assert status == 0, err
    # a CSV of plain numbers tells values, not the digits that were printed in other units
    same(motors(run, "--catalog", tmp_path / "again.sqlite"), had, intervals=format_ != "csv")


def test_json_holds_the_motors_as_show_gives_them(run, both):
    for part, motor in motors(run).items():
        assert json.loads(run("show", part, "--json")[1]) == motor


def test_csv_is_a_table_of_numbers(run, both):
    status, out, _ = run("export")
    assert status == 0
    rows = list(csv.DictReader(io.StringIO(out)))
    assert [row["part_number"] for row in rows] == ["PUFFIN-A", "PUFFIN-B", "PUFFIN-C", "WALRUS-1"]
    assert (
        float(rows[1]["terminal_resistance [Ω]"] or rows[1]["terminal_resistance [Ω] (lines)"])
        == 3.2
    )


def test_csv_in_chosen_units(run, both, tmp_path):
    units = tmp_path / "units.toml"
    units.write_text('torque_constant = "oz-in/A"\nno_load_speed = "rpm"\n', encoding="utf-8")
    rows = list(csv.DictReader(io.StringIO(run("export", "--units", units)[1])))
    # NIST SP 811 (2008), B.8: ounce-force inch 7.061552 E-03 N·m
    found = next(v for k, v in rows[0].items() if k.startswith("torque_constant [oz-in/A]"))
    assert float(found.split(" ± ")[0]) == pytest.approx(0.025 / 7.061552e-3, rel=1e-6)
    assert float(rows[0]["no_load_speed [rpm]"]) == pytest.approx(4557)


def test_csv_in_a_chosen_convention(run, both, tmp_path):
    """Torque per ampere peak is that per ampere rms over √2 (one sinusoidal phase current)."""
    units = tmp_path / "units.toml"
    units.write_text('torque_constant = "N·m/A peak"\n', encoding="utf-8")
    (row,) = [
        r for r in csv.DictReader(io.StringIO(run("export", "--units", units)[1]))
        if r["part_number"] == "WALRUS-1"
    ]  # fmt: skip
    found = {k: v for k, v in row.items() if k.startswith("torque_constant") and v}
    (heading,) = found
    assert "peak" in heading
    assert float(found[heading].split(" ± ")[0]) == pytest.approx(1.05 / 2**0.5, rel=1e-9)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("=1+1", "'=1+1"), ("@SUM(A1)", "'@SUM(A1)"), ("+cmd|' /C calc'!A0", "'+cmd|' /C calc'!A0"),
        ("-5", "-5"), ("+5.2e-3", "+5.2e-3"), ("-5 A", "'-5 A"), ("\t=1", "'\t=1"), ("a=b", "a=b"),
        ("", ""),
    ],
)  # fmt: skip
def test_formulas_are_inert(text, expected):
    assert inert(text) == expected


def test_a_formula_in_a_part_number_goes_out_inert_and_comes_back(run, tmp_path):
    path = tmp_path / "x.csv"
    path.write_text(TABLE.replace("PUFFIN-A", '"=HYPERLINK(""x"")"'), encoding="utf-8")
    run("import", path)
    _, out, _ = run("export")
    assert "\n'=HYPERLINK" in out or "\n\"'=HYPERLINK" in out
    back = tmp_path / "back.csv"
    back.write_text(out, encoding="utf-8")
    run("import", back, "--catalog", tmp_path / "b.sqlite")
    assert '=HYPERLINK("x")' in motors(run, "--catalog", tmp_path / "b.sqlite")


@pytest.mark.parametrize(
    ("content", "words"),
    [("torque_constant = 5", "torque_constant"), ("wibble = 'm'", "wibble"), ("[[", "TOML"),
     ("mass = 'N·m'", "mass")],
)  # fmt: skip
def test_a_units_file_that_cannot_be_used(run, both, tmp_path, content, words):
    units = tmp_path / "units.toml"
    units.write_text(content, encoding="utf-8")
    status, out, err = run("export", "--units", units)
    assert (status, out) == (2, "")
    assert words in err


def test_a_failed_export_leaves_the_old_file(run, both, tmp_path, monkeypatch):
    path = tmp_path / "out.json"
    path.write_text("old", encoding="utf-8")
    monkeypatch.setattr("motorfolio.catalog.store.load.CHUNK", "no number")
    with pytest.raises(ValueError, match="islice"):
        run("export", "--format", "json", "--output", path)
    assert path.read_text(encoding="utf-8") == "old"
    assert [p.name for p in tmp_path.iterdir() if "out.json" in p.name] == ["out.json"]


SAMPLES = Path(__file__).parents[2] / "sample_entries"


@pytest.mark.parametrize("format_", ["json", "csv"])
def test_the_sample_sheets_are_exported_and_read_back(run, tmp_path, format_):
    """Brushed, block and servo motors of seven sheets in one file: 1,000 figures and more."""
    sheets = sorted(
        path for path in SAMPLES.iterdir()
        if path.suffix in (".csv", ".tsv", ".html") and path.name != "gears.csv"
    )  # fmt: skip
    assert run("import", *sheets)[0] == 0
    had = motors(run)
    path = tmp_path / f"export.{format_}"
    run("export", "--format", format_, "--output", path)
    status, _, err = run("import", path, "--catalog", tmp_path / "again.sqlite")
    assert status == 0, err
    assert sum(len(motor["figures"]) for motor in had.values()) > 1000
    same(motors(run, "--catalog", tmp_path / "again.sqlite"), had, intervals=format_ != "csv")


def test_parquet_is_a_table_of_numbers_in_chosen_units(run, both, tmp_path):
    parquet = pytest.importorskip("pyarrow.parquet")
    units, path = tmp_path / "units.toml", tmp_path / "out.parquet"
    units.write_text('no_load_speed = "rpm"\n', encoding="utf-8")
    status, _, err = run("export", "--format", "parquet", "--units", units, "--output", path)
    assert (status, err) == (0, f"4 motors written to {path}.\n")
    columns = parquet.read_table(path).to_pydict()
    assert columns["no_load_speed [rpm]"] == [4557.0, 4564.0, 4567.0, None]
    assert columns["ambient_temperature [°C], as written"][3] == "-10…40"


def test_without_the_extra_parquet_is_one_sentence(run, sheet, tmp_path, monkeypatch):
    run("import", sheet)
    monkeypatch.setitem(sys.modules, "pyarrow", None)
    path = tmp_path / "out.parquet"
    status, out, err = run("export", "--format", "parquet", "--output", path)
    assert (status, out) == (2, "")
    assert "pip install 'motorfolio[parquet]'" in err
    assert not path.exists()


def test_a_parquet_file_that_is_damaged_stores_nothing(run, tmp_path, catalog_file):
    pytest.importorskip("pyarrow")
    path = tmp_path / "a.parquet"
    path.write_bytes(b"PAR1" + bytes(100))
    status, out, err = run("import", path)
    assert (status, out) == (2, "")
    assert "the Parquet file is damaged" in err
    assert err.count("\n") == 1
    assert not catalog_file.exists()


@pytest.mark.parametrize(
    ("printed", "asked", "kept"),
    [
        ({"between": "lines", "connection": "delta"}, "Ω phase", "phase"),
        ({"between": "lines"}, "Ω phase", "lines"),
        ({}, "Ω phase", None),
    ],
)
def test_lines_become_a_phase_only_where_star_or_delta_is_known(printed, asked, kept):
    wanted = ChosenUnit(read_unit(asked, ("Ω",))).in_convention(printed)
    assert wanted is not None
    assert wanted.between == kept
