"""Unit texts: every factor against its published value, every trade spelling, every known trap."""

import math
import subprocess
import sys
from fractions import Fraction
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from motorfolio.schema.figure.read import FigureError
from motorfolio.schema.units import factors as unit_factors
from motorfolio.schema.units.convert import convert
from motorfolio.schema.units.read import (
    GD2_TO_INERTIA,
    UnitError,
    is_unit_like,
    quantity,
    read_unit,
    unit_of,
)
from motorfolio.schema.units.table import table

# International yard and pound agreement (1959); standard gravity, 3rd CGPM (1901).
LB, INCH, GN = 0.45359237, 0.0254, 9.80665
OZ, FT = LB / 16, 12 * INCH
RPM = 2 * math.pi / 60
KRPM = 30 / 1000 / math.pi  # 1 V/krpm in V·s/rad

TORQUE, INERTIA, SPEED = ("N·m",), ("kg·m²",), ("rad/s",)
KT, KE, KV = ("N·m/A", "V·s/rad"), ("V·s/rad", "N·m/A"), ("rad/(s·V)",)
GRADIENT, DAMPING, KM = ("rad/(s·N·m)",), ("N·m·s/rad",), ("N·m/√W",)

EXACT = [
    # (spellings, accepted, factor from the definitions)
    ("lbf·ft lb-ft ft-lb", TORQUE, LB * GN * FT),
    ("lbf·in lb-in in-lb in.lb lbf-in", TORQUE, LB * GN * INCH),
    ("ozf·in oz-in oz.in ozin ozf-in oz·in in-oz inoz Oz-in. oz•in", TORQUE, OZ * GN * INCH),
    ("ozf·ft oz-ft", TORQUE, OZ * GN * FT),
    ("kgf·m kp·m kgf-m", TORQUE, GN),
    ("kgf·cm kgcm kg-cm kg·cm kgf.cm kgf-cm cmkp", TORQUE, GN / 100),
    ("gf·cm gcm g-cm g·cm gf.cm gf-cm", TORQUE, GN * 1e-5),
    ("gf·mm", TORQUE, GN * 1e-6),
    ("dyn·cm", TORQUE, 1e-7),
    ("Nm N·m N-m N.m N*m N⋅m N・m Нм", TORQUE, 1.0),
    ("Ncm N-cm N·cm", TORQUE, 1e-2),
    ("mNm mN·m mN-m mN.m Nmm N·mm", TORQUE, 1e-3),
    ("µNm μNm uN·m", TORQUE, 1e-6),
    ("kNm", TORQUE, 1e3),
    ("gcm2 gcm² g-cm^2 g·cm² g.cm² gcm^2", INERTIA, 1e-7),
    ("kgcm2 kg-cm² kg.cm2 kg·cm²", INERTIA, 1e-4),
    ("kg·mm² kgmm2", INERTIA, 1e-6),
    ("kg·m² kgm2 kg-m2 kgm² N·m·s²", INERTIA, 1.0),
    ("lb-ft² lb·ft²", INERTIA, LB * FT**2),
    ("lb-in² lb·in²", INERTIA, LB * INCH**2),
    ("oz-in² oz·in² oz-in2", INERTIA, OZ * INCH**2),
    ("oz-in-s2 oz-in-s² oz-in-sec² oz-in-sec^2 ozf·in·s²", INERTIA, OZ * GN * INCH),
    ("lb-in-s² lb-in-sec² lbf·in·s²", INERTIA, LB * GN * INCH),
    ("lb-ft-s² slug-ft² slug·ft²", INERTIA, LB * GN * FT),
    ("kgf·cm·s² kgf-cm-s² kg·cm·s²", INERTIA, GN / 100),
    ("gf·cm·s² gf-cm-s² g·cm·s²", INERTIA, GN * 1e-5),
    ("kgf·m·s²", INERTIA, GN),
    ("rpm RPM Rpm r.p.m. r/min rev/min min-1 min⁻¹ min–1 min−1 min¯¹ 1/min /min", SPEED, RPM),
    ("U/min Upm tr/min t/min giri/min g/min об/мин 回転/分 转/分 r／min", SPEED, RPM),
    ("krpm kr/min rpm×1000 ×1000rpm 1000min⁻¹ (×1000rpm) KRPM", SPEED, 1000 * RPM),
    ("rps r/s rev/s", SPEED, 2 * math.pi),
    ("rad/s rad/sec rad·s⁻¹", SPEED, 1.0),
    ("°/s deg/s", SPEED, math.pi / 180),
    ("rpm/V RPM/V min-1/V min⁻¹/V min⁻¹V⁻¹ 1/min/V (U/min)/V U/min/V KV Kv r/min/V", KV, RPM),
    ("r/(min·V) r/min·V rpm/Volt RPM/VOLT", KV, RPM),
    ("rad/s/V rad/(s·V)", KV, 1.0),
    ("V/krpm V/kRPM Volts/KRPM V/1000rpm V/kmin-1 V/1000min⁻¹ V/(1000rpm)", KE, KRPM),
    ("V/1.000rpm V/1,000rpm V/kr/min V/1000r/min V/1000U/min V/10³min⁻¹ V·min/1000", KE, KRPM),
    ("mV/rpm mV/min-1 mV/min⁻¹ mV·min mVmin mV/(min⁻¹) mV/r/min MV/RPM mV/(r/min)", KE, KRPM),
    ("Vrms/krpm Vpk/krpm V(L-L)/krpm Vp-p/krpm V_LL/krpm Vrms/1000min-1", KE, KRPM),
    ("V/rpm V/min⁻¹", KE, 1000 * KRPM),
    ("V·s/rad Vs/rad V/(rad/s) V/rad/s V·s Vs", KE, 1.0),
    ("Nm/A N·m/A Nm/Arms Nm/Apk NM/A N.m/A", KT, 1.0),
    ("mNm/A mN·m/A mNm·A⁻¹ MNM/A", KT, 1e-3),
    ("Ncm/A", KT, 1e-2),
    ("oz-in/A oz-in/amp OZ-IN/A", KT, OZ * GN * INCH),
    ("in-lb/A lbf·in/A", KT, LB * GN * INCH),
    ("lbf·ft/A", KT, LB * GN * FT),
    ("kg-cm/A kgf·cm/A", KT, GN / 100),
    ("gf·cm/A", KT, GN * 1e-5),
    ("Nm/√W Nm/W^0.5 Nm/sqrt(W) Nm/W½ Nm/√(W) Nm/W^(1/2) N·m·W⁻½ Nm/W0.5", KM, 1.0),
    ("mNm/√W", KM, 1e-3),
    ("oz-in/√W oz-in/W½ (oz-in)sqrt(watts)", KM, OZ * GN * INCH),
    ("rpm/mNm min-1/mNm min⁻¹/mNm rpm/mN·m r/min/mNm RPM/MNM", GRADIENT, RPM * 1e3),
    ("krpm/Nm 1000rpm/Nm (min⁻¹)/(mN·m) min⁻¹·mNm⁻¹", GRADIENT, RPM * 1e3),
    ("rpm/Nm", GRADIENT, RPM),
    ("rpm/oz-in (rpm)/(oz·in)", GRADIENT, RPM / (OZ * GN * INCH)),
    ("oz-in/krpm", DAMPING, OZ * GN * INCH / (1000 * RPM)),
    ("Nm/krpm Nm/1000rpm Nm/kr/min mNm·min mNm/min⁻¹", DAMPING, 1 / (1000 * RPM)),
    ("N·m·s/rad Nm/(rad/s) Nms N·m·s", DAMPING, 1.0),
    ("K/W °C/W C/W ℃/W degC/W K·W⁻¹ ºC/W", ("K/W",), 1.0),
    ("°F/W", ("K/W",), 5 / 9),
    ("W watts", ("W",), 1.0),
    ("kW KW", ("W",), 1e3),
    ("hp HP", ("W",), 550 * FT * LB * GN),
    ("PS CV ch", ("W",), 75 * GN),
    ("ft·lbf/s", ("W",), FT * LB * GN),
    ("ft·lbf/min", ("W",), FT * LB * GN / 60),
    ("lb lbs", ("kg",), LB),
    ("oz", ("kg",), OZ),
    ("g", ("kg",), 1e-3),
    ("kg KG", ("kg",), 1.0),
    ("lbf lb", ("N",), LB * GN),
    ("ozf", ("N",), OZ * GN),
    ("kgf kg kp", ("N",), GN),
    ("mH MH", ("H",), 1e-3),
    ("µH uH μH UH", ("H",), 1e-6),
    ("Ω ohm Ohm OHM ohms Ω Ω/phase", ("Ω",), 1.0),
    ("mΩ mOhm mohm", ("Ω",), 1e-3),
    ("A Arms Apk A0-p Ap-p ADC Aeff A_rms A(rms) ARMS", ("A",), 1.0),
    ("mA MA", ("A",), 1e-3),
    ("V VDC Vac Vrms Vpp Vcc", ("V",), 1.0),
    ("s sec S", ("s",), 1.0),
    ("ms MS", ("s",), 1e-3),
    ("µs us", ("s",), 1e-6),
    ("min MIN", ("s",), 60.0),
    ("h", ("s",), 3600.0),
    ("mm MM", ("m",), 1e-3),
    ('in ″ " inch', ("m",), INCH),
    ("ft", ("m",), FT),
    ("%", ("1",), 0.01),
    ("1 - – :1", ("1",), 1.0),
    ("K °C", ("K",), 1.0),
    ("Hz 1/s s⁻¹", ("Hz",), 1.0),
    ("kHz", ("Hz",), 1e3),
    ("° deg", ("rad",), math.pi / 180),
    ("rev", ("rad",), 2 * math.pi),
    ("arcmin", ("rad",), math.pi / 180 / 60),
    ("m/s²", ("m/s²",), 1.0),
    ("rpm/s", ("rad/s²",), RPM),
    ("mm/s", ("m/s",), 1e-3),
    ("Wh", ("J",), 3600.0),
    ("kW/s", ("W/s",), 1e3),
    ("g/cm³", ("kg/m³",), 1e3),
    ("A/mNm", ("A/(N·m)",), 1e3),
]


