"""Random lines and frames of every kind against direct stiffness in extended precision."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from distribution_oracle import exact
from random_lines import beam_line, frame, plain_line

from analysis_core.distribution import solve
from analysis_core.distribution.bars import reduce
from analysis_core.distribution.translations import held_horizontally
from analysis_core.errors import ModelError
from analysis_core.model import Line

# Smallest size that counts as something: N·m and N, rad and m.
FLOORS = {
    "end_moments": 1.0,
    "end_shears": 1.0,
    "axial": 1.0,
    "reactions": 1.0,
    "rotations": 1e-5,
    "end_rotations": 1e-5,
    "displacements": 1e-5,
}


def compare(line: Line) -> None:
    """Every array of the solution agrees with the exact one to 1e-12 of its largest value.

    Where the solution is refused, the exact one (which has feeble springs everywhere) runs away.
    """
    reduction = reduce(line)
    sliding = {bar.members[0]: bar.slides for bar in reduction.bars if bar.slides is not None}
    found = exact(line, "q", held_horizontally(line, reduction.joints), sliding)
    try:
        solution = solve(line, ["q"])
    except ModelError:
        moved = [abs(x) for row in found.displacements for x in row]
        assert max(moved + [abs(x) for x in found.rotations]) > 1e12
        return
    for name, floor in FLOORS.items():
        expected = np.array(_floats(getattr(found, name)))
        scale = max(float(np.abs(expected).max()), floor)
        worst = float(np.abs(getattr(solution, name)[0] - expected).max()) / scale
        assert worst <= 1e-12, f"{name} of {line.mark} differ by {worst:.1e} of the largest"
    largest = max(float(np.abs(solution.end_moments).max()), 1.0)
    assert solution.joint_residual <= 1e-12 * max(largest, np.abs(solution.reactions).max())
    assert solution.continuity_residual <= 1e-13 + 1e-12 * np.abs(solution.end_rotations).max()


def _floats(nested: Any) -> Any:
    return [_floats(item) for item in nested] if isinstance(nested, list) else float(nested)


@pytest.mark.parametrize("seed", range(1000, 1030))
def test_a_random_beam_line_agrees_with_extended_precision(seed: int) -> None:
    compare(beam_line(seed))


@pytest.mark.parametrize("seed", range(2000, 2012))
def test_a_random_frame_agrees_with_extended_precision(seed: int) -> None:
    compare(frame(seed))


@pytest.mark.parametrize("seed", range(3000, 3025))
def test_a_random_plain_line_agrees_with_extended_precision(seed: int) -> None:
    compare(plain_line(seed))
