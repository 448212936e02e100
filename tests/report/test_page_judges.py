"""The page judges motors as Python does: the same cases on both sides, to 0.1 %."""

from __future__ import annotations

import json
import math
import re
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from motorfolio.catalog.commands.requirement_options import requirement_of
from motorfolio.catalog.commands.search import command as search
from motorfolio.catalog.report.page.write import search_page
from motorfolio.catalog.search.choice import Judge, behind
from motorfolio.catalog.search.fleet import load_fleet
from motorfolio.catalog.search.gears import gear_utilisations, load_gears
from motorfolio.catalog.search.run import _tolerance
from motorfolio.catalog.store import Catalog

from .browser import opened
from .conftest import HELP, SAMPLES

MACHINES = SAMPLES / "machines"
POINT = ["--torque", "50 mN·m", "--speed", "3000 rpm"]
CYCLE = (
    "time [s],speed [rpm],torque [N·m]\n0,0,0.3\n4,300,0.3\n20,300,0.25\n20,300,-0.1\n24,0,-0.1\n"
    "40,0,0.05\n"
)
CASES = {
    "point": [*POINT, "--supply", "24 V", "--ratio", "1..10"],
    "no supply": [*POINT, "--current", "5 A", "--ambient", "40 °C"],
    "lift axis with ripple": ["--requirement", str(MACHINES / "lift_axis.toml")],
    "supply limits": ["--requirement", str(MACHINES / "hand_tool.toml")],
    "inertia, altitude, rms": ["--requirement", str(MACHINES / "rotary_table.toml")],
    "worst case": ["--requirement", str(MACHINES / "lift_axis.toml"), "--worst-case"],
    "printed tolerances": [*POINT, "--supply", "24 V", "--worst-case", "printed"],
    "slow cycle": ["--cycle", "CYCLE", "--supply", "36 V", "--ratio", "3..12",
                   "--load-inertia", "2e-3 kg·m²", "--reserve", "10 %"],
    "slow cycle with ripple": ["--cycle", "CYCLE", "--supply", "36 V", "--ratio", "8",
                               "--pwm-frequency", "12 kHz", "--mounting", "2 K/W"],
}  # fmt: skip


def data_of(html: str) -> dict:
    found = re.search(r'<script type="application/json" id="data">(.*?)</script>', html, re.S)
    assert found is not None
    return json.loads(found[1])


@pytest.mark.parametrize("name", CASES)
def test_page_and_python_agree(catalog: Path, tmp_path: Path, name: str) -> None:
    cycle = tmp_path / "cycle.csv"
    cycle.write_text(CYCLE, encoding="utf-8")
    call = [str(cycle) if word == "CYCLE" else word for word in CASES[name]]
    requirement = requirement_of(search.make_context("search", call, **HELP).params)
    path = tmp_path / "page.html"
    rng = np.random.default_rng(4)
    base = requirement.lowest_voltage
    settings = [
        {
            "supply": None if base is None else float(base * rng.uniform(0.5, 1.8)),
            "ambient": float(rng.uniform(-10, 70)),
            "reserve": float(rng.uniform(0, 0.4)),
        }
        for _ in range(5)
    ]
    asked = {
        "supply": base,
        "ambient": requirement.demand.surroundings.ambient,
        "reserve": requirement.reserve,
    }
    settings.append(asked)
    with Catalog.open(catalog) as store:
        html = search_page(store, requirement, "Test")
        fleet = load_fleet(store, requirement)
        ids = [store.find(part).id for part in data_of(html)["names"]["part"]]
    path.write_text(html, encoding="utf-8")
    with opened(path) as page:
        results = page.evaluate(
            """settings => settings.map(s => Array.from({length: model.count}, (_, i) => {
                const f = judging.judge(model.machine(i), model.data.demand, s), use = {};
                const plain = x => Number.isNaN(x) ? null : x === Infinity ? "inf" : x;
                for (const [name, value] of Object.entries(f.use)) use[name] = plain(value);
                return {use, verdict: f.verdict, runaway: f.runaway, rms: f.rms, peak: f.peak,
                    loss: f.loss, temperature: plain(f.temperature)};
            }))""",
            settings,
        )
    ratio = np.array(data_of(html)["judged"]["ratio"])
    at = np.array([int(np.flatnonzero(fleet.ids == number)[0]) for number in ids])
    tolerance = _tolerance(fleet, requirement)
    checked = {"numbers": 0, "runaway": 0, "yes": 0}
    for setting, page_result in zip(settings, results, strict=True):
        own = requirement if base is None else requirement.with_supply(setting["supply"])
        around = replace(own.demand.surroundings, ambient=setting["ambient"])
        own = replace(own.with_demand(surroundings=around), reserve=setting["reserve"])
        judged = Judge(own, tolerance).cases(fleet.machines.take(at), ratio[:, None], at, True)
        verdicts = {0: "yes", 1: "unknown", 2: "no"}
        for i, theirs in enumerate(page_result):
            runaway = bool(judged.use.runaway[i])
            assert theirs["runaway"] == runaway
            checked["runaway"] += runaway
            for limit in judged.names():
                ours = float(judged.utilisation(limit)[i])
                said = theirs["use"][limit]
                if math.isnan(ours):
                    assert said is None, (limit, i)
                elif math.isinf(ours):
                    assert said == "inf"
                else:
                    assert said == pytest.approx(ours, rel=1e-3, abs=1e-9), (limit, i)
                    checked["numbers"] += 1
            for key, ours in (
                ("rms", judged.use.rms_current), ("peak", judged.use.peak_current_value),
                ("loss", judged.use.copper_loss), ("temperature", judged.use.winding_temperature),
            ):  # fmt: skip
                if not math.isnan(ours[i]):
                    assert theirs[key] == pytest.approx(float(ours[i]), rel=1e-3), (key, i)
            largest = float(judged.largest[i])
            if abs(largest - own.allowed) > 1e-3:
                assert theirs["verdict"] == verdicts[int(judged.verdict[i])]
                checked["yes"] += theirs["verdict"] == "yes"
    assert checked["numbers"] > 100
    assert checked["yes"] > 0


