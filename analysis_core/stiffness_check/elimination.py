"""Solving the equations of many lines at once, or of one with extra digits.

The matrix is scaled, factored once, and the solution refined by its residual.  Axial forces of
members that keep their length may be redundant (two rigid bearings in a row); the factored
matrix therefore lets each member give way a little, in proportion to its length, and the
refinement takes that back.  What is redundant comes out as if all members had one axial rigidity.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from analysis_core.errors import ModelError
from analysis_core.stiffness_check.banded import BandedFactors
from analysis_core.stiffness_check.equations import Equations

Floats = NDArray[np.float64]
Reals = NDArray[np.floating[Any]]

_GIVING_WAY = 1e-8
"""How much an axial row gives way in the factored matrix, all entries being about 1."""
_SETTLED = 1e-10
"""Changes below this part of the solution that no longer shrink are rounding."""
_NO_PIVOT = 1e-15
_PASSES = 4
_STEPS = 60


class SingularError(ArithmeticError):
    """The equations have no unique solution: some part of the line moves freely."""


def solve_together(system: Equations) -> Floats:
    """Return the unknowns (B, N, C) of B lines, residuals taken in double precision.

    Raises SingularError if any of the matrices is singular, ModelError as ``solve_alone``.
    """
    return _solve(system, np.float64, 1e-15)


def solve_alone(system: Equations) -> Floats:
    """Return the unknowns (B, N, C), residuals taken in extended precision.

    Raises SingularError where a matrix is singular, and ModelError where no axial forces can
    make the members follow the prescribed movements.
    """
    return _solve(system, np.longdouble, 1e-17)


def _solve(system: Equations, precision: type[np.floating[Any]], enough: float) -> Floats:
    lines, size, cases = system.right.shape
    if not size or not cases:
        return np.zeros((lines, size, cases))
    scaled, factor = _scaled(system)
    factors = _factored(scaled, factor)
    found = _refined(scaled, factors, precision, enough)
    return np.asarray(np.moveaxis(found, -1, 0) * factor[..., None], dtype=np.float64)


def _factored(scaled: Equations, factor: Floats) -> BandedFactors:
    """Return the factors of the softened matrices."""
    values = scaled.entries.T.copy()
    diagonal = np.flatnonzero(scaled.row == scaled.column)
    place = {int(row): int(at) for row, at in zip(scaled.row[diagonal], diagonal, strict=True)}
    soft = scaled.lengths * factor[:, scaled.axial] ** 2
    soft = _GIVING_WAY * soft / soft.max(1, keepdims=True, initial=1e-300)
    values[[place[int(row)] for row in scaled.axial]] -= soft.T
    width = int(np.abs(scaled.row - scaled.column).max(initial=0))
    factors = BandedFactors(scaled.size, width, scaled.row, scaled.column, values)
    if float(factors.smallest_pivot.min()) <= _NO_PIVOT:
        raise SingularError("zero pivot")
    return factors


def _refined(
    scaled: Equations,
    factors: BandedFactors,
    precision: type[np.floating[Any]],
    enough: float,
) -> Reals:
    """Refine until nothing changes: (N, C, B)."""
    starts = np.searchsorted(scaled.row, np.arange(scaled.size))
    entries = np.ascontiguousarray(scaled.entries.T)[:, None].astype(precision)
    right = np.ascontiguousarray(np.moveaxis(scaled.right, 0, -1)).astype(precision)
    found = np.zeros_like(right)
    last = np.inf
    for _ in range(_STEPS):
        product = np.add.reduceat(entries * found[scaled.column], starts, axis=0)
        change = factors.solve((right - product).astype(np.float64))
        found = found + change
        largest = np.abs(found).max(0)
        relative = float((np.abs(change).max(0) / np.where(largest, largest, 1.0)).max())
        if not np.isfinite(relative):
            raise SingularError("overflow")
        # Members in a row are redundant but for the rounding of their directions, which leaves
        # changes of about 1e-20 / _GIVING_WAY along the redundant force for ever.
        if relative <= enough or (relative <= _SETTLED and relative > 0.9 * last):
            return found
        last = relative
    raise ModelError(
        "The prescribed movements of supports would change the length of members, which keep "
        "it. Let a support follow, or take a movement out."
    )


def _scaled(system: Equations) -> tuple[Equations, Floats]:
    """Bring all entries towards 1 by powers of two, rows and columns alike; sort by rows.

    Returns the scaled system and the factors (B, N) that give the unknowns back.  Recipe:
    D. Ruiz, A scaling algorithm to equilibrate both rows and columns norms in matrices (2001).
    """
    order = np.lexsort((system.column, system.row))
    row, column, entries = system.row[order], system.column[order], system.entries[:, order]
    factor = np.exp2(np.round(np.log2(system.units)))
    entries = entries * factor[:, row] * factor[:, column]
    starts = np.searchsorted(row, np.arange(system.size))
    for _ in range(_PASSES):
        largest = np.maximum.reduceat(np.abs(entries), starts, axis=1)
        step = np.exp2(-np.round(np.log2(np.where(largest > 0.0, largest, 1.0)) / 2.0))
        factor *= step
        entries = entries * step[:, row] * step[:, column]
    right = system.right * factor[..., None]
    return replace(system, row=row, column=column, entries=entries, right=right), factor
