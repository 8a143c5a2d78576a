"""A chain of physical beams with its bearings becomes the draft of a line."""

from __future__ import annotations

import itertools
import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from analysis_core.idealise.beams import Beam
from analysis_core.idealise.bearings import RANK, Bearing
from analysis_core.idealise.chains import Link
from analysis_core.idealise.draft import Bar, Draft, DraftJoint
from analysis_core.idealise.lines import line_direction, runs_forward
from analysis_core.idealise.planes import Plane
from analysis_core.idealise.vectors import Vector, along, dot, horizontal, scale, subtract, unit
from analysis_core.model import Point
from analysis_core.settings import Tolerances

# Joints nearer than this are one (m).
_ONE_JOINT = 1e-3


@dataclass(slots=True)
class Seating:
    """A bearing on a line: ``run`` m along its axis; ``best`` carries, ``others`` touch too.

    ``outer``: -1 at the start of the line, 1 at its end, 0 in between.
    """

    run: float
    best: Bearing
    beam: str
    """The beam of the chain that bears here, for which ``best`` was measured."""
    others: list[Bearing] = field(default_factory=list)
    outer: int = 0


@dataclass(slots=True)
class Chain:
    """Beams in order along one axis, with the bearings found on it."""

    beams: list[Beam]
    links: list[Link]
    """links[i] joins beams[i] and beams[i + 1]."""
    origin: Point
    direction: Vector
    seatings: list[Seating] = field(default_factory=list)
    start: float = 0.0
    end: float = 0.0
    first: float = 0.0
    """Where the first joint of its draft lies."""
    _starts: dict[str, tuple[float, float]] = field(default_factory=dict)

    def run(self, point: Point) -> float:
        """Return how far along the chain's axis a point lies."""
        return dot(subtract(point, self.origin), self.direction)

    def sense(self, beam: Beam) -> float:
        """Return 1 where a beam is drawn along the chain, -1 where against it."""
        return self._drawn(beam)[1]

    def run_of(self, beam: Beam, place: float) -> float:
        """Return how far along the chain a place of a beam (measured in plan) lies."""
        start, sense = self._drawn(beam)
        return start + sense * beam.station(place)

    def _drawn(self, beam: Beam) -> tuple[float, float]:
        found = self._starts.get(beam.id)
        if found is None:
            sense = 1.0 if dot(beam.direction, self.direction) > 0.0 else -1.0
            found = self._starts[beam.id] = (self.run(beam.member.start), sense)
        return found


def chain_of(
    beams: list[Beam], links: Mapping[frozenset[str], Link], tolerances: Tolerances
) -> Chain:
    """Return a chain, turned so that it runs from its start to its end.

    Flatter than the tolerance counts as horizontal, so that axes a few millimetres apart in
    height make no slope.
    """
    members = [beam.member for beam in beams]
    direction = line_direction(members)
    if not runs_forward(members, direction):
        direction = scale(direction, -1.0)
        beams = beams[::-1]
    if abs(direction[2]) <= math.sin(tolerances.horizontal):
        direction = unit(horizontal(direction))
    first = beams[0].member
    origin = min((first.start, first.end), key=lambda p: dot(subtract(p, first.start), direction))
    joined = [links[frozenset((a.id, b.id))] for a, b in itertools.pairwise(beams)]
    chain = Chain(beams, joined, origin, direction)
    last = beams[-1].member
    chain.end = max(chain.run(last.start), chain.run(last.end))
    return chain


def seat(chain: Chain, bearings: Mapping[str, list[Bearing]], tolerances: Tolerances) -> None:
    """Choose the bearings of a chain: one seating per place, the best candidate of each.

    Touching candidates come before those a gap away, then columns, walls, footings, beams below,
    beams, slabs, then the larger and the nearer.
    """
    found: list[tuple[float, Bearing, str, int]] = []
    for number, beam in enumerate(chain.beams):
        for bearing in _firm_first(bearings[beam.id], tolerances):
            run = chain.run_of(beam, bearing.along)
            outer = outer_end(chain, number, beam, bearing)
            # Beams at the same level hold up an end, or are a crossing: see ``meetings``.
            if outer or (bearing.kind != "beam" and _within(chain, run)):
                found.append((run, bearing, beam.id, outer))
    found.sort(key=lambda item: (item[0], RANK[item[1].kind], item[1].id))
    for group in _grouped(found, tolerances):
        group.sort(key=lambda item: _preference(item[1], tolerances))
        run, best, beam_id, _ = group[0]
        outer = next((o for *_, o in group if o), 0)
        others = [b for _, b, _, _ in group[1:] if b.id != best.id]
        chain.seatings.append(Seating(run, best, beam_id, others, outer))


def _firm_first(bearings: list[Bearing], tolerances: Tolerances) -> list[Bearing]:
    """Leave out what a gap parts from an end that touches something else."""
    touched = {b.end for b in bearings if b.end is not None and b.gap <= tolerances.join}
    return [b for b in bearings if b.gap <= tolerances.join or b.end not in touched]