@pytest.mark.parametrize(
    ("text", "accepts", "factor"),
    [(text, accepts, factor) for texts, accepts, factor in EXACT for text in texts.split()],
)
def test_spelling_and_factor(text: str, accepts: tuple[str, ...], factor: float) -> None:
    """Spellings of the trade (common practice, no source); factors from the definitions above."""
    unit = read_unit(text, accepts)
    assert unit.factor == pytest.approx(factor, rel=1e-12)
    assert unit.offset == 0
    assert unit.si in accepts


@pytest.mark.parametrize(
    ("text", "accepts", "printed"),
    [
        # NIST SP 811 (2008 ed.), App. B.8, factors printed to seven digits.
        ("lbf·ft", TORQUE, 1.355818),
        ("lbf·in", TORQUE, 0.1129848),
        ("ozf·in", TORQUE, 0.007061552),
        ("kgf·m", TORQUE, 9.80665),
        ("dyn·cm", TORQUE, 1.0e-7),
        ("lb·ft²", INERTIA, 0.04214011),
        ("lb·in²", INERTIA, 0.0002926397),
        ("slug·ft²", INERTIA, 14.59390 * 0.3048**2),
        ("rpm", SPEED, 0.1047198),
        ("rev/s", SPEED, 6.283185),
        ("hp", ("W",), 745.6999),
        ("PS", ("W",), 735.4988),
        ("ft·lbf/s", ("W",), 1.355818),
        ("ft·lbf/min", ("W",), 0.02259697),
        ("lb", ("kg",), 0.4535924),
        ("oz", ("kg",), 0.02834952),
        ("lbf", ("N",), 4.448222),
        ("ozf", ("N",), 0.2780139),
    ],
)
def test_factor_against_nist(text: str, accepts: tuple[str, ...], printed: float) -> None:
    assert read_unit(text, accepts).factor == pytest.approx(printed, rel=1e-6)


