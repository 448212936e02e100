"""Finer points of numbers, units, moves and constants, each by its definition."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from motorfolio.schema.convention import Commutation
from motorfolio.schema.figure.numerals import (
    COMMA,
    POINT,
    NumberStyle,
    number_style,
    readings,
)
from motorfolio.schema.figure.pairs import share_power
from motorfolio.schema.figure.read import FigureError, read_column, read_figure
from motorfolio.schema.motor import CANONICAL, CONSTANT_BASES
from motorfolio.schema.operation.axis import Axis
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.moves import move, one_after_the_other, rest
from motorfolio.schema.reconcile.constants import joined
from motorfolio.schema.reconcile.run import reconcile
from motorfolio.schema.units.convert import convert
from motorfolio.schema.units.read import UnitError, read_unit, unit_of
from motorfolio.schema.written import number, quantity, scale

from .simulated_sheets import FULL, make, put, single

# ---- numerals


@pytest.mark.parametrize(
    ("text", "decimal"),
    [("10.5", "."), ("10,5", ","), ("01.5", None), ("0.500", "."), ("0,500", ","),
     ("12,500", None), ("1000.500", "."), ("1.234,5", ","), ("1,234.5", "."), ("00.5", None),
     ("10", None), ("1.234 567", None), ("1.5×10^-3", "."), ("1,234×10^-3", ","), ("−12,5", ","),
     ("n/a", None), ("3.", None), ("Ø 12,5 mm", ",")],
)  # fmt: skip
def test_which_numerals_show_the_decimal_sign(text: str, decimal: str | None) -> None:
    """Three digits behind one sign may be thousands, but not behind a nought or four digits."""
    assert number_style([text]).decimal == decimal


def test_the_majority_wins_and_a_draw_decides_nothing() -> None:
    found = number_style(["1.5", "x", "2,5", "3.5"])
    assert (found.decimal, found.evidence, found.conflicts) == (".", '"1.5"', (2,))
    other = number_style(["1.5", "2,5", "3,5", " 4,5 "])
    assert (other.decimal, other.evidence, other.conflicts) == (",", '"2,5"', (0,))
    draw = number_style(["1.5", "2,5"])
    assert (draw.decimal, draw.evidence, draw.conflicts) == (None, '"1.5" and "2,5"', (0,))
    assert number_style([]).decimal is None


@pytest.mark.parametrize(
    ("digits", "power", "expected"),
    [
        ("1,234", False, {".": "1234", ",": "1.234"}), ("1,234", True, {",": "1.234"}),
        ("12,5", False, {",": "12.5"}), ("0,234", False, {",": "0.234"}),
        ("1234,567", False, {",": "1234.567"}), ("1,234,567", False, {".": "1234567"}),
        ("1.234,5", False, {",": "1234.5"}), ("1,23,4", False, {}), ("007", False, {}),
        ("0", False, {None: "0"}), ("1 234", False, {None: "1234"}), ("1'234", False,
        {None: "1234"}), ("1 234'567", False, {}), (".5", False, {".": "0.5"}),
        ("01.5", False, {}), ("1 234,567", False, {",": "1234.567"}), ("12.05.2024", False, {}),
        ("1.234.567,8", False, {",": "1234567.8"}), ("0.234,5", False, {}),
    ],
)  # fmt: skip
def test_what_a_numeral_can_mean(digits: str, power: bool, expected: dict) -> None:
    assert readings(digits, power) == expected


@pytest.mark.parametrize(
    ("text", "shared"),
    [
        ("1.017 ± 0.001 ×10^-6", "1.017 ×10^-6 ± 0.001 ×10^-6"),
        ("2 ... 3 x10-6", "2 x10-6 ... 3 x10-6"),
        ("7500 - 1×10^4", "7500 - 1×10^4"),  # a range as written, none if shared
        ("1 - 100×10^3", "1×10^3 - 100×10^3"),  # a hundredfold range is the widest
        ("1 - 101×10^3", "1 - 101×10^3"),
        ("5 ± 5e-3", None),  # all of the value, or a thousandth of it
        ("5 ± 6e-3", "5 ± 6e-3"),  # more than the value is none of its deviations
        ("5 ± 4e-4", "5e-4 ± 4e-4"),  # below 1/10 000 nobody prints it
        ("1,234 ± 0.001e3", None),
        ("12 mNm", "12 mNm"),
    ],
)  # fmt: skip
def test_to_whom_a_late_power_belongs(text: str, shared: str | None) -> None:
    assert share_power(text) == shared


# ---- units


def test_a_power_that_may_be_another_is_told_with_both() -> None:
    for text, powers in (("10e4 kg·m²", (4, 5)), ("10E-6 kg·m²", (-6, -5))):
        with pytest.raises(UnitError, match="may be 10") as found:
            read_unit(text, ("kg·m²",))
        for power in powers:
            assert f"10^{power}" in str(found.value)
        assert f"10^{powers[1] + 1}" not in str(found.value)
    with pytest.raises(UnitError, match="no power of ten") as found:
        read_unit("104 kg·m²", ("kg·m²",))
    assert "10^4" in str(found.value)
    assert "10^-4" in str(found.value)


@pytest.mark.parametrize(
    ("text", "si", "factor", "marks"),
    [
        ("V rms/krpm", "V·s/rad", 30 / math.pi / 1000, {"rms"}),
        ("V (peak)/1000 min-1", "V·s/rad", 30 / math.pi / 1000, {"peak"}),
        ("A rms", "A", 1.0, {"rms"}), ("rpm", "rad/s", math.pi / 30, set()),
        ("%", "1", 0.01, set()), ("W", "W", 1.0, set()), ("mm", "m", 1e-3, set()),
    ],
)  # fmt: skip
def test_a_unit_on_its_own(text: str, si: str, factor: float, marks: set[str]) -> None:
    found = unit_of(text)
    assert found is not None
    assert (found.si, found.marks) == (si, marks)
    assert found.factor == pytest.approx(factor, rel=1e-12)


@pytest.mark.parametrize("text", ["", "r", "U", "motor", "x" * 200, "12.5"])
def test_what_is_no_unit(text: str) -> None:
    assert unit_of(text) is None


def test_temperatures_have_an_offset() -> None:
    """−40 °F are −40 °C, 212 °F the boiling point, 0 °C 273.15 K (NIST SP 811, B.8)."""
    assert convert("-40 °F", "°C").value == pytest.approx(-40)
    assert convert("212 °F", "°C").value == pytest.approx(100)
    assert convert("273.15 K", "°C").value == pytest.approx(0, abs=1e-9)
    assert convert("25 °C", "°F").value == pytest.approx(77)


# ---- figures with their prefix


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (0.1, "A", "0.1 A"), (0.0999, "A", "99.9 mA"), (9999.0, "W", "9999 W"),
        (10000.0, "W", "10 kW"), (2.5e6, "Hz", "2.5 MHz"), (3.2e-10, "F", "0.32 nF"),
        (4.7e-9, "F", "4.7 nF"), (0.05, "kg", "50 g"), (0.0005, "kg", "500 mg"), (20.0, "kg",
        "20 kg"), (25000.0, "m", "25000 m"), (12000.0, "s", "12000 s"), (0.02, "s", "20 ms"),
        (0.00002, "rad", "20×10⁻⁶ rad"), (-0.02, "N·m", "-20 mN·m"), (0.0, "A", "0 A"),
        (None, "A", "–"), (math.inf, "A", "–"), (0.001, "kg", "1 g"),
    ],
)  # fmt: skip
def test_prefixes(value: float | None, unit: str, text: str) -> None:
    """The SI's prefixes (BIPM, The International System of Units, 9th ed., table 7)."""
    assert quantity(value, unit) == text
    if value:
        divisor, prefixed = scale(value, unit)
        if math.isfinite(value):
            assert f"{number(value / divisor)} {prefixed}" == text


