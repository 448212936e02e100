"""Corrections: beside the published figure, shown, revocable, kept for the next import."""

import json

import pytest

from .conftest import TABLE

WRONG = TABLE.replace("50.0,191,3.20", "50.0,191,32.0")


@pytest.fixture
def wrong(run, tmp_path):
    """A catalog in which PUFFIN-B's resistance is printed ten times too large."""
    path = tmp_path / "wrong.csv"
    path.write_text(WRONG, encoding="utf-8")
    run("import", path)
    return path


def motor(run, part="PUFFIN-B"):
    return json.loads(run("show", part, "--json")[1])


def test_the_implied_value_is_accepted(run, wrong):
    assert motor(run)["findings"][0]["suspect"] == "terminal_resistance"
    status, _, err = run(
        "correct", "PUFFIN-B", "terminal_resistance", "implied", "--reason", "slip"
    )
    assert status == 0
    assert "32.0" in err
    found = motor(run)
    figure = found["figures"]["terminal_resistance"]
    assert (figure["text"], figure["value"]) == ("32.0", 32.0)
    assert figure["corrected"]["value"] == pytest.approx(3.2, rel=0.02)
    assert figure["corrected"]["reason"] == "slip"
    assert [f for f in found["findings"] if f["severity"] == "error"] == []
    assert found["constants"]["armature_resistance"]["value"] == pytest.approx(3.2, rel=0.02)
    assert run("check")[0] == 0
    assert "corrected" in run("show", "PUFFIN-B")[1]


def test_a_given_value_is_taken_with_its_unit_and_its_digits(run, wrong):
    run("correct", "PUFFIN-B", "terminal_resistance", "3205 mΩ", "--reason", "measured")
    corrected = motor(run)["figures"]["terminal_resistance"]["corrected"]
    assert corrected["value"] == pytest.approx(3.205)
    assert corrected["low"] == pytest.approx(3.2045)
    assert corrected["text"] == "3205 mΩ"
    (listed,) = json.loads(run("correct", "--json")[1])["corrections"]
    assert (listed["part_number"], listed["quantity"]) == ("PUFFIN-B", "terminal_resistance")
    assert listed["published_text"] == "32.0"
    assert "measured" in run("correct")[1]


def test_revoking_restores_everything(run, wrong):
    before = motor(run)
    run("correct", "PUFFIN-B", "terminal_resistance", "3.2 Ω", "--reason", "slip")
    assert motor(run) != before
    assert run("correct", "PUFFIN-B", "terminal_resistance", "--revoke")[0] == 0
    after = motor(run)
    for document in (before, after):
        for constant in document["constants"].values():
            constant.update({k: pytest.approx(constant[k]) for k in ("value", "low", "high")})
    assert after["figures"] == before["figures"]
    assert after["constants"] == before["constants"]
    assert [f["relation"] for f in after["findings"]] == [f["relation"] for f in before["findings"]]
    assert run("correct", "PUFFIN-B", "terminal_resistance", "--revoke")[0] == 2


def test_the_search_sees_the_corrected_figure(run, wrong, catalog_file):
    from motorfolio.catalog.store import Catalog

    run("correct", "PUFFIN-B", "mass", "0.300 kg", "--reason", "weighed")
    with Catalog.open(catalog_file) as catalog:
        assert catalog.columns(["mass"])["mass"].tolist() == pytest.approx([0.21, 0.3, 0.21])
        row = catalog.connection.execute(
            "SELECT text, value, corrected_to FROM figures_as_published "
            "WHERE quantity = 'mass' AND part_number = 'PUFFIN-B'"
        ).fetchone()
        assert row == ("210", 0.21, "0.300 kg")
        assert catalog.connection.execute(
            "SELECT mass_kg FROM motors WHERE part_number = 'PUFFIN-B'"
        ).fetchone() == (pytest.approx(0.3),)


def test_a_correction_is_kept_when_the_sheet_comes_again(run, wrong):
    run("correct", "PUFFIN-B", "terminal_resistance", "3.20 Ω", "--reason", "slip")
    wrong.write_text(WRONG.replace("Mass [g]", "Weight [g]"), encoding="utf-8")
    _, out, _ = run("import", wrong, "--json")
    (file,) = json.loads(out)["files"]
    assert file["stored"] == 3
    figure = file["motors"][1]["figures"]["terminal_resistance"]
    assert (figure["value"], figure["corrected"]["value"]) == (32.0, pytest.approx(3.2))
    assert figure["corrected"]["reason"] == "slip"
    assert motor(run)["figures"]["terminal_resistance"]["corrected"]["reason"] == "slip"
    run("correct", "PUFFIN-B", "terminal_resistance", "--revoke")
    assert "corrected" not in motor(run)["figures"]["terminal_resistance"]
    assert motor(run)["figures"]["terminal_resistance"]["value"] == 32.0


def test_a_correction_lapses_when_the_sheet_prints_something_else(run, wrong):
    run("correct", "PUFFIN-B", "terminal_resistance", "3.30 Ω", "--reason", "guessed")
    wrong.write_text(TABLE, encoding="utf-8")
    _, out, _ = run("import", wrong)
    assert "3.20" in out
    figure = motor(run)["figures"]["terminal_resistance"]
    assert figure["value"] == pytest.approx(3.2)
    assert "corrected" not in figure


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["PUFFIN-B", "terminal_resistance", "3.2", "--reason", "x"], "unit"),
        (["PUFFIN-B", "terminal_resistance", "3.2 kg", "--reason", "x"], "kg"),
        (["PUFFIN-B", "terminal_resistance", "0 Ω", "--reason", "x"], "no possible"),
        (["PUFFIN-B", "terminal_resistance", "3.2 Ω"], "reason"),
        (["PUFFIN-B", "axial_load", "3.2 N", "--reason", "x"], "no published figure"),
        (["PUFFIN-A", "mass", "implied", "--reason", "x"], "implies"),
        (["PUFFIN-X", "mass", "3 kg", "--reason", "x"], "no motor"),
        (["PUFFIN-A", "mass"], "VALUE"),
    ],
)
def test_a_correction_that_cannot_be(run, wrong, arguments, words):
    status, out, err = run("correct", *arguments)
    assert (status, out) == (2, "")
    assert words in err
    assert json.loads(run("correct", "--json")[1])["corrections"] == []
