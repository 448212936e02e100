"""Printed numbers: what each cell means, what it is refused for, and that nothing is lost."""

import math
from decimal import Decimal

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from motorfolio.schema.figure.read import (
    COMMA,
    POINT,
    FigureError,
    NumberStyle,
    is_missing,
    number_style,
    read_column,
    read_figure,
)

UNDECIDED = NumberStyle(None)


@pytest.mark.parametrize(
    ("text", "style", "value", "low", "high"),
    [
        ("0.85", POINT, 0.85, 0.845, 0.855),
        ("0,85", COMMA, 0.85, 0.845, 0.855),
        (",33", COMMA, 0.33, 0.325, 0.335),
        (".33", POINT, 0.33, 0.325, 0.335),
        ("1.234,5", COMMA, 1234.5, 1234.45, 1234.55),
        ("1,234.5", POINT, 1234.5, 1234.45, 1234.55),
        ("1.000", COMMA, 1000, 995, 1005),
        ("1.000", POINT, 1, 0.9995, 1.0005),
        ("5,700", POINT, 5700, 5695, 5705),
        ("5,700", COMMA, 5.7, 5.6995, 5.7005),
        ("1,234,567", POINT, 1234567, 1234566.5, 1234567.5),
        ("12 500", POINT, 12500, 12450, 12550),
        ("12\u00a0500", POINT, 12500, 12450, 12550),
        ("12\u2009500,5", COMMA, 12500.5, 12500.45, 12500.55),
        ("12\u202f500", UNDECIDED, 12500, 12450, 12550),
        ("12'500", POINT, 12500, 12450, 12550),
        ("12’500.25", POINT, 12500.25, 12500.245, 12500.255),
        # Trailing zeros of a whole number beyond the third digit are not significant.
        ("24800", POINT, 24800, 24750, 24850),
        ("24000", POINT, 24000, 23950, 24050),
        ("3000", POINT, 3000, 2995, 3005),
        ("300", POINT, 300, 299.5, 300.5),
        ("12345", POINT, 12345, 12344.5, 12345.5),
        ("100200", POINT, 100200, 100150, 100250),
        ("0", POINT, 0, -0.5, 0.5),
        ("0.0", POINT, 0, -0.05, 0.05),
        ("-5", POINT, -5, -5.5, -4.5),
        ("−5", POINT, -5, -5.5, -4.5),
        ("–5", POINT, -5, -5.5, -4.5),
        ("+5", POINT, 5, 4.5, 5.5),
        ("１２", POINT, 12, 11.5, 12.5),
        ("\ufeff12\u200b", POINT, 12, 11.5, 12.5),
        # The mantissa's digits count in a power of ten.
        ("1.2·10⁻⁵", POINT, 1.2e-5, 1.15e-5, 1.25e-5),
        ("1,2·10⁻⁵", COMMA, 1.2e-5, 1.15e-5, 1.25e-5),
        ("1.234×10⁻⁵", UNDECIDED, 1.234e-5, 1.2335e-5, 1.2345e-5),
        ("1.2 x 10^-5", POINT, 1.2e-5, 1.15e-5, 1.25e-5),
        ("1.2x10-7", POINT, 1.2e-7, 1.15e-7, 1.25e-7),
        ("1.2 x 10–4", POINT, 1.2e-4, 1.15e-4, 1.25e-4),
        ("1.2E-05", POINT, 1.2e-5, 1.15e-5, 1.25e-5),
        ("2×10⁵", POINT, 2e5, 1.5e5, 2.5e5),
        ("10⁻⁶", POINT, 1e-6, 0.5e-6, 1.5e-6),
    ],
)
def test_plain_numbers(
    text: str, style: NumberStyle, value: float, low: float, high: float
) -> None:
    figure = read_figure(text, style)
    assert figure is not None
    assert figure.value == value
    assert (figure.low, figure.high) == pytest.approx((low, high), rel=1e-12)
    assert (figure.qualifier, figure.unit, figure.also, figure.marks) == (None, "", None, ())


NAN = math.nan


