"""Rounding for columns that a checker adds up."""

from __future__ import annotations

import math
from collections.abc import Sequence


def rounded_to_sum(values: Sequence[float], total: float, decimals: int) -> list[float]:
    """Return the values rounded so that they add up to the rounded total.

    Each value moves by less than one unit in the last place: those whose remainders are largest
    are rounded up (the method of largest remainders).  Where the values do not add up to the total
    to begin with, by more than one unit each, they are rounded plainly.
    """
    unit = 10.0**-decimals
    scaled = [value / unit for value in values]
    lower = [math.floor(s + 1e-9) for s in scaled]
    missing = round(total / unit) - sum(lower)
    if not 0 <= missing <= len(values):
        return [round(value, decimals) for value in values]
    order = sorted(range(len(values)), key=lambda i: lower[i] - scaled[i])
    for i in order[:missing]:
        lower[i] += 1
    return [round(n * unit, decimals) + 0.0 for n in lower]
