"""Printed figures: every branch of the reading from both sides, by hand."""

from __future__ import annotations

import math

import pytest

from motorfolio.schema.figure.grammar import half_digit, mark_cores
from motorfolio.schema.figure.numerals import number_style, readings
from motorfolio.schema.figure.pairs import share_power
from motorfolio.schema.figure.read import (
    COMMA,
    POINT,
    FigureError,
    NumberStyle,
    is_missing,
    read_column,
    read_figure,
)

NAN = math.nan
MIXED = NumberStyle(".", "both", (3,))


@pytest.mark.parametrize(
    ("text", "value", "low", "high", "qualifier", "unit"),
    [
        # ranges: a sign of a range that is none comes before the one that is
        ("24 V~rms to 28 V~rms", 26, 24, 28, "range", "V~rms"),
        ("3000-4000 min-1", 3500, 3000, 4000, "range", "min-1"), ("3 a 5 A", 4, 3, 5, "range", "A"),
        ("5至9 V", 7, 5, 9, "range", "V"), ("5から9", 7, 5, 9, "range", ""), ("5 à 9 V", 7, 5, 9,
        "range", "V"), ("-9 - -5", -7, -9, -5, "range", ""), ("-5 - 5", 0, -5, 5, "range", ""),
        ("1.5 - 2.5 ×10^-3", 2e-3, 1.5e-3, 2.5e-3, "range", ""), ("10 %-20 %", 15, 10, 20, "range",
        "%"), ("3 Ω-4 Ω", 3.5, 3, 4, "range", "Ω"), ("ca. 3-5 V", 4, 3, 5, "range", "V"),
        ("3-5 V typ", 4, 3, 5, "range", "V typ"), ("typ. 24 ±1 V", 24, 23, 25, "tolerance", "V"),
        # tolerances
        ("50 ± 10%", 50, 45, 55, "tolerance", ""), ("-50 ± 10 %", -50, -55, -45, "tolerance", ""),
        ("50 V (±5)", 50, 45, 55, "tolerance", "V"), ("50 [± 5 %] V", 50, 47.5, 52.5, "tolerance",
        "V"), ("50 V ± 5 V", 50, 45, 55, "tolerance", "V"), ("50 +1/-2", 50, 48, 51, "tolerance",
        ""), ("50 (+1 -2) V", 50, 48, 51, "tolerance", "V"), ("-50 +10%/-20%", -50, -60, -45,
        "tolerance", ""), ("50 +10/-20 % V", 50, 40, 55, "tolerance", "V"),
        ("50 ± -5", 50, 45, 55, "tolerance", ""),
        # one side open
        ("max: 5 A", 5, NAN, 5, "at most", "A"), ("max = 5", 5, NAN, 5, "at most", ""),
        ("> 5 A", 5, 5, NAN, "at least", "A"), ("5 A (min)", 5, 5, NAN, "at least", "A"),
        ("5未満", 5, NAN, 5, "at most", ""), ("5 以内", 5, NAN, 5, "at most", ""),
        ("max. 5 (max)", 5, NAN, 5, "at most", ""), ("-5 max", -5, NAN, -5, "at most", ""),
        ("≥ -5", -5, -5, NAN, "at least", ""), ("3000 min-1", 3000, 2995, 3005, None, "min-1"),
        ("5 A typ.", 5, 4.5, 5.5, "typical", "A"), ("approx 5", 5, 4.5, 5.5, "about", ""),
        ("5 A [approx.]", 5, 4.5, 5.5, "about", "A"),
        # what stands before the number
        ("$5", 5, 4.5, 5.5, None, "$"), ("EUR 5.10", 5.1, 5.095, 5.105, None, "EUR"), ("AC 230 V",
        230, 229.5, 230.5, None, "AC V"), ("ø5", 5, 4.5, 5.5, None, ""), ("< DC 5 V", 5, NAN, 5,
        "at most", "DC V"), ("5 A,", 5, 4.5, 5.5, None, "A"), ("5;", 5, 4.5, 5.5, None, ""),
        ("+5", 5, 4.5, 5.5, None, ""), ("- 5", None, 0, 0, None, ""),
        ("5:1", 5, 4.5, 5.5, None, ":1"),
        ("10 :1", 10, 9.5, 10.5, None, ":1"), ("5 °C", 5, 4.5, 5.5, None, "°C"),
        ("5 m/s2", 5, 4.5, 5.5, None, "m/s2"), ("5 kgm2 10^-4", 5, 4.5, 5.5, None, "kgm2 10^-4"),
        ("5 V/1,000 rpm", 5, 4.5, 5.5, None, "V/1,000 rpm"),
        ("5 A 0-p", 5, 4.5, 5.5, None, "A 0-p"),
    ],
)  # fmt: skip
def test_cells(text, value, low, high, qualifier, unit) -> None:
    """Half a unit of the last digit, or what is printed; common practice, no source."""
    if value is None:
        with pytest.raises(FigureError):
            read_figure(text, POINT)
        return
    figure = read_figure(text, POINT)
    assert figure is not None
    found = (figure.value, figure.low, figure.high)
    assert found == pytest.approx((value, low, high), rel=1e-12, abs=1e-12, nan_ok=True)
    assert (figure.qualifier, figure.unit) == (qualifier, unit)
    assert (figure.tolerance is not None) == (qualifier == "tolerance")
    if figure.tolerance:
        assert figure.tolerance == pytest.approx((low - value, high - value), abs=1e-12)


