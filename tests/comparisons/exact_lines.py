"""Exact solutions of lines and plane frames in rational numbers.

Every member is integrated from its start (shear, moment, rotation, deflection: Euler and
Timoshenko beams of piecewise constant rigidity), which leaves four starting values and an axial
force unknown; joints give the equations.  SymPy solves them over the rationals.  Nothing here is
rounded, so the only difference from a floating-point result is that result's own error.

All numbers of a line are taken as the rationals that its floats are; directions of members must
be rational (coordinates on Pythagorean triples).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise

import numpy as np
from sympy import QQ
from sympy.polys.matrices import DomainMatrix

from analysis_core.model import (
    FREE,
    RIGID,
    DistributedForce,
    ImposedCurvature,
    JointForce,
    JointMovement,
    Line,
    Member,
    PointForce,
    PointMoment,
)

Poly = list[Fraction]
Row = dict[object, Fraction]
KNOWN = "known"
"""Key of the constant part of a linear expression."""


@dataclass(frozen=True)
class Exact:
    """Values of one case as floats, arrays as in LineSolution without the case."""

    end_moments: np.ndarray
    end_shears: np.ndarray
    rotations: np.ndarray
    displacements: np.ndarray
    reactions: np.ndarray


def solve_exactly(line: Line, case: str) -> Exact:
    """Return the exact solution of a stable line whose axial forces are determinate."""
    return _Exactly(line, case).solve()


class _Exactly:
    """Unknowns: ("w"|"turn"|"M"|"V"|"N", member) at its start; ("u"|"v"|"t", joint)."""

    def __init__(self, line: Line, case: str) -> None:
        self.line, self.case = line, case
        self.acting = [action for action in line.actions if action.case == case]
        self.starts = [self._state(member, end=False) for member in line.members]
        self.ends = [self._state(member, end=True) for member in line.members]

    def solve(self) -> Exact:
        rows = [row for member in self.line.members for row in self._member_rows(member)]
        self.forces = [self._joint_forces(joint) for joint in range(len(self.line.joints))]
        for joint in range(len(self.line.joints)):
            rows += self._joint_rows(joint)
        self.values = _solve(rows)
        return self._results()

    def _state(self, member: Member, *, end: bool) -> dict[str, Row]:
        """Deflection, rotation, moment and shear at a member's end, in terms of its start."""
        state: dict[str, Row] = {
            name: {(name, member.id): Fraction(1)} for name in ("w", "turn", "M", "V")
        }
        if not end:
            return state
        mine = [a for a in self.acting if getattr(a, "member", None) == member.id]
        length = sum(Fraction(piece.length) for piece in member.pieces)
        for low, high, bending, shear in _stretches(member, mine):
            state = _jumped(state, mine, low)
            load, curvature = _loads(mine, low, high)
            state = _advanced(state, high - low, bending, shear, load, curvature)
        return _jumped(state, mine, length)

    def _member_rows(self, member: Member) -> list[Row]:
        cosine, sine = _direction(self.line, member)
        start, end = self.starts[member.id], self.ends[member.id]
        along: Row = {}
        rows = []
        for joint, state, sign in ((member.start, start, -1), (member.end, end, 1)):
            place = {("u", joint): sine, ("v", joint): cosine}
            rows.append(_sum(state["w"], _times(place, -1)))
            along = _sum(along, {("u", joint): sign * cosine, ("v", joint): -sign * sine})
        springs = (member.start_spring, member.end_spring)
        moments = (start["M"], _times(end["M"], -1))
        for joint, state, moment, spring in zip(
            (member.start, member.end), (start, end), moments, springs, strict=True
        ):
            if spring == FREE:
                rows.append(moment)
                continue
            give = Fraction(0) if spring == RIGID else 1 / Fraction(spring)
            turned = _sum({("t", joint): Fraction(1)}, _times(state["turn"], -1))
            rows.append(_sum(turned, _times(moment, -give)))
        return [*rows, along]

    def _joint_forces(self, joint: int) -> list[Row]:
        """Forces right and down and couple on a joint from members and actions."""
        right: Row = {}
        down: Row = {}
        couple: Row = {}
        for member in self.line.members:
            cosine, sine = _direction(self.line, member)
            pull = {("N", member.id): Fraction(1)}
            for at, state, sign in (
                (member.start, self.starts[member.id], 1),
                (member.end, self.ends[member.id], -1),
            ):
                if at != joint:
                    continue
                right = _sum(right, _times(state["V"], sign * sine), _times(pull, sign * cosine))
                down = _sum(down, _times(state["V"], sign * cosine), _times(pull, -sign * sine))
                couple = _sum(couple, _times(state["M"], -sign))
        for action in self.acting:
            if isinstance(action, JointForce) and action.joint == joint:
                right = _sum(right, {KNOWN: Fraction(action.horizontal)})
                down = _sum(down, {KNOWN: Fraction(action.vertical)})
                couple = _sum(couple, {KNOWN: Fraction(action.moment)})
        return [right, down, couple]

    def _joint_rows(self, joint: int) -> list[Row]:
        rows = []
        for key, stiffness, ground, force in self._holds(joint):
            moved = {(key, joint): Fraction(1), KNOWN: -ground}
            if stiffness == RIGID:
                rows.append(moved)
            else:
                rows.append(_sum(force, _times(moved, -Fraction(stiffness))))
        return rows

    def _holds(self, joint: int) -> list[tuple[str, float, Fraction, Row]]:
        support = self.line.joints[joint].support
        stiffness = (0.0, 0.0, 0.0)
        if support is not None:
            stiffness = (support.horizontal, support.vertical, support.rotation)
        ground = [Fraction(0)] * 3
        for action in self.acting:
            if isinstance(action, JointMovement) and action.joint == joint:
                for i, name in enumerate(("horizontal", "vertical", "rotation")):
                    ground[i] += Fraction(getattr(action, name))
        return list(zip(("u", "v", "t"), stiffness, ground, self.forces[joint], strict=True))

    def _results(self) -> Exact:
        members, joints = range(len(self.line.members)), range(len(self.line.joints))

        def value(row: Row) -> float:
            total = sum(
                (c * (1 if key == KNOWN else self.values[key]) for key, c in row.items()),
                Fraction(0),
            )
            return float(total)

        reactions = [
            [
                value(_times(force, -1))
                if stiffness == RIGID
                else value({(key, j): -Fraction(stiffness), KNOWN: Fraction(stiffness) * ground})
                for key, stiffness, ground, force in self._holds(j)
            ]
            for j in joints
        ]
        return Exact(
            np.array(
                [
                    [value(self.starts[m]["M"]), value(_times(self.ends[m]["M"], -1))]
                    for m in members
                ]
            ),
            np.array([[value(self.starts[m]["V"]), value(self.ends[m]["V"])] for m in members]),
            np.array([value({("t", j): Fraction(1)}) for j in joints]),
            np.array(
                [[value({("u", j): Fraction(1)}), value({("v", j): Fraction(1)})] for j in joints]
            ),
            np.array(reactions) * np.array([1.0, -1.0, 1.0]),
        )


