"""Tables of gears: headings of seven languages, ratios and units as they are written."""

import pytest

from motorfolio.catalog.reading.gears import GearError, GearTable, read_gears
from motorfolio.catalog.tables.grid import Grid
from motorfolio.schema.gear import UNITS, gear_words


def table(text: str, maker: str | None = None) -> GearTable:
    rows = [line.split("|") for line in text.strip().split("\n")]
    wide = max(map(len, rows))
    rows = [row + [""] * (wide - len(row)) for row in rows]
    grid = Grid(rows, [*range(1, len(rows) + 1)], [*range(1, wide + 1)])
    return read_gears(grid, maker)


@pytest.mark.parametrize(
    "headings",
    [
        "Part number|Ratio|Number of stages|Max. efficiency [%]|Weight [g]|Backlash [°]",
        "Gearhead|Reduction|Stages|Efficiency, %|Mass, g|Max. backlash (°)",
        "Typ|Übersetzung i|Stufen|max. Wirkungsgrad [%]|Gewicht [g]|Verdrehspiel [°]",
        "Référence|Rapport de réduction|Nombre d'étages|Rendement max. [%]|Poids [g]|Jeu [°]",
        "Modello|Rapporto|Numero di stadi|Rendimento massimo [%]|Peso [g]|Gioco [°]",
        "Modelo|Relación de reducción|Etapas|Rendimiento [%]|Peso [g]|Juego [°]",
        "型番|減速比|段数|効率 [%]|質量 [g]|バックラッシ [°]",
        "型号|减速比|级数|效率 [%]|重量 [g]|背隙 [°]",
    ],
)
@pytest.mark.parametrize("ratio", ["14:1", "14", "14 : 1", "i = 14:1", "28:2", "14/1"])
def test_headings_and_ratios_of_the_trade(headings, ratio):
    (gear,) = table(f"{headings}\nP-14|{ratio}|2|81|85|1.5").gears
    assert (gear.part_number, gear.ratio, gear.stages) == ("P-14", 14.0, 2)
    assert gear.efficiency == pytest.approx(0.81)
    assert gear.mass == pytest.approx(0.085)
    assert gear.backlash == pytest.approx(1.5 * 3.141592653589793 / 180)


def test_units_below_the_headings_and_in_the_cells():
    (gear,) = table(
        "Order no|Ratio|Rated torque|Weight|Efficiency\n|[x:1]|Nm|g|%\nA|4|0.5|60|90"
    ).gears
    assert (gear.continuous_torque, gear.mass, gear.efficiency) == pytest.approx((0.5, 0.06, 0.9))
    (gear,) = table("Type|Ratio|Peak torque|Efficiency\nA|4|500 mNm|90 %").gears
    assert (gear.peak_torque, gear.efficiency) == pytest.approx((0.5, 0.9))


def test_a_gear_a_column():
    found = table(
        "Planetary gearhead\nData|Unit|P-4|P-16\nReduction||4:1|16:1\nNumber of stages||1|2\n"
        "Weight|g|60|75"
    )
    assert [(g.part_number, g.ratio, g.stages, g.mass) for g in found.gears] == [
        ("P-4", 4.0, 1, pytest.approx(0.06)),
        ("P-16", 16.0, 2, pytest.approx(0.075)),
    ]
    assert not found.unread
    assert all(reading.key for reading in found.reading)


def test_a_comma_is_the_decimal_sign_where_the_table_shows_it():
    assert [g.ratio for g in table("Typ|Übersetzung\nA|3,71:1\nB|5,18:1").gears] == [3.71, 5.18]


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("Part number|Ratio|Mass [g]\nPLG|four|85", 'row 2, column 2, "four"'),
        ("Part number|Ratio|Mass [g]\nPLG|1:14|85", "for a reduction write 14:1"),
        ("Part number|Ratio|Mass [g]\n|14|85", "has no part number"),
        ("Part number|Mass [g]\nPLG|85", "must name a part number and a ratio"),
        ("Ratio|Mass [g]\n14|85\n14|85", "no heading names a part number"),
    ],
)
def test_the_cell_that_is_wrong_is_named(text, said):
    with pytest.raises(GearError, match=said.replace("(", r"\(")):
        table(text)


def test_a_cell_that_is_not_read_is_listed_with_its_place():
    found = table("Part|Ratio|Efficiency|Colour\nA|4|81|red\nB|5|0.8|blue")
    assert [g.efficiency for g in found.gears] == [None, 0.8]
    (cell,) = found.unread
    assert (cell.row, cell.column, cell.text) == (2, 3, "81")
    assert "needs the sign %" in cell.reason


def test_a_part_number_twice_is_told():
    found = table("Gear|Ratio\nA|4\nA|5")
    assert [g.ratio for g in found.gears] == [4.0]
    assert found.unread[0].row == 3


def test_every_figure_has_names():
    assert {*UNITS, "part_number", "maker", "series", "fillers"} == {*gear_words()}
