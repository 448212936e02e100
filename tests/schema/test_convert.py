"""Figures from one convention to another, as a person asks for it."""

import math
import re

import pytest

from motorfolio.schema.errors import MotorfolioError
from motorfolio.schema.units.convert import convert

KRPM = 30 / 1000 / math.pi  # 1 V/krpm in V·s/rad


@pytest.mark.parametrize(
    ("text", "target", "told", "value"),
    [
        # rms of a sine: its peak over √2 (ISO 80000-6:2022, item 6-50.3, from memory)
        ("5 A rms", "A peak", {}, 5 * math.sqrt(2)),
        ("5 Arms", "mA pk", {}, 5000 * math.sqrt(2)),
        ("10 V peak-to-peak", "V rms", {}, 10 / 2 / math.sqrt(2)),
        ("54.2 V/krpm rms", "V·s/rad peak", {}, 54.2 * KRPM * math.sqrt(2)),
        ("0.637 N·m/A rms", "N·m/A peak", {}, 0.637 / math.sqrt(2)),
        ("100 rpm/V rms", "rpm/V peak", {}, 100 / math.sqrt(2)),
        # lines against a winding: star √3 in voltage and 2 in resistance, delta 1 and 2/3
        # (common practice, no source)
        ("3 Ω phase", "Ω lines", {"connection": "star"}, 6),
        ("3 Ω phase", "Ω lines", {"connection": "delta"}, 2),
        ("2 mH lines", "mH phase", {"connection": "star"}, 1),
        ("40 V/krpm rms phase", "V/krpm rms lines", {"connection": "star"}, 40 * math.sqrt(3)),
        ("40 V/krpm rms phase", "V/krpm rms lines", {"connection": "delta"}, 40),
        # torque per rms ampere is √3 times the rms voltage between lines per rad/s: power
        # balance Kt·I·ω = √3·U·I
        ("54.2 V/krpm rms", "N·m/A rms", {}, math.sqrt(3) * 54.2 * KRPM),
        ("340 rpm/V rms", "N·m/A rms", {}, math.sqrt(3) * 30 / math.pi / 340),
        # six-step current flows two thirds of a turn: rms² is 2/3 of the flat top's square
        ("6 A dc", "A rms", {"commutation": "block"}, 6 * math.sqrt(2 / 3)),
        ("6 A dc", "A peak", {"commutation": "block"}, 6),
        # t/°C = T/K − 273.15 (SI Brochure, 9th edition, 2.3.1)
        ("25 °C", "K", {}, 298.15),
        ("298.15 K", "°C", {}, 25),
        ("77 °F", "K", {}, 298.15),
        # and a unit of a difference stays one
        ("8 °C/W", "K/W", {}, 8),
        ("3 K", "mK", {}, 3000),
        # nothing asked, nothing converted
        ("5 A rms", "mA", {}, 5000),
        ("24 V dc", "mV dc", {}, 24000),
    ],
)
def test_the_convention_that_is_asked_for(text, target, told, value):
    converted = convert(text, target, **told)
    assert converted.value == pytest.approx(value, rel=1e-12)
    assert converted.unit == target


@pytest.mark.parametrize(
    ("text", "target", "word"),
    [
        ("5 A", "A rms", "does not say whether rms, peak or dc"),
        ("4.3 V/krpm", "N·m/A rms", "does not say whether rms"),
        ("54.2 V/krpm rms", "N·m/A", '"N·m/A": it does not say'),
        ("3 Ω", "Ω lines", "does not say whether lines or phase"),
        ("3 Ω phase", "Ω lines", "connection: say star or delta"),
        ("40 V/krpm rms phase", "N·m/A rms", "connection: say star or delta"),
        ("5 A dc", "A rms", "commutation: say sinusoidal or block"),
        ("5 A rms phase", "A rms lines", "no rule"),
        ("24 V dc", "V rms", "no rule"),
        ("3 N·m rms", "N·m peak", "no rule"),
        ("5 A rms peak", "A dc", "both rms and peak"),
        ("1,5 A", "A", "without a comma"),
    ],
)
def test_what_is_not_said_is_asked_for(text, target, word):
    with pytest.raises(MotorfolioError, match=word):
        convert(text, target)


@pytest.mark.parametrize("told", [{"commutation": "brushed"}, {"connection": "wye"}])
def test_a_word_that_is_not_known(told):
    with pytest.raises(MotorfolioError, match="would do"):
        convert("5 A rms", "A peak", **told)


@pytest.mark.parametrize(
    ("text", "target", "remark"),
    [
        ("5 A rms", "mA", "still rms"),
        ("5 A rms", "A peak", "sinusoidal"),
        ("54.2 V/krpm rms", "N·m/A rms", "volts between lines"),
        ("25 °C", "K", "temperature, not as a difference"),
        ("4.3 V/krpm", "N·m/A", "^$"),
    ],
)
def test_what_is_taken_for_granted_is_told(text, target, remark):
    assert re.search(remark, convert(text, target).remark)
