"""What every action does to a member by itself: end forces, end rotations, fixed-end moments.

For each action three things are found separately: the forces on the ends of the member taken as
a simple beam, the rotations of those ends from the chord (the flexibility side, which the
continuity check uses), and the moments at rigidly held ends.  A member of one constant EI has
closed forms; any other is integrated.

Closed forms follow from those of a point force P at a from the start, b from the end, for
example AISC Steel Construction Manual table 3-23 or Roark's Formulas for Stress and Strain
table 8.1 (from memory; SymPy derives them again in the tests)::

    fixed-end moments   -P a b²/L²,  +P a² b/L²
    simple-beam slopes  P a b (L + b)/(6 L EI),  -P a b (L + a)/(6 L EI)

integrated over distributed forces by Gauss points that are exact for them.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.quadrature import gauss_points, nodes_of_member
from analysis_core.distribution.stiffness_factors import (
    EndStiffness,
    Value,
    elastic_weights,
    end_stiffness,
    inverse,
    is_uniform,
)
from analysis_core.model import (
    DistributedForce,
    ImposedCurvature,
    Member,
    MemberAction,
    PointForce,
    PointMoment,
)

Floats = NDArray[np.float64]


class EndActions(NamedTuple):
    """What actions do to a member.

    start_moment, end_moment: N·m on the member at rigidly held ends, clockwise positive.
    start_rotation, end_rotation: rad from the chord as a simple beam, clockwise positive.
    start_force, end_force: N, what the member as a simple beam presses on its joints, along its
    local down direction.
    axial: N, resultant along the member (start to end); axial_lever: N·m, integral of the axial
    force per length times the distance to the member's end.
    """

    start_moment: float
    end_moment: float
    start_rotation: float
    end_rotation: float
    start_force: float
    end_force: float
    axial: float
    axial_lever: float


NOTHING = EndActions(0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0)


def fixed_end_moments(member: Member, actions: Iterable[MemberAction]) -> tuple[float, float]:
    """Return the moments in N·m at the ends of a member, its joints held.

    End springs and releases of the member count: with a released end this is the fixed-end
    moment for a pinned far end.
    """
    ends = end_stiffness(
        elastic_weights(member.pieces), inverse(member.start_spring), inverse(member.end_spring)
    )
    start = end = 0.0
    for action in actions:
        found = end_actions(member, action)
        if member.start_spring == member.end_spring == float("inf"):
            start, end = start + found.start_moment, end + found.end_moment
        else:
            moments = held_moments(ends, found.start_rotation, found.end_rotation)
            start, end = start + moments[0], end + moments[1]
    return start, end


def held_moments(
    ends: EndStiffness, start_rotation: Value, end_rotation: Value
) -> tuple[Value, Value]:
    """Return the moments that turn the ends back from given rotations off the chord.

    By the column analogy: the rotations are a load on the column, its resultant ``start - end``
    and its moment about the centre.
    """
    left, right = ends.centre, ends.length - ends.centre
    uniform = ends.turn * (end_rotation - start_rotation)
    slope = ends.sway * (left * start_rotation + right * end_rotation)
    return uniform - left * slope, -uniform - right * slope


def end_actions(member: Member, action: MemberAction) -> EndActions:
    """Return what one action does to a member, its end springs left out."""
    pieces = member.pieces
    length = pieces[0].length if len(pieces) == 1 else member.length
    if isinstance(action, DistributedForce) and action.axial:
        return _with_axial(_across(member, action, length), *_axial_resultant(action, length))
    if isinstance(action, PointForce) and action.axial:
        lever = action.axial * (length - action.position)
        return _with_axial(_across(member, action, length), action.axial, lever)
    return _across(member, action, length)


def _across(member: Member, action: MemberAction, length: float) -> EndActions:
    pieces = member.pieces
    if is_uniform(pieces):
        piece = pieces[0]
        rigidity = piece.flexural_at(0.0) if piece.power != 1.0 else piece.flexural[0]
        shear = piece.shear[0] if piece.shear else None
        return _uniform_member(action, length, rigidity, shear)
    return _varying_member(member, action, length)


def _with_axial(found: EndActions, axial: float, lever: float) -> EndActions:
    return found._replace(axial=found.axial + axial, axial_lever=found.axial_lever + lever)


def _axial_resultant(action: DistributedForce, length: float) -> tuple[float, float]:
    total = lever = 0.0
    for x, force in _lumps(action.axial, action.start, action.end):
        total += force
        lever += force * (length - x)
    return total, lever


def _lumps(
    coefficients: tuple[float, ...], start: float, end: float, degree: int = 3
) -> list[tuple[float, float]]:
    """Return (position, force) at Gauss points: exact against polynomials of ``degree``."""
    nodes, weights = _gauss_lists((len(coefficients) + degree + 1) // 2)
    extent = end - start
    lumps = []
    for node, weight in zip(nodes, weights, strict=True):
        v = extent * node
        intensity = 0.0
        for coefficient in reversed(coefficients):
            intensity = intensity * v + coefficient
        lumps.append((start + v, intensity * weight * extent))
    return lumps


def _gauss_lists(count: int) -> tuple[list[float], list[float]]:
    if count not in _GAUSS:
        nodes, weights = gauss_points(count)
        _GAUSS[count] = (nodes.tolist(), weights.tolist())
    return _GAUSS[count]


_GAUSS: dict[int, tuple[list[float], list[float]]] = {}


def _uniform_member(
    action: MemberAction, length: float, rigidity: float, shear: float | None
) -> EndActions:
    """Closed forms for one constant EI; with shear strain the held moments follow from slopes."""
    slip = 0.0  # couple times shear flexibility: forces alone leave no mean shear
    if isinstance(action, DistributedForce):
        values = _distributed(action, length)
    elif isinstance(action, PointForce):
        values = _point_force(action.transverse, action.position, length)
    elif isinstance(action, PointMoment):
        values = _point_moment(action.moment, action.position, length)
        slip = action.moment
    else:
        values = _curvature(action, length, rigidity)
    start_moment, end_moment, start_slope, end_slope, start_force, end_force = values
    start_rotation, end_rotation = start_slope / rigidity, end_slope / rigidity
    if shear is not None:
        start_rotation += slip / (length * shear)
        end_rotation += slip / (length * shear)
        total = length / rigidity
        spread = total * length * length / 12.0 + length / shear
        ends = EndStiffness(length, 0, 0, 0, 0, 1.0 / total, length / 2.0, 1.0 / spread)
        start_moment, end_moment = held_moments(ends, start_rotation, end_rotation)
    return EndActions(
        start_moment, end_moment, start_rotation, end_rotation, start_force, end_force, 0.0, 0.0
    )


Six = tuple[float, float, float, float, float, float]


def _distributed(action: DistributedForce, length: float) -> Six:
    coefficients = action.transverse
    if not coefficients:
        return 0.0, 0.0, 0.0, 0.0, 0.0, 0.0
    start, end = action.start, action.end
    if len(coefficients) == 1 and start == 0.0 and end == length:
        total = coefficients[0] * length
        moment = total * length / 12.0
        slope = moment * length / 2.0
        return -moment, moment, slope, -slope, total / 2.0, total / 2.0
    moment_a = moment_b = slope_a = slope_b = force_a = force_b = 0.0
    for x, force in _lumps(coefficients, start, end):
        y = length - x
        right, left = force * y / length, force * x / length
        force_a += right
        force_b += left
        moment_a -= left * y * y
        moment_b += right * x * x
        slope_a += right * x * (length + y)
        slope_b -= left * y * (length + x)
    return moment_a / length, moment_b / length, slope_a / 6.0, slope_b / 6.0, force_a, force_b


def _point_force(force: float, x: float, length: float) -> Six:
    y = length - x
    right, left = force * y / length, force * x / length
    return (
        -left * y * y / length,
        right * x * x / length,
        right * x * (length + y) / 6.0,
        -left * y * (length + x) / 6.0,
        right,
        left,
    )


def _point_moment(moment: float, x: float, length: float) -> Six:
    y = length - x
    square, slope = length * length, moment / (6.0 * length)
    return (
        moment * y * (2.0 * x - y) / square,
        moment * x * (2.0 * y - x) / square,
        slope * (2.0 * y * y - x * x - 2.0 * x * y),
        slope * (2.0 * x * x - y * y - 2.0 * x * y),
        -moment / length,
        moment / length,
    )


def _curvature(action: ImposedCurvature, length: float, rigidity: float) -> Six:
    angle = action.curvature * (action.end - action.start) * rigidity
    middle = (action.start + action.end) / 2.0
    start, end = angle * (length - middle) / length, -angle * middle / length
    factor = -2.0 / length
    return factor * (2.0 * start + end), factor * (start + 2.0 * end), start, end, 0.0, 0.0


def _varying_member(member: Member, action: MemberAction, length: float) -> EndActions:
    """Slopes by integration of M0 m/EI + V0 v/GA, held moments by the column analogy."""
    if isinstance(action, ImposedCurvature):
        _, _, start, end, start_force, end_force = _curvature(action, length, 1.0)
    else:
        start_force, end_force = _simple_reactions(action, length)
        x, bending, shearing = nodes_of_member(member.pieces, _cuts(action))
        moments, shears = _simple_beam(action, length, x, start_force, end_force)
        slip = float((shearing * shears).sum()) / length
        start = float((bending * moments * (length - x)).sum()) / length - slip
        end = -float((bending * moments * x).sum()) / length - slip
    held = held_moments(end_stiffness(elastic_weights(member.pieces)), start, end)
    return EndActions(held[0], held[1], start, end, start_force, end_force, 0.0, 0.0)


def _cuts(action: DistributedForce | PointForce | PointMoment) -> tuple[float, ...]:
    if isinstance(action, DistributedForce):
        return action.start, action.end
    return (action.position,)


def _simple_reactions(
    action: DistributedForce | PointForce | PointMoment, length: float
) -> tuple[float, float]:
    if isinstance(action, DistributedForce):
        return _distributed(action, length)[4:]
    if isinstance(action, PointForce):
        return _point_force(action.transverse, action.position, length)[4:]
    return _point_moment(action.moment, action.position, length)[4:]


def _simple_beam(
    action: DistributedForce | PointForce | PointMoment,
    length: float,
    x: Floats,
    start_force: float,
    end_force: float,
) -> tuple[Floats, Floats]:
    """Return moment and shear of the simple beam at ``x``, from the nearer side of the action."""
    left, right = start_force * x, end_force * (length - x)
    if isinstance(action, PointForce):
        before = x <= action.position
        return np.where(before, left, right), np.where(before, start_force, -end_force)
    if isinstance(action, PointMoment):
        before = x <= action.position
        return np.where(before, left, right), np.full_like(x, start_force)
    v = np.clip(x - action.start, 0.0, action.end - action.start)
    carried, lever = np.zeros_like(v), np.zeros_like(v)
    for power, coefficient in enumerate(action.transverse):
        carried += coefficient * v ** (power + 1) / (power + 1)
        lever += coefficient * v ** (power + 2) / ((power + 1) * (power + 2))
    moment = np.where(x >= action.end, right, left - lever)
    return moment, start_force - carried