@pytest.mark.parametrize(
    ("text", "value", "low", "high", "qualifier", "unit"),
    [
        ("24 ±10 %", 24, 21.6, 26.4, "tolerance", ""),
        ("24 V ± 5 %", 24, 22.8, 25.2, "tolerance", "V"),
        ("0.55 ± 0.05", 0.55, 0.5, 0.6, "tolerance", ""),
        ("0.55 ± 0.05 Nm", 0.55, 0.5, 0.6, "tolerance", "Nm"),
        ("0.55 +/- 0.05", 0.55, 0.5, 0.6, "tolerance", ""),
        ("0.55 (±0.05)", 0.55, 0.5, 0.6, "tolerance", ""),
        ("4,000 ± 10 % rpm", 4000, 3600, 4400, "tolerance", "rpm"),
        ("24 +5/−20 %", 24, 19.2, 25.2, "tolerance", ""),
        ("24 V +5/-20%", 24, 19.2, 25.2, "tolerance", "V"),
        ("24 V +5%/-20%", 24, 19.2, 25.2, "tolerance", "V"),
        ("24 +0.5/-0.2", 24, 23.8, 24.5, "tolerance", ""),
        ("10…28 V", 19, 10, 28, "range", "V"),
        ("10...28", 19, 10, 28, "range", ""),
        ("6–12", 9, 6, 12, "range", ""),
        ("6-12", 9, 6, 12, "range", ""),
        ("12 - 24", 18, 12, 24, "range", ""),
        ("12 to 24", 18, 12, 24, "range", ""),
        ("12 bis 24 V", 18, 12, 24, "range", "V"),
        ("12~24", 18, 12, 24, "range", ""),
        ("12～24", 18, 12, 24, "range", ""),
        ("12÷24", 18, 12, 24, "range", ""),
        ("12V-24V", 18, 12, 24, "range", "V"),
        ("3 V-4 V", 3.5, 3, 4, "range", "V"),
        ("-30...+85 °C", 27.5, -30, 85, "range", "°C"),
        ("−20–60", 20, -20, 60, "range", ""),
        ("≤ 45", 45, NAN, 45, "at most", ""),
        ("<0.1", 0.1, NAN, 0.1, "at most", ""),
        ("<= 0.5A", 0.5, NAN, 0.5, "at most", "A"),
        ("max. 60", 60, NAN, 60, "at most", ""),
        ("60 max", 60, NAN, 60, "at most", ""),
        ("12 Nm (max.)", 12, NAN, 12, "at most", "Nm"),
        ("45 以下", 45, NAN, 45, "at most", ""),
        ("≥ 8", 8, 8, NAN, "at least", ""),
        ("min 8", 8, 8, NAN, "at least", ""),
        ("min. 8 V", 8, 8, NAN, "at least", "V"),
        ("8以上", 8, 8, NAN, "at least", ""),
        ("~3", 3, 2.5, 3.5, "about", ""),
        ("ca. 5", 5, 4.5, 5.5, "about", ""),
        ("約5", 5, 4.5, 5.5, "about", ""),
        ("env. 5", 5, 4.5, 5.5, "about", ""),
        ("2.1 REF", 2.1, 2.05, 2.15, "about", ""),
        ("typ. 3", 3, 2.5, 3.5, "typical", ""),
        ("35 (typ)", 35, 34.5, 35.5, "typical", ""),
        ("8 min", 8, 7.5, 8.5, None, "min"),
        ("24VDC", 24, 23.5, 24.5, None, "VDC"),
        ("DC12V", 12, 11.5, 12.5, None, "DC V"),
        ("85 %", 85, 84.5, 85.5, None, "%"),
        ("€ 45.50", 45.5, 45.495, 45.505, None, "€"),
        ("3000 1/min", 3000, 2995, 3005, None, "1/min"),
        ("3000 min⁻¹", 3000, 2995, 3005, None, "min^-1"),
        ("4.3 V/1000 rpm", 4.3, 4.25, 4.35, None, "V/1000 rpm"),
        ("0.9 V/(rad/s)", 0.9, 0.85, 0.95, None, "V/(rad/s)"),
        ("2.4 gcm²", 2.4, 2.35, 2.45, None, "gcm^2"),
        ("10 A (rms)", 10, 9.5, 10.5, None, "A (rms)"),
        ("12 kg·m²×10⁻⁴", 12, 11.5, 12.5, None, "kg·m^2×10^-4"),
        ("5 kg·m²·10⁻⁴", 5, 4.5, 5.5, None, "kg·m^2·10^-4"),
        ("100:1", 100, 99.5, 100.5, None, ":1"),
        ("Ø 16", 16, 15.5, 16.5, None, ""),
    ],
)
def test_cells_with_more_than_a_number(
    text: str, value: float, low: float, high: float, qualifier: str | None, unit: str
) -> None:
    figure = read_figure(text, POINT)
    assert figure is not None
    assert figure.value == pytest.approx(value, rel=1e-12)
    assert (figure.low, figure.high) == pytest.approx((low, high), rel=1e-12, nan_ok=True)
    assert (figure.qualifier, figure.unit, figure.text) == (qualifier, unit, text)


