"""Tails: bars with a free end, whose moments statics alone gives (a cantilever's are known)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bar_actions import BarActions, bar_actions
from analysis_core.distribution.bars import Reduction
from analysis_core.distribution.loads import Loads
from analysis_core.model import Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Tails:
    """What T tails carry: actions and end moments (T, 2, C) on each, axial (T, C) at its start.

    forces (J, 3, C): the forces on all joints with those that the tails bring to their roots.
    """

    actions: tuple[BarActions, ...]
    moments: Floats
    axial: Floats
    forces: Floats


def take_off(line: Line, reduction: Reduction, loads: Loads) -> Tails:
    """Return the end moments of all tails and what they hand to the joints that carry them."""
    forces = loads.forces.copy()
    cases = forces.shape[2]
    count = len(reduction.tails)
    moments, axial = np.zeros((count, 2, cases)), np.zeros((count, cases))
    found = []
    for index, (bar, root) in enumerate(reduction.tails):
        actions = bar_actions(line, bar, loads)
        found.append(actions)
        cosine, sine = bar.direction
        tip = bar.end if bar.start == root else bar.start
        right, down, couple = forces[tip]
        across, along = right * sine + down * cosine, right * cosine - down * sine
        if tip == bar.end:
            at_root = -couple - bar.length * (across + actions.forces[1])
            moments[index] = at_root, couple
            axial[index] = along + actions.axial
        else:
            at_root = -couple + bar.length * (across + actions.forces[0])
            moments[index] = couple, at_root
            axial[index] = -along
        across = across + actions.forces.sum(0)
        along = along + actions.axial
        forces[root, 0] += across * sine + along * cosine
        forces[root, 1] += across * cosine - along * sine
        forces[root, 2] -= at_root
    return Tails(tuple(found), moments, axial, forces)
