"""Cells that say "as above", and figures of a frame that are printed once for its motors."""

from collections.abc import Collection, Sequence
from itertools import pairwise

from ....schema.vocabulary import quantity
from ..cells import is_ditto
from ..matching.match import Match
from ..model import Field, Table

ROWS_LOOKED_AT = 2000
"""Rows in which a ditto sign must first appear."""


def take_up_dittos(table: Table) -> list[Field]:
    """Cells that say "as above" take the text above; the fields that have such cells."""
    found = [
        f
        for f in table.fields
        if any(is_ditto(t) for t in set(f.texts[:ROWS_LOOKED_AT]) if not t[:1].isdigit())
    ]
    for f in found:
        f.texts = _inherited(f.texts)
    return found


def _inherited(texts: list[str]) -> list[str]:
    out: list[str] = []
    for text in texts:
        out.append(out[-1] if out and is_ditto(text) else text)
    return out


def share_frame(
    table: Table, matches: list[Match], id_field: Field | None, with_dittos: list[Field]
) -> None:
    """A figure of the frame that stands once, at the first of its motors, holds for all; on a page
    also one that stands in the middle under them.

    Where a column names the frame (a model printed once, its windings below), it holds
    down to the next model; without one only if no other motor has the figure.
    """
    groups = _frame_groups(table, matches, id_field, with_dittos)
    for m in matches:
        if m.role != "figure" or m.key is None or not quantity(m.key).frame:
            continue
        f = m.field
        shared = False
        texts = list(f.texts)
        places = list(f.places or table.places)
        for group in groups:
            if len(group) > 1 and texts[group[0]] and not any(texts[k] for k in group[1:]):
                for k in group[1:]:
                    texts[k], places[k] = texts[group[0]], places[group[0]]
                shared = True
        if shared:
            f.texts, f.places = texts, places
            m.reason += "; printed once for the motors of a frame"


def _frame_groups(
    table: Table, matches: list[Match], id_field: Field | None, with_dittos: list[Field]
) -> list[list[int]]:
    """Motors by frame, in runs of neighbours, the one with the figure first; none where the table
    shows no such habit."""
    figures = [m for m in matches if m.role == "figure"]
    if all(m.field.label.forced for m in figures):
        return []  # headed by the names of quantities, as programs write: every row is whole
    n = table.count
    makers = [m.field.texts for m in matches if m.key == "maker"]
    for m in matches:
        if m.key in ("series", "part_number") and m.field is not id_field:
            texts = m.field.texts
            repeated = m.field not in with_dittos and _repeated(texts)
            if texts and texts[0] and not all(texts) and not repeated:
                return _runs(texts, _apart(texts, makers, id_field))
            if m.key == "series" and all(texts):
                return _runs(
                    [t if k == 0 or t != texts[k - 1] else "" for k, t in enumerate(texts)]
                )
    if table.layout == "rows" or not 1 < n <= 200:
        return []
    alone = [(m, filled[0]) for m in figures if len(filled := _filled(m.field.texts)) == 1]
    for at in [0, n // 2] if table.page is not None and n % 2 else [0]:
        once = [m for m, where in alone if where == at]
        frames = [m for m in once if m.key and quantity(m.key).frame]
        # One lone figure may be a gap in the others; two of the frame are a habit of the sheet.
        if len(frames) == len(once) and (len(frames) > 1 or (n > 3 and not at and frames)):
            return [[at, *(k for k in range(n) if k != at)]]
    return []


def _filled(texts: Sequence[str]) -> list[int]:
    return [k for k, text in enumerate(texts) if text]


def _repeated(texts: Sequence[str]) -> bool:
    """Whether a frame's name stands at several of its motors: then an empty cell names no frame."""
    return any(text and text == above for above, text in pairwise(texts))


def _apart(
    frames: Sequence[str], makers: Sequence[Sequence[str]], id_field: Field | None
) -> set[int]:
    """Motors that are none of the frame named above: of another maker, or not named after it
    where that frame's first motor is."""
    apart = {
        k for texts in makers for k in range(1, len(texts)) if texts[k] and texts[k] != texts[k - 1]
    }
    if id_field is not None:
        stem, named = "", False
        for k, (frame, name) in enumerate(zip(frames, id_field.texts, strict=True)):
            if frame:
                stem = _letters(frame)
                named = bool(stem) and _letters(name).startswith(stem)
            elif named and not _letters(name).startswith(stem):
                apart.add(k)
    return apart


def _letters(text: str) -> str:
    return "".join(filter(str.isalnum, text)).casefold()


def _runs(texts: Sequence[str], apart: Collection[int] = ()) -> list[list[int]]:
    """Indices in groups, a new one at every text and at every index of ``apart``."""
    groups: list[list[int]] = []
    for k, text in enumerate(texts):
        if text or k in apart or not groups:
            groups.append([k])
        else:
            groups[-1].append(k)
    return groups
