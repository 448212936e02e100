"""The invented makers: frames, windings, sheets, and the contradictions planted in them."""

from __future__ import annotations

import math

from sample_motors import Frame, Motor, Winding, dc_figures, make_motor, servo_figures
from sample_sheets import (
    Column,
    Plant,
    Sheet,
    html_page,
    parameters_down,
    two_row_headings,
    unit_row,
    units_in_headings,
)

RPM = math.pi / 30
M, U, MM = 1e-3, 1e-6, 1e-3
GCM2, KGCM2 = 1e-7, 1e-4
GFCM = 9.80665e-5
OZ_IN = 0.45359237 / 16 * 9.80665 * 0.0254
LB, HP = 0.45359237, 745.69987
V_KRPM = 1 / (1000 * RPM)


def _motors(commutation: str, frame: Frame, rows: list[tuple]) -> list[Motor]:
    return [make_motor(frame, Winding(*row), commutation) for row in rows]


# ---- 1. Brindlewick: micro brushed motors, parameters down, windings across -----------------

BRIN_10 = Frame(
    series="BRIN-10", motor_constant=1.6e-3, rotor_inertia=1.02e-8,
    electrical_time_constant=9e-6, friction=6.2e-5, mass=7.2e-3, diameter=10e-3, length=19e-3,
    maximum_winding_temperature=85, rth1=30, rth2=150, tau_winding=2.6, tau_housing=110,
    maximum_speed=18000 * RPM,
)  # fmt: skip
BRIN_22 = Frame(
    series="BRIN-22", motor_constant=6.5e-3, rotor_inertia=3.46e-7,
    electrical_time_constant=62e-6, friction=5.4e-4, mass=58e-3, diameter=22e-3, length=34e-3,
    maximum_winding_temperature=100, rth1=6.4, rth2=17.6, tau_winding=8.1, tau_housing=460,
    maximum_speed=12000 * RPM,
)  # fmt: skip

BRINDLEWICK_COLUMNS = [
    Column("Torque constant", "mNm/A", "torque_constant", M, 3, "Winding"),
    Column("Speed constant", "rpm/V", "speed_constant", RPM, 3, "Winding"),
    Column("Terminal resistance", "Ω", "terminal_resistance", 1, 3, "Winding"),
    Column("Terminal inductance", "mH", "terminal_inductance", M, 3, "Winding"),
    Column("Nominal voltage", "V", "nominal_voltage", 1, 0, "At nominal voltage"),
    Column("Stall torque", "mNm", "stall_torque", M, 3, "At nominal voltage"),
    Column("Stall current", "A", "stall_current", 1, 3, "At nominal voltage"),
    Column("No-load speed", "rpm", "no_load_speed", RPM, 3, "At nominal voltage"),
    Column("No-load current", "mA", "no_load_current", M, 3, "At nominal voltage"),
    Column("Rated speed", "rpm", "nominal_speed", RPM, 3, "At nominal voltage"),
    Column("Rated torque", "mNm", "nominal_torque", M, 3, "At nominal voltage"),
    Column("Rated current", "A", "nominal_current", 1, 3, "At nominal voltage"),
    Column("Max. efficiency", "%", "maximum_efficiency", 0.01, 2, "At nominal voltage"),
    Column("Speed/torque slope", "rpm/mNm", "speed_torque_gradient", RPM / M, 3,
           "At nominal voltage"),
    Column("Mechanical time constant", "ms", "mechanical_time_constant", M, 3,
           "At nominal voltage"),
    Column("Rotor inertia", "g·cm²", "rotor_inertia", GCM2, 3, "Mechanical"),
    Column("Max. permissible speed", "rpm", "maximum_speed", RPM, 0, "Mechanical"),
    Column("Diameter", "mm", "diameter", MM, 0, "Mechanical"),
    Column("Length", "mm", "length", MM, 0, "Mechanical"),
    Column("Weight", "g", "mass", M, 0, "Mechanical"),
    Column("Thermal resistance winding-housing", "K/W", "thermal_resistance_winding_housing", 1, 0,
           "Thermal"),
    Column("Thermal resistance housing-ambient", "K/W", "thermal_resistance_housing_ambient", 1, 0,
           "Thermal"),
    Column("Thermal time constant winding", "s", "thermal_time_constant_winding", 1, 0, "Thermal"),
    Column("Thermal time constant housing", "s", "thermal_time_constant_housing", 1, 0, "Thermal"),
    Column("Max. winding temperature", "°C", "maximum_winding_temperature", 1, 0, "Thermal"),
]  # fmt: skip


