"""What a fit implies, which figures are worth a refit, which motors doubtful: on fits by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.reconcile import suspects
from motorfolio.schema.reconcile.adjust import Fit, fit
from motorfolio.schema.reconcile.model import INDEX, UNKNOWNS, F, P, Readings
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.problem import Problem
from motorfolio.schema.reconcile.suspects import (
    LeftOut,
    doubtful,
    leave_out,
    predicted,
    shortlist,
)

from .made_up_suspicions import problem
from .simulated_sheets import make

K, R, J, L, U, I0, N0, TS, IN, TN, NN, TF, B, ICS, IPK = range(len(UNKNOWNS))
ETA, PEAK = INDEX["maximum_efficiency"], INDEX["peak_torque"]
LOW, HIGH = math.log(0.5), math.log(1.05)
"""Peak torque over Km·I_peak: saturation lowers it, nothing raises it (physics documentation)."""

SINGLE = {"rotor_inertia": J, "terminal_inductance": L, "terminal_resistance": R,
          "nominal_voltage": U, "no_load_speed": N0, "stall_torque": TS, "peak_current": IPK,
          "torque_constant": K, "friction_torque": TF, "viscous_damping": B,
          "continuous_stall_current": ICS, "nominal_current": IN, "nominal_torque": TN,
          "nominal_speed": NN, "no_load_current": I0}  # fmt: skip
"""Figures that are one unknown each."""

SD = 0.02


def laws(x: np.ndarray) -> np.ndarray:
    """What figures of these motors are that are one unknown, and P_max = n0·Ts/4; others 0."""
    y = np.zeros((len(x), F))
    for key, unknown in SINGLE.items():
        y[:, INDEX[key]] = x[:, unknown]
    y[:, INDEX["maximum_power"]] = x[:, N0] + x[:, TS] - math.log(4)
    return y


def nowhere(n: int, variance: float = 0.0) -> Fit:
    """Fits at 1 in every unknown, each of them known to this variance, none with another."""
    return Fit(np.zeros((n, P)), np.tile(np.eye(P) * variance, (n, 1, 1)), np.zeros(n))


# ---- what a fit implies


def test_each_motor_is_asked_for_its_own_figure() -> None:
    """Laws and their slopes written out; covariances through them as JCGM 100:2008, 5.2."""
    rng = np.random.default_rng(1)
    root = rng.normal(size=(6, P, P)) / 10
    fitted = Fit(rng.normal(0, 0.2, (6, P)), root @ root.transpose(0, 2, 1), np.zeros(6))
    fitted.x[:, I0] -= 1.5
    keys = ("maximum_efficiency", "speed_torque_gradient", "peak_torque", "maximum_power",
            "maximum_efficiency", "rated_efficiency")  # fmt: skip
    value, sd = predicted(problem(6, *keys), fitted, np.array([INDEX[key] for key in keys]))
    for m, key in enumerate(keys):
        x = fitted.x[m]
        slope, more = np.zeros(P), 0.0
        if key == "maximum_efficiency":  # (1 − √(I0·Ra/U))²
            part = math.sqrt(math.exp(x[I0] + x[R] - x[U]))
            law = 2 * math.log(1 - part)
            slope[[I0, R]], slope[U] = -part / (1 - part), part / (1 - part)
        elif key == "peak_torque":
            law = x[K] + x[IPK] + (LOW + HIGH) / 2
            slope[[K, IPK]], more = 1.0, ((HIGH - LOW) / 2) ** 2 / 3
        elif key == "speed_torque_gradient":
            law, slope[[R, K]] = x[R] - 2 * x[K], (1, -2)
        elif key == "maximum_power":
            law, slope[[N0, TS]] = x[N0] + x[TS] - math.log(4), 1.0
        else:
            law, slope[[TN, NN, U, IN]] = x[TN] + x[NN] - x[U] - x[IN], (1, 1, -1, -1)
        variance = sum(slope[p] * fitted.covariance[m, p, q] * slope[q]
                       for p in range(P) for q in range(P))  # fmt: skip
        assert value[m] == pytest.approx(law)
        assert sd[m] ** 2 == pytest.approx(variance + more)


def test_a_motor_that_could_not_turn_has_an_efficiency_above_naught() -> None:
    """√(I0·Ra/U) counts as 0.95 at most."""
    fitted = nowhere(3)
    fitted.x[:, I0] = 2 * math.log(0.949), 2 * math.log(0.951), 1.0
    value, _ = predicted(problem(3, "maximum_efficiency"), fitted, np.full(3, ETA))
    assert value == pytest.approx(2 * np.log([0.051, 0.05, 0.05]))


def test_a_power_read_as_electrical_is_implied_as_such() -> None:
    part, fitted = problem(1, "maximum_power"), nowhere(1)
    fitted.x[0, [U, R]] = 2.0, 0.5
    part.readings = Readings(maximum_power_electrical=True)
    value, _ = predicted(part, fitted, np.array([INDEX["maximum_power"]]))
    assert value == pytest.approx([2 * 2.0 - 0.5 - math.log(4)])


def test_a_variance_that_rounding_makes_negative_is_naught() -> None:
    _, sd = predicted(
        problem(1, "rotor_inertia"), nowhere(1, -1e-20), np.array([INDEX["rotor_inertia"]])
    )
    assert sd.tolist() == [0.0]


# ---- figures left out


@pytest.mark.parametrize("pairs", [2, 20_000])
def test_figures_left_out_in_any_portion_are_refitted_one_by_one(pairs: int) -> None:
    keys = ("torque_constant", "speed_constant", "motor_constant")
    part = observe(make(np.random.default_rng(2), 2, keys=keys).batch)
    part.present[1, INDEX["speed_constant"]] = False
    which = np.ones((2, F), dtype=bool)
    which[0, INDEX["torque_constant"]] = False
    every, some = leave_out(part, pairs=pairs), leave_out(part, which, pairs=pairs)
    for m in range(2):
        for f in range(F):
            found = [a[m, f] for a in (every.chi2, every.log_ratio, every.implied_sd)]
            if not part.present[m, f]:
                assert np.isnan(found).all()
                assert np.isnan(some.chi2[m, f])
                continue
            rest = part.take(np.array([m])).without(np.array([f]))
            again = fit(rest)
            value, sd = predicted(rest, again, np.array([f]))
            assert found == pytest.approx([again.chi2[0], part.y[m, f] - value[0], sd[0]], rel=1e-6)
            assert np.isnan(some.chi2[m, f]) == (not which[m, f])
            assert np.isnan(some.log_ratio[m, f]) == np.isnan(some.implied_sd[m, f])


# ---- which are worth a refit


def listed(monkeypatch, part: Problem, chi2, variance: float = 0.0, steep: bool = False):
    robust, linear = nowhere(len(part), variance), nowhere(len(part), variance)
    linear.chi2[:] = chi2
    linear.x[:] = np.linspace(-0.5, 0.7, P)  # laws and gaps: away from 1 it is told which is which
    part = part.take(slice(None))
    part.y = part.y + laws(linear.x)

    def once(some: Problem, robust_too: bool = False, **named: bool) -> Fit:
        assert named == {"robust": True}
        return robust

    monkeypatch.setattr(suspects, "fit", once)
    monkeypatch.setattr(suspects, "relinearised", lambda some, at: linear)
    monkeypatch.setattr(suspects, "_steep", lambda some, at: np.full(len(some), steep))
    return shortlist(part)


def saving(part: Problem, motor: int, key: str, saved: float, variance: float = 0.0) -> None:
    """Let a figure be off by what its leaving-out saves: gap² over σ² less the variance of what
    was adjusted (Narasimhan and Jordache, chapter 7, from memory)."""
    part.y[motor, INDEX[key]] = math.sqrt(saved * (SD**2 - variance))


@pytest.mark.parametrize("variance", [0.0, 0.0003])
@pytest.mark.parametrize(
    ("savings", "worth"),
    [((200, 190, 180, 141, 139), 4),  # 200 − 40 − 20
     ((200, 141, 139, 138, 137), 3), ((200, 100, 50, 49, 1), 3), ((30, 20, 10, 5, 1), 5),
     ((50, 49, 48, 5.1, 4.9), 4), ((600, 590, 580, 501, 499), 4)],
)  # fmt: skip
def test_figures_worth_a_refit_save_nearly_as_much_as_the_best(
    monkeypatch, savings, worth, variance
):
    """Within 40 and a tenth of what the best saves, and the best three always."""
    part = problem(2, *list(SINGLE)[:5], sd=SD)
    for m, order in enumerate((savings, savings[::-1])):
        for key, saved in zip(list(SINGLE)[:5], order, strict=True):
            saving(part, m, key, saved, variance)
    found = listed(monkeypatch, part, [700.0, 900.0], variance)
    some = found[:, [INDEX[key] for key in list(SINGLE)[:5]]]
    assert some[0].tolist() == [True] * worth + [False] * (5 - worth)
    assert some[1].tolist() == some[0].tolist()[::-1]
    assert not found[:, INDEX["torque_constant"]].any()
    assert listed(monkeypatch, part, [700.0, 900.0], variance, steep=True).all()


def test_one_figure_of_the_nominal_point_brings_the_others(monkeypatch) -> None:
    point = ("nominal_torque", "nominal_speed", "nominal_current")
    for key in point:
        part = problem(1, "rotor_inertia", "terminal_inductance", "peak_current", *point, sd=SD)
        for other in ("rotor_inertia", "terminal_inductance", "peak_current"):
            saving(part, 0, other, 300.0)
        worth = listed(monkeypatch, part, [900.0])[0]
        assert not worth[[INDEX[k] for k in point]].any()
        saving(part, 0, key, 280.0)
        worth = listed(monkeypatch, part, [900.0])[0]
        assert worth[[INDEX[k] for k in point]].all()
        assert worth.sum() == 6


def test_a_figure_that_holds_its_own_row_is_worth_a_refit(monkeypatch) -> None:
    """No more than a millionth of its variance is left then."""
    part = problem(1, *list(SINGLE)[:5], sd=SD)
    for i, key in enumerate(list(SINGLE)[:5]):
        part.y[0, INDEX[key]] = 1e-4 * i
    speed = INDEX["no_load_speed"]
    part.digits[0, speed] = 0.01
    for saved, worth in ((39.0, 5), (50.0, 3)):  # of the others nearly nothing
        part.y[0, speed] = 0.01 * math.sqrt(saved * 1e-6)
        found = listed(monkeypatch, part, [900.0], 0.0101**2)
        assert found[0, speed]
        assert found.sum() == worth


@pytest.mark.parametrize("key", ["maximum_efficiency", "peak_torque"])
def test_curved_figures_are_held_to_their_own_law(monkeypatch, key) -> None:
    """By what the fit implies of them and its deviation, here 0.05 and 0.012."""
    others = ("rotor_inertia", "terminal_inductance", "terminal_resistance")
    i = INDEX[key]

    def implied(some: Problem, fitted: Fit, figure: np.ndarray):
        n = len(some)
        assert figure.tolist() == [i] * n
        return np.full(n, 0.05), np.full(n, 0.012)

    monkeypatch.setattr(suspects, "predicted", implied)
    for saved, worth in ((229.0, False), (231.0, True)):  # 300 − 40 − 30
        part = problem(2, *others, key, sd=SD)
        for other in others:
            saving(part, 0, other, 300.0)
        part.y[:, i] = 0.05 + math.sqrt(saved * (SD**2 - 0.012**2))
        part.present[1, i] = False
        found = listed(monkeypatch, part, [900.0, 900.0])
        assert found[:, i].tolist() == [worth, False]


# ---- laws that bend


@pytest.mark.parametrize(("unknowns", "bound", "servo", "expected"), [
    ({R: math.log(0.19)}, (), False, False), ({R: math.log(0.21)}, (), False, True),
    ({I0: math.log(0.21)}, (), False, True), ({U: -math.log(0.21)}, (), False, True),
    ({U: -math.log(0.19)}, (), False, False), ({R: math.log(0.21)}, (), True, True),
    ({R: 0, I0: 0, IN: 0}, (2,), False, True),  # on two counts
    ({R: math.log(0.2)}, (), False, False), ({R: -9, I0: math.log(0.4)}, (2,), False, False),
    ({I0: -20, R: math.log(0.5)}, (3,), False, False), ({I0: -20}, (3,), True, False),
    # I0 over I_N, where the nominal torque is bound
    ({R: -9, I0: 0, IN: -math.log(0.39)}, (2,), False, False),
    ({R: -9, I0: 0, IN: -math.log(0.41)}, (2,), False, True),
    ({R: -9, I0: math.log(0.41)}, (2,), True, True),
    ({R: -9, I0: math.log(0.39)}, (2,), True, False),
    ({R: -9, I0: 0.0}, (0, 1, 3, 4), False, False),
    # Ra·I_N over U, where the nominal speed is bound
    ({I0: -20, R: math.log(0.49)}, (3,), False, False),
    ({I0: -20, R: math.log(0.51)}, (3,), False, True),
    ({I0: -20, IN: math.log(0.51)}, (3,), False, True),
    ({I0: -20, U: -math.log(0.51)}, (3,), False, True),
    ({I0: -20, U: -math.log(0.49)}, (3,), False, False),
    ({I0: -20, R: math.log(0.51)}, (0, 1, 2, 4), False, False),
    ({I0: -20, R: math.log(0.51), NN: -9}, (3,), True, False),
    # of a sinusoidal motor Km·n_N over U
    ({I0: -20, NN: 0.01}, (3,), True, True), ({I0: -20, NN: -0.01}, (3,), True, False),
    ({I0: -20, K: 0.01}, (3,), True, True), ({I0: -20, U: 0.01}, (3,), True, False),
    ({I0: -20, U: -0.01}, (3,), True, True), ({I0: -20, NN: 0.01}, (0, 1, 2, 4), True, False),
    ({I0: -20, NN: 9.0, R: -9}, (3,), False, False),
])  # fmt: skip
def test_laws_are_far_from_straight_where_losses_are_great(
    unknowns, bound, servo, expected
) -> None:
    """Idle current through Ra above a fifth of U, above 0.4 of I_N; nominal drop above half of U;
    a sinusoidal motor's nominal speed at its bound. Unknowns not told are 1, I0 0.001."""
    part = problem(1, "torque_constant")
    part.servo[0], part.bound[0, list(bound)] = servo, True
    fitted = nowhere(1)
    if I0 not in unknowns and (R in unknowns or U in unknowns):
        fitted.x[0, I0] = 0.0
    for unknown, value in unknowns.items():
        fitted.x[0, unknown] = value
    assert suspects._steep(part, fitted).tolist() == [expected]


