"""Signs and words that mean different things on different sheets; all figures are invented."""

# ruff: noqa: E501

import pytest

from motorfolio.schema.convention import Commutation, to_dc

from .sheets import RPM, sheet


def one(heading: str, text: str, more: str = "") -> dict[str, float]:
    s = sheet(f"Type | Nominal voltage [V] | {heading}{more and ' | ' + more.split('=')[0]}\n"
              f"A | 24 | {text}{more and ' | ' + more.split('=')[1]}")  # fmt: skip
    figures = s.motors()["A"]
    figures.pop("nominal_voltage", None)
    return figures


@pytest.mark.parametrize(("heading", "text", "expected"), [
    ("Km [Nm/A]", "0.05", {"torque_constant": 0.05}),
    ("Km [mNm/√W]", "50", {"motor_constant": 0.05}),
    ("Kv [rpm/V]", "300", {"speed_constant": 300 * RPM}),
    ("Kv [V/krpm]", "4.3", {"back_emf_constant": 0.0430 / 1.0471975512}),
    ("Drehzahlkonstante [V/1000 Upm]", "4.3", {"back_emf_constant": 4.3 * 30 / 3.14159265 / 1000}),
    ("Drehzahlkonstante [min⁻¹/V]", "300", {"speed_constant": 300 * RPM}),
    ("Stromkonstante [Nm/A]", "0.05", {"torque_constant": 0.05}),
    ("Rm [rpm/mNm]", "12", {"speed_torque_gradient": 12000 * RPM}),
    ("GD² [kgf·cm²]", "4", {"rotor_inertia": 1e-4}),
    ("R [Ω]", "1.2", {"terminal_resistance": 1.2}),
    ("Rth [K/W]", "3.2", {"thermal_resistance": 3.2}),
    ("M [Nm]", "1.2", {}),
    ("Rated power [kW]", "0.4", {"rated_power": 400}),
    ("Nennmoment [Ncm]", "12", {"nominal_torque": 0.12}),
    ("Rated torque [g·cm]", "120", {"nominal_torque": 120 * 9.80665e-5}),
    ("Rated torque [kg-cm]", "1.2", {"nominal_torque": 1.2 * 0.0980665}),
    ("Trägheitsmoment [gcm²]", "33", {"rotor_inertia": 3.3e-6}),
    ("Par nominal [Nm]", "0.3", {"nominal_torque": 0.3}),
    ("Pares de polos", "4", {"pole_pairs": 4}),
    ("Coppia nominale [Nm]", "0.3", {"nominal_torque": 0.3}),
    ("Coppie polari", "4", {"pole_pairs": 4}),
    ("Polzahl", "8", {"poles": 8}),
    ("Polpaarzahl", "4", {"pole_pairs": 4}),
    ("極対数", "4", {"pole_pairs": 4}),
    ("极数", "8", {"poles": 8}),
    ("回転数定数 [rpm/V]", "300", {"speed_constant": 300 * RPM}),
    ("2p", "8", {"poles": 8}),
    ("W [g]", "85", {"mass": 0.085}),
    ("τ_m [ms]", "6", {"mechanical_time_constant": 0.006}),
    ("Max. efficiency [%]", "85", {"maximum_efficiency": 0.85}),
    ("Rated current [mA]", "850", {"nominal_current": 0.85}),
    ("Winding temperature max. [°F]", "257", {"maximum_winding_temperature": 125}),
    ("Thermal time constant motor [min]", "20", {"thermal_time_constant_housing": 1200}),
])  # fmt: skip
def test_unit_and_longest_name_decide(heading, text, expected):
    assert one(heading, text) == pytest.approx(expected)


