"""A person's corrections: rows beside the published figures, applied before a table is judged.

A correction holds for the text that it corrected: when a later sheet prints another text for the
figure, it is no longer applied, and that is said.
"""

import sqlite3
from collections.abc import Sequence
from dataclasses import dataclass, replace

from ...schema.batch import Batch
from .write import AppliedCorrection


@dataclass(frozen=True, slots=True)
class Correction:
    """What a figure should read: text, value and interval in SI (convention as published)."""

    id: int
    maker: str
    part_number: str
    quantity: str
    text: str
    value: float
    low: float
    high: float
    reason: str
    at: str
    published_text: str | None
    revoked_at: str | None


def stored(connection: sqlite3.Connection, *, revoked: bool = False) -> list[Correction]:
    """The corrections that stand, or all that were ever made, oldest first."""
    where = "" if revoked else "WHERE revoked_at IS NULL"
    return [
        Correction(*row)
        for row in connection.execute(
            "SELECT id, maker, part_number, quantity, text, value, low, high, reason, at, "
            f"published_text, revoked_at FROM corrections {where} ORDER BY id"
        )
    ]


def not_applied(connection: sqlite3.Connection, correction: Correction) -> str:
    """Why a correction that stands is not in use, in words; "" where it is."""
    row = connection.execute(
        f'SELECT m.id, t."{correction.quantity}", a.correction FROM motor m '
        "JOIN figure_text t ON t.id = m.id "
        "LEFT JOIN applied_corrections a ON a.motor = m.id AND a.quantity = ? "
        "WHERE m.maker = ? AND m.part_number = ? AND m.replaced_by IS NULL",
        (correction.quantity, correction.maker, correction.part_number),
    ).fetchone()
    if row is None:
        return "the catalog has no such motor now"
    _, text, applied = row
    if applied == correction.id:
        return ""
    return f"the sheet now prints {text}" if text else "the sheet no longer gives it"


def corrected(
    batch: Batch, corrections: Sequence[Correction]
) -> tuple[Batch, list[AppliedCorrection], list[str]]:
    """The batch with the corrections that apply, what they replaced, and remarks on the others."""
    if not corrections:
        return batch, [], []
    entry_of = {who: i for i, who in enumerate(zip(batch.maker, batch.part_number, strict=True))}
    figures = dict(batch.figures)
    applied: list[AppliedCorrection] = []
    remarks: list[str] = []
    for c in corrections:
        entry = entry_of.get((c.maker, c.part_number))
        if entry is None or c.quantity not in figures:
            continue
        column = figures[c.quantity]
        if column.text[entry] != c.published_text:
            remarks.append(
                f"{c.part_number}, {c.quantity}: it was corrected to {c.text} when the sheet "
                f'printed "{c.published_text}"; it now prints "{column.text[entry]}", so the '
                "correction is not applied."
            )
            continue
        if column is batch.figures[c.quantity]:
            column = figures[c.quantity] = replace(
                column,
                value=column.value.copy(),
                low=column.low.copy(),
                high=column.high.copy(),
                text=list(column.text),
            )
        applied.append(
            AppliedCorrection(
                entry, c.quantity, c.id, column.text[entry], column.value[entry].item(),
                column.low[entry].item(), column.high[entry].item(),
            )
        )  # fmt: skip
        column.value[entry], column.low[entry], column.high[entry] = c.value, c.low, c.high
        column.text[entry] = c.text
    return replace(batch, figures=figures), applied, remarks


def add(
    connection: sqlite3.Connection,
    *,
    maker: str,
    part_number: str,
    quantity: str,
    text: str,
    value: float,
    low: float,
    high: float,
    reason: str,
    at: str,
    published_text: str | None,
) -> int:
    """Store a correction in place of an earlier one of the same figure; returns its number."""
    revoke(connection, maker=maker, part_number=part_number, quantity=quantity, at=at)
    cursor = connection.execute(
        "INSERT INTO corrections(maker, part_number, quantity, text, value, low, high, reason, at, "
        "published_text) VALUES (?,?,?,?,?,?,?,?,?,?)",
        (maker, part_number, quantity, text, value, low, high, reason, at, published_text),
    )
    assert cursor.lastrowid is not None
    return cursor.lastrowid


def revoke(
    connection: sqlite3.Connection, *, maker: str, part_number: str, quantity: str, at: str
) -> int:
    """End the correction of a figure; returns how many there were (0 or 1)."""
    return connection.execute(
        "UPDATE corrections SET revoked_at = ? WHERE maker = ? AND part_number = ? "
        "AND quantity = ? AND revoked_at IS NULL",
        (at, maker, part_number, quantity),
    ).rowcount
