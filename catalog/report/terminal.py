"""Tables for the terminal, by rich. Texts of a datasheet go through ``plain`` first and are never
taken as markup."""

from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from rich import box
from rich.console import Console
from rich.table import Table
from rich.text import Text

from ..documents import Document
from . import plain as p
from .screen import console, paged

if TYPE_CHECKING:
    from ..import_result import FileResult, ImportResult
    from ..store.revisions import Import

MOST_UNREAD = 40
SEVERITIES = {"error": "bold red", "warning": "yellow", "note": "dim"}


def _table(*headings: str, right: Sequence[str] = ()) -> Table:
    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False)
    for heading in headings:
        table.add_column(heading, justify="right" if heading in right else "left", overflow="fold")
    return table


def _cells(cells: Iterable[object]) -> list[Text]:
    return [Text("" if cell is None else p.plain(str(cell))) for cell in cells]


def print_rows(headings: Sequence[str], rows: Iterable[Sequence[object]]) -> None:
    """A plain table."""
    table = _table(*headings)
    for row in rows:
        table.add_row(*_cells(row))
    console().print(table)


# ---- import


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
            out.print(f"Stored {stored} motors in {p.plain(str(catalog))}.")


def _print_file(out: Console, file: "FileResult", *, dry_run: bool) -> None:
    layout = "one motor a column" if file.layout == "columns" else "one motor a row"
    out.print(Text(f"{p.plain(file.file)}: {file.motors} motors, {layout}", style="bold"))
    table = _table("Heading", "Read as", "Unit", "Convention", "Score", "Why", right=("Score",))
    for h in file.headings:
        convention = p.convention(h.convention.as_json()) if h.convention else ""
        table.add_row(
            *_cells((h.text, p.words(h.quantity) if h.quantity else "not read", h.unit,
                     convention, f"{h.score:.2f}", h.reason))
        )  # fmt: skip
    out.print(table)
    if dry_run:
        _print_cells(out, file.documents)
    for remark in file.remarks:
        out.print(Text(f"Remark: {p.plain(remark)}"))
    if file.unread:
        out.print(Text(f"Not read ({len(file.unread)} cells):", style="bold"))
        _print_unread(out, file.unread if dry_run else file.unread[:MOST_UNREAD])
        if len(file.unread) > MOST_UNREAD and not dry_run:
            out.print(f"… and {len(file.unread) - MOST_UNREAD} more (--json lists all)")
    _print_findings(out, [f for f in file.findings if f["severity"] != "note"])
    counted = [f"{n} {severity}{'s' * (n != 1)}" for severity in SEVERITIES
               if (n := file.severities[severity])]  # fmt: skip
    if counted:
        out.print(f"Findings: {', '.join(counted)}; motorfolio check lists them.")
    if file.unchanged:
        out.print("Already in the catalog, read the same way: nothing changed.")
    elif file.replaced:
        out.print(f"{file.replaced} motors replaced; motorfolio diff shows what changed.")


def _print_unread(out: Console, unread: Iterable[Document]) -> None:
    table = _table("Part", "Heading", "Cell", "Text", "Reason", "May be")
    for u in unread:
        table.add_row(
            *_cells((u["part_number"], u["heading"], p.cell(u["cell"]), u["text"], u["reason"],
                     ", ".join(u["guesses"])))
        )  # fmt: skip
    out.print(table)


def _print_cells(out: Console, motors: Iterable[Document]) -> None:
    """Printed text beside SI value, cell by cell."""
    table = _table("Part", "Heading", "Cell", "Printed", "Read as", "SI", right=("SI",))
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
            table.add_row(
                *_cells((motor["part_number"], figure.get("heading"), p.cell(figure.get("cell")),
                         printed, p.words(key), si))
            )  # fmt: skip
    out.print(table)


# ---- findings


def print_findings(findings: Sequence[Document], motors: int) -> None:
    """All findings, worst first, and a line that counts them."""
    counts = [
        f"{n} {severity}{'s' * (n != 1)}"
        for severity in SEVERITIES
        if (n := sum(f["severity"] == severity for f in findings))
    ]

    def draw(out: Console) -> None:
        _print_findings(out, findings)
        said = ", ".join(counts) or "no findings"
        out.print(f"{motors} motor{'s' * (motors != 1)} checked: {said}.")

    paged(draw)


def _print_findings(out: Console, findings: Iterable[Document]) -> None:
    for f in findings:
        who = f["part_number"] or ""
        if f["scope"] == "column" and len(f["part_numbers"]) > 1:
            who = f"{who} and {len(f['part_numbers']) - 1} more of its table"
        where = p.cell(f["cell"])
        head = Text(f["severity"], style=SEVERITIES[f["severity"]])
        head.append(f"  {p.plain(who)}{f'  ({where})' if where else ''}", style="default")
        out.print(head)
        out.print(Text("    " + p.plain(f["message"])))
        details = []
        if f["suspect"]:
            details.append(f"suspect: {p.words(f['suspect'])}")
        if f["cause"] != "unexplained":
            details.append(f"cause: {f['cause']}")
        if f["implied"]:
            details.append(f"implied: {p.quantity(f['implied']['value'], f['implied']['unit'])}")
        if f["other_causes"]:
            details.append(f"or: {', '.join(f['other_causes'])}")
        if details:
            out.print(Text("    " + "; ".join(details), style="dim"))


# ---- changes


def _amount(document: Document | None) -> str:
    if document is None:
        return "–"
    value = document["value"]
    if isinstance(value, str):
        return value
    corrected = document.get("corrected")
    shown = p.quantity(corrected["value"] if corrected else value, document["unit"])
    return f"{shown} (corrected)" if corrected else shown


def print_imports(imports: Iterable["Import"]) -> None:
    """What was imported and when."""
    rows = [
        (i.id, i.at, ", ".join(i.files) or "(motors removed)", i.motors, i.replaced or "")
        for i in imports
    ]
    print_rows(("Import", "When", "Files", "Motors", "Replaced"), rows)


def print_changes(changes: Iterable[Document]) -> None:
    """What changed, a motor each."""
    out = console()
    for change in changes:
        out.print(Text(f"{p.plain(change['part_number'])}: {change['change']}", style="bold"))
        for key, figure in change.get("figures", {}).items():
            before, after = (_printed(figure[side]) for side in ("before", "after"))
            out.print(Text(f"    {p.words(key)}: {before} → {after}"))
        for side, word in (("came", "new finding"), ("went", "no longer found")):
            for finding in change.get("findings", {}).get(side, ()):
                out.print(Text(f"    {word}: {p.plain(finding['message'])}"))


def _printed(figure: Document | None) -> str:
    if figure is None:
        return "not given"
    text = " ".join(filter(None, (figure["text"], figure.get("printed_unit"))))
    return p.plain(text) or _amount(figure)
