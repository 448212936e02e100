"""What finds a suspect, part by part: against fits one by one, textbook variances, brute force."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.optimize import curve_fit

from motorfolio.schema.batch import Batch, Point
from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.adjust import fit
from motorfolio.schema.reconcile.causes import CAUSES, CODE, shape, static_scores
from motorfolio.schema.reconcile.columns import column_faults
from motorfolio.schema.reconcile.evidence import Evidence, TableEvidence, transpositions
from motorfolio.schema.reconcile.explain import Narrator
from motorfolio.schema.reconcile.families import groups, observe_families
from motorfolio.schema.reconcile.merge import exchanged_neighbours, shared_causes, shared_faults
from motorfolio.schema.reconcile.model import FIGURES, INDEX, UNKNOWNS, F
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.operating_points import fit_points
from motorfolio.schema.reconcile.run import reconcile, severity
from motorfolio.schema.reconcile.suspects import (
    LeftOut,
    Suspicion,
    contradicts,
    doubtful,
    leave_out,
    own_sd,
    predicted,
    shortlist,
)
from motorfolio.schema.reconcile.swaps import _prior
from motorfolio.schema.reconcile.table import readings, scale
from motorfolio.schema.reconcile.verdicts import _Ranking, _suspicion
from motorfolio.schema.vocabulary import quantity

from .simulated_sheets import FULL, SERVO, Sheet, make, put, single, spoil

BRUSHED, BLOCK, SINE = Commutation
OZ_IN = 7.06155  # NIST SP 811 (2008), appendix B.8
STRAIGHT = ("torque_constant", "back_emf_constant", "speed_constant", "terminal_resistance",
            "terminal_inductance", "speed_torque_gradient", "motor_constant", "rotor_inertia",
            "mechanical_time_constant", "electrical_time_constant")  # fmt: skip
"""Figures that are products of powers: of them a linearised test is exact."""


def sheet(kind: Commutation = BRUSHED, seed: int = 1, n: int = 6) -> Sheet:
    return make(np.random.default_rng(seed), n, kind, SERVO if kind is SINE else FULL, scatter=0.3)


def swept(factors: np.ndarray, keys: tuple[str, ...], wrong: str) -> Batch:
    """One motor's figures in every row, one of them off by a factor a row."""
    s = make(np.random.default_rng(3), 1, BRUSHED, keys, scatter=1.0)
    batch = single(n=len(factors))
    for key in keys:
        for row, factor in enumerate(factors.tolist()):
            put(batch, key, row, float(s.batch.figures[key].value[0]))
            if key == wrong:
                batch.figures[key].value[row] *= factor
                batch.figures[key].low[row] *= factor
                batch.figures[key].high[row] *= factor
    return batch


# ---- figures left out


@pytest.mark.parametrize("wrong", ["torque_constant", "terminal_resistance", "rotor_inertia"])
def test_the_linearised_tests_are_exact_where_the_laws_are_straight(wrong: str) -> None:
    """Of products of powers: refits listed within 40 of the best, or a tenth of what it saves, or
    one of the best three; doubt where a refit would save 0.8 of 12 and depart by 0.8 of
    5 % and two deviations."""
    problem = observe(swept(np.exp(np.linspace(-0.9, 0.9, 61)), STRAIGHT, wrong))
    base, left = fit(problem), leave_out(problem)
    best = np.nanmin(left.chi2, axis=1)
    third = np.sort(np.where(np.isnan(left.chi2), np.inf, left.chi2), axis=1)[:, 2]
    reach = np.maximum(best + 40.0 + 0.1 * (base.chi2 - best), third)
    gap = left.chi2 - reach[:, None]
    listed = shortlist(problem)
    clear = problem.present & (np.abs(gap) > 0.05)
    assert (listed == (gap <= 0))[clear].all()
    assert listed[problem.present].any()
    assert not listed[problem.present].all()
    saved = base.chi2[:, None] - left.chi2
    with np.errstate(invalid="ignore"):
        departs = np.expm1(np.abs(left.log_ratio)) > 0.8 * (0.05 + 2 * left.implied_sd)
        alone = ((saved > 0.8 * 12.0) & departs).any(axis=1)
    badly = base.chi2 > 2 * len(STRAIGHT)
    expected = (base.chi2 > 12.0) & (alone | badly)
    found = doubtful(problem, base)
    assert (found == expected).mean() > 0.98  # a row at the very limit may go either way
    assert found.any()
    assert not found.all()