def _preference(bearing: Bearing, tolerances: Tolerances) -> tuple[bool, int, float, float, str]:
    ends_there = bearing.kind == "beam" and not bearing.passes
    return (
        bearing.gap > tolerances.join or ends_there,
        RANK[bearing.kind],
        -round(bearing.size, 3),
        round(bearing.distance, 4),
        bearing.id,
    )


def outer_end(chain: Chain, number: int, beam: Beam, bearing: Bearing) -> int:
    """Return -1 or 1 where a bearing is at the outer end of the chain, else 0."""
    if bearing.end is None:
        return 0
    points_on = (bearing.end == 1) == (chain.sense(beam) > 0.0)
    if number == 0 and not points_on:
        return -1
    if number == len(chain.beams) - 1 and points_on:
        return 1
    return 0


def _within(chain: Chain, run: float) -> bool:
    return chain.start - _ONE_JOINT <= run <= chain.end + _ONE_JOINT


def _grouped(
    found: list[tuple[float, Bearing, str, int]], tolerances: Tolerances
) -> list[list[tuple[float, Bearing, str, int]]]:
    """Candidates at one place: within the tolerance of a bearing, of the same element, or at
    one end of the line.  Two posts side by side hold a beam at one place; they do not clamp it.
    """
    groups: list[list[tuple[float, Bearing, str, int]]] = []
    for item in found:
        run, bearing, _, outer = item
        if groups:
            last = groups[-1]
            near = run - last[0][0] <= max(
                tolerances.bearing, (bearing.width + last[-1][1].width) / 2.0
            )
            same_end = outer != 0 and any(o == outer for *_, o in last)
            again = any(b.id == bearing.id for _, b, _, _ in last) and not bearing.lengthwise
            if near or same_end or again:
                last.append(item)
                continue
        groups.append([item])
    return groups


def draft_of(chain: Chain, tolerances: Tolerances) -> Draft:
    """Return the draft of a chain: a joint at every bearing, splice and free end.

    The line runs from the axis of its first bearing to that of its last, whether its members
    reach them or pass them by less than the bearing's width; what passes farther overhangs.
    """
    places: list[tuple[float, str]] = [(s.run, seat_key(s)) for s in chain.seatings]
    start, end = chain.start, chain.end
    for seating in chain.seatings:
        if seating.outer < 0:
            start = seating.run
        elif seating.outer > 0:
            end = seating.run
    places = [p for p in places if start - _ONE_JOINT <= p[0] <= end + _ONE_JOINT]
    bounds = [start]
    for number, link in enumerate(chain.links):
        at, key = _boundary(chain, number, link, tolerances)
        bounds.append(at)
        if key not in (k for _, k in places):
            places.append((at, key))
    bounds.append(end)
    for at, key in ((start, "start"), (end, "end")):
        if not any(abs(p - at) <= _ONE_JOINT for p, _ in places):
            places.append((at, key))
    places.sort()
    return _laid_out(chain, places, bounds)


def seat_key(seating: Seating) -> str:
    """Return the key of the joint at a seating."""
    return f"{seating.best.id} {seating.run:.3f}"


def _boundary(chain: Chain, number: int, link: Link, tolerances: Tolerances) -> tuple[float, str]:
    """Return where one beam of a chain gives way to the next, and the joint's key."""
    before, after = chain.beams[number], chain.beams[number + 1]
    last = max(chain.run(before.member.start), chain.run(before.member.end))
    first = min(chain.run(after.member.start), chain.run(after.member.end))
    middle = (last + first) / 2.0
    for seating in chain.seatings:
        ids = {seating.best.id, *(b.id for b in seating.others)}
        over = link.how == "bearing" and link.bearing in ids
        near = abs(seating.run - middle) <= max(tolerances.join, seating.best.width / 2.0)
        if near or (over and abs(seating.run - middle) <= abs(link.gap) + tolerances.bearing):
            return seating.run, seat_key(seating)
    return middle, f"splice {before.id} {after.id}"


def _laid_out(chain: Chain, places: list[tuple[float, str]], bounds: list[float]) -> Draft:
    first = chain.first = places[0][0]
    flat, rise = math.hypot(chain.direction[0], chain.direction[1]), chain.direction[2]
    plane = Plane(along(chain.origin, chain.direction, first), unit(horizontal(chain.direction)))
    joints = [DraftJoint((at - first) * flat, (at - first) * rise, key) for at, key in places]
    draft = Draft(plane, "line", joints, [])
    for index, ((low, _), (high, _)) in enumerate(itertools.pairwise(places)):
        middle = (low + high) / 2.0
        number = sum(bound <= middle for bound in bounds[1:-1])
        beam = chain.beams[number]
        origin, sense = chain.run(beam.member.start), chain.sense(beam)
        stations = sense * (low - origin), sense * (high - origin)
        draft.bars.append(Bar(beam.member, index, index + 1, *stations))
    return draft
