"""The best assignment of headings to quantities as a whole."""

import numpy as np


def best_assignment(gain: np.ndarray) -> list[int | None]:
    """The assignment of rows to columns with the greatest total gain; a row may go without.

    The Hungarian method in its shortest-augmenting-path form, O(n²·m); `gain` has shape (n, m),
    is not negative, and 0 means "must not".
    """
    n, m = gain.shape
    # A column of nothing for each row, so that leaving it out is always possible.
    cost = np.hstack([np.where(gain > 0, -gain, 1e6), np.zeros((n, n))])
    total = m + n
    u, v = np.zeros(n + 1), np.zeros(total + 1)
    match = np.zeros(total + 1, dtype=int)
    for i in range(1, n + 1):
        match[0] = i
        j0 = 0
        least = np.full(total + 1, np.inf)
        way = np.zeros(total + 1, dtype=int)
        used = np.zeros(total + 1, dtype=bool)
        while True:
            used[j0] = True
            i0 = match[j0]
            free = ~used
            free[0] = False
            reduced = np.full(total + 1, np.inf)
            reduced[1:] = cost[i0 - 1] - u[i0] - v[1:]
            better = free & (reduced < least)
            least[better] = reduced[better]
            way[better] = j0
            j1 = int(np.argmin(np.where(free, least, np.inf)))
            delta = least[j1]
            u[match[used]] += delta
            v[used] -= delta
            least[free] -= delta
            j0 = j1
            if match[j0] == 0:
                break
        while j0:
            j1 = int(way[j0])
            match[j0] = match[j1]
            j0 = j1
    out: list[int | None] = [None] * n
    for j in range(1, m + 1):
        if match[j]:
            out[match[j] - 1] = j - 1
    return out
