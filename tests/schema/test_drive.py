"""A chosen motor under voltage and current control, against closed forms and solve_ivp."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from motorfolio.schema.convention import Commutation
from motorfolio.schema.operation import drive
from motorfolio.schema.operation.machines import Machines

# The made-up motor of the closed-form figures (V = 24 V, I0 = 0.12 A): derived from the circuit
# equation and the torque balance, confirmed with python-control and solve_ivp.
MOTOR = drive.Motor(0.030, 1.2, 0.3e-3, 1e-5, 0.030 * 0.12, 0.0, math.nan, Commutation.BRUSHED)
SERVO = drive.Motor(
    math.sqrt(3) * 4 * 0.010, 0.2, 0.2e-3, 1e-4, 0.0, 0.0, 4, Commutation.SINUSOIDAL
)
RPM = 2 * math.pi / 60


def test_speeds_of_the_made_up_motor() -> None:
    assert drive.no_load_speed(MOTOR, 24.0) == pytest.approx(795.2)
    assert drive.speed_at_voltage(MOTOR, 24.0, 0.5964) == pytest.approx(0.0, abs=1e-9)
    # Half-stall maximum power (Ra/4)·(I_s − I0)² = 118.564320 W at 10.06 A.
    half = drive.speed_at_voltage(MOTOR, 24.0, 0.5964 / 2)
    point = drive.operating_point(MOTOR, half, 0.5964 / 2)
    assert point.mechanical_power == pytest.approx(118.564320, rel=1e-8)
    assert point.current == pytest.approx(10.06)
    # Gradient Ra/Km² = 1333.3333 rad/(s·N·m).
    drop = drive.no_load_speed(MOTOR, 24.0) - drive.speed_at_voltage(MOTOR, 24.0, 0.1)
    assert drop == pytest.approx(133.33333)
    # Largest efficiency 0.851080666 at √(I0·I_s) = 1.549193 A.
    torque = 0.03 * (1.5491933 - 0.12)
    best = drive.operating_point(MOTOR, drive.speed_at_voltage(MOTOR, 24.0, torque), torque)
    assert best.mechanical_power / best.electrical_power == pytest.approx(0.851080666, rel=1e-7)
    assert best.electrical_power == pytest.approx(24.0 * best.current)


def test_signs_mirror() -> None:
    for voltage, torque in ((24.0, 0.1), (3.0, -0.2), (1.0, 0.0), (0.05, 0.0)):
        forward = drive.speed_at_voltage(MOTOR, voltage, torque)
        assert drive.speed_at_voltage(MOTOR, -voltage, -torque) == pytest.approx(-forward)
    assert drive.speed_at_voltage(MOTOR, 0.14, 0.0) == 0.0  # friction holds below Ra·I0
    # Overhauled, it runs above its no-load speed and returns power.
    fast = drive.speed_at_voltage(MOTOR, 12.0, -0.1)
    assert fast > 12.0 / 0.03
    assert drive.operating_point(MOTOR, fast, -0.1).electrical_power < 0


def test_servo_speed_at_voltage() -> None:
    """48 V: 6615.95 rpm without load, 4943.26 rpm at 3 N·m (dq equations, i_d = 0; derived)."""
    assert drive.no_load_speed(SERVO, 48.0) == pytest.approx(6615.95 * RPM, rel=1e-6)
    assert drive.speed_at_voltage(SERVO, 48.0, 3.0) == pytest.approx(4943.26 * RPM, rel=1e-6)
    speed = drive.speed_at_voltage(SERVO, 48.0, 3.0)
    assert drive.bridge_share(SERVO, speed, 3.0, 48.0) == pytest.approx(1.0)


def test_time_constant_and_poles() -> None:
    """63.2 % of the no-load speed after τm = 13.333 ms, with the inductance 13.336 ms after the
    start of a motor without friction; poles −76.46159 and −3923.53841 1/s (derived, simulated)."""
    free = drive.Motor(0.030, 1.2, 0.3e-3, 1e-5, 0.0, 0.0, math.nan, Commutation.BRUSHED)
    target = (1 - math.exp(-1)) * 800
    assert drive.time_at_voltage(free, 24.0, target) == pytest.approx(40e-3 / 3, rel=1e-12)
    exact = drive.time_at_voltage(free, 24.0, target, with_inductance=True)
    assert exact == pytest.approx(13.336e-3, abs=1e-6)
    # The slow pole is what the last stretch shows.
    late = [
        drive.time_at_voltage(free, 24.0, 800 * (1 - share), with_inductance=True)
        for share in (1e-2, 1e-4)
    ]
    assert math.log(100) / (late[1] - late[0]) == pytest.approx(76.46159, rel=1e-6)


@pytest.mark.parametrize("inductance", [1e-4, 3.3e-3, 3.34e-3, 0.05])
@pytest.mark.parametrize("held", [0.0, 0.05])
@pytest.mark.parametrize("damping", [0.0, 1e-5])
def test_run_up_against_solve_ivp(inductance: float, held: float, damping: float) -> None:
    """From well damped to oscillating: first passage of a speed, with the standstill before."""
    motor = drive.Motor(
        0.030, 1.2, inductance, 1e-5, 0.0036, damping, math.nan, Commutation.BRUSHED
    )

    def rates(t: float, y: np.ndarray) -> list[float]:
        i, w = y
        push = 0.03 * i - held - 0.0036 - damping * w
        return [(24 - 1.2 * i - 0.03 * w) / inductance, max(push, 0.0 if w <= 0 else push) / 1e-5]

    for speed in (100.0, 400.0, 600.0):

        def reached(t: float, y: np.ndarray, speed=speed) -> float:
            return y[1] - speed

        reached.terminal = True
        run = solve_ivp(
            rates, (0, 1), [0, 0], "LSODA", events=reached, rtol=1e-9, atol=1e-9, max_step=1e-4
        )
        own = drive.time_at_voltage(motor, 24.0, speed, 0.0, held, with_inductance=True)
        assert own == pytest.approx(run.t_events[0][0], rel=1e-5)


def test_oscillating_run_up_may_overshoot() -> None:
    motor = drive.Motor(0.030, 1.2, 0.05, 1e-5, 0.0, 0.0, math.nan, Commutation.BRUSHED)
    assert math.isfinite(drive.time_at_voltage(motor, 24.0, 900.0, with_inductance=True))
    assert drive.time_at_voltage(motor, 24.0, 1700.0, with_inductance=True) == math.inf
    assert drive.time_at_voltage(motor, 24.0, 900.0) == math.inf


def test_current_control() -> None:
    assert drive.torque_at_current(MOTOR, 20.0) == pytest.approx(0.5964)
    assert drive.torque_at_current(MOTOR, 0.1) == 0.0
    assert drive.torque_at_current(MOTOR, -20.0, 100.0) == pytest.approx(-0.6036)
    assert drive.acceleration_at_current(MOTOR, 20.0, 0.0, 0.1964, 3e-5) == pytest.approx(1e4)
    assert drive.time_at_current(MOTOR, 20.0, 500.0, 0.0, 0.1964, 3e-5) == pytest.approx(0.05)
    assert drive.time_at_current(MOTOR, 1.0, 500.0, 0.0, 0.1) == math.inf
    damped = drive.Motor(0.030, 1.2, 0.3e-3, 1e-5, 0.0, 1e-4, math.nan, Commutation.BRUSHED)
    run = solve_ivp(lambda t, w: (0.6 - 1e-4 * w) / 1e-5, (0, 0.05), [0], rtol=1e-10, atol=1e-10)
    assert drive.time_at_current(damped, 20.0, run.y[0, -1]) == pytest.approx(0.05, rel=1e-7)


def test_run_up_with_a_current_limit() -> None:
    """10 A to (24 V − 12 V)/Km = 400 rad/s, then along the voltage."""
    free = drive.Motor(0.030, 1.2, 0.3e-3, 1e-5, 0.0, 0.0, math.nan, Commutation.BRUSHED)
    run = solve_ivp(
        lambda t, w: 0.03 * np.minimum(10.0, (24 - 0.03 * w) / 1.2) / 1e-5,
        (0, 0.04),
        [0.0],
        rtol=1e-9,
        atol=1e-9,
        max_step=1e-4,
    )
    assert run.y[0, -1] > 600
    assert drive.run_up_time(free, 24.0, 10.0, run.y[0, -1]) == pytest.approx(0.04, rel=1e-5)
    assert drive.run_up_time(free, 24.0, 10.0, 300.0) == pytest.approx(0.01)
    assert drive.run_up_time(free, 24.0, 10.0, 801.0) == math.inf


def test_braking_returns_power() -> None:
    """Energy: what the shaft gives less the copper loss."""
    found = drive.braking(MOTOR, 700.0, 1e4, 0.0, 2e-5)
    assert found.current == pytest.approx((-0.3 + 0.0036) / 0.03)
    shaft = 700.0 * (0.3 - 0.0036)
    assert found.returned_power == pytest.approx(shaft - 1.2 * found.current**2)
    assert found.short_circuit_current == pytest.approx(-17.5)
    assert drive.braking(MOTOR, 10.0, 1e4, 0.0, 2e-5).returned_power == 0.0


def test_ripple_and_quiet_frequency() -> None:
    """200 V, 4 Ω, 6 mH, D = 0.5, 1 kHz: 29.13 − 20.87 = 8.26 A (Gupta & Singhal, Fundamentals of
    Electric Drives and Control, ex. 4.6 p. 141)."""
    chopped = drive.Motor(0.5, 4.0, 6e-3, 1e-3, 0.0, 0.0, math.nan, Commutation.BRUSHED)
    assert drive.ripple_at(chopped, 200.0, 1000.0) == pytest.approx(29.13 - 20.87, abs=0.01)
    quiet = drive.quiet_frequency(chopped, 200.0, 25.0)
    assert drive.ripple_at(chopped, 200.0, quiet) == pytest.approx(2.5, rel=1e-9)
    for duty in (0.1, 0.4, 0.6, 0.9):
        assert drive.ripple_at(chopped, 200.0, quiet, duty) < 2.5
    assert drive.quiet_frequency(chopped, 1.0, 25.0) == 0.0
    assert drive.frequency_note(20e3) is None
    assert "below 1000 Hz" in (drive.frequency_note(400.0) or "")


def test_motor_at_a_temperature() -> None:
    machines = Machines.of(
        torque_constant=[0.1, 0.03], armature_resistance=1.2, magnet_coefficient=-0.002
    )
    warm = drive.Motor.of(machines, 1, 85.0)
    assert warm.torque_constant == pytest.approx(0.03 * 0.88)
    assert warm.armature_resistance == pytest.approx(1.2 * 319.5 / 259.5)
    assert warm.coulomb_torque == 0.0


def test_questions_without_an_answer() -> None:
    with pytest.raises(drive.DriveError, match="inductance"):
        drive.ripple_at(
            drive.Motor(0.1, 1, math.nan, 1e-5, 0, 0, math.nan, Commutation.BRUSHED), 24.0, 1e4
        )
    with pytest.raises(drive.DriveError, match="sinusoidal"):
        drive.time_at_voltage(SERVO, 24.0, 100.0)
    with pytest.raises(drive.DriveError, match="higher"):
        drive.time_at_current(MOTOR, 1.0, 1.0, 2.0)