# ---- what contradicts


@pytest.mark.parametrize(("saved", "gap", "sd", "expected"), [
    (12.1, 0.2, 0.01, True), (12.0, 0.2, 0.01, False), (12.1, math.log(1.071), 0.01, True),
    (12.1, math.log(1.069), 0.01, False), (12.1, -math.log(1.071), 0.01, True),
    (12.1, -math.log(1.069), 0.01, False), (12.1, math.log(1.171), 0.06, True),
    (12.1, math.log(1.169), 0.06, False), (np.nan, 0.2, 0.01, False), (90.0, 800.0, 0.01, True),
])  # fmt: skip
def test_a_contradiction_saves_twelve_and_departs_by_two_deviations_more(saved, gap, sd, expected):
    left = LeftOut(np.array([[8.0]]), np.array([[gap]]), np.array([[sd]]))
    assert suspects.contradicts(np.array([8.0 + saved]), left).tolist() == [[expected]]


# ---- who is in doubt


def in_doubt(
    key: str, gap: float, chi2: float, variance: float = 0.0, more: int = 9, sd=SD
) -> bool:
    """Whether a motor is whose one figure is off by gap; ``more`` others fit."""
    others = ["maximum_power", *(k for k in SINGLE if k != key)][:more]
    part, base = problem(1, key, *others, sd=sd), nowhere(1)
    base.x[:] = np.linspace(-0.5, 0.7, P)
    base.x[:, [K, IPK]] = 0.2, -0.2
    part.y = laws(base.x)
    if key in SINGLE:
        base.covariance[0, SINGLE[key], SINGLE[key]] = variance
    part.y[0, INDEX[key]] += gap
    base.chi2[:] = chi2
    found = doubtful(part, base)
    assert found.shape == (1,)
    return bool(found[0])


