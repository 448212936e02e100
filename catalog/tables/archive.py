"""Zip files opened with care: sizes are bounded before anything is unpacked."""

import lzma
import struct
import zipfile
import zlib
from collections.abc import Iterator
from typing import IO, BinaryIO

from lxml import etree

from .grid import TableError

_MOST_MEMBERS = 10_000
_MOST_BYTES = 600_000_000
FAULTS = (
    etree.XMLSyntaxError,
    zipfile.BadZipFile,
    zlib.error,
    lzma.LZMAError,
    struct.error,
    EOFError,
    OSError,
    ValueError,
    RuntimeError,  # a password, an unknown packing
)
"""What damaged archives and XML raise, besides a TableError."""
_BIG_MEMBER = 20_000_000
_MOST_RATIO = 150  # spreadsheet XML packs 10 to 40 times; a bomb a thousand times


def safe_parser() -> etree.XMLParser:
    """An XML parser without entities, network, document types and boundless depth."""
    return etree.XMLParser(
        resolve_entities=False,
        no_network=True,
        load_dtd=False,
        huge_tree=False,
        remove_comments=True,
        remove_pis=True,
    )


def safe_stream(file: IO[bytes], *tags: str) -> Iterator[etree._Element]:
    """The elements of these tags, each when it is complete, under the same care."""
    for _, element in etree.iterparse(
        file,
        tag=tags,
        resolve_entities=False,
        no_network=True,
        load_dtd=False,
        huge_tree=False,
        remove_comments=True,
        remove_pis=True,
    ):
        yield element


class Archive:
    """A zip file whose members are read by name; every fault becomes one sentence."""

    def __init__(self, file: BinaryIO, name: str) -> None:
        self.name = name
        try:
            self._zip = zipfile.ZipFile(file)
            members = self._zip.infolist()
        except FAULTS:
            raise TableError(
                f"{name}: the workbook is damaged, perhaps cut short; save or download it again"
            ) from None
        self.members = {member.filename.lstrip("/"): member for member in members}
        total = sum(member.file_size for member in members)
        packed = any(
            m.file_size > _BIG_MEMBER and m.file_size > _MOST_RATIO * m.compress_size
            for m in members
        )
        if total > _MOST_BYTES or packed or len(members) > _MOST_MEMBERS:
            raise TableError(
                f"{name}: would unpack to {total / 1e6:.0f} MB from {len(members)} parts, which "
                "no table needs; it is not opened"
            )
        if any(member.flag_bits & 1 for member in members):
            raise TableError(f"{name}: is encrypted; save it without a password")

    def __contains__(self, member: str) -> bool:
        return member in self.members

    def open(self, member: str) -> IO[bytes]:
        try:
            return self._zip.open(self.members[member])
        except KeyError:
            raise TableError(
                f"{self.name}: the workbook is damaged: its part {member} is missing"
            ) from None
        except FAULTS as error:
            raise self.damaged(error) from None

    def read(self, member: str, most: int = 200_000_000) -> bytes:
        if member in self and self.members[member].file_size > most:
            raise TableError(f"{self.name}: its part {member} is too large to be read")
        try:
            with self.open(member) as stream:
                return stream.read()
        except FAULTS as error:
            raise self.damaged(error) from None

    def xml(self, member: str) -> etree._Element:
        """The root of an XML part that has no document type."""
        try:
            with self.open(member) as stream:
                root = etree.parse(stream, safe_parser()).getroot()
        except FAULTS as error:
            raise self.damaged(error) from None
        if root.getroottree().docinfo.internalDTD is not None:
            raise TableError(
                f"{self.name}: its part {member} declares a document type, which a workbook never "
                "does; it is not read"
            )
        return root

    def damaged(self, error: Exception) -> TableError:
        reason = str(error).split("\n")[0][:120] or type(error).__name__
        return TableError(f"{self.name}: the workbook is damaged ({reason}); save it again")

    def prove(self) -> None:
        """Unpack everything once without keeping it, so that no declared size is a lie."""
        for member in self.members:
            try:
                with self.open(member) as stream:
                    while stream.read(1 << 20):
                        pass
            except FAULTS as error:
                raise self.damaged(error) from None
