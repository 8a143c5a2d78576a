"""Bodies with faces as prisms: the direction of the beam, its cross-section, its ends.

The direction is the one in which most edge length runs (a prism's own edges all run along it,
whatever notches and bevels it has), else the principal axis of the corners.  The section is
the cut through the faces half-way, so an I-beam written as triangles keeps its properties.
"""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc.bodies.items import Curved, Mesh, Prism
from analysis_core.ifc.bodies.mesh_cuts import (
    HALF_WAY,
    Faces,
    closed_cut,
    inside,
    merged,
    section_at,
)
from analysis_core.ifc.geometry import frames, outline
from analysis_core.ifc.geometry.outline import Floats, Loops, Moments
from analysis_core.ifc.sections.drawn import Drawn
from analysis_core.ifc.sections.reader import Profile, profile_of
from analysis_core.ifc.sections.recognise import recognise
from analysis_core.ifc.unreadable import UnreadableShapeError

_CURVED = 1.0 / 150.0

_TAPERED = 0.05
_PLACES = (0.1, 0.3, HALF_WAY, 0.7, 0.9)
_MOST_EDGES = 1500


def prism_of_mesh(mesh: Mesh) -> Prism | Curved:
    """Return the prism that a mesh stands for, or a Curved where it bends.

    Raises UnreadableShapeError for a mesh without extent.
    """
    points, faces = merged(mesh)
    base = points.mean(axis=0)
    local = points - base
    size = float(np.ptp(local, axis=0).max())
    if not size > 0.0:
        raise UnreadableShapeError("all corners of the body coincide")
    axis = _direction(local, faces, size)
    axes = _axes(axis, local)
    turned = local @ axes.T
    low, high = float(turned[:, 0].min()), float(turned[:, 0].max())
    middle = low + HALF_WAY * (high - low)
    loops, remark = section_at(turned, faces, middle)
    drawn = recognise(loops)
    profile = profile_of("", mesh.ifc_class, drawn)
    cuts = _cuts(turned, faces, low, high)
    if cuts and _bends(_line_of_centroids(cuts)):
        back = _line_of_centroids(cuts) @ axes + base
        return Curved(back, mesh.ifc_class, profile)
    y, z = profile.moments.x, profile.moments.y
    start, end = _ends(turned, faces, y, z, low, high)
    prism = _prism(profile, axes, base, start, end, remark)
    return _tapered(prism, cuts, mesh.ifc_class)


def mesh_of_prism(prism: Prism) -> Mesh:
    """Return a prism as a mesh: for bodies extruded across the beam instead of along it."""
    points: list[Floats] = []
    bottom: list[tuple[int, ...]] = []
    sides: list[tuple[tuple[int, ...], ...]] = []
    count = 0
    flat = [outline.flattened(rows, chords=32)[:, :2] for rows in prism.profile.drawn.loops]
    total = sum(len(rows) for rows in flat)
    for rows in flat:
        points.append(np.column_stack([rows, np.zeros(len(rows))]))
        ring = tuple(range(count, count + len(rows)))
        bottom.append(ring)
        sides += [
            ((a, b, b + total, a + total),) for a, b in zip(ring, ring[1:] + ring[:1], strict=True)
        ]
        count += len(rows)
    base = frames.images(prism.frame, np.vstack(points))
    both = np.vstack([base, base + np.array(prism.vector)])
    top = tuple(tuple(i + total for i in ring) for ring in bottom)
    return Mesh(both, (tuple(bottom), top, *sides), prism.profile.ifc_class)


def _edge_pairs(faces: Faces) -> NDArray[np.int64]:
    pairs = {
        (a, b) if a < b else (b, a)
        for face in faces
        for loop in face
        for a, b in zip(loop, loop[1:] + loop[:1], strict=True)
        if a != b
    }
    return np.array(sorted(pairs), dtype=np.int64).reshape(-1, 2)


def _direction(local: Floats, faces: Faces, size: float) -> Floats:
    pairs = _edge_pairs(faces)
    principal = _principal(local)
    if len(pairs) == 0:
        return principal
    vectors = local[pairs[:, 1]] - local[pairs[:, 0]]
    lengths = np.linalg.norm(vectors, axis=1)
    long = np.flatnonzero(lengths > 0.25 * size)
    if long.size == 0:
        return principal
    if long.size > _MOST_EDGES:
        long = long[np.argsort(-lengths[long])[:_MOST_EDGES]]
    units = vectors[long] / lengths[long][:, None]
    weights = lengths[long]
    parallel = np.abs(units @ units.T) > math.cos(math.radians(0.05))
    totals = parallel @ weights
    best = int(totals.argmax())
    if totals[best] < 3.0 * float(weights.max()) and abs(float(units[best] @ principal)) < 0.9:
        return principal
    mates = units[parallel[best]]
    mates = mates * np.sign(mates @ units[best])[:, None]
    axis = (mates * weights[parallel[best]][:, None]).sum(axis=0)
    axis = axis / np.linalg.norm(axis)
    # The edges of a plate run along its width too: the beam is where the body is longest.
    if float(np.ptp(local @ axis)) < 0.7 * float(np.ptp(local @ principal)):
        return principal
    return np.asarray(axis)


def _principal(local: Floats) -> Floats:
    _, vectors = np.linalg.eigh(local.T @ local)
    return np.asarray(vectors[:, -1])


