"""Integrals along one member, by Gauss-Legendre quadrature on panels.

The member is taken as a simple beam; by virtual work a unit couple at one end picks out the
rotation of that end against the chord.  Rotations clockwise, in rad; ``x`` in m from the start.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import ModelError
from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    MemberAction,
    Piece,
    PointForce,
    PointMoment,
)
from analysis_core.stiffness_check.influence import gauss_points

Floats = NDArray[np.float64]

POINTS = 20
_AGREEMENT = 4e-15
_DEEPEST = 40

_NODES, _WEIGHTS = gauss_points(POINTS)


@lru_cache(maxsize=4096)
def flexibility(pieces: tuple[Piece, ...]) -> tuple[float, float, float]:
    """Return the end flexibilities (start-start, start-end, end-end) in rad/(N·m).

    Rotation of an end against the chord for a unit end moment, both clockwise.
    """
    length = sum(piece.length for piece in pieces)
    x, weight, bending, shear = _points(pieces, ())
    near, far = 1.0 - x / length, -x / length
    sliding = float((weight * shear).sum()) / length**2
    return (
        float((weight * bending * near * near).sum()) + sliding,
        float((weight * bending * near * far).sum()) + sliding,
        float((weight * bending * far * far).sum()) + sliding,
    )


def loaded_rotations(pieces: tuple[Piece, ...], actions: Sequence[MemberAction]) -> Floats:
    """Return the rotations of both ends of the simple beam under each action: (A, 2), rad."""
    length = sum(piece.length for piece in pieces)
    breaks = sorted({b for action in actions for b in _breaks(action)})
    x, weight, bending, shear = _points(pieces, tuple(breaks))
    curvatures, slides = np.zeros((len(actions), len(x))), np.zeros((len(actions), len(x)))
    for row, action in enumerate(actions):
        if isinstance(action, ImposedCurvature):
            inside = (x > action.start) & (x < action.end)
            curvatures[row, inside] = action.curvature
        else:
            moment, force = simple_beam(action, length, x)
            curvatures[row], slides[row] = moment * bending, force * shear
    near, far = weight * (1.0 - x / length), -weight * x / length
    slid = (slides * weight).sum(1) / length
    return np.stack([(curvatures * near).sum(1) - slid, (curvatures * far).sum(1) - slid], axis=1)


def simple_beam(action: MemberAction, length: float, x: Floats) -> tuple[Floats, Floats]:
    """Return moment (N·m) and shear (N) of a simple beam at ``x``, which no break falls on."""
    if isinstance(action, DistributedForce):
        return _under_distributed(action, length, x)
    if isinstance(action, PointForce):
        left = action.transverse * (1.0 - action.position / length)
        beyond = x > action.position
        moment = left * x - np.where(beyond, action.transverse * (x - action.position), 0.0)
        return moment, left - np.where(beyond, action.transverse, 0.0)
    if isinstance(action, PointMoment):
        left = -action.moment / length
        moment = left * x + np.where(x > action.position, action.moment, 0.0)
        return moment, np.full_like(x, left)
    return np.zeros_like(x), np.zeros_like(x)


def _force_and_lever(action: DistributedForce) -> tuple[float, float]:
    """Return the transverse force in N and its moment about the member's start in N·m."""
    reach = action.end - action.start
    force = sum(c * reach ** (i + 1) / (i + 1) for i, c in enumerate(action.transverse))
    about = sum(c * reach ** (i + 2) / (i + 2) for i, c in enumerate(action.transverse))
    return force, about + force * action.start


def _under_distributed(action: DistributedForce, length: float, x: Floats) -> tuple[Floats, Floats]:
    force, lever = _force_and_lever(action)
    left = force - lever / length
    reached = np.clip(x - action.start, 0.0, action.end - action.start)
    moment, shear = left * x, np.full_like(x, left)
    for i, c in enumerate(action.transverse):
        passed = c * reached ** (i + 1) / (i + 1)
        moment = moment - passed * (x - action.start) + c * reached ** (i + 2) / (i + 2)
        shear = shear - passed
    return moment, shear


def _breaks(action: MemberAction) -> tuple[float, ...]:
    if isinstance(action, PointForce | PointMoment):
        return (action.position,)
    return (action.start, action.end)


@lru_cache(maxsize=1024)
def _points(
    pieces: tuple[Piece, ...], breaks: tuple[float, ...]
) -> tuple[Floats, Floats, Floats, Floats]:
    """Return points x, weights (m), 1/EI and 1/GA there; no panel spans a break."""
    parts = []
    origin = 0.0
    for piece in pieces:
        inner = [(b - origin) / piece.length for b in breaks]
        edges: Floats = np.array(sorted({*_panels(piece), *(u for u in inner if 0.0 < u < 1.0)}))
        half = np.diff(edges)[:, None] / 2.0
        u = (edges[:-1, None] + half * (1.0 + _NODES)).ravel()
        weight = (half * _WEIGHTS).ravel() * piece.length
        parts.append((origin + u * piece.length, weight, *_softness(piece, u)))
        origin += piece.length
    x, weight, bending, shear = (np.concatenate(column) for column in zip(*parts, strict=True))
    return x, weight, bending, shear


def _softness(piece: Piece, u: Floats) -> tuple[Floats, Floats]:
    rigidity = _polynomial(piece.flexural, u) ** piece.power
    if piece.shear is None:
        return 1.0 / rigidity, np.zeros_like(u)
    return 1.0 / rigidity, 1.0 / _polynomial(piece.shear, u)


def _polynomial(coefficients: Sequence[float], u: Floats) -> Floats:
    value = np.zeros_like(u)
    for coefficient in reversed(coefficients):
        value = value * u + coefficient
    return value


@lru_cache(maxsize=4096)
def _panels(piece: Piece) -> tuple[float, ...]:
    """Return edges (0 to 1) of panels, halved until a panel and its halves agree."""
    if not any(piece.flexural[1:]) and not any((piece.shear or ())[1:]):
        return (0.0, 1.0)
    edges, waiting = [0.0], [(0.0, 1.0, 0)]
    while waiting:
        low, high, depth = waiting.pop()
        middle = (low + high) / 2.0
        whole = _sums(piece, low, high)
        halves = _sums(piece, low, middle) + _sums(piece, middle, high)
        if np.all(np.abs(whole - halves) <= _AGREEMENT * np.abs(halves)):
            edges.append(high)
        elif depth == _DEEPEST:
            raise ModelError(
                f"The rigidity of a member piece {piece.length:.3f} m long varies too steeply "
                f"near {high:.6f} of its length to be integrated. Check its section."
            )
        else:
            waiting += [(middle, high, depth + 1), (low, middle, depth + 1)]
    return tuple(edges)


def _sums(piece: Piece, low: float, high: float) -> Floats:
    half = (high - low) / 2.0
    u = low + half * (1.0 + _NODES)
    bending, shear = _softness(piece, u)
    return np.array([half * _WEIGHTS @ bending, half * _WEIGHTS @ shear])
