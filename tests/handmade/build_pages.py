"""Makes the printed tables: PDF pages with rules, and without rules over two pages."""

from __future__ import annotations

from pathlib import Path

import matplotlib
from reportlab.lib import colors
from reportlab.lib.pagesizes import A4, landscape
from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import Table, TableStyle

FONT = "DejaVuSans"


def build(folder: Path) -> None:
    """Writes every file into ``folder``."""
    face = Path(matplotlib.get_data_path()) / "fonts" / "ttf" / "DejaVuSans.ttf"
    pdfmetrics.registerFont(TTFont(FONT, str(face)))
    _ruled_block(folder / "page_ruled_block.pdf")
    _two_pages(folder / "page_list_two_pages.pdf")


def _ruled_block(path: Path) -> None:
    """One page, parameters down and four windings across, captions, rules, a note."""
    rows = [
        ["Order number", "", "RB-2206", "RB-2212", "RB-2224", "RB-2248"],
        ["Motor data", "", "", "", "", ""],
        ["Nominal voltage", "V", "6", "12", "24", "48"],
        ["No load speed", "rpm", "6170", "6100", "6120", "6100"],
        ["No load current", "mA", "45.0", "22.5", "11.3", "–"],
        ["Stall torque", "mNm", "41.7", "41.3", "41.2", "41.0"],
        ["Terminal resistance phase to phase", "Ω", "1.31", "5.35", "21.4", "85.9"],
        ["Torque constant", "mNm/A", "9.20", "18.6", "37.1", "74.4"],
        ["Rotor inertia", "gcm²", "4.10", "4.10", "4.10", "4.10"],
        ["Thermal data", "", "", "", "", ""],
        ["Thermal resistance housing–ambient", "K/W", "17.5", "17.5", "17.5", "17.5"],
        ["Thermal time constant winding", "s", "9.4", "9.4", "9.4", "9.4"],
    ]
    canvas = Canvas(str(path), pagesize=A4, invariant=1)
    canvas.setFont(FONT, 14)
    canvas.drawString(50, 790, "RB 22 brushless motors, Ø22 mm")
    table = Table(rows, colWidths=[190, 50, 60, 60, 60, 60], rowHeights=18)
    table.setStyle(
        TableStyle(
            [
                ("FONT", (0, 0), (-1, -1), FONT, 8),
                ("GRID", (0, 0), (-1, -1), 0.4, colors.grey),
                ("SPAN", (0, 1), (-1, 1)),
                ("SPAN", (0, 9), (-1, 9)),
            ]
        )
    )
    table.wrapOn(canvas, 500, 700)
    table.drawOn(canvas, 50, 540)
    canvas.setFont(FONT, 7)
    canvas.drawString(50, 520, "Subject to change without notice. Page 17")
    canvas.save()


def _two_pages(path: Path) -> None:
    """Two pages, models down, no rules, the header repeated, decimal comma, right-aligned."""
    header = ["Typ", "UN [V]", "n0 [min⁻¹]", "MN [mNm]", "IN [A]", "R [Ω]", "kM [mNm/A]", "m [g]"]
    rows = [
        ["ZP 3512", "12", "6292", "55,7", "3,20", "0,62", "18,1", "205"],
        ["ZP 3524", "24", "6292", "55,7", "1,60", "2,45", "36,2", "205"],
        ["ZP 3548", "48", "6291", "55,7", "0,80", "9,80", "72,4", "205"],
        ["ZP 4224", "24", "6159", "114", "3,40", "0,92", "36,8", "450"],
        ["ZP 4236", "36", "6169", "116", "2,30", "2,06", "55,1", "450"],
        ["ZP 5724", "24", "4214", "308", "6,20", "0,34", "54,0", "820"],
        ["ZP 5748", "48", "4214", "308", "3,10", "1,36", "108", "820"],
        ["ZP 9048", "48", "2101", "946", "4,80", "0,573", "217", "2940"],
    ]
    edges = [50, 170, 250, 330, 400, 470, 560, 630]
    canvas = Canvas(str(path), pagesize=landscape(A4), invariant=1)
    for page, part in enumerate((rows[:5], rows[5:]), start=1):
        canvas.setFont(FONT, 12)
        canvas.drawString(50, 540, "Gleichstrommotoren ZP" + (" (Fortsetzung)" if page > 1 else ""))
        canvas.setFont(FONT, 9)
        for line, cells in enumerate([header, *part]):
            y = 500 - 20 * line
            canvas.drawString(edges[0], y, cells[0])
            for x, cell in zip(edges[1:], cells[1:], strict=True):
                canvas.drawRightString(x, y, cell)
        canvas.drawString(600, 40, f"Seite {page} von 2")
        canvas.showPage()
    canvas.save()


if __name__ == "__main__":
    build(Path.cwd())
