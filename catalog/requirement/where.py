"""Limits on stored figures: `mass < 500 g`, `maker = Some Maker`."""

from __future__ import annotations

import operator
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ...schema.canonical import CANONICAL
from ...schema.errors import MotorfolioError
from ...schema.spelling import nearest
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
#: Texts offered where none is equal to what was given.
_MEANT = 3


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


@dataclass(frozen=True, slots=True)
class Held:
    """How many motors one limit lets through, and for how many it is not known. `near` holds
    the catalog's own texts that may have been meant where an equality passes none."""

    limit: Where
    passes: int
    unknown: int
    near: tuple[str, ...] = ()


@dataclass
class Passed:
    """Which motors a set of limits lets through: `rejected` and `unknown` are of shape (M,).
    `held` tells of each limit on its own."""

    rejected: NDArray[np.bool_]
    unknown: NDArray[np.bool_]
    held: list[Held] = field(default_factory=list)

    @property
    def passes(self) -> int:
        """Motors that every limit lets through."""
        return int((~self.rejected & ~self.unknown).sum())


def apply_where(
    limits: Sequence[Where],
    columns: Mapping[str, NDArray[np.float64]],
    catalog: Catalog,
) -> Passed:
    """Hold motors against the limits; a figure that a motor lacks leaves it unknown."""
    n = len(columns["id"])
    rejected, unknown_ = np.zeros(n, bool), np.zeros(n, bool)
    held = []
    for limit in limits:
        if limit.is_text:
            keeps, known = _text(limit, columns["id"], catalog)
        else:
            keeps, known = _number(limit, columns, catalog)
        rejected |= known & ~keeps
        unknown_ |= ~known
        passes = int((known & keeps).sum())
        near = ()
        if limit.is_text and limit.sign == "=" and n and not passes:
            near = _meant(limit, catalog)
        held.append(Held(limit, passes, int((~known).sum()), near))
    return Passed(rejected, unknown_ & ~rejected, held)


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
    column, motors = _column(limit.key)
    rows = catalog.connection.execute(
        f"SELECT {column} IS NULL, {column} = ? COLLATE NOCASE {motors} ORDER BY m.id",
        (limit.value,),
    ).fetchall()
    table = np.array(rows, dtype=np.float64).reshape(-1, 2)
    assert len(table) == len(ids)
    known, equal = table[:, 0] == 0, table[:, 1] == 1
    return (equal if limit.sign == "=" else ~equal), known


def _column(key: str) -> tuple[str, str]:
    """SQL of a text of motors, and of all motors that it is taken from."""
    column = {
        "commutation": "k.commutation",
        "magnet": "nullif(k.magnet, 'unknown')",
        "maker": "nullif(m.maker, '')",
        "part_number": "m.part_number",
        "series": "m.series",
    }.get(key, f't."{key}"')
    join = "JOIN figure_text t ON t.id = m.id " if column.startswith("t.") else ""
    motors = f"FROM motor m JOIN kinds k ON k.id = m.kind {join}WHERE m.replaced_by IS NULL"
    return column, motors


def _meant(limit: Where, catalog: Catalog) -> tuple[str, ...]:
    """The catalog's texts that hold what was given, the shortest first, else the likest ones,
    else those with the likest word."""
    column, motors = _column(limit.key)
    rows = catalog.connection.execute(
        f"SELECT DISTINCT {column} {motors} AND {column} IS NOT NULL ORDER BY 1"
    )
    known = {text.casefold(): text for (text,) in rows if isinstance(text, str)}
    wanted = str(limit.value).casefold()
    within = sorted((text for text in known if wanted in text), key=lambda t: (len(t), t))
    near = within or nearest(wanted, known, most=_MEANT)
    if not near:
        words = {word: text for text in reversed(known) for word in text.split()}
        near = [*dict.fromkeys(words[word] for word in nearest(wanted, words, most=_MEANT))]
    return tuple(known[text] for text in near[:_MEANT])


def columns_of(limits: Sequence[Where]) -> list[str]:
    """The columns that the limits need."""
    return [limit.key for limit in limits if not limit.is_text]