@pytest.mark.parametrize(
    ("text", "words", "guesses"),
    [
        ("50 [+1,-2]", "a tolerance that is no number", ()), ("5 V2 - 8 V2", "more than one", ()),
        ("5 4", "more than one number", (5, 4)), ("5 A 7 -8", "more than one number", (5, 7, -8)),
        ("5-3 V", "not in order", (5, 3)), ("5-5 V", "not in order", (5, 5)), ("5 V - 7 A",
        "two units", (5,)), ("5 V ± 1 A", "two units", (5,)), ("5 (V", "no partner", (5,)),
        ("5 [V)", "no partner", (5,)), ("5 {V", "no partner", (5,)), ("5 ± V", "± without", ()),
        ("5 (± 1 V", "not closed", ()), ("5 +1%/-2", "only one side", ()), ("5 +1.1.1/-2",
        "no number", ()), ("2024-05-06", "", ()), ("12-05.06", "", ()), ("V 5", "no number at", ()),
        ("1,23,4", "form no number", ()), ("1×104", "lost its superscript", (1e-4, 1e4)),
        ("0x1F", "not written as a decimal", ()), ("1_000", "not written", ()), ("5_A", "not", ()),
        ("max. 5 min. 3", "", ()), ("≤ 5 typ.", 'both "typical" and "at most"', None),
        ("max 5 V (min)", "both", (5,)), ("5.", "a sign that ends", (5,)), ("5 +", "a sign", (5,)),
        ("5-", "a sign that ends", (5,)), ("1e-400", "too small", ()),
        ("5²", "no note explains", (5,)), ("10³", "no note explains", (10, 1000)), ("10^x", "", ()),
        ("1e400", "", ()), ("5 /7", "more than one", (5, 7)), ("< > 5", "no number", ()),
    ],
)  # fmt: skip
def test_refusals(text: str, words: str, guesses: tuple | None) -> None:
    with pytest.raises(FigureError) as found:
        read_figure(text, POINT)
    if guesses is None:
        return
    assert words in str(found.value)
    if guesses:
        assert set(found.value.guesses) == set(guesses)
        assert "it may mean" in str(found.value)


def test_at_most_four_guesses_are_told() -> None:
    error = FigureError("x", "why", (1.0, 2.0, 2.0, math.inf, 3.0, 4.0, 5.0))
    assert error.guesses == (1, 2, 3, 4, 5)
    assert str(error) == '"x": why; it may mean 1 or 2 or 3 or 4'
    assert str(FigureError("x", "why")) == '"x": why'


@pytest.mark.parametrize(
    ("numeral", "exponent", "half"),
    [("1.50", 0, 0.005), ("1.5", 0, 0.05), ("1.5", 3, 50), ("24800", 0, 50), ("24000", 0, 50),
     ("24001", 0, 0.5), ("300", 0, 0.5), ("3000", 0, 5), ("3000", 2, 500), ("3010", 0, 5),
     ("30", 0, 0.5), ("0", 0, 0.5), ("5", -3, 5e-4), ("100000", 0, 500), ("0.000", 0, 5e-4)],
)  # fmt: skip
def test_half_of_the_last_digit(numeral: str, exponent: int, half: float) -> None:
    """Zeros of a whole number beyond its third digit do not count."""
    assert half_digit(numeral, exponent) == half


def test_marks_without_their_dress() -> None:
    assert mark_cores(frozenset({"¹⁾", "(2)", "[a]", "*", "", "3 )"})) == {"1", "2", "a", "*", "3"}


