"""The largest voltage inside a ramp, one short case each, against the polynomial itself."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.polynomial import Polynomial

from motorfolio.schema.operation.inner_peak import largest_square

TORQUE_ONLY = [np.array([x]) for x in (1.0, 0.0, 0.0, 0.0)]


def piece(torque: tuple[float, float], speed: tuple[float, float]) -> np.ndarray:
    """A ramp whose torque does not depend on the gear's other parts."""
    return np.array([[[torque[0], 1.0, 0.0, speed[0]], [torque[1], 1.0, 0.0, speed[1]]]])


def line(ends: tuple[float, float]) -> Polynomial:
    return Polynomial([ends[0], ends[1] - ends[0]])


def highest(square: Polynomial) -> float:
    """Largest value on 0..1: at an end or where the slope is zero."""
    roots = square.deriv().roots()
    inside = [r.real for r in roots if abs(r.imag) < 1e-9 and 0 < r.real < 1]
    return max(square(s) for s in (0.0, 1.0, *inside))


CROSSWISE = [
    # (torque, speed) at both ends; their product alone makes the voltage
    ((2.0, 0.0), (0.0, 3.0)), ((0.0, 3.0), (2.0, 0.0)), ((-2.0, 0.0), (0.0, 3.0)),
    ((5.0, 1.0), (1.0, 4.0)), ((1.0, 6.0), (5.0, -1.0)), ((0.3, 4.0), (7.0, 0.5)),
    ((-1.0, -4.0), (3.0, 0.5)), ((4.0, 0.2), (-0.1, 9.0)), ((9.0, 0.1), (1.0, 4.0)),
    ((1.0, 0.9), (0.9, 1.0)), ((0.02, 0.01), (0.01, 0.03)), ((30.0, 10.0), (10.0, 40.0)),
    ((4.0, -1.0), (0.0, 0.5)), ((-0.5, 2.0), (-4.0, -1.0)), ((6.0, 5.0), (2.0, 2.4)),
    ((3.0, -1.0), (-1.0, 3.0)), ((1.0, -3.0), (-3.0, 1.0)), ((2.0, -0.2), (-0.4, 1.0)),
    ((4 / 3, 0.0), (0.0, 3.0)), ((-3.0, 0.0), (0.0, 4 / 3)),
]  # fmt: skip


@pytest.mark.parametrize(("torque", "speed"), CROSSWISE)
@pytest.mark.parametrize("reactance", [0.01, 1.0, 7.0])
def test_where_torque_and_speed_cross(torque, speed, reactance: float) -> None:
    """U = X·|τ·ω|: where both are linear, the parabola's vertex. Another piece's end may already be
    as high but for a hair: what is known then must not hide the peak."""
    p = line(torque) * line(speed) * reactance
    ends = max(p(0.0) ** 2, p(1.0) ** 2)
    expected = highest(p**2)
    one = np.ones(1)
    for known in (ends, ends + 0.9999 * (expected - ends)):
        found = largest_square(np.array([known]), piece(torque, speed), TORQUE_ONLY,
                               0 * one, 0 * one, reactance * one)  # fmt: skip
        assert found[0] == pytest.approx(expected, rel=1e-12, abs=1e-15)
    above = np.array([expected * 1.5])
    kept = largest_square(
        above, piece(torque, speed), TORQUE_ONLY, 0 * one, 0 * one, reactance * one
    )
    assert kept[0] == expected * 1.5


WHOLE = [
    # (torque, speed, drop, emf, reactance)
    ((2.0, 0.0), (0.0, 3.0), 0.5, 0.2, 1.0), ((2.0, 0.1), (0.3, 3.0), -0.5, 0.3, 2.0),
    ((1.0, 0.5), (1.0, 1.9), 0.9, 0.1, 0.6), ((0.5, 1.0), (1.9, 1.0), 0.9, 0.1, 0.6),
    ((3.0, 0.5), (2.0, 4.5), 0.2, 0.9, 0.3), ((4.0, 0.0), (1.0, 3.0), 1.0, 0.05, 0.9),
    ((0.0, 4.0), (3.0, 1.0), 1.0, 0.05, 0.9), ((8.0, -2.0), (0.5, 3.0), 0.3, 0.4, 0.5),
    ((-2.0, 8.0), (3.0, 0.5), 0.3, 0.4, 0.5), ((2.0, -2.0), (-1.0, 2.5), 0.7, 0.6, 1.5),
    ((1.2, 0.7), (0.2, 2.0), 2.0, 0.3, 3.0), ((60.0, 20.0), (10.0, 50.0), 0.4, 0.4, 0.02),
    # the crosswise part rises all the way, the straight one falls: together they peak inside
    ((3.0, 2.0), (0.9, 1.9), 0.6, 0.0, 1.0), ((2.0, 3.0), (1.9, 0.9), 0.6, 0.0, 1.0),
]  # fmt: skip


