"""Bars of plain lines: members in a row between supports, their held moments; overhangs.

The same mechanics as ``bar_actions`` and ``tails``, for many lines at once.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.direct import SpanStiffness
from analysis_core.distribution.fixed_end import held_moments
from analysis_core.distribution.plain_batch import Layout, RowActions, Rows, across
from analysis_core.distribution.plain_lines import PlainLine
from analysis_core.distribution.release import CLAMP

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Bars:
    """B bars of L lines in C cases.

    stiffness (B, L), held (B + 1, L); start, end (B, C, L): held moments N·m; couples
    (B + 1, C, L) on the joints between, None where there are none; simple: for each bar of
    several members its diagram moments as a simple beam, (members, 2, C, L); tails (n, 2, C, L):
    end moments of overhanging members, 0 elsewhere; None where nothing overhangs.
    """

    stiffness: SpanStiffness
    start: Floats
    end: Floats
    couples: Floats | None
    simple: tuple[Floats | None, ...]
    tails: Floats | None


def bars_of(lines: Sequence[PlainLine], plan: Layout, rows: Rows, actions: RowActions) -> Bars:
    """Return the bars between supports with everything that acts on them."""
    pushed = across(rows, actions)
    single = all(high - low == 1 for low, high in plan.bars)
    moments = _member_moments(lines, rows, actions)
    firsts = [low for low, _ in plan.bars]
    start, end = moments[0][firsts], moments[1][firsts]
    member = rows.stiffness
    held = member.held[list(plan.kept)]
    stiffness = SpanStiffness(
        member.near[firsts], member.far[firsts], member.carried[firsts], member.both[firsts], held
    )
    simple: list[Floats | None] = [None] * len(plan.bars)
    for index, (low, high) in enumerate(() if single else plan.bars):
        if high - low > 1:
            bar = _Compound(rows, actions, pushed, low, high)
            bar.put_stiffness(stiffness, index)
            start[index], end[index] = bar.held()
            simple[index] = bar.simple
    _move_supports(plan, rows, actions, stiffness, start, end)
    tails = _tail_moments(plan, rows, actions, pushed)
    couples = _couples(plan, rows, actions, tails)
    return Bars(stiffness, start, end, couples, tuple(simple), tails)


def spread(plan: Layout, rows: Rows, bars: Bars, start: Floats, end: Floats) -> Floats:
    """Return the end moments (2, n, C, L) of all members from those of the bars."""
    moments = np.zeros((2, plan.count, *start.shape[1:]))
    firsts = [low for low, _ in plan.bars]
    moments[0, firsts], moments[1, firsts] = start, end
    for index, simple in enumerate(bars.simple):
        if simple is None:
            continue
        low, high = plan.bars[index]
        reached = np.concatenate([np.zeros((1, rows.length.shape[1])), rows.length[low:high]])
        x = reached.cumsum(0)[:, None]
        whole = x[-1]
        straight = (start[index] * (whole - x) - end[index] * x) / whole
        moments[0, low:high] = simple[:, 0] + straight[:-1]
        moments[1, low:high] = -simple[:, 1] - straight[1:]
    if bars.tails is not None:
        moments += bars.tails.transpose(1, 0, 2, 3)
    if rows.special:
        moments[np.broadcast_to(rows.released[:, :, None], moments.shape)] = 0.0
    return moments


def turned_rigidly(rows: Rows, actions: RowActions) -> Floats | None:
    """Return the rotations (n + 1, C, L) that rigid supports are prescribed."""
    if actions.turns is None:
        return None
    return np.where(rows.stiffness.held[:, None] == CLAMP, actions.turns, 0.0)


def _member_moments(lines: Sequence[PlainLine], rows: Rows, actions: RowActions) -> Floats:
    """Fixed-end moments (2, n, C, L) of every member, its springs and releases included."""
    if not rows.special:
        return actions.moments
    moments = actions.moments.copy()
    for index, line in enumerate(lines):
        for member, own in line.special.items():
            if own.start_give or own.end_give:
                turned = actions.rotations[:, member, :, index]
                held = held_moments(own.stiffness, turned[0], turned[1])
                moments[0, member, :, index], moments[1, member, :, index] = held
    return moments


def _move_supports(
    plan: Layout,
    rows: Rows,
    actions: RowActions,
    stiffness: SpanStiffness,
    start: Floats,
    end: Floats,
) -> None:
    """Add what settlements and turned rigid supports do to bars that are held."""
    near, far, carried = (a[:, None] for a in (stiffness.near, stiffness.far, stiffness.carried))
    kept = list(plan.kept)
    if actions.settlements is not None and plan.bars:
        reach = np.stack([rows.length[low:high].sum(0) for low, high in plan.bars])
        settled = actions.settlements[kept]
        fall = (settled[1:] - settled[:-1]) / reach[:, None]
        start -= (near + carried) * fall
        end -= (far + carried) * fall
    turns = turned_rigidly(rows, actions)
    if turns is not None:
        turns = turns[kept]
        start += near * turns[:-1] + carried * turns[1:]
        end += carried * turns[:-1] + far * turns[1:]


def _tail_moments(
    plan: Layout, rows: Rows, actions: RowActions, pushed: Floats | None
) -> Floats | None:
    """End moments (n, 2, C, L) of overhanging members, by statics from their tips."""
    if plan.first == 0 and plan.last == plan.count:
        return None
    moments = np.zeros((plan.count, 2, *actions.total.shape[1:]))
    nothing = np.zeros(actions.total.shape[1:])
    carried, couple = nothing, nothing
    for member in range(plan.first):
        carried = carried + (nothing if pushed is None else pushed[member])
        couple = couple + (nothing if actions.couples is None else actions.couples[member])
        pressed = carried + actions.forces[0, member]
        moments[member, 0] = couple
        moments[member, 1] = rows.length[member] * pressed - couple
        carried = pressed + actions.forces[1, member]
        couple = -moments[member, 1]
    carried, couple = nothing, nothing
    for member in range(plan.count - 1, plan.last - 1, -1):
        tip = member + 1
        carried = carried + (nothing if pushed is None else pushed[tip])
        couple = couple + (nothing if actions.couples is None else actions.couples[tip])
        pressed = carried + actions.forces[1, member]
        moments[member, 1] = couple
        moments[member, 0] = -couple - rows.length[member] * pressed
        carried = pressed + actions.forces[0, member]
        couple = -moments[member, 0]
    return moments


def _couples(plan: Layout, rows: Rows, actions: RowActions, tails: Floats | None) -> Floats | None:
    """Couples (B + 1, C, L) on supported joints: applied, by turning ground, by overhangs."""
    kept = list(plan.kept)
    if actions.couples is None and actions.turns is None and tails is None:
        return None
    total = np.zeros((len(kept), *actions.total.shape[1:]))
    if actions.couples is not None:
        total += actions.couples[kept]
    if actions.turns is not None:
        held = rows.stiffness.held[kept]
        total += np.where(held == CLAMP, 0.0, held)[:, None] * actions.turns[kept]
    if tails is not None and plan.first > 0:
        total[0] -= tails[plan.first - 1, 1]
    if tails is not None and plan.last < plan.count:
        total[-1] -= tails[plan.last, 0]
    return total


class _Compound:
    """Members ``low`` to ``high`` - 1 in a row, fastened rigidly to each other."""

    def __init__(
        self, rows: Rows, actions: RowActions, pushed: Floats | None, low: int, high: int
    ) -> None:
        self.rows, self.actions, self.low, self.high = rows, actions, low, high
        self.length, self.total, self.centre, self.own = self._weights()
        self.simple = self._simple(pushed)

    def _weights(self) -> tuple[Floats, Floats, Floats, Floats]:
        """Elastic weights (L,) of the whole, as ``in_a_row`` has them."""
        rows = self.rows
        length, total = rows.length[self.low], rows.total[self.low]
        centre, own = rows.centre[self.low], rows.own[self.low]
        for member in range(self.low + 1, self.high):
            both = total + rows.total[member]
            apart = length + rows.centre[member] - centre
            own = own + rows.own[member] + total * rows.total[member] / both * apart**2
            centre = centre + rows.total[member] / both * apart
            total, length = both, length + rows.length[member]
        return length, total, centre, own

    def put_stiffness(self, stiffness: SpanStiffness, index: int) -> None:
        turn, sway, left = 1.0 / self.total, 1.0 / self.own, self.centre
        right = self.length - left
        stiffness.near[index] = turn + left * left * sway
        stiffness.far[index] = turn + right * right * sway
        stiffness.carried[index] = left * right * sway - turn
        stiffness.both[index] = self.length * self.length * turn * sway

    def _simple(self, pushed: Floats | None) -> Floats:
        """Diagram moments (members, 2, C, L) of the whole as a simple beam."""
        rows, actions, low, high = self.rows, self.actions, self.low, self.high
        inner = range(low + 1, high)
        presses = actions.forces[1, low : high - 1] + actions.forces[0, low + 1 : high]
        if pushed is not None:
            presses = presses + pushed[low + 1 : high]
        couples = None if actions.couples is None else actions.couples[low + 1 : high]
        at = rows.length[low : high - 1].cumsum(0)[:, None]
        levers = presses * (self.length - at)
        if couples is not None:
            levers = levers - couples
        shear = levers.sum(0) / self.length
        moment = np.zeros_like(shear)
        simple = np.zeros((high - low, 2, *shear.shape))
        for index, _ in enumerate(inner):
            moment = moment + shear * rows.length[low + index]
            simple[index, 1] = moment
            if couples is not None:
                moment = moment + couples[index]
            simple[index + 1, 0] = moment
            shear = shear - presses[index]
        return simple

    def held(self) -> tuple[Floats, Floats]:
        """Held moments (C, L) at start and end, by the column analogy."""
        rows, turned = self.rows, self.actions.rotations
        load = np.zeros(self.simple.shape[2:])
        lever = np.zeros_like(load)
        reached = np.zeros_like(self.length)
        for index, member in enumerate(range(self.low, self.high)):
            start, end = self.simple[index, 0], -self.simple[index, 1]
            near, far, cross = rows.near[member], rows.far[member], rows.cross[member]
            first = near * start + cross * end + turned[0, member]
            second = cross * start + far * end + turned[1, member]
            load += first - second
            arm = reached - self.centre
            reached = reached + rows.length[member]
            lever += arm * first - (reached - self.centre) * second
        level, slope = -load / self.total, -lever / self.own
        return (
            level - slope * self.centre,
            -(level + slope * (self.length - self.centre)),
        )
