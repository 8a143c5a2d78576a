"""Plane cuts through bodies with faces, as closed outlines."""

from __future__ import annotations

import math
from collections import defaultdict
from typing import NamedTuple

import numpy as np

from analysis_core.ifc.bodies.items import Mesh
from analysis_core.ifc.geometry import outline
from analysis_core.ifc.geometry.outline import Floats, Loops
from analysis_core.ifc.unreadable import UnreadableShapeError

Faces = tuple[tuple[tuple[int, ...], ...], ...]

HALF_WAY = 0.5013  # not quite: a cut exactly through corners is ambiguous


class _Corner(NamedTuple):
    """Where an edge crosses the cutting plane: the edge and the point (y, z) in the plane."""

    edge: tuple[int, int]
    y: float
    z: float


def section_loops(mesh: Mesh, axis: int) -> Loops:
    """Return the outline of a mesh cut half-way along a world axis (0, 1 or 2).

    Coordinates of the loops are those of the other two axes, in order; empty where the cut does
    not close.
    """
    points, faces = merged(mesh)
    order = [axis, *(i for i in range(3) if i != axis)]
    turned = points[:, order]
    low, high = float(turned[:, 0].min()), float(turned[:, 0].max())
    return closed_cut(turned, faces, low + HALF_WAY * (high - low))


def closed_cut(turned: Floats, faces: Faces, at: float) -> Loops:
    """Return the outline of the cut at ``at`` along the first axis; empty if it does not close.

    Loops round material come first, then voids; their coordinates are the other two axes.
    """
    loops = _chained(_cut(turned, faces, at))
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


def merged(mesh: Mesh) -> tuple[Floats, Faces]:
    """Return points without repetition (to a micrometre) and the faces that go with them."""
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


def section_at(turned: Floats, faces: Faces, at: float) -> tuple[Loops, str]:
    """Return the outline of the cut at ``at`` along the first axis, and what had to be assumed."""
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
        x, y = _point_within(rows)
        depth = sum(inside(other[:, :2], x, y) for other in loops if other is not rows)
        (voids if depth % 2 else solid).append(rows)
    return tuple(outline.anticlockwise(r) for r in solid) + tuple(
        outline.clockwise(r) for r in voids
    )


def _point_within(rows: Floats) -> tuple[float, float]:
    """A point just inside a loop, beside the middle of its longest edge (corners may touch)."""
    x, y = rows[:, 0], rows[:, 1]
    dx, dy = outline.following(x) - x, outline.following(y) - y
    lengths = np.hypot(dx, dy)
    i = int(lengths.argmax())
    turn = 1.0 if outline.signed_area(rows) > 0.0 else -1.0
    step = 1e-4 * turn
    return float(x[i] + 0.5 * dx[i] - step * dy[i]), float(y[i] + 0.5 * dy[i] + step * dx[i])


def inside(ring: Floats, x: float, y: float) -> bool:
    """Whether a point lies inside a polygon (n, 2)."""
    within = False
    x0, y0 = ring[-1].tolist()
    for x1, y1 in ring.tolist():
        if (y0 > y) != (y1 > y) and x < x0 + (x1 - x0) * (y - y0) / (y1 - y0):
            within = not within
        x0, y0 = x1, y1
    return within