def _brindlewick(file: str, frame: Frame, rows: list[tuple]) -> Sheet:
    return Sheet(
        file=file,
        maker="Brindlewick Motors (invented)",
        commutation="brushed",
        columns=BRINDLEWICK_COLUMNS,
        motors=_motors("brushed", frame, rows),
        figures=lambda m: dc_figures(m, 25, gross_stall=False),
        render=parameters_down,
        above=[
            "Maker: Brindlewick Motors (invented)",
            f"Series: {frame.series}",
            "Brushed DC micro motors with NdFeB magnets. Values at 25 °C.",
        ],
        below=["Every motor and every figure on this sheet is made up."],
    )


# ---- 2. Quasselbach: German, decimal comma, one motor a row, figures at 20 °C ---------------

IGEL = Frame(
    series="IGEL", motor_constant=8e-3, rotor_inertia=1.18e-6, electrical_time_constant=95e-6,
    friction=7.8e-4, mass=0.112, diameter=26e-3, length=44e-3, maximum_winding_temperature=125,
    rth1=4.2, rth2=15.6, tau_winding=12, tau_housing=610, magnet="NdFeB",
)  # fmt: skip
DACHS = Frame(
    series="DACHS", motor_constant=21e-3, rotor_inertia=6.63e-6, electrical_time_constant=210e-6,
    friction=4.1e-3, mass=0.345, diameter=36e-3, length=68e-3, maximum_winding_temperature=125,
    rth1=2.3, rth2=6.9, tau_winding=27, tau_housing=840, magnet="NdFeB",
)  # fmt: skip
BIBER = Frame(
    series="BIBER", motor_constant=58e-3, rotor_inertia=48.7e-6, electrical_time_constant=460e-6,
    friction=23e-3, mass=1.04, diameter=52e-3, length=101e-3, maximum_winding_temperature=125,
    rth1=1.15, rth2=3.05, tau_winding=48, tau_housing=1250, magnet="NdFeB",
)  # fmt: skip

