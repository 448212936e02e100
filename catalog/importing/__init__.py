"""Files to motors in the catalog: read, corrected by a person's word, reconciled, stored.

``run`` is the way in; ``storing`` is its one transaction.
"""
