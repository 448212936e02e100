"""The interval of a published figure, kept as the place of its last printed digit.

"30.2" mN·m/A stands for 30.15 … 30.25: half of 10⁻¹ on either side, in the printed unit. So one
small integer a figure tells the interval, where two numbers would make the catalog half as large
again. Figures whose interval is another one (a printed tolerance, a range, "≤ 45") have it in
`figure_intervals`; a figure with neither is exact.
"""

import numpy as np
from numpy.typing import NDArray

from ...schema.batch import FigureColumn, Floats

NEAR = 1e-6
"""Relative to the interval: what counts as the same when it is rebuilt from the digit."""


def encode(
    figures: FigureColumn, factor: Floats
) -> tuple[list[float], list[tuple[int, float, float]]]:
    """Powers of ten of the last digits (NaN: none), and (entry, low, high) where both are needed.

    factor: SI per printed unit, shape (N,).
    """
    value, low, high = figures.value, figures.low, figures.high
    with np.errstate(divide="ignore", invalid="ignore"):
        # an exact figure has no last digit
        exponent = np.rint(np.log10(2 * (high - value) / np.abs(factor)))
        half = half_digit(exponent, factor)
        fits = (np.abs(high - value - half) <= NEAR * half) & (
            np.abs(value - low - half) <= NEAR * half
        )
    fits &= np.isfinite(exponent)
    given = ~np.isnan(value)
    exact = (low == value) & (high == value)
    digits = np.where(fits, exponent, np.nan).tolist()
    odd = np.flatnonzero(given & ~fits & ~exact).tolist()
    return digits, [(i, low[i].item(), high[i].item()) for i in odd]


def half_digit(exponent: Floats, factor: Floats) -> NDArray[np.float64]:
    """Half a unit of that digit, SI; NaN exponent: NaN."""
    return 0.5 * np.power(10.0, exponent) * np.abs(factor)


def half_digit_sql(digit: str, factor: str) -> str:
    """The same as SQL that needs no mathematical functions."""
    return f"0.5 * CAST('1e' || {digit} AS REAL) * abs({factor})"
