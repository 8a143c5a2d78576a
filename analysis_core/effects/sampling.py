"""Largest and least values of every row of factors at equally spaced places of each segment.

Only running extremes are kept, never the whole field: the places are taken a few at a time, as
many as stay in the processor's cache.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.factors import FactorTable
from analysis_core.effects.polynomials import evaluate

Floats = NDArray[np.float64]

_NUMBERS = 65_536  # doubles at a time


@dataclass(frozen=True, slots=True, eq=False)
class Sampled:
    """Over the places: highest, lowest (K, N, B).  Over the rows: top, bottom (S, K, B)."""

    highest: Floats
    lowest: Floats
    top: Floats
    bottom: Floats


def sampled(coefficients: Floats, table: FactorTable, samples: int) -> Sampled:
    """Return the extremes of polynomials (P, K, C, B) at ``samples`` places from t = 0 to 1."""
    _, segments, _, size = coefficients.shape
    rows = len(table.names)
    polynomials = _combined(coefficients, table.high) if table.fixed else coefficients
    out = Sampled(
        highest=np.full((segments, rows, size), -np.inf),
        lowest=np.full((segments, rows, size), np.inf),
        top=np.empty((samples, segments, size)),
        bottom=np.empty((samples, segments, size)),
    )
    places = np.linspace(0.0, 1.0, samples)
    step = max(1, _NUMBERS // (segments * max(rows, polynomials.shape[2]) * size))
    for first in range(0, samples, step):
        now = slice(first, first + step)
        t = places[now].reshape(-1, 1, 1, 1)
        values = evaluate(polynomials[:, None], t)  # (s, K, N or C, B)
        high, low = (values, values) if table.fixed else both(values, table)
        np.maximum(out.highest, np.max(high, axis=0), out=out.highest)
        np.minimum(out.lowest, np.min(low, axis=0), out=out.lowest)
        out.top[now], out.bottom[now] = np.max(high, axis=2), np.min(low, axis=2)
    return out


def both(values: Floats, table: FactorTable) -> tuple[Floats, Floats]:
    """Return the largest and least of every row from the effects of the parts.

    ``values`` has the parts on its last axis but one: (..., C, B) to (..., N, B).  Parts with the
    same factors in every row are added first: all of them, and the positive ones alone.
    """
    shape = (*values.shape[:-2], len(table.names), values.shape[-1])
    high, low = np.zeros(shape), np.zeros(shape)
    for columns in _alike(table):
        lows, highs = table.low[:, columns[0]], table.high[:, columns[0]]
        total = _total(values, columns)
        free = lows != highs
        positive = _total(np.maximum(values, 0.0), columns) if free.any() else total
        for n in np.flatnonzero(lows) if not free.any() else range(len(lows)):
            if free[n]:
                spread = (highs[n] - lows[n]) * positive
                high[..., n, :] += lows[n] * total + spread if lows[n] else spread
                low[..., n, :] += highs[n] * total - spread
            elif lows[n]:
                fixed = lows[n] * total
                high[..., n, :] += fixed
                low[..., n, :] += fixed
    return high, low


def _alike(table: FactorTable) -> list[list[int]]:
    groups: dict[bytes, list[int]] = {}
    for c in range(len(table.parts)):
        key = table.low[:, c].tobytes() + table.high[:, c].tobytes()
        groups.setdefault(key, []).append(c)
    return list(groups.values())


def _total(values: Floats, columns: list[int]) -> Floats:
    total: Floats = values[..., columns[0], :]
    for c in columns[1:]:
        total = total + values[..., c, :]
    return total


def _combined(coefficients: Floats, factors: Floats) -> Floats:
    """Superpose (P, K, C, B) by factors (N, C): (P, K, N, B), in the order of the parts."""
    degree, segments, _, size = coefficients.shape
    out = np.zeros((degree, segments, len(factors), size))
    for n, row in enumerate(factors):
        for c in np.flatnonzero(row):
            out[:, :, n] += row[c] * coefficients[:, :, c]
    return out
