"""A run of consecutive entries of a batch as a batch of its own, for work in portions."""

from dataclasses import replace

from ..batch import Batch, FigureColumn, TextColumn


def portion(batch: Batch, start: int, stop: int) -> Batch:
    """Entries start to stop; places in the file stay, indices count from start."""
    if start == 0 and stop >= len(batch):
        return batch
    run = slice(start, stop)

    def column(c: FigureColumn) -> FigureColumn:
        marks = {i - start: q for i, q in c.qualifiers.items() if start <= i < stop}
        return FigureColumn(
            c.value[run], c.low[run], c.high[run], c.text[run], c.conventions, c.convention[run],
            c.heading[run], c.row[run], c.column[run], marks,
        )  # fmt: skip

    return replace(
        batch,
        part_number=batch.part_number[run],
        maker=batch.maker[run],
        series=batch.series[run],
        figures={k: column(c) for k, c in batch.figures.items()},
        repeats={k: [column(c) for c in cs] for k, cs in batch.repeats.items()},
        texts={
            k: TextColumn(t.text[run], t.row[run], t.column[run]) for k, t in batch.texts.items()
        },
        commutation=batch.commutation[run],
        commutation_basis=batch.commutation_basis[run],
        magnet=batch.magnet[run],
        magnet_basis=batch.magnet_basis[run],
        reference_temperature=batch.reference_temperature[run],
        reference_temperature_basis=batch.reference_temperature_basis[run],
        points={i - start: p for i, p in batch.points.items() if start <= i < stop},
    )
