"""The JSON documents that leave the program: a motor, a finding, an unread cell.

Their shapes are the ones other programs rely on: numbers in SI, whatever has a dimension with
its unit, null for what is not finite or not known. Light on purpose: showing one motor loads
neither numpy nor pydantic.
"""

import math
from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from ..schema.convention import Convention
    from ..schema.gear import Gear
    from ..schema.motor import Finding

Document = dict[str, Any]

LONGEST_LIST = 200
"""A column finding of more motors names only the motor it is shown with, and their number."""


def number(value: float | None) -> float | None:
    """The value, or None where it isn't finite."""
    return value if value is not None and math.isfinite(value) else None


def amount(value: float | None, unit: str) -> Document:
    """A value with its SI unit."""
    return {"value": number(value), "unit": unit}


def cell(
    sheet: str | None = None,
    page: int | None = None,
    row: int | None = None,
    column: int | None = None,
) -> Document:
    """A place in a file, rows and columns from 1; null where unknown."""
    return {"sheet": sheet, "page": page, "row": row or None, "column": column or None}


def figure(
    text: str | None,
    value: float | None,
    unit: str,
    low: float | None,
    high: float | None,
    convention: "Convention | None",
    *,
    qualifier: str | None = None,
    heading: str | None = None,
    printed_unit: str | None = None,
    place: Document | None = None,
) -> Document:
    """A published figure: text as printed, value and interval in SI, convention, and the cell."""
    document: Document = {
        "text": text,
        "value": number(value),
        "unit": unit,
        "low": number(low),
        "high": number(high),
        "convention": (convention.as_json() or None) if convention is not None else None,
    }
    if qualifier:
        document["qualifier"] = qualifier
    if heading is not None:
        document |= {"heading": heading, "printed_unit": printed_unit or None}
    if place is not None:
        document["cell"] = place
    return document


def correction(figure: Document, published: Document, text: str, reason: str) -> Document:
    """``figure`` (as published) with the correction that stands in its place."""
    return {
        **figure,
        **published,
        "corrected": {
            "text": text,
            "value": figure["value"],
            "unit": figure["unit"],
            "low": figure["low"],
            "high": figure["high"],
            "reason": reason,
        },
    }


def text_figure(text: str, heading: str | None = None, place: Document | None = None) -> Document:
    """A published text, such as a protection class."""
    document: Document = {"text": text, "value": text}
    if heading is not None:
        document["heading"] = heading
    if place is not None:
        document["cell"] = place
    return document


def constant(
    value: float,
    unit: str,
    low: float | None,
    high: float | None,
    basis: str,
    sources: Sequence[str],
) -> Document:
    """A canonical constant with its interval and the figures that it came from."""
    return {
        "value": number(value),
        "unit": unit,
        "low": number(low),
        "high": number(high),
        "basis": basis,
        "from": list(sources),
    }


def finding(f: "Finding") -> Document:
    """A finding of the reconciliation as a document."""
    return {
        "part_number": f.part_number,
        "scope": f.scope,
        "part_numbers": list(f.part_numbers),
        "severity": f.severity,
        "relation": f.relation,
        "figures": list(f.figures),
        "suspect": f.suspect,
        "ratio": number(f.ratio),
        "cause": f.cause,
        "other_causes": list(f.other_causes),
        "implied": amount(f.implied.value, f.implied.unit) if f.implied else None,
        "cell": cell(f.cell.sheet, f.cell.page, f.cell.row, f.cell.column) if f.cell else None,
        "message": f.message,
    }


def with_motor(document: Document, part_number: str) -> Document:
    """A column finding as it stands with one of its motors."""
    concerned = document["part_numbers"]
    if document["scope"] != "column" or len(concerned) <= LONGEST_LIST:
        return document
    return {**document, "part_numbers": [part_number], "motors": len(concerned)}


def unread(
    part_number: str | None,
    heading: str | None,
    place: Document,
    text: str,
    reason: str,
    guesses: Iterable[str],
) -> Document:
    """A cell that was not understood, with what it might be."""
    return {
        "part_number": part_number,
        "heading": heading,
        "cell": place,
        "text": text,
        "reason": reason,
        "guesses": list(guesses),
    }


def fact(value: object, basis: str) -> Document:
    """A fact about the motor's kind and how it is known."""
    return {"value": value, "basis": basis}


def model(
    commutation: Document, magnet: Document, reference_temperature: float | None, basis: str
) -> Document:
    """What kind of motor it is."""
    return {
        "commutation": commutation,
        "magnet": magnet,
        "reference_temperature": {**amount(reference_temperature, "°C"), "basis": basis},
    }


def motor(
    *,
    part_number: str,
    maker: str,
    series: str | None,
    kind: Document,
    figures: Mapping[str, Document],
    constants: Mapping[str, Document],
    findings: Sequence[Document],
    repeats: Mapping[str, list[Document]],
    conditions: Mapping[str, Mapping[str, Document]],
    points: Sequence[Document],
    source: Document,
) -> Document:
    """One motor: as published, in SI, and what was found."""
    document: Document = {
        "part_number": part_number,
        "maker": maker or None,
        "series": series,
        "model": kind,
        "figures": dict(figures),
        "constants": dict(constants),
        "findings": list(findings),
        "source": source,
    }
    if repeats:
        document["repeats"] = dict(repeats)
    if conditions:
        document["conditions"] = [
            {"when": when, "figures": dict(found)} for when, found in conditions.items()
        ]
    if points:
        document["points"] = list(points)
    return document


def gear(found: "Gear") -> Document:
    """A gear: its figures in SI, pure numbers bare, null where its sheet gives none."""
    from ..schema.gear import UNITS

    document: Document = {}
    for key, unit in ((f, UNITS.get(f)) for f in found.__slots__ if f != "currency"):
        value = getattr(found, key)
        if unit == "currency":
            if value is not None:
                document[key] = amount(value, found.currency or unit)
        else:
            document[key] = value if unit in (None, "1") else amount(value, unit)
    return document
