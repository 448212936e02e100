"""What stands beside the motor's own figures and is none of them; motors that share a name.

All sheets are invented; the words are the trade's, from memory.
"""

import pytest

from .sheets import sheet


@pytest.mark.parametrize(("caption", "label", "unit"), [
    ("Holding brake", "Static torque", "Nm"),
    ("Haltebremse (Option)", "Nennspannung", "V DC"),
    ("GEARBOX", "Max. intermittent torque", "Nm"),
    ("3. Encoder", "Max. speed", "rpm"),
    ("Réducteur", "Charge radiale", "N"),
    ("Freno", "Potenza nominale", "W"),
    ("Reductor", "Par máximo", "Nm"),
    ("保持ブレーキ", "静摩擦トルク", "N·m"),
    ("编码器参数", "最高转速", "r/min"),
])  # fmt: skip
def test_under_the_caption_of_another_part_nothing_is_the_motors(caption, label, unit):
    s = sheet(f"""
        Type | | S-1 | S-2
        Torque constant | Nm/A | 0.4 | 0.8
        Nominal voltage | V | 24 | 48
        {caption} | | |
        {label} | {unit} | 7 | 9
        Mechanical data | | |
        Weight | kg | 4 | 5
    """)
    assert {k for f in s.motors().values() for k in f} == {
        "torque_constant", "nominal_voltage", "mass"
    }  # fmt: skip
    assert not any(c.figures for c in s.batch.conditions)
    assert [u.text for u in s.reading.unread] == ["7"]


def test_a_group_of_headings_under_another_part_gives_no_figure():
    s = sheet("""
         | Motor | | Gearhead | |
        Type | Rated torque [Nm] | Weight [g] | Peak torque [Nm] | Weight [g]
        G-1 | 0.2 | 96 | 1.1 | 70
    """)
    assert s.motors() == {"G-1": {"nominal_torque": 0.2, "mass": 0.096}}


@pytest.mark.parametrize(("heading", "unit"), [
    ("Lastdrehmoment", "Nm"), ("Rotorgewicht", "kg"), ("Statorgewicht", "kg"),
    ("Vorwiderstand", "Ohm"), ("Bremsspannung", "V"), ("Getriebedrehzahl", "1/min"),
    ("Fremdträgheitsmoment", "kgcm²"), ("Drosselinduktivität", "mH"), ("Heizleistung", "W"),
    ("Lagerträgheitsmoment", "kgcm²"), ("Lüfterinduktivität", "mH"), ("Netzdrehmoment", "Nm"),
    ("Nebenspannung", "V"), ("Raddrehmoment", "Nm"), ("Geberspannungskonstante", "V/1000 1/min"),
    ("Constante del tacogenerador", "V/1000 rpm"), ("許容慣性モーメント", "kg·cm²"),
    ("Load torque", "Nm"), ("Load speed", "rpm"), ("Acceleration torque", "Nm"),
    ("Lastmoment", "Nm"), ("Beschleunigungsmoment", "Nm"), ("Spulenwiderstand", "Ohm"),
    ("Vitesse de charge", "tr/min"), ("负载转矩", "Nm"), ("負荷回転数", "rpm"),
])  # fmt: skip
def test_what_is_another_parts_or_the_loads_is_no_figure_of_the_motor(heading, unit):
    s = sheet(f"Type | Torque constant [Nm/A] | {heading} [{unit}]\nA | 0.4 | 7")
    assert s.motors() == {"A": {"torque_constant": 0.4}}
    assert heading in " ".join(s.unread)


@pytest.mark.parametrize(("heading", "key"), [
    ("Torque constnat [Nm/A]", "torque_constant"),
    ("Nennspanung [V]", "nominal_voltage"),
    ("Massenträgheitsmoent [kgm²]", "rotor_inertia"),
    ("Drehmomentkonst. [Nm/A]", "torque_constant"),
])  # fmt: skip
def test_slips_of_the_pen_and_cut_words_are_read(heading, key):
    s = sheet(f"Type | Nominal speed [rpm] | {heading}\nA | 3000 | 7")
    assert s.motors()["A"][key] == 7


def test_type_and_winding_together_name_the_motor():
    rows = sheet("""
        Type | Winding | Nominal voltage [V] | Terminal resistance [Ω]
        GA 30 | 012 | 12 | 0.85
         | 024 | 24 | 3.35
        GA 42 | 012 | 12 | 0.92
         | 024 | 24 | 3.66
    """)
    expected = {"GA 30 012": 0.85, "GA 30 024": 3.35, "GA 42 012": 0.92, "GA 42 024": 3.66}
    assert {k: f["terminal_resistance"] for k, f in rows.motors().items()} == expected
    columns = sheet("""
        Type | | GA 30 | GA 30 | GA 42 | GA 42
        Winding | | 012 | 024 | 012 | 024
        Nominal voltage | V | 12 | 24 | 12 | 24
        Terminal resistance | Ω | 0.85 | 3.35 | 0.92 | 3.66
    """)
    assert {k: f["terminal_resistance"] for k, f in columns.motors().items()} == expected


def test_one_name_on_rows_with_other_winding_constants_is_several_motors():
    s = sheet("""
        Model | Voltage [V] | Resistance [Ω] | Torque constant [mNm/A]
        RX-28 | 6 | 0.9 | 7.8
        RX-28 | 12 | 3.6 | 15.5
    """)
    assert {k: f["terminal_resistance"] for k, f in s.motors().items()} == {
        "RX-28 6 V": 0.9, "RX-28 12 V": 3.6
    }  # fmt: skip
    # One winding at two voltages is one motor, and so is another maker's of the same name.
    s = sheet("""
        Model | Voltage [V] | Resistance [Ω] | No-load speed [rpm]
        RX-28 | 6 | 0.9 | 3000
        RX-28 | 12 | 0.9 | 6000
    """)
    assert set(s.motors()) == {"RX-28"}


