"""Count what was found of what was planted, per cause and per figure, beside a plain check."""

import math
from collections import Counter, defaultdict
from collections.abc import Iterable
from copy import deepcopy
from dataclasses import dataclass, field

import numpy as np

from motorfolio.schema.motor import Finding
from motorfolio.schema.reconcile.run import reconcile

from .mistakes import Planted, plant, plant_column
from .reference import judge
from .sheets import Sheet, fill, published, sheet
from .trial import batch_of

# Ratios a cause may show, to count "another cause that fits the ratio as well" as right.
RATIOS: dict[str, list[float]] = {
    "rpm-vs-rad-per-second": [30 / math.pi],
    "rev-per-second": [60, 2 * math.pi],
    "ounce-inch-vs-millinewton-metre": [7.06155],
    "pound-inch-vs-newton-metre": [0.1129848],
    "kilogram-force-vs-newton": [9.80665],
    "peak-vs-rms": [math.sqrt(2)],
    "line-vs-phase": [math.sqrt(3), 2, 1.5],
    "sinusoidal-current-convention": [
        math.sqrt(1.5), math.sqrt(3) / 2, math.sqrt(3), 3 / math.pi, 1.5, 1.350, 1.170, 1.654,
        2.121,
    ],
    "inertia-convention": [386.0886, 4],
    "horsepower-vs-watt": [745.7, 735.5],
    "poles-vs-pole-pairs": [2],
    "peak-to-peak": [2],
}  # fmt: skip
PREFIXED = {
    "rpm-vs-rad-per-second", "ounce-inch-vs-millinewton-metre", "pound-inch-vs-newton-metre",
    "kilogram-force-vs-newton",
}  # fmt: skip
ANY_RATIO = {"unexplained", "digits-transposed", "neighbouring-column", "gear-output-side",
             "continuous-stall", "input-vs-output-power", "friction-ignored"}  # fmt: skip


def fits(cause: str, factor: float, tolerance: float = 0.04) -> bool:
    """Whether a named cause explains the factor as well as the one that was planted."""
    if cause == "hot-vs-cold":
        return 1.18 <= factor <= 1.55 or 0.78 <= factor <= 0.98
    powers = [10.0**k for k in range(-6, 7)]
    if cause == "power-of-ten":
        return any(k != 1 and abs(math.log(factor / k)) < tolerance for k in powers)
    for ratio in RATIOS.get(cause, []):
        for r in (ratio, 1 / ratio):
            scale = powers if cause in PREFIXED else [1.0]
            if any(abs(math.log(factor / (r * k))) < tolerance for k in scale):
                return True
    return False


@dataclass
class Tally:
    """Counts over all sheets of a run."""

    n: Counter = field(default_factory=Counter)
    causes: dict[str, Counter] = field(default_factory=lambda: defaultdict(Counter))
    figures: dict[str, Counter] = field(default_factory=lambda: defaultdict(Counter))
    examples: list[str] = field(default_factory=list)

    def rate(self, part: str, whole: str) -> float:
        """part/whole; NaN where nothing was planted."""
        return self.n[part] / self.n[whole] if self.n[whole] else math.nan

    def rates(self) -> dict[str, float]:
        """The gated rates by name."""
        return {
            "detection": self.rate("found", "detectable"),
            "false alarms": self.rate("alarmed", "clean"),
            "suspect": self.rate("suspect", "identifiable"),
            "cause": self.rate("cause", "explained"),
            "cause in first three": self.rate("cause3", "explained"),
            "implied": self.rate("implied", "implied asked"),
            "wrong suspect where nothing tells": self.rate("misnamed", "ambiguous"),
            "plain check detection": self.rate("plain", "detectable"),
            "plain check false alarms": self.rate("plain alarmed", "clean"),
            "column detection": self.rate("column found", "columns"),
            "column suspect and cause": self.rate("column right", "column found"),
            "column once": self.rate("column once", "column found"),
            "both of two detected": self.rate("pair found", "pairs"),
            "both of two suspected": self.rate("pair suspects", "pairs"),
        }

    def report(self) -> str:
        """The table for people."""
        lines = [f"{k:36} {v:7.4f}" for k, v in self.rates().items()]
        lines.append(f"{dict(self.n)}")
        for title, table in (("cause", self.causes), ("figure", self.figures)):
            lines.append(f"\n{title:36} planted detectable found suspect cause")
            lines += [
                f"{k:36} {c['planted']:7} {c['detectable']:10} {c['found']:5} "
                f"{c['suspect']:3}/{c['identifiable']:3} {c['cause']:3}/{c['explained']:3}"
                for k, c in sorted(table.items())
            ]
        return "\n".join(lines + self.examples[:60])


