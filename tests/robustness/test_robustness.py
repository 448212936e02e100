"""A share of the long runs, and what a disk or another program may do to a catalog."""

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

ROOT = Path(__file__).parents[2]
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


# ---- files of others


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
