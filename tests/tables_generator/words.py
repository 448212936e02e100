"""What makers call the quantities, in seven languages (common practice, no source)."""

from __future__ import annotations

LANGUAGES = ("en", "de", "fr", "it", "es", "ja", "zh")

_TABLE = """
nominal_voltage
 en Nominal voltage; Rated voltage
 de Nennspannung
 fr Tension nominale
 it Tensione nominale
 es Tensión nominal
 ja 公称電圧; 定格電圧
 zh 额定电压; 标称电压
no_load_speed
 en No-load speed; No load speed
 de Leerlaufdrehzahl
 fr Vitesse à vide
 it Velocità a vuoto
 es Velocidad en vacío
 ja 無負荷回転数; 無負荷回転速度
 zh 空载转速
no_load_current
 en No-load current; No load current
 de Leerlaufstrom
 fr Courant à vide
 it Corrente a vuoto
 es Corriente en vacío
 ja 無負荷電流
 zh 空载电流
nominal_speed
 en Nominal speed; Rated speed
 de Nenndrehzahl
 fr Vitesse nominale
 it Velocità nominale
 es Velocidad nominal
 ja 定格回転数; 定格回転速度
 zh 额定转速
nominal_torque
 en Nominal torque; Rated torque; Max. continuous torque
 de Nennmoment; Nenndrehmoment; Bemessungsmoment
 fr Couple nominal
 it Coppia nominale
 es Par nominal
 ja 定格トルク; 最大連続トルク
 zh 额定转矩; 额定扭矩
nominal_current
 en Nominal current; Rated current; Max. continuous current
 de Nennstrom; Max. Dauerstrom
 fr Courant nominal
 it Corrente nominale
 es Corriente nominal
 ja 定格電流; 最大連続電流
 zh 额定电流
stall_torque
 en Stall torque; Starting torque
 de Anhaltemoment; Anlaufmoment
 fr Couple de démarrage; Couple de blocage
 it Coppia di spunto
 es Par de arranque; Par de bloqueo
 ja 停動トルク; 起動トルク
 zh 堵转转矩; 启动转矩
stall_current
 en Stall current; Starting current
 de Anlaufstrom
 fr Courant de démarrage
 it Corrente di spunto
 es Corriente de arranque
 ja 起動電流; 拘束電流
 zh 堵转电流; 起动电流
continuous_stall_torque
 en Continuous stall torque; Standstill torque
 de Stillstandsmoment; Stillstandsdrehmoment; Dauerstillstandsmoment
 fr Couple permanent à l'arrêt
 it Coppia continuativa di stallo
 es Par a rotor parado
 ja 連続ストールトルク
 zh 静态转矩; 连续堵转转矩
continuous_stall_current
 en Continuous stall current; Standstill current
 de Stillstandsstrom
 fr Courant permanent à l'arrêt
 it Corrente continuativa di stallo
 es Corriente a rotor parado
 ja 連続ストール電流
 zh 静态电流
peak_torque
 en Peak torque; Maximum torque
 de Spitzenmoment; Maximalmoment; Spitzendrehmoment
 fr Couple crête; Couple de pointe
 it Coppia di picco
 es Par pico
 ja 瞬時最大トルク
 zh 峰值转矩; 最大扭矩
peak_current
 en Peak current
 de Spitzenstrom
 fr Courant crête
 it Corrente di picco
 es Corriente pico
 ja 瞬時最大電流
 zh 峰值电流
maximum_efficiency
 en Max. efficiency; Maximum efficiency
 de Max. Wirkungsgrad; Maximaler Wirkungsgrad
 fr Rendement max.; Rendement maximal
 it Rendimento max.; Rendimento massimo
 es Rendimiento máx.; Rendimiento máximo
 ja 最高効率; 最大効率
 zh 最大效率; 最高效率
rated_power
 en Rated power; Rated output power
 de Nennleistung
 fr Puissance nominale
 it Potenza nominale
 es Potencia nominal
 ja 定格出力
 zh 额定功率
maximum_power
 en Max. output power; Maximum output
 de Max. Abgabeleistung
 fr Puissance max.
 it Potenza utile max.
 es Potencia máxima
 ja 最大出力
 zh 最大输出功率
terminal_resistance
 en Terminal resistance; Armature resistance
 de Anschlusswiderstand; Klemmenwiderstand
 fr Résistance aux bornes
 it Resistenza ai terminali
 es Resistencia en bornes
 ja 端子間抵抗
 zh 端电阻; 电枢电阻
terminal_inductance
 en Terminal inductance; Armature inductance
 de Anschlussinduktivität
 fr Inductance aux bornes
 it Induttanza ai terminali
 es Inductancia en bornes
 ja 端子間インダクタンス
 zh 端电感
torque_constant
 en Torque constant
 de Drehmomentkonstante
 fr Constante de couple
 it Costante di coppia
 es Constante de par
 ja トルク定数
 zh 转矩常数; 扭矩常数
back_emf_constant
 en Back-EMF constant; Voltage constant
 de Spannungskonstante; EMK-Konstante
 fr Constante de f.c.é.m.; Constante de tension
 it Costante di tensione
 es Constante de f.c.e.m.; Constante de tensión
 ja 逆起電力定数; 誘起電圧定数
 zh 反电势常数; 电压常数
speed_constant
 en Speed constant
 de Drehzahlkonstante
 fr Constante de vitesse
 it Costante di velocità
 es Constante de velocidad
 ja 回転数定数
 zh 转速常数
speed_torque_gradient
 en Speed/torque gradient; Slope of speed-torque curve
 de Kennliniensteigung
 fr Pente vitesse/couple
 it Gradiente velocità/coppia
 es Pendiente velocidad/par
 ja 回転数/トルク勾配
 zh 转速/转矩斜率
motor_constant
 en Motor constant
 de Motorkonstante
 fr Constante moteur
 it Costante motore
 es Constante del motor
 ja モータ定数
 zh 电机常数
mechanical_time_constant
 en Mechanical time constant
 de Mechanische Zeitkonstante; Mech. Anlaufzeitkonstante
 fr Constante de temps mécanique
 it Costante di tempo meccanica
 es Constante de tiempo mecánica
 ja 機械的時定数
 zh 机械时间常数
electrical_time_constant
 en Electrical time constant
 de Elektrische Zeitkonstante
 fr Constante de temps électrique
 it Costante di tempo elettrica
 es Constante de tiempo eléctrica
 ja 電気的時定数
 zh 电气时间常数
rotor_inertia
 en Rotor inertia; Moment of inertia
 de Rotorträgheitsmoment; Massenträgheitsmoment
 fr Inertie du rotor; Moment d'inertie du rotor
 it Momento d'inerzia del rotore
 es Inercia del rotor; Momento de inercia del rotor
 ja ロータ慣性モーメント; ロータイナーシャ
 zh 转子惯量; 转动惯量
friction_torque
 en Friction torque
 de Reibmoment
 fr Couple de frottement
 it Coppia d'attrito
 es Par de fricción
 ja 摩擦トルク
 zh 摩擦转矩
thermal_resistance_winding_housing
 en Thermal resistance winding-housing
 de Therm. Widerstand Wicklung-Gehäuse
 fr Résistance thermique bobinage-carcasse
 it Resistenza termica avvolgimento-carcassa
 es Resistencia térmica devanado-carcasa
 ja 熱抵抗 巻線/ハウジング間
 zh 绕组-机壳热阻
thermal_resistance_housing_ambient
 en Thermal resistance housing-ambient
 de Therm. Widerstand Gehäuse-Luft; Therm. Widerstand Gehäuse-Umgebung
 fr Résistance thermique carcasse-air ambiant
 it Resistenza termica carcassa-ambiente
 es Resistencia térmica carcasa-ambiente
 ja 熱抵抗 ハウジング/周囲間
 zh 机壳-环境热阻
thermal_time_constant_winding
 en Thermal time constant winding
 de Therm. Zeitkonstante der Wicklung
 fr Constante de temps thermique du bobinage
 it Costante di tempo termica avvolgimento
 es Constante de tiempo térmica devanado
 ja 熱時定数 巻線
 zh 绕组热时间常数
thermal_time_constant_housing
 en Thermal time constant motor
 de Therm. Zeitkonstante des Motors
 fr Constante de temps thermique du moteur
 it Costante di tempo termica motore
 es Constante de tiempo térmica motor
 ja 熱時定数 モータ
 zh 电机热时间常数
maximum_winding_temperature
 en Max. winding temperature; Max. permissible winding temperature
 de Max. Wicklungstemperatur; Max. zul. Wicklungstemperatur
 fr Température max. du bobinage
 it Temperatura max. avvolgimento
 es Temperatura máx. del devanado
 ja 最高許容巻線温度
 zh 绕组最高允许温度
maximum_speed
 en Max. permissible speed; Max. speed
 de Grenzdrehzahl; Max. zul. Drehzahl
 fr Vitesse max. admissible; Vitesse limite
 it Velocità max. ammessa
 es Velocidad máx. admisible
 ja 最大許容回転数
 zh 最大允许转速; 最高转速
pole_pairs
 en Number of pole pairs; Pole pairs
 de Polpaarzahl
 fr Nombre de paires de pôles
 it Numero di coppie polari
 es Número de pares de polos
 ja 極対数
 zh 极对数
poles
 en Number of poles
 de Polzahl
 fr Nombre de pôles
 it Numero di poli
 es Número de polos
 ja 極数
 zh 极数
phases
 en Number of phases
 de Anzahl Phasen
 fr Nombre de phases
 it Numero di fasi
 es Número de fases
 ja 相数
 zh 相数
mass
 en Weight; Mass
 de Gewicht; Masse
 fr Masse; Poids
 it Massa; Peso
 es Masa; Peso
 ja 質量; 重量
 zh 重量; 质量
diameter
 en Motor diameter; Outer diameter
 de Motordurchmesser; Außendurchmesser
 fr Diamètre du moteur
 it Diametro motore
 es Diámetro del motor
 ja モータ外径
 zh 电机外径
length
 en Motor length
 de Motorlänge
 fr Longueur du moteur
 it Lunghezza motore
 es Longitud del motor
 ja モータ全長
 zh 电机长度
part_number
 en Part number; Type; Model; Order number
 de Bestellnummer; Typ; Artikelnummer
 fr Référence; Type
 it Codice; Modello
 es Referencia; Modelo
 ja 型番; 型式
 zh 型号; 订货号
"""

