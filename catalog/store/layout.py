"""The tables and views of a catalog, made and brought up to date in one transaction.

One motor is one row in `motor` (who it is, where it stood) and, under the same id, in
`figure_text`, `figure_value`, `figure_digit` (a column a quantity) and `constants`.
Where a figure stood, under which heading and convention, is nearly always the same for a whole
table, so it is kept once a pattern in `patterns`; the exceptions are in `figure_places`.
"""

import sqlite3
from collections.abc import Callable

from sqlite_utils import Database

from ...schema.motor import CANONICAL
from ...schema.vocabulary import quantities
from .database import APPLICATION_ID, VERSION, layout_version
from .intervals import half_digit_sql
from .names import figure_keys, text_keys, wanted_quantities, with_unit


def bring_up_to_date(connection: sqlite3.Connection) -> None:
    """Make the tables of an empty file, upgrade those of an earlier layout, add new quantities.

    Runs inside the caller's transaction.
    """
    db = Database(connection, execute_plugins=False)
    for upgrade in MIGRATIONS[layout_version(connection) :]:
        upgrade(db)
    _add_quantities(db)
    _make_views(db)
    connection.execute(f"PRAGMA application_id = {APPLICATION_ID}")
    connection.execute(f"PRAGMA user_version = {VERSION}")


# ---- layout 1