def test_no_contradiction_is_lost_to_the_linearised_test() -> None:
    """Nor is every motor that fits badly as a whole worth the refits."""
    s = make(np.random.default_rng(8), 10, BRUSHED, FULL, scatter=1.6)
    spoil(s.batch, "maximum_efficiency", 3, 0.6)
    problem = observe(s.batch)
    base, left = fit(problem), leave_out(problem)
    found = doubtful(problem, base)
    assert found[contradicts(base.chi2, left).any(axis=1)].all()
    assert found[3]
    with np.errstate(invalid="ignore"):
        quiet = ~((base.chi2[:, None] - left.chi2) > 6.0).any(axis=1)
    quiet &= base.chi2 < 2 * problem.present.sum(axis=1)
    assert not found[quiet].any()


@pytest.mark.parametrize(
    ("idle", "rated", "steep"),
    # Ra·I0 over a fifth of U, I0 over 0.4 of I_N, Ra·I_N over half of U
    [(0.02, 0.15, False), (0.25, 0.45, True), (0.10, 0.20, True), (0.05, 0.6, True),
     (0.10, 0.28, False)],
)  # fmt: skip
def test_where_laws_bend_every_figure_is_refitted(idle: float, rated: float, steep: bool) -> None:
    batch = single()
    u, km, ra = 24.0, 0.03, 1.2
    i0, i_n = idle * u / ra, rated * u / ra
    for key, value in (
        ("nominal_voltage", u), ("torque_constant", km), ("terminal_resistance", ra),
        ("no_load_current", i0), ("no_load_speed", (u - ra * i0) / km), ("nominal_current", i_n),
        ("nominal_torque", km * (i_n - i0)), ("nominal_speed", (u - ra * i_n) / km),
        ("rotor_inertia", 1e-6), ("mechanical_time_constant", 1e-6 * ra / km**2),
        ("terminal_inductance", 1e-3), ("electrical_time_constant", 1e-3 / ra),
        ("speed_torque_gradient", ra / km**2), ("speed_constant", 1 / km),
    ):  # fmt: skip
        put(batch, key, 0, value, 4)
    spoil(batch, "speed_constant", 0, 10.0)
    problem = observe(batch)
    assert shortlist(problem)[0][problem.present[0]].all() == steep


def test_what_is_implied_of_a_peak_torque_is_its_band() -> None:
    """Half to 1.05 of Km·I_peak in the logarithm; variance of a rectangular distribution
    (JCGM 100:2008, 4.3.7): half its width squared over three."""
    s = make(np.random.default_rng(2), 2, SINE, SERVO, scatter=0.0)
    peak = np.full(2, INDEX["peak_torque"])
    part = observe(s.batch).without(peak)
    fitted = fit(part)
    value, sd = predicted(part, fitted, peak)
    x = dict(zip(UNKNOWNS, fitted.x.T, strict=True))
    middle = (math.log(0.5) + math.log(1.05)) / 2
    assert value == pytest.approx(x["torque_constant"] + x["peak_current"] + middle)
    row = np.isin(UNKNOWNS, ["torque_constant", "peak_current"]).astype(float)
    own = np.einsum("npq,p,q->n", fitted.covariance, row, row)
    assert sd**2 == pytest.approx(own + (math.log(1.05 / 0.5) / 2) ** 2 / 3)


def test_what_is_implied_of_the_greatest_efficiency() -> None:
    """(1 − √(I0·Ra/U))² (Fitzgerald, Kingsley, Umans, section 7.7, from memory), its variance by
    differences."""
    eta = np.full(6, INDEX["maximum_efficiency"])
    part = observe(sheet().batch).without(eta)
    fitted = fit(part)
    value, sd = predicted(part, fitted, eta)

    def law(x: np.ndarray) -> np.ndarray:
        ra, u, i0 = (x[:, UNKNOWNS.index(k)] for k in ("resistance", "voltage", "no_load_current"))
        return 2 * np.log(1 - np.sqrt(np.exp(i0 + ra - u)))

    assert value == pytest.approx(law(fitted.x))
    step = 1e-6 * np.eye(len(UNKNOWNS))
    slope = np.array([(law(fitted.x + d) - law(fitted.x - d)) / 2e-6 for d in step]).T
    assert sd**2 == pytest.approx(np.einsum("np,npq,nq->n", slope, fitted.covariance, slope))