def _direction(line: Line, member: Member) -> tuple[Fraction, Fraction]:
    a, b = line.joints[member.start], line.joints[member.end]
    right, up = Fraction(b.x) - Fraction(a.x), Fraction(b.z) - Fraction(a.z)
    square = right**2 + up**2
    length = Fraction(math.isqrt(square.numerator), math.isqrt(square.denominator))
    if length**2 != square:
        raise ValueError(f"member {member.id} has no rational direction")
    return right / length, up / length


def _stretches(
    member: Member, actions: list[object]
) -> list[tuple[Fraction, Fraction, Fraction, Fraction]]:
    """Return (low, high, 1/EI, 1/GA) of stretches on which nothing begins or ends."""
    found, reached = [], Fraction(0)
    marks = set()
    for action in actions:
        if isinstance(action, PointForce | PointMoment):
            marks.add(Fraction(action.position))
        else:
            marks |= {Fraction(action.start), Fraction(action.end)}
    for piece in member.pieces:
        if len(piece.flexural) != 1 or piece.power != 1.0:
            raise ValueError("only constant rigidities are exact here")
        upper = reached + Fraction(piece.length)
        edges = sorted({reached, upper, *(m for m in marks if reached < m < upper)})
        shear = 1 / Fraction(piece.shear[0]) if piece.shear else Fraction(0)
        found += [(a, b, 1 / Fraction(piece.flexural[0]), shear) for a, b in pairwise(edges)]
        reached = upper
    return found


def _loads(actions: list[object], low: Fraction, high: Fraction) -> tuple[Poly, Fraction]:
    """Return the intensity in the distance from ``low``, and the imposed curvature."""
    load: Poly = [Fraction(0)]
    curvature = Fraction(0)
    for action in actions:
        if isinstance(action, PointForce | PointMoment):
            continue
        if not Fraction(action.start) <= low < high <= Fraction(action.end):
            continue
        if isinstance(action, ImposedCurvature):
            curvature += Fraction(action.curvature)
        elif isinstance(action, DistributedForce):
            shape = [Fraction(c) for c in action.transverse]
            load = _added(load, _shifted(shape, low - Fraction(action.start)))
            if any(action.axial):
                raise ValueError("axial actions are left to other tests")
    return load, curvature


