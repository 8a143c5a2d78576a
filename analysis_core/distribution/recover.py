"""From bars back to members: end moments, shears, axial forces, rotations and displacements."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.axial import Forces
from analysis_core.distribution.bar_actions import member_moments
from analysis_core.distribution.bars import Bar
from analysis_core.distribution.loads import Loads
from analysis_core.distribution.member_table import MemberTable
from analysis_core.distribution.stiffness_factors import (
    elastic_weights,
    end_rotations,
    inverse,
)
from analysis_core.distribution.sway import Balanced
from analysis_core.model import FREE, Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class MemberForces:
    """End forces of M members for C cases, (M, 2, C): N·m clockwise, N, N tension."""

    moments: Floats
    shears: Floats
    axial: Floats


@dataclass(frozen=True, slots=True, eq=False)
class Movements:
    """Movements of J joints: rotations (J, C) rad, displacements (J, 2, C) m right and down."""

    rotations: Floats
    displacements: Floats


def member_forces(
    line: Line, loads: Loads, table: MemberTable, balanced: Balanced, found: Forces
) -> MemberForces:
    """Spread the end forces of the bars over their members."""
    shape = (len(line.members), 2, loads.forces.shape[2])
    moments, pulls = np.zeros(shape), np.zeros((shape[0], shape[2]))
    for index, bar in enumerate(balanced.bars):
        rows = list(bar.members)
        moments[rows] = member_moments(bar, balanced.actions[index], *balanced.moments[index])
        pull = found.axial[index, 0]
        for number in bar.members:
            pulls[number] = pull
            if number != bar.members[-1]:
                right, down = loads.forces[line.members[number].end, :2]
                along = right * bar.direction[0] - down * bar.direction[1]
                pull = pull - loads.members[number, 6] - along
    moments[table.released.T] = 0.0
    lean = moments.sum(1) / table.length[:, None]
    own = loads.members
    shears = np.stack([own[:, 4] - lean, -own[:, 5] - lean], axis=1)
    return MemberForces(moments, shears, np.stack([pulls, pulls - own[:, 6]], axis=1))


def movements(line: Line, loads: Loads, balanced: Balanced, moments: Floats) -> Movements:
    """Return the movements of every joint, from those of the joints that were released.

    Inside bars and along tails they follow member by member from the flexibility side.
    """
    turns = np.array(balanced.rotations)
    shifts = np.array(balanced.displacements)
    ends = np.zeros((len(line.members), 2, loads.forces.shape[2]))
    count = len(balanced.reduction.bars)
    for bar in balanced.bars[:count]:
        if len(bar.members) == 1:
            continue  # its joints are known already
        _Walk(line, loads, bar, moments, turns, shifts, ends).between()
    for bar, root in reversed(balanced.reduction.tails):
        _Walk(line, loads, bar, moments, turns, shifts, ends).outwards(bar.start == root)
    return Movements(turns, shifts)


class _Walk:
    """Walks along a bar, writing rotations and displacements of what it passes."""

    def __init__(
        self,
        line: Line,
        loads: Loads,
        bar: Bar,
        moments: Floats,
        turns: Floats,
        shifts: Floats,
        ends: Floats,
    ) -> None:
        self.bar = bar
        self.members = [line.members[number] for number in bar.members]
        self.moments = [moments[number] for number in bar.members]
        self.turns, self.shifts, self.ends = turns, shifts, ends
        self.bent = [self._bent(loads, i) for i in range(len(self.members))]
        cosine, sine = bar.direction
        self.down = np.array([sine, cosine])[:, None]
        self.along = np.array([cosine, -sine])[:, None]

    def _bent(self, loads: Loads, index: int) -> tuple[Floats, Floats]:
        """Rotations of a member's ends from its chord: by its end moments and its actions."""
        own = loads.members[self.members[index].id]
        start, end = self.moments[index]
        weights = elastic_weights(self.members[index].pieces)
        by_moments = end_rotations(weights, start, end)
        return by_moments[0] + own[2], by_moments[1] + own[3]

    def outwards(self, from_start: bool) -> None:
        """Walk along a tail from the joint that carries it to its tip."""
        if from_start:
            self._forwards(len(self.members), to_tip=True)
        else:
            self._backwards(-1, to_tip=True)

    def between(self) -> None:
        """Walk from both ends up to the hinges; what lies between two hinges hangs on them."""
        first = self._forwards(len(self.members), to_tip=False)
        if first == len(self.members):
            return
        last = self._backwards(first - 1, to_tip=False)
        if last >= first:
            self._hang(first, last)

    def _forwards(self, stop: int, *, to_tip: bool) -> int:
        """Pass members while no release is met; return the first one not passed."""
        for index in range(stop):
            member = self.members[index]
            if member.start_spring == FREE:
                return index
            chord = (
                self.turns[member.start]
                - self.moments[index][0] * inverse(member.start_spring)
                - self.bent[index][0]
            )
            self._set(index, chord)
            last = index == len(self.members) - 1
            if not last or to_tip:
                self._move(member.end, member.start, chord * member.length)
            if member.end_spring == FREE:
                return index + 1
            if not last or to_tip:
                self._turn_with(index, 1)
        return stop

    def _backwards(self, stop: int, *, to_tip: bool) -> int:
        """The same from the end; returns the last member not passed."""
        for index in range(len(self.members) - 1, stop, -1):
            member = self.members[index]
            if member.end_spring == FREE:
                return index
            chord = (
                self.turns[member.end]
                - self.moments[index][1] * inverse(member.end_spring)
                - self.bent[index][1]
            )
            self._set(index, chord)
            first = index == 0
            if (not first and index - 1 > stop) or to_tip:
                self._move(member.start, member.end, -chord * member.length)
            if member.start_spring == FREE:
                return index - 1
            if not first or to_tip:
                self._turn_with(index, 0)
        return stop

    def _hang(self, first: int, last: int) -> None:
        """Members ``first`` to ``last`` between two hinges whose displacements are known."""
        start, end = self.members[first].start, self.members[last].end
        fall = (self.down * (self.shifts[end] - self.shifts[start])).sum(0)
        kinks, reached = [np.zeros_like(fall)], np.zeros_like(fall)
        for index in range(first, last + 1):
            member = self.members[index]
            reached = reached + kinks[-1] * member.length
            if index < last:
                after = self.members[index + 1]
                kinks.append(
                    kinks[-1]
                    + self.bent[index][1]
                    + self.moments[index][1] * inverse(member.end_spring)
                    - self.moments[index + 1][0] * inverse(after.start_spring)
                    - self.bent[index + 1][0]
                )
        length = sum(self.members[index].length for index in range(first, last + 1))
        base = (fall - reached) / length
        for index in range(first, last + 1):
            member, chord = self.members[index], base + kinks[index - first]
            self._set(index, chord)
            if index < last:
                self._move(member.end, member.start, chord * member.length)
            if index < len(self.members) - 1 and member.end_spring != FREE:
                self._turn_with(index, 1)
        if first > 0 and self.members[first].start_spring != FREE:
            self._turn_with(first, 0)

    def _turn_with(self, index: int, end: int) -> None:
        """Set the rotation of the joint at a member's end that is fastened to it."""
        member = self.members[index]
        joint, spring = (
            (member.end, member.end_spring) if end else (member.start, member.start_spring)
        )
        self.turns[joint] = self.ends[member.id, end] + self.moments[index][end] * inverse(spring)

    def _set(self, index: int, chord: Floats) -> None:
        member = self.members[index]
        self.ends[member.id, 0] = chord + self.bent[index][0]
        self.ends[member.id, 1] = chord + self.bent[index][1]

    def _move(self, joint: int, beside: int, fall: Floats) -> None:
        """Set the displacement of ``joint``: as ``beside`` along the bar, ``fall`` further down."""
        self.shifts[joint] = self.shifts[beside] + self.down * fall
