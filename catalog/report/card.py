"""A motor on one screen, as aligned text: light, so that `show` answers at once."""

from collections.abc import Sequence
from textwrap import wrap

from ..documents import Document
from . import plain as p

WIDTH = 100
MOST_SOURCES = 2


def motor_card(motor: Document) -> str:
    """Constants, figures as published beside SI, findings, and the place all came from."""
    kind = motor["model"]
    commutation, magnet = kind["commutation"], kind["magnet"]
    name = " ".join(filter(None, (motor["maker"], motor["part_number"])))
    head = [p.plain(name)]
    if motor["series"]:
        head.append(f"series {p.plain(motor['series'])}")
    head.append(f"{commutation['value']} commutation ({commutation['basis']})")
    if magnet["value"] != "unknown":
        head.append(f"{magnet['value']} magnets ({magnet['basis']})")
    lines = [", ".join(head), *_constants(motor["constants"]), *_figures(motor["figures"])]
    for key, repeats in motor.get("repeats", {}).items():
        lines += [f"  {p.words(key)}, given again: {_printed(f)}" for f in repeats]
    for condition in motor.get("conditions", ()):
        lines += ["", f"When {p.plain(condition['when'])}", *_figures(condition["figures"])[2:]]
    for point in motor.get("points", ()):
        figures = ", ".join(
            f"{p.words(key)} {p.quantity(f['value'], f['unit'])}"
            for key, f in point["figures"].items()
        )
        lines.append(f"  point {p.plain(point['name'])}: {figures}")
    lines += ["", *_findings(motor["findings"]), "", f"From {_source(motor['source'])}"]
    return "\n".join(lines)


def _constants(constants: dict[str, Document]) -> list[str]:
    rows = [
        (p.words(key), p.quantity(c["value"], c["unit"]), p.interval(c["low"], c["high"]),
         c["basis"] + _sources(c["from"]))
        for key, c in constants.items()
    ]  # fmt: skip
    return ["", "Constants at 25 °C", *_aligned(rows)] if rows else ["", "No constants are known."]


def _sources(keys: Sequence[str]) -> str:
    if not keys:
        return ""
    if len(keys) > MOST_SOURCES:
        first = ", ".join(map(p.words, keys[:MOST_SOURCES]))
        return f" from {first} and {len(keys) - MOST_SOURCES} more"
    return f" from {', '.join(map(p.words, keys))}"


def _figures(figures: dict[str, Document]) -> list[str]:
    rows = []
    for key, f in figures.items():
        value = f["value"]
        si = "" if isinstance(value, str) else p.quantity(value, f["unit"])
        note = p.convention(f.get("convention"))
        if "corrected" in f:
            c = f["corrected"]
            si = p.quantity(c["value"], c["unit"])
            note = f"corrected to {p.plain(c['text'])}: {p.plain(c['reason'])}"
        rows.append((p.words(key), _printed(f), si, note, p.cell(f.get("cell"))))
    return ["", "As published, and in SI", *_aligned(rows)]


def _printed(f: Document) -> str:
    return p.plain(" ".join(filter(None, (f["text"], f.get("printed_unit")))))


def _findings(findings: Sequence[Document]) -> list[str]:
    if not findings:
        return ["No findings."]
    lines = []
    for f in findings:
        first, *rest = wrap(f"{f['severity']}: {p.plain(f['message'])}", WIDTH) or [""]
        lines += [first, *(f"    {line}" for line in rest)]
    return lines


def _source(source: Document) -> str:
    parts = [source["file"], source["sheet"], f"page {source['page']}" if source["page"] else None]
    return p.plain(", ".join(part for part in parts if part))


def _aligned(rows: Sequence[Sequence[str]]) -> list[str]:
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]))] if rows else []
    return [
        "  "
        + "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip()
        for row in rows
    ]
