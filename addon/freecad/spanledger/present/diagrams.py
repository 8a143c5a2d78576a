"""Which diagram is shown, and its ordinates along every member.

A *view* of the results is a load case, a combination, or the envelope of a limit state.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from analysis_core.results import LineResult, Outcome

Floats = NDArray[np.float64]
Quantity = Literal["moment", "shear", "deflection"]
STATIONS = 21


@dataclass(frozen=True, slots=True)
class View:
    """What is looked at: ``kind`` and the name of the case, combination or limit state."""

    kind: Literal["case", "combination", "envelope"]
    name: str

    @property
    def title(self) -> str:
        """Return the words for it."""
        return f"{self.name} envelope" if self.kind == "envelope" else self.name


@dataclass(frozen=True, slots=True, eq=False)
class Ordinates:
    """Ordinates (M, N) of all members of all lines at N equal steps; SI.

    ``lower`` and ``upper`` are the same for a single case or combination.
    """

    title: str
    quantity: Quantity
    lower: Floats
    upper: Floats


def views_of(outcome: Outcome) -> list[View]:
    """Return what can be looked at: envelopes first, then combinations, then cases."""
    limit_states = [
        name
        for name in ("strength", "serviceability")
        if any(name in result.envelopes for result in outcome.lines)
    ]
    views = [View("envelope", name) for name in limit_states]
    views += [View("combination", c.name) for c in outcome.model.combinations]
    views += [View("case", case.name) for case in outcome.model.cases]
    return views


def ordinates_of(
    results: Sequence[LineResult], view: View, quantity: Quantity, stations: int = STATIONS
) -> Ordinates:
    """Return the ordinates of every member, zero where a line was not analysed."""
    lower, upper = [], []
    for result in results:
        count = len(result.line.members)
        pair = line_ordinates(result, view, quantity, stations)
        low, high = pair if pair is not None else (np.zeros((count, stations)),) * 2
        lower.append(low)
        upper.append(high)
    empty = np.zeros((0, stations))
    return Ordinates(
        title=f"{quantity.capitalize()}, {view.title}",
        quantity=quantity,
        lower=np.concatenate(lower) if lower else empty,
        upper=np.concatenate(upper) if upper else empty,
    )


def line_ordinates(
    result: LineResult, view: View, quantity: Quantity, stations: int = STATIONS
) -> tuple[Floats, Floats] | None:
    """Return lower and upper ordinates (M, N) of one line, None where it has no such result."""
    if view.kind == "envelope":
        return _from_envelope(result, view.name, quantity, stations)
    from analysis_core.effects import stations as along  # late: start-up of the workbench

    solution = result.solution if view.kind == "case" else result.combined
    if solution is None or view.name not in solution.cases:
        return None
    found = along(solution.line, solution, stations)
    values: Floats = getattr(found, quantity)[found.names.index(view.name)]
    return values, values


def _from_envelope(
    result: LineResult, limit_state: str, quantity: Quantity, stations: int
) -> tuple[Floats, Floats] | None:
    envelope = result.envelopes.get(limit_state)
    if envelope is None:
        return None
    low, high = np.empty((2, len(envelope.members), stations))
    for row, member in enumerate(envelope.members):
        least, most = {
            "moment": (member.moment_min, member.moment_max),
            "shear": (member.shear_min_at, member.shear_max_at),
            "deflection": (member.deflection_min, member.deflection_max),
        }[quantity]
        at = np.linspace(0.0, member.x[-1], stations)
        low[row], high[row] = np.interp(at, member.x, least), np.interp(at, member.x, most)
    return low, high
