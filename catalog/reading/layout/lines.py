"""What both layouts ask of a line of cells."""

from collections.abc import Callable

from ....schema.figure.signs import plain


def share(texts: list[str], test: Callable[[str], bool]) -> float:
    """The part of the filled cells that pass a test, 0 … 1."""
    filled = [t for t in texts if plain(t)]
    return sum(1 for t in filled if test(t)) / len(filled) if filled else 0.0


def left_of(row: list[str], c: int) -> str:
    """The heading that a column without its own shares with its left neighbour (kg | lb)."""
    return next((row[k] for k in range(c - 1, -1, -1) if row[k]), "")


def text_of(row: list[str]) -> str:
    """A row as one text; what merged cells repeat stands once."""
    texts: list[str] = []
    for t in row:
        if t and (not texts or texts[-1] != t):
            texts.append(t)
    return " ".join(texts)