def test_a_ratio_is_as_uncertain_as_both_of_its_parts() -> None:
    problem = observe(sheet().batch)
    problem.digits[:], problem.scatter[:] = 0.04, 0.0
    left = LeftOut(*(np.full(problem.y.shape, 0.03) for _ in range(3)))
    assert own_sd(problem, left) == pytest.approx(0.05)


@pytest.mark.parametrize(
    ("saved", "ratio", "sd", "expected"),
    [(13.0, 1.16, 0.05, True), (13.0, 1 / 1.16, 0.05, True), (11.0, 1.16, 0.05, False),
     (13.0, 1.14, 0.05, False), (13.0, 1 / 1.14, 0.05, False), (13.0, 1.06, 0.0, True),
     (13.0, 1.04, 0.0, False)],
)  # fmt: skip
def test_a_contradiction_saves_twelve_and_departs(saved, ratio, sd, expected) -> None:
    """5 % and twice the implied value's standard deviation."""
    left = LeftOut(np.array([[7.0]]), np.log([[ratio]]), np.array([[sd]]))
    assert bool(contradicts(np.array([7.0 + saved]), left)[0, 0]) == expected


@pytest.mark.parametrize(
    ("worse", "worse_in_all", "rival"),
    [(2.0, 9.0, True), (3.0, 5.5, True), (3.0, 6.5, False), (2.0, 3.0, True), (9.0, 9.0, False)],
)
def test_a_rival_fits_nearly_as_well_or_is_nearly_as_likely(worse, worse_in_all, rival) -> None:
    """Worse by less than 2.5 in χ², or by less than 6 with the causes counted in."""
    chi2, total = np.full((1, F), np.inf), np.full((1, F), np.inf)
    chi2[0, [3, 7]], total[0, [3, 7]] = (4.0, 4.0 + worse), (8.0, 8.0 + worse_in_all)
    scores = np.full(len(CAUSES), -50.0)
    scores[CODE["power-of-ten"]] = -1.0
    ranking = _Ranking(chi2, total, np.full((1, F), 0.02), {(0, 3): scores})
    left = LeftOut(chi2, np.full((1, F), math.log(10)), np.full((1, F), 0.01))
    found = _suspicion(5, 0, 3, 90.0, left, ranking)
    assert (found.motor, found.figure, found.rivals) == (5, 3, (7,) if rival else ())
    assert found.causes == ("power-of-ten",)
    assert found.saved == pytest.approx(86.0)
    assert found.odds == pytest.approx(-1.0)


def test_an_error_is_explained_or_far_off() -> None:
    """By more than 15 % and more than five standard deviations."""
    assert severity(math.log(1.06), 0.01, "hot-vs-cold") == "error"
    for sign in (1, -1):
        assert severity(sign * math.log(1.16), 0.01, "unexplained") == "error"
        assert severity(sign * math.log(1.14), 0.01, "unexplained") == "warning"
        assert severity(sign * math.log(1.24), 0.05, "unexplained") == "warning"
        assert severity(sign * math.log(1.26), 0.05, "unexplained") == "error"


# ---- columns


def table(s: Sheet) -> TableEvidence:
    return TableEvidence(s.batch, observe(s.batch))


