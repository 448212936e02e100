"""Tables of gears: a gear a row or a gear a column, with a ratio and a part number.

Gears have few figures and no conventions, so their tables are read more simply than motors': a
line of headings, perhaps a line of units, a line a gear.
"""

import re
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from functools import cache

from ...schema.errors import MotorfolioError, excerpt
from ...schema.figure.read import NumberStyle, number_style, read_figure
from ...schema.figure.signs import plain
from ...schema.gear import UNITS, Gear, gear_words
from ...schema.units.read import Unit, read_unit
from ..tables.grid import Grid
from .cells import is_role, is_unit
from .headings.lexicon import squeeze, tokens


class GearError(MotorfolioError):
    """A table that holds no gear this program can read."""


@dataclass(frozen=True, slots=True)
class GearReading:
    """How one heading of a gear table was read: key and unit, or None for one that was not."""

    heading: str
    key: str | None
    unit: str


@dataclass(frozen=True, slots=True)
class GearCell:
    """A cell that was not read, its place in the file, and why."""

    row: int
    column: int
    heading: str
    text: str
    reason: str


@dataclass(slots=True)
class GearTable:
    """The gears of a table, how its headings were read, and the cells that were not."""

    gears: list[Gear] = field(default_factory=list)
    reading: list[GearReading] = field(default_factory=list)
    unread: list[GearCell] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class _Column:
    reading: GearReading
    unit: Unit | None = None
    told: bool = False
    """Whether the heading itself names the unit."""


@dataclass(frozen=True, slots=True)
class _Lines:
    """A grid as lines of a gear each, and the places of their cells."""

    cells: list[list[str]]
    line_numbers: list[int]
    cell_numbers: list[int]
    turned: bool

    def unread(self, line: int, cell: int, heading: str, text: str, reason: str) -> GearCell:
        place = self.line_numbers[line], self.cell_numbers[cell]
        row, column = reversed(place) if self.turned else place
        return GearCell(row, column, heading, text, reason)


_HEADING = re.compile(
    r"^(?P<name>.*?)\s*"
    r"(?:\[(?P<a>.*)\]|\((?P<b>[^()]*)\)|,\s*(?P<c>\S+)|\s+in\s+(?P<d>\S+))?$",
    re.DOTALL,
)
_MAKER = re.compile(
    r"(?:maker|manufacturer|hersteller|fabricant|produttore|fabricante|メーカー|制造商)\s*[:：]\s*(.+)",
    re.IGNORECASE,
)
_TO_ONE = re.compile(r"(?:i\s*=\s*)?(?P<high>[^:/∶：]+?)\s*[:/∶：]\s*(?P<low>[^:/∶：]+)")
_TEXTS = ("part_number", "maker", "series")


def read_gears(grid: Grid, maker: str | None = None) -> GearTable:
    """The gears of a table, one a row or one a column, with units in or below the headings.

    The line of headings is the first that names a ratio and another figure or a part number; a
    line "Maker: …" before it names the maker. Raises GearError where there is no such line, or no
    gear below it.
    """
    upright = _Lines(grid.rows, grid.row_numbers, grid.column_numbers, False)
    turned = _Lines([*map(list, zip(*grid.rows, strict=True))], grid.column_numbers,
                    grid.row_numbers, True)  # fmt: skip
    for lines in (upright, turned):
        head = next((n for n, line in enumerate(lines.cells) if _is_heading(line)), None)
        if head is not None:
            return _read(lines, head, maker or _named_maker(grid))
    raise GearError(
        "no table of gears: a line of headings must name a part number and a ratio, such as "
        "Part number, Ratio, Efficiency [%]"
    )


def _named_maker(grid: Grid) -> str:
    for row in grid.rows[:10]:
        said = plain(next((cell for cell in row if cell.strip()), ""))
        if match := _MAKER.match(said):
            return match[1].split(";")[0].strip()
    return ""


# ---- headings


