"""Misspelt words: which of the known ones may have been meant."""

from collections.abc import Iterable


def nearest(text: str, known: Iterable[str], most: int = 1, least: float = 60) -> list[str]:
    """At most ``most`` of the known words, the likeliest first.

    ``least`` is the lowest similarity, in percent: twice the letters in common in their order
    over all letters of both.
    """
    from rapidfuzz import fuzz, process  # only where something is refused, and help comes fast

    words = [*known]
    found = process.extract(text, words, scorer=fuzz.ratio, limit=most, score_cutoff=least)
    return [word for word, _, _ in found]
