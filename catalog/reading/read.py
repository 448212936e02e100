"""A file's grids → batches: blocks, tables joined, headings matched once, figures read."""

import re
from collections.abc import Iterable
from itertools import chain
from pathlib import PurePath

from ...schema.batch import Batch, Heading
from ...schema.figure.signs import plain
from ..tables.grid import Grid, TableFile
from .account import unaccounted
from .cells import TOLD
from .entries.batches import TableReader
from .entries.kind import is_marked
from .headings.lexicon import squeeze, tokens
from .layout.blocks import Block, blocks_of
from .layout.columns import lay_out_columns
from .layout.join import goes_with, have_motors_in_common, joined, take_in
from .layout.lines import text_of
from .layout.points import is_load_table, load_points, points_table
from .layout.rows import lay_out_rows
from .model import Reading, ReadingError, ReadOptions, Table, Unread


def read(file: TableFile, options: ReadOptions) -> Reading:
    """All motors of a file, as published; raises ReadingError if there is none.

    ``Reading.batches`` is a list, or lazy where a table goes on in chunks.
    """
    remarks = list(file.skipped)
    unread: list[Unread] = []
    headings: list[Heading] = []
    batches: list[Iterable[Batch]] = []
    layout = ""
    grids = [g for g in file.grids if not options.sheet or g.sheet == options.sheet]
    if not grids:
        names = ", ".join(str(g.sheet) for g in file.grids if g.sheet)
        raise ReadingError(f'{file.name}: has no sheet "{options.sheet}"; it has {names or "none"}')
    gears = lazy = False
    told = TOLD.set(
        frozenset(squeeze(tokens(h)) for h in (*options.overrides, *options.kept)) - {""}
    )
    lone, loose = _all_tables(grids, remarks, unread)
    TOLD.reset(told)
    stem = PurePath(file.name).stem
    found = joined(lone, remarks)
    _share_notes(found, loose, everywhere=file.format == "text")
    for position, table in enumerate(found):
        reader = TableReader(table, file, options, stem, position if len(found) > 1 else None)
        gears = gears or reader.of_gears
        if not reader.worthwhile:
            remarks += reader.why_not
            unread += reader.unread
            continue
        layout = layout or table.layout
        headings += reader.headings
        if table.continuation is not None:
            lazy = True
            batches.append(reader.lazily(unread))
            remarks += reader.remarks
            continue
        batches.append([reader.batch()])
        unread += reader.unread
        remarks += reader.remarks
    if not batches:
        if gears:
            raise ReadingError(
                f"{file.name}: a table of gears, not of motors; read it with: motorfolio gears "
                f"{file.name}"
            )
        raise ReadingError(
            f"{file.name}: no motor is found in it; a table of motors has headings such as "
            '"Nominal voltage [V]" over or beside figures'
        )
    run = chain.from_iterable(batches)
    return Reading(layout or "rows", headings, run if lazy else list(run), unread, remarks)


def _all_tables(
    grids: list[Grid], remarks: list[str], unread: list[Unread]
) -> tuple[list[Table], list[str]]:
    """The tables of all grids, and the texts of grids that have none."""
    tables_of = [_tables(grid) for grid in grids]
    for i, grid in enumerate(grids):
        if grid.continuation is None:
            continue
        mine = tables_of[i]
        others = [t for k, tables in enumerate(tables_of) if k != i for t in tables]
        if mine and (
            len(mine) > 1
            or mine[0].layout != "rows"
            or any(have_motors_in_common(mine[0], other) for other in others)
        ):
            grid.take_up_rest()
            tables_of[i] = _tables(grid)
        elif mine:
            mine[0].continuation = grid.continuation
    found: list[Table] = []
    loose: list[str] = []
    for grid, tables in zip(grids, tables_of, strict=True):
        remarks += grid.remarks
        if not tables:
            loose += [text_of(row) for row in grid.rows[:50]]
            if grid.sheet:
                remarks.append(f"sheet {grid.sheet}: no motor table, skipped")
        found += tables
        unread += unaccounted(grid, tables)
    return found, loose


_OF_ALL = re.compile(
    r"(?:all|alle|sämtliche|tou(?:s|tes)|tutt[ie]|tod[oa]s)\b|全て|すべて|所有|全部", re.IGNORECASE
)
"""Begins a note that holds for every table of its file."""


def _share_notes(tables: list[Table], loose: list[str], everywhere: bool) -> None:
    """Notes with a mark or of "all", and texts that belong to no table, hold for all tables of a
    file; in a text of paragraphs every note does."""
    shared = [
        n for t in tables for n in t.notes if everywhere or is_marked(n) or _OF_ALL.match(plain(n))
    ]
    for table in tables:
        table.notes += [n for n in (*loose, *shared) if n and n not in table.notes]


def _tables(grid: Grid) -> list[Table]:
    """The tables of one grid with the titles and notes that stand about them."""
    tables: list[Table] = []
    loose: list[str] = []
    beside: set[int] = set()  # rows in which the table before stands
    for block in blocks_of(grid):
        texts = [text_of(row) for row in block.rows] if block.kind == "text" else []
        if block.kind == "text":
            if tables and _continues_rows(tables[-1], block):
                _append_rows(tables[-1], block)
                continue
            loose += texts
            if tables:
                tables[-1].notes += texts
            continue
        table = points_table(block) or (
            lay_out_rows(block) if block.kind == "rows" else lay_out_columns(block)
        )
        table.sheet, table.page = grid.sheet, grid.page
        table.titles = [*loose, *table.titles]
        loose = []
        previous = tables[-1] if tables else None
        if is_load_table(table):
            table = load_points(table, previous)
            if table is None:
                continue
        elif previous is not None and goes_with(
            previous, table, bool(beside & {*block.row_numbers})
        ):
            take_in(previous, table)
            continue
        if previous is not None and _same_heads(previous, table):
            _append_table(previous, table)
            continue
        tables.append(table)
        beside = {*block.row_numbers}
    for table in tables:
        table.titles += [grid.sheet] if grid.sheet else []
        table.notes += grid.notes
    return tables


def _continues_rows(table: Table, block: Block) -> bool:
    """Whether rows behind a blank row go on with the table above."""
    if table.layout != "rows" or not table.fields:
        return False
    wide = max(sum(1 for t in row if t) for row in block.rows)
    return wide >= max(3, len(table.fields) // 2)


def _append_rows(table: Table, block: Block) -> None:
    for row, number in zip(block.rows, block.row_numbers, strict=True):
        if sum(1 for t in row if t) < 2:
            table.notes.append(text_of(row))
            continue
        for field in table.fields:
            field.texts.append(row[field.source] if field.source < len(row) else "")
        table.places.append(number)


def _same_heads(a: Table, b: Table) -> bool:
    """Whether a later table repeats the headings of the one before."""
    return (
        a.layout == b.layout == "rows"
        and [squeeze(tokens(f.heading)) for f in a.fields]
        == [squeeze(tokens(f.heading)) for f in b.fields]
        and [f.column for f in a.fields] == [f.column for f in b.fields]
    )


def _append_table(a: Table, b: Table) -> None:
    for fa, fb in zip(a.fields, b.fields, strict=True):
        fa.texts += fb.texts
    a.places += b.places
    a.notes += b.notes
    a.titles += b.titles
    if b.fields:
        a.remarks.append(f"row {b.fields[0].row}: the headings again, passed over")
