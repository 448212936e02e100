"""Delimited text: delimiters, encodings, quoting, long files. Checks are of the reader itself."""

import subprocess
import sys
from pathlib import Path

import pytest

from motorfolio.catalog.tables import TableError, read_tables

from .files import check, one, read

GERMAN = [
    ["Typ", "Nennspannung", "Läuferträgheitsmoment", "Kühlung", "Anschlusswiderstand"],
    ["", "V", "g·cm²", "", "mΩ"],
    ["LÖ-35", "24", "53,0", "Eigenkühlung, größtmöglich", "±620"],
    ["LÖ-42", "36", "48,5", "Wasserkühlung (5…40 °C)", "±920"],
]
JAPANESE = [
    ["型式", "定格電圧 (V)", "定格トルク (N・m)", "ロータ慣性モーメント"],
    ["ア-60", "200", "1.27", "0.28×10⁻⁴"],
    ["ア-80", "200", "2.39", "1.42×10⁻⁴"],
]
CHINESE = [
    ["型号", "额定电压 (V)", "额定转矩 (N·m)", "转子惯量 (kg·cm²)"],
    ["甲-80", "220", "2.39", "0.96"],
    ["甲-130", "220", "7.16", "11.2"],
]


def written(rows: list[list[str]], delimiter: str, end: str = "\n") -> str:
    def quoted(cell: str) -> str:
        return f'"{cell}"' if delimiter in cell else cell

    return "".join(delimiter.join(map(quoted, row)) + end for row in rows)


@pytest.mark.parametrize("delimiter", [",", ";", "\t", "|"])
@pytest.mark.parametrize(
    ("codec", "rows", "remark"),
    [
        ("utf-8", GERMAN, None),
        ("utf-8-sig", GERMAN, None),
        ("utf-8", JAPANESE, None),
        ("utf-16", GERMAN, "UTF-16"),
        ("utf-16-le", GERMAN, "without a byte order mark"),
        ("utf-16-be", GERMAN, "without a byte order mark"),
        ("utf-32", CHINESE, "UTF-32"),
        ("cp1252", GERMAN, "Windows-1252"),
        ("latin-1", GERMAN, "Windows-1252"),
        ("shift_jis", JAPANESE, "Shift-JIS"),
        ("gb18030", CHINESE, "GB18030"),
        ("gb2312", CHINESE, "GB18030"),
    ],
)
def test_every_encoding_with_every_delimiter(
    tmp_path: Path, delimiter: str, codec: str, rows: list[list[str]], remark: str | None
) -> None:
    text = written(rows, delimiter)
    if codec in ("cp1252", "latin-1"):
        text = text.replace("Ω", "Ohm")
    if codec == "latin-1":
        text = text.replace("…", "-")
    if codec == "shift_jis":
        text = text.replace("⁻⁴", "-4")
    if codec == "gb2312":
        text = text.replace("²", "2").replace("N·m", "Nm").replace("·", "")
    grid = one(read(tmp_path / "a.csv", text.encode(codec)))
    expected = text.splitlines()
    assert len(grid.rows) == len(expected)
    for row, line in zip(grid.rows, expected, strict=True):
        assert delimiter.join(row).rstrip(delimiter) == line.replace('"', "").rstrip(delimiter)
    if remark is None:
        assert grid.remarks == []
    else:
        assert remark in grid.remarks[0]


