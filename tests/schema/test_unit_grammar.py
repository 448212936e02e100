"""What a unit text is taken apart into, sign by sign, and what it is refused for."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest

from motorfolio.schema.units.read import UnitError, is_unit_like, quantity, read_unit, unit_of
from motorfolio.schema.units.text import NotAUnitError, bare, read_products, split_marks, variants

HALF = Fraction(1, 2)
RPM = 2 * math.pi / 60
KE, KV, DAMPING = ("V·s/rad",), ("rad/(s·V)",), ("N·m·s/rad",)


@pytest.mark.parametrize(
    ("text", "powers", "tens"),
    [
        ("N·m", {"newton": 1, "meter": 1}, 0), ("N m", {"newton": 1, "meter": 1}, 0),
        ("m/s/s", {"meter": 1, "second": -2}, 0), ("m/s·s", {"meter": 1, "second": -2}, 0),
        ("kg·m²/s³", {"kilogram": 1, "meter": 2, "second": -3}, 0),
        # a power behind a word of several belongs to the last, a negative one to all
        ("kgm2", {"kilogram": 1, "meter": 2}, 0), ("Ncm2", {"newton": 1, "meter": 2}, -4),
        ("Ncm-1", {"newton": -1, "meter": -1}, 2), ("mNm⁻¹", {"newton": -1, "meter": -1}, 3),
        ("mNm^-2", {"newton": -2, "meter": -2}, 6), ("mNm2", {"newton": 1, "meter": 2}, -3),
        ("Nm^.5", {"newton": 1, "meter": HALF}, 0), ("mNm^-.5", {"newton": -HALF, "meter": -HALF},
        3 * HALF),
        ("mm²", {"meter": 2}, -6), ("mm^-1", {"meter": -1}, 3), ("mm3", {"meter": 3}, -9),
        ("m^4", {"meter": 4}, 0), ("m4", {"meter": 4}, 0), ("m^(2)", {"meter": 2}, 0),
        ("m^{-2}", {"meter": -2}, 0), ("m^+2", {"meter": 2}, 0), ("m^1.5", {"meter": 3 * HALF}, 0),
        ("m^1,5", {"meter": 3 * HALF}, 0), ("m^.5", {"meter": HALF}, 0), ("m0.5", {"meter": HALF},
        0), ("m0,5", {"meter": HALF}, 0), ("m^3/2", {"meter": 3 * HALF}, 0), ("m½", {"meter": HALF},
        0), ("m⁻½", {"meter": -HALF}, 0), ("m^(1/2)", {"meter": HALF}, 0), ("m**2", {"meter": 2},
        0), ("m^-3/2", {"meter": -3 * HALF}, 0), ("m^2/4", {"meter": HALF}, 0),
        ("√W", {"watt": HALF}, 0), ("√mW", {"watt": HALF}, -3 * HALF), ("√√W", {"watt": HALF / 2},
        0), ("√(N·m)", {"newton": HALF, "meter": HALF}, 0), ("sqrt(W)", {"watt": HALF}, 0),
        ("sqrt W", {"watt": HALF}, 0), ("sqrtW", {"watt": HALF}, 0), ("W/√W", {"watt": HALF}, 0),
        ("(N·m)^2", {"newton": 2, "meter": 2}, 0), ("[N·m]-1·s", {"newton": -1, "meter": -1,
        "second": 1}, 0), ("{mm}2·s", {"meter": 2, "second": 1}, -6), ("((N·m))", {"newton": 1,
        "meter": 1}, 0), ("A/(N·m)", {"ampere": 1, "newton": -1, "meter": -1}, 0),
        ("A/(V/W)", {"ampere": 1, "volt": -1, "watt": 1}, 0),
        # rates that stand below the line are one unit
        ("V/rad/s", {"volt": 1, "radian": -1, "second": 1}, 0), ("V/r/min", {"volt": 1, "turn": -1,
        "minute": 1}, 0), ("V/1/min", {"volt": 1, "minute": 1}, 0), ("V/°/s", {"volt": 1,
        "degree": -1, "second": 1}, 0), ("V/1000/min", {"volt": 1, "minute": 1}, -3),
        ("V/10^3/min", {"volt": 1, "minute": 1}, -3), ("r/min/V", {"turn": 1, "minute": -1,
        "volt": -1}, 0), ("V/1000/A", {"volt": 1, "ampere": -1}, -3), ("V/rad/A", {"volt": 1,
        "radian": -1, "ampere": -1}, 0), ("V/100/min", {"volt": 1, "minute": -1}, -2),
        ("V/A/s", {"volt": 1, "ampere": -1, "second": -1}, 0),
        # powers of ten
        ("10^-4 kg", {"kilogram": 1}, -4), ("1e3 V", {"volt": 1}, 3), ("1E-6 V", {"volt": 1}, -6),
        ("10^(-4) V", {"volt": 1}, -4), ("10-4 V", {"volt": 1}, -4), ("V·10^2", {"volt": 1}, 2),
        ("1000 V", {"volt": 1}, 3), ("1,000 V", {"volt": 1}, 3), ("1.000 V", {"volt": 1}, 3),
        ("1 000 V", {"volt": 1}, 3), ("1'000 V", {"volt": 1}, 3), ("100 V", {"volt": 1}, 2),
        ("10 V", {"volt": 1}, 1), ("1 V", {"volt": 1}, 0), ("V*1", {"volt": 1}, 0),
        ("V/1000", {"volt": 1}, -3), ("V/10^-3", {"volt": 1}, 3), ("V/s×10^-3", {"volt": 1,
        "second": -1}, -3), ("V/s·1", {"volt": 1, "second": -1}, 0), ("kmin⁻¹", {"minute": -1}, 3),
        ("10^40 m", {"meter": 1}, 40), ("10^-40 m", {"meter": 1}, -40), ("m^20", {"meter": 20}, 0),
        ("m^10/s^10", {"meter": 10, "second": -10}, 0), ("m^1/8", {"meter": Fraction(1, 8)}, 0),
        # words
        ("N per m", {"newton": 1, "meter": -1}, 0), ("1/min", {"minute": -1}, 0), ("/min",
        {"minute": -1}, 0), ("deg C", {"celsius": 1}, 0), ("degrees F", {"fahrenheit": 1}, 0),
        ("° C", {"celsius": 1}, 0), ("deg Celsius", {"celsius": 1}, 0), ("r.p.m.", {"rpm": 1}, 0),
        ("oz.in.", {"ounce": 1, "inch": 1}, 0), ("oz-in", {"ounce": 1, "inch": 1}, 0),
        ("in ×10^-6 m", {"meter": 1}, -6), ("%", {}, -2), ("W/W", {}, 0),
    ],
)  # fmt: skip
def test_products(text: str, powers: dict, tens: float) -> None:
    """Rules of the trade (common practice, no source); what stands behind a slash goes together up
    to the next."""
    (found,) = read_products(text)
    assert dict(found.powers) == powers
    assert found.tens == tens


@pytest.mark.parametrize(
    "text",
    [
        "", " ", "N·", "-N", "N--m", "N-5", "(N", "N)", "[N·m", "N/", "/N", "/", "N//m", "√",
        "N·√", "N^", "10^41 m", "10^-41 m", "m^21", "m^10/s^11", "m^1/9", "m^1/0", "20 V", "V·7",
        "1001 V", "V/s×1000", "V/s×10", "V/s·10^2", "xyz", "N·xyz", "N & m", "N×", "()", "N·()",
        "10e4 V", "104 V", "N+m",
    ],
)  # fmt: skip
def test_no_products(text: str) -> None:
    with pytest.raises(NotAUnitError):
        read_products(text)


def test_what_is_strange_about_a_text() -> None:
    for text, part in (("N·xyz", "xyz"), ("N & m", "& m"), ("xyz m", "xyz"), ("N)", ")"),
                       ("N·√& m", "& m"), ("N·√", "N·√")):  # fmt: skip
        with pytest.raises(NotAUnitError) as found:
            read_products(text)
        assert found.value.part == part
        assert f'"{part}" is no unit' in str(found.value)
    for text, reason in (("(N·m", "not closed"), ("m^1/0", "divided by zero"),
                         ("20 V", "number 20"),
                         ("m^99", "beyond any unit"), ("V/s×1000", "above or below the line"),
                         ("10e4 V", "10^4 or 10^5"), ("", "no unit is given"),
                         ("104 V", "may be lost")):  # fmt: skip
        with pytest.raises(NotAUnitError, match=reason.replace("^", r"\^")) as found:
            read_products(text)
    with pytest.raises(NotAUnitError) as found:
        read_products("20 V")
    assert not found.value.guesses
    assert "lost" not in str(found.value)
    for text, guesses in (("105 V", ("10^5 V", "10^-5 V")), ("10e-6 V", ("10^-6 V", "10^-5 V"))):
        with pytest.raises(NotAUnitError) as found:
            read_products(text)
        assert found.value.guesses == guesses


def test_letters_of_either_case() -> None:
    """An upper-case M is milli or mega where case is lost, a lower-case m is never mega."""

    def all_of(text: str, **how) -> list[tuple[dict, int]]:
        return [(dict(p.powers), int(p.tens)) for p in read_products(text, fold=True, **how)]

    force = {"newton": 1, "meter": 1}
    assert sorted(tens for _, tens in all_of("MNM")) == [-3, 6] or all_of("MNM") == [(force, -3)]
    assert all_of("mnm") == [(force, -3)]
    assert all_of("MNM", milli=True) == [(force, -3)]
    assert {tens for _, tens in all_of("MOHM")} == {-3, 6}
    assert {tens for _, tens in all_of("MOHM", milli=True)} == {-3}
    assert {tens for _, tens in all_of("mohm")} == {-3}
    with pytest.raises(NotAUnitError):
        read_products("MOHm")
    assert [int(p.tens) for p in read_products("MHz")] == [6]
    assert [int(p.tens) for p in read_products("MN", milli=True)] == [-3]
    assert [int(p.tens) for p in read_products("MNm", milli=True)] == [-3]


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("V", [({"volt": 1}, "")]),
        ("oz·in", [({"ounce": 1, "inch": 1}, ""), ({"ounce_force": 1, "inch": 1}, "ozf")]),
        ("lb", [({"pound": 1}, ""), ({"pound_force": 1}, "lbf")]),
        ("kgf·m²", [({"kilogram_force": 1, "meter": 2}, ""), ({"kilogram": 1, "meter": 2},
                                                              "as a mass")]),
        ("min⁻¹", [({"minute": -1}, ""), ({"rpm": 1}, "")]),
        ("mV·min", [({"volt": 1, "minute": 1}, ""), ({"volt": 1, "rpm": -1}, "")]),
        ("kg·cm·min", [({"kilogram": 1, "meter": 1, "minute": 1}, ""),
                       ({"kilogram_force": 1, "meter": 1, "minute": 1}, "kgf"),
                       ({"kilogram": 1, "meter": 1, "rpm": -1}, ""),
                       ({"kilogram_force": 1, "meter": 1, "rpm": -1}, "kgf")]),
    ],
)  # fmt: skip
def test_what_the_trade_may_mean(text: str, expected: list) -> None:
    (product,) = read_products(text)
    found = list(variants(product))
    assert [dict(variant.powers) for variant, _ in found] == [powers for powers, _ in expected]
    for (variant, remark), (_, words) in zip(found, expected, strict=True):
        assert variant.tens == product.tens
        assert words in remark
        assert bool(remark) == bool(words)


@pytest.mark.parametrize(
    ("text", "clean", "marks"),
    [
        ("V", "V", ""), ("V rms", "V", "rms"), ("Vrms (L-L)/krpm", "V/krpm", "rms lines"),
        ("A (rms)", "A", "rms"), ("V_LL,rms/krpm", "V/krpm", "lines rms"),
        ("Ω/phase", "Ω", "phase"),
        ("mH (L-N)", "mH", "phase"), ("A p-p", "A", "peak-to-peak"), ("A 0-p", "A", "peak"),
        ("V DC", "V", "dc"), ("V~", "V", "ac"), ("N·m/A, rms", "N·m/A", "rms"), ("rms A", "A",
        "rms"), ("A; peak", "A", "peak"), ("krpm", "krpm", ""), ("V c.c.", "V", "dc"),
        ("V ca", "V", "ac"), ("A [peak] [lines]", "A", "peak lines"), ("A eff.", "A", "rms"),
    ],
)  # fmt: skip
def test_words_of_conventions_leave_a_clean_text(text: str, clean: str, marks: str) -> None:
    found, said = split_marks(text)
    assert (" ".join(found.split()), said) == (clean, set(marks.split()))


def test_brackets_around_all_of_it() -> None:
    for text in ("(V)", "[V]", "{V}", "([{V}])", " ( V ) "):
        assert bare(text) == "V"
    assert bare("(V)/(A)") == "(V)/(A)"
    assert bare("in ×10^-4 kg") == "×10^-4 kg"
    assert bare("V\nrms") == "V rms"


# ---- as a unit of a quantity


@pytest.mark.parametrize(
    ("text", "accepts", "factor"),
    [
        ("V·s", KE, 1.0), ("J·s", DAMPING, 1.0), ("Nms", DAMPING, 1.0),
        ("mV·min", KE, 1e-3 / RPM), ("rad/1/s", ("rad/s",), 1.0), ("m/1/s", ("m/s",), 1.0),
        ("V/1000/A", ("Ω",), 1e-3), ("W/phase", ("Ω",), 1.0), ("°F", ("K",), 5 / 9),
        ("MV", ("V",), 1e-3), ("ML", ("m",), None), ("MJ", ("J",), 1e6), ("MNm", ("N·m", "J"), 1e6),
        ("MN·m", ("N·m",), 1e-3), ("MNm", ("N·m",), 1e-3), ("V/rpm·1", KE, 1 / RPM),
        ("V·s²", KE, None), ("H·A", KE, None), ("N·m·s/A", KE, None), ("kg·m²/s", DAMPING, None),
        ("W·s²", DAMPING, None), ("V·h", KE, None), ("N·m·min", DAMPING, 1 / RPM),
        ("J·h", DAMPING, None), ("W·s", ("N·m",), None), ("V·s", ("N·m/A",), None),
        ("N·m", ("J",), None), ("W·s", ("J",), 1.0), ("min", ("Hz",), None),
        ("°C²/K", ("K",), None),
        ("K²/K", ("K",), 1.0), ("°C·°F/°C", ("K",), 5 / 9), ("x 1000 mm", ("m",), None),
    ],
)  # fmt: skip
def test_kinds_that_the_dimension_does_not_tell(text, accepts, factor) -> None:
    """A joule is no torque, a weber no torque constant; what is not written is taken per radian
    only with seconds."""
    if factor is None:
        with pytest.raises(UnitError):
            read_unit(text, accepts)
        return
    found = read_unit(text, accepts)
    assert (found.factor, found.offset) == (pytest.approx(factor, rel=1e-12), 0.0)


def test_zeros_of_temperature_scales() -> None:
    """0 °F = −160/9 °C, 0 K = −273.15 °C (NIST SP 811, B.8); a difference has none."""
    for text, offset in (("°C", 0.0), ("°F", -160 / 9), ("K", -273.15), ("mK", -273.15)):
        assert read_unit(text, ("°C",)).offset == pytest.approx(offset)
        assert read_unit(text, ("K",)).offset == 0
    assert "kelvin" in read_unit("K", ("°C",)).remark
    assert not read_unit("°F", ("°C",)).remark


def test_marks_of_a_whole_text_are_kept() -> None:
    assert read_unit("W/phase", ("Ω",)).marks == {"phase"}
    assert read_unit("KV rms", KV).marks == {"rms"}
    found = read_unit("  ", ("A", "1"))
    assert (found.si, found.factor, found.offset, found.dimension) == ("1", 1.0, 0.0, "1")
    found = read_unit("poles", ("1",))
    assert (found.si, found.factor, found.offset, found.dimension) == ("1", 1.0, 0.0, "1")


@pytest.mark.parametrize(
    ("text", "accepts", "words"),
    [
        ("10^4 kg·m²", ("kg·m²",), "multiplied by it"), ("×10 kg·m²", ("kg·m²",), "multiplied"),
        ("10^-4 kg·m²", ("kg·m²",), ""), ("10^4 V", ("V",), ""), ("V/rpm", KE, "1000 rpm may be"),
        ("V/(r/min)", KE, "1000 rpm may be"), ("mV/rpm", KE, ""), ("V/krpm", KE, ""),
        ("V·s", KE, "per radian"), ("V·s/rad", KE, ""), ("MNm", ("N·m",), "M read as milli"),
        ("mNm", ("N·m",), ""), ("NM", ("N·m",), "upper and lower case"), ("oz-in", ("N·m",), "ozf"),
    ],
)  # fmt: skip
def test_remarks(text: str, accepts: tuple[str, ...], words: str) -> None:
    remark = read_unit(text, accepts).remark
    assert words in remark
    assert bool(remark) == bool(words)


@pytest.mark.parametrize(
    ("text", "accepts", "some", "most"),
    [
        ("meterr", ("m",), {"meter"}, 3), ("Q", ("V",), set(), 0), ("voltt", ("V",),
        {"volt"}, 3), ("? & ?", ("V",), set(), 0), ("z", ("Hz",), set(), 0),
        ("rad/ss", ("rad/s",), {"rad/s"}, 3), ("s⁻¹", ("rad/s",), {"rad/s", "rev/s"}, 2),
        ("s/V", ("V·s/rad",), set(), 0),
    ],
)  # fmt: skip
def test_guesses(text: str, accepts: tuple[str, ...], some: set[str], most: int) -> None:
    """At most three, and none of a single letter or of a sentence."""
    with pytest.raises(UnitError) as found:
        read_unit(text, accepts)
    assert some <= set(found.value.guesses)
    assert len(found.value.guesses) <= most
    assert bool(found.value.guesses) == ("it may mean" in str(found.value))


def test_how_long_a_unit_may_be() -> None:
    """A hundred signs; to be taken for one among other texts forty."""
    text = "N·m" + " " * 97
    assert read_unit(text, ("N·m",)).factor == 1
    assert unit_of(text) is not None
    assert unit_of(text + " ") is None
    with pytest.raises(UnitError, match="longer than any unit"):
        read_unit(text + " ", ("N·m",))
    words = "newton·metres·seconds·radians·amperes"
    assert len(words) == 37
    assert is_unit_like(words + "·m2")
    assert not is_unit_like(words + "·kg2")


@pytest.mark.parametrize(
    ("text", "si"),
    [("v", None), ("w", None), ("S", None), ("ma", "A"), ("HZ", "Hz"), ("rps", "rad/s"),
     ("dps", "rad/s"), ("RPS", "rad/s"), ("tr", None), ("об", None), ("N·m/A", "N·m/A"),
     ("V·s", "V·s/rad"), ("°C", "°C"), ("°F", "°C"), ("K", "K"), ("°C/W", "K/W"), ("W", "W"),
     ("mW", "W"), ("?", None), ("€/pc", "EUR"), ("kWh", "J"), ("ab/cd", None), ("poles", "1"),
     ("s⁻¹", "Hz"), ("1/min", "rad/s"), ("rad", "rad")],
)  # fmt: skip
def test_without_a_quantity_nothing_is_repaired(text: str, si: str | None) -> None:
    """The case of a single letter counts, and whole texts are known."""
    found = unit_of(text)
    assert (found.si if found else None) == si


def test_a_typed_number_and_its_unit() -> None:
    assert quantity("1.500 rpm", ("rad/s",)) == pytest.approx(1.5 * RPM)
    assert quantity("-40 °F", ("°C",)) == pytest.approx(-40)
    assert quantity("5", ("1",)) == 5
    for text in ("5", "1,500 rpm", "2,5 rpm", "24 (28) rpm", "~5 rpm", "5 ±1 rpm", "n/a", ""):
        with pytest.raises(UnitError):
            quantity(text, ("rad/s",))


def test_a_refusal_names_the_quantity_it_is_a_unit_of() -> None:
    for text, accepts, words in (("rpm", ("V",), "it is a unit of rad/s; V would do"),
                                 ("in", ("V",), "it is a unit of m; V"),
                                 ("rad/s", ("V",), "a unit of another quantity; V would do"),
                                 ("V/Hz", ("A", "V"), "another quantity; A or V would do"),
                                 ("kg", ("currency",), "a currency such as EUR would do"),
                                 ):  # fmt: skip
        with pytest.raises(UnitError, match=words):
            read_unit(text, accepts)
    with pytest.raises(UnitError) as found:
        read_unit("meterr", ("m",))
    assert len(found.value.guesses) == 3