def _layout_1(db: Database) -> None:
    def make(name: str, columns: dict[str, type], **options: object) -> None:
        db.table(name).create(columns, strict=True, **options)  # pyright: ignore[reportArgumentType]

    make(
        "quantities",
        {"kind": str, "key": str, "unit": str, "position": int},
        pk=("kind", "key"),
        not_null={"unit", "position"},
    )
    make("imports", {"id": int, "at": str, "files": int, "motors": int}, pk="id")
    make(
        "files",
        {"id": int, "import": int, "file": str, "sha256": str, "format": str, "layout": str,
         "options": str, "remarks": str},
        pk="id",
        not_null={"import", "file", "sha256", "options"},
        foreign_keys=[("import", "imports", "id")],
    )  # fmt: skip
    make(
        "sources",
        {"id": int, "file": int, "chunk": int, "sheet": str, "page": int, "layout": str,
         "notes": str, "first_motor": int, "motors": int},
        pk="id",
        not_null={"file", "chunk", "first_motor", "motors"},
        foreign_keys=[("file", "files", "id")],
    )  # fmt: skip
    make(
        "conventions",
        {"id": int, "current": str, "voltage": str, "between": str, "connection": str,
         "temperature": float, "shape": str, "basis": str},
        pk="id",
    )  # fmt: skip
    make(
        "headings",
        {"id": int, "source": int, "text": str, "quantity": str, "unit": str, "convention": int,
         "score": float, "reason": str, "factor": float, "offset": float},
        pk="id",
        not_null={"source", "text"},
        foreign_keys=[("source", "sources", "id"), ("convention", "conventions", "id")],
    )  # fmt: skip
    make(
        "patterns",
        {"pattern": int, "quantity": str, "heading": int, "read_as": int, "convention": int,
         "row": int, "column": int},
        pk=("pattern", "quantity"),
        foreign_keys=[("heading", "headings", "id"), ("convention", "conventions", "id")],
    )  # fmt: skip
    make(
        "kinds",
        {"id": int, "commutation": str, "commutation_basis": str, "magnet": str,
         "magnet_basis": str, "reference_temperature": float,
         "reference_temperature_basis": str},
        pk="id",
    )  # fmt: skip
    make(
        "motor",
        {"id": int, "maker": str, "part_number": str, "series": str, "source": int,
         "pattern": int, "kind": int, "row": int, "column": int, "replaced_by": int},
        pk="id",
        not_null={"maker", "part_number", "source", "pattern", "kind"},
        foreign_keys=[("source", "sources", "id"), ("kind", "kinds", "id"),
                      ("replaced_by", "imports", "id")],
    )  # fmt: skip
    for name, kind in (("figure_text", str), ("figure_value", float), ("figure_digit", int)):
        keys = [*figure_keys(), *(text_keys() if kind is str else [])]
        make(name, {"id": int, **dict.fromkeys(keys, kind)}, pk="id")
    make(
        "figure_intervals",
        {"motor": int, "quantity": str, "low": float, "high": float},
        pk=("motor", "quantity"),
    )
    make(
        "figure_places",
        {"motor": int, "quantity": str, "row": int, "column": int},
        pk=("motor", "quantity"),
    )
    make(
        "figure_qualifiers",
        {"motor": int, "quantity": str, "qualifier": str},
        pk=("motor", "quantity"),
    )
    make(
        "further_figures",
        {"id": int, "motor": int, "condition": str, "quantity": str, "heading": int,
         "convention": int, "text": str, "value": float, "low": float, "high": float,
         "unit": str, "qualifier": str, "row": int, "column": int},
        pk="id",
        not_null={"motor", "quantity"},
    )  # fmt: skip
    make(
        "points",
        {"motor": int, "number": int, "name": str, "row": int, "quantity": str, "value": float},
        pk=("motor", "number", "quantity"),
    )
    make("derivations", {"id": int, "basis": str, "figures": str}, pk="id")
    constants: dict[str, type] = {"id": int}
    for key in CANONICAL:
        constants |= {key: float, f"{key}_low": float, f"{key}_high": float, f"{key}_by": int}
    make("constants", constants, pk="id")
    make(
        "findings",
        {"id": int, "source": int, "motor": int, "scope": str, "severity": str, "relation": str,
         "figures": str, "suspect": str, "ratio": float, "cause": str, "other_causes": str,
         "implied": float, "unit": str, "row": int, "column": int, "message": str},
        pk="id",
        not_null={"source", "motor", "scope", "severity", "message"},
    )  # fmt: skip
    make("finding_motors", {"finding": int, "first": int, "last": int}, pk=("finding", "first"))
    make(
        "unread",
        {"id": int, "file": int, "part_number": str, "heading": str, "sheet": str, "page": int,
         "row": int, "column": int, "text": str, "reason": str, "guesses": str},
        pk="id",
        not_null={"file", "text", "reason"},
    )  # fmt: skip
    make(
        "corrections",
        {"id": int, "maker": str, "part_number": str, "quantity": str, "text": str,
         "value": float, "low": float, "high": float, "reason": str, "at": str,
         "published_text": str, "revoked_at": str},
        pk="id",
        not_null={"maker", "part_number", "quantity", "text", "value", "reason", "at"},
    )  # fmt: skip
    make(
        "applied_corrections",
        {"motor": int, "quantity": str, "correction": int, "published_value": float,
         "published_low": float, "published_high": float},
        pk=("motor", "quantity"),
        foreign_keys=[("correction", "corrections", "id")],
    )  # fmt: skip
    make(
        "kept_readings",
        {"maker": str, "heading": str, "reading": str, "at": str},
        pk=("maker", "heading"),
    )
    make("column_cache", {"source": int, "name": str, "data": bytes}, pk=("source", "name"))
    db.execute(
        "CREATE UNIQUE INDEX current_motor ON motor(part_number, maker) WHERE replaced_by IS NULL"
    )
    for name in ("findings", "further_figures"):
        db.table(name).create_index(["motor"], index_name=f"{name}_of_motor")
    _guard_cache(db)


# ---- layout 2: gears beside the motors


def _layout_2(db: Database) -> None:
    text = dict.fromkeys(("part_number", "maker", "series", "currency"), str)
    figures = ("ratio", "efficiency", "inertia", "mass", "continuous_torque", "peak_torque",
               "maximum_input_speed", "backlash", "diameter", "length", "price")  # fmt: skip
    db.table("gears").create(
        {**text, "stages": int, **dict.fromkeys(figures, float)},
        pk=("maker", "part_number"),
        not_null={"maker", "part_number", "ratio"},
        strict=True,
    )


