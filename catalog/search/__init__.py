"""A requirement held against all motors of the catalog: candidates in rank, near misses.

``run`` is the way in; the physics is in ``motorfolio.schema.operation``.
"""
