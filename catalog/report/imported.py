"""What an import says: how each heading was read, the motors' constants, what was not read, what
contradicts itself. Made for 80 columns and one line a heading; --json holds everything in full."""

import re
from collections import Counter
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from rich.cells import cell_len
from rich.console import Console
from rich.padding import Padding
from rich.text import Text

from ..documents import Document
from . import plain as p
from .screen import console
from .terminal import counted, print_finding, table, whole

if TYPE_CHECKING:
    from ...schema.batch import Heading
    from ..importing.result import FileResult, ImportResult

MOST_UNREAD = 15
MOST_FINDINGS = 5
MOST_LEFT = 8
SHARED = "; printed once for the motors of a frame"
BASES = {"assumed": "?", "inferred": "~", "stated": ""}
LEGEND = {
    "?": "? assumed, not stated",
    "~": "~ inferred from the figures",
    "*": "* printed once for the motors of a frame",
}
LONG = 18
"""A reason of more letters goes below the table."""
GAP = 3
"""Columns between two texts of a table."""


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
        changed = file.replaced - file.as_before
        kept = f", {file.as_before} as before" if file.as_before else ""
        hint = "; motorfolio diff shows what changed" if changed else ""
        said = f"{p.many(changed, 'motor')} changed{kept}" if changed else "All as before"
        out.print(f"{said}{hint}.")
    if file.left_behind:
        out.print(_hanging(f"Remark: {left(file.file, file.left_behind)}"))
    if "" in file.makers and not file.unchanged:
        of = "" if file.makers == {""} else " of some motors"
        out.print(_hanging(f"Remark: the maker{of} is not known; --maker NAME tells it."))


def left(file: str, names: Sequence[str]) -> str:
    """Motors that a newer file of a name does not have, in a sentence."""
    more = f" and {len(names) - MOST_LEFT} more" if len(names) > MOST_LEFT else ""
    return p.plain(
        f"an earlier {file} also had {', '.join(names[:MOST_LEFT])}{more}; still in the catalog, "
        "motorfolio remove takes them out."
    )


def _hanging(text: str) -> Padding:
    return Padding(Text(text), (0, 0, 0, 2))


# ---- headings


def _print_reading(out: Console, file: "FileResult") -> set[str]:
    """The table of headings; returns those of which nothing was read."""
    guesses = {u["heading"]: u["guesses"] for u in file.unread if not u["part_number"]}
    # a long list repeats its headings from page to page
    rows = Counter(_row(h, guesses.get(h.text, ())) for h in file.headings)
    notes = _Notes()
    said = [notes.mark(f"{row[3]} ({n} times)" if n > 1 else row[3]) for row, n in rows.items()]
    columns = [("Read as", [r[1] for r in rows]), ("Convention", [r[2] for r in rows]),
               ("Why", said)]  # fmt: skip
    columns = [(name, texts) for name, texts in columns if any(texts)]
    widths = [max(cell_len(text) for text in (name, *texts)) for name, texts in columns]
    room = out.width - sum(widths) - GAP * len(widths)
    shown = table("Heading", *(name for name, _ in columns))
    whole(shown, *range(len(columns) + 1))
    for i, row in enumerate(rows):
        shown.add_row(*map(Text, (shortened(row[0], room), *(texts[i] for _, texts in columns))))
    out.print(shown)
    signs = {sign for row in rows for sign in LEGEND if sign in row[2] or row[0].endswith(sign)}
    legend = [LEGEND[s] for s in LEGEND if s in signs]
    if any(not text for text in said):
        legend.append("read by name and unit where no reason stands")
    if legend:
        out.print(Text("; ".join(legend), style="dim"))
    for line in notes.lines():
        out.print(Padding(Text(line, style="dim"), (0, 0, 0, 2)))
    return {h.text for h in file.headings if h.quantity is None}


