"""Invented tables of motors with known constants, for developing and testing the reconciliation.

A table is one family of windings; figures are computed from the constants by the textbook laws,
scattered if asked for (a normal deviate cut at two standard deviations) and rounded to digits.
"""

import math
from dataclasses import dataclass, field

import numpy as np

from motorfolio.schema.batch import Batch, Heading, blank_batch, empty_figures
from motorfolio.schema.convention import Commutation, default_convention, to_dc
from motorfolio.schema.vocabulary import quantity

RPM = math.pi / 30
UNITS = {
    # figure: printed unit, its SI factor
    "nominal_voltage": ("V", 1.0), "no_load_speed": ("rpm", RPM), "no_load_current": ("mA", 1e-3),
    "nominal_speed": ("rpm", RPM), "nominal_torque": ("mNm", 1e-3), "nominal_current": ("A", 1.0),
    "stall_torque": ("mNm", 1e-3), "stall_current": ("A", 1.0), "rated_power": ("W", 1.0),
    "maximum_power": ("W", 1.0), "maximum_efficiency": ("%", 0.01),
    "rated_efficiency": ("%", 0.01), "terminal_resistance": ("Ω", 1.0),
    "terminal_inductance": ("mH", 1e-3), "torque_constant": ("mNm/A", 1e-3),
    "back_emf_constant": ("V/krpm", 0.03 / math.pi), "speed_constant": ("rpm/V", RPM),
    "speed_torque_gradient": ("rpm/mNm", RPM * 1e3), "motor_constant": ("mNm/√W", 1e-3),
    "mechanical_time_constant": ("ms", 1e-3), "electrical_time_constant": ("ms", 1e-3),
    "rotor_inertia": ("g·cm²", 1e-7), "friction_torque": ("mNm", 1e-3),
    "continuous_stall_torque": ("Nm", 1.0), "continuous_stall_current": ("A", 1.0),
    "peak_torque": ("Nm", 1.0), "peak_current": ("A", 1.0), "mass": ("g", 1e-3),
    "poles": ("", 1.0), "pole_pairs": ("", 1.0),
    "thermal_resistance": ("K/W", 1.0), "maximum_winding_temperature": ("°C", 1.0),
}  # fmt: skip
FULL = tuple(k for k in UNITS if k not in (
    "poles", "pole_pairs", "thermal_resistance", "maximum_winding_temperature",
    "continuous_stall_torque", "continuous_stall_current", "peak_torque", "peak_current",
    "rated_efficiency", "friction_torque", "maximum_power", "rated_power"))  # fmt: skip
SERVO = ("nominal_voltage", "nominal_speed", "nominal_torque", "nominal_current", "rated_power",
         "continuous_stall_torque", "continuous_stall_current", "peak_torque", "peak_current",
         "terminal_resistance", "terminal_inductance", "torque_constant", "back_emf_constant",
         "rotor_inertia", "motor_constant", "mechanical_time_constant",
         "electrical_time_constant", "mass")  # fmt: skip
FEW = ("nominal_voltage", "no_load_speed", "no_load_current", "nominal_speed", "nominal_torque",
       "nominal_current", "stall_torque", "stall_current", "terminal_resistance",
       "torque_constant", "rotor_inertia")  # fmt: skip
POINT = {"no_load_speed": 0.025, "nominal_speed": 0.025, "nominal_torque": 0.05}


@dataclass
class Sheet:
    """A table, with the true constants and the true values of its figures."""

    batch: Batch
    truth: dict[str, np.ndarray]
    figures: dict[str, np.ndarray] = field(default_factory=dict)


def rounded(value: float, digits: int) -> tuple[float, float]:
    """A printed number and half a unit of its last digit; at most three digits if an integer."""
    step = 10.0 ** (math.floor(math.log10(abs(value))) - digits + 1)
    return round(value / step) * step, step / 2


def put(batch: Batch, key: str, row: int, value_si: float, digits: int = 3) -> None:
    """Print a figure into a batch."""
    unit, factor = UNITS[key]
    printed, half = rounded(value_si / factor, digits)
    if key not in batch.figures:
        column = empty_figures(len(batch))
        batch.headings.append(Heading(key, key, unit, factor=factor))
        column.heading[:] = len(batch.headings) - 1
        kind = Commutation(int(batch.commutation[0]))
        convention = default_convention(key, quantity(key).carries, kind)
        column.conventions = [convention.with_(basis="stated")]
        column.row[:] = np.arange(len(batch)) + 2
        column.column[:] = len(batch.headings)
        batch.figures[key] = column
    column = batch.figures[key]
    column.value[row] = printed * factor
    column.low[row], column.high[row] = (printed - half) * factor, (printed + half) * factor
    column.text[row] = f"{printed:.{max(0, -math.floor(math.log10(half * 2)))}f}"


def single(kind: Commutation = Commutation.BRUSHED, n: int = 1) -> Batch:
    """A batch of n motors with no figures yet."""
    batch = blank_batch([f"X{i}" for i in range(n)], maker="Invented", commutation=kind)
    batch.series = [None] * n
    return batch


