"""From refits to verdicts: which suspect is taken, who is its rival, and how many there are.

The refits are those of a made-up sheet of contradictions: each costs so much of χ² while all of
its figures are in.
"""

from __future__ import annotations

import math
from types import SimpleNamespace

import numpy as np
import pytest

from motorfolio.schema.reconcile import verdicts
from motorfolio.schema.reconcile.causes import CAUSES, CODE
from motorfolio.schema.reconcile.columns import ColumnFault
from motorfolio.schema.reconcile.families import Shared
from motorfolio.schema.reconcile.inference import Inferred
from motorfolio.schema.reconcile.model import FIGURES, F
from motorfolio.schema.reconcile.problem import Problem
from motorfolio.schema.reconcile.suspects import LeftOut, Suspicion

from .made_up_suspicions import problem, suspicion

NINE = FIGURES[:9]
WHO = F - 1
"""A figure that none of the motors has: its logarithm tells which motor it is."""
DIGITS = 0.003


class Sheet:
    def __init__(
        self, monkeypatch: pytest.MonkeyPatch, *motors: dict[str, float], keys=NINE
    ) -> None:
        """Of every motor its contradictions: figures by their letters, and the cost in χ²."""
        n = len(motors)
        self.contradictions = [
            [([ord(c) - ord("a") for c in letters], cost) for letters, cost in m.items()]
            for m in motors
        ]
        self.problem = problem(n, *keys, sd=DIGITS)
        self.problem.y[:, WHO] = np.arange(n)
        self.ratio = np.full((n, F), math.log(2.0))
        self.implied_sd = np.full((n, F), 0.01)
        self.odd = np.zeros((n, F))
        self.scores = np.full(F, -1.0)
        self.asked: list[tuple] = []
        self.swaps: dict[int, list[Suspicion]] = {}
        self.left_for_swaps: list[tuple] = []
        self.base = SimpleNamespace(chi2=self.chi2(self.problem))
        monkeypatch.setattr(verdicts, "misfit", lambda part: (self.chi2(part), None))
        monkeypatch.setattr(verdicts, "shortlist", lambda part: part.present.copy())
        monkeypatch.setattr(verdicts, "leave_out", self.leave_out)
        monkeypatch.setattr(verdicts, "find_swaps", self.find_swaps)

    def chi2(self, part: Problem) -> np.ndarray:
        return np.array([
            sum(cost for figures, cost in self.contradictions[int(who)] if have[figures].all())
            for who, have in zip(part.y[:, WHO], part.present, strict=True)
        ], dtype=float)  # fmt: skip

    def leave_out(self, part: Problem, which: np.ndarray) -> LeftOut:
        out = LeftOut(*(np.full((len(part), F), np.nan) for _ in range(3)))
        who = part.y[:, WHO].astype(int)
        for f in range(F):
            have = part.present[:, f] & which[:, f]
            without = self.chi2(part.without(np.full(len(part), f)))
            out.chi2[have, f] = without[have]
            out.log_ratio[have, f] = self.ratio[who[have], f]
            out.implied_sd[have, f] = self.implied_sd[who[have], f]
        return out

    def implausible(self, part: Problem, left: LeftOut) -> np.ndarray:
        return self.odd[part.y[:, WHO].astype(int)]

    def scores_of(self, motors, figures, log_ratio, sd) -> np.ndarray:
        self.asked += zip(motors.tolist(), figures.tolist(), log_ratio.tolist(), sd.tolist(),
                          strict=True)  # fmt: skip
        out = np.full((len(motors), len(CAUSES)), -np.inf)
        for cause in ("power-of-ten", "peak-vs-rms"):  # half of the odds each
            out[:, CODE[cause]] = self.scores[figures] - math.log(2)
        return out

    def find_swaps(self, evidence, motors, part, chi2, found):
        self.left_for_swaps += zip(motors.tolist(), part.present.copy(), chi2.tolist(), strict=True)
        return {k: v for k, v in self.swaps.items() if k in found}

    @property
    def evidence(self) -> SimpleNamespace:
        return SimpleNamespace(problem=self.problem, base=self.base, scores=self.scores_of,
                               implausible=self.implausible)  # fmt: skip

    def judge(self) -> list[Suspicion]:
        found, self.removed = verdicts.judge(self.evidence, np.arange(len(self.problem)))
        return found

    def found(self) -> list[str]:
        """Letters of the suspects of every motor, in the order in which they were found."""
        out = [""] * len(self.problem)
        for s in self.judge():
            out[s.motor] += letter(s.figure)
        return out


