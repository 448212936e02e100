"""When two printed numbers are taken for exchanged, on misfits put in by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.batch import Batch
from motorfolio.schema.reconcile import swaps
from motorfolio.schema.reconcile.adjust import Fit
from motorfolio.schema.reconcile.evidence import Evidence
from motorfolio.schema.reconcile.model import INDEX, P
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.problem import Problem
from motorfolio.schema.reconcile.suspects import Suspicion

from .made_up_suspicions import suspicion
from .simulated_sheets import put, single

KEYS = ("nominal_voltage", "torque_constant", "no_load_current", "speed_constant",
        "terminal_resistance")  # fmt: skip
"""Columns of the table, in this order."""

NUMBERS = {"nominal_voltage": 24.0, "torque_constant": 30.0, "no_load_current": 55.0,
           "speed_constant": 318.0, "terminal_resistance": 1.2}  # fmt: skip
"""As printed, in V, mNm/A, mA, rpm/V, Ω."""

UNITS = (1.0, 1e-3, 1e-3, math.pi / 30, 1.0)
U, KM, I0, KN, RA = (INDEX[key] for key in KEYS)


def table(n: int = 1) -> Batch:
    batch = single(n=n)
    for key, factor in zip(KEYS, UNITS, strict=True):
        for row in range(n):
            put(batch, key, row, NUMBERS[key] * factor, 4)
    return batch


def made(n: int = 1) -> Evidence:
    batch = table(n)
    return Evidence(batch, observe(batch), Fit(np.zeros((n, P)), np.zeros((n, P, P)), np.zeros(n)))


class Misfits:
    """χ² of each exchange of each motor; a thousand where none is told."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch, evidence: Evidence, told: dict) -> None:
        self.y, self.told, self.asked = evidence.problem.y.copy(), told, 0
        evidence.problem.y[:, INDEX["peak_torque"]] = np.arange(len(self.y))  # tells who it is
        monkeypatch.setattr(swaps, "misfit", self)

    def __call__(self, part: Problem) -> tuple[np.ndarray, None]:
        out = []
        for y in part.y:
            motor = int(y[INDEX["peak_torque"]])
            moved = np.flatnonzero(np.abs(y - self.y[motor]) > 1e-9).tolist()
            pair = frozenset(moved) - {INDEX["peak_torque"]}
            out.append(self.told.get((motor, pair), 1000.0))
        self.asked += len(out)
        return np.array(out), None


def found(evidence: Evidence, suspicions: dict[int, list[Suspicion]], chi2, motors=None):
    who = np.arange(len(evidence.problem)) if motors is None else np.array(motors)
    part = evidence.problem.take(who)
    return swaps.find_swaps(evidence, who, part, np.array(chi2), suspicions)


def pair(a: int, b: int, motor: int = 0) -> tuple[int, frozenset]:
    return motor, frozenset({a, b})


BESIDE = ALIKE = math.log(4)
PAIRS = math.log(5 * 4 / 2)
PRIOR_KM_KN = -5 - PAIRS + ALIKE
"""Not side by side, but a hand's slip: two constants. Of ten pairs of five figures."""


# ---- whether


@pytest.mark.parametrize(("more", "taken"), [(-0.05, True), (0.05, False)])
def test_an_exchange_is_taken_if_it_is_likelier_than_one_wrong_figure(monkeypatch, more, taken):
    """Of one figure: χ² of the rest, odds of its cause, e⁻⁴ that it is wrong. Of an exchange: χ²
    of all, its prior, and the normal density at no departure for the figure put right."""
    evidence = made()
    s = suspicion(0, "torque_constant", 30 / 318, sd=0.03, odds=-1.5)
    rest = 7.0
    alone = rest - 2 * (-1.5 - 4.0)
    density = -math.log(0.03 * math.sqrt(2 * math.pi))
    chi2 = alone + 2 * PRIOR_KM_KN + 2 * density + more
    Misfits(monkeypatch, evidence, {pair(KM, KN): chi2})
    assert bool(found(evidence, {0: [s]}, [rest])) == taken


