"""The largest value of an effect over the length of a member and over all rows of factors.

Effects are polynomials along segments, so the largest value lies at an end of a segment or at a
root of the derivative; it is found there, not on a grid.  The grid of ``survey`` only tells which
stretches can hold it.

Where parts may be on or off, the largest effect at a place is the sum of the adverse parts, and
along the member it is smooth between the places where a part changes sign.  On a stretch where no
part does (its Bernstein coefficients have one sign) the same holds as before; a stretch where one
does is halved until none is left that could hold the largest value.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.factors import FactorTable
from analysis_core.effects.polynomials import (
    bernstein,
    derivative,
    evaluate,
    largest_between,
    restricted,
)
from analysis_core.effects.survey import EQUAL, Stretches

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

_ROUNDING = 1e-14  # of a part's own size: less does not make it change sign
_POLISH = 4  # steps of Newton's from six digits to all
_NEAR = 1e-4
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


def largest(coefficients: Floats, cuts: Floats, table: FactorTable, stretches: Stretches) -> Peaks:
    """Return the largest value over each member and all rows of the table.

    ``coefficients`` (P, K, C, B) of an effect, ``cuts`` (K+1, B); ``stretches`` are those that can
    hold it.  Of equal values the first row counts, then the leftmost place.
    """
    _, segments, count, size = coefficients.shape
    by_part = coefficients.transpose(0, 2, 1, 3).reshape(-1, count, segments * size)
    find = _fixed if table.fixed else _varied
    scale = _scale(by_part, size, table)
    found = find(by_part, scale, table, stretches)
    row, segment, t = _first(found, scale)
    members = np.arange(size)
    chosen = by_part[..., segment * size + members]  # (P, C, B)
    contributions = evaluate(chosen, t)
    factors = np.where(contributions > 0.0, table.high.T[:, row], table.low.T[:, row])
    value, t = _settled(_weighted(chosen, factors), t)
    return Peaks(
        value=value,
        x=cuts[segment, members] + t * np.diff(cuts, axis=0)[segment, members],
        row=row,
        contributions=contributions,
    )


def _settled(polynomials: Floats, t: Floats) -> tuple[Floats, Floats]:
    """Value and place by a way that does not depend on how the place was found.

    Members are treated together or alone as it suits; both must give the same to the last digit.
    """
    slope = derivative(polynomials)
    bend = derivative(slope)
    t = np.round(t, 6)
    for _ in range(_POLISH):
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            step = evaluate(slope, t) / evaluate(bend, t)
        near = (t > 0.0) & (t < 1.0) & (np.abs(step) < _NEAR)
        t = np.where(near, np.clip(t - step, 0.0, 1.0), t)
    t = np.round(t, 12)
    return evaluate(polynomials, t), t


def _scale(by_part: Floats, size: int, table: FactorTable) -> Floats:
    """A bound of what the effect of all parts together can reach on each member (B)."""
    reach = np.add.reduce(np.abs(by_part), axis=0)  # (C, K*B)
    weight = np.maximum(np.abs(table.low), np.abs(table.high)).max(axis=0)
    total = np.add.reduce(weight[:, None] * reach, axis=0)
    return np.asarray(total.reshape(-1, size).max(axis=0))


def _parts_at(by_part: Floats, size: int, s: Stretches) -> Floats:
    """The polynomials of the parts (P, C, n) on the segments of the stretches."""
    return by_part[..., s.segment * size + s.member]


@dataclass(slots=True, eq=False)
class _Found:
    """Candidates: member, row, segment, t and value, all (n)."""

    member: Integers
    row: Integers
    segment: Integers
    t: Floats
    value: Floats


def _fixed(by_part: Floats, scale: Floats, table: FactorTable, s: Stretches) -> _Found:
    """Each row is one polynomial per segment."""
    chosen = _parts_at(by_part, len(scale), s)
    value, t = largest_between(_weighted(chosen, table.high.T[:, s.row]), s.low, s.high)
    return _Found(s.member, s.row, s.segment, t, value)


def _varied(by_part: Floats, scale: Floats, table: FactorTable, s: Stretches) -> _Found:
    """Each row is the sum of its adverse parts, on ever smaller stretches."""
    best = np.full(len(scale), -np.inf)
    pieces: list[_Found] = []

    def found(where: Stretches, t: Floats, value: Floats) -> None:
        pieces.append(_Found(where.member, where.row, where.segment, t, value))
        np.maximum.at(best, where.member, value)

    s = _plain(by_part, len(scale), table, s, found)
    for _ in range(_HALVINGS if len(s.row) else 0):
        chosen = _parts_at(by_part, len(scale), s)
        local = restricted(chosen, s.low, s.high)
        lows, highs = table.low.T[:, s.row], table.high.T[:, s.row]
        rounding = _ROUNDING * np.max(np.abs(chosen), axis=0)
        sign, settled = _signs(local, rounding, lows, highs)
        factors = np.where(sign > 0.0, highs, lows)[:, settled]
        done, rest = _only(s, settled), ~settled
        one = np.ones(len(done.row))
        value, u = largest_between(_weighted(local[..., settled], factors), 0.0 * one, one)
        found(done, done.low + u * (done.high - done.low), value)
        if not rest.any():
            break
        s, local, lows, highs = _only(s, rest), local[..., rest], lows[:, rest], highs[:, rest]
        ends = [_adverse(evaluate(local, u), lows, highs) for u in (0.0, 0.5, 1.0)]
        found(s, s.low, ends[0])
        found(s, 0.5 * (s.low + s.high), ends[1])
        found(s, s.high, ends[2])
        margin = np.tile(_margin(local, lows, highs) / 4.0, 2)
        halves = _halved(s)
        reach = np.maximum(np.concatenate(ends[:2]), np.concatenate(ends[1:])) + margin
        goes_on = reach >= best[halves.member] - EQUAL * scale[halves.member]
        goes_on &= margin > EQUAL * scale[halves.member]
        if not goes_on.any():
            break
        s = _only(halves, goes_on)
    return _Found(
        *(
            np.concatenate([getattr(piece, name) for piece in pieces])
            for name in ("member", "row", "segment", "t", "value")
        )
    )


def _plain(
    by_part: Floats,
    size: int,
    table: FactorTable,
    s: Stretches,
    found: Callable[[Stretches, Floats, Floats], None],
) -> Stretches:
    """Settle the stretches on which no part can change sign; return the others.

    A part cannot where its values at both ends are of one sign and larger than what its second
    derivative could take away between them.
    """
    chosen = _parts_at(by_part, size, s)
    lows, highs = table.low.T[:, s.row], table.high.T[:, s.row]
    at_low, at_high = (evaluate(chosen, t) for t in (s.low, s.high))
    powers = np.arange(len(chosen), dtype=np.float64)
    weights = (powers * (powers - 1.0)).reshape(-1, 1, 1)
    bend = np.sum(np.abs(chosen[2:]) * weights[2:], axis=0)
    sag = bend * ((s.high - s.low) ** 2 / 8.0)
    apart = np.minimum(np.abs(at_low), np.abs(at_high)) >= sag
    one_sign = apart & (np.signbit(at_low) == np.signbit(at_high))
    settled = np.all(one_sign | (lows == highs), axis=0)
    factors = np.where(at_low + at_high > 0.0, highs, lows)[:, settled]
    done = _only(s, settled)
    value, t = largest_between(_weighted(chosen[..., settled], factors), done.low, done.high)
    found(done, t, value)
    return _only(s, ~settled)


def _only(s: Stretches, chosen: NDArray[np.bool_]) -> Stretches:
    return Stretches(
        s.member[chosen], s.row[chosen], s.segment[chosen], s.low[chosen], s.high[chosen]
    )


def _halved(s: Stretches) -> Stretches:
    middle = 0.5 * (s.low + s.high)
    return Stretches(
        np.tile(s.member, 2),
        np.tile(s.row, 2),
        np.tile(s.segment, 2),
        np.concatenate([s.low, middle]),
        np.concatenate([middle, s.high]),
    )


def _margin(local: Floats, low: Floats, high: Floats) -> Floats:
    """How far each row may exceed its values at the ends of its stretch (n)."""
    if len(local) < 3:
        return np.zeros(local.shape[2])
    powers = np.arange(len(local), dtype=np.float64)
    bend = np.sum(np.abs(local) * (powers * (powers - 1.0)).reshape(-1, 1, 1), axis=0)
    return np.asarray(np.sum(bend * np.maximum(np.abs(low), np.abs(high)), axis=0) / 8.0)


def _signs(
    local: Floats, rounding: Floats, low: Floats, high: Floats
) -> tuple[Floats, NDArray[np.bool_]]:
    """The sign of each part on its interval, and the intervals on which every choice is settled."""
    enclosing = bernstein(local)  # (P, C, n)
    one_sign = np.all(enclosing >= -rounding, axis=0) | np.all(enclosing <= rounding, axis=0)
    return np.sum(enclosing, axis=0), np.all(one_sign | (low == high), axis=0)


def _adverse(effects: Floats, low: Floats, high: Floats) -> Floats:
    return np.asarray(np.sum(np.maximum(low * effects, high * effects), axis=0))


def _weighted(chosen: Floats, factors: Floats) -> Floats:
    """The sum over the parts of (P, C, n) by factors (C, n): (P, n)."""
    return np.asarray(np.add.reduce(chosen * factors, axis=1))


def _first(found: _Found, scale: Floats) -> tuple[Integers, Integers, Floats]:
    """Of each member's candidates the largest; of equal ones the first row, leftmost."""
    top = np.full(len(scale), -np.inf)
    np.maximum.at(top, found.member, found.value)
    good = found.value >= (top - EQUAL * scale)[found.member]
    member, row, segment, t = (
        getattr(found, name)[good] for name in ("member", "row", "segment", "t")
    )
    if len(member) == len(scale) and np.bincount(member).max() == 1:
        pick = np.empty(len(scale), dtype=np.int64)
        pick[member] = np.arange(len(member))
    else:
        order = np.lexsort((t, segment, row, member))
        _, first = np.unique(member[order], return_index=True)
        pick = order[first]
    return row[pick], segment[pick], t[pick]
