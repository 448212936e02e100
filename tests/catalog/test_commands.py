"""The commands end to end: a sheet in, documents, tables and statuses out."""

import json
import re
import subprocess
import sys

import pytest

from motorfolio.catalog.cli import COMMANDS
from motorfolio.catalog.store import Catalog

from .conftest import TABLE


def test_import_then_show(run, sheet, catalog_file):
    status, out, _ = run("import", sheet, "--maker", "Puffinworks")
    assert status == 0
    assert "Stored 3 motors" in out
    status, out, _ = run("show", "PUFFIN-B", "--json")
    motor = json.loads(out)
    assert status == 0
    assert motor["maker"] == "Puffinworks"
    figure = motor["figures"]["torque_constant"]
    assert (figure["text"], figure["value"], figure["unit"]) == (
        "50.0",
        pytest.approx(0.05),
        "N·m/A",
    )
    assert figure["cell"] == {"sheet": None, "page": None, "row": 3, "column": 5}
    assert motor["constants"]["torque_constant"]["value"] == pytest.approx(0.05, rel=0.01)
    assert motor["source"]["file"].endswith("puffin.csv")
    status, out, _ = run("show", "Puffinworks/PUFFIN-B")
    assert status == 0
    assert "50.0 mNm/A" in out
    assert "R3 C5" in out


def test_import_json_is_one_document(run, sheet):
    status, out, _ = run("import", sheet, "--json")
    document = json.loads(out)
    (file,) = document["files"]
    assert status == 0
    assert file["layout"] == "rows"
    assert file["stored"] == 3
    assert len(file["sha256"]) == 64
    assert [m["part_number"] for m in file["motors"]] == ["PUFFIN-A", "PUFFIN-B", "PUFFIN-C"]
    read = {r["heading"]: r for r in file["reading"]}
    assert read["Torque constant [mNm/A]"]["quantity"] == "torque_constant"
    assert 0 <= read["Torque constant [mNm/A]"]["score"] <= 1
    assert read["Torque constant [mNm/A]"]["reason"]


def test_import_and_show_give_the_same_motor(run, sheet):
    _, out, _ = run("import", sheet, "--json")
    imported = {m["part_number"]: m for m in json.loads(out)["files"][0]["motors"]}
    for part, motor in imported.items():
        shown = json.loads(run("show", part, "--json")[1])
        assert shown["figures"].keys() == motor["figures"].keys()
        assert shown["constants"].keys() == motor["constants"].keys()
        assert shown["findings"] == motor["findings"]
        for key, figure in motor["figures"].items():
            for name, value in figure.items():
                expected = pytest.approx(value, rel=1e-9) if isinstance(value, float) else value
                assert shown["figures"][key][name] == expected, (part, key, name)


def test_a_dry_run_shows_the_table_and_stores_nothing(run, sheet, catalog_file):
    status, out, _ = run("import", sheet, "--dry-run")
    assert status == 0
    assert "4557 rpm" in out
    assert "477.2" in out  # 4557 rpm · 2π/60, in rad/s
    assert "Nothing was stored" in out
    assert not catalog_file.exists()


def test_the_same_file_twice_changes_nothing(run, sheet, catalog_file):
    run("import", sheet)
    before = catalog_file.read_bytes()
    status, out, _ = run("import", sheet, "--json")
    assert status == 0
    (file,) = json.loads(out)["files"]
    assert (file["stored"], file["unchanged"]) == (0, True)
    assert len(file["motors"]) == 3
    assert catalog_file.read_bytes() == before
    assert "nothing changed" in run("import", sheet)[1]


def test_strict_stores_nothing_that_is_unread(run, tmp_path, catalog_file):
    path = tmp_path / "odd.csv"
    path.write_text(TABLE.replace("0.800", "zero point eight"), encoding="utf-8")
    status, out, err = run("import", path, "--strict", "--json")
    (file,) = json.loads(out)["files"]
    assert status == 1
    assert file["stored"] == 0
    assert [u["text"] for u in file["unread"]] == ["zero point eight"]
    assert file["unread"][0]["cell"]["row"] == 2
    assert "Nothing was stored" in err
    assert not catalog_file.exists()
    assert run("import", path)[0] == 0


def test_an_error_is_found_named_and_told_by_the_status(run, tmp_path):
    path = tmp_path / "wrong.csv"
    path.write_text(TABLE.replace("50.0,191,3.20", "50.0,191,32.0"), encoding="utf-8")
    run("import", path)
    status, out, _ = run("check", "--json")
    document = json.loads(out)
    assert status == 1
    assert document["motors"] == 3
    errors = [f for f in document["findings"] if f["severity"] == "error"]
    assert [(f["part_number"], f["suspect"]) for f in errors] == [
        ("PUFFIN-B", "terminal_resistance")
    ]
    assert errors[0]["ratio"] == pytest.approx(10, rel=0.02)
    assert errors[0]["implied"]["value"] == pytest.approx(3.2, rel=0.02)
    assert errors[0]["cell"]["row"] == 3
    assert run("check", "PUFFIN-A")[0] == 0
    status, out, _ = run("check")
    assert status == 1
    assert "PUFFIN-B" in out
    assert run("import", path, "--strict")[0] == 1


