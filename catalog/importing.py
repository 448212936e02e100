"""Files to motors in the catalog: read, correct, reconcile, store; all of a call, or nothing."""

import hashlib
import json
from collections import Counter
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING

from ..schema.batch import Batch, Heading
from ..schema.errors import MotorfolioError
from ..schema.motor import Reconciled
from ..schema.reconcile import reconcile
from . import documents as doc
from .batch_documents import finding_documents, motor_documents
from .documents import Document
from .duplicates import merged
from .overrides import check, check_used
from .store import Catalog, columns
from .store.catalog import now
from .store.corrections import Correction, corrected
from .store.database import in_words
from .store.revisions import OF_SOURCE
from .store.write import AppliedCorrection, Writer

if TYPE_CHECKING:
    from .reading import Reading, Unread
    from .tables import TableFile

BUFFERED_MOTORS = 40_000
"""Up to so many motors are read before the catalog is opened, so that a call which can't be used
touches no file; with more, memory counts for more."""

STANDARD_INPUT = "-"

MOST_FINDINGS = 1000
"""So many findings of a file are kept to be printed; all of them are stored."""


@dataclass(frozen=True, slots=True)
class Options:
    """What a call tells about its files.

    overrides: heading as printed → "quantity[:unit[:convention]]"; keep: use them for the
    maker's further files too.
    """

    maker: str | None = None
    series: str | None = None
    sheet: str | None = None
    format: str | None = None
    commutation: str | None = None
    overrides: Mapping[str, str] = field(default_factory=dict)
    keep: bool = False
    strict: bool = False
    dry_run: bool = False

    def fingerprint(self, headings: Sequence[Heading]) -> str:
        """How a file was read, as text: the same bytes with the same fingerprint say the same."""
        told = [self.maker, self.series, self.sheet, self.commutation]
        read = [
            [h.text, h.quantity, h.unit, h.convention.as_json() if h.convention else None]
            for h in headings
        ]
        digest = hashlib.sha256(json.dumps(read, ensure_ascii=False).encode()).hexdigest()
        return json.dumps([*told, digest], ensure_ascii=False)


@dataclass(slots=True)
class FileResult:
    """What one file gave: how its headings were read, what was not, its motors, the findings.

    ``severities`` counts all findings; ``findings`` and ``documents`` hold all of them when
    documents were asked for, else the first MOST_FINDINGS that are more than notes, and none.
    """

    file: str
    sha256: str
    format: str
    layout: str = "rows"
    headings: list[Heading] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    unread: list[Document] = field(default_factory=list)
    findings: list[Document] = field(default_factory=list)
    documents: list[Document] = field(default_factory=list)
    makers: set[str] = field(default_factory=set)
    severities: Counter[str] = field(default_factory=Counter)
    motors: int = 0
    stored: int = 0
    replaced: int = 0
    unchanged: bool = False

    def as_json(self) -> Document:
        """The file's part of the document that ``import --json`` prints."""
        return {
            "file": self.file,
            "sha256": self.sha256,
            "layout": self.layout,
            "reading": [
                {
                    "heading": h.text,
                    "quantity": h.quantity,
                    "unit": h.unit or None,
                    "convention": (h.convention.as_json() or None) if h.convention else None,
                    "score": round(h.score, 3),
                    "reason": h.reason,
                }
                for h in self.headings
            ],
            "unread": self.unread,
            "remarks": self.remarks,
            "motors": self.documents,
            "findings": self.findings,
            "stored": self.stored,
            "replaced": self.replaced,
            "unchanged": self.unchanged,
        }


@dataclass(slots=True)
class ImportResult:
    """All files of a call; ``refused`` where --strict stored nothing."""

    files: list[FileResult]
    refused: bool = False

    def as_json(self) -> Document:
        """The document that ``import --json`` prints."""
        return {"files": [file.as_json() for file in self.files]}


Progress = Callable[[str, int], None]
"""Called with a file's name and how many of its motors have been read."""


def import_files(
    catalog: Path,
    files: Sequence[str],
    options: Options,
    *,
    with_documents: bool = False,
    standard_input: Callable[[], bytes] | None = None,
    progress: Progress | None = None,
) -> ImportResult:
    """Read these files and store their motors in the catalog, made if there is none.

    with_documents: give the motors' documents too (a dry run needs them, and --json).
    Raises MotorfolioError, with nothing stored, when a file can't be used or holds no motor.
    """
    check(options.overrides)
    kept: list[tuple[str, str, str]] = []
    corrections: list[Correction] = []
    if catalog.exists() and catalog.stat().st_size:
        with Catalog.open(catalog) as known:
            kept, corrections = known.kept_readings(), known.corrections()
    results: list[FileResult] = []
    with _storing(catalog, options) as store:
        for file in files:
            table_file, reading = _read(file, options, kept, standard_input)
            result = FileResult(table_file.name, table_file.sha256, table_file.format)
            result.headings = list(reading.headings)
            results.append(result)
            for table in _tables(reading.batches, corrections, result):
                _note(result, table, with_documents, corrections)
                if progress is not None:
                    progress(result.file, result.motors)
                store.add(result, table)
            result.layout = reading.layout
            result.headings = list(reading.headings)
            result.remarks += reading.remarks
            result.unread = [unread_document(u) for u in reading.unread]
            if not result.motors:
                raise MotorfolioError(_no_motor(result))
        check_used(options.overrides, (h for result in results for h in result.headings))
        refused = options.strict and any(r.unread or r.severities["error"] for r in results)
        store.finish(results, wanted=not (refused or options.dry_run))
    return ImportResult(results, refused)


