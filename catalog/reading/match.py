"""All headings of a table → quantities: one best assignment, with reasons and rivals."""

import re
from dataclasses import dataclass, replace
from dataclasses import field as made

import numpy as np

from ...schema.figure.read import POINT, FigureError, NumberStyle, read_figure
from ...schema.figure.signs import plain
from ...schema.units.read import GD2_TO_INERTIA, Unit, UnitError, read_unit, unit_of
from ...schema.vocabulary import Quantity, quantities, quantity
from ..tables.grid import Stored
from .cells import mark_last
from .lexicon import find_symbol, lexicon, squeeze, symbol_form, tokens
from .model import Field
from .phrase import COMPOSED, EXACT, Phrase, guesses_for

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
class Candidate:
    """One quantity that a heading may be, with its score, its units and the reason as text."""

    key: str
    score: float
    reason: str
    units: list[Unit] = made(default_factory=list)
    unitless: bool = False


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
    factor_repair: float | None = None


def family_of(fields: list[Field]) -> str | None:
    """ "servo" or "dc" by headings that only one of them has, None where they balance.

    A servo sheet speaks of rms amperes, standstill, peak torque and poles; a dc sheet of the
    no-load speed, stall and regulation (common practice, no source).
    """
    servo = dc = 0.0
    for f in fields:
        keys = {k for p in f.label.names if p.score >= 0.9 for k in p.keys}
        generics = {(f.section, p.generic) for p in f.label.names if p.generic}
        symbols = {symbol_form(s) for s in f.label.symbols}
        marks = {m for u in f.units if (unit := unit_of(u)) for m in unit.marks}
        cells = " ".join(f.texts[:3])
        if (
            "rms" in marks
            or f.label.convention.current == "rms"
            or re.search(r"\d\s*A\s?rms", cells)
        ):
            servo += 2
        for key in keys:
            if key in ("continuous_stall_torque", "continuous_stall_current") and len(keys) == 1:
                servo += 2
            elif key in ("peak_torque", "peak_current", "mains_voltage", "rated_temperature_rise"):
                servo += 0.7
            elif key in ("no_load_speed", "no_load_current", "speed_torque_gradient"):
                dc += 2
            elif (key in ("speed_constant", "maximum_efficiency") and len(keys) == 1) or (
                key in ("stall_torque", "stall_current") and len(keys) == 1
            ):
                dc += 1
        if symbols & {
            "Mmax",
            "Imax",
            "M0max",
            "KTrms",
            "I0rms",
            "Md0",
            "Id0",
            "Tcs",
            "Ics",
            "Tpk",
            "Ipk",
        }:
            servo += 1
        if "M0" in symbols or "T0" in symbols:
            servo += 1.5
        if symbols & {"n0", "MH", "IA", "N0", "Δn/ΔM"}:
            dc += 1.5
        if any(s == "no_load" for s, _ in generics):
            dc += 1.5
        if re.search(r"resolver|encoder|feedback|geber|codeur|编码器|エンコーダ", f.heading, re.I):
            servo += 0.7
    if servo > dc:
        return "servo"
    return "dc" if dc > servo else None


def in_cell_units(
    texts: list[str], style: NumberStyle, marks: frozenset[str] = frozenset()
) -> list[str]:
    """Unit texts that stand in the cells themselves, of the first cells with figures."""
    units: list[str] = []
    seen = 0
    for text in texts[:200]:
        if not text:
            continue
        typed = POINT if isinstance(text, Stored) else style
        try:
            figure = read_figure(mark_last(text, marks), typed, note_marks=marks)
        except FigureError:
            continue
        if figure is None:
            continue
        seen += 1
        if figure.unit and figure.unit not in units:
            units.append(figure.unit)
        if seen > 20:
            break
    return units


def sample_values(texts: list[str], style: NumberStyle, most: int = 25) -> list[float]:
    """The numbers of the first cells that have one, for a look at their size."""
    values: list[float] = []
    for text in texts[:200]:
        if not text:
            continue
        try:
            figure = read_figure(text, POINT if isinstance(text, Stored) else style)
        except FigureError:
            continue
        if figure is not None:
            values.append(figure.value)
        if len(values) >= most:
            break
    return values


