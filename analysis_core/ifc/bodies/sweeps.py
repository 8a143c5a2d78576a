"""Bodies swept along something: straight ones are prisms, the others are curved."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from analysis_core.ifc.bodies.items import Curved, Prism
from analysis_core.ifc.geometry import frames, outline
from analysis_core.ifc.geometry.curves import read_path
from analysis_core.ifc.geometry.frames import WORLD, Frame, Vector
from analysis_core.ifc.geometry.outline import Floats
from analysis_core.ifc.geometry.paths import Measures, in_space, sampled
from analysis_core.ifc.geometry.placements import Placements
from analysis_core.ifc.sections.drawn import Drawn
from analysis_core.ifc.sections.reader import Profile, profile_of
from analysis_core.ifc.unreadable import UnreadableShapeError

Swept = tuple[Prism | Curved]
_STRAIGHT = 1e-3


class SweepReader:
    """Reads swept solids; ``profile`` gives the profile of an entity."""

    def __init__(
        self, profile: Callable[[Any], Profile], placements: Placements, measures: Measures
    ) -> None:
        self._profile = profile
        self._placements = placements
        self._measures = measures

    def disk(self, item: Any) -> Swept:
        """Read an IfcSweptDiskSolid."""
        points = self._points(item[0])
        radius, inner = item[1] * self._measures.length, (item[2] or 0.0) * self._measures.length
        profile = disk_profile(radius, inner)
        if not _straight(points):
            return (Curved(points, item.is_a(), profile),)
        return (_prism(points, profile, _upright_x(points), None),)

    def revolution(self, item: Any) -> Swept:
        """Read an IfcRevolvedAreaSolid: curved, along the way of its centroid."""
        profile = self._profile(item[0])
        frame = self._position(item[1])
        centre = np.array([v * self._measures.length for v in item[2][0][0]])
        direction = item[2][1]
        axis = self._placements.direction(direction) if direction else (0.0, 0.0, 1.0)
        u = np.array(frames.unit(axis))
        arm = np.array([profile.moments.x, profile.moments.y, 0.0]) - centre
        along = (arm @ u) * u
        turns = np.linspace(0.0, item[3] * self._measures.angle, 17)[:, None]
        local = centre + along + np.cos(turns) * (arm - along) + np.sin(turns) * np.cross(u, arm)
        return (Curved(frames.images(frame, local), item.is_a(), profile),)

    def directrix(self, item: Any) -> Swept:
        """Read a profile swept along a directrix.

        The x axis of the profile points along the fixed reference, or along the normal of the
        reference surface.
        """
        profile = self._profile(item[0])
        frame = self._position(item[1])
        points = frames.images(frame, self._points(item[2]))
        if not _straight(points):
            return (Curved(points, item.is_a(), profile),)
        fixed = getattr(item, "FixedReference", None)
        surface = getattr(item, "ReferenceSurface", None)
        x = _upright_x(points)
        if fixed is not None:
            x = frames.direction(frame, *self._placements.direction(fixed))
        elif surface is not None and surface.is_a("IfcPlane"):
            x = frames.direction(frame, *self._placements.axes(surface[0])[6:9])
        return (_prism(points, profile, x, item[0]),)

    def spine(self, item: Any) -> Swept:
        """Read an IfcSectionedSpine: profiles in the xy planes of their positions."""
        points = self._points(item[0])
        places = [self._placements.axes(position) for position in item[2]]
        return self._between(item, points, places)

    def horizontal(self, item: Any) -> Swept:
        """Read an IfcSectionedSolidHorizontal: profiles across a directrix, x to its left."""
        places = []
        for position in item[2]:
            x, y, z = _axes_of(self._placements.axes(position))
            # Along, left and up of the directrix: the profile lies in left and up.
            origin = self._placements.axes(position)[9:12]
            places.append((*y, *z, *x, *origin))
        whole = self._points(item[0])
        first, last = (np.array(places[i][9:12]) for i in (0, -1))
        if _straight(whole):
            whole = np.array([first, last])
        return self._between(item, whole, places)

    def _between(self, item: Any, points: Floats, places: list[Frame]) -> Swept:
        profiles = [self._profile(entity) for entity in item[1]]
        if len(places) != len(profiles) or len(places) < 2:
            raise UnreadableShapeError("its sections and their places differ in number")
        if not _straight(points):
            return (Curved(points, item.is_a(), profiles[0]),)
        vector = frames.minus(places[-1][9:12], places[0][9:12])
        prism = Prism(profiles[0], places[0], vector, item[1][0])
        if profiles[-1] is not profiles[0]:
            prism = prism._replace(end_profile=profiles[-1], end_entity=item[1][-1])
        return (prism,)

    def _points(self, curve: Any) -> Floats:
        return in_space(sampled(read_path(curve, self._measures)))

    def _position(self, position: Any) -> Frame:
        return self._placements.axes(position) if position is not None else WORLD


def disk_profile(radius: float, inner: float) -> Profile:
    """Return the profile of a round bar or pipe."""
    if not radius > inner >= 0.0:
        raise UnreadableShapeError("a disk without radius, or whose hole fills it")
    size = 2.0 * radius
    dimensions = {"diameter": size, "width": size, "depth": size}
    loops: outline.Loops = (outline.circle(radius),)
    shape = "circle"
    if inner > 0.0:
        loops += (outline.clockwise(outline.circle(inner)),)
        dimensions["wall_thickness"] = radius - inner
        shape = "tube"
    return profile_of("", "IfcSweptDiskSolid", Drawn(loops, shape, dimensions))


def _axes_of(frame: Frame) -> tuple[Vector, Vector, Vector]:
    return frame[0:3], frame[3:6], frame[6:9]


def _straight(points: Floats) -> bool:
    chord = points[-1] - points[0]
    size = float(np.linalg.norm(chord))
    if size <= 0.0:
        return False
    arms = points - points[0]
    off = arms - np.outer(arms @ chord / size**2, chord)
    return bool(np.linalg.norm(off, axis=1).max() <= _STRAIGHT * size)


def _upright_x(points: Floats) -> Vector:
    """Direction of x that leaves y as upright as the line allows."""
    along = frames.unit((points[-1] - points[0]).tolist())
    up = (0.0, 0.0, 1.0) if abs(along[2]) < 0.999 else (0.0, 1.0, 0.0)
    return frames.cross(up, along)


def _prism(points: Floats, profile: Profile, x: Vector, entity: Any) -> Prism:
    start: Vector = tuple(points[0].tolist())
    vector: Vector = tuple((points[-1] - points[0]).tolist())
    if math.isclose(abs(frames.dot(frames.unit(x), frames.unit(vector))), 1.0, rel_tol=1e-9):
        raise UnreadableShapeError("its reference direction runs along its directrix")
    return Prism(profile, frames.axes_frame(start, vector, x), vector, entity)
