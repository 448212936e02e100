"""Writers and readers at one catalog at once: nobody is turned away, nothing is lost.

    python -m tests.robustness.crowd [--seconds 60] [--writers 2] [--readers 10]

Writers import sheets of their own, correct motors of them, and take every fourth import back;
readers show, check and search all the while. No call may fail, a reader must see a catalog as one
of the commits left it, and at the end every motor and correction that a writer was told to be
stored must be there.
"""

from __future__ import annotations

import argparse
import json
import os
import shutil
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

from motorfolio.catalog.store import Catalog

from .sheets import digest, done, fork, sheet

MOTORS = 12
SEARCH = ("search", "--torque", "20 mN·m", "--speed", "1500 rpm", "--supply", "24 V", "--json")


def write(path: Path, folder: Path, writer: int, end: float) -> dict[str, list[str]]:
    """Imports, corrects and takes back until the time is over; what must be there, what not."""
    there: dict[str, list[str]] = {"motors": [], "corrected": [], "gone": []}
    number = 0
    while time.monotonic() < end or number < 2:
        name = f"W{writer}N{number}"
        table = sheet(folder / f"{name}.csv", name, MOTORS)
        done("import", table, "--catalog", path)
        if number % 4 == 3:
            with Catalog.open(path, write=True) as catalog:
                mine = next(i.id for i in catalog.imports() if i.files == (str(table),))
            done("undo", str(mine), "--catalog", path)
            there["gone"].append(f"{name}-0")
        else:
            done("correct", f"{name}-1", "mass", "77 g", "--reason", "weighed", "--catalog", path)
            there["motors"] += [f"{name}-{i}" for i in range(MOTORS)]
            there["corrected"].append(f"{name}-1")
        number += 1
    return there


def read(path: Path, reader: int, end: float) -> int:
    """Asks until the time is over; how many times."""
    count = 0
    while time.monotonic() < end or count < 3:
        kind = (reader + count) % 3
        if kind == 0:
            shown = json.loads(done("show", f"BASE-{count % MOTORS}", "--json", "--catalog", path))
            assert shown["part_number"] == f"BASE-{count % MOTORS}"
        elif kind == 1:
            told = json.loads(done("check", "--json", "--catalog", path, status=(0, 1)))
            # a sheet is there as a whole or not at all
            assert told["motors"] % MOTORS == 0, told["motors"]
        else:
            json.loads(done(*SEARCH, "--catalog", path, status=(0, 1)))
        count += 1
    return count


def child(work: Callable[[], object], answer: Path) -> int:
    """Run ``work`` in a child that leaves its result in a file; its process number."""

    def run() -> int:
        answer.write_text(json.dumps(work()), encoding="utf-8")
        return 0

    return fork(run)


def crowd(folder: Path, seconds: float, writers: int, readers: int) -> str:
    """Let them loose; what happened, or AssertionError."""
    path = folder / "c.sqlite"
    done("import", sheet(folder / "base.csv", "BASE", MOTORS), "--catalog", path)
    warm = folder / "warm.sqlite"
    shutil.copyfile(path, warm)
    write(warm, folder, 99, 0)
    read(warm, 0, 0)
    end = time.monotonic() + seconds
    answers = {
        child(lambda w=w: write(path, folder, w, end), folder / f"w{w}"): folder / f"w{w}"
        for w in range(writers)
    } | {
        child(lambda r=r: read(path, r, end), folder / f"r{r}"): folder / f"r{r}"
        for r in range(readers)
    }
    failed = [pid for pid in answers if os.waitpid(pid, 0)[1] != 0]
    assert not failed, f"{len(failed)} of the processes failed"
    told = [json.loads(answer.read_text(encoding="utf-8")) for answer in answers.values()]
    wrote, asked = told[:writers], told[writers:]
    assert digest(path)
    with Catalog.open(path) as catalog:
        motors = {m["part_number"] for m in catalog.motors()}
        corrected = {c.part_number for c in catalog.corrections()}
    for writer in wrote:
        assert set(writer["motors"]) <= motors, "a stored motor is not there"
        assert set(writer["corrected"]) <= corrected, "a correction is not there"
        assert not set(writer["gone"]) & motors, "a motor of an import taken back is there"
    assert len(motors) == MOTORS + sum(len(w["motors"]) for w in wrote)
    imports = sum(len(w["corrected"]) + len(w["gone"]) for w in wrote)
    return (
        f"{writers} writers made {imports} imports, {len(corrected)} corrections and "
        f"{sum(len(w['gone']) for w in wrote)} undos while {readers} readers asked "
        f"{sum(asked)} times; none was turned away, nothing was lost"
    )


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--seconds", type=float, default=60)
    parser.add_argument("--writers", type=int, default=2)
    parser.add_argument("--readers", type=int, default=10)
    told = parser.parse_args()
    with tempfile.TemporaryDirectory() as folder:
        print(crowd(Path(folder), told.seconds, told.writers, told.readers))
    return 0


if __name__ == "__main__":
    sys.exit(main())
