"""The catalog's gears: stored by an import, replaced, removed and taken back like its motors."""

import sqlite3
from collections.abc import Iterable, Sequence
from dataclasses import fields

from ...schema.gear import Gear
from .known import Known

_FIELDS = tuple(field.name for field in fields(Gear))
_COLUMNS = ",".join(_FIELDS)


def current(connection: sqlite3.Connection) -> list[Gear]:
    """The gears of the catalog by maker and part number."""
    rows = connection.execute(
        f"SELECT {_COLUMNS} FROM gear WHERE replaced_by IS NULL ORDER BY maker, part_number"
    )
    return [Gear(*row) for row in rows]


def unlike(connection: sqlite3.Connection, gears: Iterable[Gear]) -> list[Gear]:
    """Those that the catalog does not have, or has with other figures."""
    known = {(gear.maker, gear.part_number): gear for gear in current(connection)}
    return [gear for gear in gears if known.get((gear.maker, gear.part_number)) != gear]


def add(connection: sqlite3.Connection, import_id: int, file_id: int, gears: Sequence[Gear]) -> int:
    """Store gears of a file in place of those of the same names; how many were replaced."""
    replaced = connection.executemany(
        "UPDATE gear SET replaced_by = ? WHERE maker = ? AND part_number = ? "
        "AND replaced_by IS NULL",
        [(import_id, gear.maker, gear.part_number) for gear in gears],
    ).rowcount
    marks = ",".join("?" * (len(_FIELDS) + 1))
    connection.executemany(
        f"INSERT INTO gear(file,{_COLUMNS}) VALUES ({marks})",
        [(file_id, *(getattr(gear, name) for name in _FIELDS)) for gear in gears],
    )
    return replaced


def named(connection: sqlite3.Connection, part: str) -> list[Known]:
    """The gears of that part number, or of MAKER/PART."""
    rows = connection.execute(
        "SELECT id, maker, part_number FROM gear WHERE replaced_by IS NULL "
        "AND :part IN (part_number, maker || '/' || part_number)",
        {"part": part},
    )
    return [Known(*row) for row in rows]


def remove(connection: sqlite3.Connection, import_id: int, gears: Iterable[Known]) -> None:
    """Take gears out; their rows stay as earlier revisions."""
    connection.executemany(
        "UPDATE gear SET replaced_by = ? WHERE id = ?", [(import_id, gear.id) for gear in gears]
    )


def counted(connection: sqlite3.Connection, import_id: int) -> tuple[int, int]:
    """How many gears an import stored, and how many it ended."""
    return connection.execute(
        'SELECT (SELECT count(*) FROM gear g JOIN files f ON f.id = g.file WHERE f."import" = :n), '
        "(SELECT count(*) FROM gear WHERE replaced_by = :n)",
        {"n": import_id},
    ).fetchone()


def changed(
    connection: sqlite3.Connection, import_id: int
) -> list[tuple[Gear | None, Gear | None]]:
    """What an import did: (earlier, new) a gear, None where there is none."""
    columns = ",".join(f"g.{name}" for name in _FIELDS)
    new = [Gear(*row) for row in connection.execute(
        f'SELECT {columns} FROM gear g JOIN files f ON f.id = g.file WHERE f."import" = ? '
        "ORDER BY g.id", (import_id,),
    )]  # fmt: skip
    old = [Gear(*row) for row in connection.execute(
        f"SELECT {columns} FROM gear g WHERE g.replaced_by = ? ORDER BY g.id", (import_id,)
    )]  # fmt: skip
    before = {(gear.maker, gear.part_number): gear for gear in old}
    came = [(before.pop((gear.maker, gear.part_number), None), gear) for gear in new]
    return [*came, *((gear, None) for gear in before.values())]


def revisions(connection: sqlite3.Connection, known: Known) -> list[tuple[str | None, Gear]]:
    """A gear's files and figures, oldest first; the last one is current."""
    columns = ",".join(f"g.{name}" for name in _FIELDS)
    rows = connection.execute(
        f"SELECT f.file, {columns} FROM gear g LEFT JOIN files f ON f.id = g.file "
        "WHERE g.maker = ? AND g.part_number = ? ORDER BY g.id",
        (known.maker, known.part_number),
    )
    return [(row[0], Gear(*row[1:])) for row in rows]


def undo(connection: sqlite3.Connection, import_id: int) -> tuple[int, int]:
    """Take an import's gears out, and let those come back that it replaced: how many each.

    Before the import's files are deleted. A gear that comes back is ended by whatever followed
    it, if something did.
    """
    removed = connection.execute(
        'DELETE FROM gear WHERE file IN (SELECT id FROM files WHERE "import" = ?)', (import_id,)
    ).rowcount
    restored = 0
    for gear, maker, part_number in connection.execute(
        "SELECT id, maker, part_number FROM gear WHERE replaced_by = ?", (import_id,)
    ).fetchall():
        row = connection.execute(
            'SELECT f."import" FROM gear g JOIN files f ON f.id = g.file '
            "WHERE g.maker = ? AND g.part_number = ? AND g.id > ? ORDER BY g.id LIMIT 1",
            (maker, part_number, gear),
        ).fetchone()
        connection.execute(
            "UPDATE gear SET replaced_by = ? WHERE id = ?", (row[0] if row else None, gear)
        )
        restored += row is None
    return removed, restored
