"""A table as text cells with their places in the file: what every reader returns."""

from collections.abc import Iterator
from dataclasses import dataclass, field

from ...schema.errors import MotorfolioError


class TableError(MotorfolioError):
    """A file that holds no table this program can read; one sentence says why."""


class Stored(str):
    """The text of a number that a file stores as one (a workbook, JSON): its point is a decimal
    point and it has no thousands marks, whatever was typed into the cells beside it."""

    __slots__ = ()


@dataclass(frozen=True, slots=True)
class Span:
    """A merged cell: the text stands in its top left corner, the other cells are empty.

    Row and column are indices into ``Grid.rows`` (from 0); rows and columns are its size.
    """

    row: int
    column: int
    rows: int
    columns: int


@dataclass(slots=True)
class Grid:
    """One table, sheet or page: rows of text cells, all of one length.

    ``rows`` holds the text as a person sees it in the file ("0.55 mNm" where a number format
    adds the unit), '' for an empty cell. ``row_numbers`` and ``column_numbers`` give the place
    of each row and column in the file, counted from 1, so that hidden or skipped ones leave
    a gap. ``notes`` are texts beside the table, as a page has them. ``continuation`` yields
    further rows in chunks of a long table, directly below;
    such a row is longer than the grid only where the file's row is (cells without a heading).

    Number cells of a workbook or of JSON are ``Stored`` texts; cells that were text keep what was
    typed, and must tell by themselves what their marks mean.
    ``row_pages`` gives each row's page where a table runs over several pages.
    """

    rows: list[list[str]]
    row_numbers: list[int]
    column_numbers: list[int]
    sheet: str | None = None
    page: int | None = None
    spans: list[Span] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)
    continuation: Iterator[tuple[list[int], list[list[str]]]] | None = None
    row_pages: list[int] | None = None

    def take_up_rest(self) -> None:
        """Read all that the continuation yields into the grid."""
        for numbers, rows in self.continuation or ():
            self.row_numbers += numbers
            self.rows += rows
        self.continuation = None
        width = max(map(len, self.rows), default=0)
        last = self.column_numbers[-1] if self.column_numbers else 0
        more = width - len(self.column_numbers)
        self.column_numbers += range(last + 1, last + 1 + more)
        for row in self.rows:
            row += [""] * (width - len(row))


@dataclass(slots=True)
class TableFile:
    """A file as read: its grids, its fingerprint, and what was passed over."""

    name: str
    sha256: str
    format: str
    grids: list[Grid]
    skipped: list[str] = field(default_factory=list)
