"""Files of gears into the catalog: read and stored as one import, all of a call or nothing."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path

from ...schema.errors import MotorfolioError
from ...schema.gear import Gear
from ..reading.gears import GearError, GearTable, read_gears
from ..store import Catalog, gears
from ..store.catalog import now
from ..tables import read_tables


@dataclass(slots=True)
class GearFile:
    """What one file gave; ``stored`` leaves out gears that the catalog has just so."""

    file: str
    sha256: str
    format: str
    tables: list[GearTable] = field(default_factory=list)
    stored: int = 0
    replaced: int = 0

    @property
    def gears(self) -> list[Gear]:
        return [gear for table in self.tables for gear in table.gears]


def import_gears(
    catalog: Path, files: Sequence[Path], *, maker: str | None = None, sheet: str | None = None
) -> list[GearFile]:
    """Read these files and store their gears in the catalog, made if there is none.

    Raises MotorfolioError, with nothing stored, when a file can't be used or holds no gear.
    """
    found = [_read(path, maker, sheet) for path in files]
    with Catalog.open(catalog, create=True) as opened, opened.changing() as connection:
        if not any(gears.unlike(connection, file.gears) for file in found):
            return found
        number = connection.execute(
            "INSERT INTO imports(at, files, motors) VALUES (?, ?, 0)", (now(), len(found))
        ).lastrowid
        assert number is not None
        for file in found:
            file_id = connection.execute(
                'INSERT INTO files("import", file, sha256, format, layout, options) '
                "VALUES (?,?,?,?,'gears','gears')",
                (number, file.file, file.sha256, file.format),
            ).lastrowid
            assert file_id is not None
            # a gear that an earlier file of the call has otherwise is a contradiction, not news
            new = gears.unlike(connection, file.gears)
            file.stored, file.replaced = len(new), gears.add(connection, number, file_id, new)
    return found


def _read(path: Path, maker: str | None, sheet: str | None) -> GearFile:
    table_file = read_tables(path, sheet=sheet)
    result = GearFile(table_file.name, table_file.sha256, table_file.format)
    refused: MotorfolioError | None = None
    for grid in table_file.grids:
        try:
            result.tables.append(read_gears(grid, maker))
        except GearError as error:
            refused = error
    if not result.tables:
        raise GearError(f"{path}: {refused or 'it holds no table'}.")
    return result
