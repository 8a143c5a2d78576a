"""Affine frames in plain floats: thousands of small products, where arrays would be slow.

A frame is ``(x, y, z, origin)`` strung into twelve numbers: the images of the three axes and of
the origin.  The axes need not be unit vectors: a mapping may stretch or mirror.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

import numpy as np

from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.unreadable import UnreadableShapeError

Vector = tuple[float, float, float]
Frame = tuple[float, float, float, float, float, float, float, float, float, float, float, float]

WORLD: Frame = (1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0)


def compose(outer: Frame, inner: Frame) -> Frame:
    """Return the frame that first applies ``inner``, then ``outer``."""
    a, b, c, d, e, f, g, h, i, ox, oy, oz = outer
    p, q, r, s, t, u, v, w, x, px, py, pz = inner
    return (
        a * p + d * q + g * r, b * p + e * q + h * r, c * p + f * q + i * r,
        a * s + d * t + g * u, b * s + e * t + h * u, c * s + f * t + i * u,
        a * v + d * w + g * x, b * v + e * w + h * x, c * v + f * w + i * x,
        a * px + d * py + g * pz + ox, b * px + e * py + h * pz + oy,
        c * px + f * py + i * pz + oz,
    )  # fmt: skip


def point(frame: Frame, x: float, y: float, z: float) -> Vector:
    """Return the image of a point."""
    a, b, c, d, e, f, g, h, i, ox, oy, oz = frame
    return a * x + d * y + g * z + ox, b * x + e * y + h * z + oy, c * x + f * y + i * z + oz


def direction(frame: Frame, x: float, y: float, z: float) -> Vector:
    """Return the image of a vector."""
    a, b, c, d, e, f, g, h, i, _, _, _ = frame
    return a * x + d * y + g * z, b * x + e * y + h * z, c * x + f * y + i * z


def images(frame: Frame, points: Floats) -> Floats:
    """Return the images of points (n, 3)."""
    axes = np.array(frame).reshape(4, 3)
    return np.asarray(points @ axes[:3] + axes[3])


def inverse(frame: Frame) -> Frame:
    """Return the frame that undoes ``frame``; raises UnreadableShapeError where it is flat."""
    axes = np.array(frame).reshape(4, 3)
    if abs(float(np.linalg.det(axes[:3]))) < 1e-18:
        raise UnreadableShapeError("a transformation flattens the body to nothing")
    back = np.linalg.inv(axes[:3])
    return tuple(np.concatenate([back.ravel(), -axes[3] @ back]).tolist())


def axes_frame(
    origin: Vector, z: Sequence[float] | None = None, x: Sequence[float] | None = None
) -> Frame:
    """Return the right-angled frame with the given z axis and x as near as can be to ``x``.

    IfcAxis2Placement3D: z defaults to (0, 0, 1), x to (1, 0, 0); where the stated x is parallel
    to z, another right-angled direction is taken.
    """
    ox, oy, oz = origin
    if z is None and x is None:
        return (1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 1.0, ox, oy, oz)
    zx, zy, zz = unit(z) if z is not None else (0.0, 0.0, 1.0)
    rx, ry, rz = x if x is not None else (1.0, 0.0, 0.0)
    along = rx * zx + ry * zy + rz * zz
    rx, ry, rz = rx - along * zx, ry - along * zy, rz - along * zz
    norm = math.sqrt(rx * rx + ry * ry + rz * rz)
    if norm <= 1e-9 * (1.0 + abs(along)):
        rx, ry, rz = any_perpendicular((zx, zy, zz))
        norm = 1.0
    rx, ry, rz = rx / norm, ry / norm, rz / norm
    return (
        rx, ry, rz,
        zy * rz - zz * ry, zz * rx - zx * rz, zx * ry - zy * rx,
        zx, zy, zz,
        ox, oy, oz,
    )  # fmt: skip


def any_perpendicular(vector: Vector) -> Vector:
    """Return a unit vector at right angles, horizontal where that is possible."""
    x, y, z = vector
    if abs(z) > 0.999 * math.sqrt(x * x + y * y + z * z):
        return unit(cross((0.0, 1.0, 0.0), vector))
    return unit((-y, x, 0.0))


def unit(vector: Iterable[float]) -> Vector:
    """Return the vector divided by its length; raises UnreadableShapeError for length zero."""
    x, y, z = vector
    norm = math.sqrt(x * x + y * y + z * z)
    if not norm > 0.0:
        raise UnreadableShapeError("a direction of length zero")
    return x / norm, y / norm, z / norm


def cross(a: Sequence[float], b: Sequence[float]) -> Vector:
    """Return the vector product."""
    return a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]


def dot(a: Sequence[float], b: Sequence[float]) -> float:
    """Return the scalar product of two vectors of three."""
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def minus(a: Sequence[float], b: Sequence[float]) -> Vector:
    """Return ``a - b``."""
    return a[0] - b[0], a[1] - b[1], a[2] - b[2]


def plus(a: Sequence[float], b: Sequence[float], factor: float = 1.0) -> Vector:
    """Return ``a + factor * b``."""
    return a[0] + factor * b[0], a[1] + factor * b[1], a[2] + factor * b[2]


def length(vector: Sequence[float]) -> float:
    """Return the length of a vector of three."""
    return math.sqrt(vector[0] ** 2 + vector[1] ** 2 + vector[2] ** 2)
