"""When rows are a family, and how sure what they share is."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.adjust import Fit, fit
from motorfolio.schema.reconcile.families import (
    groups,
    majority,
    observe_families,
    stands_off,
)
from motorfolio.schema.reconcile.model import P
from motorfolio.schema.reconcile.observed import observe

from .made_up_suspicions import problem
from .simulated_sheets import FULL, make, single, spoil

K, R, J, L, U, I0 = range(6)
"""The first unknowns: Km, Ra, J, La, U, I0."""

INSIDE, OUTSIDE = math.log(1.049), math.log(1.051)


def alike(*values: float, part: float = 0.6) -> bool:
    found = majority(np.array(values), np.zeros(len(values), dtype=int), 0.05, part)
    return bool(np.isfinite(found.median[0]))


# ---- groups


def test_a_group_is_of_one_series_and_one_kind() -> None:
    batch = single(n=7)
    batch.series = ["A", "B", "A", None, "A", None, "B"]
    batch.commutation[4:6] = int(Commutation.BLOCK)
    assert groups(batch).tolist() == [0, 1, 0, 2, 3, 4, 1]
    assert groups(batch, slice(3, 6)).tolist() == [0, 1, 2]
    assert groups(batch, slice(0, 0)).size == 0


# ---- majorities


def test_a_family_is_of_three_of_which_two_agree_or_of_three_that_agree() -> None:
    assert not alike(0.0)
    assert not alike(0.0, 0.0)
    assert alike(0.0, 0.0, 1.0)
    assert not alike(0.0, 1.0, 2.0)
    assert alike(0.0, 0.0, 0.0, 1.0)
    assert not alike(0.0, 0.0, 0.0, 1.0, 2.0, 3.0)  # a half
    assert alike(0.0, 0.0, 0.0, 1.0, 2.0)  # six in ten
    assert not alike(0.0, 0.0, 1.0, 2.0, part=0.4)  # two of four are no three
    assert alike(0.0, 0.0, 0.0, 0.0, 1.0, part=0.8)
    assert not alike(0.0, 0.0, 0.0, 1.0, part=0.8)


def test_agreement_is_within_the_tolerance_of_the_median() -> None:
    """Of five, four lie at the median or beside it; 5 % either way."""
    for sign in (1, -1):
        assert alike(0.0, sign * INSIDE, 0.0, 0.0, 2.0, part=0.8)
        assert not alike(0.0, sign * OUTSIDE, 0.0, 0.0, 2.0, part=0.8)
    assert not alike(0.0, np.log1p(0.05), 0.0, 0.0, 2.0, part=0.8)


def test_groups_without_a_figure_are_passed_over() -> None:
    value = np.array([np.nan, 0.1, 0.2, 0.32, 0.1, np.nan, np.nan, 7.0, np.nan])
    group = np.array([0, 1, 1, 1, 1, 2, 3, 3, 4])
    found = majority(value, group, 0.3)
    assert found.median == pytest.approx([np.nan, 0.15, np.nan, np.nan, np.nan], nan_ok=True)
    assert found.count.tolist() == [0, 4, 0, 1, 0]
    spread = math.sqrt((0.05**2 * 3 + 0.17**2) / 3)
    assert found.spread == pytest.approx([0, spread, 0, 0, 0])
    nothing = majority(np.zeros(0), np.zeros(0, dtype=int), 0.3)
    assert nothing.median.size == nothing.spread.size == nothing.count.size == 0


def test_the_spread_is_of_those_that_agree() -> None:
    """The sample's standard deviation about the median, n − 1 in the divisor."""
    found = majority(np.array([0.0, 0.03, -0.03, 1.0]), np.zeros(4, dtype=int), 0.05)
    middle = 0.015
    near = [0.0 - middle, 0.03 - middle, -0.03 - middle]
    assert found.median == pytest.approx([middle])
    assert found.spread == pytest.approx([math.sqrt(sum(x * x for x in near) / 2)])
    assert found.count.tolist() == [3]


