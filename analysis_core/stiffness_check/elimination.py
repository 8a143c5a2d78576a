"""Solving the equations: many small systems at once, or one of any size with extra digits.

Both scale the matrix, factor it once and refine the solution by its residual.  Axial forces of
members that keep their length may be redundant (two rigid bearings in a row); the factored
matrix therefore lets each member give way a little, in proportion to its length, and the
refinement takes that back.  What is redundant comes out as if all members had one axial rigidity.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import ModelError
from analysis_core.stiffness_check.banded import BandedFactors
from analysis_core.stiffness_check.equations import Equations

Floats = NDArray[np.float64]
Index = NDArray[np.intp]

_GIVING_WAY = 1e-8
"""How much an axial row gives way in the factored matrix, all entries being about 1."""
_DENSE = 300
"""Largest number of unknowns that is always solved as a full matrix."""
_SETTLED = 1e-10
"""Changes below this part of the solution that no longer shrink are rounding."""
_PASSES = 4
_STEPS = 60


class SingularError(ArithmeticError):
    """The equations have no unique solution: some part of the line moves freely."""


def solve_together(system: Equations) -> Floats:
    """Return the unknowns (B, N, C) of B small systems.

    Raises SingularError if any of the systems is singular.
    """
    scaled, factor = _scaled(system)
    lines, size, _ = scaled.right.shape
    matrix = np.zeros((lines, size, size))
    matrix[:, scaled.row, scaled.column] = scaled.entries
    softened = matrix
    axial = scaled.axial
    if axial.size:
        softened = matrix.copy()
        softened[:, axial, axial] -= _giving_way(scaled, factor)
    try:
        inverse = np.linalg.inv(softened)
    except np.linalg.LinAlgError as error:
        raise SingularError("singular matrix") from error
    found = _refined(inverse, matrix, scaled.right, steps=8 if axial.size else 1)
    return found * factor[..., None]


def _refined(inverse: Floats, matrix: Floats, right: Floats, *, steps: int) -> Floats:
    found = inverse @ right
    for _ in range(steps):
        change = inverse @ (right - matrix @ found)
        found = found + change
        if np.all(np.abs(change).max(1, initial=0.0) <= 1e-15 * np.abs(found).max(1, initial=0.0)):
            break
    return found


def solve_alone(system: Equations) -> Floats:
    """Return the unknowns (N, C) of one system (B = 1), residuals taken in extended precision.

    Raises SingularError where the matrix is singular, and ModelError where no axial forces can
    make the members follow the prescribed movements.
    """
    scaled, factor = _scaled(system)
    solve = _factored(scaled, factor)
    found, converged = _refined_alone(scaled, solve)
    if not converged:
        raise ModelError(
            "The prescribed movements of supports would change the length of members, which "
            "keep it. Let a support follow, or take a movement out."
        )
    return np.asarray(found * factor[0, :, None], dtype=np.float64)


def _factored(scaled: Equations, factor: Floats) -> Callable[[Floats], Floats]:
    """Return a function that solves with the softened matrix of one system."""
    size = scaled.size
    values = scaled.entries[0].copy()
    diagonal = np.flatnonzero(scaled.row == scaled.column)
    place = {int(row): int(at) for row, at in zip(scaled.row[diagonal], diagonal, strict=True)}
    values[[place[int(row)] for row in scaled.axial]] -= _giving_way(scaled, factor)[0]
    width = int(np.abs(scaled.row - scaled.column).max(initial=0))
    if size > _DENSE and 4 * width < size:
        factors = BandedFactors(size, width, scaled.row, scaled.column, values)
        if factors.smallest_pivot <= 1e-15:
            raise SingularError("zero pivot")
        return factors.solve
    matrix = np.zeros((size, size))
    matrix[scaled.row, scaled.column] = values
    try:
        inverse = np.linalg.inv(matrix)
    except np.linalg.LinAlgError as error:
        raise SingularError("singular matrix") from error
    return lambda right: inverse @ right


def _giving_way(scaled: Equations, factor: Floats) -> Floats:
    """Return what is taken off the diagonal of the axial rows (B, A)."""
    soft = scaled.lengths * factor[:, scaled.axial] ** 2
    return np.asarray(_GIVING_WAY * soft / soft.max(1, keepdims=True, initial=1e-300))


def _refined_alone(
    scaled: Equations, solve: Callable[[Floats], Floats]
) -> tuple[NDArray[np.longdouble], bool]:
    """Refine until nothing changes; tell whether that was reached."""
    starts = np.searchsorted(scaled.row, np.arange(scaled.size))
    entries = scaled.entries[0].astype(np.longdouble)[:, None]
    right = scaled.right[0].astype(np.longdouble)
    found = np.zeros_like(right)
    if not found.size:
        return found, True
    last = np.inf
    for _ in range(_STEPS):
        product = np.add.reduceat(entries * found[scaled.column], starts, axis=0)
        change = solve((right - product).astype(np.float64))
        found = found + change
        largest = np.abs(found).max(0)
        relative = float((np.abs(change).max(0) / np.where(largest, largest, 1.0)).max())
        if not np.isfinite(relative):
            raise SingularError("overflow")
        # Members in a row are redundant but for the rounding of their directions, which leaves
        # changes of about 1e-20 / _GIVING_WAY along the redundant force for ever.
        if relative <= 1e-17 or (relative <= _SETTLED and relative > 0.9 * last):
            return found, True
        last = relative
    return found, False


def _scaled(system: Equations) -> tuple[Equations, Floats]:
    """Bring all entries towards 1 by powers of two, rows and columns alike; sort by rows.

    Returns the scaled system and the factors (B, N) that give the unknowns back.  Recipe:
    D. Ruiz, A scaling algorithm to equilibrate both rows and columns norms in matrices (2001).
    """
    order = np.lexsort((system.column, system.row))
    row, column, entries = system.row[order], system.column[order], system.entries[:, order]
    factor = np.exp2(np.round(np.log2(system.units)))
    entries = entries * factor[:, row] * factor[:, column]
    if not system.size:
        return replace(system, row=row, column=column, entries=entries), factor
    starts = np.searchsorted(row, np.arange(system.size))
    for _ in range(_PASSES):
        largest = np.maximum.reduceat(np.abs(entries), starts, axis=1)
        step = np.exp2(-np.round(np.log2(np.where(largest > 0.0, largest, 1.0)) / 2.0))
        factor *= step
        entries = entries * step[:, row] * step[:, column]
    right = system.right * factor[..., None]
    return replace(system, row=row, column=column, entries=entries, right=right), factor
