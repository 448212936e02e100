"""The sample sheets, held against the motor relations without any help of the program.

Factors: NIST SP 811 (2008 edition), appendix B.8 (ozf·in, lb, in, hp, kgf); °F from the same.
Relations among the figures of a permanent-magnet motor are written out here again, from the
equations T = Km·I and U = R·I + Km·ω, so that a slip in the generator cannot hide.
"""

from __future__ import annotations

import csv
import html.parser
import json
import math
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

SAMPLES = Path(__file__).resolve().parents[2] / "sample_entries"
TRUTH = json.loads((SAMPLES / "truth.json").read_text("utf-8"))["motors"]
PLANTED = json.loads((SAMPLES / "planted.json").read_text("utf-8"))["planted"]
FAULTY = {(p["part_number"], p["figure"]) for p in PLANTED}

RPM = math.pi / 30
OZ_IN = 7.061552e-3  # N·m, NIST SP 811 B.8
GF_CM = 9.80665e-5
LB, HP = 0.4535924, 745.6999

# heading (start, lower case) → key, SI value of the unit; longest start wins
HEADINGS = {
    "brindlewick_10.csv": {
        "torque constant": ("torque_constant", 1e-3),
        "speed constant": ("speed_constant", RPM),
        "terminal resistance": ("terminal_resistance", 1),
        "terminal inductance": ("terminal_inductance", 1e-3),
        "nominal voltage": ("nominal_voltage", 1),
        "stall torque": ("stall_torque", 1e-3),
        "stall current": ("stall_current", 1),
        "no-load speed": ("no_load_speed", RPM),
        "no-load current": ("no_load_current", 1e-3),
        "rated speed": ("nominal_speed", RPM),
        "rated torque": ("nominal_torque", 1e-3),
        "rated current": ("nominal_current", 1),
        "max. efficiency": ("maximum_efficiency", 0.01),
        "speed/torque slope": ("speed_torque_gradient", RPM / 1e-3),
        "mechanical time constant": ("mechanical_time_constant", 1e-3),
        "rotor inertia": ("rotor_inertia", 1e-7),
        "thermal resistance winding-housing": ("rth1", 1),
        "thermal resistance housing-ambient": ("rth2", 1),
        "max. winding temperature": ("maximum_winding_temperature", 1),
    },
    "quasselbach.csv": {
        "nennspannung": ("nominal_voltage", 1),
        "leerlaufdrehzahl": ("no_load_speed", RPM),
        "leerlaufstrom": ("no_load_current", 1e-3),
        "nenndrehzahl": ("nominal_speed", RPM),
        "nennmoment": ("nominal_torque", 1e-3),
        "nennstrom": ("nominal_current", 1),
        "nennleistung": ("rated_power", 1),
        "anlaufmoment": ("stall_torque", 1e-3),
        "anlaufstrom": ("stall_current", 1),
        "max. wirkungsgrad": ("maximum_efficiency", 0.01),
        "wicklungswiderstand": ("terminal_resistance", 1),
        "wicklungsinduktivität": ("terminal_inductance", 1e-3),
        "drehmomentkonstante": ("torque_constant", 1e-3),
        "drehzahlkonstante": ("speed_constant", RPM),
        "steigung": ("speed_torque_gradient", RPM / 1e-3),
        "mechanische zeitkonstante": ("mechanical_time_constant", 1e-3),
        "rotorträgheitsmoment": ("rotor_inertia", 1e-7),
        "wärmewiderstand wicklung": ("rth1", 1),
        "wärmewiderstand gehäuse": ("rth2", 1),
        "max. wicklungstemperatur": ("maximum_winding_temperature", 1),
    },
    "gopher_notch.tsv": {
        "rated voltage": ("nominal_voltage", 1),
        "rated torque": ("nominal_torque", OZ_IN),
        "rated speed": ("nominal_speed", RPM),
        "rated current": ("nominal_current", 1),
        "rated output power": ("rated_power", HP),
        "stall torque": ("stall_torque", OZ_IN),
        "no-load speed": ("no_load_speed", RPM),
        "no-load current": ("no_load_current", 1),
        "torque constant": ("torque_constant", OZ_IN),
        "back-emf constant": ("back_emf_constant", 1 / (1000 * RPM)),
        "terminal resistance": ("terminal_resistance", 1),
        "terminal inductance": ("terminal_inductance", 1e-3),
        "motor constant": ("motor_constant", OZ_IN),
        "rotor inertia": ("rotor_inertia", OZ_IN),
        "friction torque": ("friction_torque", OZ_IN),
        "viscous damping": ("viscous_damping", OZ_IN / (1000 * RPM)),
        "mechanical time constant": ("mechanical_time_constant", 1e-3),
        "electrical time constant": ("electrical_time_constant", 1e-3),
        "thermal resistance winding-ambient": ("rth", 1),
        "max. winding temperature": ("fahrenheit", 1),
        "weight": ("mass", LB),
    },
    "grisoulette.csv": {
        "constante de vitesse": ("speed_constant", RPM),
        "tension nominale": ("nominal_voltage", 1),
        "vitesse à vide": ("no_load_speed", RPM),
        "courant à vide": ("no_load_current", 1),
        "vitesse nominale": ("nominal_speed", RPM),
        "couple nominal": ("nominal_torque", 1e-2),
        "courant nominal": ("nominal_current", 1),
        "puissance nominale": ("rated_power", 1),
        "couple de pointe": ("peak_torque", 1e-2),
        "courant crête": ("peak_current", 1),
        "constante de couple": ("torque_constant", 1e-3),
        "résistance entre phases": ("terminal_resistance", 1e-3),
        "inductance entre phases": ("terminal_inductance", 1e-6),
        "constante moteur": ("motor_constant", 1e-3),
        "pente": ("speed_torque_gradient", RPM / 1e-3),
        "nombre de pôles": ("poles", 1),
        "paires de pôles": ("pole_pairs", 1),
        "inertie": ("rotor_inertia", 1e-7),
        "constante de temps mécanique": ("mechanical_time_constant", 1e-3),
        "résistance thermique bobinage": ("rth1", 1),
        "résistance thermique boîtier": ("rth2", 1),
        "température max": ("maximum_winding_temperature", 1),
    },
    "wobbleton.csv": {
        "motor dc bus": ("nominal_voltage", 1),
        "continuous stall torque": ("continuous_stall_torque", 1),
        "continuous stall current": ("continuous_stall_current", 1),
        "rated speed": ("nominal_speed", RPM),
        "rated torque": ("nominal_torque", 1),
        "rated current": ("nominal_current", 1),
        "rated power": ("rated_power", 1000),
        "peak torque": ("peak_torque", 1),
        "peak current": ("peak_current", 1),
        "winding torque constant": ("torque_constant", 1),
        "winding voltage constant": ("back_emf_constant", 1 / (1000 * RPM)),
        "winding resistance": ("terminal_resistance", 1),
        "winding inductance": ("terminal_inductance", 1e-3),
        "winding electrical time": ("electrical_time_constant", 1e-3),
        "rotor pole pairs": ("pole_pairs", 1),
        "rotor inertia": ("rotor_inertia", 1e-4),
        "rotor friction torque": ("friction_torque", 1),
    },
    "tanuki_hollow.html": {
        "定格電圧": ("nominal_voltage", 1),
        "無負荷回転数": ("no_load_speed", RPM),
        "無負荷電流": ("no_load_current", 1e-3),
        "定格トルク": ("nominal_torque", GF_CM),
        "定格電流": ("nominal_current", 1),
        "定格回転数": ("nominal_speed", RPM),
        "定格出力": ("rated_power", 1),
        "停動トルク": ("stall_torque", GF_CM),
        "停動電流": ("stall_current", 1),
        "最大効率": ("maximum_efficiency", 0.01),
        "端子間抵抗": ("terminal_resistance", 1),
        "端子間インダクタンス": ("terminal_inductance", 1e-6),
        "トルク定数": ("torque_constant", GF_CM),
        "逆起電力定数": ("back_emf_constant", 1 / (1000 * RPM)),
        "慣性モーメント": ("rotor_inertia", 1e-7),
        "機械的時定数": ("mechanical_time_constant", 1e-3),
        "熱抵抗（巻線": ("rth1", 1),
        "熱抵抗（ハウジング": ("rth2", 1),
        "最高巻線温度": ("maximum_winding_temperature", 1),
    },
}
HEADINGS["brindlewick_22.csv"] = HEADINGS["brindlewick_10.csv"]

