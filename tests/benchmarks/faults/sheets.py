"""Invented sheets of known motors: truth, published figures, printed digits, customary scatter.

A stand-alone statement of the permanent-magnet motor's relations (sources: Fitzgerald, Kingsley,
Umans, Electric Machinery, 6th ed., section 7.7, for the DC machine; the brushless conventions
follow from the definitions of rms, peak, line and phase). Scatter and sizes: common practice, no
source.
"""

import math
from dataclasses import dataclass, field

import numpy as np

RPM = math.pi / 30
OZIN = 0.00706155181422604  # N·m, NIST SP 811 (2008), App. B.8

# key: choices of (unit as printed, SI per unit)
UNITS: dict[str, list[tuple[str, float]]] = {
    "nominal_voltage": [("V", 1.0)],
    "no_load_speed": [("rpm", RPM)],
    "no_load_current": [("mA", 1e-3), ("A", 1.0)],
    "nominal_speed": [("rpm", RPM)],
    "nominal_torque": [("mNm", 1e-3), ("Nm", 1.0), ("oz-in", OZIN)],
    "nominal_current": [("A", 1.0)],
    "stall_torque": [("mNm", 1e-3), ("Nm", 1.0), ("oz-in", OZIN)],
    "stall_current": [("A", 1.0)],
    "continuous_stall_torque": [("Nm", 1.0)],
    "continuous_stall_current": [("A", 1.0)],
    "peak_torque": [("Nm", 1.0)],
    "peak_current": [("A", 1.0)],
    "rated_power": [("W", 1.0)],
    "maximum_power": [("W", 1.0)],
    "maximum_efficiency": [("%", 0.01)],
    "terminal_resistance": [("Ω", 1.0)],
    "terminal_inductance": [("mH", 1e-3)],
    "torque_constant": [("mNm/A", 1e-3), ("Nm/A", 1.0), ("oz-in/A", OZIN)],
    "back_emf_constant": [("V/krpm", 0.03 / math.pi)],
    "speed_constant": [("rpm/V", RPM)],
    "speed_torque_gradient": [("rpm/mNm", RPM * 1e3)],
    "motor_constant": [("mNm/√W", 1e-3), ("Nm/√W", 1.0)],
    "mechanical_time_constant": [("ms", 1e-3)],
    "electrical_time_constant": [("ms", 1e-3)],
    "rotor_inertia": [("gcm²", 1e-7), ("kgcm²", 1e-4)],
    "friction_torque": [("mNm", 1e-3)],
    "thermal_resistance_winding_housing": [("K/W", 1.0)],
    "thermal_resistance_housing_ambient": [("K/W", 1.0)],
    "maximum_winding_temperature": [("°C", 1.0)],
    "pole_pairs": [("", 1.0)],
    "poles": [("", 1.0)],
    "mass": [("g", 1e-3)],
}

# customary relative scatter, one standard deviation
SCATTER: dict[str, float] = {
    "no_load_speed": 0.025,
    "no_load_current": 0.10,
    "nominal_speed": 0.025,
    "nominal_torque": 0.05,
    "nominal_current": 0.05,
    "stall_torque": 0.02,
    "stall_current": 0.02,
    "continuous_stall_torque": 0.10,
    "continuous_stall_current": 0.10,
    "peak_torque": 0.10,
    "peak_current": 0.10,
    "rated_power": 0.02,
    "maximum_power": 0.02,
    "maximum_efficiency": 0.02,
    "terminal_resistance": 0.02,
    "terminal_inductance": 0.02,
    "torque_constant": 0.01,
    "back_emf_constant": 0.01,
    "speed_constant": 0.01,
    "speed_torque_gradient": 0.02,
    "motor_constant": 0.02,
    "mechanical_time_constant": 0.03,
    "electrical_time_constant": 0.03,
    "rotor_inertia": 0.02,
    "friction_torque": 0.10,
    "thermal_resistance_winding_housing": 0.10,
    "thermal_resistance_housing_ambient": 0.10,
}

EXACT = {"nominal_voltage", "pole_pairs", "poles", "maximum_winding_temperature", "mass"}

# What a voltage, current or impedance is printed as, per kind of sheet: factor from the DC value.
CONVENTION = {
    "sinusoidal": {
        "current": ("rms", math.sqrt(2 / 3)),
        "torque_constant": math.sqrt(1.5),
        "emf": ("rms", "lines", math.sqrt(0.5)),
    }
}