QUASSELBACH = Sheet(
    file="quasselbach.csv",
    maker="Quasselbach Kleinantriebe (erfunden)",
    commutation="brushed",
    columns=[
        Column("Typ", "", "part_number"),
        Column("Baureihe", "", "series"),
        Column("Nennspannung", "V", "nominal_voltage", 1, 0),
        Column("Leerlaufdrehzahl", "min⁻¹", "no_load_speed", RPM, 3),
        Column("Leerlaufstrom", "mA", "no_load_current", M, 3),
        Column("Nenndrehzahl", "min⁻¹", "nominal_speed", RPM, 3),
        Column("Nennmoment", "mNm", "nominal_torque", M, 3),
        Column("Nennstrom", "A", "nominal_current", 1, 3),
        Column("Nennleistung", "W", "rated_power", 1, 3),
        Column("Anlaufmoment", "mNm", "stall_torque", M, 3),
        Column("Anlaufstrom", "A", "stall_current", 1, 3),
        Column("max. Wirkungsgrad", "%", "maximum_efficiency", 0.01, 3),
        Column("Wicklungswiderstand", "Ω", "terminal_resistance", 1, 3),
        Column("Wicklungsinduktivität", "mH", "terminal_inductance", M, 3),
        Column("Drehmomentkonstante", "mNm/A", "torque_constant", M, 3),
        Column("Drehzahlkonstante", "min⁻¹/V", "speed_constant", RPM, 3),
        Column("Steigung der n/M-Kennlinie", "min⁻¹/mNm", "speed_torque_gradient", RPM / M, 3),
        Column("mechanische Zeitkonstante", "ms", "mechanical_time_constant", M, 3),
        Column("Rotorträgheitsmoment", "gcm²", "rotor_inertia", GCM2, 3),
        Column("Wärmewiderstand Wicklung/Gehäuse", "K/W",
               "thermal_resistance_winding_housing", 1, 0),
        Column("Wärmewiderstand Gehäuse/Umgebung", "K/W",
               "thermal_resistance_housing_ambient", 1, 0),
        Column("max. Wicklungstemperatur", "°C", "maximum_winding_temperature", 1, 0),
        Column("Masse", "g", "mass", M, 0),
        Column("Durchmesser", "mm", "diameter", MM, 0),
        Column("Länge", "mm", "length", MM, 0),
        Column("Preis", "EUR", "price", 1, 4),
    ],
    motors=[
        *_motors("brushed", IGEL, [
            ("IGEL-6", 6, 7400, 31.40), ("IGEL-12", 12, 7600, 31.40),
            ("IGEL-24", 24, 7500, 31.40), ("IGEL-36", 36, 7250, 33.90),
        ]),
        *_motors("brushed", DACHS, [
            ("DACHS-12", 12, 6300, 58.20), ("DACHS-24", 24, 6500, 58.20),
            ("DACHS-36", 36, 6700, 60.50), ("DACHS-48", 48, 6450, 60.50),
        ]),
        *_motors("brushed", BIBER, [
            ("BIBER-18", 18, 5350, 121.00), ("BIBER-24", 24, 5500, 119.00),
            ("BIBER-36", 36, 5600, 119.00), ("BIBER-48", 48, 5450, 119.00),
        ]),
    ],
    figures=lambda m: dc_figures(m, 20, gross_stall=False),
    render=units_in_headings,
    reference=20.0,
    decimal=",",
    thousands=".",
    above=[
        "Hersteller: Quasselbach Kleinantriebe (erfunden)",
        "Bürstenbehaftete Gleichstrommotoren mit NdFeB-Magneten; "
        "Werte bei 20 °C Wicklungs- und Umgebungstemperatur",
    ],
    below=["Alle Motoren und alle Zahlen dieser Tabelle sind frei erfunden."],
)  # fmt: skip

# ---- 3. Gopher Notch: US units, tabs, a unit row ---------------------------------------------

PIKA = Frame(
    series="PIKA", motor_constant=0.045, rotor_inertia=3.53e-5, electrical_time_constant=0.74e-3,
    friction=9.9e-3, damping=1.1e-5, mass=0.78, diameter=0.0572, length=0.0914,
    maximum_winding_temperature=155, rth1=1.1, rth2=3.4, tau_winding=35, tau_housing=900,
    magnet="ferrite",
)  # fmt: skip
MARMOT = Frame(
    series="MARMOT", motor_constant=0.12, rotor_inertia=1.62e-4, electrical_time_constant=2.3e-3,
    friction=0.055, damping=6.5e-5, mass=2.9, diameter=0.0826, length=0.165,
    maximum_winding_temperature=155, rth1=0.5, rth2=1.3, tau_winding=60, tau_housing=1800,
    magnet="ferrite",
)  # fmt: skip

