"""Which unknowns the equations of a line have, whatever its dimensions and actions.

Lines of one pattern are solved together.  The unknowns are the end moments of members, the
axial forces of members, and the free movements of joints.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import FREE, RIGID, Joint, Line, Member

Index = NDArray[np.intp]

LEVEL, UPRIGHT, INCLINED = 0, 1, 2
_STRAIGHT = 1e-12

NO_SLIP, SLIPS_AT_START, SLIPS_AT_END = 0, 1, 2


@dataclass(frozen=True, slots=True)
class Pattern:
    """What decides the form of the equations; equal for lines that can be solved together.

    Per member: ``ends`` (joints), ``moments`` (which end moments are not released), ``tilts``
    and ``slips``.  Per joint: ``free`` (right, down, clockwise: may move), ``sprung``.  Without
    ``plane`` the horizontal forces and movements are all zero and left out.
    """

    ends: tuple[tuple[int, int], ...]
    moments: tuple[tuple[bool, bool], ...]
    tilts: tuple[int, ...]
    slips: tuple[int, ...]
    free: tuple[tuple[bool, bool, bool], ...]
    sprung: tuple[tuple[bool, bool, bool], ...]
    plane: bool


def pattern_of(line: Line, *, plane: bool) -> Pattern:
    """Return the pattern of ``line``; ``plane``: with horizontal forces and movements."""
    joints, members = line.joints, line.members
    held = held_joints(line) if plane else ()
    carried = _span_joints(line) if any(m.role == "leg" for m in members) else frozenset()
    conditions = [_joint_conditions(joint, plane, joint.id in held) for joint in joints]
    return Pattern(
        tuple([(m.start, m.end) for m in members]),
        tuple([(m.start_spring != FREE, m.end_spring != FREE) for m in members]),
        tuple([_tilt(joints[m.start], joints[m.end]) for m in members]),
        tuple([_slip(line, m, carried) if m.role == "leg" else NO_SLIP for m in members]),
        tuple([free for free, _ in conditions]),
        tuple([sprung for _, sprung in conditions]),
        plane,
    )


def is_level(line: Line) -> bool:
    """Whether all joints of the line lie at one height."""
    level = line.joints[0].z
    return all(joint.z == level for joint in line.joints)


def held_joints(line: Line) -> tuple[int, ...]:
    """Return the joints at which a line (not a frame) is held against sliding as a whole.

    Where legs meet it, for columns of a line do not lean; else its horizontal supports do; else
    its first supported joint, else its first.
    """
    if line.kind != "line":
        return ()
    spans = _span_joints(line)
    legs = {end for m in line.members if m.role == "leg" for end in (m.start, m.end)}
    if meeting := spans & legs:
        return tuple(sorted(meeting))
    candidates = sorted(spans) or [joint.id for joint in line.joints]
    supports = {j: line.joints[j].support for j in candidates}
    if any(s is not None and s.horizontal == RIGID for s in supports.values()):
        return ()
    for direction in ("horizontal", "vertical", "rotation"):
        for joint, support in supports.items():
            if support is not None and getattr(support, direction):
                return (joint,)
    return (candidates[0],)


def _span_joints(line: Line) -> frozenset[int]:
    return frozenset(end for m in line.members if m.role == "span" for end in (m.start, m.end))


def _joint_conditions(
    joint: Joint, plane: bool, held: bool
) -> tuple[tuple[bool, bool, bool], tuple[bool, bool, bool]]:
    support = joint.support
    if support is None:
        return (plane and not held, True, True), (False, False, False)
    right, down, turn = support.horizontal, support.vertical, support.rotation
    free = (plane and not held and right != RIGID, down != RIGID, turn != RIGID)
    return free, (free[0] and right > 0.0, free[1] and down > 0.0, free[2] and turn > 0.0)


def _tilt(start: Joint, end: Joint) -> int:
    right, up = abs(end.x - start.x), abs(end.z - start.z)
    if up <= _STRAIGHT * right:
        return LEVEL
    return UPRIGHT if right <= _STRAIGHT * up else INCLINED


def _slip(line: Line, leg: Member, carried: frozenset[int]) -> int:
    """A leg under a joint that has a support of its own takes no axial force from it."""
    for joint, slip in ((leg.start, SLIPS_AT_START), (leg.end, SLIPS_AT_END)):
        support = line.joints[joint].support
        if line.kind == "line" and joint in carried and support is not None and support.vertical:
            return slip
    return NO_SLIP


@dataclass(frozen=True, slots=True, eq=False)
class Numbering:
    """Place of every unknown, -1 where there is none: moment (M, 2), axial (M,), movement (J, 3).

    ``loose``: movements that nothing resists and that move nothing else, taken as zero: the
    rotation of a joint whose member ends are all released, and the foot of a leg that slips.
    No two unknowns that share an equation are further apart than ``width``.
    """

    size: int
    width: int
    moment: Index
    axial: Index
    movement: Index
    loose: tuple[tuple[int, int], ...]


@lru_cache(maxsize=1024)
def numbering(pattern: Pattern) -> Numbering:
    """Number the unknowns so that those that share an equation stand close together."""
    rank = _ranks(pattern)
    touched, slipping = _touched(pattern), _slipping(pattern)
    members = len(pattern.ends)
    moment = np.full((members, 2), -1, dtype=np.intp)
    axial = np.full(members, -1, dtype=np.intp)
    movement = np.full((len(pattern.free), 3), -1, dtype=np.intp)
    loose = []
    order: list[tuple[int, int, int, int]] = []
    for index, (start, end) in enumerate(pattern.ends):
        last = max(rank[start], rank[end])
        order += [(last, 0, index, k) for k in (0, 1) if pattern.moments[index][k]]
        if has_axial(pattern, index):
            order.append((last, 1, index, 0))
    for joint, free in enumerate(pattern.free):
        for direction in (0, 1, 2):
            if not free[direction]:
                continue
            if (joint, direction) in touched or not (direction == 2 or joint in slipping):
                order.append((rank[joint], 2, joint, direction))
            else:
                loose.append((joint, direction))
    for place, (_, what, item, part) in enumerate(sorted(order)):
        if what == 0:
            moment[item, part] = place
        elif what == 1:
            axial[item] = place
        else:
            movement[item, part] = place
    width = _width(pattern, moment, axial, movement)
    return Numbering(len(order), width, moment, axial, movement, tuple(loose))


def _width(pattern: Pattern, moment: Index, axial: Index, movement: Index) -> int:
    widest = 0
    for index, ends in enumerate(pattern.ends):
        moved = [int(place) for joint in ends for place in movement[joint] if place >= 0]
        forces = [int(p) for p in (*moment[index], axial[index]) if p >= 0]
        shared = moved + forces if forces else []
        widest = max(widest, max(shared, default=0) - min(shared, default=0))
    return widest


def has_axial(pattern: Pattern, member: int) -> bool:
    """Whether the axial force of a member is unknown."""
    if pattern.slips[member] != NO_SLIP:
        return False
    return pattern.plane or pattern.tilts[member] != LEVEL


def _touched(pattern: Pattern) -> set[tuple[int, int]]:
    """Return the movements (joint, direction) that a member or a spring resists."""
    touched = {
        (joint, direction)
        for joint, sprung in enumerate(pattern.sprung)
        for direction in (0, 1, 2)
        if sprung[direction]
    }
    for index, ends in enumerate(pattern.ends):
        tilt, bending = pattern.tilts[index], any(pattern.moments[index])
        for k, joint in enumerate(ends):
            if pattern.moments[index][k]:
                touched.add((joint, 2))
            if bending and tilt != UPRIGHT:
                touched.add((joint, 1))
            if bending and tilt != LEVEL:
                touched.add((joint, 0))
            if has_axial(pattern, index):
                touched |= {(joint, d) for d in (0, 1) if tilt != (UPRIGHT if d == 0 else LEVEL)}
    return touched


def _slipping(pattern: Pattern) -> set[int]:
    """Return the joints where nothing but slipping legs meets."""
    legs: set[int] = set()
    others: set[int] = set()
    for ends, slip in zip(pattern.ends, pattern.slips, strict=True):
        (others if slip == NO_SLIP else legs).update(ends)
    return legs - others


def _ranks(pattern: Pattern) -> list[int]:
    """Return a place for each joint such that neighbours are near (breadth first, twice)."""
    neighbours: list[set[int]] = [set() for _ in pattern.free]
    for start, end in pattern.ends:
        neighbours[start].add(end)
        neighbours[end].add(start)
    order = _breadth_first(neighbours, range(len(neighbours)))
    order = _breadth_first(neighbours, order[::-1])
    rank = [0] * len(order)
    for place, joint in enumerate(order):
        rank[joint] = place
    return rank


def _breadth_first(neighbours: list[set[int]], starts: range | list[int]) -> list[int]:
    order: list[int] = []
    seen: set[int] = set()
    for start in starts:
        if start in seen:
            continue
        seen.add(start)
        reached = len(order)
        order.append(start)
        while reached < len(order):
            new = sorted(neighbours[order[reached]] - seen, key=lambda j: len(neighbours[j]))
            seen.update(new)
            order += new
            reached += 1
    return order