@pytest.mark.parametrize(
    ("kt", "product"),
    [("N·m/A", 9.549296586), ("oz·in/A", 1352.294345), ("lbf·in/A", 84.51839656),
     ("lbf·ft/A", 7.043199714), ("kgf·cm/A", 97.37572551), ("mN·m/A", 9549.296586)],
)  # fmt: skip
def test_torque_and_speed_constant_belong_together(kt: str, product: float) -> None:
    """Kt·Kv = 1 in SI (N. Syed, "How to read a DC motor datasheet", 2018), in trade units the
    products that follow from the definitions."""
    in_si = read_unit(kt, KT).factor * read_unit("rpm/V", KV).factor
    assert 1 / in_si == pytest.approx(product, rel=1e-9)


def test_scales_of_one_inertia_agree() -> None:
    """Five ways to print the same inertia (common practice, no source)."""
    printed = {
        "×10⁻⁴ kg·m²": 1.8, "10^-6 kgm2": 180.0, "(kg·m²×10⁻⁴)": 1.8, "kg·cm²": 1.8,
        "x 10–4 kgm2": 1.8, "×10-4 kg·m²": 1.8, "10⁻⁷ kg m²": 1800.0, "1e-6 kg·m²": 180.0,
    }  # fmt: skip
    for text, value in printed.items():
        unit = read_unit(text, INERTIA)
        assert value * unit.factor == pytest.approx(1.8e-4, rel=1e-12), text
        assert unit.remark == "", text