# ---- stretches of a cycle


def test_what_a_person_told_is_one_stretch_each() -> None:
    """Of a move speeding up, top speed and slowing down, however finely an S-curve is drawn."""
    thirds = move(1.0, time=3.0)
    curve = move(1.0, profile="s-curve", time=3.0)
    assert thirds.stretches.tolist() == [0, 1, 2]
    assert sorted(set(curve.stretches.tolist())) == [0, 1, 2]
    assert np.diff(curve.stretches).min() >= 0
    whole = one_after_the_other([thirds, rest(1.0), curve, thirds])
    assert whole.stretches[:4].tolist() == [0, 1, 2, 3]
    assert sorted(set(whole.stretches.tolist())) == list(range(10))
    assert whole.stretches[-3:].tolist() == [7, 8, 9]
    turned = Axis(friction=1.0).at_shaft(Cycle.from_rows([0, 1, 2], [1, -1, 1], [0, 0, 0]))
    assert len(set(turned.stretches.tolist())) == turned.stretches.size == 4
    assert np.diff(turned.stretches).min() > 0


# ---- constants


def test_only_copper_and_magnets_follow_the_temperature() -> None:
    """From 60 °C to 25 °C: resistance by 234.5 + T (Langsdorf, ex. 1-15), torque constant by the
    magnet's −0.20 %/K; inertia, inductance, no-load current and damping stay what they are."""
    batch = single()
    batch.reference_temperature[:] = 60.0
    batch.magnet = ["ferrite"]
    figures = {"terminal_resistance": 1.2, "torque_constant": 0.03, "terminal_inductance": 3e-4,
               "rotor_inertia": 1e-5, "no_load_current": 0.12}  # fmt: skip
    for key, value in figures.items():
        put(batch, key, 0, value, 5)
    constants = reconcile(batch).constants
    warm, flux = 259.5 / 294.5, 1 - 0.002 * (25 - 60)
    expected = {"armature_resistance": 1.2 * warm, "torque_constant": 0.03 * flux,
                "armature_inductance": 3e-4, "rotor_inertia": 1e-5, "no_load_current": 0.12,
                "motor_constant": 0.03 * flux / math.sqrt(1.2 * warm)}  # fmt: skip
    for key, value in expected.items():
        column = constants[key]
        assert column.value[0] == pytest.approx(value, rel=2e-3), key
        assert column.low[0] < value < column.high[0]
        assert math.sqrt(column.low[0] * column.high[0]) == pytest.approx(column.value[0])
    assert np.isnan(constants["viscous_damping"].value).all()
    assert constants["viscous_damping"].basis[0] == -1


