"""The relations among published figures: one table of names, formulas and right-hand sides.

A relation gives one figure (``left``) from others. "K" among the others is the torque constant by
whichever figure publishes it, "R" the terminal resistance. All values are those of the DC motor in
SI. The adjustment itself works with the observation rows of model.py; a test holds the two
together. Where a relation is from: Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed.,
sections 7.7 and 11.1 (chapter numbers from memory).
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from ..batch import Floats

CONSTANT_FIGURES = ("torque_constant", "back_emf_constant", "speed_constant")
"""The three figures that publish Km: two of them reciprocal or equal."""


@dataclass(frozen=True, slots=True)
class Relation:
    """left = right(others): a stable name, the formula in symbols, and a template of the formula
    with places for the printed figures."""

    name: str
    left: str
    formula: str
    others: tuple[str, ...]
    template: str
    right: Callable[[Mapping[str, Floats]], Floats]

    @property
    def figures(self) -> tuple[str, ...]:
        """All figures, the left one first."""
        return (self.left, *self.others)


def _stall(v: Mapping[str, Floats]) -> Floats:
    return v["K"] * (v["nominal_voltage"] / v["R"] - v["no_load_current"])


RELATIONS: tuple[Relation, ...] = (
    Relation("torque-constant-speed-constant", "torque_constant", "Km·Kn = 1",
             ("speed_constant",), "1/({speed_constant})", lambda v: 1.0 / v["speed_constant"]),
    Relation("torque-constant-back-emf-constant", "torque_constant", "Kt = Ke",
             ("back_emf_constant",), "{back_emf_constant}", lambda v: v["back_emf_constant"]),
    Relation("back-emf-constant-speed-constant", "back_emf_constant", "Ke·Kn = 1",
             ("speed_constant",), "1/({speed_constant})", lambda v: 1.0 / v["speed_constant"]),
    Relation("stall-current", "stall_current", "Is = U/Ra",
             ("nominal_voltage", "terminal_resistance"),
             "{nominal_voltage}/({terminal_resistance})",
             lambda v: v["nominal_voltage"] / v["terminal_resistance"]),
    Relation("stall-torque", "stall_torque", "Ts = Km·(Is − I0)",
             ("K", "stall_current", "no_load_current"),
             "{K}·({stall_current} − {no_load_current})",
             lambda v: v["K"] * (v["stall_current"] - v["no_load_current"])),
    Relation("stall-torque", "stall_torque", "Ts = Km·(U/Ra − I0)",
             ("K", "nominal_voltage", "R", "no_load_current"),
             "{K}·({nominal_voltage}/({R}) − {no_load_current})", _stall),
    Relation("no-load-speed", "no_load_speed", "n0 = (U − Ra·I0)/Km",
             ("nominal_voltage", "R", "no_load_current", "K"),
             "({nominal_voltage} − {R}·{no_load_current})/({K})",
             lambda v: (v["nominal_voltage"] - v["R"] * v["no_load_current"]) / v["K"]),
    Relation("no-load-speed", "no_load_speed", "n0 ≈ U/Km", ("nominal_voltage", "K"),
             "{nominal_voltage}/({K})", lambda v: v["nominal_voltage"] / v["K"]),
    Relation("speed-torque-gradient", "speed_torque_gradient", "Δn/ΔT = Ra/Km²", ("R", "K"),
             "{R}/({K})²", lambda v: v["R"] / v["K"] ** 2),
    Relation("speed-torque-gradient-stall", "speed_torque_gradient", "Δn/ΔT = n0/Ts",
             ("no_load_speed", "stall_torque"), "{no_load_speed}/({stall_torque})",
             lambda v: v["no_load_speed"] / v["stall_torque"]),
    Relation("motor-constant", "motor_constant", "motor constant = Km/√Ra", ("K", "R"),
             "{K}/√({R})", lambda v: v["K"] / np.sqrt(v["R"])),
    Relation("mechanical-time-constant", "mechanical_time_constant", "τm = J·Ra/Km²",
             ("rotor_inertia", "R", "K"), "{rotor_inertia}·{R}/({K})²",
             lambda v: v["rotor_inertia"] * v["R"] / v["K"] ** 2),
    Relation("electrical-time-constant", "electrical_time_constant", "τe = La/Ra",
             ("terminal_inductance", "R"), "{terminal_inductance}/({R})",
             lambda v: v["terminal_inductance"] / v["R"]),
    Relation("nominal-torque", "nominal_torque", "T_N = Km·(I_N − I0)",
             ("K", "nominal_current", "no_load_current"),
             "{K}·({nominal_current} − {no_load_current})",
             lambda v: v["K"] * (v["nominal_current"] - v["no_load_current"])),
    Relation("nominal-torque", "nominal_torque", "T_N ≈ Km·I_N", ("K", "nominal_current"),
             "{K}·{nominal_current}", lambda v: v["K"] * v["nominal_current"]),
    Relation("rated-power", "rated_power", "P_N = T_N·n_N", ("nominal_torque", "nominal_speed"),
             "{nominal_torque}·{nominal_speed}",
             lambda v: v["nominal_torque"] * v["nominal_speed"]),
    Relation("nominal-speed", "nominal_speed", "n_N = (U − Ra·I_N)/Km",
             ("nominal_voltage", "R", "nominal_current", "K"),
             "({nominal_voltage} − {R}·{nominal_current})/({K})",
             lambda v: (v["nominal_voltage"] - v["R"] * v["nominal_current"]) / v["K"]),
    Relation("maximum-power", "maximum_power", "P_max = n0·Ts/4",
             ("no_load_speed", "stall_torque"), "{no_load_speed}·{stall_torque}/4",
             lambda v: v["no_load_speed"] * v["stall_torque"] / 4.0),
    Relation("maximum-power", "maximum_power", "P_max ≈ U²/(4·Ra)", ("nominal_voltage", "R"),
             "({nominal_voltage})²/(4·{R})",
             lambda v: v["nominal_voltage"] ** 2 / (4.0 * v["R"])),
    Relation("maximum-efficiency", "maximum_efficiency", "η_max = (1 − √(I0·Ra/U))²",
             ("no_load_current", "R", "nominal_voltage"),
             "(1 − √({no_load_current}·{R}/{nominal_voltage}))²",
             lambda v: (1.0 - np.sqrt(v["no_load_current"] * v["R"] / v["nominal_voltage"])) ** 2),
    Relation("rated-efficiency", "rated_efficiency", "η_N = T_N·n_N/(U·I_N)",
             ("nominal_torque", "nominal_speed", "nominal_voltage", "nominal_current"),
             "{nominal_torque}·{nominal_speed}/({nominal_voltage}·{nominal_current})",
             lambda v: v["nominal_torque"] * v["nominal_speed"]
             / (v["nominal_voltage"] * v["nominal_current"])),
    Relation("friction-torque", "friction_torque", "T_f = Km·I0", ("K", "no_load_current"),
             "{K}·{no_load_current}", lambda v: v["K"] * v["no_load_current"]),
    Relation("continuous-stall-torque", "continuous_stall_torque", "T_cs = Km·I_cs",
             ("K", "continuous_stall_current"), "{K}·{continuous_stall_current}",
             lambda v: v["K"] * v["continuous_stall_current"]),
    Relation("peak-torque", "peak_torque", "T_pk ≤ 1.05·Km·I_pk", ("K", "peak_current"),
             "{K}·{peak_current}", lambda v: v["K"] * v["peak_current"]),
)  # fmt: skip

OWN_RELATION = {
    # the relation a figure is reported under when no relation has all its figures published
    "torque_constant": "torque-constant-speed-constant",
    "back_emf_constant": "torque-constant-back-emf-constant",
    "speed_constant": "torque-constant-speed-constant",
    "terminal_resistance": "stall-current",
    "terminal_inductance": "electrical-time-constant",
    "rotor_inertia": "mechanical-time-constant",
    "nominal_voltage": "no-load-speed",
    "no_load_current": "no-load-speed",
    "nominal_current": "nominal-torque",
    "viscous_damping": "friction-torque",
    "continuous_stall_current": "continuous-stall-torque",
    "peak_current": "peak-torque",
}

WITHIN_SCATTER = "within-customary-scatter"
CONVENTION = "convention"
THERMAL = "thermal-rating"
GIVEN_TWICE = "given-twice"
POLES = "poles-pole-pairs"
FAMILY = "family-"
"""Names of the findings that belong to no single relation of the table."""

BOUNDS: tuple[tuple[str, str, str], ...] = (
    # name, the smaller figure, the greater one
    ("nominal-speed-below-no-load-speed", "nominal_speed", "no_load_speed"),
    ("nominal-torque-below-stall-torque", "nominal_torque", "stall_torque"),
    ("no-load-current-below-nominal-current", "no_load_current", "nominal_current"),
    ("nominal-current-below-stall-current", "nominal_current", "stall_current"),
)


def own_relation(figure: str) -> str:
    """The name of the relation a figure is reported under when none is complete."""
    return OWN_RELATION.get(figure, figure.replace("_", "-"))
