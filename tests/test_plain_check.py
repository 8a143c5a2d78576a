"""The check of a single plain line by plain numbers, against the general one."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from analysis_core.model import (
    FREE,
    RIGID,
    Action,
    DistributedForce,
    ImposedCurvature,
    Joint,
    JointForce,
    JointMovement,
    Line,
    Member,
    Piece,
    PointForce,
    PointMoment,
    Support,
)
from analysis_core.stiffness_check import largest_difference, solve_stiffness
from analysis_core.stiffness_check.plain_check import plain_difference

PIN = Support(RIGID)


@pytest.mark.parametrize("ends", ["pinned", "fixed", "overhanging", "hinged", "sprung"])
def test_plain_numbers_agree_with_the_general_equations(ends: str):
    solution = solve_stiffness(_line(ends), ["a", "b"])

    assert plain_difference(solution) == pytest.approx(0.0, abs=1e-14)


@pytest.mark.parametrize("ends", ["pinned", "fixed", "overhanging", "hinged", "sprung"])
@pytest.mark.parametrize("kind", ["end_moments", "end_shears", "rotations", "reactions"])
def test_a_wrong_value_is_noticed_by_its_size(ends: str, kind: str):
    right = solve_stiffness(_line(ends), ["a", "b"])
    values = getattr(right, kind).copy()
    place = np.unravel_index(np.abs(values).argmax(), values.shape)
    values[place] *= 1.0 + 1e-6

    found = plain_difference(replace(right, **{kind: values}))

    # A reaction is measured by the largest reaction or shear, a couple by the largest moment.
    assert found is not None
    assert 2e-7 < found < 2e-6


@pytest.mark.parametrize(
    "spoil",
    [
        lambda line: _with_support(line, Support(3e6)),
        lambda line: _with_support(line, None),
        lambda line: _with_action(line, PointForce("a", 1, 1.0, 0.0, 2e3)),
        lambda line: _with_action(line, JointForce("a", 1, horizontal=2e3)),
        lambda line: replace(line, members=(*line.members[:1], _tapered(line), *line.members[2:])),
        lambda line: _with_action(line, DistributedForce("a", 1, 0.0, 1.0, (), (3e3,))),
    ],
)
def test_what_is_not_plain_goes_the_general_way(spoil):
    line = spoil(_line("pinned"))
    solution = solve_stiffness(line, ["a", "b"])

    assert plain_difference(solution) is None
    assert largest_difference(solution) < 1e-13


def test_a_doubtful_value_is_looked_at_again_in_extended_precision():
    # A span a hundred million times stiffer than the others leaves plain numbers few digits.
    line = _line("pinned")
    stiff = replace(line.members[1], pieces=(Piece(4.0, (1e15,)),))
    line = replace(line, members=(line.members[0], stiff, *line.members[2:]))
    solution = solve_stiffness(line, ["a", "b"])

    doubtful = plain_difference(solution)

    assert doubtful is not None
    assert doubtful > 1e-11
    assert largest_difference(solution) < 1e-13


def test_a_couple_on_an_idle_joint_is_left_to_the_general_way():
    line = _line("hinged")
    members = list(line.members)
    members[2] = replace(members[2], start_spring=FREE)
    line = replace(line, members=tuple(members), actions=())
    solution = solve_stiffness(line, ["a"])
    turned = replace(line, actions=(JointForce("a", 2, moment=5e3),))

    assert plain_difference(solution) == 0.0
    assert plain_difference(replace(solution, line=turned)) is None


def _line(ends: str) -> Line:
    """Four spans, none like another, every kind of vertical action in two cases."""
    outer: dict[str, tuple[Support | None, Support | None]] = {
        "pinned": (PIN, PIN),
        "fixed": (Support(RIGID, RIGID, RIGID), Support(RIGID, FREE, RIGID)),
        "overhanging": (None, None),
        "hinged": (PIN, Support(RIGID, FREE, 4e6)),
        "sprung": (Support(RIGID, FREE, 2e6), PIN),
    }
    places = (0.0, 3.1, 7.1, 12.6, 14.9)
    supports = [PIN] * 5
    supports[0], supports[-1] = outer[ends]
    supports[2] = Support(RIGID, FREE, 3e6) if ends == "sprung" else PIN
    joints = tuple(
        Joint(i, x, 0.0, support=s) for i, (x, s) in enumerate(zip(places, supports, strict=True))
    )
    rigidities, shears = (8e6, 15e6, 22e6, 5e6), (None, (9e6,), None, (4e6,))
    members = [
        Member(i, i, i + 1, (Piece(places[i + 1] - places[i], (rigidities[i],), shear=shears[i]),))
        for i in range(4)
    ]
    if ends == "hinged":
        members[1] = replace(members[1], end_spring=FREE)
        members[2] = replace(members[2], end_spring=5e6)
    actions = (
        DistributedForce("a", 0, 0.0, 3.1, (6e3,)),
        DistributedForce("a", 1, 0.4, 2.9, (1e3, 2e3, -3e2)),
        PointForce("b", 2, 1.7, 31e3),
        PointMoment("b", 1, 2.2, -9e3),
        PointMoment("a", 3, 1.1, 4e3),
        ImposedCurvature("b", 2, 0.5, 4.0, 4e-4),
        PointForce("a", 3, 2.3, 7e3),
        DistributedForce("b", 3, 0.2, 2.0, (0.0, 5e3)),
        JointForce("b", 0, vertical=3e3, moment=2e3),
        JointForce("a", 4, vertical=-2e3, moment=6e3),
        JointForce("b", 1, vertical=4e3, moment=-5e3),
        JointMovement("b", 1, vertical=0.003),
        JointMovement("a", 3, vertical=-0.002),
    )
    if ends == "fixed":
        actions = (*actions, JointMovement("a", 0, rotation=0.001))
    return Line(ends, joints, tuple(members), actions)


def _with_support(line: Line, support: Support | None) -> Line:
    joints = list(line.joints)
    joints[1] = replace(joints[1], support=support)
    actions = [a for a in line.actions if not isinstance(a, JointMovement)]
    return replace(line, joints=tuple(joints), actions=tuple(actions))


def _with_action(line: Line, action: Action) -> Line:
    return replace(line, actions=(*line.actions, action))


def _tapered(line: Line) -> Member:
    return replace(line.members[1], pieces=(Piece(4.0, (15e6, 4e6)),))
