"""A page with the output that the program gives today, elisions kept where they stand."""

import difflib
from collections.abc import Mapping, Sequence

from .generated import generate
from .pages import ELISION, Page, Step, matches

ALIKE = 0.6
"""Two lines are the same line, changed, when they are so much alike."""


def renewed(page: Page, outputs: Sequence[tuple[Step, list[str]]]) -> list[str]:
    """The page's lines anew. What has not changed stays as it is."""
    changes: list[tuple[range, list[str]]] = []
    for step, actual in outputs:
        if not matches(step.expected, actual):
            changes.append((step.lines, abridged(step.expected, actual)))
    for name, where in page.regions:
        changes.append((where, generate(name)))
    lines = list(page.lines)
    for where, new in sorted(changes, key=lambda change: change[0].start, reverse=True):
        lines[where.start : where.stop] = new
    return lines


def abridged(expected: Sequence[str], actual: Sequence[str]) -> list[str]:
    """The new output, shortened where the old one was: each part that stood between elisions is
    looked for by its first and last line."""
    if ELISION not in expected:
        return list(actual)
    parts: list[list[str]] = [[]]
    for line in expected:
        if line == ELISION:
            parts.append([])
        else:
            parts[-1].append(line)
    out: list[str] = []
    at = 0
    for number, part in enumerate(parts):
        if number:
            out.append(ELISION)
        if not part:
            continue
        if number == 0:
            begin = 0
        elif number == len(parts) - 1:
            begin = _last(part, actual, at)
        else:
            begin = _like(part[0], actual, at, at)
        end = len(actual) if number == len(parts) - 1 else _end(part, actual, begin)
        out += actual[begin:end]
        at = end
    return out


def _like(line: str, actual: Sequence[str], at: int, otherwise: int) -> int:
    """The line from ``at`` on that is most like this one."""
    scores: Mapping[int, float] = {
        i: difflib.SequenceMatcher(None, line, actual[i], autojunk=False).ratio()
        for i in range(at, len(actual))
    }
    best = max(scores, key=lambda i: (scores[i], -i), default=None)
    return best if best is not None and scores[best] >= ALIKE else min(otherwise, len(actual))


def _end(part: Sequence[str], actual: Sequence[str], begin: int) -> int:
    if len(part) == 1:
        return min(begin + 1, len(actual))
    return min(_like(part[-1], actual, begin + 1, begin + len(part) - 1) + 1, len(actual))


def _last(part: Sequence[str], actual: Sequence[str], at: int) -> int:
    return _like(part[0], actual, at, max(at, len(actual) - len(part)))