_CAPTIONS = {
    "rated": "Rated data;Nenndaten;Valeurs nominales;Dati nominali;Valores nominales;定格;额定数据",
    "no_load": "No load;Leerlauf;À vide;A vuoto;En vacío;無負荷;空载",
    "standstill": "Continuous stall;Stillstand;Permanent à l'arrêt;Stallo continuativo;"
    "A rotor parado;連続ストール;静态",
    "stall": "Stall;Anlauf;Démarrage;Spunto;Arranque;起動;堵转",
    "constants": "Constants;Konstanten;Constantes;Costanti;Constantes;定数;常数",
    "electrical": "Electrical data;Elektrische Daten;Données électriques;Dati elettrici;"
    "Datos eléctricos;電気的特性;电气参数",
    "mechanical": "Mechanical data;Mechanische Daten;Données mécaniques;Dati meccanici;"
    "Datos mecánicos;機械的特性;机械参数",
    "thermal": "Thermal data;Thermische Daten;Données thermiques;Dati termici;Datos térmicos;"
    "熱特性;热参数",
    "at_25": "All values at {t} °C;Alle Werte bei {t} °C;Toutes les valeurs à {t} °C;"
    "Tutti i valori a {t} °C;Todos los valores a {t} °C;値はすべて{t} °Cにおけるもの;"
    "所有数值均为{t} °C时的值",
    "unit": "Unit;Einheit;Unité;Unità;Unidad;単位;单位",
    "symbol": "Symbol;Symbol;Symbole;Simbolo;Símbolo;記号;符号",
    "parameter": "Parameter;Kenngröße;Paramètre;Parametro;Parámetro;項目;参数",
    "speed": "Speed;Drehzahl;Vitesse;Velocità;Velocidad;回転数;转速",
    "torque": "Torque;Drehmoment;Couple;Coppia;Par;トルク;转矩",
    "current": "Current;Strom;Courant;Corrente;Corriente;電流;电流",
    "max_efficiency": "At maximum efficiency;Bei max. Wirkungsgrad;Au rendement max.;"
    "A rendimento max.;A rendimiento máx.;最大効率時;最大效率点",
    "rms": "All currents are rms values;Alle Ströme sind Effektivwerte;"
    "Tous les courants en valeur efficace;Tutte le correnti in valore efficace;"
    "Todas las corrientes en valor eficaz;電流はすべて実効値;所有电流均为有效值",
    "typical": "typ.;typ.;env.;ca.;aprox.;約;约",
    "missing": "n/a;k. A.;non spécifié;n.d.;n/a;－;—",
    "lines": "line-to-line;Phase-Phase;entre phases;fase-fase;entre fases;線間;线间",
    "phase": "per phase;pro Phase;par phase;per fase;por fase;相当たり;每相",
    "ditto": "idem;dto.;idem;idem;ídem;同上;同上",
}