def sheet(
    n: int = 1, kind: Commutation = Commutation.BRUSHED, **figures: float | list[float]
) -> Batch:
    """A sheet of n motors, four digits a figure; NaN: not given."""
    batch = single(kind, n)
    for key, values in figures.items():
        for row, value in enumerate(np.broadcast_to(values, n).tolist()):
            if math.isfinite(value):
                put(batch, key, row, value, 4)
    return batch


def restate(batch: Batch, key: str, **changes: str | float | None) -> None:
    """Change the convention that a column states."""
    column = batch.figures[key]
    column.conventions = [c.with_(**changes) for c in column.conventions]


def make(
    rng: np.random.Generator,
    n: int = 6,
    kind: Commutation = Commutation.BRUSHED,
    keys: tuple[str, ...] = FULL,
    digits: int = 3,
    scatter: float = 1.0,
) -> Sheet:
    """One family of n windings."""
    batch = blank_batch([f"X{i}" for i in range(n)], maker="Invented", commutation=kind)
    batch.series = ["X"] * n
    servo = kind is Commutation.SINUSOIDAL
    size = math.exp(rng.uniform(math.log(0.003), math.log(0.3)))  # Km/√Ra
    inertia = 8e-3 * size**2 * math.exp(rng.normal(0, 0.3))
    tau_e = math.exp(rng.uniform(math.log(1e-4), math.log(2e-3)))
    mass = 1.5 * size**0.8
    u0 = float(rng.choice([6, 12, 24, 48])) if not servo else 325.0
    speed = math.exp(rng.uniform(math.log(3000), math.log(9000))) * RPM
    truth = {k: np.empty(n) for k in ("Km", "Ra", "J", "La", "I0")}
    sheet = Sheet(batch, truth, {k: np.full(n, np.nan) for k in keys})
    friction = rng.uniform(0.008, 0.025) * size**2 * speed  # torque: about Km·(U/Ra)/80
    if servo:
        friction *= 0.3
    for i in range(n):
        u = u0
        km = u / speed * 1.28 ** (i - n / 2) * math.exp(rng.normal(0, 0.03))
        ra = (km / size) ** 2
        load = rng.uniform(0.08, 0.2) * u / ra
        i0 = friction * math.exp(rng.normal(0, 0.03)) / km
        n0, i_s = (u - ra * i0) / km, u / ra
        ts, tn, nn = km * (i_s - i0), km * (load - i0), (u - ra * load) / km
        if servo:
            nn *= rng.uniform(0.4, 0.9)
        figures = {
            "nominal_voltage": u, "no_load_speed": n0, "no_load_current": i0,
            "nominal_torque": tn, "nominal_current": load, "nominal_speed": nn,
            "stall_torque": ts, "stall_current": i_s, "terminal_resistance": ra,
            "terminal_inductance": tau_e * ra, "torque_constant": km, "back_emf_constant": km,
            "speed_constant": 1 / km, "speed_torque_gradient": ra / km**2,
            "motor_constant": km / ra**0.5, "mechanical_time_constant": inertia * ra / km**2,
            "electrical_time_constant": tau_e, "rotor_inertia": inertia,
            "friction_torque": km * i0, "maximum_efficiency": (1 - (i0 / i_s) ** 0.5) ** 2,
            "continuous_stall_torque": km * load * 1.1, "continuous_stall_current": load * 1.1,
            "peak_torque": km * load * 3.3 * rng.uniform(0.8, 1.0), "peak_current": load * 3.3,
            "mass": mass,
        }  # fmt: skip
        noisy = {}
        for key, value in figures.items():
            sd = POINT.get(key, 0.0 if key in ("nominal_current", "mass", "nominal_voltage")
                           else quantity(key).scatter)  # fmt: skip
            deviate = float(np.clip(rng.normal(), -2, 2)) * scatter
            if key == "maximum_efficiency":
                noisy[key] = min(value + 0.02 * deviate, 0.97)
            else:
                noisy[key] = value * math.exp(sd * deviate)
        noisy["rated_power"] = noisy["nominal_torque"] * noisy["nominal_speed"]
        noisy["maximum_power"] = noisy["no_load_speed"] * noisy["stall_torque"] / 4
        noisy["rated_efficiency"] = noisy["rated_power"] / (u * noisy["nominal_current"])
        for key in keys:
            convention = default_convention(key, quantity(key).carries, kind)
            c = to_dc(key, convention, kind)
            put(batch, key, i, noisy[key] / c, 4 if key == "nominal_voltage" else digits)
            sheet.figures[key][i] = figures.get(key, noisy[key]) / c
        for name, value in zip(truth, (km, ra, inertia, tau_e * ra, i0), strict=True):
            truth[name][i] = value
    return sheet


def spoil(batch: Batch, key: str, row: int, factor: float) -> None:
    """Multiply one printed figure by a factor, keeping its number of digits."""
    column = batch.figures[key]
    old = float(column.value[row])
    half = float(column.high[row] - column.low[row]) / 2
    digits = max(2, round(math.log10(old / (2 * half))) + 1)
    put(batch, key, row, old * factor, digits)
