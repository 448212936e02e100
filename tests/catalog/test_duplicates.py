"""A motor that stands more than once in a table, or in several files of a call."""

import json

from .conftest import TABLE

HEAD = "Part number,Nominal voltage [V],No-load speed [rpm],Torque constant [mNm/A],\
Terminal resistance [Ohm],Mass [g]\n"


def read(run, path, text):
    path.write_text(HEAD + text, encoding="utf-8")
    status, out, err = run("import", path, "--json")
    assert status == 0, err
    (file,) = json.loads(out)["files"]
    return file, {m["part_number"]: m for m in file["motors"]}


def test_the_same_motor_at_another_voltage_is_a_condition(run, tmp_path):
    rows = "A-1,12,4557,25.0,0.800,\nA-2,24,4564,50.0,3.20,210\nA-1,24,9114,25.0,0.800,215\n"
    file, motors = read(run, tmp_path / "a.csv", rows)
    assert file["stored"] == 2
    motor = motors["A-1"]
    assert motor["figures"]["nominal_voltage"]["value"] == 12
    assert motor["figures"]["no_load_speed"]["text"] == "4557"
    assert motor["figures"]["mass"]["text"] == "215"  # of the motor, whatever the voltage
    (condition,) = motor["conditions"]
    assert condition["when"] == "24 V"
    speed = condition["figures"]["no_load_speed"]
    assert (speed["text"], speed["cell"]["row"]) == ("9114", 4)
    assert any("A-1" in remark for remark in file["remarks"])
    shown = json.loads(run("show", "A-1", "--json")[1])
    assert shown["conditions"] == motor["conditions"]


def test_a_second_row_fills_gaps_and_checks_the_first(run, tmp_path):
    rows = "A-1,12,4557,25.0,,\nA-2,24,4564,50.0,3.20,210\nA-1,12,4557,25.5,0.800,215\n"
    _, motors = read(run, tmp_path / "a.csv", rows)
    motor = motors["A-1"]
    assert motor["figures"]["terminal_resistance"]["text"] == "0.800"
    assert motor["figures"]["terminal_resistance"]["cell"]["row"] == 4
    assert motor["figures"]["torque_constant"]["text"] == "25.0"
    assert [f["text"] for f in motor["repeats"]["torque_constant"]] == ["25.5"]
    assert "conditions" not in motor


def test_a_motor_in_two_files_of_a_call_is_said_to_be(run, sheet, tmp_path):
    other = tmp_path / "other.csv"
    other.write_text(TABLE.replace("50.0", "51.0"), encoding="utf-8")
    _, out, _ = run("import", sheet, other, "--json")
    first, second = json.loads(out)["files"]
    assert any("3 of its motors" in remark for remark in second["remarks"])
    assert not first["remarks"]
    found = json.loads(run("revisions", "PUFFIN-B", "--json")[1])["revisions"]
    assert [m["figures"]["torque_constant"]["text"] for m in found] == ["50.0", "51.0"]
    _, out, _ = run("import", sheet, other, "--json")
    assert [f["unchanged"] for f in json.loads(out)["files"]] == [True, True]
