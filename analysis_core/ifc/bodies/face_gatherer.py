"""Faces of boundary representations as lists of corners, each corner once."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

import numpy as np

from analysis_core.ifc.bodies.items import Mesh
from analysis_core.ifc.geometry.curves import read_path
from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.geometry.paths import Measures, in_space, sampled
from analysis_core.ifc.unreadable import UnreadableShapeError


class FaceGatherer:
    """Collects faces of a boundary representation, their points once each."""

    def __init__(self, scale: float, measures: Measures) -> None:
        self._scale = scale
        self._measures = measures
        self._index: dict[int, int] = {}
        self._points: list[tuple[float, ...]] = []
        self._faces: list[tuple[tuple[int, ...], ...]] = []

    def add(self, face: Any) -> None:
        loops = []
        for bound in face[0]:
            ring = bound[0]
            if ring.is_a("IfcPolyLoop"):
                loops.append(tuple(self._vertex(point) for point in ring[0]))
            elif ring.is_a("IfcEdgeLoop"):
                loops.append(tuple(self._edges(ring[0])))
        if loops:
            self._faces.append(tuple(loops))

    def mesh(self, ifc_class: str) -> tuple[Mesh, ...]:
        if len(self._points) < 4:
            raise UnreadableShapeError("a body with fewer than four corners")
        return (Mesh(np.array(self._points), tuple(self._faces), ifc_class),)

    def _vertex(self, point: Any) -> int:
        key = point.id()
        index = self._index.get(key)
        if index is None:
            x, y, z = point[0]
            scale = self._scale
            index = self._index[key] = len(self._points)
            self._points.append((x * scale, y * scale, z * scale))
        return index

    def _edges(self, edges: Any) -> Iterable[int]:
        for oriented in edges:
            edge = oriented.EdgeElement if oriented.is_a("IfcOrientedEdge") else oriented
            forward = bool(oriented.Orientation) if oriented.is_a("IfcOrientedEdge") else True
            start, end = edge[0], edge[1]
            if not forward:
                start, end = end, start
            yield self._vertex(start[0])
            if edge.is_a("IfcEdgeCurve") and edge.EdgeGeometry.is_a() not in _STRAIGHT_CURVES:
                yield from self._along(edge, forward)

    def _along(self, edge: Any, forward: bool) -> Iterable[int]:
        """Points between the ends of a curved edge, in its direction."""
        key = -edge.id()
        if key not in self._index:
            inner = _edge_points(edge, self._measures)
            self._index[key] = len(self._points)
            self._index[-edge.id() - (1 << 40)] = len(inner)
            self._points.extend(tuple(row) for row in inner.tolist())
        first = self._index[key]
        count = self._index[-edge.id() - (1 << 40)]
        order = range(first, first + count)
        return order if forward else reversed(order)


_STRAIGHT_CURVES = {"IfcLine", "IfcPolyline"}


def _edge_points(edge: Any, measures: Measures) -> Floats:
    """Points strictly between the vertices of a curved edge."""
    ends = [
        np.array(vertex[0][0], dtype=np.float64) * measures.length for vertex in (edge[0], edge[1])
    ]
    try:
        points = in_space(sampled(read_path(edge.EdgeGeometry, measures)))
    except UnreadableShapeError:
        return np.zeros((0, 3))
    near = [int(np.linalg.norm(points - end, axis=1).argmin()) for end in ends]
    first, last = near
    if not edge.SameSense:
        points = points[::-1]
        first, last = len(points) - 1 - first, len(points) - 1 - last
    if first <= last:
        return points[first + 1 : last]
    closed = np.allclose(points[0], points[-1])
    return np.vstack([points[first + 1 :], points[:last]]) if closed else np.zeros((0, 3))
