"""Axial forces and the reactions of rigid supports, from the equilibrium of forces at joints.

Where equilibrium leaves a choice (a line held horizontally at two places, say) members are taken
as equally stiff axially per length, and rigid: the limit of an axial rigidity EA that is the same
everywhere and grows without bound.  Of all axial forces in equilibrium this one has the least sum
of N² ds.  Supports do not give.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bars import Bar
from analysis_core.distribution.loads import Loads, holds
from analysis_core.distribution.sway import Balanced
from analysis_core.distribution.translations import held_horizontally
from analysis_core.model import RIGID, Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Forces:
    """Forces of B bars (tails last) and J joints.

    shears (B, 2, C) diagram shear, N; axial (B, 2, C) tension positive, N;
    reactions (J, 2, C) N to the right and up.
    """

    shears: Floats
    axial: Floats
    reactions: Floats


def forces(line: Line, loads: Loads, balanced: Balanced) -> Forces:
    """Return shears and axial forces of all bars and the reactions of all supports."""
    shears = bar_shears(balanced)
    tail_axial = balanced.frame.tails.axial
    count = len(balanced.reduction.bars)
    pushes = np.array(balanced.forces[:, :2])
    for index, bar in enumerate(balanced.bars[:count]):
        across = _local_down(bar)[:, None]
        pushes[bar.start] += across * shears[index, 0]
        pushes[bar.end] -= across * shears[index, 1]
    reactions = _spring_reactions(line, loads, balanced)
    pushes[:, 0] += reactions[:, 0]
    pushes[:, 1] -= reactions[:, 1]
    axial = np.zeros_like(shears)
    axial[:count] = _spread_along(line, balanced, pushes, reactions)
    axial[count:, 0] = tail_axial
    for index in range(count, len(balanced.bars)):
        axial[index, 1] = tail_axial[index - count] - balanced.actions[index].axial
    return Forces(shears, axial, reactions)


def bar_shears(balanced: Balanced) -> Floats:
    """Return the diagram shears (B, 2, C) at the ends of all bars from their end moments."""
    shears = np.zeros_like(balanced.moments)
    for index, bar in enumerate(balanced.bars):
        start_force, end_force = balanced.actions[index].forces
        lean = balanced.moments[index].sum(0) / bar.length
        shears[index] = start_force - lean, -end_force - lean
    return shears


def _local_down(bar: Bar) -> Floats:
    cosine, sine = bar.direction
    return np.array([sine, cosine])


def _along(bar: Bar) -> Floats:
    cosine, sine = bar.direction
    return np.array([cosine, -sine])


def _spring_reactions(line: Line, loads: Loads, balanced: Balanced) -> Floats:
    reactions = np.zeros((len(line.joints), 2, loads.forces.shape[2]))
    for joint in balanced.reduction.joints:
        stiffness = holds(line.joints[joint])
        for direction, (key, sign) in enumerate((("horizontal", -1.0), ("vertical", 1.0))):
            spring = stiffness[key]
            if 0.0 < spring < RIGID:
                give = balanced.displacements[joint, direction] - loads.movements[joint, direction]
                reactions[joint, direction] = sign * spring * give
    return reactions


def _spread_along(line: Line, balanced: Balanced, pushes: Floats, reactions: Floats) -> Floats:
    """Find the axial forces (B', 2, C) and fill in the reactions of rigid supports.

    The bars form a truss whose joints are loaded by ``pushes`` (J, 2, C), N to the right and
    down; the independent translations are held (nothing is left over along them).
    """
    bars, joints = balanced.reduction.bars, balanced.reduction.joints
    held = _held(line, balanced)
    place = {j: i for i, j in enumerate((j, d) for j in joints for d in (0, 1))}
    stiffness = np.zeros((len(place), len(place)))
    load = np.array([pushes[j, d] for j, d in place]).reshape(len(place), pushes.shape[2])
    for index, bar in enumerate(bars):
        actions = balanced.actions[index]
        rows = [place[bar.start, 0], place[bar.start, 1], place[bar.end, 0], place[bar.end, 1]]
        if bar.slides is not None:
            foot = rows[2:] if bar.slides == 0 else rows[:2]
            load[foot] += _along(bar)[:, None] * actions.axial
            continue
        unit = np.concatenate([-_along(bar), _along(bar)])
        stiffness[np.ix_(rows, rows)] += np.outer(unit, unit) / bar.length
        pull = actions.axial_lever / bar.length
        load[rows[:2]] += np.outer(_along(bar), pull)
        load[rows[2:]] += np.outer(_along(bar), actions.axial - pull)
    free = [i for item, i in place.items() if item not in held]
    moved = np.zeros_like(load)
    if free and load[free].any():
        moved[free] = np.linalg.solve(stiffness[np.ix_(free, free)], load[free])
    left = stiffness @ moved - load
    for (joint, direction), index in place.items():
        if (joint, direction) in held and (joint, direction) not in balanced.frame.moves.anchors:
            reactions[joint, direction] += left[index] if direction == 0 else -left[index]
    return _bar_forces(balanced, place, moved)


def _held(line: Line, balanced: Balanced) -> set[tuple[int, int]]:
    joints = balanced.reduction.joints
    held = {(joint, 0) for joint in held_horizontally(line, joints)}
    for joint in joints:
        stiffness = holds(line.joints[joint])
        held |= {
            (joint, direction)
            for direction, key in enumerate(("horizontal", "vertical"))
            if stiffness[key] == RIGID
        }
    return held | set(balanced.frame.moves.anchors)


def _bar_forces(balanced: Balanced, place: dict[tuple[int, int], int], moved: Floats) -> Floats:
    axial = np.zeros((len(balanced.reduction.bars), 2, moved.shape[1]))
    for index, bar in enumerate(balanced.reduction.bars):
        actions = balanced.actions[index]
        if bar.slides == 0:
            axial[index, 1] = -actions.axial
            continue
        if bar.slides == 1:
            axial[index, 0] = actions.axial
            continue
        unit = _along(bar)
        start = moved[[place[bar.start, 0], place[bar.start, 1]]]
        end = moved[[place[bar.end, 0], place[bar.end, 1]]]
        stretch = (unit[:, None] * (end - start)).sum(0)
        axial[index, 0] = (stretch + actions.axial_lever) / bar.length
        axial[index, 1] = axial[index, 0] - actions.axial
    return axial
