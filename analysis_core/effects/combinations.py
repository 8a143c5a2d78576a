"""Superposition: results and actions of combinations from those of the cases."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import (
    Action,
    Combination,
    DistributedForce,
    ImposedCurvature,
    JointForce,
    JointMovement,
    Line,
    PointForce,
    PointMoment,
)
from analysis_core.results import LineSolution

Floats = NDArray[np.float64]


def combine(solution: LineSolution, combinations: Sequence[Combination]) -> LineSolution:
    """Return the solution with one entry per combination; its ``cases`` are their names.

    A case that a combination names and the solution lacks contributes nothing: no action of it
    stands on this line.
    """
    cases = solution.cases
    return replace(
        solution,
        cases=tuple(c.name for c in combinations),
        end_moments=superpose(solution.end_moments, cases, combinations),
        end_shears=superpose(solution.end_shears, cases, combinations),
        axial=superpose(solution.axial, cases, combinations),
        rotations=superpose(solution.rotations, cases, combinations),
        end_rotations=superpose(solution.end_rotations, cases, combinations),
        displacements=superpose(solution.displacements, cases, combinations),
        reactions=superpose(solution.reactions, cases, combinations),
    )


def superpose(values: Floats, cases: Sequence[str], combinations: Sequence[Combination]) -> Floats:
    """Return sums of ``values`` (C, ...) by the factors of each combination: (N, ...).

    Added in the order of the cases, so that equal input gives equal bits.
    """
    out = np.zeros((len(combinations), *values.shape[1:]))
    for total, combination in zip(out, combinations, strict=True):
        for case, value in zip(cases, values, strict=True):
            if factor := combination.factors.get(case, 0.0):
                total += factor * value
    out.flags.writeable = False
    return out


def combine_line(line: Line, combinations: Sequence[Combination]) -> Line:
    """Return the line with the factored actions of each combination as a case of its name."""
    actions = tuple(
        factored(action, combination.factors[action.case], case=combination.name)
        for combination in combinations
        for action in line.actions
        if combination.factors.get(action.case, 0.0)
    )
    return replace(line, actions=actions)


def scaled_line(line: Line, factors: Mapping[str, float]) -> Line:
    """Return the line with the actions of the named cases multiplied; the others as they are."""
    return replace(
        line,
        actions=tuple(
            factored(action, factors[action.case]) if action.case in factors else action
            for action in line.actions
        ),
    )


def factored(action: Action, factor: float, *, case: str | None = None) -> Action:
    """Return the action times ``factor``, in another case if one is given."""
    name = action.case if case is None else case
    match action:
        case DistributedForce():
            return replace(
                action,
                case=name,
                transverse=tuple(factor * value for value in action.transverse),
                axial=tuple(factor * value for value in action.axial),
            )
        case PointForce():
            return replace(
                action,
                case=name,
                transverse=factor * action.transverse,
                axial=factor * action.axial,
            )
        case PointMoment():
            return replace(action, case=name, moment=factor * action.moment)
        case ImposedCurvature():
            return replace(action, case=name, curvature=factor * action.curvature)
        case JointForce():
            return replace(
                action,
                case=name,
                horizontal=factor * action.horizontal,
                vertical=factor * action.vertical,
                moment=factor * action.moment,
            )
        case JointMovement():
            return replace(
                action,
                case=name,
                horizontal=factor * action.horizontal,
                vertical=factor * action.vertical,
                rotation=factor * action.rotation,
            )
