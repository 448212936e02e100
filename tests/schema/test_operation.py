"""Utilisations at a point and in cycles: published examples and what must hold by definition."""

from __future__ import annotations

import numpy as np
import pytest

from motorfolio.schema.operation.judge import (
    Cycle,
    Demand,
    Gearing,
    Machines,
    Supply,
    Surroundings,
    Verdict,
    judge,
)
from motorfolio.schema.operation.thermal import copper_factor

RPM = 2 * np.pi / 60

# The made-up motor: its figures follow from the circuit equation V = I·R + K·ω and the torque
# balance T = K·(I − I0) in closed form, and were confirmed with python-control and solve_ivp.
MADE_UP = Machines.of(
    torque_constant=0.030,
    armature_resistance=1.2,
    armature_inductance=0.3e-3,
    rotor_inertia=1e-5,
    coulomb_torque=0.030 * 0.12,
    thermal_resistance_winding_housing=3,
    thermal_resistance_housing_ambient=9,
    maximum_winding_temperature=155,
)


def only(array: np.ndarray) -> float:
    assert array.size == 1
    return float(array.ravel()[0])


def test_no_load_speed_takes_the_whole_supply() -> None:
    """n0 = (U − Ra·I0)/Km = 795.2 rad/s at 24 V (derived; circuit equation).

    The few milliwatts of friction warm the winding a little, and the drop Ra·I0 with it.
    """
    cold = Machines.of(torque_constant=0.03, armature_resistance=1.2, coulomb_torque=0.0036)
    demand = Demand(Cycle.from_points([(0.0, 795.2, 1.0)]), supply=Supply(24.0))
    result = judge(cold, demand)
    assert only(result.voltage) == pytest.approx(1, rel=1e-12)
    assert only(result.peak_current_value) == pytest.approx(0.12, rel=1e-12)


def test_stall_torque_takes_the_whole_supply() -> None:
    """Stalled, friction does not help: T = Km·U/Ra = 0.6 N·m; 0.5964 N·m is what a shaft that
    is about to turn has left (derived)."""
    cold = Machines.of(torque_constant=0.03, armature_resistance=1.2, coulomb_torque=0.0036)
    for speed, torque in ((0.0, 0.6), (1e-6, 0.5964)):
        demand = Demand(Cycle.from_points([(torque, speed, 1.0)]), supply=Supply(24.0))
        result = judge(cold, demand)
        assert only(result.peak_current_value) == pytest.approx(20.0, rel=1e-9)
        assert only(result.voltage) == pytest.approx(1.0, rel=1e-6)


def test_winding_temperature_with_warm_copper() -> None:
    """R25 = 1.2 Ω, Rth = 3 + 9 K/W, 2 A at 25 °C: 99.04 °C, 82.6 °C without the feedback
    (derived from R2/R1 = (234.5 + T2)/(234.5 + T1), Langsdorf ex. 1-15; run-away at 4.245 A,
    155 °C at 2.452 A; α = 0.00385426 there, 1/259.5 here)."""
    motor = Machines.of(
        torque_constant=0.03,
        armature_resistance=1.2,
        thermal_resistance_winding_housing=3,
        thermal_resistance_housing_ambient=9,
        maximum_winding_temperature=155,
    )

    def at(current: float):
        return judge(motor, Demand(Cycle.from_points([(0.03 * current, 0.0, 1.0)])))

    assert only(at(2.0).winding_temperature) == pytest.approx(99.0365, abs=0.02)
    assert only(at(2.45241).thermal) == pytest.approx(1, abs=3e-4)
    assert not only(at(4.244).runaway)
    lost = at(4.2455)
    assert only(lost.runaway)
    assert np.isnan(only(lost.thermal))
    assert only(lost.verdict()) == Verdict.REJECTED


def test_copper_at_75_degrees() -> None:
    """504 W of copper loss at 20 °C are 613 W at 75 °C (Langsdorf, Theory of Alternating-Current
    Machinery, ex. 1-15 p. 33; companion)."""
    assert 504 * copper_factor(75) / copper_factor(20) == pytest.approx(612.92, rel=1e-5)


