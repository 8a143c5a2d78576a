"""Finding everything that thousands of beams may bear on."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from analysis_core.building import Carrier
from analysis_core.idealise.beams import Beam
from analysis_core.idealise.bearings import (
    RANK,
    SKEW,
    Bearing,
    bearings_on_beam,
    bearings_on_carrier,
    kind_of,
)
from analysis_core.idealise.pairs import Floats, overlapping
from analysis_core.settings import Tolerances


def find_bearings(
    beams: list[Beam], carriers: Sequence[Carrier], tolerances: Tolerances
) -> dict[str, list[Bearing]]:
    """Return every place where each beam may bear, by GlobalId and in order along it."""
    known = [c for c in carriers if len(c.corners) >= 3 and kind_of(c) is not None]
    known.sort(key=lambda carrier: carrier.global_id)
    found: dict[str, list[Bearing]] = {beam.id: [] for beam in beams}
    boxes = boxes_of_beams(beams, tolerances.bearing)
    for i, j in _pairs_with_carriers(beams, boxes, known):
        found[beams[i].id].extend(bearings_on_carrier(beams[i], known[j], tolerances))
    for i, j in _crossing_pairs(beams, boxes, tolerances):
        found[beams[i].id].extend(bearings_on_beam(beams[i], beams[j], tolerances))
    for bearings in found.values():
        bearings.sort(key=lambda b: (b.along, RANK[b.kind], b.id))
    return found


def _pairs_with_carriers(
    beams: list[Beam], boxes: Floats, carriers: Sequence[Carrier]
) -> Iterator[tuple[int, int]]:
    """Pairs of a beam and a carrier near it that does not stand on the beam, or higher."""
    around = boxes_of_carriers(carriers)
    i, j = overlapping(boxes, around)
    highest = np.array([max(beam.level(0.0), beam.level(beam.run)) for beam in beams])
    below = around[j, 2] < highest[i]
    return zip(i[below].tolist(), j[below].tolist(), strict=True)


def boxes_of_beams(beams: Sequence[Beam], reach: float) -> Floats:
    """Return boxes around the bodies of beams and ``reach`` m beyond, (n, 6)."""
    ends = np.array([(b.member.start, b.member.end) for b in beams]).reshape(-1, 2, 3)
    around = np.array([reach + b.half_width + max(b.below, b.above) for b in beams]).reshape(-1, 1)
    return np.hstack([ends.min(axis=1) - around, ends.max(axis=1) + around])


def boxes_of_carriers(carriers: Sequence[Carrier]) -> Floats:
    """Return the bounding boxes of carriers that have an outline, (n, 6)."""
    if not carriers:
        return np.empty((0, 6))
    corners = np.array([corner for carrier in carriers for corner in carrier.corners])
    counts = np.array([len(carrier.corners) for carrier in carriers])
    first = np.cumsum(counts) - counts
    low, high = (bound.reduceat(corners, first) for bound in (np.minimum, np.maximum))
    levels = np.array([(carrier.bottom, carrier.top) for carrier in carriers])
    return np.hstack([low, levels[:, :1], high, levels[:, 1:]])


def _crossing_pairs(
    beams: list[Beam], boxes: Floats, tolerances: Tolerances
) -> Iterator[tuple[int, int]]:
    """Pairs of beams whose axes cross in plan, on both or within reach of their ends."""
    i, j = overlapping(boxes, boxes)
    keep = i != j
    i, j = i[keep], j[keep]
    origin = np.array([b.ray.origin for b in beams]).reshape(-1, 2)
    way = np.array([b.ray.direction for b in beams]).reshape(-1, 2)
    run = np.array([b.run for b in beams])
    half = np.array([b.half_width for b in beams])
    turn = way[i, 0] * way[j, 1] - way[i, 1] * way[j, 0]
    keep = np.abs(turn) >= SKEW
    i, j, turn = i[keep], j[keep], turn[keep]
    apart = origin[j] - origin[i]
    along = (apart[:, 0] * way[j, 1] - apart[:, 1] * way[j, 0]) / turn
    there = (apart[:, 0] * way[i, 1] - apart[:, 1] * way[i, 0]) / turn
    reach = tolerances.bearing + tolerances.join
    near = (along >= -reach - half[j] / SKEW) & (along <= run[i] + reach + half[j] / SKEW)
    near &= (there >= -reach - half[i] / SKEW) & (there <= run[j] + reach + half[i] / SKEW)
    return zip(i[near].tolist(), j[near].tolist(), strict=True)