Figures = dict[str, tuple[float, float]]  # key → SI value, relative half digit


class _Table(html.parser.HTMLParser):
    def __init__(self) -> None:
        super().__init__()
        self.rows: list[list[str]] = []
        self.inside = False

    def handle_starttag(self, tag: str, attrs: list) -> None:
        if tag == "tr":
            self.rows.append([])
        elif tag in ("td", "th"):
            self.rows[-1].append("")
            self.inside = True

    def handle_endtag(self, tag: str) -> None:
        if tag in ("td", "th"):
            self.inside = False

    def handle_data(self, data: str) -> None:
        if self.inside:
            self.rows[-1][-1] += data.strip()


def _figure(text: str, factor: float, decimal: str) -> tuple[float, float]:
    plain = text.replace("\u202f", "").replace("." if decimal == "," else ",", "")
    plain = plain.replace(decimal, ".")
    number = float(plain)
    digits = plain.replace(".", "").lstrip("0")
    if "." not in plain:  # zeros beyond the third digit are place holders: 24800 is ±50
        digits = digits[:3] + digits[3:].rstrip("0")
        half = 0.5 * 10 ** (len(plain) - len(digits))
    else:
        half = 0.5 * 10.0 ** -len(plain.split(".")[1])
    return number * factor, half / number


