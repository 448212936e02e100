"""A file before it is understood: its bytes, its fingerprint, and one look through all of it."""

import codecs
import hashlib
import io
import re
from dataclasses import dataclass
from pathlib import Path
from typing import BinaryIO

from .grid import TableError

_CHUNK = 1 << 20
_HEAD = 1 << 16
_SAMPLE = 1 << 17
_CONTROL_BYTES = bytes(b for b in range(32) if b not in (0, 9, 10, 13)) + b"\x7f"
_C1_UTF8 = re.compile(rb"\xc2[\x80-\x84\x86-\x9f]|\xef\xbb\xbf")
_INERT = re.compile(rb"'[=+\-@]")


@dataclass(slots=True)
class Survey:
    """What one pass over the bytes tells.

    ``high_lines`` is a sample of the lines with bytes above 127; ``valid_utf8`` and
    ``undefined_1252`` speak of the whole file; ``longest_line`` is exact only above 1 MiB.
    """

    sha256: str
    size: int
    head: bytes
    tail: bytes
    high_lines: bytes
    ascii: bool
    valid_utf8: bool
    undefined_1252: bool
    has_nul: bool
    has_controls: bool
    has_inert: bool
    longest_line: int


@dataclass(slots=True)
class Source:
    """A file (or the bytes of standard input) with its survey."""

    name: str
    path: Path | None
    data: bytes | None
    survey: Survey

    @property
    def suffix(self) -> str:
        return self.path.suffix.lower() if self.path else ""

    def open(self) -> BinaryIO:
        return io.BytesIO(self.data) if self.data is not None else _opened(self.path, self.name)

    def read(self, most: int, what: str) -> bytes:
        """All bytes; a TableError where there are more than ``most``."""
        if self.survey.size > most:
            raise TableError(
                f"{self.name}: {self.survey.size / 1e6:.0f} MB is more than the "
                f"{most / 1e6:.0f} MB that a {what} may have; split it, or save it as CSV"
            )
        with self.open() as file:
            return file.read()


def open_source(path: Path | None, data: bytes | None) -> Source:
    """Look at a file as a whole; TableError where it can't be read or is empty."""
    if path is None:
        if data is None:
            raise TableError("standard input: nothing was given to read")
        source_name = "standard input"
        survey = _survey(io.BytesIO(data))
    else:
        source_name = str(path)
        data = None
        with _opened(path, source_name) as file:
            survey = _survey(file)
    if not survey.size:
        raise TableError(f"{source_name}: is empty")
    return Source(source_name, path, data, survey)


def _opened(path: Path | None, name: str) -> BinaryIO:
    assert path is not None
    try:
        if path.is_dir():
            raise TableError(f"{name}: is a folder; name the files in it")
        if path.exists() and not path.is_file():
            raise TableError(f"{name}: is no ordinary file; use - to read standard input")
        return path.open("rb")
    except FileNotFoundError:
        raise TableError(f"{name}: there is no such file") from None
    except PermissionError:
        raise TableError(f"{name}: may not be read (permission denied)") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise TableError(f"{name}: can't be opened ({reason})") from None


def _survey(file: BinaryIO) -> Survey:
    digest = hashlib.sha256()
    decoder = codecs.getincrementaldecoder("utf-8")()
    head = tail = b""
    high = bytearray()
    size = since = longest = 0
    ascii_only = valid = True
    pending = undefined = has_nul = controls = inert = False
    while chunk := file.read(_CHUNK):
        digest.update(chunk)
        if not size:
            head = chunk[:_HEAD]
        tail = (tail + chunk)[-4096:] if len(chunk) < 4096 else chunk[-4096:]
        size += len(chunk)
        has_nul = has_nul or b"\0" in chunk
        controls = controls or len(chunk.translate(None, _CONTROL_BYTES)) != len(chunk)
        inert = inert or _INERT.search(chunk) is not None
        if pending or not chunk.isascii():
            ascii_only = False
            if valid:
                try:
                    decoder.decode(chunk)
                    pending = bool(decoder.getstate()[0])
                except UnicodeDecodeError:
                    valid = False
            controls = controls or _C1_UTF8.search(chunk, 3) is not None
            undefined = undefined or len(chunk.translate(None, b"\x81\x8d\x8f\x90\x9d")) != len(
                chunk
            )
            if len(high) < _SAMPLE:
                for line in chunk.splitlines():
                    if not line.isascii():
                        high += line[:4096] + b"\n"
                        if len(high) >= _SAMPLE:
                            break
        first, last = chunk.find(b"\n"), chunk.rfind(b"\n")
        if first < 0:
            first, last = chunk.find(b"\r"), chunk.rfind(b"\r")
        if first < 0:
            since += len(chunk)
        else:
            longest = max(longest, since + first)
            since = len(chunk) - last - 1
    if valid and pending:
        valid = False
    return Survey(
        digest.hexdigest(), size, head, tail, bytes(high), ascii_only, valid, undefined,
        has_nul, controls, inert, max(longest, since),
    )  # fmt: skip
