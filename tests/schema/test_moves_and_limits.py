"""Axes and moves by kinematics, limits by their definitions, friction from a no-load run."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from motorfolio.schema.batch import MAGNETS, MODEL_BASES, blank_batch, empty_figures
from motorfolio.schema.operation.axis import GRAVITY, Axis
from motorfolio.schema.operation.cycle import Cycle, CycleError
from motorfolio.schema.operation.demand import Demand, Drive, Gearing, Supply
from motorfolio.schema.operation.judge import judge
from motorfolio.schema.operation.limits import LIMITS, Utilisations, Verdict
from motorfolio.schema.operation.machines import Machines, armature_amperes, coulomb_torque
from motorfolio.schema.operation.moves import MoveError, move, one_after_the_other, ramps, rest

# ---- moves


@pytest.mark.parametrize("profile", ["trapezoidal", "s-curve"])
def test_two_of_three_give_the_third(profile: str) -> None:
    """1.2 m at 0.6 m/s with 2 m/s²: v²/a of way in the ramps, s/v + v/a of time (kinematics)."""
    expected = pytest.approx((0.6, 0.3, 1.7))
    for told in ({"top_speed": 0.6, "acceleration": 2.0}, {"time": 2.3, "top_speed": 0.6},
                 {"time": 2.3, "acceleration": 2.0}):  # fmt: skip
        found = ramps(1.2, profile=profile, **told)
        assert (found.top, found.ramp, found.cruise) == expected
        assert found.time == pytest.approx(2.3)


def test_a_short_way_never_reaches_the_top_speed() -> None:
    """Of v = √(a·s) the half goes up, the half down."""
    found = ramps(0.5, profile="trapezoidal", top_speed=10.0, acceleration=2.0)
    assert (found.top, found.ramp) == pytest.approx((1.0, 0.5))
    assert found.cruise == pytest.approx(0.0, abs=1e-12)


def test_edges_of_what_can_be_moved() -> None:
    """1 m in 2 s: 2·√(s/a) at 1 m/s² exactly, 1 m/s at most twice the mean."""
    least = ramps(1.0, profile="trapezoidal", time=2.0, acceleration=1.0)
    assert (least.top, least.ramp, least.cruise) == pytest.approx((1.0, 1.0, 0.0), abs=1e-6)
    steep = ramps(1.0, profile="trapezoidal", time=2.0, top_speed=1.0)
    assert (steep.ramp, steep.cruise) == pytest.approx((1.0, 0.0), abs=1e-9)
    with pytest.raises(MoveError, match="at least 2 s"):
        ramps(1.0, profile="trapezoidal", time=1.99, acceleration=1.0)
    with pytest.raises(MoveError, match=r"above 0\.5 m/s and at most 1 m/s, not 0\.5 m/s"):
        ramps(1.0, profile="trapezoidal", time=2.0, top_speed=0.5)
    with pytest.raises(MoveError, match=r"above 0\.5 m/s and at most 1 m/s, not 1\.01 m/s"):
        ramps(1.0, profile="trapezoidal", time=2.0, top_speed=1.01)


@pytest.mark.parametrize(
    ("profile", "told", "message"),
    [
        ("trapezoidal", {}, "two of"),
        ("trapezoidal", {"top_speed": 1.0}, "two of"),
        ("trapezoidal", {"time": 1.0, "top_speed": 1.0, "acceleration": 1.0}, "two of"),
        ("s-curve", {}, "two of"),
        ("s-curve", {"acceleration": 1.0}, "two of"),
        ("s-curve", {"time": 1.0, "top_speed": 1.0, "acceleration": 1.0}, "two of"),
        ("thirds", {}, "either time or top_speed"),
        ("thirds", {"acceleration": 1.0}, "either time or top_speed"),
        ("triangular", {"time": 1.0, "acceleration": 1.0}, "either time or top_speed"),
    ],
)
def test_too_much_or_too_little_told(profile: str, told: dict, message: str) -> None:
    with pytest.raises(MoveError, match=message):
        ramps(1.0, profile=profile, **told)


@pytest.mark.parametrize(("profile", "share"), [("thirds", 1 / 3), ("triangular", 1 / 2),
                                                ("s-curve", 1 / 3)])  # fmt: skip
def test_one_figure_is_enough_for_a_known_shape(profile: str, share: float) -> None:
    """s = v·t·(1 − share): (2/3)·v·t and v·t/2."""
    by_time = ramps(3.0, profile=profile, time=2.0)
    assert by_time.top == pytest.approx(3.0 / 2.0 / (1 - share))
    assert by_time.ramp == pytest.approx(2.0 * share)
    assert by_time.time == pytest.approx(2.0)
    by_speed = ramps(3.0, profile=profile, top_speed=by_time.top)
    assert (by_speed.ramp, by_speed.cruise) == pytest.approx(
        (by_time.ramp, by_time.cruise), abs=1e-12
    )


def test_an_s_curve_bends_evenly() -> None:
    """Speed at the end of the first bend is j/(2·(1 − j)) of the top for j = 1/4 of the ramp: 1/6;
    in the middle of the ramp a half; up and down mirror (integral of the trapezium)."""
    cycle = move(2.0, profile="s-curve", time=3.0, effort=5.0)
    t = np.concatenate([[0], np.cumsum(cycle.duration)])
    v = np.concatenate([cycle.speed_start, [0.0]])
    assert np.interp([0.25, 0.5, 0.75, 1.0], t, v) == pytest.approx([1 / 6, 0.5, 5 / 6, 1.0])
    assert np.interp(3.0 - t, t, v) == pytest.approx(v, abs=1e-12)
    assert (cycle.torque_start == 5.0).all()
    assert (np.diff(v[t <= 0.25]) > 0).all()
    assert (cycle.speed_end[:-1] == cycle.speed_start[1:]).all()
    fine = np.linspace(0, 0.25, 50)  # the parabola, to the width of the steps it is drawn in
    assert np.interp(fine, t, v) == pytest.approx(fine**2 / (2 * 0.25 * 0.75), abs=4e-3)


def test_a_way_back_runs_against_the_same_effort() -> None:
    cycle = one_after_the_other([move(0.3, time=1.0, effort=7.0), rest(0.5, 2.0),
                                 move(-0.3, time=1.0, effort=7.0)])  # fmt: skip
    assert cycle.torque_start.tolist() == [7, 7, 7, 2, -7, -7, -7]
    assert cycle.torque_end.tolist() == cycle.torque_start.tolist()
    assert cycle.period == pytest.approx(2.5)
    way = (cycle.speed_start + cycle.speed_end) / 2 * cycle.duration
    assert way.sum() == pytest.approx(0, abs=1e-12)
    assert np.abs(way).sum() == pytest.approx(0.6)


# ---- axes


def test_slope_weight_and_what_always_pulls() -> None:
    """m·g·sin φ on a slope (CGPM 1901: 9.80665 m/s²), a counterweight on its rope in full."""
    axis = Axis(travel=0.1, mass=10, counterweight=2, slope=math.radians(30), steady=3.0)
    assert axis.gravity == pytest.approx(9.80665 * (10 * 0.5 - 2))
    assert axis.holding == pytest.approx(axis.gravity + 3)
    assert axis.reflected_inertia == pytest.approx(12 * 0.01)
    assert axis.lever == 0.1
    rotary = Axis(inertia=0.2, steady=1.5, friction=0.5)
    assert (rotary.lever, rotary.reflected_inertia, rotary.gravity) == (1.0, 0.2, 0.0)
    turned = rotary.at_shaft(Cycle.from_points([(2, 10, 1), (2, -10, 1), (2, 0, 1)]))
    assert turned.torque_start.tolist() == [4.0, 3.0, 3.5]
    assert turned.speed_start.tolist() == [10, -10, 0]


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 10_000))
def test_power_through_a_screw(seed: int) -> None:
    """At every instant the shaft gives the axis's power over η, or takes it times η; in between it
    is the sum of what weight, friction, effort and the mass's acceleration ask."""
    rng = np.random.default_rng(seed)
    v = np.concatenate([[0], rng.uniform(-1, 1, 4), [0]])
    f = rng.uniform(-200, 200, 6)
    t = np.concatenate([[0], np.cumsum(rng.uniform(0.2, 1, 5))])
    axis = Axis(travel=0.01, mass=20, counterweight=5, slope=0.5, friction=30, steady=10,
                efficiency=0.6)  # fmt: skip
    shaft = axis.at_shaft(Cycle.from_rows(t, v, f))
    assert shaft.period == pytest.approx(t[-1])
    begins = np.concatenate([[0], np.cumsum(shaft.duration)])
    for at in rng.uniform(0, t[-1], 60):
        n = int(np.searchsorted(t, at) - 1)
        speed = np.interp(at, t, v)
        push = np.interp(at, t, f) + GRAVITY * (20 * math.sin(0.5) - 5) + 10
        push += 30 * np.sign(speed) + 25 * (v[n + 1] - v[n]) / (t[n + 1] - t[n])
        force = push * (1 / 0.6 if push * speed > 0 else 0.6)
        k = int(np.searchsorted(begins, at) - 1)
        share = (at - begins[k]) / shaft.duration[k]
        torque = shaft.torque_start[k] + (shaft.torque_end[k] - shaft.torque_start[k]) * share
        assert torque == pytest.approx(force * 0.01, rel=1e-9, abs=1e-9)
        turning = shaft.speed_start[k] + (shaft.speed_end[k] - shaft.speed_start[k]) * share
        assert turning == pytest.approx(speed / 0.01, rel=1e-9, abs=1e-9)
    assert axis.separate_inertia == 0.0
    assert Axis(mass=3.0, travel=0.5).separate_inertia == 0.75


