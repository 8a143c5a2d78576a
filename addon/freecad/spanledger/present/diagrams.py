"""Which diagram is shown, and its ordinates along every member.

A *view* of the results is a load case, a combination, or the envelope of a limit state.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import Combination
from analysis_core.results import LineEnvelope, LineResult, Outcome

from .words import noop, say

Floats = NDArray[np.float64]
Quantity = Literal["moment", "shear", "deflection"]
STATIONS = 21
LIMIT_STATES = (noop("strength"), noop("serviceability"))


@dataclass(frozen=True, slots=True)
class View:
    """What is looked at: ``kind`` and the name of the case, combination or limit state.

    ``factors`` by case make the view up; an envelope has none.
    """

    kind: Literal["case", "combination", "envelope"]
    name: str
    factors: tuple[tuple[str, float], ...] = ()

    @property
    def title(self) -> str:
        """Return the words for it."""
        if self.kind == "envelope":
            return say("{limit_state} envelope", limit_state=say(self.name))
        return self.name


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
    """Return what can be looked at: envelopes first, then combinations, then cases.

    Where there is nothing at all, one view of nothing, so that lines can still be looked at.
    """
    limit_states = [
        name for name in LIMIT_STATES if any(name in result.envelopes for result in outcome.lines)
    ]
    views = [View("envelope", name) for name in limit_states]
    views += [
        View("combination", c.name, tuple(c.factors.items())) for c in outcome.model.combinations
    ]
    views += [View("case", case.name, ((case.name, 1.0),)) for case in outcome.model.cases]
    return views or [View("case", say("nothing acts"))]


def view_envelopes(
    results: Sequence[LineResult], view: View, stations: int = STATIONS
) -> list[LineEnvelope | None]:
    """Return curves and exact extremes of each line for a view; None where it has no result.

    Of a single case or combination the lower and the upper curve are the same.
    """
    if view.kind == "envelope":
        return [result.envelopes.get(view.name) for result in results]
    from analysis_core.effects.arrangements import whole_cases
    from analysis_core.effects.envelopes import envelopes  # late: start-up of the workbench

    known = [
        i
        for i, result in enumerate(results)
        if result.solution is not None and view.factors and result.solution.cases
    ]
    solutions = [results[i].solution for i in known]
    found: list[LineEnvelope | None] = [None] * len(results)
    if known:
        one = Combination(view.name, "strength", dict(view.factors))
        lines = [whole_cases(s.line, s.cases) for s in solutions]
        curves = envelopes(lines, solutions, [one], limit_state="strength", count=stations)
        for i, curve in zip(known, curves, strict=True):
            found[i] = curve
    return found


def ordinates_of(
    results: Sequence[LineResult], view: View, quantity: Quantity, stations: int = STATIONS
) -> Ordinates:
    """Return the ordinates of every member, zero where a line was not analysed."""
    lower, upper = [], []
    for result, envelope in zip(results, view_envelopes(results, view, stations), strict=True):
        if envelope is None:
            low = high = np.zeros((len(result.line.members), stations))
        else:
            low, high = line_ordinates(envelope, quantity, stations)
        lower.append(low)
        upper.append(high)
    empty = np.zeros((0, stations))
    return Ordinates(
        title=f"{say(quantity.capitalize())}, {view.title}",
        quantity=quantity,
        lower=np.concatenate(lower) if lower else empty,
        upper=np.concatenate(upper) if upper else empty,
    )


def line_ordinates(
    envelope: LineEnvelope, quantity: Quantity, stations: int
) -> tuple[Floats, Floats]:
    """Return lower and upper ordinates (M, N) of one line, at equal steps along each member."""
    low, high = np.empty((2, len(envelope.members), stations))
    for row, member in enumerate(envelope.members):
        least, most = {
            "moment": (member.moment_min, member.moment_max),
            "shear": (member.shear_min_at, member.shear_max_at),
            "deflection": (member.deflection_min, member.deflection_max),
        }[quantity]
        if len(member.x) == stations:
            low[row], high[row] = least, most
        else:
            at = np.linspace(0.0, member.x[-1], stations)
            low[row], high[row] = np.interp(at, member.x, least), np.interp(at, member.x, most)
    return low, high