def letter(figure: int) -> str:
    return chr(figure + ord("a"))


# ---- who is taken


def test_the_figure_in_most_contradictions_is_taken(monkeypatch) -> None:
    t = Sheet(monkeypatch, {"ab": 40, "ac": 40}, {"bc": 60, "cd": 60}, {}, {"de": 11}, {"ae": 11.0})
    t.scores[2] = -2.0
    assert t.found() == ["a", "c", "", "", ""]
    expected = np.zeros((5, F), dtype=bool)
    expected[0, 0] = expected[1, 2] = True
    assert (t.removed == expected).all()


@pytest.mark.parametrize(("cost", "found"), [(11.9, ""), (12.1, "a")])
def test_a_contradiction_costs_more_than_twelve(monkeypatch, cost, found) -> None:
    assert Sheet(monkeypatch, {"a": cost}).found() == [found]


def test_a_figure_that_does_not_depart_is_no_suspect(monkeypatch) -> None:
    t = Sheet(monkeypatch, {"ab": 60, "ac": 60}, {"bc": 60})
    t.ratio[0, 0] = math.log(1.04)
    t.ratio[1] = math.log(1.04)
    assert t.found() == ["bc", ""]


@pytest.mark.parametrize(("n", "most"), [(2, 1), (3, 1), (5, 1), (6, 2), (8, 2), (9, 3)])
def test_no_more_than_a_third_of_the_figures_are_taken_and_one_may_always_be(
    monkeypatch, n: int, most: int
) -> None:
    costs = {letter(i): 100.0 - i for i in range(n)}
    assert Sheet(monkeypatch, costs, keys=FIGURES[:n]).found() == ["abc"[:most]]


def test_each_motor_has_its_own_most(monkeypatch) -> None:
    t = Sheet(monkeypatch, *[{letter(i): 100.0 - i for i in range(9)}] * 3, {"b": 30.0})
    t.problem.present[1, 3:9] = False
    t.base.chi2 = t.chi2(t.problem)
    assert t.found() == ["abc", "a", "abc", "b"]


def test_a_motor_that_no_figure_clears_is_left_and_others_go_on(monkeypatch) -> None:
    """All three figures of it are in each of two contradictions that cost eleven."""
    t = Sheet(monkeypatch, {"a": 11.0, "b": 11.0, "c": 11.0}, {"a": 40, "b": 30}, {"c": 60})
    assert t.found() == ["", "ab", "c"]


def test_motors_are_judged_alike_in_portions(monkeypatch) -> None:
    one = ({"ab": 40, "ac": 40}, {}, {"b": 50, "c": 40}, {"d": 13}, {"e": 90})
    t = Sheet(monkeypatch, *one)
    expected = ["a", "", "bc", "d", "e"]
    assert t.found() == expected
    for step in (1, 2, 3):
        monkeypatch.setattr(verdicts, "STEP", step)
        assert t.found() == expected
    t.swaps = {0: [suspicion(4, FIGURES[7], 2.0, partner=8)]}
    monkeypatch.setattr(verdicts, "STEP", 4)
    t.swaps[3] = []
    found = t.judge()
    assert [(s.motor, s.figure) for s in found][-1] == (4, 7)
    assert np.flatnonzero(t.removed[4]).tolist() == [7, 8]


def test_some_motors_are_asked_and_keep_their_numbers(monkeypatch) -> None:
    t = Sheet(monkeypatch, {"a": 40}, {"b": 40}, {"c": 40}, {"d": 50, "e": 40})
    found, removed = verdicts.judge(t.evidence, np.array([1, 3]))
    assert [(s.motor, letter(s.figure)) for s in found] == [(1, "b"), (3, "d"), (3, "e")]
    assert np.argwhere(removed).tolist() == [[1, 1], [3, 3], [3, 4]]
    assert t.problem.present[:, :9].all()


def test_exchanges_are_asked_with_the_suspects_out(monkeypatch) -> None:
    t = Sheet(monkeypatch, {"a": 40, "bc": 5}, {"b": 50, "c": 40, "d": 7})
    t.judge()
    out = [(m, np.flatnonzero(~have[:9]).tolist(), chi2) for m, have, chi2 in t.left_for_swaps]
    assert out == [(0, [0], 5.0), (1, [1, 2], 7.0)]


