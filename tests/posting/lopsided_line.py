"""A line on which nothing is symmetrical, with every kind of action, support and release."""

import math

from posting_makers import BEAM, COLUMN_A

from analysis_core.model import (
    Case,
    Combination,
    DistributedForce,
    Joint,
    JointForce,
    JointMovement,
    Line,
    LineModel,
    Material,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Section,
    Support,
)
from analysis_core.results import LineResult, Outcome

STEEL = Material("S355", 210e9, 81e9, 7850.0, 1.2e-5, "steel")
DEEP = Section("Deep", "", 8e-3, 2e-4, 2e-5)
PIN, WALL = Support(math.inf), Support(math.inf, math.inf, math.inf)
SPRING = Support(vertical=4e7, rotation=6e6)


def line_of(axis=(1.0, 0.0, 0.0)):
    """Three lopsided spans, the second in two steps of rigidity, with every kind of action."""
    xs = (0.0, 6.0, 10.5, 13.0)
    supports = (WALL, PIN, SPRING, None)
    origin = (3.0, -2.0, 4.0)

    def point(x):
        return tuple(o + x * a for o, a in zip(origin, axis, strict=True))

    joints = tuple(
        Joint(i, x, 0.0, point(x), support, COLUMN_A if i == 0 else None)
        for i, (x, support) in enumerate(zip(xs, supports, strict=True))
    )
    ei = STEEL.elastic_modulus * DEEP.inertia
    pieces = ((Piece(6.0, (ei,)),), (Piece(2.0, (ei,)), Piece(2.5, (1.75 * ei,))),
              (Piece(2.5, (0.8 * ei,)),))  # fmt: skip
    members = tuple(
        Member(i, i, i + 1, p, span=i + 1, element=BEAM, section=DEEP, material=STEEL,
               start_spring=3e7 if i == 1 else math.inf)
        for i, p in enumerate(pieces)
    )  # fmt: skip
    actions = (
        DistributedForce("G", 0, 0.0, 6.0, (9e3,)),
        DistributedForce("G", 1, 0.5, 4.0, (2e3, 1.5e3), (700.0,)),
        DistributedForce("G", 2, 0.0, 1.5, (5e3,)),
        PointForce("Q", 0, 2.25, 30e3, -4e3),
        PointForce("Q", 1, 3.0, -8e3),
        PointMoment("Q", 0, 4.5, 11e3),
        PointMoment("Q", 2, 1.0, -6e3),
        JointForce("Q", 3, vertical=7e3, moment=2e3),
        JointMovement("Settling", 1, vertical=0.004),
    )
    return Line("X-1", joints, members, actions, origin=origin, axis=axis, elements=(BEAM,))


def outcome_for(line):
    cases = (Case("G", "permanent"), Case("Q", "imposed"), Case("Settling", "settlement"))
    combinations = (
        Combination("U1", "strength", {"G": 1.35, "Q": 1.5}),
        Combination("S1", "serviceability", {"G": 1.0, "Q": 0.7, "Settling": 1.0}),
    )
    model = LineModel((line,), cases, combinations)
    return Outcome("m.ifc", "IFC4", "", model, (LineResult(line, "idealised"),))
