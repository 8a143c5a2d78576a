"""Putting forces that act on a member onto the bars of the drafts in which it lies."""

from __future__ import annotations

from dataclasses import dataclass, field

from analysis_core.idealise.draft import Bar, Draft
from analysis_core.model import (
    Action,
    DistributedForce,
    ImposedCurvature,
    JointForce,
    PointForce,
    PointMoment,
)

# (to the right, up) in the plane of a draft, N or N/m.
Pair = tuple[float, float]
_NEAR = 1e-6


@dataclass(frozen=True, slots=True)
class Seat:
    """One bar of a member in one draft, by its number there.

    ``low`` and ``high`` are the lowest and highest station of the member on it, ``length`` its
    length, ``stretch`` the metres of member per metre of it, ``way`` its direction (right, up).
    """

    draft: Draft
    number: int
    bar: Bar
    low: float
    high: float
    length: float
    stretch: float
    way: Pair

    @classmethod
    def of(cls, draft: Draft, number: int) -> Seat:
        """Return the seat of a bar."""
        bar = draft.bars[number]
        low, high = sorted((bar.station_start, bar.station_end))
        size = draft.length(bar)
        return cls(draft, number, bar, low, high, size, (high - low) / size, draft.direction(bar))

    def position(self, station: float) -> float:
        """Return the place on the bar of a station of the member, kept within the bar."""
        share = (station - self.bar.station_start) / (self.bar.station_end - self.bar.station_start)
        return min(max(share, 0.0), 1.0) * self.length

    def local(self, force: Pair) -> Pair:
        """Return (transverse, axial) of a force (right, up): see the sketch in ``model``."""
        cos, sin = self.way
        across, lengthwise = force[0] * sin - force[1] * cos, force[0] * cos + force[1] * sin
        nothing = 1e-12 * (abs(force[0]) + abs(force[1]))  # what rounding leaves of a zero
        return (
            across if abs(across) > nothing else 0.0,
            lengthwise if abs(lengthwise) > nothing else 0.0,
        )


