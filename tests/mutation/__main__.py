"""``python -m tests.mutation``: the sample, its score, and what survived."""

import argparse
import json
import os
import secrets
import sys
import tempfile
from functools import partial
from pathlib import Path

from . import report, trial
from .covering import Covering, files, learn
from .mutants import ROOT, Mutant, operators, sample

LONG = 86_400.0
"""Seconds that no part of a run takes."""


def main() -> None:
    parser = argparse.ArgumentParser(prog="python -m tests.mutation", description=__doc__)
    parser.add_argument("--sample", type=int, default=800, help="mutants, at least [800]")
    parser.add_argument("--seed", type=int, help="of the sample [a fresh one]")
    parser.add_argument("--only", help="part of a module's path: only its mutants")
    parser.add_argument("--workers", type=int, default=1)
    parser.add_argument("--results", type=Path, help="file for all outcomes, as JSON lines")
    parser.add_argument("--write", action="store_true", help="write docs/mutation.md")
    chosen = parser.parse_args()
    os.chdir(ROOT)
    seed = secrets.randbelow(1_000_000) if chosen.seed is None else chosen.seed
    trial.load_libraries()
    operators()  # all that is imported is imported before the first fork
    learning = [trial.Fork(partial(learn, files()[k :: chosen.workers]))
                for k in range(chosen.workers)]  # fmt: skip
    mutants, places = sample(chosen.sample, seed)
    if chosen.only:
        mutants = [mutant for mutant in mutants if chosen.only in mutant.module]
    print(f"{len(mutants)} mutants, seed {seed}", flush=True)
    covering = Covering()
    for part in learning:
        status, learnt = part.wait(LONG)
        if status != 0:
            sys.exit("the tests can't be run")
        covering.add(learnt)
    if covering.failed:
        sys.exit(f"without any mutant these fail: {', '.join(covering.failed)}")
    total = sum(covering.seconds.values())
    print(f"{len(covering.seconds)} tests in {total:.0f} s", flush=True)
    rows = _outcomes(mutants, covering, chosen.workers, chosen.results)
    tests = len(covering.seconds)
    page = report.page(rows, places, seed=seed, tests=tests)
    if chosen.write:
        report.PAGE.write_text(page, encoding="utf-8")
    else:
        print(page)


def _outcomes(
    mutants: list[Mutant], covering: Covering, workers: int, path: Path | None
) -> list[report.Row]:
    """The rows of all mutants that change something, in any order; kept in a file by the way."""
    known = {mutant.name: mutant for mutant in mutants}
    with tempfile.TemporaryDirectory() as folder:
        results = path or Path(folder) / "results"

        def told(mutant: Mutant, found: str) -> None:
            row = report.Row(mutant, found, len(covering.tests_of(mutant)))
            with results.open("a", encoding="utf-8") as lines:
                lines.write(json.dumps(row.as_json()) + "\n")

        def read() -> list[report.Row]:
            lines = results.read_text(encoding="utf-8").splitlines() if results.exists() else []
            return [report.Row(known[row["name"]], row["outcome"], row["tests"])
                    for row in map(json.loads, lines) if row["name"] in known]  # fmt: skip

        done = {row.mutant.name for row in read()}
        left = [mutant for mutant in mutants if mutant.name not in done]
        slow = [mutant for mutant in left if covering.at_import(mutant)]
        quick = [mutant for mutant in left if mutant not in slow]
        sound = trial.Fork(partial(trial.all_pass, covering))
        running = [trial.Fork(partial(trial.calling, quick[k::workers], covering, told))
                   for k in range(workers)]  # fmt: skip
        for mutant in slow:
            told(mutant, trial.importing(mutant, covering))
        for worker in running:
            if worker.wait(LONG)[0] != 0:
                sys.exit("a worker has failed")
        rows = read()
        for row in rows:
            if row.outcome == trial.ELSEWHERE:
                told(row.mutant, trial.importing(row.mutant, covering))
        if sound.wait(LONG) != (0, trial.SURVIVED):
            sys.exit("the tests fail, in the order of their time, without any mutant")
        return [row for row in read() if row.outcome not in (trial.VOID, trial.ELSEWHERE)]


if __name__ == "__main__":
    main()