@pytest.mark.parametrize("n", [3, 6])
@pytest.mark.parametrize(
    ("kind", "key", "factor", "cause"),
    [(BRUSHED, "stall_torque", OZ_IN, "ounce-inch-vs-millinewton-metre"),
     (BRUSHED, "no_load_speed", 1 / 60, "rev-per-second"),
     (BRUSHED, "torque_constant", 0.1, "power-of-ten"),
     (SINE, "terminal_resistance", 2.0, "line-vs-phase"),
     (SINE, "back_emf_constant", 1 / math.sqrt(3), "line-vs-phase")],
)  # fmt: skip
def test_a_factor_that_a_column_shares(kind, key, factor, cause, n) -> None:
    s = sheet(kind, n=n)
    assert column_faults(table(s), np.arange(n)) == []
    for row in range(n):
        spoil(s.batch, key, row, factor)
    (fault,) = column_faults(table(s), np.arange(n))
    assert (FIGURES[fault.figure], fault.causes[0], fault.rivals) == (key, cause, ())
    assert math.exp(fault.log_ratio) == pytest.approx(factor, rel=0.04)
    assert 0.01 < fault.sd < 0.05


def test_a_column_is_of_three_motors_and_of_most() -> None:
    for n, wrong in ((2, 2), (6, 3)):
        s = sheet(n=n)
        for row in range(wrong):
            spoil(s.batch, "stall_torque", row, OZ_IN)
        assert column_faults(table(s), np.arange(n)) == []
    s = sheet(n=6)
    for row, factor in enumerate((0.1, 10.0, 3.0, 0.4, 30.0, 1 / OZ_IN)):
        spoil(s.batch, "stall_torque", row, factor)
    assert column_faults(table(s), np.arange(6)) == []  # each has its own mistake


def test_a_motor_with_a_mistake_of_its_own_does_not_hide_a_column_s() -> None:
    s = sheet()
    for row in range(6):
        spoil(s.batch, "no_load_speed", row, 60.0)
    spoil(s.batch, "speed_constant", 2, 10.0)
    (fault,) = column_faults(table(s), np.arange(6))
    assert FIGURES[fault.figure] == "no_load_speed"
    assert math.exp(fault.log_ratio) == pytest.approx(60.0, rel=0.04)


def test_two_columns_of_a_full_sheet_are_two_findings() -> None:
    s = sheet()
    for row in range(6):
        spoil(s.batch, "no_load_speed", row, 60.0)
        spoil(s.batch, "stall_torque", row, OZ_IN)
    result = reconcile(s.batch)
    found = {f.suspect or f.figures[0]: f for f in result.findings if f.severity != "note"}
    assert set(found) == {"no_load_speed", "stall_torque"}
    for f in found.values():
        assert (f.scope, len(f.part_numbers)) == ("column", 6)


def test_no_more_than_a_third_of_the_columns_are_wrong_and_one_may_always_be() -> None:
    keys = ("torque_constant", "speed_constant", "back_emf_constant", "motor_constant",
            "speed_torque_gradient")  # fmt: skip
    s = make(np.random.default_rng(1), 6, BRUSHED, keys, scatter=0.3)
    for row in range(6):
        spoil(s.batch, "torque_constant", row, 1.12)
        spoil(s.batch, "speed_torque_gradient", row, 1.3)
    assert len(column_faults(table(s), np.arange(6))) == 1


# ---- what several suspicions have in common


def suspicion(motor: int, key: str, ratio: float, causes=("unexplained",), **more) -> Suspicion:
    given = {"rivals": (), "implied_sd": 0.01, "sd": 0.01, "saved": 100.0, **more}
    return Suspicion(motor, INDEX[key], log_ratio=math.log(ratio), causes=causes, **given)


def test_neighbours_of_one_series_only() -> None:
    batch = single(n=3)
    batch.series = ["ab", "".join(["a", "b"]), "b"]  # equal, not the same object
    for row, current in enumerate((1.0, 2.0, 4.0)):
        put(batch, "stall_current", row, current)
    one, two = suspicion(0, "stall_current", 0.5), suspicion(1, "stall_current", 2.0)
    exchanged_neighbours(batch, [one, two])
    assert one.causes == two.causes == ("neighbouring-column",)
    two, three = suspicion(1, "stall_current", 0.5), suspicion(2, "stall_current", 2.0)
    exchanged_neighbours(batch, [two, three])
    assert two.causes == three.causes == ("unexplained",)


