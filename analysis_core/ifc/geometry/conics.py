"""Circles and ellipses, whole or trimmed, and trimmed lines."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import Any, NamedTuple

from analysis_core.ifc.geometry.paths import (
    CHORDS_TO_THE_TURN,
    Coordinates,
    Measures,
    Path,
    Segment,
    scaled,
    straight_through,
)
from analysis_core.ifc.unreadable import UnreadableShapeError


def trimmed_line(curve: Any, measures: Measures) -> Path:
    """Return the part of a line that an IfcTrimmedCurve keeps."""
    by_parameter = curve[4] == "PARAMETER"
    ends = tuple(
        _line_point(curve[0], trim, by_parameter, measures) for trim in (curve[1], curve[2])
    )
    return Path((Segment(ends),))


def trimmed_conic(curve: Any, measures: Measures) -> Path:
    """Return the part of a circle or ellipse that an IfcTrimmedCurve keeps."""
    same_sense, by_parameter = bool(curve[3]), curve[4] == "PARAMETER"
    frame = _conic_frame(curve[0], measures)
    first, last = (
        _conic_angle(frame, trim, by_parameter, measures) for trim in (curve[1], curve[2])
    )
    sweep = (last - first) % (2.0 * math.pi)
    if not same_sense:
        sweep -= 2.0 * math.pi
    if abs(sweep) < 1e-9 or abs(abs(sweep) - 2.0 * math.pi) < 1e-9:
        sweep = math.copysign(2.0 * math.pi, 1.0 if same_sense else -1.0)
    return _conic_path(frame, first, sweep)


def conic(curve: Any, measures: Measures) -> Path:
    """Return a whole circle or ellipse, anticlockwise in its own axes."""
    return _conic_path(_conic_frame(curve, measures), 0.0, 2.0 * math.pi)


def _line_point(line: Any, trims: Any, by_parameter: bool, measures: Measures) -> Coordinates:
    parameter, point = _trim_values(trims, measures)
    if point is not None and not (by_parameter and parameter is not None):
        return point
    start = scaled(line[0][0], measures.length)
    direction, magnitude = line[1][0][0], line[1][1] * measures.length
    norm = math.hypot(*direction)
    along = (parameter or 0.0) * magnitude / norm
    return tuple(s + along * d for s, d in zip(start, direction, strict=True))


def _trim_values(trims: Any, measures: Measures) -> tuple[float | None, Coordinates | None]:
    parameter: float | None = None
    point: Coordinates | None = None
    for trim in trims:
        if trim.is_a("IfcCartesianPoint"):
            point = scaled(trim[0], measures.length)
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
    centre = scaled(placement[0][0], measures.length)
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
        return straight_through(points, exact=False)
    middles = [frame.at(0.5 * (a + b)) for a, b in pairwise(stops)]
    return Path(
        tuple(Segment((a, m, b)) for a, m, b in zip(points[:-1], middles, points[1:], strict=True))
    )
