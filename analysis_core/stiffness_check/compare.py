"""How far a solution is from the independent one."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import AnalysisError
from analysis_core.results import LineSolution
from analysis_core.stiffness_check.arrays import gather
from analysis_core.stiffness_check.elimination import SingularError, solve_alone
from analysis_core.stiffness_check.equations import equations
from analysis_core.stiffness_check.pattern import Pattern, numbering
from analysis_core.stiffness_check.plain_check import plain_difference
from analysis_core.stiffness_check.solution import (
    Solved,
    line_pattern,
    solve_group,
    spread,
)

Floats = NDArray[np.float64]

_FEW = 8
"""Fewer lines than this are checked one by one."""
_NUMBERS = 1_500_000
"""Entries of the lines that are solved together, at most: about what a cache holds."""
_DOUBTFUL = 1e-11
"""A difference above this is looked at again with extended precision."""
_NOTHING = 1e-8
"""A kind of quantity smaller than this part of what the actions could cause is rounding."""


def largest_difference(solution: LineSolution) -> float:
    """Return the largest relative difference of ``solution`` from the independent solution.

    Over end moments, shears, reactions with axial forces, and joint rotations, in every case;
    relative to the largest quantity of the same kind in the line and case (to what the actions
    could cause, where all of that kind are zero but for rounding).  Reactions and axial forces
    are compared through the equilibrium of every joint under the independent shears, for
    equilibrium alone does not settle all of them (two rigid horizontal supports in a row).
    Infinite where the independent method refuses the line.
    """
    value = plain_difference(solution)
    return value if value is not None and value <= _DOUBTFUL else _alone(solution)


def largest_differences(solutions: Sequence[LineSolution]) -> list[float]:
    """Return ``largest_difference`` of many solutions; lines of one pattern go together."""
    if len(solutions) < _FEW:
        return [largest_difference(solution) for solution in solutions]
    found = [0.0] * len(solutions)
    groups: dict[tuple[Pattern, int], list[int]] = {}
    for place, solution in enumerate(solutions):
        if solution.cases:
            pattern = line_pattern(solution.line, solution.cases)
            groups.setdefault((pattern, len(solution.cases)), []).append(place)
    for (pattern, _), places in groups.items():
        for part in _parts(pattern, places):
            several = [solutions[place] for place in part]
            for place, value in zip(part, _together(pattern, several), strict=True):
                found[place] = value
    return found


def _parts(pattern: Pattern, places: list[int]) -> list[list[int]]:
    numbers = numbering(pattern)
    step = max(1, _NUMBERS // max(1, numbers.size * (3 * numbers.width + 1)))
    return [places[start : start + step] for start in range(0, len(places), step)]


def _together(pattern: Pattern, solutions: Sequence[LineSolution]) -> list[float]:
    if len(solutions) == 1:
        return [_alone(solutions[0])]
    solved = solve_group(
        pattern,
        [solution.line for solution in solutions],
        [solution.cases for solution in solutions],
    )
    if solved is None:
        return [_alone(solution) for solution in solutions]
    values = _differences(solved, solutions).tolist()
    return [
        value if value <= _DOUBTFUL else _alone(solution)
        for value, solution in zip(values, solutions, strict=True)
    ]


def _alone(solution: LineSolution) -> float:
    line, cases = solution.line, solution.cases
    if not cases:
        return 0.0
    pattern = line_pattern(line, cases)
    numbers = numbering(pattern)
    try:
        arrays = gather([line], [cases])
        system = equations(pattern, numbers, arrays)
        unknowns = solve_alone(system)
    except (AnalysisError, SingularError):
        return math.inf
    solved = spread(pattern, numbers, arrays, unknowns)
    return float(_differences(solved, [solution])[0])


def _differences(solved: Solved, solutions: Sequence[LineSolution]) -> Floats:
    """Return the largest relative difference of each line (B,)."""
    scale = _Scale(solved)
    resisted = _resisted(solved)
    gaps = [
        _relative(
            solved.moments - _stacked([s.end_moments for s in solutions]),
            solved.moments,
            scale.moment,
        ),
        _relative(
            solved.shears - _stacked([s.end_shears for s in solutions]),
            solved.shears,
            scale.force,
        ),
        _relative(
            (solved.movements[:, :, 2] - _stacked([s.rotations for s in solutions]))
            * resisted[:, :, None],
            solved.movements[:, :, 2],
            scale.rotation,
        ),
        _relative(
            solved.reactions[:, :, 2] - _stacked([s.reactions[..., 2] for s in solutions]),
            np.concatenate([solved.reactions[:, :, 2], _ends(solved.moments)], axis=1),
            scale.moment,
        ),
        _relative(
            _unbalanced(solved, solutions),
            np.concatenate(
                [solved.reactions[:, :, :2].reshape(*_flat(solved)), _ends(solved.shears)], 1
            ),
            scale.force,
        ),
    ]
    return np.asarray(np.max(gaps, axis=0))


def _flat(solved: Solved) -> tuple[int, int, int]:
    lines, joints, _, cases = solved.reactions.shape
    return lines, joints * 2, cases


def _ends(values: Floats) -> Floats:
    lines, members, _, cases = values.shape
    return values.reshape(lines, members * 2, cases)


def _stacked(values: Sequence[Floats]) -> Floats:
    """Return (B, ..., C) from arrays that have the case first."""
    return np.moveaxis(np.stack(values), 1, -1)


def _relative(gap: Floats, quantity: Floats, possible: Floats) -> Floats:
    """Return (B,): the largest |gap| over the largest |quantity| of each line and case."""
    lines, cases = gap.shape[0], gap.shape[-1]
    gaps = np.abs(gap).reshape(lines, -1, cases).max(1)
    largest = np.abs(quantity).reshape(lines, -1, cases).max(1)
    scale = np.where(largest > _NOTHING * possible, largest, possible)
    with np.errstate(invalid="ignore", divide="ignore"):
        ratio = np.where(gaps == 0.0, 0.0, gaps / scale)
    return np.asarray(np.where(np.isnan(ratio), np.inf, ratio).max(1))


class _Scale:
    """What the actions of each line and case could cause at most: (B, C) each."""

    def __init__(self, solved: Solved) -> None:
        arrays = solved.arrays
        length = arrays.length[..., None]
        shortest, longest = length.min(1), length.max(1)
        stiff = 1.0 / arrays.flexibility[..., [0, 2]].min(-1)[..., None]
        turned = np.abs(arrays.turned).max(2)
        moved = np.abs(arrays.moved)
        slope = moved[:, :, :2].max((1, 2)) / shortest + moved[:, :, 2].max(1)
        force = np.maximum(
            np.abs(arrays.across).max((1, 2)), np.abs(arrays.forces[:, :, :2]).max((1, 2))
        )
        force = np.maximum(force, np.abs(solved.shears).max((1, 2)))
        force = np.maximum(force, np.abs(solved.axial).max((1, 2)))
        couple = np.abs(arrays.forces[:, :, 2]).max(1)
        held = (stiff * turned).max(1) + stiff.max(1) * slope
        self.moment = np.maximum(held, np.maximum(force * longest, couple))
        self.force = np.maximum(force, self.moment / longest)
        self.rotation = np.maximum(turned.max(1) + slope, self.moment / stiff.max(1))


def _resisted(solved: Solved) -> Floats:
    """Return 1 for joints whose rotation is settled by a member or a support, else 0: (1, J)."""
    resisted = ~np.array([free[2] for free in solved.pattern.free])
    resisted |= np.array([sprung[2] for sprung in solved.pattern.sprung])
    for ends, moments in zip(solved.pattern.ends, solved.pattern.moments, strict=True):
        for k in (0, 1):
            resisted[ends[k]] |= moments[k]
    return resisted[None].astype(np.float64)


def _unbalanced(solved: Solved, solutions: Sequence[LineSolution]) -> Floats:
    """Return the force left over at every joint (B, 2·J, C), N right and down.

    Independent shears, the axial forces and reactions of the solutions, the actions.
    """
    given = _stacked([s.axial for s in solutions])
    reactions = _stacked([s.reactions for s in solutions])
    balance = solved.forces.copy()
    arrays = solved.arrays
    along = np.stack([arrays.cosine, -arrays.sine], axis=-1)
    for index, ends in enumerate(solved.pattern.ends):
        change = given[:, index] - solved.axial[:, index]
        for k, sign in ((0, 1.0), (1, -1.0)):
            balance[:, ends[k]] += sign * along[:, index, :, None] * change[:, k, None]
    balance[:, :, 0] += reactions[:, :, 0]
    balance[:, :, 1] -= reactions[:, :, 1]
    lines, joints, _, cases = balance.shape
    return balance.reshape(lines, joints * 2, cases)
