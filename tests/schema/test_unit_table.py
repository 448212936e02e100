"""Every unit and every prefix of the table, against factors that come from elsewhere.

Factors: scipy.constants (CODATA and NIST SP 811's conversions) and the definitions of the SI
(BIPM, The International System of Units, 9th ed.; its table 7 for the prefixes).
"""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from scipy import constants as known

from motorfolio.schema.units.factors import evaluate
from motorfolio.schema.units.read import UnitError, read_unit, unit_of
from motorfolio.schema.units.table import Product, table
from motorfolio.schema.units.text import read_products

POWERS = {"n": -9, "µ": -6, "μ": -6, "u": -6, "m": -3, "c": -2, "d": -1, "k": 3, "M": 6}
NAMES = {"nano": -9, "micro": -6, "milli": -3, "centi": -2, "kilo": 3, "mega": 6}
RPM = 2 * math.pi / known.minute

UNITS = [
    # (spellings, SI unit, factor, prefix letters of the trade; behind "|" those whose letter may
    # be a misprint, so that only the prefix's name is clear)
    ("m meter metre meters metres м 米", "m", 1.0, "µucdmk"),
    ("kg kilogram kilograms kilogramme kilogrammes kilo kilos Kg кг 公斤", "kg", 1.0, ""),
    ("g gram grams gramme grammes gr г 克", "kg", known.gram, "mk"),
    ("s sec secs second seconds Sek sek с 秒", "s", 1.0, "nµum"),
    ("min mins minute minutes Min мин 分钟 分", "s", known.minute, ""),
    ("h hr hrs hour hours 小时", "s", known.hour, ""),
    ("A amp amps ampere amperes Amp Amps Ampere А 安", "A", 1.0, "µumk"),
    ("K kelvin kelvins", "K", 1.0, "m"),
    ("°C degC C Celsius celsius", "K", 1.0, ""),
    ("°F degF", "K", 1 / 1.8, ""),
    ("rad radian radians rads", "rad", 1.0, "µum"),
    ("rev revs revolution revolutions turn turns tr Umdr Umdrehungen rot giri giro об 回転 转 轉 "
     "回转", "rad", 2 * math.pi, "k"),
    ("° deg degree degrees Grad", "rad", known.degree, ""),
    ("arcmin arcminute arcminutes", "rad", known.arcminute, ""),
    ("arcsec arcsecond arcseconds", "rad", known.arcsecond, ""),
    ("rpm RPM Rpm UPM Upm", "rad/s", RPM, "k"),
    ("N newton newtons Newton Н 牛", "N", 1.0, "µumk|M"),
    ("V volt volts Volt Volts В 伏", "V", 1.0, "µumk"),
    ("Ω ohm ohms Ohm Ohms Ом 欧", "Ω", 1.0, "µumk|M"),
    ("H Hy henry henries henrys Henry Гн 亨", "H", 1.0, "nµum"),
    ("W watt watts Watt Watts Вт 瓦", "W", 1.0, "µumk|M"),
    ("J joule joules Joule", "J", 1.0, "mkM"),
    ("F farad farads", "F", 1.0, "nµum"),
    ("Hz hertz Гц", "Hz", 1.0, "kM"),
    ("in inch inches \" Zoll pouce pouces", "m", known.inch, ""),
    ("ft foot feet '", "m", known.foot, ""),
    ("lb lbs lbm pound pounds", "kg", known.pound, ""),
    ("oz ounce ounces", "kg", known.ounce, ""),
    ("kgf kp Kgf KGf kgF", "N", known.kilogram_force, ""),
    ("gf", "N", known.kilogram_force / 1000, ""),
    ("lbf lbsf", "N", known.pound_force, ""),
    ("ozf", "N", known.pound_force / 16, ""),
    ("slug slugs", "kg", known.slug, ""),
    ("dyn dyne dynes", "N", known.dyne, ""),
    ("hp HP Hp horsepower bhp", "W", known.horsepower, ""),
    ("PS CV ch cv", "W", 75 * known.kilogram_force, ""),
    ("% percent Prozent", "1", 0.01, ""),
    ("‰", "1", 0.001, ""),
]  # fmt: skip


