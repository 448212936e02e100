"""What the judge says of one motor at one load, short cases in numbers worked by hand."""

from __future__ import annotations

import math
from dataclasses import FrozenInstanceError

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.operation import machines as columns
from motorfolio.schema.operation.axis import Axis
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Drive, Gearing, Supply, Surroundings
from motorfolio.schema.operation.judge import judge, judge_cases, judge_worst
from motorfolio.schema.operation.limits import LIMITS, Utilisations
from motorfolio.schema.operation.machines import Machines

NAN = math.nan


def held(torque: float, speed: float) -> Cycle:
    return Cycle.from_points([(torque, speed, 1.0)])


def machines(**given) -> Machines:
    return Machines.of(**{"torque_constant": 0.5, "armature_resistance": 2.0, **given})


def test_a_geared_point_in_numbers() -> None:
    """6 N·m at 10 rad/s over a ratio of 4 with η = 0.75: 2 N·m at 40 rad/s, and friction of
    0.1 N·m + 0.01·40 on top: 2.5 N·m, 5 A, 10 V + 20 V, 50 W of copper loss."""
    m = machines(coulomb_torque=0.1, viscous_damping=0.01, peak_torque=8.0, maximum_speed=160.0,
                 peak_current=20.0)  # fmt: skip
    demand = Demand(held(6.0, 10.0), Gearing(0.0, 0.75), Supply(70.0, 0.9, 3.0), Drive(25.0, 10.0))
    found = judge(m, demand, 4.0)
    expected = {
        "peak_torque_value": 2.0, "peak_speed": 40.0, "peak_current_value": 5.0, "rms_current": 5.0,
        "peak_voltage": 30.0, "copper_loss": 50.0, "voltage": 0.5, "speed": 0.25,
        "peak_torque": 0.25, "peak_current": 0.25, "continuous_current": 0.5, "ripple_current": 0.0,
    }  # fmt: skip
    for name, value in expected.items():
        assert getattr(found, name)[0, 0] == pytest.approx(value, rel=1e-12), name
    assert np.isnan(found.thermal[0, 0])
    assert not found.friction_assumed[0, 0]
    assert found.needed == ("voltage", "peak_current", "continuous_current", "thermal")
    assert LIMITS[found.limiting[0, 0]] in ("voltage", "continuous_current")
    assert judge(machines(), demand, 4.0).friction_assumed[0, 0]


def test_a_ramp_in_numbers() -> None:
    """From 0 to 30 rad/s in 3 s and back over a ratio of 2, load 0.4 kg·m², rotor 0.1 and gear 0.05
    kg·m²: ±10 rad/s² of the load ask 2 N·m + 3 N·m of the motor; rms the same; 5 N·m are 10 A."""
    cycle = Cycle([3.0, 3.0], [0.0, 30.0], [30.0, 0.0], [0.0, 0.0], [0.0, 0.0])
    m = machines(rotor_inertia=0.1)
    found = judge(m, Demand(cycle, Gearing(0.4, 1.0, 0.05)), 2.0)
    assert found.peak_current_value[0, 0] == pytest.approx(10.0)
    assert found.rms_current[0, 0] == pytest.approx(10.0)
    assert found.peak_torque_value[0, 0] == pytest.approx(5.0)
    assert found.peak_voltage[0, 0] == pytest.approx(10 * 2 + 0.5 * 60)
    # friction turns the torque: 5 + 1 up, −5 + 1 down, mean square (36 + 16)/2
    rubbed = judge(machines(rotor_inertia=0.1, coulomb_torque=1.0), Demand(cycle, Gearing(0.4, 1.0,
                   0.05)), 2.0)  # fmt: skip
    assert rubbed.rms_current[0, 0] == pytest.approx(math.sqrt(26) / 0.5)
    # viscous: 5 + 0.1·ω up, −5 + 0.1·ω down, ω from 0 to 60: 25 + 0.01·1200
    thick = judge(machines(rotor_inertia=0.1, viscous_damping=0.1), Demand(cycle, Gearing(0.4, 1.0,
                  0.05)), 2.0)  # fmt: skip
    assert thick.rms_current[0, 0] == pytest.approx(math.sqrt(25 + 12) / 0.5)
    assert thick.peak_current_value[0, 0] == pytest.approx(11 / 0.5)


def test_a_cancelled_torque_is_nought() -> None:
    """A load that pushes just as hard as the rotor's inertia asks leaves no current, whatever the
    digits' rounding makes of a square that is a difference."""
    ratio = np.linspace(1.0, 9.0, 200)
    cycle = Cycle([0.7, 0.7], [0.0, 2.1], [2.1, 0.0], [-0.3, 0.3], [-0.3, 0.3])
    m = machines(torque_constant=np.full(200, 0.5), rotor_inertia=0.1 / ratio**2)
    found = judge_cases(m, Demand(cycle), np.arange(200), ratio)
    assert found.rms_current == pytest.approx(np.zeros(200), abs=1e-6)
    assert found.copper_loss == pytest.approx(np.zeros(200), abs=1e-6)