@pytest.mark.parametrize(
    ("text", "accepts", "words", "factor"),
    [
        ("oz-in", TORQUE, "force", 0.00706155181422604),
        ("kg·cm", TORQUE, "kgf", 0.0980665),
        ("W", ("Ω",), "ohm was lost", 1.0),
        ("mW", ("Ω",), "ohm was lost", 1e-3),
        ("m m/A", KT, "N was lost", 1e-3),
        ("mNm/VW", KM, "root sign was lost", 1e-3),
        ("MNm", TORQUE, "M read as milli", 1e-3),
        ("MNM", TORQUE, "M read as milli", 1e-3),
        ("Mn-M", TORQUE, "M read as milli", 1e-3),
        ("MH", ("H",), "upper and lower case", 1e-3),
        ("kgf·m²", INERTIA, "taken as a mass", 1.0),
        ("Kg-m-s²", INERTIA, "N·m·s²", 1.0),
        ("×10⁴ kg·m²", INERTIA, "may also say", 1e4),
        ("V/min⁻¹", KE, "may be meant", 9.54929658551372),
        ("V·s", KE, "per radian", 1.0),
        ("g/min", SPEED, "giri", RPM),
        ("kV", KV, "rpm/V", RPM),
        ("$", ("currency",), "US", 1.0),
    ],
)
def test_what_is_not_taken_by_its_letters_says_so(
    text: str, accepts: tuple[str, ...], words: str, factor: float
) -> None:
    unit = read_unit(text, accepts)
    assert words in unit.remark
    assert unit.factor == pytest.approx(factor, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "accepts", "guess"),
    [
        # A frequency is no angular speed: pint's default registry lets it pass, 6.28 times wrong.
        ("Hz", SPEED, "rev/s"), ("1/s", SPEED, "rad/s"), ("s⁻¹", SPEED, "rev/s"),
        ("s-1", SPEED, "rad/s"), ("s⁻¹/V", KV, "rev/(s·V)"), ("Hz/V", KV, "rad/(s·V)"),
        ("V/Hz", KE, "V·s/rev"), ("1/s²", ("rad/s²",), "rev/s²"),
        ("s⁻¹/Nm", GRADIENT, "rad/(s·N·m)"),
        # Lost superscripts, lost signs, lost case.
        ("×104 kg·m²", INERTIA, "10^-4 kg·m^2"), ("10e-6 kgm2", INERTIA, "10^-6 kgm2"),
        ("?", ("Ω",), "Ω"), ("MΩ", ("Ω",), "mΩ"), ("MOHM", ("Ω",), "mΩ"), ("MW", ("W",), "mW"),
        ("MN", ("N",), "mN"), ("°", ("°C",), "°C"), ("F", ("°C",), "°F"),
        ("¥", ("currency",), "CNY"),
        ("mNNm/A", KT, "mNm/A"), ("rmp", SPEED, "rpm"),
    ],
)  # fmt: skip
def test_what_can_be_two_things_is_refused_with_both(
    text: str, accepts: tuple[str, ...], guess: str
) -> None:
    with pytest.raises(UnitError) as caught:
        read_unit(text, accepts)
    assert guess in caught.value.guesses
    assert text in str(caught.value)


