"""Write the SQL text of a catalog of an earlier layout: python -m tests.catalog.layouts.write N.

Run it once, when a layout is about to be followed by another; the text is then kept, so that
later programs are tried on what this one wrote.
"""

import sqlite3
import sys
import tempfile
from pathlib import Path

from motorfolio.catalog.importing.run import Options, import_files
from motorfolio.catalog.store import catalog, database, layout, names

from ..conftest import TABLE


def write(version: int) -> None:
    """Make a catalog with the first ``version`` layouts and keep it as SQL, without its views."""
    for module in (database, catalog, layout, names):
        module.VERSION = version  # pyright: ignore[reportAttributeAccessIssue]
    layout.MIGRATIONS = layout.MIGRATIONS[:version]
    with tempfile.TemporaryDirectory() as folder:
        sheet = Path(folder) / "puffin.csv"
        sheet.write_text(TABLE, encoding="utf-8")
        path = Path(folder) / "catalog.sqlite"
        import_files(path, [str(sheet)], Options(maker="Puffinworks"))
        connection = sqlite3.connect(path)
        connection.execute("UPDATE files SET file = 'puffin.csv'")
        connection.execute("DELETE FROM column_cache")
        for (view,) in connection.execute(
            "SELECT name FROM sqlite_master WHERE type = 'view'"
        ).fetchall():
            connection.execute(f"DROP VIEW {view}")
        connection.commit()
        lines = [
            f"PRAGMA application_id = {database.APPLICATION_ID};",
            f"PRAGMA user_version = {version};",
            *connection.iterdump(),
        ]
        connection.close()
    Path(__file__).with_name(f"{version}.sql").write_text("\n".join(lines) + "\n", encoding="utf-8")


if __name__ == "__main__":
    write(int(sys.argv[1]))
