"""Plan geometry: a straight axis against convex outlines and other axes."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

Spot = tuple[float, float]


@dataclass(frozen=True, slots=True)
class Ray:
    """A straight line in plan: from ``origin`` along the unit vector ``direction``."""

    origin: Spot
    direction: Spot

    def local(self, spot: Spot) -> Spot:
        """Return (along, to the left) of a plan point."""
        x, y = spot[0] - self.origin[0], spot[1] - self.origin[1]
        dx, dy = self.direction
        return x * dx + y * dy, y * dx - x * dy

    def at(self, along: float) -> Spot:
        """Return the plan point ``along`` m from the origin."""
        return (
            self.origin[0] + along * self.direction[0],
            self.origin[1] + along * self.direction[1],
        )


def crossing(local: Sequence[Spot]) -> tuple[float, float] | None:
    """Return where a line enters and leaves a convex outline, None where it misses it.

    ``local`` are the corners as ``Ray.local`` gives them.
    """
    hits = []
    for (a, side_a), (b, side_b) in zip(local, [*local[1:], local[0]], strict=True):
        if side_a == 0.0:
            hits.append(a)
        if side_a * side_b < 0.0:
            hits.append(a + (b - a) * side_a / (side_a - side_b))
    return (min(hits), max(hits)) if hits else None


def extent(local: Sequence[Spot]) -> tuple[float, float, float, float]:
    """Return the lowest and highest place along a line, then sideways, of an outline.

    ``local`` are its corners as ``Ray.local`` gives them.
    """
    along = [a for a, _ in local]
    side = [s for _, s in local]
    return min(along), max(along), min(side), max(side)


def gap_to(corners: Sequence[Spot], spot: Spot) -> float:
    """Return the distance from a point to a convex outline, 0 inside."""
    if inside(corners, spot):
        return 0.0
    ends = zip(corners, [*corners[1:], corners[0]], strict=True)
    return min(_to_segment(spot, a, b) for a, b in ends)


def inside(corners: Sequence[Spot], spot: Spot) -> bool:
    """Return whether a point lies in a convex outline, in either sense of rotation."""
    signs = set()
    for a, b in zip(corners, [*corners[1:], corners[0]], strict=True):
        turn = (b[0] - a[0]) * (spot[1] - a[1]) - (b[1] - a[1]) * (spot[0] - a[0])
        if abs(turn) > 1e-12:
            signs.add(turn > 0.0)
    return len(signs) == 1


def centre(corners: Sequence[Spot]) -> Spot:
    """Return the centroid of a simple outline (of its corners, where it encloses nothing)."""
    ox, oy = corners[0]
    area = cx = cy = 0.0
    shifted = [(x - ox, y - oy) for x, y in corners]
    for (ax, ay), (bx, by) in zip(shifted, shifted[1:] + shifted[:1], strict=True):
        part = ax * by - bx * ay
        area += part
        cx += (ax + bx) * part
        cy += (ay + by) * part
    if abs(area) < 1e-12:
        return (
            ox + math.fsum(x for x, _ in shifted) / len(shifted),
            oy + math.fsum(y for _, y in shifted) / len(shifted),
        )
    return ox + cx / (3.0 * area), oy + cy / (3.0 * area)


def area(corners: Sequence[Spot]) -> float:
    """Return the area of a simple outline, m²."""
    ox, oy = corners[0]
    ends = zip(corners, [*corners[1:], corners[0]], strict=True)
    parts = ((a[0] - ox) * (b[1] - oy) - (b[0] - ox) * (a[1] - oy) for a, b in ends)
    return abs(math.fsum(parts)) / 2.0


def meeting(first: Ray, second: Ray) -> tuple[float, float] | None:
    """Return where two lines cross, as the distance along each; None where they are parallel."""
    (ax, ay), (bx, by) = first.direction, second.direction
    turn = ax * by - ay * bx
    if abs(turn) < 1e-9:
        return None
    x, y = second.origin[0] - first.origin[0], second.origin[1] - first.origin[1]
    return (x * by - y * bx) / turn, (x * ay - y * ax) / turn


def _to_segment(spot: Spot, a: Spot, b: Spot) -> float:
    dx, dy = b[0] - a[0], b[1] - a[1]
    size = dx * dx + dy * dy
    share = 0.0
    if size > 0.0:
        share = min(1.0, max(0.0, ((spot[0] - a[0]) * dx + (spot[1] - a[1]) * dy) / size))
    return math.hypot(spot[0] - a[0] - share * dx, spot[1] - a[1] - share * dy)
