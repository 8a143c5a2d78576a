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
    JointForce,
    JointMovement,
    Line,
    Member,
    MemberAction,
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
    bending, shear = _softness(every)
    loads = _Loads(lines, cases, every, np.isnan(bending))
    turned, across, along = loads.on_members(length, bending, shear)
    shape = (count, members, 2, len(cases[0]))
    return Arrays(
        length=length.reshape(count, members),
        cosine=(right / distance).reshape(count, members),
        sine=(up / distance).reshape(count, members),
        flexibility=_flexibilities(every, length, bending, shear).reshape(count, members, 3),
        springs=_spring_flexibilities(every).reshape(count, members, 2),
        turned=turned.reshape(shape),
        across=across.reshape(shape),
        along=along.reshape(shape),
        forces=loads.forces.reshape(count, joints, 3, len(cases[0])),
        moved=loads.moved.reshape(count, joints, 3, len(cases[0])),
        supports=_supports(lines).reshape(count, joints, 3),
    )


def _length(member: Member) -> float:
    pieces = member.pieces
    return pieces[0].length if len(pieces) == 1 else math.fsum(p.length for p in pieces)


def _flexibilities(
    members: Sequence[Member], length: Floats, bending: Floats, shear: Floats
) -> Floats:
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
        pieces = member.pieces
        piece = pieces[0]
        if len(pieces) > 1 or any(piece.flexural[1:]) or any((piece.shear or ())[1:]):
            bending.append(math.nan)
            shear.append(0.0)
        else:
            bending.append(piece.flexural[0] ** -piece.power)
            shear.append(1.0 / piece.shear[0] if piece.shear else 0.0)
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
    """The actions of all lines; ``varying`` marks members whose rigidity varies."""

    def __init__(
        self,
        lines: Sequence[Line],
        cases: Sequence[Sequence[str]],
        members: Sequence[Member],
        varying: NDArray[np.bool_],
    ) -> None:
        self._cases = len(cases[0])
        joints = len(lines[0].joints)
        self.forces = np.zeros((len(lines) * joints, 3, self._cases))
        self.moved = np.zeros_like(self.forces)
        self._rows = Rows(len(members) * self._cases)
        self._turned = np.zeros((len(members) * self._cases, 2))
        self._varying = varying.tolist()
        self._on_varying: dict[int, list[tuple[int, MemberAction]]] = {}
        columns: dict[tuple[str, ...], dict[str, int]] = {}
        for place, (line, names) in enumerate(zip(lines, cases, strict=True)):
            key = tuple(names)
            column = columns.get(key)
            if column is None:
                column = columns[key] = {name: i for i, name in enumerate(key)}
            self._take(line, column, place * len(line.members), place * joints)
        for index, acting in self._on_varying.items():
            turned = loaded_rotations(members[index].pieces, [action for _, action in acting])
            np.add.at(self._turned, [slot for slot, _ in acting], turned)

    def _take(
        self, line: Line, column: dict[str, int], first_member: int, first_joint: int
    ) -> None:
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
                self._on_member(first_member + action.member, case, action)

    def _on_member(self, index: int, case: int, action: MemberAction) -> None:
        slot = index * self._cases + case
        self._rows.add(slot, index, action)
        if self._varying[index]:
            self._on_varying.setdefault(index, []).append((slot, action))

    def on_members(
        self, length: Floats, bending: Floats, shear: Floats
    ) -> tuple[Floats, Floats, Floats]:
        """Return turned, across and along, (N, 2, C) each, of all N members."""
        uniform_ones = np.where(np.isnan(bending), 0.0, bending)
        found = rotations_and_forces(self._rows, length, uniform_ones, shear)
        turned, across, along = (
            values.reshape(len(length), self._cases, 2).transpose(0, 2, 1)
            for values in (self._turned + found.turned, found.across, found.along)
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
