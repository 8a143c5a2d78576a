"""A plan area with voids, and what of a ray lies in it."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from analysis_core.idealise.plan import Spot

Floats = NDArray[np.float64]
TOUCH = 1e-6
"""Lengths below this are nothing (m)."""


class Region:
    """A plan area with voids.  Measures what of a ray lies in it."""

    def __init__(self, outline: Sequence[Spot], voids: Sequence[Sequence[Spot]] = ()) -> None:
        rings = [_turned(np.asarray(outline, float), 1.0)]
        rings += [_turned(np.asarray(void, float), -1.0) for void in voids]
        self._rim = len(rings[0])
        self.start = np.concatenate(rings)
        self.end = np.concatenate([np.roll(ring, -1, axis=0) for ring in rings])
        self.area = float(sum(_signed_area(ring) for ring in rings))

    def crossings(self, base: Floats, direction: Floats) -> tuple[Floats, Floats]:
        """Return (distance, sense) of every edge for rays from ``base`` (n, 2).

        ``direction`` is (2,) or (n, 2).  Sense 1 where the ray leaves, -1 where it enters, 0
        where it misses the edge.  An edge owns its lower end only, so that no corner counts twice.
        """
        direction = np.broadcast_to(direction, base.shape)
        a = self.start[None] - base[:, None]
        b = self.end[None] - base[:, None]
        side_a = cross(direction[:, None], a)
        side_b = cross(direction[:, None], b)
        hit = (side_a > 0.0) != (side_b > 0.0)
        step = np.where(hit, side_a - side_b, 1.0)
        share = np.where(hit, side_a / step, 0.0)
        spot = a + share[..., None] * (b - a)
        distance = np.einsum("nkj,nj->nk", spot, direction)
        return distance, np.where(hit, np.where(side_b > side_a, 1.0, -1.0), 0.0)

    def chord(self, base: Floats, direction: Floats, reach: Floats) -> Floats:
        """Return the length of each ray within the region, from its base to ``reach``."""
        distance, sense = self.crossings(base, direction)
        return np.asarray((sense * np.clip(distance, 0.0, reach[:, None])).sum(axis=1))

    def sector(self, base: Floats, direction: Floats, reach: Floats) -> Floats:
        """Return half the square of the lengths of rays within the region: area per radian."""
        distance, sense = self.crossings(base, direction)
        squares = np.clip(distance, 0.0, reach[:, None]) ** 2
        return np.asarray(0.5 * (sense * squares).sum(axis=1))

    def way_through(self, base: Floats, direction: Floats) -> tuple[Floats, Floats]:
        """Return where each ray is first in the outline (0 from within), and first leaves it.

        Voids do not count: a strip goes on behind an opening.  Both are infinite for a ray that
        misses the outline.
        """
        distance, sense = self.crossings(base, direction)
        distance, sense = distance[:, : self._rim], sense[:, : self._rim]
        leaving = np.where((sense > 0.0) & (distance > TOUCH), distance, np.inf).min(axis=1)
        ahead = np.where((sense < 0.0) & (distance > TOUCH), distance, np.inf).min(axis=1)
        return np.where(
            ahead < leaving, ahead, np.where(np.isfinite(leaving), 0.0, np.inf)
        ), leaving


def _turned(ring: Floats, sense: float) -> Floats:
    """Return a ring that runs counter-clockwise (sense 1) or clockwise."""
    return ring if _signed_area(ring) * sense > 0.0 else ring[::-1]


def _signed_area(ring: Floats) -> float:
    shifted = ring - ring[0]
    return float(0.5 * cross(shifted, np.roll(shifted, -1, axis=0)).sum())


def cross(a: Floats, b: Floats) -> Floats:
    """Return the vertical component of the vector product of plan vectors (..., 2)."""
    return np.asarray(a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0])
