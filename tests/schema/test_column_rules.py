"""When a column is at fault as a whole, on refits put in by hand."""

from __future__ import annotations

import math
from types import SimpleNamespace

import numpy as np
import pytest

from motorfolio.schema.reconcile import columns
from motorfolio.schema.reconcile.causes import CAUSES, CODE
from motorfolio.schema.reconcile.model import FIGURES, INDEX, F
from motorfolio.schema.reconcile.problem import Problem
from motorfolio.schema.reconcile.suspects import LeftOut

from .made_up_suspicions import left_out, problem

DIGITS = 0.003
TORQUE, SPEED, KM = "stall_torque", "no_load_speed", "torque_constant"


class Table:
    """A table whose misfit and refits are given: χ² of every motor, as long as ``faulty`` columns
    are in, and by figure what is left of it, the ratio, and the implied value's deviation."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch, chi2, **figures: tuple) -> None:
        self.chi2 = np.asarray(chi2, dtype=float)
        n = len(self.chi2)
        self.left = left_out(n, **figures)
        self.problem = problem(n, *figures, sd=DIGITS)
        self.odd = np.zeros((n, F))
        self.scores = {INDEX[key]: {"power-of-ten": -1.0} for key in figures}
        self.asked: list[tuple] = []
        self.faulty = [INDEX[key] for key in figures]
        monkeypatch.setattr(columns, "misfit", self._misfit)
        monkeypatch.setattr(columns, "leave_out", self._leave_out)

    def _misfit(self, part: Problem) -> tuple[np.ndarray, np.ndarray]:
        wrong = part.present[:, self.faulty].any()
        return self.chi2 * wrong, np.zeros(len(part))

    def _leave_out(self, part: Problem) -> LeftOut:
        gone = ~part.present
        return LeftOut(*(np.where(gone, np.nan, a) for a in
                         (self.left.chi2, self.left.log_ratio, self.left.implied_sd)))  # fmt: skip

    def _column_scores(self, figure: int, motors: np.ndarray, log_ratio: float, sd: float):
        self.asked.append((FIGURES[figure], motors.tolist(), log_ratio, sd))
        out = np.full(len(CAUSES), -np.inf)
        for cause, score in self.scores[figure].items():
            out[CODE[cause]] = score
        return out

    def faults(self) -> list[columns.ColumnFault]:
        evidence = SimpleNamespace(
            problem=self.problem, implausible=lambda part, left: self.odd,
            column_scores=self._column_scores,
        )  # fmt: skip
        return columns.column_faults(evidence, np.arange(len(self.chi2)))

    def named(self) -> list[str]:
        return [FIGURES[f.figure] for f in self.faults()]


GOOD = (0.0, 1.2, 0.01)
"""Left out, nothing is left of χ²; printed 1.2 times the implied value, known to 1 %."""


# ---- when it is looked for at all


@pytest.mark.parametrize(("others", "n", "found"), [
    (5.9, 20, False), (6.0, 20, True), (6.1, 20, True), (5.9, 29, False), (5.9, 30, True),
    (6.1, 30, True),
])  # fmt: skip
def test_half_of_few_motors_must_fit_badly(monkeypatch, others, n, found) -> None:
    """The middle one of fewer than thirty by half of what counts as a contradiction."""
    wrong = math.ceil(0.4 * n)
    t = Table(monkeypatch, [60.0] * wrong + [others] * (n - wrong), stall_torque=GOOD)
    assert bool(t.faults()) == found


@pytest.mark.parametrize(("wrong", "n", "found"), [(7, 22, False), (7, 20, True), (8, 22, True)])
def test_more_than_a_third_must_contradict_themselves(monkeypatch, wrong, n, found) -> None:
    """35 %: half of the part that must share the factor; others may hide it by scatter."""
    t = Table(monkeypatch, [200.0] * wrong + [11.9] * (n - wrong), stall_torque=GOOD)
    assert bool(t.faults()) == found


def test_a_contradiction_is_worth_more_than_twelve(monkeypatch) -> None:
    assert Table(monkeypatch, [11.9] * 6, stall_torque=GOOD).faults() == []
    assert Table(monkeypatch, [12.0] * 6, stall_torque=GOOD).faults() == []
    assert Table(monkeypatch, [12.1] * 6, stall_torque=GOOD).named() == [TORQUE]


# ---- what makes a column


@pytest.mark.parametrize(("n", "found"), [(2, False), (3, True)])
def test_a_column_is_of_three_motors_that_tell(monkeypatch, n, found) -> None:
    sd = np.array([0.01] * n + [0.41] * 2)
    t = Table(monkeypatch, [50.0] * (n + 2), no_load_speed=(49.0, 1.2, 0.9),
              stall_torque=(0.0, 1.2, sd))  # fmt: skip
    assert t.named() == ([TORQUE] if found else [])
    if found:
        assert t.asked[0][:2] == (TORQUE, list(range(n)))


def test_motors_whose_ratio_is_not_known_to_a_half_do_not_count(monkeypatch) -> None:
    """Deviation 0.4 in the logarithm."""
    for sd, which in ((0.39, [0, 1, 2, 3, 4]), (0.41, [0, 1, 2, 3])):
        t = Table(monkeypatch, [60.0] * 5,
                  stall_torque=(0.0, 1.2, np.array([0.01] * 4 + [sd])))  # fmt: skip
        t.faults()
        assert t.asked[0][1] == which


@pytest.mark.parametrize(("off", "found"), [(0.98, True), (1.02, False), (-0.98, True),
                                            (-1.02, False)])  # fmt: skip
def test_a_motor_shares_the_factor_within_three_deviations(monkeypatch, off, found) -> None:
    """And 0.02 besides. Of ten, three are off by so much of it and one by far."""
    reach = 3 * math.hypot(0.01, DIGITS) + 0.02
    shift = math.log(1.2) + np.array([0.0] * 6 + [off * reach] * 3 + [2.0])
    t = Table(monkeypatch, [60.0] * 10, stall_torque=(0.0, np.exp(shift), 0.01))
    assert bool(t.faults()) == found


@pytest.mark.parametrize(("others", "found"), [(3, True), (4, False)])
def test_seven_in_ten_motors_share_the_factor(monkeypatch, others, found) -> None:
    shift = np.full(10, math.log(1.2))
    shift[:others] = (2.0, -2.0, 3.0, -3.0)[:others]
    t = Table(monkeypatch, [60.0] * 10, stall_torque=(0.0, np.exp(shift), 0.01))
    assert bool(t.faults()) == found


@pytest.mark.parametrize(("ratio", "sd", "found"), [
    (1.08, 0.01, True), (1.06, 0.01, False), (1 / 1.08, 0.01, True), (1 / 1.06, 0.01, False),
    (1.12, 0.03, True), (1.10, 0.03, False),
])  # fmt: skip
def test_a_column_departs_by_five_percent_and_two_deviations(monkeypatch, ratio, sd, found) -> None:
    t = Table(monkeypatch, [60.0] * 5,
              stall_torque=(0.0, ratio, np.array([sd, sd, sd, sd / 2, 2 * sd])))  # fmt: skip
    assert bool(t.faults()) == found


@pytest.mark.parametrize(("n", "saved", "found"), [
    (4, 26.5, True), (4, 26.3, False), (10, 48.1, True), (10, 47.9, False),
])  # fmt: skip
def test_a_column_saves_twelve_and_three_tenths_of_it_a_motor(monkeypatch, n, saved, found) -> None:
    t = Table(monkeypatch, [20.0] * n, stall_torque=(20.0 - saved / n, 1.2, 0.01))
    assert bool(t.faults()) == found


def test_a_motor_counts_forty_and_the_logarithm_of_the_rest(monkeypatch) -> None:
    """Three of eight have a far worse mistake of their own, that one of them is left with."""
    own = np.array([1040.0] + [20.0] * 7)
    for left, found in ((12.0, True), (17.0, False)):
        saved = 7 * (20 - left) + math.log(1 + 1000) - math.log(1 + 500)
        assert (saved > 12 + 3.6 * 8) == found
        t = Table(monkeypatch, own,
                  stall_torque=(np.array([540.0] + [left] * 7), 1.2, 0.01))  # fmt: skip
        assert bool(t.faults()) == found
    capped = columns._capped(np.array([0.0, 39.0, 40.0, 41.0, 140.0]))
    assert capped == pytest.approx([0, 39, 40, 40 + math.log(2), 40 + math.log(101)])


def test_departures_from_the_common_factor_stay_in_the_sum(monkeypatch) -> None:
    """As squares over the variance of each motor's ratio."""
    sd = math.hypot(0.01, DIGITS)
    shift = math.log(1.2) + sd * np.array([0.0, 0.0, 0.0, 2.0, -2.0])
    for left, found in ((20 - 7.65, True), (20 - 7.55, False)):  # 5·7.6 − 2·2² = 12 + 3.6·5
        t = Table(monkeypatch, [20.0] * 5, stall_torque=(left, np.exp(shift), 0.01))
        assert bool(t.faults()) == found