def test_motor_torque_for_two_geared_loads() -> None:
    """Dubey, Fundamentals of Electrical Drives, ex. 2.1 p. 16: gear 0.1, load 10 N·m at 90 %
    beside a hoist of 1000 kg at 1.5 m/s, 85 %; 1420 rpm; torque 117.53 N·m, J = 0.40 kg·m².

    The two loads have two efficiencies, so each is asked for by itself and both add.
    """
    wm = 1420 * RPM
    motor = Machines.of(torque_constant=1.0, rotor_inertia=0.2)
    geared = Demand(Cycle.from_points([(10.0, 0.1 * wm, 1.0)]), Gearing(10.0, 0.9))
    radius = 1.5 / wm
    hoist = Demand(Cycle.from_points([(1000 * 9.81 * radius, wm, 1.0)]), Gearing(0.0, 0.85))
    torque = only(judge(motor, geared, 10.0).peak_torque_value) + only(
        judge(motor, hoist).peak_torque_value
    )
    assert torque == pytest.approx(117.53, rel=1e-4)
    # The equivalent inertia is the torque that one rad/s² at the motor takes.
    ramp = Cycle([1.0, 1.0], [0.0, 0.1], [0.1, 0.0], [0.0, 0.0], [0.0, 0.0])
    inertia = only(
        judge(
            motor, Demand(ramp, Gearing(10.0 + 1000 * (10 * radius) ** 2)), 10.0
        ).peak_torque_value
    )
    assert inertia == pytest.approx(0.40175, rel=1e-4)


def test_lossless_gears() -> None:
    """Gupta & Singhal, Fundamentals of Electric Drives and Control, ex. 3.9 p. 38: rotor 0.3,
    15 kg·m² by 0.1 and 0.6 kg·m² by 10/30; 100 and 35 N·m: J = 0.5167 kg·m², 21.667 N·m, 3267.3 W
    at 1440 rpm."""
    motor = Machines.of(torque_constant=1.0, rotor_inertia=0.3)
    wm = 1440 * RPM
    slow = Demand(Cycle.from_points([(100.0, wm / 10, 1.0)]))
    fast = Demand(Cycle.from_points([(35.0, wm / 3, 1.0)]))
    torque = only(judge(motor, slow, 10.0).peak_torque_value) + only(
        judge(motor, fast, 3.0).peak_torque_value
    )
    assert torque == pytest.approx(21.667, abs=5e-4)
    assert torque * wm == pytest.approx(3267.3, abs=0.05)
    ramp = Cycle([1.0, 1.0], [0.0, 0.1], [0.1, 0.0], [0.0, 0.0], [0.0, 0.0])
    both = Demand(ramp, Gearing(15 + 0.6 * (10 / 3) ** 2))
    assert only(judge(motor, both, 10.0).peak_torque_value) == pytest.approx(0.5167, abs=5e-5)


def test_gear_losses_change_sides_when_the_load_drives() -> None:
    """T_L/(N·η) driving, T_L·η/N overhauling (Dubey ex. 2.1, Gupta & Singhal ex. 3.9)."""
    motor = Machines.of(torque_constant=1.0)
    for speed, expected in ((1.0, 10 / (5 * 0.8)), (-1.0, 10 * 0.8 / 5), (0.0, 10 / 5)):
        demand = Demand(Cycle.from_points([(10.0, speed, 1.0)]), Gearing(0.0, 0.8))
        assert only(judge(motor, demand, 5.0).peak_torque_value) == pytest.approx(expected)


def test_rms_torque_of_a_reversing_duty() -> None:
    """Dubey ex. 4.2 p. 52: J = 1e4 kg·m², 200 rpm, 25 kN·m for 10 s, idle 1 s, reversal in 5 s,
    idle 1 s, 20 kN·m for 15 s, idle 1 s, reversal 5 s, idle 1 s: T_rms = 45 975 N·m (companion
    of the book, whose own answer differs)."""
    w = 200 * RPM
    time = np.cumsum([0, 10, 0, 1, 5, 1, 0, 15, 0, 1, 5, 1])
    speed = np.array([w, w, w, w, -w, -w, -w, -w, -w, -w, w, w])
    torque = np.array([25e3, 25e3, 0, 0, 0, 0, -20e3, -20e3, 0, 0, 0, 0])
    motor = Machines.of(torque_constant=1.0, rotor_inertia=0.0)
    result = judge(motor, Demand(Cycle.from_rows(time, speed, torque), Gearing(1e4)))
    assert only(result.rms_current) == pytest.approx(45974.87, rel=1e-6)
    assert only(result.peak_torque_value) == pytest.approx(83775.8, rel=1e-6)


