"""Scores the reading of the hand-made datasheet tables in this folder.

Run as ``python tests/handmade/score.py [NAME...]``: one line a table, with the figures read
right, listed as unread, silently wrong, and missing without being listed, then what is wrong.

Every table NAME has its expectation in ``NAME.expect.json``, written by hand from the sheet:

- ``file``: the table; one that is not in this folder is made by a ``build_*.py`` script,
- ``why``, ``args`` (further arguments of ``import``), ``complete`` (false: the sheet gives more
  numeric figures than the expectation lists),
- ``motors``: part number -> ``figures`` {key: value in SI as published, ``printed``, and where the
  sheet states them ``low``, ``high``, ``qualifier``, ``convention``}, ``texts``, ``conditions``
  [{``when``: [words of which one must stand in the condition's name], ``figures``}],
  ``points`` [[numbers in SI]], ``also`` (other names that would do),
- ``point_headings``: headings of the points; ``other_numbers``: what else may stand in a point,
- flags of a figure: ``optional`` (may be absent), ``or_unread`` (undecidable enough that listing
  it is as right as reading it), ``or_point`` (may stand among the points instead),
- ``headings``: key -> heading as printed, to recognise it in the list of what is unread,
- ``must_be_unread``, ``unread_allowed``, ``not_figures``, ``error``.
"""

from __future__ import annotations

import contextlib
import importlib.util
import io
import json
import math
import sys
import tempfile
import unicodedata
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from typing import Any

HERE = Path(__file__).resolve().parent
TEXT_KEYS = {
    "part_number",
    "maker",
    "series",
    "description",
    "connection",
    "magnet",
    "commutation",
    "protection",
}
DASHES = dict.fromkeys(map(ord, "‐‑‒–—−﹣－"), "-")
IGNORED = dict.fromkeys(map(ord, "\u200b\u200c\u200d\u200e\u200f\u00ad\ufeff"))


@dataclass
class Score:
    """How one table was read: counts of figures, and a line for each fault."""

    name: str
    right: int = 0
    unread: int = 0
    wrong: list[str] = field(default_factory=list)
    missing: list[str] = field(default_factory=list)
    superfluous: list[str] = field(default_factory=list)

    def line(self) -> str:
        """One line of the printed table."""
        return (
            f"{self.name:34} {self.right:6d} {self.unread:7d} {len(self.wrong):6d} "
            f"{len(self.missing):8d} {len(self.superfluous):8d}"
        )


def normal(text: object) -> str:
    """Text without case, blanks, invisible signs and kinds of dash, for comparison only."""
    canonical = unicodedata.normalize("NFKC", str(text)).translate(IGNORED).translate(DASHES)
    return "".join(canonical.casefold().split())


def names() -> list[str]:
    """The tables in this folder, by the names of their expectations."""
    return sorted(p.name.removesuffix(".expect.json") for p in HERE.glob("*.expect.json"))


def expectation(name: str) -> dict[str, Any]:
    """The expectation of one table."""
    return json.loads((HERE / f"{name}.expect.json").read_text(encoding="utf-8"))


@cache
def _built() -> tuple[tempfile.TemporaryDirectory[str], Path]:
    holder = tempfile.TemporaryDirectory(prefix="handmade", ignore_cleanup_errors=True)
    for script in sorted(HERE.glob("build_*.py")):
        spec = importlib.util.spec_from_file_location(script.stem, script)
        if spec is None or spec.loader is None:
            raise ImportError(script)
        module = importlib.util.module_from_spec(spec)
        spec.loader.exec_module(module)
        module.build(Path(holder.name))
    return holder, Path(holder.name)


def source(file: str) -> Path:
    """The table's path: in this folder, or made by a builder in a temporary one."""
    return HERE / file if (HERE / file).exists() else _built()[1] / file


def run(name: str) -> tuple[int, str, str, BaseException | None]:
    """Imports a table as a user would: exit status, standard output, standard error, crash."""
    from motorfolio.catalog.cli import main

    wanted = expectation(name)
    out, err = io.StringIO(), io.StringIO()
    status, crash = 2, None
    with tempfile.TemporaryDirectory() as folder:
        catalog = ["--catalog", str(Path(folder) / "catalog.sqlite")]
        call = ["import", str(source(wanted["file"])), *wanted.get("args", []), *catalog]
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
            try:
                status = main([*call, "--dry-run", "--json"])
            except SystemExit as stop:
                status = stop.code if isinstance(stop.code, int) else 2
            except BaseException as error:
                crash = error
    return status, out.getvalue(), err.getvalue(), crash


