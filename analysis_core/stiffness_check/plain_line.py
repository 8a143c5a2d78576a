"""One plain beam line by plain numbers: for a line that was edited and is checked at once.

Plain: level, one span after the other, every span of constant rigidity, on rigid bearings, at
most overhanging at either end, with vertical actions and couples only.  This file takes such a
line apart; ``plain_check`` solves and compares it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from analysis_core.model import (
    FREE,
    RIGID,
    DistributedForce,
    ImposedCurvature,
    JointForce,
    JointMovement,
    Line,
    Member,
    PointForce,
    PointMoment,
)

Numbers = list[float]
Pair = tuple[float, float]


@dataclass(slots=True)
class Chain:
    """Spans of a plain line: length, end flexibilities, stiffness and what holds the joints.

    ``bending`` 1/EI, ``sliding`` 1/GA; ``stiffness`` (start-start, start-end, end-end) of a span
    with its end springs; ``turning`` the rotational stiffness of each joint's support;
    ``overhangs``: whether the first and the last span end free.
    """

    length: Numbers
    bending: Numbers
    sliding: Numbers
    stiffness: list[tuple[float, float, float]]
    turning: Numbers
    overhangs: tuple[bool, bool]


@dataclass(slots=True)
class Acting:
    """Actions of one case: rotations of the simple spans, their end forces, joints' loads."""

    turned: list[Pair]
    forces: list[Pair]
    loads: Numbers
    couples: Numbers
    sinks: Numbers
    turns: Numbers


def chain_of(line: Line) -> Chain | None:
    """Return the spans of a plain line, None where the line is not plain."""
    joints, members = line.joints, line.members
    last, level = len(members), joints[0].z
    if len(joints) != last + 1:
        return None
    for index, member in enumerate(members):
        ahead = joints[index + 1]
        if not (member.start == index and member.end == index + 1 and member.role == "span"):
            return None
        if ahead.z != level or ahead.x <= joints[index].x or len(member.pieces) != 1:
            return None
    turning = []
    for index, joint in enumerate(joints):
        support = joint.support
        if support is None or not support.vertical:
            if 0 < index < last or (support is not None and support.rotation):
                return None
            turning.append(FREE)
        elif support.vertical == RIGID:
            turning.append(support.rotation)
        else:
            return None
    overhangs = tuple(_is_free(line, end) for end in (0, last))
    if all(overhangs) and last < 2:
        return None
    return _measured(members, turning, overhangs)  # type: ignore[arg-type]


def _is_free(line: Line, joint: int) -> bool:
    support = line.joints[joint].support
    return support is None or not support.vertical


def _measured(
    members: Sequence[Member], turning: Numbers, overhangs: tuple[bool, bool]
) -> Chain | None:
    chain = Chain([], [], [], [], turning, overhangs)
    for member in members:
        piece = member.pieces[0]
        if any(piece.flexural[1:]) or (piece.shear and any(piece.shear[1:])):
            return None
        bending = piece.flexural[0] ** -piece.power
        sliding = 1.0 / piece.shear[0] if piece.shear else 0.0
        length = piece.length
        chain.length.append(length)
        chain.bending.append(bending)
        chain.sliding.append(sliding)
        chain.stiffness.append(_stiffness(member, length * bending, sliding / length))
    for end, span in ((0, members[0]), (1, members[-1])):
        if overhangs[end] and not span.start_spring == span.end_spring == RIGID:
            return None
    return chain


def _stiffness(member: Member, soft: float, slide: float) -> tuple[float, float, float]:
    start, end = member.start_spring, member.end_spring
    near = soft / 3.0 + slide + (0.0 if start == FREE else 1.0 / start)
    far = soft / 3.0 + slide + (0.0 if end == FREE else 1.0 / end)
    cross = slide - soft / 6.0
    if start == FREE or end == FREE:
        return (
            0.0 if start == FREE else 1.0 / near,
            0.0,
            0.0 if end == FREE else 1.0 / far,
        )
    determinant = near * far - cross * cross
    return far / determinant, -cross / determinant, near / determinant


