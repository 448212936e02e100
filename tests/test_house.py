"""The house rules that a machine can check: one way of data, light start, no machine paths."""

import ast
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
MODULES = sorted([*ROOT.glob("schema/**/*.py"), *ROOT.glob("catalog/**/*.py")])
HEAVY = {"pint", "numpy", "pydantic", "sqlite_utils", "rapidfuzz", "rich", "lxml", "openpyxl"}


def imports(path: Path) -> set[str]:
    """Absolute names of what a module imports, relative ones resolved from its folder."""
    package = ["motorfolio", *path.relative_to(ROOT).parts[:-1]]
    names: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            base = package[: len(package) - node.level + 1] if node.level else []
            names.add(".".join([*base, *((node.module or "").split(".") if node.module else [])]))
    return names


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(ROOT)))
def test_schema_knows_nothing_of_the_catalog(path: Path) -> None:
    """Data flows one way: nothing in schema/ imports from catalog/."""
    if path.relative_to(ROOT).parts[0] == "schema":
        assert not [n for n in imports(path) if n.startswith("motorfolio.catalog")]


def test_pint_is_met_in_one_module_only() -> None:
    met = {p.relative_to(ROOT).as_posix() for p in MODULES if "pint" in imports(p)}
    assert met == {"schema/units/factors.py"}


def test_every_package_is_installed() -> None:
    listed = set(
        tomllib.loads((ROOT / "pyproject.toml").read_text())["tool"]["setuptools"]["packages"]
    )
    present = {
        "motorfolio." + ".".join(p.relative_to(ROOT).parts[:-1])
        for p in MODULES
        if p.name == "__init__.py"
    }
    assert listed == present


@pytest.mark.parametrize("words", [["--help"], ["search", "--help"], ["import", "--help"]])
def test_help_loads_nothing_heavy(words: list[str]) -> None:
    code = (
        f"import sys; sys.argv = ['motorfolio', *{words!r}]\n"
        "from motorfolio.catalog.cli import main\n"
        "try:\n    main()\n"
        "except SystemExit:\n    pass\n"
        f"print(sorted({HEAVY!r} & set(sys.modules)))"
    )
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.splitlines()[-1] == "[]"
    assert "Usage: motorfolio" in out.stdout