def test_implausible_values_cost_six_each(monkeypatch) -> None:
    for cost, saved, found in ((1, 26.4 + 6.2, True), (1, 26.4 + 5.8, False),
                               (2, 26.4 + 12.2, True), (2, 26.4 + 11.8, False)):  # fmt: skip
        t = Table(monkeypatch, [20.0] * 4, stall_torque=(20.0 - saved / 4, 1.2, 0.01))
        t.odd[2, INDEX[TORQUE]] = cost
        t.odd[1, INDEX[SPEED]] = 9
        assert bool(t.faults()) == found


# ---- which column


def test_a_column_s_finding_in_numbers(monkeypatch) -> None:
    """Median ratio; deviation of the mean of n, 0.002 besides and 1.2 % that a table may be off."""
    sd = np.array([0.01, 0.02, 0.03, 0.02])
    ratio = np.array([1.2, 1.21, 1.19, 1.2])
    t = Table(monkeypatch, [60.0] * 4, stall_torque=(0.0, ratio, sd))
    (fault,) = t.faults()
    spread = math.hypot(0.02, DIGITS) / math.sqrt(4) + 0.002
    assert FIGURES[fault.figure] == TORQUE
    assert fault.log_ratio == pytest.approx(math.log(1.2))
    assert fault.implied_sd == pytest.approx(0.02)
    assert fault.sd == pytest.approx(math.hypot(spread, 0.012))
    assert fault.causes == ("power-of-ten",)
    assert t.asked == [(TORQUE, [0, 1, 2, 3], pytest.approx(math.log(1.2)),
                        pytest.approx(math.hypot(spread, 0.012)))]  # fmt: skip


