"""What an import, a difference and a refusal tell: what changed, what is gone, what was meant."""

import json

import pytest

HEAD = (
    "Part number,Nominal voltage [V],No-load speed [rpm],Torque constant [mNm/A],"
    "Terminal resistance [Ohm],Mass [g]"
)
ROWS = [
    "AUK-22-A,12,5000,22.0,1.5,100",
    "AUK-22-B,24,5000,44.0,6.0,100",
    "AUK-10-A,12,8000,13.0,2.5,50",
]


@pytest.fixture
def auks(tmp_path):
    def write(*rows):
        path = tmp_path / "auk.csv"
        path.write_text("\n".join([HEAD, *rows]) + "\n")
        return path

    return write


def test_changed_motors_are_told_from_those_stored_again(run, auks):
    run("import", auks(*ROWS), "--maker", "Auk (invented)")
    _, out, _ = run("import", auks(*ROWS[:2], ROWS[2].replace(",50", ",51")), "--maker",
                    "Auk (invented)")  # fmt: skip
    assert "1 motor changed, 2 as before; motorfolio diff shows what changed." in out
    assert "maker" not in out.split("as before")[1]
    (file,) = json.loads(run("import", auks(*ROWS), "--maker", "Auk (invented)", "--json")[1])[
        "files"
    ]
    assert (file["replaced"], file["as_before"], file["left_behind"]) == (3, 2, [])


def test_a_motor_that_the_newer_sheet_lacks_is_named(run, auks):
    run("import", auks(*ROWS))
    _, out, _ = run("import", auks(ROWS[0], ROWS[1].replace(",100", ",101")))
    said = " ".join(out.split())
    assert "also had AUK-10-A; still in the catalog, motorfolio remove takes them out" in said
    assert "also had AUK-10-A" in run("diff")[2]
    (left,) = json.loads(run("diff", "--json")[1])["left_behind"]
    assert (left["part_number"], left["maker"]) == ("AUK-10-A", None)
    run("remove", "AUK-10-A")
    assert run("diff", "2")[2] == ""


def test_an_unknown_maker_is_told(run, auks):
    said = "the maker is not known; --maker NAME tells it."
    assert said in run("import", auks(*ROWS))[1]
    assert said not in run("import", auks(*ROWS), "--maker", "Auk (invented)")[1]


@pytest.mark.parametrize(
    ("part", "meant"),
    [
        ("auk22b", "; did you mean AUK-22-B?"),
        ("AUK 22 B", "; did you mean AUK-22-B?"),
        ("AUK-22", "; did you mean AUK-22-A or AUK-22-B?"),
        ("AUK-23-B", "; did you mean AUK-22-B"),
        ("Some (maker)/AUK22B", "; did you mean AUK-22-B?"),
        ("ostrich", "ostrich."),
    ],
)
def test_the_nearest_part_numbers_are_offered(run, auks, part, meant):
    run("import", auks(*ROWS))
    status, _, said = run("show", part)
    assert status == 2
    assert meant in said


def test_a_misspelt_command_is_guessed(run):
    assert run("serach") == (
        2,
        "",
        'motorfolio: There is no command "serach". Did you mean search?\n',
    )
    assert "Did you mean" not in run("xyzzy")[2]


def test_a_correction_that_does_not_apply_is_listed_as_such(run, auks):
    run("import", auks(*ROWS))
    run("correct", "AUK-10-A", "mass", "55 g", "--reason", "weighed")
    assert "Not applied" not in run("correct")[1]
    run("import", auks(*ROWS[:2], ROWS[2].replace(",50", ",51")))
    assert "Not applied: the sheet now prints 51." in run("correct")[1]
    (listed,) = json.loads(run("correct", "--json")[1])["corrections"]
    assert listed["not_applied"] == "the sheet now prints 51"
    run("import", auks(*ROWS[:2], ROWS[2].removesuffix("50")))
    assert "Not applied: the sheet no longer gives it." in run("correct")[1]
    run("remove", "AUK-10-A")
    assert "Not applied: the catalog has no such motor now." in run("correct")[1]


def test_a_reading_that_is_not_kept_names_the_maker_that_has_it(run, sheet):
    run("import", sheet)
    assert "is kept where the maker is not known; see" in run("readings", "--remove", "Kt")[2]
    run("import", sheet, "--maker", "Puffinworks", "--keep",
        "--set", "Torque constant [mNm/A]=torque_constant:mNm/A")  # fmt: skip
    said = run("readings", "--remove", "Torque constant [mNm/A]")[2]
    assert "; one is for Puffinworks." in said


def test_a_folder_that_is_not_there_is_named(run, auks, tmp_path):
    run("import", auks(*ROWS))
    status, _, said = run("export", "--output", tmp_path / "none" / "x.csv")
    assert status == 2
    assert "There is no folder" in said
    assert ".x.csv." not in said


def test_a_requirement_is_no_table_of_motors(run, tmp_path):
    path = tmp_path / "lift.toml"
    path.write_text('[load]\nkind = "rotary"\n[[point]]\ntorque = "1 N·m"\nspeed = "10 rpm"\n')
    status, _, said = run("import", path)
    assert status == 2
    assert "search --requirement" in said


def test_nothing_is_better_than_what_no_other_gives(run, auks):
    rows = [ROWS[0], ROWS[1].removesuffix("100"), ROWS[2].removesuffix("50")]
    run("import", auks(*rows))
    text = run("compare", "AUK-22-A", "AUK-22-B", "AUK-10-A")[1]
    (line,) = [line for line in text.splitlines() if line.strip().startswith("mass")]
    assert "◆" not in line
