"""Catalogs of earlier layouts open, and are upgraded in one transaction."""

import json
import sqlite3

import pytest

from motorfolio.catalog.store import Catalog, layout
from motorfolio.catalog.store.database import VERSION

from ..robustness.sheets import digest, done
from ..robustness.sheets import sheet as petrels
from .layouts import restore

MAKER = "Petrel Motors (invented)"


@pytest.mark.parametrize("version", range(1, VERSION))
def test_an_earlier_catalog_is_read_and_written(run, catalog_file, tmp_path, version):
    restore(version, catalog_file)
    document = run("show", "PETREL-1", "--json")[1]
    assert "99 g" in document  # a correction
    motor = json.loads(document)
    assert motor["figures"]["torque_constant"]["text"] == "11.000"
    assert motor["constants"]["torque_constant"]["value"] == pytest.approx(0.011, rel=0.01)
    with Catalog.open(catalog_file) as catalog:
        assert catalog.connection.execute("PRAGMA user_version").fetchone() == (VERSION,)
        assert catalog.columns(["mass"])["mass"].tolist() == pytest.approx([0.1, 0.099, 0.102])
    table = petrels(tmp_path / "petrel.csv", "PETREL", 3)
    status, out, _ = run("import", table, "--maker", MAKER, "--json")
    assert status == 0
    assert len(json.loads(out)["files"][0]["motors"]) == 3
    assert json.loads(run("check", "--json")[1])["motors"] == 3
    assert run("undo")[0] == 0
    digest(catalog_file)


@pytest.mark.parametrize("version", range(1, VERSION))
def test_an_upgraded_catalog_is_laid_out_like_a_new_one(run, catalog_file, tmp_path, version):
    restore(version, catalog_file)
    assert run("show", "PETREL-1")[0] == 0
    new = tmp_path / "new.sqlite"
    table = petrels(tmp_path / "petrel.csv", "PETREL", 3)
    done("import", table, "--maker", MAKER, "--catalog", new)
    upgraded, wanted = sqlite3.connect(catalog_file), sqlite3.connect(new)
    for kind in ("table", "view", "index", "trigger"):
        assert names_of(upgraded, kind) == names_of(wanted, kind)
    for table in names_of(wanted, "table"):
        assert columns_of(wanted, table) <= columns_of(upgraded, table)
    upgraded.close()
    wanted.close()


def names_of(connection, kind):
    names = "SELECT name FROM sqlite_master WHERE type = ? ORDER BY name"
    return [name for (name,) in connection.execute(names, (kind,))]


def columns_of(connection, table):
    return {row[1] for row in connection.execute(f'PRAGMA table_info("{table}")')}


@pytest.mark.parametrize("step", ["MIGRATIONS", "_make_views"])
def test_an_upgrade_that_fails_leaves_the_catalog_as_it_was(run, catalog_file, monkeypatch, step):
    """Whether its first step fails or the last, after all others were done."""

    def broken(db):
        db.execute("CREATE TABLE half(done)")
        raise sqlite3.OperationalError("no such luck")

    restore(1, catalog_file)
    before = digest(catalog_file)
    with monkeypatch.context() as patched:
        kept = getattr(layout, step)
        patched.setattr(layout, step, broken if callable(kept) else (*kept[:1], broken))
        status, _, err = run("show", "PETREL-1")
    assert status == 2
    assert "no such luck" in err
    assert digest(catalog_file) == before
    assert run("show", "PETREL-1")[0] == 0
    assert digest(catalog_file) != before


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
