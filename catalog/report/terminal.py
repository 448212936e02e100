"""Tables for the terminal, by rich. Texts of a datasheet go through ``plain`` first and are never
taken as markup."""

from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING

from rich import box
from rich.console import Console
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from ..documents import Document
from . import plain as p
from .screen import console, paged

if TYPE_CHECKING:
    from ..store.corrections import Correction
    from ..store.revisions import Import

MOST_NAMED = 8
SEVERITIES = {"error": "bold red", "warning": "yellow", "note": "dim"}


def table(*headings: str, right: Sequence[str] = ()) -> Table:
    """An empty table; columns named in ``right`` are flush right."""
    made = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False)
    for heading in headings:
        made.add_column(heading, justify="right" if heading in right else "left", overflow="fold")
    return made


def whole(table: Table, *columns: int) -> None:
    """Never break these columns' texts."""
    for column in columns:
        table.columns[column].no_wrap = True


def print_rows(headings: Sequence[str], rows: Iterable[Sequence[object]]) -> None:
    """A plain table."""
    drawn = table(*headings)
    for row in rows:
        drawn.add_row(*(Text("" if cell is None else p.plain(str(cell))) for cell in row))
    console().print(drawn)


# ---- findings


def counted(severities: Mapping[str, int]) -> str:
    """ "2 errors, 1 note", worst first."""
    return ", ".join(p.many(n, severity) for severity in SEVERITIES if (n := severities[severity]))


def print_findings(findings: Sequence[Document], motors: int) -> None:
    """All findings, worst first, and a line that counts them."""

    def draw(out: Console) -> None:
        for finding in findings:
            print_finding(out, finding)
        said = counted(Counter(f["severity"] for f in findings)) or "no findings"
        out.print(f"{p.many(motors, 'motor')} checked: {said}.")

    paged(draw)


def print_finding(out: Console, f: Document) -> None:
    """Severity, motor and cell; below it, indented, the message and the cause's name."""
    who = f["part_number"] or ""
    if f["scope"] == "column" and len(f["part_numbers"]) > 1:
        who = f"{who or f['part_numbers'][0]} and {len(f['part_numbers']) - 1} more of its table"
    where = p.cell(f["cell"])
    head = Text(f["severity"], style=SEVERITIES[f["severity"]])
    head.append(f"  {p.plain(who)}{f'  ({where})' if where else ''}", style="default")
    out.print(head)
    out.print(Padding(Text(p.plain(f["message"])), (0, 0, 0, 4)))
    details = []
    if f["cause"] != "unexplained":
        details.append(f"cause: {f['cause']}")
    if others := [cause for cause in f["other_causes"] if cause != "unexplained"]:
        details.append(f"or: {', '.join(others)}")
    if details:
        out.print(Padding(Text("; ".join(details), style="dim"), (0, 0, 0, 4)))


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
    out = console()
    for i in imports:
        did, lines = deed(i)
        out.print(Text(f"{i.id:>4}  {p.when(i.at)} UTC  {did}"))
        for line in lines:
            out.print(Padding(Text(p.plain(line)), (0, 0, 0, 6)))


def deed(i: "Import") -> tuple[str, list[str]]:
    """What an import, a merging or a removal did, and the files or motors that it concerned."""
    if i.files:
        replaced = f", {i.replaced} replaced" if i.replaced else ""
        of_gears = f", {i.gears_replaced} replaced" if i.gears_replaced else ""
        said = [p.many(i.gears, "gear") + of_gears] if i.gears else []
        if i.motors or not said:
            said.insert(0, p.many(i.motors, "motor") + replaced)
        return "; ".join(said), list(i.files)
    if i.merged:
        merged = [f"{name} into {into}" for name, into in i.merged]
        return p.many(len(merged), "motor") + " merged", merged
    said = [p.many(n, word) for n, word in ((i.replaced, "motor"), (i.gears_replaced, "gear")) if n]
    return f"{' and '.join(said) or 'nothing'} taken out", []


def print_corrections(corrections: Iterable[tuple["Correction", str]]) -> None:
    """The corrections, each with what it stands for, why and since when, or why it does not."""
    out = console()
    for c, not_applied in corrections:
        who = f"{c.maker}/{c.part_number}" if c.maker else c.part_number
        head = f"{who}: {p.words(c.quantity)} (since {p.when(c.at)})"
        out.print(Text(p.plain(head), style="bold"))
        said = f"{c.published_text or 'not given'} → {c.text}: {c.reason}"
        out.print(_hanging(p.plain(said)))
        if not_applied:
            out.print(_hanging(p.plain(f"Not applied: {not_applied}.")))


def print_changes(changes: Iterable[Document]) -> None:
    """What changed, a motor each; those that merely came or went in a line together."""
    out = console()
    together: dict[tuple[str, str], list[str]] = {}
    changed = []
    for change in changes:
        if change["change"] in ("new", "removed"):
            what = change["change"], change.get("kind", "motor")
            together.setdefault(what, []).append(p.plain(change["part_number"]))
        else:
            changed.append(change)
    for (word, kind), parts in together.items():
        more = f" … and {len(parts) - MOST_NAMED} more" if len(parts) > MOST_NAMED else ""
        named = ", ".join(parts[:MOST_NAMED])
        out.print(Text(f"{p.many(len(parts), kind)} {word}: {named}{more}"))
    for change in changed:
        if change["change"] == "merged":
            into = "/".join(filter(None, change["into"].values()))
            out.print(Text(p.plain(f"{change['part_number']}: merged into {into}")))
            continue
        out.print(Text(f"{p.plain(change['part_number'])}: {change['change']}", style="bold"))
        for key, figure in change.get("figures", {}).items():
            before, after = (_printed(figure[side]) for side in ("before", "after"))
            out.print(_hanging(f"{p.words(key)}: {before} → {after}"))
        for side, word in (("came", "new finding"), ("went", "no longer found")):
            for finding in change.get("findings", {}).get(side, ()):
                out.print(_hanging(f"{word}: {p.plain(finding['message'])}"))


def _hanging(text: str) -> Padding:
    return Padding(Text(text), (0, 0, 0, 4))


def _printed(figure: Document | None) -> str:
    if figure is None:
        return "not given"
    return p.printed(figure) or _amount(figure)
