"""Plane outlines bounded by straight lines and circular arcs, and their exact moments.

A *loop* is an array of rows ``x, y, bulge``, closed from the last row to the first.  The bulge
belongs to the edge that leaves the vertex: 0 for a straight line, else the tangent of a quarter
of the arc's sweep, positive where the edge turns left (anticlockwise).  Loops round material run
anticlockwise, loops round a void clockwise, so that integrals over loops simply add up.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc.unreadable import UnreadableShapeError

Floats = NDArray[np.float64]
Loops = tuple[Floats, ...]
Matrix = tuple[tuple[float, float], tuple[float, float]]

IDENTITY: Matrix = ((1.0, 0.0), (0.0, 1.0))
QUARTER_BULGE = math.tan(math.pi / 8.0)


@dataclass(frozen=True, slots=True)
class Moments:
    """Area, centroid and second moments about the centroid, in the axes of the outline.

    ``xx`` is the integral of x², ``yy`` of y², ``xy`` of x·y over the area.
    """

    area: float
    x: float
    y: float
    xx: float
    yy: float
    xy: float

    @property
    def principal(self) -> tuple[float, float]:
        """The larger and the smaller second moment about the principal axes."""
        spread = math.hypot(0.5 * (self.yy - self.xx), self.xy)
        return 0.5 * (self.yy + self.xx) + spread, 0.5 * (self.yy + self.xx) - spread

    def transformed(self, matrix: Matrix) -> Moments:
        """Return the moments of the outline after ``(x, y)`` became ``matrix @ (x, y)``."""
        (a, b), (c, d) = matrix
        scale = abs(a * d - b * c)
        return Moments(
            self.area * scale,
            a * self.x + b * self.y,
            c * self.x + d * self.y,
            scale * (a * a * self.xx + 2.0 * a * b * self.xy + b * b * self.yy),
            scale * (c * c * self.xx + 2.0 * c * d * self.xy + d * d * self.yy),
            scale * (a * c * self.xx + (a * d + b * c) * self.xy + b * d * self.yy),
        )


def loop(points: Sequence[Sequence[float]]) -> Floats:
    """Return a loop from rows ``x, y`` or ``x, y, bulge``, without repeated vertices."""
    rows = np.zeros((len(points), 3))
    for row, point in zip(rows, points, strict=True):
        row[: len(point)] = point
    return _without_repeats(rows)


def fingerprint(loops: Sequence[Floats]) -> bytes:
    """Return bytes that are equal for outlines equal to a nanometre."""
    return b"|".join((np.round(rows, 9) + 0.0).tobytes() for rows in loops)


def chain(points: Sequence[Sequence[float]]) -> Floats:
    """Return rows ``x, y, bulge`` of an open chain, without repeated points."""
    rows = [list(point) for point in points]
    size = max(max(abs(r[0] - rows[0][0]), abs(r[1] - rows[0][1])) for r in rows)
    kept = [
        here
        for here, there in pairwise(rows)
        if max(abs(here[0] - there[0]), abs(here[1] - there[1])) > 1e-9 * size
    ]
    return np.array([*kept, rows[-1]])


def joined(first: Floats, second: Floats) -> Floats:
    """Return the loop along the open chain ``first``, then ``second``, and back."""
    return _without_repeats(np.vstack([first, second]))


def backwards_open(rows: Floats) -> Floats:
    """Return an open chain run the other way."""
    turned = rows[::-1].copy()
    turned[:-1, 2] = -rows[-2::-1, 2]
    turned[-1, 2] = 0.0
    return turned


def signed_area(rows: Floats) -> float:
    """Return the area inside a loop, positive where it runs anticlockwise."""
    return float(_raw_moments(rows)[0])


def anticlockwise(rows: Floats) -> Floats:
    """Return the loop running anticlockwise, as it must round material."""
    return rows if _raw_moments(rows)[0] >= 0.0 else backwards(rows)


def clockwise(rows: Floats) -> Floats:
    """Return the loop running clockwise, as it must round a void."""
    return rows if _raw_moments(rows)[0] <= 0.0 else backwards(rows)


def backwards(rows: Floats) -> Floats:
    """Return the same loop run the other way."""
    turned = rows[::-1].copy()
    turned[:, 2] = -np.roll(turned[:, 2], -1)
    return turned


def moments(loops: Sequence[Floats]) -> Moments:
    """Return the exact moments of the region bounded by ``loops``.

    Green's theorem on the polygon of the vertices, plus the circular segment between each arc
    and its chord (closed form, see ``_segments``).  Works from the first vertex, so that an
    outline drawn 1,000 km from the origin loses no digits.  Raises UnreadableShapeError where the
    loops enclose no area.
    """
    x0, y0 = float(loops[0][0, 0]), float(loops[0][0, 1])
    total = np.zeros(6)
    for rows in loops:
        shifted = rows.copy()
        shifted[:, 0] -= x0
        shifted[:, 1] -= y0
        total += _raw_moments(shifted)
    area, mx, my, xx, yy, xy = (float(value) for value in total)
    if not area > 0.0:
        raise UnreadableShapeError(
            f"the outline encloses an area of {area:g} m²; it must be positive"
        )
    x, y = mx / area, my / area
    return Moments(area, x0 + x, y0 + y, xx - area * x * x, yy - area * y * y, xy - area * x * y)


def transformed(loops: Sequence[Floats], matrix: Matrix, x: float = 0.0, y: float = 0.0) -> Loops:
    """Return ``matrix @ (x, y) + shift`` of every vertex; arcs stay arcs under a similarity.

    Under any other matrix an arc becomes an ellipse: it is replaced by chords first, 64 to the
    full turn.  A reflection turns every loop round, so that material stays on its left.
    """
    (a, b), (c, d) = matrix
    determinant = a * d - b * c
    size = max(abs(a), abs(b), abs(c), abs(d))
    similar = (
        abs(a * c + b * d) <= 1e-9 * size * size
        and abs(a * a + b * b - c * c - d * d) <= 1e-9 * size * size
    )
    result = []
    for rows in loops:
        moved = rows.copy() if similar else flattened(rows, chords=64)
        moved[:, 0], moved[:, 1] = (
            a * moved[:, 0] + b * moved[:, 1] + x,
            c * moved[:, 0] + d * moved[:, 1] + y,
        )
        if determinant < 0.0:
            moved[:, 2] *= -1.0
            moved = backwards(moved)
        result.append(moved)
    return tuple(result)


def flattened(rows: Floats, chords: int) -> Floats:
    """Return the loop with arcs replaced by chords, ``chords`` to the full turn."""
    points: list[tuple[float, float, float]] = []
    corners = rows.tolist()
    for (x, y, bulge), (x2, y2, _) in pairwise([*corners, corners[0]]):
        points.append((x, y, 0.0))
        if bulge:
            cx, cy, radius, first, sweep = arc_of(x, y, x2, y2, bulge)
            count = max(2, math.ceil(abs(sweep) / (2.0 * math.pi) * chords))
            points.extend(
                (cx + radius * math.cos(angle), cy + radius * math.sin(angle), 0.0)
                for angle in (first + sweep * i / count for i in range(1, count))
            )
    return np.array(points)


def split_at_extremes(rows: Floats) -> Floats:
    """Return the loop with every arc cut where it turns back in x or in y.

    After that the bounding box of the vertices is that of the outline, and every edge runs
    one way only in x and in y.
    """
    if not rows[:, 2].any():
        return rows
    points: list[tuple[float, float, float]] = []
    corners = rows.tolist()
    for (x, y, bulge), (x2, y2, _) in pairwise([*corners, corners[0]]):
        if not bulge:
            points.append((x, y, 0.0))
            continue
        cx, cy, radius, first, sweep = arc_of(x, y, x2, y2, bulge)
        cuts = _quarter_turns_between(first, sweep)
        edges = [first, *cuts, first + sweep]
        points.append((x, y, math.tan((edges[1] - edges[0]) / 4.0)))
        points.extend(
            (*_on_circle(cx, cy, radius, here), math.tan((there - here) / 4.0))
            for here, there in pairwise(edges[1:])
        )
    return np.array(points)


def arc_of(
    x: float, y: float, x2: float, y2: float, bulge: float
) -> tuple[float, float, float, float, float]:
    """Return centre x, centre y, radius, first angle and sweep (signed) of an arc edge."""
    dx, dy = x2 - x, y2 - y
    # The centre lies off the chord's midpoint, to the left for a bulge between 0 and 1.
    offset = (1.0 - bulge * bulge) / (4.0 * bulge)
    cx = 0.5 * (x + x2) - offset * dy
    cy = 0.5 * (y + y2) + offset * dx
    radius = math.hypot(x - cx, y - cy)
    return cx, cy, radius, math.atan2(y - cy, x - cx), 4.0 * math.atan(bulge)


def bulge_of(start: Sequence[float], middle: Sequence[float], end: Sequence[float]) -> float:
    """Return the bulge of the arc from ``start`` through ``middle`` to ``end``; 0 if straight."""
    ax, ay = start[0] - middle[0], start[1] - middle[1]
    bx, by = end[0] - middle[0], end[1] - middle[1]
    cross, dot = ax * by - ay * bx, ax * bx + ay * by
    if abs(cross) <= 1e-12 * (abs(dot) + abs(cross)) and dot < 0.0:
        return 0.0
    # The angle seen from a point of the arc is the complement of half the sweep to 180°.
    half_sweep = math.pi - abs(math.atan2(cross, dot))
    return math.copysign(math.tan(0.5 * half_sweep), -cross)


def circle(radius: float, x: float = 0.0, y: float = 0.0) -> Floats:
    """Return a full circle as four arcs."""
    return np.array(
        [
            (x + radius, y, QUARTER_BULGE),
            (x, y + radius, QUARTER_BULGE),
            (x - radius, y, QUARTER_BULGE),
            (x, y - radius, QUARTER_BULGE),
        ]
    )


def rounded(corners: Sequence[tuple[float, float, float]]) -> Floats:
    """Return the polygon of ``x, y, radius`` with each corner rounded by its radius.

    A radius too large for its sides is reduced to what they allow, shared between neighbours.
    """
    count = len(corners)
    cuts = [_cut_length(corners, i) for i in range(count)]
    sides = [
        math.hypot(
            corners[(i + 1) % count][0] - corners[i][0], corners[(i + 1) % count][1] - corners[i][1]
        )
        for i in range(count)
    ]
    rows: list[tuple[float, float, float]] = []
    for i, (x, y, _) in enumerate(corners):
        after = cuts[i] + cuts[(i + 1) % count]
        before = cuts[i] + cuts[i - 1]
        share = min(
            1.0, sides[i] / after if after else 1.0, sides[i - 1] / before if before else 1.0
        )
        cut = cuts[i] * share
        if cut <= 0.0:
            rows.append((x, y, 0.0))
            continue
        rows.extend(_corner_arc(corners[i - 1], corners[i], corners[(i + 1) % count], cut))
    return _without_repeats(np.array(rows))


def following(values: Floats) -> Floats:
    """Return each row's next one, the first after the last (np.roll, but quick)."""
    return np.concatenate([values[1:], values[:1]])


