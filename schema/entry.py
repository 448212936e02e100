"""The documents that enter and leave the program, as pydantic models with a JSON Schema each.

``Entry`` is a motor as someone types it: figure keys or a sheet's headings, each with its text.
``Motor`` is a motor in SI with everything that is known about it, as ``show --json`` prints it.
A model takes a document apart with types; the shapes themselves are part of the interface that
other programs rely on, so that a key more or less is refused here.
"""

from collections.abc import Mapping
from html import escape
from typing import Any, Literal

from pydantic import BaseModel, ConfigDict, Field

from .vocabulary import quantities

__all__ = [
    "MODELS",
    "Amount",
    "Cell",
    "Constant",
    "Entry",
    "Figure",
    "Finding",
    "Motor",
    "TextFigure",
    "json_schema",
]

Basis = Literal["told", "stated", "inferred", "assumed"]


def _with_figure_keys(schema: dict[str, Any]) -> None:
    """Name every figure key in the JSON Schema of an entry, with the units it accepts."""
    for key, quantity in quantities().items():
        if key in schema["properties"]:
            continue
        accepts = (
            "text" if quantity.text else f"text with a unit of {' or '.join(quantity.accepts)}"
        )
        schema["properties"][key] = {"type": ["string", "number"], "description": accepts}


class Entry(BaseModel):
    """A motor as published: ``{"part_number": "EX-1", "torque_constant": "30.2 mN·m/A"}``.

    Every other key is a figure key or a heading as a sheet prints it ("Kt [mNm/A]"); its value is
    text with a unit, or a bare number where the heading has the unit.
    """

    model_config = ConfigDict(extra="allow", json_schema_extra=_with_figure_keys)
    __pydantic_extra__: dict[str, str | float | None] = Field(init=False)  # pyright: ignore[reportIncompatibleVariableOverride]

    part_number: str
    maker: str | None = None
    series: str | None = None


class _Document(BaseModel):
    model_config = ConfigDict(extra="forbid", frozen=True)


class Amount(BaseModel):
    """A value with its SI unit."""

    model_config = ConfigDict(frozen=True)

    value: float | None
    unit: str


class Cell(BaseModel):
    """A place in the file: sheet or page where there is one, row and column from 1."""

    model_config = ConfigDict(frozen=True)

    sheet: str | None = None
    page: int | None = None
    row: int | None = None
    column: int | None = None


class Finding(BaseModel):
    """One contradiction, or one thing worth knowing, among the published figures."""

    model_config = ConfigDict(frozen=True)

    part_number: str | None
    scope: Literal["motor", "column"] = "motor"
    part_numbers: tuple[str, ...] = ()
    severity: Literal["error", "warning", "note"]
    relation: str
    figures: tuple[str, ...]
    suspect: str | None = None
    ratio: float | None = None
    cause: str = "unexplained"
    other_causes: tuple[str, ...] = ()
    implied: Amount | None = None
    cell: Cell | None = None
    message: str


class Convention(_Document):
    """What a published value is per: only the keys that apply are there."""

    current: Literal["dc", "peak", "rms"] | None = None
    voltage: Literal["dc", "peak", "rms", "peak-to-peak"] | None = None
    between: Literal["lines", "phase"] | None = None
    connection: Literal["star", "delta"] | None = None
    temperature: float | None = Field(None, description="°C")
    shape: str | None = None
    basis: Basis


class Corrected(_Document):
    """A correction that stands in place of a published figure."""

    text: str
    value: float | None
    unit: str
    low: float | None
    high: float | None
    reason: str


class Figure(_Document):
    """A published figure: text as printed, value and interval in SI, convention, place."""

    text: str | None
    value: float | None
    unit: str
    low: float | None
    high: float | None
    convention: Convention | None
    qualifier: str | None = None
    heading: str | None = None
    printed_unit: str | None = None
    cell: Cell | None = None
    corrected: Corrected | None = None


class TextFigure(_Document):
    """A published text, such as a protection class."""

    text: str
    value: str
    heading: str | None = None
    cell: Cell | None = None


class Constant(_Document):
    """A constant of the DC motor at its terminals, at 25 °C, with its 95 % interval."""

    value: float | None
    unit: str
    low: float | None
    high: float | None
    basis: Literal["published", "derived", "reconciled"]
    sources: tuple[str, ...] = Field(alias="from", description="figure keys it came from")


class Fact(_Document):
    """A word about the motor's kind, and how it is known."""

    value: str | None
    basis: Basis


class Temperature(_Document):
    """The temperature that figures are stated for."""

    value: float | None
    unit: Literal["°C"]
    basis: Basis


class Kind(_Document):
    """What kind of motor it is."""

    commutation: Fact
    magnet: Fact
    reference_temperature: Temperature


class FoundIn(_Document):
    """The file that a motor was read from."""

    file: str
    sheet: str | None = None
    page: int | None = None


class Conditional(_Document):
    """Figures that a sheet gives once more under another condition."""

    when: str
    figures: dict[str, Figure]


class OperatingPoint(_Document):
    """One published operating point."""

    name: str | None
    figures: dict[str, Amount]
    row: int | None


class MotorFinding(Finding):
    """A finding as it stands with one of its motors; ``motors`` counts those of a long column."""

    motors: int | None = None


class Motor(_Document):
    """A motor in SI: figures as published, constants, findings, and where all of it came from.

    >>> motor.constants["torque_constant"].value  # doctest: +SKIP
    0.0188
    """

    part_number: str
    maker: str | None
    series: str | None
    kind: Kind = Field(alias="model")
    figures: dict[str, Figure | TextFigure]
    constants: dict[str, Constant]
    findings: tuple[MotorFinding, ...]
    source: FoundIn
    repeats: dict[str, list[Figure]] | None = None
    conditions: list[Conditional] | None = None
    points: list[OperatingPoint] | None = None

    @property
    def document(self) -> dict[str, Any]:
        """The document that ``motorfolio show --json`` prints."""
        return self.model_dump(mode="json", by_alias=True, exclude_unset=True)

    def _repr_html_(self) -> str:
        """Constants and findings as a small HTML page for a notebook; all text is escaped."""
        rows = "".join(
            f"<tr><th>{escape(key.replace('_', ' '))}</th><td>{_sized(c.value)} {escape(c.unit)}"
            f"</td><td>{_sized(c.low)} … {_sized(c.high)}</td><td>{c.basis}</td></tr>"
            for key, c in self.constants.items()
        )
        findings = "".join(
            f"<li><b>{f.severity}</b>: {escape(f.message)}</li>" for f in self.findings
        )
        name = " · ".join(escape(part) for part in (self.part_number, self.maker) if part)
        return (
            f"<table><caption>{name}, constants at 25 °C</caption><tr><th></th><th>value</th>"
            f"<th>95 % interval</th><th>basis</th></tr>{rows}</table>"
            + (f"<ul>{findings}</ul>" if findings else "<p>No findings.</p>")
        )


def _sized(value: float | None) -> str:
    return "–" if value is None else f"{value:.4g}"


MODELS: Mapping[str, type[BaseModel]] = {"entry": Entry, "motor": Motor, "finding": MotorFinding}
"""The documents by the name that ``motorfolio schema`` knows them under."""


def json_schema(name: str) -> dict[str, Any]:
    """The JSON Schema (2020-12) of one of ``MODELS``."""
    schema = MODELS[name].model_json_schema(by_alias=True)
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", **schema}
