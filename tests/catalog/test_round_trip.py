"""An export of all sample sheets is read back without loss: names, figures with their intervals,
conventions, texts, reference temperatures, and with them the constants."""

from pathlib import Path

import pytest

from motorfolio.catalog.exporting import as_text, export_parquet, read_units
from motorfolio.catalog.importing.run import Options, import_files
from motorfolio.catalog.store import Catalog

SAMPLES = Path(__file__).resolve().parents[2] / "sample_entries"
SHEETS = [
    str(SAMPLES / name)
    for name in (
        "wobbleton.csv",
        "brindlewick_10.csv",
        "brindlewick_22.csv",
        "quasselbach.csv",
        "gopher_notch.tsv",
        "grisoulette.csv",
        "tanuki_hollow.html",
    )
]
"""A sheet with figures of its frames stands before sheets whose motors name no series."""

KINDS = ("current", "voltage", "between", "connection", "temperature", "shape", "basis")
Motors = dict[tuple[str, str], dict]


def motors_of(catalog: Path) -> Motors:
    with Catalog.open(catalog) as opened:
        return {(m["maker"], m["part_number"]): m for m in opened.motors()}


@pytest.fixture(scope="module")
def original(tmp_path_factory) -> Path:
    path = tmp_path_factory.mktemp("original") / "c.sqlite"
    import_files(path, SHEETS, Options())
    return path


@pytest.fixture(scope="module", params=["csv", "json", "toml", "parquet"])
def again(request, original, tmp_path_factory) -> Motors:
    folder = tmp_path_factory.mktemp(request.param)
    file = folder / f"export.{request.param}"
    with Catalog.open(original) as opened:
        if request.param == "parquet":
            export_parquet(opened, file)
        else:
            file.write_text(as_text(opened, request.param), encoding="utf-8")
    import_files(folder / "c.sqlite", [str(file)], Options())
    return motors_of(folder / "c.sqlite")


def test_every_motor_with_series_kind_and_reference_temperature(original, again):
    first = motors_of(original)
    assert first.keys() == again.keys()
    for name, motor in first.items():
        other = again[name]
        assert motor["series"] == other["series"]
        for key in ("commutation", "magnet", "reference_temperature"):
            assert motor["model"][key]["value"] == other["model"][key]["value"], (name, key)


def test_every_figure_with_its_interval_and_convention(original, again):
    for name, motor in motors_of(original).items():
        figures = again[name]["figures"]
        assert motor["figures"].keys() == figures.keys(), name
        for key, figure in motor["figures"].items():
            other = figures[key]
            if isinstance(figure["value"], str):
                assert other["value"] == figure["value"]
                continue
            for part, rel in (("value", 1e-9), ("low", 1e-6), ("high", 1e-6)):
                assert other[part] == pytest.approx(figure[part], rel=rel), (name, key, part)
            for kind in KINDS:
                stated = (figure["convention"] or {}).get(kind)
                assert (other["convention"] or {}).get(kind) == stated, (name, key, kind)


def test_the_constants_and_alarms_that_follow(original, again):
    """Within their intervals: how far a whole table scatters has a say, and the export is one."""
    for name, motor in motors_of(original).items():
        for key, constant in motor["constants"].items():
            found = again[name]["constants"][key]["value"]
            width = max(constant["high"] - constant["low"], 1e-6 * constant["value"])
            assert abs(found - constant["value"]) <= width, (name, key)
        # which cells were exchanged shows in the printed numbers only, which CSV in SI has not
        assert doubted(again[name]) >= doubted(motor), name
        assert bool(doubted(motor)) == bool(doubted(again[name])), name


def doubted(motor: dict) -> set[str | None]:
    return {f["suspect"] for f in motor["findings"] if f["severity"] != "note"}


SHEETS_OF_TWO_KINDS = {
    # conventions that no sheet states; with these figures only rms currents fit
    "servo": """\
Part number,Commutation,Rated voltage [V],Torque constant [N·m/A],Voltage constant [V/krpm],\
Resistance [Ω],Pole pairs
WALRUS-1,sinusoidal,320,1.05,63.5,7.40,4
WALRUS-2,sinusoidal,320,2.10,127,14.40,4
WALRUS-3,sinusoidal,320,1.50,90.7,7.40,4
""",
    # a figure given twice, a range, a limit, and digits that SI numbers don't show
    "block": """\
Part number,Commutation,Supply voltage [V],Torque constant [N·m/A],Torque constant [oz-in/A],\
Voltage constant trapezoidal [V peak line-to-line/krpm],Resistance [Ω],Mass [g]
T-1,block,24,0.105,14.9,11.0,0.4000,≤ 450
T-2,block,24,0.0525,7.43,5.50,0.10,300
""",
}


@pytest.mark.parametrize("format_", ["csv", "json", "toml", "parquet"])
@pytest.mark.parametrize("in_units", [False, True])
def test_what_was_inferred_given_twice_or_qualified_stays_so(tmp_path, format_, in_units):
    for name, text in SHEETS_OF_TWO_KINDS.items():
        (tmp_path / f"{name}.csv").write_text(text, encoding="utf-8")
    first, second = tmp_path / "a.sqlite", tmp_path / "b.sqlite"
    sheets = [str(tmp_path / f"{name}.csv") for name in SHEETS_OF_TWO_KINDS]
    import_files(first, sheets, Options(maker="Puffinworks"))
    units = None
    if in_units and format_ in ("csv", "parquet"):
        (tmp_path / "units.toml").write_text(
            'torque_constant = "oz-in/A"\nmass = "lb"\nback_emf_constant = "V/krpm"\n'
        )
        units = read_units(tmp_path / "units.toml")
    out = tmp_path / f"out.{format_}"
    with Catalog.open(first) as opened:
        if format_ == "parquet":
            assert export_parquet(opened, out, units) == 5
        else:
            out.write_text(as_text(opened, format_, units), encoding="utf-8")
    import_files(second, [str(out)], Options())
    had, got = motors_of(first), motors_of(second)
    walrus = had["Puffinworks", "WALRUS-1"]["figures"]["torque_constant"]["convention"]
    assert walrus == {"current": "rms", "basis": "inferred"}
    assert had["Puffinworks", "T-1"]["figures"]["back_emf_constant"]["convention"]["shape"]
    assert had.keys() == got.keys()
    for name, motor in had.items():
        other = got[name]
        pairs = [(motor["figures"][key], other["figures"][key]) for key in motor["figures"]]
        for key, repeats in (motor.get("repeats") or {}).items():
            pairs += zip(repeats, other["repeats"][key], strict=True)
        assert other.get("conditions") is None
        for figure, back in pairs:
            assert figure.get("convention") == back.get("convention"), name
            # in another unit the interval of printed digits is written as a tolerance
            if figure.get("qualifier") or back.get("qualifier") != "tolerance":
                assert figure.get("qualifier") == back.get("qualifier"), name
            if not isinstance(figure["value"], str):
                for part in ("value", "low", "high"):
                    wanted = figure[part] and pytest.approx(figure[part], rel=1e-6)
                    assert back[part] == wanted, (name, figure)
