"""Random lines and frames whose numbers are short rationals, so that they are solved exactly."""

from __future__ import annotations

import random
from collections.abc import Callable
from dataclasses import replace

from analysis_core.model import (
    FREE,
    RIGID,
    Action,
    DistributedForce,
    ImposedCurvature,
    Joint,
    JointForce,
    JointMovement,
    Line,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Support,
)

CASE = "exact"
TRIPLES = ((3, 4, 5), (4, 3, 5), (12, 5, 13), (5, 12, 13), (15, 8, 17))


def eighths(rng: random.Random, low: float, high: float) -> float:
    """Return a multiple of 1/8, exact in binary."""
    return rng.randint(round(low * 8), round(high * 8)) / 8.0


def beam_line(seed: int, *, ratio: int = 2, plain: bool = False) -> Line:
    """Return a stable line of 1 to 6 spans; EI spreads over ``ratio`` decades.

    All kinds of actions and springs; ``plain``: forces and couples only, rigid connections.
    """
    rng = random.Random(seed)
    count = rng.randint(1, 6)
    joints, members, x = [], [], 0.0
    for index in range(count + 1):
        joints.append(Joint(index, x, 0.0, support=_bearing(rng, index, count)))
        x += eighths(rng, 1.5, 9.0)
    for index in range(count):
        length = joints[index + 1].x - joints[index].x
        rigid = plain or rng.random() < 0.7
        springs = [RIGID if rigid else rng.choice((RIGID, 2e5, 3e7)) for _ in range(2)]
        members.append(
            Member(index, index, index + 1, _pieces(rng, length, ratio), "span", *springs)
        )
    line = Line(f"exact {seed}", tuple(joints), tuple(members))
    actions = _actions(rng, line)
    if plain:
        actions = [a for a in actions if not isinstance(a, ImposedCurvature | JointMovement)]
    return replace(line, actions=tuple(actions))


def gable(seed: int, *, ratio: int = 1) -> Line:
    """Return a frame of one or two bays with rafters, leaning legs, pins, springs and hinges.

    EI spreads over ``ratio`` decades.
    """
    rng = random.Random(seed)
    joints: list[Joint] = []
    members: list[Member] = []

    def joint(x: float, z: float, support: Support | None = None) -> int:
        joints.append(Joint(len(joints), x, z, support=support))
        return len(joints) - 1

    def member(start: int, end: int, length: float, released: bool = False) -> None:
        spring = FREE if released else rng.choice((RIGID, RIGID, RIGID, 4e6))
        members.append(
            Member(len(members), start, end, _pieces(rng, length, ratio), "span", RIGID, spring)
        )

    def foot() -> Support:
        turning = rng.choice((RIGID, FREE, 3e6))
        return Support(RIGID, rng.choice((RIGID, 8e6)), turning)

    # Scales are multiples of 1/8, so that coordinates are exact and directions rational.
    along, up, long = rng.choice(TRIPLES)
    scale = eighths(rng, 3.0 / up, 6.0 / up)
    height, leans = up * scale, rng.random() < 0.5
    top = joint(along * scale if leans else 0.0, height)
    member(joint(0.0, 0.0, Support(RIGID, RIGID, RIGID)), top, long * scale if leans else height)
    for _ in range(rng.randint(1, 2)):
        top = _bay(rng, joint, member, joints[top], foot())
    line = Line(f"gable {seed}", tuple(joints), tuple(members), kind="frame")
    actions = _actions(rng, line)
    actions += [JointForce(CASE, top, eighths(rng, -9.0, 9.0) * 1e3)]
    return replace(line, actions=tuple(actions))


def _bay(
    rng: random.Random,
    joint: Callable[..., int],
    member: Callable[..., None],
    left: Joint,
    foot: Support,
) -> int:
    """Add a beam, or rafters that meet halfway, and a leg; return the head of the leg."""
    along, up, long = rng.choice(((4, 3, 5), (12, 5, 13)))
    scale = eighths(rng, 5.0 / along, 9.0 / along) / 2.0
    right = left.x + 2.0 * along * scale
    head = joint(right, left.z)
    if rng.random() < 0.4:
        member(left.id, head, 2.0 * along * scale)
    else:
        ridge = joint(left.x + along * scale, left.z + up * scale)
        member(left.id, ridge, long * scale)
        member(ridge, head, long * scale, released=rng.random() < 0.3)
    member(joint(right, 0.0, foot), head, left.z)
    return head


def _bearing(rng: random.Random, index: int, count: int) -> Support | None:
    if index == 0:
        return Support(RIGID, RIGID, rng.choice((RIGID, FREE, 5e6)))
    if index == count and count > 1 and rng.random() < 0.3:
        return None
    if rng.random() < 0.15:
        return Support(rng.choice((1e6, 4e7)), FREE, FREE)
    return Support(RIGID, FREE, rng.choice((FREE, FREE, FREE, 6e6)))


def _pieces(rng: random.Random, length: float, ratio: int) -> tuple[Piece, ...]:
    rigidity = float(rng.randint(1, 9) * 10 ** (6 + rng.randint(0, ratio)))
    kind = rng.random()
    if kind < 0.6:
        return (Piece(length, (rigidity,)),)
    if kind < 0.8:
        return (Piece(length / 4.0, (rigidity,)), Piece(length * 0.75, (rigidity * 3.0,)))
    return (Piece(length, (rigidity,), shear=(rigidity / 2.0,)),)


def _actions(rng: random.Random, line: Line) -> list[Action]:
    found: list[Action] = []
    for member in line.members:
        length = member.length
        for _ in range(rng.randint(0, 2)):
            low, high = sorted((length * rng.randint(0, 8) / 8.0, length * rng.randint(0, 8) / 8.0))
            kind = rng.randint(0, 5)
            if kind == 0:
                found.append(
                    DistributedForce(CASE, member.id, 0.0, length, (eighths(rng, -4, 9) * 1e3,))
                )
            elif kind == 1:
                shape = tuple(eighths(rng, -5, 8) * 1e3 for _ in range(rng.randint(1, 4)))
                found.append(DistributedForce(CASE, member.id, low, high, shape))
            elif kind == 2:
                found.append(PointForce(CASE, member.id, low, eighths(rng, -9, 30) * 1e3))
            elif kind == 3:
                found.append(PointMoment(CASE, member.id, high, eighths(rng, -20, 20) * 1e3))
            elif kind == 4:
                found.append(
                    ImposedCurvature(CASE, member.id, low, high, eighths(rng, -2, 2) / 1024)
                )
    for joint in line.joints:
        support = joint.support
        if support is not None and rng.random() < 0.2:
            found.append(
                JointMovement(
                    CASE,
                    joint.id,
                    vertical=eighths(rng, -2, 4) / 512 if support.vertical else 0.0,
                    rotation=eighths(rng, -2, 2) / 1024 if support.rotation else 0.0,
                )
            )
        if rng.random() < 0.2:
            found.append(
                JointForce(
                    CASE,
                    joint.id,
                    vertical=eighths(rng, -9, 9) * 1e3,
                    moment=eighths(rng, -9, 9) * 1e3,
                )
            )
    return found