# ---- cycles


@pytest.mark.parametrize(
    ("columns", "message"),
    [
        (([1, 2], [0, 1], [1, 0], [0, math.nan], [0, 0]), "segment 2 has no finite torque_start"),
        (([1, 2], [0, 1], [1, 0], [math.inf, math.inf], [0, 0]), "segment 1 has no finite"),
        (([1, 2], [0, 1, 2], [1, 0], [0, 0], [0, 0]), "speed_start must hold one number"),
        (([1, 0, -1], [0] * 3, [0] * 3, [0] * 3, [0] * 3), "segment 2 lasts no time"),
        (([], [], [], [], []), "no segment"),
    ],
)
def test_segments_that_cannot_be(columns: tuple, message: str) -> None:
    with pytest.raises(CycleError, match=message):
        Cycle(*columns)


@pytest.mark.parametrize(
    ("rows", "message"),
    [
        (([0, 1, 2], [0, 1], [0, 0, 0]), "equal length"),
        (([[0, 1]], [[0, 1]], [[0, 0]]), "must be columns"),
        (([0, math.nan, math.inf], [0, 1, 0], [0, 0, 0]), "row 2 has no finite time"),
        (([0, 1, 2], [0, 1, 0], [0, 0, math.nan]), "row 3 has no finite torque"),
        (([0, 2, 1, 0.5], [0, 1, 1, 0], [0] * 4), r"row 3 \(2 s to 1 s\)"),
        (([0, 1, 1, 2], [0, 1, 3, 0], [0] * 4), r"steps at 1 s \(row 3\)"),
    ],
)
def test_rows_that_cannot_be(rows: tuple, message: str) -> None:
    with pytest.raises(CycleError, match=message):
        Cycle.from_rows(*rows)