def test_a_single_accented_letter_is_western(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.csv", "Typ;Länge mm\nA1;40\nA2;52\n".encode("latin-1")))
    assert grid.rows[0] == ["Typ", "Länge mm"]


@pytest.mark.parametrize("unit", ["g·cm²", "µH", "±10 %", "°C", "Ø mm", "½ kW"])
def test_lone_western_signs_are_not_taken_for_japanese(tmp_path: Path, unit: str) -> None:
    grid = one(read(tmp_path / "a.csv", f"Type;Value [{unit}]\nA1;40\n".encode("cp1252")))
    assert grid.rows[0][1] == f"Value [{unit}]"


def test_utf8_with_one_broken_byte_stays_utf8(tmp_path: Path) -> None:
    content = "Typ;Länge;Größe;Ω\nä;ö;ü;1\n".encode() + b"b\xff;1;2;3\n"
    grid = one(read(tmp_path / "a.csv", content))
    assert grid.rows[0][3] == "Ω"
    assert grid.rows[2][0] == "b\N{REPLACEMENT CHARACTER}"
    assert "some bytes are not" in grid.remarks[0]


def test_decimal_commas_do_not_make_the_comma_a_delimiter(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.csv", "Typ;R;k\nA1;0,62;18,1\nA2;2,45;36,2\nA3;9,80;72,4\n"))
    assert grid.rows[1] == ["A1", "0,62", "18,1"]


def test_thousands_commas_in_quotes(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.csv", 'Type,n0,U\nA1,"6,290",24\nA2,"10,750",12\n'))
    assert grid.rows[2] == ["A2", "10,750", "12"]


def test_lines_before_the_table_keep_their_numbers(tmp_path: Path) -> None:
    text = "Motors, all values at 25 °C\n\nType;U (V);n (rpm)\nA1;24;6000\nA2;12;5900\n\n\n"
    grid = one(read(tmp_path / "a.csv", text))
    assert grid.rows[0] == ["Motors, all values at 25 °C", "", ""]
    assert grid.rows[1] == ["", "", ""]
    assert grid.row_numbers == [1, 2, 3, 4, 5]
    assert grid.rows[4] == ["A2", "12", "5900"]


def test_line_breaks_inside_quoted_cells(tmp_path: Path) -> None:
    text = 'Type,"No-load\r\nspeed\r\n(rpm)",U\r\nA1,6000,24\r\nA2,5900,"12\rV"\r\n'
    grid = one(read(tmp_path / "a.csv", text))
    assert grid.rows[0] == ["Type", "No-load\nspeed\n(rpm)", "U"]
    assert grid.rows[2] == ["A2", "5900", "12\nV"]
    assert grid.row_numbers == [1, 2, 3]


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
def test_line_ends(tmp_path: Path, end: str) -> None:
    grid = one(read(tmp_path / "a.csv", written(GERMAN, ";", end)))
    assert grid.rows == GERMAN


def test_control_signs_go_and_everything_else_stays(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.csv", "Type,U\x0b V\nA\x01\x0812,\xa024\u2009V\u200b\n"))
    assert grid.rows == [["Type", "U V"], ["A12", "24\u2009V\u200b"]]


def test_part_numbers_keep_zeros_and_exponents(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.csv", "Part,U\n007,24\n12E4,12\n1-2,6\n"))
    assert [row[0] for row in grid.rows] == ["Part", "007", "12E4", "1-2"]


def test_inert_formulas_come_back_as_text(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.csv", "Part,U\n'=A1+1,24\n'-X,12\n'quoted',6\n@b,6\n"))
    assert [row[0] for row in grid.rows] == ["Part", "=A1+1", "-X", "'quoted'", "@b"]


def test_the_stated_delimiter_wins(tmp_path: Path) -> None:
    grid = one(read(tmp_path / "a.csv", "sep=;\nPart;U,I\nA,B;24\n"))
    assert grid.rows == [["Part", "U,I"], ["A,B", "24"]]
    assert grid.row_numbers == [2, 3]


def test_bars_with_frames_and_rules(tmp_path: Path) -> None:
    text = "| Type | U (V) | R |\n|:-----|------:|---|\n| A1 | 24 | - |\n| A2 | 12 | - |\n"
    grid = one(read(tmp_path / "a.md", text))
    assert grid.rows == [["Type", "U (V)", "R"], ["A1", "24", "-"], ["A2", "12", "-"]]
    assert grid.row_numbers == [1, 3, 4]


def test_ditto_and_inch_marks_are_no_quotes(tmp_path: Path) -> None:
    text = 'Type\tFrame\tMass\nA1\t42\t450\nA2\t"\t"\nA3\t"\t"\nA4\t57\t820\n'
    grid = one(read(tmp_path / "a.tsv", text))
    assert grid.rows[2] == ["A2", '"', '"']
    assert len(grid.rows) == 5
    assert "quotation marks" in grid.remarks[0]


def test_an_unclosed_quote_is_an_error_with_its_row(tmp_path: Path) -> None:
    rows = 'a,"x",c\n' * 400
    with pytest.raises(TableError, match=r"row 401: a quotation mark is opened"):
        read(tmp_path / "a.csv", rows + 'A,"broken,1\n' + "a,b,c\n" * 300)


def test_forced_formats(tmp_path: Path) -> None:
    assert one(read(tmp_path / "a.txt", "a,b\tc\n1,2\t3\n", format="tsv")).rows[0] == ["a,b", "c"]
    assert one(read(tmp_path / "a.txt", "A: 1\nB: 2\n", format="csv")).rows == [["A: 1"], ["B: 2"]]


def test_standard_input() -> None:
    file = read_tables(None, b"a;b\n1;2\n", format="csv")
    assert (file.name, file.format) == ("standard input", "csv")
    assert file.grids[0].rows == [["a", "b"], ["1", "2"]]


def test_a_long_file_goes_on_in_chunks(tmp_path: Path) -> None:
    path = tmp_path / "long.csv"
    with path.open("w") as file:
        file.write("Part,U,I\n")
        for i in range(1, 50_001):
            file.write(f"P{i},{i},0.5{',,' if i == 30_000 else ''}\n" if i != 26_000 else "\n")
        file.write("P50001,1,2,extra\n\n\n\n")
    grid = read_tables(path).grids[0]
    check(grid)
    assert len(grid.rows) == 5_000
    assert grid.continuation is not None
    numbers, rows = list(grid.row_numbers), list(grid.rows)
    for chunk_numbers, chunk in grid.continuation:
        assert len(chunk_numbers) == len(chunk) <= 20_500
        numbers += chunk_numbers
        rows += chunk
    assert numbers == list(range(1, 50_003))
    assert rows[30_000] == ["P30000", "30000", "0.5"]
    assert rows[26_000] == ["", "", ""]
    assert rows[-1] == ["P50001", "1", "2", "extra"]


@pytest.mark.skipif(sys.platform != "linux", reason="only Linux limits the address space")
def test_memory_of_a_long_file_is_bounded(tmp_path: Path) -> None:
    path = tmp_path / "long.csv"
    with path.open("w") as file:
        file.writelines(f"P{i},{','.join([f'{i % 97}.345'] * 24)}\n" for i in range(150_000))
    # All rows at once take 150,000 × 25 × 55 bytes = 200 MB beside the interpreter's 30 MB.
    program = (
        "import resource, sys\nfrom pathlib import Path\n"
        "resource.setrlimit(resource.RLIMIT_AS, (200_000_000,) * 2)\n"
        "from motorfolio.catalog.tables import read_tables\n"
        "grid = read_tables(Path(sys.argv[1])).grids[0]\n"
        "print(len(grid.rows) + sum(len(rows) for _, rows in grid.continuation))\n"
    )
    run = subprocess.run(
        [sys.executable, "-c", program, str(path)], capture_output=True, text=True, check=False
    )
    assert (run.stdout, run.stderr) == ("150000\n", "")


def test_quoted_cells_with_the_delimiter_in_them_are_cells(tmp_path: Path) -> None:
    """Two blocks of unequal width may be more even without the quotation marks; they count."""
    text = 'Type,"U, V","n, rpm","P, W"\nA1,3,"10,000",27.4\nA2,6,"9,920",27.4\n\n'
    text += (
        'Type,"nmax, rpm","k, V","M, Nm",L\nA1,13.4,0.295,"1,480",48.7\nA2,13.4,0.596,1.50,48.7\n'
    )
    rows = one(read(tmp_path / "a.csv", text)).rows
    assert rows[1][:4] == ["A1", "3", "10,000", "27.4"]
