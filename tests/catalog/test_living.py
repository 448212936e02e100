"""Finding motors by words, and the same motor in two sheets: found, shown, merged, parted."""

import json

import pytest

from motorfolio.catalog.same_motors import pairs
from motorfolio.catalog.store import Catalog

from .conftest import TABLE

OTHER = TABLE.replace("PUFFIN-", "Puffin ")


@pytest.fixture
def two_sheets(run, sheet, tmp_path):
    other = tmp_path / "shop.csv"
    other.write_text(OTHER, encoding="utf-8")
    run("import", sheet, "--maker", "Puffinworks (invented)")
    return run("import", other, "--maker", "Puffinworks GmbH (invented)")


def test_list_shows_constants_and_finds_by_part_of_a_name(run, sheet):
    run("import", sheet, "--maker", "Puffinwerke Süd (invented)")
    _, out, _ = run("list")
    line = next(line for line in out.splitlines() if line.startswith("PUFFIN-B"))
    assert line.split()[:3] == ["PUFFIN-B", "24", "V"]
    assert "4.02×10⁻⁶ kg·m²" in line
    for words in (["puffinb"], ["Puffin-B"], ["sud", "B"], ["brushed", "fin-b"], ["24 v"]):
        status, out, _ = run("list", "--json", *words)
        parts = [m["part_number"] for m in json.loads(out)["motors"]]
        assert ("PUFFIN-B" in parts) is (words != ["24 v"]), words
        assert status == (1 if words == ["24 v"] else 0)


def test_the_motor_that_is_named_comes_before_those_that_contain_it(run, sheet):
    sheet.write_text(TABLE.replace("PUFFIN-A", "OLD PUFFIN-B"), encoding="utf-8")
    run("import", sheet)
    motors = json.loads(run("list", "puffin-b", "--json")[1])["motors"]
    assert [m["part_number"] for m in motors] == ["PUFFIN-B", "OLD PUFFIN-B"]


def test_a_motor_in_two_sheets_is_recognised_and_shown(run, two_sheets):
    _, out, _ = two_sheets
    assert "PUFFIN-A and Puffin A may be one motor: Km 0.0 %, Ra 0.0 %, J 0.0 % apart" in out
    assert "    motorfolio merge PUFFIN-A 'Puffin A'" in out.splitlines()
    found = json.loads(run("same", "--json")[1])["pairs"]
    assert [[m["part_number"] for m in pair["motors"]] for pair in found] == [
        ["PUFFIN-A", "Puffin A"], ["PUFFIN-B", "Puffin B"], ["PUFFIN-C", "Puffin C"],
    ]  # fmt: skip
    assert found[0]["ratios"]["torque_constant"] == pytest.approx(1)


def test_another_winding_another_number_and_rows_of_one_sheet_are_other_motors(
    run, sheet, tmp_path, catalog_file
):
    run("import", sheet)
    other = tmp_path / "shop.csv"
    for text in (
        TABLE.replace("PUFFIN-A", "PUFFIN A")
        .replace(",0.800,", ",1.600,")
        .replace(",15.0,", ",7.5,"),
        TABLE.replace("PUFFIN-", "PUFFIN-2"),
        TABLE.replace("PUFFIN-", "HERON-"),
    ):
        other.write_text("\n".join(text.splitlines()[:2]), encoding="utf-8")
        run("import", other)
        with Catalog.open(catalog_file) as catalog:
            assert pairs(catalog) == []


def test_merged_on_a_word_kept_with_both_sheets_and_parted_by_undo(run, two_sheets, catalog_file):
    status, _, err = run("merge", "PUFFIN-A", "Puffin A")
    assert status == 0
    assert "further sheet of Puffinworks (invented)/PUFFIN-A" in err
    with Catalog.open(catalog_file) as catalog:
        assert len(catalog) == 5
        assert len(catalog.columns(["mass"])["mass"]) == 5
    shown = json.loads(run("show", "Puffin A", "--json")[1])
    assert shown["part_number"] == "PUFFIN-A"
    assert [also["source"]["file"].rsplit("/", 1)[-1] for also in shown["also"]] == ["shop.csv"]
    assert "Also Puffin A of" in run("show", "PUFFIN-A")[1]
    assert len(json.loads(run("same", "--json")[1])["pairs"]) == 2
    (change,) = json.loads(run("diff", "--json")[1])["changes"]
    assert change["change"] == "merged"
    assert change["into"] == {"maker": "Puffinworks (invented)", "part_number": "PUFFIN-A"}
    assert run("diff")[1] == "Puffin A: merged into Puffinworks (invented)/PUFFIN-A\n"
    revisions = run("revisions")[1]
    assert "1 motor merged" in revisions
    assert "/Puffin A into Puffinworks (invented)/PUFFIN-A" in revisions
    status, _, _ = run("undo")
    assert status == 0
    assert json.loads(run("show", "Puffin A", "--json")[1])["part_number"] == "Puffin A"
    assert "also" not in json.loads(run("show", "PUFFIN-A", "--json")[1])


def test_a_new_sheet_of_a_merged_motor_stays_aside(run, two_sheets, tmp_path, catalog_file):
    run("merge", "PUFFIN-A", "Puffin A")
    again = tmp_path / "shop.csv"
    again.write_text(OTHER.replace(",210", ",215"), encoding="utf-8")
    run("import", again, "--maker", "Puffinworks GmbH (invented)")
    with Catalog.open(catalog_file) as catalog:
        assert len(catalog) == 5
    changes = json.loads(run("diff", "--json")[1])["changes"]
    assert {c["part_number"]: c["change"] for c in changes} == dict.fromkeys(
        ["Puffin A", "Puffin B", "Puffin C"], "changed"
    )
    (also,) = json.loads(run("show", "PUFFIN-A", "--json")[1])["also"]
    assert also["part_number"] == "Puffin A"


def test_a_removal_is_no_merging(run, sheet):
    run("import", sheet)
    run("remove", "PUFFIN-A")
    assert run("diff")[1] == "1 motor removed: PUFFIN-A\n"
    assert "1 motor taken out" in run("revisions")[1]


def test_a_motor_is_not_merged_with_itself_or_with_none(run, sheet):
    run("import", sheet)
    for other, said in (("PUFFIN-A", "one motor already"), ("AUK", "has no motor AUK")):
        status, _, err = run("merge", "PUFFIN-A", other)
        assert status == 2
        assert said in err
