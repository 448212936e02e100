"""What the library hands back in a notebook: tables of motors, a search, a judgement.

Each shows itself as HTML (every text escaped), and gives its numbers to numpy or, where it is
installed, to pandas. Numbers are SI, angles in radians, temperatures in °C; ``units`` says which.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from html import escape
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ..schema.canonical import CANONICAL
from ..schema.entry import Motor, MotorFinding
from ..schema.errors import MotorfolioError
from .documents import Document
from .report.plain import many, number, percent, words
from .report.safety import SAFETY

if TYPE_CHECKING:
    from pandas import DataFrame

SHOWN = 50
"""A notebook is shown so many rows; the others are counted."""


@dataclass(frozen=True, repr=False)
class Table:
    """Columns of one length by name, numbers as floats (NaN: not known); ``units`` by column."""

    columns: Mapping[str, Sequence[Any]]
    units: Mapping[str, str] = field(default_factory=dict)
    caption: str = ""

    def __len__(self) -> int:
        return len(next(iter(self.columns.values()), ()))

    def __repr__(self) -> str:
        named = f"{self.caption}: " if self.caption else ""
        return f"<Table {named}{many(len(self), 'row')} of {', '.join(self.columns)}>"

    def to_numpy(self) -> NDArray[Any]:
        """One structured array: a field a column, float64 for numbers, else text."""
        arrays = {name: np.asarray(column) for name, column in self.columns.items()}
        kinds = [(name, array.dtype) for name, array in arrays.items()]
        out = np.empty(len(self), dtype=kinds)
        for name, array in arrays.items():
            out[name] = array
        return out

    def to_frame(self) -> "DataFrame":
        """A pandas data frame, with the units in ``frame.attrs["units"]``.

        Raises MotorfolioError where pandas is not installed.
        """
        try:
            import pandas
        except ImportError:
            raise MotorfolioError(
                "A data frame needs pandas, which is not installed: pip install pandas, or take "
                "to_numpy()."
            ) from None
        frame = pandas.DataFrame({name: list(column) for name, column in self.columns.items()})
        frame.attrs["units"] = dict(self.units)
        return frame

    def _repr_html_(self) -> str:
        heads = "".join(
            f"<th>{escape(words(name))}"
            + (f"<br>{escape(unit)}" if (unit := self.units.get(name, "")) not in ("", "1") else "")
            + "</th>"
            for name in self.columns
        )
        rows = "".join(
            "<tr>" + "".join(f"<td>{_cell(c[i])}</td>" for c in self.columns.values()) + "</tr>"
            for i in range(min(len(self), SHOWN))
        )
        more = f"<p>… and {len(self) - SHOWN} more</p>" if len(self) > SHOWN else ""
        caption = f"<caption>{escape(self.caption)}</caption>" if self.caption else ""
        return f"<table>{caption}<tr>{heads}</tr>{rows}</table>{more}"


def _cell(value: Any) -> str:
    return number(value) if isinstance(value, float) else escape(str(value))


def _value(document: Any) -> float:
    """The value of an amount, or a bare number; NaN where there is none."""
    value = document.get("value") if isinstance(document, Mapping) else document
    return float("nan") if value is None or isinstance(value, str) else float(value)


class MotorTable(Sequence[Motor]):
    """Motors, each a ``Motor``; ``table`` has their constants and figures as columns.

    >>> motors["EX-24-100"].constants["torque_constant"].value  # doctest: +SKIP
    """

    def __init__(self, documents: Sequence[Document], caption: str = "") -> None:
        self.documents = list(documents)
        self.caption = caption

    def __len__(self) -> int:
        return len(self.documents)

    def __iter__(self) -> Iterator[Motor]:
        return map(Motor.model_validate, self.documents)

    def __getitem__(self, key: Any) -> Any:
        """The motor at a place or of a part number; for a slice a table of them."""
        if isinstance(key, str):
            for document in self.documents:
                if document["part_number"] == key:
                    return Motor.model_validate(document)
            raise MotorfolioError(f"There is no motor {key} among these {len(self)}.")
        if isinstance(key, slice):
            return MotorTable(self.documents[key], self.caption)
        return Motor.model_validate(self.documents[key])

    def __repr__(self) -> str:
        return f"<MotorTable of {many(len(self), 'motor')}>"

    @property
    def table(self) -> Table:
        """A row a motor: who it is, its constants, and the figures that any of them publishes
        (``published_…`` where a constant has the same name), in SI."""
        documents = self.documents
        columns: dict[str, list[Any]] = {
            "part_number": [d["part_number"] for d in documents],
            "maker": [d["maker"] or "" for d in documents],
            "series": [d["series"] or "" for d in documents],
            "commutation": [d["model"]["commutation"]["value"] or "" for d in documents],
        }
        units: dict[str, str] = {}
        for key, unit in CANONICAL.items():
            columns[key] = [_value(d["constants"].get(key, {})) for d in documents]
            units[key] = unit
        for key in dict.fromkeys(key for d in documents for key in d["figures"]):
            found = [d["figures"].get(key) for d in documents]
            given = next(f for f in found if f is not None)
            name = f"published_{key}" if key in columns else key
            if "unit" in given:
                columns[name] = [_value(f or {}) for f in found]
                units[name] = given["unit"]
            else:
                columns[name] = [f["text"] if f else "" for f in found]
        return Table(columns, units, self.caption)

    def to_numpy(self) -> NDArray[Any]:
        """One structured array, a field a column of ``table``."""
        return self.table.to_numpy()

    def to_frame(self) -> "DataFrame":
        """A pandas data frame of ``table``."""
        return self.table.to_frame()

    def _repr_html_(self) -> str:
        table = self.table
        kept = ("part_number", "maker", "commutation", *CANONICAL)
        return Table({k: table.columns[k] for k in kept}, table.units, self.caption)._repr_html_()


@dataclass(frozen=True, repr=False)
class Sheet:
    """One file as understood: ``headings`` says how each was read and why, ``unread`` lists the
    cells that were not, ``motors`` holds constants and findings. Nothing of it is stored."""

    file: str
    layout: str
    headings: Table
    unread: list[Document]
    remarks: list[str]
    motors: MotorTable
    findings: list[MotorFinding]

    def __repr__(self) -> str:
        return (
            f"<Sheet {self.file}: {many(len(self.motors), 'motor')}, "
            f"{many(len(self.findings), 'finding')}, {len(self.unread)} unread>"
        )

    def to_numpy(self) -> NDArray[Any]:
        """The motors as one structured array."""
        return self.motors.to_numpy()

    def to_frame(self) -> "DataFrame":
        """The motors as a pandas data frame."""
        return self.motors.to_frame()

    def _repr_html_(self) -> str:
        found = "".join(
            f"<li><b>{f.severity}</b> {escape(f.part_number or '')}: {escape(f.message)}</li>"
            for f in self.findings
        )
        return (
            self.headings._repr_html_()
            + f"<p>{len(self.unread)} cells or headings were not read.</p>"
            + self.motors._repr_html_()
            + (f"<ul>{found}</ul>" if found else "")
        )


_AMOUNTS = ("peak_current", "rms_current", "peak_voltage", "peak_speed", "winding_temperature",
            "copper_loss", "mass")  # fmt: skip


def _candidates(documents: Sequence[Document], caption: str, *, needs: bool = False) -> Table:
    limits = list(dict.fromkeys(name for d in documents for name in d["utilisation"]))
    columns: dict[str, list[Any]] = {
        "part_number": [d["part_number"] for d in documents],
        "maker": [d["maker"] or "" for d in documents],
        "ratio": [_value(d["ratio"]) for d in documents],
        **{key: [_value(d[key]) for d in documents] for key in _AMOUNTS},
        "limiting": [d["limiting"] or "" for d in documents],
        **{f"{name}_utilisation": [_value(d["utilisation"][name]) for d in documents]
           for name in limits},
    }  # fmt: skip
    if needs:
        columns["needs"] = [d["needs"] for d in documents]
    units = {key: documents[0][key]["unit"] for key in _AMOUNTS} if documents else {}
    return Table(columns, units, caption)


@dataclass(frozen=True, repr=False)
class SearchResult:
    """What a search found; ``document`` is what ``motorfolio search --json`` prints."""

    document: Document

    def __repr__(self) -> str:
        c = self.counts
        return f"<SearchResult: {c['feasible']} of {many(c['considered'], 'motor')} do it>"

    @property
    def counts(self) -> Mapping[str, Any]:
        """considered, feasible, unknown, and the rejected by limit."""
        return self.document["counts"]

    @property
    def candidates(self) -> Table:
        """The motors that do it, in order of rank."""
        return _candidates(self.document["candidates"], "Candidates")

    @property
    def near_misses(self) -> Table:
        """The nearest of those that don't, each with what would admit it."""
        return _candidates(self.document["near_misses"], "Near misses", needs=True)

    def to_numpy(self) -> NDArray[Any]:
        """The candidates as one structured array."""
        return self.candidates.to_numpy()

    def to_frame(self) -> "DataFrame":
        """The candidates as a pandas data frame."""
        return self.candidates.to_frame()

    def _repr_html_(self) -> str:
        c = self.counts
        rejected = ", ".join(f"{name} {n}" for name, n in c["rejected"].items())
        return (
            f"<p>{c['considered']} motors considered: {c['feasible']} do it, {c['unknown']} are "
            f"unknown{escape(f'; rejected by {rejected}' if rejected else '')}.</p>"
            f"{self.candidates._repr_html_()}{self.near_misses._repr_html_()}"
            f"<p><i>{escape(SAFETY)}</i></p>"
        )


