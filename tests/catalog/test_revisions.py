"""A changed sheet, what it changed, taking imports back, removing motors."""

import json
import sqlite3

import pytest

from .conftest import TABLE

NEWER = TABLE.replace("PUFFIN-B,24,4564,31,50.0", "PUFFIN-B,24,4564,31,51.0").replace(
    "PUFFIN-C", "PUFFIN-D"
)


def shown(run, part):
    return json.loads(run("show", part, "--json")[1])


@pytest.fixture
def changed(run, sheet):
    """A catalog into which the sheet was read, then its next edition."""
    run("import", sheet)
    sheet.write_text(NEWER, encoding="utf-8")
    _, out, _ = run("import", sheet, "--json")
    (file,) = json.loads(out)["files"]
    assert (file["stored"], file["replaced"]) == (3, 2)
    return sheet


def test_a_changed_sheet_replaces_figures_and_keeps_the_earlier(run, changed):
    assert shown(run, "PUFFIN-B")["figures"]["torque_constant"]["text"] == "51.0"
    assert run("show", "PUFFIN-C")[0] == 0  # no longer on the sheet, and still known
    assert json.loads(run("check", "--json")[1])["motors"] == 4
    found = json.loads(run("revisions", "PUFFIN-B", "--json")[1])
    texts = [m["figures"]["torque_constant"]["text"] for m in found["revisions"]]
    assert texts == ["50.0", "51.0"]
    (change,) = found["changes"]
    assert list(change["figures"]) == ["torque_constant"]
    assert "50.0" in run("revisions", "PUFFIN-B")[1]


def test_diff_says_what_the_import_changed(run, changed):
    changes = {c["part_number"]: c for c in json.loads(run("diff", "--json")[1])["changes"]}
    assert {part: c["change"] for part, c in changes.items()} == {
        "PUFFIN-B": "changed", "PUFFIN-D": "new",
    }  # fmt: skip
    before = changes["PUFFIN-B"]["figures"]["torque_constant"]["before"]
    assert before["text"] == "50.0"
    first = json.loads(run("diff", "1", "--json")[1])["changes"]
    assert [c["change"] for c in first] == ["new"] * 3
    status, out, _ = run("diff")
    assert status == 0
    assert "50.0 mNm/A → 51.0 mNm/A" in out
    assert run("diff", "7")[0] == 2


def test_undo_takes_the_last_import_back(run, changed):
    assert run("undo")[0] == 0
    assert shown(run, "PUFFIN-B")["figures"]["torque_constant"]["text"] == "50.0"
    assert run("show", "PUFFIN-D")[0] == 2
    assert json.loads(run("check", "--json")[1])["motors"] == 3
    assert len(json.loads(run("revisions", "--json")[1])["imports"]) == 1
    assert run("undo")[0] == 0
    assert json.loads(run("check", "--json")[1])["motors"] == 0
    status, _, err = run("undo")
    assert status == 2
    assert "Nothing has been imported" in err


def test_undo_of_an_earlier_import_leaves_the_later(run, changed):
    assert run("undo", "1")[0] == 0
    assert shown(run, "PUFFIN-B")["figures"]["torque_constant"]["text"] == "51.0"
    assert run("show", "PUFFIN-C")[0] == 2
    found = json.loads(run("revisions", "PUFFIN-B", "--json")[1])
    assert len(found["revisions"]) == 1


def test_undo_of_an_import_in_the_middle(run, changed):
    changed.write_text(NEWER.replace("51.0", "52.0"), encoding="utf-8")
    run("import", changed)
    assert run("undo", "2")[0] == 0
    found = json.loads(run("revisions", "PUFFIN-B", "--json")[1])
    texts = [m["figures"]["torque_constant"]["text"] for m in found["revisions"]]
    assert texts == ["50.0", "52.0"]
    assert run("undo")[0] == 0
    assert shown(run, "PUFFIN-B")["figures"]["torque_constant"]["text"] == "50.0"


def test_the_first_edition_again_is_a_revision_again(run, changed):
    changed.write_text(TABLE, encoding="utf-8")
    _, out, _ = run("import", changed, "--json")
    assert json.loads(out)["files"][0]["stored"] == 3
    assert shown(run, "PUFFIN-B")["figures"]["torque_constant"]["text"] == "50.0"
    assert len(json.loads(run("revisions", "PUFFIN-B", "--json")[1])["revisions"]) == 3


def test_a_removed_motor_comes_back_by_undo_or_by_its_sheet(run, sheet, catalog_file):
    run("import", sheet)
    assert run("remove", "PUFFIN-A", "PUFFIN-B")[0] == 0
    assert run("show", "PUFFIN-A")[0] == 2
    assert json.loads(run("check", "--json")[1])["motors"] == 1
    assert run("undo")[0] == 0
    assert run("show", "PUFFIN-A")[0] == 0
    run("remove", "PUFFIN-A")
    assert run("import", sheet)[0] == 0
    assert run("show", "PUFFIN-A")[0] == 0
    assert run("remove", "PUFFIN-A", "NOTHING")[0] == 2
    assert run("show", "PUFFIN-A")[0] == 0


def test_the_search_columns_follow(run, changed, catalog_file):
    from motorfolio.catalog.store import Catalog, columns

    def torque():
        with Catalog.open(catalog_file) as catalog:
            found = catalog.columns(["published_torque_constant", "mass", "id"])
            assert len(found["id"]) == len(catalog)
            cached = catalog.columns(columns.CACHED)
            sources = [row[0] for row in catalog.connection.execute("SELECT id FROM sources")]
            parts = [columns.select(catalog.connection, s, ["mass"])["mass"] for s in sources]
            assert cached["mass"].tolist() == [m for part in parts for m in part.tolist()]
            return sorted(found["published_torque_constant"].tolist())

    assert torque() == pytest.approx([0.025, 0.051, 0.075, 0.075])
    run("remove", "PUFFIN-B")
    assert torque() == pytest.approx([0.025, 0.075, 0.075])
    run("undo")
    run("undo")
    assert torque() == pytest.approx([0.025, 0.05, 0.075])


def test_undoing_everything_leaves_nothing_behind(run, changed, catalog_file):
    run("undo")
    run("undo")
    connection = sqlite3.connect(catalog_file)
    keep = {"quantities", "conventions", "kinds", "derivations"}
    tables = [
        name
        for (name,) in connection.execute("SELECT name FROM sqlite_master WHERE type = 'table'")
        if name not in keep
    ]
    counts = {t: connection.execute(f'SELECT count(*) FROM "{t}"').fetchone()[0] for t in tables}
    connection.close()
    assert {table: n for table, n in counts.items() if n} == {}
