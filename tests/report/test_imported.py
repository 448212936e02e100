"""What an import says: one line a heading on 80 columns, no word broken, nothing said twice."""

import io
import re
from pathlib import Path

import pytest
from rich.console import Console

from motorfolio.catalog.importing.run import Options, import_files
from motorfolio.catalog.report import imported

SAMPLES = Path(__file__).resolve().parents[2] / "sample_entries"
HANDMADE = SAMPLES.parent / "tests" / "handmade"


def printed(monkeypatch, path: Path, *, dry_run: bool = False, width: int = 80) -> list[str]:
    options = Options(dry_run=True)
    result = import_files(Path("none.sqlite"), [str(path)], options, with_documents=dry_run)
    out = Console(file=io.StringIO(), width=width, markup=False, highlight=False, emoji=False)
    monkeypatch.setattr(imported, "console", lambda: out)
    imported.print_import(result, Path("none.sqlite"), dry_run=dry_run)
    return [line.rstrip() for line in out.file.getvalue().splitlines()]


@pytest.mark.parametrize(
    "name", ["tanuki_hollow.html", "wobbleton.csv", "quasselbach.csv", "grisoulette.csv"]
)
def test_each_heading_takes_one_line_and_the_sheet_a_screen(monkeypatch, name):
    lines = printed(monkeypatch, SAMPLES / name)
    start = next(i for i, line in enumerate(lines) if line.startswith("───")) + 1
    end = next(i for i, line in enumerate(lines) if line.startswith("? assumed"))
    result = import_files(Path("none.sqlite"), [str(SAMPLES / name)], Options(dry_run=True))
    assert end - start == len(result.files[0].headings)
    findings = next((i for i, s in enumerate(lines) if re.match("error|warning", s)), len(lines))
    assert findings <= 15 + len(result.files[0].headings)


def test_constants_of_the_first_motors_and_how_many_more(monkeypatch):
    lines = printed(monkeypatch, SAMPLES / "quasselbach.csv")
    head = next(line for line in lines if line.startswith("Motor "))
    assert head.split() == ["Motor", "Km", "Ra", "J", "Km/√Ra"]
    assert any(re.match(r"IGEL-12 +14\.84 mN·m/A +3\.438 Ω", line) for line in lines)
    assert "… and 4 more (motorfolio list)" in lines


def test_a_reason_that_many_headings_share_stands_once_below_the_table(monkeypatch):
    lines = printed(monkeypatch, SAMPLES / "gopher_notch.tsv")
    assert sum("the weight is taken as a force" in line for line in lines) == 1
    assert sum(bool(re.search(r"\[oz.* a$", line)) for line in lines) == 7


def test_frame_values_carry_a_mark_and_a_legend(monkeypatch):
    lines = printed(monkeypatch, HANDMADE / "catalogue_block_numbered.csv")
    assert any(re.match(r"23 Max. speed \[rpm\] \* +max. speed$", line) for line in lines)
    assert any("* printed once for the motors of a frame" in line for line in lines)


def test_a_dry_run_shows_every_cell_on_a_line(monkeypatch):
    lines = printed(monkeypatch, SAMPLES / "brindlewick_22.csv", dry_run=True)
    start = lines.index("BRIN-22-D")
    assert any(
        re.match(r"  torque constant +R7 C6 +81\.8 mNm/A +81\.8 mN·m/A$", line)
        for line in lines[start : start + 30]
    )


def test_a_finding_hangs_below_its_head(monkeypatch):
    lines = printed(monkeypatch, SAMPLES / "tanuki_hollow.html")
    head = next(i for i, line in enumerate(lines) if line.startswith("error  KODAMA-E"))
    assert all(line.startswith("    ") for line in lines[head + 1 : head + 6])


@pytest.mark.parametrize(
    ("reason", "said"),
    [
        ('"Stall torque" is a name of it, N·m fits', ""),
        ('symbol "Kt", N·m/A fits', "symbol"),
        ('"Current" under "Stall", A fits', ""),
        ('"Drehmomnt" is spelled like a name of it, N·m fits', "like “Drehmomnt”"),
        ("set by --set", "set by --set"),
        ('"Torque" is a name of it, N·m fits; the weight is taken as a force, ozf',
         "the weight is taken as a force, ozf"),
    ],
)  # fmt: skip
def test_reasons_in_short(reason, said):
    assert imported.short(reason) == said