@pytest.mark.parametrize(("torque", "speed", "drop", "emf", "reactance"), WHOLE)
def test_straight_and_crosswise_together(torque, speed, drop, emf, reactance) -> None:
    """U² = (a·τ + e·ω)² + (X·τ·ω)², a quartic: ends and zeros of its slope (its definition)."""
    t, w = line(torque), line(speed)
    square = (t * drop + w * emf) ** 2 + (t * w * reactance) ** 2
    ends = max(square(0.0), square(1.0))
    one = np.ones(1)
    found = largest_square(np.array([ends]), piece(torque, speed), TORQUE_ONLY, drop * one,
                           emf * one, reactance * one)  # fmt: skip
    assert found[0] == pytest.approx(highest(square), rel=1e-12)


@pytest.mark.parametrize("volts", [0.5, 4.0])
@pytest.mark.parametrize("tilt", [-0.001, 0.001])
def test_a_straight_part_that_hardly_changes(volts: float, tilt: float) -> None:
    """Then the whole voltage peaks where the crosswise part does, U² = volts² + (X·τ·ω)², however
    near to it another piece's end may be."""
    torque, speed = (2.0, 1.0 + tilt), (1.0, 2.0)
    t, w = line(torque), line(speed)
    square = ((t + w) * (volts / 3)) ** 2 + (t * w) ** 2
    ends = max(square(0.0), square(1.0))
    one = np.ones(1)
    found = largest_square(np.array([ends + 0.99 * (highest(square) - ends)]), piece(torque, speed),
                           TORQUE_ONLY, volts / 3 * one, volts / 3 * one, one)  # fmt: skip
    assert found[0] == pytest.approx(highest(square), rel=1e-12)
    assert highest(square) == pytest.approx(volts**2 + 2.25**2, rel=1e-2)


@pytest.mark.parametrize("turned", [False, True])
def test_a_straight_part_that_rises_a_little(turned: bool) -> None:
    """From 0.5 to 0.6 V along the ramp, the crosswise part highest at 95 % of it: the larger end of
    the straight part counts in what may be hidden inside."""
    torque, speed = (3.0, 2.0), (1.1, 2.1)
    drop, emf = np.linalg.solve(np.array([[3.0, 1.1], [2.0, 2.1]]), np.array([0.5, 0.6]))
    if turned:
        torque, speed = torque[::-1], speed[::-1]
    t, w = line(torque), line(speed)
    square = (t * drop + w * emf) ** 2 + (t * w) ** 2
    ends, expected = max(square(0.0), square(1.0)), highest(square)
    one = np.ones(1)
    found = largest_square(np.array([ends + 0.99 * (expected - ends)]), piece(torque, speed),
                           TORQUE_ONLY, drop * one, emf * one, one)  # fmt: skip
    assert found[0] == pytest.approx(expected, rel=1e-12)
    assert expected > ends + 0.01


@pytest.mark.parametrize("turned", [False, True])
def test_a_slope_that_would_peak_beyond_the_end(turned: bool) -> None:
    """The straight part falls, the crosswise part rises and would peak behind the ramp: what lies
    there is not asked for."""
    torque, speed = (1.0, 0.65), (0.1, 0.9)
    if turned:
        torque, speed = torque[::-1], speed[::-1]
    t, w = line(torque), line(speed)
    for drop in (0.1, 0.3, 0.45):
        square = (t * drop) ** 2 + (t * w) ** 2
        ends = max(square(0.0), square(1.0))
        one = np.ones(1)
        found = largest_square(np.array([ends]), piece(torque, speed), TORQUE_ONLY, drop * one,
                               0 * one, one)  # fmt: skip
        assert found[0] == pytest.approx(highest(square), rel=1e-12)


def test_each_motor_has_its_own_highest_piece() -> None:
    """Two ramps and two motors; the one has its peak in the first, the other in the second, and
    each weight takes its own part of the torque."""
    first, second = np.array([[[2.0, 0.5, 1.0, 0.0], [0.0, 0.5, 1.0, 3.0]]]), piece((0, 3), (2, 0))
    second[0, :, 1:3] = 1.0, 0.0
    ramps = np.concatenate([first, second])
    weights = [np.array([1.0, 0.5]), np.array([0.2, -0.3]), np.array([0.1, 0.0]),
               np.array([0.0, 0.05])]  # fmt: skip
    drop, emf, reactance = np.array([0.3, 0.1]), np.array([0.2, 0.1]), np.array([1.0, 2.0])
    known, expected = np.zeros(2), np.zeros(2)
    for k in range(2):
        for ramp in ramps:
            t = line(tuple(sum(w[k] * row[i] for i, w in enumerate(weights)) for row in ramp))
            w = line((ramp[0, 3], ramp[1, 3]))
            square = (t * drop[k] + w * emf[k]) ** 2 + (t * w * reactance[k]) ** 2
            known[k] = max(known[k], square(0.0), square(1.0))
            expected[k] = max(expected[k], highest(square))
    found = largest_square(known.copy(), ramps, weights, drop, emf, reactance)
    assert found == pytest.approx(expected, rel=1e-12)
    assert (expected > known * 1.01).all()
