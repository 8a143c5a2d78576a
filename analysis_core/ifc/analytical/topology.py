"""Where the members, connections and actions of an analysis model are, in world coordinates.

The edge or vertex is found by the class of the item, wherever in the representations it stands:
files name their representations as they like.  Placements may be absent, nested, or hidden in a
mapped item.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

from analysis_core.ifc.analytical.notes import is_kind
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.curves import read_path
from analysis_core.ifc.geometry.frames import WORLD, Frame, Vector
from analysis_core.ifc.geometry.paths import Measures, sampled
from analysis_core.ifc.geometry.placements import Placements
from analysis_core.ifc.unreadable import UnreadableShapeError

Chain = tuple[Vector, ...]

_DEEPEST_NESTING = 20
# A chain of points is one straight line if none lies further from it than this (fraction of its
# length; and at most 1 mm).
_STRAIGHT = 1e-4
_LEAST_SAG = 1e-3
_PLAIN = ("IfcEdge", "IfcVertexPoint")


class CurvedError(UnreadableShapeError):
    """The reference curve is not one straight line."""


class Topology:
    """Reads edges and vertices of products, in metres."""

    def __init__(self, file: Any, measures: Measures) -> None:
        self.placements = Placements(file, measures)
        self._measures = measures
        self._frames: dict[int, Frame] = {}
        self._points: dict[int, Vector] = {}

    def frame(self, product: Any, shared: Any = None) -> Frame:
        """Return the "global" system of an item: its placement, else that of its model."""
        placement = product.get_argument(5)
        if placement is None:
            placement = shared
        if placement is None:
            return WORLD
        key = placement.id()
        frame = self._frames.get(key)
        if frame is None:  # all items of a model share theirs
            frame = self._frames[key] = self.placements.frame(placement)
        return frame

    def straight(self, product: Any, frame: Frame) -> tuple[Vector, Vector] | None:
        """Return start and end of a product's reference curve, None where it has no curve.

        Raises CurvedError where it is no straight line, UnreadableShapeError where it is not
        understood.
        """
        for chain, curved in self._chains(product, frame):
            if curved or not _is_straight(chain):
                raise CurvedError("its reference curve is not straight")
            return chain[0], chain[-1]
        return None

    def point(self, product: Any, frame: Frame) -> Vector | None:
        """Return the reference point of a product, None where it has none."""
        for item, place in _placed_items(product, frame, self):
            local = self._vertex(item)
            if local is not None:
                return frames.point(place, *local)
        return None

    def face(self, product: Any, frame: Frame) -> list[tuple[Chain, bool]]:
        """Return the loops of a product's face in the world, and whether each is the outer one.

        Empty where it has no face that is bounded by loops of straight edges.
        """
        for item, place in _placed_items(product, frame, self):
            if is_kind(item, "IfcFace"):
                return [self._bound(bound, place) for bound in item[0] or ()]
        return []

    def _bound(self, bound: Any, place: Frame) -> tuple[Chain, bool]:
        loop, outer = bound[0], is_kind(bound, "IfcFaceOuterBound")
        if is_kind(loop, "IfcPolyLoop"):
            points = [self._cartesian(point) for point in loop[0]]
            return tuple(frames.point(place, *p) for p in points), outer
        chain, curved = self._joined(loop, place)
        if curved:
            raise UnreadableShapeError("an edge of its face is curved")
        return chain[:-1] if len(chain) > 1 and chain[0] == chain[-1] else chain, outer

    def has_shape(self, product: Any) -> bool:
        """Whether the product has a representation of its own."""
        shape = product.get_argument(6)
        return shape is not None and bool(shape[2])

    def vertex(self, item: Any) -> Vector | None:
        """Return the coordinates (m) of a vertex or point in its own system, else None."""
        return self._vertex(item)

    def curve_point(self, item: Any) -> Vector | None:
        """Return the coordinates (m) of a point on a curve, given by its parameter."""
        curve, parameter = item[0], float(item[1])
        if is_kind(curve, "IfcLine"):
            origin = self._cartesian(curve[0])
            along = self.placements.direction(curve[1][0])
            size = float(curve[1][1]) * self._measures.length
            return frames.plus(origin, frames.unit(along), parameter * size)
        if is_kind(curve, "IfcPolyline"):
            points = [self._cartesian(p) for p in curve[0]]
            index = min(max(int(parameter), 0), len(points) - 2)
            step = frames.minus(points[index + 1], points[index])
            return frames.plus(points[index], step, parameter - index)
        return None

    def _chains(self, product: Any, frame: Frame) -> Iterator[tuple[Chain, bool]]:
        """Yield the points of each curve-like item in the world, and whether it is curved."""
        curves: list[tuple[Any, Frame]] = []
        for item, place in _placed_items(product, frame, self):
            if is_kind(item, "IfcEdge"):
                points, curved = self._edge(item)
                yield tuple(frames.point(place, *p) for p in points), curved
            elif is_kind(item, "IfcEdgeLoop") or is_kind(item, "IfcPath"):
                yield self._joined(item, place)
            elif is_kind(item, "IfcCurve"):
                curves.append((item, place))
        for item, place in curves:
            points, curved = self._curve(item)
            yield tuple(frames.point(place, *p) for p in points), curved

    def _joined(self, loop: Any, place: Frame) -> tuple[Chain, bool]:
        chain: list[Vector] = []
        bent = False
        for edge in loop[0]:
            points, curved = self._edge(edge)
            bent = bent or curved
            chain += points if not chain else points[1:]
        return tuple(frames.point(place, *p) for p in chain), bent

    def _edge(self, edge: Any, depth: int = 0) -> tuple[list[Vector], bool]:
        if depth > _DEEPEST_NESTING:
            raise UnreadableShapeError("its edges refer to each other in a circle")
        if is_kind(edge, "IfcOrientedEdge"):
            points, curved = self._edge(edge[2], depth + 1)
            return (points if edge[3] else points[::-1]), curved
        start, end = self._vertex(edge[0]), self._vertex(edge[1])
        curved = False
        if is_kind(edge, "IfcEdgeCurve"):
            along, curved = self._curve(edge[2])
            if not edge[3]:
                along = along[::-1]
            if start is None or end is None:
                return along, curved
        if start is None or end is None:
            raise UnreadableShapeError("its edge has a vertex without a point")
        return [start, end], curved

    def _curve(self, curve: Any) -> tuple[list[Vector], bool]:
        if is_kind(curve, "IfcLine"):
            origin = self._cartesian(curve[0])
            along = frames.unit(self.placements.direction(curve[1][0]))
            size = float(curve[1][1]) * self._measures.length
            return [origin, frames.plus(origin, along, size)], False
        path = read_path(curve, self._measures)
        points = [_three(row) for row in sampled(path).tolist()]
        return points, not _is_straight(points)

    def _vertex(self, item: Any) -> Vector | None:
        if item is None:
            return None
        kind = item.is_a()
        if kind == "IfcVertexPoint":
            item = item[0]
            kind = item.is_a()
        if kind == "IfcCartesianPoint":
            return self._cartesian(item)
        return self.curve_point(item) if kind == "IfcPointOnCurve" else None

    def _cartesian(self, point: Any) -> Vector:
        key = point.id()
        known = self._points.get(key)
        if known is None:
            x, y, z = _three(point[0])
            scale = self._measures.length
            known = self._points[key] = x * scale, y * scale, z * scale
        return known

    def mapping(self, item: Any) -> Frame:
        """Return the frame into which a mapped item puts its representation."""
        origin, target = item[0][0], item[1]
        placed = _operator_frame(target, self.placements, self._measures.length)
        return frames.compose(placed, frames.inverse(self.placements.axes(origin)))


def _placed_items(product: Any, frame: Frame, topology: Topology) -> Iterator[tuple[Any, Frame]]:
    """Yield the items of a product with the frame in which each stands."""
    shape = product.get_argument(6)
    if shape is None:
        return
    for representation in shape[2] or ():
        items: Sequence[Any] = representation[3] or ()
        if len(items) == 1 and items[0].is_a() in _PLAIN:
            yield items[0], frame
        else:
            yield from _unpacked(items, frame, topology, 0)


def _unpacked(
    items: Sequence[Any], frame: Frame, topology: Topology, depth: int
) -> Iterator[tuple[Any, Frame]]:
    if depth > _DEEPEST_NESTING:
        raise UnreadableShapeError("its mapped items are nested in a circle")
    for item in items:
        if is_kind(item, "IfcMappedItem"):
            inner = frames.compose(frame, topology.mapping(item))
            yield from _unpacked(item[0][1][3] or (), inner, topology, depth + 1)
        elif is_kind(item, "IfcGeometricSet"):
            yield from _unpacked(item[0] or (), frame, topology, depth + 1)
        else:
            yield item, frame


def _operator_frame(operator: Any, placements: Placements, length: float) -> Frame:
    """Return the frame of an IfcCartesianTransformationOperator (IfcBaseAxis in the standard)."""
    scale = float(operator[3]) if operator[3] is not None else 1.0
    has_z = len(operator) > 4 and is_kind(operator, "IfcCartesianTransformationOperator3D")
    z = placements.direction(operator[4]) if has_z and operator[4] is not None else None
    x = placements.direction(operator[0]) if operator[0] is not None else None
    ox, oy, oz = _three(operator[2][0])
    turned = frames.axes_frame((ox * length, oy * length, oz * length), z, x)
    axes = [value * scale for value in turned[:9]]
    stated_y = placements.direction(operator[1]) if operator[1] is not None else None
    if stated_y is not None and frames.dot(stated_y, turned[3:6]) < 0.0:
        axes[3:6] = [-value for value in axes[3:6]]
    a, b, c, d, e, f, g, h, i = axes
    return (a, b, c, d, e, f, g, h, i, *turned[9:])


def _three(values: Sequence[float]) -> Vector:
    x, y = float(values[0]), float(values[1])
    return x, y, float(values[2]) if len(values) > 2 else 0.0


def _is_straight(points: Sequence[Vector]) -> bool:
    if len(points) < 3:
        return True
    across = frames.minus(points[-1], points[0])
    size = frames.length(across)
    if size <= 0.0:
        return False
    limit = min(_STRAIGHT * size, _LEAST_SAG)
    along = frames.unit(across)
    return all(
        frames.length(frames.cross(frames.minus(p, points[0]), along)) <= limit
        for p in points[1:-1]
    )
