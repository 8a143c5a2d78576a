"""Physical beams as the search for bearings sees them: an axis in plan, a top and a bottom."""

from __future__ import annotations

import math
from dataclasses import dataclass

from analysis_core.building import AxisMember
from analysis_core.idealise.plan import Ray, Spot
from analysis_core.idealise.vectors import Vector, distance, subtract, unit


@dataclass(frozen=True, slots=True)
class Beam:
    """A beam with its plan axis.  ``run`` is its horizontal length; places along it are measured
    horizontally from its start unless called stations."""

    member: AxisMember
    id: str
    direction: Vector
    length: float
    ray: Ray
    run: float
    flatness: float
    """Horizontal metres per metre of axis."""
    rise: float
    """Metres up per horizontal metre."""
    above: float
    below: float
    half_width: float

    def level(self, along: float) -> float:
        """Return the level of the axis at a place."""
        return self.member.start[2] + self.rise * along

    def bottom(self, along: float) -> float:
        """Return the level of the underside at a place."""
        return self.member.start[2] + self.rise * along - self.below

    def top(self, along: float) -> float:
        """Return the level of the upper side at a place."""
        return self.member.start[2] + self.rise * along + self.above

    def station(self, along: float) -> float:
        """Return the station (m along the axis) of a place."""
        return along / self.flatness

    def end_spot(self, *, last: bool) -> Spot:
        """Return the plan point of one end."""
        point = self.member.end if last else self.member.start
        return point[0], point[1]


def beam_of(member: AxisMember) -> Beam:
    """Return the beam of a member that is not plumb."""
    direction = unit(subtract(member.end, member.start))
    size = distance(member.start, member.end)
    flat = math.hypot(direction[0], direction[1])
    ray = Ray((member.start[0], member.start[1]), (direction[0] / flat, direction[1] / flat))
    above, below, half_width = _extents(member, flat)
    return Beam(
        member, member.global_id, direction, size, ray, size * flat, flat, direction[2] / flat,
        above, below, half_width,
    )  # fmt: skip


def _extents(member: AxisMember, flat: float) -> tuple[float, float, float]:
    """Vertical distance from axis to top and bottom, and half the width in plan."""
    section = member.section
    if section is None:
        return 0.0, 0.0, 0.0
    if abs(member.up[2]) < 0.7 * flat:  # lying on its side
        return section.width / 2.0, section.width / 2.0, section.depth / 2.0
    top = section.top if 0.0 < section.top < section.depth else section.depth / 2.0
    bottom = section.depth - top
    if member.up[2] < 0.0:
        top, bottom = bottom, top
    return top / flat, bottom / flat, section.width / 2.0