@pytest.mark.parametrize(
    ("text", "accepts"),
    [
        ("J", TORQUE), ("Ws", TORQUE), ("Nm", ("J",)), ("W", TORQUE), ("V·A", TORQUE),
        ("kg·cm", INERTIA), ("oz-in", INERTIA), ("oz-in²", TORQUE), ("gcm²", TORQUE),
        ("A/mNm", KT), ("rpm/V", KE), ("V/krpm", KV), ("Nm/√W", KT), ("Nm/A", KM),
        ("rpm", ("Hz",)), ("1/min", ("Hz",)), ("VA", ("W",)), ("mH", ("Ω",)), ("Ω", ("H",)),
        ("K/W", ("K",)), ("°C", ("K/W",)), ("rpm", ("s",)), ("V/rpm×1000", KE), ("mm", ("kg",)),
        ("", TORQUE), ("max", ("W",)), ("nonsense", SPEED), ("20 rpm", SPEED), ("N·m/", TORQUE),
        ("(N·m", TORQUE), ("EUR", ("W",)), ("N·m", ("currency",)), ("^2", INERTIA), ("/", TORQUE),
        ("N--m", TORQUE), ("kg m2 kg", INERTIA), ("rad", SPEED), ("V", KV), ("m", TORQUE),
        ("Ω(20°C)", ("Ω",)), ("rms", ("A",)), ("ms⁻¹", ("s",)),
    ],
)  # fmt: skip
def test_what_is_no_unit_of_the_quantity_is_refused(text: str, accepts: tuple[str, ...]) -> None:
    with pytest.raises(UnitError, match="unit "):
        read_unit(text, accepts)


def test_mass_and_force_inertia_differ_by_gravity() -> None:
    """An "oz-in-s²" read as "oz-in²" is off by g/in = 386.0885827; "kg·cm·s²" as "kg·cm²" by
    980.665 (from the definitions)."""
    ratio = read_unit("oz-in-s²", INERTIA).factor / read_unit("oz-in²", INERTIA).factor
    assert ratio == pytest.approx(386.0885827, rel=1e-9)
    ratio = read_unit("kg·cm·s²", INERTIA).factor / read_unit("kg·cm²", INERTIA).factor
    assert ratio == pytest.approx(980.665, rel=1e-12)


def test_flywheel_effect() -> None:
    """GD² = 4·J when D is the diameter of gyration (from memory; J = m·D²/4)."""
    assert read_unit("kgf·m²", INERTIA).factor * GD2_TO_INERTIA == 0.25


@pytest.mark.parametrize(
    ("text", "celsius"),
    # UCUM: degF is 5/9 K from the zero of 459.67; 68 °F = 20 °C, 104 °F = 40 °C, 311 °F = 155 °C.
    [("68 °F", 20), ("104 °F", 40), ("311 °F", 155), ("40 °C", 40), ("428.15 K", 155)],
)
def test_absolute_temperatures_are_affine(text: str, celsius: float) -> None:
    assert quantity(text, ("°C",)) == pytest.approx(celsius, abs=1e-9)


def test_a_rise_in_fahrenheit_is_a_mere_factor() -> None:
    """A rise of 90 °F is 50 K, not 32.2 (UCUM: 5 K/9)."""
    assert quantity("90 °F", ("K",)) == pytest.approx(50, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "accepts", "marks"),
    [
        ("Arms", ("A",), "rms"), ("A rms", ("A",), "rms"), ("A_rms", ("A",), "rms"),
        ("A eff", ("A",), "rms"), ("Aeff", ("A",), "rms"), ("A (RMS)", ("A",), "rms"),
        ("Apk", ("A",), "peak"), ("A0-p", ("A",), "peak"), ("A peak", ("A",), "peak"),
        ("Ap", ("A",), "peak"), ("Ap-p", ("A",), "peak-to-peak"), ("Vpp", ("V",), "peak-to-peak"),
        ("ADC", ("A",), "dc"), ("VDC", ("V",), "dc"), ("V DC", ("V",), "dc"), ("Vcc", ("V",), "dc"),
        ("V d.c.", ("V",), "dc"), ("Vac", ("V",), "ac"), ("V~", ("V",), "ac"),
        ("VAC", ("V",), "ac"),
        ("Vrms", ("V",), "rms"), ("V_LL", ("V",), "lines"), ("V L-L", ("V",), "lines"),
        ("Vrms (L-L)/krpm", KE, "rms lines"), ("V(L-L) rms/krpm", KE, "rms lines"),
        ("V_LL,rms/krpm", KE, "rms lines"), ("Vpk/krpm", KE, "peak"),
        ("Vp-p/krpm", KE, "peak-to-peak"), ("V/krpm per phase", KE, "phase"),
        ("V/krpm/phase", KE, "phase"), ("Ω/phase", ("Ω",), "phase"), ("Ω ph-ph", ("Ω",), "lines"),
        ("Ohms line-line", ("Ω",), "lines"), ("mH (L-L)", ("H",), "lines"),
        ("mH/ph", ("H",), "phase"), ("N·m/A(rms)", KT, "rms"), ("Nm/Arms", KT, "rms"),
        ("Nm/A peak", KT, "peak"), ("NM/ARMS", KT, "rms"), ("Nm/A_pk", KT, "peak"),
        ("Ω 相間", ("Ω",), "lines"), ("Nm/A", KT, ""), ("krpm", SPEED, ""), ("ppm/°C", (), ""),
    ],
)  # fmt: skip
def test_convention_words_are_kept_apart(text: str, accepts: tuple[str, ...], marks: str) -> None:
    if not accepts:  # letters inside a word are no convention words
        assert unit_of(text) is None
        return
    assert read_unit(text, accepts).marks == set(marks.split())


