"""A look into XLS and XLSB files before the library opens them.

The library lays out every sheet as one full box of cells: a single cell in the last row and
column would fill memory. Only records and places are read here, never values.
"""

import struct
from pathlib import PurePath

from .archive import Archive
from .cells import MOST_CELLS, column_name
from .grid import TableError

OLE_MAGIC = bytes.fromhex("D0CF11E0A1B11AE1")
_MOST_SHEET = 60_000_000
_NO_SECTOR = 0xFFFFFFF0
# MS-XLS 2.3.1: records that begin with a row and a column (formula, blanks, numbers, texts …).
_XLS_CELLS = frozenset(
    {0x06, 0x0406, 0xBD, 0xBE, 0xD6, 0xFD, 0x0201, 0x0203, 0x0204, 0x0205, 0x027E}
)
_XLS_BEGIN, _XLS_PASSWORD = frozenset({0x09, 0x0209, 0x0409, 0x0809}), 0x2F


class _Box:
    """The corner of the cells seen so far, and the refusal of a box too large."""

    def __init__(self, name: str) -> None:
        self._name = name
        self._bottom = self._right = 0

    def add(self, row: int, column: int) -> None:
        self._bottom, self._right = max(self._bottom, row + 1), max(self._right, column + 1)
        if self._bottom * self._right > MOST_CELLS:
            raise TableError(
                f"{self._name}: a sheet spreads its cells over {self._bottom} rows down to column "
                f"{column_name(self._right)}, too much for one table; cut the part with the "
                "motors out of it"
            )


def check_xlsb(archive: Archive) -> None:
    """Refuse an XLSB archive with a sheet of too large a box.

    MS-XLSB 2.1.4: record 0 (BrtRowHdr) begins with the row, records 1 … 11 (the cells) begin
    with the column.
    """
    for member in archive.members:
        if not (PurePath(member).parent.name == "worksheets" and member.endswith(".bin")):
            continue
        data = archive.read(member, _MOST_SHEET)
        box = _Box(archive.name)
        at = row = 0
        while at < len(data):
            kind, at = _packed(data, at, 2)
            size, at = _packed(data, at, 4)
            if kind <= 11 and at + 4 <= len(data):
                number = struct.unpack_from("<I", data, at)[0]
                if kind == 0:
                    row = number
                else:
                    box.add(row, number)
            at += size


def _packed(data: bytes, at: int, most: int) -> tuple[int, int]:
    """A number of up to ``most`` bytes, seven bits each, lowest first, and where it ends."""
    value = 0
    for i in range(most):
        if at >= len(data):
            break
        byte = data[at]
        at += 1
        value |= (byte & 0x7F) << (7 * i)
        if byte < 128:
            break
    return value, at


def check_xls(data: bytes, name: str) -> None:
    """Refuse an XLS file that is encrypted, is no workbook, or has a sheet of too large a box."""
    if "EncryptedPackage".encode("utf-16-le") in data:
        raise _protected(name)
    stream = _workbook_stream(data, name)
    at, box = 0, _Box(name)
    while at + 4 <= len(stream):
        kind, size = struct.unpack_from("<HH", stream, at)
        at += 4
        if kind in _XLS_CELLS and size >= 4 and at + 4 <= len(stream):
            box.add(*struct.unpack_from("<HH", stream, at))
        elif kind in _XLS_BEGIN:
            box = _Box(name)
        elif kind == _XLS_PASSWORD:
            raise _protected(name)
        at += size


def _protected(name: str) -> TableError:
    return TableError(f"{name}: is protected by a password; save it without one")


def _workbook_stream(data: bytes, name: str) -> bytes:
    """The stream "Workbook" (or "Book") of a compound file, by its chain of sectors (MS-CFB)."""
    try:
        size = 1 << struct.unpack_from("<H", data, 30)[0]
        fat_count, directory = struct.unpack_from("<II", data, 44)
        cutoff, _, _, more, more_count = struct.unpack_from("<IIIII", data, 56)
        fat_sectors = list(struct.unpack_from("<109I", data, 76))
        for _ in range(min(more_count, len(data) // size)):
            *part, more = struct.unpack_from(f"<{size // 4}I", data, (more + 1) * size)
            fat_sectors += part
        fat: list[int] = []
        for sector in fat_sectors[:fat_count]:
            fat += struct.unpack_from(f"<{size // 4}I", data, (sector + 1) * size)
        entries = _chain(data, fat, directory, size)
        for at in range(0, len(entries) - 127, 128):
            length = struct.unpack_from("<H", entries, at + 64)[0]
            title = entries[at : at + max(0, length - 2)].decode("utf-16-le", "replace")
            start, stream_size = struct.unpack_from("<II", entries, at + 116)
            if title in {"Workbook", "Book"} and stream_size >= cutoff:
                return _chain(data, fat, start, size)[:stream_size]
    except (struct.error, IndexError, OverflowError):
        raise TableError(f"{name}: the workbook is damaged, perhaps cut short") from None
    raise TableError(f"{name}: is an Office file of the old kind, but no workbook")


def _chain(data: bytes, fat: list[int], sector: int, size: int) -> bytes:
    parts: list[bytes] = []
    while sector < _NO_SECTOR and len(parts) <= len(fat):
        parts.append(data[(sector + 1) * size : (sector + 2) * size])
        sector = fat[sector]
    return b"".join(parts)
