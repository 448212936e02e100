"""The commands search, operate and gears as a user calls them."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from motorfolio.catalog.cli import main
from motorfolio.catalog.importing.gears import import_gears

from .made import SAMPLES, sample_catalog

POINT = ["--torque", "0.1 N·m", "--speed", "3000 rpm", "--supply", "24 V"]


@pytest.fixture(scope="module")
def file(tmp_path_factory) -> str:
    path = sample_catalog(tmp_path_factory.mktemp("samples") / "c.sqlite")
    import_gears(path, [SAMPLES / "gears.csv"])
    return str(path)


@pytest.fixture
def run(file, capsys):
    def call(*words: str) -> tuple[int, str, str]:
        status = main([words[0], *words[1:], "--catalog", file])
        out = capsys.readouterr()
        return status, out.out, out.err

    return call


def test_json_is_the_interface(run) -> None:
    status, out, err = run("search", *POINT, "--json", "--limit", "3")
    document = json.loads(out)
    assert status == 0
    assert not err
    counts = document["counts"]
    assert counts["considered"] == 64
    assert counts["considered"] == (
        counts["feasible"] + counts["unknown"] + sum(counts["rejected"].values())
    )
    assert len(document["candidates"]) == 3
    for c in [*document["candidates"], *document["near_misses"]]:
        assert {
            "part_number", "maker", "feasible", "ratio", "ratio_interval", "ratio_intervals",
            "utilisation", "limiting", "peak_current", "rms_current", "peak_voltage",
            "peak_speed", "winding_temperature", "copper_loss", "mass",
        } <= set(c)  # fmt: skip
        assert set(c["peak_current"]) == {"value", "unit"}
        assert c["limiting"] in c["utilisation"]
    assert all(c["feasible"] for c in document["candidates"])
    assert not any(c["feasible"] for c in document["near_misses"])
    assert all(c["needs"] and c["changes"] for c in document["near_misses"])
    masses = [c["mass"]["value"] for c in document["candidates"]]
    assert masses == sorted(masses)


def test_the_point_by_hand(run) -> None:
    """Each candidate's current, voltage and speed from its constants: T = Km·(I − I0) with the
    motor no colder than 25 °C, U = Ra·I + Km·ω at least (the cold values bound the hot ones)."""
    _, out, _ = run("search", *POINT, "--json", "--where", "commutation = brushed")
    truth = json.loads((SAMPLES / "truth.json").read_text(encoding="utf-8"))["motors"]
    pairs = [(c, truth[c["part_number"]]["constants"]) for c in json.loads(out)["candidates"]]
    plain = [(c, k) for c, k in pairs if k["viscous_damping"] == 0]
    assert plain
    for c, k in plain:
        friction = k["torque_constant"] * k["no_load_current"]
        current = (0.1 + friction) / k["torque_constant"]
        assert c["peak_speed"]["value"] == pytest.approx(314.159, rel=1e-5)
        hot = c["peak_current"]["value"] / current
        assert 1 - 1e-9 < hot < 1.4
        voltage = k["armature_resistance"] * current + k["torque_constant"] * 314.159
        assert c["peak_voltage"]["value"] >= voltage * (1 - 1e-3)
        assert c["utilisation"]["voltage"] == pytest.approx(c["peak_voltage"]["value"] / 24)


@pytest.mark.parametrize("name", ["lift_axis", "rotary_table", "hand_tool"])
def test_sample_machines_find_a_motor(run, name: str) -> None:
    status, out, _ = run("search", "--requirement", str(SAMPLES / "machines" / f"{name}.toml"))
    assert status == 0
    assert "motors: " in out
    assert "Near misses:" in out
    assert max(map(len, out.splitlines())) <= 80


def test_explain_prints_the_cycle(run) -> None:
    path = str(SAMPLES / "machines" / "lift_axis.toml")
    status, out, _ = run("search", "--requirement", path, "--explain")
    assert status == 0
    assert "358.1" in out  # rpm of the pulley: 0.75 m/s on 20 mm
    assert "Peak torque 2.472 N·m" in out
    status, out, _ = run("search", "--requirement", path, "--explain", "--json")
    document = json.loads(out)
    assert len(document["cycle"]) == 8
    assert document["as_given"]["load"]["kind"] == "belt"


def test_gears_flag(run) -> None:
    path = str(SAMPLES / "machines" / "rotary_table.toml")
    document = ["search", "--load-inertia", "0.08 kg·m²", "--torque", "3 N·m", "--speed", "60 rpm",
                "--supply", "48 V", "--gears", "--json"]  # fmt: skip
    status, out, _ = run(*document)
    assert status == 0
    for c in json.loads(out)["candidates"]:
        assert c["gear"]["part_number"].startswith("WHORL-")
        assert c["ratio"] == c["gear"]["ratio"]
        assert c["utilisation"]["gear_torque"] <= 1
    assert run("search", "--requirement", path, "--gears")[0] == 2  # it tells an efficiency itself


def test_none_found_is_status_1(run) -> None:
    status, out, err = run("search", "--torque", "900 N·m", "--speed", "3000 rpm")
    assert status == 1
    assert "No motor does it" in out
    assert "Near misses" not in out
    assert "no single change" in err


@pytest.mark.parametrize(
    ("where", "said"),
    [
        (["maker = Quasselbach"], 'the catalog has "Quasselbach Kleinantriebe (erfunden)"'),
        (["maker = Quaselbach"], 'the catalog has "Quasselbach Kleinantriebe (erfunden)"'),
        (["part_number = rin-22"], 'has "BRIN-22-A" or "BRIN-22-B" or "BRIN-22-C"'),
        (["mass > 90 kg"], 'No motor passes --where "mass > 90 kg".'),
        (["length < 1 mm", "mass < 0.1 kg"], '--where "length < 1 mm"'),
        (["mass < 0.1 kg", "mass > 1 kg"], "together; each alone passes: mass < 0.1 kg 14,"),
    ],
)
def test_limits_that_no_motor_passes_say_so_first(run, where, said) -> None:
    words = [word for limit in where for word in ("--where", limit)]
    status, out, err = run("search", *POINT, *words)
    lines = " ".join(out.split("\n"))
    assert status == 1
    assert said in " ".join(lines.split())
    assert out.splitlines()[1].startswith("No motor passes")
    assert err.startswith("No motor passes --where")
    document = json.loads(run("search", *POINT, *words, "--json")[1])
    assert document["counts"]["pass_where"] == 0
    assert [held["limit"] for held in document["where"]] == where


def test_near_misses_are_only_pointed_to_where_there_are_some(run) -> None:
    status, out, err = run("search", *POINT, "--where", "mass < 60 g", "--reserve", "99 %")
    assert status == 1
    assert ("Near misses" in out) == ("near misses" in err)
    assert "that pass --where" in err


@pytest.mark.parametrize(
    ("order", "heading", "key", "factor"),
    [
        ("diameter", "diameter mm", "diameter", 1e3),
        ("copper-loss", "loss W", "copper_loss", 1.0),
        ("price", "price", "price", 1.0),
        ("mass", "mass kg", "mass", 1.0),
    ],
)
def test_the_table_shows_what_it_is_ordered_by(run, order, heading, key, factor) -> None:
    words = ["search", *POINT, "--order-by", order, "--limit", "4"]
    document = json.loads(run(*words, "--json")[1])
    figures = [c["ranked_by"]["value"] for c in document["candidates"]]
    known = [f for f in figures if f is not None]
    assert known == sorted(known)
    assert figures == [c.get(key, {"value": None})["value"] for c in document["candidates"]]
    lines = run(*words)[1].splitlines()
    assert heading in lines[1]
    column = [line[lines[1].index(heading) :].split()[0] for line in lines[2:6]]
    shown = [float(f"{factor * f:.4g}") for f in known]
    assert [float(text) for text in column if text[0].isdigit()] == pytest.approx(shown, rel=6e-3)


def test_a_motor_that_only_brakes_returns_power(run) -> None:
    """50 mN·m against the motion at 3000 rpm drives the motor with 15.7 W, less its losses."""
    words = ["search", "--torque", "-50 mN·m", "--speed", "3000 rpm", "--limit", "1"]
    out = run(*words)[1]
    said = " ".join(out.split())
    assert "draws nothing: it returns " in said
    assert "-" not in said.split("returns ")[1].split(".")[0]
    supply = json.loads(run(*words, "--json")[1])["candidates"][0]["supply"]
    assert -15.71 < supply["mean_power"]["value"] < 0


def test_the_ratio_at_a_range_s_end_is_that_end(run) -> None:
    """Without inertia the least copper loss is at the largest ratio: exactly what was asked."""
    words = ["--torque", "1 N·m", "--speed", "10 rpm", "--supply", "48 V", "--ratio", "3..120"]
    found = json.loads(run("search", *words, "--json")[1])["candidates"]
    ends = [c for c in found if c["ratio"] > 119.9]
    assert ends
    for c in ends:
        assert c["ratio"] == c["ratio_interval"][1] == 120.0
    assert all(c["maker"] for c in found)


REQUIREMENTS = [
    [*POINT, "--supply-power", "50 W"], [*POINT, "--supply-current", "5 A", "--ratio", "2..9"],
    [*POINT, "--gears"], [*POINT, "--inertia-ratio", "3", "--worst-case", "printed"],
    [*POINT, "--pwm-frequency", "20 kHz", "--where", "maker = X", "--where", "price < 5 EUR"],
    *(["--requirement", str(SAMPLES / "machines" / f"{name}.toml")]
      for name in ("lift_axis", "rotary_table", "hand_tool")),
]  # fmt: skip


@pytest.mark.parametrize("asked", REQUIREMENTS, ids=range(len(REQUIREMENTS)))
def test_an_empty_catalog_says_so(tmp_path, capsys, asked) -> None:
    path = str(tmp_path / "empty.sqlite")
    assert main(["gears", str(SAMPLES / "gears.csv"), "--catalog", path]) == 0
    capsys.readouterr()
    assert main(["search", *asked, "--catalog", path]) == 1
    out = capsys.readouterr()
    assert out.out == ""
    assert out.err == "The catalog has no motors; read a table first: motorfolio import FILE.\n"
    assert main(["search", *asked, "--json", "--catalog", path]) == 1
    assert json.loads(capsys.readouterr().out)["counts"]["considered"] == 0


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--torque", "0.1", "--speed", "1 rpm"], "--torque: "),
        (["--torque", "1 N·m"], "--torque is given, --speed is not; give both"),
        (["--speed", "1 rpm", "--speed", "2 rpm", "--torque", "1 N·m"], "once, --speed twice"),
        ([*POINT, "--duration", "1 s", "--duration", "2 s"], "twice for 1 point;"),
        (["--torque", "1 N·m", "--speed", "1 rpm", "--cycle", "c.csv"], "--torque and --cycle"),
        (["--cycle", "c.csv"], "no cycle file"),
        ([*POINT, "--ratio", "20..3"], "--ratio: "),
        ([*POINT, "--gear-efficiency", "130 %"], "--gear-efficiency: "),
        ([*POINT, "--ambient", "180 °C"], "give a cooler one"),
        ([*POINT, "--limit", "x"], "--limit"),
        ([*POINT, "--where", "mass"], "is no limit"),
        ([*POINT, "--requirement", "none.toml"], "no requirement file"),
        ([*POINT, "--current", "5 V"], "--current: "),
        ([*POINT, "--worst-case", "200 %"], "--worst-case"),
        ([], "--torque and --speed"),
    ],
)  # fmt: skip
def test_bad_calls_end_in_one_sentence(run, words, said) -> None:
    status, out, err = run("search", *words)
    assert status == 2
    assert out == ""
    assert err.startswith("motorfolio: ")
    assert said in err
    assert len(err.strip().splitlines()) == 1


def test_schema_and_saved_requirement(run, tmp_path: Path, capsys) -> None:
    main(["schema", "requirement"])
    out = capsys.readouterr().out
    assert json.loads(out)["title"] == "motorfolio requirement"
    saved = tmp_path / "asked.toml"
    first = run("search", *POINT, "--reserve", "10 %", "--json", "--save-requirement", str(saved))
    second = run("search", "--requirement", str(saved), "--json")
    assert json.loads(first[1])["candidates"] == json.loads(second[1])["candidates"]


def test_a_search_loads_nothing_it_does_not_need(file: str) -> None:
    words = ["search", *POINT, "--json", "--catalog", file]
    code = (
        "import sys\nfrom motorfolio.catalog.cli import main\n"
        f"main({words!r})\n"
        "heavy = {'pint', 'pydantic', 'sqlite_utils', 'rapidfuzz', 'rich', 'lxml'}\n"
        "print(sorted(heavy & set(sys.modules)), file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stderr.splitlines()[-1] == "[]"


# ---- a motor at work


def test_operate_against_the_circuit_equation(run) -> None:
    """A brushed motor at 60 % of 12 V: ω = (U − Ra·(T + T_f)/Km)/Km, from its true constants."""
    truth = json.loads((SAMPLES / "truth.json").read_text(encoding="utf-8"))["motors"]
    name = next(n for n, m in truth.items() if m["commutation"] == "brushed")
    k = truth[name]["constants"]
    Km, Ra = k["torque_constant"], k["armature_resistance"]
    status, out, err = run("operate", name, "--supply", "1.5 V", "--duty", "60 %",
                           "--torque", "0.2 mN·m", "--current", "0.5 A", "--json")  # fmt: skip
    assert status == 0
    assert err == ""
    document = json.loads(out)
    friction = Km * k["no_load_current"]
    found = document["voltage_control"]
    speed = (0.9 - Ra * (0.2e-3 + friction) / Km) / Km
    assert found["speed"]["value"] == pytest.approx(speed, rel=1e-3)
    assert found["current"]["value"] == pytest.approx((0.2e-3 + friction) / Km, rel=1e-3)
    torque = document["current_control"]["stall_torque"]["value"]
    assert torque == pytest.approx(Km * 0.5 - friction, rel=1e-3)
    acceleration = document["current_control"]["acceleration"]["value"]
    assert acceleration == pytest.approx((torque - 0.2e-3) / k["rotor_inertia"], rel=1e-3)


def test_a_load_beyond_stall_does_not_hold(run) -> None:
    """Stall torque Km·(U/Ra − I0) from the true constants; 25 times as much turns it backward,
    and a load that friction still holds leaves it standing."""
    truth = json.loads((SAMPLES / "truth.json").read_text(encoding="utf-8"))["motors"]
    name = next(n for n, m in truth.items() if m["commutation"] == "brushed")
    k = truth[name]["constants"]
    Km, Ra, I0 = k["torque_constant"], k["armature_resistance"], k["no_load_current"]
    stall = Km * (1.5 / Ra - I0)
    status, out, _ = run("operate", name, "--supply", "1.5 V", "--torque", f"{25 * stall} N·m")
    assert status == 1
    assert "25 times the stall torque" in out
    assert "would drive the motor backward" in out
    assert " W" not in out.split("Note:")[0]
    status, out, _ = run(
        "operate", name, "--supply", "1.5 V", "--current", "0.1 A", "--torque",
        f"{25 * stall} N·m", "--json",
    )  # fmt: skip
    document = json.loads(out)
    assert status == 1
    assert not document["holds"]
    found = document["voltage_control"]["torque_at_standstill"]["value"]
    assert found == pytest.approx(stall, rel=3e-3)
    assert "speed" not in document["voltage_control"]
    assert len(document["notes"]) == 2
    held = stall + Km * I0
    status, out, _ = run("operate", name, "--supply", "1.5 V", "--torque", f"{held} N·m")
    assert status == 0
    assert "the shaft stands" in out
    shorted = ["--supply", "1.5 V", "--duty", "0"]
    status, out, _ = run("operate", name, *shorted, "--torque", f"{stall} N·m")
    assert status == 1
    assert "more than friction holds" in out


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["TERN-30"], "--supply, --current, or both"),
        (["NO-SUCH", "--current", "1 A"], "no motor NO-SUCH"),
        (["TERN-30", "--current", "1"], "--current: "),
        (["TERN-30", "--current", "1 A", "--duty", "120 %"], "--duty"),
        (["TERN-30", "--current", "1 A", "--deceleration", "1 rad/s²"], "give --speed"),
        (["TERN-30", "--supply", "-1 V"], "below 0"),
        (["TERN-30", "--supply", "0 V"], "no supply"),
    ],
)
def test_bad_calls_of_operate(run, words, said) -> None:
    status, out, err = run("operate", *words)
    assert status == 2
    assert out == ""
    assert said in err


def test_operate_prints_lines(run) -> None:
    status, out, err = run("operate", "TERN-30", "--supply", "320 V", "--current", "5 A",
                           "--speed", "3000 rpm", "--deceleration", "500 rad/s²")  # fmt: skip
    assert status == 0
    assert "Voltage control:" in out
    assert "Current control:" in out
    assert "Braking:" in out
    assert "maker's current datasheet" in out
    assert "torque at this current" in out
    assert not err


# ---- gears


def test_gears_are_read_listed_and_replaced(tmp_path: Path, capsys) -> None:
    catalog = str(tmp_path / "g.sqlite")
    words = ["gears", str(SAMPLES / "gears.csv"), "--catalog", catalog]
    assert main(words) == 0
    assert main(words) == 0
    capsys.readouterr()
    assert main(["gears", "--catalog", catalog, "--json"]) == 0
    gears = json.loads(capsys.readouterr().out)["gears"]
    assert len(gears) == 25
    first = next(g for g in gears if g["part_number"] == "WHORL-22-16")
    # by hand from the table: 90 %, 0.4 g·cm², 0.33 N·m, 10000 rpm, 22 arcmin, 57 g
    assert first["efficiency"] == pytest.approx(0.9)
    assert first["inertia"]["value"] == pytest.approx(0.4e-7)
    assert first["continuous_torque"]["value"] == pytest.approx(0.33)
    assert first["maximum_input_speed"]["value"] == pytest.approx(1047.1976)
    assert first["backlash"]["value"] == pytest.approx(22 / 60 * 3.14159265 / 180)
    assert first["mass"]["value"] == pytest.approx(0.057)
    assert (first["price"]["value"], first["price"]["unit"]) == (67.6, "EUR")
    assert first["maker"] == "Snailcroft Gearworks (invented)"


def test_a_table_without_gears_is_refused(tmp_path: Path, capsys) -> None:
    catalog = tmp_path / "g.sqlite"
    status = main(["gears", str(SAMPLES / "quasselbach.csv"), "--catalog", str(catalog)])
    assert status == 2
    assert "no table of gears" in capsys.readouterr().err
    assert not catalog.exists()


def test_odd_cells_of_gears_are_told(tmp_path: Path, capsys) -> None:
    sheet = tmp_path / "odd.csv"
    sheet.write_text(
        "Part number,Ratio,Efficiency [%],Mass [g],Colour\n"
        "A-1,5,180,10,red\nA-2,,90,10,red\nA-3,7,90,ten,red\n",
        encoding="utf-8",
    )
    catalog = str(tmp_path / "g.sqlite")
    assert main(["gears", str(sheet), "--catalog", catalog, "--json"]) == 0
    out, err = capsys.readouterr()
    gears = {g["part_number"]: g for g in json.loads(out)["gears"]}
    assert set(gears) == {"A-1", "A-3"}
    assert gears["A-1"]["efficiency"] is None
    assert gears["A-3"]["mass"]["value"] is None
    assert "no possible value" in err
    assert "needs a part number and a ratio" in err
    assert "“ten” is unread" in err
    assert "“Colour” is unread" in err


def test_real_gears_beside_a_file_with_an_efficiency_name_the_files_own_key(run) -> None:
    machine = SAMPLES / "machines" / "rotary_table.toml"
    status, _, err = run("search", "--gears", "--requirement", str(machine))
    assert status == 2
    assert "leave out gear.efficiency" in err
    assert "--gear-efficiency" not in err


def test_a_single_point_is_a_power_and_counts_agree_in_number(run) -> None:
    _, out, _ = run("search", *POINT, "--where", "part_number = GRILLON-A")
    assert "1 motor: " in out or "64 motors: " in out
    assert "J a cycle" not in out
    assert "1 do " not in out
    assert "1 are " not in out
