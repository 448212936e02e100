"""The faults that can be put into a module, and a seeded sample of them.

The faults are those of cosmic-ray's operators, one for each place in the code that one of them can
change: where an operator knows several replacements of the same place, one is drawn. Left out is
what no test could notice or every run would: annotations, removed caches, and a number's arithmetic
replaced by that of bits.
"""

import ast
import math
import random
from collections import defaultdict
from collections.abc import Iterator
from dataclasses import dataclass
from difflib import unified_diff
from functools import cache, cached_property
from pathlib import Path

from cosmic_ray import plugins
from cosmic_ray.ast import ast_nodes, get_ast
from cosmic_ray.mutating import mutate_code

ROOT = Path(__file__).parents[2]
AT_LEAST = 3
"""Mutants drawn of each module that has as many."""

ARITHMETIC = {"Add", "Sub", "Mul", "Div", "FloorDiv", "Mod", "Pow"}
BITS = {"BitOr", "BitAnd", "BitXor"}
CACHES = ("@cache", "@lru_cache", "@cached_property", "@functools")


@dataclass(frozen=True)
class Mutant:
    module: str
    """Path from the top of the project."""
    operator: str
    occurrence: int
    line: int

    @property
    def kind(self) -> str:
        return self.operator.removeprefix("core/").split("_")[0]

    @property
    def name(self) -> str:
        return f"{self.module}:{self.line} {self.operator.removeprefix('core/')}#{self.occurrence}"

    @property
    def source(self) -> str:
        return read(self.module)

    @cached_property
    def mutated(self) -> str:
        found = mutate_code(self.source, plugins.get_operator(self.operator)(), self.occurrence)
        assert found is not None, self.name
        return found

    @cached_property
    def changes(self) -> bool:
        """Whether the mutated module is a Python module and another one."""
        try:
            return ast.dump(ast.parse(self.mutated)) != dumped(self.source)
        except SyntaxError:
            return False

    def difference(self) -> str:
        lines = unified_diff(self.source.splitlines(), self.mutated.splitlines(), n=0, lineterm="")
        return "\n".join(line for line in lines if not line.startswith(("---", "+++", "@@")))


@cache
def read(module: str) -> str:
    return (ROOT / module).read_text(encoding="utf-8")


@cache
def dumped(source: str) -> str:
    return ast.dump(ast.parse(source))


def modules() -> list[str]:
    return sorted(str(path.relative_to(ROOT)) for path in (ROOT / "schema").rglob("*.py"))


@cache
def needs(module: str) -> frozenset[str]:
    """The module and all of ``schema/`` that it imports, one by way of another."""
    found, waiting = set(), [module]
    while waiting:
        path = waiting.pop()
        if path in found:
            continue
        found.add(path)
        for node in ast.walk(ast.parse(read(path))):
            if isinstance(node, ast.ImportFrom) and node.level:
                folder = Path(path).parents[node.level - 1]
                base = folder / (node.module or "").replace(".", "/")
                names = [base, *(base / alias.name for alias in node.names)]
                files = [f for name in names for f in (f"{name}.py", f"{name}/__init__.py")]
                waiting += [file for file in files if (ROOT / file).is_file()]
    return frozenset(found)


def operators() -> list[str]:
    return sorted(name for name in plugins.operator_names() if _wanted(name))


def _wanted(name: str) -> bool:
    if plugins.get_operator(name).arguments() or name.endswith("NoOp"):
        return False
    if "ReplaceBinaryOperator" not in name:
        return True
    before, after = name.split("_")[1:]
    return any(before in family and after in family for family in (ARITHMETIC, BITS))


def places(module: str) -> dict[tuple, list[Mutant]]:
    """The places of a module that can be changed, each with its mutants."""
    source = read(module)
    nodes = list(ast_nodes(get_ast(source)))
    signs = [node for node in nodes if node.type == "operator"]
    annotated = list(_annotations(ast.parse(source)))
    lines = source.splitlines()
    found: dict[tuple, list[Mutant]] = defaultdict(list)
    for name in operators():
        operator = plugins.get_operator(name)()
        occurrence = -1
        for node in signs if "ReplaceBinaryOperator" in name else nodes:
            for start, end in operator.mutation_positions(node):
                occurrence += 1
                if any(a <= start and end <= b for a, b in annotated):
                    continue
                if "RemoveDecorator" in name and lines[start[0] - 1].strip().startswith(CACHES):
                    continue
                mutant = Mutant(module, name, occurrence, start[0])
                found[(mutant.kind, start, end)].append(mutant)
    return dict(found)


def _annotations(tree: ast.AST) -> Iterator[tuple[tuple[int, int], tuple[int, int]]]:
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
            annotation = node.returns
        elif isinstance(node, ast.arg | ast.AnnAssign):
            annotation = node.annotation
        else:
            continue
        if annotation is not None and annotation.end_lineno and annotation.end_col_offset:
            yield (
                (annotation.lineno, annotation.col_offset),
                (annotation.end_lineno, annotation.end_col_offset),
            )


def sample(wanted: int, seed: int) -> tuple[list[Mutant], dict[str, int]]:
    """At least ``wanted`` mutants, in proportion to each module's places, and those places.

    Each module has ``AT_LEAST`` of them, or all.
    """
    every = {module: found for module in modules() if (found := places(module))}
    total = sum(map(len, every.values()))
    draw = random.Random(seed)
    chosen = []
    for found in every.values():
        share = min(len(found), max(AT_LEAST, math.ceil(wanted * len(found) / total)))
        chosen += [draw.choice(found[place]) for place in draw.sample(sorted(found), share)]
    draw.shuffle(chosen)
    return chosen, {module: len(found) for module, found in every.items()}