class _Notes:
    """Long reasons go below the table, each once."""

    def __init__(self) -> None:
        self.letters: dict[str, str] = {}

    def mark(self, reason: str) -> str:
        if len(reason) <= LONG:
            return reason
        n = len(self.letters)
        letter = chr(ord("a") + n) if n < 26 else f"n{n + 1}"
        return self.letters.setdefault(reason, letter)

    def lines(self) -> list[str]:
        return [f"{letter}  {reason}" for reason, letter in self.letters.items()]


def shortened(text: str, width: int) -> str:
    """The text in so many columns, cut before its unit: "Wärmewiderstand Wick… [K/W]"."""
    if cell_len(text) <= width:
        return text
    found = re.search(r"\s*[\[(][^\[(]*[\])](?: \*)?$|\s\*$", text)
    tail = found.group().lstrip() if found and cell_len(found.group()) < width // 2 else ""
    head = text[: found.start()] if tail and found else text
    while head and cell_len(head) + cell_len(tail) + 2 > width:
        head = head[:-1]
    return f"{head.rstrip()}… {tail}".rstrip()


def brief(key: str) -> str:
    """A quantity's name, the longest ones abridged to fit a line."""
    name = p.words(key).replace("maximum", "max.")
    return name.replace("thermal resistance ", "Rth ").replace("l time constant ", "l time const. ")


def _row(h: "Heading", guesses: Sequence[str]) -> tuple[str, str, str, str]:
    heading = p.plain(h.text)
    text = heading if h.quantity is None or " under " in h.reason else heading.split(" › ")[-1]
    if h.unit and h.quantity and not re.search(r"[\[(,]", text) and not text.endswith(h.unit):
        text += f" [{h.unit}]"
    if SHARED in h.reason:
        text += " *"
    why = p.plain(short(h.reason))
    if h.quantity and 0 < h.score < 1:
        why = f"{why or 'name, unit'} {p.number(h.score, 2)}"
    if guesses and not h.quantity:
        why += f"; may be {' or '.join(map(p.words, guesses))}"
    read_as = brief(h.quantity) if h.quantity else "not read"
    if point := re.fullmatch(r"(.+) at the point (\w+)", why):
        read_as, why = f"{point[1]} of a point", ""
    return text, read_as, _convention(h), why


def short(reason: str) -> str:
    """The reason in a few words, such as "symbol"; nothing where name and unit say it."""
    first, *rest = reason.replace(SHARED, "").split("; ")
    if first.endswith(" fits"):
        first = re.sub(r"(, [^,]* fits)+$", "", first)
    first = re.sub(r', and so does the symbol "[^"]*"', "", first)
    first = re.sub(r'^symbol "[^"]*"', "symbol", first)
    if like := re.fullmatch(r'"([^"]*)" is spelled like a name of it', first):
        first = f"like “{like[1]}”"
    if re.fullmatch(
        r'"[^"]*"(?: is a name of it| names it| under "[^"]*")?|the part numbers', first
    ):
        first = ""
    first = re.sub(r'^"[^"]*" (?:is a name of it|names it), ', "", first)
    return "; ".join(filter(None, [first, *rest]))


def _convention(h: "Heading") -> str:
    """The convention in short: "dc?", "rms, lines", "lines, 25 °C"."""
    if h.convention is None:
        return ""
    found = h.convention.as_json()
    mark = BASES.get(str(found.get("basis", "")), "")
    said = [f"{found[k]}{mark}" for k in ("current", "voltage", "between", "connection", "shape")
            if k in found]  # fmt: skip
    if h.convention.temperature is not None:
        said.append(f"{p.number(h.convention.temperature)} °C")
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
    shown = table("Motor and figure", "Cell", "Printed", "SI", right=("SI",))
    whole(shown, 0, 1, 3)
    for motor in motors:
        shown.add_row(Text(p.plain(motor["part_number"]), style="bold"))
        figures = list(motor["figures"].items())
        for condition in motor.get("conditions", ()):
            figures += [
                (f"{key} ({condition['when']})", f) for key, f in condition["figures"].items()
            ]
        for key, figure in figures:
            value = figure["value"]
            si = value if isinstance(value, str) else p.quantity(value, figure["unit"], 6)
            cells = (f"  {brief(key)}", p.place(figure), p.printed(figure), si)
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
