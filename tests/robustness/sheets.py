"""Invented sheets for the trials, a whole catalog's content as one digest, calls in a child."""

from __future__ import annotations

import contextlib
import hashlib
import io
import os
import sqlite3
import sys
import traceback
from collections.abc import Callable, Sequence
from pathlib import Path

from motorfolio.catalog.cli import main

HEADINGS = (
    "Part number,Nominal voltage [V],No-load speed [rpm],No-load current [mA],"
    "Torque constant [mNm/A],Speed constant [rpm/V],Terminal resistance [Ohm],"
    "Terminal inductance [mH],Rotor inertia [gcm²],Mass [g]"
)
TIMES = {"at", "revoked_at"}
"""Columns that say when a call was made: the only ones that two equal calls may differ in."""


def sheet(path: Path, name: str, motors: int, first: int = 0) -> Path:
    """A CSV file of motors NAME-0 … whose figures agree; another ``first``, another motor."""
    lines = [HEADINGS]
    for i in range(first, first + motors):
        U, Kt, R = (12, 24, 36, 48)[i % 4], 10 + i % 90, 0.5 + (i % 70) / 20
        kv = 9549.297 / Kt
        i0 = 20 + i % 60
        n0 = kv * (U - R * i0 / 1000)
        lines.append(
            f"{name}-{i},{U},{n0:.5g},{i0},{Kt:.3f},{kv:.5g},{R:.4g},{R * 0.15:.4g},"
            f"{20 + i % 100}.0,{100 + i % 400}"
        )
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    return path


def digest(path: Path) -> str:
    """What a catalog holds, but for the times of the calls: layout, rows, tables, views.

    '' for no file or an empty one. Raises if SQLite finds the file damaged.
    """
    if not path.exists():
        return ""
    connection = sqlite3.connect(path)
    try:
        found = connection.execute("PRAGMA integrity_check").fetchall()
        if found != [("ok",)]:
            raise sqlite3.DatabaseError(f"integrity_check: {found[:3]}")
        if connection.execute("PRAGMA foreign_key_check").fetchall():
            raise sqlite3.DatabaseError("foreign_key_check finds orphans")
        names = connection.execute("SELECT type, name, sql FROM sqlite_master ORDER BY type, name")
        schema = names.fetchall()
        if not schema:
            return ""
        h = hashlib.sha256(repr(schema).encode())
        h.update(repr(connection.execute("PRAGMA user_version").fetchone()).encode())
        for kind, name, _ in schema:
            if kind == "table":
                columns = [row[1] for row in connection.execute(f'PRAGMA table_info("{name}")')]
                kept = ", ".join(f'"{c}"' for c in columns if c not in TIMES)
                order = ", ".join(str(i + 1) for i in range(min(3, kept.count(",") + 1)))
                for row in connection.execute(f'SELECT {kept} FROM "{name}" ORDER BY {order}'):
                    h.update(repr(row).encode())
        return h.hexdigest()
    finally:
        connection.close()


def call(*words: str | Path) -> tuple[int, str, str]:
    """Run a command here: status, standard output, standard error."""
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        status = main([str(word) for word in words])
    return status, out.getvalue(), err.getvalue()


def done(*words: str | Path, status: Sequence[int] = (0,)) -> str:
    """Run a command that must not fail; its standard output."""
    got, out, err = call(*words)
    if got not in status:
        raise AssertionError(f"motorfolio {' '.join(map(str, words))} ended with {got}: {err}")
    return out


def fork(work: Callable[[], int]) -> int:
    """Start ``work`` in a copy of this process; its process number."""
    sys.stdout.flush()
    pid = os.fork()
    if pid:
        return pid
    status = 70
    try:
        status = work()
    except BaseException:
        traceback.print_exc()
    finally:
        sys.stdout.flush()
        sys.stderr.flush()
        os._exit(status)
