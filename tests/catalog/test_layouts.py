"""Catalogs of earlier layouts open, and are upgraded in one transaction."""

import json
import sqlite3
from pathlib import Path

import pytest

from motorfolio.catalog.store import Catalog, layout
from motorfolio.catalog.store.database import VERSION

EARLIER = sorted((Path(__file__).parent / "layouts").glob("*.sql"))


@pytest.fixture
def earlier(request, catalog_file):
    connection = sqlite3.connect(catalog_file)
    connection.executescript(request.param.read_text(encoding="utf-8"))
    connection.close()
    return catalog_file


def test_there_is_one_for_every_earlier_layout():
    assert [path.stem for path in EARLIER] == [str(n) for n in range(1, VERSION)]


@pytest.mark.parametrize("earlier", EARLIER, indirect=True, ids=lambda p: p.stem)
def test_an_earlier_catalog_is_read_and_written(run, earlier, sheet, tmp_path):
    motor = json.loads(run("show", "PUFFIN-B", "--json")[1])
    assert motor["figures"]["torque_constant"]["text"] == "50.0"
    assert motor["constants"]["torque_constant"]["value"] == pytest.approx(0.05, rel=0.01)
    with Catalog.open(earlier) as catalog:
        assert catalog.connection.execute("PRAGMA user_version").fetchone() == (VERSION,)
        assert catalog.columns(["mass"])["mass"].tolist() == [0.21] * 3
        assert catalog.connection.execute("SELECT count(*) FROM motors").fetchone() == (3,)
    status, out, _ = run("import", sheet, "--maker", "Puffinworks", "--json")
    assert status == 0
    assert len(json.loads(out)["files"][0]["motors"]) == 3
    assert json.loads(run("check", "--json")[1])["motors"] == 3


@pytest.mark.parametrize("earlier", EARLIER[:1], indirect=True, ids=lambda p: p.stem)
def test_an_upgrade_that_fails_leaves_the_catalog_as_it_was(run, earlier, monkeypatch):
    def broken(db):
        db.execute("CREATE TABLE half(done)")
        raise sqlite3.OperationalError("no such luck")

    before = earlier.read_bytes()
    monkeypatch.setattr(layout, "MIGRATIONS", (*layout.MIGRATIONS[:1], broken))
    status, _, err = run("show", "PUFFIN-B")
    assert status == 2
    assert "no such luck" in err
    assert earlier.read_bytes() == before


def test_a_quantity_that_the_vocabulary_gained_gets_its_column(run, sheet, catalog_file):
    """As if the catalog had been made before the vocabulary knew a price."""
    run("import", sheet)
    connection = sqlite3.connect(catalog_file)
    for view in ("motors", "figures_as_published"):
        connection.execute(f"DROP VIEW {view}")
    for table in ("figure_text", "figure_value", "figure_digit"):
        connection.execute(f"ALTER TABLE {table} DROP COLUMN price")
    connection.execute("DELETE FROM quantities WHERE key = 'price'")
    connection.commit()
    connection.close()
    assert run("show", "PUFFIN-B")[0] == 0
    text = sheet.read_text(encoding="utf-8").replace("Mass [g]", "Price [EUR]")
    sheet.write_text(text.replace("PUFFIN", "AUK"), encoding="utf-8")
    assert run("import", sheet)[0] == 0
    assert json.loads(run("show", "AUK-A", "--json")[1])["figures"]["price"]["value"] == 210
    with Catalog.open(catalog_file) as catalog:
        assert catalog.columns(["price"])["price"].tolist()[-1] == 210
