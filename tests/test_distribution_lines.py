"""Beam lines solved by moment distribution: closed forms and worked figures."""

from __future__ import annotations

import pytest

from analysis_core.distribution import solve
from analysis_core.errors import MechanismError
from analysis_core.model import (
    RIGID,
    DistributedForce,
    Joint,
    Line,
    Member,
    Piece,
    Support,
)

PINNED = Support(vertical=RIGID)


def test_two_unequal_spans_follow_the_three_moment_equation() -> None:
    # Clapeyron: 2 M (L1 + L2) = -(w1 L1³ + w2 L2³)/4 for equal EI.
    line = Line(
        "two spans",
        (
            Joint(0, 0.0, 0.0, support=PINNED),
            Joint(1, 4.0, 0.0, support=PINNED),
            Joint(2, 11.0, 0.0, support=PINNED),
        ),
        (
            Member(0, 0, 1, (Piece(4.0, (3.0e6,)),), span=1),
            Member(1, 1, 2, (Piece(7.0, (3.0e6,)),), span=2),
        ),
        (
            DistributedForce("G", 0, 0.0, 4.0, (5.0e3,)),
            DistributedForce("G", 1, 0.0, 7.0, (9.0e3,)),
        ),
    )

    solution = solve(line, ["G"])

    support_moment = -(5.0e3 * 4.0**3 + 9.0e3 * 7.0**3) / (8.0 * 11.0)
    assert solution.end_moments[0, 0, 1] == pytest.approx(-support_moment, rel=1e-14)
    assert solution.end_moments[0, 1, 0] == pytest.approx(support_moment, rel=1e-14)
    assert solution.reactions[0, 0, 1] == pytest.approx(10.0e3 + support_moment / 4.0, rel=1e-14)
    assert solution.joint_residual <= 1e-10
    assert solution.continuity_residual <= 1e-16
    assert not solution.end_moments.flags.writeable


def test_a_beam_on_one_pin_is_refused_with_the_joint_that_moves() -> None:
    line = Line(
        "loose",
        (Joint(0, 0.0, 0.0, support=PINNED), Joint(1, 5.0, 0.0)),
        (Member(0, 0, 1, (Piece(5.0, (2.0e6,)),)),),
        (DistributedForce("G", 0, 0.0, 5.0, (1.0e3,)),),
    )

    with pytest.raises(MechanismError, match=r"joint 1 .* can move freely") as caught:
        solve(line, ["G"])

    assert caught.value.joints == (1,)
    assert "support joint 1" in caught.value.remedy
