"""Plain beam lines solved at once: from the sweep to verified solutions."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.direct import SpanMoments, sweep, sweep_lines
from analysis_core.distribution.plain_batch import (
    Spans,
    actions_on,
    chords,
    joint_couples,
    moments_held,
    spans_of,
    turned_rigidly,
)
from analysis_core.distribution.plain_lines import PlainLine
from analysis_core.distribution.release import CLAMP
from analysis_core.results import LineSolution

Floats = NDArray[np.float64]

METHOD = "moment distribution, one release per joint"
FEW = 8
"""Up to so many sweeps, plain floats are faster than arrays."""


def solve_plain(lines: Sequence[PlainLine], cases: Sequence[str]) -> list[LineSolution]:
    """Solve plain lines that have the same number of spans; verified, arrays read-only."""
    return _Batch(lines, cases).solutions()


class _Batch:
    """n spans, C cases, L lines; arrays (n, C, L) and (n + 1, C, L) as in ``plain_batch``."""

    def __init__(self, lines: Sequence[PlainLine], cases: Sequence[str]) -> None:
        self.lines, self.cases = lines, tuple(cases)
        self.spans = spans_of(lines)
        self.actions = actions_on(lines, self.spans, len(cases))
        self.chord = chords(self.spans, self.actions)
        start, end = moments_held(lines, self.spans, self.actions, self.chord)
        found = _distribute(self.spans, joint_couples(self.spans, self.actions), start, end)
        self.start, self.end, self.turns = found.start, found.end, found.rotations
        self._exact_ends(start, end)
        self._movements()
        self._forces()

    def _exact_ends(self, start: Floats, end: Floats) -> None:
        """Keep what statics tells: the moments of overhangs, none at releases; turned supports."""
        spans = self.spans
        if spans.tails.any():
            for side, tail in enumerate((0, -1)):
                at = spans.tails[side]
                self.start[tail, :, at] = start[tail, :, at]
                self.end[tail, :, at] = end[tail, :, at]
        if spans.special:
            self.start[_per_case(spans.released[0], self.start)] = 0.0
            self.end[_per_case(spans.released[1], self.end)] = 0.0
        self.turns[np.broadcast_to(spans.stiffness.held[:, None] == CLAMP, self.turns.shape)] = 0.0
        turned = turned_rigidly(spans, self.actions)
        if turned is not None:
            self.turns += turned

    def _movements(self) -> None:
        """Rotations of the member ends from the flexibility side; of the tips of overhangs."""
        spans, actions = self.spans, self.actions
        near, far, cross = (a[:, None] for a in spans.flexibility)
        self.bent = np.stack(
            [
                actions.rotations[0] + near * self.start + cross * self.end,
                actions.rotations[1] + cross * self.start + far * self.end,
            ]
        )
        settled = actions.settlements
        self.settled = np.zeros_like(self.turns) if settled is None else settled
        if spans.tails.any():
            self._swing_tails()
        self.own = self.bent + self.chord
        if spans.special:
            gives = spans.gives[:, :, None]
            self.joined = np.stack(
                [
                    self.turns[:-1] - gives[0] * self.start,
                    self.turns[1:] - gives[1] * self.end,
                ]
            )
        else:
            self.joined = np.stack([self.turns[:-1], self.turns[1:]])

    def _swing_tails(self) -> None:
        """Tips of overhangs move and turn with the joint that carries them."""
        spans = self.spans
        for side, (tail, root, tip) in enumerate(((0, 1, 0), (-1, -2, -1))):
            at = spans.tails[side]
            if not at.any():
                continue
            held, loose = (1, 0) if side == 0 else (0, 1)
            moment = self.end if side == 0 else self.start
            give = spans.gives[held, tail, at]
            turn = self.turns[root, :, at].T - give * moment[tail, :, at].T
            chord = turn - self.bent[held, tail][:, at]
            self.chord[tail, :, at] = chord.T
            reach = spans.length[tail, at] * (1.0 if side else -1.0)
            self.settled[tip, :, at] = (self.settled[root, :, at].T + chord * reach).T
            free = chord + self.bent[loose, tail][:, at]
            back = (self.start if side == 0 else self.end)[tail][:, at]
            free = free + spans.gives[loose, tail, at] * back
            self.turns[tip, :, at] = np.where(spans.released[loose, tail, at], 0.0, free).T

    def _forces(self) -> None:
        """Shears, reactions, and what is left over."""
        spans, actions = self.spans, self.actions
        length = spans.length[:, None]
        lean = (self.start + self.end) / length
        self.shear_start = actions.forces[0] - lean
        self.shear_end = -actions.forces[1] - lean
        up = np.zeros_like(self.turns)
        up[:-1] = self.shear_start
        up[1:] -= self.shear_end
        couples = np.zeros_like(self.turns)
        couples[:-1] = self.start
        couples[1:] += self.end
        if actions.down is not None:
            up += actions.down
        if actions.couples is not None:
            couples -= actions.couples
        self.up, self.held = up, self._support_couples(couples)
        unbalance = couples - self.held
        inside = self.start + self.end + self.shear_end * length + actions.lever
        lost = self.shear_start - self.shear_end - actions.total
        self.residual = np.maximum(np.abs(unbalance).max((0, 1)), np.abs(inside).max((0, 1)))
        lever = spans.length.max(0)
        worst = np.abs(lost).max((0, 1))
        if spans.tails.any():
            for side, tip in enumerate((0, -1)):
                at = spans.tails[side]
                worst[at] = np.maximum(worst[at], np.abs(up[tip, :, at]).max(1, initial=0.0))
                up[tip, :, at] = 0.0
        self.residual = np.maximum(self.residual, worst * lever)
        apart = np.abs(self.own - self.joined)
        if spans.special:
            apart[np.broadcast_to(spans.released[:, :, None], apart.shape)] = 0.0
        self.apart = apart.max((0, 1, 2))

    def _support_couples(self, needed: Floats) -> Floats:
        """Couples of the supports: by the spring, or what is needed where they are rigid."""
        held = self.spans.stiffness.held[:, None]
        if not held.any():
            return np.zeros_like(needed)
        turns, ground = self.turns, self.actions.turns
        give = turns if ground is None else turns - ground
        rigid = held == CLAMP
        return np.where(rigid, needed, -np.where(rigid, 0.0, held) * give)

    def solutions(self) -> list[LineSolution]:
        """One solution per line, as views into arrays over all of them."""
        joined = self.joined
        if self.spans.special:
            joined = np.where(self.spans.released[:, :, None], self.own, joined)
        moments = _by_line(np.stack([self.start, self.end], -1))
        shears = _by_line(np.stack([self.shear_start, self.shear_end], -1))
        ends = _by_line(np.moveaxis(joined, 0, -1))
        turns = _by_line(self.turns[..., None])[..., 0]
        shifts = _by_line(np.stack([np.zeros_like(self.settled), self.settled], -1))
        reactions = _by_line(np.stack([np.zeros_like(self.up), self.up, self.held], -1))
        axial = np.zeros(moments.shape[1:])
        axial.flags.writeable = False
        residuals, apart = self.residual.tolist(), self.apart.tolist()
        return [
            LineSolution(
                plain.line,
                self.cases,
                moments[index],
                shears[index],
                axial,
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


def _per_case(flags: NDArray[np.bool_], like: Floats) -> NDArray[np.bool_]:
    return np.asarray(np.broadcast_to(flags[:, None], like.shape))


def _by_line(array: Floats) -> Floats:
    """Turn (n, C, L, k) into read-only (L, C, n, k)."""
    turned: Floats = np.ascontiguousarray(array.transpose(2, 1, 0, 3))
    turned.flags.writeable = False
    return turned


def _distribute(spans: Spans, couples: Floats | None, start: Floats, end: Floats) -> SpanMoments:
    """Sweep in plain floats for a few lines and cases, in arrays for many."""
    count, cases, width = start.shape
    stiffness = spans.stiffness
    if cases * width > FEW:
        return sweep_lines(stiffness, start, end, couples)
    found = SpanMoments(
        np.empty_like(start), np.empty_like(start), np.empty((count + 1, *start.shape[1:]))
    )
    none = [0.0] * (count + 1)
    for line in range(width):
        near, far, carried, both, held = (
            array[:, line].tolist()
            for array in (
                stiffness.near,
                stiffness.far,
                stiffness.carried,
                stiffness.both,
                stiffness.held,
            )
        )
        for case in range(cases):
            at = (slice(None), case, line)
            swept = sweep(
                near,
                far,
                carried,
                both,
                held,
                start[at].tolist(),
                end[at].tolist(),
                none if couples is None else couples[at].tolist(),
            )
            found.start[at], found.end[at], found.rotations[at] = swept
    return found
