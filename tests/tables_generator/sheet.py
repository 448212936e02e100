"""A family of motors as columns of printed cells, with the value each cell must be read as."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from decimal import ROUND_HALF_EVEN, Decimal
from fractions import Fraction

from . import units as u
from .motors import draw_motors, draw_part_numbers
from .numbers import STYLES, NumberStyle
from .quantities import SHEETS, Quantity
from .recipe import Recipe
from .words import CAPTIONS, LABELS

MISSING = ("", "-", "–", "—", "---", "n/a")
INTEGERS = {"nominal_voltage", "maximum_winding_temperature", "pole_pairs", "poles", "phases"}
NO_QUALIFIER = INTEGERS | {"nominal_speed"}


@dataclass
class Printed:
    """One printed cell: its text without unit, the number in it, and the right reading in SI."""

    text: str
    number: Decimal
    value: float
    low: float | None = None
    high: float | None = None
    plain: bool = True
    optional: bool = False
    doubtful: bool = False


@dataclass
class Column:
    """One quantity over the motors of a sheet."""

    quantity: Quantity
    unit: u.Unit
    unit_text: str
    label: str
    symbol: str
    cells: list[Printed | None]
    convention: dict[str, object] = field(default_factory=dict)
    other_unit: str = ""
    group_label: str = ""

    @property
    def key(self) -> str:
        return self.quantity.key


@dataclass
class Sheet:
    """Motors of one kind as printed. ``other`` are columns that are no figure of the catalog."""

    recipe: Recipe
    kind: str
    parts: list[str]
    truths: list[dict[str, float]]
    columns: list[Column]
    style: NumberStyle
    part_label: str
    notes: list[str] = field(default_factory=list)
    title: str = ""
    reference_temperature: float | None = None
    others: list[tuple[str, list[str]]] = field(default_factory=list)

    def word(self, name: str) -> str:
        return CAPTIONS[name][self.recipe.language]


def round_digits(value: float, digits: int) -> Decimal:
    """The value to a number of significant digits, without an exponent."""
    exact = Decimal(value)
    place = exact.adjusted() - digits + 1
    rounded = exact.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_EVEN)
    return Decimal(f"{rounded:f}")


def _suits(unit: u.Unit, values: list[float]) -> float:
    """How far a unit is from printing numbers of a usual size; 0 is fine."""
    logs = [math.log10(unit.from_si(v)) for v in values]
    return max(0.0, -1.0 - min(logs)) + max(0.0, max(logs) - 4.7)


def choose_unit(recipe: Recipe, quantity: Quantity, values: list[float], system: str) -> u.Unit:
    """A unit of the wanted system whose numbers have a usual size, or the least unusual one."""
    rng = recipe.random(f"unit {quantity.key}")
    units = [x for x in quantity.units if system == "mixed" or x.system == system]
    units = units or [x for x in quantity.units if x.system == "metric"]
    fitting = [x for x in units if _suits(x, values) == 0]
    if fitting:
        return rng.choice(fitting)
    return min(quantity.units, key=lambda x: _suits(x, values))


def _label(recipe: Recipe, key: str) -> str:
    rng = recipe.random(f"label {key}")
    label = rng.choice(LABELS[key][recipe.language])
    if recipe.has("second language"):
        eastern = () if recipe.format != "pdf" else ("ja", "zh")
        other = rng.choice([x for x in LABELS[key] if x not in (recipe.language, *eastern)])
        label = f"{label} / {rng.choice(LABELS[key][other])}"
    return label


def _spelling(recipe: Recipe, key: str, unit: u.Unit) -> str:
    rng = recipe.random(f"spelling {key}")
    if unit.name == "rpm" and recipe.language in u.SPEEDS_BY_LANGUAGE:
        return rng.choice(u.SPEEDS_BY_LANGUAGE[recipe.language])
    return rng.choice(unit.spellings)


def print_number(recipe: Recipe, key: str, place: int, unit: u.Unit, value: float) -> Printed:
    """A figure rounded and written in the recipe's style."""
    rng = recipe.random(f"digits {key}")
    style = STYLES[recipe.style]
    number = unit.from_si(value)
    if key in INTEGERS:
        rounded = Decimal(repr(round(number, 1))).normalize()
        rounded = Decimal(f"{rounded:f}")
        digits = 3
    else:
        digits = rng.choice([3, 3, 4])
        rounded = round_digits(number, digits)
    scientific = (
        recipe.has("scientific") and key not in INTEGERS and not 1e-2 <= number < 1e5
    ) or not 1e-4 <= number < 1e7
    if scientific:
        text, printed = style.write_scientific(Decimal(number), digits)
        return Printed(text, printed, unit.to_si(printed), plain=False)
    return Printed(style.write(rounded), rounded, unit.to_si(rounded))


