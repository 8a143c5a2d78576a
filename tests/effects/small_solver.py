"""A plain displacement solution of horizontal prismatic lines, for the tests of effects alone.

Hermite's cubics; fixed-end forces by Gauss-Legendre quadrature of the loads against them, exact
for the polynomial loads of the tests.  It shares no code with the program.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from analysis_core.model import (
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
from analysis_core.results import LineSolution

PIN = Support(vertical=np.inf)
FIXED = Support(vertical=np.inf, horizontal=np.inf, rotation=np.inf)
_GAUSS = np.polynomial.legendre.leggauss(10)


def beam_line(spans, rigidities, supports, actions=(), mark="T-1", **joint_fields):
    """A horizontal line; ``supports`` one per joint (None: a free end)."""
    x = np.concatenate([[0.0], np.cumsum(spans)])
    joints = tuple(
        Joint(i, float(at), 0.0, support=s, **{k: v[i] for k, v in joint_fields.items()})
        for i, (at, s) in enumerate(zip(x, supports, strict=True))
    )
    members = tuple(
        Member(i, i, i + 1, (Piece(float(length), (float(ei),)),), span=i + 1, element=f"B{i + 1}")
        for i, (length, ei) in enumerate(zip(spans, rigidities, strict=True))
    )
    return Line(mark, joints, members, tuple(actions))


def uniform(case, member, length, intensity):
    return DistributedForce(case, member, 0.0, length, (intensity,))


def hermite(x, length):
    """Deflection (down) for unit end movements (w, rotation) at start and end, and its slope."""
    u = x / length
    value = np.array(
        [1 - 3 * u**2 + 2 * u**3, length * (u - 2 * u**2 + u**3), 3 * u**2 - 2 * u**3,
         length * (u**3 - u**2)]
    )  # fmt: skip
    slope = np.array(
        [(-6 * u + 6 * u**2) / length, 1 - 4 * u + 3 * u**2, (6 * u - 6 * u**2) / length,
         3 * u**2 - 2 * u]
    )  # fmt: skip
    return value, slope


def _loads(line, member, action):
    length = member.length
    out = np.zeros(4)
    if isinstance(action, DistributedForce):
        half = 0.5 * (action.end - action.start)
        for g, weight in zip(*_GAUSS, strict=True):
            v = half * (1.0 + g)
            q = sum(a * v**i for i, a in enumerate(action.transverse))
            out += weight * half * q * hermite(action.start + v, length)[0]
    elif isinstance(action, PointForce):
        out += action.transverse * hermite(action.position, length)[0]
    elif isinstance(action, PointMoment):
        out += action.moment * hermite(action.position, length)[1]
    elif isinstance(action, ImposedCurvature):
        half = 0.5 * (action.end - action.start)
        for g, weight in zip(*_GAUSS, strict=True):
            x = action.start + half * (1.0 + g)
            u = x / length
            bend = np.array([-6 + 12 * u, length * (-4 + 6 * u), 6 - 12 * u, length * (6 * u - 2)])
            ei = member.flexural_rigidity
            out += -weight * half * ei * action.curvature * bend / length**2
    return out


def solve(line: Line, cases) -> LineSolution:
    joints, members = len(line.joints), len(line.members)
    stiffness = np.zeros((2 * joints, 2 * joints))
    local = []
    for member in line.members:
        length, ei = member.length, member.flexural_rigidity
        k = (ei / length**3) * np.array(
            [[12, 6 * length, -12, 6 * length], [6 * length, 4 * length**2, -6 * length,
             2 * length**2], [-12, -6 * length, 12, -6 * length],
             [6 * length, 2 * length**2, -6 * length, 4 * length**2]]
        )  # fmt: skip
        at = np.array([2 * member.start, 2 * member.start + 1, 2 * member.end, 2 * member.end + 1])
        stiffness[np.ix_(at, at)] += k
        local.append((at, k))
    held = []
    for joint in line.joints:
        for d, s in ((0, joint.support and joint.support.vertical),
                     (1, joint.support and joint.support.rotation)):  # fmt: skip
            if s and np.isinf(s):
                held.append(2 * joint.id + d)
            elif s:
                stiffness[2 * joint.id + d, 2 * joint.id + d] += s
    free = [d for d in range(2 * joints) if d not in held]
    shape = len(cases), members, 2
    end_moments, end_shears = np.zeros(shape), np.zeros(shape)
    displacements, rotations = np.zeros((len(cases), joints, 2)), np.zeros((len(cases), joints))
    reactions, end_rotations = np.zeros((len(cases), joints, 3)), np.zeros(shape)
    for c, case in enumerate(cases):
        force, moved = np.zeros(2 * joints), np.zeros(2 * joints)
        fixed = [np.zeros(4) for _ in line.members]
        for action in line.actions:
            if action.case != case:
                continue
            if isinstance(action, JointForce):
                force[2 * action.joint] += action.vertical
                force[2 * action.joint + 1] += action.moment
            elif isinstance(action, JointMovement):
                moved[2 * action.joint] += action.vertical
                moved[2 * action.joint + 1] += action.rotation
            else:
                fixed[action.member] += _loads(line, line.members[action.member], action)
        for (at, _), f in zip(local, fixed, strict=True):
            force[at] += f
        applied = force.copy()
        u = np.zeros(2 * joints)
        u[held] = moved[held]
        u[free] = np.linalg.solve(stiffness[np.ix_(free, free)], (force - stiffness @ u)[free])
        residual = stiffness @ u - applied
        for m, ((at, k), f) in enumerate(zip(local, fixed, strict=True)):
            p = k @ u[at] - f  # forces on the member: down at start, clockwise, down, clockwise
            end_moments[c, m] = p[1], p[3]
            end_shears[c, m] = -p[0], p[2]
            end_rotations[c, m] = u[at[1]], u[at[3]]
        displacements[c, :, 1], rotations[c] = u[0::2], u[1::2]
        for d in held:
            if d % 2:
                reactions[c, d // 2, 2] = residual[d]
            else:
                reactions[c, d // 2, 1] = -residual[d]
        for joint in line.joints:
            s = joint.support
            if s and 0.0 < s.vertical < np.inf:
                reactions[c, joint.id, 1] = s.vertical * u[2 * joint.id]
    return LineSolution(
        line, tuple(cases), end_moments, end_shears, np.zeros(shape), rotations, end_rotations,
        displacements, reactions, 0.0, 0.0, "test",
    )  # fmt: skip


def relabelled(line, actions):
    return replace(line, actions=tuple(actions))
