"""Curves of the standard as chains of straight lines and circular arcs, in metres.

Works in the plane (profiles) and in space (axes, directrices).  Lines and circles are exact;
ellipses, splines and offset curves are replaced by chords, which ``Path.exact`` admits.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise
from typing import Any, NamedTuple

import numpy as np

from analysis_core.ifc import outline
from analysis_core.ifc.outline import Floats
from analysis_core.ifc.unreadable import UnreadableShapeError

Coordinates = tuple[float, ...]
CHORDS_TO_THE_TURN = 128
CHORDS_TO_A_SPLINE_SPAN = 24


class Segment(NamedTuple):
    """A straight line (start, end) or a circular arc (start, a point between, end)."""

    points: tuple[Coordinates, ...]

    @property
    def curved(self) -> bool:
        """Whether it is an arc."""
        return len(self.points) == 3


class Path(NamedTuple):
    """Segments end to end; ``exact`` is False where chords stand for a curve."""

    segments: tuple[Segment, ...]
    exact: bool = True

    @property
    def start(self) -> Coordinates:
        """First point."""
        return self.segments[0].points[0]

    @property
    def end(self) -> Coordinates:
        """Last point."""
        return self.segments[-1].points[-1]


class Measures:
    """Factors from the file's numbers to metres and radians.

    The unit of angles is asked for only when an angle is met: a file without angles need not
    assign one.
    """

    def __init__(self, length: float, angle: float | Callable[[], float] = 1.0) -> None:
        self.length = length
        self._angle = angle

    @property
    def angle(self) -> float:
        """Radians per unit of plane angle."""
        return self._angle() if callable(self._angle) else self._angle


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


def closed_loop(path: Path) -> Floats:
    """Return a plane path as a closed loop (see ``outline``)."""
    rows: list[tuple[float, float, float]] = []
    for segment in path.segments:
        x, y = segment.points[0][:2]
        rows.append((x, y, outline.bulge_of(*segment.points) if segment.curved else 0.0))
    first, last = path.start, path.end
    if math.dist(first, last) > 1e-9 * max(math.dist(first, r[:2]) for r in rows):
        rows.append((last[0], last[1], 0.0))
    result = outline.loop(rows)
    if len(result) < 2 or (len(result) == 2 and not result[:, 2].any()):
        raise UnreadableShapeError("the outline has fewer than three different corners")
    return result


def sampled(path: Path) -> Floats:
    """Return points along a path, (n, 2) or (n, 3), arcs as chords."""
    points: list[Coordinates] = [path.start]
    for segment in path.segments:
        points.extend(_arc_points(segment.points) if segment.curved else segment.points[1:])
    return np.array(points)


def _extent(segment: Segment) -> float:
    return max(math.dist(segment.points[0], other) for other in segment.points[1:])


def _scaled(values: Sequence[float], scale: float) -> Coordinates:
    return tuple(value * scale for value in values)


def _straight_through(points: Sequence[Coordinates], exact: bool = True) -> Path:
    return Path(tuple(Segment((a, b)) for a, b in pairwise(points)), exact)


def _polyline(curve: Any, measures: Measures) -> Path:
    return _straight_through(
        [_scaled(point.get_argument(0), measures.length) for point in curve.get_argument(0)]
    )


def _indexed(curve: Any, measures: Measures) -> Path:
    points = [_scaled(row, measures.length) for row in curve[0][0]]
    if not curve[1]:
        return _straight_through(points)
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
            segments.extend(_straight_through(chain).segments)
    return Path(tuple(segments))


def _composite(curve: Any, measures: Measures) -> Path:
    segments: list[Segment] = []
    exact = True
    for part in curve[0]:
        if not part.is_a("IfcCompositeCurveSegment"):
            raise UnreadableShapeError(f"a curve segment of class {part.is_a()} is not supported")
        path = read_path(part.ParentCurve, measures)
        exact = exact and path.exact
        run = path.segments if part.SameSense else _reversed(path).segments
        if segments:
            gap = math.dist(segments[-1].points[-1], run[0].points[0])
            # Some writers state a sense that breaks the chain: follow the chain.
            if gap > 1e-6 and math.dist(segments[-1].points[-1], run[-1].points[-1]) < 0.1 * gap:
                run = _reversed(Path(run)).segments
            if gap > 0.0 and run[0].points[0] != segments[-1].points[-1]:
                segments.append(Segment((segments[-1].points[-1], run[0].points[0])))
        segments.extend(run)
    return Path(tuple(segments), exact)


def _reversed(path: Path) -> Path:
    return Path(tuple(Segment(s.points[::-1]) for s in reversed(path.segments)), path.exact)


def _trimmed(curve: Any, measures: Measures) -> Path:
    basis, same_sense = curve[0], bool(curve[3])
    by_parameter = curve[4] == "PARAMETER"
    if basis.is_a("IfcLine"):
        ends = tuple(
            _line_point(basis, trim, by_parameter, measures) for trim in (curve[1], curve[2])
        )
        return Path((Segment(ends),))
    if not basis.is_a("IfcConic"):
        return read_path(basis, measures)
    frame = _conic_frame(basis, measures)
    first, last = (
        _conic_angle(frame, trim, by_parameter, measures) for trim in (curve[1], curve[2])
    )
    sweep = (last - first) % (2.0 * math.pi)
    if not same_sense:
        sweep -= 2.0 * math.pi
    if abs(sweep) < 1e-9 or abs(abs(sweep) - 2.0 * math.pi) < 1e-9:
        sweep = math.copysign(2.0 * math.pi, 1.0 if same_sense else -1.0)
    return _conic_path(frame, first, sweep)


def _line_point(line: Any, trims: Any, by_parameter: bool, measures: Measures) -> Coordinates:
    parameter, point = _trim_values(trims, measures)
    if point is not None and not (by_parameter and parameter is not None):
        return point
    start = _scaled(line[0][0], measures.length)
    direction, magnitude = line[1][0][0], line[1][1] * measures.length
    norm = math.hypot(*direction)
    along = (parameter or 0.0) * magnitude / norm
    return tuple(s + along * d for s, d in zip(start, direction, strict=True))


def _trim_values(trims: Any, measures: Measures) -> tuple[float | None, Coordinates | None]:
    parameter: float | None = None
    point: Coordinates | None = None
    for trim in trims:
        if trim.is_a("IfcCartesianPoint"):
            point = _scaled(trim[0], measures.length)
        else:
            parameter = float(trim[0])
    return parameter, point


class _Conic(NamedTuple):
    centre: Coordinates
    x: Coordinates
    y: Coordinates
    a: float
    b: float

    def at(self, angle: float) -> Coordinates:
        p, q = self.a * math.cos(angle), self.b * math.sin(angle)
        return tuple(c + p * x + q * y for c, x, y in zip(self.centre, self.x, self.y, strict=True))


def _conic_frame(conic: Any, measures: Measures) -> _Conic:
    placement = conic[0]
    centre = _scaled(placement[0][0], measures.length)
    a = conic[1] * measures.length
    b = conic[2] * measures.length if conic.is_a("IfcEllipse") else a
    if placement.is_a("IfcAxis2Placement2D"):
        x = _unit(placement[1][0]) if placement[1] else (1.0, 0.0)
        return _Conic(centre, x, (-x[1], x[0]), a, b)
    z = _unit(placement[1][0]) if placement[1] else (0.0, 0.0, 1.0)
    rough = placement[2][0] if placement[2] else (1.0, 0.0, 0.0)
    along = sum(p * q for p, q in zip(rough, z, strict=True))
    x = _unit([p - along * q for p, q in zip(rough, z, strict=True)])
    y = (z[1] * x[2] - z[2] * x[1], z[2] * x[0] - z[0] * x[2], z[0] * x[1] - z[1] * x[0])
    return _Conic(centre, x, y, a, b)


def _unit(vector: Sequence[float]) -> Coordinates:
    norm = math.hypot(*vector)
    if norm <= 0.0:
        raise UnreadableShapeError("a direction of length zero")
    return tuple(value / norm for value in vector)


def _conic_angle(frame: _Conic, trims: Any, by_parameter: bool, measures: Measures) -> float:
    parameter, point = _trim_values(trims, measures)
    if parameter is not None and (by_parameter or point is None):
        return parameter * measures.angle
    if point is None:
        raise UnreadableShapeError("a trimmed curve without trimming values")
    arm = [p - c for p, c in zip(point, frame.centre, strict=True)]
    p = sum(u * v for u, v in zip(arm, frame.x, strict=True)) / frame.a
    q = sum(u * v for u, v in zip(arm, frame.y, strict=True)) / frame.b
    return math.atan2(q, p)


def _conic_path(frame: _Conic, first: float, sweep: float) -> Path:
    round_ = math.isclose(frame.a, frame.b, rel_tol=1e-12)
    turns = abs(sweep) / (2.0 * math.pi)
    count = max(1, math.ceil(turns * (4 if round_ else CHORDS_TO_THE_TURN) - 1e-9))
    stops = [first + sweep * i / count for i in range(count + 1)]
    points = [frame.at(angle) for angle in stops]
    if math.isclose(turns, 1.0, rel_tol=1e-12):
        points[-1] = points[0]
    if not round_:
        return _straight_through(points, exact=False)
    middles = [frame.at(0.5 * (a + b)) for a, b in pairwise(stops)]
    return Path(
        tuple(Segment((a, m, b)) for a, m, b in zip(points[:-1], middles, points[1:], strict=True))
    )


def _conic(curve: Any, measures: Measures) -> Path:
    return _conic_path(_conic_frame(curve, measures), 0.0, 2.0 * math.pi)


def _spline(curve: Any, measures: Measures) -> Path:
    degree = int(curve[0])
    control = np.array([_scaled(point[0], measures.length) for point in curve[1]])
    weights = np.ones(len(control))
    if curve.is_a("IfcRationalBSplineCurveWithKnots") or curve.is_a("IfcRationalBezierCurve"):
        weights = np.array(curve.WeightsData, dtype=float)
    if curve.is_a("IfcBSplineCurveWithKnots"):
        knots = np.repeat(
            np.array(curve.Knots, dtype=float), [int(m) for m in curve.KnotMultiplicities]
        )
    else:
        # A Bézier curve: spans of ``degree`` control points each.
        spans = max(1, (len(control) - 1) // degree)
        knots = np.repeat(np.arange(spans + 1.0), [degree + 1, *[degree] * (spans - 1), degree + 1])
    if len(knots) != len(control) + degree + 1:
        raise UnreadableShapeError(
            f"the spline #{curve.id()} has {len(knots)} knots; its {len(control)} control points "
            f"of degree {degree} need {len(control) + degree + 1}"
        )
    return _straight_through(_spline_points(degree, control, weights, knots), exact=False)


def _spline_points(
    degree: int, control: Floats, weights: Floats, knots: Floats
) -> list[Coordinates]:
    homogeneous = np.column_stack([control * weights[:, None], weights])
    points: list[Coordinates] = []
    for span in range(degree, len(control)):
        low, high = knots[span], knots[span + 1]
        if high <= low:
            continue
        for i in range(CHORDS_TO_A_SPLINE_SPAN + 1):
            if i == 0 and points:
                continue
            value = low + (high - low) * i / CHORDS_TO_A_SPLINE_SPAN
            point = _de_boor(degree, homogeneous, knots, span, float(value))
            points.append(tuple((point[:-1] / point[-1]).tolist()))
    return points


def _de_boor(degree: int, control: Floats, knots: Floats, span: int, value: float) -> Floats:
    rows = control[span - degree : span + 1].copy()
    for level in range(1, degree + 1):
        for j in range(degree, level - 1, -1):
            i = span - degree + j
            share = (value - knots[i]) / (knots[i + degree + 1 - level] - knots[i])
            rows[j] = (1.0 - share) * rows[j - 1] + share * rows[j]
    return np.asarray(rows[degree])


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
    return _straight_through([tuple(row) for row in moved.tolist()], exact=False)


def _on_surface(curve: Any, measures: Measures) -> Path:
    return read_path(curve.Curve3D, measures)


def _arc_points(points: tuple[Coordinates, ...]) -> list[Coordinates]:
    """Points of a three-point arc in the plane or in space, without its start."""
    start, middle, end = (np.array(p, dtype=float) for p in points)
    a, b = middle - start, end - start
    aa, bb, ab = float(a @ a), float(b @ b), float(a @ b)
    area2 = aa * bb - ab * ab
    if area2 <= 1e-18 * aa * bb:
        return [points[2]]
    arm = (bb * (aa - ab) * a + aa * (bb - ab) * b) / (2.0 * area2)
    centre = start + arm
    u = -arm
    radius = float(np.linalg.norm(u))
    u = u / radius
    w = a - (a @ u) * u
    v = w / np.linalg.norm(w)
    middle_angle, end_angle = (
        math.atan2(float((p - centre) @ v), float((p - centre) @ u)) % (2.0 * math.pi)
        for p in (middle, end)
    )
    sweep = end_angle if middle_angle <= end_angle else end_angle - 2.0 * math.pi
    count = max(2, math.ceil(abs(sweep) / (2.0 * math.pi) * CHORDS_TO_THE_TURN))
    stops = [sweep * i / count for i in range(1, count)]
    inner = [centre + radius * (math.cos(t) * u + math.sin(t) * v) for t in stops]
    return [*(tuple(p.tolist()) for p in inner), points[2]]


_READERS: dict[str, Callable[[Any, Measures], Path]] = {
    "IfcPolyline": _polyline,
    "IfcIndexedPolyCurve": _indexed,
    "IfcCompositeCurve": _composite,
    "Ifc2DCompositeCurve": _composite,
    "IfcCompositeCurveOnSurface": _composite,
    "IfcBoundaryCurve": _composite,
    "IfcOuterBoundaryCurve": _composite,
    "IfcTrimmedCurve": _trimmed,
    "IfcCircle": _conic,
    "IfcEllipse": _conic,
    "IfcBSplineCurveWithKnots": _spline,
    "IfcRationalBSplineCurveWithKnots": _spline,
    "IfcBezierCurve": _spline,
    "IfcRationalBezierCurve": _spline,
    "IfcOffsetCurve2D": _offset_in_plane,
    "IfcSurfaceCurve": _on_surface,
    "IfcIntersectionCurve": _on_surface,
    "IfcSeamCurve": _on_surface,
}