@cache
def _names() -> dict[str, str]:
    return {
        squeeze(tokens(name)): key
        for key, names in gear_words().items()
        if key != "fillers"
        for name in (*names, key.replace("_", " "))
    }


@cache
def _fillers() -> frozenset[str]:
    return frozenset(token for word in gear_words()["fillers"] for token in tokens(word))


def _key(name: str) -> str | None:
    """The figure that a heading names: as it stands, or without words that change nothing."""
    words = tokens(name)
    names = _names()
    kept = [word for word in words if word not in _fillers()]
    return names.get(squeeze(words)) or names.get(squeeze(kept))


def _is_heading(line: Sequence[str]) -> bool:
    keys = [key for text in line if text.strip() and (key := _column(text).reading.key)]
    return "ratio" in keys and len(set(keys)) > 1


def _column(heading: str) -> _Column:
    """How a heading reads; a unit that can't be that figure's leaves it unread."""
    text = plain(heading)
    match = _HEADING.match(text)
    written = next((match[g] for g in "abcd" if match[g]), "") if match else ""
    for name, unit in ((match["name"] if match else text, written), (text, "")):
        key = _key(name)
        if key is not None:
            return _with_unit(heading, key, unit)
    return _Column(GearReading(heading, None, written))


def _with_unit(heading: str, key: str, text: str) -> _Column:
    if key in _TEXTS:
        return _Column(GearReading(heading, key, ""))
    if not text and UNITS[key] != "1":
        return _Column(GearReading(heading, key, ""))  # the cells may bring their own
    try:
        unit = read_unit(text.strip("[]() ") if text.strip("[]()-– ") else "", (UNITS[key],))
    except MotorfolioError:
        return _Column(GearReading(heading, None, text))
    return _Column(GearReading(heading, key, unit.si), unit, bool(text))


# ---- gears


def _read(lines: _Lines, head: int, maker: str) -> GearTable:
    columns = [_column(text) for text in lines.cells[head]]
    first = head + 1
    if first < len(lines.cells) and _is_units(lines.cells[first]):
        columns = [
            _with_unit(c.reading.heading, c.reading.key, text)
            if c.reading.key not in (None, "ratio") and not c.told and text.strip() else c
            for c, text in zip(columns, lines.cells[first], strict=False)
        ]  # fmt: skip
        first += 1
    keys = [c.reading.key for c in columns]
    ratio = keys.index("ratio")
    gears = [n for n in range(first, len(lines.cells)) if lines.cells[n][ratio].strip()]
    at = keys.index("part_number") if "part_number" in keys else None
    if at is None or not any(lines.cells[n][at].strip() for n in gears):
        # the names may stand below a heading of no meaning, and a title speak of gears
        named = _unnamed(lines, columns, gears)
        if named is not None:
            columns[named] = _Column(replace(columns[named].reading, key="part_number"))
            if at is not None:
                columns[at] = _Column(replace(columns[at].reading, key=None))
    headed = [
        c.reading
        for k, c in enumerate(columns)
        if c.reading.heading.strip() and any(lines.cells[n][k].strip() for n in gears)
    ]
    table = GearTable(reading=headed)
    style = number_style(
        text.split(":")[0]
        for line in lines.cells[first:]
        for c, text in zip(columns, line, strict=False)
        if c.reading.key in UNITS and text.strip()
    )
    seen: set[tuple[str, str]] = set()
    for n in range(first, len(lines.cells)):
        gear = _gear(lines, n, columns, style, maker, table.unread)
        if gear is None:
            continue
        if (name := (gear.maker, gear.part_number)) in seen:
            reason = "this part number stands in the table before; the first is taken"
            table.unread.append(lines.unread(n, 0, "", gear.part_number, reason))
            continue
        seen.add(name)
        table.gears.append(gear)
    if not table.gears:
        raise GearError(_no_gear(table, columns))
    return table


