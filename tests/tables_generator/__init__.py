"""Invented motors printed as datasheet tables whose right reading is known.

A recipe is drawn (layout, language, file format, units, number style, noise …), a family of
motors is drawn, its figures are rounded as a catalogue would print them, and the table is
written as a file. What a careful person would read from it is kept beside it, exact from the
printed digits and the unit's definition; where the print itself is undecidable, the figure may
be left unread, and may never be read wrong.

``python -m tests.tables_generator --tables 20000 --seed 1 --jobs 2`` is the long run.
"""