def test_a_cycle_in_numbers() -> None:
    """Gram matrix and mean speed against a mean over a fine grid of time."""
    cycle = Cycle.from_rows([0, 1, 3, 4], [0, 8, -4, 0], [2, -1, 3, 3])
    assert cycle.period == 4
    pieces = cycle.pieces(0.5, 0.8)
    assert pieces.period == pytest.approx(4)
    n = 40_000
    s = (np.arange(n) + 0.5) / n
    grid = pieces.basis[:, :1] + (pieces.basis[:, 1:] - pieces.basis[:, :1]) * s[:, None]
    weight = pieces.duration[:, None] / n / 4
    for i in range(4):
        for j in range(4):
            mean = (grid[:, :, i] * grid[:, :, j] * weight).sum()
            assert pieces.gram[i, j] == pytest.approx(mean, rel=1e-6, abs=1e-9)
    assert pieces.mean_speed == pytest.approx((np.abs(grid[:, :, 3]) * weight).sum(), rel=1e-6)
    assert not pieces.is_constant
    assert Cycle.from_points([(1, 2, 3), (1, 2, 1)]).pieces().is_constant
    assert not Cycle.from_points([(1, 2, 3), (1.1, 2, 1)]).pieces().is_constant


# ---- motors and limits


def test_friction_of_a_motor_that_runs_free() -> None:
    """Km·I0 is what friction takes at no load; of it b·n0 is viscous, n0 = (U − Ra·I0)/Km. By
    hand: 0.03·0.12 = 3.6 mN·m; at 795.2 rad/s and 1 µN·m·s of it 0.7952 mN·m."""
    assert coulomb_torque(np.nan, 0.03, 0.12)[()] == pytest.approx(3.6e-3)
    assert coulomb_torque(np.nan, 0.03, 0.12, 0.0)[()] == pytest.approx(3.6e-3)
    found = coulomb_torque(np.nan, 0.03, 0.12, 1e-6, 1.2, 24.0)
    assert found[()] == pytest.approx(3.6e-3 - 0.7952e-3)
    assert coulomb_torque(0.002, 0.03, 0.12, 1e-6, 1.2, 24.0)[()] == 0.002
    assert coulomb_torque(np.nan, 0.03, 0.12, 1e-4, 1.2, 24.0)[()] == 0.0  # more than there is
    assert np.isnan(coulomb_torque(np.nan, 0.03, np.nan))
    assert np.isnan(coulomb_torque(np.nan, 0.03, 0.12, 1e-6))  # the share of b is unknown


