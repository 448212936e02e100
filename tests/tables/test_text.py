"""Pasted text: columns by blanks, pairs of label and value, labels over two lines."""

import time
from pathlib import Path

from motorfolio.catalog.tables import read_tables
from motorfolio.catalog.tables.source import open_source
from motorfolio.catalog.tables.text import read_text

from .files import check, one, read

ALIGNED = """\
BRUSHLESS MOTORS, FRAME 42

Model           Un      n0      I0     Mn
                V       rpm     mA     mNm
AD-22-12        12              22.5   9.25
AD-22-24        24      6120           9.23
AD-22-48        48      6100    5.6

* at 25 °C winding temperature
"""


def test_blank_cells_do_not_shift_aligned_columns(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.txt", ALIGNED))
    assert grid.rows == [
        ["BRUSHLESS MOTORS, FRAME 42", "", "", "", ""],
        ["Model", "Un", "n0", "I0", "Mn"],
        ["", "V", "rpm", "mA", "mNm"],
        ["AD-22-12", "12", "", "22.5", "9.25"],
        ["AD-22-24", "24", "6120", "", "9.23"],
        ["AD-22-48", "48", "6100", "5.6", ""],
        ["* at 25 °C winding temperature", "", "", "", ""],
    ]
    assert grid.row_numbers == [1, 3, 4, 5, 6, 7, 9]


def test_ragged_blanks_with_even_rows_go_by_order(tmp_path: Path) -> None:
    text = "Type  U  n\nLONG-NAME-1  24    6000\nA  12  5900\n"
    grid = one(read(tmp_path / "a.txt", text))
    assert grid.rows == [["Type", "U", "n"], ["LONG-NAME-1", "24", "6000"], ["A", "12", "5900"]]


def test_single_blanks_take_the_figures_from_the_end(tmp_path: Path) -> None:
    text = (
        "Part number RB-06 RB-12 RB-24\nNominal voltage V 6 12 24\n"
        "No load speed rpm 6170 6100 6120\nTerminal resistance Ω 1.31 5.35 –\n"
    )
    grid = one(read(tmp_path / "a.txt", text))
    assert grid.rows == [
        ["Part number", "RB-06", "RB-12", "RB-24"],
        ["Nominal voltage V", "6", "12", "24"],
        ["No load speed rpm", "6170", "6100", "6120"],
        ["Terminal resistance Ω", "1.31", "5.35", "–"],
    ]
    assert "shift" in grid.remarks[0]


def test_labels_over_two_lines(tmp_path: Path) -> None:
    text = (
        "Bestellnummer             A-12    A-24\n"
        "Drehmoment-\n"
        "konstante        mNm/A    18,1    36,2\n"
        "Anschluss-\n"
        "widerstand       Ω        0,62    2,45\n"
        "Wärmewiderstand  K/W      5,2     5,2\n"
        "(Gehäuse–Umgebung)\n"
    )
    grid = one(read(tmp_path / "a.txt", text))
    assert [row[0] for row in grid.rows] == [
        "Bestellnummer",
        "Drehmomentkonstante",
        "Anschlusswiderstand",
        "Wärmewiderstand (Gehäuse–Umgebung)",
    ]
    assert grid.rows[1][-2:] == ["18,1", "36,2"]


def test_two_tables_of_other_columns_are_two_grids(tmp_path: Path) -> None:
    text = (
        "Type      U    n\nA1        24   6000\nA2        12   5900\n\n"
        "Accessory       Order number      Mass      Fits to\n"
        "Encoder         991122            25 g      A1, A2\n"
        "Brake           991133            60 g      A2\n"
    )
    file = read(tmp_path / "a.txt", text)
    assert [len(grid.column_numbers) for grid in file.grids] == [3, 4]
    for grid in file.grids:
        check(grid)


def test_pairs_with_all_separators() -> None:
    text = (
        "Model: WP-1\nQuiet motor, best quality! Rated voltage: 24VDC; No load speed: 4,000 ± 10 % "
        "rpm; No-load current: <0.5A | Weight： 205g, Shaft: 5 mm\nRatio: 1:50\n\n"
        "Model = WP-2\n• Rated voltage: 36V, Power 250 W (peak), Rated speed: 5,420rpm,\n"
        "• Torque\nconstant: 0.055 Nm/A\n• Speed: 3000rpm; Speed: 2800rpm\n"
    )
    first, second = read_tables(None, text.encode(), format="text").grids
    check(first)
    check(second)
    assert first.rows == [
        ["Model", "WP-1"],
        ["Quiet motor, best quality!", ""],
        ["Rated voltage", "24VDC"],
        ["No load speed", "4,000 ± 10 % rpm"],
        ["No-load current", "<0.5A"],
        ["Weight", "205g"],
        ["Shaft", "5 mm"],
        ["Ratio", "1:50"],
    ]
    assert first.row_numbers == [1, 2, 2, 2, 2, 2, 2, 3]
    assert second.rows == [
        ["Model", "WP-2"],
        ["Rated voltage", "36V"],
        ["Power 250 W (peak)", ""],
        ["Rated speed", "5,420rpm"],
        ["Torque constant", "0.055 Nm/A"],
        ["Speed", "3000rpm"],
        ["Speed", "2800rpm"],
    ]


def test_a_value_wrapped_onto_the_next_line(tmp_path: Path) -> None:
    text = (
        "Motor: A1\nRated voltage:\n24 V\nRated speed: 4,000 ±\n10 % rpm\n"
        "Drehmoment-\nkonstante: 36 mNm/A\n"
    )
    grid = one(read(tmp_path / "a.txt", text))
    assert grid.rows == [
        ["Motor", "A1"],
        ["Rated voltage", "24 V"],
        ["Rated speed", "4,000 ± 10 % rpm"],
        ["Drehmomentkonstante", "36 mNm/A"],
    ]


def test_a_label_with_a_comma_stays_whole(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.txt", "Motor: A1\nIdle current, I0: 61 mA\nL, ph-ph: 2 mH\n"))
    assert [row[0] for row in grid.rows] == ["Motor", "Idle current, I0", "L, ph-ph"]


def test_wide_east_asian_signs_take_two_places(tmp_path: Path) -> None:
    text = (
        "型号      电压    转速\n甲八十    220     3000\n"
        "B                 2000\nC80       220     1000\n"
    )
    grid = one(read(tmp_path / "a.txt", text))
    assert grid.rows[2] == ["B", "", "2000"]


def test_one_long_line_before_a_foreign_letter_is_surveyed_at_once():
    """The look for lines in another encoding takes time by their length, not by its square."""
    start = time.process_time()
    survey = open_source(None, b"x" * 100_000 + b"\n\xe9\n").survey
    assert time.process_time() - start < 1
    assert survey.high_lines == b"\xe9\n"


def test_motors_one_a_line_without_blank_lines_are_motors_of_their_own() -> None:
    grids = read_text(
        "Type = A1 | Voltage = 12 V | Stall torque = 3 gf•cm\n"
        "Ｔｙｐｅ ＝ Ａ２ ｜ Ｖｏｌｔａｇｅ ＝ ２４ Ｖ ｜ Stall torque ＝ 4 gf•cm\n"
        "Type = A3 | Voltage = 36 V | Stall torque = 5 gf•cm\n"
    )
    motors = [row for grid in grids for row in grid.rows]
    assert [len(grid.rows) for grid in grids] == [3, 3, 3]
    assert ["Type", "A3"] in motors
    assert ["Stall torque", "3 gf•cm"] in motors


def test_a_long_bilingual_label_is_a_label() -> None:
    label = "Thermal time constant winding / Constante de temps thermique du bobinage"
    (grid,) = read_text(f"Type: A1\n{label} : 21.3 s\n")
    assert grid.rows[1] == [label, "21.3 s"]


def test_leaders_part_a_name_from_its_figure(tmp_path: Path) -> None:
    text = "Model ........ MX-30\nRated voltage ........ 3.0 V\nWeight . . . . . . . . 8.8 g\n"
    grid = one(read(tmp_path / "a.txt", text))
    assert grid.rows == [["Model", "MX-30"], ["Rated voltage", "3.0 V"], ["Weight", "8.8 g"]]


def test_a_figure_glued_to_the_colon_of_a_long_name(tmp_path: Path) -> None:
    text = (
        "Part number:                MX-30\nNominal voltage:            24 V\n"
        "Nominal torque (maximum):120 mNm\nNo load speed:              3800 rpm\n"
    )
    grid = one(read(tmp_path / "a.txt", text))
    assert ["Nominal torque (maximum):", "120 mNm"] in grid.rows


def test_a_head_without_a_cell_over_the_units_stands_over_its_columns(tmp_path: Path) -> None:
    text = (
        "Modello         MP/12  MP/24    MP/36\n"
        "Tensione nominale     V     12,0     24,0     36,0\n"
        "Corrente a vuoto      A  0,138     0,149    0,0518\n"
        "Coppia nominale      Ncm  3,92    3,8\n"
        "Peso  g      57   59     58\n"
    )
    grid = one(read(tmp_path / "a.txt", text))
    assert grid.rows[0] == ["Modello", "", "MP/12", "MP/24", "MP/36"]
    assert grid.rows[2] == ["Corrente a vuoto", "A", "0,138", "0,149", "0,0518"]
    assert grid.rows[3][1:] == ["", "", "", ""]
    assert any("left whole: 4" in remark for remark in grid.remarks)


def test_a_footnote_is_no_broken_label(tmp_path: Path) -> None:
    text = "Motor   Torque [Nm] (1)\nAR-1            5\nAR-2            6\n\n(1) peak\n(2) hot\n"
    grid = one(read(tmp_path / "a.txt", text))
    assert [row[0] for row in grid.rows] == ["Motor", "AR-1", "AR-2", "(1) peak", "(2) hot"]
