"""Text pasted from a page or a PDF: columns by blanks, or "label: value" pairs."""

import re
import unicodedata
from collections import Counter
from itertools import pairwise

from .cells import clean, even
from .columns import Piece, arrange, find_columns, fits, join_split_labels, lies_in
from .grid import Grid

# Bilingual labels are long: "Thermal time constant winding / Constante de temps thermique du …".
_WORD = r"[^\s:=;|：＝；｜]{1,40}"
_LABEL = rf"{_WORD}(?:[ \xa0\u3000]{_WORD}){{0,19}}"
# A colon between digits is a ratio or a time, one before // a web address.
_SIGN = r"[ \xa0\u3000]*(?:：|=|＝|:(?!//)(?!(?<=\d:)\d))[ \xa0\u3000]*"
_PAIR = re.compile(rf"\s*(?P<label>{_LABEL}){_SIGN}(?P<value>.*)$", re.S)
# Points of abbreviations end no sentence: "机壳-环境热阻 / Therm. Widerstand = 7 K/W".
_NO_END = "".join(rf"(?<!{a}{w}\.)" for w in ("herm", "lektr", "echan") for a in "TtEeMm")
_HARD = re.compile(
    rf"[;；|｜▪、\n]|(?<!\w)•|•(?!\w)"  # between letters a bullet is a middle dot: gf•cm
    rf"|(?:(?<=!)|(?<=[^\W\d]{{5}}[.?]){_NO_END})[ \xa0]+(?=[A-ZÀ-Þ]{_LABEL}{_SIGN}\S)"
)
_COMMA = re.compile(r"[,，·][ \xa0]+(?=[^\W\d])")
_SIGN_IN = re.compile(_SIGN)
_BULLET = re.compile(r"^[•·▪◦*\-–][ \xa0]+")
_LEADER = r"(?:\.{4,}|…{2,}|_{4,}|·{4,}|(?:[.·] ){3,}[.·]?)"
_WIDE = re.compile(
    rf"[ \xa0]*{_LEADER}[ \xa0]*:?[ \xa0]*|[ \xa0\u2000-\u200a\u3000]{{2,}}|\t+|[ ]*│[ ]*"
)
_NOTE = re.compile(r"\s*(?:[*†‡¹²³⁴⁵]|\(?\d{1,2}\)|note|anm)", re.IGNORECASE)
_FIGURE = re.compile(
    r"(?:[<>≤≥~±≈]?[+\-−]?[.,]?\d[\d.,'’…/–\-]*(?:[eE][+\-]?\d+)?%?[*†¹²³]*|[-–—]+|n/a)$"
)
_THIN = re.compile(r"[\u2000-\u200a\u202f\u205f]")
_RULE = re.compile(r"[\s\-=_─━+┼|]{3,}$")
_OPEN = re.compile(r"[,;:=±/(\[×]$")


def is_pairs(sample: str) -> bool:
    """Whether most lines of a text hold "label: value" pairs rather than columns."""
    lines = [_THIN.sub(" ", line) for line in sample.splitlines() if line.strip()]
    pairs = sum(_starts_pair(line) for line in lines)
    several = sum(len(_pairs_of(line)) > 1 for line in lines)
    return pairs + several >= 2 and pairs >= 0.5 * len(lines)


def _starts_pair(line: str) -> bool:
    match = _PAIR.match(line)
    return (
        match is not None
        and any(sign.isalpha() for sign in match["label"])
        and not re.match(r"[,;|\t]", match["value"])
        and not _WIDE.search(line.strip())
    )


def _pairs_of(line: str) -> list[str]:
    return [part for part in _parts(line) if _PAIR.match(part)]


