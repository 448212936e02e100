"""PDF pages by their text layer: lines put into blocks with the same columns, and those read."""

import statistics
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise

from .columns import Interval, arrange, find_columns, fits, join_split_labels
from .grid import Grid, Span, TableError
from .pdf_lines import Line, lines_of, runs_of
from .source import Source
from .text import read_text

_MOST_BYTES = 200_000_000
_MOST_PAGES = 400
_MOST_TOTAL = 300_000


@dataclass(slots=True)
class _Block:
    """Lines of one table with its columns; ``table`` is False for running text."""

    page: int
    lines: list[Line]
    columns: list[Interval]
    table: bool


def read_pdf(source: Source) -> tuple[list[Grid], list[str]]:
    """(grids, pages passed over) of a PDF; only its text layer is read.

    Each block of lines with the same columns is a grid. A table that goes on at the top of the
    next page with the same columns and without its heading again is one grid, with the page of
    every row in ``row_pages``.
    """
    import pypdfium2 as pdfium

    data = source.read(_MOST_BYTES, "PDF")
    try:
        document = pdfium.PdfDocument(data)
    except pdfium.PdfiumError as error:
        if "assword" in str(error):
            raise TableError(
                f"{source.name}: is protected by a password; save it without one"
            ) from None
        raise TableError(
            f"{source.name}: the PDF is damaged, perhaps cut short; download it again"
        ) from None
    try:
        return _read(document, source.name)
    except pdfium.PdfiumError as error:
        raise TableError(f"{source.name}: the PDF is damaged ({error})") from None
    finally:
        document.close()


def _read(document, name: str) -> tuple[list[Grid], list[str]]:
    skipped: list[str] = []
    blocks: list[_Block] = []
    remarks: dict[int, list[str]] = {}
    scanned = total = 0
    pages = len(document)
    for number in range(1, min(pages, _MOST_PAGES) + 1):
        page = document[number - 1]
        try:
            runs, broken = runs_of(page)
            pictured = not runs and any(True for _ in page.get_objects(filter=(3,), max_depth=2))
        finally:
            page.close()
        total += len(runs)
        if total > _MOST_TOTAL:
            skipped.append(f"pages from {number} on: too much text; split the file")
            break
        if not runs:
            scanned += pictured
            why = "a scanned picture without a text layer" if pictured else "no text"
            skipped.append(f"page {number}: {why}")
            continue
        if broken:
            remarks[number] = [
                f"page {number}: {broken} signs have no known letter in the file's own fonts"
            ]
        blocks += _blocks(lines_of(runs), number)
    if pages > _MOST_PAGES:
        skipped.append(f"pages {_MOST_PAGES + 1}–{pages}: only the first {_MOST_PAGES} are read")
    if not blocks:
        why = (
            "is a scanned picture without a text layer; put it through text recognition first"
            if scanned
            else "has no text"
        )
        raise TableError(f"{name}: {why}")
    grids: list[Grid] = []
    for group in _continued(_with_prose(blocks)):
        grids += [_grid(group)] if group[0].table else _text_grids(group[0])
    for grid in grids:
        for page in dict.fromkeys(grid.row_pages or [grid.page]):
            grid.remarks += remarks.get(page or 0, [])
    return grids, skipped


# --- blocks -----------------------------------------------------------------------------------


def _blocks(lines: list[Line], page: int) -> list[_Block]:
    """Lines parted where a wide gap, or other columns, begin another table."""
    if not lines:
        return []
    pitches = [a.y - b.y for a, b in pairwise(lines)]
    usual = statistics.median(pitches) if pitches else 0.0
    groups: list[list[Line]] = [[lines[0]]]
    for line, pitch in zip(lines[1:], pitches, strict=True):
        if pitch > max(1.8 * usual, 2.2 * line.size):
            groups.append([])
        groups[-1].append(line)
    blocks: list[_Block] = []
    for group in groups:
        for part in _by_columns(group):
            block = _block(page, part)
            last = blocks[-1] if blocks else None
            if last and last.table and block.table and _compatible(last, block):
                blocks[-1] = _block(page, last.lines + block.lines)
            else:
                blocks.append(block)
    return blocks


def _block(page: int, lines: list[Line]) -> _Block:
    several = [line for line in lines if len(line.pieces) > 1]
    columns = find_columns([line.pieces for line in lines])
    table = len(several) >= 2 and len(several) >= 0.3 * len(lines)
    return _Block(page, lines, columns, table)


