"""Builders of test files that no general library writes: containers byte by byte."""

import io
import struct
import zipfile
from pathlib import Path

from motorfolio.catalog.tables import Grid, TableFile, read_tables

_OFFICE = "urn:oasis:names:tc:opendocument:xmlns"


def read(path: Path, content: bytes | str, **options: str) -> TableFile:
    """Write a file and read its tables."""
    path.write_bytes(content if isinstance(content, bytes) else content.encode())
    return read_tables(path, **options)


def one(file: TableFile) -> Grid:
    """The only grid of a file, checked for the rules that hold for every grid."""
    (grid,) = file.grids
    check(grid)
    return grid


def check(grid: Grid) -> None:
    width = len(grid.column_numbers)
    assert all(len(row) == width for row in grid.rows)
    assert len(grid.row_numbers) == len(grid.rows)
    assert not grid.rows or any(grid.rows[-1])
    assert not width or any(row[-1] for row in grid.rows)
    for span in grid.spans:
        assert span.rows * span.columns > 1
        assert span.row + span.rows <= len(grid.rows)
        assert span.column + span.columns <= width


def zipped(members: dict[str, bytes | str], compression: int = zipfile.ZIP_DEFLATED) -> bytes:
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w", compression) as archive:
        for name, content in members.items():
            archive.writestr(name, content)
    return buffer.getvalue()


def ods(tables: str, styles: str = "", head: str = "") -> bytes:
    """An OpenDocument spreadsheet (OpenDocument v1.3, part 2: packages) around given tables."""
    names = " ".join(f'xmlns:{n}="{_OFFICE}:{n}:1.0"' for n in ("office", "table", "text", "style"))
    content = (
        f'<?xml version="1.0" encoding="UTF-8"?>{head}<office:document-content {names}>'
        f"<office:automatic-styles>{styles}</office:automatic-styles>"
        f"<office:body><office:spreadsheet>{tables}</office:spreadsheet></office:body>"
        "</office:document-content>"
    )
    return zipped(
        {
            "mimetype": "application/vnd.oasis.opendocument.spreadsheet",
            "content.xml": content,
        }
    )


def xlsx(sheet: str, *, strings: str = "", styles: str = "", state: str = "visible") -> bytes:
    """A workbook of one sheet given as the XML inside <worksheet> (ECMA-376 Part 1)."""
    main = 'xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"'
    rel = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
    parts: dict[str, bytes | str] = {
        "[Content_Types].xml": "<Types/>",
        "xl/workbook.xml": f'<workbook {main} xmlns:r="{rel}"><sheets>'
        f'<sheet name="S" sheetId="1" state="{state}" r:id="r1"/></sheets></workbook>',
        "xl/_rels/workbook.xml.rels": f'<Relationships><Relationship Id="r1" '
        f'Type="{rel}/worksheet" Target="worksheets/sheet1.xml"/></Relationships>',
        "xl/worksheets/sheet1.xml": f"<worksheet {main}>{sheet}</worksheet>",
    }
    if strings:
        parts["xl/sharedStrings.xml"] = f"<sst {main}>{strings}</sst>"
    if styles:
        parts["xl/styles.xml"] = f"<styleSheet {main}>{styles}</styleSheet>"
    return zipped(parts)


def compound(stream_name: str, stream: bytes) -> bytes:
    """A compound file with one stream (MS-CFB, version 3, sectors of 512 bytes)."""
    stream = stream.ljust(4096, b"\0")  # shorter ones would belong into the mini stream
    stream += b"\0" * (-len(stream) % 512)
    count = len(stream) // 512
    fat_sectors = 1
    while (count + 1 + fat_sectors) * 4 > fat_sectors * 512:
        fat_sectors += 1
    free, end, fat_mark = 0xFFFFFFFF, 0xFFFFFFFE, 0xFFFFFFFD
    fat = [*range(1, count), end, end, *[fat_mark] * fat_sectors]
    fat += [free] * (fat_sectors * 128 - len(fat))

    def entry(name: str, kind: int, child: int, start: int, size: int) -> bytes:
        raw = name.encode("utf-16-le").ljust(64, b"\0")
        return raw + struct.pack(
            "<HBBIII16sIQQIQ",
            2 * len(name) + 2,
            kind,
            1,
            free,
            free,
            child,
            b"",
            0,
            0,
            0,
            start,
            size,
        )

    directory = entry("Root Entry", 5, 1, end, 0) + entry(stream_name, 2, free, 0, len(stream))
    directory += (b"\0" * 66 + b"\0\0" + struct.pack("<III", free, free, free)).ljust(
        128, b"\0"
    ) * 2
    first_fat = count + 1
    header = bytes.fromhex("D0CF11E0A1B11AE1") + b"\0" * 16
    header += struct.pack("<HHHHH6sIIIIIIIII", 0x3E, 3, 0xFFFE, 9, 6, b"", 0, fat_sectors, count, 0,
                          4096, end, 0, end, 0)  # fmt: skip
    difat = [first_fat + i for i in range(fat_sectors)]
    header += struct.pack("<109I", *difat, *[free] * (109 - fat_sectors))
    return header + stream + directory + struct.pack(f"<{len(fat)}I", *fat)