@pytest.mark.parametrize("heading", [
    "Insulation resistance [MΩ]", "Isolationswiderstand [MΩ]", "絶縁抵抗 [MΩ]", "绝缘电阻 [MΩ]",
    "Résistance d'isolement [MΩ]", "Demagnetisation current [A]", "Entmagnetisierungsstrom [A]",
    "Test voltage [V]", "Prüfspannung [V]", "Brake torque [Nm]", "Bremsmoment [Nm]",
    "Gearbox torque [Nm]", "Encoder supply voltage [V]", "Torque ripple [mNm]", "Shaft length L [mm]",
    "Holding brake current [A]", "Storage temperature [°C]", "Load inertia [kgcm²]", "Input power [W]",
    "Power rate [kW/s]", "Speed [Hz]", "No-load speed [Hz]", "No-load speed [1/s]", "Stromkonstante [A/mNm]",
    "耐電圧 [V]", "刹车力矩 [Nm]", "Corriente de desmagnetización [A]", "Width L [mm]", "Cable length [m]",
])  # fmt: skip
def test_what_is_no_figure_of_the_motor_is_listed_and_never_read(heading):
    s = sheet(f"Type | Nominal voltage [V] | {heading}\nA | 24 | 3.5\nB | 24 | 4.5")
    assert s.motors()["A"] == {"nominal_voltage": 24}
    assert [u.text for u in s.reading.unread] == ["3.5"]
    assert s.reading.unread[0].row == 2


def test_a_speed_in_hertz_has_guesses():
    s = sheet("Type | Nominal voltage [V] | No-load speed [Hz]\nA | 24 | 80")
    assert "no_load_speed" in s.reading.unread[0].guesses or s.reading.unread[0].guesses


def test_stall_figures_belong_to_the_family_of_the_sheet():
    s = sheet("""
Type | Rated speed [rpm] | Stall torque [Nm] | Stall current [Arms] | Peak torque [Nm] | Peak current [Arms]
V | 3000 | 4.1 | 3.0 | 12 | 10
""")
    assert s.motors()["V"]["continuous_stall_torque"] == 4.1
    assert s.motors()["V"]["continuous_stall_current"] == 3.0
    s = sheet(
        "Type | No-load speed [rpm] | Stall torque [mNm] | Stall current [A]\nM | 9000 | 41 | 3"
    )
    assert s.motors()["M"]["stall_torque"] == pytest.approx(0.041)


def test_mains_and_bus_voltage():
    s = sheet(
        "Type | Mains voltage [VAC] | DC bus voltage [V] | Rated speed [rpm]\nA | 400 | 560 | 3000"
    )
    assert s.motors()["A"]["mains_voltage"] == 400
    assert s.motors()["A"]["nominal_voltage"] == 560


def test_phase_and_line_resistance():
    s = sheet("Type | Rated voltage [V] | Phase resistance [Ω] | Pole pairs\nA | 48 | 0.3 | 4")
    assert s.convention("terminal_resistance").between == "phase"
    s = sheet(
        "Type | Rated voltage [V] | Resistance, line-to-line [Ω] | Pole pairs\nA | 48 | 0.3 | 4"
    )
    assert s.convention("terminal_resistance").between == "lines"
    assert s.convention("terminal_resistance").basis == "stated"


@pytest.mark.parametrize(
    ("title", "heading", "factor"),
    # line-to-line voltage over that of a winding: √3 in a star, 1 in a delta (from memory, any
    # handbook of three-phase circuits)
    [
        ("Servo S, star connected windings", "Back-EMF per phase, peak (V/krpm)", 3**0.5),
        ("Servo S, delta connected windings", "Back-EMF per phase, peak (V/krpm)", 1.0),
        ("Servo S, delta connected windings", "Back-EMF, line to line, peak (V/krpm)", 1.0),
        ("Servo S", "Back-EMF per phase of the delta, peak (V/krpm)", 1.0),
    ],
)
def test_the_connection_of_the_windings_is_that_of_the_back_emf_too(title, heading, factor):
    s = sheet(
        f"{title}\nType | Rated current [A rms] | {heading} | Pole pairs\n"
        "A | 4.2 | 60.5 | 4\nB | 2.1 | 121 | 4"
    )
    found = to_dc("back_emf_constant", s.convention("back_emf_constant"), Commutation.SINUSOIDAL)
    assert found == pytest.approx(factor)