def _match(file: str, heading: str) -> tuple[str, float] | None:
    heads = HEADINGS[file]
    start = max((h for h in heads if heading.lower().startswith(h)), key=len, default=None)
    return heads[start] if start else None


def _columns_to_motors(file: str, rows: list[list[str]]) -> dict[str, Figures]:
    parts = next(r for r in rows if any(c in TRUTH for c in r))
    parts = [p for p in parts if p in TRUTH]
    motors: dict[str, Figures] = {p: {} for p in parts}
    for row in rows:
        label = row[0].lstrip("0123456789 ") if row else ""
        found = _match(file, label)
        if not found or len(row) < 3:
            continue
        values = [v for v in row[2:] if v]
        values = values * len(parts) if len(values) == 1 else values
        for part, text in zip(parts, values, strict=True):
            motors[part][found[0]] = _figure(text, found[1], ".")
    return motors


def _rows_to_motors(file: str, rows: list[list[str]], decimal: str) -> dict[str, Figures]:
    first = next(i for i, r in enumerate(rows) if r and r[0] in TRUTH)
    head = rows[first - 2] if file.endswith(".tsv") else rows[first - 1]
    if file == "wobbleton.csv":
        group, joined = "", []
        for top, name in zip(rows[first - 2], head, strict=True):
            group = top or group
            joined.append(f"{group} {name}")
        head = joined
    found = [_match(file, h) for h in head]
    return {
        row[0]: {
            f[0]: _figure(text, f[1], decimal)
            for f, text in zip(found, row, strict=True)
            if f is not None
        }
        for row in rows
        if row and row[0] in TRUTH
    }


def _read(file: str) -> dict[str, Figures]:
    text = (SAMPLES / file).read_text("utf-8")
    if file.endswith(".html"):
        table = _Table()
        table.feed(text)
        return _columns_to_motors(file, table.rows)
    sign = {"quasselbach.csv": ";", "grisoulette.csv": ";", "gopher_notch.tsv": "\t"}
    rows = list(csv.reader(text.splitlines(), delimiter=sign.get(file, ",")))
    if file.startswith("brindlewick"):
        return _columns_to_motors(file, rows)
    return _rows_to_motors(file, rows, "," if sign.get(file) == ";" else ".")


PRINTED = {part: row for file in HEADINGS for part, row in _read(file).items()}
PARTS = sorted(PRINTED)


