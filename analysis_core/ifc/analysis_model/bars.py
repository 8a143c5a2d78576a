"""The members of a line as prismatic bars: what an analysis model of the standard can hold.

A member whose rigidity steps is cut at the steps; one whose rigidity varies smoothly is cut into
short bars of the same flexibility.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np

from analysis_core.model import (
    DistributedForce,
    JointForce,
    JointMovement,
    Line,
    Member,
    MemberAction,
    Piece,
    PointForce,
    PointMoment,
)

PIECES = 8
"""Bars for a piece along which the rigidity varies."""
_SAMPLES = 16
# Polynomials of a higher degree than one are written as so many straight parts.
_STRAIGHT_PARTS = 16


@dataclass(frozen=True, slots=True)
class Bar:
    """Part of a member from ``start`` to ``end`` (m), of one flexural rigidity (N·m²).

    ``shear`` is its shear rigidity in N, None where rigid; ``number`` counts along the member.
    """

    member: Member
    number: int
    start: float
    end: float
    flexural: float
    shear: float | None = None

    @property
    def length(self) -> float:
        """Length in m."""
        return self.end - self.start


@dataclass(frozen=True, slots=True)
class Stretch:
    """A force per length, linear from ``start`` to ``end`` on a bar (m): N/m across and along."""

    start: float
    end: float
    transverse: tuple[float, float]
    axial: tuple[float, float]


def bars_of(member: Member) -> list[Bar]:
    """Return the bars of a member from its start to its end."""
    bars: list[Bar] = []
    at = 0.0
    for piece in member.pieces:
        count = 1 if _constant(piece) else PIECES
        for k in range(count):
            flexural = _mean(piece, k / count, (k + 1) / count)
            shear = piece.shear[0] if piece.shear else None
            end = at + piece.length / count
            bars.append(Bar(member, len(bars), at, end, flexural, shear))
            at = end
    # The last bar ends where the member does, whatever the sums say.
    bars[-1] = replace(bars[-1], end=member.length)
    return bars


def varies(member: Member) -> bool:
    """Whether a member is only approximated by its bars."""
    return not all(_constant(piece) for piece in member.pieces)


def stretches(action: DistributedForce, bar: Bar) -> list[Stretch]:
    """Return what of a distributed force stands on a bar, in straight parts."""
    low, high = max(action.start, bar.start), min(action.end, bar.end)
    if high - low <= 1e-9 * bar.length:
        return []
    degree = max(len(action.transverse), len(action.axial)) - 1
    parts = 1 if degree <= 1 else _STRAIGHT_PARTS
    places = [low + (high - low) * i / parts for i in range(parts + 1)]
    result = []
    for a, b in pairwise(places):
        across, along = (
            (_value(c, a - action.start), _value(c, b - action.start))
            for c in (action.transverse, action.axial)
        )
        result.append(Stretch(a - bar.start, b - bar.start, across, along))
    return result


def straight(action: DistributedForce) -> bool:
    """Whether a distributed force is linear, so that its stretches are exact."""
    return max(len(action.transverse), len(action.axial)) <= 2


def bar_at(bars: list[Bar], action: PointForce | PointMoment) -> Bar:
    """Return the bar on which a point action stands."""
    return next((bar for bar in bars if action.position <= bar.end), bars[-1])


def actions_on(line: Line, member: Member) -> list[MemberAction]:
    """Return the actions on a member, in the order of the line."""
    return [
        action
        for action in line.actions
        if not isinstance(action, JointForce | JointMovement) and action.member == member.id
    ]


def _constant(piece: Piece) -> bool:
    return not any(piece.flexural[1:]) and not any((piece.shear or ())[1:])


def _mean(piece: Piece, low: float, high: float) -> float:
    """The rigidity of the same flexibility: harmonic mean."""
    if _constant(piece):
        return piece.flexural_at(0.0)
    places = low + (high - low) * (np.arange(_SAMPLES) + 0.5) / _SAMPLES
    return _SAMPLES / sum(1.0 / piece.flexural_at(float(u)) for u in places)


def _value(coefficients: tuple[float, ...], v: float) -> float:
    return float(sum(c * v**i for i, c in enumerate(coefficients)))
