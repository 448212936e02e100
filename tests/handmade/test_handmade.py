"""The hand-made tables: nothing read wrong in silence, nothing dropped in silence.

The expectations were written from the sheets alone, with the exact unit factors of NIST SP 811
(2008 ed.), appendix B.8; the layouts and traps are common practice, no source.
"""

from __future__ import annotations

import pytest
from score import Score, expectation, names, score

CARDS: dict[str, Score] = {}


def card(name: str) -> Score:
    if name not in CARDS:
        CARDS[name] = score(name)
    return CARDS[name]


@pytest.mark.parametrize("name", names())
def test_nothing_is_read_wrong_or_dropped_in_silence(name: str) -> None:
    found = card(name)
    assert not found.wrong, expectation(name)["why"]
    assert not found.missing, expectation(name)["why"]


def test_most_figures_are_read_and_not_merely_listed() -> None:
    cards = [card(name) for name in names()]
    right = sum(c.right for c in cards)
    listed = sum(c.unread + len(c.missing) + len(c.wrong) for c in cards)
    assert right >= 0.95 * (right + listed)