@pytest.mark.parametrize("row", UNITS, ids=lambda row: row[0].split()[0])
def test_every_spelling_and_every_prefix(row: tuple[str, str, float, str]) -> None:
    """Which spellings and prefixes are met: common practice, no source."""
    spellings, si, factor, letters = row
    for word in spellings.split():
        found = read_unit(word, (si,))
        assert (found.si, found.offset, found.text) == (si, 0.0, word)
        assert found.factor == pytest.approx(factor, rel=1e-12), word
        for letter in letters.partition("|")[0]:
            prefixed = read_unit(letter + word, (si,))
            assert prefixed.factor == pytest.approx(factor * 10 ** POWERS[letter], rel=1e-12)
            assert not prefixed.remark
    word = max(spellings.split(), key=len)
    if not word.isascii() or len(word) < 3:
        return
    for name, power in NAMES.items():
        fitting = any(POWERS[letter] == power for letter in letters.replace("|", ""))
        found = unit_of(name + word)
        if fitting:
            assert found is not None
            assert found.factor == pytest.approx(factor * 10.0**power, rel=1e-12), name + word
        else:
            assert found is None, name + word


@pytest.mark.parametrize("word", ["mmin", "kkg", "nV", "dA", "mlb", "nrad", "krad", "krev/A"])
def test_no_unit_takes_a_prefix_that_nobody_writes(word: str) -> None:
    assert unit_of(word) is None


@pytest.mark.parametrize(
    ("text", "si", "factor"),
    [
        ("km", "m", 1e3), ("MN", "1", None), ("kr/min", "rad/s", 1000 * RPM),
        ("kturn/min", "rad/s", 1000 * RPM), ("milliV", "V", None), ("millivolt", "V", 1e-3),
        ("megaohm", "Ω", 1e6), ("megajoule", "J", 1e6), ("MJ", "J", 1e6), ("MHz", "Hz", 1e6),
        ("meganewton", "N", 1e6), ("megawatt", "W", 1e6), ("millisec", "s", 1e-3),
        ("microg", "kg", None), ("kilogrammes", "kg", 1.0), ("kilohertz", "Hz", 1e3),
        ("kiloHz", "Hz", None), ("nF", "F", 1e-9), ("ns", "s", 1e-9),
    ],
)  # fmt: skip
def test_prefixes_before_letters_and_before_words(text, si, factor) -> None:
    """A prefix's name goes before a word, its letter before either (common practice, no source)."""
    if factor is None:
        with pytest.raises(UnitError):
            read_unit(text, (si,))
    else:
        assert read_unit(text, (si,)).factor == pytest.approx(factor, rel=1e-12)


LB_IN, OZ_IN = known.pound_force * known.inch, known.pound_force / 16 * known.inch
KGF = known.kilogram_force

