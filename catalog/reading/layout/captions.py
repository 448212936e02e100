"""Captions over groups of headings: which columns each of them covers."""

from ....schema.figure.signs import plain
from ..headings.phrase import section_of
from ..model import Table
from .heads import context_of


def settle_sections(table: Table) -> None:
    """Captions that stand over the middle of their group: move the borders where that gives
    every section figures that it can have, and none twice."""
    captions = [f.captions[-1] if f.captions else "" for f in table.fields]
    order = [c for i, c in enumerate(captions) if c and (i == 0 or captions[i - 1] != c)]
    while order and not section_of(order[-1]):
        order.pop()  # "Constants" behind the sections makes no figure another one
    if not order or not all(section_of(c) for c in order):
        return
    keys = [{p.generic for p in f.label.names if p.generic} for f in table.fields]
    first = next(i for i, c in enumerate(captions) if c)
    before = first
    while before > 0 and keys[before - 1]:
        before -= 1
    last = len(keys) - 1
    while last > 0 and (not keys[last] or captions[last] not in order):
        last -= 1
    if _fit(captions, keys) >= 0 and before == first:
        return
    best = (_fit(captions, keys) - (first - before), captions)
    rivals: list[list[str]] = []
    spans = _partitions(before, last + 1, len(order), captions, order)
    for borders in spans:
        attempt = [c if i > last else "" for i, c in enumerate(captions)]
        for k, caption in enumerate(order):
            for i in range(borders[k], borders[k + 1]):
                attempt[i] = caption
        score = _fit(attempt, keys)
        if score > best[0]:
            best, rivals = (score, attempt), []
        elif score == best[0] and best[1] is not captions:
            rivals.append(attempt)
    # Where two ways are as good, a figure between two groups is of neither for sure.
    sure = [c if all(r[i] == c for r in rivals) else "" for i, c in enumerate(best[1])]
    for field, old, new in zip(table.fields, captions, sure, strict=True):
        if old != new:
            rest = field.captions[:-1] if old else field.captions
            field.captions = (*rest, new) if new else rest
            field.section, field.when, field.temperature, field.variant = context_of(
                list(field.captions)
            )
            field.heading = (
                field.heading.replace(plain(old), plain(new))
                if old
                else (f"{plain(new)} › {field.heading}")
            )


def _partitions(start: int, end: int, groups: int, captions: list[str], order: list[str]):
    """Borders of the groups, each of which holds the cell where its caption was printed."""
    anchors = [captions.index(caption) for caption in order]
    if groups > 6:
        return

    def extend(k: int, borders: list[int]):
        if k == groups:
            yield [*borders, end]
            return
        for border in range(anchors[k - 1] + 1, anchors[k] + 1):
            yield from extend(k + 1, [*borders, border])

    yield from extend(1, [start])


def _fit(captions: list[str], keys: list[set]) -> int:
    """Minus the number of generic figures that a section has twice or can't have."""
    seen: set[tuple[str, str]] = set()
    faults = 0
    impossible = {
        ("no_load", "torque"),
        ("no_load", "power"),
        ("no_load", "efficiency"),
        ("stall", "speed"),
        ("stall", "power"),
        ("stall", "efficiency"),
    }
    for caption, generics in zip(captions, keys, strict=True):
        section = section_of(caption) if caption else None
        for g in generics:
            if section is None or (caption, g) in seen or (section, g) in impossible:
                faults += 1
            seen.add((caption, g))
    return -faults
