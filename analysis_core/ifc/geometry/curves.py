"""Curves of the standard as chains of straight lines and circular arcs, in metres.

Works in the plane (profiles) and in space (axes, directrices).  Lines and circles are exact;
ellipses, splines and offset curves are replaced by chords, which ``Path.exact`` admits.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from analysis_core.ifc.geometry.alignments import along_gradient, curve_segment
from analysis_core.ifc.geometry.conics import conic, trimmed_conic, trimmed_line
from analysis_core.ifc.geometry.paths import (
    Measures,
    Path,
    Segment,
    backwards,
    sampled,
    scaled,
    straight_through,
)
from analysis_core.ifc.geometry.splines import spline
from analysis_core.ifc.unreadable import UnreadableShapeError


def read_path(curve: Any, measures: Measures) -> Path:
    """Return the path of a curve entity, bounded or closed.

    Raises UnreadableShapeError for a kind of curve that is not supported, and for one without
    extent.
    """
    reader = _READERS.get(curve.is_a())
    if reader is None:
        raise UnreadableShapeError(f"a curve of class {curve.is_a()} is not supported")
    path = reader(curve, measures)
    segments = tuple(s for s in path.segments if _extent(s) > 0.0)
    if not segments:
        raise UnreadableShapeError(f"the {curve.is_a()} #{curve.id()} has no length")
    return Path(segments, path.exact)


def _extent(segment: Segment) -> float:
    return max(math.dist(segment.points[0], other) for other in segment.points[1:])


def _polyline(curve: Any, measures: Measures) -> Path:
    return straight_through(
        [scaled(point.get_argument(0), measures.length) for point in curve.get_argument(0)]
    )


def _indexed(curve: Any, measures: Measures) -> Path:
    points = [scaled(row, measures.length) for row in curve[0][0]]
    if not curve[1]:
        return straight_through(points)
    segments: list[Segment] = []
    for part in curve[1]:
        if max(part[0]) > len(points) or min(part[0]) < 1:
            raise UnreadableShapeError(
                f"the IfcIndexedPolyCurve #{curve.id()} refers to point {max(part[0])}; "
                f"it has {len(points)}"
            )
        chain = [points[i - 1] for i in part[0]]
        if part.is_a() == "IfcArcIndex":
            segments.append(Segment(tuple(chain)))
        else:
            segments.extend(straight_through(chain).segments)
    return Path(tuple(segments))


def _composite(curve: Any, measures: Measures) -> Path:
    segments: list[Segment] = []
    exact = True
    for part in curve[0]:
        if part.is_a("IfcCurveSegment"):  # of an alignment, from IFC4X3 on
            path, forward = curve_segment(part, measures), True
        else:
            path, forward = read_path(part.ParentCurve, measures), bool(part.SameSense)
        exact = exact and path.exact
        run = path.segments if forward else backwards(path).segments
        if segments:
            gap = math.dist(segments[-1].points[-1], run[0].points[0])
            # Some writers state a sense that breaks the chain: follow the chain.
            if gap > 1e-6 and math.dist(segments[-1].points[-1], run[-1].points[-1]) < 0.1 * gap:
                run = backwards(Path(run)).segments
            if gap > 0.0 and run[0].points[0] != segments[-1].points[-1]:
                segments.append(Segment((segments[-1].points[-1], run[0].points[0])))
        segments.extend(run)
    return Path(tuple(segments), exact)


def _trimmed(curve: Any, measures: Measures) -> Path:
    basis = curve[0]
    if basis.is_a("IfcLine"):
        return trimmed_line(curve, measures)
    if basis.is_a("IfcConic"):
        return trimmed_conic(curve, measures)
    return read_path(basis, measures)


def _offset_in_plane(curve: Any, measures: Measures) -> Path:
    points = sampled(read_path(curve.BasisCurve, measures))
    distance = curve.Distance * measures.length
    steps = np.diff(points, axis=0)
    steps /= np.linalg.norm(steps, axis=1)[:, None]
    left = np.column_stack([-steps[:, 1], steps[:, 0]])
    closed = bool(np.allclose(points[0], points[-1]))
    before = np.vstack([left[-1:] if closed else left[:1], left])
    after = np.vstack([left, left[:1] if closed else left[-1:]])
    mitre = before + after
    mitre *= (2.0 / np.maximum((mitre**2).sum(axis=1), 1e-6))[:, None]
    moved = points + distance * mitre
    return straight_through([tuple(row) for row in moved.tolist()], exact=False)


def _gradient(curve: Any, measures: Measures) -> Path:
    """Plan and heights of an alignment put together."""
    plan = sampled(read_path(curve.BaseCurve, measures))[:, :2]
    segments = [s for part in curve.Segments for s in curve_segment(part, measures).segments]
    return along_gradient(plan, sampled(Path(tuple(segments)))[:, :2])


def _base_of_cant(curve: Any, measures: Measures) -> Path:
    """The line of a track without its cant, which turns the section but moves no axis."""
    return read_path(curve.BaseCurve, measures)


def _on_surface(curve: Any, measures: Measures) -> Path:
    return read_path(curve.Curve3D, measures)


_READERS: dict[str, Callable[[Any, Measures], Path]] = {
    "IfcPolyline": _polyline,
    "IfcIndexedPolyCurve": _indexed,
    "IfcCompositeCurve": _composite,
    "Ifc2DCompositeCurve": _composite,
    "IfcCompositeCurveOnSurface": _composite,
    "IfcBoundaryCurve": _composite,
    "IfcOuterBoundaryCurve": _composite,
    "IfcTrimmedCurve": _trimmed,
    "IfcCircle": conic,
    "IfcEllipse": conic,
    "IfcBSplineCurveWithKnots": spline,
    "IfcRationalBSplineCurveWithKnots": spline,
    "IfcBezierCurve": spline,
    "IfcRationalBezierCurve": spline,
    "IfcOffsetCurve2D": _offset_in_plane,
    "IfcGradientCurve": _gradient,
    "IfcSegmentedReferenceCurve": _base_of_cant,
    "IfcSurfaceCurve": _on_surface,
    "IfcIntersectionCurve": _on_surface,
    "IfcSeamCurve": _on_surface,
}
