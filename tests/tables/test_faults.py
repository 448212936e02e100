"""Input that can't be used: one clear sentence each, soon, and without filling memory."""

import io
import random
import re
import subprocess
import sys
import time
import zipfile
from collections.abc import Callable
from pathlib import Path

import pytest
from openpyxl import Workbook

from motorfolio.catalog.tables import TableError, read_tables
from motorfolio.catalog.tables.archive import Archive
from motorfolio.schema.errors import MotorfolioError

from .files import check, compound, ods, xls, xlsb, xlsx, zipped


def small_xlsx() -> bytes:
    return xlsx('<sheetData><row r="1"><c r="A1"><v>1</v></c></row></sheetData>')


def cell(reference: str) -> str:
    row = reference.lstrip("ABCDEFGHIJKLMNOPQRSTUVWXYZ")
    return f'<row r="{row}"><c r="{reference}"><v>1</v></c></row>'


def diagonal() -> bytes:
    from motorfolio.catalog.tables.cells import column_name

    rows = "".join(cell(f"{column_name(i)}{i}") for i in range(1, 4001))
    return xlsx(f"<sheetData>{rows}</sheetData>")


BOMB = "<!DOCTYPE x [" + '<!ENTITY a "aaaaaaaaaa">' + "".join(
    f'<!ENTITY {b} "{f"&{a};" * 10}">' for a, b in zip("abcdefgh", "bcdefghi", strict=True)
) + "]>"  # fmt: skip
NOISE = random.Random(5).randbytes(200_000)

CASES: dict[str, tuple[str, Callable[[], bytes], str]] = {
    "empty": ("a.csv", lambda: b"", "is empty"),
    "only a byte order mark": ("a.csv", lambda: b"\xef\xbb\xbf", "empty but for blanks"),
    "only blanks": ("a.csv", lambda: b" \n\n\t\n" * 1000, "empty but for blanks"),
    "only delimiters": ("a.csv", lambda: b",,,\n,,,\n", "holds no table"),
    "binary": ("a.csv", lambda: NOISE, "NUL bytes, so it is no text"),
    "binary without NUL": ("a.csv", lambda: NOISE.replace(b"\0", b"\x01"), "is no text"),
    "NUL bytes": ("a.csv", lambda: b"a,b\n1,\0\0\0\0\0\n" * 9, "NUL bytes"),
    "picture": ("a.csv", lambda: b"\x89PNG\r\n\x1a\n" + NOISE, "is a picture"),
    "archive": ("a.xlsx", lambda: b"\x1f\x8b\x08" + NOISE, "gzip archive"),
    "endless line": ("a.csv", lambda: b"1234567,," * 2_200_000, "a line of 20 MB"),
    "endless line of text": ("a.txt", lambda: b"abcdefg " * 2_500_000, "a line of 20 MB"),
    "endless cell": ("a.csv", lambda: b"a,b\n1,2\n" + b"x" * 500_000 + b",2\n", "can't be read"),
    "unclosed quote": (
        "a.csv",
        lambda: b'a,b\n' + b'"1,5",2\n' * 2000 + b'"1,2\n' + b"3,4\n" * 900_000,
        "a quotation mark is",
    ),
    "truncated workbook": ("a.xlsx", lambda: small_xlsx()[:-60], "damaged"),
    "half a workbook": ("a.xlsx", lambda: small_xlsx()[:300], "damaged"),
    "other zip": ("a.xlsx", lambda: zipped({"a.txt": "x"}), "no workbook"),
    "text document": (
        "a.ods",
        lambda: zipped({"mimetype": "application/vnd.oasis.opendocument.text", "content.xml": ""}),
        "no workbook",
    ),
    "zip bomb": (
        "a.ods",
        lambda: zipped({"mimetype": "spreadsheet", "content.xml": b" " * 50_000_000}),
        "unpack to",
    ),
    "many parts": (
        "a.xlsx",
        lambda: zipped({f"xl/{i}": b"" for i in range(12_000)}, zipfile.ZIP_STORED),
        "12000 parts",
    ),
    "missing part": ("a.xlsx", lambda: zipped({"xl/workbook.xml": "<workbook/>"}), "is missing"),
    "broken XML": ("a.xlsx", lambda: xlsx("<sheetData><row"), "damaged"),
    "cell in the last corner": (
        "a.xlsx",
        lambda: xlsx(f"<sheetData>{cell('A1')}{cell('XFD1048576')}</sheetData>"),
        "",
    ),
    "declared to the last corner": (
        "a.xlsx",
        lambda: xlsx(f'<dimension ref="A1:XFD1048576"/><sheetData>{cell("A1")}</sheetData>'),
        "",
    ),
    "all columns hidden and wide": (
        "a.xlsx",
        lambda: xlsx(f'<cols><col min="2" max="16384" hidden="1"/></cols><sheetData>{cell("A1")}'
                     "</sheetData>"),
        "",
    ),
    "spread over a diagonal": ("a.xlsx", diagonal, "too much for one table"),
    "row outside": (
        "a.xlsx",
        lambda: xlsx(f"<sheetData>{cell('A9999999')}</sheetData>"),
        "is outside a sheet",
    ),
    "lost text": (
        "a.xlsx",
        lambda: xlsx('<sheetData><row r="1"><c r="A1" t="s"><v>7</v></c></row></sheetData>'),
        "cell A1 names a text that is missing",
    ),
    "empty workbook": ("a.xlsx", lambda: xlsx("<sheetData/>"), "no sheet with visible cells"),
    "entities in ods": ("a.ods", lambda: ods("", head=BOMB), "document type"),
    "ods repeats for ever": (
        "a.ods",
        lambda: ods('<table:table table:name="a"><table:table-row table:number-rows-repeated='
                    '"1048576"><table:table-cell table:number-columns-repeated="16384">'
                    "<text:p xmlns:text='urn:oasis:names:tc:opendocument:xmlns:text:1.0'>1</text:p>"
                    "</table:table-cell></table:table-row></table:table>"),
        "repeated 1048576 times",
    ),
    "ods bad number": (
        "a.ods",
        lambda: ods('<table:table><table:table-row table:number-rows-repeated="x"/></table:table>'),
        "damaged",
    ),
    "locked workbook": ("a.xlsx", lambda: compound("EncryptedPackage", NOISE), "by a password"),
    "locked old workbook": (
        "a.xls",
        lambda: compound("Workbook", b"\x09\x08\x04\0\0\x06\x05\0\x2f\0\x02\0\0\0"),
        "by a password",
    ),
    "old text document": ("a.doc", lambda: compound("WordDocument", NOISE), "but no workbook"),
    "truncated old workbook": ("a.xls", lambda: xls({(0, 0): 1.0})[:700], "damaged|no workbook"),
    "last corner of an old workbook": (
        "a.xls", lambda: xls({(0, 0): 1.0, (65535, 255): 2.0}), "too much for one table",
    ),
    "last corner of a binary workbook": (
        "a.xlsb", lambda: xlsb({(0, 0): 1.0, (1048575, 16383): 2.0}), "too much for one table",
    ),
    "damaged binary workbook": (
        "a.xlsb", lambda: zipped({"xl/workbook.bin": NOISE[:500]}), "damaged",
    ),
    "deep JSON": ("a.json", lambda: b"[" * 20_000_000, "nested too deep"),
    "many values of JSON": ("a.json", lambda: b"[" + b"1," * 20_000_000 + b"1]", "million values"),
    "large JSON": ("a.json", lambda: b'{"a": "' + b"x" * 65_000_000 + b'"}', "65 MB is more"),
    "deep HTML": ("a.html", lambda: b"<html>" + b"<div>" * 300_000, "no table with figures"),
    "deep tables": (
        "a.html", lambda: b"<html>" + b"<table><tr><td>1" * 20_000, "no table",
    ),
    "wide spans": (
        "a.html",
        lambda: b"<table><tr>" + b"<td colspan=99999 rowspan=99999>1</td>" * 5000 + b"</table>",
        "more than 16384 columns",
    ),
    "garbage PDF": ("a.pdf", lambda: b"%PDF-1.4\n" + NOISE, "damaged"),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES)
