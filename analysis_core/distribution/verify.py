"""What every solution proves of itself, from the end forces alone.

* Joints: the forces and couples that members, actions and supports put on every joint add up to
  nothing, and so do all actions and reactions on the line as a whole.  The resultants of the
  actions are summed afresh here.
* Continuity: the rotation that each member end has by its own end moments and actions (the
  flexibility side) is the rotation of its joint.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.loads import Loads
from analysis_core.distribution.stiffness_factors import elastic_weights, inverse
from analysis_core.model import (
    FREE,
    Action,
    DistributedForce,
    JointForce,
    Line,
    PointForce,
    PointMoment,
)

Floats = NDArray[np.float64]


def joint_residual(
    line: Line,
    cases: Sequence[str],
    moments: Floats,
    shears: Floats,
    axial: Floats,
    reactions: Floats,
) -> float:
    """Return the largest unbalance in N·m over joints, cases and the line as a whole.

    ``moments``, ``shears``, ``axial`` (M, 2, C) as in LineSolution, ``reactions`` (J, 3, C).
    Unbalanced forces count with the length of the longest member as their lever.
    """
    left = _on_joints(line, cases, moments, shears, axial, reactions)
    along, about = _within_members(line, cases, moments, shears, axial)
    lever = max(member.length for member in line.members)
    worst = max(
        float(np.abs(left[:, :2]).max(initial=0.0)) * lever,
        float(np.abs(left[:, 2]).max(initial=0.0)),
        float(np.abs(along).max(initial=0.0)) * lever,
        float(np.abs(about).max(initial=0.0)),
    )
    return worst


def continuity_residual(
    line: Line,
    loads: Loads,
    moments: Floats,
    rotations: Floats,
    displacements: Floats,
) -> float:
    """Return the largest difference in rad between a joint and the member ends fastened to it."""
    worst = 0.0
    for member in line.members:
        ends = own_rotations(line, loads, member.id, moments, displacements)
        for index, (joint, spring) in enumerate(
            ((member.start, member.start_spring), (member.end, member.end_spring))
        ):
            if spring == FREE:
                continue
            joined = rotations[joint] - moments[member.id, index] * inverse(spring)
            worst = max(worst, float(np.abs(joined - ends[index]).max(initial=0.0)))
    return worst


def own_rotations(
    line: Line, loads: Loads, number: int, moments: Floats, displacements: Floats
) -> Floats:
    """Return the rotations (2, C) of a member's ends by its end moments, actions and chord."""
    member = line.members[number]
    weights = elastic_weights(member.pieces)
    cosine, sine = line.direction(member)
    across = displacements[member.end] - displacements[member.start]
    chord = (across[0] * sine + across[1] * cosine) / weights.length
    own = loads.members[number]
    start, end = moments[number]
    # Written out from the flexibilities: unit couples on a beam on two supports.
    left, right = weights.centre / weights.length, 1.0 - weights.centre / weights.length
    stretch = (weights.spread + weights.slip) / weights.length**2
    near = weights.total * right * right + stretch
    far = weights.total * left * left + stretch
    cross = stretch - weights.total * left * right
    return np.stack(
        [
            chord + own[2] + near * start + cross * end,
            chord + own[3] + cross * start + far * end,
        ]
    )


def _on_joints(
    line: Line,
    cases: Sequence[str],
    moments: Floats,
    shears: Floats,
    axial: Floats,
    reactions: Floats,
) -> Floats:
    """Return what is left over on each joint: (J, 3, C) N right, N down, N·m clockwise."""
    left = np.array(reactions)
    left[:, 1] *= -1.0
    for member in line.members:
        cosine, sine = line.direction(member)
        for index, (joint, sign) in enumerate(((member.start, 1.0), (member.end, -1.0))):
            shear, pull = shears[member.id, index] * sign, axial[member.id, index] * sign
            left[joint, 0] += shear * sine + pull * cosine
            left[joint, 1] += shear * cosine - pull * sine
            left[joint, 2] -= moments[member.id, index]
    column = {name: index for index, name in enumerate(cases)}
    for action in line.actions:
        if isinstance(action, JointForce) and action.case in column:
            left[action.joint, :, column[action.case]] += (
                action.horizontal,
                action.vertical,
                action.moment,
            )
    return left


def _within_members(
    line: Line, cases: Sequence[str], moments: Floats, shears: Floats, axial: Floats
) -> tuple[Floats, Floats]:
    """Return what is left over on each member: forces (M, 2, C) and couples (M, C)."""
    forces = np.stack([shears[:, 0] - shears[:, 1], axial[:, 1] - axial[:, 0]], axis=1)
    lengths = np.array([member.length for member in line.members])[:, None]
    couples = moments.sum(1) + shears[:, 1] * lengths
    column = {name: index for index, name in enumerate(cases)}
    for action in line.actions:
        case = column.get(action.case)
        if case is None:
            continue
        across, along, couple = resultant(action)
        member = getattr(action, "member", None)
        if member is not None:
            forces[member, 0, case] -= across
            forces[member, 1, case] += along
            couples[member, case] += couple
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
