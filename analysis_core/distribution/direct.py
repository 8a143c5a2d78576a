"""The exact one-pass distribution along a line of spans: one line in plain floats, or many at once.

Two sweeps.  From the right end to the left each joint is released into the span before it, which
gives that span its modified stiffness and its modified fixed-end moment::

    g        = 1/(s_BA + R)              R: stiffness of everything at and beyond joint B
    s'_AB    = (both + s_AB R) g         m'_AB = m_AB - s_AB c_AB g (m_BA + U)
    R, U  of the next joint: its support's stiffness + s'_AB, its couple's opposite + m'_AB

From left to right the rotations and end moments follow.  All stiffnesses are positive sums, so
ratios of a million to one cost no digits; see ``release`` for the general form and the sources.

Supports that are rigid against rotation have the stiffness ``CLAMP``.  Rotations that such a
support is prescribed must be in the fixed-end moments already.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

CHUNK = 64_000
"""Numbers per array that are worked on at a time, so that a sweep stays in the cache."""


def sweep(
    near: Sequence[float],
    far: Sequence[float],
    carried: Sequence[float],
    both: Sequence[float],
    held: Sequence[float],
    start: Sequence[float],
    end: Sequence[float],
    couples: Sequence[float],
) -> tuple[list[float], list[float], list[float]]:
    """Distribute one case of one line of n spans; plain floats, N·m and N·m/rad.

    ``near``, ``far``, ``carried``, ``both`` (n): as in EndStiffness; ``held`` (n + 1): stiffness of
    supports against rotation; ``start``, ``end`` (n): fixed-end moments on the spans, clockwise;
    ``couples`` (n + 1): applied to the joints, clockwise.  Returns the moments at the starts and
    ends of the spans and the rotations of the joints.  Every sum is taken in the order of
    ``sweep_lines``, so that a line has the same bits alone and among many.
    """
    count = len(near)
    unbalanced, give, stiff = [0.0] * count, [0.0] * count, [0.0] * count
    moments_start, moments_end = [0.0] * count, [0.0] * count
    turns = [0.0] * (count + 1)
    beyond, moment = held[count], 0.0
    for j in range(count - 1, -1, -1):
        unbalanced[j] = moment = end[j] + moment - couples[j + 1]
        total = far[j] + beyond
        if total > 0.0:
            give[j] = g = 1.0 / total
            stiff[j] = own = (both[j] + near[j] * beyond) * g
            moments_start[j] = moment = start[j] - carried[j] * g * moment
        else:  # released from a joint that nothing holds
            stiff[j] = own = near[j]
            moments_start[j] = moment = start[j]
        beyond = held[j] + own
    turn = (moment - couples[0]) * (-1.0 / beyond) if beyond > 0.0 else 0.0
    turns[0] = turn
    for j in range(count):
        moments_start[j] += stiff[j] * turn
        if j:
            moments_end[j - 1] = -moments_start[j] - held[j] * turn + couples[j]
        turns[j + 1] = turn = -(unbalanced[j] + carried[j] * turn) * give[j]
    moments_end[count - 1] = 0.0 - held[count] * turn + couples[count]
    return moments_start, moments_end, turns


@dataclass(frozen=True, slots=True, eq=False)
class SpanStiffness:
    """Stiffness of L lines of n spans: near, far, carried, both (n, L) and held (n + 1, L)."""

    near: Floats
    far: Floats
    carried: Floats
    both: Floats
    held: Floats


def prismatic(length: Floats, rigidity: Floats, held: Floats) -> SpanStiffness:
    """Return the stiffness of prismatic spans: lengths m and EI N·m² (n, L), held (n + 1, L)."""
    slim = rigidity / length
    half = 2.0 * slim
    return SpanStiffness(half + half, half + half, half, 12.0 * slim * slim, held)


@dataclass(frozen=True, slots=True, eq=False)
class SpanMoments:
    """start, end (n, C, L) N·m on the spans, rotations (n + 1, C, L) rad, clockwise positive."""

    start: Floats
    end: Floats
    rotations: Floats


def sweep_lines(
    stiffness: SpanStiffness,
    start: Floats,
    end: Floats,
    couples: Floats | None = None,
    *,
    out: SpanMoments | None = None,
) -> SpanMoments:
    """Distribute C cases of L lines of n spans each at once.

    ``start``, ``end`` (n, C, L): fixed-end moments; ``couples`` (n + 1, C, L) on the joints, None
    where there are none; ``out``: arrays to write into.  Cases are taken a few at a
    time, so many that they fit the cache.
    """
    count, cases, lines = start.shape
    result = out or SpanMoments(
        np.empty_like(start), np.empty_like(start), np.empty((count + 1, cases, lines))
    )
    factors = _factors(stiffness)
    step = max(CHUNK // max(lines, 1), 1)
    for low in range(0, cases, step):
        _sweep_chunk(factors, stiffness.held, start, end, couples, result, slice(low, low + step))
    return result


@dataclass(frozen=True, slots=True, eq=False)
class _Factors:
    """What does not depend on the case.

    back: -g; passed: carried·g; carried, stiff (n, L); root (L,): -1/stiffness of the first
    joint; springs: whether any line has a support with stiffness at each joint.
    """

    back: Floats
    passed: Floats
    carried: Floats
    stiff: Floats
    root: Floats
    springs: tuple[bool, ...]


def _factors(stiffness: SpanStiffness) -> _Factors:
    held = stiffness.held
    give, stiff = np.empty_like(stiffness.near), np.empty_like(stiffness.near)
    beyond = held[-1]
    for j in range(len(give) - 1, -1, -1):
        total = stiffness.far[j] + beyond
        loose = total == 0.0
        give[j] = np.where(loose, 0.0, 1.0 / (total + loose))
        modified = (stiffness.both[j] + stiffness.near[j] * beyond) * give[j]
        stiff[j] = np.where(loose, stiffness.near[j], modified)
        beyond = held[j] + stiff[j]
    root = np.where(beyond == 0.0, 0.0, -1.0 / (beyond + (beyond == 0.0)))
    passed = stiffness.carried * give
    return _Factors(
        -give, passed, stiffness.carried, stiff, root, tuple(bool(row.any()) for row in held)
    )


def _sweep_chunk(
    factors: _Factors,
    held: Floats,
    start: Floats,
    end: Floats,
    couples: Floats | None,
    result: SpanMoments,
    cases: slice,
) -> None:
    """Some cases of all lines; works in the result's own arrays as far as it can."""
    count = len(start)
    first, last = result.start[:, cases], result.end[:, cases]
    turns = result.rotations[:, cases]
    applied = None if couples is None else couples[:, cases]
    room = np.empty(first.shape[1:])
    for j in range(count - 1, -1, -1):
        # last[j] keeps the unbalance of joint j + 1, first[j] the modified fixed-end moment.
        if j == count - 1:
            last[j] = end[j, cases]
        else:
            np.add(end[j, cases], first[j + 1], out=last[j])
        if applied is not None:
            last[j] -= applied[j + 1]
        np.multiply(last[j], factors.passed[j], out=room)
        np.subtract(start[j, cases], room, out=first[j])
    turns[0] = first[0]
    if applied is not None:
        turns[0] -= applied[0]
    turns[0] *= factors.root
    for j in range(count):
        np.multiply(turns[j], factors.carried[j], out=room)
        room += last[j]
        np.multiply(room, factors.back[j], out=turns[j + 1])
        np.multiply(turns[j], factors.stiff[j], out=room)
        first[j] += room
        if j:
            np.negative(first[j], out=last[j - 1])
            _support(factors, held, applied, last[j - 1], turns[j], j)
    last[count - 1] = 0.0
    _support(factors, held, applied, last[-1], turns[-1], count)


def _support(
    factors: _Factors,
    held: Floats,
    applied: Floats | None,
    moment: Floats,
    turn: Floats,
    joint: int,
) -> None:
    """Add to the moment at the end of a span what the support and the couple at its joint take."""
    if factors.springs[joint]:
        moment -= held[joint] * turn
    if applied is not None:
        moment += applied[joint]
