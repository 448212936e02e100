"""A search as a person reads it: the ranked table, near misses, counts, the safety line."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import groupby
from typing import Any

from rich.console import Console
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from .plain import number, percent, plain, quantity, words
from .safety import SAFETY

Document = Mapping[str, Any]

#: Orders of which no other column tells: heading and factor from SI.
_ORDERED = {
    "price": ("price", 1.0),
    "diameter": ("diameter mm", 1e3),
    "copper-loss": ("loss W", 1.0),
}
_RPM = 60 / (2 * 3.141592653589793)


def print_search(document: Document, console: Console) -> None:
    """Counts, candidates, near misses, the safety line."""
    counts, candidates = document["counts"], document["candidates"]
    rejected = sum(counts["rejected"].values())
    feasible, unknown = counts["feasible"], counts["unknown"]
    console.print(
        f"{_many(counts['considered'], 'motor')}: {feasible} {_verb(feasible, 'does')} it, "
        f"{rejected} {_verb(rejected, 'does')} not, {unknown} {_verb(unknown, 'is')} unknown."
    )
    if counts["considered"] and not counts["pass_where"] and document["where"]:
        console.print(Text(plain(_where_passes_none(document))))
    elif candidates:
        order = document["requirement"]["order_by"]
        console.print(candidate_table(candidates, order))
        for line in _notes(candidates):
            console.print(Text(line), soft_wrap=False)
    else:
        console.print("No motor does it.")
    if counts["rejected"]:
        by_limit = ", ".join(f"{words(k)} {n}" for k, n in counts["rejected"].items())
        console.print(Text(f"Rejected by: {by_limit}."))
    if counts["lacking"]:
        lacking = ", ".join(f"{words(k)} {n}" for k, n in counts["lacking"].items())
        console.print(Text(f"Unknown for lack of: {lacking}."))
    if document["near_misses"]:
        console.print()
        console.print("Near misses:")
        for miss in document["near_misses"]:
            console.print(Padding(Text(_miss(miss)), (0, 0, 0, 2)))
    console.print(Text(SAFETY, style="dim"))


def why_none(document: Document) -> str:
    """Why no motor was found, and what would do."""
    counts = document["counts"]
    if not counts["considered"]:
        return "The catalog has no motors; read a table first: motorfolio import FILE."
    if document["where"] and not counts["pass_where"]:
        return "No motor passes --where; give limits that some motor meets."
    if counts["lacking"]:
        most = max(counts["lacking"], key=counts["lacking"].get)
        figures = {
            "thermal": "thermal resistances, or a continuous current, with a winding temperature",
            "voltage": "inductance and pole pairs of sinusoidal motors",
            "inertia_ratio": "the rotor's inertia",
            "where": "the figures that --where asks for",
            "gear": "efficiency, inertia and torque of the gears",
        }.get(most, words(most))
        unknown = counts["unknown"]
        return (
            f"No motor is known to do it; {unknown} {_verb(unknown, 'is')} unknown, most for lack "
            f"of {figures}."
        )
    who = "No motor of the catalog does it"
    if document["where"]:
        who = f"None of the {_many(counts['pass_where'], 'motor')} that pass --where does it"
        if counts["pass_where"] == 1:
            who = "The one motor that passes --where does not do it"
    if document["near_misses"]:
        return f"{who}; the near misses tell what would admit one."
    return f"{who}, and no single change of the requirement would admit one of the nearest."


def _where_passes_none(document: Document) -> str:
    """Which limit on stored figures lets no motor through, or that all of them together do not."""
    none = [held for held in document["where"] if not held["passes"]]
    if not none:
        each = ", ".join(f"{held['limit']} {held['passes']}" for held in document["where"])
        return f"No motor passes all of --where together; each alone passes: {each}."
    held = none[0]
    said = f'No motor passes --where "{held["limit"]}"'
    if held["unknown"] == document["counts"]["considered"]:
        return f"{said}: none has that figure."
    if held["did_you_mean"]:
        near = " or ".join(f'"{text}"' for text in held["did_you_mean"])
        return f"{said}: a text must be equal as a whole, case aside; the catalog has {near}."
    return f"{said}."


def _many(n: int, noun: str) -> str:
    return f"{n} {noun}{'s' * (n != 1)}"


def _verb(n: int, single: str) -> str:
    return single if n == 1 else {"does": "do", "is": "are"}[single]


def _miss(miss: Document) -> str:
    use = miss["utilisation"].get(miss["limiting"])
    geared = f" with {miss['gear']['part_number']}" if "gear" in miss else ""
    over = (
        f"{words(miss['limiting'])} {percent(use)}" if use is not None else words(miss["limiting"])
    )
    maker = f" ({miss['maker']})" if miss["maker"] else ""
    return plain(f"{miss['part_number']}{geared}{maker}: {over}. {miss['needs']}")


def candidate_table(candidates: Sequence[Document], order_by: str = "size") -> Table:
    """The ranked table: fits in 80 columns. Where they are ordered by a figure that no column
    shows, it stands in the place of the mass."""
    geared = any("gear" in c for c in candidates)
    table = Table(box=None, pad_edge=False, padding=(0, 1), header_style="bold")
    table.add_column("#", justify="right")
    table.add_column("motor", overflow="fold")
    table.add_column("gear" if geared else "ratio", overflow="fold")
    heading, factor = "mass kg", 1.0
    if order_by in _ORDERED:
        heading, factor = _ORDERED[order_by]
        units = {c["ranked_by"]["unit"] for c in candidates}
        if order_by == "price":
            heading = f"price {units.pop()}" if len(units) == 1 else "price"
    for name in (heading, "peak A", "rms A", "winding °C"):
        table.add_column(name, justify="right")
    table.add_column("limit", no_wrap=True)
    for rank, c in enumerate(candidates, start=1):
        mass = c["pair_mass"] if "pair_mass" in c else c["mass"]
        use = c["utilisation"].get(c["limiting"]) if c["limiting"] else None
        table.add_row(
            str(rank),
            Text(plain(c["part_number"])),
            Text(plain(c["gear"]["part_number"]) if "gear" in c else _ratio(c)),
            _scaled(c["ranked_by"] if order_by in _ORDERED else mass, factor, heading == "price"),
            number(c["peak_current"]["value"], 3),
            number(c["rms_current"]["value"], 3),
            number(c["winding_temperature"]["value"], 3),
            "–" if use is None else f"{words(c['limiting'])} {percent(use)}",
        )
    return table


def _scaled(found: Document, factor: float, with_unit: bool) -> str:
    value = found["value"]
    said = number(None if value is None else value * factor, 4 if found["unit"] != "kg" else 3)
    return f"{said} {found['unit']}" if with_unit and value is not None else said


def _ratio(c: Document) -> str:
    pairs = c["ratio_intervals"]
    spans = ", ".join(f"{number(low, 3)}–{number(high, 3)}" for low, high in pairs)
    return number(c["ratio"]) + (f" ({spans})" if spans else "")


def _notes(candidates: Sequence[Document]) -> list[str]:
    """Supply and inertia of the first candidate, and remarks, each with the motors it concerns."""
    lines = []
    first = candidates[0]
    if "supply" in first:
        lines.append(f"{plain(first['part_number'])} {_supply(first)}.")
    corners = [c for c in candidates if "worst_corner" in c]
    if corners:
        lines.append(f"Worst case of {plain(first['part_number'])}: {first['worst_corner']}.")
    remarks: dict[str, list[str]] = {}
    for c in candidates:
        for remark in c["remarks"]:
            remarks.setdefault(remark, []).append(plain(c["part_number"]))
    for remark, parts in remarks.items():
        who = "all shown" if len(parts) == len(candidates) > 2 else ", ".join(parts)
        lines.append(f"Note on {who}: {remark}.")
    return lines


def _supply(c: Document) -> str:
    s = c["supply"]
    mean, peak = _si(s["mean_power"], 3), _si(s["peak_power"], 3)
    drawn, returned = (s[key]["value"] for key in ("energy_per_cycle", "energy_returned"))
    if not drawn and returned:
        said = f"draws nothing: it returns {_si({**s['mean_power'], 'value': -_mean(s)}, 3)}"
        said += f" on average, {_si(s['energy_returned'], 3)} a cycle"
    else:
        said = (
            f"draws {mean}" if _mean(s) >= 0 else f"draws {_si(s['energy_per_cycle'], 3)} a cycle"
        )
        if peak != mean and _mean(s) >= 0:
            said += f" on average and {peak} at most, {_si(s['energy_per_cycle'], 3)} a cycle"
        if returned:
            said += f", and returns {_si(s['energy_returned'], 3)}"
        if _mean(s) < 0:
            over = _si({**s["mean_power"], "value": -_mean(s)}, 3)
            said += f": on balance it returns {over} on average"
    if "bus_capacitance" in s:
        said += (
            f" (a bus that may rise {percent(s['bus_rise'])}: "
            f"{quantity(s['bus_capacitance']['value'], 'F', 3)}, or a brake resistor of at most "
            f"{_si(s['brake_resistor'], 3)} for {_si(s['brake_power'], 3)})"
        )
    if c["inertia_ratio"] is not None and c["inertia_ratio"] > 0:
        said += f"; load to rotor inertia {number(c['inertia_ratio'], 3)}"
    return said


def _mean(supply: Document) -> float:
    return supply["mean_power"]["value"] or 0.0


def print_requirement(document: Document, console: Console) -> None:
    """The requirement as understood: the cycle in rows, then everything else."""
    if document["title"]:
        console.print(Text(plain(document["title"]), style="bold"))
    table = Table(box=None, pad_edge=False, padding=(0, 1), header_style="bold")
    for heading in ("from s", "for s", "speed rpm", "torque N·m", "power W"):
        table.add_column(heading, justify="right")
    stretches = [list(rows) for _, rows in groupby(document["cycle"], lambda r: r["stretch"])]
    for rows in stretches:
        table.add_row(
            number(rows[0]["time"]["value"]),
            number(sum(row["duration"]["value"] for row in rows)),
            _span(rows, "speed", _RPM),
            _span(rows, "torque"),
            _span(rows, "power"),
        )
    console.print("At the load's shaft, its inertia's acceleration included:")
    console.print(table)
    most = max(map(len, stretches))
    if most > 1:
        console.print(
            f"A bent ramp stands in one row and is judged in up to {most} straight pieces; between "
            "its ends stands what is farthest from them."
        )
    load = document["load"]
    console.print(
        f"Peak torque {_si(load['peak_torque'])}, rms {_si(load['rms_torque'])}; peak speed "
        f"{number(load['peak_speed']['value'] * _RPM)} rpm, rms "
        f"{number(load['rms_speed']['value'] * _RPM)} rpm; peak power {_si(load['peak_power'])}; "
        f"period {_si(load['period'])}."
    )
    for name in (
        "load_inertia", "supply", "lowest_supply", "available_voltage", "current_limit",
        "power_limit", "pwm_frequency", "peak_current", "continuous_current", "ambient", "mounting",
        "gear_inertia",
    ):  # fmt: skip
        if document[name]["value"]:
            convention = ""
            if name.endswith("s_current") or name == "peak_current":
                key = "continuous_current_convention" if "cont" in name else "current_convention"
                convention = {"dc": " (armature)"}.get(document[key], f" {document[key]}")
            console.print(f"  {words(name)}: {_si(document[name])}{convention}")
    efficiency = percent(document["gear_efficiency"])
    if "ratio_range" in document:
        low, high = document["ratio_range"]
        console.print(f"  gear ratio: {number(low)} to {number(high)}, efficiency {efficiency}")
    elif document["gears"]:
        console.print("  gears: those of the catalog")
    else:
        ratios = ", ".join(number(r) for r in document["ratios"])
        console.print(f"  gear ratio: {ratios}, efficiency {efficiency}")
    if document["permissible_rise"] < 1:
        console.print(
            f"  altitude {_si(document['altitude'])}: "
            f"{percent(document['permissible_rise'], 1)} of the permissible temperature rise (IEC "
            "60034-1's rule, from memory)"
        )
    for name in ("largest_inertia_ratio", "worst_case"):
        if document[name]:
            console.print(f"  {words(name)}: {document[name]}")
    console.print(
        f"  reserve {percent(document['reserve'])}, ordered by {document['order_by']}, "
        f"at most {document['limit']} shown"
    )
    for limit in document["where"]:
        console.print(Text(f"  where {plain(limit)}"))


def _si(found: Document, digits: int = 4) -> str:
    return quantity(found["value"], found["unit"], digits)


def _span(rows: Sequence[Document], name: str, factor: float = 1.0) -> str:
    """The figure at both ends of a stretch; between them its extreme, where it lies beyond."""
    values = [p["value"] * factor + 0.0 for row in rows for p in row[name]]
    first, last = values[0], values[-1]
    low, high = sorted((first, last))
    near = 1e-9 * max(map(abs, values))
    beyond = max(values, key=lambda v: max(v - high, low - v))
    said = [first] if high - low <= near else [first, last]
    if beyond > high + near or beyond < low - near:
        said = [first, beyond, last]
    return " … ".join(map(number, said))
