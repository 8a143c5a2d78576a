"""The one prism of a body that makes it a member, and the line through its centroids."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

import numpy as np

from analysis_core.ifc.bodies.built_up import joined_section, runs_beside
from analysis_core.ifc.bodies.items import Curved, Cut, Item, Mesh, Prism, together
from analysis_core.ifc.bodies.mesh_cuts import inside
from analysis_core.ifc.bodies.mesh_prisms import mesh_of_prism, prism_of_mesh
from analysis_core.ifc.geometry import frames, outline
from analysis_core.ifc.geometry.frames import Vector
from analysis_core.ifc.unreadable import UnreadableShapeError

PARALLEL = math.cos(math.radians(2.0))
_STEPS = 100
# Parts beside the section taken that are worth a word, by volume: a short haunch is 4 %.
_WORTH_SAYING = 0.02


class CurvedMemberError(UnreadableShapeError):
    """The body or the axis is curved."""


def main_prism(
    items: Sequence[Item], axis: tuple[Vector, Vector] | None
) -> tuple[Prism, list[str]]:
    if len(items) == 1 and isinstance(items[0], Prism):
        found = _lengthwise(items[0], axis)
        if isinstance(found, Prism):
            return found, [found.remark] if found.remark else []
    prisms: list[Prism] = []
    curved: list[Curved] = []
    meshes: list[Mesh] = [item for item in items if isinstance(item, Mesh)]
    for item in items:
        if isinstance(item, Curved):
            curved.append(item)
        elif isinstance(item, Prism):
            found = _lengthwise(item, axis)
            prisms.append(found) if isinstance(found, Prism) else curved.append(found)
    if meshes and not prisms:
        found = prism_of_mesh(meshes[0] if len(meshes) == 1 else together(meshes))
        prisms.append(found) if isinstance(found, Prism) else curved.append(found)
    if not prisms:
        if curved:
            raise CurvedMemberError(_bend(curved[0]))
        raise UnreadableShapeError("its body has no solid part")
    return _largest(prisms)


def _largest(prisms: list[Prism]) -> tuple[Prism, list[str]]:
    """The largest part, with those that run beside it in its section and those that go on."""
    volumes = {id(p): p.profile.moments.area * _height(p) for p in prisms}
    main = max(prisms, key=lambda p: volumes[id(p)])
    others = [(p, runs_beside(main, p)) for p in prisms if p is not main]
    beside = [p for p, runs in others if runs]
    rest = [p for p, runs in others if not runs]
    used = volumes[id(main)] + sum(volumes[id(p)] for p in beside)
    remarks = [main.remark] if main.remark else []
    if beside:
        main = joined_section(main, beside)
        remarks.append(f"its section is made of {1 + len(beside)} parts that run side by side")
    if sum(volumes[id(p)] for p in rest) > _WORTH_SAYING * used:
        remarks.append(
            f"its body has {len(prisms)} parts; the section is that of the largest, "
            f"{100.0 * used / sum(volumes.values()):.0f} % of the volume"
        )
        main = _with_collinear(main, rest)
    return main, remarks


def _lengthwise(prism: Prism, axis: tuple[Vector, Vector] | None) -> Prism | Curved:
    """Return the prism, or what it is when seen along its longest direction.

    Plates are exported as beams whose extrusion runs across the thickness.
    """
    width, depth = prism.profile.size
    x, y = frames.length(prism.frame[0:3]), frames.length(prism.frame[3:6])
    across = max(width * x, depth * y)
    if frames.length(prism.vector) >= across:
        return prism
    if axis is not None:
        along = frames.unit(frames.minus(axis[1], axis[0]))
        if abs(frames.dot(along, frames.unit(prism.vector))) > PARALLEL:
            return prism
    return prism_of_mesh(mesh_of_prism(prism))


def _height(prism: Prism) -> float:
    """Extent of the prism at right angles to its profile, times what the frame stretches."""
    normal = frames.cross(prism.frame[0:3], prism.frame[3:6])
    return abs(frames.dot(normal, prism.vector))


def _with_collinear(main: Prism, prisms: Sequence[Prism]) -> Prism:
    """Lengthen the main part by others that continue it on the same line."""
    start = _centroid_line(main)[0]
    along = frames.unit(main.vector)
    low, high = 0.0, frames.length(main.vector)
    reach = 0.5 * math.sqrt(main.profile.moments.area)
    for other in prisms:
        if abs(frames.dot(frames.unit(other.vector), along)) < PARALLEL:
            continue
        stations = []
        for p in _centroid_line(other):
            arm = frames.minus(p, start)
            station = frames.dot(arm, along)
            if frames.length(frames.plus(arm, along, -station)) > reach:
                break
            stations.append(station)
        if len(stations) == 2 and max(stations) > low - 0.05 and min(stations) < high + 0.05:
            low, high = min(low, *stations), max(high, *stations)
    shift = frames.plus((0.0, 0.0, 0.0), along, low)
    frame = main.frame[:9] + frames.plus(main.frame[9:12], shift)
    return main._replace(
        frame=frame,
        vector=(along[0] * (high - low), along[1] * (high - low), along[2] * (high - low)),
        end_profile=None if (low, high) != (0.0, frames.length(main.vector)) else main.end_profile,
    )


def _bend(item: Curved) -> str:
    chord = item.points[-1] - item.points[0]
    size = float(np.linalg.norm(chord))
    if size <= 1e-9:
        return f"its body ({item.ifc_class}) is a closed ring"
    arms = item.points - item.points[0]
    off = np.linalg.norm(arms - np.outer(arms @ chord / size**2, chord), axis=1).max()
    return (
        f"its body ({item.ifc_class}) bends {off * 1e3:.0f} mm off the straight line over "
        f"{size:.2f} m"
    )


def _centroid_line(prism: Prism) -> tuple[Vector, Vector]:
    moments = prism.profile.moments
    start = frames.point(prism.frame, moments.x, moments.y, 0.0)
    end = frames.plus(start, prism.vector)
    if prism.end_profile is not None:
        last = prism.end_profile.moments
        end = frames.plus(frames.point(prism.frame, last.x, last.y, 0.0), prism.vector)
    return start, end


def body_ends(prism: Prism) -> tuple[Vector, Vector]:
    """Return the ends of the centroid line, shortened by what was taken from the body there."""
    start, end = _centroid_line(prism)
    low, high = 0.0, 1.0
    along = frames.minus(end, start)
    for cut in prism.cuts:
        low, high = after_cut(cut, start, along, low, high)
    for hole in prism.holes:
        low, high = _after_hole(hole, start, along, low, high)
    if high - low < 0.02:
        return start, end
    return frames.plus(start, along, low), frames.plus(start, along, high)


def _after_hole(
    hole: Prism, start: Vector, along: Vector, low: float, high: float
) -> tuple[float, float]:
    """Part of a line that a prism taken away leaves; only what it takes at an end counts."""
    frame = (*hole.frame[:6], *hole.vector, *hole.frame[9:])
    back = frames.inverse(frame)
    rings = [outline.flattened(rows, chords=32)[:, :2] for rows in hole.profile.drawn.loops]

    def taken(share: float) -> bool:
        x, y, z = frames.point(back, *frames.plus(start, along, share))
        return 0.0 <= z <= 1.0 and sum(inside(ring, x, y) for ring in rings) % 2 == 1

    step = (high - low) / _STEPS
    # Half a step inside: a hole that ends flush with the body must not miss the very end.
    if taken(low + 0.5 * step):
        free = next((i for i in range(1, _STEPS) if not taken(low + (i + 0.5) * step)), None)
        if free is not None:
            low = _border(taken, low + (free - 0.5) * step, low + (free + 0.5) * step)
    if taken(high - 0.5 * step):
        free = next((i for i in range(1, _STEPS) if not taken(high - (i + 0.5) * step)), None)
        if free is not None:
            high = _border(taken, high - (free - 0.5) * step, high - (free + 0.5) * step)
    return low, high


def _border(taken: Callable[[float], bool], within: float, outside: float) -> float:
    for _ in range(30):
        middle = 0.5 * (within + outside)
        within, outside = (middle, outside) if taken(middle) else (within, middle)
    return outside


def after_cut(
    cut: Cut, start: Vector, along: Vector, low: float, high: float
) -> tuple[float, float]:
    """Return the part (``low`` to ``high`` of 0 to 1) of a line that a half-space leaves."""
    rate = frames.dot(cut.normal, along)
    if abs(rate) < 1e-3 * frames.length(cut.normal) * frames.length(along):
        return low, high
    at = frames.dot(cut.normal, frames.minus(cut.point, start)) / rate
    if cut.reach is not None and cut.frame is not None:
        # Only a bounded half-space that holds the line where it cuts shortens the member.
        probe = at + (0.01 if rate > 0.0 else -0.01)
        here = frames.point(
            frames.inverse(cut.frame), *frames.plus(start, along, min(max(probe, 0.0), 1.0))
        )
        if not inside(cut.reach, here[0], here[1]):
            return low, high
    if rate > 0.0:
        return (low, min(high, at)) if at > low else (low, high)
    return (max(low, at), high) if at < high else (low, high)
