"""Plain beam lines solved at once: from the sweep to verified solutions."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.direct import SpanMoments, SpanStiffness, sweep, sweep_lines
from analysis_core.distribution.plain_bars import Bars, bars_of, spread, turned_rigidly
from analysis_core.distribution.plain_batch import RowActions, Rows, actions_on, layout, rows_of
from analysis_core.distribution.plain_lines import PlainLine
from analysis_core.distribution.release import CLAMP
from analysis_core.results import LineSolution

Floats = NDArray[np.float64]

METHOD = "moment distribution, one release per joint"
FEW = 8
"""Up to so many sweeps, plain floats are faster than arrays."""


def solve_plain(lines: Sequence[PlainLine], cases: Sequence[str]) -> list[LineSolution]:
    """Solve plain lines whose joints are bare or supported alike; verified, arrays read-only."""
    return _Batch(lines, cases).solutions()


class _Batch:
    """n members, C cases, L lines; arrays (n, C, L) and (n + 1, C, L) as in ``plain_batch``."""

    def __init__(self, lines: Sequence[PlainLine], cases: Sequence[str]) -> None:
        self.lines, self.cases = lines, tuple(cases)
        self.plan = layout(lines[0].bare)
        self.rows: Rows = rows_of(lines)
        self.actions: RowActions = actions_on(lines, self.rows, len(cases))
        bars = bars_of(lines, self.plan, self.rows, self.actions)
        found = _distribute(bars)
        moments = spread(self.plan, self.rows, bars, found.start, found.end)
        self.start, self.end = moments[0], moments[1]
        self._set_movements(found.rotations)
        self._set_forces()
        self._verify()

    def _set_movements(self, found: Floats) -> None:
        """Rotations and displacements across the line of all joints, and the members' own ends."""
        rows, actions, kept = self.rows, self.actions, list(self.plan.kept)
        rigid = rows.stiffness.held[kept][:, None] == CLAMP
        found = np.where(rigid, 0.0, found)
        self.turns = np.zeros((self.plan.count + 1, *found.shape[1:]))
        self.turns[kept] = found
        turned = turned_rigidly(rows, actions)
        if turned is not None:
            self.turns += turned
        near, far, cross = rows.near[:, None], rows.far[:, None], rows.cross[:, None]
        self.bent = np.stack(
            [
                actions.rotations[0] + near * self.start + cross * self.end,
                actions.rotations[1] + cross * self.start + far * self.end,
            ]
        )
        self.fall = np.zeros_like(self.turns)
        if actions.settlements is not None:
            self.fall += actions.settlements
        self._walk()
        chord = (self.fall[1:] - self.fall[:-1]) / rows.length[:, None]
        self.own = self.bent + chord
        joined = np.stack([self.turns[:-1], self.turns[1:]])
        if rows.special:
            joined -= rows.gives[:, :, None] * np.stack([self.start, self.end])
        self.joined = joined

    def _walk(self) -> None:
        """Pass from supports to the bare joints beyond them, member by member."""
        length = self.rows.length
        inner = [(low, high - 1) for low, high in self.plan.bars if high - low > 1]
        for low, stop in (*inner, (self.plan.last, self.plan.count)):
            for member in range(low, stop):
                chord = self.turns[member] - self.bent[0, member]
                self.fall[member + 1] = self.fall[member] + chord * length[member]
                self.turns[member + 1] = chord + self.bent[1, member]
        for member in range(self.plan.first - 1, -1, -1):
            chord = self.turns[member + 1] - self.bent[1, member]
            self.fall[member] = self.fall[member + 1] - chord * length[member]
            self.turns[member] = chord + self.bent[0, member]

    def _set_forces(self) -> None:
        """Shears, axial forces and reactions; ``push``: right and down on each joint."""
        rows, actions = self.rows, self.actions
        lean = (self.start + self.end) / rows.length[:, None]
        self.shear_start = actions.forces[0] - lean
        self.shear_end = -actions.forces[1] - lean
        down = np.zeros_like(self.turns)
        down[:-1] = self.shear_start
        down[1:] -= self.shear_end
        couples = np.zeros_like(self.turns)
        couples[:-1] = self.start
        couples[1:] += self.end
        if actions.couples is not None:
            couples -= actions.couples
        self.needed = couples
        self.couples = self._support_couples(couples)
        if rows.lateral:
            self._set_lateral(down)
            return
        if actions.down is not None:
            down += actions.down
        self.up, self.right = down, np.zeros_like(down)
        self.axial = np.zeros((2, *self.start.shape))
        self.lost = down[self._bare()]
        self.up[self._bare()] = 0.0

    def _set_lateral(self, across: Floats) -> None:
        """Axial forces from both ends to the joint that holds the line, and the reactions."""
        rows, actions = self.rows, self.actions
        right, down = across * rows.sine, across * rows.cosine
        if actions.right is not None:
            right = right + actions.right
        if actions.down is not None:
            down = down + actions.down
        from_left, from_right = np.zeros_like(actions.along), np.zeros_like(actions.along)
        pull = np.zeros_like(right[0])
        for member in range(self.plan.count):
            from_left[member] = pull - right[member] / rows.cosine
            pull = from_left[member] - actions.along[member]
        pull = np.zeros_like(right[0])
        for member in range(self.plan.count - 1, -1, -1):
            pull = pull + right[member + 1] / rows.cosine
            pull = pull + actions.along[member]
            from_right[member] = pull
        before = np.arange(self.plan.count)[:, None] < rows.hold
        start = np.where(before[:, None], from_left, from_right)
        self.axial = np.stack([start, start - actions.along])
        right[:-1] += self.axial[0] * rows.cosine
        right[1:] -= self.axial[1] * rows.cosine
        down[:-1] -= self.axial[0] * rows.sine
        down[1:] += self.axial[1] * rows.sine
        held = np.arange(self.plan.count + 1)[:, None] == rows.hold
        self.right = np.where(held[:, None], -right, 0.0)
        self.up = down
        self.lost = np.concatenate([down[self._bare()], right + self.right])
        self.up[self._bare()] = 0.0

    def _bare(self) -> list[int]:
        kept = set(self.plan.kept)
        return [joint for joint in range(self.plan.count + 1) if joint not in kept]

    def _support_couples(self, needed: Floats) -> Floats:
        """Couples of the supports: by the spring, or what is needed where they are rigid."""
        held = self.rows.stiffness.held[:, None]
        if not held.any():
            return np.zeros_like(needed)
        turns, ground = self.turns, self.actions.turns
        give = turns if ground is None else turns - ground
        rigid = held == CLAMP
        return np.where(rigid, needed, -np.where(rigid, 0.0, held) * give)

    def _verify(self) -> None:
        """What is left over on joints and members, and between joints and member ends, per line."""
        rows, actions = self.rows, self.actions
        unbalance = np.abs(self.needed - self.couples).max((0, 1), initial=0.0)
        within = self.start + self.end + self.shear_end * rows.length[:, None] + actions.lever
        across = np.abs(self.shear_start - self.shear_end - actions.total).max((0, 1), initial=0.0)
        lost = np.maximum(across, np.abs(self.lost).max((0, 1), initial=0.0))
        self.residual = np.maximum(
            np.maximum(unbalance, np.abs(within).max((0, 1), initial=0.0)),
            lost * rows.length.max(0),
        )
        apart = np.abs(self.own - self.joined)
        if rows.special:
            apart[np.broadcast_to(rows.released[:, :, None], apart.shape)] = 0.0
        self.apart = apart.max((0, 1, 2), initial=0.0)

    def solutions(self) -> list[LineSolution]:
        """One solution per line, as views into arrays over all of them."""
        rows = self.rows
        joined = self.joined
        if rows.special:
            joined = np.where(rows.released[:, :, None], self.own, joined)
        moments = _by_line(np.stack([self.start, self.end], -1))
        shears = _by_line(np.stack([self.shear_start, self.shear_end], -1))
        ends = _by_line(np.moveaxis(joined, 0, -1))
        turns = _by_line(self.turns[..., None])[..., 0]
        shifts = _by_line(np.stack([self.fall * rows.sine, self.fall * rows.cosine], -1))
        reactions = _by_line(np.stack([self.right, self.up, self.couples], -1))
        axial = _by_line(np.moveaxis(self.axial, 0, -1))
        residuals, apart = self.residual.tolist(), self.apart.tolist()
        return [
            LineSolution(
                plain.line,
                self.cases,
                moments[index],
                shears[index],
                axial[index],
                turns[index],
                ends[index],
                shifts[index],
                reactions[index],
                residuals[index],
                apart[index],
                METHOD,
            )
            for index, plain in enumerate(self.lines)
        ]


