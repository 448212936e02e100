"""Tables of encoders, brakes and drives are none of motors. All sheets are invented."""

import math

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


@pytest.mark.parametrize("name", [
    "Std. dev.", "σ", "Δ %", "Required", "Lower limit", "Soll", "Standardabweichung", "Écart-type",
    "Requisito", "Valor medio", "標準偏差", "目标值",
])  # fmt: skip
def test_rows_and_columns_that_sum_up_are_no_motors_but_listed(name):
    down = sheet(f"""
        Type | Torque constant [mNm/A] | Resistance [Ω]
        C-12 | 21.2 | 0.86
        C-24 | 43.0 | 3.45
        {name} | 32.1 | 2.16
    """)
    across = sheet(f"""
        Parameter | Unit | C-12 | C-24 | {name}
        Torque constant | mNm/A | 21.2 | 43.0 | 32.1
        Resistance | Ω | 0.86 | 3.45 | 2.16
    """)
    for s in (down, across):
        assert set(s.motors()) == {"C-12", "C-24"}
        assert {"32.1", "2.16"} <= s.unread


def test_of_smallest_usual_and_largest_figures_of_two_motors_the_usual_are_read():
    s = sheet("""
        Parameter | Unit | A-1 | | | A-2 | |
         | | min | typ | max | min | typ | max
        Torque constant | mNm/A | 20 | 21.2 | 22 | 42 | 43 | 44
        Resistance | Ω | 0.8 | 0.86 | 0.9 | 3.3 | 3.45 | 3.6
    """)
    assert s.motors() == {
        "A-1": {"torque_constant": 0.0212, "terminal_resistance": 0.86},
        "A-2": {"torque_constant": 0.043, "terminal_resistance": 3.45},
    }
    assert {"20", "22", "42", "44", "0.8", "0.9", "3.3", "3.6"} <= s.unread


@pytest.mark.parametrize(
    "heads",
    [
        "No-load speed [rpm] | | \n | min | typ | max",
        "No-load speed min [rpm] | No-load speed typ [rpm] | No-load speed max [rpm]",
        "Min. no-load speed [rpm] | No-load speed [rpm] | Max. no-load speed [rpm]",
    ],
)
def test_under_headings_of_smallest_usual_and_largest_figures_the_usual_is_read(heads):
    first, _, second = heads.partition("\n")
    lines = [f"Model | {first} | Resistance [Ω]"]
    lines += [f"{second} | "] if second else []
    s = sheet("\n".join([*lines, "A-1 | 5500 | 6000 | 6500 | 1.2", "A-2 | 45 | 50 | 55 | 1.5"]))
    assert s.motors()["A-1"]["no_load_speed"] == pytest.approx(6000 * math.pi / 30)
    assert s.motors()["A-2"]["no_load_speed"] == pytest.approx(50 * math.pi / 30)
    assert {"5500", "6500"} <= s.unread


def test_smallest_and_largest_figure_alone_are_a_range():
    s = sheet("""
        Model | No-load speed [rpm] | | Resistance [Ω] | Nominal torque [Nm] | Maximum torque [Nm]
         | min | max | | |
        A-1 | 5500 | 6500 | 1.2 | 0.1 | 0.3
        A-2 | 4500 | 5500 | 1.5 | 0.2 | 0.6
    """)
    assert s.motors()["A-1"]["no_load_speed"] == pytest.approx(6000 * math.pi / 30)
    assert s.motors()["A-2"]["peak_torque"] == 0.6


@pytest.mark.parametrize("heads", ["Specified | Measured", "Sollwert | Messwert"])
def test_specified_and_measured_figures_are_one_motors(heads):
    s = sheet(f"""
        Parameter | Unit | {heads}
        No-load speed | rad/s | 600 | 610
        Torque constant | mNm/A | 30 | 31
        Resistance | Ω | 1.2 | 1.25
    """)
    (figures,) = s.motors().values()
    assert figures == {"no_load_speed": 600, "torque_constant": 0.03, "terminal_resistance": 1.2}
    assert {"610", "31", "1.25"} <= s.unread


def test_bare_figures_under_tolerance_are_listed():
    s = sheet("""
        Parameter | Unit | A-1 | Tolerance
        Torque constant | mNm/A | 30 | 3
        Resistance | Ω | 1.2 | 0.15
    """)
    assert s.motors() == {"A-1": {"torque_constant": 0.03, "terminal_resistance": 1.2}}
    assert {"3", "0.15"} <= s.unread


@pytest.mark.parametrize("title", ["シリーズ Series NW", "NW series", "Baureihe NW"])
def test_a_line_without_a_colon_names_the_series(title):
    s = sheet(f"""
        {title} | |
        Parameter | Unit | A-1
        Torque constant | mNm/A | 30
        Resistance | Ω | 1.2
    """)
    assert s.batch.series == ["NW"]


def test_cells_of_two_values_are_listed_as_such():
    s = sheet("""
        Model | Voltage | Torque constant [mNm/A] | Resistance [Ω]
        A-1 | 24 V/36 V | 30 | 1.2
        A-2 | 24 V/48 V | 31 | 1.3
    """)
    assert "nominal_voltage" not in s.motors()["A-1"]
    assert [u.reason for u in s.reading.unread] == ["more than one number"]


@pytest.mark.parametrize(
    ("caption", "name"),
    [
        ("Frein à manque de courant", "Tension nominale"),
        ("Ruhestrombremse", "Nennspannung"),
        ("Spring-applied brake", "Rated voltage"),
        ("無励磁作動ブレーキ", "定格電圧"),
    ],
)
def test_figures_under_a_kind_of_brake_are_not_the_motors(caption, name):
    s = sheet(f"""
        Type | | A-1 | A-2
        Torque constant | Nm/A | 0.4 | 0.8
        {caption} | | |
        {name} | V | 24 | 24
    """)
    assert s.motors() == {"A-1": {"torque_constant": 0.4}, "A-2": {"torque_constant": 0.8}}
    assert "24" in s.unread


def test_minutes_of_a_time_constant_are_no_smallest_figure():
    s = sheet("""
Part No. | Thermal time constant winding [s] | Thermal time constant housing [s] | \
Thermal time constant housing [min] | Torque constant [mNm/A] | Terminal resistance [Ω]
TT-1 | 9 | 600 | | 20 | 1.2
TT-2 | 9 | | 22 | 40 | 4.8
""")
    motors = s.motors()
    assert motors["TT-1"]["thermal_time_constant_housing"] == 600
    assert motors["TT-2"]["thermal_time_constant_housing"] == 22 * 60
