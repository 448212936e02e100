"""Workbooks: what is shown, what is hidden, what is damaged (number formats: ECMA-376 Part 1)."""

import datetime
from pathlib import Path

import pytest
from openpyxl import Workbook
from openpyxl.cell.rich_text import CellRichText, TextBlock
from openpyxl.cell.text import InlineFont

from motorfolio.catalog.tables import TableError, numberformat, read_tables
from motorfolio.catalog.tables.grid import Stored

from .files import check, ods, one, read, xls, xlsb, xlsx


def saved(path: Path, rows: list[list[object]], formats: dict[str, str] | None = None) -> Path:
    book = Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Motors"
    for row in rows:
        sheet.append(row)
    for place, code in (formats or {}).items():
        sheet[place].number_format = code
    book.save(path)
    return path


def test_number_formats_show_units_percent_and_digits(tmp_path: Path) -> None:
    rows = [["Part", "Kt", "U", "η", "J", "n", "No."], ["A1", 25.4321, 12, 0.853, 1.23e-5, 5700, 7]]
    formats = {
        "B2": '0.00" mNm"', "C2": '0.0\\ "V"', "D2": "0.0%", "E2": "0.00E+00", "F2": "#,##0",
        "G2": "00000",
    }  # fmt: skip
    grid = one(read_tables(saved(tmp_path / "a.xlsx", rows, formats)))
    assert grid.rows[1] == ["A1", "25.43 mNm", "12.0 V", "85.3 %", "1.23E-05", "5700", "00007"]
    assert all(isinstance(text, Stored) for text in grid.rows[1][1:])
    assert not isinstance(grid.rows[1][0], Stored)
    assert grid.remarks == []


@pytest.mark.parametrize(
    ("value", "code", "text"),
    [
        (0.28499999999999998, "General", "0.285"),
        (0.1 + 0.2, "General", "0.3"),
        (12.0, "General", "12"),
        (1e-7, "General", "1E-07"),
        (-4.5, "0.0", "-4.5"),
        (-4.5, '0.0" Nm";(0.0" Nm")', "(4.5 Nm)"),
        (-4.5, "0.0;-0.0", "-4.5"),
        (0.0, '0.0;-0.0;"none"', "none"),
        (0.5, "0.0#", "0.5"),
        (0.25, "0.0#", "0.25"),
        (3.0, "0.##", "3"),
        (0.5, ".00", "0.50"),
        (12345.678, "#,##0.00", "12345.68"),
        (0.85, "0%", "85 %"),
        (24, "[$€-407]0.00", "€24.00"),
        (24, '[Red]0" V"', "24 V"),
        (1500, '[>=1000]0.0,"k";0', "1.5k"),
        (500, '[>=1000]0.0,"k";0', "500"),
        (0.0121, "##0.0E+0", "12.1E-3"),
        (-45600.0, "0.00E+00", "-4.56E+04"),
        (0, "0.0E+0", "0.0E+0"),
        (2.5, "# ?/?", "2.5"),
        (24, "@", "24"),
        (3, 'General" V"', "3 V"),
        (5, '"M"0" bolt; nut"', "M5 bolt; nut"),
    ],
)
def test_format_codes(value: float, code: str, text: str) -> None:
    assert numberformat.shown(value, code)[0] == text


def test_a_format_that_hides_the_number_does_not_win() -> None:
    assert numberformat.shown(0.004, "0") == (
        "0.004",
        "the number format shows 0 for 0.004, which is taken",
    )
    assert numberformat.shown(0.55, "0.0")[0] in {"0.6", "0.55"}
    assert numberformat.shown(5, ";;;") == ("", "the number format shows “” for 5")


def test_dates_made_of_figures_are_no_numbers(tmp_path: Path) -> None:
    rows = [["Part", "Range", "Time"], ["A1", datetime.date(2026, 12, 6), datetime.time(12, 30)]]
    grid = one(read_tables(saved(tmp_path / "a.xlsx", rows)))
    assert grid.rows[1] == ["A1", "date 2026-12-06", "time 12:30"]
    assert grid.remarks[0].startswith("dates in B2, C2")


