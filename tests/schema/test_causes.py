"""Every cause is recognised by its published factor; the printed digits and units count."""

import math

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.causes import CAUSES, causes_of, shape, static_scores
from motorfolio.schema.reconcile.evidence import transpositions

BRUSHED, SERVO = int(Commutation.BRUSHED), int(Commutation.SINUSOIDAL)


def likeliest(figure: str, ratio: float, kind: int = BRUSHED, unit: str = "", sd: float = 0.01):
    form = shape(figure, kind, unit)
    return causes_of(static_scores(form, np.log([ratio]), np.array([sd]))[0])


# factors of units: NIST SP 811 (2008), appendix B.8 (7 digits); of conventions: definitions of
# rms, of phase and line values
@pytest.mark.parametrize(
    ("figure", "ratio", "kind", "cause"),
    [
        ("torque_constant", 10.0, BRUSHED, "power-of-ten"),
        ("terminal_inductance", 1e-3, BRUSHED, "power-of-ten"),
        ("no_load_speed", 9.549297, BRUSHED, "rpm-vs-rad-per-second"),
        ("speed_constant", 0.1047198, BRUSHED, "rpm-vs-rad-per-second"),
        ("no_load_speed", 60.0, BRUSHED, "rev-per-second"),
        ("nominal_speed", 6.283185, BRUSHED, "rev-per-second"),
        ("nominal_torque", 7.061552, BRUSHED, "ounce-inch-vs-millinewton-metre"),
        ("torque_constant", 0.1416119, BRUSHED, "ounce-inch-vs-millinewton-metre"),
        ("nominal_torque", 0.1129848, BRUSHED, "pound-inch-vs-newton-metre"),
        ("torque_constant", 1 / 9.80665, BRUSHED, "kilogram-force-vs-newton"),
        ("torque_constant", math.sqrt(2), SERVO, "peak-vs-rms"),
        ("back_emf_constant", math.sqrt(3), SERVO, "line-vs-phase"),
        ("terminal_resistance", 0.5, SERVO, "line-vs-phase"),
        ("torque_constant", math.sqrt(1.5), SERVO, "sinusoidal-current-convention"),
        ("terminal_resistance", 1.3, BRUSHED, "hot-vs-cold"),
        ("rotor_inertia", 386.0886, BRUSHED, "inertia-convention"),
        ("rotor_inertia", 0.25, BRUSHED, "inertia-convention"),
        ("rated_power", 1 / 745.6999, BRUSHED, "horsepower-vs-watt"),
        ("rated_power", 735.4988, BRUSHED, "horsepower-vs-watt"),
        ("nominal_speed", 2.0, SERVO, "poles-vs-pole-pairs"),
        ("rated_power", 1.25, BRUSHED, "input-vs-output-power"),
        ("stall_torque", 43.0, BRUSHED, "gear-output-side"),
        ("stall_current", 0.21, BRUSHED, "continuous-stall"),
        ("terminal_resistance", 0.37, BRUSHED, "unexplained"),
    ],
)
def test_cause_by_ratio(figure, ratio, kind, cause):
    assert likeliest(figure, ratio, kind, sd=0.004)[0] == cause


def test_a_ratio_that_several_causes_fit_lists_them():
    causes = likeliest("torque_constant", 9.9, sd=0.03)
    assert {"power-of-ten", "kilogram-force-vs-newton"} <= set(causes[:3])


def test_the_printed_unit_makes_a_cause_likelier():
    plain = static_scores(shape("nominal_torque", BRUSHED, "mNm"), np.log([8.0]), np.array([0.1]))
    ounce = static_scores(shape("nominal_torque", BRUSHED, "oz-in"), np.log([8.0]), np.array([0.1]))
    code = CAUSES.index("ounce-inch-vs-millinewton-metre")
    assert ounce[0, code] > plain[0, code]


@pytest.mark.parametrize(
    ("text", "ratio"), [("254", 254 / 524), ("2.54", 2.54 / 2.45), ("0,12", 0.12 / 0.21)]
)
def test_transposed_digits(text, ratio):
    assert any(math.isclose(math.exp(t), ratio) for t in transpositions(text))


def test_no_transposition_of_equal_digits_or_of_no_number():
    assert transpositions("33") == []
    assert transpositions("n/a") == []
