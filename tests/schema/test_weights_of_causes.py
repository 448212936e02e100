"""How causes weigh against one another: densities by scipy, priors by odds worked out by hand.

How common a mistake is, and in what band a warm winding lies: common practice, no source.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.stats import norm

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.causes import (
    CAUSES,
    CODE,
    Shape,
    causes_of,
    leaves,
    log_normal,
    shape,
    slipped_power,
    static_scores,
    unexplained,
)
from motorfolio.schema.reconcile.model import FIGURES

BRUSHED, BLOCK, SERVO = (int(kind) for kind in Commutation)
OZ_IN, LB_IN = 7.061552, 0.1129848  # NIST SP 811 (2008), appendix B.8
RPM = 30 / math.pi


def scores(figure: str, ratio: float, kind: int = BRUSHED, unit: str = "", sd: float = 0.01):
    """By cause."""
    found = static_scores(shape(figure, kind, unit), np.log([ratio]), np.array([sd]))[0]
    return dict(zip(CAUSES, found.tolist(), strict=True))


def weights(form: Shape, cause: str) -> dict[tuple[float, int], float]:
    """Prior weights by logarithm of the factor and power of ten."""
    who = form.code == CODE[cause]
    keys = zip(form.log_factor[who].round(6).tolist(), form.power[who].tolist(), strict=True)
    return dict(zip(keys, np.exp(form.log_prior[who]).tolist(), strict=True))


# ---- densities


@pytest.mark.parametrize(("distance", "sd"), [(0.0, 1.0), (0.3, 0.2), (-0.02, 0.005), (1.5, 0.7)])
def test_the_normal_density(distance: float, sd: float) -> None:
    assert log_normal(distance, sd) == pytest.approx(norm.logpdf(distance, scale=sd), abs=1e-9)


PRIORS = [
    # a factor and its inverse together
    ("nominal_voltage", "peak-vs-rms", BRUSHED, math.sqrt(2), 0.05),
    ("nominal_voltage", "line-vs-phase", BRUSHED, math.sqrt(3), 0.03),
    ("terminal_resistance", "line-vs-phase", BLOCK, 2.0, 0.30),
    ("terminal_resistance", "line-vs-phase", SERVO, 3.0, 0.02),
    ("electrical_time_constant", "line-vs-phase", SERVO, 1.5, 0.03),
    ("mass", "kilogram-force-vs-newton", BRUSHED, 9.80665, 0.08),
    ("rated_power", "horsepower-vs-watt", BRUSHED, 745.69987, 0.12),
    ("nominal_speed", "poles-vs-pole-pairs", BRUSHED, 2.0, 0.003),
    ("nominal_speed", "poles-vs-pole-pairs", BLOCK, 2.0, 0.08),
    ("nominal_current", "peak-to-peak", SERVO, 2.0, 0.01),
]


@pytest.mark.parametrize(("figure", "cause", "kind", "factor", "prior"), PRIORS)
def test_prior_times_density(figure, cause, kind, factor, prior) -> None:
    """Half of the prior each way round, times the normal density of the ratio about the factor."""
    for ratio in (factor * 1.004, 1 / factor * 0.995):
        away = abs(abs(math.log(ratio)) - math.log(factor))
        by_hand = math.log(prior / 2) + norm.logpdf(away, scale=0.01)
        assert scores(figure, ratio, kind)[cause] == pytest.approx(by_hand, abs=2e-4)


@pytest.mark.parametrize("figure", FIGURES)
@pytest.mark.parametrize("kind", [BRUSHED, SERVO])
def test_as_common_one_way_round_as_the_other(figure: str, kind: int) -> None:
    form = shape(figure, kind, "")
    for cause in {CAUSES[c] for c in form.code.tolist()}:
        found = weights(form, cause)
        for (log_factor, power), weight in found.items():
            assert found[-log_factor, -power] == pytest.approx(weight)


def test_a_prefix_slips_with_one_in_twelve_a_point_with_one_in_fifty() -> None:
    """Of mistakes of a unit: milli or kilo besides, rather than one or two places."""
    for figure, cause, factor in (
        ("no_load_speed", "rpm-vs-rad-per-second", RPM),
        ("no_load_speed", "rev-per-second", 60.0),
        ("stall_torque", "ounce-inch-vs-millinewton-metre", 7.06155181),
        ("rotor_inertia", "inertia-convention", 4.0),
        ("rated_power", "horsepower-vs-watt", 745.69987158),
    ):
        found = weights(shape(figure, BRUSHED, ""), cause)
        alone = found[round(math.log(factor), 6), 0]
        for power, share in ((3, 12), (-3, 12), (2, 50), (-2, 50), (1, 50), (-1, 50)):
            key = (round(math.log(factor) + power * math.log(10), 6), power)
            if key in found:
                assert alone / found[key] == pytest.approx(share, rel=0.1)
            else:
                assert abs(key[0]) < math.log(1.25)


@pytest.mark.parametrize(
    ("figure", "ratio", "kind", "order"),
    [
        # three causes of a 2, two of a √3, two of a 1.5, of both directions
        ("back_emf_constant", 2.0, BLOCK, ("peak-to-peak", "poles-vs-pole-pairs")),
        ("speed_constant", 0.5, BRUSHED, ("peak-to-peak", "poles-vs-pole-pairs", "unexplained")),
        ("no_load_speed", 2.0, BLOCK, ("poles-vs-pole-pairs", "unexplained")),
        ("back_emf_constant", math.sqrt(3), SERVO,
         ("line-vs-phase", "sinusoidal-current-convention", "unexplained")),
        ("torque_constant", math.sqrt(2), SERVO, ("peak-vs-rms", "unexplained")),
        ("torque_constant", 1.5, SERVO, ("sinusoidal-current-convention", "unexplained")),
        ("terminal_resistance", 1.5, SERVO, ("line-vs-phase", "hot-vs-cold", "unexplained")),
        ("terminal_resistance", 1.5, BRUSHED, ("hot-vs-cold", "unexplained")),
        ("rotor_inertia", 4.0, BRUSHED, ("inertia-convention", "unexplained")),
        # a slipped point rather than a unit near it
        ("torque_constant", 9.9, BRUSHED, ("power-of-ten", "kilogram-force-vs-newton")),
        ("no_load_speed", 9.75, BRUSHED, ("rpm-vs-rad-per-second", "power-of-ten")),
        # the sixth place, as of µ for none, rather than the fourth or fifth and a kilogram-force
        ("stall_torque", 9.9e5, BRUSHED, ("power-of-ten", "kilogram-force-vs-newton")),
    ],
)  # fmt: skip
def test_which_of_two_is_likelier(figure: str, ratio: float, kind: int, order) -> None:
    found = scores(figure, ratio, kind, sd=0.015)
    some = [found[cause] for cause in order]
    assert some == sorted(some, reverse=True)
    assert len(set(some)) == len(some)
    assert all(map(math.isfinite, some))


def test_places_that_slip() -> None:
    """A thousand and ten rather than a hundred, that rather than a million, the fourth and the
    fifth place least of all."""
    found = weights(shape("mass", BRUSHED, ""), "power-of-ten")
    one, two, three, four, five, six = (found[round(p * math.log(10), 6), 0] for p in range(1, 7))
    assert one == three > two > six > four == five > 0
    assert one / two == pytest.approx(2.0)
    assert one / six == pytest.approx(7.5)
    assert six / five == pytest.approx(2.0)


def test_a_rare_power_of_a_kilogram_force() -> None:
    """gf·cm in N·m, or the reverse: a twentieth as common as the kilogram-force alone, and less
    than a point slipped by three places."""
    found = weights(shape("nominal_torque", BRUSHED, ""), "kilogram-force-vs-newton")
    alone = found[round(math.log(9.80665), 6), 0]
    for power in (4, -4, 5, -5):
        rare = found[round(math.log(9.80665) + power * math.log(10), 6), power]
        assert alone / rare == pytest.approx(20.0)


BANDS = [
    # copper +0.39 %/K: up to 140 K above the reference; NdFeB and ferrite −0.11 and −0.2 %/K
    ("terminal_resistance", "hot-vs-cold", 1.15, 1.55, 0.15),
    ("terminal_resistance", "hot-vs-cold", 1 / 1.55, 1 / 1.15, 0.05),
    ("torque_constant", "hot-vs-cold", 0.78, 0.97, 0.05),
    ("back_emf_constant", "hot-vs-cold", 0.78, 0.97, 0.05),
    ("motor_constant", "hot-vs-cold", 0.78, 0.97, 0.05),
    ("speed_constant", "hot-vs-cold", 1.03, 1.28, 0.05),
    ("speed_torque_gradient", "hot-vs-cold", 1.15, 2.0, 0.03),
    ("mechanical_time_constant", "hot-vs-cold", 1.15, 2.0, 0.03),
    ("stall_current", "hot-vs-cold", 1 / 1.8, 1 / 1.15, 0.03),
    ("stall_torque", "hot-vs-cold", 1 / 1.8, 1 / 1.15, 0.03),
    # a motor's efficiency is above a third
    ("rated_power", "input-vs-output-power", 1.05, 3.0, 0.10),
    ("maximum_power", "input-vs-output-power", 1.05, 3.0, 0.10),
    ("nominal_torque", "gear-output-side", 2.5, 500.0, 0.10),
    ("friction_torque", "gear-output-side", 2.5, 500.0, 0.10),
    ("torque_constant", "gear-output-side", 2.5, 500.0, 0.01),
    # what a motor stands at rest of what it draws from its voltage there
    ("stall_torque", "continuous-stall", 0.01, 0.75, 0.12),
    ("stall_current", "continuous-stall", 0.01, 0.75, 0.12),
]


@pytest.mark.parametrize(("figure", "cause", "low", "high", "prior"), BANDS)
def test_a_band_is_a_uniform_density_with_normal_ends(figure, cause, low, high, prior) -> None:
    inside = math.log(prior / math.log(high / low))
    for ratio in (low * 1.0001, math.sqrt(low * high), high * 0.9999):
        assert scores(figure, ratio)[cause] == pytest.approx(inside, abs=1e-9)
    for beyond in (1.0, 2.5):
        for ratio in (low * math.exp(-0.01 * beyond), high * math.exp(0.01 * beyond)):
            found = scores(figure, ratio)[cause]
            assert found == pytest.approx(inside - beyond**2 / 2, abs=1e-6)


def test_no_other_figure_has_a_band() -> None:
    for figure in (*FIGURES, "mass", "maximum_speed"):
        for kind in (BRUSHED, SERVO):
            found = sorted((CAUSES[c], low) for c, low, _, _ in shape(figure, kind, "").broad)
            wanted = sorted((cause, math.log(low)) for key, cause, low, _, _ in BANDS
                            if key == figure)  # fmt: skip
            if figure in ("peak_torque", "continuous_stall_torque", "stall_torque"):
                wanted = sorted({*wanted, ("gear-output-side", math.log(2.5))})
            assert [c for c, _ in found] == [c for c, _ in wanted], figure
            assert [low for _, low in found] == pytest.approx([low for _, low in wanted])


# ---- the printed unit


ODDS = [
    # a unit, and what it makes likelier by how much
    ("nominal_torque", "oz-in", OZ_IN, "ounce-inch-vs-millinewton-metre", 3),
    ("rotor_inertia", "OZ-in-s²", 386.0886, "inertia-convention", 3),
    ("nominal_torque", "lb-in", LB_IN, "pound-inch-vs-newton-metre", 4),
    ("nominal_torque", "kgf·cm", 9.80665, "kilogram-force-vs-newton", 3),
    ("nominal_torque", "KG·cm", 9.80665, "kilogram-force-vs-newton", 3),
    ("nominal_torque", "mgf·m", 9.80665, "kilogram-force-vs-newton", 3),
    ("nominal_torque", "kp·m", 9.80665, "kilogram-force-vs-newton", 3),
    ("nominal_torque", "g·cm", 9.80665, "kilogram-force-vs-newton", 3),
    ("rated_power", "HP", 745.69987, "horsepower-vs-watt", 4),
    ("rated_power", "PS", 735.49875, "horsepower-vs-watt", 4),
    ("no_load_speed", "rad/s", RPM, "rpm-vs-rad-per-second", 2),
    ("torque_constant", "N·m/Arms", math.sqrt(2), "peak-vs-rms", 2),
    ("torque_constant", "N·m/Apk", math.sqrt(2), "peak-vs-rms", 2),
    ("torque_constant", "N·m/A peak", math.sqrt(2), "peak-vs-rms", 2),
]


@pytest.mark.parametrize(("figure", "unit", "ratio", "cause", "odds"), ODDS)
def test_a_printed_unit_speaks_for_its_cause(figure, unit, ratio, cause, odds) -> None:
    """So many times likelier, and no other cause but what else the unit is named for."""
    plain, told = (scores(figure, ratio, SERVO, text) for text in ("N·m", unit))
    assert math.exp(told[cause] - plain[cause]) == pytest.approx(odds)
    for other, value in plain.items():
        if other != cause and math.isfinite(value):
            assert told[other] == value, other
    neutral = scores(figure, ratio, SERVO, "Nm")
    assert neutral == plain


@pytest.mark.parametrize(
    ("unit", "weight"),
    [("kg·m²", True), ("kgf·m·s²", True), ("", True), ("g·cm²", False), ("KG·MM²", False),
     ("oz-in²", False), ("oz", False), ("lb·ft²", False), ("in·s²", False)],
)  # fmt: skip
def test_an_inertia_that_may_hold_a_force(unit: str, weight: bool) -> None:
    causes = {CAUSES[c] for c in shape("rotor_inertia", BRUSHED, unit).code.tolist()}
    assert ("kilogram-force-vs-newton" in causes) == weight


def test_a_torque_s_unit_does_not_hide_a_force() -> None:
    causes = {CAUSES[c] for c in shape("nominal_torque", BRUSHED, "g·cm").code.tolist()}
    assert "kilogram-force-vs-newton" in causes


# ---- what explains a ratio


@pytest.mark.parametrize(
    ("gap", "log_ratio", "sd", "left"),
    [
        # beyond three standard deviations, either way
        (0.029, 1.0, 0.01, False), (0.031, 1.0, 0.01, True), (-0.031, 1.0, 0.01, True),
        (-0.029, -1.0, 0.01, False),
        # half of the departure, where that is more than one of them
        (0.024, 0.05, 0.01, False), (0.026, 0.05, 0.01, True), (0.026, -0.05, 0.01, True),
        (0.009, 0.01, 0.01, False), (0.011, 0.01, 0.01, True), (0.011, 0.03, 0.01, False),
    ],
)  # fmt: skip
def test_what_is_left_unexplained(gap: float, log_ratio: float, sd: float, left: bool) -> None:
    assert bool(leaves(gap, log_ratio, sd)) == left
    column = leaves(np.array([gap, 0.0]), np.full(2, log_ratio), np.full(2, sd))
    assert column.tolist() == [left, False]


def test_what_no_usual_mistake_explains() -> None:
    """Its density is Cauchy's: half as likely at its scale (0.7 in the logarithm) as at 1, and a
    tenth of all mistakes are of no usual kind."""
    top = math.log(0.1 / (math.pi * 0.7))
    found = unexplained(np.array([0.0, 0.7, -0.7, 2.1]))
    assert found == pytest.approx([top, top - math.log(2), top - math.log(2), top - math.log(10)])
    for figure, ratio in (("mass", 1.5), ("stall_torque", 0.3)):
        at = scores(figure, ratio)["unexplained"]
        assert at == pytest.approx(float(unexplained(np.log([ratio]))[0]))


def test_each_motor_of_a_column_has_its_own_scores() -> None:
    """And its best factor of each cause: 60 and 2π are one cause."""
    ratios, sd = np.array([60.0, 2 * math.pi, 1 / 60, 10.0, 2.5]), np.full(5, 0.01)
    together = static_scores(shape("no_load_speed", BRUSHED, ""), np.log(ratios), sd)
    assert together.shape == (5, len(CAUSES))
    for row, ratio in zip(together, ratios.tolist(), strict=True):
        alone = scores("no_load_speed", ratio)
        assert row.tolist() == pytest.approx(list(alone.values()))
    rev, ten = together[:, CODE["rev-per-second"]], together[:, CODE["power-of-ten"]]
    assert np.isfinite(rev).tolist() == [True, True, True, False, False]
    assert np.isfinite(ten).tolist() == [False, False, False, True, False]
    assert rev[:3] == pytest.approx(math.log(0.03) + norm.logpdf(0, scale=0.01))


def test_which_place_slipped_beside_a_unit() -> None:
    form = shape("stall_torque", BRUSHED, "")
    cause = "pound-inch-vs-newton-metre"
    for power in (0, 2, 3, -1, -2, -3):
        log_ratio = math.log(LB_IN) + power * math.log(10)
        assert slipped_power(form, cause, log_ratio, 0.01) == power
        assert slipped_power(form, cause, -log_ratio, 0.01) == -power
    assert slipped_power(form, cause, math.log(1.6), 0.01) == 0
    assert slipped_power(form, "continuous-stall", math.log(0.3), 0.01) == 0
    assert slipped_power(form, "power-of-ten", math.log(1000), 0.01) == 0


def test_what_is_a_hundred_times_less_likely_is_not_named() -> None:
    values = np.full(len(CAUSES), -np.inf)
    values[[5, 2]] = [-3.0, -7.5]
    assert causes_of(values) == (CAUSES[5], CAUSES[2])
    values[2] = -3.0 - math.log(101)
    assert causes_of(values) == (CAUSES[5],)
    assert causes_of(values, within=5.0) == (CAUSES[5], CAUSES[2])
