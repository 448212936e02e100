"""Every layout pattern of motor sheets; all motors and figures are invented."""

# ruff: noqa: E501

import math

import pytest

from motorfolio.catalog.reading import ReadingError
from motorfolio.catalog.tables.grid import Span

from .sheets import RPM, sheet


def test_parameters_down_windings_across_with_captions_and_shared_frame_figures():
    s = sheet("""
Motor data | | ZB-6 | ZB-12 | ZB-24
Electrical data | | | |
1 Nominal voltage | V | 6 | 12 | 24
2 No-load speed | rpm | 5000 | 5100 | 5050
10 Terminal resistance | Ω | 1.2 | 4.8 | 19.1
Thermal data | | | |
17 Thermal resistance housing-ambient | K/W | 14.8 | |
Mechanical data | | | |
20 Weight | g | 85 | |
21 Nominal current | A | 1.1 | | 0.3
""")
    motors = s.motors()
    assert list(motors) == ["ZB-6", "ZB-12", "ZB-24"]
    assert motors["ZB-12"]["no_load_speed"] == pytest.approx(5100 * RPM)
    assert [m["mass"] for m in motors.values()] == [0.085] * 3
    assert [m["thermal_resistance_housing_ambient"] for m in motors.values()] == [14.8] * 3
    assert "nominal_current" not in motors["ZB-12"]  # a true gap
    assert not s.reading.unread


def test_merged_cells_give_their_figure_to_the_windings_they_span_and_no_other():
    s = sheet(
        """
Parameter | Unit | A-1 | A-2 | B-1
Nominal voltage | V | 12 | 24 | 12
Weight | g | 85 | | 120
Rotor inertia | gcm² | 33 | |
""",
        [Span(2, 2, 1, 2), Span(3, 2, 1, 2)],
    )
    motors = s.motors()
    assert [m.get("mass") for m in motors.values()] == [0.085, 0.085, 0.12]
    assert motors["A-2"]["rotor_inertia"] == pytest.approx(3.3e-6)
    assert "rotor_inertia" not in motors["B-1"]


def test_models_down_under_three_heading_rows():
    s = sheet("""
Model | No load | | At maximum efficiency | | | Stall |
 | Speed | Current | Speed | Torque | Current | Torque | Current
 | rpm | A | rpm | mNm | A | mNm | A
MM-1 | 10000 | 0.1 | 8500 | 5.2 | 0.6 | 40 | 4.1
""")
    motor = s.motors()["MM-1"]
    assert motor == pytest.approx(
        {
            "no_load_speed": 10000 * RPM,
            "no_load_current": 0.1,
            "stall_torque": 0.04,
            "stall_current": 4.1,
        }
    )
    point = next(p for p in s.batch.points[0] if p.name == "maximum efficiency")
    assert point.figures == pytest.approx(
        {"nominal_speed": 8500 * RPM, "nominal_torque": 0.0052, "nominal_current": 0.6}
    )


def test_captions_over_the_middle_of_their_groups():
    s = sheet("""
Model | | No load | | | Rated | | | Stall |
 | Voltage | Speed | Current | Speed | Torque | Current | Torque | Current |
 | V | rpm | A | rpm | mNm | A | mNm | A |
MM-1 | 12 | 10000 | 0.1 | 8500 | 5.2 | 0.6 | 40 | 4.1 |
""")
    motor = s.motors()["MM-1"]
    assert motor["nominal_torque"] == pytest.approx(0.0052)
    assert motor["nominal_speed"] == pytest.approx(8500 * RPM)
    assert motor["stall_torque"] == pytest.approx(0.04)
    assert motor["no_load_current"] == pytest.approx(0.1)


