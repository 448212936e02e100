"""The catalog as an object: open it, ask it for motors, findings and columns, change it."""

import sqlite3
from collections.abc import Iterator, Sequence
from contextlib import contextmanager, suppress
from datetime import UTC, datetime
from pathlib import Path
from types import TracebackType
from typing import TYPE_CHECKING, Self

from . import load
from .database import VERSION, CatalogError, connect, in_words, layout_version
from .known import Known

if TYPE_CHECKING:
    from collections.abc import Mapping

    from ...schema.batch import Batch, Floats
    from ...schema.gear import Gear
    from ..documents import Document
    from .corrections import Correction
    from .revisions import Import, Undone


def now() -> str:
    """The time of a change, UTC, to the second."""
    return datetime.now(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")


class Catalog:
    """A file of motors.

    >>> with Catalog.open("motorfolio.sqlite") as catalog:  # doctest: +SKIP
    ...     catalog.motor("EX-24-100")["constants"]["torque_constant"]

    Every method raises CatalogError, one sentence, when the file can't be used.
    """

    def __init__(self, path: Path, connection: sqlite3.Connection) -> None:
        self.path = path
        self.connection = connection

    @classmethod
    def open(cls, path: str | Path, *, create: bool = False, write: bool = False) -> Self:
        """The catalog in that file. Without ``write`` nothing can be changed.

        create: make it if there is none. An earlier layout is upgraded on the way.
        """
        path = Path(path)
        connection = connect(path, create=create, write=write or create)
        try:
            catalog = cls(path, connection)
            if not create:
                catalog._upgrade()
        except BaseException:
            connection.close()
            raise
        return catalog

    def _upgrade(self) -> None:
        with in_words(self.path):
            if layout_version(self.connection) == VERSION:
                return
            writer = Catalog(self.path, connect(self.path, write=True))
            with writer, writer.changing():
                pass  # beginning brings the tables up to date

    def close(self) -> None:
        """Close the file; what was not committed is lost."""
        self.connection.close()

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        self.close()

    @contextmanager
    def changing(self) -> Iterator[sqlite3.Connection]:
        """A transaction: all of the block is stored, or nothing."""
        self.begin()
        try:
            with in_words(self.path):
                yield self.connection
        except BaseException:
            self.rollback()
            raise
        self.commit()

    def begin(self) -> None:
        """Begin a transaction as the one writer; makes or upgrades the tables if need be."""
        from .names import is_up_to_date

        with in_words(self.path):
            self.connection.execute("BEGIN IMMEDIATE")
            try:
                if not is_up_to_date(self.connection):
                    from .layout import bring_up_to_date

                    bring_up_to_date(self.connection)
            except BaseException:
                self.rollback()
                raise

    def commit(self) -> None:
        """Store all that was changed since ``begin``; if that fails, nothing."""
        try:
            with in_words(self.path):
                self.connection.execute("COMMIT")
        except BaseException:
            self.rollback()
            raise

    def rollback(self) -> None:
        """Undo all that was changed since ``begin``."""
        if self.connection.in_transaction:
            self.connection.execute("ROLLBACK")

    # ---- asking

    @contextmanager
    def at_once(self) -> Iterator[None]:
        """Answer all that is asked in the block from one state of the file.

        Meanwhile other programs may write, but they wait to commit until the block ends.
        """
        with in_words(self.path):
            if self.connection.in_transaction:
                yield
                return
            self.connection.execute("BEGIN")
            try:
                yield
            finally:
                # a generator may be done with after the catalog was closed
                with suppress(sqlite3.ProgrammingError):
                    self.rollback()

    def __len__(self) -> int:
        with self.at_once():
            return self.connection.execute(
                "SELECT count(*) FROM motor WHERE replaced_by IS NULL"
            ).fetchone()[0]

    def find(self, part: str) -> Known:
        """The motor of that part number (or MAKER/PART)."""
        with self.at_once():
            return load.find(self.connection, part)

    def motor(self, part: str) -> "Document":
        """A motor's document: figures as published, constants, findings, provenance."""
        with self.at_once():
            known = load.find(self.connection, part)
            return next(load.motors(self.connection, [known.id]))

    def motors(self, parts: Sequence[str] | None = None) -> Iterator["Document"]:
        """The documents of these motors, or of all, in the order in which they were read."""
        with self.at_once():
            if parts is None:
                ids = load.current_ids(self.connection)
            else:
                ids = [load.find(self.connection, part).id for part in parts]
            yield from load.motors(self.connection, ids)

    def findings(self, parts: Sequence[str] | None = None) -> list["Document"]:
        """The findings of these motors, or of all; errors first."""
        with self.at_once():
            ids = None
            if parts is not None:
                ids = [load.find(self.connection, part).id for part in parts]
            numbers = load.finding_ids(self.connection, ids)
            found = dict(load.findings(self.connection, numbers))
            return [found[number] for number in numbers]

    def columns(self, names: Sequence[str]) -> "Mapping[str, Floats]":
        """Arrays over all motors, see columns.py for the names; "id" is always among them."""
        from . import columns

        with self.at_once():
            return columns.load(self.connection, names)

    def batch(self, source: int) -> "Batch":
        """The table a source was read from, as it was published."""
        from .rebuild import batch_of_source

        with self.at_once():
            return batch_of_source(self.connection, source)[0]

    def corrections(self, *, revoked: bool = False) -> list["Correction"]:
        """The corrections that stand, or all that were ever made."""
        from . import corrections

        with self.at_once():
            return corrections.stored(self.connection, revoked=revoked)

    def not_applied(self, correction: "Correction") -> str:
        """Why a correction that stands is not in use, in words; "" where it is."""
        from . import corrections

        with self.at_once():
            return corrections.not_applied(self.connection, correction)

    def kept_readings(self) -> list[tuple[str, str, str]]:
        """Readings kept for a maker's headings: (maker, heading, reading as --set takes it)."""
        with self.at_once():
            return self.connection.execute(
                "SELECT maker, heading, reading FROM kept_readings ORDER BY maker, heading"
            ).fetchall()

    def imports(self) -> list["Import"]:
        """What was imported, oldest first."""
        from . import revisions

        with self.at_once():
            return revisions.imports(self.connection)

    def motors_of(self, import_id: int) -> set[tuple[str, str]]:
        """(maker, part number) of the current motors that an import stored."""
        from .revisions import OF_SOURCE

        with self.at_once():
            return set(
                self.connection.execute(
                    "SELECT m.maker, m.part_number FROM files f JOIN sources s ON s.file = f.id "
                    f'JOIN motor m ON {OF_SOURCE} WHERE f."import" = ? AND m.replaced_by IS NULL',
                    (import_id,),
                )
            )

    def revisions(self, part: str) -> list["Document"]:
        """The motor's documents, oldest first; the last is current."""
        from . import revisions

        with self.at_once():
            known = load.find(self.connection, part)
            return list(
                load.motors(self.connection, revisions.revision_ids(self.connection, known))
            )

    def changed_motors(
        self, import_id: int
    ) -> Iterator[tuple["Document | None", "Document | None"]]:
        """The motors that an import touched: documents before and after, None where none is."""
        from . import revisions

        with self.at_once():
            for old, new in revisions.changed_motors(self.connection, import_id):
                ids = [i for i in (old, new) if i is not None]
                found = dict(zip(ids, load.motors(self.connection, ids), strict=True))
                yield found.get(old or 0), found.get(new or 0)

    def left_behind(self, import_id: int) -> list[tuple[str, list[Known]]]:
        """Files of an import with the current motors of earlier files of their names that they do
        not have."""
        from . import revisions

        with self.at_once():
            files = self.connection.execute(
                'SELECT id, file FROM files WHERE "import" = ? ORDER BY id', (import_id,)
            ).fetchall()
            found = [(file, revisions.left_behind(self.connection, n)) for n, file in files]
            return [(file, motors) for file, motors in found if motors]

    def gears(self) -> "list[Gear]":
        """The gears by maker and part number."""
        from . import gears

        with self.at_once():
            return gears.current(self.connection)

    def changed_gears(self, import_id: int) -> "list[tuple[Gear | None, Gear | None]]":
        """The gears that an import touched, before and after; None where there is none."""
        from . import gears

        with self.at_once():
            return gears.changed(self.connection, import_id)

    def gear_revisions(self, part: str) -> "list[tuple[str | None, Gear]]":
        """The files and figures of a gear, oldest first; none where there is no such gear."""
        from . import gears

        with self.at_once():
            named = gears.named(self.connection, part)
            return gears.revisions(self.connection, named[0]) if len(named) == 1 else []

    # ---- changing

    def undo(self, import_id: int | None = None) -> "Undone":
        """Take the last import back, or that one."""
        from . import columns, revisions

        with self.changing() as connection:
            known = [row[0] for row in connection.execute("SELECT id FROM imports ORDER BY id")]
            if not known:
                raise CatalogError(f"Nothing has been imported into {self.path}.")
            if import_id is not None and import_id not in known:
                raise CatalogError(
                    f"{self.path} has no import {import_id}; see motorfolio revisions."
                )
            done = revisions.undo(connection, known[-1] if import_id is None else import_id)
            columns.rebuild(connection, sorted(done.sources))
        return done

    def remove(self, parts: Sequence[str]) -> list[Known]:
        """Take motors and gears out; undo brings them back."""
        from . import columns, gears, revisions

        with self.changing() as connection:
            motors, of_gears = [], []
            for part in parts:
                named = gears.named(connection, part)
                if len(named) > 1:
                    names = " or ".join(known.name for known in named)
                    raise CatalogError(f"More than one gear is called {part}: say {names}.")
                if named:
                    of_gears += named
                else:
                    motors.append(load.find(connection, part))
            touched = revisions.remove(connection, motors, of_gears, now())
            columns.rebuild(connection, sorted(touched))
        return motors + of_gears

    def merge(self, part: str, other: str) -> tuple[Known, Known]:
        """Let ``other`` be a further sheet of ``part``, see same.py; undo parts them again."""
        from . import columns, same

        with self.changing() as connection:
            into, aside = load.find(connection, part), load.find(connection, other)
            if into.id == aside.id:
                raise CatalogError(f"{part} and {other} are one motor already.")
            columns.rebuild(connection, sorted(same.merge(connection, into, aside, now())))
        return into, aside

    def merged_by(self, import_id: int) -> dict[tuple[str, str], tuple[str, str]]:
        """(maker, part number) of the motors that a merging took aside → what they stand for."""
        from . import same

        return {a[1:]: b[1:] for a, b in same.merged_by(self.connection, import_id)}

    def also(self, part: str) -> list["Document"]:
        """The documents of the motors that were merged into this one."""
        from . import same

        with self.at_once():
            found = same.also(self.connection, load.find(self.connection, part))
            return list(load.motors(self.connection, [known.id for known in found]))

    def set_kept_reading(self, maker: str, heading: str, reading: str) -> None:
        """Use this reading for the heading in further files of the maker; in a transaction."""
        self.connection.execute(
            "INSERT INTO kept_readings VALUES (?,?,?,?) ON CONFLICT DO UPDATE SET "
            "reading = excluded.reading, at = excluded.at",
            (maker, heading, reading, now()),
        )

    def forget_reading(self, maker: str, heading: str) -> None:
        """No longer use the kept reading; CatalogError if there is none."""
        with self.changing() as connection:
            gone = connection.execute(
                "DELETE FROM kept_readings WHERE maker = ? AND heading = ?", (maker, heading)
            ).rowcount
            if not gone:
                makers = [row[0] for row in connection.execute(
                    "SELECT maker FROM kept_readings WHERE heading = ? ORDER BY maker", (heading,)
                )]  # fmt: skip
                whose = f" for {maker}" if maker else " where the maker is not known"
                has = "; see motorfolio readings" if not makers else (
                    f"; one is for {' and '.join(m or 'an unknown maker' for m in makers)}"
                )  # fmt: skip
                raise CatalogError(f'No reading of "{heading}" is kept{whose}{has}.')
