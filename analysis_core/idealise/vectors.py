"""Plain vector arithmetic on tuples; for a handful of points it is faster than arrays."""

from __future__ import annotations

import math
from collections.abc import Iterable

Vector = tuple[float, float, float]
UP: Vector = (0.0, 0.0, 1.0)


def add(a: Vector, b: Vector) -> Vector:
    """Return a + b."""
    return a[0] + b[0], a[1] + b[1], a[2] + b[2]


def subtract(a: Vector, b: Vector) -> Vector:
    """Return a - b."""
    return a[0] - b[0], a[1] - b[1], a[2] - b[2]


def scale(a: Vector, factor: float) -> Vector:
    """Return a times ``factor``."""
    return a[0] * factor, a[1] * factor, a[2] * factor


def dot(a: Vector, b: Vector) -> float:
    """Return the scalar product."""
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def cross(a: Vector, b: Vector) -> Vector:
    """Return the vector product a x b, right-handed."""
    return (
        a[1] * b[2] - a[2] * b[1],
        a[2] * b[0] - a[0] * b[2],
        a[0] * b[1] - a[1] * b[0],
    )


def length(a: Vector) -> float:
    """Return the Euclidean length."""
    return math.sqrt(a[0] * a[0] + a[1] * a[1] + a[2] * a[2])


def distance(a: Vector, b: Vector) -> float:
    """Return the distance between two points."""
    return length(subtract(b, a))


def unit(a: Vector) -> Vector:
    """Return ``a`` with length one; ValueError where it has none."""
    size = length(a)
    if not size > 0.0:
        raise ValueError(f"a vector without length has no direction: {a}")
    return scale(a, 1.0 / size)


def along(point: Vector, direction: Vector, amount: float) -> Vector:
    """Return the point ``amount`` from ``point`` along ``direction``."""
    return (
        point[0] + amount * direction[0],
        point[1] + amount * direction[1],
        point[2] + amount * direction[2],
    )


def middle(points: Iterable[Vector]) -> Vector:
    """Return the mean of points, computed about the first so that map offsets cost no digits."""
    items = list(points)
    first = items[0]
    shifted = [subtract(p, first) for p in items]
    n = len(items)
    mean = tuple(math.fsum(p[i] for p in shifted) / n for i in range(3))
    return add(first, (mean[0], mean[1], mean[2]))


def horizontal(a: Vector) -> Vector:
    """Return the horizontal part of a vector."""
    return a[0], a[1], 0.0


def off_line(point: Vector, origin: Vector, direction: Vector) -> float:
    """Return the distance of a point from the line through ``origin`` along unit ``direction``."""
    apart = subtract(point, origin)
    return length(subtract(apart, scale(direction, dot(apart, direction))))