def _axes(axis: Floats, local: Floats) -> Floats:
    """Rows: along the beam, then two across it; the start where x (then y, z) is lower."""
    leading = int(np.abs(axis).argmax())
    if axis[leading] < 0.0:
        axis = -axis
    a: frames.Vector = tuple(axis.tolist())
    across = frames.any_perpendicular(a)
    return np.array([a, across, frames.cross(a, across)])


class _Cut(NamedTuple):
    at: float
    loops: Loops
    moments: Moments


def _cuts(turned: Floats, faces: Faces, low: float, high: float) -> list[_Cut]:
    """Cuts at five places along the body; empty where one does not close."""
    cuts = []
    for share in _PLACES if faces else ():
        at = low + share * (high - low)
        loops = closed_cut(turned, faces, at)
        if not loops:
            return []
        cuts.append(_Cut(at, loops, outline.moments(loops)))
    return cuts


def _line_of_centroids(cuts: list[_Cut]) -> Floats:
    return np.array([(cut.at, cut.moments.x, cut.moments.y) for cut in cuts])


def _bends(line: Floats) -> bool:
    """Whether the middle of the line of centroids lies off the chord, on one side steadily."""
    chord = line[-1] - line[0]
    shares = (line[:, 0] - line[0, 0]) / chord[0]
    off = line[1:-1, 1:] - (line[0, 1:] + shares[1:-1, None] * chord[1:])
    span = float(np.linalg.norm(chord))
    least = float(np.linalg.norm(off, axis=1).min())
    same_side = bool((off @ off[1] > 0.0).all())
    return same_side and least > 0.5 * _CURVED * span


def _ends(
    turned: Floats, faces: Faces, y: float, z: float, low: float, high: float
) -> tuple[float, float]:
    """Where the line through the centroid leaves the body; the outermost corners otherwise."""
    hits = []
    for face in faces:
        rings = [turned[list(loop)] for loop in face]
        if sum(inside(ring[:, 1:], y, z) for ring in rings) % 2 == 0:
            continue
        normal = _normal(rings[0])
        if abs(normal[0]) < 1e-6:
            continue
        corner = rings[0][0]
        hits.append(
            float(
                corner[0] - (normal[1] * (y - corner[1]) + normal[2] * (z - corner[2])) / normal[0]
            )
        )
    if len(hits) < 2 or max(hits) - min(hits) < 0.5 * (high - low):
        return low, high
    return max(min(hits), low), min(max(hits), high)


def _normal(ring: Floats) -> Floats:
    """Normal of a plane ring (M. Newell), not of unit length but scaled to its size."""
    following = np.roll(ring, -1, axis=0)
    normal = np.cross(ring, following).sum(axis=0)
    size = float(np.linalg.norm(normal))
    return np.asarray(normal / size if size > 0.0 else normal)


def _prism(
    profile: Profile, axes: Floats, base: Floats, start: float, end: float, remark: str
) -> Prism:
    origin = base + start * axes[0]
    frame: frames.Frame = tuple(np.concatenate([axes[1], axes[2], axes[0], origin]).tolist())
    vector: frames.Vector = tuple(((end - start) * axes[0]).tolist())
    return Prism(profile, frame, vector, remark=remark)


def _tapered(prism: Prism, cuts: list[_Cut], ifc_class: str) -> Prism:
    """Give the prism an end profile where the section grows or shrinks steadily.

    The cuts lie a tenth of the length from either end, where bevels and notches do not disturb
    them; corner by corner they are carried on to the ends.
    """
    if prism.remark or not cuts:
        return prism
    areas = np.array([cut.moments.area for cut in cuts])
    places = np.array([cut.at for cut in cuts])
    middle = float(areas[len(areas) // 2])
    if float(np.ptp(areas)) < _TAPERED * middle:
        return prism
    slope, base = np.polyfit(places, areas, 1)
    steady = float(np.abs(areas - base - slope * places).max()) < 0.4 * _TAPERED * middle
    loops = _carried_on(cuts[0].loops, cuts[-1].loops) if steady else None
    if loops is None:
        return prism._replace(remark="its section varies along it; that half-way was taken")
    try:
        start, end = (profile_of("", ifc_class, recognise(part)) for part in loops)
    except UnreadableShapeError:  # it runs out in a point or an edge, as a haunch does
        return prism._replace(remark="its section varies along it; that half-way was taken")
    if not _same_kind(start.drawn, end.drawn):
        return prism._replace(remark="its section varies along it; that half-way was taken")
    return prism._replace(profile=start, end_profile=end)


def _carried_on(first: Loops, last: Loops) -> tuple[Loops, Loops] | None:
    """Loops at both ends from those at the first and last place; None if corners do not match."""
    starts, ends = [], []
    if len(first) != len(last):
        return None
    reach = _PLACES[0] / (_PLACES[-1] - _PLACES[0])
    for a, b in zip(first, last, strict=True):
        if len(a) != len(b):
            return None
        turns = [np.roll(b, -i, axis=0) for i in range(len(b))]
        shifts = [a[:, :2] - t[:, :2] for t in turns]
        spreads = [float(np.square(shift - shift.mean(axis=0)).sum()) for shift in shifts]
        b = turns[int(np.argmin(spreads))]
        starts.append(a + reach * (a - b))
        ends.append(b + reach * (b - a))
    return tuple(starts), tuple(ends)


def _same_kind(a: Drawn, b: Drawn) -> bool:
    return a.shape == b.shape and len(a.loops) == len(b.loops)
