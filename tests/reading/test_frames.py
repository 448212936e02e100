"""Which motors share a figure that is printed once; all motors are invented. That a frame's name
and figures stand at the first of its windings only is common practice, no source."""

import pytest

from .sheets import sheet

HEAD = "Part No. | Maker | Series | Torque constant [mNm/A] | Terminal resistance [Ω] | Mass [g]\n"


def masses(rows: str) -> list[float | None]:
    return [m.get("mass") for m in sheet("\n" + HEAD + rows).motors().values()]


def test_a_frame_named_once_gives_its_mass_to_its_windings():
    rows = """A-1 | Alpha | ALP | 14.2 | 0.58 | 240
A-2 | Alpha | | 23.1 | 1.54 |
B-1 | Alpha | BET | 30.8 | 2.71 | 310
B-2 | Alpha | | 60.2 | 10.4 |
"""
    assert masses(rows) == [0.24, 0.24, 0.31, 0.31]


def test_an_empty_name_is_no_frame_where_names_are_repeated():
    rows = """A-1 | Alpha | ALP | 14.2 | 0.58 | 240
A-2 | Alpha | ALP | 23.1 | 1.54 | 240
A-3 | Alpha | ALP | 30.8 | 2.71 |
B-1 | Alpha | | 60.2 | 10.4 |
"""
    assert masses(rows) == [0.24, 0.24, None, None]


@pytest.mark.parametrize("maker", ["Beta", "Beta GmbH"])
def test_a_frame_ends_where_another_maker_begins(maker):
    rows = f"""A-1 | Alpha | ALP | 14.2 | 0.58 | 240
A-2 | Alpha | | 23.1 | 1.54 |
B-1 | {maker} | | 30.8 | 2.71 |
"""
    assert masses(rows) == [0.24, 0.24, None]


def test_a_motor_of_another_name_is_not_of_the_frame_after_which_its_motors_are_named():
    rows = """ALP-1 | Alpha | ALP | 14.2 | 0.58 | 240
ALP-2 | Alpha | | 23.1 | 1.54 |
BET-1 | Alpha | | 30.8 | 2.71 |
"""
    assert masses(rows) == [0.24, 0.24, None]


def test_rows_headed_by_the_names_of_quantities_are_whole():
    rows = """part_number,maker,series,torque_constant [N·m/A],terminal_resistance [Ω],mass [kg]
A-1,,ALP,0.0142,0.58,0.24
A-2,,,0.0231,1.54,
"""
    s = sheet("\n" + rows.replace(",", " | "))
    assert [m.get("mass") for m in s.motors().values()] == [0.24, None]