def test_every_target_is_its_own_si_unit() -> None:
    for si in table().targets:
        unit = read_unit(si, (si,))
        assert (unit.si, unit.factor, unit.offset, unit.remark) == (si, 1.0, 0.0, ""), si


@pytest.mark.parametrize(
    ("text", "si"),
    [
        ("mNm/A", "N·m/A"), ("V/krpm", "V·s/rad"), ("V·s", "V·s/rad"), ("mV·min", "V·s/rad"),
        ("min⁻¹", "rad/s"), ("rpm/V", "rad/(s·V)"), ("oz-in", "N·m"), ("kg·cm", "N·m"),
        ("g·cm²", "kg·m²"), ("oz-in-s²", "kg·m²"), ("GCM2", "kg·m²"), ("W", "W"), ("Hz", "Hz"),
        ("min", "s"), ("kg", "kg"), ("lbf", "N"), ("K", "K"), ("°C", "°C"), ("°", "rad"),
        ("kV", "V"), ("J", "J"), ("Nm", "N·m"), ("%", "1"), ("€", "EUR"), ("Nms", "N·m·s/rad"),
        ("MW", None), ("V/Hz", None), ("¥", None), ("U", None), ("r", None), ("Type", None),
        ("M0", None), ("", None), ("12", None), ("VA", None),
    ],
)  # fmt: skip
def test_unit_without_expectation(text: str, si: str | None) -> None:
    unit = unit_of(text)
    assert (unit.si if unit else None) == si


def test_dimension_keeps_turning_apart() -> None:
    """The radian is a base dimension: what pint calls equal must not be equal here."""
    speed, frequency = unit_of("rpm"), unit_of("Hz")
    kt, ke = unit_of("Nm/A"), unit_of("V/krpm")
    assert None not in (speed, frequency, kt, ke)
    assert speed.dimension != frequency.dimension
    assert kt.dimension != ke.dimension


def test_is_unit_like() -> None:
    likely = ["V", "mNm/A", "min⁻¹", "%", "gcm2", "Hz", "V/Hz", "Ω", "°C/W", "×10⁻⁴ kg·m²", "MW"]
    unlikely = ["", "-", "24", "0.55", "Type", "M0", "R_mt", "Nominal voltage", "ABC-24", "note"]
    assert [text for text in likely if not is_unit_like(text)] == []
    assert [text for text in unlikely if is_unit_like(text)] == []


