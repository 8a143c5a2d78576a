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

from collections.abc import Collection
from dataclasses import dataclass

import numpy as np

from analysis_core.distribution.bar_table import BarTable
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
    table: BarTable, support: Long, held: Long, couples: Long, fastened: Collection[int] = ()
) -> Released:
    """Release every joint once, so that all moments balance.

    ``support`` (n): rotational stiffness of the supports of the joints; ``held`` (B, 2, c): end
    moments of the bars with all joints held; ``couples`` (n, c): applied to the joints, N·m.
    ``fastened``: places of joints that have a bar that turns with them.
    """
    work = _Work(table, support, held, couples)
    releases = work.release_trees()
    outer = {release.outer for release in releases}
    core = [index for index in range(len(support)) if index not in outer]
    loose = [index for index in core if not work.meeting[index] and not work.stiff[index] > 0]
    loose += [release.outer for release in releases if not release.total > 0]
    solution, weakest = work.release_core(core)
    moments = _ring_moments(work, held, solution)
    for released in reversed(releases):
        _follow(work, released, held, solution, moments)
    if any(index in fastened for index in loose):
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

    def __init__(self, table: BarTable, support: Long, held: Long, couples: Long) -> None:
        self.table, self.held = table, held
        self.starts, self.ends = table.places.tolist()
        self.stiff = list(support)
        self.moments = -np.asarray(couples, dtype=np.longdouble)
        self.meeting: list[list[int]] = [[] for _ in support]
        for index, (start, end) in enumerate(zip(self.starts, self.ends, strict=True)):
            self.meeting[start].append(index)
            self.meeting[end].append(index)
            self.moments[start] += held[index, 0]
            self.moments[end] += held[index, 1]

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
        bar = self.meeting[outer].pop()
        table = self.table
        side = 0 if self.starts[bar] == outer else 1
        inner = self.starts[bar] + self.ends[bar] - outer
        self.meeting[inner].remove(bar)
        near, far = table.near[bar], table.far[bar]
        if side == 0:
            near, far = far, near
        total = self.stiff[outer] + far
        moment = self.held[bar, 1 - side]
        modified = near
        if total > 0:
            modified = (table.both[bar] + near * self.stiff[outer]) / total
            passed = table.carried[bar] / total * self.moments[outer]
            moment = moment - passed
            self.moments[inner] -= passed
        self.stiff[inner] += modified
        return _Release(bar, outer, inner, side, total, modified, moment)

    def release_core(self, core: list[int]) -> tuple[Long, float]:
        """Release the joints that trees left over: single ones, and those on rings."""
        position = {index: row for row, index in enumerate(core)}
        matrix = np.zeros((len(core), len(core)), dtype=np.longdouble)
        for row, index in enumerate(core):
            matrix[row, row] += self.stiff[index]
            for bar in self.meeting[index]:
                at_start = self.starts[bar] == index
                other = position[self.ends[bar] if at_start else self.starts[bar]]
                matrix[row, row] += self.table.near[bar] if at_start else self.table.far[bar]
                matrix[row, other] += self.table.carried[bar]
        solution = np.zeros_like(self.moments)
        sizes = matrix.diagonal().copy()
        solution[core], weakest = solve_symmetric(matrix, -self.moments[core], sizes)
        return solution, weakest


def _ring_moments(work: _Work, held: Long, solution: Long) -> Long:
    """Moments (B, 2, c) of all bars by the rotations of their ends; right for those on rings."""
    table = work.table
    start, end = solution[table.places[0]], solution[table.places[1]]
    near, far, carried = (k[:, None] for k in (table.near, table.far, table.carried))
    turned = np.stack([near * start + carried * end, carried * start + far * end], axis=1)
    return np.asarray(held + turned)


def _follow(work: _Work, released: _Release, held: Long, solution: Long, moments: Long) -> None:
    """Set rotation and moments at the outer end of a bar whose inner joint is known.

    The inner moment from the modified values, the outer one from what balances its joint: a bar
    that a soft neighbour lets turn as a whole would lose digits by its own stiffness.
    """
    bar, side = released.bar, released.side
    unbalance = work.moments[released.outer]
    turn = np.zeros_like(unbalance)
    if released.total > 0:
        carried = work.table.carried[bar] * solution[released.inner]
        turn = -(unbalance + carried) / released.total
    solution[released.outer] = turn
    moments[bar, 1 - side] = released.moment + released.modified * solution[released.inner]
    moments[bar, side] = held[bar, side] - unbalance - work.stiff[released.outer] * turn
