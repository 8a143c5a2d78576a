"""Factors of many banded matrices at once, by Gauss elimination with row interchanges.

The matrices have their entries in the same places and stand along the last axis of every array,
so that each step is one operation on all of them; no threaded matrix routine is called.
Golub, Van Loan: Matrix Computations, 4th edition, section 4.3 (band elimination).
"""

from __future__ import annotations

import numpy as np
from numpy.lib.stride_tricks import as_strided
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Index = NDArray[np.intp]


class BandedFactors:
    """LU factors of B square matrices with entries within ``width`` of the diagonal.

    ``row``, ``column`` (T,) and ``values`` (T, B) give the entries.  ``smallest_pivot`` (B,).
    """

    def __init__(self, size: int, width: int, row: Index, column: Index, values: Floats) -> None:
        self._size, self._width = size, width
        # Entry (i, j) stands at [i, j - i + width]; interchanges fill up to 2 * width to the right.
        self._band = np.zeros((size + width, 3 * width + 1, values.shape[1]))
        self._band[row, column - row + width] = values
        self._lower = np.zeros((size, width, values.shape[1]))
        self._swaps: list[tuple[Index, Index] | None] = []
        self.smallest_pivot = np.full(values.shape[1], np.inf)
        for step in range(size):
            self._eliminate(step)

    def _eliminate(self, step: int) -> None:
        band, width = self._band, self._width
        below = min(width, self._size - 1 - step)
        block = self._below(step, below)
        candidates = np.abs(block[:, 0])
        self._swaps.append(None)
        if below:
            best = candidates.argmax(0)
            chosen = np.flatnonzero(best)
            if chosen.size:
                self._interchange(step, block, best[chosen], chosen)
        pivot = band[step, width]
        np.minimum(self.smallest_pivot, np.abs(pivot), out=self.smallest_pivot)
        if not below:
            return
        factors = block[1:, 0] / np.where(pivot == 0.0, 1.0, pivot)
        self._lower[step, :below] = factors
        block[1:, 1:] -= factors[:, None] * block[0, 1:]

    def _below(self, step: int, below: int) -> Floats:
        """View of rows ``step`` to ``step + below`` from column ``step`` on, lined up."""
        band, width = self._band, self._width
        reach = min(2 * width + 1, self._size - step)
        down, along, line = band.strides
        return as_strided(
            band[step, width:],
            shape=(below + 1, reach, band.shape[2]),
            strides=(down - along, along, line),
        )

    def _interchange(self, step: int, block: Floats, best: Index, chosen: Index) -> None:
        self._swaps[step] = (best, chosen)
        upper = block[0][:, chosen]
        columns = np.arange(block.shape[1])[:, None]
        block[0][:, chosen] = block[best, columns, chosen]
        block[best, columns, chosen] = upper

    def solve(self, right: Floats) -> Floats:
        """Return the solutions for right-hand sides (N, C, B)."""
        width, size = self._width, self._size
        found = np.zeros((size + 2 * width, *right.shape[1:]))
        found[:size] = right
        for step in range(size):
            swap = self._swaps[step]
            if swap is not None:
                best, chosen = swap
                upper = found[step][:, chosen]
                columns = np.arange(right.shape[1])[:, None]
                found[step][:, chosen] = found[step + best, columns, chosen]
                found[step + best, columns, chosen] = upper
            found[step + 1 : step + 1 + width] -= self._lower[step][:, None] * found[step]
        for step in range(size - 1, -1, -1):
            row = self._band[step, width:]
            ahead = found[step + 1 : step + 1 + 2 * width]
            if width:
                found[step] -= (row[1:, None] * ahead).sum(0)
            found[step] /= row[0]
        return found[:size]