def test_rms_of_a_ramp() -> None:
    """Dubey ex. 4.3 p. 53: 0 to 400 kW in 5 min, 500 kW for 5, −400 kW for 4, 0 for 2: 367 kW.
    Power at constant speed is torque: the motor's size follows its mean square."""
    duty = Cycle([5, 5, 4, 2], [1] * 4, [1] * 4, [0, 500, -400, 0], [400, 500, -400, 0])
    result = judge(Machines.of(torque_constant=1.0), Demand(duty))
    assert only(result.rms_current) == pytest.approx(367.14, rel=2e-5)


def test_rms_power_of_a_duty_with_rest() -> None:
    """Kosow, Electric Machinery and Transformers, ex. 13.7 p. 466: 200 hp 5 min, 20 hp 5 min, rest
    10 min (counted a third, self-cooled), 100 hp 10 min: 114 hp."""
    duty = Cycle.from_points([(200, 1, 5), (20, 1, 5), (0, 1, 10 / 3), (100, 1, 10)])
    result = judge(Machines.of(torque_constant=1.0), Demand(duty))
    assert only(result.rms_current) == pytest.approx(113.77, rel=1e-4)


def test_synchronous_motor_voltage_with_inductance() -> None:
    """Fitzgerald, Kingsley & Umans, Electric Machinery, 6th ed., ex. 11.10 p. 593: 2 poles,
    Ls = 1.75 mH, 220 V line-to-line rms open-circuit at 3200 rpm; 65 % of 25 kW/4000 rpm torque is
    i_Q = 48.2 A peak. Resistance neglected. Terminal voltage from v_q = ω·ψ, v_d = ω·Ls·i_Q."""
    Km = 220 * np.sqrt(2) / (3200 * RPM)
    motor = Machines.of(
        torque_constant=Km,
        armature_resistance=1e-9,
        armature_inductance=2 * 1.75e-3,
        pole_pairs=1,
        commutation=2,
    )
    w = 4000 * RPM
    torque = 0.65 * 25e3 / w
    result = judge(motor, Demand(Cycle.from_points([(torque, w, 1.0)])))
    assert only(result.peak_current_value) * 2 / np.sqrt(3) == pytest.approx(48.2, abs=0.05)
    psi = Km / np.sqrt(3)
    expected = np.sqrt(3) * w * np.hypot(psi, 1.75e-3 * 48.248)
    assert only(result.peak_voltage) == pytest.approx(expected, rel=1e-5)


def test_voltage_limit_of_a_servo_motor() -> None:
    """P = 4, ψ = 0.010 Wb, R = 0.10 Ω, L = 0.10 mH per phase, 48 V, space-vector modulation:
    no-load 6615.95 rpm; 3 N·m (50 A peak) up to 4943.26 rpm (derived from
    (ψ² + L²i²)ω² + 2Riψω + R²i² − V² = 0, the dq equations)."""
    motor = Machines.of(
        torque_constant=np.sqrt(3) * 4 * 0.010,
        armature_resistance=0.2,
        armature_inductance=0.2e-3,
        pole_pairs=4,
        commutation=2,
    )
    for torque, rpm in ((0.0, 6615.95), (3.0, 4943.26)):
        demand = Demand(Cycle.from_points([(torque, rpm * RPM, 1.0)]), supply=Supply(48.0))
        result = judge(motor, demand)
        assert only(result.voltage) == pytest.approx(1, rel=1e-5)
        assert only(result.peak_current_value) * 2 / np.sqrt(3) == pytest.approx(torque / 0.06)


def test_hot_and_cold_the_worse_counts() -> None:
    """At speed a cold magnet asks for more voltage, near standstill warm copper does."""
    motor = Machines.of(
        torque_constant=0.03,
        armature_resistance=1.2,
        thermal_resistance=12,
        maximum_winding_temperature=155,
        magnet_coefficient=-0.002,
    )
    cycle = Cycle.from_points([(0.05, 700.0, 1.0)])
    result = judge(motor, Demand(cycle))
    T = only(result.winding_temperature)
    flux = 1 - 0.002 * (T - 25)
    hot = 1.2 * copper_factor(T) * 0.05 / (0.03 * flux) + 0.03 * flux * 700
    cold = 1.2 * 0.05 / 0.03 + 0.03 * 700
    assert only(result.peak_voltage) == pytest.approx(max(hot, cold), rel=1e-9)
    assert only(result.peak_current_value) == pytest.approx(0.05 / 0.03 / flux, rel=1e-9)
    assert cold > hot
    slow = judge(motor, Demand(Cycle.from_points([(0.05, 1.0, 1.0)])))
    assert only(slow.peak_voltage) > 1.2 * 0.05 / 0.03 + 0.03


