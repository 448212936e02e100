"""Judging a stored table anew, when a person corrected or un-corrected one of its figures."""

import sqlite3
from collections.abc import Callable, Sequence

from ...schema.batch import Batch
from ...schema.motor import Reconciled
from .corrections import Correction, corrected
from .rebuild import batch_of_source
from .write import Writer


def rejudge(
    connection: sqlite3.Connection,
    source_id: int,
    corrections: Sequence[Correction],
    reconcile: Callable[[Batch], Reconciled],
) -> None:
    """Apply the corrections that stand to a source's table and write what follows: values in use,
    conventions as inferred, constants and findings. Published texts stay as they are."""
    published, first = batch_of_source(connection, source_id)
    batch, applied, _ = corrected(published, corrections)
    Writer(connection).rewrite_table(source_id, first, published, reconcile(batch), applied)
