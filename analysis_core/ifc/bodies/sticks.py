"""A product's shape as a stick: the line through the centroids, the profile and how it lies.

Axis for direction, body for position: where an axis is drawn as well, its direction and its
extent count, moved onto the centroid line of the body; the distance is kept.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, NamedTuple

import numpy as np

from analysis_core.ifc.bodies.items import Shape
from analysis_core.ifc.bodies.main_prism import PARALLEL, CurvedMemberError, body_ends, main_prism
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import Frame, Vector
from analysis_core.ifc.geometry.outline import Matrix
from analysis_core.ifc.geometry.paths import Path, sampled
from analysis_core.ifc.sections.reader import Profile
from analysis_core.ifc.unreadable import UnreadableShapeError

_AXIS_OVERLAP = 0.8

_AXIS_REACH = 0.75  # an axis may be this much longer than the body at each end (m), or a tenth


class Stick(NamedTuple):
    """Ends of the centroid line, the images of the profile's axes, and the profile.

    ``body_start`` and ``body_end`` are the ends of the body where the axis reaches further.
    ``offset`` is the distance between the drawn axis and the centroid line, 0 without axis.
    """

    start: Vector
    end: Vector
    x_axis: Vector
    y_axis: Vector
    profile: Profile | None
    entity: Any = None
    end_profile: Profile | None = None
    end_entity: Any = None
    body_start: Vector | None = None
    body_end: Vector | None = None
    offset: float = 0.0
    remarks: tuple[str, ...] = ()

    @property
    def length(self) -> float:
        """Distance between the ends."""
        return math.dist(self.start, self.end)

    def reversed(self) -> Stick:
        """Return the stick run the other way."""
        if self.end_profile is None:
            return self._replace(start=self.end, end=self.start)
        return self._replace(
            start=self.end,
            end=self.start,
            profile=self.end_profile,
            entity=self.end_entity,
            end_profile=self.profile,
            end_entity=self.entity,
        )


def stick_of(shape: Shape) -> Stick:
    """Return the stick of a shape, in the shape's own coordinates.

    Raises CurvedMemberError for a curved body or axis, UnreadableShapeError where there is
    nothing that could be a straight member.
    """
    axis = _axis_ends(shape.axis)
    if not shape.items:
        return _stick_of_axis(axis, shape)
    main, remarks = main_prism(shape.items, axis)
    if shape.box_only:
        remarks.append("only its bounding box is drawn; the section is that of the box")
    start, end = body_ends(main)
    stick = Stick(
        start,
        end,
        main.frame[0:3],
        main.frame[3:6],
        main.profile,
        main.entity,
        main.end_profile,
        main.end_entity,
        None,
        None,
        0.0,
        tuple(remarks),
    )
    return _aligned(stick, axis) if axis is not None else stick


def with_profile(stick: Stick, profile: Profile, entity: Any, cardinal_point: int) -> Stick:
    """Give a member drawn as an axis only the profile associated with it.

    The axis runs through the cardinal point (IfcMaterialProfileSetUsage: 1 to 9 on the bounding
    box from bottom left to top right, 10 the centroid, 11 to 14 the box in line with it); 5,
    the middle of the box, where none is stated.  The shear centre (15 to 19) is not worked out:
    the centroid stands for it.
    """
    low, high = profile.corners.min(axis=0).tolist(), profile.corners.max(axis=0).tolist()
    x, y = profile.moments.x, profile.moments.y
    xs, ys = (
        (low[0], 0.5 * (low[0] + high[0]), high[0]),
        (low[1], 0.5 * (low[1] + high[1]), high[1]),
    )
    point = cardinal_point or 5
    if 1 <= point <= 9:
        at = (xs[(point - 1) % 3], ys[(point - 1) // 3])
    else:
        at = {11: (x, ys[0]), 12: (xs[0], y), 13: (xs[2], y), 14: (x, ys[2])}.get(point, (x, y))
    shift = frames.plus(tuple((x - at[0]) * c for c in stick.x_axis), stick.y_axis, y - at[1])
    return stick._replace(
        start=frames.plus(stick.start, shift),
        end=frames.plus(stick.end, shift),
        profile=profile,
        entity=entity,
        offset=frames.length(shift),
    )


class Lying(NamedTuple):
    """A stick placed in the world: its ends, the direction of the section's z, and the matrix
    from the profile's axes to the section's (y, z)."""

    start: Vector
    end: Vector
    up: Vector
    matrix: Matrix


class Layer:
    """Places sticks; the same profile lies in the same way over and over."""

    def __init__(self) -> None:
        self._known: dict[tuple[Vector, Vector, Vector, Vector], tuple[Vector, Matrix]] = {}

    def lay(self, stick: Stick, frame: Frame) -> Lying:
        """Return how a stick (in its element's coordinates) lies in the world."""
        start, end = stick.start, stick.end
        sx, sy, sz = start
        dx, dy, dz = end[0] - sx, end[1] - sy, end[2] - sz
        size = math.sqrt(dx * dx + dy * dy + dz * dz)
        along = (dx / size, dy / size, dz / size)
        # The frame is right-angled: the world's z, seen from inside, is its last row.
        vertical = (frame[2], frame[5], frame[8])
        key = (stick.x_axis, stick.y_axis, along, vertical)
        known = self._known.get(key)
        if known is None:
            up = upright(along, vertical, stick.y_axis)
            known = self._known[key] = (up, section_matrix(along, up, stick.x_axis, stick.y_axis))
        up, matrix = known
        return Lying(
            frames.point(frame, sx, sy, sz),
            frames.point(frame, *end),
            frames.direction(frame, *up),
            matrix,
        )


def section_matrix(along: Vector, up: Vector, x_axis: Vector, y_axis: Vector) -> Matrix:
    """Return the matrix from profile axes to (y, z) of the member, z along ``up``.

    x runs along the member, z along ``up`` and y completes the right-handed axes; the profile
    is projected along the member, so that oblique extrusions give the true cross-section.
    """
    y = frames.cross(up, along)
    return (
        (frames.dot(y, x_axis), frames.dot(y, y_axis)),
        (frames.dot(up, x_axis), frames.dot(up, y_axis)),
    )


def upright(along: Vector, vertical: Vector, depth_axis: Vector) -> Vector:
    """Return the unit vector across the member in its vertical plane; for a vertical member the
    direction of the profile's depth.  ``along`` and ``vertical`` are unit vectors."""
    rise = frames.dot(along, vertical)
    towards = vertical if abs(rise) < 0.9999 else depth_axis
    up = frames.plus(towards, along, -frames.dot(towards, along))
    if frames.length(up) < 1e-6 * max(frames.length(towards), 1e-12):
        return frames.any_perpendicular(along)
    return frames.unit(up)


def _axis_ends(path: Path | None) -> tuple[Vector, Vector] | None:
    if path is None:
        return None
    if len(path.segments) == 1 and not path.segments[0].curved:
        return _in_space(path.start), _in_space(path.end)
    points = sampled(path)
    if points.shape[1] == 2:
        points = np.column_stack([points, np.zeros(len(points))])
    chord = points[-1] - points[0]
    size = float(np.linalg.norm(chord))
    if size <= 1e-6:
        raise CurvedMemberError("its axis returns to where it starts")
    arms = points - points[0]
    off = np.linalg.norm(arms - np.outer(arms @ chord / size**2, chord), axis=1).max()
    if off > 0.005 * size:
        raise CurvedMemberError(
            f"its axis bends {off * 1e3:.0f} mm off the straight line over {size:.2f} m"
        )
    first, last = points[0].tolist(), points[-1].tolist()
    return (first[0], first[1], first[2]), (last[0], last[1], last[2])


def _in_space(p: Sequence[float]) -> Vector:
    return p[0], p[1], p[2] if len(p) > 2 else 0.0


def _stick_of_axis(axis: tuple[Vector, Vector] | None, shape: Shape) -> Stick:
    if axis is None:
        reason = "; ".join(shape.troubles) or "it has no representation"
        raise UnreadableShapeError(reason)
    start, end = axis
    along = frames.unit(frames.minus(end, start))
    up = (0.0, 0.0, 1.0) if abs(along[2]) < 0.999 else (0.0, 1.0, 0.0)
    y = frames.unit(frames.plus(up, along, -frames.dot(up, along)))
    x = frames.cross(y, along)
    return Stick(start, end, x, y, None, remarks=("it has an axis but no body",))


def _aligned(stick: Stick, axis: tuple[Vector, Vector]) -> Stick:
    """Take direction and extent from the axis and the position from the body."""
    first, last = axis
    size = math.dist(first, last)
    along = (
        (last[0] - first[0]) / size,
        (last[1] - first[1]) / size,
        (last[2] - first[2]) / size,
    )
    if frames.dot(along, frames.minus(stick.end, stick.start)) < 0.0:
        stick = stick.reversed()
    start, end = frames.minus(stick.start, first), frames.minus(stick.end, first)
    low, high = frames.dot(start, along), frames.dot(end, along)
    shift = frames.plus(
        (0.5 * (start[0] + end[0]), 0.5 * (start[1] + end[1]), 0.5 * (start[2] + end[2])),
        along,
        -0.5 * (low + high),
    )
    if high - low < PARALLEL * math.dist(stick.start, stick.end):
        remark = "its axis does not run along its body; the body was taken"
        return stick._replace(remarks=(*stick.remarks, remark))
    slack = max(_AXIS_REACH, 0.1 * (high - low))
    overlap = min(size, high) - max(0.0, low)
    if overlap < _AXIS_OVERLAP * (high - low) or max(abs(low), abs(high - size)) > slack:
        remark = "its axis and its body differ in extent; the body was taken"
        return stick._replace(offset=frames.length(shift), remarks=(*stick.remarks, remark))
    return Stick(
        frames.plus(first, shift),
        frames.plus(last, shift),
        stick.x_axis,
        stick.y_axis,
        stick.profile,
        stick.entity,
        stick.end_profile,
        stick.end_entity,
        stick.start,
        stick.end,
        frames.length(shift),
        stick.remarks,
    )
