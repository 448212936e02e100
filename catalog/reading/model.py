"""What the reading of a file is made of: options, tables, fields, and the result."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field

from ...schema.batch import Batch, Heading
from ...schema.errors import MotorfolioError
from .headings.label import Label


class ReadingError(MotorfolioError):
    """A file in which no motor is found."""


@dataclass(slots=True)
class ReadOptions:
    """What the user told: names, and how headings are to be read.

    ``overrides`` maps a heading as printed to "quantity[:unit[:convention]]"; ``kept`` holds
    those kept from earlier files of the maker, used where ``overrides`` says nothing.
    """

    maker: str = ""
    series: str | None = None
    sheet: str | None = None
    overrides: dict[str, str] = field(default_factory=dict)
    kept: dict[str, str] = field(default_factory=dict)
    commutation: str | None = None


@dataclass(frozen=True, slots=True)
class Unread:
    """One cell or heading that was not read, with the reason and what it may be."""

    part_number: str | None
    heading: str
    sheet: str | None
    page: int | None
    row: int | None
    column: int | None
    text: str
    reason: str
    guesses: tuple[str, ...] = ()


@dataclass(slots=True)
class Reading:
    """A file as understood. ``batches`` may be lazy for a long table: run through it once; it
    adds to ``unread`` while it runs."""

    layout: str
    headings: list[Heading]
    batches: Iterable[Batch]
    unread: list[Unread]
    remarks: list[str]


@dataclass(slots=True)
class Field:
    """One heading with the cells of all motors under it (or beside it).

    ``layout`` is that of its own table where it came from another one.
    ``texts`` has one text a motor; ``row`` and ``column`` are the heading's place in the file.
    In layout "rows" the motors' cells stand in ``column``, in layout "columns" in ``row``.
    ``part`` is the part built onto the motor that a caption says the figures are of; ``aside``
    says why the figures are listed and not read.
    """

    heading: str
    label: Label
    texts: list[str]
    row: int
    column: int
    units: tuple[str, ...] = ()
    captions: tuple[str, ...] = ()
    section: str | None = None
    when: tuple[str, ...] = ()
    temperature: float | None = None
    variant: str | None = None
    part: str | None = None
    aside: str | None = None
    source: int = 0
    places: list[int] | None = None
    layout: str | None = None


@dataclass(slots=True)
class Table:
    """Motors and fields of one block, whichever way it was laid out.

    ``places`` are the rows (layout "rows") or columns ("columns") of the motors in the file.
    ``continuation`` yields further rows below, as a grid's does; ``columns`` are then the places
    of the grid's columns.
    """

    layout: str
    fields: list[Field]
    places: list[int]
    sheet: str | None = None
    page: int | None = None
    titles: list[str] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    part_numbers: list[str | None] = field(default_factory=list)
    columns: list[int] = field(default_factory=list)
    head: list[list[str]] = field(default_factory=list)
    continuation: Iterator[tuple[list[int], list[list[str]]]] | None = None

    @property
    def count(self) -> int:
        """How many motors the table has."""
        return len(self.places)

    def place(self, field_: Field, motor: int) -> tuple[int, int]:
        """Row and column of a motor's cell in the file."""
        line = (field_.places or self.places)[motor]
        rows = (field_.layout or self.layout) == "rows"
        return (line, field_.column) if rows else (field_.row, line)
