"""What a physical beam may bear on: columns, walls, footings, slabs and other beams near it.

Every candidate is measured; ``chains`` and ``bearing_choice`` decide among them.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from typing import Literal

from analysis_core.building import AxisMember, Carrier
from analysis_core.idealise.beams import Beam
from analysis_core.idealise.plan import (
    Spot,
    area,
    centre,
    crossing,
    extent,
    gap_to,
    meeting,
)
from analysis_core.settings import Tolerances

Kind = Literal["bearing", "column", "wall", "footing", "beam below", "beam", "slab"]
# Which of several touching elements carries: the stiffest first (common practice).
RANK: dict[Kind, int] = {
    "bearing": 0, "column": 1, "wall": 2, "footing": 3, "beam below": 4, "beam": 5, "slab": 6,
}  # fmt: skip
# A stretch of contact longer than this is a beam lying along what carries it (m).
_ALONG = 1.0
# Undersides and upper sides nearer than this touch (m).
_LIFT = 0.1
# Beams at a flatter angle than this run side by side rather than meet.
SKEW = math.sin(math.radians(15.0))


@dataclass(frozen=True, slots=True)
class Bearing:
    """A place where a beam may bear.

    ``along`` is where it is taken to act, ``low`` and ``high`` the faces of what carries (all m
    along the beam's plan axis from its start).  ``end``: at the beam's start (0) or end (1), None
    in between.  ``gap`` is the clear distance between both, ``distance`` that from the beam's end
    to the axis of what carries, ``size`` its area in plan.  ``passes`` tells, for beams, whether
    the other one goes on beyond the place.
    """

    id: str
    name: str
    kind: Kind
    along: float
    low: float
    high: float
    end: int | None
    gap: float
    distance: float
    size: float = 0.0
    other_along: float = 0.0
    passes: bool = True
    lengthwise: bool = False

    @property
    def width(self) -> float:
        """Width of what carries, along the beam."""
        return self.high - self.low


def kind_of(carrier: Carrier | AxisMember) -> Kind | None:
    """Return the kind of bearing that a class of element makes, None where it makes none."""
    return _kind_of_class(carrier.ifc_class)


@cache
def _kind_of_class(ifc_class: str) -> Kind | None:
    name = ifc_class.casefold()
    return next((kind for word, kind in _CLASSES if word in name), None)


_CLASSES: tuple[tuple[str, Kind], ...] = (
    ("ifcbearing", "bearing"),
    ("column", "column"),
    ("pile", "column"),
    ("wall", "wall"),
    ("footing", "footing"),
    ("foundation", "footing"),
    ("slab", "slab"),
    ("beam", "column"),  # a steep beam or member that stands under others
    ("member", "column"),
)


def bearings_on_carrier(beam: Beam, carrier: Carrier, tolerances: Tolerances) -> Iterator[Bearing]:
    """Yield where a beam may bear on a column, wall, footing or slab near it."""
    kind = kind_of(carrier)
    highest = max(beam.level(0.0), beam.level(beam.run))
    if kind is None or carrier.bottom >= highest:  # it stands on the beam, or higher
        return
    local = [beam.ray.local(corner) for corner in carrier.corners]
    near, far, right, left = extent(local)
    reach = tolerances.bearing
    if near > beam.run + reach or far < -reach:
        return
    sideways = beam.half_width + tolerances.join
    touching = right <= sideways and left >= -sideways
    faces = crossing(local) or (near, far)
    if not touching:
        yield from _beside_end(beam, carrier, kind, faces, tolerances)
        return
    contact = max(faces[0], 0.0), min(faces[1], beam.run)
    if kind == "slab":
        yield from _on_slab(beam, carrier, contact, tolerances)
        return
    if contact[1] - contact[0] > _ALONG and kind != "column":
        under = right <= tolerances.join and left >= -tolerances.join
        if under and _holds(beam, carrier, kind, sum(contact) / 2.0, tolerances):
            top = beam.top(sum(contact) / 2.0)
            on_top = carrier.top <= top + tolerances.join
            yield from _lengthwise(beam, carrier, kind, contact, everywhere=on_top)
        return
    along = _axis_place(beam, carrier, kind, faces, contact)
    place = min(max(along, 0.0), beam.run)
    if not _holds(beam, carrier, kind, place, tolerances):
        return
    yield _bearing(beam, carrier, kind, along, faces, tolerances)


def _beside_end(
    beam: Beam, carrier: Carrier, kind: Kind, faces: tuple[float, float], tolerances: Tolerances
) -> Iterator[Bearing]:
    """A column or wall that the beam's axis misses sideways, but its end comes close to."""
    if kind not in ("column", "wall") or faces[1] - faces[0] > _ALONG:
        return
    for end in (0, 1):
        spot = beam.end_spot(last=bool(end))
        place = beam.run * end
        clear = gap_to(carrier.corners, spot)
        gap = max(clear - beam.half_width, _lift(beam, carrier, place))
        if clear > tolerances.bearing or not _holds(beam, carrier, kind, place, tolerances):
            continue
        middle = sum(faces) / 2.0
        if abs(middle - place) > tolerances.bearing + (faces[1] - faces[0]) / 2.0:
            continue
        off = math.dist(spot, _axis_spot(beam, carrier, place))
        yield Bearing(
            carrier.global_id, carrier.name, kind, middle, *faces, end, gap, off,
            area(carrier.corners),
        )  # fmt: skip


def _bearing(
    beam: Beam,
    carrier: Carrier,
    kind: Kind,
    along: float,
    faces: tuple[float, float],
    tolerances: Tolerances,
) -> Bearing:
    end = _end_at(beam, faces, along, tolerances)
    place = beam.run if end == 1 else 0.0 if end == 0 else along
    gap = max(faces[0] - place, place - faces[1], _lift(beam, carrier, place))
    off = math.dist(beam.ray.at(place), _axis_spot(beam, carrier, place))
    if kind in ("wall", "footing"):
        off = abs(along - place)
    return Bearing(
        carrier.global_id, carrier.name, kind, along, *faces, end, gap, off, area(carrier.corners)
    )


def _lift(beam: Beam, carrier: Carrier, place: float) -> float:
    """Return the height between a carrier's top and the beam's underside, 0 where they touch."""
    lift = beam.bottom(place) - carrier.top
    return lift if lift > _LIFT else 0.0


def _end_at(
    beam: Beam, faces: tuple[float, float], along: float, tolerances: Tolerances
) -> int | None:
    """Return which end of the beam stands in (or stops short of) what lies between two faces."""
    slack, reach = tolerances.join, beam.run
    starts = faces[0] - slack <= 0.0 <= faces[1] + tolerances.bearing or along <= 0.0
    ends = faces[0] - tolerances.bearing <= reach <= faces[1] + slack or along >= reach
    if starts and ends:
        return 0 if abs(along) <= abs(reach - along) else 1
    return 0 if starts else 1 if ends else None


def _axis_spot(beam: Beam, carrier: Carrier, place: float) -> Spot:
    """Return the plan point of a column's axis at the beam's level, else of its middle."""
    if carrier.start is None or carrier.end is None:
        return centre(carrier.corners)
    (x1, y1, z1), (x2, y2, z2) = carrier.start, carrier.end
    if abs(z2 - z1) < 1e-9:
        return centre(carrier.corners)
    share = min(1.0, max(0.0, (beam.level(place) - z1) / (z2 - z1)))
    return x1 + share * (x2 - x1), y1 + share * (y2 - y1)


def _axis_place(
    beam: Beam,
    carrier: Carrier,
    kind: Kind,
    faces: tuple[float, float],
    contact: tuple[float, float],
) -> float:
    """Return where along the beam a bearing is taken to act: on the axis of what carries."""
    if kind == "column":
        place = min(max(sum(faces) / 2.0, 0.0), beam.run)
        return beam.ray.local(_axis_spot(beam, carrier, place))[0]
    if faces[1] - faces[0] <= _ALONG:
        return sum(faces) / 2.0
    if contact[0] > contact[1]:  # it stops short of something long: its face
        return faces[0] if faces[0] > beam.run else faces[1]
    return sum(contact) / 2.0


def _holds(beam: Beam, carrier: Carrier, kind: Kind, place: float, tolerances: Tolerances) -> bool:
    """Return whether an element stands under (or beside) the beam rather than on top of it.

    A column or wall holds where it comes from below and reaches the beam's underside within the
    tolerance; it may pass the beam.  What starts at the beam's axis or higher stands on it.
    """
    bottom, level = beam.bottom(place), beam.level(place)
    reaches = carrier.top >= bottom - tolerances.bearing
    if kind == "footing":
        return reaches and carrier.bottom < bottom
    depth = beam.above + beam.below
    return reaches and carrier.bottom < min(level, bottom + 0.25 * depth) - tolerances.join


def _on_slab(
    beam: Beam, carrier: Carrier, contact: tuple[float, float], tolerances: Tolerances
) -> Iterator[Bearing]:
    """A slab carries what rests on its top: a whole beam, or the foot of a rafter."""
    if contact[0] > contact[1]:
        return
    lift = [beam.bottom(place) - carrier.top for place in contact]
    rests = [abs(gap) <= _LIFT for gap in lift]
    if all(rests):
        yield from _lengthwise(beam, carrier, "slab", contact, everywhere=True)
        return
    for place, on in zip(contact, rests, strict=True):
        end = 0 if place <= 0.0 else 1 if place >= beam.run else None
        if on and end is not None:
            yield Bearing(
                carrier.global_id, carrier.name, "slab", place, place, place, end, 0.0, 0.0
            )


def _lengthwise(
    beam: Beam, carrier: Carrier, kind: Kind, contact: tuple[float, float], *, everywhere: bool
) -> Iterator[Bearing]:
    """A beam that lies along what carries it.

    On top of it (a wall plate) it is held at every metre or less; within it (a lintel, with the
    wall going on above) at both ends of the contact, as an opening is probably below.
    """
    size = contact[1] - contact[0]
    count = max(1, math.ceil(size / _ALONG - 1e-6)) if everywhere else 1
    for step in range(count + 1):
        place = contact[0] + size * step / count
        end = 0 if place <= 0.0 else 1 if place >= beam.run else None
        yield Bearing(
            carrier.global_id, carrier.name, kind, place, place, place, end, 0.0, 0.0,
            lengthwise=True,
        )  # fmt: skip


def bearings_on_beam(beam: Beam, other: Beam, tolerances: Tolerances) -> Iterator[Bearing]:
    """Yield where a beam may bear on another: on top of it, or at its side."""
    crossing_at = meeting(beam.ray, other.ray)
    if crossing_at is None:
        return
    (ax, ay), (bx, by) = beam.ray.direction, other.ray.direction
    turn = abs(ax * by - ay * bx)
    if turn < SKEW:
        return
    along, there = crossing_at
    half, own = other.half_width / turn, beam.half_width / turn
    faces = along - half, along + half
    if not (-tolerances.bearing - half <= along <= beam.run + half + tolerances.bearing):
        return
    if not (-tolerances.join - own <= there <= other.run + own + tolerances.join):
        return
    place = min(max(along, 0.0), beam.run)
    spot = min(max(there, 0.0), other.run)
    kind = _beam_kind(beam, other, place, spot)
    if kind is None:
        return
    end = _end_at(beam, faces, along, tolerances)
    at = beam.run if end == 1 else 0.0 if end == 0 else along
    other_faces = there - own, there + own
    yield Bearing(
        other.id,
        other.member.name,
        kind,
        along,
        *faces,
        end,
        max(faces[0] - at, at - faces[1], 0.0),
        abs(along - at),
        other_along=spot,
        passes=_end_at(other, other_faces, there, tolerances) is None,
    )


def _beam_kind(beam: Beam, other: Beam, place: float, spot: float) -> Kind | None:
    """Return whether the other beam lies below, or at the same level; None: neither."""
    own_bottom, own_top = beam.bottom(place), beam.top(place)
    bottom, top = other.bottom(spot), other.top(spot)
    shared = min(own_top, top) - max(own_bottom, bottom)
    smaller = min(own_top - own_bottom, top - bottom)
    if smaller <= 0.0:  # a section is not known: only the axes can tell
        lower = beam.level(place) - other.level(spot)
        if abs(lower) <= _LIFT:
            return "beam"
        return "beam below" if 0.0 < lower <= 0.5 else None
    if abs(top - own_bottom) <= min(_LIFT, 0.5 * smaller):
        return "beam below"
    return "beam" if shared > 0.25 * smaller else None
