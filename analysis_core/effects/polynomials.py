"""Polynomials by the thousand: values, derivatives, roots and the largest value on an interval.

Coefficients stand in ascending powers along the first axis; the other axes are any number of
independent polynomials.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_STEPS = 80  # bisection alone halves an interval to one rounding unit in 53
_CLOSE = 1e-11  # a step of Newton's that small leaves far less


def evaluate(coefficients: Floats, t: Floats | float) -> Floats:
    """Return the values at ``t``, which broadcasts against one coefficient (Horner's rule)."""
    shape = np.broadcast_shapes(coefficients.shape[1:], np.shape(t))
    value = np.empty(shape)
    value[...] = coefficients[-1]
    for coefficient in coefficients[-2::-1]:
        value *= t
        value += coefficient
    return value


def derivative(coefficients: Floats) -> Floats:
    """Return the derivative with respect to the variable; a constant gives one zero."""
    if len(coefficients) == 1:
        return np.zeros_like(coefficients)
    powers = np.arange(1, len(coefficients), dtype=np.float64)
    return np.asarray(coefficients[1:] * powers.reshape((-1,) + (1,) * (coefficients.ndim - 1)))


def product(a: Floats, b: Floats) -> Floats:
    """Return the product of polynomials whose other axes broadcast against each other."""
    shape = np.broadcast_shapes(a.shape[1:], b.shape[1:])
    out = np.zeros((len(a) + len(b) - 1, *shape))
    for i, coefficient in enumerate(a):
        for j, other in enumerate(b):
            out[i + j] += coefficient * other
    return out


def restricted(coefficients: Floats, low: Floats | float, high: Floats | float) -> Floats:
    """Return the same polynomials in ``u`` from 0 to 1 between ``low`` and ``high``."""
    width = np.asarray(high) - np.asarray(low)
    out = np.zeros(
        (len(coefficients), *np.broadcast_shapes(coefficients.shape[1:], np.shape(width)))
    )
    for coefficient in coefficients[::-1]:  # Horner with the polynomial low + width*u
        raised = out * low
        raised[1:] += out[:-1] * width
        out = raised
        out[0] += coefficient
    return out


def bernstein(coefficients: Floats) -> Floats:
    """Return the Bernstein coefficients on [0, 1]: they enclose every value there.

    G. Farin, Curves and Surfaces for CAGD, conversion of the monomial form:
    ``b[j] = sum over i <= j of C(j, i) / C(n, i) * a[i]``.
    """
    degree = len(coefficients) - 1
    out = np.zeros_like(coefficients)
    for j in range(degree + 1):
        for i in range(j + 1):
            out[j] += math.comb(j, i) / math.comb(degree, i) * coefficients[i]
    return out


def roots_between(coefficients: Floats, low: Floats, high: Floats) -> Floats:
    """Return the roots at which the sign changes in [low, high].

    ``coefficients`` (P, n), ``low`` and ``high`` (n); the result (P-1, n) is ascending, with NaN
    where there are fewer.  Up to the quadratic in closed form; beyond, the roots of the
    derivative separate those of the polynomial, so each lies alone in its bracket.
    """
    degree = len(coefficients) - 1
    if degree == 0:
        return np.empty((0, coefficients.shape[1]))
    if degree <= 2:
        found = _linear(coefficients) if degree == 1 else _quadratic(coefficients)
        found[~((found >= low) & (found <= high))] = np.nan
        return np.sort(found, axis=0)
    turning = roots_between(derivative(coefficients), low, high)
    edges = np.concatenate([low[None], np.where(np.isnan(turning), high, turning), high[None]])
    return np.sort(_bracketed(coefficients, edges), axis=0)


def largest_between(coefficients: Floats, low: Floats, high: Floats) -> tuple[Floats, Floats]:
    """Return the largest value of each polynomial on [low, high], and where it lies.

    Shapes as in ``roots_between``.  Of equal values the leftmost counts.
    """
    places = [low[None], high[None]]
    if len(coefficients) > 2:
        turning = roots_between(derivative(coefficients), low, high)
        places.insert(1, np.where(np.isnan(turning), low, turning))
    candidates = np.concatenate(places)
    values = evaluate(coefficients[:, None], candidates)
    best = np.argmax(values, axis=0)[None]
    return np.take_along_axis(values, best, 0)[0], np.take_along_axis(candidates, best, 0)[0]


def _linear(coefficients: Floats) -> Floats:
    constant, slope = coefficients
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return np.asarray(-constant / slope)[None]


def _quadratic(coefficients: Floats) -> Floats:
    """The form that loses no digits: q = -(b + sign(b) sqrt(b^2 - 4ac))/2, roots q/a and c/q."""
    c, b, a = coefficients
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        q = -0.5 * (b + np.copysign(np.sqrt(b * b - 4.0 * a * c), b))
        return np.stack([q / a, c / q])


def _bracketed(coefficients: Floats, edges: Floats) -> Floats:
    """The root in each interval between successive edges (E, n) whose ends differ in sign."""
    values = evaluate(coefficients[:, None], edges)
    changes = np.signbit(values[:-1]) != np.signbit(values[1:])
    out = np.full(changes.shape, np.nan)
    where = np.nonzero(changes)
    if not where[0].size:
        return out
    chosen = coefficients[:, where[1]]
    slope = derivative(chosen)
    low, high = edges[:-1][where], edges[1:][where]
    low_negative = np.signbit(values[:-1][where])
    x = 0.5 * (low + high)
    open_ = np.arange(len(x))
    for _ in range(_STEPS):
        value = evaluate(chosen, x[open_])
        at = x[open_]
        on_low_side = np.signbit(value) == low_negative
        low, high = np.where(on_low_side, at, low), np.where(on_low_side, high, at)
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            step = at - value / evaluate(slope, at)
        moved = np.where((step >= low) & (step <= high), step, 0.5 * (low + high))
        x[open_] = moved
        going = np.abs(moved - at) > _CLOSE * (1.0 + np.abs(at))
        if not going.any():
            break
        open_, low, high, low_negative = (a[going] for a in (open_, low, high, low_negative))
        chosen, slope = chosen[:, going], slope[:, going]
    out[where] = x
    return out
