"""The project as it would be shipped: the last commit, built away from the work tree."""

from __future__ import annotations

import gzip
import io
import os
import shutil
import subprocess
import tarfile
import tomllib
from pathlib import Path

ROOT = Path(__file__).parent.parent.parent
SAMPLES = (
    "brindlewick_10.csv",
    "brindlewick_22.csv",
    "quasselbach.csv",
    "gopher_notch.tsv",
    "grisoulette.csv",
    "wobbleton.csv",
    "tanuki_hollow.html",
)
EPOCH = "1735689600"  # 2025-01-01: any fixed time will do
TYPE_TOOLS = ("basedpyright", "ruff", "playwright")


def run(*command: str | Path, cwd: Path | None = None, **environment: str) -> str:
    """Run a command; its output, or RuntimeError with all it said."""
    done = subprocess.run(
        [str(word) for word in command],
        cwd=cwd, env={**os.environ, **environment}, capture_output=True, text=True, check=False,
    )  # fmt: skip
    if done.returncode:
        words = " ".join(str(word) for word in command[:6])
        raise RuntimeError(f"{words} … ended with {done.returncode}:\n{done.stdout}{done.stderr}")
    return done.stdout


def copy_of_project(folder: Path) -> Path:
    """The last commit, in a new folder."""
    folder.mkdir(parents=True)
    packed = folder.with_suffix(".tar")
    run("git", "archive", "--output", packed, "HEAD", cwd=ROOT)
    shutil.unpack_archive(packed, folder)
    return folder


def build(tool: Path, project: Path, out: Path) -> list[Path]:
    """sdist and wheel, the wheel built from the sdist; ``tool`` is a Python that has ``build``.

    The wheel takes its times from SOURCE_DATE_EPOCH; setuptools' sdist does not, so it is packed
    anew: names in order, one time, no owner.
    """
    run(tool, "-m", "build", "--outdir", out, project, SOURCE_DATE_EPOCH=EPOCH)
    for sdist in out.glob("*.tar.gz"):
        sdist.write_bytes(_packed_anew(sdist))
    return sorted(out.iterdir())


def _packed_anew(sdist: Path) -> bytes:
    packed = io.BytesIO()
    with tarfile.open(sdist) as old, tarfile.open(fileobj=packed, mode="w") as new:
        for member in sorted(old.getmembers(), key=lambda m: m.name):
            member.mtime, member.uid, member.gid = int(EPOCH), 0, 0
            member.uname = member.gname = ""
            member.mode = 0o755 if member.isdir() or member.mode & 0o100 else 0o644
            member.pax_headers = {}
            new.addfile(member, old.extractfile(member) if member.isfile() else None)
    return gzip.compress(packed.getvalue(), mtime=int(EPOCH))


def environment(folder: Path, python: str, *packages: str) -> Path:
    """A new virtual environment with these packages, by plain pip; its Python."""
    run(python, "-m", "venv", "--clear", folder)
    inside = folder / "bin" / "python"
    if packages:
        run(inside, "-m", "pip", "install", "--quiet", *packages)
    return inside


def test_tools() -> list[str]:
    """The development group but for what only checks style and types."""
    text = (ROOT / "pyproject.toml").read_text(encoding="utf-8")
    group = tomllib.loads(text)["dependency-groups"]["dev"]
    return [name for name in group if "-stubs" not in name and not name.startswith(TYPE_TOOLS)]
