"""Plane frames, legs, hinges, springs and settlements: closed forms, independent equilibrium."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from analysis_core.distribution import solve
from analysis_core.distribution.bars import reduce
from analysis_core.distribution.loads import gather
from analysis_core.distribution.skeleton import skeleton
from analysis_core.errors import ModelError
from analysis_core.model import (
    FREE,
    RIGID,
    Action,
    DistributedForce,
    Joint,
    JointForce,
    JointMovement,
    Line,
    Member,
    Piece,
    PointForce,
    Support,
)

FIXED = Support(RIGID, RIGID, RIGID)
HINGED = Support(RIGID, RIGID, FREE)
PINNED = Support(RIGID)


def portal(
    height: float, span: float, column: float, beam: float, foot: Support, *actions: Action
) -> Line:
    return Line(
        "portal",
        (
            Joint(0, 0.0, 0.0, support=foot),
            Joint(1, 0.0, height),
            Joint(2, span, height),
            Joint(3, span, 0.0, support=foot),
        ),
        (
            Member(0, 0, 1, (Piece(height, (column,)),)),
            Member(1, 1, 2, (Piece(span, (beam,)),)),
            Member(2, 2, 3, (Piece(height, (column,)),)),
        ),
        actions,
        kind="frame",
    )


@pytest.mark.parametrize("beam", [3.0e6, 4.0e7])
def test_a_portal_under_side_force_follows_kleinlogel(beam: float) -> None:
    # Kleinlogel, Rahmenformeln, fixed feet, force at the head (from memory): with
    # k = I_beam h/(I_column l): foot moment P h/2 (3k + 1)/(6k + 1), head P h/2 3k/(6k + 1).
    height, span, column, force = 4.2, 7.5, 9.0e6, 2.4e4
    k = beam * height / (column * span)

    solution = solve(
        portal(height, span, column, beam, FIXED, JointForce("W", 1, horizontal=force)), ["W"]
    )

    foot = force * height / 2.0 * (3.0 * k + 1.0) / (6.0 * k + 1.0)
    head = force * height / 2.0 * 3.0 * k / (6.0 * k + 1.0)
    np.testing.assert_allclose(solution.end_moments[0, 0], [-foot, -head], rtol=1e-13)
    np.testing.assert_allclose(solution.end_moments[0, 2], [-head, -foot], rtol=1e-13)
    np.testing.assert_allclose(solution.end_moments[0, 1], [head, head], rtol=1e-13)
    np.testing.assert_allclose(solution.reactions[0, [0, 3], 0], [-force / 2] * 2, rtol=1e-13)
    np.testing.assert_allclose(
        solution.reactions[0, [0, 3], 1], [-2.0 * head / span, 2.0 * head / span], rtol=1e-13
    )
    # The left column pulls, the right one is pressed, half the force goes through the beam.
    np.testing.assert_allclose(solution.axial[0, 0], [2.0 * head / span] * 2, rtol=1e-13)
    np.testing.assert_allclose(solution.axial[0, 1], [-force / 2.0] * 2, rtol=1e-13)


def test_a_hinged_portal_under_beam_load_follows_kleinlogel() -> None:
    # Hinged feet, uniform load on the beam (from memory): head moment q l²/(4 (2k' + 3)),
    # k' = I_beam h/(I_column l); horizontal thrust head/h inwards.
    height, span, column, beam, load = 3.6, 8.0, 7.0e6, 2.1e7, 1.3e4
    k = beam * height / (column * span)

    solution = solve(
        portal(height, span, column, beam, HINGED, DistributedForce("G", 1, 0, span, (load,))),
        ["G"],
    )

    head = load * span**2 / (4.0 * (2.0 * k + 3.0))
    np.testing.assert_allclose(solution.end_moments[0, 1], [-head, head], rtol=1e-13)
    np.testing.assert_allclose(
        solution.reactions[0, [0, 3], 0], [head / height, -head / height], rtol=1e-12
    )
    np.testing.assert_allclose(solution.reactions[0, [0, 3], 1], [load * span / 2] * 2, rtol=1e-13)
    assert abs(solution.displacements[0, 1, 0]) < 1e-15


def test_an_inclined_member_on_two_hinges_shares_axial_load_by_length() -> None:
    # Vertical load per metre of member: q cos across, q sin along, taken half by each end when
    # the member is as stiff axially along its whole length.
    load, slope = 5.0e3, math.atan2(3.0, 4.0)
    line = Line(
        "strut",
        (Joint(0, 0.0, 0.0, support=HINGED), Joint(1, 8.0, 6.0, support=HINGED)),
        (Member(0, 0, 1, (Piece(10.0, (4.0e6,)),)),),
        (DistributedForce("G", 0, 0, 10.0, (load * math.cos(slope),), (-load * math.sin(slope),)),),
        kind="frame",
    )

    solution = solve(line, ["G"])

    half = 10.0 * load * math.sin(slope) / 2.0
    np.testing.assert_allclose(solution.axial[0, 0], [-half, half], rtol=1e-14)
    np.testing.assert_allclose(solution.reactions[0, :, 1], [25.0e3, 25.0e3], rtol=1e-14)
    np.testing.assert_allclose(solution.reactions[0, :, 0], 0.0, atol=1e-10)


def test_a_closed_ring_of_members_is_balanced() -> None:
    # Vierendeel bay: two storeys of columns joined at both ends; checked by its own equilibrium
    # and by symmetry about the middle height.
    line = Line(
        "ring",
        (
            Joint(0, 0.0, 0.0, support=HINGED),
            Joint(1, 5.0, 0.0, support=PINNED),
            Joint(2, 5.0, 3.0),
            Joint(3, 0.0, 3.0),
        ),
        tuple(
            Member(i, a, b, (Piece(size, (rigid,)),))
            for i, (a, b, size, rigid) in enumerate(
                [(0, 1, 5.0, 6e6), (1, 2, 3.0, 2e6), (2, 3, 5.0, 6e6), (3, 0, 3.0, 2e6)]
            )
        ),
        (JointForce("W", 3, horizontal=1.0e4),),
        kind="frame",
    )

    solution = solve(line, ["W"])

    # The shear of the storey, 10 kN, bends both columns in double curvature: 10·3/4 at each end.
    np.testing.assert_allclose(np.abs(solution.end_moments), 7.5e3, rtol=1e-13)
    assert solution.joint_residual < 1e-9
    assert solution.continuity_residual < 1e-15


def test_settlement_under_a_leg_moves_only_the_joint_of_the_line() -> None:
    line = Line(
        "sub-frame",
        (
            Joint(0, 0.0, 0.0, support=PINNED),
            Joint(1, 5.0, 0.0, support=PINNED),
            Joint(2, 12.0, 0.0, support=PINNED),
            Joint(3, 5.0, -3.0, support=FIXED),
        ),
        (
            Member(0, 0, 1, (Piece(5.0, (4e6,)),), span=1),
            Member(1, 1, 2, (Piece(7.0, (4e6,)),), span=2),
            Member(2, 3, 1, (Piece(3.0, (2e6,)),), role="leg"),
        ),
        (JointMovement("S", 1, vertical=0.01),),
    )

    solution = solve(line, ["S"])

    # One joint turns: 3EI/L + 3EI/L + 4EI/h; fixed-end moments ∓3EI d/L².
    unbalance = -3 * 4e6 * 0.01 / 25.0 + 3 * 4e6 * 0.01 / 49.0
    total = 3 * 4e6 / 5.0 + 3 * 4e6 / 7.0 + 4 * 2e6 / 3.0
    turn = -unbalance / total
    assert solution.rotations[0, 1] == pytest.approx(turn, rel=1e-13)
    assert solution.end_moments[0, 2, 1] == pytest.approx(4 * 2e6 / 3.0 * turn, rel=1e-13)
    assert solution.end_moments[0, 2, 0] == pytest.approx(2 * 2e6 / 3.0 * turn, rel=1e-13)
    assert solution.displacements[0, 1, 1] == 0.01
    # What the leg pushes sideways is held at its top and its foot; it carries no load down.
    assert solution.axial[0, 2, 0] == 0.0
    assert solution.reactions[0, 1, 0] == pytest.approx(-solution.reactions[0, 3, 0], rel=1e-12)


def test_an_elastic_support_shares_the_load_with_the_beam() -> None:
    # Simple beam of 2a on a spring in the middle under uniform load: R = (5/384 q l⁴/EI)/(l³/48EI
    # + 1/k).
    span, rigidity, spring, load = 9.0, 6.0e6, 2.5e6, 8.0e3
    line = Line(
        "on a spring",
        (
            Joint(0, 0.0, 0.0, support=PINNED),
            Joint(1, span / 2, 0.0, support=Support(spring)),
            Joint(2, span, 0.0, support=PINNED),
        ),
        (
            Member(0, 0, 1, (Piece(span / 2, (rigidity,)),), span=1),
            Member(1, 1, 2, (Piece(span / 2, (rigidity,)),), span=2),
        ),
        (
            DistributedForce("G", 0, 0, span / 2, (load,)),
            DistributedForce("G", 1, 0, span / 2, (load,)),
        ),
    )

    solution = solve(line, ["G"])

    sag = 5.0 / 384.0 * load * span**4 / rigidity
    force = sag / (span**3 / (48.0 * rigidity) + 1.0 / spring)
    assert solution.reactions[0, 1, 1] == pytest.approx(force, rel=1e-13)
    assert solution.displacements[0, 1, 1] == pytest.approx(force / spring, rel=1e-13)


def gerber(ratio: float = 1.0) -> Line:
    """Two spans with a hinge in the second: statically determinate."""
    return Line(
        "gerber",
        (
            Joint(0, 0.0, 0.0, support=PINNED),
            Joint(1, 6.0, 0.0, support=PINNED),
            Joint(2, 7.5, 0.0),
            Joint(3, 11.0, 0.0, support=PINNED),
        ),
        (
            Member(0, 0, 1, (Piece(6.0, (1e6,)),), span=1),
            Member(1, 1, 2, (Piece(1.5, (1e6 * ratio,)),), span=2, end_spring=FREE),
            Member(2, 2, 3, (Piece(3.5, (2e6 * ratio,)),), span=2),
        ),
        (
            DistributedForce("G", 1, 0, 1.5, (4e3,)),
            DistributedForce("G", 2, 0, 3.5, (4e3,)),
            JointForce("G", 2, vertical=1.2e3),
        ),
    )


@pytest.mark.parametrize("ratio", [1.0, 1e6, 1e-6])
def test_a_hinged_span_is_settled_by_statics_whatever_its_stiffness(ratio: float) -> None:
    solution = solve(gerber(ratio), ["G"])

    hanging = 4e3 * 3.5 / 2.0 + 1.2e3
    moment = -(hanging * 1.5 + 4e3 * 1.5**2 / 2.0)
    assert solution.end_moments[0, 1, 0] == pytest.approx(moment, rel=1e-14)
    assert solution.end_moments[0, 1, 1] == solution.end_moments[0, 2, 0] == 0.0
    assert solution.reactions[0, 3, 1] == pytest.approx(7e3, rel=1e-14)
    assert len(reduce(gerber(ratio)).bars) == 2


def test_a_suspended_span_hangs_between_two_cantilevers() -> None:
    # Symmetric halves would hide swapped ends: cantilevers of 1 m and 2 m, a suspended part of
    # 3 m in two members under a force P where they meet, 2 m from the left hinge.
    force, rigidity = 6e3, 1e6
    line = Line(
        "suspended",
        (
            Joint(0, 0.0, 0.0, support=FIXED),
            Joint(1, 1.0, 0.0),
            Joint(2, 3.0, 0.0),
            Joint(3, 4.0, 0.0),
            Joint(4, 6.0, 0.0, support=FIXED),
        ),
        (
            Member(0, 0, 1, (Piece(1.0, (rigidity,)),), end_spring=FREE),
            Member(1, 1, 2, (Piece(2.0, (rigidity,)),)),
            Member(2, 2, 3, (Piece(1.0, (rigidity,)),), end_spring=FREE),
            Member(3, 3, 4, (Piece(2.0, (rigidity,)),)),
        ),
        (JointForce("G", 2, vertical=force),),
    )

    solution = solve(line, ["G"])

    assert len(reduce(line).bars) == 1
    left, right = force / 3.0, 2.0 * force / 3.0
    np.testing.assert_allclose(solution.end_moments[0, 0], [-left, 0.0], rtol=1e-13)
    np.testing.assert_allclose(solution.end_moments[0, 3], [0.0, 2.0 * right], rtol=1e-13)
    falls = left / 3.0 / rigidity, right * 8.0 / 3.0 / rigidity
    own = force * 2.0**2 * 1.0**2 / (3.0 * rigidity * 3.0)  # P a² b²/(3 EI l)
    np.testing.assert_allclose(
        solution.displacements[0, 1:4, 1],
        [falls[0], falls[0] + (falls[1] - falls[0]) * 2.0 / 3.0 + own, falls[1]],
        rtol=1e-12,
    )
    # Slope under the force: that of the chord plus P a b (b - a)/(3 EI l).
    chord = (falls[1] - falls[0]) / 3.0
    turn = chord + force * 2.0 * 1.0 * (1.0 - 2.0) / (3.0 * rigidity * 3.0)
    assert solution.rotations[0, 2] == pytest.approx(turn, rel=1e-12)


def test_a_change_of_section_in_a_span_is_no_joint_to_release() -> None:
    parts = Line(
        "parts",
        (
            Joint(0, 0.0, 0.0, support=FIXED),
            Joint(1, 2.5, 0.0),
            Joint(2, 7.0, 0.0, support=PINNED),
        ),
        (
            Member(0, 0, 1, (Piece(2.5, (9e6,)),), span=1),
            Member(1, 1, 2, (Piece(4.5, (3e6,)),), span=1),
        ),
        (DistributedForce("G", 0, 0, 2.5, (3e3,)), DistributedForce("G", 1, 0, 4.5, (3e3,))),
    )
    whole = Line(
        "whole",
        (Joint(0, 0.0, 0.0, support=FIXED), Joint(1, 7.0, 0.0, support=PINNED)),
        (Member(0, 0, 1, (Piece(2.5, (9e6,)), Piece(4.5, (3e6,))), span=1),),
        (DistributedForce("G", 0, 0, 7.0, (3e3,)),),
    )

    one, other = solve(parts, ["G"]), solve(whole, ["G"])

    assert len(reduce(parts).bars) == 1
    assert one.end_moments[0, 0, 0] == pytest.approx(other.end_moments[0, 0, 0], rel=1e-13)
    assert one.rotations[0, 2] == pytest.approx(other.rotations[0, 1], rel=1e-13)


def test_overhangs_are_taken_off_and_put_back() -> None:
    # A bracket in two parts on a column: the tip force turns the head, the rest is statics.
    line = Line(
        "bracket",
        (
            Joint(0, 0.0, 0.0, support=FIXED),
            Joint(1, 0.0, 4.0),
            Joint(2, 1.0, 4.0),
            Joint(3, 1.8, 4.6),
        ),
        (
            Member(0, 0, 1, (Piece(4.0, (5e6,)),)),
            Member(1, 1, 2, (Piece(1.0, (1e6,)),)),
            Member(2, 2, 3, (Piece(1.0, (1e6,)),)),
        ),
        (JointForce("G", 3, vertical=2e3),),
        kind="frame",
    )

    solution = solve(line, ["G"])

    assert not reduce(line).bars
    np.testing.assert_allclose(solution.end_moments[0, 2], [-1.6e3, 0.0], atol=1e-11)
    np.testing.assert_allclose(solution.end_moments[0, 1], [-3.6e3, 1.6e3], rtol=1e-14)
    np.testing.assert_allclose(solution.end_moments[0, 0], [-3.6e3, 3.6e3], rtol=1e-14)
    np.testing.assert_allclose(solution.axial[0, 0], [-2e3, -2e3], rtol=1e-14)
    # Castigliano: head turns M h/EI, the tip falls by that times 1.8 and by its own bending.
    head = 3.6e3 * 4.0 / 5e6
    assert solution.rotations[0, 1] == pytest.approx(head, rel=1e-13)
    assert solution.displacements[0, 1, 0] == pytest.approx(3.6e3 * 16.0 / 2 / 5e6, rel=1e-13)
    bending = (3.6e3**2 + 3.6e3 * 1.6e3 + 1.6e3**2) / 3.0 + 1.6e3**2 / 3.0
    tip = head * 1.8 + bending / 1e6 / 2e3
    assert solution.displacements[0, 3, 1] == pytest.approx(tip, rel=1e-13)


def test_movements_that_members_cannot_follow_are_refused() -> None:
    line = Line(
        "braced",
        (
            Joint(0, 0.0, 0.0, support=HINGED),
            Joint(1, 4.0, 3.0, support=HINGED),
        ),
        (Member(0, 0, 1, (Piece(5.0, (1e6,)),)),),
        (JointMovement("S", 1, vertical=0.01),),
        kind="frame",
    )

    with pytest.raises(ModelError, match="keep their length and cannot follow"):
        solve(line, ["S"])


def test_a_movement_without_a_support_is_refused() -> None:
    line = replace(gerber(), actions=(JointMovement("S", 2, vertical=0.01),))

    with pytest.raises(ModelError, match=r"joint 2 is prescribed a vertical movement of 0\.01 m"):
        solve(line, ["S"])


def test_independent_translations_are_named() -> None:
    line = portal(4.0, 6.0, 1e6, 1e6, FIXED)
    sloping = replace(
        line,
        joints=(*line.joints[:3], replace(line.joints[3], z=1.0)),
        members=(*line.members[:2], Member(2, 2, 3, (Piece(3.0, (1e6,)),))),
    )

    for frame in (line, sloping):
        moves = skeleton(frame, gather(frame, ["W"])).moves
        assert [moves.name(k) for k in range(len(moves.modes))] == ["joint 1 to the right"]
        np.testing.assert_array_equal(moves.modes[0, :, 0], [0.0, 1.0, 1.0, 0.0])


def test_a_pitched_frame_rises_as_it_spreads() -> None:
    # Rafters 4:3 up and down: when the left eaves moves by u to the right and the right one
    # stays, the ridge goes u/2 to the right and up by u/2 · 4/3.
    line = Line(
        "pitched",
        (
            Joint(0, 0.0, 0.0, support=FIXED),
            Joint(1, 0.0, 4.0),
            Joint(2, 4.0, 7.0),
            Joint(3, 8.0, 4.0),
            Joint(4, 8.0, 0.0, support=FIXED),
        ),
        tuple(
            Member(i, a, b, (Piece(size, (1e6,)),))
            for i, (a, b, size) in enumerate([(0, 1, 4.0), (1, 2, 5.0), (2, 3, 5.0), (3, 4, 4.0)])
        ),
        kind="frame",
    )

    moves = skeleton(line, gather(line, ["W"])).moves

    assert len(moves.modes) == 2
    for mode in moves.modes:
        for a, b, c, s in ((1, 2, 0.8, 0.6), (2, 3, 0.8, -0.6)):
            along = (mode[b] - mode[a]) @ np.array([c, -s])
            assert abs(along) < 1e-15


def test_a_sloping_line_takes_vertical_load_without_thrust() -> None:
    line = Line(
        "ramp",
        (
            Joint(0, 0.0, 0.0, support=PINNED),
            Joint(1, 4.0, 3.0, support=PINNED),
            Joint(2, 8.0, 6.0, support=PINNED),
        ),
        (
            Member(0, 0, 1, (Piece(5.0, (2e6,)),), span=1),
            Member(1, 1, 2, (Piece(5.0, (2e6,)),), span=2),
        ),
        (PointForce("G", 0, 2.5, 8e3, -6e3),),
    )

    solution = solve(line, ["G"])

    np.testing.assert_allclose(solution.reactions[0, :, 0], 0.0, atol=1e-10)
    assert solution.reactions[0, :, 1].sum() == pytest.approx(1e4, rel=1e-14)
    # 3/32 P L at the support for the force across the span.
    assert solution.end_moments[0, 1, 0] == pytest.approx(-3.0 / 32.0 * 8e3 * 5.0, rel=1e-13)