def _relations(part: str, f: Figures) -> list[tuple[str, set[str], float]]:
    """(name, figures used, quotient that is 1 for a consistent motor)."""
    v = {key: value for key, (value, _) in f.items()}
    servo = TRUTH[part]["commutation"] == "sinusoidal"
    out: list[tuple[str, set[str], float]] = []

    def relation(name: str, *keys: str, value: object) -> None:
        if all(k in v for k in keys):
            out.append((name, set(keys), value(*(v[k] for k in keys))))  # type: ignore[operator]

    kt, ke, r = "torque_constant", "back_emf_constant", "terminal_resistance"
    tau, j, g = "mechanical_time_constant", "rotor_inertia", "speed_torque_gradient"
    i0, isk, u = "no_load_current", "stall_current", "nominal_voltage"
    iN, tN, nN = "nominal_current", "nominal_torque", "nominal_speed"
    # A rms against V rms line-to-line: √3 when sinusoidal
    relation("Kt=Ke", kt, ke, value=lambda t, e: t / e / (math.sqrt(3) if servo else 1))
    relation("Kt·Kn", kt, "speed_constant", value=lambda t, n: t * n)
    relation("τe", "electrical_time_constant", "terminal_inductance", r,
             value=lambda t, L, R: t * R / L)  # fmt: skip
    relation("2p", "poles", "pole_pairs", value=lambda n, p: n / (2 * p))
    relation("PN", "rated_power", tN, nN, value=lambda P, T, n: P / (T * n))
    if servo:
        drag = f["friction_torque"][0]
        relation("T0", "continuous_stall_torque", "continuous_stall_current", kt,
                 value=lambda T, i, k: (T + drag) / (k * i))  # fmt: skip
        relation("TN", tN, iN, kt, value=lambda T, i, k: (T + drag) / (k * i))
        relation("Tp", "peak_torque", "peak_current", kt,
                 value=lambda T, i, k: T / (0.92 * k * i))  # fmt: skip
        return out
    relation("Is", isk, u, r, value=lambda i, U, R: i * R / U)
    relation("g", g, r, kt, value=lambda s, R, k: s * k * k / R)
    relation("Km/√R", "motor_constant", kt, r, value=lambda m, k, R: m * math.sqrt(R) / k)
    relation("τm", tau, j, r, kt, value=lambda t, J, R, k: t * k * k / (J * R))
    relation("n0", "no_load_speed", u, r, i0, kt, value=lambda n, U, R, i, k: n * k / (U - R * i))
    relation("nN", nN, u, r, iN, kt, value=lambda n, U, R, i, k: n * k / (U - R * i))
    relation("TN", tN, iN, i0, kt, value=lambda T, i, z, k: T / (k * (i - z)))
    gross = TRUTH[part]["file"] == "gopher_notch.tsv"
    relation("Ts", "stall_torque", kt, u, r, i0,
             value=lambda T, k, U, R, z: T / (k * (U / R - (0 if gross else z))))  # fmt: skip
    relation("η", "maximum_efficiency", i0, isk,
             value=lambda e, z, i: e / (1 - math.sqrt(z / i)) ** 2)  # fmt: skip
    relation("Tf", "friction_torque", "viscous_damping", "no_load_speed", i0, kt,
             value=lambda c, b, n, z, k: (c + b * n) / (k * z))  # fmt: skip
    total = v.get("rth") or v["rth1"] + v["rth2"]
    hottest = v.get("maximum_winding_temperature") or (v["fahrenheit"] - 32) / 1.8
    reference = TRUTH[part]["reference_temperature"]
    hot = (234.5 + hottest) / (234.5 + reference)  # copper, IEC 60034-1
    relation("heat", iN, r, value=lambda i, R: total * i * i * R * hot / (hottest - reference))
    return out


def test_files_are_what_the_script_writes(tmp_path: Path) -> None:
    script = SAMPLES / "make_samples.py"
    run = subprocess.run([sys.executable, script, "--check"], capture_output=True, text=True)
    assert run.returncode == 0, run.stderr
    for path in SAMPLES.iterdir():
        if path.is_file():
            (tmp_path / path.name).write_bytes(path.read_bytes())
    sheet = tmp_path / "quasselbach.csv"
    sheet.write_text(sheet.read_text("utf-8").replace("7,65", "7,66"), "utf-8")
    run = subprocess.run(
        [sys.executable, tmp_path / "make_samples.py", "--check"], capture_output=True, text=True
    )
    assert run.returncode == 1
    assert "quasselbach.csv" in run.stderr


