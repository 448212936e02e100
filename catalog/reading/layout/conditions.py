"""Several columns of one motor, each under its own condition → one motor."""

from dataclasses import replace

from ....schema.figure.signs import plain
from ..headings.label import parse_label
from ..headings.phrase import variant_of
from ..model import Field, Table


def fold_conditions(table: Table, conditions: list[str]) -> None:
    """Several columns of one motor, each under its condition → one motor, conditions on fields."""
    ids: list[str | None] = []
    for text in table.part_numbers:
        ids.append(text if text else (ids[-1] if ids else None))
    groups: dict[str, list[int]] = {}
    for position, text in enumerate(ids):
        groups.setdefault(text or "", []).append(position)
    if all(len(g) == 1 for g in groups.values()):
        for field in table.fields:
            if len(set(conditions)) == 1:
                field.when = (*field.when, plain(conditions[0]))
        return
    depth = max(len(g) for g in groups.values())
    fields: list[Field] = []
    motors = list(groups)
    for field in table.fields:
        for k in range(depth):
            texts = [field.texts[groups[m][k]] if k < len(groups[m]) else "" for m in motors]
            if k and not any(texts):
                continue
            places = [table.places[groups[m][min(k, len(groups[m]) - 1)]] for m in motors]
            when = plain(conditions[groups[motors[0]][min(k, len(groups[motors[0]]) - 1)]])
            same = k and all(
                a == b
                for a, b in zip(texts, [field.texts[groups[m][0]] for m in motors], strict=True)
            )
            if same:
                continue
            copy = replace(
                field,
                texts=texts,
                when=(*field.when, when),
                variant=variant_of(when) or field.variant,
                places=places,
            )
            label = parse_label(when)
            if label.temperature is not None:
                copy.temperature = label.temperature
            fields.append(copy)
    table.places = [table.places[groups[m][0]] for m in motors]
    table.part_numbers = [m or None for m in motors]
    table.fields = fields
