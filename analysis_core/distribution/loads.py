"""The actions of a line, gathered per member, joint and case."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.fixed_end import EndActions, end_actions
from analysis_core.errors import ModelError
from analysis_core.model import Joint, JointForce, JointMovement, Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Loads:
    """Actions summed up for C cases: M members, J joints.

    members  (M, 8, C)  the fields of EndActions in their order
    forces   (J, 3, C)  on joints: N to the right, N down, N·m clockwise
    movements (J, 3, C) prescribed: m to the right, m down, rad clockwise
    """

    members: Floats
    forces: Floats
    movements: Floats


def gather(line: Line, cases: Sequence[str]) -> Loads:
    """Return the sums of all actions of ``line`` in ``cases``; other cases are left aside.

    Raises ModelError for a movement that no support could impose.
    """
    column = {name: index for index, name in enumerate(cases)}
    on_members, forces, movements = _Sum(EndActions._fields), _Sum("xzr"), _Sum("xzr")
    for action in line.actions:
        case = column.get(action.case)
        if case is None:
            continue
        if isinstance(action, JointForce):
            parts = (action.horizontal, action.vertical, action.moment)
            forces.add(action.joint, case, parts)
        elif isinstance(action, JointMovement):
            check_movement(line, action)
            parts = (action.horizontal, action.vertical, action.rotation)
            movements.add(action.joint, case, parts)
        else:
            found = end_actions(line.members[action.member], action)
            on_members.add(action.member, case, found)
    count = len(line.joints)
    return Loads(
        on_members.table(len(line.members), len(cases)),
        forces.table(count, len(cases)),
        movements.table(count, len(cases)),
    )


class _Sum:
    """Sums rows of values by place and case."""

    def __init__(self, fields: Sequence[str]) -> None:
        self._width = len(fields)
        self._places: list[tuple[int, int]] = []
        self._rows: list[tuple[float, ...]] = []

    def add(self, place: int, case: int, row: tuple[float, ...]) -> None:
        self._places.append((place, case))
        self._rows.append(row)

    def table(self, places: int, cases: int) -> Floats:
        """Return the sums as (places, fields, cases)."""
        total = np.zeros((places, cases, self._width))
        if self._rows:
            at, case = np.array(self._places).T
            np.add.at(total, (at, case), np.array(self._rows))
        return np.ascontiguousarray(total.transpose(0, 2, 1))


def check_movement(line: Line, action: JointMovement) -> None:
    """Raise ModelError where a prescribed movement finds no support to impose it."""
    held = holds(line.joints[action.joint])
    for name, value in _MOVED.items():
        if getattr(action, name) and not held[name]:
            raise ModelError(
                f"Line {line.mark}, case '{action.case}': joint {action.joint} is prescribed a "
                f"{name} movement of {getattr(action, name):g} {value}, but its support does not "
                f"hold it that way. Give it a support that does, or take the movement out."
            )


_MOVED = {"horizontal": "m", "vertical": "m", "rotation": "rad"}


def holds(joint: Joint) -> Mapping[str, float]:
    """Return the stiffness of a joint's support by direction; 0 where there is none."""
    support = joint.support
    if support is None:
        return {"horizontal": 0.0, "vertical": 0.0, "rotation": 0.0}
    return {
        "horizontal": support.horizontal,
        "vertical": support.vertical,
        "rotation": support.rotation,
    }


def is_free(joint: Joint) -> bool:
    """Whether nothing but its members holds a joint."""
    support = joint.support
    return support is None or not (support.vertical or support.horizontal or support.rotation)
