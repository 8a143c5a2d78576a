"""Moments at faces and peaks over bearings, and full fixed-end moments."""

import numpy as np
import pytest
from small_solver import FIXED, PIN, beam_line, solve, uniform

from analysis_core import distribution
from analysis_core.effects.arrangements import Arrangements, split_by_span, whole_cases
from analysis_core.effects.faces import FaceRule, support_moments
from analysis_core.effects.fixed_ends import full_fixed_end_moments
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

W, L, WIDTH = 10e3, 5.0, 0.3
RULE = FaceRule(rounding=0.125, share=0.65, clause="EN 1992-1-1 5.3.2.2")
ONE = [Combination("U1", "strength", {"G": 1.0, "Q": 1.0}, favourable={"Q": 0.0})]


def two_spans(case="G"):
    return beam_line(
        [L, L], [1e7, 1e7], [PIN] * 3, [uniform(case, 0, L, W), uniform(case, 1, L, W)],
        width=(0.0, WIDTH, 0.0),
    )  # fmt: skip


def at_middle_support(line, arrangements=None, split=()):
    spans = split_by_span(line, ["G", "Q"], split)
    found = support_moments(
        spans, solve(spans.line, spans.cases), ONE, RULE, arrangements=arrangements
    )
    return [m for m in found if m.joint == 1]


def test_peak_is_rounded_by_an_eighth_of_reaction_times_width():
    # EN 1992-1-1 5.3.2.2(4): F t / 8; two equal spans: M = -w L^2/8, F = 5/4 w L.
    left, right = at_middle_support(two_spans())

    for side in (left, right):
        assert side.axis.value == pytest.approx(-W * L**2 / 8, rel=1e-12)
        assert side.rounded.value == pytest.approx(
            -W * L**2 / 8 + 1.25 * W * L * WIDTH / 8, rel=1e-12
        )
        assert side.bearing == side.rounded


def test_moment_at_the_face_lies_half_a_width_from_the_axis():
    # V = 5/8 w L beside the support: M(t/2) = -wL^2/8 + 5/8 wL t/2 - w t^2/8.
    left, right = at_middle_support(two_spans())

    wanted = -W * L**2 / 8 + 0.625 * W * L * WIDTH / 2 - W * WIDTH**2 / 8
    assert left.face.value == pytest.approx(wanted, rel=1e-12)
    assert right.face.value == pytest.approx(wanted, rel=1e-12)
    assert (left.face.x, right.face.x) == (L - WIDTH / 2, WIDTH / 2)


def test_face_of_a_monolithic_support_keeps_a_share_of_the_fixed_end_moment():
    # EN 1992-1-1 5.3.2.2(3): 0.65 of w L^2/12; a wide support lets it govern.
    line = beam_line(
        [L, L], [1e7, 1e7], [PIN] * 3, [uniform("G", 0, L, W), uniform("G", 1, L, W)],
        width=(0.0, 1.6, 0.0),
    )  # fmt: skip

    left, _ = at_middle_support(line)

    assert left.fixed_end.value == pytest.approx(-0.65 * W * L**2 / 12, rel=1e-12)
    assert left.face.value > left.fixed_end.value
    assert left.monolithic == left.fixed_end


def test_the_arrangement_is_chosen_for_each_place_by_itself():
    line = beam_line(
        [L] * 3, [1e7] * 3, [PIN] * 4, [uniform("Q", i, L, W) for i in range(3)],
        width=(0.2, WIDTH, WIDTH, 0.2),
    )  # fmt: skip
    every = Arrangements("every", {"Q": 0.0})

    left, right = at_middle_support(line, every, ["Q"])

    # Three equal spans, 1 and 2 loaded: -0.11667 w L^2, reaction 1.2 w L.
    assert left.axis.value == pytest.approx(-7 / 60 * W * L**2, rel=1e-12)
    assert left.axis.source == "U1 (Q on spans 1, 2)"
    assert left.rounded.value == pytest.approx(
        -7 / 60 * W * L**2 + 1.2 * W * L * WIDTH / 8, rel=1e-12
    )
    assert right.axis.value == pytest.approx(left.axis.value, rel=1e-12)


def test_a_support_of_unknown_width_keeps_its_axis_moment():
    line = beam_line([L, L], [1e7] * 2, [PIN] * 3, [uniform("G", i, L, W) for i in range(2)])

    left, _ = at_middle_support(line)

    assert left.face is None
    assert left.rounded is None
    assert left.bearing == left.monolithic == left.axis


def test_a_sagging_support_is_not_rounded():
    line = beam_line(
        [L, L], [1e7] * 2, [PIN] * 3, [PointMoment("G", 0, 2.0, 0.0), uniform("G", 0, L, -W)],
        width=(0.0, WIDTH, 0.0),
    )  # fmt: skip

    left, _ = at_middle_support(line)

    assert left.axis.value > 0.0
    assert left.rounded == left.axis


def test_full_fixed_end_moments_of_handbook_cases():
    # Uniform load wL^2/12; force Pab^2/L^2, Pa^2b/L^2; couple M b(2a-b)/L^2 (clockwise, as the
    # moments on the member's ends); standard tables of fixed-end moments.
    length, a, b, p, m = 6.0, 2.0, 4.0, 20e3, 12e3
    line = beam_line([length], [1e7], [PIN, PIN], [
        uniform("w", 0, length, W), PointForce("P", 0, a, p), PointMoment("M", 0, a, m),
        ImposedCurvature("T", 0, 0.0, length, 1e-3),
    ])  # fmt: skip

    found = full_fixed_end_moments(line, ["w", "P", "M", "T"])[:, 0]

    np.testing.assert_allclose(found[0], [-W * length**2 / 12] * 2, rtol=1e-12)
    np.testing.assert_allclose(
        found[1], [-p * a * b**2 / length**2, -p * a**2 * b / length**2], rtol=1e-12
    )
    clockwise = np.array([m * b * (2 * a - b), m * a * (2 * b - a)]) / length**2
    np.testing.assert_allclose(found[2], clockwise * [1.0, -1.0], atol=1e-8)
    np.testing.assert_allclose(found[3], [-1e7 * 1e-3] * 2, rtol=1e-12)


def test_full_fixed_end_moments_of_a_haunched_shear_flexible_member_by_the_solver():
    pieces = (
        Piece(1.9, (380.0, -200.0, 70.0), 3.0, (2.0e6,)),
        Piece(4.1, (250.0,), 3.0, (3.0e6, -1.0e6)),
    )
    line = Line(
        "L",
        (Joint(0, 0.0, 0.0, support=FIXED), Joint(1, 6.0, 0.0, support=FIXED)),
        (Member(0, 0, 1, pieces, span=1),),
        (DistributedForce("Q", 0, 0.7, 5.2, (3e3, 900.0)), PointForce("Q", 0, 4.0, 7e3)),
    )

    solved = distribution.solve(line, ["Q"]).end_moments[0, 0]

    found = full_fixed_end_moments(line, ["Q"])[0, 0]
    np.testing.assert_allclose(found, solved * [1.0, -1.0], rtol=1e-9)


def test_whole_cases_serve_as_well():
    line = two_spans()
    whole = whole_cases(line, ["G"])

    found = support_moments(whole, solve(line, ["G"]), ONE, FaceRule())

    assert [m.joint for m in found] == [0, 1, 1, 2]
    assert all(m.rounded is None and m.fixed_end is None for m in found)
