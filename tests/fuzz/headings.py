"""Tables of random headings, units and cells against the reading."""

from __future__ import annotations

from random import Random

from motorfolio.catalog.reading import ReadingError, ReadOptions, read
from motorfolio.catalog.tables import Grid, TableFile

from ..tables_generator.words import LABELS
from .texts import NUMBER_PARTS, UNIT_PARTS, random_text

WORDS = [w for by_language in LABELS.values() for words in by_language.values() for w in words]
SYMBOLS = [
    "n0",
    "I0",
    "M0",
    "Kt",
    "KE",
    "kM",
    "R",
    "L",
    "J",
    "UN",
    "τ",
    "Rth",
    "p",
    "2p",
    "m",
    "Kv",
]


def _text(rng: Random) -> str:
    kind = rng.randrange(10)
    if kind < 3:
        return random_text(rng, NUMBER_PARTS, 3)
    if kind < 5:
        return (
            rng.choice(WORDS)
            + rng.choice(["", " [", " (", ", ", "\n"])
            + random_text(rng, UNIT_PARTS, 3)
        )
    if kind == 5:
        return rng.choice(SYMBOLS) + rng.choice(["", " "]) + random_text(rng, UNIT_PARTS, 2)
    if kind < 8:
        return rng.choice(["12", "3.5", "0,8", "4500", "1.234", "24", "-", "", ""])
    return rng.choice(["", "Type", "VX22", "1)", "25 °C", rng.choice(WORDS)])


def random_table(rng: Random) -> list[list[str]]:
    """Rows of one length; now and then of a plausible form with a fault in it."""
    width, height = rng.randint(1, 9), rng.randint(1, 9)
    return [[_text(rng) for _ in range(width)] for _ in range(height)]


def try_heading(seed: int) -> str:
    """One random table; '' if it was read or refused with one sentence."""
    rng = Random(seed)
    rows = random_table(rng)
    grid = Grid(rows, list(range(1, len(rows) + 1)), list(range(1, len(rows[0]) + 1)))
    try:
        reading = read(TableFile("random.csv", "", "csv", [grid]), ReadOptions())
        for batch in reading.batches:
            for key, column in batch.figures.items():
                texts = {cell for row in rows for cell in row}
                for text in column.text:
                    if text is not None and not any(text in cell for cell in texts):
                        return f"invented text: {key} {text!r}"
    except ReadingError as error:
        message = str(error)
        return "" if message and "\n" not in message else f"message: {message!r}"
    return ""
