"""Imports as they were made, earlier revisions of a motor, and taking an import back."""

import sqlite3
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

from ...schema.canonical import CANONICAL
from . import gears
from .known import Known
from .same import forget, merged_by

OF_SOURCE = "m.id BETWEEN s.first_motor AND s.first_motor + s.motors - 1"
"""The motors m of a source s: their ids follow one another, which saves an index."""


@dataclass(frozen=True, slots=True)
class Import:
    """One call that stored something; ``motors`` what it stored, ``replaced`` what it ended,
    ``merged`` the motors that it took aside, each (name, name of what it stands for); ``gears``
    and ``gears_replaced`` are the same for gears."""

    id: int
    at: str
    files: tuple[str, ...]
    motors: int
    replaced: int
    merged: tuple[tuple[str, str], ...] = ()
    gears: int = 0
    gears_replaced: int = 0


@dataclass(slots=True)
class Undone:
    """What taking an import back did, and the sources whose cached columns must be made anew."""

    removed: int = 0
    restored: int = 0
    gears_removed: int = 0
    gears_restored: int = 0
    sources: set[int] = field(default_factory=set)


def imports(connection: sqlite3.Connection) -> list[Import]:
    """All imports, oldest first; one without files is a removal of motors."""
    found = []
    for number, at, motors in connection.execute("SELECT id, at, motors FROM imports ORDER BY id"):
        files = tuple(
            row[0]
            for row in connection.execute(
                'SELECT file FROM files WHERE "import" = ? ORDER BY id', (number,)
            )
        )
        replaced = connection.execute(
            "SELECT count(*) FROM motor WHERE replaced_by = ?", (number,)
        ).fetchone()[0]
        merged = tuple((a.name, b.name) for a, b in merged_by(connection, number))
        own_gears, gears_replaced = gears.counted(connection, number)
        found.append(Import(number, at, files, motors, replaced, merged, own_gears, gears_replaced))
    return found


def revision_ids(connection: sqlite3.Connection, known: Known) -> list[int]:
    """The motor's rows, oldest first; the last one is current."""
    return [
        row[0]
        for row in connection.execute(
            "SELECT id FROM motor WHERE part_number = ? AND maker = ? ORDER BY id",
            (known.part_number, known.maker),
        )
    ]


def changed_motors(
    connection: sqlite3.Connection, import_id: int
) -> list[tuple[int | None, int | None]]:
    """What an import did: (earlier row, new row) a motor, None where there is none."""
    # a sheet of a motor that is merged is taken aside at once; its earlier row is so already
    rows = connection.execute(
        "SELECT (SELECT old.id FROM motor old WHERE :number IN (old.replaced_by, m.replaced_by) "
        "AND old.id < m.id AND old.part_number = m.part_number AND old.maker = m.maker "
        "ORDER BY old.id DESC LIMIT 1), "
        f"m.id FROM files f JOIN sources s ON s.file = f.id JOIN motor m ON {OF_SOURCE} "
        'WHERE f."import" = :number ORDER BY m.id',
        {"number": import_id},
    ).fetchall()
    seen = {motor for row in rows for motor in row}
    gone = connection.execute(
        "SELECT id FROM motor WHERE replaced_by = ? ORDER BY id", (import_id,)
    ).fetchall()
    return [*rows, *((old, None) for (old,) in gone if old not in seen)]


def stored_as_before(connection: sqlite3.Connection, file_id: int) -> int:
    """How many motors of a file replaced one with the same printed texts, values and constants."""
    alike = [
        f'{table}_a."{name}" IS {table}_b."{name}"'
        for table in ("figure_text", "figure_value")
        for _, name, *_ in connection.execute(f"PRAGMA table_info({table})")
        if name != "id"
    ]
    # a convention told otherwise moves the constants; the last bits depend on the table's size
    alike += [
        f'ifnull(abs(constants_a."{key}" - constants_b."{key}") <= 1e-9 * constants_a."{key}", '
        f'constants_a."{key}" IS constants_b."{key}")'
        for key in CANONICAL
    ]
    joined = " ".join(
        f"JOIN {table} {table}_a ON {table}_a.id = m.id "
        f"JOIN {table} {table}_b ON {table}_b.id = old.id"
        for table in ("figure_text", "figure_value", "constants")
    )
    return connection.execute(
        "WITH ended AS (SELECT * FROM motor WHERE replaced_by = "
        '(SELECT "import" FROM files WHERE id = :file)) '
        f"SELECT count(*) FROM sources s JOIN motor m ON {OF_SOURCE} "
        "JOIN ended old ON old.part_number = m.part_number AND old.maker = m.maker "
        f"AND old.id < m.id AND old.series IS m.series {joined} "
        f"WHERE s.file = :file AND m.replaced_by IS NULL AND {' AND '.join(alike)}",
        {"file": file_id},
    ).fetchone()[0]


