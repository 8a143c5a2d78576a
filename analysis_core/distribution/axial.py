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
    for index, bar in enumerate(balanced.reduction.bars):
        across = balanced.frame.table.down[index][:, None]
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
    joints = balanced.reduction.joints
    held = _held(line, balanced)
    place = {item: i for i, item in enumerate((j, d) for j in joints for d in (0, 1))}
    load = pushes[list(joints)].reshape(len(place), -1)
    stiffness = _truss(balanced, load)
    free = [i for item, i in place.items() if item not in held]
    moved = np.zeros_like(load)
    if free and load[free].any():
        moved[free] = np.linalg.solve(stiffness[np.ix_(free, free)], load[free])
    left = stiffness @ moved - load
    for (joint, direction), index in place.items():
        if (joint, direction) in held and (joint, direction) not in balanced.frame.moves.anchors:
            reactions[joint, direction] += left[index] if direction == 0 else -left[index]
    return _bar_forces(balanced, moved.reshape(len(joints), 2, -1))


def _truss(balanced: Balanced, load: Floats) -> Floats:
    """Stiffness of the bars as a truss with EA = 1; their axial actions are added to ``load``."""
    table, bars = balanced.frame.table, balanced.reduction.bars
    stiffness = np.zeros((len(load), len(load)))
    if not bars:
        return stiffness
    rows = np.concatenate([2 * table.places[[0, 0]], 2 * table.places[[1, 1]]])
    rows[[1, 3]] += 1
    rows = rows.T
    fast = np.array([bar.slides is None for bar in bars])
    unit = np.concatenate([-table.along, table.along], axis=1)[fast]
    length = table.length.astype(np.float64)
    block = unit[:, :, None] * (unit / length[fast, None])[:, None, :]
    np.add.at(stiffness, (rows[fast][:, :, None], rows[fast][:, None, :]), block)
    axial = np.array([actions.axial for actions in balanced.frame.actions])
    if axial.any():
        lever = np.array([actions.axial_lever for actions in balanced.frame.actions])
        at_start = lever / length[:, None]
        for index, bar in enumerate(bars):
            if bar.slides is not None:  # the foot takes it all
                at_start[index] = 0.0 if bar.slides == 0 else axial[index]
        along = table.along[:, :, None]
        np.add.at(load, rows[:, :2], along * at_start[:, None])
        np.add.at(load, rows[:, 2:], along * (axial - at_start)[:, None])
    return stiffness


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


def _bar_forces(balanced: Balanced, moved: Floats) -> Floats:
    """Axial forces (B', 2, C) of the bars whose joints the truss moves by ``moved`` (n, 2, C)."""
    table, bars = balanced.frame.table, balanced.reduction.bars
    apart = moved[table.places[1]] - moved[table.places[0]]
    stretch = (table.along[:, :, None] * apart).sum(1)
    total = np.array([actions.axial for actions in balanced.frame.actions])
    lever = np.array([actions.axial_lever for actions in balanced.frame.actions])
    total, lever = total.reshape(stretch.shape), lever.reshape(stretch.shape)
    start = (stretch + lever) / table.length.astype(np.float64)[:, None]
    for index, bar in enumerate(bars):
        if bar.slides is not None:
            start[index] = 0.0 if bar.slides == 0 else total[index]
    return np.stack([start, start - total], axis=1)
