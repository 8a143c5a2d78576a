"""Bodies with faces as prisms: the direction of the beam, its cross-section, its ends.

The direction is the one in which most edge length runs (a prism's own edges all run along it,
whatever notches and bevels it has), else the principal axis of the corners.  The section is
the cut through the faces half-way, so an I-beam written as triangles keeps its properties.
"""

from __future__ import annotations

import math
from collections import defaultdict
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc import frames, outline
from analysis_core.ifc.bodies import Curved, Mesh, Prism
from analysis_core.ifc.outline import Floats, Loops
from analysis_core.ifc.profile_outlines import Drawn
from analysis_core.ifc.recognise import recognise
from analysis_core.ifc.sections import Profile, profile_of
from analysis_core.ifc.unreadable import UnreadableShapeError

Faces = tuple[tuple[tuple[int, ...], ...], ...]
_HALF_WAY = 0.5013  # not quite: a cut exactly through corners is ambiguous
_CURVED = 1.0 / 150.0
_TAPERED = 0.05


class _Corner(NamedTuple):
    """Where an edge crosses the cutting plane: the edge and the point (y, z) in the plane."""

    edge: tuple[int, int]
    y: float
    z: float


def prism_of_mesh(mesh: Mesh) -> Prism | Curved:
    """Return the prism that a mesh stands for, or a Curved where it bends.

    Raises UnreadableShapeError for a mesh without extent.
    """
    points, faces = _merged(mesh)
    base = points.mean(axis=0)
    local = points - base
    size = float(np.ptp(local, axis=0).max())
    if not size > 0.0:
        raise UnreadableShapeError("all corners of the body coincide")
    axis = _direction(local, faces, size)
    axes = _axes(axis, local)
    turned = local @ axes.T
    low, high = float(turned[:, 0].min()), float(turned[:, 0].max())
    middle = low + _HALF_WAY * (high - low)
    loops, remark = _section(turned, faces, middle)
    drawn = recognise(loops)
    profile = profile_of("", mesh.ifc_class, drawn)
    line = _line_of_centroids(turned, faces, low, high)
    if line is not None and _bends(line):
        back = line @ axes + base
        return Curved(back, mesh.ifc_class, profile)
    y, z = profile.moments.x, profile.moments.y
    start, end = _ends(turned, faces, y, z, low, high)
    prism = _prism(profile, axes, base, start, end, remark)
    return _tapered(prism, mesh.ifc_class, turned, faces, low, high)


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


def section_loops(mesh: Mesh, axis: int) -> Loops:
    """Return the outline of a mesh cut half-way along a world axis (0, 1 or 2).

    Coordinates of the loops are those of the other two axes, in order; empty where the cut does
    not close.
    """
    points, faces = _merged(mesh)
    order = [axis, *(i for i in range(3) if i != axis)]
    turned = points[:, order]
    low, high = float(turned[:, 0].min()), float(turned[:, 0].max())
    loops = _chained(_cut(turned, faces, low + _HALF_WAY * (high - low)))
    return _nested(loops) if loops else ()


def hull(points: Floats) -> Floats:
    """Return the convex hull (n, 2) of points in the plane, anticlockwise (monotone chain)."""
    ordered = sorted({(float(x), float(y)) for x, y in points})
    if len(ordered) < 3:
        return np.array(ordered)
    halves: list[list[tuple[float, float]]] = []
    for sequence in (ordered, ordered[::-1]):
        chain: list[tuple[float, float]] = []
        for p in sequence:
            while len(chain) >= 2 and _left_of(chain[-2], chain[-1], p) <= 0.0:
                chain.pop()
            chain.append(p)
        halves.append(chain[:-1])
    return np.array(halves[0] + halves[1])


def _left_of(a: tuple[float, float], b: tuple[float, float], p: tuple[float, float]) -> float:
    return (b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0])


def _merged(mesh: Mesh) -> tuple[Floats, Faces]:
    """Points without repetition (to a micrometre) and the faces that go with them."""
    shifted = mesh.points - mesh.points[0]
    _, first, place = np.unique(
        np.round(shifted, 6), axis=0, return_index=True, return_inverse=True
    )
    place = place.ravel()
    if len(first) == len(mesh.points):
        return mesh.points, mesh.faces
    index: list[int] = place.tolist()
    faces = tuple(tuple(tuple(index[i] for i in loop) for loop in face) for face in mesh.faces)
    return mesh.points[first], faces


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
    long = lengths > 0.25 * size
    if not long.any():
        return principal
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


def _section(turned: Floats, faces: Faces, at: float) -> tuple[Loops, str]:
    """Outline of the cut at ``at`` along the first axis, and what had to be assumed."""
    segments = _cut(turned, faces, at)
    loops = _chained(segments)
    if loops:
        return _nested(loops), ""
    corners = [(c.y, c.z) for pair in segments for c in pair]
    outer = hull(np.array(corners)) if len(corners) >= 3 else hull(turned[:, 1:])
    if len(outer) < 3:
        raise UnreadableShapeError("the body has no cross-section")
    return (outline.loop(outer.tolist()),), "its faces do not close; convex outline taken"


