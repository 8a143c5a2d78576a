"""The independent check itself: its own closed forms, its two solvers, and what it notices."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
import random_lines

from analysis_core import distribution
from analysis_core.errors import AnalysisError, MechanismError, ModelError
from analysis_core.model import (
    FREE,
    RIGID,
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
from analysis_core.results import LineSolution
from analysis_core.stiffness_check import (
    largest_difference,
    largest_differences,
    solve_stiffness,
)
from analysis_core.stiffness_check.banded import BandedFactors
from analysis_core.stiffness_check.integrals import flexibility, loaded_rotations

PIN, FIXED = Support(RIGID), Support(RIGID, RIGID, RIGID)


def test_flexibility_of_a_tapered_member_is_that_of_its_closed_form():
    # EI = D(1 + u)³: integrals of (1-u)², (1-u)u and u² over (1 + u)³, by partial fractions.
    length, rigidity = 6.0, 15e6
    root = rigidity ** (1.0 / 3.0)

    found = flexibility((Piece(length, (root, root), 3.0),))

    near, cross, far = math.log(2.0) - 1 / 2, 3 / 4 - math.log(2.0), math.log(2.0) - 5 / 8
    scale = length / rigidity
    assert found[0] == pytest.approx(near * scale, rel=1e-14)
    assert found[1] == pytest.approx(-cross * scale, rel=1e-13)
    assert found[2] == pytest.approx(far * scale, rel=1e-14)


def test_a_member_cut_in_two_equal_pieces_is_as_the_whole_one():
    whole = (Piece(5.0, (12e6,), shear=(9e6,)),)
    halves = (Piece(2.0, (12e6,), shear=(9e6,)), Piece(3.0, (12e6,), shear=(9e6,)))
    member = Member(0, 0, 1, whole)
    line = _line([FIXED, FIXED], [member])
    cut = replace(line, members=(replace(member, pieces=halves),))
    actions = (
        DistributedForce("q", 0, 0.7, 3.9, (2e3, 1e3, -4e2)),
        PointForce("q", 0, 1.1, 9e3),
        PointMoment("q", 0, 3.3, 7e3),
        ImposedCurvature("q", 0, 1.0, 4.2, 3e-4),
    )

    # One goes through reciprocity in bulk, the other through quadrature along the member.
    one = solve_stiffness(replace(line, actions=actions), ["q"])
    other = solve_stiffness(replace(cut, actions=actions), ["q"])

    np.testing.assert_allclose(one.end_moments, other.end_moments, rtol=1e-13)
    np.testing.assert_allclose(one.end_shears, other.end_shears, rtol=1e-13)


def test_end_rotations_under_a_force_on_a_taper_follow_from_the_closed_form():
    # Simple beam, EI = D(1 + u), force at midspan: M = Pu L/2 up to there, then P(1-u) L/2.
    length, rigidity, force = 4.0, 8e6, 20e3

    taper = (Piece(length, (rigidity, rigidity)),)

    ((start, _),) = loaded_rotations(taper, [PointForce("q", 0, 2.0, force)])

    # With t = 1 + u the integrals of (1-u) M/EI are those of -t + 3 - 2/t and t - 4 + 4/t.
    first = 7 / 8 - 2.0 * math.log(1.5)
    second = 4.0 * math.log(4 / 3) - 9 / 8
    assert start == pytest.approx(force * length**2 / 2.0 / rigidity * (first + second), rel=1e-13)


def test_two_rigid_bearings_share_an_axial_force_by_the_lever_rule():
    # Members of one axial rigidity between two walls: 2/5 of the force goes to the far one.
    hinged = Support(RIGID, RIGID)
    line = _line([hinged, hinged], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))])
    line = replace(line, actions=(PointForce("q", 0, 2.0, 0.0, 10e3),))

    solution = solve_stiffness(line, ["q"])

    np.testing.assert_allclose(solution.reactions[0, :, 0], [-6e3, -4e3], rtol=1e-12)
    np.testing.assert_allclose(solution.axial[0, 0], [6e3, -4e3], rtol=1e-12)


def test_a_leg_under_a_supported_joint_takes_moment_but_no_load():
    line = _with_leg(Support(RIGID))

    solution = solve_stiffness(line, ["q"])

    assert solution.axial[0, 1].tolist() == [0.0, 0.0]
    assert solution.reactions[0, 2, 1] == 0.0
    # Beam 4 m, EI 1e7, leg 3 m, EI 1e7, far ends fixed: shares 4/4 to 4/3 of wL²/12.
    assert solution.end_moments[0, 0, 1] == pytest.approx(16e3 * (1.0 - 3.0 / 7.0), rel=1e-13)


def test_a_leg_under_an_unsupported_joint_carries_it():
    line = _with_leg(None)

    solution = solve_stiffness(line, ["q"])

    assert solution.axial[0, 1, 0] == pytest.approx(-solution.reactions[0, 2, 1], rel=1e-13)
    assert solution.reactions[0, :, 1].sum() == pytest.approx(48e3, rel=1e-13)


@pytest.mark.parametrize("build", [random_lines.beam_line, random_lines.frame])
@pytest.mark.parametrize("seed", range(1000, 1060))
def test_distribution_agrees_on_random_structures(build, seed: int):
    line = build(seed)
    outcomes = [_outcome(method, line) for method in (distribution.solve, solve_stiffness)]

    if isinstance(outcomes[0], LineSolution):
        assert isinstance(outcomes[1], LineSolution)
        assert largest_difference(outcomes[0]) < 1e-11
        assert largest_differences([outcomes[0]])[0] < 1e-11
        assert largest_difference(outcomes[1]) == pytest.approx(0.0, abs=1e-11)
    elif isinstance(outcomes[0], MechanismError):
        assert isinstance(outcomes[1], MechanismError)
        assert outcomes[0].joints == outcomes[1].joints
    else:
        assert isinstance(outcomes[0], ModelError)
        assert isinstance(outcomes[1], ModelError)


def test_many_lines_of_several_patterns_are_checked_in_their_order():
    lines = [random_lines.beam_line(seed) for seed in range(150)]
    solutions = [
        s for line in lines if isinstance(s := _outcome(solve_stiffness, line), LineSolution)
    ]
    spoilt = {7: 1e-3, 60: 1e-5, 111: 1e-7}
    for place, share in spoilt.items():
        solutions[place] = _spoilt(solutions[place], "end_shears", share)

    found = largest_differences(solutions)

    assert len(found) == len(solutions) > 120
    for place, value in enumerate(found):
        if place in spoilt:
            assert value == pytest.approx(spoilt[place], rel=1e-4)
        else:
            assert value < 1e-11


@pytest.mark.parametrize("kind", ["end_moments", "end_shears", "rotations", "reactions", "axial"])
@pytest.mark.parametrize("together", [True, False])
def test_a_wrong_value_of_any_kind_is_noticed_by_its_size(kind: str, together: bool):
    line = replace(_with_leg(None), kind="frame")
    right = solve_stiffness(line, ["q"])
    wrong = _spoilt(right, kind, 1e-6)

    found = largest_differences([wrong])[0] if together else largest_difference(wrong)

    # The scale of axial forces is that of all forces, so theirs counts a little less.
    assert 1e-7 < found < 2e-6


def test_a_redundant_push_between_two_bearings_is_left_to_the_solution():
    hinged = Support(RIGID, RIGID)
    line = _line([hinged, hinged], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))])
    line = replace(line, actions=(PointForce("q", 0, 2.0, 3e3, 10e3),))
    right = solve_stiffness(line, ["q"])
    squeezed = right.axial - 1e3
    pushed = right.reactions + np.array([[[1e3, 0.0, 0.0], [-1e3, 0.0, 0.0]]])

    balanced = replace(right, axial=squeezed, reactions=pushed)
    unbalanced = replace(right, axial=squeezed)

    assert largest_difference(balanced) < 1e-14
    assert largest_difference(unbalanced) > 0.1


def test_nothing_acting_differs_by_nothing():
    line = _line([FIXED, PIN], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))])

    assert largest_difference(solve_stiffness(line, ["empty"])) == 0.0
    assert largest_difference(solve_stiffness(line, [])) == 0.0


def test_rounding_beside_a_kind_that_is_zero_is_not_taken_for_a_difference():
    # End moments of a simple span are zero; 1e-9 N·m beside a span moment of 25 kN·m is dust.
    line = _line([PIN, PIN], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))])
    line = replace(line, actions=(DistributedForce("q", 0, 0.0, 5.0, (8e3,)),))
    right = solve_stiffness(line, ["q"])
    dusty = replace(right, end_moments=right.end_moments + 1e-9)

    assert largest_difference(dusty) < 1e-13


def test_long_lines_are_solved_by_bands_and_agree():
    count = 400
    rigidities = 10.0 ** np.random.default_rng(5).uniform(6.0, 9.0, count)
    members = [
        Member(i, i, i + 1, (Piece(3.0 + i % 4, (float(rigidity),)),))
        for i, rigidity in enumerate(rigidities)
    ]
    line = _line([PIN] * (count + 1), members)
    actions = tuple(
        DistributedForce("q", i, 0.0, members[i].length, (1e3 * (1 + i % 7),)) for i in range(count)
    )

    solution = distribution.solve(replace(line, actions=actions), ["q"])

    assert largest_difference(solution) < 1e-13


def test_band_factors_solve_what_needs_row_interchanges():
    rng = np.random.default_rng(11)
    size, width = 40, 3
    # Three matrices at once, nothing on their diagonals; each needs its own interchanges.
    full = rng.normal(size=(3, size, size))
    full[:, np.abs(np.subtract.outer(np.arange(size), np.arange(size))) > width] = 0.0
    full[:, np.arange(size), np.arange(size)] = 0.0
    row, column = np.nonzero(full[0])
    right = rng.normal(size=(size, 2, 3))

    found = BandedFactors(size, width, row, column, full[:, row, column].T).solve(right)

    for index in range(3):
        np.testing.assert_allclose(full[index] @ found[..., index], right[..., index], atol=1e-10)


def test_a_couple_on_a_joint_that_nothing_keeps_from_turning_is_refused():
    members = [
        Member(0, 0, 1, (Piece(5.0, (1e7,)),), end_spring=FREE),
        Member(1, 1, 2, (Piece(4.0, (1e7,)),), start_spring=FREE),
    ]
    line = replace(_line([FIXED, PIN, FIXED], members), actions=(JointForce("q", 1, moment=5e3),))

    with pytest.raises(MechanismError) as caught:
        solve_stiffness(line, ["q"])

    assert caught.value.joints == (1,)


def test_movements_that_would_stretch_a_member_are_refused():
    hinged = Support(RIGID, RIGID)
    line = _line([hinged, hinged], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))], kind="frame")
    line = replace(line, actions=(JointMovement("q", 1, horizontal=0.01),))

    with pytest.raises(ModelError, match="would change the length"):
        solve_stiffness(line, ["q"])


def test_a_movement_that_no_support_imposes_is_refused():
    line = _line([FIXED, None], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))])
    line = replace(line, actions=(JointMovement("q", 1, vertical=0.01),))

    with pytest.raises(ModelError, match="joint 1, where no support"):
        solve_stiffness(line, ["q"])


def test_a_solution_of_a_line_that_cannot_be_checked_differs_infinitely():
    line = _line([PIN, PIN], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))])
    loaded = replace(line, actions=(DistributedForce("q", 0, 0.0, 5.0, (8e3,)),))
    solution = solve_stiffness(loaded, ["q"])
    loose = replace(solution, line=replace(loaded, joints=(loaded.joints[0], Joint(1, 5.0, 0.0))))

    assert largest_difference(loose) == math.inf
    assert largest_differences([loose, solution]) == [math.inf, pytest.approx(0.0, abs=1e-13)]


def _line(supports: list[Support | None], members: list[Member], kind: str = "line") -> Line:
    joints, x = [], 0.0
    for index, support in enumerate(supports):
        joints.append(Joint(index, x, 0.0, support=support))
        if index < len(members):
            x += members[index].length
    return Line("check", tuple(joints), tuple(members), kind=kind)  # type: ignore[arg-type]


def _with_leg(support: Support | None) -> Line:
    joints = (
        Joint(0, 0.0, 0.0, support=FIXED),
        Joint(1, 4.0, 0.0, support=support),
        Joint(2, 4.0, -3.0, support=FIXED),
    )
    members = (
        Member(0, 0, 1, (Piece(4.0, (1e7,)),), span=1),
        Member(1, 2, 1, (Piece(3.0, (1e7,)),), role="leg"),
    )
    load = DistributedForce("q", 0, 0.0, 4.0, (12e3,))
    return Line("leg", joints, members, (load,))


def _outcome(method, line: Line):
    cases = list(dict.fromkeys(action.case for action in line.actions)) or ["q"]
    try:
        return method(line, cases)
    except AnalysisError as error:
        return error


def _spoilt(solution: LineSolution, kind: str, share: float) -> LineSolution:
    """Return the solution with its largest value of a kind wrong by ``share``."""
    values = getattr(solution, kind).copy()
    place = np.unravel_index(np.abs(values).argmax(), values.shape)
    values[place] *= 1.0 + share
    return replace(solution, **{kind: values})


def test_one_line_that_cannot_be_checked_spoils_no_other():
    line = _line([PIN, PIN], [Member(0, 0, 1, (Piece(5.0, (1e7,)),))])
    loaded = replace(line, actions=(DistributedForce("q", 0, 0.0, 5.0, (8e3,)),))
    solution = solve_stiffness(loaded, ["q"])
    pulled = replace(line, actions=(JointMovement("q", 1, rotation=0.01),))

    found = largest_differences([solution] * 9 + [replace(solution, line=pulled)])

    assert found[:9] == [pytest.approx(0.0, abs=1e-14)] * 9
    assert found[9] == math.inf


@pytest.mark.parametrize("springs", [(FREE, FREE), (RIGID, RIGID)])
@pytest.mark.parametrize("support", [PIN, FIXED])
def test_a_span_with_nothing_left_to_solve_for(support: Support, springs: tuple[float, float]):
    member = Member(0, 0, 1, (Piece(5.0, (1e7,)),), "span", *springs)
    line = _line([support, support], [member])
    line = replace(line, actions=(DistributedForce("q", 0, 0.0, 5.0, (8e3,)),))
    solution = distribution.solve(line, ["q"])

    assert solution.end_shears[0, 0].tolist() == [20e3, -20e3]
    assert largest_difference(solution) < 1e-14
    assert largest_differences([solution] * 10) == [pytest.approx(0.0, abs=1e-14)] * 10


def test_a_line_with_a_fault_is_not_solved():
    line = _line([FIXED, FIXED], [Member(0, 0, 1, (Piece(5.0, (1.0,)),))])

    with pytest.raises(ModelError, match="its material has no stiffness"):
        solve_stiffness(replace(line, fault="its material has no stiffness"), ["q"])