@pytest.mark.parametrize(
    ("text", "value", "other"),
    [("1,234", 1234.0, 1.234), ("1.234", 1.234, 1234.0), ("1.23", 1.23, None), ("1234", 1234.0,
     None), ("-1.234", -1.234, -1234.0), ("1.234 - 2.345", 1.7895, 1789.5), ("1.234 - 2.5", 1.867,
     None), ("1.234×10^-3", 1.234e-3, None), ("0.234", 0.234, None), ("1234.567", 1234.567, None)],
)  # fmt: skip
def test_the_other_reading(text: str, value: float, other: float | None) -> None:
    """Three digits behind one sign may be thousands in another table."""
    figure = read_figure(text, POINT)
    assert figure is not None
    assert figure.value == pytest.approx(value, rel=1e-12)
    assert figure.other == (None if other is None else pytest.approx(other, rel=1e-12))


def test_a_table_that_contradicts_itself() -> None:
    for style in (MIXED, NumberStyle(None)):
        with pytest.raises(FigureError, match="does not tell") as found:
            read_figure("1,234", style)
        assert found.value.guesses == (1.234, 1234)
    assert read_figure("12.5", MIXED).value == 12.5
    with pytest.raises(FigureError, match="does not fit the decimal sign") as found:
        read_figure("12,5", MIXED)
    assert found.value.guesses == (12.5,)
    assert read_figure("12,5", NumberStyle(None)).value == 12.5


@pytest.mark.parametrize(
    ("text", "notes", "value", "marks"),
    [
        ("† 5", "", 5, ("†",)), ("5 *)", "", 5, ("*)",)), ("5 a)", "", 5, ("a)",)), ("5 12)", "", 5,
        ("12)",)), ("5 [1]", "1", 5, ("[1]",)), ("5 a", "a", 5, ("a",)),
        ("5 * **", "", 5, ("*", "**")), ("5 * ** †", "", 5, ("*", "**", "†")),
        ("*5*", "", 5, ("*", "*")), ("5¹⁾ *", "", 5, ("^1)", "*")),
        ("5①", "", 5, ("^1)",)), ("5※1", "", 5, ("^1)",)), ("5ᵃ", "a", 5, ("^a",)), ("51)", "1)", 5,
        ("1)",)), ("5 A 1)", "", 5, ("1)",)), ("10²", "2", 10, ("^2",)), ("5 #,", "", 5, ("#,",)),
    ],
)  # fmt: skip
def test_marks_of_notes(text: str, notes: str, value: float, marks: tuple) -> None:
    figure = read_figure(text, POINT, note_marks=frozenset(notes.split()))
    assert figure is not None
    assert (figure.value, figure.marks) == (value, marks)


def test_a_mark_alone_is_no_figure() -> None:
    for text in ("1)", "*)", "a)"):
        with pytest.raises(FigureError):
            read_figure(text, POINT, note_marks=frozenset({"a"}))
    inside = read_figure("24 (30 *)", POINT)
    assert inside is not None
    assert inside.also is not None
    assert inside.also.value == 30


def test_second_figures_carry_their_own() -> None:
    figure = read_figure("24 V (28.0 A)", POINT)
    assert figure is not None
    assert figure.also is not None
    assert (figure.value, figure.unit, figure.qualifier) == (24, "V", None)
    assert (figure.also.value, figure.also.unit, figure.also.low) == (28, "A", 27.95)
    lines = read_figure("24 V\n -30 A", POINT)
    assert lines is not None
    assert lines.also is not None
    assert (lines.value, lines.unit, lines.also.value, lines.also.unit) == (24, "V", -30, "A")
    for text in ("24 V (rms)", "24 V/(1000 rpm)"):
        single = read_figure(text, POINT)
        assert single is not None
        assert single.also is None


def test_how_long_a_figure_may_be() -> None:
    figure = read_figure("5" + " " * 199, POINT)
    assert figure is not None
    assert figure.value == 5
    with pytest.raises(FigureError, match="longer than any figure"):
        read_figure("5" + " " * 200, POINT)