@pytest.mark.parametrize("heading", [
    "Torque constant, K_t (mNm/A)", "Torque constant [mNm/A]", "Torque constant in mNm/A",
    "Torque constant / mNm/A", "Kt (mNm/A)", "Torque constant {mNm/A}", "Torque constant, mN·m/A",
    "Torque constant (Kt) [mNm/A]", "TORQUE CONSTANT (MNM/A)", "torque_constant_mNm/A",
    "Torque constant (±10 %) [mNm/A]", "Torque constant [mNm/A] (at 25 °C)", "12 Torque constant mNm/A",
    "Kt torque constant mNm/A", "Drehmoment-\\nkonstante\\n(mNm/A)", "Torqe constant [mNm/A]",
    "torque_constant [mN·m/A] (rms, lines)", "Torque constant¹⁾ [mNm/A]",
])  # fmt: skip
def test_unit_symbol_and_condition_hide_in_the_heading(heading):
    s = sheet(f"Type | U_N (V) | {heading}\nX-1 | 12 | 21.5\nX-2 | 24 | 43.1")
    assert s.motors()["X-1"]["torque_constant"] == pytest.approx(0.0215)
    assert not s.reading.unread


def test_dual_units_in_one_cell_and_in_two_columns():
    s = sheet("""
Type | Rated torque N·m (oz-in) | Rated speed [rpm] | Peak torque [N·m] | Peak torque [lb-in]
Q-1 | 0.28 (39.6) | 3000 | 0.84 | 7.43
Q-2 | 56.6 (0.40) | 3000 | 1.20 | 10.6
""")
    motors = s.motors()
    assert motors["Q-1"]["nominal_torque"] == pytest.approx(0.28)
    assert motors["Q-2"]["nominal_torque"] == pytest.approx(0.40, rel=0.01)
    assert s.batch.repeats["nominal_torque"][0].value[0] == pytest.approx(0.28, rel=0.01)
    assert s.batch.repeats["peak_torque"][0].value == pytest.approx([0.84, 1.20], rel=0.01)


@pytest.mark.parametrize(("heading", "text"), [
    ("J ×10⁻⁴ kg·m²", "0.33"), ("J (kg·m²×10⁻⁴)", "0.33"), ("Rotor inertia [10^-6 kgm2]", "33"),
    ("Rotor inertia, kg·m² × 10–4", "0.33"), ("J×10⁴ [kg·m²]", "0.33"), ("J [kgcm²]", "0.33"),
])  # fmt: skip
def test_scale_factor_in_the_heading_is_applied_once(heading, text):
    s = sheet(f"Type | Rated voltage [V] | {heading}\nX-1 | 48 | {text}\nX-2 | 48 | {text}")
    assert s.motors()["X-1"]["rotor_inertia"] == pytest.approx(3.3e-5)


def test_ranges_tolerances_qualifiers_and_missing_signs():
    s = sheet("""
Type | Nominal voltage [V] | No-load current [A] | Mass [g] | Cogging torque [mNm]
A | 12…24 | ≤ 0.5 | – | 0
B | 24 ±10 % | max. 0.4 | n/a | 0.2
""")
    volts = s.batch.figures["nominal_voltage"]
    assert (volts.low[0], volts.value[0], volts.high[0]) == (12, 18, 24)
    assert volts.low[1] == pytest.approx(21.6)
    current = s.batch.figures["no_load_current"]
    assert current.qualifiers == {0: "at most", 1: "at most"}
    assert current.high[1] == 0.4
    assert "mass" not in s.motors()["A"]
    assert s.motors()["A"]["cogging_torque"] == 0
    assert not s.reading.unread


def test_zero_is_listed_where_it_can_be_no_figure():
    s = sheet("Type | Voltage [V] | Thermal resistance [K/W]\nA | 12 | 0\nB | 12 | 3.1")
    assert "thermal_resistance" not in s.motors()["A"]
    (unread,) = s.reading.unread
    assert (unread.part_number, unread.row, unread.column, unread.text) == ("A", 2, 3, "0")


def test_a_footnote_changes_the_convention_of_its_column_only():
    s = sheet("""
Type | Nominal voltage [V] | Torque constant * [Nm/A] | Resistance [Ω] | Pole pairs
A | 48 | 0.12* | 0.31 | 4
B | 48 | 0.24 | 0.62 | 4

* per ampere rms
""")
    assert s.convention("torque_constant").current == "rms"
    assert s.convention("torque_constant").basis == "stated"
    assert s.motors()["A"]["torque_constant"] == pytest.approx(0.12)


