"""How easily each part of a member bends and shears: 1/EI and 1/GA as polynomials.

A piece of constant rigidity gives one constant.  Where the rigidity varies its reciprocal is
no polynomial; it is matched by polynomials of low degree on as many parts as it takes to stay
within 1e-14 of it, so that all that follows stays in polynomials and needs no quadrature.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects.polynomials import evaluate, restricted
from analysis_core.model import Member, Piece

Floats = NDArray[np.float64]

_DEGREE = 7
_TOLERANCE = 1e-13
_DEPTH = 40  # halvings; a piece whose rigidity all but vanishes at an end needs most
_NODES = 0.5 - 0.5 * np.cos(np.pi * (2.0 * np.arange(_DEGREE + 1) + 1.0) / (2.0 * _DEGREE + 2.0))
_TRIALS = np.linspace(0.0, 1.0, 3 * _DEGREE)
_POWERS = np.vander(_NODES, increasing=True)


@dataclass(frozen=True, slots=True)
class Part:
    """From ``start`` to ``end`` (m along the member): 1/EI and 1/GA in powers of t, 0 to 1."""

    start: float
    end: float
    bending: tuple[float, ...]
    shear: tuple[float, ...] = ()

    def over(self, start: float, end: float) -> tuple[Floats, Floats]:
        """Return both as polynomials of t from 0 to 1 between two places within this part."""
        width = self.end - self.start
        low, high = (start - self.start) / width, (end - self.start) / width
        return (
            restricted(np.array(self.bending), low, high),
            restricted(np.array(self.shear), low, high) if self.shear else np.zeros(0),
        )


def parts(member: Member) -> tuple[Part, ...]:
    """Return the parts of ``member`` from its start to its end, without a gap."""
    out: list[Part] = []
    at = 0.0
    for piece in member.pieces:
        for part in _parts_of(piece):
            out.append(Part(at + part.start, at + part.end, part.bending, part.shear))
        at += piece.length
    return tuple(out)


@lru_cache(maxsize=4096)
def _parts_of(piece: Piece) -> tuple[Part, ...]:
    constant = not any(piece.flexural[1:]) and not any((piece.shear or ())[1:])
    if constant:
        shear = (1.0 / piece.shear[0],) if piece.shear else ()
        return (Part(0.0, piece.length, (1.0 / piece.flexural_at(0.0),), shear),)
    return tuple(_split(piece, 0.0, 1.0, _DEPTH))


def _split(piece: Piece, low: float, high: float, depth: int) -> list[Part]:
    start, end, shears = low * piece.length, high * piece.length, piece.shear
    bending = _match(lambda u: _power(piece.flexural, u) ** -piece.power, low, high)
    shear = _match(lambda u: 1.0 / _power(shears, u), low, high) if shears else ()
    if bending is not None and shear is not None:
        return [Part(start, end, bending, shear)]
    middle = 0.5 * (low + high)
    if not depth:
        at_middle = np.array(middle)
        shear = (1.0 / float(_power(shears, at_middle)),) if shears else ()
        return [Part(start, end, (1.0 / piece.flexural_at(middle),), shear)]
    return [*_split(piece, low, middle, depth - 1), *_split(piece, middle, high, depth - 1)]


def _match(
    function: Callable[[Floats], Floats], low: float, high: float
) -> tuple[float, ...] | None:
    """The polynomial through Chebyshev's points, or None where it strays from the function."""
    # Solved, not multiplied by an inverse, which would lose three digits.
    found = np.linalg.solve(_POWERS, function(low + (high - low) * _NODES))
    wanted = function(low + (high - low) * _TRIALS)
    strays = np.abs(evaluate(found, _TRIALS) - wanted)
    if np.max(strays) > _TOLERANCE * np.max(np.abs(wanted)):
        return None
    return tuple(float(c) for c in found)


def _power(coefficients: tuple[float, ...], u: Floats) -> Floats:
    return evaluate(np.array(coefficients), u)
