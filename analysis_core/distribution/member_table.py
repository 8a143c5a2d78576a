"""The members of a line as arrays, for what is done to all of them alike."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.stiffness_factors import elastic_weights
from analysis_core.model import FREE, Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class MemberTable:
    """M members, arrays (M,) unless said otherwise.

    joints (2, M): ids at start and end; down, along (M, 2): unit vectors (right, down) across and
    along; length m; near, far, cross: rotations of the ends from the chord per couple on them,
    rad/(N·m), from the flexibilities; gives (2, M): flexibility of the end springs, 0 where
    rigid or released; released (2, M).
    """

    joints: NDArray[np.intp]
    down: Floats
    along: Floats
    length: Floats
    near: Floats
    far: Floats
    cross: Floats
    gives: Floats
    released: NDArray[np.bool_]


def member_table(line: Line) -> MemberTable:
    """Return the members of a line as arrays."""
    weights = np.array([elastic_weights(member.pieces) for member in line.members])
    length, total, centre, spread, slip = weights.T
    joints = np.array([(member.start, member.end) for member in line.members]).T
    cosine, sine = np.array([line.direction(member) for member in line.members]).T
    springs = np.array([(member.start_spring, member.end_spring) for member in line.members]).T
    released = springs == FREE
    left = centre / length
    right = 1.0 - left
    stretch = (spread + slip) / length**2
    return MemberTable(
        joints=joints,
        down=np.stack([sine, cosine], axis=1),
        along=np.stack([cosine, -sine], axis=1),
        length=length,
        near=total * right * right + stretch,
        far=total * left * left + stretch,
        cross=stretch - total * left * right,
        gives=np.where(released, 0.0, 1.0 / np.where(released, 1.0, springs)),
        released=released,
    )


def own_rotations(
    table: MemberTable, by_actions: Floats, moments: Floats, displacements: Floats
) -> Floats:
    """Return the rotations (M, 2, C) of the member ends, from the flexibility side.

    By their end moments (M, 2, C), by actions (M, 2, C, as rotations of the simple beam), and by
    the chord that joint displacements (J, 2, C) turn.
    """
    apart = displacements[table.joints[1]] - displacements[table.joints[0]]
    chord = (apart * table.down[:, :, None]).sum(1) / table.length[:, None]
    start, end = moments[:, 0], moments[:, 1]
    near, far, cross = table.near[:, None], table.far[:, None], table.cross[:, None]
    bent = np.stack([near * start + cross * end, cross * start + far * end], axis=1)
    return np.asarray(chord[:, None] + by_actions + bent)


def joined_rotations(table: MemberTable, rotations: Floats, moments: Floats) -> Floats:
    """Return the rotations (M, 2, C) that joints (J, C) give the member ends through springs.

    Released ends get that of their joint.
    """
    at_ends = rotations[table.joints.T]
    return np.asarray(at_ends - table.gives.T[:, :, None] * moments)