class Matcher:
    """Finds the candidates of every field of one table, and their best assignment."""

    def __init__(
        self,
        fields: list[Field],
        style: NumberStyle,
        taken: frozenset[str] = frozenset(),
        marks: frozenset[str] = frozenset(),
    ) -> None:
        self.fields = fields
        self.marks = marks
        self.told = taken
        self.style = style
        self.family = family_of(fields)
        self.values = [sample_values(f.texts, style) for f in fields]
        self.refusals: dict[int, tuple[str, tuple[str, ...]]] = {}
        self.nominal_current = self._median_of("nominal_current")

    def sampled(self, f: Field) -> list[float]:
        """The numbers at the head of a field."""
        return sample_values(f.texts, self.style)

    def _median_of(self, key: str) -> float | None:
        for f, values in zip(self.fields, self.values, strict=True):
            if values and any(key in p.keys for p in f.label.names):
                for text in f.units:
                    unit = unit_of(text)
                    if unit is not None and unit.si == quantity(key).unit:
                        return float(np.median(values)) * unit.factor
        return None

    def candidates(self, i: int) -> list[Candidate]:
        """The quantities that field i may be, best first."""
        f = self.fields[i]
        scored: dict[str, tuple[float, str]] = {}

        def offer(key: str, score: float, reason: str) -> None:
            if score > scored.get(key, (0.0, ""))[0]:
                scored[key] = (score, reason)

        if f.label.forced:
            offer(f.label.forced, EXACT, "the heading is the quantity's own name")
        for phrase in f.label.names:
            self._of_phrase(f, phrase, offer)
        if any(k.startswith("thermal_resistance_") for k in scored):
            scored.pop("thermal_resistance", None)  # one language was less exact than another
        named = dict(scored)
        for symbol in f.label.symbols:
            hit = find_symbol(symbol)
            if hit is None:
                continue
            if hit.generic and f.section and not named:
                composed = COMPOSED.get((f.section, hit.generic))
                if composed:
                    offer(composed, 0.9, f'symbol "{symbol}" under "{f.captions[-1]}"')
            for key in hit.keys:
                if key in named:
                    score, reason = named[key]
                    offer(key, score + 0.04, f'{reason}, and so does the symbol "{symbol}"')
                elif not named:
                    weight = _symbol_weight(f.label.names)
                    offer(key, weight * hit.surety, f'symbol "{symbol}"')
        if f.label.other and (
            len(f.label.names) > 1 or not any(s >= EXACT for s, _ in named.values())
        ):
            self.refusals[i] = (f'"{f.label.other}" makes it none of the motor\'s figures', ())
            return []
        found = [
            c
            for key, (score, reason) in scored.items()
            if key not in self.told
            and (c := self._with_unit(i, quantity(key), score, reason)) is not None
        ]
        found.sort(key=lambda c: -c.score)
        return found

    def _of_phrase(self, f: Field, phrase: Phrase, offer) -> None:
        section = phrase.section or f.section
        weight = phrase.score * (0.97 if phrase.bracketed else 1.0)
        if phrase.generic and section:
            composed = COMPOSED.get((section, phrase.generic))
            where = f'under "{f.captions[-1]}"' if not phrase.section and f.captions else ""
            if composed:
                offer(composed, weight, f'"{phrase.text}" {where}'.strip())
            elif (
                not phrase.section
                and phrase.keys
                and section in ("rated", "peak", "continuous_stall")
            ):
                for key in phrase.keys:
                    offer(key, weight, phrase.how)
            return
        for key in phrase.keys:
            offer(key, weight, phrase.how or f'"{phrase.text}"')

    def _with_unit(self, i: int, q: Quantity, score: float, reason: str) -> Candidate | None:
        f = self.fields[i]
        if q.text:
            measured = [u for u in f.units if (x := unit_of(u)) is not None and x.si != "1"]
            if measured:
                return None
            return Candidate(q.key, score, reason)
        values = self.values[i]
        units: list[Unit] = []
        refused = ""
        given = list(f.units)
        inside = in_cell_units(f.texts, self.style, self.marks)
        for text in given:
            try:
                units.append(read_unit(text, q.accepts))
            except UnitError as error:
                refused = refused or f"{error}"
        if given and not units:
            hard = [t for t in given if unit_of(t) is not None or t == given[0]]
            if hard:
                self.refusals.setdefault(i, (refused, (q.key,)))
                return None
        if not given or not units:
            for text in inside:
                try:
                    units.append(read_unit(text, q.accepts))
                    break
                except UnitError as error:
                    refused = refused or f"{error}"
            if inside and not units and "1" not in q.accepts:
                self.refusals.setdefault(i, (refused, (q.key,)))
                return None
        if q.key == "rotor_inertia" and units and _is_flywheel(f):
            units = [replace(u, factor=u.factor * GD2_TO_INERTIA) for u in units]
            reason += ", a flywheel effect GD², four times the inertia"
        unitless = not units
        if unitless and "1" in q.accepts:
            units, unitless = [Unit("", "1", 1.0, 0.0, "1")], False
        if units:
            shown = f", {units[0].si}" if units[0].si != "1" else ""
            reason += f"{shown} fits" if shown else ""
            score += 0.03
        sized = self._sized(q, values, units)
        score += sized
        if sized < 0 and units:
            reason += ", though the values are of an unusual size"
        score += self._by_family(q.key, f, values, units)
        if units and "peak" in units[0].marks and q.key == "rated_power":
            return self._with_unit(i, quantity("maximum_power"), score, reason)
        if units and "ac" in units[0].marks and q.key == "nominal_voltage":
            return self._with_unit(i, quantity("mains_voltage"), score, reason)
        if units and "ac" in units[0].marks:
            score += {"mains_voltage": 0.1, "nominal_voltage": -0.1}.get(q.key, 0.0)
        if units and "dc" in units[0].marks and q.key == "mains_voltage":
            score -= 0.3
        return Candidate(q.key, score, reason, units, unitless)

    def _sized(self, q: Quantity, values: list[float], units: list[Unit]) -> float:
        if not values or not units:
            return 0.0
        si = np.array(values) * units[0].factor + units[0].offset
        lo, hi = q.plausible
        inside = np.mean((si >= (lo / 3 if lo > 0 else lo * 3)) & (si <= hi * 3))
        return 0.03 * float(inside) if inside > 0 else -0.08

    def _by_family(self, key: str, f: Field, values: list[float], units: list[Unit]) -> float:
        servo = {"continuous_stall_torque", "continuous_stall_current"}
        dc = {"stall_torque", "stall_current", "no_load_current"}
        if key not in servo | dc:
            return 0.0
        if (
            key in ("no_load_current", "continuous_stall_current")
            and self.nominal_current
            and values
            and units
        ):
            ratio = float(np.median(values)) * units[0].factor / self.nominal_current
            if any(
                find_symbol(s) and symbol_form(s).upper() in ("I0", "IO") for s in f.label.symbols
            ):
                if ratio < 0.5:
                    return 0.05 if key == "no_load_current" else -0.15
                return 0.05 if key == "continuous_stall_current" else -0.15
        if self.family == "servo":
            return 0.02 if key in servo else -0.1
        return -0.1 if key in servo else 0.02

    def assign(self) -> list[Match]:
        """Every field's match; those with one name and dimension share their quantity."""
        options = [self.candidates(i) for i in range(len(self.fields))]
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
            for i in group:
                own = next((c for c in options[i] if c.key == candidate.key), None)
                if own is not None:
                    matches[i] = self._settle(i, own, options[i], taken)
        for i, match in enumerate(matches):
            if match is None:
                matches[i] = self._left_over(i, options[i], taken)
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
            for c in options[group[0]]:
                if c.score >= max(THRESHOLD, top - 0.2):
                    gain[g, column[c.key]] = c.score + 0.3 - 1e-4 * g
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
            return Match(f, "unread", None, c.score, [], f"no unit is given for {c.key}", (c.key,))
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
        for phrase in f.label.names:
            section = phrase.section or f.section
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
        if f.label.other:
            return ()
        for text in f.units:
            unit = unit_of(text)
            if unit is not None and unit.si != "1":
                return tuple(k for k, q in quantities().items() if unit.si in q.accepts)[:4]
        return ()


