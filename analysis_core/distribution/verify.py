"""What every solution proves of itself, from the end forces alone.

* Equilibrium: the forces and couples that members, actions and supports put on every joint add
  up to nothing; so do those on every member, with the resultants of its actions summed afresh.
  With every part in equilibrium the whole is.
* Continuity: the rotation that each member end has by its own end moments and actions (the
  flexibility side) is the rotation of its joint.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.member_table import MemberTable
from analysis_core.model import Action, DistributedForce, JointForce, Line, PointForce, PointMoment

Floats = NDArray[np.float64]


def joint_residual(
    line: Line,
    cases: Sequence[str],
    table: MemberTable,
    moments: Floats,
    shears: Floats,
    axial: Floats,
    reactions: Floats,
) -> float:
    """Return the largest unbalance in N·m over joints, members and cases.

    ``moments``, ``shears``, ``axial`` (M, 2, C) as in LineSolution but for the order of axes,
    ``reactions`` (J, 3, C).  Unbalanced forces count with the longest member as their lever.
    """
    column = {name: index for index, name in enumerate(cases)}
    joints = _on_joints(line, column, table, moments, shears, axial, reactions)
    forces, couples = _on_members(line, column, table, moments, shears, axial)
    lever = float(table.length.max())
    return max(
        float(np.abs(joints[:, :2]).max(initial=0.0)) * lever,
        float(np.abs(joints[:, 2]).max(initial=0.0)),
        float(np.abs(forces).max(initial=0.0)) * lever,
        float(np.abs(couples).max(initial=0.0)),
    )


def continuity_residual(table: MemberTable, own: Floats, joined: Floats) -> float:
    """Return the largest difference in rad between member ends and the joints they are fastened to.

    ``own``, ``joined`` (M, 2, C): rotations from the member's side and from the joint's.
    """
    apart = np.abs(own - joined)
    apart[table.released.T] = 0.0
    return float(apart.max(initial=0.0))


def _on_joints(
    line: Line,
    column: dict[str, int],
    table: MemberTable,
    moments: Floats,
    shears: Floats,
    axial: Floats,
    reactions: Floats,
) -> Floats:
    """Return what is left over on each joint: (J, 3, C) N right, N down, N·m clockwise."""
    left = np.array(reactions)
    left[:, 1] *= -1.0
    for end, sign in ((0, 1.0), (1, -1.0)):
        pressed = sign * (
            shears[:, None, end] * table.down[:, :, None]
            + axial[:, None, end] * table.along[:, :, None]
        )
        np.add.at(left[:, :2], table.joints[end], pressed)
        np.subtract.at(left[:, 2], table.joints[end], moments[:, end])
    for action in line.actions:
        if isinstance(action, JointForce) and action.case in column:
            left[action.joint, :, column[action.case]] += (
                action.horizontal,
                action.vertical,
                action.moment,
            )
    return left


def _on_members(
    line: Line,
    column: dict[str, int],
    table: MemberTable,
    moments: Floats,
    shears: Floats,
    axial: Floats,
) -> tuple[Floats, Floats]:
    """Return what is left over on each member: forces (M, 2, C) and couples (M, C)."""
    forces = np.stack([shears[:, 0] - shears[:, 1], axial[:, 1] - axial[:, 0]], axis=1)
    couples = moments.sum(1) + shears[:, 1] * table.length[:, None]
    places, values = [], []
    for action in line.actions:
        case, member = column.get(action.case), getattr(action, "member", None)
        if case is not None and member is not None:
            places.append((member, case))
            values.append(resultant(action))
    if places:
        members, cases = np.array(places).T
        across, along, couple = np.array(values).T
        np.subtract.at(forces, (members, 0, cases), across)
        np.add.at(forces, (members, 1, cases), along)
        np.add.at(couples, (members, cases), couple)
    return forces, couples


def resultant(action: Action) -> tuple[float, float, float]:
    """Return the force across and along the member and the clockwise couple about its start."""
    if isinstance(action, PointForce):
        return action.transverse, action.axial, action.transverse * action.position
    if isinstance(action, PointMoment):
        return 0.0, 0.0, action.moment
    if not isinstance(action, DistributedForce):
        return 0.0, 0.0, 0.0
    extent = action.end - action.start
    across = lever = 0.0
    for power, coefficient in enumerate(action.transverse):
        across += coefficient * extent ** (power + 1) / (power + 1)
        lever += coefficient * extent ** (power + 2) / (power + 2)
    along = sum(c * extent ** (power + 1) / (power + 1) for power, c in enumerate(action.axial))
    return across, along, across * action.start + lever
