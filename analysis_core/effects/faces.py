"""Moments at the faces of supports, and peaks rounded over bearings; the axis value is kept.

EN 1992-1-1 5.3.2.2(3): at a monolithic support the moment at its face, at least a stated part of
the full fixed-end moment; 5.3.2.2(4): over a bearing that lets the beam turn, the peak less
the reaction times an eighth of the width.  ACI 318-19 6.6.2.3: the moment at the face.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.arrangements import Arrangements, SpanCases
from analysis_core.effects.envelopes import span_numbers
from analysis_core.effects.factors import FactorTable, PartsOf, factor_table
from analysis_core.effects.fields import Fields, fields, sample
from analysis_core.effects.fixed_ends import full_fixed_end_moments
from analysis_core.effects.sampling import both
from analysis_core.model import Combination, Line, Member
from analysis_core.results import Extreme, LineSolution

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class FaceRule:
    """What a rule set allows at supports.

    ``rounding``: the part of reaction times width by which a peak over a bearing is reduced, 0
    where that is not allowed.  ``share``: the part of the full fixed-end moment below which the
    moment at a monolithic face must not fall, 0 for none.
    """

    rounding: float = 0.0
    share: float = 0.0
    clause: str = ""


@dataclass(frozen=True, slots=True)
class SupportMoment:
    """Lowest (hogging) moments at one end of a member that stands over a support.

    ``axis`` at the support's axis, ``face`` at its face, ``rounded`` at the axis with the peak
    rounded, ``fixed_end`` the least magnitude for the face of a monolithic support.  Each holds
    its place from the member's start and what governs.  None: not allowed by the rule, or the
    width of the support is unknown.
    """

    joint: int
    member: int
    end: str
    width: float
    axis: Extreme
    face: Extreme | None = None
    rounded: Extreme | None = None
    fixed_end: Extreme | None = None

    @property
    def monolithic(self) -> Extreme:
        """The moment to design a monolithic support for."""
        if self.face is None:
            return self.axis
        if self.fixed_end is not None and self.fixed_end.value < self.face.value:
            return self.fixed_end
        return self.face

    @property
    def bearing(self) -> Extreme:
        """The moment to design a support for that lets the beam turn."""
        return self.rounded or self.axis


def support_moments(
    spans: SpanCases,
    solution: LineSolution,
    combinations: Sequence[Combination],
    rule: FaceRule,
    *,
    limit_state: str = "strength",
    arrangements: Arrangements | None = None,
) -> tuple[SupportMoment, ...]:
    """Return the moments at every end of a member that stands over a support, left to right.

    ``solution`` holds the parts of ``spans``.  Each value is the lowest over every combination
    and arrangement, taken at its own place.
    """
    chosen = [c for c in combinations if c.limit_state == limit_state]
    line = spans.line
    table = factor_table(chosen, spans.parts, arrangements or Arrangements(), span_numbers(line))
    at = {name: i for i, name in enumerate(solution.cases)}
    order = [at[name] for name in spans.cases]
    fixed = full_fixed_end_moments(line, spans.cases) if rule.share else None
    values = {
        member: _along(block, b, order)
        for block in fields([line], [solution])
        for b, member in enumerate(block.member.tolist())
    }
    out = []
    for member in line.members:
        for e, (end, number) in enumerate((("start", member.start), ("end", member.end))):
            joint = line.joints[number]
            if joint.support is None or joint.support.vertical <= 0.0:
                continue
            reaction = solution.reactions[order, number, 1]
            full = None if fixed is None else rule.share * fixed[:, member.id, e]
            out.append(
                _support_moment(
                    line, member, end, number, values[member.id], reaction, full, rule, table
                )
            )
    return tuple(out)


def _support_moment(
    line: Line,
    member: Member,
    end: str,
    number: int,
    moment: Callable[[float], Floats],
    reaction: Floats,
    full: Floats | None,
    rule: FaceRule,
    table: FactorTable,
) -> SupportMoment:
    length, width = member.length, line.joints[number].width
    axis_at = 0.0 if end == "start" else length
    axis = _lowest(moment(axis_at), axis_at, table)
    face = rounded = fixed_end = None
    if 0.0 < width < 2.0 * length:
        at = 0.5 * width if end == "start" else length - 0.5 * width
        face = _lowest(moment(at), at, table)
        fixed_end = None if full is None else _lowest(full, at, table)
        if rule.rounding:
            lifted = moment(axis_at) + rule.rounding * width * reaction
            rounded = _lowest(lifted, axis_at, table)
            # A peak that does not hog, or over a support that pulls, is not rounded.
            if rounded.value < axis.value or axis.value >= 0.0:
                rounded = axis
    return SupportMoment(number, member.id, end, width, axis, face, rounded, fixed_end)


def _along(block: Fields, b: int, order: Sequence[int]) -> Callable[[float], Floats]:
    """The moments of the parts at a place of one member, in the order of the parts."""

    def moment(x: float) -> Floats:
        one = slice(b, b + 1)
        found = sample(block.moment[..., one], block.cuts[:, one], np.array([[x]]))
        return np.asarray(found[0, order, 0])

    return moment


def _lowest(parts: Floats, x: float, table: FactorTable) -> Extreme:
    _, low = both(parts[:, None], table)
    row = int(np.argmin(low[:, 0]))
    own = PartsOf([table.parts], np.array([0]))
    (source,) = table.sources(np.array([row]), parts[:, None], own, largest=False)
    return Extreme(float(low[row, 0]), x, source)
