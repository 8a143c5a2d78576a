"""A line in balance as a LineSolution: reactions, verification, read-only arrays."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.axial import forces
from analysis_core.distribution.loads import Loads, gather, holds
from analysis_core.distribution.mechanisms import refuse_idle_couples
from analysis_core.distribution.member_table import (
    MemberTable,
    joined_rotations,
    member_table,
    own_rotations,
)
from analysis_core.distribution.recover import member_forces, movements
from analysis_core.distribution.sway import balance
from analysis_core.distribution.verify import continuity_residual, joint_residual
from analysis_core.errors import ModelError
from analysis_core.model import RIGID, Line
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
    table = member_table(line)
    balanced = balance(line, loads)
    found = forces(line, loads, balanced)
    ends = member_forces(line, loads, table, balanced, found)
    moved = movements(line, loads, balanced, ends.moments)
    own = own_rotations(table, loads.members[:, 2:4], ends.moments, moved.displacements)
    joined = joined_rotations(table, moved.rotations, ends.moments)
    couples = _couples(line, loads, table, ends.moments, moved.rotations)
    reactions = np.concatenate([found.reactions, couples[:, None]], axis=1)
    return LineSolution(
        line=line,
        cases=tuple(cases),
        end_moments=_case_first(ends.moments),
        end_shears=_case_first(ends.shears),
        axial=_case_first(ends.axial),
        rotations=_case_first(moved.rotations),
        end_rotations=_case_first(np.where(table.released.T[:, :, None], own, joined)),
        displacements=_case_first(moved.displacements),
        reactions=_case_first(reactions),
        joint_residual=joint_residual(
            line, cases, table, ends.moments, ends.shears, ends.axial, reactions
        ),
        continuity_residual=continuity_residual(table, own, joined),
        method=SWAY if len(balanced.sizes) else TREE,
    )


def _case_first(array: Floats) -> Floats:
    turned = np.ascontiguousarray(np.moveaxis(array, -1, 0), dtype=np.float64)
    turned.flags.writeable = False
    return turned


def _couples(
    line: Line, loads: Loads, table: MemberTable, moments: Floats, rotations: Floats
) -> Floats:
    """Reaction couples (J, C): by the spring, or by equilibrium where the support is rigid."""
    stiffness = np.array([holds(joint)["rotation"] for joint in line.joints])[:, None]
    if not stiffness.any():
        return np.zeros_like(rotations)
    rigid = stiffness == RIGID
    needed = -loads.forces[:, 2]
    np.add.at(needed, table.joints.T, moments)
    springs = np.where(rigid, 0.0, stiffness) * (loads.movements[:, 2] - rotations)
    return np.where(rigid, needed, springs)