@pytest.mark.parametrize(
    ("serial", "text"),
    [(1, "date 1900-01-01"), (61, "date 1900-03-01"), (46362, "date 2026-12-06"),
     (46362.25, "date 2026-12-06 06:00"), (0.5, "time 12:00"), (1e12, "date out of range")],
)  # fmt: skip
def test_date_serials(serial: float, text: str) -> None:
    # ECMA-376 Part 1, 18.17.4.1: serial 1 is 1900-01-01 and 1900 counts as a leap year.
    assert numberformat.date_text(serial) == text


def test_formulas_errors_and_booleans(tmp_path: Path) -> None:
    sheet = (
        '<sheetData><row r="1"><c r="A1"><f>B1*2</f></c><c r="B1"><f>1+1</f><v>2</v></c>'
        '<c r="C1" t="e"><f>1/0</f><v>#DIV/0!</v></c><c r="D1" t="b"><v>1</v></c>'
        '<c r="E1" t="str"><f>"a"</f><v>A1</v></c><c r="F1" t="inlineStr"><is><t>x</t></is></c>'
        "</row></sheetData>"
    )
    grid = one(read(tmp_path / "a.xlsx", xlsx(sheet)))
    assert grid.rows == [["formula without a stored result", "2", "#DIV/0!", "TRUE", "A1", "x"]]
    assert "A1" in grid.remarks[0]


def test_codes_stay_text(tmp_path: Path) -> None:
    rows = [["Part", "R"], ["12E4", "1,5"], ["007", "0.5"], ["3-4", 1]]
    grid = one(read_tables(saved(tmp_path / "a.xlsx", rows)))
    assert grid.rows[1:] == [["12E4", "1,5"], ["007", "0.5"], ["3-4", "1"]]


def test_hidden_rows_columns_and_sheets(tmp_path: Path) -> None:
    book = Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Shown"
    for i in range(1, 7):
        sheet.append([f"P{i}", i, i * 10, i * 100])
    sheet.row_dimensions[2].hidden = True
    sheet.row_dimensions[3].hidden = True
    sheet.column_dimensions["C"].hidden = True
    secret = book.create_sheet("Secret")
    secret.append(["Part", 1])
    secret.sheet_state = "hidden"
    book.create_sheet("Nothing")
    book.save(tmp_path / "a.xlsx")
    file = read_tables(tmp_path / "a.xlsx")
    grid = one(file)
    assert grid.rows[:2] == [["P1", "1", "100"], ["P4", "4", "400"]]
    assert grid.row_numbers == [1, 4, 5, 6]
    assert grid.column_numbers == [1, 2, 4]
    assert grid.remarks == ["hidden rows are skipped: 2–3", "hidden columns are skipped: C"]
    assert file.skipped == ["sheet “Secret”: is hidden", "sheet “Nothing”: is empty"]
    asked = one(read_tables(tmp_path / "a.xlsx", sheet="secret"))
    assert asked.rows == [["Part", "1"]]
    assert "hidden" in asked.remarks[0]
    with pytest.raises(TableError, match="“Shown”, “Secret”, “Nothing”"):
        read_tables(tmp_path / "a.xlsx", sheet="Other")


def test_merged_cells_become_spans(tmp_path: Path) -> None:
    book = Workbook()
    sheet = book.active
    assert sheet is not None
    sheet["A1"], sheet["B1"] = "Part", "Rated"
    sheet.merge_cells("A1:A2")
    sheet.merge_cells("B1:C1")
    sheet["B2"], sheet["C2"] = "U", "I"
    sheet["A3"] = "P1"
    sheet.merge_cells("A3:A5")
    for row in (3, 4, 5):
        sheet.cell(row, 2, row)
        sheet.cell(row, 3, row * 2)
    sheet.row_dimensions[3].hidden = True
    book.save(tmp_path / "a.xlsx")
    grid = one(read_tables(tmp_path / "a.xlsx"))
    assert grid.rows == [
        ["Part", "Rated", ""],
        ["", "U", "I"],
        ["P1", "4", "8"],
        ["", "5", "10"],
    ]
    spans = {(s.row, s.column, s.rows, s.columns) for s in grid.spans}
    assert spans == {(0, 0, 2, 1), (0, 1, 1, 2), (2, 0, 2, 1)}


