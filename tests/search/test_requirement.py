"""Requirements: read from texts, refused in one sentence, written and read back."""

from __future__ import annotations

import io
import math
import re
from pathlib import Path

import numpy as np
import pytest
from rich.console import Console

from motorfolio.catalog.report.candidates import print_requirement
from motorfolio.catalog.requirement.fields import (
    LISTS,
    SECTIONS,
    RequirementError,
    read_ratio,
)
from motorfolio.catalog.requirement.file import merged, read_file, saved, to_toml
from motorfolio.catalog.requirement.options import OPTIONS, requirement_of
from motorfolio.catalog.requirement.read import read_requirement
from motorfolio.catalog.requirement.schema import json_schema
from motorfolio.catalog.requirement.where import read_where
from motorfolio.catalog.search.documents import requirement_document
from motorfolio.schema.errors import MotorfolioError

from .made import SAMPLES

RPM = 2 * math.pi / 60
MACHINES = sorted((SAMPLES / "machines").glob("*.toml"))
POINT = {"point": [{"torque": "0.1 N·m", "speed": "3000 rpm"}]}


@pytest.mark.parametrize("path", MACHINES, ids=lambda p: p.stem)
def test_the_sample_machines_round_trip(path: Path, tmp_path: Path) -> None:
    first = read_requirement(read_file(path))
    again = tmp_path / "again.toml"
    again.write_text(saved(first), encoding="utf-8")
    second = read_requirement(read_file(again))
    assert second.document == first.document
    assert second.demand.supply == first.demand.supply
    assert second.demand.drive == first.demand.drive
    assert np.array_equal(second.demand.cycle.torque_end, first.demand.cycle.torque_end)


def test_lift_axis_as_understood() -> None:
    """The belt axis by hand: weight (12 − 4) kg, 15 N friction, thirds over 0.6 m in 1.2 s."""
    r = read_requirement(read_file(SAMPLES / "machines" / "lift_axis.toml"))
    cycle = r.demand.cycle
    assert cycle.speed_end[0] == pytest.approx(0.75 / 0.02)
    assert cycle.torque_start[0] == pytest.approx((8 * 9.80665 + 15) * 0.02)
    assert r.load_inertia == pytest.approx(16 * 0.02**2 + 300e-7)
    assert r.demand.supply.available == pytest.approx(0.96 * 45 - 0.6)
    assert r.demand.supply.voltage == 48  # what switches, and makes the ripple
    assert r.with_supply(50).demand.supply.available == pytest.approx(0.96 * 50 - 0.6)
    assert r.rest_effort == pytest.approx(8 * 9.80665 * 0.02)


def test_altitude_takes_of_the_rise() -> None:
    """1 % of the permissible rise for each 100 m above 1000 m: IEC 60034-1 (from memory)."""

    def at(altitude: str) -> float:
        document = {**POINT, "ambient": {"altitude": altitude}}
        return read_requirement(document).demand.surroundings.permissible_rise

    assert at("900 m") == 1
    assert at("2500 m") == pytest.approx(0.85)


def test_currents_in_their_conventions() -> None:
    drive = {"peak_current": "14 A peak", "continuous_current": "5 Arms"}
    read = read_requirement({**POINT, "drive": drive}).demand.drive
    assert (read.peak_current, read.convention) == (14, "peak")
    assert (read.continuous_current, read.continuous_convention) == (5, "rms")
    plain = read_requirement({**POINT, "drive": {"peak_current": "5 A"}}).demand.drive
    assert plain.convention == "dc"


@pytest.mark.parametrize(
    ("given", "values", "span"),
    [
        ("5", (5.0,), None),
        (5, (5.0,), None),
        ("3..20", (), (3.0, 20.0)),
        ("3, 5,8", (3.0, 5.0, 8.0), None),
        ([8, 3], (3.0, 8.0), None),
        ("50:1", (50.0,), None),
    ],
)
def test_ratios(given, values, span) -> None:
    ratios = read_ratio(given, "--ratio")
    assert ratios.values == values
    assert (ratios.low, ratios.high) == (span or (None, None))


SUPPLY = {"supply": {"voltage": "24 V"}}