def _is_flywheel(f: Field) -> bool:
    """Whether the heading gives GD² instead of the inertia."""
    texts = [f.label.text, *f.label.symbols, *(p.text for p in f.label.names)]
    return any(re.search(r"GD\s*\^?2|flywheel|schwungmoment", plain(t), re.I) for t in texts)


def _symbol_weight(names: tuple[Phrase, ...]) -> float:
    """How far a symbol is trusted beside words that say nothing we know, or something else."""
    rest = {t for p in names for t in p.rest if len(t) > 2}
    if not rest:
        return 0.88
    return 0.5 if rest & lexicon().known else 0.72


def when_of(f: Field) -> str:
    """The condition of a field as one text ('' if it has none)."""
    parts = [*f.when, *f.label.conditions]
    temperature = f.label.temperature if f.label.temperature is not None else f.temperature
    if temperature is not None and not any(re.search(rf"\b{temperature:g}\b", p) for p in parts):
        parts.append(f"{temperature:g} °C")
    variant = (
        f.label.variant or next((p.variant for p in f.label.names if p.variant), None) or f.variant
    )
    if variant and not parts:
        parts.append(variant.replace("_", " "))
    return "; ".join(dict.fromkeys(parts))


def best_assignment(gain: np.ndarray) -> list[int | None]:
    """The assignment of rows to columns with the greatest total gain; a row may go without.

    The Hungarian method in its shortest-augmenting-path form, O(n²·m); `gain` has shape (n, m),
    is not negative, and 0 means "must not".
    """
    n, m = gain.shape
    # A column of nothing for each row, so that leaving it out is always possible.
    cost = np.hstack([np.where(gain > 0, -gain, 1e6), np.zeros((n, n))])
    total = m + n
    u, v = np.zeros(n + 1), np.zeros(total + 1)
    match = np.zeros(total + 1, dtype=int)
    for i in range(1, n + 1):
        match[0] = i
        j0 = 0
        least = np.full(total + 1, np.inf)
        way = np.zeros(total + 1, dtype=int)
        used = np.zeros(total + 1, dtype=bool)
        while True:
            used[j0] = True
            i0 = match[j0]
            free = ~used
            free[0] = False
            reduced = np.full(total + 1, np.inf)
            reduced[1:] = cost[i0 - 1] - u[i0] - v[1:]
            better = free & (reduced < least)
            least[better] = reduced[better]
            way[better] = j0
            j1 = int(np.argmin(np.where(free, least, np.inf)))
            delta = least[j1]
            u[match[used]] += delta
            v[used] -= delta
            least[free] -= delta
            j0 = j1
            if match[j0] == 0:
                break
        while j0:
            j1 = int(way[j0])
            match[j0] = match[j1]
            j0 = j1
    out: list[int | None] = [None] * n
    for j in range(1, m + 1):
        if match[j]:
            out[match[j] - 1] = j - 1
    return out
