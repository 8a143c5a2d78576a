"""Parts of a line that can move without bending anything."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from analysis_core.stiffness_check.arrays import Arrays
from analysis_core.stiffness_check.equations import axes
from analysis_core.stiffness_check.pattern import Numbering, Pattern

Floats = NDArray[np.float64]

_FREELY = 1e-9
"""Singular values below this part of the largest count as none."""
_VISIBLE = 1e-6
_LARGEST = 1500


def moving_joints(pattern: Pattern, numbers: Numbering, arrays: Arrays) -> tuple[int, ...]:
    """Return the joints of a line (the first of ``arrays``) that move without resistance.

    Those that change place; where none does, those that turn.
    Geometry alone decides, so neither very stiff nor very weak members mislead it.  Lines too
    large for it are left to the elimination, which meets a zero pivot.
    """
    columns = {
        (int(joint), int(d)): place
        for place, (joint, d) in enumerate(np.argwhere(numbers.movement >= 0))
    }
    if not columns or len(columns) > _LARGEST:
        return ()
    matrix = _deformations(pattern, numbers, arrays, columns)
    _, values, modes = np.linalg.svd(matrix, full_matrices=True)
    rank = int((values > _FREELY * max(values.max(initial=0.0), 1e-300)).sum())
    free = modes[rank:]
    if not len(free):
        return ()
    moving = np.sqrt((free**2).sum(0)) > _VISIBLE
    moved = [key for key, place in columns.items() if moving[place]]
    carried = {joint for joint, d in moved if d != 2}
    return tuple(sorted(carried or {joint for joint, _ in moved}))


def _deformations(
    pattern: Pattern,
    numbers: Numbering,
    arrays: Arrays,
    columns: dict[tuple[int, int], int],
) -> Floats:
    """Return what strains members and springs per unit movement (lengths as multiples)."""
    unit = float(arrays.length[0].mean())
    down, along = axes(arrays)
    rows: list[dict[int, float]] = []

    def put(row: dict[int, float], joint: int, d: int, value: float) -> None:
        if (joint, d) in columns and value:
            row[columns[joint, d]] = row.get(columns[joint, d], 0.0) + value

    for index, ends in enumerate(pattern.ends):
        ratio = unit / float(arrays.length[0, index])
        for k, joint in enumerate(ends):
            if pattern.moments[index][k]:
                row: dict[int, float] = {}
                put(row, joint, 2, 1.0)
                for end, sign in zip(ends, (1.0, -1.0), strict=True):
                    for d in (0, 1):
                        put(row, end, d, sign * ratio * float(down[0, index, d]))
                rows.append(row)
        if numbers.axial[index] >= 0:
            row = {}
            for end, sign in zip(ends, (1.0, -1.0), strict=True):
                for d in (0, 1):
                    put(row, end, d, sign * float(along[0, index, d]))
            rows.append(row)
    rows += [{columns[key]: 1.0} for key in columns if pattern.sprung[key[0]][key[1]]]
    matrix = np.zeros((len(rows), len(columns)))
    for place, row in enumerate(rows):
        matrix[place, list(row)] = list(row.values())
    return matrix
