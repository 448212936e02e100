"""JSON and TOML: flat lists, printed digits, the document that export writes."""

import json
from pathlib import Path

import pytest

from motorfolio.catalog.tables import TableError
from motorfolio.catalog.tables.grid import Stored

from .files import one, read


def test_numbers_keep_their_printed_digits(tmp_path: Path) -> None:
    text = """[{"Part": "007", "Kt (mNm/A)": 36.20, "n": 6290, "J": 1.20e-5,
      "big": 12345678901234567890, "ok": true, "none": null}, {"Part": "A2", "n": 1e3, "new": "x",
      "Kt (mNm/A)": {"value": 0.0302, "unit": "N·m/A"}}]"""
    grid = one(read(tmp_path / "a.json", text))
    assert grid.rows == [
        ["Part", "Kt (mNm/A)", "n", "J", "big", "ok", "none", "new", "Kt (mNm/A) [N·m/A]"],
        ["007", "36.20", "6290", "1.20e-5", "12345678901234567890", "true", "", "", ""],
        ["A2", "", "1e3", "", "", "", "", "x", "0.0302"],
    ]
    assert all(isinstance(text, Stored) for text in grid.rows[1][1:5])
    assert not isinstance(grid.rows[1][0], Stored)


def test_a_key_given_twice_keeps_both(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.json", '[{"P": "A1", "U": 24, "U": 36}]'))
    assert grid.rows == [["P", "U", "U"], ["A1", "24", "36"]]


@pytest.mark.parametrize(
    "text",
    [
        '[{"P": "A1", "U": 24}]',
        '{"P": "A1", "U": 24}',
        '{"motors": [{"P": "A1", "U": 24}]}',
        '{"motor": {"P": "A1", "U": 24}}',
        '\ufeff  [ {"P": "A1",\r\n "U": 24} ]',
    ],
)
def test_shapes_of_json(tmp_path: Path, text: str) -> None:
    assert one(read(tmp_path / "a.txt", text)).rows == [["P", "U"], ["A1", "24"]]


@pytest.mark.parametrize(
    "text",
    [
        '[[motor]]\nP = "A1"\nU = 24\n',
        '[motor]\nP = "A1"\nU = 24\n',
        'P = "A1"  # a comment\nU = 24\n',
        '# motors\n\nP = "A1"\n[[m]]\nU = 24\n',
    ],
)
def test_shapes_of_toml(tmp_path: Path, text: str) -> None:
    assert one(read(tmp_path / "a.toml", text)).rows == [["P", "U"], ["A1", "24"]]
    assert read(tmp_path / "a", text).format == "toml"


def test_toml_numbers_and_dates(tmp_path: Path) -> None:
    text = '"Kt (mNm/A)" = 36.20\nn = 6_290\nrange = 2026-12-06\nb = false\n'
    grid = one(read(tmp_path / "a.toml", text))
    assert grid.rows[1] == ["36.20", "6290", "date 2026-12-06", "false"]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("[1, 2]", "another shape"),
        ('{"a": {"b": {"c": 1}}}', "where a text or number belongs"),
        ("[]", "another shape"),
        ('{"a": [1, 2]}', "holds a list"),
        ('[{"a": [1]}]', "object 1: “a” holds a list"),
        ('[{"a": 1}, 5]', "another shape"),
        ('[{"a": 1}', "no valid JSON: .* in line 1, column 10"),
        ('[{"a": 1,}]', "no valid JSON"),
        ("[" * 100_000, "nested too deep"),
        ('{"a":' * 100_000, "nested too deep"),
    ],
)
def test_json_of_another_shape(tmp_path: Path, text: str, message: str) -> None:
    with pytest.raises(TableError, match=message):
        read(tmp_path / "a.json", text)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("[a]\nx = 1\n[b]\nx = 2\n", "where a text or number belongs"),
        ("a = \n", "no valid TOML"),
        ("a = " + "[" * 50_000, "TOML"),
        ("a = 1\na = 2\n", "no valid TOML"),
    ],
)
def test_toml_of_another_shape(tmp_path: Path, text: str, message: str) -> None:
    with pytest.raises(TableError, match=message):
        read(tmp_path / "a.toml", text, format="toml")