def _jumped(state: dict[str, Row], actions: list[object], x: Fraction) -> dict[str, Row]:
    """Return the state behind the forces and couples at ``x``."""
    shear, moment = state["V"], state["M"]
    for action in actions:
        if isinstance(action, PointForce) and Fraction(action.position) == x:
            shear = _sum(shear, {KNOWN: -Fraction(action.transverse)})
        elif isinstance(action, PointMoment) and Fraction(action.position) == x:
            moment = _sum(moment, {KNOWN: Fraction(action.moment)})
    return {**state, "V": shear, "M": moment}


def _advanced(
    state: dict[str, Row],
    step: Fraction,
    bending: Fraction,
    shear: Fraction,
    load: Poly,
    curvature: Fraction,
) -> dict[str, Row]:
    """Integrate V' = -q, M' = V, turn' = -(M/EI + curvature), w' = turn + V/GA over ``step``."""
    carried = _integral(load)
    moved = _integral(carried)
    bent = _integral(moved)
    sunk = _integral(bent)
    h, h2, h3 = step, step**2 / 2, step**3 / 6

    def at(poly: Poly) -> Row:
        return {KNOWN: sum((c * step**i for i, c in enumerate(poly)), Fraction(0))}

    force, moment, turn, deflection = (state[key] for key in ("V", "M", "turn", "w"))
    return {
        "V": _sum(force, _times(at(carried), -1)),
        "M": _sum(moment, _times(force, h), _times(at(moved), -1)),
        "turn": _sum(
            turn,
            _times(moment, -bending * h),
            _times(force, -bending * h2),
            _times(at(bent), bending),
            {KNOWN: -curvature * h},
        ),
        "w": _sum(
            deflection,
            _times(turn, h),
            _times(moment, -bending * h2),
            _times(force, -bending * h3 + shear * h),
            _times(at(sunk), bending),
            _times(at(moved), -shear),
            {KNOWN: -curvature * h2},
        ),
    }


def _integral(poly: Poly) -> Poly:
    return [Fraction(0), *(c / (i + 1) for i, c in enumerate(poly))]


def _shifted(poly: Poly, by: Fraction) -> Poly:
    """Return the coefficients of p(x + by)."""
    found = [Fraction(0)] * len(poly)
    for i, c in enumerate(poly):
        for k in range(i + 1):
            found[k] += c * math.comb(i, k) * by ** (i - k)
    return found


def _added(one: Poly, other: Poly) -> Poly:
    size = max(len(one), len(other))
    padded = [p + [Fraction(0)] * (size - len(p)) for p in (one, other)]
    return [a + b for a, b in zip(*padded, strict=True)]


def _sum(*rows: Row) -> Row:
    total: Row = {}
    for row in rows:
        for key, value in row.items():
            total[key] = total.get(key, Fraction(0)) + value
    return total


def _times(row: Row, factor: Fraction | int) -> Row:
    return {key: value * factor for key, value in row.items()}


def _solve(rows: list[Row]) -> dict[object, Fraction]:
    keys = sorted({key for row in rows for key in row if key != KNOWN}, key=str)
    place = {key: index for index, key in enumerate(keys)}
    if len(rows) != len(keys):
        raise ValueError(f"{len(rows)} equations for {len(keys)} unknowns")
    matrix = {
        i: {place[k]: _rational(c) for k, c in row.items() if k != KNOWN and c}
        for i, row in enumerate(rows)
    }
    right = {i: {0: _rational(-row[KNOWN])} for i, row in enumerate(rows) if row.get(KNOWN)}
    size = len(keys)
    full = DomainMatrix(matrix, (size, size), QQ).hstack(DomainMatrix(right, (size, 1), QQ))
    reduced, pivots = full.rref()
    if pivots != tuple(range(size)):
        raise ValueError("the structure moves freely or is redundant axially")
    last = reduced.to_list()
    return {key: _fraction(last[i][size]) for key, i in place.items()}


def _rational(value: Fraction) -> object:
    return QQ(value.numerator, value.denominator)


def _fraction(value: object) -> Fraction:
    return Fraction(int(QQ.numer(value)), int(QQ.denom(value)))
