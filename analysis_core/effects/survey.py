"""Envelope at stations, and where along which row of factors the extremes of a member can lie.

Between two places a distance h apart no polynomial exceeds the larger of its values there by more
than h²/8 times its largest second derivative: rows that stay below the best by more than that are
out, whatever they do between the places.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.factors import FactorTable
from analysis_core.effects.polynomials import derivative, evaluate
from analysis_core.effects.sampling import (
    NUMBERS,
    Workspace,
    at_places,
    both,
    centred,
    combined,
    each_row,
)

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

_MANY = 128  # from so many members on, rows are taken one by one
EQUAL = 1e-12  # of the largest value on the member: closer values count as the same


@dataclass(frozen=True, slots=True, eq=False)
class Stretches:
    """Stretches of segments, from t = low to high, that can hold an extreme; all (n)."""

    member: Integers
    row: Integers
    segment: Integers
    low: Floats
    high: Floats


@dataclass(frozen=True, slots=True, eq=False)
class Survey:
    """Envelope at S places of each segment (S, K, B) and the stretches for both extremes."""

    top: Floats
    bottom: Floats
    highest: Stretches
    lowest: Stretches


def survey(coefficients: Floats, table: FactorTable, samples: int) -> Survey:
    """Survey polynomials (P, K, C, B) of the parts at ``samples`` places per segment."""
    _, segments, _, size = coefficients.shape
    top, bottom = (np.empty((samples, segments, size)) for _ in range(2))
    found: tuple[list[Stretches], list[Stretches]] = ([], [])
    workspace = Workspace()
    look = _fixed if table.fixed else _varied
    for now in _portions(coefficients, table):
        local = centred(coefficients[..., now])
        for into, stretches in zip(
            found, look(local, table, top[..., now], bottom[..., now], workspace), strict=True
        ):
            into.append(shifted(stretches, now.start))
    return Survey(top, bottom, joined(*found[0]), joined(*found[1]))


def values_only(coefficients: Floats, table: FactorTable, samples: int) -> tuple[Floats, Floats]:
    """Return the envelope at the places (S, K, B) alone, top and bottom, as ``survey`` has it."""
    _, segments, _, size = coefficients.shape
    top, bottom = (np.empty((samples, segments, size)) for _ in range(2))
    workspace = Workspace()
    for now in _portions(coefficients, table):
        local, high, low = centred(coefficients[..., now]), top[..., now], bottom[..., now]
        if not table.fixed:
            for places, values in at_places(local, samples, workspace):
                upper, lower = both(np.moveaxis(values, 2, 0), table)
                high[places], low[places] = np.max(upper, axis=2), np.min(lower, axis=2)
            continue
        by = _by_places if local.shape[3] < _MANY else _by_rows
        by(combined(local, table.high, workspace), high, low, workspace, curved=False)
    return top, bottom


def _portions(coefficients: Floats, table: FactorTable) -> Iterator[slice]:
    """As many members at a time as stay in the cache."""
    degree, segments, count, size = coefficients.shape
    rows = len(table.names)
    width = max(32, NUMBERS // (segments * max(rows, count)))
    if table.fixed:
        width = min(1024, max(width, _MANY, 10 * NUMBERS // (degree * segments * rows)))
    for first in range(0, size, width):
        yield slice(first, first + width)


def _fixed(
    local: Floats, table: FactorTable, top: Floats, bottom: Floats, workspace: Workspace
) -> tuple[Stretches, Stretches]:
    """Each row is one polynomial per segment."""
    polynomials = combined(local, table.high, workspace)
    curved = len(polynomials) > 3
    if local.shape[3] < _MANY:
        reach = _by_places(polynomials, top, bottom, workspace, curved=curved)
    else:
        reach = _by_rows(polynomials, top, bottom, workspace, curved=curved)
    scale = np.maximum(np.abs(top), np.abs(bottom)).max(axis=(0, 1))
    if reach is None:
        high, low = _closed(polynomials)
        return _first_to_reach(high, scale), _first_to_reach(-low, scale)
    return (
        _pruned(polynomials, 1.0, reach.highest, reach.over, top, scale),
        _pruned(polynomials, -1.0, -reach.lowest, reach.under, -bottom, scale),
    )


@dataclass(frozen=True, slots=True, eq=False)
class _Reach:
    """How far rows may go between the places, ends left out, and the margins in it (K, N, B)."""

    highest: Floats
    lowest: Floats
    over: Floats
    under: Floats


def _by_places(
    polynomials: Floats, top: Floats, bottom: Floats, workspace: Workspace, *, curved: bool
) -> _Reach | None:
    samples = len(top)
    reach = _empty_reach(polynomials, samples) if curved else None
    for places, values in at_places(polynomials, samples, workspace):
        np.maximum.reduce(values, axis=1, out=top[places].swapaxes(0, 1))
        np.minimum.reduce(values, axis=1, out=bottom[places].swapaxes(0, 1))
        if reach is None:
            continue
        for j, place in enumerate(range(samples)[places]):
            if 0 < place < samples - 1:
                beside = place in (1, samples - 2)
                _extend(reach, np.s_[:], values[:, :, j], beside=beside)
    return None if reach is None else _with_margins(reach)


def _by_rows(
    polynomials: Floats, top: Floats, bottom: Floats, workspace: Workspace, *, curved: bool
) -> _Reach | None:
    samples = len(top)
    reach = _empty_reach(polynomials, samples) if curved else None
    high, low = (workspace.array(name, (samples, top.shape[2])) for name in ("high", "low"))
    for k, n, values in each_row(polynomials, samples, workspace):
        if n == 0:
            high[...], low[...] = values, values
        else:
            np.maximum(high, values, out=high)
            np.minimum(low, values, out=low)
        if reach is not None:
            inner = values[2:-2]
            reach.highest[k, n] = np.maximum.reduce(inner, axis=0, initial=-np.inf)
            reach.lowest[k, n] = np.minimum.reduce(inner, axis=0, initial=np.inf)
            for place in (1, samples - 2):
                _extend(reach, np.s_[k, n], values[place], beside=True)
        if n == polynomials.shape[2] - 1:
            top[:, k], bottom[:, k] = high, low
    return None if reach is None else _with_margins(reach)


def _empty_reach(polynomials: Floats, samples: int) -> _Reach:
    shape = polynomials.shape[1:]
    over, under = _margins(polynomials, samples)
    return _Reach(np.full(shape, -np.inf), np.full(shape, np.inf), over, under)


def _extend(reach: _Reach, where: Any, value: Floats, *, beside: bool) -> None:
    """Take a place into account.

    Beside an end a row may exceed the end by up to four margins less the fall, elsewhere by one.
    """
    high, low = reach.highest[where], reach.lowest[where]
    more = 3.0 if beside else 0.0
    np.maximum(high, value + more * reach.over[where] if beside else value, out=high)
    np.minimum(low, value - more * reach.under[where] if beside else value, out=low)


def _with_margins(reach: _Reach) -> _Reach:
    np.add(reach.highest, reach.over, out=reach.highest)
    np.subtract(reach.lowest, reach.under, out=reach.lowest)
    return reach


def _pruned(
    polynomials: Floats, sign: float, reach: Floats, margin: Floats, top: Floats, scale: Floats
) -> Stretches:
    """Stretches between places of the rows that may hold the largest value, times ``sign``.

    Of rows that reach it at an end of a segment, where many may meet at a support, the first.
    """
    best = top.max(axis=(0, 1)) - EQUAL * scale
    may = reach >= best
    _mark_first_at_ends(may, polynomials, sign, top, best)
    segment, row, member = np.nonzero(may)
    samples = len(top)
    u = np.linspace(-1.0, 1.0, samples)[:, None]
    values = sign * evaluate(polynomials[:, None, segment, row, member], u)
    four = 4.0 * margin[segment, row, member]
    over = np.maximum(0.0, four - np.abs(np.diff(values, axis=0)))
    over *= over
    over /= np.maximum(4.0 * four, np.finfo(float).tiny)
    over += np.maximum(values[:-1], values[1:])
    which, place = np.nonzero((over >= best[member]).T)
    chosen, low, high = _runs(which, place, samples)
    return Stretches(member[chosen], row[chosen], segment[chosen], low, high)


def _mark_first_at_ends(
    may: NDArray[np.bool_], polynomials: Floats, sign: float, top: Floats, best: Floats
) -> None:
    members = np.flatnonzero(np.maximum(top[0], top[-1]).max(axis=0) >= best)
    if not len(members):
        return
    chosen = sign * polynomials[..., members]
    even, odd = (np.add.reduce(chosen[i::2], axis=0) for i in (0, 1))
    reached = even + np.abs(odd) >= best[members]  # (K, N, n)
    row = np.argmax(np.any(reached, axis=0), axis=0)
    may[:, row, members] |= reached[:, row, np.arange(len(members))]


def _varied(
    local: Floats, table: FactorTable, top: Floats, bottom: Floats, workspace: Workspace
) -> tuple[Stretches, Stretches]:
    """Each row is the sum of its adverse parts; a stretch lies between two places."""
    samples, rows = len(top), len(table.names)
    shape = (samples, local.shape[1], rows, local.shape[3])
    high, low = np.empty(shape), np.empty(shape)
    for places, values in at_places(local, samples, workspace):
        high[places], low[places] = both(np.moveaxis(values, 2, 0), table)
    np.max(high, axis=2, out=top)
    np.min(low, axis=2, out=bottom)
    scale = np.maximum(np.abs(top), np.abs(bottom)).max(axis=(0, 1))
    over, under = _varied_margins(local, table, samples)
    np.negative(low, out=low)
    return _between(high, over, scale), _between(low, under, scale)


def _varied_margins(local: Floats, table: FactorTable, samples: int) -> tuple[Floats, Floats]:
    over, under = (np.zeros((local.shape[1], len(table.names), local.shape[3])) for _ in range(2))
    if len(local) < 3:
        return over, under
    for c in range(local.shape[2]):
        part_over, part_under = _margins(local[:, :, c, None], samples)
        plus = np.maximum(table.high[:, c, None], 0.0)
        minus = np.maximum(-table.low[:, c, None], 0.0)
        over += np.maximum(plus * part_over, minus * part_under)
        under += np.maximum(plus * part_under, minus * part_over)
    return over, under


def _first_to_reach(reached: Floats, scale: Floats) -> Stretches:
    """The first row that reaches the largest value (K, N, B), and in it the first segment."""
    good = reached >= reached.max(axis=(0, 1)) - EQUAL * scale
    member = np.arange(len(scale))
    row = np.argmax(np.any(good, axis=0), axis=0)
    segment = np.argmax(good[:, row, member], axis=0)
    return Stretches(member, row, segment, np.zeros(len(row)), np.ones(len(row)))


def _between(values: Floats, margin: Floats, scale: Floats) -> Stretches:
    """Stretches between places (S, K, N, B) whose reach is not below what is reached elsewhere."""
    best = values.max(axis=(0, 1, 2)) - EQUAL * scale
    within = values + margin >= best
    place_last = np.moveaxis(within[:-1] | within[1:], 0, -1)
    *where, place = np.nonzero(place_last)
    number = np.ravel_multi_index(tuple(where), place_last.shape[:-1])
    number, low, high = _runs(number, place, len(values))
    segment, row, member = np.unravel_index(number, place_last.shape[:-1])
    return Stretches(member, row, segment, low, high)


def _runs(which: Integers, place: Integers, samples: int) -> tuple[Integers, Floats, Floats]:
    """Join intervals that follow one another: of what, from t = low to high."""
    if not len(which):
        return which, np.zeros(0), np.zeros(0)
    breaks = (np.diff(which) != 0) | (np.diff(place) != 1)
    first = np.concatenate([[0], np.flatnonzero(breaks) + 1])
    last = np.concatenate([first[1:] - 1, [len(which) - 1]])
    step = 1.0 / (samples - 1)
    return which[first], place[first] * step, np.minimum((place[last] + 1) * step, 1.0)


def _closed(polynomials: Floats) -> tuple[Floats, Floats]:
    """Largest and least value (K, N, B) of polynomials up to the second degree, u from -1 to 1."""
    constant = polynomials[0]
    slope = np.abs(polynomials[1]) if len(polynomials) > 1 else np.zeros_like(constant)
    if len(polynomials) < 3:
        return constant + slope, constant - slope
    bow = polynomials[2]
    ends = constant + bow
    high, low = ends + slope, ends - slope
    inside = slope < 2.0 * np.abs(bow)
    with np.errstate(divide="ignore", invalid="ignore"):
        turning = constant - slope * slope / (4.0 * bow)
    np.copyto(high, turning, where=inside & (bow < 0.0))
    np.copyto(low, turning, where=inside & (bow > 0.0))
    return high, low


def _margins(polynomials: Floats, samples: int) -> tuple[Floats, Floats]:
    """How far polynomials may rise over, and fall under, two neighbouring places.

    Only a second derivative below zero lifts them over the chord, one above zero under it.
    """
    second = derivative(derivative(polynomials))
    if len(second) <= 3:
        high, low = _closed(second)
    else:
        high = np.add.reduce(np.abs(second), axis=0)
        low = -high
    share = (2.0 / (samples - 1)) ** 2 / 8.0
    return np.maximum(-low, 0.0) * share, np.maximum(high, 0.0) * share


def shifted(stretches: Stretches, first: int) -> Stretches:
    """Return the stretches with their members numbered from ``first``."""
    return Stretches(
        stretches.member + first,
        stretches.row,
        stretches.segment,
        stretches.low,
        stretches.high,
    )


def joined(*pieces: Stretches) -> Stretches:
    """Return all stretches together."""
    if len(pieces) == 1:
        return pieces[0]
    return Stretches(
        np.concatenate([piece.member for piece in pieces]),
        np.concatenate([piece.row for piece in pieces]),
        np.concatenate([piece.segment for piece in pieces]),
        np.concatenate([piece.low for piece in pieces]),
        np.concatenate([piece.high for piece in pieces]),
    )
