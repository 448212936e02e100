"""A share of the long runs, and what a disk or an earlier layout may do to a catalog."""

from __future__ import annotations

import os
import resource
import shutil
import signal
import sqlite3
import subprocess
import sys
from pathlib import Path

import pytest

from motorfolio.catalog.store import Catalog
from motorfolio.catalog.store.database import APPLICATION_ID, VERSION

from .sheets import call, digest, done, sheet

HERE = Path(__file__).parent
ROOT = HERE.parent.parent
PROGRAM = "import sys; from motorfolio.catalog.cli import main; sys.exit(main(sys.argv[1:]))"


def long_run(module: str, *words: str) -> str:
    """A short share of a long run, in a process of one thread, from which forking is safe."""
    done = subprocess.run(
        [sys.executable, "-W", "error", "-m", f"tests.robustness.{module}", *words],
        cwd=ROOT, env={**os.environ, "OPENBLAS_NUM_THREADS": "1"},
        capture_output=True, text=True, check=False, timeout=600,
    )  # fmt: skip
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


def test_killed_calls_are_whole_or_absent() -> None:
    """Dozens of kills; `python -m tests.robustness.kills` makes a thousand."""
    assert "42 kills, 0 failed" in long_run("kills", "--kills", "42", "--seed", "7")


def test_a_crowd_loses_nothing_and_nobody_is_turned_away() -> None:
    assert "nothing was lost" in long_run("crowd", "--seconds", "3")


def test_a_correction_made_while_an_import_reads_is_not_passed_over(
    catalog: Path, tmp_path: Path, monkeypatch
) -> None:
    """The sheet comes again, a little changed; meanwhile someone corrects AUK-2."""
    again = tmp_path / "again.csv"
    text = (tmp_path / "auk.csv").read_text(encoding="utf-8")
    again.write_text(text.replace("AUK-5,", "AUK-5b,"), encoding="utf-8")
    original = Catalog.begin
    changes: list[str] = []

    def begin(self: Catalog) -> None:
        if not changes:
            changes.append("AUK-2")
            done("correct", "AUK-2", "mass", "66 g", "--reason", "weighed", "--catalog", catalog)
        original(self)

    monkeypatch.setattr(Catalog, "begin", begin)
    status, _, err = call("import", again, "--catalog", catalog)
    assert status == 2
    assert "import it again" in err
    assert call("import", again, "--catalog", catalog)[0] == 0
    assert '"66 g"' in done("show", "AUK-2", "--json", "--catalog", catalog)


# ---- disks


@pytest.fixture
def catalog(tmp_path: Path) -> Path:
    path = tmp_path / "c.sqlite"
    done("import", sheet(tmp_path / "auk.csv", "AUK", 12), "--catalog", path)
    done("correct", "AUK-1", "mass", "77 g", "--reason", "weighed", "--catalog", path)
    return path


CHANGES = (
    ("import", "{more}"),
    ("correct", "AUK-2", "mass", "88 g", "--reason", "weighed"),
    ("undo",),
    ("remove", "AUK-3"),
)


def child(words: list[str], *before: str, limit: int | None = None):
    """Run a command in a new process, at most ``limit`` bytes a file."""

    def hold() -> None:
        if limit is not None:
            signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
            resource.setrlimit(resource.RLIMIT_FSIZE, (limit, limit))

    return subprocess.run(
        [*before, sys.executable, "-B", "-c", PROGRAM, *words],
        capture_output=True, text=True, check=False, preexec_fn=hold,
    )  # fmt: skip


def refused(answer: subprocess.CompletedProcess[str]) -> str:
    """The one sentence that a refused call ends with."""
    assert answer.returncode == 2, answer.stdout + answer.stderr
    lines = answer.stderr.strip().splitlines()
    assert len(lines) == 1, answer.stderr
    assert lines[0].startswith("motorfolio: ")
    assert "locked" not in lines[0]
    return lines[0]


def said(words: tuple[str, ...], more: Path, catalog: Path) -> list[str]:
    return [word.format(more=more) for word in words] + ["--catalog", str(catalog)]


@pytest.mark.parametrize("words", CHANGES, ids=lambda w: w[0])
@pytest.mark.parametrize("mode", ["file", "folder"])
def test_what_may_not_be_written_is_left_alone(catalog: Path, words, mode: str) -> None:
    """Without the right to overrule file modes, which root has and may give up."""
    plain_user: tuple[str, ...] = ()
    if os.geteuid() == 0:
        if shutil.which("setpriv") is None:
            pytest.skip("root may write anything, and setpriv is not here")
        plain_user = ("setpriv", "--bounding-set", "-dac_override,-dac_read_search")
    more = sheet(catalog.parent / "more.csv", "COOT", 12)
    before = digest(catalog)
    catalog.chmod(0o444 if mode == "file" else 0o644)
    catalog.parent.chmod(0o755 if mode == "file" else 0o555)
    try:
        sentence = refused(child(said(words, more, catalog), *plain_user))
        shown = child(["show", "AUK-1", "--catalog", str(catalog)], *plain_user)
    finally:
        catalog.parent.chmod(0o755)
    assert "can't be" in sentence
    assert shown.returncode == 0, shown.stderr
    assert digest(catalog) == before