def _cut_length(corners: Sequence[tuple[float, float, float]], i: int) -> float:
    """Distance from corner ``i`` to where its rounding touches the sides."""
    radius = corners[i][2]
    if radius <= 0.0:
        return 0.0
    turn = abs(_turn(corners[i - 1], corners[i], corners[(i + 1) % len(corners)]))
    return radius * math.tan(0.5 * turn) if turn < math.pi - 1e-9 else 0.0


def _turn(before: Sequence[float], here: Sequence[float], after: Sequence[float]) -> float:
    ax, ay = here[0] - before[0], here[1] - before[1]
    bx, by = after[0] - here[0], after[1] - here[1]
    return math.atan2(ax * by - ay * bx, ax * bx + ay * by)


def _corner_arc(
    before: Sequence[float], here: Sequence[float], after: Sequence[float], cut: float
) -> list[tuple[float, float, float]]:
    rows = []
    for other, bulge in ((before, math.tan(_turn(before, here, after) / 4.0)), (after, 0.0)):
        length = math.hypot(other[0] - here[0], other[1] - here[1])
        rows.append(
            (
                here[0] + (other[0] - here[0]) * cut / length,
                here[1] + (other[1] - here[1]) * cut / length,
                bulge,
            )
        )
    return rows


def _raw_moments(rows: Floats) -> Floats:
    """Area, ∫x, ∫y, ∫x², ∫y², ∫xy about the origin, signed by the direction of the loop."""
    x, y = rows[:, 0], rows[:, 1]
    x2, y2 = following(x), following(y)
    cross = x * y2 - x2 * y
    total = np.array(
        [
            cross.sum() / 2.0,
            (cross * (x + x2)).sum() / 6.0,
            (cross * (y + y2)).sum() / 6.0,
            (cross * (x * x + x * x2 + x2 * x2)).sum() / 12.0,
            (cross * (y * y + y * y2 + y2 * y2)).sum() / 12.0,
            (cross * (x * y2 + 2.0 * x * y + 2.0 * x2 * y2 + x2 * y)).sum() / 24.0,
        ]
    )
    curved = np.flatnonzero(rows[:, 2])
    for i in curved.tolist():
        total += _segment(float(x[i]), float(y[i]), float(x2[i]), float(y2[i]), float(rows[i, 2]))
    return total


