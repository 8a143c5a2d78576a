"""Equations of a line: compatibility of every member end, length of every member, equilibrium.

Unknown are end moments ``m`` (clockwise on the member), axial forces ``n`` (tension) and joint
movements ``u`` together::

    [  F   0  -Bᵀ ] [m]   [ -turned + prescribed movements ]   rotation fits the joint's
    [  0   0   Gᵀ ] [n] = [  prescribed movements          ]   the length stays
    [ -B   G  -K  ] [u]   [ -forces                        ]   every joint is in equilibrium

Nothing is eliminated beforehand, so a stiff member next to a flexible one costs no digits.
The matrix is symmetric; all lines of a pattern share the places of its entries.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.stiffness_check.arrays import Arrays
from analysis_core.stiffness_check.pattern import (
    SLIPS_AT_END,
    SLIPS_AT_START,
    Numbering,
    Pattern,
)

Floats = NDArray[np.float64]
Index = NDArray[np.intp]


@dataclass(frozen=True, slots=True, eq=False)
class Equations:
    """Sparse symmetric matrices of B lines with the same places, and C right-hand sides.

    row, column (T,); entries (B, T), each place at most once; right (B, N, C).  Rows ``axial``
    say that members keep their length, ``lengths`` (B, A) in m.  ``units`` (B, N) are sizes of
    the unknowns that make flexibilities about 1.
    """

    size: int
    row: Index
    column: Index
    entries: Floats
    right: Floats
    axial: Index
    lengths: Floats
    units: Floats


def equations(pattern: Pattern, numbers: Numbering, arrays: Arrays) -> Equations:
    """Set up the equations of B lines."""
    build = _Builder(numbers, arrays)
    given, springs = prescribed(pattern, arrays)
    for index, (start, end) in enumerate(pattern.ends):
        build.bending(index, start, end, given)
        build.length(index, start, end, given)
    build.equilibrium(pattern, springs)
    keeping = numbers.axial >= 0
    return Equations(
        numbers.size,
        np.array(build.rows, dtype=np.intp),
        np.array(build.columns, dtype=np.intp),
        np.stack(build.entries, axis=1) if build.entries else np.zeros((len(arrays.length), 0)),
        build.right,
        numbers.axial[keeping],
        arrays.length[:, keeping],
        _units(numbers, arrays),
    )


def _units(numbers: Numbering, arrays: Arrays) -> Floats:
    """Forces in terms of movements: the mean flexibility of the members decides."""
    size = np.sqrt(arrays.flexibility[:, :, [0, 2]].mean((1, 2)))[:, None]
    units = np.repeat(1.0 / size, numbers.size, axis=1)
    moves = numbers.movement[numbers.movement >= 0]
    units[:, moves] = size
    return units


def prescribed(pattern: Pattern, arrays: Arrays) -> tuple[Floats, Floats]:
    """Return the known joint movements (B, J, 3, C) and the spring stiffnesses (B, J, 3)."""
    rigid = np.isinf(arrays.supports)[..., None]
    given = np.where(rigid, arrays.moved, 0.0)
    springs = np.where(np.array(pattern.sprung), arrays.supports, 0.0)
    return given, springs


def axes(arrays: Arrays) -> tuple[Floats, Floats]:
    """Return the members' local down and along as (right, down): (B, M, 2) each."""
    down = np.stack([arrays.sine, arrays.cosine], axis=-1)
    along = np.stack([arrays.cosine, -arrays.sine], axis=-1)
    return down, along


def _known_axial(pattern: Pattern, arrays: Arrays) -> Floats:
    """Return the part of the axial forces (B, M, 2, C) at start and end that is no unknown.

    The unknown is the mean axial force; where a leg slips, the force there is zero.
    """
    slips = np.array(pattern.slips)[:, None]
    start, end = arrays.along[:, :, 0], -arrays.along[:, :, 1]
    mean = np.where(slips == SLIPS_AT_END, -end, np.where(slips == SLIPS_AT_START, -start, 0.0))
    return np.stack([start + mean, end + mean], axis=2)


def member_forces(
    pattern: Pattern, arrays: Arrays, moments: Floats, axial: Floats
) -> tuple[Floats, Floats]:
    """Return shears and axial forces (B, M, 2, C) at start and end, for given unknowns.

    moments (B, M, 2, C), axial (B, M, C).
    """
    shears = arrays.across - (moments.sum(2) / arrays.length[..., None])[:, :, None]
    return shears, _known_axial(pattern, arrays) + axial[:, :, None]


