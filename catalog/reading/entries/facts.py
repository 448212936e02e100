"""What a table says of its motors in words: texts, magnets, commutation, connection of windings."""

import re

import numpy as np

from ....schema.batch import MAGNETS, MODEL_BASES, Batch, TextColumn
from ....schema.convention import Commutation, default_convention
from ....schema.figure.signs import plain
from ....schema.vocabulary import quantity
from ..cells import missing
from .decide import REFERENCE_FIGURES, UNSTATED_REFERENCE, Decisions
from .kind import ASSUMED, STATED, TOLD, in_words

_EXPORTED_FACT = re.compile(r"\((told|stated|inferred|assumed)\)$")
"""What an export says of a fact that no text figure gives: known as before, and no figure."""


def put_texts(
    table: Decisions, batch: Batch, texts: list[list[str]], places: list[list[int]]
) -> None:
    """The text figures of a batch, and what they say of magnet and commutation."""
    n = len(batch)
    for index, m in enumerate(table.matches):
        if m.role != "text" or m.key in (None, "part_number"):
            continue
        column = [
            None if not t or missing(t) else plain(t).replace("\n", " ") for t in texts[index]
        ]
        if m.key == "maker":
            batch.maker = [t or d for t, d in zip(column, batch.maker, strict=True)]
            continue
        if m.key == "series":
            batch.series = [t or d for t, d in zip(column, batch.series, strict=True)]
            continue
        rows, columns = table.places_of(m.field, places[index])
        assert m.key is not None
        batch.texts[m.key] = TextColumn(
            column, np.asarray(rows, dtype=np.int32), np.asarray(columns, dtype=np.int32)
        )
    for key, kind in (
        ("magnet", "magnets"),
        ("commutation", "commutations"),
        ("description", "commutations"),
    ):
        found = batch.texts.get(key)
        if found is None:
            continue
        known: dict[str, str | None] = {}
        for i in range(n):
            text = found.text[i]
            if not text:
                continue
            if text not in known:
                known[text] = in_words(text, kind)
            value = known[text]
            if value is None:
                continue
            basis = STATED
            if exported := _EXPORTED_FACT.search(text):
                basis = MODEL_BASES.index(exported[1])
                found.text[i] = None
            if key == "magnet" and value in MAGNETS:
                batch.magnet[i] = value
                batch.magnet_basis[i] = basis
            elif key != "magnet" and table.commutation_basis != TOLD:
                batch.commutation[i] = int(Commutation[value.upper()])
                batch.commutation_basis[i] = basis
        if all(text is None for text in found.text):
            del batch.texts[key]


def put_connection(table: Decisions, batch: Batch) -> None:
    """Star or delta, where a title or note says it of all windings."""
    found = batch.texts.get("connection")
    if found is not None:
        found.text = [(in_words(t, "connections") or t) if t else None for t in found.text]
        return
    about = re.compile(
        r"wind|connect|phase|schaltung|wickl|coupl|collega|conexi|結線|接", re.IGNORECASE
    )
    said = {
        word
        for t in table.texts_about()
        if about.search(t) and (word := in_words(t, "connections"))
    }
    if len(said) == 1:
        n = len(batch)
        zeros = np.zeros(n, dtype=np.int32)
        batch.texts["connection"] = TextColumn([said.pop()] * n, zeros, zeros.copy())


def apply_connections(table: Decisions, batch: Batch) -> None:
    """A stated connection of the windings goes into the conventions that it concerns, and
    a motor whose own cell states another commutation gets the defaults of that."""
    texts = batch.texts.get("connection")
    if texts is None and (batch.commutation == int(table.commutation)).all():
        return
    for key in (*batch.figures, *batch.repeats):
        q = quantity(key)
        if not q.carries:
            continue
        found = [batch.figures[key]] if key in batch.figures else []
        for column in [*found, *batch.repeats.get(key, [])]:
            for i in np.flatnonzero(~np.isnan(column.value)).tolist():
                old = column.conventions[column.convention[i]]
                new = old
                own = Commutation(int(batch.commutation[i]))
                if own is not table.commutation:
                    was = default_convention(key, q.carries, table.commutation)
                    now = default_convention(key, q.carries, own)
                    changes = {
                        k: getattr(now, k)
                        for k in ("current", "voltage", "between")
                        if getattr(old, k) == getattr(was, k) and old.basis == "assumed"
                    }
                    new = new.with_(**changes)
                if texts is not None and texts.text[i] and "connection" in q.carries:
                    word = in_words(texts.text[i] or "", "connections")
                    if word and new.connection is None:
                        new = new.with_(connection=word)
                if new != old:
                    if new not in column.conventions:
                        column.conventions.append(new)
                    column.convention[i] = column.conventions.index(new)


def own_references(table: Decisions, batch: Batch) -> None:
    """Where some motors' figures are stated at a temperature and others' are not (an export of
    several sheets), each motor has its own reference temperature."""
    if table.notes.temperature is not None:
        return
    stated, differ = np.full(len(batch), np.nan), False
    for key in REFERENCE_FIGURES:
        column = batch.figures.get(key)
        if column is None:
            continue
        at = np.array([np.nan if c.temperature is None else c.temperature
                       for c in column.conventions])[column.convention]  # fmt: skip
        given = ~np.isnan(column.value)
        differ |= len(np.unique(at[given])) > 1
        stated = np.where(np.isnan(stated) & given, at, stated)
    if not differ:
        return
    known = np.isfinite(stated)
    batch.reference_temperature = np.where(known, stated, UNSTATED_REFERENCE)
    batch.reference_temperature_basis = np.where(known, STATED, ASSUMED).astype(np.int8)
