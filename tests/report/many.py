"""A table of many invented brushed motors whose figures follow from random constants."""

import csv
import io

import numpy as np

HEADINGS = (
    "Part", "Series", "Nominal voltage [V]", "No-load speed [rpm]", "No-load current [mA]",
    "Nominal speed [rpm]", "Nominal torque [mNm]", "Nominal current [A]", "Stall torque [mNm]",
    "Stall current [A]", "Max. efficiency [%]", "Terminal resistance [Ω]",
    "Terminal inductance [mH]", "Torque constant [mNm/A]", "Speed constant [rpm/V]",
    "Speed/torque gradient [rpm/mNm]", "Mechanical time constant [ms]", "Rotor inertia [gcm²]",
    "Thermal resistance winding-housing [K/W]", "Thermal resistance housing-ambient [K/W]",
    "Max. winding temperature [°C]", "Weight [g]", "Diameter [mm]",
)  # fmt: skip


def table(n: int, seed: int = 7) -> str:
    """CSV of n motors; every fiftieth has a terminal resistance ten times too large."""
    rng = np.random.default_rng(seed)
    rpm = 60 / (2 * np.pi)
    out = io.StringIO()
    writer = csv.writer(out)
    writer.writerow(HEADINGS)
    for i in range(n):
        mass = 10 ** rng.uniform(-1.5, 0.7)
        Km0 = 0.03 * mass**0.9 * rng.uniform(0.8, 1.2)
        U = float(rng.choice([6, 9, 12, 18, 24, 36, 48]))
        n0 = rng.uniform(3000, 9000) / rpm
        Km = U / n0 * 0.97
        Ra = (Km / Km0) ** 2
        I0 = 0.02 * U / Ra * rng.uniform(0.5, 1.5)
        Is, J = U / Ra, 2e-5 * mass**1.5 * rng.uniform(0.8, 1.2)
        IN = Is * rng.uniform(0.12, 0.2)
        n0 = (U - Ra * I0) / Km
        rth = 12 / mass**0.5
        figures = (
            U, n0 * rpm, I0 * 1e3, (U - Ra * IN) / Km * rpm, Km * (IN - I0) * 1e3, IN,
            Km * (Is - I0) * 1e3, Is, (1 - (I0 / Is) ** 0.5) ** 2 * 100,
            Ra * (10 if i % 50 == 49 else 1), Ra * 0.15, Km * 1e3, rpm / Km, Ra / Km**2 * rpm / 1e3,
            J * Ra / Km**2 * 1e3, J * 1e7, rth * 0.25, rth, 125.0, mass * 1e3,
            40 * mass ** (1 / 3),
        )  # fmt: skip
        shown = [np.format_float_positional(f, 4, fractional=False, trim="-") for f in figures]
        writer.writerow([f"QX-{i:05d}", f"QX-{i // 50:03d}", *shown])
    return out.getvalue()
