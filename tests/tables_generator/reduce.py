"""Makes a failing recipe as plain as it can be while it fails in the same way."""

from __future__ import annotations

from collections.abc import Iterator

from .judge import Verdict, try_recipe
from .quantities import ANCHORS
from .recipe import Recipe, formats_for

PLAINEST = {"language": "en", "style": "point", "system": "metric", "encoding": "utf-8",
            "label": "label [unit]"}  # fmt: skip


def simpler(recipe: Recipe) -> Iterator[Recipe]:
    """Recipes with one choice less."""
    for key in recipe.keys:
        if key not in ANCHORS[recipe.kind] and len(recipe.keys) > 3:
            yield recipe.without(keys=tuple(k for k in recipe.keys if k != key))
    for name in ("noise", "features"):
        for entry in getattr(recipe, name):
            yield recipe.without(**{name: tuple(x for x in getattr(recipe, name) if x != entry)})
    for name, value in PLAINEST.items():
        if getattr(recipe, name) != value:
            yield recipe.without(**{name: value})
    for layout in ("rows", "columns"):
        if layout != recipe.layout:
            plain = recipe.without(layout=layout)
            yield plain if recipe.format in formats_for(layout) else plain.without(format="csv")
    if "csv" in formats_for(recipe.layout) and recipe.format != "csv":
        yield recipe.without(format="csv")
    if recipe.windings > 1:
        yield recipe.without(windings=recipe.windings - 1)


def reduce(verdict: Verdict, tries: int = 200) -> Verdict:
    """The plainest recipe found that fails with the same kind of fault."""
    kind, best = verdict.kind(), verdict
    progress = True
    while progress and tries > 0:
        progress = False
        for recipe in simpler(best.recipe):
            tries -= 1
            found = try_recipe(recipe)
            if found.kind() == kind:
                best, progress = found, True
                break
            if tries <= 0:
                break
    return best
