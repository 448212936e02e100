"""The library: what a notebook or another program calls. Thin over importing, store and search.

Everything here raises MotorfolioError, one sentence, for whatever can't be used.
"""

import json
import os
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace
from pathlib import Path
from types import TracebackType
from typing import TYPE_CHECKING, Any, Self, TypedDict, Unpack

from ..schema.entry import Entry, Motor, MotorFinding
from ..schema.errors import MotorfolioError
from .importing.run import STANDARD_INPUT, FileResult, ImportResult, Options, import_files
from .reading import ReadingError
from .reading.headings.label import parse_label
from .requirement.read import Requirement
from .results import Judgement, MotorTable, SearchResult, Sheet, Table
from .store import Catalog

if TYPE_CHECKING:
    from numpy.typing import NDArray

__all__ = ["MotorCatalog", "normalise", "open_catalog", "read_requirement", "read_table"]

NO_CATALOG = Path(os.devnull)
"""An empty file stands for no catalog: no corrections, no kept readings."""

Asked = Requirement | Mapping[str, Any] | str | Path
"""A requirement, or what ``read_requirement`` takes."""


class Told(TypedDict, total=False):
    """What a call may tell about its files, see ``read_table``."""

    maker: str
    series: str
    sheet: str
    format: str
    commutation: str
    overrides: Mapping[str, str]


def read_table(
    source: str | Path | Sequence[Mapping[str, Any] | Entry],
    *,
    maker: str | None = None,
    series: str | None = None,
    sheet: str | None = None,
    format: str | None = None,
    commutation: str | None = None,
    overrides: Mapping[str, str] | None = None,
) -> Sheet:
    """Read one datasheet table and bring its motors to SI constants; nothing is stored.

    source: a file, or entries as mappings from heading to text. overrides: heading →
    "quantity[:unit[:convention]]", as ``import --set`` takes them. commutation: "brushed",
    "block" or "sinusoidal". Raises MotorfolioError where no motor is found.
    """
    options = Options(
        maker=maker, series=series, sheet=sheet, format=format, commutation=commutation,
        overrides=overrides or {}, dry_run=True,
    )  # fmt: skip
    if isinstance(source, str | Path):
        result = import_files(NO_CATALOG, [str(source)], options, with_documents=True)
    else:
        result = _entries(source, options)
    return _sheet(result.files[0])


def normalise(entry: Mapping[str, Any] | Entry, *, commutation: str | None = None) -> Motor:
    """Bring one entry to SI constants: ``{"part_number": "EX-1", "torque_constant": "30 mN·m/A"}``.

    Keys are figure keys or headings, values text with a unit. Raises MotorfolioError naming what
    is missing or could not be read, so that nothing is dropped in silence.
    """
    given = _as_mapping(entry)
    if not any(str(text).strip() and _names_part_number(key) for key, text in given.items()):
        raise MotorfolioError(
            'The entry has no part number; give it one, such as "part_number": "EX-1".'
        )
    try:
        sheet = read_table([given], commutation=commutation)
    except ReadingError:
        # the reader takes it for no motor at all, and says nothing of its figures
        sheet = read_table([{**given, **_SOME_FIGURES, **given}], commutation=commutation)
        if not sheet.unread:
            raise MotorfolioError(
                "The entry has no figure of a motor beside its part number; give some, such as "
                '"torque_constant": "30 mN·m/A".'
            ) from None
    if sheet.unread:
        named = "; ".join(f"{u['heading']} {u['text']!r}: {u['reason']}" for u in sheet.unread)
        raise MotorfolioError(f"Not all of the entry could be read: {named}.")
    return sheet.motors[0]


_SOME_FIGURES = {
    "nominal_voltage": "24 V",
    "terminal_resistance": "2.1 Ω",
    "torque_constant": "31 mN·m/A",
}
"""With these any entry is one of a motor; used only to be told what is wrong with the others."""


def _names_part_number(heading: str) -> bool:
    label = parse_label(heading)
    return label.forced == "part_number" or any("part_number" in n.keys for n in label.names)


def _as_mapping(entry: Mapping[str, Any] | Entry) -> dict[str, Any]:
    return entry.model_dump(exclude_none=True) if isinstance(entry, Entry) else dict(entry)


def _entries(entries: Sequence[Mapping[str, Any] | Entry], options: Options) -> ImportResult:
    flat = [_as_mapping(e) for e in entries]
    data = json.dumps(flat, ensure_ascii=False).encode()
    return import_files(
        NO_CATALOG, [STANDARD_INPUT], replace(options, format="json"), with_documents=True,
        standard_input=lambda: data,
    )  # fmt: skip