def _segment(x: float, y: float, x2: float, y2: float, bulge: float) -> Floats:
    """Moments of the circular segment between an arc and its chord, signed by its bulge.

    With the half sweep a, u along the bisector from the centre and v across it:
    A = r²(a - sin a cos a), ∫u = (2/3) r³ sin³a, ∫u² = (r⁴/4)(a + s c - 2 s c³),
    ∫v² = (r⁴/4)(a - s c - (2/3) s³ c), with s = sin a, c = cos a.  Sector less triangle; SymPy
    confirms them in the tests.
    """
    cx, cy, radius, first, sweep = arc_of(x, y, x2, y2, bulge)
    half, sign = abs(sweep) / 2.0, math.copysign(1.0, sweep)
    s, c = math.sin(half), math.cos(half)
    area = radius**2 * (half - s * c)
    mu = 2.0 / 3.0 * radius**3 * s**3
    uu = radius**4 / 4.0 * (half + s * c - 2.0 * s * c**3)
    vv = radius**4 / 4.0 * (half - s * c - 2.0 / 3.0 * s**3 * c)
    bisector = first + sweep / 2.0
    p, q = math.cos(bisector), math.sin(bisector)
    return sign * np.array(
        [
            area,
            area * cx + mu * p,
            area * cy + mu * q,
            area * cx * cx + 2.0 * cx * mu * p + uu * p * p + vv * q * q,
            area * cy * cy + 2.0 * cy * mu * q + uu * q * q + vv * p * p,
            area * cx * cy + cx * mu * q + cy * mu * p + (uu - vv) * p * q,
        ]
    )


def _quarter_turns_between(first: float, sweep: float) -> list[float]:
    quarter = math.pi / 2.0
    low, high = min(first, first + sweep), max(first, first + sweep)
    slack = 1e-9
    cuts = [
        k * quarter
        for k in range(math.ceil((low + slack) / quarter), math.floor((high - slack) / quarter) + 1)
    ]
    return cuts if sweep > 0.0 else cuts[::-1]


def _on_circle(cx: float, cy: float, radius: float, angle: float) -> tuple[float, float]:
    return cx + radius * math.cos(angle), cy + radius * math.sin(angle)


def _without_repeats(rows: Floats) -> Floats:
    """Drop vertices that repeat the next one; a bulge between equal points has no length."""
    size = float(np.abs(rows[:, :2] - rows[0, :2]).max(initial=0.0))
    gap = np.abs(rows[:, :2] - following(rows[:, :2])).max(axis=1)
    keep = gap > 1e-9 * size
    return rows[keep] if not keep.all() else rows