def _alarms(findings: list[Finding], part: str) -> list[Finding]:
    return [
        f for f in findings
        if f.severity != "note" and (f.part_number == part or part in f.part_numbers)
    ]  # fmt: skip


def plain_check(s: Sheet, i: int) -> bool:
    """The baseline: Kt·Kn = 1 and I_s = U/R within 10 % (common practice, no source)."""
    has = set(s.keys)
    wrong = False
    if {"torque_constant", "speed_constant"} <= has and s.kind != "sinusoidal":
        wrong |= abs(math.log(s.si("torque_constant", i) * s.si("speed_constant", i))) > 0.1
    if {"stall_current", "terminal_resistance", "nominal_voltage"} <= has:
        implied = s.si("nominal_voltage", i) / s.si("terminal_resistance", i)
        wrong |= abs(math.log(s.si("stall_current", i) / implied)) > 0.1
    return wrong


def _score_one(t: Tally, s: Sheet, p: Planted, findings: list[Finding]) -> None:
    verdict = judge(s, p)
    rows = [t.causes[p.cause], t.figures["+".join(p.keys)], t.n]

    def count(what: str) -> None:
        for r in rows:
            r[what] += 1

    count("planted")
    alarms = _alarms(findings, s.part_numbers[p.motor])
    if not verdict.detectable:
        return
    count("detectable")
    t.n["plain"] += plain_check(s, p.motor)
    label = f"{s.kind} {p.cause} {p.keys} x{p.factor:.3g} keys={len(s.keys)} fam={s.family}"
    if not alarms:
        t.examples.append(f"MISSED {label}")
        return
    count("found")
    named = [f for f in alarms if f.suspect]
    right = [f for f in named if f.suspect in p.keys]
    if verdict.identifiable:
        count("identifiable")
        if right:
            count("suspect")
        else:
            t.examples.append(f"SUSPECT {label} said {[(f.suspect, f.cause) for f in alarms]}")
    else:
        t.n["ambiguous"] += 1
        t.n["misnamed"] += any(f.suspect not in p.keys for f in named)
    if not right:
        return
    count("explained")
    f = right[0]
    ok = {p.cause, *p.also}
    good = lambda c: c in ok or (not math.isnan(p.factor) and fits(c, p.factor))  # noqa: E731
    if good(f.cause):
        count("cause")
    else:
        t.examples.append(f"CAUSE {label} said {f.cause} {f.other_causes} ratio {f.ratio}")
    t.n["cause3"] += any(good(c) for c in (f.cause, *f.other_causes[:2]))
    if f.implied is not None and f.implied.value and len(p.keys) == 1:
        truth = published(s.motors[p.motor], s)[f.suspect or ""]
        t.n["implied asked"] += 1
        allowance = 2 * s.scattered * 0.035 if s.scattered else 0.0
        t.n["implied"] += abs(math.log(f.implied.value / truth)) < max(0.03, allowance)