def test_the_part_that_must_agree_may_differ_by_group() -> None:
    value, group = np.array([0.0, 0.0, 0.0, 2.0] * 2), np.repeat([0, 1], 4)
    found = majority(value, group, 0.05, np.array([0.7, 0.8]))
    assert np.isfinite(found.median).tolist() == [True, False]


# ---- what is handed to the adjustment


def fitted(*shared: tuple[float, float, float, float], sd: float = 1e-6) -> Fit:
    """Fits whose Km/√Ra, J, La/Ra and Km·I0 have these logarithms."""
    x = np.zeros((len(shared), P))
    for row, (km, j, tau, friction) in zip(x, shared, strict=True):
        row[R] = 0.6
        row[K], row[J], row[L] = km + 0.3, j, tau + 0.6
        row[I0] = friction - row[K]
    covariance = np.tile(np.eye(P) * (sd / 2) ** 2, (len(x), 1, 1))
    return Fit(x, covariance, np.zeros(len(x)))


def observed(base: Fit, group: list[int], named: list[bool] | None = None):
    part = problem(len(group), "torque_constant")
    no = np.zeros(len(group), dtype=bool)
    known = ~no if named is None else np.array(named)
    member = observe_families(part, base, no, np.array(group, dtype=int), known)
    return member, part


def test_what_windings_share_has_at_least_three_tenths_of_the_tolerance() -> None:
    """And the median of n is one of n: the gap of a further motor has 1 + 1.5/n of the variance,
    π/2 for large n (Kenney and Keeping, Mathematics of Statistics, from memory)."""
    _, part = observed(fitted(*[(0.1, 0.2, 0.3, 0.4)] * 4), [0] * 4)
    assert part.family == pytest.approx(np.tile([0.1, 0.2, 0.3, 0.4], (4, 1)))
    least = np.array([0.015, 0.015, 0.015, 0.03]) * math.sqrt(1 + 1.5 / 4)
    assert part.family_sd == pytest.approx(np.tile(least, (4, 1)))


@pytest.mark.parametrize("apart", [0.018, 0.03])
def test_what_windings_share_is_as_sure_as_they_scatter(apart: float) -> None:
    """A fifth more than their deviation, and at most six tenths of the tolerance."""
    rows = [(0.0,) * 4, (apart,) * 4, (-apart,) * 4]
    _, part = observed(fitted(*rows), [0] * 3)
    spread = min(1.2 * math.sqrt(2 * apart**2 / 2), 0.03)
    assert part.family_sd[:, :3] == pytest.approx(np.full((3, 3), spread * math.sqrt(1.5)))
    friction = max(1.2 * math.sqrt(2 * apart**2 / 2), 0.03)
    assert part.family_sd[:, 3] == pytest.approx(np.full(3, friction * math.sqrt(1.5)))


@pytest.mark.parametrize(("which", "agree"), [(0, 0.05), (1, 0.05), (2, 0.05), (3, 0.10)])
def test_windings_agree_within_five_percent_and_in_friction_within_ten(which, agree) -> None:
    for inside in (True, False):
        off = math.log1p(agree) + (-0.002 if inside else 0.002)
        rows = np.zeros((3, 4))
        rows[1, which], rows[2, which] = off, -off
        member, part = observed(fitted(*rows.tolist()), [0] * 3)
        if which:
            assert member.all()
            assert np.isfinite(part.family[:, which]).all() == inside
            assert np.isfinite(part.family_sd[:, which]).all() == inside
        else:
            assert member.all() == inside


def test_without_a_common_motor_constant_nothing_is_shared() -> None:
    rows = [(0.0, 1.0, 1.0, 1.0), (0.5, 1.0, 1.0, 1.0), (-0.5, 1.0, 1.0, 1.0)]
    member, part = observed(fitted(*rows, *[(2.0,) * 4] * 3), [0] * 3 + [1] * 3)
    assert member.tolist() == [False] * 3 + [True] * 3
    assert np.isnan(part.family[:3]).all()
    assert np.isposinf(part.family_sd[:3]).all()
    assert part.family[3:] == pytest.approx(np.full((3, 4), 2.0))


