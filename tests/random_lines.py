"""Random beam lines and frames for comparisons: lopsided, and with every kind of part."""

from __future__ import annotations

import math
import random
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


def pieces(rng: random.Random, length: float, *, plain: bool = False) -> tuple[Piece, ...]:
    """One constant rigidity, or a stepped, tapered, haunched or shear-flexible member."""
    rigidity = 10.0 ** rng.uniform(5.0, 8.0)
    kind = 0.0 if plain else rng.random()
    if kind < 0.5:
        return (Piece(length, (rigidity,)),)
    if kind < 0.65:
        cut = length * rng.uniform(0.2, 0.7)
        return (Piece(cut, (rigidity,)), Piece(length - cut, (rigidity * rng.uniform(0.1, 5.0),)))
    if kind < 0.8:
        depth = rigidity ** (1.0 / 3.0)
        return (Piece(length, (depth, depth * rng.uniform(-0.7, 2.0)), 3.0),)
    if kind < 0.9:
        depth, haunch = rigidity ** (1.0 / 3.0), length * rng.uniform(0.1, 0.4)
        rise = rng.uniform(0.2, 1.5)
        return (
            Piece(haunch, (depth * (1.0 + rise), -2.0 * rise * depth, rise * depth), 3.0),
            Piece(length - haunch, (rigidity,)),
        )
    return (Piece(length, (rigidity,), 1.0, (rigidity * rng.uniform(0.05, 2.0) / length**2,)),)


def member_actions(rng: random.Random, member: Member, case: str = "q") -> list[Action]:
    """A few actions of different kinds on a member, some of them along it."""
    length, found = member.length, []
    for _ in range(rng.randint(0, 3)):
        kind = rng.random()
        if kind < 0.25:
            found.append(DistributedForce(case, member.id, 0.0, length, (rng.uniform(-2e3, 9e3),)))
        elif kind < 0.5:
            low, high = sorted(rng.uniform(0.0, length) for _ in range(2))
            shape = tuple(rng.uniform(-3e3, 6e3) for _ in range(rng.randint(1, 4)))
            along = (rng.uniform(-2e3, 2e3), rng.uniform(-5e2, 5e2)) if rng.random() < 0.3 else ()
            found.append(DistributedForce(case, member.id, low, high, shape, along))
        elif kind < 0.75:
            along = rng.uniform(-8e3, 8e3) if rng.random() < 0.3 else 0.0
            found.append(
                PointForce(case, member.id, rng.uniform(0.0, length), rng.uniform(-1e4, 3e4), along)
            )
        elif kind < 0.88:
            found.append(
                PointMoment(case, member.id, rng.uniform(0.0, length), rng.uniform(-2e4, 2e4))
            )
        else:
            low, high = sorted(rng.uniform(0.0, length) for _ in range(2))
            found.append(ImposedCurvature(case, member.id, low, high, rng.uniform(-2e-3, 2e-3)))
    return found


def spring(rng: random.Random, chance: float, size: float = 6.5) -> float:
    """Rigid, or with ``chance`` a release or a spring of about 10**size N·m/rad."""
    if rng.random() > chance:
        return RIGID
    return FREE if rng.random() < 0.4 else 10.0 ** rng.uniform(size - 1.5, size + 1.5)


def beam_line(seed: int) -> Line:
    """Return a random beam line; it may turn out to be a mechanism."""
    rng = random.Random(seed)
    count = rng.randint(1, 7)
    # Slopes of 0, 3/4 and -5/12 in steps that are exact in binary: all joints on one line.
    across, up = rng.choice(((1, 0), (1, 0), (1, 0), (4, 3), (12, -5)))
    joints, members, step = [], [], 0
    for index in range(count + 1):
        x, z = across * step / 64.0, up * step / 64.0
        joints.append(Joint(index, x, z, support=_bearing(rng, index, count)))
        step += max(1, round(64.0 * rng.uniform(0.8, 9.0) / math.hypot(across, up)))
    for index in range(count):
        a, b = joints[index], joints[index + 1]
        length = math.hypot(b.x - a.x, b.z - a.z)
        members.append(
            Member(
                index,
                index,
                index + 1,
                pieces(rng, length),
                start_spring=spring(rng, 0.12),
                end_spring=spring(rng, 0.12),
                span=index + 1,
            )
        )
    if rng.random() < 0.3:
        _add_legs(rng, joints, members, count)
    line = Line(f"line {seed}", tuple(joints), tuple(members))
    return replace(line, actions=tuple(_actions(rng, line)))