@pytest.mark.parametrize(("more", "taken"), [(-0.05, True), (0.05, False)])
def test_an_exchange_may_explain_two_wrong_figures(monkeypatch, more, taken) -> None:
    evidence = made()
    both = [suspicion(0, "torque_constant", 0.1, sd=0.03, odds=-1.5),
            suspicion(0, "speed_constant", 10.0, sd=0.05, odds=-2.5)]  # fmt: skip
    alone = 3.0 - 2 * (-1.5 - 4.0) - 2 * (-2.5 - 4.0)
    density = -math.log(0.03 * 0.05 * 2 * math.pi)
    chi2 = alone + 2 * PRIOR_KM_KN + 2 * density + more
    Misfits(monkeypatch, evidence, {pair(KM, KN): chi2})
    out = found(evidence, {0: both}, [3.0])
    assert bool(out) == taken
    if taken:
        ((s,),) = out.values()
        assert (s.figure, s.partner, s.saved) == (KM, KN, 200.0)


def test_a_suspicion_that_says_nothing_of_its_odds_has_even_ones(monkeypatch) -> None:
    for more, taken in ((-0.05, True), (0.05, False)):
        evidence = made()
        s = suspicion(0, "torque_constant", 30 / 318, sd=0.03)
        chi2 = 2 * 4.0 + 2 * PRIOR_KM_KN - 2 * math.log(0.03 * math.sqrt(2 * math.pi)) + more
        Misfits(monkeypatch, evidence, {pair(KM, KN): chi2})
        assert bool(found(evidence, {0: [s]}, [0.0])) == taken


def test_of_several_exchanges_the_likeliest_is_taken(monkeypatch) -> None:
    """By χ² and prior: Km with I0 stands side by side (4 times likelier), yet is unlike (e⁻²)."""
    evidence = made()
    both = [suspicion(0, "torque_constant", 0.1), suspicion(0, "no_load_current", 10.0)]
    better = 2 * (ALIKE - (BESIDE - 2.0))
    for more, expected in ((-0.1, (KM, I0)), (0.1, (KM, KN))):
        told = {pair(KM, KN): -900.0, pair(KM, I0): -900.0 - better + more, pair(U, RA): -800.0}
        Misfits(monkeypatch, evidence, told)
        ((s,),) = found(evidence, {0: both}, [0.0]).values()
        assert {s.figure, s.partner} == set(expected)


def test_each_motor_has_its_own_exchange(monkeypatch) -> None:
    """Motors keep their numbers, and the size of a portion changes nothing."""
    for size in (4000, 3, 1):
        monkeypatch.setattr(swaps, "PAIRS", size)
        evidence = made(5)
        told = {pair(KM, KN, 1): -900.0, pair(KM, I0, 4): -900.0, pair(U, RA, 3): -900.0}
        misfits = Misfits(monkeypatch, evidence, told)
        suspicions = {
            i: [suspicion(m, "torque_constant", 0.1), suspicion(m, "terminal_resistance", 10.0)]
            for i, m in enumerate((1, 2, 4))
        }
        suspicions[3] = []
        out = found(evidence, suspicions, [0.0] * 4, [1, 2, 4, 3])
        assert {i: (s.motor, s.figure, s.partner) for i, (s,) in out.items()} == {
            0: (1, KM, KN), 2: (4, KM, I0),
        }  # fmt: skip
        assert misfits.asked == 3 * 10


def test_nobody_is_suspect_and_nothing_exchanged(monkeypatch) -> None:
    evidence = made()
    misfits = Misfits(monkeypatch, evidence, {})
    assert found(evidence, {}, [0.0]) == {}
    assert found(evidence, {0: []}, [0.0]) == {}
    assert misfits.asked == 0


# ---- which pairs