@dataclass
class Motor:
    """The truth: a DC motor at its terminals, SI, at 25 °C."""

    U: float
    Km: float
    Ra: float
    La: float
    J: float
    I0: float
    IN: float
    Rth1: float
    Rth2: float
    Tmax: float
    pole_pairs: int
    n_N: float = 0.0  # sinusoidal only: the maker's choice
    Ics: float = 0.0
    Ipk: float = 0.0
    saturation: float = 1.0
    mass: float = 1.0


@dataclass
class Sheet:
    """One table: motors, which figures it prints in which units, and what stands in the cells."""

    kind: str  # brushed, block, sinusoidal
    motors: list[Motor]
    family: bool
    keys: list[str]
    units: dict[str, tuple[str, float]]
    digits: dict[str, int]
    scattered: bool
    stall_net: bool
    hot_speed: bool
    power_from_voltage: bool
    part_numbers: list[str] = field(default_factory=list)
    printed: dict[str, list[str]] = field(default_factory=dict)

    def si(self, key: str, i: int) -> float:
        """The value in a cell, as printed, in SI."""
        return float(self.printed[key][i]) * self.units[key][1]


def published(m: Motor, sheet: Sheet) -> dict[str, float]:
    """Every figure that the truth implies, SI, in the sheet's conventions, without scatter."""
    sine = sheet.kind == "sinusoidal"
    current = math.sqrt(2 / 3) if sine else 1.0
    figures = {
        "nominal_voltage": m.U,
        "nominal_torque": m.Km * (m.IN - m.I0),
        "nominal_current": m.IN * current,
        "terminal_resistance": m.Ra,
        "terminal_inductance": m.La,
        "torque_constant": m.Km / current,
        "back_emf_constant": m.Km * (math.sqrt(0.5) if sine else 1.0),
        "speed_constant": 1 / m.Km,
        "motor_constant": m.Km / math.sqrt(m.Ra),
        "mechanical_time_constant": m.J * m.Ra / m.Km**2,
        "electrical_time_constant": m.La / m.Ra,
        "rotor_inertia": m.J,
        "thermal_resistance_winding_housing": m.Rth1,
        "thermal_resistance_housing_ambient": m.Rth2,
        "maximum_winding_temperature": m.Tmax,
        "pole_pairs": m.pole_pairs,
        "poles": 2 * m.pole_pairs,
        "mass": m.mass,
    }
    if sine:
        figures |= {
            "nominal_speed": m.n_N,
            "continuous_stall_torque": m.Km * m.Ics,
            "continuous_stall_current": m.Ics * current,
            "peak_torque": m.Km * m.Ipk * m.saturation,
            "peak_current": m.Ipk * current,
            "rated_power": figures["nominal_torque"] * m.n_N,
        }
        return figures
    hot = (234.5 + 0.8 * m.Tmax) / (234.5 + 25) if sheet.hot_speed else 1.0
    stall = m.U / m.Ra
    n0 = (m.U - m.Ra * m.I0) / m.Km
    Ts = m.Km * (stall - m.I0 if sheet.stall_net else stall)
    n_N = (m.U - m.Ra * hot * m.IN) / m.Km
    return figures | {
        "no_load_speed": n0,
        "no_load_current": m.I0,
        "nominal_speed": n_N,
        "stall_torque": Ts,
        "stall_current": stall,
        "rated_power": figures["nominal_torque"] * n_N,
        "maximum_power": m.U**2 / (4 * m.Ra) if sheet.power_from_voltage else n0 * Ts / 4,
        "maximum_efficiency": (1 - math.sqrt(m.I0 / stall)) ** 2,
        "speed_torque_gradient": m.Ra / m.Km**2,
        "friction_torque": m.Km * m.I0,
    }


def significant(value: float, digits: int) -> str:
    """The number as a catalogue prints it: so many significant digits, no exponent.

    Integers keep at least three digits (120 mNm isn't printed for 124 mNm).
    """
    if value == 0:
        return "0"
    if abs(value) >= 99.5:
        digits = max(digits, 3)
    places = digits - 1 - math.floor(math.log10(abs(value)))
    return f"{round(value, places):.{max(places, 0)}f}"


