"""A page written as a file: separated values, plain text, HTML, workbooks, PDF, JSON, TOML."""

from __future__ import annotations

import csv
import html
import io
import json
import unicodedata
import zipfile
from functools import cache
from pathlib import Path
from xml.sax.saxutils import escape

from .noise import add_noise
from .page import Cell, Grid, Page

EXTENSIONS = {"text": "txt"}


def write_page(page: Page) -> tuple[str, bytes]:
    """The file's name and content; noise is added to the page first, in place."""
    add_noise(page)
    recipe = page.recipe
    name = f"sheet.{EXTENSIONS.get(recipe.format, recipe.format)}"
    content = {
        "csv": _separated,
        "tsv": _separated,
        "text": _text,
        "html": _html,
        "xlsx": _xlsx,
        "ods": _ods,
        "pdf": _pdf,
        "json": _json,
        "toml": _toml,
    }[recipe.format](page)
    return name, content if isinstance(content, bytes) else _encode(page, content)


def _encode(page: Page, text: str) -> bytes:
    if "cr lines" in page.recipe.noise and page.recipe.format in ("csv", "tsv"):
        text = text.replace("\r\n", "\n").replace("\n", "\r")
    encoding = page.recipe.encoding
    try:
        return text.encode(encoding)
    except UnicodeEncodeError:
        return text.encode("utf-8")


def _texts(grid: Grid) -> list[list[str]]:
    return [[cell.text if cell else "" for cell in row] for row in grid]


def _separated(page: Page) -> str:
    rng = page.recipe.random("delimiter")
    delimiter = "\t" if page.recipe.format == "tsv" else rng.choice([",", ";", ";", "|"])
    if page.recipe.style.startswith("comma") and delimiter == ",":
        delimiter = ";"
    out = io.StringIO()
    writer = csv.writer(out, delimiter=delimiter, lineterminator=rng.choice(["\n", "\r\n"]))
    for line in page.before:
        writer.writerow([line])
    for number, grid in enumerate(page.grids):
        if number or page.before:
            writer.writerow([])
        writer.writerows(_texts(grid))
    if page.after:
        writer.writerow([])
        writer.writerows([line] for line in page.after)
    return out.getvalue()


def _width(text: str) -> int:
    wide = sum(unicodedata.east_asian_width(c) in "WF" for c in text)
    return len(text) + wide


def _text(page: Page) -> str:
    lines = [*page.before, ""] if page.before else []
    lines += [line for p in page.paragraphs for line in (*p.split("\n"), "")]
    for grid in page.grids:
        rows = _texts(grid)
        widths = [max(map(_width, column)) for column in zip(*rows, strict=True)]
        for row in rows:
            cells = (
                text + " " * (w - _width(text) + 3) for text, w in zip(row, widths, strict=True)
            )
            lines.append("".join(cells).rstrip())
        lines.append("")
    return "\n".join([*lines, *page.after, ""])


def _html(page: Page) -> str:
    rng = page.recipe.random("html")
    charset = page.recipe.encoding if page.recipe.encoding != "utf-8-sig" else "utf-8"
    parts = [f'<!DOCTYPE html><html><head><meta charset="{charset}"><title>Motors</title></head>']
    parts.append("<body><ul><li><a href='#'>Home</a></li><li><a href='#'>Products</a></li></ul>")
    if rng.random() < 0.3:
        parts.append("<table><tr><td><a href='#'>Home</a></td><td><a href='#'>Contact</a></td>"
                     "</tr></table>")  # fmt: skip
    parts += [f"<h2>{html.escape(line)}</h2>" for line in page.before]
    for grid in page.grids:
        parts.append("<table border='1'>")
        for number, row in enumerate(grid):
            tag = "th" if number == 0 else "td"
            cells = [_html_cell(cell, tag) for cell in row if cell is not None]
            parts.append("<tr>" + "".join(cells) + "</tr>")
        parts.append("</table>")
    parts += [f"<p>{html.escape(line)}</p>" for line in page.after]
    text = "\n".join([*parts, "</body></html>"])
    try:
        text.encode(page.recipe.encoding)
    except UnicodeEncodeError:
        text = text.replace(f'charset="{charset}"', 'charset="utf-8"')
    return text


def _html_cell(cell: Cell, tag: str) -> str:
    spans = f' colspan="{cell.columns}"' if cell.columns > 1 else ""
    spans += f' rowspan="{cell.rows}"' if cell.rows > 1 else ""
    text = html.escape(cell.text).replace("\n", "<br>")
    text = text.replace("²", "<sup>2</sup>") if len(text) % 2 else text
    return f"<{tag}{spans}>{text}</{tag}>"


def _xlsx(page: Page) -> bytes:
    import openpyxl

    book = openpyxl.Workbook()
    sheet = book.worksheets[0]
    at = 1
    for line in page.before:
        sheet.cell(at, 1, line)
        at += 2
    for grid in page.grids:
        for row in grid:
            for c, cell in enumerate(row, start=1):
                if cell is None:
                    continue
                target = sheet.cell(at, c)
                if cell.stored is not None:
                    target.value = cell.stored
                    target.number_format = cell.number_format
                elif cell.text:
                    target.value = cell.text
                    target.data_type = "s"
                if cell.columns > 1 or cell.rows > 1:
                    sheet.merge_cells(start_row=at, start_column=c, end_row=at + cell.rows - 1,
                                      end_column=c + cell.columns - 1)  # fmt: skip
            at += 1
        at += 1
    for line in page.after:
        sheet.cell(at, 1, line)
        at += 1
    if page.recipe.has("hidden"):
        _hide_old_column(sheet, page)
    out = io.BytesIO()
    book.save(out)
    return out.getvalue()