def test_script_is_independent_of_the_program() -> None:
    for path in SAMPLES.glob("*.py"):
        code = path.read_text("utf-8")
        assert "import motorfolio" not in code
        assert "from motorfolio" not in code


def test_every_motor_is_printed_and_none_twice() -> None:
    assert len(PARTS) == 64
    assert set(PARTS) == set(TRUTH)
    assert {m["commutation"] for m in TRUTH.values()} == {"brushed", "block", "sinusoidal"}


@pytest.mark.parametrize("part", PARTS)
def test_printed_figures_agree_with_each_other(part: str) -> None:
    faulty = {figure for p, figure in FAULTY if p == part}
    for name, used, quotient in _relations(part, PRINTED[part]):
        digits = sum(PRINTED[part][key][1] * 2 for key in used)
        if not used & faulty:
            assert quotient == pytest.approx(1, abs=0.022 + digits), (part, name)


@pytest.mark.parametrize("part", PARTS)
def test_printed_constants_agree_with_truth(part: str) -> None:
    """Printed Kt, R, L, J, I0 reduced to the DC motor at 25 °C: scatter ≤ 1 % and the digits."""
    truth, constants = TRUTH[part], TRUTH[part]["constants"]
    v = PRINTED[part]
    servo = truth["commutation"] == "sinusoidal"
    dT = 25 - truth["reference_temperature"]
    magnet = {"NdFeB": -0.0011, "ferrite": -0.0020}[truth["magnet"]]
    warm = {
        # copper constant 234.5 °C: IEC 60034-1; magnet: common practice, no source
        "terminal_resistance": (234.5 + 25) / (234.5 + 25 - dT),
        "torque_constant": (1 / math.sqrt(1.5) if servo else 1) / (1 - magnet * dT),
        "no_load_current": 1 - magnet * dT,
    }
    names = {
        "torque_constant": "torque_constant",
        "terminal_resistance": "armature_resistance",
        "terminal_inductance": "armature_inductance",
        "rotor_inertia": "rotor_inertia",
        "no_load_current": "no_load_current",
    }
    for figure, constant in names.items():
        if figure in v and (part, figure) not in FAULTY:
            value, half = v[figure]
            at_25 = value * warm.get(figure, 1.0)
            assert at_25 == pytest.approx(constants[constant], rel=0.0105 + half), (part, figure)
    assert constants["torque_constant"] / math.sqrt(constants["armature_resistance"]) == (
        pytest.approx(constants["motor_constant"], rel=1e-4)
    )


def test_windings_of_a_series_are_a_family() -> None:
    series: dict[str, list[dict]] = {}
    for motor in TRUTH.values():
        series.setdefault(motor["series"], []).append(motor["constants"])
    assert all(len(windings) >= 3 for windings in series.values())
    for windings in series.values():
        for value in (
            lambda c: c["torque_constant"] / math.sqrt(c["armature_resistance"]),
            lambda c: c["armature_resistance"] / c["torque_constant"] ** 2,
            lambda c: c["armature_inductance"] / c["armature_resistance"],
            lambda c: c["rotor_inertia"],
        ):
            values = [value(c) for c in windings]
            assert max(values) == pytest.approx(min(values), rel=1e-4)
        friction = [c["torque_constant"] * c["no_load_current"] for c in windings]
        assert max(friction) == pytest.approx(min(friction), rel=0.05)


@pytest.mark.parametrize("part", [p for p in PARTS if TRUTH[p]["commutation"] == "sinusoidal"])
def test_servo_rated_point_lies_within_the_bus(part: str) -> None:
    c, f = TRUTH[part]["constants"], TRUTH[part]["figures"]
    Ia = math.sqrt(1.5) * f["nominal_current"]
    speed = f["nominal_speed"]
    resistive = c["armature_resistance"] * Ia + c["torque_constant"] * speed
    inductive = TRUTH[part]["pole_pairs"] * speed * c["armature_inductance"] * Ia
    assert math.hypot(resistive, inductive) < f["nominal_voltage"]


