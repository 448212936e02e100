"""What is a table of motors and what is not, and the maker's name in the lines above it."""

from pathlib import Path

import pytest

from motorfolio.catalog.cli import main
from motorfolio.catalog.reading import ReadingError, ReadOptions, read
from motorfolio.catalog.tables import read_tables

from .sheets import sheet

SAMPLES = Path(__file__).resolve().parents[2] / "sample_entries"
MOTORS = "Part number|Nominal voltage [V]|No-load speed [rpm]\nOWL-1|12|3000\nOWL-2|24|3100"


@pytest.mark.parametrize(
    "text",
    [
        "Part number|Ratio|Efficiency [%]|Mass [g]\nWHORL-4|4|93|6\nWHORL-6|6.25|93|7",
        "Typ|Übersetzung|Wirkungsgrad [%]|max. Dauerdrehmoment [Nm]|Spiel [°]|Masse [g]\n"
        "G-1|5,25|90|0,5|0,8|80\nG-2|14|81|0,8|1,0|95",
    ],
)
def test_a_table_of_gears_is_refused_with_the_command_that_reads_it(text):
    with pytest.raises(ReadingError, match="motorfolio gears plate"):
        sheet(text)


def test_the_sample_gears_are_refused_and_nothing_is_stored(tmp_path, capsys):
    catalog = tmp_path / "c.sqlite"
    assert main(["import", "--catalog", str(catalog), str(SAMPLES / "gears.csv")]) == 2
    out, err = capsys.readouterr()
    assert not out
    assert len(err.splitlines()) == 1
    assert "motorfolio gears " in err
    assert not catalog.exists()


def test_a_gear_motor_with_electrical_figures_is_a_motor():
    text = "Part number|Voltage [V]|Gear ratio|Efficiency [%]|Torque constant [mNm/A]|Mass [g]"
    assert sheet(f"{text}\nGM-1|24|19|80|36|100\nGM-2|12|19|80|18|100").motors()["GM-1"]


def test_sizes_and_masses_alone_are_no_motors():
    with pytest.raises(ReadingError, match="no motor"):
        sheet("Part number|Diameter [mm]|Length [mm]|Mass [g]\nA-1|22|40|110\nA-2|22|50|120")


@pytest.mark.parametrize(
    ("line", "maker"),
    [
        ("Maker: Owl Works (invented); every figure is made up", "Owl Works (invented)"),
        ("Maker: Owl Works (invented). Every figure is made up.", "Owl Works (invented)"),
        ("Maker: Owl Works. All values at 25 °C", "Owl Works"),
        ("Maker: Owl Motor Co. Ltd.", "Owl Motor Co. Ltd."),
        ("製造者: 梟モータ（架空）。すべて架空の値です。", "梟モータ(架空)"),
    ],
)
def test_the_maker_ends_where_its_sentence_ends(line, maker):
    assert set(sheet(f"{line}\n\n{MOTORS}").batch.maker) == {maker}


def test_a_maker_in_a_paragraph_of_a_page_is_found():
    file = read_tables(SAMPLES / "tanuki_hollow.html")
    (batch,) = read(file, ReadOptions()).batches
    assert set(batch.maker) == {"狸谷モータ(架空) Tanuki Hollow Motor (invented)"}