def test_bad_input_gets_one_sentence_soon(tmp_path: Path, case: str) -> None:
    name, content, message = CASES[case]
    path = tmp_path / name
    path.write_bytes(content())
    start = time.process_time()
    if message:
        with pytest.raises(TableError, match=message) as caught:
            read_tables(path)
        text = str(caught.value)
        assert text.startswith(str(path))
        assert "\n" not in text
        assert len(text) < 400 + len(str(path))
    else:
        grid = read_tables(path).grids[0]
        assert grid.rows[0][0] == "1"
        assert len(grid.rows) * len(grid.column_numbers) <= 16
    assert time.process_time() - start < 5


@pytest.mark.skipif(sys.platform != "linux", reason="only Linux limits the address space")
@pytest.mark.parametrize(
    "case",
    ["endless line", "unclosed quote", "zip bomb", "cell in the last corner", "many values of JSON",
     "last corner of an old workbook", "large JSON", "wide spans"],
)  # fmt: skip
def test_bad_input_does_not_fill_memory(tmp_path: Path, case: str) -> None:
    name, content, message = CASES[case]
    path = tmp_path / name
    path.write_bytes(content())
    program = (
        "import resource, sys\nfrom pathlib import Path\n"
        "resource.setrlimit(resource.RLIMIT_AS, (600_000_000,) * 2)\n"
        "from motorfolio.catalog.tables import TableError, read_tables\n"
        "try:\n    read_tables(Path(sys.argv[1]))\nexcept TableError as error:\n    print(error)\n"
    )
    run = subprocess.run(
        [sys.executable, "-c", program, str(path)], capture_output=True, text=True, check=True
    )
    # The interpreter and its libraries take some 100 MB of the address space.
    assert run.stderr == ""
    assert not message or re.search(message, run.stdout)


