"""Makes the spreadsheet tables: workbooks and one OpenDocument sheet, each with its defects."""

from __future__ import annotations

import datetime
import zipfile
from pathlib import Path
from xml.sax.saxutils import escape

from openpyxl import Workbook
from openpyxl.worksheet.worksheet import Worksheet


def build(folder: Path) -> None:
    """Writes every file into ``folder``."""
    _damage(folder / "workbook_damage.xlsx")
    _noise(folder / "workbook_noise.xlsx")
    _chosen_sheet(folder / "workbook_chosen_sheet.xlsx")
    _open_document(folder / "opendocument.ods")


def _sheet(book: Workbook, title: str) -> Worksheet:
    sheet = book.create_sheet(title)
    assert isinstance(sheet, Worksheet)
    return sheet


def _book() -> Workbook:
    book = Workbook()
    for sheet in book.worksheets:
        book.remove(sheet)
    return book


def _damage(path: Path) -> None:
    """Number formats that show units, per cent, a date, a formula without result, hidden cells."""
    book = _book()
    sheet = _sheet(book, "DC motors")
    sheet.append(["Price list and data 35 mm / 42 mm"])
    sheet.merge_cells("A1:L1")
    sheet.append(
        [
            "Part no.",
            "Nominal voltage [V]",
            "Max. efficiency",
            "Stall torque",
            "No-load speed [rpm]",
            "Peak torque [mNm]",
            "Torque constant [mNm/A]",
            "Terminal resistance [Ω]",
            "Max. power [W]",
            "Purchase cost [EUR]",
            "Mass [g]",
            "Price [EUR]",
        ]
    )
    rows = [
        ["12E4", 24, 0.848, 352, 6292, 110, "36.2", 2.45, 58.0, 17.2, 205, 41.5],
        [350048, 48, 0.847, 352, 6291, datetime.date(2024, 4, 3), "72.4", 9.8, None, 17.9, 205, 43],
        ["OLD-24", 24, 0.80, 340, 6100, 105, "36.0", 2.6, 54.0, 16.0, 215, 39],
        ["042-24", 24, 0.80, 949, 6159, 342, "36.8", 0.92, 153, 31.0, 450, 88.25],
    ]
    for row in rows:
        sheet.append(row)
    sheet["I4"] = "=D4/1000*E4*PI()/30/4"
    for row in range(3, 7):
        sheet.cell(row, 3).number_format = "0.0%"
        sheet.cell(row, 4).number_format = '0" mNm"'
        sheet.cell(row, 5).number_format = "#,##0"
        sheet.cell(row, 7).number_format = "@"
        sheet.cell(row, 12).number_format = "0.00"
    sheet["F4"].number_format = "d-mmm"
    sheet.row_dimensions[5].hidden = True
    sheet.column_dimensions["J"].hidden = True
    sheet["A8"] = "Average"
    sheet["H8"] = "=AVERAGE(H3:H6)"
    sheet["K8"] = 268.75
    servo = _sheet(book, "Servo")
    servo.append(["Type", "M0 [Nm]", "I0 [Arms]", "kT [Nm/Arms]", "J [kgcm²]"])
    servo.append(["WS-80", 3.34, 4.6, 0.74, 1.42])
    servo.append(["WS-100", 9.25, 7.8, 1.21, 5.1])
    notes = _sheet(book, "Contacts")
    notes.append(["Region", "Person", "Extension"])
    notes.append(["North", "M. Alder", 214])
    book.save(path)


def _noise(path: Path) -> None:
    """Merged cells over all windings, no-break blanks, full-width signs, two tables abreast."""
    book = _book()
    sheet = _sheet(book, "Data")
    left = [
        ["Type\u00a0No.", "Unit", "WN\u2011571", "WN\u2011572", "WN\u2011573"],
        ["Rated\u00a0voltage", "Ｖ", 24, 36, 48],
        ["No\u2010load speed", "r／min", 4214, 4210, 4214],
        ["Torque\u2009constant", "N⋅m/A", 0.054, 0.081, 0.108],
        ["Line\u2011to\u2011line resistance", "\u2126", "0.34", "0.77\u00a0", "１.36"],
        ["Rotor inertia", "g·cm²", 120, None, None],
        ["Thermal resistance housing\u2013ambient", "K/W", 3.4, None, None],
        ["Weight", "ｇ", 820, None, None],
    ]
    right = [
        ["Type\u00a0No.", "Unit", "WN-901"],
        ["Rated voltage", "V", 48],
        ["No-load speed", "min\u207b\u00b9", "2\u2009101"],
        ["Torque constant", "mN・m/A", 217],
        ["Line-to-line resistance", "mΩ", 573],
    ]
    for row, cells in enumerate(left, start=2):
        for column, cell in enumerate(cells, start=1):
            sheet.cell(row, column).value = cell
    for row, cells in enumerate(right, start=2):
        for column, cell in enumerate(cells, start=8):
            sheet.cell(row, column).value = cell
    for row in (7, 8, 9):
        sheet.merge_cells(start_row=row, end_row=row, start_column=3, end_column=5)
    book.save(path)


