"""Which quantities a sheet of each kind may print, in which units, with which symbols."""

from __future__ import annotations

from dataclasses import dataclass

from . import units as u


@dataclass(frozen=True)
class Quantity:
    """One row or column of a sheet: units to choose from, symbols met, its caption and rank.

    ``shared`` holds for what belongs to the frame and not to the winding.
    """

    key: str
    units: tuple[u.Unit, ...]
    symbols: tuple[str, ...]
    caption: str
    shared: bool = False
    group: str = ""
    whole: bool = False


def _q(key: str, choice: list[u.Unit], symbols: str, caption: str, **more: object) -> Quantity:
    return Quantity(key, tuple(choice), tuple(symbols.split()), caption, **more)  # type: ignore[arg-type]


_FRAME = [
    _q("rotor_inertia", u.INERTIAS, "J J_R", "mechanical", shared=True),
    _q("mass", u.MASSES, "m", "mechanical", shared=True),
    _q("diameter", u.LENGTHS, "", "mechanical", shared=True),
    _q("length", u.LENGTHS, "", "mechanical", shared=True),
    _q("maximum_speed", u.SPEEDS, "n_max nmax", "mechanical", shared=True),
    _q("thermal_resistance_winding_housing", u.THERMAL_RESISTANCES, "R_th1", "thermal",
       shared=True),
    _q("thermal_resistance_housing_ambient", u.THERMAL_RESISTANCES, "R_th2", "thermal",
       shared=True),
    _q("thermal_time_constant_winding", u.SECONDS[:1], "τ_w", "thermal", shared=True),
    _q("thermal_time_constant_housing", u.SECONDS, "τ_s", "thermal", shared=True),
    _q("maximum_winding_temperature", u.TEMPERATURES, "ϑ_max", "thermal", shared=True),
]  # fmt: skip

MICRO = [
    _q("nominal_voltage", u.VOLTS, "U_N UN U_n", "electrical", group="rated"),
    _q("no_load_speed", u.SPEEDS, "n_0 n0", "electrical", group="no_load"),
    _q("no_load_current", u.CURRENTS, "I_0 I0", "electrical", group="no_load"),
    _q("nominal_speed", u.SPEEDS, "n_N nN", "electrical", group="rated"),
    _q("nominal_torque", u.TORQUES, "M_N MN T_n", "electrical", group="rated"),
    _q("nominal_current", u.CURRENTS, "I_N IN", "electrical", group="rated"),
    _q("stall_torque", u.TORQUES, "M_H MH T_s", "electrical", group="stall"),
    _q("stall_current", u.CURRENTS, "I_A IA I_s", "electrical", group="stall"),
    _q("maximum_efficiency", u.EFFICIENCIES, "η_max ηmax", "electrical"),
    _q("maximum_power", u.POWERS, "P_max P2max", "electrical"),
    _q("rated_power", u.POWERS, "P_N P2N", "electrical", group="rated"),
    _q("terminal_resistance", u.RESISTANCES, "R R_tt", "electrical", group="constants"),
    _q("terminal_inductance", u.INDUCTANCES, "L L_tt", "electrical", group="constants"),
    _q("torque_constant", u.TORQUE_CONSTANTS, "k_M kM K_T KT", "electrical", group="constants"),
    _q("speed_constant", u.SPEED_CONSTANTS, "k_n kn", "electrical", group="constants"),
    _q("back_emf_constant", u.BACK_EMF, "k_E kE K_E KE", "electrical", group="constants"),
    _q("speed_torque_gradient", u.GRADIENTS, "Δn/ΔM", "electrical", group="constants"),
    _q("motor_constant", u.MOTOR_CONSTANTS, "", "electrical", group="constants"),
    _q("mechanical_time_constant", u.MILLISECONDS, "τ_m", "electrical"),
    _q("electrical_time_constant", u.MILLISECONDS, "τ_e", "electrical"),
    _q("friction_torque", u.TORQUES, "M_R", "mechanical"),
    *_FRAME,
]

BRUSHLESS = [
    _q("pole_pairs", u.COUNTS, "p", "mechanical", shared=True, whole=True),
    _q("poles", u.COUNTS, "2p", "mechanical", shared=True, whole=True),
    _q("phases", u.COUNTS, "", "mechanical", shared=True, whole=True),
]

SERVO = [
    _q("continuous_stall_torque", u.TORQUES, "M_0 M0", "electrical", group="stall"),
    _q("continuous_stall_current", u.CURRENTS[:1] + u.CURRENTS_RMS, "I_0 I0", "electrical",
       group="stall"),
    _q("nominal_torque", u.TORQUES, "M_N MN", "electrical", group="rated"),
    _q("nominal_speed", u.SPEEDS, "n_N nN", "electrical", group="rated"),
    _q("nominal_current", u.CURRENTS[:1] + u.CURRENTS_RMS, "I_N IN", "electrical",
       group="rated"),
    _q("rated_power", u.POWERS, "P_N PN", "electrical", group="rated"),
    _q("peak_torque", u.TORQUES, "M_max Mmax", "electrical"),
    _q("peak_current", u.CURRENTS[:1] + u.CURRENTS_RMS, "I_max Imax", "electrical"),
    _q("torque_constant", u.TORQUE_CONSTANTS + u.TORQUE_CONSTANTS_RMS, "K_T KT", "electrical",
       group="constants"),
    _q("back_emf_constant", u.BACK_EMF[:1] + u.BACK_EMF_RMS, "K_E KE", "electrical",
       group="constants"),
    _q("terminal_resistance", u.RESISTANCES, "R", "electrical", group="constants"),
    _q("terminal_inductance", u.INDUCTANCES, "L", "electrical", group="constants"),
    _q("motor_constant", u.MOTOR_CONSTANTS, "", "electrical", group="constants"),
    _q("electrical_time_constant", u.MILLISECONDS, "τ_e", "electrical"),
    *BRUSHLESS,
    *[q for q in _FRAME if "winding" not in q.key and q.key != "length"],
]  # fmt: skip

SHEETS = {
    "brushed": {q.key: q for q in MICRO},
    "block": {q.key: q for q in [*MICRO, *BRUSHLESS]},
    "servo": {q.key: q for q in SERVO},
}
# keys that identify a sheet's kind: a sheet of that kind without them would leave doubt
ANCHORS = {
    "brushed": ("nominal_voltage", "no_load_speed"),
    "block": ("nominal_voltage", "no_load_speed"),
    "servo": ("continuous_stall_torque", "torque_constant", "peak_torque"),
}