@pytest.mark.parametrize(("n", "off", "expected"), [
    (3, 0, False), (4, 0, True), (5, 1, True), (4, 1, False), (6, 2, False),
])  # fmt: skip
def test_rows_of_no_series_are_a_family_of_four_of_which_eight_in_ten_agree(n, off, expected):
    rows = [(0.0,) * 4] * (n - off) + [(1.0 + i,) * 4 for i in range(off)]
    member, _ = observed(fitted(*rows), [0] * n, [False] * n)
    assert member.tolist() == [expected] * n
    member, _ = observed(fitted(*rows), [0] * n, [False] * (n - 1) + [True])
    assert member.all() == (off < n / 2 - 0.5)  # six in ten of a series


def test_two_are_no_family_nor_is_nobody() -> None:
    member, part = observed(fitted(*[(0.0,) * 4] * 2), [0, 0])
    assert member.tolist() == [False, False]
    assert np.isnan(part.family).all()
    member, _ = observed(fitted(), [])
    assert member.size == 0


def test_a_motor_that_knows_too_little_of_itself_has_no_say() -> None:
    """Its own deviation must be below the tolerance: 5 %, 10 % of friction. Km/√Ra and Km·I0 have
    1.25 and 2 of the variance of one unknown."""
    base = fitted(*[(0.1, 0.2, 0.3, 0.4)] * 3, (0.8, 0.9, 1.0, 1.1))
    _, part = observed(base, [0] * 4)
    assert part.family[0] == pytest.approx([0.1, 0.2, 0.3, 0.4])
    for variance, known in ((0.048**2, [False, True, False, True]), (0.052**2, [False] * 4),
                            (0.043**2, [True, True, False, True]), (0.072**2, [False] * 4),
                            (0.034**2, [True] * 4)):  # fmt: skip
        base.covariance[:] = np.eye(P) * variance
        member, part = observed(base, [0] * 4)
        expected = known if known[0] else [False] * 4
        assert np.isfinite(part.family[0]).tolist() == expected
        assert member.all() == known[0]


@pytest.mark.parametrize("n", [3, 4])
def test_a_motor_in_doubt_is_fitted_robustly_and_its_fit_left_alone(n: int) -> None:
    s = make(np.random.default_rng(4), n, keys=FULL, scatter=0.0, digits=6)
    named = np.ones(n, dtype=bool)
    right = np.log(s.truth["Km"]) - np.log(s.truth["Ra"]) / 2
    for row, factor in ((1, 2.0), (2, 0.5)):  # no majority
        spoil(s.batch, "terminal_resistance", row, factor)
    part = observe(s.batch)
    base = fit(part)
    kept = base.x.copy()
    unsure = np.isin(np.arange(n), (1, 2))
    group = groups(s.batch)
    assert not observe_families(part, base, ~named, group, named).any()
    assert observe_families(part, base, unsure, group, named).all()
    assert part.family[:, 0] == pytest.approx(np.full(n, np.median(right)), abs=2e-3)
    assert (base.x == kept).all()


# ---- who stands off


def test_a_motor_stands_off_by_two_deviations_of_both_together() -> None:
    """Squares of the gaps over both variances, added: more than four."""
    part = problem(6, "torque_constant")
    part.family[:], part.family_sd[:] = 0.5, 0.03
    part.family[5], part.family_sd[5] = np.nan, np.inf
    little, much = 0.03 * 0.99, 0.03 * 1.01
    gaps = [(0, 0.099, 0, 0), (0, -0.101, 0, 0), (0, 0.101, 0, 0), (little,) * 4,
            (much, -much, much, -much), (3, 3, 3, 3)]  # fmt: skip
    base = fitted(*(0.5 + np.array(gaps)))
    base.covariance[:] = 0.0
    base.covariance[:3, J, J] = 0.04**2  # with 0.03 of the family 0.05
    assert stands_off(part, base).tolist() == [False, True, True, False, True, False]
    part.family_sd[:], base.covariance[:] = 0.5, 0.0
    base.x[:] = 0.0
    part.family[:] = [(0, 1.0, 0, 0), (0, -1.0, 0, 0), (0, 0, 1.0, 0.25)] * 2  # 4, and a little
    assert stands_off(part, base).tolist() == [False, False, True] * 2