def test_one_bad_file_and_nothing_of_the_call_is_stored(run, sheet, tmp_path, catalog_file):
    bad = tmp_path / "bad.csv"
    bad.write_bytes(b"\x00\x01\x02")
    status, out, err = run("import", sheet, bad)
    assert (status, out) == (2, "")
    assert "bad.csv" in err
    assert len(err.strip().splitlines()) == 1
    assert not catalog_file.exists()
    run("import", sheet)
    before = catalog_file.read_bytes()
    other = tmp_path / "other.csv"
    other.write_text(TABLE.replace("PUFFIN", "AUK"), encoding="utf-8")
    assert run("import", other, bad)[0] == 2
    assert catalog_file.read_bytes() == before


def test_standard_input(run, monkeypatch):
    class Input:
        class buffer:  # noqa: N801
            @staticmethod
            def read():
                return TABLE.encode()

    monkeypatch.setattr(sys, "stdin", Input)
    assert run("import", "-")[0] == 2
    assert run("import", "-", "--format", "csv")[0] == 0
    assert run("show", "PUFFIN-A")[0] == 0


def test_a_heading_is_read_as_told(run, tmp_path):
    path = tmp_path / "x.csv"
    path.write_text(TABLE.replace("Mass [g]", "Wibble"), encoding="utf-8")
    _, out, _ = run("import", path, "--dry-run", "--json")
    assert "mass" not in json.loads(out)["files"][0]["motors"][0]["figures"]
    _, out, _ = run("import", path, "--set", "Wibble=mass:g", "--json")
    assert json.loads(out)["files"][0]["motors"][0]["figures"]["mass"]["value"] == 0.21


@pytest.mark.parametrize(
    ("reading", "words"),
    [
        ("Mass [g]=masss:g", "did you mean mass"),
        ("Mass [g]=mass:V", "kg would do"),
        ("Mass [g]=mass:g:sideways", "no convention"),
        ("Weight=mass:g", "no file has such a heading"),
        ("Masss [g]=mass:g", 'the nearest are "Mass [g]"'),
        ("質量=mass:g", "which --dry-run lists"),
    ],
)
def test_a_reading_that_cannot_be_is_refused(run, sheet, catalog_file, reading, words):
    status, out, err = run("import", sheet, "--set", reading)
    assert (status, out) == (2, "")
    assert words in err
    assert not catalog_file.exists()


def test_a_reading_is_kept_for_the_maker(run, tmp_path):
    first, second = tmp_path / "1.csv", tmp_path / "2.csv"
    first.write_text(TABLE.replace("Mass [g]", "Wibble"), encoding="utf-8")
    second.write_text(
        TABLE.replace("Mass [g]", "Wibble").replace("PUFFIN", "AUK"), encoding="utf-8"
    )
    run("import", first, "--maker", "Puffinworks", "--set", "Wibble=mass:g", "--keep")
    _, out, _ = run("readings", "--json")
    assert json.loads(out)["readings"] == [
        {"maker": "Puffinworks", "heading": "Wibble", "reading": "mass:g"}
    ]
    _, out, _ = run("import", second, "--maker", "Puffinworks", "--json")
    assert json.loads(out)["files"][0]["motors"][0]["figures"]["mass"]["value"] == 0.21
    _, out, _ = run("import", second, "--maker", "Razorbill", "--json")
    assert "mass" not in json.loads(out)["files"][0]["motors"][0]["figures"]
    assert run("readings", "--maker", "Puffinworks", "--remove", "Wibble")[0] == 0
    assert json.loads(run("readings", "--json")[1])["readings"] == []
    assert run("readings", "--maker", "Puffinworks", "--remove", "Wibble")[0] == 2


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["show", "NOTHING"], "no catalog"),
        (["import"], "FILE"),
        (["import", "nowhere.csv"], "nowhere.csv"),
        (["import", "."], "."),
        (["import", "x.csv", "--set", "Kt"], "HEADING="),
        (["import", "x.csv", "--keep"], "--set"),
        (["compare", "one"], "two"),
        (["convert", "4.3", "N·m/A"], "unit"),
        (["convert", "4.3 V/krpm", "furlong"], "furlong"),
        (["convert", "4.3 V/krpm", "kg"], "V/krpm"),
        (["frobnicate"], "frobnicate"),
        (["export", "--units", "si", "--format", "xml"], "xml"),
        (["show"], "PART"),
    ],
)  # fmt: skip
def test_what_cannot_be_used_is_one_sentence_and_status_2(run, arguments, words):
    status, out, err = run(*arguments)
    assert (status, out) == (2, "")
    assert words in err
    assert len(err.strip().splitlines()) == 1
    assert "Traceback" not in err


