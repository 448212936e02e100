"""Names and numbers as a person reads them."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from motorfolio.schema.units.convert import convert
from motorfolio.schema.units.read import UnitError
from motorfolio.schema.written import in_words, number, percent, quantity


def test_names_are_hyphenated_as_the_trade_writes_them():
    assert in_words("no_load_speed") == "no-load speed"
    assert in_words("back_emf_constant") == "back-EMF constant"
    assert in_words("speed_torque_gradient") == "speed/torque gradient"
    assert in_words("thermal_resistance_winding_housing") == "thermal resistance winding to housing"


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (14012.0, "14010"), (0.0, "0"), (-0.0, "0"), (-1e-12, "-1×10⁻¹²"), (4.02e-6, "4.02×10⁻⁶"),
        (0.01883, "0.01883"), (99.996, "100"), (25e6, "25×10⁶"), (math.nan, "–"), (None, "–"),
    ],
)  # fmt: skip
def test_numbers(value, text):
    assert number(value) == text


@given(st.floats(min_value=-1e12, max_value=1e12))
def test_a_number_keeps_its_four_digits_and_shows_no_computer_exponent(value):
    text = number(value)
    assert "e" not in text
    mantissa, _, power = text.partition("×10")
    read = float(mantissa) * 10.0 ** int(
        power.translate(str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")) or 0
    )
    assert read == pytest.approx(value, rel=5.1e-4, abs=1e-100)
    assert text != "-0"


def test_quantities_and_shares():
    assert quantity(0.01883, "N·m/A") == "18.83 mN·m/A"
    assert quantity(0.118, "kg") == "0.118 kg"
    assert quantity(0.022, "m") == "22 mm"
    assert quantity(0.152, "Ω") == "0.152 Ω"
    assert quantity(1500.0, "W") == "1500 W"
    assert quantity(0.5, "1") == "0.5"
    assert percent(-0.001, signed=True) == "0 %"
    assert percent(0.05, signed=True) == "+5 %"


def test_a_speed_constant_converts_to_its_reciprocal():
    """Km·Kn = 1 in SI: 1/(340 rpm/V) = 60/(2π·340) N·m/A, by hand."""
    value, unit, remark = convert("340 rpm/V", "N·m/A")
    assert value == pytest.approx(60 / (2 * math.pi * 340))
    assert (unit, "reciprocal" in remark) == ("N·m/A", True)
    assert convert("4.3 V/krpm", "rpm/V").value == pytest.approx(1000 / 4.3)
    assert convert("4.3 V/krpm", "rad/(s·V)").value == pytest.approx(1000 * 2 * math.pi / 60 / 4.3)
    assert not convert("340 rpm/V", "rad/(s·V)").remark
    with pytest.raises(UnitError, match="zero"):
        convert("0 rpm/V", "N·m/A")
