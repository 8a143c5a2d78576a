"""Order along a line: which way it runs, and how its spans are numbered."""

from __future__ import annotations

from collections.abc import Sequence

from analysis_core.building import AxisMember
from analysis_core.idealise.draft import Bar, Draft
from analysis_core.idealise.planes import view_axis
from analysis_core.idealise.vectors import Vector, dot, scale, subtract, unit
from analysis_core.model import FREE, Point


def runs_forward(ordered: Sequence[AxisMember], direction: Vector) -> bool:
    """Return whether a line runs along ``direction``, in which ``ordered`` lists its members.

    The start is the end nearer the first element's own start (CONTRACT section 1).  Where the
    outer elements disagree on that, the world axis nearest to the line decides.
    """
    first, last = ordered[0], ordered[-1]
    forward = _drawn_along(first, direction)
    backward = not _drawn_along(last, direction)
    if forward != backward:
        return forward
    return dot(view_axis(direction), direction) > 0.0


def line_direction(ordered: Sequence[AxisMember]) -> Vector:
    """Return the unit direction from the outermost point of the first to that of the last."""
    guess = aligned(ordered[0], ordered[-1])
    ends = [p for m in (ordered[0], ordered[-1]) for p in (m.start, m.end)]
    anchor = ends[0]
    ends.sort(key=lambda p: dot(subtract(p, anchor), guess))
    return unit(subtract(ends[-1], ends[0]))


def aligned(first: AxisMember, last: AxisMember) -> Vector:
    """Return the direction of ``first``, pointed towards ``last`` where they differ."""
    direction = unit(subtract(first.end, first.start))
    if first is last:
        return direction
    centre = _centre(first)
    onward = dot(subtract(_centre(last), centre), direction)
    return direction if onward >= 0.0 else scale(direction, -1.0)


def number_spans(draft: Draft) -> None:
    """Number the spans of a line from 1; a span runs from one vertical support to the next.

    In a frame, bars that go on straight through a joint that nothing else holds up are one span.
    """
    held = {j for j, joint in enumerate(draft.joints) if joint.vertical > FREE}
    for bar in draft.bars:
        if bar.role == "leg":
            held.update((bar.start, bar.end))
    spans = [bar for bar in draft.bars if bar.role == "span"]
    number, previous = 0, None
    for bar in spans:
        if previous is None or not _goes_on(draft, previous, bar, held):
            number += 1
        bar.span = number
        previous = bar


def _goes_on(draft: Draft, previous: Bar, bar: Bar, held: set[int]) -> bool:
    if previous.end != bar.start or bar.start in held:
        return False
    a, b = draft.direction(previous), draft.direction(bar)
    return a[0] * b[0] + a[1] * b[1] > 0.999


def _drawn_along(member: AxisMember, direction: Vector) -> bool:
    return dot(subtract(member.end, member.start), direction) > 0.0


def _centre(member: AxisMember) -> Point:
    half = scale(subtract(member.end, member.start), 0.5)
    return member.start[0] + half[0], member.start[1] + half[1], member.start[2] + half[2]
