"""A line ready to be distributed: bars, tails taken off, independent translations, held moments."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bar_actions import BarActions, bar_actions
from analysis_core.distribution.bar_table import BarTable, bar_table
from analysis_core.distribution.bars import Bar, Reduction, reduce
from analysis_core.distribution.linear import Long, solve_symmetric
from analysis_core.distribution.loads import Loads, holds
from analysis_core.distribution.release import CLAMP
from analysis_core.distribution.tails import Tails, take_off
from analysis_core.distribution.translations import Translations, independent_translations
from analysis_core.model import RIGID, Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Skeleton:
    """B bars that are not tails, n joints to release, C cases, m independent translations.

    unit (B, m): clockwise rotation of the
    bars' chords per metre of each translation; held (B, 2, C + m): end moments with all joints
    held, by actions and prescribed movements, then per metre of each translation.  turned (n, C)
    rad: rotations that rigid supports are prescribed; couples (n, C) N·m: on the joints, those
    from tails and from ground that turns under springs included.
    """

    line: Line
    loads: Loads
    reduction: Reduction
    table: BarTable
    actions: tuple[BarActions, ...]
    tails: Tails
    moves: Translations
    unit: Long
    held: Long
    turned: Floats
    couples: Floats

    @property
    def bars(self) -> tuple[Bar, ...]:
        """The bars that are not tails."""
        return self.reduction.bars

    @property
    def joints(self) -> tuple[int, ...]:
        """The ids of the joints to release."""
        return self.reduction.joints

    @property
    def cases(self) -> int:
        """Number of cases."""
        return int(self.loads.forces.shape[2])


def skeleton(line: Line, loads: Loads) -> Skeleton:
    """Return a line ready to be distributed.

    Raises ModelError where prescribed movements do not go together.
    """
    reduction = reduce(line)
    tails = take_off(line, reduction, loads)
    actions = tuple(bar_actions(line, bar, loads) for bar in reduction.bars)
    moves = independent_translations(line, reduction.bars, reduction.joints, loads)
    table = bar_table(reduction)
    joints = list(reduction.joints)
    given = _chord_rotations(table, moves.given[joints])
    unit = _chord_rotations(table, moves.modes[:, joints].transpose(1, 2, 0))
    held = np.concatenate([_moved(table, given), _moved(table, unit)], axis=2)
    for index, own in enumerate(actions):
        held[index, :, : given.shape[1]] += own.moments
    support = support_stiffness(line, joints)[:, None]
    ground = loads.movements[joints, 2]
    turned = np.where(support == CLAMP, ground, 0.0)
    if turned.any():
        held[..., : turned.shape[1]] += _by_turned_supports(table, turned)
    springs = np.where(support == CLAMP, 0.0, support).astype(np.float64)
    couples = tails.forces[joints, 2] + springs * ground
    return Skeleton(
        line, loads, reduction, table, actions, tails, moves, unit, held, turned, couples
    )


def support_stiffness(line: Line, joints: Sequence[int]) -> Long:
    """Return the rotational stiffness (n) of the supports, ``CLAMP`` where rigid."""
    found = [holds(line.joints[joint])["rotation"] for joint in joints]
    return np.array([CLAMP if k == RIGID else k for k in found], dtype=np.longdouble)


def _by_turned_supports(table: BarTable, turned: Floats) -> Long:
    """Moments (B, 2, C) in bars whose rigid supports are turned by ``turned`` (n, C)."""
    start, end = turned[table.places[0]], turned[table.places[1]]
    near, far, carried = (k[:, None] for k in (table.near, table.far, table.carried))
    return np.stack([near * start + carried * end, carried * start + far * end], axis=1)


def translation_sizes(frame: Skeleton, locked: Long, swayed: Long) -> tuple[Long, float]:
    """Return the sizes (m, C) of the translations in m: no work is left over along any of them.

    locked (B, 2, C): end moments with the translations locked; swayed (B, 2, m): per metre of
    each.  Also the smallest relative pivot, near 0 where something translates freely.
    """
    unit, modes = frame.unit, frame.moves.modes
    if not len(modes):
        return np.zeros((0, frame.cases), dtype=np.longdouble), 1.0
    resistance = -(swayed.sum(1)[:, None, :] * unit[:, :, None]).sum(0)
    most = -(frame.held[..., frame.cases :].sum(1) * unit).sum(0)
    work = (locked.sum(1)[:, None, :] * unit[:, :, None]).sum(0)
    work += _work_of_actions(frame)
    for joint in frame.joints:
        stiffness = holds(frame.line.joints[joint])
        for direction, key in enumerate(("horizontal", "vertical")):
            moving = np.flatnonzero(modes[:, joint, direction])
            shift, spring = modes[moving, joint, direction], stiffness[key]
            push = frame.tails.forces[joint, direction].astype(np.longdouble)
            if 0.0 < spring < RIGID:
                resistance[np.ix_(moving, moving)] += spring * np.multiply.outer(shift, shift)
                most[moving] += spring * shift**2
                ground = frame.loads.movements[joint, direction]
                push = push + spring * (ground - frame.moves.given[joint, direction])
            work[moving] += np.multiply.outer(shift, push)
    sizes, weakest = solve_symmetric((resistance + resistance.T) / 2, work, most)
    return sizes, weakest if np.all(most > 0) else 0.0


def times(per_unit: Long, sizes: Long) -> Long:
    """Sum over the last axis (m) of ``per_unit`` times ``sizes`` (m, C), in extended precision."""
    total = np.zeros((*per_unit.shape[:-1], sizes.shape[1]), dtype=np.longdouble)
    for mode in range(len(sizes)):
        total += per_unit[..., mode, None] * sizes[mode]
    return total


def _chord_rotations(table: BarTable, shifts: Floats) -> Long:
    """Clockwise rotations (B, c) of the bars' chords for movements (n, 2, c) of the joints."""
    moved = shifts.astype(np.longdouble)
    apart = moved[table.places[1]] - moved[table.places[0]]
    return np.asarray((apart * table.down[:, :, None]).sum(1) / table.length[:, None])


def _moved(table: BarTable, chords: Long) -> Long:
    """End moments (B, 2, c) of bars whose joints move but do not turn."""
    lever = -chords * (table.length * table.sway)[:, None]
    other = table.length - table.centre
    return np.stack([lever * table.centre[:, None], lever * other[:, None]], axis=1)


def _work_of_actions(frame: Skeleton) -> Long:
    """Work (m, C) of the actions on bars, taken as simple beams, along each mode."""
    table, joints = frame.table, list(frame.joints)
    modes = frame.moves.modes[:, joints].astype(np.longdouble)
    start, end = modes[:, table.places[0]], modes[:, table.places[1]]
    holds_end = np.array([bar.slides == 0 for bar in frame.bars])
    holding = np.where(holds_end[None, :, None], end, start)
    work = np.zeros((len(modes), frame.cases), dtype=np.longdouble)
    for index, actions in enumerate(frame.actions):
        down, along = table.down[index], table.along[index]
        for shift, force in (
            ((start[:, index] * down).sum(1), actions.forces[0]),
            ((end[:, index] * down).sum(1), actions.forces[1]),
            ((holding[:, index] * along).sum(1), actions.axial),
        ):
            if force.any():
                work += np.multiply.outer(shift, force)
    return work