def test_every_constant_is_near_the_truth() -> None:
    sheet = make(np.random.default_rng(31), 8, Commutation.BRUSHED, FULL)
    constants = reconcile(sheet.batch).constants
    names = {"torque_constant": "Km", "armature_resistance": "Ra", "armature_inductance": "La",
             "rotor_inertia": "J", "no_load_current": "I0"}  # fmt: skip
    for key, name in names.items():
        assert constants[key].value == pytest.approx(sheet.truth[name], rel=0.3), key
        inside = constants[key].low * 0.95 <= sheet.truth[name]
        inside &= sheet.truth[name] <= constants[key].high * 1.05
        assert inside.sum() >= 6, key
    size = sheet.truth["Km"] / np.sqrt(sheet.truth["Ra"])
    assert constants["motor_constant"].value == pytest.approx(size, rel=0.1)


def test_where_a_constant_comes_from() -> None:
    """Printed alone: published; of several figures: reconciled; of none of its own: derived."""

    def basis(*keys: str, of: str = "torque_constant") -> tuple[str, set[str]]:
        values = {"torque_constant": 0.03, "back_emf_constant": 0.03, "stall_current": 20.0,
                  "nominal_voltage": 24.0, "motor_constant": 0.03 / math.sqrt(1.2),
                  "terminal_resistance": 1.2}  # fmt: skip
        batch = single()
        for key in keys:
            put(batch, key, 0, values[key], 4)
        column = reconcile(batch).constants[of]
        return CONSTANT_BASES[column.basis[0]], set(column.sources[column.source[0]])

    assert basis("torque_constant") == ("published", {"torque_constant"})
    assert basis("torque_constant", "back_emf_constant") == (
        "reconciled", {"torque_constant", "back_emf_constant"},
    )  # fmt: skip
    assert basis("nominal_voltage", "stall_current", of="armature_resistance") == (
        "derived", {"nominal_voltage", "stall_current"},
    )  # fmt: skip
    assert basis("motor_constant", "terminal_resistance") == (
        "derived", {"motor_constant", "terminal_resistance"},
    )  # fmt: skip


def test_constants_of_portions_share_their_sources() -> None:
    def one(*keys: str):
        batch = single()
        for key in keys:
            put(batch, key, 0, 0.03, 4)
        return reconcile(batch).constants

    first, second = one("torque_constant"), one("torque_constant", "back_emf_constant")
    whole = joined([first, second, first])
    assert set(whole) == set(CANONICAL)
    column = whole["torque_constant"]
    assert [column.sources[i] for i in column.source] == [
        ("torque_constant",), ("torque_constant", "back_emf_constant"), ("torque_constant",),
    ]  # fmt: skip
    assert len(column.sources) == 2
    assert column.value.tolist() == [
        part["torque_constant"].value[0] for part in (first, second, first)
    ]
    assert joined([first]) is first


# ---- columns of numbers


@settings(max_examples=200, deadline=None)
@given(
    st.lists(st.from_regex(r"[0-9]{1,4}([.,][0-9]{1,5})?", fullmatch=True), min_size=1, max_size=8),
    st.sampled_from([POINT, COMMA, NumberStyle(None)]),
)
def test_the_short_way_of_a_column_reads_what_the_long_way_does(texts, style) -> None:
    column = read_column(texts, style)
    for i, text in enumerate(texts):
        try:
            figure = read_figure(text, style)
        except FigureError:
            assert i in column.failures
            continue
        assert figure is not None
        assert i not in column.failures
        assert (column.value[i], column.low[i], column.high[i]) == pytest.approx(
            (figure.value, figure.low, figure.high), rel=1e-12
        )
        assert (i in column.doubtful) == (figure.other is not None)


def test_a_cycle_without_a_gear_loses_nothing() -> None:
    """As told, and with 50 %: twice the torque where the motor drives, half where it brakes."""
    cycle = Cycle.from_points([(4.0, 2.0, 1.0), (-4.0, 2.0, 1.0), (4.0, 0.0, 1.0)])
    assert cycle.pieces().basis[:, 0, 0].tolist() == [4, -4, 4]
    assert cycle.pieces(0.0, 0.5).basis[:, 0, 0].tolist() == [8, -2, 4]
    ramp = Cycle.from_rows([0, 1, 2], [0, 3, 0], [0, 0, 0])
    assert not ramp.pieces().basis[:, :, 0].any()
    assert ramp.pieces(2.0).basis[:, 0, 0].tolist() == [6, -6]