def test_conditions_of_blocks_are_kept_apart():
    s = sheet("""
Parameter | Unit | S-1 | S-2
Nominal voltage | V | 48 | 48
Winding at 25 °C | | |
Terminal resistance | Ω | 1.0 | 2.0
Torque constant | Nm/A | 0.10 | 0.14
Winding at 125 °C | | |
Terminal resistance | Ω | 1.39 | 2.79
Torque constant | Nm/A | 0.091 | 0.127
""")
    assert s.motors()["S-1"]["terminal_resistance"] == 1.0
    (condition,) = s.batch.conditions
    assert "125" in condition.when
    assert condition.figures[0]["terminal_resistance"].value == 1.39
    assert condition.figures[1]["torque_constant"].value == 0.127
    assert s.convention("terminal_resistance").temperature == 25


def test_column_pairs_of_two_mains_voltages():
    s = sheet("""
Type | 230 VAC | | 400 VAC |
 | Rated speed [rpm] | Rated torque [Nm] | Rated speed [rpm] | Rated torque [Nm]
S-1 | 3000 | 4.1 | 5000 | 3.2
""")
    motor = s.motors()["S-1"]
    assert motor["nominal_speed"] == pytest.approx(3000 * RPM)
    (condition,) = s.batch.conditions
    assert condition.figures[0]["nominal_torque"].value == 3.2


def test_a_model_printed_once_over_its_windings():
    s = sheet("""
Size | Winding | Nominal voltage [V] | Resistance [Ω] | Mass [g]
KX-30 | KX-30-A | 12 | 1.1 | 210
 | KX-30-B | 24 | | ″
 | KX-30-C | 48 | 17.5 |
KX-40 | KX-40-A | 24 | 2.0 | 400
""")
    motors = s.motors()
    assert [m.get("mass") for m in motors.values()] == [0.21, 0.21, None, 0.4] or [
        m.get("mass") for m in motors.values()
    ] == [0.21, 0.21, 0.21, 0.4]
    assert "terminal_resistance" not in motors["KX-30-B"]


def test_operating_points_down_figures_across():
    s = sheet("""
Point | Speed | Torque | Current | Output power | Efficiency
 | rpm | mNm | A | W | %
No load | 8000 | 0 | 0.1 | 0 |
Maximum efficiency | 7100 | 8.1 | 0.65 | 6.02 | 77
Maximum power | 4000 | 36 | 2.5 | 15.1 | 50
Stall | 0 | 72 | 4.9 | 0 |
""")
    (motor,) = s.motors().values()
    assert motor["no_load_speed"] == pytest.approx(8000 * RPM)
    assert motor["stall_torque"] == pytest.approx(0.072)
    assert motor["maximum_power"] == pytest.approx(15.1)
    assert motor["maximum_efficiency"] == pytest.approx(0.77)
    assert "nominal_torque" not in motor
    names = [p.name for p in s.batch.points[0]]
    assert names == ["no load", "maximum efficiency", "maximum power", "stall"]


def test_servo_sheet_and_micro_sheet_give_one_symbol_two_meanings():
    servo = sheet("""
 | M0 | I0 | Mmax | Imax | KT | R20
 | Nm | A rms | Nm | A rms | Nm/A rms | Ω
V-4 | 4.2 | 2.9 | 14 | 11 | 1.45 | 3.6
""")
    assert servo.motors()["V-4"]["continuous_stall_current"] == 2.9
    assert servo.convention("torque_constant").current == "rms"
    assert servo.convention("terminal_resistance").temperature == 20
    assert int(servo.batch.commutation[0]) == 2
    micro = sheet("""
Type | U_N [V] | n0 [rpm] | I0 [mA] | I_N [A] | M_H [mNm] | kM [mNm/A]
M-1 | 6 | 9000 | 31 | 0.41 | 12.1 | 5.9
""")
    assert micro.motors()["M-1"]["no_load_current"] == 0.031
    assert micro.motors()["M-1"]["stall_torque"] == pytest.approx(0.0121)


