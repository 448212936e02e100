"""Gears in the catalog: imports, revisions, removal and taking back, as with motors."""

import json

import pytest

from motorfolio.catalog.store import Catalog


@pytest.fixture
def burrs(tmp_path):
    def write(*lines, name="burr.csv"):
        path = tmp_path / name
        path.write_text("\n".join(["Gear,Ratio,Efficiency [%],Mass [g]", *lines]) + "\n")
        return path

    return write


def gears(run, *words):
    return json.loads(run("gears", "--json", *words)[1])["gears"]


def test_undo_takes_back_the_gears_and_leaves_the_motors(run, sheet, burrs, catalog_file):
    run("import", sheet)
    with Catalog.open(catalog_file) as catalog:
        motors = len(catalog)
    run("gears", burrs("B-4,4,90,60", "B-16,16,81,75"))
    assert "2 gears" in run("revisions")[1]
    status, _, said = run("undo")
    assert (status, said) == (0, "Taken back: 2 gears removed, 0 restored.\n")
    assert gears(run) == []
    with Catalog.open(catalog_file) as catalog:
        assert len(catalog) == motors


def test_a_changed_sheet_replaces_and_undo_restores(run, burrs):
    run("gears", burrs("B-4,4,90,60", "B-16,16,81,75"))
    _, out, _ = run("gears", burrs("B-4,4,91,60", "B-16,16,81,75", "B-64,64,73,90"))
    assert "2 gears stored" in out
    assert "1 of them replaced; 1 in it already, with these figures" in out
    changed = ["B-4: changed", "    efficiency: 0.9 → 0.91"]
    assert [*map(str.rstrip, run("diff")[1].splitlines())] == ["1 gear new: B-64", *changed]
    assert [*map(str.rstrip, run("revisions", "B-4")[1].splitlines())] == changed
    shown = json.loads(run("revisions", "B-4", "--json")[1])
    assert [r["efficiency"] for r in shown["revisions"]] == [0.9, 0.91]
    assert run("undo")[2] == "Taken back: 2 gears removed, 1 restored.\n"
    assert [(g["part_number"], g["efficiency"]) for g in gears(run)] == [
        ("B-16", 0.81),
        ("B-4", 0.9),
    ]


def test_an_earlier_import_taken_back_leaves_the_later(run, burrs):
    run("gears", burrs("B-4,4,90,60"))
    run("gears", burrs("B-4,4,91,60"))
    assert run("undo", "1")[2] == "Taken back: 1 gear removed, 0 restored.\n"
    assert [g["efficiency"] for g in gears(run)] == [0.91]


def test_the_same_again_is_no_import(run, burrs):
    path = burrs("B-4,4,90,60")
    run("gears", path)
    _, out, _ = run("gears", path)
    assert "0 gears stored" in out
    assert len(json.loads(run("revisions", "--json")[1])["imports"]) == 1


def test_a_gear_is_removed_and_comes_back(run, sheet, burrs):
    run("import", sheet)
    run("gears", burrs("B-4,4,90,60"), "--maker", "Burr (invented)")
    assert run("remove", "B-4", "PUFFIN-A")[2] == "Removed: PUFFIN-A, Burr (invented)/B-4.\n"
    assert gears(run) == []
    assert "1 motor and 1 gear taken out" in run("revisions")[1]
    assert run("diff")[1] == "1 motor removed: PUFFIN-A\n1 gear removed: B-4\n"
    assert "1 restored; 0 gears removed, 1 restored" in run("undo")[2]
    assert [g["part_number"] for g in gears(run)] == ["B-4"]


def test_a_gear_is_no_motor(run, sheet, burrs):
    run("import", sheet)
    run("gears", burrs("B-4,4,90,60"))
    status, _, said = run("show", "B-4")
    assert (status, said) == (
        2,
        "motorfolio: B-4 is a gear, not a motor; motorfolio gears lists it.\n",
    )


def test_two_gears_of_one_name_are_told_apart(run, burrs):
    for maker in ("Burr (invented)", "Teasel (invented)"):
        run("gears", burrs("B-4,4,90,60"), "--maker", maker)
    status, _, said = run("remove", "B-4")
    assert status == 2
    assert "say Burr (invented)/B-4 or Teasel (invented)/B-4" in said
    assert run("remove", "Teasel (invented)/B-4")[0] == 0
    assert [g["maker"] for g in gears(run)] == ["Burr (invented)"]


def test_what_is_written_is_read_again_without_loss(run, tmp_path, burrs, catalog_file):
    lines = ["B-4,4,90,60.125", "=B-16,15.333,81.5,", "B-64,64.007,,90"]
    run("gears", burrs(*lines), "--maker", "Burr (invented)")
    priced = tmp_path / "priced.csv"
    priced.write_text(
        "Gear,Ratio,Max. input speed [rpm],Backlash [arcmin],Price [EUR],Stages\n"
        "T-5,5,6000,8,0.123,2\n"
    )
    run("gears", priced)
    before = gears(run)
    out = tmp_path / "out.csv"
    assert run("gears", "--output", out)[2] == f"4 gears written to {out}.\n"
    catalog_file.unlink()
    assert run("gears", out)[0] == 0
    assert gears(run) == before


def test_a_gear_of_an_earlier_layout(run, catalog_file):
    from .layouts import restore

    restore(3, catalog_file)
    (gear,) = gears(run)
    assert (gear["part_number"], gear["ratio"]) == ("BURR-4", 4.0)
    assert gear["mass"]["value"] == pytest.approx(0.06)
    assert run("revisions", "BURR-4")[2] == "BURR-4 has one revision.\n"
    assert run("remove", "BURR-4")[0] == 0
    assert gears(run) == []
    assert run("undo")[2] == "Taken back: 0 gears removed, 1 restored.\n"
    assert len(gears(run)) == 1
