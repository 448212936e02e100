"""Calls killed at random moments: the catalog stays readable, the effect is whole or absent.

    python -m tests.robustness.kills [--kills 1000] [--seed 1]

Every trial works on a copy of a small catalog: a child, forked from this process (which has all
modules loaded), imports, corrects, takes an import back or upgrades an earlier layout, and gets
SIGKILL at a random moment, counted from its start or from the beginning of its transaction. In
half of the trials SQLite's page cache is tiny, so that pages reach the file before the commit and
a journal has to be rolled back. Only a child that did die by the signal counts.
"""

from __future__ import annotations

import argparse
import os
import random
import shutil
import signal
import sqlite3
import sys
import tempfile
import time
from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from motorfolio.catalog.store import Catalog, database

from ..catalog.layouts import restore
from .sheets import digest, done, fork, sheet

TINY_KIBIBYTES = 8


@dataclass
class Action:
    """A call on the copy of a catalog; ``whole`` is the digest after it, ``absent`` before."""

    name: str
    start: Path | None
    run: Callable[[Path], object]
    absent: str = ""
    whole: str = ""
    seconds: float = 0.0
    seconds_writing: float = 0.0


def actions(folder: Path) -> list[Action]:
    """The calls, each with its two allowed outcomes and how long it takes unharmed."""
    base, old = folder / "base.sqlite", folder / "old.sqlite"
    done("import", sheet(folder / "a.csv", "AUK", 20), "--catalog", base)
    done("import", sheet(folder / "b.csv", "BOOBY", 8), "--catalog", base)
    done("correct", "AUK-3", "mass", "99 g", "--reason", "weighed", "--catalog", base)
    restore(1, old)
    more = sheet(folder / "c.csv", "COOT", 40)
    again = sheet(folder / "a2.csv", "AUK", 30, first=10)
    made = [
        Action("first import", None, lambda c: done("import", more, "--catalog", c)),
        Action("import", base, lambda c: done("import", more, "--catalog", c)),
        Action("import of revisions", base, lambda c: done("import", again, "--catalog", c)),
        Action("correct", base, lambda c: done(
            "correct", "AUK-5", "torque_constant", "31 mN·m/A", "--reason", "measured",
            "--catalog", c)),
        Action("undo", base, lambda c: done("undo", "1", "--catalog", c)),
        Action("remove", base, lambda c: Catalog.open(c, write=True).remove(["AUK-7", "BOOBY-1"])),
        Action("upgrade", old, lambda c: done("check", "--catalog", c, status=(0, 1))),
    ]  # fmt: skip
    for action in made:
        times = []
        for _ in range(3):
            path = copy(action, folder / "trial.sqlite")
            action.absent = digest(path)
            pid, began = start(action, path, tiny=False)
            times.append(unharmed(pid, began))
            action.whole = digest(path)
        assert action.whole != action.absent, action.name
        action.seconds = sorted(t[0] for t in times)[1]
        action.seconds_writing = sorted(t[1] for t in times)[1]
    return made


def copy(action: Action, path: Path) -> Path:
    """A fresh copy of the catalog that the action works on; none for a first import."""
    journal(path).unlink(missing_ok=True)
    path.unlink(missing_ok=True)
    if action.start is not None:
        shutil.copyfile(action.start, path)
    return path


def journal(path: Path) -> Path:
    """Where SQLite keeps what it needs to roll a catalog back."""
    return path.with_name(path.name + "-journal")


def start(action: Action, path: Path, *, tiny: bool) -> tuple[int, int]:
    """The action in a child: its process number, and a pipe that tells when its transaction
    begins."""
    told, tell = os.pipe()

    def work() -> int:
        os.close(told)
        original = Catalog.begin

        def begin(self: Catalog) -> None:
            os.write(tell, b"x")
            original(self)

        Catalog.begin = begin  # type: ignore[method-assign]
        if tiny:
            database.CACHE_KIBIBYTES = TINY_KIBIBYTES
        action.run(path)
        return 0

    pid = fork(work)
    os.close(tell)
    return pid, told


def unharmed(pid: int, began: int) -> tuple[float, float]:
    """Wait for a child that is left alone: seconds in all, and from its transaction on."""
    first = time.monotonic()
    os.read(began, 1)
    middle = time.monotonic()
    _, status = os.waitpid(pid, 0)
    os.close(began)
    assert status == 0, f"ended with {status}"
    return time.monotonic() - first, time.monotonic() - middle


def kill(action: Action, path: Path, rng: random.Random) -> str:
    """One trial: 'absent', 'whole', 'not killed'; AssertionError if neither or unreadable."""
    copy(action, path)
    pid, began = start(action, path, tiny=rng.random() < 0.5)
    if rng.random() < 0.3:
        time.sleep(rng.uniform(0, 1.1 * action.seconds))
    else:
        os.read(began, 1)
        time.sleep(rng.uniform(0, 1.1 * action.seconds_writing))
    os.kill(pid, signal.SIGKILL)
    _, status = os.waitpid(pid, 0)
    os.close(began)
    if not os.WIFSIGNALED(status):
        assert status == 0, f"{action.name}: ended with {status}"
        return "not killed"
    hot = journal(path).exists()
    found = digest(path)  # SQLite rolls a journal back as it opens the file
    assert found in (action.absent, action.whole), f"{action.name}: neither whole nor absent"
    if found:
        with Catalog.open(path) as catalog:
            assert sum(1 for _ in catalog.motors()) == len(catalog) > 0
    return ("whole" if found == action.whole else "absent") + (", journal" if hot else "")


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--kills", type=int, default=1000)
    parser.add_argument("--seed", type=int, default=1)
    told = parser.parse_args()
    rng = random.Random(told.seed)
    counts: Counter[tuple[str, str]] = Counter()
    failures: list[str] = []
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        possible = actions(folder)
        killed = 0
        while killed < told.kills:
            action = possible[killed % len(possible)]
            try:
                outcome = kill(action, folder / "trial.sqlite", rng)
            except (AssertionError, sqlite3.Error) as error:
                outcome = "FAILED"
                failures.append(f"kill {killed}, {error}")
            counts[action.name, outcome] += 1
            killed += outcome != "not killed"
    for action in possible:
        said = ", ".join(f"{n} {what}" for (who, what), n in sorted(counts.items())
                         if who == action.name)  # fmt: skip
        print(f"{action.name} ({action.seconds * 1000:.0f} ms): {said}")
    for failure in failures[:20]:
        print(failure)
    print(f"{killed} kills, {len(failures)} failed")
    return bool(failures)


if __name__ == "__main__":
    sys.exit(main())