def test_drive_amperes() -> None:
    """√(3/2) of the rms, √3/2 of the peak (power-invariant transformation); block: rms in two of
    three phases, as the table of signatures has it."""
    codes = np.array([0, 1, 2], np.int8)
    assert armature_amperes(2.0, "dc", codes).tolist() == [2, 2, 2]
    assert armature_amperes(2.0, "peak", codes) == pytest.approx([2, 2, math.sqrt(3)])
    assert armature_amperes(2.0, "rms", codes) == pytest.approx([2, math.sqrt(6), math.sqrt(6)])


def test_columns_of_machines() -> None:
    m = Machines.of(torque_constant=[1.0, 2.0], commutation=[0, 2])
    assert len(m) == 2
    assert m.commutation.tolist() == [0, 2]
    assert np.isnan(m.armature_resistance).all()
    assert len(Machines.of()) == 1
    assert Machines.of().commutation.tolist() == [0]
    with pytest.raises(TypeError, match="colour, size"):
        Machines.of(size=1.0, colour=2.0, torque_constant=1.0)
    corner = m.scaled([0.9, 1.1], 2.0)
    assert corner.torque_constant == pytest.approx([0.9, 2.2])
    assert m.torque_constant.tolist() == [1.0, 2.0]


def test_what_a_supply_gives() -> None:
    assert Supply(48.0, 0.9, 1.5).available == pytest.approx(48 * 0.9 - 1.5)
    assert Supply().available is None


def utilisations(**given: list[float]) -> Utilisations:
    """Two motors of which only what is given is known."""
    n = len(next(iter(given.values())))
    names = [name for name in Utilisations.__dataclass_fields__ if name != "needed"]
    flags = ("runaway", "ripple_unknown", "friction_assumed")
    columns = {name: np.zeros(n, bool) if name in flags else np.full(n, np.nan) for name in names}
    columns |= {name: np.array(value) for name, value in given.items()}
    return Utilisations(**columns, needed=("voltage", "thermal"))


def test_limits_by_definition() -> None:
    """The largest of what is known, by its name; one that is needed and unknown leaves it open; a
    known one above rejects all the same; runaway is beyond everything."""
    u = utilisations(
        voltage=[0.5, 0.9, np.nan, np.nan, 0.2, 0.3],
        peak_torque=[0.7, 0.2, 1.2, np.nan, 0.1, np.nan],
        thermal=[0.6, 0.3, 0.1, np.nan, np.nan, 0.3],
        runaway=[False, False, False, False, True, False],
    )
    assert u.largest == pytest.approx([0.7, 0.9, 1.2, np.nan, np.inf, 0.3], nan_ok=True)
    names = [LIMITS[i] if i >= 0 else None for i in u.limiting]
    assert names == ["peak_torque", "voltage", "peak_torque", None, "thermal", "voltage"]
    assert u.lacking.tolist() == [False, False, True, True, False, False]
    F, U, R = Verdict.FEASIBLE, Verdict.UNKNOWN, Verdict.REJECTED
    assert u.verdict().tolist() == [F, F, R, U, R, F]
    assert u.verdict(0.1).tolist() == [F, F, R, U, R, F]
    assert u.verdict(0.25).tolist() == [F, R, R, U, R, F]
    one = utilisations(voltage=[1.0], thermal=[0.1])
    assert one.verdict().tolist() == [F]


