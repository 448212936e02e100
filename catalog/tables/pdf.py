"""PDF pages by their text layer: runs of text with places, put into lines and columns."""

import re
import statistics
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise

from .cells import clean, subscript, superscript
from .columns import Interval, Piece, arrange, find_columns, fits, join_split_labels
from .grid import Grid, Span, TableError
from .source import Source
from .text import read_text

_MOST_BYTES = 200_000_000
_MOST_PAGES = 400
_MOST_RUNS = 20_000
_MOST_SIGNS = 200_000
_MOST_TOTAL = 300_000
_WORD_GAP = 0.7  # of the type size: what is wider parts two cells
_LONGEST_SCRIPT = 6  # signs of a raised or lowered text that is not much smaller: "-1", "1),2)"
_BROKEN = ("\ufffd", "\ufffe", "\uffff")


@dataclass(slots=True)
class _Run:
    """A run of text in one style: left, bottom, right, top in points, page upright."""

    x0: float
    y0: float
    x1: float
    y1: float
    text: str
    base: "_Run | None" = None  # the run that a raised or lowered sign belongs to

    @property
    def height(self) -> float:
        return self.y1 - self.y0


@dataclass(slots=True)
class _Line:
    """The pieces on one baseline, top down by ``y``, and the type size."""

    y: float
    size: float
    pieces: list[Piece]
    number: int = 0
    prose: bool = False


@dataclass(slots=True)
class _Block:
    """Lines of one table with its columns; ``table`` is False for running text."""

    page: int
    lines: list[_Line]
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
            runs, broken = _runs(page)
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
        blocks += _blocks(_lines(runs), number)
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


# --- runs and lines ---------------------------------------------------------------------------


def _runs(page) -> tuple[list[_Run], int]:
    """The runs of a page in upright coordinates, and how many signs are unknown."""
    text_page = page.get_textpage()
    try:
        count = min(text_page.count_rects(), _MOST_RUNS)
        boxes = [text_page.get_rect(i) for i in range(count)]
        runs = []
        broken = 0
        seen: set[tuple[int, int, str]] = set()
        turn = _turn(page)
        for box in _inked(text_page, boxes):
            raw = text_page.get_text_bounded(*box)
            text = clean(raw.replace("\ufffe", "-")).replace("\n", " ")
            broken += sum(raw.count(sign) for sign in _BROKEN[:1])
            broken += sum("\ue000" <= sign <= "\uf8ff" for sign in raw)
            if not text:
                continue
            x0, y0, x1, y1 = turn(*box)
            key = (round(x0), round(y0), text)  # bold type is sometimes drawn twice
            if key in seen or (len(text) > 2 and y1 - y0 > 2.5 * (x1 - x0)):
                continue  # text that runs upward belongs to a drawing
            seen.add(key)
            runs.append(_Run(x0, y0, x1, y1, text))
    finally:
        text_page.close()
    return runs, broken


_EAST_ASIAN = re.compile("[\u3040-\u30ff\u3400-\u9fff\uac00-\ud7af]")
_FLAT = 0.05  # points: no sign is as low as this
_INK = 0.2, 0.9  # where the ink of a sign begins and ends in its line's height, about


def _inked(text_page, boxes: list[tuple[float, ...]]) -> list[tuple[float, ...]]:
    """The boxes of a page's runs, with a height where they have none: East Asian fonts are often
    not part of the file, and without them the library tells the width of a sign only, or leaves
    a run out. The height is then that of the line."""
    if not _EAST_ASIAN.search(text_page.get_text_range()):
        return boxes
    known = [box for box in boxes if box[3] - box[1] > _FLAT]
    inked: dict[int, list[tuple[float, ...]]] = {}
    for box in known:
        for at in range(int(box[1]), int(box[3]) + 1):
            inked.setdefault(at, []).append(box)
    found: list[tuple[float, ...]] = []
    for i in range(min(text_page.count_chars(), _MOST_SIGNS)):
        x0, y0, x1, y1 = text_page.get_charbox(i)
        if y1 - y0 > _FLAT or x1 - x0 < _FLAT:
            continue
        beside = inked.get(int(y0), ())
        if any(a <= x0 and x1 <= b and low <= y0 <= high for a, low, b, high in beside):
            continue  # part of a run that other signs give a height
        _, bottom, _, top = text_page.get_charbox(i, loose=True)
        low, high = (bottom + share * (top - bottom) for share in _INK)
        last = found[-1] if found else None
        if last and abs(last[1] - low) < 0.1 and abs(x0 - last[2]) < 0.3 * (high - low):
            found[-1] = (last[0], last[1], x1, last[3])
        else:
            found.append((x0, low, x1, high))
    return known + found


