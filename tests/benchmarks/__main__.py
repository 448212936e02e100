"""The benchmarks: a table of ratios against baselines of the same run, into docs/benchmarks.md.

    python -m tests.benchmarks [--largest 100000] [--output docs/benchmarks.md]

Times are those of the processor, so that a busy machine tells the same ratios; the wall time
stands beside them. What a user would start is started: a process, from the cold interpreter to the
printed answer. Memory is the largest resident size of that process. Nothing fails here.
"""

from __future__ import annotations

import argparse
import os
import platform
import sqlite3
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import dataclass
from importlib.metadata import version
from pathlib import Path

import numpy as np

from motorfolio.catalog.reading import ReadOptions, read
from motorfolio.catalog.requirement.file import saved
from motorfolio.catalog.requirement.read import read_requirement
from motorfolio.catalog.search.choice import Judge, best_of
from motorfolio.catalog.search.fleet import load_fleet
from motorfolio.catalog.store import Catalog
from motorfolio.catalog.tables import read_tables
from motorfolio.schema.reconcile.run import reconcile

from .baselines import fit_a_motor_at_a_time
from .search import CYCLE, POINT, SQL, best, made, plain_python
from .sheets import columns, sheet

ROOT = Path(__file__).parent.parent.parent
FIRST = """\
import atexit, os, sys
sys.modules['pandas'] = None
def memory():
    with open('/proc/self/status') as told, open(os.environ['MEMORY_TO'], 'w') as out:
        out.write(next(line.split()[1] for line in told if line.startswith('VmHWM')))
atexit.register(memory)
"""
"""What a child runs first. It tells its own largest resident size, as what the system tells the
parent (ru_maxrss) counts the parent's pages too; and it hides pandas, a tool of the tests here,
which sqlite-utils would load: a second more for either side."""
PROGRAM = "import sys; from motorfolio.catalog.cli import main; sys.exit(main(sys.argv[1:]))"
BARE_CLICK = (
    "import sys, click\n"
    "@click.group()\n"
    "def group(): 'A group.'\n"
    "for name in ('import', 'check', 'show', 'search'):\n"
    "    @group.command(name)\n"
    "    def command(): 'A command.'\n"
    "group(['--help'])"
)
SQL_PROCESS = (
    "import sqlite3, sys; c = sqlite3.connect(sys.argv[1])\n"
    "print(c.execute(sys.argv[2], {'w': 314.159265}).fetchall())"
)
ONE_MOTOR = "SELECT * FROM motors WHERE part_number = 'EX-0000500'"
TEXTS = (
    "import sys; from pathlib import Path; from tests.benchmarks.baselines import insert_texts\n"
    "insert_texts(Path(sys.argv[1]), Path(sys.argv[2]))"
)
PINT = (
    "import sys; from pathlib import Path; from tests.benchmarks.baselines import pint_a_cell\n"
    "pint_a_cell(Path(sys.argv[1]), int(sys.argv[2]))"
)


@dataclass
class Run:
    """A process: seconds of processor and of the wall, megabytes of memory at most."""

    cpu: float
    wall: float
    memory: float


def process(code: str, *words: object, rounds: int = 3) -> Run:
    """The fastest of some runs of a Python process; its exit status may be 0 or 1."""
    runs = []
    with tempfile.TemporaryDirectory() as folder:
        told = Path(folder) / "memory"
        surroundings = {**os.environ, "MEMORY_TO": str(told)}
        surroundings.pop("PYTHONDONTWRITEBYTECODE", None)  # an installed program is compiled
        command = [sys.executable, "-c", FIRST + code, *map(str, words)]
        null = os.open(os.devnull, os.O_RDWR)
        files = [(os.POSIX_SPAWN_DUP2, null, stream) for stream in (0, 1, 2)]
        for _ in range(rounds):
            start = time.perf_counter()
            pid = os.posix_spawn(sys.executable, command, surroundings, file_actions=files)
            _, status, used = os.wait4(pid, 0)
            wall = time.perf_counter() - start
            if os.waitstatus_to_exitcode(status) not in (0, 1):
                raise SystemExit(f"a benchmark's process ended with {status}: {words}")
            memory = int(told.read_text(encoding="utf-8")) / 1024
            runs.append(Run(used.ru_utime + used.ru_stime, wall, memory))
        os.close(null)
    return min(runs, key=lambda run: run.cpu)