def candidates(evidence: Evidence, *suspicions: Suspicion) -> list[tuple[int, int]]:
    return swaps._candidates(evidence, evidence.problem, 0, 0, list(suspicions))


@pytest.mark.parametrize(("sd", "off", "tried"), [
    (0.02, 0.088, True), (0.02, -0.088, True), (0.02, 0.092, False), (0.02, -0.092, False),
    (0.0, 0.009, True), (0.0, 0.011, False),
])  # fmt: skip
def test_one_suspect_is_exchanged_with_the_number_it_should_have(sd, off, tried) -> None:
    """Within four deviations and 1 %: printed 30, as it should be 318."""
    ratio = 30 / 318 * math.exp(off)
    pairs = candidates(made(), suspicion(0, "torque_constant", ratio, sd=sd))
    assert pairs == ([(KM, KN)] if tried else [])


def test_a_suspect_is_not_exchanged_with_itself() -> None:
    assert candidates(made(), suspicion(0, "torque_constant", 1.0)) == []


def test_of_several_suspects_every_pair_that_differs_is_tried() -> None:
    """By more than 1 %."""
    both = [suspicion(0, "torque_constant", 0.1), suspicion(0, "speed_constant", 10.0)]
    evidence = made()
    every = sorted((a, b) for a in (U, KM, I0, KN, RA) for b in (U, KM, I0, KN, RA) if a < b)
    assert sorted(candidates(evidence, *both)) == every
    for factor, differs in ((1.008, False), (1 / 1.008, False), (1.012, True), (1 / 1.012, True)):
        evidence = made()
        evidence.printed[0, I0] = evidence.printed[0, U] + math.log(factor)
        pair = tuple(sorted((U, I0)))
        assert (pair in candidates(evidence, *both)) == differs


def test_figures_that_are_bounds_or_no_numbers_are_not_exchanged() -> None:
    both = [suspicion(0, "torque_constant", 0.1), suspicion(0, "speed_constant", 10.0)]
    evidence = made()
    evidence.problem.present[0, U] = False
    evidence.printed[0, RA] = np.nan
    evidence.problem.present[0, INDEX["stall_torque"]] = True  # computed, not printed
    assert sorted(candidates(evidence, *both)) == sorted(
        tuple(sorted(p)) for p in ((KM, I0), (KM, KN), (I0, KN))
    )


# ---- what is tried, and how likely


def test_numbers_are_exchanged_in_their_printed_units(monkeypatch) -> None:
    """318 mNm/A and 30 rpm/V in place of 30 mNm/A and 318 rpm/V; the table itself stays."""
    evidence = made(3)
    kept, asked = evidence.problem.y.copy(), []

    def misfit(part: Problem) -> tuple[np.ndarray, None]:
        asked.append(part.y)
        return np.arange(len(part), dtype=float), None

    monkeypatch.setattr(swaps, "misfit", misfit)
    costs = swaps._costs(evidence, np.array([2, 0]), [(1, KM, KN), (0, U, RA)])
    assert costs == [0.0, 1.0]
    expected = kept[[0, 2]]
    expected[0, KM], expected[0, KN] = np.log([0.318, 30 * math.pi / 30])
    expected[1, U], expected[1, RA] = np.log([1.2, 24.0])
    assert asked[0] == pytest.approx(expected)
    assert (evidence.problem.y == kept).all()


def test_an_exchange_is_one_of_all_pairs_of_the_figures_given() -> None:
    evidence = made()

    def prior(a: int, b: int) -> float:
        return swaps._prior(evidence, evidence.problem, 0, 0, a, b)

    assert prior(KM, KN) == pytest.approx(-5 - math.log(10) + ALIKE)
    assert prior(U, KM) == pytest.approx(-5 - math.log(10) + BESIDE - 2)
    evidence.problem.present[0, [U, I0, RA]] = False
    assert prior(KM, KN) == pytest.approx(-5 + ALIKE)