def _bearing(rng: random.Random, index: int, count: int) -> Support | None:
    kind = rng.random()
    if index in (0, count):
        if kind < 0.2:
            return Support(RIGID, RIGID, RIGID)
        if kind < 0.3:
            return Support(FREE, FREE, RIGID)
        if kind < 0.5:
            return None
    elif kind < 0.2:
        return None
    if kind > 0.85:
        return Support(10.0 ** rng.uniform(5.0, 8.0), FREE, rng.choice((0.0, 3e6)))
    if kind > 0.75:
        return Support(RIGID, FREE, 10.0 ** rng.uniform(5.0, 8.0))
    return Support(RIGID, rng.choice((FREE, FREE, RIGID)), FREE)


def _add_legs(rng: random.Random, joints: list[Joint], members: list[Member], count: int) -> None:
    for top in range(count + 1):
        if rng.random() < 0.5:
            continue
        height = rng.uniform(2.5, 5.0)
        foot = len(joints)
        fixity = rng.choice((RIGID, FREE, 5e6))
        joints.append(
            Joint(
                foot, joints[top].x, joints[top].z - height, support=Support(RIGID, RIGID, fixity)
            )
        )
        start, end = rng.choice(((foot, top), (top, foot)))
        members.append(
            Member(
                len(members),
                start,
                end,
                pieces(rng, height),
                role="leg",
                start_spring=spring(rng, 0.1),
                end_spring=spring(rng, 0.1),
            )
        )


def _actions(rng: random.Random, line: Line) -> list[Action]:
    found: list[Action] = []
    # Supports of a sloping line cannot settle without stretching it.
    level = line.kind == "frame" or len({j.z for j in line.joints if j.support}) <= 1
    for member in line.members:
        found += member_actions(rng, member)
    for joint in line.joints:
        support = joint.support
        if rng.random() < 0.25:
            found.append(
                JointForce(
                    "q",
                    joint.id,
                    rng.choice((0.0, rng.uniform(-5e3, 9e3))),
                    rng.uniform(-1e4, 1e4),
                    rng.choice((0.0, rng.uniform(-2e4, 2e4))),
                )
            )
        if support is not None and rng.random() < 0.15:
            found.append(
                JointMovement(
                    "q",
                    joint.id,
                    vertical=rng.uniform(-5e-3, 9e-3) if support.vertical and level else 0.0,
                    rotation=rng.uniform(-3e-3, 3e-3) if support.rotation else 0.0,
                )
            )
    return found


