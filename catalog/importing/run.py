"""Files to motors in the catalog: read, correct, reconcile, store; all of a call, or nothing."""

from collections.abc import Callable, Iterable, Iterator, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from ...schema.batch import Batch
from ...schema.errors import MotorfolioError
from ...schema.reconcile.run import reconcile
from .. import documents as doc
from ..documents import Document
from ..store import Catalog
from ..store.corrections import Correction, corrected
from .documents import finding_documents, motor_documents
from .duplicates import merged
from .overrides import check, check_used
from .result import (
    MOST_FINDINGS,
    MOST_SHOWN,
    FileResult,
    ImportResult,
    Options,
    first_constants,
)
from .storing import JudgedTable, storing

if TYPE_CHECKING:
    from ..reading import Reading, Unread
    from ..tables import TableFile

__all__ = ["FileResult", "ImportResult", "Options", "import_files"]

STANDARD_INPUT = "-"

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
    with storing(catalog, options, corrections) as store:
        for file in files:
            if progress is not None:
                progress(file, 0)
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
    from ..reading import ReadOptions, read
    from ..tables import read_tables

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


def _tables(
    batches: Iterable[Batch],
    corrections: Sequence[Correction],
    result: FileResult,
) -> Iterator[JudgedTable]:
    for chunk, read in enumerate(batches):
        if len(read):
            published, remarks = merged(read)
            result.remarks += remarks
            batch, applied, remarks = corrected(published, corrections)
            result.remarks += remarks
            yield JudgedTable(chunk, published, reconcile(batch), applied)


def _note(
    result: FileResult, table: JudgedTable, with_documents: bool, corrections: Sequence[Correction]
) -> None:
    result.motors += len(table.published)
    result.constants += first_constants(table.reconciled, MOST_SHOWN - len(result.constants))
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
