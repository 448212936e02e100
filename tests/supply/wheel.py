"""Builds what is shipped twice, compares it byte by byte, installs it, and uses it from outside.

    python -m tests.supply.wheel [--dist FOLDER] [--bom FILE]

The wheel is built from the sdist; the second time under another folder and another clock. In a
clean environment the installed program imports the samples, and a type checker reads a script
that uses the library as a user would: it must find no fault, and must find a planted one.
``--dist`` keeps what was built; ``--bom`` writes the bill of materials (CycloneDX, JSON) of that
environment.
"""

from __future__ import annotations

import argparse
import hashlib
import json
import os
import shutil
import sys
import tempfile
from pathlib import Path

from .project import SAMPLES, build, copy_of_project, environment, run

SCRIPT = """\
from motorfolio.catalog import MotorCatalog, normalise
from motorfolio.schema.units.read import quantity

motor = normalise({"part_number": "EX-1", "torque_constant": "30 mN·m/A"})
name: str = motor.part_number
value: float = quantity("30 mN·m/A", ("N·m/A",))
print(name, value, MotorCatalog.__name__)
"""
WRONG = SCRIPT.replace("name: str = motor", "name: int = motor")


def typed(checker: Path, python: Path, folder: Path, text: str) -> int:
    """How many faults the type checker finds in a script outside of the project."""
    folder.mkdir()
    script = folder / "outside.py"
    script.write_text(text, encoding="utf-8")
    try:
        said = run(checker, "--pythonpath", python, "--level", "error", "--outputjson", script,
                   cwd=folder)  # fmt: skip
    except RuntimeError as error:
        said = str(error).partition("\n")[2]
    return json.loads(said)["summary"]["errorCount"]


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--dist", type=Path)
    parser.add_argument("--bom", type=Path)
    told = parser.parse_args()
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        tools = ["build", "basedpyright", *(["cyclonedx-bom"] if told.bom else [])]
        tool = environment(folder / "tools", sys.executable, *tools)
        commit, hashes = copy_of_project(folder / "commit"), []
        for number in ("1", "2"):
            project = folder / number / ("x" * int(number))
            shutil.copytree(commit, project)
            for path in project.rglob("*"):
                os.utime(path, (1.7e9 + int(number), 1.7e9 + int(number)))
            built = build(tool, project, folder / number / "dist")
            hashes.append({p.name: hashlib.sha256(p.read_bytes()).hexdigest() for p in built})
        for file, digest in hashes[0].items():
            print(
                f"{file}: {digest[:16]}…",
                "the same twice" if hashes[1][file] == digest else "ANOTHER the second time",
            )
        if told.dist:
            shutil.copytree(built[0].parent, told.dist, dirs_exist_ok=True)
        wheel = next(p for p in built if p.suffix == ".whl")
        clean = environment(folder / "clean", sys.executable, str(wheel))
        samples = [project / "sample_entries" / sample for sample in SAMPLES]
        program, catalog = clean.parent / "motorfolio", folder / "c.sqlite"
        print(run(program, "import", *samples, "--catalog", catalog).splitlines()[-1])
        page = folder / "page.html"
        run(program, "page", "--output", page, "--catalog", catalog)
        print(f"page: {page.stat().st_size} bytes")
        checker = tool.parent / "basedpyright"
        faults = typed(checker, clean, folder / "right", SCRIPT)
        planted = typed(checker, clean, folder / "wrong", WRONG)
        print(run(clean, folder / "right" / "outside.py").strip())
        print(f"types from outside: {faults} faults, {planted} where one was planted")
        if told.bom:
            run(tool.parent / "cyclonedx-py", "environment", "--output-reproducible",
                "--output-file", told.bom.absolute(), clean)  # fmt: skip
            parts = json.loads(told.bom.read_text(encoding="utf-8"))["components"]
            print(f"bill of materials: {len(parts)} parts")
    return not (hashes[0] == hashes[1] and faults == 0 and planted == 1)


if __name__ == "__main__":
    sys.exit(main())
