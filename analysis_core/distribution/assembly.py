"""A line in balance as a LineSolution: reactions, verification, read-only arrays."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.axial import forces
from analysis_core.distribution.loads import Loads, gather, holds
from analysis_core.distribution.mechanisms import refuse_idle_couples
from analysis_core.distribution.recover import MemberForces, Movements, member_forces, movements
from analysis_core.distribution.sway import balance
from analysis_core.distribution.verify import (
    continuity_residual,
    joint_residual,
    own_rotations,
)
from analysis_core.errors import ModelError
from analysis_core.model import FREE, RIGID, Line
from analysis_core.results import LineSolution

Floats = NDArray[np.float64]

TREE = "moment distribution, one release per joint"
SWAY = "moment distribution, translations released one by one"


def solve_any(line: Line, cases: Sequence[str]) -> LineSolution:
    """Solve any line or frame, whatever its supports and translations.

    Raises MechanismError, and ModelError (also where the line states a fault).
    """
    if line.fault:
        raise ModelError(f"Line {line.mark} is not analysed: {line.fault}")
    refuse_idle_couples(line, cases)
    loads = gather(line, cases)
    balanced = balance(line, loads)
    found = forces(line, loads, balanced)
    ends = member_forces(line, loads, balanced, found)
    moved = movements(line, loads, balanced, ends.moments)
    reactions = np.zeros((len(line.joints), 3, len(cases)))
    reactions[:, :2] = found.reactions
    reactions[:, 2] = _couples(line, loads, ends, moved)
    method = SWAY if len(balanced.sizes) else TREE
    return assembled(line, cases, loads, ends, moved, reactions, method)


def assembled(
    line: Line,
    cases: Sequence[str],
    loads: Loads,
    ends: MemberForces,
    moved: Movements,
    reactions: Floats,
    method: str,
) -> LineSolution:
    """Turn arrays with the case last into a verified LineSolution."""
    rotations = ends.moments * 0.0
    for member in line.members:
        own = own_rotations(line, loads, member.id, ends.moments, moved.displacements)
        for index, (joint, spring) in enumerate(
            ((member.start, member.start_spring), (member.end, member.end_spring))
        ):
            joined = moved.rotations[joint] - (
                0.0 if spring == FREE else ends.moments[member.id, index] / spring
            )
            rotations[member.id, index] = own[index] if spring == FREE else joined
    return LineSolution(
        line=line,
        cases=tuple(cases),
        end_moments=_case_first(ends.moments),
        end_shears=_case_first(ends.shears),
        axial=_case_first(ends.axial),
        rotations=_case_first(moved.rotations),
        end_rotations=_case_first(rotations),
        displacements=_case_first(moved.displacements),
        reactions=_case_first(reactions),
        joint_residual=joint_residual(
            line, cases, ends.moments, ends.shears, ends.axial, reactions
        ),
        continuity_residual=continuity_residual(
            line, loads, ends.moments, moved.rotations, moved.displacements
        ),
        method=method,
    )


def _case_first(array: Floats) -> Floats:
    turned = np.ascontiguousarray(np.moveaxis(array, -1, 0), dtype=np.float64)
    turned.flags.writeable = False
    return turned


def _couples(line: Line, loads: Loads, ends: MemberForces, moved: Movements) -> Floats:
    """Reaction couples (J, C): by the spring, or by equilibrium where the support is rigid."""
    couples = np.zeros((len(line.joints), loads.forces.shape[2]))
    for joint in line.joints:
        stiffness = holds(joint)["rotation"]
        if stiffness == RIGID:
            couples[joint.id] = -loads.forces[joint.id, 2]
        elif stiffness:
            give = moved.rotations[joint.id] - loads.movements[joint.id, 2]
            couples[joint.id] = -stiffness * give
    for member in line.members:
        for index, joint_id in enumerate((member.start, member.end)):
            if holds(line.joints[joint_id])["rotation"] == RIGID:
                couples[joint_id] += ends.moments[member.id, index]
    return couples