@pytest.mark.parametrize(
    ("other", "geared"), [(25.3, True), (26.2, True), (27.0, False), (60.0, False), (12.0, False)]
)
def test_torques_of_one_gear_share_its_ratio(other: float, geared: bool) -> None:
    """Alike within three standard deviations, and 2 % for the rounding."""
    both = [suspicion(1, "nominal_torque", 25.0), suspicion(1, "stall_torque", other)]
    shared_causes(both)
    assert {s.causes[0] for s in both} == {"gear-output-side" if geared else "unexplained"}


def test_a_figure_of_an_exchange_is_no_part_of_a_column() -> None:
    batch = single(n=3)
    for row in range(3):
        put(batch, "stall_torque", row, 1.0)
    ten = [suspicion(m, "stall_torque", 10.0, ("power-of-ten",)) for m in range(3)]
    ten[2].partner = INDEX["nominal_torque"]
    merged, left = shared_faults(batch, ten)
    assert merged == []
    assert left == ten
    ten[2].partner = None
    ((fault, motors),), left = shared_faults(batch, ten)
    assert (fault.causes, motors.tolist(), left) == (("power-of-ten",), [0, 1, 2], [])


# ---- families


@pytest.mark.parametrize("n", [3, 5, 6, 9])
def test_what_a_family_shares_is_its_median(n: int) -> None:
    """The gap of one more motor to the median of n has (1 + π/(2n)) of their variance (large
    samples: Kenney and Keeping, Mathematics of Statistics, from memory)."""
    s = make(np.random.default_rng(4), n, BRUSHED, FULL, scatter=0.0, digits=6)
    problem = observe(s.batch)
    named = np.ones(n, dtype=bool)
    base = fit(problem)
    assert observe_families(problem, base, ~named, groups(s.batch), named).all()
    t = {k: np.log(v) for k, v in s.truth.items()}
    shared = [t["Km"] - t["Ra"] / 2, t["J"], t["La"] - t["Ra"], t["Km"] + t["I0"]]
    for i, (values, tolerance) in enumerate(zip(shared, (0.05, 0.05, 0.05, 0.1), strict=True)):
        assert problem.family[:, i] == pytest.approx(np.median(values), abs=0.006)
        near = values[np.abs(values - np.median(values)) < math.log1p(tolerance)]
        spread = math.sqrt(((near - np.median(values)) ** 2).sum() / (near.size - 1))
        spread = min(max(spread, 0.25 * tolerance), 0.5 * tolerance)
        expected = spread * math.sqrt(1 + math.pi / 2 / near.size)
        assert problem.family_sd[:, i] == pytest.approx(expected, rel=0.25)


def test_unlike_motors_are_no_family() -> None:
    rng = np.random.default_rng(5)
    batch = single(n=4)
    for i in range(4):
        other = make(rng, 1, BRUSHED, FULL, scatter=0.3)
        for key in FULL:
            put(batch, key, i, float(other.batch.figures[key].value[0]))
    batch.series = ["A"] * 4
    problem = observe(batch)
    named = np.ones(4, dtype=bool)
    assert not observe_families(problem, fit(problem), ~named, groups(batch), named).any()
    assert np.isnan(problem.family).all()
    assert np.isinf(problem.family_sd).all()


# ---- evidence


def test_values_beyond_any_motor_s() -> None:
    s = sheet(n=2)
    problem = observe(s.batch)
    left = LeftOut(*(np.where(problem.present, 0.0, np.nan) for _ in range(3)))
    evidence = TableEvidence(s.batch, problem)
    assert not evidence.implausible(problem, left).any()
    km, ra = INDEX["torque_constant"], INDEX["terminal_resistance"]
    for sign in (20.0, -20.0):  # printed 10^±8.7 of the implied value
        left.log_ratio[1] = 0.0
        left.log_ratio[1, km] = sign
        cost = evidence.implausible(problem, left)
        assert cost[1, km] == 1
        assert cost.sum() == 1
    left.log_ratio[1] = 0.0
    problem.y[1, ra] += 30.0
    left.log_ratio[1, ra] = 30.0  # with it left out, nothing is beyond
    cost = evidence.implausible(problem, left)
    assert cost[1, ra] == 0
    assert (cost[1, problem.present[1]] == 1).sum() == problem.present[1].sum() - 1
    assert not cost[0].any()


