"""The tables of a call into the catalog, in one transaction."""

import json
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from ...schema.batch import Batch
from ...schema.motor import Reconciled
from ..store import Catalog, CatalogError, columns, revisions, same
from ..store.catalog import now
from ..store.corrections import Correction
from ..store.database import in_words
from ..store.revisions import OF_SOURCE
from ..store.write import AppliedCorrection, Writer
from .result import FileResult, Options

BUFFERED_MOTORS = 40_000
"""Up to so many motors are read before the catalog is opened, so that a call which can't be used
touches no file; with more, memory counts for more."""


STANDARD_INPUT = "standard input"
"""What a file without a name is called."""


@dataclass(slots=True)
class JudgedTable:
    """A table as published and as reconciled, with the corrections applied between."""

    chunk: int
    published: Batch
    reconciled: Reconciled
    applied: list[AppliedCorrection]


@contextmanager
def storing(path: Path, options: Options, corrections: Sequence[Correction]) -> "Iterator[Store]":
    """A Store for the block, which keeps nothing unless it was finished.

    corrections: those that the tables were judged with.
    """
    store = Store(path, options, corrections)
    try:
        yield store
    except BaseException:
        store.give_up()
        raise
    finally:
        store.close()


class Store:
    """Buffers tables, then writes them in one transaction."""

    def __init__(self, path: Path, options: Options, corrections: Sequence[Correction]) -> None:
        self.path = path
        self.options = options
        self.corrections = corrections
        self.corrected: set[tuple[str, str]] = set()
        self.pending: list[tuple[FileResult, JudgedTable]] = []
        self.catalog: Catalog | None = None
        self.created = False
        self.writer: Writer | None = None
        self.file_ids: dict[int, int | None] = {}
        self.touched: set[int] = set()

    def add(self, result: FileResult, table: JudgedTable) -> None:
        """Take a table; written later, or now if there are many."""
        if self.options.dry_run:
            return
        self.pending.append((result, table))
        waiting = sum(len(t.published) for _, t in self.pending)
        if self.writer is not None or waiting > BUFFERED_MOTORS:
            self._flush()

    def finish(self, results: Sequence[FileResult], *, wanted: bool) -> None:
        """Store everything, or, if not wanted, nothing."""
        if not wanted:
            for result in results:
                result.stored = result.replaced = 0
            self.give_up()
            return
        self._flush()
        if all(result.unchanged for result in results) and not self.options.keep:
            self.give_up()
            return
        assert self.writer is not None
        assert self.catalog is not None
        connection = self.writer.connection
        with in_words(self.path):
            for result in results:
                file_id = self.file_ids[id(result)]
                if file_id is not None:
                    self._finish_file(file_id, result)
            self._keep_readings(results)
            same.take_aside(connection, self.writer.import_id)
            columns.rebuild(connection, sorted(self.touched))
            connection.execute(
                "UPDATE imports SET files = ?, motors = ? WHERE id = ?",
                (sum(not r.unchanged for r in results), sum(r.stored for r in results),
                 self.writer.import_id),
            )  # fmt: skip
        self.catalog.commit()

    def _keep_readings(self, results: Sequence[FileResult]) -> None:
        assert self.catalog is not None
        if self.options.keep:
            for maker in sorted({maker for result in results for maker in result.makers}):
                for heading, reading in self.options.overrides.items():
                    self.catalog.set_kept_reading(maker, heading, reading)

    def _begin(self) -> Writer:
        self.created = not self.path.exists()
        self.catalog = Catalog.open(self.path, create=True)
        self.catalog.begin()
        changed = set(self.catalog.corrections()) ^ set(self.corrections)
        self.corrected = {(c.maker, c.part_number) for c in changed}
        connection = self.catalog.connection
        with in_words(self.path):
            cursor = connection.execute(
                "INSERT INTO imports(at, files, motors) VALUES (?, 0, 0)", (now(),)
            )
            assert cursor.lastrowid is not None
            return Writer(connection, cursor.lastrowid)

    def _flush(self) -> None:
        writer = self.writer = self.writer or self._begin()
        with in_words(self.path):
            for result, table in self.pending:
                if id(result) not in self.file_ids:
                    self.file_ids[id(result)] = self._start_file(writer, result)
                file_id = self.file_ids[id(result)]
                if file_id is not None:
                    self._write(writer, file_id, result, table)
        self.pending.clear()

    def _write(self, writer: Writer, file_id: int, result: FileResult, table: JudgedTable) -> None:
        batch = table.published
        if self.corrected.intersection(zip(batch.maker, batch.part_number, strict=True)):
            raise CatalogError(
                f"A figure in {self.path} was corrected while {result.file} was read, which was "
                "read without that; nothing was stored, import it again."
            )
        stored = writer.add_table(
            file_id, table.chunk, table.published, table.reconciled, table.applied
        )
        result.stored += stored.motors
        result.replaced += stored.motors - stored.new
        if stored.again:
            result.remarks.append(
                f"{stored.again} of its motors stand in this call's files more than once: the "
                "last one counts, the earlier are kept as revisions."
            )
        self.touched |= stored.touched_sources

    def _start_file(self, writer: Writer, result: FileResult) -> int | None:
        if self._is_stored(result):
            result.unchanged = True
            return None
        return writer.add_file(
            file=result.file, sha256=result.sha256, format=result.format, layout="",
            options=self.options.fingerprint(result.headings), remarks=(),
        )  # fmt: skip

    def _is_stored(self, result: FileResult) -> bool:
        """Whether this very content, read under the same options, is what the catalog holds.

        It is when the last import of a file of this name was it, or when it was imported under
        another name and none of its motors has been replaced since.
        """
        assert self.writer is not None
        connection = self.writer.connection
        wanted = (result.sha256, self.options.fingerprint(result.headings))
        last = connection.execute(
            "SELECT sha256, options FROM files WHERE file = ? ORDER BY id DESC LIMIT 1",
            (result.file,),
        ).fetchone()
        if last == wanted and not self._removed(result.file):
            return True
        for (file_id,) in connection.execute(
            "SELECT id FROM files WHERE sha256 = ? AND options = ?", wanted
        ).fetchall():
            replaced = connection.execute(
                f"SELECT EXISTS (SELECT 1 FROM sources s JOIN motor m ON {OF_SOURCE} "
                "WHERE s.file = ? AND m.replaced_by IS NOT NULL)",
                (file_id,),
            ).fetchone()[0]
            if not replaced:
                return True
        return False

    def _removed(self, file: str) -> bool:
        """Whether motors of this file's last import were taken out by a removal."""
        assert self.writer is not None
        return bool(
            self.writer.connection.execute(
                f"SELECT EXISTS (SELECT 1 FROM sources s JOIN motor m ON {OF_SOURCE} "
                "JOIN imports i ON i.id = m.replaced_by WHERE i.files = 0 AND i.id <> ? "
                "AND s.file = (SELECT max(id) FROM files WHERE file = ?))",
                (self.writer.import_id, file),
            ).fetchone()[0]
        )

    def _finish_file(self, file_id: int, result: FileResult) -> None:
        assert self.writer is not None
        connection = self.writer.connection
        if result.replaced:
            result.as_before = revisions.stored_as_before(connection, file_id)
        if result.file != STANDARD_INPUT:  # a name that unlike files share
            result.left_behind = [m.name for m in revisions.left_behind(connection, file_id)]
        remarks = json.dumps(result.remarks, ensure_ascii=False) if result.remarks else None
        connection.execute(
            "UPDATE files SET layout = ?, remarks = ? WHERE id = ?",
            (result.layout, remarks, file_id),
        )
        connection.executemany(
            'INSERT INTO unread(file, part_number, heading, sheet, page, "row", "column", text, '
            "reason, guesses) VALUES (?,?,?,?,?,?,?,?,?,?)",
            [
                (file_id, u["part_number"], u["heading"], u["cell"]["sheet"], u["cell"]["page"],
                 u["cell"]["row"], u["cell"]["column"], u["text"] or "", u["reason"],
                 " ".join(u["guesses"]))
                for u in result.unread
            ],
        )  # fmt: skip

    def give_up(self) -> None:
        """Roll back; a catalog that this call made is taken away again."""
        self.pending.clear()
        if self.catalog is not None:
            self.catalog.rollback()
        self.close()
        if self.created and self.path.exists() and self.path.stat().st_size == 0:
            self.path.unlink()

    def close(self) -> None:
        """Close the catalog, if it was opened."""
        if self.catalog is not None:
            self.catalog.close()
            self.catalog = None
