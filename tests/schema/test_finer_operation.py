"""Finer points of operation and of the adjustment, against series, derivatives and definitions."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Gearing
from motorfolio.schema.operation.energy import draw
from motorfolio.schema.operation.judge import judge
from motorfolio.schema.operation.machines import Machines
from motorfolio.schema.operation.pwm import space_vector_mean_square, two_level_ripple
from motorfolio.schema.operation.thermal import _cuts, _phi, steady_temperature
from motorfolio.schema.reconcile.adjust import fit
from motorfolio.schema.reconcile.model import INDEX, UNKNOWNS
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.suspects import predicted
from motorfolio.schema.reconcile.table import scale
from motorfolio.schema.vocabulary import quantities

from .simulated_sheets import FULL, make

BRUSHED = Commutation.BRUSHED


@pytest.mark.parametrize("z", [-30.0, -3.0, -0.5, -0.1001, -0.0999, -0.01, 1e-9, 0.05, 0.3, 2.0])
def test_phi_functions(z: float) -> None:
    """φk(z) = Σ z^n/(n + k)!, summed in whole fractions (Hochbruck & Ostermann, Exponential
    integrators, Acta Numerica 19 (2010), 2.1; from memory)."""
    exact = Fraction(z)
    for k, found in enumerate(_phi(np.array([z]))):
        term, total = Fraction(1, math.factorial(k)), Fraction(0)
        for n in range(160):
            total += term
            term = term * exact / (n + k + 1)
        # the third loses digits to differences just above the series' range
        assert found[0] == pytest.approx(float(total), rel=1e-11 if k < 3 else 1e-10)


def test_cuts_cover_every_piece_once() -> None:
    """Finer the longer a piece lasts, and finer after its start."""
    lengths = np.array([0.01, 0.3, 1.0, 5.0, 100.0])
    piece, begin, end = _cuts(lengths)
    counts = []
    for index in range(lengths.size):
        mine = piece == index
        counts.append(int(mine.sum()))
        assert begin[mine][0] == 0
        assert end[mine][-1] == 1
        assert begin[mine][1:].tolist() == end[mine][:-1].tolist()
        widths = end[mine] - begin[mine]
        assert (np.diff(widths) > 0).all()
    assert counts == sorted(counts)
    assert counts[0] == 1
    assert counts[-1] == 16


def test_only_what_accelerates_needs_an_inertia() -> None:
    """A motor of unknown inertia is judged and its energy known where speed does not change; and
    inertia alone, without any torque of the load, is work to do."""
    unknown = Machines.of(torque_constant=1.0, armature_resistance=1.0)
    steady = Demand(Cycle.from_points([(2.0, 3.0, 1.0), (1.0, 3.0, 1.0)]))
    assert judge(unknown, steady).peak_current_value[0, 0] == pytest.approx(2.0)
    found = draw(unknown, steady, np.ones(1), np.full(1, 25.0))
    assert found.drawn[0] == pytest.approx((4 + 6) + (1 + 3))
    ramp = Demand(Cycle.from_rows([0, 1, 2], [0, 3, 0], [0, 0, 0]), Gearing(0.0, 1.0, 0.25))
    assert np.isnan(judge(unknown, ramp).peak_current_value[0, 0])
    known = Machines.of(torque_constant=1.0, armature_resistance=1e-9, rotor_inertia=0.75)
    assert judge(known, ramp).peak_current_value[0, 0] == pytest.approx(3.0)
    moved = draw(known, ramp, np.ones(1), np.full(1, 25.0))
    assert moved.drawn[0] == pytest.approx(0.5 * 1.0 * 3**2)  # J·ω²/2
    assert moved.returned[0] == pytest.approx(0.5 * 1.0 * 3**2)


def test_corners_and_ramps_of_a_cycle_stand_once() -> None:
    """Equal pieces, and pieces that mirror each other, are looked at once."""
    cycle = Cycle.from_rows([0, 1, 2, 3, 4], [0, 5, 0, 5, 0], [1, 1, 1, 1, 1])
    pieces = cycle.pieces(0.1, 1.0)
    assert len(pieces.duration) == 4
    assert pieces.accelerated.shape == (2, 2, 4)
    for piece in pieces.basis:
        assert any((piece == kept).all() for kept in pieces.accelerated)
    rows = pieces.basis.reshape(-1, 4)
    assert len(np.unique(pieces.corners, axis=0)) == len(pieces.corners)
    for row in rows:
        assert any(
            np.allclose(row, corner) or np.allclose(-row, corner) for corner in pieces.corners
        )
    there = Cycle.from_points([(1.0, 5.0, 1.0), (-1.0, -5.0, 1.0)]).pieces()
    assert len(there.corners) == 1
    assert len(there.accelerated) == 0


def test_space_vector_ripple_against_switching() -> None:
    """Mean square of the ripple of a star at the angles of a turn, from the flux error of the
    switched vectors: Σ over the triangle's states of ∫(u_state − u)² dt², per phase of La/2."""
    bus, La, frequency = 100.0, 2e-3, 10e3
    L = La / 2
    T = 1 / frequency
    vectors = [2 / 3 * bus * np.exp(1j * k * math.pi / 3) for k in range(6)]
    for index in (0.2, 0.6, 1.0):
        line = index * bus  # line to line, peak
        phase = line / math.sqrt(3)
        total, count = 0.0, 200
        for n in range(count):
            angle = (n + 0.5) / count * math.pi / 3
            u = phase * np.exp(1j * angle)
            t2 = math.sqrt(3) * phase / bus * math.sin(angle)
            t1 = math.sqrt(3) * phase / bus * math.sin(math.pi / 3 - angle)
            t0 = 1 - t1 - t2
            steps = [(t0 / 4, 0), (t1 / 2, vectors[0]), (t2 / 2, vectors[1]), (t0 / 4, 0)]
            steps += steps[::-1]
            flux, square = 0j, 0.0
            for share, v in steps:
                if share <= 0:
                    continue
                rise = (v - u) * share * T
                # ∫|flux + rise·s|² ds over the step
                square += share * (
                    abs(flux) ** 2 + (flux * rise.conjugate()).real + abs(rise) ** 2 / 3
                )
                flux += rise
            total += square / count / L**2
        # Ia is √3/2 of the peak phase current (power-invariant transformation)
        expected = 0.75 * total
        found = float(space_vector_mean_square(line, bus, La, frequency))
        assert found == pytest.approx(expected, rel=5e-3)


