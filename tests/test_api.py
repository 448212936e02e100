"""The library as a notebook uses it, and the documents' JSON Schemas."""

import csv
import io
import json
import math
import subprocess
import sys
from pathlib import Path

import jsonschema
import numpy as np
import pytest

import motorfolio.catalog
import motorfolio.schema
from motorfolio.catalog import cli, normalise, open_catalog, read_requirement, read_table
from motorfolio.schema import Entry, Finding, Motor, MotorfolioError, convert, json_schema
from motorfolio.schema import quantities as all_quantities

SAMPLES = Path(__file__).parent.parent / "sample_entries"
SHEETS = [
    *("brindlewick_10.csv", "brindlewick_22.csv", "quasselbach.csv", "gopher_notch.tsv"),
    *("grisoulette.csv", "wobbleton.csv", "tanuki_hollow.html"),
]
ASKED = {
    "point": [{"torque": "50 mN·m", "speed": "3000 rpm"}],
    "supply": {"voltage": "24 V"},
    "drive": {"peak_current": "10 A"},
}


@pytest.fixture(scope="module")
def catalog(tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("api") / "motors.sqlite"
    with open_catalog(path, create=True) as opened:
        opened.add(*(SAMPLES / name for name in SHEETS))
    return path


def printed(capsys: pytest.CaptureFixture[str], *words: str) -> object:
    capsys.readouterr()
    assert cli.main(words) in (0, 1)
    return json.loads(capsys.readouterr().out)


# ---- lightness and names


@pytest.mark.parametrize("package", ["motorfolio.catalog", "motorfolio.schema"])
def test_a_package_is_light_until_a_name_is_used(package: str) -> None:
    heavy = {"numpy", "pydantic", "pint", "sqlite3", "rich", "rapidfuzz", "click", "pandas"}
    code = f"import sys, {package}; print(sorted({heavy!r} & set(sys.modules)))"
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.strip() == "[]"


@pytest.mark.parametrize("package", [motorfolio.catalog, motorfolio.schema])
def test_every_public_name_is_there_and_documented(package: object) -> None:
    for name in package.__all__:  # pyright: ignore[reportAttributeAccessIssue]
        found = getattr(package, name)
        assert found.__doc__, name
        assert name in dir(package)
    assert not hasattr(package, "no_such_name")


# ---- one entry


def test_normalise_gives_constants_of_a_worked_motor() -> None:
    """OpenStax College Physics 2e, section 23.6: 48.0 V on 0.400 Ω draw 120 A at the start; the
    torque constant here is invented, its reciprocal the speed constant by Km·Kn = 1 in SI."""
    motor = normalise(
        {
            "part_number": "EX-48",
            "maker": "Examplar (invented)",
            "nominal_voltage": "48.0 V",
            "terminal_resistance": "0.400 Ω",
            "stall_current": "120 A",
            "Kt [mN·m/A]": "50.0",
            "speed_constant": "191.0 rpm/V",
        }
    )
    assert isinstance(motor, Motor)
    assert motor.constants["torque_constant"].value == pytest.approx(0.05, rel=2e-3)
    assert motor.constants["armature_resistance"].value == pytest.approx(0.4, rel=2e-3)
    assert not motor.findings
    assert motor.figures["stall_current"].value == 120.0


def test_normalise_takes_an_entry_and_tells_a_contradiction() -> None:
    motor = normalise(
        Entry(part_number="EX-1", torque_constant="302 mN·m/A", speed_constant="316 rpm/V")  # pyright: ignore[reportCallIssue]
    )
    assert [f.severity for f in motor.findings] == ["error"]
    assert motor.findings[0].cause == "power-of-ten"


@pytest.mark.parametrize(
    ("entry", "said"),
    [
        ({"part_number": "EX-1", "torque_constant": "30 mN·m/A", "stall_torque": "5 kg"}, "5 kg"),
        ({"part_number": "EX-1", "torque_constant": "30 mN·m/A", "glitter": "3 V"}, "glitter"),
        ({"part_number": "EX-1", "torque_constant": "3 V"}, "torque_constant '3 V'"),
        ({"part_number": "EX-1", "nominal_voltage": "3 A"}, "nominal_voltage '3 A'"),
        ({"part_number": "EX-1", "glitter": "3 V"}, "glitter"),
        ({"part_number": "EX-1"}, "no figure of a motor"),
        ({"torque_constant": "30 mN·m/A", "terminal_resistance": "1 Ω"}, "no part number"),
        ({"part_number": " ", "torque_constant": "30 mN·m/A"}, "no part number"),
        ({}, "no part number"),
    ],
)
def test_normalise_drops_nothing_in_silence(entry: dict[str, str], said: str) -> None:
    with pytest.raises(MotorfolioError, match=said):
        normalise(entry)


# ---- tables


@pytest.mark.parametrize("name", SHEETS)
def test_a_model_gives_back_the_document(name: str) -> None:
    sheet = read_table(SAMPLES / name)
    assert len(sheet.motors) > 5
    for document, motor in zip(sheet.motors.documents, sheet.motors, strict=True):
        assert motor.document == document


def test_a_table_of_motors_as_arrays() -> None:
    sheet = read_table(SAMPLES / "brindlewick_10.csv")
    array = sheet.to_numpy()
    constants = sheet.motors["BRIN-10-A"].constants
    assert array["part_number"][0] == "BRIN-10-A"
    assert array["torque_constant"].dtype == np.float64
    assert array["torque_constant"][0] == constants["torque_constant"].value
    assert sheet.motors.table.units["rotor_inertia"] == "kg·m²"
    assert len(sheet.motors[:3]) == 3
    with pytest.raises(MotorfolioError, match="no motor NOPE"):
        sheet.motors["NOPE"]


def test_a_table_of_motors_as_a_frame() -> None:
    pandas = pytest.importorskip("pandas")
    frame = read_table(SAMPLES / "quasselbach.csv").to_frame()
    assert isinstance(frame, pandas.DataFrame)
    assert len(frame) == 12
    assert frame.attrs["units"]["no_load_speed"] == "rad/s"
    # 24 V, 8.96 A at stall: Ra = U/Is, Fitzgerald et al., Electric Machinery, 6th ed., section 7.7
    row = frame.set_index("part_number").loc["DACHS-24"]
    assert row["armature_resistance"] == pytest.approx(24 / 8.96, rel=0.03)


def test_without_pandas_a_sentence(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "pandas", None)
    sheet = read_table(SAMPLES / "brindlewick_10.csv")
    with pytest.raises(MotorfolioError, match="pip install pandas"):
        sheet.to_frame()


def test_html_is_escaped() -> None:
    hostile = "<script>alert(1)</script>"
    sheet = read_table([{"part_number": hostile, "maker": hostile, "torque_constant": "3 mN·m/A"}])
    for html in (sheet._repr_html_(), sheet.motors[0]._repr_html_()):
        assert "<script>" not in html
        assert "&lt;script&gt;" in html


# ---- a catalog


def test_an_open_catalog(catalog: Path) -> None:
    with open_catalog(catalog) as opened:
        assert len(opened) == 64
        assert opened["DACHS-24"].series == "DACHS"
        assert len(opened.motors(["DACHS-24", "DACHS-36"])) == 2
        assert opened.columns("torque_constant")["torque_constant"].shape == (64,)
        assert all(isinstance(f, Finding) for f in opened.findings())


def test_a_catalog_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(MotorfolioError):
        open_catalog(tmp_path / "none.sqlite")


def test_search_and_judge_say_what_the_command_says(
    catalog: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    words = ["--torque", "50 mN·m", "--speed", "3000 rpm", "--supply", "24 V", "--current", "10 A"]
    said = printed(capsys, "search", *words, "--catalog", str(catalog), "--json")
    with open_catalog(catalog) as opened:
        found = opened.search(ASKED)
        best = found.candidates.columns["part_number"][0]
        judged = opened.judge(best, read_requirement(ASKED))
        missed = opened.judge(found.near_misses.columns["part_number"][0], ASKED)
    for key in ("counts", "candidates", "near_misses"):
        assert found.document[key] == said[key]  # pyright: ignore[reportIndexIssue]
    assert judged.feasible
    assert judged.limiting == found.candidates.columns["limiting"][0]
    assert not missed.feasible
    assert max(u for u in missed.utilisation.values() if u is not None) > 1
    assert len(found.to_numpy()) == len(found.candidates)
    assert "screening aid" in found._repr_html_()
    assert "screening aid" in judged._repr_html_()
    assert repr(found).startswith("<SearchResult: ")
    assert repr(judged).startswith("<Judgement of ")
    assert len(repr(found.candidates)) < 500


def test_where_counts_in_a_judgement(catalog: Path) -> None:
    with open_catalog(catalog) as opened:
        light = {**ASKED, "wanted": {"where": ["mass < 1 g"]}}
        assert opened.judge("GRILLON-A", ASKED).feasible
        assert not opened.judge("GRILLON-A", light).feasible


def test_a_requirement_file_and_its_mapping_are_the_same() -> None:
    import tomllib

    path = SAMPLES / "machines" / "hand_tool.toml"
    from_file = read_requirement(path)
    assert from_file.document == read_requirement(tomllib.loads(path.read_text())).document


# ---- small things


def test_convert() -> None:
    """1 V/krpm = 0.03/π V·s/rad by the definitions of the minute and the turn."""
    assert convert("1 V/krpm", "V·s/rad").value == pytest.approx(0.03 / math.pi, rel=1e-12)


# ---- schemas


def schema_of(capsys: pytest.CaptureFixture[str], name: str) -> dict:
    schema = printed(capsys, "schema", name)
    assert isinstance(schema, dict)
    jsonschema.Draft202012Validator.check_schema(schema)
    return schema


def test_printed_motors_and_findings_keep_to_their_schemas(
    catalog: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    motor = jsonschema.Draft202012Validator(schema_of(capsys, "motor"))
    finding = jsonschema.Draft202012Validator(schema_of(capsys, "finding"))
    where = ("--catalog", str(catalog))
    with open_catalog(catalog) as opened:
        parts = [m.part_number for m in opened.motors()]
    motor.validate(printed(capsys, "show", parts[0], *where, "--json"))
    for document in printed(capsys, "compare", *parts, *where, "--json"):  # pyright: ignore[reportGeneralTypeIssues]
        motor.validate(document)
    checked = printed(capsys, "check", *where, "--json")
    assert checked["findings"]  # pyright: ignore[reportIndexIssue, reportArgumentType, reportCallIssue]
    for document in checked["findings"]:  # pyright: ignore[reportIndexIssue, reportArgumentType, reportCallIssue]
        finding.validate(document)
    wrong = dict(printed(capsys, "show", parts[0], *where, "--json"), extra=1)  # pyright: ignore[reportCallIssue, reportArgumentType]
    with pytest.raises(jsonschema.ValidationError):
        motor.validate(wrong)


def test_imported_motors_keep_to_the_schema(capsys: pytest.CaptureFixture[str]) -> None:
    motor = jsonschema.Draft202012Validator(schema_of(capsys, "motor"))
    for name in SHEETS:
        said = printed(capsys, "import", "--dry-run", "--json", str(SAMPLES / name))
        for document in said["files"][0]["motors"]:  # pyright: ignore[reportIndexIssue]
            motor.validate(document)


def test_machines_keep_to_the_schema_of_a_requirement(capsys: pytest.CaptureFixture[str]) -> None:
    import tomllib

    requirement = jsonschema.Draft202012Validator(schema_of(capsys, "requirement"))
    machines = sorted((SAMPLES / "machines").glob("*.toml"))
    assert len(machines) == 3
    for path in machines:
        requirement.validate(tomllib.loads(path.read_text(encoding="utf-8")))


def test_entries_keep_to_their_schema(capsys: pytest.CaptureFixture[str]) -> None:
    entry = jsonschema.Draft202012Validator(schema_of(capsys, "entry"))
    text = (SAMPLES / "quasselbach.csv").read_text(encoding="utf-8")
    for row in csv.DictReader(io.StringIO(text.split("\n", 2)[2]), delimiter=";"):
        if row["Baureihe"]:
            entry.validate({"part_number": row.pop("Typ"), **row})
    with pytest.raises(jsonschema.ValidationError):
        entry.validate({"torque_constant": "30 mN·m/A"})
    assert set(all_quantities()) <= set(json_schema("entry")["properties"])


def test_a_catalog_is_gone_through_and_asked_for_a_motor(tmp_path):
    path = tmp_path / "c.sqlite"
    with open_catalog(path, create=True) as catalog:
        (sheet,) = catalog.add(SAMPLES / "grisoulette.csv")
        assert [motor.part_number for motor in catalog] == [m.part_number for m in sheet.motors]
        assert "GRILLON-A" in catalog
        assert f"{sheet.motors[0].maker}/GRILLON-A" in catalog
        assert "GRILLON-Z" not in catalog
        assert 0 not in catalog
        assert "grisoulette.csv: 10 motors" in repr(sheet)
        assert repr(sheet.motors) == "<MotorTable of 10 motors>"
