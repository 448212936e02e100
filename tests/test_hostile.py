"""Files that mean harm or are broken: one sentence, exit status 2, 5 s, 500 MB, nothing stored.

Every import runs as a process of its own, so that time and memory are those a user would see;
the 5 s are processor time, as other work on the machine must not decide a test.
"""

from __future__ import annotations

import csv
import io
import json
import os
import resource
import struct
import subprocess
import sys
import time
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import NamedTuple

import openpyxl
import pytest

PROGRAM = "import sys; from motorfolio.catalog.cli import main; sys.exit(main())"
SECONDS = 5.0
MEGABYTES = 500
GOOD = (
    "Part number,Nominal voltage [V],No-load speed [rpm],Torque constant [mNm/A],"
    "Terminal resistance [Ω]\nVX22-12,12,8200,13.6,2.31\nVX22-24,24,8150,27.4,9.18\n"
)


class Run(NamedTuple):
    """A finished call of the program."""

    status: int
    out: str
    err: str
    seconds: float
    wall_seconds: float
    megabytes: float


def run(folder: Path, *words: str, data: bytes | None = None) -> Run:
    """Calls the program with its own catalog, and measures it."""
    start = time.monotonic()
    with (folder / "out").open("wb") as out, (folder / "err").open("wb") as err:
        process = subprocess.Popen(
            [sys.executable, "-c", PROGRAM, *words],
            stdin=subprocess.PIPE,
            stdout=out,
            stderr=err,
            env={**os.environ, "MOTORFOLIO_CATALOG": str(folder / "catalog.sqlite")},
            preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_CPU, (30, 30)),
        )
        assert process.stdin is not None
        try:
            process.stdin.write(data or b"")
            process.stdin.close()
        except BrokenPipeError:
            pass  # it had seen enough
        _, wait, usage = os.wait4(process.pid, 0)
        process.returncode = os.waitstatus_to_exitcode(wait)
    return Run(
        process.returncode,
        (folder / "out").read_text(encoding="utf-8"),
        (folder / "err").read_text(encoding="utf-8"),
        usage.ru_utime + usage.ru_stime,
        time.monotonic() - start,
        usage.ru_maxrss / 1000,
    )


def stored(folder: Path) -> list[str]:
    """The part numbers in the catalog."""
    if not (folder / "catalog.sqlite").exists():
        return []
    result = run(folder, "export", "--format", "json")
    return [motor["part_number"] for motor in json.loads(result.out)["motors"]]


def assert_refused(result: Run, folder: Path) -> None:
    assert result.status == 2, (result.status, result.out[:300], result.err[-600:])
    lines = [line for line in result.err.splitlines() if line.strip()]
    assert len(lines) == 1, result.err
    assert len(lines[0]) < 600
    assert not any(sign in result.err for sign in ("Traceback", "\x1b", "\x00"))
    assert result.out == ""
    assert result.seconds < SECONDS
    assert result.wall_seconds < 12 * SECONDS
    assert result.megabytes < MEGABYTES
    assert stored(folder) == []


# ---- what may be thrown at it


def workbook(rows: list[list[object]]) -> bytes:
    book = openpyxl.Workbook()
    for row in rows:
        book.worksheets[0].append(row)
    out = io.BytesIO()
    book.save(out)
    return out.getvalue()


def good_workbook() -> bytes:
    return workbook([list(row) for row in csv.reader(GOOD.splitlines())])