@pytest.mark.parametrize(
    "word",
    [
        "~",
        "约",
        "約",
        "≈",
        "<",
        "≤",
        "最大",
        "参考値",
        "etwa",
        "up to",
        "bis zu",
        "at least",
        "標準",
    ],
)
def test_a_point_glued_to_a_word_begins_the_number(word: str) -> None:
    """Sheets that leave off the zero print "约.5513", which is no 5513."""
    figure = read_figure(f"{word}.5513", POINT)
    assert figure is not None
    assert figure.value == 0.5513
    with pytest.raises(FigureError, match="does not fit the decimal sign"):
        read_figure(f"{word}.5513", COMMA)


@pytest.mark.parametrize("word", ["max", "typ", "ca", "approx", "ref"])
def test_a_point_that_may_end_an_abbreviation_is_refused(word: str) -> None:
    """A comma table has no decimal point; "max..5" and "max.05" leave no choice either."""
    for style in (POINT, UNDECIDED):
        with pytest.raises(FigureError) as refused:
            read_figure(f"{word}.45", style)
        assert refused.value.guesses == (45, 0.45)
    for text, style, value in (
        (f"{word}.45", COMMA, 45),
        (f"{word}..45", POINT, 0.45),
        (f"{word}.05", POINT, 0.05),
        (f"{word}.4.5", POINT, 4.5),
        (f"{word}.1,200", POINT, 1200),
    ):
        figure = read_figure(text, style)
        assert figure is not None
        assert figure.value == value


@pytest.mark.parametrize(
    ("text", "low", "high", "unit"),
    [
        ("7.91±0.02 ×1000 rpm", 7.89, 7.93, "×1000 rpm"),
        ("3-5 ×1000 rpm", 3, 5, "×1000 rpm"),
        ("1.017 ± 0.001 ×10⁻⁶ kg·m²", 1.016e-6, 1.018e-6, "kg·m^2"),
        ("-1.017 ± 0.001 ×10⁻⁶", -1.018e-6, -1.016e-6, ""),
        ("1.017±0.001e-6", 1.016e-6, 1.018e-6, ""),
        ("3…5 ×10⁻⁶ m", 3e-6, 5e-6, "m"),
        ("1.017×10⁻⁶ ± 1×10⁻⁹", 1.016e-6, 1.018e-6, ""),
        ("7500 - 1×10^4", 7500, 10000, ""),
    ],
)
def test_a_factor_behind_two_numbers(text: str, low: float, high: float, unit: str) -> None:
    figure = read_figure(text, POINT)
    assert figure is not None
    assert (figure.low, figure.high) == pytest.approx((low, high), rel=1e-12)
    assert figure.unit == unit


def test_a_factor_that_may_be_of_one_or_both_numbers_is_refused() -> None:
    for text in ("10000 ± 1×10^2", "10.000 ± 1×10^2"):
        with pytest.raises(FigureError, match="both numbers or to the second alone"):
            read_figure(text, POINT)