def fill(sheet: Sheet, rng: np.random.Generator, *, cut: float = 2.0) -> None:
    """Print every motor's figures, with scatter (cut at so many deviations) if it carries any."""

    def _cut_normal(rng: np.random.Generator) -> float:
        while abs(x := rng.standard_normal()) > cut:
            pass
        return float(x)

    sheet.printed = {key: [] for key in sheet.keys}
    for m in sheet.motors:
        figures = published(m, sheet)
        noisy = {}
        for key, value in figures.items():
            sd = SCATTER.get(key, 0.0) if sheet.scattered else 0.0
            if key == "maximum_efficiency":
                noisy[key] = min(value + sd * _cut_normal(rng), 0.99)
            else:
                noisy[key] = value * math.exp(sd * _cut_normal(rng)) if sd else value
        if sheet.scattered:  # powers are products of what is printed, good to 2 %
            if {"nominal_torque", "nominal_speed"} <= noisy.keys():
                noisy["rated_power"] = (
                    noisy["nominal_torque"]
                    * noisy["nominal_speed"]
                    * math.exp(0.02 * _cut_normal(rng))
                )
            if not sheet.power_from_voltage and "stall_torque" in noisy:
                noisy["maximum_power"] = (
                    noisy["no_load_speed"]
                    * noisy["stall_torque"]
                    / 4
                    * math.exp(0.02 * _cut_normal(rng))
                )
        for key in sheet.keys:
            value = noisy[key] / sheet.units[key][1]
            exact = key in EXACT
            text = f"{value:g}" if exact else significant(value, sheet.digits[key])
            if key == "mass":
                text = significant(value, 3)
            sheet.printed[key].append(text)


def _dc_motor(rng: np.random.Generator) -> Motor:
    U = float(rng.choice([6, 12, 18, 24, 36, 48]))
    P = math.exp(rng.uniform(math.log(1), math.log(500)))
    n0 = rng.uniform(3000, 12000) * RPM
    Km = 0.985 * U / n0
    IN = P / (0.78 * U)
    Ra = U / (IN * rng.uniform(4, 15))
    I0 = 0.015 * U / Ra * math.exp(0.4 * rng.standard_normal())
    I0 = min(I0, 0.25 * IN)
    Tmax = float(rng.choice([100, 125, 155]))
    hot = Ra * (234.5 + Tmax) / 259.5
    Rth = (Tmax - 25) / (IN**2 * hot)
    share = rng.uniform(0.15, 0.4)
    return Motor(
        U=U,
        Km=Km,
        Ra=Ra,
        La=Ra * rng.uniform(0.05e-3, 0.9e-3),
        J=rng.uniform(3e-3, 20e-3) * Km**2 / Ra,
        I0=I0,
        IN=IN,
        Rth1=Rth * share,
        Rth2=Rth * (1 - share),
        Tmax=Tmax,
        pole_pairs=int(rng.choice([1, 2, 4, 7])),
        mass=0.01 * P**0.75,
    )


def _servo_motor(rng: np.random.Generator) -> Motor:
    U = float(rng.choice([48, 310, 560]))
    Tcs = math.exp(rng.uniform(math.log(0.3), math.log(3 if U == 48 else 50)))
    n_N = rng.uniform(1500, 6000) * RPM
    Km = U / (n_N * rng.uniform(1.25, 1.7))
    loss = 25 * Tcs**0.75
    Ra = Km**2 * loss / Tcs**2
    Ics = Tcs / Km
    IN = Ics * rng.uniform(0.72, 0.97)
    I0 = 0.025 * IN * math.exp(0.35 * rng.standard_normal())
    return Motor(
        U=U,
        Km=Km,
        Ra=Ra,
        La=Ra * rng.uniform(2e-3, 15e-3),
        J=rng.uniform(0.6e-3, 4e-3) * Km**2 / Ra,
        I0=I0,
        IN=IN,
        Rth1=0.3 * 100 / loss,
        Rth2=0.5 * 100 / loss,
        Tmax=155.0,
        pole_pairs=int(rng.choice([3, 4, 5])),
        n_N=n_N,
        Ics=Ics,
        Ipk=Ics * rng.uniform(2.8, 4.0),
        saturation=rng.uniform(0.82, 1.0),
        mass=1.2 * Tcs**0.8,
    )


