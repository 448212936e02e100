"""The mistakes that sheets make, planted in a printed cell (names: the causes of a finding)."""

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from .sheets import Sheet, published, significant

TORQUES = ["nominal_torque", "stall_torque", "continuous_stall_torque"]
SPEEDS = ["no_load_speed", "nominal_speed"]
CURRENTS = ["nominal_current", "continuous_stall_current"]
NOT_TESTABLE = {"nominal_voltage", "mass", "maximum_winding_temperature", "poles"}
SWAPS = [
    ("torque_constant", "speed_constant"),
    ("no_load_speed", "nominal_speed"),
    ("no_load_current", "nominal_current"),
    ("nominal_torque", "stall_torque"),
    ("nominal_current", "stall_current"),
    ("mechanical_time_constant", "electrical_time_constant"),
    ("terminal_resistance", "terminal_inductance"),
]


@dataclass(frozen=True)
class Planted:
    """One mistake: which motor, which figures, why, and by what factor of the right value."""

    motor: int
    keys: tuple[str, ...]
    cause: str
    factor: float
    also: tuple[str, ...] = ()  # causes whose ratio is the same number


def _factors(sheet: Sheet) -> dict[str, list[tuple[str, float]]]:
    """Cause → (key, factor) that may be planted in this sheet."""
    sine = sheet.kind == "sinusoidal"
    r2, r3 = math.sqrt(2), math.sqrt(3)
    both: Callable[[float], list[float]] = lambda f: [f, 1 / f]  # noqa: E731

    def on(keys: list[str], factors: list[float]) -> list[tuple[str, float]]:
        return [(k, f) for k in keys if k in sheet.keys for f in factors]

    testable = [k for k in sheet.keys if k not in NOT_TESTABLE and k != "pole_pairs"]
    out = {
        "power-of-ten": on(testable, [0.001, 0.01, 0.1, 10, 100, 1000]),
        "rpm-vs-rad-per-second": on(
            [*SPEEDS, "speed_constant", "speed_torque_gradient"], both(30 / math.pi)
        ),
        "rev-per-second": on([*SPEEDS, "speed_constant"], [60, 1 / 60, 2 * math.pi]),
        "ounce-inch-vs-millinewton-metre": on(
            [*TORQUES, "torque_constant", "motor_constant"], both(7.06155)
        ),
        "pound-inch-vs-newton-metre": on([*TORQUES, "torque_constant"], both(0.1129848)),
        "kilogram-force-vs-newton": on(
            [*TORQUES, "torque_constant"], [9.80665, 1 / 9.80665, 98.0665, 1 / 98.0665]
        ),
        "inertia-convention": on(["rotor_inertia"], [*both(386.0886), 4, 0.25]),
        "horsepower-vs-watt": on(["rated_power"], [*both(745.7), *both(735.5)]),
        "hot-vs-cold": on(["terminal_resistance"], [1.25, 1.31, 1.4, 1.5]),
    }
    if sine:
        out["peak-vs-rms"] = on(["torque_constant", "back_emf_constant", *CURRENTS], both(r2))
        out["sinusoidal-current-convention"] = on(
            ["torque_constant"], [math.sqrt(2 / 3), math.sqrt(1.5)]
        )
        out["peak-to-peak"] = on(["back_emf_constant"], [2])
    if sheet.kind != "brushed":
        out["line-vs-phase"] = on(["terminal_resistance", "terminal_inductance"], both(2)) + on(
            ["back_emf_constant"], both(r3) if sine else []
        )
    if "poles" in sheet.keys:
        out["poles-vs-pole-pairs"] = on(["pole_pairs"], [2])
    return out


def _respell(sheet: Sheet, key: str, i: int, factor: float) -> None:
    value = float(sheet.printed[key][i]) * factor
    sheet.printed[key][i] = (
        f"{value:g}" if key == "pole_pairs" else significant(value, sheet.digits[key])
    )


def _transposed(text: str, rng: np.random.Generator) -> str | None:
    places = [
        k
        for k in range(len(text) - 1)
        if text[k].isdigit() and text[k + 1].isdigit() and text[k] != text[k + 1]
    ]
    rng.shuffle(places)
    for k in places:
        new = text[:k] + text[k + 1] + text[k] + text[k + 2 :]
        if float(new) > 0 and not 0.93 < float(new) / float(text) < 1.07:
            return new
    return None