@pytest.mark.parametrize(("fit", "odds", "expected"), [
    (2.0, 0.9, TORQUE), (2.0, 1.1, SPEED), (0.0, 0.1, SPEED), (0.0, -0.1, TORQUE),
])  # fmt: skip
def test_the_column_at_fault_is_the_likeliest_by_fit_and_causes(monkeypatch, fit, odds, expected):
    """χ² and twice the logarithm of the odds; here the speed's are better by so much."""
    worse = np.array([fit, 0.0, 0.0, 0.0])
    t = Table(monkeypatch, [60.0] * 4, stall_torque=GOOD, no_load_speed=(worse, 1.2, 0.01))
    t.scores[INDEX[SPEED]] = dict.fromkeys(
        ("power-of-ten", "rev-per-second"), -1.0 + odds - math.log(2)
    )
    (fault,) = t.faults()
    assert FIGURES[fault.figure] == expected


def test_of_columns_that_are_not_at_fault_none_is_taken_or_a_rival(monkeypatch) -> None:
    """Though it would fit better and be likelier, its ratio is no departure."""
    t = Table(monkeypatch, [60.0] * 4, stall_torque=(1.0, 1.2, 0.01),
              no_load_speed=(0.0, 1.01, 0.01), torque_constant=(0.0, 1.2, 0.7))  # fmt: skip
    t.scores[INDEX[SPEED]] = {"power-of-ten": 9.0}
    (fault,) = t.faults()
    assert (FIGURES[fault.figure], fault.rivals) == (TORQUE, ())


