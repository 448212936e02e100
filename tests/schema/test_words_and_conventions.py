"""Names, numbers as text, quantities of the vocabulary and conventions, each at its edges."""

from __future__ import annotations

import math
from dataclasses import FrozenInstanceError, fields

import pytest

from motorfolio.schema.convention import (
    Commutation,
    Convention,
    armature_current,
    dc_back_emf,
    default_convention,
    terminal_impedance,
    to_dc,
)
from motorfolio.schema.spelling import nearest
from motorfolio.schema.vocabulary import Quantity, _quantity, quantities, words
from motorfolio.schema.vocabulary import quantity as quantity_of
from motorfolio.schema.written import departure, in_words, number, percent, quantity, scale

BRUSHED, BLOCK, SINE = Commutation.BRUSHED, Commutation.BLOCK, Commutation.SINUSOIDAL


@pytest.mark.parametrize(
    ("value", "digits", "text"),
    [
        # plain between a thousandth and ten million, else by powers of a thousand
        (0.001, 4, "0.001"), (0.000999, 4, "999×10⁻⁶"), (0.0001, 4, "100×10⁻⁶"), (9.999e6, 4,
        "9999000"), (1e7, 4, "10×10⁶"), (0.00012345, 4, "123.4×10⁻⁶"), (1.5e-3, 4, "0.0015"),
        (123456.0, 4, "123500"), (9999999.0, 4, "10×10⁶"), (1.0, 4, "1"), (10.0, 4, "10"),
        (100.0, 4, "100"), (1200.0, 4, "1200"), (12.3456, 2, "12"), (12.3456, 1, "10"), (0.5, 1,
        "0.5"), (1.25, 3, "1.25"), (1.2, 4, "1.2"), (-1.2, 4, "-1.2"), (1e-9, 4, "1×10⁻⁹"),
        (2e-99, 4, "2×10⁻⁹⁹"), (1e-101, 4, "0"), (3e12, 4, "3×10¹²"), (99996.0, 4, "100000"),
        (0.99996, 4, "1"), (math.inf, 4, "–"), (-math.inf, 4, "–"), (math.nan, 4, "–"), (None, 4,
        "–"), (0.0, 4, "0"), (30.0, 4, "30"), (1e8, 4, "100×10⁶"), (1e9, 4, "1×10⁹"),
    ],
)  # fmt: skip
def test_numbers(value, digits: int, text: str) -> None:
    """Significant digits, rounded; powers of ten in threes (common practice, no source)."""
    assert number(value, digits) == text


@pytest.mark.parametrize(
    ("share", "decimals", "signed", "text"),
    [
        (0.615, 0, False, "62 %"), (0.6149, 0, False, "61 %"), (0.615, 1, False, "61.5 %"),
        (-0.1, 0, False, "-10 %"), (0.1, 0, True, "+10 %"), (-0.1, 0, True, "-10 %"), (0.0, 0, True,
        "0 %"), (-0.0004, 1, False, "0.0 %"), (0.0004, 1, True, "0.0 %"), (0.0006, 1, True,
        "+0.1 %"), (12.0, 0, False, "1200 %"), (None, 0, False, "–"), (math.nan, 0, False, "–"),
        (math.inf, 0, False, "∞"), (-math.inf, 0, False, "-∞"), (1.0, 2, False, "100.00 %"),
    ],
)  # fmt: skip
def test_shares(share, decimals: int, signed: bool, text: str) -> None:
    assert percent(share, decimals, signed=signed) == text


def test_shares_as_nobody_asks_more() -> None:
    assert percent(0.123) == percent(0.123, 0, signed=False) == "12 %"
    assert number(1.23456) == number(1.23456, 4)
    assert quantity(1.23456, "V") == quantity(1.23456, "V", 4)


@pytest.mark.parametrize(
    ("ratio", "text"),
    [(1.0, "0.0 %"), (1.004, "+0.4 %"), (0.99, "-1.0 %"), (1.34, "+34.0 %"), (1.36, "×1.36"),
     (1 / 1.34, "-25.4 %"), (1 / 1.36, "÷1.36"), (7.183, "×7.18"), (1 / 2.2801, "÷2.28"),
     (1000.0, "×1000")],
)  # fmt: skip
def test_departures(ratio: float, text: str) -> None:
    assert departure(ratio) == text


