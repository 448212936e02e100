"""Hand the printed sheets to the program and compare what it finds with what was planted."""

import numpy as np

from motorfolio.schema.batch import MODEL_BASES, Batch, FigureColumn, Heading, Source, blank_batch
from motorfolio.schema.convention import Commutation, default_convention
from motorfolio.schema.vocabulary import quantity

from .sheets import Sheet


def batch_of(sheet: Sheet, *, stated: bool = False) -> Batch:
    """The sheet as the reading would hand it on: printed numbers in SI with their digits.

    stated: the sheet says its conventions, so that a whole column in another one is a fault
    and not a convention to be inferred.
    """
    commutation = Commutation[sheet.kind.upper()]
    batch = blank_batch(
        sheet.part_numbers, maker="Invented", source=Source("sheet.csv"), commutation=commutation
    )
    batch.commutation_basis[:] = MODEL_BASES.index("told")
    if sheet.family:
        batch.series = ["family"] * len(sheet.motors)
    n = len(batch)
    for column, key in enumerate(sheet.keys):
        unit, factor = sheet.units[key]
        texts = sheet.printed[key]
        value = np.array([float(t) for t in texts])
        step = np.array([_half_digit(t) for t in texts])
        if key == "nominal_voltage":
            step[:] = 0
        convention = default_convention(key, quantity(key).carries, commutation)
        if stated:
            convention = convention.with_(basis="stated")
        batch.headings.append(Heading(key, key, unit, convention, factor=factor))
        batch.figures[key] = FigureColumn(
            value=value * factor,
            low=(value - step) * factor,
            high=(value + step) * factor,
            text=list(texts),
            conventions=[convention],
            convention=np.zeros(n, dtype=np.int32),
            heading=np.full(n, column, dtype=np.int32),
            row=np.arange(2, n + 2, dtype=np.int32),
            column=np.full(n, column + 2, dtype=np.int32),
        )
    return batch


def _half_digit(text: str) -> float:
    """Half a unit of the last digit; an integer's zeros beyond the third digit don't count."""
    if "." in text:
        return 0.5 * 10.0 ** -len(text.partition(".")[2])
    zeros = len(text) - max(len(text.rstrip("0")), min(3, len(text)))
    return 0.5 * 10.0**zeros
