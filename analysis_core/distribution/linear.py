"""Symmetric linear equations in extended precision.

Ratios of stiffness of a million to one cost up to as many digits when translations are solved
for.  The 64-bit mantissa of ``numpy.longdouble`` (where the machine has it) pays for them.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

Long = NDArray[Any]
"""An array of numpy.longdouble."""


def solve_symmetric(matrix: Long, right: Long, sizes: Long) -> tuple[Long, float]:
    """Solve ``matrix @ x = right`` for a positive semidefinite matrix (n, n) and (n, c).

    Elimination with the largest remaining diagonal first, measured by ``sizes`` (n): what the
    diagonals would be if nothing gave way.  Returns the solution and the smallest pivot so
    measured: near 0 where something moves freely.  Unknowns of size 0 come out as 0 and do not
    count.
    """
    work = np.array(matrix, dtype=np.longdouble)
    answer = np.array(right, dtype=np.longdouble)
    count = len(work)
    weakest = 1.0
    order: list[int] = []
    waiting = [i for i in range(count) if sizes[i] > 0]
    while waiting:
        ratios = work[waiting, waiting] / sizes[waiting]
        best = int(ratios.argmax())
        pivot = waiting.pop(best)
        weakest = min(weakest, float(ratios[best]))
        if ratios[best] <= 0:
            continue
        order.append(pivot)
        touched = [row for row in waiting if work[row, pivot]]
        if touched:
            factors = work[touched, pivot] / work[pivot, pivot]
            work[touched] -= factors[:, None] * work[pivot]
            answer[touched] -= factors[:, None] * answer[pivot]
    solution = np.zeros_like(answer)
    for place in range(len(order) - 1, -1, -1):
        pivot, after = order[place], order[place + 1 :]
        known = (work[pivot, after][:, None] * solution[after]).sum(0)
        solution[pivot] = (answer[pivot] - known) / work[pivot, pivot]
    return solution, weakest