@dataclass(frozen=True, repr=False)
class Judgement:
    """One motor held against a requirement. A utilisation of 1 is the limit; None is unknown."""

    document: Document

    def __repr__(self) -> str:
        limit = self.limiting
        largest = "" if limit is None else f", {words(limit)} {percent(self.utilisation[limit])}"
        return f"<Judgement of {self.document['part_number']}: {self._verdict()}{largest}>"

    @property
    def feasible(self) -> bool:
        """Whether the motor does what is asked, as far as every needed figure is known."""
        return self.document["feasible"]

    @property
    def limiting(self) -> str | None:
        """The limit with the largest utilisation."""
        return self.document["limiting"]

    @property
    def utilisation(self) -> Mapping[str, float | None]:
        """Required over available, by limit."""
        return self.document["utilisation"]

    def _repr_html_(self) -> str:
        rows = "".join(
            f"<tr><th>{escape(words(name))}</th><td>"
            f"{'not known' if value is None else percent(value)}</td></tr>"
            for name, value in self.utilisation.items()
        )
        return (
            f"<table><caption>{escape(self.document['part_number'])} {self._verdict()}</caption>"
            f"{rows}</table><p><i>{escape(SAFETY)}</i></p>"
        )

    def _verdict(self) -> str:
        if self.feasible:
            return "does it"
        over = any(value is not None and value > 1 for value in self.utilisation.values())
        return "does not do it" if over else "does not do it, or is not known to"