@pytest.mark.parametrize("variance", [0.0, 0.0001, 0.0003])
def test_a_figure_brings_doubt_if_it_saves_four_fifths_of_a_contradiction(variance) -> None:
    for sign in (1, -1):
        gap = sign * math.sqrt(9.6 * (SD**2 - variance))  # of 12
        for factor, doubt in ((1.01, True), (0.99, False)):
            assert in_doubt("rotor_inertia", factor * gap, 13.0, variance) == doubt
            assert not in_doubt("rotor_inertia", factor * gap, 12.0, variance)


@pytest.mark.parametrize("variance", [0.0, 0.00003, 0.00005])
def test_a_figure_that_the_rest_tells_little_of_must_depart_by_more(variance) -> None:
    """Left out, its gap grows to gap/(1 − s), its implied value's variance to V/(1 − s), s being
    V/σ²: the departure must be four fifths of 5 % and two deviations."""
    left = 1 - variance / 0.01**2
    departure = 0.8 * (0.05 + 2 * math.sqrt(variance / left))
    for factor, doubt in ((1.01, True), (0.99, False), (-1.01, True), (-0.99, False)):
        gap = math.copysign(math.log1p(abs(factor) * departure) * left, factor)
        assert gap**2 / (0.01**2 - variance) > 9.6
        assert in_doubt("rotor_inertia", gap, 13.0, variance, sd=0.01) == doubt


