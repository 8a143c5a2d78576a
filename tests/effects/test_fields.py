"""Diagrams against quadrature (SciPy) and closed forms (SymPy), with hand-made end forces."""

import itertools
import math
from dataclasses import replace

import numpy as np
import pytest
import sympy
from scipy.integrate import quad
from small_solver import FIXED, PIN, beam_line, solve, uniform

from analysis_core import distribution
from analysis_core.effects.combinations import combine, combine_line, scaled_line
from analysis_core.effects.fields import fields
from analysis_core.effects.polynomials import derivative
from analysis_core.effects.stations import combine_stations, stations
from analysis_core.model import (
    Combination,
    DistributedForce,
    ImposedCurvature,
    Joint,
    Line,
    Member,
    Piece,
    PointForce,
    PointMoment,
)
from analysis_core.results import LineSolution

LENGTH = 7.3
PIECES = {
    "prismatic": (Piece(LENGTH, (2.1e7,)),),
    "stepped": (Piece(2.2, (2.1e7,)), Piece(LENGTH - 2.2, (0.9e7,))),
    "tapered": (Piece(LENGTH, (250.0, 150.0), 3.0),),
    "haunched": (
        Piece(1.9, (380.0, -200.0, 70.0), 3.0),
        Piece(LENGTH - 1.9, (250.0,), 3.0),
    ),
    "shear-flexible": (Piece(LENGTH, (2.1e7,), 1.0, (3.0e6,)),),
    "tapered in shear": (
        Piece(3.0, (250.0, 150.0), 3.0, (2.0e6, 1.0e6)),
        Piece(LENGTH - 3.0, (400.0, -100.0), 3.0, (3.0e6, -0.5e6)),
    ),
}
ACTIONS = (
    DistributedForce("Q", 0, 0.0, LENGTH, (4.0e3,)),
    DistributedForce("Q", 0, 1.1, 5.2, (6.0e3, -1.5e3, 400.0)),
    PointForce("Q", 0, 2.7, 15.0e3),
    PointForce("Q", 0, 4.4, -6.0e3),
    PointMoment("Q", 0, 3.3, 9.0e3),
    ImposedCurvature("Q", 0, 0.8, 6.1, 2.0e-4),
)
MOMENTS = (-21.0e3, 34.0e3)
MOVED = (0.004, -0.002)


def line_and_solution(pieces, *, angle=0.0):
    end = Joint(1, LENGTH * math.cos(angle), LENGTH * math.sin(angle))
    line = Line("L", (Joint(0, 0.0, 0.0), end), (Member(0, 0, 1, pieces, span=1),), ACTIONS)
    zero = np.zeros((1, 1, 2))
    # Down at both ends, so that a level member is moved across by as much.
    displacements = np.zeros((1, 2, 2))
    displacements[0, :, 1] = MOVED
    return line, LineSolution(
        line=line,
        cases=("Q",),
        end_moments=np.array([[MOMENTS]]),
        end_shears=zero,
        axial=zero,
        rotations=np.zeros((1, 2)),
        end_rotations=zero,
        displacements=displacements,
        reactions=np.zeros((1, 2, 3)),
        joint_residual=0.0,
        continuity_residual=0.0,
        method="by hand",
    )


def moment(x):
    """Sagging moment at x from the end moments and the actions, by statics."""
    simple = 0.0
    for a in ACTIONS:
        if isinstance(a, DistributedForce):

            def q(s, a=a):
                return sum(c * (s - a.start) ** i for i, c in enumerate(a.transverse))

            left = quad(lambda s, q=q: q(s) * (LENGTH - s) / LENGTH, a.start, a.end)[0]
            simple += left * x
            if x > a.start:
                simple -= quad(lambda s, q=q: q(s) * (x - s), a.start, min(x, a.end))[0]
        elif isinstance(a, PointForce):
            simple += a.transverse * (LENGTH - a.position) / LENGTH * x
            simple -= a.transverse * max(0.0, x - a.position)
        elif isinstance(a, PointMoment):
            simple += a.moment * ((x >= a.position) - x / LENGTH)
    return simple + MOMENTS[0] * (1 - x / LENGTH) - MOMENTS[1] * x / LENGTH


def rigidities(pieces, x):
    at = 0.0
    for piece in pieces:
        if x <= at + piece.length or piece is pieces[-1]:
            u = (x - at) / piece.length
            shear = sum(c * u**i for i, c in enumerate(piece.shear)) if piece.shear else math.inf
            return piece.flexural_at(u), shear
        at += piece.length


