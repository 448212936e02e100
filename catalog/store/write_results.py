"""Writing what follows from a table's figures: constants and findings."""

import sqlite3
from collections.abc import Iterable, Iterator, Sequence

import numpy as np

from ...schema.motor import CONSTANT_BASES, Finding, Reconciled


class ResultWriter:
    """Writes constants and findings; holds the palette of how constants were come by."""

    def __init__(self, connection: sqlite3.Connection) -> None:
        self.connection = connection
        self._derivations: dict[tuple[str, str], int] = {
            (basis, figures): number
            for number, basis, figures in connection.execute("SELECT * FROM derivations")
        }

    def next_id(self, table: str, column: str = "id") -> int:
        """The number after the largest of a table."""
        return self.connection.execute(
            f"SELECT ifnull(max({column}), 0) + 1 FROM {table}"
        ).fetchone()[0]

    def insert(
        self, table: str, keys: Sequence[str], ids: Iterable[int], columns: Sequence[Iterable]
    ) -> None:
        """Rows of a table that has a column a quantity; ``columns`` has one a key."""
        names = "".join(f', "{key}"' for key in keys)
        marks = ",?" * len(keys)
        self.connection.executemany(
            f"INSERT INTO {table}(id{names}) VALUES (?{marks})", zip(ids, *columns, strict=True)
        )

    def add_constants(self, first: int, reconciled: Reconciled) -> None:
        """The constants of a table whose first motor has the id ``first``."""
        names: list[str] = []
        columns: list[list] = []
        for key, c in reconciled.constants.items():
            names += [key, f"{key}_low", f"{key}_high", f"{key}_by"]
            by = np.where(np.isnan(c.value), -1, c.source * 4 + c.basis)
            codes = {
                code: self._derivation(CONSTANT_BASES[code % 4], c.sources[code // 4])
                for code in np.unique(by[by >= 0]).tolist()
            }
            columns += [
                c.value.tolist(), c.low.tolist(), c.high.tolist(),
                [codes.get(code) for code in by.tolist()],
            ]  # fmt: skip
        ids = range(first, first + len(reconciled.batch))
        self.insert("constants", names, ids, columns)

    def _derivation(self, basis: str, figures: Sequence[str]) -> int:
        key = (basis, " ".join(figures))
        if key not in self._derivations:
            cursor = self.connection.execute(
                "INSERT INTO derivations(basis, figures) VALUES (?,?)", key
            )
            self._derivations[key] = row_id(cursor)
        return self._derivations[key]

    def add_findings(self, source_id: int, first: int, reconciled: Reconciled) -> None:
        """The findings of a table whose first motor has the id ``first``."""
        number = self.next_id("findings")
        pairs = list(zip(reconciled.findings, reconciled.finding_motor, strict=True))
        self.connection.executemany(
            f"INSERT INTO findings VALUES ({','.join('?' * 16)})",
            [
                (number + i, source_id, first + entry, *_finding_row(finding))
                for i, (finding, entry) in enumerate(pairs)
            ],
        )
        entries: dict[str, list[int]] = {}
        if any(finding.scope == "column" for finding, _ in pairs):
            for i, part in enumerate(reconciled.batch.part_number):
                entries.setdefault(part, []).append(first + i)
        self.connection.executemany(
            "INSERT INTO finding_motors VALUES (?,?,?)",
            [
                (number + i, start, end)
                for i, (finding, entry) in enumerate(pairs)
                if finding.scope == "column"
                for start, end in _runs(
                    [first + entry, *(m for p in finding.part_numbers for m in entries.get(p, ()))]
                )
            ],
        )


def _runs(numbers: Sequence[int]) -> Iterator[tuple[int, int]]:
    """Numbers that follow one another as (first, last): a finding of a whole column is one row."""
    found = np.unique(numbers)
    breaks = np.flatnonzero(np.diff(found) > 1)
    starts, ends = np.append(0, breaks + 1), np.append(breaks, len(found) - 1)
    yield from zip(found[starts].tolist(), found[ends].tolist(), strict=True)


def _finding_row(f: Finding) -> tuple:
    return (
        f.scope, f.severity, f.relation, " ".join(f.figures), f.suspect, f.ratio, f.cause,
        " ".join(f.other_causes), f.implied.value if f.implied else None,
        f.implied.unit if f.implied else None, f.cell.row if f.cell else None,
        f.cell.column if f.cell else None, f.message,
    )  # fmt: skip


def row_id(cursor: sqlite3.Cursor) -> int:
    """The number that a row was given."""
    assert cursor.lastrowid is not None
    return cursor.lastrowid
