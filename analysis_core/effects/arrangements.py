"""Actions span by span: each case cut into the parts that stand on one span.

The worst arrangement of a variable action at a section is the sum of its adverse parts, because
the line is linear: solved once per part, every one of the 2^n arrangements is covered exactly.
The sets that codes list are fixed choices of the same parts.

``split_by_span`` gives a line whose cases are the parts; whoever solves it hands the solution
back to ``envelopes``, and ``merged`` recovers the solution of the whole cases.
"""

from __future__ import annotations

import itertools
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import Action, JointForce, JointMovement, Line
from analysis_core.results import LineSolution

Floats = NDArray[np.float64]
Pattern = Literal["all", "alternate", "adjacent", "exterior", "but-exterior"]
PATTERNS: Mapping[str, str] = {
    "all": "every span loaded",
    "alternate": "every other span loaded, first the odd ones, then the even ones",
    "adjacent": "any two adjacent spans loaded",
    "exterior": "one exterior span loaded",
    "but-exterior": "all spans but one exterior span loaded",
}


@dataclass(frozen=True, slots=True)
class PatternRule:
    """Cases that are arranged together, the patterns, and the share that stays elsewhere."""

    cases: tuple[str, ...]
    patterns: tuple[Pattern, ...]
    elsewhere: float = 0.0


@dataclass(frozen=True, slots=True)
class Arrangements:
    """How actions may stand on the spans of a line.

    ``shares``: the variable cases that are loaded span by span, and the share of each that stays
    on the spans that are not fully loaded (0, or one half for partial snow).  ``permanent``: the
    permanent cases whose factor may differ from span to span.  ``listed``: the patterns of a
    code's list; empty: every arrangement, exactly.
    """

    name: str = "none"
    shares: Mapping[str, float] = field(default_factory=dict)
    permanent: tuple[str, ...] = ()
    listed: tuple[PatternRule, ...] = ()
    clause: str = ""

    @property
    def split(self) -> tuple[str, ...]:
        """Names of the cases that are cut into parts."""
        return (*self.shares, *self.permanent)


@dataclass(frozen=True, slots=True)
class Part:
    """What stands of ``case`` at one ``place``: "span 2", or "" for a case that is whole."""

    name: str
    case: str
    place: str = ""
    span: int | None = None


@dataclass(frozen=True, slots=True)
class SpanCases:
    """A line whose cases are the parts of the cases asked for."""

    line: Line
    parts: tuple[Part, ...]

    @property
    def cases(self) -> tuple[str, ...]:
        """Names of the parts: the cases to solve the line for."""
        return tuple(part.name for part in self.parts)


def split_by_span(
    line: Line,
    cases: Sequence[str],
    split: Collection[str],
    *,
    known: Mapping[str, Part] | None = None,
) -> SpanCases:
    """Return ``line`` with each case in ``split`` cut into parts by span.

    A force or couple on a joint belongs to the first span that meets there; actions on a leg
    form a part of their own.  A case all of whose actions stand on one span stays whole, but
    its one part names the span.  ``known`` says which part an action belongs to whose case name
    is already one of a part, as reactions handed down from a line that was itself split; parts
    at the same place of different lines are told apart by their place.
    """
    known = known or {}
    wanted, by_span = set(cases), set(split)
    found: dict[str, dict[str, Part]] = {case: {} for case in cases}
    actions = []
    for action in line.actions:
        part = known.get(action.case)
        case = part.case if part else action.case
        if case not in wanted:
            continue
        if part is None:
            part = _part(line, action) if case in by_span else Part(case, case)
        found[case].setdefault(part.name, part)
        actions.append(replace(action, case=part.name))
    parts: list[Part] = []
    for case in cases:
        own = found[case] or {case: Part(case, case)}
        parts += sorted(own.values(), key=lambda p: (p.span is None, p.span or 0, p.place))
    return SpanCases(replace(line, actions=tuple(actions)), tuple(parts))


def whole_cases(line: Line, cases: Sequence[str]) -> SpanCases:
    """Return the line as it is: each case is its own only part."""
    return SpanCases(line, tuple(Part(case, case) for case in cases))


def merged(
    spans: SpanCases, solution: LineSolution, cases: Sequence[str], line: Line
) -> LineSolution:
    """Return the solution of the whole ``cases`` of ``line`` from that of their parts."""
    rows = [[solution.cases.index(p.name) for p in spans.parts if p.case == c] for c in cases]

    def total(values: Floats) -> Floats:
        out = np.zeros((len(rows), *values.shape[1:]))
        for into, row in zip(out, rows, strict=True):
            for index in row:
                into += values[index]
        out.flags.writeable = False
        return out

    return replace(
        solution,
        line=line,
        cases=tuple(cases),
        end_moments=total(solution.end_moments),
        end_shears=total(solution.end_shears),
        axial=total(solution.axial),
        rotations=total(solution.rotations),
        end_rotations=total(solution.end_rotations),
        displacements=total(solution.displacements),
        reactions=total(solution.reactions),
    )


def loaded_spans(pattern: Pattern, spans: Sequence[int]) -> list[tuple[int, ...]]:
    """Return the sets of spans that ``pattern`` loads, of the ``spans`` of a line in order."""
    spans = tuple(spans)
    if pattern == "all" or len(spans) == 1:
        return [spans]
    if pattern == "alternate":
        return [spans[0::2], spans[1::2]]
    if pattern == "adjacent":
        return list(itertools.pairwise(spans))
    if pattern == "exterior":
        return [spans[:1], spans[-1:]]
    return [spans[1:], spans[:-1]]


def _part(line: Line, action: Action) -> Part:
    span, place = _place(line, action)
    return Part(f"{action.case} @ {place}", action.case, place, span)


def _place(line: Line, action: Action) -> tuple[int | None, str]:
    if isinstance(action, JointForce | JointMovement):
        meeting = [m for m in line.members if action.joint in (m.start, m.end)]
        spans = [m.span for m in meeting if m.span is not None]
        if spans:
            return min(spans), f"span {min(spans)}"
        return None, f"joint {action.joint}"
    member = line.members[action.member]
    if member.span is not None:
        return member.span, f"span {member.span}"
    return None, f"{'leg' if member.role == 'leg' else 'member'} {member.id}"
