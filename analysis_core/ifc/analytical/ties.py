"""Where the members of an analysis model lie along the building elements that they stand for.

An engineer models the line, a coordinator looks at the beam: results are wanted on both.  A
position on the beam counts from the beam's own start, which is found as the physical way in finds
it, so that results mean the same whichever way they came about.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from itertools import pairwise
from typing import Any

from analysis_core.building import AxisMember, Connection
from analysis_core.findings import listed
from analysis_core.ifc.analytical.notes import Notes
from analysis_core.ifc.bodies.main_prism import CurvedMemberError
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.physical.elements import Elements
from analysis_core.ifc.physical.laid import LaidReader
from analysis_core.ifc.physical.notes import Notes as ElementNotes
from analysis_core.ifc.physical.records import Record
from analysis_core.ifc.source import Source
from analysis_core.ifc.unreadable import READ_ERRORS
from analysis_core.model import Point, Tie
from analysis_core.settings import Settings

_PARALLEL = math.cos(math.radians(5.0))
_OVERLAP = 0.02
"""Part of a member's length by which it may reach over the next."""
Axis = tuple[Point, Point]


def ties_of(
    source: Source,
    settings: Settings,
    members: Iterable[AxisMember],
    connections: Iterable[Connection],
    elements: Mapping[str, Any],
    notes: Notes,
) -> tuple[Tie, ...]:
    """Return where each member and connection lies on the element that it stands for.

    ``elements``: the entity of each such element by GlobalId.  An element along which its members
    do not lie gets none of them, with a finding.
    """
    by_element: dict[str, list[AxisMember]] = {}
    for member in members:
        if member.element:
            by_element.setdefault(member.element, []).append(member)
    found = [Tie(c.global_id, c.element) for c in connections if c.element]
    axes = _ElementAxes(source, settings) if by_element else None
    astray = []
    for element, own in by_element.items():
        assert axes is not None  # there are members
        axis = axes.of(elements[element])
        ties = _along(axis, own) if axis is not None else _along_themselves(own)
        if not ties:
            astray.append((element, own))
        found += ties
    if astray:
        ids = [element for element, _ in astray]
        notes.add(
            "note",
            "tied-but-astray",
            f"{len(ids)} elements are tied to structural members that do not lie one after the "
            f"other along them ({listed(ids)}); the results are given to the members alone.",
            [*ids, *(m.global_id for _, own in astray for m in own)],
        )
    return tuple(found)


class _ElementAxes:
    """Axes of building elements as the physical way in lays them: columns run upwards."""

    def __init__(self, source: Source, settings: Settings) -> None:
        self._laying = LaidReader(Elements(source, settings, ElementNotes()))
        self._steepest = math.sin(settings.tolerances.beam_slope)

    def of(self, entity: Any) -> Axis | None:
        """Return start and end in the world; None where the element is no straight member."""
        try:
            record = Record.of(entity)
            placed = self._laying.placed(record)
            laid = self._laying.laid(record, placed)
            if laid.rise > self._steepest:
                laid = self._laying.rising(record, laid, placed)
        except (CurvedMemberError, *READ_ERRORS):
            return None
        return laid.lying.start, laid.lying.end


def _along(axis: Axis, members: Iterable[AxisMember]) -> list[Tie]:
    """Where members lie along an axis; none where they are not parallel, beside it or doubled."""
    start, end = axis
    span = frames.minus(end, start)
    length = frames.length(span)
    if not length > 0.0:
        return []
    direction = frames.unit(span)
    stretches = []
    for member in members:
        a, b = (frames.dot(frames.minus(p, start), direction) for p in (member.start, member.end))
        if abs(b - a) < _PARALLEL * math.dist(member.start, member.end):
            return []
        if max(a, b) <= 0.0 or min(a, b) >= length:
            return []
        stretches.append((min(a, b), max(a, b), a, member))
    stretches.sort(key=lambda stretch: stretch[:2])
    for (low, high, *_), (after, *_) in pairwise(stretches):
        if after < high - _OVERLAP * (high - low):
            return []
    return [
        Tie(member.global_id, member.element or "", a, reversed_=a > low)
        for low, _, a, member in stretches
    ]


def _along_themselves(members: list[AxisMember]) -> list[Tie]:
    """The same where the element has no axis: positions count from the first member's start."""
    longest = max(members, key=lambda m: math.dist(m.start, m.end))
    direction = frames.unit(frames.minus(longest.end, longest.start))
    ends = [p for m in members for p in (m.start, m.end)]
    places = [frames.dot(frames.minus(p, longest.start), direction) for p in ends]
    first, last = (frames.plus(longest.start, direction, s) for s in (min(places), max(places)))
    return _along((first, last), members)
