"""All headings of a table → quantities: one best assignment, with reasons and rivals."""

import re
from dataclasses import dataclass
from dataclasses import field as made

import numpy as np

from ....schema.units.read import Unit, UnitError, read_unit, unit_of
from ....schema.vocabulary import quantities, quantity
from ..headings.lexicon import find_symbol, squeeze, symbol_form, tokens
from ..headings.phrase import guesses_for
from ..model import Field
from .assignment import best_assignment
from .candidates import Candidate, Candidates
from .samples import in_cell_units, why_unreadable

THRESHOLD = 0.6
CLOSE = 0.03

GENERIC_UNITS = {
    "speed": "rad/s", "torque": "N·m", "current": "A", "power": "W",
    "efficiency": "1", "voltage": "V", "input_power": "W",
}  # fmt: skip
GENERIC_GUESSES = {
    "speed": ("nominal_speed", "no_load_speed", "maximum_speed"),
    "torque": ("nominal_torque", "stall_torque", "peak_torque"),
    "current": ("nominal_current", "no_load_current", "stall_current"),
    "efficiency": ("maximum_efficiency", "rated_efficiency"),
    "power": ("rated_power", "maximum_power"),
    "voltage": ("nominal_voltage",),
}


@dataclass(slots=True)
class Match:
    """What became of one field.

    role: "figure", "repeat" (the same figure again), "condition" (again, under a condition),
    "point" (only an operating point's), "text", "unread".
    """

    field: Field
    role: str
    key: str | None = None
    score: float = 0.0
    units: list[Unit] = made(default_factory=list)
    reason: str = ""
    guesses: tuple[str, ...] = ()
    when: str = ""
    point: tuple[str, str] | None = None
    forced_convention: tuple[str, ...] = ()


