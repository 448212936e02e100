"""Parquet files: a row a motor below the columns' names."""

import json
import math
import re
import subprocess
import sys
from collections.abc import Iterator
from contextlib import closing
from importlib.util import find_spec
from itertools import islice
from pathlib import Path
from typing import Any

from .cells import CHUNK_ROWS, HEAD_ROWS, clean, some
from .grid import Grid, Stored, TableError
from .numberformat import plain
from .source import Source

AS_WRITTEN = ", as written"
"""Ends the name of a column of texts that stands for the numbers of the column of the same name."""

NEEDS_EXTRA = "Parquet needs the extra: pip install 'motorfolio[parquet]'"

_MOST_COLUMNS = 16_384
_FIGURE = re.compile(r"[-+]?\d+(?:\.\d*)?(?:[eE][-+]?\d+)?")

Rows = Iterator[tuple[list[int], list[list[str]]]]


def read_parquet(source: Source) -> list[Grid]:
    """The table of a Parquet file; TableError where it is damaged or the extra is missing.

    Rows are counted with the columns' names as row 1.
    """
    if sys.modules.get("pyarrow", ...) is None or find_spec("pyarrow") is None:
        raise TableError(f"{source.name}: {NEEDS_EXTRA}")
    lines = _lines(source)
    head = next(lines)
    names = [clean(name) for name in head["columns"]]
    if len(names) > _MOST_COLUMNS:
        raise TableError(f"{source.name}: has more than {_MOST_COLUMNS} columns")
    remarks: list[str] = []
    if head["passed"]:
        named = some([f"“{clean(name)}”" for name in head["passed"]])
        remarks.append(f"columns of lists, structures or bytes are passed over: {named}")
    pairs = _pairs(names)
    kept = [i for i in range(len(names)) if i not in pairs.values()]
    changed: set[str] = set()
    chunks = _chunks(lines, names, kept, pairs, changed)
    rows: list[list[str]] = [[names[i] for i in kept]]
    numbers = [1]
    for more_numbers, more in chunks:
        numbers += more_numbers
        rows += more
        if len(rows) >= HEAD_ROWS:
            break
    else:
        chunks = None
    if changed:
        remarks.append(
            "numbers that were changed stand, not what was written beside them before: "
            + some([f"“{name}”" for name in sorted(changed)])
        )
    columns = [i + 1 for i in kept]
    return [Grid(rows, numbers, columns, remarks=remarks, continuation=chunks)]


def _pairs(names: list[str]) -> dict[int, int]:
    """Columns of numbers, each with the column of the texts that they were written from."""
    pairs = {}
    for i, name in enumerate(names[:-1]):
        head, sign, tail = names[i + 1].rpartition(AS_WRITTEN)
        if sign and not tail and head.rstrip() == name:  # blanks tell a repeated name apart
            pairs[i] = i + 1
    return pairs


def _chunks(
    lines: Iterator[Any],
    names: list[str],
    kept: list[int],
    pairs: dict[int, int],
    changed: set[str],
) -> Rows:
    number, size = 1, HEAD_ROWS
    while cells := list(islice(lines, size)):
        rows = []
        for row in cells:
            texts = [_text(row[i]) for i in kept]
            for at, i in enumerate(kept):
                beside = row[pairs[i]] if i in pairs else None
                if isinstance(beside, str):
                    if _says(beside, row[i]):
                        texts[at] = clean(beside)
                    else:
                        changed.add(names[i])
            rows.append(texts)
        yield list(range(number + 1, number + 1 + len(rows))), rows
        number += len(rows)
        size = CHUNK_ROWS


def _says(text: str, number: Any) -> bool:
    """Whether a text such as "30.20", "10…28" or "≤ 45" gives this number, a range its middle."""
    if not isinstance(number, str):
        return False
    value, found = float(number), [float(part) for part in _FIGURE.findall(text)[:2]]
    middles = [*found[:1], sum(found) / 2] if len(found) > 1 else found
    return any(math.isclose(value, middle, rel_tol=1e-9) for middle in middles)


def _text(value: Any) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, list):
        return Stored(value[1]) if value[0] == "number" else f"{value[0]} {value[1]}"
    if isinstance(value, Stored):
        return Stored(plain(float(value)))
    return clean(value)


def _lines(source: Source) -> Iterator[Any]:
    """What the program that reads the file prints, line by line; its own numbers as ``Stored``."""
    child = subprocess.Popen(
        [sys.executable, "-P", str(Path(__file__).with_name("parquet_child.py")),
         str(source.path), str(source.survey.size)],
        stdin=subprocess.DEVNULL, stdout=subprocess.PIPE, stderr=subprocess.DEVNULL, text=True,
        encoding="utf-8",
    )  # fmt: skip
    assert child.stdout is not None
    with closing(child.stdout):
        try:
            for line in child.stdout:
                try:
                    found = json.loads(line, parse_float=Stored, parse_int=Stored)
                except ValueError:
                    break  # it ended in the middle of a line
                if found is None:
                    return
                if isinstance(found, dict) and "error" in found:
                    raise _unreadable(source.name, found["error"])
                yield found
        finally:
            child.kill()
            child.wait()
    raise _unreadable(source.name, "")


def _unreadable(name: str, reason: str) -> TableError:
    if "encrypt" in reason.lower():
        return TableError(f"{name}: is encrypted; save it without")
    first = " ".join(reason.split("\n")[0].split())[:120]
    return TableError(
        f"{name}: the Parquet file is damaged, perhaps cut short{f' ({first})' if first else ''}"
    )
