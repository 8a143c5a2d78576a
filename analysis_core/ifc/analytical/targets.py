"""What actions act on: members, whole or made of parts; and vectors turned into the world."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from analysis_core.building import Axes
from analysis_core.ifc.analytical.loads import Load
from analysis_core.ifc.analytical.members import Local
from analysis_core.ifc.geometry import frames
from analysis_core.ifc.geometry.frames import Frame, Vector

_SAME_PLACE = 1e-3


@dataclass(frozen=True, slots=True)
class Target:
    """What an action acts on: a member, or the members of which a varying one is made.

    ``parts`` are members with how far along the whole each begins, m.
    """

    parts: tuple[tuple[Local, float], ...]

    @property
    def first(self) -> Local:
        """The member at the start."""
        return self.parts[0][0]

    @property
    def length(self) -> float:
        """Length of the whole, m."""
        last, offset = self.parts[-1]
        return offset + last.length

    def parts_at(self, point: Vector) -> list[Local]:
        """Return the part on which a point lies, or both where it lies between two."""
        if len(self.parts) == 1:
            return [self.first]
        at = self.first.position_of(point)
        found = [
            part
            for part, offset in self.parts
            if offset - _SAME_PLACE <= at <= offset + part.length + _SAME_PLACE
        ]
        return found or [self.first if at < 0.0 else self.parts[-1][0]]


def chained(parts: Sequence[Local]) -> Target | None:
    """Return the target made of the parts of a varying member, None where they do not line up."""
    first = min(parts, key=lambda local: local.position_of(local.member.start))
    ordered = sorted(parts, key=lambda local: first.position_of(local.member.start))
    placed: list[tuple[Local, float]] = []
    reach = 0.0
    for local in ordered:
        straight = frames.dot(local.x, ordered[0].x) > math.cos(math.radians(0.1))
        gap = abs(ordered[0].position_of(local.member.start) - reach)
        if not straight or gap > 1e-3 or ordered[0].distance_to(local.member.start) > 1e-3:
            return None
        placed.append((local, reach))
        reach += local.length
    return Target(tuple(placed))


def cut(load: Load, target: Target, part: Local, offset: float) -> Load | None:
    """Return what of a load falls on one part of a target, counted from the part's start.

    ``load`` has its stations on the whole.  A force where two parts meet belongs to the second.
    """
    stations = load.stations or ()
    if len(target.parts) == 1:
        return load
    low, high = offset, offset + part.length
    chosen: list[tuple[float, Vector, Vector]] = []
    if load.shape == "discrete":
        first, last = part is target.first, part is target.parts[-1][0]
        for s, force, moment in zip(stations, load.forces, load.moments, strict=True):
            if (low <= s or first) and (s < high or last):
                chosen.append((s - offset, force, moment))
    else:
        for i in range(len(stations) - 1):
            a, b = max(stations[i], low), min(stations[i + 1], high)
            for s in (a, b) if b > a else ():
                u = (s - stations[i]) / (stations[i + 1] - stations[i])
                pair = between(load.forces, i, u), between(load.moments, i, u)
                chosen.append((s - offset, *pair))
    if not chosen:
        return None
    places, forces, moments = zip(*chosen, strict=True)
    return Load(load.shape, forces, moments, places)


def between(vectors: Sequence[Vector], i: int, u: float) -> Vector:
    """Return the vector at fraction ``u`` of the way from item ``i`` to the next."""
    return frames.plus(times(vectors[i], 1.0 - u), vectors[i + 1], u)


def axes_of(frame: Frame) -> Axes:
    """Return the unit vectors of a frame."""
    return frames.unit(frame[0:3]), frames.unit(frame[3:6]), frames.unit(frame[6:9])


def turned(vector: Vector, axes: Axes) -> Vector:
    """Return the world vector of components along ``axes``."""
    x, y, z = axes
    a, b, c = vector
    return (
        a * x[0] + b * y[0] + c * z[0],
        a * x[1] + b * y[1] + c * z[1],
        a * x[2] + b * y[2] + c * z[2],
    )


def across(direction: Vector, axis: Vector) -> float:
    """Return the sine of the angle between two unit vectors."""
    return frames.length(frames.cross(direction, axis))


def both(pair: tuple[Vector, Vector], axes: Axes) -> tuple[Vector, Vector]:
    """Return two vectors turned into the world."""
    return turned(pair[0], axes), turned(pair[1], axes)


def times(vector: Vector, factor: float) -> Vector:
    """Return ``factor * vector``."""
    return vector[0] * factor, vector[1] * factor, vector[2] * factor