GOPHER_NOTCH = Sheet(
    file="gopher_notch.tsv",
    maker="Gopher Notch Motion (invented)",
    commutation="brushed",
    columns=[
        Column("Model", "", "part_number"),
        Column("Series", "", "series"),
        Column("Rated Voltage", "VDC", "nominal_voltage", 1, 0),
        Column("Rated Torque", "oz-in", "nominal_torque", OZ_IN, 3),
        Column("Rated Speed", "RPM", "nominal_speed", RPM, 3),
        Column("Rated Current", "A", "nominal_current", 1, 3),
        Column("Rated Output Power", "hp", "rated_power", HP, 3),
        Column("Stall Torque", "oz-in", "stall_torque", OZ_IN, 3),
        Column("No-Load Speed", "RPM", "no_load_speed", RPM, 3),
        Column("No-Load Current", "A", "no_load_current", 1, 3),
        Column("Torque Constant", "oz-in/A", "torque_constant", OZ_IN, 3),
        Column("Back-EMF Constant", "V/krpm", "back_emf_constant", V_KRPM, 3),
        Column("Terminal Resistance", "ohm", "terminal_resistance", 1, 3),
        Column("Terminal Inductance", "mH", "terminal_inductance", M, 3),
        Column("Motor Constant", "oz-in/√W", "motor_constant", OZ_IN, 3),
        Column("Rotor Inertia", "oz-in-s²", "rotor_inertia", OZ_IN, 3),
        Column("Friction Torque", "oz-in", "friction_torque", OZ_IN, 2),
        Column("Viscous Damping", "oz-in/krpm", "viscous_damping", OZ_IN / (1000 * RPM), 2),
        Column("Mechanical Time Constant", "ms", "mechanical_time_constant", M, 3),
        Column("Electrical Time Constant", "ms", "electrical_time_constant", M, 2),
        Column("Thermal Resistance Winding-Ambient", "°C/W", "thermal_resistance", 1, 0),
        Column("Max. Winding Temperature", "°F", "maximum_winding_temperature", 1, 3),
        Column("Weight", "lb", "mass", LB, 3),
        Column("Diameter", "in", "diameter", 0.0254, 3),
        Column("Length", "in", "length", 0.0254, 3),
    ],
    motors=[
        *_motors("brushed", PIKA, [
            ("PIKA-1", 12, 3900), ("PIKA-2", 24, 4050), ("PIKA-3", 36, 4000),
            ("PIKA-4", 48, 3950), ("PIKA-5", 90, 4100),
        ]),
        *_motors("brushed", MARMOT, [
            ("MARMOT-1", 24, 3450), ("MARMOT-2", 36, 3600), ("MARMOT-3", 48, 3550),
            ("MARMOT-4", 90, 3500), ("MARMOT-5", 130, 3650),
        ]),
    ],
    figures=lambda m: dc_figures(m, 25, gross_stall=True),
    render=unit_row,
    thousands=",",
    above=[
        "Maker: Gopher Notch Motion (invented)",
        "Brushed DC motors with ferrite magnets, values at 25 °C. Everything here is made up.",
    ],
)  # fmt: skip

# ---- 4. Grisoulette: block-commutated, French, Kv, phase to phase ----------------------------

GRILLON = Frame(
    series="GRILLON", motor_constant=0.029, rotor_inertia=4.52e-6,
    electrical_time_constant=0.25e-3, friction=6.1e-3, mass=0.118, diameter=0.034, length=0.032,
    maximum_winding_temperature=120, rth1=1.0, rth2=3.2, tau_winding=6, tau_housing=240,
    pole_pairs=7, maximum_speed=16000 * RPM, description="rotor externe",
)  # fmt: skip
CIGALE = Frame(
    series="CIGALE", motor_constant=0.11, rotor_inertia=5.94e-5, electrical_time_constant=0.38e-3,
    friction=0.031, mass=0.49, diameter=0.058, length=0.047, maximum_winding_temperature=120,
    rth1=0.35, rth2=1.2, tau_winding=14, tau_housing=520, pole_pairs=11,
    maximum_speed=8000 * RPM, description="rotor externe",
)  # fmt: skip
BOURDON = Frame(
    series="BOURDON", motor_constant=0.35, rotor_inertia=4.18e-4, electrical_time_constant=0.8e-3,
    friction=0.09, mass=4.6, diameter=0.092, length=0.171, maximum_winding_temperature=140,
    rth1=0.28, rth2=0.81, tau_winding=55, tau_housing=1900, pole_pairs=2,
    maximum_speed=10000 * RPM, peak_over_nominal=3.0, description="rotor interne",
)  # fmt: skip

