#!/usr/bin/env python3
"""Write the sample sheets, or with --check compare them with what would be written.

    python sample_entries/make_samples.py            # write
    python sample_entries/make_samples.py --check    # exit status 1 when a file differs

Every maker, series, part number and figure is invented. Deterministic: the same on every run.
"""

from __future__ import annotations

import argparse
import csv
import io
import json
import sys
from pathlib import Path

from sample_catalogue import PLANTS, SHEETS
from sample_sheets import cells, short

HERE = Path(__file__).resolve().parent

NOTE = (
    "Invented motors. For tests and the demo only; the program never reads this file. SI units, "
    "temperatures in °C."
)

# size (mm), output torque (N·m) of the one-stage gear, inertia at the motor shaft (g·cm²), mass
# (g) of the first stage, largest input speed (rpm), price of the first stage
GEAR_SIZES = [
    (10, 0.012, 0.004, 6, 14000, 38),
    (22, 0.22, 0.4, 42, 10000, 52),
    (36, 1.6, 5.0, 180, 8000, 84),
    (52, 6.5, 28.0, 520, 6000, 138),
    (80, 28.0, 210.0, 1900, 5000, 390),
]
GEAR_RATIOS = [(1, "4"), (1, "6.25"), (2, "16"), (2, "25"), (3, "64")]


def gears() -> str:
    """The table of invented gears: 93 to 97 % a stage by size, more torque with more stages."""
    out = io.StringIO()
    write = csv.writer(out, lineterminator="\n").writerow
    write(["Maker: Snailcroft Gearworks (invented); every figure in this file is made up"])
    write(
        [
            *("Part number", "Series", "Stages", "Ratio", "Efficiency [%]"),
            *("Inertia at input [g·cm²]", "Continuous output torque [N·m]"),
            *("Peak output torque [N·m]", "Max. input speed [rpm]", "Backlash [arcmin]"),
            *("Mass [g]", "Diameter [mm]", "Price [EUR]"),
        ]
    )
    for size, torque, inertia, mass, speed, price in GEAR_SIZES:
        for stages, ratio in GEAR_RATIOS:
            efficiency = (0.93 if size < 20 else 0.95 if size < 50 else 0.97) ** stages
            continuous = torque * (1, 1.5, 2)[stages - 1] * (1 if ratio in ("4", "16") else 0.85)
            write(
                [
                    f"WHORL-{size}-{ratio}",
                    f"WHORL-{size}",
                    stages,
                    ratio,
                    f"{100 * efficiency:.0f}",
                    f"{inertia * (1 if ratio in ('4', '16', '64') else 0.8):.3g}",
                    f"{continuous:.3g}",
                    f"{2.5 * continuous:.3g}",
                    speed,
                    f"{(40 if size < 20 else 18 if size < 50 else 8) + 4 * (stages - 1)}",
                    f"{mass * (1 + 0.35 * (stages - 1)):.0f}",
                    size,
                    f"{price * (1 + 0.3 * (stages - 1)):.2f}",
                ]
            )
    return out.getvalue()


def files() -> dict[str, str]:
    """Every generated file's content by name."""
    made: dict[str, str] = {"gears.csv": gears()}
    planted: list[dict] = []
    truth: dict[str, dict] = {}
    for sheet in SHEETS:
        printed, records = cells(sheet, PLANTS)
        made[sheet.file] = sheet.render(sheet, printed)
        planted += records
        keys = {c.key for c in sheet.columns}
        for motor in sheet.motors:
            figures = sheet.figures(motor)
            truth[motor.winding.part] = {
                "maker": sheet.maker,
                "file": sheet.file,
                "series": motor.frame.series,
                "commutation": sheet.commutation,
                "magnet": motor.frame.magnet,
                "reference_temperature": sheet.reference,
                "pole_pairs": motor.frame.pole_pairs if sheet.commutation != "brushed" else None,
                "constants": {k: short(v) for k, v in motor.constants().items()},
                "figures": {k: short(v) for k, v in figures.items() if k in keys},
            }
    made["planted.json"] = _json({"note": NOTE, "planted": planted})
    made["truth.json"] = _json({"note": NOTE, "motors": truth})
    return made


def _json(document: object) -> str:
    return json.dumps(document, ensure_ascii=False, indent=1) + "\n"


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__.split("\n", 1)[0])
    parser.add_argument("--check", action="store_true", help="write nothing; 1 if files differ")
    check = parser.parse_args().check
    stale = []
    for name, text in files().items():
        path, data = HERE / name, text.encode()
        if check:
            if not path.is_file() or path.read_bytes() != data:
                stale.append(name)
        else:
            path.write_bytes(data)
    if stale:
        print("differs from what make_samples.py writes: " + ", ".join(stale), file=sys.stderr)
        return 1
    return 0


if __name__ == "__main__":
    sys.exit(main())
