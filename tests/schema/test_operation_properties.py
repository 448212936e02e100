"""What must hold for any motor and duty: monotonies, scaling laws, invariances."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from motorfolio.schema.operation.judge import (
    LIMITS,
    Cycle,
    Demand,
    Drive,
    Gearing,
    Supply,
    Surroundings,
    Utilisations,
    Verdict,
    judge,
    judge_worst,
)
from motorfolio.schema.operation.machines import Machines

from .made_up_motors import demand, motors, moving

seeds = st.integers(0, 10_000)
RATIOS = np.array([1.5, 8.0, 30.0])
some = settings(max_examples=20, deadline=None)


def thermal_motors(seed: int) -> Machines:
    """By thirds: with thermal time constants, without, and rated by a current only."""
    machines = motors(30, seed)
    machines.thermal_time_constant_winding[:10] = 4.0
    machines.thermal_time_constant_housing[:10] = 90.0
    for name in ("winding_housing", "housing_ambient"):
        getattr(machines, f"thermal_resistance_{name}")[20:] = np.nan
    machines.nominal_current[20:] = 3.0
    machines.maximum_winding_temperature[25:] = np.nan
    return machines


def same(first: Utilisations, second: Utilisations, rel: float = 1e-9) -> None:
    """All utilisations agree. At the edge of runaway a rounding decides between two worlds, both
    far beyond any limit: those cases are left out."""
    calm = ~(np.fmax(first.thermal, second.thermal) > 2)
    assert calm.any()
    assert first.runaway[calm].tolist() == second.runaway[calm].tolist()
    for name in LIMITS:
        expected = pytest.approx(getattr(second, name)[calm], rel=rel, nan_ok=True)
        assert getattr(first, name)[calm] == expected, name


def never_worse(before: np.ndarray, after: np.ndarray) -> None:
    assert not ((before == Verdict.FEASIBLE) & (after != Verdict.FEASIBLE)).any()


@some
@given(seeds, st.floats(1.0, 3.0))
def test_more_supply_never_rejects(seed: int, factor: float) -> None:
    machines = thermal_motors(seed)
    low = demand(seed, supply=Supply(20.0, 0.95, 0.5))
    high = replace(low, supply=Supply(20.0 * factor, 0.95, 0.5))
    before, after = judge(machines, low, RATIOS), judge(machines, high, RATIOS)
    assert (after.voltage <= before.voltage).all()
    never_worse(before.verdict(0.1), after.verdict(0.1))


@some
@given(seeds, st.floats(1.0, 3.0), st.sampled_from(["dc", "peak", "rms"]))
def test_more_drive_current_never_rejects(seed: int, factor: float, convention: str) -> None:
    machines = thermal_motors(seed)
    low = demand(seed, drive=Drive(5.0, 3.0, convention))
    high = replace(low, drive=Drive(5.0 * factor, 3.0 * factor, convention))
    before, after = judge(machines, low, RATIOS), judge(machines, high, RATIOS)
    never_worse(before.verdict(), after.verdict())


@some
@given(seeds, st.floats(0.0, 60.0))
def test_cooler_ambient_never_raises_the_thermal_utilisation(seed: int, less: float) -> None:
    machines = thermal_motors(seed)
    warm = demand(seed, surroundings=Surroundings(40.0))
    cool = replace(warm, surroundings=Surroundings(40.0 - less))
    before, after = judge(machines, warm, RATIOS), judge(machines, cool, RATIOS)
    assert not (after.runaway & ~before.runaway).any()
    known = ~np.isnan(before.thermal)
    assert known.any()
    assert (after.thermal[known] <= before.thermal[known] * (1 + 1e-4)).all()


@some
@given(seeds, st.floats(0.2, 5.0))
def test_another_winding_of_the_frame(seed: int, turns: float) -> None:
    """Turns × k: Km × k, Ra and La × k², supply × k, currents ÷ k change no utilisation, with
    PWM ripple, too."""
    machines = thermal_motors(seed)
    rewound = machines.scaled(turns, turns**2)
    rewound.armature_inductance = machines.armature_inductance * turns**2
    rewound.nominal_current = machines.nominal_current / turns
    low = demand(seed, supply=Supply(48.0, 1.0, 0.0, 20e3), drive=Drive(20.0, 8.0))
    other = replace(
        low,
        supply=Supply(48.0 * turns, 1.0, 0.0, 20e3),
        drive=Drive(20.0 / turns, 8.0 / turns),
    )
    same(judge(machines, low, RATIOS), judge(rewound, other, RATIOS), rel=1e-6)


@some
@given(seeds, st.floats(0.1, 10.0))
def test_slower_and_stronger_behind_a_gear(seed: int, factor: float) -> None:
    """Load speeds ÷ k, torques × k, load inertia × k², ratio × k: the motor sees no difference."""
    machines, first = thermal_motors(seed), demand(seed)
    c = first.cycle
    cycle = Cycle(
        c.duration,
        c.speed_start / factor,
        c.speed_end / factor,
        c.torque_start * factor,
        c.torque_end * factor,
    )
    g = first.gearing
    second = replace(
        first,
        cycle=cycle,
        gearing=Gearing(g.load_inertia * factor**2, g.efficiency, g.inertia),
    )
    same(judge(machines, first, RATIOS), judge(machines, second, RATIOS * factor), rel=1e-6)


@some
@given(seeds, st.floats(0.05, 0.95), st.integers(0, 7))
def test_a_segment_split_in_two_changes_nothing(seed: int, at: float, which: int) -> None:
    machines, first = thermal_motors(seed), demand(seed, supply=Supply(48.0, 1.0, 0.0, 15e3))
    c = first.cycle

    def split(start: np.ndarray, end: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        middle = start[which] + (end - start)[which] * at
        return np.insert(start, which + 1, middle), np.insert(end, which, middle)

    duration = np.insert(c.duration, which, c.duration[which] * at)
    duration[which + 1] = c.duration[which] * (1 - at)
    cycle = Cycle(
        duration, *split(c.speed_start, c.speed_end), *split(c.torque_start, c.torque_end)
    )
    second = replace(first, cycle=cycle)
    # The ripple's mean over a segment is that of five nodes, which the split moves; above the
    # supply, where nothing is feasible, it stops with a kink. At the edge of runaway a millionth
    # decides between two worlds, both far beyond any limit.
    a, b = (judge(machines, asked, RATIOS, periodic=False) for asked in (first, second))
    edge = np.fmax(a.thermal, b.thermal) > 2
    within = (a.voltage < 1) & ~edge & ~(a.runaway | b.runaway)
    assert within.any()
    assert a.rms_current[within] == pytest.approx(b.rms_current[within], rel=1e-4)
    still = replace(first, supply=Supply(48.0)), replace(second, supply=Supply(48.0))
    first_, second_ = (judge(machines, asked, RATIOS, periodic=False) for asked in still)
    same(first_, second_, rel=1e-7)
    # The periodic peak follows the temperature by finite cuts.
    same(*(judge(machines, asked, RATIOS) for asked in still), rel=2e-3)


@some
@given(seeds)
def test_mirrored_motion_changes_nothing(seed: int) -> None:
    machines, first = thermal_motors(seed), demand(seed)
    c = first.cycle
    mirrored = Cycle(c.duration, -c.speed_start, -c.speed_end, -c.torque_start, -c.torque_end)
    second = replace(first, cycle=mirrored)
    same(judge(machines, first, RATIOS), judge(machines, second, RATIOS))


@some
@given(seeds)
def test_time_reversal_without_losses(seed: int) -> None:
    """Run backward in time and space, ω'(t) = −ω(−t), accelerations stay: without friction and
    gear losses every torque recurs, and so do currents, heat, and the voltage at U → Ra·Ia − Km·ω
    of the opposite torque."""
    machines = motors(20, seed, coulomb_torque=0.0, viscous_damping=0.0)
    first = demand(seed, gearing=Gearing(0.05))
    c = first.cycle
    backward = Cycle(
        c.duration[::-1],
        -c.speed_end[::-1],
        -c.speed_start[::-1],
        c.torque_end[::-1],
        c.torque_start[::-1],
    )
    a = judge(machines, first, RATIOS)
    b = judge(machines, replace(first, cycle=backward), RATIOS)
    for name in ("peak_current", "thermal", "peak_torque", "speed"):
        expected = pytest.approx(getattr(a, name), rel=1e-9, nan_ok=True)
        assert getattr(b, name) == expected


@some
@given(seeds)
def test_order_of_points_changes_no_mean(seed: int) -> None:
    rng = np.random.default_rng(seed)
    points = rng.uniform([-1, -10, 0.1], [2, 10, 3], (6, 3))
    machines = motors(20, seed)
    a, b = (
        judge(machines, demand(cycle=Cycle.from_points(map(tuple, p))), RATIOS)
        for p in (points, points[::-1])
    )
    same(a, b)


@some
@given(seeds)
def test_worst_case_is_no_better_than_nominal(seed: int) -> None:
    machines, asked = thermal_motors(seed), demand(seed)
    nominal = judge(machines, asked, RATIOS)
    worst, corner = judge_worst(machines, asked, RATIOS, tolerance=0.1)
    assert not (nominal.runaway & ~worst.runaway).any()
    for name in ("peak_current", "thermal", "peak_torque", "speed"):
        known = ~np.isnan(getattr(worst, name)) & ~worst.runaway  # there only the cold is left
        assert (getattr(worst, name)[known] >= getattr(nominal, name)[known] * (1 - 1e-9)).all()
    # Where a resistance enters the heat at all.
    thermal = worst.limiting[:20] == LIMITS.index("thermal")
    corner = corner[:20]
    assert (corner[thermal] == 1).all()  # Km low, Ra high


def test_long_and_short_cycles_frame_the_peak() -> None:
    """The periodic peak goes from that of the mean loss to that of the worst stretch alone."""
    machines = motors(
        40, 3, thermal_time_constant_winding=20.0, thermal_time_constant_housing=400.0
    )
    means, peaks = [], []
    for period in (1e-3, 1.0, 30.0, 3000.0):
        # The same torques and speeds; without inertia the period changes none of them.
        asked = demand(cycle=moving(1, period), gearing=Gearing(0.0))
        light = replace_inertia(machines)
        means.append(judge(light, asked, 8.0, periodic=False).winding_temperature)
        peaks.append(judge(light, asked, 8.0).winding_temperature)
    assert peaks[0] == pytest.approx(means[0], nan_ok=True)
    for earlier, later in pairwise(peaks):
        known = ~np.isnan(later)
        assert (later[known] >= earlier[known] - 1e-3).all()
    assert (peaks[-1] > means[-1] + 5).sum() > 10


def replace_inertia(machines: Machines) -> Machines:
    return Machines(**{**machines.columns(), "rotor_inertia": np.zeros(len(machines))})


@pytest.mark.parametrize(
    ("rows", "message"),
    [
        (([0, 1, 0.5], [0, 1, 0], [0, 0, 0]), "time goes backward in row 3"),
        (([0, 1, 1, 2], [0, 1, 2, 0], [0, 0, 0, 0]), "speed steps at 1 s"),
        (([0, 1], [0, 1], [0, 0]), "ends at 1 rad/s"),
        (([0, 0], [1, 1], [0, 1]), "lasts no time"),
        (([0], [1], [0]), "fewer than two rows"),
        (([0, 1], [0, np.nan], [0, 0]), "row 2 has no finite speed"),
    ],
)
def test_cycles_that_cannot_be_run(rows: tuple[list[float], ...], message: str) -> None:
    from motorfolio.schema.operation.cycle import CycleError

    with pytest.raises(CycleError, match=message):
        Cycle.from_rows(*rows)


def test_zero_duration_is_refused() -> None:
    from motorfolio.schema.operation.cycle import CycleError

    with pytest.raises(CycleError, match="segment 2 lasts no time"):
        Cycle.from_points([(1.0, 1.0, 1.0), (1.0, 1.0, 0.0)])
    with pytest.raises(ValueError, match="above 0"):
        judge(motors(1), Demand(Cycle.from_points([(1.0, 1.0, 1.0)])), 0.0)