def plant(
    sheet: Sheet, i: int, rng: np.random.Generator, cause: str | None = None
) -> Planted | None:
    """Put one mistake into motor i's printed cells; None where the cause can't occur here."""
    factors = _factors(sheet)
    causes = [*(c for c, f in factors.items() if f), "digits-transposed", "figures-swapped",
              "neighbouring-column", "input-vs-output-power", "gear-output-side",
              "friction-ignored", "continuous-stall", "unexplained"]  # fmt: skip
    cause = cause or str(rng.choice(causes))
    truth = published(sheet.motors[i], sheet)
    m = sheet.motors[i]
    testable = [k for k in sheet.keys if k not in NOT_TESTABLE and k != "pole_pairs"]

    def single(key: str, factor: float, *also: str) -> Planted:
        _respell(sheet, key, i, factor)
        return Planted(i, (key,), cause, factor, also)

    if cause in factors:
        if not factors[cause]:
            return None
        key, factor = factors[cause][int(rng.integers(len(factors[cause])))]
        return single(key, factor)
    match cause:
        case "digits-transposed":
            key = str(rng.choice(testable))
            new = _transposed(sheet.printed[key][i], rng)
            if new is None:
                return None
            factor = float(new) / float(sheet.printed[key][i])
            sheet.printed[key][i] = new
            return Planted(i, (key,), cause, factor)
        case "figures-swapped":
            pairs = [p for p in SWAPS if p[0] in sheet.keys and p[1] in sheet.keys]
            if not pairs:
                return None
            a, b = pairs[int(rng.integers(len(pairs)))]
            sheet.printed[a][i], sheet.printed[b][i] = sheet.printed[b][i], sheet.printed[a][i]
            if float(sheet.printed[a][i]) == float(sheet.printed[b][i]):
                return None
            return Planted(i, (a, b), cause, math.nan)
        case "neighbouring-column":
            if not sheet.family:
                return None
            j = i + 1 if i + 1 < len(sheet.motors) else i - 1
            key = str(rng.choice(testable))
            old, new = float(sheet.printed[key][i]), float(sheet.printed[key][j])
            if 0.93 < new / old < 1.07:
                return None
            sheet.printed[key][i] = sheet.printed[key][j]
            return Planted(i, (key,), cause, new / old)
        case "input-vs-output-power":
            if sheet.kind == "sinusoidal" or "rated_power" not in sheet.keys:
                return None
            return single("rated_power", m.U * m.IN / truth["rated_power"])
        case "gear-output-side":
            keys = [k for k in ("nominal_torque", "stall_torque") if k in sheet.keys]
            if not keys:
                return None
            ratio = float(rng.choice([3.71, 5.18, 14.2, 23.4, 43.7]))
            for key in keys:
                _respell(sheet, key, i, ratio * 0.85)
            return Planted(i, tuple(keys), cause, ratio * 0.85)
        case "friction-ignored":
            if m.I0 / m.IN < 0.06 or sheet.kind == "sinusoidal":
                return None
            return single("torque_constant", 1 - m.I0 / m.IN)
        case "continuous-stall":
            if "stall_current" not in sheet.keys or 0.6 * m.U / m.Ra < m.IN * 1.15:
                return None
            keys = ["stall_current"] + (["stall_torque"] if "stall_torque" in sheet.keys else [])
            for key in keys:
                _respell(sheet, key, i, 1.15 * m.IN / (m.U / m.Ra))
            return Planted(i, tuple(keys), cause, 1.15 * m.IN / (m.U / m.Ra))
        case _:
            factor = math.exp(rng.choice([-1, 1]) * rng.uniform(math.log(1.3), math.log(1.9)))
            return single(str(rng.choice(testable)), factor)


def plant_column(sheet: Sheet, rng: np.random.Generator) -> Planted | None:
    """One factor in the heading of a figure: every motor of the sheet is wrong alike."""
    factors = {
        c: f for c, f in _factors(sheet).items()
        if f and c not in ("hot-vs-cold", "poles-vs-pole-pairs")
    }  # fmt: skip
    cause = str(rng.choice(list(factors)))
    key, factor = factors[cause][int(rng.integers(len(factors[cause])))]
    for i in range(len(sheet.motors)):
        _respell(sheet, key, i, factor)
    return Planted(-1, (key,), cause, factor)
