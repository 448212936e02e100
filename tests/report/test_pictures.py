"""Pictures: what they say, that they are the same each time, and that grey suffices."""

import xml.etree.ElementTree as ET
from pathlib import Path

import numpy as np
import pytest

from motorfolio.catalog.cli import main

from .conftest import HELP

pytest.importorskip("matplotlib", reason="pictures need the extra 'plot' (matplotlib)")

ASKED = ("--torque", "50 mN·m", "--speed", "3000 rpm", "--supply", "24 V", "--ratio", "1..10")
KINDS = {
    "plane": ("plane", "DACHS-24", *ASKED),
    "bare": ("plane", "TERN-45L"),
    "candidates": ("candidates", *ASKED),
    "ratios": ("ratios", "DACHS-24", *ASKED),
    "figures": ("figures", "PIKA-3"),
}


@pytest.fixture(scope="module")
def drawn(catalog: Path, tmp_path_factory: pytest.TempPathFactory) -> dict[str, Path]:
    folder = tmp_path_factory.mktemp("pictures")
    paths = {}
    for name, call in KINDS.items():
        paths[name] = folder / f"{name}.svg"
        assert main(["plot", *call, "-o", str(paths[name]), "--catalog", str(catalog)]) == 0
    return paths


@pytest.mark.parametrize("name", KINDS)
def test_svg_is_well_formed_and_the_same_each_time(drawn, catalog, tmp_path, name):
    ET.parse(drawn[name])
    again = tmp_path / "again.svg"
    assert main(["plot", *KINDS[name], "-o", str(again), "--catalog", str(catalog)]) == 0
    assert again.read_bytes() == drawn[name].read_bytes()


def test_png_is_written_by_its_suffix(catalog, tmp_path):
    path = tmp_path / "figures.png"
    assert main(["plot", *KINDS["figures"], "-o", str(path), "--catalog", str(catalog)]) == 0
    assert path.read_bytes().startswith(b"\x89PNG")


def figure_of(catalog: Path, name: str, asked=ASKED, part="DACHS-24"):
    from motorfolio.catalog.commands.requirement_options import requirement_of
    from motorfolio.catalog.commands.search import command as search
    from motorfolio.catalog.report.pictures import make
    from motorfolio.catalog.store import Catalog

    options = search.make_context("search", list(asked), **HELP).params
    with Catalog.open(catalog) as opened:
        requirement = requirement_of(options)
        if name == "plane":
            return make.plane_of(opened, part, requirement, cycle=True)
        if name == "ratios":
            return make.ratios_of(opened, part, requirement)
        if name == "figures":
            return make.figures_of(opened, "PIKA-3")
        return make.candidates_of(opened, requirement)


CLAIMS = {
    "plane": ("DACHS-24 at 24 V: the cycle stays inside every limit", "rpm", "mN·m"),
    "ratios": ("DACHS-24: gear ratios from 1.09 to 1.99 do it", "Gear ratio", "Utilisation"),
    "figures": ("PIKA-3: the printed stall torque disagrees with the rest", "Printed value", ""),
    "candidates": ("motors do it", "Mass in g", "Utilisation"),
}


@pytest.mark.parametrize("name", CLAIMS)
def test_title_claims_and_axes_have_units(catalog, name):
    claim, x, y = CLAIMS[name]
    made = figure_of(catalog, name)
    axes = made.axes[0]
    assert claim in axes.get_title("left")
    assert x in axes.get_xlabel()
    assert y in axes.get_ylabel()
    assert "verify" in made.get_supxlabel()


def test_lines_differ_without_colour(catalog):
    for name in ("plane", "ratios"):
        lines = [
            line for line in figure_of(catalog, name).axes[0].get_lines()
            if not line.get_label().startswith("_")
        ]  # fmt: skip
        looks = [(repr(line._dash_pattern), line.get_linewidth(), line.get_marker())
                 for line in lines]  # fmt: skip
        assert len(set(looks)) == len(looks) > 1


def texts_of(axes) -> str:
    return " ".join(text.get_text() for text in axes.texts)


