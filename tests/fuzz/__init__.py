"""Random and mutated input against every place where foreign text comes in.

``python -m tests.fuzz --inputs 1000000 --seed 1`` is the long run: mostly numbers, units,
headings, requirements and cycles, and a share of whole files through ``motorfolio import``.
"""
