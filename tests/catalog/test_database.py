"""The file itself: foreign, newer, locked, read-only, full; whole or absent."""

import json
import os
import sqlite3
import subprocess
import sys

import pytest

from motorfolio.catalog.store import Catalog, CatalogError
from motorfolio.catalog.store.database import APPLICATION_ID, VERSION

from .conftest import TABLE

as_root = os.name == "posix" and os.geteuid() == 0


def test_a_foreign_file_is_refused_and_not_touched(run, sheet, catalog_file):
    other = sqlite3.connect(catalog_file)
    other.execute("CREATE TABLE birds(name)")
    other.commit()
    other.close()
    before = catalog_file.read_bytes()
    for arguments in (("import", sheet), ("show", "x"), ("undo",)):
        status, _, err = run(*arguments)
        assert status == 2
        assert "another program" in err
    assert catalog_file.read_bytes() == before


@pytest.mark.parametrize(
    "content",
    [b"hello, I am a text file of some length" * 9, b"SQLite format 3\x00" + b"\x07" * 200],
)
def test_a_file_that_is_no_database_is_refused_and_not_touched(run, sheet, catalog_file, content):
    catalog_file.write_bytes(content)
    for arguments in (("import", sheet), ("check",)):
        status, _, err = run(*arguments)
        assert status == 2
        assert len(err.strip().splitlines()) == 1
    assert catalog_file.read_bytes() == content


def test_a_newer_catalog_is_refused(run, sheet, catalog_file):
    run("import", sheet)
    connection = sqlite3.connect(catalog_file)
    connection.execute(f"PRAGMA user_version = {VERSION + 1}")
    connection.close()
    before = catalog_file.read_bytes()
    for arguments in (("import", sheet), ("show", "PUFFIN-A")):
        status, _, err = run(*arguments)
        assert status == 2
        assert "newer" in err
    assert catalog_file.read_bytes() == before


def test_the_file_says_what_it_is(run, sheet, catalog_file):
    run("import", sheet)
    connection = sqlite3.connect(catalog_file)
    assert connection.execute("PRAGMA application_id").fetchone() == (APPLICATION_ID,)
    assert connection.execute("PRAGMA user_version").fetchone() == (VERSION,)
    assert connection.execute("PRAGMA integrity_check").fetchone() == ("ok",)
    assert connection.execute("PRAGMA foreign_key_check").fetchall() == []
    tables = connection.execute(
        "SELECT sql FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%'"
    ).fetchall()
    assert all(sql.rstrip().endswith("STRICT") for (sql,) in tables)
    connection.close()


@pytest.mark.parametrize("what", ["folder", "missing folder"])
def test_a_path_that_cannot_be_a_catalog(run, sheet, tmp_path, what):
    path = tmp_path if what == "folder" else tmp_path / "none" / "x.sqlite"
    for arguments in (("import", sheet), ("check",)):
        status, _, err = run(*arguments, "--catalog", path)
        assert status == 2
        assert len(err.strip().splitlines()) == 1


@pytest.mark.skipif(as_root, reason="root may write read-only files")
def test_a_read_only_file(run, sheet, catalog_file, tmp_path):
    run("import", sheet)
    catalog_file.chmod(0o444)
    other = tmp_path / "other.csv"
    other.write_text(TABLE.replace("PUFFIN", "AUK"), encoding="utf-8")
    status, _, err = run("import", other)
    assert status == 2
    assert "read-only" in err
    assert run("show", "PUFFIN-A")[0] == 0


def test_a_reader_cannot_write(run, sheet, catalog_file):
    run("import", sheet)
    with (
        Catalog.open(catalog_file) as catalog,
        pytest.raises(CatalogError, match="can't be written"),
    ):
        catalog.remove(["PUFFIN-A"])


