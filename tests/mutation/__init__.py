"""Mutation testing of ``schema/``: small faults put in, to see that the tests notice.

``python -m tests.mutation`` draws a seeded sample over all modules and writes ``docs/mutation.md``.
"""