def _by_columns(lines: list[Line]) -> Iterator[list[Line]]:
    """Part lines where the number of columns changes for good and the places do not agree."""
    start = 0
    for i in range(2, len(lines) - 1):
        if i - start < 2:
            continue
        above = find_columns([line.pieces for line in lines[start:i]])
        below = find_columns([line.pieces for line in lines[i : i + 6]])
        if min(len(above), len(below)) < 2 or len(above) == len(below):
            continue
        both = find_columns([line.pieces for line in lines[start : i + 6]])
        if len(both) < min(len(above), len(below)):
            yield lines[start:i]
            start = i
    yield lines[start:]


def _compatible(one: _Block, other: _Block) -> bool:
    if fits(one.columns, other.columns):
        return True
    both = find_columns([line.pieces for line in one.lines + other.lines])
    most = max(len(one.columns), len(other.columns))
    return len(both) == most and min(len(one.columns), len(other.columns)) >= most - 1


def _with_prose(blocks: list[_Block]) -> list[_Block]:
    """Running text joins the table below it on its page (a title), else the one above (notes)."""
    out: list[_Block] = []
    waiting: list[Line] = []
    for i, block in enumerate(blocks):
        for line in block.lines:
            line.prose = not block.table
        if block.table:
            block.lines = waiting + block.lines
            waiting = []
            out.append(block)
            continue
        follows = any(b.table and b.page == block.page for b in blocks[i + 1 :])
        precedes = bool(out) and out[-1].page == block.page
        if follows:
            waiting += block.lines
        elif precedes:
            out[-1].lines = out[-1].lines + block.lines
        else:
            out.append(block)
    return out


def _continued(blocks: list[_Block]) -> list[list[_Block]]:
    """Blocks in groups: a table and what of it stands on the pages after."""
    groups: list[list[_Block]] = []
    for block in blocks:
        last = groups[-1][-1] if groups else None
        if (
            last is not None
            and last.table
            and block.table
            and block.page == last.page + 1
            and fits(last.columns, block.columns)
            and not _repeats_heading(groups[-1][0], block)
        ):
            groups[-1].append(block)
        else:
            groups.append([block])
    return groups


def _repeats_heading(first: _Block, block: _Block) -> bool:
    """Whether a block begins with its own heading, which makes it a table by itself."""
    heads = [line.pieces[0].text for line in first.lines if len(line.pieces) > 1][:4]
    own = [line.pieces[0].text for line in block.lines if len(line.pieces) > 1][:2]
    return any(text in heads for text in own)


def _text_grids(block: _Block) -> list[Grid]:
    """A page without a table, read as text: pairs of label and value, or lines as they are."""
    lines = ["  ".join(piece.text for piece in line.pieces) for line in block.lines]
    grids = read_text("\n".join(lines))
    for grid in grids:
        grid.page = block.page
        grid.row_numbers = [block.lines[number - 1].number for number in grid.row_numbers]
    return grids


def _grid(group: list[_Block]) -> Grid:
    first = group[0]
    lines = [line for block in group for line in block.lines]
    pages = [block.page for block in group for _ in block.lines]
    tabular = [line for line in lines if not line.prose] or lines
    table = arrange(
        [line.pieces for line in tabular], find_columns([line.pieces for line in tabular])
    )
    rows = table.rows
    spans = table.spans
    if len(tabular) < len(lines):
        width = len(rows[0])
        at = [i for i, line in enumerate(lines) if not line.prose]
        spans = [Span(at[s.row], s.column, s.rows, s.columns) for s in spans]
        filled = iter(rows)
        rows = [
            ["  ".join(piece.text for piece in line.pieces)] + [""] * (width - 1)
            if line.prose
            else next(filled)
            for line in lines
        ]
    places = list(range(len(rows)))
    rows, places, spans = join_split_labels(rows, places, spans)
    grid = Grid(
        rows,
        [lines[i].number for i in places],
        list(range(1, len(rows[0]) + 1)),
        page=first.page,
        spans=spans,
    )
    if len(group) > 1:
        grid.row_pages = [pages[i] for i in places]
    if table.clashes:
        grid.remarks.append(f"{table.clashes} cells hold text of two places side by side")
    return grid