def test_raised_and_lowered_signs_are_kept(tmp_path: Path) -> None:
    book = Workbook()
    sheet = book.active
    assert sheet is not None
    up, down = InlineFont(vertAlign="superscript"), InlineFont(vertAlign="subscript")
    sheet["A1"] = CellRichText("g cm", TextBlock(up, "2"))
    sheet["B1"] = CellRichText("10", TextBlock(up, "-4"), " kg m", TextBlock(up, "2"))
    sheet["C1"] = CellRichText("M", TextBlock(down, "0"), " K", TextBlock(down, "T"))
    book.save(tmp_path / "a.xlsx")
    grid = one(read_tables(tmp_path / "a.xlsx"))
    assert grid.rows == [["g cm²", "10⁻⁴ kg m²", "M₀ K_T"]]


def test_two_tables_on_a_sheet_stay_one_grid_and_long_gaps_shrink(tmp_path: Path) -> None:
    book = Workbook()
    sheet = book.active
    assert sheet is not None
    sheet["A1"], sheet["A2"], sheet["A5"], sheet["H5"] = "a", "b", "c", "d"
    sheet["A5000"] = "e"
    book.save(tmp_path / "a.xlsx")
    grid = one(read_tables(tmp_path / "a.xlsx"))
    assert grid.row_numbers == [1, 2, 3, 4, 5, 6, 7, 5000]
    assert grid.column_numbers == [1, 2, 3, 8]
    assert grid.rows[4] == ["c", "", "", "d"]


def test_cells_without_references_count_on(tmp_path: Path) -> None:
    first = "<row><c><v>1</v></c><c/><c><v>3</v></c></row>"
    sheet = f"<sheetData>{first}<row><c><v>4</v></c></row></sheetData>"
    grid = one(read(tmp_path / "a.xlsx", xlsx(sheet)))
    assert grid.rows == [["1", "", "3"], ["4", "", ""]]


def test_a_long_sheet_goes_on_in_chunks(tmp_path: Path) -> None:
    book = Workbook(write_only=True)
    sheet = book.create_sheet("Motors")
    sheet.append(["Part", "U"])
    for i in range(1, 6000):
        sheet.append([f"P{i}", i / 4])
    book.save(tmp_path / "a.xlsx")
    grid = read_tables(tmp_path / "a.xlsx").grids[0]
    check(grid)
    assert len(grid.rows) == 5000
    assert grid.continuation is not None
    chunks = list(grid.continuation)
    assert sum(len(rows) for _, rows in chunks) == 1000
    assert (chunks[-1][0][-1], chunks[-1][1][-1]) == (6000, ["P5999", "1499.75"])


# --- OpenDocument -----------------------------------------------------------------------------


def cell(text: str, **attributes: str) -> str:
    marks = "".join(
        f' {k.replace("_", ":", 1).replace("_", "-")}="{v}"' for k, v in attributes.items()
    )
    return f"<table:table-cell{marks}><text:p>{text}</text:p></table:table-cell>"


def number(text: str, value: str, kind: str = "float") -> str:
    return cell(text, office_value_type=kind, office_value=value)


