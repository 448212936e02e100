"""The score with its interval, by module and by kind of mutant."""

import tomllib
from collections import Counter
from dataclasses import dataclass
from pathlib import Path

from scipy.stats import binomtest

from .mutants import AT_LEAST, ROOT, Mutant
from .trial import PATIENCE, SLOWER, SURVIVED, TIMEOUT

PAGE = ROOT / "docs" / "mutation.md"
JUDGED = Path(__file__).with_name("equivalent.toml")


@dataclass(frozen=True)
class Row:
    mutant: Mutant
    outcome: str
    tests: int

    def as_json(self) -> dict:
        return {
            "name": self.mutant.name,
            "module": self.mutant.module,
            "line": self.mutant.line,
            "operator": self.mutant.operator,
            "occurrence": self.mutant.occurrence,
            "outcome": self.outcome,
            "tests": self.tests,
            "difference": self.mutant.difference() if self.outcome == SURVIVED else "",
        }


def interval(killed: int, of: int) -> tuple[float, float]:
    """Wilson's interval at 95 % for a share, as scipy computes it."""
    found = binomtest(killed, of).proportion_ci(0.95, method="wilson")
    return found.low, found.high


def judged() -> dict[tuple[str, str], str]:
    """Why survivors change nothing that a test should notice, by module and difference."""
    with JUDGED.open("rb") as file:
        entries = tomllib.load(file)["mutant"]
    return {(entry["module"], entry["change"].strip()): entry["why"] for entry in entries}


def page(rows: list[Row], places: dict[str, int], *, seed: int, tests: int) -> str:
    """The page of the guide: score, interval, modules, kinds, and all that survived."""
    equal = judged()
    survived = sorted(
        (row for row in rows if row.outcome == SURVIVED),
        key=lambda row: (row.mutant.module, row.mutant.line),
    )
    same = [row for row in survived if _key(row) in equal]
    killed = len(rows) - len(survived)
    lines = [
        "# Mutation tests of `schema/`",
        "",
        "Written by `make mutants`. Small faults are put into the code, one at a time; a fault "
        "that no test notices has survived. The faults are those of cosmic-ray's operators, each "
        "place of the code that one can change counted once, with one of its replacements drawn. "
        "Annotations, removed caches, and arithmetic replaced by that of bits are left out. The "
        "sample is drawn by a seed, from all modules in proportion to their places and at least "
        f"{AT_LEAST} of each. The tests are the {tests} quick ones: `tests/schema` without the "
        "comparison with a simulation, and `tests/search/test_axis_and_moves.py`. Each mutant "
        "meets those that run the changed statement, the quickest first, until one fails, and none "
        f"is begun after {PATIENCE:g} s of processor time; a test that takes {SLOWER:g} times its "
        "usual time has noticed.",
        "",
        "| | mutants | killed | share | 95 % interval (Wilson) |",
        "| --- | ---: | ---: | ---: | --- |",
        _share("all", killed, len(rows)),
        _share("without those judged equal", killed, len(rows) - len(same)),
        "",
        f"Seed {seed}, of {sum(places.values())} places; "
        f"{sum(row.outcome == TIMEOUT for row in rows)} killed by the time they took; "
        f"{len(survived)} survived, of which {len(same)} are judged equal: they change nothing "
        "that a user or a caller could see.",
        "",
        "## By module",
        "",
        *_table("module", [row.mutant.module for row in rows], rows),
        "",
        "## By kind of change",
        "",
        *_table("change", [row.mutant.kind for row in rows], rows),
        "",
        "## Survivors judged equal",
        "",
        *_list(same, equal),
        "",
        "## Other survivors",
        "",
        *_list([row for row in survived if row not in same], equal),
    ]
    return "\n".join(lines) + "\n"


def _key(row: Row) -> tuple[str, str]:
    return row.mutant.module, row.mutant.difference().strip()


def _share(name: str, killed: int, of: int) -> str:
    low, high = interval(killed, of)
    return f"| {name} | {of} | {killed} | {killed / of:.1%} | {low:.1%} to {high:.1%} |"


def _table(name: str, keys: list[str], rows: list[Row]) -> list[str]:
    drawn, killed = (
        Counter(keys),
        Counter(key for key, row in zip(keys, rows, strict=True) if row.outcome != SURVIVED),
    )
    return [
        f"| {name} | mutants | killed | share |",
        "| --- | ---: | ---: | ---: |",
        *(f"| `{key}` | {n} | {killed[key]} | {killed[key] / n:.0%} |"
          for key, n in sorted(drawn.items())),
    ]  # fmt: skip


def _list(rows: list[Row], equal: dict[tuple[str, str], str]) -> list[str]:
    lines = []
    for row in rows:
        before, after = _sides(row.mutant.difference())
        why = equal.get(_key(row))
        lines.append(
            f"- `{row.mutant.module}`:{row.mutant.line}: `{before}` → `{after}`"
            + (f": {why}" if why else "")
        )
    return lines or ["None."]


def _sides(difference: str) -> tuple[str, str]:
    """What stood there and what stands there, each in one line."""
    lines = difference.splitlines()
    return tuple(
        " ".join(line[1:].strip() for line in lines if line.startswith(sign)) for sign in "-+"
    )  # type: ignore[return-value]