def run(seeds: Iterable[int], motors: int = 200) -> Tally:
    """One fault in a share of the motors; then whole columns; then two faults at once."""
    t = Tally()
    for seed in seeds:
        rng = np.random.default_rng(seed)
        done = 0
        while done < motors:
            s = sheet(rng, tag=f"X{seed}-{done}")
            done += len(s.motors)
            planted = None
            if rng.random() < 0.85:
                planted = plant(s, int(rng.integers(len(s.motors))), rng)
            findings = reconcile(batch_of(s)).findings
            for i, part in enumerate(s.part_numbers):
                if planted is not None and i == planted.motor:
                    continue
                t.n["clean"] += 1
                alarms = _alarms(findings, part)
                t.n["alarmed"] += bool(alarms)
                t.n["plain alarmed"] += plain_check(s, i)
                if alarms:
                    t.examples.append(
                        f"FALSE {s.kind} scattered={s.scattered} fam={s.family} "
                        f"{[(f.suspect, f.figures, f.cause, f.ratio) for f in alarms]}"
                    )
            if planted is not None:
                _score_one(t, s, planted, findings)
        for _ in range(motors // 10):
            _column(t, rng)
            _pair(t, rng)
    return t


def coverage(seed: int, sheets: int) -> dict[str, float]:
    """Share of clean motors whose true constant lies inside the 95 % interval, by constant.

    The scatter is the customary one, not cut.
    """
    rng = np.random.default_rng(seed)
    inside: Counter = Counter()
    asked: Counter = Counter()
    names = {"torque_constant": "Km", "armature_resistance": "Ra", "rotor_inertia": "J"}
    for _ in range(sheets):
        s = sheet(rng)
        s.scattered = True
        fill(s, rng, cut=math.inf)
        constants = reconcile(batch_of(s)).constants
        for key, name in names.items():
            if key not in constants:
                continue
            for i, m in enumerate(s.motors):
                low, high = constants[key].low[i], constants[key].high[i]
                if math.isfinite(low):
                    asked[key] += 1
                    inside[key] += low <= getattr(m, name) <= high
    return {key: inside[key] / asked[key] for key in asked}


def _column(t: Tally, rng: np.random.Generator) -> None:
    s = sheet(rng, full=True, tag="C")
    p = plant_column(s, rng)
    if p is None or p.keys == ("pole_pairs",):
        return
    seen = [judge(s, Planted(i, p.keys, p.cause, p.factor)) for i in range(len(s.motors))]
    if not all(v.detectable and v.identifiable for v in seen):
        return
    findings = [f for f in reconcile(batch_of(s, stated=True)).findings if f.severity != "note"]
    t.n["columns"] += 1
    hits = [f for f in findings if f.suspect in p.keys or set(f.figures) & set(p.keys)]
    if not hits:
        t.examples.append(f"COLUMN MISSED {s.kind} {p}")
        return
    t.n["column found"] += 1
    f = hits[0]
    right = f.suspect in p.keys and (f.cause == p.cause or fits(f.cause, p.factor))
    t.n["column right"] += right
    t.n["column once"] += len(findings) == 1 and f.scope == "column"
    if not right or len(findings) != 1:
        said = [(g.scope, g.suspect, g.cause, g.ratio) for g in findings]
        t.examples.append(f"COLUMN {s.kind} {p.keys} {p.cause} x{p.factor:.3g} said {said}")


def _pair(t: Tally, rng: np.random.Generator) -> None:
    """Two faults in one full row, each of which could be pinned to its figure alone."""
    s = sheet(rng, full=True, tag="P")
    other = deepcopy(s)
    i = int(rng.integers(len(s.motors)))
    first = plant(s, i, rng, cause="power-of-ten")
    second = plant(other, i, rng, cause=str(rng.choice(["power-of-ten", "unexplained"])))
    if first is None or second is None or first.keys == second.keys:
        return
    if not (judge(s, first).identifiable and judge(other, second).identifiable):
        return
    for key in second.keys:
        s.printed[key][i] = other.printed[key][i]
    both = {*first.keys, *second.keys}
    alarms = _alarms(reconcile(batch_of(s)).findings, s.part_numbers[i])
    t.n["pairs"] += 1
    t.n["pair found"] += both <= {k for f in alarms for k in (f.suspect, *f.figures)}
    suspects = {f.suspect for f in alarms}
    t.n["pair suspects"] += both <= suspects
    if not both <= suspects:
        t.examples.append(f"PAIR {s.kind} {both} said {suspects}")
