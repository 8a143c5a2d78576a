"""Random lines and frames against exact solutions in rational numbers (SymPy).

The exact values carry no rounding of their own: what is left is the error of the method under
test, bounded relative to the largest value of each kind.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
import pytest
from exact_lines import Exact, solve_exactly
from exact_random import CASE, beam_line, gable

from analysis_core import distribution
from analysis_core.model import (
    RIGID,
    DistributedForce,
    Joint,
    Line,
    Member,
    Piece,
    Support,
)
from analysis_core.results import LineSolution
from analysis_core.stiffness_check import solve_stiffness

METHODS: dict[str, Callable[[Line, Sequence[str]], LineSolution]] = {
    "distribution": distribution.solve,
    "stiffness": solve_stiffness,
}
KINDS = ("end_moments", "end_shears", "rotations", "displacements", "reactions")

both_methods = pytest.mark.parametrize("method", METHODS)


@both_methods
@pytest.mark.parametrize("seed", range(60))
def test_random_beam_lines_are_exact(seed: int, method: str):
    line = beam_line(seed)

    # Turning springs up to a million times weaker than their members leave 1e-13 or so.
    _assert_close(METHODS[method](line, [CASE]), solve_exactly(line, CASE), 1e-12)


@both_methods
@pytest.mark.parametrize("seed", range(60))
def test_random_frames_are_exact(seed: int, method: str):
    line = gable(seed)

    _assert_close(METHODS[method](line, [CASE]), solve_exactly(line, CASE), 3e-14)


@both_methods
@pytest.mark.parametrize("seed", range(100, 150))
def test_rigidities_a_million_times_apart_cost_no_digits(seed: int, method: str):
    line = beam_line(seed, ratio=6, plain=True)

    _assert_close(METHODS[method](line, [CASE]), solve_exactly(line, CASE), 3e-14)


@both_methods
@pytest.mark.parametrize("seed", range(100, 150))
def test_so_they_do_in_frames(seed: int, method: str):
    line = gable(seed, ratio=6)

    # Imposed movements and curvatures of the stiffest members cancel to what is left here.
    _assert_close(METHODS[method](line, [CASE]), solve_exactly(line, CASE), 1e-12)


def test_the_exact_solver_meets_the_propped_cantilever():
    # AISC Steel Construction Manual, Table 3-23, case 12: M = wL²/8, R = 3wL/8 at the prop.
    joints = (
        Joint(0, 0.0, 0.0, support=Support(RIGID, RIGID, RIGID)),
        Joint(1, 5.0, 0.0, support=Support(RIGID)),
    )
    member = Member(0, 0, 1, (Piece(5.0, (12e6,)),))
    load = DistributedForce(CASE, 0, 0.0, 5.0, (8e3,))
    exact = solve_exactly(Line("propped", joints, (member,), (load,)), CASE)

    assert exact.end_moments.tolist() == [[-25e3, 0.0]]
    assert exact.reactions[1].tolist() == [0.0, 15e3, 0.0]
    assert exact.rotations[1] == pytest.approx(-8e3 * 5.0**3 / 48.0 / 12e6, rel=1e-15)


def _assert_close(solution: LineSolution, exact: Exact, bound: float) -> None:
    longest = max(member.length for member in solution.line.members)
    for kind in KINDS:
        expected = getattr(exact, kind)
        # A clamp of 1e200 N·m/rad may stand for a rigid support: 1e-100 counts as nothing.
        largest = max(np.abs(expected).max(), 1e-100)
        if kind == "end_moments":
            # End moments may be what is left of much larger moments in the span.
            largest = max(largest, np.abs(exact.end_shears).max() * longest)
        np.testing.assert_allclose(
            getattr(solution, kind)[0], expected, rtol=0.0, atol=bound * largest, err_msg=kind
        )