def test_a_connection_alone_does_not_settle_peak_or_rms():
    s = sheet(
        "Servo S, delta connected windings\n"
        "Type | Rated current [A rms] | Back-EMF (V/krpm) | Pole pairs\nA | 4.2 | 60.5 | 4"
    )
    assert s.convention("back_emf_constant").connection == "delta"
    assert s.convention("back_emf_constant").basis == "assumed"


def test_upper_case_export():
    s = sheet(
        "TYPE | RATED VOLTAGE (V) | RATED TORQUE (NM) | TORQUE CONSTANT (NM/A) | ROTOR INERTIA (KGCM2)\nA | 48 | 1.2 | 0.11 | 0.4"
    )
    assert s.motors()["A"] == pytest.approx(
        {
            "nominal_voltage": 48,
            "nominal_torque": 1.2,
            "torque_constant": 0.11,
            "rotor_inertia": 4e-5,
        }
    )


def test_a_prefix_adds_no_digits():
    """118 g are 0.118 kg, not 0.11800000000000001."""
    s = sheet("Type | Rated voltage [V] | Mass [g] | Rated current [mA]\nA | 48 | 118 | 35.7")
    assert s.motors()["A"] == {
        "nominal_voltage": 48.0,
        "mass": 0.118,
        "nominal_current": 0.0357,
    }


def test_a_column_of_another_decimal_sign_is_read_by_its_own_evidence():
    s = sheet("""
        Type | No-load speed [rpm] | Torque constant [Nm/A] | Weight [kg]
        A | 3000.5 | 0,305 | 1,25
        B | 4500.5 | 0,255 | 1,34
    """)
    assert s.motors()["A"]["no_load_speed"] == pytest.approx(3000.5 * RPM)
    assert s.motors()["A"]["torque_constant"] == 0.305
    assert any("3000.5" in remark for remark in s.reading.remarks)


def test_a_figure_that_only_the_other_sign_makes_possible_is_listed():
    s = sheet("""
        Type | No-load speed [rpm] | Torque constant [Nm/A] | Weight [kg]
        A | 3,000 | 0.305 | 1,250
    """)
    assert set(s.motors()["A"]) == {"no_load_speed", "torque_constant"}
    assert [u.guesses for u in s.reading.unread] == [("1250", "1.25")]


@pytest.mark.parametrize(("heading", "cell"), [
    ("Nominal voltage [V]", "24/36"), ("Nominal voltage", "24 V / 36 V"),
    ("No-load speed 24 V / 36 V [rpm]", "3000 / 4500"), ("Max. speed [×103 min-1]", "6"),
    ("Rotor inertia [×104 kgm2]", "0.35"),
])  # fmt: skip
def test_options_and_lost_powers_are_listed(heading, cell):
    s = sheet(f"Type | Torque constant [Nm/A] | {heading}\nA | 0.3 | {cell}")
    assert s.motors() == {"A": {"torque_constant": 0.3}}
    assert cell in s.unread


@pytest.mark.parametrize(("heading", "key", "cell", "expected"), [
    ("n nom [rpm]", "nominal_speed", "3000", 3000 * RPM),
    ("M nom [mNm]", "nominal_torque", "100", 0.1),
    ("I nom [A]", "nominal_current", "2.1", 2.1),
    ("tau_m [ms]", "mechanical_time_constant", "5", 0.005),
    ("tau el [ms]", "electrical_time_constant", "0.5", 0.0005),
])  # fmt: skip
def test_symbols_spelled_out(heading, key, cell, expected):
    s = sheet(f"Type | Ra [Ohm] | {heading}\nA | 1.2 | {cell}")
    assert s.motors()["A"][key] == pytest.approx(expected)


