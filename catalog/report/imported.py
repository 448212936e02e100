"""What an import says: how each heading was read, the motors' constants, what was not read, what
contradicts itself. Made for 80 columns and one line a heading; --json holds everything in full."""

import re
from collections import Counter
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from rich.console import Console
from rich.padding import Padding
from rich.text import Text

from ..documents import Document
from . import plain as p
from .screen import console
from .terminal import SEVERITIES, counted, print_finding, table, whole

if TYPE_CHECKING:
    from ...schema.batch import Heading
    from ..import_result import FileResult, ImportResult

MOST_UNREAD = 15
MOST_FINDINGS = 5
SHARED = "; printed once for the motors of a frame"
BASES = {"assumed": "?", "inferred": "~", "stated": ""}
LEGEND = {
    "?": "? assumed, not stated",
    "~": "~ inferred from the figures",
    "*": "* printed once for the motors of a frame",
}
_NAMED = re.compile(
    r'"(?P<name>[^"]*)"(?: is a name of it| names it| is spelled like a name of it)?'
)


def print_import(result: "ImportResult", catalog: Path, *, dry_run: bool) -> None:
    """How each file was read, what was not, what contradicts itself, and what was stored."""
    out = console()
    for file in result.files:
        _print_file(out, file, dry_run=dry_run)
    if dry_run:
        out.print("Nothing was stored (dry run).")
    elif not result.refused:
        stored = sum(file.stored for file in result.files)
        if stored:
            out.print(f"Stored {p.many(stored, 'motor')} in {p.plain(str(catalog))}.")


def _print_file(out: Console, file: "FileResult", *, dry_run: bool) -> None:
    layout = "one motor a column" if file.layout == "columns" else "one motor a row"
    title = f"{p.plain(file.file)}: {p.many(file.motors, 'motor')}, {layout}"
    out.print(Text(title, style="bold"))
    whole_headings = _print_reading(out, file)
    if dry_run:
        _print_cells(out, file.documents)
    else:
        _print_constants(out, file)
    for remark in file.remarks:
        out.print(_hanging(f"Remark: {p.plain(remark)}"))
    unread = [u for u in file.unread if u["part_number"] or u["heading"] not in whole_headings]
    _print_unread(out, unread, len(unread) if dry_run else MOST_UNREAD)
    found = [f for f in file.findings if f["severity"] != "note"]
    for finding in found[:MOST_FINDINGS]:
        print_finding(out, finding)
    if said := counted(file.severities):
        more = "lists them all" if len(found) > MOST_FINDINGS else "lists them"
        out.print(f"Findings: {said}; motorfolio check {more}.")
    if file.unchanged:
        out.print("Already in the catalog, read the same way: nothing changed.")
    elif file.replaced:
        out.print(f"{p.many(file.replaced, 'motor')} replaced; motorfolio diff shows what changed.")


def _hanging(text: str) -> Padding:
    return Padding(Text(text), (0, 0, 0, 2))


# ---- headings


