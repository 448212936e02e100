"""PDF pages made by a general library: ruled, unruled, several windings, blanks, many pages."""

import io
from pathlib import Path

import pytest
from reportlab.lib import colors, pdfencrypt
from reportlab.lib.pagesizes import A4, landscape
from reportlab.lib.styles import ParagraphStyle, getSampleStyleSheet
from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.cidfonts import UnicodeCIDFont
from reportlab.pdfbase.ttfonts import TTFont
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import Paragraph, SimpleDocTemplate, Spacer, Table

from motorfolio.catalog.tables import TableError, read_tables

from .files import check, one, read

BLOCK = [
    ["Part number", "", "RB-06", "RB-12", "RB-24", "RB-36", "RB-48"],
    ["Values at nominal voltage", "", "", "", "", "", ""],
    ["Nominal voltage", "V", "6", "12", "24", "36", "48"],
    ["No load speed", "min-1", "6170", "6100", "6120", "", "6090"],
    ["No load current", "mA", "45.0", "22.5", "11.3", "7.52", "5.61"],
    ["Terminal resistance phase to phase", "Ohm", "1.31", "5.35", "", "47.7", "85.9"],
    ["Torque constant", "mNm/A", "9.20", "18.6", "37.1", "55.4", "74.4"],
    ["Thermal data", "", "", "", "", "", ""],
    ["Thermal resistance housing-ambient", "K/W", "17.5", "", "", "", ""],
]


def pdf(flowables: list[object], pagesize: tuple[float, float] = A4, **options: object) -> bytes:
    buffer = io.BytesIO()
    document = SimpleDocTemplate(buffer, pagesize=pagesize, title="t", **options)
    document.build(flowables)
    return buffer.getvalue()


def table(rows: list[list[object]], ruled: bool, size: float = 8) -> Table:
    style: list[tuple[object, ...]] = [("FONTSIZE", (0, 0), (-1, -1), size)]
    if ruled:
        style.append(("GRID", (0, 0), (-1, -1), 0.4, colors.black))
    return Table(rows, style=style)


@pytest.mark.parametrize("ruled", [True, False])
@pytest.mark.parametrize("size", [6, 8, 10])
def test_a_block_of_windings_with_blank_cells(tmp_path: Path, ruled: bool, size: float) -> None:
    styles = getSampleStyleSheet()
    page = [
        Paragraph("RB 22 brushless motors, graphite bearings, 22 mm", styles["Title"]),
        Spacer(1, 60),
        table(BLOCK, ruled, size),
        Spacer(1, 40),
        Paragraph("Tolerances as usual in the trade, subject to change.", styles["Normal"]),
    ]
    file = read(tmp_path / "a.pdf", pdf(page))
    grid = one(file)
    assert file.format == "pdf"
    assert grid.page == 1
    start = next(i for i, row in enumerate(grid.rows) if row[0] == "Part number")
    assert grid.rows[start : start + len(BLOCK)] == BLOCK
    assert grid.rows[0][0].startswith("RB 22 brushless motors")
    assert grid.rows[-1][0].startswith("Tolerances")


def test_raised_and_lowered_signs(tmp_path: Path) -> None:
    style = getSampleStyleSheet()["Normal"]
    rows: list[list[object]] = [["Type", "U", "M"], ["A1", "24", "5"], ["A2", "12", "6"]]
    rows.append([Paragraph("Inertia g cm<super size=6>2</super>", style), "4.1", "4.2"])
    rows.append([Paragraph("Torque M<sub size=6>0</sub>", style), "7.1", "7.2"])
    grid = one(read(tmp_path / "a.pdf", pdf([Table(rows, colWidths=[120, 60, 60])])))
    assert [row[0] for row in grid.rows[-2:]] == ["Inertia g cm²", "Torque M₀"]


