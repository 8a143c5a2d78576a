"""The numbers of many lines of one pattern: B lines, M members, J joints, C cases."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import ModelError
from analysis_core.model import (
    FREE,
    RIGID,
    Action,
    JointForce,
    JointMovement,
    Line,
    Member,
)
from analysis_core.stiffness_check.influence import Rows, rotations_and_forces
from analysis_core.stiffness_check.integrals import (
    flexibility,
    loaded_rotations,
)

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Arrays:
    """What the equations of B lines are made of.

    length, cosine, sine     (B, M)        m; direction from start to end, z upward
    flexibility              (B, M, 3)     start-start, start-end, end-end, rad/(N·m)
    springs                  (B, M, 2)     flexibility of the end springs, rad/(N·m)
    turned                   (B, M, 2, C)  end rotations of the simple beam, rad
    across                   (B, M, 2, C)  shear of the simple beam at both ends, N
    along                    (B, M, 2, C)  axial action from start to end by the lever rule, N
    forces                   (B, J, 3, C)  on joints: N right, N down, N·m clockwise
    moved                    (B, J, 3, C)  prescribed movement of the ground: m, m, rad
    supports                 (B, J, 3)     stiffness, infinite where rigid
    """

    length: Floats
    cosine: Floats
    sine: Floats
    flexibility: Floats
    springs: Floats
    turned: Floats
    across: Floats
    along: Floats
    forces: Floats
    moved: Floats
    supports: Floats


def gather(lines: Sequence[Line], cases: Sequence[Sequence[str]]) -> Arrays:
    """Return the arrays of lines that have equally many members, joints and cases.

    Raises ModelError for a movement prescribed where no support imposes it.
    """
    count, members, joints = len(lines), len(lines[0].members), len(lines[0].joints)
    every = [member for line in lines for member in line.members]
    x, z = (
        np.array([getattr(joint, axis) for line in lines for joint in line.joints])
        for axis in ("x", "z")
    )
    first = np.repeat(np.arange(count) * joints, members)
    start = first + np.array([member.start for member in every])
    end = first + np.array([member.end for member in every])
    right, up = x[end] - x[start], z[end] - z[start]
    length = np.array([_length(member) for member in every])
    distance = np.hypot(right, up)
    loads = _Loads(lines, cases)
    turned, across, along = loads.on_members(every, length)
    shape = (count, members, 2, loads.cases)
    return Arrays(
        length=length.reshape(count, members),
        cosine=(right / distance).reshape(count, members),
        sine=(up / distance).reshape(count, members),
        flexibility=_flexibilities(every, length).reshape(count, members, 3),
        springs=_spring_flexibilities(every).reshape(count, members, 2),
        turned=turned.reshape(shape),
        across=across.reshape(shape),
        along=along.reshape(shape),
        forces=loads.forces.reshape(count, joints, 3, loads.cases),
        moved=loads.moved.reshape(count, joints, 3, loads.cases),
        supports=_supports(lines).reshape(count, joints, 3),
    )


def _length(member: Member) -> float:
    pieces = member.pieces
    return pieces[0].length if len(pieces) == 1 else math.fsum(p.length for p in pieces)


def uniform(member: Member) -> bool:
    """Whether bending and shear rigidity do not vary along the member."""
    if len(member.pieces) != 1:
        return False
    piece = member.pieces[0]
    return not any(piece.flexural[1:]) and not (piece.shear and any(piece.shear[1:]))


def _flexibilities(members: Sequence[Member], length: Floats) -> Floats:
    bending, shear = _softness(members)
    found = np.empty((len(members), 3))
    found[:, 0] = found[:, 2] = length * bending / 3.0 + shear / length
    found[:, 1] = -length * bending / 6.0 + shear / length
    for index in np.flatnonzero(np.isnan(bending)):
        found[index] = flexibility(members[index].pieces)
    return found


def _softness(members: Sequence[Member]) -> tuple[Floats, Floats]:
    """Return 1/EI and 1/GA of each member, NaN where they vary."""
    bending, shear = [], []
    for member in members:
        piece = member.pieces[0]
        if uniform(member):
            bending.append(1.0 / piece.flexural[0] ** piece.power)
            shear.append(1.0 / piece.shear[0] if piece.shear else 0.0)
        else:
            bending.append(math.nan)
            shear.append(0.0)
    return np.array(bending), np.array(shear)


def _spring_flexibilities(members: Sequence[Member]) -> Floats:
    """Return 1/stiffness; a release has no unknown to go with, so its value is of no account."""
    stiffness = np.array([(m.start_spring, m.end_spring) for m in members], dtype=np.float64)
    return 1.0 / np.where(stiffness == FREE, RIGID, stiffness)


def _supports(lines: Sequence[Line]) -> Floats:
    return np.array(
        [
            (s.horizontal, s.vertical, s.rotation) if (s := joint.support) else (FREE,) * 3
            for line in lines
            for joint in line.joints
        ]
    )


class _Loads:
    """The actions of all lines, sorted by kind; slot = place in the flat arrays."""

    def __init__(self, lines: Sequence[Line], cases: Sequence[Sequence[str]]) -> None:
        self.cases = len(cases[0])
        members, joints = len(lines[0].members), len(lines[0].joints)
        self.forces = np.zeros((len(lines) * joints, 3, self.cases))
        self.moved = np.zeros_like(self.forces)
        self._on_members: list[tuple[int, int, Action]] = []
        columns: dict[tuple[str, ...], dict[str, int]] = {}
        for place, (line, names) in enumerate(zip(lines, cases, strict=True)):
            key = tuple(names)
            column = columns.get(key)
            if column is None:
                column = columns[key] = {name: i for i, name in enumerate(key)}
            first_member, first_joint = place * members, place * joints
            for action in line.actions:
                case = column.get(action.case)
                if case is None:
                    continue
                if isinstance(action, JointForce):
                    acting = (action.horizontal, action.vertical, action.moment)
                    self.forces[first_joint + action.joint, :, case] += acting
                elif isinstance(action, JointMovement):
                    _check_imposed(line, action)
                    imposed = (action.horizontal, action.vertical, action.rotation)
                    self.moved[first_joint + action.joint, :, case] += imposed
                else:
                    self._on_members.append((first_member + action.member, case, action))

    def on_members(
        self, members: Sequence[Member], length: Floats
    ) -> tuple[Floats, Floats, Floats]:
        """Return turned, across and along, (N, 2, C) each, of all N members."""
        count = len(members)
        bending, shear = _softness(members)
        rows = Rows(count * self.cases)
        turned = np.zeros((count * self.cases, 2))
        varying = np.isnan(bending)
        for index, case, action in self._on_members:
            slot = index * self.cases + case
            rows.add(slot, index, action)
            if varying[index]:
                turned[slot] += loaded_rotations(members[index].pieces, action)  # type: ignore[arg-type]
        found = rotations_and_forces(rows, length, np.where(varying, 0.0, bending), shear)
        turned, across, along = (
            values.reshape(count, self.cases, 2).transpose(0, 2, 1)
            for values in (turned + found.turned, found.across, found.along)
        )
        return turned, across, along


def _check_imposed(line: Line, action: JointMovement) -> None:
    support = line.joints[action.joint].support
    for name in ("horizontal", "vertical", "rotation"):
        if getattr(action, name) and not (support and getattr(support, name)):
            raise ModelError(
                f"Line {line.mark}, case '{action.case}': a {name} movement is prescribed at "
                f"joint {action.joint}, where no support holds the line that way. Add the "
                f"support or take the movement out."
            )