def test_value_is_no_part_number_and_a_code_in_the_corner_is_one():
    body = "\n".join(("Nominal voltage | 24 | V", "Torque constant | 49.5 | mNm/A"))
    assert set(sheet(f"Part | Value | Unit\n{body}").motors()) == {"plate"}
    assert set(sheet(f"QX-22 | Value | Unit\n{body}").motors()) == {"QX-22"}
    assert set(sheet(f"Parameter | Value | Unit\n{body}").motors()) == {"plate"}


def test_groups_over_names_and_a_row_of_units_are_no_matrix_of_points():
    s = sheet("""
        Model | | No Load | | Rated Load | | Stall
        Part No. | Rated Voltage | Speed | Current | Speed | Torque | Torque
         | VDC | rpm | A | rpm | mN·m | mN·m
        A-12 | 12 | 5600 | 0.089 | 4744 | 18 | 118
        A-24 | 24 | 5500 | 0.044 | 4659 | 18 | 118
    """)
    assert set(s.motors()) == {"A-12", "A-24"}
    assert s.motors()["A-12"]["nominal_torque"] == pytest.approx(0.018)
    assert s.motors()["A-24"]["stall_torque"] == pytest.approx(0.118)


def test_a_named_voltage_over_rows_is_what_they_hold_for():
    s = sheet("""
        Type | | S-1 | S-2
        Stillstandsdrehmoment M0 | Nm | 1.2 | 2.2
        Netzspannung 230 VAC | | |
        Nenndrehzahl nN | 1/min | 1740 | 1750
        Netzspannung 400 VAC | | |
        Nenndrehzahl nN | 1/min | 3000 | 3100
    """)
    found = {c.when for c in s.batch.conditions} | set(s.reading.remarks)
    assert any("400 VAC" in text for text in found)
    speeds = {c.figures[0]["nominal_speed"].value for c in s.batch.conditions if c.figures}
    both = sorted({*speeds, s.motors()["S-1"]["nominal_speed"]})
    assert both == pytest.approx([1740 * RPM, 3000 * RPM])


def test_a_gear_under_its_own_caption_makes_no_table_of_gears():
    s = sheet("""
        Motor model | Unit | P-1 | P-2
        Rated torque | Nm | 1.09 | 2.09
        Rated speed | rpm | 3000 | 3000
        Gearbox (option) | | |
        Ratio | | 10:1 | 10:1
        Rated torque | Nm | 22 | 45
    """)
    assert s.motors()["P-2"] == pytest.approx({"nominal_torque": 2.09, "nominal_speed": 3000 * RPM})


def test_codes_under_a_frame_size_are_the_names_where_there_are_no_others():
    s = sheet("""
        Baugröße | Einheit | TQ 85-17 | TQ 85-30
        Spitzendrehmoment | Nm | 4.1 | 7.8
        Motorkonstante | Nm/√W | 0.175 | 0.338
    """)
    assert set(s.motors()) == {"TQ 85-17", "TQ 85-30"}


def test_gear_motor_over_the_part_numbers_is_no_other_part():
    s = sheet("""
        Gear motor | Motor only | Motor only
        Part number | No-load speed, rpm | Stall torque, mNm
        G-19 | 6000 | 78.5
        G-50 | 6000 | 78.5
    """)
    assert set(s.motors()) == {"G-19", "G-50"}


@pytest.mark.parametrize(("title", "name"), [
    ("Specification FT-20-06", "FT-20-06"), ("Brushed motor 24VDC", "plate"),
    ("Servo motor IP65", "plate"), ("Technical data", "plate"), ("Motor BM 45", "BM 45"),
    ("Brushless motor size 42", "plate"), ("Datasheet rev 12", "plate"),
])  # fmt: skip
def test_a_title_that_ends_in_a_code_names_the_motor(title, name):
    s = sheet(f"{title} | | \nItem | Unit | Value\nStall torque | mNm | 3\nStall current | A | 0.8")
    assert set(s.motors()) == {name}


