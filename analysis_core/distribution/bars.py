"""A line reduced to bars: collinear members between joints where nothing else happens.

A joint without a support at which one member simply goes on as the next is no place to stop a
rotation: the members are taken as one bar whose elastic weights follow each other, with point
weights for the springs between them.  This keeps hinges and changes of section inside a span
exact, however short or stiff the parts.  A bar whose far end is free is a tail: statics alone
tells what it does to the joint that carries it.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, field
from itertools import pairwise

from analysis_core.distribution.loads import is_free
from analysis_core.distribution.stiffness_factors import (
    EndStiffness,
    elastic_weights,
    in_a_row,
    inverse,
    with_point_weights,
)
from analysis_core.model import FREE, Line, Member

STRAIGHT = 1e-9
"""Sine of the angle up to which two members count as one straight line."""


@dataclass(frozen=True, slots=True)
class Bar:
    """One or more members of a line, in a row from joint ``start`` to joint ``end``.

    ``offsets`` are the distances of the members' starts from the bar's start, m; ``direction``
    the unit vector (cos a, sin a).  ``hinges`` are the distinct positions (m) of releases, ends
    included.  ``slides`` marks a leg that only restrains the rotation of a joint that has a
    support of its own: 0 where its start slides along it there, 1 where its end does.
    """

    start: int
    end: int
    members: tuple[int, ...]
    offsets: tuple[float, ...]
    direction: tuple[float, float]
    stiffness: EndStiffness
    hinges: tuple[float, ...] = ()
    slides: int | None = None

    @property
    def length(self) -> float:
        """Length in m."""
        return self.stiffness.length

    @property
    def released(self) -> tuple[bool, bool]:
        """Whether the bar is released from its start and its end joint."""
        return 0.0 in self.hinges, self.length in self.hinges


@dataclass(frozen=True, slots=True)
class Reduction:
    """The bars of a line: ``bars`` between ``joints`` that have to be released, and ``tails``.

    Tails are in the order in which they can be taken off: each pair is the bar and the joint
    that carries it.
    """

    bars: tuple[Bar, ...]
    joints: tuple[int, ...]
    tails: tuple[tuple[Bar, int], ...] = field(default=())


def reduce(line: Line) -> Reduction:
    """Return the bars of a line, its tails taken off."""
    bars = list(_rows(line))
    tails = _take_tails(line, bars)
    taken = {id(bar) for bar, _ in tails}
    left = tuple(bar for bar in bars if id(bar) not in taken)
    joints = {joint for bar in left for joint in (bar.start, bar.end)}
    joints |= {root for _, root in tails} - {_tip(bar, root) for bar, root in tails}
    return Reduction(left, tuple(sorted(joints)), tails)


def _tip(bar: Bar, root: int) -> int:
    return bar.end if bar.start == root else bar.start


def _rows(line: Line) -> Iterable[Bar]:
    following = _following(line)
    continued = set(following.values())
    for member in line.members:
        if member.id in continued:
            continue
        row = [member]
        while row[-1].id in following:
            row.append(line.members[following[row[-1].id]])
        yield from _bars_of_row(line, row)


def _following(line: Line) -> dict[int, int]:
    """Return which member goes on from which, where the joint between them is of no account."""
    ends: dict[int, list[tuple[Member, bool]]] = {}
    for member in line.members:
        ends.setdefault(member.start, []).append((member, True))
        ends.setdefault(member.end, []).append((member, False))
    following = {}
    for joint, meeting in ends.items():
        if len(meeting) != 2 or not is_free(line.joints[joint]):
            continue
        (one, one_starts), (other, other_starts) = meeting
        if one_starts == other_starts:
            continue
        before, after = (other, one) if one_starts else (one, other)
        if _straight(line.direction(before), line.direction(after)):
            following[before.id] = after.id
    return following


def _straight(one: tuple[float, float], other: tuple[float, float]) -> bool:
    along = one[0] * other[0] + one[1] * other[1]
    return along > 0.0 and abs(one[0] * other[1] - one[1] * other[0]) <= STRAIGHT


def _bars_of_row(line: Line, row: list[Member]) -> Iterable[Bar]:
    """Yield one bar, or several where more than two hinges would leave its inside loose."""
    whole = _bar(line, row)
    if len(row) == 1 or len(whole.hinges) <= 2:
        yield whole
        return
    part = [row[0]]
    for before, after in pairwise(row):
        if FREE in (before.end_spring, after.start_spring):
            yield _bar(line, part)
            part = []
        part.append(after)
    yield _bar(line, part)


def _bar(line: Line, row: list[Member]) -> Bar:
    offsets, points, reached = [], [], 0.0
    for member in row:
        offsets.append(reached)
        points.append((reached, inverse(member.start_spring)))
        reached += member.length
        points.append((reached, inverse(member.end_spring)))
    weights = in_a_row(elastic_weights(member.pieces) for member in row)
    # The sums of lengths and of elastic lengths must agree to the last bit at the end.
    points[-1] = (weights.length, points[-1][1])
    hinges = sorted({x for x, flexibility in points if math.isinf(flexibility)})
    return Bar(
        start=row[0].start,
        end=row[-1].end,
        members=tuple(member.id for member in row),
        offsets=tuple(offsets),
        direction=line.direction(row[0]),
        stiffness=with_point_weights(weights, points),
        hinges=tuple(hinges),
        slides=_slides(line, row),
    )


def _slides(line: Line, row: list[Member]) -> int | None:
    """Return the end at which a leg of a line leaves its joint to the joint's own support."""
    if line.kind != "line" or row[0].role != "leg":
        return None
    on_line = {end for m in line.members if m.role == "span" for end in (m.start, m.end)}
    for end, joint in enumerate((row[0].start, row[-1].end)):
        support = line.joints[joint].support
        if joint in on_line and support is not None and support.vertical:
            return end
    return None


def _take_tails(line: Line, bars: list[Bar]) -> tuple[tuple[Bar, int], ...]:
    """Return the bars with a free end, then those that end where only tails were carried."""
    meeting: dict[int, list[Bar]] = {}
    for bar in bars:
        for joint in (bar.start, bar.end):
            meeting.setdefault(joint, []).append(bar)
    tails = []
    tips = [joint for joint, met in meeting.items() if len(met) == 1]
    while tips:
        tip = tips.pop()
        if len(meeting[tip]) != 1 or not is_free(line.joints[tip]):
            continue
        bar = meeting[tip][0]
        root = bar.start if bar.end == tip else bar.end
        if root == tip or not _stays(bar, tip):
            continue
        tails.append((bar, root))
        meeting[tip].remove(bar)
        meeting[root].remove(bar)
        tips.append(root)
    return tuple(tails)


def _stays(tail: Bar, tip: int) -> bool:
    """Whether a bar with a free tip keeps its shape: it has no hinge but at the tip itself."""
    at_tip = tail.length if tail.end == tip else 0.0
    return all(hinge == at_tip for hinge in tail.hinges)
