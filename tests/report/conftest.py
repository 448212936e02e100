"""The invented sample tables, read once into a catalog."""

from pathlib import Path

import pytest

from motorfolio.catalog.cli import main

SAMPLES = Path(__file__).parent.parent.parent / "sample_entries"
TABLES = (
    "brindlewick_22.csv", "gopher_notch.tsv", "grisoulette.csv", "quasselbach.csv",
    "tanuki_hollow.html", "wobbleton.csv",
)  # fmt: skip


@pytest.fixture(scope="session")
def catalog(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A catalog of the sample tables."""
    path = tmp_path_factory.mktemp("report") / "motors.sqlite"
    files = [str(SAMPLES / name) for name in TABLES]
    assert main(["import", *files, "--catalog", str(path)]) == 0
    assert main(["gears", str(SAMPLES / "gears.csv"), "--catalog", str(path)]) == 0
    return path


HELP = {"help_option_names": ["-h", "--help"]}
"""For a context without the program's own: click keeps a command's first help option for good."""
