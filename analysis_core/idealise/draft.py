"""A line while it is being put together: joints and bars in a plane, before actions.

Drafts are the only mutable data of ``idealise``; ``build`` turns each into a frozen ``Line``.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from analysis_core.building import AxisMember
from analysis_core.idealise.planes import Plane
from analysis_core.model import FREE, RIGID, Kind, Point, Role, Support


@dataclass(slots=True)
class DraftJoint:
    """A joint of a draft; ``x``, ``z`` in its plane.  ``key`` tells it from every other place."""

    x: float
    z: float
    key: str = ""
    vertical: float = FREE
    horizontal: float = FREE
    rotation: float = FREE
    element: str | None = None
    elements: list[str] = field(default_factory=list)
    reason: str = ""
    width: float = 0.0
    point: Point | None = None
    """Its place in the world where that is not the one of x and z (clear spans)."""
    settled: bool = False
    """Whether the job file states this support, so that nothing else decides it."""

    @property
    def support(self) -> Support | None:
        """The support, None where nothing holds the joint."""
        if self.vertical == self.horizontal == self.rotation == FREE:
            return None
        return Support(self.vertical, self.horizontal, self.rotation)


@dataclass(slots=True)
class Bar:
    """A stretch of one member between two joints.

    ``station_start`` and ``station_end`` are the distances from the member's own start at both
    ends of the bar; they may lie outside the member where a span is measured to the axis of a
    bearing that the member, as drawn, does not reach.
    """

    member: AxisMember
    start: int
    end: int
    station_start: float
    station_end: float
    start_spring: float = RIGID
    end_spring: float = RIGID
    role: Role = "span"
    span: int | None = None
    cuts: tuple[float, float] = (0.0, 0.0)
    """What clear spans leave out at its start and end, m: that lies over bearings."""


@dataclass(slots=True)
class Draft:
    """A line or frame with its joints and bars.

    ``faults`` say why it cannot be solved: the slug of the finding, and a clause for it.
    """

    plane: Plane
    kind: Kind
    joints: list[DraftJoint]
    bars: list[Bar]
    mark: str = ""
    storey: str | None = None
    faults: list[tuple[str, str]] = field(default_factory=list)

    def length(self, bar: Bar) -> float:
        """Return the distance between the joints of a bar in m."""
        a, b = self.joints[bar.start], self.joints[bar.end]
        return math.hypot(b.x - a.x, b.z - a.z)

    def direction(self, bar: Bar) -> tuple[float, float]:
        """Return the unit vector (right, up) from the start of a bar to its end."""
        a, b = self.joints[bar.start], self.joints[bar.end]
        size = self.length(bar)
        return (b.x - a.x) / size, (b.z - a.z) / size

    def point(self, number: int) -> Point:
        """Return the world point of a joint."""
        joint = self.joints[number]
        return joint.point or self.plane.world(joint.x, joint.z)

    @property
    def joint_of(self) -> dict[str, int]:
        """Index of each joint by its key."""
        return {joint.key: index for index, joint in enumerate(self.joints)}

    @property
    def elements(self) -> tuple[str, ...]:
        """GlobalIds of the members, in the order of the bars."""
        return tuple(dict.fromkeys(bar.member.global_id for bar in self.bars))
