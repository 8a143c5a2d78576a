"""Integrals along pieces whose rigidity varies smoothly, to near machine precision."""

from __future__ import annotations

import math
from functools import lru_cache
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import ConvergenceError
from analysis_core.model import Piece

Floats = NDArray[np.float64]

ORDER = 16
"""Gauss points per panel: exact for polynomials to degree 31."""
_TIGHT = 4e-16
_MOMENTS = 6
_DEEPEST = 40


@lru_cache(maxsize=64)
def gauss_points(count: int) -> tuple[Floats, Floats]:
    """Return Gauss-Legendre nodes and weights on 0 to 1."""
    nodes, weights = np.polynomial.legendre.leggauss(count)  # type: ignore[no-untyped-call,unused-ignore]
    return (nodes + 1.0) / 2.0, weights / 2.0


@lru_cache(maxsize=4096)
def panel_ends(piece: Piece) -> tuple[float, ...]:
    """Return where to divide 0 to 1 so that every panel integrates 1/EI and 1/GA to rounding.

    A panel is halved until the integrals of ``u**k`` over the rigidity (k = 0 to 5, ``u`` from
    the panel's own start) agree with those over its halves.  Raises ConvergenceError where the
    rigidity comes so close to zero that no division suffices.
    """
    if not any(piece.flexural[1:]) and not any((piece.shear or ())[1:]):
        return (0.0, 1.0)
    ends = [0.0]
    waiting = [(0.0, 1.0, 0)]
    while waiting:
        low, high, depth = waiting.pop()
        middle = (low + high) / 2.0
        whole = _moments(piece, low, high, low, high)
        halves = _moments(piece, low, middle, low, high) + _moments(piece, middle, high, low, high)
        if np.all(np.abs(whole - halves) <= _TIGHT * _MOMENTS * np.abs(halves)):
            ends.append(high)
        elif depth >= _DEEPEST:
            raise ConvergenceError(
                f"The rigidity of a piece {piece.length:.3f} m long falls to "
                f"{piece.flexural_at(low):.3g} N·m²; its flexibility cannot be integrated. "
                f"Check the section at its thin end."
            )
        else:
            waiting += [(middle, high, depth + 1), (low, middle, depth + 1)]
    return tuple(ends)


@lru_cache(maxsize=1024)
def breakpoints(pieces: tuple[Piece, ...]) -> tuple[tuple[float, int, float, float], ...]:
    """Return every panel of a member: (start of its piece in m, piece index, low u, high u)."""
    panels = []
    starts = piece_starts(pieces)
    for index, piece in enumerate(pieces):
        if not piece.length:
            continue
        ends = panel_ends(piece)
        panels += [(starts[index], index, low, high) for low, high in pairwise(ends)]
    return tuple(panels)


def piece_starts(pieces: tuple[Piece, ...]) -> list[float]:
    """Return the distance of each piece's start from the member's start, m."""
    return [math.fsum(piece.length for piece in pieces[:i]) for i in range(len(pieces))]


def compliance(piece: Piece, u: Floats) -> tuple[Floats, Floats]:
    """Return 1/EI and 1/GA (0 where rigid in shear) at ``u`` along the piece."""
    flexible = _polynomial(piece.flexural, u) ** -piece.power
    if piece.shear is None:
        return flexible, np.zeros_like(flexible)
    return flexible, 1.0 / _polynomial(piece.shear, u)


def _polynomial(coefficients: tuple[float, ...], u: Floats) -> Floats:
    total = np.full_like(u, coefficients[-1])
    for coefficient in coefficients[-2::-1]:
        total = total * u + coefficient
    return total


def nodes_of_member(
    pieces: tuple[Piece, ...], cuts: tuple[float, ...] = ()
) -> tuple[Floats, Floats, Floats]:
    """Return positions x in m and the elastic weights dx/EI and dx/GA of all Gauss points.

    ``cuts`` are further positions at which an integrand is not smooth.
    """
    xs, bending, shearing = [], [], []
    nodes, weights = gauss_points(ORDER)
    for start, index, low, high in breakpoints(pieces):
        piece = pieces[index]
        inner = sorted({(cut - start) / piece.length for cut in cuts})
        marks = [low, *(u for u in inner if low < u < high), high]
        for a, b in pairwise(marks):
            u = a + (b - a) * nodes
            flexible, slippery = compliance(piece, u)
            xs.append(start + u * piece.length)
            bending.append(weights * ((b - a) * piece.length) * flexible)
            shearing.append(weights * ((b - a) * piece.length) * slippery)
    return np.concatenate(xs), np.concatenate(bending), np.concatenate(shearing)


def _moments(piece: Piece, low: float, high: float, origin: float, end: float) -> Floats:
    nodes, weights = gauss_points(ORDER)
    u = low + (high - low) * nodes
    powers = np.vander((u - origin) / (end - origin), _MOMENTS, increasing=True)
    flexible, slippery = compliance(piece, u)
    scale = (weights * (high - low))[:, None]
    return np.concatenate(
        [(scale * powers * flexible[:, None]).sum(0), (scale * powers * slippery[:, None]).sum(0)]
    )
