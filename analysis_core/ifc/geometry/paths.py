"""Chains of straight lines and circular arcs, in the plane or in space, in metres."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise
from typing import NamedTuple

import numpy as np

from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.unreadable import UnreadableShapeError

Coordinates = tuple[float, ...]
"""Two or three coordinates of a point."""

CHORDS_TO_THE_TURN = 128


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


def scaled(values: Sequence[float], scale: float) -> Coordinates:
    """Return coordinates times a factor."""
    return tuple(value * scale for value in values)


def straight_through(points: Sequence[Coordinates], exact: bool = True) -> Path:
    """Return the path through points by straight lines."""
    return Path(tuple(Segment((a, b)) for a, b in pairwise(points)), exact)


def backwards(path: Path) -> Path:
    """Return the path run the other way."""
    return Path(tuple(Segment(s.points[::-1]) for s in reversed(path.segments)), path.exact)


def _arc_points(points: tuple[Coordinates, ...]) -> list[Coordinates]:
    """Points of a three-point arc in the plane or in space, without its start."""
    start, middle, end = (np.array(p, dtype=float) for p in points)
    a, b = middle - start, end - start
    aa, bb, ab = float(a @ a), float(b @ b), float(a @ b)
    area2 = aa * bb - ab * ab
    if area2 <= 1e-18 * aa * bb:
        return [points[2]]
    to_centre = (bb * (aa - ab) * a + aa * (bb - ab) * b) / (2.0 * area2)
    centre = start + to_centre
    u = -to_centre
    radius = float(np.linalg.norm(u))
    u = u / radius
    # Across u, from whichever point is farther off: the other may lie opposite the start.
    w = max((arm - (arm @ u) * u for arm in (a, b)), key=lambda arm: float(arm @ arm))
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


def in_space(points: Floats) -> Floats:
    """Return points (n, 3) from points in the plane or in space."""
    if points.shape[1] == 3:
        return points
    return np.column_stack([points, np.zeros(len(points))])
