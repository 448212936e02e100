"""Speed of the search, as ratios against baselines of the same run.

    python -m tests.benchmarks.search [MOTORS]

A point at a fixed ratio against one SQL statement that computes the cold verdict and orders it; a
cycle at 25 ratios against the same in plain Python a motor at a time (its voltage inside a ramp
from samples); a cycle over a range of ratios in a cold process, with candidates and near
misses. Times are those of the processor.
"""

from __future__ import annotations

import math
import os
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numpy as np

from motorfolio.catalog.requirement.file import saved
from motorfolio.catalog.requirement.read import Requirement, read_requirement
from motorfolio.catalog.search.choice import Judge, best_of, choose
from motorfolio.catalog.search.fleet import load_fleet
from motorfolio.catalog.search.run import search
from motorfolio.catalog.store import Catalog
from motorfolio.schema.operation.cycle import Pieces
from motorfolio.schema.operation.machines import Machines

from ..search.made import catalog_of

POINT = {
    "point": [{"torque": "0.1 N·m", "speed": "3000 rpm"}],
    "supply": {"voltage": "24 V"},
    "drive": {"peak_current": "10 A"},
    "ambient": {"temperature": "40 °C"},
    "wanted": {"reserve": "20 %"},
}
TIMES = ("0", "0.1", "0.3", "0.4", "0.6", "0.8", "1.0", "1.2", "1.5", "1.7", "2.0")
SPEEDS = ("0", "100", "100", "200", "200", "0", "0", "-150", "-150", "0", "0")
TORQUES = ("1", "1", "1.5", "0.5", "0.5", "0.5", "1", "1", "-0.2", "-0.2", "1")
CYCLE = {
    "cycle": [
        [f"{t} s", f"{n} rpm", f"{m} N·m"] for t, n, m in zip(TIMES, SPEEDS, TORQUES, strict=True)
    ],
    "load": {"inertia": "0.002 kg·m²", "friction_torque": "0.05 N·m"},
    "supply": {"voltage": "48 V"},
    "drive": {"peak_current": "20 A", "continuous_current": "10 A"},
    "gear": {"ratio": "3..40", "efficiency": "90 %"},
    "ambient": {"temperature": "40 °C"},
}
SQL = """
WITH m AS (
  SELECT motor.id, c.torque_constant K, c.armature_resistance * (1 + (40 - 25) / 259.5) R,
    c.armature_inductance L, k.commutation, c.no_load_current i0, v.mass, v.pole_pairs p,
    v.maximum_speed top, v.peak_current most, v.maximum_winding_temperature hottest,
    v.thermal_resistance_winding_housing + v.thermal_resistance_housing_ambient rth
  FROM motor JOIN kinds k ON k.id = motor.kind JOIN constants c ON c.id = motor.id
  JOIN figure_value v ON v.id = motor.id WHERE motor.replaced_by IS NULL
), n AS (SELECT *, 0.1 / K + i0 i FROM m)
SELECT id FROM n
WHERE (R * i + K * :w) * (R * i + K * :w)
  + iif(commutation = 'sinusoidal', p * :w * L * i * p * :w * L * i, 0) <= 24 * 0.8 * 24 * 0.8
  AND i <= 0.8 * min(most, 10) AND :w <= 0.8 * top AND rth * R / 259.5 * i * i < 1
  AND rth * R * i * i / (1 - rth * R / 259.5 * i * i) <= 0.8 * (hottest - 40)
ORDER BY mass LIMIT 20
"""


def made(path: Path, motors: int) -> Path:
    """A catalog of motors of all kinds and sizes, made by rules of growth."""
    rng = np.random.default_rng(7)
    kind = rng.integers(0, 3, motors)
    constant = 10 ** rng.uniform(-3.3, -0.2, motors)
    voltage = rng.choice([12.0, 24.0, 48.0, 320.0], motors)
    top = rng.uniform(300, 1000, motors)
    Km = voltage / top
    Ra = (Km / constant) ** 2
    mass = 0.6 * (constant / 0.05) ** 1.2 * rng.uniform(0.8, 1.25, motors)
    rth = 8 * (0.05 / constant) ** 0.7
    lasting = np.sqrt(60 / (rth * Ra * 1.3))
    figures = {
        "nominal_voltage": voltage,
        "mass": mass,
        "maximum_winding_temperature": rng.choice([125.0, 155.0], motors),
        "thermal_resistance_winding_housing": rth * 0.25,
        "thermal_resistance_housing_ambient": rth * 0.75,
        "thermal_time_constant_winding": 20 * mass**0.3,
        "thermal_time_constant_housing": 800 * mass**0.3,
        "nominal_current": lasting,
        "peak_current": lasting * 4,
        "peak_torque": Km * lasting * 4,
        "maximum_speed": top * 1.2,
        "nominal_speed": top * 0.8,
        "pole_pairs": np.where(kind == 0, np.nan, 4.0),
    }
    constants = {
        "torque_constant": Km,
        "armature_resistance": Ra,
        "armature_inductance": Ra * 5e-4,
        "rotor_inertia": 3e-6 * (constant / 0.03) ** 1.6 * rng.uniform(0.5, 2, motors),
        "no_load_current": lasting * 0.04,
        "motor_constant": constant,
    }
    return catalog_of(path, figures, constants, commutation=kind, magnet="ndfeb")


