"""Physical lines that meet: secondary beams at the sides of primary ones, crossings, corners.

Two straight lines cross once in plan, so a pair of lines has one contact at most.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from analysis_core.idealise.bearings import Bearing
from analysis_core.idealise.carrying import Contact, Touch, decide
from analysis_core.idealise.chains import End
from analysis_core.idealise.draft import Draft, DraftJoint
from analysis_core.idealise.joints import joint_at, member_at
from analysis_core.idealise.log import Log
from analysis_core.idealise.physical import PhysicalScheme
from analysis_core.idealise.properties import PropertyTable
from analysis_core.idealise.scheme import Rest, Scheme, body_of, stiffness_at, yields_like
from analysis_core.idealise.spans import Chain, Seating, outer_end, seat_key
from analysis_core.model import FREE, RIGID
from analysis_core.settings import Tolerances

# Bearings nearer to each other than this are one (m).
_APART = 0.05


@dataclass(slots=True)
class _Side:
    """How one line takes part in a meeting: ``ends`` -1, 1 at its start or end, 0 passing."""

    line: int
    run: float
    ends: int
    beam: str = ""
    bearing: Bearing | None = None


def let_carry(
    physical: PhysicalScheme, table: PropertyTable, tolerances: Tolerances, log: Log
) -> None:
    """Decide which physical line carries which, and support the carried ones."""
    scheme, found, bearings = physical.scheme, physical.chains, physical.bearings
    links = physical.links
    home = {beam.id: index for index, chain in enumerate(found) for beam in chain.beams}
    linked = {end for link in links for end in (link.first, link.second)}
    pairs: dict[tuple[int, int], tuple[_Side, _Side]] = {}
    for own, other in _meetings(found, bearings, home, linked):
        key = (min(own.line, other.line), max(own.line, other.line))
        if key not in pairs or pairs[key][0].bearing is None:
            pairs[key] = (own, other)
        elif pairs[key][0].line == other.line:  # seen from the other side too: it knows better
            pairs[key] = (pairs[key][0], own)
    contacts: list[Contact] = []
    sides: dict[str, dict[str, _Side]] = {}
    for pair in pairs.values():
        if _matters(pair, found, tolerances):
            _enter(pair, scheme.drafts, found, table, contacts, sides, settled=False)
    for pair in _on_top(found, home):
        _enter(pair, scheme.drafts, found, table, contacts, sides, settled=True)
    decide([body_of(draft) for draft in scheme.drafts], contacts)
    scheme.contacts = contacts
    for contact in contacts:
        if contact.carrier is not None:
            _rest(scheme, found, contact, sides[contact.key], log)


def _meetings(
    found: list[Chain],
    bearings: Mapping[str, list[Bearing]],
    home: Mapping[str, int],
    linked: set[End],
) -> Iterator[tuple[_Side, _Side]]:
    """Yield every meeting of lines at one level, as each of the two sees it."""
    beams = {beam.id: beam for chain in found for beam in chain.beams}
    for index, chain in enumerate(found):
        for number, beam in enumerate(chain.beams):
            for bearing in bearings[beam.id]:
                other = home[bearing.id] if bearing.kind == "beam" else index
                if other == index:
                    continue
                run = chain.run_of(beam, bearing.along)
                ends = outer_end(chain, number, beam, bearing)
                there = beams[bearing.id]
                nearer = 0 if bearing.other_along < there.run / 2.0 else 1
                other_ends = 0
                if not bearing.passes and (bearing.id, nearer) not in linked:
                    points_on = (nearer == 1) == (found[other].sense(there) > 0.0)
                    other_ends = 1 if points_on else -1
                yield (
                    _Side(index, run, ends, beam.id, bearing),
                    _Side(other, found[other].run_of(there, bearing.other_along), other_ends),
                )


def _matters(pair: tuple[_Side, _Side], found: list[Chain], tolerances: Tolerances) -> bool:
    """Whether a line needs the other here, or rests on something firmer already."""
    firm = [_firm(found[side.line], side, tolerances) for side in pair]
    if all(firm):
        return False
    for side, other, stands in zip(pair, reversed(pair), firm, strict=True):
        if not side.ends:
            continue
        if stands and not other.ends:
            return False
        seating = _outer_seating(found[side.line], side.ends)
        if seating is not None and seating.best.kind == "beam":
            ids = {beam.id for beam in found[other.line].beams}
            if seating.best.id not in ids and not other.ends:
                return False
    return True


def _firm(chain: Chain, side: _Side, tolerances: Tolerances) -> bool:
    """Whether something other than a beam at the same level holds the line up here."""
    if side.ends:
        seating = _outer_seating(chain, side.ends)
        return seating is not None and seating.best.kind != "beam"
    return any(
        seating.best.kind != "beam"
        and abs(seating.run - side.run)
        <= max(tolerances.bearing, seating.best.width / 2.0 + tolerances.join)
        for seating in chain.seatings
    )


def _outer_seating(chain: Chain, end: int) -> Seating | None:
    return next((s for s in chain.seatings if s.outer == end), None)


def _on_top(found: list[Chain], home: Mapping[str, int]) -> Iterator[tuple[_Side, _Side]]:
    """Yield where one line lies on another, the lower one second."""
    for index, chain in enumerate(found):
        for seating in chain.seatings:
            if seating.best.kind != "beam below":
                continue
            lower = found[home[seating.best.id]]
            there = next(b for b in lower.beams if b.id == seating.best.id)
            yield (
                _Side(index, seating.run, seating.outer, seating.beam, seating.best),
                _Side(home[seating.best.id], lower.run_of(there, seating.best.other_along), 0),
            )


def _enter(
    pair: tuple[_Side, _Side],
    drafts: list[Draft],
    found: list[Chain],
    table: PropertyTable,
    contacts: list[Contact],
    sides: dict[str, dict[str, _Side]],
    *,
    settled: bool,
) -> None:
    marks = [drafts[side.line].mark for side in pair]
    key = " ".join(sorted(marks)) + f" {pair[0].run:.3f}"
    touches = []
    for mark, side in zip(marks, pair, strict=True):
        draft, chain = drafts[side.line], found[side.line]
        distance = side.run - chain.first
        element, _ = member_at(draft, distance)
        x = distance * math.hypot(chain.direction[0], chain.direction[1])
        stiffness = stiffness_at(draft, x, element, table)
        touches.append(Touch(mark, side.run, side.ends == 0, stiffness))
    carrier = marks[1] if settled else None
    contacts.append(Contact(key, tuple(touches), carrier, settled))
    sides[key] = dict(zip(marks, pair, strict=True))


def _rest(
    scheme: Scheme, found: list[Chain], contact: Contact, sides: dict[str, _Side], log: Log
) -> None:
    drafts = {mark: scheme.drafts[side.line] for mark, side in sides.items()}
    assert contact.carrier is not None
    carrier, below = drafts[contact.carrier], sides[contact.carrier]
    element, station = member_at(carrier, below.run - found[below.line].first)
    for mark, side in sides.items():
        if mark == contact.carrier:
            continue
        carried = drafts[mark]
        joint = _joint(carried, found[side.line], side, contact.key)
        if joint.settled:
            continue
        if joint.vertical == FREE:
            joint.vertical = RIGID
            joint.element = element
            joint.elements.append(element)
            joint.width = side.bearing.width if side.bearing else 0.0
            joint.reason = _reason(carrier, element, side, contact)
        elif contact.settled:
            joint.reason += "; its deflection is neglected"
            _report_yielding(found[side.line], carried, carrier, contact, log)
        scheme.rests.append(Rest(carried, joint.key, carrier, member=element, station=station))
        if contact.doubtful:
            log.add(
                "warning",
                "grillage-crossing",
                f"Lines {mark} and {contact.carrier} cross at one level, and both stand by "
                f"themselves, so in truth they share what acts there. {contact.carrier}, the "
                f"stiffer, is taken to carry {mark} as a rigid support.",
                (*carried.elements, *carrier.elements),
                mark,
            )


def _report_yielding(
    chain: Chain, carried: Draft, carrier: Draft, contact: Contact, log: Log
) -> None:
    """Warn where a line that stands anyway lies on one that yields about as much as itself."""
    firm = [s.run for s in chain.seatings if s.best.kind not in ("beam", "beam below")]
    stiffness = {touch.body: touch.stiffness for touch in contact.touches}
    soft = yields_like(stiffness[carrier.mark], stiffness[carried.mark])
    if len(firm) < 2 or max(firm) - min(firm) < _APART or not soft:
        return
    log.add(
        "warning",
        "grillage-crossing",
        f"Line {carried.mark} lies on line {carrier.mark}, but stands on other bearings as well. "
        f"{carrier.mark} {soft}, so that in truth {carried.mark} bends more and hands down less. "
        f"State the support in the job file as free or as a spring (supports: on, at) to see how "
        f"much this matters.",
        (*carried.elements, *carrier.elements),
        carried.mark,
    )


def _joint(carried: Draft, chain: Chain, side: _Side, key: str) -> DraftJoint:
    if side.ends:
        seating = _outer_seating(chain, side.ends)
        if seating is not None:
            return carried.joints[carried.joint_of[seat_key(seating)]]
        return carried.joints[0 if side.ends < 0 else -1]
    if side.bearing is not None and side.bearing.kind == "beam below":
        for seating in chain.seatings:
            if seating.best is side.bearing:
                return carried.joints[carried.joint_of[seat_key(seating)]]
    element, station = member_at(carried, side.run - chain.first)
    return carried.joints[joint_at(carried, element, station, f"crossing {key}")]


def _reason(carrier: Draft, element: str, side: _Side, contact: Contact) -> str:
    member = next(b.member for b in carrier.bars if b.member.global_id == element)
    name = f"'{member.name}' " if member.name else ""
    what = f"beam {name}(GlobalId {element}) of line {carrier.mark}"
    if contact.settled:
        return f"lies on {what}; taken as pinned by rule, its deflection neglected"
    if side.ends:
        gap = side.bearing.distance * 1e3 if side.bearing else 0.0
        return (
            f"end frames into {what}, {gap:.0f} mm from its axis; taken as pinned by rule, its "
            f"deflection neglected"
        )
    return f"is carried by {what}, which it crosses; its deflection is neglected"