def test_ods_shows_what_is_displayed(tmp_path: Path) -> None:
    row = "".join(
        [
            cell("A1"), number("3.5 V", "3.5"), number("5.700", "5700"),
            number("0,55 Nm", "0.5537"),
            number("1 234,5", "1234.5"), number("85,3 %", "0.853", "percentage"), cell("0,55"),
            cell("06.12.26", office_value_type="date", office_date_value="2026-12-06"),
            '<table:table-cell table:formula="of:=A1"/>', cell("#DIV/0!"),
            cell('g cm<text:span text:style-name="T1">2</text:span>'),
            cell('a<text:s text:c="2"/>b<text:line-break/>c<office:annotation><text:p>no</text:p>'
                 "</office:annotation>"),
        ]
    )  # fmt: skip
    style = (
        '<style:style style:name="T1" style:family="text">'
        '<style:text-properties style:text-position="super 58%"/></style:style>'
    )
    content = ods(
        f'<table:table table:name="D"><table:table-row>{row}</table:table-row></table:table>', style
    )
    grid = one(read(tmp_path / "a.ods", content))
    assert grid.rows[0] == [
        "A1", "3.5 V", "5700", "0.55 Nm", "1234.5", "85.3 %", "0,55", "date 2026-12-06",
        "formula without a stored result", "#DIV/0!", "g cm²", "a  b\nc",
    ]  # fmt: skip
    assert len(grid.remarks) == 2


def test_ods_hidden_merged_and_repeated(tmp_path: Path) -> None:
    row = "<table:table-row{}>{}</table:table-row>"
    hidden = ' table:visibility="collapse"'
    rows = [
        row.format("", cell("Part", table_number_rows_spanned="2")
                   + cell("Rated", table_number_columns_spanned="2") + "<table:covered-table-cell/>"
                   + cell("x")),
        row.format("", "<table:covered-table-cell/>" + cell("U") + cell("I") + cell("y")),
        row.format(hidden, cell("old") + cell("1")),
        row.format(' table:visibility="filter"', cell("filtered")),
        row.format(' table:number-rows-repeated="2"', cell("P", table_number_columns_repeated="2")),
        "<table:table-row-group table:display=\"false\">" + row.format("", cell("grouped"))
        + "</table:table-row-group>",
        row.format(' table:number-rows-repeated="1048000"',
                   '<table:table-cell table:number-columns-repeated="16384"/>'),
    ]  # fmt: skip
    columns = (
        '<table:table-column table:number-columns-repeated="3"/>'
        f"<table:table-column{hidden}/><table:table-column/>"
    )
    style = (
        '<style:style style:name="ta2" style:family="table">'
        '<style:table-properties table:display="false"/></style:style>'
    )
    content = ods(
        f'<table:table table:name="D">{columns}{"".join(rows)}</table:table>'
        f'<table:table table:name="H" table:style-name="ta2">{row.format("", cell("no"))}'
        "</table:table>",
        style,
    )
    file = read(tmp_path / "a.ods", content)
    grid = one(file)
    assert grid.rows == [["Part", "Rated", ""], ["", "U", "I"], ["P", "P", ""], ["P", "P", ""]]
    assert grid.row_numbers == [1, 2, 5, 6]
    assert {(s.row, s.column, s.rows, s.columns) for s in grid.spans} == {
        (0, 0, 2, 1),
        (0, 1, 1, 2),
    }
    assert grid.remarks == ["hidden rows are skipped: 3–4, 7", "hidden columns are skipped: D"]
    assert file.skipped == ["sheet “H”: is hidden"]


# --- the binary kinds -------------------------------------------------------------------------

CELLS: dict[tuple[int, int], float | str] = {
    (0, 0): "Part", (0, 1): "Kt Ω", (1, 0): "007", (1, 1): 0.285, (3, 1): 12.0,
}  # fmt: skip


@pytest.mark.parametrize(("name", "content"), [("xls", xls(CELLS)), ("xlsb", xlsb(CELLS))])
@pytest.mark.parametrize("suffix", ["", ".xlsx", ".csv"])
def test_binary_workbooks(tmp_path: Path, name: str, content: bytes, suffix: str) -> None:
    file = read(tmp_path / f"a{suffix}", content)
    grid = one(file)
    assert file.format == name
    assert grid.sheet == "Motors"
    assert grid.rows == [["Part", "Kt Ω"], ["007", "0.285"], ["", ""], ["", "12"]]
    assert grid.row_numbers == [1, 2, 3, 4]
    assert "hidden" in grid.remarks[0]
    assert read_tables(tmp_path / f"a{suffix}", sheet="MOTORS").grids[0].rows == grid.rows