COMPOUNDS = [
    ("Nm Нм", "N·m", 1.0), ("µNm uNm", "N·m", 1e-6), ("mNm", "N·m", 1e-3), ("cNm", "N·m", 1e-2),
    ("kNm", "N·m", 1e3), ("Ncm", "N·m", 1e-2), ("mNcm", "N·m", 1e-5), ("Nmm", "N·m", 1e-3),
    ("mNmm", "N·m", 1e-6), ("Nms", "N·m·s/rad", 1.0), ("mNms", "N·m·s/rad", 1e-3),
    ("gcm grcm cmg", "N·m", KGF * 1e-5), ("gmm", "N·m", KGF * 1e-6), ("gm", "N·m", KGF * 1e-3),
    ("gfcm cmgf", "N·m", KGF * 1e-5), ("gfmm", "N·m", KGF * 1e-6), ("gfm", "N·m", KGF * 1e-3),
    ("kgcm Kgcm", "N·m", KGF * 1e-2), ("kgmm kgfmm", "N·m", KGF * 1e-3),
    ("kgm Kgm mkg kgfm mkp mkgf kpm", "N·m", KGF), ("kgfcm cmkp cmkgf kpcm", "N·m", KGF * 1e-2),
    ("ozin inoz ozfin inozf", "N·m", OZ_IN), ("ozft ftoz", "N·m", 12 * OZ_IN),
    ("lbin inlb inlbs lbsin lbfin inlbf", "N·m", LB_IN),
    ("lbft ftlb ftlbs lbfft ftlbf", "N·m", 12 * LB_IN),
    ("gcms2 gfcms2", "kg·m²", KGF * 1e-5), ("kgcms2 kgfcms2", "kg·m²", KGF * 1e-2),
    ("gcm2", "kg·m²", 1e-7), ("gmm2", "kg·m²", 1e-9), ("gm2", "kg·m²", 1e-3),
    ("kgcm2", "kg·m²", 1e-4), ("kgmm2", "kg·m²", 1e-6), ("kgm2", "kg·m²", 1.0),
    ("ozin2", "kg·m²", known.ounce * known.inch**2), ("lbin2", "kg·m²", known.lb * known.inch**2),
    ("lbft2", "kg·m²", known.lb * known.foot**2), ("kgms2", "kg·m²", KGF),
    ("Vs Vsec", "V·s/rad", 1.0), ("mVs", "V·s/rad", 1e-3), ("µVs uVs", "V·s/rad", 1e-6),
    ("Vmin", "V·s/rad", 60 / (2 * math.pi)), ("mVmin", "V·s/rad", 0.06 / (2 * math.pi)),
    ("Wh", "J", 3600.0), ("kWh", "J", 3.6e6), ("Ws", "J", 1.0), ("kWs", "J", 1e3),
    ("rpm/mNm", "rad/(s·N·m)", RPM * 1e3), ("min-1mNm-1", "rad/(s·N·m)", RPM * 1e3),
]  # fmt: skip


@pytest.mark.parametrize(("words", "si", "factor"), COMPOUNDS)
def test_units_written_as_one_word(words: str, si: str, factor: float) -> None:
    """A weight is a force in a torque; an inertia's power is that of the length alone."""
    for word in words.split():
        assert read_unit(word, (si,)).factor == pytest.approx(factor, rel=1e-12), word


TEXTS = [
    ("g/min t/min T/min U/min-1", "rad/s", RPM), ("rps RPS", "rad/s", 2 * math.pi),
    ("dps", "rad/s", math.pi / 180), ("KV Kv kv kV", "rad/(s·V)", RPM), ("mNm/VW", "N·m/√W", 1e-3),
    ("Nm/VW", "N·m/√W", 1.0), ("oz-in/VW (oz-in)sqrt(watts) (oz-in)√(watts)", "N·m/√W", OZ_IN),
    ("W O", "Ω", 1.0), ("mW mO", "Ω", 1e-3), ("poles pairs pcs - :1", "1", 1.0),
    ("grad/W grd/W", "K/W", 1.0), ("Kg-m-s2 kg-m-s2 kg·m·s² kg*m*s2", "kg·m²", 1.0),
]  # fmt: skip


@pytest.mark.parametrize(("texts", "si", "factor"), TEXTS)
def test_texts_that_mean_something_as_a_whole(texts: str, si: str, factor: float) -> None:
    for text in texts.split():
        found = read_unit(text, (si,))
        assert found.factor == pytest.approx(factor, rel=1e-12), text
        assert (found.text, found.si, found.offset) == (text, si, 0.0)


@pytest.mark.parametrize(
    ("words", "code"),
    [("EUR € Euro euro euros", "EUR"), ("USD $ US$ dollar dollars", "USD"),
     ("CHF Fr. SFr. SFr Fr", "CHF"), ("GBP £", "GBP"), ("JPY 円 yen Yen JP¥", "JPY"),
     ("CNY RMB 元 CN¥ yuan", "CNY"), ("SEK", "SEK"), ("NOK", "NOK"), ("DKK", "DKK")],
)  # fmt: skip
def test_currencies(words: str, code: str) -> None:
    """Codes of ISO 4217; a price each is a price."""
    for word in words.split():
        for text in (word, f" {word} ", f"{word}/pc", f"{word}/Stück", f"{word} per unit"):
            for accepts in (("currency",), (code,), ("W", code)):
                found = read_unit(text, accepts)
                assert (found.si, found.factor, found.offset) == (code, 1.0, 0.0)
                assert bool(found.remark) == (word == "$")
        with pytest.raises(UnitError):
            read_unit(word, ("kg",))
        assert read_unit(word, ("currency",)).dimension == f"[currency {code}]"
    with pytest.raises(UnitError):
        read_unit("EUR", ("USD",))
    with pytest.raises(ValueError, match="AUD"):
        read_unit("EUR", ("AUD",))