class Table:
    """Rows of the result, printed as they come."""

    def __init__(self) -> None:
        self.lines = [
            "| work | motors | processor time | wall | memory | baseline | its time | ratio | "
            "target |",
            "| --- | ---: | ---: | ---: | ---: | --- | ---: | ---: | --- |",
        ]

    def add(
        self, work: str, motors: int, run: Run, baseline: str = "", its: float = 0.0,
        target: str = "", faster: bool = False,
    ) -> None:  # fmt: skip
        """faster: the ratio says how many times faster than the baseline, else how many times
        its time."""
        ratio = ""
        if its:
            ratio = f"{its / run.cpu:.3g}× faster" if faster else f"{run.cpu / its:.2f}×"
        self.line(work, f"{motors:,}".replace(",", " ") if motors else "", seconds(run.cpu),
                  seconds(run.wall), f"{run.memory:.0f} MB" if run.memory else "", baseline,
                  seconds(its) if its else "", ratio, target)  # fmt: skip

    def line(self, *cells: str) -> None:
        self.lines.append("| " + " | ".join(cells) + " |")
        print(self.lines[-1], flush=True)


def seconds(t: float) -> str:
    """A time to three digits: 12 ms, 3.41 s."""
    return f"{t * 1000:.3g} ms" if t < 1 else f"{t:.3g} s"


def here(work: Callable[[], object], rounds: int = 1) -> Run:
    """Work done in this process."""
    start = time.perf_counter()
    cpu = best(work, rounds)
    return Run(cpu, (time.perf_counter() - start) / rounds, 0)


def imports(table: Table, folder: Path, largest: int) -> None:
    for motors in (n for n in (1000, 10_000, 100_000, 1_000_000) if n <= max(largest, 10_000)):
        csv_file, catalog = sheet(folder / f"{motors}.csv", motors), folder / "i.sqlite"
        catalog.unlink(missing_ok=True)
        rounds = 1 if motors > 10_000 else 3
        run = Run(np.inf, 0, 0)
        for _ in range(rounds):
            catalog.unlink(missing_ok=True)
            again = process(PROGRAM, "import", csv_file, "--catalog", catalog, rounds=1)
            run = min(run, again, key=lambda r: r.cpu)
        work = "import of a CSV, 25 figures a motor"
        if motors in (10_000, 100_000):
            few, many = (process(PINT, csv_file, n, rounds=2).cpu for n in (50, 550))
            pint = (many - few) / 500 * motors
            table.add(work, motors, run, "pint's parser a cell (500 rows timed)", pint,
                      "≥ 20× faster", faster=True)  # fmt: skip
        else:
            table.add(work, motors, run, target="≤ 500 MB" if motors == 1_000_000 else "")
        if motors == 10_000:
            raw = folder / "raw.sqlite"
            texts = Run(np.inf, 0, 0)
            for _ in range(rounds):
                raw.unlink(missing_ok=True)
                texts = min(texts, process(TEXTS, csv_file, raw, rounds=1), key=lambda r: r.cpu)
            table.add(work, motors, run, "sqlite-utils insert_all of the texts", texts.cpu,
                      "≤ 3×")  # fmt: skip
            show(table, catalog)
        size, printed = catalog.stat().st_size, csv_file.stat().st_size
        table.line("size of that catalog", f"{motors:,}".replace(",", " "), "", "",
                   f"{size / 1e6:.1f} MB", "the CSV", f"{printed / 1e6:.2f} MB",
                   f"{size / printed:.2f}×", "≤ 8×")  # fmt: skip
        reconciling(table, csv_file, motors)
        if motors > 10_000:
            csv_file.unlink()
        catalog.unlink()


def show(table: Table, catalog: Path) -> None:
    """The small commands, on the catalog of ten thousand."""
    bare = process(BARE_CLICK, rounds=9)
    table.add("--help", 0, process(PROGRAM, "--help", rounds=9), "a bare click group", bare.cpu,
              "≤ 1.2×")  # fmt: skip
    query = process(SQL_PROCESS, catalog, ONE_MOTOR, rounds=9)
    shown = process(PROGRAM, "show", "EX-0000500", "--catalog", catalog, rounds=9)
    table.add("show of one motor", 10_000, shown, "a bare sqlite3 query process", query.cpu, "≤ 4×")