def _qualify(recipe: Recipe, key: str, place: int, unit: u.Unit, printed: Printed) -> Printed:
    """The same cell with a printed tolerance, bound, range or hedge."""
    rng = recipe.random(f"qualifier {key} {place}")
    style = STYLES[recipe.style]
    number, text = printed.number, printed.text
    last = Decimal(1).scaleb(int(number.as_tuple().exponent))
    forms = ["hedge"] if unit.name == "%" else ["± percent", "± absolute", "hedge"]
    if key == "no_load_current":
        forms += ["at most", "at most"]
    if key in ("terminal_inductance", "rotor_inertia", "mass"):
        forms += ["range"]
    form = rng.choice(forms)
    to_si = unit.to_si
    if form == "± percent":
        percent = rng.choice([5, 10, 12, 15])
        text += rng.choice([f" ±{percent} %", f" ± {percent}%", f"±{percent}%"])
        part = Fraction(percent, 100)
        low, high = (to_si(Fraction(number) * (1 + s * part)) for s in (-1, 1))
    elif form == "± absolute":
        step = last * rng.choice([1, 2, 5])
        text += rng.choice([" ± ", "±", " +/- "]) + style.write(step)
        low, high = to_si(number - step), to_si(number + step)
    elif form == "at most":
        mark = rng.choice(["≤ ", "< ", "max. ", "<", "≤"])
        return Printed(mark + text, number, printed.value, None, printed.value, False)
    elif form == "range":
        end = number + last * rng.choice([2, 4, 8])
        text += rng.choice(["…", " … ", "...", "–", " – ", " ... "]) + style.write(end)
        middle = (number + end) / 2
        return Printed(text, middle, to_si(middle), to_si(number), to_si(end), False)
    else:
        mark = rng.choice(["~", "ca. ", "~ ", "typ. ", "≈ ", CAPTIONS["typical"][recipe.language]])
        # Behind a point a blank: "typ.951" may be 951 or .951, so nobody could be sure of it.
        gap = " " * mark.endswith((" ", "."))
        return Printed(mark.strip() + gap + text, number, printed.value, plain=False)
    if number <= 0 or low <= 0:
        return printed
    return Printed(text, number, printed.value, low, high, False)


def build_sheet(recipe: Recipe, kind: str | None = None, keys: tuple[str, ...] = ()) -> Sheet:
    """Draws the motors of a recipe and prints their figures."""
    kind = kind or recipe.kind
    rng = recipe.random(f"motors {kind}")
    windings = min(recipe.windings, 7)
    truths = draw_motors(rng, kind, windings)
    labelled = not recipe.layout.startswith("columns")
    parts = draw_part_numbers(rng, windings, plain_digits=labelled)
    sheet = Sheet(
        recipe,
        kind,
        parts,
        truths,
        [],
        STYLES[recipe.style],
        rng.choice(LABELS["part_number"][recipe.language]),
    )
    for key in keys or recipe.keys:
        sheet.columns.append(_build_column(sheet, SHEETS[kind][key]))
    if recipe.has("title"):
        sheet.title = rng.choice(["Series {c}", "{c} – DC motors", "Motor series {c}"]).format(
            c=rng.choice(["VX", "TORDAL", "Quill", "Ombra"])
        )
    return sheet


def _build_column(sheet: Sheet, quantity: Quantity) -> Column:
    recipe, key = sheet.recipe, quantity.key
    values = [truth[key] for truth in sheet.truths]
    unit = choose_unit(recipe, quantity, values, recipe.system)
    if key == "rotor_inertia" and recipe.has("scaled") and recipe.system == "metric":
        unit = min(u.SCALED_INERTIAS, key=lambda x: abs(math.log10(x.from_si(values[0]))))
    if key == "maximum_speed" and recipe.has("scaled"):
        unit = u.SCALED_SPEEDS[0]
    cells: list[Printed | None] = []
    for place, value in enumerate(values):
        printed = print_number(recipe, key, place, unit, value)
        rng = recipe.random(f"cell {key} {place}")
        if recipe.has("qualifiers") and key not in NO_QUALIFIER and rng.random() < 0.25:
            printed = _qualify(recipe, key, place, unit, printed)
        cells.append(printed)
    if quantity.shared:
        cells = [cells[0]] * len(cells) if cells[0] else cells
    symbols = recipe.random(f"symbol {key}")
    return Column(
        quantity,
        unit,
        _spelling(recipe, key, unit),
        _label(recipe, key),
        symbols.choice(quantity.symbols) if quantity.symbols else "",
        cells,
        dict(unit.says),
    )
