"""One invented motor in seven languages: the same figures."""

# ruff: noqa: E501

import pytest

from motorfolio.catalog.reading.entries.kind import in_words

from .sheets import RPM, sheet

EXPECTED = {
    "nominal_voltage": 24, "no_load_speed": 5600 * RPM, "no_load_current": 0.12,
    "nominal_torque": 0.085, "stall_torque": 0.92, "torque_constant": 0.0405,
    "terminal_resistance": 1.05, "terminal_inductance": 0.00042, "rotor_inertia": 1.21e-5,
    "mechanical_time_constant": 0.0078, "thermal_resistance_winding_housing": 2.4,
    "thermal_resistance_housing_ambient": 9.1, "thermal_time_constant_winding": 31,
    "maximum_winding_temperature": 125, "maximum_speed": 9000 * RPM, "mass": 0.34,
    "maximum_efficiency": 0.83, "speed_torque_gradient": 6.1 * RPM * 1000,
}  # fmt: skip
UNITS = [
    "V",
    "rpm",
    "mA",
    "mNm",
    "mNm",
    "mNm/A",
    "Ω",
    "mH",
    "gcm²",
    "ms",
    "K/W",
    "K/W",
    "s",
    "°C",
    "rpm",
    "g",
    "%",
    "rpm/mNm",
]
TEXTS = [
    "24",
    "5600",
    "120",
    "85",
    "920",
    "40.5",
    "1.05",
    "0.42",
    "121",
    "7.8",
    "2.4",
    "9.1",
    "31",
    "125",
    "9000",
    "340",
    "83",
    "6.1",
]

NAMES = {
    "en": "Type;Nominal voltage;No-load speed;No-load current;Nominal torque;Stall torque;Torque constant;Terminal resistance;Terminal inductance;Rotor inertia;Mechanical time constant;Thermal resistance winding-housing;Thermal resistance housing-ambient;Thermal time constant winding;Max. winding temperature;Max. permissible speed;Weight;Max. efficiency;Speed/torque gradient",
    "de": "Typ;Nennspannung;Leerlaufdrehzahl;Leerlaufstrom;Nennmoment;Anhaltemoment;Drehmomentkonstante;Anschlusswiderstand;Anschlussinduktivität;Rotorträgheitsmoment;mech. Anlaufzeitkonstante;therm. Widerstand Wicklung–Gehäuse;therm. Widerstand Gehäuse–Luft;therm. Zeitkonstante Wicklung;max. Wicklungstemperatur;Grenzdrehzahl;Gewicht;max. Wirkungsgrad;Kennliniensteigung",
    "fr": "Référence;tension nominale;vitesse à vide;courant à vide;couple nominal;couple de démarrage;constante de couple;résistance aux bornes;inductance aux bornes;inertie du rotor;constante de temps mécanique;résistance thermique bobinage–carcasse;résistance thermique carcasse–air ambiant;constante de temps thermique du bobinage;température max. du bobinage;vitesse max. admissible;masse;rendement max.;pente vitesse/couple",
    "it": "Codice;tensione nominale;velocità a vuoto;corrente a vuoto;coppia nominale;coppia di spunto;costante di coppia;resistenza ai terminali;induttanza ai terminali;momento d'inerzia del rotore;costante di tempo meccanica;resistenza termica avvolgimento–carcassa;resistenza termica carcassa–ambiente;costante di tempo termica avvolgimento;temperatura max. avvolgimento;velocità max. ammessa;peso;rendimento max.;gradiente velocità/coppia",
    "es": "Referencia;tensión nominal;velocidad en vacío;corriente en vacío;par nominal;par de arranque;constante de par;resistencia en bornes;inductancia en bornes;inercia del rotor;constante de tiempo mecánica;resistencia térmica devanado–carcasa;resistencia térmica carcasa–ambiente;constante de tiempo térmica devanado;temperatura máx. del devanado;velocidad máx. admisible;peso;rendimiento máx.;pendiente velocidad/par",
    "ja": "型番;公称電圧;無負荷回転数;無負荷電流;定格トルク;停動トルク;トルク定数;端子間抵抗;端子間インダクタンス;ロータ慣性モーメント;機械的時定数;熱抵抗 巻線/ハウジング間;熱抵抗 ハウジング/周囲間;熱時定数 巻線;最高許容巻線温度;最大許容回転数;質量;最大効率;回転数/トルク勾配",
    "zh": "型号;额定电压;空载转速;空载电流;额定转矩;堵转转矩;转矩常数;端电阻;端电感;转子转动惯量;机械时间常数;绕组-机壳热阻;机壳-环境热阻;绕组热时间常数;绕组最高允许温度;最大允许转速;重量;最高效率;转速/转矩斜率",
}


@pytest.mark.parametrize("language", NAMES)
@pytest.mark.parametrize("layout", ["rows", "columns", "unit row"])
def test_the_same_motor_in_every_language(language, layout):
    part, *names = NAMES[language].split(";")
    if layout == "rows":
        text = " | ".join([part, *(f"{n} [{u}]" for n, u in zip(names, UNITS, strict=True))])
        text += "\n" + " | ".join(["LK-24", *TEXTS])
    elif layout == "unit row":
        text = "\n".join(" | ".join(r) for r in ([part, *names], ["", *UNITS], ["LK-24", *TEXTS]))
    else:
        lines = zip(names, UNITS, TEXTS, strict=True)
        text = f"{part} | | LK-24\n" + "\n".join(" | ".join(line) for line in lines)
    s = sheet(text)
    assert s.reading.layout == ("columns" if layout == "columns" else "rows")
    assert s.motors() == {"LK-24": pytest.approx(EXPECTED)}
    assert not s.reading.unread


@pytest.mark.parametrize(
    ("text", "commutation"),
    [
        ("Bürstenbehaftete Gleichstrommotoren mit NdFeB-Magneten", "brushed"),
        ("bürstenlose Gleichstrommotoren", "block"),
        ("Bürstenlose Motoren, Sinuskommutierung", "sinusoidal"),
        ("Moteurs à courant continu à balais", "brushed"),
        ("Moteurs à courant continu sans balais", "block"),
        ("Motori in corrente continua senza spazzole", "block"),
        ("Motores con escobillas", "brushed"),
        ("Motores de corriente continua sin escobillas", "block"),
        ("ブラシ付きDCモータ", "brushed"),
        ("ブラシレスDCモータ", "block"),
        ("有刷直流电机", "brushed"),
        ("无刷直流电机", "block"),
        ("Brushless motors, six-step", "block"),
        ("Brushless motors with sinusoidal commutation", "sinusoidal"),
        ("Brushed and brushless motors", None),
    ],
)
def test_titles_state_the_commutation_in_every_inflection(
    text: str, commutation: str | None
) -> None:
    assert in_words(text, "commutations") == commutation
