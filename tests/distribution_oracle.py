"""An independent solution in extended precision, for comparison.

Direct stiffness with three movements per joint and one rotation more per sprung or released
member end, in mpmath with 90 digits.  Rigid supports and axially rigid members are springs so
stiff that some 18 digits of the result are right; supports are stiffer still, so that axial forces
that equilibrium does not settle follow equal axial rigidity.  Member stiffness comes from
flexibilities integrated by mpmath; fixed-end forces likewise.  Shares no code with the package.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import mpmath as mp
import numpy as np

from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    JointForce,
    JointMovement,
    Line,
    Member,
    PointForce,
    PointMoment,
)

DIGITS = 90
HUGE = mp.mpf(10) ** 42
AXIAL = mp.mpf(10) ** 24
TINY = mp.mpf(10) ** -25


@dataclass
class Exact:
    """Mirrors LineSolution for one case, as nested lists of mpf."""

    end_moments: list[list[Any]]
    end_shears: list[list[Any]]
    axial: list[list[Any]]
    rotations: list[Any]
    end_rotations: list[list[Any]]
    displacements: list[list[Any]]
    reactions: list[list[Any]]


def exact(
    line: Line,
    case: str,
    held: Sequence[int] = (),
    sliding: Mapping[int, int] | None = None,
) -> Exact:
    """Solve ``line`` for one case.

    ``held`` joints do not move horizontally (beam lines); ``sliding`` members (legs beside a
    support) carry no axial force at the end given, 0 or 1.
    """
    with mp.workdps(DIGITS):
        return _Solver(line, case, held, sliding or {}).run()


def stiff(value: float) -> Any:
    return HUGE if math.isinf(value) else mp.mpf(value)


class _Solver:
    def __init__(
        self, line: Line, case: str, held: Sequence[int], sliding: Mapping[int, int]
    ) -> None:
        self.line, self.held = line, set(held)
        self.actions = [a for a in line.actions if a.case == case]
        self.size = 3 * len(line.joints) + 2 * len(line.members)
        self.matrix = mp.zeros(self.size)
        self.right = mp.zeros(self.size, 1)
        self.members = [_Bent(line, m, self.actions, sliding.get(m.id)) for m in line.members]

    def end_dof(self, member: int, end: int) -> int:
        return 3 * len(self.line.joints) + 2 * member + end

    def run(self) -> Exact:
        for bent in self.members:
            self._add_member(bent)
        for j, joint in enumerate(self.line.joints):
            s = joint.support
            values = (s.horizontal, s.vertical, s.rotation) if s else (0.0, 0.0, 0.0)
            for d, value in enumerate(values):
                k = HUGE if d == 0 and j in self.held else stiff(value)
                self.matrix[3 * j + d, 3 * j + d] += k + TINY
                self.right[3 * j + d] += k * self._ground(j, d)
        for a in self.actions:
            if isinstance(a, JointForce):
                for d, value in enumerate((a.horizontal, a.vertical, a.moment)):
                    self.right[3 * a.joint + d] += mp.mpf(value)
        self.solution = mp.lu_solve(self.matrix, self.right)
        return self._results()

    def _ground(self, joint: int, d: int) -> Any:
        total = mp.mpf(0)
        for a in self.actions:
            if isinstance(a, JointMovement) and a.joint == joint:
                total += mp.mpf((a.horizontal, a.vertical, a.rotation)[d])
        return total

    def _add_member(self, bent: _Bent) -> None:
        dofs = self._dofs(bent)
        for r, i in enumerate(dofs):
            self.right[i] -= bent.fixed[r]
            for c, j in enumerate(dofs):
                self.matrix[i, j] += bent.matrix[r, c]
        m = bent.member
        for end, (joint, spring) in enumerate(((m.start, m.start_spring), (m.end, m.end_spring))):
            i, j, k = self.end_dof(m.id, end), 3 * joint + 2, stiff(spring)
            self.matrix[i, i] += k + TINY
            self.matrix[j, j] += k
            self.matrix[i, j] -= k
            self.matrix[j, i] -= k

    def _dofs(self, bent: _Bent) -> list[int]:
        m = bent.member
        a, b = 3 * m.start, 3 * m.end
        return [a, a + 1, self.end_dof(m.id, 0), b, b + 1, self.end_dof(m.id, 1)]

    def _results(self) -> Exact:
        x = self.solution
        moments, shears, axial, turns = [], [], [], []
        for bent in self.members:
            v = mp.matrix([x[i] for i in self._dofs(bent)])
            f = bent.matrix * v + bent.fixed  # forces on the member ends: right, down, clockwise
            c, s = bent.c, bent.s
            moments.append([f[2], f[5]])
            shears.append([-(f[0] * s + f[1] * c), f[3] * s + f[4] * c])
            axial.append([-(f[0] * c - f[1] * s), f[3] * c - f[4] * s])
            turns.append([v[2], v[5]])
        reactions = []
        for j, joint in enumerate(self.line.joints):
            s = joint.support
            values = (s.horizontal, s.vertical, s.rotation) if s else (0.0, 0.0, 0.0)
            row = []
            for d, value in enumerate(values):
                k = HUGE if d == 0 and j in self.held else stiff(value)
                row.append(-k * (x[3 * j + d] - self._ground(j, d)))
            reactions.append([row[0], -row[1], row[2]])
        count = len(self.line.joints)
        return Exact(
            moments,
            shears,
            axial,
            [x[3 * j + 2] for j in range(count)],
            turns,
            [[x[3 * j], x[3 * j + 1]] for j in range(count)],
            reactions,
        )


class _Bent:
    """Stiffness (6, 6) and fixed-end forces of a member over (right, down, clockwise) twice."""

    def __init__(self, line: Line, member: Member, actions: list[Any], slides: int | None) -> None:
        self.member, self.slides = member, slides
        one, two = line.joints[member.start], line.joints[member.end]
        dx, dz = mp.mpf(two.x) - mp.mpf(one.x), mp.mpf(two.z) - mp.mpf(one.z)
        span = mp.sqrt(dx * dx + dz * dz)
        self.c, self.s = dx / span, dz / span
        self.length = mp.fsum(mp.mpf(p.length) for p in member.pieces)
        self.actions = [a for a in actions if getattr(a, "member", None) == member.id]
        self._flexibility()
        self._loads()

    def _flexibility(self) -> None:
        length = self.length
        near, far, cross, slip = mp.mpf(0), mp.mpf(0), mp.mpf(0), mp.mpf(0)
        reached = mp.mpf(0)
        for piece in self.member.pieces:
            size = mp.mpf(piece.length)
            if len(piece.flexural) == 1 and not piece.shear:
                k = mp.mpf(piece.flexural[0]) ** mp.mpf(piece.power)
                a, b = reached / length, (reached + size) / length
                near += length * ((1 - a) ** 3 - (1 - b) ** 3) / 3 / k
                far += length * (b**3 - a**3) / 3 / k
                cross -= length * ((b**2 - a**2) / 2 - (b**3 - a**3) / 3) / k
            else:
                for weight, add in self._integrals(piece, reached):
                    values = mp.quad(lambda u, w=weight: w(u), [0, 0.25, 0.5, 0.75, 1])
                    if add == "near":
                        near += values
                    elif add == "far":
                        far += values
                    elif add == "cross":
                        cross += values
                    else:
                        slip += values
            reached += size
        near, far, cross = (v + slip / length**2 for v in (near, far, cross))
        self.flex = mp.matrix([[near, cross], [cross, far]])
        basic = self.flex**-1
        c, s = self.c, self.s
        across = [-s / length, -c / length, 0, s / length, c / length, 0]
        rows = mp.matrix(2, 6)
        for col in range(6):
            rows[0, col] = (1 if col == 2 else 0) - across[col]
            rows[1, col] = (1 if col == 5 else 0) - across[col]
        self.rows = rows
        along = mp.matrix([[-c, s, 0, c, -s, 0]])
        self.matrix = rows.T * basic * rows + along.T * along * (
            AXIAL / length if self.slides is None else 0
        )
        self.basic = basic

    def _integrals(self, piece: Any, reached: Any) -> list[Any]:
        length, size = self.length, mp.mpf(piece.length)

        def flexible(u: Any) -> Any:
            return 1 / mp.polyval([mp.mpf(q) for q in reversed(piece.flexural)], u) ** mp.mpf(
                piece.power
            )

        def xi(u: Any) -> Any:
            return (reached + u * size) / length

        found = [
            (lambda u: (1 - xi(u)) ** 2 * flexible(u) * size, "near"),
            (lambda u: xi(u) ** 2 * flexible(u) * size, "far"),
            (lambda u: -xi(u) * (1 - xi(u)) * flexible(u) * size, "cross"),
        ]
        if piece.shear:
            shear = [mp.mpf(q) for q in reversed(piece.shear)]
            found.append((lambda u: size / mp.polyval(shear, u), "slip"))
        return found

    def _loads(self) -> None:
        """Fixed-end forces on the member from its simple-beam slopes."""
        length = self.length
        slopes = mp.zeros(2, 1)
        start, end, pull, lever = mp.mpf(0), mp.mpf(0), mp.mpf(0), mp.mpf(0)
        for a in self.actions:
            left, right, moment, shear, cuts = _simple_beam(a, length)
            start, end = start + left, end + right
            p, q = _axial(a, length)
            pull, lever = pull + p, lever + q
            reached = mp.mpf(0)
            for piece in self.member.pieces:
                size = mp.mpf(piece.length)
                marks = sorted(
                    {reached, reached + size} | {x for x in cuts if reached < x < reached + size}
                )
                for low, high in pairwise(marks):
                    self._add_slopes(slopes, a, piece, reached, low, high, moment, shear)
                reached += size
        held = -self.basic * slopes
        c, s = self.c, self.s
        lean = (held[0] + held[1]) / length
        up_start, up_end = start - lean, end + lean
        n_start = lever / length  # axially held: no stretch
        if self.slides is not None:
            n_start = pull * self.slides
        n_end = n_start - pull
        self.fixed = mp.matrix(
            [
                -up_start * s - n_start * c,
                -up_start * c + n_start * s,
                held[0],
                -up_end * s + n_end * c,
                -up_end * c - n_end * s,
                held[1],
            ]
        )

    def _add_slopes(
        self,
        slopes: Any,
        a: Any,
        piece: Any,
        reached: Any,
        low: Any,
        high: Any,
        moment: Any,
        shear: Any,
    ) -> None:
        length, size = self.length, mp.mpf(piece.length)
        flexural = [mp.mpf(q) for q in reversed(piece.flexural)]
        slippery = [mp.mpf(q) for q in reversed(piece.shear)] if piece.shear else None
        inside = (low + high) / 2

        def bend(x: Any) -> Any:
            if isinstance(a, ImposedCurvature):
                return mp.mpf(a.curvature) if a.start < inside < a.end else mp.mpf(0)
            u = (x - reached) / size
            return moment(x, inside) / mp.polyval(flexural, u) ** mp.mpf(piece.power)

        def slide(x: Any) -> Any:
            if slippery is None or isinstance(a, ImposedCurvature):
                return mp.mpf(0)
            return shear(x, inside) / mp.polyval(slippery, (x - reached) / size)

        marks = mp.linspace(low, high, 3)
        if len(flexural) == 1 and slippery is None:
            # Polynomials: 12 Gauss points are exact.
            total = _gauss(lambda x: bend(x), low, high)
            first = _gauss(lambda x: bend(x) * x, low, high)
            slid = mp.mpf(0)
        else:
            total = mp.quad(bend, marks)
            first = mp.quad(lambda x: bend(x) * x, marks)
            slid = mp.quad(slide, marks) if slippery is not None else mp.mpf(0)
        slopes[0] += total - first / length - slid / length
        slopes[1] += -first / length - slid / length


def _gauss(function: Any, low: Any, high: Any) -> Any:
    half, middle = (high - low) / 2, (high + low) / 2
    return half * mp.fsum(w * function(middle + half * x) for x, w in _points())


_POINTS: list[Any] = []


def _points() -> list[Any]:
    """Gauss points for 8 nodes, refined by Newton from those in double precision."""
    if not _POINTS:
        for start in np.polynomial.legendre.leggauss(8)[0]:
            x = mp.mpf(float(start))
            for _ in range(4):
                slope = _legendre_slope(x)
                x -= mp.legendre(8, x) / slope
            _POINTS.append((x, 2 / ((1 - x * x) * _legendre_slope(x) ** 2)))
    return _POINTS


def _legendre_slope(x: Any) -> Any:
    return 8 * (mp.legendre(7, x) - x * mp.legendre(8, x)) / (1 - x * x)


def _simple_beam(a: Any, length: Any) -> Any:
    """Reactions, moment(x, inside) and shear(x, inside) of a simple beam, and breaks.

    ``inside`` is a point strictly inside the stretch that x belongs to: it tells the side at
    a break.
    """
    zero = mp.mpf(0)
    if isinstance(a, PointForce):
        x0, p = mp.mpf(a.position), mp.mpf(a.transverse)
        left, right = p * (length - x0) / length, p * x0 / length
        return (
            left,
            right,
            lambda x, i: left * x - (p * (x - x0) if i > x0 else 0),
            lambda x, i: left - (p if i > x0 else 0),
            [x0],
        )
    if isinstance(a, PointMoment):
        x0, m = mp.mpf(a.position), mp.mpf(a.moment)
        return (
            -m / length,
            m / length,
            lambda x, i: -m / length * x + (m if i > x0 else 0),
            lambda x, i: -m / length,
            [x0],
        )
    if isinstance(a, ImposedCurvature):
        return zero, zero, lambda x, i: zero, lambda x, i: zero, [mp.mpf(a.start), mp.mpf(a.end)]
    s, e = mp.mpf(a.start), mp.mpf(a.end)
    q = [mp.mpf(v) for v in a.transverse]
    span = e - s

    def force(v: Any) -> Any:
        return mp.fsum(c * v ** (k + 1) / (k + 1) for k, c in enumerate(q))

    def couple(v: Any) -> Any:
        return mp.fsum(c * v ** (k + 2) / ((k + 1) * (k + 2)) for k, c in enumerate(q))

    # Moment of the whole about its own end is couple(span), so about the member's end:
    left = (couple(span) + force(span) * (length - e)) / length
    right = force(span) - left

    def moment(x: Any, i: Any) -> Any:
        if i < s:
            return left * x
        if i > e:
            return left * x - couple(span) - force(span) * (x - e)
        return left * x - couple(x - s)

    def shear(x: Any, i: Any) -> Any:
        return left - (0 if i < s else force(span) if i > e else force(x - s))

    return left, right, moment, shear, [s, e]


def _axial(a: Any, length: Any) -> Any:
    """Resultant along the member and its lever about the member's end."""
    if isinstance(a, PointForce):
        return mp.mpf(a.axial), mp.mpf(a.axial) * (length - mp.mpf(a.position))
    if not isinstance(a, DistributedForce):
        return mp.mpf(0), mp.mpf(0)
    s, span = mp.mpf(a.start), mp.mpf(a.end) - mp.mpf(a.start)
    total = lever = mp.mpf(0)
    for k, c in enumerate(mp.mpf(v) for v in a.axial):
        part = c * span ** (k + 1) / (k + 1)
        total += part
        lever += part * (length - s) - c * span ** (k + 2) / (k + 2)
    return total, lever
