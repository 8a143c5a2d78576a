"""The columns of a distribution table: which ends take part, with the usual short cuts.

* A joint that holds one bar and no spring never needs locking: its moment is known (nothing, an
  applied couple, or what an overhang puts there).  The bar gets the stiffness for a pinned far
  end, 3/4 for a prismatic one, and nothing is carried over.
* A line that is its own mirror image, with moments that are too (or their opposite), is solved
  for its left half.  A bar across the axis gets 1/2 of its stiffness for symmetric moments, 3/2
  for antisymmetric ones (prismatic), and carries nothing over; joints on the axis do not turn
  under symmetric moments.
* Overhangs are known moments from the start (see ``tails``).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.bars import Bar
from analysis_core.distribution.cycles import End
from analysis_core.distribution.loads import holds
from analysis_core.distribution.mirror import Mirror, Parity
from analysis_core.model import RIGID, Line

Floats = NDArray[np.float64]

PINNED = "far end pinned"
RELEASED = "far end released"
KNOWN = "far end with a known moment"
ACROSS: dict[Parity, str] = {
    "symmetric": "across the axis, symmetric",
    "antisymmetric": "across the axis, antisymmetric",
}


@dataclass(frozen=True, slots=True)
class Columns:
    """ends; start: their moments before the first release, N·m; couples on joints to release."""

    ends: tuple[End, ...]
    start: tuple[float, ...]
    couples: dict[int, float]


def columns(
    line: Line,
    bars: Sequence[Bar],
    joints: Sequence[int],
    held: Floats,
    couples: Floats,
    *,
    half: tuple[Mirror, Parity] | None = None,
    known_ends: bool = True,
) -> Columns:
    """Return the table to distribute held moments (B, 2) and couples on joints (J,) in.

    ``half``: only the left half, by symmetry; ``known_ends``: never lock joints whose moment is
    known.
    """
    builder = _Builder(line, bars, joints, held, couples, half)
    if known_ends:
        builder.settle_known_ends()
    return builder.columns()


class _Builder:
    def __init__(
        self,
        line: Line,
        bars: Sequence[Bar],
        joints: Sequence[int],
        held: Floats,
        couples: Floats,
        half: tuple[Mirror, Parity] | None,
    ) -> None:
        self.line, self.bars, self.held, self.couples = line, bars, held, couples
        self.half = half
        self.free = [joint for joint in joints if self._turns(joint)]
        self.ends: list[End] = []
        self.place: dict[tuple[int, int], int] = {}
        self.start: list[float] = []
        for index in range(len(bars)):
            self._add_bar(index)
        for joint in self.free:
            spring = holds(line.joints[joint])["rotation"]
            if spring:
                self.ends.append(End(joint, None, 0, None, spring, 0.0, 0.0, None, "support"))
                self.start.append(0.0)

    def _turns(self, joint: int) -> bool:
        if holds(self.line.joints[joint])["rotation"] == RIGID:
            return False
        if self.half is None:
            return True
        mirrored, kind = self.half
        on_axis = mirrored.joints[joint] == joint
        return joint in mirrored.left or (on_axis and kind == "antisymmetric")

    def _add_bar(self, index: int) -> None:
        bar, stiffness = self.bars[index], self.bars[index].stiffness
        sides = self._sides(index)
        for side in sides:
            joint = (bar.start, bar.end)[side]
            own = float((stiffness.near, stiffness.far)[side])
            note = RELEASED if bar.released[1 - side] and own else ""
            member = bar.members[-1 if side else 0]
            end = End(joint, index, side, member, own, 0.0, 0.0, None, note)
            if len(sides) == 1 and self.half is not None:
                kind = self.half[1]
                carried = float(stiffness.carried)
                own = own - carried if kind == "symmetric" else own + carried
                end = replace(end, stiffness=own, note=ACROSS[kind])
            self.place[index, side] = len(self.ends)
            self.ends.append(replace(end, weight=self._weight(index, joint)))
            self.start.append(float(self.held[index, side]))
        if len(sides) == 2:
            self._join(index)

    def _sides(self, index: int) -> tuple[int, ...]:
        """Which ends of a bar are columns: of a pair of images the left, across the axis one."""
        if self.half is None:
            return (0, 1)
        mirrored, kind = self.half
        bar = self.bars[index]
        other, crossed = mirrored.bars[index]
        if other == index and crossed:
            return (0,) if bar.start in mirrored.left else (1,)
        if other == index:
            return (0, 1) if kind == "antisymmetric" else ()
        is_left = bar.start in mirrored.left or bar.end in mirrored.left
        return (0, 1) if is_left else ()

    def _weight(self, index: int, joint: int) -> float:
        if self.half is None:
            return 1.0
        mirrored = self.half[0]
        paired = mirrored.bars[index][0] != index
        return 2.0 if paired and mirrored.joints[joint] == joint else 1.0

    def _join(self, index: int) -> None:
        """Let the two ends of a bar carry over to each other."""
        stiffness = self.bars[index].stiffness
        for side in (0, 1):
            here, there = self.place[index, side], self.place[index, 1 - side]
            own = float((stiffness.near, stiffness.far)[side])
            carry = float(stiffness.carried) / own if own else 0.0
            self.ends[here] = replace(self.ends[here], carry_over=carry, to=there)

    def settle_known_ends(self) -> None:
        """Set the moments of joints with one end and no spring; they are never released."""
        for joint in list(self.free):
            here = [i for i, e in enumerate(self.ends) if e.joint == joint and e.stiffness]
            if len(here) != 1 or self.ends[here[0]].bar is None:
                continue
            self.free.remove(joint)
            end = self.ends[here[0]]
            others = sum(
                e.weight * self.start[i]
                for i, e in enumerate(self.ends)
                if e.joint == joint and i != here[0]
            )
            known = (float(self.couples[joint]) - others) / end.weight
            change, self.start[here[0]] = known - self.start[here[0]], known
            if end.to is None:
                continue
            there = self.ends[end.to]
            self.start[end.to] += end.carry_over * change
            assert end.bar is not None
            both = float(self.bars[end.bar].stiffness.both)
            far = end.stiffness
            self.ends[end.to] = replace(
                there,
                stiffness=both / far,
                carry_over=0.0,
                to=None,
                note=KNOWN if known else PINNED,
            )
            self.ends[here[0]] = replace(end, carry_over=0.0)

    def columns(self) -> Columns:
        total = dict.fromkeys(self.free, 0.0)
        for end in self.ends:
            if end.joint in total:
                total[end.joint] += end.weight * end.stiffness
        ends = [
            replace(end, factor=end.stiffness / total[end.joint]) if total.get(end.joint) else end
            for end in self.ends
        ]
        couples = {joint: float(self.couples[joint]) for joint in self.free if total[joint]}
        return Columns(tuple(ends), tuple(self.start), couples)