def reconciling(table: Table, csv_file: Path, motors: int) -> None:
    if motors > 100_000:
        return
    batches = list(read(read_tables(csv_file, None), ReadOptions()).batches)
    run = here(lambda: [reconcile(batch) for batch in batches], 4 if motors <= 10_000 else 1)
    if motors != 10_000:
        table.add("reconcile, with causes", motors, run)
        return
    some = 200
    start = time.process_time()
    fit_a_motor_at_a_time(columns(motors), some)
    slow = (time.process_time() - start) / some * motors
    table.add("reconcile, with causes", motors, run,
              f"scipy least squares a motor ({some} timed)", slow, "≥ 100× faster",
              faster=True)  # fmt: skip


def searches(table: Table, folder: Path, largest: int) -> None:
    point, cycle = read_requirement(POINT), read_requirement(CYCLE)
    files = {}
    for name, requirement in (("point", point), ("cycle", cycle)):
        files[name] = folder / f"{name}.toml"
        files[name].write_text(saved(requirement), encoding="utf-8")
    for motors in (n for n in (1000, 10_000, 100_000, 1_000_000) if n <= max(largest, 10_000)):
        catalog = made(folder / "s.sqlite", motors)
        rounds = 3 if motors <= 100_000 else 2
        words = ("--catalog", catalog, "--json", "--limit", 20)
        run = process(PROGRAM, "search", "--requirement", files["point"], *words, rounds=rounds)
        sql = process(SQL_PROCESS, catalog, SQL, rounds=rounds)
        table.add("search at a point, cold process", motors, run,
                  "one SQL statement, cold process", sql.cpu,
                  "≤ 3×, ≤ 500 MB" if motors == 1_000_000 else "")  # fmt: skip
        if motors == 100_000:
            run = process(PROGRAM, "search", "--requirement", files["cycle"], *words, rounds=1)
            table.add("search, ten segments, ratio range, cold process", motors, run)
            with Catalog.open(catalog) as opened:
                fleet = load_fleet(opened, cycle)
            ratios = np.geomspace(3, 40, 25)
            vector = here(
                lambda fleet=fleet, ratios=ratios: best_of(
                    Judge(cycle), fleet.machines, ratios, periodic=False
                ),
                2,
            )
            some = fleet.machines.take(np.arange(200))
            slow = here(lambda some=some, ratios=ratios: plain_python(some, cycle, ratios.tolist()))
            table.add("ten segments at 25 ratios", motors, vector,
                      "plain Python a motor (200 timed)", slow.cpu / 200 * motors,
                      "≥ 50× faster", faster=True)  # fmt: skip
        catalog.unlink()


def machine() -> str:
    """What it ran on, without names or paths."""
    model = platform.machine()
    cpuinfo = Path("/proc/cpuinfo")
    if cpuinfo.exists():
        for line in cpuinfo.read_text(encoding="utf-8").splitlines():
            if line.startswith("model name"):
                model = line.partition(":")[2].strip()
                break
    packages = ", ".join(
        f"{name} {version(name)}" for name in ("numpy", "pint", "scipy", "sqlite-utils", "click")
    )
    return (
        f"{os.cpu_count()} processors ({model}), {platform.system()}, "
        f"Python {platform.python_version()}, SQLite {sqlite3.sqlite_version}, {packages}; "
        f"load average when it ended: {os.getloadavg()[0]:.1f}."
    )


INTRODUCTION = """\
# Benchmarks

Written by `make bench`. Each ratio is against a baseline of the same run on the same machine;
times are of the processor, the fastest of some rounds, the wall time is that of the same round.
Commands are whole processes: interpreter, imports (of compiled modules, as an installed program has
them), work and output. Every motor has 25 figures;
3 % of the motors that are imported print a wrong torque constant, so that causes are sought.
Baselines stand in `tests/benchmarks/`.
"""


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--largest", type=int, default=100_000)
    parser.add_argument("--output", type=Path, default=ROOT / "docs" / "benchmarks.md")
    told = parser.parse_args()
    table = Table()
    print("\n".join(table.lines))
    with tempfile.TemporaryDirectory() as name:
        imports(table, Path(name), told.largest)
        searches(table, Path(name), told.largest)
    text = "\n".join([INTRODUCTION, *table.lines, "", machine(), ""])
    told.output.write_text(text, encoding="utf-8")
    return 0


if __name__ == "__main__":
    sys.exit(main())