def _parts(line: str) -> list[str]:
    """A line divided at its separators; a comma is one only behind a pair, before a letter.

    "36 V, Rated speed: 5,420 rpm" has two parts, "Idle current, I0: 61 mA" has one.
    """
    out: list[str] = []
    for part in _HARD.split(line):
        pieces = _COMMA.split(part)
        if sum(_SIGN_IN.search(piece) is not None for piece in pieces) < 2:
            out.append(part)
            continue
        whole = ""
        for piece in pieces:
            whole = f"{whole}, {piece}" if whole else piece
            if _SIGN_IN.search(whole) or out:
                out.append(whole)
                whole = ""
        if whole:
            out.append(whole)
    return out


def read_text(text: str) -> list[Grid]:
    """The tables of a pasted text; for paragraphs of pairs a grid of (heading, text) each."""
    lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
    if is_pairs("\n".join(lines[:2000])):
        return _read_pairs([_THIN.sub(" ", line) for line in lines])
    return _read_columns(lines)


# --- pairs ------------------------------------------------------------------------------------


def _read_pairs(lines: list[str]) -> list[Grid]:
    grids = []
    for start, paragraph in _paragraphs(lines):
        rows: list[list[str]] = []
        numbers: list[int] = []
        for number, logical in _logical_lines(paragraph, start):
            for part in _parts(logical):
                match = _PAIR.match(part)
                if match and any(sign.isalpha() for sign in match["label"]):
                    rows.append([clean(match["label"]), clean(match["value"]).rstrip(",;，")])
                elif part.strip():
                    rows.append([clean(part), ""])
                else:
                    continue
                numbers.append(number)
        if any(row[1] for row in rows):
            grids += [even(*record) for record in _records(rows, numbers)]
        elif rows and grids:
            last = grids[-1]
            last.rows += [[row[0], ""] for row in rows]
            last.row_numbers += numbers
        elif rows:
            grids.append(even([*rows], numbers))
    return _titles_joined(grids)


def _records(rows: list[list[str]], numbers: list[int]) -> list[tuple[list[list[str]], list[int]]]:
    """A paragraph divided where its pairs begin anew: one motor a line, no blank line between."""
    keys = [unicodedata.normalize("NFKC", row[0]).casefold() if row[1] else "" for row in rows]
    first = next(key for key in keys if key)
    starts = [i for i, key in enumerate(keys) if key == first]
    if len({rows[i][1] for i in starts}) < len(starts):
        return [(rows, numbers)]
    cuts = list(pairwise([0, *starts[1:], len(rows)]))
    labels = [set(keys[a:b]) - {""} for a, b in cuts]
    if any(len(other & labels[0]) < max(2, 0.5 * len(labels[0])) for other in labels):
        return [(rows, numbers)]
    return [(rows[a:b], numbers[a:b]) for a, b in cuts]


def _titles_joined(grids: list[Grid]) -> list[Grid]:
    """A first paragraph without pairs is the title of the next one."""
    if len(grids) > 1 and len(grids[0].column_numbers) < 2:
        title, first = grids[0], grids[1]
        first.rows[:0] = [[row[0], ""] for row in title.rows]
        first.row_numbers[:0] = title.row_numbers
        return grids[1:]
    return grids


def _paragraphs(lines: list[str]) -> list[tuple[int, list[str]]]:
    out: list[tuple[int, list[str]]] = []
    previous_blank = True
    for number, line in enumerate(lines, 1):
        if not line.strip():
            previous_blank = True
            continue
        if previous_blank:
            out.append((number, []))
        out[-1][1].append(line)
        previous_blank = False
    return out


def _logical_lines(paragraph: list[str], start: int) -> list[tuple[int, str]]:
    """Lines with what was wrapped put back: labels, values, hyphenated words."""
    out: list[tuple[int, str]] = []
    for number, whole in enumerate((line.strip() for line in paragraph), start):
        line = _BULLET.sub("", whole)
        if not out or line != whole:
            out.append((number, line))
            continue
        above = out[-1][1]
        above_open = not _PAIR.match(above)
        if re.search(r"[^\W\d]-$", above) and line[:1].islower():
            out[-1] = (out[-1][0], above[:-1] + line)
        elif _starts_pair(line):
            if above_open and (line[0].islower() or line[0] in "(["):
                out[-1] = (out[-1][0], f"{above} {line}")
            else:
                out.append((number, line))
        elif _OPEN.search(above) or (
            not above_open and (line[0].islower() or line[0].isdigit() or line[0] in "(±[<≤")
        ):
            out[-1] = (out[-1][0], f"{above} {line}")
        else:
            out.append((number, line))
    return out