def test_brake_value_in_brackets_is_a_condition():
    s = sheet(
        "Type | Rated voltage [V] | Rotor inertia [kgcm²]\nA | 48 | 1.8 (1.9)\nB | 48 | 2.8 (2.9)"
    )
    assert s.motors()["A"]["rotor_inertia"] == pytest.approx(1.8e-4)
    assert s.batch.conditions[0].figures[0]["rotor_inertia"].value == pytest.approx(1.9e-4)


def test_bilingual_headings():
    s = sheet("""
Typ / Type | Nennspannung / Nominal voltage / Tension nominale [V] | 無負荷回転数 No-load speed [r/min]
A | 12 | 5000
""")
    assert s.motors()["A"] == pytest.approx({"nominal_voltage": 12, "no_load_speed": 5000 * RPM})


def test_pairs_of_label_and_text():
    s = sheet("""
Rated voltage | 24VDC
No load speed | 4,000 ± 10 % rpm
No-load current | <0.5A
Speed | 3000rpm
KV | 920
""")
    (motor,) = s.motors().values()
    assert motor["no_load_speed"] == pytest.approx(4000 * RPM)
    assert motor["no_load_current"] == 0.5
    assert motor["speed_constant"] == pytest.approx(920 * RPM)
    assert "Speed" in s.unread


def test_a_second_block_with_the_other_half_of_the_columns():
    s = sheet("""
Model | Nominal voltage [V] | Resistance [Ω]
A-1 | 12 | 1.1
A-2 | 24 | 4.3
A-3 | 48 | 17

Model | Torque constant [mNm/A] | Mass [g]
A‑2 | 41 | 200
A-1 | 20 | 200
""")
    motors = s.motors()
    assert list(motors) == ["A-1", "A-2", "A-3"]
    assert motors["A-1"]["torque_constant"] == pytest.approx(0.020)
    assert motors["A-2"]["torque_constant"] == pytest.approx(0.041)
    assert any("A-3" in r for r in s.reading.remarks)


def test_a_repeated_heading_is_no_motor():
    s = sheet("""
Model | Nominal voltage [V] | Resistance [Ω]
A-1 | 12 | 1.1
Model | Nominal voltage [V] | Resistance [Ω]
A-2 | 24 | 4.3
""")
    assert list(s.motors()) == ["A-1", "A-2"]


def test_two_tables_on_one_sheet():
    s = sheet("""
Micro motors
Model | Nominal voltage [V] | No-load speed [rpm]
A-1 | 12 | 5000

Servo motors
Parameter | Unit | S-1 | S-2
Standstill torque | Nm | 4 | 5
Standstill current | A rms | 3 | 4
""")
    motors = s.motors()
    assert set(motors) == {"A-1", "S-1", "S-2"}
    assert motors["S-2"]["continuous_stall_torque"] == 5


def test_typographic_noise_changes_nothing():
    clean = sheet("Type | Terminal resistance [Ω] | No-load speed [min⁻¹]\nA-1 | 1.2 | 5000")
    noisy = sheet(
        "Ｔｙｐｅ | Terminal\u00a0resistance\u200b [\u2126] | No\u2011load speed [min\u207b\u00b9]\nA-1 | １.２ | 5000"
    )
    assert clean.motors() == noisy.motors()


def test_decimal_sign_of_the_table_decides_and_the_undecidable_is_listed():
    s = sheet("Typ | Nennspannung [V] | Nenndrehzahl [min-1] | Nennstrom [A]\nA | 12 | 5.700 | 1,2")
    assert s.motors()["A"]["nominal_speed"] == pytest.approx(5700 * RPM)
    s = sheet("Typ | Nennspannung [V] | Nenndrehzahl [min-1]\nA | 12 | 5,700\nB | 24 | 5,800")
    assert "nominal_speed" not in s.motors()["A"]
    assert set(s.reading.unread[0].guesses) == {"5.7", "5700"}


