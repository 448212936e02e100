"""Which tests run which lines of ``schema/``, learnt from one run of the tests."""

import ast
import gc
import time
from collections.abc import Generator
from dataclasses import dataclass, field
from functools import _lru_cache_wrapper, cache
from pathlib import Path
from typing import Any

import pytest
from coverage import Coverage

from .mutants import ROOT, Mutant

TESTS = ["tests/schema", "tests/search/test_axis_and_moves.py"]
SLOW = ["tests/schema/test_operation_against_solve_ivp.py"]
"""Left out: a third of the time, for the cross-check of what quicker tests hold too."""

IMPORT = "import"
"""Named as a test is, for lines that run while the tests are collected."""

OPTIONS = ["-q", "-p", "no:cacheprovider", "--assert=plain", "--no-header", "--tb=no"]
"""Plain assertions: the modules loaded before the fork could not be rewritten."""


@dataclass
class Covering:
    """Tests by file and line, and the seconds that each test took."""

    lines: dict[str, dict[int, set[str]]] = field(default_factory=dict)
    seconds: dict[str, float] = field(default_factory=dict)
    failed: list[str] = field(default_factory=list)
    """Tests that failed without any mutant."""

    def tests_of(self, mutant: Mutant) -> list[str]:
        """Tests that run the statement changed, the quickest first.

        A statement that runs when the module is imported may matter to every test, but first to
        those that call something of the module.
        """
        if not self.at_import(mutant):
            return sorted(self._contexts(mutant), key=self.seconds.__getitem__)
        near = set().union(*self.lines.get(mutant.module, {}).values()) - {IMPORT}
        return sorted(self.seconds, key=lambda test: (test not in near, self.seconds[test]))

    def add(self, other: "Covering") -> None:
        """What another run has learnt of other tests."""
        self.seconds |= other.seconds
        self.failed += other.failed
        for module, lines in other.lines.items():
            mine = self.lines.setdefault(module, {})
            for line, contexts in lines.items():
                mine[line] = mine.get(line, set()) | contexts

    def at_import(self, mutant: Mutant) -> bool:
        """Whether the statement changed also runs while modules are imported."""
        return IMPORT in self._contexts(mutant) or not _statement(mutant.source, mutant.line)[2]

    def _contexts(self, mutant: Mutant) -> set[str]:
        first, last, _ = _statement(mutant.source, mutant.line)
        lines = self.lines.get(mutant.module, {})
        return set().union(*(lines.get(line, set()) for line in range(first, last + 1)))


@cache
def _tree(source: str) -> ast.Module:
    return ast.parse(source)


@cache
def _statement(source: str, line: int) -> tuple[int, int, bool]:
    """First and last line of the innermost statement's own text; whether a call runs it."""
    first = last = line
    within = False
    for node in ast.walk(_tree(source)):  # outer ones come first
        if isinstance(node, ast.stmt) and node.lineno <= line <= (node.end_lineno or line):
            first, last = node.lineno, node.end_lineno or line
            if body := getattr(node, "body", None):
                last = min(last, max(first, body[0].lineno - 1))
            if isinstance(node, ast.FunctionDef) and line > last:
                within = True
    return first, last, within


class Recorder:
    """A pytest plugin that names to the coverage the test, or the test file, now running."""

    def __init__(self, coverage: Coverage) -> None:
        self.coverage = coverage
        self.seconds: dict[str, float] = {}
        self.failed: list[str] = []

    @pytest.hookimpl(wrapper=True)
    def pytest_make_collect_report(self, collector: pytest.Collector) -> Generator[None, Any, Any]:
        self.coverage.switch_context(IMPORT)
        return (yield)

    def pytest_collection_finish(self) -> None:
        self.caches = [o for o in gc.get_objects() if isinstance(o, _lru_cache_wrapper)
                       and str(o.__module__).startswith("motorfolio.")]  # fmt: skip

    @pytest.hookimpl(wrapper=True)
    def pytest_runtest_protocol(self, item: pytest.Item) -> Generator[None, Any, Any]:
        for stored in self.caches:  # what one test has stored, another may need too
            stored.cache_clear()
        self.coverage.switch_context(item.nodeid)
        start = time.process_time()
        result = yield
        self.seconds[item.nodeid] = time.process_time() - start
        return result

    def pytest_runtest_logreport(self, report: pytest.TestReport) -> None:
        if report.failed:
            self.failed.append(report.nodeid)


def files() -> list[str]:
    """The files of the tests."""
    found = [p for path in TESTS for p in ([path] if path.endswith(".py") else _within(path))]
    return [path for path in found if path not in SLOW]


def _within(folder: str) -> list[str]:
    return sorted(str(p.relative_to(ROOT)) for p in (ROOT / folder).glob("test_*.py"))


def learn(files: list[str]) -> Covering:
    """Run the tests of some files once, lines and processor time recorded.

    To be called in a process of its own: it imports the package.
    """
    coverage = Coverage(data_file=None, include=[str(ROOT / "schema" / "*")], config_file=False)
    recorder = Recorder(coverage)
    coverage.start()
    pytest.main([*OPTIONS, *files], plugins=[recorder])
    coverage.stop()
    data = coverage.get_data()
    found = Covering(seconds=dict(recorder.seconds), failed=sorted(set(recorder.failed)))
    for path in data.measured_files():
        lines = data.contexts_by_lineno(path)
        found.lines[str(Path(path).relative_to(ROOT))] = {
            line: {context or IMPORT for context in contexts} for line, contexts in lines.items()
        }
    return found
