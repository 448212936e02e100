"""One page's text layer: runs of text with their places, raised signs attached, put into lines."""

import re
import statistics
from dataclasses import dataclass

from .cells import clean, subscript, superscript
from .columns import Piece

_MOST_RUNS = 20_000
_MOST_SIGNS = 200_000
_WORD_GAP = 0.7  # of the type size: what is wider parts two cells
_LONGEST_SCRIPT = 6  # signs of a raised or lowered text that is not much smaller: "-1", "1),2)"
_BROKEN = ("\ufffd", "\ufffe", "\uffff")


@dataclass(slots=True)
class Run:
    """A run of text in one style: left, bottom, right, top in points, page upright."""

    x0: float
    y0: float
    x1: float
    y1: float
    text: str
    base: "Run | None" = None  # the run that a raised or lowered sign belongs to

    @property
    def height(self) -> float:
        return self.y1 - self.y0


@dataclass(slots=True)
class Line:
    """The pieces on one baseline, top down by ``y``, and the type size."""

    y: float
    size: float
    pieces: list[Piece]
    number: int = 0
    prose: bool = False


def runs_of(page) -> tuple[list[Run], int]:
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
            runs.append(Run(x0, y0, x1, y1, text))
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


def _attach_scripts(runs: list[Run]) -> None:
    """Find small runs set higher or lower right behind another: '²' in g cm², '₀' in M₀.

    Boxes are those of the ink, so that a small sign is told by its height and by where its
    lower or upper edge stands against the run before it.
    """
    ends: dict[int, list[Run]] = {}
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


def lines_of(runs: list[Run]) -> list[Line]:
    """Runs on one baseline, joined where only a word's space parts them."""
    _attach_scripts(runs)
    full = [run for run in runs if run.base is None]
    if not full:
        return []
    usual = statistics.median(run.height for run in full)
    groups: list[list[Run]] = []
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
        lines.append(Line(middle, size, _pieces(group)))
    lines.sort(key=lambda line: -line.y)
    for number, line in enumerate(lines, 1):
        line.number = number
    return lines


def _pieces(group: list[Run]) -> list[Piece]:
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
