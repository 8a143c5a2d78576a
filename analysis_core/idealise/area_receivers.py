"""The beams and walls that carry an area: at its level, and under it or along its edge."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from analysis_core.building import Area, Carrier
from analysis_core.idealise.beams import Beam, beam_of
from analysis_core.idealise.bearings import kind_of
from analysis_core.idealise.draft import Draft
from analysis_core.idealise.grid_index import GridIndex
from analysis_core.idealise.plan import Ray, Spot, centre, extent

# Below a slab there may be packing, below the floor of a space the slab itself (m).
_PACKING, _BELOW_SPACE = 0.3, 0.8
# A line this far outside the outline still carries its edge (m).
_BESIDE = 0.35
# Less than this of a line under an area is a line that only touches its corner (m).
_LEAST = 0.6
_SAME_LINE = 0.15
_LOOKS = 17


@dataclass(frozen=True, slots=True)
class Receiver:
    """A bar of a draft (or a wall, without one) as a segment in plan."""

    segment: tuple[Spot, Spot]
    bottom: float
    top: float
    name: str
    draft: Draft | None = None
    number: int = 0


class Receivers:
    """All bars and walls of a building, found by area."""

    def __init__(self, drafts: Iterable[Draft], carriers: Iterable[Carrier]) -> None:
        self._index: GridIndex[Receiver] = GridIndex()
        extents: dict[str, Beam] = {}
        for draft in drafts:
            for number, bar in enumerate(draft.bars):
                if bar.role == "span":
                    key = bar.member.global_id
                    beam = extents.setdefault(key, beam_of(bar.member))
                    self._enter(_of_bar(draft, number, beam))
        for carrier in sorted(carriers, key=lambda c: c.global_id):
            if kind_of(carrier) == "wall" and len(carrier.corners) >= 3:
                self._enter(_of_wall(carrier))

    def of(self, area: Area) -> list[Receiver]:
        """Return what carries an area: no two on one line, beams before walls."""
        xs, ys = zip(*area.outline, strict=True)
        below = _BELOW_SPACE if area.ifc_class == "IfcSpace" else _PACKING
        box = (
            min(xs) - _BESIDE, min(ys) - _BESIDE, area.bottom - below,
            max(xs) + _BESIDE, max(ys) + _BESIDE, area.top,
        )  # fmt: skip
        found: list[Receiver] = []
        for receiver in self._index.near_box(box):
            highest = area.top - 0.02 if receiver.draft else area.bottom - _PACKING
            if receiver.top < box[2] or receiver.bottom > highest:
                continue  # too low, or it stands on the area
            if not _under(receiver.segment, area.outline):
                continue
            if not any(_one_line(receiver.segment, other.segment) for other in found):
                found.append(receiver)
        return found

    def _enter(self, receiver: Receiver) -> None:
        (ax, ay), (bx, by) = receiver.segment
        low, high = (ax, ay, receiver.bottom), (bx, by, receiver.top)
        self._index.add_segment(receiver, low, high, _BESIDE)


def _of_bar(draft: Draft, number: int, beam: Beam) -> Receiver:
    bar = draft.bars[number]
    p, q = draft.point(bar.start), draft.point(bar.end)
    return Receiver(
        ((p[0], p[1]), (q[0], q[1])),
        min(p[2], q[2]) - beam.below,
        max(p[2], q[2]) + beam.above,
        bar.member.global_id,
        draft,
        number,
    )


def _of_wall(carrier: Carrier) -> Receiver:
    """A wall carries along the middle of its longer side."""
    corners = carrier.corners
    sides = zip(corners, [*corners[1:], corners[0]], strict=True)
    a, b = max(sides, key=lambda side: math.dist(*side))
    size = math.dist(a, b)
    direction = ((b[0] - a[0]) / size, (b[1] - a[1]) / size)
    ray = Ray(centre(corners), direction)
    low, high, right, left = extent([ray.local(corner) for corner in corners])
    middle = (right + left) / 2.0
    shift = (-direction[1] * middle, direction[0] * middle)
    ends = [ray.at(low), ray.at(high)]
    p, q = ((x + shift[0], y + shift[1]) for x, y in ends)
    return Receiver((p, q), carrier.bottom, carrier.top, carrier.global_id)


def _under(segment: tuple[Spot, Spot], outline: Sequence[Spot]) -> bool:
    """Whether enough of a segment lies under an outline, or beside it."""
    (ax, ay), (bx, by) = segment
    size = math.hypot(bx - ax, by - ay)
    if size <= 0.0:
        return False
    low, high = _within_box(segment, outline)
    least = min(_LEAST, 0.8 * size)
    if (high - low) * size < least:
        return False
    inside = 0
    for step in range(_LOOKS):
        share = low + (high - low) * (step + 0.5) / _LOOKS
        spot = (ax + share * (bx - ax), ay + share * (by - ay))
        inside += _near(spot, outline)
    return inside * (high - low) * size / _LOOKS >= least


def _within_box(segment: tuple[Spot, Spot], outline: Sequence[Spot]) -> tuple[float, float]:
    """Return the part of a segment, as fractions, within the box around an outline."""
    low, high = 0.0, 1.0
    for axis in (0, 1):
        values = [spot[axis] for spot in outline]
        near, far = min(values) - _BESIDE, max(values) + _BESIDE
        start, run = segment[0][axis], segment[1][axis] - segment[0][axis]
        if abs(run) < 1e-9:
            if not near <= start <= far:
                return 0.0, 0.0
            continue
        ends = sorted(((near - start) / run, (far - start) / run))
        low, high = max(low, ends[0]), min(high, ends[1])
    return low, max(low, high)


def _near(spot: Spot, outline: Sequence[Spot]) -> bool:
    within = False
    x, y = spot
    nearest = math.inf
    for (ax, ay), (bx, by) in zip(outline, [*outline[1:], outline[0]], strict=True):
        if (ay > y) != (by > y) and x < ax + (bx - ax) * (y - ay) / (by - ay):
            within = not within
        dx, dy = bx - ax, by - ay
        square = dx * dx + dy * dy
        share = 0.0
        if square > 0.0:
            share = min(1.0, max(0.0, ((x - ax) * dx + (y - ay) * dy) / square))
        nearest = min(nearest, math.hypot(x - ax - share * dx, y - ay - share * dy))
    return within or nearest <= _BESIDE


def _one_line(a: tuple[Spot, Spot], b: tuple[Spot, Spot]) -> bool:
    """Whether two segments lie beside each other over more than a touch."""
    size = math.dist(*a)
    ray = Ray(a[0], ((a[1][0] - a[0][0]) / size, (a[1][1] - a[0][1]) / size))
    low, high, right, left = extent([ray.local(corner) for corner in b])
    overlap = min(high, size) - max(low, 0.0)
    return max(abs(right), abs(left)) <= _SAME_LINE and overlap > _SAME_LINE
