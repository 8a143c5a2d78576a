"""A line ready to be distributed: bars, tails taken off, independent translations, held moments."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bar_actions import BarActions, bar_actions
from analysis_core.distribution.bars import Bar, Reduction, reduce
from analysis_core.distribution.linear import Long, solve_symmetric
from analysis_core.distribution.loads import Loads, holds
from analysis_core.distribution.release import CLAMP
from analysis_core.distribution.stiffness_factors import extended
from analysis_core.distribution.tails import Tails, take_off
from analysis_core.distribution.translations import Translations, independent_translations
from analysis_core.model import RIGID, Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Skeleton:
    """B bars that are not tails, n joints to release, C cases, m independent translations.

    ``bars`` have their stiffness in extended precision.  unit (B, m): clockwise rotation of the
    bars' chords per metre of each translation; held (B, 2, C + m): end moments with all joints
    held, by actions and prescribed movements, then per metre of each translation.  turned (n, C)
    rad: rotations that rigid supports are prescribed; couples (n, C) N·m: on the joints, those
    from tails and from ground that turns under springs included.
    """

    line: Line
    loads: Loads
    reduction: Reduction
    bars: tuple[Bar, ...]
    actions: tuple[BarActions, ...]
    tails: Tails
    moves: Translations
    unit: Long
    held: Long
    turned: Floats
    couples: Floats

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
    bars = tuple(replace(bar, stiffness=extended(bar.stiffness)) for bar in reduction.bars)
    given = _chord_rotations(bars, moves.given)
    unit = _chord_rotations(bars, moves.modes.transpose(1, 2, 0))
    held = np.concatenate([_moved(bars, given), _moved(bars, unit)], axis=2)
    for index, own in enumerate(actions):
        held[index, :, : given.shape[1]] += own.moments
    joints = list(reduction.joints)
    support = support_stiffness(line, joints)[:, None]
    ground = loads.movements[joints, 2]
    turned = np.where(support == CLAMP, ground, 0.0)
    _turn_supports(bars, joints, turned, held)
    springs = np.where(support == CLAMP, 0.0, support).astype(np.float64)
    couples = tails.forces[joints, 2] + springs * ground
    return Skeleton(
        line, loads, reduction, bars, actions, tails, moves, unit, held, turned, couples
    )


def support_stiffness(line: Line, joints: Sequence[int]) -> Long:
    """Return the rotational stiffness (n) of the supports, ``CLAMP`` where rigid."""
    found = [holds(line.joints[joint])["rotation"] for joint in joints]
    return np.array([CLAMP if k == RIGID else k for k in found], dtype=np.longdouble)


def _turn_supports(bars: Sequence[Bar], joints: Sequence[int], turned: Floats, held: Long) -> None:
    """Add to the held moments what supports do that are turned by ``turned`` (n, C)."""
    if not turned.any():
        return
    place = {joint: index for index, joint in enumerate(joints)}
    for index, bar in enumerate(bars):
        start, end, ends = turned[place[bar.start]], turned[place[bar.end]], bar.stiffness
        held[index, 0, : turned.shape[1]] += ends.near * start + ends.carried * end
        held[index, 1, : turned.shape[1]] += ends.carried * start + ends.far * end


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
    for bar, actions in zip(frame.bars, frame.actions, strict=True):
        work += _work_of_actions(bar, actions, modes)
    for joint in frame.joints:
        stiffness = holds(frame.line.joints[joint])
        for direction, key in enumerate(("horizontal", "vertical")):
            shift, spring = modes[:, joint, direction], stiffness[key]
            push = frame.tails.forces[joint, direction].astype(np.longdouble)
            if 0.0 < spring < RIGID:
                resistance += spring * np.multiply.outer(shift, shift)
                most += spring * shift**2
                ground = frame.loads.movements[joint, direction]
                push = push + spring * (ground - frame.moves.given[joint, direction])
            work += np.multiply.outer(shift, push)
    sizes, weakest = solve_symmetric((resistance + resistance.T) / 2, work, most)
    return sizes, weakest if np.all(most > 0) else 0.0


def times(per_unit: Long, sizes: Long) -> Long:
    """Sum over the last axis (m) of ``per_unit`` times ``sizes`` (m, C), in extended precision."""
    total = np.zeros((*per_unit.shape[:-1], sizes.shape[1]), dtype=np.longdouble)
    for mode in range(len(sizes)):
        total += per_unit[..., mode, None] * sizes[mode]
    return total


def _chord_rotations(bars: Sequence[Bar], shifts: Floats) -> Long:
    """Clockwise rotations (B, c) of the bars' chords for joint movements (J, 2, c)."""
    turns = np.zeros((len(bars), shifts.shape[2]), dtype=np.longdouble)
    for index, bar in enumerate(bars):
        cosine, sine = bar.direction
        across = shifts[bar.end].astype(np.longdouble) - shifts[bar.start]
        turns[index] = (across[0] * sine + across[1] * cosine) / bar.length
    return turns


def _moved(bars: Sequence[Bar], chords: Long) -> Long:
    """End moments (B, 2, c) of bars whose joints move but do not turn."""
    moments = np.zeros((len(bars), 2, chords.shape[1]), dtype=np.longdouble)
    for index, bar in enumerate(bars):
        ends = bar.stiffness
        lever = -chords[index] * ends.length * ends.sway
        moments[index] = lever * ends.centre, lever * (ends.length - ends.centre)
    return moments


def _work_of_actions(bar: Bar, actions: BarActions, modes: Floats) -> Long:
    """Work (m, C) of the actions on a bar, taken as a simple beam, along each mode."""
    cosine, sine = bar.direction
    start, end = modes[:, bar.start], modes[:, bar.end]
    across = [shift[:, 0] * sine + shift[:, 1] * cosine for shift in (start, end)]
    holding = end if bar.slides == 0 else start
    along = holding[:, 0] * cosine - holding[:, 1] * sine
    total = np.multiply.outer(across[0], actions.forces[0])
    total = total + np.multiply.outer(across[1], actions.forces[1])
    return np.asarray(total + np.multiply.outer(along, actions.axial), dtype=np.longdouble)