def test_continuous_current_route() -> None:
    """Without thermal resistances (I_rms/I_cont)², scaled by the rises of rating and ambient."""
    motor = Machines.of(
        torque_constant=1.0,
        armature_resistance=1.0,
        nominal_current=2.0,
        rating_ambient=40.0,
        maximum_winding_temperature=[140.0, np.nan],
    )
    cycle = Cycle.from_points([(1.0, 0.0, 1.0)])
    cool = judge(motor, Demand(cycle, surroundings=Surroundings(20.0)))
    assert cool.thermal.ravel() == pytest.approx([0.25 * 100 / 120, 0.25])
    assert cool.winding_temperature[0, 0] == pytest.approx(20 + 25)
    assert np.isnan(cool.winding_temperature[1, 0])
    warm = judge(motor, Demand(cycle, surroundings=Surroundings(60.0)))
    assert warm.thermal[0, 0] == pytest.approx(0.25 * 100 / 80)
    assert warm.verdict().ravel().tolist() == [Verdict.FEASIBLE, Verdict.UNKNOWN]
    beyond = judge(motor, Demand(cycle, surroundings=Surroundings(150.0)))
    assert beyond.verdict()[0, 0] == Verdict.REJECTED


def test_continuous_current_between_stall_and_nominal_speed() -> None:
    motor = Machines.of(
        torque_constant=1.0, nominal_current=2.0, continuous_stall_current=3.0, nominal_speed=100.0
    )
    for speed, current in ((0.0, 3.0), (50.0, 2.5), (100.0, 2.0), (200.0, 1.0)):
        result = judge(motor, Demand(Cycle.from_points([(1.0, speed, 1.0)])))
        assert only(result.thermal) == pytest.approx(1 / current**2)


def test_unknown_stays_unknown() -> None:
    """No thermal figure: never a pass; a known utilisation above 1 rejects all the same."""
    motor = Machines.of(torque_constant=0.03, armature_resistance=1.2)
    cycle = Cycle.from_points([(0.03, 100.0, 1.0)])
    for supply, verdict in ((24.0, Verdict.UNKNOWN), (3.0, Verdict.REJECTED)):
        result = judge(motor, Demand(cycle, supply=Supply(supply)))
        assert only(result.verdict()) == verdict
    # A servo motor's voltage without its inductance may reject and not admit.
    servo = Machines.of(torque_constant=0.03, armature_resistance=1.2, commutation=2)
    assert np.isnan(only(judge(servo, Demand(cycle, supply=Supply(24.0))).voltage))
    assert only(judge(servo, Demand(cycle, supply=Supply(3.0))).voltage) > 1


def test_voltage_peaks_inside_a_ramp() -> None:
    """Speed falls while torque rises: p·ω·La·Ia is largest on the way. Against dense sampling of
    U² = (Ra·Ia + Km·ω)² + (p·ω·La·Ia)²; the ends alone would pass a motor that the ramp stops."""
    motor = Machines.of(
        torque_constant=0.1,
        armature_resistance=0.1,
        armature_inductance=5e-3,
        pole_pairs=5,
        commutation=2,
        rotor_inertia=0.0,
    )
    cycle = Cycle([1.0, 1.0], [400.0, 0.0], [0.0, 400.0], [0.1, 3.0], [3.0, 0.1])
    s = np.linspace(0, 1, 100_001)
    w, i = 400 * (1 - s), (0.1 + 2.9 * s) / 0.1
    U = np.hypot(0.1 * i + 0.1 * w, 5 * w * 5e-3 * i)
    assert U.max() > 1.3 * max(U[0], U[-1])
    assert only(judge(motor, Demand(cycle)).peak_voltage) == pytest.approx(U.max(), rel=1e-8)
