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

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bar_actions import BarActions
from analysis_core.distribution.bars import Bar, Reduction
from analysis_core.distribution.linear import Long
from analysis_core.distribution.loads import Loads
from analysis_core.distribution.mechanisms import refuse_if_loose
from analysis_core.distribution.release import SUSPECT, Released, release
from analysis_core.distribution.skeleton import (
    Skeleton,
    skeleton,
    support_stiffness,
    times,
    translation_sizes,
)
from analysis_core.model import Line

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Balanced:
    """A line in balance: B bars (tails last), J joints, C cases, m independent translations.

    moments (B, 2, C) N·m on the bars, clockwise; rotations (J, C); displacements (J, 2, C) m to
    the right and down, of the joints in ``reduction.joints`` only.  Of the bars that are not
    tails: locked (B', 2, C) and swayed (B', 2, m): end moments after step 1, and per metre of
    each translation; sizes (m, C) m of the translations.
    """

    frame: Skeleton
    moments: Floats
    rotations: Floats
    displacements: Floats
    locked: Floats
    swayed: Floats
    sizes: Floats

    @property
    def reduction(self) -> Reduction:
        """The bars and tails of the line."""
        return self.frame.reduction

    @property
    def bars(self) -> tuple[Bar, ...]:
        """All bars, tails last."""
        return self.reduction.bars + tuple(bar for bar, _ in self.reduction.tails)

    @property
    def actions(self) -> tuple[BarActions, ...]:
        """The actions on all bars."""
        return self.frame.actions + self.frame.tails.actions

    @property
    def forces(self) -> Floats:
        """Forces (J, 3, C) on joints, those that tails bring to them included."""
        return self.frame.tails.forces


def balance(line: Line, loads: Loads) -> Balanced:
    """Return the line in balance under ``loads``.

    Raises MechanismError where parts of it move freely, ModelError where prescribed movements
    do not go together.
    """
    frame = skeleton(line, loads)
    released = _release(frame)
    cases = frame.cases
    locked, swayed = released.moments[..., :cases], released.moments[..., cases:]
    sizes, weakest_sway = translation_sizes(frame, locked, swayed)
    if min(released.weakest, weakest_sway) <= SUSPECT:
        refuse_if_loose(line)
    total = _exact_hinges(frame, locked + times(swayed, sizes))
    joint_turns = np.zeros((len(line.joints), cases))
    turned = released.rotations
    joint_turns[list(frame.joints)] = (
        frame.turned + turned[:, :cases] + times(turned[:, cases:], sizes)
    )
    moves = frame.moves
    shifts = moves.given + times(moves.modes.transpose(1, 2, 0), sizes)
    return Balanced(
        frame=frame,
        moments=np.concatenate([total, frame.tails.moments]).astype(float),
        rotations=joint_turns,
        displacements=shifts.astype(float),
        locked=locked.astype(float),
        swayed=swayed.astype(float),
        sizes=sizes.astype(float),
    )


def _release(frame: Skeleton) -> Released:
    """Balance the moments of all cases and of all translations."""
    couples = np.zeros((len(frame.joints), frame.held.shape[2]), dtype=np.longdouble)
    couples[:, : frame.cases] = frame.couples
    place = {joint: index for index, joint in enumerate(frame.joints)}
    fastened = {
        place[joint]
        for bar in frame.bars
        for joint, loose in zip((bar.start, bar.end), bar.released, strict=True)
        if not loose
    }
    fastened |= {place[root] for _, root in frame.reduction.tails if root in place}
    support = support_stiffness(frame.line, frame.joints)
    return release(frame.table, support, frame.held, couples, fastened)


def _exact_hinges(frame: Skeleton, moments: Long) -> Long:
    for index, bar in enumerate(frame.bars):
        for end, released in enumerate(bar.released):
            if released:
                moments[index, end] = 0.0
    return moments
