"""The bars of a line as arrays, their stiffness in extended precision."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bars import Reduction
from analysis_core.distribution.linear import Long

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class BarTable:
    """B bars as arrays; stiffnesses in extended precision.

    places (2, B): which of the joints to release start and end are; down, along (B, 2): unit
    vectors (right, down) across and along.  The rest (B,) as in EndStiffness, computed again from
    turn, centre and sway so that a rotation as a whole costs no moment.
    """

    places: NDArray[np.intp]
    down: Floats
    along: Floats
    length: Long
    near: Long
    far: Long
    carried: Long
    both: Long
    centre: Long
    sway: Long


def bar_table(reduction: Reduction) -> BarTable:
    """Return the bars of a line that are not tails as arrays."""
    bars = reduction.bars
    place = {joint: index for index, joint in enumerate(reduction.joints)}
    places = np.array([(place[bar.start], place[bar.end]) for bar in bars], dtype=np.intp)
    cosine, sine = np.array([bar.direction for bar in bars]).reshape(-1, 2).T
    basis = [
        (b.stiffness.length, b.stiffness.turn, b.stiffness.centre, b.stiffness.sway) for b in bars
    ]
    length, turn, centre, sway = np.array(basis, dtype=np.longdouble).reshape(-1, 4).T
    other = length - centre
    return BarTable(
        places=places.reshape(-1, 2).T,
        down=np.stack([sine, cosine], axis=1),
        along=np.stack([cosine, -sine], axis=1),
        length=length,
        near=turn + centre * centre * sway,
        far=turn + other * other * sway,
        carried=centre * other * sway - turn,
        both=length * length * turn * sway,
        centre=centre,
        sway=sway,
    )