@dataclass(slots=True)
class Placer:
    """Collects the actions of each draft (by its number in ``drafts``)."""

    drafts: list[Draft]
    actions: dict[int, list[Action]] = field(default_factory=dict)
    _seats: dict[str, dict[int, list[Seat]]] = field(default_factory=dict)
    _numbers: dict[int, int] = field(default_factory=dict)

    def __post_init__(self) -> None:
        for index, draft in enumerate(self.drafts):
            self._numbers[id(draft)] = index
            for number, bar in enumerate(draft.bars):
                by_draft = self._seats.setdefault(bar.member.global_id, {})
                by_draft.setdefault(index, []).append(Seat.of(draft, number))
        for by_draft in self._seats.values():
            for seats in by_draft.values():
                seats.sort(key=lambda seat: seat.low)

    def drafts_of(self, member: str) -> list[Draft]:
        """Return the drafts in which a member lies, in order of their number."""
        return [self.drafts[i] for i in sorted(self._seats.get(member, ()))]

    def seats(self, draft: Draft, member: str) -> list[Seat]:
        """Return the bars of a member in a draft, from its start to its end."""
        return self._seats[member][self._numbers[id(draft)]]

    def put(self, draft: Draft, *actions: Action) -> None:
        """Add ready actions to a draft."""
        self.actions.setdefault(self._numbers[id(draft)], []).extend(actions)

    def spread(
        self,
        draft: Draft,
        member: str,
        case: str,
        stations: tuple[float, float],
        forces: tuple[Pair, Pair],
        source: str,
    ) -> None:
        """Put a force per metre of member, linear between two stations, onto its bars.

        What lies on no bar (a member drawn past the axis of its last bearing, or the width of a
        bearing between clear spans) goes to the nearest bar's end as a point force, so that
        nothing of the total is lost.
        """
        seats = self.seats(draft, member)
        start, end = stations
        reached = start
        for index, seat in enumerate(seats):
            last = index == len(seats) - 1
            low, high = max(start, reached), end if last else min(end, seat.high)
            reached = seat.high
            inner = max(low, seat.low), min(high, seat.high)
            for part in ((low, min(high, seat.low)), (max(low, seat.high), high)):
                if part[1] - part[0] > _NEAR:
                    self._heap(seat, case, stations, forces, part, source)
            if inner[1] - inner[0] > _NEAR * seat.length:
                self._lay(seat, case, stations, forces, inner, source)

    def fill(
        self, draft: Draft, member: str, case: str, forces: tuple[Pair, Pair], source: str
    ) -> None:
        """Put a force per metre on all bars of a member, with whatever they reach beyond it.

        ``forces`` hold at the member's start and end.  What clear spans leave out over a bearing
        goes to the end of the bar there.
        """
        seats = self.seats(draft, member)
        stations = seats[0].low, seats[-1].high
        first = last = forces[0]
        for seat in seats:
            if forces[0] != forces[1]:
                first = between(stations, forces, seat.low)
                last = between(stations, forces, seat.high)
            self._press(seat, case, first, last, (0.0, seat.length), source)
            self._press_bearings(seat, case, (first, last), source)

    def _press_bearings(
        self, seat: Seat, case: str, forces: tuple[Pair, Pair], source: str
    ) -> None:
        """``forces`` per metre hold at the lowest and highest station of the bar."""
        if seat.bar.station_start > seat.bar.station_end:
            forces = forces[1], forces[0]
        for place, cut, force in zip((0.0, seat.length), seat.bar.cuts, forces, strict=True):
            transverse, axial = seat.local(force)
            if cut and (transverse or axial):
                size = cut * seat.stretch
                self.put(
                    seat.draft,
                    PointForce(case, seat.number, place, size * transverse, size * axial, source),
                )

    def point(
        self, draft: Draft, member: str, case: str, station: float, force: Pair, source: str
    ) -> None:
        """Put a force (N) at a station of a member."""
        seat = self._seat_at(draft, member, station)
        transverse, axial = seat.local(force)
        at = seat.position(station)
        self.put(draft, PointForce(case, seat.number, at, transverse, axial, source))

    def couple(
        self, draft: Draft, member: str, case: str, station: float, moment: float, source: str
    ) -> None:
        """Put a couple (N·m, clockwise) at a station of a member."""
        seat = self._seat_at(draft, member, station)
        self.put(draft, PointMoment(case, seat.number, seat.position(station), moment, source))

    def put_couples(
        self,
        draft: Draft,
        seat: Seat,
        case: str,
        positions: list[float],
        couples: list[float],
        source: str,
    ) -> None:
        """Put couples per metre of member, linear between two positions on a bar.

        Bent alike by the transverse force -dm/ds with -m at the start and m at the end.
        """
        first, last = (c * seat.stretch for c in couples)
        run = positions[1] - positions[0]
        slope = (last - first) / run
        if slope:
            self.put(
                draft,
                DistributedForce(
                    case, seat.number, positions[0], positions[1], (-slope,), (), source
                ),
            )
        self.put(
            draft,
            PointForce(case, seat.number, positions[0], -first, 0.0, source),
            PointForce(case, seat.number, positions[1], last, 0.0, source),
        )

    def bend(
        self,
        draft: Draft,
        member: str,
        case: str,
        stations: tuple[float, float],
        curvature: float,
        source: str,
    ) -> None:
        """Put an imposed curvature (1/m, sagging) between two stations of a member."""
        for seat in self.seats(draft, member):
            low, high = max(stations[0], seat.low), min(stations[1], seat.high)
            if high - low <= _NEAR * seat.length:
                continue
            first, last = sorted((seat.position(low), seat.position(high)))
            self.put(draft, ImposedCurvature(case, seat.number, first, last, curvature, source))

    def joint(
        self, draft: Draft, joint: int, case: str, force: Pair, moment: float, source: str
    ) -> None:
        """Put a force (right, up) and a clockwise couple on a joint."""
        self.put(draft, JointForce(case, joint, force[0], -force[1], moment, source))

    def _seat_at(self, draft: Draft, member: str, station: float) -> Seat:
        seats = self.seats(draft, member)
        for seat in seats:
            if station <= seat.high + _NEAR:
                return seat
        return seats[-1]

    def _lay(
        self,
        seat: Seat,
        case: str,
        stations: tuple[float, float],
        forces: tuple[Pair, Pair],
        part: tuple[float, float],
        source: str,
    ) -> None:
        first, last = (between(stations, forces, s) for s in part)
        low, high = sorted((seat.position(part[0]), seat.position(part[1])))
        self._press(seat, case, first, last, (low, high), source)

    def _press(
        self,
        seat: Seat,
        case: str,
        first: Pair,
        last: Pair,
        ends: tuple[float, float],
        source: str,
    ) -> None:
        """Put a force per metre of member between two positions on a bar.

        ``first`` holds at the one that lies nearer to the member's start.
        """
        if seat.bar.station_start > seat.bar.station_end:
            first, last = last, first
        a = seat.local(first)
        b = seat.local(last) if last != first else a
        run = ends[1] - ends[0]
        transverse = _linear(a[0] * seat.stretch, b[0] * seat.stretch, run)
        axial = _linear(a[1] * seat.stretch, b[1] * seat.stretch, run)
        if transverse or axial:
            self.put(
                seat.draft,
                DistributedForce(case, seat.number, *ends, transverse, axial, source),
            )

    def _heap(
        self,
        seat: Seat,
        case: str,
        stations: tuple[float, float],
        forces: tuple[Pair, Pair],
        part: tuple[float, float],
        source: str,
    ) -> None:
        first, last = (between(stations, forces, s) for s in part)
        size = part[1] - part[0]
        total = (size * (first[0] + last[0]) / 2.0, size * (first[1] + last[1]) / 2.0)
        middle = (part[0] + part[1]) / 2.0
        transverse, axial = seat.local(total)
        if transverse or axial:
            at = seat.position(middle)
            self.put(seat.draft, PointForce(case, seat.number, at, transverse, axial, source))


def between(stations: tuple[float, float], forces: tuple[Pair, Pair], at: float) -> Pair:
    """Return the force at a station, linear between (and beyond) two stations."""
    size = stations[1] - stations[0]
    share = (at - stations[0]) / size if size > 0.0 else 0.0
    (ax, ay), (bx, by) = forces
    return ax + share * (bx - ax), ay + share * (by - ay)


def _linear(first: float, last: float, run: float) -> tuple[float, ...]:
    """Coefficients of a linear intensity; none where there is no force."""
    if abs(first - last) <= 1e-12 * max(abs(first), abs(last)):
        return (first,) if first else ()
    return first, (last - first) / run
