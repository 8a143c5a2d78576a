"""Any line solved exactly: translations locked, then released one at a time.

1. Lock every independent translation (``translations``), with supports moved as prescribed, and
   distribute (``release``).
2. For each independent translation, move the joints by 1 m of it, everything else locked, and
   distribute the moments that this causes.
3. Find the sizes of the translations from the equilibrium of forces along each of them, and add
   up.

A line without independent translations ends with step 1.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bar_actions import BarActions, bar_actions
from analysis_core.distribution.bars import Bar, Reduction, reduce
from analysis_core.distribution.linear import Long, solve_symmetric
from analysis_core.distribution.loads import Loads, holds
from analysis_core.distribution.mechanisms import refuse_if_loose
from analysis_core.distribution.release import CLAMP, SUSPECT, rotations
from analysis_core.distribution.stiffness_factors import extended
from analysis_core.distribution.tails import take_off
from analysis_core.distribution.translations import Translations, independent_translations
from analysis_core.model import RIGID, Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Balanced:
    """A line in balance: B bars (tails last), J joints, C cases, m independent translations.

    moments (B, 2, C) N·m on the bars, clockwise; rotations (J, C); displacements (J, 2, C) m to
    the right and down, of the joints in ``reduction.joints`` only.  forces (J, 3, C): on joints,
    those from tails included.  locked (B', 2, C) and swayed (B', 2, m): end moments of the bars
    that are not tails after step 1, and per metre of each translation; sizes (m, C) m.
    """

    bars: tuple[Bar, ...]
    reduction: Reduction
    actions: tuple[BarActions, ...]
    moments: Floats
    rotations: Floats
    displacements: Floats
    forces: Floats
    translations: Translations
    locked: Floats
    swayed: Floats
    sizes: Floats


def balance(line: Line, loads: Loads) -> Balanced:
    """Return the line in balance under ``loads``.

    Raises MechanismError where parts of it move freely, ModelError where prescribed movements
    do not go together.
    """
    reduction = reduce(line)
    bars, joints = reduction.bars, reduction.joints
    tails = take_off(line, reduction, loads)
    actions = [bar_actions(line, bar, loads) for bar in bars]
    moves = independent_translations(line, bars, joints, loads)
    stiff = [replace(bar, stiffness=extended(bar.stiffness)) for bar in bars]
    given = _chord_rotations(stiff, moves.given)
    unit = _chord_rotations(stiff, moves.modes.transpose(1, 2, 0))
    held = np.concatenate(
        [
            _array([a.moments for a in actions], len(bars), loads) + _moved(stiff, given),
            _moved(stiff, unit),
        ],
        axis=2,
    )
    turned, weakest = _turn(line, reduction, stiff, held, tails.forces, loads)
    ends = _end_moments(stiff, joints, held, turned)
    cases = loads.forces.shape[2]
    locked, swayed = ends[..., :cases], ends[..., cases:]
    sizes, weakest_sway = _sizes(
        line,
        joints,
        stiff,
        actions,
        moves,
        tails.forces,
        loads,
        (locked, swayed, held[..., cases:]),
        unit,
    )
    if min(weakest, weakest_sway) <= SUSPECT:
        refuse_if_loose(line)
    total = locked + _times(swayed, sizes)
    joint_turns = np.zeros((len(line.joints), cases))
    joint_turns[list(joints)] = turned[:, :cases] + _times(turned[:, cases:], sizes)
    shifts = moves.given + _times(moves.modes.transpose(1, 2, 0), sizes)
    return Balanced(
        bars=bars + tuple(bar for bar, _ in reduction.tails),
        reduction=reduction,
        actions=(*actions, *tails.actions),
        moments=np.concatenate([_exact_hinges(bars, total), tails.moments]).astype(float),
        rotations=joint_turns,
        displacements=np.asarray(shifts, dtype=float),
        forces=tails.forces,
        translations=moves,
        locked=locked.astype(float),
        swayed=swayed.astype(float),
        sizes=sizes.astype(float),
    )


def _array(parts: list[Floats], count: int, loads: Loads) -> Floats:
    return np.array(parts) if parts else np.zeros((count, 2, loads.forces.shape[2]))


def _times(per_unit: Long, sizes: Long) -> Long:
    """Sum over the last axis (m) of ``per_unit`` times ``sizes`` (m, C), without a matrix product.

    (Products of extended-precision arrays do not go through a fast library anyway.)
    """
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


def _turn(
    line: Line,
    reduction: Reduction,
    bars: Sequence[Bar],
    held: Long,
    forces: Floats,
    loads: Loads,
) -> tuple[Long, float]:
    """Rotations (n, C + m) of the joints that balance the held moments, couples and supports."""
    joints = reduction.joints
    place = {joint: index for index, joint in enumerate(joints)}
    unbalance = np.zeros((len(joints), held.shape[2]), dtype=np.longdouble)
    for index, bar in enumerate(bars):
        unbalance[place[bar.start]] += held[index, 0]
        unbalance[place[bar.end]] += held[index, 1]
    support = np.zeros(len(joints), dtype=np.longdouble)
    for index, joint in enumerate(joints):
        stiffness = holds(line.joints[joint])["rotation"]
        support[index] = CLAMP if stiffness == RIGID else stiffness
    cases = loads.forces.shape[2]
    chosen = list(joints)
    unbalance[:, :cases] -= forces[chosen, 2] + support[:, None] * loads.movements[chosen, 2]
    fastened = {j for bar in reduction.bars for j, r in _ends(bar) if not r}
    fastened |= {root for _, root in reduction.tails}
    return rotations(bars, joints, support, unbalance, fastened)


def _ends(bar: Bar) -> tuple[tuple[int, bool], tuple[int, bool]]:
    return (bar.start, bar.released[0]), (bar.end, bar.released[1])


def _end_moments(bars: Sequence[Bar], joints: Sequence[int], held: Long, turned: Long) -> Long:
    place = {joint: index for index, joint in enumerate(joints)}
    moments = held.copy()
    for index, bar in enumerate(bars):
        start, end = turned[place[bar.start]], turned[place[bar.end]]
        ends = bar.stiffness
        moments[index, 0] += ends.near * start + ends.carried * end
        moments[index, 1] += ends.carried * start + ends.far * end
    return moments


def _sizes(
    line: Line,
    joints: Sequence[int],
    bars: Sequence[Bar],
    actions: Sequence[BarActions],
    moves: Translations,
    forces: Floats,
    loads: Loads,
    ends: tuple[Long, Long, Long],
    unit: Long,
) -> tuple[Long, float]:
    """Sizes (m, C) of the translations: no work is left over along any of them.

    ``ends`` are the end moments in the locked line, per translation, and per translation with
    the joints held as well.
    """
    count, cases = len(moves.modes), loads.forces.shape[2]
    if not count:
        return np.zeros((0, cases), dtype=np.longdouble), 1.0
    locked, swayed, held = ends
    resistance = -(swayed.sum(1)[:, None, :] * unit[:, :, None]).sum(0)
    most = -(held.sum(1) * unit).sum(0)
    work = (locked.sum(1)[:, None, :] * unit[:, :, None]).sum(0)
    modes = moves.modes
    for index, bar in enumerate(bars):
        work += _work_of_actions(bar, actions[index], modes)
    for joint in joints:
        stiffness = holds(line.joints[joint])
        for direction, key in enumerate(("horizontal", "vertical")):
            shift = modes[:, joint, direction]
            push = forces[joint, direction].astype(np.longdouble)
            spring = stiffness[key]
            if 0.0 < spring < RIGID:
                resistance += spring * np.multiply.outer(shift, shift)
                most += spring * shift**2
                ground = loads.movements[joint, direction] - moves.given[joint, direction]
                push = push + spring * ground
            work += np.multiply.outer(shift, push)
    resistance = (resistance + resistance.T) / 2
    sizes, weakest = solve_symmetric(resistance, work, most)
    return sizes, weakest if np.all(most > 0) else 0.0


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


def _exact_hinges(bars: Sequence[Bar], moments: Long) -> Long:
    for index, bar in enumerate(bars):
        for end, released in enumerate(bar.released):
            if released:
                moments[index, end] = 0.0
    return moments
