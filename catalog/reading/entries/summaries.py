"""Rows and columns beside the motors that are none: averages, differences, smallest and largest."""

import re

from ....schema.figure.signs import plain
from ..headings.ends import end_of
from ..headings.lexicon import canonical, lexicon, squeeze, tokens
from ..model import Field, Table, Unread


def take_out_summaries(table: Table, ids: Field | None, unread: list[Unread]) -> None:
    """Take rows and columns that are no motors out of a table; their cells are listed.

    Columns "Min", "Typ", "Max" without any motor beside them are one motor's: its usual figures
    stay, or the range between the others. Of "Specified" beside "Measured" the first stays.
    """
    if table.continuation is not None:
        return
    names: list[str | None] = list(table.part_numbers) or (
        list(ids.texts) if ids is not None else []
    )
    if len(names) != table.count or not any(names):
        return
    ends = [end_of(name or "") for name in names]
    if all(ends) and len(set(ends)) > 1 and len(set(ends)) == len(ends):
        _fold(table, ids, [end or "" for end in ends], unread)
        return
    stated = [k for k, name in enumerate(names) if name and _is_role(name, "specified")]
    found = [k for k, name in enumerate(names) if name and _is_role(name, "measured")]
    if len(stated) == 1 and found and all(n and (_sums_up(n) or _origin(n)) for n in names):
        _keep_stated(table, ids, names, stated[0], unread)
        return
    odd = [k for k, name in enumerate(names) if name and (_sums_up(name) or _origin(name))]
    if not odd or len(odd) == len(names):
        return
    for f in table.fields:
        for k in odd:
            if f.texts[k] and f is not ids:
                reason = f'"{plain(names[k] or "")}" is no motor'
                _list(table, f, k, reason, unread)
    _keep(table, [k for k in range(len(names)) if k not in odd])


def _sums_up(name: str) -> bool:
    if re.fullmatch(r"[Δ∆σ\s%]+", name):
        return True
    return _is_role(name, "summary")


def _origin(name: str) -> bool:
    return _is_role(name, "specified") or _is_role(name, "measured")


def _is_role(name: str, role: str) -> bool:
    form = canonical(tokens(re.sub(r"[%±.:Δ]", " ", plain(name))))
    return role in lexicon().roles.get(squeeze(form), ())


def _keep_stated(
    table: Table, ids: Field | None, names: list[str | None], kept: int, unread: list[Unread]
) -> None:
    """One motor of columns "Specified", "Measured" and the like: what is specified stands."""
    reason = f'the figure under "{plain(names[kept] or "")}" is taken'
    for f in table.fields:
        for k in range(len(names)):
            if f.texts[k] and f is not ids and k != kept:
                _list(table, f, k, reason, unread)
    _nameless(table, ids, kept)
    table.remarks.append("columns of specified and measured figures are read as one motor")


def _nameless(table: Table, ids: Field | None, kept: int) -> None:
    _keep(table, [kept])
    if table.part_numbers:
        table.part_numbers = [None]
    if ids is not None:
        ids.texts = [""]


def _list(table: Table, f: Field, k: int, reason: str, unread: list[Unread]) -> None:
    row, column = table.place(f, k)
    unread.append(Unread(None, f.heading, table.sheet, table.page, row, column, f.texts[k], reason))


def _keep(table: Table, kept: list[int]) -> None:
    for f in table.fields:
        f.texts = [f.texts[k] for k in kept]
        if f.places is not None:
            f.places = [f.places[k] for k in kept]
    table.places = [table.places[k] for k in kept]
    if table.part_numbers:
        table.part_numbers = [table.part_numbers[k] for k in kept]


def _fold(table: Table, ids: Field | None, ends: list[str], unread: list[Unread]) -> None:
    at = {end: k for k, end in enumerate(ends)}
    usual, least, most = at.get("usual"), at.get("least"), at.get("most")
    first = usual if usual is not None else 0
    for f in table.fields:
        if f is ids:
            continue
        low = f.texts[least] if least is not None else ""
        high = f.texts[most] if most is not None else ""
        if usual is not None and f.texts[usual]:
            for k in {least, most} - {None}:
                if f.texts[k or 0]:
                    _list(table, f, k or 0, "the usual figure beside it is taken", unread)
        elif low or high:
            f.texts[first] = f"{low}…{high}" if low and high else f"≥ {low}" if low else f"≤ {high}"
    _nameless(table, ids, first)
    table.remarks.append("columns of smallest, usual and largest figures are read as one motor")