@pytest.mark.parametrize(
    ("value", "unit", "divisor", "prefixed"),
    [
        (0.1, "V", 1.0, "V"), (0.0999, "V", 1e-3, "mV"), (9999.9, "V", 1.0, "V"), (1e4, "V", 1e3,
        "kV"), (1e6, "W", 1e6, "MW"), (999999.0, "W", 1e3, "kW"), (1e-3, "A", 1e-3, "mA"), (9.9e-4,
        "A", 1e-6, "µA"), (1e-6, "H", 1e-6, "µH"), (9e-7, "H", 1e-9, "nH"), (1e-9, "F", 1e-9, "nF"),
        (1e-12, "F", 1e-9, "nF"), (-0.05, "V", 1e-3, "mV"), (0.0, "V", 1.0, "V"), (None, "V", 1.0,
        "V"), (math.nan, "V", 1.0, "V"), (math.inf, "V", 1.0, "V"), (0.05, "kg", 1e-3, "g"), (1e-3,
        "kg", 1e-3, "g"), (9e-4, "kg", 1e-6, "mg"), (2e4, "kg", 1.0, "kg"), (-0.05, "kg", 1e-3,
        "g"),
        (0.05, "rad", 1.0, "rad"), (5e4, "rad/s", 1.0, "rad/s"), (5e4, "m", 1.0, "m"), (5e4, "s",
        1.0, "s"), (0.05, "m", 1e-3, "mm"), (0.05, "s", 1e-3, "ms"), (5e4, "J", 1e3, "kJ"), (0.01,
        "N·m/√W", 1e-3, "mN·m/√W"),
    ],
)  # fmt: skip
def test_prefixes_of_a_figure(value, unit: str, divisor: float, prefixed: str) -> None:
    """From a tenth to ten thousand as it is, else by the SI's prefixes in threes; lengths and times
    above one never (common practice, no source)."""
    assert scale(value, unit) == (divisor, prefixed)
    if value and math.isfinite(value):
        assert quantity(value, unit) == f"{number(value / divisor)} {prefixed}"


def test_a_pure_number_stands_bare() -> None:
    assert (quantity(0.05, "1"), quantity(0.05, ""), quantity(None, "V")) == ("0.05", "0.05", "–")


def test_display_names() -> None:
    assert in_words("pwm_frequency") == "PWM frequency"
    assert in_words("thermal_resistance_housing_ambient") == "thermal resistance housing to ambient"
    assert in_words("no_load_current") == "no-load current"


# ---- vocabulary


def test_a_quantity_of_which_nothing_is_said() -> None:
    """Any value from nought is plausible, none varies, and nothing else is known of it."""
    bare = Quantity("x")
    assert bare.plausible == (0.0, math.inf)
    assert (bare.scatter, bare.scatter_points) == (0.0, 0.0)
    assert (bare.zero, bare.frame, bare.text) == (False, False, False)
    read = _quantity("x", {})
    assert read.accepts == ("",)
    for field in fields(Quantity):
        if field.name != "accepts":
            assert getattr(read, field.name) == getattr(bare, field.name), field.name
    told = _quantity("x", {"unit": "V", "plausible": [1, 9], "scatter": 0.1, "scatter_points": 0.2,
                           "carries": ["voltage"], "symbols": ["U"], "zero": True, "frame": True,
                           "text": True})  # fmt: skip
    assert told == Quantity("x", "V", ("V",), (1.0, 9.0), 0.1, 0.2, frozenset({"voltage"}), ("U",),
                            True, True, True)  # fmt: skip
    assert _quantity("x", {"unit": "V", "accepts": ["A", "V"]}).accepts == ("A", "V")
    with pytest.raises(FrozenInstanceError):
        bare.unit = "V"  # type: ignore[misc]


def test_quantities_by_their_key() -> None:
    for key, found in quantities().items():
        assert found.key == key
        assert quantity_of(key) is found
        assert found.plausible[0] < found.plausible[1]
        assert 0 <= found.scatter < 1
    with pytest.raises(KeyError):
        quantity_of("no such key")


def test_words_of_all_languages_are_joined() -> None:
    """What one file names, and what the last of them names, too (their first lines name them)."""
    found = words()
    names = {name.lower() for name in found.names["nominal_voltage"]}
    assert {"nominal voltage", "nennspannung", "tension nominale", "定格電圧"} <= names
    for group in ("fillers", "captions", "others", "parts"):
        listed = getattr(found, group)
        assert len(listed) > 3
        assert all(isinstance(word, str) for word in listed)
    with pytest.raises(FrozenInstanceError):
        found.parts = ()  # type: ignore[misc]


# ---- misspelt words


def test_the_likeliest_word_first() -> None:
    """Twice the letters in common over those of both: three of "bolt" 75 %, of "vault" 67 %."""
    known = ["volt", "bolt", "vault", "ampere"]
    assert nearest("volt", known, most=4) == ["volt", "bolt", "vault"]
    assert nearest("volt", known) == ["volt"]
    assert nearest("volt", known, most=2) == ["volt", "bolt"]
    assert nearest("xyz", known) == []
    # twice three letters of ten are 60 %, of eleven less
    assert nearest("abcde", ["abcxy"]) == ["abcxy"]
    assert nearest("abcde", ["abcxyz"]) == []
    assert nearest("abcde", ["abcxyz"], least=50) == ["abcxyz"]


