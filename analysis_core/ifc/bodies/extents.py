"""How far a body reaches: its outline in plan and its levels, in the world."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from typing import NamedTuple

import numpy as np

from analysis_core.ifc.bodies.items import Curved, Item, Mesh, Prism
from analysis_core.ifc.bodies.main_prism import after_cut
from analysis_core.ifc.bodies.mesh_cuts import hull, section_loops
from analysis_core.ifc.bodies.sticks import Stick
from analysis_core.ifc.geometry import frames, outline
from analysis_core.ifc.geometry.convex_pieces import convex_pieces
from analysis_core.ifc.geometry.frames import Frame, Vector
from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.sections.reader import Profile

_FULL = 0.9  # of its convex outline: nearly convex
Corners = tuple[tuple[float, float], ...]


class Extent(NamedTuple):
    """Convex outline in plan (anticlockwise), lowest and highest level, m."""

    corners: Corners
    bottom: float
    top: float


class ExtentReader:
    """Works out extents; the hull of a profile only once."""

    def __init__(self) -> None:
        self._hulls: dict[int, tuple[Profile, tuple[tuple[float, float], ...]]] = {}

    def extent(self, items: Sequence[Item], frame: Frame) -> Extent | None:
        """Return the extent of a body placed by ``frame``; None where it has no points."""
        if len(items) == 1 and isinstance(items[0], Prism):
            found = self._upright_extent(items[0], frame)
            if found is not None:
                return found
        points = [p for item in items for p in self._points(item, frame)]
        return extent_of(points) if points else None

    def pieces(self, items: Sequence[Item], frame: Frame) -> list[Extent]:
        """Return the extents of convex pieces of a body, one where it is convex in plan.

        A wall round a corner or a lift shaft would, as one convex outline, also cover what it
        encloses.
        """
        whole = self.extent(items, frame)
        if whole is None:
            return []
        found: list[Extent] = []
        for item in items:
            one = whole if len(items) == 1 else self.extent([item], frame)
            if one is not None:
                found.extend(self._split(item, frame, one))
        solid = sum(_area(piece.corners) for piece in found)
        if len(found) > 1 and solid < _FULL * _area(whole.corners):
            return found
        return [whole]

    def _split(self, item: Item, frame: Frame, whole: Extent) -> list[Extent]:
        rings = plan_rings(item, frame)
        if not rings or abs(_ring_area(rings)) >= _FULL * _area(whole.corners):
            return [whole]
        pieces = convex_pieces(rings)
        if not pieces:
            return [whole]
        return [Extent(piece, whole.bottom, whole.top) for piece in pieces]

    def _upright_extent(self, prism: Prism, frame: Frame) -> Extent | None:
        """The extent of an uncut prism that stands upright: its profile's hull, placed."""
        if prism.cuts or prism.end_profile is not None:
            return None
        vx, vy, vz = frames.direction(frame, *prism.vector)
        whole = frames.compose(frame, prism.frame)
        if abs(vx) + abs(vy) > 1e-9 * abs(vz) or abs(whole[2]) + abs(whole[5]) > 1e-9:
            return None
        a, b, _, c, d, _, _, _, _, x0, y0, z0 = whole
        corners = [(a * x + c * y + x0, b * x + d * y + y0) for x, y in self._hull(prism.profile)]
        if a * d - b * c < 0.0:
            corners.reverse()
        return Extent(tuple(corners), min(z0, z0 + vz), max(z0, z0 + vz))

    def of_stick(self, stick: Stick, frame: Frame) -> Extent:
        """Return the extent of a member drawn as an axis only: its profile, or a thin line."""
        half = 0.05
        around = ((-half, -half), (half, -half), (half, half), (-half, half))
        corners = self._hull(stick.profile) if stick.profile is not None else around
        x0, y0 = (stick.profile.moments.x, stick.profile.moments.y) if stick.profile else (0, 0)
        points = []
        for base in (stick.start, stick.end):
            for x, y in corners:
                p = frames.plus(base, stick.x_axis, x - x0)
                points.append(frames.point(frame, *frames.plus(p, stick.y_axis, y - y0)))
        return extent_of(points)

    def _points(self, item: Item, frame: Frame) -> Iterable[Vector]:
        if isinstance(item, Mesh | Curved):
            return [(x, y, z) for x, y, z in frames.images(frame, item.points).tolist()]
        return self._prism_points(item, frame)

    def _prism_points(self, prism: Prism, frame: Frame) -> Iterable[Vector]:
        ends: list[Vector] = []
        vector = prism.vector
        for profile, whole in ((prism.profile, True), (prism.end_profile, False)):
            if profile is None:
                continue
            for x, y in self._hull(profile):
                start = frames.point(prism.frame, x, y, 0.0)
                low, high = 0.0, 1.0
                for cut in prism.cuts:
                    low, high = after_cut(cut, start, vector, low, high)
                ends.append(frames.plus(start, vector, low))
                if whole or profile is not prism.profile:
                    ends.append(frames.plus(start, vector, high))
        return [frames.point(frame, *p) for p in ends]

    def _hull(self, profile: Profile) -> tuple[tuple[float, float], ...]:
        known = self._hulls.get(id(profile))
        if known is None:
            rows = np.concatenate([outline.flattened(r, chords=16) for r in profile.drawn.loops])
            corners = hull(rows[:, :2]).tolist()
            known = (profile, tuple((x, y) for x, y in corners))
            self._hulls[id(profile)] = known
        return known[1]


def plan_rings(item: Item, frame: Frame) -> list[Floats]:
    """Return outline and voids (n, 2) of a body seen from above; empty where they do not show.

    A profile carried upwards shows itself; a body with faces its cut half-way up.
    """
    if isinstance(item, Mesh):
        return [rows[:, :2] for rows in section_loops(item.moved(frame), axis=2)]
    if isinstance(item, Curved):
        return []
    vx, vy, vz = frames.direction(frame, *item.vector)
    if math.hypot(vx, vy) > 1e-6 * abs(vz) and abs(vz) < 0.2 * math.hypot(vx, vy):
        return []
    whole = frames.compose(frame, item.frame)
    rings = []
    for rows in item.profile.drawn.loops:
        flat = outline.flattened(rows, chords=32)[:, :2]
        rings.append(frames.images(whole, np.column_stack([flat, np.zeros(len(flat))]))[:, :2])
    return rings if abs(_ring_area(rings[:1])) > 1e-6 else []


def _area(corners: Corners) -> float:
    return abs(_ring_area([np.array(corners)]))


def _ring_area(rings: Sequence[Floats]) -> float:
    """Area inside rings; voids run the other way round and count negative."""
    total = 0.0
    for ring in rings:
        x, y = ring[:, 0] - ring[0, 0], ring[:, 1] - ring[0, 1]
        total += float(0.5 * (x * np.roll(y, -1) - np.roll(x, -1) * y).sum())
    return total


def extent_of(points: Sequence[Vector]) -> Extent:
    """Return the extent of points in the world."""
    levels = [p[2] for p in points]
    # From a local origin: far from the world's, the hull's products would lose digits.
    x0, y0 = points[0][0], points[0][1]
    plan = hull(_plan(points, x0, y0)).tolist()
    corners = tuple((x0 + x, y0 + y) for x, y in plan)
    return Extent(corners, min(levels), max(levels))


def _plan(points: Sequence[Vector], x0: float, y0: float) -> Floats:
    return np.array([(round(x - x0, 7), round(y - y0, 7)) for x, y, _ in points])