def test_ratios_in_any_shape() -> None:
    m = machines(torque_constant=[0.5, 1.0, 2.0])
    demand = Demand(held(6.0, 10.0))
    for ratios in (2.0, [2.0], [2.0, 3.0], [2.0, 3.0, 5.0], [[2.0, 3.0], [4.0, 5.0], [6.0, 7.0]]):
        found = judge(m, demand, ratios).peak_current_value
        table = np.broadcast_to(np.atleast_1d(ratios), (3, np.atleast_1d(ratios).shape[-1]))
        assert found == pytest.approx(6 / table / m.torque_constant[:, None])
    for wrong in (0.0, -1.0, [2.0, 0.0]):
        with pytest.raises(ValueError, match="above 0"):
            judge(m, demand, wrong)
    for wrong in (np.ones((2, 3)), np.ones((1, 3)), np.ones((4, 2))):
        with pytest.raises(ValueError, match="one row"):
            judge(m, demand, wrong)
    some = judge_cases(m, demand, np.array([2, 0]), np.array([3.0, 1.0]))
    assert some.peak_current_value == pytest.approx([1.0, 12.0])


@pytest.mark.parametrize(("supply", "use"), [(0.8, 30 / 0.8), (1.0, 30.0), (60.0, 0.5)])
def test_any_voltage_above_nought_is_one(supply: float, use: float) -> None:
    found = judge(machines(), Demand(held(2.5, 40.0), supply=Supply(supply)))
    assert found.voltage[0, 0] == pytest.approx(use)


def test_voltage_of_a_servo_motor_without_its_inductance() -> None:
    """A lower bound: it may reject, not admit; at standstill it is all there is. A motor with dc
    currents needs no inductance."""
    for kind, speed, supply, use in ((2, 40.0, 60.0, NAN), (2, 40.0, 30.0, NAN), (2, 40.0, 20.0,
                                      1.5), (2, 0.0, 60.0, 1 / 6), (2, 0.5, 60.0, NAN),
                                     (1, 40.0, 60.0, 0.5),
                                     (0, 40.0, 60.0, 0.5)):  # fmt: skip
        for given in ({"pole_pairs": 4.0}, {"armature_inductance": 1e-3}, {}):
            m = machines(commutation=kind, **given)
            found = judge(m, Demand(held(2.5, speed), supply=Supply(supply)))
            assert found.voltage[0, 0] == pytest.approx(use, nan_ok=True)
            shown = judge(m, Demand(held(2.5, speed))).peak_voltage[0, 0]
            assert np.isnan(shown) == (kind == 2 and speed != 0)
            assert np.isnan(found.peak_voltage[0, 0]) == np.isnan(shown)


def test_voltage_at_a_right_angle() -> None:
    """p·ω·La·Ia = 3·40·0.05·5 = 30 V beside 30 V; only with sinusoidal currents."""
    for kind, volts in ((2, 30 * math.sqrt(2)), (1, 30.0), (0, 30.0)):
        m = machines(commutation=kind, pole_pairs=3.0, armature_inductance=0.05)
        found = judge(m, Demand(held(2.5, 40.0)))
        assert found.peak_voltage[0, 0] == pytest.approx(volts)
        geared = judge(m, Demand(held(5.0, 20.0)), 2.0)
        assert geared.peak_voltage[0, 0] == pytest.approx(volts)


def corner(cycle: Cycle, supply: float | None = None, **given) -> int:
    m = machines(**given)
    demand = Demand(cycle, supply=Supply(supply))
    found, which = judge_worst(m, demand, tolerance=0.2)
    four = [judge(m.scaled(k, r), demand) for k in (0.8, 1.2) for r in (0.8, 1.2)]
    for name in ("voltage", "peak_current", "thermal", "peak_voltage", "rms_current"):
        worst = np.max([getattr(one, name) for one in four], axis=0)
        assert getattr(found, name) == pytest.approx(worst, nan_ok=True)
    return int(which[0, 0])


def test_which_corner_of_the_tolerances_is_worst() -> None:
    """Each of the four in turn; of equals the one with much current and much resistance."""
    servo = {"commutation": 2, "pole_pairs": 4.0, "armature_inductance": 0.2}
    # braking hard at a right angle: the current grows with a weak magnet, and little resistance
    # leaves more of the back-EMF
    assert corner(held(-2.0, 60.0), 50.0, **servo) == 0
    assert corner(held(2.5, 0.0), 50.0) == 1
    # braking softly, back-EMF less the resistance's share
    assert corner(held(-0.5, 60.0), 50.0) == 2
    # at high speed the back-EMF counts, and a driving current adds to it
    assert corner(held(0.05, 90.0), 50.0) == 3
    assert corner(held(2.5, 0.0), None, peak_current=6.0) == 1
    assert corner(held(2.5, 60.0), None, maximum_speed=40.0) == 1


