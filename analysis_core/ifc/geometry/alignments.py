"""Curves of alignments (IFC4X3): segments with a placement of their own, and gradients.

Lines and circular arcs are exact in plan; clothoids, parabolas and heights go by chords.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.geometry.paths import Coordinates, Measures, Path, Segment, straight_through
from analysis_core.ifc.unreadable import UnreadableShapeError

_CHORDS = 64


def curve_segment(segment: Any, measures: Measures) -> Path:
    """Return an IfcCurveSegment in plan: its parent curve from its start over its length, moved
    to its placement.

    Raises UnreadableShapeError for other parents than lines, circles, clothoids and parabolas.
    """
    length = float(segment.SegmentLength[0]) * measures.length
    start = float(segment.SegmentStart[0]) * measures.length
    place, tangent = _placement(segment.Placement, measures)
    parent = segment.ParentCurve
    if parent.is_a("IfcLine"):
        end = (place[0] + length * tangent[0], place[1] + length * tangent[1])
        return Path((Segment((place, end)),))
    if parent.is_a("IfcCircle"):
        return _arc(place, tangent, parent.Radius * measures.length, length)
    if parent.is_a("IfcClothoid"):
        return _clothoid(place, tangent, parent.ClothoidConstant * measures.length, start, length)
    if parent.is_a("IfcPolynomialCurve"):
        return _parabola(place, tangent, parent, start, length, measures)
    raise UnreadableShapeError(f"a curve segment along {parent.is_a()} is not supported")


def along_gradient(points: Floats, heights: Floats) -> Path:
    """Return the curve in space over plan points (n, 2) with heights (m, 2: distance, height)."""
    steps = np.linalg.norm(np.diff(points, axis=0), axis=1)
    reached = np.concatenate([[0.0], np.cumsum(steps)])
    stops = np.union1d(reached, np.clip(heights[:, 0], reached[0], reached[-1]))
    x, y = (np.interp(stops, reached, points[:, i]) for i in (0, 1))
    z = np.interp(stops, heights[:, 0], heights[:, 1])
    return straight_through(
        [tuple(row) for row in np.column_stack([x, y, z]).tolist()], exact=False
    )


def _placement(placement: Any, measures: Measures) -> tuple[Coordinates, Coordinates]:
    x, y = (value * measures.length for value in placement.Location.Coordinates[:2])
    ref = placement.RefDirection
    dx, dy = ref.DirectionRatios[:2] if ref is not None else (1.0, 0.0)
    norm = math.hypot(dx, dy)
    if not norm > 0.0:
        raise UnreadableShapeError("a curve segment without direction")
    return (x, y), (dx / norm, dy / norm)


def _arc(place: Coordinates, tangent: Coordinates, radius: float, length: float) -> Path:
    """Arc from ``place`` in direction ``tangent``; a negative length turns right."""
    if not radius > 0.0:
        raise UnreadableShapeError("a circle without radius")
    turn = math.copysign(1.0, length)
    centre = (place[0] - turn * radius * tangent[1], place[1] + turn * radius * tangent[0])
    first = math.atan2(place[1] - centre[1], place[0] - centre[0])
    count = max(1, math.ceil(abs(length) / radius / (0.5 * math.pi)))
    step = length / radius / count
    stops = [
        (centre[0] + radius * math.cos(first + 0.5 * step * i),
         centre[1] + radius * math.sin(first + 0.5 * step * i))
        for i in range(2 * count + 1)
    ]  # fmt: skip
    return Path(tuple(Segment((*stops[i : i + 3],)) for i in range(0, 2 * count, 2)))


def _clothoid(
    place: Coordinates, tangent: Coordinates, constant: float, start: float, length: float
) -> Path:
    """Clothoid with heading s²/(2 A|A|) at the distance s from where its curvature is zero."""
    if constant == 0.0:
        raise UnreadableShapeError("a clothoid with the constant 0")
    s = start + length * np.linspace(0.0, 1.0, 2 * _CHORDS + 1)
    heading = (s**2 - start**2) / (2.0 * constant * abs(constant))
    sense = math.copysign(1.0, length)
    return _headed(place, tangent, sense * heading, abs(length))


def _headed(place: Coordinates, tangent: Coordinates, heading: Floats, length: float) -> Path:
    """Path whose direction at even half steps is ``heading`` from the tangent (Simpson's rule)."""
    angle = heading + math.atan2(tangent[1], tangent[0])
    step = length / ((len(heading) - 1) // 2)
    columns = []
    for start, rate in ((place[0], np.cos(angle)), (place[1], np.sin(angle))):
        parts = step / 6.0 * (rate[:-2:2] + 4.0 * rate[1::2] + rate[2::2])
        columns.append(start + np.concatenate([[0.0], np.cumsum(parts)]))
    points = np.column_stack(columns)
    return straight_through([tuple(row) for row in points.tolist()], exact=False)


def _parabola(
    place: Coordinates,
    tangent: Coordinates,
    parent: Any,
    start: float,
    length: float,
    measures: Measures,
) -> Path:
    """Polynomial y(x) = c0 + c1 x + c2 x² + … as vertical curves are written (x = parameter)."""
    if list(parent.CoefficientsX or ()) not in ([0.0, 1.0], []):
        raise UnreadableShapeError("a polynomial curve whose x is not its parameter")
    scale = measures.length
    powers = [c * scale ** (1 - i) for i, c in enumerate(parent.CoefficientsY or ())]
    t = start + length * np.linspace(0.0, 1.0, _CHORDS + 1)
    y = sum((c * t**i for i, c in enumerate(powers)), np.zeros_like(t))
    slope = math.atan2(y[1] - y[0], t[1] - t[0])
    turn = math.atan2(tangent[1], tangent[0]) - slope
    c, s = math.cos(turn), math.sin(turn)
    u, v = t - t[0], y - y[0]
    points = np.column_stack([place[0] + c * u - s * v, place[1] + s * u + c * v])
    return straight_through([tuple(row) for row in points.tolist()], exact=False)
