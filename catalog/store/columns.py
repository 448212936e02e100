"""Columns of all motors as numpy arrays, for the search: from cached arrays, else from the rows.

The rows are the truth. For every source (one table, or one chunk of a long one) the columns that
searching needs are also kept as arrays of float64 in `column_cache`, written in the same
transaction. A source whose rows someone edited by hand has lost its cache (triggers see to it)
and is read from the rows. A column that is all gaps isn't kept.
"""

import sqlite3
from collections.abc import Iterable, Sequence

import numpy as np
from numpy.typing import NDArray

from ...schema.batch import MAGNETS
from ...schema.canonical import CANONICAL
from ...schema.convention import Commutation, Convention, to_dc
from ...schema.vocabulary import quantities

Floats = NDArray[np.float64]

ARMATURE = "armature_"
"""Prefix of a published current brought to armature amperes: armature_peak_current."""

AMBIENT_WIDTH = 2.0
"""A wider printed interval of the ambient, K, is a permissible range, not a rating ambient."""

JUDGED: tuple[str, ...] = (
    "torque_constant",
    "armature_resistance",
    "armature_inductance",
    "rotor_inertia",
    "viscous_damping",
    "pole_pairs",
    "magnet_coefficient",
    "thermal_resistance_winding_housing",
    "thermal_resistance_housing_ambient",
    "thermal_resistance",
    "thermal_time_constant_winding",
    "thermal_time_constant_housing",
    "maximum_winding_temperature",
    "rated_temperature_rise",
    "rating_ambient",
    "nominal_speed",
    "peak_torque",
    "maximum_speed",
)
"""What a motor at work is judged by, under the names that it has there."""
CURRENTS = ("nominal_current", "continuous_stall_current", "peak_current")
"""The same for currents, which are kept in armature amperes."""
FURTHER = ("commutation", "no_load_current", "friction_torque", "nominal_voltage", "motor_constant")
"""What the friction and the order of rank follow from."""
SHOWN = ("mass", "price", "diameter")
ENDS = tuple(
    f"{key}_{end}" for key in ("torque_constant", "armature_resistance") for end in ("low", "high")
)
"""The intervals of a worst case."""
CACHED: tuple[str, ...] = tuple(
    dict.fromkeys(
        (*CANONICAL, *ENDS, *JUDGED, *(f"{ARMATURE}{key}" for key in CURRENTS), *FURTHER, *SHOWN)
    )
)

# another set of cached columns, or another meaning of one, needs another name here
_MARK = "id.1"


def load(connection: sqlite3.Connection, names: Sequence[str]) -> dict[str, Floats]:
    """Arrays over all current motors in order of id, NaN where not known; "id" always among them.

    names: constants of the motor (``torque_constant``, with ``_low`` and ``_high``), published
    figures in SI (``mass``; ``published_torque_constant`` where a constant has the name), currents
    in armature amperes (``armature_peak_current``), ``commutation`` (its code),
    ``magnet_coefficient`` (1/K), ``rating_ambient`` (°C). Raises KeyError for another name.
    """
    for name in names:
        _expression(name)
    sources = [row[0] for row in connection.execute("SELECT id FROM sources ORDER BY first_motor")]
    wanted = [name for name in dict.fromkeys(names) if name != "id"]
    from_rows: list[dict[str, Floats]] = []
    lengths: list[int] = []
    for source in sources:
        mark = _cached(connection, source, _MARK)
        if mark is None:
            from_rows.append(select(connection, source, wanted))
        else:
            others = [name for name in wanted if name not in CACHED]
            found = select(connection, source, others) if others else {}
            from_rows.append({**found, "id": mark})
        lengths.append(len(from_rows[-1]["id"]))
    # a column at a time: all cached ones beside their copies would take twice the memory
    columns: dict[str, Floats] = {}
    for name in ("id", *wanted):
        parts = []
        for source, found, length in zip(sources, from_rows, lengths, strict=True):
            part = found.pop(name, None)
            if part is None:
                part = _cached(connection, source, name)
            parts.append(np.full(length, np.nan) if part is None else part)
        columns[name] = np.concatenate(parts) if parts else np.empty(0)
    return columns


def _cached(connection: sqlite3.Connection, source: int, name: str) -> Floats | None:
    row = connection.execute(
        "SELECT data FROM column_cache WHERE source = ? AND name = ?", (source, name)
    ).fetchone()
    return None if row is None else np.frombuffer(row[0])