@pytest.mark.parametrize("kind", ["xls", "xlsb", "xlsx", "ods", "pdf", "csv"])
def test_random_damage_is_an_error_or_a_table(
    tmp_path: Path, kind: str, capfd: pytest.CaptureFixture[str]
) -> None:
    cells: dict[tuple[int, int], float | str] = {(0, 0): "Part", (1, 0): "A1", (1, 1): 0.5}
    whole = {
        "xls": xls(cells),
        "xlsb": xlsb(cells),
        "xlsx": small_xlsx(),
        "ods": ods('<table:table table:name="a"><table:table-row/></table:table>'),
        "pdf": b"%PDF-1.4\n1 0 obj<</Type/Catalog/Pages 2 0 R>>endobj\n"
        b"2 0 obj<</Type/Pages/Kids[3 0 R]/Count 1>>endobj\n"
        b"3 0 obj<</Type/Page/Parent 2 0 R/MediaBox[0 0 9 9]>>endobj\ntrailer<</Root 1 0 R>>",
        "csv": 'Typ;Größe\n"A1";"1,5"\n'.encode() * 20,
    }[kind]
    draw = random.Random(11)
    sentences: list[str] = []
    for _ in range(25):
        content = bytearray(whole)
        for _ in range(draw.randrange(1, 12)):
            content[draw.randrange(len(content))] = draw.randrange(256)
        (tmp_path / "a").write_bytes(content)
        try:
            for grid in read_tables(tmp_path / "a").grids:
                check(grid)
        except TableError as error:
            sentences.append(str(error))
    assert not any("\n" in sentence for sentence in sentences)
    assert capfd.readouterr() == ("", "")


def test_what_is_no_readable_file(tmp_path: Path) -> None:
    for path, message in (
        (tmp_path, "is a folder"),
        (tmp_path / "none.csv", "no such file"),
        (tmp_path / ("x" * 400), "can't be opened|no such file"),
        (Path("/dev/null"), "no ordinary file"),
    ):
        with pytest.raises(TableError, match=message):
            read_tables(path)


def test_a_file_that_may_not_be_read(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "a.csv"
    path.write_text("a,b\n1,2\n")

    def refuse(*_: object, **__: object) -> None:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, "open", refuse)
    with pytest.raises(TableError, match="permission denied"):
        read_tables(path)


def test_calls_that_can_not_be_used(tmp_path: Path) -> None:
    with pytest.raises(TableError, match="name its format"):
        read_tables(None, b"a,b\n")
    with pytest.raises(TableError, match="format “xml” is not known"):
        read_tables(None, b"a,b\n", format="xml")
    with pytest.raises(TableError, match="nothing was given"):
        read_tables(None, format="csv")
    with pytest.raises(TableError, match="is a workbook, not csv"):
        read_tables(None, small_xlsx(), format="csv")
    (tmp_path / "a.csv").write_text("a,b\n1,2\n")
    with pytest.raises(TableError, match="no named sheets"):
        read_tables(tmp_path / "a.csv", sheet="x")
    assert issubclass(TableError, MotorfolioError)


def test_a_wrong_name_does_not_matter_where_the_content_is_clear(tmp_path: Path) -> None:
    book = Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.append(["Part", "U"])
    book.save(tmp_path / "a.csv")
    for name, content, kind in (
        ("b.xlsx", "Part,U\nA1,24\n", "csv"),
        ("b.pdf", '[{"Part": "A1", "U": 24}]', "json"),
        ("b.csv", "<html><body><table><tr><td>A1</td><td>24</td></tr></table>", "html"),
        ("b.json", "Part\tU\nA1\t24\n", "tsv"),
        ("b", "Model: A1\nRated voltage: 24 V\n", "text"),
        ("b.html", "[[motor]]\nPart = 'A1'\n", "toml"),
    ):
        (tmp_path / name).write_text(content)
        assert read_tables(tmp_path / name).format == kind
    assert read_tables(tmp_path / "a.csv").format == "xlsx"


def test_the_fingerprint_is_of_the_bytes(tmp_path: Path) -> None:
    # FIPS 180-4 example: SHA-256 of "abc" (NIST, Secure Hash Standard examples).
    (tmp_path / "a.csv").write_bytes(b"abc")
    digest = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert read_tables(tmp_path / "a.csv", format="csv").sha256 == digest


@pytest.mark.parametrize("packing", [zipfile.ZIP_DEFLATED, zipfile.ZIP_LZMA, zipfile.ZIP_BZIP2])
def test_a_zip_with_any_byte_damaged_is_read_or_refused(packing: int) -> None:
    """Damaged offsets, sizes, packings and passwords: zipfile has a different error for each."""
    whole = zipped({"a.xml": "<a>1</a>", "b.xml": "<b>2</b>"}, packing)
    refused = []
    for at in range(len(whole)):
        for damage in (0x00, 0xFF, whole[at] ^ 1):
            damaged = whole[:at] + bytes([damage]) + whole[at + 1 :]
            try:
                archive = Archive(io.BytesIO(damaged), "a.xlsx")
                archive.prove()
                for member in archive.members:
                    archive.xml(member)
                    archive.read(member)
            except TableError as error:
                refused.append(str(error))
    assert len(refused) > len(whole)
    assert all("a.xlsx: " in sentence and sentence.isprintable() for sentence in refused)
