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
from copy import copy
from dataclasses import dataclass, field, fields, replace
from operator import attrgetter, is_
from typing import Literal, get_args

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import Action, JointAction, JointForce, JointMovement, Line, MemberAction
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

# All values of an action but its case, which comes first.
_ALL_BUT_CASE = {
    kind: attrgetter(*[f.name for f in fields(kind)][1:])
    for kind in get_args(MemberAction | JointAction)
}
_SUPERPOSED = (
    "end_moments", "end_shears", "axial", "rotations", "end_rotations", "displacements",
    "reactions",
)  # fmt: skip


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
    at the same place of different lines are told apart by their place.  Their span is the one that
    the action stands on.
    """
    return SpanSplitter(cases, split, known=known).split(line)


class SpanSplitter:
    """Splits many lines as ``split_by_span`` does; lines with equal parts share one tuple of them.

    What follows from parts alone need then be found once.  ``known`` may grow in the meantime.
    """

    def __init__(
        self,
        cases: Sequence[str],
        split: Collection[str],
        *,
        known: Mapping[str, Part] | None = None,
    ) -> None:
        self._whole = {case: Part(case, case) for case in cases}
        self._split = frozenset(split)
        self._known = {} if known is None else known
        self._on_span: dict[tuple[str, int], Part] = {}
        self._shared: dict[tuple[Part, ...], tuple[Part, ...]] = {}

    def split(self, line: Line) -> SpanCases:
        """Return one line with its parts."""
        found: dict[str, dict[str, Part]] = {case: {} for case in self._whole}
        actions = []
        for action in line.actions:
            part = self._part(line, action)
            if part is not None:
                found[part.case].setdefault(part.name, part)
                actions.append(recased(action, part.name))
        parts: list[Part] = []
        for case, own in found.items():
            parts += sorted(own.values(), key=_along) if own else [self._whole[case]]
        shared = tuple(parts)
        return SpanCases(
            with_recased(line, tuple(actions)), self._shared.setdefault(shared, shared)
        )

    def _part(self, line: Line, action: Action) -> Part | None:
        """The part that an action belongs to, None where its case is not wanted."""
        case = action.case
        known = self._known.get(case)
        if known is not None:
            return self._handed_down(line, action, known) if known.case in self._whole else None
        if case not in self._split:
            return self._whole.get(case)
        if case not in self._whole:
            return None
        if isinstance(action, JointForce | JointMovement):
            return _part(line, action)
        span = line.members[action.member].span
        if span is None:
            return _part(line, action)
        part = self._on_span.get((case, span))
        if part is None:
            part = self._on_span[case, span] = _part(line, action)
        return part

    def _handed_down(self, line: Line, action: Action, known: Part) -> Part:
        """The known part, on the span that the action stands on here.

        One part may be handed down to several lines, or twice to one, and keeps its name there.
        """
        span, _ = _place(line, action)
        return known if span == known.span else replace(known, span=span)


def recased(action: Action, case: str) -> Action:
    """Return the action in another case."""
    if action.case == case:
        return action
    kind = type(action)
    return kind(case, *_ALL_BUT_CASE[kind](action))


def with_recased(line: Line, actions: tuple[Action, ...]) -> Line:
    """Return the line with its own ``actions`` in other cases, which need not be checked again."""
    if all(map(is_, actions, line.actions)) and len(actions) == len(line.actions):
        return line
    changed = copy(line)
    object.__setattr__(changed, "actions", actions)
    return changed


def whole_cases(line: Line, cases: Sequence[str]) -> SpanCases:
    """Return the line as it is: each case is its own only part."""
    return SpanCases(line, tuple(Part(case, case) for case in cases))


def merged(
    spans: SpanCases, solution: LineSolution, cases: Sequence[str], line: Line
) -> LineSolution:
    """Return the solution of the whole ``cases`` of ``line`` from that of their parts."""
    (whole,) = merged_lines([spans], [solution], cases, [line])
    return whole


def merged_lines(
    spans: Sequence[SpanCases],
    solutions: Sequence[LineSolution],
    cases: Sequence[str],
    lines: Sequence[Line],
) -> list[LineSolution]:
    """Return ``merged`` of each line; those alike are added up together."""
    out: list[LineSolution | None] = [None] * len(spans)
    alike: dict[tuple[object, ...], list[int]] = {}
    for i, (split, solution) in enumerate(zip(spans, solutions, strict=True)):
        # Lines that share their parts refer to the same tuple: see SpanSplitter.
        key = id(split.parts), solution.cases, solution.end_moments.shape, solution.rotations.shape
        alike.setdefault(key, []).append(i)
    for chosen in alike.values():
        first, parts = solutions[chosen[0]], spans[chosen[0]].parts
        rows = [[first.cases.index(p.name) for p in parts if p.case == c] for c in cases]
        totals = [
            _totals([getattr(solutions[i], name) for i in chosen], rows) for name in _SUPERPOSED
        ]
        for i, *arrays in zip(chosen, *totals, strict=True):
            given = solutions[i]
            out[i] = LineSolution(
                line=lines[i],
                cases=tuple(cases),
                joint_residual=given.joint_residual,
                continuity_residual=given.continuity_residual,
                method=given.method,
                **dict(zip(_SUPERPOSED, arrays, strict=True)),
            )
    return [whole for whole in out if whole is not None]


def _totals(values: Sequence[Floats], rows: Sequence[Sequence[int]]) -> Floats:
    """The sums over the parts in each of the rows, of every line (L, parts, ...), read-only."""
    every = np.stack(values)
    out = np.zeros((len(every), len(rows), *every.shape[2:]))
    for case, row in enumerate(rows):
        for index in row:
            out[:, case] += every[:, index]
    out.flags.writeable = False
    return out


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


def _along(part: Part) -> tuple[bool, int, str]:
    """Parts of a case stand in the order of the spans."""
    return part.span is None, part.span or 0, part.place


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