_OTHERS = [
    "Insulation resistance;Isolationswiderstand;Résistance d'isolement;Resistenza di isolamento;"
    "Resistencia de aislamiento;絶縁抵抗;绝缘电阻",
    "Number of commutator segments;Anzahl Kollektorlamellen;Nombre de lames au collecteur;"
    "Numero di lamelle del collettore;Número de delgas;整流子片数;换向片数",
    "Lead time;Lieferzeit;Délai de livraison;Tempo di consegna;Plazo de entrega;納期;交货期",
]


def _parse() -> dict[str, dict[str, tuple[str, ...]]]:
    table: dict[str, dict[str, tuple[str, ...]]] = {}
    key = ""
    for line in _TABLE.strip().splitlines():
        if line.startswith(" "):
            language, _, words = line.strip().partition(" ")
            table[key][language] = tuple(w.strip() for w in words.split(";"))
        else:
            key = line.strip()
            table[key] = {}
    return table


LABELS = _parse()
CAPTIONS = {
    key: dict(zip(LANGUAGES, (w.strip() for w in text.split(";")), strict=True))
    for key, text in _CAPTIONS.items()
}
OTHERS = [
    dict(zip(LANGUAGES, (w.strip() for w in text.split(";")), strict=True)) for text in _OTHERS
]
