"""The search against the same judged one motor and one ratio at a time, and its promises."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import numpy as np
import pytest

from motorfolio.catalog.importing.gears import import_gears
from motorfolio.catalog.requirement.fields import RequirementError
from motorfolio.catalog.requirement.file import read_file
from motorfolio.catalog.requirement.read import read_requirement
from motorfolio.catalog.search import choice
from motorfolio.catalog.search.documents import search_document
from motorfolio.catalog.search.fleet import load_fleet
from motorfolio.catalog.search.near_misses import near_misses
from motorfolio.catalog.search.run import Found, names_of, search
from motorfolio.catalog.store import Catalog
from motorfolio.schema.operation.energy import draw
from motorfolio.schema.operation.judge import Cycle, Demand, Gearing, judge
from motorfolio.schema.operation.limits import Verdict
from motorfolio.schema.operation.machines import Machines
from motorfolio.schema.operation.thermal import copper_factor

from .made import SAMPLES, catalog_of, sample_catalog

MACHINES = sorted((SAMPLES / "machines").glob("*.toml"))
CYCLE = [
    ["0 s", "0 rpm", "1 N·m"],
    ["0.1 s", "100 rpm", "1 N·m"],
    ["0.3 s", "100 rpm", "1.5 N·m"],
    ["0.5 s", "0 rpm", "0.5 N·m"],
    ["0.8 s", "0 rpm", "0.5 N·m"],
    ["1.0 s", "-150 rpm", "-0.2 N·m"],
    ["1.2 s", "0 rpm", "1 N·m"],
]
BASE = {
    "cycle": CYCLE,
    "load": {"inertia": "0.002 kg·m²"},
    "supply": {"voltage": "48 V"},
    "drive": {"peak_current": "20 A", "continuous_current": "10 A"},
    "gear": {"ratio": "3..40", "efficiency": "90 %"},
}


@pytest.fixture(scope="module")
def samples(tmp_path_factory) -> Iterator[Catalog]:
    path = sample_catalog(tmp_path_factory.mktemp("samples") / "c.sqlite")
    import_gears(path, [SAMPLES / "gears.csv"])
    with Catalog.open(path, write=True) as catalog:
        yield catalog


def of(document, catalog: Catalog) -> Found:
    return search(catalog, read_requirement(document))


def test_counts_add_up_and_candidates_are_feasible_one_by_one(samples: Catalog) -> None:
    found = of({**BASE, "wanted": {"limit": 64}}, samples)
    assert found.considered == 64
    assert found.considered == found.feasible + found.unknown + sum(found.rejected.values())
    assert len(found.candidates) == found.feasible > 3
    for shown in found.candidates:
        machine = found.fleet.machines.take(np.array([shown.motor]))
        assert judge(machine, found.requirement.demand, shown.judged.ratio).verdict()[0] == 0
        assert shown.intervals
        for low, high in shown.intervals:
            inside = judge(machine, found.requirement.demand, np.linspace(low, high, 9)[1:-1])
            assert (inside.verdict() == Verdict.FEASIBLE).all()
            outside = [r for r in (low * 0.995, high * 1.005) if 3 <= r <= 40]
            if outside:
                beyond = judge(machine, found.requirement.demand, np.array(outside))
                assert (beyond.verdict() == Verdict.REJECTED).all()


def test_the_ratio_is_that_of_least_copper_loss(samples: Catalog) -> None:
    for shown in (found := of(BASE, samples)).candidates:
        machine = found.fleet.machines.take(np.array([shown.motor]))
        assert shown.intervals is not None
        grid = np.concatenate([np.geomspace(low, high, 50) for low, high in shown.intervals])
        losses = judge(machine, found.requirement.demand, grid).copper_loss
        assert shown.judged.use.copper_loss[0] <= losses.min() * (1 + 1e-6)


def test_no_rejected_motor_is_feasible_at_any_ratio(samples: Catalog) -> None:
    found = of(BASE, samples)
    rejected = np.flatnonzero(found.judged.verdict == Verdict.REJECTED)
    machines = found.fleet.machines.take(rejected)
    grid = np.geomspace(3, 40, 600)
    assert (judge(machines, found.requirement.demand, grid).verdict() == Verdict.REJECTED).all()


@pytest.mark.parametrize("few", [0, choice._FEW])
def test_an_interval_narrower_than_a_step_of_the_grid_is_found(
    samples: Catalog, monkeypatch, few: int
) -> None:
    """The reserve is put so that a motor does it at hardly more than one ratio, by a fine grid."""
    monkeypatch.setattr(choice, "_FEW", few)
    asked = of(BASE, samples)
    grid = np.geomspace(3, 40, 3001)
    largest = judge(asked.fleet.machines, asked.requirement.demand, grid).largest
    least, at = largest.min(axis=1), largest.argmin(axis=1)
    inside = (asked.judged.verdict == Verdict.FEASIBLE) & (at > 0) & (at < grid.size - 1)
    inside &= least > 0.3
    assert inside.sum() >= 3
    for motor in np.flatnonzero(inside):
        reserve = f"{100 * (1 - least[motor] * 1.0001):.6f} %"
        document = {**BASE, "wanted": {"reserve": reserve}}
        found = of(document, samples)
        assert found.judged.verdict[motor] == Verdict.FEASIBLE, (motor, grid[at[motor]])


def test_many_motors_are_judged_as_few_are(samples: Catalog, monkeypatch) -> None:
    """The coarse look that is taken over many motors finds the same motors."""
    few = of(BASE, samples)
    monkeypatch.setattr(choice, "_FEW", 0)
    many = of(BASE, samples)
    assert (many.judged.verdict == few.judged.verdict).all()
    assert [s.name for s in many.candidates] == [s.name for s in few.candidates]
    listed = {**BASE, "gear": {"ratio": [4, 6, 9, 14, 20]}}
    a = of(listed, samples)
    monkeypatch.undo()
    b = of(listed, samples)
    assert (a.judged.verdict == b.judged.verdict).all()


@pytest.mark.parametrize(
    "order",
    ["size", "mass", "copper-loss", "price", "diameter", "winding-temperature", "utilisation"],
)
def test_orders(samples: Catalog, order: str) -> None:
    found = of({**BASE, "wanted": {"order_by": order, "limit": 64}}, samples)
    key = {
        "size": found.fleet.columns["mass"],
        "mass": found.fleet.columns["mass"],
        "price": found.fleet.columns["price"],
        "diameter": found.fleet.columns["diameter"],
        "copper-loss": found.judged.use.copper_loss,
        "winding-temperature": found.judged.use.winding_temperature,
        "utilisation": found.judged.largest,
    }[order][found.order]
    known = key[~np.isnan(key)]
    assert (np.diff(known) >= 0).all()
    assert np.isnan(key[known.size :]).all()
    again = of({**BASE, "wanted": {"order_by": order, "limit": 5}}, samples)
    assert [s.name for s in again.candidates] == [s.name for s in found.candidates[:5]]


def test_unknown_is_never_passed(tmp_path: Path) -> None:
    """Without heat figures a motor is unknown, unless something else rejects it."""
    path = catalog_of(
        tmp_path / "c.sqlite",
        {"mass": [0.1, 0.2, 0.3], "maximum_winding_temperature": [155, np.nan, np.nan],
         "thermal_resistance": [10, 10, np.nan]},
        {"torque_constant": [0.03, 0.03, 0.3], "armature_resistance": 0.5, "no_load_current": 0.1},
    )  # fmt: skip
    point = {"point": [{"torque": "30 mN·m", "speed": "3000 rpm"}], "supply": {"voltage": "24 V"}}
    with Catalog.open(path) as catalog:
        found = of(point, catalog)
        assert (found.feasible, found.unknown, found.rejected) == (1, 1, {"voltage": 1})
        assert found.lacking == {"thermal": 1}
        limited = of({**point, "wanted": {"where": ["diameter < 1 m"]}}, catalog)
        assert (limited.feasible, limited.unknown) == (0, 2)
        assert limited.lacking == {"where": 2, "thermal": 1}
        heavy = of({**point, "wanted": {"where": ["mass > 250 g"]}}, catalog)
        assert heavy.rejected == {"where": 2, "voltage": 1}


def test_where_on_text_and_currency(samples: Catalog) -> None:
    def considered(limit: str) -> Found:
        return of({**BASE, "wanted": {"where": [limit], "limit": 64}}, samples)

    block = considered("commutation = block")
    assert {s.name.maker for s in block.candidates} == {"Moteurs Grisoulette (inventé)"}
    assert block.rejected["where"] == 54
    assert considered("maker != 'moteurs grisoulette (inventé)'").rejected["where"] == 10
    # made without a price heading: no price is known to be in euro
    assert considered("price < 1000 EUR").feasible == 0


def test_an_ambient_above_every_limit_is_refused(samples: Catalog) -> None:
    with pytest.raises(RequirementError, match="at most 155 °C"):
        of({**BASE, "ambient": {"temperature": "160 °C"}}, samples)


# ---- further limits


def test_inertia_ratio(samples: Catalog) -> None:
    """(J_L/N² + J_g)/J by hand, and its edge: N² = J_L/(λ·J)."""
    found = of({**BASE, "wanted": {"largest_inertia_ratio": 2, "limit": 64}}, samples)
    assert found.candidates
    for shown in found.candidates:
        rotor = found.fleet.machines.rotor_inertia[shown.motor]
        ratio = shown.judged.ratio[0]
        assert 0.002 / ratio**2 / rotor <= 2 * (1 + 1e-6)
        assert shown.intervals is not None
        assert shown.intervals[0][0] >= min(np.sqrt(0.002 / 2 / rotor) * (1 - 1e-5), 40)


def test_power_limit_rejects_what_draws_more(samples: Catalog) -> None:
    free = of({**BASE, "wanted": {"limit": 64}}, samples)
    peak = [search_document(free, [], samples)["candidates"][i]["supply"]["peak_power"]["value"]
            for i in range(len(free.candidates))]  # fmt: skip
    limit = float(np.median(peak))
    held = of({**BASE, "supply": {"voltage": "48 V", "power_limit": f"{limit} W"},
               "wanted": {"limit": 64}}, samples)  # fmt: skip
    assert held.candidates
    assert held.feasible <= free.feasible
    for c in search_document(held, [], samples)["candidates"]:
        assert c["supply"]["peak_power"]["value"] <= limit * (1 + 1e-6)


def test_worst_case_only_loses(samples: Catalog) -> None:
    plain = of({**BASE, "wanted": {"limit": 64}}, samples)
    worst = of({**BASE, "wanted": {"limit": 64, "worst_case": "10 %"}}, samples)
    printed = of({**BASE, "wanted": {"limit": 64, "worst_case": "printed"}}, samples)
    assert 0 < worst.feasible <= printed.feasible <= plain.feasible
    names = {s.name for s in plain.candidates}
    assert {s.name for s in worst.candidates} <= names
    document = search_document(worst, [], samples)["candidates"][0]
    assert document["worst_corner"] in (
        "Km low, Ra high", "Km low, Ra low", "Km high, Ra high", "Km high, Ra low",
    )  # fmt: skip


# ---- gears


def test_gears_are_judged_by_their_own_limits(samples: Catalog) -> None:
    document = {**BASE, "gear": {"use": "catalog"}, "wanted": {"limit": 64}}
    found = of(document, samples)
    assert found.candidates
    cycle = found.requirement.demand.cycle
    top = np.abs(cycle.speed_end).max()
    acceleration = (cycle.speed_end - cycle.speed_start) / cycle.duration
    torque = np.abs(cycle.torque_start + 0.002 * acceleration).max()
    for shown in found.candidates:
        gear = shown.gear
        assert gear is not None
        assert gear.maximum_input_speed is not None
        assert gear.peak_torque is not None
        assert top * gear.ratio <= gear.maximum_input_speed
        assert torque <= gear.peak_torque
    key = [
        found.fleet.columns["mass"][s.motor] + s.gear.mass
        for s in found.candidates
        if s.gear is not None and s.gear.mass is not None
    ]
    assert key == sorted(key)


def test_the_lightest_gear_that_fits_is_taken(samples: Catalog) -> None:
    found = of({**BASE, "gear": {"use": "catalog"}, "wanted": {"limit": 64}}, samples)
    masses = {gear.part_number: gear.mass for gear in found.gears}
    for shown in found.candidates:
        assert shown.gear is not None
        others = [masses[name] for name in shown.other_gears]
        assert all(other >= shown.gear.mass for other in others)


def test_a_gear_without_efficiency_is_not_passed(tmp_path: Path) -> None:
    path = sample_catalog(tmp_path / "c.sqlite")
    with (
        Catalog.open(path) as catalog,
        pytest.raises(RequirementError, match="motorfolio gears FILE"),
    ):
        of({**BASE, "gear": {"use": "catalog"}}, catalog)
    bare = tmp_path / "bare.csv"
    bare.write_text("Gear,Ratio,Continuous torque [N·m],Peak torque [N·m]\nG-10,10,10,20\n")
    import_gears(path, [bare], maker="Made-up Gears")
    with Catalog.open(path) as catalog:
        found = of({**BASE, "gear": {"use": "catalog"}}, catalog)
        assert found.feasible == 0
        assert found.unknown > 0
        assert found.lacking["gear"] == found.unknown
        with pytest.raises(RequirementError, match="other ratios"):
            of({**BASE, "gear": {"use": "catalog", "ratio": "2..5"}}, catalog)


# ---- near misses


@pytest.mark.parametrize("path", MACHINES, ids=lambda p: p.stem)
def test_near_misses_hold_what_they_say(samples: Catalog, path: Path) -> None:
    """Each change, made in the requirement and searched for anew, admits the motor."""
    document = read_file(path)
    found = of(document, samples)
    assert found.candidates
    misses = near_misses(found, samples)
    assert misses
    tried = 0
    for miss in misses:
        assert miss.shown.name not in {s.name for s in found.candidates}
        for change in miss.changes:
            changed = {k: (dict(v) if isinstance(v, dict) else v) for k, v in document.items()}
            changed["wanted"] = {**changed["wanted"], "limit": 64}
            match change.change:
                case "wanted.reserve":
                    changed["wanted"]["reserve"] = change.after
                case "ambient.temperature":
                    changed["ambient"] = {**changed["ambient"], "temperature": f"{change.after} °C"}
                case "gear.ratio":
                    changed["gear"] = {**changed["gear"], "ratio": change.after}
                case "supply.lowest_voltage":
                    assert change.before is not None
                    assert change.after is not None
                    nominal = float(changed["supply"]["voltage"].split()[0])
                    scaled = nominal * change.after / change.before
                    changed["supply"] |= {
                        "voltage": f"{scaled} V", "lowest_voltage": f"{change.after} V"
                    }  # fmt: skip
                case "dwell":
                    key = "move" if "move" in changed else "point"
                    more = {"dwell": f"{change.after} s"}
                    if key == "point":
                        more = {
                            "torque": "0 N·m",
                            "speed": "0 rpm",
                            "duration": f"{change.after} s",
                        }
                    changed[key] = [*changed[key], more]
                case "drive.peak_current" | "drive.continuous_current":
                    key = change.change.removeprefix("drive.")
                    unit = changed["drive"][key].split(" ", 1)[1]
                    changed["drive"][key] = f"{change.after} {unit}"
                case _:
                    continue
            tried += 1
            admitted = {s.name for s in of(changed, samples).candidates}
            assert miss.shown.name in admitted, (miss.shown.name, change)
    assert tried


def test_near_misses_are_nearest_first_and_none_is_feasible(samples: Catalog) -> None:
    found = of(BASE, samples)
    misses = near_misses(found, samples)
    largest = [float(m.shown.judged.largest[0]) for m in misses]
    assert largest == sorted(largest)
    assert all(m.shown.judged.verdict[0] == Verdict.REJECTED for m in misses)
    assert all(m.sentence.startswith("It would do with ") for m in misses)


def test_another_winding_is_one_that_does_it(samples: Catalog) -> None:
    """Km as the turns, Ra as their square: the motor constant stays, and the winding does it."""
    found = of(BASE, samples)
    seen = 0
    for miss in near_misses(found, samples):
        for change in miss.changes:
            if change.change == "winding":
                seen += 1
                Km, Ra = (change.also[k][0] for k in ("torque_constant", "armature_resistance"))
                machines = found.fleet.machines
                constant = machines.torque_constant / np.sqrt(machines.armature_resistance)
                assert Km / np.sqrt(Ra) == pytest.approx(constant[miss.shown.motor])
                assert change.after is not None
                assert Km == pytest.approx(
                    machines.torque_constant[miss.shown.motor] * change.after
                )
    assert seen


# ---- the power balance


def test_power_balance_against_quadrature() -> None:
    """Energies and peaks of the closed form against a fine midpoint rule over each piece."""
    m = Machines.of(
        torque_constant=0.05, armature_resistance=1.0, rotor_inertia=1e-5,
        coulomb_torque=0.002, viscous_damping=1e-5,
    )  # fmt: skip
    cycle = Cycle.from_rows(
        [0, 0.3, 0.5, 0.8, 1.2], [0, 30, 30, -10, 0], [0.5, 0.5, -0.4, -0.4, 0.5]
    )
    demand = Demand(cycle, Gearing(0.002, 0.9, 1e-6))
    found = draw(m, demand, np.array([5.0]), np.array([60.0]), 0.5)
    drawn = returned = 0.0
    highest, lowest = -np.inf, np.inf
    pieces = cycle.pieces(0.002, 0.9)
    s = (np.arange(100_000) + 0.5) / 100_000
    for duration, (first, last) in zip(pieces.duration, pieces.basis, strict=True):
        now = first + (last - first) * s[:, None]
        current = now @ np.array([1 / 5, 1.1e-5 * 5, 0.002, 1e-5 * 5]) / 0.05
        power = copper_factor(60) * current**2 + 0.05 * now[:, 3] * 5 * current + 0.5 * abs(current)
        drawn += np.maximum(power, 0).mean() * duration
        returned -= np.minimum(power, 0).mean() * duration
        highest, lowest = max(highest, power.max()), min(lowest, power.min())
    assert found.drawn[0] == pytest.approx(drawn, rel=1e-7)
    assert found.returned[0] == pytest.approx(returned, rel=1e-7)
    assert found.peak[0] == pytest.approx(highest, rel=1e-4)
    assert found.peak_returned[0] == pytest.approx(-lowest, rel=1e-4)
    assert found.mean[0] == pytest.approx((drawn - returned) / cycle.period, rel=1e-7)
    assert 0 < found.stretch[0] <= found.returned[0]


# ---- what must hold by sense


def test_more_supply_or_drive_never_loses_a_motor(samples: Catalog) -> None:
    """Without ripple, more voltage or current only admits."""
    everything = {"limit": 64}
    last: set = set()
    for volts in (12, 24, 36, 48, 96):
        document = {**BASE, "supply": {"voltage": f"{volts} V"}, "wanted": everything}
        names = {s.name for s in of(document, samples).candidates}
        assert last <= names
        last = names
    last = set()
    for amperes in (2, 5, 10, 20, 50):
        drive = {"peak_current": f"{amperes} A", "continuous_current": f"{amperes / 2} A"}
        names = {
            s.name for s in of({**BASE, "drive": drive, "wanted": everything}, samples).candidates
        }
        assert last <= names
        last = names
    assert last


def test_an_empty_catalog_has_no_candidate(tmp_path: Path) -> None:
    path = sample_catalog(tmp_path / "c.sqlite")
    with Catalog.open(path, write=True) as catalog:
        catalog.remove([f"{name.maker}/{name.part_number}" for name in _all_names(catalog)])
        for gear in ({"ratio": "3..40"}, {"ratio": 5}, {"ratio": [3, 5]}):
            found = of({**BASE, "gear": gear}, catalog)
            assert (found.considered, found.feasible, found.candidates) == (0, 0, [])
            assert near_misses(found, catalog) == []


def _all_names(catalog: Catalog) -> list:
    return names_of(catalog, load_fleet(catalog).ids)
