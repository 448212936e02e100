"""Typographic noise that must not change what is read (common practice, no source)."""

from __future__ import annotations

import re
from random import Random

from .page import Cell, Page
from .recipe import Recipe

FULL_WIDTH = {c: chr(ord(c) + 0xFEE0) for c in map(chr, range(0x21, 0x7F))}
LOST = {"²": "2", "⁻¹": "-1", "³": "3"}


def add_noise(page: Page) -> None:
    """Changes the texts of a page in place, each cell in its own way."""
    recipe = page.recipe
    if not recipe.noise:
        return
    for g, grid in enumerate(page.grids):
        for r, row in enumerate(grid):
            for c, cell in enumerate(row):
                if cell is not None and cell.text:
                    rng = recipe.random(f"noise {g} {r} {c}")
                    cell.text = noisy(recipe, cell.text, rng)
        if "wrapped labels" in recipe.noise:
            _wrap(recipe, grid)
    page.paragraphs = [
        "\n".join(noisy(recipe, line, recipe.random(f"noise {i}")) for line in text.split("\n"))
        for i, text in enumerate(page.paragraphs)
    ]
    page.after = [noisy(recipe, t, recipe.random(f"note noise {i}"))
                  for i, t in enumerate(page.after)]  # fmt: skip


def noisy(recipe: Recipe, text: str, rng: Random) -> str:
    """One text with the recipe's noise."""
    noise = recipe.noise
    if "lost superscripts" in noise and "⁾" not in text:
        for sign, plain in LOST.items():
            text = text.replace(sign, plain)
    if "middle dots" in noise:
        text = text.replace("·", rng.choice("·⋅・•"))
    if "ohm signs" in noise:
        text = text.replace("Ω", rng.choice("ΩΩ"))
    if "micro signs" in noise:
        text = text.replace("µ", rng.choice("µμ"))
    if "minus signs" in noise:
        text = re.sub(r"(?<=min)-(?=1)", lambda _: rng.choice("-−–‑"), text)
    if "full width" in noise and recipe.language in ("ja", "zh") and rng.random() < 0.5:
        text = "".join(FULL_WIDTH.get(c, c) for c in text)
    if "nbsp" in noise and rng.random() < 0.6:
        text = text.replace(" ", "\u00a0")
    if "thin blanks" in noise and rng.random() < 0.6:
        text = text.replace(" ", rng.choice("\u2009\u202f\u2005"))
    if "zero width" in noise and len(text) > 4 and rng.random() < 0.4:
        at = rng.randrange(1, len(text))
        text = text[:at] + rng.choice("\u200b\u200d\ufeff") + text[at:]
    if "direction marks" in noise and rng.random() < 0.4:
        text = "\u200e" + text + "\u200e" * rng.randint(0, 1)
    if "trailing blanks" in noise and recipe.format not in ("text", "pdf"):
        text += rng.choice(["", " ", "  "])
    return text


def _wrap(recipe: Recipe, grid: list[list[Cell | None]]) -> None:
    """Long labels are broken at a blank, as narrow columns make it."""
    if recipe.format not in ("csv", "html", "xlsx", "ods"):
        return
    for r, row in enumerate(grid):
        for c, cell in enumerate(row):
            if cell and " " in cell.text and len(cell.text) > 14 and (r == 0 or c == 0):
                at = [i for i, x in enumerate(cell.text) if x == " "]
                cut = recipe.random(f"wrap {r} {c}").choice(at)
                cell.text = f"{cell.text[:cut]}\n{cell.text[cut + 1 :]}"