def plain_python(machines: Machines, requirement: Requirement, ratios: list[float]) -> int:
    """How many motors have a feasible ratio, at the least copper loss: every
    utilisation at every ratio, worked out with floats one after the other."""
    demand = requirement.demand
    pieces: Pieces = demand.cycle.pieces(demand.gearing.load_inertia, demand.gearing.efficiency)
    basis, durations = pieces.basis.tolist(), pieces.duration.tolist()
    period, ambient = sum(durations), demand.surroundings.ambient
    available, drive = demand.supply.available, demand.drive
    assert available is not None
    assert drive.peak_current is not None
    assert drive.continuous_current is not None
    columns = {name: column.tolist() for name, column in machines.columns().items()}
    count = 0
    for i in range(len(machines)):
        m = {name: column[i] for name, column in columns.items()}
        Km, Ra, beta = m["torque_constant"], m["armature_resistance"], m["magnet_coefficient"]
        inner, outer = (
            m["thermal_resistance_winding_housing"],
            m["thermal_resistance_housing_ambient"],
        )
        least = math.inf
        for ratio in ratios:
            square = rubbing = peak = top = 0.0
            ends = []
            for duration, (first, last) in zip(durations, basis, strict=True):
                pair = []
                for load, acceleration, sign, speed in (first, last):
                    friction = m["coulomb_torque"] * sign
                    torque = load / ratio + m["rotor_inertia"] * ratio * acceleration + friction
                    pair.append((torque, speed * ratio, friction * speed * ratio))
                (t0, w0, f0), (t1, w1, f1) = pair
                ends += [(t0, w0), (t1, w1)]
                square += duration * (t0 * t0 + t0 * t1 + t1 * t1) / 3
                rubbing += duration * (f0 + f1) / 2
                peak, top = max(peak, abs(t0), abs(t1)), max(top, abs(w0), abs(w1))
            square, rubbing = square / period, rubbing / period
            theta = ambient - 25
            for _ in range(60):
                hot = Km * (1 + beta * theta)
                loss = Ra * (1 + theta / 259.5) * square / hot**2
                new = ambient - 25 + (inner + outer) * loss + outer * rubbing
                done = abs(new - theta) < 1e-6
                theta = new
                if done or theta > 400:
                    break
            hot = Km * (1 + beta * theta)
            highest = 0.0
            for flux, R in ((Km, Ra), (hot, Ra * (1 + theta / 259.5))):
                between = []
                if m["commutation"] == 2:
                    for (t0, w0), (t1, w1) in zip(ends[::2], ends[1::2], strict=True):
                        if w0 != w1:
                            between += [
                                (t0 + (t1 - t0) * n / 16, w0 + (w1 - w0) * n / 16)
                                for n in range(1, 16)
                            ]
                for torque, speed in ends + between:
                    voltage = R * torque / flux + flux * speed
                    if m["commutation"] == 2:
                        across = m["pole_pairs"] * speed * m["armature_inductance"] * torque / flux
                        voltage = math.hypot(voltage, across)
                    highest = max(highest, abs(voltage))
            utilisations = (
                highest / available,
                top / m["maximum_speed"],
                peak / hot / min(m["peak_current"], drive.peak_current),
                math.sqrt(square) / hot / drive.continuous_current,
                (theta + 25 - ambient) / (m["maximum_winding_temperature"] - ambient),
                peak / m["peak_torque"],
            )
            if max(utilisations) <= 1 and loss < least:
                least = loss
        count += least < math.inf
    return count


def best(function, rounds: int = 3) -> float:
    """The shortest of some times of the processor in s."""
    times = []
    for _ in range(rounds):
        start = time.process_time()
        function()
        times.append(time.process_time() - start)
    return min(times)


def main() -> None:
    motors = int(sys.argv[1]) if len(sys.argv) > 1 else 100_000
    with tempfile.TemporaryDirectory() as folder:
        path = made(Path(folder) / "c.sqlite", motors)
        point, cycle = read_requirement(POINT), read_requirement(CYCLE)
        with Catalog.open(path) as catalog:
            sql = best(lambda: catalog.connection.execute(SQL, {"w": 100 * math.pi}).fetchall())
            at_point = best(lambda: search(catalog, point))
            print(
                f"point, {motors} motors: search {at_point:.3f} s, SQL {sql:.3f} s, "
                f"ratio {at_point / sql:.2f} (at most 3)"
            )
            fleet = load_fleet(catalog, cycle)
            ratios = np.geomspace(3, 40, 25)
            vector = best(lambda: best_of(Judge(cycle), fleet.machines, ratios, periodic=False), 2)
            some = fleet.machines.take(np.arange(200))
            slow = best(lambda: plain_python(some, cycle, ratios.tolist()), 1)
            whole = best(lambda: choose(Judge(cycle), fleet.machines), 1)
            print(
                f"cycle of {len(TIMES) - 1} segments at 25 ratios: {vector / motors * 1e6:.1f} µs "
                f"a motor, plain Python {slow / 200 * 1e6:.0f} µs, "
                f"ratio {slow / 200 / (vector / motors):.0f} (at least 50)"
            )
            print(f"choice of the ratio, periodic temperatures too: {whole:.1f} s")
        asked = Path(folder) / "cycle.toml"
        asked.write_text(saved(cycle), encoding="utf-8")
        words = ["search", "--requirement", str(asked), "--catalog", str(path), "--json"]
        code = f"import sys; from motorfolio.catalog.cli import main; sys.exit(main({words!r}))"
        before = os.times()
        start = time.perf_counter()
        subprocess.run([sys.executable, "-c", code], check=True, capture_output=True)
        wall, after = time.perf_counter() - start, os.times()
        cpu = after.children_user + after.children_system
        cpu -= before.children_user + before.children_system
        print(f"cold process, the same cycle: {wall:.1f} s, {cpu:.1f} s of processor (at most 10)")


if __name__ == "__main__":
    main()
