"""The JSON Schema of a requirement file, made from the table of its fields."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from .fields import LISTS, SECTIONS, Field


def json_schema() -> dict[str, Any]:
    """The JSON Schema (2020-12) of a requirement file, made from the table."""

    def of(fields: Mapping[str, Field]) -> dict[str, Any]:
        return {
            "type": "object",
            "additionalProperties": False,
            "properties": {key: _schema(field) for key, field in fields.items()},
        }

    text = {"type": "string"}
    rows = {
        "type": "array",
        "minItems": 2,
        "items": {"type": "array", "prefixItems": [text] * 3, "minItems": 3, "maxItems": 3},
    }
    cycle = {
        "description": "a CSV file with the columns time, speed and torque (or force), "
        "or rows of [time, speed, torque]",
        "oneOf": [text, rows],
    }
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "motorfolio requirement",
        "type": "object",
        "additionalProperties": False,
        "properties": {
            "title": text,
            "cycle": cycle,
            **{name: of(fields) for name, fields in SECTIONS.items()},
            **{
                name: {"type": "array", "minItems": 1, "items": of(fields)}
                for name, fields in LISTS.items()
            },
        },
    }


def _schema(field: Field) -> dict[str, Any]:
    number, text = {"type": "number"}, {"type": "string"}
    match field.kind:
        case "quantity":
            unit = " or ".join(field.accepts)
            return {**text, "description": f"{field.doc}; text with a unit ({unit})"}
        case "current":
            return {**text, "description": f"{field.doc}; text with a unit (A)"}
        case "share":
            kinds: list[dict[str, Any]] = [number, text]
            return {"anyOf": kinds, "description": f"{field.doc}; a pure number or per cent"}
        case "ratio":
            several = {"type": "array", "minItems": 1, "items": number}
            return {"anyOf": [number, text, several], "description": field.doc}
        case "number":
            return {**number, "description": field.doc}
        case "count":
            return {"type": "integer", "minimum": 1, "description": field.doc}
        case "texts":
            return {"type": "array", "items": text, "description": field.doc}
        case "flag":
            return {"type": "boolean", "description": field.doc}
        case "tolerance":
            return {"anyOf": [{"type": "boolean"}, number, text], "description": field.doc}
    return {"enum": list(field.accepts), "description": field.doc}
