"""Do the bounds of the dependencies hold, on every Python that is here?

    python -m tests.supply.bounds [python3.11 python3.12 …]

Two environments for the first Python (the lowest direct dependencies that pyproject.toml allows,
and the newest), one with the newest for each of the others. In each the quick tests run, and the
samples are imported and exported: all must give the same JSON to 12 significant digits.
"""

from __future__ import annotations

import json
import re
import subprocess
import sys
import tempfile
from pathlib import Path

from .project import (
    SAMPLES,
    build,
    copy_of_project,
    environment,
    run,
    test_tools,
)  # fmt: skip

DIRECT = ("click", "lxml", "numpy", "pint", "pydantic", "pypdfium2", "python-calamine",
          "rapidfuzz", "rich", "sqlite-utils", "matplotlib", "pyarrow")  # fmt: skip
QUICK = (
    "tests/schema/test_units.py", "tests/schema/test_figure.py", "tests/schema/test_thermal.py",
    "tests/tables", "tests/catalog", "tests/search/test_commands.py", "tests/test_api.py",
)  # fmt: skip
DIGITS = 12


def rounded(value: object) -> object:
    """The same document with its numbers to 12 significant digits, without times and paths."""
    if isinstance(value, float):
        return float(f"{value:.{DIGITS - 1}e}")
    if isinstance(value, dict):
        return {key: rounded(part) for key, part in value.items() if key not in ("at", "file")}
    if isinstance(value, list):
        return [rounded(part) for part in value]
    return value


def documents(python: Path, project: Path, folder: Path) -> object:
    """All documents of a catalog of the samples, and what one search gives."""
    program, catalog = python.parent / "motorfolio", folder / "c.sqlite"
    files = [project / "sample_entries" / name for name in SAMPLES]
    run(program, "import", *files, "--catalog", catalog)
    exported = run(program, "export", "--format", "json", "--catalog", catalog)
    machine = project / "sample_entries" / "machines" / "lift_axis.toml"
    found = run(program, "search", "--requirement", machine, "--json", "--catalog", catalog)
    return rounded([json.loads(exported), json.loads(found)])


def main() -> int:
    pythons = sys.argv[1:] or [sys.executable]
    runs = [(pythons[0], "lowest-direct"), *((python, "highest") for python in pythons)]
    outcome: list[tuple[str, object]] = []
    failed = False
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        tool = environment(folder / "tools", sys.executable, "uv", "build")
        copy = copy_of_project(folder / "project")
        wheel = next(p for p in build(tool, copy, folder / "dist") if p.suffix == ".whl")
        for number, (python, resolution) in enumerate(runs):
            here = folder / str(number)
            inside = environment(here / "venv", python)
            pip = (tool.parent / "uv", "pip")
            wanted = ("--all-extras", "--resolution", resolution, "-r", copy / "pyproject.toml")
            run(*pip, "install", "--python", inside, *wanted)
            run(*pip, "install", "--python", inside, "--no-deps", wheel)
            kept = here / "kept.txt"
            frozen = run(*pip, "freeze", "--python", inside)
            kept.write_text(re.sub(r"(?m)^motorfolio.*\n", "", frozen), encoding="utf-8")
            run(*pip, "install", "--python", inside, "--constraint", kept, *test_tools())
            versions = dict(line.split("==") for line in frozen.splitlines() if "==" in line)
            title = f"Python {run(inside, '--version').split()[1]}, {resolution}"
            print(title + ":", ", ".join(f"{d} {versions[d]}" for d in DIRECT), flush=True)
            outcome.append((title, documents(inside, copy, here)))
            tests = subprocess.run(
                [inside, "-m", "pytest", "-q", "-p", "no:cacheprovider", *QUICK],
                cwd=copy, capture_output=True, text=True, check=False,
            )  # fmt: skip
            print("  " + (tests.stdout.splitlines() or ["no output"])[-1], flush=True)
            if tests.returncode:
                failed = True
                print(tests.stdout[-4000:], tests.stderr[-2000:])
    for title, documents_of in outcome[1:]:
        same = documents_of == outcome[0][1]
        failed |= not same
        print(f"{title}: {'the same' if same else 'ANOTHER'} JSON as {outcome[0][0]}")
    return failed


if __name__ == "__main__":
    sys.exit(main())
