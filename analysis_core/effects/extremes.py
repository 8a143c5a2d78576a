"""The largest value of an effect over the length of a member and over all rows of factors.

Effects are polynomials along segments, so the largest value lies at an end of a segment or at a
root of the derivative; it is found there, not on a grid.  The grid only tells which segments and
rows can hold it: between two stations a distance h apart, no polynomial exceeds the larger of its
values there by more than h²/8 times its largest second derivative.

Where parts may be on or off, the largest effect at a place is the sum of the adverse parts, and
along the member it is smooth between the places where a part changes sign.  On an interval where
no part does (its Bernstein coefficients have one sign) the same holds as before; an interval where
one does is halved until none is left that could hold the largest value.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.factors import FactorTable
from analysis_core.effects.polynomials import bernstein, evaluate, largest_between, restricted

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

_EQUAL = 1e-12  # of the largest value on the member: closer values count as the same
_HALVINGS = 60  # the margin falls by four with each: far more than ever needed


@dataclass(frozen=True, slots=True, eq=False)
class Peaks:
    """The largest values of B members: value, place x (m from the start), row of the table (B).

    ``contributions`` (C, B) are the unfactored effects of the parts at that place.
    """

    value: Floats
    x: Floats
    row: Integers
    contributions: Floats


def largest(
    coefficients: Floats, cuts: Floats, table: FactorTable, sampled: Floats, samples: int
) -> Peaks:
    """Return the largest value over each member and all rows of the table.

    ``coefficients`` (P, K, C, B) of an effect, ``cuts`` (K+1, B); ``sampled`` (K, N, B) is the
    largest of ``samples`` equally spaced values of each row on each segment, ends included.
    Of equal values the first row counts, then the leftmost place.
    """
    find = _fixed if table.fixed else _varied
    found = find(coefficients, table, sampled, 1.0 / (samples - 1))
    row, segment, t, value = _first(found, sampled.shape[2])
    members = np.arange(coefficients.shape[3])
    chosen = coefficients.transpose(0, 1, 3, 2)[:, segment, members]  # (P, B, C)
    return Peaks(
        value=value,
        x=cuts[segment, members] + t * np.diff(cuts, axis=0)[segment, members],
        row=row,
        contributions=evaluate(chosen, t[:, None]).T,
    )


@dataclass(slots=True, eq=False)
class _Found:
    """Candidates: member, row, segment, t and value, all (n)."""

    member: Integers
    row: Integers
    segment: Integers
    t: Floats
    value: Floats


def _fixed(coefficients: Floats, table: FactorTable, sampled: Floats, step: float) -> _Found:
    """Each row is one polynomial per segment."""
    margin = _bound(table.high, _bend(coefficients), step)
    segment, row, member = _candidates(sampled, margin)
    chosen = coefficients.transpose(0, 1, 3, 2)[:, segment, member]  # (P, n, C)
    total = _weighted(chosen, table.high[row])
    zero, one = np.zeros(len(row)), np.ones(len(row))
    value, t = largest_between(total, zero, one)
    return _Found(member, row, segment, t, value)


def _varied(coefficients: Floats, table: FactorTable, sampled: Floats, step: float) -> _Found:
    """Each row is the sum of the adverse parts, on ever smaller intervals."""
    bend = _bend(coefficients)
    weight = np.maximum(np.abs(table.low), np.abs(table.high))
    margin = _bound(weight, bend, 1.0)
    segment, row, member = _candidates(sampled, margin * step * step)
    best = np.max(sampled, axis=(0, 1))
    scale = np.max(np.abs(sampled), axis=(0, 1))
    count = round(1.0 / step)
    low = np.repeat(np.arange(count) * step, len(row))
    low, high = low, np.minimum(low + step, 1.0)
    segment, row, member = (np.tile(index, count) for index in (segment, row, member))
    pieces: list[_Found] = []
    for _ in range(_HALVINGS):
        chosen = coefficients.transpose(0, 1, 3, 2)[:, segment, member]  # (P, n, C)
        lows, highs = table.low[row], table.high[row]
        at_low, at_high = (_adverse(chosen, lows, highs, t) for t in (low, high))
        pieces += [
            _Found(member, row, segment, low, at_low),
            _Found(member, row, segment, high, at_high),
        ]
        np.maximum.at(best, member, np.maximum(at_low, at_high))
        reach = np.maximum(at_low, at_high) + margin[segment, row, member] * (high - low) ** 2
        open_ = reach > best[member] - _EQUAL * scale[member]
        open_ &= (high - low) ** 2 * margin[segment, row, member] > _EQUAL * scale[member]
        if not open_.any():
            break
        segment, row, member, low, high = (a[open_] for a in (segment, row, member, low, high))
        local = restricted(chosen[:, open_], low[:, None], high[:, None])
        lows, highs = lows[open_], highs[open_]
        sign, settled = _signs(local, lows, highs)
        factors = np.where(sign > 0.0, highs, lows)[settled]
        value, u = largest_between(
            _weighted(local[:, settled], factors),
            np.zeros(len(factors)),
            np.ones(len(factors)),
        )
        a, b = low[settled], high[settled]
        pieces.append(
            _Found(member[settled], row[settled], segment[settled], a + u * (b - a), value)
        )
        np.maximum.at(best, member[settled], value)
        rest = ~settled
        low, high, middle = low[rest], high[rest], 0.5 * (low[rest] + high[rest])
        low, high = np.concatenate([low, middle]), np.concatenate([middle, high])
        segment, row, member = (np.tile(i[rest], 2) for i in (segment, row, member))
    return _Found(
        *(
            np.concatenate([getattr(piece, name) for piece in pieces])
            for name in ("member", "row", "segment", "t", "value")
        )
    )


def _signs(local: Floats, low: Floats, high: Floats) -> tuple[Floats, NDArray[np.bool_]]:
    """The sign of each part on its interval, and the intervals on which every choice is settled."""
    enclosing = bernstein(local)  # (P, n, C)
    slack = 1e-14 * np.max(np.abs(enclosing), axis=0)
    one_sign = np.all(enclosing >= -slack, axis=0) | np.all(enclosing <= slack, axis=0)
    return np.sum(enclosing, axis=0), np.all(one_sign | (low == high), axis=1)


def _adverse(chosen: Floats, low: Floats, high: Floats, t: Floats) -> Floats:
    effects = evaluate(chosen, t[:, None])
    return np.asarray(np.sum(np.maximum(low * effects, high * effects), axis=1))


def _weighted(chosen: Floats, factors: Floats) -> Floats:
    """The sum over the parts of (P, n, C) by factors (n, C): (P, n)."""
    return np.asarray(np.sum(chosen * factors, axis=2))


def _bend(coefficients: Floats) -> Floats:
    """A bound of the second derivative by t over each segment: (K, C, B)."""
    powers = np.arange(len(coefficients), dtype=np.float64)
    factors = (powers * (powers - 1.0)).reshape(-1, 1, 1, 1)
    return np.asarray(np.sum(np.abs(coefficients) * factors, axis=0))


def _bound(weight: Floats, bend: Floats, step: float) -> Floats:
    """How far each row may exceed two neighbouring samples: (K, N, B)."""
    out = np.zeros((bend.shape[0], weight.shape[0], bend.shape[2]))
    for c in range(bend.shape[1]):
        out += np.abs(weight[:, c])[:, None] * bend[:, c, None]
    return np.asarray(out * (step * step / 8.0))


def _candidates(sampled: Floats, margin: Floats) -> tuple[Integers, Integers, Integers]:
    """Segments, rows and members that can hold the largest value of their member."""
    best = np.max(sampled, axis=(0, 1))
    scale = np.max(np.abs(sampled), axis=(0, 1))
    segment, row, member = np.nonzero(sampled + margin >= best - _EQUAL * scale)
    return segment, row, member


def _first(found: _Found, size: int) -> tuple[Integers, Integers, Floats, Floats]:
    """Of each member's candidates the largest; of equal ones the first row, leftmost."""
    top = np.full(size, -np.inf)
    np.maximum.at(top, found.member, found.value)
    scale = np.zeros(size)
    np.maximum.at(scale, found.member, np.abs(found.value))
    good = found.value >= (top - _EQUAL * scale)[found.member]
    member, row, segment, t, value = (
        getattr(found, name)[good] for name in ("member", "row", "segment", "t", "value")
    )
    order = np.lexsort((t, segment, row, member))
    _, first = np.unique(member[order], return_index=True)
    pick = order[first]
    return row[pick], segment[pick], t[pick], value[pick]
