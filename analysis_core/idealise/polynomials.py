"""Polynomials as tuples of coefficients, lowest order first."""

from __future__ import annotations

Coefficients = tuple[float, ...]


def add(a: Coefficients, b: Coefficients) -> Coefficients:
    """Return the sum."""
    size = max(len(a), len(b))
    padded_a = a + (0.0,) * (size - len(a))
    padded_b = b + (0.0,) * (size - len(b))
    return tuple(x + y for x, y in zip(padded_a, padded_b, strict=True))


def multiply(a: Coefficients, b: Coefficients) -> Coefficients:
    """Return the product."""
    result = [0.0] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        for j, y in enumerate(b):
            result[i + j] += x * y
    return tuple(result)


def power(a: Coefficients, exponent: int) -> Coefficients:
    """Return ``a`` raised to a whole number."""
    result: Coefficients = (1.0,)
    for _ in range(exponent):
        result = multiply(result, a)
    return result


def substituted(a: Coefficients, offset: float, factor: float) -> Coefficients:
    """Return the coefficients in v of the polynomial at ``offset + factor * v`` (Horner)."""
    result: Coefficients = (a[-1],)
    for coefficient in reversed(a[:-1]):
        result = add(multiply(result, (offset, factor)), (coefficient,))
    return result if len(a) > 1 else a
