"""The torque–speed plane and implied figures, held against the judgement they must agree with."""

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from motorfolio.catalog.report import curves
from motorfolio.catalog.report.implied import implied_figures
from motorfolio.catalog.search.fleet import load_fleet
from motorfolio.catalog.store import Catalog
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Drive, Gearing, Supply, Surroundings
from motorfolio.schema.operation.judge import judge
from motorfolio.schema.operation.moves import move

PARTS = ("MARMOT-1", "TERN-45L", "CIGALE-B", "DACHS-24", "IGEL-12", "KODAMA-B")


def machine_of(catalog: Path, part: str):
    with Catalog.open(catalog) as opened:
        fleet = load_fleet(opened)
        return fleet.machines.take(np.flatnonzero(fleet.ids == opened.find(part).id))


def demand_at(torque: float, speed: float) -> Demand:
    return Demand(
        Cycle.from_points([(torque, speed, 1.0)]), Gearing(), Supply(24.0, 0.95, 0.5),
        Drive(30.0, None), Surroundings(40.0),
    )  # fmt: skip


@pytest.mark.parametrize("part", PARTS)
def test_every_limit_of_the_plane_is_where_the_judgement_has_it(catalog, part):
    machine = machine_of(catalog, part)
    asked = demand_at(0.0, 0.0)
    found = curves.plane(machine, asked)
    kinds = {limit.kind: limit for limit in found.limits}
    assert {"peak", "voltage cold"} <= kinds.keys()
    checked = 0
    for at in (10, 40, 70, 100):
        speed = float(found.speed[at])
        for kind, name in (("continuous", "thermal"), ("peak", "peak_current")):
            if kind not in kinds or not kinds[kind].torque[at] > 0:
                continue
            torque = float(kinds[kind].torque[at])
            use = judge(machine, demand_at(torque, speed))
            if kind == "continuous":
                assert getattr(use, name)[0, 0] == pytest.approx(1.0, abs=1e-6)
                checked += 1
            elif "current" in kinds[kind].note:
                # a plane's magnets are as warm as permitted, or as cold as the ambient
                assert getattr(use, name)[0, 0] <= 1 + 1e-9 or use.runaway[0, 0]
                checked += 1
    assert checked


@pytest.mark.parametrize("part", PARTS)
def test_the_voltage_limit_uses_the_voltage_up(catalog, part):
    machine = machine_of(catalog, part)
    speed = np.linspace(0, 24 / float(machine.torque_constant[0]) * 0.8, 9)
    for temperature in (25.0, 90.0):
        torque = curves.voltage_torque(machine, speed, 24.0, temperature)
        copper = (234.5 + temperature) / (234.5 + 25)  # Langsdorf, ex. 1-15
        flux = 1 + float(np.nan_to_num(machine.magnet_coefficient[0])) * (temperature - 25)
        Km = float(machine.torque_constant[0]) * flux
        current = (torque + curves.friction(machine, speed)) / Km
        along = float(machine.armature_resistance[0]) * copper * current + Km * speed
        across = np.zeros_like(speed)
        if machine.commutation[0] == 2:
            across = speed * current * float(machine.pole_pairs[0] * machine.armature_inductance[0])
        np.testing.assert_allclose(np.hypot(along, across), 24.0, rtol=1e-9)


def test_the_cycle_at_the_motor_has_the_judgement_s_peaks(catalog):
    machine = machine_of(catalog, "CIGALE-B")
    cycle = Cycle.from_rows([0, 0.2, 0.5, 0.7, 1.0], [0, 30, 30, 0, 0], [0.5, 0.5, 0.5, 0.5, 0.2])
    demand = Demand(cycle, Gearing(2e-3, 0.9, 1e-6), Supply(48.0))
    lines, rms = curves.cycle_at_motor(machine, demand, 8.0)
    use = judge(machine, demand, 8.0)
    assert max(float(line[0].max()) for line in lines) == pytest.approx(use.peak_speed[0, 0])
    assert max(float(np.abs(line[1]).max()) for line in lines) == pytest.approx(
        use.peak_torque_value[0, 0]
    )
    t = np.linspace(0, 1, 200_001)
    speed = np.interp(t, [0, 0.2, 0.5, 0.7, 1.0], [0, 30, 30, 0, 0]) * 8
    assert rms[0] == pytest.approx(np.sqrt(np.trapezoid(speed**2, t)), rel=1e-6)


def test_what_lasts_ends_at_the_permissible_speed(catalog):
    machine = machine_of(catalog, "CIGALE-A")
    top = float(machine.maximum_speed[0])
    found = curves.plane(machine, demand_at(0.0, 0.0))
    wide = curves.plane(machine, replace(demand_at(0.0, 0.0), supply=Supply(60.0)))
    assert found.speed[-1] < top < wide.speed[-1]
    assert found.lasting()[0][-1] == found.speed[-1]
    speed, torque = wide.lasting()
    assert speed[-1] == top
    assert (torque > 0).all()
    use = judge(machine, demand_at(float(torque[-1]), top * 1.001))
    assert use.speed[0, 0] > 1
    assert judge(machine, demand_at(float(torque[-1]), top)).speed[0, 0] == pytest.approx(1)


def test_a_bent_ramp_is_one_line(catalog):
    machine = machine_of(catalog, "CIGALE-B")
    demand = Demand(move(9.0, profile="s-curve", time=1.0, effort=0.1), Gearing(1e-3))
    lines, _ = curves.cycle_at_motor(machine, demand, 2.0)
    ends = [(float(line[0, 0]), float(line[0, -1])) for line in lines]
    top = 2 * 9.0 / (1 - 1 / 3)
    assert np.allclose(ends, [(0, top), (top, top), (top, 0)])
    assert lines[0].shape[1] > 10


def test_only_the_planted_figure_stands_apart(catalog):
    # sample_entries/planted.json: PIKA-3's stall torque is printed in mN·m under oz-in
    with Catalog.open(catalog) as opened:
        known = opened.find("PIKA-3")
        motors = {known.id: opened.motor("PIKA-3")}
        found = {f.key: f for f in implied_figures(opened, motors)[known.id]}
    outlier = found.pop("stall_torque")
    assert outlier.ratio == pytest.approx(7.0616, rel=0.03)
    assert outlier.severity == "error"
    for f in found.values():
        assert f.severity is None
        assert abs(np.log(f.ratio)) < 3 * f.sd
        assert f.low <= f.ratio <= f.high
