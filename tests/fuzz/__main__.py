"""``python -m tests.fuzz --inputs N --seed S``: 1 in 500 inputs is a file, 1 in 200 a table."""

from __future__ import annotations

import argparse
import re
import sys
import time
from collections import defaultdict
from pathlib import Path
from random import Random

from .files import draw_file, try_file
from .guard import Fault, run
from .headings import try_heading
from .texts import try_text

TARGETS = {"texts": try_text, "tables": try_heading, "files": try_file}


def shares(inputs: int) -> dict[str, int]:
    """How many inputs go where."""
    files, tables = max(1, inputs // 500), max(1, inputs // 200)
    return {"texts": max(1, inputs - files - tables), "tables": tables, "files": files}


def main() -> int:
    parser = argparse.ArgumentParser(prog="python -m tests.fuzz", description=__doc__)
    parser.add_argument("--inputs", type=int, default=20_000)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--only", choices=tuple(TARGETS))
    parser.add_argument("--failures", type=Path, help="folder for the files that failed")
    options = parser.parse_args()
    counts = {options.only: options.inputs} if options.only else shares(options.inputs)
    total = 0
    for name, count in counts.items():
        start = time.monotonic()
        faults = run(TARGETS[name], options.seed * 1_000_000_000, count)
        seconds = time.monotonic() - start
        print(f"{name}: {count} inputs, {len(faults)} faults, {seconds:.0f} s")
        total += len(faults)
        _show(faults)
        if name == "files" and options.failures is not None:
            _save(faults, options.failures)
    return 1 if total else 0


def _show(faults: list[Fault]) -> None:
    kinds: dict[tuple[str, str], list[Fault]] = defaultdict(list)
    for fault in faults:
        last = fault.detail.strip().splitlines()[-1]
        kinds[fault.kind, re.sub(r"[\d'\"].*", "", last[:60])].append(fault)
    for (kind, _), found in sorted(kinds.items(), key=lambda x: -len(x[1]))[:20]:
        print(f"  {kind}: {len(found)}, seed {found[0].seed}\n    {found[0].detail[:1200]}")


def _save(faults: list[Fault], folder: Path) -> None:
    folder.mkdir(parents=True, exist_ok=True)
    for fault in faults:
        extension, content = draw_file(Random(fault.seed))
        (folder / f"{fault.seed}.{extension}").write_bytes(content)


if __name__ == "__main__":
    sys.exit(main())
