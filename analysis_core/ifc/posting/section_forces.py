"""Axial force, shear and bending moment along members, case by case, for an analysis model."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from analysis_core.ifc.posting.governing import Part
from analysis_core.results import Floats, LineResult, Stations

CaseStations = Callable[[LineResult], Stations]
# Position on the element, and the components of a force and a moment; None: not stated.
Sample = tuple[float, tuple[float | None, ...]]


class SectionForces:
    """Forces at the stations that ``stations`` gives for a line, at the ends where it is None."""

    def __init__(self, stations: CaseStations | None) -> None:
        self._stations = stations
        self._sampled: dict[int, Stations] = {}

    def samples(self, part: Part, case: str) -> list[Sample]:
        """Return the forces of a case along one member, in the direction of its element.

        Empty where the case was not solved or a value is no number.
        """
        solution, member = part.result.solution, part.member
        if solution is None or case not in solution.cases:
            return []
        number = solution.cases.index(case)
        start, end = (float(n) for n in solution.axial[number, member.id])
        x, shear, moment = self._along(part, number)
        if not np.isfinite([*x, *shear, *moment, start, end]).all():
            return []
        last = len(x) - 1
        samples: list[Sample] = []
        for i, s in enumerate(x.tolist()):
            # Between the ends the axial force is only known where it does not change.
            axial = start if i == 0 or start == end else end if i == last else None
            samples.append((part.position(s), (axial, None, shear[i], None, moment[i], None)))
        return samples[::-1] if member.reversed_ else samples

    def _along(self, part: Part, number: int) -> tuple[Floats, Floats, Floats]:
        """Places on a member with shear and moment there; the ends where nothing else is known."""
        result, member = part.result, part.member
        assert result.solution is not None  # only solved parts come here
        if self._stations is None:
            moments = result.solution.end_moments[number, member.id]
            shears = result.solution.end_shears[number, member.id]
            return np.array([0.0, member.length]), shears, np.array([moments[0], -moments[1]])
        if id(result) not in self._sampled:
            self._sampled[id(result)] = self._stations(result)
        found = self._sampled[id(result)]
        row = found.names.index(result.solution.cases[number])
        return (
            found.x[member.id], found.shear[row, member.id], found.moment[row, member.id]
        )  # fmt: skip
