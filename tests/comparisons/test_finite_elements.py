"""Random lines and frames against scikit-fem, the finite-element library.

Constant rigidities: Hermite elements are exact at nodes, so one element per stretch serves.
Varying ones: the error falls with the fourth power of the element size, which is checked, and
two sizes extrapolated (Richardson) leave 1e-7 at most.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace

import numpy as np
import pytest
from exact_random import CASE, beam_line, eighths, gable
from finite_elements import FiniteElements, condense, solve_with_elements

from analysis_core import distribution
from analysis_core.model import (
    RIGID,
    DistributedForce,
    ImposedCurvature,
    Joint,
    JointMovement,
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
KINDS = ("end_moments", "end_shears", "rotations", "displacements")

both_methods = pytest.mark.parametrize("method", METHODS)


@both_methods
@pytest.mark.parametrize("seed", range(200, 225))
def test_constant_rigidities_agree_with_one_element_per_stretch(seed: int, method: str):
    line = _without_shear(beam_line(seed) if seed % 2 else gable(seed))

    elements = solve_with_elements(line, CASE, 1)

    _assert_close(METHODS[method](line, [CASE]), [elements], 1e-10)


@both_methods
@pytest.mark.parametrize("seed", range(300, 320))
def test_varying_rigidities_agree_with_extrapolated_elements(seed: int, method: str):
    line = _tapered(_without_shear(beam_line(seed) if seed % 2 else gable(seed)), seed)

    sizes = [solve_with_elements(line, CASE, n) for n in (8, 16)]

    _assert_close(METHODS[method](line, [CASE]), sizes, 2e-7)


def test_the_element_error_falls_with_the_fourth_power_of_the_size():
    depth = 12e6 ** (1.0 / 3.0)
    member = Member(0, 0, 1, (Piece(6.0, (depth * 2.0, -2.0 * depth, depth), 3.0),))
    fixed = Support(RIGID, RIGID, RIGID)
    load = PointForce(CASE, 0, 2.0, 30e3)
    line = Line(
        "haunched",
        (Joint(0, 0.0, 0.0, support=fixed), Joint(1, 6.0, 0.0, support=fixed)),
        (member,),
        (load,),
    )
    truth = solve_stiffness(line, [CASE]).end_moments[0, 0]

    errors = []
    for count in (4, 8, 16):
        _, force = condense(line, member, CASE, count)
        errors.append(float(np.abs(-force[[1, 3]] - truth).max()))

    assert np.log2(errors[0] / errors[1]) == pytest.approx(4.0, abs=0.3)
    assert np.log2(errors[1] / errors[2]) == pytest.approx(4.0, abs=0.3)


@both_methods
def test_every_kind_of_action_on_a_lopsided_line(method: str):
    line = _lopsided()

    elements = solve_with_elements(line, CASE, 2)

    _assert_close(METHODS[method](line, [CASE]), [elements], 1e-10)


def _assert_close(solution: LineSolution, sizes: list[FiniteElements], bound: float) -> None:
    longest = max(member.length for member in solution.line.members)
    force = np.abs(solution.end_shears).max()
    for kind in KINDS:
        values = [getattr(size, kind) for size in sizes]
        expected = values[0] if len(values) == 1 else (16.0 * values[1] - values[0]) / 15.0
        largest = np.abs(expected).max()
        # What is left of larger quantities is measured by those.
        if kind == "end_moments":
            largest = max(largest, force * longest)
        elif kind == "displacements":
            largest = max(largest, np.abs(solution.rotations).max() * longest)
        np.testing.assert_allclose(
            getattr(solution, kind)[0],
            expected,
            rtol=0.0,
            atol=bound * largest,
            err_msg=kind,
        )


def _without_shear(line: Line) -> Line:
    members = tuple(
        replace(m, pieces=tuple(replace(p, shear=None) for p in m.pieces)) for m in line.members
    )
    return replace(line, members=members)


def _tapered(line: Line, seed: int) -> Line:
    """Return the line with every other member tapered or haunched."""
    import random

    rng = random.Random(seed)
    members = list(line.members)
    for index in range(0, len(members), 2):
        length, root = members[index].length, 2e7 ** (1.0 / 3.0)
        taper = (Piece(length, (root, root * eighths(rng, -0.5, 1.0)), 3.0),)
        rise = eighths(rng, 0.25, 1.0)
        haunch = (
            Piece(length / 4.0, (root * (1.0 + rise), -2.0 * rise * root, rise * root), 3.0),
            Piece(length * 0.75, (root**3,)),
        )
        members[index] = replace(members[index], pieces=rng.choice((taper, haunch)))
    return replace(line, members=tuple(members))


def _lopsided() -> Line:
    joints = (
        Joint(0, 0.0, 0.0, support=Support(RIGID, RIGID, RIGID)),
        Joint(1, 4.7, 0.0, support=Support(RIGID)),
        Joint(2, 7.9, 0.0, support=Support(3e6, 0.0, 2e6)),
        Joint(3, 13.2, 0.0, support=Support(RIGID)),
        Joint(4, 14.9, 0.0),
    )
    rigidities = ((12e6,), (7e6,), (23e6,), (5e6,))
    members = tuple(
        Member(i, i, i + 1, (Piece(joints[i + 1].x - joints[i].x, rigidity),))
        for i, rigidity in enumerate(rigidities)
    )
    actions = (
        DistributedForce(CASE, 0, 0.0, 4.7, (9e3,)),
        DistributedForce(CASE, 1, 0.6, 2.9, (2e3, 3.5e3)),
        DistributedForce(CASE, 2, 0.9, 4.1, (1e3, -2e3, 1.5e3, -2e2)),
        PointForce(CASE, 2, 3.3, 41e3),
        PointMoment(CASE, 0, 1.9, 17e3),
        ImposedCurvature(CASE, 1, 0.0, 3.2, 6e-4),
        PointForce(CASE, 3, 1.7, 8e3),
        JointMovement(CASE, 1, vertical=0.004),
        JointMovement(CASE, 2, vertical=0.003, rotation=0.001),
        JointMovement(CASE, 0, rotation=-0.002),
    )
    return Line("lopsided", joints, members, actions)
