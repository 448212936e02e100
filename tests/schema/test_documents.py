"""The documents that enter and leave: their schemas are what they say, and nothing is lost."""

from __future__ import annotations

import copy
from typing import Any

import jsonschema
import pytest
from pydantic import ValidationError

import motorfolio.schema
from motorfolio.schema.entry import MODELS, Amount, Cell, Entry, Finding, Motor, json_schema
from motorfolio.schema.vocabulary import quantities, quantity, words

MOTOR: dict[str, Any] = {
    "part_number": "EX-1 <b>",
    "maker": "Muster & Söhne",
    "series": None,
    "model": {
        "commutation": {"value": "brushed", "basis": "stated"},
        "magnet": {"value": None, "basis": "assumed"},
        "reference_temperature": {"value": 25.0, "unit": "°C", "basis": "told"},
    },
    "figures": {
        "torque_constant": {
            "text": "18.8 mNm/A", "value": 0.0188, "unit": "N·m/A", "low": 0.01875, "high": 0.01885,
            "convention": {"current": "dc", "temperature": 25.0, "basis": "inferred"},
        },
        "protection": {"text": "IP54", "value": "IP54", "cell": {"row": 3, "column": 2}},
    },
    "constants": {
        "torque_constant": {
            "value": 0.018814, "unit": "N·m/A", "low": 0.0187, "high": None,
            "basis": "published", "from": ["torque_constant"],
        },
        "armature_resistance": {
            "value": None, "unit": "Ω", "low": None, "high": None, "basis": "derived", "from": [],
        },
    },
    "findings": [],
    "source": {"file": "a.csv"},
}  # fmt: skip


@pytest.mark.parametrize("name", sorted(MODELS))
def test_schemas_are_schemas(name: str) -> None:
    """Held against the JSON Schema 2020-12 metaschema."""
    schema = json_schema(name)
    assert schema["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    jsonschema.Draft202012Validator.check_schema(schema)


def test_a_motor_comes_back_as_it_went() -> None:
    """Keys that were not given stay away, those given as null stay."""
    document = Motor.model_validate(copy.deepcopy(MOTOR)).document
    assert document == MOTOR
    jsonschema.Draft202012Validator(json_schema("motor")).validate(document)
    named = json_schema("motor")["properties"]
    assert "model" in named
    assert "kind" not in named


def test_a_key_more_or_less_is_refused() -> None:
    for change in ({"colour": "red"}, {"constants": None}):
        with pytest.raises(ValidationError):
            Motor.model_validate({**MOTOR, **change})
    less = {key: value for key, value in MOTOR.items() if key != "figures"}
    with pytest.raises(ValidationError):
        Motor.model_validate(less)


def test_documents_do_not_change() -> None:
    motor = Motor.model_validate(MOTOR)
    things = ((motor, "maker"), (Amount(value=1.0, unit="V"), "unit"), (Cell(row=1), "row"),
              (motor.constants["torque_constant"], "value"))  # fmt: skip
    for thing, name in things:
        with pytest.raises(ValidationError, match="frozen"):
            setattr(thing, name, None)
    finding = Finding(
        part_number="EX-1", severity="note", relation="r", figures=("f",), message="m"
    )
    assert (finding.scope, finding.cause) == ("motor", "unexplained")
    with pytest.raises(ValidationError, match="frozen"):
        finding.message = "n"


def test_a_motor_in_a_notebook() -> None:
    page = Motor.model_validate(MOTOR)._repr_html_()
    assert "EX-1 &lt;b&gt; · Muster &amp; Söhne" in page
    assert "<th>torque constant</th><td>0.01881 N·m/A</td><td>0.0187 … –</td>" in page
    assert "<td>– Ω</td>" in page
    assert "No findings" in page
    found = {"part_number": "EX-1", "severity": "error", "relation": "r", "figures": ["f"],
             "message": "2 < 1"}  # fmt: skip
    page = Motor.model_validate({**MOTOR, "maker": None, "findings": [found]})._repr_html_()
    assert "<li><b>error</b>: 2 &lt; 1</li>" in page
    assert "No findings" not in page
    assert "EX-1 &lt;b&gt;, constants" in page


def test_an_entry_names_every_figure_and_its_units() -> None:
    """A heading of any sheet may be a key; figure keys are described with what they accept."""
    own = ("part_number", "maker", "series")
    properties = json_schema("entry")["properties"]
    assert set(properties) == {*own, *quantities()}
    assert "N·m/A" in properties["torque_constant"]["description"]
    texts = [key for key, q in quantities().items() if q.text and key not in own]
    assert texts
    for key in texts:
        assert properties[key]["description"] == "text"
    for key in own:
        assert properties[key].get("description") != "text"
    check = jsonschema.Draft202012Validator(json_schema("entry"))
    entry = {"part_number": "EX-1", "torque_constant": "30.2 mN·m/A", "Kt [mNm/A]": 30.2}
    check.validate(entry)
    assert Entry.model_validate(entry).model_dump(exclude_unset=True) == entry
    assert not check.is_valid({"part_number": "EX-1", "torque_constant": [1]})


def test_public_names() -> None:
    for name in motorfolio.schema.__all__:
        assert getattr(motorfolio.schema, name).__name__ == name
        assert name in dir(motorfolio.schema)
    with pytest.raises(AttributeError, match="motor_of_my_dreams"):
        motorfolio.schema.motor_of_my_dreams  # noqa: B018


def test_every_quantity_is_complete() -> None:
    """A number has a unit, that it accepts, and plausible values in order."""
    for key, q in quantities().items():
        assert q.key == key
        assert quantity(key) is q
        if q.text:
            continue
        assert q.unit
        assert q.accepts[0] == q.unit or q.unit in q.accepts or q.accepts, key
        low, high = q.plausible
        assert 0 <= low < high or key.endswith("temperature"), key
    with pytest.raises(KeyError):
        quantity("motor_of_my_dreams")


def test_words_of_every_language_are_together() -> None:
    """Names in English, German and Chinese are those of one quantity."""
    names = words().names["rotor_inertia"]
    assert any("inertia" in name.lower() for name in names)
    assert any("trägheit" in name.lower() for name in names)
    assert any("惯量" in name for name in names)
    assert set(words().names) <= set(quantities())
    assert words().fillers
    assert words().captions
