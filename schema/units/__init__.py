"""A unit text as makers write it → factor to SI and dimension; units.txt holds units and spellings.

``read`` is the way in. pint is met in ``factors`` only.
"""