def test_friction_left_out_of_a_small_motor_s_constant() -> None:
    """T_N/I_N for Km: smaller by I0/I_N, however much that is (T = Km·(I − I0))."""
    for idle in (0.1, 0.3, 0.5, 0.7):
        batch = single()
        for key, value in (("no_load_current", idle), ("nominal_current", 1.0),
                           ("torque_constant", 0.03), ("terminal_resistance", 1.0)):  # fmt: skip
            put(batch, key, 0, value, 4)
        problem = observe(batch)
        evidence = Evidence(batch, problem, fit(problem))
        for key, ratio in (("torque_constant", 1 - idle), ("nominal_torque", 1 / (1 - idle))):
            put(batch, key, 0, 0.02)
            scores = evidence.scores(
                np.array([0]), np.array([INDEX[key]]), np.log([ratio]), np.array([0.005])
            )[0]
            code = CODE["friction-ignored"]
            assert scores[code] > -3
            assert scores[code] > scores[CODE["unexplained"]]
            inverse = evidence.scores(
                np.array([0]), np.array([INDEX[key]]), -np.log([ratio]), np.array([0.005])
            )[0]
            assert inverse[code] == -np.inf


def test_digits_exchanged_to_naught_are_no_number() -> None:
    assert transpositions("10") == pytest.approx([math.log(10)])
    assert transpositions("0.0") == transpositions("00") == []
    assert transpositions("1'234") == pytest.approx(np.log([1234 / 2134, 1234 / 1324, 1234 / 1243]))


# ---- causes


def test_causes_are_of_figures_that_hold_their_unit() -> None:
    """An angle in rad for a mistake of rpm; a newton-metre for one of ounce-inches; a power for one
    of horsepower. By the SI unit of the figure."""
    for key in FIGURES:
        unit = quantity(key).unit
        scores = shape(key, int(BRUSHED), "")
        causes = {CAUSES[c] for c in scores.code} | {CAUSES[c] for c, *_ in scores.broad}
        for cause in ("rpm-vs-rad-per-second", "rev-per-second"):
            assert (cause in causes) == ("rad" in unit), key
        for cause in ("ounce-inch-vs-millinewton-metre", "pound-inch-vs-newton-metre"):
            assert (cause in causes) == ("N·m" in unit or "N*m" in unit), key
        assert ("horsepower-vs-watt" in causes) == (unit == "W"), key
        assert "power-of-ten" in causes


SLIPS = [
    ("no_load_speed", "rpm-vs-rad-per-second", 30 / math.pi),
    ("no_load_speed", "rev-per-second", 60.0),
    ("no_load_speed", "rev-per-second", 2 * math.pi),
    ("stall_torque", "ounce-inch-vs-millinewton-metre", OZ_IN),
    ("rotor_inertia", "inertia-convention", 386.0886),
    ("rated_power", "horsepower-vs-watt", 745.69987),
]


@pytest.mark.parametrize(("key", "cause", "factor"), SLIPS)
def test_a_prefix_may_have_slipped_besides(key: str, cause: str, factor: float) -> None:
    """By a thousand rather than by ten or a hundred; up as often as down; either way round."""
    powers = np.array([0, 3, -3, 2, -2, 1, -1])
    ratio = np.log(factor) + powers * np.log(10)
    sd = np.full(7, 0.004)
    code = CODE[cause]
    one = static_scores(shape(key, int(BRUSHED), ""), ratio, sd)[:, code]
    other = static_scores(shape(key, int(BRUSHED), ""), -ratio, sd)[:, code]
    assert np.isfinite(one[:5]).all()
    # (factor)·10⁻¹ and its like may be too near 1 to be a mistake of their own
    far = np.abs(ratio) > math.log(1.25)
    assert one[far] == pytest.approx(other[far], abs=0.05)
    assert one[0] > max(one[1], one[2]) > max(one[3], one[4])
    assert one[1] == pytest.approx(one[2], abs=0.05)
    assert one[3] == pytest.approx(one[4], abs=0.05)


