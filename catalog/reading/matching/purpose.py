"""Whether a table is one of motors: of gears it is not, and of housings alone neither."""

import re
from collections.abc import Sequence

from ....schema.figure.signs import plain
from ..model import Field
from .match import Match

_BODY = re.compile(
    r"thermal_|(?:ambient|maximum_winding)_temperature|rated_temperature_rise|rotor_inertia|"
    r"pole|phases|mass|diameter|length|_load$|price"
)
"""Figures that gears, housings and price lists have too."""

_ELECTRICAL = re.compile(
    r"voltage|current|terminal_|(?:torque|back_emf|speed|motor|electrical_time)_constant|gradient|"
    r"no_load|stall"
)
"""Figures that no gear has."""

_RATIO = re.compile(
    r"\bratio\b|reduction|übersetzung|untersetzung|réduction|rapporto|riduzione|relación|reducción|"
    r"減速比|减速比|速比|^i$",
    re.IGNORECASE,
)
_OF_A_GEAR = re.compile(
    r"\bstages?\b|stufe|étage|stadi|etapa|段数|级数|backlash|spiel|\bjeu\b|gioco|juego|バックラッシ|背隙|"
    r"efficiency|wirkungsgrad|rendement|rendimento|rendimiento|効率|效率|η|"
    r"torque|drehmoment|couple|coppia|\bpar\b|トルク|转矩|扭矩",
    re.IGNORECASE,
)


def is_of_gears(matches: Sequence[Match]) -> bool:
    """Whether the headings are a gear's: a ratio, what else a gear has, nothing electrical."""
    if any(m.key and _ELECTRICAL.search(m.key) for m in matches):
        return False
    headings = [plain(m.field.heading) for m in matches if not m.field.part]
    return any(_RATIO.search(h) for h in headings) and any(_OF_A_GEAR.search(h) for h in headings)


_OUTPUT = re.compile(
    r"output shaft|gear ?motor|geared motor|getriebemotor|abtriebswelle|motoréducteur|"
    r"arbre de sortie|motoriduttor|albero di uscita|motorreductor|eje de salida|ギヤードモータ|"
    r"出力軸|减速电机|齿轮电机|输出轴",
    re.IGNORECASE,
)


_OF_THE_OUTPUT = re.compile(
    r"\boutput|abtrieb|ausgangs|\bsortie|\buscita|\bsalida|出力|输出|輸出", re.IGNORECASE
)
_TURNS = re.compile(r"speed|torque|_load$|shaft_diameter")


def set_outputs_aside(matches: Sequence[Match], fields: Sequence[Field]) -> None:
    """Beside a gear ratio among the table's fields, speed and torque of the output are the
    gear's: they are not read."""
    if not any(_RATIO.search(plain(f.heading)) for f in fields):
        return
    for m in matches:
        if m.key and _TURNS.search(m.key) and _OF_THE_OUTPUT.search(plain(m.field.heading)):
            m.role, m.key, m.guesses = "unread", None, ()
            m.reason = "of the output, beside a gear ratio: the gear's, not the motor's"


def beside_gears(matches: Sequence[Match], texts: Sequence[str]) -> bool:
    """Whether a table of motors has a column of gear ratios, or its titles speak of an output."""
    ratio = any(_RATIO.search(plain(m.field.heading)) and any(m.field.texts) for m in matches)
    return ratio or any(_OUTPUT.search(plain(text)) for text in texts)


def tells_of_a_motor(match: Match) -> bool:
    """Whether a heading gives voltage, speed, current, torque, power, a constant, a resistance."""
    if match.role == "point":
        return True
    return match.role == "figure" and match.key is not None and not _BODY.search(match.key)
