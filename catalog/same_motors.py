"""The same motor in two sheets: part numbers of one spelling but for signs and letters, confirmed
by the constants. Only a person's word makes them one, see store/same.py."""

import math
import re
import unicodedata
from collections.abc import Container, Iterator
from itertools import combinations
from typing import NamedTuple

from rapidfuzz import fuzz

from .documents import Document
from .store import Catalog
from .store.known import Known

CONSTANTS = ("torque_constant", "armature_resistance", "rotor_inertia")
APART = 0.03
"""Constants of one motor in two sheets are no more apart, unless their intervals overlap: sheets
round, and state other temperatures (common practice, no source)."""

ENOUGH = 2
"""So many constants must be known of both."""

LIKE_NUMBER, LIKE_MAKER = 80.0, 80.0
"""rapidfuzz's ratio of 100 for names taken as spellings of each other."""


class Entry(NamedTuple):
    """A motor with what tells whether it is another one."""

    known: Known
    file_id: int
    file: str
    folded: str
    maker: str
    constants: tuple[tuple[float, float, float], ...]


class Pair(NamedTuple):
    """Two entries that may be one motor; the constants that agree, with how far apart they are."""

    first: Entry
    second: Entry
    agreeing: dict[str, float]

    def as_json(self) -> Document:
        """Both names with their files, and the ratio of each constant."""
        return {
            "motors": [
                {"maker": e.known.maker or None, "part_number": e.known.part_number, "file": e.file}
                for e in (self.first, self.second)
            ],
            "ratios": self.agreeing,
        }


def folded(text: str) -> str:
    """Letters and digits alone, without case and accents: "Éx-24/a" → "ex24a"."""
    plain = unicodedata.normalize("NFKD", text).casefold()
    return "".join(sign for sign in plain if sign.isalnum())


def pairs(catalog: Catalog, among: Container[tuple[str, str]] | None = None) -> list[Pair]:
    """Motors of different files that may be one; only pairs with a (maker, part number) of
    ``among``, if given."""
    blocks: dict[str, list[Entry]] = {}
    for entry in _entries(catalog):
        # digits are never a matter of spelling, and what has no figures can't be confirmed
        blocks.setdefault("".join(re.findall(r"\d", entry.folded)), []).append(entry)
    found = []
    for block in blocks.values():
        for first, second in _neighbours(block):
            if among is not None and not any(e.known[1:] in among for e in (first, second)):
                continue
            if first.file_id != second.file_id and _named_alike(first, second):
                agreeing = _agreeing(first, second)
                if agreeing is not None:
                    earlier, later = sorted((first, second), key=lambda e: e.known.id)
                    found.append(Pair(earlier, later, agreeing))
    return sorted(found, key=lambda pair: (pair.first.known.id, pair.second.known.id))


def _entries(catalog: Catalog) -> Iterator[Entry]:
    columns = ", ".join(f"c.{key}, c.{key}_low, c.{key}_high" for key in CONSTANTS)
    with catalog.at_once():
        rows = catalog.connection.execute(
            f"SELECT m.id, m.maker, m.part_number, f.id, f.file, {columns} FROM motor m "
            "JOIN constants c ON c.id = m.id JOIN sources s ON s.id = m.source "
            "JOIN files f ON f.id = s.file WHERE m.replaced_by IS NULL"
        ).fetchall()
    for number, maker, part, file_id, file, *values in rows:
        numbers = [math.nan if v is None else v for v in values]
        triples = tuple(zip(numbers[::3], numbers[1::3], numbers[2::3], strict=True))
        if sum(math.isfinite(value) for value, _, _ in triples) >= ENOUGH:
            yield Entry(
                Known(number, maker, part), file_id, file, folded(part), folded(maker), triples
            )


def _neighbours(block: list[Entry]) -> Iterator[tuple[Entry, Entry]]:
    """Pairs whose first known constant is near enough; a long list has few of them."""
    if len(block) < 40:
        yield from combinations(block, 2)
        return
    lowest = [e.constants[0][1] for e in block]
    order = sorted(range(len(block)), key=lambda i: (math.isnan(lowest[i]), lowest[i]))
    for at, i in enumerate(order):
        top = max(block[i].constants[0][2], block[i].constants[0][0] * (1 + 2 * APART))
        for j in order[at + 1 :]:
            if block[j].constants[0][0] * (1 - APART) > top:
                break
            yield block[i], block[j]


def _named_alike(a: Entry, b: Entry) -> bool:
    if a.folded == b.folded:
        return True
    makers = not a.maker or not b.maker or fuzz.token_set_ratio(a.known.maker, b.known.maker)
    if makers is not True and makers < LIKE_MAKER:
        return False
    if re.findall(r"\d+", a.folded) != re.findall(r"\d+", b.folded):
        return False
    short, long = sorted((a.folded, b.folded), key=len)
    return (len(short) >= 4 and long.endswith(short)) or fuzz.ratio(short, long) >= LIKE_NUMBER


def _agreeing(a: Entry, b: Entry) -> dict[str, float] | None:
    """The ratios of the constants that both have, if all agree."""
    ratios = {}
    for key, (value, low, high), (other, least, most) in zip(
        CONSTANTS, a.constants, b.constants, strict=True
    ):
        if not (math.isfinite(value) and math.isfinite(other)) or other == 0:
            continue
        ratios[key] = value / other
        if abs(ratios[key] - 1) > APART and not (low <= most and least <= high):
            return None
    return ratios if len(ratios) >= ENOUGH else None
