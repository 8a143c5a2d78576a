"""From lines to end forces, movements and reactions."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import MechanismError, ModelError
from analysis_core.model import (
    DistributedForce,
    JointForce,
    JointMovement,
    Line,
    PointForce,
)
from analysis_core.results import LineSolution
from analysis_core.stiffness_check.arrays import Arrays, gather
from analysis_core.stiffness_check.elimination import (
    SingularError,
    solve_alone,
    solve_together,
)
from analysis_core.stiffness_check.equations import (
    equations,
    member_forces,
    on_joints,
    prescribed,
)
from analysis_core.stiffness_check.mechanisms import moving_joints
from analysis_core.stiffness_check.pattern import Numbering, Pattern, numbering, pattern_of
from analysis_core.stiffness_check.pattern import is_level as _is_level

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Solved:
    """Effects of B lines of one pattern, arrays as in LineSolution with the line first.

    moments, shears, axial, end_rotations (B, M, 2, C); movements (B, J, 3, C) right, down,
    clockwise; reactions (B, J, 3, C); forces (B, J, 2, C): what members and actions exert on
    the joints, right and down.
    """

    pattern: Pattern
    arrays: Arrays
    moments: Floats
    shears: Floats
    axial: Floats
    end_rotations: Floats
    movements: Floats
    reactions: Floats
    forces: Floats


def solve_stiffness(line: Line, cases: Sequence[str]) -> LineSolution:
    """Return end forces, movements and reactions of ``line`` for ``cases``, by displacements.

    Serves to check the moment distribution and shares nothing with it.  Axial forces that
    equilibrium leaves open (two rigid bearings in a row) come out as for one axial rigidity.

    Raises MechanismError where parts of the line move freely, and ModelError where it has a
    fault or prescribed movements cannot be followed.
    """
    if line.fault:
        raise ModelError(f"Line {line.mark} is not solved: {line.fault}")
    pattern = line_pattern(line, tuple(cases))
    arrays = gather([line], [cases])
    numbers = numbering(pattern)
    _refuse_mechanism(line, pattern, numbers, arrays)
    try:
        unknowns = solve_alone(equations(pattern, numbers, arrays))
    except SingularError as error:
        raise _mechanism(line, tuple(range(len(line.joints)))) from error
    except ModelError as error:
        raise ModelError(f"Line {line.mark}: {error}") from error
    return _as_solution(line, tuple(cases), spread(pattern, numbers, arrays, unknowns))


def solve_group(
    pattern: Pattern, lines: Sequence[Line], cases: Sequence[Sequence[str]]
) -> Solved | None:
    """Solve lines of one pattern together; None where one of them has no unique solution."""
    numbers = numbering(pattern)
    try:
        arrays = gather(lines, cases)
        if any(np.any(arrays.forces[:, joint, d]) for joint, d in numbers.loose):
            return None
        found = solve_together(equations(pattern, numbers, arrays))
    except (SingularError, ModelError):
        return None
    return spread(pattern, numbers, arrays, found)


def line_pattern(line: Line, cases: tuple[str, ...]) -> Pattern:
    """Return the pattern of a line; one that is level and has only vertical actions is short."""
    return pattern_of(line, plane=not _is_level(line) or _acts_along(line, cases))


def _acts_along(line: Line, cases: tuple[str, ...]) -> bool:
    for action in line.actions:
        if isinstance(action, DistributedForce):
            along = any(action.axial)
        elif isinstance(action, PointForce):
            along = bool(action.axial)
        elif isinstance(action, JointForce | JointMovement):
            along = bool(action.horizontal)
        else:
            continue
        if along and action.case in cases:
            return True
    return False


def _refuse_mechanism(line: Line, pattern: Pattern, numbers: Numbering, arrays: Arrays) -> None:
    """A line that moves freely, or a couple on a joint that nothing keeps from turning."""
    loaded = {j for j, d in numbers.loose if np.any(arrays.forces[:, j, d])}
    moving = loaded | set(moving_joints(pattern, numbers, arrays))
    if moving:
        raise _mechanism(line, tuple(sorted(moving)))


def _mechanism(line: Line, joints: tuple[int, ...]) -> MechanismError:
    named = ", ".join(str(joint) for joint in joints[:8]) + (", ..." if len(joints) > 8 else "")
    remedy = "Add a support there, or join member ends that are released."
    return MechanismError(
        f"Line {line.mark}: joint(s) {named} can move freely; nothing holds them. {remedy}",
        joints=joints,
        remedy=remedy,
    )


def spread(pattern: Pattern, numbers: Numbering, arrays: Arrays, unknowns: Floats) -> Solved:
    """Return all effects from the unknowns (B, N, C)."""
    moments = _pick(unknowns, numbers.moment)
    given, springs = prescribed(pattern, arrays)
    movements = given + _pick(unknowns, numbers.movement)
    shears, axial = member_forces(pattern, arrays, moments, _pick(unknowns, numbers.axial))
    forces = on_joints(pattern, arrays, shears, axial)
    return Solved(
        pattern,
        arrays,
        moments,
        shears,
        axial,
        _end_rotations(pattern, arrays, moments, movements),
        movements,
        _reactions(pattern, arrays, moments, movements, forces, springs),
        forces,
    )


def _pick(unknowns: Floats, places: NDArray[np.intp]) -> Floats:
    """Return unknowns (B, ..., C) by their places, 0 where there is none."""
    padded = (
        np.concatenate([unknowns, np.zeros_like(unknowns[:, :1])], axis=1)
        if (unknowns.shape[1])
        else np.zeros((unknowns.shape[0], 1, unknowns.shape[2]))
    )
    return np.asarray(padded[:, places])


def _end_rotations(pattern: Pattern, arrays: Arrays, moments: Floats, movements: Floats) -> Floats:
    """Rotations of the member ends themselves: chord and bending."""
    soft = arrays.flexibility
    bent = np.stack(
        [
            soft[..., 0:1] * moments[:, :, 0] + soft[..., 1:2] * moments[:, :, 1],
            soft[..., 1:2] * moments[:, :, 0] + soft[..., 2:3] * moments[:, :, 1],
        ],
        axis=2,
    )
    start, end = np.array(pattern.ends).T
    apart = movements[:, end, :2] - movements[:, start, :2]
    down = np.stack([arrays.sine, arrays.cosine], axis=-1)[..., None]
    chord = (down * apart).sum(2) / arrays.length[..., None]
    return np.asarray(bent + arrays.turned + chord[:, :, None])


def _reactions(
    pattern: Pattern,
    arrays: Arrays,
    moments: Floats,
    movements: Floats,
    forces: Floats,
    springs: Floats,
) -> Floats:
    """Horizontal (right), vertical (up), moment (clockwise), acting on the line."""
    carried = np.concatenate([forces, arrays.forces[:, :, 2:]], axis=2)
    for index, ends in enumerate(pattern.ends):
        for k, joint in enumerate(ends):
            carried[:, joint, 2] -= moments[:, index, k]
    sprung = springs[..., None] * (arrays.moved - movements)
    # Where the line is held as a whole, that force counts as a reaction too.
    kept = np.isinf(arrays.supports) | ~np.array(pattern.free)
    acting = np.where(kept[..., None], -carried, sprung)
    acting[:, :, 1] *= -1.0
    return np.asarray(acting)


def _as_solution(line: Line, cases: tuple[str, ...], solved: Solved) -> LineSolution:
    return LineSolution(
        line=line,
        cases=cases,
        end_moments=_case_first(solved.moments),
        end_shears=_case_first(solved.shears),
        axial=_case_first(solved.axial),
        rotations=_case_first(solved.movements[:, :, 2]),
        end_rotations=_case_first(solved.end_rotations),
        displacements=_case_first(solved.movements[:, :, :2]),
        reactions=_case_first(solved.reactions),
        joint_residual=_joint_residual(solved),
        continuity_residual=_continuity_residual(solved),
        method="displacement method with member flexibilities",
    )


def _case_first(values: Floats) -> Floats:
    array = np.ascontiguousarray(np.moveaxis(values[0], -1, 0))
    array.flags.writeable = False
    return array


def _joint_residual(solved: Solved) -> float:
    """Largest unbalanced moment at any joint, N·m."""
    unbalanced = solved.arrays.forces[:, :, 2] + solved.reactions[:, :, 2]
    for index, ends in enumerate(solved.pattern.ends):
        for k, joint in enumerate(ends):
            unbalanced[:, joint] -= solved.moments[:, index, k]
    return float(np.abs(unbalanced).max(initial=0.0))


def _continuity_residual(solved: Solved) -> float:
    """Largest difference between a joint's rotation and that of a member end joined to it."""
    gap = 0.0
    for index, ends in enumerate(solved.pattern.ends):
        for k, joint in enumerate(ends):
            if not solved.pattern.moments[index][k]:
                continue
            spring = solved.arrays.springs[:, index, k, None] * solved.moments[:, index, k]
            turned = solved.end_rotations[:, index, k] + spring
            gap = max(gap, float(np.abs(turned - solved.movements[:, joint, 2]).max(initial=0.0)))
    return gap