def test_load_speed_beside_no_load_speed_is_of_the_rated_point():
    """Common practice on sheets of small motors, no source."""
    s = sheet("""
        型号 | 空载转速 [rpm] | 负载转速 [rpm] | 负载电流 [mA]
        A | 6000 | 5082 | 468
    """)
    motor = s.motors()["A"]
    assert motor["nominal_speed"] == pytest.approx(5082 * RPM)
    assert motor["nominal_current"] == pytest.approx(0.468)
    alone = sheet("Type | Load speed [rpm] | Torque constant [Nm/A]\nA | 5082 | 0.1")
    assert alone.motors() == {"A": {"torque_constant": 0.1}}
    both = sheet(
        "Type | No-load speed [rpm] | Rated speed [rpm] | Load speed [rpm]\nA | 60 | 40 | 9"
    )
    assert "9" in both.unread


@pytest.mark.parametrize(("heading", "cell", "key", "expected"), [
    ("Vitesse a vide (tr/mn)", "4200", "no_load_speed", 4200 * RPM),
    ("n0 rpm", "4200", "no_load_speed", 4200 * RPM),
    ("Resistencia en bornes", "2.04 ohmios", "terminal_resistance", 2.04),
    ("Vnom [V]", "12", "nominal_voltage", 12), ("NL speed [rpm]", "60", "no_load_speed", 60 * RPM),
    ("Peak current (A peak of sine)", "3.4", "peak_current", 3.4),
    ("KV", "1950", "speed_constant", 1950 * RPM),
])  # fmt: skip
def test_usual_abbreviations(heading, cell, key, expected):
    s = sheet(f"Part no. | Rated torque [Nm] | {heading}\nA | 0.3 | {cell}")
    assert s.motors()["A"][key] == pytest.approx(expected)


def test_a_small_number_under_kv_is_listed():
    s = sheet("Part no. | Rated torque [Nm] | Kv\nA | 0.3 | 9.1")
    assert s.motors() == {"A": {"nominal_torque": 0.3}}
    assert "9.1" in s.unread


def test_two_phase_resistance_is_that_between_lines():
    s = sheet("Part no. | Rated torque [Nm] | R2ph [Ohm] | L2ph [mH]\nA | 0.3 | 9.1 | 20")
    assert s.convention("terminal_resistance").between == "lines"
    assert s.convention("terminal_inductance").between == "lines"


def test_a_unit_that_is_unknown_is_named():
    s = sheet("Part no. | Rated torque [Nm] | Stall current [A wobble]\nA | 0.3 | 9.1")
    (listed,) = s.reading.unread
    assert "wobble" in listed.reason


@pytest.mark.parametrize("heading", [
    "Max. radial load, 5 mm from flange [N]", "Max. radiale Belastung, 5 mm ab Flansch N",
    "Radial load (5 mm from mounting face) N", "Charge radiale à 5 mm de la face (N)",
])  # fmt: skip
def test_where_a_load_acts_is_its_condition(heading):
    s = sheet(f"Type | Rated torque [Nm] | {heading}\nA | 0.3 | 15.4")
    assert s.motors()["A"]["radial_load"] == 15.4


def test_a_gears_output_is_no_figure_at_load():
    s = sheet("Type | No-load speed [rpm] | Output no-load speed [rpm]\nA | 6000 | 98")
    assert s.motors() == {"A": {"no_load_speed": pytest.approx(6000 * RPM)}}
    assert "98" in s.unread


def test_the_output_of_a_gear_is_not_the_motors():
    s = sheet("""
        Model | Motor no-load speed (rpm) | Gear ratio | Rated output torque (Nm) | Output shaft diameter (mm)
        G-1 | 9800 | 34:1 | 0.5 | 4
    """)
    assert s.motors() == {"G-1": {"no_load_speed": pytest.approx(9800 * RPM)}}
    assert {"0.5", "4"} <= s.unread
    told = sheet(
        "Model | Motor voltage [V] | Gear ratio | Rated output torque [Nm]\nG-1 | 24 | 34:1 | 0.5",
        overrides={"Rated output torque": "nominal_torque"},
    )
    assert told.motors()["G-1"]["nominal_torque"] == 0.5