GRISOULETTE = Sheet(
    file="grisoulette.csv",
    maker="Moteurs Grisoulette (inventé)",
    commutation="block",
    columns=[
        Column("Référence", "", "part_number"),
        Column("Série", "", "series"),
        Column("Description", "", "description"),
        Column("Constante de vitesse Kv", "rpm/V", "speed_constant", RPM, 3),
        Column("Tension nominale", "V", "nominal_voltage", 1, 0),
        Column("Vitesse à vide", "tr/min", "no_load_speed", RPM, 3),
        Column("Courant à vide", "A", "no_load_current", 1, 3),
        Column("Vitesse nominale", "tr/min", "nominal_speed", RPM, 3),
        Column("Couple nominal", "N·cm", "nominal_torque", 1e-2, 3),
        Column("Courant nominal", "A", "nominal_current", 1, 3),
        Column("Puissance nominale", "W", "rated_power", 1, 3),
        Column("Couple de pointe", "N·cm", "peak_torque", 1e-2, 3),
        Column("Courant crête", "A", "peak_current", 1, 3),
        Column("Constante de couple", "mN·m/A", "torque_constant", M, 3),
        Column("Résistance entre phases", "mΩ", "terminal_resistance", M, 3),
        Column("Inductance entre phases", "µH", "terminal_inductance", U, 3),
        Column("Constante moteur", "mN·m/√W", "motor_constant", M, 3),
        Column("Pente vitesse/couple", "tr/min/mN·m", "speed_torque_gradient", RPM / M, 3),
        Column("Nombre de pôles", "", "poles", 1, 0),
        Column("Paires de pôles", "", "pole_pairs", 1, 0),
        Column("Inertie du rotor", "g·cm²", "rotor_inertia", GCM2, 3),
        Column("Constante de temps mécanique", "ms", "mechanical_time_constant", M, 3),
        Column("Résistance thermique bobinage-boîtier", "K/W",
               "thermal_resistance_winding_housing", 1, 0),
        Column("Résistance thermique boîtier-ambiante", "K/W",
               "thermal_resistance_housing_ambient", 1, 0),
        Column("Température max. du bobinage", "°C", "maximum_winding_temperature", 1, 0),
        Column("Vitesse maximale", "tr/min", "maximum_speed", RPM, 0),
        Column("Masse", "g", "mass", M, 0),
        Column("Diamètre", "mm", "diameter", MM, 0),
        Column("Longueur", "mm", "length", MM, 0),
    ],
    motors=[
        *_motors("block", GRILLON, [
            ("GRILLON-A", 12, 11800), ("GRILLON-B", 18, 12200), ("GRILLON-C", 24, 12000),
        ]),
        *_motors("block", CIGALE, [
            ("CIGALE-A", 24, 5400), ("CIGALE-B", 36, 5600), ("CIGALE-C", 48, 5500),
        ]),
        *_motors("block", BOURDON, [
            ("BOURDON-A", 48, 7900), ("BOURDON-B", 60, 8100),
            ("BOURDON-C", 72, 8000), ("BOURDON-D", 96, 8200),
        ]),
    ],
    figures=lambda m: dc_figures(m, 25, gross_stall=False),
    render=units_in_headings,
    decimal=",",
    thousands="\u202f",
    above=[
        "Fabricant : Moteurs Grisoulette (inventé)",
        "Moteurs sans balais, commutation par blocs (six pas), aimants NdFeB ; "
        "courants continus, valeurs à 25 °C",
    ],
    below=["Tous les moteurs et toutes les valeurs de ce tableau sont inventés."],
)  # fmt: skip

# ---- 5. Wobbleton: sinusoidal servo motors, two rows of headings, notes below -----------------