def test_motors_behind_gears_of_the_catalog(catalog: Path, tmp_path: Path) -> None:
    call = ["--torque", "2 N·m", "--speed", "150 rpm", "--supply", "24 V", "--gears"]
    requirement = requirement_of(search.make_context("search", call, **HELP).params)
    path = tmp_path / "page.html"
    setting = {"supply": 20.0, "ambient": 40.0, "reserve": 0.1}
    with Catalog.open(catalog) as store:
        html = search_page(store, requirement, "Test")
        fleet = load_fleet(store, requirement)
        data = data_of(html)
        ids = [store.find(part).id for part in data["names"]["part"]]
        gears = {gear.part_number: gear for gear in load_gears(store, requirement)}
    path.write_text(html, encoding="utf-8")
    with opened(path) as page:
        theirs = page.evaluate(
            """s => Array.from({length: model.count}, (_, i) => {
                const f = judging.judge(model.machine(i), model.data.demand, s);
                return {gear: model.card(i).gear, thermal: f.use.thermal, voltage: f.use.voltage,
                    fixed: model.machine(i).fixed, rms: f.rms};
            })""",
            setting,
        )
    own = requirement.with_supply(setting["supply"])
    own = own.with_demand(surroundings=replace(own.demand.surroundings, ambient=40.0))
    for i, (number, found) in enumerate(zip(ids, theirs, strict=True)):
        gear = gears[found["gear"]]
        assert data["judged"]["ratio"][i] == pytest.approx(gear.ratio)
        at = np.flatnonzero(fleet.ids == number)
        ratio = np.array([[data["judged"]["ratio"][i]]])
        judged = Judge(behind(own, gear)).cases(fleet.machines.take(at), ratio, at, True)
        for limit in ("thermal", "voltage"):
            ours = float(judged.utilisation(limit)[0])
            if not math.isnan(ours):
                assert found[limit] == pytest.approx(ours, rel=1e-3)
        assert found["rms"] == pytest.approx(float(judged.use.rms_current[0]), rel=1e-3)
        limits = gear_utilisations([gear], requirement)
        assert found["fixed"].keys() == limits.keys() != set()
    assert len({found["gear"] for found in theirs}) > 1


def test_the_plane_s_limits_agree(catalog: Path, tmp_path: Path) -> None:
    from motorfolio.catalog.report import curves
    from motorfolio.schema.operation.cycle import Cycle
    from motorfolio.schema.operation.demand import Demand, Supply, Surroundings

    call = [*POINT, "--supply", "24 V", "--current", "20 A", "--current-convention", "rms"]
    requirement = requirement_of(search.make_context("search", call, **HELP).params)
    path = tmp_path / "page.html"
    with Catalog.open(catalog) as store:
        path.write_text(search_page(store, requirement, "Test"), encoding="utf-8")
        fleet = load_fleet(store)
        parts = data_of(path.read_text(encoding="utf-8"))["names"]["part"]
        ids = [store.find(part).id for part in parts]
    speeds = np.array([0.0, 40.0, 200.0, 350.0])
    demand = Demand(
        Cycle.from_points([(0.0, 0.0, 1.0)]), supply=Supply(30.0), drive=requirement.demand.drive,
        surroundings=Surroundings(45.0),
    )  # fmt: skip
    with opened(path) as page:
        theirs = page.evaluate(
            """speeds => Array.from({length: model.count}, (_, i) => {
                const m = model.machine(i), d = model.data.demand;
                const s = {supply: 30, ambient: 45, reserve: 0};
                const gap = v => Number.isNaN(v) ? null : v, all = f => speeds.map(w => gap(f(w)));
                return {continuous: all(w => judging.lastingTorque(m, d, s, w)),
                    peak: all(w => judging.peakTorque(m, d, s, w, 90)),
                    voltage: all(w => judging.voltageTorque(m, w, 30, 90))};
            })""",
            speeds.tolist(),
        )
    for number, found in zip(ids, theirs, strict=True):
        machine = fleet.machines.take(np.flatnonzero(fleet.ids == number))
        ours = {
            "continuous": curves.continuous_torque(machine, speeds, demand),
            "peak": curves.peak_torque(machine, speeds, demand, 90.0)[0],
            "voltage": curves.voltage_torque(machine, speeds, 30.0, 90.0),
        }
        for kind, values in ours.items():
            for mine, other in zip(values.tolist(), found[kind], strict=True):
                if math.isnan(mine):
                    assert other is None
                else:
                    assert other == pytest.approx(mine, rel=1e-6, abs=1e-9)
