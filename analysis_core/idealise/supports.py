"""What a restraint in space means in a vertical plane."""

from __future__ import annotations

import math
from dataclasses import dataclass

from analysis_core.building import Restraint
from analysis_core.idealise.planes import Plane
from analysis_core.idealise.vectors import UP, Vector, dot
from analysis_core.model import FREE, RIGID

# Sine of the angle up to which a direction counts as lying along another (about 0.06 degrees).
_ALIGNED = 1e-3


@dataclass(frozen=True, slots=True)
class PlaneRestraint:
    """Stiffness in a plane: N/m, N/m, N·m/rad.

    ``skew`` is set where a movement is held only in a slanting direction of the plane, so that
    vertical and horizontal are not independent; ``twisted`` where the rotation about the plane's
    normal is held only together with another rotation.
    """

    vertical: float
    horizontal: float
    rotation: float
    skew: bool = False
    twisted: bool = False


def in_plane(restraint: Restraint, plane: Plane) -> PlaneRestraint:
    """Return the restraint as it acts on movements within the plane.

    Movements across the plane and rotations out of it are taken as nil.
    """
    parts = [
        (stiffness, dot(axis, plane.axis), dot(axis, UP))
        for stiffness, axis in zip(restraint.translation, restraint.axes, strict=True)
        if stiffness > 0.0
    ]
    horizontal, vertical, skew = _translations(parts)
    rotation, twisted = _rotation(restraint.rotation, restraint.axes, plane.clockwise)
    return PlaneRestraint(vertical, horizontal, rotation, skew, twisted)


def direct(restraint: Restraint, direction: Vector) -> float:
    """Return the stiffness against moving along ``direction`` alone: d · K d."""
    total = 0.0
    for stiffness, axis in zip(restraint.translation, restraint.axes, strict=True):
        part = dot(axis, direction)
        if stiffness > 0.0 and abs(part) > _ALIGNED:
            total += stiffness * part * part
    return total


def in_series(first: float, second: float) -> float:
    """Return the stiffness of two springs one behind the other."""
    if math.isinf(first):
        return second
    if math.isinf(second):
        return first
    if first <= 0.0 or second <= 0.0:
        return FREE
    return first * second / (first + second)


def _translations(parts: list[tuple[float, float, float]]) -> tuple[float, float, bool]:
    """Return (horizontal, vertical, skew) from (stiffness, share along x, share along z)."""
    rigid = [(x, z) for k, x, z in parts if math.isinf(k) and math.hypot(x, z) > _ALIGNED]
    soft = [(k, x, z) for k, x, z in parts if not math.isinf(k)]
    horizontal = math.fsum(k * x * x for k, x, _ in soft)
    vertical = math.fsum(k * z * z for k, _, z in soft)
    coupled = abs(math.fsum(k * x * z for k, x, z in soft))
    largest = max(horizontal, vertical)
    skew = coupled > _ALIGNED * largest > 0.0
    if len(rigid) >= 2 and _span_plane(rigid):
        return RIGID, RIGID, False
    if rigid:
        x, z = max(rigid, key=lambda part: math.hypot(*part))
        size = math.hypot(x, z)
        if abs(x) <= _ALIGNED * size:
            return horizontal, RIGID, False
        if abs(z) <= _ALIGNED * size:
            return RIGID, vertical, False
        # Held along a slant: the larger share tells what it is mostly for.
        return (horizontal, RIGID, True) if abs(z) >= abs(x) else (RIGID, vertical, True)
    return horizontal, vertical, skew


def _span_plane(directions: list[tuple[float, float]]) -> bool:
    first = directions[0]
    return any(abs(first[0] * z - first[1] * x) > _ALIGNED for x, z in directions[1:])


def _rotation(
    stiffness: Vector, axes: tuple[Vector, Vector, Vector], normal: Vector
) -> tuple[float, bool]:
    shares = [abs(dot(axis, normal)) for axis in axes]
    involved = [k for k, share in zip(stiffness, shares, strict=True) if share > _ALIGNED]
    total = 0.0
    for k, share in zip(stiffness, shares, strict=True):
        if share > _ALIGNED and k > 0.0:
            total += k * share * share
    return total, len(involved) > 1 and len(set(involved)) > 1