TERN = Frame(
    series="TERN", motor_constant=0.17, rotor_inertia=2.83e-5, electrical_time_constant=3.1e-3,
    friction=0.018, mass=1.35, diameter=0.06, length=0.118, maximum_winding_temperature=155,
    tau_housing=1320, pole_pairs=4, maximum_speed=6500 * RPM, peak_over_nominal=3.2,
    stall_torque=1.31,
)  # fmt: skip
HERON = Frame(
    series="HERON", motor_constant=0.45, rotor_inertia=1.92e-4, electrical_time_constant=6.2e-3,
    friction=0.05, mass=4.3, diameter=0.086, length=0.172, maximum_winding_temperature=155,
    tau_housing=1980, pole_pairs=4, maximum_speed=5500 * RPM, peak_over_nominal=3.0,
    stall_torque=4.25,
)  # fmt: skip
GANNET = Frame(
    series="GANNET", motor_constant=1.27, rotor_inertia=1.44e-3, electrical_time_constant=11.5e-3,
    friction=0.16, mass=14.8, diameter=0.13, length=0.244, maximum_winding_temperature=155,
    tau_housing=2760, pole_pairs=5, maximum_speed=4000 * RPM, peak_over_nominal=2.8,
    stall_torque=17.2,
)  # fmt: skip

WOBBLETON = Sheet(
    file="wobbleton.csv",
    maker="Wobbleton Servo Works (invented)",
    commutation="sinusoidal",
    columns=[
        Column("Model", "", "part_number", group="Motor"),
        Column("Series", "", "series", group="Motor"),
        Column("DC bus voltage", "V", "nominal_voltage", 1, 0, "Motor"),
        Column("Torque", "N·m", "continuous_stall_torque", 1, 3, "Continuous stall"),
        Column("Current", "A rms", "continuous_stall_current", 1, 3, "Continuous stall"),
        Column("Speed", "rpm", "nominal_speed", RPM, 0, "Rated"),
        Column("Torque", "N·m", "nominal_torque", 1, 3, "Rated"),
        Column("Current", "A rms", "nominal_current", 1, 3, "Rated"),
        Column("Power", "kW", "rated_power", 1e3, 3, "Rated"),
        Column("Torque", "N·m", "peak_torque", 1, 3, "Peak"),
        Column("Current", "A rms", "peak_current", 1, 3, "Peak"),
        Column("Torque constant ¹⁾", "N·m/A", "torque_constant", 1, 3, "Winding"),
        Column("Voltage constant ²⁾", "V/krpm", "back_emf_constant", V_KRPM, 3, "Winding"),
        Column("Resistance ³⁾", "Ω", "terminal_resistance", 1, 3, "Winding"),
        Column("Inductance ³⁾", "mH", "terminal_inductance", M, 3, "Winding"),
        Column("Electrical time constant", "ms", "electrical_time_constant", M, 3, "Winding"),
        Column("Pole pairs", "", "pole_pairs", 1, 0, "Rotor"),
        Column("Inertia", "kg·cm²", "rotor_inertia", KGCM2, 3, "Rotor"),
        Column("Friction torque", "N·m", "friction_torque", 1, 2, "Rotor"),
        Column("Maximum speed", "rpm", "maximum_speed", RPM, 0, "Rotor"),
        Column("Max. winding temperature", "°C", "maximum_winding_temperature", 1, 0, "General"),
        Column("Thermal time constant", "min", "thermal_time_constant_housing", 60, 0, "General"),
        Column("Mass", "kg", "mass", 1, 0, "General"),
        Column("Length", "mm", "length", MM, 0, "General"),
    ],
    motors=[
        *_motors("sinusoidal", TERN, [
            ("TERN-30L", 48, 3000), ("TERN-45L", 48, 4500),
            ("TERN-30", 320, 3000), ("TERN-60", 320, 6000),
        ]),
        *_motors("sinusoidal", HERON, [
            ("HERON-20", 320, 2000), ("HERON-30", 320, 3000),
            ("HERON-40", 320, 4000), ("HERON-50", 320, 5000),
        ]),
        *_motors("sinusoidal", GANNET, [
            ("GANNET-15", 560, 1500), ("GANNET-20", 560, 2000),
            ("GANNET-25", 560, 2500), ("GANNET-30", 560, 3000),
        ]),
    ],
    figures=servo_figures,
    render=two_row_headings,
    above=[
        "Maker: Wobbleton Servo Works (invented)",
        "AC servo motors for sinusoidal currents. Everything on this sheet is made up.",
    ],
    below=[
        "¹⁾ per A rms of phase current, at 25 °C",
        "²⁾ V rms line-to-line, at 25 °C",
        "³⁾ line-to-line, at 25 °C; star connection",
        "Ratings at 40 °C ambient, on an aluminium plate 300 × 300 × 12 mm; NdFeB magnets.",
    ],
)  # fmt: skip