@pytest.mark.parametrize(
    ("document", "words"),
    [
        ({}, "what the load does"),
        ({"point": [{"torque": "1", "speed": "10 rpm"}]}, "without a unit"),
        ({"point": [{"torque": 1, "speed": "10 rpm"}]}, "without a unit"),
        ({"point": [{"torque": "1 V", "speed": "10 rpm"}]}, "N·m would do"),
        ({"point": [{"torque": "1 N·m", "speed": "10 Hz"}]}, "speed"),
        ({"point": [{"torque": "1 N·m", "speed": "10 m/s"}]}, "rad/s"),
        ({"point": [{"torque": "1 N·m"}]}, "no speed"),
        ({"point": [{"torque": "1 N·m", "speed": "1 rpm"}] * 2}, "duration"),
        ({"point": [{"torque": "1 N·m", "speed": "1 rpm", "duration": "0 s"}]}, "too small"),
        ({**POINT, "move": [{"dwell": "1 s"}]}, "leave one"),
        ({**POINT, "gear": {"ratio": "20..3"}}, "3..20"),
        ({**POINT, "gear": {"ratio": "0"}}, "above 0"),
        ({**POINT, "gear": {"ratio": "much"}}, "gear ratio"),
        ({**POINT, "gear": {"efficiency": "130 %"}}, "at most 100 %."),
        ({**POINT, "gear": {"use": "catalog", "efficiency": 0.9}}, "bring their own"),
        ({**POINT, "supply": {"voltage": "24 V", "lowest_voltage": "30 V"}}, "exchange"),
        ({**POINT, "supply": {"bridge_drop": "1 V"}}, "supply.voltage"),
        ({**POINT, "supply": {"voltage": "1 V", "bridge_drop": "2 V"}}, "nothing"),
        ({**POINT, "drive": {"pwm_frequency": "20 kHz"}}, "supply.voltage"),
        ({**POINT, "drive": {"peak_current": "2 A", "continuous_current": "3 A"}}, "exchange"),
        ({**POINT, "drive": {"peak_current": "2 Arms", "current_convention": "dc"}}, "leave one"),
        ({**POINT, "wanted": {"order_by": "beauty"}}, "would do"),
        ({**POINT, "wanted": {"reserve": "-5 %"}}, "too small"),
        ({**POINT, "wanted": {"limit": 0}}, "too small"),
        ({**POINT, "wanted": {"where": ["mas < 3 kg"]}}, "did you mean mass"),
        ({**POINT, "wanted": {"where": ["mass < 3"]}}, "without a unit"),
        ({**POINT, "wanted": {"where": ["heavy"]}}, "is no limit"),
        ({**POINT, "wanted": {"where": ["maker < X"]}}, "is text"),
        ({**POINT, "ambient": {"altitude": "5000 m"}}, "at most 4000"),
        ({**POINT, "suply": {"voltage": "24 V"}}, "did you mean supply"),
        ({**POINT, "supply": {"volts": "24 V"}}, "no 'volts'"),
        ({**POINT, "load": {"kind": "belt"}}, "pulley_radius"),
        ({**POINT, "load": {"moving_mass": "3 kg"}}, "linear axis"),
        ({"move": [{"time": "1 s"}]}, "no angle"),
        ({"move": [{"angle": "0 rad", "time": "1 s"}]}, "goes nowhere"),
        ({"move": [{"angle": "1 rad", "profile": "trapezoidal", "time": "1 s"}]}, "two of"),
        ({"cycle": [["0 s", "0 rpm", "1 N·m"], ["1 s", "5 rpm", "1 N·m"]]}, "end it at the speed"),
        ({"cycle": [["1 s", "0 rpm", "1 N·m"], ["0 s", "0 rpm", "1 N·m"]]}, "backward"),
        ({"cycle": "nowhere.csv"}, "no cycle file"),
    ],
)  # fmt: skip
def test_one_sentence_says_what_would_do(document, words) -> None:
    with pytest.raises(MotorfolioError, match=words.replace(".", r"\.")) as error:
        read_requirement(document)
    assert "\n" not in str(error.value)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "empty"),
        ("time,speed [rpm],torque [N·m]\n0,0,1\n", "has no unit"),
        ("time [s],speed [rpm]\n0,0\n", "no column torque"),
        ("time [s],speed [rpm],torque [V]\n0,0,1\n", "heading"),
        ("time [s],speed [rpm],torque [N·m]\n0,0,x\n", "row 2"),
        ("time [s],speed [rpm],torque [N·m]\n0,0,1\n0,9,1\n1,0,1\n", "speed steps"),
        ("time [s],time [s],speed [rpm],torque [N·m]\n0,0,0,1\n", "two columns"),
    ],
)
def test_bad_cycle_files(tmp_path: Path, text: str, words: str) -> None:
    (tmp_path / "c.csv").write_text(text, encoding="utf-8")
    with pytest.raises(MotorfolioError, match=words):
        read_requirement({"cycle": "c.csv"}, folder=tmp_path)


