"""A motor on one screen: constants with interval and basis, figures as published beside SI,
findings in plain words, and the place all of it came from."""

from collections.abc import Iterable, Iterator, Mapping, Sequence

from rich import box
from rich.console import Console, Group, RenderableType
from rich.table import Table
from rich.text import Text

from ..documents import Document
from . import plain as p
from .safety import SAFETY

SIGNS = {"error": "✗", "warning": "!", "note": "·"}
STYLES = {"error": "bold red", "warning": "yellow", "note": "dim"}

FEW = 1
"""Figures that a constant came from are named up to this number, else counted."""

WIDE = 150
"""From this width on the figures stand beside the rest."""


def print_card(motor: Document, out: Console) -> None:
    """The card; ``motor`` is the interface's MOTOR."""
    out.print(_title(motor))
    out.print(Text(_kind(motor), style="dim"))
    first: list[RenderableType] = [_constants(motor["constants"], narrow=out.width >= WIDE)]
    second = list(_published(motor))
    third: list[RenderableType] = [*finding_lines(motor["findings"])]
    third.append(Text(f"From {_source(motor['source'])}.", style="dim"))
    for other in motor.get("also", ()):
        said = f"Also {other['part_number']} of {_source(other['source'])}."
        third.append(Text(p.plain(said), style="dim"))
    third += [Text(SAFETY, style="dim")]
    if out.width >= WIDE:
        grid = Table.grid(padding=(0, 3), expand=True)
        grid.add_column(ratio=3)
        grid.add_column(ratio=2)
        grid.add_row(Group(*second), Group(*first, *third))
        out.print(grid)
    else:
        out.print(Group(*first, *second, *third))


def _published(motor: Document) -> Iterator[RenderableType]:
    """What the sheet says, conditions and operating points after it."""
    yield _figures(motor["figures"], _marks(motor["findings"]), "As published")
    for key, repeats in motor.get("repeats", {}).items():
        for figure in repeats:
            yield Text(f"  {p.words(key)}, given again: {p.printed(figure)}")
    for condition in motor.get("conditions", ()):
        yield _figures(condition["figures"], {}, f"When {p.plain(condition['when'])}")
    for point in motor.get("points", ()):
        shown = ", ".join(
            f"{p.words(key)} {p.quantity(f['value'], f['unit'])}"
            for key, f in point["figures"].items()
        )
        yield Text(f"  point {p.plain(point['name'])}: {shown}")


def _title(motor: Document) -> Text:
    title = Text(p.plain(motor["part_number"]), style="bold")
    about = [motor["maker"], f"series {motor['series']}" if motor["series"] else None]
    description = motor["figures"].get("description")
    if description and isinstance(description["value"], str):
        about.append(description["value"])
    for part in filter(None, about):
        title.append(f"  {p.plain(part)}", style="not bold")
    return title


def _kind(motor: Document) -> str:
    kind = motor["model"]
    commutation, magnet, reference = (
        kind[key] for key in ("commutation", "magnet", "reference_temperature")
    )
    said = [f"{commutation['value']} commutation ({commutation['basis']})"]
    if magnet["value"] == "unknown":
        said.append("magnets unknown")
    else:
        said.append(f"{magnet['value']} magnets ({magnet['basis']})")
    if reference["value"] is not None:
        said.append(f"figures at {p.number(reference['value'])} °C ({reference['basis']})")
    return ", ".join(said)


def _table(*headings: str) -> Table:
    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False, padding=(0, 1))
    for heading in headings:
        table.add_column(heading, overflow="fold")
    return table


def _cells(cells: Iterable[str | Text]) -> list[Text]:
    return [cell if isinstance(cell, Text) else Text(cell) for cell in cells]


def _constants(constants: Mapping[str, Document], *, narrow: bool) -> RenderableType:
    if not constants:
        return Text("No constants are known.")
    table = _table("Constants at 25 °C", "Value", "95 % interval", "Basis")
    table.columns[0].no_wrap, table.columns[2].no_wrap = not narrow, True
    for key, c in constants.items():
        _, low, high, _ = scaled(c["value"], c["low"], c["high"], c["unit"])
        table.add_row(
            *_cells((p.words(key), p.quantity(c["value"], c["unit"]), p.interval(low, high),
                     c["basis"] + _from(c["from"])))
        )  # fmt: skip
    return table


def scaled(
    value: float | None, low: float | None, high: float | None, unit: str
) -> tuple[float | None, float | None, float | None, str]:
    """The same with a prefix of the unit that leaves a readable number."""
    factor, prefixed = p.scale(value, unit)
    value, low, high = (None if end is None else end / factor for end in (value, low, high))
    return value, low, high, prefixed


def _from(keys: Sequence[str]) -> str:
    if not keys:
        return ""
    if len(keys) > FEW:
        return f", {len(keys)} figures"
    return f" from {', '.join(map(p.words, keys))}"


def _marks(findings: Iterable[Document]) -> dict[str, str]:
    """The worst severity of the figures that findings doubt: the suspect, else all rivals."""
    marks: dict[str, str] = {}
    for f in findings:
        for key in [f["suspect"]] if f["suspect"] else f["figures"]:
            if key not in marks or list(SIGNS).index(f["severity"]) < list(SIGNS).index(marks[key]):
                marks[key] = f["severity"]
    return marks


def _figures(figures: Mapping[str, Document], marks: Mapping[str, str], title: str) -> Table:
    table = _table("", title, "Printed", "In SI", "Convention", "Cell")
    for key, f in figures.items():
        value, unit = f["value"], f.get("unit", "")
        note: str = p.convention(f.get("convention"))
        if "corrected" in f:
            value, unit = f["corrected"]["value"], f["corrected"]["unit"]
            note = f"corrected to {p.plain(f['corrected']['text'])}: {f['corrected']['reason']}"
        si = "" if isinstance(value, str) else p.quantity(value, unit)
        severity = marks.get(key)
        sign = Text(SIGNS[severity], style=STYLES[severity]) if severity else ""
        table.add_row(*_cells((sign, p.words(key), p.printed(f), si, p.plain(note), p.place(f))))
    return table


def finding_lines(findings: Sequence[Document]) -> Iterator[Text]:
    """Every finding as a paragraph, its severity as a word and a sign."""
    if not findings:
        yield Text("No findings: the figures agree with one another.")
    for f in findings:
        line = Text(f"{SIGNS[f['severity']]} {f['severity']}: ", style=STYLES[f["severity"]])
        line.append(p.plain(f["message"]), style="default")
        yield line


def _source(source: Document) -> str:
    parts = [source["file"], source["sheet"], f"page {source['page']}" if source["page"] else None]
    return p.plain(", ".join(part for part in parts if part))