@pytest.mark.parametrize("words", CHANGES, ids=lambda w: w[0])
@pytest.mark.parametrize("spare", [0, 3])
def test_a_file_that_may_not_grow_stays_as_it_is(catalog: Path, words, spare: int) -> None:
    """A quota of the process: no file may grow beyond the catalog's size and some pages."""
    more = sheet(catalog.parent / "more.csv", "COOT", 400)
    before = digest(catalog)
    answer = child(said(words, more, catalog), limit=catalog.stat().st_size + spare * 4096)
    if answer.returncode == 0:
        # what fits may be done, but then as a whole
        assert words[0] != "import"
        assert digest(catalog) != before
    else:
        refused(answer)
        assert digest(catalog) == before


def test_a_full_disk_keeps_what_it_has(catalog: Path, tmp_path: Path) -> None:
    """A disk of 1 MB, for those who may mount one."""
    disk = tmp_path / "disk"
    disk.mkdir()
    mounted = subprocess.run(
        ["mount", "-t", "tmpfs", "-o", "size=1m", "tmpfs", str(disk)],
        capture_output=True, check=False,
    )  # fmt: skip
    if mounted.returncode:
        pytest.skip("mounting a small disk is not allowed here")
    try:
        there = disk / "c.sqlite"
        shutil.copyfile(catalog, there)
        before = digest(there)
        more = sheet(tmp_path / "more.csv", "COOT", 1500)
        sentence = refused(child(["import", str(more), "--catalog", str(there)]))
        assert "disk is full" in sentence
        assert digest(there) == before
        assert child(["show", "AUK-1", "--catalog", str(there)]).returncode == 0
        new = refused(child(["import", str(more), "--catalog", str(disk / "new.sqlite")]))
        assert "full" in new
        assert digest(disk / "new.sqlite") == ""
    finally:
        subprocess.run(["umount", str(disk)], check=True)


# ---- layouts


@pytest.mark.parametrize("version", range(1, VERSION))
def test_an_earlier_layout_is_upgraded(tmp_path: Path, version: int) -> None:
    """Each earlier layout is kept as SQL text by keep_layout.py; opening it upgrades it."""
    path = old_catalog(tmp_path, version)
    document = done("show", "PETREL-1", "--json", "--catalog", path)
    assert '"99 g"' in document
    connection = sqlite3.connect(path)
    assert connection.execute("PRAGMA user_version").fetchone() == (VERSION,)
    wanted = tmp_path / "new.sqlite"
    sheet_again = sheet(tmp_path / "petrel.csv", "PETREL", 3)
    done("import", sheet_again, "--maker", "Petrel Motors (invented)", "--catalog", wanted)
    other = sqlite3.connect(wanted)
    for kind in ("table", "view", "index", "trigger"):
        names = "SELECT name FROM sqlite_master WHERE type = ? ORDER BY name"
        assert connection.execute(names, (kind,)).fetchall() == (
            other.execute(names, (kind,)).fetchall()
        )
    for name in columns_of(other):
        assert set(columns_of(other)[name]) <= set(columns_of(connection)[name])
    other.close()
    connection.close()
    assert call("import", sheet_again, "--catalog", path)[0] == 0
    assert call("undo", "--catalog", path)[0] == 0
    digest(path)


def old_catalog(folder: Path, version: int) -> Path:
    path = folder / "old.sqlite"
    connection = sqlite3.connect(path)
    connection.executescript((HERE / f"layout_{version}.sql").read_text(encoding="utf-8"))
    assert connection.execute("PRAGMA user_version").fetchone() == (version,)
    connection.close()
    return path


def columns_of(connection: sqlite3.Connection) -> dict[str, list[str]]:
    tables = connection.execute("SELECT name FROM sqlite_master WHERE type = 'table'").fetchall()
    return {
        name: [row[1] for row in connection.execute(f'PRAGMA table_info("{name}")')]
        for (name,) in tables
    }


def test_an_upgrade_that_fails_leaves_the_earlier_layout(tmp_path: Path, monkeypatch) -> None:
    """One transaction: the last step fails after all others were done."""
    path = old_catalog(tmp_path, 1)
    before = digest(path)

    def fail(_db: object) -> None:
        raise sqlite3.OperationalError("made up")

    with monkeypatch.context() as patched:
        patched.setattr("motorfolio.catalog.store.layout._make_views", fail)
        status, _, err = call("check", "--catalog", path)
    assert (status, len(err.strip().splitlines())) == (2, 1)
    assert digest(path) == before
    assert call("check", "--catalog", path)[0] in (0, 1)
    assert digest(path) != before


@pytest.mark.parametrize("words", [("show", "AUK-1"), *CHANGES], ids=lambda w: w[0])
@pytest.mark.parametrize("kind", ["newer", "foreign", "foreign with a version", "text"])
def test_other_files_are_refused_and_not_touched(tmp_path: Path, words, kind: str) -> None:
    path, more = tmp_path / "c.sqlite", sheet(tmp_path / "more.csv", "COOT", 3)
    if kind == "text":
        path.write_text("Dear diary, no catalog today.\n" * 40, encoding="utf-8")
    else:
        connection = sqlite3.connect(path)
        connection.execute("CREATE TABLE birds(name)")
        if kind == "newer":
            connection.execute(f"PRAGMA application_id = {APPLICATION_ID}")
        if kind != "foreign":
            connection.execute(f"PRAGMA user_version = {VERSION + 1}")
        connection.commit()
        connection.close()
    before, modified = path.read_bytes(), path.stat().st_mtime_ns
    status, _, err = call(*said(words, more, path))
    assert status == 2
    wanted = {"newer": "newer motorfolio", "text": "not a readable catalog"}
    assert wanted.get(kind, "another program") in err
    assert (path.read_bytes(), path.stat().st_mtime_ns) == (before, modified)
    assert not list(tmp_path.glob("c.sqlite-*"))
