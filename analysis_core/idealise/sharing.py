"""A vector in space shared among the vertical planes in which its member lies."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from analysis_core.idealise.vectors import Vector, dot, scale, subtract


def shared(vector: Vector, axes: Sequence[Vector]) -> tuple[list[float], Vector]:
    """Return the component along each horizontal axis, and the horizontal rest.

    The components add up to the vector as nearly as the axes can; axes that are parallel share
    evenly.  The vertical part of ``vector`` is left out of both.
    """
    flat = (vector[0], vector[1], 0.0)
    if len(axes) == 1:
        part = dot(flat, axes[0])
        return [part], subtract(flat, scale(axes[0], part))
    matrix = np.array([[axis[0] for axis in axes], [axis[1] for axis in axes]])
    parts = np.linalg.pinv(matrix, rcond=1e-6) @ np.array(flat[:2])
    found = matrix @ parts
    rest = (flat[0] - float(found[0]), flat[1] - float(found[1]), 0.0)
    return [float(p) for p in parts], rest