def _print_reading(out: Console, file: "FileResult") -> set[str]:
    """The table of headings; returns those of which nothing was read."""
    guesses = {u["heading"]: u["guesses"] for u in file.unread if not u["part_number"]}
    # a long list repeats its headings from page to page
    rows = Counter(_row(h, guesses.get(h.text, ())) for h in file.headings)
    shown = table("Heading", "Read as", "Convention", "Why")
    shown.columns[0].max_width = max(26, out.width * 2 // 5)
    for column in (shown.columns[0], shown.columns[2]):
        column.no_wrap, column.overflow = True, "ellipsis"
    for (heading, read_as, convention, why), n in rows.items():
        shown.add_row(
            Text(heading),
            Text(read_as),
            Text(convention),
            Text(f"{why} ({n} times)" if n > 1 else why),
        )
    out.print(shown)
    signs = {sign for row in rows for sign in LEGEND if sign in row[2] or row[0].endswith(sign)}
    if signs:
        out.print(Text("; ".join(LEGEND[s] for s in LEGEND if s in signs), style="dim"))
    return {h.text for h in file.headings if h.quantity is None}


def _row(h: "Heading", guesses: Sequence[str]) -> tuple[str, str, str, str]:
    text = p.plain(h.text).rpartition(" › ")[2] if h.quantity else p.plain(h.text)
    if h.unit and h.quantity and not re.search(r"[\[(,]", text) and not text.endswith(h.unit):
        text += f" [{h.unit}]"
    if SHARED in h.reason:
        text += " *"
    why = p.plain(short(h.reason))
    if 0 < h.score < 1 and h.quantity:
        why += f" {h.score:.2f}"
    if guesses and not h.quantity:
        why += f"; may be {' or '.join(map(p.words, guesses))}"
    return text, p.words(h.quantity) if h.quantity else "not read", _convention(h), why


def short(reason: str) -> str:
    """The reason in a few words: "name, unit", "symbol, unit", "name under “Stall”, unit"."""
    reason = reason.replace(SHARED, "")
    first, *rest = reason.split("; ")
    fits = first.endswith(" fits")
    if fits:
        first = first.rpartition(", ")[0]
    first = re.sub(r", [^,]* fits$", "", first)
    first = re.sub(r', and so does the symbol "[^"]*"', ", symbol", first)
    first = re.sub(r'symbol "[^"]*"', "symbol", first)
    if "spelled like" in first:
        first = _NAMED.sub(r"like “\g<name>”", first, count=1)
    else:
        first = _NAMED.sub("name", first, count=1) if not first.endswith("figures") else first
    return "; ".join([first + ", unit" * fits, *rest])


def _convention(h: "Heading") -> str:
    """The convention in short: "dc?", "rms, lines", "lines, 25 °C"."""
    if h.convention is None:
        return ""
    found = h.convention.as_json()
    mark = BASES.get(str(found.get("basis", "")), "")
    said = [f"{found[k]}{mark}" for k in ("current", "voltage", "between", "connection", "shape")
            if k in found]  # fmt: skip
    if "temperature" in found:
        said.append(f"{p.number(found['temperature'])} °C")
    return ", ".join(dict.fromkeys(said))


# ---- motors


def _print_constants(out: Console, file: "FileResult") -> None:
    """The first motors with the constants that stand for them."""
    shown = table("Motor", "Km", "Ra", "J", "Km/√Ra", right=("Km", "Ra", "J", "Km/√Ra"))
    whole(shown, *range(5))
    for row in file.constants:
        shown.add_row(
            p.plain(row.part_number),
            p.quantity(row.torque_constant, "N·m/A"),
            p.quantity(row.armature_resistance, "Ω"),
            p.quantity(row.rotor_inertia, "kg·m²"),
            p.quantity(row.motor_constant, "N·m/√W"),
        )
    if file.constants:
        out.print(shown)
        if file.motors > len(file.constants):
            out.print(f"… and {file.motors - len(file.constants)} more (motorfolio list)")


def _print_cells(out: Console, motors: Iterable[Document]) -> None:
    """Printed text beside SI value, cell by cell."""
    shown = table("Motor", "Heading", "Cell", "Printed", "Read as", "SI", right=("SI",))
    whole(shown, 2, 5)
    for column in (0, 1):
        shown.columns[column].no_wrap, shown.columns[column].overflow = True, "ellipsis"
        shown.columns[column].max_width = max(16, out.width // 5)
    for motor in motors:
        figures = list(motor["figures"].items())
        for condition in motor.get("conditions", ()):
            figures += [
                (f"{key} ({condition['when']})", f) for key, f in condition["figures"].items()
            ]
        for key, figure in figures:
            printed = " ".join(filter(None, (figure["text"], figure.get("printed_unit"))))
            value = figure["value"]
            si = value if isinstance(value, str) else p.quantity(value, figure["unit"], 6)
            cells = (motor["part_number"], (figure.get("heading") or "").rpartition(" › ")[2],
                     p.place(figure), printed, p.words(key), si)  # fmt: skip
            shown.add_row(*(Text(p.plain(cell)) for cell in cells))
    out.print(shown)


# ---- what was not read


def _print_unread(out: Console, unread: Sequence[Document], most: int) -> None:
    """A paragraph for each heading and reason, with the cells that it concerns."""
    if not unread:
        return
    out.print(Text(f"Not read: {p.many(len(unread), 'cell')}", style="bold"))
    groups: dict[tuple[str, str], list[Document]] = {}
    for u in unread:
        groups.setdefault((u["heading"] or "", u["reason"]), []).append(u)
    for (heading, reason), cells in list(groups.items())[:most]:
        first = cells[0]
        who = p.plain(first["part_number"] or "")
        if len(cells) > 1:
            who += f" and {len(cells) - 1} more" if who else p.many(len(cells), "cell")
        where = p.cell(first["cell"])
        text = f"{p.plain(heading)}: " if heading else ""
        text += " ".join(
            filter(
                None,
                (
                    who,
                    f"({where})" if where else "",
                    f"“{p.plain(first['text'])}”" * bool(first["text"]),
                ),
            )
        )
        text += f": {p.plain(reason)}"
        if first["guesses"]:
            text += f"; may be {' or '.join(map(p.words, first['guesses']))}"
        out.print(_hanging(text))
    if len(groups) > most:
        left = sum(map(len, list(groups.values())[most:]))
        out.print(f"… and {p.many(left, 'cell')} more (--json lists all)")
