"""A figure from one convention to another: every way there is, and exactly what is said of it."""

from __future__ import annotations

import math
from dataclasses import FrozenInstanceError

import pytest

from motorfolio.schema.errors import MotorfolioError
from motorfolio.schema.units.convert import convert
from motorfolio.schema.units.read import UnitError, read_unit

SQRT2, SQRT3 = math.sqrt(2), math.sqrt(3)
STAR, DELTA = {"connection": "star"}, {"connection": "delta"}
SINE, BLOCK = {"commutation": "sinusoidal"}, {"commutation": "block"}


@pytest.mark.parametrize(
    ("text", "target", "told", "value"),
    [
        # peak to peak is twice the peak, and what is per ampere or per volt goes the other way
        ("6 A peak-to-peak", "A peak", {}, 3.0), ("3 A peak", "A peak-to-peak", {}, 6.0),
        ("1 N·m/A peak-to-peak", "N·m/A peak", {}, 2.0), ("1 N·m/A peak", "N·m/A p-p", {}, 0.5),
        ("1 V·s/rad peak-to-peak", "V·s/rad peak", {}, 0.5), ("8 rad/(s·V) p-p", "rad/(s·V) peak",
        {}, 16.0), ("1 A peak-to-peak", "A rms", {}, 1 / 2 / SQRT2), ("8 V p-p", "V pk", {}, 4.0),
        # "ac" alone is rms
        ("5 A ac", "A peak", {}, 5 * SQRT2), ("5 A ac", "A rms", {}, 5.0), ("5 A ac rms", "A peak",
        {}, 5 * SQRT2), ("5 A peak", "A ac", {}, 5 / SQRT2), ("5 A ac peak", "A peak", {}, 5.0),
        # armature amperes: Ia = √(3/2)·I_rms with sines, and as such with blocks
        ("3 A rms", "A dc", SINE, 3 * math.sqrt(1.5)),
        ("3 A dc", "A rms", SINE, 3 / math.sqrt(1.5)),
        ("3 A peak", "A dc", SINE, 3 * SQRT3 / 2), ("3 A peak", "A dc", BLOCK, 3.0),
        ("1 N·m/A rms", "N·m/A dc", SINE, 1 / math.sqrt(1.5)), ("1 N·m/A dc", "N·m/A rms", BLOCK,
        math.sqrt(1.5)), ("2 A dc", "mA dc", {}, 2000.0),
        # lines and phase
        ("9 Ω lines", "Ω phase", DELTA, 13.5), ("9 Ω lines", "Ω phase", STAR, 4.5), ("2 mH phase",
        "mH lines", DELTA, 4 / 3), ("30 V rms lines", "V rms phase", STAR, 30 / SQRT3),
        ("30 V rms lines", "V rms phase", DELTA, 30.0), ("30 V rms phase", "V peak lines", STAR,
        30 * SQRT2 * SQRT3), ("9 rad/(s·V) rms phase", "rad/(s·V) rms lines", STAR, 9 / SQRT3),
        # from volts to amperes by the power balance Kt·I·ω = 3·U·I of a phase
        ("1 V·s/rad rms phase", "N·m/A rms", STAR, 3.0), ("1 V·s/rad rms lines", "N·m/A rms", {},
        SQRT3), ("3 N·m/A rms", "V·s/rad rms phase", STAR, 1.0), ("1 V·s/rad dc", "N·m/A dc", {},
        1.0), ("1 V·s/rad peak lines", "N·m/A dc", SINE, 1.0), ("1 V·s/rad peak lines", "N·m/A dc",
        BLOCK, 3 / math.pi), ("2 rad/(s·V) rms", "N·m/A rms", {}, SQRT3 / 2), ("2 N·m/A rms",
        "rad/(s·V) rms lines", {}, SQRT3 / 2), ("2 N·m/A", "rad/(s·V)", {}, 0.5), ("4 V·s/rad",
        "N·m/A", {}, 4.0), ("0.5 V·s/rad", "rad/(s·V)", {}, 2.0),
        # temperatures
        ("0 °C", "K", {}, 273.15), ("0 K", "°C", {}, -273.15), ("32 °F", "K", {}, 273.15),
        ("300 mK", "K", {}, 0.3), ("50 °F", "°C", {}, 10.0), ("1 °C/W", "K/W", {}, 1.0),
        ("1000 mK", "°C", {}, -272.15), ("9 °F", "°F", {}, 9.0),
        # plain
        ("20 %", "1", {}, 0.2), ("0.2", "%", {}, 20.0), ("5 $", "USD", {}, 5.0),
        ("6 kW", "W", {}, 6000.0),
        ("5 W rms", "mW rms", {}, 5000.0), ("5 W rms", "mW", {}, 5000.0),
        ("4 rpm/V rms", "V/krpm rms", {}, 250.0), ("-3 N·m", "mN·m", {}, -3000.0),
    ],
)  # fmt: skip
def test_values(text: str, target: str, told: dict, value: float) -> None:
    """Peak and rms of a sine, star and delta, armature amperes: by definition; a block of 120° has
    an rms of √(2/3) and the mean 3/π of a sine's top (common practice, no source)."""
    found = convert(text, target, **told)
    assert found.value == pytest.approx(value, rel=1e-12, abs=1e-9)
    assert found.unit == target


