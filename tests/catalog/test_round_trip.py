"""An export of all sample sheets is read back without loss: names, figures with their intervals,
conventions, texts, reference temperatures, and with them the constants."""

from pathlib import Path

import pytest

from motorfolio.catalog.exporting import as_text
from motorfolio.catalog.importing.run import Options, import_files
from motorfolio.catalog.store import Catalog

SAMPLES = Path(__file__).resolve().parents[2] / "sample_entries"
SHEETS = [
    str(path)
    for path in sorted(SAMPLES.iterdir())
    if path.suffix in (".csv", ".tsv", ".html") and path.stem != "gears"
]

Motors = dict[tuple[str, str], dict]


def motors_of(catalog: Path) -> Motors:
    with Catalog.open(catalog) as opened:
        return {(m["maker"], m["part_number"]): m for m in opened.motors()}


@pytest.fixture(scope="module")
def original(tmp_path_factory) -> Path:
    path = tmp_path_factory.mktemp("original") / "c.sqlite"
    import_files(path, SHEETS, Options())
    return path


@pytest.fixture(scope="module", params=["csv", "json", "toml"])
def again(request, original, tmp_path_factory) -> Motors:
    folder = tmp_path_factory.mktemp(request.param)
    file = folder / f"export.{request.param}"
    with Catalog.open(original) as opened:
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
            for kind in ("current", "voltage", "between", "connection", "temperature"):
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