def export(**figures: object) -> str:
    motor = {
        "part_number": "A1",
        "maker": "Orley",
        "series": "A",
        "model": {
            "commutation": {"value": "block", "basis": "told"},
            "magnet": {"value": "ferrite", "basis": "assumed"},
        },
        "figures": figures,
        "constants": {"torque_constant": {"value": 0.0362, "unit": "N·m/A"}},
        "findings": [],
    }
    return json.dumps({"motors": [motor]}, ensure_ascii=False)


def test_an_export_is_handed_over(tmp_path: Path) -> None:
    rms = {"current": "rms", "between": "lines", "connection": "star", "temperature": 25}
    text = export(
        torque_constant={"text": "36.2", "value": 0.0362, "unit": "N·m/A", "low": 0.03615,
                         "high": 0.03625, "printed_unit": "mNm/A",
                         "convention": {**rms, "basis": "stated"}},
        terminal_resistance={"value": 2.45, "unit": "Ω", "low": 2.445, "high": 2.455,
                             "convention": {"between": "lines", "basis": "assumed"}},
        maximum_efficiency={"text": "0.848", "value": 0.848, "unit": "1", "printed_unit": ""},
        description={"text": "quiet", "value": "quiet"},
    )  # fmt: skip
    grid = one(read(tmp_path / "a.json", text))
    assert dict(zip(*grid.rows, strict=True)) == {
        "part_number": "A1",
        "maker": "Orley",
        "series": "A",
        "torque_constant [mNm/A] (rms, lines, star, 25 °C)": "36.2",
        "terminal_resistance [Ω]": "2.45 ± 0.005",
        "maximum_efficiency": "0.848",
        "description": "quiet",
        "commutation": "block (told)",
        "magnet": "ferrite (assumed)",
    }
    assert grid.rows[0][:3] == ["part_number", "maker", "series"]


@pytest.mark.parametrize(
    ("text", "shown", "unit"),
    [
        ("6290", "6290", "rpm"),
        ("6.29", "6.29", "rpm"),
        ("0.850", "0.850", "rpm"),
        ("0,85", "658.7 ± 0.05", "rad/s"),  # from a sheet with decimal commas
        ("6,290", "658.7 ± 0.05", "rad/s"),  # six thousand, or six
        ("6.290", "658.7 ± 0.05", "rad/s"),
        ("6 290", "658.7 ± 0.05", "rad/s"),
    ],
)
def test_a_printed_text_of_unclear_marks_gives_way_to_the_value(
    tmp_path: Path, text: str, shown: str, unit: str
) -> None:
    figure = {"text": text, "value": 658.7, "unit": "rad/s", "low": 658.65, "high": 658.75,
              "printed_unit": "rpm"}  # fmt: skip
    grid = one(read(tmp_path / "a.json", export(no_load_speed=figure)))
    assert dict(zip(*grid.rows, strict=True))[f"no_load_speed [{unit}]"] == shown


def test_qualifiers_conditions_and_points_of_an_export(tmp_path: Path) -> None:
    document = json.loads(
        export(no_load_current={"value": 0.08, "unit": "A", "high": 0.08, "qualifier": "at most"},
               rated_power={"value": 10.0, "unit": "W", "low": 9.0, "high": 12.0})
    )  # fmt: skip
    motor = document["motors"][0]
    motor["conditions"] = [
        {"when": "400 V", "figures": {"nominal_speed": {"value": 314.2, "unit": "rad/s"}}}
    ]
    motor["points"] = [{"torque": 1}]
    grid = one(read(tmp_path / "a.json", json.dumps(document)))
    cells = dict(zip(*grid.rows, strict=True))
    assert cells["no_load_current [A]"] == "≤ 0.08"
    assert cells["rated_power [W]"] == "10.0 +2/-1"
    assert cells["nominal_speed [rad/s] (400 V)"] == "314.2"
    assert "operating points" in grid.remarks[0]
