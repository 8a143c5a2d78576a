"""Members that meet at an angle within one vertical plane, away from any bearing.

A beam line knows bending and shear across it.  Sloping members that lean on each other, as in a
truss or a pair of rafters without a ridge beam, carry by forces along them; no result may pretend
otherwise.  One that has a bearing of its own and leans on a line that stands is carried by it.
"""

from __future__ import annotations

import math
from collections.abc import Container, Iterable, Iterator, Sequence
from typing import NamedTuple

import numpy as np

from analysis_core.findings import listed
from analysis_core.idealise.draft import Bar, Draft, DraftJoint
from analysis_core.idealise.log import Log
from analysis_core.idealise.pairs import overlapping
from analysis_core.idealise.scheme import Rest, Scheme, fallen_of
from analysis_core.idealise.vectors import Vector, cross, dot, length, scale, subtract, unit
from analysis_core.model import FREE, RIGID
from analysis_core.settings import Tolerances

_SLUG = "triangulated"
# Flatter than this (10 degrees) two members run side by side or on rather than meet.
_ANGLE = math.sin(math.radians(10.0))


class _Meeting(NamedTuple):
    """The end joint ``joint`` of ``draft`` lies on ``bar`` of ``other``, ``share`` along it."""

    draft: int
    joint: DraftJoint
    other: int
    bar: Bar
    share: float


def let_lean(scheme: Scheme, tolerances: Tolerances, log: Log) -> None:
    """Let lines that stand carry what has one bearing only and leans on them at an angle."""
    drafts = scheme.drafts
    fallen = fallen_of(drafts)
    for found in _meetings(drafts, fallen, tolerances):
        draft, other = drafts[found.draft], drafts[found.other]
        if found.draft not in fallen or found.other in fallen or found.joint.vertical > FREE:
            continue
        if not any(joint.vertical > FREE for joint in draft.joints):
            continue
        member, bar = found.bar.member.global_id, found.bar
        station = bar.station_start + found.share * (bar.station_end - bar.station_start)
        found.joint.vertical = RIGID
        found.joint.element = member
        found.joint.elements.append(member)
        found.joint.reason = (
            f"end meets beam '{bar.member.name}' (GlobalId {member}) of line {other.mark} at an "
            f"angle; taken as pinned and carried by it, its deflection neglected"
        )
        scheme.rests.append(Rest(draft, found.joint.key, other, member=member, station=station))
        log.add(
            "warning",
            _SLUG,
            f"Line {draft.mark} meets line {other.mark} at an angle within its vertical plane and "
            f"is taken as carried by it there. Forces along {draft.mark}, as in a strut or a tie, "
            f"are left out on both; {other.mark} is not held up by them.",
            (*draft.elements, *other.elements),
            draft.mark,
        )


def fault_triangles(drafts: Sequence[Draft], tolerances: Tolerances, log: Log) -> None:
    """Name members that nothing but each other holds, and refuse the lines that they lean on.

    A line that stands by itself is refused as well where one of these meets it: what that one
    hands on is not known.
    """
    fallen = fallen_of(drafts)
    groups: dict[int, set[int]] = {}
    for found in _meetings(drafts, fallen, tolerances):
        pair = found.draft, found.other
        joined = set(pair).union(*(groups.get(n, ()) for n in pair))
        groups.update(dict.fromkeys(joined, joined))
    for group in {id(found): found for found in groups.values()}.values():
        _refuse(drafts, sorted(group), fallen, log)


def report_triangles(drafts: Iterable[Draft], log: Log) -> None:
    """Say of each frame that is made of triangles what rigid members do to its results."""
    for draft in drafts:
        if draft.kind == "frame" and _has_triangle(draft):
            log.add(
                "warning",
                _SLUG,
                f"Frame {draft.mark} holds triangles of members, as a truss or a braced frame "
                f"does. Members are rigid axially, so joints of a triangle do not move against "
                f"each other: deflections are those within members only, and what the stretching "
                f"of members adds to deflections and moments is left out.",
                draft.elements,
                draft.mark,
            )


