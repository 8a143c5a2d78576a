"""Where things are: object placements, local, on a grid or along an alignment, in metres.

Parents are placed once and kept: a building's elements share a handful of them.  Placements
with offsets of 1,000 km lose nothing that matters: a double holds that to a tenth of a
nanometre, and shapes are worked out in their own coordinates before they are placed.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.curves import read_path
from analysis_core.ifc.geometry.frames import WORLD, Frame, Vector
from analysis_core.ifc.geometry.paths import Measures, sampled
from analysis_core.ifc.unreadable import UnreadableShapeError

_DEEPEST_NESTING = 200
Rotation = tuple[float, float, float, float, float, float, float, float, float]


class Placements:
    """Frames of placements, each read once."""

    def __init__(self, file: Any, measures: Measures) -> None:
        self._file = file
        self._length = measures.length
        self._measures = measures
        self._known: dict[int, Frame] = {}
        self._directions: dict[int, Vector] = {}
        self._rotations: dict[tuple[Vector, Vector], Rotation] = {}
        self._shared: dict[int, Frame] = {}
        self._grid_of_axis: dict[int, Any] | None = None

    def frame(self, placement: Any) -> Frame:
        """Return the world frame of an object placement; None means the world itself.

        Raises UnreadableShapeError where it cannot be resolved.
        """
        if placement is None:
            return WORLD
        if placement.is_a() == "IfcLocalPlacement":  # nearly always, and the parent known
            parent = placement.get_argument(0)
            known = WORLD if parent is None else self._known.get(parent.id())
            if known is not None:
                return frames.compose(known, self.axes(placement.get_argument(1)))
        return self._chained(placement)

    def _chained(self, placement: Any) -> Frame:
        """Place a placement and, before it, every parent that is not yet known."""
        chain = []
        here = placement
        while here is not None and here.id() not in self._known:
            chain.append(here)
            if len(chain) > _DEEPEST_NESTING:
                raise UnreadableShapeError("its placements are nested in a circle")
            here = _parent(here)
        frame = self._known[here.id()] if here is not None else WORLD
        for link in reversed(chain):
            frame = self._placed(link, frame)
            self._known[link.id()] = frame
        return frame

    def shared_axes(self, placement: Any) -> Frame:
        """Return ``axes`` of a placement that many solids are likely to share, worked out once."""
        key = placement.id()
        known = self._shared.get(key)
        if known is None:
            known = self._shared[key] = self.axes(placement)
        return known

    def axes(self, placement: Any) -> Frame:
        """Return the frame of an IfcAxis2Placement3D (or 2D) in its own surroundings."""
        scale = self._length
        kind = placement.is_a()
        if kind == "IfcAxis2PlacementLinear":
            return self._along_curve(placement)
        location = placement.get_argument(0).get_argument(0)
        x, y = location[0] * scale, location[1] * scale
        if kind == "IfcAxis2Placement2D":
            ref = placement[1][0] if placement[1] else (1.0, 0.0)
            return frames.axes_frame((x, y, 0.0), None, (ref[0], ref[1], 0.0))
        z = location[2] * scale if len(location) > 2 else 0.0
        axis, ref = placement.get_argument(1), placement.get_argument(2)
        if axis is None and ref is None:
            return (1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 1.0, x, y, z)
        if axis is not None and ref is not None:
            return (*self._rotation(axis, ref), x, y, z)
        return frames.axes_frame(
            (x, y, z),
            self.direction(axis) if axis is not None else None,
            self.direction(ref) if ref is not None else None,
        )

    def _rotation(self, axis: Any, ref: Any) -> Rotation:
        """Directions of a frame from two IfcDirections, which buildings share or repeat."""
        z, x = self.direction(axis), self.direction(ref)
        known = self._rotations.get((z, x))
        if known is None:
            known = self._rotations[(z, x)] = frames.axes_frame((0.0, 0.0, 0.0), z, x)[:9]
        return known

    def direction(self, entity: Any) -> Vector:
        """Return the components of an IfcDirection, not normalised."""
        key = entity.id()
        known = self._directions.get(key)
        if known is None:
            ratios = entity.get_argument(0)
            known = (ratios[0], ratios[1], ratios[2] if len(ratios) > 2 else 0.0)
            self._directions[key] = known
        return known

    def _placed(self, placement: Any, parent: Frame) -> Frame:
        if placement.is_a("IfcLocalPlacement"):
            return frames.compose(parent, self.axes(placement[1]))
        if placement.is_a("IfcGridPlacement"):
            return self._on_grid(placement, parent)
        if placement.is_a("IfcLinearPlacement"):
            stated = placement.CartesianPosition
            local = self.axes(stated) if stated else self._along_curve(placement.RelativePlacement)
            return frames.compose(parent, local)
        raise UnreadableShapeError(f"its placement is of class {placement.is_a()}")

    def _on_grid(self, placement: Any, parent: Frame) -> Frame:
        here, tangent, frame = self._intersection(placement.PlacementLocation)
        towards = placement.PlacementRefDirection
        x = tangent
        if towards is not None and towards.is_a("IfcDirection"):
            x = self.direction(towards)
        elif towards is not None:
            there, _, _ = self._intersection(towards)
            x = frames.minus(there, here)
        local = frames.axes_frame(here, (0.0, 0.0, 1.0), x)
        return frames.compose(parent if frame is None else frame, local)

    def _intersection(self, virtual: Any) -> tuple[Vector, Vector, Frame | None]:
        """Return point, direction of the first axis and the frame of the grid."""
        first, second = virtual.IntersectingAxes
        offsets = [value * self._length for value in virtual.OffsetDistances]
        a, u = self._grid_line(first, offsets[0])
        b, v = self._grid_line(second, offsets[1])
        turn = u[0] * v[1] - u[1] * v[0]
        if abs(turn) < 1e-9:
            raise UnreadableShapeError("the grid axes of its placement are parallel")
        along = ((b[0] - a[0]) * v[1] - (b[1] - a[1]) * v[0]) / turn
        height = offsets[2] if len(offsets) > 2 else 0.0
        grid = self._grids().get(first.id())
        frame = self.frame(grid[5]) if grid is not None else None
        here = (a[0] + along * u[0], a[1] + along * u[1], height)
        return here, (u[0], u[1], 0.0), frame

    def _grid_line(
        self, axis: Any, offset: float
    ) -> tuple[tuple[float, float], tuple[float, float]]:
        curve = axis.AxisCurve
        if curve.is_a("IfcLine"):
            x, y = (value * self._length for value in curve[0][0][:2])
            dx, dy = curve[1][0][0][:2]
        else:
            points = sampled(read_path(curve, self._measures))
            x, y = points[0][:2].tolist()
            dx, dy = (points[-1] - points[0])[:2].tolist()
        norm = float(np.hypot(dx, dy))
        if norm <= 0.0:
            raise UnreadableShapeError("a grid axis without direction")
        dx, dy = dx / norm, dy / norm
        if not axis.SameSense:
            dx, dy = -dx, -dy
        # A positive offset lies to the left of the axis.
        return (x - dy * offset, y + dx * offset), (dx, dy)

    def _grids(self) -> dict[int, Any]:
        if self._grid_of_axis is None:
            self._grid_of_axis = {
                axis.id(): grid
                for grid in self._file.by_type("IfcGrid")
                for axes in (grid.UAxes, grid.VAxes, grid.WAxes)
                for axis in axes or ()
            }
        return self._grid_of_axis

    def _along_curve(self, placement: Any) -> Frame:
        location = placement.Location
        if not location.is_a("IfcPointByDistanceExpression"):
            raise UnreadableShapeError(f"a placement by {location.is_a()} is not supported")
        points = sampled(read_path(location.BasisCurve, self._measures))
        if points.shape[1] == 2:
            points = np.column_stack([points, np.zeros(len(points))])
        steps = np.diff(points, axis=0)
        if location.BasisCurve.is_a() in ("IfcGradientCurve", "IfcSegmentedReferenceCurve"):
            steps = steps[:, :2]  # distances along an alignment are those in plan
        steps = np.linalg.norm(steps, axis=1)
        along = float(location.DistanceAlong[0]) * self._length
        reached = np.concatenate([[0.0], np.cumsum(steps)])
        i = int(np.clip(np.searchsorted(reached, along, side="right") - 1, 0, len(steps) - 1))
        tangent = points[i + 1] - points[i]
        here = points[i] + (along - reached[i]) / steps[i] * tangent
        x = frames.unit(tangent.tolist())
        # The frame of the curve: x along, y to the left in plan, z up.
        left = frames.unit(frames.cross((0.0, 0.0, 1.0), x))
        up = frames.cross(x, left)
        offsets = [
            (value or 0.0) * self._length
            for value in (
                location.OffsetLongitudinal,
                location.OffsetLateral,
                location.OffsetVertical,
            )
        ]
        origin: Vector = tuple(here.tolist())
        for offset, axis in zip(offsets, (x, left, up), strict=True):
            origin = frames.plus(origin, axis, offset)
        axis = self.direction(placement.Axis) if placement.Axis else up
        ref = self.direction(placement.RefDirection) if placement.RefDirection else x
        return frames.axes_frame(origin, axis, ref)


def _parent(placement: Any) -> Any:
    if placement.is_a("IfcLocalPlacement"):
        return placement[0]
    return getattr(placement, "PlacementRelTo", None)
