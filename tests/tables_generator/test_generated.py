"""Generated tables: what is printed is read, and what is not read is listed; nothing is wrong.

The long run is ``python -m tests.tables_generator``; every fault it found that was mended stands
in ``cases.jsonl`` as a plain recipe of its kind.
"""

from __future__ import annotations

import json
from collections import Counter
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from .formats import write_page
from .judge import Outcome, Verdict, judge, try_recipe
from .layouts import build_page
from .numbers import STYLES, is_ambiguous, tells_decimal_sign
from .recipe import LAYOUTS, NOISES, Recipe, draw_recipe
from .units import INERTIAS, SPEEDS, TORQUES

CHUNKS, TABLES = 8, 30
CASES = [
    (entry["name"], Recipe.from_json(json.dumps(entry["recipe"])))
    for line in (Path(__file__).parent / "cases.jsonl").read_text(encoding="utf-8").splitlines()
    for entry in [json.loads(line)]
]


def faults(verdict: Verdict) -> list[str]:
    return [f"{verdict.recipe.to_json()}: {fault}" for fault in verdict.wrong + verdict.lost]


@pytest.mark.parametrize("chunk", range(CHUNKS))
def test_generated_tables_are_read_right(chunk: int) -> None:
    """No figure wrong or dropped in silence, at least 99 in 100 read."""
    verdicts = [try_recipe(draw_recipe(9_000_000 + chunk * TABLES + i)) for i in range(TABLES)]
    assert [fault for verdict in verdicts for fault in faults(verdict)] == []
    right = sum(v.right for v in verdicts)
    unread = [f"{v.recipe.to_json()}: {u}" for v in verdicts for u in v.unread]
    assert right >= 0.99 * (right + len(unread)), unread[:20]


@pytest.mark.parametrize(("name", "recipe"), CASES, ids=[name for name, _ in CASES])
def test_tables_that_were_once_read_wrong(name: str, recipe: Recipe) -> None:
    verdict = try_recipe(recipe)
    assert faults(verdict) == []
    assert verdict.unread == []


@settings(max_examples=25, deadline=None, derandomize=True)
@given(
    seed=st.integers(0, 10**6),
    layout=st.sampled_from(["rows", "rows, unit row", "columns", "columns, captions"]),
    noise=st.sets(st.sampled_from(NOISES)),
)
def test_noise_does_not_change_what_is_read(seed: int, layout: str, noise: set[str]) -> None:
    """The same table with any typographic noise is read as well as without."""
    plain = draw_recipe(seed).without(layout=layout, format="csv", noise=())
    if plain.kind == "servo":
        plain = plain.without(kind="block", keys=("nominal_voltage", "no_load_speed", "mass"))
    noisy = try_recipe(plain.without(noise=tuple(sorted(noise))))
    clean = try_recipe(plain)
    assert faults(noisy) == []
    assert noisy.right == clean.right


# ---- the generator itself


def test_factors_agree_with_nist() -> None:
    """NIST SP 811 (2008 ed.), appendix B.8: ozf·in, lbf·in, lb·in², rev/min to 7 digits."""
    torques = {unit.name: unit for unit in TORQUES}
    inertias = {unit.name: unit for unit in INERTIAS}
    assert torques["oz-in"].to_si(1) == pytest.approx(0.007061552, rel=1e-7)
    assert torques["lb-in"].to_si(1) == pytest.approx(0.1129848, rel=3e-7)
    assert inertias["oz-in2"].to_si(16) == pytest.approx(0.0002926397, rel=2e-7)
    assert SPEEDS[0].to_si(1) == pytest.approx(0.1047198, rel=1e-6)


def test_what_is_undecidable_is_known() -> None:
    assert is_ambiguous("1,234")
    assert is_ambiguous("≤ 12.500")
    assert not any(map(is_ambiguous, ["0,234", "1,23", "1.234,5", "1234,567", "1,234,567", "12"]))
    point = STYLES["point"]
    assert tells_decimal_sign("0.234", point)
    assert tells_decimal_sign("12.5", point)
    assert not tells_decimal_sign("1.234", point)
    assert not tells_decimal_sign("5700", point)


def test_the_judge_finds_what_is_wrong() -> None:
    """A reading with one value changed, one motor more, one figure dropped is no clean one."""
    recipe = Recipe(5, keys=("nominal_voltage", "no_load_speed", "mass"))
    page = build_page(recipe)
    write_page(page)
    for figures in page.figures.values():
        figures["mass"].doubtful = False

    class Unstated:
        pass

    def outcome() -> Outcome:
        right = Outcome()
        for part, figures in page.figures.items():
            right.figures[part.casefold().replace(" ", "")] = {
                key: {"value": w.value, "low": w.value, "high": w.value, "convention": Unstated()}
                for key, w in figures.items()
            }
        return right

    assert judge(page, outcome()).clean
    part = next(iter(outcome().figures))
    wrong = outcome()
    wrong.figures[part]["mass"]["value"] *= 1.001
    assert len(judge(page, wrong).wrong) == 1
    more = outcome()
    more.figures["unheard-of"] = {}
    assert len(judge(page, more).wrong) == 1
    less = outcome()
    del less.figures[part]["mass"]
    assert len(judge(page, less).lost) == 1
    less.unread.append({"part": None, "heading": "x", "text": "", "guesses": ("mass",),
                        "reason": "so"})  # fmt: skip
    assert len(judge(page, less).unread) == 1
    extra = outcome()
    extra.figures[part]["torque_constant"] = {"value": 1.0}
    assert len(judge(page, extra).wrong) == 1


def test_recipes_reach_every_layout_and_come_back_from_text() -> None:
    recipes = [draw_recipe(seed) for seed in range(1500)]
    assert set(Counter(r.layout for r in recipes)) == set(LAYOUTS)
    assert all(Recipe.from_json(r.to_json()) == r for r in recipes[:50])
