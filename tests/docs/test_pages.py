"""The pages: examples run, generated parts fresh, links whole, everything explained."""

import re
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from motorfolio.catalog.cli import COMMANDS
from motorfolio.catalog.store.layout import MIGRATIONS
from motorfolio.schema.reconcile.causes import CAUSES

from . import generated, notes
from .pages import ROOT, Page, matches, pages
from .renew import abridged, renewed
from .run import FailedError, lines_of, prepare, run, shell

PAGES = [pytest.param(path, id=str(path.relative_to(ROOT))) for path in pages()]
STALE = "python -m tests.docs --write renews the pages"


@pytest.fixture(scope="session")
def prepared(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The samples with their catalog, made once."""
    return prepare(tmp_path_factory.mktemp("samples"))


# ---- the pages


@pytest.mark.parametrize("path", PAGES)
def test_the_examples_print_what_the_page_shows(path: Path, prepared: Path, tmp_path: Path) -> None:
    for step, actual in run(Page.read(path), tmp_path, prepared):
        shown = "\n".join(actual)
        assert matches(step.expected, actual), f"{STALE}: $ {step.source}\nprints\n{shown}"


@pytest.mark.parametrize("path", PAGES)
def test_generated_parts_are_fresh(path: Path) -> None:
    page = Page.read(path)
    for name, where in page.regions:
        assert page.lines[where.start : where.stop] == generated.generate(name), f"{STALE}: {name}"


@pytest.mark.parametrize("path", PAGES)
def test_links_lead_somewhere(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    for target, anchor in re.findall(r"\]\((?!https?:)([^)#\s]*)(#[^)\s]*)?\)", text):
        there = (path.parent / target).resolve() if target else path
        assert there.exists(), f"{path.name} links to {target}"
        if anchor:
            heads = re.findall(r"^#+ (.+)$", there.read_text(encoding="utf-8"), re.M)
            slugs = {re.sub(r"[^\w -]", "", h.lower()).replace(" ", "-") for h in heads}
            assert anchor[1:] in slugs, f"{path.name} links to {target}{anchor}"


@pytest.mark.parametrize("path", PAGES)
def test_a_page_with_results_cautions_once(path: Path) -> None:
    """Wherever a page holds a motor against a requirement, it says what the answer is worth."""
    page = Page.read(path)
    commands = [s.source for s in page.steps if s.kind == "command" and not s.refused]
    results = [c for c in commands if re.match(r"motorfolio (search|operate|compare|show)\b", c)]
    if results:
        assert "screening aid" in " ".join(page.lines)


def test_every_guide_page_is_linked_from_the_guide() -> None:
    index = (ROOT / "docs" / "README.md").read_text(encoding="utf-8")
    for path in sorted((ROOT / "docs").rglob("*.md")):
        name = path.relative_to(ROOT / "docs").as_posix()
        assert name == "README.md" or f"({name})" in index, name
    assert "(docs/README.md)" in (ROOT / "README.md").read_text(encoding="utf-8")


def test_make_targets_that_pages_name_exist() -> None:
    targets = set(re.findall(r"^(\w+):", (ROOT / "Makefile").read_text(), re.M))
    for path in pages():
        for target in re.findall(r"(?:^|`)make (\w+)", path.read_text(encoding="utf-8"), re.M):
            assert target in targets, f"{path.name}: make {target}"


def test_the_readme_opens_with_the_job_and_two_commands() -> None:
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    title, job, rest = text.split("\n\n", 2)
    assert title == "# motorfolio"
    for word in (
        "brushed DC",
        "brushless DC",
        "servo",
        "torque constant",
        "SQLite",
        "inconsistent",
    ):
        assert word in " ".join(job.split())
    assert re.search(r"```sh\nmake demo.*\nmake test", rest[:400])


# ---- what is explained is complete


def test_every_relation_and_cause_is_explained() -> None:
    told = generated.explanations()
    assert set(told["causes"]) == set(CAUSES)
    assert set(told["relations"]) == set(generated.relation_names())


def test_every_relation_named_in_the_code_is_known() -> None:
    """A finding made with a name of its own is on the page, too."""
    names = set(generated.relation_names())
    for path in (ROOT / "schema").rglob("*.py"):
        for name in re.findall(r'relation="([a-z-]+)"', path.read_text(encoding="utf-8")):
            assert name in names, f"{path.name}: {name}"


def test_every_table_and_view_is_described() -> None:
    assert set(generated.layout_names("table")) == set(notes.TABLES)
    assert set(generated.layout_names("view")) == set(notes.VIEWS)
    assert MIGRATIONS


def test_every_command_has_help_with_an_example() -> None:
    shown = "\n".join(generated.commands())
    for name in COMMANDS:
        part = shown.split(f"## motorfolio {name}\n", 1)[1].split("\n## ", 1)[0]
        assert "Usage: motorfolio" in part
        assert "Example: motorfolio" in part.replace("\n  ", " "), name


# ---- the machinery


@pytest.mark.parametrize(
    ("expected", "actual", "same"),
    [
        (["a", "b"], ["a", "b"], True),
        (["a", "…", "d"], ["a", "b", "c", "d"], True),
        (["a", "…"], ["a"], True),
        (["…", "c"], ["a", "b", "c"], True),
        (["a", "…", "c"], ["a", "b"], False),
        (["a.c"], ["abc"], False),
        (["a"], ["a", "b"], False),
        ([], ["a"], False),
    ],
)
def test_an_elision_stands_for_any_lines(
    expected: list[str], actual: list[str], same: bool
) -> None:
    assert matches(expected, actual) is same


def test_renewing_keeps_elisions_around_what_was_shown() -> None:
    old = ["Heading  Read as", "…", "error BRIN-10-C (row 9)", "    is 10 times", "…", "64 motors."]
    new = [
        "Heading    Read as",
        "x",
        "y",
        "error BRIN-10-C (row 10)",
        "    is 10.0 times",
        "error D",
    ]
    kept = abridged(old, [*new, "65 motors."])
    assert kept == ["Heading    Read as", "…", *new[3:5], "…", "65 motors."]


def test_a_stale_example_is_found_and_renewed(prepared: Path, tmp_path: Path) -> None:
    path = tmp_path / "page.md"
    path.write_text(
        '```console\n$ motorfolio convert "1 V/krpm" "mV/rpm"\n2 mV/rpm\n```\n'
        "```python\nprint(6 * 7)\n```\n```text\n41\n```\n"
    )
    page = Page.read(path)
    outputs = list(run(page, tmp_path, prepared))
    assert [matches(s.expected, found) for s, found in outputs] == [False, False]
    new = renewed(page, outputs)
    assert new[2] == "1 mV/rpm"
    assert new[8] == "42"


def test_a_refusal_must_be_announced(prepared: Path, tmp_path: Path) -> None:
    path = tmp_path / "page.md"
    path.write_text("```console\n$ motorfolio convert 1 V\n```\n")
    with pytest.raises(FailedError, match="ended with 2"):
        list(run(Page.read(path), tmp_path, prepared))


def test_times_of_day_are_fixed() -> None:
    assert lines_of("\n1  2031-05-06T07:08:09Z \n\n") == ["1  2026-01-31T12:00:00Z"]


# ---- shell completion, as the page on installing documents it


@pytest.mark.parametrize("name", ["bash", "zsh", "fish"])
def test_a_completion_script_is_printed(name: str, tmp_path: Path) -> None:
    status, said = shell(f"_MOTORFOLIO_COMPLETE={name}_source motorfolio", tmp_path)
    assert status == 0
    assert "_MOTORFOLIO_COMPLETE" in said


@pytest.mark.parametrize(
    ("words", "offered"),
    [("motorfolio sea", "search"), ("motorfolio search --sup", "--supply"),
     ("motorfolio plot pl", "plane"), ("motorfolio schema mo", "motor")],
)  # fmt: skip
def test_words_are_completed(words: str, offered: str, tmp_path: Path) -> None:
    count = len(words.split()) - 1
    command = (
        f'COMP_WORDS="{words}" COMP_CWORD={count} _MOTORFOLIO_COMPLETE=bash_complete motorfolio'
    )
    status, said = shell(command, tmp_path)
    assert status == 0
    assert f"plain,{offered}" in said.splitlines()


@pytest.mark.skipif(shutil.which("bash") is None, reason="needs bash")
def test_bash_completes_with_the_printed_script(tmp_path: Path) -> None:
    script = (
        'eval "$(_MOTORFOLIO_COMPLETE=bash_source motorfolio)"; '
        "complete -p motorfolio; COMP_WORDS=(motorfolio conv); COMP_CWORD=1; "
        "_motorfolio_completion motorfolio conv motorfolio; printf '%s\\n' \"${COMPREPLY[@]}\""
    )
    status, said = shell(f"bash -c {_quoted(script)}", tmp_path)
    assert status == 0
    assert "convert" in said.splitlines()


def _quoted(text: str) -> str:
    return "'" + text.replace("'", "'\\''") + "'"


def test_the_module_says_what_is_stale() -> None:
    said = subprocess.run(
        [sys.executable, "-m", "tests.docs", "--help"], cwd=ROOT, capture_output=True, text=True,
        check=True,
    )  # fmt: skip
    assert "--write" in said.stdout
