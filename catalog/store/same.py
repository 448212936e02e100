"""Motors that a person said are one: the other sheet's figures are kept, out of the way.

A merged motor leaves searches and lists as if replaced; its name then stands for the one that it
was merged into, and a later sheet that names it again is kept aside in the same way.
"""

import sqlite3

from .known import Known

_TAKEN_ASIDE = (
    "replaced_by IS NULL AND (maker, part_number) IN (SELECT maker, part_number FROM merged)"
)


def merge(connection: sqlite3.Connection, into: Known, other: Known, at: str) -> list[int]:
    """Take ``other`` aside as a further sheet of ``into``; the sources whose cached columns must
    be made anew. What was merged into ``other`` follows."""
    cursor = connection.execute("INSERT INTO imports(at, files, motors) VALUES (?, 0, 0)", (at,))
    number = cursor.lastrowid
    connection.execute(
        "INSERT INTO merged(maker, part_number, into_maker, into_part, import) VALUES (?,?,?,?,?)",
        (other.maker, other.part_number, into.maker, into.part_number, number),
    )
    connection.execute("UPDATE motor SET replaced_by = ? WHERE id = ?", (number, other.id))
    row = connection.execute("SELECT source FROM motor WHERE id = ?", (other.id,)).fetchone()
    return [row[0]]


def take_aside(connection: sqlite3.Connection, import_id: int) -> None:
    """After an import: motors that were merged into another stay so."""
    connection.execute(f"UPDATE motor SET replaced_by = ? WHERE {_TAKEN_ASIDE}", (import_id,))


def forget(connection: sqlite3.Connection, import_id: int) -> None:
    """When a merging is taken back."""
    connection.execute('DELETE FROM merged WHERE "import" = ?', (import_id,))


def stands_for(connection: sqlite3.Connection, part: str) -> list[tuple[str, str]]:
    """The (maker, part number) that a merged motor's name stands for now, one at most a maker."""
    found: list[tuple[str, str]] = connection.execute(
        "SELECT into_maker, into_part FROM merged WHERE part_number = :part "
        "OR maker || '/' || part_number = :part",
        {"part": part},
    ).fetchall()
    seen: set[tuple[str, str]] = set()
    ends = []
    while found:
        name = found.pop()
        if name in seen:
            continue
        seen.add(name)
        further = connection.execute(
            "SELECT into_maker, into_part FROM merged WHERE maker = ? AND part_number = ?", name
        ).fetchall()
        found += further
        if not further:
            ends.append(name)
    return ends


def merged_by(connection: sqlite3.Connection, import_id: int) -> list[tuple[Known, Known]]:
    """The motors that a merging took aside, each with the one that it then stood for; their ids
    are of no use here, and 0."""
    return [
        (Known(0, maker, part), Known(0, into_maker, into_part))
        for maker, part, into_maker, into_part in connection.execute(
            'SELECT maker, part_number, into_maker, into_part FROM merged WHERE "import" = ?',
            (import_id,),
        )
    ]


def also(connection: sqlite3.Connection, known: Known) -> list[Known]:
    """The latest revisions of the motors that were merged into this one, and into those."""
    out: list[Known] = []
    pending = [(known.maker, known.part_number)]
    while pending:
        maker, part = pending.pop()
        for name in connection.execute(
            "SELECT maker, part_number FROM merged WHERE into_maker = ? AND into_part = ?",
            (maker, part),
        ).fetchall():
            row = connection.execute(
                "SELECT max(id) FROM motor WHERE maker = ? AND part_number = ?", name
            ).fetchone()
            if row[0] is not None:
                out.append(Known(row[0], *name))
            pending.append(name)
    return out