# ---- conventions


@pytest.mark.parametrize(
    ("current", "kind", "factor"),
    [
        (None, SINE, 1.0), ("dc", SINE, 1.0), ("rms", SINE, math.sqrt(1.5)), ("peak", SINE,
        math.sqrt(3) / 2), ("rms", BLOCK, math.sqrt(1.5)), ("peak", BLOCK, 1.0), ("rms", BRUSHED,
        1.0), ("peak", BRUSHED, 1.0), ("dc", BLOCK, 1.0), (None, BRUSHED, 1.0),
    ],
)  # fmt: skip
def test_armature_amperes(current, kind, factor: float) -> None:
    assert armature_current(current, kind) == pytest.approx(factor, rel=1e-15)
    convention = Convention(current=current)
    assert to_dc("torque_constant", convention, kind) == pytest.approx(1 / factor)
    for key in ("nominal_current", "peak_current", "no_load_current"):
        assert to_dc(key, convention, kind) == pytest.approx(factor)
    assert to_dc("peak_torque", convention, kind) == 1


@pytest.mark.parametrize("connection", [None, "star", "delta"])
@pytest.mark.parametrize("between", [None, "lines", "phase"])
@pytest.mark.parametrize("voltage", [None, "dc", "peak", "rms"])
@pytest.mark.parametrize("shape", [None, "trapezoidal"])
def test_back_emf(connection, between, voltage, shape) -> None:
    """Peak between lines: a phase of a star has √3 less of a sine and half of a trapezoid; the rms
    of a trapezoid is √7/3 (flat for 120°) or √5/3 (60°) of its peak; six steps make 3/π of a
    sine."""
    convention = Convention(voltage=voltage, between=between, connection=connection, shape=shape)
    star = between == "phase" and connection != "delta"
    factor = 1.0
    if voltage == "rms":
        factor = {None: math.sqrt(2), "trapezoidal": 3 / math.sqrt(7 if star else 5)}[shape]
    if star:
        factor *= {None: math.sqrt(3), "trapezoidal": 2}[shape]
    six_steps = {None: 3 / math.pi, "trapezoidal": 1.0}[shape]
    known = voltage in ("peak", "rms")
    assert dc_back_emf(convention, SINE) == pytest.approx(factor if known else 1.0)
    assert dc_back_emf(convention, BLOCK) == pytest.approx(factor * six_steps if known else 1.0)
    assert dc_back_emf(convention, BRUSHED) == 1
    inverse = to_dc("speed_constant", convention, SINE)
    assert inverse == pytest.approx(1 / to_dc("back_emf_constant", convention, SINE))


@pytest.mark.parametrize(
    ("between", "connection", "factor"),
    [(None, None, 1.0), ("lines", "star", 1.0), ("lines", "delta", 1.0), ("phase", None, 2.0),
     ("phase", "star", 2.0), ("phase", "delta", 2 / 3)],
)  # fmt: skip
def test_windings_between_two_terminals(between, connection, factor: float) -> None:
    convention = Convention(between=between, connection=connection)
    assert terminal_impedance(convention) == pytest.approx(factor)
    for key in ("terminal_resistance", "terminal_inductance"):
        assert to_dc(key, convention, SINE) == pytest.approx(factor)
    assert to_dc("rotor_inertia", convention, SINE) == 1


@pytest.mark.parametrize("kind", list(Commutation))
@pytest.mark.parametrize("key", ["back_emf_constant", "speed_constant", "nominal_voltage",
                                 "mains_voltage", "torque_constant"])  # fmt: skip
def test_what_is_taken_where_nothing_is_said(kind: Commutation, key: str) -> None:
    """Servo sheets in rms and between lines, all others dc; mains always rms (common practice, no
    source)."""
    every = frozenset({"current", "voltage", "between"})
    found = default_convention(key, every, kind)
    emf = key in ("back_emf_constant", "speed_constant")
    assert found.current == ("rms" if kind is SINE else "dc")
    assert found.voltage == ("rms" if key == "mains_voltage" or (emf and kind is SINE) else "dc")
    assert found.between == (None if kind is BRUSHED else "lines")
    for one in every:
        alone = default_convention(key, frozenset({one}), kind)
        for other in every:
            expected = getattr(found, other) if other == one else None
            assert getattr(alone, other) == expected
    assert (found.connection, found.temperature, found.shape, found.basis) == (
        None, None, None, "assumed",
    )  # fmt: skip


def test_a_convention_is_a_value() -> None:
    told = Convention(shape="trapezoidal", temperature=0.0)
    assert told.as_json() == {"shape": "trapezoidal", "temperature": 0.0, "basis": "assumed"}
    with pytest.raises(FrozenInstanceError):
        told.basis = "stated"  # type: ignore[misc]
    assert [int(kind) for kind in Commutation] == [0, 1, 2]
