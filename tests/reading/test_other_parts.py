"""Tables of encoders, brakes and drives are none of motors. All sheets are invented."""

import pytest

from motorfolio.catalog.reading import ReadingError

from .sheets import sheet

ENCODERS = """
    Encoder | Counts per turn | Supply voltage [V] | Max. speed [rpm] | Weight [g]
    EN-5 | 512 | 5 | 37500 | 7
    EN-6 | 1024 | 5 | 30000 | 8
"""
BRAKES = """
    Brake type | Static torque [Nm] | Nominal voltage [V] | Inertia [kgcm²] | Weight [kg]
    B-2 | 2 | 24 | 0.08 | 0.3
"""
DRIVES = """
    Servo drive | | D-2 | D-5
    Rated current | A | 2 | 4.5
    Peak current | A | 6 | 14
    Output power | W | 400 | 750
"""


@pytest.mark.parametrize("table", [ENCODERS, BRAKES, DRIVES])
def test_a_table_of_another_part_is_refused(table):
    with pytest.raises(ReadingError, match="no motor"):
        sheet(table)


@pytest.mark.parametrize("table", [ENCODERS, BRAKES])
def test_beside_motors_its_figures_are_listed(table):
    motors = "    Type | Torque constant [Nm/A] | Resistance [Ω]\n    M-1 | 0.4 | 2.2\n\n"
    s = sheet(motors + table.lstrip("\n"))
    assert s.motors() == {"M-1": {"torque_constant": 0.4, "terminal_resistance": 2.2}}
    assert len(s.reading.unread) >= 4


def test_motors_whose_names_stand_under_another_parts_word_are_read():
    s = sheet("Drive | Torque constant [Nm/A] | Resistance [Ω]\nM-1 | 0.4 | 2.2")
    assert len(s.motors()) == 1