def test_raised_and_lowered_signs_of_headings_in_two_lines(tmp_path: Path) -> None:
    """Small signs beside letters without ascenders: "min" and its "-1" are nearly as high."""
    pdfmetrics.registerFont(TTFont("Vera", "Vera.ttf"))  # comes with reportlab
    style = ParagraphStyle("small", fontName="Vera", fontSize=8)
    heads = [
        "Type",
        "Speed n<sub>N</sub><br/>min<super>-1</super>",
        "Inertia J<br/>10<super>-4</super> kg·m<super>2</super>",
        "Constant k<sub>T</sub><super>1)</super><br/>N·m/A",
    ]
    rows = [
        heads,
        ["PX-1", "3000<super>2)</super>", "0.17", "0.41"],
        ["PX-2", "2000", "0.28", "0.5"],
    ]
    cells = [[Paragraph(text, style) for text in row] for row in rows]
    grid = one(read(tmp_path / "a.pdf", pdf([Table(cells, colWidths=[60, 90, 100, 100])])))
    assert grid.rows == [
        ["", "Speed n_N", "Inertia J", "Constant k_T¹⁾"],
        ["Type", "min⁻¹", "10⁻⁴ kg·m²", "N·m/A"],
        ["PX-1", "3000²⁾", "0.17", "0.41"],
        ["PX-2", "2000", "0.28", "0.5"],
    ]


def test_a_drawing_beside_and_text_upward(tmp_path: Path) -> None:
    buffer = io.BytesIO()
    canvas = Canvas(buffer, pagesize=A4)
    canvas.setFont("Helvetica", 9)
    rows = [["Type", "U (V)", "n (rpm)"], ["A1", "24", "6000"], ["A2", "", "5900"]]
    for i, row in enumerate(rows):
        for j, cell in enumerate(row):
            canvas.drawString(80 + 90 * j, 700 - 14 * i, cell)
    canvas.rotate(90)
    canvas.drawString(690, -500, "dimension upward 42.5")
    canvas.save()
    grid = one(read(tmp_path / "a.pdf", buffer.getvalue()))
    assert grid.rows == rows


def test_a_table_over_pages_without_its_heading_is_one(tmp_path: Path) -> None:
    rows = [["Type", "U", "n", "M"]]
    rows += [[f"A{i}", str(i), str(6000 + i), f"{i / 10:.1f}"] for i in range(1, 101)]
    grid = one(read(tmp_path / "a.pdf", pdf([table(rows, True)])))
    assert grid.rows == rows
    assert grid.row_pages is not None
    assert sorted(set(grid.row_pages)) == [1, 2, 3]
    first_of_two = grid.row_pages.index(2)
    assert grid.row_numbers[first_of_two] == 1


def test_a_table_with_its_heading_again_is_a_grid_a_page(tmp_path: Path) -> None:
    rows = [["Type", "U", "n", "M"]]
    rows += [[f"A{i}", str(i), str(6000 + i), f"{i / 10:.1f}"] for i in range(1, 61)]
    long = Table(rows, repeatRows=1)
    file = read(tmp_path / "a.pdf", pdf([long]))
    assert [grid.page for grid in file.grids] == [1, 2]
    assert all(grid.rows[0] == rows[0] for grid in file.grids)
    assert sum(len(grid.rows) for grid in file.grids) == len(rows) + 1


def test_two_tables_of_other_columns_on_a_page(tmp_path: Path) -> None:
    first = [["Type", "U", "n"], ["A1", "24", "6000"], ["A2", "12", "5900"], ["A3", "48", "5950"]]
    second = [
        ["Accessory", "Order no.", "Mass", "Price", "Fits"],
        ["Encoder", "991122", "25 g", "80", "A1"],
        ["Brake", "991133", "60 g", "95", "A2"],
    ]
    page = [table(first, False), Spacer(1, 50), table(second, True)]
    file = read(tmp_path / "a.pdf", pdf(page))
    for grid in file.grids:
        check(grid)
    assert [grid.rows for grid in file.grids] == [first, second]


def test_a_page_of_pairs_is_read_as_text(tmp_path: Path) -> None:
    style = getSampleStyleSheet()["Normal"]
    lines = ["Model: A1", "Rated voltage: 24 V; Rated speed: 3000 rpm", "Mass: 450 g"]
    grid = one(read(tmp_path / "a.pdf", pdf([Paragraph(line, style) for line in lines])))
    assert grid.rows == [
        ["Model", "A1"],
        ["Rated voltage", "24 V"],
        ["Rated speed", "3000 rpm"],
        ["Mass", "450 g"],
    ]
    assert (grid.page, grid.row_numbers) == (1, [1, 2, 2, 3])