def test_a_row_of_figures_is_never_the_names():
    s = sheet("""
         | Units | A-24 | A-48
        Supply voltage, nom. | VDC | 24 | 48
        Ceiling torque | Nm | 1 | 2
        Torque constant | Nm/A | 0.3 | 0.4
    """)
    assert set(s.motors()) == {"A-24", "A-48"}
    assert s.motors()["A-48"]["nominal_voltage"] == 48


@pytest.mark.parametrize(("heading", "key", "expected"), [
    ("Friction torque, static [mNm]", "friction_torque", 0.0098),
    ("Max. continuous torque, Me [mNm]", "nominal_torque", 0.0098),
    ("Rotorträgheitsmoment J in gcm²", "rotor_inertia", 9.8e-7),
    ("Drehzahlkonstante kn in min⁻¹/V", "speed_constant", 9.8 * RPM),
    ("Thermische Zeitkonstante τw1 in s", "thermal_time_constant_winding", 9.8),
    ("Thermal resistance Rth2 [K/W]", "thermal_resistance_housing_ambient", 9.8),
    ("Thermal time constant motor τw1 [s]", "thermal_time_constant_housing", 9.8),
    ("Continuous stall torque at 25 °C amb. [Nm]", "continuous_stall_torque", 9.8),
    ("Idle current, typ. (with shaft ø 6 mm) [A]", "no_load_current", 9.8),
    ("RU-V [Ω]", "terminal_resistance", 9.8), ("Pk curr. (A)", "peak_current", 9.8),
    ("Torq. const. (Nm/A)", "torque_constant", 9.8), ("Ind. (L-L) (mH)", "terminal_inductance", 0.0098),
])  # fmt: skip
def test_names_as_sheets_put_them(heading, key, expected):
    s = sheet(f"Type | Nominal voltage [V] | {heading}\nA | 24 | 9.8")
    assert s.motors()["A"][key] == pytest.approx(expected)


def test_line_resistance_is_that_between_lines():
    s = sheet("Type | Rated torque [Nm] | Line resistance [Ω]\nA | 0.3 | 1.2")
    assert s.convention("terminal_resistance").between == "lines"


def test_windings_by_a_letter_bear_the_name_of_their_motor():
    s = sheet("""
        Motor | Winding | Nominal voltage (V) | Resistance (Ω)
        RF-60 | A | 12 | 0.21
         | B | 24 | 0.82
    """)
    assert set(s.motors()) == {"RF-60 A", "RF-60 B"}


def test_variants_over_the_columns_of_one_motor():
    s = sheet("""
        Motor | IF-60 | IF-60
        Motor | with heat sink | without heat sink
        Continuous stall torque [Nm] | 1.2 | 0.95
        Peak torque [Nm] | 4.1 | 4.1
    """)
    assert s.motors() == {"IF-60": {"continuous_stall_torque": 1.2, "peak_torque": 4.1}}
    (condition,) = s.batch.conditions
    assert condition.when == "without heat sink"


def test_a_column_under_a_temperature_holds_for_it():
    s = sheet("""
        Model | T-150 |
        Parameter | 25 °C | 125 °C
        Resistance line-line (Ω) | 1.24 | 1.72
        Peak torque (Nm) | 31 |
    """)
    assert s.convention("terminal_resistance").temperature == 25.0


def test_two_halves_side_by_side_with_a_drawing_below():
    s = sheet("""
        AB-36 brushless motor | | | | |
        Nominal voltage | V | 24 | Terminal resistance | Ω | 1.62
        No-load speed | rpm | 7820 | Torque constant | mNm/A | 29.1
        Stall torque | mNm | 428 | Weight | g | 175
        40 ±0.3 | | | | |
        Ø36 | | | | |
    """)
    (motor,) = s.motors().values()
    assert motor["terminal_resistance"] == 1.62
    assert motor["nominal_voltage"] == 24
    assert set(s.motors()) == {"AB-36"}


