"""Factors of a banded matrix by Gauss elimination with row interchanges."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Index = NDArray[np.intp]


class BandedFactors:
    """LU factors of a square matrix whose entries lie within ``width`` of the diagonal.

    Row i of ``_upper`` holds columns i to i + 2·width; the interchanges can fill that much.
    Golub, Van Loan: Matrix Computations, 4th edition, section 4.3 (band elimination).
    """

    def __init__(self, size: int, width: int, row: Index, column: Index, values: Floats) -> None:
        self._size, self._width = size, width
        # Rows are kept by absolute column while they wait: band[i, j - i + width].
        band = np.zeros((size + width, 3 * width + 1))
        band[row, column - row + width] = values
        self._upper = np.zeros((size, 2 * width + 1))
        self._lower = np.zeros((size, width))
        self._swaps = np.arange(size)
        self.smallest_pivot = np.inf
        for step in range(size):
            self._eliminate(band, step)

    def _eliminate(self, band: Floats, step: int) -> None:
        width = self._width
        below = min(width, self._size - 1 - step)
        # Below the pivot, column ``step`` stands one place further left in every row.
        rows = np.arange(step, step + below + 1)
        places = width - np.arange(below + 1)
        candidates = band[rows, places]
        best = int(np.abs(candidates).argmax())
        if best:
            self._swap(band, step, best)
            self._swaps[step] = step + best
            candidates = band[rows, places]
        pivot = candidates[0]
        self.smallest_pivot = min(self.smallest_pivot, abs(float(pivot)))
        self._upper[step] = band[step, width:]
        if not below or pivot == 0.0:
            return
        factors = candidates[1:] / pivot
        self._lower[step, :below] = factors
        window = places[1:, None] + np.arange(2 * width + 1)
        band[rows[1:, None], window] -= factors[:, None] * self._upper[step]

    def _swap(self, band: Floats, step: int, by: int) -> None:
        """Exchange rows ``step`` and ``step + by`` from column ``step`` on."""
        width = self._width
        reach = 2 * width + 1
        upper = band[step, width : width + reach].copy()
        other = band[step + by, width - by : width - by + reach].copy()
        band[step, width : width + reach] = other
        band[step + by, width - by : width - by + reach] = upper

    def solve(self, right: Floats) -> Floats:
        """Return the solution for right-hand sides (N, C)."""
        width, size = self._width, self._size
        found = np.zeros((size + 2 * width, right.shape[1]))
        found[:size] = right
        for step in range(size):
            other = self._swaps[step]
            if other != step:
                found[[step, other]] = found[[other, step]]
            found[step + 1 : step + 1 + width] -= self._lower[step][:, None] * found[step]
        for step in range(size - 1, -1, -1):
            row = self._upper[step]
            found[step] -= row[1:] @ found[step + 1 : step + 1 + 2 * width]
            found[step] /= row[0]
        return found[:size]