def test_a_column_of_every_kind() -> None:
    """Plain numbers of any length, blanks, doubtful ones and refused ones, in their places."""
    texts = ["5", "", "0.5", "1.234", "1234.567", "0.234", "x", "5 V", "12.34567890123",
             "9500", "9501", "950", "12.345678901234567", "1.2340", "≤ 3", "-7", "10",
             "100000"]  # fmt: skip
    column = read_column(texts, POINT)
    half = [0.5, NAN, 0.05, 5e-4, 5e-4, 5e-4, NAN, 0.5, 5e-12, 5, 0.5, 0.5, 5e-16, 5e-5, NAN, 0.5,
            0.5, 500]  # fmt: skip
    values = [5, NAN, 0.5, 1.234, 1234.567, 0.234, NAN, 5, 12.34567890123, 9500, 9501, 950,
              12.345678901234567, 1.234, 3, -7, 10, 100000]  # fmt: skip
    assert column.value == pytest.approx(values, rel=1e-15, nan_ok=True)
    assert column.high[:14] - column.value[:14] == pytest.approx(half[:14], rel=1e-3, nan_ok=True)
    assert column.value - column.low == pytest.approx(half, rel=1e-3, nan_ok=True)
    assert column.doubtful == [3]
    assert list(column.failures) == [6]
    assert list(column.figures) == [7, 14]
    tens = read_column(["9050", "10050", "90"], POINT)
    assert (tens.high - tens.value).tolist() == [5, 5, 0.5]
    comma = read_column(["1,234", "0,5", "1.5"], COMMA)
    assert comma.value == pytest.approx([1.234, 0.5, NAN], nan_ok=True)
    assert comma.doubtful == [0]
    mixed = read_column(["1.234", "12.5", "1234.567"], MIXED)
    assert mixed.value == pytest.approx([NAN, 12.5, 1234.567], nan_ok=True)
    assert list(mixed.failures) == [0]
    assert mixed.failures[0].guesses == (1.234, 1234)
    marked = read_column(["5a", "1,234 V"], POINT, note_marks=frozenset({"a"}))
    assert marked.value.tolist() == [5, 1234]
    assert marked.doubtful == [1]


@pytest.mark.parametrize(
    ("text", "shared"),
    [
        ("5 ± 5 x10-3", None), ("1 ± 0.0001e3", None), ("1 ± 0.00009e3",
        "1 ± 0.00009e3"), ("2 - 1×10^3", "2 - 1×10^3"), ("3 to 5 10^-6", "3 10^-6 to 5 10^-6"),
        ("+3 - 5×10^4 V", "+3×10^4 - 5×10^4 V"), ("5 - 5e3", "5 - 5e3"), ("10 - 20e1", None),
        ("1,5 ~ 2,5e-3", "1,5e-3 ~ 2,5e-3"), ("1 ± 1e-3", None), ("1 ± 1e-5", "1e-5 ± 1e-5"),
        ("50 - 1,234×10^-3", "50 - 1,234×10^-3"), ("1,234 - 2000×10^-3", "1,234 - 2000×10^-3"),
        ("1 - 100×10^3", "1×10^3 - 100×10^3"), ("1 - 101×10^3", "1 - 101×10^3"),
    ],
)  # fmt: skip
def test_a_power_behind_two_numbers(text: str, shared: str | None) -> None:
    """A deviation is a ten-thousandth to all of its value, a range at most a hundredfold."""
    assert share_power(text) == shared


def test_styles_and_readings_at_their_edges() -> None:
    assert readings("1.234.567,8") == {",": "1234567.8"}
    assert readings("1 234.5") == {".": "1234.5"}
    assert readings("1 234,567") == {",": "1234.567"}
    assert readings("1.234.567") == {",": "1234567"}
    assert readings("12.34.567") == {}
    assert readings("1234.567.890") == {}
    assert readings("10") == {None: "10"}
    assert readings("00") == {}
    assert readings("0.5", True) == {".": "0.5"}
    assert readings("100,000") == {",": "100.000", ".": "100000"}
    assert readings("1000,000") == {",": "1000.000"}
    tie = number_style(["1.5", "2.5", "3,5", "4,5"])
    assert (tie.decimal, tie.conflicts) == (None, (0, 1))
    assert number_style(["5", "1,234", "24 V"]).decimal is None
    assert number_style(["24", "1,5"]).decimal == ","
    found = number_style(["1.5 - 2.5", "3,5"])
    assert (found.decimal, found.conflicts) == (None, (0,))


def test_what_says_that_nothing_is_given() -> None:
    for text in ("", "-", "--", "...", "___", "n/a", "N.A.", "n.v.", "k. A.", "TBC", "t.b.d.", "∞"):
        assert is_missing(text)
        assert read_figure(text, POINT) is None
    for text in ("0", "-5", "n/a 5", "*5", "none 5"):
        assert not is_missing(text)
