"""A motor's document in few bytes: what its card on the page shows, repeated texts by number."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from typing import Any

from ...documents import Document
from .. import plain as p
from ..implied import Implied

Packed = dict[str, Any]


class Strings:
    """Texts that stand once in the page; what refers to them holds their number."""

    def __init__(self) -> None:
        self.texts: list[str] = []
        self._numbers: dict[str, int] = {}

    def __call__(self, text: str) -> int:
        number = self._numbers.get(text)
        if number is None:
            number = self._numbers[text] = len(self.texts)
            self.texts.append(text)
        return number


def rounded(value: float | None, digits: int = 6) -> float | None:
    """To significant digits; None where there is no finite number."""
    if value is None or not math.isfinite(value):
        return None
    return float(f"{value:.{digits}g}")


def pack_card(motor: Document, implied: Sequence[Implied], strings: Strings) -> Packed:
    """The card of a MOTOR; every text made safe for the eye (no control characters)."""
    kind = motor["model"]
    about = [f"{kind['commutation']['value']} commutation ({kind['commutation']['basis']})"]
    if kind["magnet"]["value"] != "unknown":
        about.append(f"{kind['magnet']['value']} magnets ({kind['magnet']['basis']})")
    description = motor["figures"].get("description", {}).get("value")
    conditions = [
        [f"When {p.plain(c['when'])}", list(_figures(c["figures"].items(), strings))]
        for c in motor.get("conditions", ())
    ]
    again = [(key, f) for key, found in motor.get("repeats", {}).items() for f in found]
    if again:
        conditions.append(["Given again", list(_figures(again, strings))])
    conditions += [
        [f"Point {p.plain(point['name'])}", list(_points(point["figures"], strings))]
        for point in motor.get("points", ())
    ]
    # printed numbers stand as they are: few of them repeat
    return {
        "name": p.plain(motor["part_number"]),
        "maker": p.plain(motor["maker"] or ""),
        "series": p.plain(motor["series"] or ""),
        "kind": ", ".join(about),
        "description": p.plain(description) if isinstance(description, str) else "",
        "source": _source(motor),
        "constants": [
            [
                strings(p.words(key)), strings(c["unit"]), rounded(c["value"]), rounded(c["low"]),
                rounded(c["high"]), strings(_basis(c)),
            ]
            for key, c in motor["constants"].items()
        ],
        "figures": list(_figures(motor["figures"].items(), strings)),
        "conditions": conditions,
        "findings": [_finding(f, strings) for f in motor["findings"]],
        "implied": [
            [
                strings(p.words(f.key)), rounded(f.ratio, 5), rounded(f.low / f.ratio, 4),
                rounded(f.high / f.ratio, 4), rounded(f.sd, 3),
                None if f.severity is None else strings(f.severity),
            ]
            for f in implied
        ],
    }  # fmt: skip


def _finding(f: Document, strings: Strings) -> list[Any]:
    """[severity, message, doubted figures]."""
    doubted = [] if f["severity"] == "note" else [f["suspect"]] if f["suspect"] else f["figures"]
    return [
        strings(f["severity"]),
        strings(p.plain(f["message"])),
        [strings(p.words(key)) for key in doubted],
    ]


def _basis(constant: Document) -> str:
    sources = constant["from"]
    if not sources:
        return constant["basis"]
    if len(sources) == 1:
        return f"{constant['basis']} from {p.words(sources[0])}"
    return f"{constant['basis']}, {len(sources)} figures"


def _figures(figures: Iterable[tuple[str, Document]], strings: Strings) -> Iterable[list[Any]]:
    """[key, printed, unit, value, convention, row, column] and, if there is one, the correction."""
    for key, f in figures:
        value, unit = f["value"], f.get("unit", "")
        corrected = f.get("corrected")
        if corrected:
            value, unit = corrected["value"], corrected["unit"]
        packed = [
            strings(p.words(key)), p.printed(f), strings(unit),
            None if isinstance(value, str) else rounded(value),
            strings(p.plain(p.convention(f.get("convention")))), *_place(f.get("cell")),
        ]  # fmt: skip
        if corrected:
            packed.append([p.plain(corrected["text"]), p.plain(corrected["reason"])])
        yield packed


def _points(figures: Document, strings: Strings) -> Iterable[list[Any]]:
    blank = strings("")
    for key, f in figures.items():
        yield [strings(p.words(key)), "", strings(f["unit"]), rounded(f["value"]), blank, 0, 0]


def _place(cell: Document | None) -> tuple[int, int]:
    """Row and column, 0 where unknown."""
    cell = cell or {}
    return cell.get("row") or 0, cell.get("column") or 0


def _source(motor: Document) -> str:
    source = motor["source"]
    page = f"page {source['page']}" if source["page"] else None
    return "From " + p.plain(", ".join(filter(None, (source["file"], source["sheet"], page))))