def unread_document(u: "Unread") -> Document:
    """A cell that the reading lists, as a document."""
    place = doc.cell(u.sheet, u.page, u.row, u.column)
    return doc.unread(u.part_number, u.heading, place, u.text, u.reason, u.guesses)


def _no_motor(result: FileResult) -> str:
    listed = f" ({len(result.unread)} cells could not be read)" if result.unread else ""
    return (
        f"{result.file}: no motor was found in it{listed}; a motor table has a row or a column of "
        "part numbers and headings such as torque constant, resistance, no-load speed with units."
    )


def _read(
    file: str,
    options: Options,
    kept: Sequence[tuple[str, str, str]],
    standard_input: Callable[[], bytes] | None,
) -> "tuple[TableFile, Reading]":
    """The file's tables and their reading, with the readings kept for its maker."""
    from .reading import ReadOptions, read
    from .tables import read_tables

    data = standard_input() if file == STANDARD_INPUT and standard_input else None

    def attempt(readings: dict[str, str]) -> "tuple[TableFile, Reading]":
        path = None if file == STANDARD_INPUT else Path(file)
        table_file = read_tables(path, data, format=options.format, sheet=options.sheet)
        return table_file, read(
            table_file,
            ReadOptions(
                maker=options.maker or "",
                series=options.series,
                sheet=options.sheet,
                overrides=dict(options.overrides),
                kept=readings,
                commutation=options.commutation,
            ),
        )

    by_maker: dict[str, dict[str, str]] = {}
    for maker, heading, reading in kept:
        by_maker.setdefault(maker, {})[heading] = reading
    first = attempt(by_maker.get(options.maker or "", {}))
    if options.maker or not any(by_maker):
        return first
    # the sheet itself may name a maker for whom readings are kept
    batch = next(iter(first[1].batches), None)
    maker = batch.maker[0] if batch is not None and len(batch) else ""
    return attempt(by_maker.get(maker, by_maker.get("", {})))


# ---- one table at a time


@dataclass(slots=True)
class _Table:
    chunk: int
    published: Batch
    reconciled: Reconciled
    applied: list[AppliedCorrection]


def _tables(
    batches: Iterable[Batch],
    corrections: Sequence[Correction],
    result: FileResult,
) -> Iterator[_Table]:
    for chunk, read in enumerate(batches):
        if len(read):
            published, remarks = merged(read)
            result.remarks += remarks
            batch, applied, remarks = corrected(published, corrections)
            result.remarks += remarks
            yield _Table(chunk, published, reconcile(batch), applied)


def _note(
    result: FileResult, table: _Table, with_documents: bool, corrections: Sequence[Correction]
) -> None:
    result.motors += len(table.published)
    result.makers.update(table.published.maker)
    findings = finding_documents(table.reconciled)
    result.severities.update(f["severity"] for f in findings)
    if with_documents:
        result.findings += findings
        reasons = {c.id: c.reason for c in corrections}
        result.documents += motor_documents(table.reconciled, table.applied, reasons)
    else:
        room = MOST_FINDINGS - len(result.findings)
        result.findings += [f for f in findings if f["severity"] != "note"][:room]


# ---- one transaction a call


@contextmanager
def _storing(path: Path, options: Options) -> "Iterator[_Store]":
    store = _Store(path, options)
    try:
        yield store
    except BaseException:
        store.give_up()
        raise
    finally:
        store.close()


class _Store:
    """Buffers tables, then writes them in one transaction."""

    def __init__(self, path: Path, options: Options) -> None:
        self.path = path
        self.options = options
        self.pending: list[tuple[FileResult, _Table]] = []
        self.catalog: Catalog | None = None
        self.created = False
        self.writer: Writer | None = None
        self.file_ids: dict[int, int | None] = {}
        self.touched: set[int] = set()

    def add(self, result: FileResult, table: _Table) -> None:
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

    def _write(self, writer: Writer, file_id: int, result: FileResult, table: _Table) -> None:
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