@pytest.mark.parametrize(
    "document",
    [
        {"point": ["abc"]},
        {"point": [[1.5]]},
        {"point": "abc"},
        {"move": [5]},
        {"cycle": [1.5]},
        {"cycle": 7},
        {"cycle": {"a": 1}},
        {"cycle": "a\x00b.csv"},
        {**POINT, "wanted": {"where": 5}},
        {**POINT, "wanted": {"where": [5]}},
        {**POINT, "wanted": {"limit": math.inf}},
        {**POINT, "wanted": {"limit": 10**400}},
        {**POINT, "wanted": {"largest_inertia_ratio": math.nan}},
        {**POINT, "wanted": {"largest_inertia_ratio": math.inf}},
        {**POINT, "wanted": {"reserve": 10**400}},
        {**POINT, "gear": {"ratio": 10**400}},
        {**POINT, "gear": {"ratio": "x" * 5000}},
        {**POINT, "load": {"inertia": "\n" * 50 + "kg"}},
        {**POINT, "load": {"inertia": ["a" * 90] * 90}},
        {**POINT, "load": {"kind": {"a\n": "b"}}},
        {**POINT, "title": 5},
        {"y" * 5000: 1},
    ],
)
def test_what_no_requirement_holds_is_refused_in_one_line(document) -> None:
    """Random documents once ended in tracebacks and in messages over many lines."""
    with pytest.raises(RequirementError) as refused:
        read_requirement(document)
    assert str(refused.value).isprintable()
    assert len(str(refused.value)) <= 300


def test_one_limit_in_the_file_and_one_option() -> None:
    """A lone text in the file is one limit, not a list of letters."""
    file = {"wanted": {"where": "mass < 500 g"}}
    both = merged(file, {"wanted": {"where": ["maker = X"]}}, Path())
    assert both["wanted"]["where"] == ["mass < 500 g", "maker = X"]


@pytest.mark.parametrize("cell", ["nan", "inf", "1_000", "1e999"])
def test_cells_of_a_cycle_are_plain_numbers(tmp_path: Path, cell: str) -> None:
    text = f"time [s];speed [rpm];torque [N·m]\n0;0;1\n1;{cell};1\n"
    (tmp_path / "c.csv").write_text(text, encoding="utf-8")
    with pytest.raises(RequirementError, match=r"row 3: .* is no number"):
        read_requirement({"cycle": "c.csv"}, folder=tmp_path)


def test_cycle_file_in_other_clothes(tmp_path: Path) -> None:
    """Semicolons, decimal commas, units in words, ms and rpm."""
    text = "Time (ms);Speed in rpm;Torque [mNm]\n0;0;1,5\n500;60;1,5\n1000;0;1,5\n"
    (tmp_path / "c.csv").write_text(text, encoding="utf-8")
    r = read_requirement({"cycle": "c.csv"}, folder=tmp_path)
    assert r.demand.cycle.duration == pytest.approx([0.5, 0.5])
    assert r.demand.cycle.speed_end == pytest.approx([60 * RPM, 0])
    assert r.demand.cycle.torque_start == pytest.approx([1.5e-3, 1.5e-3])
    r.document["cycle"] = str(tmp_path / "c.csv")
    again = tmp_path / "r.toml"
    again.write_text(saved(r), encoding="utf-8")
    rows = read_requirement(read_file(again)).demand.cycle
    assert np.array_equal(rows.speed_end, r.demand.cycle.speed_end)


def test_file_and_options_together() -> None:
    file = {**POINT, **SUPPLY, "wanted": {"where": ["mass < 1 kg"]}}
    both = merged(
        file, {"supply": {"bridge_drop": "1 V"}, "wanted": {"where": ["price < 9 EUR"]}}, Path()
    )
    assert both["supply"] == {"voltage": "24 V", "bridge_drop": "1 V"}
    assert both["wanted"]["where"] == ["mass < 1 kg", "price < 9 EUR"]
    with pytest.raises(RequirementError, match="leave one"):
        merged(file, {"supply": {"voltage": "12 V"}}, Path())
    with pytest.raises(RequirementError, match="leave one"):
        merged(file, POINT, Path())


def test_where() -> None:
    limit = read_where("mass <= 500 g")
    assert (limit.key, limit.sign, limit.value) == ("mass", "<=", pytest.approx(0.5))
    assert read_where('maker = "Some Maker"').value == "Some Maker"
    assert read_where("torque-constant ≥ 10 mNm/A").value == pytest.approx(0.01)
    assert read_where("price < 99.50 EUR").unit == "EUR"


def test_schema_names_every_key_of_the_samples() -> None:
    schema = json_schema()["properties"]
    for path in MACHINES:
        for section, content in read_file(path).items():
            assert section in schema
            tables = content if isinstance(content, list) else [content]
            for table in tables:
                if isinstance(table, dict):
                    inner = schema[section].get("items", schema[section])["properties"]
                    assert set(table) <= set(inner)
    assert set(SECTIONS) | set(LISTS) <= set(schema)


def test_toml_writes_what_it_reads(tmp_path: Path) -> None:
    import tomllib

    document = {
        "title": 'a "b" \\ ü',
        "gear": {"ratio": [1, 2.5], "efficiency": 0.9},
        "move": [{"angle": "1 rad", "there_and_back": True}, {"dwell": "1 s"}],
    }
    assert tomllib.loads(to_toml(document)) == document