def frame(seed: int) -> Line:
    """Return a random frame: storeys and bays with parts missing, gables, brackets, braces."""
    rng = random.Random(seed)
    storeys, bays = rng.randint(1, 3), rng.randint(1, 3)
    xs, zs = [0.0], [0.0]
    for _ in range(bays):
        xs.append(xs[-1] + rng.uniform(2.5, 8.0))
    for _ in range(storeys):
        zs.append(zs[-1] + rng.uniform(2.5, 5.0))
    joints: list[Joint] = []
    number: dict[tuple[int, int], int] = {}

    def joint(x: float, z: float, support: Support | None = None) -> int:
        joints.append(Joint(len(joints), x, z, support=support))
        return len(joints) - 1

    lean = rng.choice((0.0, 0.0, 0.3))
    for level, z in enumerate(zs):
        for axis, x in enumerate(xs):
            support = None
            if level == 0:
                rotation = rng.choice((RIGID, FREE, 2e6))
                support = Support(RIGID, rng.choice((RIGID, RIGID, 5e6)), rotation)
            number[level, axis] = joint(x + (lean if axis == 0 else 0.0) * level, z, support)
    ends: list[tuple[int, int]] = []
    for level in range(1, len(zs)):
        ends += [(number[level - 1, a], number[level, a]) for a in range(len(xs))]
        if level == storeys and rng.random() < 0.3:
            for a in range(bays):
                left, right = joints[number[level, a]], joints[number[level, a + 1]]
                ridge = joint((left.x + right.x) / 2.3, left.z + rng.uniform(0.5, 2.0))
                ends += [(left.id, ridge), (ridge, right.id)]
        else:
            ends += [(number[level, a], number[level, a + 1]) for a in range(bays)]
    if rng.random() < 0.4:
        root = joints[number[1, bays]]
        ends.append((root.id, joint(root.x + rng.uniform(0.5, 2.0), root.z + rng.choice((0, 0.4)))))
    if rng.random() < 0.2:
        ends.append((number[0, 0], number[1, 1]))
    members = []
    for start, end in ends:
        if rng.random() < 0.15:
            start, end = end, start
        a, b = joints[start], joints[end]
        length = math.hypot(b.x - a.x, b.z - a.z)
        middle = rng.random() < 0.15
        parts = [(start, end, length)]
        if middle:
            share = rng.uniform(0.2, 0.8)
            between = joint(a.x + share * (b.x - a.x), a.z + share * (b.z - a.z))
            c = joints[between]
            parts = [
                (start, between, math.hypot(c.x - a.x, c.z - a.z)),
                (between, end, math.hypot(b.x - c.x, b.z - c.z)),
            ]
        for one, other, size in parts:
            members.append(
                Member(
                    len(members),
                    one,
                    other,
                    pieces(rng, size),
                    start_spring=spring(rng, 0.08),
                    end_spring=spring(rng, 0.08),
                )
            )
    line = Line(f"frame {seed}", tuple(joints), tuple(members), kind="frame")
    return replace(line, actions=tuple(_actions(rng, line)))


def plain_line(seed: int, case: str = "q") -> Line:
    """Return a random straight beam line on vertically rigid supports.

    With overhangs, spans of several members, slopes and forces along the line here and there.
    """
    rng = random.Random(seed)
    count = rng.randint(1, 7)
    across, up = rng.choice(((1, 0), (1, 0), (1, 0), (4, 3), (12, -5)))
    many_bare = rng.choice((0.0, 0.0, 0.4))
    bare = [rng.random() < (0.3 if i in (0, count) else many_bare) for i in range(count + 1)]
    if all(bare):
        bare[count // 2] = False
    hold = rng.choice([i for i in range(count + 1) if not bare[i]])
    joints, members, step = [], [], 0
    for index in range(count + 1):
        rotation = rng.choice((FREE, FREE, FREE, RIGID, 10.0 ** rng.uniform(5.0, 8.0)))
        horizontal = RIGID if index == hold and rng.random() < 0.5 else FREE
        support = None if bare[index] else Support(RIGID, horizontal, rotation)
        joints.append(Joint(index, across * step / 64.0, up * step / 64.0, support=support))
        step += max(1, round(64.0 * rng.uniform(0.8, 9.0) / math.hypot(across, up)))
    for index in range(count):
        a, b = joints[index], joints[index + 1]
        length = math.hypot(b.x - a.x, b.z - a.z)
        loose = 0.0 if bare[index] or bare[index + 1] else 0.15
        members.append(
            Member(
                index,
                index,
                index + 1,
                pieces(rng, length, plain=rng.random() < 0.5),
                start_spring=spring(rng, loose),
                end_spring=spring(rng, loose),
                span=index + 1,
            )
        )
    line = Line(f"plain {seed}", tuple(joints), tuple(members))
    return replace(line, actions=tuple(replace(a, case=case) for a in _actions(rng, line)))
