"""Plain beam lines, read for the batch: spans in a row on rigid supports, overhangs at the ends.

Everything else (springs and hinges between supports, legs, slopes, axial forces, frames) goes
the general way through ``sway``.  The two agree; this one is for thousands of lines.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from analysis_core.distribution.fixed_end import end_actions
from analysis_core.distribution.loads import is_free
from analysis_core.distribution.release import CLAMP
from analysis_core.distribution.stiffness_factors import (
    ElasticWeights,
    EndStiffness,
    elastic_weights,
    end_stiffness,
    inverse,
    is_uniform,
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

LEVEL = 1e-9
"""Joints this near in height (m) are on one level."""


@dataclass(frozen=True, slots=True)
class SpecialSpan:
    """A span that is not prismatic, or is not fastened rigidly at both ends."""

    weights: ElasticWeights
    stiffness: EndStiffness
    start_give: float
    """Flexibility of the spring at the start, rad/(N·m); infinite: released."""
    end_give: float


@dataclass(slots=True)
class PlainLine:
    """One line of n spans.

    lengths (n) m, rigidities (n) N·m² (of the special spans: 0); held (n + 1): support stiffness
    against rotation, ``CLAMP`` where rigid; special: by span; tails: whether the first and the
    last span overhang.  Actions as (case, span or joint, values): uniform over a whole prismatic
    span: N/m; others: EndActions without the axial ones, then resultant N and its moment about
    the span's start N·m; joints: N down, N·m clockwise; movements: m down, rad clockwise.
    """

    line: Line
    lengths: list[float]
    rigidities: list[float]
    held: list[float]
    special: dict[int, SpecialSpan]
    tails: tuple[bool, bool]
    uniform: list[tuple[float, ...]] = field(default_factory=list)
    others: list[tuple[float, ...]] = field(default_factory=list)
    joints: list[tuple[float, ...]] = field(default_factory=list)
    movements: list[tuple[float, ...]] = field(default_factory=list)


def read(line: Line, column: Mapping[str, int]) -> PlainLine | None:
    """Return what the batch needs of a line, or None where it is not plain."""
    if line.fault or line.kind != "line" or len(line.joints) != len(line.members) + 1:
        return None
    held = _supports(line)
    if held is None:
        return None
    plain = PlainLine(line, [], [], held, {}, (is_free(line.joints[0]), is_free(line.joints[-1])))
    if not (_read_spans(plain) and _tails_are_held(plain)):
        return None
    for action in line.actions:
        case = column.get(action.case)
        if case is not None and not _read_action(plain, action, case):
            return None
    return plain


def _supports(line: Line) -> list[float] | None:
    """Return the rotational stiffness of the supports; None where one is of another kind."""
    held = []
    level, last = line.joints[0].z, len(line.joints) - 1
    for joint in line.joints:
        if abs(joint.z - level) > LEVEL:
            return None
        support = joint.support
        if support is not None and support.vertical == RIGID:
            held.append(CLAMP if support.rotation == RIGID else support.rotation)
        elif joint.id in (0, last) and is_free(joint):
            held.append(0.0)
        else:
            return None
    return held


def _read_spans(plain: PlainLine) -> bool:
    joints = plain.line.joints
    for index, member in enumerate(plain.line.members):
        if member.start != index or member.end != index + 1 or member.role != "span":
            return False
        if joints[index].x > joints[index + 1].x:
            return False
        pieces = member.pieces
        piece = pieces[0]
        if (
            len(pieces) == 1
            and len(piece.flexural) == 1
            and piece.power == 1.0
            and piece.shear is None
            and member.start_spring == RIGID
            and member.end_spring == RIGID
        ):
            plain.lengths.append(piece.length)
            plain.rigidities.append(piece.flexural[0])
        else:
            plain.lengths.append(member.length)
            plain.rigidities.append(0.0)
            plain.special[index] = _special(member)
    return True


def _special(member: Member) -> SpecialSpan:
    weights = elastic_weights(member.pieces)
    start, end = inverse(member.start_spring), inverse(member.end_spring)
    return SpecialSpan(weights, end_stiffness(weights, start, end), start, end)


def _tails_are_held(plain: PlainLine) -> bool:
    """Whether overhangs are fastened to joints that something holds against rotation."""
    members, count = plain.line.members, len(plain.lengths)
    inner = inner_spans(plain.tails, count)
    if plain.tails[0]:
        resists = plain.held[1] or (1 in inner and members[1].start_spring)
        if members[0].end_spring == FREE or not resists:
            return False
    if plain.tails[1]:
        root = count - 1
        resists = plain.held[root] or (root - 1 in inner and members[root - 1].end_spring)
        if members[root].start_spring == FREE or not resists:
            return False
    return count > 1 or not all(plain.tails)


def inner_spans(tails: tuple[bool, bool], count: int) -> range:
    """Return the spans that do not overhang."""
    return range(int(tails[0]), count - int(tails[1]))


def _read_action(plain: PlainLine, action: Action, case: int) -> bool:
    """Note an action; False where it makes the line one for the general way."""
    if isinstance(action, DistributedForce):
        if action.axial:
            return False
        span = action.member
        shape = action.transverse
        if (
            len(shape) == 1
            and action.start == 0.0
            and action.end == plain.lengths[span]
            and (span not in plain.special or _prismatic(plain.line.members[span]))
        ):
            plain.uniform.append((case, span, shape[0]))
            return True
    elif isinstance(action, PointForce):
        if action.axial:
            return False
    elif isinstance(action, JointForce):
        plain.joints.append((case, action.joint, action.vertical, action.moment))
        return not action.horizontal and not (action.moment and _idle(plain, action.joint))
    elif isinstance(action, JointMovement):
        plain.movements.append((case, action.joint, action.vertical, action.rotation))
        return not (
            action.horizontal
            or (action.vertical and is_free(plain.line.joints[action.joint]))
            or (action.rotation and not plain.held[action.joint])
        )
    found = end_actions(plain.line.members[action.member], action)
    across, _, lever = resultant(action)
    plain.others.append((case, action.member, *found[:6], across, lever))
    return True


def _prismatic(member: Member) -> bool:
    return is_uniform(member.pieces) and member.pieces[0].shear is None


def _idle(plain: PlainLine, joint: int) -> bool:
    """Whether nothing at a joint resists a couple."""
    members = plain.line.members
    before = members[joint - 1].end_spring if joint else FREE
    after = members[joint].start_spring if joint < len(members) else FREE
    return not (plain.held[joint] or before or after)
