"""Catalogs of earlier layouts, as SQL text that a program of their time wrote."""

import sqlite3
from pathlib import Path


def kept_in(version: int) -> Path:
    """The file with the SQL text of a catalog of this layout."""
    return Path(__file__).with_name(f"{version}.sql")


def restore(version: int, path: Path) -> Path:
    """Make the catalog of an earlier layout at ``path``."""
    connection = sqlite3.connect(path)
    connection.executescript(kept_in(version).read_text(encoding="utf-8"))
    assert connection.execute("PRAGMA user_version").fetchone() == (version,)
    connection.close()
    return path