# ---- layout 3: motors that a person said are one


def _layout_3(db: Database) -> None:
    names = ("maker", "part_number", "into_maker", "into_part")
    db.table("merged").create(
        {**dict.fromkeys(names, str), "import": int},
        pk=("maker", "part_number"),
        not_null={"into_maker", "into_part", "import"},
        foreign_keys=[("import", "imports", "id")],
        strict=True,
    )


# ---- layout 4: gears have revisions, and belong to imports


def _layout_4(db: Database) -> None:
    text = dict.fromkeys(("part_number", "maker", "series", "currency"), str)
    figures = ("ratio", "efficiency", "inertia", "mass", "continuous_torque", "peak_torque",
               "maximum_input_speed", "backlash", "diameter", "length", "price")  # fmt: skip
    columns = {**text, "stages": int, **dict.fromkeys(figures, float)}
    db.table("gear").create(
        {"id": int, "file": int, **columns, "replaced_by": int},
        pk="id",
        not_null={"maker", "part_number", "ratio"},
        foreign_keys=[("file", "files", "id"), ("replaced_by", "imports", "id")],
        strict=True,
    )
    names = ",".join(columns)
    db.execute(f"INSERT INTO gear({names}) SELECT {names} FROM gears ORDER BY maker, part_number")
    db.execute("DROP TABLE gears")
    db.execute(
        "CREATE UNIQUE INDEX current_gear ON gear(part_number, maker) WHERE replaced_by IS NULL"
    )


MIGRATIONS: tuple[Callable[[Database], None], ...] = (_layout_1, _layout_2, _layout_3, _layout_4)
"""One function a layout, in order; the last brings a catalog to VERSION."""


def _guard_cache(db: Database) -> None:
    """Drop a source's cached columns when someone edits its rows by hand."""
    for table in ("figure_value", "constants", "motor"):
        source = (
            "old.source" if table == "motor" else "(SELECT source FROM motor WHERE id = old.id)"
        )
        for event in ("UPDATE", "DELETE"):
            db.execute(
                f"CREATE TRIGGER {table}_{event.lower()}_drops_cache AFTER {event} ON {table} "
                f"BEGIN DELETE FROM column_cache WHERE source = {source}; END"
            )


def _add_quantities(db: Database) -> None:
    """Columns for quantities that the vocabulary has gained since the catalog was made."""
    for position, (kind, key, unit) in enumerate(wanted_quantities()):
        db.execute(
            "INSERT INTO quantities(kind, key, unit, position) VALUES (?,?,?,?) "
            "ON CONFLICT DO UPDATE SET unit = excluded.unit, position = excluded.position",
            (kind, key, unit, position),
        )
    columns = {
        "figure_text": dict.fromkeys([*figure_keys(), *text_keys()], "TEXT"),
        "figure_value": dict.fromkeys(figure_keys(), "REAL"),
        "figure_digit": dict.fromkeys(figure_keys(), "INTEGER"),
        "constants": {
            name: "INTEGER" if name.endswith("_by") else "REAL"
            for key in CANONICAL
            for name in (key, f"{key}_low", f"{key}_high", f"{key}_by")
        },
    }
    for table, wanted_columns in columns.items():
        present = {row[1] for row in db.execute(f"PRAGMA table_info({table})")}
        for key, kind in wanted_columns.items():
            if key not in present:
                db.execute(f'ALTER TABLE {table} ADD COLUMN "{key}" {kind}')


# ---- views, made anew whenever the quantities change


def _make_views(db: Database) -> None:
    for name, sql in (
        ("motors", _wide_view()),
        ("figures_as_published", _published_view()),
        ("findings_plain", _findings_view()),
        ("gears", "SELECT * FROM gear WHERE replaced_by IS NULL"),
    ):
        db.create_view(name, sql, replace=True)