def score(name: str) -> Score:
    """Imports one table and compares what came out with the expectation."""
    wanted = expectation(name)
    status, out, err, crash = run(name)
    card = Score(name)
    if crash is not None:
        card.wrong.append(f"crash: {crash!r}")
        return card
    if wanted.get("error"):
        if status != 2:
            card.wrong.append(f"exit status {status}, expected 2")
        elif normal(wanted["error"]) not in normal(err):
            card.wrong.append(f"the message lacks {wanted['error']!r}: {err.strip()}")
        elif "Traceback" in err or out.strip():
            card.wrong.append("a traceback, or output beside the error")
        else:
            card.right += 1
        return card
    if status != 0:
        card.missing.append(f"exit status {status}: {err.strip()[:300]}")
        return card
    compare(wanted, json.loads(out), card)
    return card


def compare(wanted: dict[str, Any], document: dict[str, Any], card: Score) -> None:
    """Counts the figures of an import document (interface of ``import --json``) into ``card``."""
    files = document["files"]
    unread = [item for file in files for item in file.get("unread", [])]
    motors: dict[str, dict[str, Any]] = {}
    for file in files:
        for motor in file.get("motors", []):
            part = normal(motor["part_number"])
            if part in motors:
                card.wrong.append(f"{motor['part_number']}: reported twice")
            motors[part] = motor
    banned = set(wanted.get("not_figures", []))
    for part, expected in wanted["motors"].items():
        aliases = [part, *expected.get("also", [])]
        motor = next((motors.pop(normal(a)) for a in aliases if normal(a) in motors), None)
        if motor is None:
            count = len(expected.get("figures", {}))
            card.missing.append(f"{part}: no such motor ({count} figures)")
            continue
        _compare_motor(part, expected, motor, unread, wanted, card)
        for key in banned & set(_numeric(motor.get("figures", {}))):
            card.wrong.append(f"{part}: {key} must not be read")
    for motor in motors.values():
        card.wrong.append(f"{motor['part_number']}: the sheet has no such motor")
    for fragment in wanted.get("must_be_unread", []):
        if not any(_mentions(item, fragment) for item in unread):
            card.missing.append(f"not listed as unread: {fragment!r}")
    known = [
        *wanted.get("must_be_unread", []),
        *wanted.get("unread_allowed", []),
        *wanted.get("headings", {}).values(),
    ]
    for item in unread:
        if not any(_mentions(item, fragment) for fragment in known):
            card.superfluous.append(f"unread: {item.get('heading')!r} {item.get('text')!r}")


def _compare_motor(
    part: str,
    expected: dict[str, Any],
    motor: dict[str, Any],
    unread: list[dict[str, Any]],
    wanted: dict[str, Any],
    card: Score,
) -> None:
    parts = [None, "", motor["part_number"]]
    mine = [u for u in unread if u.get("part_number") in parts]
    figures = motor.get("figures", {})
    points = motor.get("points") or []
    numbers = [number for point in points for number in _values(point)]
    for condition in motor.get("conditions") or []:
        numbers += [n for f in _numeric(condition["figures"]).values() for n in _values(f)]
    headings = wanted.get("headings", {})
    for key, figure in expected.get("figures", {}).items():
        found = _numeric(figures).get(key)
        where = f"{part}: {key}"
        if found is not None:
            _judge(where, figure, found, card)
        elif figure.get("or_point") and _among(figure["value"], numbers):
            card.right += 1
        elif figure.get("optional"):
            continue
        elif _listed(key, figure, headings.get(key), mine):
            card.right += bool(figure.get("or_unread"))
            card.unread += not figure.get("or_unread")
        else:
            card.missing.append(f"{where} ({figure.get('printed')})")
    for key, text in expected.get("texts", {}).items():
        found = figures.get(key) or motor.get(key) or motor.get("model", {}).get(key)
        found = found.get("value") if isinstance(found, dict) else found
        if found is None:
            card.missing.append(f"{part}: {key} ({text})")
        elif normal(found) != normal(text):
            card.wrong.append(f"{part}: {key} is {found!r}, not {text!r}")
        else:
            card.right += 1
    _compare_conditions(part, expected, motor, mine, headings, card)
    for point in expected.get("points", []):
        if any(all(_among(n, _values(found)) for n in point) for found in points) or all(
            _among(n, numbers) or _among(n, _values(list(_numeric(figures).values())))
            for n in point
        ):
            card.right += len(point)
        elif any(_mentions(u, h) for u in mine for h in wanted.get("point_headings", [])):
            card.unread += len(point)
        else:
            card.missing.append(f"{part}: point {point}")
    if wanted.get("complete", True):
        _find_inventions(part, expected, motor, wanted.get("other_numbers", []), card)


def _compare_conditions(
    part: str,
    expected: dict[str, Any],
    motor: dict[str, Any],
    mine: list[dict[str, Any]],
    headings: dict[str, str],
    card: Score,
) -> None:
    for condition in expected.get("conditions", []):
        named = {
            key: figure
            for found in motor.get("conditions") or []
            if any(normal(word) in normal(found.get("when")) for word in condition["when"])
            for key, figure in _numeric(found["figures"]).items()
        }
        for key, figure in condition["figures"].items():
            where = f"{part}, {condition['when'][0]}: {key}"
            if key in named:
                _judge(where, figure, named[key], card)
            elif figure.get("optional"):
                continue
            elif _listed(key, figure, headings.get(key), mine):
                card.unread += 1
            else:
                card.missing.append(f"{where} ({figure.get('printed')})")


