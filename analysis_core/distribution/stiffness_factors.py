"""Stiffness and carry-over of members of any shape, from their elastic weights.

Everything a straight member does at its ends follows from the distribution of its flexibility
``dx/EI`` along it: the total, its centre, and its spread about that centre (Hardy Cross, The
Column Analogy, University of Illinois Bulletin 215, 1930).  With ``turn`` = 1/total, ``sway`` =
1/(spread + shear flexibility), centre ``x`` from the start and length ``L``::

    near stiffness     s_AB = turn + x² sway
    far stiffness      s_BA = turn + (L - x)² sway
    carried moment     s_AB c_AB = s_BA c_BA = x (L - x) sway - turn

Stiffnesses are sums of positive terms, so no digit is lost whatever the shape.  A rotational
spring at a member's end is a point weight 1/k there; a release is an infinite one.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from functools import lru_cache
from typing import NamedTuple, TypeVar

import numpy as np
from numpy.typing import NDArray

from analysis_core.distribution.quadrature import nodes_of_member
from analysis_core.model import Member, Piece

Value = TypeVar("Value", float, NDArray[np.float64])
"""One number, or one per case."""


# Named tuples, not dataclasses: one of each is built per member of every line.
class ElasticWeights(NamedTuple):
    """Flexibility of a stretch of length ``length`` m, positions from its start.

    total: integral of dx/EI, 1/(N·m); centre: m; spread: integral of (x - centre)² dx/EI,
    m/N; slip: integral of dx/GA, m/N (0: rigid in shear).
    """

    length: float
    total: float
    centre: float
    spread: float
    slip: float


class EndStiffness(NamedTuple):
    """What a member's ends feel: N·m/rad for unit rotations, springs and releases included.

    near, far: moment at the start (end) for its unit rotation, the other end fixed; carried: the
    moment at the other end; both: near·far - carried².  turn, centre, sway as in the module's
    docstring.
    """

    length: float
    near: float
    far: float
    carried: float
    both: float
    turn: float
    centre: float
    sway: float


class StiffnessFactors(NamedTuple):
    """Stiffness in N·m/rad and carry-over factor from each end, the far end fixed."""

    start_stiffness: float
    end_stiffness: float
    start_carry_over: float
    end_carry_over: float


def stiffness_and_carry_over(member: Member) -> StiffnessFactors:
    """Return stiffness and carry-over of a member, its end springs and releases included.

    A released end has stiffness 0 and carry-over 0.
    """
    ends = end_stiffness(
        elastic_weights(member.pieces), inverse(member.start_spring), inverse(member.end_spring)
    )
    return StiffnessFactors(
        ends.near,
        ends.far,
        ends.carried / ends.near if ends.near else 0.0,
        ends.carried / ends.far if ends.far else 0.0,
    )


def inverse(stiffness: float) -> float:
    """Return the flexibility of a spring: 0 where rigid, infinite where released."""
    return 1.0 / stiffness if stiffness else math.inf


def elastic_weights(pieces: tuple[Piece, ...]) -> ElasticWeights:
    """Return the elastic weights of a member, end springs left out.

    A constant piece in closed form, a varying one by adaptive Gauss-Legendre quadrature.
    """
    if len(pieces) == 1 and is_constant(pieces[0]):
        return _constant_piece(pieces[0])
    return _many_pieces(pieces)


def is_constant(piece: Piece) -> bool:
    """Whether the rigidities do not vary along the piece."""
    return not any(piece.flexural[1:]) and not any((piece.shear or ())[1:])


def is_uniform(pieces: tuple[Piece, ...]) -> bool:
    """Whether a member has one constant rigidity (in bending and in shear) from end to end."""
    return len(pieces) == 1 and is_constant(pieces[0])


def end_stiffness(
    weights: ElasticWeights, start_flexibility: float = 0.0, end_flexibility: float = 0.0
) -> EndStiffness:
    """Return the end stiffness of a stretch with rotational flexibilities (rad/(N·m)) at its ends.

    Infinite flexibility is a release.
    """
    if start_flexibility == 0.0 and end_flexibility == 0.0:
        return _from_analogy(
            weights.length,
            1.0 / weights.total,
            weights.centre,
            1.0 / (weights.spread + weights.slip),
        )
    return with_point_weights(
        weights, ((0.0, start_flexibility), (weights.length, end_flexibility))
    )


def with_point_weights(
    weights: ElasticWeights, points: Iterable[tuple[float, float]]
) -> EndStiffness:
    """Return the end stiffness with (position, rotational flexibility) points anywhere along.

    With one hinge the bending must vanish there: the centre moves onto it and nothing resists a
    uniform moment.  With two the bending is settled by statics and the ends resist nothing.
    """
    hinges = sorted({x for x, flexibility in points if math.isinf(flexibility)})
    total, centre, spread = weights.total, weights.centre, weights.spread
    for x, flexibility in points:
        if flexibility and not math.isinf(flexibility):
            spread += total * flexibility / (total + flexibility) * (x - centre) ** 2
            centre += flexibility / (total + flexibility) * (x - centre)
            total += flexibility
    if not hinges:
        return _from_analogy(weights.length, 1.0 / total, centre, 1.0 / (spread + weights.slip))
    if len(hinges) > 1:
        return _from_analogy(weights.length, 0.0, hinges[0], 0.0)
    about_hinge = spread + total * (centre - hinges[0]) ** 2 + weights.slip
    return _from_analogy(weights.length, 0.0, hinges[0], 1.0 / about_hinge)


def in_a_row(parts: Iterable[ElasticWeights]) -> ElasticWeights:
    """Return the elastic weights of stretches laid one after the other."""
    length = total = centre = spread = slip = 0.0
    for part in parts:
        both = total + part.total
        apart = length + part.centre - centre
        spread += part.spread + total * part.total / both * apart**2
        centre += part.total / both * apart
        total = both
        length += part.length
        slip += part.slip
    return ElasticWeights(length, total, centre, spread, slip)


def end_rotations(
    weights: ElasticWeights, start_moment: Value, end_moment: Value
) -> tuple[Value, Value]:
    """Return the rotations of both ends from the chord for couples acting on the ends.

    Clockwise positive; N·m in, rad out; the flexibility side of the same member.
    """
    length = weights.length
    left, right = weights.centre, length - weights.centre
    own = weights.spread + weights.slip
    start = weights.total * right**2 + own
    end = weights.total * left**2 + own
    cross = own - weights.total * left * right
    return (
        (start * start_moment + cross * end_moment) / length**2,
        (cross * start_moment + end * end_moment) / length**2,
    )


def _from_analogy(length: float, turn: float, centre: float, sway: float) -> EndStiffness:
    other = length - centre
    return EndStiffness(
        length,
        turn + centre * centre * sway,
        turn + other * other * sway,
        centre * other * sway - turn,
        length * length * turn * sway,
        turn,
        centre,
        sway,
    )


def _constant_piece(piece: Piece) -> ElasticWeights:
    length = piece.length
    rigidity = piece.flexural_at(0.0) if piece.power != 1.0 else piece.flexural[0]
    total = length / rigidity
    slip = 0.0 if piece.shear is None else length / piece.shear[0]
    return ElasticWeights(length, total, length / 2.0, total * length * length / 12.0, slip)


@lru_cache(maxsize=4096)
def _many_pieces(pieces: tuple[Piece, ...]) -> ElasticWeights:
    return in_a_row(
        _constant_piece(piece) if is_constant(piece) else _varying_piece(piece)
        for piece in pieces
        if piece.length
    )


def _varying_piece(piece: Piece) -> ElasticWeights:
    x, bending, shearing = nodes_of_member((piece,))
    total = math.fsum(bending)
    centre = math.fsum(x * bending) / total
    spread = math.fsum((x - centre) ** 2 * bending)
    return ElasticWeights(piece.length, total, centre, spread, math.fsum(shearing))