def test_convert(run):
    # NIST SP 811 (2008), B.8: 1 rpm is 2π/60 rad/s, so 4.3 V/krpm = 4.3·60/(2π·1000) V·s/rad
    status, out, _ = run("convert", "4.3 V/krpm", "N·m/A", "--json")
    assert status == 0
    assert json.loads(out) == {"value": pytest.approx(0.041062, rel=1e-4), "unit": "N·m/A"}


def test_compare(run, sheet):
    run("import", sheet)
    status, out, _ = run("compare", "PUFFIN-A", "PUFFIN-C", "--json")
    assert status == 0
    assert [m["part_number"] for m in json.loads(out)] == ["PUFFIN-A", "PUFFIN-C"]
    status, out, _ = run("compare", "PUFFIN-A", "PUFFIN-C")
    assert status == 0
    assert "PUFFIN-C" in out


def test_a_sheet_cannot_steer_the_terminal(run, tmp_path, catalog_file):
    path = tmp_path / "x.csv"
    evil = "PUFFIN\x1b]0;owned\x07[red]-A"
    path.write_text(TABLE.replace("PUFFIN-A", evil), encoding="utf-8")
    for arguments in (("import", path, "--dry-run"), ("import", path), ("check",)):
        status, out, err = run(*arguments)
        assert status in (0, 1)
        assert "\x1b" not in out + err
        assert "\x07" not in out + err
    with Catalog.open(catalog_file) as catalog:
        part = next(catalog.motors())["part_number"]
    out = run("show", part)[1]
    assert "\x1b" not in out
    assert "[red]" in out


def test_help_of_every_command_has_an_example(run):
    status, out, _ = run("--help")
    assert status == 0
    for name, (_, text) in COMMANDS.items():
        assert name in out
        assert text.split()[0] in out
        status, own, _ = run(name, "--help")
        assert status == 0
        assert "Example: motorfolio" in own or "COMMAND [ARGS]" in own


HEAVY = {"numpy", "pint", "pydantic", "sqlite_utils", "rapidfuzz", "openpyxl", "lxml"}


def _loaded(*arguments, env=None):
    code = (
        "import sys; from motorfolio.catalog.cli import main; status = main(sys.argv[1:]); "
        "print(status, *sorted(m for m in sys.modules if '.' not in m), file=sys.stderr)"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, *arguments],
        capture_output=True,
        text=True,
        env=env,
        check=True,
    )
    status, *modules = done.stderr.split()
    assert status == "0"
    return set(modules)


def test_help_loads_nothing_heavy():
    assert not _loaded("--help") & (HEAVY | {"rich", "sqlite3"})
    assert not _loaded("import", "--help") & HEAVY


def test_showing_a_motor_loads_nothing_heavy(run, sheet, catalog_file):
    run("import", sheet)
    assert not _loaded("show", "PUFFIN-A", "--catalog", str(catalog_file)) & HEAVY


def test_undo_asks_on_a_terminal_and_says_what_will_go(run, sheet, catalog_file, monkeypatch):
    run("import", sheet)
    monkeypatch.setattr("sys.stdin.isatty", lambda: True)
    monkeypatch.setattr("click.termui.visible_prompt_func", lambda prompt: "n")
    status, _, err = run("undo")
    assert status == 130
    assert "3 motors: " in err
    with Catalog.open(catalog_file) as opened:
        assert len(opened) == 3
    status, _, err = run("undo", "--yes")
    assert status == 0
    assert "3 motors removed" in err


def test_diff_names_new_motors_in_one_line(run, sheet):
    run("import", sheet)
    _, out, _ = run("diff")
    assert out.splitlines() == ["3 motors new: PUFFIN-A, PUFFIN-B, PUFFIN-C"]


def test_lists_on_a_narrow_terminal_break_no_time_and_no_word(run, sheet, monkeypatch):
    run("import", sheet)
    run("correct", "PUFFIN-A", "mass", "0.2 kg", "--reason", "weighed " * 20)
    monkeypatch.setenv("COLUMNS", "80")
    for command in ("correct", "revisions"):
        _, out, _ = run(command)
        assert re.search(r"\d{4}-\d\d-\d\d \d\d:\d\d", out)
        assert max(map(len, out.splitlines())) <= 80
    _, out, _ = run("correct")
    assert "mass" in out.splitlines()[0]
    assert all(line.startswith("    ") for line in out.splitlines()[1:])