def _has_triangle(draft: Draft) -> bool:
    near: dict[int, set[int]] = {}
    for bar in draft.bars:
        near.setdefault(bar.start, set()).add(bar.end)
        near.setdefault(bar.end, set()).add(bar.start)
    return any(near[bar.start] & near[bar.end] for bar in draft.bars)


def _refuse(
    drafts: Sequence[Draft], group: Sequence[int], fallen: Container[int], log: Log
) -> None:
    elements = [element for n in group for element in drafts[n].elements]
    log.add(
        "warning",
        _SLUG,
        f"{len(elements)} members meet at angles within a vertical plane and hold each other "
        f"by forces along them, as in a truss or a pair of rafters without a ridge beam "
        f"({listed(elements)}). Lines of beams know no such forces, so none of these is "
        f"analysed. Give the file an analysis model of them, or state in the job file what "
        f"holds their ends (supports: on, end).",
        elements,
    )
    for n in group:
        if n in fallen:
            continue
        others = [drafts[other].mark for other in group if other != n]
        clause = (
            f"{listed(others)} meet it at an angle within its vertical plane, as in a truss, and "
            f"what they hand on along them is not known"
        )
        drafts[n].faults.append((_SLUG, clause))


def _meetings(
    drafts: Sequence[Draft], fallen: Container[int], tolerances: Tolerances
) -> Iterator[_Meeting]:
    """Yield where an end meets another draft; at least one of both is fallen."""
    bars = [(n, bar) for n, draft in enumerate(drafts) for bar in draft.bars]
    ends = [(n, k) for n, draft in enumerate(drafts) for k in (0, len(draft.joints) - 1)]
    if not any(n in fallen for n in range(len(drafts))):
        return
    reach = tolerances.bearing
    rows = [[drafts[n].point(k) for k in (bar.start, bar.end)] for n, bar in bars]
    corners = np.array(rows).reshape(-1, 2, 3)
    boxes = np.hstack([corners.min(axis=1), corners.max(axis=1)])
    points = np.array([drafts[n].point(k) for n, k in ends]).reshape(-1, 3)
    which, met = overlapping(np.hstack([points - reach, points + reach]), boxes)
    for e, b in zip(which.tolist(), met.tolist(), strict=True):
        (one, joint), (other, bar) = ends[e], bars[b]
        if one == other or not (one in fallen or other in fallen):
            continue
        share = _meets(drafts[one], joint, drafts[other], bar, reach)
        if share is not None:
            yield _Meeting(one, drafts[one].joints[joint], other, bar, share)


def _meets(draft: Draft, joint: int, other: Draft, bar: Bar, reach: float) -> float | None:
    """Return how far along a bar (0 to 1) an end meets it, None where it does not.

    It does at an angle, in one vertical plane, and where neither has a bearing.
    """
    point = draft.point(joint)
    if _held_at(draft, point, reach) or _held_at(other, point, reach):
        return None
    a, b = other.point(bar.start), other.point(bar.end)
    own = next(o for o in draft.bars if joint in (o.start, o.end))
    direction = unit(subtract(draft.point(own.end), draft.point(own.start)))
    normal = cross(direction, unit(subtract(b, a)))
    if length(normal) < _ANGLE or abs(normal[2]) > _ANGLE * length(normal):
        return None
    arm, span = subtract(point, a), subtract(b, a)
    share = min(max(dot(arm, span) / dot(span, span), 0.0), 1.0)
    return share if length(subtract(arm, scale(span, share))) <= reach else None


def _held_at(draft: Draft, point: Vector, reach: float) -> bool:
    return any(
        joint.vertical > FREE and length(subtract(draft.point(n), point)) <= reach
        for n, joint in enumerate(draft.joints)
    )