@pytest.mark.parametrize(
    "text", ["1e-400", "1e400", "9" * 190 + "e300", "9" * 400, "1.5e308±1e308"]
)
def test_what_no_float_holds_is_refused(text: str) -> None:
    """Neither zero nor infinity is invented, in a cell or in a column."""
    with pytest.raises(FigureError):
        read_figure(text, POINT)
    assert read_column([text], POINT).failures.keys() == {0}


@pytest.mark.parametrize(
    "text", ["k. A.\n0,25} \n", "x\r\n\t1", "9" * 4000 + "≥", "\u202e\x1b[2J1", "?" * 500]
)
def test_a_refusal_is_one_short_printable_line(text: str) -> None:
    with pytest.raises(FigureError) as refused:
        read_figure(text, POINT)
    assert refused.value.text == text
    assert str(refused.value).isprintable()
    assert len(str(refused.value)) <= 300


def test_tolerances_are_kept_as_printed() -> None:
    figure = read_figure("24 V +5/−20 %", POINT)
    assert figure is not None
    assert figure.tolerance == pytest.approx((-4.8, 1.2))


@pytest.mark.parametrize(
    ("text", "value", "unit", "second", "second_unit"),
    [
        ("0.28 (39.6)", 0.28, "", 39.6, ""),
        ("4.78 {48.7}", 4.78, "", 48.7, ""),
        ("0.28 [39.6]", 0.28, "", 39.6, ""),
        ("24 V (28 V)", 24, "V", 28, "V"),
        ("1.5 kg·cm (0.147 N·m)", 1.5, "kg·cm", 0.147, "N·m"),
        ("0.28\n39.6", 0.28, "", 39.6, ""),
        ("1.8 (1.9)", 1.8, "", 1.9, ""),
    ],
)
def test_second_figures(
    text: str, value: float, unit: str, second: float, second_unit: str
) -> None:
    figure = read_figure(text, POINT)
    assert figure is not None
    assert figure.also is not None
    assert (figure.value, figure.unit) == (value, unit)
    assert (figure.also.value, figure.also.unit) == (second, second_unit)


MISSING = [
    "", " ", "\u00a0", "-", "–", "—", "---", "--", "−", "―", "n/a", "N/A", "n.a.", "k. A.", "k.A.",
    "non spécifié", "/", "*", "TBD", "∞", "keine Angabe", "なし", "…",
]  # fmt: skip


@pytest.mark.parametrize("text", MISSING)
def test_missing_is_neither_zero_nor_minus(text: str) -> None:
    assert is_missing(text)
    assert read_figure(text, POINT) is None


def test_zero_is_a_value_here() -> None:
    assert not is_missing("0")


@pytest.mark.parametrize(
    ("text", "notes", "value", "marks"),
    [
        ("3000¹⁾", "", 3000, ("^1)",)),
        ("3000¹", "1", 3000, ("^1",)),
        ("1.2²", "2", 1.2, ("^2",)),
        ("0.55*", "", 0.55, ("*",)),
        ("0.55 **", "", 0.55, ("**",)),
        ("0.55†", "", 0.55, ("†",)),
        ("*0.55", "", 0.55, ("*",)),
        ("3000 1)", "", 3000, ("1)",)),
        ("3000 1) 2)", "", 3000, ("1)", "2)")),
        ("24a", "a", 24, ("a",)),
        ("24 (1)", "1", 24, ("(1)",)),
        ("30001)", "1)", 3000, ("1)",)),
        ("24 V*", "", 24, ("*",)),
        ("3000¹⁾ rpm", "", 3000, ("^1)",)),
        ("0.55 Nm²⁾", "", 0.55, ("^2)",)),
    ],
)
def test_footnote_marks(text: str, notes: str, value: float, marks: tuple[str, ...]) -> None:
    figure = read_figure(text, POINT, note_marks=frozenset(notes.split()))
    assert figure is not None
    assert (figure.value, figure.marks) == (value, marks)


