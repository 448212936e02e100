"""The tool that puts faults into the code: what it changes, which tests it asks, how it counts."""

from __future__ import annotations

import ast

import pytest

from .covering import Covering
from .mutants import Mutant, modules, needs, operators, places, read
from .report import interval


def test_a_mutant_is_another_program_by_one_change() -> None:
    """Every tenth place of a module of numbers and sentences."""
    found = places("schema/convention.py")
    assert len(found) > 50
    for place in sorted(found)[::10]:
        for mutant in found[place]:
            assert mutant.changes, mutant.name
            removed = [x for x in mutant.difference().splitlines() if x.startswith("-")]
            assert 1 <= len(removed) <= 3, mutant.name


def test_annotations_and_caches_are_left_alone() -> None:
    """A "str | None" is no arithmetic, and a removed cache only takes time."""
    for module in ("schema/convention.py", "schema/vocabulary.py"):
        lines = read(module).splitlines()
        for mutants in places(module).values():
            for mutant in mutants:
                line = lines[mutant.line - 1]
                assert not line.strip().startswith("@cache")
                assert mutant.kind != "ReplaceBinaryOperator" or "| None" not in line
    names = operators()
    assert "core/ReplaceBinaryOperator_Add_Sub" in names
    assert "core/ReplaceBinaryOperator_Add_BitOr" not in names
    assert "core/NoOp" not in names


def test_what_a_module_needs() -> None:
    assert needs("schema/errors.py") == {"schema/errors.py"}
    assert {"schema/convention.py", "schema/batch.py"} <= needs("schema/reconcile/run.py")
    assert not any("reconcile" in name for name in needs("schema/operation/judge.py"))
    assert all(ast.parse(read(name)) for name in modules())


def test_tests_of_a_statement() -> None:
    """Those that run it, the quickest first; all of them where it runs at import."""
    module = "schema/errors.py"
    lines = read(module).splitlines()
    within = next(n for n, line in enumerate(lines, 1) if "head = most" in line)
    outside = next(n for n, line in enumerate(lines, 1) if "_LONGEST_QUOTE = " in line)
    covering = Covering({module: {within: {"b", "a"}, within + 1: {"c"}, outside: {"import"}}},
                        {"a": 2.0, "b": 1.0, "c": 0.1})  # fmt: skip
    inner, outer = (Mutant(module, "core/NumberReplacer", 0, n) for n in (within, outside))
    assert covering.tests_of(inner) == ["b", "a"]
    assert not covering.at_import(inner)
    assert covering.tests_of(outer) == ["c", "b", "a"]
    assert covering.at_import(outer)


@pytest.mark.parametrize(
    ("killed", "of", "low", "high"),
    [(81, 263, 0.2553, 0.3662), (15, 148, 0.0624, 0.1605), (0, 20, 0.0, 0.1611),
     (1, 29, 0.0061, 0.1718)],
)  # fmt: skip
def test_interval(killed: int, of: int, low: float, high: float) -> None:
    """R. G. Newcombe, Two-sided confidence intervals for the single proportion, Statistics in
    Medicine 17 (1998) 857-872, Table I, method 3 (from memory)."""
    assert interval(killed, of) == pytest.approx((low, high), abs=5e-5)