# --- columns ----------------------------------------------------------------------------------


def _read_columns(lines: list[str]) -> list[Grid]:
    lines = _colons_parted(lines)
    blocks: list[_Block] = []
    prose: list[tuple[int, str]] = []
    for start, paragraph in _paragraphs(lines):
        numbered = [(n, line) for n, line in enumerate(paragraph, start) if not _RULE.match(line)]
        block = _Block(numbered)
        if not block.is_table:
            if blocks and numbered and _NOTE.match(numbered[0][1]):
                blocks[-1].add(numbered)
            else:
                prose += numbered
            continue
        block.lines[:0] = prose
        prose = []
        last = blocks[-1] if blocks else None
        if last and last.mode == block.mode and block.belongs_to(last):
            last.add(block.lines, gap=True)
        else:
            blocks.append(block)
    if prose:
        if not blocks:
            return [even([[clean(line)] for _, line in prose], [n for n, _ in prose])]
        blocks[-1].add(prose)
    return [block.grid() for block in blocks]


def _colons_parted(lines: list[str]) -> list[str]:
    """Lines whose label is so long that its value is glued to the colon, parted as the others
    are: "Voltage:      24 V" over "Maximum permissible speed:9000 rpm"."""
    wide = [bool(re.search(r"\S:[ \xa0]{2,}\S", line)) for line in lines]
    if sum(wide) < 3 or sum(wide) < 0.3 * len(lines):
        return lines
    return [
        line if parted else re.sub(r"(?<=[^\s\d]):(?=[ \xa0]?[<>≤≥~±+-]?\d)", ":  ", line, count=1)
        for line, parted in zip(lines, wide, strict=True)
    ]