@pytest.mark.parametrize(
    ("text", "accepts", "value"),
    [("0.3 N*m", TORQUE, 0.3), ("120 mN·m", TORQUE, 0.12), ("3000 rpm", SPEED, 100 * math.pi),
     ("500 g", ("kg",), 0.5), ("20 %", ("1",), 0.2), ("0.85", ("1",), 0.85),
     ("1.234 V", ("V",), 1.234), ("-5 N·m", TORQUE, -5.0), ("1e-5 kg*m^2", INERTIA, 1e-5),
     ("24V", ("V",), 24.0), ("20 kHz", ("Hz",), 2e4), ("3000 1/min", SPEED, 100 * math.pi)],
)  # fmt: skip
def test_quantity_of_a_requirement(text: str, accepts: tuple[str, ...], value: float) -> None:
    assert quantity(text, accepts) == pytest.approx(value, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "accepts", "words"),
    [
        ("0.3", TORQUE, "N·m would do"), ("0.3 V", TORQUE, "another quantity; N·m"),
        ("3000", SPEED, "rad/s"),
        ("50 Hz", SPEED, "radians or turns"), ("0,3 N·m", TORQUE, "decimal sign"),
        ("1,500 rpm", SPEED, "comma"), ("< 5 A", ("A",), "one plain number"),
        ("-", ("A",), "wanted"),
        ("5...7 V", ("V",), "one plain number"), ("1 2 V", ("V",), "more than one number"),
        ("nan V", ("V",), "no number"), ("1e999 V", ("V",), "too large"), ("5 A*", ("A",), "plain"),
    ],
)  # fmt: skip
def test_quantity_refuses(text: str, accepts: tuple[str, ...], words: str) -> None:
    with pytest.raises((UnitError, FigureError), match=words):
        quantity(text, accepts)


@pytest.mark.parametrize(
    ("text", "target", "value"),
    [
        ("4.3 V/krpm", "N·m/A", 4.3 * 0.00954929658551372),
        ("1 N·m", "ozf·in", 141.6119327),
        ("1 N·m", "lbf·in", 8.850745792),
        ("1 N·m", "lbf·ft", 0.7375621493),
        ("1 N·m", "kgf·cm", 10.19716213),
        ("1 V/krpm", "oz-in/A", 1.352294345),
        ("68 °F", "°C", 20.0),
        ("20 °C", "°F", 68.0),
        ("3000 rpm", "rad/s", 100 * math.pi),
    ],
)
def test_convert(text: str, target: str, value: float) -> None:
    """Inverse factors computed from the definitions at the top."""
    converted = convert(text, target)
    assert converted.value == pytest.approx(value, rel=1e-9)
    assert converted.unit == target


@pytest.mark.parametrize(
    ("text", "target"), [("1 N·m", "J"), ("1 Hz", "rad/s"), ("1 Nm", "nonsense"), ("4.3", "N·m")]
)
def test_convert_refuses(text: str, target: str) -> None:
    with pytest.raises(UnitError):
        convert(text, target)


@pytest.mark.parametrize(
    "text",
    [
        "√", "N·m·√", "√(", "√√", "N·m/√", "×", "N·m^1/0", "N·m^(1/0)", "N^999·m", "10^999 N·m",
        "N·m·" * 24 + "s", "1" + "0" * 60 + " N·m", "1e999", "9" * 400, "(" * 90, "√" * 90 + "W",
        "N·m\n" * 300, "\nkilog", "\u202eN·m\x00", "hour^-20·hour^-20", "N^0.3333333·m",
    ],
)  # fmt: skip
@pytest.mark.parametrize("accepts", [("N·m",), ("1",), ("N·m/√W",), ("currency",)])
def test_any_text_is_a_unit_or_refused_in_one_line(text: str, accepts: tuple[str, ...]) -> None:
    """Random texts once ended in tracebacks, infinite factors and messages over many lines."""
    with pytest.raises(UnitError) as refused:
        read_unit(text, accepts)
    assert refused.value.text == text
    assert str(refused.value).isprintable()
    assert len(str(refused.value)) <= 300
    assert isinstance(is_unit_like(text), bool)


@pytest.mark.parametrize("text", ["1e307 kN·m", "1.5e308 lbf·ft", "1e999 N·m", "1e-320 mN·m/√"])
def test_a_quantity_is_finite_or_refused(text: str) -> None:
    with pytest.raises((FigureError, UnitError)):
        quantity(text, ("N·m",))


def test_a_reciprocal_beyond_all_numbers_is_refused() -> None:
    with pytest.raises(UnitError, match="too large"):
        convert("1e-320 rpm/V", "N·m/A")


def test_a_thousand_behind_a_number_is_a_factor_of_speed_but_none_of_length() -> None:
    """ "36 ×1000 mm" may be two dimensions."""
    assert quantity("5 ×1000 rpm", ("rad/s",)) == pytest.approx(5000 * RPM)
    with pytest.raises(UnitError, match="second dimension"):
        quantity("36 ×1000 mm", ("m",))


