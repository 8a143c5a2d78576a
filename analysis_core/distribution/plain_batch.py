"""Many plain beam lines of the same number of spans as arrays: stiffnesses and held moments.

Arrays have the span or joint first, then the case, then the line, so that every operation runs
along lines that lie side by side in memory.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.direct import SpanStiffness, prismatic
from analysis_core.distribution.fixed_end import held_moments
from analysis_core.distribution.plain_lines import PlainLine
from analysis_core.distribution.release import CLAMP

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class Spans:
    """n spans of L lines: (n, L), ``stiffness.held`` (n + 1, L), ``tails`` (2, L).

    length m; rigidity N·m² (an equivalent one for special spans); flexibility: end rotations
    near, far and cross per end couple of the member by itself, rad/(N·m); gives (2, n, L):
    flexibility of the end springs, ``released`` (2, n, L) marks releases; tails: whether the
    first and the last span overhang; special: whether any span is.
    """

    length: Floats
    rigidity: Floats
    stiffness: SpanStiffness
    flexibility: tuple[Floats, Floats, Floats]
    gives: Floats
    released: Flags
    tails: Flags
    special: bool


@dataclass(frozen=True, slots=True, eq=False)
class SpanActions:
    """Actions on n spans and n + 1 joints of L lines in C cases: (n, C, L) and (n + 1, C, L).

    moments, rotations, forces (2, n, C, L): as in EndActions; total N, lever N·m: resultants;
    down N, couples N·m on joints; settlements m, turns rad of supports.
    """

    moments: Floats
    rotations: Floats
    forces: Floats
    total: Floats
    lever: Floats
    down: Floats | None
    couples: Floats | None
    settlements: Floats | None
    turns: Floats | None


def spans_of(lines: Sequence[PlainLine]) -> Spans:
    """Return the spans of lines that all have the same number of them."""
    length = _turned([line.lengths for line in lines])
    rigidity = _turned([line.rigidities for line in lines])
    held = _turned([line.held for line in lines])
    tails = np.array([line.tails for line in lines]).T
    special = any(line.special for line in lines)
    if special:
        _stand_in(lines, rigidity)
    turned: Floats = length / (6.0 * rigidity)
    spans = Spans(
        length,
        rigidity,
        prismatic(length, rigidity, held),
        (2.0 * turned, 2.0 * turned, -turned),
        np.zeros((2, *length.shape)),
        np.zeros((2, *length.shape), dtype=bool),
        tails,
        special,
    )
    if special:
        _put_special(lines, spans)
    if tails.any():
        stiffness = spans.stiffness
        for array in (stiffness.near, stiffness.far, stiffness.carried, stiffness.both):
            array[0, tails[0]] = 0.0
            array[-1, tails[1]] = 0.0
    return spans


def _turned(rows: list[list[float]]) -> Floats:
    return np.ascontiguousarray(np.array(rows).T)


def _stand_in(lines: Sequence[PlainLine], rigidity: Floats) -> None:
    """Give special spans a rigidity, so that the formulas for prismatic ones do no harm."""
    for index, line in enumerate(lines):
        for span, own in line.special.items():
            rigidity[span, index] = own.weights.length / own.weights.total


def _put_special(lines: Sequence[PlainLine], spans: Spans) -> None:
    near, far, cross = spans.flexibility
    for index, line in enumerate(lines):
        for span, own in line.special.items():
            at = (span, index)
            ends, weights = own.stiffness, own.weights
            spans.stiffness.near[at], spans.stiffness.far[at] = ends.near, ends.far
            spans.stiffness.carried[at], spans.stiffness.both[at] = ends.carried, ends.both
            left = weights.centre / weights.length
            right = 1.0 - left
            stretch = (weights.spread + weights.slip) / weights.length**2
            near[at] = weights.total * right * right + stretch
            far[at] = weights.total * left * left + stretch
            cross[at] = stretch - weights.total * left * right
            for end, give in enumerate((own.start_give, own.end_give)):
                if math.isinf(give):
                    spans.released[end, span, index] = True
                else:
                    spans.gives[end, span, index] = give


def actions_on(lines: Sequence[PlainLine], spans: Spans, cases: int) -> SpanActions:
    """Return the actions on lines, summed up per span and joint."""
    count, width = spans.length.shape
    shape = (count, cases, width)
    intensity = _summed((line.uniform for line in lines), shape)
    values = np.zeros((8, *shape)) if intensity is None else _uniform(intensity[0], spans)
    others = _summed((line.others for line in lines), shape)
    if others is not None:
        values += others
    joints = (count + 1, cases, width)
    forces = _summed((line.joints for line in lines), joints)
    moved = _summed((line.movements for line in lines), joints)
    return SpanActions(
        moments=values[0:2],
        rotations=values[2:4],
        forces=values[4:6],
        total=values[6],
        lever=values[7],
        down=_or_none(forces, 0),
        couples=_or_none(forces, 1),
        settlements=_or_none(moved, 0),
        turns=_or_none(moved, 1),
    )


def _or_none(values: Floats | None, row: int) -> Floats | None:
    return values[row] if values is not None and values[row].any() else None


def _summed(
    per_line: Iterable[Sequence[tuple[float, ...]]], shape: tuple[int, ...]
) -> Floats | None:
    """Sum values given per line as (case, place, value, ...) into (values, *shape)."""
    rows: list[tuple[float, ...]] = []
    owners: list[int] = []
    for index, own in enumerate(per_line):
        rows += own
        owners += [index] * len(own)
    if not rows:
        return None
    _, cases, width = shape
    table = np.array(rows, dtype=np.float64).T
    places = (table[1] * cases + table[0]) * width + owners
    at, size = places.astype(np.intp), math.prod(shape)
    return np.stack([np.bincount(at, column, size).reshape(shape) for column in table[2:]])


def _uniform(intensity: Floats, spans: Spans) -> Floats:
    """EndActions and resultants of uniform forces (n, C, L) over whole prismatic spans."""
    length = spans.length[:, None]
    total = intensity * length
    moment = total * (length / 12.0)
    turn = moment * (length / (2.0 * spans.rigidity[:, None]))
    force = total * 0.5
    return np.stack([-moment, moment, turn, -turn, force, force, total, force * length])


def chords(spans: Spans, actions: SpanActions) -> Floats:
    """Return the clockwise rotations of the chords (n, C, L) as supports settle.

    Those of overhangs follow later, from the rotation of the support that carries them.
    """
    settled = actions.settlements
    if settled is None:
        return np.zeros_like(actions.total)
    fall: Floats = (settled[1:] - settled[:-1]) / spans.length[:, None]
    return fall


def moments_held(
    lines: Sequence[PlainLine], spans: Spans, actions: SpanActions, chord: Floats
) -> tuple[Floats, Floats]:
    """Return the fixed-end moments (n, C, L) at starts and ends of spans.

    By the actions, with springs and releases; by settlements; by supports that are turned.
    """
    start, end = actions.moments[0].copy(), actions.moments[1].copy()
    for index, line in enumerate(lines if spans.special else ()):
        for span, own in line.special.items():
            if own.start_give or own.end_give:
                turned = actions.rotations[:, span, :, index]
                held = held_moments(own.stiffness, turned[0], turned[1])
                start[span, :, index], end[span, :, index] = held
    stiffness = spans.stiffness
    near, far, carried = (a[:, None] for a in (stiffness.near, stiffness.far, stiffness.carried))
    if actions.settlements is not None:
        start -= (near + carried) * chord
        end -= (far + carried) * chord
    turns = turned_rigidly(spans, actions)
    if turns is not None:
        start += near * turns[:-1] + carried * turns[1:]
        end += carried * turns[:-1] + far * turns[1:]
    if spans.tails.any():
        _hang_tails(spans, actions, start, end)
    return start, end


def turned_rigidly(spans: Spans, actions: SpanActions) -> Floats | None:
    """Return the rotations (n + 1, C, L) that rigid supports are prescribed."""
    if actions.turns is None:
        return None
    return np.where(spans.stiffness.held[:, None] == CLAMP, actions.turns, 0.0)


def joint_couples(spans: Spans, actions: SpanActions) -> Floats | None:
    """Return the couples on joints, those by ground that turns under springs included."""
    if actions.turns is None:
        return actions.couples
    held = spans.stiffness.held
    by_ground = np.where(held == CLAMP, 0.0, held)[:, None] * actions.turns
    return by_ground if actions.couples is None else by_ground + actions.couples


def _hang_tails(spans: Spans, actions: SpanActions, start: Floats, end: Floats) -> None:
    """Set the known moments of overhangs: of the forces on them about the joint that holds them."""
    nothing = np.zeros_like(actions.total[0])
    for side, (tail, tip) in enumerate(((0, 0), (-1, -1))):
        at = spans.tails[side]
        down = (nothing if actions.down is None else actions.down[tip])[:, at]
        couple = (nothing if actions.couples is None else actions.couples[tip])[:, at]
        reach = spans.length[tail, at]
        pressed = actions.forces[1 if side else 0, tail][:, at] + down
        if side:
            start[tail, :, at] = (-couple - reach * pressed).T
            end[tail, :, at] = couple.T
        else:
            start[tail, :, at] = couple.T
            end[tail, :, at] = (reach * pressed - couple).T
