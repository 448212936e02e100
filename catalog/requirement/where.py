"""Limits on stored figures: `mass < 500 g`, `maker = Some Maker`."""

from __future__ import annotations

import operator
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ...schema.canonical import CANONICAL
from ...schema.errors import MotorfolioError
from ...schema.units.read import quantity, read_unit
from ...schema.vocabulary import quantities
from .fields import RequirementError, unknown

if TYPE_CHECKING:
    from ..store import Catalog

_SIGNS: dict[str, Callable[[Any, Any], Any]] = {
    "<=": operator.le,
    ">=": operator.ge,
    "!=": operator.ne,
    "<": operator.lt,
    ">": operator.gt,
    "=": operator.eq,
}
_TEXT = re.compile(r"^\s*(?P<key>[\w.-]+)\s*(?P<sign><=|>=|!=|==|=|<|>|≤|≥|≠)\s*(?P<value>.+?)\s*$")
#: Equal means equal to the digits that anyone types.
_NEAR = 1e-9


@dataclass(frozen=True, slots=True)
class Where:
    """One limit: a figure's key, the sign, and the value in SI or the text; `unit` is the
    currency of a price."""

    text: str
    key: str
    sign: str
    value: float | str
    unit: str = ""

    @property
    def is_text(self) -> bool:
        return isinstance(self.value, str)


def known_keys() -> dict[str, tuple[str, ...]]:
    """Keys that may be limited, with the SI units that they accept; text figures with none."""
    keys = {key: q.accepts if not q.text else () for key, q in quantities().items()}
    return keys | {key: keys.get(key) or (unit,) for key, unit in CANONICAL.items()}


def read_where(text: str) -> Where:
    """The limit that a text says; RequirementError if it says none."""
    match = _TEXT.match(text)
    if match is None:
        raise RequirementError(
            f'--where "{text}" is no limit; write a figure, a sign and a quantity: "mass < 500 g".'
        )
    key = match["key"].replace("-", "_")
    sign = {"≤": "<=", "≥": ">=", "≠": "!=", "==": "="}.get(match["sign"], match["sign"])
    known = known_keys()
    if key not in known:
        raise RequirementError(
            unknown("catalog of figures", key, known).replace("requirement's ", "")
        )
    accepts = known[key]
    value = match["value"].strip("\"'")
    if not accepts:
        if sign not in ("=", "!="):
            raise RequirementError(f'--where "{text}": {key} is text; compare it by = or !=.')
        return Where(text, key, sign, value)
    try:
        unit = ""
        if accepts == ("currency",):
            unit = read_unit(re.sub(r"^[-+\d.\s]+|[-+\d.\s]+$", "", value), accepts).si
        return Where(text, key, sign, quantity(value, accepts), unit)
    except MotorfolioError as error:
        raise RequirementError(f'--where "{text}": {error}.') from error


@dataclass
class Passed:
    """Which motors a set of limits lets through: `rejected` and `unknown` are of shape (M,)."""

    rejected: NDArray[np.bool_]
    unknown: NDArray[np.bool_]


def apply_where(
    limits: Sequence[Where],
    columns: Mapping[str, NDArray[np.float64]],
    catalog: Catalog,
) -> Passed:
    """Hold motors against the limits; a figure that a motor lacks leaves it unknown."""
    n = len(columns["id"])
    rejected, unknown_ = np.zeros(n, bool), np.zeros(n, bool)
    for limit in limits:
        if limit.is_text:
            keeps, known = _text(limit, columns["id"], catalog)
        else:
            keeps, known = _number(limit, columns, catalog)
        rejected |= known & ~keeps
        unknown_ |= ~known
    return Passed(rejected, unknown_ & ~rejected)


def _number(
    limit: Where, columns: Mapping[str, NDArray[np.float64]], catalog: Catalog
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    column = columns[limit.key]
    known = ~np.isnan(column)
    assert isinstance(limit.value, float)
    margin = _NEAR * abs(limit.value)
    match limit.sign:
        case "=" | "!=":
            keeps = np.abs(column - limit.value) <= margin
            keeps = keeps if limit.sign == "=" else ~keeps
        case "<" | ">":
            keeps = _SIGNS[limit.sign](column, limit.value)
        case _:
            keeps = _SIGNS[limit.sign](
                column, limit.value + (margin if "<" in limit.sign else -margin)
            )
    if limit.unit:
        known &= _currencies(columns["id"], catalog) == limit.unit
    return keeps, known


def _currencies(ids: NDArray[np.float64], catalog: Catalog) -> NDArray[np.str_]:
    """The currency in which each motor's price is printed, "" where it is not said."""
    codes = {}
    for pattern, unit in catalog.connection.execute(
        "SELECT p.pattern, h.unit FROM patterns p JOIN headings h ON h.id = p.heading "
        "WHERE p.quantity = 'price' AND h.unit IS NOT NULL"
    ):
        try:
            codes[pattern] = read_unit(unit, ("currency",)).si
        except MotorfolioError:
            continue
    rows = catalog.connection.execute(
        "SELECT id, pattern FROM motor WHERE replaced_by IS NULL ORDER BY id"
    )
    of = {number: codes.get(pattern, "") for number, pattern in rows}
    return np.array([of[int(number)] for number in ids])


def _text(
    limit: Where, ids: NDArray[np.float64], catalog: Catalog
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    column = {
        "commutation": "k.commutation",
        "magnet": "nullif(k.magnet, 'unknown')",
        "maker": "nullif(m.maker, '')",
        "part_number": "m.part_number",
        "series": "m.series",
    }.get(limit.key, f't."{limit.key}"')
    join = "JOIN figure_text t ON t.id = m.id " if column.startswith("t.") else ""
    rows = catalog.connection.execute(
        f"SELECT {column} IS NULL, {column} = ? COLLATE NOCASE FROM motor m "
        f"JOIN kinds k ON k.id = m.kind {join}WHERE m.replaced_by IS NULL ORDER BY m.id",
        (limit.value,),
    ).fetchall()
    table = np.array(rows, dtype=np.float64).reshape(-1, 2)
    assert len(table) == len(ids)
    known, equal = table[:, 0] == 0, table[:, 1] == 1
    return (equal if limit.sign == "=" else ~equal), known


def columns_of(limits: Sequence[Where]) -> list[str]:
    """The columns that the limits need."""
    return [limit.key for limit in limits if not limit.is_text]