def _find_inventions(
    part: str,
    expected: dict[str, Any],
    motor: dict[str, Any],
    others: list[float],
    card: Score,
) -> None:
    blocks = [expected.get("figures", {})]
    blocks += [condition["figures"] for condition in expected.get("conditions", [])]
    for key in _numeric(motor.get("figures", {})):
        if key not in blocks[0]:
            card.wrong.append(f"{part}: {key} is not on the sheet")
    allowed = list(others)
    allowed += [figure["value"] for block in blocks for figure in block.values()]
    allowed += [number for point in expected.get("points", []) for number in point]
    for condition in motor.get("conditions") or []:
        for key, figure in _numeric(condition["figures"]).items():
            if not _among(figure["value"], allowed):
                card.wrong.append(f"{part}, {condition.get('when')}: {key} is not on the sheet")
    for point in motor.get("points") or []:
        for number in _values(point):
            if not _among(number, allowed):
                card.wrong.append(f"{part}: point with {number}, which is not on the sheet")


def _judge(where: str, figure: dict[str, Any], found: dict[str, Any], card: Score) -> None:
    for name in ("value", "low", "high"):
        if name in figure and not _close(figure[name], found.get(name)):
            card.wrong.append(
                f"{where}: {name} {found.get(name)}, not {figure[name]} ({figure.get('printed')})"
            )
            return
    if "qualifier" in figure and found.get("qualifier") != figure["qualifier"]:
        card.wrong.append(f"{where}: qualifier {found.get('qualifier')}")
        return
    convention = found.get("convention") or {}
    for name, value in figure.get("convention", {}).items():
        got = convention.get(name)
        if got != value and not (isinstance(value, float | int) and _close(value, got)):
            card.wrong.append(f"{where}: convention {name} is {got!r}, the sheet says {value!r}")
            return
    card.right += 1


def _listed(
    key: str, figure: dict[str, Any], heading: str | None, unread: list[dict[str, Any]]
) -> bool:
    printed = str(figure.get("printed", "")).split(" ")[0]
    for item in unread:
        if key in (item.get("guesses") or []):
            return True
        if heading and _mentions(item, heading):
            return True
        if len(printed) > 1 and normal(printed) in normal(item.get("text")):
            return True
    return False


def _mentions(item: dict[str, Any], fragment: str) -> bool:
    wanted = normal(fragment)
    for field_name in ("heading", "text"):
        text = normal(item.get(field_name) or "")
        if text == wanted or (len(wanted) > 2 and wanted in text):
            return True
    return False


def _numeric(figures: dict[str, Any]) -> dict[str, Any]:
    return {
        key: figure
        for key, figure in figures.items()
        if key not in TEXT_KEYS and isinstance(figure, dict) and figure.get("value") is not None
    }


def _values(node: Any) -> list[float]:
    """Every number under the name ``value``, or bare, in a nest of lists and objects."""
    if isinstance(node, dict):
        if isinstance(node.get("value"), float | int):
            return [float(node["value"])]
        skipped = ("row", "column", "page", "low", "high", "cell")
        return [n for key, item in node.items() if key not in skipped for n in _values(item)]
    if isinstance(node, list):
        return [number for item in node for number in _values(item)]
    return [float(node)] if isinstance(node, float | int) and not isinstance(node, bool) else []


def _close(wanted: float, got: object) -> bool:
    return isinstance(got, float | int) and math.isclose(
        wanted, got, rel_tol=1e-9, abs_tol=1e-15 if wanted == 0 else 0.0
    )


def _among(wanted: float, numbers: list[float]) -> bool:
    return any(_close(wanted, number) for number in numbers)


def report(chosen: list[str]) -> int:
    """Prints the table and every fault; the number of faults."""
    cards = [score(name) for name in chosen]
    total = Score("all")
    print(f"{'table':34} {'right':>6} {'unread':>7} {'wrong':>6} {'missing':>8} {'needless':>8}")
    for card in cards:
        print(card.line())
        total.right += card.right
        total.unread += card.unread
        total.wrong += card.wrong
        total.missing += card.missing
        total.superfluous += card.superfluous
    print(total.line())
    for card in cards:
        for kind in ("wrong", "missing", "superfluous"):
            for fault in getattr(card, kind):
                print(f"{card.name}: {kind}: {fault}")
    return len(total.wrong) + len(total.missing)


if __name__ == "__main__":
    sys.exit(1 if report(sys.argv[1:] or names()) else 0)