def _hide_old_column(sheet: object, page: Page) -> None:
    """A hidden copy of the last column with other numbers, as left over from an older issue."""
    grid = page.grids[0]
    column = max(len(row) for g in page.grids for row in g) + 1
    top = len(page.before) * 2
    for r, row in enumerate(grid, start=top + 1):
        cell = row[-1]
        text = cell.text if cell else ""
        digits = text.replace("3", "8").replace("1", "7").replace("2", "9")
        sheet.cell(r, column, digits)  # type: ignore[attr-defined]
    letter = sheet.cell(1, column).column_letter  # type: ignore[attr-defined]
    sheet.column_dimensions[letter].hidden = True  # type: ignore[attr-defined]


_ODS_HEAD = (
    '<?xml version="1.0" encoding="UTF-8"?><office:document-content '
    'xmlns:office="urn:oasis:names:tc:opendocument:xmlns:office:1.0" '
    'xmlns:table="urn:oasis:names:tc:opendocument:xmlns:table:1.0" '
    'xmlns:text="urn:oasis:names:tc:opendocument:xmlns:text:1.0" office:version="1.3">'
    '<office:body><office:spreadsheet><table:table table:name="Motors">'
)


def _ods(page: Page) -> bytes:
    """An OpenDocument sheet (ISO/IEC 26300): what is shown stands in text:p."""
    rows = [_ods_row([Cell(line)]) + _ods_row([Cell()]) for line in page.before]
    for grid in page.grids:
        rows += [_ods_row(row) for row in grid]
        rows.append(_ods_row([Cell()]))
    rows += [_ods_row([Cell(line)]) for line in page.after]
    tail = "</table:table></office:spreadsheet></office:body></office:document-content>"
    manifest = (
        '<?xml version="1.0"?><manifest:manifest xmlns:manifest="urn:oasis:names:tc:'
        'opendocument:xmlns:manifest:1.0"><manifest:file-entry manifest:full-path="/" '
        'manifest:media-type="application/vnd.oasis.opendocument.spreadsheet"/>'
        '<manifest:file-entry manifest:full-path="content.xml" manifest:media-type="text/xml"/>'
        "</manifest:manifest>"
    )
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w") as archive:
        archive.writestr("mimetype", "application/vnd.oasis.opendocument.spreadsheet")
        archive.writestr("content.xml", _ODS_HEAD + "".join(rows) + tail)
        archive.writestr("META-INF/manifest.xml", manifest)
    return out.getvalue()


def _ods_row(row: list[Cell | None]) -> str:
    return f"<table:table-row>{''.join(map(_ods_cell, row))}</table:table-row>"


def _ods_cell(cell: Cell | None) -> str:
    if cell is None:
        return "<table:covered-table-cell/>"
    text, kind = cell.text, 'office:value-type="string"'
    if cell.stored is not None:
        shape, _, unit = cell.number_format.partition('"')
        decimals = shape.rstrip("%").partition(".")[2].count("0")
        percent = shape.endswith("%")
        text = f"{cell.stored * (100 if percent else 1):.{decimals}f}"
        text += "%" if percent else unit.rstrip('"')
        value_type = "percentage" if percent else "float"
        kind = f'office:value-type="{value_type}" office:value="{cell.stored!r}"'
    spans = f' table:number-columns-spanned="{cell.columns}"' if cell.columns > 1 else ""
    spans += f' table:number-rows-spanned="{cell.rows}"' if cell.rows > 1 else ""
    lines = "".join(f"<text:p>{escape(line)}</text:p>" for line in text.split("\n"))
    return f"<table:table-cell {kind}{spans}>{lines if text else ''}</table:table-cell>"


@cache
def _pdf_font() -> str:
    import matplotlib
    from reportlab.pdfbase import pdfmetrics
    from reportlab.pdfbase.ttfonts import TTFont

    path = Path(matplotlib.get_data_path()) / "fonts" / "ttf" / "DejaVuSans.ttf"
    pdfmetrics.registerFont(TTFont("Plain", str(path)))
    return "Plain"


def _pdf(page: Page) -> bytes:
    from reportlab.lib.styles import ParagraphStyle
    from reportlab.platypus import Paragraph, SimpleDocTemplate, Spacer, Table

    rng = page.recipe.random("pdf")
    font = _pdf_font()
    ruled = rng.random() < 0.5
    style = [("FONT", (0, 0), (-1, -1), font, 8)]
    if ruled:
        style.append(("GRID", (0, 0), (-1, -1), 0.5, (0, 0, 0)))
    prose = ParagraphStyle("prose", fontName=font, fontSize=9)
    story: list[object] = [Paragraph(escape(line), prose) for line in page.before]
    for grid in page.grids:
        story += [Spacer(1, 14), Table(_texts(grid), style=style), Spacer(1, 14)]
    story += [Paragraph(escape(line), prose) for line in page.after]
    out = io.BytesIO()
    longest = max(sum(max(_width(t) for t in column) for column in zip(*_texts(g), strict=True))
                  + 3 * len(g[0]) for g in page.grids)  # fmt: skip
    size = (max(500, 6 * longest + 120), 842)
    SimpleDocTemplate(out, pagesize=size, leftMargin=36, rightMargin=36).build(story)
    return out.getvalue()


def _json(page: Page) -> str:
    return json.dumps(page.records, ensure_ascii=False, indent=1)


def _toml(page: Page) -> str:
    def text(value: object) -> str:
        return json.dumps(value, ensure_ascii=False)

    lines = []
    for record in page.records:
        lines += ["[[motors]]", *(f"{text(k)} = {text(v)}" for k, v in record.items()), ""]
    return "\n".join(lines)
