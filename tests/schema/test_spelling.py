"""Which known words are near a misspelt one: similarity is twice the letters in common in their
order over all letters of both."""

from __future__ import annotations

import pytest

from motorfolio.schema.spelling import nearest


def test_one_word_is_meant_unless_more_are_asked_for() -> None:
    known = ["torque", "torques", "speed"]
    assert nearest("torqe", known) == ["torque"]
    assert nearest("torqe", known, most=2) == ["torque", "torques"]
    assert nearest("torqe", known, most=3) == ["torque", "torques"]


@pytest.mark.parametrize(
    ("text", "near"),
    # the a's in common: 2·3/10 = 60 %, then 2·29/97 = 59.8 % and 2·31/103 = 60.2 %
    [("aaabb", True), ("a" * 29 + "b" * 28, False), ("a" * 31 + "b" * 32, True)],
)
def test_words_are_near_from_sixty_percent_on(text: str, near: bool) -> None:
    known = {57: "a" * 29 + "c" * 11, 63: "a" * 31 + "c" * 9}.get(len(text), "aaacc")
    assert nearest(text, [known]) == ([known] if near else [])


def test_the_lowest_similarity_may_be_given() -> None:
    assert nearest("speed", ["sped"], least=88) == ["sped"]  # 2·4/9 = 88.9 %
    assert nearest("speed", ["sped"], least=89) == []
    assert nearest("speed", ["torque"]) == []


def test_the_known_words_may_come_one_by_one() -> None:
    assert nearest("sped", (word for word in ("torque", "speed"))) == ["speed"]
