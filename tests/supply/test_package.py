"""What is shipped: every data file, bounded dependencies; nothing that runs or fetches texts."""

from __future__ import annotations

import ast
import re
import tomllib
from fnmatch import fnmatch
from itertools import chain
from pathlib import Path

import pytest

from .project import ROOT

PROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
MODULES = sorted([*ROOT.glob("schema/**/*.py"), *ROOT.glob("catalog/**/*.py")])

FORBIDDEN_MODULES = {
    # objects made from bytes, code made from text
    "pickle", "cPickle", "_pickle", "dill", "cloudpickle", "joblib", "shelve", "marshal", "code",
    "codeop", "runpy", "imp",
    # the network
    "socket", "socketserver", "ssl", "http", "urllib.request", "urllib.error", "urllib3", "ftplib",
    "smtplib", "poplib", "imaplib", "telnetlib", "xmlrpc", "requests", "httpx", "aiohttp",
    "asyncio", "webbrowser",
    # other programs
    "subprocess", "pty", "multiprocessing", "ctypes",
}  # fmt: skip
FORBIDDEN_CALLS = {
    "eval", "exec", "compile", "__import__", "system", "popen", "enable_load_extension",
    "load_extension", "read_pickle", "to_pickle", "urlopen", "breakpoint",
}  # fmt: skip
METHODS_ALLOWED = {"compile"}
"""``re.compile`` and the like: only the built-in of that name makes code from text."""

ALLOWED = {
    "catalog/tables/workbook.py": ["imports subprocess"],
    "catalog/tables/parquet.py": ["imports subprocess"],
}
"""Old binary workbooks and Parquet files are opened in a child that may die: this Python, a file
of this package, the bytes or the name of the file."""


def wrongs(tree: ast.AST) -> list[str]:
    """What a module does that no module of the package may do."""
    found = []
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom) and not node.level:
            base = node.module or ""
            names = [base, *(f"{base}.{alias.name}" for alias in node.names)]
        else:
            names = []
        for name in names:
            parts = name.split(".")
            starts = {".".join(parts[:n]) for n in range(1, len(parts) + 1)}
            found += [f"imports {bad}" for bad in sorted(starts & FORBIDDEN_MODULES)]
        if isinstance(node, ast.Call):
            called = node.func
            if isinstance(called, ast.Name) and called.id in FORBIDDEN_CALLS:
                found.append(f"calls {called.id}")
            if isinstance(called, ast.Attribute) and called.attr in (
                FORBIDDEN_CALLS - METHODS_ALLOWED
            ):
                found.append(f"calls .{called.attr}")
            wants = {k.arg: k.value for k in node.keywords}
            if isinstance(allowed := wants.get("allow_pickle"), ast.Constant) and allowed.value:
                found.append("allows pickles")
    return found


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(ROOT)))
def test_nothing_is_unpickled_evaluated_or_fetched(path: Path) -> None:
    """A datasheet may come from anywhere: no text in it may become code, an address or a call."""
    found = wrongs(ast.parse(path.read_text(encoding="utf-8")))
    assert found == ALLOWED.get(path.relative_to(ROOT).as_posix(), [])


@pytest.mark.parametrize(
    "text",
    ["import pickle", "from urllib import request", "import urllib.request as r", "eval('1')",
     "import os\nos.system('x')", "from http.client import HTTPConnection",
     "np.load(f, allow_pickle=True)", "compile('1', '', 'eval')"],
)  # fmt: skip
def test_the_scan_sees_what_it_looks_for(text: str) -> None:
    assert wrongs(ast.parse(text))


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(ROOT)))
def test_no_numbered_place_in_sql(path: Path) -> None:
    """Python 3.14 takes "?1" for a name and refuses a tuple for it; write :name and a mapping."""
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Constant) and isinstance(node.value, str):
            sql = re.search(r"\b(SELECT|INSERT|UPDATE|DELETE|WHERE)\b", node.value)
            assert not (sql and re.search(r"\?\d", node.value)), node.value


def test_every_data_file_is_shipped() -> None:
    told = PROJECT["tool"]["setuptools"]["package-data"]
    for folder in ("schema", "catalog"):
        for path in (ROOT / folder).rglob("*"):
            inside = path.relative_to(ROOT / folder)
            if path.is_dir() or path.suffix in (".py", ".pyc"):
                continue
            patterns = told[f"motorfolio.{folder}"]
            # setuptools' patterns don't reach into folders, fnmatch's would
            assert any(
                fnmatch(str(inside), pattern) and str(inside).count("/") == pattern.count("/")
                for pattern in patterns
            ), f"{folder}/{inside} would be missing from the wheel"


def test_every_dependency_has_both_bounds() -> None:
    extras = PROJECT["project"]["optional-dependencies"]
    for wanted in [*PROJECT["project"]["dependencies"], *chain.from_iterable(extras.values())]:
        assert ">=" in wanted, wanted
        assert ",<" in wanted, wanted