# ---- 6. Tanuki Hollow: a web page in Japanese and English, one motor a column, gf·cm ---------

KODAMA = Frame(
    series="KODAMA", motor_constant=0.011, rotor_inertia=1.64e-6, electrical_time_constant=0.13e-3,
    friction=1.55e-3, mass=0.146, diameter=0.028, length=0.052, maximum_winding_temperature=120,
    rth1=3.1, rth2=11.9, tau_winding=15, tau_housing=700,
)  # fmt: skip

_EL, _AT = "電気特性 Electrical", "定格電圧時 At rated voltage"
_ME, _TH = "機械 Mechanical", "熱 Thermal"
TANUKI_HOLLOW = Sheet(
    file="tanuki_hollow.html",
    maker="狸谷モータ（架空） Tanuki Hollow Motor (invented)",
    commutation="brushed",
    columns=[
        Column("定格電圧 Rated voltage", "V", "nominal_voltage", 1, 0, _AT),
        Column("無負荷回転数 No-load speed", "r/min", "no_load_speed", RPM, 3, _AT),
        Column("無負荷電流 No-load current", "mA", "no_load_current", M, 3, _AT),
        Column("定格トルク Rated torque", "gf·cm", "nominal_torque", GFCM, 3, _AT),
        Column("定格電流 Rated current", "A", "nominal_current", 1, 3, _AT),
        Column("定格回転数 Rated speed", "r/min", "nominal_speed", RPM, 3, _AT),
        Column("定格出力 Rated output", "W", "rated_power", 1, 3, _AT),
        Column("停動トルク Stall torque", "gf·cm", "stall_torque", GFCM, 4, _AT),
        Column("停動電流 Stall current", "A", "stall_current", 1, 3, _AT),
        Column("最大効率 Max. efficiency", "%", "maximum_efficiency", 0.01, 3, _AT),
        Column("端子間抵抗 Terminal resistance <sup>1)</sup>", "Ω", "terminal_resistance", 1, 3,
               _EL),
        Column("端子間インダクタンス Terminal inductance", "µH", "terminal_inductance", U, 3, _EL),
        Column("トルク定数 Torque constant", "gf·cm/A", "torque_constant", GFCM, 3, _EL),
        Column("逆起電力定数 Back-EMF constant", "mV/rpm", "back_emf_constant", V_KRPM, 3, _EL),
        Column("慣性モーメント Rotor inertia", "g·cm<sup>2</sup>", "rotor_inertia", GCM2, 3, _ME),
        Column("機械的時定数 Mechanical time constant", "ms", "mechanical_time_constant", M, 3,
               _ME),
        Column("外径 Diameter", "mm", "diameter", MM, 0, _ME),
        Column("全長 Length", "mm", "length", MM, 0, _ME),
        Column("質量 Mass", "g", "mass", M, 0, _ME),
        Column("熱抵抗（巻線−ハウジング） Thermal resistance winding-housing", "K/W",
               "thermal_resistance_winding_housing", 1, 0, _TH),
        Column("熱抵抗（ハウジング−周囲） Thermal resistance housing-ambient", "K/W",
               "thermal_resistance_housing_ambient", 1, 0, _TH),
        Column("最高巻線温度 Max. winding temperature", "°C", "maximum_winding_temperature", 1, 0,
               _TH),
    ],
    motors=_motors("brushed", KODAMA, [
        ("KODAMA-A", 6, 7800), ("KODAMA-B", 9, 8000), ("KODAMA-C", 12, 8200),
        ("KODAMA-D", 18, 7900), ("KODAMA-E", 24, 8100), ("KODAMA-F", 36, 8000),
    ]),
    figures=lambda m: dc_figures(m, 25, gross_stall=False),
    render=html_page,
    above=[
        "製造者 Maker: 狸谷モータ（架空） Tanuki Hollow Motor (invented)",
        "ブラシ付DCモータ Brushed DC motors, NdFeB. すべて架空の値です。Every figure is made up.",
    ],
    below=["<sup>1)</sup> 巻線温度 25 °C における値 at a winding temperature of 25 °C"],
)  # fmt: skip