def _no_gear(table: GearTable, columns: Sequence[_Column]) -> str:
    if "part_number" not in [c.reading.key for c in columns]:
        return "no heading names a part number, such as Part number or Gearhead"
    for cell in table.unread:
        return f'row {cell.row}, column {cell.column}, "{excerpt(cell.text)}": {cell.reason}'
    return "no gear stands below its headings"


def _is_units(line: Sequence[str]) -> bool:
    """Whether a line below the headings holds their units: some, and nothing but."""
    filled = [text.strip("[]() ") for text in line if text.strip(" -–[]()")]
    return any(map(is_unit, filled)) and all(
        is_unit(text) or re.fullmatch(r"[xni]?\s*:\s*1", text) or is_role(text, "unit")
        for text in filled
    )


def _unnamed(lines: _Lines, columns: Sequence[_Column], gears: Sequence[int]) -> int | None:
    """The first column that is nothing else and names every gear, each by a text of its own."""
    for k, column in enumerate(columns):
        texts = [lines.cells[n][k].strip() for n in gears]
        if column.reading.key is None and texts and all(texts) and len({*texts}) == len(texts):
            return k
    return None


def _gear(
    lines: _Lines,
    n: int,
    columns: Sequence[_Column],
    style: NumberStyle,
    maker: str,
    unread: list[GearCell],
) -> Gear | None:
    values: dict[str, object] = {}
    refused: list[GearCell] = []
    for k, (column, text) in enumerate(zip(columns, lines.cells[n], strict=False)):
        key = column.reading.key
        text = text.strip()
        if key is None or not text or key in values:
            continue
        if key in _TEXTS:
            values[key] = text
            continue
        try:
            value, unit = _value(key, text, column.unit, style)
        except MotorfolioError as error:
            refused.append(lines.unread(n, k, column.reading.heading, text, _reason(error)))
            continue
        if value is None:
            continue
        values[key] = round(value) if key == "stages" else value
        if key == "price":
            values["currency"] = unit
    if not values:
        unread += refused
        return None
    missing = [word for key, word in (("part_number", "part number"), ("ratio", "ratio"))
               if key not in values]  # fmt: skip
    unread += refused
    if missing:
        if not any(cell.heading for cell in refused):
            text = str(values.get("part_number") or values.get("ratio") or "")
            reason = f"a gear needs a part number and a ratio; this has no {missing[0]}"
            unread.append(lines.unread(n, 0, "", text, reason))
        return None
    values.setdefault("maker", maker)
    values.setdefault("series", None)
    return Gear(**values)  # pyright: ignore[reportArgumentType]


def _reason(error: MotorfolioError) -> str:
    return getattr(error, "reason", None) or str(error)


def _value(key: str, text: str, unit: Unit | None, style: NumberStyle) -> tuple[float | None, str]:
    """A cell in SI and its unit. None where the sheet gives none. Raises MotorfolioError."""
    if key == "ratio" and (pair := _TO_ONE.fullmatch(plain(text))):
        high, low = (_value(key, part, unit, style)[0] for part in (pair["high"], pair["low"]))
        if not high or not low:
            raise MotorfolioError("no ratio, such as 14:1")
        if high < low:
            raise MotorfolioError(f"a step up; for a reduction write {pair['low']}:{pair['high']}")
        return high / low, "1"
    figure = read_figure(text, style)
    if figure is None:
        return None, ""
    if figure.also is not None:
        raise MotorfolioError("one number is wanted")
    if figure.unit:
        unit = read_unit(figure.unit, (UNITS[key],))
    if unit is None:
        raise MotorfolioError(f"no unit is given; {_would_do(key)} would do")
    value = figure.value * unit.factor + unit.offset
    above = key == "efficiency" and value > 1
    if value < 0 or above or (value == 0 and key not in ("backlash", "price")):
        hint = "; as per cent it needs the sign %" if above and unit.factor == 1 else ""
        raise MotorfolioError(f"no possible value{hint}")
    return value, unit.si


def _would_do(key: str) -> str:
    return "a currency such as EUR" if UNITS[key] == "currency" else UNITS[key]