def test_a_legend_of_symbols_states_no_convention():
    s = sheet("""
        Type | M0 [Nm] | Mmax [Nm] | Imax [A] | I0 [A]
        L-1 | 4.1 | 14 | 97.5 | 24.8

        All currents are rms values
        M0: continuous stall torque; Imax: peak current; I0: continuous stall current
    """)
    assert s.convention("continuous_stall_current").current == "rms"


def test_rows_that_sum_up_are_no_motors():
    s = sheet("""
        Type | Nominal voltage [V] | Torque constant [mNm/A]
        A-1 | 12 | 20
        A-2 | 24 | 40
        Mittelwert | 18 | 30
        Max. | 24 | 40
        Difference % | 0 | 100
    """)
    assert set(s.motors()) == {"A-1", "A-2"}
    assert {"18", "30", "100"} <= s.unread


def test_smallest_usual_and_largest_are_one_motors():
    s = sheet("""
        Parameter | Symbol | Min | Typ | Max | Unit
        Supply voltage | U | 18 | 24 | 28 | V
        Rated torque | Mn | | 0.18 | | Nm
        Terminal resistance | R | 0.61 | | 0.75 | Ω
    """)
    (figures,) = s.motors().values()
    assert figures == {
        "nominal_voltage": 24, "nominal_torque": 0.18, "terminal_resistance": pytest.approx(0.68)
    }  # fmt: skip
    assert (s.batch.figures["terminal_resistance"].low[0], s.unread >= {"18", "28"}) == (0.61, True)


def test_the_motors_own_figure_stands_before_that_with_a_brake():
    s = sheet("""
        Motor | Rotor inertia with brake [kgcm²] | Rotor inertia without brake [kgcm²] | Rated torque [Nm]
        B-1 | 0.22 | 0.17 | 0.64
    """)  # noqa: E501
    assert s.motors()["B-1"]["rotor_inertia"] == pytest.approx(0.17e-4)


def test_a_caption_right_below_the_part_numbers_counts():
    s = sheet("""
        Type | | A-1 | A-2
        Rated | | |
        Torque | mNm | 50 | 60
        Speed | rpm | 3000 | 3100
        Gearmotor output | | |
        Rated speed | rpm | 60 | 62
    """)
    assert s.motors()["A-1"]["nominal_torque"] == 0.05
    assert s.motors()["A-1"]["nominal_speed"] == pytest.approx(314.159265)


def test_a_gear_beside_the_motors_is_spoken_of():
    s = sheet("Type | Gear ratio | Nominal voltage [V] | Nominal speed [rpm]\nG | 50 | 12 | 95")
    assert any("gear" in remark for remark in s.reading.remarks)


def test_a_temperature_rise_in_brackets_is_a_condition():
    s = sheet("""
        Type | M0 (60 K) [Nm] | M0 (100 K) [Nm] | Mmax [Nm]
        A | 5.0 | 6.0 | 16
    """)
    assert s.motors()["A"]["continuous_stall_torque"] == 5.0
    assert [c.when for c in s.batch.conditions] == ["100 K"]


@pytest.mark.parametrize("heading", ["Frame", "Package", "Part #", "物料编码", "MLFB-Nr."])
def test_a_first_column_of_unlike_codes_names_the_motors(heading):
    s = sheet(f"{heading} | Torque constant [Nm/A] | Weight [kg]\nEB-20 | 0.2 | 1\nEB-40 | 0.4 | 2")
    assert set(s.motors()) == {"EB-20", "EB-40"}


def test_stillstand_at_the_end_of_a_curve_is_stall_and_lines_above_count():
    s = sheet("""
        Nennspannung: 12 V
        Gewicht: 220 g

        Betriebspunkt | Drehzahl [min-1] | Strom [A] | Drehmoment [mNm]
        Leerlauf | 5900 | 0.38 | 0
        Max. Wirkungsgrad | 5050 | 2.28 | 37.2
        Stillstand | 0 | 13.6 | 258
    """)
    (figures,) = s.motors().values()
    assert figures["stall_current"] == 13.6
    assert figures["nominal_voltage"] == 12
    assert figures["mass"] == pytest.approx(0.22)
    assert "continuous_stall_current" not in figures


@pytest.mark.parametrize(("headings", "values", "key", "value"), [
    ("Type | Mo [Nm] | Mmax [Nm] | IN [A] | Io [A]", "A | 1.3 | 4.6 | 1.4 | 1.55",
     "continuous_stall_current", 1.55),
    ("Type | Kv [rpm/V] | Kt [Nm/A] | Io [A]", "A | 316 | 0.03 | 0.12", "no_load_current", 0.12),
    ("Type | Kv [rpm/V] | Encoder | I0 [A]", "A | 316 | 1024 | 0.12", "no_load_current", 0.12),
    ("Type | Mo [Nm] | Ip A", "A | 1.3 | 35.6", "peak_current", 35.6),
    ("Type | Cont. torque at stall [Nm] | Cont. current at stall [Arms] | Max. torque at stall Nm",
     "A | 3.5 | 2.6 | 10.8", "peak_torque", 10.8),
])  # fmt: skip
def test_symbols_and_words_by_the_kind_of_sheet(headings, values, key, value):
    assert sheet(f"{headings}\n{values}").motors()["A"][key] == value


def test_a_starting_voltage_is_no_point_at_stall():
    s = sheet("Type | Torque constant [Nm/A] | Starting voltage [V]\nA | 0.2 | 0.4")
    assert not s.batch.points
    assert "Starting voltage [V]" in s.unread
