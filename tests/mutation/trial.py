"""One mutant at a time, each in a process forked from one that has everything loaded.

Mutants within functions: a process imports the package and collects the tests once; each fork gives
the function its mutated code. Mutants of what runs when a module is imported: each fork imports the
package anew, the mutated module compiled from memory. No file is ever touched.
"""

import contextlib
import gc
import importlib
import os
import pickle
import resource
import signal
import sys
import tempfile
import time
from collections import defaultdict
from collections.abc import Callable, Iterator
from functools import _lru_cache_wrapper
from importlib.machinery import SourceFileLoader
from pathlib import Path
from types import CodeType, FunctionType
from typing import Any

import pytest
from hypothesis import HealthCheck, Phase, settings

from .covering import OPTIONS, Covering
from .covering import files as test_files
from .mutants import ROOT, Mutant, needs

LIBRARIES = ("numpy", "pint", "pydantic", "scipy.integrate", "scipy.optimize", "scipy.stats",
             "hypothesis.strategies")  # fmt: skip
MEMORY = 4 << 30
"""Bytes of address space: a mutant that asks for more is noticed by that."""
PATIENCE = 5.0
"""Seconds of processor time after which no further test is begun; the mutant has then survived."""
SLOWER = 10.0
"""How many times slower than usual, and two seconds, a test may get."""

KILLED, SURVIVED, TIMEOUT = "killed", "survived", "time-out"
VOID, ELSEWHERE = "void", "elsewhere"
"""No other program, and one that the quick way can't make: it goes the other way."""
WALL = 900.0
"""Seconds after which a mutant that waits is taken for one that hangs."""


def load_libraries() -> None:
    for name in LIBRARIES:
        importlib.import_module(name)
    assert not any(name.startswith("motorfolio") for name in sys.modules)
    settings.register_profile(
        "mutants",
        derandomize=True,
        database=None,
        deadline=None,
        phases=[Phase.explicit, Phase.generate],
        suppress_health_check=list(HealthCheck),
    )
    settings.load_profile("mutants")


class Fork:
    """Work in a forked process. To be made where no other thread runs: their locks are copied."""

    def __init__(self, work: Callable[[], Any]) -> None:
        self.folder = tempfile.TemporaryDirectory()
        self.result = Path(self.folder.name) / "result"
        self.pid = os.fork()
        if self.pid == 0:
            os.setsid()  # the kernel shares time out by sessions
            sink = os.open(os.devnull, os.O_WRONLY)
            os.dup2(sink, 1)
            os.dup2(sink, 2)
            status = 3
            with contextlib.suppress(BaseException):
                self.result.write_bytes(pickle.dumps(work()))
                status = 0
            os._exit(status)

    def wait(self, wall: float) -> tuple[int | None, Any]:
        """Exit status, ``None`` after ``wall`` seconds, and what the work returned."""
        end = time.monotonic() + wall
        pause = 0.001
        with self.folder:
            while True:
                done, status = os.waitpid(self.pid, os.WNOHANG)
                if done:
                    break
                if time.monotonic() > end:
                    os.kill(self.pid, signal.SIGKILL)
                    os.waitpid(self.pid, 0)
                    return None, None
                time.sleep(pause := min(0.05, 1.5 * pause))
            returned = pickle.loads(self.result.read_bytes()) if self.result.exists() else None
        return os.waitstatus_to_exitcode(status), returned


class Runner:
    """A pytest plugin that runs chosen tests, in an order, until one fails."""

    def __init__(self, covering: Covering, work: Callable[["Runner"], Any]) -> None:
        self.covering = covering
        self.work = work
        self.items: dict[str, pytest.Item] = {}
        self.failed = False
        self.result: Any = None

    def pytest_runtestloop(self, session: pytest.Session) -> bool:
        self.items = {item.nodeid: item for item in session.items}
        self.result = self.work(self)
        return True

    def pytest_runtest_logreport(self, report: pytest.TestReport) -> None:
        self.failed = self.failed or report.failed

    def run(self, tests: list[str], patience: float) -> str:
        start = time.process_time()
        for name, after in zip(tests, [*tests[1:], None], strict=True):
            if time.process_time() - start > patience:
                break
            allowed = 2 + SLOWER * self.covering.seconds[name]
            signal.setitimer(signal.ITIMER_PROF, allowed)
            item = self.items[name]
            item.config.hook.pytest_runtest_protocol(
                item=item, nextitem=self.items[after] if after else None
            )
            if self.failed:
                return KILLED
        return SURVIVED


