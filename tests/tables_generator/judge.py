"""Reads a generated file with the program and compares what came out with the expectation."""

from __future__ import annotations

import hashlib
import math
import tempfile
import traceback
import unicodedata
from collections import Counter
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from .formats import write_page
from .layouts import build_page
from .page import Page, Wanted
from .recipe import Recipe

IGNORED = dict.fromkeys(map(ord, "\u200b\u200c\u200d\u200e\u200f\u00ad\ufeff"))
DASHES = dict.fromkeys(map(ord, "‐‑‒–—−﹣－"), "-")


def normal(text: object) -> str:
    """Text without case, blanks, invisible signs and kinds of dash, for comparison only."""
    canonical = unicodedata.normalize("NFKC", str(text)).translate(IGNORED).translate(DASHES)
    return "".join(canonical.casefold().split())


@dataclass
class Outcome:
    """What the program made of a file."""

    figures: dict[str, dict[str, dict[str, Any]]] = field(default_factory=dict)
    others: dict[str, dict[str, list[float]]] = field(default_factory=dict)
    temperatures: dict[str, float] = field(default_factory=dict)
    unread: list[dict[str, Any]] = field(default_factory=list)
    refusal: str = ""
    crash: str = ""


def read_file(path: Path) -> Outcome:
    """The figures of a file, read in this process as ``import`` reads it."""
    from motorfolio.catalog.reading import ReadOptions, read
    from motorfolio.catalog.tables import read_tables
    from motorfolio.schema.errors import MotorfolioError

    outcome = Outcome()
    try:
        reading = read(read_tables(path), ReadOptions())
        for batch in reading.batches:
            _take_batch(outcome, batch)
        for item in reading.unread:
            outcome.unread.append(
                {
                    "part": item.part_number,
                    "heading": item.heading,
                    "text": item.text,
                    "guesses": item.guesses,
                    "reason": item.reason,
                }
            )
    except MotorfolioError as error:
        outcome.refusal = str(error)
    except Exception:
        outcome.crash = traceback.format_exc(limit=-3)
    return outcome


def _take_batch(outcome: Outcome, batch: Any) -> None:
    for i, number in enumerate(batch.part_number):
        part = normal(number)
        if part in outcome.figures:
            outcome.crash = f"part number twice: {number}"
        figures = outcome.figures.setdefault(part, {})
        for key, column in batch.figures.items():
            if math.isnan(column.value[i]):
                continue
            convention = column.conventions[column.convention[i]]
            figures[key] = {
                "value": float(column.value[i]),
                "low": float(column.low[i]),
                "high": float(column.high[i]),
                "convention": convention,
            }
        outcome.temperatures[part] = float(batch.reference_temperature[i])
        others = outcome.others.setdefault(part, {})
        for condition in batch.conditions:
            for key, placed in condition.figures.get(i, {}).items():
                others.setdefault(key, []).append(float(placed.value))


@dataclass
class Verdict:
    """Counts of one table's figures, and a line for every fault."""

    recipe: Recipe
    right: int = 0
    doubtful: int = 0
    unread: list[str] = field(default_factory=list)
    wrong: list[str] = field(default_factory=list)
    lost: list[str] = field(default_factory=list)

    @property
    def clean(self) -> bool:
        return not (self.wrong or self.lost or self.unread)

    def kind(self) -> str:
        """The first fault without its numbers, to gather faults of one kind."""
        for name in ("wrong", "lost", "unread"):
            if faults := getattr(self, name):
                return f"{name}: {faults[0].split('|')[0].strip()}"
        return ""


def try_recipe(recipe: Recipe, keep: Path | None = None) -> Verdict:
    """Prints, reads and judges one table; ``keep`` is a folder in which the file stays."""
    page = build_page(recipe)
    name, content = write_page(page)
    if keep is not None:
        keep.mkdir(parents=True, exist_ok=True)
        path = keep / name
        path.write_bytes(content)
        return judge(page, read_file(path))
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / name
        path.write_bytes(content)
        return judge(page, read_file(path))


def fingerprint(recipe: Recipe) -> str:
    return hashlib.sha256(recipe.to_json().encode()).hexdigest()[:10]


