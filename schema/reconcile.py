"""From figures as published to constants and findings: the call that the rest relies on."""

from .adjust import fit
from .batch import Batch
from .constants import constants
from .motor import Reconciled
from .observed import observe


def reconcile(batch: Batch) -> Reconciled:
    """Bring a batch to constants and find what contradicts itself.

    One motor or a million: everything is computed on arrays over the motors, in chunks.
    """
    problem = observe(batch)
    return Reconciled(batch, constants(batch, problem, fit(problem)))
