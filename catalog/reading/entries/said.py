"""Under which conventions a heading, and single cells below it, state their figures."""

import re

from ....schema.batch import FigureColumn
from ....schema.convention import Commutation, Convention, default_convention
from ....schema.units.read import Unit
from ....schema.vocabulary import Quantity, quantity
from ..headings.lexicon import symbol_form
from ..headings.phrase import conventions_of
from ..matching.match import Match
from .figures import Values
from .kind import Notes, note_conventions, note_temperature


def convention_of(m: Match, commutation: Commutation, notes: Notes) -> Convention | None:
    """What a heading's figures are published under: stated by notes, words, symbols and units, in
    rising order of weight, else the default of the motor's kind."""
    if m.key is None or m.role not in ("figure", "repeat", "condition"):
        return None
    q = quantity(m.key)
    if not q.carries:
        return None
    base = default_convention(m.key, q.carries, commutation)
    said: dict[str, str | float] = {}
    for subject, stated in notes.conventions:
        if subject is None or subject in _subjects_of(m.key):
            said.update(stated)
    for mark in m.field.label.marks:
        if mark in notes.marked:
            said.update(note_conventions(notes.marked[mark]))
    noted = dict(said)
    phrases = dict(
        pair for p in m.field.label.names if p.keys or p.generic for pair in p.conventions
    )
    said.update(phrases)
    label = m.field.label.convention
    for kind in ("current", "voltage", "between", "connection", "shape"):
        value = getattr(label, kind)
        if value is not None:
            said[kind] = value
    for symbol in m.field.label.symbols:
        said.update(_symbol_conventions(symbol, m.key))
    for unit in m.units[:1]:
        said.update(mark_conventions(unit, m.key))
    for word in m.forced_convention:
        said.update(conventions_of(word, whole=False))
    peak = m.key.startswith("peak_") or m.key.startswith("maximum_")
    in_unit = m.units and m.units[0].marks & {"rms", "peak", "dc"}
    explicit = label.current or in_unit or noted.get("current") == "peak"
    if peak and said.get("current") == "peak" and not explicit and not m.forced_convention:
        said.pop("current")
    kept = {
        k: v for k, v in said.items() if k in q.carries or (k == "shape" and "voltage" in q.carries)
    }
    if (
        m.key == "nominal_voltage"
        and kept.get("voltage") in ("rms", "peak")
        and not (m.units and m.units[0].marks & {"rms", "peak"})
    ):
        kept.pop("voltage")
    basis = "inferred" if m.field.label.inferred else "stated"
    if "voltage" in q.carries and set(kept) == {"connection"}:
        basis = base.basis  # star or delta alone says nothing of how a back-EMF is measured
    convention = base.with_(**kept, basis=basis) if kept else base
    if "temperature" in q.carries:
        t = temperature_of(m)
        for mark in m.field.label.marks:
            if t is None and mark in notes.marked:
                t = note_temperature(notes.marked[mark])
        if t is None and m.role != "condition":
            t = notes.temperature
        if t is not None:
            convention = convention.with_(temperature=t)
    return convention


def cell_conventions(
    figure: FigureColumn, values: Values, q: Quantity, base: Convention, notes: Notes
) -> None:
    """Conventions that single cells state: by their own unit, a footnote mark, a temperature."""
    said: dict[int, dict[str, str | float]] = {
        i: {"temperature": t} for i, t in values.temperatures.items()
    }
    if not q.carries:
        return
    for i, unit in values.cell_units.items():
        marks = mark_conventions(unit, q.key)
        if marks:
            said.setdefault(i, {}).update(marks)
    for i, marks in values.marks.items():
        for mark in marks:
            note = notes.marked.get(re.sub(r"[()^\s]", "", mark))
            if note:
                said.setdefault(i, {}).update(note_conventions(note))
    for i, changes in said.items():
        kept = {k: v for k, v in changes.items() if k in q.carries}
        if not kept:
            continue
        convention = base.with_(**kept, basis="stated")
        if convention not in figure.conventions:
            figure.conventions.append(convention)
        figure.convention[i] = figure.conventions.index(convention)


def _subjects_of(key: str) -> tuple[str, ...]:
    """What a note may call a quantity."""
    if key in ("back_emf_constant", "speed_constant") or key.endswith("voltage"):
        return ("voltage",)
    if key in ("terminal_resistance", "terminal_inductance"):
        return ("winding",)
    return ("current",)


def temperature_of(m: Match) -> float | None:
    """The temperature in °C that a heading, its symbol or its caption states."""
    label = m.field.label
    if label.temperature is not None:
        return label.temperature
    for symbol in label.symbols:
        found = re.fullmatch(r"[Rr](20|25|40|100|120)", symbol_form(symbol))
        if found:
            return float(found[1])
    return m.field.temperature


def mark_conventions(unit: Unit, key: str) -> dict[str, str]:
    """The conventions that stand in a unit: A rms, V pk, V (L-L)."""
    said: dict[str, str] = {}
    for mark in unit.marks:
        if mark in ("rms", "peak", "dc"):
            said["voltage" if "V" in unit.text or "emf" in key else "current"] = mark
            if key == "torque_constant":
                said["current"] = mark
        elif mark in ("lines", "phase"):
            said["between"] = mark
    return said


def _symbol_conventions(symbol: str, key: str) -> dict[str, str]:
    form = symbol_form(symbol)
    said: dict[str, str] = {}
    if key in ("terminal_resistance", "terminal_inductance"):
        if re.fullmatch(r"[RL](?:ph|PH|Ph|s)\d*", form):
            said["between"] = "phase"
        elif re.fullmatch(r"[RL](?:LL|ll|pp|PP|tt|TT|12|uv|UV|u-v|U-V|mt|2ph)\d*", form):
            said["between"] = "lines"
    if re.search(r"(?i)rms$|eff$", form) and key != "mains_voltage":
        said["current"] = said["voltage"] = "rms"
    return said
