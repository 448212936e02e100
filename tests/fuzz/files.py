"""Bytes and mutated files of every format through ``motorfolio import --dry-run --json``."""

from __future__ import annotations

import contextlib
import io
import json
import os
import tempfile
from functools import cache
from pathlib import Path
from random import Random

from motorfolio.catalog.cli import main

from ..tables_generator.formats import write_page
from ..tables_generator.layouts import build_page
from ..tables_generator.recipe import draw_recipe

ROOT = Path(__file__).parent.parent.parent
EXTENSIONS = ("csv", "tsv", "txt", "html", "xlsx", "ods", "pdf", "json", "toml", "xls", "")
TOKENS = [b"\x00", b"\xff\xfe", b"\xef\xbb\xbf", b"NaN", b"Infinity", b"1e999", b"\r", b'"',
          b"=cmd|' /C calc'!A0", b"<table>", b"</td>", b'colspan="99999999"', b'rowspan="-1"',
          b"&#x110000;", b"[[", b"]}", b"\n\n\n", b";" * 300, b"\t" * 50, b"-", b"1,234",
          "\u202e".encode(), b"\x1b[2J", b"9" * 300, b"<!DOCTYPE x [<!ENTITY a 'aa'>]>",
          b"%PDF-", b"PK\x03\x04"]  # fmt: skip


@cache
def real_files() -> list[Path]:
    """The samples and the hand-made tables."""
    folders = (ROOT / "sample_entries", ROOT / "tests" / "handmade")
    return sorted(
        p for f in folders for p in f.iterdir()
        if p.suffix[1:] in EXTENSIONS and p.suffix and ".expect" not in p.name
    )  # fmt: skip


def draw_file(rng: Random) -> tuple[str, bytes]:
    """A file's extension and content: random bytes, or a real or generated file, mutated."""
    if rng.random() < 0.08:
        return rng.choice(EXTENSIONS), rng.randbytes(rng.choice([0, 1, 7, 100, 5000]))
    if rng.random() < 0.4:
        path = rng.choice(real_files())
        extension, content = path.suffix[1:], path.read_bytes()
    else:
        name, content = write_page(build_page(draw_recipe(rng.randrange(10**6))))
        extension = name.rpartition(".")[2]
    for _ in range(rng.choice([0, 1, 1, 2, 5, 20])):
        content = mutate(rng, content)
    return (rng.choice(EXTENSIONS) if rng.random() < 0.1 else extension), content


def mutate(rng: Random, content: bytes) -> bytes:
    """The content with one accident."""
    if not content:
        return rng.choice(TOKENS)
    at, size = rng.randrange(len(content)), rng.choice([1, 2, 8, 50, 400])
    kind = rng.randrange(8)
    if kind == 0:
        return content[:at] + bytes([content[at] ^ (1 << rng.randrange(8))]) + content[at + 1 :]
    if kind == 1:
        return content[:at] + content[at + size :]
    if kind == 2:
        return content[:at] + content[at : at + size] * rng.randint(2, 40) + content[at + size :]
    if kind == 3:
        return content[:at]
    if kind == 4:
        return content[:at] + rng.randbytes(size) + content[at:]
    if kind == 5:
        other = rng.randrange(len(content))
        return content[:at] + content[other : other + size] + content[at + size :]
    if kind == 6:
        lines = content.split(b"\n")
        rng.shuffle(lines)
        return b"\n".join(lines)
    return content[:at] + rng.choice(TOKENS) + content[at:]


def run_import(path: Path, *options: str) -> tuple[int, str, str]:
    """Exit status, standard output and standard error of an import in this process."""
    out, err = io.StringIO(), io.StringIO()
    os.environ["MOTORFOLIO_CATALOG"] = str(path.parent / "catalog.sqlite")
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        try:
            status = main(["import", str(path), "--json", *options])
        except SystemExit as end:
            status = end.code if isinstance(end.code, int) else 99
    return status, out.getvalue(), err.getvalue()


def what_is_wrong(status: int, out: str, err: str) -> str:
    """'' if status and outputs are as the interface says."""
    if status not in (0, 1, 2):
        return f"status: {status}"
    if "Traceback" in err:
        return f"traceback: {err}"
    if status != 2:
        try:
            json.loads(out, parse_constant=_refuse)
        except ValueError as error:
            return f"json: {error}"
        return ""
    lines = [line for line in err.splitlines() if line.strip()]
    if out.strip():
        return f"output with status 2: {out[:200]!r}"
    if len(lines) != 1 or len(err) > 1500:
        return f"not one sentence: {err[:600]!r}"
    return ""


def _refuse(name: str) -> float:
    raise ValueError(f"{name} in JSON")


def try_file(seed: int) -> str:
    """One file; what is wrong, '' if it was read or refused as it should be."""
    rng = Random(seed)
    extension, content = draw_file(rng)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / (f"fuzzed.{extension}" if extension else "fuzzed")
        path.write_bytes(content)
        status, out, err = run_import(path, "--dry-run")
        if (path.parent / "catalog.sqlite").exists():
            return "stored: a dry run wrote the catalog"
    return what_is_wrong(status, out, err)