def test_figures_on_one_line_above_a_table():
    s = sheet("""
        Motor BM 45 | |
        Nennspannung 24 V DC, Gewicht 0,33 kg | |
        Merkmal | Einheit | Wert
        Anlaufmoment | Ncm | 41
        Anlaufstrom | A | 11,2
    """)
    assert set(s.motors()) == {"BM 45"}
    assert s.motors()["BM 45"]["nominal_voltage"] == 24
    assert s.motors()["BM 45"]["mass"] == pytest.approx(0.33)


def test_one_motor_in_two_systems_of_units():
    s = sheet("""
        Frameless motor RBX-1512 | | | |
        Parameter | Metric | Unit | Imperial | Unit
        Peak torque | 1.62 | Nm | 229 | oz-in
        Terminal resistance | 0.81 | Ω | 0.81 | Ω
        Weight | 0.37 | kg | 13.1 | oz
    """)
    assert s.motors() == {
        "RBX-1512": {"peak_torque": 1.62, "terminal_resistance": 0.81, "mass": 0.37}
    }
    again = s.batch.repeats["peak_torque"][0].value[0]
    assert again == pytest.approx(229 * 7.0615518e-3)  # NIST SP 811 (2008), App. B.8: ozf·in


def test_letters_below_the_names_of_frames():
    s = sheet("""
         | L-5 | L-5 | L-7
        Winding | A | B | A
        Torque constant [Nm/A] | 1.65 | 0.85 | 2.1
    """)
    assert set(s.motors()) == {"L-5 A", "L-5 B", "L-7 A"}


def test_a_caption_across_and_a_range_are_no_names():
    s = sheet("""
        Item | Unit | P-8 | P-21
        Motor | Motor | Motor | Motor
        Temperature range | °C | -30 ... +85 | -30 ... +125
        Torque constant | Nm/A | 1.65 | 0.85
    """)
    assert set(s.motors()) == {"P-8", "P-21"}


def test_a_figure_on_a_line_below_a_table():
    s = sheet("""
        Type | Rated torque [Nm] | Torque constant [Nm/A]
        A | 0.3 | 0.1
        B | 0.4 | 0.2

        Weight: 0.98 kg | |
    """)
    assert s.motors()["B"]["mass"] == 0.98


@pytest.mark.parametrize(("heading", "key", "expected"), [
    ("U_N V", "nominal_voltage", 9.8), ("k_n rpm/V", "speed_constant", 9.8 * RPM),
    ("Δn/ΔM rpm/mNm", "speed_torque_gradient", 9800 * RPM),
    ("Speed / torque gradient rpm/mNm", "speed_torque_gradient", 9800 * RPM),
    ("Thermische Zeitkonstante τw1 (Wicklung) s", "thermal_time_constant_winding", 9.8),
    ("Abgabeleistung P2max. [W]", "maximum_power", 9.8),
    ("Continuous torque (stall) at 100 °C rise [Nm]", "continuous_stall_torque", 9.8),
    ("Term. resistance (Ohm)", "terminal_resistance", 9.8), ("Shaft Ø (mm)", "shaft_diameter", 0.0098),
])  # fmt: skip
def test_symbols_units_and_brackets_behind_names(heading, key, expected):
    s = sheet(f"Type | Rated current [A] | {heading}\nA | 0.3 | 9.8")
    assert s.motors()["A"][key] == pytest.approx(expected)


@pytest.mark.parametrize("heading", ["Rated current, fan [A]", "Rated current Fan [A]",
                                     "Nominal voltage brk [V]"])  # fmt: skip
def test_a_word_behind_a_name_is_no_sign_of_it(heading):
    s = sheet(f"Type | Rated torque [Nm] | {heading}\nA | 0.3 | 9.8")
    assert s.motors() == {"A": {"nominal_torque": 0.3}}
    assert "9.8" in s.unread
