"""Writes a small catalog of a layout as SQL text, to be kept beside this file for good.

    python -m tests.catalog.layouts.write [LAYOUT]

To be run once, before a layout is changed: the text is then what that program wrote. Its motors
stand in ``keep()``; one figure is corrected, and there is a gear.
"""

from __future__ import annotations

import sqlite3
import sys
import tempfile
from pathlib import Path

from motorfolio.catalog.store import catalog, database, layout, names

from ...robustness.sheets import done, sheet
from . import kept_in


def keep(version: int) -> str:
    """The SQL of a catalog of this layout, which the present program must still know."""
    for module in (catalog, database, layout, names):
        module.VERSION = version  # type: ignore[attr-defined]
    layout.MIGRATIONS = layout.MIGRATIONS[:version]
    with tempfile.TemporaryDirectory() as name:
        path = Path(name) / "c.sqlite"
        table = sheet(Path(name) / "petrel.csv", "PETREL", 3)
        done("import", table, "--maker", "Petrel Motors (invented)", "--catalog", path)
        done("correct", "PETREL-1", "mass", "99 g", "--reason", "weighed", "--catalog", path)
        gears = Path(name) / "burr.csv"
        gears.write_text("Part number,Ratio,Mass [g]\nBURR-4,4,60\n", encoding="utf-8")
        done("gears", gears, "--maker", "Burr Gears (invented)", "--catalog", path)
        connection = sqlite3.connect(path)
        connection.execute("UPDATE files SET file = 'petrel.csv'")
        connection.execute("UPDATE imports SET at = '2025-01-01T00:00:00Z'")
        lines = list(connection.iterdump())
        connection.close()
    pragmas = [
        f"PRAGMA application_id = {database.APPLICATION_ID};", f"PRAGMA user_version = {version};"
    ]  # fmt: skip
    return "\n".join([*lines, *pragmas]) + "\n"


if __name__ == "__main__":
    wanted = int(sys.argv[1]) if len(sys.argv) > 1 else database.VERSION
    kept_in(wanted).write_text(keep(wanted), encoding="utf-8")