@pytest.mark.parametrize("power", [4, 5])
@pytest.mark.parametrize("sign", [1, -1])
def test_gram_force_and_centimetres(power: int, sign: int) -> None:
    """gf·cm in N·m is 9.80665·10⁻⁵ (NIST SP 811, B.8); 10⁴ with a kilogram-force."""
    for ratio in (9.80665 * 10.0**power, 9.80665 * 10.0**-power):
        scores = static_scores(
            shape("nominal_torque", int(BRUSHED), ""), sign * np.log([ratio]), np.array([0.004])
        )
        assert scores[0, CODE["kilogram-force-vs-newton"]] > -10


@pytest.mark.parametrize("kind", [BRUSHED, BLOCK, SINE])
def test_the_prior_weights_of_a_cause_are_a_probability(kind: Commutation) -> None:
    for key in FIGURES:
        form = shape(key, int(kind), "")
        weight = np.exp(form.log_prior)
        assert (weight > 0).all()
        for code in np.unique(form.code):
            assert weight[form.code == code].sum() < 1.0, (key, CAUSES[code])


def test_pole_pairs_are_a_mistake_of_motors_that_have_a_drive() -> None:
    """Electrical speed is asked of a drive, not of brushes (common practice, no source)."""
    code = CODE["poles-vs-pole-pairs"]
    for key in ("no_load_speed", "nominal_speed", "back_emf_constant"):
        brushed, block = (
            static_scores(shape(key, int(kind), ""), np.log([2.0]), np.array([0.01]))[0, code]
            for kind in (BRUSHED, BLOCK)
        )
        assert block > brushed


# ---- exchanges


def test_cells_side_by_side_and_of_one_unit_are_exchanged_rather() -> None:
    """Four times likelier each, unlike quantities e⁻² as likely; shared out among all pairs."""
    s = make(np.random.default_rng(1), 2, BRUSHED, (
        "no_load_speed", "nominal_speed", "nominal_torque", "stall_torque", "speed_constant",
        "torque_constant"))  # fmt: skip
    evidence = Evidence(s.batch, problem := observe(s.batch), fit(problem))

    def prior(a: str, b: str) -> float:
        return _prior(evidence, problem, 1, 1, INDEX[a], INDEX[b])

    four = math.log(4.0)
    pairs = math.log(6 * 5 / 2)
    assert prior("no_load_speed", "nominal_speed") == pytest.approx(-5 - pairs + 2 * four)
    assert prior("nominal_torque", "stall_torque") == prior("no_load_speed", "nominal_speed")
    assert prior("nominal_speed", "nominal_torque") == pytest.approx(-5 - pairs + four - 2)
    assert prior("no_load_speed", "nominal_torque") == pytest.approx(-5 - pairs - 2)
    assert prior("torque_constant", "speed_constant") == pytest.approx(-5 - pairs + 2 * four)


# ---- the table as a whole


def test_how_a_table_reads() -> None:
    """A stall torque of Km·I_s, a greatest power of U²/(4·Ra), a nominal speed of a hot winding."""
    s = make(np.random.default_rng(1), 6, BRUSHED, (*FULL, "maximum_power"), scatter=0.3)
    for row in range(6):
        put(s.batch, "no_load_current", row, 0.12 * float(s.figures["stall_current"][row]))
        for key in ("no_load_speed", "nominal_speed", "nominal_torque", "maximum_efficiency"):
            s.batch.figures[key].value[row] = np.nan
        g = {k: float(v[row]) for k, v in s.figures.items()}
        km, u, ra = g["torque_constant"], g["nominal_voltage"], g["terminal_resistance"]
        put(s.batch, "stall_torque", row, km * u / ra)
        put(s.batch, "maximum_power", row, u**2 / (4 * ra))
    problem = observe(s.batch)
    found = readings(problem)
    assert not found.stall_torque_net
    assert found.maximum_power_electrical
    s = sheet()
    found = readings(observe(s.batch))
    assert found.stall_torque_net
    assert not found.nominal_speed_hot
    for row in range(6):
        g = {k: float(v[row]) for k, v in s.figures.items()}
        current = 0.35 * g["stall_current"]
        put(s.batch, "nominal_current", row, current)
        put(s.batch, "nominal_torque", row, g["torque_constant"] * (current - g["no_load_current"]))
        # copper at 100 °C: 1 + 0.00385·75 of its resistance at 25 °C
        drop = g["terminal_resistance"] * 1.289 * current
        put(s.batch, "nominal_speed", row, (g["nominal_voltage"] - drop) / g["torque_constant"])
    assert readings(observe(s.batch)).nominal_speed_hot
    servo = observe(make(np.random.default_rng(1), 4, SINE, SERVO).batch)
    assert readings(servo) == servo.readings


