"""Plain beam lines, read for the batch: straight, on supports that are rigid vertically.

Spans may be of several members in a row, of any shape, overhang at the ends, be turned or settled
by their supports, and lie on a slope.  Everything else (springs and hinges between supports,
legs, axial forces that several supports share, frames) goes the general way through ``sway``.
The two agree; this one is for thousands of lines.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from itertools import pairwise

from analysis_core.distribution.bars import STRAIGHT
from analysis_core.distribution.fixed_end import end_actions
from analysis_core.distribution.loads import is_free
from analysis_core.distribution.release import CLAMP
from analysis_core.distribution.stiffness_factors import (
    ElasticWeights,
    EndStiffness,
    elastic_weights,
    end_stiffness,
    inverse,
)
from analysis_core.distribution.verify import resultant
from analysis_core.model import (
    FREE,
    RIGID,
    Action,
    DistributedForce,
    JointForce,
    JointMovement,
    Line,
    Member,
    PointForce,
)

Rows = list[tuple[float, ...]]


@dataclass(frozen=True, slots=True)
class SpecialMember:
    """A member that is not prismatic, or is not fastened rigidly at both ends.

    start_give, end_give: flexibility of its end springs, rad/(N·m); infinite: released.
    """

    weights: ElasticWeights
    stiffness: EndStiffness
    start_give: float
    end_give: float


@dataclass(slots=True)
class PlainLine:
    """One line of n members in a row.

    bare (n + 1): which joints have no support; lengths m, rigidities N·m² (n; of special members
    0); held (n + 1): support stiffness against rotation, ``CLAMP`` where rigid; special: by
    member; direction (cos a, sin a); hold: the joint that keeps the line from sliding, -1 where
    several do.  lateral: whether anything acts along the line.

    Actions as (case, place, values): uniform over a whole prismatic member: N/m; others: the
    first six of EndActions, then resultant across N, its moment about the start N·m, resultant
    along N; forces on joints: right, down N, clockwise N·m; movements: down m, clockwise rad.
    """

    line: Line
    bare: tuple[bool, ...]
    lengths: list[float]
    rigidities: list[float]
    held: list[float]
    special: dict[int, SpecialMember]
    direction: tuple[float, float]
    hold: int
    lateral: bool = False
    uniform: Rows = field(default_factory=list)
    others: Rows = field(default_factory=list)
    forces: Rows = field(default_factory=list)
    movements: Rows = field(default_factory=list)


def read(line: Line, column: Mapping[str, int]) -> PlainLine | None:
    """Return what the batch needs of a line, or None where it is not plain."""
    if line.fault or line.kind != "line" or len(line.joints) != len(line.members) + 1:
        return None
    held, bare = _supports(line)
    direction = _direction(line) if held and not all(bare) else None
    if direction is None:
        return None
    plain = PlainLine(line, bare, [], [], held, {}, direction, _hold(line))
    if not (_read_members(plain) and _stands(plain)):
        return None
    plain.lateral = direction[1] != 0.0
    for action in line.actions:
        case = column.get(action.case)
        if case is not None and not _read_action(plain, action, case):
            return None
    if plain.lateral and plain.hold < 0:
        return None
    return plain


def _supports(line: Line) -> tuple[list[float], tuple[bool, ...]]:
    """Return the rotational stiffness of the supports and which joints have none.

    Empty where a support is of another kind.
    """
    held, bare = [], []
    for joint in line.joints:
        support = joint.support
        if support is not None and support.vertical == RIGID:
            held.append(CLAMP if support.rotation == RIGID else support.rotation)
            bare.append(False)
        elif is_free(joint):
            held.append(0.0)
            bare.append(True)
        else:
            return [], ()
    return held, tuple(bare)


def _direction(line: Line) -> tuple[float, float] | None:
    """Return the direction of a straight line that runs to the right; None for another."""
    joints = line.joints
    level = joints[0].z
    if all(joint.z == level for joint in joints):
        return (1.0, 0.0) if all(a.x < b.x for a, b in pairwise(joints)) else None
    dx, dz = joints[-1].x - joints[0].x, joints[-1].z - joints[0].z
    length = (dx * dx + dz * dz) ** 0.5
    if not dx > 0.0:
        return None
    cosine, sine = dx / length, dz / length
    if abs(sine) <= STRAIGHT:
        cosine, sine = 1.0, 0.0
    for a, b in pairwise(joints):
        run, rise = b.x - a.x, b.z - a.z
        if not run > 0.0 or abs(rise * cosine - run * sine) > STRAIGHT * run:
            return None
    return cosine, sine


def _hold(line: Line) -> int:
    """Return the joint that holds the line against sliding, as ``held_horizontally`` has it."""
    rigid = [j.id for j in line.joints if j.support and j.support.horizontal == RIGID]
    if rigid:
        return rigid[0] if len(rigid) == 1 else -1
    for joint in line.joints:
        if joint.support and joint.support.horizontal:
            return joint.id
    return next(joint.id for joint in line.joints if not is_free(joint))


def _read_members(plain: PlainLine) -> bool:
    bare = plain.bare
    for index, member in enumerate(plain.line.members):
        if member.start != index or member.end != index + 1 or member.role != "span":
            return False
        fastened = member.start_spring == RIGID and member.end_spring == RIGID
        if not fastened and (bare[index] or bare[index + 1]):
            return False
        pieces = member.pieces
        piece = pieces[0]
        if fastened and len(pieces) == 1 and _prismatic(member):
            plain.lengths.append(piece.length)
            plain.rigidities.append(piece.flexural[0])
        else:
            plain.lengths.append(member.length)
            plain.rigidities.append(0.0)
            plain.special[index] = _special(member)
    return True


def _prismatic(member: Member) -> bool:
    piece = member.pieces[0]
    return (
        len(member.pieces) == 1
        and len(piece.flexural) == 1
        and piece.power == 1.0
        and piece.shear is None
    )


def _special(member: Member) -> SpecialMember:
    weights = elastic_weights(member.pieces)
    start, end = inverse(member.start_spring), inverse(member.end_spring)
    return SpecialMember(weights, end_stiffness(weights, start, end), start, end)


def _stands(plain: PlainLine) -> bool:
    """Whether overhangs are fastened to joints that something holds against rotation."""
    bare, members = plain.bare, plain.line.members
    first, last = bare.index(False), len(bare) - 1 - bare[::-1].index(False)
    lone = first == last
    if first > 0 and not plain.held[first] and (lone or members[first].start_spring == FREE):
        return False
    overhangs = last < len(members) and not plain.held[last]
    return not (overhangs and (lone or members[last - 1].end_spring == FREE))


def _read_action(plain: PlainLine, action: Action, case: int) -> bool:
    """Note an action; False where it makes the line one for the general way."""
    if isinstance(action, DistributedForce):
        index, shape = action.member, action.transverse
        if (
            len(shape) == 1
            and not action.axial
            and action.start == 0.0
            and action.end == plain.lengths[index]
            and (index not in plain.special or _prismatic(plain.line.members[index]))
        ):
            plain.uniform.append((case, index, shape[0]))
            return True
    elif isinstance(action, JointForce):
        plain.lateral = plain.lateral or bool(action.horizontal)
        plain.forces.append((case, action.joint, action.horizontal, action.vertical, action.moment))
        return not (action.moment and _idle(plain, action.joint))
    elif isinstance(action, JointMovement):
        plain.movements.append((case, action.joint, action.vertical, action.rotation))
        return not (
            action.horizontal
            or (action.vertical and (plain.bare[action.joint] or plain.direction[1]))
            or (action.rotation and not plain.held[action.joint])
        )
    found = end_actions(plain.line.members[action.member], action)
    across, along, lever = resultant(action)
    if isinstance(action, DistributedForce | PointForce) and action.axial:
        plain.lateral = True
    plain.others.append((case, action.member, *found[:6], across, lever, along))
    return True


def _idle(plain: PlainLine, joint: int) -> bool:
    """Whether nothing at a joint resists a couple."""
    members = plain.line.members
    before = members[joint - 1].end_spring if joint else FREE
    after = members[joint].start_spring if joint < len(members) else FREE
    return not (plain.held[joint] or before or after)