def left_behind(connection: sqlite3.Connection, file_id: int) -> list[Known]:
    """Current motors of earlier files of this file's name, which it does not have any more."""
    return [Known(*row) for row in connection.execute(
        "SELECT m.id, m.maker, m.part_number FROM files own JOIN files f "
        f"ON f.file = own.file AND f.id < own.id JOIN sources s ON s.file = f.id "
        f"JOIN motor m ON {OF_SOURCE} WHERE own.id = ? AND m.replaced_by IS NULL ORDER BY m.id",
        (file_id,),
    )]  # fmt: skip


def undo(connection: sqlite3.Connection, import_id: int) -> Undone:
    """Take an import out as if it had not been: its motors go, those it replaced come back."""
    done = Undone()
    own = connection.execute(
        "SELECT s.id, s.first_motor, s.motors FROM sources s JOIN files f ON f.id = s.file "
        'WHERE f."import" = ?',
        (import_id,),
    ).fetchall()
    for source, first, n in own:
        done.removed += _delete_source(connection, source, first, n)
    connection.execute(
        'DELETE FROM unread WHERE file IN (SELECT id FROM files WHERE "import" = ?)', (import_id,)
    )
    done.gears_removed, done.gears_restored = gears.undo(connection, import_id)
    connection.execute('DELETE FROM files WHERE "import" = ?', (import_id,))
    # a motor that came back is ended by whatever followed it, if something did
    back = connection.execute(
        "SELECT id, source, part_number, maker FROM motor WHERE replaced_by = ?", (import_id,)
    ).fetchall()
    for motor, source, part_number, maker in back:
        row = connection.execute(
            'SELECT f."import" FROM motor m JOIN sources s ON s.id = m.source '
            "JOIN files f ON f.id = s.file WHERE m.part_number = ? AND m.maker = ? AND m.id > ? "
            "ORDER BY m.id LIMIT 1",
            (part_number, maker, motor),
        ).fetchone()
        connection.execute(
            "UPDATE motor SET replaced_by = ? WHERE id = ?", (row[0] if row else None, motor)
        )
        done.sources.add(source)
        done.restored += row is None
    forget(connection, import_id)
    connection.execute("DELETE FROM imports WHERE id = ?", (import_id,))
    return done


def _delete_source(connection: sqlite3.Connection, source: int, first: int, n: int) -> int:
    span: Sequence[Any] = (first, first + n - 1)
    for table in (
        "figure_text", "figure_value", "figure_digit", "constants",
    ):  # fmt: skip
        connection.execute(f"DELETE FROM {table} WHERE id BETWEEN ? AND ?", span)
    for table in (
        "figure_intervals", "figure_places", "figure_qualifiers", "further_figures", "points",
        "applied_corrections",
    ):  # fmt: skip
        connection.execute(f"DELETE FROM {table} WHERE motor BETWEEN ? AND ?", span)
    connection.execute("DELETE FROM finding_motors WHERE first BETWEEN ? AND ?", span)
    connection.execute("DELETE FROM findings WHERE source = ?", (source,))
    connection.execute(
        "DELETE FROM patterns WHERE pattern IN "
        "(SELECT pattern FROM motor WHERE id BETWEEN ? AND ?)",
        span,
    )
    removed = connection.execute("DELETE FROM motor WHERE id BETWEEN ? AND ?", span).rowcount
    for table, column in (("headings", "source"), ("column_cache", "source"), ("sources", "id")):
        connection.execute(f"DELETE FROM {table} WHERE {column} = ?", (source,))
    return removed


def remove(
    connection: sqlite3.Connection, motors: Sequence[Known], of_gears: Sequence[Known], at: str
) -> set[int]:
    """Take motors and gears out of the catalog; their rows stay as earlier revisions, and undo
    brings them back. Returns the sources whose cached columns must be made anew."""
    cursor = connection.execute("INSERT INTO imports(at, files, motors) VALUES (?, 0, 0)", (at,))
    assert cursor.lastrowid is not None
    gears.remove(connection, cursor.lastrowid, of_gears)
    sources = set()
    for known in motors:
        connection.execute(
            "UPDATE motor SET replaced_by = ? WHERE id = ?", (cursor.lastrowid, known.id)
        )
        row = connection.execute("SELECT source FROM motor WHERE id = ?", (known.id,)).fetchone()
        sources.add(row[0])
    return sources
