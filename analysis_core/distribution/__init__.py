"""Moment distribution with modified stiffness, exact, for beam lines and plane frames.

Public: ``solve`` for one line, ``solve_lines`` for many, ``record.distribute`` for the same by
recorded cycles as one would write them by hand.

Conventions beside those of ``model``:

* Members are rigid axially.  Where equilibrium alone does not settle the axial forces, members
  count as equally stiff per length (see ``axial``).
* A line (not a frame) is held against sliding where legs meet it and where its supports hold it
  horizontally; if neither, at its first supported joint, whose horizontal reaction is then the
  force that holds it.
* A leg of a line restrains rotation.  It carries its joint only where the joint has no vertical
  support of its own.
* A joint at which every member end is released has no rotation of its own: 0 is reported.
"""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.distribution.assembly import solve_any
from analysis_core.errors import AnalysisError
from analysis_core.model import Line
from analysis_core.results import LineSolution

__all__ = ["solve", "solve_lines"]


def solve(line: Line, cases: Sequence[str]) -> LineSolution:
    """Return end forces, movements and reactions of ``line`` for each of ``cases``.

    Raises MechanismError where parts of the line move freely, ModelError where it cannot be
    analysed as given.
    """
    return solve_any(line, cases)


def solve_lines(lines: Sequence[Line], cases: Sequence[str]) -> list[LineSolution | AnalysisError]:
    """Solve many lines; a line that cannot be solved gives its error and stops no other."""
    solved: list[LineSolution | AnalysisError] = []
    for line in lines:
        try:
            solved.append(solve(line, cases))
        except AnalysisError as error:
            solved.append(error)
    return solved
