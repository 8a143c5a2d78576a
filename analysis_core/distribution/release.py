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
"""Stands for a support that is rigid against rotation (N·m/rad); no product overflows."""

SUSPECT = 1e-10
"""A pivot below this part of its diagonal asks whether something moves freely."""


@dataclass(frozen=True, slots=True)
class _Release:
    """Joint ``outer`` was released into ``inner``: what its rotation takes from there."""

    outer: int
    inner: int
    carried: np.longdouble
    stiffness: np.longdouble


def rotations(
    bars: Sequence[Bar],
    joints: Sequence[int],
    support: Long,
    unbalance: Long,
    fastened: Collection[int] = (),
) -> tuple[Long, float]:
    """Return the joint rotations (n, c) that balance the moments ``unbalance`` (n, c).

    ``joints`` (n) are the joint ids, ``support`` (n) the rotational stiffness of their supports,
    ``unbalance`` the sum of the held end moments minus the applied couples, N·m.  Also returned:
    the smallest relative pivot, 0 where one of the ``fastened`` joints is not held by anything.
    """
    place = {joint: index for index, joint in enumerate(joints)}
    held = [np.longdouble(value) for value in support]
    moments = np.array(unbalance, dtype=np.longdouble)
    meeting: list[list[Bar]] = [[] for _ in joints]
    for bar in bars:
        for joint in (bar.start, bar.end):
            meeting[place[joint]].append(bar)
    releases = _release_trees(place, meeting, held, moments)
    inner = {release.outer for release in releases}
    core = [index for index in range(len(joints)) if index not in inner]
    solution = np.zeros_like(moments)
    solution[core], weakest = _release_core(place, core, meeting, held, moments)
    loose = [index for index in core if not meeting[index] and not held[index] > 0]
    for release in reversed(releases):
        taken = moments[release.outer] + release.carried * solution[release.inner]
        if release.stiffness > 0:
            solution[release.outer] = -taken / release.stiffness
    loose += [release.outer for release in releases if not release.stiffness > 0]
    if any(joints[index] in fastened for index in loose):
        weakest = 0.0
    return solution, weakest


def _release_trees(
    place: dict[int, int], meeting: list[list[Bar]], held: list[np.longdouble], moments: Long
) -> list[_Release]:
    """Release joints at which one bar is left, outermost first; ``held`` and ``moments`` grow."""
    releases = []
    waiting = [index for index, bars in enumerate(meeting) if len(bars) == 1]
    while waiting:
        outer = waiting.pop()
        if len(meeting[outer]) != 1:
            continue
        bar = meeting[outer].pop()
        inner = place[bar.start] + place[bar.end] - outer
        meeting[inner].remove(bar)
        values = bar.stiffness
        far, near = values.far, values.near
        if place[bar.start] == outer:
            far, near = near, far
        total = held[outer] + far
        if total > 0:
            held[inner] += (values.both + near * held[outer]) / total
            moments[inner] -= values.carried / total * moments[outer]
        else:
            # Released at the outer joint, where nothing else resists: its near end stays as it is.
            held[inner] += near
        releases.append(_Release(outer, inner, np.longdouble(values.carried), total))
        waiting.append(inner)
    return releases


def _release_core(
    place: dict[int, int],
    core: list[int],
    meeting: list[list[Bar]],
    held: list[np.longdouble],
    moments: Long,
) -> tuple[Long, float]:
    """Release the joints that trees left over: single ones, and those on rings."""
    position = {index: row for row, index in enumerate(core)}
    matrix = np.zeros((len(core), len(core)), dtype=np.longdouble)
    weakest = 1.0
    for index in core:
        row = position[index]
        matrix[row, row] += held[index]
        for bar in meeting[index]:
            at_start = place[bar.start] == index
            other = position[place[bar.end if at_start else bar.start]]
            matrix[row, row] += bar.stiffness.near if at_start else bar.stiffness.far
            matrix[row, other] += bar.stiffness.carried
    solution, weakest = solve_symmetric(matrix, -moments[core], matrix.diagonal().copy())
    return solution, weakest