@pytest.mark.parametrize(
    ("text", "guesses"),
    [
        ("3000¹", [3000]),  # no note explains it, and 30001 must never come of it
        ("1.2²", [1.2]),
        ("10²", [10, 100]),
        ("30001)", [30001]),
    ],
)
def test_marks_without_a_note_are_refused(text: str, guesses: list[float]) -> None:
    with pytest.raises(FigureError) as caught:
        read_figure(text, POINT)
    assert list(caught.value.guesses) == guesses


def test_a_letter_that_no_note_explains_stays_a_unit() -> None:
    """Whoever takes the value must read the unit text, and "a" is none."""
    figure = read_figure("24a", POINT)
    assert figure is not None
    assert figure.unit == "a"


@pytest.mark.parametrize(
    ("text", "guesses"),
    [
        ("12/24V", [12, 24]), ("-20/+40 °C", [-20, 40]), ("12 24", [12, 24]),
        ("24V/36V 350W", [24, 36, 350]),
        ("1/2", [1, 2]), ("½", [1, 2]), ("- 0.5", []), ("12.05.2024", []), ("2024-05-01", []),
        ("12-05-2024", []), ("05/06/2024", None), ("1_000", []), ("0x1F", []), ("inf", []),
        ("nan", []), ("-inf", []), ("1e999", []), ("1.2×104", [1.2e-4, 1.2e4]), ("007", []),
        ("12.", [12]), ("5..3", [5, 3]), ("10-4", [10, 4]), ("6 -12", [6, -12]), ("±5", []),
        ("+5/−20 %", None), ("250x250x6", []), ("12,5", [12.5]), ("1,23,4", []), ("1 23", None),
        ("24 ±", []), ("24 ± x", []), ("abc", []), ("x10-7", []), ("12 V ... 24 A", [12]),
        ("< > 5", []), ("5 + 3", None), ("24 (±10 %", []), ("1.2.3", []), ("(39.6)", []),
        ("12:30", None), ("max 5...7", [6]), ("1 000 00", None), ("12V 24V", None), ("1'23", None),
        ("--5", []), ("1,234.567,8", []), ("3-4-5", None),
    ],
)  # fmt: skip
def test_what_is_not_one_number_is_refused(text: str, guesses: list[float] | None) -> None:
    with pytest.raises(FigureError) as caught:
        read_figure(text, POINT)
    assert caught.value.text == text
    if guesses is not None:
        assert list(caught.value.guesses) == guesses


@pytest.mark.parametrize("text", ["1,234", "5.700", "12,345", "123.456"])
def test_undecidable_digits_are_refused_with_both_values(text: str) -> None:
    with pytest.raises(FigureError, match="decimal or a thousands sign") as caught:
        read_figure(text, UNDECIDED)
    small, large = caught.value.guesses
    assert large == pytest.approx(1000 * small)


def test_what_only_the_table_decides_tells_its_other_value() -> None:
    point, comma = read_figure("1,234", POINT), read_figure("1,234", COMMA)
    assert point is not None
    assert comma is not None
    assert (point.value, point.other) == (1234, 1.234)
    assert (comma.value, comma.other) == (1.234, 1234)


@pytest.mark.parametrize(
    ("texts", "decimal", "conflicts"),
    [
        (["0,85", "1.234", "24"], ",", ()),
        (["0.85", "1,234", "24"], ".", ()),
        (["1.234,5", "12"], ",", ()),
        (["1,234,567"], ".", ()),
        (["12 500", "12'500"], None, ()),
        (["5,700", "3,200"], None, ()),
        (["1.234", "5.700"], None, ()),
        (["24", "3000"], None, ()),
        (["5,700 rpm", "1,2 A"], ",", ()),
        (["1.234×10⁻⁵"], ".", ()),
        (["0,85", "1,5", "0.3"], ",", (2,)),
        (["0,85", "0.3"], None, (1,)),
        (["12.05.2024", "AB-12.5", "24"], None, ()),
        (["24 V ± 2,5 %"], ",", ()),
        (["", "—", "n/a"], None, ()),
    ],
)
def test_number_style(texts: list[str], decimal: str | None, conflicts: tuple[int, ...]) -> None:
    style = number_style(texts)
    assert (style.decimal, style.conflicts) == (decimal, conflicts)
    if decimal:
        assert any(text.strip() in style.evidence for text in texts)