def test_a_verdict_in_numbers(monkeypatch) -> None:
    t = Sheet(monkeypatch, {"a": 40, "b": 3})
    t.ratio[0, 0], t.implied_sd[0, 0], t.scores[0] = math.log(3), 0.04, -0.5
    (s,) = t.judge()
    assert (s.motor, s.figure, s.rivals, s.partner) == (0, 0, (), None)
    assert s.log_ratio == pytest.approx(math.log(3))
    assert s.implied_sd == pytest.approx(0.04)
    assert s.sd == pytest.approx(math.hypot(0.04, DIGITS))
    assert s.saved == pytest.approx(40)
    assert s.odds == pytest.approx(-0.5)
    assert s.causes == ("power-of-ten", "peak-vs-rms")
    assert not s.by_family
    assert t.asked[0] == (0, 0, pytest.approx(s.log_ratio), pytest.approx(s.sd))


# ---- how candidates are ranked


def test_candidates_are_within_sixteen_of_the_best_suspect(monkeypatch) -> None:
    """Of every motor its own best, and of those that contradict."""
    t = Sheet(monkeypatch, {}, {}, {})
    left = LeftOut(*(np.full((2, F), np.nan) for _ in range(3)))
    left.chi2[:, :6] = [[30, 45.9, 46.1, 20, 300, 46], [5, 20.9, 21.1, 4, 7, 21]]
    left.log_ratio[:, :6] = np.arange(12).reshape(2, 6) / 10
    left.implied_sd[:, :6] = 0.04
    bad = np.zeros((2, F), dtype=bool)
    bad[:, [0, 4]] = True
    t.odd[1, 1], t.odd[2, 0], t.odd[2, 4] = 1, 2, 1
    t.scores[:6] = (-1.0, -2.0, -3.0, -4.0, -5.0, -6.0)
    part = t.problem.take(np.array([1, 2]))
    ranking = verdicts._rank(t.evidence, np.array([1, 2]), part, left, bad)
    expected = np.full((2, F), np.inf)
    expected[0, [0, 1, 3, 5]] = 30, 45.9 + 6, 20, 46
    expected[1, [0, 1, 3, 4, 5]] = 5 + 12, 20.9, 4, 7 + 6, 21
    assert ranking.chi2 == pytest.approx(expected)
    for f in range(6):
        expected[:, f] -= 2 * t.scores[f]
    assert ranking.total == pytest.approx(expected)
    pairs = [(0, 0), (0, 1), (0, 3), (0, 5), (1, 0), (1, 1), (1, 3), (1, 4), (1, 5)]
    assert sorted(ranking.scores) == pairs
    for i, f in pairs:
        assert ranking.scores[i, f][CODE["power-of-ten"]] == pytest.approx(
            t.scores[f] - math.log(2)
        )
    sd = math.hypot(0.04, DIGITS)
    assert ranking.sd[:, :6] == pytest.approx(np.full((2, 6), sd))
    assert t.asked == [
        (i + 1, f, pytest.approx(left.log_ratio[i, f]), pytest.approx(sd)) for i, f in pairs
    ]


@pytest.mark.parametrize(("fit", "odds", "taken"), [(3, 1.4, "a"), (3, 1.6, "b"), (-3, -1.4, "b"),
                                                    (-3, -1.6, "a")])  # fmt: skip
def test_the_suspect_is_the_likeliest_by_fit_and_causes(monkeypatch, fit, odds, taken) -> None:
    """χ² and twice the logarithm of the odds; here b fits worse by so much and has more odds."""
    t = Sheet(monkeypatch, {"ab": 50.0, "a": 5.0 + fit, "b": 5.0})
    t.scores[1] += odds
    assert t.found() == [taken]


@pytest.mark.parametrize(("fit", "odds", "rival"), [
    (2.4, -9.0, True), (2.5, -9.0, False), (2.6, -9.0, False), (20.0, 7.1, True),
    (20.0, 7.0, False), (20.0, 6.9, False),
])  # fmt: skip
def test_a_rival_fits_or_is_as_likely_nearly(fit, odds, rival) -> None:
    """Worse by less than 2.5 in χ², or by less than 6 with the causes counted in."""
    assert rivals({5: -1.0 + odds}, {}, {3: 1.0, 5: 1.0 + fit}) == ((5,) if rival else ())


def rivals(scores: dict[int, float], odd: dict[int, float], fits: dict[int, float]):
    chi2, total = np.full((1, F), np.inf), np.full((1, F), np.inf)
    for f, value in fits.items():
        chi2[0, f] = value + 6 * odd.get(f, 0)
        total[0, f] = chi2[0, f] - 2 * scores.get(f, -1.0)
    left = LeftOut(chi2, np.full((1, F), 1.0), np.full((1, F), 0.01))
    row = np.full(len(CAUSES), -5.0)
    ranking = verdicts._Ranking(chi2, total, np.full((1, F), 0.02), {(0, 3): row})
    return verdicts._suspicion(0, 0, 3, 90.0, left, ranking).rivals