STILL, ASKED = "still ", ", as no other convention is asked for"
SINES, LINES = "for sinusoidal currents and voltages", "volts between lines"
TAKEN = "taken as a temperature, not as a difference"


@pytest.mark.parametrize(
    ("text", "target", "told", "remark"),
    [
        ("5 A rms", "A peak", {}, SINES), ("5 A rms", "A peak", SINE, ""), ("5 A rms", "A rms", {},
        ""), ("5 A", "mA", {}, ""), ("3 Ω phase", "Ω lines", STAR, ""), ("5 A rms", "mA", {},
        STILL + "rms" + ASKED), ("5 V rms lines", "V", {}, STILL + "rms, lines" + ASKED),
        ("5 V rms lines", "V rms", {}, STILL + "lines" + ASKED), ("5 V rms lines", "V lines", {},
        STILL + "rms" + ASKED), ("5 V rms lines", "V rms lines", {}, ""),
        ("2 V·s/rad rms", "N·m/A rms", {}, f"{LINES}; {SINES}"),
        ("2 V·s/rad rms lines", "N·m/A rms", {}, SINES), ("2 V·s/rad rms lines", "N·m/A rms", SINE,
        ""), ("2 N·m/A dc", "V·s/rad dc", {}, LINES), ("2 V·s/rad dc lines", "N·m/A dc", {}, ""),
        ("4 rpm/V", "N·m/A", {}, "the reciprocal: 1/(4 rpm/V)"), ("4 rpm/V", "rpm/V", {}, ""),
        ("4 rpm/V rms", "V/krpm rms", {}, "the reciprocal: 1/(4 rpm/V rms)"),
        ("0.5 N·m/A", "rpm/V", {}, "the reciprocal: 1/(0.5 N·m/A)"), ("20 °C", "K", {}, TAKEN),
        ("300 K", "°C", {}, TAKEN), ("20 °F", "K", {}, TAKEN), ("20 °C", "°F", {}, ""),
        ("5 K", "mK", {}, ""), ("5 $", "USD", {}, "$ taken as US dollars"),
    ],
)  # fmt: skip
def test_what_is_said(text: str, target: str, told: dict, remark: str) -> None:
    assert convert(text, target, **told).remark == remark


def test_remarks_of_both_units_once_each() -> None:
    both = convert("5 oz-in", "kg-cm").remark
    assert "ozf" in both
    assert "kgf" in both
    assert both.count(";") == 1
    assert convert("5 oz-in", "oz-in").remark.count("ozf") == 1


@pytest.mark.parametrize(
    ("text", "target", "told", "message"),
    [
        ("5 A", "A lines", {}, "lines or phase"), ("5 A rms", "A dc", {}, "commutation"),
        ("5 V", "V rms", {}, "rms, peak or dc"), ("5 V rms", "V rms lines", {}, "lines or phase"),
        ("5 V rms", "V dc", SINE, "no rule"), ("5 A rms lines", "A rms phase", STAR, "no rule"),
        ("5 V·s/rad rms", "N·m/A", {}, "rms, peak or dc"), ("5 V·s/rad rms phase", "N·m/A rms", {},
        "connection"), ("5 Ω lines", "Ω phase", {}, "connection"), ("5 W rms", "W peak", {},
        "no rule"), ("5 V lines phase", "V", {}, "both lines and phase"), ("5 A rms dc", "A", {},
        "both rms and dc"), ("5 N·m/A", "nonsense", {}, "to convert to"), ("5", "V", {},
        "a number without a unit; V would do"), ("5", "rpm/V", {}, "without a unit"),
        ("0 N·m/A", "rpm/V", {}, "zero has no reciprocal"),
        ("1e308 kN", "mN", {}, "too large"),
        ("5 A", "A", {"connection": "brushed"}, "star or delta"),
        ("5 A", "A", {"commutation": "star"}, "sinusoidal or block"),
    ],
)  # fmt: skip
def test_refusals(text: str, target: str, told: dict, message: str) -> None:
    with pytest.raises(MotorfolioError, match=message):
        convert(text, target, **told)


def test_a_read_unit_is_a_value() -> None:
    """It is kept for the next text that reads alike, so that nobody may change it."""
    unit = read_unit("mV", ("V",))
    with pytest.raises(FrozenInstanceError):
        unit.factor = 1.0  # type: ignore[misc]
    assert unit == read_unit("mV", ("V",))
    assert len({unit, read_unit("mV", ("V",))}) == 1


def test_what_a_refusal_holds() -> None:
    with pytest.raises(UnitError) as found:
        read_unit("voltt", ("V",))
    error = found.value
    assert error.text == "voltt"
    assert str(error).startswith('unit "voltt": ')
    assert " or ".join(error.guesses) in str(error)
    plain = UnitError("x", "a reason")
    assert (plain.guesses, str(plain)) == ((), 'unit "x": a reason')
    assert len(str(UnitError("x", "r" * 400))) < 200