def judge(page: Page, outcome: Outcome) -> Verdict:
    """Compares the outcome with the page's expectation."""
    verdict = Verdict(page.recipe)
    count = sum(len(f) for f in page.figures.values())
    if outcome.crash:
        verdict.wrong.append(f"crash: {outcome.crash.strip().splitlines()[-1]} | {outcome.crash}")
        return verdict
    if outcome.refusal:
        verdict.unread += [f"refused | {outcome.refusal}"] * count
        return verdict
    for part, figures in page.figures.items():
        name = normal(part)
        if name not in outcome.figures:
            verdict.lost += [f"no such motor | {part}, found {list(outcome.figures)}"] * max(
                1, len(figures)
            )
            continue
        _judge_motor(page, part, outcome, verdict)
    known = {normal(p) for p in page.figures}
    verdict.wrong += [f"invented motor | {p!r}" for p in outcome.figures if p not in known]
    return verdict


def _judge_motor(page: Page, part: str, outcome: Outcome, verdict: Verdict) -> None:
    found = outcome.figures[normal(part)]
    others = outcome.others.get(normal(part), {})
    wanted = page.figures[part]
    conditioned = page.conditioned.get(part, {})
    for key, figure in wanted.items():
        if key in found:
            fault = _fault(figure, found[key])
            if fault:
                verdict.wrong.append(f"{key}: {fault} | {part}: printed {figure.text!r}, "
                                     f"{figure.value} became {found[key]}")  # fmt: skip
            else:
                verdict.right += 1
        elif figure.optional:
            continue
        elif item := _listed(page, key, part, figure.text, outcome):
            if figure.doubtful:
                verdict.doubtful += 1
            else:
                reason = Counter(item["reason"].split()).most_common()
                verdict.unread.append(
                    f"{key} | {part}: {figure.text!r}: {item['reason']}" if reason else key
                )
        else:
            verdict.lost.append(f"{key} | {part}: {figure.text!r}")
    for key, values in conditioned.items():
        seen = [found[key]["value"]] if key in found else []
        seen += others.get(key, [])
        for value in seen:
            if not any(_close(value, v) for v in values):
                verdict.wrong.append(f"{key}: conditions | {part}: {value}, not of {values}")
        for value in values:
            if any(_close(value, v) for v in seen):
                verdict.right += 1
            elif item := _listed(page, key, part, "", outcome):
                verdict.unread.append(f"{key} of a condition | {part}: {value}: {item['reason']}")
            else:
                verdict.lost.append(f"{key} of a condition | {part}: {value}")
    for key, values in others.items():
        known = key in wanted or key in conditioned or key in page.allowed
        if not known and not page.other_numbers:
            verdict.wrong.append(f"{key}: invented condition | {part}: {values}")
    for key in found:
        if key not in wanted and key not in conditioned and key not in page.allowed:
            verdict.wrong.append(f"{key}: not on the sheet | {part}: {found[key]}")
    expected = page.reference_temperature
    if page.recipe.layout == "rows, two sheets":
        expected = None  # whether the note under the second table holds for the first is open
    if expected is not None and not _close(outcome.temperatures[normal(part)], expected):
        verdict.wrong.append(
            f"reference temperature | {part}: {outcome.temperatures[normal(part)]}, not {expected}"
        )


def _fault(wanted: Wanted, found: dict[str, Any]) -> str:
    if not _close(found["value"], wanted.value):
        return "value"
    for end in ("low", "high"):
        expected = getattr(wanted, end)
        if expected is not None and not _close(found[end], expected):
            return f"{end} end"
    for name, expected in wanted.convention.items():
        if getattr(found["convention"], name, None) != expected:
            return f"convention {name}"
    return ""


def _close(a: float, b: float) -> bool:
    return math.isclose(a, b, rel_tol=1e-9)


def _listed(page: Page, key: str, part: str, text: str, outcome: Outcome) -> dict[str, Any] | None:
    labels = [normal(label) for label in page.labels.get(key, [])]
    for item in outcome.unread:
        if item["part"] and normal(item["part"]) != normal(part):
            continue
        heading = normal(item["heading"])
        if key in item["guesses"] or any(
            label == heading or (len(label) > 2 and label in heading) for label in labels
        ):
            return item
        if len(text) > 2 and normal(text) == normal(item["text"]):
            return item
    return None
