"""Motors that stand more than once in a table: one motor, with all that was printed of it."""

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ...schema.batch import (
    Batch,
    Condition,
    FigureColumn,
    PlacedFigure,
    TextColumn,
    empty_figures,
)
from ...schema.vocabulary import quantities

VOLTAGE = "nominal_voltage"


def merged(batch: Batch) -> tuple[Batch, list[str]]:
    """The batch with every motor once, and a remark for each that stood there more often.

    What a later entry gives and the first does not is taken over. What both give: at another
    nominal voltage it is what the sheet says under that condition; else it is a repeat, which
    checks the first.
    """
    entries: dict[tuple[str, str], list[int]] = {}
    for i, who in enumerate(zip(batch.maker, batch.part_number, strict=True)):
        entries.setdefault(who, []).append(i)
    if len(entries) == len(batch):
        return batch, []
    # conditions and columns are written into below; the batch that was read stays as it was
    copy = replace(
        batch,
        figures={key: f.take(range(len(batch))) for key, f in batch.figures.items()},
        repeats={k: [f.take(range(len(batch))) for f in c] for k, c in batch.repeats.items()},
        texts={
            key: TextColumn(list(t.text), t.row.copy(), t.column.copy())
            for key, t in batch.texts.items()
        },
        conditions=[Condition(c.when, dict(c.figures)) for c in batch.conditions],
        points={i: list(points) for i, points in batch.points.items()},
    )
    remarks = []
    for (_, part), (first, *others) in entries.items():
        remarks += [
            f"{part} stands there more than once: {_merge(copy, first, other)}." for other in others
        ]
    return _take(copy, [first for first, *_ in entries.values()]), remarks


def _merge(batch: Batch, first: int, other: int) -> str:
    voltage = batch.figures.get(VOLTAGE)
    when = None
    if voltage is not None:
        a, b = voltage.value[first], voltage.value[other]
        if np.isfinite(a) and np.isfinite(b) and a != b:
            heading = batch.headings[voltage.heading[other]]
            unit = "" if heading.unit in (voltage.text[other] or "") else f" {heading.unit}"
            when = f"{voltage.text[other]}{unit}"
    for key, figures in batch.figures.items():
        if np.isnan(figures.value[other]) or (when and key == VOLTAGE):
            continue
        if quantities()[key].frame and figures.text[first] == figures.text[other]:
            continue
        if np.isnan(figures.value[first]) and (not when or quantities()[key].frame):
            _copy(figures, other, figures, first)
        elif when:
            condition = _condition(batch, when)
            condition.figures.setdefault(first, {})[key] = _placed(batch, figures, other)
        else:
            _copy(figures, other, _free_repeat(batch, key, first), first)
    for text in batch.texts.values():
        if text.text[first] is None and text.text[other] is not None:
            text.text[first] = text.text[other]
            text.row[first], text.column[first] = text.row[other], text.column[other]
    for key, columns in batch.repeats.items():
        for figures in list(columns):
            if not np.isnan(figures.value[other]):
                _copy(figures, other, _free_repeat(batch, key, first), first)
    for condition in batch.conditions:
        for key, placed in condition.figures.get(other, {}).items():
            condition.figures.setdefault(first, {}).setdefault(key, placed)
    batch.points.setdefault(first, []).extend(batch.points.get(other, ()))
    if when:
        return f"its figures at {when} are kept as those of that condition"
    return "its further figures fill gaps or check the first ones"


def _condition(batch: Batch, when: str) -> Condition:
    for condition in batch.conditions:
        if condition.when == when:
            return condition
    batch.conditions.append(Condition(when))
    return batch.conditions[-1]


def _placed(batch: Batch, f: FigureColumn, i: int) -> PlacedFigure:
    heading = int(f.heading[i])
    return PlacedFigure(
        f.value[i].item(), f.low[i].item(), f.high[i].item(), f.text[i] or "",
        batch.headings[heading].unit if 0 <= heading < len(batch.headings) else "",
        f.conventions[f.convention[i]], f.qualifiers.get(i), int(f.row[i]), int(f.column[i]),
    )  # fmt: skip


def _free_repeat(batch: Batch, key: str, entry: int) -> FigureColumn:
    columns = batch.repeats.setdefault(key, [])
    for column in columns:
        if np.isnan(column.value[entry]):
            return column
    columns.append(empty_figures(len(batch)))
    return columns[-1]


def _copy(source: FigureColumn, i: int, target: FigureColumn, j: int) -> None:
    for part in ("value", "low", "high", "heading", "row", "column"):
        getattr(target, part)[j] = getattr(source, part)[i]
    target.text[j] = source.text[i]
    convention = source.conventions[source.convention[i]]
    if convention not in target.conventions:
        target.conventions.append(convention)
    target.convention[j] = target.conventions.index(convention)
    if i in source.qualifiers:
        target.qualifiers[j] = source.qualifiers[i]


def _take(batch: Batch, keep: Sequence[int]) -> Batch:
    where = np.asarray(keep)
    new = {old: i for i, old in enumerate(keep)}
    return replace(
        batch,
        part_number=[batch.part_number[i] for i in keep],
        maker=[batch.maker[i] for i in keep],
        series=[batch.series[i] for i in keep],
        figures={key: f.take(keep) for key, f in batch.figures.items()},
        commutation=batch.commutation[where],
        commutation_basis=batch.commutation_basis[where],
        magnet=[batch.magnet[i] for i in keep],
        magnet_basis=batch.magnet_basis[where],
        reference_temperature=batch.reference_temperature[where],
        reference_temperature_basis=batch.reference_temperature_basis[where],
        repeats={key: [f.take(keep) for f in fs] for key, fs in batch.repeats.items()},
        texts={
            key: TextColumn([t.text[i] for i in keep], t.row[where], t.column[where])
            for key, t in batch.texts.items()
        },
        conditions=[
            Condition(c.when, {new[i]: f for i, f in c.figures.items() if i in new})
            for c in batch.conditions
        ],
        points={new[i]: points for i, points in batch.points.items() if i in new and points},
    )
