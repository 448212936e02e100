"""A small share of the fuzz run, and the inputs on which it once found a fault."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from motorfolio.schema.figure.numerals import NumberStyle
from motorfolio.schema.figure.read import FigureError, read_figure
from motorfolio.schema.units.read import UnitError, quantity, read_unit

from .files import try_file
from .guard import run
from .headings import try_heading
from .texts import try_text

SHARES = {"texts": (try_text, 4000), "tables": (try_heading, 60), "files": (try_file, 60)}


@pytest.mark.parametrize("name", SHARES)
def test_random_input_is_read_or_refused(name: str) -> None:
    """No traceback, no hang, no message but one sentence: a part of ``python -m tests.fuzz``."""
    target, count = SHARES[name]
    assert run(target, 7_000_000_000, count) == []


def test_the_guard_sees_a_hang_a_crash_and_a_death() -> None:
    """The fuzz run itself can fail: each kind of harm is a fault, and the rest still runs."""

    def harm(seed: int) -> str:
        if seed == 1:
            raise ValueError
        if seed == 2:
            return "wrong: so"
        if seed == 3:
            bytearray(3_000_000_000)
        if seed == 4:
            while True:
                pass
        if seed == 5:
            import os

            os._exit(3)
        return ""

    faults = run(harm, 0, 8)
    assert [(f.seed, f.kind) for f in faults] == [
        (1, "ValueError"),
        (2, "wrong"),
        (3, "memory"),
        (4, "slow"),
        (5, "death"),
    ]


POINT = NumberStyle(".")
CALLS: dict[str, Callable[[str], object]] = {
    "number": lambda text: read_figure(text, POINT),
    "unit": lambda text: read_unit(text, ("N·m", "1")),
    "quantity": lambda text: quantity(text, ("N·m",)),
}
FOUND = [
    ("unit", "N·m·√"),
    ("unit", "√"),
    ("unit", "√("),
    ("unit", "\nkilog"),
    ("unit", "10^999 N·m"),
    ("unit", "9" * 400),
    ("unit", "'h" * 50),
    ("number", "k. A.0,25} \n"),
    ("number", "\n3-4"),
    ("number", "9" * 4000 + "≥"),
    ("quantity", "1 √N·m"),
    ("quantity", "1e999 N·m"),
    ("quantity", "\n"),
]


@pytest.mark.parametrize(("kind", "text"), FOUND)
def test_texts_that_once_broke_something(kind: str, text: str) -> None:
    """Found by the long run: refused (or read) with one sentence of bounded length."""
    message = ""
    try:
        CALLS[kind](text)
    except (FigureError, UnitError) as error:
        message = str(error)
    assert "\n" not in message
    assert len(message) < 1000
