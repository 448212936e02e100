"""Data flows one way through catalog/, too: what the early parts may import of their siblings."""

import ast
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
MAY_IMPORT = {"tables": set[str](), "reading": {"tables"}, "store": {"documents"}}
"""Of catalog/; a part may always import from itself and from schema/."""

LAST = {"commands", "cli", "library"}
"""Nothing but these imports from these; the package's lazy names lead to the library."""


def siblings(path: Path) -> set[str]:
    """The parts of catalog/ that a module imports from."""
    package = ["motorfolio", *path.relative_to(ROOT).parts[:-1]]
    found = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.ImportFrom) and node.level:
            base = package[: len(package) - node.level + 1]
            base += node.module.split(".") if node.module else []
            # "from . import x" in catalog/ itself names the part in x
            names = [[*base, alias.name] for alias in node.names] if len(base) == 2 else [base]
            found |= {name[2] for name in names if name[1] == "catalog"}
    return found


@pytest.mark.parametrize("part", MAY_IMPORT)
def test_early_parts_know_only_what_comes_before(part: str) -> None:
    modules = sorted((ROOT / "catalog" / part).rglob("*.py"))
    assert modules
    for module in modules:
        assert siblings(module) <= {part, *MAY_IMPORT[part]}, module.name


def test_nothing_imports_the_command_line() -> None:
    for module in sorted((ROOT / "catalog").rglob("*.py")):
        part = module.relative_to(ROOT / "catalog").parts[0].removesuffix(".py")
        if part not in {*LAST, "__init__"}:
            assert not siblings(module) & LAST, module.name