@pytest.mark.parametrize("plant", PLANTED, ids=lambda p: f"{p['part_number']}-{p['figure']}")
def test_planted_faults_are_really_there(plant: dict) -> None:
    part, figure = plant["part_number"], plant["figure"]
    value, half = PRINTED[part][figure]
    assert value == pytest.approx(plant["printed"]["value"], rel=1e-4)
    assert plant["true_value"] == pytest.approx(TRUTH[part]["figures"][figure], rel=1e-5)
    assert abs(math.log(value / plant["true_value"])) > 0.25
    broken = [
        name
        for name, used, quotient in _relations(part, PRINTED[part])
        if figure in used and not 0.82 < quotient < 1.22
    ]
    # constants stand in several relations, the others in one or two
    constant = figure in ("torque_constant", "terminal_resistance")
    assert len(broken) >= (2 if constant else 1), broken
    # with the true value in its place everything agrees again
    others = {p["figure"]: p["true_value"] for p in PLANTED if p["part_number"] == part}
    mended = PRINTED[part] | {key: (true, half) for key, true in others.items()}
    for name, used, quotient in _relations(part, mended):
        digits = sum(mended[key][1] * 2 for key in used)
        assert quotient == pytest.approx(1, abs=0.022 + digits), (part, name)


RATIOS = {
    "power-of-ten": 10,
    "hot-vs-cold": (234.5 + 125) / (234.5 + 20),
    "rpm-vs-rad-per-second": RPM,
    "ounce-inch-vs-millinewton-metre": 7.061552,
    "inertia-convention": 386.09,
    "line-vs-phase": 1 / 2,
    "poles-vs-pole-pairs": 2,
    "peak-vs-rms": 1 / math.sqrt(2),
    "kilogram-force-vs-newton": 0.0980665,
}


def test_planted_causes_have_their_ratios() -> None:
    assert len({p["part_number"] for p in PLANTED}) == len({p["cause"] for p in PLANTED}) == 12
    for plant in PLANTED:
        ratio = RATIOS.get(plant["cause"])
        if ratio:
            found = plant["printed"]["value"] / plant["true_value"]
            assert found == pytest.approx(ratio, rel=0.015), plant["part_number"]
    by_part = {(p["part_number"], p["figure"]): p["printed"]["value"] for p in PLANTED}
    assert by_part["BRIN-10-F", "stall_current"] == PRINTED["BRIN-10-G"]["stall_current"][0]
    true = TRUTH["MARMOT-4"]["figures"]
    swapped = by_part["MARMOT-4", "terminal_resistance"]
    assert swapped == pytest.approx(1e3 * true["terminal_inductance"], rel=0.015)
    swapped = by_part["MARMOT-4", "terminal_inductance"]
    assert swapped == pytest.approx(1e-3 * true["terminal_resistance"], rel=0.015)
    right = TRUTH["BRIN-22-D"]["figures"]["torque_constant"]
    digits = [f"{x * 1e3:.1f}" for x in (right, by_part["BRIN-22-D", "torque_constant"])]
    assert sorted(digits[0]) == sorted(digits[1])
    assert digits[0] != digits[1]


def test_gears_and_machines_can_be_read() -> None:
    rows = list(csv.reader((SAMPLES / "gears.csv").read_text("utf-8").splitlines()))
    head, gears = rows[1], rows[2:]
    assert len(gears) == 25
    at = {name.split(" [")[0]: i for i, name in enumerate(head)}
    for gear in gears:
        assert 0.5 < float(gear[at["Efficiency"]]) / 100 < 1
        assert float(gear[at["Peak output torque"]]) > float(gear[at["Continuous output torque"]])
    assert len({g[0] for g in gears}) == 25
    machines = sorted((SAMPLES / "machines").glob("*.toml"))
    assert [m.stem for m in machines] == ["hand_tool", "lift_axis", "rotary_table"]
    for machine in machines:
        document = tomllib.loads(machine.read_text("utf-8"))
        assert "(invented)" in document["title"]
        assert document["load"]
        assert document["supply"]