SHEETS = [
    _brindlewick("brindlewick_10.csv", BRIN_10, [
        ("BRIN-10-A", 1.5, 13400), ("BRIN-10-B", 2.4, 13900), ("BRIN-10-C", 3, 13600),
        ("BRIN-10-D", 4.5, 14300), ("BRIN-10-E", 6, 13800), ("BRIN-10-F", 9, 14100),
        ("BRIN-10-G", 12, 13500), ("BRIN-10-H", 15, 13700),
    ]),
    _brindlewick("brindlewick_22.csv", BRIN_22, [
        ("BRIN-22-A", 6, 8700), ("BRIN-22-B", 9, 9100), ("BRIN-22-C", 12, 8900),
        ("BRIN-22-D", 18, 9000), ("BRIN-22-E", 24, 8800), ("BRIN-22-F", 36, 9200),
    ]),
    QUASSELBACH,
    GOPHER_NOTCH,
    GRISOULETTE,
    WOBBLETON,
    TANUKI_HOLLOW,
]  # fmt: skip

PLANTS = [
    Plant("BRIN-10-C", "terminal_resistance", "power-of-ten", 10.0, "decimal point slipped"),
    Plant("BRIN-10-F", "stall_current", "neighbouring-column", ("neighbour", "BRIN-10-G"),
          "the value of the winding to the right"),
    Plant("BRIN-22-D", "torque_constant", "digits-transposed", "transpose",
          "the first two digits exchanged; the speed constant is right"),
    Plant("IGEL-24", "terminal_resistance", "hot-vs-cold", (234.5 + 125) / (234.5 + 20),
          "resistance of a winding at 125 °C among figures at 20 °C"),
    Plant("DACHS-36", "no_load_speed", "rpm-vs-rad-per-second", RPM,
          "rad/s in a column of min⁻¹"),
    Plant("PIKA-3", "stall_torque", "ounce-inch-vs-millinewton-metre", OZ_IN / M,
          "mN·m in a column of oz-in"),
    Plant("MARMOT-2", "rotor_inertia", "inertia-convention", 9.80665 / 0.0254,
          "oz-in² in a column of oz-in-s²"),
    Plant("MARMOT-4", "terminal_resistance", "figures-swapped", ("swap", "terminal_inductance"),
          "resistance and inductance exchanged"),
    Plant("CIGALE-B", "terminal_resistance", "line-vs-phase", 0.5,
          "one phase of the star in a column of line-to-line values"),
    Plant("GRILLON-C", "pole_pairs", "poles-vs-pole-pairs", 2.0,
          "the number of poles in the column of pole pairs"),
    Plant("HERON-30", "torque_constant", "peak-vs-rms", 2**-0.5,
          "per A peak in a column of N·m per A rms"),
    Plant("KODAMA-E", "stall_torque", "kilogram-force-vs-newton", GFCM / M,
          "mN·m in a column of gf·cm"),
]  # fmt: skip