def deflection_by_virtual_work(pieces, x):
    """Unit force at x on the member, simply supported: Mueller-Breslau, by quadrature."""
    corners = [0.0, 0.8, 1.1, 1.9, 2.2, 2.7, 3.0, 3.3, 4.4, 5.2, 6.1, x, LENGTH]

    def integrand(s):
        virtual = (LENGTH - x) * s / LENGTH if s < x else x * (LENGTH - s) / LENGTH
        virtual_shear = (LENGTH - x) / LENGTH if s < x else -x / LENGTH
        bending, shearing = rigidities(pieces, s)
        imposed = 2.0e-4 if 0.8 < s < 6.1 else 0.0
        h = 1e-5
        shear = (moment(s + h) - moment(s - h)) / (2 * h) if shearing < math.inf else 0.0
        return virtual * (moment(s) / bending + imposed) + virtual_shear * shear / shearing

    nodes, weights = np.polynomial.legendre.leggauss(24)
    total = 0.0
    corners = sorted({c for c in corners if 0.0 <= c <= LENGTH})
    for low, high in itertools.pairwise(corners):
        half = 0.5 * (high - low)
        total += sum(
            w * half * integrand(low + half * (1 + g)) for g, w in zip(nodes, weights, strict=True)
        )
    return total + MOVED[0] * (1 - x / LENGTH) + MOVED[1] * x / LENGTH


@pytest.mark.parametrize("name", PIECES)
def test_moment_and_shear_follow_from_statics(name):
    found = stations(*line_and_solution(PIECES[name]), 9)

    wanted = [moment(x) for x in found.x[0]]
    # Quadrature of the oracle: 1e-9 of 50 kN·m.
    np.testing.assert_allclose(found.moment[0, 0], wanted, atol=1e-4)
    h = 1e-6
    slopes = [(moment(x + h) - moment(x - h)) / (2 * h) for x in found.x[0, 1:-1]]
    np.testing.assert_allclose(found.shear[0, 0, 1:-1], slopes, atol=0.5)


@pytest.mark.parametrize("name", PIECES)
def test_deflection_follows_from_virtual_work(name):
    found = stations(*line_and_solution(PIECES[name]), 5)

    wanted = [deflection_by_virtual_work(PIECES[name], x) for x in found.x[0]]

    # The shear of the oracle is a difference quotient, good to about 1e-7 of the deflection.
    tolerance = 1e-7 if PIECES[name][0].shear else 1e-10
    np.testing.assert_allclose(found.deflection[0, 0], wanted, atol=tolerance * 0.02)


def test_deflection_across_an_inclined_member():
    # Both ends move straight down: across a member that rises at 30 degrees by cos 30 of it.
    angle = math.radians(30.0)
    level = stations(*line_and_solution(PIECES["prismatic"]), 3).deflection[0, 0]
    raised = stations(*line_and_solution(PIECES["prismatic"], angle=angle), 3).deflection[0, 0]

    assert raised[0] == pytest.approx(MOVED[0] * math.cos(angle), rel=1e-12)
    assert raised[2] == pytest.approx(MOVED[1] * math.cos(angle), rel=1e-12)
    bent = level[1] - 0.5 * (MOVED[0] + MOVED[1])
    assert raised[1] == pytest.approx(bent + 0.5 * sum(MOVED) * math.cos(angle), rel=1e-12)


def test_propped_cantilever_against_sympy():
    # w L^4 / (EI) times the exact polynomial of a beam fixed at the left, pinned at the right.
    x, w, length, ei = sympy.symbols("x w L EI", positive=True)
    y = sympy.Function("y")
    solved = sympy.dsolve(
        sympy.Eq(ei * y(x).diff(x, 4), w),
        ics={y(0): 0, y(x).diff(x).subs(x, 0): 0, y(length): 0, y(x).diff(x, 2).subs(x, length): 0},
    ).rhs
    values = {w: 9e3, length: 6.4, ei: 1.7e7}
    line = beam_line([6.4], [1.7e7], [FIXED, PIN], [uniform("Q", 0, 6.4, 9e3)])

    found = stations(line, solve(line, ["Q"]), 17)

    for at, down, bend in zip(found.x[0], found.deflection[0, 0], found.moment[0, 0], strict=True):
        exact = solved.subs(x, sympy.nsimplify(at)).subs(values)
        assert down == pytest.approx(float(exact), abs=1e-12)
        curved = (-ei * solved.diff(x, 2)).subs(x, sympy.nsimplify(at)).subs(values)
        assert bend == pytest.approx(float(curved), abs=1e-6)


def test_two_sides_of_a_force_on_a_station():
    line = beam_line([4.0], [1e7], [PIN, PIN], [PointForce("P", 0, 2.0, 10e3)])

    found = stations(line, solve(line, ["P"]), 5)

    # Just right of the force in the middle; at the end just left.
    np.testing.assert_allclose(found.shear[0, 0], [5e3, 5e3, -5e3, -5e3, -5e3], atol=1e-9)