def test_a_mixed_table_leaves_the_undecidable_unread() -> None:
    texts = ["0,85", "1,5", "0.3", "1.234"]
    style = number_style(texts)
    column = read_column(texts, style)
    assert list(column.failures) == [2, 3]
    assert column.failures[2].guesses == (0.3,)
    assert column.failures[3].guesses == (1.234, 1234.0)


@pytest.mark.parametrize("style", [POINT, COMMA, UNDECIDED])
def test_a_column_reads_as_its_cells_do(style: NumberStyle) -> None:
    texts = [
        "24", "24800", "0.85", "0,85", "1.234", "1,234", "12.345,6", "", "-", "≤ 45", "10…28 V",
        "3000¹⁾", "007", "1e5", "nan", "0.123", "12 500", "٣", "-5", "0", "00", "1_000", " 12 ",
        "0.28 (39.6)", "123456.789", ".5", "5.", "0." + "1" * 20,
    ]  # fmt: skip
    column = read_column(texts, style)
    for i, text in enumerate(texts):
        try:
            figure = read_figure(text, style)
        except FigureError:
            assert i in column.failures, text
            assert math.isnan(column.value[i])
            continue
        assert i not in column.failures, text
        expected = (figure.value, figure.low, figure.high) if figure else (NAN, NAN, NAN)
        read = (column.value[i], column.low[i], column.high[i])
        assert read == pytest.approx(expected, rel=1e-12, nan_ok=True), text
        assert (i in column.doubtful) == (figure is not None and figure.other is not None), text
        more = figure and (figure.qualifier or figure.unit or figure.also or figure.marks)
        assert (i in column.figures) == bool(more), text


def test_a_long_column_of_plain_numbers_is_read_whole() -> None:
    rng = np.random.default_rng(1)
    numbers, places = rng.uniform(1, 5000, 20_000), rng.integers(0, 3, 20_000)
    texts = [f"{x:.{d}f}" for x, d in zip(numbers, places, strict=True)]
    assert np.array_equal(read_column(texts, POINT).value, np.array(texts, dtype=float))


# Any number in any style reads back as exactly what was printed.

_SIGNS = {
    "point": (POINT, ".", ["", " ", "\u00a0", "\u2009", "\u202f", "'", "’", ","]),
    "comma": (COMMA, ",", ["", " ", "\u00a0", "\u2009", "\u202f", "'", "’", "."]),
}


def _grouped(digits: str, separator: str) -> str:
    head = len(digits) % 3
    groups = [digits[:head]] if head else []
    groups += [digits[i : i + 3] for i in range(head, len(digits), 3)]
    return separator.join(groups)


@given(
    number=st.floats(1e-6, 1e9, allow_nan=False),
    places=st.integers(0, 6),
    sign=st.sampled_from(["", "-", "−", "+"]),
    kind=st.sampled_from(["point", "comma"]),
    which=st.integers(0, 7),
    unit=st.sampled_from(["", "V", " mNm/A", " min⁻¹", " %", " kg·m²"]),
)
def test_any_number_in_any_style(
    number: float, places: int, sign: str, kind: str, which: int, unit: str
) -> None:
    style, decimal, separators = _SIGNS[kind]
    printed = f"{number:.{places}f}"
    whole, _, fraction = printed.partition(".")
    text = sign + _grouped(whole, separators[which]) + (decimal + fraction if places else "") + unit
    figure = read_figure(text, style)
    assert figure is not None
    factor = -1 if sign in ("-", "−") else 1
    assert figure.value == factor * float(printed)
    assert figure.unit == unit.strip().replace("⁻¹", "^-1").replace("²", "^2")
    # What was rounded to these digits lies in their interval.
    exact = factor * Decimal(number)
    slack = Decimal(abs(number)) * Decimal("1e-14")
    assert Decimal(figure.low) - slack <= exact <= Decimal(figure.high) + slack