def _wide_view() -> str:
    constants = [f'c."{key}" AS "{with_unit(key, unit)}"' for key, unit in CANONICAL.items()]
    taken = set(CANONICAL)
    figures = [
        f'v."{key}" AS "{prefix}{with_unit(key, quantities()[key].unit)}"'
        for key in figure_keys()
        for prefix in ("published_" if key in taken else "",)
    ]
    texts = [f't."{key}" AS "{"printed_" if key in ("magnet", "commutation") else ""}{key}"'
             for key in text_keys()]  # fmt: skip
    columns = [
        "m.maker", "m.part_number", "m.series", "k.commutation", "k.magnet", *constants, *figures,
        *texts, "f.file", "s.sheet", "s.page", 'm."row"', 'm."column"', "m.id",
    ]  # fmt: skip
    return (
        f"SELECT {', '.join(columns)} FROM motor m JOIN constants c ON c.id = m.id "
        "JOIN figure_value v ON v.id = m.id JOIN figure_text t ON t.id = m.id "
        "JOIN kinds k ON k.id = m.kind "
        "JOIN sources s ON s.id = m.source JOIN files f ON f.id = s.file "
        "WHERE m.replaced_by IS NULL"
    )


def _published_view() -> str:
    """One row a figure: text and heading as printed, value in SI, convention, and the cell."""
    convention = " || ' ' || ".join(
        f"ifnull(c.\"{kind}\", '')" for kind in ("current", "voltage", "between", "connection")
    )
    branches = []
    for key in [*figure_keys(), *text_keys()]:
        number = key not in text_keys()
        unit = quantities()[key].unit if number else ""
        value = low = high = "NULL"
        join = ""
        if number:
            half = half_digit_sql(f'g."{key}"', "d.factor")
            in_use = {"value": f'v."{key}"'} | {
                end: f'CASE WHEN i.motor THEN i.{end} ELSE v."{key}" {sign} ifnull({half}, 0) END'
                for end, sign in (("low", "-"), ("high", "+"))
            }
            value, low, high = (
                f"iif(a.correction IS NULL, {sql}, a.published_{part})"
                for part, sql in in_use.items()
            )
            join = (
                "JOIN figure_value v ON v.id = m.id JOIN figure_digit g ON g.id = m.id "
                f"LEFT JOIN figure_intervals i ON i.motor = m.id AND i.quantity = '{key}' "
            )
        branches.append(
            f"SELECT m.maker, m.part_number, '{key}' AS quantity, d.text AS heading, "
            f't."{key}" AS text, d.unit AS printed_unit, {value} AS value, {low} AS low, '
            f"{high} AS high, '{unit}' AS unit, trim({convention}) AS convention, "
            'f.file, s.sheet, s.page, coalesce(e."row", p."row", m."row") AS "row", '
            'coalesce(e."column", p."column", m."column") AS "column", '
            f"k.text AS corrected_to, m.replaced_by IS NULL AS current FROM motor m "
            f"JOIN figure_text t ON t.id = m.id {join}"
            f"LEFT JOIN patterns p ON p.pattern = m.pattern AND p.quantity = '{key}' "
            "LEFT JOIN headings d ON d.id = p.heading "
            "LEFT JOIN conventions c ON c.id = p.convention "
            f"LEFT JOIN figure_places e ON e.motor = m.id AND e.quantity = '{key}' "
            f"LEFT JOIN applied_corrections a ON a.motor = m.id AND a.quantity = '{key}' "
            "LEFT JOIN corrections k ON k.id = a.correction "
            "JOIN sources s ON s.id = m.source JOIN files f ON f.id = s.file "
            f'WHERE t."{key}" IS NOT NULL'
        )
    return " UNION ALL ".join(branches)


def _findings_view() -> str:
    return (
        "SELECT m.maker, m.part_number, n.scope, n.severity, n.relation, n.suspect, n.cause, "
        'n.ratio, n.implied, n.unit, n.message, f.file, s.sheet, s.page, n."row", n."column" '
        "FROM findings n JOIN motor m ON m.id = n.motor JOIN sources s ON s.id = n.source "
        "JOIN files f ON f.id = s.file WHERE m.replaced_by IS NULL"
    )
