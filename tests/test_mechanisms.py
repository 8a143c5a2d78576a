"""Mechanisms are refused with the joints that move and what would stop them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from analysis_core.distribution import solve
from analysis_core.distribution.mechanisms import free_movements
from analysis_core.errors import MechanismError, ModelError
from analysis_core.model import (
    FREE,
    RIGID,
    DistributedForce,
    Joint,
    JointForce,
    Line,
    Member,
    Piece,
    PointForce,
    Support,
)

FIXED = Support(RIGID, RIGID, RIGID)
HINGED = Support(RIGID, RIGID, FREE)
PINNED = Support(RIGID)
GUIDED = Support(rotation=RIGID)


def beam(*parts: tuple[float, float, float], supports: tuple[Support | None, ...]) -> Line:
    """(length, start spring, end spring) per member."""
    x, joints, members = 0.0, [Joint(0, 0.0, 0.0, support=supports[0])], []
    for index, (length, start, end) in enumerate(parts):
        x += length
        joints.append(Joint(index + 1, x, 0.0, support=supports[index + 1]))
        members.append(
            Member(
                index,
                index,
                index + 1,
                (Piece(length, (2e6,)),),
                start_spring=start,
                end_spring=end,
            )
        )
    load = tuple(DistributedForce("G", m.id, 0.0, m.length, (3e3,)) for m in members)
    return Line("beam", tuple(joints), tuple(members), load)


def column_frame(*, hinged_beam: bool, foot: Support) -> Line:
    spring = FREE if hinged_beam else RIGID
    return Line(
        "frame",
        (
            Joint(0, 0.0, 0.0, support=foot),
            Joint(1, 0.0, 4.0),
            Joint(2, 6.0, 4.0),
            Joint(3, 6.0, 0.0, support=foot),
        ),
        (
            Member(0, 0, 1, (Piece(4.0, (2e6,)),)),
            Member(1, 1, 2, (Piece(6.0, (2e6,)),), start_spring=spring, end_spring=spring),
            Member(2, 3, 2, (Piece(4.0, (2e6,)),)),
        ),
        (PointForce("G", 1, 2.0, 1e3),),
        kind="frame",
    )


R, F = RIGID, FREE


@pytest.mark.parametrize(
    ("line", "joints"),
    [
        (beam((5.0, R, R), supports=(PINNED, None)), (1,)),
        (beam((5.0, R, R), supports=(GUIDED, None)), (0, 1)),
        (beam((5.0, R, R), supports=(GUIDED, GUIDED)), (0, 1)),
        (beam((5.0, F, R), supports=(FIXED, None)), (1,)),
        (beam((5.0, R, R), supports=(None, None)), (0, 1)),
        (beam((2.0, R, F), (3.0, R, R), supports=(PINNED, None, PINNED)), (1,)),
        (
            beam((1.5, R, F), (2.0, R, F), (1.5, R, R), supports=(PINNED, None, None, PINNED)),
            (1, 2),
        ),
        (
            beam(
                (5.0, R, R),
                (1.0, R, F),
                (1.5, R, F),
                (1.5, R, F),
                (1.0, R, R),
                (5.0, R, R),
                supports=(PINNED, PINNED, None, None, None, PINNED, PINNED),
            ),
            (3,),
        ),
        (beam((2.0, R, F), (3.0, R, R), (4.0, F, R), supports=(FIXED, None, PINNED, None)), (3,)),
        (column_frame(hinged_beam=True, foot=HINGED), (1, 2)),
        (column_frame(hinged_beam=False, foot=PINNED), (0, 1, 2, 3)),
    ],
)
def test_a_mechanism_is_refused_with_the_joints_that_move(
    line: Line, joints: tuple[int, ...]
) -> None:
    with pytest.raises(MechanismError) as caught:
        solve(line, ["G"])

    assert caught.value.joints == joints
    assert "is a mechanism" in str(caught.value)
    assert caught.value.remedy in str(caught.value)


@pytest.mark.parametrize("foot", [HINGED, PINNED])
def test_doing_what_the_message_says_stops_the_mechanism(foot: Support) -> None:
    line = column_frame(hinged_beam=foot is HINGED, foot=foot)
    with pytest.raises(MechanismError) as caught:
        solve(line, ["G"])

    assert "horizontally" in caught.value.remedy
    held = tuple(
        replace(joint, support=replace(joint.support or Support(), horizontal=RIGID))
        if f"hold joint {joint.id} " in caught.value.remedy
        else joint
        for joint in line.joints
    )
    assert held != line.joints
    solve(replace(line, joints=held), ["G"])


def test_soft_springs_are_not_mechanisms() -> None:
    # A stiff beam on two springs 1e9 times softer: a rigid body on springs.
    line = beam((6.0, R, R), supports=(Support(3.0), Support(5.0)))

    solution = solve(line, ["G"])

    np.testing.assert_allclose(solution.reactions[0, :, 1], [9e3, 9e3], rtol=1e-10)
    np.testing.assert_allclose(solution.displacements[0, :, 1], [3e3, 1.8e3], rtol=1e-10)
    assert not len(free_movements(line))


def test_a_mechanism_is_refused_even_where_nothing_sets_it_in_motion() -> None:
    idle = replace(beam((5.0, R, R), supports=(PINNED, None)), actions=())

    with pytest.raises(MechanismError):
        solve(idle, ["G"])


def test_all_free_movements_are_counted() -> None:
    assert len(free_movements(beam((5.0, R, R), supports=(None, None)))) == 2
    assert len(free_movements(column_frame(hinged_beam=True, foot=HINGED))) == 1
    assert len(free_movements(column_frame(hinged_beam=False, foot=FIXED))) == 0


def test_a_couple_that_nothing_resists_is_refused_and_no_couple_is_harmless() -> None:
    line = beam((4.0, R, F), (5.0, F, R), supports=(PINNED, PINNED, PINNED))
    turned = replace(line, actions=(*line.actions, JointForce("G", 1, moment=12e3)))

    assert solve(line, ["G"]).rotations[0, 1] == 0.0
    with pytest.raises(ModelError, match=r"A moment of 12000 N·m acts on joint 1 .* all 2 member"):
        solve(turned, ["G"])
    # In another case it does not matter.
    assert solve(turned, ["Q"]).reactions.shape == (1, 3, 3)