def _sheet(file: FileResult) -> Sheet:
    said = file.as_json()
    keys = ("heading", "quantity", "unit", "score", "reason")
    columns = {
        key: [row[key] if row[key] is not None else "" for row in said["reading"]] for key in keys
    }
    caption = f"{file.file}: {file.motors} motors"
    return Sheet(
        file=file.file,
        layout=file.layout,
        headings=Table(columns, caption=caption),
        unread=file.unread,
        remarks=file.remarks,
        motors=MotorTable(file.documents, caption),
        findings=[MotorFinding.model_validate(f) for f in file.findings],
    )


def read_requirement(source: Mapping[str, Any] | str | Path) -> Requirement:
    """What a machine asks, from a TOML file or a mapping of the same sections and keys.

    >>> read_requirement({"point": [{"torque": "50 mN·m", "speed": "3000 rpm"}]})  # doctest: +SKIP
    """
    from .requirement.file import read_file
    from .requirement.read import read_requirement as read

    if isinstance(source, Mapping):
        return read(source)
    path = Path(source)
    return read(read_file(path), folder=path.parent)


def open_catalog(path: str | Path, *, create: bool = False) -> "MotorCatalog":
    """The catalog in that file; ``create`` makes it if there is none.

    Use it in a ``with`` block, or call ``close()``.
    """
    path = Path(path)
    if create and not path.exists():
        return MotorCatalog(path, None)
    return MotorCatalog(path, Catalog.open(path))


class MotorCatalog:
    """An open catalog: ``catalog["EX-24-100"]`` is a Motor, ``len(catalog)`` their number, and
    ``for motor in catalog`` goes through them all."""

    def __init__(self, path: Path, store: Catalog | None) -> None:
        self.path = path
        self._store = store

    @property
    def store(self) -> Catalog:
        """The catalog's own object, for revisions, corrections and SQL."""
        if self._store is None:
            self._store = Catalog.open(self.path)
        return self._store

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        self.close()

    def close(self) -> None:
        """Close the file."""
        if self._store is not None:
            self._store.close()
            self._store = None

    def add(self, *files: str | Path, **told: Unpack[Told]) -> list[Sheet]:
        """Import files, all of them or none; keywords as ``read_table`` has them."""
        options = Options(**told)
        self.close()  # the import is the one writer
        result = import_files(self.path, [str(f) for f in files], options, with_documents=True)
        return [_sheet(file) for file in result.files]

    def __len__(self) -> int:
        return len(self.store)

    def __getitem__(self, part: str) -> Motor:
        return Motor.model_validate(self.store.motor(part))

    def __iter__(self) -> Iterator[Motor]:
        return map(Motor.model_validate, self.store.motors())

    def __contains__(self, part: object) -> bool:
        """Whether there is a motor of that part number, of one maker or of several."""
        name = "part_number = :part OR maker || '/' || part_number = :part"
        return isinstance(part, str) and bool(
            self.store.connection.execute(
                f"SELECT count(*) FROM motor WHERE replaced_by IS NULL AND ({name})",
                {"part": part},
            ).fetchone()[0]
        )

    def __repr__(self) -> str:
        return f"<MotorCatalog {self.path}>"

    def motors(self, parts: Sequence[str] | None = None) -> MotorTable:
        """These motors, or all."""
        return MotorTable(list(self.store.motors(parts)), str(self.path.name))

    def columns(self, *names: str) -> "Mapping[str, NDArray[Any]]":
        """Arrays over all motors, SI: the quick way for large catalogs. "id" is among them."""
        return self.store.columns(names)

    def findings(self, parts: Sequence[str] | None = None) -> list[MotorFinding]:
        """What contradicts itself, errors first, of these motors or of all."""
        return [MotorFinding.model_validate(f) for f in self.store.findings(parts)]

    def search(self, requirement: Asked) -> SearchResult:
        """The motors that do what is asked, in order of rank, and the near misses."""
        from .search.documents import search_document
        from .search.near_misses import near_misses
        from .search.run import search

        with self.store.at_once():
            found = search(self.store, _required(requirement))
            return SearchResult(search_document(found, near_misses(found, self.store), self.store))

    def judge(self, part: str, requirement: Asked) -> Judgement:
        """One motor held against a requirement."""
        import numpy as np

        from .search.documents import candidate_document
        from .search.run import search, show

        with self.store.at_once():
            known = self.store.find(part)
            found = search(self.store, _required(requirement))
            at = np.flatnonzero(found.fleet.ids == known.id)
            document = candidate_document(show(found, at, self.store)[0], found, self.store)
        # the limits of "where" count too
        feasible = document["feasible"] and bool(np.isin(at, found.order).all())
        return Judgement({**document, "feasible": feasible})


def _required(asked: Asked) -> Requirement:
    return asked if isinstance(asked, Requirement) else read_requirement(asked)