def test_every_key_is_documented() -> None:
    page = (SAMPLES.parent / "docs" / "reference" / "requirement.md").read_text(encoding="utf-8")
    for section, fields in {**SECTIONS, **LISTS}.items():
        head = f"### [[{section}]]" if section in LISTS else f"### [{section}]"
        block = page.split(head + "\n")[1].split("###")[0]
        for key, field in fields.items():
            assert f"| `{key}` |" in block
            assert field.doc in block


def test_a_winch_and_a_sledge_by_hand() -> None:
    """A drum lifts m·g·r; a sledge on a slope needs m·g·(sin φ + µ·cos φ)·r upward (dry friction
    on an inclined plane, any textbook of mechanics; from memory)."""
    point = [{"force": "0 N", "speed": "0.5 m/s"}]
    winch = {"kind": "drum", "drum_radius": "50 mm", "moving_mass": "20 kg", "slope": "90 deg",
             "drum_inertia": "0.01 kg·m²", "friction_coefficient": 0.3}  # fmt: skip
    asked = read_requirement({"load": winch, "point": point})
    assert asked.demand.cycle.torque_start == pytest.approx([20 * 9.80665 * 0.05])
    assert asked.demand.cycle.speed_start == pytest.approx([10.0])
    assert asked.load_inertia == pytest.approx(0.01 + 20 * 0.05**2)
    sledge = {"kind": "belt", "pulley_radius": "20 mm", "moving_mass": "8 kg",
              "friction_coefficient": 0.15, "friction_force": "3 N", "slope": "30 deg"}  # fmt: skip
    up = read_requirement({"load": sledge, "point": point}).demand.cycle
    force = 8 * 9.80665 * (0.5 + 0.15 * math.sqrt(3) / 2) + 3
    assert up.torque_start == pytest.approx([force * 0.02])
    with pytest.raises(RequirementError, match="belongs to a drum"):
        read_requirement({"load": {**sledge, "drum_radius": "1 m"}, "point": point})


def test_a_move_that_cannot_be_made_is_told_with_units() -> None:
    told = {"profile": "trapezoidal", "time": "2 s", "top_speed": "0.2 m/s"}
    load = {"kind": "belt", "pulley_radius": "20 mm"}
    with pytest.raises(RequirementError) as refused:
        read_requirement({"load": load, "move": [{"distance": "1 m", **told}]})
    assert str(refused.value) == (
        "Move 1: 1 m in 2 s needs a top speed above 0.5 m/s and at most 1 m/s, not 0.2 m/s."
    )
    told = {"profile": "trapezoidal", "time": "1 s", "acceleration": "1 rad/s²"}
    with pytest.raises(RequirementError, match=r"1 rad takes at least 2 s at 1 rad/s², not 1 s"):
        read_requirement({"move": [{"angle": "1 rad", **told}]})


def test_a_bent_ramp_is_one_row_of_many_pieces() -> None:
    """There and back with dwells: up, top, down and rest, twice, whatever a ramp is cut into."""
    way = {"angle": "9 rad", "time": "1 s", "dwell": "1 s", "there_and_back": True}
    for profile, pieces in (("thirds", 1), ("s-curve", 17)):
        asked = read_requirement({"move": [{**way, "profile": profile}]})
        rows = requirement_document(asked)["cycle"]
        stretches = [row["stretch"] for row in rows]
        assert sorted(set(stretches)) == list(range(8))
        assert max(map(stretches.count, stretches)) == pieces
        said = io.StringIO()
        print_requirement(requirement_document(asked), Console(file=said, width=80))
        table = said.getvalue().split("power W")[1].split("Peak torque")[0]
        rows = [
            line for line in table.splitlines() if re.match(r" *[\d.]+ +[\d.]+ +-?[\d.]+ ", line)
        ]
        assert len(rows) == 8
        assert ("judged in up to 17 straight pieces" in said.getvalue()) == (pieces == 17)


def test_every_option_sets_a_key_that_exists() -> None:
    """An option's row names a section and a key of the table of fields, and none stands twice."""
    for option in OPTIONS:
        if option.section:
            assert option.key in {**SECTIONS, **LISTS}[option.section], option.name
    assert len({o.name for o in OPTIONS}) == len(OPTIONS)
    keys = [(o.section, o.key) for o in OPTIONS if o.key]
    assert len(set(keys)) == len(keys)


def test_a_limit_of_candidates_is_saved_as_a_number() -> None:
    given = dict.fromkeys(option.name for option in OPTIONS)
    given |= {"torque": ("1 N·m",), "speed": ("1 rpm",), "duration": (), "limit": "1"}
    requirement = requirement_of(given)
    assert "limit = 1\n" in saved(requirement)
    assert requirement.limit == 1
