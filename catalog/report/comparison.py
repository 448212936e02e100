"""Motors side by side: what differs, by how much, and which value is the better one."""

from collections.abc import Iterator, Sequence

from rich import box
from rich.console import Console
from rich.table import Table
from rich.text import Text

from ..documents import Document
from . import plain as p
from .card import SIGNS, STYLES
from .safety import SAFETY

MORE_IS_BETTER = frozenset({
    "motor_constant", "nominal_torque", "continuous_stall_torque", "stall_torque", "peak_torque",
    "rated_power", "maximum_power", "maximum_efficiency", "rated_efficiency", "maximum_speed",
    "maximum_winding_temperature", "axial_load", "radial_load",
})  # fmt: skip
LESS_IS_BETTER = frozenset({
    "rotor_inertia", "friction_torque", "cogging_torque", "viscous_damping",
    "mechanical_time_constant", "speed_torque_gradient", "thermal_resistance",
    "thermal_resistance_winding_housing", "thermal_resistance_housing_ambient", "mass", "diameter",
    "length", "price",
})  # fmt: skip
"""Where one direction serves any machine (common practice, no source). What depends on the supply
or the load, such as a torque constant or a resistance, has no better value."""

BETTER = "◆"
NAME_WIDTH, MOTOR_WIDTH = 34, 15


def print_comparison(motors: Sequence[Document], out: Console) -> None:
    """Constants, then figures as published; as many motors beside the first as the width holds."""
    first, others = motors[0], motors[1:]
    room = max(1, (out.width - NAME_WIDTH) // MOTOR_WIDTH - 1)
    for start in range(0, len(others), room):
        out.print(_block([first, *others[start : start + room]], motors))
    out.print(
        Text(
            f"{BETTER} better than all others that give it, beyond their intervals; per cent: "
            f"against {p.plain(first['part_number'])}; = no more apart than the intervals; "
            f"≁ another convention; {SIGNS['error']} doubted by a finding."
        )
    )
    out.print(Text(SAFETY, style="dim"))


def _block(shown: Sequence[Document], motors: Sequence[Document]) -> Table:
    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False, padding=(0, 1))
    table.add_column("", overflow="fold")
    for motor in shown:
        table.add_column(Text(p.plain(motor["part_number"])), overflow="fold")
    table.add_row("maker", *(Text(p.plain(m["maker"] or "–")) for m in shown))
    table.add_row(
        "commutation", *(Text(p.plain(m["model"]["commutation"]["value"])) for m in shown)
    )
    table.add_row("findings", *(Text(_counted(m["findings"])) for m in shown))
    constants = {key for m in motors for key in m["constants"]}
    for part in ("constants", "figures"):
        table.add_section()
        for key in dict.fromkeys(key for m in motors for key in m[part]):
            if any(key in m[part] for m in shown):
                again = " (printed)" if part == "figures" and key in constants else ""
                table.add_row(*_row(key, part, again, shown, motors))
    return table


def _row(
    key: str, part: str, again: str, shown: Sequence[Document], motors: Sequence[Document]
) -> Iterator[Text]:
    amounts = [_amount(m, part, key) for m in motors]
    best = _best(key, amounts)
    reference = amounts[0]
    smallest = min((abs(a["value"]) for a in amounts if a and a["value"]), default=None)
    units = {a["unit"] for a in amounts if a}
    factor, unit = 1.0, ""
    if len(units) == 1:
        factor, unit = p.scale(smallest, units.pop())
    name = Text(p.words(key) + again)
    name.append(f"  {unit}" if unit not in ("", "1") else "", style="dim")
    yield name
    for motor in shown:
        found, amount = motor[part].get(key), _amount(motor, part, key)
        if found is None or amount is None:
            yield Text("–" if found is None else p.plain(str(found["value"])))
            continue
        text = Text(
            p.number(amount["value"] / factor)
            if unit
            else p.quantity(amount["value"], amount["unit"])
        )
        if amount["doubted"]:
            text.append(f" {SIGNS['error']}", style=STYLES["error"])
        if motor is not motors[0] and reference is not None:
            text.append(f" {_difference(amount, reference)}", style="dim")
        if best is not None and motors[best] is motor:
            text.append(f" {BETTER}", style="bold green")
        yield text


def _amount(motor: Document, part: str, key: str) -> Document | None:
    """The figure (a correction in its place) if it is a number, its convention, and whether a
    finding doubts it."""
    found = motor[part].get(key)
    if found is None or not isinstance(found["value"], int | float):
        return None
    doubted = part == "figures" and any(
        key in ([f["suspect"]] if f["suspect"] else f["figures"])
        for f in motor["findings"]
        if f["severity"] != "note"
    )
    convention = found.get("convention") or {}
    alike = (
        convention.get("current"),
        convention.get("voltage"),
        convention.get("between") == "phase" and (convention.get("connection") or "star"),
    )
    doubted = doubted and "corrected" not in found
    return {**found.get("corrected", found), "alike": alike, "doubted": doubted}


def _ends(amount: Document) -> tuple[float, float]:
    """Its interval, or the value where there is none."""
    low, high, value = amount.get("low"), amount.get("high"), amount["value"]
    return (value if low is None else low), (value if high is None else high)


def _difference(amount: Document, reference: Document) -> str:
    if amount["unit"] != reference["unit"]:
        return ""
    if amount["alike"] != reference["alike"]:
        return "≁"
    (low, high), (least, most) = _ends(amount), _ends(reference)
    if low <= most and least <= high:
        return "="
    if reference["value"] == 0 or amount["value"] / reference["value"] <= 0:
        return ""
    ratio = amount["value"] / reference["value"]
    return f"×{p.number(ratio, 3)}" if ratio >= 10 else p.percent(ratio - 1, signed=True)


def _best(key: str, amounts: Sequence[Document | None]) -> int | None:
    """Which one is better than every other by more than their intervals; None for none."""
    known = [(i, a) for i, a in enumerate(amounts) if a is not None and not a["doubted"]]
    if len(known) < 2 or len({(a["unit"], a["alike"]) for _, a in known}) > 1:
        return None
    if key in MORE_IS_BETTER:
        best, amount = max(known, key=lambda pair: pair[1]["value"])
        return best if all(_ends(a)[1] < _ends(amount)[0] for i, a in known if i != best) else None
    if key in LESS_IS_BETTER:
        best, amount = min(known, key=lambda pair: pair[1]["value"])
        return best if all(_ends(a)[0] > _ends(amount)[1] for i, a in known if i != best) else None
    return None


def _counted(findings: Sequence[Document]) -> str:
    counts = [
        f"{n} {severity}{'s' * (n != 1)}"
        for severity in ("error", "warning", "note")
        if (n := sum(f["severity"] == severity for f in findings))
    ]
    return ", ".join(counts) or "none"
