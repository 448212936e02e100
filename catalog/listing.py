"""The motors of a catalog in short, and those that words name: part number, maker, series,
description, file, commutation."""

from collections.abc import Sequence

from .documents import Document, amount
from .same_motors import folded
from .store import Catalog

COLUMNS = {
    "nominal_voltage": "V",
    "torque_constant": "N·m/A",
    "armature_resistance": "Ω",
    "rotor_inertia": "kg·m²",
    "motor_constant": "N·m/√W",
    "mass": "kg",
}

_NAMES = (
    "m.part_number",
    "m.maker",
    "ifnull(m.series, '')",
    "ifnull(t.description, '')",
    "f.file",
    "iif(k.commutation = 'brushed', '', 'brushless ') || k.commutation",
)


def listed(catalog: Catalog, words: Sequence[str] = ()) -> list[Document]:
    """Motors in which every word stands, without regard to case, accents and hyphens; those whose
    part number is or begins with the words come first.

    A motor: part_number, maker, series, description, file, the quantities of COLUMNS (null where
    unknown), findings by severity.
    """
    wanted = [fold for word in words if (fold := folded(word))]
    with catalog.at_once():
        connection = catalog.connection
        connection.create_function("folded", 1, _folded, deterministic=True)
        named = " || char(31) || ".join(_NAMES)
        test = " AND ".join([f"instr(folded({named}), ?)"] * len(wanted))
        where = f"AND {test} " if wanted else ""
        cursor = connection.execute(
            "SELECT m.id, m.part_number, m.maker, m.series, t.description, f.file, "
            "v.nominal_voltage, c.torque_constant, c.armature_resistance, c.rotor_inertia, "
            "c.motor_constant, v.mass FROM motor m JOIN sources s ON s.id = m.source "
            "JOIN files f ON f.id = s.file JOIN figure_text t ON t.id = m.id "
            "JOIN kinds k ON k.id = m.kind "
            "JOIN figure_value v ON v.id = m.id JOIN constants c ON c.id = m.id "
            f"WHERE m.replaced_by IS NULL {where}ORDER BY m.maker, m.id",
            wanted,
        )
        rows = cursor.fetchall()
        counts: dict[int, dict[str, int]] = {row[0]: {} for row in rows}
        for motor, severity, n in connection.execute(
            "SELECT motor, severity, count(*) FROM findings WHERE scope = 'motor' GROUP BY 1, 2"
        ):
            if motor in counts:
                counts[motor][severity] = n
    documents = [_document(row, counts[row[0]]) for row in rows]
    if wanted:
        documents.sort(key=lambda d: _rank(folded(d["part_number"]), "".join(wanted)))
    return documents


def _folded(text: str) -> str:
    return "\x1f".join(folded(part) for part in text.split("\x1f"))


def _rank(part: str, wanted: str) -> int:
    return 0 if part == wanted else 1 if part.startswith(wanted) else 2


def _document(row: Sequence, counts: dict[str, int]) -> Document:
    _, part, maker, series, description, file, *values = row
    return {
        "part_number": part,
        "maker": maker or None,
        "series": series,
        "description": description,
        "file": file,
        **{key: amount(value, unit) for (key, unit), value in
           zip(COLUMNS.items(), values, strict=True)},
        "findings": counts,
    }  # fmt: skip