def test_cells_are_side_by_side_in_a_row_or_in_a_column() -> None:
    evidence = made()
    for (row, column), beside in (
        ((2, 1), True), ((2, 3), True), ((1, 2), True), ((3, 2), True), ((3, 3), False),
        ((1, 1), False), ((2, 2), False), ((2, 4), False), ((4, 2), False), ((1, 3), False),
    ):  # fmt: skip
        for a, place in (("torque_constant", (2, 2)), ("no_load_current", (row, column))):
            evidence.batch.figures[a].row[0], evidence.batch.figures[a].column[0] = place
        for one, other in ((KM, I0), (I0, KM)):
            prior = swaps._prior(evidence, evidence.problem, 0, 0, one, other)
            assert prior == pytest.approx(-5 - math.log(10) - 2 + (BESIDE if beside else 0))


@pytest.mark.parametrize(("a", "b", "alike"), [
    ("terminal_resistance", "terminal_inductance", True), ("nominal_current", "no_load_current",
    True), ("torque_constant", "speed_constant", True), ("torque_constant", "nominal_torque",
    False), ("terminal_resistance", "speed_constant", False),
])  # fmt: skip
def test_like_figures_are_exchanged_rather(a: str, b: str, alike: bool) -> None:
    batch = single()
    for i, key in enumerate((a, "mass", b)):
        put(batch, key, 0, 1.0 + i)
    evidence = Evidence(batch, observe(batch), made().base)
    prior = swaps._prior(evidence, evidence.problem, 0, 0, INDEX[a], INDEX[b])
    assert prior == pytest.approx(-5 + (ALIKE if alike else -2))


# ---- the verdict


@pytest.mark.parametrize(("a", "b", "known", "first", "others"), [
    (KM, KN, ("torque_constant",), KM, True), (KN, KM, ("torque_constant",), KM, True),
    (KM, KN, ("speed_constant", "torque_constant"), KM, True), (KM, KN, ("rotor_inertia",), KM,
     False), (U, KN, ("speed_constant", "rotor_inertia"), KN, True),
    (U, I0, ("rotor_inertia", "speed_constant"), U, False),
])  # fmt: skip
def test_an_exchange_is_told_of_the_figure_that_was_suspect(
    monkeypatch, a, b, known, first, others
) -> None:
    """With what the rest implies when both are out, and the causes besides."""
    evidence = made(2)
    asked = {}

    def fit(part: Problem) -> str:
        asked["present"] = np.flatnonzero(part.present[0]).tolist()
        return "fit"

    def predicted(part: Problem, fitted: str, figure: np.ndarray):
        assert fitted == "fit"
        return part.y[[0], figure] - math.log(7.0), np.array([0.04])

    monkeypatch.setattr(swaps, "fit", fit)
    monkeypatch.setattr(swaps, "predicted", predicted)
    causes = ("figures-swapped", "power-of-ten", "unexplained", "peak-vs-rms")
    suspicions = [suspicion(1, key, 3.0, causes, sd=0.05 + i, saved=40.0 + i, rivals=(2,))
                  for i, key in enumerate(known)]  # fmt: skip
    s = swaps._verdict(evidence, 1, a, b, suspicions)
    assert (s.motor, s.figure, {s.figure, s.partner}, s.rivals) == (1, first, {a, b}, ())
    assert asked["present"] == sorted({U, KM, I0, KN, RA} - {a, b})
    assert s.log_ratio == pytest.approx(math.log(7))
    assert s.implied_sd == pytest.approx(0.04)
    assert s.saved == sum(x.saved for x in suspicions)
    assert s.causes == ("figures-swapped", *(("power-of-ten", "peak-vs-rms") if others else ()))
    of = {INDEX[key]: i for i, key in enumerate(known)}
    assert s.sd == 0.05 + of.get(first, 0)
    assert evidence.problem.present[1, [a, b]].all()