def _bounded() -> None:
    resource.setrlimit(resource.RLIMIT_AS, (MEMORY, MEMORY))
    signal.signal(signal.SIGPROF, signal.SIG_DFL)  # the end of the process
    sys.dont_write_bytecode = True


def _collected(covering: Covering, work: Callable[[Runner], Any], files: list[str]) -> Any:
    """What ``work`` returns, once the tests are collected; ``None`` if they can't be."""
    runner = Runner(covering, work)
    pytest.main([*OPTIONS, *files], plugins=[runner])
    return runner.result


def _judged(found: tuple[int | None, Any]) -> str:
    status, returned = found
    if status is None or status in (-signal.SIGPROF, -signal.SIGKILL):
        return TIMEOUT
    return returned if status == 0 and returned else KILLED


def all_pass(covering: Covering) -> str:
    """Whether every test passes, as the mutants meet them, without a mutant. To be called in a
    fork."""
    tests = sorted(covering.seconds, key=covering.seconds.__getitem__)
    return _collected(covering, lambda runner: runner.run(tests, 1e9), test_files())


def importing(mutant: Mutant, covering: Covering) -> str:
    """Outcome of a mutant that matters when its module is imported."""
    if not mutant.changes:
        return VOID
    tests = covering.tests_of(mutant)

    def work() -> str:
        _bounded()
        _replace(str(ROOT / mutant.module), mutant.mutated)
        signal.setitimer(signal.ITIMER_PROF, 60)
        files = sorted({name.split("::")[0] for name in tests})
        return _collected(covering, lambda runner: runner.run(tests, PATIENCE), files)

    return _judged(Fork(work).wait(WALL)) if tests else SURVIVED


def calling(mutants: list[Mutant], covering: Covering, told: Callable[[Mutant, str], None]) -> None:
    """Outcomes of mutants within functions, ``told`` one by one. To be called in a fork."""

    functions: dict[str, list[FunctionType]] = defaultdict(list)
    caches: list[_lru_cache_wrapper] = []

    def one(runner: Runner, mutant: Mutant) -> str:
        path = str(ROOT / mutant.module)
        if not mutant.changes:
            return VOID
        if not _give_code(functions[path], path, mutant.mutated):
            return ELSEWHERE
        _bounded()
        for stored in caches:  # what the mutant may have a part in
            if mutant.module in needs(_file_of(stored)):
                stored.cache_clear()
        return runner.run(covering.tests_of(mutant), PATIENCE)

    def work(runner: Runner) -> None:
        for thing in gc.get_objects():
            if isinstance(thing, FunctionType):
                functions[os.path.realpath(thing.__code__.co_filename)].append(thing)
            elif isinstance(thing, _lru_cache_wrapper) and _ours(thing):
                caches.append(thing)
        gc.freeze()
        for mutant in mutants:
            found = _judged(Fork(lambda m=mutant: one(runner, m)).wait(WALL))
            told(mutant, found)

    _collected(covering, work, test_files())


def _file_of(cache: Any) -> str:
    return str(Path(sys.modules[cache.__module__].__file__ or "").relative_to(ROOT))


def _ours(thing: Any) -> bool:
    return str(thing.__module__).startswith("motorfolio.schema")


def _replace(path: str, text: str) -> None:
    """Let the module at ``path`` be compiled from ``text`` when it is imported."""
    usual = SourceFileLoader.get_code

    def get_code(self: SourceFileLoader, fullname: str) -> Any:
        if os.path.realpath(self.get_filename(fullname)) == path:
            return compile(text, path, "exec", dont_inherit=True)
        return usual(self, fullname)

    SourceFileLoader.get_code = get_code


def _give_code(functions: list[FunctionType], path: str, text: str) -> bool:
    """Give the functions, those made from ``path``, the code that ``text`` has in their place.

    False where no function has changed: the change is where none of them shows it.
    """
    mutated = {_key(code): code for code in _codes(compile(text, path, "exec", dont_inherit=True))}
    given = False
    for function in functions:
        code = mutated.get(_key(function.__code__))
        if code is not None and code != function.__code__:
            function.__code__ = code
            given = True
    return given


def _key(code: CodeType) -> tuple[str, int, str]:
    return code.co_qualname, code.co_firstlineno, code.co_name


def _codes(code: CodeType) -> Iterator[CodeType]:
    for constant in code.co_consts:
        if isinstance(constant, CodeType):
            yield constant
            yield from _codes(constant)
