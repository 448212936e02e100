"""Plant one wrong figure in invented sheets and see whether it is found: the fault benchmark.

``python -m tests.benchmarks.faults`` runs it at size. The generator (sheets, mistakes) and the
reference fit state the physics on their own; nothing here imports the program's relations.
"""