class Matcher(Candidates):
    """Chooses one quantity for every field, so that all of them together fit best."""

    def assign(self) -> list[Match]:
        """Every field's match; those with one name and dimension share their quantity."""
        options = [self.of(i) for i in range(len(self.fields))]
        clusters: dict[tuple, list[int]] = {}
        for i, cands in enumerate(options):
            f = self.fields[i]
            if cands and cands[0].score >= THRESHOLD:
                unit = cands[0].units[0].dimension if cands[0].units else ""
                name = "|".join(
                    sorted({squeeze(tokens(p.text)) for p in f.label.names if p.keys or p.generic})
                )
                name = name or "|".join(symbol_form(s) for s in f.label.symbols) or f"#{i}"
                clusters.setdefault((name, f.section, unit), []).append(i)
        groups = list(clusters.values())
        chosen = self._solve(groups, options)
        matches: list[Match | None] = [None] * len(self.fields)
        taken: dict[str, int] = {}
        for group, candidate in zip(groups, chosen, strict=True):
            if candidate is None:
                continue
            # "With brake" may stand before the motor's own figure: it is the other's condition.
            for i in sorted(group, key=lambda i: _variant_of(self.fields[i]) == "with_brake"):
                own = next((c for c in options[i] if c.key == candidate.key), None)
                if own is not None:
                    matches[i] = self._settle(i, own, options[i], taken)
        for i, match in enumerate(matches):
            if match is None:
                matches[i] = self._left_over(i, options[i], taken)
        conditioned = {m.key for m in matches if m is not None and m.role == "condition"}
        for m in matches:
            if m is not None and m.role == "figure" and m.key in conditioned and when_of(m.field):
                m.reason += f'; under the condition "{when_of(m.field)}"'
        return [m for m in matches if m is not None]

    def _solve(
        self, groups: list[list[int]], options: list[list[Candidate]]
    ) -> list[Candidate | None]:
        keys = list(quantities())
        column = {k: j for j, k in enumerate(keys)}
        if not groups:
            return []
        gain = np.zeros((len(groups), len(keys)))
        for g, group in enumerate(groups):
            top = options[group[0]][0].score
            late = 0.01 if _variant_of(self.fields[group[0]]) == "with_brake" else 0.0
            for c in options[group[0]]:
                if c.score >= max(THRESHOLD, top - 0.2):
                    gain[g, column[c.key]] = c.score + 0.3 - late - 1e-4 * g
        assigned = best_assignment(gain)
        out: list[Candidate | None] = []
        for g, j in enumerate(assigned):
            if j is None or gain[g, j] <= 0:
                out.append(None)
                continue
            out.append(next(c for c in options[groups[g][0]] if c.key == keys[j]))
        return out

    def _settle(
        self, i: int, c: Candidate, rivals: list[Candidate], taken: dict[str, int]
    ) -> Match:
        f = self.fields[i]
        close = [
            r
            for r in rivals
            if r.key != c.key and r.score > c.score - CLOSE and r.score >= THRESHOLD
        ]
        reason = c.reason
        if close:
            others = ", ".join(r.key for r in close)
            if not self._decided(c, close, taken):
                return Match(
                    f, "unread", None, c.score, [], f"may be {c.key} or {others}",
                    (c.key, *(r.key for r in close)),
                )  # fmt: skip
            reason += f"; next best {others}"
        q = quantity(c.key)
        if q.text:
            if c.key in taken:
                return Match(
                    f,
                    "unread",
                    None,
                    c.score,
                    [],
                    f"{c.key} is already read from another column",
                    (c.key,),
                )
            taken[c.key] = i
            return Match(f, "text", c.key, min(c.score, 1.0), [], reason)
        if c.unitless:
            why = why_unreadable(f.texts, self.style) or f"no unit is given for {c.key}"
            if f.label.conditions and why.startswith("no unit"):
                why += f', for "{f.label.conditions[-1]}" is none that is known'
            return Match(f, "unread", None, c.score, [], why, (c.key,))
        if c.key in taken:
            return self._again(i, c, taken)
        taken[c.key] = i
        return Match(f, "figure", c.key, min(c.score, 1.0), c.units, reason)

    def _decided(self, c: Candidate, close: list[Candidate], taken: dict[str, int]) -> bool:
        """Whether a close call is settled: the rivals' quantities are given elsewhere."""
        if c.key == "part_number":
            return True
        return all(r.key in taken for r in close)

    def _again(self, i: int, c: Candidate, taken: dict[str, int]) -> Match:
        f, first = self.fields[i], self.fields[taken[c.key]]
        when = when_of(f)
        if when != when_of(first) and (when or when_of(first)):
            text = when or "otherwise"
            return Match(
                f,
                "condition",
                c.key,
                min(c.score, 1.0),
                c.units,
                f'{c.reason}; under the condition "{text}"',
                when=text,
            )
        return Match(
            f,
            "repeat",
            c.key,
            min(c.score, 1.0),
            c.units,
            f"{c.reason}; given again, checks the first",
        )

    def _left_over(self, i: int, cands: list[Candidate], taken: dict[str, int]) -> Match:
        f = self.fields[i]
        if cands and cands[0].score >= 0.85 and cands[0].key in taken and not cands[0].unitless:
            c = cands[0]
            close = [r for r in cands[1:] if r.score > c.score - CLOSE]
            if not close and not quantity(c.key).text:
                return self._again(i, c, taken)
        point = self._point(f)
        if point is not None:
            section, generic = point
            unit = self._generic_unit(f, generic)
            if unit is not None:
                return Match(
                    f, "point", None, 0.95, [unit], f"{generic} at the point {section}", point=point
                )
        reason, guesses = self._why(i, cands, taken)
        return Match(f, "unread", None, cands[0].score if cands else 0.0, [], reason, guesses)

    def _point(self, f: Field) -> tuple[str, str] | None:
        if f.part or f.aside:
            return None
        for phrase in f.label.names:
            section = phrase.section or f.section
            if phrase.generic == "voltage" and phrase.section == "stall":
                return None  # the voltage at which it starts is none of a point at stall
            if phrase.generic and section:
                return section, phrase.generic
        for symbol in f.label.symbols:
            hit = find_symbol(symbol)
            if hit and hit.generic and f.section:
                return f.section, hit.generic
        return None

    def _generic_unit(self, f: Field, generic: str) -> Unit | None:
        si = (GENERIC_UNITS[generic],)
        for text in (*f.units, *in_cell_units(f.texts, self.style, self.marks)):
            try:
                return read_unit(text, si)
            except UnitError:
                continue
        return Unit("", "1", 1.0, 0.0, "1") if generic == "efficiency" and not f.units else None

    def _why(
        self, i: int, cands: list[Candidate], taken: dict[str, int]
    ) -> tuple[str, tuple[str, ...]]:
        f = self.fields[i]
        if cands:
            keys = tuple(c.key for c in cands[:3])
            if cands[0].key in taken:
                return f"{cands[0].key} is already read from another heading", keys
            return "too unsure", keys
        if i in self.refusals:
            reason, guesses = self.refusals[i]
            return reason, guesses or self._by_unit(f)
        generics = [p.generic for p in f.label.names if p.generic]
        if generics:
            return (
                f"nothing says which {generics[0]} it is",
                GENERIC_GUESSES.get(generics[0], ()),
            )
        guesses = tuple(g for p in f.label.names if p.rest for g in guesses_for(p.text))[:3]
        return "not understood", guesses or self._by_unit(f)

    def _by_unit(self, f: Field) -> tuple[str, ...]:
        if f.label.other or f.part or f.aside:
            return ()
        for text in f.units:
            unit = unit_of(text)
            if unit is not None and unit.si != "1":
                return tuple(k for k, q in quantities().items() if unit.si in q.accepts)[:4]
        return ()


def when_of(f: Field) -> str:
    """The condition of a field as one text ('' if it has none)."""
    parts = [*f.when, *f.label.conditions]
    temperature = f.label.temperature if f.label.temperature is not None else f.temperature
    if temperature is not None and not any(re.search(rf"\b{temperature:g}\b", p) for p in parts):
        parts.append(f"{temperature:g} °C")
    variant = _variant_of(f)
    if variant and not parts:
        parts.append(variant.replace("_", " "))
    return "; ".join(dict.fromkeys(parts))


def _variant_of(f: Field) -> str | None:
    return (
        f.label.variant or next((p.variant for p in f.label.names if p.variant), None) or f.variant
    )