def test_stations_of_a_combination_by_either_way():
    line = beam_line(
        [5.0, 6.0], [1e7, 2e7], [PIN] * 3,
        [uniform("G", 0, 5.0, 7e3), uniform("Q", 1, 6.0, 5e3), PointMoment("Q", 0, 1.0, 3e3)],
    )  # fmt: skip
    both = [Combination("U1", "strength", {"G": 1.35, "Q": 1.5, "absent": 1.0})]
    solution = solve(line, ["G", "Q"])

    superposed = combine_stations(stations(line, solution, 7), both)
    direct = stations(combine_line(line, both), combine(solution, both), 7)

    assert superposed.names == direct.names == ("U1",)
    for key in ("moment", "shear", "deflection"):
        np.testing.assert_allclose(
            getattr(superposed, key), getattr(direct, key), rtol=1e-12, atol=1e-8
        )


def test_combined_solution_satisfies_the_combined_line():
    line = beam_line(
        [5.0, 6.0], [1e7, 2e7], [PIN] * 3, [uniform("G", 0, 5.0, 7e3), uniform("Q", 1, 6.0, 5e3)]
    )
    both = [Combination("U1", "strength", {"G": 1.35, "Q": 1.5})]

    combined = combine(solve(line, ["G", "Q"]), both)
    direct = solve(combine_line(line, both), ["U1"])

    np.testing.assert_allclose(combined.end_moments, direct.end_moments, atol=1e-8)
    np.testing.assert_allclose(combined.reactions, direct.reactions, atol=1e-8)
    assert not combined.reactions.flags.writeable


def test_scaled_line_touches_only_the_named_cases():
    line = beam_line([5.0], [1e7], [PIN] * 2, [uniform("G", 0, 5.0, 7e3),
                                               uniform("Q", 0, 5.0, 5e3)])  # fmt: skip

    scaled = scaled_line(line, {"Q": 0.6})

    assert [a.transverse for a in scaled.actions] == [(7e3,), (3e3,)]
    assert replace(line, actions=scaled.actions) == scaled


def test_a_group_of_many_members_equals_each_alone():
    # More rows than share one block: other shapes of arrays, the same bits.
    line = beam_line(
        [4.0 + 0.1 * i for i in range(60)], [1e7] * 60, [PIN] * 61,
        [uniform("Q", i, 4.0 + 0.1 * i, 5e3) for i in range(60)]
        + [PointForce("Q", i, 1.0, 2e3) for i in range(0, 60, 3)],
    )  # fmt: skip
    solution = solve(line, ["Q"])
    found = stations(line, solution, 5)
    for i in (0, 1, 2, 30, 59):
        own = replace(
            line,
            joints=tuple(replace(line.joints[i + k], id=k) for k in (0, 1)),
            members=(replace(line.members[i], id=0, start=0, end=1),),
            actions=tuple(replace(a, member=0) for a in line.actions if a.member == i),
        )
        cut = replace(
            solution,
            line=own,
            end_moments=solution.end_moments[:, i : i + 1],
            displacements=solution.displacements[:, i : i + 2],
        )
        alone = stations(own, cut, 5)
        np.testing.assert_array_equal(alone.moment[:, 0], found.moment[:, i])
        np.testing.assert_array_equal(alone.deflection[:, 0], found.deflection[:, i])


def test_too_few_stations_is_a_slip_of_the_caller():
    with pytest.raises(ValueError, match="at least both ends of a member; got 1"):
        stations(*line_and_solution(PIECES["prismatic"]), 1)


@pytest.mark.parametrize("name", PIECES)
def test_slopes_at_the_ends_are_the_rotations_of_the_solver(name):
    # Two ways to the same rotation: the solver's, and the diagram's by integration.
    pieces = PIECES[name]
    joints = (
        Joint(0, 0.0, 0.0, support=FIXED),
        Joint(1, LENGTH, 0.0, support=PIN),
        Joint(2, LENGTH + 5.0, 0.0, support=PIN),
    )
    members = (
        Member(0, 0, 1, pieces, span=1),
        Member(1, 1, 2, (Piece(5.0, (1.5e7,)),), span=2, end_spring=3.0e6),
    )
    line = Line("L", joints, members, (*ACTIONS, uniform("Q", 1, 5.0, 6e3)))
    solution = distribution.solve(line, ["Q"])
    rigid = pieces[0].shear is None

    for block in fields([line], [solution]):
        for b, m in enumerate(block.member):
            slopes = derivative(block.deflection)
            width = np.diff(block.cuts, axis=0)
            last = np.flatnonzero(width[:, b])[-1]
            start = slopes[0, 0, 0, b] / width[0, b]
            end = np.sum(slopes[:, last, 0, b]) / width[last, b]
            if m == 0 and not rigid:
                # The slope of the axis is the rotation of the section plus V/GA.
                start -= block.shear[0, 0, 0, b] / rigidities(pieces, 0.0)[1]
                end -= np.sum(block.shear[:, last, 0, b]) / rigidities(pieces, LENGTH)[1]
            wanted = solution.end_rotations[0, m]
            assert (start, end) == pytest.approx(tuple(wanted), rel=1e-9, abs=1e-12)
            shears = block.shear[0, 0, 0, b], np.sum(block.shear[:, last, 0, b])
            assert shears == pytest.approx(tuple(solution.end_shears[0, m]), rel=1e-9)
