"""Values of polynomials at equally spaced places along each segment, a few places at a time.

The places lie symmetrically about the middle of the segment, so the even and the odd part of a
polynomial there serve two places each.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.factors import FactorTable
from analysis_core.effects.polynomials import restricted

Floats = NDArray[np.float64]

NUMBERS = 20_480  # doubles in one working array, so that a few of them stay in the cache


class Workspace:
    """Arrays that are used again, since fetching fresh memory costs as much as filling it."""

    def __init__(self) -> None:
        self._arrays: dict[str, Floats] = {}

    def array(self, name: str, shape: tuple[int, ...]) -> Floats:
        """Return an array of any content; the previous one of that name is given up."""
        size = math.prod(shape)
        found = self._arrays.get(name)
        if found is None or found.size < size:
            found = self._arrays[name] = np.empty(size)
        return found[:size].reshape(shape)


def centred(coefficients: Floats) -> Floats:
    """Return polynomials of t from 0 to 1 as polynomials of u from -1 to 1."""
    return restricted(coefficients, 0.5, 1.0)


def at_places(
    polynomials: Floats, samples: int, workspace: Workspace
) -> Iterator[tuple[slice, Floats]]:
    """Yield runs of places with the values (K, N, S, B) there of polynomials (P, K, N, B).

    The polynomials are centred, the places run from u = -1 to 1.  The array is used again for the
    next run.
    """
    local = polynomials[:, :, :, None]
    distance = _distances(samples)
    step = max(1, NUMBERS // max(1, polynomials[0].size))
    kind, size = polynomials.shape[1:3], polynomials.shape[3]
    half = samples // 2
    for first in range(0, len(distance), step):
        u = distance[first : first + step, None]
        shape = (*kind, len(u), size)
        e, o, a = (workspace.array(name, shape) for name in ("even", "odd", "above"))
        _horner(local[0::2], u * u, e)
        if len(local) == 1:
            o[...] = 0.0
        else:
            _odd(local[1::2], u, u * u, o)
        np.add(e, o, out=a)
        yield slice(half + first, half + first + len(u)), a
        np.subtract(e, o, out=e)
        last = samples - 1 - half - first
        # The mirrored places run the other way.
        yield slice(last, last - len(u) if last >= len(u) else None, -1), e


def each_row(
    polynomials: Floats, samples: int, workspace: Workspace
) -> Iterator[tuple[int, int, Floats]]:
    """Yield segment, row and the values (S, B) of each of the polynomials (P, K, N, B).

    To the last digit those of ``at_places``; quicker for many members, since little memory is in
    use at a time.  The array is used again for the next row.
    """
    _, segments, rows, size = polynomials.shape
    u = _distances(samples)[:, None]
    square = u * u
    half = samples // 2
    values = workspace.array("values", (samples, size))
    even, odd = (workspace.array(name, (len(u), size)) for name in ("even", "odd"))
    above = values[half:]
    below = values[half::-1] if samples % 2 else values[half - 1 :: -1]
    for k in range(segments):
        for n in range(rows):
            row = polynomials[:, k, n]
            _horner(row[0::2], square, even)
            if len(row) == 1:
                odd[...] = 0.0
            else:
                _odd(row[1::2], u, square, odd)
            np.add(even, odd, out=above)
            np.subtract(even, odd, out=below)
            yield k, n, values


def _distances(samples: int) -> Floats:
    """Places from the middle to the end, u up to 1."""
    nearest = 0.0 if samples % 2 else 1.0 / (samples - 1)
    return np.linspace(nearest, 1.0, (samples + 1) // 2)


def _odd(coefficients: Floats, u: Floats, square: Floats, out: Floats) -> None:
    if len(coefficients) == 1:
        np.multiply(coefficients[0], u, out=out)
    else:
        _horner(coefficients, square, out)
        out *= u


def _horner(coefficients: Floats, x: Floats, out: Floats) -> None:
    if len(coefficients) == 1:
        out[...] = coefficients[0]
        return
    np.multiply(coefficients[-1], x, out=out)
    out += coefficients[-2]
    for coefficient in coefficients[-3::-1]:
        out *= x
        out += coefficient


def combined(coefficients: Floats, factors: Floats, workspace: Workspace) -> Floats:
    """Superpose (P, K, C, B) by factors (N, C): (P, K, N, B), in the order of the parts."""
    degree, segments, count, size = coefficients.shape
    out = workspace.array("combined", (degree, segments, len(factors), size))
    term = workspace.array("term", out.shape[1:])
    for p in range(degree):
        np.multiply(factors[:, 0, None], coefficients[p, :, 0, None], out=out[p])
        for c in range(1, count):
            np.multiply(factors[:, c, None], coefficients[p, :, c, None], out=term)
            out[p] += term
    return out


def both(values: Floats, table: FactorTable) -> tuple[Floats, Floats]:
    """Return the largest and least of every row from the effects of the parts.

    ``values`` has the parts on its last axis but one: (..., C, B) to (..., N, B).  Parts with the
    same factors in every row are added first: all of them, and the positive ones alone.
    """
    shape = (*values.shape[:-2], len(table.names), values.shape[-1])
    high, low = np.zeros(shape), np.zeros(shape)
    for columns in table.alike:
        lows = table.low[:, columns[0], None]
        spread = table.high[:, columns[0], None] - lows
        total = _total(values, columns)[..., None, :]
        if lows.any():
            fixed = lows * total
            high += fixed
            low += fixed
        if spread.any():
            positive = spread * _total(np.maximum(values, 0.0), columns)[..., None, :]
            high += positive
            low += spread * total - positive
    return high, low


def _total(values: Floats, columns: Sequence[int]) -> Floats:
    total: Floats = values[..., columns[0], :]
    for c in columns[1:]:
        total = total + values[..., c, :]
    return total