def test_chopper_ripple_against_the_circuit() -> None:
    """Periodic steady state of R and L under a square wave, by the exponentials of both parts."""
    for duty in (0.2, 0.5, 0.85):
        for x in (1e-5, 0.05, 2.0, 30.0):
            R, U, frequency = 2.0, 24.0, 1000.0
            La = R / (frequency * x)
            on, off = duty * x, (1 - duty) * x  # in time constants
            top = U / R * -math.expm1(-on) / -math.expm1(-x)
            low = top * math.exp(-off)
            swing, square = two_level_ripple(duty, U, R, La, frequency)
            assert float(swing) == pytest.approx(top - low, rel=1e-6)
            s = (np.arange(20000) + 0.5) / 20000
            rising = U / R + (low - U / R) * np.exp(-on * s)
            falling = top * np.exp(-off * s)
            mean = duty * U / R
            expected = duty * ((rising - mean) ** 2).mean()
            expected += (1 - duty) * ((falling - mean) ** 2).mean()
            assert float(square) == pytest.approx(expected, rel=2e-4)


def test_a_temperature_that_nothing_raises() -> None:
    for ambient in (-20.0, 25.0, 60.0):
        found, lost = steady_temperature(ambient, 0.0, 0.0, 7.0, 0.0039, -0.002)
        assert float(found) == pytest.approx(ambient + 7)
        assert not lost
    unknown, lost = steady_temperature([25.0, np.nan], [np.nan, 1.0], 0.0, 0.0, 0.0039, 0.0)
    assert np.isnan(unknown).all()
    assert not lost.any()


def test_an_implied_value_has_the_variance_of_its_formula() -> None:
    """Variance gᵀ·C·g with the gradient of the efficiency's formula by differences (law of
    propagation: JCGM 100:2008, 5.2.2)."""
    fitted = fit(observe(make(np.random.default_rng(2), 5, BRUSHED, FULL).batch))
    problem = observe(make(np.random.default_rng(2), 5, BRUSHED, FULL).batch)
    figure = np.full(5, INDEX["maximum_efficiency"])
    value, sd = predicted(problem, fitted, figure)
    names = ("no_load_current", "resistance", "voltage")
    where = [UNKNOWNS.index(name) for name in names]

    def efficiency(x: np.ndarray) -> float:
        i0, r, u = np.exp(x[where])
        return 2 * math.log(1 - math.sqrt(i0 * r / u))

    for motor in range(5):
        x = fitted.x[motor]
        assert value[motor] == pytest.approx(efficiency(x), rel=1e-9)
        gradient = np.zeros(len(x))
        for i in where:
            up, down = x.copy(), x.copy()
            up[i] += 1e-6
            down[i] -= 1e-6
            gradient[i] = (efficiency(up) - efficiency(down)) / 2e-6
        assert sd[motor] == pytest.approx(
            math.sqrt(gradient @ fitted.covariance[motor] @ gradient), rel=1e-6
        )


def test_a_table_shows_its_own_scatter() -> None:
    """Figures without scatter, with half and with all of it are told apart, in this order."""
    found = []
    for scatter in (0.0, 0.5, 1.0):
        batch = make(np.random.default_rng(17), 40, BRUSHED, FULL, digits=4, scatter=scatter).batch
        found.append(scale(observe(batch)))
    assert found[0] < 0.35
    assert found[0] < found[1] < found[2]
    assert 0.3 < found[1] < 0.8
    assert 0.65 < found[2] < 1.3


def test_what_may_be_nought() -> None:
    """Nothing that a motor is made of is nought; a temperature or a friction may be."""
    for key in ("mass", "torque_constant", "terminal_resistance", "rotor_inertia", "poles"):
        assert not quantities()[key].zero, key
    assert any(q.zero for q in quantities().values())
    assert not any(q.zero and q.text for q in quantities().values())
