"""Run the fault benchmark at size: ``python -m tests.benchmarks.faults [first seed]``."""

import sys

from .score import coverage, run

first = int(sys.argv[1]) if len(sys.argv) > 1 else 1000
print(run(seeds=range(first, first + 6), motors=200).report())
print({k: round(v, 4) for k, v in coverage(first + 500, sheets=200).items()})
