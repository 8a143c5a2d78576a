"""Beam lines against SymPy's own beam (sympy.physics.continuum_mechanics).

SymPy integrates the load as singularity functions and solves the boundary conditions exactly.
It counts forces and deflections upward, couples clockwise and hogging moments positive, which is
turned here.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import pytest
from sympy import Rational, Symbol, symbols
from sympy.physics.continuum_mechanics.beam import Beam

from analysis_core import distribution
from analysis_core.model import (
    RIGID,
    DistributedForce,
    Joint,
    Line,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Support,
)
from analysis_core.results import LineSolution
from analysis_core.stiffness_check import solve_stiffness

METHODS: dict[str, Callable[[Line, Sequence[str]], LineSolution]] = {
    "distribution": distribution.solve,
    "stiffness": solve_stiffness,
}
both_methods = pytest.mark.parametrize("method", METHODS)
X = Symbol("x")
RIGIDITY = 24_000


@both_methods
def test_three_spans_with_partial_and_growing_loads(method: str):
    # Spans of 4, 6 and 5 m; kN, m.
    beam = Beam(15, RIGIDITY, 1)
    reactions = symbols("a b c d")
    for place, reaction in zip((0, 4, 10, 15), reactions, strict=True):
        beam.apply_load(reaction, place, -1)
        beam.bc_deflection.append((place, 0))
    beam.apply_load(-9, 1, 0, end=3)
    beam.apply_load(-30, 6, -1)
    beam.apply_load(-4, 10, 1, end=13)
    beam.solve_for_reaction_loads(*reactions)
    line = _line(
        (4.0, 6.0, 5.0),
        [Support(RIGID)] * 4,
        (
            DistributedForce("q", 0, 1.0, 3.0, (9.0,)),
            PointForce("q", 1, 2.0, 30.0),
            DistributedForce("q", 2, 0.0, 3.0, (0.0, 4.0)),
        ),
    )

    solution = METHODS[method](line, ["q"])

    for joint, reaction in enumerate(reactions):
        expected = float(beam.reaction_loads[reaction])
        assert solution.reactions[0, joint, 1] == pytest.approx(expected, rel=1e-12)
    _assert_moments_and_slopes(solution, beam, (0, 4, 10, 15))


@both_methods
def test_a_built_in_end_an_overhang_and_a_couple(method: str):
    # Spans of 5 and 3.5 m, then 1.5 m beyond the last support.
    beam = Beam(10, RIGIDITY, 1)
    fixed, couple, middle, last = symbols("f m g h")
    beam.apply_load(fixed, 0, -1)
    beam.apply_load(couple, 0, -2)
    beam.apply_load(middle, 5, -1)
    beam.apply_load(last, Rational(17, 2), -1)
    beam.bc_deflection += [(0, 0), (5, 0), (Rational(17, 2), 0)]
    beam.bc_slope.append((0, 0))
    beam.apply_load(-6, 0, 0, end=5)
    beam.apply_load(14, 2, -2)
    beam.apply_load(-11, 10, -1)
    beam.solve_for_reaction_loads(fixed, couple, middle, last)
    line = _line(
        (5.0, 3.5, 1.5),
        [Support(RIGID, 0.0, RIGID), Support(RIGID), Support(RIGID), None],
        (
            DistributedForce("q", 0, 0.0, 5.0, (6.0,)),
            PointMoment("q", 0, 2.0, 14.0),
            PointForce("q", 2, 1.5, 11.0),
        ),
    )

    solution = METHODS[method](line, ["q"])

    for joint, reaction in ((0, fixed), (1, middle), (2, last)):
        expected = float(beam.reaction_loads[reaction])
        assert solution.reactions[0, joint, 1] == pytest.approx(expected, rel=1e-12)
    assert solution.reactions[0, 0, 2] == pytest.approx(
        float(beam.reaction_loads[couple]), rel=1e-12
    )
    _assert_moments_and_slopes(solution, beam, (0, 5, Rational(17, 2), 10))
    tip = -float(beam.deflection().subs(X, 10))
    assert solution.displacements[0, 3, 1] == pytest.approx(tip, rel=1e-12)


def _assert_moments_and_slopes(solution: LineSolution, beam: Beam, places: tuple) -> None:
    """Compare the moment just left of every inner joint, and the slope at every joint."""
    moment, slope = beam.bending_moment(), beam.slope()
    largest = max(abs(solution.end_moments).max(), 1.0)
    for joint, place in enumerate(places):
        expected = -float(slope.subs(X, place))
        assert solution.rotations[0, joint] == pytest.approx(expected, rel=1e-11, abs=1e-16)
        if 0 < joint < len(places) - 1:
            expected = -float(moment.subs(X, place - Rational(1, 10**15)))
            found = -solution.end_moments[0, joint - 1, 1]
            assert found == pytest.approx(expected, abs=1e-12 * largest)


def _line(lengths: tuple, supports: list, actions: tuple) -> Line:
    places = [0.0]
    for length in lengths:
        places.append(places[-1] + length)
    joints = tuple(
        Joint(i, x, 0.0, support=s) for i, (x, s) in enumerate(zip(places, supports, strict=True))
    )
    members = tuple(
        Member(i, i, i + 1, (Piece(length, (float(RIGIDITY),)),))
        for i, length in enumerate(lengths)
    )
    return Line("sympy", joints, members, actions)