@given(
    number=st.floats(1, 9.999, allow_nan=False),
    places=st.integers(0, 4),
    power=st.integers(-12, 12),
    form=st.sampled_from(["{m}e{p}", "{m}E{p:+03d}", "{m}·10^{p}", "{m} x 10^{p}", "{m}×10{s}"]),
    kind=st.sampled_from(["point", "comma"]),
)
def test_any_power_of_ten(number: float, places: int, power: int, form: str, kind: str) -> None:
    style, decimal, _ = _SIGNS[kind]
    mantissa = f"{number:.{places}f}"
    raised = str(power).translate(str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"))
    text = form.format(m=mantissa.replace(".", decimal), p=power, s=raised)
    figure = read_figure(text, style)
    assert figure is not None
    assert figure.value == float(f"{mantissa}e{power}")
    zeros = 10 ** (len(mantissa) - len(mantissa.rstrip("0"))) if not places else 1
    half = 0.5 * 10.0 ** (power - places) * (zeros if len(mantissa) > 3 else 1)
    assert figure.high - figure.value == pytest.approx(half, rel=1e-6)


@given(st.text(max_size=12))
def test_no_text_breaks_the_reader(text: str) -> None:
    """Whatever stands in a cell: a finite figure, a gap, or a refusal; never another error."""
    for style in (POINT, COMMA, UNDECIDED):
        try:
            figure = read_figure(text, style, note_marks=frozenset({"1", "a", "*"}))
        except FigureError:
            continue
        assert figure is None or math.isfinite(figure.value)


@given(st.text(alphabet="0123456789.,-–+±%()/ …~≤<x×10^eE'ab¹²⁻ \u00a0Vm", max_size=14))
def test_no_likely_text_breaks_the_reader(text: str) -> None:
    try:
        figure = read_figure(text, POINT, note_marks=frozenset({"1", "a"}))
    except FigureError:
        return
    assert figure is None or math.isfinite(figure.value)
    column = read_column([text], POINT, note_marks=frozenset({"1", "a"}))
    assert not column.failures


@pytest.mark.parametrize(("text", "value", "unit", "condition"), [
    ("0.9 A @ 10 V", 0.9, "A", "10 V"), ("0.9A/10V", 0.9, "A", "10 V"),
    ("85 A/60 s", 85, "A", "60 s"), ("40 A, 10 s", 40, "A", "10 s"),
    ("1.2 Ω at 25 °C", 1.2, "Ω", "25 °C"), ("3000 (at 24V)", 3000, "", "24 V"),
    ("0.18 N·m bei 3000 min-1", 0.18, "N·m", "3000 min-1"), ("0.42@12V", 0.42, "", "12 V"),
    ("6 A pour 10 s", 6, "A", "10 s"),
])  # fmt: skip
def test_what_a_figure_holds_under_stands_apart(
    text: str, value: float, unit: str, condition: str
) -> None:
    """Common practice, no source: a current at a voltage, a peak for some seconds."""
    figure = read_figure(text, POINT)
    assert figure is not None
    assert (figure.value, figure.unit, figure.condition) == (value, unit, condition)


@pytest.mark.parametrize("text", [
    "24 V/36 V", "12 V at 24 V", "24/36 V", "2.4/60 s", "12 V, 24 V", "5 @ 3 @ 2 V",
])  # fmt: skip
def test_two_of_one_kind_are_no_figure_under_a_condition(text: str) -> None:
    with pytest.raises(FigureError):
        read_figure(text, POINT)


@pytest.mark.parametrize("text", ["5.2 V/1000 rpm", "5.2 V/krpm", "12 a 24 V", "12 V à 24 V"])
def test_a_divided_unit_and_a_range_are_no_condition(text: str) -> None:
    figure = read_figure(text, POINT)
    assert figure is not None
    assert figure.condition == ""
