"""Moment, shear and deflection along a member from its end forces, by quadrature.

Written for the tests alone: from the definition of each quantity, with no regard for speed.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.optimize import brentq

from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    Member,
    MemberAction,
    Piece,
    PointForce,
    PointMoment,
)
from analysis_core.results import LineSolution

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(24)


@dataclass(frozen=True)
class MemberFields:
    """Fields of one member in one case; positions in m from the member's start."""

    member: Member
    actions: tuple[MemberAction, ...]
    start_moment: float
    start_shear: float
    start_deflection: float
    start_rotation: float

    @classmethod
    def of(cls, solution: LineSolution, case: int, member: int) -> MemberFields:
        """Take the end forces and movements of ``member`` from a solution."""
        line = solution.line
        part = line.members[member]
        cosine, sine = line.direction(part)
        right, down = solution.displacements[case, part.start]
        acting = tuple(
            action
            for action in line.actions
            if isinstance(action, MemberAction)
            and action.member == member
            and action.case == solution.cases[case]
        )
        return cls(
            part,
            acting,
            float(solution.end_moments[case, member, 0]),
            float(solution.end_shears[case, member, 0]),
            float(right * sine + down * cosine),
            float(solution.end_rotations[case, member, 0]),
        )

    def moment(self, x: float, side: int = -1) -> float:
        """Diagram moment; at a couple, before (-1) or after (1) it."""
        value = self.start_moment + self.start_shear * x
        for action in self.actions:
            if isinstance(action, PointForce) and action.position < x:
                value -= action.transverse * (x - action.position)
            elif isinstance(action, PointMoment):
                passed = action.position < x or (side > 0 and action.position == x)
                value += action.moment if passed else 0.0
            elif isinstance(action, DistributedForce):
                value -= _passed(action, x)[1]
        return value

    def shear(self, x: float, side: int = -1) -> float:
        """Shear; at a force, before (-1) or after (1) it."""
        value = self.start_shear
        for action in self.actions:
            if isinstance(action, PointForce):
                passed = action.position < x or (side > 0 and action.position == x)
                value -= action.transverse if passed else 0.0
            elif isinstance(action, DistributedForce):
                value -= _passed(action, x)[0]
        return value

    def deflection(self, x: float) -> float:
        """Deflection along the member's local down, m."""
        bent = self._integral(x, lambda s: (x - s) * self._curvature(s))
        slid = self._integral(x, self._slide)
        return self.start_deflection + self.start_rotation * x - bent + slid

    def slope(self, x: float, side: int = -1) -> float:
        """Slope of the deflection, with shear strain; positive where it grows."""
        turned = self._integral(x, self._curvature)
        return self.start_rotation - turned + self._slide(x, side)

    def extremes(self, what: str) -> list[tuple[float, float]]:
        """Return (x, value) where "moment" or "deflection" can be largest or least."""
        value, rate = {
            "moment": (self.moment, self.shear),
            "deflection": (self.deflection, self.slope),
        }[what]
        found = []
        for low, high in zip(self.breaks, self.breaks[1:], strict=False):
            for x in (low, high, *_roots(rate, low, high)):
                sides = (1,) if x == low else (-1,)
                found += [(x, value(x, s) if what == "moment" else value(x)) for s in sides]
        return found

    @cached_property
    def breaks(self) -> list[float]:
        """Positions where an action or a piece begins or ends."""
        places = {0.0, self.member.length}
        reached = 0.0
        for piece in self.member.pieces[:-1]:
            reached += piece.length
            places.add(reached)
        for action in self.actions:
            if isinstance(action, PointForce | PointMoment):
                places.add(action.position)
            else:
                places |= {action.start, action.end}
        return sorted(places)

    def _integral(self, x: float, function: Callable[[float], float]) -> float:
        total = 0.0
        edges = [b for b in self.breaks if b < x] + [x]
        # Eight panels of 24 points leave nothing of a depth that varies tenfold.
        panels = 8 if any(any(piece.flexural[1:]) for piece in self.member.pieces) else 1
        for low, high in itertools.pairwise(edges):
            for index in range(panels):
                a = low + (high - low) * index / panels
                half = (high - low) / panels / 2.0
                total += half * sum(
                    w * function(a + half * (1.0 + t))
                    for t, w in zip(_NODES, _WEIGHTS, strict=True)
                )
        return total

    def _curvature(self, x: float) -> float:
        piece, u = self._piece(x)
        value = self.moment(x) / piece.flexural_at(u)
        for action in self.actions:
            if isinstance(action, ImposedCurvature) and action.start <= x <= action.end:
                value += action.curvature
        return value

    def _slide(self, x: float, side: int = -1) -> float:
        piece, u = self._piece(x)
        if piece.shear is None:
            return 0.0
        return self.shear(x, side) / sum(c * u**i for i, c in enumerate(piece.shear))

    def _piece(self, x: float) -> tuple[Piece, float]:
        reached = 0.0
        for piece in self.member.pieces:
            if x <= reached + piece.length or piece is self.member.pieces[-1]:
                return piece, min(1.0, (x - reached) / piece.length)
            reached += piece.length
        raise AssertionError


def _passed(action: DistributedForce, x: float) -> tuple[float, float]:
    """Return the force of a distributed action before ``x`` and its moment about ``x``."""
    reach = min(max(x - action.start, 0.0), action.end - action.start)
    force = sum(c * reach ** (i + 1) / (i + 1) for i, c in enumerate(action.transverse))
    about_start = sum(c * reach ** (i + 2) / (i + 2) for i, c in enumerate(action.transverse))
    return force, force * (x - action.start) - about_start


def _roots(rate: Callable[[float, int], float], low: float, high: float) -> list[float]:
    """Return the positions strictly inside at which ``rate`` changes sign."""
    xs = np.linspace(low, high, 41)
    values = [rate(x, 1 if x == low else -1) for x in xs]
    found = [x for x, v in zip(xs[1:-1], values[1:-1], strict=True) if v == 0.0]
    for a, b, va, vb in zip(xs, xs[1:], values, values[1:], strict=False):
        if va * vb < 0.0:
            found.append(brentq(lambda x: rate(x, -1), a, b, xtol=1e-14, rtol=1e-14))
    return found