def test_no_motor_is_one_sentence():
    with pytest.raises(ReadingError, match="no motor"):
        sheet("Name | Town\nAda | Bern\nBo | Ulm")


def test_set_overrides_a_heading():
    s = sheet(
        "Type | Drehkraftwert | Nominal voltage [V]\nA | 21 | 12",
        overrides={"Drehkraftwert": "torque_constant:mNm/A:rms"},
    )
    assert s.motors()["A"]["torque_constant"] == pytest.approx(0.021)
    assert s.convention("torque_constant").current == "rms"


def test_every_cell_can_be_traced():
    s = sheet("Nominal voltage | V | 6 | 12\nType | | A | B\nResistance | Ω | 1.2 | 4.8")
    column = s.batch.figures["terminal_resistance"]
    assert (int(column.row[1]), int(column.column[1]), column.text[1]) == (3, 4, "4.8")
    assert not math.isnan(column.low[1])


def test_a_load_table_is_points_of_the_one_motor_above():
    s = sheet("""
Part number | LT-42
Rated voltage | 24 V DC
Load table |
Torque [mNm] | Speed [rpm] | Current [A]
20 | 6030 | 0.83
40 | 5900 | 1.38
60 | 5770 | 1.92
""")
    assert s.motors() == {"LT-42": {"nominal_voltage": 24}}
    points = s.batch.points[0]
    assert [p.figures["nominal_torque"] for p in points] == pytest.approx([0.02, 0.04, 0.06])
    assert points[2].row == 7


def test_duty_types_side_by_side_are_conditions_and_not_motors():
    s = sheet("""
 | | S1 (continuous) | | S3 25 % |
Type | Unit | DU-1 | DU-2 | DU-1 | DU-2
Rated torque | Nm | 7.67 | 16.8 | 13.1 | 28.6
Mass | kg | 5.6 | 11.2 | 5.6 | 11.2
""")
    assert s.motors()["DU-2"] == {"nominal_torque": 16.8, "mass": 11.2}
    (condition,) = s.batch.conditions
    assert condition.when.startswith("S3")
    assert condition.figures[0]["nominal_torque"].value == 13.1


def test_a_note_speaks_of_what_it_names():
    s = sheet("""
Item | Unit | FR-1
Continuous stall torque | Nm | 4.6
Continuous stall current | A | 5.1
Back-EMF constant | V·s/rad | 0.60
Resistance | Ω | 0.95
Notes | |
All currents are peak values. | |
Back-EMF constant and resistance are given per phase; the back-EMF is a peak value. | |
""")
    assert s.convention("continuous_stall_current").current == "peak"
    assert s.convention("back_emf_constant").voltage == "peak"
    assert s.convention("back_emf_constant").between == "phase"
    assert s.convention("terminal_resistance").between == "phase"


def test_the_voltage_of_a_table_may_stand_in_its_title():
    s = sheet("""
Motors at 12 V unless noted; all values ±10 %
Model | Stall torque [Ncm] | No-load speed [rpm]
P-1 | 6.86 | 10300
""")
    assert s.motors()["P-1"]["nominal_voltage"] == 12
    speed = s.batch.figures["no_load_speed"]
    assert (speed.low[0], speed.high[0]) == pytest.approx((9270 * RPM, 11330 * RPM))


def test_a_second_unit_column_without_its_own_name():
    s = sheet("""
Model | Rated torque | | Weight |
 | N·m | oz-in | kg | lb
MI-42 | 0.116 | 16.4 | 0.45 | 0.99
MI-57 | 0.308 | 43.6 | 0.82 | 1.81
""")
    assert s.motors()["MI-57"] == {"nominal_torque": 0.308, "mass": 0.82}
    assert set(s.batch.repeats) == {"nominal_torque", "mass"}
    assert not s.reading.unread
