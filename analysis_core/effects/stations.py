"""Moment, shear and deflection at equally spaced stations of every member."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from analysis_core.effects.combinations import superpose
from analysis_core.effects.fields import fields, sample
from analysis_core.model import Combination, Line
from analysis_core.results import LineSolution, Stations


def stations(line: Line, solution: LineSolution, count: int = 21) -> Stations:
    """Return the effects of every case at ``count`` stations per member, both ends included.

    Where a force or couple stands on a station, shear and moment are those just right of it; at
    the end of the member those just left of it.  Raises ValueError for fewer than two stations.
    """
    if count < 2:
        raise ValueError(f"stations need at least both ends of a member; got {count}")
    size = len(line.members), count
    places = np.linspace(0.0, 1.0, count)
    x = np.empty(size)
    moment, shear, deflection = (np.empty((len(solution.cases), *size)) for _ in range(3))
    for block in fields([line], [solution]):
        at = places[:, None] * block.length
        x[block.member] = at.T
        for out, polynomials in (
            (moment, block.moment),
            (shear, block.shear),
            (deflection, block.deflection),
        ):
            out[:, block.member] = sample(polynomials, block.cuts, at).transpose(1, 2, 0)
    for array in (x, moment, shear, deflection):
        array.flags.writeable = False
    return Stations(solution.cases, x, moment, shear, deflection)


def combine_stations(cases: Stations, combinations: Sequence[Combination]) -> Stations:
    """Return the stations of combinations from those of the cases, by superposition."""
    return Stations(
        tuple(c.name for c in combinations),
        cases.x,
        superpose(cases.moment, cases.names, combinations),
        superpose(cases.shear, cases.names, combinations),
        superpose(cases.deflection, cases.names, combinations),
    )