def rebuild(connection: sqlite3.Connection, sources: Iterable[int]) -> None:
    """Write the cached columns of these sources anew, from their rows."""
    for source in sources:
        connection.execute("DELETE FROM column_cache WHERE source = ?", (source,))
        columns = select(connection, source, CACHED)
        ids = columns.pop("id")
        rows = [(source, _MARK, ids.tobytes())]
        rows += [
            (source, name, column.tobytes())
            for name, column in columns.items()
            if not np.isnan(column).all()
        ]
        connection.executemany("INSERT INTO column_cache VALUES (?,?,?)", rows)


def select(connection: sqlite3.Connection, source: int, names: Sequence[str]) -> dict[str, Floats]:
    """The same columns from the rows of one source."""
    expressions = ", ".join(["m.id", "m.pattern", "m.kind", *map(_expression, names)])
    span = connection.execute(
        "SELECT first_motor, first_motor + motors - 1 FROM sources WHERE id = ?", (source,)
    ).fetchone()
    rows = connection.execute(
        f"SELECT {expressions} FROM motor m JOIN kinds k ON k.id = m.kind "
        "JOIN constants c ON c.id = m.id JOIN figure_value v ON v.id = m.id "
        "WHERE m.id BETWEEN ? AND ? AND m.replaced_by IS NULL ORDER BY m.id",
        span,
    ).fetchall()
    table = np.array(rows, dtype=np.float64).reshape(len(rows), len(names) + 3)
    columns = {name: np.ascontiguousarray(table[:, i + 3]) for i, name in enumerate(names)}
    currents = [name for name in names if name.startswith(ARMATURE) and "_current" in name]
    if currents:
        patterns, kinds = table[:, 1].astype(np.int64), table[:, 2].astype(np.int64)
        span = int(kinds.max(initial=0)) + 1
        unique, which = np.unique(patterns * span + kinds, return_inverse=True)
        pairs = [divmod(pair, span) for pair in unique.tolist()]
        for name in currents:
            columns[name] *= _armature_factors(connection, name, pairs)[which]
    return {"id": np.ascontiguousarray(table[:, 0]), **columns}


def _armature_factors(
    connection: sqlite3.Connection, name: str, pairs: Sequence[tuple[int, int]]
) -> Floats:
    """Armature amperes per published ampere, of each pair of pattern and kind."""
    key = name.removeprefix(ARMATURE)
    factors = []
    for pattern, kind in pairs:
        row = connection.execute(
            'SELECT d."current", k.commutation FROM kinds k LEFT JOIN patterns p ON p.pattern = ? '
            "AND p.quantity = ? LEFT JOIN conventions d ON d.id = p.convention WHERE k.id = ?",
            (pattern, key, kind),
        ).fetchone()
        factors.append(to_dc(key, Convention(current=row[0]), Commutation[row[1].upper()]))
    return np.array(factors, dtype=np.float64)


def _expression(name: str) -> str:
    """SQL for a column over motor m, kind k, constants c and figures v."""
    match name:
        case "id":
            return "m.id"
        case "commutation":
            cases = " ".join(f"WHEN '{c.word}' THEN {int(c)}" for c in Commutation)
            return f"CASE k.commutation {cases} END"
        case "magnet_coefficient":
            cases = " ".join(f"WHEN '{magnet}' THEN {beta}" for magnet, beta in MAGNETS.items())
            return f"CASE k.magnet {cases} END"
        case "rating_ambient":
            return (
                "iif(EXISTS (SELECT 1 FROM figure_intervals i WHERE i.motor = m.id AND "
                "i.quantity = 'ambient_temperature' AND (i.low IS NULL OR i.high IS NULL OR "
                f"i.high - i.low > {AMBIENT_WIDTH})), NULL, v.ambient_temperature)"
            )
        case "pole_pairs":
            return "coalesce(v.pole_pairs, v.poles / 2)"
    for end in ("_low", "_high", ""):
        if name.endswith(end) and name.removesuffix(end) in CANONICAL:
            return f'c."{name}"'
    key = name.removeprefix("published_").removeprefix(ARMATURE)
    if key in quantities() and not quantities()[key].text:
        return f'v."{key}"'
    raise KeyError(name)