class _Block:
    """Lines that belong to one table, as (line number, text)."""

    def __init__(self, lines: list[tuple[int, str]]) -> None:
        self.lines = list(lines)
        pieces = [_pieces(line) for _, line in lines]
        several = [line for line in pieces if len(line) > 1]
        figures = [tail for _, line in lines if (tail := _tail(line))]
        self.mode = "wide"
        if len(several) < 0.5 * len(lines) and len(figures) > len(several):
            self.mode = "single"
        self.is_table = len(several) > 0 or len(figures) > 1
        self.columns = find_columns([line for line in pieces if line])
        self.count = Counter(figures).most_common(1)[0][0] if figures else 0

    def add(self, lines: list[tuple[int, str]], *, gap: bool = False) -> None:
        if gap:
            self.lines.append((lines[0][0] - 1, ""))
        self.lines += lines

    def belongs_to(self, other: "_Block") -> bool:
        if self.mode == "single":
            return self.count == other.count
        both = find_columns([p for _, line in other.lines + self.lines if (p := _pieces(line))])
        most = max(len(self.columns), len(other.columns))
        return fits(self.columns, other.columns) or (
            len(both) == most
            and min(len(self.columns), len(other.columns)) > 1
            and lies_in(self.columns, both)
            and lies_in(other.columns, both)
        )

    def grid(self) -> Grid:
        numbers = [n for n, _ in self.lines]
        if self.mode == "single":
            rows, uneven = self._by_tail()
            remarks = [
                "columns are told apart by single blanks: an empty cell would shift the "
                "cells after it unseen"
            ]
            if uneven:
                remarks.append(f"lines with another number of figures are left whole: {uneven}")
            rows, numbers, spans = join_split_labels(rows, numbers, [])
            return even(rows, numbers, remarks=remarks)
        pieces = [_pieces(line) for _, line in self.lines]
        counts = {len(line) for line in pieces if len(line) > 1}
        remarks = []
        by_order = [[piece.text for piece in line] for line in pieces]
        if len(counts) == 1:
            rows, spans = by_order, []
        else:
            table = arrange(pieces, find_columns(pieces))
            rows, spans = table.rows, table.spans
            if table.clashes > 0.1 * len(pieces):
                rows, uneven = _in_order(by_order, numbers)
                spans = []
                remarks.append(
                    "columns do not stand in line: cells are told apart by their order, and an "
                    "empty cell would shift the cells after it unseen"
                )
                if uneven:
                    remarks.append(f"lines with another number of cells are left whole: {uneven}")
        width = max(map(len, rows))
        rows = [row + [""] * (width - len(row)) for row in rows]
        rows, numbers, spans = join_split_labels(rows, numbers, spans)
        return even(rows, numbers, spans=spans, remarks=remarks)

    def _by_tail(self) -> tuple[list[list[str]], str]:
        """Single blanks: the figures at a line's end are cells, what stands before is the label."""
        n = self.count
        rows: list[list[str]] = []
        uneven: list[int] = []
        seen = False
        for number, line in self.lines:
            words = line.split()
            tail = _tail(line)
            heading = not seen and tail == 0 and n > 1 and len(words) >= n
            if heading and len(words) > n + 1:  # a title has as many words, but few with digits
                heading = all(any(sign.isdigit() for sign in word) for word in words[-n:])
            if tail == n or heading:
                label = " ".join(words[:-n])
                rows.append([label, *words[-n:]])
                seen = seen or tail == n
            else:
                rows.append([clean(line)])
                if tail:
                    uneven.append(number)
        width = max(map(len, rows), default=1)
        rows = [row + [""] * (width - len(row)) for row in rows]
        return rows, ", ".join(map(str, uneven[:12]))


def _in_order(rows: list[list[str]], numbers: list[int]) -> tuple[list[list[str]], str]:
    """Rows whose cells are told apart by their order alone, and the lines that can't be.

    All have as many cells as most, but for titles; heads of columns that have no unit lack the
    second cell, where the others' unit stands.
    """
    usual = Counter(len(row) for row in rows if len(row) > 1).most_common(1)[0][0]
    full = [row for row in rows if len(row) == usual]
    units = usual > 2 and sum(_FIGURE.match(row[1]) is None for row in full) > 0.7 * len(full)
    out: list[list[str]] = []
    uneven: list[int] = []
    for row, number in zip(rows, numbers, strict=True):
        if len(row) < 2 or len(row) == usual:
            out.append(row)
        elif units and len(row) == usual - 1 and not any(map(_FIGURE.match, row)):
            out.append([row[0], "", *row[1:]])
        else:
            out.append(["  ".join(row)])
            uneven.append(number)
    return out, ", ".join(map(str, uneven[:12]))


def _tail(line: str) -> int:
    """How many figures stand at the end of a line."""
    words = line.split()
    count = 0
    while count < len(words) - 1 and _FIGURE.match(words[-1 - count]):
        count += 1
    return count


def _pieces(line: str) -> list[Piece]:
    out: list[Piece] = []
    at = 0
    for gap in [*_WIDE.finditer(line), None]:
        end = gap.start() if gap else len(line)
        text = clean(line[at:end])
        if text:
            start = _width(line[:at])
            out.append(Piece(start, start + _width(line[at:end].rstrip()), text))
        at = gap.end() if gap else end
    return out


def _width(text: str) -> int:
    """Places on a fixed-pitch line: wide East Asian signs take two, a tab fills up to eight."""
    if text.isascii() and "\t" not in text:
        return len(text)
    places = 0
    for sign in text:
        if sign == "\t":
            places += 8 - places % 8
        else:
            places += 2 if unicodedata.east_asian_width(sign) in "WF" else 1
    return places
