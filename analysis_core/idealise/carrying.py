"""Which line carries which where two of them meet and nothing else holds them up.

One question for both ways in.  A body is a line or frame; a contact is a place where bodies
meet.  The rules, in order:

1. Where a contact is settled already (one lies on top of the other), that holds.
2. Where one passes and the others end, the one that passes carries, as a secondary beam frames
   into the side of a primary one;
3. unless the one that passes cannot stand without this contact and the other can, as an edge
   beam laid over the tips of cantilevers.
4. Where all pass or all end, the one that stands carries; where all stand, the stiffest.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

# Supports nearer to each other than this are one support (m).
_APART = 0.05


@dataclass(slots=True)
class Body:
    """A line or frame.  ``grounds``: (position along it, holds rotation) of its own supports."""

    name: str
    grounds: list[tuple[float, bool]] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class Touch:
    """How a body takes part in a contact: where along it, whether it passes, how stiff."""

    body: str
    position: float
    passes: bool
    stiffness: float = 0.0


@dataclass(slots=True)
class Contact:
    """Bodies that meet.  ``carrier``: the name of the body that carries the others here.

    ``doubtful`` is set where the choice was made by stiffness alone, so that in truth the bodies
    share what acts here.
    """

    key: str
    touches: tuple[Touch, ...]
    carrier: str | None = None
    settled: bool = False
    doubtful: bool = False


def decide(bodies: Iterable[Body], contacts: list[Contact]) -> None:
    """Set the carrier of every contact for which there is one."""
    contacts.sort(key=lambda contact: contact.key)
    for contact in contacts:
        passing = [touch for touch in contact.touches if touch.passes]
        if not contact.settled and len(passing) == 1:
            contact.carrier = passing[0].body
    table = {body.name: body for body in bodies}
    for cluster in _clusters(contacts):
        names = {touch.body for contact in cluster for touch in contact.touches}
        part = {name: table[name] for name in names}
        _turn_round(part, cluster)
        _settle_equals(part, cluster)


def _clusters(contacts: list[Contact]) -> list[list[Contact]]:
    """Return the contacts in groups that have no body in common."""
    parent: dict[str, str] = {}

    def root(name: str) -> str:
        parent.setdefault(name, name)
        while parent[name] != name:
            parent[name] = parent[parent[name]]
            name = parent[name]
        return name

    for contact in contacts:
        first = root(contact.touches[0].body)
        for touch in contact.touches[1:]:
            parent[root(touch.body)] = first
    clusters: dict[str, list[Contact]] = {}
    for contact in contacts:
        clusters.setdefault(root(contact.touches[0].body), []).append(contact)
    return list(clusters.values())


def standing(
    bodies: Iterable[Body], contacts: Iterable[Contact], *, without: Contact | None = None
) -> set[str]:
    """Return the names of the bodies that stand, by the ground or on others that stand."""
    table = {body.name: body for body in bodies}
    return _standing(table, [c for c in contacts if c is not without])


def _standing(table: dict[str, Body], contacts: list[Contact]) -> set[str]:
    held = {name: list(body.grounds) for name, body in table.items()}
    waiting: dict[str, list[Contact]] = {}
    for contact in contacts:
        if contact.carrier is not None:
            waiting.setdefault(contact.carrier, []).append(contact)
    stands = {name for name, grounds in held.items() if _enough(grounds)}
    fresh = list(stands)
    while fresh:
        name = fresh.pop()
        for contact in waiting.get(name, ()):
            for touch in contact.touches:
                if touch.body == name:
                    continue
                held[touch.body].append((touch.position, False))
                if touch.body not in stands and _enough(held[touch.body]):
                    stands.add(touch.body)
                    fresh.append(touch.body)
    return stands


def _enough(grounds: list[tuple[float, bool]]) -> bool:
    if any(rotation for _, rotation in grounds):
        return True
    positions = [position for position, _ in grounds]
    return bool(positions) and max(positions) - min(positions) > _APART


def _turn_round(table: dict[str, Body], contacts: list[Contact]) -> None:
    """Rule 3: a passer that falls without the contact is carried by an ender that does not."""
    stands = _standing(table, contacts)
    if len(stands) == len(table):
        return
    for contact in contacts:
        if contact.settled or contact.carrier is None or contact.carrier in stands:
            continue
        rest = [other for other in contacts if other is not contact]
        able = _standing(table, rest)
        others = [t for t in contact.touches if t.body != contact.carrier and t.body in able]
        if others:
            contact.carrier = max(others, key=lambda t: (t.stiffness, t.body)).body
            stands = _standing(table, contacts)


def _settle_equals(table: dict[str, Body], contacts: list[Contact]) -> None:
    """Rule 4, from the ground upward: first what stands carries what does not yet stand."""
    waiting = [c for c in contacts if c.carrier is None and not c.settled]
    while waiting:
        stands = _standing(table, contacts)
        ready = [c for c in waiting if 0 < _count(c, stands) < len(c.touches)]
        if not ready:
            break
        for contact in ready:
            able = [t for t in contact.touches if t.body in stands]
            contact.carrier = _firmest(able)
        waiting = [c for c in waiting if c.carrier is None]
    for contact in waiting:
        # Free tips that touch need not hold each other up; what crosses does so in some share.
        if _count(contact, stands) and any(t.passes for t in contact.touches):
            contact.carrier = _firmest(list(contact.touches))
            contact.doubtful = True


def _count(contact: Contact, names: set[str]) -> int:
    return sum(touch.body in names for touch in contact.touches)


def _firmest(touches: list[Touch]) -> str:
    return max(touches, key=lambda t: (t.passes, t.stiffness, t.body)).body
