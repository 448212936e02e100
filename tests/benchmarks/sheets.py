"""A CSV of invented motors whose 25 figures agree, with rounding and scatter as printed ones."""

from __future__ import annotations

from pathlib import Path

import numpy as np

COLUMNS: tuple[tuple[str, str, str, int], ...] = (
    # heading, unit in the sheet, the SI unit it stands for, significant digits
    ("Nominal voltage", "V", "V", 3),
    ("No-load speed", "rpm", "rad/s", 4),
    ("No-load current", "mA", "A", 3),
    ("Nominal speed", "rpm", "rad/s", 4),
    ("Nominal torque", "mNm", "N·m", 3),
    ("Nominal current", "A", "A", 3),
    ("Stall torque", "mNm", "N·m", 3),
    ("Stall current", "A", "A", 3),
    ("Maximum efficiency", "%", "1", 3),
    ("Terminal resistance", "Ω", "Ω", 3),
    ("Terminal inductance", "mH", "H", 3),
    ("Torque constant", "mNm/A", "N·m/A", 3),
    ("Speed constant", "rpm/V", "rad/(s·V)", 3),
    ("Speed/torque gradient", "rpm/mNm", "rad/(s·N·m)", 3),
    ("Mechanical time constant", "ms", "s", 3),
    ("Rotor inertia", "gcm²", "kg·m²", 3),
    ("Thermal resistance winding-housing", "K/W", "K/W", 3),
    ("Thermal resistance housing-ambient", "K/W", "K/W", 3),
    ("Thermal time constant winding", "s", "s", 3),
    ("Thermal time constant housing", "s", "s", 3),
    ("Maximum winding temperature", "°C", "°C", 3),
    ("Maximum speed", "rpm", "rad/s", 3),
    ("Mass", "g", "kg", 3),
    ("Diameter", "mm", "m", 3),
    ("Length", "mm", "m", 3),
)
RPM = np.pi / 30
FAULTY = 0.03
"""So many of the motors print their torque constant √2 times too large."""


def columns(motors: int, seed: int = 3) -> list[np.ndarray]:
    """The figures of the motors in the sheet's units, not yet rounded: one array a column."""
    rng = np.random.default_rng(seed)
    U = rng.choice([6.0, 12.0, 18.0, 24.0, 36.0, 48.0], motors)
    n0 = rng.uniform(3000, 12000, motors)
    Km = 10 ** rng.uniform(-2.5, -0.9, motors)
    rth1, rth2 = 3 * (0.03 / Km) ** 0.7, 9 * (0.03 / Km) ** 0.7
    share = rng.uniform(0.04, 0.12, motors)
    K = U / (n0 * RPM)
    for _ in range(20):  # the no-load loss changes the constant that gives this speed
        R = (K / Km) ** 2
        current = np.minimum(np.sqrt(90 / (R * 1.4 * (rth1 + rth2))), 0.4 * U / R)
        i0 = share * current
        K = (U - R * i0) / (n0 * RPM)
    R = (K / Km) ** 2
    stall = U / R
    torque = K * (current - i0)
    inertia = 3e-6 * (Km / 0.03) ** 1.6 * rng.uniform(0.5, 2, motors)
    size = (Km / 0.03) ** 0.4
    wrong = rng.random(motors) < FAULTY
    return [
        U, n0, i0 * 1e3, (U - R * current) / K / RPM, torque * 1e3, current,
        K * (stall - i0) * 1e3, stall, 100 * (1 - np.sqrt(i0 / stall)) ** 2, R,
        R * rng.uniform(1e-4, 6e-4, motors) * 1e3, 1e3 * K * np.where(wrong, 2**0.5, 1),
        1 / K / RPM,
        R / K**2 / RPM / 1e3, R * inertia / K**2 * 1e3, inertia * 1e7, rth1, rth2,
        15 * size, 600 * size, rng.choice([100.0, 125.0, 155.0], motors), n0 * 1.4,
        300 * size**2.5, 32 * size, 60 * size,
    ]  # fmt: skip


def sheet(path: Path, motors: int, seed: int = 3) -> Path:
    """A CSV file of that many motors × 25 figures."""
    texts = []
    for values, (_, _, _, digits) in zip(columns(motors, seed), COLUMNS, strict=True):
        with np.errstate(divide="ignore"):
            places = digits - 1 - np.floor(np.log10(np.abs(values))).astype(int)
        texts.append([f"{v:.{max(p, 0)}f}" for v, p in zip(values.tolist(), places.tolist(),
                                                            strict=True)])  # fmt: skip
    with path.open("w", encoding="utf-8") as out:
        out.write("Part number," + ",".join(f"{h} [{u}]" for h, u, _, _ in COLUMNS) + "\n")
        for i, row in enumerate(zip(*texts, strict=True)):
            out.write(f"EX-{i:07d},{','.join(row)}\n")
    return path
