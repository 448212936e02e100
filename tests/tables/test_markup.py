"""Pages: tables, spans (HTML Living Standard, 4.9), lists, what is no data."""

from pathlib import Path

import pytest

from motorfolio.catalog.tables import TableError

from .files import check, one, read

DATA = "<tr><th>Type</th><th>U</th></tr><tr><td>A1</td><td>24</td></tr>"


def test_spans_are_laid_out(tmp_path: Path) -> None:
    page = """<!DOCTYPE html><html><body><h2>Servo   motors</h2><table>
    <thead><tr><th rowspan=2>Type</th><th colspan=2>Rated</th><th rowspan="2">m<br>kg</th></tr>
    <tr><th>n</th><th>M</th></tr></thead>
    <tbody><tr><td>A1</td><td rowspan=0>3000</td><td>1.2</td><td>4</td></tr>
    <tr><td>A2</td><td>2.4</td><td>5</td></tr></tbody></table></body></html>"""
    grid = one(read(tmp_path / "a.html", page))
    assert grid.sheet == "Servo motors"
    assert grid.rows == [
        ["Type", "Rated", "", "m\nkg"],
        ["", "n", "M", ""],
        ["A1", "3000", "1.2", "4"],
        ["A2", "", "2.4", "5"],
    ]
    spans = {(s.row, s.column, s.rows, s.columns) for s in grid.spans}
    assert spans == {(0, 0, 2, 1), (0, 1, 1, 2), (0, 3, 2, 1), (2, 1, 2, 1)}


def test_signs_raised_lowered_and_named(tmp_path: Path) -> None:
    page = """<table><tr><td>J [g&nbsp;cm<sup>2</sup>]</td><td>10<sup>&minus;4</sup></td></tr>
    <tr><td>M<sub>0</sub> K<sub>T</sub></td><td>3000<sup>1)</sup> &plusmn;5 &#8486;</td></tr>
    <tr><td>n<sup>a</sup></td><td><span style="display: none">9</span>7
      <b>min<sup>-1</sup></b><script>8</script></td></tr></table>"""
    grid = one(read(tmp_path / "a.html", page))
    assert grid.rows == [
        ["J [g\xa0cm²]", "10⁻⁴"],
        ["M₀ K_T", "3000¹⁾ ±5 \u2126"],
        ["n^a", "7 min⁻¹"],
    ]


def test_layout_navigation_and_hidden_tables_are_passed_over(tmp_path: Path) -> None:
    page = f"""<html><body><nav><table>{DATA}</table></nav>
    <table role="presentation">{DATA}</table><table hidden>{DATA}</table>
    <table><tr><td>menu 1</td><td><table><caption>Motors</caption>{DATA}</table></td></tr></table>
    <table><tr><td>Home</td><td>Contact</td></tr></table>
    <table><tr style="display:none"><td>old</td><td>12</td></tr>{DATA}</table></body></html>"""
    file = read(tmp_path / "a.html", page)
    assert [grid.sheet for grid in file.grids] == ["Motors", "table 7"]
    for grid in file.grids:
        check(grid)
        assert grid.rows == [["Type", "U"], ["A1", "24"]]
    assert file.grids[1].row_numbers == [2, 3]
    assert file.grids[1].remarks == ["hidden rows are skipped: 1"]
    reasons = " ".join(file.skipped)
    assert len(file.skipped) == 5
    for reason in ("navigation", "marked as layout", "not shown", "layout of the page", "figures"):
        assert reason in reasons


def test_definition_lists(tmp_path: Path) -> None:
    page = (
        "<h1>Motor A1</h1><dl><dt>Rated voltage</dt><dd>24 V</dd><dt>Mass</dt><dd>450 g</dd>"
        "<dd>1 lb</dd><dt>Note</dt></dl>"
    )
    grid = one(read(tmp_path / "a.html", page))
    assert grid.sheet == "Motor A1"
    assert grid.rows == [["Rated voltage", "24 V"], ["Mass", "450 g\n1 lb"], ["Note", ""]]


def test_a_page_without_tables_is_read_as_text(tmp_path: Path) -> None:
    page = (
        "<html><body><p>Motor: A1<ul><li>Rated voltage: 24 V<li>Speed: 3000 rpm</ul></body></html>"
    )
    grid = one(read(tmp_path / "a.html", page))
    assert grid.rows == [["Motor", "A1"], ["Rated voltage", "24 V"], ["Speed", "3000 rpm"]]
    assert "no table" in grid.remarks[-1]
    with pytest.raises(TableError, match="no table with figures"):
        read(tmp_path / "a.html", "<html><body><p>Welcome</p></body></html>")


def test_a_table_is_picked_by_its_title(tmp_path: Path) -> None:
    page = f"<h2>One</h2><table>{DATA}</table><h2>Two</h2><table>{DATA.replace('24', '48')}</table>"
    assert one(read(tmp_path / "a.html", page, sheet="two")).rows[1] == ["A1", "48"]
    with pytest.raises(TableError, match="“One”, “Two”"):
        read(tmp_path / "a.html", page, sheet="Three")


@pytest.mark.parametrize(
    ("head", "codec"),
    [
        ("<meta charset=utf-8>", "utf-8"),
        ('<meta charset="iso-8859-1">', "cp1252"),
        ('<meta http-equiv="Content-Type" content="text/html; charset=Shift_JIS">', "cp932"),
        ("", "gb18030"),
        ("", "utf-16"),
        ('<?xml version="1.0" encoding="UTF-8"?><!DOCTYPE html>', "utf-8"),
    ],
)
def test_encodings(tmp_path: Path, head: str, codec: str) -> None:
    word = {"cp1252": "Länge –", "cp932": "定格電圧トルク", "gb18030": "额定电压转速"}.get(
        codec, "Länge Ω"
    )
    page = f"{head}<html><body><table><tr><td>{word}</td><td>24</td></tr></table></body></html>"
    assert one(read(tmp_path / "a.htm", page.encode(codec))).rows[0] == [word, "24"]


def test_external_entities_are_not_followed(tmp_path: Path) -> None:
    (tmp_path / "secret.txt").write_text("secret 99")
    page = (
        f'<!DOCTYPE html [<!ENTITY x SYSTEM "{(tmp_path / "secret.txt").as_uri()}">]>'
        "<html><body><table><tr><td>&x;</td><td>24</td></tr></table></body></html>"
    )
    assert "secret 99" not in str(read(tmp_path / "a.html", page).grids)