def test_a_computed_sheet_shows_no_scatter_and_a_measured_one_does() -> None:
    exact = [scale(observe(make(np.random.default_rng(i), 6, BRUSHED, FULL, scatter=0.0).batch))
             for i in range(2)]  # fmt: skip
    loose = [scale(observe(make(np.random.default_rng(i), 6, BRUSHED, FULL, scatter=1.0).batch))
             for i in range(2)]  # fmt: skip
    assert max(exact) < 0.35
    assert min(loose) > 0.6
    assert max(loose) < 1.3


# ---- points


def test_constants_of_points_are_as_sure_as_least_squares_says() -> None:
    """scipy.optimize.curve_fit is the reference: a fifth of 5 % of the mean current, and of 2 % of
    the voltage, is the least scatter that exact points are given."""
    batch = single()
    put(batch, "nominal_voltage", 0, 24.0)
    km, ra, i0 = 0.03, 1.2, 0.12
    current = np.array([1.0, 2.5, 4.0, 6.0])
    speed, torque = (24 - ra * current) / km, km * (current - i0)
    batch.points = {0: [
        Point(str(i), {"torque": t, "current": c, "speed": w})
        for i, (t, c, w) in enumerate(zip(torque, current, speed, strict=True))
    ]}  # fmt: skip
    found = fit_points(batch, 0)
    assert found is not None
    sd = np.full(4, 0.2 * 0.05 * current.mean())
    line, one = curve_fit(lambda t, a, b: a * t + b, torque, current, sigma=sd,
                          absolute_sigma=True)  # fmt: skip
    sd = np.full(4, 0.2 * 0.02 * 24)
    _, two = curve_fit(lambda x, r, k: r * x[0] + k * x[1], np.stack([current, speed]),
                       np.full(4, 24.0), sigma=sd, absolute_sigma=True)  # fmt: skip
    weights = 1 / np.array([math.sqrt(one[0, 0]) / line[0] ** 2, math.sqrt(two[1, 1])]) ** 2
    expected = (weights.sum() ** -0.5, math.sqrt(two[0, 0]), math.sqrt(one[1, 1]))
    assert found.sd == pytest.approx(expected, rel=1e-4)
    # the two values of Km, where they differ, by their weights
    for point in batch.points[0]:
        point.figures["torque"] *= 1.02
    found = fit_points(batch, 0)
    assert found is not None
    w = weights * [1 / 1.02**2, 1]
    assert found.torque_constant == pytest.approx(km * (1.02 * w[0] + w[1]) / w.sum(), rel=1e-4)


def test_a_torque_that_falls_slowly_with_the_current_is_no_motor_s() -> None:
    batch = single()
    put(batch, "nominal_voltage", 0, 24.0)
    batch.points = {0: [Point("a", {"torque": 10.0, "current": 5.0, "speed": 100.0}),
                        Point("b", {"torque": 20.0, "current": 3.0, "speed": 200.0})]}  # fmt: skip
    assert fit_points(batch, 0) is None


# ---- words


def test_a_figure_brought_to_the_dc_motor() -> None:
    s = make(np.random.default_rng(1), 3, SINE, SERVO, scatter=0.0, digits=5)
    narrator = Narrator(s.batch)
    for key, true in (("torque_constant", "Km"), ("back_emf_constant", "Km"),
                      ("terminal_resistance", "Ra"), ("terminal_inductance", "La")):  # fmt: skip
        for row in range(3):
            assert narrator.dc(key, row) == pytest.approx(s.truth[true][row], rel=1e-3)
            ratio = s.truth[true][row] / s.figures[key][row]
            assert narrator.dc_factor(key, row) == pytest.approx(ratio, rel=1e-6)
    assert math.isnan(narrator.dc("friction_torque", 0))
