"""The quantities that each heading of a table may be, scored, each with its reason."""

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from dataclasses import field as made

import numpy as np

from ....schema.figure.read import NumberStyle
from ....schema.figure.signs import plain
from ....schema.units.read import GD2_TO_INERTIA, Unit, UnitError, read_unit, unit_of
from ....schema.vocabulary import Quantity, quantity
from ..headings.lexicon import canonical, find_symbol, lexicon, squeeze, symbol_form, tokens
from ..headings.phrase import COMPOSED, EXACT, Phrase
from ..model import Field
from .family import family_of
from .samples import in_cell_units, sample_values


@dataclass(slots=True)
class Candidate:
    """One quantity that a heading may be, with its score, its units and the reason as text."""

    key: str
    score: float
    reason: str
    units: list[Unit] = made(default_factory=list)
    unitless: bool = False


_LEAST_KV = 50
"""rpm/V; as V/krpm a motor would turn at 100 rpm on 5 V."""


class Candidates:
    """Finds what every field of one table may be; ``refusals`` says why a field is nothing."""

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
            hits = [hit.keys for s in f.label.symbols if (hit := find_symbol(s))]
            named = any(key in p.keys for p in f.label.names) or (key,) in hits
            if values and named and not f.part:
                for text in f.units:
                    unit = unit_of(text)
                    if unit is not None and unit.si == quantity(key).unit:
                        return float(np.median(values)) * unit.factor
        return None

    def of(self, i: int) -> list[Candidate]:
        """The quantities that field i may be, best first."""
        f = self.fields[i]
        scored: dict[str, tuple[float, str]] = {}

        def offer(key: str, score: float, reason: str) -> None:
            if score > scored.get(key, (0.0, ""))[0]:
                scored[key] = (score, reason)

        if f.part:
            self.refusals[i] = (f'"{f.part}" stands over it: no figure of the motor', ())
            return []
        if f.aside:
            self.refusals[i] = (f.aside, ())
            return []
        if f.label.forced:
            offer(f.label.forced, EXACT, "the heading is the quantity's own name")
        for phrase in f.label.names:
            self._of_phrase(f, phrase, offer)
        if any(p.bracketed and p.section in ("stall", "continuous_stall") for p in f.label.names):
            for what in ("torque", "current"):  # "Continuous torque (stall)"
                if f"nominal_{what}" in scored:
                    scored[f"continuous_stall_{what}"] = scored.pop(f"nominal_{what}")
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
                if key in named or _says_more(key, named, f.label.names):
                    named.pop(_COARSE.get(key, ""), None)
                    scored.pop(_COARSE.get(key, ""), None)
                    named.setdefault(key, (0.95, f'"{f.label.names[0].text}"'))
                    score, reason = named[key]
                    offer(key, score + 0.04, f'{reason}, and so does the symbol "{symbol}"')
                elif not named:
                    weight = _symbol_weight(f.label.names)
                    offer(key, weight * hit.surety, f'symbol "{symbol}"')
        loaded = self._at_load(f)
        if loaded is not None:
            offer(
                loaded,
                0.9,
                f'"{f.label.names[0].text}" beside a figure at no load: the rated point',
            )
        elif f.label.other and (
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

    def _at_load(self, f: Field) -> str | None:
        """The rated figure that "load speed" is where a no-load figure stands beside it and
        itself is not given; elsewhere it may be the load's, and None."""
        at_load = lexicon().at_load
        spelled = [squeeze(canonical(tokens(p.text))) for p in f.label.names[:1]]
        generic = next((at_load[name] for name in spelled if name in at_load), None)
        keys = {k for g in self.fields for p in g.label.names for k in p.keys}
        if generic is None or not keys & {"no_load_speed", "no_load_current"}:
            return None
        key = COMPOSED["rated", generic]
        return None if key in keys else key

    def _of_phrase(
        self, f: Field, phrase: Phrase, offer: Callable[[str, float, str], None]
    ) -> None:
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
        if not given and not inside and self._is_kv(i):
            units.append(read_unit("KV", ("rad/(s·V)",)))
            if q.key != "speed_constant":
                return None
            reason += ", KV without a unit read as rpm/V"
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

    def _is_kv(self, i: int) -> bool:
        """Whether a heading is the bare KV by which hobby motors go: a number of rpm/V, far above
        any back-EMF constant's (common practice, no source)."""
        spelled = {symbol_form(s) for s in self.fields[i].label.symbols}
        values = self.values[i]
        return bool(spelled & {"KV", "Kv", "kv"}) and bool(values) and min(values) >= _LEAST_KV

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


_COARSE = {
    "thermal_time_constant_winding": "thermal_time_constant_housing",
    "thermal_resistance_winding_housing": "thermal_resistance",
    "thermal_resistance_housing_ambient": "thermal_resistance",
    "maximum_power": "rated_power",
}
"""What the bare name means of a figure that a motor has several of."""
_PLACE = re.compile(
    r"housing|case|motor|stator|body|frame|gehäuse|carcas|boîtier|corps|moteur|motore|壳|电机|ケース|ハウジング|モータ",
    re.IGNORECASE,
)


def _says_more(key: str, named: Mapping[str, object], names: tuple[Phrase, ...]) -> bool:
    """Whether a symbol tells which of several a bare name means: "Thermal time constant τ_w1"."""
    bare = {*named} == {_COARSE.get(key, "")} and len(names) > 0
    return bare and not any(_PLACE.search(p.text) for p in names)


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