@pytest.mark.parametrize("angle", [90, 180, 270])
def test_a_turned_page(tmp_path: Path, angle: int) -> None:
    buffer = io.BytesIO()
    canvas = Canvas(buffer, pagesize=landscape(A4))
    canvas.setPageRotation(angle)
    width, height = landscape(A4)
    move = {90: (width, 0), 180: (width, height), 270: (0, height)}[angle]
    canvas.translate(*move)
    canvas.rotate(angle)
    for i, row in enumerate([["Type", "U (V)", "n"], ["A1", "24", "6000"], ["A2", "", "5900"]]):
        for j, cell in enumerate(row):
            canvas.drawString(100 + 90 * j, 300 - 16 * i, cell)
    canvas.save()
    grid = one(read(tmp_path / "a.pdf", buffer.getvalue()))
    assert grid.rows == [["Type", "U (V)", "n"], ["A1", "24", "6000"], ["A2", "", "5900"]]


def picture_page() -> bytes:
    from reportlab.lib.utils import ImageReader

    pixels = b"P5 8 8 255\n" + bytes(range(64))
    buffer = io.BytesIO()
    canvas = Canvas(buffer, pagesize=A4)
    canvas.drawImage(ImageReader(io.BytesIO(pixels)), 50, 50, 400, 600)
    canvas.save()
    return buffer.getvalue()


def test_a_scanned_page_says_so(tmp_path: Path) -> None:
    with pytest.raises(TableError, match="scanned picture without a text layer"):
        read(tmp_path / "a.pdf", picture_page())


def test_a_locked_document_says_so(tmp_path: Path) -> None:
    content = pdf([table(BLOCK, True)], encrypt=pdfencrypt.StandardEncryption("open", "owner"))
    with pytest.raises(TableError, match="protected by a password"):
        read(tmp_path / "a.pdf", content)


def test_a_damaged_document_says_so(tmp_path: Path) -> None:
    with pytest.raises(TableError, match=r"damaged|no text"):
        read(tmp_path / "a.pdf", b"%PDF-1.7\n" + b"garbage " * 100)
    content = pdf([table(BLOCK, True)])
    (tmp_path / "b.pdf").write_bytes(content[: len(content) // 3])
    with pytest.raises(TableError, match=r"damaged|no text"):
        read_tables(tmp_path / "b.pdf")


def test_signs_of_a_font_that_is_not_at_hand_are_read(tmp_path: Path) -> None:
    """STSong-Light is never part of the file; without it such signs have a width only."""
    pdfmetrics.registerFont(UnicodeCIDFont("STSong-Light"))
    style = [("FONTNAME", (0, 0), (-1, -1), "STSong-Light")]
    rows = [["参数", "单位", "RB-06", "RB-12"], ["额定电压", "V", "6", "12"],
            ["空载转速 n0", "rpm", "6170", "6100"], ["相电阻", "mΩ", "53", "51"]]  # fmt: skip
    grid = one(read(tmp_path / "a.pdf", pdf([Table(rows, style=style)])))
    assert [row[0] for row in grid.rows] == ["参数", "额定电压", "空载转速 n0", "相电阻"]
    assert [row[2:] for row in grid.rows] == [row[2:] for row in rows]


def test_a_line_below_a_large_title_is_no_lowered_sign(tmp_path: Path) -> None:
    buffer = io.BytesIO()
    canvas = Canvas(buffer, pagesize=A4)
    canvas.setFont("Helvetica-Bold", 15)
    canvas.drawString(60, 700, "RB 25 brushed, 10 Watt by gears")
    end = 60 + canvas.stringWidth("RB 25 brushed, 10 Watt by gears")
    canvas.setFont("Helvetica", 7)
    for y, line in ((686, ("Part number", "41", "42")), (674, ("Nominal voltage", "6", "12")),
                    (662, ("Torque constant", "8.1", "9.2"))):  # fmt: skip
        for x, text in zip((60, 180, end + 1), line, strict=True):
            canvas.drawString(x, y, text)
    canvas.save()
    grid = one(read(tmp_path / "a.pdf", buffer.getvalue()))
    assert grid.rows[-3] == ["Part number", "41", "42"]