def test_rivals_come_in_the_order_of_their_odds() -> None:
    assert rivals({5: -1.2, 8: -0.9, 6: -1.1}, {}, {3: 1, 5: 1, 8: 1, 6: 1}) == (8, 6, 5)
    assert rivals({5: 0.9}, {}, {3: 1, 5: 1, 4: 2}) == (5, 4)


def test_a_rival_beyond_what_motors_have_is_as_far_off() -> None:
    assert rivals({}, {}, {3: 1, 5: 1}) == (5,)
    assert rivals({}, {5: 1}, {3: 1, 5: 1.1}) == ()
    assert rivals({5: -np.inf}, {}, {3: 1, 5: 1}) == ()


# ---- second looks


@pytest.mark.parametrize(("odds", "expected"), [(0.9, "ad"), (1.1, "bd")])
def test_another_takes_a_suspect_s_place_if_two_better_without_the_other(
    monkeypatch, odds, expected
) -> None:
    """a is in two contradictions, one of them d's, which is in another one: once d is out, a and b
    fit alike."""
    t = Sheet(monkeypatch, {"ab": 30, "ad": 20, "de": 25})
    t.scores[1] += odds
    t.scores[3] += 0.1
    found = t.judge()
    assert "".join(letter(s.figure) for s in found) == expected
    assert [s.saved for s in found] == [30, 25]
    assert [s.rivals for s in found] == [(1,) if expected == "ad" else (0,), (4,)]
    assert [s.odds for s in found] == pytest.approx([-1.0 if expected == "ad" else -1 + odds, -0.9])


def looked_at_again(monkeypatch, sheet: dict[str, float], out: str):
    """What is found of motor 1 of two, with these figures out at first."""
    t = Sheet(monkeypatch, {"a": 50.0}, sheet)
    motors = np.array([0, 1])
    part = t.problem.take(motors)
    part.present = part.present.copy()
    first = suspicion(0, FIGURES[0], 2.0)
    old = [suspicion(1, FIGURES[ord(c) - ord("a")], 2.0) for c in out]
    part.present[0, 0] = False
    for s in old:
        part.present[1, s.figure] = False
    found = {0: [first], 1: old}
    verdicts._reconsider(t.evidence, motors, part, found)
    assert found[0] == [first]
    gone = np.flatnonzero(~part.present[1, :9]).tolist()
    assert gone == sorted(s.figure for s in found[1])
    assert np.flatnonzero(~part.present[0, :9]).tolist() == [0]
    return "".join(letter(s.figure) for s in found[1])


def test_a_suspect_that_contradicts_nothing_without_the_others_is_dropped(monkeypatch) -> None:
    assert looked_at_again(monkeypatch, {"ad": 60.0, "d": 90.0}, "ad") == "d"
    assert looked_at_again(monkeypatch, {}, "ad") == ""


def test_who_is_right_after_all_gives_way_to_who_is_not(monkeypatch) -> None:
    """And is named once, though it takes the place of two."""
    assert looked_at_again(monkeypatch, {"ad": 60.0, "e": 20.0, "d": 90.0}, "ad") == "ed"
    assert looked_at_again(monkeypatch, {"bc": 30.0, "b": 1.0}, "ad") == "b"


def test_what_looked_worst_stays_if_the_other_is_no_better(monkeypatch) -> None:
    assert looked_at_again(monkeypatch, {"ab": 30.0, "cd": 30.0, "b": 1.9}, "ad") == "ad"
    assert looked_at_again(monkeypatch, {"ab": 30.0, "cd": 30.0, "b": 2.0}, "ad") == "ad"
    assert looked_at_again(monkeypatch, {"ab": 30.0, "cd": 30.0, "b": 2.1}, "ad") == "bd"


@pytest.mark.parametrize("kind", [
    verdicts._Ranking, Suspicion, LeftOut, ColumnFault, Shared, Inferred,
])  # fmt: skip
def test_what_is_filled_in_bit_by_bit_has_its_fields_only(kind: type) -> None:
    """A misspelt one would be lost silently."""
    with pytest.raises(AttributeError):
        object.__new__(kind).misspelt = 1


def test_only_motors_with_several_suspects_are_looked_at_again(monkeypatch) -> None:
    assert looked_at_again(monkeypatch, {"bc": 30.0}, "a") == "a"
