"""The vertical plane in which a line is seen, and what of a world vector lies in it."""

from __future__ import annotations

from dataclasses import dataclass

from analysis_core.idealise.vectors import Vector, along, dot, horizontal, subtract, unit
from analysis_core.model import Point

# A direction this close to level with another's (sine of the angle) gives no preference.
_TIE = 1e-6


@dataclass(frozen=True, slots=True)
class Plane:
    """A vertical plane: ``axis`` is the horizontal direction that runs left to right."""

    origin: Point
    axis: Vector

    @property
    def clockwise(self) -> Vector:
        """World direction of a clockwise rotation: z x axis (away from the eye)."""
        return -self.axis[1], self.axis[0], 0.0

    def place(self, point: Point) -> tuple[float, float]:
        """Return (x, z) of a world point."""
        apart = subtract(point, self.origin)
        return dot(apart, self.axis), apart[2]

    def world(self, x: float, z: float) -> Point:
        """Return the world point of (x, z)."""
        point = along(self.origin, self.axis, x)
        return point[0], point[1], point[2] + z

    def off(self, point: Point) -> float:
        """Return the signed distance of a world point from the plane."""
        return dot(subtract(point, self.origin), self.clockwise)


def view_axis(direction: Vector) -> Vector:
    """Return the horizontal axis along ``direction`` by which a frame is seen.

    The world axis (X or Y) nearest to it runs left to right (CONTRACT section 1).  At exactly
    45 degrees X decides.
    """
    flat = unit(horizontal(direction))
    leading = flat[0] if abs(flat[0]) >= abs(flat[1]) - _TIE else flat[1]
    return flat if leading > 0.0 else (-flat[0], -flat[1], 0.0)