def test_four_factors_of_its_own() -> None:
    """Km 0.9 to 1.2 and Ra 0.8 to 1.5 times: 2.5 N·m are 5.556 A at most, at standstill 16.67 V."""
    m = machines()
    given = tuple(np.array([x]) for x in (0.9, 1.2, 0.8, 1.5))
    found, which = judge_worst(m, Demand(held(2.5, 0.0), supply=Supply(20.0)), tolerance=given)
    assert found.peak_current_value[0, 0] == pytest.approx(2.5 / 0.45)
    assert found.voltage[0, 0] == pytest.approx(2.5 / 0.45 * 3 / 20)
    assert which[0, 0] == 1
    by_default, _ = judge_worst(m, Demand(held(2.5, 0.0)))
    assert by_default.peak_current_value[0, 0] == pytest.approx(2.5 / 0.45)


def test_limits_of_the_drive_and_of_the_motor() -> None:
    """The smaller of both peak currents; either alone."""
    for own, drive, use in ((4.0, 8.0, 5 / 4), (8.0, 4.0, 5 / 4), (NAN, 8.0, 5 / 8), (8.0, None,
                            5 / 8), (NAN, None, NAN)):  # fmt: skip
        found = judge(machines(peak_current=own), Demand(held(2.5, 1.0), drive=Drive(drive)))
        assert found.peak_current[0, 0] == pytest.approx(use, nan_ok=True)
        assert ("peak_current" in found.needed) == (drive is not None)


def test_cold_and_warm_magnets() -> None:
    """At 75 °C of the ambient ferrite gives 0.9 of its torque constant; the worse of ambient and
    hot counts for the peak."""
    m = machines(magnet_coefficient=-0.002)
    found = judge(m, Demand(held(2.5, 0.0), surroundings=Surroundings(75.0)))
    assert found.peak_current_value[0, 0] == pytest.approx(5 / 0.9)
    assert found.rms_current[0, 0] == pytest.approx(5 / 0.9)
    assert found.peak_voltage[0, 0] == pytest.approx(5 / 0.9 * 2 * 309.5 / 259.5)
    assert found.copper_loss[0, 0] == pytest.approx((5 / 0.9) ** 2 * 2 * 309.5 / 259.5)


def test_a_reserve_is_asked_for_from_both_sides() -> None:
    found = judge(machines(thermal_resistance=0.1, maximum_winding_temperature=125.0),
                  Demand(held(2.5, 40.0), supply=Supply(40.0)))  # fmt: skip
    assert found.largest[0, 0] == pytest.approx(0.75, rel=0.05)
    use = float(found.largest[0, 0])
    assert found.verdict(1 - use - 1e-9).item() == 0
    assert found.verdict(1 - use + 1e-9).item() == 2
    assert found.verdict().item() == 0


@pytest.mark.parametrize(
    "value",
    [Axis(), held(1.0, 1.0), Demand(held(1.0, 1.0)), Gearing(), Supply(), Drive(), Surroundings()],
    ids=lambda value: type(value).__name__,
)
def test_what_is_asked_is_a_value(value) -> None:
    """A demand is worked out once for all motors: nobody may change it meanwhile."""
    name = next(iter(value.__dataclass_fields__))
    with pytest.raises(FrozenInstanceError):
        setattr(value, name, None)


def test_nothing_asked_is_the_plainest_demand() -> None:
    """No inertia, no loss, no supply, armature amperes, 25 °C, all of the rise."""
    plain = judge(machines(thermal_resistance=1.0), Demand(held(2.5, 40.0)))
    told = Demand(held(2.5, 40.0), Gearing(0.0, 1.0, 0.0), Supply(None, 1.0, 0.0, None),
                  Drive(None, None, "dc", None), Surroundings(25.0, None, 1.0))  # fmt: skip
    same = judge(machines(thermal_resistance=1.0), told, 1.0, periodic=True)
    for name in Utilisations.__dataclass_fields__:
        assert np.array_equal(getattr(plain, name), getattr(same, name), equal_nan=name != "needed")
    assert Demand(held(1.0, 1.0)) is not None
    assert Supply(20.0).available == 20.0
    assert Supply(20.0, 0.9, 2.0).available == 16.0
    assert Supply().available is None


def test_commutations_are_those_of_the_conventions() -> None:
    """A column's code is the number that a motor's document is stored with."""
    told = {kind.name: int(kind) for kind in Commutation}
    assert {name: int(kind) for name, kind in columns.Commutation.__members__.items()} == told
    assert sorted(told.values()) == [0, 1, 2]
