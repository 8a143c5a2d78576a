"""End rotations and shears of uniform simple beams under many actions at once.

By Maxwell's reciprocity the rotation of an end under a unit force at ``x`` equals the
deflection at ``x`` under a unit couple at that end, a cubic; the actions are integrated against
that cubic with just enough Gauss points to be exact.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np
from numpy.typing import NDArray

from analysis_core.model import (
    Action,
    DistributedForce,
    ImposedCurvature,
    PointForce,
    PointMoment,
)

Floats = NDArray[np.float64]


class Rows:
    """Actions sorted by kind, in flat lists of numbers: quick to fill, quick to turn into arrays.

    ``slot`` is where the effect of an action goes, ``index`` the member it acts on.
    """

    def __init__(self, slots: int) -> None:
        self.slots = slots
        self.forces: list[float] = []
        self.couples: list[float] = []
        self.curvatures: list[float] = []
        self.spreads: list[float] = []
        self.across = Coefficients()
        self.along = Coefficients()

    def add(self, slot: int, index: int, action: Action) -> None:
        """Note one action on a member."""
        if isinstance(action, DistributedForce):
            self.spreads += (slot, index, action.start, action.end)
            self.across.add(action.transverse)
            self.along.add(action.axial)
        elif isinstance(action, PointForce):
            self.forces += (slot, index, action.position, action.transverse, action.axial)
        elif isinstance(action, PointMoment):
            self.couples += (slot, index, action.position, action.moment)
        elif isinstance(action, ImposedCurvature):
            self.curvatures += (slot, index, action.start, action.end, action.curvature)


class Coefficients:
    """Polynomials of different degrees."""

    def __init__(self) -> None:
        self._values: list[float] = []
        self._widths: list[int] = []

    def add(self, coefficients: tuple[float, ...]) -> None:
        """Note one polynomial, the constant first."""
        self._values += coefficients
        self._widths.append(len(coefficients))

    def table(self) -> Floats:
        """Return (N, D) with zeros behind the shorter ones; at least one column."""
        widths = np.array(self._widths)
        filled = np.arange(max(1, int(widths.max(initial=0)))) < widths[:, None]
        table = np.zeros(filled.shape)
        table[filled] = self._values
        return table


@dataclass(frozen=True, slots=True, eq=False)
class Sums:
    """Per slot: end rotations (S, 2) rad, simple-beam shears (S, 2) N, and the shares (S, 2) N
    of the axial action that would fall to each end if both were held."""

    turned: Floats
    across: Floats
    along: Floats


def rotations_and_forces(rows: Rows, length: Floats, bending: Floats, shear: Floats) -> Sums:
    """Sum up all actions.  ``length`` m, ``bending`` 1/EI and ``shear`` 1/GA of each member."""
    sums = Sums(np.zeros((rows.slots, 2)), np.zeros((rows.slots, 2)), np.zeros((rows.slots, 2)))
    _add_spreads(sums, rows, length, bending)
    _add_forces(sums, rows, length, bending)
    _add_couples(sums, rows, length, bending, shear)
    _add_curvatures(sums, rows, length, bending)
    return sums


@lru_cache
def gauss_points(count: int) -> tuple[Floats, Floats]:
    """Return nodes (-1 to 1) and weights of Gauss-Legendre quadrature."""
    nodes, weights = np.polynomial.legendre.leggauss(count)  # type: ignore[no-untyped-call,unused-ignore]
    return nodes, weights


def _add_spreads(sums: Sums, rows: Rows, length: Floats, bending: Floats) -> None:
    if not rows.spreads:
        return
    slot, index, start, end = _columns(rows.spreads, 4)
    span, reach = length[index], end - start
    across, along = rows.across.table(), rows.along.table()
    # The cubic times a polynomial of degree d is exact with (d + 5) // 2 points.
    nodes, weights = gauss_points((across.shape[1] + 4) // 2)
    v = reach[:, None] * (nodes + 1.0) / 2.0
    weight = reach[:, None] * weights / 2.0 * _polynomial(across, v)
    x = start[:, None] + v
    near, far = _deflections(x, span[:, None])
    soft = bending[index]
    total, lever = weight.sum(1), (weight * x).sum(1)
    _put(sums.turned, slot, (weight * near).sum(1) * soft, (weight * far).sum(1) * soft)
    _put(sums.across, slot, total - lever / span, -lever / span)
    power = np.arange(1, along.shape[1] + 1)
    axial = (along * reach[:, None] ** power / power).sum(1)
    about = axial * start + (along * reach[:, None] ** (power + 1) / (power + 1)).sum(1)
    _put(sums.along, slot, axial - about / span, about / span)


def _add_forces(sums: Sums, rows: Rows, length: Floats, bending: Floats) -> None:
    if not rows.forces:
        return
    slot, index, x, force, axial = _columns(rows.forces, 5)
    span = length[index]
    near, far = _deflections(x, span)
    work = force * bending[index]
    _put(sums.turned, slot, work * near, work * far)
    _put(sums.across, slot, force * (1.0 - x / span), -force * x / span)
    _put(sums.along, slot, axial * (1.0 - x / span), axial * x / span)


def _add_couples(sums: Sums, rows: Rows, length: Floats, bending: Floats, shear: Floats) -> None:
    if not rows.couples:
        return
    slot, index, x, couple = _columns(rows.couples, 4)
    span = length[index]
    soft, sliding = bending[index] / (6.0 * span), shear[index] / span
    near = (2.0 * span**2 - 6.0 * span * x + 3.0 * x**2) * soft + sliding
    far = (3.0 * x**2 - span**2) * soft + sliding
    _put(sums.turned, slot, couple * near, couple * far)
    _put(sums.across, slot, -couple / span, -couple / span)


def _add_curvatures(sums: Sums, rows: Rows, length: Floats, bending: Floats) -> None:
    if not rows.curvatures:
        return
    slot, index, start, end, curvature = _columns(rows.curvatures, 5)
    # Members of varying rigidity (bending 0 here) have their rotations from elsewhere.
    here = np.where(bending[index] > 0.0, curvature, 0.0)
    far = -here * (end - start) * (end + start) / (2.0 * length[index])
    _put(sums.turned, slot, here * (end - start) + far, far)


def _deflections(x: Floats, span: Floats) -> tuple[Floats, Floats]:
    """Deflection times EI at ``x`` under a unit clockwise couple at the start and at the end."""
    both = x * (span - x) / (6.0 * span)
    return both * (2.0 * span - x), -both * (span + x)


def _columns(numbers: list[float], width: int) -> tuple[Any, ...]:
    table = np.array(numbers).reshape(-1, width)
    slot, index = table[:, 0].astype(np.intp), table[:, 1].astype(np.intp)
    return (slot, index, *table.T[2:])


def _polynomial(coefficients: Floats, v: Floats) -> Floats:
    value = np.zeros_like(v)
    for column in coefficients.T[::-1]:
        value = value * v + column[:, None]
    return value


def _put(target: Floats, slot: NDArray[np.intp], start: Floats, end: Floats) -> None:
    target[:, 0] += np.bincount(slot, start, minlength=len(target))
    target[:, 1] += np.bincount(slot, end, minlength=len(target))