def _turn(page):
    """How a page's coordinates become upright ones, by its rotation."""
    rotation = page.get_rotation()
    width, height = page.get_size()
    if rotation == 90:
        return lambda l, b, r, t: (b, height - r, t, height - l)  # noqa: E741
    if rotation == 180:
        return lambda l, b, r, t: (width - r, height - t, width - l, height - b)  # noqa: E741
    if rotation == 270:
        return lambda l, b, r, t: (width - t, l, width - b, r)  # noqa: E741
    return lambda l, b, r, t: (l, b, r, t)  # noqa: E741


def _attach_scripts(runs: list[_Run]) -> None:
    """Find small runs set higher or lower right behind another: '²' in g cm², '₀' in M₀.

    Boxes are those of the ink, so that a small sign is told by its height and by where its
    lower or upper edge stands against the run before it.
    """
    ends: dict[int, list[_Run]] = {}
    for run in runs:
        ends.setdefault(int(run.x1 // 4), []).append(run)
    for run in sorted(runs, key=lambda r: r.x0):
        near = int(run.x0 // 4)
        for before in (r for at in (near - 1, near, near + 1) for r in ends.get(at, ())):
            base = before.base or before  # a mark may follow a lowered sign
            height = base.height
            if (
                run is before
                or run is base
                or not -0.1 * height < run.x0 - before.x1 < 0.3 * height
                or not base.y0 - 0.8 * height < (run.y0 + run.y1) / 2 < base.y1 + 0.5 * height
            ):
                continue
            small = run.height <= 0.72 * height
            # Ink of "min" or "n" is hardly higher than that of a small "-1": then both of the
            # sign's edges must stand off the base's, which no text on the same baseline does.
            short = len(run.text) <= _LONGEST_SCRIPT
            over = short and run.y1 > base.y1 + 0.15 * height
            under = short and run.y0 < base.y0 - 0.3 * height
            raised = run.y0 > base.y0 + 0.4 * height and (
                over or (small and run.y1 > base.y1 - 0.2 * height)
            )
            lowered = (
                base.y0 < run.y1 < base.y0 + 0.45 * height
                and run.text[0].isalnum()
                and (small or under)
            )
            if raised or lowered:
                run.text = superscript(run.text) if raised else subscript(run.text)
                run.base = base
                break


def _lines(runs: list[_Run]) -> list[_Line]:
    """Runs on one baseline, joined where only a word's space parts them."""
    _attach_scripts(runs)
    full = [run for run in runs if run.base is None]
    if not full:
        return []
    usual = statistics.median(run.height for run in full)
    groups: list[list[_Run]] = []
    middles: list[float] = []
    at_of: dict[int, int] = {}
    for run in sorted(full, key=lambda r: -(r.y0 + r.y1) / 2):
        middle = (run.y0 + run.y1) / 2
        at = None
        for i in range(len(groups) - 1, max(-1, len(groups) - 4), -1):
            if abs(middles[i] - middle) <= 0.45 * max(usual, run.height * 0.6):
                at = i
                break
        if at is None:
            at = len(groups)
            groups.append([])
            middles.append(middle)
        groups[at].append(run)
        at_of[id(run)] = at
        tallest = max(groups[at], key=lambda r: r.height)
        middles[at] = (tallest.y0 + tallest.y1) / 2
    for run in runs:
        if run.base is not None:
            groups[at_of[id(run.base)]].append(run)
    lines = []
    for group, middle in zip(groups, middles, strict=True):
        group.sort(key=lambda r: r.x0)
        size = statistics.median(run.height for run in group)
        lines.append(_Line(middle, size, _pieces(group)))
    lines.sort(key=lambda line: -line.y)
    for number, line in enumerate(lines, 1):
        line.number = number
    return lines


def _pieces(group: list[_Run]) -> list[Piece]:
    pieces: list[Piece] = []
    size = 0.0
    for run in group:
        if pieces:
            piece = pieces[-1]
            gap = run.x0 - piece.x1
            size = max(size, run.height)
            if run.base is not None or gap < _WORD_GAP * size:
                apart = run.base is None and gap > 0.12 * size
                piece.text += (" " if apart else "") + run.text
                piece.x1 = max(piece.x1, run.x1)
                continue
        pieces.append(Piece(run.x0, run.x1, run.text))
        size = run.height
    return pieces


# --- blocks -----------------------------------------------------------------------------------


def _blocks(lines: list[_Line], page: int) -> list[_Block]:
    """Lines parted where a wide gap, or other columns, begin another table."""
    if not lines:
        return []
    pitches = [a.y - b.y for a, b in pairwise(lines)]
    usual = statistics.median(pitches) if pitches else 0.0
    groups: list[list[_Line]] = [[lines[0]]]
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


def _block(page: int, lines: list[_Line]) -> _Block:
    several = [line for line in lines if len(line.pieces) > 1]
    columns = find_columns([line.pieces for line in lines])
    table = len(several) >= 2 and len(several) >= 0.3 * len(lines)
    return _Block(page, lines, columns, table)


def _by_columns(lines: list[_Line]) -> Iterator[list[_Line]]:
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
    waiting: list[_Line] = []
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
