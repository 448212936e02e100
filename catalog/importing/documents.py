"""Documents of motors that have just been read and reconciled, without going by the catalog."""

from collections.abc import Sequence
from typing import Any

import numpy as np

from ...schema.batch import MODEL_BASES, Batch, FigureColumn, PlacedFigure
from ...schema.convention import Commutation
from ...schema.motor import CANONICAL, CONSTANT_BASES, ConstantColumn, Reconciled
from ...schema.vocabulary import quantities
from .. import documents as doc
from ..documents import Document
from ..store.write import AppliedCorrection


def unit_of(key: str, printed: str = "") -> str:
    """The SI unit of a quantity; of a price the currency it is printed in."""
    unit = quantities()[key].unit
    return (printed or unit) if unit == "currency" else unit


def motor_documents(
    reconciled: Reconciled,
    applied: Sequence[AppliedCorrection] = (),
    reasons: dict[int, str] | None = None,
) -> list[Document]:
    """One document a motor, in the order of the batch.

    reasons: of each correction (by id) why it was made.
    """
    batch = reconciled.batch
    findings = _findings_by_motor(reconciled)
    corrected = {(a.entry, a.quantity): a for a in applied}
    figures = [dict[str, Document]() for _ in range(len(batch))]
    for key, column in batch.figures.items():
        for i, document in _figures_of(batch, key, column):
            a = corrected.get((i, key))
            if a is not None:
                published = {"text": a.text, "value": doc.number(a.value),
                             "low": doc.number(a.low), "high": doc.number(a.high)}  # fmt: skip
                reason = (reasons or {}).get(a.correction, "")
                document = doc.correction(document, published, document["text"], reason)
            figures[i][key] = document
    for key, text in batch.texts.items():
        heading = next((h.text for h in batch.headings if h.quantity == key), None)
        for i, words in enumerate(text.text):
            if words is not None:
                place = _cell(batch, int(text.row[i]), int(text.column[i]))
                figures[i][key] = doc.text_figure(words, heading, place)
    constants = [dict[str, Document]() for _ in range(len(batch))]
    for key, column in reconciled.constants.items():
        _add_constants(constants, key, column)
    return [
        doc.motor(
            part_number=batch.part_number[i],
            maker=batch.maker[i],
            series=batch.series[i],
            kind=_kind(batch, i),
            figures=figures[i],
            constants=constants[i],
            findings=[doc.with_motor(f, batch.part_number[i]) for f in findings.get(i, ())],
            repeats=_repeats(batch, i),
            conditions=_conditions(batch, i),
            points=_points(batch, i),
            source={"file": batch.source.file, "sheet": batch.source.sheet,
                    "page": batch.source.page},
        )
        for i in range(len(batch))
    ]  # fmt: skip


def finding_documents(reconciled: Reconciled) -> list[Document]:
    """The findings of a table."""
    return [doc.finding(f) for f in reconciled.findings]


def _findings_by_motor(reconciled: Reconciled) -> dict[int, list[Document]]:
    found: dict[int, list[Document]] = {}
    entries: dict[str, list[int]] = {}
    for i, part in enumerate(reconciled.batch.part_number):
        entries.setdefault(part, []).append(i)
    for finding, entry in zip(reconciled.findings, reconciled.finding_motor, strict=True):
        document = doc.finding(finding)
        concerned = {entry}
        if finding.scope == "column":
            concerned |= {i for part in finding.part_numbers for i in entries.get(part, ())}
        for i in concerned:
            found.setdefault(i, []).append(document)
    return found


def _figures_of(batch: Batch, key: str, f: FigureColumn) -> list[tuple[int, Document]]:
    low, high = f.low.tolist(), f.high.tolist()
    found = []
    for i in np.flatnonzero(~np.isnan(f.value)).tolist():
        number = int(f.heading[i])
        heading = batch.headings[number] if 0 <= number < len(batch.headings) else None
        printed = heading.unit if heading else ""
        document = doc.figure(
            f.text[i], f.value[i].item(), unit_of(key, printed), low[i], high[i],
            f.conventions[f.convention[i]], qualifier=f.qualifiers.get(i),
            heading=heading.text if heading else None, printed_unit=printed,
            place=_cell(batch, int(f.row[i]), int(f.column[i])),
        )  # fmt: skip
        found.append((i, document))
    return found


def _add_constants(constants: list[dict[str, Document]], key: str, c: ConstantColumn) -> None:
    unit = CANONICAL[key]
    for i in np.flatnonzero(~np.isnan(c.value)).tolist():
        constants[i][key] = doc.constant(
            c.value[i].item(), unit, c.low[i].item(), c.high[i].item(),
            CONSTANT_BASES[c.basis[i]], c.sources[c.source[i]],
        )  # fmt: skip


def _kind(batch: Batch, i: int) -> Document:
    return doc.model(
        doc.fact(
            Commutation(int(batch.commutation[i])).word, MODEL_BASES[batch.commutation_basis[i]]
        ),
        doc.fact(batch.magnet[i], MODEL_BASES[batch.magnet_basis[i]]),
        float(batch.reference_temperature[i]),
        MODEL_BASES[batch.reference_temperature_basis[i]],
    )


def _repeats(batch: Batch, i: int) -> dict[str, list[Document]]:
    found: dict[str, list[Document]] = {}
    for key, columns in batch.repeats.items():
        for column in columns:
            if not np.isnan(column.value[i]):
                documents = dict(_figures_of(batch, key, column.take([i])))
                found.setdefault(key, []).append(documents[0])
    return found


def _conditions(batch: Batch, i: int) -> dict[str, dict[str, Document]]:
    found: dict[str, dict[str, Document]] = {}
    for condition in batch.conditions:
        if i in condition.figures:
            found[condition.when] = {
                key: _placed(batch, key, p) for key, p in condition.figures[i].items()
            }
    return found


def _placed(batch: Batch, key: str, p: PlacedFigure) -> Document:
    return doc.figure(
        p.text, p.value, unit_of(key, p.unit), p.low, p.high, p.convention,
        qualifier=p.qualifier, place=_cell(batch, p.row, p.column),
    )  # fmt: skip


def _points(batch: Batch, i: int) -> list[Document]:
    return [
        {
            "name": point.name,
            "figures": {key: doc.amount(v, unit_of(key)) for key, v in point.figures.items()},
            "row": point.row or None,
        }
        for point in batch.points.get(i, ())
    ]


def _cell(batch: Batch, row: int, column: int) -> dict[str, Any]:
    return doc.cell(batch.source.sheet, batch.source.page, row, column)