def test_worst_joined_and_put() -> None:
    a = utilisations(voltage=[0.5, 0.9], thermal=[0.5, 0.6], runaway=[False, False])
    b = utilisations(voltage=[0.6, np.nan], thermal=[0.4, 0.7], runaway=[True, False])
    joined = Utilisations.joined([a, b])
    assert joined.voltage.tolist()[:3] == [0.5, 0.9, 0.6]
    assert joined.reshape(2, 2).runaway.tolist() == [[False, False], [True, False]]
    a_, b_ = joined.take(slice(0, 2)), joined.take([2, 3])
    worst = Utilisations.worst([a_, b_])
    assert worst.voltage == pytest.approx([0.6, np.nan], nan_ok=True)
    assert worst.thermal == pytest.approx([np.nan, 0.7], nan_ok=True)
    assert worst.runaway.tolist() == [True, False]
    joined.put([0], b.take([1]))
    assert np.isnan(joined.voltage[0])
    assert joined.thermal[0] == 0.7
    assert joined.needed == ("voltage", "thermal")


def test_what_the_judge_takes_from_drive_and_supply() -> None:
    """1 A of armature current; a bridge that gives nothing is beyond any voltage."""
    m = Machines.of(torque_constant=1.0, armature_resistance=1.0, peak_current=[4.0, np.nan],
                    commutation=2, peak_torque=10.0, maximum_speed=50.0, pole_pairs=2,
                    armature_inductance=1e-9)  # fmt: skip
    cycle = Cycle.from_points([(1.0, 10.0, 1.0)])
    found = judge(m, Demand(cycle, drive=Drive(2.0, 0.5, "rms")))
    assert found.peak_current[:, 0] == pytest.approx([1 / math.sqrt(6)] * 2)
    assert found.continuous_current[:, 0] == pytest.approx([1 / math.sqrt(1.5) / 0.5] * 2)
    assert found.peak_torque[:, 0] == pytest.approx([0.1, 0.1])
    assert found.speed[:, 0] == pytest.approx([0.2, 0.2])
    assert found.needed == ("peak_current", "continuous_current", "thermal")
    other = judge(m, Demand(cycle, drive=Drive(8.0, 0.5, "dc", "peak")))
    assert other.peak_current[:, 0] == pytest.approx([1 / 4, 1 / 8])
    assert other.continuous_current[:, 0] == pytest.approx([2 / math.sqrt(3) / 0.5] * 2)
    dead = judge(m, Demand(cycle, supply=Supply(1.0, 1.0, 1.0)))
    assert np.isinf(dead.voltage).all()
    assert judge(m, Demand(cycle, supply=Supply(22.0))).voltage[:, 0] == pytest.approx([0.5, 0.5])
    geared = judge(m, Demand(cycle, Gearing(0.0, 0.5)), 2.0)
    assert geared.peak_torque_value[:, 0] == pytest.approx([1.0, 1.0])


# ---- batches


def test_magnets_weaken_in_the_order_of_the_materials() -> None:
    """Reversible temperature coefficients of remanence in per cent per kelvin: hard ferrite −0.20,
    SmCo5 −0.04 (Modelica Standard Library, Magnetic.FluxTubes, hard magnetic materials); sintered
    NdFeB −0.09 to −0.12, AlNiCo about −0.02 (magnet makers' tables)."""
    expected = {"ferrite": -0.20, "ndfeb": -0.11, "smco": -0.04, "alnico": -0.02, "unknown": 0.0}
    assert {name: 100 * value for name, value in MAGNETS.items()} == pytest.approx(expected)


def test_a_batch_starts_from_nothing() -> None:
    batch = blank_batch(["A", "B"], maker="Muster")
    assert len(batch) == 2
    assert batch.maker == ["Muster", "Muster"]
    assert {MODEL_BASES[i] for i in (*batch.commutation_basis, *batch.magnet_basis)} == {"assumed"}
    assert batch.reference_temperature.tolist() == [25.0, 25.0]
    assert np.isnan(batch.value("torque_constant")).all()
    column = empty_figures(3)
    column.value[:] = [1, 2, 3]
    column.text[:] = ["1", "2", "3"]
    column.qualifiers = {0: "at most", 2: "about"}
    batch.figures["mass"] = taken = column.take([2, 1])
    assert taken.value.tolist() == batch.value("mass").tolist() == [3, 2]
    assert taken.text == ["3", "2"]
    assert taken.qualifiers == {0: "about"}
    assert taken.row.tolist() == [0, 0]
    assert np.isnan(empty_figures(1).low).all()
