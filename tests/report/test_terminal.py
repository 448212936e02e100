"""What a person sees of one motor and of several in a terminal."""

import copy
import io
import re
import subprocess
import sys
from pathlib import Path

import pytest
from rich.console import Console

from motorfolio.catalog.report import card, comparison, plain
from motorfolio.catalog.report.screen import paged
from motorfolio.catalog.store import Catalog

ESCAPE = re.compile("\x1b\\[[0-9;]*m")


def drawn(draw, width: int = 80, *, terminal: bool = False, **options) -> str:
    out = Console(
        file=io.StringIO(), width=width, markup=False, highlight=False, emoji=False,
        force_terminal=terminal, **options,
    )  # fmt: skip
    draw(out)
    return out.file.getvalue()


@pytest.fixture(scope="module")
def motors(catalog: Path) -> dict[str, dict]:
    parts = ("PIKA-3", "MARMOT-1", "MARMOT-2", "TERN-45L")
    with Catalog.open(catalog) as opened:
        return {part: opened.motor(part) for part in parts}


@pytest.mark.parametrize("width", [80, 100, 150, 220])
def test_card_fits_the_width_and_shows_every_part(motors, width):
    text = drawn(lambda out: card.print_card(motors["PIKA-3"], out), width)
    assert max(map(len, text.splitlines())) <= width
    for word in ("860 oz-in", "6.073 N·m", "R7 C8", "reconciled", "✗ error", "gopher_notch.tsv"):
        assert word in text
    constant = motors["PIKA-3"]["constants"]["torque_constant"]
    assert f"{constant['low'] * 1e3:.4g} … {constant['high'] * 1e3:.4g}" in text


def test_a_doubted_figure_is_marked_and_no_other(motors):
    lines = drawn(lambda out: card.print_card(motors["PIKA-3"], out), 120).splitlines()
    marked = [line for line in lines if line.startswith("✗") and "error:" not in line]
    assert len(marked) == 1
    assert "stall torque" in marked[0]


def test_card_escapes_what_a_sheet_could_smuggle_in(motors):
    evil = copy.deepcopy(motors["MARMOT-1"])
    evil["maker"] = "[bold red]Evil[/] \x1b[31mred\u202e"
    evil["figures"]["mass"]["text"] = "6\x07\x1b]0;title\x07"
    evil["source"]["file"] = "a\x1b[2Jb.csv"
    text = drawn(lambda out: card.print_card(evil, out), 120)
    assert "\x1b" not in text
    assert "\x07" not in text
    assert "\u202e" not in text
    assert "[bold red]Evil[/]" in text


def test_no_colour_without_a_terminal_and_words_beside_colour_with_one(motors):
    def draw(out: Console) -> None:
        card.print_card(motors["PIKA-3"], out)

    assert not ESCAPE.search(drawn(draw))
    coloured = drawn(draw, terminal=True, color_system="standard")
    assert "\x1b[1;31m" in coloured
    assert ESCAPE.sub("", coloured) == drawn(draw)
    assert not re.search("\x1b\\[[0-9;]*3[0-7]m", drawn(draw, terminal=True, no_color=True))


def test_comparison_marks_the_better_value_only_beyond_the_intervals(motors):
    shown = [motors["MARMOT-1"], motors["TERN-45L"]]
    text = drawn(lambda out: comparison.print_comparison(shown, out), 100)

    def line(name: str) -> str:
        return next(row for row in text.splitlines() if row.startswith(name))

    assert line("mass").rstrip().endswith("-53 % ◆")
    assert "◆" not in line("torque constant")
    assert "≁" in line("nominal current")  # A dc beside A rms
    same = [motors["MARMOT-1"], motors["MARMOT-1"] | {"part_number": "TWIN"}]
    again = drawn(lambda out: comparison.print_comparison(same, out), 100)
    body = again.split("◆ better")[0]
    assert "◆" not in body
    assert body.count("=") > 10


def test_a_doubted_figure_is_never_the_better_one(motors):
    shown = [motors["MARMOT-1"], motors["PIKA-3"]]  # whose stall torque of 860 oz-in is wrong
    text = drawn(lambda out: comparison.print_comparison(shown, out), 100)
    row = next(line for line in text.splitlines() if line.startswith("stall torque"))
    assert "✗" in row
    assert "◆" not in row


@pytest.mark.parametrize("width", [80, 160])
def test_comparison_of_many_keeps_the_first_beside_the_others(motors, width):
    many = [motors["MARMOT-1"], *(motors["TERN-45L"] | {"part_number": f"T{i}"} for i in range(9))]
    text = drawn(lambda out: comparison.print_comparison(many, out), width)
    assert max(map(len, text.splitlines())) <= width
    heads = [line for line in text.splitlines() if "MARMOT-1" in line and "T" in line[30:]]
    assert len(heads) > 1 if width == 80 else heads
    for i in range(9):
        assert f"T{i}" in text


def test_without_a_terminal_nothing_pages(capsys):
    paged(lambda out: out.print("\n".join(map(str, range(500)))))
    assert capsys.readouterr().out.splitlines()[-1] == "499"


def test_show_with_json_imports_no_terminal_library(catalog):
    code = (
        "import sys; from motorfolio.catalog.cli import main;"
        f"main(['show', 'MARMOT-1', '--json', '--catalog', {str(catalog)!r}]);"
        "sys.exit(any(m in sys.modules for m in ('rich', 'numpy', 'pydantic', 'matplotlib')))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, check=False)
    assert done.returncode == 0, done.stderr


@pytest.mark.parametrize(("text", "unit", "printed"), [
    ("24", "V", "24 V"), ("24 V", "V", "24 V"), ("250 g", "kg", "250 g"),
    ("max 24", "V", "max 24 V"),
    ("24 typ.", "V", "24 typ. V"), ("1.2e-3", "kg", "1.2e-3 kg"), ("85 %", "1", "85 %"),
    ("0.9 A @ 10 V", "A", "0.9 A @ 10 V"), ("24", None, "24"), ("1,5", "kg", "1,5 kg"),
])  # fmt: skip
def test_a_cell_with_its_own_unit_is_not_given_its_headings_too(text, unit, printed):
    assert plain.printed({"text": text, "printed_unit": unit}) == printed
