"""The examples of a page, executed."""

import contextlib
import io
import os
import re
import shutil
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

from .pages import ROOT, Page, Step

SHEETS = (
    *("brindlewick_10.csv", "brindlewick_22.csv", "quasselbach.csv", "gopher_notch.tsv"),
    *("grisoulette.csv", "wobbleton.csv", "tanuki_hollow.html"),
)
WIDTH = 80
SECONDS = 120
_TIME = re.compile(r"\b\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ")
_FIXED_TIME = "2026-01-31T12:00:00Z"
_MINUTE, _FIXED_MINUTE = re.compile(r"\b\d{4}-\d\d-\d\d \d\d:\d\d\b"), "2026-01-31 12:00"


class FailedError(AssertionError):
    """An example that ended as it must not."""


def environment() -> dict[str, str]:
    """What a command of a page sees: this program first on the path, a fixed width, no colour."""
    kept = {k: v for k, v in os.environ.items() if not k.startswith(("MOTORFOLIO", "_MOTORFOLIO"))}
    return {
        **kept,
        "PATH": os.pathsep.join([str(Path(sys.executable).parent), kept.get("PATH", "")]),
        "COLUMNS": str(WIDTH),
        "LINES": "50",
        "NO_COLOR": "1",
        "TERM": "dumb",
        "LANG": "C.UTF-8",
        "LC_ALL": "C.UTF-8",
        "PYTHONUTF8": "1",
        "PYTHONUNBUFFERED": "1",
    }


def lines_of(text: str) -> list[str]:
    """Output as it is compared: no blanks at the end of a line or of it all, no time of day."""
    timeless = _MINUTE.sub(_FIXED_MINUTE, _TIME.sub(_FIXED_TIME, text))
    kept = [line.rstrip() for line in timeless.split("\n")]
    while kept and not kept[-1]:
        kept.pop()
    while kept and not kept[0]:
        kept.pop(0)
    return kept


def shell(command: str, folder: Path, last_status: int = 0) -> tuple[int, str]:
    """(status, standard output and error as they come) of a command."""
    done = subprocess.run(
        ["/bin/sh", "-c", f"(exit {last_status}); {command}"],
        cwd=folder,
        env=environment(),
        stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        encoding="utf-8",
        timeout=SECONDS,
        check=False,
    )
    return done.returncode, done.stdout


def prepare(folder: Path) -> Path:
    """A folder with the samples, and in it the catalog that pages may start with."""
    shutil.copytree(
        ROOT / "sample_entries",
        folder / "sample_entries",
        ignore=shutil.ignore_patterns("*.py*", "_*"),
    )
    files = " ".join(f"sample_entries/{name}" for name in SHEETS)
    for command in (f"motorfolio import {files}", "motorfolio gears sample_entries/gears.csv"):
        status, said = shell(command, folder)
        if status:
            raise FailedError(f"{command} ended with {status}:\n{said}")
    return folder


@contextlib.contextmanager
def _inside(folder: Path) -> Iterator[io.StringIO]:
    there, out = Path.cwd(), io.StringIO()
    os.chdir(folder)
    try:
        with contextlib.redirect_stdout(out):
            yield out
    finally:
        os.chdir(there)


def run(page: Page, folder: Path, prepared: Path) -> Iterator[tuple[Step, list[str]]]:
    """Execute a page's steps in a fresh folder; gives each with the lines that it printed.

    Raises FailedError where a command ends with a status that the page doesn't announce.
    """
    shutil.copytree(prepared / "sample_entries", folder / "sample_entries")
    if page.wants_catalog:
        shutil.copy(prepared / "motorfolio.sqlite", folder)
    names: dict[str, object] = {"__name__": "__main__"}
    status = 0
    for step in page.steps:
        if step.kind == "python":
            with _inside(folder) as out:
                exec(compile(step.source, str(page.path), "exec"), names)
            yield step, lines_of(out.getvalue())
            continue
        status, said = shell(step.source, folder, status)
        if "Traceback" in said or status not in ((2,) if step.refused else (0, 1)):
            raise FailedError(f"{page.path}: $ {step.source}\nended with {status}:\n{said}")
        yield step, lines_of(said)