def zip_bomb() -> bytes:
    """A workbook whose sheet unpacks to 800 MB."""
    out = io.BytesIO()
    with (
        zipfile.ZipFile(io.BytesIO(good_workbook())) as source,
        zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED, compresslevel=1) as target,
    ):
        for name in source.namelist():
            if not name.startswith("xl/worksheets/"):
                target.writestr(name, source.read(name))
        with target.open("xl/worksheets/sheet1.xml", "w", force_zip64=True) as sheet:
            sheet.write(b'<?xml version="1.0"?><worksheet xmlns="http://schemas.openxmlformats.org/'
                        b'spreadsheetml/2006/main"><sheetData>')  # fmt: skip
            chunk = b'<row><c t="inlineStr"><is><t>aaaaaaaa</t></is></c></row>' * 20_000
            for _ in range(800_000_000 // len(chunk)):
                sheet.write(chunk)
            sheet.write(b"</sheetData></worksheet>")
    return out.getvalue()


def entity_bomb() -> bytes:
    """A workbook whose sheet is ten lines of XML entities that expand to gigabytes."""
    entities = '<!ENTITY a0 "aaaaaaaaaaaaaaaa">' + "".join(
        f'<!ENTITY a{i} "{f"&a{i - 1};" * 16}">' for i in range(1, 9)
    )
    sheet = (
        f'<?xml version="1.0"?><!DOCTYPE worksheet [{entities}]><worksheet xmlns="http://schemas.'
        'openxmlformats.org/spreadsheetml/2006/main"><sheetData><row r="1"><c r="A1" '
        't="inlineStr"><is><t>&a8;</t></is></c></row></sheetData></worksheet>'
    )
    out = io.BytesIO()
    with (
        zipfile.ZipFile(io.BytesIO(good_workbook())) as source,
        zipfile.ZipFile(out, "w") as target,
    ):
        for name in source.namelist():
            content = sheet if name.startswith("xl/worksheets/") else source.read(name)
            target.writestr(name, content)
    return out.getvalue()


def locked_workbook() -> bytes:
    """What a spreadsheet program makes of a password: an OLE compound file with EncryptedPackage.

    Layout as in [MS-CFB] (Compound File Binary File Format): header, one FAT sector, one
    directory sector, nothing else that a reader needs to see what it is.
    """
    header = struct.pack(
        "<8s16xHHHHH6xIIIIIIIII109I",
        b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1",
        0x3E, 3, 0xFFFE, 9, 6, 0, 1, 1, 0, 4096, 0xFFFFFFFE, 0, 0xFFFFFFFE, 0,
        0, *[0xFFFFFFFF] * 108,
    )  # fmt: skip
    fat = struct.pack("<128I", 0xFFFFFFFD, 0xFFFFFFFE, *[0xFFFFFFFF] * 126)

    def entry(name: str, kind: int, child: int, right: int) -> bytes:
        text = name.encode("utf-16-le")
        return struct.pack("<64sHBBIII16xI8x8xIQ", text, len(text) + 2, kind, 1, 0xFFFFFFFF,
                           right, child, 0, 0xFFFFFFFE, 0)  # fmt: skip

    directory = (
        entry("Root Entry", 5, 1, 0xFFFFFFFF)
        + entry("EncryptionInfo", 2, 0xFFFFFFFF, 2)
        + entry("EncryptedPackage", 2, 0xFFFFFFFF, 0xFFFFFFFF)
        + bytes(128)
    )
    return header + fat + directory


def pdf(password: str | None = None, text: bool = True) -> bytes:
    from reportlab.lib import pdfencrypt
    from reportlab.pdfgen import canvas

    out = io.BytesIO()
    lock = pdfencrypt.StandardEncryption(password, ownerPassword="owner") if password else None
    page = canvas.Canvas(out, encrypt=lock)
    if text:
        page.drawString(72, 700, "Nominal voltage V 12 24")
    else:
        page.rect(72, 600, 300, 100, fill=1)  # as a scanned page: marks, and no text
    page.save()
    return out.getvalue()


def nonsense_columns() -> bytes:
    head = ",".join(f"quux{i} glorp" for i in range(200))
    return "\n".join(
        [head, *(",".join(f"zz{i * j}" for i in range(200)) for j in range(30))]
    ).encode()


def deep_json() -> bytes:
    return b"[" * 200_000 + b"]" * 200_000


REFUSED: dict[str, tuple[str, Callable[[], bytes]]] = {
    "empty": ("empty.csv", lambda: b""),
    "blank": ("blank.csv", lambda: b" \n\t\n \r\n" * 1000),
    "only a byte order mark": ("bom.csv", lambda: b"\xef\xbb\xbf"),
    "binary": ("binary.csv", lambda: bytes(range(256)) * 2000),
    "binary without extension": ("binary", lambda: os.urandom(100_000)),
    "empty workbook file": ("empty.xlsx", lambda: b""),
    "empty PDF file": ("empty.pdf", lambda: b""),
    "truncated workbook": ("cut.xlsx", lambda: good_workbook()[:-700]),
    "workbook cut in the middle": ("half.xlsx", lambda: good_workbook()[:2000]),
    "archive without a workbook": ("plain.xlsx", lambda: zip_of({"readme.txt": b"hello"})),
    "OpenDocument without content": ("plain.ods", lambda: zip_of({"mimetype": b"x"})),
    "zip bomb": ("bomb.xlsx", zip_bomb),
    "entity bomb": ("entities.xlsx", entity_bomb),
    "line of 20 MB": ("line.csv", lambda: b"a" * 20_000_000),
    "line of 20 MB with delimiters": ("commas.csv", lambda: b"12,ab;" * 3_500_000),
    "20 MB in one quoted cell": ("quote.csv", lambda: b'Type,"' + b"x\n" * 10_000_000),
    "NUL bytes": ("nul.csv", lambda: b"\x00" * 500_000),
    "200 nonsense columns": ("nonsense.csv", nonsense_columns),
    "prose": ("prose.txt", lambda: b"It was a dark and stormy night; the rain fell.\n" * 4000),
    "JSON of another shape": ("other.json", lambda: b'{"openapi": "3.1", "paths": {"/a": [1, 2]}}'),
    "JSON of a number": ("number.json", lambda: b"42"),
    "JSON cut short": ("cut.json", lambda: b'[{"Type": "VX22", "Nominal voltage [V]": 12'),
    "deep JSON": ("deep.json", deep_json),
    "TOML of another shape": ("other.toml", lambda: b'[tool.black]\nline-length = 100\n'),
    "broken TOML": ("broken.toml", lambda: b"[[motors]\n= 3"),
    "workbook with a password": ("locked.xlsx", locked_workbook),
    "PDF with a password": ("locked.pdf", lambda: pdf("secret")),
    "scanned page": ("scan.pdf", lambda: pdf(text=False)),
    "PDF cut short": ("cut.pdf", lambda: pdf()[:300]),
    "PDF called a workbook": ("page.xlsx", lambda: pdf(text=False)),
    "picture called CSV": ("picture.csv", lambda: b"\x89PNG\r\n\x1a\n" + os.urandom(20_000)),
    "HTML without a table": ("page.html", lambda: b"<html><body><p>Hello</p></body></html>"),
    "HTML of spans": (
        "spans.html",
        lambda: b"<table><tr><td colspan='99999999' rowspan='99999999'>x</td></tr></table>",
    ),
    "HTML nested 100,000 deep": ("deep.html", lambda: b"<table><tr><td>" * 100_000),
}  # fmt: skip


def zip_of(entries: dict[str, bytes]) -> bytes:
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w") as archive:
        for name, content in entries.items():
            archive.writestr(name, content)
    return out.getvalue()


@pytest.mark.parametrize("name", REFUSED)
def test_a_file_that_cannot_be_used_is_refused_in_one_sentence(name: str, tmp_path: Path) -> None:
    file, make = REFUSED[name]
    path = tmp_path / file
    path.write_bytes(make())
    result = run(tmp_path, "import", str(path))
    assert_refused(result, tmp_path)
    assert file in result.err


def test_a_folder_and_a_missing_file_are_refused(tmp_path: Path) -> None:
    for path in (tmp_path, tmp_path / "nowhere.csv"):
        result = run(tmp_path, "import", str(path))
        assert result.status == 2
        assert "Traceback" not in result.err
        assert path.name in result.err


def test_one_bad_file_among_good_ones_stores_nothing(tmp_path: Path) -> None:
    good, other, bad = tmp_path / "good.csv", tmp_path / "other.csv", tmp_path / "bad.xlsx"
    good.write_text(GOOD, encoding="utf-8")
    other.write_text(GOOD.replace("VX22", "VX40"), encoding="utf-8")
    bad.write_bytes(good_workbook()[:2000])
    result = run(tmp_path, "import", str(good), str(bad), str(other))
    assert_refused(result, tmp_path)
    assert run(tmp_path, "import", str(good), str(other)).status == 0
    assert len(stored(tmp_path)) == 4


def test_a_wrong_extension_is_seen_through_or_refused(tmp_path: Path) -> None:
    """A workbook called .csv is read as what it is, or refused: never read as noise."""
    path = tmp_path / "workbook.csv"
    path.write_bytes(good_workbook())
    result = run(tmp_path, "import", str(path), "--json")
    if result.status == 0:
        parts = [m["part_number"] for f in json.loads(result.out)["files"] for m in f["motors"]]
        assert parts == ["VX22-12", "VX22-24"]
    else:
        assert_refused(result, tmp_path)


def test_rubbish_on_standard_input_is_refused(tmp_path: Path) -> None:
    result = run(tmp_path, "import", "-", "--format", "csv", data=os.urandom(50_000))
    assert_refused(result, tmp_path)


@pytest.mark.parametrize("number", ["NaN", "Infinity", "-Infinity", "1e999", "∞", "inf", "-1e400"])
@pytest.mark.parametrize("format_", ["json", "csv"])
def test_what_is_not_a_finite_number_is_never_a_figure(
    number: str, format_: str, tmp_path: Path
) -> None:
    """NaN and infinite values in a table are listed as unread, or the file is refused."""
    path = tmp_path / f"sheet.{format_}"
    if format_ == "csv":
        path.write_text(GOOD.replace("13.6", number), encoding="utf-8")
    else:
        bare = number if number[-1].isdigit() or number.endswith(("N", "y")) else f'"{number}"'
        path.write_text(
            '[{"Part number": "VX22-12", "Nominal voltage [V]": 12, "No-load speed [rpm]": 8200,'
            f' "Torque constant [mNm/A]": {bare}, "Terminal resistance [Ω]": 2.31}}]',
            encoding="utf-8",
        )
    result = run(tmp_path, "import", str(path), "--json")
    if result.status == 2:
        assert_refused(result, tmp_path)
        return
    document = json.loads(result.out, parse_constant=lambda name: pytest.fail(name))
    figures = document["files"][0]["motors"][0]["figures"]
    assert "torque_constant" not in figures
    assert "no_load_speed" in figures
    listed = document["files"][0]["unread"]
    assert any("orque" in (u["heading"] or "") for u in listed) or number in ("∞",)


@pytest.mark.parametrize("formula", ["=1+2", "+cmd|' /C calc'!A0", "-2+3", "@SUM(1)", "\t=1+1"])
def test_formulas_are_inert_in_what_is_exported(formula: str, tmp_path: Path) -> None:
    """A part number or a description that a spreadsheet would run leaves the catalog inert."""
    path = tmp_path / "sheet.csv"
    rows = list(csv.reader(GOOD.splitlines()))
    rows[0].append("Description")
    rows[1][0] = formula + "X"
    rows[1].append(formula)
    rows[2].append("plain")
    with path.open("w", newline="", encoding="utf-8") as file:
        csv.writer(file).writerows(rows)
    result = run(tmp_path, "import", str(path), "--json")
    assert result.status in (0, 2), result.err
    exported = run(tmp_path, "export", "--format", "csv")
    for row in csv.reader(io.StringIO(exported.out)):
        for cell in row:
            assert not cell.lstrip().startswith(("=", "@")), cell
            if cell.lstrip().startswith(("+", "-")):
                float(cell)


def test_control_characters_do_not_reach_the_terminal(tmp_path: Path) -> None:
    path = tmp_path / "sheet.csv"
    path.write_text(GOOD.replace("VX22-12", "VX\x1b[2J\x07\u202e22"), encoding="utf-8")
    for words in (["import", str(path)], ["check"], ["export", "--format", "csv"]):
        result = run(tmp_path, *words)
        assert "\x1b[2J" not in result.out + result.err
        assert "\x07" not in result.out + result.err


def test_a_path_in_a_file_is_never_opened(tmp_path: Path) -> None:
    """External entities, links and images of a page or workbook part stay unread."""
    secret = tmp_path / "secret.txt"
    secret.write_text("TOPSECRET", encoding="utf-8")
    page = tmp_path / "page.html"
    page.write_text(
        f'<!DOCTYPE html [<!ENTITY x SYSTEM "file://{secret}">]><html><body><table><tr><th>Type'
        "</th><th>Nominal voltage [V]</th><th>No-load speed [rpm]</th></tr>"
        f"<tr><td>VX&x;</td><td>12</td><td>8200<img src='file://{secret}'></td></tr></table>",
        encoding="utf-8",
    )
    result = run(tmp_path, "import", str(page), "--dry-run", "--json")
    assert "TOPSECRET" not in result.out + result.err
