"""Runs inputs in a child process that may be stopped: 5 s of processor and 500 MB an input."""

from __future__ import annotations

import multiprocessing
import resource
import signal
import time
import traceback
from collections.abc import Callable
from dataclasses import dataclass
from multiprocessing.connection import Connection

SECONDS = 5.0
"""Of the processor, so that a busy machine finds no fault; a child that idles has ``WALL``."""
WALL = 60.0
MEGABYTES = 500


@dataclass
class Fault:
    """An input that did what no input may do."""

    seed: int
    kind: str
    detail: str


class TooSlowError(BaseException):
    """Raised by the alarm in the child; no Exception, so that nothing swallows it."""


def run(try_seed: Callable[[int], str], first: int, count: int) -> list[Fault]:
    """Tries seeds first … first+count−1; ``try_seed`` returns what is wrong, '' if nothing.

    A seed in which the child hangs beyond its own alarm (in compiled code) or dies is a fault,
    and the rest is run in a new child.
    """
    context = multiprocessing.get_context("fork")
    faults: list[Fault] = []
    end = first + count
    while first < end:
        current = context.Value("q", first, lock=False)
        receiver, sender = context.Pipe(duplex=False)
        child = context.Process(target=_child, args=(try_seed, first, end, current, sender))
        child.start()
        sender.close()
        seed, since, done = first, time.monotonic(), False
        while not done:
            if receiver.poll(0.2):
                try:
                    message = receiver.recv()
                except EOFError:
                    break
                done = message is None
                if message is not None:
                    faults.append(message)
            if current.value != seed:
                seed, since = current.value, time.monotonic()
            elif time.monotonic() - since > WALL:
                faults.append(Fault(seed, "hang", f"no answer within {WALL:g} s"))
                child.kill()
                break
            elif not child.is_alive() and not receiver.poll():
                break
        child.join()
        if not done and not (faults and faults[-1].seed == seed):
            faults.append(Fault(seed, "death", f"the process ended with {child.exitcode}"))
        first = end if done else seed + 1
    return faults


def _alarm(_signal: int, _frame: object) -> None:
    raise TooSlowError


def _child(
    try_seed: Callable[[int], str], first: int, end: int, current: object, sender: Connection
) -> None:
    with open("/proc/self/statm", encoding="ascii") as statm:
        pages = int(statm.read().split()[0])
    limit = pages * resource.getpagesize() + MEGABYTES * 1_000_000
    resource.setrlimit(resource.RLIMIT_AS, (limit, limit))
    signal.signal(signal.SIGPROF, _alarm)
    for seed in range(first, end):
        current.value = seed  # type: ignore[attr-defined]
        signal.setitimer(signal.ITIMER_PROF, SECONDS)
        try:
            wrong = try_seed(seed)
            kind = wrong.partition(":")[0]
        except TooSlowError:
            kind, wrong = "slow", f"more than {SECONDS:g} s"
        except MemoryError:
            kind, wrong = "memory", f"more than {MEGABYTES} MB"
        except Exception as error:
            kind, wrong = type(error).__name__, traceback.format_exc(limit=-4)
        finally:
            signal.setitimer(signal.ITIMER_PROF, 0)
        if wrong:
            sender.send(Fault(seed, kind, wrong))
    sender.send(None)
