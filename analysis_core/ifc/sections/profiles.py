"""Any profile of the standard as an outline: parametric, arbitrary, derived, composite."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import Any

from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.curves import read_path
from analysis_core.ifc.geometry.outline import Matrix
from analysis_core.ifc.geometry.paths import (
    Coordinates,
    Measures,
    Path,
    Segment,
    closed_loop,
    sampled,
)
from analysis_core.ifc.sections.drawn import Drawn
from analysis_core.ifc.sections.profile_outlines import draw_parametric
from analysis_core.ifc.sections.recognise import recognise
from analysis_core.ifc.unreadable import UnreadableShapeError

_DEEPEST_NESTING = 8
MIRRORED: Matrix = ((-1.0, 0.0), (0.0, 1.0))


class ProfileDrawer:
    """Draws profiles; outlines that exporters repeat point by point are recognised once."""

    def __init__(self, measures: Measures) -> None:
        self._measures = measures
        self._recognised: dict[bytes, Drawn] = {}

    def draw(self, profile: Any, depth: int = 0) -> Drawn:
        """Draw a profile in the axes of the swept area that uses it, in metres.

        Raises UnreadableShapeError where the profile has no area of its own (only a name, an
        open curve), is of an unknown class or has impossible dimensions.
        """
        measures = self._measures
        if depth > _DEEPEST_NESTING:
            raise UnreadableShapeError("profiles are nested in a circle")
        if profile.is_a("IfcParameterizedProfileDef"):
            return _placed(draw_parametric(profile, measures), profile.Position, measures)
        if profile.is_a("IfcArbitraryClosedProfileDef"):
            return self._arbitrary(profile)
        if profile.is_a("IfcCenterLineProfileDef"):
            return _thickened(profile, measures)
        if profile.is_a("IfcCompositeProfileDef"):
            return _composite([self.draw(part, depth + 1) for part in profile.Profiles])
        if profile.is_a("IfcMirroredProfileDef"):
            # The standard derives the operator: x becomes -x, whatever the file says.
            return move(self.draw(profile.ParentProfile, depth + 1), MIRRORED)
        if profile.is_a("IfcDerivedProfileDef"):
            matrix, shift = operator_2d(profile.Operator, measures)
            return move(self.draw(profile.ParentProfile, depth + 1), matrix, *shift)
        raise UnreadableShapeError(f"the profile of class {profile.is_a()} encloses no area")

    def _arbitrary(self, profile: Any) -> Drawn:
        outer = read_path(profile.OuterCurve, self._measures)
        exact = outer.exact
        loops = [outline.anticlockwise(closed_loop(outer))]
        if profile.is_a("IfcArbitraryProfileDefWithVoids"):
            for curve in profile.InnerCurves:
                inner = read_path(curve, self._measures)
                exact = exact and inner.exact
                loops.append(outline.clockwise(closed_loop(inner)))
        key = outline.fingerprint(loops)
        known = self._recognised.get(key)
        if known is None:
            known = self._recognised[key] = recognise(tuple(loops), exact=exact)
        return known


def move(drawn: Drawn, matrix: Matrix, x: float = 0.0, y: float = 0.0) -> Drawn:
    """Return the outline after ``matrix @ (x, y) + shift``, its dimensions kept true.

    Rotation, reflection and uniform scale keep the shape; any other matrix leaves a polygon
    that is looked at afresh.
    """
    (a, b), (c, d) = matrix
    loops = outline.transformed(drawn.loops, matrix, x, y)
    scale = math.sqrt(abs(a * d - b * c))
    if scale <= 0.0:
        raise UnreadableShapeError("a transformation flattens the profile to nothing")
    similar = (
        abs(a * c + b * d) <= 1e-6 * scale * scale
        and abs(math.hypot(a, b) - math.hypot(c, d)) <= 1e-6 * scale
    )
    if not similar:
        return recognise(loops, exact=drawn.exact)
    up = (-math.sin(drawn.roll), math.cos(drawn.roll))
    turned = (a * up[0] + b * up[1], c * up[0] + d * up[1])
    dimensions = {name: value * scale for name, value in drawn.dimensions.items()}
    return drawn._replace(
        loops=loops, dimensions=dimensions, roll=math.atan2(-turned[0], turned[1])
    )


def operator_2d(operator: Any, measures: Measures) -> tuple[Matrix, tuple[float, float]]:
    """Return matrix and shift of a plane transformation operator, as the standard derives them."""
    first = operator.Axis1[0] if operator.Axis1 else None
    second = operator.Axis2[0] if operator.Axis2 else None
    if first is not None:
        u = _unit(first)
        v = (-u[1], u[0])
        if second is not None and v[0] * second[0] + v[1] * second[1] < 0.0:
            v = (u[1], -u[0])
    elif second is not None:
        v = _unit(second)
        u = (v[1], -v[0])
    else:
        u, v = (1.0, 0.0), (0.0, 1.0)
    scale = operator.Scale if operator.Scale is not None else 1.0
    scale2 = getattr(operator, "Scale2", None)
    scale2 = scale if scale2 is None else scale2
    origin = operator.LocalOrigin[0]
    matrix = ((u[0] * scale, v[0] * scale2), (u[1] * scale, v[1] * scale2))
    return matrix, (origin[0] * measures.length, origin[1] * measures.length)


def _placed(drawn: Drawn, position: Any, measures: Measures) -> Drawn:
    if position is None:
        return drawn
    x, y = (value * measures.length for value in position[0][0][:2])
    u = _unit(position[1][0]) if position[1] else (1.0, 0.0)
    if u == (1.0, 0.0) and x == 0.0 and y == 0.0:
        return drawn
    return move(drawn, ((u[0], -u[1]), (u[1], u[0])), x, y)


def _unit(vector: Sequence[float]) -> tuple[float, float]:
    norm = math.hypot(vector[0], vector[1])
    if norm <= 0.0:
        raise UnreadableShapeError("a direction of length zero")
    return vector[0] / norm, vector[1] / norm


def _composite(parts: Sequence[Drawn]) -> Drawn:
    if len(parts) == 1:
        return parts[0]
    return Drawn(
        tuple(rows for part in parts for rows in part.loops),
        "composite",
        {"parts": float(len(parts))},
        exact=all(part.exact for part in parts),
    )


def _thickened(profile: Any, measures: Measures) -> Drawn:
    """Draw a centre line of constant thickness; corners are mitred."""
    thickness = (profile.Thickness or 0.0) * measures.length
    if thickness <= 0.0:
        raise UnreadableShapeError("a centre-line profile without thickness")
    path = read_path(profile.Curve, measures)
    half = 0.5 * thickness
    if math.dist(path.start, path.end) < 1e-6 * thickness:
        sides = [_beside(path, half, closed=True), _beside(path, -half, closed=True)]
        outer, inner = sorted(sides, key=lambda rows: -abs(outline.signed_area(rows)))
        loops = (outline.anticlockwise(outer), outline.clockwise(inner))
        drawn = recognise(loops, exact=path.exact)
    else:
        right = _beside(path, -half, closed=False)
        left = outline.backwards_open(_beside(path, half, closed=False))
        rows = outline.anticlockwise(outline.joined(right, left))
        drawn = recognise((rows,), exact=path.exact)
    line = sampled(path)
    length = float(sum(math.dist(a, b) for a, b in pairwise(line)))
    if drawn.shape not in ("polygon", "hollow polygon"):
        return drawn
    shape = "hollow polygon" if len(drawn.loops) > 1 else "thin-walled"
    return drawn._replace(
        shape=shape,
        dimensions={**drawn.dimensions, "thickness": thickness, "developed_length": length},
    )


def _beside(path: Path, distance: float, closed: bool) -> outline.Floats:
    """Rows (x, y, bulge) of the path moved to its left by ``distance``; corners are mitred."""
    moved = [_moved(segment, distance) for segment in path.segments]
    count = len(moved)
    starts = [segment.points[0] for segment in moved]
    ends = [segment.points[-1] for segment in moved]
    for i in range(count if closed else count - 1):
        j = (i + 1) % count
        a, b = moved[i], moved[j]
        if math.dist(ends[i], starts[j]) > 1e-9 * abs(distance) and not (a.curved or b.curved):
            ends[i] = starts[j] = _crossing(a.points, b.points)
    rows = []
    for segment, start, end in zip(moved, starts, ends, strict=True):
        bulge = outline.bulge_of(start, segment.points[1], end) if segment.curved else 0.0
        rows.append((start[0], start[1], bulge))
        rows.append((end[0], end[1], 0.0))
    return outline.loop(rows) if closed else outline.chain(rows)


def _moved(segment: Segment, distance: float) -> Segment:
    if not segment.curved:
        (x, y), (x2, y2) = (p[:2] for p in segment.points)
        norm = math.hypot(x2 - x, y2 - y)
        nx, ny = -(y2 - y) / norm * distance, (x2 - x) / norm * distance
        return Segment(((x + nx, y + ny), (x2 + nx, y2 + ny)))
    start, middle, end = (p[:2] for p in segment.points)
    bulge = outline.bulge_of(start, middle, end)
    if not bulge:
        return _moved(Segment((start, end)), distance)
    cx, cy, radius, _, _ = outline.arc_of(start[0], start[1], end[0], end[1], bulge)
    new = radius - distance if bulge > 0.0 else radius + distance
    if new <= 0.0:
        raise UnreadableShapeError("a centre line bends more sharply than half its thickness")
    share = new / radius
    points: tuple[Coordinates, ...] = tuple(
        (cx + share * (p[0] - cx), cy + share * (p[1] - cy)) for p in (start, middle, end)
    )
    return Segment(points)


def _crossing(first: Sequence[Coordinates], second: Sequence[Coordinates]) -> Coordinates:
    (x1, y1), (x2, y2) = first[0][:2], first[1][:2]
    (x3, y3), (x4, y4) = second[0][:2], second[1][:2]
    cross = (x2 - x1) * (y4 - y3) - (y2 - y1) * (x4 - x3)
    if abs(cross) <= 1e-12 * math.dist(first[0], first[1]) * math.dist(second[0], second[1]):
        return (x2, y2)
    share = ((x3 - x1) * (y4 - y3) - (y3 - y1) * (x4 - x3)) / cross
    return (x1 + share * (x2 - x1), y1 + share * (y2 - y1))
