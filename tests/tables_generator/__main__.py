"""The long run: ``python -m tests.tables_generator --tables 20000 --seed 1 --jobs 2``.

Prints counts by layout, language, format and noise, then each kind of fault with its number and
the plainest recipe found for it; with ``--failures FOLDER`` those tables are saved there.
"""

from __future__ import annotations

import argparse
import sys
import time
from collections import Counter, defaultdict
from collections.abc import Iterable
from concurrent.futures import ProcessPoolExecutor
from pathlib import Path

from .judge import Verdict, fingerprint, try_recipe
from .recipe import Recipe, draw_recipe
from .reduce import reduce


def run_seed(seed: int) -> Verdict:
    return try_recipe(draw_recipe(seed))


def groups_of(recipe: Recipe) -> list[tuple[str, str]]:
    """The groups in which a table is counted."""
    groups = [("all", "tables"), ("layout", recipe.layout), ("format", recipe.format)]
    groups += [("language", recipe.language), ("kind", recipe.kind), ("units", recipe.system)]
    groups += [("numbers", recipe.style), ("encoding", recipe.encoding)]
    groups += [("noise", name) for name in recipe.noise or ("none",)]
    return groups + [("feature", name) for name in recipe.features or ("none",)]


def count(verdicts: Iterable[Verdict]) -> tuple[dict[tuple[str, str], Counter[str]], list[Verdict]]:
    """Counts by group, and the verdicts with faults."""
    table: dict[tuple[str, str], Counter[str]] = defaultdict(Counter)
    failed = []
    for verdict in verdicts:
        numbers = {
            "tables": 1,
            "right": verdict.right,
            "doubtful": verdict.doubtful,
            "listed": len(verdict.unread),
            "wrong": len(verdict.wrong),
            "lost": len(verdict.lost),
        }
        for group in groups_of(verdict.recipe):
            table[group].update(numbers)
        if not verdict.clean:
            failed.append(verdict)
    return table, failed


def report(table: dict[tuple[str, str], Counter[str]]) -> None:
    names = ("tables", "right", "doubtful", "listed", "wrong", "lost")
    print(f"{'':42}" + "".join(f"{name:>10}" for name in names) + "   right %")
    for (group, name), counter in sorted(table.items()):
        must = sum(counter[n] for n in ("right", "listed", "wrong", "lost"))
        share = 100 * counter["right"] / must if must else 0.0
        row = "".join(f"{counter[n]:>10}" for n in names)
        print(f"{group:10}{name:32}{row}{share:10.3f}")


def main() -> int:
    parser = argparse.ArgumentParser(prog="python -m tests.tables_generator", description=__doc__)
    parser.add_argument("--tables", type=int, default=1000)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--jobs", type=int, default=1)
    parser.add_argument("--failures", type=Path, help="folder for the failing tables")
    parser.add_argument("--kinds", type=int, default=30, help="how many kinds of fault to show")
    parser.add_argument("--recipe", help="try this one recipe (JSON) and show its faults")
    options = parser.parse_args()
    if options.recipe:
        verdict = try_recipe(Recipe.from_json(options.recipe), options.failures)
        print(*verdict.wrong, *verdict.lost, *verdict.unread, f"{verdict.right} right", sep="\n")
        return 0 if verdict.clean else 1
    start = time.monotonic()
    seeds = range(options.seed * 1_000_000, options.seed * 1_000_000 + options.tables)
    if options.jobs > 1:
        with ProcessPoolExecutor(options.jobs) as pool:
            table, failed = count(pool.map(run_seed, seeds, chunksize=50))
    else:
        table, failed = count(map(run_seed, seeds))
    report(table)
    print(f"{time.monotonic() - start:.0f} s")
    _show_faults(failed, options.kinds, options.failures)
    return 1 if any(v.wrong or v.lost for v in failed) else 0


def _show_faults(failed: list[Verdict], limit: int, folder: Path | None) -> None:
    kinds: dict[str, list[Verdict]] = defaultdict(list)
    for verdict in failed:
        kinds[verdict.kind()].append(verdict)
    order = {"wrong": 0, "lost": 1, "unread": 2}
    ranked = sorted(kinds.items(), key=lambda x: (order[x[0].partition(":")[0]], -len(x[1])))
    for kind, verdicts in ranked[:limit]:
        plain = reduce(verdicts[0])
        faults = plain.wrong or plain.lost or plain.unread
        print(f"\n{kind}: {len(verdicts)} tables\n  {faults[0][:400]}\n  {plain.recipe.to_json()}")
        if folder is not None:
            place = folder / fingerprint(plain.recipe)
            try_recipe(plain.recipe, place)
            (place / "recipe.json").write_text(plain.recipe.to_json(), encoding="utf-8")
            (place / "faults.txt").write_text("\n".join(faults), encoding="utf-8")


if __name__ == "__main__":
    sys.exit(main())