def xls(cells: dict[tuple[int, int], float | str]) -> bytes:
    """A BIFF8 workbook of one sheet "Motors" (MS-XLS 2.4)."""

    def record(kind: int, body: bytes) -> bytes:
        return struct.pack("<HH", kind, len(body)) + body

    def bof(kind: int) -> bytes:
        return record(0x0809, struct.pack("<HHHHII", 0x0600, kind, 0x0DBB, 0x07CC, 0, 6))

    name = b"Motors"
    rows = [row for row, _ in cells]
    columns = [column for _, column in cells]
    sheet = bof(0x0010) + record(
        0x0200, struct.pack("<IIHHH", min(rows), max(rows) + 1, min(columns), max(columns) + 1, 0)
    )
    for (row, column), value in sorted(cells.items()):
        place = struct.pack("<HHH", row, column, 0)
        if isinstance(value, str):
            text = value.encode("utf-16-le")
            body = place + struct.pack("<HB", len(value), 1) + text
            sheet += record(0x0204, body)
        else:
            sheet += record(0x0203, place + struct.pack("<d", value))
    sheet += record(0x000A, b"")
    codepage = record(0x0042, struct.pack("<H", 1200))
    bound_size = 4 + 4 + 1 + 1 + 2 + len(name)
    start = len(bof(5)) + len(codepage) + bound_size + 4
    bound = record(0x0085, struct.pack("<IBBBB", start, 0, 0, len(name), 0) + name)
    return compound("Workbook", bof(5) + codepage + bound + record(0x000A, b"") + sheet)


def xlsb(cells: dict[tuple[int, int], float | str]) -> bytes:
    """A binary workbook of one sheet "Motors" (MS-XLSB 2.1.4 and 2.4)."""

    def record(kind: int, body: bytes = b"") -> bytes:
        head = bytes([kind]) if kind < 128 else bytes([kind & 0x7F | 0x80, kind >> 7])
        size, length = b"", len(body)
        while True:
            size += bytes([length & 0x7F | (0x80 if length > 127 else 0)])
            length >>= 7
            if not length:
                return head + size + body

    def wide(text: str) -> bytes:
        return struct.pack("<I", len(text)) + text.encode("utf-16-le")

    book = record(131) + record(143)
    book += record(156, struct.pack("<II", 0, 1) + wide("rId1") + wide("Motors"))
    book += record(144) + record(132)
    rows = [row for row, _ in cells]
    columns = [column for _, column in cells]
    box = struct.pack("<IIII", min(rows), max(rows), min(columns), max(columns))
    sheet = record(129) + record(148, box) + record(145)
    for row in sorted(set(rows)):
        sheet += record(0, struct.pack("<II", row, 0) + b"\0" * 9)
        for (at, column), value in sorted(cells.items()):
            if at == row:
                place = struct.pack("<II", column, 0)
                if isinstance(value, str):
                    sheet += record(6, place + wide(value))
                else:
                    sheet += record(5, place + struct.pack("<d", value))
    sheet += record(146) + record(130)
    rel = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
    rels = "http://schemas.openxmlformats.org/package/2006/relationships"
    return zipped(
        {
            "[Content_Types].xml": "<Types/>",
            "xl/workbook.bin": book,
            "xl/_rels/workbook.bin.rels": f'<?xml version="1.0"?><Relationships xmlns="{rels}">'
            f'<Relationship Id="rId1" Type="{rel}/worksheet" Target="worksheets/sheet1.bin"/>'
            "</Relationships>",
            "xl/worksheets/sheet1.bin": sheet,
        }
    )