def _winding(m: Motor, turns: float, voltage: float, rng: np.random.Generator) -> Motor:
    """The same motor wound with other wire: Km as the turns, Ra and La as their square."""
    fill_factor = math.exp(0.01 * rng.standard_normal())
    w = Motor(**vars(m))
    w.Km, w.La, w.U = m.Km * turns, m.La * turns**2, voltage
    w.Ra = m.Ra * turns**2 * fill_factor
    w.I0, w.IN, w.Ics, w.Ipk = (x / turns for x in (m.I0, m.IN, m.Ics, m.Ipk))
    w.n_N = m.n_N * (voltage / m.U) / turns
    return w


_DC_CORE = ["nominal_voltage", "no_load_speed", "torque_constant", "terminal_resistance"]
_DC_MORE = [
    "no_load_current", "nominal_speed", "nominal_torque", "nominal_current", "stall_torque",
    "stall_current", "maximum_efficiency", "terminal_inductance", "speed_constant",
    "speed_torque_gradient", "mechanical_time_constant", "rotor_inertia", "rated_power",
    "maximum_power", "motor_constant", "electrical_time_constant", "friction_torque",
    "back_emf_constant",
]  # fmt: skip
_DC_THERMAL = [
    "thermal_resistance_winding_housing", "thermal_resistance_housing_ambient",
    "maximum_winding_temperature",
]  # fmt: skip
_SERVO_CORE = [
    "nominal_voltage", "continuous_stall_torque", "continuous_stall_current", "torque_constant",
    "back_emf_constant", "terminal_resistance",
]  # fmt: skip
_SERVO_MORE = [
    "nominal_speed", "nominal_torque", "nominal_current", "rated_power", "peak_torque",
    "peak_current", "terminal_inductance", "rotor_inertia", "electrical_time_constant",
    "mechanical_time_constant", "motor_constant",
]  # fmt: skip


def sheet(rng: np.random.Generator, *, full: bool = False, tag: str = "S") -> Sheet:
    """One random sheet, printed and free of faults."""
    kind = str(rng.choice(["brushed", "block", "sinusoidal"], p=[0.4, 0.3, 0.3]))
    family = bool(rng.random() < 0.5)
    make = _servo_motor if kind == "sinusoidal" else _dc_motor
    n = int(rng.integers(4, 9))
    if family:
        base = make(rng)
        turns = np.exp(np.linspace(-0.7, 0.7, n)) * np.exp(0.05 * rng.standard_normal(n))
        same = rng.random() < 0.4
        volts = [base.U if same else float(f"{base.U * t:.2g}") for t in turns]
        motors = [_winding(base, float(t), u, rng) for t, u in zip(turns, volts, strict=True)]
    else:
        motors = [make(rng) for _ in range(n)]
    core, more = (_SERVO_CORE, _SERVO_MORE) if kind == "sinusoidal" else (_DC_CORE, list(_DC_MORE))
    share = 1.0 if full else rng.uniform(0.15, 1.0)
    keys = core + [k for k in more if rng.random() < share]
    if kind != "sinusoidal" and (full or rng.random() < share * 0.7):
        keys += _DC_THERMAL
    if kind != "brushed":
        keys.append("pole_pairs")
        if rng.random() < 0.3:
            keys.append("poles")
    if rng.random() < 0.7:
        keys.append("mass")
    units = {key: UNITS[key][int(rng.integers(len(UNITS[key])))] for key in keys}
    for key in ("nominal_torque", "stall_torque"):  # one torque unit a sheet
        if key in units and "nominal_torque" in units:
            units[key] = units["nominal_torque"]
    least = int(rng.choice([2, 3, 3, 4]))
    digits = {key: int(min(4, least + rng.integers(0, 2))) for key in keys}
    out = Sheet(
        kind=kind,
        motors=motors,
        family=family,
        keys=keys,
        units=units,
        digits=digits,
        scattered=bool(rng.random() < 0.5),
        stall_net=bool(rng.random() < 0.5),
        hot_speed=bool(rng.random() < 0.3),
        power_from_voltage=bool(rng.random() < 0.4),
        part_numbers=[f"{tag}-{i + 1:02d}" for i in range(n)],
    )
    fill(out, rng)
    return out