def on_joints(pattern: Pattern, arrays: Arrays, shears: Floats, axial: Floats) -> Floats:
    """Return the forces (right, down) of members and actions on the joints: (B, J, 2, C)."""
    down, along = axes(arrays)
    forces = arrays.forces[:, :, :2].copy()
    for index, ends in enumerate(pattern.ends):
        for k, sign in ((0, 1.0), (1, -1.0)):
            across = down[:, index, :, None] * shears[:, index, k, None]
            pull = along[:, index, :, None] * axial[:, index, k, None]
            forces[:, ends[k]] += sign * (across + pull)
    return forces


class _Builder:
    """Collects entries; an entry off the diagonal is noted on both sides."""

    def __init__(self, numbers: Numbering, arrays: Arrays) -> None:
        self.numbers, self.arrays = numbers, arrays
        self.down, self.along = axes(arrays)
        self.rows: list[int] = []
        self.columns: list[int] = []
        self.entries: list[Floats] = []
        lines, _, _, cases = arrays.turned.shape
        self.right = np.zeros((lines, numbers.size, cases))

    def bending(self, index: int, start: int, end: int, given: Floats) -> None:
        """Rotation of each member end = rotation of its joint, relative to the chord."""
        arrays, places = self.arrays, self.numbers.moment[index]
        slope = self.down[:, index] / arrays.length[:, index, None]
        chord = np.einsum("bd,bdc->bc", slope, given[:, end, :2] - given[:, start, :2])
        for k, joint in enumerate((start, end)):
            place = int(places[k])
            if place < 0:
                continue
            own = arrays.flexibility[:, index, 2 * k] + arrays.springs[:, index, k]
            self._diagonal(place, own)
            self._turn(place, joint)
            for d in (0, 1):
                self._entry(place, int(self.numbers.movement[end, d]), slope[:, d])
                self._entry(place, int(self.numbers.movement[start, d]), -slope[:, d])
            self.right[:, place] += given[:, joint, 2] - chord - arrays.turned[:, index, k]
        if min(places) >= 0:
            self._entry(int(places[0]), int(places[1]), arrays.flexibility[:, index, 1])

    def _turn(self, place: int, joint: int) -> None:
        self._entry(place, int(self.numbers.movement[joint, 2]), -np.ones(len(self.right)))

    def length(self, index: int, start: int, end: int, given: Floats) -> None:
        """Both ends of a member move alike along it."""
        place = int(self.numbers.axial[index])
        if place < 0:
            return
        self._diagonal(place, np.zeros(len(self.right)))
        for d in (0, 1):
            along = self.along[:, index, d]
            self._entry(place, int(self.numbers.movement[start, d]), along)
            self._entry(place, int(self.numbers.movement[end, d]), -along)
            self.right[:, place] -= along[:, None] * (given[:, start, d] - given[:, end, d])

    def equilibrium(self, pattern: Pattern, springs: Floats) -> None:
        """Forces on every joint that may move balance those of its springs."""
        arrays, size = self.arrays, self.numbers.size
        lines, members, _, cases = arrays.turned.shape
        idle = np.zeros((lines, members, 2, cases))
        shears, axial = member_forces(pattern, arrays, idle, idle[:, :, 0])
        forces = np.concatenate(
            [on_joints(pattern, arrays, shears, axial), arrays.forces[:, :, 2:]], axis=2
        )
        for joint, places in enumerate(self.numbers.movement):
            for d in (0, 1, 2):
                place = int(places[d])
                if not 0 <= place < size:
                    continue
                self._diagonal(place, -springs[:, joint, d])
                ground = springs[:, joint, d, None] * arrays.moved[:, joint, d]
                self.right[:, place] -= forces[:, joint, d] + ground

    def _diagonal(self, place: int, values: Floats) -> None:
        self.rows.append(place)
        self.columns.append(place)
        self.entries.append(values)

    def _entry(self, one: int, other: int, values: Floats) -> None:
        if one < 0 or other < 0:
            return
        self.rows += [one, other]
        self.columns += [other, one]
        self.entries += [values, values]