def actions_of(line: Line, chain: Chain, cases: Sequence[str]) -> list[Acting] | None:
    """Return the actions case by case, None where one of them is not for a plain line."""
    spans, joints = len(line.members), len(line.joints)
    column = {name: index for index, name in enumerate(cases)}
    found = [
        Acting(
            [(0.0, 0.0)] * spans,
            [(0.0, 0.0)] * spans,
            [0.0] * joints,
            [0.0] * joints,
            [0.0] * joints,
            [0.0] * joints,
        )
        for _ in cases
    ]
    for action in line.actions:
        case = column.get(action.case)
        if case is None:
            continue
        acting = found[case]
        if isinstance(action, JointForce):
            if action.horizontal:
                return None
            acting.loads[action.joint] += action.vertical
            acting.couples[action.joint] += action.moment
        elif isinstance(action, JointMovement):
            if not _imposed(line, chain, action):
                return None
            acting.sinks[action.joint] += action.vertical
            acting.turns[action.joint] += action.rotation
        else:
            effect = _on_span(chain, action)
            if effect is None:
                return None
            span = action.member
            turned, forces = acting.turned[span], acting.forces[span]
            acting.turned[span] = (turned[0] + effect[0], turned[1] + effect[1])
            acting.forces[span] = (forces[0] + effect[2], forces[1] + effect[3])
    return found


def _imposed(line: Line, chain: Chain, action: JointMovement) -> bool:
    """Whether the movement is one that its bearing imposes; others go the general way."""
    support = line.joints[action.joint].support
    if action.horizontal or support is None or (action.vertical and not support.vertical):
        return False
    return not action.rotation or bool(chain.turning[action.joint])


def _on_span(
    chain: Chain, action: DistributedForce | PointForce | PointMoment | ImposedCurvature
) -> tuple[float, float, float, float] | None:
    """Rotations of the ends of the simple span and its end forces (both pressing down).

    A force turns an end by what a unit couple there deflects the span under the force: the
    cubics 2L²x - 3Lx² + x³ and x³ - L²x over 6·EI·L.
    """
    span = action.member
    length = chain.length[span]
    soft = chain.bending[span] / (6.0 * length)
    if isinstance(action, DistributedForce):
        if any(action.axial):
            return None
        near, far, force, lever = _spread(action, length)
        return near * soft, far * soft, force - lever / length, lever / length
    if isinstance(action, PointForce):
        if action.axial:
            return None
        x, force = action.position, action.transverse
        work = force * soft * x * (length - x)
        right = force * x / length
        return work * (2.0 * length - x), -work * (length + x), force - right, right
    if isinstance(action, PointMoment):
        x, couple = action.position, action.moment
        slide = couple * chain.sliding[span] / length
        near = couple * soft * (2.0 * length * length - 6.0 * length * x + 3.0 * x * x)
        far = couple * soft * (3.0 * x * x - length * length)
        return near + slide, far + slide, -couple / length, couple / length
    width = action.curvature * (action.end - action.start)
    far = -width * (action.start + action.end) / (2.0 * length)
    return width + far, far, 0.0, 0.0


def _spread(action: DistributedForce, length: float) -> tuple[float, float, float, float]:
    """The cubics integrated over a distributed force, its resultant and lever about the start."""
    a, reach = action.start, action.end - action.start
    near_0 = a * (length - a) * (2.0 * length - a)
    near_1 = 2.0 * length * length - 6.0 * length * a + 3.0 * a * a
    far_0, far_1 = -a * (length - a) * (length + a), 3.0 * a * a - length * length
    near = far = force = lever = 0.0
    power = reach
    for i, c in enumerate(action.transverse):
        s0 = c * power / (i + 1)
        s1 = c * power * reach / (i + 2)
        s2 = c * power * reach * reach / (i + 3)
        s3 = c * power * reach * reach * reach / (i + 4)
        near += near_0 * s0 + near_1 * s1 - 3.0 * (length - a) * s2 + s3
        far += far_0 * s0 + far_1 * s1 + 3.0 * a * s2 + s3
        force += s0
        lever += a * s0 + s1
        power *= reach
    return near, far, force, lever