def _chosen_sheet(path: Path) -> None:
    """Two revisions of one table on two sheets; the call names the sheet."""
    book = _book()
    for title, resistance, mass in (("Revision A", 2.6, 215), ("Revision B", 2.45, 205)):
        sheet = _sheet(book, title)
        sheet.append(["Model", "Un (V)", "R (Ω)", "Kt (mNm/A)", "m (g)"])
        sheet.append(["CS-35", 24, resistance, 36.2, mass])
    book.save(path)


def _open_document(path: Path) -> None:
    """Values beside their shown text, per cent, repeated cells, a hidden row, a spanned cell."""
    rows = [
        "<table:table-row>"
        + _text("Motor", span=1)
        + _text("Ratings at nominal voltage", span=4)
        + "<table:covered-table-cell table:number-columns-repeated='3'/>"
        + _text("Winding", span=3)
        + "<table:covered-table-cell table:number-columns-repeated='2'/></table:table-row>",
        _row(
            "Model",
            "Voltage [V]",
            "Torque [mNm]",
            "Speed [rpm]",
            "Max. efficiency",
            "R [Ω]",
            "L [mH]",
            "Kt [mNm/A]",
        ),
        _motor("OD-42-24", 24, 114, 5416, 0.8, 0.92, 1.2, 36.8),
        _motor("OD-42-30", 30, 115, 5400, 0.8, 1.44, 1.9, 46.0, hidden=True),
        _motor("OD-42-36", 36, 116, 5418, 0.8, 2.06, 2.7, 55.1),
    ]
    content = (
        "<?xml version='1.0' encoding='UTF-8'?><office:document-content"
        " xmlns:office='urn:oasis:names:tc:opendocument:xmlns:office:1.0'"
        " xmlns:table='urn:oasis:names:tc:opendocument:xmlns:table:1.0'"
        " xmlns:text='urn:oasis:names:tc:opendocument:xmlns:text:1.0' office:version='1.2'>"
        "<office:body><office:spreadsheet><table:table table:name='Daten'>"
        "<table:table-column table:number-columns-repeated='8'/>"
        + "".join(rows)
        + "</table:table></office:spreadsheet></office:body></office:document-content>"
    )
    kind = "application/vnd.oasis.opendocument.spreadsheet"
    manifest = (
        "<?xml version='1.0' encoding='UTF-8'?><manifest:manifest"
        " xmlns:manifest='urn:oasis:names:tc:opendocument:xmlns:manifest:1.0'"
        " manifest:version='1.2'>"
        f"<manifest:file-entry manifest:full-path='/' manifest:media-type='{kind}'/>"
        "<manifest:file-entry manifest:full-path='content.xml' manifest:media-type='text/xml'/>"
        "</manifest:manifest>"
    )
    with zipfile.ZipFile(path, "w") as archive:
        archive.writestr("mimetype", kind, zipfile.ZIP_STORED)
        archive.writestr("content.xml", content, zipfile.ZIP_DEFLATED)
        archive.writestr("META-INF/manifest.xml", manifest, zipfile.ZIP_DEFLATED)


def _text(text: str, span: int = 1) -> str:
    spanned = f" table:number-columns-spanned='{span}'" if span > 1 else ""
    return (
        f"<table:table-cell office:value-type='string'{spanned}>"
        f"<text:p>{escape(text)}</text:p></table:table-cell>"
    )


def _row(*texts: str) -> str:
    return "<table:table-row>" + "".join(map(_text, texts)) + "</table:table-row>"


def _motor(part: str, *numbers: float, hidden: bool = False) -> str:
    cells = [_text(part)]
    for place, number in enumerate(numbers):
        kind, shown = "float", f"{number:g}".replace(".", ",")
        if place == 3:
            kind, shown = "percentage", f"{number * 100:.0f} %"
        cells.append(
            f"<table:table-cell office:value-type='{kind}' office:value='{number}'>"
            f"<text:p>{shown}</text:p></table:table-cell>"
        )
    state = " table:visibility='collapse'" if hidden else ""
    return f"<table:table-row{state}>" + "".join(cells) + "</table:table-row>"


if __name__ == "__main__":
    build(Path.cwd())