_PARTS = st.sampled_from(
    [*"VAΩµmkgsNWH/*·.-²³⁻¹√()[]{}^ 0123456789,×%°\n\x00½", "Nm", "oz", "in", "lb", "rpm", "min",
     "rad", "sqrt", "rms", "10^-7", "×1000", "U/min", "per", "(L-L)", "°C", "°F", "K/W", "1e999",
     "^999", "^-99", "^1/0", "10^99", "M", "hour", "kgf", "Hz", "±0.1", "1.5 ", "max."]
)  # fmt: skip
_TEXTS = st.one_of(st.text(max_size=30), st.lists(_PARTS, max_size=8).map("".join))
_ACCEPTS = st.sampled_from(
    [*((si,) for si in table().targets), ("N·m/A", "V·s/rad"), ("currency",), ("1", "s")]
)


@settings(max_examples=1500, deadline=None)
@given(_TEXTS, _ACCEPTS)
def test_no_text_breaks_the_reading_of_units(text: str, accepts: tuple[str, ...]) -> None:
    """Whatever stands there: a finite factor that is not zero, or the documented errors."""
    for read in (
        lambda: read_unit(text, accepts).factor,
        lambda: quantity(text, accepts),
        lambda: convert(text, "N·m/A").value,
    ):
        message = "1"
        try:
            number = read()
        except (FigureError, UnitError) as error:
            number, message = 1.0, str(error)
        assert math.isfinite(number)
        assert message.isprintable()
        assert 0 < len(message) <= 300
    assert isinstance(is_unit_like(text), bool)
    known = unit_of(text)
    assert known is None or math.isfinite(known.factor)


def test_currencies_stay_what_they_are() -> None:
    for text, code in [
        ("€", "EUR"),
        ("EUR/pc", "EUR"),
        ("£", "GBP"),
        ("CHF", "CHF"),
        ("元", "CNY"),
    ]:
        unit = read_unit(text, ("currency",))
        assert (unit.si, unit.factor) == (code, 1.0)


def test_an_unknown_si_unit_is_a_fault_of_the_caller() -> None:
    with pytest.raises(ValueError, match="targets"):
        read_unit("V", ("volt-ish",))


def test_frozen_factors_are_what_pint_gives() -> None:
    """``factors.txt`` is generated; run ``python -m motorfolio.schema.units.factors`` anew."""
    path = Path(unit_factors.__file__).with_name("factors.txt")
    kept = [line for line in path.read_text(encoding="utf-8").splitlines() if line[0] != "#"]
    assert kept == unit_factors.frozen_lines()


def test_every_spelling_in_the_table_is_a_unit() -> None:
    """What ``units.txt`` names can be read, and each definition is one that pint accepts."""
    for name in table().definitions:
        factor, dimension = unit_factors._by_pint(((name, Fraction(1)),))
        assert factor > 0, name
        assert dimension, name
    for (spelling, si), (meaning, _) in table().texts.items():
        assert read_unit(spelling, (si,)).si == si, (spelling, meaning)


def test_everyday_quantities_need_no_pint() -> None:
    code = (
        "import sys; from motorfolio.schema.units.read import quantity as q\n"
        "q('0.3 N*m', ('N·m',)); q('3000 rpm', ('rad/s',)); q('20 oz-in', ('N·m',))\n"
        "q('1e-5 kg*m^2', ('kg·m²',)); q('500 g', ('kg',)); q('48 V', ('V',))\n"
        "q('40 °C', ('°C',))\n"
        "q('20 kHz', ('Hz',)); q('5 Arms', ('A',)); q('20 %', ('1',)); q('60 mm', ('m',))\n"
        "print('pint' in sys.modules)"
    )
    result = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True
    )
    assert result.stdout.strip() == "False"


@pytest.mark.parametrize("text", ["N·m·W^-1/2", "Nm W^(-1/2)", "Nm/W^1/2", "N·m·W^-0.5"])
def test_a_half_power_as_a_fraction(text):
    unit = read_unit(text, ("N·m/√W",))
    assert (unit.si, unit.factor) == ("N·m/√W", 1.0)