def test_a_locked_catalog_is_said_to_be_locked(run, sheet, catalog_file, monkeypatch):
    run("import", sheet)
    monkeypatch.setattr("motorfolio.catalog.store.database.BUSY_SECONDS", 0.05)
    other = sqlite3.connect(catalog_file, isolation_level=None)
    other.execute("BEGIN EXCLUSIVE")
    status, _, err = run("show", "PUFFIN-A")
    other.execute("ROLLBACK")
    other.close()
    assert status == 2
    assert "locked" in err
    assert run("show", "PUFFIN-A")[0] == 0


def test_a_full_disk_changes_nothing(run, sheet, catalog_file, tmp_path, monkeypatch):
    """A page limit gives the very error of a full disk (SQLITE_FULL)."""
    run("import", sheet)
    before = _dump(catalog_file)
    other = tmp_path / "other.csv"
    rows = "\n".join(TABLE.splitlines()[1].replace("PUFFIN-A", f"AUK-{i}") for i in range(3000))
    other.write_text(TABLE.splitlines()[0] + "\n" + rows, encoding="utf-8")
    original = Catalog.begin

    def begin(self):
        self.connection.execute("PRAGMA max_page_count = 120")
        original(self)

    monkeypatch.setattr(Catalog, "begin", begin)
    status, _, err = run("import", other)
    assert status == 2
    assert "disk is full" in err
    assert _dump(catalog_file) == before


def _dump(path):
    connection = sqlite3.connect(path)
    lines = list(connection.iterdump())
    connection.close()
    return lines


def test_an_empty_file_becomes_a_catalog_but_holds_none(run, sheet, catalog_file):
    catalog_file.touch()
    status, _, err = run("check")
    assert status == 2
    assert "no catalog" in err
    assert run("import", sheet)[0] == 0
    assert run("check")[0] == 0


def test_two_imports_at_once_are_both_stored(run, tmp_path, catalog_file):
    files = []
    for i in range(4):
        path = tmp_path / f"{i}.csv"
        path.write_text(TABLE.replace("PUFFIN", f"AUK{i}"), encoding="utf-8")
        files.append(path)
    code = "import sys; from motorfolio.catalog.cli import main; sys.exit(main(sys.argv[1:]))"
    processes = [
        subprocess.Popen(
            [sys.executable, "-c", code, "import", str(path), "--catalog", str(catalog_file)],
            stdout=subprocess.DEVNULL, stderr=subprocess.PIPE,
        )
        for path in files
    ]  # fmt: skip
    for process in processes:
        _, err = process.communicate(timeout=120)
        assert (process.returncode, err) == (0, b"")
    assert json.loads(run("check", "--json")[1])["motors"] == 12


def test_a_killed_import_leaves_the_catalog_whole(run, sheet, tmp_path, catalog_file):
    run("import", sheet)
    rows = "\n".join(TABLE.splitlines()[1].replace("PUFFIN-A", f"AUK-{i}") for i in range(400))
    other = tmp_path / "other.csv"
    other.write_text(TABLE.splitlines()[0] + "\n" + rows, encoding="utf-8")
    code = (
        "import os, sys, signal\n"
        "from motorfolio.catalog.cli import main\n"
        "from motorfolio.catalog.store import columns\n"
        # pages are written before the commit when the cache is small, so that a journal is left
        "import motorfolio.catalog.store.database as d\n"
        "d.CACHE_KIBIBYTES = 16\n"
        "columns.rebuild = lambda *_: os.kill(os.getpid(), signal.SIGKILL)\n"
        "main(sys.argv[1:])\n"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, "import", str(other), "--catalog", str(catalog_file)],
        capture_output=True, check=False,
    )  # fmt: skip
    assert done.returncode == -9
    journal = catalog_file.with_name(catalog_file.name + "-journal")
    assert journal.exists()
    assert json.loads(run("check", "--json")[1])["motors"] == 3
    assert not journal.exists()
    connection = sqlite3.connect(catalog_file)
    assert connection.execute("PRAGMA integrity_check").fetchone() == ("ok",)
    connection.close()
