"""What a section's widths tell, level by level: effective shear area and plastic modulus.

The section is cut by horizontal lines between the levels of its vertices.  Between two levels
every edge runs one way, so widths are smooth there and Gauss points integrate them: exactly for
straight edges, to about 1e-5 for arcs.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from analysis_core.ifc.geometry.outline import Floats, arc_of, following, split_at_extremes

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(8)  # type: ignore[no-untyped-call]
# Column j of the powers belongs to the power j of u in -1..1.
_TO_POWERS = np.linalg.inv(np.vander(_NODES, 8, increasing=True))
_EXPONENTS = np.arange(1.0, 9.0)
# From values at the nodes: the integral from each node up to u = 1.
_UPWARD = ((1.0 - _NODES[:, None] ** _EXPONENTS[None, :]) / _EXPONENTS[None, :]) @ _TO_POWERS
# Beside an arc the width may end like a square root: u -> (3u - u³)/2 makes that smooth.
_CROWDED = 0.5 * (3.0 * _NODES - _NODES**3)
_CROWDED_RATE = 1.5 * (1.0 - _NODES**2)


@dataclass(frozen=True, slots=True)
class Slices:
    """Widths of a section at Gauss points of its strips, bottom strip first.

    ``levels`` bound the strips (n + 1); ``heights``, ``widths`` and ``rates`` are (n, 8): where
    each point is, the width there, and the height per step of the variable u from -1 to 1 in
    which the points are Gauss points.  ``curved`` tells the strips that touch an arc.
    """

    levels: Floats
    heights: Floats
    widths: Floats
    rates: Floats
    curved: NDArray[np.bool_]

    def integral(self, values: Floats) -> Floats:
        """Return the integral of ``values`` (n, 8) over the height of each strip."""
        return np.asarray((values * self.rates) @ _WEIGHTS)


def cut(loops: Sequence[Floats], extra_level: float | None = None) -> Slices:
    """Cut the region bounded by ``loops`` into horizontal strips."""
    starts, ends, bulges = _edges(loops)
    levels = _distinct(np.concatenate([starts[:, 1], [] if extra_level is None else [extra_level]]))
    edges = [
        _Edge(x, y, x2, y2, bulge, *_reach(levels, y, y2))
        for (x, y), (x2, y2), bulge in zip(
            starts.tolist(), ends.tolist(), bulges.tolist(), strict=True
        )
    ]
    curved = np.zeros(len(levels) - 1, dtype=np.bool_)
    for edge in edges:
        if edge.bulge:
            curved[edge.first : edge.last] = True
    half = 0.5 * np.diff(levels)[:, None]
    middle = 0.5 * (levels[1:] + levels[:-1])[:, None]
    heights = middle + half * np.where(curved[:, None], _CROWDED, _NODES)
    rates = half * np.where(curved[:, None], _CROWDED_RATE, 1.0)
    widths = np.zeros_like(heights)
    for edge in edges:
        if edge.last > edge.first:
            part = slice(edge.first, edge.last)
            across = edge.across(heights[part])
            widths[part] += across if edge.y2 > edge.y else -across
    return Slices(levels, heights, np.maximum(widths, 0.0), rates, curved)


def shear_area(slices: Slices, centroid: float, inertia: float) -> float:
    """Return the effective area for shear along y, from the strain energy of shear.

    A_s = I² / ∫ Q(y)²/b(y) dy with the static moment Q of the part above y and the width b
    there (D. Zhuravskii's shear stress, constant across the width).  A rectangle gives 5/6 of
    its area, a circle 9/10, an I-section about its web between the flange centres.
    """
    lever = (slices.heights - centroid) * slices.widths
    strips = slices.integral(lever)
    above = np.concatenate([np.cumsum(strips[::-1])[::-1][1:], [0.0]])
    static = above[:, None] + (lever * slices.rates) @ _UPWARD.T
    width = slices.widths
    energy = np.divide(static**2, width, out=np.zeros_like(static), where=width > 0.0)
    total = float(slices.integral(energy).sum())
    return inertia * inertia / total if total > 0.0 else 0.0


def plastic_modulus(loops: Sequence[Floats], slices: Slices) -> float:
    """Return the plastic section modulus about the horizontal line that halves the area."""
    level = _halving_level(slices)
    finer = cut(loops, level)
    return float(finer.integral(np.abs(finer.heights - level) * finer.widths).sum())


def _halving_level(slices: Slices) -> float:
    below = np.concatenate([[0.0], np.cumsum(slices.integral(slices.widths))])
    target = 0.5 * below[-1]
    i = min(int(np.searchsorted(below, target, side="right")) - 1, len(below) - 2)
    # Area up to u within the strip, as a polynomial; found by bisection, as it only grows.
    powers = (_TO_POWERS @ (slices.widths[i] * slices.rates[i]) / _EXPONENTS).tolist()
    wanted = target - float(below[i]) + _polynomial(powers, -1.0)
    left, right = -1.0, 1.0
    for _ in range(50):
        u = 0.5 * (left + right)
        left, right = (u, right) if _polynomial(powers, u) < wanted else (left, u)
    u = 0.5 * (left + right)
    low, high = float(slices.levels[i]), float(slices.levels[i + 1])
    along = 0.5 * (3.0 * u - u**3) if slices.curved[i] else u
    return low + 0.5 * (high - low) * (1.0 + along)


def _polynomial(powers: Sequence[float], u: float) -> float:
    value = 0.0
    for coefficient in reversed(powers):
        value = (value + coefficient) * u
    return value


class _Edge(NamedTuple):
    """An edge from (x, y) to (x2, y2) that crosses the strips ``first`` to ``last`` - 1."""

    x: float
    y: float
    x2: float
    y2: float
    bulge: float
    first: int
    last: int

    def across(self, heights: Floats) -> Floats:
        """Return where the edge is at the given heights."""
        if not self.bulge:
            return self.x + (self.x2 - self.x) / (self.y2 - self.y) * (heights - self.y)
        cx, cy, radius, _, _ = arc_of(self.x, self.y, self.x2, self.y2, self.bulge)
        reach = np.sqrt(np.maximum(radius * radius - (heights - cy) ** 2, 0.0))
        # An arc that runs one way only stays on one side of its centre.
        return np.asarray(cx + reach if 0.5 * (self.x + self.x2) > cx else cx - reach)


def _reach(levels: Floats, y: float, y2: float) -> tuple[int, int]:
    low, high = min(y, y2), max(y, y2)
    slack = 1e-9 * float(levels[-1] - levels[0])
    if high - low <= slack:
        return 0, 0
    return int(np.searchsorted(levels, low - slack)), int(np.searchsorted(levels, high - slack))


def _edges(loops: Sequence[Floats]) -> tuple[Floats, Floats, Floats]:
    parts = [split_at_extremes(rows) for rows in loops]
    starts = np.concatenate([rows[:, :2] for rows in parts])
    ends = np.concatenate([following(rows[:, :2]) for rows in parts])
    return starts, ends, np.concatenate([rows[:, 2] for rows in parts])


def _distinct(values: NDArray[np.float64]) -> Floats:
    ordered = np.sort(values)
    keep = np.concatenate([[True], np.diff(ordered) > 1e-9 * (ordered[-1] - ordered[0])])
    return np.asarray(ordered[keep])
