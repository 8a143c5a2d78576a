"""Rotations of the joints of any line by releasing each joint once.

Where bars form a tree, joints are released from the outermost inwards: the far joint of a bar
is held by the stiffness ``R`` of everything beyond it, which gives the near end its modified
stiffness and tells what is carried over::

    s'_AB = (both + s_AB R) / (s_BA + R)          both = s_AB s_BA (1 - c_AB c_BA)

the formula of DESIGN with the subtraction taken out, so that no digit is lost whatever the
ratio of the stiffnesses.  One release of every joint is then exact.  (T. Y. Lin, A Direct Method
of Moment Distribution, Trans. ASCE 99 (1934); H. Cross, Proc. ASCE, May 1930.)  Joints on closed
rings of bars are released one after the other with the rest kept free: elimination.
"""

from __future__ import annotations

from collections.abc import Collection, Sequence
from dataclasses import dataclass

import numpy as np

from analysis_core.distribution.bars import Bar
from analysis_core.distribution.linear import Long, solve_symmetric

CLAMP = 1e200
"""Stands for a support that is rigid against rotation (N·m/rad); no product overflows.

Rotations that such a support is prescribed belong in the held moments."""

SUSPECT = 1e-10
"""A pivot below this part of its diagonal asks whether something moves freely."""


@dataclass(frozen=True, slots=True, eq=False)
class Released:
    """rotations (n, c) rad of the joints, moments (B, 2, c) N·m on the bars, and the smallest
    relative pivot: 0 where a joint to which something is fastened is not held by anything.
    """

    rotations: Long
    moments: Long
    weakest: float


def release(
    bars: Sequence[Bar],
    joints: Sequence[int],
    support: Long,
    held: Long,
    couples: Long,
    fastened: Collection[int] = (),
) -> Released:
    """Release every joint once, so that all moments balance.

    ``joints`` (n): joint ids; ``support`` (n): rotational stiffness of their supports; ``held``
    (B, 2, c): end moments of the bars with all joints held; ``couples`` (n, c): applied to the
    joints, N·m.  ``fastened`` joints have a bar that turns with them.
    """
    work = _Work(bars, joints, support, held, couples)
    releases = work.release_trees()
    outer = {release.outer for release in releases}
    core = [index for index in range(len(joints)) if index not in outer]
    loose = [index for index in core if not work.meeting[index] and not work.stiff[index] > 0]
    loose += [release.outer for release in releases if not release.total > 0]
    solution, weakest = work.release_core(core)
    moments = _ring_moments(work, held, solution)
    for released in reversed(releases):
        _follow(work, released, held, solution, moments)
    if any(joints[index] in fastened for index in loose):
        weakest = 0.0
    return Released(solution, moments, weakest)


@dataclass(frozen=True, slots=True, eq=False)
class _Release:
    """Joint ``outer`` was released into ``inner`` along a bar.

    side: the bar's end at the outer joint; total: stiffness there; modified: stiffness felt at
    the inner end, and moment (c,): the modified fixed-end moment there.
    """

    bar: int
    outer: int
    inner: int
    side: int
    total: np.longdouble
    modified: np.longdouble
    moment: Long


class _Work:
    """Joints by place: ``stiff`` and ``moments`` grow as outer joints are released into them."""

    def __init__(
        self, bars: Sequence[Bar], joints: Sequence[int], support: Long, held: Long, couples: Long
    ) -> None:
        self.bars, self.held = bars, held
        self.place = {joint: index for index, joint in enumerate(joints)}
        self.stiff = [np.longdouble(value) for value in support]
        self.moments = -np.asarray(couples, dtype=np.longdouble)
        self.meeting: list[list[int]] = [[] for _ in joints]
        for index, bar in enumerate(bars):
            for side, joint in enumerate((bar.start, bar.end)):
                self.meeting[self.place[joint]].append(index)
                self.moments[self.place[joint]] += held[index, side]

    def release_trees(self) -> list[_Release]:
        """Release joints at which one bar is left, outermost first."""
        releases = []
        waiting = [index for index, met in enumerate(self.meeting) if len(met) == 1]
        while waiting:
            outer = waiting.pop()
            if len(self.meeting[outer]) != 1:
                continue
            released = self._release_outer(outer)
            releases.append(released)
            waiting.append(released.inner)
        return releases

    def _release_outer(self, outer: int) -> _Release:
        number = self.meeting[outer].pop()
        bar = self.bars[number]
        side = 0 if self.place[bar.start] == outer else 1
        inner = self.place[bar.start] + self.place[bar.end] - outer
        self.meeting[inner].remove(number)
        ends = bar.stiffness
        near, far = (ends.near, ends.far) if side else (ends.far, ends.near)
        total = self.stiff[outer] + far
        moment = self.held[number, 1 - side]
        modified = np.longdouble(near)
        if total > 0:
            modified = np.longdouble((ends.both + near * self.stiff[outer]) / total)
            passed = ends.carried / total * self.moments[outer]
            moment = moment - passed
            self.moments[inner] -= passed
        self.stiff[inner] += modified
        return _Release(number, outer, inner, side, total, modified, moment)

    def release_core(self, core: list[int]) -> tuple[Long, float]:
        """Release the joints that trees left over: single ones, and those on rings."""
        position = {index: row for row, index in enumerate(core)}
        matrix = np.zeros((len(core), len(core)), dtype=np.longdouble)
        for row, index in enumerate(core):
            matrix[row, row] += self.stiff[index]
            for number in self.meeting[index]:
                bar = self.bars[number]
                at_start = self.place[bar.start] == index
                other = position[self.place[bar.end if at_start else bar.start]]
                matrix[row, row] += bar.stiffness.near if at_start else bar.stiffness.far
                matrix[row, other] += bar.stiffness.carried
        solution = np.zeros_like(self.moments)
        sizes = matrix.diagonal().copy()
        solution[core], weakest = solve_symmetric(matrix, -self.moments[core], sizes)
        return solution, weakest


def _ring_moments(work: _Work, held: Long, solution: Long) -> Long:
    moments = np.array(held, dtype=np.longdouble)
    for number in {number for met in work.meeting for number in met}:
        bar = work.bars[number]
        ends = bar.stiffness
        start, end = solution[work.place[bar.start]], solution[work.place[bar.end]]
        moments[number, 0] += ends.near * start + ends.carried * end
        moments[number, 1] += ends.carried * start + ends.far * end
    return moments


def _follow(work: _Work, released: _Release, held: Long, solution: Long, moments: Long) -> None:
    """Set rotation and moments at the outer end of a bar whose inner joint is known.

    The inner moment from the modified values, the outer one from what balances its joint: a bar
    that a soft neighbour lets turn as a whole would lose digits by its own stiffness.
    """
    bar, side = released.bar, released.side
    unbalance = work.moments[released.outer]
    turn = np.zeros_like(unbalance)
    if released.total > 0:
        carried = work.bars[bar].stiffness.carried * solution[released.inner]
        turn = -(unbalance + carried) / released.total
    solution[released.outer] = turn
    moments[bar, 1 - side] = released.moment + released.modified * solution[released.inner]
    moments[bar, side] = held[bar, side] - unbalance - work.stiff[released.outer] * turn