def _cut(turned: Floats, faces: Faces, at: float) -> list[tuple[_Corner, _Corner]]:
    along = (turned[:, 0] - at).tolist()
    across = turned[:, 1:].tolist()
    segments = []
    for face in faces:
        corners: list[_Corner] = []
        for loop in face:
            before = loop[-1]
            for here in loop:
                s, t = along[before], along[here]
                if (s > 0.0) != (t > 0.0):
                    # From the lower corner always, so that both faces find the same point.
                    a, b = (before, here) if before < here else (here, before)
                    share = along[a] / (along[a] - along[b])
                    (y, z), (y2, z2) = across[a], across[b]
                    corners.append(_Corner((a, b), y + share * (y2 - y), z + share * (z2 - z)))
                before = here
        if len(corners) == 2:
            segments.append((corners[0], corners[1]))
        elif len(corners) > 2:
            segments.extend(_paired(corners))
    return segments


def _paired(corners: list[_Corner]) -> list[tuple[_Corner, _Corner]]:
    """Pair the crossings of a face that is not convex, in order along the cutting line."""
    first = corners[0]
    far = max(corners, key=lambda c: math.hypot(c.y - first.y, c.z - first.z))
    dy, dz = far.y - first.y, far.z - first.z
    ordered = sorted(corners, key=lambda c: c.y * dy + c.z * dz)
    return list(zip(ordered[::2], ordered[1::2], strict=False))


def _chained(segments: list[tuple[_Corner, _Corner]]) -> list[Floats]:
    """Closed loops from segments; empty where they do not close."""
    neighbours: dict[tuple[int, int], list[tuple[int, int]]] = defaultdict(list)
    places: dict[tuple[int, int], tuple[float, float]] = {}
    for a, b in segments:
        neighbours[a.edge].append(b.edge)
        neighbours[b.edge].append(a.edge)
        places[a.edge] = (a.y, a.z)
        places[b.edge] = (b.y, b.z)
    if not segments or any(len(others) != 2 for others in neighbours.values()):
        return []
    loops = []
    unused = set(neighbours)
    while unused:
        start = unused.pop()
        chain = [start]
        before, here = start, neighbours[start][0]
        while here != start:
            unused.discard(here)
            chain.append(here)
            one, other = neighbours[here]
            before, here = here, other if one == before else one
        if len(chain) >= 3:
            rows = outline.loop([places[edge] for edge in chain])
            rows = _without_straight_corners(rows)
            if len(rows) >= 3 and abs(outline.signed_area(rows)) > 1e-9:
                loops.append(rows)
    return loops


def _without_straight_corners(rows: Floats) -> Floats:
    """Drop corners on a straight line between their neighbours (diagonals of triangles)."""
    kept: list[list[float]] = rows.tolist()
    size = float(np.abs(rows[:, :2] - rows[0, :2]).max())
    changed = True
    while changed and len(kept) > 3:
        changed = False
        for i in range(len(kept)):
            (x0, y0, _), (x1, y1, _), (x2, y2, _) = kept[i - 1], kept[i], kept[(i + 1) % len(kept)]
            chord = math.hypot(x2 - x0, y2 - y0)
            height = abs((x1 - x0) * (y2 - y0) - (y1 - y0) * (x2 - x0))
            if height <= 1e-6 * size * max(chord, 1e-3 * size):
                del kept[i]
                changed = True
                break
    return np.array(kept)


def _nested(loops: list[Floats]) -> Loops:
    """Loops round material anticlockwise first, then voids clockwise."""
    solid: list[Floats] = []
    voids: list[Floats] = []
    for rows in sorted(loops, key=lambda r: -abs(outline.signed_area(r))):
        depth = sum(
            _inside(other[:, :2], float(rows[0, 0]), float(rows[0, 1]))
            for other in loops
            if other is not rows
        )
        (voids if depth % 2 else solid).append(rows)
    return tuple(outline.anticlockwise(r) for r in solid) + tuple(
        outline.clockwise(r) for r in voids
    )


def _inside(ring: Floats, x: float, y: float) -> bool:
    inside = False
    x0, y0 = ring[-1].tolist()
    for x1, y1 in ring.tolist():
        if (y0 > y) != (y1 > y) and x < x0 + (x1 - x0) * (y - y0) / (y1 - y0):
            inside = not inside
        x0, y0 = x1, y1
    return inside


def _line_of_centroids(turned: Floats, faces: Faces, low: float, high: float) -> Floats | None:
    """Centroids of the cuts at five places, or None where a cut does not close."""
    if not faces:
        return None
    rows = []
    for share in (0.1, 0.3, _HALF_WAY, 0.7, 0.9):
        at = low + share * (high - low)
        loops = _chained(_cut(turned, faces, at))
        if not loops:
            return None
        moments = outline.moments(_nested(loops))
        rows.append((at, moments.x, moments.y))
    return np.array(rows)


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
        if sum(_inside(ring[:, 1:], y, z) for ring in rings) % 2 == 0:
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


def _tapered(
    prism: Prism, ifc_class: str, turned: Floats, faces: Faces, low: float, high: float
) -> Prism:
    """Give the prism an end profile where the section grows or shrinks steadily."""
    if prism.remark:
        return prism
    sections = []
    for share in (0.02, 0.98):
        loops = _chained(_cut(turned, faces, low + share * (high - low)))
        if not loops:
            return prism
        sections.append(recognise(_nested(loops)))
    start, end = (profile_of("", ifc_class, drawn) for drawn in sections)
    middle = prism.profile.moments.area
    change = (end.moments.area - start.moments.area) / middle
    steady = abs(0.5 * (start.moments.area + end.moments.area) - middle) < 0.1 * middle
    if abs(change) < _TAPERED or not steady or not _same_kind(start.drawn, end.drawn):
        return prism
    return prism._replace(profile=start, end_profile=end)


def _same_kind(a: Drawn, b: Drawn) -> bool:
    return a.shape == b.shape and len(a.loops) == len(b.loops)