@pytest.mark.parametrize(("more", "fits"), [(9, 10), (14, 15)])
def test_a_motor_that_fits_badly_as_a_whole_is_in_doubt(more: int, fits: int) -> None:
    """χ² above twice the number of its figures."""
    assert in_doubt("rotor_inertia", 0.0, 2 * fits + 0.1, more=more)
    assert not in_doubt("rotor_inertia", 0.0, 2 * fits - 0.1, more=more)
    assert not in_doubt("rotor_inertia", 0.0, 2 * fits, more=more)


def test_a_peak_torque_within_its_band_brings_no_doubt() -> None:
    """The band is wider than what its digits leave: beyond, the refits decide."""
    for gap, doubt in ((HIGH - 0.01, False), (HIGH + 0.01, True), (LOW + 0.01, False),
                       (LOW - 0.01, True), (0.0, False)):  # fmt: skip
        assert in_doubt("peak_torque", gap, 13.0) == doubt


def test_an_efficiency_is_held_to_its_own_law() -> None:
    keys = ("maximum_efficiency", *[k for k in INDEX if k != "peak_torque"][:9])
    part, base = problem(2, *keys, sd=SD), nowhere(2)
    part.present[1, ETA] = False
    base.x[:, I0] = part.y[:, INDEX["no_load_current"]] = math.log(0.04)
    base.covariance[:, I0, I0] = 0.04**2
    base.chi2[:] = 12.1
    law, spread = 2 * math.log(1 - 0.2), (0.2 / 0.8 * 0.04) ** 2
    gap = math.sqrt(9.6 * (SD**2 - spread))
    for factor, doubt in ((1.01, True), (0.99, False)):
        part.y[:, ETA] = law + factor * gap
        assert doubtful(part, base).tolist() == [doubt, False]


def test_motors_are_doubted_alike_in_portions() -> None:
    """More than two thousand at once, one in three of which is well."""
    n = 2100
    part, base = problem(n, *SINGLE, sd=SD), nowhere(n)
    part.y[:, INDEX["rotor_inertia"]] = 1.0
    base.chi2[:] = np.where(np.arange(n) % 3 == 1, 11.0, 50.0)
    assert doubtful(part, base).tolist() == [i % 3 != 1 for i in range(n)]
    assert doubtful(part.take(np.arange(0)), nowhere(0)).size == 0
