"""One step of the classical method of fourth order, for references worked out on a fine grid."""

from collections.abc import Callable

import numpy as np


def step(
    rates: Callable[..., np.ndarray], state: np.ndarray, p: int, at: float, share: float, h: float
) -> np.ndarray:
    """The state after h seconds, a share of stretch p that begins at the share ``at`` of it."""
    k1 = rates(state, p, at)
    k2 = rates(state + h / 2 * k1, p, at + share / 2)
    k3 = rates(state + h / 2 * k2, p, at + share / 2)
    k4 = rates(state + h * k3, p, at + share)
    return state + h / 6 * (k1 + 2 * k2 + 2 * k3 + k4)