def legend_of(made) -> list[str]:
    legends = [*made.legends, *(axes.get_legend() for axes in made.axes)]
    return [text.get_text() for legend in legends if legend for text in legend.get_texts()]


def test_lines_over_the_ratio_end_where_the_winding_runs_away_and_say_so(catalog):
    asked = ("--torque", "3 N·m", "--speed", "30 rpm", "--supply", "24 V", "--ratio", "2..120")
    made = figure_of(catalog, "ratios", asked)
    axes = made.axes[0]
    assert "thermal runaway" in texts_of(axes)
    assert any("thermal runaway" in label for label in legend_of(made))
    (line,) = [line for line in axes.get_lines() if line.get_label() == "voltage"]
    x, y = (np.asarray(v, float) for v in line.get_data())
    assert np.isnan(y[x < 50]).all()
    assert np.isfinite(y[x > 60]).all()
    hopeless = (*asked[:1], "9000 N·m", *asked[2:])
    assert "thermal runaway" in texts_of(figure_of(catalog, "ratios", hopeless).axes[0])
    assert "thermal runaway" not in texts_of(figure_of(catalog, "ratios").axes[0])


def test_the_plane_has_the_nominal_point_and_ends_at_the_permissible_speed(catalog):
    asked = ("--torque", "0.2 N·m", "--speed", "3000 rpm", "--supply", "60 V")
    made = figure_of(catalog, "plane", asked, "CIGALE-A")
    axes = made.axes[0]
    assert "nominal point, as published" in legend_of(made)
    assert "permissible speed" in texts_of(axes)
    area = axes.collections[0].get_paths()[0].vertices
    assert area[:, 0].max() == pytest.approx(8000)
    assert axes.get_xlim()[1] > 8000


def test_candidates_keep_clear_of_marks_lines_and_each_other(catalog):
    from matplotlib.text import Text

    asked = (*ASKED, "--where", "mass < 1 kg", "--reserve", "10 %")
    made = figure_of(catalog, "candidates", asked)
    axes = made.axes[0]
    made.draw_without_rendering()
    names = [text for text in axes.texts if not text.get_text().startswith("allowed")]
    boxes = [Text.get_window_extent(text) for text in names]  # without the leading line
    assert len(boxes) >= 3
    marks = np.concatenate(
        [
            axes.transData.transform(c.get_offsets())
            for c in axes.collections
            if len(c.get_offsets())
        ]
    )
    level = axes.transData.transform((1.0, 0.9))[1]
    for number, box in enumerate(boxes):
        assert not any(box.overlaps(other) for other in boxes[number + 1 :])
        assert not any(box.contains(*mark) for mark in marks)
        assert not box.y0 < level < box.y1
    said = " ".join(legend_of(made))
    assert "refused by --where: " in said
    frame = axes.get_window_extent()
    assert made.legends[0].get_window_extent().y1 <= frame.y0


def test_an_empty_catalog_is_one_sentence(tmp_path, capsys):
    from .conftest import SAMPLES

    store = str(tmp_path / "empty.sqlite")
    assert main(["gears", str(SAMPLES / "gears.csv"), "--catalog", store]) == 0
    out = str(tmp_path / "x.svg")
    assert main(["plot", *KINDS["candidates"], "-o", out, "--catalog", store]) == 2
    assert "no motors" in capsys.readouterr().err


@pytest.mark.parametrize(
    ("call", "said"),
    [
        (("figures", "PIKA-3", "-o", "x.pdf"), ".svg or .png"),
        (
            ("ratios", "DACHS-24", "--torque", "1 mN·m", "--speed", "1 rpm", "-o", "x.svg"),
            "--ratio",
        ),
        (("plane", "NONE-1", "-o", "x.svg"), "NONE-1"),
        (("figures", "PIKA-3", "-o", "no/such/folder/x.svg"), "no/such/folder"),
    ],
)
def test_what_cannot_be_drawn_is_one_sentence(catalog, tmp_path, monkeypatch, capsys, call, said):
    monkeypatch.chdir(tmp_path)
    assert main(["plot", *call, "--catalog", str(catalog)]) == 2
    captured = capsys.readouterr()
    assert said in captured.err
    assert "Traceback" not in captured.err
    assert not captured.out