@pytest.mark.parametrize(
    ("first", "second", "power", "powers", "tens"),
    [
        (("m", 1), ("s", 1), -1, {"m": 1, "s": -1}, 0), (("m", 1), ("m", 1), -1, {}, 0),
        (("m", 2), ("m", 1), 3, {"m": 5}, 0), (("m", 1), ("s", 2), Fraction(1, 2), {"m": 1, "s": 1},
        0), (("s", 1), ("m", 1), 1, {"m": 1, "s": 1}, 0),
    ],
)  # fmt: skip
def test_products_of_powers(first, second, power, powers, tens) -> None:
    """Exponents add, times the power of the second; what cancels is gone."""
    a = Product(((first[0], Fraction(first[1])),), Fraction(-3))
    b = Product(((second[0], Fraction(second[1])),), Fraction(2))
    found = a.times(b, power)
    assert dict(found.powers) == powers
    assert list(found.powers) == sorted(found.powers)
    assert found.tens == -3 + 2 * power
    assert a.times(b).tens == -1


def test_one_unit_put_for_another() -> None:
    rate = Product((("minute", Fraction(-2)), ("volt", Fraction(1))), Fraction(3))
    assert rate.power_of("minute") == -2
    assert rate.power_of("second") == 0
    assert dict(rate.replaced("minute", "rpm", -1).powers) == {"rpm": 2, "volt": 1}
    assert dict(rate.replaced("minute", "volt").powers) == {"volt": -1}
    assert rate.replaced("second", "rpm") == rate
    assert rate.replaced("volt", "ohm").tens == 3


@pytest.mark.parametrize(
    ("text", "factor", "dimension"),
    [
        ("g·cm²", "1e-07", "[length]^2 [mass]^1"), ("kg·cm²", "0.0001", "[length]^2 [mass]^1"),
        ("mN·m", "0.001", "[length]^2 [mass]^1 [time]^-2"), ("10^-6", "1e-06", "1"),
        ("lb·mm²", "4.5359237e-07", "[length]^2 [mass]^1"), ("%", "0.01", "1"),
        ("lb·cm", "0.0045359237", "[length]^1 [mass]^1"), ("‰", "0.001", "1"),
        ("W½", "1.0", "[length]^1 [mass]^0.5 [time]^-1.5"),
        ("√N", "1.0", "[length]^0.5 [mass]^0.5 [time]^-1"), ("√(min^6)", "216000.0", "[time]^3"),
    ],
)  # fmt: skip
def test_powers_of_ten_stay_exact(text: str, factor: str, dimension: str) -> None:
    (product,) = read_products(text)
    value, found = evaluate(product)
    assert repr(value) == factor
    assert found == dimension


@pytest.mark.parametrize(("text", "factor"), [("√(mV)", 10**-1.5), ("√(kV)", 10**1.5),
                                              ("√(hour^6·mm)", 3600.0**3 * 10**-1.5),
                                              ("hour^7·mm", 3600.0**7 / 1000),
                                              ("hour^-9·mm", 3600.0**-9 / 1000)])  # fmt: skip
def test_powers_of_ten_beside_roots_and_large_factors(text: str, factor: float) -> None:
    (product,) = read_products(text)
    assert evaluate(product)[0] == pytest.approx(factor, rel=1e-12)


def test_lines_of_the_table_are_read_whole() -> None:
    """Whatever stands under [often] is a unit; a target's earlier ones name a dimension."""
    found = table()
    assert found.targets[0] == "V"
    assert "J/K" in found.targets
    assert all(read_products(text) for text in found.often)
    assert {"MΩ", "MN", "Meter"} & found.mega == {"MΩ", "MN"}
    assert found.folded["mm"] == ["mm"]
    assert {"mN", "MN"} <= set(found.folded["mn"])
    assert {"mNm", "Nmm"} <= {w for words in found.folded.values() for w in words}