def _by_line(array: Floats) -> Floats:
    """Turn (n, C, L, k) into read-only (L, C, n, k)."""
    turned: Floats = np.ascontiguousarray(array.transpose(2, 1, 0, 3))
    turned.flags.writeable = False
    return turned


def _distribute(bars: Bars) -> SpanMoments:
    """Sweep in plain floats for a few lines and cases, in arrays for many."""
    count, cases, width = bars.start.shape
    if not count:
        return _lone_support(bars)
    if cases * width > FEW:
        return sweep_lines(bars.stiffness, bars.start, bars.end, bars.couples)
    found = SpanMoments(
        np.empty_like(bars.start),
        np.empty_like(bars.end),
        np.empty((count + 1, cases, width)),
    )
    none = [0.0] * (count + 1)
    for line in range(width):
        near, far, carried, both, held = _stiffness_lists(bars.stiffness, line)
        for case in range(cases):
            at = (slice(None), case, line)
            found.start[at], found.end[at], found.rotations[at] = sweep(
                near,
                far,
                carried,
                both,
                held,
                bars.start[at].tolist(),
                bars.end[at].tolist(),
                none if bars.couples is None else bars.couples[at].tolist(),
            )
    return found


def _stiffness_lists(stiffness: SpanStiffness, line: int) -> list[list[float]]:
    arrays = (
        stiffness.near,
        stiffness.far,
        stiffness.carried,
        stiffness.both,
        stiffness.held,
    )
    return [array[:, line].tolist() for array in arrays]


def _lone_support(bars: Bars) -> SpanMoments:
    """Overhangs on one support that holds them against rotation."""
    assert bars.couples is not None
    return SpanMoments(bars.start, bars.end, bars.couples / bars.stiffness.held[:, None])
