"""Moments that the actions of a member would cause if both its ends were held."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.effects import segments
from analysis_core.effects.fields import equilibrium
from analysis_core.effects.polynomials import product
from analysis_core.model import Line

Floats = NDArray[np.float64]


def full_fixed_end_moments(line: Line, cases: Sequence[str]) -> Floats:
    """Return the diagram moments at start and end with both ends fixed: (C, M, 2), N·m.

    By the theorem of virtual work with the two unit end moments, over the rigidity as it varies;
    hogging negative.
    """
    rows = segments.rows([line])
    block = segments.block(rows, [{name: c for c, name in enumerate(cases)}], len(cases))
    simple = np.zeros((len(cases), 2, len(rows)))
    moment, shear = equilibrium(block, simple)
    units = _unit_moments(block.cuts)
    out = np.empty((len(cases), len(rows), 2))
    width = np.diff(block.cuts, axis=0)
    flexible = np.array([[_work(block, width, a, b) for b in units] for a in units])
    for i, (virtual, virtual_shear) in enumerate(units):
        turned = _integral(product(_bent(block, moment), virtual[:, :, None]), width[:, None])
        if len(block.shear):
            sheared = product(shear, block.shear[:, :, None])
            turned += _integral(product(sheared, virtual_shear[:, :, None]), width[:, None])
        out[:, :, i] = -turned
    return np.asarray(np.linalg.solve(np.moveaxis(flexible, 2, 0), out[..., None])[..., 0])


def _unit_moments(cuts: Floats) -> list[tuple[Floats, Floats]]:
    """Moment and shear of a unit diagram moment at the start and at the end."""
    length, width = cuts[-1], np.diff(cuts, axis=0)
    rising = np.stack([cuts[:-1] / length, width / length])
    falling = np.stack([1.0 - cuts[:-1] / length, -width / length])
    slope = np.broadcast_to(1.0 / length, (1, *width.shape))
    return [(falling, -slope), (rising, slope)]


def _bent(block: segments.Block, moment: Floats) -> Floats:
    curvature = product(moment, block.bending[:, :, None])
    curvature[0] += block.curvature
    return curvature


def _work(
    block: segments.Block, width: Floats, a: tuple[Floats, Floats], b: tuple[Floats, Floats]
) -> Floats:
    total = _integral(product(product(a[0], block.bending), b[0]), width)
    if len(block.shear):
        total += _integral(product(product(a[1], block.shear), b[1]), width)
    return total


def _integral(polynomials: Floats, width: Floats) -> Floats:
    """Over the whole member: t runs from 0 to 1 along each segment; (P, K, ...) to (...)."""
    by_segment = sum(c / (p + 1) for p, c in enumerate(polynomials))
    return np.asarray(np.sum(by_segment * width, axis=0))
