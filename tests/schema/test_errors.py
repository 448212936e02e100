"""Sentences for a person: one printable line of bounded length, its ends kept."""

from __future__ import annotations

import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from motorfolio.schema.errors import MotorfolioError, excerpt


@example("00000000000000000 000", 20)  # cut beside a blank
@given(st.text(max_size=400), st.integers(20, 120))
def test_an_excerpt_is_one_printable_line(text: str, most: int) -> None:
    found = excerpt(text, most)
    assert len(found) <= most
    assert found.isprintable()
    assert "  " not in found


@pytest.mark.parametrize("length", [81, 100, 639, 640, 641, 100_000])
def test_the_middle_of_a_long_text_is_left_out(length: int) -> None:
    """Two thirds of the room show the beginning, the rest the end, none of it wasted."""
    digits = "".join(f"{n:06}" for n in range(length // 6 + 1))[:length]
    found = excerpt(digits)
    assert len(found) == 80
    head, tail = found.split(" … ")
    assert len(head) == 53
    assert digits.startswith(head)
    assert digits.endswith(tail)


def test_a_short_text_stays_whole() -> None:
    for text in ("", "a", "x" * 80, "18.8 mNm/A"):
        assert excerpt(text) == text
    assert excerpt("a\tb\n c\x00d") == "a b c d"
    assert excerpt("a  b") == "a b"


def test_signs_that_do_not_print_are_gone_before_the_text_is_cut() -> None:
    """A text of blanks with a word at each end is short, however long it was."""
    assert excerpt("first" + " " * 200 + "last") == "first last"


def test_an_error_is_one_sentence_of_at_most_300() -> None:
    assert str(MotorfolioError("File\nx.csv: " + "9" * 1000)).startswith("File x.csv: 999")
    assert len(str(MotorfolioError("9" * 1000))) == 300
    assert str(MotorfolioError("9" * 300)) == "9" * 300