@pytest.mark.parametrize(("fit", "odds", "rival"), [
    (2.4, 9.0, True), (2.6, 9.0, False), (9.0, 1.6, False), (4.0, 0.9, True), (4.0, 1.0, False),
    (2.5, 9.0, False),
])  # fmt: skip
def test_a_rival_column_fits_or_is_as_likely_nearly(monkeypatch, fit, odds, rival) -> None:
    """Worse by less than 2.5 in χ², or by less than 6 with the causes counted in."""
    worse = np.array([fit, 0.0, 0.0, 0.0])
    t = Table(monkeypatch, [60.0] * 4, stall_torque=GOOD, no_load_speed=(worse, 1.2, 0.01))
    t.scores[INDEX[SPEED]] = {"rev-per-second": -1.0 - odds}
    (fault,) = t.faults()
    assert FIGURES[fault.figure] == TORQUE
    assert fault.rivals == ((INDEX[SPEED],) if rival else ())


def test_rivals_come_in_the_order_of_their_odds(monkeypatch) -> None:
    t = Table(monkeypatch, [60.0] * 4, stall_torque=GOOD, no_load_speed=GOOD, torque_constant=GOOD)
    t.scores |= {INDEX[KM]: {"power-of-ten": -3.0}, INDEX[SPEED]: {"power-of-ten": -2.0}}
    assert t.faults()[0].rivals == (INDEX[SPEED], INDEX[KM])
    t.scores[INDEX[KM]] = {"power-of-ten": -1.5}
    assert t.faults()[0].rivals == (INDEX[KM], INDEX[SPEED])


def test_columns_are_taken_out_one_by_one(monkeypatch) -> None:
    """Of eight columns two at most, of two one; the problem itself is left alone."""
    keys = (TORQUE, SPEED, KM, "rotor_inertia", "speed_constant", "stall_current",
            "nominal_voltage", "terminal_resistance")  # fmt: skip
    for n, found in ((2, [KM]), (5, [KM]), (8, [KM, SPEED])):
        t = Table(
            monkeypatch, [60.0] * 4, **dict.fromkeys(keys[:n] if n > 2 else (SPEED, KM), GOOD)
        )
        t.scores |= {INDEX[KM]: {"power-of-ten": 0.0}, INDEX[SPEED]: {"power-of-ten": -0.5}}
        before = t.problem.present.copy()
        assert t.named() == found
        assert (t.problem.present == before).all()


def test_after_the_last_mistake_nothing_is_found(monkeypatch) -> None:
    keys = (TORQUE, SPEED, KM, "rotor_inertia", "speed_constant", "stall_current",
            "nominal_voltage", "terminal_resistance")  # fmt: skip
    t = Table(monkeypatch, [60.0] * 4, **dict.fromkeys(keys, GOOD))
    t.faulty = [INDEX[TORQUE]]
    t.scores[INDEX[TORQUE]] = {"power-of-ten": 0.0}
    assert t.named() == [TORQUE]


def test_only_the_motors_asked_for_are_judged(monkeypatch) -> None:
    t = Table(monkeypatch, [60.0] * 3, stall_torque=GOOD)
    wide = problem(6, TORQUE, sd=DIGITS)
    wide.present[[0, 2, 4]] = False
    evidence = SimpleNamespace(
        problem=wide, implausible=lambda part, left: t.odd, column_scores=t._column_scores
    )
    (fault,) = columns.column_faults(evidence, np.array([1, 3, 5]))
    assert FIGURES[fault.figure] == TORQUE
    assert t.asked[0][1] == [1, 3, 5]
